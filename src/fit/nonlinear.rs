//! Weighted nonlinear least squares: Levenberg-Marquardt on scaled columns, finished by undamped
//! Gauss-Newton.
//!
//! The damping follows the gain ratio of H. B. Nielsen (Damping parameter in Marquardt's method,
//! IMM-REP-1999-05, Technical University of Denmark); scale factors are the largest column lengths met
//! so far [J. J. Moré, Lecture Notes in Mathematics 630, 105 (1978)]. Both steps come from a QR of the
//! scaled Jacobian, never from normal equations. (Sources from memory.)

use super::FitEnd;
use super::qr::{Qr, length};

/// A sum of squares to be minimised.
pub trait Problem {
    /// Number of parameters p.
    fn parameters(&self) -> usize;

    /// Number of residuals n.
    fn observations(&self) -> usize;

    /// Fills the weighted residuals sqrt(w)(model − data) and their Jacobian (column-major, n × p).
    /// False where the model is not defined; a step there is taken back.
    fn evaluate(&mut self, values: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool;
}

/// Limits and start of the iteration.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IterationSettings {
    /// Most evaluations of the damped iteration.
    pub most_evaluations: usize,
    /// First damping, relative to unit columns.
    pub damping: f64,
}

impl Default for IterationSettings {
    fn default() -> Self {
        Self { most_evaluations: 400, damping: 1e-3 }
    }
}

/// Why there is no solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NonlinearError {
    /// The model has no finite value at the start.
    NotFinite,
    /// Fewer residuals than parameters.
    TooFewRows,
    /// The limit of evaluations was reached.
    NotConverged {
        /// Evaluations done.
        evaluations: usize,
    },
    /// At the solution the columns of the Jacobian depend on each other to rounding.
    IllConditioned {
        /// Smallest over largest diagonal entry of R.
        reciprocal_condition: f64,
    },
}

/// The least-squares solution of one nonlinear problem.
#[derive(Clone, Debug)]
pub struct NonlinearSolution {
    /// The parameters.
    pub values: Vec<f64>,
    /// Weighted residuals sqrt(w)(model − data).
    pub residuals: Vec<f64>,
    /// Σ w d².
    pub weighted_square_sum: f64,
    /// (Jᵀ W J)⁻¹.
    pub unit_covariance: Vec<Vec<f64>>,
    /// Which rule ended the damped iteration.
    pub end: FitEnd,
    /// Evaluations of model and Jacobian.
    pub evaluations: usize,
}

/// A point of the iteration with everything evaluated there.
#[derive(Clone)]
struct Place {
    values: Vec<f64>,
    residuals: Vec<f64>,
    jacobian: Vec<f64>,
    square_sum: f64,
}

impl Place {
    fn new(problem: &mut dyn Problem, values: Vec<f64>) -> Option<Self> {
        let (n, p) = (problem.observations(), problem.parameters());
        let (mut residuals, mut jacobian) = (vec![0.0; n], vec![0.0; n * p]);
        if values.iter().any(|v| !v.is_finite()) || !problem.evaluate(&values, &mut residuals, &mut jacobian)
        {
            return None;
        }
        let square_sum: f64 = residuals.iter().map(|r| r * r).sum();
        let finite = square_sum.is_finite() && jacobian.iter().all(|x| x.is_finite());
        finite.then_some(Self { values, residuals, jacobian, square_sum })
    }

    fn moved(&self, step: &[f64]) -> Vec<f64> {
        self.values.iter().zip(step).map(|(v, s)| v + s).collect()
    }
}

/// Minimises the sum of squares from one start.
///
/// The damped iteration ends when no parameter moves by more than 1e-14 of itself ([`FitEnd::SmallStep`]),
/// when the cosine between residual and every column is below 1e-14 ([`FitEnd::SmallGradient`]), or when
/// neither the predicted nor the found decrease exceeds 1e-13 of the sum ([`FitEnd::SmallDecrease`]).
/// Then undamped steps follow as long as they shrink.
///
/// # Errors
/// [`NonlinearError`].
pub fn solve(
    problem: &mut dyn Problem,
    start: &[f64],
    settings: IterationSettings,
) -> Result<NonlinearSolution, NonlinearError> {
    let (n, p) = (problem.observations(), problem.parameters());
    if n < p || p == 0 {
        return Err(NonlinearError::TooFewRows);
    }
    let mut place = Place::new(problem, start.to_vec()).ok_or(NonlinearError::NotFinite)?;
    let mut evaluations = 1;
    let end = damped(problem, &mut place, settings, &mut evaluations)?;
    undamped(problem, &mut place, &mut evaluations);
    let qr =
        Qr::new(&place.jacobian, n, p).ok_or(NonlinearError::IllConditioned { reciprocal_condition: 0.0 })?;
    let reciprocal_condition = qr.reciprocal_condition();
    if !(reciprocal_condition > 4.0 * f64::EPSILON) {
        return Err(NonlinearError::IllConditioned { reciprocal_condition });
    }
    Ok(NonlinearSolution {
        unit_covariance: qr.inverse_gram(),
        values: place.values,
        residuals: place.residuals,
        weighted_square_sum: place.square_sum,
        end,
        evaluations,
    })
}

