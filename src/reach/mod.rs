//! Reach: the interval of displacements, and the levels, for which the harmonic picture holds.

mod fits;
mod interval;
mod levels;
mod temperature;
mod uncertainty;

pub use fits::{FitReach, fit_reach};
pub use interval::{absolute_reach, energy_and_force_reach, energy_and_force_reach_of};
pub use levels::{level_reach, spacing_reach};
pub use temperature::temperature_reach;

use crate::estimate::{ErrorSource, Estimate};
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::radial::Level;
use crate::units::{EnergyUnit, omega_e_per_cm};
use serde::{Deserialize, Serialize};
use uncertainty::Criterion;

/// A tolerance as an energy.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct AbsoluteTolerance {
    /// The value, positive.
    pub value: f64,
    /// Its unit.
    pub unit: EnergyUnit,
}

impl AbsoluteTolerance {
    /// The tolerance in hartree.
    pub const fn hartree(&self) -> f64 {
        self.unit.to_hartree(self.value)
    }
}

impl Default for AbsoluteTolerance {
    /// 1 kcal/mol, 'chemical accuracy' (common practice, no source).
    fn default() -> Self {
        Self { value: 1.0, unit: EnergyUnit::KilocaloriePerMole }
    }
}

/// Tolerances of the reach.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct ReachSettings {
    /// Relative tolerance τ of energy and force.
    pub tolerance: f64,
    /// Absolute tolerance of the energy, for the parabola and for the fits.
    pub absolute: AbsoluteTolerance,
    /// Tolerance of the level reach in cm⁻¹; none takes τ ω_e.
    pub level_tolerance_per_cm: Option<f64>,
    /// Tolerance of the spacing reach in cm⁻¹; none takes τ ω_e.
    pub spacing_tolerance_per_cm: Option<f64>,
}

impl Default for ReachSettings {
    fn default() -> Self {
        Self {
            tolerance: 0.05,
            absolute: AbsoluteTolerance::default(),
            level_tolerance_per_cm: None,
            spacing_tolerance_per_cm: None,
        }
    }
}

/// What ends the reach on one side.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EndedBy {
    /// The deviation crosses the tolerance there.
    Tolerance,
    /// The scan ends before it does.
    Scan,
    /// A barrier inside the scan, where the well ends, comes before it does.
    Barrier,
}

/// The connected interval around the minimum within one criterion; displacements in bohr.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// Inner end (negative); none when the scan ends first.
    pub x_minus_bohr: Option<f64>,
    /// Outer end; none when the scan ends first.
    pub x_plus_bohr: Option<f64>,
    /// Leading-order estimate of both: 3 τ k/|V‴| (energy) or 2 τ k/|V‴| (force).
    pub leading_order_bohr: Option<f64>,
    /// What ends it inside.
    pub ended_by_minus: EndedBy,
    /// What ends it outside.
    pub ended_by_plus: EndedBy,
    /// Standard error of the inner end in bohr and where it comes from, where known.
    pub x_minus_error: Option<(f64, ErrorSource)>,
    /// Of the outer end.
    pub x_plus_error: Option<(f64, ErrorSource)>,
    /// Of the leading-order estimate.
    pub leading_order_error: Option<(f64, ErrorSource)>,
    /// V − V_e at the inner and the outer end in hartree.
    pub energies_hartree: [Option<f64>; 2],
}

impl Interval {
    /// An interval whose errors and energies are not known.
    pub const fn new(
        x_minus_bohr: Option<f64>,
        x_plus_bohr: Option<f64>,
        leading_order_bohr: Option<f64>,
        (ended_by_minus, ended_by_plus): (EndedBy, EndedBy),
    ) -> Self {
        Self {
            x_minus_bohr,
            x_plus_bohr,
            leading_order_bohr,
            ended_by_minus,
            ended_by_plus,
            x_minus_error: None,
            x_plus_error: None,
            leading_order_error: None,
            energies_hartree: [None, None],
        }
    }

    /// The inner end with its standard error, in bohr.
    pub fn x_minus(&self) -> Option<Estimate> {
        self.x_minus_bohr.map(|x| with(x, self.x_minus_error))
    }

    /// The outer end with its standard error, in bohr.
    pub fn x_plus(&self) -> Option<Estimate> {
        self.x_plus_bohr.map(|x| with(x, self.x_plus_error))
    }

    /// The leading-order estimate with its standard error, in bohr.
    pub fn leading_order(&self) -> Option<Estimate> {
        self.leading_order_bohr.map(|x| with(x, self.leading_order_error))
    }
}

