//! What a column header says: name, unit, and whether it is a bond length, an energy or something else.

use super::words::{UnitWord, parse_unit};
use crate::units::{EnergyUnit, LengthUnit};

/// What a column holds, as far as its header tells.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Kind {
    /// A bond length.
    Length,
    /// An energy.
    Energy,
    /// Neither: a dipole, an angle, a counter.
    Property,
    /// The header does not tell.
    Unknown,
}

/// A column header taken apart.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct ColumnName {
    /// As written.
    pub full: String,
    /// Without the unit.
    pub label: String,
    /// The unit, where it is one of length or energy.
    pub unit: Option<UnitWord>,
    /// The unit as written, known or not.
    pub unit_text: Option<String>,
    /// What the column holds.
    pub kind: Kind,
}

impl ColumnName {
    /// A column without a header, numbered from 1.
    pub(crate) fn unnamed(number: usize) -> Self {
        let full = format!("column {number}");
        Self { label: full.clone(), full, unit: None, unit_text: None, kind: Kind::Unknown }
    }

    /// Takes a header apart: `R_angstrom`, `r/bohr`, `E (kJ/mol)`, `V[Eh]`, `E in eV`, `E_CCSD(T)(hartree)`.
    pub(crate) fn parse(header: &str) -> Self {
        let full = header.trim().trim_matches('"').trim().to_owned();
        let (label, unit, unit_text) = split_unit(&full);
        let said = kind_of_name(&label);
        let kind = match (said, unit) {
            (Kind::Unknown, Some(UnitWord::Length(_))) => Kind::Length,
            (Kind::Unknown, Some(UnitWord::Energy(_))) => Kind::Energy,
            _ => said,
        };
        Self { full, label, unit, unit_text, kind }
    }

    /// The same column with a unit from a line of units below the names.
    pub(crate) fn with_unit(self, unit: &str) -> Self {
        let unit = strip_brackets(unit.trim());
        if self.unit.is_some() || unit.is_empty() {
            self
        } else {
            Self::parse(&format!("{} ({unit})", self.full))
        }
    }

    /// The length unit stated, atomic units taken as bohr.
    pub(crate) fn length_unit(&self) -> Option<LengthUnit> {
        match self.unit? {
            UnitWord::Length(unit) => Some(unit),
            UnitWord::Atomic => Some(LengthUnit::Bohr),
            UnitWord::Energy(_) => None,
        }
    }

    /// The energy unit stated, atomic units taken as hartree.
    pub(crate) fn energy_unit(&self) -> Option<EnergyUnit> {
        match self.unit? {
            UnitWord::Energy(unit) => Some(unit),
            UnitWord::Atomic => Some(EnergyUnit::Hartree),
            UnitWord::Length(_) => None,
        }
    }
}

/// Takes surrounding brackets off.
pub(crate) fn strip_brackets(text: &str) -> &str {
    let inner = |open: char, close: char| text.strip_prefix(open).and_then(|t| t.strip_suffix(close));
    inner('(', ')').or_else(|| inner('[', ']')).or_else(|| inner('<', '>')).unwrap_or(text).trim()
}

type Parts = (String, Option<UnitWord>, Option<String>);

fn split_unit(full: &str) -> Parts {
    let bare = strip_brackets(full);
    // A header that is nothing but a unit; one letter is a name.
    if bare.chars().count() > 1
        && let Some(unit) = parse_unit(bare)
    {
        return (full.to_owned(), Some(unit), Some(bare.to_owned()));
    }
    let groups = bracket_groups(full);
    for &(open, close) in groups.iter().rev() {
        let inner = full[open + 1..close].trim();
        let said = inner.strip_prefix("in ").unwrap_or(inner).trim();
        // `E (MP2, hartree)`: the unit may be the last part.
        let last = said.rsplit(',').next().unwrap_or(said).trim();
        if let Some(unit) = parse_unit(last)
            && fits(&full[..open], unit, last)
        {
            let before = said[..said.len() - last.len()].trim_end_matches([',', ' ']);
            let kept = if before.is_empty() { String::new() } else { format!(" ({before})") };
            let label = format!("{}{kept}{}", full[..open].trim_end(), &full[close + 1..]);
            return (clean_label(&label, full), Some(unit), Some(last.to_owned()));
        }
    }
    for (at, separator) in
        full.char_indices().filter(|(_, c)| matches!(c, '/' | '_' | ' ' | ',' | ':' | '-' | '.'))
    {
        let rest = strip_brackets(full[at + separator.len_utf8()..].trim());
        let rest = rest.strip_prefix("in ").unwrap_or(rest).trim();
        if let Some(unit) = parse_unit(rest)
            && fits(&full[..at], unit, rest)
        {
            return (clean_label(&full[..at], full), Some(unit), Some(rest.to_owned()));
        }
    }
    if let Some(&(open, close)) = groups.last().filter(|g| g.1 + 1 == full.len()) {
        let inner = full[open + 1..close].trim();
        let square = full[open..].starts_with('[');
        if square || is_other_unit(inner) || (!inner.is_empty() && full[..open].ends_with(' ')) {
            return (clean_label(&full[..open], full), None, Some(inner.to_owned()));
        }
    }
    if let Some((label, unit)) = full.rsplit_once(['_', '/']).filter(|(_, unit)| is_other_unit(unit)) {
        return (clean_label(label, full), None, Some(unit.trim().to_owned()));
    }
    (full.to_owned(), None, None)
}

