//! Why there is no curve.

use crate::notice::{Code, Notice};
use crate::units::to_angstrom;
use thiserror::Error;

/// Why there is no curve.
#[derive(Clone, Copy, Debug, PartialEq, Error)]
pub enum CurveError {
    /// Too few points in use.
    #[error("{points} usable points, but a curve needs at least {needed}; compute more bond lengths")]
    TooFewPoints {
        /// Points in use.
        points: usize,
        /// Points needed.
        needed: usize,
    },
    /// The lowest energy is the first or the last point.
    #[error(
        "the lowest energy is that of the {} bond ({:.4} angstrom), so the minimum lies outside the scan; \
         compute {} bonds", if *.first { "shortest" } else { "longest" }, to_angstrom(*.r_bohr),
        if *.first { "shorter" } else { "longer" }
    )]
    MinimumAtEnd {
        /// Where, in bohr.
        r_bohr: f64,
        /// Whether it is the first point.
        first: bool,
    },
    /// The energies fall all the way without a sign of a minimum.
    #[error(
        "the energies fall all the way to the longest bond ({:.4} angstrom) with no sign of a minimum: the state \
         is repulsive, or its well lies beyond the scan", to_angstrom(*.r_bohr)
    )]
    NoMinimum {
        /// The last point, in bohr.
        r_bohr: f64,
    },
    /// The curve has no positive curvature at its lowest point.
    #[error(
        "the curve has no proper minimum at its lowest point ({:.4} angstrom): the points there are too noisy or \
         too few", to_angstrom(*.r_bohr)
    )]
    NoCurvature {
        /// Where, in bohr.
        r_bohr: f64,
    },
    /// Two points at one bond length, or points out of order.
    #[error("the bond length {:.4} angstrom is repeated or out of order; set one of the points aside", to_angstrom(*.r_bohr))]
    NotAscending {
        /// Where, in bohr.
        r_bohr: f64,
    },
    /// A point that is no number.
    #[error("the point at {r_bohr} bohr is not a finite number; set it aside")]
    NotFinite {
        /// Where, in bohr.
        r_bohr: f64,
    },
}

impl CurveError {
    /// The error of monotonic data: at an end, or with no sign of a minimum at all.
    pub(super) fn without_minimum(r: &[f64], e: &[f64]) -> Self {
        let n = r.len();
        let last = r[n - 1];
        if e[0] <= e[n - 1] {
            return Self::MinimumAtEnd { r_bohr: r[0], first: true };
        }
        // The parabola through the last three points: is its vertex within a third of a scan length? Repulsive
        // curves that level off (as 1/r) have it further out.
        let before = (e[n - 2] - e[n - 3]) / (r[n - 2] - r[n - 3]);
        let after = (e[n - 1] - e[n - 2]) / (last - r[n - 2]);
        let curvature = 2.0 * (after - before) / (last - r[n - 3]);
        let slope = after + 0.5 * curvature * (last - r[n - 2]);
        if curvature > 0.0 && -slope / curvature < 0.3 * (last - r[0]) {
            Self::MinimumAtEnd { r_bohr: last, first: false }
        } else {
            Self::NoMinimum { r_bohr: last }
        }
    }

    /// The same as a notice that stops the study.
    pub fn notice(&self) -> Notice {
        let (code, at) = match *self {
            Self::TooFewPoints { .. } => (Code::FewPoints, None),
            Self::MinimumAtEnd { r_bohr, .. } => (Code::MinimumAtEnd, Some(r_bohr)),
            Self::NoMinimum { r_bohr } | Self::NoCurvature { r_bohr } => (Code::NoMinimum, Some(r_bohr)),
            Self::NotAscending { r_bohr } => (Code::RepeatedGeometry, Some(r_bohr)),
            Self::NotFinite { r_bohr } => (Code::NotFinite, Some(r_bohr)),
        };
        let mut text = self.to_string();
        if let Some(first) = text.get_mut(..1) {
            first.make_ascii_uppercase();
        }
        Notice::stop(code, text + ".").at(at.filter(|r| r.is_finite()))
    }
}
