//! The fits of a study: the points in the window with their weights, each model, and what follows from the
//! fitted function.

use super::derived;
use super::points::fit_point;
use crate::estimate::Estimate;
use crate::findings::{Findings, FitBootstrap, FitFindings};
use crate::fit::comparison::{compare, label};
use crate::fit::window_study::{Stopped, WindowStudy, WindowStudyInput, WindowStudySettings, window_study};
use crate::fit::{
    BootstrapError, BootstrapSettings, Fit, FitError, FitPoint, FitRequest, Variance, WeightedPoint,
    Weighting, Window, bootstrap, declared_weight_per_hartree2, fit_with,
};
use crate::notice::{Code, Notice};
use crate::potential::curve::{LocalDerivatives, ScanCurve};
use crate::potential::{Family, Model, Potential as _};
use crate::reach::fit_reach;
use crate::spectroscopy::dunham;
use crate::units::to_per_cm;

/// Does every fit that the settings ask for.
pub fn fit_all(findings: &mut Findings, curve: &ScanCurve) {
    weigh(findings, curve);
    let Some(window) = findings.window() else { return };
    let (inside, outside) = split(findings, curve, window);
    let variance = findings.settings.fits.weights.variance(curve.noise_hartree);
    let mass_me = mass_me(findings);
    for request in findings.settings.fits.requests.clone() {
        let mut found = one_fit(request, &inside, window, variance, mass_me);
        if let Ok(fit) = &found.result {
            let settings = &findings.settings.reach;
            let tolerances = (settings.tolerance, settings.absolute.hartree());
            let band = |r: f64| fit.band_hartree(r).map(|b| (b, fit.error_source()));
            found.reach = Some(fit_reach(curve, &fit.model, tolerances, &band));
        }
        match &found.result {
            Ok(fit) => {
                findings.notices.extend(fit.notices.iter().cloned());
                findings.notices.extend(remarks(fit, curve));
            }
            Err(error) => findings.notices.push(failure(request, error)),
        }
        findings.fits.push(found);
    }
    let pairs: Vec<(FitRequest, &Result<Fit, FitError>)> =
        findings.fits.iter().map(|f| (f.request, &f.result)).collect();
    findings.comparison = compare(&pairs, &outside);
    if let Some(settings) = findings.settings.fits.bootstrap {
        let found = (0..findings.fits.len()).map(|i| bootstrap_fit(findings, i, settings, &mut |_, _| true));
        let found = found.map(|f| f.map_err(|e| e.to_string()).transpose()).collect();
        take_bootstraps(findings, settings, found);
    }
    if let Some(settings) = &findings.settings.fits.window_study {
        findings.window_study = study_windows(findings, settings, &mut |_, _| true).ok().flatten();
    }
}

/// The fits over all sensible windows. None without a curve.
///
/// Takes the points and weights of the findings as they are; `progress` gets (done, all) after each fit and stops the
/// work by returning false.
///
/// # Errors
/// [`Stopped`].
pub fn study_windows(
    findings: &Findings,
    settings: &WindowStudySettings,
    progress: &mut dyn FnMut(usize, usize) -> bool,
) -> Result<Option<WindowStudy>, Stopped> {
    let Some(curve) = findings.curve.as_deref() else { return Ok(None) };
    let unit = findings.source.length_unit;
    let used = findings.source.points.iter().filter(|p| p.used);
    let r_as_read: Vec<f64> = used.map(|p| p.r_as_read).collect();
    let (Some(&from), Some(&to)) = (r_as_read.first(), r_as_read.last()) else { return Ok(None) };
    let (points, _) = split(findings, curve, Window { from, to, unit });
    let input = WindowStudyInput {
        points: &points,
        r_as_read: &r_as_read,
        unit,
        r_e_bohr: curve.local.r_e_bohr,
        variance: findings.settings.fits.weights.variance(curve.noise_hartree),
    };
    let mass_me = mass_me(findings);
    let constants = |local: &LocalDerivatives| {
        let c = dunham(local, mass_me?);
        Some([c.omega_e_per_cm, c.omega_e_x_e_per_cm])
    };
    window_study(input, settings, &constants, progress).map(Some)
}

fn mass_me(findings: &Findings) -> Option<f64> {
    findings.masses.as_ref().map(|m| m.reduced_mass_me)
}

/// Gives the points their weights; declared ones in cm² (1/σ², σ in cm⁻¹).
fn weigh(findings: &mut Findings, curve: &ScanCurve) {
    let weights = &findings.settings.fits.weights;
    if matches!(weights, Weighting::Noise { sigma_per_cm: None }) && curve.noise_hartree.is_none() {
        let text = "No noise can be told from these points, so the fits weight them alike; state it to weight by it.";
        findings.notices.push(Notice::info(Code::Noise, text));
    }
    for point in &mut findings.source.points {
        point.weight = weights.weight(WeightedPoint {
            row: point.row,
            above_minimum_hartree: point.energy_hartree - curve.v_e_hartree.value,
            noise_hartree: curve.noise_hartree,
            given: point.weight,
        });
    }
}

/// The points in use inside and outside the window, as fits take them.
fn split(findings: &Findings, curve: &ScanCurve, window: Window) -> (Vec<FitPoint>, Vec<FitPoint>) {
    let declared = findings.settings.fits.weights.variance(curve.noise_hartree) == Variance::Declared;
    let (mut inside, mut outside) = (Vec::new(), Vec::new());
    for point in findings.source.points.iter().filter(|p| p.used) {
        let mut taken = fit_point(point);
        if declared {
            taken.weight = declared_weight_per_hartree2(taken.weight);
        }
        let part = if window.contains(point.r_as_read, findings.source.length_unit) {
            &mut inside
        } else {
            &mut outside
        };
        part.push(taken);
    }
    (inside, outside)
}

