//! Text logs: one pattern catches the bond length, one the energy, a file gives one point.
//!
//! No program's format is known here; the patterns are the user's.

use super::number::{Cell, DecimalSign, parse_cell};
use super::{sha256_hex, text};
use crate::scan::error::ScanError;
use crate::scan::{EnergyColumn, Layout, Scan, UnitOrigin};
use crate::units::{EnergyUnit, LengthUnit};
use regex::{Regex, RegexBuilder};
use serde::{Deserialize, Serialize};
use thiserror::Error;

/// Most logs of one scan.
pub const LIMIT_LOGS: usize = 100_000;
/// Longest line that patterns are tried on (bytes); longer ones are no lines of numbers.
const LIMIT_LINE_BYTES: usize = 1 << 16;
/// Size of a compiled pattern (bytes), which bounds its memory.
const LIMIT_PATTERN_BYTES: usize = 1 << 20;

/// Which match in a log counts.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Match {
    /// The first.
    First,
    /// The last, as of an energy that is printed in every step.
    #[default]
    Last,
}

/// How bond length and energy are found in a text log, line by line.
///
/// Regular expressions; the number is what the first group catches, the whole match where there is no group.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct LinePatterns {
    /// Pattern of the bond length; it may also match in the file name when no line does.
    pub length: String,
    /// Pattern of the energy.
    pub energy: String,
    /// Which match counts.
    #[serde(rename = "match")]
    pub which: Match,
}

/// Why logs are refused.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum LinesError {
    /// A pattern is no regular expression.
    #[error("the pattern of the {what}, {pattern:?}, is not a regular expression: {problem}")]
    Pattern {
        /// Bond length or energy.
        what: &'static str,
        /// The pattern.
        pattern: String,
        /// What is wrong.
        problem: String,
    },
    /// Nothing matches.
    #[error("{file}: no line matches the pattern of the {what}, {pattern:?}; try it on a line of the file")]
    NoMatch {
        /// The file.
        file: String,
        /// Bond length or energy.
        what: &'static str,
        /// The pattern.
        pattern: String,
    },
    /// What was caught is no number.
    #[error(
        "{file}, {place}: the pattern of the {what} caught {caught:?}, which is no number; put brackets around the \
         digits in the pattern, as in r = (\\S+)"
    )]
    NoNumber {
        /// The file.
        file: String,
        /// Line, or the file's name.
        place: String,
        /// Bond length or energy.
        what: &'static str,
        /// What was caught.
        caught: String,
    },
    /// A log cannot be read as text.
    #[error("{file}: {problem}")]
    Log {
        /// The file.
        file: String,
        /// What is wrong.
        problem: Box<ScanError>,
    },
    /// Too many logs.
    #[error("more than {limit} logs; a scan of so many points is not read")]
    TooMany {
        /// Most that are read.
        limit: usize,
    },
    /// A unit is missing.
    #[error("the unit of the {what} is not known, and a pattern does not tell it; give it with {option}")]
    Unit {
        /// Bond lengths or energies.
        what: &'static str,
        /// The option that settles it.
        option: &'static str,
    },
}

/// What a pattern caught, and where.
#[derive(Clone, Debug, PartialEq)]
pub struct Caught {
    /// The number.
    pub value: f64,
    /// As it stands there.
    pub text: String,
    /// Line, from 1; 0 for the file's name.
    pub line: usize,
}

/// Both patterns, ready to be tried.
pub struct Patterns<'a> {
    settings: &'a LinePatterns,
    length: Regex,
    energy: Regex,
}

impl<'a> Patterns<'a> {
    /// Makes the patterns ready.
    ///
    /// # Errors
    /// [`LinesError::Pattern`]
    pub fn new(settings: &'a LinePatterns) -> Result<Self, LinesError> {
        Ok(Self {
            settings,
            length: compiled(LENGTH, &settings.length)?,
            energy: compiled(ENERGY, &settings.energy)?,
        })
    }

