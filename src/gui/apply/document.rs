//! Commands that change the document: each is a step of the history.

use super::{forget_level, hold_view};
use crate::export::compare::Quantity;
use crate::fit::{Family, RowWeight, Weighting};
use crate::gui::command::Command;
use crate::gui::state::{CurveKey, Preset, State};
use crate::settings::{PointNote, SetAside, Settings};
use std::collections::BTreeSet;

/// Changes of the document, each under its name in the history. False when the command is none.
pub(super) fn change_document(command: &Command, state: &mut State) -> bool {
    match command {
        Command::Focus(key) => {
            if state.document.settings.contains_key(key) && state.document.focus != Some(*key) {
                state.document.focus = Some(*key);
                forget_level(state);
            }
        }
        Command::StepCurve(step) => {
            let keys: Vec<CurveKey> = state.document.settings.keys().copied().collect();
            let here = keys.iter().position(|k| Some(*k) == state.document.focus).unwrap_or(0);
            let next = (here as i64 + i64::from(*step)).rem_euclid(keys.len().max(1) as i64) as usize;
            state.document.focus = keys.get(next).copied();
            forget_level(state);
        }
        Command::CloseScan => close_scan(state),
        Command::SetWindow { window, resting } => {
            if window.from.is_finite() && window.to.is_finite() && window.from < window.to {
                hold_view(state, Preset::FitWindow);
                edit(state, "move the fit window", !resting, |s| s.fits.window = Some(*window));
            }
        }
        Command::ResetSettings => edit(state, "default settings", false, |s| {
            *s = Settings { read: s.read.clone(), curve: s.curve.clone(), ..Settings::default() };
        }),
        Command::ResetWindow => edit(state, "default fit window", false, |s| s.fits.window = None),
        Command::SetTolerance { tolerance, resting } => {
            if *tolerance > 0.0 && *tolerance < 1.0 {
                edit(state, "change the tolerance", !resting, |s| s.reach.tolerance = *tolerance);
            }
        }
        Command::SetAbsoluteTolerance { tolerance, resting } => {
            if tolerance.value > 0.0 && tolerance.value.is_finite() {
                edit(state, "change the absolute tolerance", !resting, |s| s.reach.absolute = *tolerance);
            }
        }
        Command::SetLevelTolerance { tolerance_per_cm, resting } => {
            if tolerance_per_cm.is_none_or(|t| t.is_finite() && t > 0.0) {
                edit(state, "change the tolerance of levels", !resting, |s| {
                    s.reach.level_tolerance_per_cm = *tolerance_per_cm;
                });
            }
        }
        Command::SetSpacingTolerance { tolerance_per_cm, resting } => {
            if tolerance_per_cm.is_none_or(|t| t.is_finite() && t > 0.0) {
                edit(state, "change the tolerance of spacings", !resting, |s| {
                    s.reach.spacing_tolerance_per_cm = *tolerance_per_cm;
                });
            }
        }
        Command::SetThermal(thermal) => {
            let wanted = Settings { thermal: thermal.clone(), ..Settings::default() };
            if wanted.checked().is_ok() {
                edit(state, "change the thermal sums", false, |s| s.thermal.clone_from(thermal));
            }
        }
        Command::SetPublished { quantity, value } => {
            let Some(index) = Quantity::ALL.iter().position(|q| q == quantity) else { return true };
            if state.document.published[index] != *value {
                state.history.note("enter a published constant", &state.document, true);
                state.document.published[index] = *value;
            }
        }
        Command::SetAtoms(atoms) => {
            state.view.atoms_wanted = false;
            edit(state, "choose atoms", false, |s| {
                s.masses.atoms = Some(atoms.clone());
                s.masses.reduced_mass_u = None;
            });
        }
        Command::SetCharge(charge) => edit(state, "change the charge", true, |s| s.masses.charge = *charge),
        Command::SetReducedMass(mass) => {
            if mass.is_none_or(|m| m.is_finite() && m > 0.0) {
                edit(state, "give the reduced mass", true, |s| s.masses.reduced_mass_u = *mass);
            }
        }
        Command::SetAsymptote { energy, resting } => {
            if energy.is_none_or(f64::is_finite) {
                hold_view(state, Preset::WholeWell);
                edit(state, "energy of the separated atoms", !resting, |s| {
                    s.interpolation.asymptote = *energy
                });
            }
        }
        Command::SetLambda(lambda) => {
            let lambda = (*lambda).min(crate::settings::HIGHEST_LAMBDA);
            edit(state, "change Λ", true, |s| s.levels.lambda = lambda);
        }
        Command::SetRotation(all) => {
            if all.iter().all(|j| *j <= crate::settings::HIGHEST_J) {
                edit(state, "choose the J of the study", false, |s| s.levels.rotation.clone_from(all));
            }
        }
        Command::SetTailSensitivity(on) => {
            edit(state, "levels with moved tails", false, |s| s.levels.tail_sensitivity = *on);
        }
        Command::SetIsotopologues(pairs) => {
            edit(state, "choose isotopes", false, |s| s.isotopologues.clone_from(pairs));
        }
        Command::SetDegree(degree) => edit(state, "change the degree", false, |s| {
            for request in s.fits.requests.iter_mut().filter(|r| r.family == Family::Polynomial) {
                request.degree = Some(*degree);
            }
        }),
        Command::SetFits(requests) => {
            edit(state, "choose the fits", false, |s| s.fits.requests.clone_from(requests));
        }
        Command::SetWeighting(weights) => {
            edit(state, "weight the points", true, |s| s.fits.weights.clone_from(weights));
        }
        Command::SetAside(row) => edit(state, "set a point aside", false, |s| {
            s.kept.retain(|r| r != row);
            s.set_aside.retain(|a| a.row != *row);
            s.set_aside.push(SetAside { row: *row, reason: "set aside by hand".into() });
            s.set_aside.sort_by_key(|a| a.row);
        }),
        Command::SetRowsAside { rows, reason } => edit(state, "set points aside", false, |s| {
            s.kept.retain(|r| !rows.contains(r));
            let known: BTreeSet<usize> = s.set_aside.iter().map(|a| a.row).collect();
            let new = rows.iter().filter(|row| !known.contains(row));
            s.set_aside.extend(new.map(|&row| SetAside { row, reason: reason.clone() }));
            s.set_aside.sort_by_key(|a| a.row);
        }),
        Command::RestoreRows(rows) => edit(state, "use points again", false, |s| {
            s.set_aside.retain(|a| !rows.contains(&a.row));
        }),
        Command::SetNote { row, text } => edit(state, "write a note", true, |s| {
            s.notes.retain(|n| n.row != *row);
            if !text.is_empty() {
                s.notes.push(PointNote { row: *row, text: text.clone() });
                s.notes.sort_by_key(|n| n.row);
            }
        }),
        Command::SetReason { row, reason } => edit(state, "say why a point is set aside", true, |s| {
            if let Some(aside) = s.set_aside.iter_mut().find(|a| a.row == *row) {
                aside.reason.clone_from(reason);
            }
        }),
        Command::SetWeight { row, weight } => {
            if weight.is_finite() && *weight >= 0.0 {
                edit(state, "change a weight", true, |s| set_weight(&mut s.fits.weights, *row, *weight));
            }
        }
        Command::Restore(row) => edit(state, "use a point again", false, |s| {
            let by_hand = s.set_aside.iter().any(|a| a.row == *row);
            s.set_aside.retain(|a| a.row != *row);
            if !by_hand && !s.kept.contains(row) {
                s.kept.push(*row);
                s.kept.sort_unstable();
            }
        }),
        _ => return false,
    }
    true
}

