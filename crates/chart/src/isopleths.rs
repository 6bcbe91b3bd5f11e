//! Which isopleths a view shows, and their courses.

use crate::{Geometry, Point};
use dewbound_sounding::thermo::{
    Air, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
    temperature_on_pseudoadiabat,
};

/// One isopleth.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Isopleth {
    /// Its value: degC, hPa, K, or g/kg.
    pub value: f64,
    /// Its course, from the foot upward.
    pub points: Vec<Point>,
}

/// Distance between computed points of a curved isopleth, points of height.
const STEP: f64 = 10.0;
/// Moist adiabats are drawn up to this pressure, hPa: above it they run along the dry ones.
const MOIST_TOP_HPA: f64 = 200.0;
/// Mixing-ratio lines are drawn up to this pressure, hPa: they serve the boundary layer.
pub(crate) const MIXING_TOP_HPA: f64 = 550.0;
/// More lines of a family than this are never drawn.
const MOST: usize = 200;

/// The smallest of `steps` that keeps lines at least `apart` points from each other.
pub(crate) fn spacing(points_per_unit: f64, apart: f64, steps: &[f64]) -> f64 {
    let fits = |step: &&f64| **step * points_per_unit >= apart;
    steps
        .iter()
        .find(fits)
        .or(steps.last())
        .copied()
        .unwrap_or(1.0)
}

/// Every 10 K, finer where that leaves wide gaps, 20 K where it is closer than `apart` points.
fn ten_or_finer(geometry: &Geometry, finer: &[f64], apart: f64) -> f64 {
    let points_per_kelvin = geometry.points_per_kelvin();
    let fine = spacing(points_per_kelvin, 100.0, finer);
    if fine * points_per_kelvin >= 100.0 {
        fine
    } else {
        spacing(points_per_kelvin, apart, &[10.0, 20.0])
    }
}

/// Multiples of `step` from `low` to `high`.
fn multiples(low: f64, high: f64, step: f64) -> impl Iterator<Item = f64> {
    let first = (low / step).ceil();
    let count = ((high / step).floor() - first).clamp(-1.0, MOST as f64) as i64 + 1;
    (0..count).map(move |i| (first + i as f64) * step)
}

/// Isotherms crossing the plot, every so many degC.
pub(crate) fn isotherms(geometry: &Geometry) -> Vec<Isopleth> {
    let view = geometry.view();
    let step = ten_or_finer(geometry, &[0.1, 0.2, 0.5, 1.0, 2.0, 5.0], 52.0);
    let coldest = view.left_c - view.lean_k * view.depth();
    let ends = [view.bottom_hpa, view.top_hpa].map(Pressure::from_hpa);
    multiples(coldest, view.left_c + view.span_k, step)
        .map(|value| Isopleth {
            value,
            points: ends
                .map(|p| geometry.point(p, Temperature::from_c(value)))
                .to_vec(),
        })
        .collect()
}

/// Isobars, the standard pressure surfaces first, others where there is room.
pub(crate) fn isobars(geometry: &Geometry) -> Vec<Isopleth> {
    let view = geometry.view();
    let plot = geometry.plot();
    let standard = [
        1000.0, 500.0, 200.0, 100.0, 850.0, 700.0, 300.0, 400.0, 250.0, 150.0, 70.0, 50.0, 30.0,
        20.0, 10.0, 5.0, 2.0, 1.0, 925.0,
    ];
    // Other round pressures where, in the middle of the view, they keep their distance.
    let middle = (view.top_hpa * view.bottom_hpa).sqrt();
    let room = 24.0 / geometry.points_per_efold();
    let fill = [100.0, 50.0, 10.0, 5.0, 1.0]
        .into_iter()
        .filter(|step| step / middle > room)
        .flat_map(|step| multiples(view.top_hpa, view.bottom_hpa, step));
    let mut kept: Vec<Isopleth> = Vec::new();
    for (rank, value) in standard.into_iter().chain(fill).enumerate() {
        let y = geometry.y(Pressure::from_hpa(value));
        let apart = if rank < standard.len() { 15.0 } else { 24.0 };
        let inside = y >= plot.top - 0.01 && y <= plot.bottom + 0.01;
        let crowded = kept
            .iter()
            .any(|k| k.points.iter().any(|p| (p.y - y).abs() < apart));
        if inside && !crowded {
            let y = y.clamp(plot.top, plot.bottom);
            kept.push(Isopleth {
                value,
                points: vec![Point::new(plot.left, y), Point::new(plot.right, y)],
            });
        }
    }
    kept
}

