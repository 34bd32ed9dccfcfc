//! The notices below the plot, each with its action.

use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, command_button, command_button_as, elided};
use crate::gui::state::{Page, Preset, State};
use crate::notice::{Code, Notice, Severity};
use eframe::egui;
use egui::{Align, Color32, Frame, Layout, Margin, Panel, ScrollArea, Sense, Stroke, Ui, WidgetInfo, vec2};

/// Height of one notice.
const ROW: f32 = 24.0;
/// Rows shown without scrolling.
const MOST_ROWS: usize = 3;
/// Margin at the sides.
const MARGIN: i8 = 16;
/// Room for the mark.
const TEXT_INDENT: f32 = 18.0;
/// Room that a notice shown in full leaves for its actions.
const ROOM_FOR_ACTIONS: f32 = 190.0;

pub(super) fn notices_panel_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let notices = state.study().map_or(&[][..], |s| &s.findings.notices[..]);
    let message = state.view.message.as_ref();
    let rows = notices.len() + usize::from(message.is_some());
    if rows == 0 {
        return;
    }
    let most = if ui.available_height() < 700.0 { 2 } else { MOST_ROWS };
    let shown = if state.view.all_notices { rows } else { rows.min(most) };
    let open = state.view.open_notice.and_then(|i| notices.get(i));
    let width = ui.available_width() - 2.0 * f32::from(MARGIN);
    let more = open.map_or(0.0, |n| open_height(ui, &show::typographic(&n.text), width) - ROW);
    // The line under the notices takes the place of one: what is above holds still when one more comes.
    let foot = if rows > most { ROW } else { 0.0 };
    let below = if state.view.all_notices { foot } else { 0.0 };
    let height = (ROW * shown as f32 + more + below).min(0.45 * ui.available_height()) + 14.0;
    // The size of a panel is remembered by its name: another height is another panel.
    Panel::bottom(("notices", height.to_bits()))
        .exact_size(height)
        .resizable(false)
        .frame(Frame::new().fill(look.panel).inner_margin(Margin::symmetric(MARGIN, 6)))
        .show(ui, |ui| {
            ui.spacing_mut().item_spacing.y = 0.0;
            ScrollArea::vertical()
                .id_salt(("notices", state.document.focus.map(|f| (f.scan, f.column))))
                .min_scrolled_height(0.0)
                .max_height(ui.available_height() - foot)
                .auto_shrink(false)
                .show(ui, |ui| list_ui(ui, state, out));
            if foot > 0.0 {
                foot_ui(ui, state, rows, out);
            }
        });
}

/// The latest message, then the notices.
fn list_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    if let Some(message) = &state.view.message {
        let mark = if message.failure { look.stop } else { look.reach };
        row_ui(ui, &message.text, Mark::Round(mark), false, |ui| {
            command_button_as(ui, state, "Dismiss", Command::DismissMessage, ButtonForm::Link, out);
            if let Some(action) = &message.action {
                command_button(ui, state, action.clone(), ButtonForm::Link, out);
            }
        });
    }
    let Some(study) = state.study() else { return };
    for (index, notice) in study.findings.notices.iter().enumerate() {
        notice_ui(ui, state, &study.findings, index, notice, out);
    }
}

/// How many there are, and the way to see them all.
fn foot_ui(ui: &mut Ui, state: &State, rows: usize, out: &mut Vec<Command>) {
    let all = state.view.all_notices;
    let label = if all { "show fewer".to_owned() } else { format!("show all {rows}") };
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        command_button_as(ui, state, &label, Command::ShowAllNotices(!all), ButtonForm::Quiet, out);
    });
}

/// Height of a notice shown in full.
fn open_height(ui: &Ui, text: &str, width: f32) -> f32 {
    let room = (width - ROOM_FOR_ACTIONS - TEXT_INDENT).max(80.0);
    let galley = ui.painter().layout(text.to_owned(), look::plain(look::BODY), look::DARK.text, room);
    (galley.size().y + 8.0).max(ROW)
}

/// The mark before a notice: form and colour tell its severity.
enum Mark {
    Round(Color32),
    Ring(Color32),
    Square(Color32),
}

fn notice_ui(
    ui: &mut Ui,
    state: &State,
    findings: &Findings,
    index: usize,
    notice: &Notice,
    out: &mut Vec<Command>,
) {
    let look = Look::of(ui);
    let mark = match notice.severity {
        Severity::Info => Mark::Ring(look.dim),
        Severity::Caution => Mark::Round(look.accent),
        Severity::Stop => Mark::Square(look.stop),
    };
    let open = state.view.open_notice == Some(index);
    let clicked = row_ui(ui, &show::typographic(&notice.text), mark, open, |ui| {
        for (label, command) in actions(findings, notice).into_iter().take(2) {
            command_button_as(ui, state, &label, command, ButtonForm::Link, out);
        }
    });
    if clicked {
        out.push(Command::OpenNotice((!open).then_some(index)));
    }
}