/// Gives one row a weight; weights that come from a rule are left to the rule.
fn set_weight(weights: &mut Weighting, row: usize, weight: f64) {
    if matches!(weights, Weighting::Equal {}) {
        *weights = Weighting::Point { rows: Vec::new(), others: 1.0, declared: false };
    }
    let Weighting::Point { rows, others, declared } = weights else { return };
    rows.retain(|r| r.row != row);
    if weight != *others {
        rows.push(RowWeight { row, weight });
        rows.sort_by_key(|r| r.row);
    }
    if rows.is_empty() && *others == 1.0 && !*declared {
        *weights = Weighting::Equal {};
    }
}

/// Changes the settings of the focused curve, noted in the history when they did change.
pub(super) fn edit(state: &mut State, name: &str, gesture: bool, change: impl FnOnce(&mut Settings)) {
    let Some(key) = state.document.focus else { return };
    let Some(settings) = state.document.settings.get(&key) else { return };
    let mut changed = settings.clone();
    change(&mut changed);
    if changed == *settings {
        if !gesture {
            state.history.settle();
        }
        return;
    }
    state.history.note(name, &state.document, gesture);
    state.document.settings.insert(key, changed);
}

fn close_scan(state: &mut State) {
    let Some(key) = state.document.focus else { return };
    state.history.note("close a scan", &state.document, false);
    let document = &mut state.document;
    document.scans.retain(|s| s.key != key.scan);
    document.settings.retain(|k, _| k.scan != key.scan);
    document.focus = document.settings.keys().next().copied();
    forget_level(state);
}
