//! Running integral over pressure of equivalent potential temperature along the interpolated profile.

use crate::column::Segment;
use crate::elementary::{exp, ln};
use crate::saturation::{E0, exponent_and_slope};
use crate::{EPSILON, Environment, KAPPA, REFERENCE_PRESSURE};

/// Widest piece in ln p.
const WIDEST: f64 = 0.1;
/// Error of a piece's mean that is allowed, as a share of theta-e.
const PIECE_ERROR: f64 = 2e-8;

/// Eq. 39 theta-e of one point of air, and how its logarithm changes: d ln theta-e = `per_t` dT + `per_td` dTd + `per_z` dz.
#[derive(Debug, Clone, Copy, Default)]
struct Point {
    p: f64,
    theta_e: f64,
    per_t: f64,
    per_td: f64,
    per_z: f64,
    /// Exponent of eq. 10 at the dew point.
    exponent: f64,
    w: f64,
}

impl Point {
    #[inline]
    fn new(p: f64, t: f64, td: f64) -> Self {
        let td = td.min(t);
        let (exponent, per_kelvin) = exponent_and_slope(td);
        let e = (E0 * exp(exponent)).min(0.5 * p);
        let per_dry = 1.0 / (p - e);
        let w = EPSILON * e * per_dry;
        let w_scale = w * p * per_dry;
        let per_t = 1.0 / t;
        // Eq. 15 and its derivatives, and its pole.
        let (t_lcl, lcl_per_t, lcl_per_td, rise) = if td <= 56.0 {
            (td, 0.0, 1.0, ln(t / td))
        } else {
            let (over, per_td) = (1.0 / (td - 56.0), 1.0 / td);
            let above = 1.0 / (over + ln(t * per_td) * (1.0 / 800.0));
            let square = above * above;
            let t_lcl = above + 56.0;
            (
                t_lcl,
                -square * per_t * (1.0 / 800.0),
                square * (over * over + per_td * (1.0 / 800.0)),
                ln(t / t_lcl),
            )
        };
        let per_lcl = 1.0 / t_lcl;
        let latent = 3036.0 * per_lcl - 1.78;
        let amount = w * (1.0 + 0.448 * w);
        let by_lcl = -per_lcl * (0.28 * w + 3036.0 * per_lcl * amount);
        let by_w = 0.28 * rise + latent * (1.0 + 0.896 * w);
        Self {
            p,
            theta_e: t * exp(KAPPA * ln(REFERENCE_PRESSURE * per_dry)
                + 0.28 * w * rise
                + latent * amount),
            per_t: per_t * (1.0 + 0.28 * w) + by_lcl * lcl_per_t,
            per_td: per_kelvin * (KAPPA * e * per_dry + by_w * w_scale) + by_lcl * lcl_per_td,
            per_z: KAPPA * p * per_dry + by_w * w_scale,
            exponent,
            w,
        }
    }

    /// d theta-e / dp (K/Pa) where T and Td have these slopes with z.
    #[inline]
    fn slope(&self, t_slope: f64, td_slope: f64) -> f64 {
        -self.theta_e / self.p * (self.per_t * t_slope + self.per_td * td_slope + self.per_z)
    }
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
    /// The level at the foot of the segment worked on, and the air at its head.
    level: usize,
    segment: Option<(Segment, Point)>,
    /// Pieces of that segment: how many are passed or under way, and how many there are.
    next: usize,
    pieces: usize,
    piece: Option<Piece>,
    /// The air at the head of the last piece.
    head: Point,
    /// Integral up to the foot of the piece.
    before: f64,
}

impl<'e> Running<'e> {
    pub fn new(environment: &'e Environment) -> Self {
        let bottom = environment.bottom();
        let [t, td] = [bottom.temperature, bottom.dewpoint].map(|value| value.k());
        Self {
            environment,
            level: 0,
            segment: None,
            next: 0,
            pieces: 0,
            piece: None,
            head: Point::new(bottom.pressure.pa(), t, td),
            before: 0.0,
        }
    }

