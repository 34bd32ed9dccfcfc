//! A fit that failed, in its place: why, and what can be done about it.

use crate::fit::{FitError, Window};
use crate::gui::command::Command;
use crate::gui::show::{self, ButtonForm, command_button_as};
use crate::gui::state::State;
use eframe::egui::Ui;

/// How much wider a window becomes that is widened.
const WIDER: f64 = 1.5;

pub(super) fn failure_ui(ui: &mut Ui, state: &State, index: usize, error: &FitError, out: &mut Vec<Command>) {
    show::note(ui, &show::typographic(&format!("No fit: {error}.")));
    ui.horizontal_wrapped(|ui| {
        for (label, command) in remedies(state, index, error) {
            command_button_as(ui, state, label, command, ButtonForm::Link, out);
        }
    });
}

/// What may help, the likeliest first.
fn remedies(state: &State, index: usize, error: &FitError) -> Vec<(&'static str, Command)> {
    let mut found = Vec::new();
    if state.can(&Command::ResetWindow).is_ok() {
        found.push(("Take the default window", Command::ResetWindow));
    }
    let wants_room = !matches!(error, FitError::Degree { .. } | FitError::NotFinite { .. });
    if let Some(window) = state.window().filter(|_| wants_room) {
        let half = 0.5 * (WIDER - 1.0) * (window.to - window.from);
        // No edge passes r = 0.
        let wider =
            Window { from: (window.from - half).max(0.5 * window.from), to: window.to + half, ..window };
        found.push(("Widen the window", Command::SetWindow { window: wider, resting: true }));
    }
    let Some((_, _, settings)) = state.document.focused() else { return found };
    let mut requests = settings.fits.requests.clone();
    if let FitError::Degree { lowest, highest, asked } = error
        && let Some(request) = requests.get_mut(index)
    {
        request.degree = request.degree.map(|d| if d == *asked { d.clamp(*lowest, *highest) } else { d });
        request.power = request.power.map(|p| if p == *asked { p.clamp(*lowest, *highest) } else { p });
        found.push(("Take the nearest offered", Command::SetFits(requests.clone())));
    }
    if index < requests.len() && requests.len() > 1 {
        requests.remove(index);
        found.push(("Leave this fit out", Command::SetFits(requests)));
    }
    found
}
