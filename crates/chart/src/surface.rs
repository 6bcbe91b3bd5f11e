//! The surface level: ground, handles, whiskers, candidates.

use crate::canvas::{Canvas, Lettering};
use crate::curve::Silhouette;
use crate::hatch::{Hatching, hatch};
use crate::{
    Anchor, CandidateMark, Geometry, Handle, HandlePlace, Ink, Point, Rect, Stroke, SurfaceMark,
    SurfaceMarks, Units, wording,
};

/// Least width of a plot in which the candidates' letters are spelled out.
const KEY_ROOM: f64 = 400.0;
/// Distance of the letters of two candidates.
const LETTER: f64 = 12.0;
/// Radius of a ring.
const RING: f64 = 8.5;

/// The ground below the surface level.
pub(crate) fn paint_ground(canvas: &mut Canvas, geometry: &Geometry, surface_pa: f64) {
    let plot = geometry.plot();
    let y = geometry.y_of_pa(surface_pa).max(plot.top);
    if !y.is_finite() || y >= plot.bottom - 1.0 {
        return;
    }
    let area = [
        (y, plot.left, plot.right),
        (plot.bottom, plot.left, plot.right),
    ];
    let lines = hatch(
        &area,
        Hatching {
            slope: -1.0,
            spacing: 9.0,
        },
        &plot,
    );
    canvas.segments(&lines, &plot, Ink::Ground, Stroke::solid(0.6));
    let line = [Point::new(plot.left, y), Point::new(plot.right, y)];
    canvas.line(&line, &plot, Ink::Ground, Stroke::solid(1.6));
}

/// Where each handle goes: the ring where the value is, when that is in sight.
pub(crate) fn places(geometry: &Geometry, marks: &SurfaceMarks) -> Vec<HandlePlace> {
    let plot = geometry.plot();
    [Handle::Dewpoint, Handle::Temperature]
        .into_iter()
        .filter_map(|handle| {
            let mark = marks.mark(handle)?;
            let centre = geometry.point(marks.pressure, mark.value);
            let whisker = mark.interval.map(|ends| {
                let mut x = ends.map(|t| {
                    geometry
                        .point(marks.pressure, t)
                        .x
                        .clamp(plot.left, plot.right)
                });
                x.sort_by(f64::total_cmp);
                x.map(|x| Point::new(x, centre.y))
            });
            plot.contains(centre).then_some(HandlePlace {
                handle,
                centre,
                whisker,
            })
        })
        .collect()
}

/// Takes the space of rings and whiskers, before any label is placed.
pub(crate) fn reserve(canvas: &mut Canvas, places: &[HandlePlace]) {
    for place in places {
        let c = place.centre;
        let ring = RING + 3.0;
        canvas
            .taken
            .push(Rect::new(c.x - ring, c.y - ring, 2.0 * ring, 2.0 * ring));
        if let Some([left, right]) = place.whisker {
            canvas.taken.push(Rect::new(
                left.x - 2.0,
                left.y - 7.0,
                right.x - left.x + 4.0,
                14.0,
            ));
        }
    }
}

/// Values beside the handles, candidates below (above, where there is no room below) with a key on the outer side.
pub(crate) fn paint_labels(
    canvas: &mut Canvas,
    geometry: &Geometry,
    marks: &SurfaceMarks,
    places: &[HandlePlace],
    silhouette: &Silhouette,
    units: Units,
) {
    let plot = geometry.plot().grown(-2.0);
    for place in places {
        let Some(mark) = marks.mark(place.handle) else {
            continue;
        };
        let y = place.centre.y;
        let [left, right] = place
            .whisker
            .map_or([place.centre.x; 2], |w| w.map(|p| p.x));
        let left = left.min(place.centre.x - 9.0) - 8.0;
        let right = right.max(place.centre.x + 9.0) + 8.0;
        let (name, x, side, out) = match place.handle {
            Handle::Dewpoint => ("Td", left, Anchor::Right, -1.0),
            Handle::Temperature => ("T", right, Anchor::Left, 1.0),
        };
        let letters = paint_candidates(canvas, geometry, marks, mark, y);
        let value = format!("{name} {}", wording::temperature(mark.value, units));
        let lettering = Lettering::new(side, 13.0, Ink::Handle(place.handle))
            .backed()
            .strong();
        let beside = [(x, y), (x, y - 14.0), (x, y + 15.0)].map(|(x, y)| (Point::new(x, y), side));
        // Close to an edge: along it, above or below.
        let (edge, along) = match place.handle {
            Handle::Dewpoint => (plot.left, Anchor::Left),
            Handle::Temperature => (plot.right, Anchor::Right),
        };
        let inner = [-25.0, 25.0, -42.0, -58.0, -74.0].map(|dy| (Point::new(edge, y + dy), along));
        let at = canvas.text_at_first(beside.into_iter().chain(inner), &value, lettering, &plot);
        let foot = at.map_or(y, |p| p.y);
        if plot.width() < KEY_ROOM {
            continue;
        }
        for (row, (letter, candidate)) in letters.iter().zip(&mark.candidates).enumerate() {
            let state = if candidate.trusted { "" } else { ", set aside" };
            let text = format!(
                "{letter} {} {}{state}",
                candidate.label,
                wording::temperature(candidate.value, units)
            );
            let lettering = Lettering::new(side, 11.5, ink(candidate)).backed();
            let up = foot - 17.0 - 15.0 * row as f64;
            let rows = [up, up - 15.0, up - 30.0, up - 45.0];
            // Clear of the curves: they are what is judged. Over them only where there is no other room.
            let clear = rows.map(|y| {
                let curves = silhouette.between(y - 8.0, y + 8.0);
                let free = curves.map_or(x, |(left, right)| {
                    if out < 0.0 {
                        x.min(left - 8.0)
                    } else {
                        x.max(right + 8.0)
                    }
                });
                (Point::new(free, y), side)
            });
            let over = rows.map(|y| (Point::new(x, y), side));
            canvas.text_at_first(clear.into_iter().chain(over), &text, lettering, &plot);
        }
    }
}

