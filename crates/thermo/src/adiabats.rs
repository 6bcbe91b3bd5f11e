//! The saturated pseudo-adiabats of constant theta-e, tabulated once and for all parcels.
//!
//! Along a pseudo-adiabat everything depends on two numbers, q = ln theta-e and z = -ln p. Virtual temperature and its
//! derivatives with z, with q and with both stand in a table with nodes 0.01 apart in q (about 1 % of theta-e, 3 K) and
//! [`SPACING`] apart in z; they are exact solutions with analytic slopes. A parcel's path is the table at its q: a cubic
//! Hermite interpolation of values and slopes in q gives the nodes of the cubic in z. That costs some twenty
//! multiplications a node, where solving for it costs an exponential, two logarithms and several divisions.
//!
//! **Bound:** within 0.2 mK of the exact pseudo-adiabat wherever the table serves: theta-e 230..430 K, 1100..1 hPa. (The
//! part in q is below 0.05 mK: h⁴/384 times the fourth derivative.) Elsewhere each parcel solves for its own nodes.

use crate::path::{Cubic, SPACING};
use crate::pseudoadiabat::{first_guess, solve};
use std::sync::OnceLock;

/// Spacing of the nodes in q.
const Q_STEP: f64 = 0.01;
/// q of the first row: theta-e just below 230 K.
const Q_FIRST: f64 = 5.43;
/// Rows; the last has theta-e just above 430 K.
const ROWS: usize = 65;
/// Lowest pressure coordinate: -ln of 1100 hPa.
const Z_FIRST: f64 = -11.608_235_644_774_552;
/// Nodes in z; the last lies above 1 hPa.
const NODES: usize = 72;

/// The nodes of one theta-e.
struct Row {
    /// Virtual temperature, K.
    value: [f64; NODES],
    /// Its derivative with z.
    slope: [f64; NODES],
    /// The derivative of `value` with q, times the step in q.
    value_rise: [f64; NODES],
    /// The derivative of `slope` with q, times the step in q.
    slope_rise: [f64; NODES],
}

/// Virtual temperature and its derivative with z on the pseudo-adiabat.
fn exactly(q: f64, z: f64) -> (f64, f64) {
    let p = (-z).exp();
    let (t, state) = solve(q, p, first_guess(q.exp(), p), 1e-9);
    state.virtual_temperature_and_slope(t)
}

impl Row {
    fn new(q: f64) -> Self {
        // Differences in q of exact values: good to 1e-7 of the derivative, which weighs a step of 0.01.
        const DELTA: f64 = 1e-3;
        let mut row = Self {
            value: [0.0; NODES],
            slope: [0.0; NODES],
            value_rise: [0.0; NODES],
            slope_rise: [0.0; NODES],
        };
        for j in 0..NODES {
            let z = Z_FIRST + j as f64 * SPACING;
            let at = |q| exactly(q, z);
            let (low, high) = (at(q - DELTA), at(q + DELTA));
            (row.value[j], row.slope[j]) = at(q);
            row.value_rise[j] = (high.0 - low.0) * (Q_STEP / (2.0 * DELTA));
            row.slope_rise[j] = (high.1 - low.1) * (Q_STEP / (2.0 * DELTA));
        }
        row
    }
}

static TABLE: OnceLock<Vec<Row>> = OnceLock::new();

fn table() -> &'static [Row] {
    TABLE.get_or_init(|| {
        (0..ROWS)
            .map(|i| Row::new(Q_FIRST + i as f64 * Q_STEP))
            .collect()
    })
}

/// Virtual temperature of the pseudo-adiabat q from `z_from` (or a little below) to at least `z_end`; `None` outside the table.
pub(crate) fn path(q: f64, z_from: f64, z_end: f64) -> Option<Cubic> {
    let place = (q - Q_FIRST) * (1.0 / Q_STEP);
    let first = ((z_from - Z_FIRST) * (1.0 / SPACING)).floor();
    let last = ((z_end - Z_FIRST) * (1.0 / SPACING))
        .ceil()
        .max(first + 1.0);
    let inside =
        place >= 0.0 && place < (ROWS - 1) as f64 && first >= 0.0 && last <= (NODES - 1) as f64;
    if !inside {
        return None;
    }
    let row = place as usize;
    let share = place - row as f64;
    let [below, above] = table().get(row..row + 2)? else {
        return None;
    };
    // Hermite's weights.
    let rest = 1.0 - share;
    let weights = [
        (1.0 + 2.0 * share) * rest * rest,
        share * rest * rest,
        share * share * (3.0 - 2.0 * share),
        -share * share * rest,
    ];
    let (first, last) = (first as usize, last as usize);
    let mut values = [0.0; NODES];
    let mut slopes = [0.0; NODES];
    let mix = |out: &mut [f64; NODES], columns: [&[f64; NODES]; 4]| {
        let [a, b, c, d] = columns.map(|column| &column[first..=last]);
        for (k, out) in out[..=last - first].iter_mut().enumerate() {
            *out = weights[0] * a[k] + weights[1] * b[k] + weights[2] * c[k] + weights[3] * d[k];
        }
    };
    mix(
        &mut values,
        [
            &below.value,
            &below.value_rise,
            &above.value,
            &above.value_rise,
        ],
    );
    mix(
        &mut slopes,
        [
            &below.slope,
            &below.slope_rise,
            &above.slope,
            &above.slope_rise,
        ],
    );
    let count = last - first + 1;
    Some(Cubic::new(
        Z_FIRST + first as f64 * SPACING,
        &values[..count],
        &slopes[..count],
    ))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_reaches_as_far_as_it_says() {
        assert!(Q_FIRST.exp() < 230.0 && (Q_FIRST + (ROWS - 1) as f64 * Q_STEP).exp() > 430.0);
        assert!((Z_FIRST + 110_000.0_f64.ln()).abs() < 1e-12);
        assert!((-(Z_FIRST + (NODES - 1) as f64 * SPACING)).exp() < 100.0);
        assert!(path(228.0_f64.ln(), -11.0, -8.0).is_none());
        assert!(path(433.0_f64.ln(), -11.0, -8.0).is_none());
        assert!(path(300.0_f64.ln(), -11.7, -8.0).is_none());
        assert!(path(300.0_f64.ln(), -11.0, -4.4).is_none());
        assert!(path(f64::NAN, -11.0, -8.0).is_none());
        assert!(path(300.0_f64.ln(), f64::NAN, -8.0).is_none());
    }

    /// Every theta-e between rows, every pressure between nodes.
    #[test]
    fn the_table_keeps_its_bound() {
        let mut worst = 0.0_f64;
        for i in 0..=400 {
            let q = 230.0_f64.ln() + (430.0_f64 / 230.0).ln() * f64::from(i) / 400.0;
            let (bottom, top) = (-110_000.0_f64.ln(), -100.0_f64.ln());
            let path = path(q, bottom, top).unwrap();
            for j in 0..=1400 {
                let z = bottom + (top - bottom) * f64::from(j) / 1400.0;
                worst = worst.max((path.value(z) - exactly(q, z).0).abs());
            }
        }
        assert!(worst < 2e-4, "{worst:e} K");
    }
}
