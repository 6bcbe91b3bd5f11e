//! First rows of a sonde whose sensors still tell of the launch place, when a parcel starts from them.

use super::surface_mismatch::{SurfaceMismatch, at_pressure, carried_down, outside};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::Amendment;
use dewbound_sounding::thermo::Pressure;

/// The most unstable parcel of fine data starts within the first few hPa, from air moister than the surface and than the
/// levels above lead to, and has far more CAPE than the surface parcel.
///
/// `levels`: the first settled levels.
pub(super) fn look(view: &View, surface: f64, levels: &[usize]) -> Option<Finding> {
    let column = &view.column;
    if !column.fine {
        return None;
    }
    let &settled = levels.first()?;
    let numbers = view.context.numbers;
    let (most, at_surface) = (numbers.most_unstable.as_ref()?, numbers.surface.as_ref()?);
    let start = most.start.pressure.pa();
    let gain = most.cape - at_surface.cape;
    if !(start < surface && start > column.pressure[settled])
        || gain < view.threshold("surface-mismatch.unsettled_jkg")
    {
        return None;
    }
    let points: Vec<(f64, f64)> = levels
        .iter()
        .filter_map(|&level| Some((column.pressure[level], column.mixing_ratio[level]?)))
        .collect();
    let (constant, along) = carried_down(&points, surface)?;
    let expected = [constant, along].map(|w| at_pressure(surface, w));
    let measured = at_pressure(surface, column.mixing_ratio.first().copied().flatten()?);
    let lowest = expected[0].min(expected[1]).min(measured);
    let highest = expected[0].max(expected[1]).max(measured);
    let excess = (1..settled)
        .filter_map(|level| column.mixing_ratio[level])
        .map(|w| outside(at_pressure(surface, w), (lowest, highest)))
        .fold(0.0, f64::max);
    if excess < view.threshold("surface-mismatch.unsettled_k") {
        return None;
    }
    let (bottom, top) = (
        Pressure::from_pa(surface),
        Pressure::from_pa(column.pressure[settled]),
    );
    let span = layer(bottom, top);
    Some(Finding {
        rule: SurfaceMismatch.id(),
        title: "First rows of the sonde stand apart",
        grade: Grade::Doubtful,
        bottom: Some(bottom),
        top: Some(top),
        heights: view.heights(bottom, top),
        summary: format!(
            "The first rows of the sonde, {span}, are moister than the surface and than the levels above lead to, by {} K as dew \
             point at surface pressure; the most unstable parcel starts from them with {} J/kg more CAPE than the surface \
             parcel.",
            number(excess, 1),
            number(gain, 0)
        ),
        evidence: vec![
            Evidence::new(
                "excess_dewpoint_k",
                "first rows moister, as dew point at surface pressure, by up to",
                excess,
                "K",
                1,
            ),
            Evidence::new(
                "cape_gain_jkg",
                "CAPE, most unstable minus surface parcel",
                gain,
                "J/kg",
                0,
            ),
        ],
        guilty: "The sensors still told of the place of launch (wet ground or hands, a shelter, still air) or pressure \
                 wandered before release; the air of the parcel was never there."
            .into(),
        innocent: "A skin of moist air over wet ground, crops or water, moister than the screen and only a few metres deep: it \
                   can't feed a storm for long."
            .into(),
        caveat: String::new(),
        repairs: vec![Repair {
            id: "drop-first-rows",
            what: format!("Drop the rows between the surface and {}", layer(top, top)),
            amendments: vec![Amendment::DropLevels {
                bottom_pa: bottom.pa(),
                top_pa: top.pa(),
            }],
        }],
        wind_only: false,
    })
}
