//! First rows of a sonde that are moister than the surface, when a parcel starts from them.

use super::repair;
use super::surface_mismatch::{SurfaceMismatch, at_pressure, carried_down};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::Amendment;
use dewbound_sounding::thermo::{Pressure, Temperature};

/// The most unstable parcel of fine data starts within the first few hPa, from air moister than the surface, and has far
/// more CAPE than the surface parcel.
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
    let measured = at_pressure(surface, column.mixing_ratio.first().copied().flatten()?);
    let rows = (1..settled)
        .filter_map(|level| column.mixing_ratio[level])
        .map(|w| at_pressure(surface, w))
        .reduce(f64::max)?;
    let excess = rows - measured;
    if excess < view.threshold("surface-mismatch.unsettled_k") {
        return None;
    }
    let points: Vec<(f64, f64)> = levels
        .iter()
        .filter_map(|&level| Some((column.pressure[level], column.mixing_ratio[level]?)))
        .collect();
    let (constant, _) = carried_down(&points, surface)?;
    let above = rows - at_pressure(surface, constant);
    let (bottom, top) = (
        Pressure::from_pa(surface),
        Pressure::from_pa(column.pressure[settled]),
    );
    let span = layer(bottom, top);
    let mut repairs = vec![Repair {
        id: "drop-first-rows",
        what: format!("Drop the rows between the surface and {}", layer(top, top)),
        amendments: vec![Amendment::DropLevels {
            bottom_pa: bottom.pa(),
            top_pa: top.pa(),
        }],
    }];
    if rows <= column.temperature[0] {
        repairs.push(repair::surface_dewpoint(
            "dewpoint-from-first-rows",
            Temperature::from_k(rows),
            "believing the first rows",
        ));
    }
    Some(Finding {
        rule: SurfaceMismatch.id(),
        title: "Surface and first rows of the sonde disagree",
        grade: Grade::Doubtful,
        bottom: Some(bottom),
        top: Some(top),
        heights: view.heights(bottom, top),
        summary: format!(
            "The first rows of the sonde, {span}, are moister than the surface by up to {} K as dew point at surface pressure; \
             the most unstable parcel starts from them with {} J/kg more CAPE than the surface parcel.",
            number(excess, 1),
            number(gain, 0)
        ),
        evidence: vec![
            Evidence::new(
                "excess_dewpoint_k",
                "first rows minus surface, as dew point at surface pressure",
                excess,
                "K",
                1,
            ),
            Evidence::new(
                "excess_above_k",
                "first rows minus the levels next above, as dew point at surface pressure",
                above,
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
        guilty: "The sonde's sensors still told of the place of launch (wet ground or hands, a shelter, still air), or \
                 pressure wandered before release: then the most unstable parcel starts from air that was never there. Or \
                 the surface value is too dry: then the surface parcel has too little CAPE."
            .into(),
        innocent: "A skin of moist air over wet ground, crops or water, a few metres deep and missed by the screen: it can't \
                   feed a storm for long."
            .into(),
        caveat: String::new(),
        repairs,
        wind_only: false,
    })
}