    /// What the patterns catch in one log: bond length and energy.
    ///
    /// # Errors
    /// [`LinesError`] with the file and what was caught.
    pub fn catch(&self, file: &str, bytes: &[u8]) -> Result<[Caught; 2], LinesError> {
        let log = |e| LinesError::Log { file: file.to_owned(), problem: Box::new(e) };
        let (text, _) = text::decode(bytes).map_err(log)?;
        let which = self.settings.which;
        let length = Pattern { what: LENGTH, text: &self.settings.length, ready: &self.length };
        let energy = Pattern { what: ENERGY, text: &self.settings.energy, ready: &self.energy };
        Ok([length.catch(which, file, &text)?, energy.catch(which, file, &text)?])
    }
}

/// What the patterns are for.
const LENGTH: &str = "bond length";
const ENERGY: &str = "energy";

/// One pattern, ready to be tried.
struct Pattern<'a> {
    what: &'static str,
    text: &'a str,
    ready: &'a Regex,
}

impl Pattern<'_> {
    /// The first or last number that it catches in a text; that of the bond length may also stand in the
    /// file's name.
    fn catch(&self, which: Match, file: &str, text: &str) -> Result<Caught, LinesError> {
        let mut found: Option<(usize, &str)> = None;
        for (number, line) in text.split(['\n', '\r']).enumerate() {
            if line.len() > LIMIT_LINE_BYTES {
                continue;
            }
            let caught = match which {
                Match::First => first_catch(self.ready, line),
                Match::Last => last_catch(self.ready, line),
            };
            if let Some(caught) = caught {
                found = Some((number + 1, caught));
                if which == Match::First {
                    break;
                }
            }
        }
        if found.is_none() && self.what == LENGTH {
            found = first_catch(self.ready, file).map(|c| (0, c));
        }
        let (line, text) = found.ok_or_else(|| LinesError::NoMatch {
            file: file.to_owned(),
            what: self.what,
            pattern: self.text.to_owned(),
        })?;
        match parse_cell(text, DecimalSign::Point) {
            Cell::Number(value) => Ok(Caught { value, text: text.to_owned(), line }),
            _ => Err(LinesError::NoNumber {
                file: file.to_owned(),
                place: if line == 0 { "file name".into() } else { format!("line {line}") },
                what: self.what,
                caught: text.chars().take(60).collect(),
            }),
        }
    }
}

/// What patterns catch in some logs, each pattern by itself: a look before the scan is read.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tried {
    /// What is wrong with the pattern of the bond length and with that of the energy.
    pub faults: [Option<String>; 2],
    /// Of each log what they catch, or why nothing; none where a pattern has a fault.
    pub logs: Vec<[Option<Result<Caught, String>>; 2]>,
}

impl Tried {
    /// How many logs give a point.
    pub fn points(&self) -> usize {
        let whole = |caught: &&[Option<Result<Caught, String>>; 2]| {
            caught.iter().all(|c| c.as_ref().is_some_and(Result::is_ok))
        };
        self.logs.iter().filter(whole).count()
    }
}

/// Tries patterns on logs, given by name and bytes; nothing is refused.
pub fn try_patterns<'b>(
    patterns: &LinePatterns,
    logs: impl IntoIterator<Item = (&'b str, &'b [u8])>,
) -> Tried {
    let both = [(LENGTH, patterns.length.as_str()), (ENERGY, patterns.energy.as_str())];
    let ready = both.map(|(what, text)| (what, text, compiled(what, text)));
    let catch = |(file, bytes): (&str, &[u8])| {
        let text = text::decode(bytes).map(|t| t.0).map_err(|e| e.to_string());
        [0, 1].map(|i| {
            let (what, pattern, ready) = &ready[i];
            let pattern = Pattern { what, text: pattern, ready: ready.as_ref().ok()? };
            Some(
                text.as_ref()
                    .map_err(String::clone)
                    .and_then(|text| pattern.catch(patterns.which, file, text).map_err(|e| e.to_string())),
            )
        })
    };
    let logs = logs.into_iter().map(catch).collect();
    Tried { faults: [0, 1].map(|i| ready[i].2.as_ref().err().map(LinesError::to_string)), logs }
}

