//! Frames of Cartesian coordinates: number of atoms, a comment with the energy, one line an atom.

use super::ReadSettings;
use super::columns::{ColumnName, Kind, strip_brackets};
use super::delimited::LIMIT_ROWS;
use super::frames::{Frame, Frames};
use super::number::{Cell, DecimalSign, parse_cell};
use super::text::lines;
use super::words::parse_energy_unit;
use crate::scan::error::ScanError;
use crate::scan::{EnergyColumn, Layout};
use crate::units::{EnergyUnit, LengthUnit};

/// Whether a text is laid out so: a whole number alone, a line of anything, a symbol with three numbers.
pub(crate) fn looks_like(text: &str) -> bool {
    let mut begin = lines(text).map(|l| l.raw).skip_while(|l| l.trim().is_empty());
    let count = begin.next().and_then(|l| l.trim().parse::<usize>().ok());
    let atom = begin.nth(1).and_then(atom_line);
    count.is_some_and(|n| n > 0) && atom.is_some_and(|(symbol, _)| symbol.starts_with(char::is_alphabetic))
}

/// Reads all frames. Coordinates are in angstrom, as the layout has it, unless the settings say otherwise.
///
/// # Errors
/// A frame that is cut short or misses a coordinate, no energy, or an energy without a unit.
pub(crate) fn parse(text: &str, settings: &ReadSettings) -> Result<Frames, ScanError> {
    let mut all = lines(text).map(|l| (l.number, l.raw));
    let (mut frames, mut energies): (Vec<Frame>, Vec<Option<Energy>>) = (Vec::new(), Vec::new());
    while let Some((place, count)) = all.by_ref().find(|l| !l.1.trim().is_empty()) {
        let unreadable = || ScanError::AtomCount { line: place, found: shown(count) };
        let atoms: usize = count.trim().parse().map_err(|_| unreadable())?;
        if atoms == 0 {
            return Err(unreadable());
        }
        if frames.len() == LIMIT_ROWS {
            return Err(ScanError::TooManyRows { line: place, limit_rows: LIMIT_ROWS });
        }
        energies.push(all.next().and_then(|(_, comment)| energy_of(comment)));
        let mut frame = Frame { place, symbols: Vec::new(), coordinates: Vec::new() };
        for index in 0..atoms {
            let Some((line, atom)) = all.next() else {
                return Err(ScanError::FrameCut { line: place, expected: atoms, found: index });
            };
            let (symbol, coordinates) =
                atom_line(atom).ok_or_else(|| ScanError::AtomLine { line, found: shown(atom) })?;
            frame.symbols.push(symbol.to_owned());
            frame.coordinates.push(coordinates);
        }
        frames.push(frame);
    }
    let column = energy_column(&frames, &energies, settings)?;
    let (layout, length_unit) = (Layout::Xyz, LengthUnit::Angstrom);
    Ok(Frames { layout, length_unit, frames, energies: vec![column], charge: None })
}

fn shown(line: &str) -> String {
    line.trim().chars().take(60).collect()
}

fn atom_line(line: &str) -> Option<(&str, [f64; 3])> {
    let mut words = line.split_whitespace();
    let symbol = words.next()?;
    let mut next = || match parse_cell(words.next()?, DecimalSign::Point) {
        Cell::Number(value) => Some(value),
        _ => None,
    };
    Some((symbol, [next()?, next()?, next()?]))
}

/// An energy found in a comment.
#[derive(Clone, Debug, PartialEq)]
struct Energy {
    value: f64,
    unit: Option<EnergyUnit>,
    name: String,
}

