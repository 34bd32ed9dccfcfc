//! Reach by temperature: up to where harmonic thermal quantities stand for the numerical ones.

use super::TemperatureReach;
use crate::radial::Level;
use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, to_per_cm};

/// Largest |ln q_h − ln q|.
const LOG_Q: f64 = 0.01;
/// Largest |U_h − U| in units of k_B T.
const ENERGY: f64 = 0.01;
/// Largest relative deviation of ⟨x²⟩.
const SQUARE: f64 = 0.05;
/// The levels support a temperature while the Boltzmann factor of the highest of them is below this.
const HIGHEST_FACTOR: f64 = 1e-4;
/// Factor between temperatures tried, and the lowest one in units of ħω/k_B.
const FACTOR: f64 = 1.01;
const LOWEST: f64 = 0.01;
/// Levels this far above the lowest, in units of kT, are left out of a sum: e^−50 = 2e-22.
const NEGLIGIBLE_IN_KT: f64 = 50.0;

/// The highest temperatures (K) up to which each of three quantities holds at every lower temperature:
/// |ln q_h − ln q| ≤ 0.01; |U_h − U| ≤ 0.01 k_B T, each counted from its own v = 0; ⟨x²⟩ within 5 %.
///
/// Vibration alone. 0 K means outside at any temperature. None where the levels end before the limit is
/// met, with the temperature up to which was looked beside it: only levels that do not lean on a tail count, and the Boltzmann factor of the highest of them
/// must stay below 1e-4. Harmonic: q = 1/(1 − e^−u), U = ħω/(e^u − 1), ⟨x²⟩ = ħ/(2 μ ω) coth(u/2),
/// u = ħω/(k_B T).
pub fn temperature_reach(levels: &[Level], omega_e_per_cm: f64, reduced_mass_me: f64) -> TemperatureReach {
    let used: Vec<(f64, f64)> = levels
        .iter()
        .take_while(|l| !l.leans_on_tail)
        .map(|l| (l.energy_per_cm - levels[0].energy_per_cm, l.mean_square_x_bohr2))
        .collect();
    // ħ/(2 μ ω) in bohr², with ħω in hartree.
    let zero_point_square = 0.5 / (reduced_mass_me * omega_e_per_cm / to_per_cm(1.0));
    limits(&used, omega_e_per_cm, zero_point_square)
}

/// The limits from (energy above v = 0 in cm⁻¹, ⟨x²⟩) of each level.
fn limits(used: &[(f64, f64)], omega: f64, zero_point_square: f64) -> TemperatureReach {
    let Some(highest) = used.last().map(|l| l.0) else {
        return TemperatureReach::default();
    };
    let compare = |kelvin: f64| compare(used, omega, zero_point_square, kelvin);
    let lowest = LOWEST * omega / BOLTZMANN_PER_CM_PER_KELVIN;
    let supported = highest / -HIGHEST_FACTOR.ln() / BOLTZMANN_PER_CM_PER_KELVIN;
    // One walk for all three; each stops at the first temperature beyond it.
    const WITHIN: [fn(&Comparison) -> bool; 3] =
        [|c| c.log_q.abs() <= LOG_Q, |c| c.energy_over_kt.abs() <= ENERGY, |c| c.square.abs() <= SQUARE];
    let at_lowest = compare(lowest);
    let mut limit = WITHIN.map(|within| (!within(&at_lowest)).then_some(0.0));
    let mut inside = lowest;
    while inside < supported && limit.contains(&None) {
        let outside = (inside * FACTOR).min(supported);
        let there = compare(outside);
        for (limit, within) in limit.iter_mut().zip(WITHIN) {
            if limit.is_none() && !within(&there) {
                *limit = Some(bisect(|t| within(&compare(t)), inside, outside));
            }
        }
        inside = outside;
    }
    let [partition_function, mean_energy, mean_square_x] = limit;
    TemperatureReach {
        partition_function,
        mean_energy,
        mean_square_x,
        looked_up_to: Some(supported.max(lowest)),
    }
}

