//! Scenes as SVG.

use crate::{Anchor, Colour, Ink, Item, Palette, Point, Rect, Scene, Stroke, text_width};
use std::fmt::Write;

/// One SVG document of the given frame, scenes painted in order on paper.
pub fn svg(frame: Rect, scenes: &[&Scene], palette: Palette) -> String {
    let mut out = String::new();
    let (w, h) = (frame.width(), frame.height());
    // Writing to a String can't fail.
    let _ = writeln!(
        out,
        r#"<svg xmlns="http://www.w3.org/2000/svg" width="{}" height="{}" viewBox="{} {} {} {}" font-family="sans-serif" stroke-linejoin="round" stroke-linecap="round" fill="none">"#,
        n(w),
        n(h),
        n(frame.left),
        n(frame.top),
        n(w),
        n(h)
    );
    let _ = writeln!(
        out,
        r#"<rect x="{}" y="{}" width="{}" height="{}"{}/>"#,
        n(frame.left),
        n(frame.top),
        n(w),
        n(h),
        fill(palette.colour(Ink::Paper))
    );
    for item in scenes.iter().flat_map(|scene| &scene.items) {
        write_item(&mut out, item, palette);
    }
    out.push_str("</svg>\n");
    out
}

fn write_item(out: &mut String, item: &Item, palette: Palette) {
    let _ = match item {
        Item::Polyline {
            points,
            ink,
            stroke,
        } => writeln!(
            out,
            r#"<polyline points="{}"{}/>"#,
            list(points),
            outline(palette.colour(*ink), *stroke)
        ),
        Item::Segments { lines, ink, stroke } => {
            let mut d = String::new();
            for [a, b] in lines {
                let _ = write!(d, "M{} {}L{} {}", n(a.x), n(a.y), n(b.x), n(b.y));
            }
            writeln!(
                out,
                r#"<path d="{d}"{}/>"#,
                outline(palette.colour(*ink), *stroke)
            )
        }
        Item::Polygon { points, ink } => writeln!(
            out,
            r#"<polygon points="{}"{}/>"#,
            list(points),
            fill(palette.colour(*ink))
        ),
        Item::Band { rows, ink } => {
            let left = rows.iter().map(|&(y, left, _)| Point::new(left, y));
            let right = rows.iter().rev().map(|&(y, _, right)| Point::new(right, y));
            let points: Vec<Point> = left.chain(right).collect();
            writeln!(
                out,
                r#"<polygon points="{}"{}/>"#,
                list(&points),
                fill(palette.colour(*ink))
            )
        }
        Item::Circle {
            centre,
            radius,
            fill: inside,
            outline: line,
        } => {
            let inside = inside
                .map(|ink| fill(palette.colour(ink)))
                .unwrap_or_default();
            let line = line
                .map(|(ink, stroke)| outline(palette.colour(ink), stroke))
                .unwrap_or_default();
            writeln!(
                out,
                r#"<circle cx="{}" cy="{}" r="{}"{inside}{line}/>"#,
                n(centre.x),
                n(centre.y),
                n(*radius)
            )
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
            let width = text_width(text, if *strong { 1.07 * size } else { *size });
            let (name, left) = match anchor {
                Anchor::Left => ("start", at.x),
                Anchor::Centre => ("middle", at.x - width / 2.0),
                Anchor::Right => ("end", at.x - width),
            };
            let turn = if *angle == 0.0 {
                String::new()
            } else {
                format!(
                    r#" transform="rotate({} {} {})""#,
                    n(angle.to_degrees()),
                    n(at.x),
                    n(at.y)
                )
            };
            if *backed {
                let _ = writeln!(
                    out,
                    r#"<rect x="{}" y="{}" width="{}" height="{}"{}{turn}/>"#,
                    n(left - 2.0),
                    n(at.y - 0.55 * size),
                    n(width + 4.0),
                    n(1.1 * size),
                    fill(palette.colour(Ink::Paper))
                );
            }
            let weight = if *strong {
                r#" font-weight="bold""#
            } else {
                ""
            };
            // No dominant-baseline: not every reader knows it. A third of the size puts digits in the middle.
            writeln!(
                out,
                r#"<text x="{}" y="{}" font-size="{}" text-anchor="{name}"{weight}{}{turn}>{}</text>"#,
                n(at.x),
                n(at.y + 0.35 * size),
                n(*size),
                fill(palette.colour(*ink)),
                escaped(text)
            )
        }
    };
}

/// A coordinate with at most two decimals.
fn n(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" {
        "0".to_owned()
    } else {
        text.to_owned()
    }
}

fn list(points: &[Point]) -> String {
    let pairs: Vec<String> = points
        .iter()
        .map(|p| format!("{},{}", n(p.x), n(p.y)))
        .collect();
    pairs.join(" ")
}

fn hex(colour: Colour) -> String {
    format!("#{:02x}{:02x}{:02x}", colour.r, colour.g, colour.b)
}

fn fill(colour: Colour) -> String {
    let opacity = if colour.a == 255 {
        String::new()
    } else {
        format!(r#" fill-opacity="{}""#, n(f64::from(colour.a) / 255.0))
    };
    format!(r#" fill="{}"{opacity}"#, hex(colour))
}

fn outline(colour: Colour, stroke: Stroke) -> String {
    let pattern: Vec<String> = stroke.dash.pattern().iter().map(|&v| n(v)).collect();
    let dash = if pattern.is_empty() {
        String::new()
    } else {
        // Round caps would close the gaps.
        format!(
            r#" stroke-dasharray="{}" stroke-linecap="butt""#,
            pattern.join(" ")
        )
    };
    let opacity = if colour.a == 255 {
        String::new()
    } else {
        format!(r#" stroke-opacity="{}""#, n(f64::from(colour.a) / 255.0))
    };
    format!(
        r#" stroke="{}" stroke-width="{}"{dash}{opacity}"#,
        hex(colour),
        n(stroke.width)
    )
}

fn escaped(text: &str) -> String {
    text.chars()
        .filter(|c| !c.is_control())
        .map(|c| match c {
            '&' => "&amp;".to_owned(),
            '<' => "&lt;".to_owned(),
            '>' => "&gt;".to_owned(),
            c => c.to_string(),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_can_not_break_out_of_the_document() {
        let scene = Scene {
            items: vec![Item::Text {
                at: Point::new(10.0, 10.0),
                anchor: Anchor::Left,
                text: "<a & b>\u{0}".to_owned(),
                size: 12.0,
                ink: Ink::Label,
                angle: 0.0,
                backed: false,
                strong: false,
            }],
        };
        let svg = svg(Rect::new(0.0, 0.0, 100.0, 50.0), &[&scene], Palette::Light);
        assert!(svg.contains(">&lt;a &amp; b&gt;</text>"), "{svg}");
    }

    #[test]
    fn numbers_are_short() {
        assert_eq!(
            [n(1.0), n(-0.001), n(2.345), n(100.0), n(0.5)],
            ["1", "0", "2.35", "100", "0.5"]
        );
    }
}
