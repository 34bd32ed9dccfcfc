//! The window study as a picture: ω_e, ω_e x_e and k against the half width of the window, one line a model.

use super::geometry::Bounds;
use super::{Axis, Figure, Role, Series, Shape, number};
use crate::estimate::Estimate;
use crate::findings::Findings;
use crate::fit::window_study::{Plateau, WindowFit, WindowNumbers, WindowStudy};
use crate::fit::{Family, FitRequest, Window};
use crate::units::{LengthUnit, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, to_angstrom};

const HALF_WIDTH: Axis = Axis { title: "half width of the window", unit: "Å" };

/// A window of the study that can be taken.
#[derive(Clone, Debug, PartialEq)]
pub struct WindowTarget {
    /// What it is, in words.
    pub label: String,
    /// The window.
    pub window: Window,
    /// The model fitted in it.
    pub model: FitRequest,
    /// Its place in each of the figures, in the units of their axes.
    pub at: Vec<Option<[f64; 2]>>,
}

/// The window study, drawing-free.
#[derive(Clone, Debug, PartialEq)]
pub struct WindowPicture {
    /// ω_e, ω_e x_e (both only with a mass) and k, one above the other on one abscissa.
    pub figures: Vec<Figure>,
    /// What of each is shown: the plateau and what lies near it.
    pub bounds: Vec<Bounds>,
    /// The symmetric windows that gave a fit.
    pub targets: Vec<WindowTarget>,
    /// Index of the proposal among them.
    pub proposal: Option<usize>,
    /// What the study says, in a sentence or two.
    pub sentence: String,
}

/// One quantity of a fit in the unit of its axis.
type Quantity = fn(&WindowNumbers) -> Option<Estimate>;

fn k_of(numbers: &WindowNumbers) -> Option<Estimate> {
    Some(numbers.force_constant_hartree_per_bohr2.scaled(NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2))
}

const QUANTITIES: [(Axis, Quantity); 3] = [
    (Axis { title: "ωₑ", unit: "cm⁻¹" }, |n| n.omega_e_per_cm),
    (Axis { title: "ωₑxₑ", unit: "cm⁻¹" }, |n| n.omega_e_x_e_per_cm),
    (Axis { title: "k", unit: "N/m" }, k_of),
];

impl WindowPicture {
    /// The picture of the findings' window study; none without one or without a fit in it.
    pub fn of(findings: &Findings) -> Option<Self> {
        Self::of_study(findings.window_study.as_ref()?, Self::half_width_in_force_angstrom(findings))
    }

    /// How far the window of the fits reaches from r_e on its wider side; none without a fit.
    pub fn half_width_in_force_angstrom(findings: &Findings) -> Option<f64> {
        let (from, to) = findings.fits.iter().find_map(|f| f.result.as_ref().ok())?.window_bohr;
        let r_e = findings.curve.as_ref()?.local.r_e_bohr;
        Some(to_angstrom((r_e - from).max(to - r_e)))
    }

    /// The same of a study that is not among findings; `in_force_angstrom` is the half width of the window in force.
    pub fn of_study(study: &WindowStudy, in_force_angstrom: Option<f64>) -> Option<Self> {
        let shown = |f: &&WindowFit| f.symmetric && f.numbers.is_ok();
        let widest = study.fits.iter().filter(shown).map(|f| to_angstrom(f.half_width_bohr()));
        let widest = widest.fold(0.0, f64::max);
        if widest <= 0.0 {
            return None;
        }
        let x = (0.0, 1.03 * widest);
        let plateau = study.proposed.and_then(|i| study.plateaus.get(i));
        let (mut figures, mut bounds, mut quantities) = (Vec::new(), Vec::new(), Vec::<Quantity>::new());
        for (y, quantity) in QUANTITIES {
            let series = lines(study, quantity);
            let Some(range) = ordinates(&series, plateau, study, quantity) else { continue };
            let figure = Figure {
                x: HALF_WIDTH,
                y,
                series: [behind(plateau, in_force_angstrom, range), series, proposal(study, quantity)]
                    .concat(),
            };
            bounds.push(Bounds { x, y: range });
            figures.push(figure);
            quantities.push(quantity);
        }
        let mut targets = Vec::new();
        let mut proposed = None;
        for (index, fit) in study.fits.iter().enumerate().filter(|(_, f)| shown(f)) {
            if plateau.is_some_and(|p| p.middle == index) {
                proposed = Some(targets.len());
            }
            targets.push(WindowTarget {
                label: format!("{}, {}", running(study.models[fit.model]), words(fit)),
                window: fit.window,
                model: study.models[fit.model],
                at: quantities.iter().map(|quantity| place(fit, *quantity)).collect(),
            });
        }
        Some(Self { figures, bounds, targets, proposal: proposed, sentence: sentence(study, plateau) })
    }

