//! Curves made from columns: sums with factors and constants, and extrapolation to the basis-set limit.
//!
//! A recipe is one line, `NAME = TERM + TERM ...`, and is kept in the settings as it was written.

mod recipe;

pub use recipe::Recipe;

use self::recipe::{Quantity, Term};
use super::{EnergyColumn, Scan, names};
use crate::units::EnergyUnit;
use thiserror::Error;

/// Why a recipe or what it makes is refused.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum CombineError {
    /// The recipe cannot be read.
    #[error(
        "the recipe {recipe:?} is not understood at {at:?}: expected {expected}; write for example \
         E_CBS = hf3(A, B, C; 2,3,4) + corr2(D, E; 3,4), or X = A - 0.5*B + 0.1 eV, names with other signs in quotes"
    )]
    Syntax {
        /// The recipe.
        recipe: String,
        /// What stands at the place.
        at: String,
        /// What would be understood there.
        expected: &'static str,
    },
    /// The cardinal numbers do not suit the rule.
    #[error("{rule} in {recipe:?}: {problem}")]
    Cardinals {
        /// The recipe.
        recipe: String,
        /// The rule.
        rule: &'static str,
        /// What is wrong and what is accepted.
        problem: &'static str,
    },
    /// A column of the recipe does not exist.
    #[error("recipe {recipe:?}: {problem}")]
    Column {
        /// The recipe.
        recipe: String,
        /// The message about the column.
        problem: String,
    },
    /// The name is taken.
    #[error("recipe {recipe:?}: there is a column {name:?} already; choose another name")]
    NameTaken {
        /// The recipe.
        recipe: String,
        /// The name.
        name: String,
    },
    /// The energies do not approach a limit exponentially.
    #[error(
        "recipe {recipe:?}: at the bond length {bond_length} {unit} the ratio of the steps, {ratio:.4}, is not between \
         0 and 1, so the energies approach no limit exponentially; check the columns and their order, or use two \
         cardinal numbers and an exponent: hf2(A, B; 3,4; 1.63)"
    )]
    StepRatio {
        /// The recipe.
        recipe: String,
        /// Bond length as read.
        bond_length: f64,
        /// Its unit.
        unit: &'static str,
        /// (E3 − E2)/(E2 − E1).
        ratio: f64,
    },
    /// The result is not finite.
    #[error(
        "recipe {recipe:?}: the result at the bond length {bond_length} {unit} is too large to be represented"
    )]
    NotFinite {
        /// The recipe.
        recipe: String,
        /// Bond length as read.
        bond_length: f64,
        /// Its unit.
        unit: &'static str,
    },
    /// No row has all columns.
    #[error("recipe {recipe:?}: no row has a value in every column it names")]
    NoRow {
        /// The recipe.
        recipe: String,
    },
}

/// A rule for the limit of an infinite basis set.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Rule {
    /// E(X) = E_inf + B exp(−α X) from three equally spaced cardinal numbers.
    Exponential3,
    /// The same from two, α given.
    Exponential2 {
        /// exp(−α (X2 − X1)).
        decay: f64,
    },
    /// E(X) = E_inf + A X^(−p) from two; `weights` are those of the two energies.
    InversePower {
        /// X1 and X2 to the power p over their difference, with signs.
        weights: [f64; 2],
    },
}

/// The energy in the limit of the sequence `e`; the error is the ratio of steps outside (0, 1).
///
/// Exponential, for Hartree-Fock energies [D. Feller, J. Chem. Phys. 96, 6104 (1992)]: with steps d1, d2 and
/// ρ = d2/d1, E_inf = E3 + d2 ρ/(1 − ρ). Inverse power, for correlation energies, p = 3 [T. Helgaker,
/// W. Klopper, H. Koch, J. Noga, J. Chem. Phys. 106, 9639 (1997)]:
/// E_inf = (X2^p E2 − X1^p E1)/(X2^p − X1^p).
fn limit(rule: Rule, e: &[f64]) -> Result<f64, f64> {
    match (rule, e) {
        (Rule::Exponential3, &[e1, e2, e3]) => {
            let ratio = (e3 - e2) / (e2 - e1);
            if !(ratio > 0.0 && ratio < 1.0) {
                return Err(ratio);
            }
            Ok(e3 + (e3 - e2) * ratio / (1.0 - ratio))
        }
        (Rule::Exponential2 { decay }, &[e1, e2]) => Ok(e2 + (e2 - e1) * decay / (1.0 - decay)),
        (Rule::InversePower { weights: [w1, w2] }, &[e1, e2]) => Ok(w1 * e1 + w2 * e2),
        _ => Ok(f64::NAN),
    }
}

