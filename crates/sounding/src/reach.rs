//! Surface values set, and how far up they reach.

use crate::clean::TEMPERATURES;
use crate::mixed_layer::MIXED_LAYER_LEAST_DEPTH;
use crate::profile::SAME_PRESSURE;
use crate::telling::{celsius, count_of_levels, hpa};
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
        if TEMPERATURES.contains(&value.k()) {
            return Some(value.k());
        }
        tell(
            format!("surface {name} {} not set", celsius(value.k())),
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
                "surface dew point {} lowered to the temperature, {}",
                celsius(wanted),
                celsius(t)
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
    let increment = Increment {
        theta: new.theta - old.theta,
        w: new.w - old.w,
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
                "{} would have lost more moisture than there is: made dry instead",
                count_of_levels(floored)
            ),
            "the increment of the surface is larger than the mixing ratio there",
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{afternoon, afternoon_fine, level, received};
    use crate::{Amendments, Numbers, Working};
    use dewbound_thermo::{Method, lift};

    fn set(reach: Option<Reach>, t: Option<f64>, td: Option<f64>) -> Amendments {
        let mut list = Amendments {
            reach,
            ..Amendments::default()
        };
        if let Some(t) = t {
            list = list.with_surface_temperature(Temperature::from_c(t));
        }
        if let Some(td) = td {
            list = list.with_surface_dewpoint(Temperature::from_c(td));
        }
        list
    }

    fn apply(
        levels: Vec<crate::Level>,
        reach: Option<Reach>,
        t: Option<f64>,
        td: Option<f64>,
        daylight: Daylight,
    ) -> (Profile, Working) {
        let (profile, _) = received(levels);
        let working = set(reach, t, td).apply(&profile, daylight);
        (profile, working)
    }

    /// Theta and w of the environment at a pressure.
    fn theta_and_w(profile: &Profile, hpa: f64) -> (f64, f64) {
        let air = profile
            .environment()
            .unwrap()
            .at(Pressure::from_hpa(hpa))
            .unwrap();
        (air.potential_temperature().k(), air.mixing_ratio())
    }

    #[test]
    fn level_changes_the_lowest_ten_hpa_only_at_any_resolution() {
        for levels in [afternoon(), afternoon_fine(4.0), afternoon_fine(0.5)] {
            let (before, working) = apply(
                levels,
                Some(Reach::Level),
                Some(29.5),
                Some(23.0),
                Daylight::Day,
            );
            let after = &working.profile;
            assert_eq!(working.reach.reach, Reach::Level);
            let surface = after.surface_air().unwrap();
            assert_eq!(
                (surface.temperature, surface.dewpoint),
                (Temperature::from_c(29.5), Temperature::from_c(23.0))
            );
            for hpa in [950.0, 949.0, 930.0, 870.0, 600.0, 150.0] {
                let (theta, w) = theta_and_w(&before, hpa);
                let (theta_after, w_after) = theta_and_w(after, hpa);
                assert!(
                    (theta - theta_after).abs() < 1e-9 && (w - w_after).abs() < 1e-12,
                    "{hpa} hPa"
                );
            }
            // Linear in p: half way up half the increment, at the rows of the data.
            let increment_at = |hpa: f64| {
                let (theta, w) = theta_and_w(&before, hpa);
                let (theta_after, w_after) = theta_and_w(after, hpa);
                (theta_after - theta, w_after - w)
            };
            let (theta, w) = increment_at(960.0);
            let (theta_half, w_half) = increment_at(955.0);
            assert!((theta_half / theta - 0.5).abs() < 1e-9 && (w_half / w - 0.5).abs() < 1e-9);
        }
    }

    #[test]
    fn resolution_hardly_matters_to_the_numbers() {
        // The same air in 11 rows and in 1,700: CAPE of the edited profile may differ only by how the taper is drawn between rows.
        for (reach, tolerance) in [(Reach::Level, 2.0), (Reach::Tapered, 25.0)] {
            let cape = |levels| {
                let (_, working) = apply(levels, Some(reach), None, Some(22.5), Daylight::Day);
                let numbers = Numbers::of(&working.profile);
                [numbers.surface.unwrap().cape, numbers.mixed.unwrap().cape]
            };
            let (coarse, fine) = (cape(afternoon()), cape(afternoon_fine(0.5)));
            for (a, b) in coarse.into_iter().zip(fine) {
                assert!(
                    (a - b).abs() < tolerance,
                    "{reach:?}: {coarse:?} and {fine:?}"
                );
            }
        }
    }

    #[test]
    fn mixed_gives_the_layer_the_surface_mixing_ratio() {
        let (before, working) = apply(
            afternoon(),
            Some(Reach::Mixed),
            None,
            Some(18.5),
            Daylight::Night,
        );
        let after = &working.profile;
        let top = working.reach.mixed_top.unwrap();
        assert_eq!(Some(top), before.mixed_top());
        let (_, w) = theta_and_w(after, 960.0);
        for (row, &p) in after.pressure.iter().enumerate() {
            let here = after.air(row).unwrap();
            if p >= top.pa() {
                let saturated = here.dewpoint == here.temperature;
                assert!(saturated || (here.mixing_ratio() - w).abs() < 1e-9, "{p}");
                assert!(here.mixing_ratio() < w + 1e-9);
            } else {
                assert_eq!(Some(here.dewpoint.k()), after.dewpoint[row]);
                let old = before.pressure.iter().position(|&q| q == p).unwrap();
                assert_eq!(before.dewpoint[old], after.dewpoint[row]);
            }
            // A moister surface moves no temperature.
            if let Some(old) = before.pressure.iter().position(|&q| q == p) {
                assert_eq!(before.temperature[old], after.temperature[row]);
            }
        }
        assert_eq!(
            working.reach.why,
            format!("mixed to {}: chosen", hpa(top.pa()))
        );
    }

    #[test]
    fn saturation_caps_and_is_counted() {
        // 30 g/kg at the surface can't be held higher up.
        let (_, working) = apply(
            afternoon(),
            Some(Reach::Mixed),
            None,
            Some(30.5),
            Daylight::Day,
        );
        let capped = (0..working.profile.len())
            .filter(|&row| {
                working
                    .profile
                    .air(row)
                    .is_some_and(|air| air.dewpoint == air.temperature)
            })
            .count();
        assert!(capped > 0);
        assert_eq!(working.reach.capped_levels, capped);
    }

    #[test]
    fn mixed_warms_the_layer_and_cools_nothing() {
        let (before, working) = apply(
            afternoon(),
            Some(Reach::Mixed),
            Some(33.0),
            None,
            Daylight::Day,
        );
        let after = &working.profile;
        let top = working.reach.mixed_top.unwrap();
        // Top by the surface it will have, not the one it had.
        assert!(top < before.mixed_top().unwrap());
        let theta = after.surface_air().unwrap().potential_temperature().k();
        for (row, &p) in after.pressure.iter().enumerate().skip(1) {
            let here = after.air(row).unwrap();
            let old = before
                .environment()
                .unwrap()
                .at(Pressure::from_pa(p))
                .unwrap();
            assert!(here.temperature.k() >= old.temperature.k() - 1e-9);
            if p >= top.pa() - 1.0 {
                let expect = theta.max(old.potential_temperature().k());
                assert!((here.potential_temperature().k() - expect).abs() < 1e-6);
            }
        }
        // Cooling stays near the ground.
        let (before, working) = apply(
            afternoon(),
            Some(Reach::Mixed),
            Some(30.0),
            None,
            Daylight::Day,
        );
        assert_eq!(working.reach.reach, Reach::Mixed);
        let (theta, _) = theta_and_w(&before, 900.0);
        assert!((theta_and_w(&working.profile, 900.0).0 - theta).abs() < 1e-9);
    }

    #[test]
    fn tapered_falls_linearly_to_the_top() {
        let (before, working) = apply(
            afternoon_fine(2.0),
            Some(Reach::Tapered),
            Some(30.0),
            Some(18.0),
            Daylight::Day,
        );
        let top = working.reach.mixed_top.unwrap().hpa();
        let increment_at = |hpa: f64| {
            let (theta, w) = theta_and_w(&before, hpa);
            let (theta_after, w_after) = theta_and_w(&working.profile, hpa);
            (theta_after - theta, w_after - w)
        };
        let (theta, w) = increment_at(960.0);
        assert!(theta < 0.0 && w < 0.0);
        for (row, &p) in working.profile.pressure.iter().enumerate() {
            let hpa = p / 100.0;
            if working.profile.received[row].is_none() || hpa < top - 0.5 {
                continue;
            }
            let share = (hpa - top) / (960.0 - top);
            let (theta_here, w_here) = increment_at(hpa);
            assert!(
                (theta_here - theta * share).abs() < 1e-6 && (w_here - w * share).abs() < 1e-9,
                "{hpa} hPa"
            );
        }
        let (theta_above, w_above) = increment_at(top - 1.0);
        assert!(theta_above.abs() < 1e-9 && w_above.abs() < 1e-12);
    }

    #[test]
    fn mixed_top_is_where_theta_exceeds_by_one_kelvin() {
        let (profile, _) = received(afternoon());
        let top = profile.mixed_top().unwrap();
        let surface = profile.surface_air().unwrap().potential_temperature().k();
        let (theta, _) = theta_and_w(&profile, top.hpa());
        // Theta is interpolated linearly in ln p here, temperature in the environment.
        assert!((theta - surface - 1.0).abs() < 0.02, "{}", theta - surface);
        let (fine, _) = received(afternoon_fine(0.5));
        assert!((fine.mixed_top().unwrap().hpa() - top.hpa()).abs() < 0.5);
    }

    #[test]
    fn shallow_layer_switches_mixing_off_with_the_reason() {
        // Night: an inversion from the ground.
        let night = || {
            let mut levels = afternoon();
            levels[0] = level(960.0, 22.0, 18.0);
            levels
        };
        for (reach, expect) in [
            (
                Some(Reach::Mixed),
                "level, not mixed: mixed layer only 1 hPa deep, 30 needed",
            ),
            (
                Some(Reach::Tapered),
                "level, not tapered: mixed layer only 1 hPa deep, 30 needed",
            ),
            (
                None,
                "level: default, mixed layer only 1 hPa deep, 30 needed",
            ),
        ] {
            let (_, working) = apply(night(), reach, None, Some(19.0), Daylight::Day);
            assert_eq!(
                (working.reach.reach, working.reach.why.as_str()),
                (Reach::Level, expect)
            );
        }
    }

    #[test]
    fn default_by_daylight() {
        for (daylight, reach) in [
            (Daylight::Day, Reach::Mixed),
            (Daylight::Night, Reach::Level),
            (Daylight::Unknown, Reach::Level),
        ] {
            let (_, edited) = apply(afternoon(), None, None, Some(19.0), daylight);
            let (_, untouched) = apply(afternoon(), None, None, None, daylight);
            assert_eq!(edited.reach.reach, reach);
            // Told before anything is set, too.
            assert_eq!(untouched.reach.reach, reach);
            assert_eq!(untouched.reach.why, edited.reach.why);
        }
    }

    #[test]
    fn dewpoint_never_above_temperature() {
        for (t, td, expect) in [(None, Some(35.0), 31.0), (Some(20.0), None, 20.0)] {
            let (_, working) = apply(afternoon(), Some(Reach::Level), t, td, Daylight::Day);
            assert_eq!(
                working.profile.surface_air().unwrap().dewpoint,
                Temperature::from_c(expect)
            );
            assert!(
                working.notes[0].what.contains("lowered to the temperature"),
                "{:?}",
                working.notes
            );
        }
    }

    #[test]
    fn an_unset_surface_comes_alive_when_both_are_set() {
        let bare = || {
            let mut levels = afternoon();
            levels.remove(1);
            levels[0].temperature = None;
            levels[0].dewpoint = None;
            levels[0].wind = Some(crate::Wind {
                direction: 170.0,
                speed: 6.0,
            });
            levels
        };
        let (before, one) = apply(bare(), None, None, Some(20.0), Daylight::Day);
        assert!(
            Numbers::of(&before).surface.is_none() && Numbers::of(&one.profile).surface.is_none()
        );
        assert!(
            one.notes[0]
                .what
                .contains("surface temperature is still missing")
        );
        for reach in [Reach::Level, Reach::Mixed, Reach::Tapered] {
            let (_, both) = apply(bare(), Some(reach), Some(31.0), Some(20.5), Daylight::Day);
            let numbers = Numbers::of(&both.profile);
            let ascent = numbers.surface.unwrap();
            assert_eq!(ascent.start.temperature, Temperature::from_c(31.0));
            assert_eq!(numbers.starts_at, None);
            // The parcel is the one any other way of giving these values would make.
            let environment = both.profile.environment().unwrap();
            assert_eq!(
                lift(
                    &environment,
                    both.profile.surface_air().unwrap(),
                    Method::default()
                ),
                Some(ascent)
            );
        }
    }

    #[test]
    fn more_drying_than_there_is_moisture() {
        let mut levels = afternoon();
        levels[1].dewpoint = Some(250.0);
        let (_, working) = apply(
            levels,
            Some(Reach::Tapered),
            None,
            Some(-40.0),
            Daylight::Day,
        );
        assert!(
            working.notes[0].what.contains("made dry instead"),
            "{:?}",
            working.notes
        );
        assert!(Numbers::of(&working.profile).surface.is_some());
    }

    #[test]
    fn values_no_air_has_are_refused() {
        let (before, working) = apply(
            afternoon(),
            None,
            Some(900.0),
            Some(f64::NAN),
            Daylight::Day,
        );
        assert_eq!(working.profile, before);
        assert_eq!(working.notes.len(), 2);
    }
}
