//! What the profile says at the cursor.

use crate::canvas::{Canvas, Lettering};
use crate::wording;
use crate::{Anchor, Geometry, HeightScale, Ink, Point, Rect, Stroke, Units, text_width};
use dewbound_sounding::{
    Profile, Wind,
    thermo::{Air, Pressure, Temperature},
};

/// Values of a profile at one pressure, as text in the units shown.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Readout {
    /// Name and value with unit, in the order shown.
    pub rows: Vec<(&'static str, String)>,
}

const UNKNOWN: &str = "not known here";

/// What a profile says at one pressure.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
struct Sample {
    temperature: Option<f64>,
    dewpoint: Option<f64>,
    wind: Option<Wind>,
}

/// Nearest rows below and above (or at) a pressure that hold a value, and how far the pressure lies between them in ln p.
fn between<T: Copy>(profile: &Profile, column: &[Option<T>], pa: f64) -> Option<(T, T, f64)> {
    let above = profile.pressure.partition_point(|&p| p > pa);
    let row = |i: usize| Some((*profile.pressure.get(i)?, (*column.get(i)?)?));
    let (p1, v1) = (above..profile.len()).find_map(row)?;
    if p1 == pa {
        return Some((v1, v1, 0.0));
    }
    let (p0, v0) = (0..above).rev().find_map(row)?;
    Some((v0, v1, (p0 / pa).ln() / (p0 / p1).ln()))
}

impl Sample {
    fn of(profile: &Profile, pa: f64) -> Self {
        let value = |column: &[Option<f64>]| {
            between(profile, column, pa)
                .map(|(a, b, share)| a + share * (b - a))
                .filter(|v| v.is_finite())
        };
        // Winds between levels: components, so that direction turns the short way.
        let wind = between(profile, &profile.wind, pa).map(|(a, b, share)| {
            let part = |f: fn(f64) -> f64| {
                let component = |w: Wind| w.speed * f(w.direction.to_radians());
                component(a) + share * (component(b) - component(a))
            };
            let (east, north) = (part(f64::sin), part(f64::cos));
            Wind {
                direction: east.atan2(north).to_degrees().rem_euclid(360.0),
                speed: east.hypot(north),
            }
        });
        Self {
            temperature: value(&profile.temperature),
            dewpoint: value(&profile.dewpoint),
            wind: wind.filter(|w| w.speed.is_finite() && w.direction.is_finite()),
        }
    }
}

impl Readout {
    /// At a pressure. Values are interpolated linearly in ln p between known levels (wind by components); what is not known
    /// is said so.
    pub fn of(
        profile: &Profile,
        pressure: Pressure,
        heights: Option<&HeightScale>,
        units: Units,
    ) -> Self {
        let sample = Sample::of(profile, pressure.pa());
        let temperature = sample.temperature.map(Temperature::from_k);
        let dewpoint = sample.dewpoint.map(Temperature::from_k);
        let air = temperature
            .zip(dewpoint)
            .map(|(temperature, dewpoint)| Air {
                pressure,
                temperature,
                dewpoint,
            });
        let or_unknown = |text: Option<String>| text.unwrap_or_else(|| UNKNOWN.to_owned());
        let degrees =
            |t: Option<Temperature>| or_unknown(t.map(|t| wording::temperature(t, units)));
        let above_sea = heights.and_then(|h| h.above_sea(pressure));
        let above_ground = heights.and_then(|h| h.above_ground(pressure));
        let metres = |z: Option<f64>| or_unknown(z.map(|z| wording::height(z, units)));
        let wind = sample.wind.map(|wind| {
            let speed = wording::speed(wind.speed, units);
            // North is 360; 0 means calm (WMO code table 0877).
            match (wind.direction.round() as i64).rem_euclid(360) {
                _ if wind.speed < 0.05 => "calm".to_owned(),
                0 => format!("360° {speed}"),
                direction => format!("{direction:03}° {speed}"),
            }
        });
        let w = air.map(|a| format!("{} g/kg", wording::fixed(1000.0 * a.mixing_ratio(), 1)));
        let rh = air.map(|a| format!("{} %", wording::fixed(100.0 * a.relative_humidity(), 0)));
        let theta = temperature.map(|t| {
            let theta = dewbound_sounding::thermo::potential_temperature(pressure, t);
            format!("{} K", wording::fixed(theta.k(), 1))
        });
        Self {
            rows: vec![
                ("pressure", wording::pressure(pressure.hpa())),
                ("height above sea level", metres(above_sea)),
                ("height above ground", metres(above_ground)),
                ("temperature", degrees(temperature)),
                ("dew point", degrees(dewpoint)),
                ("mixing ratio", or_unknown(w)),
                ("relative humidity", or_unknown(rh)),
                ("potential temperature", or_unknown(theta)),
                ("wind", or_unknown(wind)),
            ],
        }
    }

