//! The main plot: curve, tails, parabola, fits and reach over the bond length.

use super::{Axis, BOND_LENGTH, Figure, PlotPoint, Role, Series, Shape, number};
use crate::estimate::ErrorSource;
use crate::findings::{Findings, FitFindings};
use crate::fit::{Family, Window};
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::units::{ANGSTROM_PER_BOHR, PER_CM_PER_HARTREE, to_angstrom, to_per_cm};

/// Points along a curve around the minimum, and outside that region.
const FINE_POINTS: usize = 480;
const COARSE_POINTS: usize = 320;
/// Tails are drawn this far beyond the scan, as a fraction of the scanned range.
pub(super) const TAIL_FRACTION: f64 = 0.12;

/// The main plot of a study: energies in cm⁻¹ above the minimum over bond lengths in angstrom.
pub fn main_plot(findings: &Findings) -> Figure {
    let mut series = Vec::new();
    if let Some(curve) = findings.curve.as_deref() {
        series.extend(reach_band(findings, curve));
        series.extend(confidence_bands(findings, curve));
        series.extend(fits(findings, curve));
        series.extend(parabola(curve));
        series.extend(scanned(curve));
    }
    Figure { x: BOND_LENGTH, y: Axis { title: "energy above the minimum", unit: "cm⁻¹" }, series }
}

/// The zero of the plot's energy axis in hartree: V_e, or the lowest point where there is no minimum.
pub(super) fn zero_hartree(findings: &Findings) -> f64 {
    let lowest = || findings.source.points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
    findings.curve.as_ref().map_or_else(lowest, |c| c.v_e_hartree.value)
}

/// The scan's points.
pub(super) fn points(findings: &Findings, window: Option<Window>) -> Vec<PlotPoint> {
    let zero = zero_hartree(findings);
    let unit = findings.source.length_unit;
    let point = |p: &crate::findings::Point| PlotPoint {
        row: p.row,
        r_as_read: p.r_as_read,
        at: [to_angstrom(p.r_bohr), to_per_cm(p.energy_hartree - zero)],
        energy_hartree: p.energy_hartree,
        in_window: p.used && window.is_none_or(|w| w.contains(p.r_as_read, unit)),
        set_aside: (!p.used).then(|| p.why_not.clone().unwrap_or_else(|| "not used".to_owned())),
    };
    findings.source.points.iter().map(point).filter(|p| p.at.iter().all(|c| c.is_finite())).collect()
}

/// Bond lengths (bohr) at which a function is drawn between two ends: dense where the well is.
pub(super) fn mesh(from: f64, to: f64, r_e: f64) -> Vec<f64> {
    if !(from.is_finite() && to.is_finite() && to > from) {
        return Vec::new();
    }
    let (fine_from, fine_to) = ((0.6 * r_e).max(from), (1.8 * r_e).min(to));
    let spread = |a: f64, b: f64, n: usize| (0..=n).map(move |i| a + (b - a) * i as f64 / n as f64);
    let mut r: Vec<f64> = spread(from, to, COARSE_POINTS).collect();
    if fine_to > fine_from {
        r.extend(spread(fine_from, fine_to, FINE_POINTS));
    }
    r.sort_by(f64::total_cmp);
    r.dedup_by(|a, b| (*a - *b).abs() < 1e-9 * r_e);
    r
}

fn line(function: &dyn Fn(f64) -> f64, from: f64, to: f64, curve: &ScanCurve) -> Vec<[f64; 2]> {
    let (r_e, v_e) = (curve.r_e_bohr.value, curve.v_e_hartree.value);
    mesh(from, to, r_e)
        .into_iter()
        .map(|r| [to_angstrom(r), to_per_cm(function(r) - v_e)])
        .filter(|p| p.iter().all(|c| c.is_finite()))
        .collect()
}

fn scanned(curve: &ScanCurve) -> Vec<Series> {
    let (first, last) = curve.scan_range_bohr;
    let (from, to) = curve.range_bohr();
    let energy = |r: f64| curve.energy_hartree(r);
    let extra = TAIL_FRACTION * (last - first);
    let (inner, outer) = ((first - extra).max(from).max(0.3 * first), (last + extra).min(to));
    let end = last.min(to);
    let tail = |a: f64, b: f64, side: &str| Series {
        role: Role::Tail,
        label: format!("{side} tail"),
        about: format!("The curve beyond its {side} scanned point: a continuation, not data."),
        strong: None,
        shape: Shape::Line(line(&energy, a, b, curve)),
    };
    let mut series = Vec::new();
    if inner < first {
        series.push(tail(inner, first, "inner"));
    }
    if outer > end {
        series.push(tail(end, outer, "outer"));
    }
    series.push(Series {
        role: Role::Scanned,
        label: "scan".to_owned(),
        about: format!("The curve through the points in use ({}).", curve.kind),
        strong: None,
        shape: Shape::Line(line(&energy, first, end, curve)),
    });
    series
}

