//! Complex numbers of alternating current: the few operations that impedances and powers need.

use std::ops::{Add, Div, Mul};

/// A complex number; powers are P + jQ with Q positive for a lagging load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Complex {
    /// Real part.
    pub re: f64,
    /// Imaginary part.
    pub im: f64,
}

impl Complex {
    /// Magnitude.
    pub(crate) fn abs(self) -> f64 {
        self.re.hypot(self.im)
    }
    /// The conjugate.
    pub(crate) fn conj(self) -> Self {
        Self { re: self.re, im: -self.im }
    }
    /// The angle in degrees.
    pub(crate) fn degrees(self) -> f64 {
        self.im.atan2(self.re).to_degrees()
    }
    /// The number times a plain factor.
    pub(crate) fn scaled(self, by: f64) -> Self {
        Self { re: self.re * by, im: self.im * by }
    }
}

impl Add for Complex {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self { re: self.re + other.re, im: self.im + other.im }
    }
}

impl Mul for Complex {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self {
            re: self.re * other.re - self.im * other.im,
            im: self.re * other.im + self.im * other.re,
        }
    }
}

impl Div for Complex {
    type Output = Self;
    fn div(self, other: Self) -> Self {
        let square = other.re * other.re + other.im * other.im;
        (self * other.conj()).scaled(1.0 / square)
    }
}
