//! The families as nonlinear least-squares problems.

use super::data::Data;
use super::nonlinear::{self, IterationSettings, NonlinearError, NonlinearSolution, Problem};
use super::{FitError, guess};
use crate::potential::{LocalShape, ModelFault, Morse, Parametric};

/// A family and the points it is fitted to.
pub(crate) struct ModelProblem<'a, P> {
    model: P,
    data: &'a Data,
    roots: Vec<f64>,
    gradient: Vec<f64>,
    /// The bound that the last refused step went beyond.
    refused: Option<ModelFault>,
}

impl<'a, P: Parametric> ModelProblem<'a, P> {
    pub fn new(model: P, data: &'a Data) -> Self {
        let gradient = vec![0.0; model.values().len()];
        Self { model, data, roots: data.weight.iter().map(|w| w.sqrt()).collect(), gradient, refused: None }
    }
}

impl<P: Parametric> Problem for ModelProblem<'_, P> {
    fn parameters(&self) -> usize {
        self.gradient.len()
    }
    fn observations(&self) -> usize {
        self.data.len()
    }
    fn evaluate(&mut self, values: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool {
        self.model.set_values(values);
        // The bounds that physics sets are kept by taking back every step beyond them.
        if let Some(fault) = self.model.fault() {
            self.refused = Some(fault);
            return false;
        }
        let n = self.data.len();
        for i in 0..n {
            let energy = self.model.gradient(self.data.r_bohr[i], &mut self.gradient);
            residuals[i] = self.roots[i] * (energy - self.data.energy_hartree[i]);
            for (j, g) in self.gradient.iter().enumerate() {
                jacobian[j * n + i] = self.roots[i] * g;
            }
        }
        true
    }
}

/// Fits a family from all its starts; energies count from the zero of the data.
///
/// # Errors
/// Too few points, no start that makes a well, no convergence, dependent parameters.
pub(crate) fn fit<P: Parametric + Clone>(
    data: &Data,
    starts: &[P],
    settings: IterationSettings,
) -> Result<(P, NonlinearSolution), FitError> {
    let first = starts.first().ok_or(FitError::NoStart)?;
    let needed = first.values().len();
    if data.len() < needed {
        return Err(FitError::TooFewPoints { points: data.len(), needed });
    }
    let mut problem = ModelProblem::new(first.clone(), data);
    let values: Vec<Vec<f64>> = starts.iter().map(Parametric::values).collect();
    let solution = nonlinear::solve_from_all(&mut problem, &values, settings).map_err(|e| {
        match (e, problem.refused) {
            (NonlinearError::Blocked, Some(what)) => FitError::AtBound { what },
            // A well that has grown far beyond the points is on its way to the parabola, where the range vanishes.
            (NonlinearError::NotConverged { .. } | NonlinearError::IllConditioned { .. }, _)
                if depth_over_span(&problem.model, data).is_some_and(|ratio| ratio > ENDLESS_DEPTH) =>
            {
                FitError::AtBound { what: ModelFault::RangeParameter }
            }
            _ => e.into(),
        }
    })?;
    let mut model = first.clone();
    model.set_values(&solution.values);
    let (from, to) = (data.r_bohr[0], data.r_bohr[data.len() - 1]);
    if !(from..=to).contains(&model.minimum_bohr()) {
        return Err(FitError::NoMinimum);
    }
    Ok((model, solution))
}

/// Residuals below this share of the span of energies are those of exact data.
const EXACT: f64 = 1e-10;
/// Data good to this share of their span
const PROFILE_RESIDUAL: f64 = 1e-9;
/// must fix a parameter to this share of itself.
const PROFILE_STEP: f64 = 1e-3;

/// Whether exact data tell the parameters apart: the least certain one is moved by a thousandth, the others are
/// fitted anew, and the residuals must show it. Where the columns of the Jacobian become parallel only at the
/// solution itself, an iteration comes to rest beside it with a condition number that does not give it away.
///
/// Data with noise or misfit need no such test: their standard errors say it.
///
/// # Errors
/// [`FitError::IllConditioned`].
pub(crate) fn told_apart<P: Parametric + Clone>(
    data: &Data,
    model: &P,
    solution: &NonlinearSolution,
) -> Result<(), FitError> {
    let span = data.energy_hartree.iter().fold(0.0, |m: f64, e| m.max(e.abs()));
    let share = |square_sum: f64| {
        let weights: f64 = data.weight.iter().sum();
        (square_sum / weights).sqrt() / span
    };
    if share(solution.weighted_square_sum) > EXACT {
        return Ok(());
    }
    let relative = |j: usize| solution.unit_covariance[j][j].sqrt() / solution.values[j].abs();
    let least_certain = (2..solution.values.len()).max_by(|&i, &j| relative(i).total_cmp(&relative(j)));
    let Some(fixed) = least_certain.filter(|&j| solution.values[j] != 0.0) else { return Ok(()) };
    let mut values = solution.values.clone();
    values[fixed] *= 1.0 + PROFILE_STEP;
    let mut problem = WithOneFixed { inner: ModelProblem::new(model.clone(), data), fixed, values };
    let mut start = problem.values.clone();
    start.remove(fixed);
    match nonlinear::solve(&mut problem, &start, IterationSettings::QUICK) {
        Ok(other) if share(other.weighted_square_sum) < PROFILE_RESIDUAL => {
            Err(FitError::IllConditioned { reciprocal_condition: solution.reciprocal_condition })
        }
        _ => Ok(()),
    }
}

