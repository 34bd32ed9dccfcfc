//! Nuclides, atomic masses and the reduced mass of a bond.

pub mod nuclides;

use crate::estimate::{ErrorSource, Estimate};
use crate::units::{U_PER_ELECTRON_MASS, u_to_electron_masses};
use serde::{Deserialize, Serialize};
use std::fmt;
use thiserror::Error;

pub use nuclides::{element_symbols, isotopes_of, mean_atomic_mass_u};

/// An atom as the user names it: a symbol and, where a certain isotope is wanted, a mass number.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct AtomChoice {
    /// Element symbol, e.g. `Cl`.
    pub symbol: String,
    /// Mass number; none means the most abundant isotope.
    #[serde(default)]
    pub mass_number: Option<u32>,
}

/// An isotope with its mass.
#[derive(Clone, Debug, PartialEq)]
pub struct Atom {
    /// Element symbol.
    pub symbol: String,
    /// Mass number.
    pub mass_number: u32,
    /// Neutral-atom mass in u with its published uncertainty.
    pub mass_u: Estimate,
}

/// Which masses a study uses.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct MassSettings {
    /// The two atoms; none takes those the scan names.
    pub atoms: Option<[AtomChoice; 2]>,
    /// Charge of the molecule in units of e; none takes the charge the scan names, and 0 where it names none.
    pub charge: Option<i32>,
    /// Reduced mass in u given directly; it replaces the atoms.
    pub reduced_mass_u: Option<f64>,
}

/// The masses of a study.
#[derive(Clone, Debug, PartialEq)]
pub struct Masses {
    /// The two atoms, unless the reduced mass was given directly.
    pub atoms: Option<[Atom; 2]>,
    /// Charge of the molecule in units of e.
    pub charge: i32,
    /// Reduced mass in u.
    pub reduced_mass_u: Estimate,
    /// Reduced mass in electron masses, as the equations take it.
    pub reduced_mass_me: f64,
}

/// Why atoms or masses are not usable.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum SpeciesError {
    /// The word is no element symbol.
    #[error(
        "{found:?} is no element symbol known here{}; write the symbol with an optional mass number before it, such as H, 2H or 35Cl",
        nearest(near)
    )]
    UnknownElement {
        /// What was written.
        found: String,
        /// Symbols that resemble it.
        near: Vec<&'static str>,
    },
    /// The element has no such isotope in the table.
    #[error("no isotope {mass_number}{symbol} is listed; for {symbol} choose from {}", numbers(known))]
    UnknownIsotope {
        /// The element.
        symbol: String,
        /// The mass number that was asked for.
        mass_number: u32,
        /// The mass numbers listed.
        known: Vec<u32>,
    },
    /// A bond needs two atoms.
    #[error(
        "{found:?} names {count} atoms; a bond has two: write them with a comma between, such as H,F or 2H,35Cl"
    )]
    NotTwoAtoms {
        /// What was written.
        found: String,
        /// How many atoms it names.
        count: usize,
    },
    /// A reduced mass must be positive.
    #[error(
        "the reduced mass {found_u} u is not a positive number; give it in u, for H and F for example 0.957"
    )]
    ReducedMassNotPositive {
        /// The value in u.
        found_u: f64,
    },
    /// More electrons taken away than the two atoms have.
    #[error(
        "a charge of {charge:+} is more than the {electrons} electrons of {atoms} allow; check the charge"
    )]
    TooPositive {
        /// The charge in units of e.
        charge: i32,
        /// Number of electrons of the neutral pair.
        electrons: u32,
        /// The pair of atoms.
        atoms: String,
    },
}

fn nearest(near: &[&str]) -> String {
    if near.is_empty() { String::new() } else { format!(" (near: {})", near.join(", ")) }
}

fn numbers(known: &[u32]) -> String {
    known.iter().map(u32::to_string).collect::<Vec<_>>().join(", ")
}

