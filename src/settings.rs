//! Every choice the user has, in one value: the same in the window, in the headless command and in a
//! findings file. Unknown keys are refused.

mod checked;
mod quantum_numbers;

pub use checked::{HIGHEST_J, HIGHEST_LAMBDA};
pub use quantum_numbers::{quantum_numbers, quantum_numbers_text};

use crate::density::DensitySettings;
use crate::fit::FitSettings;
use crate::potential::curve::CurveSettings;
use crate::reach::ReachSettings;
use crate::scan::read::ReadSettings;
use crate::species::{AtomChoice, MassSettings};
use crate::thermal::ThermalSettings;
use serde::{Deserialize, Serialize};
use thiserror::Error;

/// A row of the scan left out by the user.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SetAside {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Why.
    pub reason: String,
}

/// A note on a row of the scan.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PointNote {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// The note.
    pub text: String,
}

/// Which levels are computed and when they count as leaning on a tail.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct LevelSettings {
    /// Accuracy of level energies relative to the well depth.
    pub relative_accuracy: f64,
    /// No level beyond this v is computed (a tail that hardly falls off can hold thousands).
    pub highest_v: usize,
    /// A level leans when its probability outside the scan exceeds this,
    pub lean_probability: f64,
    /// or when changing C_n by this fraction,
    pub lean_c_n_fraction: f64,
    /// or V_inf by this fraction of the well depth,
    pub lean_asymptote_fraction: f64,
    /// moves it by more than this, in cm⁻¹.
    pub lean_shift_per_cm: f64,
    /// Rotational quantum numbers whose levels are listed beside those without rotation; also those of the
    /// quasi-bound levels.
    pub rotation: Vec<u32>,
    /// Λ of the electronic state: X = J(J + 1) − Λ² for the levels with rotation, and no J below Λ.
    pub lambda: u32,
    /// Whether the levels are computed once more for every moved tail.
    pub tail_sensitivity: bool,
    /// Highest v that enters the table of Y_kl fitted to the levels of several J.
    pub dunham_highest_v: usize,
    /// Highest power of (v + ½) in that table.
    pub dunham_vibration_degree: usize,
    /// Highest power of J(J + 1) in that table.
    pub dunham_rotation_degree: usize,
    /// Highest v that enters the constants from levels.
    pub constants_highest_v: usize,
    /// Degree in (v + ½) of the constants from levels.
    pub constants_degree: usize,
}

impl Default for LevelSettings {
    fn default() -> Self {
        Self {
            relative_accuracy: 1e-10,
            highest_v: 399,
            lean_probability: 1e-4,
            lean_c_n_fraction: 0.2,
            lean_asymptote_fraction: 0.01,
            lean_shift_per_cm: 0.1,
            rotation: Vec::new(),
            lambda: 0,
            tail_sensitivity: false,
            dunham_highest_v: 6,
            dunham_vibration_degree: 4,
            dunham_rotation_degree: 3,
            constants_highest_v: 4,
            constants_degree: 3,
        }
    }
}

impl LevelSettings {
    /// X = J(J + 1) − Λ²; 0 for the levels without rotation.
    pub fn rotation_x(&self, j: u32) -> f64 {
        let (j, lambda) = (f64::from(j), f64::from(self.lambda));
        if j == 0.0 { 0.0 } else { (j * (j + 1.0) - lambda * lambda).max(0.0) }
    }

    /// The J with rotation asked for: ascending, each once, none below Λ.
    pub fn rotating(&self) -> Vec<u32> {
        let mut all: Vec<u32> =
            self.rotation.iter().copied().filter(|&j| j > 0 && j >= self.lambda).collect();
        all.sort_unstable();
        all.dedup();
        all
    }
}

/// All settings of a study.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Settings {
    /// How the file is read.
    pub read: ReadSettings,
    /// Energy column: its full name, its name without the unit, an unambiguous part of it, or its number from 1; none: the first.
    pub curve: Option<String>,
    /// Masses.
    pub masses: MassSettings,
    /// Further pairs of isotopes solved on the same curve.
    pub isotopologues: Vec<[AtomChoice; 2]>,
    /// Rows left out.
    pub set_aside: Vec<SetAside>,
    /// Rows that the program would set aside and the user keeps.
    pub kept: Vec<usize>,
    /// Notes on rows.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub notes: Vec<PointNote>,
    /// The curve through the points and its tails.
    pub interpolation: CurveSettings,
    /// The fits.
    pub fits: FitSettings,
    /// The levels.
    pub levels: LevelSettings,
    /// The reach.
    pub reach: ReachSettings,
    /// The densities.
    pub densities: DensitySettings,
    /// The thermal averages.
    pub thermal: ThermalSettings,
}

/// A setting that makes no sense.
#[derive(Clone, Debug, PartialEq, Error)]
#[error("the setting {name} is {found}; accepted: {accepted}")]
pub struct SettingsError {
    /// Its path in a settings file.
    pub name: &'static str,
    /// The value found.
    pub found: String,
    /// What is accepted.
    pub accepted: &'static str,
}
