//! Drawing-free descriptions of pictures, drawn alike on screen and in files.
//!
//! A [`Figure`] says what is to be seen: axes with units, series with their role and what they mean.
//! How a role looks (colour, width) is the business of whoever draws; that harmonic is dashed and a
//! polynomial dotted is part of the role, so that screen and file cannot disagree.

mod comparison;
mod curve;
mod densities;
mod density_lines;
mod dissociation;
pub mod drawing;
mod effective;
mod gauge;
pub mod geometry;
mod ladders;
pub mod number;
pub mod pdf;
mod residuals;
pub mod rows;
mod sentence;
pub mod svg;
mod thermal;
mod thermal_density;
mod thermal_quantity;
pub mod typography;
mod views;
mod window_study;

pub use comparison::{ComparedRow, ComparisonPicture, Measure};
pub use curve::{fit_label, fit_role, main_plot};
pub use densities::{LevelPicture, level_pictures};
pub use density_lines::{DensityKind, DensityLine, DensityPicture, density_picture};
pub use dissociation::{birge_sponer_figure, birge_sponer_sentence, true_limit_per_cm};
pub use effective::{
    QuasiBoundPicture, RotationPicture, lifetime_text, quasi_bound_words, rotation_picture, width_text,
};
pub use gauge::{GaugeMeasure, gauge, gauge_of, gauge_turning_points};
pub use ladders::{Ladder, Ladders, ladders};
pub use residuals::residuals;
pub use sentence::{Sentence, sentence};
pub use thermal::{ThermalPanel, thermal_panels};
pub use thermal_density::{ThermalDensityPicture, thermal_density_picture};
pub use thermal_quantity::{ThermalPicture, ThermalQuantity, ThermalValues, thermal_picture};
pub use views::{Views, views};
pub use window_study::{WindowPicture, WindowTarget};

use crate::findings::Findings;
use crate::fit::Window;
use geometry::Bounds;

/// What a series stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Role {
    /// The curve through the scan's points.
    Scanned,
    /// Its continuation beyond the scan.
    Tail,
    /// The parabola with k = V″(r_e).
    Parabola,
    /// A harmonic fit in the window.
    Harmonic,
    /// A Morse fit.
    Morse,
    /// A polynomial fit.
    Polynomial,
    /// A polynomial fit of this degree, where degrees stand side by side.
    Degree(u32),
    /// What is proposed.
    Proposal,
    /// The reach.
    Reach,
    /// A tolerance.
    Tolerance,
    /// The leading-order estimate of a deviation.
    LeadingOrder,
    /// The zero-point amplitude.
    ZeroPoint,
    /// The zero line.
    Zero,
    /// The effective potential of a rotating molecule.
    Effective,
    /// Its continuation beyond the scan.
    EffectiveTail,
    /// A quasi-bound level inside its barrier.
    QuasiBound,
    /// The same where it tunnels.
    Tunnelling,
}

/// How a line is broken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LineStyle {
    /// Not broken.
    Solid,
    /// Dashes of 7 with gaps of 4.
    Dashed,
    /// Dashes of 14 with gaps of 5.
    LongDashed,
    /// Dots, 2 and 3.
    Dotted,
    /// Dashes of 3 with gaps of 3.
    ShortDashed,
}

impl Role {
    /// How lines of this role are broken.
    pub const fn line_style(self) -> LineStyle {
        match self {
            Self::Parabola => LineStyle::Dashed,
            Self::Harmonic => LineStyle::LongDashed,
            Self::Tail | Self::Tolerance | Self::EffectiveTail => LineStyle::ShortDashed,
            Self::QuasiBound => LineStyle::Dashed,
            Self::Polynomial | Self::LeadingOrder | Self::Tunnelling => LineStyle::Dotted,
            // Beside their colours, so that neighbouring degrees differ in print too.
            Self::Degree(n) => match n % 3 {
                0 => LineStyle::ShortDashed,
                1 => LineStyle::Dotted,
                _ => LineStyle::Solid,
            },
            Self::Scanned
            | Self::Morse
            | Self::Reach
            | Self::ZeroPoint
            | Self::Zero
            | Self::Proposal
            | Self::Effective => LineStyle::Solid,
        }
    }
}

/// The form of a series, in the units of the axes.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A line through points of ascending abscissa.
    Line(Vec<[f64; 2]>),
    /// Separate points.
    Points(Vec<[f64; 2]>),
    /// A vertical band over all ordinates; an end that is none lies beyond the scan.
    Band(Option<f64>, Option<f64>),
    /// A horizontal line.
    Level(f64),
    /// An area between two lines: abscissa, lower and upper ordinate.
    Ribbon(Vec<[f64; 3]>),
    /// A horizontal bar: ordinate, from, to.
    Bar(f64, f64, f64),
}