    /// All of it in one line, for copying and for screen readers.
    pub fn line(&self) -> String {
        let parts: Vec<String> = self
            .rows
            .iter()
            .map(|(name, value)| format!("{name} {value}"))
            .collect();
        parts.join(", ")
    }
}

/// Font size of the readout.
const SIZE: f64 = 12.0;
/// Distance of its rows.
pub(crate) const LINE: f64 = 15.5;
/// Distance of boxes from the edge of the plot.
pub(crate) const INSET: f64 = 7.0;

/// Whether corner boxes leave enough of the plot free.
pub(crate) fn has_room(plot: &Rect) -> bool {
    plot.width() >= 620.0 && plot.height() >= 400.0
}

/// Space for the readout at the right edge of the plot, its upper edge at `top`; `None` when it would take too much of the plot.
pub(crate) fn readout_box(plot: &Rect, top: f64) -> Option<Rect> {
    let width =
        text_width("potential temperature", SIZE) + text_width("not known here", SIZE) + 20.0;
    let height = 9.0 * LINE + 8.0;
    has_room(plot).then(|| Rect::new(plot.right - INSET - width, top, width, height))
}

/// The line at the cursor, the marks on the curves, and the readout: in its box, or along the upper edge under `below`.
pub(crate) fn paint_cursor(
    canvas: &mut Canvas,
    geometry: &Geometry,
    profile: &Profile,
    pressure: Pressure,
    readout: &Readout,
    (place, below): (Option<Rect>, f64),
) {
    let plot = geometry.plot();
    let y = geometry.y(pressure);
    let row = [Point::new(plot.left, y), Point::new(plot.right, y)];
    canvas.line(&row, &plot, Ink::Cursor, Stroke::solid(1.0));
    let sample = Sample::of(profile, pressure.pa());
    let marks = [
        (sample.temperature, Ink::Temperature),
        (sample.dewpoint, Ink::Dewpoint),
    ];
    for (kelvin, ink) in marks {
        let centre = kelvin.map(|k| geometry.place(pressure.pa(), k));
        if let Some(centre) = centre.filter(|&c| plot.contains(c)) {
            let outline = (ink, Stroke::solid(2.0));
            canvas.circle(centre, 4.0, Some(Ink::Paper), Some(outline));
        }
    }
    let tag = Lettering::new(Anchor::Right, crate::background::AXIS, Ink::Label).strong();
    let value = wording::fixed(pressure.hpa(), 0);
    // The label of an isobar that the box would cut through goes altogether.
    for bar in crate::isopleths::isobars(geometry) {
        if let Some(at) = bar.points.first().filter(|p| (p.y - y).abs() < 19.0) {
            canvas.fill(
                Rect::new(plot.left - 43.0, at.y - 8.5, 41.0, 17.0),
                Ink::Paper,
            );
        }
    }
    panel(canvas, &Rect::new(plot.left - 43.0, y - 10.0, 41.0, 20.0));
    canvas.text(Point::new(plot.left - 6.0, y), &value, tag);

    if let Some(place) = place {
        panel(canvas, &place);
        for (i, (name, value)) in readout.rows.iter().enumerate() {
            let y = place.top + 4.0 + (i as f64 + 0.5) * LINE;
            let left = Lettering::new(Anchor::Left, SIZE, Ink::QuietLabel);
            canvas.text(Point::new(place.left + 6.0, y), name, left);
            let right = Lettering::new(Anchor::Right, SIZE, Ink::Label);
            canvas.text(Point::new(place.right - 6.0, y), value, right);
        }
    } else {
        small_readout(canvas, &plot, below, readout);
    }
}

