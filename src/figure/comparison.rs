//! The fits side by side as a picture: how far each misses, by four measures, on one logarithmic axis.

use super::{Role, fit_label, fit_role};
use crate::findings::Findings;
use crate::units::to_per_cm;

/// A measure of how far a fit misses.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Measure {
    /// Root mean square of the residuals.
    Rms,
    /// The largest residual.
    Largest,
    /// Root mean square of the leave-one-out errors.
    LeaveOneOut,
    /// Root mean square over the points outside the window.
    Outside,
}

impl Measure {
    /// All of them, in the order of the legend.
    pub const ALL: [Self; 4] = [Self::Rms, Self::Largest, Self::LeaveOneOut, Self::Outside];

    /// Its name in a legend.
    pub const fn label(self) -> &'static str {
        match self {
            Self::Rms => "rms residual",
            Self::Largest => "largest residual",
            Self::LeaveOneOut => "leave-one-out rms",
            Self::Outside => "rms outside the window",
        }
    }
}

/// One fit of the picture.
#[derive(Clone, Debug, PartialEq)]
pub struct ComparedRow {
    /// Name of the fit.
    pub label: String,
    /// How it is drawn elsewhere.
    pub role: Role,
    /// Its measures in cm⁻¹, those above zero.
    pub marks: Vec<(Measure, f64)>,
    /// AICc above the lowest of all fits.
    pub aicc_difference: Option<f64>,
}

/// The comparison, drawing-free.
#[derive(Clone, Debug, PartialEq)]
pub struct ComparisonPicture {
    /// The fits, in the order of the settings.
    pub rows: Vec<ComparedRow>,
    /// Powers of ten between which all measures lie.
    pub decades: (i32, i32),
    /// Which fits the data support; none with fewer than two.
    pub sentence: Option<String>,
}

/// Misses below this (cm⁻¹) are rounding, and drawn at it.
const LEAST_PER_CM: f64 = 1e-6;

impl ComparisonPicture {
    /// The picture of the findings' comparison; none without a fit that misses anything.
    pub fn of(findings: &Findings) -> Option<Self> {
        let rows: Vec<ComparedRow> = findings
            .comparison
            .fits
            .iter()
            .filter_map(|c| {
                let fit = findings.fits.get(c.index)?;
                let measure = |measure, hartree: Option<f64>| {
                    let value = to_per_cm(hartree?).max(LEAST_PER_CM);
                    value.is_finite().then_some((measure, value))
                };
                let marks = [
                    measure(Measure::Rms, Some(c.rms_residual_hartree)),
                    measure(Measure::Largest, Some(c.largest_residual_hartree)),
                    measure(Measure::LeaveOneOut, c.leave_one_out_rms_hartree),
                    measure(Measure::Outside, c.outside_rms_hartree),
                ];
                Some(ComparedRow {
                    label: fit_label(fit),
                    role: fit_role(fit.request.family),
                    marks: marks.into_iter().flatten().collect(),
                    aicc_difference: c.aicc_difference,
                })
            })
            .collect();
        let values = || rows.iter().flat_map(|r| r.marks.iter().map(|(_, v)| *v));
        let (low, high) = (values().fold(f64::INFINITY, f64::min), values().fold(0.0, f64::max));
        if high <= 0.0 {
            return None;
        }
        let sentence = findings.comparison.sentence.as_ref().map(|s| s.replace("cm-1", "cm⁻¹"));
        let (from, to) = (low.log10().floor() as i32, high.log10().ceil() as i32);
        Some(Self { rows, decades: (from, to.max(from + 1)), sentence })
    }
}
