//! The tabulated path of a process that is a lapse rate: its march as a piecewise cubic.

use crate::lapse::{March, Node};
use crate::path::{Cubic, Parcel, SPACING, Split};
use crate::{Buoyancy, Method};

/// Widest step of the integration.
const WIDEST: f64 = 0.05;

/// Polynomial in the share of a step, lowest power first.
type Polynomial = [f64; 4];

/// `count` steps of the path from the LCL; `None` for the process that isn't a lapse rate.
pub(crate) fn path(parcel: &Parcel, method: Method, count: usize) -> Option<Cubic> {
    let z_end = parcel.z_lcl + (count as f64 - 0.5) * SPACING;
    let march = March::new(parcel, method.process, z_end, SPACING, WIDEST)?;
    let value = |node: &Node| match method.buoyancy {
        Buoyancy::Virtual => march.lapse.virtual_temperature(node.t, node.above.vapour),
        Buoyancy::Temperature => node.t,
    };
    let slope = |node: &Node, state| match method.buoyancy {
        Buoyancy::Virtual => march.lapse.virtual_slope(node.t, state),
        Buoyancy::Temperature => state.slope,
    };
    let mut pieces: Vec<(Polynomial, f64)> = Vec::with_capacity(count);
    let mut splits = Vec::new();
    let mut sum = 0.0;
    for pair in march.nodes.windows(2) {
        let [foot, head] = pair else { continue };
        // Nodes follow from the start step by step, so that the step is told by its middle.
        let k = ((0.5 * (foot.z + head.z) - parcel.z_lcl) / SPACING) as usize;
        let step_foot = parcel.z_lcl + k as f64 * SPACING;
        let (from, to) = (
            (foot.z - step_foot) / SPACING,
            (head.z - step_foot) / SPACING,
        );
        let (left, right) = (
            (value(foot), slope(foot, &foot.above) * SPACING),
            (value(head), slope(head, &head.below) * SPACING),
        );
        let polynomial = hermite(from, to, left, right);
        let before = sum - SPACING * primitive(&polynomial, from);
        sum = before + SPACING * primitive(&polynomial, to);
        if pieces.len() > k {
            splits.push(Split {
                k,
                z: foot.z,
                piece: (polynomial, before),
            });
        } else {
            pieces.push((polynomial, before));
        }
    }
    Some(Cubic::of_pieces(parcel.z_lcl, pieces, splits))
}

/// The cubic through (value, slope) at `from` and at `to`, in powers of the share itself.
fn hermite(from: f64, to: f64, left: (f64, f64), right: (f64, f64)) -> Polynomial {
    let width = to - from;
    let per = 1.0 / width;
    let (m0, m1, rise) = (left.1 * width, right.1 * width, right.0 - left.0);
    // In u = (s - from) / width first.
    let (b, c, d) = (
        m0 * per,
        (3.0 * rise - 2.0 * m0 - m1) * per * per,
        (m0 + m1 - 2.0 * rise) * per * per * per,
    );
    if from == 0.0 {
        return [left.0, b, c, d];
    }
    [
        left.0 - from * (b - from * (c - from * d)),
        b - from * (2.0 * c - 3.0 * from * d),
        c - 3.0 * from * d,
        d,
    ]
}

/// Integral of the polynomial from 0 to s.
fn primitive(c: &Polynomial, s: f64) -> f64 {
    s * (c[0] + s * (c[1] / 2.0 + s * (c[2] / 3.0 + s * c[3] / 4.0)))
}
