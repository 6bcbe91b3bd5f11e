//! Amendments of a layer.

use crate::profile::SAME_PRESSURE;
use crate::telling::{count_of_levels, hpa};
use crate::{BridgeHumidity, Note, Place, Profile};
use dewbound_thermo::{
    Environment, Pressure, Temperature, dewpoint_from_mixing_ratio, dewpoint_from_relative_humidity,
};

/// A level named by its pressure is taken when it lies within this (Pa).
const NAMED_WITHIN: f64 = 5.0;

fn refuse(notes: &mut Vec<Note>, what: String, why: impl Into<String>) {
    notes.push(Note {
        place: Place::File,
        what,
        why: why.into(),
    });
}

/// The rows at both ends of a layer, inserted where there are none. Notes why not.
fn ends(
    profile: &mut Profile,
    bottom: f64,
    top: f64,
    what: &str,
    notes: &mut Vec<Note>,
) -> Option<(usize, usize)> {
    let layer = format!("{what} from {} to {} not done", hpa(bottom), hpa(top));
    // Written so that an end that is not a number fails too.
    if !(bottom > top && top > 0.0) {
        refuse(notes, layer, "the lower end must have the higher pressure");
        return None;
    }
    let low = profile.interpolated(&profile.temperature, profile.surface.unwrap_or(0), bottom);
    let high = profile.interpolated(&profile.temperature, profile.surface.unwrap_or(0), top);
    if low.is_none() || high.is_none() {
        refuse(
            notes,
            layer,
            "an end lies outside the levels with temperature",
        );
        return None;
    }
    let low = profile.row_at(bottom)?;
    let high = profile.row_at(top)?;
    (low < high).then_some((low, high))
}

/// Temperature linear in ln p between the ends.
pub(crate) fn bridge_layer(
    profile: &mut Profile,
    bottom: f64,
    top: f64,
    humidity: BridgeHumidity,
    notes: &mut Vec<Note>,
) {
    let Some((low, high)) = ends(profile, bottom, top, "bridge", notes) else {
        return;
    };
    let end = |row: usize| {
        Some((
            *profile.pressure.get(row)?,
            (*profile.temperature.get(row)?)?,
        ))
    };
    let (Some((p_low, t_low)), Some((p_high, t_high))) = (end(low), end(high)) else {
        return;
    };
    let depth = (p_low / p_high).ln();
    let (mut changed, mut capped) = (0_usize, 0_usize);
    let rows = profile
        .pressure
        .iter()
        .zip(&mut profile.temperature)
        .zip(&mut profile.dewpoint);
    for ((&pressure, temperature), dewpoint) in rows.take(high).skip(low + 1) {
        let Some(t_received) = *temperature else {
            continue;
        };
        let t = t_low + (p_low / pressure).ln() / depth * (t_high - t_low);
        *temperature = Some(t);
        changed += 1;
        if let Some(td) = dewpoint {
            if humidity == BridgeHumidity::RelativeHumidity {
                let [e, es] = [*td, t_received].map(|t| {
                    dewbound_thermo::saturation_vapour_pressure(Temperature::from_k(t)).pa()
                });
                *td = dewpoint_from_relative_humidity(Temperature::from_k(t), e / es).k();
            }
            if *td > t {
                *td = t;
                capped += usize::from(humidity == BridgeHumidity::MixingRatio);
            }
        }
    }
    if changed == 0 {
        refuse(
            notes,
            format!(
                "bridge from {} to {} changes nothing",
                hpa(bottom),
                hpa(top)
            ),
            "no level lies between the ends",
        );
    }
    if capped > 0 {
        refuse(
            notes,
            format!(
                "bridge from {} to {}: {} capped at saturation",
                hpa(bottom),
                hpa(top),
                count_of_levels(capped)
            ),
            "the mixing ratio as received is more than the bridged air can hold",
        );
    }
}

