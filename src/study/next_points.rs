//! The bond lengths whose computation would help most: between points where the grid is too coarse for the
//! lowest level, and beyond an end where levels lean on what was never scanned.

use super::remarks::STEPS_PER_AMPLITUDE;
use crate::findings::{Findings, NextPoint};
use crate::notice::{Code, Notice};
use crate::potential::Potential as _;
use crate::potential::curve::{ScanCurve, Side};
use crate::radial::Level;
use crate::units::{LengthUnit, to_angstrom};

/// Most points proposed between others, and beyond each end.
const MOST_BETWEEN: usize = 6;
const MOST_BEYOND: usize = 4;
/// No end is moved outward by more than this share of its bond length at once.
const FARTHEST: f64 = 0.5;
/// Beyond its turning point a density is followed over this many lengths (2μ|V′|)^(−1/3): of Ai² less than
/// 1e-4 lies farther out.
const AIRY_LENGTHS: f64 = 3.0;

/// Proposes the next points and names them in the notices that ask for them.
pub fn fill(findings: &mut Findings, curve: Option<&ScanCurve>) {
    let mass_me = findings.masses.as_ref().map(|m| m.reduced_mass_me);
    let unit = findings.source.length_unit;
    let used: Vec<f64> = findings.source.points.iter().filter(|p| p.used).map(|p| p.r_bohr).collect();
    let mut all = Vec::new();
    let mut propose = |notices: &mut [Notice], code: Code, proposed: Vec<(f64, String)>| {
        let mut named = Vec::new();
        for (r_bohr, why) in proposed {
            let r_as_read = rounded(r_bohr, unit);
            let r_bohr = unit.to_bohr(r_as_read);
            let known = |r: f64| (r - r_bohr).abs() < 1e-6;
            if r_as_read > 0.0
                && !used.iter().any(|&r| known(r))
                && !all.iter().any(|n: &NextPoint| known(n.r_bohr))
            {
                named.push(r_as_read);
                all.push(NextPoint { r_bohr, r_as_read, why });
            }
        }
        if let Some(notice) = notices.iter_mut().find(|n| n.code == code).filter(|_| !named.is_empty()) {
            named.sort_by(f64::total_cmp);
            let list: Vec<String> = named.iter().map(f64::to_string).collect();
            notice.text.push_str(&format!(" Next: {} {}.", list.join(", "), unit.name()));
        }
    };
    if let Some((curve, mass_me)) = curve.zip(mass_me) {
        let between = between(curve, mass_me, &used);
        propose(&mut findings.notices, Code::CoarseGrid, between);
        let beyond = beyond(&findings.notices, &findings.levels, curve, mass_me);
        propose(&mut findings.notices, Code::LeansOnTail, beyond);
        // Without a single level the notice names the ends.
        let low =
            at_ends(&findings.notices, &used, Code::ShortRange, "the scan ends too low there for its levels");
        propose(&mut findings.notices, Code::ShortRange, low);
    }
    let end = at_ends(
        &findings.notices,
        &used,
        Code::MinimumAtEnd,
        "the lowest point is the last one on this side",
    );
    propose(&mut findings.notices, Code::MinimumAtEnd, end);
    all.sort_by(|a, b| a.r_bohr.total_cmp(&b.r_bohr));
    findings.next_points = all;
}

/// To a thousandth of an angstrom or bohr: nobody computes at more digits than a table shows.
fn rounded(r_bohr: f64, unit: LengthUnit) -> f64 {
    let per_unit = match unit {
        LengthUnit::Angstrom | LengthUnit::Bohr => 1e3,
        LengthUnit::Picometre => 10.0,
        LengthUnit::Nanometre => 1e4,
    };
    (unit.from_bohr(r_bohr) * per_unit).round() / per_unit
}

