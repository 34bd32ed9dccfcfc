//! Sums over levels at one temperature.

use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, GAS_CONSTANT_JOULE_PER_MOLE_KELVIN};

/// Thermal averages; energies count from the lowest level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Averages {
    /// q = Σ g e^(−E/kT).
    pub partition_function: f64,
    /// ln q, exact also where q − 1 is far below rounding.
    pub log_partition_function: f64,
    /// U in cm⁻¹ a molecule.
    pub mean_energy_per_cm: f64,
    /// C_V in units of k_B.
    pub heat_capacity_boltzmann: f64,
    /// S in units of k_B.
    pub entropy_boltzmann: f64,
}

impl Averages {
    /// Of two motions that know nothing of each other: q multiplies, all else adds.
    pub fn with(&self, other: &Self) -> Self {
        Self {
            partition_function: self.partition_function * other.partition_function,
            log_partition_function: self.log_partition_function + other.log_partition_function,
            mean_energy_per_cm: self.mean_energy_per_cm + other.mean_energy_per_cm,
            heat_capacity_boltzmann: self.heat_capacity_boltzmann + other.heat_capacity_boltzmann,
            entropy_boltzmann: self.entropy_boltzmann + other.entropy_boltzmann,
        }
    }

    /// U in kJ/mol.
    pub fn mean_energy_kilojoule_per_mole(&self) -> f64 {
        self.mean_energy_per_cm / BOLTZMANN_PER_CM_PER_KELVIN * GAS_CONSTANT_JOULE_PER_MOLE_KELVIN * 1e-3
    }

    /// C_V in J/(mol K).
    pub fn heat_capacity_joule_per_mole_kelvin(&self) -> f64 {
        self.heat_capacity_boltzmann * GAS_CONSTANT_JOULE_PER_MOLE_KELVIN
    }

    /// S in J/(mol K).
    pub fn entropy_joule_per_mole_kelvin(&self) -> f64 {
        self.entropy_boltzmann * GAS_CONSTANT_JOULE_PER_MOLE_KELVIN
    }
}

/// Averages over levels given as (energy in cm⁻¹ above the lowest, weight), the lowest first.
///
/// ln q = ln g_0 + ln(1 + Σ' g e^(−E/kT)/g_0), so that the entropy keeps its digits near 0 K; C_V is the
/// variance of E over (kT)², S = ln q + U/kT. All zero without levels.
pub fn over_levels(levels: impl Iterator<Item = (f64, f64)> + Clone, kelvin: f64) -> Averages {
    let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
    let mut rest = levels.clone();
    let first = rest.next().map_or(1.0, |(_, g)| g);
    let excited: f64 = rest.map(|(e, g)| g / first * (-e / kt).exp()).sum();
    let relative = |(e, g): (f64, f64)| (e / kt, g / first * (-e / kt).exp() / (1.0 + excited));
    let mean: f64 = levels.clone().map(relative).filter(|(_, p)| *p > 0.0).map(|(e, p)| e * p).sum();
    let variance: f64 =
        levels.map(relative).filter(|(_, p)| *p > 0.0).map(|(e, p)| (e - mean).powi(2) * p).sum();
    let log_q = first.ln() + excited.ln_1p();
    Averages {
        partition_function: first * (1.0 + excited),
        log_partition_function: log_q,
        mean_energy_per_cm: mean * kt,
        heat_capacity_boltzmann: variance,
        entropy_boltzmann: log_q + mean,
    }
}

/// The harmonic oscillator of wavenumber ω, counted from its own v = 0.
pub fn harmonic(omega_per_cm: f64, kelvin: f64) -> Averages {
    let u = omega_per_cm / (BOLTZMANN_PER_CM_PER_KELVIN * kelvin);
    // e^−u/(1 − e^−u) never overflows, as 1/(e^u − 1) does.
    let occupation = (-u).exp() / -(-u).exp_m1();
    let log_q = -(-(-u).exp()).ln_1p();
    let mean = if occupation > 0.0 { u * occupation } else { 0.0 };
    Averages {
        partition_function: 1.0 + occupation,
        log_partition_function: log_q,
        mean_energy_per_cm: omega_per_cm * occupation,
        heat_capacity_boltzmann: if occupation > 0.0 { u * u * occupation * (1.0 + occupation) } else { 0.0 },
        entropy_boltzmann: log_q + mean,
    }
}

/// Populations of levels (cm⁻¹ above the lowest, which comes first) at one temperature; they add up to 1.
pub fn boltzmann(excitations_per_cm: &[f64], kelvin: f64) -> Vec<f64> {
    let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
    let factors: Vec<f64> = excitations_per_cm.iter().map(|e| (-e / kt).exp()).collect();
    // The small ones first.
    let q: f64 = factors.iter().rev().sum();
    factors.into_iter().map(|f| f / q).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The closed form is the sum over ħω v; both go to k_B for C_V at high temperature (equipartition).
    #[test]
    fn the_closed_form_is_the_sum() {
        for kelvin in [1.0, 30.0, 300.0, 3000.0] {
            let closed = harmonic(500.0, kelvin);
            let summed = over_levels((0..2000).map(|v| (500.0 * f64::from(v), 1.0)), kelvin);
            for (a, b) in [
                (closed.partition_function, summed.partition_function),
                (closed.mean_energy_per_cm, summed.mean_energy_per_cm),
                (closed.heat_capacity_boltzmann, summed.heat_capacity_boltzmann),
                (closed.entropy_boltzmann, summed.entropy_boltzmann),
            ] {
                assert!((a - b).abs() <= 1e-12 * b.abs(), "{kelvin}: {a} {b}");
            }
        }
        assert!((harmonic(500.0, 1e5).heat_capacity_boltzmann - 1.0).abs() < 1e-5);
    }

    /// At the lowest temperature allowed everything is in v = 0 and nothing is NaN.
    #[test]
    fn the_cold_end() {
        for found in [harmonic(2000.0, 1e-3), over_levels([(0.0, 1.0), (2000.0, 1.0)].into_iter(), 1e-3)] {
            assert_eq!(found.partition_function, 1.0);
            assert_eq!((found.mean_energy_per_cm, found.heat_capacity_boltzmann), (0.0, 0.0));
            assert_eq!(found.entropy_boltzmann, 0.0);
        }
        assert_eq!(boltzmann(&[0.0, 2000.0], 1e-3), [1.0, 0.0]);
    }
}
