//! The tabulated path of a process that is a lapse rate: its march as a piecewise cubic.

use crate::lapse::{March, Node};
use crate::path::{Cubic, Parcel, SPACING, Split};
use crate::{Buoyancy, Method};

/// Widest step of the integration.
const WIDEST: f64 = SPACING;

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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::environment::coordinate;
    use crate::pseudoadiabat::{first_guess, solve};
    use crate::{Air, Condensate, Pressure, Process, Temperature};

    const PROCESSES: [Process; 4] = [
        Process::Direct(Condensate::Water),
        Process::Direct(Condensate::WaterAndIce),
        Process::Reversible(Condensate::Water),
        Process::Reversible(Condensate::WaterAndIce),
    ];

    /// Saturated air of this theta-e at this pressure, when that leaves it air.
    fn saturated(theta_e: f64, p: f64) -> Option<Parcel> {
        let t = solve(theta_e.ln(), p, first_guess(theta_e, p), 1e-10).0;
        let temperature = Temperature::from_k(t);
        Parcel::new(Air {
            pressure: Pressure::from_pa(p),
            temperature,
            dewpoint: temperature,
        })
    }

    /// Tables against marches forty times as fine, theta-e 240..420 K, 1080..50 hPa.
    #[test]
    fn tables_keep_their_bound() {
        for process in PROCESSES {
            for buoyancy in [Buoyancy::Temperature, Buoyancy::Virtual] {
                let mut errors = Vec::new();
                for i in 0..=36 {
                    for p in [1080e2, 1000e2, 900e2, 800e2, 600e2, 400e2] {
                        let theta_e = 240.0 + 5.0 * f64::from(i);
                        let parcel = saturated(theta_e, p).unwrap();
                        let z_end = coordinate(50e2);
                        let count = ((z_end - parcel.z_lcl) / SPACING).ceil() as usize;
                        let table = path(&parcel, Method { process, buoyancy }, count).unwrap();
                        let fine = March::new(&parcel, process, z_end, 0.0025, 0.0025).unwrap();
                        for j in 0..700 {
                            let z = parcel.z_lcl
                                + (f64::from(j) + 0.37) / 700.0 * (z_end - parcel.z_lcl);
                            let (t, vapour) = fine.at(z);
                            let exact = match buoyancy {
                                Buoyancy::Temperature => t,
                                Buoyancy::Virtual => fine.lapse.virtual_temperature(t, vapour),
                            };
                            errors.push((table.value(z) - exact).abs());
                        }
                    }
                }
                errors.sort_by(f64::total_cmp);
                let at = |q: f64| errors[((errors.len() - 1) as f64 * q) as usize];
                println!(
                    "{process:?} {buoyancy:?}: {} cases, q75 {:.1e}, q99 {:.1e}, max {:.1e} K",
                    errors.len(),
                    at(0.75),
                    at(0.99),
                    at(1.0)
                );
                assert!(at(1.0) < 2e-4, "{process:?} {buoyancy:?}: {}", at(1.0));
            }
        }
    }

    /// The march that counts as exact against one twice as fine, 1e-9 relative.
    #[test]
    fn the_fine_march_is_converged() {
        for process in PROCESSES {
            let mut worst = 0.0_f64;
            for theta_e in [240.0, 280.0, 320.0, 340.0, 360.0, 390.0, 420.0] {
                let parcel = saturated(theta_e, 1080e2).unwrap();
                let z_end = coordinate(10e2);
                let [fine, finer] = [0.0025, 0.00125]
                    .map(|step| March::new(&parcel, process, z_end, step, step).unwrap());
                for j in 0..4000 {
                    let z = parcel.z_lcl + (f64::from(j) + 0.37) / 4000.0 * (z_end - parcel.z_lcl);
                    let (a, b) = (fine.at(z).0, finer.at(z).0);
                    worst = worst.max((a / b - 1.0).abs());
                }
            }
            println!("{process:?}: halving the step moves temperature by {worst:.1e}");
            assert!(worst < 1e-9, "{process:?}: {worst:e}");
        }
    }

    /// Steps with a kink: value and integral belong together, and the pieces meet.
    #[test]
    fn the_integral_belongs_to_the_value_across_kinks() {
        for process in PROCESSES {
            let parcel = saturated(350.0, 1000e2).unwrap();
            let table = path(&parcel, Method::of(process), 25).unwrap();
            let (from, to) = (parcel.z_lcl + 0.013, parcel.z_lcl + 2.37);
            let slices = 100_000;
            let h = (to - from) / f64::from(slices);
            let mut last = table.value(from);
            let mut sum = 0.0;
            for i in 0..slices {
                let z = from + (f64::from(i) + 0.5) * h;
                let value = table.value(z);
                assert!((value - last).abs() < 100.0 * h, "{process:?} {z}");
                last = value;
                sum += h * value;
                // What a scan of the pieces reads is the same.
                let piece = table.piece_at(z);
                assert!((piece.value(z) - value).abs() < 1e-9 && piece.head > z);
            }
            let integral = table.integral(to) - table.integral(from);
            assert!(
                (integral - sum).abs() < 1e-6,
                "{process:?}: {integral} {sum}"
            );
        }
    }
}