/// Leaves levels out; the surface level stays.
pub(crate) fn drop_levels(profile: &mut Profile, bottom: f64, top: f64, notes: &mut Vec<Note>) {
    let surface = profile.surface;
    let before = profile.len();
    let what = format!("levels from {} to {}", hpa(bottom), hpa(top));
    if bottom == top {
        let nearest = profile
            .pressure
            .iter()
            .enumerate()
            .map(|(row, p)| (row, (p - bottom).abs()))
            .filter(|(_, off)| *off <= NAMED_WITHIN)
            .min_by(|a, b| a.1.total_cmp(&b.1));
        match nearest {
            None => refuse(
                notes,
                format!("level {} not dropped", hpa(bottom)),
                "there is no level at that pressure",
            ),
            Some((row, _)) if Some(row) == surface => refuse(
                notes,
                format!("surface level {} not dropped", hpa(bottom)),
                "the surface can be set, not dropped",
            ),
            Some((row, _)) => profile.retain(|other, _| other != row),
        }
        return;
    }
    if bottom.partial_cmp(&top) != Some(std::cmp::Ordering::Greater) {
        refuse(
            notes,
            format!("{what} not dropped"),
            "the lower end must have the higher pressure",
        );
        return;
    }
    let inside = |p: f64| p < bottom - SAME_PRESSURE && p > top + SAME_PRESSURE;
    let surface_inside = surface
        .and_then(|row| profile.pressure.get(row))
        .is_some_and(|&p| inside(p));
    profile.retain(|row, p| Some(row) == surface || !inside(p));
    if surface_inside {
        refuse(
            notes,
            format!("{what}: the surface level is kept"),
            "the surface can be set, not dropped",
        );
    } else if profile.len() == before {
        refuse(
            notes,
            format!("{what}: nothing dropped"),
            "no level lies between the ends",
        );
    }
}

/// One mixing ratio over the layer, ends included.
pub(crate) fn mix_moisture(
    profile: &mut Profile,
    bottom: f64,
    top: f64,
    mixing_ratio: Option<f64>,
    notes: &mut Vec<Note>,
) {
    let what = format!("mixing of moisture from {} to {}", hpa(bottom), hpa(top));
    if let Some(w) = mixing_ratio
        && !(w > 0.0 && w < 0.1)
    {
        refuse(
            notes,
            format!("{what} not done"),
            format!("a mixing ratio of {:.1} g/kg is not air", w * 1000.0),
        );
        return;
    }
    let Some((low, high)) = ends(profile, bottom, top, "mixing of moisture", notes) else {
        return;
    };
    let Some(w) = mixing_ratio.or_else(|| mean_mixing_ratio(profile, low, high)) else {
        refuse(
            notes,
            format!("{what} not done"),
            "humidity is not known through the layer",
        );
        return;
    };
    let mut capped = 0_usize;
    let rows = profile
        .pressure
        .iter()
        .zip(&profile.temperature)
        .zip(&mut profile.dewpoint);
    for ((&pressure, temperature), dewpoint) in rows.take(high + 1).skip(low) {
        let Some(t) = *temperature else { continue };
        let td = dewpoint_from_mixing_ratio(Pressure::from_pa(pressure), w).k();
        capped += usize::from(td > t);
        *dewpoint = Some(td.min(t));
    }
    if capped > 0 {
        refuse(
            notes,
            format!("{what}: {} capped at saturation", count_of_levels(capped)),
            "the air there can't hold the layer's mixing ratio",
        );
    }
}

/// Integral mean of w over the rows from `low` to `high`.
fn mean_mixing_ratio(profile: &Profile, low: usize, high: usize) -> Option<f64> {
    let start = (low..=high).find(|&row| profile.complete(row))?;
    let rows: Vec<usize> = (start..=high)
        .filter(|&row| matches!(profile.temperature.get(row), Some(Some(_))))
        .collect();
    let column = |values: &[Option<f64>]| {
        rows.iter()
            .map(|&row| values.get(row).copied().flatten())
            .collect::<Vec<_>>()
    };
    let pressures: Vec<f64> = rows
        .iter()
        .filter_map(|&row| profile.pressure.get(row).copied())
        .collect();
    let temperatures: Vec<f64> = column(&profile.temperature).into_iter().flatten().collect();
    let environment =
        Environment::new(&pressures, &temperatures, &column(&profile.dewpoint)).ok()?;
    let (bottom, top) = (pressures.first()?, pressures.last()?);
    let (_, w) = environment.layer_mean(Pressure::from_pa(*bottom), Pressure::from_pa(*top))?;
    Some(w)
}

/// Cuts the profile.
pub(crate) fn disregard_above(profile: &mut Profile, pressure: f64, notes: &mut Vec<Note>) {
    let what = format!("levels above {}", hpa(pressure));
    let kept = |p: f64| p >= pressure - SAME_PRESSURE;
    let surface_kept = profile
        .surface
        .and_then(|row| profile.pressure.get(row))
        .is_none_or(|&p| kept(p));
    if !surface_kept || !profile.pressure.first().is_some_and(|&p| kept(p)) {
        refuse(
            notes,
            format!("{what} not disregarded"),
            "that would leave nothing, not even the surface",
        );
        return;
    }
    let before = profile.len();
    profile.retain(|_, p| kept(p));
    if profile.len() == before {
        refuse(
            notes,
            format!("{what}: nothing disregarded"),
            "the profile ends below",
        );
    }
}

