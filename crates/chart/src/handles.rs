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

#[cfg(test)]
mod tests {
    use super::*;

    fn touch(dewpoint: Point, temperature: Point) -> Touch {
        let place = |handle, centre| HandlePlace {
            handle,
            centre,
            whisker: None,
        };
        Touch {
            handles: vec![
                place(Handle::Dewpoint, dewpoint),
                place(Handle::Temperature, temperature),
            ],
            brackets: vec![(7, Rect::new(10.0, 10.0, 20.0, 20.0))],
        }
    }

    #[test]
    fn the_nearer_handle_is_hit_and_none_beyond_the_radius() {
        let touch = touch(Point::new(100.0, 100.0), Point::new(120.0, 100.0));
        assert_eq!(
            touch.handle_at(Point::new(108.0, 100.0)),
            Some(Handle::Dewpoint)
        );
        assert_eq!(
            touch.handle_at(Point::new(112.0, 100.0)),
            Some(Handle::Temperature)
        );
        assert_eq!(
            touch.handle_at(Point::new(100.0, 114.0)),
            Some(Handle::Dewpoint)
        );
        assert_eq!(touch.handle_at(Point::new(100.0, 116.0)), None);
    }

    #[test]
    fn in_saturated_air_each_half_is_one_handle() {
        let at = Point::new(100.0, 100.0);
        let touch = touch(at, at);
        assert_eq!(
            touch.handle_at(Point::new(96.0, 103.0)),
            Some(Handle::Dewpoint)
        );
        assert_eq!(
            touch.handle_at(Point::new(104.0, 97.0)),
            Some(Handle::Temperature)
        );
    }

    #[test]
    fn brackets_are_hit_in_their_box() {
        let touch = touch(Point::default(), Point::default());
        assert_eq!(touch.bracket_at(Point::new(15.0, 15.0)), Some(7));
        assert_eq!(touch.bracket_at(Point::new(35.0, 15.0)), None);
    }
}
