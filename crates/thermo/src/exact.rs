//! The slow reference of [`lift`](crate::lift): a Newton solution or a very fine integration, and Gauss's rule.

use crate::bare::Surroundings;
use crate::column::Segment;
use crate::lapse::March;
use crate::lift::assemble;
use crate::numeric::{gauss4, zero_between};
use crate::path::Parcel;
use crate::pseudoadiabat::{first_guess, solve};
use crate::saturation::virtual_temperature;
use crate::scan::Run;
use crate::{Air, Ascent, Buoyancy, Environment, Method, Process};

/// Widest step of the quadrature in ln p.
const WIDEST: f64 = 0.01;
/// Widest step of the quadrature in dew point, K.
const WIDEST_DEWPOINT: f64 = 0.5;
/// Step of the integration of a lapse rate: a twentieth of the table's.
const MARCH: f64 = 0.0025;
/// Newton's last step, K.
const STEP: f64 = 1e-10;

/// The saturated ascent, exactly.
pub(crate) enum Saturated {
    /// Eq. 39, solved at every point.
    ThetaE(f64),
    /// A lapse rate, integrated in steps of so little that it makes no difference.
    Lapse(March),
}

impl Saturated {
    /// From the LCL to at least `z_end`; a lapse rate is integrated in steps of `step`.
    pub fn of(parcel: &Parcel, process: Process, z_end: f64, step: f64) -> Self {
        match March::new(parcel, process, z_end, step, step) {
            Some(march) => Self::Lapse(march),
            None => Self::ThetaE(parcel.ln_theta_e),
        }
    }

    /// Temperature and virtual temperature at z, where the pressure is `p`.
    pub fn at(&self, z: f64, p: f64) -> (f64, f64) {
        match self {
            Self::ThetaE(ln_theta_e) => {
                let guess = first_guess(ln_theta_e.exp(), p);
                let (t, state) = solve(*ln_theta_e, p, guess, STEP);
                (t, virtual_temperature(t, state.w))
            }
            Self::Lapse(march) => {
                let (t, vapour) = march.at(z);
                (t, march.lapse.virtual_temperature(t, vapour))
            }
        }
    }

    /// The z at which the slope jumps.
    fn kinks(&self) -> Vec<f64> {
        match self {
            Self::ThetaE(_) => Vec::new(),
            Self::Lapse(march) => march.kinks(),
        }
    }
}

/// What [`lift`](crate::lift) returns, from the exact path and Gauss's four-point rule on steps of at most 0.01 in ln p,
/// cut at every crossing and kink. CAPE and CIN don't depend on how many levels the interpolated profile is cut into
/// (1e-9). Hundreds of times slower; for checking.
///
/// Exact is: eq. 39 solved to 1e-10 K at every point; a lapse rate integrated by the classical Runge-Kutta method in steps
/// of 0.0025, cubic between them, which is converged to 1e-9 relative.
pub fn lift_exactly(environment: &Environment, start: Air, method: Method) -> Option<Ascent> {
    let parcel = Parcel::new(start)?;
    if parcel.start.pressure < environment.top() {
        return None;
    }
    let (z_bottom, z_top) = environment.z_range();
    let from = parcel.z_start.max(z_bottom);
    let lcl = parcel.z_lcl.max(from);
    let surroundings = Surroundings::of(environment, method.buoyancy);
    let bare = method.buoyancy == Buoyancy::Temperature;
    let dry = |z: f64| {
        let t = parcel.dry_temperature(z);
        if bare {
            t
        } else {
            virtual_temperature(t, parcel.w)
        }
    };
    let path = Saturated::of(&parcel, method.process, z_top, MARCH);
    let saturated = |z: f64| {
        let (t, tv) = path.at(z, (-z).exp());
        if bare { t } else { tv }
    };
    let below = runs(&surroundings, dry, &[], from, lcl.min(z_top));
    let above = runs(&surroundings, saturated, &path.kinks(), lcl, z_top);
    Some(assemble(environment, &parcel, &below, above))
}

/// Runs of one sign of buoyancy from `from` to `to`; the parcel is smooth between `kinks`.
fn runs(
    surroundings: &Surroundings,
    parcel: impl Fn(f64) -> f64,
    kinks: &[f64],
    from: f64,
    to: f64,
) -> Vec<Run> {
    let levels = surroundings.levels();
    let mut runs: Vec<Run> = Vec::new();
    for (i, ends) in levels.z.windows(2).enumerate() {
        let [foot, head] = *ends else { continue };
        let (a, b) = (foot.max(from), head.min(to));
        if b <= a {
            continue;
        }
        let segment = levels.segment(i);
        let buoyancy = |z: f64| parcel(z) - segment.virtual_temperature(z);
        let mut edges = vec![a];
        edges.extend(kinks.iter().filter(|kink| a < **kink && **kink < b));
        edges.push(b);
        for edge in edges.windows(2) {
            let [a, b] = *edge else { continue };
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

/// Adds one step's area, cut at crossings on either side of its middle and of its extremum.
fn one_step(runs: &mut Vec<Run>, buoyancy: &impl Fn(f64) -> f64, a: f64, b: f64) {
    let middle = 0.5 * (a + b);
    let mut points = vec![
        (a, buoyancy(a)),
        (middle, buoyancy(middle)),
        (b, buoyancy(b)),
    ];
    if let [(_, fa), (_, fm), (_, fb)] = points[..] {
        // The vertex of the parabola through the three. Also where their signs differ: a parcel that starts as its
        // surroundings are has a zero at the foot, and may have another next to it.
        let (rise, bend) = (fb - fa, fa + fb - 2.0 * fm);
        if rise.abs() < 2.0 * bend.abs() {
            let vertex = middle - 0.5 * (b - a) * rise / (2.0 * bend);
            let place = if vertex < middle { 1 } else { 2 };
            points.insert(place, (vertex, buoyancy(vertex)));
        }
    }
    let mut cuts = vec![a];
    for pair in points.windows(2) {
        let [(left, fl), (right, fr)] = *pair else {
            continue;
        };
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
        let area = gauss4(left, right, buoyancy);
        let positive = buoyancy(0.5 * (left + right)) > 0.0;
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
