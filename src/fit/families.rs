//! The families as nonlinear least-squares problems.

use super::data::Data;
use super::nonlinear::{self, IterationSettings, NonlinearSolution, Problem};
use super::{FitError, guess};
use crate::potential::{LocalShape, ModelFault, Morse, Parametric};

/// A family and the points it is fitted to.
pub(crate) struct ModelProblem<'a, P> {
    model: P,
    data: &'a Data,
    roots: Vec<f64>,
    gradient: Vec<f64>,
}

impl<'a, P: Parametric> ModelProblem<'a, P> {
    pub fn new(model: P, data: &'a Data) -> Self {
        let gradient = vec![0.0; model.values().len()];
        Self { model, data, roots: data.weight.iter().map(|w| w.sqrt()).collect(), gradient }
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
        if self.model.fault().is_some() {
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
    let solution = nonlinear::solve_from_all(&mut problem, &values, settings)?;
    let mut model = first.clone();
    model.set_values(&solution.values);
    let (from, to) = (data.r_bohr[0], data.r_bohr[data.len() - 1]);
    if !(from..=to).contains(&model.minimum_bohr()) {
        return Err(FitError::NoMinimum);
    }
    Ok((model, solution))
}

/// The starts of the Morse function: by variable projection, else those of the local shape.
pub(crate) fn morse_starts(data: &Data, shape: &LocalShape) -> Vec<Morse> {
    guess::morse_start(data, shape).map_or_else(|| Morse::starts(shape), |start| vec![start])
}

/// Squared errors Σ of predicting each point from the others, by refits that start at the solution.
///
/// None when one of the refits fails.
pub(crate) fn leave_one_out_rms<P: Parametric + Clone>(data: &Data, model: &P) -> Option<f64> {
    let start = model.values();
    if data.len() <= start.len() {
        return None;
    }
    let settings = IterationSettings { dampings: &[1e-6], ..IterationSettings::QUICK };
    let mut sum = 0.0;
    for i in 0..data.len() {
        let rest = data.without(i);
        let mut problem = ModelProblem::new(model.clone(), &rest);
        // One point less moves the solution little; where plain steps do not settle, the damped iteration does.
        let values = match nonlinear::follow(&mut problem, start.clone()) {
            Some(values) => values,
            None => nonlinear::solve(&mut problem, &start, settings).ok()?.values,
        };
        let mut other = model.clone();
        other.set_values(&values);
        let error = other.energy_hartree(data.r_bohr[i]) - data.energy_hartree[i];
        sum += error * error;
    }
    Some((sum / data.len() as f64).sqrt())
}

impl From<ModelFault> for FitError {
    fn from(fault: ModelFault) -> Self {
        Self::NoWell { what: fault }
    }
}
