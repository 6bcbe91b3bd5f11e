//! Heights of standard levels: three figures on the wire, the leading one left out.

use super::standard_atmosphere::{self as standard, End};

/// A standard level with its coded height.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Coded {
    /// Pressure, Pa.
    pub pressure: f64,
    /// The three figures.
    pub figures: Option<u32>,
    /// Temperature, K.
    pub temperature: Option<f64>,
    /// Height, geopotential m, once known.
    pub height: Option<f64>,
}

impl Coded {
    fn end(&self) -> End {
        End {
            pressure: self.pressure,
            temperature: self.temperature,
        }
    }

    /// Height in whole metres: below 500 hPa. Above, tens of metres.
    fn in_metres(&self) -> bool {
        self.pressure > 50_000.0
    }

    /// Heights the figures may stand for. Below sea level 500 is added to the depth.
    fn candidates(&self) -> Vec<f64> {
        let Some(figures) = self.figures.map(f64::from) else {
            return Vec::new();
        };
        let below_sea = (figures >= 500.0).then_some(500.0 - figures);
        if self.pressure > 95_000.0 {
            return vec![below_sea.unwrap_or(figures)];
        }
        if self.in_metres() {
            let below_sea = below_sea.filter(|_| self.pressure > 90_000.0);
            return (0..=4)
                .map(|thousands| figures + 1_000.0 * f64::from(thousands))
                .chain(below_sea)
                .collect();
        }
        (0..=4)
            .map(|myriads| 10.0 * figures + 10_000.0 * f64::from(myriads))
            .collect()
    }

    fn nearest(&self, estimate: f64) -> Option<f64> {
        self.candidates()
            .into_iter()
            .min_by(|a, b| (a - estimate).abs().total_cmp(&(b - estimate).abs()))
    }
}

/// Fills in the heights.
///
/// At 1,000 hPa the figures are unambiguous, and from 500 hPa up the next reading is 10 km away, so the standard
/// atmosphere decides. At 925, 850 and 700 hPa the next reading is 1 km away, too near for the standard atmosphere in a
/// deep winter low: there the hypsometric estimate from the nearest level of known height decides, and the standard
/// atmosphere only when no other height is known.
pub(super) fn resolve(levels: &mut [Coded]) {
    for level in levels.iter_mut() {
        if !level.in_metres() || level.pressure > 95_000.0 {
            level.height = level.nearest(standard::height(level.pressure));
        }
    }
    while let Some((open, estimate)) = next(levels) {
        let Some(level) = levels.get_mut(open) else {
            break;
        };
        level.height = level.nearest(estimate);
        if level.height.is_none() {
            break;
        }
    }
}

/// How a level's height disagrees with the temperatures.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Misfit {
    /// Index of the level.
    pub index: usize,
    /// Metres by which the layer down to the next known height is thicker than its temperatures imply.
    pub off: f64,
    /// The temperatures at both ends are known.
    pub judged: bool,
    /// Farther off than this (m), the reading of the figures itself is in question.
    pub certain_within: f64,
}

/// Every level above the lowest known height, against the level below it.
pub(super) fn misfits(levels: &[Coded]) -> Vec<Misfit> {
    let known: Vec<_> = levels
        .iter()
        .enumerate()
        .filter_map(|(index, level)| Some((index, level, level.height?)))
        .collect();
    known
        .windows(2)
        .filter_map(|pair| {
            let [(_, lower, below), (index, upper, above)] = pair else {
                return None;
            };
            Some(Misfit {
                index: *index,
                off: above - below - standard::thickness(lower.end(), upper.end()),
                judged: lower.temperature.is_some() && upper.temperature.is_some(),
                // A quarter of the distance between two readings, and for tens of metres what no atmosphere explains.
                certain_within: if lower.in_metres() { 250.0 } else { 1_000.0 },
            })
        })
        .collect()
}

