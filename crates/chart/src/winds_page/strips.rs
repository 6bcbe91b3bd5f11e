//! Direction and speed against height as a display list.

use super::{
    WindStrips, WindsPicture, kilometres, per_metre_per_second, samples, speed_sign, wind_line,
};
use crate::canvas::{Canvas, Lettering};
use crate::{Anchor, Ink, Point, Rect, Scene, Stroke, text_width, wording};
use dewbound_sounding::thermo::Vector;

/// A wind slower than this, m/s, has no direction worth drawing: half a knot.
const CALM: f64 = 0.26;
/// Most levels that get a dot each.
const MOST_DOTS: usize = 60;
/// Steps by which winds between two levels are drawn, m: their direction doesn't run straight.
const STEP: f64 = 100.0;

/// The scene of a frame.
pub fn wind_strips(strips: &WindStrips, picture: &WindsPicture) -> Scene {
    let mut canvas = Canvas::new(strips.frame());
    scales(&mut canvas, strips, picture);
    curves(&mut canvas, strips, picture);
    cursor(&mut canvas, strips, picture);
    canvas.scene
}

fn scales(canvas: &mut Canvas, strips: &WindStrips, picture: &WindsPicture) {
    let (direction, speed) = (strips.direction(), strips.speed());
    let frame = strips.frame();
    let view = strips.view();
    let label = Lettering::new(Anchor::Centre, 11.0, Ink::Label);
    let head = frame.top + 9.5;
    let unit = speed_sign(picture.units.speed);
    canvas.text(
        Point::new(frame.left + 3.0, head),
        "km",
        Lettering {
            anchor: Anchor::Left,
            ..label
        },
    );
    titled(
        canvas,
        &direction,
        head,
        &["direction from", "wind from", "from"],
    );
    titled(canvas, &speed, head, &[&format!("speed, {unit}"), unit]);
    for km in 0..=(view.top / 1000.0).round() as u32 {
        let height = 1000.0 * f64::from(km);
        let y = strips.y(height);
        let main = matches!(km, 0 | 1 | 3 | 6);
        let width = if main { 1.0 } else { 0.5 };
        for strip in [direction, speed] {
            let row = [Point::new(strip.left, y), Point::new(strip.right, y)];
            canvas.segments(&[row], &frame, Ink::WindRing, Stroke::solid(width));
        }
        let mut lettering = Lettering::new(Anchor::Right, 11.5, Ink::Label);
        if main {
            lettering = lettering.strong();
        }
        canvas.text(
            Point::new(direction.left - 5.0, y),
            &kilometres(height),
            lettering,
        );
    }
    let foot = direction.bottom + 10.0;
    for quarter in 0..=4_u32 {
        let degrees = view.first_direction + 90.0 * f64::from(quarter);
        // The two edges are one direction.
        let x = direction.left + direction.width() * f64::from(quarter) / 4.0;
        upright(canvas, &direction, x);
        // Letters stand apart, or every other one goes.
        if direction.width() < 56.0 && quarter % 2 == 1 {
            continue;
        }
        let letter = ["N", "E", "S", "W"]
            .get((degrees / 90.0).round() as usize % 4)
            .copied()
            .unwrap_or_default();
        canvas.text(Point::new(x, foot), letter, label);
    }
    let factor = per_metre_per_second(picture.units.speed);
    let count = (view.fastest / view.speed_step).round() as u32;
    let apart = speed.width() / f64::from(count.max(1));
    let stride = (26.0 / apart.max(1.0)).ceil() as u32;
    for line in 0..=count {
        let value = f64::from(line) * view.speed_step;
        let x = strips.speed_point(0.0, value).x;
        upright(canvas, &speed, x);
        let text = wording::fixed(value * factor, 0);
        let at = Point::new(x, foot);
        if line % stride == 0 && canvas.is_free(&label.extent(at, &text).grown(2.0)) {
            canvas.text(at, &text, label);
        }
    }
    for strip in [direction, speed] {
        let mut edge = crate::canvas::corners(&strip);
        edge.extend(edge.first().copied());
        canvas.line(&edge, &frame, Ink::Edge, Stroke::solid(1.0));
    }
}

