//! Pictures for paper: a figure laid out at a width and a font size, as lines, areas and words. SVG and
//! PDF are written from this one description.

mod axes;
mod comparison;
mod ladders;
mod legend;
pub mod palette;
mod panel;
mod stack;
mod thermal;
mod type_face;

pub use axes::Frame;
pub use palette::{Palette, Rgb};
pub use type_face::{FACE, GlyphRun, TypeFace};

use super::geometry::Bounds;
use super::{
    ComparisonPicture, Figure, GaugeMeasure, Pictures, Role, RotationPicture, Series, Shape, WindowPicture,
    birge_sponer_figure, birge_sponer_sentence, gauge_of, gauge_turning_points, rotation_picture,
    thermal_panels,
};
use crate::findings::Findings;
use crate::study::rotating_levels;
use crate::units::to_angstrom;

/// Which picture of a study.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Subject {
    /// Curve, parabola, fits, levels with densities, reach.
    Curve,
    /// Deviation from the parabola.
    Gauge,
    /// Residuals of the fits.
    Residuals,
    /// Levels side by side.
    Ladders,
    /// Partition function, energy, heat capacity, populations, bond length and amplitude over temperature.
    Thermal,
    /// ω_e, ω_e x_e and k against the half width of the fit window.
    WindowStudy,
    /// The fits side by side.
    Comparison,
    /// Spacings of the levels against v + ½ with their straight line.
    BirgeSponer,
}

impl Subject {
    /// The pictures by their names on the command line.
    pub const ALL: [(&'static str, Self); 8] = [
        ("curve", Self::Curve),
        ("gauge", Self::Gauge),
        ("residuals", Self::Residuals),
        ("ladders", Self::Ladders),
        ("thermal", Self::Thermal),
        ("window-study", Self::WindowStudy),
        ("comparison", Self::Comparison),
        ("birge-sponer", Self::BirgeSponer),
    ];
}

/// Which part of the curve is shown.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum View {
    /// The lowest six levels.
    #[default]
    NearMinimum,
    /// Up to the limit of the bound levels.
    WholeWell,
    /// The fit window.
    FitWindow,
    /// Every point.
    AllPoints,
}

impl View {
    /// The views by their names on the command line.
    pub const ALL: [(&'static str, Self); 4] = [
        ("near-minimum", Self::NearMinimum),
        ("whole-well", Self::WholeWell),
        ("fit-window", Self::FitWindow),
        ("all-points", Self::AllPoints),
    ];
}

/// The paper a picture is laid out for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Paper {
    /// Width in mm; the height follows.
    pub width_mm: f64,
    /// Font size in points.
    pub font_pt: f64,
    /// Dark instead of light.
    pub dark: bool,
    /// Part of the curve.
    pub view: View,
    /// Another part of it: angstrom, cm⁻¹ above the minimum.
    pub bounds: Option<Bounds>,
    /// What the gauge measures.
    pub gauge: GaugeMeasure,
    /// The J whose effective potential and levels the curve is drawn with; 0: without rotation.
    pub j: u32,
}

impl Default for Paper {
    fn default() -> Self {
        Self {
            width_mm: 140.0,
            font_pt: 9.0,
            dark: false,
            view: View::NearMinimum,
            bounds: None,
            gauge: GaugeMeasure::EnergyPercent,
            j: 0,
        }
    }
}

/// Residuals smaller than this share of those of another fit are not seen beside them.
const HIDDEN: f64 = 0.2;
/// Levels whose turning points stand in a gauge.
const GAUGE_LEVELS: usize = 6;
/// Points (1/72 inch) in a millimetre.
pub const PT_PER_MM: f64 = 72.0 / 25.4;

/// A line's colour, width and dashes (on, off, in points; empty: solid).
#[derive(Clone, Debug, PartialEq)]
pub struct Stroke {
    /// Colour.
    pub colour: Rgb,
    /// Width in points.
    pub width_pt: f64,
    /// Dashes in points.
    pub dashes_pt: Vec<f64>,
}

/// How a text stands to its place.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    /// It begins there.
    Start,
    /// It is centred there.
    Middle,
    /// It ends there.
    End,
}

