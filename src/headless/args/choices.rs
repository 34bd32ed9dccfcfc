//! Choices about the study, the same for study, figure and window.

use super::UsageError;
use super::tolerance::Tolerances;
use super::value::{family_words, finite, fit_requests, value, weighting, window_range};
use crate::fit::{BootstrapSettings, FitRequest, Weighting, Window};
use crate::scan::Scan;
use crate::scan::combine::Recipe;
use crate::scan::read::{DecimalSign, Delimiter, Match, parse_energy_unit, parse_length_unit};
use crate::settings::quantum_numbers;
use crate::settings::{SetAside, Settings};
use crate::species::parse_atoms;
use crate::units::{EnergyUnit, LengthUnit};
use lexopt::{Parser, ValueExt as _};
use std::path::PathBuf;

/// Choices about the study itself, shared by window and headless command; none leaves a setting alone.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct StudyChoices {
    /// Settings file.
    pub settings_file: Option<PathBuf>,
    /// Energy column.
    pub curve: Option<String>,
    /// Bond-length column.
    pub length_column: Option<String>,
    /// Unit of the bond lengths.
    pub length_unit: Option<LengthUnit>,
    /// Unit of the energies.
    pub energy_unit: Option<EnergyUnit>,
    /// The two atoms.
    pub atoms: Option<[crate::species::AtomChoice; 2]>,
    /// Charge.
    pub charge: Option<i32>,
    /// Reduced mass in u.
    pub reduced_mass_u: Option<f64>,
    /// Fit window.
    pub window: Option<Window>,
    /// Energy of the separated atoms in the file's unit and scale.
    pub asymptote: Option<f64>,
    /// Leading inverse power of the tail.
    pub tail_power: Option<u32>,
    /// Outermost points the tail is fitted to.
    pub tail_fit_points: Option<usize>,
    /// Whether the levels are solved again with moved tails.
    pub tail_sensitivity: bool,
    /// Rotational quantum numbers.
    pub rotation: Option<Vec<u32>>,
    /// Λ.
    pub lambda: Option<u32>,
    /// Further pairs of isotopes.
    pub isotopologues: Option<Vec<[crate::species::AtomChoice; 2]>>,
    /// The energy columns.
    pub energy_columns: Vec<String>,
    /// Columns left out.
    pub ignored_columns: Vec<String>,
    /// What separates the columns.
    pub delimiter: Option<Delimiter>,
    /// What stands for decimals.
    pub decimal_sign: Option<DecimalSign>,
    /// Bond lengths, in the scan's unit, whose points are set aside.
    pub set_aside: Vec<f64>,
    /// The two atoms whose distance is the bond length, numbered from 1.
    pub bond: Option<[usize; 2]>,
    /// The fits.
    pub fits: Option<Vec<FitRequest>>,
    /// Weights of the points in fits.
    pub weights: Option<Weighting>,
    /// Resampled residuals: how often.
    pub bootstrap_repeats: Option<usize>,
    /// Seed of the resampling.
    pub seed: Option<u64>,
    /// The fits over all windows.
    pub window_study: bool,
    /// Curves to make from columns.
    pub made: Vec<Recipe>,
    /// Pattern of the bond length in text logs.
    pub length_pattern: Option<String>,
    /// Pattern of the energy in text logs.
    pub energy_pattern: Option<String>,
    /// Which match of the patterns counts.
    pub which_match: Option<Match>,
    /// Temperatures of the thermal averages in K.
    pub temperatures_kelvin: Option<Vec<f64>>,
    /// Thermal averages with rotation.
    pub thermal_rotation: bool,
    /// Tolerances of the reach.
    pub tolerance: Tolerances,
    /// Averaging width of densities in angstrom.
    pub averaging_width_angstrom: Option<f64>,
    /// The levels of the table of densities.
    pub density_levels: Option<Vec<usize>>,
}

impl StudyChoices {
    /// Sets aside the rows of a scan at the bond lengths that `--set-aside` names.
    ///
    /// # Errors
    /// A bond length that the scan does not have.
    pub fn set_rows_aside(&self, scan: &Scan, settings: &mut Settings) -> Result<(), String> {
        for &wanted in &self.set_aside {
            let same = |row: &usize| (scan.bond_lengths[*row] - wanted).abs() <= 1e-9 * wanted.abs();
            let rows: Vec<usize> = (0..scan.bond_lengths.len()).filter(same).collect();
            if rows.is_empty() {
                let unit = scan.length_unit.name();
                return Err(format!(
                    "--set-aside: no point at {wanted} {unit}; give bond lengths as the file has them"
                ));
            }
            let reason = "set aside on the command line";
            settings.set_aside.extend(rows.iter().map(|&row| SetAside { row, reason: reason.to_owned() }));
        }
        Ok(())
    }

