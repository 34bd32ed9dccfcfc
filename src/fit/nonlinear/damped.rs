//! The damped iteration: Levenberg-Marquardt on scaled columns.

use super::place::{Place, rounding};
use super::{IterationSettings, NonlinearError, Problem};
use crate::fit::FitEnd;
use crate::fit::qr::{Qr, length};

/// Moves `place` downhill until one of the rules of [`super::solve`] ends it.
pub(super) fn damped(
    problem: &mut dyn Problem,
    place: &mut Place,
    settings: IterationSettings,
    damping: f64,
    evaluations: &mut usize,
) -> Result<FitEnd, NonlinearError> {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut scale = vec![0.0_f64; p];
    let (mut mu, mut growth) = (damping, 2.0);
    let mut blocked = false;
    loop {
        for (s, column) in scale.iter_mut().zip(place.jacobian.chunks_exact(n)) {
            *s = s.max(length(column));
        }
        let factors: Vec<f64> = scale.iter().map(|&s| if s > 0.0 { s } else { 1.0 }).collect();
        let (r, c) = reduce(place, &factors);
        let size = place.square_sum.sqrt();
        let steepest =
            (0..p).map(|j| (0..=j).map(|i| r[j * p + i] * c[i]).sum::<f64>().abs()).fold(0.0, f64::max);
        if steepest <= 1e-14 * size {
            return Ok(FitEnd::SmallGradient);
        }
        loop {
            if *evaluations >= settings.most_evaluations || !mu.is_finite() {
                return Err(NonlinearError::NotConverged { evaluations: *evaluations });
            }
            let Some(s) = damped_step(&r, &c, mu) else {
                (mu, growth) = (mu * growth, growth * 2.0);
                continue;
            };
            let mut step: Vec<f64> = s.iter().zip(&factors).map(|(s, d)| s / d).collect();
            let small = step.iter().zip(&place.values).all(|(s, v)| s.abs() <= 1e-14 * v.abs());
            if small || length(&s) <= rounding(&place.values, &factors) {
                // Steps that shrank only because the model is undefined beyond them end at a bound, not at a minimum.
                return if blocked { Err(NonlinearError::Blocked) } else { Ok(FitEnd::SmallStep) };
            }
            if settings.accelerated {
                *evaluations += 1;
                if let Some(bend) = acceleration(problem, place, &step, &r, &factors, mu) {
                    step.iter_mut().zip(&bend).for_each(|(s, a)| *s += a);
                }
            }
            let along: Vec<f64> = (0..p).map(|i| (i..p).map(|j| r[j * p + i] * s[j]).sum()).collect();
            let predicted: f64 = along.iter().zip(&c).map(|(t, c)| -t * (2.0 * c + t)).sum();
            *evaluations += 1;
            let new = Place::new(problem, place.moved(&step));
            blocked = new.is_none();
            let found = new.as_ref().map_or(f64::NEG_INFINITY, |new| place.square_sum - new.square_sum);
            let negligible = 1e-13 * place.square_sum;
            let settled = predicted.abs() <= negligible && found.abs() <= negligible;
            let gain = found / predicted;
            match new {
                Some(new) if gain > 1e-4 => {
                    *place = new;
                    mu *= (1.0 - (2.0 * gain - 1.0).powi(3)).max(1.0 / 3.0);
                    growth = 2.0;
                    if settled {
                        return Ok(FitEnd::SmallDecrease);
                    }
                    break;
                }
                _ if settled => return Ok(FitEnd::SmallDecrease),
                _ => (mu, growth) = (mu * growth, growth * 2.0),
            }
        }
    }
}

/// min ‖R s + c‖² + μ‖s‖² through a QR of R stacked on sqrt(μ), for unit scale factors.
fn damped_step(r: &[f64], c: &[f64], mu: f64) -> Option<Vec<f64>> {
    let p = c.len();
    let mut stacked = vec![0.0; 2 * p * p];
    for j in 0..p {
        stacked[j * 2 * p..j * 2 * p + p].copy_from_slice(&r[j * p..(j + 1) * p]);
        stacked[j * 2 * p + p + j] = mu.sqrt();
    }
    let qr = Qr::new(&stacked, 2 * p, p)?;
    let mut right: Vec<f64> = c.iter().map(|c| -c).chain(std::iter::repeat_n(0.0, p)).collect();
    qr.transpose_times(&mut right);
    right.truncate(p);
    qr.back_substitute(&mut right);
    right.iter().all(|s| s.is_finite()).then_some(right)
}

/// Half the second-order correction along `step`, −½ (JᵀJ + μD²)⁻¹ Jᵀ r_vv, with r_vv by a difference of
/// residuals; none when it is longer than three eighths of the step or the model is undefined on the way.
///
/// Geodesic acceleration [M. K. Transtrum, J. P. Sethna, arXiv:1201.5885 (2012), from memory].
fn acceleration(
    problem: &mut dyn Problem,
    place: &Place,
    step: &[f64],
    r: &[f64],
    factors: &[f64],
    mu: f64,
) -> Option<Vec<f64>> {
    const H: f64 = 0.1;
    let (n, p) = (place.residuals.len(), step.len());
    let part: Vec<f64> = step.iter().map(|s| H * s).collect();
    let ahead = Place::new(problem, place.moved(&part))?;
    let mut curvature: Vec<f64> =
        ahead.residuals.iter().zip(&place.residuals).map(|(a, b)| (a - b) / H).collect();
    for (column, s) in place.jacobian.chunks_exact(n).zip(step) {
        curvature.iter_mut().zip(column).for_each(|(c, j)| *c -= j * s);
    }
    curvature.iter_mut().for_each(|c| *c *= 2.0 / H);
    let qr = Qr::new(&place.jacobian, n, p)?;
    qr.transpose_times(&mut curvature);
    curvature.truncate(p);
    let scaled = damped_step(r, &curvature, mu)?;
    let bend: Vec<f64> = scaled.iter().zip(factors).map(|(s, d)| 0.5 * s / d).collect();
    let size = |v: &[f64]| length(&v.iter().zip(factors).map(|(v, d)| v * d).collect::<Vec<_>>());
    (size(&bend) <= 0.375 * size(step)).then_some(bend)
}

/// R (column-major p × p) and the first p entries of Qᵀ r for the Jacobian with columns divided by `factors`.
fn reduce(place: &Place, factors: &[f64]) -> (Vec<f64>, Vec<f64>) {
    let (n, p) = (place.residuals.len(), factors.len());
    // A zero column is left to the damping: a tiny entry keeps the factorisation defined.
    let mut jacobian = place.jacobian.clone();
    for column in jacobian.chunks_exact_mut(n) {
        if column.iter().all(|&x| x == 0.0) {
            column[0] = f64::MIN_POSITIVE;
        }
    }
    let mut c = place.residuals.clone();
    let mut r = vec![0.0; p * p];
    if let Some(qr) = Qr::new(&jacobian, n, p) {
        qr.transpose_times(&mut c);
        for j in 0..p {
            (0..=j).for_each(|i| r[j * p + i] = qr.r(i, j) * (qr.lengths[j] / factors[j]));
        }
    }
    c.truncate(p);
    (r, c)
}