/// The level to settle next, being nearest to one of known height, and its estimated height.
fn next(levels: &[Coded]) -> Option<(usize, f64)> {
    let open = levels
        .iter()
        .enumerate()
        .filter(|(_, level)| level.height.is_none() && level.figures.is_some());
    let known = || {
        levels
            .iter()
            .filter_map(|level| Some((level, level.height?)))
    };
    let distance = |a: &Coded, b: &Coded| (a.pressure / b.pressure).ln().abs();
    let pair = open
        .clone()
        .flat_map(|(index, level)| {
            known().map(move |(anchor, height)| (index, level, anchor, height))
        })
        .min_by(|a, b| distance(a.1, a.2).total_cmp(&distance(b.1, b.2)));
    match pair {
        Some((index, level, anchor, height)) => Some((
            index,
            height + standard::thickness(anchor.end(), level.end()),
        )),
        // Nothing to build on: the lowest level, where the standard atmosphere is least wrong.
        None => open
            .max_by(|a, b| a.1.pressure.total_cmp(&b.1.pressure))
            .map(|(index, level)| (index, standard::height(level.pressure))),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn coded(hectopascals: f64, figures: u32, celsius: Option<f64>) -> Coded {
        Coded {
            pressure: hectopascals * 100.0,
            figures: Some(figures),
            temperature: celsius.map(|celsius| celsius + 273.15),
            height: None,
        }
    }

    #[track_caller]
    fn check(levels: &[(f64, u32, Option<f64>)], expect: &[f64]) {
        let mut levels: Vec<_> = levels.iter().map(|&(p, f, t)| coded(p, f, t)).collect();
        resolve(&mut levels);
        let heights: Vec<_> = levels.iter().map(|level| level.height.unwrap()).collect();
        assert_eq!(heights, expect);
        for misfit in misfits(&levels) {
            assert!(misfit.off.abs() < misfit.certain_within, "{misfit:?}");
        }
    }

    #[test]
    fn temperate_ascent() {
        check(
            &[
                (1000.0, 137, Some(20.6)),
                (925.0, 801, Some(13.6)),
                (850.0, 505, Some(6.8)),
                (700.0, 77, Some(1.4)),
                (500.0, 573, Some(-12.9)),
                (400.0, 739, Some(-25.7)),
                (300.0, 939, Some(-43.5)),
                (250.0, 60, Some(-52.5)),
                (200.0, 200, Some(-61.7)),
                (150.0, 380, Some(-56.5)),
                (100.0, 637, Some(-56.7)),
            ],
            &[
                137.0, 801.0, 1505.0, 3077.0, 5730.0, 7390.0, 9390.0, 10_600.0, 12_000.0, 13_800.0,
                16_370.0,
            ],
        );
    }

    /// A deep low in polar winter, thicknesses computed by hand from the mean temperatures (29.27 m/K, ln p): 573, 612,
    /// 1370 and 2277 m. The standard atmosphere alone would read 3,333 m at 700 hPa.
    #[test]
    fn deep_winter_low() {
        check(
            &[
                (1000.0, 722, Some(-20.0)),
                (925.0, 351, Some(-24.0)),
                (850.0, 963, Some(-28.0)),
                (700.0, 333, Some(-36.0)),
                (500.0, 461, Some(-48.0)),
            ],
            &[-222.0, 351.0, 963.0, 2333.0, 4610.0],
        );
    }

    #[test]
    fn below_sea_level_and_single_levels() {
        check(&[(1000.0, 531, None)], &[-31.0]);
        check(&[(850.0, 452, None)], &[1452.0]);
        check(&[(700.0, 68, None)], &[3068.0]);
        check(
            &[(10.0, 145, None), (20.0, 675, None)],
            &[31_450.0, 26_750.0],
        );
    }

    #[test]
    fn heights_that_fit_no_temperature_are_named() {
        let mut levels = [coded(50.0, 87, Some(-60.3)), coded(30.0, 187, Some(-60.3))];
        resolve(&mut levels);
        let found = misfits(&levels);
        assert_eq!(levels[1].height, Some(21_870.0));
        assert_eq!(found.len(), 1);
        assert!((found[0].off + 2183.0).abs() < 20.0, "{found:?}");
    }
}
