//! Wind.

use super::{Group, Needs, Of, Quantity, Unit, Value};

const NOT_THAT_HIGH: &str = "the wind doesn't reach from the ground to that height";
const NO_MOTION: &str =
    "there is no storm motion, or the wind doesn't reach from the ground to that height";
const NO_FIXED_MOTION: &str = "the wind doesn't reach from the ground to 6 km, or is the same in the lowest and the highest 500 m of that layer";
const NO_EFFECTIVE: &str = "there is no effective inflow layer or no equilibrium level, that layer is shallower than 1 km, or the wind or its pressure doesn't reach through it";
const HELICITY: &str = "Integral over height of the vector product of the storm-relative wind and its change with height, \
     against the storm motion used: twice the area the wind sweeps over on the hodograph, seen from that motion. Winds linear in \
     height between levels.";
const FIXED_MOTION: &str = "The mean wind of 0 to 6 km, and 7.5 m/s from it at a right angle to the vector from the mean wind of 0 \
     to 500 m to that of 5.5 to 6 km; means by height, not by pressure.";
const EFFECTIVE_MOTION: &str = "The mean wind by pressure from the base of the effective inflow layer to 65 % of the height of the \
     most unstable parcel's equilibrium level, and 7.5 m/s from it at a right angle to the vector from the mean wind of the \
     lowest 500 m of that layer to that of its highest 500 m.";

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "difference_0_to_6km_ms",
        label: "Wind difference, 0–6 km",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .difference_0_to_6km
                .map(Value::Difference)
        }),
        range: None,
        needs: Needs::WindTo(6_000),
        definition: "Wind at 6 km above the lowest usable level minus the wind there: the bulk shear of that layer as a vector.",
        method: "Winds linear in height between levels, by component. The direction is the one the difference comes from.",
        source: "Common practice, no source",
        inputs: "wind of every level of known height",
        absent: NOT_THAT_HIGH,
    },
    Quantity {
        key: "difference_effective_ms",
        label: "Wind difference, effective",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .difference_effective
                .map(Value::Difference)
        }),
        range: None,
        needs: Needs::LowerHalfOfStorm,
        definition: "Effective bulk wind difference: over the lower half of the storm's depth, which reaches from the base of the effective inflow layer to the equilibrium level of the most unstable parcel.",
        method: "Wind halfway up minus wind at the base; winds linear in height between levels, by component.",
        source: "Thompson, Mead and Edwards 2007 (WAF 22)",
        inputs: "wind of every level of known height, inflow layer, EL of the most unstable parcel",
        absent: "there is no effective inflow layer or no equilibrium level, or the wind doesn't reach that high",
    },
    Quantity {
        key: "helicity_0_to_3km_m2s2",
        label: "Helicity, 0–3 km",
        unit: Unit::Helicity,
        decimals: 0,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.helicity_0_to_3km.map(Value::Number)),
        range: None,
        needs: Needs::MotionAndWindTo(3_000),
        definition: "Storm-relative helicity of the lowest 3 km: how far the wind relative to the storm turns with height, weighted by its speed.",
        method: HELICITY,
        source: "Davies-Jones et al. 1990 (16th Conf. on Severe Local Storms), from memory",
        inputs: "wind of every level of known height, storm motion",
        absent: NO_MOTION,
    },
    Quantity {
        key: "helicity_effective_m2s2",
        label: "Helicity, inflow layer",
        unit: Unit::Helicity,
        decimals: 0,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.helicity_effective.map(Value::Number)),
        range: None,
        needs: Needs::MotionAndInflow,
        definition: "Storm-relative helicity of the effective inflow layer: how far the air a storm draws in turns with height, relative to the storm.",
        method: HELICITY,
        source: "Thompson, Mead and Edwards 2007 (WAF 22)",
        inputs: "wind of every level of known height, storm motion, inflow layer",
        absent: "there is no effective inflow layer, no storm motion, or no wind through the layer",
    },
    Quantity {
        key: "helicity_0_to_1km_m2s2",
        label: "Helicity, 0–1 km",
        unit: Unit::Helicity,
        decimals: 0,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.helicity_0_to_1km.map(Value::Number)),
        range: None,
        needs: Needs::MotionAndWindTo(1_000),
        definition: "Storm-relative helicity of the lowest 1 km: how far the wind relative to the storm turns with height, weighted by its speed.",
        method: HELICITY,
        source: "Davies-Jones et al. 1990 (16th Conf. on Severe Local Storms), from memory",
        inputs: "wind of every level of known height, storm motion",
        absent: NO_MOTION,
    },
    Quantity {
        key: "difference_0_to_1km_ms",
        label: "Wind difference, 0–1 km",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .difference_0_to_1km
                .map(Value::Difference)
        }),
        range: None,
        needs: Needs::WindTo(1_000),
        definition: "Wind at 1 km above the lowest usable level minus the wind there: the bulk shear of that layer as a vector.",
        method: "Winds linear in height between levels, by component. The direction is the one the difference comes from.",
        source: "Common practice, no source",
        inputs: "wind of every level of known height",
        absent: NOT_THAT_HIGH,
    },
    Quantity {
        key: "difference_0_to_3km_ms",
        label: "Wind difference, 0–3 km",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .difference_0_to_3km
                .map(Value::Difference)
        }),
        range: None,
        needs: Needs::WindTo(3_000),
        definition: "Wind at 3 km above the lowest usable level minus the wind there: the bulk shear of that layer as a vector.",
        method: "Winds linear in height between levels, by component. The direction is the one the difference comes from.",
        source: "Common practice, no source",
        inputs: "wind of every level of known height",
        absent: NOT_THAT_HIGH,
    },
    Quantity {
        key: "critical_angle_deg",
        label: "Critical angle",
        unit: Unit::Angle,
        decimals: 0,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.critical_angle.map(Value::Number)),
        range: None,
        needs: Needs::MotionAndWindTo(500),
        definition: "Angle between the storm-relative wind at the ground and the wind difference of the lowest 500 m. At 90° the air drawn in spins about its own course: its vorticity is streamwise.",
        method: "Angle of two vectors, 0 to 180°.",
        source: "Esterheld and Giuliano 2008 (EJSSM 3), from memory",
        inputs: "wind of every level of known height, storm motion",
        absent: "there is no storm motion, the wind doesn't reach from the ground to 500 m, or one of the two has no direction",
    },
    Quantity {
        key: "mean_0_to_6km_ms",
        label: "Mean wind, 0–6 km",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.mean_0_to_6km.map(Value::Wind)),
        range: None,
        needs: Needs::WindTo(6_000),
        definition: "Mean wind of the lowest 6 km, each metre of height with the same weight.",
        method: "Integral of the wind, linear in height between levels.",
        source: "Common practice, no source",
        inputs: "wind of every level of known height",
        absent: NOT_THAT_HIGH,
    },
    Quantity {
        key: "mean_0_to_6km_by_pressure_ms",
        label: "Mean wind, by mass",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .mean_0_to_6km_by_pressure
                .map(Value::Wind)
        }),
        range: None,
        needs: Needs::WindTo(6_000),
        definition: "Mean wind of the lowest 6 km, weighted by the mass of the air.",
        method: "Integral of the wind over pressure.",
        source: "Common practice, no source",
        inputs: "wind of every level of known height, their pressure",
        absent: "the wind doesn't reach from the ground to that height, or its levels have no pressure",
    },
    Quantity {
        key: "motion_used_ms",
        label: "Storm motion used",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| readings.further.winds.motion_used.map(Value::Wind)),
        range: None,
        needs: Needs::Motion,
        definition: "The storm motion helicity is measured against, as the direction it comes from and its speed.",
        method: "The one the user has set; else the motion to the right of the mean wind, south of the equator to the left.",
        source: "Convention of this program",
        inputs: "storm motion from fixed layers, or the user's",
        absent: "none is set and there is no storm motion from fixed layers",
    },
    Quantity {
        key: "motion_right_ms",
        label: "Storm to the right",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion
                .map(|motion| Value::Wind(motion.right))
        }),
        range: None,
        needs: Needs::FixedMotion,
        definition: "Motion of a supercell that deviates to the right of the mean wind.",
        method: FIXED_MOTION,
        source: "Bunkers et al. 2000 (WAF 15), as described by a national centre",
        inputs: "wind of every level of known height",
        absent: NO_FIXED_MOTION,
    },
    Quantity {
        key: "motion_left_ms",
        label: "Storm to the left",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion
                .map(|motion| Value::Wind(motion.left))
        }),
        range: None,
        needs: Needs::FixedMotion,
        definition: "Motion of a supercell that deviates to the left of the mean wind.",
        method: FIXED_MOTION,
        source: "Bunkers et al. 2000 (WAF 15), as described by a national centre",
        inputs: "wind of every level of known height",
        absent: NO_FIXED_MOTION,
    },
    Quantity {
        key: "motion_mean_ms",
        label: "Mean wind of motion",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion
                .map(|motion| Value::Wind(motion.mean))
        }),
        range: None,
        needs: Needs::FixedMotion,
        definition: "The mean wind both motions deviate from.",
        method: FIXED_MOTION,
        source: "Bunkers et al. 2000 (WAF 15), as described by a national centre",
        inputs: "wind of every level of known height",
        absent: NO_FIXED_MOTION,
    },
    Quantity {
        key: "motion_effective_right_ms",
        label: "Storm right, effective",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion_effective
                .map(|motion| Value::Wind(motion.right))
        }),
        range: None,
        needs: Needs::WindInflowAndEl,
        definition: "Motion of a supercell to the right of the mean wind of the effective layer.",
        method: EFFECTIVE_MOTION,
        source: "Bunkers et al. 2014 (J. Operational Meteor. 2), from memory; ends of the shear vector: convention of this program",
        inputs: "wind of every level of known height, inflow layer, EL of the most unstable parcel",
        absent: NO_EFFECTIVE,
    },
    Quantity {
        key: "motion_effective_left_ms",
        label: "Storm left, effective",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion_effective
                .map(|motion| Value::Wind(motion.left))
        }),
        range: None,
        needs: Needs::WindInflowAndEl,
        definition: "Motion of a supercell to the left of the mean wind of the effective layer.",
        method: EFFECTIVE_MOTION,
        source: "Bunkers et al. 2014 (J. Operational Meteor. 2), from memory; ends of the shear vector: convention of this program",
        inputs: "wind of every level of known height, inflow layer, EL of the most unstable parcel",
        absent: NO_EFFECTIVE,
    },
    Quantity {
        key: "motion_effective_mean_ms",
        label: "Mean wind, effective",
        unit: Unit::Wind,
        decimals: 1,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            readings
                .further
                .winds
                .motion_effective
                .map(|motion| Value::Wind(motion.mean))
        }),
        range: None,
        needs: Needs::WindInflowAndEl,
        definition: "The mean wind of the effective layer both motions deviate from.",
        method: EFFECTIVE_MOTION,
        source: "Bunkers et al. 2014 (J. Operational Meteor. 2), from memory; ends of the shear vector: convention of this program",
        inputs: "wind of every level of known height, inflow layer, EL of the most unstable parcel",
        absent: NO_EFFECTIVE,
    },
    Quantity {
        key: "wind_top_m",
        label: "Wind reaches",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Wind,
        of: Of::Profile(|readings| {
            let profile = readings.further.wind_profile.as_ref()?;
            Some(Value::Number(profile.levels().last()?.height))
        }),
        range: None,
        needs: Needs::Wind,
        definition: "Height of the highest wind above the lowest usable level.",
        method: "Heights as reported, else by the hypsometric equation.",
        source: "Convention of this program",
        inputs: "winds and heights of the levels",
        absent: "there are fewer than two winds of known height",
    },
];