    /// Integral (K Pa) from the lowest level to this pressure, which must not be above that of the call before; `None`
    /// where the humidity is not known.
    pub fn down_to(&mut self, p: f64) -> Option<f64> {
        loop {
            match self.piece {
                Some(piece) if p >= piece.head => {
                    let share = ((piece.foot - p) / (piece.foot - piece.head)).clamp(0.0, 1.0);
                    return Some(self.before + integral(&piece, share));
                }
                Some(piece) => self.before += integral(&piece, 1.0),
                None => {}
            }
            self.piece = Some(self.advance()?);
        }
    }

    /// The next piece up.
    fn advance(&mut self) -> Option<Piece> {
        let (segment, head) = match self.segment {
            Some(segment) if self.next < self.pieces => segment,
            last => {
                if last.is_some() {
                    self.level += 1;
                }
                let segment = self.enter()?;
                self.segment = Some(segment);
                segment
            }
        };
        let (td, td_slope) = segment.td?;
        self.next += 1;
        let foot = self.head;
        let head = if self.next == self.pieces {
            head
        } else {
            let end = self.environment.levels().z.get(self.level + 1)?;
            let z = segment.z + (end - segment.z) * self.next as f64 / self.pieces as f64;
            Point::new(
                exp(-z),
                segment.temperature(z),
                td + td_slope * (z - segment.z),
            )
        };
        self.head = head;
        let h = head.p - foot.p;
        let [m0, m1] = [foot, head].map(|point| h * point.slope(segment.t_slope, td_slope));
        let rise = head.theta_e - foot.theta_e;
        Some(Piece {
            foot: foot.p,
            head: head.p,
            c: [
                foot.theta_e,
                m0,
                3.0 * rise - 2.0 * m0 - m1,
                m0 + m1 - 2.0 * rise,
            ],
        })
    }

    /// The segment above the level, with the air at its head; how many pieces it needs.
    fn enter(&mut self) -> Option<(Segment, Point)> {
        let levels = self.environment.levels();
        let above = self.level + 1;
        if above >= self.environment.humid_levels() {
            return None;
        }
        let segment = levels.segment(self.level);
        let p = *self.environment.pressure().get(above)?;
        let head = Point::new(p, levels.t[above], levels.td[above]?);
        let depth = levels.z[above] - segment.z;
        let change = (head.exponent - self.head.exponent).abs() + depth;
        // theta-e is like exp(l) where l = (latent heat over cp T) w is like exp(x), x = ln(e/p). The mean of its cubic over
        // a step of x is off by 1/720 of its fourth derivative, l (1 + 7 l + ...), times step^4.
        let l = 11.0 * head.w.max(self.head.w);
        let bend = l * (1.0 + l * (7.0 + l * (6.0 + l)));
        let square = change * change;
        self.pieces = if depth <= WIDEST && bend * square * square <= 720.0 * PIECE_ERROR {
            1
        } else {
            let widest = (720.0 * PIECE_ERROR / bend).sqrt().sqrt();
            (depth / WIDEST)
                .max(change / widest)
                .ceil()
                .clamp(1.0, 200.0) as usize
        };
        self.next = 0;
        Some((segment, head))
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
                let (td, td_slope) = segment.td.unwrap();
                let point = Point::new(p, segment.temperature(z), td + td_slope * (z - segment.z));
                let exact = |p: f64| environment.at(Pressure::from_pa(p)).unwrap().theta_e().k();
                assert!((point.theta_e - exact(p)).abs() < 1e-9, "{i} {share}");
                let difference = (exact(p + 1.0) - exact(p - 1.0)) / 2.0;
                let slope = point.slope(segment.t_slope, td_slope);
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
                (running.down_to(p).unwrap() - sum).abs() < 3e-5 * 42_000.0,
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
