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
        definition: "An index of how far the surroundings favour supercells: above 1 they have been found in most such cases.",
        method: "The product of its terms, each shown with its input and factor; most unstable CAPE, helicity of the effective inflow layer, effective wind difference.",
        source: "Thompson, Mead and Edwards 2007 (WAF 22); its terms from memory",
        inputs: "CAPE of the most unstable parcel, effective helicity and wind difference",
        absent: "one of its inputs is absent",
    },
    Quantity {
        key: "significant_tornado_fixed",
        label: "Tornado, fixed layers",
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
        definition: "An index of how far the surroundings favour strong tornadoes, from fixed layers.",
        method: "The product of its terms, each shown with its input and factor; CAPE and LCL height, 0–1 km helicity, 0–6 km wind difference.",
        source: "Thompson et al. 2003 (WAF 18), from memory",
        inputs: "CAPE, LCL height, helicity of the lowest km, wind difference of the lowest 6 km",
        absent: "one of its inputs is absent",
    },
    Quantity {
        key: "significant_tornado_effective",
        label: "Tornado, inflow layer",
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
        definition: "An index of how far the surroundings favour strong tornadoes, from the effective layer, with inhibition.",
        method: "The product of its terms, each shown with its input and factor; CAPE, LCL height and CIN, effective helicity and wind difference.",
        source: "Thompson et al. 2012 (WAF 27), from memory",
        inputs: "CAPE, CIN, LCL height, effective helicity and wind difference",
        absent: "one of its inputs is absent",
    },
];
