//! All results of a study: per step a value or that step's failure, and the notices.

use crate::estimate::Estimate;
use crate::fit::{BootstrapSettings, Comparison, Fit, FitError, FitRequest, WindowStudy};
use crate::notice::{Notice, Severity};
use crate::potential::curve::ScanCurve;
use crate::radial::Level;
use crate::reach::Reach;
use crate::scan::Layout;
use crate::settings::Settings;
use crate::species::Masses;
use crate::spectroscopy::Constants;
use crate::thermal::ThermalPoint;
use crate::units::{EnergyUnit, LengthUnit};
use std::sync::Arc;

/// A point of the curve, used or not.
#[derive(Clone, Debug, PartialEq)]
pub struct Point {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Bond length as read, in the scan's unit.
    pub r_as_read: f64,
    /// Bond length in bohr.
    pub r_bohr: f64,
    /// Energy as read, in the column's unit.
    pub energy_as_read: f64,
    /// Energy in hartree.
    pub energy_hartree: f64,
    /// Whether the study uses it.
    pub used: bool,
    /// Weight in fits.
    pub weight: f64,
    /// Why it is not used.
    pub why_not: Option<String>,
}

/// Where the curve came from.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// File name without folder.
    pub file_name: String,
    /// SHA-256 of the bytes read.
    pub sha256: String,
    /// Layout of the file.
    pub layout: Layout,
    /// Full header name of the energy column.
    pub curve: String,
    /// The same without the unit, for display.
    pub curve_label: String,
    /// The recipe, where the curve was made from columns.
    pub made: Option<String>,
    /// Unit of the bond lengths as read.
    pub length_unit: LengthUnit,
    /// Unit of the energies as read.
    pub energy_unit: EnergyUnit,
    /// Header name of the bond-length column.
    pub length_column: String,
    /// The points, ascending in r.
    pub points: Vec<Point>,
}

/// One fit that was asked for, with what follows from it.
#[derive(Clone, Debug)]
pub struct FitFindings {
    /// What was asked.
    pub request: FitRequest,
    /// The fit, or why there is none.
    pub result: Result<Fit, FitError>,
    /// Constants of the fitted function by name, in cm⁻¹; none where it has none.
    pub constants_per_cm: Vec<(&'static str, Option<Estimate>)>,
    /// The fitted function's own levels in cm⁻¹ above its own minimum, v ascending.
    pub levels_per_cm: Vec<f64>,
    /// Their standard errors in cm⁻¹, same order, where known.
    pub level_errors_per_cm: Vec<Option<f64>>,
    /// Standard errors by resampled residuals; none unless asked for.
    pub bootstrap: Option<FitBootstrap>,
}

/// Standard errors of one fit and of what follows from it, by resampled residuals.
#[derive(Clone, Debug, PartialEq)]
pub struct FitBootstrap {
    /// What was asked.
    pub settings: BootstrapSettings,
    /// Repeats that did not converge.
    pub failed: usize,
    /// Of the parameters, in atomic units, in the order of the fit.
    pub parameter_errors: Vec<Option<f64>>,
    /// Of the constants in cm⁻¹, in the order of [`FitFindings::constants_per_cm`].
    pub constant_errors_per_cm: Vec<Option<f64>>,
    /// Of the levels in cm⁻¹.
    pub level_errors_per_cm: Vec<Option<f64>>,
}

/// All results of a study.
#[derive(Clone, Debug)]
pub struct Findings {
    /// Where the curve came from.
    pub source: Source,
    /// The masses; none when the scan names no atoms and no mass was given.
    pub masses: Option<Masses>,
    /// The settings in force.
    pub settings: Settings,
    /// The curve; none when the study is impossible.
    pub curve: Option<Arc<ScanCurve>>,
    /// The fits, in the order of the settings.
    pub fits: Vec<FitFindings>,
    /// The fits side by side.
    pub comparison: Comparison,
    /// The fits over many windows; none unless asked for.
    pub window_study: Option<WindowStudy>,
    /// The levels, v ascending.
    pub levels: Vec<Level>,
    /// The constants.
    pub constants: Constants,
    /// The reach; none without a minimum.
    pub reach: Option<Reach>,
    /// Thermal averages by temperature; empty without levels.
    pub thermal: Vec<ThermalPoint>,
    /// All remarks, the gravest first.
    pub notices: Vec<Notice>,
}

impl Findings {
    /// Whether the study was impossible (a notice says why).
    pub fn impossible(&self) -> bool {
        self.notices.iter().any(|n| n.severity == Severity::Stop)
    }

    /// What thermal averages are made from; none without levels.
    pub fn thermal_input(&self) -> Option<crate::thermal::ThermalInput<'_>> {
        let (curve, masses) = (self.curve.as_ref()?, self.masses.as_ref()?);
        let morse =
            self.fits.iter().find(|f| f.request.family == crate::fit::Family::Morse && f.result.is_ok());
        (!self.levels.is_empty()).then_some(crate::thermal::ThermalInput {
            levels: &self.levels,
            force_constant_hartree_per_bohr2: curve.local.second_hartree,
            reduced_mass_me: masses.reduced_mass_me,
            morse_per_cm: morse.map_or(&[], |f| &f.levels_per_cm),
        })
    }

    /// The fit of a family that succeeded, where there is one.
    pub fn fit_of(&self, family: crate::fit::Family) -> Option<&Fit> {
        self.fits.iter().find(|f| f.request.family == family).and_then(|f| f.result.as_ref().ok())
    }
}