/// A pattern made ready.
fn compiled(what: &'static str, pattern: &str) -> Result<Regex, LinesError> {
    let problem = |p: String| LinesError::Pattern { what, pattern: pattern.to_owned(), problem: p };
    if pattern.trim().is_empty() {
        return Err(problem("it is empty".to_owned()));
    }
    let built = RegexBuilder::new(pattern).size_limit(LIMIT_PATTERN_BYTES).build();
    // The last line of the package's message says what, those before draw an arrow.
    built.map_err(|e| {
        let text = e.to_string();
        let last = text.lines().last().unwrap_or("").trim();
        problem(last.trim_start_matches("error: ").to_owned())
    })
}

fn first_catch<'t>(pattern: &Regex, line: &'t str) -> Option<&'t str> {
    let caught = pattern.captures(line)?;
    caught.get(1).or_else(|| caught.get(0)).map(|m| m.as_str().trim())
}

fn last_catch<'t>(pattern: &Regex, line: &'t str) -> Option<&'t str> {
    let caught = pattern.captures_iter(line).last()?;
    caught.get(1).or_else(|| caught.get(0)).map(|m| m.as_str().trim())
}

/// Reads a scan from logs, each given by name and bytes, in the order given. The scan is called `name`; its
/// check sum is that of the logs' check sums one after the other.
///
/// Time and memory are bounded by the size of the logs: patterns are matched in linear time and line by line.
///
/// # Errors
/// [`ScanError::Lines`] for patterns and logs, others as [`Scan::checked`] has them.
pub(crate) fn read_lines<'b>(
    name: &str,
    logs: impl IntoIterator<Item = (&'b str, &'b [u8])>,
    patterns: &LinePatterns,
    (length_unit, energy_unit): (Option<LengthUnit>, Option<EnergyUnit>),
) -> Result<Scan, ScanError> {
    let ready = Patterns::new(patterns)?;
    let length_unit =
        length_unit.ok_or(LinesError::Unit { what: "bond lengths", option: "--length-unit" })?;
    let energy_unit = energy_unit.ok_or(LinesError::Unit { what: "energies", option: "--energy-unit" })?;
    let (mut bond_lengths, mut energies, mut sums) = (Vec::new(), Vec::new(), String::new());
    let mut row_remarks = Vec::new();
    for (file, bytes) in logs {
        if bond_lengths.len() == LIMIT_LOGS {
            return Err(LinesError::TooMany { limit: LIMIT_LOGS }.into());
        }
        let [length, energy] = ready.catch(file, bytes)?;
        row_remarks.push((bond_lengths.len(), file.to_owned()));
        bond_lengths.push(length.value);
        energies.push(Some(energy.value));
        sums.push_str(&sha256_hex(bytes));
    }
    Scan {
        file_name: name.to_owned(),
        sha256: sha256_hex(sums.as_bytes()),
        layout: Layout::Lines,
        length_column: "r".to_owned(),
        length_unit,
        length_unit_origin: UnitOrigin::Chosen,
        energy_unit_origins: vec![UnitOrigin::Chosen],
        separators: None,
        bond_lengths,
        energies: vec![EnergyColumn {
            name: "E".to_owned(),
            label: "E".to_owned(),
            unit: energy_unit,
            values: energies,
            made: None,
        }],
        properties: Vec::new(),
        row_lines: Vec::new(),
        row_remarks,
        atoms: None,
        charge: None,
        notices: Vec::new(),
    }
    .checked()
}

#[cfg(test)]
mod tests {
    use super::*;

    const UNITS: (Option<LengthUnit>, Option<EnergyUnit>) =
        (Some(LengthUnit::Angstrom), Some(EnergyUnit::Hartree));

    fn patterns(length: &str, energy: &str, which: Match) -> LinePatterns {
        LinePatterns { length: length.into(), energy: energy.into(), which }
    }

    /// Invented logs.
    fn logs() -> [(&'static str, &'static [u8]); 2] {
        [
            ("point_1.20.log", b"bond 1.20\nenergy now -1.0D+00\nenergy now -1.5\r\ndone\n"),
            ("point_1.40.log", b"bond 1.40\nenergy now -1.1\nenergy now -1.6 after -1.55\n"),
        ]
    }

