//! Command-line arguments to values.

use crate::export::parameters::ParameterUnits;
use crate::export::table::Table;
use crate::figure::drawing::{Paper, Subject, View};
use crate::fit::{BootstrapSettings, EnergyWeights, Weighting, Window};
use crate::scan::combine::Recipe;
use crate::scan::read::{Match, parse_energy_unit, parse_length_unit};
use crate::settings::Settings;
use crate::species::parse_atoms;
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit};
use lexopt::{Arg, Parser, ValueExt as _};
use std::ffi::OsString;
use std::path::PathBuf;
use thiserror::Error;

/// What the user wants.
#[derive(Clone, Debug)]
pub enum Command {
    /// The help text.
    Help,
    /// The version.
    Version,
    /// The window, or a picture of it.
    Window(Box<WindowArgs>),
    /// Headless studies.
    Study(Box<StudyArgs>),
    /// A picture of a study.
    Figure(Box<FigureArgs>),
    /// A findings file computed again.
    Recheck(Box<RecheckArgs>),
}

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
    /// The two atoms whose distance is the bond length, numbered from 1.
    pub bond: Option<[usize; 2]>,
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
}

impl StudyChoices {
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
        set(&mut settings.read.length_unit, &self.length_unit);
        set(&mut settings.read.energy_unit, &self.energy_unit);
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
        if let Some(charge) = self.charge {
            settings.masses.charge = charge;
        }
    }
}

/// Arguments of the window.
#[derive(Clone, Debug, Default)]
pub struct WindowArgs {
    /// Files to open.
    pub files: Vec<PathBuf>,
    /// `auto`, `gl` or `cpu`.
    pub renderer: Option<String>,
    /// `light` or `dark`.
    pub theme: Option<String>,
    /// Page at the right.
    pub page: Option<String>,
    /// Where to paint a picture instead of opening a window.
    pub picture: Option<PathBuf>,
    /// Replace an existing picture.
    pub overwrite: bool,
    /// Size of the picture in points.
    pub size: Option<(u32, u32)>,
    /// Pixels per point of the picture.
    pub scale: Option<f32>,
    /// Choices about the study.
    pub choices: StudyChoices,
}

/// Arguments of the headless study.
#[derive(Clone, Debug, Default)]
pub struct StudyArgs {
    /// Files to study.
    pub files: Vec<PathBuf>,
    /// Choices about the study.
    pub choices: StudyChoices,
    /// Findings file; `-` is standard output.
    pub out: Option<PathBuf>,
    /// Folder for one findings file per study.
    pub out_dir: Option<PathBuf>,
    /// Tables to write.
    pub tables: Vec<(Table, PathBuf)>,
    /// Files for the parameters of the fits, as text or, where the name ends in `.tex`, LaTeX.
    pub parameters: Option<PathBuf>,
    /// Units of parameters and force constants, in the summary and in that file.
    pub units: ParameterUnits,
    /// Replace existing files.
    pub overwrite: bool,
    /// Bond lengths, in the scan's unit, whose points are set aside.
    pub set_aside: Vec<f64>,
    /// Print timings.
    pub timings: bool,
    /// Only say what was understood.
    pub dry_run: bool,
    /// Repeat each study for the timings.
    pub repeat: usize,
}

/// Arguments of a picture.
#[derive(Clone, Debug)]
pub struct FigureArgs {
    /// The scan.
    pub file: PathBuf,
    /// Choices about the study.
    pub choices: StudyChoices,
    /// The picture: its ending says the format.
    pub out: PathBuf,
    /// Which picture.
    pub subject: Subject,
    /// The paper.
    pub paper: Paper,
    /// Dots per inch of a PNG picture.
    pub dots_per_inch: f64,
    /// Replace an existing file.
    pub overwrite: bool,
}

/// Arguments of a recheck.
#[derive(Clone, Debug, PartialEq)]
pub struct RecheckArgs {
    /// The findings file.
    pub findings: PathBuf,
    /// The scan, where it is not beside the findings.
    pub source: Option<PathBuf>,
}

