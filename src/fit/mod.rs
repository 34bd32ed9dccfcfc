//! Least-squares fits of model functions to the points in a window.
//!
//! [`linear`] and [`nonlinear`] are the core: they know no potentials and serve any problem. [`fit`]
//! puts the families of [`crate::potential`] to them and reads statistics off the residuals.

mod bootstrap;
#[cfg(test)]
mod checks;
pub mod comparison;
pub mod curve;
mod data;
mod families;
mod guess;
pub mod linear;
pub mod nonlinear;
mod polynomial;
mod precise;
mod propagation;
mod qr;
mod quick;
mod run;
mod statistics;
#[cfg(test)]
mod tests;
mod weights;
mod window;
pub mod window_study;

pub use crate::potential::{Family, ModelFault, ParameterUnit, Variable};
pub use bootstrap::{Bootstrap, BootstrapError, BootstrapSettings, bootstrap};
pub use comparison::{Compared, Comparison};
pub use precise::Precise;
pub use run::{fit, fit_with, morse_for_base};
pub use weights::{
    EnergyWeights, RowWeight, Variance, WeightedPoint, Weighting, declared_weight_per_hartree2,
};
pub use window::{DEFAULT_HALF_WIDTH_OF_R_E, DEFAULT_LEAST_POINTS, Window, default_window};
pub use window_study::{WindowStudy, WindowStudySettings};

use crate::estimate::{ErrorSource, Estimate};
use crate::notice::{Code, Notice};
use crate::potential::Model;
use serde::{Deserialize, Serialize};
use thiserror::Error;

/// A fit that is asked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FitRequest {
    /// The family.
    pub family: Family,
    /// Degree of a polynomial, order of the exponent of an extended Morse function; lowered when points are few.
    #[serde(default)]
    pub degree: Option<u32>,
    /// Variable, for polynomials.
    #[serde(default)]
    pub variable: Option<Variable>,
    /// Power p of an extended Morse function's variable; none: 2.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub power: Option<u32>,
}

/// Power p of an extended Morse function's variable when none is asked for.
const DEFAULT_POWER: u32 = 2;

impl FitRequest {
    /// Power p of an extended Morse function's variable; none for other families.
    pub fn power_in_use(&self) -> Option<u32> {
        (self.family == Family::ExtendedMorse).then(|| self.power.unwrap_or(DEFAULT_POWER))
    }

    /// A family with all its choices left open.
    pub const fn plain(family: Family) -> Self {
        Self { family, degree: None, variable: None, power: None }
    }

    /// A polynomial.
    pub const fn polynomial(degree: u32, variable: Variable) -> Self {
        Self { degree: Some(degree), variable: Some(variable), ..Self::plain(Family::Polynomial) }
    }
}

/// What the fits of a study do.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct FitSettings {
    /// The window; none takes |x| ≤ 0.15 r_e, widened to at least 7 points where there are.
    pub window: Option<Window>,
    /// The fits, in the order in which they are listed.
    pub requests: Vec<FitRequest>,
    /// Weights of the points.
    pub weights: Weighting,
    /// Standard errors by resampled residuals too; none: only by linear propagation.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub bootstrap: Option<BootstrapSettings>,
    /// The fit repeated over windows and degrees; none: not done.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub window_study: Option<WindowStudySettings>,
}

impl Default for FitSettings {
    fn default() -> Self {
        Self {
            window: None,
            weights: Weighting::default(),
            bootstrap: None,
            window_study: None,
            requests: vec![
                FitRequest::plain(Family::Harmonic),
                FitRequest::plain(Family::Morse),
                FitRequest::polynomial(6, Variable::X),
            ],
        }
    }
}

/// A fitted parameter, in atomic units.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// Name as in the findings format, e.g. `r_e`, `k`, `c3`.
    pub name: String,
    /// Value and standard error in atomic units.
    pub estimate: Estimate,
    /// Which atomic unit that is.
    pub unit: ParameterUnit,
}

