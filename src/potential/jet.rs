//! Truncated Taylor series: a value with its first four derivatives, carried through arithmetic.
//!
//! A family written once in this arithmetic has derivatives that are exact to rounding. The entries
//! are Taylor coefficients f⁽ⁿ⁾/n!, so that a product is a plain Cauchy product.

use std::ops::{Add, Mul, Neg, Sub};

/// f(r + h) = Σ `0[n]` hⁿ up to h⁴.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Jet(pub [f64; 5]);

impl Jet {
    /// A constant.
    pub const fn constant(value: f64) -> Self {
        Self([value, 0.0, 0.0, 0.0, 0.0])
    }

    /// The independent variable at `value`.
    pub const fn variable(value: f64) -> Self {
        Self([value, 1.0, 0.0, 0.0, 0.0])
    }

    /// `[f, f′, f″, f‴, f⁗]`.
    pub fn derivatives(self) -> [f64; 5] {
        let [a, b, c, d, e] = self.0;
        [a, b, 2.0 * c, 6.0 * d, 24.0 * e]
    }

    /// The same function times a number.
    pub fn scaled(self, factor: f64) -> Self {
        Self(self.0.map(|c| c * factor))
    }

    /// exp(f), from g′ = f′ g.
    pub fn exp(self) -> Self {
        let f = self.0;
        let mut g = [f[0].exp(), 0.0, 0.0, 0.0, 0.0];
        for n in 1..5 {
            g[n] = (1..=n).map(|k| k as f64 * f[k] * g[n - k]).sum::<f64>() / n as f64;
        }
        Self(g)
    }

    /// 1/f, from f g = 1.
    pub fn recip(self) -> Self {
        let f = self.0;
        let mut g = [1.0 / f[0], 0.0, 0.0, 0.0, 0.0];
        for n in 1..5 {
            g[n] = -(1..=n).map(|k| f[k] * g[n - k]).sum::<f64>() * g[0];
        }
        Self(g)
    }

    /// fⁿ for a whole n ≥ 0.
    pub fn powi(self, n: u32) -> Self {
        (0..n).fold(Self::constant(1.0), |product, _| product * self)
    }

    /// P(f) from the Taylor coefficients of P at `self.0[0]`.
    pub fn compose(self, outer: [f64; 5]) -> Self {
        let mut step = self;
        step.0[0] = 0.0;
        outer.iter().rev().fold(Self::constant(0.0), |sum, &c| sum * step + Self::constant(c))
    }
}

impl Add for Jet {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self(std::array::from_fn(|n| self.0[n] + other.0[n]))
    }
}

impl Sub for Jet {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        Self(std::array::from_fn(|n| self.0[n] - other.0[n]))
    }
}

impl Neg for Jet {
    type Output = Self;
    fn neg(self) -> Self {
        self.scaled(-1.0)
    }
}

impl Mul for Jet {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self(std::array::from_fn(|n| (0..=n).map(|k| self.0[k] * other.0[n - k]).sum()))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against closed forms: exp(2r), 1/r, r³ and cos-like composition through its Taylor coefficients.
    #[test]
    fn arithmetic_gives_the_textbook_derivatives() {
        let r = 1.3_f64;
        let jet = Jet::variable(r);
        let exp = jet.scaled(2.0).exp().derivatives();
        let recip = jet.recip().derivatives();
        let cube = jet.powi(3).derivatives();
        let mut factorial = 1.0;
        for n in 0..5 {
            if n > 0 {
                factorial *= -(n as f64);
            }
            let want = 2f64.powi(n) * (2.0 * r).exp();
            assert!((exp[n as usize] / want - 1.0).abs() < 1e-15);
            let want = factorial / r.powi(n + 1);
            assert!((recip[n as usize] / want - 1.0).abs() < 1e-14);
        }
        let want = [r.powi(3), 3.0 * r * r, 6.0 * r, 6.0, 0.0];
        assert!(cube.iter().zip(want).all(|(a, b)| (a - b).abs() < 1e-14));
        // sin(r²) has the fourth derivative (16 r⁴ − 12) sin r² − 48 r² cos r².
        let u = r * r;
        let taylor = [u.sin(), u.cos(), -u.sin() / 2.0, -u.cos() / 6.0, u.sin() / 24.0];
        let fourth = (jet * jet).compose(taylor).derivatives()[4];
        let want = (16.0 * u * u - 12.0) * u.sin() - 48.0 * u * u.cos();
        assert!((fourth - want).abs() < 1e-12);
    }
}
