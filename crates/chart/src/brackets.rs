//! Findings as numbered brackets along the profile.

use crate::canvas::{Canvas, Lettering, corners};
use crate::curve::Silhouette;
use crate::{Anchor, Bracket, BracketGrade, Dash, Geometry, Ink, Point, Rect, Stroke};

/// Radius of the numbered disc.
const DISC: f64 = 9.5;
/// Length of the arms pointing to the profile.
const ARM: f64 = 6.0;
/// Distance kept from the curves.
const CLEAR: f64 = 12.0;
/// Room below a disc for the tick of a repaired finding.
const TICK: f64 = 9.0;
/// Least height of a bracket.
const LEAST: f64 = 8.0;

/// A bracket in its place: the upright line at `x` from `top` to `bottom`, arms toward the curves, the disc's centre.
#[derive(Debug, Clone, Copy)]
struct Placed {
    x: f64,
    top: f64,
    bottom: f64,
    /// +1: arms to the right (the bracket stands left of the curves); -1: to the left.
    side: f64,
    disc: Point,
    /// Room for the tick of a repaired finding below the disc.
    tick: bool,
}

impl Placed {
    fn boxes(&self) -> [Rect; 2] {
        let (inner, outer) = (self.x + self.side * ARM, self.x - self.side * 2.0);
        let upright = Rect::new(
            inner.min(outer),
            self.top - 2.0,
            (inner - outer).abs(),
            self.bottom - self.top + 4.0,
        );
        [upright, disc_box(self.disc, self.tick)]
    }
}

fn disc_box(centre: Point, tick: bool) -> Rect {
    let r = DISC + 2.0;
    let below = if tick { TICK } else { 0.0 };
    Rect::new(centre.x - r, centre.y - r, 2.0 * r, 2.0 * r + below)
}

/// Paints the brackets in sight; gives number and hit box of each disc. Brackets and numbers never cover each other: a bracket goes to
/// the nearest free place left of the curves, else right of them, else its disc stands alone at the left edge.
pub(crate) fn paint(
    canvas: &mut Canvas,
    geometry: &Geometry,
    brackets: &[Bracket],
    silhouette: &Silhouette,
) -> Vec<(usize, Rect)> {
    let plot = geometry.plot();
    // Short ones first: they have the least choice.
    let mut order: Vec<(f64, f64, &Bracket)> = brackets
        .iter()
        .filter_map(|bracket| {
            let (a, b) = (geometry.y(bracket.bottom), geometry.y(bracket.top));
            let (top, bottom) = (a.min(b), a.max(b));
            let seen =
                top.is_finite() && bottom.is_finite() && bottom >= plot.top && top <= plot.bottom;
            seen.then(|| {
                let lack = (LEAST - (bottom - top)).max(0.0) / 2.0;
                (
                    (top - lack).max(plot.top + 1.0),
                    (bottom + lack).min(plot.bottom - 1.0),
                    bracket,
                )
            })
        })
        .filter(|(top, bottom, _)| bottom > top)
        .collect();
    order.sort_by(|a, b| {
        (a.1 - a.0)
            .total_cmp(&(b.1 - b.0))
            .then(a.2.number.cmp(&b.2.number))
    });

    let mut places = Vec::new();
    for (top, bottom, bracket) in order {
        let tick = bracket.grade == BracketGrade::Repaired;
        let placed = place(canvas, &plot, silhouette, [top, bottom], tick);
        let disc = match placed {
            Some(placed) => {
                canvas.taken.extend(placed.boxes());
                paint_bracket(canvas, &plot, bracket, &placed);
                placed.disc
            }
            None => match edge_place(canvas, &plot, (top + bottom) / 2.0, tick) {
                Some(disc) => {
                    canvas.taken.push(disc_box(disc, tick));
                    disc
                }
                None => continue,
            },
        };
        paint_disc(canvas, bracket, disc);
        places.push((bracket.number, disc_box(disc, false)));
    }
    places.sort_by_key(|&(number, _)| number);
    places
}

