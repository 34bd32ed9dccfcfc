//! What the comments of a file say in words: units and atoms.

use super::columns::{ColumnName, Kind};
use super::header::TextLine;
use super::words::{UnitWord, parse_unit};
use crate::species::{AtomChoice, element_symbols};
use crate::units::{EnergyUnit, LengthUnit};

/// A unit stated in words, and the line that states it.
pub(crate) type Stated<U> = Option<(U, usize)>;

/// Units that comments and title lines state; none where they state none, or several.
pub(crate) fn units(lines: &[TextLine<'_>]) -> (Stated<LengthUnit>, Stated<EnergyUnit>) {
    let (mut lengths, mut energies) = (Vec::new(), Vec::new());
    for line in lines {
        units_of_line(line, &mut lengths, &mut energies);
    }
    (single(&lengths), single(&energies))
}

/// The first statement, if no other contradicts it.
fn single<U: Copy + PartialEq>(found: &[(U, usize)]) -> Stated<U> {
    let first = *found.first()?;
    found.iter().all(|f| f.0 == first.0).then_some(first)
}

fn units_of_line(
    line: &TextLine<'_>,
    lengths: &mut Vec<(LengthUnit, usize)>,
    energies: &mut Vec<(EnergyUnit, usize)>,
) {
    let words: Vec<&str> = line.text.split_whitespace().map(bare).filter(|w| !w.is_empty()).collect();
    let says = |stems: &[&str], letters: &[&str]| {
        words.iter().any(|w| letters.contains(w) || stems.iter().any(|s| w.to_lowercase().contains(s)))
    };
    let generic = says(&["unit"], &[]) || words.iter().all(|w| parse_unit(w).is_some());
    let about_length =
        generic || says(&["distance", "length", "bond", "separation", "coordinate", "geometr"], &["r", "R"]);
    let about_energy = generic || says(&["energ", "potential"], &["E", "V", "dE"]);
    // Atomic units are used for much else.
    let about_other = says(&["dipole", "moment", "field", "charge", "gradient"], &["mu"]);
    let mut at = 0;
    while at < words.len() {
        let Some(found) = unit_at(&words, at) else {
            at += 1;
            continue;
        };
        // A unit behind a number belongs to that number: a threshold, a fixed bond.
        let behind_number = at > 0 && is_number(words[at - 1]);
        if !behind_number {
            match found.unit {
                UnitWord::Length(u) if about_length || found.named => lengths.push((u, line.number)),
                UnitWord::Energy(u) if about_energy || found.named => energies.push((u, line.number)),
                UnitWord::Atomic if !about_other => {
                    if about_length || generic {
                        lengths.push((LengthUnit::Bohr, line.number));
                    }
                    if about_energy || generic {
                        energies.push((EnergyUnit::Hartree, line.number));
                    }
                }
                _ => {}
            }
        }
        at += found.words;
    }
}

/// A unit found among words.
struct Found {
    unit: UnitWord,
    /// How many words it takes.
    words: usize,
    /// Whether the word itself says what it is the unit of, as `r/bohr` does.
    named: bool,
}

/// The unit that begins at a word.
fn unit_at(words: &[&str], at: usize) -> Option<Found> {
    for used in [3, 2] {
        if let Some(unit) = words.get(at..at + used).and_then(|w| parse_unit(&w.join(" "))) {
            return Some(Found { unit, words: used, named: false });
        }
    }
    let word = words[at];
    if let Some(unit) = parse_unit(word) {
        let after_in = at > 0 && matches!(words[at - 1], "in" | "unit" | "units");
        let doubtful = word == "A" || word.to_lowercase().starts_with("wavenumber");
        return (!doubtful || after_in).then_some(Found { unit, words: 1, named: false });
    }
    let name = ColumnName::parse(word);
    let named = name.label != name.full && matches!(name.kind, Kind::Length | Kind::Energy);
    name.unit.filter(|_| named).map(|unit| Found { unit, words: 1, named })
}

/// A word without the marks around it; brackets that belong to it stay.
fn bare(word: &str) -> &str {
    let word = word.trim_matches([',', ';', ':', '"', '\'', '=']);
    let open = word.matches(['(', '[']).count();
    let close = word.matches([')', ']']).count();
    let word = if open > close { word.trim_start_matches(['(', '[']) } else { word };
    let word = if close > open { word.trim_end_matches([')', ']']) } else { word };
    let inner = super::columns::strip_brackets(word);
    // `a.u.` keeps its last point.
    if inner.ends_with("u.") { inner } else { inner.trim_end_matches('.') }
}

fn is_number(word: &str) -> bool {
    word.trim_start_matches(['+', '-', '±', '~', '<', '>', '='])
        .starts_with(|c: char| c.is_ascii_digit() || c == '.')
}

/// Atoms that a comment or title names.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct NamedAtoms {
    /// The two of them.
    pub atoms: [AtomChoice; 2],
    /// The molecule's charge, where it is written.
    pub charge: Option<i32>,
    /// The line that names them, from 1.
    pub line: usize,
    /// The words they were taken from.
    pub words: String,
}