    /// The target nearest to a place of one figure, in shares of its bounds; none beyond a twentieth of them.
    pub fn nearest(&self, figure: usize, at: [f64; 2]) -> Option<usize> {
        let bounds = self.bounds.get(figure)?;
        let (width, height) = (bounds.x.1 - bounds.x.0, bounds.y.1 - bounds.y.0);
        let distance = |target: &WindowTarget| {
            let [x, y] = (*target.at.get(figure)?)?;
            Some(((x - at[0]) / width).hypot((y - at[1]) / height))
        };
        let found = self.targets.iter().enumerate().filter_map(|(i, t)| Some((i, distance(t)?)));
        found.min_by(|a, b| a.1.total_cmp(&b.1)).filter(|(_, d)| *d < 0.05).map(|(i, _)| i)
    }
}

fn place(fit: &WindowFit, quantity: Quantity) -> Option<[f64; 2]> {
    let value = quantity(fit.numbers.as_ref().ok()?)?.value;
    value.is_finite().then(|| [to_angstrom(fit.half_width_bohr()), value])
}

fn role(model: FitRequest) -> Role {
    match (model.family, model.degree) {
        (Family::Polynomial, Some(degree)) => Role::Degree(degree),
        (family, _) => super::fit_role(family),
    }
}

/// `degree 6`, `Morse`.
fn label(model: FitRequest) -> String {
    match (model.family, model.degree) {
        (Family::Polynomial, Some(degree)) => format!("degree {degree}"),
        (family, Some(order)) => format!("{} {order}", family.running_name()),
        (family, None) => family.running_name().to_owned(),
    }
}

fn running(model: FitRequest) -> String {
    let name = label(model);
    if model.family == Family::Polynomial { format!("polynomial of {name}") } else { name }
}

fn words(fit: &WindowFit) -> String {
    let edge = |r: f64| number::fixed(fit.window.unit.convert(r, LengthUnit::Angstrom), 3);
    format!("{} to {} Å, {} points", edge(fit.window.from), edge(fit.window.to), fit.points)
}

/// The symmetric windows of a model that are no less balanced than their neighbours: each further window gains a point
/// on one side only, and a line through all of them would show little but that. The proposal is always among them.
fn balanced(study: &WindowStudy, model: usize) -> Vec<&WindowFit> {
    let all: Vec<&WindowFit> = study.fits.iter().filter(|f| f.model == model && f.symmetric).collect();
    let tilt = |i: usize| all.get(i).map_or(f64::INFINITY, |f| (f.below_bohr - f.above_bohr).abs());
    let proposal = study.proposal().map(|f| f.window);
    let kept = |i: usize| {
        let before = if i > 0 { tilt(i - 1) } else { f64::INFINITY };
        tilt(i) <= before && tilt(i) <= tilt(i + 1) || Some(all[i].window) == proposal
    };
    (0..all.len()).filter(|&i| kept(i)).map(|i| all[i]).collect()
}

/// One line a model over its symmetric windows, broken where there is no fit.
fn lines(study: &WindowStudy, quantity: Quantity) -> Vec<Series> {
    let line = |(index, &model): (usize, &FitRequest)| {
        let windows = balanced(study, index).into_iter();
        let points: Vec<[f64; 2]> = windows
            .map(|f| place(f, quantity).unwrap_or([to_angstrom(f.half_width_bohr()), f64::NAN]))
            .collect();
        points.iter().any(|p| p[1].is_finite()).then(|| Series {
            role: role(model),
            label: label(model),
            about: format!("The {} in symmetric windows of rising width.", running(model)),
            strong: None,
            shape: Shape::Line(points),
        })
    };
    study.models.iter().enumerate().filter_map(line).collect()
}

/// Plateau and window in force.
fn behind(plateau: Option<&Plateau>, in_force: Option<f64>, (low, high): (f64, f64)) -> Vec<Series> {
    let series = |role, label: &str, about: &str, shape| Series {
        role,
        label: label.to_owned(),
        about: about.to_owned(),
        strong: None,
        shape,
    };
    let band = plateau.map(|p| {
        let ends = [p.from_half_width_bohr, p.to_half_width_bohr].map(to_angstrom);
        let about = "Half widths over which ωₑ of the model proposed hardly changes.";
        series(Role::Reach, "plateau", about, Shape::Band(Some(ends[0]), Some(ends[1])))
    });
    let line = in_force.map(|half| {
        let about = "The half width of the window the fits use now.";
        series(Role::Zero, "window in force", about, Shape::Line(vec![[half, low], [half, high]]))
    });
    band.into_iter().chain(line).collect()
}

fn proposal(study: &WindowStudy, quantity: Quantity) -> Vec<Series> {
    let at = study.proposal().and_then(|fit| place(fit, quantity));
    let ring = |at| Series {
        role: Role::Proposal,
        label: "proposed window".to_owned(),
        about: "In the geometric middle of the plateau.".to_owned(),
        strong: None,
        shape: Shape::Points(vec![at]),
    };
    at.map(ring).into_iter().collect()
}

/// Half of the values lie within this distance of the proposal, in the picture a third of the way to its border.
const DISTANCES_SHOWN: f64 = 3.0;

