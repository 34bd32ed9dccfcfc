//! Spectroscopic constants from derivatives and from levels.

use crate::estimate::Estimate;

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
