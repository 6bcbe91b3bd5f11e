//! A display list as egui shapes. Nothing is decided here but colour and pixels.

use crate::fonts;
use crate::theme::Theme;
use dewbound_session::chart::{Anchor, Ink, Item, Point, Scene, Stroke, text_box};
use eframe::egui::epaint::{Mesh, PathStroke, TextShape};
use eframe::egui::{self, Align2, Color32, FontFamily, FontId, Painter, Pos2, Rect, Shape, pos2};

/// A point of the display list on the screen.
pub(crate) fn to_pos(point: Point) -> Pos2 {
    pos2(point.x as f32, point.y as f32)
}

/// Paints a scene.
pub(crate) fn paint(painter: &Painter, scene: &Scene, theme: &Theme) {
    for item in &scene.items {
        paint_item(painter, item, theme);
    }
}

fn paint_item(painter: &Painter, item: &Item, theme: &Theme) {
    match item {
        Item::Polyline {
            points,
            ink,
            stroke,
        } => {
            let points = thinned(points, painter.pixels_per_point());
            line(painter, points, theme.chart_ink(*ink), *stroke);
        }
        Item::Segments { lines, ink, stroke } => {
            let pen = pen(*stroke, theme.chart_ink(*ink));
            if stroke.dash.pattern().is_empty() {
                painter.extend(
                    lines
                        .iter()
                        .map(|&[a, b]| Shape::line_segment([to_pos(a), to_pos(b)], pen)),
                );
            } else {
                for &[a, b] in lines {
                    line(
                        painter,
                        vec![to_pos(a), to_pos(b)],
                        theme.chart_ink(*ink),
                        *stroke,
                    );
                }
            }
        }
        Item::Polygon { points, ink } => {
            let points: Vec<Pos2> = points.iter().copied().map(to_pos).collect();
            painter.add(Shape::convex_polygon(
                points,
                theme.chart_ink(*ink),
                PathStroke::NONE,
            ));
        }
        Item::Band { rows, ink } => {
            painter.add(Shape::mesh(band(rows, theme.chart_ink(*ink))));
        }
        Item::Circle {
            centre,
            radius,
            fill,
            outline,
        } => {
            let fill = fill.map_or(Color32::TRANSPARENT, |ink| theme.chart_ink(ink));
            let edge = outline.map_or(egui::Stroke::NONE, |(ink, stroke)| {
                pen(stroke, theme.chart_ink(ink))
            });
            painter.circle(to_pos(*centre), *radius as f32, fill, edge);
        }
        Item::Text {
            at,
            anchor,
            text,
            size,
            ink,
            angle,
            backed,
            strong,
        } => {
            if *backed && *angle == 0.0 {
                let back = text_box(*at, *anchor, text, *size);
                painter.rect_filled(to_rect(back), 1.0, theme.chart_ink(Ink::Paper));
            }
            let family = if *strong {
                fonts::bold()
            } else {
                FontFamily::Proportional
            };
            let align = match anchor {
                Anchor::Left => Align2::LEFT_CENTER,
                Anchor::Centre => Align2::CENTER_CENTER,
                Anchor::Right => Align2::RIGHT_CENTER,
            };
            let colour = theme.chart_ink(*ink);
            let galley =
                painter.layout_no_wrap(text.clone(), FontId::new(*size as f32, family), colour);
            if *angle == 0.0 {
                let rect = align.anchor_size(to_pos(*at), galley.size());
                painter.galley(rect.min, galley, colour);
            } else {
                let corner = to_pos(*at)
                    - align
                        .pos_in_rect(&Rect::from_min_size(Pos2::ZERO, galley.size()))
                        .to_vec2();
                painter.add(
                    TextShape::new(corner, galley, colour)
                        .with_angle_and_anchor(*angle as f32, align),
                );
            }
        }
    }
}

/// Points nearer to the one before than this many pixels can't be told from it.
const SAME_PLACE: f32 = 0.8;

