//! The hodograph as a display list.

use super::area::hatch_turned;
use super::hodograph_labels::{Labels, label_rings};
use super::{
    HodographGeometry, WINDS_TOP, WindsPicture, between, kilometres, per_metre_per_second,
    speed_sign, tick_heights, wind_line, wind_text,
};
use crate::canvas::{Canvas, Lettering};
use crate::{Anchor, Dash, HIT_RADIUS, Ink, Point, Rect, Scene, Stroke, wording};
use dewbound_sounding::thermo::{StormMotion, Vector, WindNumbers};

/// A motion with a mark on the hodograph.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum MotionMark {
    /// To the right of the mean wind.
    Right,
    /// To the left of it.
    Left,
    /// The mean wind they deviate from.
    Mean,
    /// The user's own.
    Set,
}

impl MotionMark {
    /// The word beside it.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Right => "right",
            Self::Left => "left",
            Self::Mean => "mean",
            Self::Set => "set by you",
        }
    }
}

/// The hodograph of one frame, and what can be pointed at in it.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Hodograph {
    /// To be painted.
    pub scene: Scene,
    /// Height (m) and place of each tick in sight.
    pub ticks: Vec<(f64, Point)>,
    /// Motions in sight.
    pub marks: Vec<(MotionMark, Vector, Point)>,
    /// The ring that moves the storm motion, when it is in sight.
    pub handle: Option<Point>,
    /// Speed from ring to ring, in the displayed unit.
    pub ring_step: f64,
}

impl Hodograph {
    /// Whether a place is on the ring that moves the storm motion.
    pub fn is_on_handle(&self, point: Point) -> bool {
        self.handle
            .is_some_and(|handle| handle.distance(point) <= HIT_RADIUS)
    }
}

/// The estimated motions that are drawn: those helicity is measured against when nothing is set.
pub fn drawn_motions(numbers: &WindNumbers) -> Option<StormMotion> {
    let used = |motion: &StormMotion| {
        numbers
            .motion_used
            .is_some_and(|used| used == motion.right || used == motion.left)
    };
    numbers
        .motion_effective
        .filter(used)
        .or(numbers.motion)
        .or(numbers.motion_effective)
}

/// Thickness of the curve by height: one ink, the lowest kilometre heaviest.
const LAYERS: [(f64, f64, f64); 4] = [
    (0.0, 1_000.0, 4.2),
    (1_000.0, 3_000.0, 3.0),
    (3_000.0, 6_000.0, 2.0),
    (6_000.0, WINDS_TOP, 1.2),
];
/// Radius of the storm motion's ring.
const RING: f64 = 8.0;

/// The scene of a frame.
pub fn hodograph(geometry: &HodographGeometry, picture: &WindsPicture) -> Hodograph {
    let mut canvas = Canvas::new(geometry.frame());
    let plot = geometry.plot();
    let step = ring_step(geometry, picture);
    rings(&mut canvas, geometry, picture, step);
    let hatched = relative_areas(&mut canvas, geometry, picture);
    let curve = curve(&mut canvas, geometry, picture);
    let mut labels = Labels::new(&curve, plot, &hatched);
    let ticks = ticks(&mut canvas, geometry, picture);
    let marks = marks(&mut canvas, geometry, picture);
    let handle = handle(&mut canvas, geometry, picture);
    for (_, at) in &ticks {
        canvas.taken.push(around(*at, 3.0));
    }
    for (_, _, at) in &marks {
        canvas.taken.push(around(*at, 6.0));
    }
    if let Some(at) = handle {
        canvas.taken.push(around(at, RING + 1.0));
    }
    title(&mut canvas, geometry, picture);
    handle_label(&mut canvas, &labels, picture, handle);
    mark_labels(&mut canvas, &labels, &marks, handle);
    cursor(&mut canvas, &labels, geometry, picture);
    tick_labels(&mut canvas, &mut labels, &ticks);
    directions(&mut canvas, &labels, geometry);
    let sign = speed_sign(picture.units.speed);
    label_rings(
        &mut canvas,
        &labels,
        geometry,
        step / per_metre_per_second(picture.units.speed),
        |ring| format!("{} {sign}", wording::fixed(f64::from(ring) * step, 0)),
    );
    Hodograph {
        scene: canvas.scene,
        ticks,
        marks,
        handle,
        ring_step: step,
    }
}

fn around(at: Point, by: f64) -> Rect {
    Rect::new(at.x - by, at.y - by, 2.0 * by, 2.0 * by)
}

/// Distance of the rings in the displayed unit: about six across the shorter side.
fn ring_step(geometry: &HodographGeometry, picture: &WindsPicture) -> f64 {
    let plot = geometry.plot();
    let across = plot.width().min(plot.height()) / geometry.scale()
        * per_metre_per_second(picture.units.speed);
    [1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0]
        .into_iter()
        .find(|step| across / step <= 8.0)
        .unwrap_or(200.0)
}