/// The range of ordinates: about the proposal (else the median), as far as half of the values and a bit more.
fn ordinates(
    series: &[Series],
    plateau: Option<&Plateau>,
    study: &WindowStudy,
    quantity: Quantity,
) -> Option<(f64, f64)> {
    let mut values: Vec<f64> = Vec::new();
    for line in series {
        if let Shape::Line(points) = &line.shape {
            values.extend(points.iter().map(|p| p[1]).filter(|v| v.is_finite()));
        }
    }
    values.sort_by(f64::total_cmp);
    let median = *values.get(values.len() / 2)?;
    let proposed = plateau.and_then(|p| place(study.fits.get(p.middle)?, quantity));
    let centre = proposed.map_or(median, |p| p[1]);
    let mut distances: Vec<f64> = values.iter().map(|v| (v - centre).abs()).collect();
    distances.sort_by(f64::total_cmp);
    let half = (DISTANCES_SHOWN * distances[distances.len() / 2]).max(1e-4 * centre.abs()).max(1e-9);
    Some((centre - half, centre + half))
}

/// An estimate with half the relative spread over the plateau beside its own error: a fit knows nothing of what the
/// choice of its window does.
fn widened(estimate: Estimate, spread: f64) -> Estimate {
    let by_window = 0.5 * spread * estimate.value.abs();
    let error = estimate.std_error.map_or(by_window, |own| own.hypot(by_window));
    Estimate { std_error: Some(error), ..estimate }
}

fn sentence(study: &WindowStudy, plateau: Option<&Plateau>) -> String {
    let Some((plateau, fit)) = plateau.zip(study.proposal()) else {
        return "No plateau: the curvature of every model changes with the window by more than 2 %."
            .to_owned();
    };
    let numbers = fit.numbers.as_ref().ok();
    let what = match numbers.and_then(|n| n.omega_e_per_cm) {
        Some(omega) => format!("ωₑ = {} cm⁻¹", number::estimate(&widened(omega, plateau.spread), 2)),
        None => {
            let k = numbers.and_then(k_of).unwrap_or(Estimate::exact(f64::NAN));
            format!("k = {} N/m", number::estimate(&widened(k, 2.0 * plateau.spread), 2))
        }
    };
    let half = |r: f64| number::fixed(to_angstrom(r), 3);
    format!(
        "{what} stays within {} % for half widths from {} to {} Å ({}, {} windows). Proposed: {}.",
        crate::digits::rounded(100.0 * plateau.spread, 1),
        half(plateau.from_half_width_bohr),
        half(plateau.to_half_width_bohr),
        running(study.models[plateau.model]),
        plateau.windows,
        words(fit)
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::window_study::WindowStudySettings;
    use crate::settings::Settings;

    /// 3 and 4 make 5: the error of the fit and half of the spread.
    #[test]
    fn the_error_told_counts_the_spread_over_the_plateau() {
        let own = Estimate::with_error(1000.0, 3.0, crate::estimate::ErrorSource::Fit);
        assert!((widened(own, 0.008).std_error.unwrap() - 5.0).abs() < 1e-12);
        assert!((widened(Estimate::exact(1000.0), 0.008).std_error.unwrap() - 4.0).abs() < 1e-12);
    }

    fn pictured(text: &str, name: &str, atoms: &str) -> WindowPicture {
        let scan = crate::scan::read::read_scan(name, text.as_bytes(), &Default::default()).unwrap();
        let mut settings = Settings::default();
        settings.masses.atoms = Some(crate::species::parse_atoms(atoms).unwrap());
        settings.fits.window_study = Some(WindowStudySettings::default());
        WindowPicture::of(&crate::study::study(&scan, &settings).unwrap()).unwrap()
    }

    #[test]
    fn the_proposal_lies_on_the_plateau_and_answers_to_a_click() {
        let text = include_str!("../../sample-scans/lih_X_A.csv");
        let picture = pictured(text, "lih_X_A.csv", "Li,H");
        println!("{}", picture.sentence);
        assert_eq!(picture.figures.len(), 3);
        let proposal = picture.proposal.unwrap();
        let at = picture.targets[proposal].at[0].unwrap();
        let band = picture.figures[0].series.iter().find_map(|s| match s.shape {
            Shape::Band(Some(a), Some(b)) => Some((a, b)),
            _ => None,
        });
        let (a, b) = band.unwrap();
        assert!(a <= at[0] && at[0] <= b);
        let bounds = picture.bounds[0];
        assert!((bounds.y.0..bounds.y.1).contains(&at[1]) && (bounds.x.0..bounds.x.1).contains(&at[0]));
        // A click on the ring takes that window, whichever of two models that lie there is nearer.
        let taken = picture.nearest(0, at).unwrap();
        assert_eq!(picture.targets[taken].window, picture.targets[proposal].window);
        assert!(picture.nearest(0, [0.0, bounds.y.1]).is_none() && picture.nearest(9, at).is_none());
        assert!(picture.sentence.contains("Proposed") && picture.sentence.contains("ωₑ"));
        // The parabola has no anharmonicity.
        assert!(picture.figures[1].series.iter().all(|s| s.label != "harmonic"));
    }
}
