//! Spacings of the levels against v + ½ with the straight line through them, extrapolated to the limit
//! (R. T. Birge, H. Sponer, Phys. Rev. 28, 259 (1926)), and where the levels of the curve end.

use super::geometry::Bounds;
use super::{Axis, Figure, Role, Series, Shape, number};
use crate::findings::Findings;
use crate::potential::Potential as _;
use crate::units::to_per_cm;

const QUANTUM_NUMBER: Axis = Axis { title: "v + ½", unit: "" };
const SPACING: Axis = Axis { title: "spacing", unit: "cm⁻¹" };

/// The picture and what it shows; none with fewer than three levels that lean on no tail.
pub fn birge_sponer_figure(findings: &Findings) -> Option<(Figure, Bounds)> {
    let found = findings.birge_sponer.as_ref()?;
    let at = |v: usize| v as f64 + 0.5;
    let points: Vec<[f64; 2]> =
        found.spacings_per_cm.iter().enumerate().map(|(v, spacing)| [at(v), *spacing]).collect();
    let (used, leaning) = points.split_at(found.spacings_used.min(points.len()));
    // ΔG = a − b (v + 1) falls to zero at v + ½ = a/b − ½.
    let (a, b) = (found.intercept_per_cm, found.slope_per_cm);
    let line = |x: f64| a - b * (x + 0.5);
    let last = points.len() as f64;
    let end = found.extrapolated_limit_per_cm.map_or(last, |_| a / b - 0.5);
    // An extrapolation that goes on for ever is not followed.
    let shown = end.clamp(0.0, 3.0 * last.max(1.0));
    let mut series = vec![Series::plain(
        Role::Tolerance,
        "straight line",
        "Least squares through the spacings between levels that lean on no tail, extrapolated to zero: its area is \
         the dissociation energy of Birge and Sponer.",
        Shape::Line(vec![[0.0, line(0.0)], [shown, line(shown)]]),
    )];
    if !leaning.is_empty() {
        series.push(Series::plain(
            Role::Proposal,
            "lean on the tail",
            "Spacings of levels that would move if the curve beyond the scan did.",
            Shape::Points(leaning.to_vec()),
        ));
    }
    series.push(Series::plain(
        Role::Scanned,
        "spacings",
        "E(v + 1) − E(v) of the levels of the curve.",
        Shape::Points(used.to_vec()),
    ));
    let top = points.iter().map(|p| p[1]).fold(line(0.0), f64::max);
    let law_end = findings.near_dissociation.as_ref().map(|law| law.v_at_limit + 0.5);
    if let Some(x) = law_end.filter(|x| x.is_finite()) {
        series.push(Series::plain(
            Role::ZeroPoint,
            "limit by the tail",
            "Where the levels end by the law of the inverse-power tail (R. J. Le Roy, R. B. Bernstein 1970).",
            Shape::Line(vec![[x, 0.0], [x, 0.18 * top]]),
        ));
    }
    let right = shown.max(last).max(law_end.unwrap_or(0.0));
    let bounds = Bounds { x: (0.0, 1.05 * right), y: (0.0, 1.08 * top) };
    bounds.is_valid().then_some((Figure { x: QUANTUM_NUMBER, y: SPACING, series }, bounds))
}

/// What the picture says: where the straight line ends and where the curve does.
pub fn birge_sponer_sentence(findings: &Findings) -> Option<String> {
    let found = findings.birge_sponer.as_ref()?;
    let used = found.spacings_used;
    let line = match found.extrapolated_limit_per_cm {
        Some(limit) => format!(
            "The straight line through {used} spacings ends {} cm⁻¹ above Vₑ",
            number::fixed(limit, 0)
        ),
        None => format!("The straight line through {used} spacings does not fall, so it has no end"),
    };
    let limit = true_limit_per_cm(findings);
    let curve = match limit {
        Some((limit, assumed)) => {
            let off = found
                .extrapolated_limit_per_cm
                .map_or_else(String::new, |line| format!(": {} cm⁻¹ off", number::signed(line - limit, 0)));
            let word = if assumed { ", as assumed," } else { "" };
            format!("the curve{word} ends at {} cm⁻¹{off}.", number::fixed(limit, 0))
        }
        None => "the limit of the curve is not known: give the energy of the separated atoms.".to_owned(),
    };
    Some(format!("{line}; {curve}"))
}

/// V_inf − V_e in cm⁻¹, and whether it is only assumed; none where the curve ends in a wall.
pub fn true_limit_per_cm(findings: &Findings) -> Option<(f64, bool)> {
    if let Some(depth) = &findings.constants.well_depth_per_cm {
        return Some((depth.value, false));
    }
    let curve = findings.curve.as_deref()?;
    let limit = to_per_cm(curve.limit_hartree() - curve.v_e_hartree.value);
    (limit.is_finite() && curve.range_bohr().1.is_infinite()).then_some((limit, true))
}
