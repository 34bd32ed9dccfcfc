//! The densities of the level shown, computed once for as long as nothing changes.

use super::state::{State, Study};
use crate::figure::{DensityKind, DensityPicture, density_picture};
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

/// What a picture was made of: the study by its address and check, the level, the width.
type Made = (usize, usize, Option<u64>);

/// The densities of the level shown, from the last frame where nothing has changed.
pub fn shown_densities(ctx: &egui::Context, state: &State, study: &Study) -> Option<Arc<DensityPicture>> {
    let v = state.shown_level()?;
    let width = state.view.densities.width_angstrom;
    let made: Made = (Arc::as_ptr(&study.findings) as usize, v, width.map(f64::to_bits));
    let id = egui::Id::unique("densities of the level shown");
    // The study is kept beside the picture, so that its address cannot come to mean another one.
    type Kept = (Made, Arc<crate::findings::Findings>, Option<Arc<DensityPicture>>);
    if let Some((of, _, picture)) = ctx.data(|d| d.get_temp::<Kept>(id))
        && of == made
    {
        return picture;
    }
    let picture = density_picture(&study.findings, v, width).map(Arc::new);
    let kept: Kept = (made, Arc::clone(&study.findings), picture.clone());
    ctx.data_mut(|d| d.insert_temp(id, kept));
    picture
}
