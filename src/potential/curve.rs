//! The curve through the scan's points: base function, spline of the rest, tails.

use super::Potential;
use crate::estimate::Estimate;
use serde::{Deserialize, Serialize};

/// How the curve runs through the points.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum CurveKind {
    /// Morse base plus quintic spline of the rest (few points: the polynomial through all).
    #[default]
    Default,
    /// Quintic not-a-knot spline without base.
    Quintic,
    /// Cubic not-a-knot spline.
    Cubic,
}

/// Abscissa of the spline.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum SplineVariable {
    /// The bond length.
    R,
    /// y = (r − r_b)/(r + r_b).
    Y,
}

/// Choices about the curve and its tails.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct CurveSettings {
    /// Kind of curve.
    pub kind: CurveKind,
    /// Spline variable; none: by leave-one-out.
    pub variable: Option<SplineVariable>,
    /// Energy of the separated atoms, in the energy column's unit and scale.
    pub asymptote: Option<f64>,
    /// Leading inverse power n of the tail V_inf − C_n/rⁿ.
    pub tail_power: Option<u32>,
}

/// The inner tail.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum InnerTail {
    /// V_e + (V_1 − V_e) exp(−b (r − r_1)).
    Exponential {
        /// b in 1/bohr.
        b_per_bohr: f64,
    },
    /// A hard wall at the first point.
    HardWall,
}

/// The outer tail.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum OuterTail {
    /// V_inf − C_n/rⁿ.
    InversePower {
        /// n.
        n: u32,
        /// C_n in hartree bohrⁿ.
        c_n_hartree_bohr_n: f64,
        /// V_inf in hartree.
        asymptote_hartree: f64,
        /// Whether V_inf is the program's assumption.
        assumed: bool,
    },
    /// V_inf − (V_inf − V_last) exp(−b (r − r_last)).
    Exponential {
        /// b in 1/bohr.
        b_per_bohr: f64,
        /// V_inf in hartree.
        asymptote_hartree: f64,
        /// Whether V_inf is the program's assumption.
        assumed: bool,
    },
    /// A hard wall at the last point, or at the first maximum beyond r_e.
    HardWall {
        /// Where, in bohr.
        r_bohr: f64,
    },
}

/// The curve of a study with what is derived from it near its minimum.
#[derive(Clone, Debug)]
pub struct ScanCurve {
    /// Name of the kind as in the findings format, e.g. `morse+quintic`.
    pub kind: String,
    /// Abscissa of the spline, where there is one.
    pub variable: Option<SplineVariable>,
    /// First and last scanned point in use, in bohr.
    pub scan_range_bohr: (f64, f64),
    /// Position of the minimum in bohr.
    pub r_e_bohr: Estimate,
    /// V(r_e) in hartree.
    pub v_e_hartree: Estimate,
    /// V″, V‴, V⁗ at r_e in hartree/bohrⁿ; none where the curve has no such derivative.
    pub derivatives_hartree: [Option<Estimate>; 3],
    /// Inner tail.
    pub inner: InnerTail,
    /// Outer tail.
    pub outer: OuterTail,
}

impl Potential for ScanCurve {
    fn derivatives_hartree(&self, _r_bohr: f64) -> [f64; 5] {
        todo!("curve")
    }
    fn range_bohr(&self) -> (f64, f64) {
        todo!("curve")
    }
    fn limit_hartree(&self) -> f64 {
        todo!("curve")
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e_bohr.value
    }
}
