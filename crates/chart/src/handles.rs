//! Where things that can be touched were painted.

use crate::{Handle, Point, Rect};

/// Radius within which a handle is hit, in points.
pub const HIT_RADIUS: f64 = 15.0;

/// One handle as painted.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HandlePlace {
    /// Which.
    pub handle: Handle,
    /// Centre of its ring.
    pub centre: Point,
    /// Ends of the whisker, left and right, clipped to the plot.
    pub whisker: Option<[Point; 2]>,
}

/// Everything that can be touched in a painted frame; pointer input is read against the last one.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Touch {
    /// Handles in sight.
    pub handles: Vec<HandlePlace>,
    /// Number of each finding in sight, and the box of its numbered disc (hit area).
    pub brackets: Vec<(usize, Rect)>,
}

impl Touch {
    /// The handle under a point: the nearer one; where both lie on one spot, the left half is the dew point's and the right
    /// half the temperature's.
    pub fn handle_at(&self, point: Point) -> Option<Handle> {
        let hit = |h: &&HandlePlace| h.centre.distance(point) <= HIT_RADIUS;
        let mut hits = self.handles.iter().filter(hit);
        let first = hits.next()?;
        let Some(second) = hits.next() else {
            return Some(first.handle);
        };
        let difference = first.centre.distance(point) - second.centre.distance(point);
        if difference.abs() > 1e-9 {
            return Some(if difference < 0.0 {
                first.handle
            } else {
                second.handle
            });
        }
        Some(if point.x < first.centre.x {
            Handle::Dewpoint
        } else {
            Handle::Temperature
        })
    }

    /// The finding whose numbered disc lies under a point.
    pub fn bracket_at(&self, point: Point) -> Option<usize> {
        self.brackets
            .iter()
            .find(|(_, place)| place.contains(point))
            .map(|&(number, _)| number)
    }

    /// Place of one handle.
    pub fn handle(&self, handle: Handle) -> Option<&HandlePlace> {
        self.handles.iter().find(|h| h.handle == handle)
    }
}