fn parabola(curve: &ScanCurve) -> Option<Series> {
    let k = curve.derivatives_hartree[0]?.value;
    let (r_e, v_e) = (curve.r_e_bohr.value, curve.v_e_hartree.value);
    let harmonic = |r: f64| v_e + 0.5 * k * (r - r_e).powi(2);
    let (first, last) = curve.scan_range_bohr;
    Some(Series {
        role: Role::Parabola,
        label: "parabola".to_owned(),
        about: "½ k x² with k = V″(rₑ): the small-displacement approximation itself, not a fit.".to_owned(),
        strong: None,
        shape: Shape::Line(line(&harmonic, 0.5 * first, last.min(3.0 * r_e), curve)),
    })
}

/// Name of a fit with its degree or order, e.g. `Polynomial 6`.
pub fn fit_label(fit: &FitFindings) -> String {
    let title = fit.request.family.title();
    let used = fit.result.as_ref().ok().and_then(|f| f.degree).or(fit.request.degree);
    used.map_or_else(|| title.to_owned(), |degree| format!("{title} {degree}"))
}

/// The role a fit is drawn in.
pub fn fit_role(family: Family) -> Role {
    match family {
        Family::Harmonic => Role::Harmonic,
        Family::Morse => Role::Morse,
        _ => Role::Polynomial,
    }
}

fn fits(findings: &Findings, curve: &ScanCurve) -> Vec<Series> {
    let (first, last) = curve.scan_range_bohr;
    let draw = |fit: &FitFindings| {
        let result = fit.result.as_ref().ok()?;
        let (from, to) = result.model.range_bohr();
        let function = |r: f64| result.model.energy_hartree(r);
        let (a, b) = result.window_bohr;
        let rms = number::fixed(result.rms_residual_hartree * PER_CM_PER_HARTREE, 1);
        Some(Series {
            role: fit_role(fit.request.family),
            label: fit_label(fit),
            about: format!(
                "Least-squares fit to {} points in the window; rms residual {rms} cm⁻¹.",
                result.points
            ),
            strong: Some((to_angstrom(a), to_angstrom(b))),
            shape: Shape::Line(line(&function, from.max(0.8 * first), to.min(last), curve)),
        })
    };
    findings.fits.iter().filter_map(draw).collect()
}

/// Points across a confidence band, and how far beyond the window it goes, as a share of the window.
const BAND_POINTS: u32 = 80;
const BAND_BEYOND: f64 = 0.25;

/// The confidence band of each fit that has one: its curve ± two standard errors, in the window and a little beyond.
fn confidence_bands(findings: &Findings, curve: &ScanCurve) -> Vec<Series> {
    let (first, last) = curve.scan_range_bohr;
    let v_e = curve.v_e_hartree.value;
    let band = |fit: &FitFindings| {
        let result = fit.result.as_ref().ok()?;
        let (a, b) = result.window_bohr;
        let (from, to) = ((a - BAND_BEYOND * (b - a)).max(first), (b + BAND_BEYOND * (b - a)).min(last));
        let at = |k: u32| {
            let r = from + (to - from) * f64::from(k) / f64::from(BAND_POINTS);
            let (energy, half) = (result.model.energy_hartree(r) - v_e, 2.0 * result.band_hartree(r)?);
            let [low, high] = [energy - half, energy + half].map(|e| e * PER_CM_PER_HARTREE);
            (low.is_finite() && high.is_finite()).then_some([to_angstrom(r), low, high])
        };
        let ribbon = (0..=BAND_POINTS).map(at).collect::<Option<Vec<_>>>()?;
        let source = match result.error_source() {
            ErrorSource::Misfit => "; its residuals are misfit, not noise",
            _ => "",
        };
        Some(Series {
            role: fit_role(fit.request.family),
            label: fit_label(fit),
            about: format!("The fit ± two standard errors of its curve{source}."),
            strong: None,
            shape: Shape::Ribbon(ribbon),
        })
    };
    findings.fits.iter().filter_map(band).collect()
}

fn reach_band(findings: &Findings, curve: &ScanCurve) -> Option<Series> {
    let reach = findings.reach.as_ref()?;
    let end = |x: Option<f64>| x.map(|x| (curve.r_e_bohr.value + x) * ANGSTROM_PER_BOHR);
    let tolerance = crate::verdict::percent(reach.tolerance);
    Some(Series {
        role: Role::Reach,
        label: "reach".to_owned(),
        about: format!("Where V differs from the parabola by at most {tolerance} of the parabola's energy."),
        strong: None,
        shape: Shape::Band(end(reach.energy.x_minus_bohr), end(reach.energy.x_plus_bohr)),
    })
}
