//! Standard errors by resampling the residuals of a fit.

use super::data::Data;
use super::{Fit, FitPoint, families};
use crate::potential::{Model, Potential as _};
use serde::{Deserialize, Serialize};
use thiserror::Error;

/// How the residuals are resampled.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct BootstrapSettings {
    /// Number of resampled scans.
    pub repeats: usize,
    /// Seed of the random numbers: the same seed gives the same errors, bit for bit.
    pub seed: u64,
}

impl Default for BootstrapSettings {
    /// 400 repeats know a standard error to 1/sqrt(800), 3.5 %.
    fn default() -> Self {
        Self { repeats: 400, seed: 1 }
    }
}

impl BootstrapSettings {
    /// More repeats than this are refused: a standard error is known to half a percent then.
    pub const MOST_REPEATS: usize = 20_000;
}

/// Standard errors over the repeats; none where a repeat has no such value.
#[derive(Clone, Debug, PartialEq)]
pub struct Bootstrap {
    /// What was asked.
    pub settings: BootstrapSettings,
    /// Repeats whose fit did not converge; they do not count.
    pub failed: usize,
    /// Of the parameters, in the order of the fit, in atomic units.
    pub parameter_errors: Vec<Option<f64>>,
    /// Of the quantities asked for, in their order and unit.
    pub quantity_errors: Vec<Option<f64>>,
}

/// Why there is no bootstrap.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Error)]
pub enum BootstrapError {
    /// The fit goes through all points.
    #[error("the fit has as many parameters as points, so there are no residuals to resample")]
    NoResiduals,
    /// Too few repeats, or too many.
    #[error("{asked} repeats are not offered; choose from 2 to {most}")]
    Repeats {
        /// Asked for.
        asked: usize,
        /// Most offered.
        most: usize,
    },
    /// Stopped from outside.
    #[error("stopped after {done} repeats")]
    Stopped {
        /// Repeats done.
        done: usize,
    },
    /// Most of the repeats did not converge.
    #[error("{failed} of {repeats} repeats did not converge; widen the window or take fewer parameters")]
    Failed {
        /// Repeats that did not converge.
        failed: usize,
        /// Repeats in all.
        repeats: usize,
    },
}

/// Standard errors of the parameters of `fit` and of `quantities` of its model, by resampled residuals.
///
/// The residuals sqrt(w) d, divided by sqrt(1 − h) (h: leverage) and centred, are drawn with replacement, divided
/// by sqrt(w) and added to the fitted curve; the family is fitted anew from the parameters found. The
/// errors are the standard deviations over the repeats. `points` are those of the fit. Errors follow the
/// residuals even where the weights are declared as 1/σ². Residuals that are smooth misfit are resampled as if they
/// were noise: such errors are no better than those of linear propagation.
///
/// `progress` gets (done, all) after each repeat and stops the work by returning false. Pure: same input, same result.
/// Source: A. C. Davison, D. V. Hinkley, Bootstrap Methods and their Application (1997), section 6.2 (from memory).
///
/// # Errors
/// [`BootstrapError`].
pub fn bootstrap(
    fit: &Fit,
    points: &[FitPoint],
    settings: BootstrapSettings,
    quantities: &dyn Fn(&Model) -> Vec<f64>,
    progress: &mut dyn FnMut(usize, usize) -> bool,
) -> Result<Bootstrap, BootstrapError> {
    let repeats = settings.repeats;
    if !(2..=BootstrapSettings::MOST_REPEATS).contains(&repeats) {
        return Err(BootstrapError::Repeats { asked: repeats, most: BootstrapSettings::MOST_REPEATS });
    }
    let mut data = Data::new(points, 1).map_err(|_| BootstrapError::NoResiduals)?;
    let mut model = fit.model.clone();
    model.shift_energy_hartree(-data.zero_hartree);
    let fitted: Vec<f64> = data.r_bohr.iter().map(|&r| model.energy_hartree(r)).collect();
    let drawn = scaled_residuals(fit, &data, &fitted).ok_or(BootstrapError::NoResiduals)?;
    let mut random = SplitMix(settings.seed);
    let mut parameter_sums = vec![Moments::default(); fit.parameters.len()];
    let mut quantity_sums = vec![Moments::default(); quantities(&fit.model).len()];
    let mut failed = 0;
    for done in 0..repeats {
        for (i, energy) in data.energy_hartree.iter_mut().enumerate() {
            *energy = fitted[i] + drawn[random.below(drawn.len())] / data.weight[i].sqrt();
        }
        if let Some(mut other) = families::refit(&data, &model) {
            other.shift_energy_hartree(data.zero_hartree);
            let values = other.as_parametric().values();
            parameter_sums.iter_mut().zip(&values).for_each(|(sum, v)| sum.add(*v));
            let values = quantities(&other);
            for (k, sum) in quantity_sums.iter_mut().enumerate() {
                sum.add(values.get(k).copied().unwrap_or(f64::NAN));
            }
        } else {
            failed += 1;
        }
        if !progress(done + 1, repeats) {
            return Err(BootstrapError::Stopped { done: done + 1 });
        }
    }
    if 2 * failed > repeats {
        return Err(BootstrapError::Failed { failed, repeats });
    }
    Ok(Bootstrap {
        settings,
        failed,
        parameter_errors: parameter_sums.iter().map(Moments::deviation).collect(),
        quantity_errors: quantity_sums.iter().map(Moments::deviation).collect(),
    })
}

