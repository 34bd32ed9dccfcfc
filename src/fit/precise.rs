//! Numbers kept as an unevaluated sum of two doubles (about 32 digits), for residuals that cancel.
//!
//! Error-free sum and product of T. J. Dekker, Numer. Math. 18, 224 (1971); the split keeps them free
//! of a fused multiply, so that every platform gives the same bits.

/// hi + lo with |lo| at most half a unit in the last place of hi.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Precise {
    /// The nearest double.
    pub hi: f64,
    /// The rest.
    pub lo: f64,
}

fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    let shadow = sum - a;
    (sum, (a - (sum - shadow)) + (b - shadow))
}

fn split(a: f64) -> (f64, f64) {
    // 2²⁷ + 1 halves the 53 bits of a double.
    let c = 134_217_729.0 * a;
    let hi = c - (c - a);
    (hi, a - hi)
}

fn two_product(a: f64, b: f64) -> (f64, f64) {
    let product = a * b;
    let ((a_hi, a_lo), (b_hi, b_lo)) = (split(a), split(b));
    (product, ((a_hi * b_hi - product) + a_hi * b_lo + a_lo * b_hi) + a_lo * b_lo)
}

impl Precise {
    /// A double as it is.
    pub const fn new(value: f64) -> Self {
        Self { hi: value, lo: 0.0 }
    }

    /// The sum.
    pub fn plus(self, other: Self) -> Self {
        let (hi, error) = two_sum(self.hi, other.hi);
        let (hi, lo) = two_sum(hi, error + (self.lo + other.lo));
        Self { hi, lo }
    }

    /// The product.
    pub fn times(self, other: Self) -> Self {
        let (hi, error) = two_product(self.hi, other.hi);
        let (hi, lo) = two_sum(hi, error + (self.hi * other.lo + self.lo * other.hi));
        Self { hi, lo }
    }

    /// The negative.
    pub const fn negative(self) -> Self {
        Self { hi: -self.hi, lo: -self.lo }
    }

    /// The square root, by one Newton step from the double root; zero for zero, NaN below.
    pub fn sqrt(self) -> Self {
        let root = self.hi.sqrt();
        if root == 0.0 {
            return Self::new(root);
        }
        let left = self.plus(Self::new(root).times(Self::new(-root)));
        let (hi, lo) = two_sum(root, left.hi / (2.0 * root));
        Self { hi, lo }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keeps_what_a_double_drops() {
        let third = 1.0 / 3.0;
        // 3 · fl(1/3) misses 1 by exactly 2⁻⁵⁴.
        let left = Precise::new(3.0).times(Precise::new(third)).plus(Precise::new(-1.0));
        assert_eq!(left.hi, -(2f64.powi(-54)));
        let sum = Precise::new(1e20).plus(Precise::new(1.0)).plus(Precise::new(-1e20));
        assert_eq!(sum.hi, 1.0);
        let two = Precise::new(2.0).sqrt();
        assert!(two.times(two).plus(Precise::new(-2.0)).hi.abs() < 1e-31);
    }
}