/// Wrong usage.
#[derive(Debug, Error)]
pub enum UsageError {
    /// An option's value is missing, malformed or unexpected.
    #[error("{0}")]
    Argument(#[from] lexopt::Error),
    /// An option has a value that it cannot have.
    #[error("--{option}: {found:?} is not understood; accepted: {accepted}")]
    Value {
        /// The option.
        option: &'static str,
        /// The value given.
        found: String,
        /// What is accepted.
        accepted: String,
    },
    /// Nothing to study.
    #[error("study: name at least one file")]
    NoFile,
    /// Two ways to say the mass.
    #[error("--atoms and --reduced-mass both give the mass; keep one")]
    TwoMasses,
    /// A command that takes one file has none or several.
    #[error("{command}: name one file, not {count}")]
    OneFile {
        /// The command.
        command: &'static str,
        /// How many files were named.
        count: usize,
    },
    /// A picture without a place to go.
    #[error("figure: say where to with --out F.svg, F.pdf or F.png")]
    NoOut,
    /// An option that belongs to the other command.
    #[error("--{option} belongs to {command}")]
    Elsewhere {
        /// The option.
        option: &'static str,
        /// The command it belongs to.
        command: &'static str,
    },
}

/// Reads the arguments after the program's name.
///
/// # Errors
/// [`UsageError`] for unknown options and values that are not understood.
pub fn parse(arguments: impl IntoIterator<Item = OsString>) -> Result<Command, UsageError> {
    let mut arguments: Vec<OsString> = arguments.into_iter().collect();
    let verb = arguments.first().and_then(|a| Verb::named(a.to_str()?)).unwrap_or(Verb::Window);
    if verb != Verb::Window {
        arguments.remove(0);
    }
    let mut parser = Parser::from_args(arguments);
    let mut choices = StudyChoices::default();
    let mut files = Vec::new();
    let mut overwrite = false;
    let mut study = StudyArgs { repeat: 1, ..StudyArgs::default() };
    let mut window = WindowArgs::default();
    let mut figure = FigureOptions::default();
    let mut source = None;
    while let Some(argument) = parser.next()? {
        match argument {
            Arg::Short('h') | Arg::Long("help") => return Ok(Command::Help),
            Arg::Short('V') | Arg::Long("version") => return Ok(Command::Version),
            Arg::Value(file) => files.push(file.into()),
            Arg::Long("overwrite") if verb != Verb::Recheck => overwrite = true,
            Arg::Long(name) => {
                let name = name.to_owned();
                let known = verb != Verb::Recheck && study_choice(&name, &mut parser, &mut choices)?
                    || match verb {
                        Verb::Study => study_option(&name, &mut parser, &mut study)?,
                        Verb::Window => window_option(&name, &mut parser, &mut window)?,
                        Verb::Figure => figure_option(&name, &mut parser, &mut figure)?,
                        Verb::Recheck if name == "source" => {
                            source = Some(parser.value()?.into());
                            true
                        }
                        Verb::Recheck => false,
                    };
                if !known {
                    return Err(unknown_option(&name, verb));
                }
            }
            other => return Err(other.unexpected().into()),
        }
    }
    if choices.atoms.is_some() && choices.reduced_mass_u.is_some() {
        return Err(UsageError::TwoMasses);
    }
    let one = |command, files: Vec<PathBuf>| match <[PathBuf; 1]>::try_from(files) {
        Ok([file]) => Ok(file),
        Err(files) => Err(UsageError::OneFile { command, count: files.len() }),
    };
    Ok(match verb {
        Verb::Window => Command::Window(Box::new(WindowArgs { files, choices, overwrite, ..window })),
        Verb::Study if files.is_empty() => return Err(UsageError::NoFile),
        Verb::Study => {
            // A table of the window study asks for that study.
            choices.window_study |= study.tables.iter().any(|(table, _)| *table == Table::WindowStudy);
            Command::Study(Box::new(StudyArgs { files, choices, overwrite, ..study }))
        }
        Verb::Figure => Command::Figure(Box::new(FigureArgs {
            file: one("figure", files)?,
            choices,
            out: figure.out.ok_or(UsageError::NoOut)?,
            subject: figure.subject.unwrap_or(Subject::Curve),
            paper: figure.paper,
            dots_per_inch: figure.dots_per_inch.unwrap_or(300.0),
            overwrite,
        })),
        Verb::Recheck => Command::Recheck(Box::new(RecheckArgs { findings: one("recheck", files)?, source })),
    })
}

/// The commands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Verb {
    Window,
    Study,
    Figure,
    Recheck,
}

