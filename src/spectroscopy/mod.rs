//! Spectroscopic constants from derivatives and from levels.

mod dissociation;
mod dunham_table;
mod from_derivatives;
mod from_levels;

pub use dissociation::{BirgeSponer, NearDissociation, birge_sponer, inverse_power_tail, near_dissociation};
pub use dunham_table::{DunhamChoice, DunhamTable, dunham_table};
pub use from_derivatives::{DunhamConstants, dunham, from_derivatives};
pub use from_levels::from_levels;

use crate::estimate::Estimate;
use crate::potential::curve::ScanCurve;
use crate::radial::Level;
use crate::units::to_per_cm;

/// Constants from the derivatives of V at r_e [Dunham 1932]. All in cm⁻¹.
#[derive(Clone, Debug, PartialEq)]
pub struct DerivativeConstants {
    /// Harmonic wavenumber ω_e.
    pub omega_e_per_cm: Estimate,
    /// Anharmonicity ω_e x_e = (3/2) B_e (5 a1²/4 − a2); none without V⁗.
    pub omega_e_x_e_per_cm: Option<Estimate>,
    /// Equilibrium rotational constant B_e.
    pub b_e_per_cm: Estimate,
    /// Vibration-rotation constant α_e; none without V‴.
    pub alpha_e_per_cm: Option<Estimate>,
    /// Centrifugal constant D_e = 4 B_e³/ω_e².
    pub centrifugal_d_e_per_cm: Estimate,
    /// Dunham's Y_00 as far as the derivatives go.
    pub y_00_per_cm: Option<Estimate>,
    /// Further Y_kl whose leading term needs no more than V⁗: Y_02, Y_12, Y_03, Y_04.
    pub dunham_per_cm: Vec<DunhamCoefficient>,
}

/// A coefficient of E(v, J) = Σ Y_kl (v + ½)ᵏ [J(J + 1)]ˡ.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DunhamCoefficient {
    /// Power of (v + ½).
    pub k: u32,
    /// Power of J(J + 1).
    pub l: u32,
    /// The value in cm⁻¹.
    pub value_per_cm: Estimate,
}

/// Constants fitted to numerical levels. All in cm⁻¹.
#[derive(Clone, Debug, PartialEq)]
pub struct LevelConstants {
    /// Harmonic wavenumber ω_e.
    pub omega_e_per_cm: Estimate,
    /// Anharmonicity ω_e x_e.
    pub omega_e_x_e_per_cm: Option<Estimate>,
    /// Second anharmonicity ω_e y_e.
    pub omega_e_y_e_per_cm: Option<Estimate>,
    /// Equilibrium rotational constant B_e.
    pub b_e_per_cm: Option<Estimate>,
    /// Vibration-rotation constant α_e.
    pub alpha_e_per_cm: Option<Estimate>,
    /// The v that entered.
    pub levels_used: Vec<usize>,
}

/// All constants of a study.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Constants {
    /// From derivatives; none without a mass.
    pub from_derivatives: Option<DerivativeConstants>,
    /// From levels; none without levels.
    pub from_levels: Option<LevelConstants>,
    /// E(0,0) − V_e in cm⁻¹.
    pub zero_point_energy_per_cm: Option<Estimate>,
    /// E(1,0) − E(0,0) in cm⁻¹.
    pub fundamental_per_cm: Option<Estimate>,
    /// Well depth V_inf − V_e in cm⁻¹; none where the asymptote is assumed.
    pub well_depth_per_cm: Option<Estimate>,
    /// Dissociation energy V_inf − E(0,0) in cm⁻¹; none where the asymptote is assumed.
    pub d_0_per_cm: Option<Estimate>,
}

/// What the constants from levels may use.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct LevelSet {
    /// Highest v.
    pub highest_v: usize,
    /// Degree in (v + ½).
    pub degree: usize,
}

impl Constants {
    /// The same where V_inf was not given but follows from the outer points: its own error is not known, and that of
    /// V_e alone, far smaller, must not pass for it.
    pub fn with_limit_from_points(mut self) -> Self {
        for depth in [&mut self.well_depth_per_cm, &mut self.d_0_per_cm].into_iter().flatten() {
            *depth = Estimate::exact(depth.value);
        }
        self
    }
}

/// All constants of a curve. Without a mass only the well depth; without levels only what needs none.
///
/// `levels`: rotationless, v ascending from 0, energies from V_e.
pub fn constants(
    curve: &ScanCurve,
    reduced_mass_me: Option<f64>,
    levels: &[Level],
    set: LevelSet,
) -> Constants {
    let level = |v: usize| levels.get(v).map(Level::energy_estimate_per_cm);
    let minus = |a: Estimate, b: Estimate| {
        let value = a.value - b.value;
        // Errors of neighbouring levels go together; the root of the squares is the cautious choice.
        let part = |e: Estimate| e.std_error.zip(e.source);
        match (part(a), part(b)) {
            (Some(a), Some(b)) => Estimate::from_parts(value, &[a, b]),
            _ => Estimate::exact(value),
        }
    };
    let depth = curve.asymptote_hartree().and(curve.tail_depth_hartree()).map(|depth| {
        let own = curve.v_e_hartree;
        Estimate { value: depth, ..own }.scaled(to_per_cm(1.0))
    });
    let zero_point = level(0);
    Constants {
        from_derivatives: reduced_mass_me.filter(|m| *m > 0.0).map(|mass| from_derivatives(curve, mass)),
        from_levels: from_levels(levels, set),
        zero_point_energy_per_cm: zero_point,
        fundamental_per_cm: level(1).zip(zero_point).map(|(one, zero)| minus(one, zero)),
        well_depth_per_cm: depth,
        d_0_per_cm: depth.zip(zero_point).map(|(depth, zero)| match (depth.std_error, zero.std_error) {
            (Some(_), None) => Estimate { value: depth.value - zero.value, ..depth },
            _ => minus(depth, zero),
        }),
    }
}
