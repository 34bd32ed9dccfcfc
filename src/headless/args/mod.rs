//! Command-line arguments to values.

mod choices;
mod figure;
mod study;
mod tolerance;
mod value;
mod window;
mod without_effect;

pub use choices::StudyChoices;
pub use figure::FigureArgs;
pub use study::StudyArgs;
pub use window::WindowArgs;

use crate::export::table::Table;
use crate::figure::drawing::Subject;
use choices::{set_aside, study_choice};
use figure::{FigureOptions, figure_option};
use lexopt::{Arg, Parser};
use std::collections::BTreeSet;
use std::ffi::OsString;
use std::path::PathBuf;
use study::study_option;
use thiserror::Error;
use window::window_option;

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
    /// An option that does nothing without another one.
    #[error("--{option} does nothing without --{needed}: give both, or neither")]
    Needs {
        /// The option.
        option: &'static str,
        /// The one it goes with.
        needed: &'static str,
    },
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
    parse_with_remarks(arguments).map(|(command, _)| command)
}

/// The same with a sentence for each option that was given and has no effect.
///
/// # Errors
/// As [`parse`].
pub fn parse_with_remarks(
    arguments: impl IntoIterator<Item = OsString>,
) -> Result<(Command, Vec<String>), UsageError> {
    let mut given = BTreeSet::new();
    let command = read(arguments, &mut given)?;
    let remarks = without_effect::without_effect(&command, &given);
    Ok((command, remarks))
}

/// Reads the arguments and notes the names of the options given.
fn read(
    arguments: impl IntoIterator<Item = OsString>,
    given: &mut BTreeSet<String>,
) -> Result<Command, UsageError> {
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
        if let Arg::Long(name) = argument {
            given.insert(name.to_owned());
        }
        match argument {
            Arg::Short('h') | Arg::Long("help") => return Ok(Command::Help),
            Arg::Short('V') | Arg::Long("version") => return Ok(Command::Version),
            Arg::Value(file) => files.push(file.into()),
            Arg::Long("set-aside") if matches!(verb, Verb::Study | Verb::Figure) => {
                set_aside(&mut parser, &mut choices)?;
            }
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
    if let Some((option, needed)) = choices.idle() {
        return Err(UsageError::Needs { option, needed });
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
        Verb::Figure => {
            // A picture of the window study asks for that study.
            choices.window_study |= figure.subject == Some(Subject::WindowStudy);
            Command::Figure(Box::new(FigureArgs {
                file: one("figure", files)?,
                choices,
                out: figure.out.ok_or(UsageError::NoOut)?,
                subject: figure.subject.unwrap_or(Subject::Curve),
                paper: figure.paper,
                dots_per_inch: figure.dots_per_inch.unwrap_or(300.0),
                overwrite,
            }))
        }
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
                "report",
                "parameters",
                "parameter-energy-unit",
                "parameter-length-unit",
                "force-constant-unit",
                "convention",
            ],
            Self::Figure => {
                &["out", "what", "view", "gauge", "show-j", "width-mm", "font-pt", "theme", "dpi"]
            }
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::{BootstrapSettings, Weighting};
    use crate::settings::Settings;
    use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit};

    fn parsed(text: &str) -> Result<Command, UsageError> {
        parse(text.split_whitespace().map(OsString::from))
    }

    #[test]
    fn an_option_that_would_do_nothing_is_refused() {
        for (text, option, needed) in [
            ("study a.csv --seed 3", "seed", "bootstrap"),
            ("a.csv --tail-points 5", "tail-points", "tail-power"),
        ] {
            let refused = parsed(text).err().map(|e| e.to_string()).unwrap_or_default();
            assert!(refused.starts_with(&format!("--{option} does nothing without --{needed}")), "{refused}");
            // A settings file may hold the other one.
            assert!(parsed(&format!("{text} --settings s.json")).is_ok(), "{text}");
        }
        assert!(parsed("study a.csv --seed 3 --bootstrap 200").is_ok());
        assert!(parsed("study a.csv --tail-points 5 --tail-power 6").is_ok());
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
        assert_eq!(settings.masses.charge, Some(-1));
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
