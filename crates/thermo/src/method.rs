//! Which kind of ascent: the process above the condensation level, and what counts as buoyancy.

/// How a saturated parcel cools, and what its buoyancy is measured by. The default is what every number uses that
/// doesn't say otherwise.
///
/// ```
/// use dewbound_thermo::*;
/// assert_eq!(Method::default().process, Process::ThetaE);
/// assert_eq!(Method::default().buoyancy, Buoyancy::Virtual);
/// ```
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub struct Method {
    /// What happens above the condensation level.
    pub process: Process,
    /// What is compared with the surroundings.
    pub buoyancy: Buoyancy,
}

impl Method {
    /// A process with the virtual-temperature correction on both sides.
    pub const fn of(process: Process) -> Self {
        Self {
            process,
            buoyancy: Buoyancy::Virtual,
        }
    }

    /// The same process without the virtual-temperature correction on either side.
    pub const fn without_virtual_correction(self) -> Self {
        Self {
            buoyancy: Buoyancy::Temperature,
            ..self
        }
    }
}

/// What happens above the condensation level.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Process {
    /// The pseudo-adiabat of constant eq. 39 theta-e (Bolton 1980); condensate falls out.
    #[default]
    ThetaE,
    /// The pseudo-adiabatic lapse rate integrated; condensate falls out at once.
    ///
    /// `dT/dz = -(p/p_d) (Rd T + L r_v) / (cp + L r_v (p/p_d) d ln e/dT)`, z = -ln p, per kg of dry air, with
    /// cp = cpd + r_v cpv, p_d = p - e, r_v the saturation mixing ratio, L by Kirchhoff's equation (cpd 1005.7, cpv 1870,
    /// water 4190, ice 2106 J/(kg K); 2.501e6 and 3.337e5 J/kg at 0 °C: Emanuel 1994, from memory). The pseudo-adiabatic
    /// lapse rate of the AMS Glossary of Meteorology (from memory), with the slope of the saturation formula in use.
    Direct(Condensate),
    /// All condensate is kept: it stores heat, and its weight counts in the buoyancy.
    ///
    /// The same with the condensate's heat in cp, and the density temperature `T (1 + r_v/eps) / (1 + r_t)`, r_t = total
    /// water (Emanuel 1994, eq. 4.3.6, from memory).
    Reversible(Condensate),
}

/// What vapour condenses to.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Condensate {
    /// Water at any temperature.
    #[default]
    Water,
    /// Water above 0 °C, ice below -20 °C, between them a mixture linear in temperature, of the condensate as of the
    /// saturation vapour pressure; latent heat of fusion included.
    ///
    /// A linear ramp is usual in models (e.g. Bryan & Fritsch 2004, MWR 132; Peters et al. 2022, JAS 79; limits differ;
    /// from memory); the limits 0 and -20 °C: common practice, no source. The condensation level stays that over water. Where
    /// it is colder than 0 °C, what can't stay vapour over the mixture condenses there at once, at constant pressure and
    /// enthalpy: the parcel warms by up to 0.9 K.
    WaterAndIce,
}

/// What is compared with the surroundings.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Buoyancy {
    /// Virtual temperature of parcel and environment; with condensate kept, its weight counts.
    #[default]
    Virtual,
    /// Temperature alone, of parcel and environment.
    Temperature,
}
