//! Thermal averages over levels: numerical ones beside those of the harmonic and the Morse picture.
//!
//! Energies count from the lowest level, so that q goes to 1 at low temperature.

mod density;
mod ideal_gas;
mod rotation;
mod rovibrational;
mod sums;

pub use density::{ThermalDensity, thermal_density};
pub use ideal_gas::{IdealGas, STANDARD_PRESSURE_PASCAL, SpinWeights, ideal_gas};
pub use rotation::{HIGHEST_J, RotatingLevel, rigid_rotor, rotating_levels};
pub use rovibrational::RotatingSum;
pub use sums::{Averages, boltzmann, harmonic, over_levels};

use crate::radial::Level;
use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, to_per_cm};
use serde::{Deserialize, Serialize};

/// Temperatures outside this range (K) are not computed: nothing of a bond is left to say there.
pub const TEMPERATURES_KELVIN: (f64, f64) = (1e-3, 1e5);
/// Largest share of a thermal average that may rest on levels which lean on a tail, or lie beyond the last one.
const UNSUPPORTED_SHARE: f64 = 1e-4;
/// Largest population of levels whose position is not known.
const BEYOND_POSITIONS: f64 = 1e-9;
/// Levels whose populations are listed.
const POPULATIONS: usize = 12;

/// Choices about the thermal averages.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct ThermalSettings {
    /// Temperatures in K.
    pub temperatures_kelvin: Vec<f64>,
    /// Sum over E(v, J) as well, which solves for the levels of every J that is populated.
    pub rotation: bool,
    /// Symmetry number; none: 2 for two atoms of one element, else 1.
    pub symmetry_number: Option<u32>,
    /// Weights of even and odd J by nuclear spin instead of a symmetry number; none: 1/4 and 3/4 for two
    /// protons, else the symmetry number.
    pub spin_weights: Option<[f64; 2]>,
    /// Weight of the electronic state.
    pub electronic_weight: u32,
}

impl Default for ThermalSettings {
    fn default() -> Self {
        Self {
            temperatures_kelvin: vec![100.0, 200.0, 298.15, 500.0, 1000.0, 2000.0],
            rotation: false,
            symmetry_number: None,
            spin_weights: None,
            electronic_weight: 1,
        }
    }
}

/// Thermal averages at one temperature.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalPoint {
    /// Temperature in K.
    pub kelvin: f64,
    /// Over the numerical levels, vibration alone.
    pub vibrational: Averages,
    /// ⟨r⟩_T in bohr.
    pub mean_r_bohr: f64,
    /// ⟨x²⟩_T about r_e in bohr².
    pub mean_square_x_bohr2: f64,
    /// Of the harmonic oscillator with k = V″(r_e); none without one.
    pub harmonic: Option<Averages>,
    /// ⟨x²⟩_T of that oscillator in bohr².
    pub harmonic_mean_square_x_bohr2: Option<f64>,
    /// Over the levels of the Morse fit; none without one.
    pub morse: Option<Averages>,
    /// ⟨r⟩_T of the Morse fit in bohr; none without one, and where levels beyond those solved for are populated.
    pub morse_mean_r_bohr: Option<f64>,
    /// ⟨(r − r_e)²⟩_T of the Morse fit about its own r_e in bohr²; likewise.
    pub morse_mean_square_x_bohr2: Option<f64>,
    /// Populations of the lowest levels, v ascending.
    pub populations: Vec<f64>,
    /// Over E(v, J) and as an ideal gas; none unless asked for.
    pub rotating: Option<Rotating>,
    /// Share of the population in levels that lean on a tail and in the last level.
    pub unsupported_share: f64,
    /// Whether the levels support the averages: less than 1e-4 rests on levels that lean on a tail or lie
    /// beyond the last one.
    pub converged: bool,
}

/// Averages with rotation at one temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rotating {
    /// Over E(v, J) with weights 2J + 1 (and nuclear spin, and the symmetry number), from E(0, 0).
    pub rovibrational: Averages,
    /// ⟨r⟩_T in bohr.
    pub mean_r_bohr: f64,
    /// ⟨x²⟩_T about r_e in bohr².
    pub mean_square_x_bohr2: f64,
    /// The harmonic oscillator and a rigid rotor of length r_e, with the same weights.
    pub harmonic: Option<Averages>,
    /// Over E(v, J) of the Morse fit, with the same weights; none without one.
    pub morse: Option<Averages>,
    /// The ideal gas at 1 bar; none when the masses of the atoms are not known.
    pub ideal_gas: Option<IdealGas>,
    /// Share of the population in levels that lean on a tail, in the highest v solved for each J, and in the last J: what
    /// comes after them is not in the sum.
    pub unsupported_share: f64,
    /// Whether that share is below 1e-4.
    pub converged: bool,
}

