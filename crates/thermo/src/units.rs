//! Pressure and temperature as types, so that two bare numbers can't be swapped at a public door.

/// A pressure; stored in Pa.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Pressure(f64);

impl Pressure {
    /// From pascals.
    pub const fn from_pa(pa: f64) -> Self {
        Self(pa)
    }

    /// From hectopascals.
    pub const fn from_hpa(hpa: f64) -> Self {
        Self(hpa * 100.0)
    }

    /// In pascals.
    pub const fn pa(self) -> f64 {
        self.0
    }

    /// In hectopascals.
    pub const fn hpa(self) -> f64 {
        self.0 / 100.0
    }
}

/// A temperature or a dew point; stored in K.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Temperature(f64);

impl Temperature {
    /// From kelvins.
    pub const fn from_k(k: f64) -> Self {
        Self(k)
    }

    /// From degrees Celsius.
    pub const fn from_c(c: f64) -> Self {
        Self(c + crate::ZERO_CELSIUS)
    }

    /// From degrees Fahrenheit.
    pub const fn from_f(f: f64) -> Self {
        Self::from_c((f - 32.0) / 1.8)
    }

    /// In kelvins.
    pub const fn k(self) -> f64 {
        self.0
    }

    /// In degrees Celsius.
    pub const fn c(self) -> f64 {
        self.0 - crate::ZERO_CELSIUS
    }

    /// In degrees Fahrenheit.
    pub const fn f(self) -> f64 {
        self.c() * 1.8 + 32.0
    }
}
