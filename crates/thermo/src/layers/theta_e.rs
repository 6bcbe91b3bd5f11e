//! Running integral over pressure of equivalent potential temperature along the interpolated profile.

use crate::column::Segment;
use crate::elementary::{exp, ln};
use crate::saturation::{E0, exponent_and_slope};
use crate::{EPSILON, Environment, KAPPA, REFERENCE_PRESSURE};

/// Widest piece in ln p.
const WIDEST: f64 = 0.1;
/// Error of a piece's mean that is allowed, as a share of theta-e.
const PIECE_ERROR: f64 = 1e-8;

/// Eq. 39 theta-e (K) and its slope with pressure (K/Pa) of the interpolated air at z = -ln p.
#[inline]
pub(super) fn theta_e_and_slope(segment: &Segment, td: (f64, f64), z: f64, p: f64) -> (f64, f64) {
    let (t, t_slope) = (segment.temperature(z), segment.t_slope);
    let (td, td_slope) = ((td.0 + td.1 * (z - segment.z)).min(t), td.1);
    let (exponent, per_kelvin) = exponent_and_slope(td);
    let e = (E0 * exp(exponent)).min(0.5 * p);
    let e_slope = e * per_kelvin * td_slope;
    let per_dry = 1.0 / (p - e);
    let w = EPSILON * e * per_dry;
    let w_slope = w * (1.0 + w / EPSILON) * (per_kelvin * td_slope + 1.0);
    let per_t = t_slope / t;
    // Eq. 15, and its pole.
    let (dry_term, t_lcl, t_lcl_slope) = if td <= 56.0 {
        (ln(t / td), td, td_slope)
    } else {
        let over = 1.0 / (td - 56.0);
        let log = ln(t / td);
        let per = 1.0 / (over + log * (1.0 / 800.0));
        let slope = per * per * (td_slope * over * over - (per_t - td_slope / td) * (1.0 / 800.0));
        let t_lcl = per + 56.0;
        (ln(t / t_lcl), t_lcl, slope)
    };
    let per_lcl = 1.0 / t_lcl;
    let latent = 3036.0 * per_lcl - 1.78;
    let value = t * exp(KAPPA * ln(REFERENCE_PRESSURE * per_dry)
        + 0.28 * w * dry_term
        + latent * w * (1.0 + 0.448 * w));
    let log_slope = per_t
        + KAPPA * (p + e_slope) * per_dry
        + 0.28 * (w_slope * dry_term + w * (per_t - t_lcl_slope * per_lcl))
        - 3036.0 * per_lcl * per_lcl * t_lcl_slope * w * (1.0 + 0.448 * w)
        + latent * w_slope * (1.0 + 0.896 * w);
    (value, -value * log_slope / p)
}

/// One piece: theta-e as a cubic of pressure.
#[derive(Debug, Clone, Copy)]
struct Piece {
    /// Pressures of foot and head, Pa.
    foot: f64,
    head: f64,
    /// Powers of the share of the way from foot to head.
    c: [f64; 4],
}

/// Integral of theta-e over p from the lowest level, for falling pressures.
pub(super) struct Running<'e> {
    environment: &'e Environment,
    level: usize,
    /// Pieces of the segment above `level` not yet passed: the next one's number, and how many.
    next: usize,
    pieces: usize,
    piece: Option<Piece>,
    /// theta-e and its slope at the head of the last piece.
    head: (f64, f64),
    /// Integral up to the foot of the piece.
    before: f64,
}

impl<'e> Running<'e> {
    pub fn new(environment: &'e Environment) -> Self {
        Self {
            environment,
            level: 0,
            next: 0,
            pieces: 0,
            piece: None,
            head: (0.0, 0.0),
            before: 0.0,
        }
    }

    /// Integral (K Pa) from the lowest level to this pressure, which must not be above that of the call before; `None`
    /// where the humidity is not known.
    pub fn down_to(&mut self, p: f64) -> Option<f64> {
        loop {
            let piece = match self.piece {
                Some(piece) if p >= piece.head => piece,
                Some(piece) => {
                    self.before += integral(&piece, 1.0);
                    self.piece = Some(self.advance()?);
                    continue;
                }
                None => {
                    self.piece = Some(self.advance()?);
                    continue;
                }
            };
            let share = ((piece.foot - p) / (piece.foot - piece.head)).clamp(0.0, 1.0);
            return Some(self.before + integral(&piece, share));
        }
    }