fn ink(candidate: &CandidateMark) -> Ink {
    if candidate.trusted {
        Ink::Candidate
    } else {
        Ink::CandidateSetAside
    }
}

/// Triangles at the candidates' values, filled when trusted, each with a letter; gives the letters.
fn paint_candidates(
    canvas: &mut Canvas,
    geometry: &Geometry,
    marks: &SurfaceMarks,
    mark: &SurfaceMark,
    y: f64,
) -> Vec<String> {
    let plot = geometry.plot();
    let below = if y + 35.0 <= plot.bottom { 1.0 } else { -1.0 };
    let mut letters: Vec<String> = Vec::new();
    let mut seen: Vec<(f64, usize)> = Vec::new();
    for (index, candidate) in mark.candidates.iter().enumerate() {
        letters.push(letter(&candidate.label, &letters));
        let x = geometry.point(marks.pressure, candidate.value).x;
        if !(x > plot.left + 5.0 && x < plot.right - 5.0) {
            continue;
        }
        seen.push((x, index));
        let tip = Point::new(x, y + below * 13.0);
        let base = y + below * 20.0;
        let corners = vec![tip, Point::new(x + 5.0, base), Point::new(x - 5.0, base)];
        if candidate.trusted {
            canvas.polygon(corners, ink(candidate));
        } else {
            let round: Vec<Point> = corners.iter().chain(corners.first()).copied().collect();
            canvas.polygon(corners, Ink::Paper);
            canvas.line(&round, &plot, ink(candidate), Stroke::solid(1.4));
        }
    }
    // Letters stay in the order of their values, moved apart where they are close.
    seen.sort_by(|a, b| a.0.total_cmp(&b.0));
    let spread = spread(seen.iter().map(|s| s.0), LETTER);
    for (x, (_, index)) in spread.into_iter().zip(seen) {
        if let (Some(letter), Some(candidate)) = (letters.get(index), mark.candidates.get(index)) {
            let lettering = Lettering::new(Anchor::Centre, 11.5, ink(candidate))
                .backed()
                .strong();
            canvas.text(Point::new(x, y + below * 28.0), letter, lettering);
        }
    }
    letters
}

/// Rising positions moved so that each is at least `apart` from the next; their mean stays.
fn spread(positions: impl Iterator<Item = f64>, apart: f64) -> Vec<f64> {
    let mut moved: Vec<f64> = Vec::new();
    let mut excess = 0.0;
    for x in positions {
        let least = moved.last().map_or(x, |last| last + apart);
        let place = x.max(least);
        excess += place - x;
        moved.push(place);
    }
    let shift = excess / moved.len().max(1) as f64;
    moved.iter().map(|x| x - shift).collect()
}

/// The first letter of a label that isn't taken yet, else its number.
fn letter(label: &str, taken: &[String]) -> String {
    label
        .chars()
        .filter(|c| c.is_alphabetic())
        .map(|c| c.to_uppercase().to_string())
        .find(|c| !taken.contains(c))
        .unwrap_or_else(|| (taken.len() + 1).to_string())
}

/// Whiskers and rings, on top of everything. The dew point's handle is a ring, the temperature's a diamond.
pub(crate) fn paint_handles(canvas: &mut Canvas, marks: &SurfaceMarks, places: &[HandlePlace]) {
    let frame = canvas.frame;
    for place in places {
        let Some(mark) = marks.mark(place.handle) else {
            continue;
        };
        let c = place.centre;
        if let Some([left, right]) = place.whisker {
            let cap = |p: Point| [Point::new(p.x, p.y - 6.5), Point::new(p.x, p.y + 6.5)];
            let lines = [[left, right], cap(left), cap(right)];
            canvas.segments(
                &lines,
                &frame,
                Ink::Whisker(place.handle),
                Stroke::solid(2.6),
            );
        }
        let handle = Ink::Handle(place.handle);
        let fill = if mark.hovered { handle } else { Ink::Paper };
        let stroke = Stroke::solid(3.0);
        match place.handle {
            Handle::Dewpoint => canvas.circle(c, RING, Some(fill), Some((handle, stroke))),
            Handle::Temperature => {
                let r = RING + 2.0;
                let corners = vec![
                    Point::new(c.x, c.y - r),
                    Point::new(c.x + r, c.y),
                    Point::new(c.x, c.y + r),
                    Point::new(c.x - r, c.y),
                ];
                let round: Vec<Point> = corners.iter().chain(corners.first()).copied().collect();
                canvas.polygon(corners, fill);
                canvas.line(&round, &frame, handle, stroke);
            }
        }
        if mark.focused {
            canvas.circle(c, RING + 4.5, None, Some((Ink::Focus, Stroke::solid(2.0))));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn letters_keep_their_order_and_their_distance() {
        let moved = spread([10.0, 11.0, 40.0].into_iter(), 12.0);
        assert!(
            moved.windows(2).all(|w| w[1] - w[0] >= 12.0 - 1e-9),
            "{moved:?}"
        );
        assert!((moved.iter().sum::<f64>() - 61.0).abs() < 1e-9);
    }

    #[test]
    fn every_candidate_has_its_own_letter() {
        let mut letters = Vec::new();
        for label in ["reported", "reported again", "r", "mixed layer"] {
            letters.push(letter(label, &letters));
        }
        assert_eq!(letters, ["R", "E", "3", "M"]);
    }
}
