//! Averages over E(v, J) at any temperature, from levels that were solved once.

use super::{
    Averages, Rotating, RotatingLevel, SpinWeights, UNSUPPORTED_SHARE, ideal_gas, over_levels, rigid_rotor,
};
use crate::units::BOLTZMANN_PER_CM_PER_KELVIN;

/// What the averages with rotation are made from.
#[derive(Clone, Debug, PartialEq)]
pub struct RotatingSum {
    numerical: Vec<Weighted>,
    morse: Option<Vec<Weighted>>,
    /// B of a rigid rotor of length r_e in cm⁻¹.
    pub rigid_per_cm: f64,
    /// How nuclear spin and symmetry weigh a level.
    pub weights: SpinWeights,
    /// Mass of the molecule in u; none without atoms.
    pub mass_u: Option<f64>,
    /// Weight of the electronic state.
    pub electronic_weight: f64,
    /// Up to which temperature in K the levels were asked for.
    pub solved_for_kelvin: f64,
}

/// A level that counts.
#[derive(Clone, Debug, PartialEq)]
struct Weighted {
    level: RotatingLevel,
    /// 2J + 1 times the weight by nuclear spin.
    weight: f64,
    /// Whether it leans on a tail, or is one after which others would count that were not solved for.
    is_edge: bool,
}

impl RotatingSum {
    /// From the bound levels, J ascending, v ascending within each J. `leaning_from_v`: the lowest rotationless level
    /// that leans on a tail; with rotation it reaches out at least as far.
    pub fn new(
        numerical: &[RotatingLevel],
        leaning_from_v: Option<usize>,
        morse: Option<&[RotatingLevel]>,
        rigid_per_cm: f64,
        weights: SpinWeights,
    ) -> Self {
        Self {
            numerical: weighted(numerical, leaning_from_v, weights),
            morse: morse.map(|levels| weighted(levels, None, weights)),
            rigid_per_cm,
            weights,
            mass_u: None,
            electronic_weight: 1.0,
            solved_for_kelvin: 0.0,
        }
    }

    /// How many levels are summed, and the highest J among them.
    pub fn extent(&self) -> (usize, u32) {
        (self.numerical.len(), self.numerical.iter().map(|l| l.level.j).max().unwrap_or(0))
    }

    /// The averages at a temperature; `harmonic`: those of the oscillator there, to which a rigid rotor is added.
    pub fn at(&self, kelvin: f64, harmonic: Option<Averages>) -> Rotating {
        let rovibrational = averages(&self.numerical, kelvin);
        let lowest = self.numerical.first().map_or(0.0, |l| l.level.energy_per_cm);
        let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
        let share = |l: &Weighted| {
            l.weight * (-(l.level.energy_per_cm - lowest) / kt).exp() / rovibrational.partition_function
        };
        let average = |value: fn(&RotatingLevel) -> f64| {
            self.numerical.iter().map(|l| share(l) * value(&l.level)).sum::<f64>()
        };
        let unsupported_share: f64 = self.numerical.iter().filter(|l| l.is_edge).map(share).sum();
        Rotating {
            rovibrational,
            mean_r_bohr: average(|l| l.mean_r_bohr),
            mean_square_x_bohr2: average(|l| l.mean_square_x_bohr2),
            harmonic: harmonic.map(|h| h.with(&rigid_rotor(self.rigid_per_cm, self.weights, kelvin))),
            morse: self.morse.as_ref().map(|levels| averages(levels, kelvin)),
            ideal_gas: self
                .mass_u
                .map(|mass| ideal_gas(&rovibrational, mass, self.electronic_weight, kelvin)),
            unsupported_share,
            converged: unsupported_share <= UNSUPPORTED_SHARE,
        }
    }
}

