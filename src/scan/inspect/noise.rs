//! The noise of the energies, told from curvature by differences of high order.

/// Orders of the differences that the noise is read from.
const NOISE_ORDERS: std::ops::RangeInclusive<usize> = 4..=10;
/// Levels of successive orders that agree within this factor are a plateau: noise.
const PLATEAU: f64 = 2.0;
/// How many successive orders a plateau needs.
const PLATEAU_ORDERS: usize = 4;

/// Weights of the divided difference over the abscissae, with unit norm, so that independent errors of
/// the values come through with their own size.
fn difference_weights(r: &[f64]) -> Vec<f64> {
    let scale = (r[r.len() - 1] - r[0]) / 4.0; // keeps the products near one
    let weight = |i: usize| {
        let others = r.iter().enumerate().filter(|(k, _)| *k != i);
        1.0 / others.map(|(_, x)| (r[i] - x) / scale).product::<f64>()
    };
    let mut weights: Vec<f64> = (0..r.len()).map(weight).collect();
    let norm = weights.iter().map(|w| w * w).sum::<f64>().sqrt();
    weights.iter_mut().for_each(|w| *w /= norm);
    weights
}

fn difference(r: &[f64], e: &[f64]) -> f64 {
    difference_weights(r).iter().zip(e).map(|(w, e)| w * e).sum()
}

/// Standard deviation of the noise of the energies, where it can be told from curvature.
///
/// Differences of rising order, with weights of unit norm, fall with the order for a smooth curve but
/// stay at σ for independent errors. The noise is the level of the first plateau over four orders,
/// each level the median of |differences|/0.6745.
pub fn noise_hartree(r_bohr: &[f64], energy_hartree: &[f64]) -> Option<f64> {
    let n = r_bohr.len();
    let levels: Vec<f64> = NOISE_ORDERS
        .take_while(|order| n >= order + 5)
        .map(|order| {
            let windows = r_bohr.windows(order + 1).zip(energy_hartree.windows(order + 1));
            let mut sizes: Vec<f64> = windows.map(|(r, e)| difference(r, e).abs()).collect();
            sizes.sort_by(f64::total_cmp);
            sizes[sizes.len() / 2] / 0.674_5
        })
        .collect();
    levels.windows(PLATEAU_ORDERS).find_map(|plateau| {
        let (low, high) = plateau.iter().fold((f64::INFINITY, 0.0_f64), |(l, h), &x| (l.min(x), h.max(x)));
        (high > 0.0 && high <= PLATEAU * low).then(|| plateau.iter().sum::<f64>() / plateau.len() as f64)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Noise of a known size (fixed pattern, invented) is measured within a factor of two; a smooth curve has none.
    #[test]
    fn noise_is_told_from_curvature() {
        // Invented: a Morse-like curve on an uneven grid.
        let r: Vec<f64> =
            (0..60).map(|i| 1.5 + 0.05 * f64::from(i) + 0.01 * (f64::from(i) * 2.3).sin()).collect();
        let clean: Vec<f64> = r.iter().map(|r| 0.2 * (1.0 - (-1.1 * (r - 2.2)).exp()).powi(2)).collect();
        assert_eq!(noise_hartree(&r, &clean), None);
        for sigma in [1e-8, 1e-6] {
            let noisy = |(i, e): (usize, &f64)| {
                let spread = ((i * i) as f64 * 0.618_033_988_75 + 0.3 * i as f64).fract();
                e + sigma * 3.0_f64.sqrt() * (2.0 * spread - 1.0)
            };
            let e: Vec<f64> = clean.iter().enumerate().map(noisy).collect();
            let found = noise_hartree(&r, &e).unwrap();
            assert!((0.5..2.0).contains(&(found / sigma)), "{found} {sigma}");
        }
        assert_eq!(noise_hartree(&r[..8], &clean[..8]), None);
    }
}
