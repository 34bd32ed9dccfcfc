//! Sums and rotations over short rows, written in two lanes so that the machine can work on two numbers at once.

use std::ops::{Add, Mul};

/// Two numbers.
#[derive(Clone, Copy)]
pub(super) struct Pair([f64; 2]);

impl Pair {
    #[inline(always)]
    pub const fn new(numbers: [f64; 2]) -> Self {
        Self(numbers)
    }
    /// The same number twice.
    #[inline(always)]
    pub const fn both(number: f64) -> Self {
        Self([number; 2])
    }
    /// The sum of the two.
    #[inline(always)]
    pub fn sum(self) -> f64 {
        self.0[0] + self.0[1]
    }
}

impl Add for Pair {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: Self) -> Self {
        Self([self.0[0] + other.0[0], self.0[1] + other.0[1]])
    }
}

impl Mul for Pair {
    type Output = Self;
    #[inline(always)]
    fn mul(self, other: Self) -> Self {
        Self([self.0[0] * other.0[0], self.0[1] * other.0[1]])
    }
}

/// Adds `amount` times `row` to `sum`; equal lengths.
#[inline(always)]
pub(super) fn add_row(sum: &mut [f64], amount: f64, row: &[f64]) {
    for (s, r) in sum.iter_mut().zip(row) {
        *s += amount * r;
    }
}

/// Σ a b in two independent sums.
#[inline(always)]
pub(super) fn pair_dot(a: &[f64], b: &[f64]) -> f64 {
    let (pairs_a, rest_a) = a.as_chunks::<2>();
    let (pairs_b, rest_b) = b.as_chunks::<2>();
    let mut sum = Pair::both(0.0);
    for (x, y) in pairs_a.iter().zip(pairs_b) {
        sum = sum + Pair::new(*x) * Pair::new(*y);
    }
    let rest: f64 = rest_a.iter().zip(rest_b).map(|(x, y)| x * y).sum();
    sum.sum() + rest
}

/// Turns two rows into c x − s y and s x + c y.
#[inline(always)]
pub(super) fn rotate(x: &mut [f64], y: &mut [f64], c: f64, s: f64) {
    for (x, y) in x.iter_mut().zip(y) {
        (*x, *y) = (c * *x - s * *y, s * *x + c * *y);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the plain formulas, odd lengths included (invented numbers).
    #[test]
    fn pairs_do_what_single_numbers_do() {
        for n in [1, 2, 7, 13] {
            let a: Vec<f64> = (0..n).map(|i| (i as f64 + 0.3).sin()).collect();
            let b: Vec<f64> = (0..n).map(|i| (i as f64 * 1.7).cos()).collect();
            let plain: f64 = a.iter().zip(&b).map(|(x, y)| x * y).sum();
            assert!((pair_dot(&a, &b) - plain).abs() < 1e-14);
            let mut sum = a.clone();
            add_row(&mut sum, 0.7, &b);
            let (mut x, mut y) = (a.clone(), b.clone());
            rotate(&mut x, &mut y, 0.6, 0.8);
            for i in 0..n {
                assert_eq!(sum[i], a[i] + 0.7 * b[i]);
                assert_eq!((x[i], y[i]), (0.6 * a[i] - 0.8 * b[i], 0.8 * a[i] + 0.6 * b[i]));
            }
        }
    }
}