fn place(
    canvas: &Canvas,
    plot: &Rect,
    silhouette: &Silhouette,
    [top, bottom]: [f64; 2],
    tick: bool,
) -> Option<Placed> {
    let inside = plot.grown(-2.0);
    let (left, right) = silhouette
        .between(top, bottom)
        .unwrap_or((plot.centre().x, plot.centre().x));
    let middle = (top + bottom) / 2.0;
    let disc_y = middle.clamp(
        (plot.top + DISC + 4.0).min(middle),
        (plot.bottom - DISC - 4.0).max(middle),
    );
    let lowest = inside.bottom - DISC - 2.0 - if tick { TICK } else { 0.0 };
    let disc_y = disc_y.clamp(inside.top + DISC + 2.0, lowest.max(inside.top + DISC + 2.0));
    let tries = (plot.width() / 7.0).clamp(0.0, 400.0) as usize;
    let leftward = (0..tries).map(|i| (left.min(plot.right) - CLEAR - ARM - 7.0 * i as f64, 1.0));
    let rightward = (0..tries).map(|i| (right.max(plot.left) + CLEAR + ARM + 7.0 * i as f64, -1.0));
    leftward
        .chain(rightward)
        .map(|(x, side)| Placed {
            x,
            top,
            bottom,
            side,
            disc: Point::new(x - side * (DISC + 3.0), disc_y),
            tick,
        })
        .find(|placed| {
            placed
                .boxes()
                .iter()
                .all(|b| inside.holds(b) && canvas.is_free(b))
        })
}

/// A free place for a lone disc at the left edge, as near to its height as can be.
fn edge_place(canvas: &Canvas, plot: &Rect, y: f64, tick: bool) -> Option<Point> {
    let steps = (plot.height() / 4.0).clamp(0.0, 1000.0) as i32;
    (0..=steps)
        .flat_map(|i| [f64::from(i), -f64::from(i)])
        .flat_map(|i| (0..8).map(move |column| (i, f64::from(column))))
        .map(|(i, column)| Point::new(plot.left + DISC + 4.0 + 23.0 * column, y + 4.0 * i))
        .find(|&p| plot.holds(&disc_box(p, tick)) && canvas.is_free(&disc_box(p, tick)))
}

fn ink(bracket: &Bracket) -> Ink {
    Ink::Bracket(bracket.grade)
}

fn paint_bracket(canvas: &mut Canvas, plot: &Rect, bracket: &Bracket, placed: &Placed) {
    let (width, dash) = match bracket.grade {
        BracketGrade::Erroneous => (2.8, Dash::Solid),
        BracketGrade::Doubtful => (1.6, Dash::Solid),
        BracketGrade::Informative => (1.4, Dash::Dots),
        BracketGrade::Repaired => (1.4, Dash::Short),
        BracketGrade::FromEdit => (1.6, Dash::DashDot),
    };
    let stroke = Stroke::dashed(width + if bracket.selected { 1.2 } else { 0.0 }, dash);
    let arm = placed.x + placed.side * ARM;
    let points = [
        Point::new(arm, placed.top),
        Point::new(placed.x, placed.top),
        Point::new(placed.x, placed.bottom),
        Point::new(arm, placed.bottom),
    ];
    canvas.line(&points, plot, ink(bracket), stroke);
}

/// Erroneous: filled. From an edit: square. Repaired: with a tick below. Selected: ringed.
fn paint_disc(canvas: &mut Canvas, bracket: &Bracket, disc: Point) {
    let filled = bracket.grade == BracketGrade::Erroneous;
    let inside = if filled { ink(bracket) } else { Ink::Paper };
    let outline = (
        ink(bracket),
        Stroke::solid(if bracket.selected { 2.6 } else { 1.6 }),
    );
    if bracket.grade == BracketGrade::FromEdit {
        let r = DISC - 1.0;
        let square = Rect::new(disc.x - r, disc.y - r, 2.0 * r, 2.0 * r);
        canvas.fill(square, inside);
        let mut round = corners(&square);
        round.extend(round.first().copied());
        let frame = canvas.frame;
        canvas.line(&round, &frame, outline.0, outline.1);
    } else {
        canvas.circle(disc, DISC, Some(inside), Some(outline));
    }
    if bracket.selected {
        canvas.circle(
            disc,
            DISC + 3.0,
            None,
            Some((Ink::Focus, Stroke::solid(1.6))),
        );
    }
    let number = bracket.number.to_string();
    let size = if number.len() > 2 { 9.0 } else { 12.0 };
    let on = if filled { Ink::OnMark } else { ink(bracket) };
    canvas.text(
        disc,
        &number,
        Lettering::new(Anchor::Centre, size, on).strong(),
    );
    if bracket.grade == BracketGrade::Repaired {
        let at = |x: f64, y: f64| Point::new(disc.x + x, disc.y + y);
        let tick = [at(-5.0, 14.5), at(-1.0, 18.0), at(6.0, 11.5)];
        let frame = canvas.frame;
        canvas.line(&tick, &frame, ink(bracket), Stroke::solid(2.0));
    }
}
