//! What the residuals of a fit say: spread, information criterion, smoothness.

use super::Variance;

/// Covariance s² (Jᵀ W J)⁻¹ with s² = S/(n − p), or s² = 1 where the weights are declared as 1/σ²; none when n = p.
pub(crate) fn covariance(
    unit: &[Vec<f64>],
    weighted_square_sum: f64,
    n: usize,
    variance: Variance,
) -> Option<Vec<Vec<f64>>> {
    let freedom = n.checked_sub(unit.len()).filter(|&f| f > 0)?;
    let variance = match variance {
        Variance::FromResiduals => weighted_square_sum / freedom as f64,
        Variance::Declared => 1.0,
    };
    Some(unit.iter().map(|row| row.iter().map(|u| u * variance).collect()).collect())
}

/// AICc = n ln(S/n) + 2K + 2K(K + 1)/(n − K − 1), K = p + 1 [C. M. Hurvich, C.-L. Tsai, Biometrika 76,
/// 297 (1989)]; none when n ≤ K + 1 or S = 0.
pub(crate) fn aicc(weighted_square_sum: f64, n: usize, p: usize) -> Option<f64> {
    let k = p + 1;
    if n <= k + 1 || weighted_square_sum.is_nan() || weighted_square_sum <= 0.0 {
        return None;
    }
    let (n, k) = (n as f64, k as f64);
    Some(n * (weighted_square_sum / n).ln() + 2.0 * k + 2.0 * k * (k + 1.0) / (n - k - 1.0))
}

/// Root mean square and largest magnitude.
pub(crate) fn rms_and_largest(residuals: &[f64]) -> (f64, f64) {
    let sum: f64 = residuals.iter().map(|d| d * d).sum();
    ((sum / residuals.len() as f64).sqrt(), residuals.iter().fold(0.0, |m, d| m.max(d.abs())))
}

/// Lag-1 autocorrelation Σ d_i d_(i+1) / Σ d_i² of residuals in ascending order of r; none when all are zero.
pub(crate) fn lag_one_autocorrelation(residuals: &[f64]) -> Option<f64> {
    let sum: f64 = residuals.iter().map(|d| d * d).sum();
    let neighbours: f64 = residuals.windows(2).map(|pair| pair[0] * pair[1]).sum();
    (sum > 0.0).then(|| neighbours / sum)
}

/// Above this autocorrelation residuals count as misfit, not noise.
pub(crate) const MISFIT_AUTOCORRELATION: f64 = 0.5;

/// J Σ Jᵀ, symmetric to the last bit.
pub(crate) fn propagate(jacobian: &[Vec<f64>], covariance: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let half: Vec<Vec<f64>> = jacobian
        .iter()
        .map(|row| (0..row.len()).map(|k| row.iter().zip(covariance).map(|(j, c)| j * c[k]).sum()).collect())
        .collect();
    let entry = |i: usize, j: usize| half[i].iter().zip(&jacobian[j]).map(|(h, j)| h * j).sum::<f64>();
    (0..jacobian.len()).map(|i| (0..jacobian.len()).map(|j| entry(i.max(j), i.min(j))).collect()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn aicc_is_null_where_it_has_no_meaning() {
        assert!(aicc(1.0, 5, 3).is_none() && aicc(0.0, 50, 3).is_none() && aicc(f64::NAN, 50, 3).is_none());
        // n = 10, S = 10, K = 4: 0 + 8 + 40/5.
        assert!((aicc(10.0, 10, 3).unwrap() - 16.0).abs() < 1e-14);
    }

    #[test]
    fn smooth_residuals_correlate_and_alternating_ones_do_not() {
        let smooth: Vec<f64> = (0..40).map(|k| (f64::from(k) * 0.2).sin()).collect();
        let rough: Vec<f64> = (0..40).map(|k| if k % 2 == 0 { 1.0 } else { -1.0 }).collect();
        assert!(lag_one_autocorrelation(&smooth).unwrap() > 0.9);
        assert!(lag_one_autocorrelation(&rough).unwrap() < -0.9);
        assert!(lag_one_autocorrelation(&[0.0; 4]).is_none());
    }

    #[test]
    fn propagation_is_the_matrix_product() {
        let covariance = [vec![2.0, 0.5], vec![0.5, 1.0]];
        let out = propagate(&[vec![1.0, 1.0], vec![0.0, 3.0]], &covariance);
        assert_eq!(out, [vec![4.0, 4.5], vec![4.5, 9.0]]);
    }
}
