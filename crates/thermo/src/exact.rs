//! The slow reference of [`lift`](crate::lift): a Newton solution at every point, and nothing tabulated.

use crate::column::Segment;
use crate::lift::assemble;
use crate::numeric::zero_between;
use crate::path::Parcel;
use crate::pseudoadiabat::{first_guess, solve};
use crate::saturation::virtual_temperature;
use crate::scan::Run;
use crate::{Air, Ascent, Environment, Method, Process};

/// Widest step of the integration in ln p.
const WIDEST: f64 = 0.01;
/// Widest step of the integration in dew point, K.
const WIDEST_DEWPOINT: f64 = 1.0;
/// Newton's last step, K.
const STEP: f64 = 1e-10;

/// What [`lift`](crate::lift) returns, by exact solution of eq. 39 at the ends and the middle of steps of at most
/// 0.01 in ln p and Simpson's rule. Hundreds of times slower; for checking.
pub fn lift_exactly(environment: &Environment, start: Air, method: Method) -> Option<Ascent> {
    let parcel = Parcel::new(start)?;
    if parcel.start.pressure < environment.top() {
        return None;
    }
    let (z_bottom, z_top) = environment.z_range();
    let from = parcel.z_start.max(z_bottom);
    let lcl = parcel.z_lcl.max(from);
    let dry = |z: f64| virtual_temperature(parcel.dry_temperature(z), parcel.w);
    let saturated = |z: f64| match method.process {
        Process::ThetaE | Process::Direct(_) | Process::Reversible(_) => {
            let p = (-z).exp();
            let (t, state) = solve(
                parcel.ln_theta_e,
                p,
                first_guess(parcel.ln_theta_e.exp(), p),
                STEP,
            );
            virtual_temperature(t, state.w)
        }
    };
    let below = runs(environment, dry, from, lcl.min(z_top));
    let above = runs(environment, saturated, lcl, z_top);
    Some(assemble(environment, &parcel, &below, above))
}

/// Runs of one sign of buoyancy from `from` to `to`.
fn runs(environment: &Environment, parcel: impl Fn(f64) -> f64, from: f64, to: f64) -> Vec<Run> {
    let levels = environment.levels();
    let mut runs: Vec<Run> = Vec::new();
    for (i, ends) in levels.z.windows(2).enumerate() {
        let [foot, head] = *ends else { continue };
        let (a, b) = (foot.max(from), head.min(to));
        if b <= a {
            continue;
        }
        let segment = levels.segment(i);
        let buoyancy = |z: f64| parcel(z) - segment.virtual_temperature(z);
        let pieces = pieces(&segment, a, b);
        let h = (b - a) / pieces;
        for piece in 0..pieces as usize {
            let left = a + piece as f64 * h;
            let right = if piece + 1 == pieces as usize {
                b
            } else {
                left + h
            };
            one_step(&mut runs, &buoyancy, left, right);
        }
    }
    runs
}

fn pieces(segment: &Segment, a: f64, b: f64) -> f64 {
    let change = segment.td.map_or(0.0, |(_, slope)| (slope * (b - a)).abs());
    ((b - a) / WIDEST)
        .max(change / WIDEST_DEWPOINT)
        .ceil()
        .max(1.0)
}

/// Adds one step's area, cut at crossings on either side of its middle.
fn one_step(runs: &mut Vec<Run>, buoyancy: &impl Fn(f64) -> f64, a: f64, b: f64) {
    let middle = 0.5 * (a + b);
    let values = [buoyancy(a), buoyancy(middle), buoyancy(b)];
    let mut cuts = vec![a];
    for (left, right, fl, fr) in [
        (a, middle, values[0], values[1]),
        (middle, b, values[1], values[2]),
    ] {
        if (fl > 0.0) != (fr > 0.0) {
            cuts.push(zero_between(left, fl, right, fr, buoyancy));
        }
    }
    cuts.push(b);
    for cut in cuts.windows(2) {
        let [left, right] = *cut else { continue };
        if right <= left {
            continue;
        }
        let centre = buoyancy(0.5 * (left + right));
        let area = (right - left) / 6.0 * (buoyancy(left) + 4.0 * centre + buoyancy(right));
        let positive = centre > 0.0;
        match runs.last_mut() {
            Some(run) if run.positive == positive => {
                run.top = right;
                run.area += area;
            }
            _ => runs.push(Run {
                bottom: left,
                top: right,
                positive,
                area,
            }),
        }
    }
}