/// A part of a drawing. Coordinates in points from the upper left corner, y downwards.
#[derive(Clone, Debug, PartialEq)]
pub enum Item {
    /// What follows up to [`Item::Close`] belongs to this series.
    Open(String),
    /// The end of a series.
    Close,
    /// A line or an area.
    Path {
        /// Its corners.
        points: Vec<[f64; 2]>,
        /// Whether the last is joined to the first.
        closed: bool,
        /// The line.
        stroke: Option<Stroke>,
        /// The area.
        fill: Option<Rgb>,
        /// 0 to 1.
        opacity: f64,
    },
    /// A ring or disc.
    Circle {
        /// Its centre.
        centre: [f64; 2],
        /// Its radius in points.
        radius_pt: f64,
        /// The line.
        stroke: Stroke,
        /// The area.
        fill: Rgb,
        /// 0 to 1.
        opacity: f64,
    },
    /// A text on its base line.
    Text {
        /// Where.
        at: [f64; 2],
        /// The text.
        text: String,
        /// Size in points.
        size_pt: f64,
        /// Colour.
        colour: Rgb,
        /// How it stands to its place.
        anchor: Anchor,
        /// Turned to read upwards.
        upwards: bool,
    },
}

/// A picture laid out.
#[derive(Clone, Debug, PartialEq)]
pub struct Drawing {
    /// Size in points.
    pub size_pt: [f64; 2],
    /// What the picture shows, in a sentence.
    pub about: String,
    /// Background.
    pub ground: Rgb,
    /// The parts, those behind first.
    pub items: Vec<Item>,
}

/// Why there is no picture.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum DrawingError {
    /// The study has nothing of this kind.
    #[error("there is nothing to draw: {why}")]
    Nothing {
        /// What is missing.
        why: &'static str,
    },
    /// Too little room for the words.
    #[error("{width_mm} mm are too narrow for text of {font_pt} points; widen it or choose a smaller font")]
    TooNarrow {
        /// The width.
        width_mm: f64,
        /// The font size.
        font_pt: f64,
    },
}

/// What a layout is made with.
struct Layout<'a> {
    palette: &'static Palette,
    face: &'a TypeFace,
    font_pt: f64,
    /// Line widths and gaps grow with the font.
    unit: f64,
    size_pt: [f64; 2],
}

/// The picture of a study.
///
/// # Errors
/// [`DrawingError`]
pub fn drawing(findings: &Findings, subject: Subject, paper: &Paper) -> Result<Drawing, DrawingError> {
    let width_pt = paper.width_mm * PT_PER_MM;
    if width_pt < 22.0 * paper.font_pt {
        return Err(DrawingError::TooNarrow { width_mm: paper.width_mm, font_pt: paper.font_pt });
    }
    let share = match subject {
        Subject::Curve | Subject::Ladders => 0.72,
        Subject::Gauge | Subject::Residuals => 0.45,
        Subject::Thermal => thermal::HEIGHT,
        Subject::Comparison | Subject::BirgeSponer => 0.60,
        Subject::WindowStudy => 1.0,
    };
    let size_pt = [width_pt, (share * width_pt).max(16.0 * paper.font_pt)];
    let mut layout = Layout::new(size_pt, paper.font_pt, paper.dark);
    let pictures = match rotation(findings, paper.j)? {
        Some(rotation) => Pictures::of(findings).with_rotation(&rotation),
        None => Pictures::of(findings),
    };
    let named = match paper.view {
        View::NearMinimum => pictures.views.near_minimum,
        View::WholeWell => pictures.views.whole_well,
        View::FitWindow => pictures.views.fit_window,
        View::AllPoints => pictures.views.all_points,
    };
    let view = paper.bounds.filter(Bounds::is_valid).or(named).or_else(|| pictures.views.first());
    let nothing = |why| DrawingError::Nothing { why };
    let items = match subject {
        Subject::Curve => {
            let bounds = view.ok_or(nothing("the scan has no points"))?;
            panel::items(&layout, &pictures.main, bounds, Some(&pictures))
        }
        Subject::Gauge => {
            let mut figure = gauge_of(findings, paper.gauge);
            let bounds = gauge_bounds(findings, view, (&figure, paper.gauge));
            let bounds = bounds.ok_or(nothing("the curve has no parabola"))?;
            figure.series.extend(gauge_turning_points(findings, GAUGE_LEVELS));
            panel::items(&layout, &figure, bounds, None)
        }
        Subject::Residuals => {
            let bounds = residual_bounds(&pictures.residuals);
            if bounds.is_empty() {
                return Err(nothing("no fit succeeded"));
            }
            layout.size_pt[1] *= 1.0 + 0.6 * (bounds.len() - 1) as f64;
            let figures: Vec<Figure> = bounds.iter().map(|b| shown_within(&pictures.residuals, b)).collect();
            stack::items(&layout, &figures, &bounds).0
        }
        Subject::Ladders => {
            let bounds = view.filter(|_| !findings.levels.is_empty());
            let bounds = bounds.ok_or(nothing("there are no levels (name the atoms or a reduced mass)"))?;
            ladders::items(&layout, &pictures.ladders, bounds.y)
        }
        Subject::Thermal => {
            let panels = thermal_panels(findings);
            thermal::items(&layout, &panels)
                .ok_or(nothing("there are no levels (name the atoms or a reduced mass)"))?
        }
        Subject::WindowStudy => {
            let picture = WindowPicture::of(findings)
                .ok_or(nothing("there is no window study (--window-study), or none of its fits succeeded"))?;
            stack::items(&layout, &picture.figures, &picture.bounds).0
        }
        Subject::Comparison => {
            let picture = ComparisonPicture::of(findings).ok_or(nothing("no fit succeeded"))?;
            layout.size_pt[1] = comparison::height(&layout, &picture);
            comparison::items(&layout, &picture)
        }
        Subject::BirgeSponer => {
            let (figure, bounds) = birge_sponer_figure(findings)
                .ok_or(nothing("fewer than three levels are supported by the scan"))?;
            panel::items(&layout, &figure, bounds, None)
        }
    };
    let about =
        format!("{}, {}: {}", findings.source.file_name, findings.source.curve, pictures.sentence.text);
    Ok(Drawing { size_pt: layout.size_pt, about, ground: layout.palette.ground, items })
}

