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
    Direct(Condensate),
    /// All condensate is kept: it stores heat, and its weight counts in the buoyancy.
    Reversible(Condensate),
}

/// What vapour condenses to.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Condensate {
    /// Water at any temperature.
    #[default]
    Water,
    /// Water above 0 °C, ice below -20 °C, between them a mixture linear in temperature.
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
