//! Probabilities of Student's t.

/// Probability that |t| of a Student distribution with ν degrees of freedom exceeds the value.
///
/// Finite trigonometric sums for whole ν [Abramowitz and Stegun 1964, 26.7.3 and 26.7.4, from memory].
pub(super) fn two_sided(t: f64, nu: usize) -> f64 {
    let nu = nu.max(1);
    let theta = (t.abs() / (nu as f64).sqrt()).atan();
    let (sin, cos) = theta.sin_cos();
    let inside = if nu == 1 {
        theta
    } else {
        // Sum of products: cos θ (1 + 2/3 cos² θ + ...) for odd ν, sin θ (1 + 1/2 cos² θ + ...) for even.
        let odd = nu % 2 == 1;
        let (mut term, mut sum) = if odd { (cos, cos) } else { (1.0, 1.0) };
        let mut k = if odd { 2.0 } else { 1.0 };
        while k + 1.0 <= nu as f64 - 2.0 {
            term *= k / (k + 1.0) * cos * cos;
            sum += term;
            k += 2.0;
        }
        if odd { theta + sin * sum } else { sin * sum }
    };
    let inside = if nu % 2 == 1 { inside * std::f64::consts::FRAC_2_PI } else { inside };
    (1.0 - inside).max(0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Quantiles of printed tables of Student's distribution (from memory).
    #[test]
    fn tabulated_quantiles() {
        for (nu, t, p) in [
            (1, 12.706, 0.05),
            (2, 4.303, 0.05),
            (3, 3.182, 0.05),
            (4, 2.776, 0.05),
            (5, 4.032, 0.01),
            (10, 2.228, 0.05),
            (15, 2.947, 0.01),
            (30, 3.646, 0.001),
        ] {
            assert!((two_sided(t, nu) / p - 1.0).abs() < 2e-3, "{nu} {t}: {}", two_sided(t, nu));
        }
        assert!((two_sided(0.0, 7) - 1.0).abs() < 1e-15);
        assert!(two_sided(1e9, 8) < 1e-12);
    }
}