/// One notice with its actions; true when its text was clicked.
fn row_ui(ui: &mut Ui, text: &str, mark: Mark, open: bool, actions: impl FnOnce(&mut Ui)) -> bool {
    let look = Look::of(ui);
    let width = ui.available_width();
    let height = if open { open_height(ui, text, width) } else { ROW };
    let mut clicked = false;
    ui.allocate_ui_with_layout(vec2(width, height), Layout::right_to_left(Align::Min), |ui| {
        ui.allocate_ui_with_layout(vec2(0.0, ROW), Layout::right_to_left(Align::Center), actions);
        let left = if open { width - ROOM_FOR_ACTIONS } else { ui.available_width() };
        let space = (ui.available_width() - left).max(0.0);
        ui.add_space(space);
        let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), height), Sense::click());
        response.widget_info(|| WidgetInfo::selected(egui::Role::Button, true, open, text));
        let at = egui::pos2(rect.left() + 5.0, rect.top() + ROW / 2.0);
        let painter = ui.painter();
        match mark {
            Mark::Round(color) => painter.circle_filled(at, 4.5, color),
            Mark::Ring(color) => painter.circle_stroke(at, 4.0, Stroke::new(1.5, color)),
            Mark::Square(color) => {
                painter.rect_filled(egui::Rect::from_center_size(at, vec2(9.0, 9.0)), 1.0, color)
            }
        };
        let start = egui::pos2(rect.left() + TEXT_INDENT, rect.top() + ROW / 2.0);
        let room = rect.right() - start.x - look::STEP;
        if response.has_focus() {
            painter.rect_stroke(rect, 3.0, Stroke::new(1.0, look.accent), egui::StrokeKind::Inside);
        }
        if open {
            let galley = painter.layout(text.to_owned(), look::plain(look::BODY), look.text, room);
            painter.galley(egui::pos2(start.x, rect.top() + 4.0), galley, look.text);
        } else {
            elided(ui, start, room, text, look::plain(look::BODY), look.text);
        }
        let response = response.on_hover_cursor(egui::CursorIcon::PointingHand);
        clicked = response.clicked();
        if !open {
            response.on_hover_text(text);
        }
    });
    clicked
}

/// The rows of the points in use at bond lengths (bohr) like these.
fn rows(findings: &Findings, these: impl Fn(f64) -> bool) -> Vec<usize> {
    findings.source.points.iter().filter(|p| p.used && these(p.r_bohr)).map(|p| p.row).collect()
}

/// Restricting a broken scan to one of its branches, the one with the lowest point first from the left.
fn branches(findings: &Findings, notice: &Notice) -> Vec<(String, Command)> {
    let middle = 0.5 * (notice.at_bohr[0] + notice.at_bohr[1]);
    let used = findings.source.points.iter().filter(|p| p.used);
    let lowest = used.min_by(|a, b| a.energy_hartree.total_cmp(&b.energy_hartree)).map(|p| p.r_bohr);
    let only = |name: &str, outside: &dyn Fn(f64) -> bool| {
        let reason = "beyond a break of the curve".to_owned();
        (name.to_owned(), Command::SetRowsAside { rows: rows(findings, outside), reason })
    };
    let mut both =
        vec![only("Only the inner part", &|r| r > middle), only("Only the outer part", &|r| r < middle)];
    if lowest.is_some_and(|r| r < middle) {
        both.reverse();
    }
    both
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
            if notice.at_bohr.len() == 2 {
                actions.extend(branches(findings, notice));
            } else if let Some(point) = point.filter(|p| p.used) {
                actions.push(("Set aside".to_owned(), Command::SetAside(point.row)));
            }
        }
        Code::RepeatedGeometry => {
            let other = point.and_then(|p| {
                let same = |o: &&crate::findings::Point| !o.used && (o.r_bohr - p.r_bohr).abs() < 1e-6;
                findings.source.points.iter().find(same)
            });
            if let Some(other) = other {
                actions.push(("Use the other one".to_owned(), Command::Restore(other.row)));
            }
        }
        Code::SetAside => {
            let rows = findings.settings.set_aside.iter().map(|s| s.row).collect();
            actions.push(("Use them again".to_owned(), Command::RestoreRows(rows)));
        }
        Code::Wiggles => {
            if let Some(&from) = notice.at_bohr.first() {
                let reason = "the curve wiggles there".to_owned();
                let beyond = Command::SetRowsAside { rows: rows(findings, |r| r >= from), reason };
                actions.push(("Leave out beyond".to_owned(), beyond));
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
            actions.push((Command::NameAtoms.label(), Command::NameAtoms));
        }
        Code::NoMinimum | Code::MinimumAtEnd | Code::FewPoints => {
            actions.push(("Show all points".to_owned(), Command::Zoom(Preset::AllPoints)));
        }
        _ => {}
    }
    // A place to look at, where there is no better thing to do; a point is looked at before it is left out.
    let also = actions.is_empty() || matches!(notice.code, Code::OffCurve | Code::RepeatedGeometry);
    if let Some(&r) = notice.at_angstrom().first().filter(|_| also) {
        actions.push((Command::PointAt(r).label(), Command::PointAt(r)));
    }
    actions
}