/// A family with one of its parameters held.
struct WithOneFixed<'a, P> {
    inner: ModelProblem<'a, P>,
    fixed: usize,
    values: Vec<f64>,
}

impl<P: Parametric> Problem for WithOneFixed<'_, P> {
    fn parameters(&self) -> usize {
        self.values.len() - 1
    }
    fn observations(&self) -> usize {
        self.inner.observations()
    }
    fn evaluate(&mut self, values: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool {
        let (before, after) = values.split_at(self.fixed);
        self.values[..self.fixed].copy_from_slice(before);
        self.values[self.fixed + 1..].copy_from_slice(after);
        let n = residuals.len();
        let mut whole = vec![0.0; n * self.values.len()];
        let defined = self.inner.evaluate(&self.values, residuals, &mut whole);
        let (before, after) = jacobian.split_at_mut(n * self.fixed);
        before.copy_from_slice(&whole[..n * self.fixed]);
        after.copy_from_slice(&whole[n * (self.fixed + 1)..]);
        defined
    }
}

/// Depth over the span of energies beyond which a well that does not settle counts as endless.
const ENDLESS_DEPTH: f64 = 100.0;

fn depth_over_span<P: Parametric>(model: &P, data: &Data) -> Option<f64> {
    let depth = model.parameter_names().iter().position(|(name, _)| name == "d_e")?;
    let span = data.energy_hartree.iter().fold(0.0, |m: f64, e| m.max(e.abs()));
    Some(model.values()[depth] / span)
}

/// The starts of the Morse function: by variable projection, else those of the local shape.
pub(crate) fn morse_starts(data: &Data, shape: &LocalShape) -> Vec<Morse> {
    guess::morse_start(data, shape).map_or_else(|| Morse::starts(shape), |start| vec![start])
}

/// The family fitted to other data, from a model that was fitted to nearly the same.
pub(crate) fn refit<P: Parametric + Clone>(data: &Data, model: &P) -> Option<P> {
    let settings = IterationSettings { dampings: &[1e-6], ..IterationSettings::QUICK };
    let start = model.values();
    let mut problem = ModelProblem::new(model.clone(), data);
    // The solution moves little; where plain steps do not settle, the damped iteration does.
    let values = match nonlinear::follow(&mut problem, start.clone()) {
        Some(values) => values,
        None => nonlinear::solve(&mut problem, &start, settings).ok()?.values,
    };
    let mut other = model.clone();
    other.set_values(&values);
    Some(other)
}

/// The same with the covariance there; none too where the minimum leaves the points, the parameters make no
/// well, or they cannot be told apart.
pub(crate) fn refit_with_covariance<P: Parametric + Clone>(
    data: &Data,
    model: &P,
) -> Option<(P, NonlinearSolution)> {
    if data.len() < model.values().len() {
        return None;
    }
    let found = refit(data, model)?;
    let mut problem = ModelProblem::new(found.clone(), data);
    let solution = nonlinear::at(&mut problem, found.values()).ok()?;
    let (from, to) = (data.r_bohr[0], data.r_bohr[data.len() - 1]);
    (from..=to).contains(&found.minimum_bohr()).then_some((found, solution))
}

/// Up to this many points each is predicted by a refit; the cost of refits grows with the square of the number.
const REFITS_UP_TO: usize = 200;

/// Root mean square error of predicting each point from the others.
///
/// Up to 200 points by refits that start at the solution; none when one of them fails. Above that by d/(1 − h) with
/// the leverages h = w gᵀ (Jᵀ W J)⁻¹ g of the Jacobian at the solution, exact for linear parameters: one point among
/// so many moves the parameters too little for the difference to show.
pub(crate) fn leave_one_out_rms<P: Parametric + Clone>(
    data: &Data,
    model: &P,
    solution: &NonlinearSolution,
) -> Option<f64> {
    let start = model.values();
    let n = data.len();
    if n <= start.len() {
        return None;
    }
    let mut gradient = vec![0.0; start.len()];
    let mut sum = 0.0;
    for i in 0..n {
        let error = if n <= REFITS_UP_TO {
            let other = refit(&data.without(i), model)?;
            other.energy_hartree(data.r_bohr[i]) - data.energy_hartree[i]
        } else {
            let residual = model.gradient(data.r_bohr[i], &mut gradient) - data.energy_hartree[i];
            let along = |row: &Vec<f64>| -> f64 { row.iter().zip(&gradient).map(|(c, g)| c * g).sum() };
            let quadratic: f64 =
                solution.unit_covariance.iter().zip(&gradient).map(|(row, g)| g * along(row)).sum();
            residual / (1.0 - data.weight[i] * quadratic)
        };
        sum += error * error;
    }
    Some((sum / n as f64).sqrt())
}
