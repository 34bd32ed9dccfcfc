//! Many fits in a row: the same least squares as [`super::fit`] for polynomials in x and Morse functions, without residuals
//! in twice the working precision, full covariances, or a new piece of memory at each step.
//!
//! Agreement with the careful fits to eight digits and more, at a small part of their cost. Where a case is not plain, the
//! answer is none and the careful fit decides.

mod morse;
mod polynomial;

use super::qr::Qr;
use super::statistics::{MISFIT_AUTOCORRELATION, aicc, lag_one_autocorrelation, rms_and_largest};
use super::window_study::{ConstantsOf, WindowNumbers};
use super::{FitPoint, Variance};
use crate::estimate::{ErrorSource, Estimate};
use crate::potential::curve::LocalDerivatives;
use polynomial::MOST_COEFFICIENTS;

/// Below this condition the careful fit is asked instead.
const WELL_CONDITIONED: f64 = 1e-9;

/// The points of one window and the storage for their fits.
pub(crate) struct QuickFits {
    /// Bond lengths in bohr, ascending.
    r_bohr: Vec<f64>,
    /// Energies above the lowest one, in hartree.
    energy_hartree: Vec<f64>,
    weight: Vec<f64>,
    roots: Vec<f64>,
    /// That lowest energy.
    zero_hartree: f64,
    /// Whether every weight is above zero.
    plain: bool,
    r_e_bohr: f64,
    variance: Variance,
    residuals: Vec<f64>,
    powers: polynomial::Powers,
    qr: Qr,
}

/// What a fitted function is like at its minimum, and how that moves with its `columns` parameters.
struct AtMinimum<'a> {
    /// r_e, V″, V‴, V⁗ in atomic units.
    values: [f64; 4],
    /// Their derivatives by the parameters of the factorised Jacobian.
    gradients: [[f64; MOST_COEFFICIENTS]; 4],
    columns: usize,
    qr: &'a Qr,
}

impl QuickFits {
    pub fn new(r_e_bohr: f64, variance: Variance) -> Self {
        Self {
            r_bohr: Vec::new(),
            energy_hartree: Vec::new(),
            weight: Vec::new(),
            roots: Vec::new(),
            zero_hartree: 0.0,
            plain: false,
            r_e_bohr,
            variance,
            residuals: Vec::new(),
            powers: polynomial::Powers::empty(),
            qr: Qr::empty(),
        }
    }

    /// Takes the points of a window, for polynomials up to `highest_degree`.
    pub fn take(&mut self, points: &[FitPoint], highest_degree: usize) {
        self.zero_hartree = points.iter().map(|q| q.energy_hartree).fold(f64::INFINITY, f64::min);
        let lists = [&mut self.r_bohr, &mut self.energy_hartree, &mut self.weight, &mut self.roots];
        lists.into_iter().for_each(Vec::clear);
        self.r_bohr.extend(points.iter().map(|q| q.r_bohr));
        self.energy_hartree.extend(points.iter().map(|q| q.energy_hartree - self.zero_hartree));
        self.weight.extend(points.iter().map(|q| q.weight));
        self.roots.extend(self.weight.iter().map(|w| w.sqrt()));
        self.plain = points.len() > 3 && self.weight.iter().all(|w| *w > 0.0);
        if self.plain {
            self.plain = self.powers.prepare(
                &self.r_bohr,
                &self.energy_hartree,
                &self.roots,
                self.r_e_bohr,
                highest_degree,
            );
        }
    }
}

/// Numbers from the unweighted residuals (ascending in r) and from what is known at the minimum.
fn numbers(
    residuals: &[f64],
    weight: &[f64],
    variance: Variance,
    at: &AtMinimum<'_>,
    constants: ConstantsOf<'_>,
) -> WindowNumbers {
    let (n, p) = (residuals.len(), at.columns);
    let square_sum: f64 = residuals.iter().zip(weight).map(|(d, w)| w * d * d).sum();
    let scale = match variance {
        Variance::FromResiduals => square_sum / (n - p) as f64,
        Variance::Declared => 1.0,
    };
    let misfit = lag_one_autocorrelation(residuals).is_some_and(|c| c > MISFIT_AUTOCORRELATION);
    let source = match (misfit, variance) {
        (true, _) => ErrorSource::Misfit,
        (false, Variance::Declared) => ErrorSource::Noise,
        (false, Variance::FromResiduals) => ErrorSource::Fit,
    };
    // Covariance of the four values: s² W Wᵀ with W = G R⁻¹ row by row.
    let mut rows = at.gradients;
    rows.iter_mut().for_each(|row| at.qr.forward_substitute(&mut row[..p]));
    let product = |i: usize, j: usize| rows[i][..p].iter().zip(&rows[j]).map(|(a, b)| a * b).sum::<f64>();
    let covariance: [[f64; 4]; 4] =
        std::array::from_fn(|i| std::array::from_fn(|j| scale * product(i.min(j), i.max(j))));
    let estimate = |value: f64, gradient: [f64; 4]| {
        let along = |i: usize| covariance[i].iter().zip(gradient).map(|(c, g)| c * g).sum::<f64>();
        let square: f64 = gradient.iter().enumerate().map(|(i, g)| g * along(i)).sum();
        Estimate::with_error(value, square.max(0.0).sqrt(), source)
    };
    let (derived, slopes) = derived(at.values, constants);
    let constant = |c: usize| {
        let value = derived?[c];
        value.is_finite().then(|| estimate(value, slopes.map(|slope| slope[c])))
    };
    WindowNumbers {
        r_e_bohr: estimate(at.values[0], [1.0, 0.0, 0.0, 0.0]),
        force_constant_hartree_per_bohr2: estimate(at.values[1], [0.0, 1.0, 0.0, 0.0]),
        omega_e_per_cm: constant(0),
        omega_e_x_e_per_cm: if p > 3 { constant(1) } else { None },
        rms_residual_hartree: rms_and_largest(residuals).0,
        aicc: aicc(square_sum, n, p),
    }
}

/// ω_e and ω_e x_e, and their derivatives by r_e, V″, V‴, V⁗ by central differences.
fn derived(values: [f64; 4], constants: ConstantsOf<'_>) -> (Option<[f64; 2]>, [[f64; 2]; 4]) {
    let of = |v: [f64; 4]| constants(&LocalDerivatives::new(v[0], [0.0, 0.0, v[1], v[2], v[3]]));
    let mut slopes = [[f64::NAN; 2]; 4];
    let centre = of(values);
    if centre.is_some() {
        for (i, slope) in slopes.iter_mut().enumerate() {
            // The cube root of the rounding unit balances rounding and curvature.
            let step = 6e-6 * values[i].abs().max(1e-3 * values[1]);
            let moved = |sign: f64| {
                let mut v = values;
                v[i] += sign * step;
                of(v).unwrap_or([f64::NAN; 2])
            };
            let (up, down) = (moved(1.0), moved(-1.0));
            *slope = [0, 1].map(|c| (up[c] - down[c]) / (2.0 * step));
        }
    }
    (centre, slopes)
}
