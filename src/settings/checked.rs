//! The gate for settings: what makes no sense is refused by name, whatever file it came from.

use super::{LevelSettings, Settings, SettingsError};
use crate::fit::{BootstrapSettings, FitSettings, Weighting};
use crate::potential::curve::CurveSettings;
use crate::reach::ReachSettings;
use crate::thermal::ThermalSettings;
use std::fmt::Display;

/// Highest J, as the command line takes it.
pub const HIGHEST_J: u32 = 1_000;
/// Highest Λ.
pub const HIGHEST_LAMBDA: u32 = 20;
/// More levels than this no curve of a molecule has.
const HIGHEST_V: usize = 100_000;
/// Degrees beyond this make a fit to levels meaningless.
const HIGHEST_DEGREE: usize = 12;
/// Most entries of a list that each cost a computation.
const LONGEST_LIST: usize = 10_000;

type Checked = Result<(), SettingsError>;

fn require(fine: bool, name: &'static str, found: impl Display, accepted: &'static str) -> Checked {
    if fine { Ok(()) } else { Err(SettingsError { name, found: found.to_string(), accepted }) }
}

fn above_zero(name: &'static str, value: f64) -> Checked {
    require(value.is_finite() && value > 0.0, name, value, "a finite number above 0")
}

/// A share that leaves something on either side.
fn fraction(name: &'static str, value: f64) -> Checked {
    require(value > 0.0 && value < 1.0, name, value, "a number between 0 and 1")
}

fn not_negative(name: &'static str, value: f64) -> Checked {
    require(value.is_finite() && value >= 0.0, name, value, "a finite number, 0 or more")
}

fn each(values: impl IntoIterator<Item = Checked>) -> Checked {
    values.into_iter().collect()
}

impl Settings {
    /// The one gate through which both front ends send settings, whatever file they came from.
    ///
    /// What depends on the scan (names of columns, rows, the degree that its points allow) is checked where
    /// the scan is known.
    ///
    /// # Errors
    /// The first setting that makes no sense, with what is accepted.
    pub fn checked(&self) -> Result<(), SettingsError> {
        reach(&self.reach)?;
        levels(&self.levels)?;
        curve(&self.interpolation)?;
        fits(&self.fits)?;
        thermal(&self.thermal)?;
        if let Some(mass) = self.masses.reduced_mass_u {
            above_zero("masses.reduced_mass_u", mass)?;
        }
        if let Some(width) = self.densities.averaging_width_angstrom {
            above_zero("densities.averaging_width_angstrom", width)?;
        }
        let pairs = self.isotopologues.len();
        require(pairs <= LONGEST_LIST, "isotopologues", format!("{pairs} pairs"), "at most 10000 pairs")
    }
}

fn reach(settings: &ReachSettings) -> Checked {
    above_zero("reach.tolerance", settings.tolerance)?;
    above_zero("reach.absolute.value", settings.absolute.value)?;
    let own = settings.level_tolerance_per_cm.map(|t| above_zero("reach.level_tolerance_per_cm", t));
    let spacing = settings.spacing_tolerance_per_cm.map(|t| above_zero("reach.spacing_tolerance_per_cm", t));
    each(own.into_iter().chain(spacing))
}

fn levels(settings: &LevelSettings) -> Checked {
    fraction("levels.relative_accuracy", settings.relative_accuracy)?;
    fraction("levels.lean_probability", settings.lean_probability)?;
    fraction("levels.lean_c_n_fraction", settings.lean_c_n_fraction)?;
    fraction("levels.lean_asymptote_fraction", settings.lean_asymptote_fraction)?;
    above_zero("levels.lean_shift_per_cm", settings.lean_shift_per_cm)?;
    let v = |name, v: usize| require(v <= HIGHEST_V, name, v, "a whole number up to 100000");
    v("levels.highest_v", settings.highest_v)?;
    v("levels.constants_highest_v", settings.constants_highest_v)?;
    v("levels.dunham_highest_v", settings.dunham_highest_v)?;
    let degree = |name, degree: usize| {
        require((1..=HIGHEST_DEGREE).contains(&degree), name, degree, "a whole number from 1 to 12")
    };
    degree("levels.constants_degree", settings.constants_degree)?;
    degree("levels.dunham_vibration_degree", settings.dunham_vibration_degree)?;
    degree("levels.dunham_rotation_degree", settings.dunham_rotation_degree)?;
    let too_high = settings.rotation.iter().find(|j| **j > HIGHEST_J);
    require(
        too_high.is_none(),
        "levels.rotation",
        too_high.copied().unwrap_or_default(),
        "whole numbers up to 1000",
    )?;
    let rotations = settings.rotation.len();
    require(
        rotations <= LONGEST_LIST,
        "levels.rotation",
        format!("{rotations} numbers"),
        "at most 10000 numbers",
    )?;
    let lambda = settings.lambda;
    require(lambda <= HIGHEST_LAMBDA, "levels.lambda", lambda, "a whole number up to 20")
}

