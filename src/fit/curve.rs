//! Builds the default curve: chooses base and variable, finds the minimum and its errors, joins tails.

mod error;
mod minimum;
#[cfg(test)]
mod tests;

pub use error::CurveError;

use super::{FitPoint, morse_for_base};
use crate::notice::{Code, Notice};
use crate::parallel::in_halves;
use crate::potential::Morse;
use crate::potential::curve::{
    CurveKind, CurveParts, CurveSettings, InnerTail, LocalDerivatives, ScanCurve, SplineVariable,
};
use crate::potential::interpolant::{Interpolant, Recipe};
use crate::potential::tail_fit::fit_tail;
use crate::potential::tails::{Joint, OuterForm, Outside, inner_tail, outer_tail};
use crate::scan::inspect::noise_hartree;
use crate::units::{to_angstrom, to_per_cm};
use minimum::{StationaryPoint, minimum_between, stationary_points};
use std::sync::Arc;

/// Points from which a base function is fitted.
const POINTS_FOR_BASE: usize = 8;
/// Fewest points of a curve.
const POINTS_NEEDED: usize = 5;
/// The base is fitted to the points with V − V_e up to this multiple of V_last − V_e.
const BASE_HEIGHT: f64 = 1.5;
/// Leave-one-out is judged on at most about this many points.
const LEAVE_ONE_OUT_POINTS: usize = 200;
/// Neighbours on either side that the curve without a point is built from: what lies further off changes the curve
/// there by less than a hundredth.
const LEAVE_ONE_OUT_NEIGHBOURS: usize = 6;
/// Spread of ω_e x_e over the interpolations, relative, above which there is a caution.
const SPREAD_CAUTION: f64 = 0.05;
/// Size of 5 a1²/4 − a2 below which a spread is no matter of per cent: bonds have 1 to 10 (a Morse function with
/// a r_e = 2 has 7/3), so 0.05 is a parabola to all that a scan can say.
const LEAST_ANHARMONICITY: f64 = 0.05;

/// The points of a curve, energies counted from the lowest.
struct Data {
    r: Vec<f64>,
    e: Vec<f64>,
    zero: f64,
    lowest: usize,
}

impl Data {
    fn bracket(&self) -> (f64, f64) {
        (self.r[self.lowest - 1], self.r[self.lowest + 1])
    }

    /// Whether an inner point is a local extremum of the data.
    fn is_extremum(&self, i: usize) -> bool {
        i > 0 && i + 1 < self.e.len() && (self.e[i] - self.e[i - 1]) * (self.e[i + 1] - self.e[i]) <= 0.0
    }
}

/// Builds the curve through all points given.
///
/// From 8 points on a Morse base (least squares over the points with V − V_e ≤ 1.5 (V_last − V_e)) plus a
/// quintic not-a-knot spline through what it leaves, in r or in y = (r − r_b)/(r + r_b), whichever has the
/// smaller leave-one-out error, never one with a stationary point where the data are monotonic. With 5 to 7
/// points the polynomial through all. `points`: ascending, distinct bond lengths, at least 5; weights are
/// ignored. `asymptote_hartree`: energy of the separated atoms on the zero of the points.
///
/// On analytic curves sampled like real scans (45 points) the largest level error of the default is
/// 0.011 cm⁻¹ (H2-like) and 8e-5 cm⁻¹ (CO-like).
///
/// # Errors
/// [`CurveError`] when there are too few points or there is no minimum inside the scan.
pub fn build_curve(
    points: &[FitPoint],
    asymptote_hartree: Option<f64>,
    settings: &CurveSettings,
) -> Result<(ScanCurve, Vec<Notice>), CurveError> {
    let data = check(points)?;
    let mut notices = Vec::new();
    let interpolant = interpolate(&data, settings, &mut notices);
    let (from, to) = data.bracket();
    let local = minimum_between(|r| interpolant.derivatives(r), from, to)
        .ok_or(CurveError::NoCurvature { r_bohr: data.r[data.lowest] })?;

    let stationary = stationary_points(|r| interpolant.derivatives(r), &data.r);
    let (inner_end, outer_end) = ends(&data, &local, &stationary, &mut notices);
    let joint = |r: f64| {
        let d = interpolant.derivatives(r);
        Joint { r, energy: d[0], slope: d[1] }
    };
    let (inner_joint, outer_joint) = (joint(inner_end), joint(outer_end));
    let inner = if inner_end > data.r[0] {
        InnerTail::HardWall
    } else {
        let (tail, notice) = inner_tail(inner_joint, local.v_e_hartree);
        notices.extend(notice);
        tail
    };
    let last = data.r.len() - 1;
    let (outer, outer_assumed) = if outer_end < data.r[last] {
        (OuterForm::Wall, false)
    } else {
        let outside = Outside {
            asymptote: asymptote_hartree.map(|e| e - data.zero).filter(|e| e.is_finite()),
            power: settings.tail_power,
            base: interpolant.recipe().base.map(|b| (b.e_min_hartree + b.well_depth_hartree, b.a_per_bohr)),
        };
        let fitted = fitted_tail(&data, outer_joint, settings, outside.asymptote, &mut notices);
        fitted.map_or_else(
            || {
                let (form, assumed, more) = outer_tail(outer_joint, outside);
                notices.extend(more);
                (form, assumed)
            },
            |form| (form, false),
        )
    };

    let noise = noise_hartree(&data.r, &data.e);
    let found = minimum::alternatives(&data, interpolant.recipe(), &local);
    let noise_variants = noise.map_or_else(Vec::new, |n| minimum::noise_variants(&data, &interpolant, n));
    let recipe = interpolant.recipe();
    let polynomial = data.r.len() < POINTS_FOR_BASE && recipe.degree == data.r.len() - 1;
    let kind = match (recipe.base, recipe.degree) {
        (Some(_), 3) => "morse+cubic",
        (Some(_), _) => "morse+quintic",
        (None, _) if polynomial => "polynomial",
        (None, 3) => "cubic",
        (None, _) => "quintic",
    };
    let curve = ScanCurve::assemble(CurveParts {
        kind: kind.into(),
        variable: (!polynomial).then_some(recipe.variable),
        scan_range: (data.r[0], data.r[last]),
        local,
        inner,
        inner_joint,
        outer,
        outer_joint,
        outer_assumed,
        alternatives: found.minima,
        other: Arc::new(found.other),
        other_minimum: found.other_minimum,
        polynomials: found.polynomials.into(),
        points: data.r.as_slice().into(),
        noise_variants,
        noise_hartree: noise,
        zero: data.zero,
        interpolant: Arc::new(interpolant),
    });
    notices.extend(spread_caution(&curve));
    Ok((curve, notices))
}

