//! Levels with rotation, and the quasi-bound ones behind the centrifugal barrier.

use super::levels::{Question, Solved, solve};
use crate::findings::{Findings, QuasiBoundLevel};
use crate::notice::{Code, Notice};
use crate::parallel::in_halves;
use crate::potential::curve::ScanCurve;
use crate::radial::{Level, quasi_bound};
use crate::reach::{self, Interval};
use crate::settings::LevelSettings;
use crate::units::to_per_cm;

/// The levels of one J.
#[derive(Clone, Debug)]
pub struct RotatingLevels {
    /// J.
    pub j: u32,
    /// The bound levels, v ascending.
    pub levels: Vec<Level>,
    /// The quasi-bound levels, v ascending.
    pub quasi_bound: Vec<QuasiBoundLevel>,
}

/// The levels of any J on the curve of a study, whether or not its settings name that J; none without a curve or a
/// mass, for J = 0 and for J below Λ.
pub fn rotating_levels(findings: &Findings, j: u32) -> Option<RotatingLevels> {
    let (curve, masses) = (findings.curve.as_deref()?, findings.masses.as_ref()?);
    let settings = &findings.settings.levels;
    if j == 0 || j < settings.lambda {
        return None;
    }
    if settings.rotation.contains(&j) {
        return Some(RotatingLevels {
            j,
            levels: findings.rotational_levels.iter().filter(|l| l.j == j).cloned().collect(),
            quasi_bound: findings.quasi_bound.iter().flatten().filter(|q| q.j == j).cloned().collect(),
        });
    }
    let reach = reach::energy_and_force_reach(curve, &findings.settings.reach).map(|(energy, _)| energy);
    let question = Question { settings, mass_me: masses.reduced_mass_me, reach: reach.as_ref(), j };
    let OneJ { solved, quasi } = one(curve, &question);
    Some(RotatingLevels { j, levels: solved.levels, quasi_bound: quasi })
}

/// What one J gives.
struct OneJ {
    solved: Solved,
    quasi: Vec<QuasiBoundLevel>,
}

/// Fills in the levels of every J that the settings name.
pub fn fill(findings: &mut Findings, curve: &ScanCurve, mass_me: f64, reach: Option<&Interval>) {
    let settings = findings.settings.levels.clone();
    let asked = settings.rotating();
    if asked.is_empty() {
        return;
    }
    let all = in_halves(&asked, 2, |part| {
        part.iter().map(|&j| one(curve, &Question { settings: &settings, mass_me, reach, j })).collect()
    });
    let mut quasi = Vec::new();
    for mut one in all {
        findings.rotational_levels.append(&mut one.solved.levels);
        findings.notices.append(&mut one.solved.notices);
        quasi.append(&mut one.quasi);
    }
    findings.quasi_bound = Some(quasi);
    remark_on_lambda(findings, &settings);
}

fn one(curve: &ScanCurve, question: &Question) -> OneJ {
    let mut solved = solve(curve, question);
    solved.distort();
    let above = curve.above_minimum();
    let quasi = match quasi_bound(&above, &question.request()) {
        Ok(found) => found,
        Err(error) => {
            let text = format!("No quasi-bound levels with J = {}: {error}.", question.j);
            solved.notices.push(Notice::caution(Code::NotConverged, text));
            Vec::new()
        }
    };
    let listed = |q: &crate::radial::QuasiBound| QuasiBoundLevel {
        v: q.v,
        j: question.j,
        energy_per_cm: to_per_cm(q.energy_hartree),
        width_per_cm: to_per_cm(q.width_hartree),
        by_phase_per_cm: q.by_phase_hartree.map(|(e, w)| (to_per_cm(e), to_per_cm(w))),
        barrier_per_cm: to_per_cm(q.barrier_hartree),
        barrier_bohr: q.barrier_bohr,
    };
    OneJ { quasi: quasi.iter().map(listed).collect(), solved }
}

fn remark_on_lambda(findings: &mut Findings, settings: &LevelSettings) {
    let below: Vec<String> = settings
        .rotation
        .iter()
        .filter(|&&j| j > 0 && j < settings.lambda)
        .map(ToString::to_string)
        .collect();
    if !below.is_empty() {
        let text = format!(
            "A state with Lambda = {} has no levels with J = {}; J begins at Lambda.",
            settings.lambda,
            below.join(", ")
        );
        findings.notices.push(Notice::info(Code::NoSuchRotation, text));
    }
}
