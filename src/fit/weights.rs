//! Weights of the points of a fit.

use crate::units::to_per_cm;
use serde::{Deserialize, Serialize};

/// Weights that step down smoothly above a chosen energy.
///
/// w = (tanh(−s (E − E_step)) + c)/(1 + c)/max(E, E_floor) · E_floor, c = 1.002002002, E counted from the
/// minimum: the form of H. Partridge and D. W. Schwenke, J. Chem. Phys. 106, 4618 (1997); form and the
/// constants of the default from memory. Here it is scaled to about 1 at the minimum; a common factor of
/// all weights cancels.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct EnergyWeights {
    /// E_step in cm⁻¹: well above it points hardly count.
    pub step_per_cm: f64,
    /// s in cm: the inverse width of the step.
    pub slope_cm: f64,
    /// E_floor in cm⁻¹: up to it all points have the same share of the 1/E factor.
    pub floor_per_cm: f64,
}

impl Default for EnergyWeights {
    fn default() -> Self {
        Self { step_per_cm: 18_000.0, slope_cm: 6e-4, floor_per_cm: 10_000.0 }
    }
}

/// Keeps the weight above zero far beyond the step: tanh → −1 leaves 0.002002002/2.002002002 = 1e-3.
const FOOT: f64 = 1.002_002_002;

impl EnergyWeights {
    /// The weight of a point `energy_hartree` above the minimum.
    pub fn weight(&self, energy_hartree: f64) -> f64 {
        let energy = to_per_cm(energy_hartree);
        let step = ((-self.slope_cm * (energy - self.step_per_cm)).tanh() + FOOT) / (1.0 + FOOT);
        step * self.floor_per_cm / energy.max(self.floor_per_cm)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::EnergyUnit;

    #[test]
    fn weights_step_down_smoothly_and_stay_positive() {
        let weights = EnergyWeights::default();
        let at = |per_cm: f64| weights.weight(EnergyUnit::PerCm.to_hartree(per_cm));
        assert!((at(0.0) - 1.0).abs() < 1e-6);
        assert!((at(18_000.0) - FOOT / (1.0 + FOOT) / 1.8).abs() < 1e-12);
        let all: Vec<f64> = (0..120).map(|k| at(500.0 * f64::from(k))).collect();
        assert!(all.windows(2).all(|pair| pair[1] <= pair[0] && pair[1] > 0.0));
        assert!((at(60_000.0) - 1e-3 / 6.0).abs() < 1e-6);
    }
}
