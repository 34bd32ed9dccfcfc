//! All results of a study: per step a value or that step's failure, and the notices.

use crate::density::Densities;
use crate::estimate::Estimate;
use crate::fit::{
    BootstrapSettings, Comparison, Family, Fit, FitError, FitRequest, Window, WindowStudy, default_window,
};
use crate::notice::{Notice, Severity};
use crate::potential::curve::ScanCurve;
use crate::potential::{Model, Morse};
use crate::radial::Level;
use crate::reach::{FitReach, Reach};
use crate::scan::Layout;
use crate::settings::Settings;
use crate::species::Masses;
use crate::spectroscopy::{BirgeSponer, Constants, DunhamTable, NearDissociation};
use crate::thermal::{Position, RotatingSum, ThermalDensity, ThermalPoint, thermal, thermal_density};
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
    /// A note of the user.
    pub note: Option<String>,
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
    /// Where the fit stands for the curve; none without a fit.
    pub reach: Option<FitReach>,
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

/// A level behind the centrifugal barrier. Energies count from V_e.
#[derive(Clone, Debug, PartialEq)]
pub struct QuasiBoundLevel {
    /// Vibrational quantum number, counted on from the bound levels of the same J.
    pub v: usize,
    /// Rotational quantum number.
    pub j: u32,
    /// Energy in cm⁻¹.
    pub energy_per_cm: f64,
    /// Width Γ in cm⁻¹.
    pub width_per_cm: f64,
    /// Energy and width by the second way, in cm⁻¹.
    pub by_phase_per_cm: Option<(f64, f64)>,
    /// Top of the barrier in cm⁻¹.
    pub barrier_per_cm: f64,
    /// Where it stands, in bohr.
    pub barrier_bohr: f64,
}

impl QuasiBoundLevel {
    /// Lifetime ħ/Γ in seconds; none where the width is below the smallest number.
    pub fn lifetime_seconds(&self) -> Option<f64> {
        (self.width_per_cm > 0.0).then(|| SECOND_PER_CM / self.width_per_cm)
    }
}

/// 1/(2π c) in seconds times cm⁻¹: the lifetime of a width of 1 cm⁻¹ (c is exact).
const SECOND_PER_CM: f64 = 1.0 / (std::f64::consts::TAU * 29_979_245_800.0);

/// A property column averaged over the levels.
#[derive(Clone, Debug, PartialEq)]
pub struct PropertyAverages {
    /// Full header name of the column.
    pub column: String,
    /// Its unit as written.
    pub unit: Option<String>,
    /// One average a level.
    pub levels: Vec<PropertyAverage>,
}

/// ⟨v|f|v⟩ of a property f(r).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PropertyAverage {
    /// Vibrational quantum number.
    pub v: usize,
    /// Rotational quantum number.
    pub j: u32,
    /// The average, in the column's unit.
    pub value: f64,
    /// Probability outside the points of the column, where its end values were taken.
    pub outside: f64,
}

/// Other isotopes on the same curve.
#[derive(Clone, Debug, PartialEq)]
pub struct Isotopologue {
    /// The masses.
    pub masses: Masses,
    /// ω_e in cm⁻¹.
    pub omega_e_per_cm: f64,
    /// Energy of v = 0 above V_e in cm⁻¹.
    pub zero_point_energy_per_cm: Option<f64>,
    /// D_0 in cm⁻¹, where the asymptote is known.
    pub d_0_per_cm: Option<f64>,
    /// The levels, v ascending.
    pub levels: Vec<IsotopicLevel>,
}

/// A level of other isotopes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IsotopicLevel {
    /// Vibrational quantum number.
    pub v: usize,
    /// Energy above V_e in cm⁻¹.
    pub energy_per_cm: f64,
    /// B_v in cm⁻¹.
    pub b_v_per_cm: f64,
    /// Energy minus that of the study's own isotopes at the same v, in cm⁻¹.
    pub shift_per_cm: Option<f64>,
}

/// How many levels there are and how many the scan supports.
#[derive(Clone, Debug, PartialEq)]
pub struct LevelSupport {
    /// All levels without rotation.
    pub levels: usize,
    /// Those that lean on no tail.
    pub supported: usize,
    /// What moving the tail does; empty unless asked for.
    pub sensitivity: Vec<TailTrial>,
}