/// What the thermal averages are made from.
#[derive(Clone, Copy, Debug)]
pub struct ThermalInput<'a> {
    /// Rotationless levels, v ascending.
    pub levels: &'a [Level],
    /// k = V″(r_e) in hartree/bohr².
    pub force_constant_hartree_per_bohr2: f64,
    /// Reduced mass in electron masses.
    pub reduced_mass_me: f64,
    /// Levels of the Morse fit above its own minimum in cm⁻¹, v ascending; may be empty.
    pub morse_per_cm: &'a [f64],
    /// Where the lowest of them are, v ascending; may be shorter or empty.
    pub morse_positions: &'a [Position],
}

/// Where a level is, in atomic units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Position {
    /// ⟨r⟩ in bohr.
    pub mean_r_bohr: f64,
    /// ⟨(r − r_e)²⟩ in bohr².
    pub mean_square_x_bohr2: f64,
}

/// Thermal averages at each temperature, without rotation.
///
/// Over the levels: q = Σ e^(−E/kT), U, C_V and S by their sums; harmonic in closed form, q = 1/(1 − e^−u),
/// U = ħω/(e^u − 1), C_V = (u/2)²/sinh²(u/2), ⟨x²⟩ = ħ/(2 μ ω) coth(u/2), u = ħω/(k_B T). Temperatures
/// outside [`TEMPERATURES_KELVIN`] are left out; empty without levels.
pub fn thermal(input: &ThermalInput, temperatures_kelvin: &[f64]) -> Vec<ThermalPoint> {
    let Some(lowest) = input.levels.first().map(|l| l.energy_per_cm) else { return Vec::new() };
    let excitations: Vec<f64> = input.levels.iter().map(|l| l.energy_per_cm - lowest).collect();
    let morse: Vec<f64> = match input.morse_per_cm.first() {
        Some(first) => input.morse_per_cm.iter().map(|e| e - first).collect(),
        None => Vec::new(),
    };
    let omega_hartree = (input.force_constant_hartree_per_bohr2 / input.reduced_mass_me).sqrt();
    let omega = to_per_cm(omega_hartree);
    let possible = |t: &&f64| **t >= TEMPERATURES_KELVIN.0 && **t <= TEMPERATURES_KELVIN.1;
    let at = |&kelvin: &f64| {
        let weights = sums::boltzmann(&excitations, kelvin);
        let average = |value: fn(&Level) -> f64| {
            // Sums of products over the weights, which add up to 1.
            input.levels.iter().zip(&weights).map(|(l, w)| w * value(l)).sum::<f64>()
        };
        let leaning: f64 =
            input.levels.iter().zip(&weights).filter(|(l, _)| l.leans_on_tail).map(|(_, w)| w).sum();
        let beyond = weights.last().copied().unwrap_or(0.0);
        let is_harmonic = omega > 0.0;
        let morse_average = |value: fn(&Position) -> f64| {
            let weights = sums::boltzmann(&morse, kelvin);
            let known = input.morse_positions;
            let beyond: f64 = weights.iter().skip(known.len()).sum();
            (!known.is_empty() && !weights.is_empty() && beyond < BEYOND_POSITIONS)
                .then(|| known.iter().zip(&weights).map(|(p, w)| w * value(p)).sum())
        };
        ThermalPoint {
            kelvin,
            vibrational: over_levels(excitations.iter().map(|e| (*e, 1.0)), kelvin),
            mean_r_bohr: average(|l| l.mean_r_bohr),
            mean_square_x_bohr2: average(|l| l.mean_square_x_bohr2),
            harmonic: is_harmonic.then(|| harmonic(omega, kelvin)),
            harmonic_mean_square_x_bohr2: is_harmonic.then(|| {
                let u = omega / (BOLTZMANN_PER_CM_PER_KELVIN * kelvin);
                0.5 / (input.reduced_mass_me * omega_hartree) / (0.5 * u).tanh()
            }),
            morse: (!morse.is_empty()).then(|| over_levels(morse.iter().map(|e| (*e, 1.0)), kelvin)),
            morse_mean_r_bohr: morse_average(|p| p.mean_r_bohr),
            morse_mean_square_x_bohr2: morse_average(|p| p.mean_square_x_bohr2),
            populations: weights.iter().take(POPULATIONS).copied().collect(),
            rotating: None,
            unsupported_share: leaning + beyond,
            converged: leaning + beyond <= UNSUPPORTED_SHARE,
        }
    };
    temperatures_kelvin.iter().filter(possible).map(at).collect()
}