/// Harmonic minus numerical at one temperature.
struct Comparison {
    log_q: f64,
    energy_over_kt: f64,
    /// ⟨x²⟩ harmonic over numerical, minus 1.
    square: f64,
}

fn compare(levels: &[(f64, f64)], omega: f64, zero_point_square: f64, kelvin: f64) -> Comparison {
    let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
    let (mut q, mut energy, mut square) = (0.0, 0.0, 0.0);
    // Above that a term changes no digit of the sums; energies ascend.
    for &(e, x2) in levels.iter().take_while(|l| l.0 < NEGLIGIBLE_IN_KT * kt) {
        let factor = (-e / kt).exp();
        q += factor;
        energy += e * factor;
        square += x2 * factor;
    }
    let u = omega / kt;
    let q_h = -1.0 / (-u).exp_m1();
    Comparison {
        log_q: q_h.ln() - q.ln(),
        energy_over_kt: u / u.exp_m1() - energy / (q * kt),
        square: zero_point_square / (0.5 * u).tanh() / (square / q) - 1.0,
    }
}

/// Boundary between a temperature within and one beyond, to about 1e-12.
fn bisect(within: impl Fn(f64) -> bool, mut inside: f64, mut outside: f64) -> f64 {
    while outside - inside > 1e-12 * outside {
        let middle = 0.5 * (inside + outside);
        if within(middle) { inside = middle } else { outside = middle }
    }
    inside
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Levels of a harmonic oscillator with their exact ⟨x²⟩ = (2v + 1) ħ/(2 μ ω) never leave the harmonic
    /// picture: there is no limit.
    #[test]
    fn harmonic_levels_have_no_limit() {
        let levels: Vec<(f64, f64)> =
            (0..200).map(f64::from).map(|v| (2000.0 * v, 0.01 * (2.0 * v + 1.0))).collect();
        let found = limits(&levels, 2000.0, 0.01);
        assert_eq!((found.partition_function, found.mean_energy, found.mean_square_x), (None, None, None));
        // E/k of the highest of 200 levels over ln 10⁴.
        let highest = 2000.0 * 199.0 / BOLTZMANN_PER_CM_PER_KELVIN / 1e4_f64.ln();
        assert!((found.looked_up_to.unwrap() / highest - 1.0).abs() < 1e-12);
        assert_eq!(limits(&[], 2000.0, 0.01), TemperatureReach::default());
    }

    /// Morse levels, E_v − E_0 = v (ω − ω x (v + 1)): each limit is where the definition, summed here by hand in
    /// another way (differences of ln q for the energy), is met; ⟨x²⟩ too large from the start gives 0 K;
    /// few levels support no temperature.
    #[test]
    fn limits_meet_their_definitions() {
        let (omega, x) = (2000.0, 20.0);
        let energy = |v: f64| v * (omega - x * (v + 1.0));
        let levels: Vec<(f64, f64)> =
            (0..45).map(f64::from).map(|v| (energy(v), 0.011 * (2.0 * v + 1.0))).collect();
        let found = limits(&levels, omega, 0.01);
        assert_eq!(found.mean_square_x, Some(0.0));
        let log_q = |kt: f64| (0..45).map(f64::from).map(|v| (-energy(v) / kt).exp()).sum::<f64>().ln();
        let log_q_h = |kt: f64| -(-(-omega / kt).exp()).ln_1p();
        let kt = found.partition_function.unwrap() * BOLTZMANN_PER_CM_PER_KELVIN;
        assert!((log_q(kt) - log_q_h(kt) - 0.01).abs() < 1e-10);
        let kt = found.mean_energy.unwrap() * BOLTZMANN_PER_CM_PER_KELVIN;
        // U = (kT)² d ln q/d(kT).
        let h = 1e-3 * kt;
        let slope = |f: &dyn Fn(f64) -> f64| (f(kt + h) - f(kt - h)) / (2.0 * h);
        let difference = kt * (slope(&log_q) - slope(&log_q_h));
        assert!((difference - 0.01).abs() < 1e-6, "{difference}");
        assert_eq!(limits(&levels[..2], omega, 0.01).partition_function, None);
    }
}