    /// Each pattern is tried by itself, whatever is wrong with the other one.
    #[test]
    fn patterns_are_tried_before_they_are_used() {
        let tried = try_patterns(&patterns(r"bond (\S+)", "energy (", Match::Last), logs());
        assert_eq!(tried.faults[0], None);
        assert!(tried.faults[1].as_ref().is_some_and(|f| f.contains("not a regular expression")));
        assert_eq!(tried.points(), 0);
        let first = tried.logs[0][0].clone().expect("tried").expect("caught");
        assert_eq!((first.value, first.text.as_str(), first.line), (1.2, "1.20", 1));
        assert_eq!(tried.logs[0][1], None);
        let tried = try_patterns(&patterns(r"bond (\S+)", r"after (\S+)", Match::Last), logs());
        assert_eq!((tried.faults.clone(), tried.points()), ([None, None], 1));
        assert!(
            tried.logs[0][1]
                .as_ref()
                .is_some_and(|c| c.as_ref().is_err_and(|e| e.contains("no line matches")))
        );
    }

    #[test]
    fn patterns_catch_the_first_or_the_last() {
        let read = |p: &LinePatterns| read_lines("logs", logs(), p, UNITS).expect("a scan");
        let last = read(&patterns(r"bond (\S+)", r"energy now (\S+)", Match::Last));
        assert_eq!(last.bond_lengths, [1.2, 1.4]);
        assert_eq!(last.energies[0].values, [Some(-1.5), Some(-1.6)]);
        assert_eq!(last.layout, Layout::Lines);
        let first = read(&patterns(r"point_([\d.]+)\.log", r"energy now (\S+)", Match::First));
        assert_eq!(
            (first.bond_lengths, first.energies[0].values.clone()),
            (vec![1.2, 1.4], vec![Some(-1.0), Some(-1.1)])
        );
        let whole = read(&patterns(r"\d\.\d\d", r"-\d\.\d+", Match::Last));
        assert_eq!(whole.energies[0].values, [Some(-1.5), Some(-1.55)]);
    }

    #[test]
    fn refusals_name_the_file_and_what_was_caught() {
        let refused =
            |p: LinePatterns, units| read_lines("logs", logs(), &p, units).expect_err("refused").to_string();
        for (length, energy, needle) in [
            ("bond (", "x", "the pattern of the bond length, \"bond (\", is not a regular expression"),
            ("bond", "", "it is empty"),
            ("bond (\\S+)", "total (\\S+)", "point_1.20.log: no line matches the pattern of the energy"),
            (
                "bond (\\S+)",
                "energy (\\S+)",
                "point_1.20.log, line 3: the pattern of the energy caught \"now\"",
            ),
        ] {
            let message = refused(patterns(length, energy, Match::Last), UNITS);
            assert!(message.contains(needle), "{message}");
        }
        let good = patterns("bond (\\S+)", "now (\\S+)", Match::Last);
        assert!(refused(good.clone(), (None, UNITS.1)).contains("--length-unit"));
        assert!(refused(good.clone(), (UNITS.0, None)).contains("--energy-unit"));
        let binary: [(&str, &[u8]); 1] = [("b.log", b"\x00\x01")];
        let message = read_lines("logs", binary, &good, UNITS).expect_err("refused").to_string();
        assert!(message.starts_with("b.log: "), "{message}");
        // A pattern that others would take for ever over is matched in linear time.
        let slow = patterns("(a+)+$", "(a+)+$", Match::Last);
        let long = format!("{}b\n", "a".repeat(60_000));
        let message = read_lines("logs", [("l.log", long.as_bytes())], &slow, UNITS).expect_err("refused");
        assert!(message.to_string().contains("no line matches"), "{message}");
        let huge = patterns("((a{1000}){1000}){1000}", "x", Match::Last);
        assert!(refused(huge, UNITS).contains("not a regular expression"));
    }
}