/// A line without the points that nobody could see: a sounding of one-second data has several in a pixel, and software
/// renderers pay for each.
fn thinned(points: &[Point], pixels_per_point: f32) -> Vec<Pos2> {
    let least = SAME_PLACE / pixels_per_point.max(0.1);
    let mut kept: Vec<Pos2> = Vec::with_capacity(points.len());
    let last = points.len().saturating_sub(1);
    for (index, point) in points.iter().enumerate() {
        let point = to_pos(*point);
        let near = kept
            .last()
            .is_some_and(|before| before.distance_sq(point) < least * least);
        if !near {
            kept.push(point);
        } else if index == last {
            // The end stays where it is.
            if kept.len() > 1 {
                kept.pop();
            }
            kept.push(point);
        }
    }
    kept
}

/// A rectangle of the display list on the screen.
pub(crate) fn to_rect(rect: dewbound_session::chart::Rect) -> Rect {
    Rect::from_min_max(
        pos2(rect.left as f32, rect.top as f32),
        pos2(rect.right as f32, rect.bottom as f32),
    )
}

fn pen(stroke: Stroke, colour: Color32) -> egui::Stroke {
    egui::Stroke::new(stroke.width as f32, colour)
}

fn line(painter: &Painter, points: Vec<Pos2>, colour: Color32, stroke: Stroke) {
    let pen = pen(stroke, colour);
    let pattern = stroke.dash.pattern();
    if pattern.is_empty() {
        painter.add(Shape::line(points, pen));
        return;
    }
    let dashes: Vec<f32> = pattern.iter().step_by(2).map(|&v| v as f32).collect();
    let gaps: Vec<f32> = pattern
        .iter()
        .skip(1)
        .step_by(2)
        .map(|&v| v as f32)
        .collect();
    painter.extend(Shape::dashed_line_with_offset(
        &points, pen, &dashes, &gaps, 0.0,
    ));
}

/// Quads between neighbouring rows, as one mesh.
fn band(rows: &[(f64, f64, f64)], colour: Color32) -> Mesh {
    let mut mesh = Mesh::default();
    for &(y, left, right) in rows {
        mesh.colored_vertex(pos2(left as f32, y as f32), colour);
        mesh.colored_vertex(pos2(right as f32, y as f32), colour);
    }
    for row in 1..rows.len() as u32 {
        let first = 2 * (row - 1);
        mesh.add_triangle(first, first + 1, first + 2);
        mesh.add_triangle(first + 1, first + 2, first + 3);
    }
    mesh
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn thinning_keeps_the_ends_and_stays_within_a_pixel() {
        let points: Vec<Point> = (0..1000)
            .map(|i| {
                let y = f64::from(i) * 0.37;
                Point::new(100.0 + 3.0 * (y * 0.7).sin(), y)
            })
            .collect();
        let kept = thinned(&points, 1.0);
        assert!(kept.len() < 800, "{}", kept.len());
        assert_eq!(kept.first().copied(), points.first().copied().map(to_pos));
        assert_eq!(kept.last().copied(), points.last().copied().map(to_pos));
        for point in &points {
            let point = to_pos(*point);
            let nearest = kept
                .iter()
                .map(|k| k.distance(point))
                .fold(f32::MAX, f32::min);
            assert!(nearest <= SAME_PLACE, "{point:?} is {nearest} away");
        }
        assert_eq!(thinned(&[], 1.0), []);
    }

    #[test]
    fn a_band_is_two_triangles_a_row() {
        let mesh = band(
            &[(0.0, 0.0, 1.0), (1.0, 0.5, 2.0), (2.0, 1.0, 1.0)],
            Color32::RED,
        );
        assert_eq!(mesh.vertices.len(), 6);
        assert_eq!(mesh.indices.len(), 12);
        assert!(mesh.is_valid());
    }
}
