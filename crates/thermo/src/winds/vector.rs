//! A horizontal wind or motion.

use std::ops::{Add, Mul, Neg, Sub};

/// A horizontal vector: wind, motion, or difference of winds, m/s.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Vector {
    /// Towards the east.
    pub u: f64,
    /// Towards the north.
    pub v: f64,
}

impl Vector {
    /// From the direction the wind blows from (degrees clockwise from north) and its speed (m/s).
    ///
    /// ```
    /// use dewbound_thermo::*;
    /// let westerly = Vector::from_wind(270.0, 10.0);
    /// assert!((westerly.u - 10.0).abs() < 1e-12 && westerly.v.abs() < 1e-12);
    /// assert!((westerly.direction_from() - 270.0).abs() < 1e-9);
    /// ```
    pub fn from_wind(direction: f64, speed: f64) -> Self {
        let (sin, cos) = direction.to_radians().sin_cos();
        Self {
            u: -speed * sin,
            v: -speed * cos,
        }
    }

    /// Its length, m/s.
    pub fn speed(self) -> f64 {
        self.u.hypot(self.v)
    }

    /// The direction it comes from, degrees clockwise from north, 0..360; 0 for no wind.
    pub fn direction_from(self) -> f64 {
        if self.u == 0.0 && self.v == 0.0 {
            return 0.0;
        }
        let degrees = (-self.u).atan2(-self.v).to_degrees();
        if degrees < 0.0 {
            degrees + 360.0
        } else {
            degrees
        }
    }

    /// Scalar product.
    pub fn dot(self, other: Self) -> f64 {
        self.u * other.u + self.v * other.v
    }

    /// Vertical component of the vector product: positive when `other` is turned anticlockwise from `self`.
    pub fn cross(self, other: Self) -> f64 {
        self.u * other.v - self.v * other.u
    }
}

impl Add for Vector {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self {
            u: self.u + other.u,
            v: self.v + other.v,
        }
    }
}

impl Sub for Vector {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Neg for Vector {
    type Output = Self;
    fn neg(self) -> Self {
        self * -1.0
    }
}

impl Mul<f64> for Vector {
    type Output = Self;
    fn mul(self, factor: f64) -> Self {
        Self {
            u: self.u * factor,
            v: self.v * factor,
        }
    }
}