/// One series of a figure.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// What it stands for.
    pub role: Role,
    /// Its name in a legend.
    pub label: String,
    /// What it is, in a sentence or two: formula, source, meaning.
    pub about: String,
    /// Where it is at full strength (window of a fit, scanned range); none: everywhere.
    pub strong: Option<(f64, f64)>,
    /// Its form.
    pub shape: Shape,
}

impl Series {
    /// One that is at full strength everywhere.
    pub fn plain(role: Role, label: &str, about: impl Into<String>, shape: Shape) -> Self {
        Self { role, label: label.to_owned(), about: about.into(), strong: None, shape }
    }
}

/// An axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// What is drawn along it.
    pub title: &'static str,
    /// Its unit.
    pub unit: &'static str,
}

impl Axis {
    /// Title and unit as written along the axis.
    pub fn text(&self) -> String {
        if self.unit.is_empty() { self.title.to_owned() } else { format!("{} / {}", self.title, self.unit) }
    }
}

/// The bond-length axis that all figures of a study share.
pub const BOND_LENGTH: Axis = Axis { title: "bond length", unit: "Å" };

/// A picture without the drawing.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// Horizontal axis.
    pub x: Axis,
    /// Vertical axis.
    pub y: Axis,
    /// The series, those behind first.
    pub series: Vec<Series>,
}

/// A point of the scan as the main plot shows it.
#[derive(Clone, Debug, PartialEq)]
pub struct PlotPoint {
    /// Row of the scan.
    pub row: usize,
    /// Bond length as read, in the scan's unit.
    pub r_as_read: f64,
    /// Position: angstrom, cm⁻¹ above the minimum.
    pub at: [f64; 2],
    /// Total energy in hartree.
    pub energy_hartree: f64,
    /// Whether the fits see it.
    pub in_window: bool,
    /// Why it is set aside, where it is.
    pub set_aside: Option<String>,
}

/// All pictures of one study, made once from its findings.
#[derive(Clone, Debug)]
pub struct Pictures {
    /// The main plot: curve, parabola, fits, reach.
    pub main: Figure,
    /// The points on it.
    pub points: Vec<PlotPoint>,
    /// The levels with their densities.
    pub levels: Vec<LevelPicture>,
    /// The ladders.
    pub ladders: Ladders,
    /// Deviation from the parabola.
    pub gauge: Figure,
    /// Residuals of the fits.
    pub residuals: Figure,
    /// Regions worth looking at.
    pub views: Views,
    /// The sentence.
    pub sentence: Sentence,
    /// The window in use; none when none is given and there is no minimum.
    pub window: Option<Window>,
}

impl Pictures {
    /// The same with the levels and the effective potential of one J in the place of those without rotation.
    pub fn with_rotation(mut self, rotation: &RotationPicture) -> Self {
        self.main.series.extend(rotation.series.iter().cloned());
        self.levels.clone_from(&rotation.levels);
        self.ladders = rotation.ladders.clone();
        self.views.near_minimum = rotation.near_minimum.or(self.views.near_minimum);
        self.views.whole_well = rotation.whole_well.or(self.views.whole_well);
        self
    }

    /// Everything that is drawn of these findings.
    pub fn of(findings: &Findings) -> Self {
        let window = findings.window();
        Self {
            main: main_plot(findings),
            points: curve::points(findings, window),
            levels: level_pictures(findings),
            ladders: ladders(findings),
            gauge: gauge(findings),
            residuals: residuals(findings),
            views: views(findings, window),
            sentence: sentence(findings),
            window,
        }
    }
}

/// A figure's own bounds over all its lines and points, where it has any.
pub fn content_bounds(figure: &Figure) -> Option<Bounds> {
    let mut bounds: Option<Bounds> = None;
    for series in &figure.series {
        let (Shape::Line(points) | Shape::Points(points)) = &series.shape else { continue };
        for p in points.iter().filter(|p| p.iter().all(|c| c.is_finite())) {
            let b = bounds.get_or_insert(Bounds { x: (p[0], p[0]), y: (p[1], p[1]) });
            b.x = (b.x.0.min(p[0]), b.x.1.max(p[0]));
            b.y = (b.y.0.min(p[1]), b.y.1.max(p[1]));
        }
    }
    bounds
}
