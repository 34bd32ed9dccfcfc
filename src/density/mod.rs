//! Where the nuclei are: densities of a level by the numerical, the harmonic, the Morse and the classical picture,
//! their averages over a width, and how far apart they are.

mod classical;
mod erfc;
mod figures;
mod harmonic;
mod morse;
mod quantum;

pub use classical::ClassicalDensity;
pub use figures::{DensityFigures, Shares, density_figures};
pub use harmonic::{ClassicalHarmonic, HarmonicDensity};
pub use morse::MorseDensity;
pub use quantum::QuantumDensity;

use serde::{Deserialize, Serialize};

/// Steps over one averaging width when two averaged densities are compared, at least.
const STEPS_A_WIDTH: usize = 16;
/// Steps over the whole range when they are compared, at least and at most.
const STEPS: (usize, usize) = (250, 40_000);

/// Choices about densities.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct DensitySettings {
    /// Width in angstrom over which densities are averaged before the quantum and the classical one are compared;
    /// none: the zero-point amplitude.
    pub averaging_width_angstrom: Option<f64>,
    /// The levels of the table of densities, empty: v = 0 to 5. They are compared with the classical density too.
    pub levels: Vec<usize>,
}

/// Levels up to this v are compared with the classical density, which takes some time, unasked.
pub const COMPARED_UP_TO_V: usize = 11;

/// Figures of all levels of a study.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Densities {
    /// The averaging width in bohr; none without a mass.
    pub averaging_width_bohr: Option<f64>,
    /// One entry a level without rotation, v ascending.
    pub levels: Vec<DensityFigures>,
}

impl DensitySettings {
    /// The averaging width in bohr.
    pub fn averaging_width_bohr(&self, zero_point_amplitude_bohr: Option<f64>) -> Option<f64> {
        let chosen = self.averaging_width_angstrom.map(|w| crate::units::LengthUnit::Angstrom.to_bohr(w));
        chosen.or(zero_point_amplitude_bohr).filter(|w| *w > 0.0 && w.is_finite())
    }
}

/// A normalised probability density over bond lengths.
pub trait Distribution {
    /// The density at `r_bohr` in 1/bohr; 0 outside, may be infinite at a classical turning point.
    fn density_per_bohr(&self, r_bohr: f64) -> f64;

    /// The probability below `r_bohr`.
    fn below(&self, r_bohr: f64) -> f64;

    /// Outside this range (bohr) nothing worth counting is left.
    fn support_bohr(&self) -> (f64, f64);

    /// [`Distribution::below`] at many bond lengths, ascending.
    fn below_all(&self, ascending_bohr: &[f64]) -> Vec<f64> {
        ascending_bohr.iter().map(|r| self.below(*r)).collect()
    }

    /// The density averaged over a width around `r_bohr`, in 1/bohr: free of the singularities of a classical one.
    fn averaged_per_bohr(&self, r_bohr: f64, width_bohr: f64) -> f64 {
        let half = 0.5 * width_bohr;
        (self.below(r_bohr + half) - self.below(r_bohr - half)) / width_bohr
    }
}

/// ∫|p̄ − q̄| dr of two densities, each averaged over the same width: 0 for equal ones, 2 for such as never meet.
///
/// None where the width is not positive, or so small against the range that it would take more than 40,000 steps.
pub fn distance(one: &dyn Distribution, other: &dyn Distribution, width_bohr: f64) -> Option<f64> {
    if !(width_bohr > 0.0 && width_bohr.is_finite()) {
        return None;
    }
    let (a, b) = (one.support_bohr(), other.support_bohr());
    let (from, to) = (a.0.min(b.0) - 0.5 * width_bohr, a.1.max(b.1) + 0.5 * width_bohr);
    let range = to - from;
    // The width is a whole, even number of steps, so that each value of the cumulated densities serves twice.
    let half = (STEPS_A_WIDTH / 2).max((0.5 * width_bohr * STEPS.0 as f64 / range).ceil() as usize);
    let step = 0.5 * width_bohr / half as f64;
    let count = (range / step).ceil();
    if count.is_nan() || count > STEPS.1 as f64 {
        return None;
    }
    let start = from - 0.5 * width_bohr;
    let r: Vec<f64> = (0..=count as usize + 2 * half).map(|i| start + step * i as f64).collect();
    let gap: Vec<f64> =
        one.below_all(&r).into_iter().zip(other.below_all(&r)).map(|(one, other)| one - other).collect();
    Some(
        gap.iter().zip(&gap[2 * half..]).map(|(low, high)| (high - low).abs()).sum::<f64>() * step
            / width_bohr,
    )
}
