//! What the hatchings and dashes mean, in words, beside samples of them.

use crate::canvas::{Canvas, Lettering};
use crate::hatch::hatch;
use crate::parcel::{CAPE, CIN};
use crate::readout::{INSET, LINE, has_room, panel};
use crate::{Anchor, Dash, Ink, Item, ParcelDrawing, Point, Rect, Stroke, text_width};

const SIZE: f64 = 11.5;
const SAMPLE: f64 = 26.0;

enum Sample {
    Line(Ink, Stroke),
    Fill(Ink),
    Hatch(Ink, crate::hatch::Hatching),
}

/// In the upper right corner, where the air is never that warm. Gives its box; `None` in a small plot.
pub(crate) fn paint(canvas: &mut Canvas, plot: &Rect, drawing: &ParcelDrawing<'_>) -> Option<Rect> {
    if !has_room(plot) {
        return None;
    }
    let free = drawing.ascent.lfc.is_some();
    let mut rows = vec![(
        Sample::Line(Ink::Parcel, Stroke::dashed(1.9, Dash::Long)),
        format!("{}, virtual temperature", drawing.name),
    )];
    if drawing.interval.is_some() {
        rows.push((
            Sample::Fill(Ink::ParcelBand),
            "the same over the interval".to_owned(),
        ));
    }
    if free {
        rows.push((
            Sample::Line(Ink::VirtualTemperature, Stroke::dashed(1.4, Dash::Dots)),
            "virtual temperature around it".to_owned(),
        ));
        rows.push((Sample::Hatch(Ink::CapeHatch, CAPE), "CAPE".to_owned()));
        rows.push((Sample::Hatch(Ink::CinHatch, CIN), "CIN".to_owned()));
    }
    // CAPE and CIN share a row.
    let pair = free.then(|| rows.split_off(rows.len() - 2));
    let lines = rows.len() + usize::from(pair.is_some()) + usize::from(!free);
    let widest = rows
        .iter()
        .map(|(_, text)| text_width(text, SIZE))
        .fold(0.0, f64::max);
    let width = (SAMPLE + widest + 18.0).max(SAMPLE * 2.0 + text_width("CAPE CIN", SIZE) + 40.0);
    let height = lines as f64 * LINE + 8.0;
    let place = Rect::new(plot.right - INSET - width, plot.top + INSET, width, height);
    if !plot.grown(-1.0).holds(&place) || width > 0.6 * plot.width() {
        return None;
    }
    panel(canvas, &place);
    canvas.taken.push(place);
    let lettering = Lettering::new(Anchor::Left, SIZE, Ink::Label);
    let mut y = place.top + 4.0 + LINE / 2.0;
    for (sample, text) in &rows {
        paint_sample(canvas, sample, place.left + 6.0, y);
        canvas.text(Point::new(place.left + SAMPLE + 11.0, y), text, lettering);
        y += LINE;
    }
    if let Some(pair) = pair {
        let mut x = place.left + 6.0;
        for (sample, text) in &pair {
            paint_sample(canvas, sample, x, y);
            canvas.text(Point::new(x + SAMPLE + 5.0, y), text, lettering);
            x += SAMPLE + text_width(text, SIZE) + 18.0;
        }
    } else {
        canvas.text(
            Point::new(place.left + 6.0, y),
            "no free convection",
            lettering,
        );
    }
    Some(place)
}

fn paint_sample(canvas: &mut Canvas, sample: &Sample, x: f64, y: f64) {
    let frame = canvas.frame;
    let place = Rect::new(x, y - 5.0, SAMPLE, 10.0);
    match *sample {
        Sample::Line(ink, stroke) => {
            let line = [Point::new(x, y), Point::new(x + SAMPLE, y)];
            canvas.line(&line, &frame, ink, stroke);
        }
        Sample::Fill(ink) => canvas.scene.items.push(Item::Polygon {
            points: crate::canvas::corners(&place),
            ink,
        }),
        Sample::Hatch(ink, hatching) => {
            let area = [
                (place.top, place.left, place.right),
                (place.bottom, place.left, place.right),
            ];
            let lines = hatch(&area, hatching, &place);
            canvas.segments(&lines, &frame, ink, Stroke::solid(1.2));
        }
    }
}
