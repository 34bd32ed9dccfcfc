//! The densities of the level shown, computed once for as long as nothing changes.

use super::kept::kept;
use super::state::{State, Study};
use crate::figure::{
    DensityKind, DensityPicture, ThermalDensityPicture, density_picture, thermal_density_picture,
};
use eframe::egui;
use std::sync::Arc;

/// What is drawn over the density of the level shown.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DensityView {
    /// The harmonic density of the same v.
    pub harmonic: bool,
    /// The density of the Morse fit.
    pub morse: bool,
    /// The classical density of the same energy.
    pub classical: bool,
    /// The numerical and the classical density averaged over the width.
    pub averaged: bool,
    /// The width in angstrom; none: the zero-point amplitude.
    pub width_angstrom: Option<f64>,
    /// Height of all densities against the usual one.
    pub height: f64,
}

impl Default for DensityView {
    fn default() -> Self {
        Self {
            harmonic: false,
            morse: false,
            classical: false,
            averaged: false,
            width_angstrom: None,
            height: 1.0,
        }
    }
}

impl DensityView {
    /// Bounds of the height.
    pub const HEIGHTS: (f64, f64) = (0.2, 8.0);

    /// Whether lines of this kind are drawn; the numerical density is an area, not a line.
    pub const fn shows(&self, kind: DensityKind) -> bool {
        match kind {
            DensityKind::Numerical => false,
            DensityKind::Harmonic => self.harmonic,
            DensityKind::Morse => self.morse,
            DensityKind::Classical => self.classical,
            DensityKind::AveragedNumerical | DensityKind::AveragedClassical => self.averaged,
        }
    }

    /// Whether any line is drawn.
    pub const fn is_any(&self) -> bool {
        self.harmonic || self.morse || self.classical || self.averaged
    }
}

/// The densities of the levels that stand out, the one shown first, from the last frame where nothing has changed.
pub fn shown_densities(ctx: &egui::Context, state: &State, study: &Study) -> Arc<Vec<DensityPicture>> {
    let width = state.view.densities.width_angstrom;
    let levels = state.outstanding();
    let key = (levels.clone(), width.map(f64::to_bits));
    kept(ctx, "densities", &study.findings, key, || {
        levels.iter().filter_map(|&v| density_picture(&study.findings, v, width)).collect()
    })
}

/// The density at the temperature looked at, where it is drawn.
pub fn shown_thermal(
    ctx: &egui::Context,
    state: &State,
    study: &Study,
) -> Arc<Option<ThermalDensityPicture>> {
    if !state.view.shows_thermal_density() {
        return Arc::default();
    }
    let kelvin = state.view.kelvin();
    let findings = &study.findings;
    kept(ctx, "thermal density", findings, kelvin.to_bits(), || thermal_density_picture(findings, kelvin))
}
