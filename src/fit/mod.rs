//! Least-squares fits of model functions to the points in a window.

use crate::estimate::{ErrorSource, Estimate};
use crate::notice::Notice;
use crate::potential::Model;
use crate::units::LengthUnit;
use serde::{Deserialize, Serialize};
use thiserror::Error;

/// A family of model functions.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Family {
    /// V = e_min + k x²/2.
    Harmonic,
    /// A polynomial in `variable` about its own minimum, no linear term.
    Polynomial,
    /// Morse [1929].
    Morse,
}

/// The expansion variable of a polynomial.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Variable {
    /// x = r − r_e.
    X,
}

/// A fit that is asked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FitRequest {
    /// The family.
    pub family: Family,
    /// Degree, for polynomials; lowered when points are few.
    #[serde(default)]
    pub degree: Option<u32>,
    /// Variable, for polynomials.
    #[serde(default)]
    pub variable: Option<Variable>,
}

/// A range of bond lengths, edges inclusive, kept in the unit in which it was given.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Window {
    /// Lower edge.
    pub from: f64,
    /// Upper edge.
    pub to: f64,
    /// Unit of both.
    pub unit: LengthUnit,
}

/// What the fits of a study do.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct FitSettings {
    /// The window; none takes |x| ≤ 0.15 r_e, widened to at least 7 points where there are.
    pub window: Option<Window>,
    /// The fits, in the order in which they are listed.
    pub requests: Vec<FitRequest>,
}

impl Default for FitSettings {
    fn default() -> Self {
        let plain = |family| FitRequest { family, degree: None, variable: None };
        Self {
            window: None,
            requests: vec![
                plain(Family::Harmonic),
                plain(Family::Morse),
                FitRequest { family: Family::Polynomial, degree: Some(6), variable: Some(Variable::X) },
            ],
        }
    }
}

/// Unit of a fitted parameter, for the doors; values are kept in atomic units.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ParameterUnit {
    /// A total energy: hartree inside and outside.
    TotalEnergy,
    /// A well depth or coefficient of a dimensionless variable: hartree inside, cm⁻¹ outside.
    Wavenumber,
    /// A length: bohr inside, angstrom outside.
    Length,
    /// A range parameter: 1/bohr inside, 1/angstrom outside.
    InverseLength,
    /// A force constant: hartree/bohr² inside, N/m outside.
    ForceConstant,
    /// A coefficient of xⁿ: hartree/bohrⁿ inside, cm⁻¹/angstromⁿ outside.
    Coefficient(u32),
    /// A pure number.
    Dimensionless,
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

/// Where the standard errors of a fit come from ([`ErrorSource::Fit`] or [`ErrorSource::Misfit`]).
pub type FitErrorSource = ErrorSource;

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
    /// Degree used (polynomials); may be lower than asked for.
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
    /// Remarks (degree lowered, misfit, ...).
    pub notices: Vec<Notice>,
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

/// Fits one model to the points given (those inside the window).
///
/// # Errors
/// [`FitError`] when there are too few points, no convergence, or no minimum.
pub fn fit(_request: FitRequest, _points: &[FitPoint], _window: Window) -> Result<Fit, FitError> {
    todo!("fit")
}
