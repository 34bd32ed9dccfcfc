//! The fit repeated over all sensible windows and degrees, and the window that its results propose.

#[cfg(test)]
mod tests;

use super::quick::QuickFits;
use super::run::fit_for_study;
use super::{Family, Fit, FitError, FitPoint, FitRequest, Variable, Variance, Window};
use crate::estimate::Estimate;
use crate::notice::Code;
use crate::potential::curve::LocalDerivatives;
use crate::potential::{Model, Potential as _};
use crate::units::LengthUnit;
use serde::{Deserialize, Serialize};
use std::collections::BTreeSet;
use std::ops::Range;

/// Which fits are repeated, and over which windows.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct WindowStudySettings {
    /// The models.
    pub models: Vec<FitRequest>,
    /// Whether windows that reach further on one side are tried too.
    pub asymmetric: bool,
    /// No more fits than this are made in all: of too many windows only an even choice is tried, and at most half
    /// of them are symmetric where asymmetric ones are tried too.
    pub most_fits: usize,
}

impl Default for WindowStudySettings {
    fn default() -> Self {
        let mut models = vec![FitRequest::plain(Family::Harmonic)];
        models.extend((3..=8).map(|degree| FitRequest::polynomial(degree, Variable::X)));
        models.push(FitRequest::plain(Family::Morse));
        Self { models, asymmetric: true, most_fits: 2_000 }
    }
}

/// What a window study starts from.
#[derive(Clone, Copy, Debug)]
pub struct WindowStudyInput<'a> {
    /// The points in use, ascending in r.
    pub points: &'a [FitPoint],
    /// Their bond lengths as read, same order: the edges of windows.
    pub r_as_read: &'a [f64],
    /// Unit of those.
    pub unit: LengthUnit,
    /// The centre of symmetric windows: r_e of the curve in bohr.
    pub r_e_bohr: f64,
    /// What is known of the variance.
    pub variance: Variance,
}

/// ω_e and ω_e x_e in cm⁻¹ from the derivatives at a minimum; none without a mass.
pub type ConstantsOf<'a> = &'a dyn Fn(&LocalDerivatives) -> Option<[f64; 2]>;

/// What one fit of the study says. Atomic units where the name does not say otherwise.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct WindowNumbers {
    /// Position of the minimum.
    pub r_e_bohr: Estimate,
    /// Curvature at the minimum.
    pub force_constant_hartree_per_bohr2: Estimate,
    /// ω_e; none without a mass.
    pub omega_e_per_cm: Option<Estimate>,
    /// ω_e x_e; none without a mass and for a parabola.
    pub omega_e_x_e_per_cm: Option<Estimate>,
    /// sqrt(Σ d²/n).
    pub rms_residual_hartree: f64,
    /// The criterion; compares models in the same window only.
    pub aicc: Option<f64>,
}

/// One fit of the study.
#[derive(Clone, Debug, PartialEq)]
pub struct WindowFit {
    /// Index of the model in the settings.
    pub model: usize,
    /// The window: its edges are bond lengths of points.
    pub window: Window,
    /// Points in it.
    pub points: usize,
    /// Distance of its first point below r_e, in bohr.
    pub below_bohr: f64,
    /// Distance of its last point above r_e, in bohr.
    pub above_bohr: f64,
    /// Whether it is one of the symmetric windows, in which plateaus are looked for.
    pub symmetric: bool,
    /// Its numbers, or why there are none.
    pub numbers: Result<WindowNumbers, FitError>,
}

impl WindowFit {
    /// Distance of the point farthest from r_e, in bohr.
    pub fn half_width_bohr(&self) -> f64 {
        self.below_bohr.max(self.above_bohr)
    }
}

/// A stretch of symmetric windows over which a model gives nearly the same ω_e.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plateau {
    /// Index of the model in the settings.
    pub model: usize,
    /// Half width of its narrowest window in bohr.
    pub from_half_width_bohr: f64,
    /// Half width of its widest window in bohr.
    pub to_half_width_bohr: f64,
    /// Windows on it.
    pub windows: usize,
    /// Largest less smallest sqrt(k) over their middle is at most this: the relative spread of ω_e.
    pub spread: f64,
    /// Index, in the list of fits, of the window in its geometric middle: as far as can be from both ends.
    pub middle: usize,
}

