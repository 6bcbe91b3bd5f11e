//! Composite indices of the literature. What they say holds for the place and season they were made for.

use super::{Group, Needs, Of, Quantity, Unit, Value};

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "supercell_composite",
        label: "Supercell composite",
        unit: Unit::None,
        decimals: 1,
        group: Group::Composites,
        of: Of::Profile(|readings| {
            readings
                .further
                .composites
                .supercell
                .clone()
                .map(Value::Composite)
        }),
        range: None,
        needs: Needs::Wind,
        definition: "Supercell composite parameter: how far the surroundings favour supercells.",
        method: "(most unstable CAPE / 1000 J/kg) · (effective helicity / 50 m²/s²) · (effective wind difference / 20 m/s); the last is 0 below 10 and 1 above 20 m/s. Each term is shown with its input and its factor. Helicity keeps its sign.",
        source: "Thompson et al. 2003 (WAF 18), as revised 2004 and 2007 (WAF 22), from memory",
        inputs: "CAPE of the most unstable parcel, effective helicity and wind difference",
        absent: "one of its inputs is absent: CAPE, helicity of the inflow layer, effective wind difference",
    },
    Quantity {
        key: "significant_tornado_fixed",
        label: "Significant tornado, fixed",
        unit: Unit::None,
        decimals: 1,
        group: Group::Composites,
        of: Of::Profile(|readings| {
            readings
                .further
                .composites
                .significant_tornado_fixed
                .clone()
                .map(Value::Composite)
        }),
        range: None,
        needs: Needs::Wind,
        definition: "Significant tornado parameter of fixed layers: how far the surroundings favour strong tornadoes.",
        method: "(surface CAPE / 1500 J/kg) · ((2000 m − LCL height) / 1000 m) · (helicity of 0–1 km / 150 m²/s²) · (wind difference of 0–6 km / 20 m/s); the second between 0 and 1, the last 0 below 12.5 and at most 1.5. Each term is shown with its input and its factor. Helicity keeps its sign.",
        source: "Thompson et al. 2003 (WAF 18), divisors of the revision of 2004, from memory",
        inputs: "CAPE and LCL height of the surface parcel, helicity of the lowest km, wind difference of the lowest 6 km",
        absent: "one of its inputs is absent: CAPE or LCL height of the surface parcel, helicity, wind difference",
    },
    Quantity {
        key: "significant_tornado_effective",
        label: "Significant tornado, effective",
        unit: Unit::None,
        decimals: 1,
        group: Group::Composites,
        of: Of::Profile(|readings| {
            readings
                .further
                .composites
                .significant_tornado_effective
                .clone()
                .map(Value::Composite)
        }),
        range: None,
        needs: Needs::Wind,
        definition: "Significant tornado parameter of the effective layer, with CIN: how far the surroundings favour strong tornadoes.",
        method: "(mixed CAPE / 1500 J/kg) · ((2000 m − mixed LCL height) / 1000 m) · (effective helicity / 150 m²/s²) · (effective wind difference / 20 m/s) · ((200 J/kg + mixed CIN) / 150 J/kg); the second and the last between 0 and 1, the fourth 0 below 12.5 m/s and at most 1.5; 0 where the inflow layer begins above the ground. Each term is shown with its input and its factor. Helicity keeps its sign.",
        source: "Thompson et al. 2012 (WAF 27), from memory",
        inputs: "CAPE, CIN and LCL height of the mixed parcel, base of the inflow layer, effective helicity and wind difference",
        absent: "one of its inputs is absent: CAPE, CIN or LCL height of the mixed parcel, helicity of the inflow layer, effective wind difference",
    },
];