fn curve(settings: &CurveSettings) -> Checked {
    if let Some(asymptote) = settings.asymptote {
        require(asymptote.is_finite(), "interpolation.asymptote", asymptote, "a finite number")?;
    }
    if let Some(power) = settings.tail_power {
        let fine = (1..=20).contains(&power);
        require(fine, "interpolation.tail_power", power, "a whole number from 1 to 20")?;
    }
    match settings.tail_fit_points {
        Some(points) => {
            require(points > 0, "interpolation.tail_fit_points", points, "a whole number from 1 on")
        }
        None => Ok(()),
    }
}

fn fits(settings: &FitSettings) -> Checked {
    if let Some(window) = settings.window {
        let fine = window.from.is_finite() && window.to.is_finite() && window.from < window.to;
        let found = format!("{} to {} {}", window.from, window.to, window.unit.name());
        require(fine, "fits.window", found, "two finite bond lengths, the smaller first")?;
    }
    let requests = settings.requests.len();
    require(requests <= 100, "fits.requests", format!("{requests} fits"), "at most 100 fits")?;
    match &settings.weights {
        // Whether there is such a column, and what it holds, is for the scan to say.
        Weighting::Equal {} | Weighting::Column { .. } => {}
        Weighting::Point { rows, others, .. } => {
            each(rows.iter().map(|row| not_negative("fits.weights.rows", row.weight)))?;
            not_negative("fits.weights.others", *others)?;
        }
        Weighting::Energy(weights) => {
            above_zero("fits.weights.step_per_cm", weights.step_per_cm)?;
            not_negative("fits.weights.slope_cm", weights.slope_cm)?;
            above_zero("fits.weights.floor_per_cm", weights.floor_per_cm)?;
        }
        Weighting::Noise { sigma_per_cm } => {
            each(sigma_per_cm.iter().map(|s| above_zero("fits.weights.sigma_per_cm", *s)))?;
        }
    }
    if let Some(bootstrap) = &settings.bootstrap {
        let fine = (2..=BootstrapSettings::MOST_REPEATS).contains(&bootstrap.repeats);
        require(fine, "fits.bootstrap.repeats", bootstrap.repeats, "a whole number from 2 to 20000")?;
    }
    match &settings.window_study {
        Some(study) => {
            let fine = (1..=100_000).contains(&study.most_fits);
            require(fine, "fits.window_study.most_fits", study.most_fits, "a whole number from 1 to 100000")
        }
        None => Ok(()),
    }
}