/// All fits of a window study.
#[derive(Clone, Debug, PartialEq)]
pub struct WindowStudy {
    /// The models, as in the settings.
    pub models: Vec<FitRequest>,
    /// The fits, model by model; symmetric windows first, the narrowest first.
    pub fits: Vec<WindowFit>,
    /// The plateau of each model that has one.
    pub plateaus: Vec<Plateau>,
    /// Index, in the list of plateaus, of the one that is proposed; its middle is the proposed window.
    pub proposed: Option<usize>,
}

impl WindowStudy {
    /// The fit that is proposed.
    pub fn proposal(&self) -> Option<&WindowFit> {
        self.fits.get(self.plateaus.get(self.proposed?)?.middle)
    }
}

/// The work was stopped from outside.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Stopped {
    /// Fits done.
    pub done: usize,
}

/// A window holds at least so many points on either side of r_e,
const POINTS_A_SIDE: usize = 2;
/// and so many more than the model has parameters.
const SPARE_POINTS: usize = 2;
/// Neither side of an asymmetric window is wider than this many times the other.
const LARGEST_ASYMMETRY: f64 = 3.0;
/// A plateau has at least so many windows,
const PLATEAU_WINDOWS: usize = 4;
/// the widest at least so many times as wide as the narrowest,
const PLATEAU_RATIO: f64 = 1.3;
/// and a spread that is the first of these, doubled each time, at which there is such a stretch.
const SMALLEST_SPREAD: f64 = 1e-5;
/// A larger spread is no plateau.
const LARGEST_SPREAD: f64 = 0.02;

/// Repeats the fits over all sensible windows.
///
/// Symmetric windows hold the m nearest points to r_e, for every m, as far as the scan reaches on both sides;
/// asymmetric ones run from any point to any other as long as neither side is more than three times the other. Each
/// has at least two points on either side of r_e and two points more than the model has parameters.
///
/// A plateau of a model is the longest stretch (largest ratio of half widths) of consecutive symmetric windows,
/// at least four and at least 1.3 in ratio, whose ω_e ∝ sqrt(k) agree within a relative spread; the spread is
/// 1e-5 doubled until there is such a stretch, up to 2 %. Proposed is the plateau of the smallest spread, of equal ones
/// the longest, of equal ones the model named first; and on it the window in the geometric middle. (The rule
/// is this program's own.)
///
/// `progress` gets (done, all) after each fit and stops the work by returning false.
///
/// # Errors
/// [`Stopped`].
pub fn window_study(
    input: WindowStudyInput<'_>,
    settings: &WindowStudySettings,
    constants: ConstantsOf<'_>,
    progress: &mut dyn FnMut(usize, usize) -> bool,
) -> Result<WindowStudy, Stopped> {
    let windows = windows(input, settings);
    let all = windows.len() * settings.models.len();
    let highest = settings.models.iter().filter_map(|m| quick_degree(*m)).max().unwrap_or(2);
    let mut quick = QuickFits::new(input.r_e_bohr, input.variance);
    // Window by window, so that all models share what is computed for the points; listed model by model.
    let mut lists: Vec<(Option<Model>, Vec<WindowFit>)> =
        settings.models.iter().map(|_| (None, Vec::with_capacity(windows.len()))).collect();
    let mut done = 0;
    for (range, symmetric) in &windows {
        quick.take(&input.points[range.clone()], highest);
        let at = |i: usize| input.points[i].r_bohr;
        for (model, (near, list)) in lists.iter_mut().enumerate() {
            done += 1;
            if let Some(numbers) = one(input, range, settings.models[model], near, &mut quick, constants) {
                list.push(WindowFit {
                    model,
                    window: edges(input, range),
                    points: range.len(),
                    below_bohr: input.r_e_bohr - at(range.start),
                    above_bohr: at(range.end - 1) - input.r_e_bohr,
                    symmetric: *symmetric,
                    numbers,
                });
            }
            if !progress(done, all) {
                return Err(Stopped { done });
            }
        }
    }
    let fits: Vec<WindowFit> = lists.into_iter().flat_map(|(_, list)| list).collect();
    let plateaus: Vec<Plateau> =
        (0..settings.models.len()).filter_map(|model| plateau(model, &fits)).collect();
    let length = |p: &Plateau| p.to_half_width_bohr / p.from_half_width_bohr;
    let proposed = (0..plateaus.len()).min_by(|&a, &b| {
        let (a, b) = (&plateaus[a], &plateaus[b]);
        a.spread.total_cmp(&b.spread).then(length(b).total_cmp(&length(a))).then(a.model.cmp(&b.model))
    });
    Ok(WindowStudy { models: settings.models.clone(), fits, plateaus, proposed })
}