/// The two atoms, and the charge if it is written, that the comments and titles name.
///
/// Only a formula of exactly two atoms that begins a line counts (`H2, X 1Sigma_g+`, `HCl bond scan`,
/// `molecule: CO`), and not when the line goes on to speak of a bond in something larger. A formula that
/// may be something else needs words beside it that settle it: two capitals (`SI units` names no molecule)
/// what a molecule has, such as a scan or a state; an abbreviation of the trade (HF is a method too) the
/// word molecule or the term of a state.
pub(crate) fn atoms(lines: &[TextLine<'_>]) -> Option<NamedAtoms> {
    let found: Vec<NamedAtoms> = lines.iter().filter_map(atoms_of_line).collect();
    let first = found.first()?;
    let same = |f: &NamedAtoms| (&f.atoms, f.charge) == (&first.atoms, first.charge);
    found.iter().all(same).then(|| first.clone())
}

fn atoms_of_line(line: &TextLine<'_>) -> Option<NamedAtoms> {
    let named = |(atoms, charge): ([AtomChoice; 2], Option<i32>), words: &str| NamedAtoms {
        atoms,
        charge,
        line: line.number,
        words: words.to_owned(),
    };
    let (lead, text) = match line.text.split_once(':') {
        Some((lead, rest))
            if matches!(lead.trim().to_lowercase().as_str(), "molecule" | "system" | "atoms" | "species") =>
        {
            (true, rest.trim())
        }
        _ => (false, line.text.trim()),
    };
    if lead && let Ok(pair) = crate::species::parse_atoms(text) {
        return Some(named((pair, None), text));
    }
    let word = text.split_whitespace().next()?;
    let rest = text[word.len()..].trim();
    let bare = word.trim_end_matches([',', ';', ':', '.']);
    let pair = formula(bare)?;
    let clause = rest.split([',', ';', '.', ':']).next().unwrap_or("");
    let ended = bare.len() < word.len();
    let larger = !ended
        && clause.split_whitespace().any(|w| {
            matches!(
                w.to_lowercase().as_str(),
                "in" | "of" | "on" | "from" | "at" | "stretch" | "group" | "fragment" | "ligand"
            )
        });
    if larger {
        return None;
    }
    let settled = lead
        || names_a_molecule(rest)
        || match Reading::of(bare) {
            Reading::Formula => true,
            Reading::TwoCapitals => !ended && clause.split_whitespace().take(2).any(belongs_to_a_molecule),
            Reading::Abbreviation => false,
        };
    settled.then(|| named(pair, bare))
}

/// What else a formula of two atoms may be.
#[derive(Clone, Copy, PartialEq)]
enum Reading {
    /// Nothing: `HCl`, `N2`, `H2+`.
    Formula,
    /// Anything that is written in two capitals: `SI`, `NB`, `CO`.
    TwoCapitals,
    /// An abbreviation or symbol of the trade.
    Abbreviation,
}

impl Reading {
    fn of(formula: &str) -> Self {
        let charged = formula.ends_with(['+', '-']);
        if is_abbreviation(formula) {
            Self::Abbreviation
        } else if formula.len() == 2 && !charged && formula.bytes().all(|b| b.is_ascii_uppercase()) {
            Self::TwoCapitals
        } else {
            Self::Formula
        }
    }
}

/// Words for what only a molecule has.
fn belongs_to_a_molecule(word: &str) -> bool {
    matches!(
        word.to_lowercase().as_str(),
        "scan"
            | "bond"
            | "curve"
            | "potential"
            | "ground"
            | "excited"
            | "state"
            | "dissociation"
            | "stretching"
    )
}

/// Formulas that are also abbreviations or symbols: Hartree-Fock, configuration interaction, Kohn-Sham, not a
/// number, the point groups C2 and D2, the dispersion correction D2, amplitudes T2, the spin S2, ...
fn is_abbreviation(formula: &str) -> bool {
    matches!(
        formula,
        "HF" | "CI"
            | "KS"
            | "SO"
            | "BO"
            | "VB"
            | "NO"
            | "OK"
            | "OS"
            | "CS"
            | "CP"
            | "IP"
            | "HI"
            | "PI"
            | "IN"
            | "ON"
            | "BS"
            | "CC"
            | "SOS"
            | "PS"
            | "NB"
            | "SI"
            | "NaN"
            | "BSc"
            | "B2"
            | "C2"
            | "D2"
            | "S2"
            | "T2"
    )
}

/// `molecule`, or a state such as `X 1Sigma+`.
fn names_a_molecule(rest: &str) -> bool {
    let mut words = rest.split_whitespace();
    let next = words.next().unwrap_or("").trim_matches([',', '(', ')']).to_lowercase();
    let is_term = |w: &str| {
        let w = w.trim_start_matches(['^', '(']);
        w.starts_with(|c: char| c.is_ascii_digit())
            && ["sigma", "pi", "delta", "phi", "Σ", "Π", "Δ"]
                .iter()
                .any(|t| w.to_lowercase().contains(&t.to_lowercase()))
    };
    matches!(next.as_str(), "molecule" | "diatomic" | "ion" | "radical" | "dimer")
        || (next == "x" && words.next().is_some_and(is_term))
}

/// `HCl`, `H2`, `HD`, `H2+`, `O2^-`: exactly two atoms.
fn formula(word: &str) -> Option<([AtomChoice; 2], Option<i32>)> {
    let (body, charge) = match (word.strip_suffix('+'), word.strip_suffix('-')) {
        (Some(body), _) => (body, Some(1)),
        (_, Some(body)) => (body, Some(-1)),
        _ => (word, None),
    };
    let body = body.trim_end_matches('^');
    if body.len() > 5 || !body.is_ascii() {
        return None;
    }
    let choice = |symbol: &str| -> Option<AtomChoice> {
        let known = matches!(symbol, "D" | "T") || element_symbols().contains(&symbol);
        known.then(|| AtomChoice::parse(symbol).ok()).flatten()
    };
    if let Some(symbol) = body.strip_suffix('2') {
        let atom = choice(symbol)?;
        return Some(([atom.clone(), atom], charge));
    }
    let second = body.char_indices().skip(1).find(|(_, c)| c.is_ascii_uppercase())?.0;
    let (a, b) = body.split_at(second);
    Some(([choice(a)?, choice(b)?], charge))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn line(text: &str) -> TextLine<'_> {
        TextLine { number: 7, text, is_comment: true }
    }

    #[test]
    fn units_in_prose_count() {
        for (text, length, energy) in [
            (
                "energies relative to the lowest point, kJ/mol; distances in Angstrom",
                Some("angstrom"),
                Some("kJ/mol"),
            ),
            ("all quantities in atomic units: bond lengths and energies", Some("bohr"), Some("hartree")),
            ("units: bohr, hartree", Some("bohr"), Some("hartree")),
            ("Energies are given in kJ mol-1.", None, Some("kJ/mol")),
            ("bond lengths in A", Some("angstrom"), None),
            ("r/A and E/Eh", Some("angstrom"), Some("hartree")),
            ("pm, eV", Some("pm"), Some("eV")),
        ] {
            let (l, e) = units(&[line(text)]);
            assert_eq!((l.map(|u| u.0.name()), e.map(|u| u.0.name())), (length, energy), "{text}");
        }
    }

    #[test]
    fn units_of_other_things_do_not_count() {
        for text in [
            "the other O-H bond 0.9572 A and the angle 104.52 deg held",
            "SCF energy converged to 1e-11 hartree",
            "finite field +-0.001 au",
            "transition dipole along the bond in au",
            "energies converted from hartree to eV",
            "CCSD(T)/aug-cc-pVTZ, state A",
        ] {
            assert_eq!(units(&[line(text)]), (None, None), "{text}");
        }
    }

    #[test]
    fn a_formula_of_two_atoms_is_taken() {
        for (text, expected, charge) in [
            ("H2, X 1Sigma_g+, full CI", "H,H", None),
            ("CO  X 1Sigma+  CCSD(T)/cc-pVQZ", "C,O", None),
            ("HCl bond scan, CCSD(T)", "H,Cl", None),
            ("LiH, X 1Sigma+ and A 1Sigma+", "Li,H", None),
            ("HF molecule, RHF energy", "H,F", None),
            ("HF, X 1Sigma+", "H,F", None),
            ("HD ground state", "H,2H", None),
            ("H2+ exact", "H,H", Some(1)),
            ("molecule: CO", "C,O", None),
            ("atoms: 2H, 35Cl", "2H,35Cl", None),
            ("CO bond scan", "C,O", None),
            ("D2 molecule", "2H,2H", None),
            ("N2", "N,N", None),
        ] {
            let found = atoms(&[line(text)]).unwrap_or_else(|| panic!("{text}"));
            let [a, b] = &found.atoms;
            assert_eq!((format!("{a},{b}").as_str(), found.charge), (expected, charge), "{text}");
            assert_eq!(found.line, 7, "{text}");
        }
    }

    #[test]
    fn anything_less_clear_is_not() {
        for text in [
            "HF, aug-cc-pVTZ",
            "HF/cc-pVTZ energies",
            "HF",
            "OH stretch of water",
            "CO bond in formaldehyde",
            "O-H stretch of water",
            "H2O, rigid",
            "Potential of something",
            "R (bohr)  E (hartree)",
            "CASSCF(6,6)",
            "SI units throughout",
            "SI",
            "NB: potential energies below zero",
            "CO, triple zeta",
            "PS: the scan ends at 3",
            "C2 symmetry was used",
            "D2 dispersion added",
            "NaN marks points that failed",
            "",
        ] {
            assert_eq!(atoms(&[line(text)]), None, "{text}");
        }
        assert_eq!(atoms(&[line("H2, one"), line("N2, two")]), None);
    }
}