impl Scan {
    /// The scan with a further energy column made by the recipe. Its unit is that of the columns it is made
    /// from, hartree where they differ; a row without one of them has no value.
    ///
    /// # Errors
    /// [`CombineError`].
    pub fn with_made(mut self, recipe: &Recipe) -> Result<Self, CombineError> {
        let text = || recipe.text().to_owned();
        let all: Vec<(&str, &str)> =
            self.energies.iter().map(|c| (c.name.as_str(), c.label.as_str())).collect();
        if all.iter().any(|(name, label)| *name == recipe.name || *label == recipe.name) {
            return Err(CombineError::NameTaken { recipe: text(), name: recipe.name.clone() });
        }
        let find = |name: &String| {
            let found = names::find(&all, name);
            found.map_err(|e| CombineError::Column { recipe: text(), problem: e.to_string() })
        };
        let terms: Vec<(f64, Source)> = recipe
            .terms
            .iter()
            .map(|Term { factor, quantity }| {
                let source = match quantity {
                    Quantity::Constant { value, unit } => Source::Constant(*value, *unit),
                    Quantity::Column(name) => Source::Column(find(name)?),
                    Quantity::Limit { rule, columns } => {
                        Source::Limit(*rule, columns.iter().map(find).collect::<Result<_, _>>()?)
                    }
                };
                Ok((*factor, source))
            })
            .collect::<Result<_, CombineError>>()?;
        let used: Vec<usize> = terms.iter().flat_map(|t| t.1.columns()).copied().collect();
        let mut units = used.iter().map(|&c| self.energies[c].unit);
        let first = units.next().unwrap_or(EnergyUnit::Hartree);
        let unit = if units.all(|u| u == first) { first } else { EnergyUnit::Hartree };
        let values: Vec<Option<f64>> = (0..self.bond_lengths.len())
            .map(|row| self.made_value(recipe, &terms, row, unit))
            .collect::<Result<_, _>>()?;
        if values.iter().all(Option::is_none) {
            return Err(CombineError::NoRow { recipe: text() });
        }
        let (name, label) = (recipe.name.clone(), recipe.name.clone());
        self.energies.push(EnergyColumn { name, label, unit, values, made: Some(text()) });
        Ok(self)
    }

    fn made_value(
        &self,
        recipe: &Recipe,
        terms: &[(f64, Source)],
        row: usize,
        unit: EnergyUnit,
    ) -> Result<Option<f64>, CombineError> {
        let value = |column: usize| {
            let column = &self.energies[column];
            let value = column.values[row]?;
            Some(if column.unit == unit { value } else { unit.from_hartree(column.unit.to_hartree(value)) })
        };
        let (bond_length, length_unit) = (self.bond_lengths[row], self.length_unit.name());
        let mut sum = 0.0;
        for (factor, source) in terms {
            let one = match source {
                Source::Constant(value, own) if *own == unit => Some(*value),
                Source::Constant(value, own) => Some(unit.from_hartree(own.to_hartree(*value))),
                Source::Column(column) => value(*column),
                Source::Limit(rule, columns) => match columns.iter().map(|&c| value(c)).collect() {
                    None => None,
                    Some::<Vec<f64>>(energies) => {
                        let found = limit(*rule, &energies).map_err(|ratio| CombineError::StepRatio {
                            recipe: recipe.text().to_owned(),
                            bond_length,
                            unit: length_unit,
                            ratio,
                        })?;
                        Some(found)
                    }
                },
            };
            let Some(one) = one else { return Ok(None) };
            sum += factor * one;
        }
        if sum.is_finite() {
            Ok(Some(sum))
        } else {
            let recipe = recipe.text().to_owned();
            Err(CombineError::NotFinite { recipe, bond_length, unit: length_unit })
        }
    }
}

/// A term with its columns found.
enum Source {
    Constant(f64, EnergyUnit),
    Column(usize),
    Limit(Rule, Vec<usize>),
}

impl Source {
    fn columns(&self) -> &[usize] {
        match self {
            Self::Constant(..) => &[],
            Self::Column(column) => std::slice::from_ref(column),
            Self::Limit(_, columns) => columns,
        }
    }
}

#[cfg(test)]
mod tests;