/// The windows as index ranges; symmetric ones first, the narrowest first.
fn windows(input: WindowStudyInput<'_>, settings: &WindowStudySettings) -> Vec<(Range<usize>, bool)> {
    let r: Vec<f64> = input.points.iter().map(|p| p.r_bohr).collect();
    let n = r.len();
    // Points below r_e: indices under `centre`.
    let centre = r.partition_point(|&x| x < input.r_e_bohr);
    if centre < POINTS_A_SIDE || n - centre < POINTS_A_SIDE {
        return Vec::new();
    }
    let (below, above) = (|i: usize| input.r_e_bohr - r[i], |i: usize| r[i] - input.r_e_bohr);
    let mut found: Vec<(Range<usize>, bool)> = Vec::new();
    let (mut from, mut to) = (centre, centre);
    while from > 0 && to < n {
        if below(from - 1) <= above(to) {
            from -= 1
        } else {
            to += 1
        }
        if centre - from >= POINTS_A_SIDE && to - centre >= POINTS_A_SIDE {
            found.push((from..to, true));
        }
    }
    let allowed = (settings.most_fits / settings.models.len().max(1)).max(2);
    found = thinned(found, allowed.div_ceil(if settings.asymmetric { 2 } else { 1 }));
    if !settings.asymmetric {
        return found;
    }
    let symmetric: BTreeSet<(usize, usize)> = found.iter().map(|(w, _)| (w.start, w.end)).collect();
    // Edges enough to choose from, and no more than that of a scan of thousands of points.
    let step = |count: usize| count.div_ceil(4 * allowed).max(1);
    let mut others = Vec::new();
    let ends: Vec<usize> = (centre + POINTS_A_SIDE..=n).step_by(step(n - centre)).collect();
    for (row, from) in (0..=centre - POINTS_A_SIDE).rev().step_by(step(centre)).enumerate() {
        let mut add = |to: usize| {
            let (left, right) = (below(from), above(to - 1));
            let near = left.max(right) <= LARGEST_ASYMMETRY * left.min(right);
            if near && !symmetric.contains(&(from, to)) {
                others.push((from..to, false));
            }
        };
        // Up and down in turns: each window differs little from the one before it, where fits start.
        if row % 2 == 0 {
            ends.iter().for_each(|&to| add(to));
        } else {
            ends.iter().rev().for_each(|&to| add(to));
        }
    }
    let left = allowed.saturating_sub(found.len());
    if left > 0 {
        found.extend(thinned(others, left));
    }
    found
}

/// At most `most` of them, evenly chosen.
fn thinned<T>(list: Vec<T>, most: usize) -> Vec<T> {
    let step = list.len().div_ceil(most.max(1)).max(1);
    list.into_iter().step_by(step).collect()
}

fn edges(input: WindowStudyInput<'_>, range: &Range<usize>) -> Window {
    Window { from: input.r_as_read[range.start], to: input.r_as_read[range.end - 1], unit: input.unit }
}

/// The degree of a polynomial in x, which has a quick way.
const fn quick_degree(request: FitRequest) -> Option<usize> {
    match (request.family, request.variable, request.degree) {
        (Family::Harmonic, ..) => Some(2),
        // Other degrees are refused, by the careful fit.
        (Family::Polynomial, None | Some(Variable::X), Some(degree @ 2..=12)) => Some(degree as usize),
        _ => None,
    }
}

