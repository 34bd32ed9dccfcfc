//! A point of the iteration.

use super::Problem;

/// A point of the iteration with everything evaluated there.
#[derive(Clone)]
pub(super) struct Place {
    pub values: Vec<f64>,
    pub residuals: Vec<f64>,
    pub jacobian: Vec<f64>,
    pub square_sum: f64,
}

impl Place {
    pub fn new(problem: &mut dyn Problem, values: Vec<f64>) -> Option<Self> {
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

    pub fn moved(&self, step: &[f64]) -> Vec<f64> {
        self.values.iter().zip(step).map(|(v, s)| v + s).collect()
    }
}

/// What rounding does to the largest term of the model: a step that changes the prediction by less is no step,
/// however large it is beside a parameter that is zero.
pub(super) fn rounding(values: &[f64], lengths: &[f64]) -> f64 {
    0.5 * f64::EPSILON * values.iter().zip(lengths).map(|(v, d)| (v * d).abs()).fold(0.0, f64::max)
}
