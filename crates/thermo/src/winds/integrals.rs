//! Integrals of the wind over a layer.

use super::{Vector, WindProfile};

impl WindProfile {
    /// Mean wind of a layer (heights in m above the ground), every metre of it counting alike; `None` unless
    /// `bottom < top` and both lie in the profile.
    pub fn mean_by_height(&self, bottom: f64, top: f64) -> Option<Vector> {
        let (mut sum, mut depth) = (Vector::default(), 0.0);
        for (lower, upper) in self.pieces(bottom, top)? {
            let step = upper.height - lower.height;
            sum = sum + (lower.wind + upper.wind) * (0.5 * step);
            depth += step;
        }
        finite(quotient(sum, depth))
    }

    /// Mean wind of a layer (heights in m above the ground), every pascal of it, that is every kilogram of air, counting
    /// alike; `None` as for [`WindProfile::mean_by_height`], and where pressure isn't known throughout.
    ///
    /// The wind is linear in height and pressure exponential in it: over a piece whose pressure falls from p0 to p1, with
    /// a = ln(p0/p1), the mean lies at the share 1/a - 1/(exp(a) - 1) of the way up.
    pub fn mean_by_pressure(&self, bottom: f64, top: f64) -> Option<Vector> {
        let (mut sum, mut depth) = (Vector::default(), 0.0);
        for (lower, upper) in self.pieces(bottom, top)? {
            let fall = lower.ln_pressure? - upper.ln_pressure?;
            let step = -(-fall).exp_m1() * lower.ln_pressure?.exp();
            sum = sum + (lower.wind + (upper.wind - lower.wind) * centre_of_mass(fall)) * step;
            depth += step;
        }
        finite(quotient(sum, depth))
    }

    /// Wind at the top of a layer minus wind at its bottom (heights in m above the ground); `None` outside the profile.
    pub fn difference(&self, bottom: f64, top: f64) -> Option<Vector> {
        Some(self.at(top)? - self.at(bottom)?)
    }

    /// Storm-relative helicity of a layer (heights in m above the ground) against a motion, m²/s²; `None` as for
    /// [`WindProfile::mean_by_height`].
    ///
    /// Minus the integral over height of k · (V - C) × dV/dz (Davies-Jones et al. 1990, 16th Conf. on Severe Local Storms; from
    /// memory): minus twice the signed area the storm-relative wind sweeps over on the hodograph, a sum of vector products
    /// of neighbouring levels. Positive where the hodograph turns clockwise about the motion.
    pub fn helicity(&self, bottom: f64, top: f64, motion: Vector) -> Option<f64> {
        let swept = self
            .pieces(bottom, top)?
            .map(|(lower, upper)| (upper.wind - motion).cross(lower.wind - motion));
        // A sum of nothing but zeros is -0.0 in Rust.
        Some(swept.sum::<f64>() + 0.0).filter(|helicity| helicity.is_finite())
    }
}

/// Where in a piece its mass has its centre, as a share of its height, when pressure falls by the factor exp(-fall).
fn centre_of_mass(fall: f64) -> f64 {
    if fall < 1e-2 {
        // The series; the closed form loses figures. The next term is below 4e-15.
        0.5 - fall / 12.0 + fall.powi(3) / 720.0
    } else {
        1.0 / fall - 1.0 / fall.exp_m1()
    }
}

fn quotient(vector: Vector, by: f64) -> Vector {
    Vector {
        u: vector.u / by,
        v: vector.v / by,
    }
}

/// Layers thinner than numbers can tell have no mean.
fn finite(vector: Vector) -> Option<Vector> {
    (vector.u.is_finite() && vector.v.is_finite()).then_some(vector)
}