/// The levels once more with another tail.
#[derive(Clone, Debug, PartialEq)]
pub struct TailTrial {
    /// What was changed, in words.
    pub change: String,
    /// How many levels there are then.
    pub levels: usize,
    /// How many, from v = 0 on, moved by no more than a leaning level may.
    pub unmoved: usize,
    /// Largest shift of a level that is there in both, in cm⁻¹.
    pub largest_shift_per_cm: f64,
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
    /// The levels without rotation, v ascending.
    pub levels: Vec<Level>,
    /// The levels of the J asked for: J ascending, then v.
    pub rotational_levels: Vec<Level>,
    /// The quasi-bound levels of the J asked for; none where no J was.
    pub quasi_bound: Option<Vec<QuasiBoundLevel>>,
    /// The scan's property columns averaged over the levels without rotation.
    pub property_averages: Vec<PropertyAverages>,
    /// The isotopes asked for.
    pub isotopologues: Vec<Isotopologue>,
    /// How many levels the scan supports; none without levels.
    pub level_support: Option<LevelSupport>,
    /// Y_kl fitted to the levels of several J; none where no J was asked for.
    pub dunham_table: Option<DunhamTable>,
    /// Spacings and the straight line through them.
    pub birge_sponer: Option<BirgeSponer>,
    /// The highest levels under an inverse-power tail; none without one.
    pub near_dissociation: Option<NearDissociation>,
    /// The constants.
    pub constants: Constants,
    /// The reach; none without a minimum.
    pub reach: Option<Reach>,
    /// Figures of the densities of the levels without rotation.
    pub densities: Densities,
    /// Where the lowest levels of the Morse fit are, v ascending; empty without one.
    pub morse_positions: Vec<Position>,
    /// Thermal averages by temperature; empty without levels.
    pub thermal: Vec<ThermalPoint>,
    /// What the averages with rotation are made from, for other temperatures; none unless asked for.
    pub rotating_sum: Option<Arc<RotatingSum>>,
    /// Bond lengths whose computation would help most, ascending.
    pub next_points: Vec<NextPoint>,
    /// All remarks, the gravest first.
    pub notices: Vec<Notice>,
}

/// A bond length worth computing.
#[derive(Clone, Debug, PartialEq)]
pub struct NextPoint {
    /// Bond length in bohr.
    pub r_bohr: f64,
    /// The same in the unit of the scan.
    pub r_as_read: f64,
    /// Why there.
    pub why: String,
}

impl Findings {
    /// Whether the study was impossible (a notice says why).
    pub fn impossible(&self) -> bool {
        self.notices.iter().any(|n| n.severity == Severity::Stop)
    }

    /// What thermal averages are made from; none without levels.
    pub fn thermal_input(&self) -> Option<crate::thermal::ThermalInput<'_>> {
        let (curve, masses) = (self.curve.as_ref()?, self.masses.as_ref()?);
        let morse = self.found_fit(Family::Morse);
        (!self.levels.is_empty()).then_some(crate::thermal::ThermalInput {
            levels: &self.levels,
            force_constant_hartree_per_bohr2: curve.local.second_hartree,
            reduced_mass_me: masses.reduced_mass_me,
            morse_per_cm: morse.map_or(&[], |f| &f.levels_per_cm),
            morse_positions: &self.morse_positions,
        })
    }

    /// Thermal averages at other temperatures than those of the settings, with rotation where the settings have it.
    pub fn thermal_at(&self, temperatures_kelvin: &[f64]) -> Vec<ThermalPoint> {
        let mut points = self.thermal_input().map_or_else(Vec::new, |i| thermal(&i, temperatures_kelvin));
        if let Some(sum) = &self.rotating_sum {
            for point in &mut points {
                point.rotating = Some(sum.at(point.kelvin, point.harmonic));
            }
        }
        points
    }

    /// The window of the fits: as given, or the default one around the minimum; none without a minimum.
    pub fn window(&self) -> Option<Window> {
        self.settings.fits.window.or_else(|| {
            let r: Vec<f64> = self.source.points.iter().filter(|p| p.used).map(|p| p.r_as_read).collect();
            let curve = self.curve.as_ref()?;
            Some(default_window(curve.local.r_e_bohr, &r, self.source.length_unit))
        })
    }

    /// Density and populations at a temperature; none without levels or outside the temperatures that are computed.
    pub fn thermal_density(&self, kelvin: f64) -> Option<ThermalDensity> {
        let input = self.thermal_input()?;
        let spring = (input.force_constant_hartree_per_bohr2, input.reduced_mass_me);
        thermal_density(&self.levels, self.curve.as_ref()?.local.r_e_bohr, spring, kelvin)
    }

    /// The first fit of a family that succeeded, with what follows from it.
    pub fn found_fit(&self, family: Family) -> Option<&FitFindings> {
        self.fits.iter().find(|f| f.request.family == family && f.result.is_ok())
    }

    /// That fit itself.
    pub fn fit_of(&self, family: Family) -> Option<&Fit> {
        self.found_fit(family)?.result.as_ref().ok()
    }

    /// The Morse function of the first Morse fit that succeeded.
    pub fn morse(&self) -> Option<Morse> {
        match self.fit_of(Family::Morse)?.model {
            Model::Morse(morse) => Some(morse),
            _ => None,
        }
    }
}
