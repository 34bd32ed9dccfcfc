//! Nuclides, atomic masses and the reduced mass of a bond.

use crate::estimate::Estimate;
use serde::{Deserialize, Serialize};

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
    /// Charge of the molecule in units of e.
    pub charge: i32,
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
