//! Functions of mathematics that the standard library lacks.

use std::f64::consts::TAU;

/// ln Γ(x) for x > 0 by Stirling's series above 15, shifted up where x is smaller [Abramowitz & Stegun 1964, 6.1.41].
pub fn log_gamma(x: f64) -> f64 {
    let (mut x, mut shift) = (x, 0.0);
    while x < 15.0 {
        shift -= x.ln();
        x += 1.0;
    }
    let q = 1.0 / (x * x);
    let series = (1.0 / 12.0 - q * (1.0 / 360.0 - q * (1.0 / 1260.0 - q * (1.0 / 1680.0 - q / 1188.0)))) / x;
    shift + (x - 0.5) * x.ln() - x + 0.5 * TAU.ln() + series
}

/// Γ(x) for 0 < x < 170.
pub fn gamma(x: f64) -> f64 {
    log_gamma(x).exp()
}

/// ψ(x) = d ln Γ/dx and ψ′(x) for x > 0, by their asymptotic series above 15 [Abramowitz & Stegun 1964, 6.3.18 and
/// 6.4.12], shifted up where x is smaller.
pub fn digamma_and_trigamma(x: f64) -> (f64, f64) {
    let (mut x, mut first, mut second) = (x, 0.0, 0.0);
    while x < 15.0 {
        first -= 1.0 / x;
        second += 1.0 / (x * x);
        x += 1.0;
    }
    let q = 1.0 / (x * x);
    let digamma = x.ln()
        - 0.5 / x
        - q * (1.0 / 12.0 - q * (1.0 / 120.0 - q * (1.0 / 252.0 - q * (1.0 / 240.0 - q / 132.0))));
    let trigamma = 1.0 / x
        + 0.5 * q
        + q / x * (1.0 / 6.0 - q * (1.0 / 30.0 - q * (1.0 / 42.0 - q * (1.0 / 30.0 - q * 5.0 / 66.0))));
    (first + digamma, second + trigamma)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::PI;

    #[test]
    fn gamma_is_that_of_factorials_and_of_one_half() {
        let factorial: f64 = (1..=20).map(f64::from).product();
        assert!((log_gamma(21.0) - factorial.ln()).abs() < 1e-13);
        assert!((log_gamma(0.5) - 0.5 * PI.ln()).abs() < 1e-14);
        assert!(log_gamma(1.0).abs() < 1e-14 && log_gamma(2.0).abs() < 1e-14);
        for (x, want) in [(0.5, PI.sqrt()), (1.5, 0.5 * PI.sqrt()), (2.0, 1.0), (5.0, 24.0)] {
            assert!((gamma(x) / want - 1.0).abs() < 1e-13, "{x}");
        }
    }

    /// ψ(1) = −γ, ψ(½) = −γ − 2 ln 2, ψ′(1) = π²/6, ψ′(½) = π²/2 [Abramowitz & Stegun 1964, 6.3.2, 6.3.3, 6.4.2, 6.4.4]
    /// and ψ(x + 1) = ψ(x) + 1/x across the seam of the series.
    #[test]
    fn digamma_and_trigamma_have_their_known_values() {
        const EULER: f64 = 0.577_215_664_901_532_9;
        let (first, second) = digamma_and_trigamma(1.0);
        assert!((first + EULER).abs() < 1e-14 && (second - PI * PI / 6.0).abs() < 1e-14);
        let (first, second) = digamma_and_trigamma(0.5);
        assert!((first + EULER + 2.0 * 2_f64.ln()).abs() < 1e-14 && (second - PI * PI / 2.0).abs() < 1e-14);
        for x in [0.01, 3.3, 14.5, 700.0] {
            let (low, high) = (digamma_and_trigamma(x), digamma_and_trigamma(x + 1.0));
            assert!((high.0 - low.0 - 1.0 / x).abs() < 1e-13, "{x}");
            assert!((low.1 - high.1 - 1.0 / (x * x)).abs() < 1e-11, "{x}");
        }
    }
}
