//! Spellings of units as people write them.

use crate::units::{EnergyUnit, LengthUnit};

/// A unit as a word states it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum UnitWord {
    /// A length unit.
    Length(LengthUnit),
    /// An energy unit.
    Energy(EnergyUnit),
    /// Atomic units: bohr for a length, hartree for an energy.
    Atomic,
}

/// The length unit a word states, `a.u.` included; none for any other word.
pub fn parse_length_unit(word: &str) -> Option<LengthUnit> {
    match parse_unit(word)? {
        UnitWord::Length(unit) => Some(unit),
        UnitWord::Atomic => Some(LengthUnit::Bohr),
        UnitWord::Energy(_) => None,
    }
}

/// The energy unit a word states, `a.u.` included; none for any other word.
pub fn parse_energy_unit(word: &str) -> Option<EnergyUnit> {
    match parse_unit(word)? {
        UnitWord::Energy(unit) => Some(unit),
        UnitWord::Atomic => Some(EnergyUnit::Hartree),
        UnitWord::Length(_) => None,
    }
}

/// The unit a word states. Letter case counts only where it makes a difference: `A` is angstrom and `a`
/// is not, `meV` is known and `MeV` is not.
pub(crate) fn parse_unit(word: &str) -> Option<UnitWord> {
    const LONGEST: usize = 40;
    let word = word.trim();
    if word.is_empty() || word.len() > LONGEST || word.contains("MeV") {
        return None;
    }
    if matches!(word, "A" | "Å" | "\u{212b}") {
        return Some(UnitWord::Length(LengthUnit::Angstrom));
    }
    let plain = plain(word);
    let length = |unit| Some(UnitWord::Length(unit));
    let energy = |unit| Some(UnitWord::Energy(unit));
    match plain.as_str() {
        "å" | "ang" | "angs" | "angst" | "angstrom" | "angstroms" | "angström" | "angströms" | "ångström"
        | "ångströms" | "ångstrom" | "ångstroms" | "angstroem" => length(LengthUnit::Angstrom),
        "bohr" | "bohrs" | "a0" | "a₀" | "bohrradius" | "bohrradii" => length(LengthUnit::Bohr),
        "pm" | "picometre" | "picometer" | "picometres" | "picometers" => length(LengthUnit::Picometre),
        "nm" | "nanometre" | "nanometer" | "nanometres" | "nanometers" => length(LengthUnit::Nanometre),
        "hartree" | "hartrees" | "eh" | "ha" | "hart" => energy(EnergyUnit::Hartree),
        "ev" | "electronvolt" | "electronvolts" => energy(EnergyUnit::Electronvolt),
        "mev" | "millielectronvolt" | "millielectronvolts" => energy(EnergyUnit::Millielectronvolt),
        "cm-1" | "1/cm" | "/cm" | "cm1" | "percm" | "invcm" | "inversecm" | "reciprocalcm" | "wavenumber"
        | "wavenumbers" => energy(EnergyUnit::PerCm),
        "au" | "atomicunit" | "atomicunits" => Some(UnitWord::Atomic),
        other => per_mole(other).map(UnitWord::Energy),
    }
}

fn per_mole(plain: &str) -> Option<EnergyUnit> {
    let (unit, rest) = if let Some(rest) = plain.strip_prefix("kcal") {
        (EnergyUnit::KilocaloriePerMole, rest)
    } else if let Some(rest) = plain.strip_prefix("kj") {
        (EnergyUnit::KilojoulePerMole, rest)
    } else {
        return None;
    };
    matches!(rest, "/mol" | "/mole" | "mol-1" | "mol" | "mole-1" | "permol" | "permole" | "mol1")
        .then_some(unit)
}

/// Lower case, without blanks, marks of typesetting and points; raised digits on the line.
fn plain(word: &str) -> String {
    word.chars()
        .filter_map(|c| match c {
            '$' | '{' | '}' | '^' | '*' | '·' | '⋅' | '.' | '_' | '\\' => None,
            c if c.is_whitespace() => None,
            '⁻' | '−' | '–' => Some('-'),
            '¹' => Some('1'),
            '\u{212b}' => Some('å'),
            c => Some(c),
        })
        .collect::<String>()
        .to_lowercase()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn usual_spellings_are_known() {
        for (words, unit) in [
            (&["A", "Å", "Å", "angstrom", "Angstroms", "ANG", "ångström"][..], LengthUnit::Angstrom),
            (&["bohr", "Bohr", "a0", "a_0", "a.u.", "au"][..], LengthUnit::Bohr),
            (&["pm"][..], LengthUnit::Picometre),
            (&["nm", "nanometer"][..], LengthUnit::Nanometre),
        ] {
            for word in words {
                assert_eq!(parse_length_unit(word), Some(unit), "{word}");
                assert!(*word == "a.u." || *word == "au" || parse_energy_unit(word).is_none(), "{word}");
            }
        }
        for (words, unit) in [
            (&["hartree", "Eh", "E_h", "Ha", "a.u.", "atomic units", "Hartrees"][..], EnergyUnit::Hartree),
            (&["eV", "EV"][..], EnergyUnit::Electronvolt),
            (&["meV"][..], EnergyUnit::Millielectronvolt),
            (
                &["kJ/mol", "kJ mol-1", "kJ mol^-1", "kJ·mol⁻¹", "kJ_per_mol", "kJ_mol", "kj/mole"][..],
                EnergyUnit::KilojoulePerMole,
            ),
            (&["kcal/mol", "kcal mol**-1", "kcal mol−1"][..], EnergyUnit::KilocaloriePerMole),
            (&["cm-1", "cm^-1", "cm^{-1}", "1/cm", "cm⁻¹", "cm**-1", "wavenumbers"][..], EnergyUnit::PerCm),
        ] {
            for word in words {
                assert_eq!(parse_energy_unit(word), Some(unit), "{word}");
            }
        }
        for name in LengthUnit::ALL.map(LengthUnit::name) {
            assert_eq!(parse_length_unit(name).map(LengthUnit::name), Some(name));
        }
        for name in EnergyUnit::ALL.map(EnergyUnit::name) {
            assert_eq!(parse_energy_unit(name).map(EnergyUnit::name), Some(name));
        }
    }

    #[test]
    fn other_words_are_no_units() {
        for word in ["", "a", "MeV", "T", "H", "Ry", "J", "m", "cm", "mEh", "debye", "kJ", "HF", "e", "mol"] {
            assert_eq!(parse_unit(word), None, "{word}");
        }
    }
}