impl AtomChoice {
    /// Reads `Cl`, `35Cl`, `cl`, `D` or `T`; D and T are the hydrogen isotopes 2 and 3.
    ///
    /// # Errors
    /// Unknown element, with symbols that resemble it, or unknown isotope, with those that are listed.
    pub fn parse(text: &str) -> Result<Self, SpeciesError> {
        let word = text.trim();
        let digits = word.bytes().take_while(u8::is_ascii_digit).count();
        let (number, symbol) = word.split_at(digits);
        let symbol = symbol.trim_start_matches(['-', ' ']);
        let unknown = || SpeciesError::UnknownElement { found: word.to_owned(), near: near_symbols(symbol) };
        let heavy = match symbol {
            "D" | "d" => Some(2),
            "T" | "t" => Some(3),
            _ => None,
        };
        if let Some(mass_number) = heavy {
            return if number.is_empty() || number.parse() == Ok(mass_number) {
                Ok(Self { symbol: "H".to_owned(), mass_number: Some(mass_number) })
            } else {
                Err(unknown())
            };
        }
        let symbol =
            element_symbols().into_iter().find(|s| s.eq_ignore_ascii_case(symbol)).ok_or_else(unknown)?;
        let mass_number =
            if number.is_empty() { None } else { Some(number.parse::<u32>().map_err(|_| unknown())?) };
        let choice = Self { symbol: symbol.to_owned(), mass_number };
        choice.atom()?;
        Ok(choice)
    }

    /// The isotope chosen, with its mass; without a mass number the most abundant one.
    ///
    /// # Errors
    /// Unknown element or isotope.
    pub fn atom(&self) -> Result<Atom, SpeciesError> {
        let known = isotopes_of(&self.symbol);
        let isotope = match self.mass_number {
            None => nuclides::default_isotope(&self.symbol),
            Some(wanted) => known.iter().find(|i| i.mass_number == wanted),
        };
        match (isotope, self.mass_number) {
            (Some(i), _) => Ok(Atom {
                symbol: self.symbol.clone(),
                mass_number: i.mass_number,
                mass_u: Estimate::with_error(i.mass_u, i.mass_uncertainty_u, ErrorSource::Published),
            }),
            (None, Some(mass_number)) if !known.is_empty() => Err(SpeciesError::UnknownIsotope {
                symbol: self.symbol.clone(),
                mass_number,
                known: known.iter().map(|i| i.mass_number).collect(),
            }),
            _ => Err(SpeciesError::UnknownElement {
                found: self.symbol.clone(),
                near: near_symbols(&self.symbol),
            }),
        }
    }

    /// For display, the mass number raised: `²H`.
    pub fn pretty(&self) -> String {
        self.mass_number.map_or_else(|| self.symbol.clone(), |a| format!("{}{}", raised(a), self.symbol))
    }
}

impl fmt::Display for AtomChoice {
    /// As options take it: `2H`, or `H` for the most abundant isotope.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.mass_number {
            Some(a) => write!(f, "{a}{}", self.symbol),
            None => f.write_str(&self.symbol),
        }
    }
}

impl Atom {
    /// For display, the mass number raised: `²H`.
    pub fn pretty(&self) -> String {
        format!("{}{}", raised(self.mass_number), self.symbol)
    }
}

fn raised(number: u32) -> String {
    const DIGITS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    number.to_string().bytes().map(|b| DIGITS[usize::from(b - b'0') % 10]).collect()
}

/// Symbols with the same first letter, then those that contain it; at most eight.
fn near_symbols(word: &str) -> Vec<&'static str> {
    let Some(first) = word.chars().next().map(|c| c.to_ascii_uppercase()) else {
        return Vec::new();
    };
    let mut near: Vec<&'static str> =
        element_symbols().into_iter().filter(|s| s.starts_with(first)).collect();
    let second = word.chars().nth(1);
    // Stable sort: those that share the second letter come first, the rest keep the order of the table.
    near.sort_by_key(|s| s.chars().nth(1) != second);
    near.truncate(8);
    near
}