/// The numbers of one fit; none where the window has too few points for the model as it was asked for. `near` is the
/// last fit of the same model.
fn one(
    input: WindowStudyInput<'_>,
    range: &Range<usize>,
    request: FitRequest,
    near: &mut Option<Model>,
    quick: &mut QuickFits,
    constants: ConstantsOf<'_>,
) -> Option<Result<WindowNumbers, FitError>> {
    // No family has fewer parameters than the harmonic one.
    let fewest = quick_degree(request).map_or(3, |degree| degree + 1) + SPARE_POINTS;
    if range.len() < fewest {
        return None;
    }
    if let Some(numbers) = quick_degree(request).and_then(|degree| quick.polynomial(degree, constants)) {
        return Some(Ok(numbers));
    }
    if let Some(Model::Morse(start)) = near.as_ref().filter(|_| range.len() >= 4 + SPARE_POINTS)
        && let Some((numbers, morse)) = quick.morse(start, constants)
    {
        *near = Some(morse.into());
        return Some(Ok(numbers));
    }
    let points = &input.points[range.clone()];
    let window = edges(input, range);
    let found = fit_for_study(request, points, window, input.variance, near.as_ref());
    let enough = match &found {
        Ok(fit) => {
            // A lowered degree would be another model's row.
            let lowered = fit.notices.iter().any(|n| n.code == Code::FewPoints);
            !lowered && fit.points >= fit.parameters.len() + SPARE_POINTS
        }
        Err(FitError::TooFewPoints { .. }) => false,
        Err(_) => true,
    };
    enough.then(|| {
        found.map(|fit| {
            *near = Some(fit.model.clone());
            numbers(&fit, constants)
        })
    })
}

/// k, r_e and constants of one fit, errors by the covariance of its parameters.
fn numbers(fit: &Fit, constants: ConstantsOf<'_>) -> WindowNumbers {
    let of = |model: &Model| {
        let r_e = model.minimum_bohr();
        let local = LocalDerivatives::new(r_e, model.derivatives_hartree(r_e));
        let [omega, omega_x] = constants(&local).unwrap_or([f64::NAN; 2]);
        [r_e, local.second_hartree, omega, omega_x]
    };
    let estimates = fit.estimates_of(&|model| Some(of(model).to_vec())).unwrap_or_default();
    let estimate = |c: usize| estimates.get(c).copied().unwrap_or(Estimate::exact(f64::NAN));
    let optional = |c: usize| Some(estimate(c)).filter(|e| e.value.is_finite());
    WindowNumbers {
        r_e_bohr: estimate(0),
        force_constant_hartree_per_bohr2: estimate(1),
        omega_e_per_cm: optional(2),
        omega_e_x_e_per_cm: optional(3).filter(|_| fit.model.family() != Family::Harmonic),
        rms_residual_hartree: fit.rms_residual_hartree,
        aicc: fit.aicc,
    }
}

/// The plateau of one model among its symmetric windows.
fn plateau(model: usize, fits: &[WindowFit]) -> Option<Plateau> {
    // (index of the fit, half width, sqrt(k)); a window without a fit ends a stretch.
    let chain: Vec<(usize, f64, Option<f64>)> = fits
        .iter()
        .enumerate()
        .filter(|(_, f)| f.model == model && f.symmetric)
        .map(|(i, f)| {
            let k = f.numbers.as_ref().ok().map(|n| n.force_constant_hartree_per_bohr2.value);
            (i, f.half_width_bohr(), k.filter(|k| *k > 0.0).map(f64::sqrt))
        })
        .collect();
    let mut spread = SMALLEST_SPREAD;
    while spread <= LARGEST_SPREAD {
        if let Some(range) = longest_stretch(&chain, spread) {
            let (from, to) = (chain[range.start].1, chain[range.end - 1].1);
            let middle = 0.5 * (from.ln() + to.ln());
            let distance = |i: &usize| (chain[*i].1.ln() - middle).abs();
            let best = range.clone().min_by(|a, b| distance(a).total_cmp(&distance(b)))?;
            return Some(Plateau {
                model,
                from_half_width_bohr: from,
                to_half_width_bohr: to,
                windows: range.len(),
                spread,
                middle: chain[best].0,
            });
        }
        spread *= 2.0;
    }
    None
}

/// The stretch of the largest width ratio whose values agree within `spread`.
fn longest_stretch(chain: &[(usize, f64, Option<f64>)], spread: f64) -> Option<Range<usize>> {
    let mut best: Option<(f64, Range<usize>)> = None;
    for start in 0..chain.len() {
        let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
        for (end, (_, width, value)) in chain.iter().enumerate().skip(start) {
            let Some(value) = *value else { break };
            (low, high) = (low.min(value), high.max(value));
            if high - low > spread * 0.5 * (high + low) {
                break;
            }
            let (range, ratio) = (start..end + 1, width / chain[start].1);
            let longer = best.as_ref().is_none_or(|(r, _)| ratio > *r);
            if longer && range.len() >= PLATEAU_WINDOWS && ratio >= PLATEAU_RATIO {
                best = Some((ratio, range));
            }
        }
    }
    best.map(|(_, range)| range)
}