impl Verb {
    fn named(word: &str) -> Option<Self> {
        match word {
            "study" => Some(Self::Study),
            "figure" => Some(Self::Figure),
            "recheck" => Some(Self::Recheck),
            _ => None,
        }
    }

    /// Its own options.
    const fn options(self) -> &'static [&'static str] {
        match self {
            Self::Window => &["renderer", "theme", "page", "picture", "size", "scale"],
            Self::Study => &[
                "set-aside",
                "out",
                "out-dir",
                "table",
                "timings",
                "repeat",
                "dry-run",
                "parameters",
                "parameter-energy-unit",
                "parameter-length-unit",
                "force-constant-unit",
                "convention",
            ],
            Self::Figure => &["out", "what", "view", "width-mm", "font-pt", "theme", "dpi"],
            Self::Recheck => &["source"],
        }
    }

    const fn call(self) -> &'static str {
        match self {
            Self::Window => "the window: parabound FILE...",
            Self::Study => "parabound study",
            Self::Figure => "parabound figure",
            Self::Recheck => "parabound recheck",
        }
    }
}

/// Options of a picture as far as they are given.
#[derive(Default)]
struct FigureOptions {
    out: Option<PathBuf>,
    subject: Option<Subject>,
    paper: Paper,
    dots_per_inch: Option<f64>,
}

/// An option that no command has, or that another one has.
fn unknown_option(name: &str, verb: Verb) -> UsageError {
    let others = [Verb::Window, Verb::Study, Verb::Figure, Verb::Recheck].into_iter().filter(|v| *v != verb);
    for other in others {
        if let Some(option) = other.options().iter().find(|o| **o == name) {
            return UsageError::Elsewhere { option, command: other.call() };
        }
    }
    lexopt::Error::UnexpectedOption(format!("--{name}")).into()
}

fn figure_option(name: &str, parser: &mut Parser, figure: &mut FigureOptions) -> Result<bool, UsageError> {
    fn named<T: Copy>(list: &[(&str, T)], text: &str) -> Option<T> {
        list.iter().find(|(name, _)| *name == text).map(|(_, value)| *value)
    }
    fn names<T>(list: &[(&str, T)]) -> String {
        list.iter().map(|(name, _)| *name).collect::<Vec<_>>().join(", ")
    }
    let range = |from: f64, to: f64| move |t: &str| finite(t).filter(|v| (from..=to).contains(v));
    match name {
        "out" => figure.out = Some(parser.value()?.into()),
        "what" => {
            let subject = |t: &str| named(&Subject::ALL, t);
            figure.subject = Some(value(parser, "what", &names(&Subject::ALL), subject)?);
        }
        "view" => figure.paper.view = value(parser, "view", &names(&View::ALL), |t| named(&View::ALL, t))?,
        "width-mm" => {
            figure.paper.width_mm =
                value(parser, "width-mm", "a number from 40 to 1000", range(40.0, 1000.0))?;
        }
        "font-pt" => {
            figure.paper.font_pt = value(parser, "font-pt", "a number from 4 to 40", range(4.0, 40.0))?;
        }
        "theme" => {
            figure.paper.dark =
                value(parser, "theme", "light, dark", |t| named(&[("light", false), ("dark", true)], t))?;
        }
        "dpi" => {
            figure.dots_per_inch =
                Some(value(parser, "dpi", "a number from 50 to 1200", range(50.0, 1200.0))?);
        }
        _ => return Ok(false),
    }
    Ok(true)
}