/// The levels that count, the lowest first, with those marked after which the sum was cut: the highest v of each J, all
/// of the last J, and those that lean on a tail.
fn weighted(levels: &[RotatingLevel], leaning_from_v: Option<usize>, weights: SpinWeights) -> Vec<Weighted> {
    let last_j = levels.iter().map(|l| l.j).max();
    let mut counted: Vec<Weighted> = levels
        .iter()
        .enumerate()
        .map(|(i, level)| {
            let highest_v = levels.get(i + 1).is_none_or(|next| next.j != level.j);
            let leans = leaning_from_v.is_some_and(|v| level.v >= v);
            Weighted {
                level: *level,
                weight: weights.of(level.j) * f64::from(2 * level.j + 1),
                is_edge: highest_v || leans || Some(level.j) == last_j,
            }
        })
        .filter(|l| l.weight > 0.0)
        .collect();
    counted.sort_by(|a, b| a.level.energy_per_cm.total_cmp(&b.level.energy_per_cm));
    counted
}

fn averages(levels: &[Weighted], kelvin: f64) -> Averages {
    let lowest = levels.first().map_or(0.0, |l| l.level.energy_per_cm);
    over_levels(levels.iter().map(|l| (l.level.energy_per_cm - lowest, l.weight)), kelvin)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented: a rigid rotor of 10 cm⁻¹ on harmonic levels 1000 cm⁻¹ apart, J up to `highest_j`, v up to `highest_v`.
    fn rotor(highest_v: usize, highest_j: u32) -> RotatingSum {
        let levels: Vec<RotatingLevel> = (0..=highest_j)
            .flat_map(|j| (0..=highest_v).map(move |v| (v, j)))
            .map(|(v, j)| RotatingLevel {
                v,
                j,
                energy_per_cm: 500.0 + 1000.0 * v as f64 + 10.0 * f64::from(j) * f64::from(j + 1),
                mean_r_bohr: 2.0,
                mean_square_x_bohr2: 0.01,
            })
            .collect();
        RotatingSum::new(&levels, None, None, 10.0, SpinWeights::Symmetry(1.0))
    }

    /// A full sum is the product of oscillator and rotor, and says that it is converged.
    #[test]
    fn a_full_sum_is_the_product() {
        let found = rotor(60, 200).at(2000.0, Some(super::super::harmonic(1000.0, 2000.0)));
        let product = found.harmonic.unwrap();
        let ratio = found.rovibrational.partition_function / product.partition_function;
        assert!((ratio - 1.0).abs() < 1e-10, "{ratio}");
        let off = found.rovibrational.heat_capacity_boltzmann - product.heat_capacity_boltzmann;
        assert!(off.abs() < 1e-8 && found.converged && found.unsupported_share < 1e-10, "{found:?}");
        assert!((found.mean_r_bohr - 2.0).abs() < 1e-12 && (found.mean_square_x_bohr2 - 0.01).abs() < 1e-14);
    }

    /// Whether J or v is cut, the sum that lacks a part that counts says so, and where it does not count it does not.
    #[test]
    fn a_sum_that_is_cut_too_early_says_so() {
        for (highest_v, highest_j) in [(60, 12), (2, 200)] {
            let cut = rotor(highest_v, highest_j);
            let lacking = |kelvin: f64| {
                let (cut, full) = (cut.at(kelvin, None), rotor(60, 200).at(kelvin, None));
                let lacks =
                    1.0 - cut.rovibrational.partition_function / full.rovibrational.partition_function;
                (lacks, cut.converged)
            };
            let ((hot, said_hot), (cold, said_cold)) = (lacking(2000.0), lacking(50.0));
            assert!(hot > 1e-3 && !said_hot, "{highest_v} {highest_j}: {hot}");
            assert!(cold.abs() < 1e-9 && said_cold, "{highest_v} {highest_j}: {cold}");
        }
    }

    /// What leans is not firm: from a low v on no sum at high temperature is.
    #[test]
    fn levels_that_lean_are_counted() {
        let levels: Vec<RotatingLevel> = rotor(60, 200).numerical.iter().map(|l| l.level).collect();
        let mut by_j = levels;
        by_j.sort_by_key(|l| (l.j, l.v));
        let sum = RotatingSum::new(&by_j, Some(1), None, 10.0, SpinWeights::Symmetry(1.0));
        // The share above v = 0 of a harmonic oscillator: e^−u.
        let u = 1000.0 / (BOLTZMANN_PER_CM_PER_KELVIN * 1500.0);
        let found = sum.at(1500.0, None);
        assert!((found.unsupported_share - (-u).exp()).abs() < 1e-9 && !found.converged, "{found:?}");
    }
}