    /// The next piece up.
    fn advance(&mut self) -> Option<Piece> {
        let levels = self.environment.levels();
        let pressures = self.environment.pressure();
        if self.pieces > 0 && self.next == self.pieces {
            self.level += 1;
            self.pieces = 0;
        }
        let i = self.level;
        if i + 1 >= self.environment.humid_levels() {
            return None;
        }
        let segment = levels.segment(i);
        let td = segment.td?;
        let (za, zb) = (levels.z[i], levels.z[i + 1]);
        if self.pieces == 0 {
            let exponent = |z: f64| exponent_and_slope(td.0 + td.1 * (z - za)).0;
            let (foot, head) = (exponent(za), exponent(zb));
            // theta-e is like exp(l) where l = (latent heat over cp T) w is like exp(x), x = ln(e/p). The
            // mean of its cubic over a step of x is off by 1/720 of its fourth derivative, l (1 + 7 l + ...), times step^4.
            let w = EPSILON * E0 * exp(foot.max(head) + zb).min(0.5);
            let l = 11.0 * w;
            let bend = l * (1.0 + l * (7.0 + l * (6.0 + l)));
            let widest = (720.0 * PIECE_ERROR / bend).sqrt().sqrt();
            self.pieces = ((zb - za) / WIDEST)
                .max(((head - foot).abs() + (zb - za)) / widest)
                .ceil()
                .clamp(1.0, 200.0) as usize;
            self.next = 0;
        }
        let step = (zb - za) / self.pieces as f64;
        let end = |k: usize| {
            if k == 0 {
                (za, pressures[i])
            } else if k == self.pieces {
                (zb, pressures[i + 1])
            } else {
                let z = za + k as f64 * step;
                (z, exp(-z))
            }
        };
        let (foot, head) = (end(self.next), end(self.next + 1));
        let (v0, s0) = if self.next == 0 {
            theta_e_and_slope(&segment, td, foot.0, foot.1)
        } else {
            self.head
        };
        self.head = theta_e_and_slope(&segment, td, head.0, head.1);
        let (v1, s1) = self.head;
        self.next += 1;
        let h = head.1 - foot.1;
        let (m0, m1, rise) = (s0 * h, s1 * h, v1 - v0);
        Some(Piece {
            foot: foot.1,
            head: head.1,
            c: [v0, m0, 3.0 * rise - 2.0 * m0 - m1, m0 + m1 - 2.0 * rise],
        })
    }
}

/// Integral over p, counted positive upward, from the piece's foot over a share of it.
fn integral(piece: &Piece, s: f64) -> f64 {
    let [c0, c1, c2, c3] = piece.c;
    (piece.foot - piece.head) * s * (c0 + s * (c1 / 2.0 + s * (c2 / 3.0 + s * c3 / 4.0)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Pressure;

    fn environment() -> Environment {
        Environment::new(
            &[100_000.0, 92_000.0, 85_000.0, 70_000.0, 58_000.0],
            &[303.0, 297.0, 294.0, 281.0, 270.0],
            &[
                Some(295.0),
                Some(294.0),
                Some(294.0),
                Some(250.0),
                Some(255.0),
            ],
        )
        .unwrap()
    }

    #[test]
    fn the_slope_is_that_of_theta_e() {
        let environment = environment();
        let levels = environment.levels();
        for i in 0..4 {
            let segment = levels.segment(i);
            for share in [0.1, 0.5, 0.9] {
                let z = levels.z[i] + share * (levels.z[i + 1] - levels.z[i]);
                let p = (-z).exp();
                let (value, slope) = theta_e_and_slope(&segment, segment.td.unwrap(), z, p);
                let exact = |p: f64| environment.at(Pressure::from_pa(p)).unwrap().theta_e().k();
                assert!((value - exact(p)).abs() < 1e-9, "{i} {share}");
                let difference = (exact(p + 1.0) - exact(p - 1.0)) / 2.0;
                assert!(
                    (slope / difference - 1.0).abs() < 1e-5,
                    "{slope} {difference}"
                );
            }
        }
    }

    #[test]
    fn the_integral_is_what_a_plain_sum_says() {
        let environment = environment();
        let mut running = Running::new(&environment);
        let mut sum = 0.0;
        let (step, slices) = (500.0, 2_000);
        let mut p = 100_000.0;
        while p >= 58_000.0 {
            assert!(
                (running.down_to(p).unwrap() - sum).abs() < 1e-5 * 42_000.0,
                "{p}"
            );
            let h = step / f64::from(slices);
            for k in 0..slices {
                let middle = Pressure::from_pa(p - (f64::from(k) + 0.5) * h);
                sum += h * environment.at(middle).map_or(0.0, |air| air.theta_e().k());
            }
            p -= step;
        }
        assert_eq!(running.down_to(57_000.0), None);
    }
}