/// In a small plot: as many values as fit, in up to three lines along the upper edge.
fn small_readout(canvas: &mut Canvas, plot: &Rect, below: f64, readout: &Readout) {
    const SMALL: f64 = 11.0;
    let room = plot.width() - 2.0 * INSET;
    let mut lines: Vec<String> = Vec::new();
    let short = [
        "",
        "",
        "(above ground)",
        "T",
        "Td",
        "w",
        "RH",
        "\u{3b8}",
        "wind",
    ];
    for ((name, value), short) in readout.rows.iter().zip(short) {
        let part = match *name {
            _ if value == UNKNOWN => continue,
            "height above ground" => continue,
            _ if short.is_empty() => value.clone(),
            _ => format!("{short} {value}"),
        };
        match lines.last_mut() {
            Some(line) if text_width(&format!("{line} · {part}"), SMALL) <= room => {
                line.push_str(" · ");
                line.push_str(&part);
            }
            _ => lines.push(part),
        }
    }
    lines.truncate(3);
    for (i, line) in lines.iter().enumerate() {
        let at = Point::new(plot.left + INSET, below + (i as f64 + 0.5) * 14.0);
        canvas.text(
            at,
            line,
            Lettering::new(Anchor::Left, SMALL, Ink::Label).backed(),
        );
    }
}

/// A box of paper with an edge.
pub(crate) fn panel(canvas: &mut Canvas, place: &Rect) {
    canvas.fill(*place, Ink::Paper);
    let mut outline = crate::canvas::corners(place);
    outline.extend(outline.first().copied());
    let frame = canvas.frame;
    canvas.line(&outline, &frame, Ink::QuietLabel, Stroke::solid(0.8));
}

#[cfg(test)]
mod tests {
    use super::*;

    fn profile() -> Profile {
        Profile {
            pressure: vec![100_000.0, 80_000.0, 50_000.0],
            height: vec![Some(100.0), None, None],
            temperature: vec![Some(293.15), None, Some(263.15)],
            dewpoint: vec![Some(288.15), Some(278.15), None],
            wind: vec![
                Some(Wind {
                    direction: 350.0,
                    speed: 10.0,
                }),
                Some(Wind {
                    direction: 10.0,
                    speed: 10.0,
                }),
                None,
            ],
            received: vec![None; 3],
            surface: Some(0),
            ..Profile::default()
        }
    }

    fn value(hpa: f64, name: &str) -> String {
        let scale = HeightScale::of(&profile());
        let readout = Readout::of(
            &profile(),
            Pressure::from_hpa(hpa),
            Some(&scale),
            Units::default(),
        );
        readout
            .rows
            .into_iter()
            .find(|(n, _)| *n == name)
            .unwrap()
            .1
    }

    #[test]
    fn values_are_linear_in_ln_p() {
        // Halfway in ln p between 1000 and 500 hPa.
        assert_eq!(value(1000.0 * 0.5_f64.sqrt(), "temperature"), "5.0 °C");
        assert_eq!(value(1000.0, "temperature"), "20.0 °C");
    }

    #[test]
    fn wind_turns_the_short_way_and_north_is_360() {
        assert_eq!(value(1000.0 * 0.8_f64.sqrt(), "wind"), "360° 19 kt");
    }

    #[test]
    fn what_is_not_known_is_said_so() {
        assert_eq!(value(600.0, "dew point"), UNKNOWN);
        assert_eq!(value(600.0, "relative humidity"), UNKNOWN);
        assert_eq!(value(1020.0, "temperature"), UNKNOWN);
        assert_ne!(value(600.0, "potential temperature"), UNKNOWN);
    }

    #[test]
    fn theta_at_1000_hpa_is_temperature() {
        assert_eq!(value(1000.0, "potential temperature"), "293.1 K");
        assert_eq!(value(1000.0, "height above ground"), "0 m");
        assert_eq!(value(1000.0, "height above sea level"), "100 m");
    }
}
