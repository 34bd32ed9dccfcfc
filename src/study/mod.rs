//! The study: one pure function from scan and settings to findings. This file is only the order of the
//! steps; each step has a file of its own or belongs to an area of its own.

mod densities;
mod derived;
mod fits;
mod isotopologues;
mod levels;
mod next_points;
mod points;
mod properties;
mod remarks;
mod rotation;
mod support;
#[cfg(test)]
mod tail_checks;
mod tail_spread;
mod thermal;
mod weights;

use crate::density::Densities;
use crate::findings::{Findings, Source};
use crate::fit::curve::build_curve;
use crate::fit::{Comparison, FitPoint};
use crate::notice::{Code, Notice};
use crate::potential::curve::ScanCurve;
use crate::reach;
use crate::scan::Scan;
use crate::scan::error::ScanError;
use crate::settings::{Settings, SettingsError};
use crate::species::{self, Masses, SpeciesError};
use crate::spectroscopy::{self, Constants, DunhamChoice, LevelSet};
use std::sync::Arc;
use thiserror::Error;

pub use densities::{LevelDensities, level_densities};
pub use fits::{bootstrap_fit, study_windows, take_bootstraps};
pub use rotation::{RotatingLevels, rotating_levels};

/// Why settings and scan do not fit together (a wrong name, not a bad curve).
#[derive(Clone, Debug, PartialEq, Error)]
pub enum StudyError {
    /// No energy column answers to the name.
    #[error(transparent)]
    Curve(#[from] ScanError),
    /// The atoms or the mass do not exist.
    #[error(transparent)]
    Species(#[from] SpeciesError),
    /// A setting makes no sense.
    #[error(transparent)]
    Settings(#[from] SettingsError),
    /// Weights are asked of a column that the file does not have.
    #[error("weights: {0}")]
    Weights(ScanError),
    /// A row is set aside or weighted that the scan does not have.
    #[error("row {row} is {what}, but the scan has {rows} rows; counted from 0")]
    Row {
        /// What is done to it.
        what: &'static str,
        /// The row.
        row: usize,
        /// How many rows there are.
        rows: usize,
    },
}

/// A stage of a study, for progress and timings.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stage {
    /// Points in use and their inspection.
    Points,
    /// The curve through them.
    Curve,
    /// The fits.
    Fits,
    /// The levels with wavefunctions, B_v, turning points and averages.
    Levels,
    /// The standard errors of the levels, and which of them lean on a tail.
    LevelErrors,
    /// The centrifugal constants D_v and H_v.
    Distortion,
    /// The constants.
    Constants,
    /// The reach.
    Reach,
    /// The figures of the densities.
    Densities,
    /// The thermal averages.
    Thermal,
    /// Rotation, quasi-bound levels, averages, isotopologues, Y_kl: mostly on demand.
    Further,
}

impl Stage {
    /// Its name in timings.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Points => "points",
            Self::Curve => "curve",
            Self::Fits => "fits",
            Self::Levels => "levels",
            Self::LevelErrors => "level_errors",
            Self::Distortion => "distortion",
            Self::Constants => "constants",
            Self::Reach => "reach",
            Self::Densities => "densities",
            Self::Thermal => "thermal",
            Self::Further => "further",
        }
    }
}

/// Whether a stage begins or has ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mark {
    /// It begins.
    Begins,
    /// It has ended.
    Ended,
}

/// Is told of every stage, from the thread it runs on: the fits run beside the levels.
pub type Observer<'a> = dyn Fn(Stage, Mark) + Sync + 'a;

/// Does `work`, telling the observer when it begins and when it has ended.
fn observed<T>(observer: &Observer, stage: Stage, work: impl FnOnce() -> T) -> T {
    observer(stage, Mark::Begins);
    let result = work();
    observer(stage, Mark::Ended);
    result
}

