//! A table of any width: it scrolls both ways, its head and its first column stay.

use crate::export::sheet::{Cell, Heading, Sheet};
use crate::gui::look::{self, Look};
use crate::gui::show;
use eframe::egui;
use egui::{Align2, Rect, ScrollArea, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Heights of a row and of the head.
pub(super) const ROW: f32 = 22.0;
pub(super) const HEAD: f32 = 38.0;
/// Width of a first column of quantum numbers, and of the other columns.
pub(super) const FIRST: f32 = 34.0;
const OTHER: f32 = 92.0;

/// Shows a table in at most this height; `first` is the width of its first column.
pub(super) fn grid_ui(ui: &mut Ui, id: &str, sheet: &Sheet, first: f32, most: f32) {
    let others = sheet.columns.len().saturating_sub(1) as f32;
    // Few columns share the room.
    let room = (ui.available_width() - 12.0 - first) / others.max(1.0);
    let wide = room.clamp(if first > FIRST { 0.7 * OTHER } else { OTHER }, 1.6 * OTHER);
    let size = vec2(first + wide * others, HEAD + ROW * sheet.rows.len() as f32);
    ScrollArea::both()
        .id_salt(id)
        .max_height(most.max(HEAD + 3.0 * ROW))
        .auto_shrink([false, true])
        .show_viewport(ui, |ui, view| {
            let (rect, _) = ui.allocate_exact_size(vec2(size.x, size.y + 8.0), Sense::hover());
            let table = Table { sheet, rect, view, first, wide };
            let start = ((view.top() / ROW).floor().max(0.0) as usize).min(sheet.rows.len());
            let last = ((((view.bottom() - HEAD) / ROW).ceil()).max(0.0) as usize + 1).min(sheet.rows.len());
            for row in start..last {
                table.row_ui(ui, row);
            }
            table.head_ui(ui);
        });
}

struct Table<'a> {
    sheet: &'a Sheet,
    rect: Rect,
    /// The part in sight, from the table's own corner.
    view: Rect,
    first: f32,
    wide: f32,
}

impl Table<'_> {
    /// Right edge of a column on the screen; the first one stays where it is.
    fn right(&self, column: usize) -> f32 {
        let stays = self.rect.left() + self.view.left();
        if column == 0 {
            stays + self.first - 10.0
        } else {
            self.rect.left() + self.first + self.wide * column as f32
        }
    }

    fn row_ui(&self, ui: &Ui, row: usize) {
        let look = Look::of(ui);
        let y = self.rect.top() + HEAD + ROW * (row as f32 + 0.5);
        let cells = &self.sheet.rows[row];
        let line = Rect::from_min_size(
            pos2(self.rect.left() + self.view.left(), y - 0.5 * ROW),
            vec2(self.view.width(), ROW),
        );
        let response = ui.interact(line, ui.scope_id().with(("row", row)), Sense::hover());
        if response.hovered() {
            ui.painter().rect_filled(line, 4.0, look.raised);
        }
        for (column, cell) in cells.iter().enumerate().skip(1) {
            let color = if cell.apart { look.rotation } else { look.text };
            let at = pos2(self.right(column), y);
            show::text_in(ui, at, Align2::RIGHT_CENTER, &cell.shown, &look::figures(look::SECONDARY), color);
        }
        // Over what has been scrolled under it.
        let ground = if response.hovered() { look.raised } else { look.panel };
        ui.painter().rect_filled(Rect::from_min_size(line.min, vec2(self.first - 4.0, ROW)), 0.0, ground);
        if let Some(cell) = cells.first() {
            let at = pos2(self.right(0), y);
            show::text_in(
                ui,
                at,
                Align2::RIGHT_CENTER,
                &cell.shown,
                &look::figures(look::SECONDARY),
                look.dim,
            );
        }
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, words(self.sheet, cells)));
    }

    fn head_ui(&self, ui: &Ui) {
        let look = Look::of(ui);
        let top = self.rect.top() + self.view.top();
        let head = Rect::from_min_size(
            pos2(self.rect.left() + self.view.left(), top),
            vec2(self.view.width(), HEAD),
        );
        ui.painter().rect_filled(head, 0.0, look.panel);
        let put = |column: usize, heading: &Heading| {
            for (y, text) in [(top + 10.0, &heading.name), (top + 26.0, &heading.unit)] {
                let at = pos2(self.right(column), y);
                show::text_in(ui, at, Align2::RIGHT_CENTER, text, &look::plain(look::SMALL), look.dim);
            }
        };
        for (column, heading) in self.sheet.columns.iter().enumerate().skip(1) {
            put(column, heading);
        }
        ui.painter().rect_filled(
            Rect::from_min_size(head.min, vec2(self.first - 4.0, HEAD)),
            0.0,
            look.panel,
        );
        if let Some(heading) = self.sheet.columns.first() {
            put(0, heading);
        }
        ui.painter().hline(head.x_range(), head.bottom(), Stroke::new(1.0, look.rule));
    }
}

/// A row as it is read aloud.
fn words(sheet: &Sheet, cells: &[Cell]) -> String {
    let one = |(heading, cell): (&Heading, &Cell)| format!("{} {}", heading.name, cell.shown);
    sheet.columns.iter().zip(cells).map(one).collect::<Vec<_>>().join(", ")
}
