//! The noise of the energies, told from curvature by differences of high order.

/// Orders of the differences that the noise is read from.
const NOISE_ORDERS: std::ops::RangeInclusive<usize> = 4..=10;
/// Levels of successive orders that agree within this factor are a plateau: noise.
const PLATEAU: f64 = 2.0;
/// How many successive orders a plateau needs.
const PLATEAU_ORDERS: usize = 4;

/// Points of the highest difference.
const MOST_POINTS: usize = *NOISE_ORDERS.end() + 1;

/// Divided differences over the first points, a size for each order asked for.
///
/// Their weights 1/Π (r_i − r_k) grow point by point; brought to unit norm, independent errors of the
/// values come through with their own size.
fn differences(r: &[f64], e: &[f64], mut sized: impl FnMut(usize, f64)) {
    let scale = 4.0 / (r[r.len() - 1] - r[0]); // keeps the products near one
    let mut weights = [1.0; MOST_POINTS];
    for (points, x) in r.iter().enumerate() {
        let mut new = 1.0;
        for (weight, earlier) in weights.iter_mut().zip(&r[..points]) {
            let reciprocal = 1.0 / ((earlier - x) * scale);
            *weight *= reciprocal;
            new *= -reciprocal;
        }
        weights[points] = new;
        if NOISE_ORDERS.contains(&points) {
            let weights = &weights[..=points];
            let norm = weights.iter().map(|w| w * w).sum::<f64>().sqrt();
            sized(points, (weights.iter().zip(e).map(|(w, e)| w * e).sum::<f64>() / norm).abs());
        }
    }
}

/// Standard deviation of the noise of the energies, where it can be told from curvature.
///
/// Differences of rising order, with weights of unit norm, fall with the order for a smooth curve but
/// stay at σ for independent errors. The noise is the level of the first plateau over four orders,
/// each level the median of |differences|/0.6745.
pub fn noise_hartree(r_bohr: &[f64], energy_hartree: &[f64]) -> Option<f64> {
    let n = r_bohr.len();
    let mut sizes: Vec<Vec<f64>> =
        NOISE_ORDERS.take_while(|order| n >= order + 5).map(|_| Vec::new()).collect();
    for start in 0..n {
        let end = (start + MOST_POINTS).min(n);
        differences(&r_bohr[start..end], &energy_hartree[start..end], |order, size| {
            if let Some(sizes) = sizes.get_mut(order - NOISE_ORDERS.start()) {
                sizes.push(size);
            }
        });
    }
    let level = |mut sizes: Vec<f64>| {
        let middle = sizes.len() / 2;
        *sizes.select_nth_unstable_by(middle, f64::total_cmp).1 / 0.674_5
    };
    let levels: Vec<f64> = sizes.into_iter().map(level).collect();
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