/// Why an iteration ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FitEnd {
    /// A linear problem, solved directly.
    Direct,
    /// The step became negligible.
    SmallStep,
    /// The gradient vanished to rounding.
    SmallGradient,
    /// The sum of squares stopped falling.
    SmallDecrease,
}

/// A finished fit. All numbers in atomic units.
#[derive(Clone, Debug)]
pub struct Fit {
    /// The fitted function.
    pub model: Model,
    /// Degree of the polynomial, order of the extended Morse exponent used; may be lower than asked for.
    pub degree: Option<u32>,
    /// Window in the unit of the scan, as used.
    pub window: Window,
    /// The same in bohr.
    pub window_bohr: (f64, f64),
    /// Number of points in the window with a weight above zero.
    pub points: usize,
    /// Parameters in the order of the findings format.
    pub parameters: Vec<Parameter>,
    /// Covariance of the parameters, same order, atomic units; empty when no error is known.
    pub covariance: Vec<Vec<f64>>,
    /// Why the iteration ended.
    pub end: FitEnd,
    /// sqrt(Σ d²/n), unweighted, in hartree.
    pub rms_residual_hartree: f64,
    /// max |d| in hartree.
    pub largest_residual_hartree: f64,
    /// Akaike criterion, corrected [Hurvich & Tsai 1989].
    pub aicc: Option<f64>,
    /// Root mean square of the leave-one-out errors, in hartree.
    pub leave_one_out_rms_hartree: Option<f64>,
    /// (r in bohr, model − energy in hartree) of the points in the window, ascending in r.
    pub residuals: Vec<(f64, f64)>,
    /// Smallest over largest diagonal entry of R of the scaled Jacobian at the solution, for iterated fits: near
    /// the rounding unit the parameters cannot be told apart. None for fits solved directly.
    pub reciprocal_condition: Option<f64>,
    /// Remarks (degree lowered, misfit, ...).
    pub notices: Vec<Notice>,
}

impl Fit {
    /// Correlations c_ij/sqrt(c_ii c_jj) of the parameters, same order; empty when no error is known. A parameter
    /// without an error (an exact fit) correlates with nothing but itself.
    pub fn correlations(&self) -> Vec<Vec<f64>> {
        let c = &self.covariance;
        let entry = |i: usize, j: usize| {
            if i == j {
                return 1.0;
            }
            let size = (c[i][i] * c[j][j]).sqrt();
            if size > 0.0 { (c[i][j] / size).clamp(-1.0, 1.0) } else { 0.0 }
        };
        (0..c.len()).map(|i| (0..c.len()).map(|j| entry(i.max(j), i.min(j))).collect()).collect()
    }

    /// Standard error of the fitted curve at `r_bohr` in hartree, sqrt(gᵀ C g) with g = ∂V/∂p: the half width of
    /// its confidence band at one standard error. None when no error is known.
    pub fn band_hartree(&self, r_bohr: f64) -> Option<f64> {
        if self.covariance.is_empty() {
            return None;
        }
        let mut gradient = vec![0.0; self.parameters.len()];
        self.model.as_parametric().gradient(r_bohr, &mut gradient);
        self.propagated(&gradient)
    }

    /// sqrt(gᵀ C g) for the gradient of a quantity by the parameters; none when no error is known or the result
    /// is not finite.
    pub fn propagated(&self, gradient: &[f64]) -> Option<f64> {
        if self.covariance.is_empty() {
            return None;
        }
        let row = |c: &Vec<f64>| c.iter().zip(gradient).map(|(c, g)| c * g).sum::<f64>();
        let variance: f64 = self.covariance.iter().zip(gradient).map(|(c, g)| g * row(c)).sum();
        variance.is_finite().then(|| variance.max(0.0).sqrt())
    }

    /// Where the standard errors come from.
    pub fn error_source(&self) -> ErrorSource {
        self.parameters.iter().find_map(|p| p.estimate.source).unwrap_or(ErrorSource::Fit)
    }
}

