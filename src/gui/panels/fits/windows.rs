//! The fits over all windows as a picture; a click takes the window under the pointer.

use crate::figure::WindowPicture;
use crate::figure::drawing::window_study_drawing;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::paper::drawing_ui;
use crate::gui::show::{self, ButtonForm, command_button_as};
use crate::gui::state::State;
use eframe::egui;
use egui::{Sense, Stroke, Ui, WidgetInfo, pos2};

/// Height of one of the figures, and of legend and axis.
const FIGURE: f32 = 128.0;
const AROUND: f32 = 120.0;

pub(super) fn windows_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some((windows, current)) = state.windows() else {
        show::note(ui, "Fitting in all windows …");
        return;
    };
    let Some(picture) = windows.picture.as_deref() else {
        show::note(
            ui,
            "No window has enough points on both sides of the minimum. Compute more points near it.",
        );
        return;
    };
    if !current {
        ui.multiply_opacity(0.55);
    }
    show::note(ui, &picture.sentence);
    if let Some(target) = picture.proposal.map(|i| &picture.targets[i]) {
        let command = Command::SetWindow { window: target.window, resting: true };
        let taken = state.window() == Some(target.window);
        if taken {
            show::note(ui, "The proposed window is in force.");
        } else {
            command_button_as(ui, state, "Take the proposed window", command, ButtonForm::Link, out);
        }
    }
    picture_ui(ui, picture, out);
    show::note(
        ui,
        "One line a model, over the windows that lie evenly about rₑ. Click a line to take that window.",
    );
}

fn picture_ui(ui: &mut Ui, picture: &WindowPicture, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let height = FIGURE * picture.figures.len() as f32 + AROUND;
    let size = [f64::from(ui.available_width()), f64::from(height)];
    let (drawing, frames) =
        window_study_drawing(picture, size, f64::from(look::SMALL), ui.visuals().dark_mode);
    let response = drawing_ui(ui, &drawing, Sense::click());
    response.widget_info(|| {
        WidgetInfo::labeled(egui::Role::Figure, true, format!("Window study. {}", picture.sentence))
    });
    let origin = response.rect.min;
    let Some(pointer) = response.hover_pos() else { return };
    let on_paper = [f64::from(pointer.x - origin.x), f64::from(pointer.y - origin.y)];
    let found = frames.iter().enumerate().find_map(|(i, frame)| {
        let target = picture.nearest(i, frame.value(on_paper)?)?;
        Some((frame.place(picture.targets[target].at[i]?), &picture.targets[target]))
    });
    let Some(([x, y], target)) = found else { return };
    let at = pos2(origin.x + x as f32, origin.y + y as f32);
    ui.painter().circle_stroke(at, 5.0, Stroke::new(2.0, look.accent));
    let clicked = response.clicked();
    response
        .on_hover_cursor(egui::CursorIcon::PointingHand)
        .on_hover_text_at_pointer(format!("{}. Click to take this window.", target.label));
    if clicked {
        out.push(Command::SetWindow { window: target.window, resting: true });
    }
}