fn one_fit(
    request: FitRequest,
    points: &[FitPoint],
    window: Window,
    variance: Variance,
    mass_me: Option<f64>,
) -> FitFindings {
    let result = fit_with(request, points, window, variance);
    let (mut constants_per_cm, mut levels) = (Vec::new(), Vec::<Estimate>::new());
    if let (Ok(fit), Some(mass_me)) = (&result, mass_me) {
        (constants_per_cm, levels) = derived::derived(fit, mass_me);
    }
    FitFindings {
        request,
        result,
        constants_per_cm,
        levels_per_cm: levels.iter().map(|e| e.value).collect(),
        level_errors_per_cm: levels.iter().map(|e| e.std_error).collect(),
        reach: None,
        bootstrap: None,
    }
}

/// Standard errors of the fit at `index` and of its constants and levels, by resampled residuals. None where
/// there is no such fit.
///
/// Takes the points and weights of the findings as they are; `progress` gets (done, all) after each repeat and stops
/// the work by returning false.
///
/// # Errors
/// [`BootstrapError`].
pub fn bootstrap_fit(
    findings: &Findings,
    index: usize,
    settings: BootstrapSettings,
    progress: &mut dyn FnMut(usize, usize) -> bool,
) -> Result<Option<FitBootstrap>, BootstrapError> {
    let Some(found) = findings.fits.get(index) else { return Ok(None) };
    let (Ok(fit), Some(curve)) = (&found.result, findings.curve.as_deref()) else { return Ok(None) };
    let (points, _) = split(findings, curve, fit.window);
    let mass_me = mass_me(findings);
    let quantities = |model: &Model| mass_me.map_or_else(Vec::new, |mass| derived::values(model, mass));
    let spread = bootstrap(fit, &points, settings, &quantities, progress)?;
    let constants = derived::NAMES.len().min(spread.quantity_errors.len());
    let (constant_errors, level_errors) = spread.quantity_errors.split_at(constants);
    Ok(Some(FitBootstrap {
        settings,
        failed: spread.failed,
        parameter_errors: spread.parameter_errors,
        constant_errors_per_cm: constant_errors.to_vec(),
        level_errors_per_cm: level_errors.to_vec(),
    }))
}

/// Puts resampled errors, one entry a fit, where the study itself would have put them.
pub fn take_bootstraps(
    findings: &mut Findings,
    settings: BootstrapSettings,
    found: Vec<Option<Result<FitBootstrap, String>>>,
) {
    findings.settings.fits.bootstrap = Some(settings);
    for (fit, found) in findings.fits.iter_mut().zip(found) {
        fit.bootstrap = None;
        match found {
            None => {}
            Some(Ok(errors)) => fit.bootstrap = Some(errors),
            Some(Err(error)) => {
                let family = fit.request.family.title();
                let text = format!("No resampled errors of the {family} fit: {error}.");
                findings.notices.push(Notice::caution(Code::NotConverged, text));
            }
        }
    }
}

fn failure(request: FitRequest, error: &FitError) -> Notice {
    let text = format!("There is no {} fit: {error}.", request.family.title());
    Notice::caution(error.code(), text)
}

/// Iterated fits below this condition have lost half of their digits.
const ILL_CONDITIONED: f64 = 1e-8;
/// A window is narrow for a model when the parameter that needs it most has a standard error above this share of it,
const NARROW: f64 = 0.5;
/// and wide when the curvature at the minimum of the fit misses that of the curve by more than this share.
const WIDE: f64 = 0.01;

/// What a fit that succeeded leaves doubtful.
fn remarks(fit: &Fit, curve: &ScanCurve) -> Vec<Notice> {
    let name = label(fit);
    let mut notices = Vec::new();
    if let Some(condition) = fit.reciprocal_condition.filter(|c| *c < ILL_CONDITIONED) {
        let text = format!(
            "The points hardly tell the parameters of the {name} fit apart (reciprocal condition number {condition:.1e}); \
             widen the window or take fewer parameters."
        );
        notices.push(Notice::caution(Code::IllConditioned, text));
    }
    // The last parameter of a series, the depth of a well.
    let depth = fit.parameters.iter().find(|p| p.name == "d_e");
    let last = fit.parameters.last().filter(|_| fit.model.family() == Family::Polynomial).or(depth);
    if let Some(parameter) = last
        && let Some(error) = parameter.estimate.std_error
        && error > NARROW * parameter.estimate.value.abs()
    {
        let text = format!(
            "The window is narrow for the {name} fit: the standard error of {} is {:.0} % of its value. Widen the window \
             or take fewer parameters.",
            parameter.name,
            100.0 * error / parameter.estimate.value.abs()
        );
        notices.push(Notice::info(Code::NarrowWindow, text));
    }
    let second = fit.model.derivatives_hartree(fit.model.minimum_bohr())[2];
    let bias = second / curve.local.second_hartree - 1.0;
    let misfit = fit.notices.iter().any(|n| n.code == Code::Misfit);
    if misfit && bias.abs() > WIDE && curve.local.second_hartree > 0.0 {
        let text = format!(
            "The window is wide for the {name} fit: its residuals ({} cm-1 rms) are misfit, and its force constant is \
             {:.1} % {} than that of the curve at its minimum. Narrow the window or take another family.",
            crate::digits::rounded(to_per_cm(fit.rms_residual_hartree), 2),
            100.0 * bias.abs(),
            if bias > 0.0 { "larger" } else { "smaller" }
        );
        notices.push(Notice::info(Code::WideWindow, text));
    }
    notices
}