fn with(value: f64, error: Option<(f64, ErrorSource)>) -> Estimate {
    error.map_or(Estimate::exact(value), |(error, source)| Estimate::with_error(value, error, source))
}

/// Reach by level or by spacing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LevelReach {
    /// Tolerance in cm⁻¹.
    pub tolerance_per_cm: f64,
    /// Highest v within it; none when v = 0 is already outside.
    pub highest_v: Option<usize>,
}

/// The reach of the parabola by every criterion.
#[derive(Clone, Debug, PartialEq)]
pub struct Reach {
    /// Relative tolerance τ.
    pub tolerance: f64,
    /// By energy.
    pub energy: Interval,
    /// By force.
    pub force: Interval,
    /// The absolute tolerance.
    pub absolute_tolerance: AbsoluteTolerance,
    /// By energy within the absolute tolerance.
    pub absolute: Interval,
    /// By level; none without levels.
    pub levels: Option<LevelReach>,
    /// By level spacing; none without levels.
    pub spacing: Option<LevelReach>,
    /// Highest temperature (K) for the partition function, the mean energy and the mean square amplitude.
    pub temperature_kelvin: TemperatureReach,
    /// sqrt(ħ/(μ ω)) in bohr; none without a mass.
    pub zero_point_amplitude_bohr: Option<f64>,
}

/// Temperature reach by three quantities, in K. None: it holds at every temperature that the levels support; 0: it
/// fails at any temperature.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct TemperatureReach {
    /// |ln q_h − ln q| ≤ 0.01.
    pub partition_function: Option<f64>,
    /// |U_h − U| ≤ 0.01 k_B T.
    pub mean_energy: Option<f64>,
    /// ⟨x²⟩ within 5 %.
    pub mean_square_x: Option<f64>,
    /// The highest temperature that the levels support, up to which was looked; none without levels.
    pub looked_up_to: Option<f64>,
}

/// The reach of a curve by every criterion; none without a minimum of positive curvature.
///
/// `reduced_mass_me`: none leaves out what needs a mass. `levels`: rotationless, v ascending, energies
/// from V_e; empty leaves out the reach by level, spacing and temperature.
pub fn reach(
    curve: &ScanCurve,
    reduced_mass_me: Option<f64>,
    levels: &[Level],
    settings: &ReachSettings,
) -> Option<Reach> {
    let (mut energy, mut force) = energy_and_force_reach(curve, settings)?;
    let absolute_hartree = settings.absolute.hartree();
    let mut absolute = absolute_reach(curve, absolute_hartree)?;
    uncertainty::fill(
        curve,
        &mut [
            (Criterion::Energy, settings.tolerance, &mut energy),
            (Criterion::Force, settings.tolerance, &mut force),
            (Criterion::Absolute, absolute_hartree, &mut absolute),
        ],
    );
    let r_e = curve.local.r_e_bohr;
    for interval in [&mut energy, &mut force, &mut absolute] {
        let at = |x: Option<f64>| x.map(|x| curve.above_minimum().energy_hartree(r_e + x));
        interval.energies_hartree = [at(interval.x_minus_bohr), at(interval.x_plus_bohr)];
    }
    let k = curve.derivatives_hartree(curve.local.r_e_bohr)[2];
    let tolerance = settings.tolerance;
    let mut reach = Reach {
        tolerance,
        energy,
        force,
        absolute_tolerance: settings.absolute,
        absolute,
        levels: None,
        spacing: None,
        temperature_kelvin: TemperatureReach::default(),
        zero_point_amplitude_bohr: None,
    };
    if let Some(mass) = reduced_mass_me.filter(|m| *m > 0.0) {
        let omega = omega_e_per_cm(k, mass);
        // sqrt(ħ/(μ ω)) with ω = sqrt(k/μ).
        reach.zero_point_amplitude_bohr = Some((k * mass).powf(-0.25));
        if !levels.is_empty() {
            let energies: Vec<f64> = levels.iter().map(|l| l.energy_per_cm).collect();
            let or_default = |given: Option<f64>| given.unwrap_or(tolerance * omega);
            reach.levels = Some(level_reach(&energies, omega, or_default(settings.level_tolerance_per_cm)));
            reach.spacing =
                Some(spacing_reach(&energies, omega, or_default(settings.spacing_tolerance_per_cm)));
            reach.temperature_kelvin = temperature_reach(levels, omega, mass);
        }
    }
    Some(reach)
}