/// The picture of one J; none for J = 0.
fn rotation(findings: &Findings, j: u32) -> Result<Option<RotationPicture>, DrawingError> {
    if j == 0 {
        return Ok(None);
    }
    let levels = rotating_levels(findings, j);
    let picture = levels.and_then(|levels| rotation_picture(findings, &levels));
    let why = "this J has no effective potential (name the atoms or a reduced mass; J begins at Lambda)";
    picture.map(Some).ok_or(DrawingError::Nothing { why })
}

/// The spacings of the levels laid out at a size, for the screen; none with fewer than three supported levels.
pub fn birge_sponer_drawing(
    findings: &Findings,
    size_pt: [f64; 2],
    font_pt: f64,
    dark: bool,
) -> Option<Drawing> {
    let layout = Layout::new(size_pt, font_pt, dark);
    let (figure, bounds) = birge_sponer_figure(findings)?;
    let items = panel::items(&layout, &figure, bounds, None);
    let about = birge_sponer_sentence(findings).unwrap_or_default();
    Some(Drawing { size_pt, about, ground: layout.palette.ground, items })
}

/// A window study laid out at a size, with where each of its figures lies: for the screen, where it is clicked on.
pub fn window_study_drawing(
    picture: &WindowPicture,
    size_pt: [f64; 2],
    font_pt: f64,
    dark: bool,
) -> (Drawing, Vec<Frame>) {
    let layout = Layout::new(size_pt, font_pt, dark);
    let (items, frames) = stack::items(&layout, &picture.figures, &picture.bounds);
    (Drawing { size_pt, about: picture.sentence.clone(), ground: layout.palette.ground, items }, frames)
}

/// A comparison laid out at a width; its height follows.
pub fn comparison_drawing(picture: &ComparisonPicture, width_pt: f64, font_pt: f64, dark: bool) -> Drawing {
    let mut layout = Layout::new([width_pt, 0.0], font_pt, dark);
    layout.size_pt[1] = comparison::height(&layout, picture);
    let about = picture.sentence.clone().unwrap_or_default();
    let items = comparison::items(&layout, picture);
    Drawing { size_pt: layout.size_pt, about, ground: layout.palette.ground, items }
}

fn figure_bounds(figure: &Figure) -> Option<Bounds> {
    let bounds = super::content_bounds(figure)?;
    // A single value still needs a range.
    let wide = |(a, b): (f64, f64)| if b > a { (a, b) } else { (a - 1.0, b + 1.0) };
    let bounds = Bounds { x: wide(bounds.x), y: wide(bounds.y) }.grown(0.03, 0.08);
    Some(bounds).filter(Bounds::is_valid)
}

/// What the pictures of the residuals show, from above: all fits, then the same enlarged to the fits whose residuals would
/// not be seen beside those of the worst.
fn residual_bounds(figure: &Figure) -> Vec<Bounds> {
    let Some(whole) = figure_bounds(figure) else { return Vec::new() };
    let mut sizes: Vec<f64> = figure.series.iter().filter_map(largest).filter(|s| *s > 0.0).collect();
    sizes.dedup();
    sizes.sort_by(|a, b| b.total_cmp(a));
    let hidden = sizes.windows(2).filter(|pair| pair[1] < HIDDEN * pair[0]);
    let enlarged = hidden.map(|pair| Bounds { x: whole.x, y: (-1.2 * pair[1], 1.2 * pair[1]) });
    std::iter::once(whole).chain(enlarged.filter(Bounds::is_valid).take(2)).collect()
}