/// Pressures from the foot of the plot upward to `top_hpa`, close enough together for a smooth curve.
fn pressures(geometry: &Geometry, top_hpa: f64) -> Vec<Pressure> {
    let plot = geometry.plot();
    let top = plot.top.max(geometry.y(Pressure::from_hpa(top_hpa)));
    let count = ((plot.bottom - top) / STEP).ceil().clamp(0.0, 2000.0) as usize;
    if top >= plot.bottom {
        return Vec::new();
    }
    let count = count.max(2);
    (0..=count)
        .map(|i| geometry.pressure_at(plot.bottom + (top - plot.bottom) * i as f64 / count as f64))
        .collect()
}

fn course(
    geometry: &Geometry,
    value: f64,
    pressures: &[Pressure],
    temperature: impl Fn(Pressure) -> Temperature,
) -> Isopleth {
    Isopleth {
        value,
        points: pressures
            .iter()
            .map(|&p| geometry.point(p, temperature(p)))
            .filter(|p| p.x.is_finite())
            .collect(),
    }
}

/// Dry adiabats: potential temperature in K.
pub(crate) fn dry_adiabats(geometry: &Geometry) -> Vec<Isopleth> {
    let view = geometry.view();
    let step = ten_or_finer(geometry, &[1.0, 2.0, 5.0], 72.0);
    let theta = |hpa: f64, c: f64| {
        (c + 273.15).max(50.0) * (1000.0 / hpa).powf(dewbound_sounding::thermo::KAPPA)
    };
    let low = theta(view.bottom_hpa, view.left_c);
    let high = theta(
        view.top_hpa,
        view.left_c + view.span_k - view.lean_k * view.depth(),
    );
    let pressures = pressures(geometry, view.top_hpa);
    multiples(low.min(high), high.max(low).min(900.0), step)
        .map(|k| {
            course(geometry, k, &pressures, |p| {
                temperature_on_dry_adiabat(Temperature::from_k(k), p)
            })
        })
        .collect()
}

/// theta-e of the pseudo-adiabat through saturated air of this temperature at 1000 hPa.
pub(crate) fn theta_e_of_wet_bulb(wet_bulb: Temperature) -> Temperature {
    let air = Air {
        pressure: Pressure::from_hpa(1000.0),
        temperature: wet_bulb,
        dewpoint: wet_bulb,
    };
    air.theta_e()
}

/// Moist adiabats: wet-bulb potential temperature in degC.
pub(crate) fn moist_adiabats(geometry: &Geometry) -> Vec<Isopleth> {
    let view = geometry.view();
    let step = spacing(
        geometry.points_per_kelvin(),
        48.0,
        &[0.5, 1.0, 2.0, 5.0, 10.0],
    );
    let pressures = pressures(geometry, MOIST_TOP_HPA);
    // Warmer than 40 degC at 1000 hPa there is no air to follow; colder than -20 they run along the dry adiabats.
    let high = (view.left_c + view.span_k + 5.0).min(40.0);
    multiples((view.left_c - 5.0).max(-20.0), high, step)
        .map(|value| {
            let theta_e = theta_e_of_wet_bulb(Temperature::from_c(value));
            course(geometry, value, &pressures, |p| {
                temperature_on_pseudoadiabat(theta_e, p)
            })
        })
        .collect()
}

