//! The notices below the plot, each with its action.

use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, command_button_as, elided};
use crate::gui::state::{Page, Preset, State};
use crate::notice::{Code, Notice, Severity};
use eframe::egui;
use egui::{Align, Color32, Frame, Layout, Margin, Panel, ScrollArea, Sense, Stroke, Ui, WidgetInfo, vec2};

/// Height of one notice.
const ROW: f32 = 24.0;
/// Rows shown without scrolling.
const MOST_ROWS: usize = 3;

pub(super) fn notices_panel_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let notices = state.study().map_or(&[][..], |s| &s.findings.notices[..]);
    let message = state.view.message.as_ref();
    let rows = notices.len() + usize::from(message.is_some());
    if rows == 0 {
        return;
    }
    let short = ui.available_height() < 700.0;
    let shown = rows.min(if short { 2 } else { MOST_ROWS });
    // The size of a panel is remembered by its name: another number of rows is another panel.
    Panel::bottom(("notices", shown))
        .exact_size(ROW * shown as f32 + 14.0)
        .resizable(false)
        .frame(Frame::new().fill(look.panel).inner_margin(Margin::symmetric(16, 6)))
        .show(ui, |ui| {
            ScrollArea::vertical()
                .id_salt(("notices", state.document.focus.map(|f| (f.scan, f.column))))
                .min_scrolled_height(0.0)
                .auto_shrink(false)
                .show(ui, |ui| {
                    ui.spacing_mut().item_spacing.y = 0.0;
                    if let Some(message) = message {
                        let mark = if message.failure { look.stop } else { look.reach };
                        row_ui(ui, &message.text, Mark::Round(mark), |ui| {
                            command_button_as(
                                ui,
                                state,
                                "Dismiss",
                                Command::DismissMessage,
                                ButtonForm::Link,
                                out,
                            );
                        });
                    }
                    if let Some(study) = state.study() {
                        for notice in notices {
                            notice_ui(ui, state, &study.findings, notice, out);
                        }
                    }
                });
        });
}

/// The mark before a notice: form and colour tell its severity.
enum Mark {
    Round(Color32),
    Ring(Color32),
    Square(Color32),
}

fn notice_ui(ui: &mut Ui, state: &State, findings: &Findings, notice: &Notice, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let mark = match notice.severity {
        Severity::Info => Mark::Ring(look.dim),
        Severity::Caution => Mark::Round(look.accent),
        Severity::Stop => Mark::Square(look.stop),
    };
    row_ui(ui, &show::typographic(&notice.text), mark, |ui| {
        for (label, command) in actions(findings, notice).into_iter().take(2) {
            command_button_as(ui, state, &label, command, ButtonForm::Link, out);
        }
    });
}

fn row_ui(ui: &mut Ui, text: &str, mark: Mark, actions: impl FnOnce(&mut Ui)) {
    let look = Look::of(ui);
    let size = vec2(ui.available_width(), ROW);
    ui.allocate_ui_with_layout(size, Layout::right_to_left(Align::Center), |ui| {
        actions(ui);
        let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, text));
        let at = egui::pos2(rect.left() + 5.0, rect.center().y);
        let painter = ui.painter();
        match mark {
            Mark::Round(color) => painter.circle_filled(at, 4.5, color),
            Mark::Ring(color) => painter.circle_stroke(at, 4.0, Stroke::new(1.5, color)),
            Mark::Square(color) => {
                painter.rect_filled(egui::Rect::from_center_size(at, vec2(9.0, 9.0)), 1.0, color)
            }
        };
        let start = egui::pos2(rect.left() + 18.0, rect.center().y);
        elided(ui, start, rect.right() - start.x - look::STEP, text, look::plain(look::BODY), look.text);
        response.on_hover_text(text);
    });
}

/// What can be done about a notice; the last one stands first from the left.
fn actions(findings: &Findings, notice: &Notice) -> Vec<(String, Command)> {
    let mut actions = Vec::new();
    let point = notice.at_bohr.first().and_then(|r| {
        let distance = |p: &&crate::findings::Point| (p.r_bohr - r).abs();
        findings
            .source
            .points
            .iter()
            .filter(|p| distance(p) < 1e-6)
            .min_by(|a, b| distance(a).total_cmp(&distance(b)))
    });
    match notice.code {
        Code::OffCurve | Code::Kink | Code::Jump => {
            if let Some(point) = point.filter(|p| p.used) {
                actions.push(("Set aside".to_owned(), Command::SetAside(point.row)));
            }
        }
        Code::LeansOnTail | Code::CoarseGrid => {
            actions.push(("Show levels".to_owned(), Command::ShowPage(Page::Levels)));
        }
        Code::AssumedTail | Code::TurnsOver | Code::HardWall | Code::Hump | Code::SecondMinimum => {
            actions.push(("Show whole well".to_owned(), Command::Zoom(Preset::WholeWell)));
        }
        Code::NarrowWindow | Code::WideWindow => {
            actions.push(("Default window".to_owned(), Command::ResetWindow));
        }
        Code::Misfit | Code::NotConverged | Code::IllConditioned | Code::AtBound => {
            actions.push(("Show fits".to_owned(), Command::ShowPage(Page::Fits)));
        }
        Code::NoMass | Code::ImplausibleMass => {
            actions.push(("Name the atoms".to_owned(), Command::ShowLeft(true)));
        }
        Code::NoMinimum | Code::MinimumAtEnd | Code::FewPoints => {
            actions.push(("Show all points".to_owned(), Command::Zoom(Preset::AllPoints)));
        }
        _ => {}
    }
    // A place to look at, where there is no better thing to do; a point is looked at before it is left out.
    let also = actions.is_empty() || matches!(notice.code, Code::OffCurve | Code::Kink | Code::Jump);
    if let Some(&r) = notice.at_angstrom().first().filter(|_| also) {
        actions.push((Command::PointAt(r).label(), Command::PointAt(r)));
    }
    actions
}
