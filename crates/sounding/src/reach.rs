//! Surface values set, and how far up they reach.

use crate::merge::hpa;
use crate::mixed_layer::MIXED_LAYER_LEAST_DEPTH;
use crate::profile::SAME_PRESSURE;
use crate::{Daylight, Note, Place, Profile, Reach, ReachApplied};
use dewbound_thermo::{
    Air, KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, dewpoint_from_mixing_ratio,
    potential_temperature,
};

/// Depth over which an edit with the reach of a level tapers, Pa.
const LEVEL_DEPTH: f64 = 1_000.0;
/// Air is never made drier than this, kg/kg: a dew point of about -75 °C at the ground.
const DRIEST: f64 = 1e-6;

/// What is set at the surface.
#[derive(Debug, Clone, Copy)]
pub(crate) struct SurfaceEdit {
    pub temperature: Option<Temperature>,
    pub dewpoint: Option<Temperature>,
    pub reach: Option<Reach>,
    pub daylight: Daylight,
}

/// Sets the surface values and carries them up; without values only tells the reach they would have.
pub(crate) fn edit_surface(
    profile: &mut Profile,
    edit: SurfaceEdit,
    notes: &mut Vec<Note>,
) -> ReachApplied {
    let surface = profile.surface.and_then(|row| {
        Some((
            row,
            *profile.pressure.get(row)?,
            *profile.temperature.get(row)?,
            *profile.dewpoint.get(row)?,
        ))
    });
    let Some((row, pressure, t_received, td_received)) = surface else {
        if edit.temperature.is_some() || edit.dewpoint.is_some() {
            notes.push(Note {
                place: Place::File,
                what: "surface values not set".to_string(),
                why: "the profile has no surface level".to_string(),
            });
        }
        return ReachApplied {
            reach: Reach::Level,
            why: "no surface level".to_string(),
            mixed_top: None,
            capped_levels: 0,
        };
    };
    let mut tell = |what: String, why: &str| {
        notes.push(Note {
            place: Place::Level(row),
            what,
            why: why.to_string(),
        });
    };
    let mut usable = |value: Option<Temperature>, name: &str| {
        let value = value?;
        if (140.0..=340.0).contains(&value.k()) {
            return Some(value.k());
        }
        tell(
            format!("surface {name} {:.1} °C not set", value.c()),
            "no air is like that",
        );
        None
    };
    let t = usable(edit.temperature, "temperature").or(t_received);
    let mut td = usable(edit.dewpoint, "dew point").or(td_received);
    if let (Some(t), Some(wanted)) = (t, td)
        && wanted > t
    {
        tell(
            format!(
                "surface dew point {:.1} °C lowered to the temperature, {:.1} °C",
                wanted - dewbound_thermo::ZERO_CELSIUS,
                t - dewbound_thermo::ZERO_CELSIUS
            ),
            "dew point can't exceed temperature",
        );
        td = Some(t);
    }
    let mut applied = choose(profile, pressure, t, edit);
    if t == t_received && td == td_received {
        return applied;
    }
    let (Some(t), Some(td)) = (t, td) else {
        set(profile, row, t, td);
        let missing = if t.is_none() {
            "temperature"
        } else {
            "dew point"
        };
        tell(
            format!("surface {missing} is still missing"),
            "the surface parcel needs temperature and dew point",
        );
        applied.reach = Reach::Level;
        applied.why = format!("level: surface {missing} is missing");
        return applied;
    };
    let new = surface_state(pressure, t, td);
    let (Some(t_old), Some(td_old)) = (t_received, td_received) else {
        // Nothing received to measure an increment from.
        if applied.reach == Reach::Mixed {
            let top = applied.mixed_top.map_or(pressure, Pressure::pa);
            profile.row_at(top);
            applied.capped_levels =
                mix(profile, row, top, new, t_received.is_none_or(|old| t > old));
        } else {
            applied.why = match applied.reach {
                Reach::Tapered => "level: no received surface value to taper from".to_string(),
                _ => applied.why,
            };
            applied.reach = Reach::Level;
        }
        set(profile, row, Some(t), Some(td));
        return applied;
    };
    let old = surface_state(pressure, t_old, td_old);
    // An unchanged value has an increment of exactly zero, whatever the rounding of the conversions.
    let increment = Increment {
        theta: if t == t_old {
            0.0
        } else {
            new.theta - old.theta
        },
        w: if td == td_old { 0.0 } else { new.w - old.w },
    };
    let near = pressure - LEVEL_DEPTH;
    let top = match (applied.reach, applied.mixed_top) {
        (Reach::Level, _) | (_, None) => near,
        (_, Some(top)) => top.pa(),
    };
    // Inserted while the column is still as received: above it nothing changes.
    profile.row_at(top);
    let mut floored = 0;
    match applied.reach {
        Reach::Level | Reach::Tapered => {
            let done = taper(profile, row, pressure, top, increment);
            applied.capped_levels = done.capped;
            floored = done.floored;
        }
        Reach::Mixed => {
            let raised = increment.theta > 0.0;
            if increment.theta < 0.0 {
                // Cooling doesn't mix upward: it stays near the ground.
                profile.row_at(near);
                taper(
                    profile,
                    row,
                    pressure,
                    near,
                    Increment {
                        theta: increment.theta,
                        w: 0.0,
                    },
                );
            }
            applied.capped_levels = mix(profile, row, top, new, raised);
        }
    }
    set(profile, row, Some(t), Some(td));
    if floored > 0 {
        tell(
            format!(
                "{floored} levels would have lost more moisture than they hold: made dry instead"
            ),
            "the increment of the surface is larger than their mixing ratio",
        );
    }
    applied
}

