//! Polynomials in x for many fits in a row: plain QR, the minimum by Newton's method, errors of few quantities.
//!
//! The same least squares as [`super::polynomial`], without its residuals in twice the working precision, its
//! search for every minimum and its full covariance: agreement to some ten digits at a tenth of the cost.

use super::polynomial::{Centre, about_minimum, taylor};
use super::qr::Qr;
use super::statistics::{MISFIT_AUTOCORRELATION, aicc, lag_one_autocorrelation, rms_and_largest};
use super::window_study::{ConstantsOf, WindowNumbers};
use super::{FitPoint, Variance};
use crate::estimate::{ErrorSource, Estimate};
use crate::potential::curve::LocalDerivatives;

/// Below this condition the careful fit is asked instead.
const WELL_CONDITIONED: f64 = 1e-9;

/// The numbers of a polynomial of `degree` through `points`; none when the careful fit must decide: fewer spare points
/// than an error needs, a number that is not finite, no minimum near `r_e_bohr`, dependent columns.
pub(crate) fn polynomial_numbers(
    points: &[FitPoint],
    r_e_bohr: f64,
    degree: usize,
    variance: Variance,
    constants: ConstantsOf<'_>,
) -> Option<WindowNumbers> {
    let (n, p) = (points.len(), degree + 1);
    if n <= p || points.iter().any(|q| q.weight.is_nan() || q.weight <= 0.0) {
        return None;
    }
    let width = points.iter().map(|q| (q.r_bohr - r_e_bohr).abs()).fold(0.0, f64::max);
    let s: Vec<f64> = points.iter().map(|q| (q.r_bohr - r_e_bohr) / width).collect();
    let zero = points.iter().map(|q| q.energy_hartree).fold(f64::INFINITY, f64::min);
    let mut design: Vec<f64> = Vec::with_capacity(n * p);
    design.extend(points.iter().map(|q| q.weight.sqrt()));
    let mut right: Vec<f64> =
        points.iter().zip(&design).map(|(q, root)| root * (q.energy_hartree - zero)).collect();
    for k in n..n * p {
        design.push(design[k - n] * s[k % n]);
    }
    let qr = Qr::new(&design, n, p).filter(|qr| qr.reciprocal_condition() > WELL_CONDITIONED)?;
    qr.transpose_times(&mut right);
    right.truncate(p);
    qr.back_substitute(&mut right);
    let b = right;
    let minimum = minimum(&b, s[0], s[n - 1])?;
    let value = |s: f64| b.iter().rev().fold(0.0, |sum, b| sum * s + b);
    let residuals: Vec<f64> =
        points.iter().zip(&s).map(|(q, &s)| value(s) - (q.energy_hartree - zero)).collect();
    let square_sum: f64 = residuals.iter().zip(points).map(|(d, q)| q.weight * d * d).sum();
    let (rms_residual_hartree, _) = rms_and_largest(&residuals);
    let (values, jacobian) = about_minimum(&b, minimum, Centre::of_x(r_e_bohr, width));
    let coefficient = |m: usize| values.get(m).copied().unwrap_or(0.0);
    // r_e, V″, V‴, V⁗ and what they are of the parameters e_min, r_e, c_2 ...
    let centre = [values[1], 2.0 * coefficient(2), 6.0 * coefficient(3), 24.0 * coefficient(4)];
    let factors = [1.0, 2.0, 6.0, 24.0];
    let scale = match variance {
        Variance::FromResiduals => square_sum / (n - p) as f64,
        Variance::Declared => 1.0,
    };
    let misfit = lag_one_autocorrelation(&residuals).is_some_and(|c| c > MISFIT_AUTOCORRELATION);
    let source = match (misfit, variance) {
        (true, _) => ErrorSource::Misfit,
        (false, Variance::Declared) => ErrorSource::Noise,
        (false, Variance::FromResiduals) => ErrorSource::Fit,
    };
    // σ² = s² ‖R⁻ᵀ h‖² with h the gradient by the linear coefficients.
    let estimate = |value: f64, gradient: [f64; 4]| {
        let mut h = vec![0.0; p];
        for (i, (g, factor)) in gradient.iter().zip(factors).enumerate() {
            if let Some(row) = jacobian.get(i + 1).filter(|_| *g != 0.0) {
                h.iter_mut().zip(row).for_each(|(h, j)| *h += g * factor * j);
            }
        }
        qr.forward_substitute(&mut h);
        let square: f64 = h.iter().map(|x| x * x).sum();
        Estimate::with_error(value, (scale * square).sqrt(), source)
    };
    let of = |local: [f64; 4]| {
        constants(&LocalDerivatives::new(local[0], [0.0, 0.0, local[1], local[2], local[3]]))
    };
    let derived = |c: usize| -> Option<Estimate> {
        let value = of(centre)?[c];
        let mut gradient = [0.0; 4];
        for (i, g) in gradient.iter_mut().enumerate() {
            let step = 6e-6 * centre[i].abs().max(1e-3 * centre[1]);
            let moved = |sign: f64| {
                let mut local = centre;
                local[i] += sign * step;
                of(local).map(|v| v[c])
            };
            *g = (moved(1.0)? - moved(-1.0)?) / (2.0 * step);
        }
        value.is_finite().then(|| estimate(value, gradient))
    };
    Some(WindowNumbers {
        r_e_bohr: estimate(centre[0], [1.0, 0.0, 0.0, 0.0]),
        force_constant_hartree_per_bohr2: estimate(centre[1], [0.0, 1.0, 0.0, 0.0]),
        omega_e_per_cm: derived(0),
        omega_e_x_e_per_cm: if degree > 2 { derived(1) } else { None },
        rms_residual_hartree,
        aicc: aicc(square_sum, n, p),
    })
}

/// The root of P′ that Newton's method reaches from s = 0, with P″ > 0 there and within the points.
fn minimum(b: &[f64], from: f64, to: f64) -> Option<f64> {
    let mut s = 0.0;
    for _ in 0..30 {
        let (slope, curvature) = (taylor(b, s, 1), 2.0 * taylor(b, s, 2));
        if !(curvature > 0.0 && (from..=to).contains(&s)) {
            return None;
        }
        let step = slope / curvature;
        s -= step;
        if step.abs() <= 4.0 * f64::EPSILON {
            return Some(s).filter(|s| (from..=to).contains(s));
        }
    }
    None
}