/// The tail fitted to the outermost points, where the settings ask for one and the points give one.
fn fitted_tail(
    data: &Data,
    joint: Joint,
    settings: &CurveSettings,
    asymptote: Option<f64>,
    notices: &mut Vec<Notice>,
) -> Option<OuterForm> {
    let (n, count) = (settings.tail_power.filter(|&n| n > 0)?, settings.tail_fit_points?);
    let from = data.r.len().saturating_sub(count);
    let fit = fit_tail(&data.r[from..], &data.e[from..], n, asymptote);
    let form = fit.and_then(|fit| fit.form(joint, n));
    let text = match (fit, form) {
        (Some(fit), Some(_)) => format!(
            "The tail in 1/r^{n} was fitted to the last {} points (rms {:.2} cm-1): V_inf lies {:.1} cm-1 above the \
             last point.",
            data.r.len() - from,
            to_per_cm(fit.rms),
            to_per_cm(fit.asymptote - joint.energy)
        ),
        _ => format!(
            "The last {} points give no tail in 1/r^{n} that binds; the tail follows from the last point alone.",
            data.r.len() - from
        ),
    };
    let notice = if form.is_some() { Notice::info } else { Notice::caution };
    notices.push(notice(Code::FittedTail, text).at([joint.r]));
    form
}

/// The gate: finite, ascending, enough, with a minimum inside.
fn check(points: &[FitPoint]) -> Result<Data, CurveError> {
    let n = points.len();
    if n < POINTS_NEEDED {
        return Err(CurveError::TooFewPoints { points: n, needed: POINTS_NEEDED });
    }
    if let Some(bad) = points.iter().find(|p| !p.r_bohr.is_finite() || !p.energy_hartree.is_finite()) {
        return Err(CurveError::NotFinite { r_bohr: bad.r_bohr });
    }
    if let Some(pair) = points.windows(2).find(|w| w[1].r_bohr <= w[0].r_bohr) {
        return Err(CurveError::NotAscending { r_bohr: pair[1].r_bohr });
    }
    let zero = points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
    let r: Vec<f64> = points.iter().map(|p| p.r_bohr).collect();
    let e: Vec<f64> = points.iter().map(|p| p.energy_hartree - zero).collect();
    let inner_minima = (1..n - 1).filter(|&i| e[i] <= e[i - 1] && e[i] < e[i + 1]);
    match inner_minima.min_by(|&a, &b| e[a].total_cmp(&e[b])) {
        Some(lowest) => Ok(Data { r, e, zero, lowest }),
        None => Err(CurveError::without_minimum(&r, &e)),
    }
}