/// A single letter A is angstrom only behind the name of a length: in `E_A` it names a state.
fn fits(name: &str, unit: UnitWord, written: &str) -> bool {
    let ambiguous = written == "A" || matches!(unit, UnitWord::Length(_)) && written.len() == 1;
    !ambiguous || kind_of_name(name.trim_end_matches([' ', '_', '/'])) == Kind::Length
}

fn clean_label(label: &str, full: &str) -> String {
    let label = label.trim().trim_end_matches(['/', '_', ',', ':', ' ', '-']);
    let label = label.strip_suffix(" in").unwrap_or(label);
    if label.is_empty() { full.to_owned() } else { label.to_owned() }
}

/// Bracket pairs at the outermost level: positions of the opening and closing sign.
fn bracket_groups(text: &str) -> Vec<(usize, usize)> {
    let (mut groups, mut depth, mut start) = (Vec::new(), 0_usize, 0);
    for (at, c) in text.char_indices() {
        match c {
            '(' | '[' => {
                if depth == 0 {
                    start = at;
                }
                depth += 1;
            }
            ')' | ']' if depth > 0 => {
                depth -= 1;
                if depth == 0 {
                    groups.push((start, at));
                }
            }
            _ => {}
        }
    }
    groups
}

/// Units of other quantities, so that a property shows them.
fn is_other_unit(word: &str) -> bool {
    let lower = word.trim().to_lowercase();
    matches!(
        lower.as_str(),
        "debye" | "d" | "deg" | "degree" | "degrees" | "°" | "rad" | "k" | "n/m" | "e" | "amu" | "u"
    )
}

const LENGTH_WORDS: [&str; 15] = [
    "r",
    "re",
    "d",
    "x",
    "q",
    "dist",
    "bond",
    "bondlength",
    "length",
    "len",
    "sep",
    "coord",
    "coordinate",
    "abstand",
    "rab",
];
const ENERGY_WORDS: [&str; 16] = [
    "e",
    "v",
    "u",
    "w",
    "de",
    "dv",
    "δe",
    "δv",
    "etot",
    "etotal",
    "pot",
    "potential",
    "pes",
    "pec",
    "vpot",
    "epot",
];
/// Methods that stand alone as the name of an energy column.
const METHOD_WORDS: [&str; 34] = [
    "hf", "rhf", "uhf", "rohf", "scf", "rks", "uks", "dft", "pbe", "pbe0", "b3lyp", "mp2", "rmp2", "ump2",
    "mp3", "mp4", "cc2", "cc3", "ccsd", "rccsd", "uccsd", "ccsdt", "cisd", "qcisd", "fci", "mrci", "mrcisd",
    "casci", "casscf", "caspt2", "nevpt2", "rasscf", "fullci", "morse",
];
const PROPERTY_WORDS: [&str; 30] = [
    "mu",
    "dip",
    "dipole",
    "angle",
    "theta",
    "phi",
    "grad",
    "gradient",
    "force",
    "charge",
    "time",
    "iter",
    "iteration",
    "weight",
    "sigma",
    "err",
    "error",
    "spin",
    "s2",
    "pop",
    "index",
    "idx",
    "step",
    "point",
    "row",
    "frame",
    "no",
    "n",
    "quadrupole",
    "polarizability",
];

/// What a name without its unit says.
fn kind_of_name(name: &str) -> Kind {
    let lower = name.trim().to_lowercase();
    let first = lower.split(|c: char| !c.is_alphanumeric()).find(|w| !w.is_empty()).unwrap_or("");
    let stem = first.trim_end_matches(|c: char| c.is_ascii_digit());
    let has = |words: &[&str]| words.contains(&first) || words.contains(&stem);
    let derivative = lower.contains("/dr") || lower.contains("/dx");
    if derivative || ["dipole", "gradient", "angle", "force", "charge"].iter().any(|w| lower.contains(w)) {
        Kind::Property
    } else if has(&METHOD_WORDS) || has(&ENERGY_WORDS) || lower.contains("energ") {
        Kind::Energy
    } else if has(&PROPERTY_WORDS) {
        Kind::Property
    } else if has(&LENGTH_WORDS)
        || ["distance", "bond length", "separation", "internuclear"].iter().any(|w| lower.contains(w))
    {
        Kind::Length
    } else {
        glued(name.trim())
    }
}

