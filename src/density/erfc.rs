//! The complementary error function, which the density of the harmonic ground state integrates to.

use std::f64::consts::PI;

/// From here on the continued fraction converges fast.
const FAR: f64 = 2.0;

/// erfc(x) = 2/√π ∫ₓ^∞ e^(−t²) dt, to 1e-15 absolute and, for x ≥ 2, to 1e-14 relative.
///
/// Below 2 the series erf(x) = 2/√π e^(−x²) Σ 2ⁿ x^(2n+1)/(2n+1)!!, beyond it the continued fraction
/// e^(−x²)/√π · 1/(x + ½/(x + 1/(x + 3⁄2/(x + …)))) [Abramowitz & Stegun 1964, 7.1.6 and 7.1.14].
pub(super) fn erfc(x: f64) -> f64 {
    if x < 0.0 {
        return 2.0 - erfc(-x);
    }
    let gauss = (-x * x).exp() / PI.sqrt();
    if x < FAR {
        let (mut term, mut sum, mut n) = (x, 0.0, 0.0);
        while term > 1e-18 * sum {
            sum += term;
            n += 1.0;
            term *= 2.0 * x * x / (2.0 * n + 1.0);
        }
        return 1.0 - 2.0 * gauss * sum;
    }
    // From the inside out; at x = 2 a depth of 100 leaves an error below rounding.
    let fraction = (1..=100).rev().fold(x, |below, k| x + 0.5 * f64::from(k) / below);
    gauss / fraction
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Abramowitz & Stegun (1964), tables 7.1 and 7.3 (from memory; erfc(1) also in reference/harmonic-facts.json).
    #[test]
    fn tabulated_values() {
        for (x, value) in [
            (0.0, 1.0),
            (0.5, 1.0 - 0.520_499_877_813_046_5),
            (1.0, 0.157_299_207_050_285_13),
            (2.0, 0.004_677_734_981_047_266),
            (3.0, 2.209_049_699_858_544e-5),
            (-1.0, 2.0 - 0.157_299_207_050_285_13),
        ] {
            assert!((erfc(x) - value).abs() <= 4e-16 + 1e-14 * value, "{x}: {} {value}", erfc(x));
        }
    }

    /// Both ways meet.
    #[test]
    fn series_and_fraction_meet() {
        let (below, above) = (erfc(FAR - 1e-9), erfc(FAR));
        let slope = 2.0 / PI.sqrt() * (-FAR * FAR).exp();
        assert!((below - above - 1e-9 * slope).abs() < 1e-15);
    }
}
