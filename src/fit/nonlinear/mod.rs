//! Weighted nonlinear least squares: Levenberg-Marquardt on scaled columns, finished by undamped
//! Gauss-Newton.
//!
//! The damping follows the gain ratio of H. B. Nielsen (Damping parameter in Marquardt's method,
//! IMM-REP-1999-05, Technical University of Denmark); scale factors are the largest column lengths met
//! so far [J. J. Moré, in: G. A. Watson (ed.), Numerical Analysis, Springer (1978), p. 105]. Both steps come from a QR of the
//! scaled Jacobian, never from normal equations. (Sources from memory.)

mod damped;
mod place;
mod undamped;

use super::FitEnd;
use super::qr::Qr;
use damped::damped;
use place::Place;
pub(crate) use undamped::follow;
use undamped::undamped;

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
    /// Most evaluations from one start with one damping.
    pub most_evaluations: usize,
    /// First dampings, relative to unit columns; each is tried and the lowest sum counts.
    pub dampings: &'static [f64],
    /// Whether steps bend along curved valleys (geodesic acceleration).
    pub accelerated: bool,
}

impl IterationSettings {
    /// For good starts: one plain run.
    pub const QUICK: Self = Self { most_evaluations: 200, dampings: &[1e-3], accelerated: false };
    /// For starts far off: a bold and a cautious run, both accelerated.
    pub const THOROUGH: Self = Self { most_evaluations: 10_000, dampings: &[1e-3, 1e3], accelerated: true };
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
    /// Every further step leads where the model is not defined: the solution would lie beyond a bound.
    Blocked,
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
    /// Smallest over largest diagonal entry of R of the scaled Jacobian at the solution.
    pub reciprocal_condition: f64,
    /// Which rule ended the damped iteration.
    pub end: FitEnd,
    /// Evaluations of model and Jacobian.
    pub evaluations: usize,
}

/// Minimises the sum of squares from one start.
///
/// The damped iteration ends when no parameter moves by more than 1e-14 of itself ([`FitEnd::SmallStep`]),
/// when the cosine between residual and every column is below 1e-14 ([`FitEnd::SmallGradient`]), or when
/// neither the predicted nor the found decrease exceeds 1e-13 of the sum ([`FitEnd::SmallDecrease`]).
/// Then undamped steps follow as long as they shrink.
///
/// # Errors
/// [`NonlinearError`], when no damping leads to an end.
pub fn solve(
    problem: &mut dyn Problem,
    start: &[f64],
    settings: IterationSettings,
) -> Result<NonlinearSolution, NonlinearError> {
    let mut best = Err(NonlinearError::NotFinite);
    for &damping in settings.dampings {
        best = better(best, run(problem, start, settings, damping));
    }
    best
}

/// The lower sum of two results; an error only when both are.
fn better(
    old: Result<NonlinearSolution, NonlinearError>,
    new: Result<NonlinearSolution, NonlinearError>,
) -> Result<NonlinearSolution, NonlinearError> {
    match (old, new) {
        (Ok(old), Ok(new)) if new.weighted_square_sum < old.weighted_square_sum => Ok(new),
        (Ok(old), _) => Ok(old),
        (Err(_), new) => new,
    }
}

/// An iteration that has not ended and stands where the scaled Jacobian is worse conditioned than this never will.
const ENDLESS_VALLEY: f64 = 1e-7;

fn run(
    problem: &mut dyn Problem,
    start: &[f64],
    settings: IterationSettings,
    damping: f64,
) -> Result<NonlinearSolution, NonlinearError> {
    let (n, p) = (problem.observations(), problem.parameters());
    if n < p || p == 0 {
        return Err(NonlinearError::TooFewRows);
    }
    let mut place = Place::new(problem, start.to_vec()).ok_or(NonlinearError::NotFinite)?;
    let mut evaluations = 1;
    let end = match damped(problem, &mut place, settings, damping, &mut evaluations) {
        Ok(end) => end,
        Err(error @ NonlinearError::NotConverged { .. }) => {
            // An endless valley is better named by what makes it endless.
            let condition = Qr::new(&place.jacobian, n, p).map_or(0.0, |qr| qr.reciprocal_condition());
            let flat = condition < ENDLESS_VALLEY;
            return Err(if flat {
                NonlinearError::IllConditioned { reciprocal_condition: condition }
            } else {
                error
            });
        }
        Err(error) => return Err(error),
    };
    undamped(problem, &mut place, &mut evaluations);
    described(place, p, end, evaluations)
}

/// The solution that `values` are, without a further step.
///
/// # Errors
/// Not defined there, fewer residuals than parameters, dependent parameters.
pub(crate) fn at(problem: &mut dyn Problem, values: Vec<f64>) -> Result<NonlinearSolution, NonlinearError> {
    let p = problem.parameters();
    if problem.observations() < p || p == 0 {
        return Err(NonlinearError::TooFewRows);
    }
    let place = Place::new(problem, values).ok_or(NonlinearError::NotFinite)?;
    described(place, p, FitEnd::SmallStep, 1)
}

fn described(
    place: Place,
    p: usize,
    end: FitEnd,
    evaluations: usize,
) -> Result<NonlinearSolution, NonlinearError> {
    let n = place.residuals.len();
    let qr =
        Qr::new(&place.jacobian, n, p).ok_or(NonlinearError::IllConditioned { reciprocal_condition: 0.0 })?;
    let reciprocal_condition = qr.reciprocal_condition();
    if reciprocal_condition.is_nan() || reciprocal_condition <= 4.0 * f64::EPSILON {
        return Err(NonlinearError::IllConditioned { reciprocal_condition });
    }
    Ok(NonlinearSolution {
        unit_covariance: qr.inverse_gram(),
        reciprocal_condition,
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
    let mut best = Err(NonlinearError::NotFinite);
    for start in starts {
        best = better(best, solve(problem, start, settings));
    }
    best
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
        let solution = solve(&mut Valley, &[-1.2, 1.0], IterationSettings::QUICK).unwrap();
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
            solve(&mut Nowhere, &[f64::NAN], IterationSettings::QUICK),
            Err(NonlinearError::NotFinite)
        ));
        let settings = IterationSettings { most_evaluations: 20, dampings: &[1e6], accelerated: false };
        assert!(matches!(
            solve(&mut Nowhere, &[0.0], settings),
            Err(NonlinearError::NotConverged { evaluations: 20 })
        ));
    }
}