    /// The settings with these choices laid over them.
    pub fn apply(&self, settings: &mut Settings) {
        fn set<T: Clone>(target: &mut Option<T>, choice: &Option<T>) {
            if choice.is_some() {
                target.clone_from(choice);
            }
        }
        let patterns = self.length_pattern.is_some() || self.energy_pattern.is_some();
        if patterns || self.which_match.is_some() {
            let lines = settings.read.lines.get_or_insert_default();
            lines.length = self.length_pattern.clone().unwrap_or_else(|| std::mem::take(&mut lines.length));
            lines.energy = self.energy_pattern.clone().unwrap_or_else(|| std::mem::take(&mut lines.energy));
            lines.which = self.which_match.unwrap_or(lines.which);
        }
        settings.read.made.extend(self.made.iter().cloned());
        // Who has a curve made wants to see it.
        if let Some(last) = self.made.last() {
            settings.curve = Some(last.name.clone());
        }
        set(&mut settings.curve, &self.curve);
        set(&mut settings.read.length_column, &self.length_column);
        if !self.energy_columns.is_empty() {
            settings.read.energy_columns = Some(self.energy_columns.clone());
        }
        if !self.ignored_columns.is_empty() {
            settings.read.ignored_columns.clone_from(&self.ignored_columns);
        }
        set(&mut settings.read.length_unit, &self.length_unit);
        set(&mut settings.read.energy_unit, &self.energy_unit);
        set(&mut settings.read.delimiter, &self.delimiter);
        set(&mut settings.read.decimal_sign, &self.decimal_sign);
        set(&mut settings.read.bond, &self.bond);
        set(&mut settings.fits.window, &self.window);
        set(&mut settings.interpolation.asymptote, &self.asymptote);
        set(&mut settings.interpolation.tail_power, &self.tail_power);
        set(&mut settings.interpolation.tail_fit_points, &self.tail_fit_points);
        settings.levels.tail_sensitivity |= self.tail_sensitivity;
        if let Some(rotation) = &self.rotation {
            settings.levels.rotation.clone_from(rotation);
        }
        if let Some(lambda) = self.lambda {
            settings.levels.lambda = lambda;
        }
        if let Some(isotopologues) = &self.isotopologues {
            settings.isotopologues.clone_from(isotopologues);
        }
        if self.atoms.is_some() {
            settings.masses.atoms.clone_from(&self.atoms);
            settings.masses.reduced_mass_u = None;
        }
        set(&mut settings.masses.reduced_mass_u, &self.reduced_mass_u);
        if let Some(fits) = &self.fits {
            settings.fits.requests.clone_from(fits);
        }
        if let Some(weights) = &self.weights {
            settings.fits.weights.clone_from(weights);
        }
        if let Some(repeats) = self.bootstrap_repeats {
            settings.fits.bootstrap.get_or_insert_default().repeats = repeats;
        }
        if let Some((seed, bootstrap)) = self.seed.zip(settings.fits.bootstrap.as_mut()) {
            bootstrap.seed = seed;
        }
        if self.window_study {
            settings.fits.window_study.get_or_insert_default();
        }
        if let Some(temperatures) = &self.temperatures_kelvin {
            settings.thermal.temperatures_kelvin.clone_from(temperatures);
        }
        settings.thermal.rotation |= self.thermal_rotation;
        self.tolerance.apply(&mut settings.reach);
        set(&mut settings.densities.averaging_width_angstrom, &self.averaging_width_angstrom);
        if let Some(levels) = &self.density_levels {
            settings.densities.levels.clone_from(levels);
        }
        set(&mut settings.masses.charge, &self.charge);
    }
}