/// Theta (K) and mixing ratio (kg/kg) of the surface.
#[derive(Debug, Clone, Copy)]
struct SurfaceState {
    theta: f64,
    w: f64,
}

#[derive(Debug, Clone, Copy)]
struct Increment {
    theta: f64,
    w: f64,
}

struct Tapered {
    capped: usize,
    floored: usize,
}

fn surface_state(pressure: f64, t: f64, td: f64) -> SurfaceState {
    let air = Air {
        pressure: Pressure::from_pa(pressure),
        temperature: Temperature::from_k(t),
        dewpoint: Temperature::from_k(td),
    };
    SurfaceState {
        theta: potential_temperature(air.pressure, air.temperature).k(),
        w: air.mixing_ratio(),
    }
}

fn set(profile: &mut Profile, row: usize, t: Option<f64>, td: Option<f64>) {
    if let Some(value) = profile.temperature.get_mut(row) {
        *value = t;
    }
    if let Some(value) = profile.dewpoint.get_mut(row) {
        *value = td;
    }
}

/// The reach in force for this profile, with the surface temperature it will have.
fn choose(
    profile: &Profile,
    pressure: f64,
    temperature: Option<f64>,
    edit: SurfaceEdit,
) -> ReachApplied {
    let mixed_top = temperature.and_then(|t| profile.mixed_top_of(Temperature::from_k(t)));
    let depth = mixed_top.map(|top| pressure - top.pa());
    let (top, unable) = match (temperature, mixed_top, depth) {
        (None, ..) => (None, "no surface temperature".to_string()),
        (_, Some(top), Some(depth)) if depth >= MIXED_LAYER_LEAST_DEPTH.pa() => {
            (Some(top), String::new())
        }
        (_, Some(_), Some(depth)) => (
            None,
            format!(
                "mixed layer only {:.0} hPa deep, {:.0} needed",
                depth / 100.0,
                MIXED_LAYER_LEAST_DEPTH.hpa()
            ),
        ),
        _ => (None, "no top of a mixed layer".to_string()),
    };
    let (reach, why) = match (edit.reach, top) {
        (Some(Reach::Level), _) => (Reach::Level, "level: chosen".to_string()),
        (Some(Reach::Mixed), Some(top)) => {
            (Reach::Mixed, format!("mixed to {}: chosen", hpa(top.pa())))
        }
        (Some(Reach::Tapered), Some(top)) => (
            Reach::Tapered,
            format!("tapered to {}: chosen", hpa(top.pa())),
        ),
        (Some(Reach::Mixed), None) => (Reach::Level, format!("level, not mixed: {unable}")),
        (Some(Reach::Tapered), None) => (Reach::Level, format!("level, not tapered: {unable}")),
        (None, Some(top)) => match edit.daylight {
            Daylight::Day => (
                Reach::Mixed,
                format!("mixed to {}: default by day", hpa(top.pa())),
            ),
            Daylight::Night => (Reach::Level, "level: default at night".to_string()),
            Daylight::Unknown => (
                Reach::Level,
                "level: default, day or night unknown".to_string(),
            ),
        },
        (None, None) => (Reach::Level, format!("level: default, {unable}")),
    };
    ReachApplied {
        reach,
        why,
        mixed_top,
        capped_levels: 0,
    }
}

/// Adds the increment, falling linearly in p to zero at `top`, to the rows above the surface.
fn taper(
    profile: &mut Profile,
    surface: usize,
    p_surface: f64,
    top: f64,
    increment: Increment,
) -> Tapered {
    let mut done = Tapered {
        capped: 0,
        floored: 0,
    };
    let rows = profile
        .pressure
        .iter()
        .zip(&mut profile.temperature)
        .zip(&mut profile.dewpoint);
    for ((&pressure, temperature), dewpoint) in rows.skip(surface + 1) {
        if pressure <= top {
            break;
        }
        let Some(t) = temperature else { continue };
        let share = (pressure - top) / (p_surface - top);
        if increment.theta != 0.0 {
            *t += increment.theta * share * (pressure / REFERENCE_PRESSURE).powf(KAPPA);
        }
        let Some(td) = dewpoint else { continue };
        if increment.w != 0.0 {
            let air = Air {
                pressure: Pressure::from_pa(pressure),
                temperature: Temperature::from_k(*t),
                dewpoint: Temperature::from_k(*td),
            };
            let mut w = air.mixing_ratio() + increment.w * share;
            if w < DRIEST {
                w = DRIEST;
                done.floored += 1;
            }
            *td = dewpoint_from_mixing_ratio(air.pressure, w).k();
        }
        if *td > *t {
            *td = *t;
            done.capped += 1;
        }
    }
    done
}

/// Gives the rows up to `top` the surface's w, capped at saturation, and where the surface was `warmed` at least its theta; returns the
/// number of capped rows. A level warmer than the surface's adiabat keeps its temperature: heating from below cools nothing.
fn mix(profile: &mut Profile, surface: usize, top: f64, new: SurfaceState, warmed: bool) -> usize {
    let mut capped = 0;
    let rows = profile
        .pressure
        .iter()
        .zip(&mut profile.temperature)
        .zip(&mut profile.dewpoint);
    for ((&pressure, temperature), dewpoint) in rows.skip(surface + 1) {
        if pressure < top - SAME_PRESSURE {
            break;
        }
        let Some(t) = temperature else { continue };
        if warmed {
            *t = t.max(new.theta * (pressure / REFERENCE_PRESSURE).powf(KAPPA));
        }
        let td = dewpoint_from_mixing_ratio(Pressure::from_pa(pressure), new.w).k();
        if td > *t {
            capped += 1;
        }
        *dewpoint = Some(td.min(*t));
    }
    capped
}