fn rings(canvas: &mut Canvas, geometry: &HodographGeometry, picture: &WindsPicture, step: f64) {
    let plot = geometry.plot();
    let origin = geometry.point(Vector::default());
    let radius = step / per_metre_per_second(picture.units.speed) * geometry.scale();
    for ring in 1..=rings_in_sight(geometry, radius) {
        let r = radius * f64::from(ring);
        // Chords nowhere more than a quarter of a point inside the circle.
        let sides = (std::f64::consts::PI / (1.0 - 0.25 / r.max(1.0)).acos())
            .ceil()
            .clamp(24.0, 400.0);
        let points: Vec<Point> = (0..=sides as u32)
            .map(|i| {
                let angle = f64::from(i) / sides * std::f64::consts::TAU;
                Point::new(origin.x + r * angle.cos(), origin.y + r * angle.sin())
            })
            .collect();
        canvas.line(&points, &plot, Ink::WindRing, Stroke::solid(0.7));
    }
    let axes = [
        [
            Point::new(plot.left, origin.y),
            Point::new(plot.right, origin.y),
        ],
        [
            Point::new(origin.x, plot.top),
            Point::new(origin.x, plot.bottom),
        ],
    ];
    canvas.segments(&axes, &plot, Ink::WindRing, Stroke::solid(0.9));
    let mut edge = crate::canvas::corners(&plot);
    edge.extend(edge.first().copied());
    canvas.line(&edge, &geometry.frame(), Ink::Edge, Stroke::solid(1.0));
}

/// How many rings reach into the plot.
pub(crate) fn rings_in_sight(geometry: &HodographGeometry, radius: f64) -> u32 {
    let origin = geometry.point(Vector::default());
    let farthest = crate::canvas::corners(&geometry.plot())
        .into_iter()
        .map(|corner| corner.distance(origin))
        .fold(0.0, f64::max);
    (farthest / radius.max(1.0)).floor().min(60.0) as u32
}

/// Helicity as an area: what the wind as the storm feels it sweeps over from the ground to 1 km and from there to 3 km. Where it
/// turns to the right going up, and counts positive, the lines are unbroken; where to the left, dotted. Gives back the outline of both.
fn relative_areas(
    canvas: &mut Canvas,
    geometry: &HodographGeometry,
    picture: &WindsPicture,
) -> Vec<Point> {
    let mut whole = Vec::new();
    if picture.set.or(picture.numbers.motion_used).is_none() {
        return whole;
    }
    let motion = geometry.point(picture.handle());
    let plot = geometry.plot();
    for (from, to, slope, spacing) in [(0.0, 1_000.0, -1.0, 5.0), (1_000.0, 3_000.0, 1.0, 9.0)] {
        let winds = between(picture.profile, from, to);
        let reaches = winds
            .first()
            .zip(winds.last())
            .is_some_and(|(low, high)| low.0 <= from && high.0 >= to);
        if !reaches {
            continue;
        }
        let mut outline: Vec<Point> = winds.iter().map(|&(_, w)| geometry.point(w)).collect();
        whole.extend_from_slice(&outline);
        outline.push(motion);
        let turned = hatch_turned(&outline, slope, spacing, &plot);
        let ink = Ink::HelicityHatch;
        canvas.segments(&turned.clockwise, &plot, ink, Stroke::solid(0.8));
        let dots = Stroke::dashed(0.9, Dash::Dots);
        canvas.segments(&turned.anticlockwise, &plot, ink, dots);
        let sides = [winds.first(), winds.last()]
            .into_iter()
            .flatten()
            .map(|&(_, wind)| [motion, geometry.point(wind)])
            .collect::<Vec<_>>();
        canvas.segments(&sides, &plot, ink, Stroke::solid(1.1));
    }
    whole.push(motion);
    whole
}

/// Paints the curve; gives back its points, thinned.
fn curve(canvas: &mut Canvas, geometry: &HodographGeometry, picture: &WindsPicture) -> Vec<Point> {
    let plot = geometry.plot();
    let mut all: Vec<Point> = Vec::new();
    for (from, to, width) in LAYERS.into_iter().rev() {
        let points: Vec<Point> = between(picture.profile, from, to)
            .into_iter()
            .map(|(_, wind)| geometry.point(wind))
            .collect();
        canvas.line(&points, &plot, Ink::Wind, Stroke::solid(width));
    }
    for (_, wind) in between(picture.profile, 0.0, WINDS_TOP) {
        let point = geometry.point(wind);
        if all.last().is_none_or(|last| last.distance(point) > 1.5) {
            all.push(point);
        }
    }
    all
}