#[cfg(test)]
mod tests {
    use crate::testing::{afternoon, level, received};
    use crate::{Amendment, Amendments, BridgeHumidity, Daylight, Entry, Level, Profile, Working};
    use dewbound_thermo::Pressure;

    fn apply(levels: Vec<Level>, amendment: Amendment) -> (Profile, Working) {
        let (profile, _) = received(levels);
        let list = Amendments {
            entries: vec![Entry {
                amendment,
                enabled: true,
                from_repair: None,
            }],
            reach: None,
        };
        let working = list.apply(&profile, Daylight::Unknown);
        (profile, working)
    }

    fn refused(levels: Vec<Level>, amendment: Amendment, what: &str) {
        let (before, working) = apply(levels, amendment);
        assert_eq!(working.profile, before);
        let [note] = working.notes.as_slice() else {
            panic!("{:?}", working.notes)
        };
        assert!(note.what.contains(what) && !note.why.is_empty(), "{note:?}");
    }

    /// A cold, saturated spike at 610 hPa in the afternoon.
    fn spiked() -> Vec<Level> {
        let mut levels = afternoon();
        levels.push(level(650.0, 4.0, 2.0));
        levels.push(level(610.0, -6.0, -6.5));
        levels
    }

    #[test]
    fn bridge_is_linear_in_ln_p_and_keeps_what_it_says() {
        for humidity in [
            BridgeHumidity::RelativeHumidity,
            BridgeHumidity::MixingRatio,
        ] {
            let bridge = Amendment::BridgeLayer {
                bottom_pa: 65_000.0,
                top_pa: 50_000.0,
                humidity,
            };
            let (before, working) = apply(spiked(), bridge);
            assert!(working.notes.is_empty());
            assert_eq!(working.profile.pressure, before.pressure);
            let row = before.pressure.iter().position(|&p| p == 61_000.0).unwrap();
            let (old, new) = (before.air(row).unwrap(), working.profile.air(row).unwrap());
            // By hand: 4.0 °C at 650 hPa, -12.3 °C at 500 hPa.
            let expect = 4.0 - 16.3 * (650.0_f64 / 610.0).ln() / (650.0_f64 / 500.0).ln();
            assert!((new.temperature.c() - expect).abs() < 1e-9);
            match humidity {
                BridgeHumidity::RelativeHumidity => {
                    assert!((new.relative_humidity() - old.relative_humidity()).abs() < 1e-9);
                }
                BridgeHumidity::MixingRatio => assert_eq!(new.dewpoint, old.dewpoint),
            }
            for other in (0..before.len()).filter(|&other| other != row) {
                assert_eq!(before.air(other), working.profile.air(other));
            }
        }
    }

    #[test]
    fn bridge_downward_caps_the_mixing_ratio() {
        // A warm spike bridged away leaves less room for its moisture.
        let mut levels = afternoon();
        levels.push(level(610.0, 9.0, 8.0));
        let bridge = Amendment::BridgeLayer {
            bottom_pa: 70_000.0,
            top_pa: 50_000.0,
            humidity: BridgeHumidity::MixingRatio,
        };
        let (_, working) = apply(levels, bridge);
        assert!(
            working.notes[0]
                .what
                .contains("1 level capped at saturation")
        );
    }

    #[test]
    fn ends_between_levels_are_inserted() {
        let bridge = Amendment::BridgeLayer {
            bottom_pa: 66_000.0,
            top_pa: 55_000.0,
            humidity: BridgeHumidity::MixingRatio,
        };
        let (before, working) = apply(spiked(), bridge);
        assert_eq!(working.profile.len(), before.len() + 2);
        let (old, new) = (
            before.environment().unwrap(),
            working.profile.environment().unwrap(),
        );
        for hpa in [700.0, 680.0, 660.0, 550.0, 520.0, 400.0] {
            let at = |e: &dewbound_thermo::Environment| {
                e.at(Pressure::from_hpa(hpa)).unwrap().temperature.k()
            };
            assert!((at(&old) - at(&new)).abs() < 1e-9, "{hpa}");
        }
    }