/// The best of several starts; an error only when none of them ends well.
///
/// # Errors
/// The error of the last start that failed, or [`NonlinearError::NotFinite`] without any start.
pub fn solve_from_all(
    problem: &mut dyn Problem,
    starts: &[Vec<f64>],
    settings: IterationSettings,
) -> Result<NonlinearSolution, NonlinearError> {
    let mut best: Result<NonlinearSolution, NonlinearError> = Err(NonlinearError::NotFinite);
    for start in starts {
        match (solve(problem, start, settings), &best) {
            (Ok(new), Ok(old)) if new.weighted_square_sum >= old.weighted_square_sum => {}
            (Ok(new), _) => best = Ok(new),
            (Err(error), Err(_)) => best = Err(error),
            (Err(_), Ok(_)) => {}
        }
    }
    best
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

fn damped(
    problem: &mut dyn Problem,
    place: &mut Place,
    settings: IterationSettings,
    evaluations: &mut usize,
) -> Result<FitEnd, NonlinearError> {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut scale = vec![0.0_f64; p];
    let (mut mu, mut growth) = (settings.damping, 2.0);
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
            let step: Vec<f64> = s.iter().zip(&factors).map(|(s, d)| s / d).collect();
            if step.iter().zip(&place.values).all(|(s, v)| s.abs() <= 1e-14 * v.abs()) {
                return Ok(FitEnd::SmallStep);
            }
            let along: Vec<f64> = (0..p).map(|i| (i..p).map(|j| r[j * p + i] * s[j]).sum()).collect();
            let predicted: f64 = along.iter().zip(&c).map(|(t, c)| -t * (2.0 * c + t)).sum();
            *evaluations += 1;
            let new = Place::new(problem, place.moved(&step));
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

/// Gauss-Newton steps as long as they shrink; the place before a step that does not is kept.
fn undamped(problem: &mut dyn Problem, place: &mut Place, evaluations: &mut usize) {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut last = f64::INFINITY;
    for _ in 0..60 {
        let Some(qr) = Qr::new(&place.jacobian, n, p) else { return };
        let mut step: Vec<f64> = place.residuals.iter().map(|r| -r).collect();
        qr.transpose_times(&mut step);
        step.truncate(p);
        let size = length(&step);
        qr.back_substitute(&mut step);
        if !(size < 0.9 * last) {
            return;
        }
        *evaluations += 1;
        let Some(new) = Place::new(problem, place.moved(&step)) else { return };
        // Rounding may raise the sum a little; a real rise means the step left the valley.
        if new.square_sum > place.square_sum * (1.0 + 1e-9) {
            return;
        }
        *place = new;
        last = size;
        if step.iter().zip(&place.values).all(|(s, v)| s.abs() <= f64::EPSILON * v.abs()) {
            return;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Two residuals of the valley of H. H. Rosenbrock, Comput. J. 3, 175 (1960): minimum 0 at (1, 1).
    struct Valley;

    impl Problem for Valley {
        fn parameters(&self) -> usize {
            2
        }
        fn observations(&self) -> usize {
            2
        }
        fn evaluate(&mut self, v: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool {
            residuals.copy_from_slice(&[10.0 * (v[1] - v[0] * v[0]), 1.0 - v[0]]);
            jacobian.copy_from_slice(&[-20.0 * v[0], -1.0, 10.0, 0.0]);
            true
        }
    }

    #[test]
    fn follows_the_curved_valley() {
        let solution = solve(&mut Valley, &[-1.2, 1.0], IterationSettings::default()).unwrap();
        assert!(solution.values.iter().all(|v| (v - 1.0).abs() < 1e-15), "{:?}", solution.values);
        assert!(solution.evaluations < 100);
    }

    /// A model that is undefined everywhere, and one that falls for ever, end with a reason.
    #[test]
    fn ends_without_a_minimum() {
        struct Nowhere;
        impl Problem for Nowhere {
            fn parameters(&self) -> usize {
                1
            }
            fn observations(&self) -> usize {
                2
            }
            fn evaluate(&mut self, v: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool {
                residuals.copy_from_slice(&[(-v[0] * 1e-3).exp(), 0.0]);
                jacobian.copy_from_slice(&[-1e-3 * residuals[0], 0.0]);
                v[0].is_finite() && v[0] < 1e4
            }
        }
        assert!(matches!(
            solve(&mut Nowhere, &[f64::NAN], IterationSettings::default()),
            Err(NonlinearError::NotFinite)
        ));
        let settings = IterationSettings { most_evaluations: 20, damping: 1e6 };
        assert!(matches!(
            solve(&mut Nowhere, &[0.0], settings),
            Err(NonlinearError::NotConverged { evaluations: 20 })
        ));
    }
}
