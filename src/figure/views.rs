//! Regions of the main plot worth looking at.

use super::curve::zero_hartree;
use super::geometry::Bounds;
use crate::findings::Findings;
use crate::fit::Window;
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::units::{LengthUnit, to_angstrom, to_per_cm};

/// The regions offered; one that a study does not have is none.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Views {
    /// The lowest six levels.
    pub near_minimum: Option<Bounds>,
    /// Up to the limit of the bound levels.
    pub whole_well: Option<Bounds>,
    /// The fit window.
    pub fit_window: Option<Bounds>,
    /// Every point of the scan.
    pub all_points: Option<Bounds>,
}

/// The regions of a study.
pub fn views(findings: &Findings, window: Option<Window>) -> Views {
    let curve = findings.curve.as_deref();
    Views {
        near_minimum: curve.and_then(|c| near_minimum(findings, c)).filter(Bounds::is_valid),
        whole_well: curve.and_then(|c| whole_well(findings, c)).filter(Bounds::is_valid),
        fit_window: curve
            .zip(window)
            .and_then(|(c, w)| fit_window(c, w.converted(LengthUnit::Angstrom)))
            .filter(Bounds::is_valid),
        all_points: all_points(findings).filter(Bounds::is_valid),
    }
}

impl Views {
    /// The first view that there is, the closest first.
    pub fn first(&self) -> Option<Bounds> {
        self.near_minimum.or(self.whole_well).or(self.fit_window).or(self.all_points)
    }
}

/// x and y with room around: more below than a level needs, so that the minimum does not touch the frame.
pub(super) fn framed(x: (f64, f64), top: f64) -> Bounds {
    let pad = 0.13 * (x.1 - x.0);
    Bounds { x: (x.0 - pad, x.1 + pad), y: (-0.035 * top, top) }
}

fn near_minimum(findings: &Findings, curve: &ScanCurve) -> Option<Bounds> {
    let levels = &findings.levels;
    let Some(highest) = levels.len().checked_sub(1) else {
        // No mass, no levels: the lowest third of the scanned well.
        let (first, last) = curve.scan_range_bohr;
        let v_e = curve.v_e_hartree.value;
        let depth = to_per_cm(curve.energy_hartree(last).min(curve.energy_hartree(first)) - v_e);
        return well_below(curve, depth / 3.0).map(|x| framed(x, depth / 3.0));
    };
    let index = highest.min(5);
    let level = &levels[index];
    let (inner, outer) =
        (to_angstrom(level.inner_turning_point_bohr), to_angstrom(level.outer_turning_point_bohr));
    let below = index.checked_sub(1).map_or(0.0, |i| levels[i].energy_per_cm);
    let spacing = level.energy_per_cm - below;
    Some(framed((inner, outer), level.energy_per_cm + 0.55 * spacing))
}

pub(super) fn whole_well(findings: &Findings, curve: &ScanCurve) -> Option<Bounds> {
    let v_e = curve.v_e_hartree.value;
    let limit = to_per_cm(curve.limit_hartree() - v_e);
    let highest = findings.levels.last().map_or(0.0, |l| l.energy_per_cm);
    let top = if limit.is_finite() && limit > 0.0 { limit } else { highest };
    // The last stretch before dissociation is nearly flat: 96 % of the depth shows the well.
    let x = well_below(curve, 0.96 * top)?;
    Some(framed(x, 1.1 * top))
}

/// Where V stays below `energy_per_cm` around the minimum, in angstrom, within the scan.
fn well_below(curve: &ScanCurve, energy_per_cm: f64) -> Option<(f64, f64)> {
    let (first, last) = curve.scan_range_bohr;
    let (r_e, v_e) = (curve.r_e_bohr.value, curve.v_e_hartree.value);
    let below = |r: f64| to_per_cm(curve.energy_hartree(r) - v_e) < energy_per_cm;
    let steps = 400;
    let walk = |end: f64| {
        let at = |i: i32| r_e + (end - r_e) * f64::from(i) / f64::from(steps);
        (1..=steps).map(at).take_while(|&r| below(r)).last().unwrap_or(r_e)
    };
    let (a, b) = (walk(first), walk(last));
    (b > a).then(|| (to_angstrom(a), to_angstrom(b)))
}

fn fit_window(curve: &ScanCurve, Window { from, to, .. }: Window) -> Option<Bounds> {
    let energy = |r: f64| {
        to_per_cm(
            curve.energy_hartree(crate::units::LengthUnit::Angstrom.to_bohr(r)) - curve.v_e_hartree.value,
        )
    };
    let top = energy(from).max(energy(to));
    (top.is_finite() && top > 0.0).then(|| framed((from, to), 1.12 * top))
}

fn all_points(findings: &Findings) -> Option<Bounds> {
    let zero = zero_hartree(findings);
    let points = &findings.source.points;
    let r = || points.iter().map(|p| to_angstrom(p.r_bohr));
    let e = || points.iter().map(|p| to_per_cm(p.energy_hartree - zero));
    let range = |values: &mut dyn Iterator<Item = f64>| {
        values.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)))
    };
    let (x, y) = (range(&mut r()), range(&mut e()));
    let pad = |(a, b): (f64, f64), f: f64| (a - f * (b - a), b + f * (b - a));
    Some(Bounds { x: pad(x, 0.05), y: pad(y, 0.05) })
}