/// The interpolant that the settings ask for, or the nearest one that invents no stationary point.
fn interpolate(data: &Data, settings: &CurveSettings, notices: &mut Vec<Notice>) -> Interpolant {
    let n = data.r.len();
    let degree = match settings.kind {
        CurveKind::Default if n < POINTS_FOR_BASE => n - 1,
        CurveKind::Default | CurveKind::Quintic => 5.min(n - 1),
        CurveKind::Cubic => 3,
    };
    let plain = |variable| Recipe { base: None, variable, r_b_bohr: data.r[data.lowest], degree };
    let both = [SplineVariable::R, SplineVariable::Y];
    // A polynomial through all points and a cubic run in r unless told otherwise.
    let variables: &[SplineVariable] = match (settings.variable, degree) {
        (Some(SplineVariable::R), _) => &both[..1],
        (Some(SplineVariable::Y), _) if n >= POINTS_FOR_BASE => &both[1..],
        (None, 5) if n >= POINTS_FOR_BASE => &both,
        _ => &both[..1],
    };
    let mut candidates = Vec::new();
    if settings.kind == CurveKind::Default && n >= POINTS_FOR_BASE {
        match morse_base(data) {
            Ok(base) => candidates.extend(variables.iter().map(|&v| with_base(plain(v), base))),
            Err(why) => notices.push(Notice::caution(Code::NoBase, why)),
        }
    }
    let preferred = best(data, &candidates);
    let (mut chosen, mut invented) = match preferred {
        Some(found) => found,
        None => {
            let recipes: Vec<Recipe> = variables.iter().map(|&v| plain(v)).collect();
            best(data, &recipes).unwrap_or_else(|| judged(data, &plain(SplineVariable::R)))
        }
    };
    if invented > 0 {
        let fallbacks = [plain(SplineVariable::R), plain(SplineVariable::Y)]
            .into_iter()
            .chain([Recipe { degree: 3, ..plain(SplineVariable::R) }]);
        for recipe in fallbacks.filter(|_| settings.variable.is_none()) {
            let (other, count) = judged(data, &recipe);
            if count < invented {
                let text = "The smoother curve would have a stationary point between points that rise or fall \
                            evenly; a simpler one is used. A point may be off, or the steps are too wide.";
                notices.push(Notice::caution(Code::NoBase, text));
                (chosen, invented) = (other, count);
                if invented == 0 {
                    break;
                }
            }
        }
    }
    if invented > 0 {
        let text = "The curve has a stationary point between points that rise or fall evenly. A point may be off, \
                    or the steps are too wide there.";
        notices.push(Notice::caution(Code::Hump, text));
    }
    chosen
}

/// The Morse function under the spline, or why there is none.
fn morse_base(data: &Data) -> Result<Morse, String> {
    let limit = BASE_HEIGHT * data.e[data.e.len() - 1];
    let low = data.r.iter().zip(&data.e).filter(|(_, e)| **e <= limit);
    let points: Vec<FitPoint> =
        low.map(|(&r_bohr, &energy_hartree)| FitPoint { r_bohr, energy_hartree, weight: 1.0 }).collect();
    match morse_for_base(&points) {
        Ok(morse) if morse.well_depth_hartree > 0.0 => Ok(morse),
        Ok(_) => Err("The Morse fit has no positive well depth; the spline runs without a base.".into()),
        Err(why) => Err(format!("There is no Morse base under the spline: {why}.")),
    }
}

const fn with_base(recipe: Recipe, base: Morse) -> Recipe {
    Recipe { base: Some(base), r_b_bohr: base.r_e_bohr, ..recipe }
}

/// The interpolant of a recipe and the number of stationary points it invents.
fn judged(data: &Data, recipe: &Recipe) -> (Interpolant, usize) {
    let interpolant = recipe.through(&data.r, &data.e);
    let stationary = stationary_points(|r| interpolant.derivatives(r), &data.r);
    let mut per_interval = vec![0; data.r.len() - 1];
    for point in &stationary {
        per_interval[point.interval] += 1;
    }
    let allowed = |k: usize| usize::from(data.is_extremum(k) || data.is_extremum(k + 1));
    let invented = per_interval.iter().enumerate().map(|(k, &n)| usize::saturating_sub(n, allowed(k))).sum();
    (interpolant, invented)
}

