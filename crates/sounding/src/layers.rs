//! Amendments of a layer.

use crate::merge::hpa;
use crate::profile::SAME_PRESSURE;
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
                "bridge from {} to {}: {capped} levels capped at saturation",
                hpa(bottom),
                hpa(top)
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
    if !(bottom > top) {
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
            format!("{what}: {capped} levels capped at saturation"),
            "they can't hold the layer's mixing ratio",
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
