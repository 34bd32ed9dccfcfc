//! Errors of what follows from a fit: σ² = gᵀ C g with g by differences.

use super::Fit;
use crate::estimate::Estimate;
use crate::potential::{Model, Parametric as _, Potential as _};

impl Fit {
    /// ∂quantities/∂p by central differences, one row a parameter; none when no error is known or a quantity is
    /// missing beside the solution.
    ///
    /// The step is 6e-6 of the parameter (the cube root of the rounding unit balances rounding and curvature) or
    /// a thousandth of its standard error, whichever is larger.
    pub fn gradient_of(&self, quantities: &dyn Fn(&Model) -> Option<Vec<f64>>) -> Option<Vec<Vec<f64>>> {
        if self.covariance.is_empty() {
            return None;
        }
        let centre = self.model.values();
        let mut model = self.model.clone();
        (0..centre.len())
            .map(|i| {
                let step = (6e-6 * centre[i].abs()).max(1e-3 * self.covariance[i][i].sqrt());
                let mut moved = |sign: f64| {
                    let mut values = centre.clone();
                    values[i] += sign * step;
                    model.set_values(&values);
                    quantities(&model)
                };
                let (up, down) = (moved(1.0)?, moved(-1.0)?);
                let slope = |(u, d): (&f64, &f64)| if step > 0.0 { (u - d) / (2.0 * step) } else { 0.0 };
                Some(up.iter().zip(&down).map(slope).collect())
            })
            .collect()
    }

    /// A value with the error that a gradient by the parameters gives it; exact without one.
    pub fn estimate(&self, value: f64, gradient: Option<&[f64]>) -> Estimate {
        match gradient.and_then(|g| self.propagated(g)) {
            Some(error) => Estimate::with_error(value, error, self.error_source()),
            None => Estimate::exact(value),
        }
    }

    /// Quantities of the fitted function with their errors; none when one of them is missing.
    pub fn estimates_of(&self, quantities: &dyn Fn(&Model) -> Option<Vec<f64>>) -> Option<Vec<Estimate>> {
        let centre = quantities(&self.model)?;
        let gradient = self.gradient_of(quantities);
        let column = |c: usize| gradient.as_ref().map(|g| g.iter().map(|row| row[c]).collect::<Vec<f64>>());
        Some(centre.iter().enumerate().map(|(c, &v)| self.estimate(v, column(c).as_deref())).collect())
    }

    /// V″ at the minimum of the fitted function, in hartree/bohr².
    pub fn force_constant_hartree_per_bohr2(&self) -> Option<Estimate> {
        let second = |model: &Model| Some(vec![model.derivatives_hartree(model.minimum_bohr())[2]]);
        self.estimates_of(&second)?.first().copied()
    }
}