/// The first of these that fits over a strip.
fn titled(canvas: &mut Canvas, strip: &Rect, y: f64, texts: &[&str]) {
    let text = texts
        .iter()
        .find(|text| text_width(text, 11.0) <= strip.width())
        .or(texts.last());
    if let Some(text) = text {
        let lettering = Lettering::new(Anchor::Centre, 11.0, Ink::Label);
        canvas.text(Point::new(strip.centre().x, y), text, lettering);
    }
}

fn upright(canvas: &mut Canvas, strip: &Rect, x: f64) {
    let line = [Point::new(x, strip.top), Point::new(x, strip.bottom)];
    canvas.segments(&[line], strip, Ink::WindRing, Stroke::solid(0.5));
}

/// Height and wind, close enough for directions between levels.
fn fine(picture: &WindsPicture) -> Vec<(f64, Vector)> {
    let mut fine: Vec<(f64, Vector)> = Vec::new();
    for (height, wind) in samples(picture.profile) {
        if let Some(&(below, from)) = fine.last() {
            let parts = ((height - below) / STEP).ceil().max(1.0);
            for part in 1..parts as u32 {
                let share = f64::from(part) / parts;
                fine.push((
                    below + share * (height - below),
                    from + (wind - from) * share,
                ));
            }
        }
        fine.push((height, wind));
    }
    fine
}

fn curves(canvas: &mut Canvas, strips: &WindStrips, picture: &WindsPicture) {
    let (direction, speed) = (strips.direction(), strips.speed());
    let fine = fine(picture);
    let points: Vec<Point> = fine
        .iter()
        .map(|&(height, wind)| strips.speed_point(height, wind.speed()))
        .collect();
    canvas.line(&points, &speed, Ink::Wind, Stroke::solid(2.2));
    // Direction: broken where it goes out at one edge and comes in at the other, and in calm air.
    let mut piece: Vec<Point> = Vec::new();
    for &(height, wind) in &fine {
        let point = strips.direction_point(height, wind.direction_from());
        let calm = wind.speed() < CALM;
        let round = piece
            .last()
            .is_some_and(|last| (last.x - point.x).abs() > 0.5 * direction.width());
        if calm || round {
            canvas.line(&piece, &direction, Ink::Wind, Stroke::solid(2.2));
            piece.clear();
        }
        if !calm {
            piece.push(point);
        }
    }
    canvas.line(&piece, &direction, Ink::Wind, Stroke::solid(2.2));
    // Where few levels report, each shows: between them the line is only a guess.
    let levels = samples(picture.profile);
    if levels.len() <= MOST_DOTS {
        let in_sight = levels
            .into_iter()
            .filter(|(height, _)| *height <= strips.view().top);
        for (height, wind) in in_sight {
            canvas.circle(
                strips.speed_point(height, wind.speed()),
                2.8,
                Some(Ink::Wind),
                None,
            );
            if wind.speed() >= CALM {
                let at = strips.direction_point(height, wind.direction_from());
                canvas.circle(at, 2.8, Some(Ink::Wind), None);
            }
        }
    }
}

/// The height being read, with what the wind is there.
fn cursor(canvas: &mut Canvas, strips: &WindStrips, picture: &WindsPicture) {
    let Some(height) = picture.cursor else { return };
    let (direction, speed) = (strips.direction(), strips.speed());
    let y = strips.y(height);
    if !(y >= speed.top && y <= speed.bottom) {
        return;
    }
    let across = [Point::new(direction.left, y), Point::new(speed.right, y)];
    canvas.segments(&[across], &strips.frame(), Ink::Cursor, Stroke::solid(1.2));
    if let Some(wind) = picture.profile.at(height) {
        let outline = Some((Ink::Wind, Stroke::solid(2.0)));
        let at = strips.speed_point(height, wind.speed());
        canvas.circle(at, 4.5, Some(Ink::Paper), outline);
        if wind.speed() >= CALM {
            let at = strips.direction_point(height, wind.direction_from());
            canvas.circle(at, 4.5, Some(Ink::Paper), outline);
        }
    }
    let text = wind_line(picture.profile, height, picture.units.speed);
    let lettering = Lettering::new(Anchor::Centre, 12.0, Ink::Label).strong();
    let middle = (direction.left + speed.right) / 2.0;
    let above = y - 14.0 > speed.top;
    let at = Point::new(middle, if above { y - 12.0 } else { y + 12.0 });
    let extent = lettering.extent(at, &text).grown(2.0);
    crate::readout::panel(canvas, &extent);
    canvas.text(at, &text, lettering);
}
