//! Small painted marks: a state is told by shape and word, colour only helps.

use crate::fonts;
use crate::theme::Theme;
use dewbound_session::trust::Grade;
use dewbound_session::{Standing, Weight};
use eframe::egui::{
    Align2, Color32, FontId, Painter, Pos2, Rect, Sense, Shape, Stroke, StrokeKind, Ui, Vec2, pos2,
    vec2,
};

/// A finding's number in the shape of its grade: a square for erroneous, a diamond for doubtful, a circle for
/// information; an open circle with a tick once repaired.
pub(crate) fn grade_mark(ui: &mut Ui, theme: &Theme, number: usize, grade: Grade, repaired: bool) {
    let (rect, _) = ui.allocate_exact_size(vec2(24.0, 22.0), Sense::hover());
    let painter = ui.painter();
    let centre = rect.center();
    let text_colour = if repaired {
        painter.circle(centre, 9.5, theme.card, Stroke::new(2.0, theme.good));
        tick(painter, centre + vec2(7.0, 6.0), theme.good);
        theme.ink
    } else {
        match grade {
            Grade::Erroneous => {
                painter.rect_filled(
                    Rect::from_center_size(centre, Vec2::splat(19.0)),
                    2.0,
                    theme.danger,
                );
                theme.on_danger
            }
            Grade::Doubtful => {
                painter.add(diamond(centre, 11.5, theme.warn));
                theme.on_warn
            }
            Grade::Informative => {
                painter.circle(centre, 9.5, theme.card, Stroke::new(1.5, theme.quiet));
                theme.ink
            }
        }
    };
    painter.text(
        centre,
        Align2::CENTER_CENTER,
        number.to_string(),
        FontId::new(11.0, fonts::bold()),
        text_colour,
    );
}

/// The grade in words.
pub(crate) fn grade_word(grade: Grade, repaired: bool) -> &'static str {
    match grade {
        _ if repaired => "repaired",
        Grade::Informative => "for information",
        Grade::Doubtful => "doubtful",
        Grade::Erroneous => "erroneous",
    }
}

fn diamond(centre: Pos2, radius: f32, fill: Color32) -> Shape {
    Shape::convex_polygon(
        vec![
            centre + vec2(0.0, -radius),
            centre + vec2(radius, 0.0),
            centre + vec2(0.0, radius),
            centre + vec2(-radius, 0.0),
        ],
        fill,
        Stroke::NONE,
    )
}

fn tick(painter: &Painter, at: Pos2, colour: Color32) {
    painter.add(Shape::line(
        vec![
            at + vec2(-3.5, -0.5),
            at + vec2(-1.0, 2.5),
            at + vec2(4.0, -4.0),
        ],
        Stroke::new(2.0, colour),
    ));
}

/// How a sounding stands: open circle, half circle, tick, or an exclamation in a triangle.
pub(crate) fn standing_mark(painter: &Painter, theme: &Theme, centre: Pos2, standing: Mark) {
    match standing {
        Mark::Open => {
            painter.circle(
                centre,
                5.0,
                Color32::TRANSPARENT,
                Stroke::new(1.5, theme.quiet),
            );
        }
        Mark::Draft => {
            painter.circle(
                centre,
                5.0,
                Color32::TRANSPARENT,
                Stroke::new(1.5, theme.accent),
            );
            painter.circle_filled(centre, 2.5, theme.accent);
        }
        Mark::Decided => {
            painter.circle_filled(centre, 7.0, theme.good);
            tick(painter, centre, theme.panel);
        }
        Mark::Review => {
            painter.add(triangle(centre, theme.danger));
            painter.text(
                pos2(centre.x, centre.y + 1.5),
                Align2::CENTER_CENTER,
                "!",
                FontId::new(10.0, fonts::bold()),
                theme.on_danger,
            );
        }
    }
}

fn triangle(centre: Pos2, fill: Color32) -> Shape {
    Shape::convex_polygon(
        vec![
            centre + vec2(0.0, -8.0),
            centre + vec2(8.5, 6.5),
            centre + vec2(-8.5, 6.5),
        ],
        fill,
        Stroke::NONE,
    )
}

/// The four shapes of standing.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Mark {
    /// Nothing decided.
    Open,
    /// Begun.
    Draft,
    /// Decided.
    Decided,
    /// Decided on other data.
    Review,
}

impl From<&Standing> for Mark {
    fn from(standing: &Standing) -> Self {
        match standing {
            Standing::Undecided => Self::Open,
            Standing::Draft | Standing::Keeping => Self::Draft,
            Standing::Decided(_) => Self::Decided,
            Standing::DecidedOnEarlierData(_) => Self::Review,
        }
    }
}

/// A message's weight.
pub(crate) fn weight_mark(painter: &Painter, theme: &Theme, centre: Pos2, weight: Weight) {
    match weight {
        Weight::Done => standing_mark(painter, theme, centre, Mark::Decided),
        Weight::Told => {
            painter.circle(centre, 6.5, theme.card, Stroke::new(1.5, theme.accent));
            painter.text(
                centre,
                Align2::CENTER_CENTER,
                "i",
                FontId::new(10.0, fonts::bold()),
                theme.accent,
            );
        }
        Weight::Failed => standing_mark(painter, theme, centre, Mark::Review),
    }
}

/// A line a mark is drawn in front of.
pub(crate) fn mark_space(ui: &mut Ui) -> Pos2 {
    let (rect, _) = ui.allocate_exact_size(vec2(18.0, 18.0), Sense::hover());
    rect.center()
}

/// Text being typed, above a point; never beyond the left, the right and the top of `within`.
pub(crate) fn typed_box(painter: &Painter, theme: &Theme, at: Pos2, within: Rect, text: String) {
    let galley = painter.layout_no_wrap(text, FontId::proportional(15.0), theme.ink);
    let rect = Align2::CENTER_BOTTOM.anchor_size(at, galley.size());
    let rect = rect.translate(vec2(
        (within.left() + 8.0 - rect.left()).max(0.0)
            - (rect.right() - within.right() + 8.0).max(0.0),
        (within.top() + 8.0 - rect.top()).max(0.0),
    ));
    painter.rect_filled(rect.expand(4.0), 2.0, theme.card);
    painter.galley(rect.min, galley, theme.ink);
    painter.rect_stroke(
        rect.expand(4.0),
        2.0,
        Stroke::new(2.0, theme.accent),
        StrokeKind::Outside,
    );
}
