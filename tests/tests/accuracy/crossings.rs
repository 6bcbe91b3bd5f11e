//! Two ascents of one parcel compared: one to be judged, one to judge by.

use crate::pa;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

/// Buoyancy error the fast path may have (K): its stated bound for virtual temperature.
pub const BUOYANCY: f64 = 0.002;
/// A crossing is well conditioned when buoyancy changes by at least this (K) per unit of ln p on both its sides. An error of
/// 2 mK then moves it by 2e-4 in ln p, 20 Pa at the ground.
const STEEP: f64 = 10.0;
/// What follows for pressures: 2e-4 of 1000 hPa.
const SHIFT: f64 = 20.0;
/// Areas this small (J/kg) may be seen or not; the bound of CAPE and CIN is never smaller.
const SMALL: f64 = 0.5;

/// Differences of CAPE, CIN and levels over many ascents.
pub struct Comparison {
    cape: Residuals,
    cin: Residuals,
    lcl: Residuals,
    steep: Residuals,
    flat: Residuals,
    /// Ascents in which the two choose different layers for LFC or EL; what the choice hangs on must be less than `SMALL`.
    open: usize,
    count: usize,
}

impl Comparison {
    pub fn new(what: &str, reference: &str) -> Self {
        let line = |number: &str, unit, bound: &str| {
            Residuals::new(format!("{what} {number}, {reference}"), unit, bound)
        };
        Self {
            cape: line("CAPE", "J/kg", "0.1 % or 0.5 J/kg"),
            cin: line("CIN", "J/kg", "0.1 % or 0.5 J/kg"),
            lcl: line("LCL", "Pa", "0.001"),
            steep: line("LFC, EL (steep)", "Pa", "20"),
            flat: line("LFC, EL (flat): buoyancy", "mK", "2"),
            open: 0,
            count: 0,
        }
    }

    pub fn add(
        &mut self,
        environment: &Environment,
        method: Method,
        ours: &Ascent,
        exact: &Ascent,
    ) {
        let place = Place {
            environment,
            method,
            start: exact.start,
        };
        self.count += 1;
        let bound = |value: f64| (0.001 * value.abs()).max(SMALL);
        self.cape.add(ours.cape - exact.cape, bound(exact.cape));
        self.lcl
            .add(ours.lcl.pressure.pa() - exact.lcl.pressure.pa(), 0.001);
        let mut open = false;
        match (largest(ours), largest(exact)) {
            (Some(a), Some(b)) if overlap(a, b) => {
                if let (Some(a), Some(b)) = (ours.cin, exact.cin) {
                    self.cin.add(a - b, bound(b));
                }
                if let (Some(a), Some(b)) = (ours.lfc, exact.lfc) {
                    self.level(&place, a, b);
                }
            }
            (None, None) => {}
            (a, b) => {
                // Two layers of nearly one area, or hardly a layer at all.
                let area = |layer: Option<&BuoyantLayer>| layer.map_or(0.0, |layer| layer.area);
                open = true;
                self.cin.add(area(a) - area(b), SMALL);
            }
        }
        match (ours.buoyant.last(), exact.buoyant.last()) {
            (Some(a), Some(b)) if overlap(a, b) => match (ours.el, exact.el) {
                (Some(a), Some(b)) => self.level(&place, a, b),
                (None, None) => {}
                _ => self.steep.add(f64::NAN, SHIFT),
            },
            (None, None) => {}
            (a, b) => {
                // The higher one is what the other doesn't see.
                let both = a.into_iter().chain(b);
                let higher = both.min_by(|a, b| a.top.pa().total_cmp(&b.top.pa()));
                open = true;
                self.cape.add(higher.map_or(0.0, |layer| layer.area), SMALL);
            }
        }
        self.open += usize::from(open);
    }

    fn level(&mut self, place: &Place, ours: Pressure, level: Pressure) {
        let buoyancy = |p: f64| place.buoyancy(p);
        // Either side by a tenth of a per cent: most of a hectopascal.
        let step = 1e-3;
        let here = buoyancy(level.pa() * (1.0 - 1e-9));
        let above = (buoyancy(level.pa() * (1.0 - step)) - here) / step;
        let below = (here - buoyancy(level.pa() * (1.0 + step))) / step;
        let shift = ours.pa() - level.pa();
        if above.abs().min(below.abs()) >= STEEP || shift == 0.0 {
            self.steep.add(shift, SHIFT);
        } else {
            let error = buoyancy(ours.pa() * (1.0 - 1e-9));
            self.flat.add(1e3 * error, 1e3 * BUOYANCY);
        }
    }

    pub fn judge(self, report: &mut Report) {
        for residuals in [&self.cape, &self.cin, &self.lcl, &self.steep, &self.flat] {
            report.judge(residuals);
        }
        report.remark(&[&format!(
            "{} of {} ascents take LFC or EL from different layers, chosen by less than {SMALL} J/kg.",
            self.open, self.count
        )]);
    }
}

/// Where a parcel rises, and how.
struct Place<'a> {
    environment: &'a Environment,
    method: Method,
    start: Air,
}

impl Place<'_> {
    /// Buoyancy of the exact parcel, K.
    fn buoyancy(&self, p: f64) -> f64 {
        let states = parcel_path(self.start, self.method, &[pa(p)]);
        let around = self.environment.virtual_at(pa(p));
        match (states.first(), around) {
            (Some(state), Some((_, around))) => state.virtual_temperature.k() - around,
            _ => f64::NAN,
        }
    }
}

/// The layer that makes the LFC.
fn largest(ascent: &Ascent) -> Option<&BuoyantLayer> {
    let layers = ascent.buoyant.iter();
    layers.max_by(|a, b| a.area.total_cmp(&b.area))
}

fn overlap(a: &BuoyantLayer, b: &BuoyantLayer) -> bool {
    a.top < b.bottom && b.top < a.bottom
}