/// The energy a comment states: `energy: -1.1 hartree`, `E = -1.1 Eh`, `energy_hartree=-1.1`,
/// `E (eV) -30.0`; without such a name the only number there is.
fn energy_of(comment: &str) -> Option<Energy> {
    const LONGEST: usize = 10_000;
    if comment.len() > LONGEST {
        return None;
    }
    let words: Vec<&str> = comment
        .split(|c: char| c.is_whitespace() || matches!(c, '=' | ',' | ';'))
        .map(|w| w.trim_end_matches(':').trim_matches('"'))
        .filter(|w| !w.is_empty())
        .collect();
    let number = |at: usize| match words.get(at).map(|w| parse_cell(w, DecimalSign::Point)) {
        Some(Cell::Number(value)) => Some(value),
        _ => None,
    };
    let unit = |at: usize| words.get(at).and_then(|w| parse_energy_unit(strip_brackets(w)));
    for (at, word) in words.iter().enumerate().filter(|(at, _)| number(*at).is_none()) {
        let name = ColumnName::parse(word);
        if name.kind != Kind::Energy || parse_energy_unit(word).is_some() {
            continue;
        }
        // The unit may stand in the name, between name and number, or behind the number.
        let between = unit(at + 1).filter(|_| number(at + 1).is_none());
        let at_number = if between.is_some() { at + 2 } else { at + 1 };
        if let Some(value) = number(at_number) {
            let unit = name.energy_unit().or(between).or_else(|| unit(at_number + 1));
            return Some(Energy { value, unit, name: name.label });
        }
    }
    let mut numbers = (0..words.len()).filter_map(|at| number(at).map(|value| (at, value)));
    match (numbers.next(), numbers.next()) {
        (Some((at, value)), None) => Some(Energy { value, unit: unit(at + 1), name: "energy".to_owned() }),
        _ => None,
    }
}

fn energy_column(
    frames: &[Frame],
    energies: &[Option<Energy>],
    settings: &ReadSettings,
) -> Result<EnergyColumn, ScanError> {
    let line = |index: usize| frames.get(index).map_or(1, |f| f.place) + 1;
    let Some((first, stated)) = energies.iter().enumerate().find_map(|(i, e)| e.as_ref().map(|e| (i, e)))
    else {
        return Err(ScanError::NoEnergyInComments { line: line(0) });
    };
    let other = |e: &Option<Energy>| e.as_ref().is_some_and(|e| e.unit != stated.unit);
    if settings.energy_unit.is_none()
        && let Some(index) = energies.iter().position(other)
    {
        return Err(ScanError::UnitsDiffer { line: line(index), first: line(first) });
    }
    let unit = settings
        .energy_unit
        .or(stated.unit)
        .ok_or_else(|| ScanError::EnergyUnitMissing { column: stated.name.clone(), found_unit: None })?;
    Ok(EnergyColumn {
        name: stated.name.clone(),
        label: stated.name.clone(),
        unit,
        values: energies.iter().map(|e| e.as_ref().map(|e| e.value)).collect(),
        made: None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn energies_are_found_in_comments() {
        for (comment, value, unit) in [
            (
                "energy: -113.079144042007 hartree  frame 1  CCSD(T)/cc-pVQZ",
                -113.079_144_042_007,
                Some("hartree"),
            ),
            ("E = -1.1 Eh", -1.1, Some("hartree")),
            ("E=-1.1", -1.1, None),
            ("energy_eV=-30.5 step=3", -30.5, Some("eV")),
            ("frame 7, E (kJ/mol) 12.5", 12.5, Some("kJ/mol")),
            ("-113.25", -113.25, None),
            ("-113.25 a.u.", -113.25, Some("hartree")),
            ("pbc=\"F F F\" energy=-3.25", -3.25, None),
        ] {
            let found = energy_of(comment).unwrap_or_else(|| panic!("{comment}"));
            assert_eq!((found.value, found.unit.map(EnergyUnit::name)), (value, unit), "{comment}");
        }
        for comment in ["", "frame 1 of 24", "no number here", "1.0 2.0"] {
            assert_eq!(energy_of(comment), None, "{comment}");
        }
    }

    #[test]
    fn the_layout_is_recognised() {
        assert!(looks_like("2\nE = -1.1 Eh\nH 0 0 0\nH 0 0 0.7\n"));
        assert!(!looks_like("2\n0.7 -1.1\n0.8 -1.2\n"));
        assert!(!looks_like("R,E\n0.7,-1.1\n"));
    }
}