/// sqrt(w) (energy − model)/sqrt(1 − h), centred; none when there is nothing to draw from.
fn scaled_residuals(fit: &Fit, data: &Data, fitted: &[f64]) -> Option<Vec<f64>> {
    let freedom = data.len().checked_sub(fit.parameters.len()).filter(|f| *f > 0)? as f64;
    let weighted: Vec<f64> =
        (0..data.len()).map(|i| data.weight[i].sqrt() * (data.energy_hartree[i] - fitted[i])).collect();
    let residual_variance = weighted.iter().map(|d| d * d).sum::<f64>() / freedom;
    // The band squared is w⁻¹ h times the variance the covariance was scaled with; Σ h = p gives that variance.
    let bands: Vec<f64> =
        data.r_bohr.iter().map(|&r| fit.band_hartree(r).map(|b| b * b)).collect::<Option<_>>()?;
    let trace: f64 = bands.iter().zip(&data.weight).map(|(b, w)| b * w).sum();
    let variance = trace / fit.parameters.len() as f64;
    if !(residual_variance > 0.0 && variance > 0.0) {
        // Exact data: every repeat is the scan itself.
        return Some(vec![0.0; data.len()]);
    }
    let scaled: Vec<f64> = (0..data.len())
        .map(|i| weighted[i] / (1.0 - bands[i] * data.weight[i] / variance).max(1e-6).sqrt())
        .collect();
    let mean = scaled.iter().sum::<f64>() / scaled.len() as f64;
    Some(scaled.iter().map(|d| d - mean).collect())
}

/// Running mean and sum of squares about it (B. P. Welford, Technometrics 4, 419 (1962)).
#[derive(Clone, Copy, Debug, Default)]
struct Moments {
    count: f64,
    mean: f64,
    squares: f64,
}

impl Moments {
    fn add(&mut self, value: f64) {
        self.count += 1.0;
        let before = value - self.mean;
        self.mean += before / self.count;
        self.squares += before * (value - self.mean);
    }

    fn deviation(&self) -> Option<f64> {
        let variance = self.squares / (self.count - 1.0);
        (self.count > 1.0 && variance.is_finite()).then(|| variance.sqrt())
    }
}

/// G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number generators (2014); constants from memory.
struct SplitMix(u64);

impl SplitMix {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// A number from 0 to `count` − 1.
    fn below(&mut self, count: usize) -> usize {
        ((u128::from(self.next()) * count as u128) >> 64) as usize
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::{Family, FitRequest, Variable, Window, fit};
    use crate::potential::Morse;
    use crate::units::LengthUnit;

    const WINDOW: Window = Window { from: 0.5, to: 3.0, unit: LengthUnit::Bohr };

    /// Invented: a Morse scan of 41 points with uniform errors.
    fn noisy() -> Vec<FitPoint> {
        let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
        let mut random = SplitMix(7);
        (0..41)
            .map(|k| {
                let r_bohr = 0.9 + 0.03 * f64::from(k);
                let error = 1e-5 * (random.below(20_001) as f64 / 1e4 - 1.0);
                FitPoint { r_bohr, energy_hartree: morse.energy_hartree(r_bohr) + error, weight: 1.0 }
            })
            .collect()
    }

    /// For residuals that are noise, both roads to the errors meet: 2,000 repeats scatter by 1.6 %, and the
    /// variance of 41 residuals scaled one by one differs by several percent from their common one.
    #[test]
    fn agrees_with_linear_propagation() {
        let points = noisy();
        for request in [FitRequest::plain(Family::Morse), FitRequest::polynomial(9, Variable::X)] {
            let found = fit(request, &points, WINDOW).unwrap();
            let settings = BootstrapSettings { repeats: 2_000, seed: 11 };
            let curvature = |m: &Model| vec![m.derivatives_hartree(m.minimum_bohr())[2], f64::NAN];
            let mut calls = 0;
            let result = bootstrap(&found, &points, settings, &curvature, &mut |done, all| {
                calls += 1;
                assert!(done == calls && all == 2_000);
                true
            })
            .unwrap();
            assert_eq!((calls, result.failed), (2_000, 0));
            for (p, error) in found.parameters.iter().zip(&result.parameter_errors) {
                let ratio = error.unwrap() / p.estimate.std_error.unwrap();
                assert!((ratio - 1.0).abs() < 0.15, "{}: {ratio}", p.name);
            }
            assert!(result.quantity_errors[0].unwrap() > 0.0 && result.quantity_errors[1].is_none());
        }
    }

    #[test]
    fn the_seed_decides_and_the_caller_may_stop() {
        let points = noisy();
        let found = fit(FitRequest::plain(Family::Morse), &points, WINDOW).unwrap();
        let run = |seed| {
            let settings = BootstrapSettings { repeats: 20, seed };
            bootstrap(&found, &points, settings, &|_| Vec::new(), &mut |_, _| true).unwrap()
        };
        assert_eq!(run(3), run(3));
        assert_ne!(run(3).parameter_errors, run(4).parameter_errors);
        let settings = BootstrapSettings::default();
        let stopped = bootstrap(&found, &points, settings, &|_| Vec::new(), &mut |done, _| done < 5);
        assert_eq!(stopped, Err(BootstrapError::Stopped { done: 5 }));
        let none = BootstrapSettings { repeats: 0, seed: 1 };
        assert!(bootstrap(&found, &points, none, &|_| Vec::new(), &mut |_, _| true).is_err());
        let four: Vec<FitPoint> = points.iter().step_by(12).copied().collect();
        let through = fit(FitRequest::plain(Family::Morse), &four, WINDOW).unwrap();
        let none = bootstrap(&through, &four, settings, &|_| Vec::new(), &mut |_, _| true);
        assert_eq!(none, Err(BootstrapError::NoResiduals));
    }
}
