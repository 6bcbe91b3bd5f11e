//! Bounds of CAPE and CIN, summed cell by cell from the LCL up, and what they say.

use super::inflow::{LEAST_CAPE, LEAST_CIN};
use crate::GAS_CONSTANT_DRY;

/// Bounds this close (J/kg) to a limit don't decide: errors of the cubics and of [`lift`](crate::lift()).
pub(super) const MARGIN: f64 = 2.0;

/// A verdict from bounds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Verdict {
    Qualifies,
    FailsOnCape,
    FailsOnCin,
    Open,
}

/// Positive and negative area (both >= 0) of a straight line between two values over a width.
#[inline]
fn chord_areas(a: f64, b: f64, width: f64) -> (f64, f64) {
    if a >= 0.0 && b >= 0.0 {
        (0.5 * width * (a + b), 0.0)
    } else if a <= 0.0 && b <= 0.0 {
        (0.0, -0.5 * width * (a + b))
    } else {
        let per = 0.5 * width / (a - b).abs();
        let (up, down) = (a.max(b), a.min(b));
        (per * up * up, per * down * down)
    }
}

/// Bounds of the positive and negative area under a chord that may be off by `departure`.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Areas {
    positive: (f64, f64),
    negative: (f64, f64),
}

impl Areas {
    #[inline]
    pub fn of_chord(a: f64, b: f64, width: f64, departure: f64) -> Self {
        let (positive_high, negative_low) = chord_areas(a + departure, b + departure, width);
        let (positive_low, negative_high) = chord_areas(a - departure, b - departure, width);
        Self {
            positive: (positive_low, positive_high),
            negative: (negative_low, negative_high),
        }
    }
}

/// Sums on the way up.
#[derive(Debug, Default)]
pub(super) struct Sums {
    positive: (f64, f64),
    pub negative: (f64, f64),
    /// Least negative area up to the last cell that is certainly negative.
    negative_sure: f64,
    /// Area of the run of certainly positive cells now open, 0 when none is, and bounds of the negative area beneath it.
    run: f64,
    beneath: (f64, f64),
    /// The run of most area, and the same of it.
    largest: f64,
    beneath_largest: (f64, f64),
}

impl Sums {
    /// Of the ascent above the LCL, after that of the one below it: positive area there counts for nothing.
    pub fn above_lcl(&self) -> Self {
        Self {
            negative: self.negative,
            negative_sure: self.negative.0,
            ..Self::default()
        }
    }

    /// Adds a cell of certain positive buoyancy.
    #[inline]
    pub fn add_positive(&mut self, area: f64) {
        if self.run == 0.0 {
            self.beneath = (self.negative_sure, self.negative.1);
        }
        self.run += area;
        self.positive.0 += area;
        self.positive.1 += area;
        if self.run > self.largest {
            (self.largest, self.beneath_largest) = (self.run, self.beneath);
        }
    }

    /// Adds a cell of certain negative buoyancy; its area as a positive number.
    #[inline]
    pub fn add_negative(&mut self, area: f64) {
        self.run = 0.0;
        self.negative.0 += area;
        self.negative.1 += area;
        self.negative_sure = self.negative.0;
    }

    /// Adds a cell that may hold either.
    #[inline]
    pub fn add_uncertain(&mut self, areas: Areas) {
        self.run = 0.0;
        self.positive.0 += areas.positive.0;
        self.positive.1 += areas.positive.1;
        self.negative.0 += areas.negative.0;
        self.negative.1 += areas.negative.1;
    }

    pub fn verdict(&self) -> Verdict {
        let [low, high] = [self.positive.0, self.positive.1].map(|area| GAS_CONSTANT_DRY * area);
        if high < LEAST_CAPE - MARGIN {
            return Verdict::FailsOnCape;
        }
        let (run, beneath) = (GAS_CONSTANT_DRY * self.largest, self.beneath_largest);
        if low < LEAST_CAPE + MARGIN || 2.0 * run < high + MARGIN {
            return Verdict::Open;
        }
        if GAS_CONSTANT_DRY * beneath.1 < -LEAST_CIN - MARGIN {
            Verdict::Qualifies
        } else if GAS_CONSTANT_DRY * beneath.0 > -LEAST_CIN + MARGIN {
            Verdict::FailsOnCin
        } else {
            Verdict::Open
        }
    }
}
