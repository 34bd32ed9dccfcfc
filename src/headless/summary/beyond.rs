//! The part of the summary that only options ask for: rotation, moved tails, isotopologues.

use super::rounded;
use crate::findings::{Findings, Isotopologue};
use std::fmt::Write as _;

/// All of it; nothing where nothing was asked.
pub(super) fn beyond(text: &mut String, findings: &Findings) {
    rotation(text, findings);
    tails(text, findings);
    isotopologues(text, findings);
}

fn rotation(text: &mut String, findings: &Findings) {
    let levels = &findings.rotational_levels;
    let (Some(lowest), Some(highest)) = (levels.iter().map(|l| l.j).min(), levels.iter().map(|l| l.j).max())
    else {
        return;
    };
    let quasi = findings.quasi_bound.as_ref().map_or(0, Vec::len);
    let _ = writeln!(
        text,
        "Rotation: {} levels with J from {lowest} to {highest}, {quasi} quasi-bound ones behind the centrifugal barrier \
         (all of them in --out)\n",
        levels.len()
    );
}

fn tails(text: &mut String, findings: &Findings) {
    if !findings.settings.levels.tail_sensitivity {
        return;
    }
    let Some(support) = &findings.level_support else { return };
    let _ = writeln!(text, "Moving the tail");
    for trial in &support.sensitivity {
        let _ = writeln!(
            text,
            "  {:<24} {} levels, the lowest {} of {} unmoved; largest shift {} cm-1",
            trial.change,
            trial.levels,
            trial.unmoved,
            support.levels,
            rounded(trial.largest_shift_per_cm, 2)
        );
    }
    if support.sensitivity.is_empty() {
        text.push_str("  nothing to move: the curve ends in a wall, or the scan comes nearer to its limit than the move\n");
    }
    text.push('\n');
}

fn isotopologues(text: &mut String, findings: &Findings) {
    if findings.isotopologues.is_empty() {
        return;
    }
    text.push_str("Isotopologues on the same curve\n");
    text.push_str("  atoms           omega_e/cm-1   zero-point energy/cm-1      1 <- 0/cm-1     levels\n");
    for other in &findings.isotopologues {
        let shown = |value: Option<f64>| value.map_or_else(|| "-".to_owned(), |v| rounded(v, 8));
        let fundamental = match &other.levels[..] {
            [first, second, ..] => Some(second.energy_per_cm - first.energy_per_cm),
            _ => None,
        };
        let _ = writeln!(
            text,
            "  {:<12} {:>15} {:>24} {:>16} {:>10}",
            name(other),
            shown(Some(other.omega_e_per_cm)),
            shown(other.zero_point_energy_per_cm),
            shown(fundamental),
            other.levels.len()
        );
    }
    text.push('\n');
}

fn name(other: &Isotopologue) -> String {
    let atoms = other.masses.atoms.iter().flatten();
    atoms.map(|a| format!("{}{}", a.mass_number, a.symbol)).collect::<Vec<_>>().join(" ")
}
