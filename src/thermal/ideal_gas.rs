//! The ideal gas at 1 bar, for comparison with thermochemical tables.

use super::Averages;
use crate::units::{
    AVOGADRO_PER_MOL, BOLTZMANN_JOULE_PER_KELVIN, GAS_CONSTANT_JOULE_PER_MOLE_KELVIN, PLANCK_JOULE_SECOND,
};
use std::f64::consts::PI;

/// Standard pressure of thermochemical tables: 1 bar.
pub const STANDARD_PRESSURE_PASCAL: f64 = 1e5;

/// How nuclear spin and symmetry weigh a rotational level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum SpinWeights {
    /// Every J counts 1/σ.
    Symmetry(f64),
    /// Weights of even and odd J.
    EvenOdd(f64, f64),
}

impl SpinWeights {
    /// The weight of a level besides 2J + 1.
    pub fn of(self, j: u32) -> f64 {
        match self {
            Self::Symmetry(number) => 1.0 / number,
            Self::EvenOdd(even, odd) => {
                if j.is_multiple_of(2) {
                    even
                } else {
                    odd
                }
            }
        }
    }
}

/// Molar quantities of the ideal gas at 1 bar.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IdealGas {
    /// C_p in J/(mol K).
    pub heat_capacity_joule_per_mole_kelvin: f64,
    /// S in J/(mol K), without nuclear spin.
    pub entropy_joule_per_mole_kelvin: f64,
    /// H − H(0) in kJ/mol.
    pub enthalpy_kilojoule_per_mole: f64,
}

/// The ideal gas at 1 bar from the averages over internal levels.
///
/// C_p = C_V + 5R/2; H − H(0) = U + 5RT/2; S = S_int + R ln g + R {ln[(2π m kT/h²)^(3/2) kT/p] + 5/2}
/// (Sackur 1911, Tetrode 1912). `mass_u`: mass of the molecule in u, averaged over natural isotopes for
/// comparison with tables; `electronic_weight`: g.
pub fn ideal_gas(internal: &Averages, mass_u: f64, electronic_weight: f64, kelvin: f64) -> IdealGas {
    let gas_constant = GAS_CONSTANT_JOULE_PER_MOLE_KELVIN;
    let kt = BOLTZMANN_JOULE_PER_KELVIN * kelvin;
    // The molar mass constant is 1 g/mol within 1e-9, far below what a table shows.
    let mass_kilogram = mass_u * 1e-3 / AVOGADRO_PER_MOL;
    let waves = (2.0 * PI * mass_kilogram * kt).sqrt() / PLANCK_JOULE_SECOND;
    let translation = (waves.powi(3) * kt / STANDARD_PRESSURE_PASCAL).ln() + 2.5;
    IdealGas {
        heat_capacity_joule_per_mole_kelvin: internal.heat_capacity_joule_per_mole_kelvin()
            + 2.5 * gas_constant,
        entropy_joule_per_mole_kelvin: internal.entropy_joule_per_mole_kelvin()
            + gas_constant * (electronic_weight.ln() + translation),
        enthalpy_kilojoule_per_mole: internal.mean_energy_kilojoule_per_mole()
            + 2.5e-3 * gas_constant * kelvin,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Argon has no internal levels: S(298.15 K) = 154.846 J/(mol K) and C_p = 20.786 J/(mol K)
    /// (NIST-JANAF tables 1998, from memory).
    #[test]
    fn argon() {
        let internal = super::super::over_levels([(0.0, 1.0)].into_iter(), 298.15);
        let gas = ideal_gas(&internal, 39.948, 1.0, 298.15);
        assert!((gas.entropy_joule_per_mole_kelvin - 154.846).abs() < 2e-3, "{gas:?}");
        assert!((gas.heat_capacity_joule_per_mole_kelvin - 20.786).abs() < 1e-3, "{gas:?}");
        assert!((gas.enthalpy_kilojoule_per_mole - 6.197).abs() < 1e-3, "{gas:?}");
    }
}