    #[test]
    fn what_a_bridge_refuses() {
        let bridge = |bottom_pa, top_pa| Amendment::BridgeLayer {
            bottom_pa,
            top_pa,
            humidity: BridgeHumidity::RelativeHumidity,
        };
        refused(
            afternoon(),
            bridge(50_000.0, 70_000.0),
            "bridge from 500 hPa to 700 hPa not done",
        );
        refused(afternoon(), bridge(f64::NAN, 70_000.0), "not done");
        refused(
            afternoon(),
            bridge(98_000.0, 70_000.0),
            "bridge from 980 hPa to 700 hPa not done",
        );
        refused(afternoon(), bridge(20_000.0, 5_000.0), "not done");
        refused(afternoon(), bridge(50_000.0, 40_000.0), "changes nothing");
    }

    #[test]
    fn drops_between_and_single() {
        let (before, working) = apply(
            spiked(),
            Amendment::DropLevels {
                bottom_pa: 65_000.0,
                top_pa: 50_000.0,
            },
        );
        assert_eq!(working.profile.len(), before.len() - 1);
        assert!(!working.profile.pressure.contains(&61_000.0));
        let (_, single) = apply(
            spiked(),
            Amendment::DropLevels {
                bottom_pa: 61_000.0,
                top_pa: 61_000.0,
            },
        );
        assert_eq!(single.profile, working.profile);
        let drop = |bottom_pa, top_pa| Amendment::DropLevels { bottom_pa, top_pa };
        refused(
            afternoon(),
            drop(61_000.0, 61_000.0),
            "level 610 hPa not dropped",
        );
        refused(
            afternoon(),
            drop(96_000.0, 96_000.0),
            "surface level 960 hPa not dropped",
        );
        refused(afternoon(), drop(50_000.0, 40_000.0), "nothing dropped");
        refused(afternoon(), drop(40_000.0, 50_000.0), "not dropped");
        // A range across the surface drops the rest of it.
        let (before, working) = apply(afternoon(), drop(97_000.0, 94_000.0));
        assert_eq!(working.profile.len(), before.len() - 1);
        assert!(working.notes[0].what.contains("the surface level is kept"));
    }

    #[test]
    fn mixing_keeps_the_mean() {
        let mix = |mixing_ratio| Amendment::MixMoisture {
            bottom_pa: 96_000.0,
            top_pa: 90_000.0,
            mixing_ratio,
        };
        let (before, working) = apply(afternoon(), mix(None));
        assert!(working.notes.is_empty());
        // An independent mean: a fine sum over p of the interpolated profile.
        let environment = before.environment().unwrap();
        let steps = 20_000;
        let mean = (0..steps)
            .map(|n| {
                let p = 90_000.0 + 6_000.0 * (f64::from(n) + 0.5) / f64::from(steps);
                environment.at(Pressure::from_pa(p)).unwrap().mixing_ratio()
            })
            .sum::<f64>()
            / f64::from(steps);
        for row in 0..3 {
            let w = working.profile.air(row).unwrap().mixing_ratio();
            assert!((w / mean - 1.0).abs() < 1e-6, "row {row}: {w}, mean {mean}");
        }
        assert_eq!(working.profile.dewpoint[3..], before.dewpoint[3..]);

        let (_, given) = apply(afternoon(), mix(Some(0.010)));
        for row in 0..3 {
            assert!((given.profile.air(row).unwrap().mixing_ratio() - 0.010).abs() < 1e-9);
        }
        let (_, soaked) = apply(afternoon(), mix(Some(0.028)));
        assert!(soaked.notes[0].what.contains("capped at saturation"));
        refused(afternoon(), mix(Some(-0.001)), "not done");
        refused(afternoon(), mix(Some(f64::NAN)), "not done");
    }

    #[test]
    fn cut_above() {
        let (before, working) = apply(
            afternoon(),
            Amendment::DisregardAbove {
                pressure_pa: 45_000.0,
            },
        );
        assert_eq!(working.profile.pressure.last(), Some(&50_000.0));
        assert_eq!(
            working.profile.pressure[..],
            before.pressure[..working.profile.len()]
        );
        refused(
            afternoon(),
            Amendment::DisregardAbove {
                pressure_pa: 5_000.0,
            },
            "nothing disregarded",
        );
        refused(
            afternoon(),
            Amendment::DisregardAbove {
                pressure_pa: 99_000.0,
            },
            "not disregarded",
        );
        refused(
            afternoon(),
            Amendment::DisregardAbove {
                pressure_pa: f64::NAN,
            },
            "not disregarded",
        );
    }
}