/// Of several recipes the one that invents the fewest stationary points, then the one with the smaller
/// leave-one-out error.
fn best(data: &Data, recipes: &[Recipe]) -> Option<(Interpolant, usize)> {
    let mut judgements: Vec<(Interpolant, usize)> = recipes.iter().map(|r| judged(data, r)).collect();
    let fewest = judgements.iter().map(|j| j.1).min()?;
    judgements.retain(|j| j.1 == fewest);
    if judgements.len() == 1 {
        return judgements.pop();
    }
    let score = |j: &[(Interpolant, usize)]| -> Vec<f64> {
        j.iter().map(|j| leave_one_out_hartree(data, j.0.recipe())).collect()
    };
    let scores = in_halves(&judgements, 2, score);
    let mut scored: Vec<(f64, (Interpolant, usize))> = scores.into_iter().zip(judgements).collect();
    scored.sort_by(|a, b| a.0.total_cmp(&b.0));
    scored.into_iter().next().map(|s| s.1)
}

/// Root mean square error at each point of the curve built without it; two points at either end are
/// left in, as without them the curve would be an extrapolation. The base is kept, and the spline runs
/// through the nearest points only: the influence of a point falls by more than half from knot to knot.
fn leave_one_out_hartree(data: &Data, recipe: &Recipe) -> f64 {
    let n = data.r.len();
    let step = n.div_ceil(LEAVE_ONE_OUT_POINTS);
    let rest = recipe.rest(&data.r, &data.e);
    let (mut sum, mut count) = (0.0, 0);
    for i in (2..n - 2).step_by(step) {
        let (from, to) =
            (i.saturating_sub(LEAVE_ONE_OUT_NEIGHBOURS), n.min(i + LEAVE_ONE_OUT_NEIGHBOURS + 1));
        let without = |v: &[f64]| -> Vec<f64> { [&v[from..i], &v[i + 1..to]].concat() };
        let error = recipe.miss(&without(&data.r), &without(&rest), (data.r[i], rest[i]));
        sum += error * error;
        count += 1;
    }
    (sum / f64::from(count)).sqrt()
}

/// Where the curve ends inside and outside: at the ends of the scan or at the first maximum on the way.
fn ends(
    data: &Data,
    local: &LocalDerivatives,
    stationary: &[StationaryPoint],
    notices: &mut Vec<Notice>,
) -> (f64, f64) {
    let (first, last) = (data.r[0], data.r[data.r.len() - 1]);
    let maxima = || stationary.iter().filter(|s| s.maximum).map(|s| s.r);
    let outer = maxima().find(|&r| r > local.r_e_bohr);
    let inner = maxima().rfind(|&r| r < local.r_e_bohr);
    if let Some(r) = outer {
        let text = format!(
            "The curve turns over at {:.4} angstrom and falls beyond. It is used up to there; levels end at that \
             barrier.",
            to_angstrom(r)
        );
        notices.push(Notice::caution(Code::TurnsOver, text).at([r]));
    }
    if let Some(r) = inner {
        let text = format!(
            "The curve has a maximum at {:.4} angstrom, inside its minimum. It is used from there on; levels end at \
             that barrier.",
            to_angstrom(r)
        );
        notices.push(Notice::caution(Code::Hump, text).at([r]));
    }
    let in_well = |r: f64| (r - local.r_e_bohr).abs() < 1e-6;
    let others: Vec<f64> = stationary.iter().filter(|s| !s.maximum && !in_well(s.r)).map(|s| s.r).collect();
    if !others.is_empty() {
        let list: Vec<String> = others.iter().map(|&r| format!("{:.4}", to_angstrom(r))).collect();
        let text = format!(
            "The curve has another minimum at {} angstrom. Everything here belongs to the one at {:.4} angstrom.",
            list.join(", "),
            to_angstrom(local.r_e_bohr)
        );
        notices.push(Notice::caution(Code::SecondMinimum, text).at(others));
    }
    (inner.unwrap_or(first), outer.unwrap_or(last))
}

/// A caution when the interpolations disagree about ω_e x_e. Its relative spread does not depend on the mass.
fn spread_caution(curve: &ScanCurve) -> Option<Notice> {
    let anharmonicity = |local: &LocalDerivatives| {
        let (a1, a2) = local.dunham_a1_a2();
        Some((1.25 * a1 * a1 - a2) / local.r_e_bohr.powi(2))
    };
    let values = curve.alternatives.iter().filter_map(anharmonicity);
    let own = anharmonicity(&curve.local).filter(|v| v.is_finite())?;
    let (low, high) = values.filter(|v| v.is_finite()).fold((own, own), |(l, h), v| (l.min(v), h.max(v)));
    // An anharmonicity of nothing (a parabola) has no relative spread.
    let spread = (high - low) / own.abs().max(LEAST_ANHARMONICITY / curve.local.r_e_bohr.powi(2));
    (spread > SPREAD_CAUTION).then(|| {
        let text = format!(
            "Admissible interpolations of the scan disagree about the anharmonicity by {:.0} %. Points closer \
             together near the minimum, or better converged energies, would settle it.",
            100.0 * spread
        );
        Notice::caution(Code::DerivativeSpread, text)
    })
}