/// Studies one curve of a scan.
///
/// Pure: reads no file, no clock, no environment; the same scan and settings give the same findings.
///
/// # Errors
/// [`StudyError`] when the settings name something that the scan does not have. A curve that cannot
/// be studied is no error here: its findings say why in a `stop` notice.
pub fn study(scan: &Scan, settings: &Settings) -> Result<Findings, StudyError> {
    study_observed(scan, settings, &|_, _| ())
}

/// The same, telling `observer` of the beginning and the end of each stage.
///
/// # Errors
/// As [`study`].
pub fn study_observed(scan: &Scan, settings: &Settings, observer: &Observer) -> Result<Findings, StudyError> {
    settings.checked()?;
    let column = &scan.energies[scan.curve_index(settings.curve.as_deref())?];
    let masses = species::masses(&settings.masses, scan.atoms.as_ref(), scan.charge)?;
    let pairs = isotopologues::masses(settings, scan.charge)?;
    let (points, mut notices) = observed(observer, Stage::Points, || points::points(scan, column, settings))?;

    let mut findings = Findings {
        source: Source {
            file_name: scan.file_name.clone(),
            sha256: scan.sha256.clone(),
            layout: scan.layout,
            curve: column.name.clone(),
            curve_label: column.label.clone(),
            made: column.made.clone(),
            length_unit: scan.length_unit,
            energy_unit: column.unit,
            length_column: scan.length_column.clone(),
            points,
        },
        masses,
        settings: settings.clone(),
        curve: None,
        fits: Vec::new(),
        comparison: Comparison::default(),
        window_study: None,
        levels: Vec::new(),
        rotational_levels: Vec::new(),
        quasi_bound: None,
        property_averages: Vec::new(),
        isotopologues: Vec::new(),
        level_support: None,
        dunham_table: None,
        birge_sponer: None,
        near_dissociation: None,
        constants: Constants::default(),
        reach: None,
        densities: Densities::default(),
        morse_positions: Vec::new(),
        thermal: Vec::new(),
        rotating_sum: None,
        next_points: Vec::new(),
        notices: scan.notices.clone(),
    };
    findings.notices.append(&mut notices);

    let used = points::in_use(&findings.source.points);
    let asymptote_hartree = settings.interpolation.asymptote.map(|e| column.unit.to_hartree(e));
    let built = observed(observer, Stage::Curve, || {
        build_curve(&used, asymptote_hartree, &settings.interpolation).map(|(mut curve, remarks)| {
            doubt(&mut curve, &findings.notices, &used, asymptote_hartree, settings);
            (curve, remarks)
        })
    });
    match built {
        Ok((curve, mut remarks)) => {
            findings.curve = Some(Arc::new(curve));
            findings.notices.append(&mut remarks);
        }
        Err(error) => findings.notices.push(error.notice()),
    }
    if findings.curve.is_some() {
        study_curve(&mut findings, observer);
        observed(observer, Stage::Further, || further(&mut findings, scan, &pairs));
    }
    if let Some(curve) = findings.curve.clone() {
        remarks::remark(&mut findings, &curve, column);
    }
    let curve = findings.curve.clone();
    next_points::fill(&mut findings, curve.as_deref());
    // Atoms that were chosen come from no comment.
    if settings.masses.atoms.is_some() || settings.masses.reduced_mass_u.is_some() {
        findings.notices.retain(|n| n.code != Code::AtomsFromComment);
    }
    // The gravest first; within one severity the order of the steps is kept. Where the atoms were read is what least
    // needs to be looked at.
    findings.notices.sort_by_key(|n| (std::cmp::Reverse(n.severity), n.code == Code::AtomsFromComment));
    Ok(findings)
}

/// Points that the inspection found off the curve make the curve without them one that may be true.
fn doubt(
    curve: &mut ScanCurve,
    notices: &[Notice],
    used: &[FitPoint],
    asymptote_hartree: Option<f64>,
    settings: &Settings,
) {
    let off: Vec<f64> =
        notices.iter().filter(|n| n.code == Code::OffCurve).flat_map(|n| n.at_bohr.iter().copied()).collect();
    if off.is_empty() {
        return;
    }
    let rest: Vec<FitPoint> = used.iter().filter(|p| !off.contains(&p.r_bohr)).copied().collect();
    if rest.len() == used.len() {
        return;
    }
    if let Ok((without, _)) = build_curve(&rest, asymptote_hartree, &settings.interpolation) {
        curve.set_without_doubtful(&without);
    }
}

