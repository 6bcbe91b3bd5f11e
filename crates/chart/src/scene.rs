//! The display list.

use crate::{Geometry, Point, Rect};

/// Everything to be painted, in painting order. Nothing lies outside the frame it was made for, every number is finite.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Scene {
    /// In painting order.
    pub items: Vec<Item>,
}

/// One primitive.
#[derive(Debug, Clone, PartialEq)]
pub enum Item {
    /// Connected lines.
    Polyline {
        /// At least two points.
        points: Vec<Point>,
        /// What it is.
        ink: Ink,
        /// How it is drawn.
        stroke: Stroke,
    },
    /// Separate straight lines: hatching, ticks, feathers.
    Segments {
        /// Ends of each.
        lines: Vec<[Point; 2]>,
        /// What they are.
        ink: Ink,
        /// How they are drawn.
        stroke: Stroke,
    },
    /// A filled **convex** polygon.
    Polygon {
        /// At least three corners.
        points: Vec<Point>,
        /// What it is.
        ink: Ink,
    },
    /// The filled area between two curves that share their heights: quads from `rows[i]` to `rows[i + 1]`.
    Band {
        /// At least two rows `(y, left, right)` with `left <= right`, y monotone.
        rows: Vec<(f64, f64, f64)>,
        /// What it is.
        ink: Ink,
    },
    /// A circle.
    Circle {
        /// Centre.
        centre: Point,
        /// Radius.
        radius: f64,
        /// Filled with this.
        fill: Option<Ink>,
        /// Outlined with this.
        outline: Option<(Ink, Stroke)>,
    },
    /// One line of text.
    Text {
        /// Where the anchor of the text lies.
        at: Point,
        /// Which point of the text that is.
        anchor: Anchor,
        /// The text.
        text: String,
        /// Font size in points.
        size: f64,
        /// What it is.
        ink: Ink,
        /// Turned clockwise about `at`, radians.
        angle: f64,
        /// Paint the paper behind it (a backing of [`Ink::Paper`], the text's width and two points on either side by 1.1 times
        /// its size), so that lines don't run through it.
        backed: bool,
        /// Heavier than the rest.
        strong: bool,
    },
}

/// Which point of a text lies at its place. The vertical middle in all cases.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// The middle of the left edge.
    Left,
    /// The middle.
    Centre,
    /// The middle of the right edge.
    Right,
}

/// How a line is drawn.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stroke {
    /// Width in points.
    pub width: f64,
    /// Dashes.
    pub dash: Dash,
}

impl Stroke {
    /// Unbroken.
    pub const fn solid(width: f64) -> Self {
        Self {
            width,
            dash: Dash::Solid,
        }
    }

    /// Dashed.
    pub const fn dashed(width: f64, dash: Dash) -> Self {
        Self { width, dash }
    }
}

/// Dash patterns: with hatching and labels they tell things apart without colour.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dash {
    /// Unbroken.
    Solid,
    /// Long dashes.
    Long,
    /// Short dashes.
    Short,
    /// Dots.
    Dots,
    /// Dash and dot in turn.
    DashDot,
}

impl Dash {
    /// Lengths in points of stroke and space in turn; empty when unbroken.
    pub const fn pattern(self) -> &'static [f64] {
        match self {
            Self::Solid => &[],
            Self::Long => &[9.0, 4.0],
            Self::Short => &[4.0, 3.0],
            Self::Dots => &[1.5, 3.0],
            Self::DashDot => &[8.0, 3.0, 1.5, 3.0],
        }
    }
}

/// What a thing is; its colour is the [`crate::Palette`]'s choice.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Ink {
    /// The paper of the frame.
    Paper,
    /// The edge of the plot.
    Edge,
    /// Isotherms.
    Isotherm,
    /// The 0 degC isotherm.
    FreezingIsotherm,
    /// Isobars.
    Isobar,
    /// Dry adiabats.
    DryAdiabat,
    /// Moist (pseudo-) adiabats.
    MoistAdiabat,
    /// Lines of constant saturation mixing ratio.
    MixingRatioLine,
    /// Labels of isotherms at the head of the plot.
    IsothermLabel,
    /// Labels of dry adiabats.
    DryAdiabatLabel,
    /// Labels of moist adiabats.
    MoistAdiabatLabel,
    /// Labels of mixing-ratio lines.
    MixingRatioLabel,
    /// The height scale.
    HeightScale,
    /// Ground: below the surface level.
    Ground,
    /// Working temperature.
    Temperature,
    /// Working dew point.
    Dewpoint,
    /// Virtual temperature of the surroundings, where areas are hatched.
    VirtualTemperature,
    /// Temperature as received, where it differs.
    ReceivedTemperature,
    /// Dew point as received, where it differs.
    ReceivedDewpoint,
    /// Temperature with a previewed repair.
    PreviewTemperature,
    /// Dew point with a previewed repair.
    PreviewDewpoint,
    /// The parcel.
    Parcel,
    /// Where the parcel may run over the interval (a see-through fill).
    ParcelBand,
    /// Hatching of CAPE.
    CapeHatch,
    /// Hatching of CIN.
    CinHatch,
    /// LCL, LFC, EL.
    LevelMark,
    /// Wind.
    Wind,
    /// Rings and lines that wind is read against.
    WindRing,
    /// Hatching of storm-relative helicity.
    HelicityHatch,
    /// A finding's bracket.
    Bracket(BracketGrade),
    /// The number inside a filled mark ([`Ink::Bracket`] or [`Ink::Handle`] behind it).
    OnMark,
    /// A surface handle's ring.
    Handle(Handle),
    /// The interval at a handle.
    Whisker(Handle),
    /// A candidate for the true surface value.
    Candidate,
    /// A candidate set aside.
    CandidateSetAside,
    /// Keyboard focus.
    Focus,
    /// Cursor lines.
    Cursor,
    /// Plain text: axis titles, readout.
    Label,
    /// Text of less weight.
    QuietLabel,
    /// "Invented data" and the like.
    Stamp,
}