fn thermal(settings: &ThermalSettings) -> Checked {
    let name = "thermal.temperatures_kelvin";
    let temperatures = &settings.temperatures_kelvin;
    // Those outside the range that is computed are left out with a notice.
    each(temperatures.iter().map(|t| require(t.is_finite(), name, t, "finite numbers")))?;
    let count = temperatures.len();
    require(count <= LONGEST_LIST, name, format!("{count} temperatures"), "at most 10000 temperatures")?;
    let symmetry = settings.symmetry_number;
    require(symmetry != Some(0), "thermal.symmetry_number", 0, "a whole number from 1 on")?;
    if let Some(weights) = settings.spin_weights {
        each(weights.map(|w| not_negative("thermal.spin_weights", w)))?;
        require(weights != [0.0, 0.0], "thermal.spin_weights", "0 and 0", "two numbers that are not both 0")?;
    }
    let weight = settings.electronic_weight;
    require(weight > 0, "thermal.electronic_weight", weight, "a whole number from 1 on")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::{RowWeight, Window, WindowStudySettings};
    use crate::units::LengthUnit;

    /// Each setting changed to what makes no sense is refused by its name, with the value found.
    #[test]
    fn settings_without_sense_are_refused_by_name() {
        assert_eq!(Settings::default().checked(), Ok(()));
        type Change = fn(&mut Settings);
        let point = |weight, others| Weighting::Point {
            rows: vec![RowWeight { row: 0, weight }],
            others,
            declared: false,
        };
        let changes: Vec<(&str, Change)> = vec![
            ("reach.tolerance is -0.05", |s| s.reach.tolerance = -0.05),
            ("reach.absolute.value", |s| s.reach.absolute.value = 0.0),
            ("densities.averaging_width_angstrom", |s| s.densities.averaging_width_angstrom = Some(-1.0)),
            ("reach.level_tolerance_per_cm", |s| s.reach.level_tolerance_per_cm = Some(0.0)),
            ("reach.spacing_tolerance_per_cm", |s| s.reach.spacing_tolerance_per_cm = Some(f64::NAN)),
            ("levels.relative_accuracy", |s| s.levels.relative_accuracy = 0.0),
            ("levels.lean_probability", |s| s.levels.lean_probability = 1.5),
            ("levels.lean_c_n_fraction", |s| s.levels.lean_c_n_fraction = 1.0),
            ("levels.lean_asymptote_fraction", |s| s.levels.lean_asymptote_fraction = -0.1),
            ("levels.lean_shift_per_cm", |s| s.levels.lean_shift_per_cm = f64::INFINITY),
            ("levels.highest_v", |s| s.levels.highest_v = usize::MAX),
            ("levels.constants_highest_v", |s| s.levels.constants_highest_v = usize::MAX),
            ("levels.dunham_highest_v", |s| s.levels.dunham_highest_v = usize::MAX),
            ("levels.constants_degree", |s| s.levels.constants_degree = 0),
            ("levels.dunham_vibration_degree", |s| s.levels.dunham_vibration_degree = 40),
            ("levels.dunham_rotation_degree", |s| s.levels.dunham_rotation_degree = 0),
            ("levels.rotation is 5000", |s| s.levels.rotation = vec![1, 5000]),
            ("levels.rotation", |s| s.levels.rotation = vec![1; LONGEST_LIST + 1]),
            ("levels.lambda", |s| s.levels.lambda = 21),
            ("interpolation.asymptote", |s| s.interpolation.asymptote = Some(f64::NAN)),
            ("interpolation.tail_power", |s| s.interpolation.tail_power = Some(0)),
            ("interpolation.tail_fit_points", |s| s.interpolation.tail_fit_points = Some(0)),
            ("fits.window is 2 to 1 bohr", |s| {
                s.fits.window = Some(Window { from: 2.0, to: 1.0, unit: LengthUnit::Bohr });
            }),
            ("fits.requests", |s| s.fits.requests = vec![s.fits.requests[0]; 101]),
            ("fits.weights.sigma_per_cm", |s| {
                s.fits.weights = Weighting::Noise { sigma_per_cm: Some(0.0) };
            }),
            ("fits.bootstrap.repeats", |s| {
                s.fits.bootstrap = Some(BootstrapSettings { repeats: 1, seed: 1 })
            }),
            ("fits.window_study.most_fits", |s| {
                s.fits.window_study = Some(WindowStudySettings { most_fits: 0, ..Default::default() });
            }),
            ("thermal.temperatures_kelvin", |s| s.thermal.temperatures_kelvin = vec![f64::INFINITY]),
            ("thermal.temperatures_kelvin", |s| {
                s.thermal.temperatures_kelvin = vec![300.0; LONGEST_LIST + 1]
            }),
            ("thermal.symmetry_number", |s| s.thermal.symmetry_number = Some(0)),
            ("thermal.spin_weights", |s| s.thermal.spin_weights = Some([0.0, 0.0])),
            ("thermal.spin_weights", |s| s.thermal.spin_weights = Some([-1.0, 1.0])),
            ("thermal.electronic_weight", |s| s.thermal.electronic_weight = 0),
            ("masses.reduced_mass_u", |s| s.masses.reduced_mass_u = Some(-1.0)),
        ];
        for (name, change) in changes {
            let mut settings = Settings::default();
            change(&mut settings);
            let message = settings.checked().expect_err(name).to_string();
            assert!(message.contains(name), "{name}: {message}");
        }
        for (name, weights) in [("rows", point(-1.0, 1.0)), ("others", point(1.0, f64::NAN))] {
            let mut settings = Settings::default();
            settings.fits.weights = weights;
            let message = settings.checked().expect_err(name).to_string();
            assert!(message.contains(&format!("fits.weights.{name}")), "{message}");
        }
    }
}
