//! Every choice the user has, in one value: the same in the window, in the headless command and in a
//! findings file. Unknown keys are refused.

use crate::fit::FitSettings;
use crate::potential::curve::CurveSettings;
use crate::reach::ReachSettings;
use crate::scan::read::ReadSettings;
use crate::species::MassSettings;
use serde::{Deserialize, Serialize};

/// A row of the scan left out by the user.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SetAside {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Why.
    pub reason: String,
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
            constants_highest_v: 4,
            constants_degree: 3,
        }
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
    /// Rows left out.
    pub set_aside: Vec<SetAside>,
    /// Rows that the program would set aside and the user keeps.
    pub kept: Vec<usize>,
    /// The curve through the points and its tails.
    pub interpolation: CurveSettings,
    /// The fits.
    pub fits: FitSettings,
    /// The levels.
    pub levels: LevelSettings,
    /// The reach.
    pub reach: ReachSettings,
}