/// Reads two atoms with a comma between them, `2H,35Cl`.
///
/// # Errors
/// Not two atoms, unknown element, unknown isotope.
pub fn parse_atoms(text: &str) -> Result<[AtomChoice; 2], SpeciesError> {
    let words: Vec<&str> = text.split(',').map(str::trim).filter(|w| !w.is_empty()).collect();
    match words.as_slice() {
        [a, b] => Ok([AtomChoice::parse(a)?, AtomChoice::parse(b)?]),
        _ => Err(SpeciesError::NotTwoAtoms { found: text.to_owned(), count: words.len() }),
    }
}

/// The masses of a study: the reduced mass given directly, or that of the atoms chosen, or of those
/// the scan names; none when nobody names any.
///
/// μ = m_a m_b/(m_a + m_b) with neutral-atom masses; for a molecule of charge q (in e)
/// μ = m_a m_b/(m_a + m_b − q m_e) (J. K. G. Watson, J. Mol. Spectrosc. 80, 411 (1980)). The published
/// uncertainties of the two masses are propagated as independent ones (fully correlated for like isotopes).
///
/// # Errors
/// Unknown element or isotope; a reduced mass that is not positive; more charge than electrons.
pub fn masses(
    settings: &MassSettings,
    scan_atoms: Option<&[AtomChoice; 2]>,
    scan_charge: Option<i32>,
) -> Result<Option<Masses>, SpeciesError> {
    let charge = settings.charge.or(scan_charge).unwrap_or(0);
    if let Some(found_u) = settings.reduced_mass_u {
        if !(found_u.is_finite() && found_u > 0.0) {
            return Err(SpeciesError::ReducedMassNotPositive { found_u });
        }
        return Ok(Some(Masses {
            atoms: None,
            charge,
            reduced_mass_u: Estimate::exact(found_u),
            reduced_mass_me: u_to_electron_masses(found_u),
        }));
    }
    let Some([a, b]) = settings.atoms.as_ref().or(scan_atoms) else {
        return Ok(None);
    };
    let electrons: u32 =
        [a, b].iter().filter_map(|c| isotopes_of(&c.symbol).first()).map(|i| i.atomic_number).sum();
    if i64::from(charge) > i64::from(electrons) {
        return Err(SpeciesError::TooPositive { charge, electrons, atoms: format!("{a} and {b}") });
    }
    let atoms = [a.atom()?, b.atom()?];
    let reduced_mass_u = reduced_mass(&atoms, charge);
    if !(reduced_mass_u.value.is_finite() && reduced_mass_u.value > 0.0) {
        return Err(SpeciesError::ReducedMassNotPositive { found_u: reduced_mass_u.value });
    }
    Ok(Some(Masses {
        reduced_mass_me: u_to_electron_masses(reduced_mass_u.value),
        atoms: Some(atoms),
        charge,
        reduced_mass_u,
    }))
}