/// Why there is no fit.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum FitError {
    /// Not more points than parameters.
    #[error("{points} points in the window, but {needed} are needed; widen the window")]
    TooFewPoints {
        /// Points in the window.
        points: usize,
        /// Points needed.
        needed: usize,
    },
    /// The iteration did not converge.
    #[error("no convergence after {iterations} iterations; try another window")]
    NotConverged {
        /// Iterations done.
        iterations: usize,
    },
    /// The fitted function has no minimum in the window.
    #[error("the fitted function has no minimum in the window; widen it or move it to the minimum")]
    NoMinimum,
    /// The parameters cannot be told apart with these points.
    #[error(
        "the points in the window cannot tell the parameters apart (reciprocal condition number {reciprocal_condition:.1e}); \
         widen the window or take fewer parameters"
    )]
    IllConditioned {
        /// Smallest over largest diagonal entry of R of the scaled problem.
        reciprocal_condition: f64,
    },
    /// A bond length, energy or weight is not a finite number, or a length or weight is not positive.
    #[error(
        "the point at r = {r_bohr} bohr has a length, energy or weight that cannot be used; set it aside"
    )]
    NotFinite {
        /// Bond length of that point in bohr.
        r_bohr: f64,
    },
    /// The shape of the scan gives this family no starting values.
    #[error(
        "the points in the window give this family no starting values; widen the window beyond the minimum on both sides"
    )]
    NoStart,
    /// The points drive a parameter to the edge of what makes a well.
    #[error("the points drive {what} to its bound, zero; widen the window or take another family")]
    AtBound {
        /// Which parameter.
        what: ModelFault,
    },
    /// The degree asked for is not offered.
    #[error("degree, order or power {asked} is not offered; choose from {lowest} to {highest}")]
    Degree {
        /// Asked for.
        asked: u32,
        /// Lowest offered.
        lowest: u32,
        /// Highest offered.
        highest: u32,
    },
}

impl FitError {
    /// The kind of notice that tells of it.
    pub const fn code(&self) -> Code {
        match self {
            Self::TooFewPoints { .. } => Code::FewPoints,
            Self::NotConverged { .. } | Self::NoStart | Self::Degree { .. } => Code::NotConverged,
            Self::NoMinimum => Code::NoMinimum,
            Self::IllConditioned { .. } => Code::IllConditioned,
            Self::NotFinite { .. } => Code::NotFinite,
            Self::AtBound { .. } => Code::AtBound,
        }
    }
}

impl From<linear::LinearError> for FitError {
    fn from(error: linear::LinearError) -> Self {
        match error {
            linear::LinearError::NotFinite => Self::NotFinite { r_bohr: f64::NAN },
            linear::LinearError::TooFewRows { rows, columns } => {
                Self::TooFewPoints { points: rows, needed: columns }
            }
            linear::LinearError::IllConditioned { reciprocal_condition } => {
                Self::IllConditioned { reciprocal_condition }
            }
        }
    }
}

impl From<nonlinear::NonlinearError> for FitError {
    fn from(error: nonlinear::NonlinearError) -> Self {
        match error {
            nonlinear::NonlinearError::NotFinite
            | nonlinear::NonlinearError::TooFewRows
            | nonlinear::NonlinearError::Blocked => Self::NoStart,
            nonlinear::NonlinearError::NotConverged { evaluations } => {
                Self::NotConverged { iterations: evaluations }
            }
            nonlinear::NonlinearError::IllConditioned { reciprocal_condition } => {
                Self::IllConditioned { reciprocal_condition }
            }
        }
    }
}

/// One point a fit sees.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FitPoint {
    /// Bond length in bohr.
    pub r_bohr: f64,
    /// Energy in hartree.
    pub energy_hartree: f64,
    /// Weight; points with weight 0 are left out.
    pub weight: f64,
}