/// A filled disc at each tick's height, larger at 1, 3 and 6 km.
fn ticks(
    canvas: &mut Canvas,
    geometry: &HodographGeometry,
    picture: &WindsPicture,
) -> Vec<(f64, Point)> {
    let mut ticks = Vec::new();
    for height in tick_heights(picture.profile) {
        let Some(wind) = picture.profile.at(height) else {
            continue;
        };
        let at = geometry.point(wind);
        if !geometry.plot().contains(at) {
            continue;
        }
        let (radius, line) = match height {
            0.0 | 1_000.0 | 3_000.0 | 6_000.0 => (4.5, 1.8),
            500.0 => (2.6, 1.2),
            _ => (3.2, 1.4),
        };
        let outline = (Ink::Wind, Stroke::solid(line));
        canvas.circle(at, radius, Some(Ink::Paper), Some(outline));
        ticks.push((height, at));
    }
    ticks
}

/// Heights in the order in which they get a label, as long as there is room.
fn tick_labels(canvas: &mut Canvas, labels: &mut Labels, ticks: &[(f64, Point)]) {
    let rank = |height: f64| match height {
        1_000.0 => 0,
        3_000.0 => 1,
        6_000.0 => 2,
        0.0 => 3,
        500.0 => 4,
        9_000.0 => 5,
        12_000.0 => 6,
        2_000.0 => 7,
        _ => 8,
    };
    let mut order: Vec<_> = ticks.to_vec();
    order.sort_by_key(|&(height, _)| rank(height));
    for (height, at) in order {
        let main = rank(height) < 3;
        let size = if main { 13.0 } else { 11.5 };
        let mut lettering = Lettering::new(Anchor::Centre, size, Ink::Label);
        if main {
            lettering = lettering.strong();
        }
        labels.beside(canvas, at, 7.0, &kilometres(height), lettering, main);
    }
}

/// The motions that are marked: estimates as open shapes, one shape each. The user's own is the ring itself.
fn marks(
    canvas: &mut Canvas,
    geometry: &HodographGeometry,
    picture: &WindsPicture,
) -> Vec<(MotionMark, Vector, Point)> {
    let estimated = drawn_motions(picture.numbers).map(|motion| {
        [
            (MotionMark::Mean, motion.mean),
            (MotionMark::Left, motion.left),
            (MotionMark::Right, motion.right),
        ]
    });
    let set = picture.set.map(|set| (MotionMark::Set, set));
    let mut marks = Vec::new();
    for (mark, motion) in estimated.into_iter().flatten().chain(set) {
        let at = geometry.point(motion);
        if !geometry.plot().contains(at) {
            continue;
        }
        marks.push((mark, motion, at));
        let corner = |dx: f64, dy: f64| Point::new(at.x + dx, at.y + dy);
        let shape = match mark {
            MotionMark::Mean => vec![
                corner(-4.0, -4.0),
                corner(4.0, -4.0),
                corner(4.0, 4.0),
                corner(-4.0, 4.0),
            ],
            // Triangles that point to their side.
            MotionMark::Right => vec![corner(-3.5, -5.0), corner(5.5, 0.0), corner(-3.5, 5.0)],
            MotionMark::Left => vec![corner(3.5, -5.0), corner(3.5, 5.0), corner(-5.5, 0.0)],
            MotionMark::Set => continue,
        };
        canvas.polygon(shape.clone(), Ink::Paper);
        let mut outline = shape;
        outline.extend(outline.first().copied());
        canvas.line(&outline, &geometry.plot(), Ink::Wind, Stroke::solid(1.6));
    }
    marks
}

/// The ring that moves the storm motion.
fn handle(
    canvas: &mut Canvas,
    geometry: &HodographGeometry,
    picture: &WindsPicture,
) -> Option<Point> {
    let at = geometry.point(picture.handle());
    if !geometry.plot().contains(at) {
        return None;
    }
    if picture.focused {
        let outline = (Ink::Focus, Stroke::solid(2.5));
        canvas.circle(at, RING + 4.0, None, Some(outline));
    }
    let known = picture.set.or(picture.numbers.motion_used).is_some();
    let width = if picture.hovered { 3.6 } else { 2.4 };
    canvas.circle(at, RING, None, Some((Ink::Wind, Stroke::solid(width))));
    let (near, far) = (RING - 3.5, RING + 2.5);
    let spokes = [(1.0, 0.0), (-1.0, 0.0), (0.0, 1.0), (0.0, -1.0)].map(|(x, y)| {
        [
            Point::new(at.x + near * x, at.y + near * y),
            Point::new(at.x + far * x, at.y + far * y),
        ]
    });
    canvas.segments(&spokes, &geometry.plot(), Ink::Wind, Stroke::solid(1.6));
    if known && picture.set.is_some() {
        canvas.circle(at, 2.2, Some(Ink::Wind), None);
    }
    Some(at)
}