fn reduced_mass(atoms: &[Atom; 2], charge: i32) -> Estimate {
    let [a, b] = [atoms[0].mass_u, atoms[1].mass_u];
    let sum = a.value + b.value - f64::from(charge) * U_PER_ELECTRON_MASS;
    let mu = a.value * b.value / sum;
    // ∂μ/∂m_a = (m_b − μ)/sum, and likewise for m_b.
    let from_a = (b.value - mu) / sum * a.std_error.unwrap_or(0.0);
    let from_b = (a.value - mu) / sum * b.std_error.unwrap_or(0.0);
    let same = atoms[0].symbol == atoms[1].symbol && atoms[0].mass_number == atoms[1].mass_number;
    let std_error = if same { from_a + from_b } else { from_a.hypot(from_b) };
    Estimate::with_error(mu, std_error.abs(), ErrorSource::Published)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn with_atoms(text: &str, charge: i32) -> Masses {
        let settings = MassSettings {
            atoms: Some(parse_atoms(text).expect("atoms")),
            charge: Some(charge),
            reduced_mass_u: None,
        };
        masses(&settings, None, None).expect("masses").expect("some")
    }

    /// Reduced masses in u printed with an independent solution of the sample scans (AME2020 masses).
    #[test]
    fn reduced_masses_agree_with_an_independent_computation() {
        for (atoms, reduced_mass_u) in [
            ("H,H", 0.503_912_515_949),
            ("D,D", 1.007_050_888_922),
            ("H,Cl", 0.979_592_539_096_447_2),
            ("2H,35Cl", 1.904_413_246_209_710_3),
            ("C,O", 6.856_208_637_945_6),
            ("N,N", 7.001_537_002_124_999),
            ("Li,H", 0.881_238_166_388_080_8),
        ] {
            let found = with_atoms(atoms, 0).reduced_mass_u.value;
            assert!((found / reduced_mass_u - 1.0).abs() < 1e-12, "{atoms}: {found}");
        }
    }

    /// The two nuclear masses of H2+ come to (m_H − m_e)²/(2(m_H − m_e)); Watson's mass differs from it by
    /// a relative (m_e/2m)² only.
    #[test]
    fn the_charge_enters_as_watson_has_it() {
        let [neutral, ion] = [with_atoms("H,H", 0), with_atoms("H,H", 1)].map(|m| m.reduced_mass_u.value);
        let m = 1.007_825_031_898;
        assert!((ion - m * m / (2.0 * m - U_PER_ELECTRON_MASS)).abs() < 1e-15);
        assert!(ion > neutral);
    }

    #[test]
    fn the_uncertainty_is_propagated() {
        let found = with_atoms("H,H", 0).reduced_mass_u;
        // μ = m/2 for like atoms, so its error is half that of the mass, 1.4e-11 u (AME2020).
        assert!((found.std_error.expect("error") - 0.7e-11).abs() < 1e-14);
        assert_eq!(found.source, Some(ErrorSource::Published));
    }

    #[test]
    fn symbols_are_read_and_written() {
        let [d, cl] = parse_atoms(" D , 35cl").expect("atoms");
        assert_eq!((d.to_string(), cl.to_string()), ("2H".to_owned(), "35Cl".to_owned()));
        assert_eq!(d.pretty(), "²H");
        assert_eq!(AtomChoice::parse("H").expect("H").to_string(), "H");
    }

    #[test]
    fn errors_name_what_is_near() {
        let message = |text: &str| parse_atoms(text).expect_err("refused").to_string();
        assert!(message("H,Xq").contains("near: Xe"), "{}", message("H,Xq"));
        assert!(message("H,40Cl").contains("35, 37"), "{}", message("H,40Cl"));
        assert!(message("H").contains("names 1 atoms"), "{}", message("H"));
        assert!(message("H,99999999999F").contains("no element symbol"));
        assert!(parse_atoms("3D,H").is_err());
    }

    #[test]
    fn impossible_masses_are_refused() {
        let direct = |m| masses(&MassSettings { reduced_mass_u: Some(m), ..Default::default() }, None, None);
        assert!(direct(0.0).is_err() && direct(f64::NAN).is_err() && direct(-1.0).is_err());
        assert_eq!(direct(2.0).expect("ok").expect("some").reduced_mass_u, Estimate::exact(2.0));
        let bare = MassSettings { charge: Some(3), ..Default::default() };
        let h2 = parse_atoms("H,H").expect("atoms");
        assert!(masses(&bare, Some(&h2), None).expect_err("refused").to_string().contains("2 electrons"));
        assert_eq!(masses(&MassSettings::default(), None, None), Ok(None));
        assert_eq!(
            masses(&MassSettings::default(), Some(&h2), Some(1)).expect("ok").expect("some").charge,
            1
        );
        // A charge of 0 by choice goes before the one that the scan names.
        let neutral = MassSettings { charge: Some(0), ..Default::default() };
        assert_eq!(masses(&neutral, Some(&h2), Some(1)).expect("ok").expect("some").charge, 0);
    }
}
