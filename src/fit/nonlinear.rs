//! Weighted nonlinear least squares: Levenberg-Marquardt on scaled columns, finished by undamped
//! Gauss-Newton.
//!
//! The damping follows the gain ratio of H. B. Nielsen (Damping parameter in Marquardt's method,
//! IMM-REP-1999-05, Technical University of Denmark); scale factors are the largest column lengths met
//! so far [J. J. Moré, in: G. A. Watson (ed.), Numerical Analysis, Springer (1978), p. 105]. Both steps come from a QR of the
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

/// What rounding does to the largest term of the model: a step that changes the prediction by less is no step,
/// however large it is beside a parameter that is zero.
fn rounding(values: &[f64], lengths: &[f64]) -> f64 {
    0.5 * f64::EPSILON * values.iter().zip(lengths).map(|(v, d)| (v * d).abs()).fold(0.0, f64::max)
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

/// Undamped Gauss-Newton alone, from a start close to the solution: the parameters when the steps shrink
/// below 1e-9 of the first one or to rounding, else none.
pub(crate) fn follow(problem: &mut dyn Problem, start: Vec<f64>) -> Option<Vec<f64>> {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut place = Place::new(problem, start)?;
    let (mut first, mut last) = (0.0_f64, f64::INFINITY);
    for _ in 0..25 {
        let qr = Qr::new(&place.jacobian, n, p)?;
        let mut step: Vec<f64> = place.residuals.iter().map(|r| -r).collect();
        qr.transpose_times(&mut step);
        step.truncate(p);
        let size = length(&step);
        qr.back_substitute(&mut step);
        if size <= (1e-9 * first).max(2.0 * rounding(&place.values, &qr.lengths)) {
            return Some(place.moved(&step));
        }
        if size.is_nan() || size > 0.7 * last {
            return None;
        }
        place = Place::new(problem, place.moved(&step))?;
        (first, last) = (if first == 0.0 { size } else { first }, size);
    }
    None
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
        if size.is_nan() || size >= 0.9 * last {
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
        let small = step.iter().zip(&place.values).all(|(s, v)| s.abs() <= f64::EPSILON * v.abs());
        if small || size <= rounding(&place.values, &qr.lengths) {
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