/// What the levels lead to, and what is computed only on demand.
fn further(findings: &mut Findings, scan: &Scan, pairs: &[Masses]) {
    let (Some(curve), Some(masses)) = (findings.curve.clone(), &findings.masses) else { return };
    let mass_me = masses.reduced_mass_me;
    isotopologues::fill(findings, &curve, pairs);
    if findings.levels.is_empty() {
        return;
    }
    properties::fill(findings, scan);
    support::fill(findings, &curve, mass_me);
    let reach = reach::energy_and_force_reach(&curve, &findings.settings.reach).map(|(energy, _)| energy);
    rotation::fill(findings, &curve, mass_me, reach.as_ref());
    let settings = &findings.settings.levels;
    let choice = DunhamChoice {
        highest_v: settings.dunham_highest_v,
        vibration_degree: settings.dunham_vibration_degree,
        rotation_degree: settings.dunham_rotation_degree,
        lambda: settings.lambda,
    };
    findings.dunham_table =
        spectroscopy::dunham_table(findings.levels.iter().chain(&findings.rotational_levels), choice);
    findings.birge_sponer = spectroscopy::birge_sponer(&findings.levels);
    findings.near_dissociation = spectroscopy::inverse_power_tail(&curve)
        .and_then(|(limit, tail)| spectroscopy::near_dissociation(&findings.levels, limit, tail, mass_me));
}

/// Everything that needs a curve.
fn study_curve(findings: &mut Findings, observer: &Observer) {
    let Some(curve) = findings.curve.clone() else { return };
    let mass_me = findings.masses.as_ref().map(|m| m.reduced_mass_me);
    let reach = reach::energy_and_force_reach(&curve, &findings.settings.reach).map(|(energy, _)| energy);
    let settings = findings.settings.levels.clone();
    let question =
        mass_me.map(|mass_me| levels::Question { settings: &settings, mass_me, reach: reach.as_ref(), j: 0 });
    // The fits and the levels know nothing of each other: a thread each.
    let solved = std::thread::scope(|scope| {
        let fitting = scope.spawn(|| observed(observer, Stage::Fits, || fits::fit_all(findings, &curve)));
        let solved = question.as_ref().map(|question| {
            let states = observed(observer, Stage::Levels, || levels::states(&curve, question));
            let mut solved =
                observed(observer, Stage::LevelErrors, || levels::judged(&curve, question, states));
            observed(observer, Stage::Distortion, || solved.distort());
            solved
        });
        if let Err(panic) = fitting.join() {
            std::panic::resume_unwind(panic);
        }
        solved
    });
    if let Some(mut solved) = solved {
        findings.levels = solved.levels;
        findings.notices.append(&mut solved.notices);
        levels::beside_morse(findings);
    } else {
        let text =
            "No levels without a mass: name the two atoms (--atoms) or a reduced mass (--reduced-mass).";
        findings.notices.push(Notice::info(Code::NoMass, text));
    }

    let set = LevelSet {
        highest_v: findings.settings.levels.constants_highest_v,
        degree: findings.settings.levels.constants_degree,
    };
    findings.constants = observed(observer, Stage::Constants, || {
        let constants = spectroscopy::constants(&curve, mass_me, &findings.levels, set);
        let given = findings.settings.interpolation.asymptote.is_some();
        if given { constants } else { constants.with_limit_from_points() }
    });
    findings.reach = observed(observer, Stage::Reach, || {
        reach::reach(&curve, mass_me, &findings.levels, &findings.settings.reach)
    });
    observed(observer, Stage::Densities, || densities::fill(findings, &curve));
    observed(observer, Stage::Thermal, || thermal::fill(findings, &curve));
}
