//! Forward-mode derivatives for up to nine parameters, so that each model is written once.

use std::ops::{Add, Div, Mul, Neg, Sub};

/// A value and its derivatives by the parameters.
#[derive(Clone, Copy, Debug)]
pub struct Dual {
    pub value: f64,
    pub by: [f64; 9],
}

impl Dual {
    pub fn parameter(value: f64, index: usize) -> Self {
        let mut by = [0.0; 9];
        by[index] = 1.0;
        Self { value, by }
    }

    fn map(self, value: f64, slope: f64) -> Self {
        Self { value, by: self.by.map(|d| d * slope) }
    }

    pub fn exp(self) -> Self {
        let e = self.value.exp();
        self.map(e, e)
    }

    pub fn sin(self) -> Self {
        self.map(self.value.sin(), self.value.cos())
    }

    pub fn cos(self) -> Self {
        self.map(self.value.cos(), -self.value.sin())
    }

    pub fn atan(self) -> Self {
        self.map(self.value.atan(), 1.0 / (1.0 + self.value * self.value))
    }

    /// A power with a variable exponent.
    pub fn pow(self, exponent: Self) -> Self {
        let value = self.value.powf(exponent.value);
        let (base, power) = (exponent.value * self.value.powf(exponent.value - 1.0), value * self.value.ln());
        let by = std::array::from_fn(|j| {
            let by_exponent = if exponent.by[j] == 0.0 { 0.0 } else { power * exponent.by[j] };
            base * self.by[j] + by_exponent
        });
        Self { value, by }
    }
}

impl From<f64> for Dual {
    fn from(value: f64) -> Self {
        Self { value, by: [0.0; 9] }
    }
}

impl<T: Into<Self>> Add<T> for Dual {
    type Output = Self;
    fn add(self, other: T) -> Self {
        let other = other.into();
        Self { value: self.value + other.value, by: std::array::from_fn(|j| self.by[j] + other.by[j]) }
    }
}

impl<T: Into<Self>> Sub<T> for Dual {
    type Output = Self;
    fn sub(self, other: T) -> Self {
        let other = other.into();
        Self { value: self.value - other.value, by: std::array::from_fn(|j| self.by[j] - other.by[j]) }
    }
}

#[expect(clippy::suspicious_arithmetic_impl, reason = "the product rule adds")]
impl<T: Into<Self>> Mul<T> for Dual {
    type Output = Self;
    fn mul(self, other: T) -> Self {
        let other = other.into();
        let by = std::array::from_fn(|j| self.by[j] * other.value + self.value * other.by[j]);
        Self { value: self.value * other.value, by }
    }
}

#[expect(clippy::suspicious_arithmetic_impl, reason = "the quotient rule subtracts and multiplies")]
impl<T: Into<Self>> Div<T> for Dual {
    type Output = Self;
    fn div(self, other: T) -> Self {
        let other = other.into();
        let value = self.value / other.value;
        Self { value, by: std::array::from_fn(|j| (self.by[j] - value * other.by[j]) / other.value) }
    }
}

impl Neg for Dual {
    type Output = Self;
    fn neg(self) -> Self {
        self.map(-self.value, -1.0)
    }
}