/// Lines of constant saturation mixing ratio, g/kg.
pub(crate) fn mixing_ratio_lines(geometry: &Geometry) -> Vec<Isopleth> {
    let pressures = pressures(geometry, MIXING_TOP_HPA);
    let (Some(&foot), Some(&head)) = (pressures.first(), pressures.last()) else {
        return Vec::new();
    };
    // The usual ones first; those between only where they keep their distance at the upper end, where lines are closest.
    let values: [&[f64]; 3] = [
        &[1.0, 2.0, 4.0, 7.0, 10.0, 14.0, 20.0, 28.0],
        &[0.2, 0.5, 3.0, 5.0, 12.0, 17.0, 24.0, 40.0],
        &[
            0.1, 1.5, 6.0, 8.0, 9.0, 11.0, 13.0, 15.0, 16.0, 18.0, 19.0, 22.0, 26.0, 32.0,
        ],
    ];
    let mut kept: Vec<Isopleth> = Vec::new();
    for &value in values.into_iter().flatten() {
        let at = |p: Pressure| {
            geometry
                .point(p, dewpoint_from_mixing_ratio(p, value / 1000.0))
                .x
        };
        let end = at(head);
        let crowded = kept
            .iter()
            .any(|k| k.points.last().is_some_and(|p| (p.x - end).abs() < 27.0));
        let plot = geometry.plot();
        if crowded || end < plot.left || at(foot) > plot.right {
            continue;
        }
        kept.push(course(geometry, value, &pressures, |p| {
            dewpoint_from_mixing_ratio(p, value / 1000.0)
        }));
    }
    kept.sort_by(|a, b| a.value.total_cmp(&b.value));
    kept
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Rect, View};
    use dewbound_sounding::thermo::{potential_temperature, saturation_mixing_ratio};

    fn geometries() -> Vec<Geometry> {
        let close = View {
            bottom_hpa: 1000.0,
            top_hpa: 800.0,
            left_c: 5.0,
            span_k: 12.0,
            ..View::default()
        };
        let far = View {
            bottom_hpa: 1100.0,
            top_hpa: 10.0,
            left_c: -60.0,
            span_k: 160.0,
            ..View::default()
        };
        let frame = Rect::new(0.0, 0.0, 1000.0, 800.0);
        [View::default(), close, far]
            .map(|v| Geometry::new(frame, v))
            .to_vec()
    }

    /// Points of every isopleth of a family, put through the formula that defines it, give back its value.
    fn check(
        family: fn(&Geometry) -> Vec<Isopleth>,
        value: fn(Pressure, Temperature) -> f64,
        tolerance: f64,
    ) {
        for geometry in geometries() {
            let lines = family(&geometry);
            assert!(lines.len() >= 3, "{} lines", lines.len());
            for line in lines {
                for &point in &line.points {
                    let (p, t) = geometry.at(point);
                    let got = value(p, t);
                    assert!(
                        (got - line.value).abs() < tolerance,
                        "{got} on {} at {} hPa",
                        line.value,
                        p.hpa()
                    );
                }
            }
        }
    }

    #[test]
    fn theta_is_constant_on_a_dry_adiabat() {
        check(dry_adiabats, |p, t| potential_temperature(p, t).k(), 1e-6);
    }

    #[test]
    fn temperature_is_constant_on_an_isotherm() {
        check(isotherms, |_, t| t.c(), 1e-9);
    }

    #[test]
    fn pressure_is_constant_on_an_isobar() {
        check(isobars, |p, _| p.hpa(), 1e-6);
    }

    #[test]
    fn saturation_mixing_ratio_is_constant_on_its_line() {
        check(
            mixing_ratio_lines,
            |p, t| 1000.0 * saturation_mixing_ratio(p, t),
            1e-6,
        );
    }

    #[test]
    fn theta_e_is_constant_on_a_moist_adiabat() {
        for geometry in geometries() {
            for line in moist_adiabats(&geometry) {
                let expect = theta_e_of_wet_bulb(Temperature::from_c(line.value)).k();
                for &point in &line.points {
                    let (pressure, temperature) = geometry.at(point);
                    let air = Air {
                        pressure,
                        temperature,
                        dewpoint: temperature,
                    };
                    assert!((air.theta_e().k() - expect).abs() < 1e-3);
                }
            }
        }
    }

    #[test]
    fn a_moist_adiabat_passes_through_its_wet_bulb_potential_temperature() {
        let geometry = geometries()[0];
        let line = moist_adiabats(&geometry)
            .into_iter()
            .find(|l| l.value == 20.0)
            .unwrap();
        let y = geometry.y(Pressure::from_hpa(1000.0));
        let at = line
            .points
            .windows(2)
            .find(|w| w[0].y >= y && w[1].y <= y)
            .unwrap();
        let s = (at[0].y - y) / (at[0].y - at[1].y);
        let x = at[0].x + s * (at[1].x - at[0].x);
        let expect = geometry
            .point(Pressure::from_hpa(1000.0), Temperature::from_c(20.0))
            .x;
        assert!((x - expect).abs() < 0.1, "{x} {expect}");
    }

    #[test]
    fn lines_keep_their_distance() {
        for geometry in geometries() {
            let bars = isobars(&geometry);
            for (i, a) in bars.iter().enumerate() {
                for b in &bars[i + 1..] {
                    assert!((a.points[0].y - b.points[0].y).abs() >= 15.0 - 1e-9);
                }
            }
        }
    }
}
