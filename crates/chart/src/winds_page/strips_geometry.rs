//! Where direction and speed lie against height.

use super::{WINDS_TOP, between, heights_up_to, per_metre_per_second};
use crate::{Point, Rect, SpeedUnit};
use dewbound_sounding::thermo::{Vector, WindProfile};

/// Scales of the two strips, from the winds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StripsView {
    /// Height at the head, m.
    pub top: f64,
    /// Speed at the right edge, m/s.
    pub fastest: f64,
    /// From line to line of the speed scale, m/s.
    pub speed_step: f64,
    /// Direction at the left edge of its strip, degrees: a multiple of 90.
    pub first_direction: f64,
}

impl StripsView {
    /// For a profile up to a height (m, at most [`WINDS_TOP`]), with a scale that is round in the displayed unit.
    pub fn fit(profile: &WindProfile, unit: SpeedUnit, top: f64) -> Self {
        let highest = heights_up_to(profile, top).map_or(WINDS_TOP, |[_, highest]| highest);
        let winds = between(profile, 0.0, highest);
        let top = winds.last().map_or(1000.0, |&(height, _)| height);
        let factor = per_metre_per_second(unit);
        let most = winds
            .iter()
            .map(|(_, wind)| wind.speed() * factor)
            .fold(5.0, f64::max);
        let step = [2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0]
            .into_iter()
            .find(|step| most / step <= 4.0)
            .unwrap_or(500.0);
        Self {
            top: (top / 1000.0).ceil().max(1.0) * 1000.0,
            fastest: (most / step).ceil() * step / factor,
            speed_step: step / factor,
            first_direction: first_direction(&winds),
        }
    }
}

/// The edge of the strip that the wind turns across least often, and of equals the one it stays farthest from.
fn first_direction(winds: &[(f64, Vector)]) -> f64 {
    let crossings = |edge: f64| {
        let past = |wind: Vector| (wind.direction_from() - edge).rem_euclid(360.0);
        let jumps = winds.windows(2).filter(|pair| match pair {
            [(_, a), (_, b)] => (past(*a) - past(*b)).abs() > 180.0,
            _ => false,
        });
        let near = winds
            .iter()
            .filter(|(_, wind)| !(20.0..=340.0).contains(&past(*wind)));
        (jumps.count(), near.count())
    };
    // North at the edge, from 0 to 360, unless another edge is better.
    let mut best = 0.0;
    for edge in [180.0, 90.0, 270.0] {
        if crossings(edge) < crossings(best) {
            best = edge;
        }
    }
    best
}

/// Two strips side by side over one height scale.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WindStrips {
    frame: Rect,
    direction: Rect,
    speed: Rect,
    view: StripsView,
}

/// Room left for the height scale, right, above for titles, below for the scales.
const LEFT: f64 = 26.0;
const RIGHT: f64 = 14.0;
const HEAD: f64 = 19.0;
const FOOT: f64 = 19.0;
/// Between the strips.
const GAP: f64 = 18.0;

impl WindStrips {
    /// In a frame.
    pub fn new(frame: Rect, view: StripsView) -> Self {
        let top = frame.top + HEAD;
        let height = frame.height() - HEAD - FOOT;
        let width = ((frame.width() - LEFT - RIGHT - GAP) / 2.0).max(1.0);
        let direction = Rect::new(frame.left + LEFT, top, width, height);
        let speed = Rect::new(direction.right + GAP, top, width, height);
        Self {
            frame,
            direction,
            speed,
            view,
        }
    }

    /// The frame.
    pub fn frame(&self) -> Rect {
        self.frame
    }

    /// Strip of the direction.
    pub fn direction(&self) -> Rect {
        self.direction
    }

    /// Strip of the speed.
    pub fn speed(&self) -> Rect {
        self.speed
    }

    /// Scales.
    pub fn view(&self) -> StripsView {
        self.view
    }

    /// Where a height (m) lies.
    pub fn y(&self, height: f64) -> f64 {
        self.speed.bottom - self.speed.height() * height / self.view.top
    }

    /// The height at a y.
    pub fn height_at(&self, y: f64) -> f64 {
        (self.speed.bottom - y) / self.speed.height().max(1e-9) * self.view.top
    }

    /// Where a speed (m/s) at a height lies.
    pub fn speed_point(&self, height: f64, speed: f64) -> Point {
        let x = self.speed.left + self.speed.width() * speed / self.view.fastest;
        Point::new(x, self.y(height))
    }

    /// The speed at an x, m/s.
    pub fn speed_at(&self, x: f64) -> f64 {
        (x - self.speed.left) / self.speed.width() * self.view.fastest
    }

    /// Where a direction (degrees) at a height lies: once round from edge to edge.
    pub fn direction_point(&self, height: f64, degrees: f64) -> Point {
        let turned = (degrees - self.view.first_direction).rem_euclid(360.0);
        let x = self.direction.left + self.direction.width() * turned / 360.0;
        Point::new(x, self.y(height))
    }

    /// The direction at an x, degrees in 0..360.
    pub fn direction_at(&self, x: f64) -> f64 {
        let share = (x - self.direction.left) / self.direction.width();
        (self.view.first_direction + 360.0 * share).rem_euclid(360.0)
    }
}