fn handle_label(
    canvas: &mut Canvas,
    labels: &Labels,
    picture: &WindsPicture,
    handle: Option<Point>,
) {
    let Some(at) = handle else { return };
    let value = wind_text(picture.handle(), picture.units.speed);
    let word = match picture.set {
        Some(_) => MotionMark::Set.word(),
        None => match picture.numbers.motion_used {
            None => {
                let text = "no estimate: drag this ring";
                let lettering = Lettering::new(Anchor::Centre, 12.0, Ink::Label);
                labels.beside(canvas, at, RING + 5.0, text, lettering, true);
                return;
            }
            Some(used) => match drawn_motions(picture.numbers) {
                Some(motion) if motion.left == used && motion.right != used => {
                    MotionMark::Left.word()
                }
                _ => MotionMark::Right.word(),
            },
        },
    };
    let lettering = Lettering::new(Anchor::Centre, 13.0, Ink::Label).strong();
    let text = format!("{word} {value}");
    labels.beside(canvas, at, RING + 5.0, &text, lettering, true);
}

/// Words at the marks that the ring's own label doesn't name.
fn mark_labels(
    canvas: &mut Canvas,
    labels: &Labels,
    marks: &[(MotionMark, Vector, Point)],
    handle: Option<Point>,
) {
    for &(mark, _, at) in marks {
        let named = handle.is_some_and(|handle| handle.distance(at) < 0.5);
        if named {
            continue;
        }
        let lettering = Lettering::new(Anchor::Centre, 12.0, Ink::Label);
        labels.beside(canvas, at, 9.0, mark.word(), lettering, true);
    }
}

/// The wind at the height being read.
fn cursor(
    canvas: &mut Canvas,
    labels: &Labels,
    geometry: &HodographGeometry,
    picture: &WindsPicture,
) {
    let Some(height) = picture.cursor else { return };
    let Some(at) = picture
        .profile
        .at(height)
        .map(|wind| geometry.point(wind))
        .filter(|&at| geometry.plot().contains(at))
    else {
        return;
    };
    canvas.circle(at, 5.5, Some(Ink::Wind), None);
    let text = wind_line(picture.profile, height, picture.units.speed);
    let lettering = Lettering::new(Anchor::Centre, 12.0, Ink::Label);
    labels.beside(canvas, at, 9.0, &text, lettering, true);
}

fn title(canvas: &mut Canvas, geometry: &HodographGeometry, picture: &WindsPicture) {
    let frame = geometry.frame();
    let y = frame.top + 9.5;
    let stamp = picture.stamp.is_some_and(|stamp| {
        let lettering = Lettering::new(Anchor::Right, 12.0, Ink::Stamp).strong();
        canvas.text(Point::new(frame.right - 6.0, y), stamp, lettering)
    });
    let lettering = Lettering::new(Anchor::Left, 11.0, Ink::Label);
    for text in [
        "hodograph · figures on the curve: km above ground",
        "figures: km above ground",
        "km above ground",
    ] {
        let at = Point::new(frame.left + 5.0, y);
        let extent = lettering.extent(at, text);
        if frame.holds(&extent) && (!stamp || canvas.is_free(&extent.grown(3.0))) {
            canvas.text(at, text, lettering);
            break;
        }
    }
}

/// Where the air comes from, at the ends of the axes.
fn directions(canvas: &mut Canvas, labels: &Labels, geometry: &HodographGeometry) {
    let plot = geometry.plot();
    let origin = geometry.point(Vector::default());
    let lettering = Lettering::new(Anchor::Centre, 11.0, Ink::QuietLabel);
    let places = [
        (
            "from S",
            Point::new(origin.x + 4.0, plot.top + 9.0),
            Anchor::Left,
        ),
        (
            "from N",
            Point::new(origin.x + 4.0, plot.bottom - 9.0),
            Anchor::Left,
        ),
        (
            "from W",
            Point::new(plot.right - 4.0, origin.y - 9.0),
            Anchor::Right,
        ),
        (
            "from E",
            Point::new(plot.left + 4.0, origin.y - 9.0),
            Anchor::Left,
        ),
    ];
    for (text, at, anchor) in places {
        let lettering = Lettering {
            anchor,
            ..lettering
        };
        let extent = lettering.extent(at, text);
        if plot.holds(&extent) && canvas.is_free(&extent) && labels.is_clear(&extent) {
            canvas.text(at, text, lettering);
        }
    }
}