/// Names with no separator, as in `rOH`, `RAB`, `EHF`, `VX`: the letter, then a capital.
fn glued(name: &str) -> Kind {
    let mut chars = name.chars();
    let (first, second) = (chars.next(), chars.next());
    if !second.is_some_and(char::is_uppercase) {
        return Kind::Unknown;
    }
    match first {
        Some('r' | 'R') => Kind::Length,
        Some('E' | 'V') => Kind::Energy,
        Some('d' | 'D' | 'Δ' | 'δ') if second == Some('E') => Kind::Energy,
        _ => Kind::Unknown,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn told(header: &str) -> (String, Option<&'static str>, Kind) {
        let c = ColumnName::parse(header);
        let unit = match c.kind {
            Kind::Length => c.length_unit().map(LengthUnit::name),
            _ => c.energy_unit().map(EnergyUnit::name),
        };
        (c.label, unit, c.kind)
    }

    #[test]
    fn lengths_are_understood() {
        for (header, label, unit) in [
            ("R_angstrom", "R", Some("angstrom")),
            ("r_A", "r", Some("angstrom")),
            ("r/bohr", "r", Some("bohr")),
            ("R [pm]", "R", Some("pm")),
            ("R(angstrom)", "R", Some("angstrom")),
            ("R (a.u.)", "R", Some("bohr")),
            ("R_au", "R", Some("bohr")),
            ("r / Å", "r", Some("angstrom")),
            ("r_OH2_angstrom", "r_OH2", Some("angstrom")),
            ("bond length in nm", "bond length", Some("nm")),
            ("Bond distance, Angstrom", "Bond distance", Some("angstrom")),
            ("r(H-Cl)", "r(H-Cl)", None),
            ("rOH", "rOH", None),
            ("r_OH/A", "r_OH", Some("angstrom")),
            ("angstrom", "angstrom", Some("angstrom")),
            ("R1", "R1", None),
        ] {
            assert_eq!(told(header), (label.to_owned(), unit, Kind::Length), "{header}");
        }
    }

    #[test]
    fn energies_are_understood() {
        for (header, label, unit) in [
            ("E_hartree", "E", Some("hartree")),
            ("E (kJ/mol)", "E", Some("kJ/mol")),
            ("V[Eh]", "V", Some("hartree")),
            ("E_CCSD(T)(hartree)", "E_CCSD(T)", Some("hartree")),
            ("E_MP2/Eh", "E_MP2", Some("hartree")),
            ("E/kJ mol-1", "E", Some("kJ/mol")),
            ("E / kJ/mol", "E", Some("kJ/mol")),
            ("V_cm-1", "V", Some("cm-1")),
            ("V / cm^-1", "V", Some("cm-1")),
            ("E_kcal_per_mol", "E", Some("kcal/mol")),
            ("E_A_hartree", "E_A", Some("hartree")),
            ("E_A", "E_A", None),
            ("E(A)", "E(A)", None),
            ("E_corr_DZ_hartree", "E_corr_DZ", Some("hartree")),
            ("E (MP2, hartree)", "E (MP2)", Some("hartree")),
            ("E(hartree) CCSD", "E CCSD", Some("hartree")),
            ("energy in eV", "energy", Some("eV")),
            ("Total energy (a.u.)", "Total energy", Some("hartree")),
            ("CCSD(T)/Eh", "CCSD(T)", Some("hartree")),
            ("dE", "dE", None),
            ("ΔE [meV]", "ΔE", Some("meV")),
            ("EHF", "EHF", None),
            ("RHF", "RHF", None),
            ("State 1 (cm-1)", "State 1", Some("cm-1")),
        ] {
            assert_eq!(told(header), (label.to_owned(), unit, Kind::Energy), "{header}");
        }
    }

    #[test]
    fn other_columns_keep_their_unit_as_written() {
        for (header, label, unit) in [
            ("mu_X_au", "mu_X", Some("au")),
            ("mu_A_au", "mu_A", Some("au")),
            ("mu/au", "mu", Some("au")),
            ("mu_CCSD(T)(debye)", "mu_CCSD(T)", Some("debye")),
            ("angle_deg", "angle", Some("deg")),
            ("dipole [D]", "dipole", Some("D")),
            ("dE/dR (hartree/bohr)", "dE/dR", Some("hartree/bohr")),
            ("point", "point", None),
            ("n", "n", None),
        ] {
            let c = ColumnName::parse(header);
            assert_eq!(
                (c.label.as_str(), c.unit_text.as_deref(), c.kind),
                (label, unit, Kind::Property),
                "{header}"
            );
        }
    }

    #[test]
    fn an_unknown_unit_is_kept_for_the_message() {
        let c = ColumnName::parse("E (Ry)");
        assert_eq!((c.kind, c.unit, c.unit_text.as_deref()), (Kind::Energy, None, Some("Ry")));
        assert_eq!(
            ColumnName::parse("E").with_unit("(kJ/mol)").energy_unit(),
            Some(EnergyUnit::KilojoulePerMole)
        );
    }
}