impl StudyChoices {
    /// An option that has no effect as it stands, and the one that it needs. A settings file may hold that one.
    pub(super) fn idle(&self) -> Option<(&'static str, &'static str)> {
        if self.settings_file.is_some() {
            return None;
        }
        let pairs = [
            (self.seed.is_some() && self.bootstrap_repeats.is_none(), "seed", "bootstrap"),
            (self.tail_fit_points.is_some() && self.tail_power.is_none(), "tail-points", "tail-power"),
        ];
        pairs.into_iter().find(|(idle, ..)| *idle).map(|(_, option, needed)| (option, needed))
    }
}

/// Takes `--set-aside`, which only commands have that study one scan after the other by themselves.
pub(super) fn set_aside(parser: &mut Parser, choices: &mut StudyChoices) -> Result<(), UsageError> {
    let list = |t: &str| t.split(',').map(|r| finite(r.trim()).filter(|r| *r > 0.0)).collect();
    let accepted = "bond lengths in the unit of the file, e.g. 1.44,1.48";
    choices.set_aside = value(parser, "set-aside", accepted, list)?;
    Ok(())
}

/// Takes the option into `choices`; false where it is no choice about the study.
pub(super) fn study_choice(
    name: &str,
    parser: &mut Parser,
    choices: &mut StudyChoices,
) -> Result<bool, UsageError> {
    match name {
        "settings" => choices.settings_file = Some(parser.value()?.into()),
        "curve" => choices.curve = Some(parser.value()?.string()?),
        "length-column" => choices.length_column = Some(parser.value()?.string()?),
        "energy-column" => choices.energy_columns.push(parser.value()?.string()?),
        "ignore-column" => choices.ignored_columns.push(parser.value()?.string()?),
        "length-unit" => {
            let names = LengthUnit::ALL.map(LengthUnit::name).join(", ");
            choices.length_unit = Some(value(parser, "length-unit", &names, parse_length_unit)?);
        }
        "energy-unit" => {
            let names = EnergyUnit::ALL.map(EnergyUnit::name).join(", ");
            choices.energy_unit = Some(value(parser, "energy-unit", &names, parse_energy_unit)?);
        }
        "delimiter" => {
            let words = Delimiter::ALL.map(Delimiter::words).join(", ");
            let named = |t: &str| Delimiter::ALL.into_iter().find(|d| d.words() == t);
            choices.delimiter = Some(value(parser, "delimiter", &words, named)?);
        }
        "decimal-sign" => {
            let named = |t: &str| DecimalSign::ALL.into_iter().find(|d| d.word() == t);
            choices.decimal_sign = Some(value(parser, "decimal-sign", "point or comma", named)?);
        }
        "length-pattern" => choices.length_pattern = Some(parser.value()?.string()?),
        "energy-pattern" => choices.energy_pattern = Some(parser.value()?.string()?),
        "match" => {
            let which = |t: &str| match t {
                "first" => Some(Match::First),
                "last" => Some(Match::Last),
                _ => None,
            };
            choices.which_match = Some(value(parser, "match", "first or last", which)?);
        }
        "make" => {
            let text = parser.value()?.string()?;
            choices.made.push(Recipe::parse(&text).map_err(|error| UsageError::Value {
                option: "make",
                found: text.clone(),
                accepted: error.to_string(),
            })?);
        }
        "bond" => {
            let pair = |t: &str| {
                let (a, b) = t.split_once(',')?;
                let number = |s: &str| s.trim().parse().ok().filter(|n: &usize| *n > 0);
                let (a, b) = (number(a)?, number(b)?);
                (a != b).then_some([a, b])
            };
            choices.bond = Some(value(parser, "bond", "two different atom numbers from 1, e.g. 1,2", pair)?);
        }
        "atoms" => {
            let text = parser.value()?.string()?;
            choices.atoms = Some(parse_atoms(&text).map_err(|error| UsageError::Value {
                option: "atoms",
                found: text.clone(),
                accepted: error.to_string(),
            })?);
        }
        "charge" => {
            let accepted = "a whole number, e.g. 1 or -1";
            choices.charge = Some(value(parser, "charge", accepted, |t| t.parse().ok())?);
        }
        "reduced-mass" => {
            let mass = |t: &str| t.parse().ok().filter(|m: &f64| m.is_finite() && *m > 0.0);
            choices.reduced_mass_u = Some(value(parser, "reduced-mass", "a positive number in u", mass)?);
        }
        "asymptote" => {
            let accepted = "a number in the unit and on the scale of the energy column";
            choices.asymptote = Some(value(parser, "asymptote", accepted, finite)?);
        }
        "tail-power" => {
            let power = |t: &str| t.parse().ok().filter(|n| (1..=20).contains(n));
            choices.tail_power = Some(value(parser, "tail-power", "a whole number from 1 to 20", power)?);
        }
        "tail-points" => {
            let count = |t: &str| t.parse().ok().filter(|n| *n >= 1);
            choices.tail_fit_points = Some(value(parser, "tail-points", "a whole number from 1 on", count)?);
        }
        "tail-sensitivity" => choices.tail_sensitivity = true,
        "rotation" => {
            let accepted = "J up to 1000 with commas or a range: 1,2,10 or 0-20";
            choices.rotation = Some(value(parser, "rotation", accepted, some_numbers)?);
        }
        "lambda" => {
            let accepted = "a whole number from 0 to 20";
            let lambda = |t: &str| t.parse().ok().filter(|n| *n <= 20);
            choices.lambda = Some(value(parser, "lambda", accepted, lambda)?);
        }
        "isotopologues" => {
            let text = parser.value()?.string()?;
            let pairs = text.split(';').filter(|pair| !pair.trim().is_empty()).map(parse_atoms);
            let pairs: Result<Vec<_>, _> = pairs.collect();
            choices.isotopologues = Some(pairs.map_err(|error| UsageError::Value {
                option: "isotopologues",
                found: text.clone(),
                accepted: format!("pairs with a semicolon between, e.g. 2H,35Cl;1H,37Cl ({error})"),
            })?);
        }
        "window" => {
            let accepted = "two bond lengths in angstrom, the smaller first: 0.8,1.2";
            choices.window = Some(value(parser, "window", accepted, window_range)?);
        }
        "fits" => {
            let accepted = format!(
                "families with commas between ({}), polynomial:DEGREE:VARIABLE (x, xi, z, ogilvie), \
                 extended_morse:ORDER:P",
                family_words()
            );
            choices.fits = Some(value(parser, "fits", &accepted, fit_requests)?);
        }
        "weights" => {
            let accepted = "equal, noise, noise=SIGMA (cm-1), energy, energy=STEP (cm-1), column=NAME, sigma=NAME or \
                            rows=ROW:WEIGHT,... (rows counted from 0)";
            choices.weights = Some(value(parser, "weights", accepted, weighting)?);
        }
        "bootstrap" => {
            let most = BootstrapSettings::MOST_REPEATS;
            let repeats = |t: &str| t.parse().ok().filter(|k| (2..=most).contains(k));
            let accepted = format!("a number of repeats from 2 to {most}");
            choices.bootstrap_repeats = Some(value(parser, "bootstrap", &accepted, repeats)?);
        }
        "seed" => {
            let accepted = "a whole number, not negative";
            choices.seed = Some(value(parser, "seed", accepted, |t| t.parse().ok())?);
        }
        "window-study" => choices.window_study = true,
        "temperatures" => {
            let (low, high) = crate::thermal::TEMPERATURES_KELVIN;
            let accepted = format!("temperatures in K, {low} to {high}, with commas: 100,298.15,1000");
            let list = |t: &str| {
                let kelvin = |s: &str| finite(s.trim()).filter(|k| (low..=high).contains(k));
                t.split(',').map(kelvin).collect::<Option<Vec<f64>>>()
            };
            choices.temperatures_kelvin = Some(value(parser, "temperatures", &accepted, list)?);
        }
        "tolerance" => {
            let found = parser.value()?.string()?;
            choices.tolerance.read(&found)?;
        }
        "averaging-width" => {
            let width = |t: &str| finite(t).filter(|w| *w > 0.0);
            let accepted = "a positive number in angstrom";
            choices.averaging_width_angstrom = Some(value(parser, "averaging-width", accepted, width)?);
        }
        "density-levels" => {
            let accepted = "v up to 1000 with commas or a range: 0,1,10 or 0-5";
            let levels = |t: &str| Some(some_numbers(t)?.into_iter().map(|v| v as usize).collect());
            choices.density_levels = Some(value(parser, "density-levels", accepted, levels)?);
        }
        "thermal-rotation" => choices.thermal_rotation = true,
        _ => return Ok(false),
    }
    Ok(true)
}

/// A list that is not empty.
fn some_numbers(text: &str) -> Option<Vec<u32>> {
    quantum_numbers(text).filter(|all| !all.is_empty())
}
