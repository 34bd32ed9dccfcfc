//! How many levels there are, how many the scan supports, and what moving the tail does to their number.

use crate::findings::{Findings, LevelSupport, TailTrial};
use crate::potential::curve::ScanCurve;
use crate::radial::{RadialRequest, solve};
use crate::units::to_per_cm;

/// Counts the levels; with `tail_sensitivity` solves again for every moved tail.
pub fn fill(findings: &mut Findings, curve: &ScanCurve, mass_me: f64) {
    let supported = findings.levels.iter().filter(|l| !l.leans_on_tail).count();
    let settings = &findings.settings.levels;
    let depth = curve.tail_depth_hartree().unwrap_or(0.0);
    let (c_n, limit) = (settings.lean_c_n_fraction, settings.lean_asymptote_fraction);
    // A limit at or below the last point is none that the scan admits.
    let moved = |sign: f64| {
        let variant = curve.with_asymptote_shifted(sign * limit * depth)?;
        variant.tail_depth_hartree().is_some().then_some(variant)
    };
    let trials = [
        (format!("C_n * {}", 1.0 + c_n), curve.with_c_n_scaled(1.0 + c_n)),
        (format!("C_n * {}", 1.0 - c_n), curve.with_c_n_scaled(1.0 - c_n)),
        (format!("V_inf + {:.1} cm-1", to_per_cm(limit * depth)), moved(1.0)),
        (format!("V_inf - {:.1} cm-1", to_per_cm(limit * depth)), moved(-1.0)),
    ];
    let trial = |(change, variant): (String, Option<ScanCurve>)| {
        let request = RadialRequest {
            reduced_mass_me: mass_me,
            rotation_x: 0.0,
            relative_accuracy: settings.relative_accuracy,
            highest_v: Some(settings.highest_v),
        };
        let states = solve(&variant?.above_minimum(), &request).ok()?.states;
        let shifts = states
            .iter()
            .zip(&findings.levels)
            .map(|(state, own)| to_per_cm(state.energy_hartree) - own.energy_per_cm);
        let shifts: Vec<f64> = shifts.collect();
        let kept = |shift: &f64| shift.abs() <= settings.lean_shift_per_cm;
        Some(TailTrial {
            change,
            levels: states.len(),
            unmoved: shifts.iter().take_while(|s| kept(s)).count(),
            largest_shift_per_cm: shifts.iter().fold(0.0, |m: f64, s| m.max(s.abs())),
        })
    };
    let sensitivity =
        if settings.tail_sensitivity { trials.into_iter().filter_map(trial).collect() } else { Vec::new() };
    findings.level_support = Some(LevelSupport { levels: findings.levels.len(), supported, sensitivity });
}
