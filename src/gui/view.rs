//! What can be looked at: pages, strips and regions of the plot.

use super::state::CurveKey;
use crate::export::compare::Quantity;
use crate::figure::geometry::Bounds;
use crate::figure::{Pictures, ThermalQuantity};
use crate::units::{EnergyUnit, LengthUnit};

/// A page of results.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Page {
    /// The points of the scan.
    Scan,
    /// Constants and energies.
    #[default]
    Constants,
    /// The levels as a table.
    Levels,
    /// Parameters of the fits.
    Fits,
    /// The reach by every criterion.
    Reach,
    /// Averages over temperature.
    Thermal,
}

impl Page {
    /// All pages in order.
    pub const ALL: [Self; 6] =
        [Self::Scan, Self::Constants, Self::Levels, Self::Fits, Self::Reach, Self::Thermal];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Scan => "Scan",
            Self::Constants => "Constants",
            Self::Levels => "Levels",
            Self::Fits => "Fits",
            Self::Reach => "Reach",
            Self::Thermal => "Thermal",
        }
    }
}

/// What the axes of the plot show.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct AxisView {
    /// Unit of the bond lengths.
    pub length: LengthUnit,
    /// Displacements x = r − r_e instead of bond lengths.
    pub displacement: bool,
    /// Unit of the energies.
    pub energy: EnergyUnit,
}

impl Default for AxisView {
    fn default() -> Self {
        Self { length: LengthUnit::Angstrom, displacement: false, energy: EnergyUnit::PerCm }
    }
}

/// What the comparison takes differences to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reference {
    /// A curve.
    Curve(CurveKey),
    /// The published constants entered.
    Published,
}

/// Curves side by side.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Comparison {
    /// Whether the table is in the place of the picture.
    pub open: bool,
    /// What differences are taken to; none: values are shown.
    pub reference: Option<Reference>,
    /// What rows are sorted by, and whether the largest is on top; none: in order of loading.
    pub sort: Option<(Quantity, bool)>,
}

/// A part of the page of fits.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum FitsPart {
    /// Parameters with their errors.
    #[default]
    Parameters,
    /// The fits over all windows.
    Windows,
    /// The fits side by side.
    Compare,
}

impl FitsPart {
    /// All parts in order.
    pub const ALL: [Self; 3] = [Self::Parameters, Self::Windows, Self::Compare];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Parameters => "Parameters",
            Self::Windows => "Which window",
            Self::Compare => "Side by side",
        }
    }
}

/// What is shown of temperature.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ThermalView {
    /// The quantity drawn over temperature.
    pub quantity: ThermalQuantity,
    /// Whether the density is drawn on the plot while the page is open.
    pub density: bool,
}

impl Default for ThermalView {
    fn default() -> Self {
        Self { quantity: ThermalQuantity::default(), density: true }
    }
}

/// A part of the page of levels.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum LevelsPart {
    /// The levels of one J.
    #[default]
    Table,
    /// E(v, J) of several J, and the Y_kl fitted to them.
    Rotation,
    /// Spacings, limit, tail.
    Limit,
    /// Other isotopes on the same curve.
    Isotopes,
}

impl LevelsPart {
    /// All parts in order.
    pub const ALL: [Self; 4] = [Self::Table, Self::Rotation, Self::Limit, Self::Isotopes];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Table => "One J",
            Self::Rotation => "All J",
            Self::Limit => "To the limit",
            Self::Isotopes => "Isotopes",
        }
    }
}

/// What the strip shows.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Strip {
    /// Deviation from the parabola.
    #[default]
    Gauge,
    /// Residuals of the fits.
    Residuals,
}

impl Strip {
    /// All kinds in order.
    pub const ALL: [Self; 2] = [Self::Gauge, Self::Residuals];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Gauge => "Gauge",
            Self::Residuals => "Residuals",
        }
    }
}

/// A named region of the plot.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Preset {
    /// The lowest levels.
    #[default]
    NearMinimum,
    /// The whole well.
    WholeWell,
    /// The fit window.
    FitWindow,
    /// All points.
    AllPoints,
}

impl Preset {
    /// All regions in order.
    pub const ALL: [Self; 4] = [Self::NearMinimum, Self::WholeWell, Self::FitWindow, Self::AllPoints];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::NearMinimum => "near the minimum",
            Self::WholeWell => "whole well",
            Self::FitWindow => "fit window",
            Self::AllPoints => "all points",
        }
    }

    /// Its bounds among a study's views.
    pub fn bounds(self, pictures: &Pictures) -> Option<Bounds> {
        let views = &pictures.views;
        match self {
            Self::NearMinimum => views.near_minimum,
            Self::WholeWell => views.whole_well,
            Self::FitWindow => views.fit_window,
            Self::AllPoints => views.all_points,
        }
    }
}

/// What part of the plot is seen.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Zoom {
    /// A named region; it follows the results.
    Preset(Preset),
    /// As the user left it.
    Free(Bounds),
}