fn study_choice(name: &str, parser: &mut Parser, choices: &mut StudyChoices) -> Result<bool, UsageError> {
    match name {
        "settings" => choices.settings_file = Some(parser.value()?.into()),
        "curve" => choices.curve = Some(parser.value()?.string()?),
        "length-column" => choices.length_column = Some(parser.value()?.string()?),
        "length-unit" => {
            let names = LengthUnit::ALL.map(LengthUnit::name).join(", ");
            choices.length_unit = Some(value(parser, "length-unit", &names, parse_length_unit)?);
        }
        "energy-unit" => {
            let names = EnergyUnit::ALL.map(EnergyUnit::name).join(", ");
            choices.energy_unit = Some(value(parser, "energy-unit", &names, parse_energy_unit)?);
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
            choices.rotation = Some(value(parser, "rotation", accepted, quantum_numbers)?);
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
        "weights" => {
            let accepted = "equal, noise, noise=SIGMA (cm-1), energy or energy=STEP (cm-1)";
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
        "thermal-rotation" => choices.thermal_rotation = true,
        _ => return Ok(false),
    }
    Ok(true)
}

fn weighting(text: &str) -> Option<Weighting> {
    let (by, number) = match text.split_once('=') {
        Some((by, number)) => (by, Some(finite(number).filter(|n| *n > 0.0)?)),
        None => (text, None),
    };
    match (by, number) {
        ("equal", None) => Some(Weighting::Equal {}),
        ("noise", sigma_per_cm) => Some(Weighting::Noise { sigma_per_cm }),
        ("energy", step) => {
            let default = EnergyWeights::default();
            let step_per_cm = step.unwrap_or(default.step_per_cm);
            Some(Weighting::Energy(EnergyWeights { step_per_cm, ..default }))
        }
        _ => None,
    }
}

fn study_option(name: &str, parser: &mut Parser, study: &mut StudyArgs) -> Result<bool, UsageError> {
    match name {
        "out" => study.out = Some(parser.value()?.into()),
        "out-dir" => study.out_dir = Some(parser.value()?.into()),
        "timings" => study.timings = true,
        "set-aside" => {
            let list = |t: &str| t.split(',').map(|r| finite(r.trim()).filter(|r| *r > 0.0)).collect();
            let accepted = "bond lengths in the unit of the file, e.g. 1.44,1.48";
            study.set_aside = value(parser, "set-aside", accepted, list)?;
        }
        "parameters" => study.parameters = Some(parser.value()?.into()),
        "parameter-energy-unit" => {
            let names = EnergyUnit::ALL.map(EnergyUnit::name).join(", ");
            study.units.energy = value(parser, "parameter-energy-unit", &names, parse_energy_unit)?;
        }
        "parameter-length-unit" => {
            let names = LengthUnit::ALL.map(LengthUnit::name).join(", ");
            study.units.length = value(parser, "parameter-length-unit", &names, parse_length_unit)?;
        }
        "force-constant-unit" => {
            let names = ForceConstantUnit::ALL.map(ForceConstantUnit::name).join(", ");
            let unit = |t: &str| ForceConstantUnit::ALL.into_iter().find(|u| u.name() == t);
            study.units.force_constant = value(parser, "force-constant-unit", &names, unit)?;
        }
        "convention" => {
            let all = [ForceConstantConvention::Half, ForceConstantConvention::Full];
            let accepted = "half (V = 1/2 k x^2) or full (V = k x^2)";
            let convention = |t: &str| all.into_iter().find(|c| c.word() == t);
            study.units.convention = value(parser, "convention", accepted, convention)?;
        }
        "dry-run" => study.dry_run = true,
        "repeat" => {
            let count = |t: &str| t.parse().ok().filter(|k| (1..=100_000).contains(k));
            study.repeat = value(parser, "repeat", "a whole number from 1 to 100000", count)?;
        }
        "table" => {
            let text = parser.value()?;
            let names = Table::ALL.map(|(name, _)| name);
            let entry = text.to_str().and_then(|t| t.split_once('=')).filter(|(_, file)| !file.is_empty());
            let table = entry.and_then(|(what, file)| {
                let (_, table) = Table::ALL.into_iter().find(|(name, _)| *name == what)?;
                Some((table, PathBuf::from(file)))
            });
            let (table, file) = table.ok_or_else(|| UsageError::Value {
                option: "table",
                found: text.to_string_lossy().into_owned(),
                accepted: format!("WHAT=FILE.csv with WHAT one of {}", names.join(", ")),
            })?;
            study.tables.push((table, file));
        }
        _ => return Ok(false),
    }
    Ok(true)
}

fn window_option(name: &str, parser: &mut Parser, window: &mut WindowArgs) -> Result<bool, UsageError> {
    let one_of = |option: &'static str, names: &'static [&'static str], parser: &mut Parser| {
        value(parser, option, &names.join(", "), |t| names.contains(&t).then(|| t.to_owned()))
    };
    match name {
        "renderer" => window.renderer = Some(one_of("renderer", &["auto", "gl", "cpu"], parser)?),
        "theme" => window.theme = Some(one_of("theme", &["light", "dark"], parser)?),
        "page" => window.page = Some(parser.value()?.string()?),
        "picture" => {
            let png = |t: &str| t.to_lowercase().ends_with(".png").then(|| PathBuf::from(t));
            window.picture = Some(value(parser, "picture", "a file name that ends in .png", png)?);
        }
        "size" => {
            let size = |t: &str| {
                let (width, height) = t.split_once('x')?;
                let side = |s: &str| s.parse().ok().filter(|n| (200..=10_000).contains(n));
                Some((side(width)?, side(height)?))
            };
            window.size = Some(value(parser, "size", "WIDTHxHEIGHT in points, 200 to 10000 each", size)?);
        }
        "scale" => {
            let scale = |t: &str| t.parse().ok().filter(|s: &f32| (0.5..=4.0).contains(s));
            window.scale = Some(value(parser, "scale", "a number from 0.5 to 4", scale)?);
        }
        _ => return Ok(false),
    }
    Ok(true)
}

/// The option's value through `read`, or an error that says what is accepted.
fn value<T>(
    parser: &mut Parser,
    option: &'static str,
    accepted: &str,
    read: impl Fn(&str) -> Option<T>,
) -> Result<T, UsageError> {
    let found = parser.value()?.string()?;
    read(found.trim()).ok_or(UsageError::Value { option, found, accepted: accepted.to_owned() })
}

fn finite(text: &str) -> Option<f64> {
    text.parse().ok().filter(|v: &f64| v.is_finite())
}

/// `1,2,10`, `0-20` or both mixed.
fn quantum_numbers(text: &str) -> Option<Vec<u32>> {
    const HIGHEST: u32 = 1000;
    let mut all = Vec::new();
    for part in text.split(',') {
        let number = |t: &str| t.trim().parse().ok().filter(|j: &u32| *j <= HIGHEST);
        let (from, to) = match part.split_once('-') {
            Some((from, to)) => (number(from)?, number(to)?),
            None => (number(part)?, number(part)?),
        };
        if from > to {
            return None;
        }
        all.extend(from..=to);
    }
    Some(all)
}

fn window_range(text: &str) -> Option<Window> {
    let (from, to) = text.split_once(',')?;
    let (from, to) = (finite(from.trim())?, finite(to.trim())?);
    (0.0 < from && from < to).then_some(Window { from, to, unit: LengthUnit::Angstrom })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn parsed(text: &str) -> Result<Command, UsageError> {
        parse(text.split_whitespace().map(OsString::from))
    }

    #[test]
    fn a_study_with_everything() {
        let Ok(Command::Study(study)) = parsed(
            "study a.csv b.dat --atoms 2H,35Cl --charge -1 --length-unit BOHR --energy-unit kj/mol \
             --window 0.8,1.4 --asymptote -1.5 --table levels=l.csv --table constants=c.csv \
             --out f.json --timings --repeat 3 --curve E_X --overwrite --rotation 1,4-6 --lambda 1 \
             --tail-power 6 --tail-points 5 --tail-sensitivity --isotopologues 2H,35Cl;1H,37Cl",
        ) else {
            panic!("not understood")
        };
        assert_eq!(study.files.len(), 2);
        assert_eq!(study.tables.len(), 2);
        let mut settings = Settings::default();
        study.choices.apply(&mut settings);
        assert_eq!(settings.read.length_unit, Some(LengthUnit::Bohr));
        assert_eq!(settings.read.energy_unit, Some(EnergyUnit::KilojoulePerMole));
        assert_eq!(settings.masses.charge, -1);
        assert_eq!(settings.interpolation.asymptote, Some(-1.5));
        assert_eq!(
            (settings.interpolation.tail_power, settings.interpolation.tail_fit_points),
            (Some(6), Some(5))
        );
        assert_eq!(settings.levels.rotating(), [1, 4, 5, 6]);
        assert!(settings.levels.tail_sensitivity && settings.levels.lambda == 1);
        assert_eq!(settings.isotopologues.len(), 2);
    }

    #[test]
    fn options_of_the_fits() {
        let Ok(Command::Study(study)) = parsed(
            "study a.csv --weights energy=5000 --bootstrap 50 --seed 9 --table window-study=w.csv \
             --force-constant-unit mdyn/angstrom --convention full --parameters p.tex",
        ) else {
            panic!("not understood")
        };
        let mut settings = Settings::default();
        study.choices.apply(&mut settings);
        assert!(matches!(settings.fits.weights, Weighting::Energy(w) if w.step_per_cm == 5000.0));
        assert_eq!(settings.fits.bootstrap, Some(BootstrapSettings { repeats: 50, seed: 9 }));
        assert!(settings.fits.window_study.is_some());
        assert_eq!(study.units.convention, ForceConstantConvention::Full);
        assert_eq!(study.units.force_constant, ForceConstantUnit::MillidynePerAngstrom);
        assert_eq!(weighting("noise=0.5"), Some(Weighting::Noise { sigma_per_cm: Some(0.5) }));
        assert!(weighting("noise=-1").is_none() && weighting("equal=1").is_none());
    }

    #[test]
    fn wrong_values_name_what_is_accepted() {
        for (text, needle) in [
            ("study a --length-unit feet", "angstrom, bohr, pm, nm"),
            ("study a --window 2,1", "smaller first"),
            ("study a --reduced-mass -3", "positive"),
            ("study a --rotation 5-2", "0-20"),
            ("study a --rotation 1,x", "0-20"),
            ("study a --isotopologues 2H,35Cl;H", "semicolon"),
            ("study a --tail-power 0", "from 1 to 20"),
            ("study a --table residue=x.csv", "levels, constants"),
            ("study", "at least one file"),
            ("study a --weights=heavy", "noise=SIGMA"),
            ("study a --force-constant-unit N", "kcal/(mol angstrom^2)"),
            ("study a --convention quarter", "half (V = 1/2 k x^2)"),
            ("study a --bootstrap 1", "from 2 to 20000"),
            ("a --convention full", "belongs to parabound study"),
            ("study a --theme dark", "belongs to the window"),
            ("a --timings", "belongs to parabound study"),
            ("study a --wibble", "wibble"),
        ] {
            let error = parsed(text).expect_err(text).to_string();
            assert!(error.contains(needle), "{text}: {error}");
        }
    }
}
