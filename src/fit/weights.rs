//! Weights of the points of a fit.

use crate::units::{PER_CM_PER_HARTREE, to_per_cm};
use serde::{Deserialize, Serialize};

/// What is known of the variance of a point of weight 1.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Variance {
    /// s² = S/(n − p): a common factor of the weights cancels.
    #[default]
    FromResiduals,
    /// The weights are 1/σ² in 1/hartree², so s² = 1 and the errors do not follow the residuals.
    Declared,
}

/// The weight of one row of the scan.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct RowWeight {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Its weight; 0 leaves the row out of the fits, but not out of the curve.
    pub weight: f64,
}

/// How the points of a fit are weighted.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "by", rename_all = "snake_case", deny_unknown_fields)]
pub enum Weighting {
    /// All points alike.
    Equal {},
    /// Point by point.
    Point {
        /// The weights given.
        rows: Vec<RowWeight>,
        /// Weight of the rows that are not named.
        #[serde(default = "one")]
        others: f64,
        /// Whether the weights are 1/σ² with σ in cm⁻¹, which fixes s² = 1.
        #[serde(default)]
        declared: bool,
    },
    /// By a column of the file; rows without a value there count 0.
    Column {
        /// Its header name, or whatever else a column answers to.
        name: String,
        /// Whether it holds standard errors σ, in the unit of the column or else that of the energies: weights are
        /// then 1/σ², which fixes s² = 1.
        #[serde(default)]
        sigma: bool,
    },
    /// A smooth step down above an energy.
    Energy(EnergyWeights),
    /// 1/σ² with the noise of the energies, which fixes s² = 1.
    Noise {
        /// σ in cm⁻¹; none takes the noise estimated from the scan, and equal weights where there is none.
        #[serde(default)]
        sigma_per_cm: Option<f64>,
    },
}

const fn one() -> f64 {
    1.0
}

impl Default for Weighting {
    fn default() -> Self {
        Self::Equal {}
    }
}

/// What the weight of a point may depend on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct WeightedPoint {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Energy above the minimum in hartree.
    pub above_minimum_hartree: f64,
    /// Noise of the energies in hartree, where it can be told.
    pub noise_hartree: Option<f64>,
    /// What a column of the file gives it: a weight, or 1/σ² in cm².
    pub given: f64,
}

impl Weighting {
    /// The weight of a point; 1/σ² in cm² (σ in cm⁻¹) where weights are declared.
    pub fn weight(&self, point: WeightedPoint) -> f64 {
        match self {
            Self::Equal {} => 1.0,
            Self::Point { rows, others, .. } => {
                rows.iter().find(|w| w.row == point.row).map_or(*others, |w| w.weight)
            }
            Self::Column { .. } => point.given,
            Self::Energy(weights) => weights.weight(point.above_minimum_hartree),
            Self::Noise { sigma_per_cm } => {
                sigma_per_cm.or(point.noise_hartree.map(to_per_cm)).map_or(1.0, |sigma| sigma.powi(-2))
            }
        }
    }

    /// Whether the weights are 1/σ², given the noise estimate.
    pub fn variance(&self, noise_hartree: Option<f64>) -> Variance {
        match self {
            Self::Point { declared: true, .. } | Self::Column { sigma: true, .. } => Variance::Declared,
            Self::Noise { sigma_per_cm } if sigma_per_cm.is_some() || noise_hartree.is_some() => {
                Variance::Declared
            }
            _ => Variance::FromResiduals,
        }
    }
}

/// A declared weight 1/σ² from cm² to 1/hartree².
pub fn declared_weight_per_hartree2(weight_cm2: f64) -> f64 {
    weight_cm2 * PER_CM_PER_HARTREE * PER_CM_PER_HARTREE
}

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

    #[test]
    fn settings_read_back_and_refuse_unknown_keys() {
        let all = [
            Weighting::default(),
            Weighting::Point { rows: vec![RowWeight { row: 3, weight: 0.5 }], others: 1.0, declared: true },
            Weighting::Column { name: "w".to_owned(), sigma: true },
            Weighting::Energy(EnergyWeights::default()),
            Weighting::Noise { sigma_per_cm: Some(0.2) },
        ];
        for weighting in all {
            let text = serde_json::to_string(&weighting).unwrap();
            assert_eq!(serde_json::from_str::<Weighting>(&text).unwrap(), weighting, "{text}");
        }
        let energy: Weighting = serde_json::from_str(r#"{"by": "energy", "step_per_cm": 5000.0}"#).unwrap();
        assert!(matches!(energy, Weighting::Energy(w) if w.step_per_cm == 5000.0 && w.slope_cm == 6e-4));
        for wrong in
            [r#"{"by": "equal", "x": 1}"#, r#"{"by": "energy", "x": 1}"#, r#"{"by": "noise", "x": 1}"#]
        {
            assert!(serde_json::from_str::<Weighting>(wrong).is_err(), "{wrong}");
        }
    }

    #[test]
    fn only_declared_weights_fix_the_variance() {
        let point =
            WeightedPoint { row: 3, above_minimum_hartree: 0.0, noise_hartree: Some(1e-6), given: 1.0 };
        let noise = Weighting::Noise { sigma_per_cm: None };
        assert_eq!(noise.variance(point.noise_hartree), Variance::Declared);
        assert_eq!(noise.variance(None), Variance::FromResiduals);
        let weight = declared_weight_per_hartree2(noise.weight(point));
        assert!((weight * 1e-12 - 1.0).abs() < 1e-12);
        assert_eq!(Weighting::default().variance(Some(1e-6)), Variance::FromResiduals);
        let by_point = |declared| Weighting::Point {
            rows: vec![RowWeight { row: 3, weight: 4.0 }],
            others: 2.0,
            declared,
        };
        assert_eq!(by_point(false).variance(None), Variance::FromResiduals);
        assert_eq!(by_point(true).variance(None), Variance::Declared);
        assert_eq!(by_point(true).weight(point), 4.0);
        assert_eq!(by_point(true).weight(WeightedPoint { row: 0, ..point }), 2.0);
    }
}