/// Points that part the steps wider than the zero-point amplitude, where the lowest level lives.
fn between(curve: &ScanCurve, mass_me: f64, used: &[f64]) -> Vec<(f64, String)> {
    let amplitude = (curve.local.second_hartree * mass_me).powf(-0.25);
    let (from, to) = (curve.local.r_e_bohr - 2.0 * amplitude, curve.local.r_e_bohr + 2.0 * amplitude);
    let mut wide: Vec<(f64, f64)> = used
        .windows(2)
        .map(|w| (w[0], w[1]))
        .filter(|w| w.1 > from && w.0 < to && (w.1 - w.0) * STEPS_PER_AMPLITUDE > amplitude)
        .collect();
    // The widest first: they matter most.
    wide.sort_by(|a, b| (b.1 - b.0).total_cmp(&(a.1 - a.0)));
    let mut proposed = Vec::new();
    for (low, high) in wide {
        // More than are proposed need not be counted out.
        let parts =
            ((high - low) * STEPS_PER_AMPLITUDE / amplitude).ceil().clamp(2.0, MOST_BETWEEN as f64 + 1.0);
        let why = format!(
            "the step from {:.4} to {:.4} angstrom is wider than the zero-point amplitude, {:.4} angstrom",
            to_angstrom(low),
            to_angstrom(high),
            to_angstrom(amplitude)
        );
        let inside = (1..parts as usize).map(|i| low + (high - low) * i as f64 / parts);
        proposed.extend(inside.map(|r| (r, why.clone())));
    }
    proposed.truncate(MOST_BETWEEN);
    proposed
}

/// Points beyond the ends on which the lowest leaning level leans, as far as its density reaches.
fn beyond(notices: &[Notice], levels: &[Level], curve: &ScanCurve, mass_me: f64) -> Vec<(f64, String)> {
    let Some(level) = levels.iter().find(|l| l.leans_on_tail) else { return Vec::new() };
    let turning_points = notices.iter().find(|n| n.code == Code::LeansOnTail).map_or(&[][..], |n| &n.at_bohr);
    let mut proposed = Vec::new();
    for &turning_point in turning_points {
        let side = if turning_point < curve.local.r_e_bohr { Side::Inner } else { Side::Outer };
        let (outward, side_name) = if side == Side::Inner { (-1.0, "below") } else { (1.0, "beyond") };
        let (end, step) = curve.end_and_step_bohr(side);
        let slope = curve.above_minimum().derivatives_hartree(turning_point)[1].abs();
        let airy = (2.0 * mass_me * slope).powf(-1.0 / 3.0);
        let wanted = outward * (turning_point - end) + AIRY_LENGTHS * airy;
        // Where the slope fades the density reaches very far: a step of this size shows more first.
        let wanted = if wanted.is_finite() { wanted.clamp(step, FARTHEST * end) } else { step };
        let count = (wanted / step).ceil().clamp(1.0, MOST_BEYOND as f64);
        let spacing = step.max(wanted / count);
        let why = format!(
            "v = {} at {:.0} cm-1 leans on the curve {side_name} {:.4} angstrom, its turning point being at {:.4} \
             angstrom",
            level.v,
            level.energy_per_cm,
            to_angstrom(end),
            to_angstrom(turning_point)
        );
        proposed.extend((1..=count as usize).map(|i| (end + outward * spacing * i as f64, why.clone())));
    }
    proposed
}

/// Points beyond the ends that a notice names, a step of the scan apart.
fn at_ends(notices: &[Notice], used: &[f64], code: Code, why: &str) -> Vec<(f64, String)> {
    let (Some(notice), [first, second, .., before, last]) = (notices.iter().find(|n| n.code == code), used)
    else {
        return Vec::new();
    };
    let ends = [(*first, first - second), (*last, last - before)];
    let meant = ends.into_iter().filter(|(end, _)| notice.at_bohr.iter().any(|r| (r - end).abs() < 1e-9));
    meant.flat_map(|(end, step)| (1..=2).map(move |i| (end + step * f64::from(i), why.to_owned()))).collect()
}