/// The largest ordinate of a line or of points.
fn largest(series: &Series) -> Option<f64> {
    match &series.shape {
        Shape::Points(points) | Shape::Line(points) => {
            Some(points.iter().map(|p| p[1].abs()).fold(0.0, f64::max))
        }
        _ => None,
    }
}

/// The figure without series that leave the picture at once.
fn shown_within(figure: &Figure, bounds: &Bounds) -> Figure {
    let seen = |s: &&Series| largest(s).is_none_or(|size| size * HIDDEN <= bounds.y.1);
    Figure { series: figure.series.iter().filter(seen).cloned().collect(), ..figure.clone() }
}

/// The ordinate reaches a few tolerances to either side, the abscissa as far as the deviation and the zero-point
/// amplitude are seen within.
fn gauge_bounds(
    findings: &Findings,
    view: Option<Bounds>,
    (figure, measure): (&Figure, GaugeMeasure),
) -> Option<Bounds> {
    let (reach, curve) = (findings.reach.as_ref()?, findings.curve.as_ref()?);
    let interval = measure.interval(reach);
    let ends = [interval.x_minus_bohr, interval.x_plus_bohr].into_iter().flatten();
    let widest = ends.fold(0.0, |w: f64, x| w.max(4.5 * x.abs()));
    let widest = widest.max(1.25 * reach.zero_point_amplitude_bohr.unwrap_or(0.0));
    let (first, last) = curve.scan_range_bohr;
    let r_e = curve.r_e_bohr.value;
    let x = if widest > 0.0 {
        (to_angstrom((r_e - widest).max(first)), to_angstrom((r_e + widest).min(last)))
    } else {
        view?.x
    };
    let height = measure.tolerance(reach).map(|t| 4.0 * t).or_else(|| {
        // No tolerance: whatever the line does between the ends of the reach, four times over.
        let at = [interval.x_minus_bohr, interval.x_plus_bohr].map(|x| x.map(|x| to_angstrom(r_e + x)));
        let lines = figure.series.iter().filter_map(|s| match &s.shape {
            Shape::Line(points) if s.role == Role::Scanned => Some(points),
            _ => None,
        });
        let (from, to) = (at[0].unwrap_or(x.0), at[1].unwrap_or(x.1));
        let inside = lines.flatten().filter(|p| p[0] >= from && p[0] <= to);
        Some(4.0 * inside.map(|p| p[1].abs()).fold(0.0, f64::max))
    })?;
    Some(Bounds { x, y: (-height, height) }).filter(Bounds::is_valid)
}

impl Layout<'_> {
    fn new(size_pt: [f64; 2], font_pt: f64, dark: bool) -> Self {
        let palette = if dark { &palette::DARK } else { &palette::LIGHT };
        Self { palette, face: TypeFace::get(), font_pt, unit: font_pt / 9.0, size_pt }
    }

    /// Width of a text in points.
    fn width(&self, text: &str, size_pt: f64) -> f64 {
        self.face.width_pt(text, size_pt)
    }

    fn solid(&self, colour: Rgb, width: f64) -> Stroke {
        Stroke { colour, width_pt: width * self.unit, dashes_pt: Vec::new() }
    }

    /// The line of a role.
    fn stroke(&self, role: Role, width: f64) -> Stroke {
        use super::LineStyle;
        let dashes: &[f64] = match role.line_style() {
            LineStyle::Solid => &[],
            LineStyle::Dashed => &[5.0, 3.0],
            LineStyle::LongDashed => &[10.0, 3.5],
            LineStyle::Dotted => &[1.4, 2.1],
            LineStyle::ShortDashed => &[2.5, 2.5],
        };
        Stroke {
            colour: self.palette.role(role),
            width_pt: width * self.unit,
            dashes_pt: dashes.iter().map(|d| d * self.unit).collect(),
        }
    }

    /// A text that stands back.
    fn dim_text(&self, at: [f64; 2], text: impl Into<String>, anchor: Anchor) -> Item {
        Item::Text {
            at,
            text: text.into(),
            size_pt: 0.9 * self.font_pt,
            colour: self.palette.dim,
            anchor,
            upwards: false,
        }
    }

    fn text(&self, at: [f64; 2], text: impl Into<String>, anchor: Anchor) -> Item {
        Item::Text {
            at,
            text: text.into(),
            size_pt: self.font_pt,
            colour: self.palette.text,
            anchor,
            upwards: false,
        }
    }
}

fn line(points: Vec<[f64; 2]>, stroke: Stroke, opacity: f64) -> Item {
    Item::Path { points, closed: false, stroke: Some(stroke), fill: None, opacity }
}

fn area(points: Vec<[f64; 2]>, fill: Rgb, opacity: f64) -> Item {
    Item::Path { points, closed: true, stroke: None, fill: Some(fill), opacity }
}