/// How a finding's bracket is drawn. The grade shows in its shape and dash too.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum BracketGrade {
    /// For information.
    Informative,
    /// Doubtful.
    Doubtful,
    /// Erroneous.
    Erroneous,
    /// Repaired: stays, marked so.
    Repaired,
    /// Comes from the user's own edit.
    FromEdit,
}

/// The two surface handles.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Handle {
    /// Surface temperature.
    Temperature,
    /// Surface dew point.
    Dewpoint,
}

/// Width of a text in points, estimated on the safe side for a sans-serif face.
pub fn text_width(text: &str, size: f64) -> f64 {
    let ems: f64 = text
        .chars()
        .map(|c| match c {
            ' ' | '.' | ',' | ':' | ';' | '\'' | 'i' | 'l' | 'j' | '|' | '·' | 'I' => 0.34,
            'm' | 'w' | 'M' | 'W' | '%' | '@' => 0.92,
            '0'..='9' => 0.6,
            c if c.is_uppercase() => 0.72,
            _ => 0.6,
        })
        .sum();
    ems * size
}

/// Box around a level (not turned) text.
pub fn text_box(at: Point, anchor: Anchor, text: &str, size: f64) -> Rect {
    let width = text_width(text, size);
    let left = match anchor {
        Anchor::Left => at.x,
        Anchor::Centre => at.x - width / 2.0,
        Anchor::Right => at.x - width,
    };
    Rect::new(left, at.y - 0.62 * size, width, 1.24 * size)
}

impl Ink {
    /// Every ink, so that palettes and painters can be checked against all of them.
    pub const ALL: [Self; 46] = [
        Self::Paper,
        Self::Edge,
        Self::Isotherm,
        Self::FreezingIsotherm,
        Self::Isobar,
        Self::DryAdiabat,
        Self::MoistAdiabat,
        Self::MixingRatioLine,
        Self::IsothermLabel,
        Self::DryAdiabatLabel,
        Self::MoistAdiabatLabel,
        Self::MixingRatioLabel,
        Self::HeightScale,
        Self::Ground,
        Self::Temperature,
        Self::Dewpoint,
        Self::VirtualTemperature,
        Self::ReceivedTemperature,
        Self::ReceivedDewpoint,
        Self::PreviewTemperature,
        Self::PreviewDewpoint,
        Self::Parcel,
        Self::ParcelBand,
        Self::CapeHatch,
        Self::CinHatch,
        Self::LevelMark,
        Self::Wind,
        Self::WindRing,
        Self::HelicityHatch,
        Self::Bracket(BracketGrade::Informative),
        Self::Bracket(BracketGrade::Doubtful),
        Self::Bracket(BracketGrade::Erroneous),
        Self::Bracket(BracketGrade::Repaired),
        Self::Bracket(BracketGrade::FromEdit),
        Self::OnMark,
        Self::Handle(Handle::Temperature),
        Self::Handle(Handle::Dewpoint),
        Self::Whisker(Handle::Temperature),
        Self::Whisker(Handle::Dewpoint),
        Self::Candidate,
        Self::CandidateSetAside,
        Self::Focus,
        Self::Cursor,
        Self::Label,
        Self::QuietLabel,
        Self::Stamp,
    ];
}

impl Scene {
    /// Whether every number is finite and everything lies inside the frame (half a point of slack).
    pub fn is_sound(&self, geometry: &Geometry) -> bool {
        self.lies_within(geometry.frame())
    }

    /// The same for any frame.
    pub fn lies_within(&self, frame: Rect) -> bool {
        let frame = frame.grown(0.5);
        self.items.iter().all(|item| match item {
            Item::Polyline { points, .. } => {
                points.len() >= 2 && points.iter().all(|&p| frame.contains(p))
            }
            Item::Polygon { points, .. } => {
                points.len() >= 3 && points.iter().all(|&p| frame.contains(p))
            }
            Item::Segments { lines, .. } => lines.iter().flatten().all(|&p| frame.contains(p)),
            Item::Band { rows, .. } => {
                rows.len() >= 2
                    && rows.iter().all(|&(y, l, r)| {
                        l <= r
                            && frame.contains(Point::new(l, y))
                            && frame.contains(Point::new(r, y))
                    })
            }
            Item::Circle { centre, radius, .. } => radius.is_finite() && frame.contains(*centre),
            Item::Text {
                at, size, angle, ..
            } => size.is_finite() && angle.is_finite() && frame.contains(*at),
        })
    }
}
