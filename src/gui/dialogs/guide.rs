//! The user guide, offline: the text and pictures of `assets/guide`.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show;
use crate::gui::state::State;
use eframe::egui;
use egui::{Key, RichText, ScrollArea, TextureHandle, Ui, vec2};

const TEXT: &str = include_str!("../../../assets/guide/GUIDE.md");
const PICTURES: [(&str, &[u8]); 5] = [
    ("window-light.png", include_bytes!("../../../assets/guide/window-light.png")),
    ("logs.png", include_bytes!("../../../assets/guide/logs.png")),
    ("reach-n2.png", include_bytes!("../../../assets/guide/reach-n2.png")),
    ("levels-h2.png", include_bytes!("../../../assets/guide/levels-h2.png")),
    ("temperature-hf.png", include_bytes!("../../../assets/guide/temperature-hf.png")),
];

/// A part of the guide.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Part<'a> {
    Title(&'a str),
    Heading(&'a str),
    Item(&'a str),
    Paragraph(&'a str),
    Code(&'a str),
    Picture { caption: &'a str, file: &'a str },
}

fn parts(text: &str) -> impl Iterator<Item = Part<'_>> {
    text.lines().filter(|line| !line.trim().is_empty()).map(|line| {
        if let Some(title) = line.strip_prefix("# ") {
            return Part::Title(title);
        }
        if let Some(heading) = line.strip_prefix("## ") {
            return Part::Heading(heading);
        }
        if let Some(item) = line.strip_prefix("- ") {
            return Part::Item(item);
        }
        if let Some(code) = line.strip_prefix("    ") {
            return Part::Code(code);
        }
        let picture =
            line.strip_prefix("![").and_then(|l| l.strip_suffix(')')).and_then(|l| l.split_once("]("));
        match picture {
            Some((caption, file)) => Part::Picture { caption, file },
            None => Part::Paragraph(line),
        }
    })
}

/// Shows the guide where it is open.
pub fn guide_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    if !state.view.guide {
        return;
    }
    let room = ui.ctx().content_rect();
    let mut open = true;
    egui::Window::new("User guide")
        .open(&mut open)
        .collapsible(false)
        .resizable(false)
        .fixed_size([(room.width() - 120.0).min(760.0), room.height() - 120.0])
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .show(ui.ctx(), |ui| {
            ScrollArea::vertical().id_salt("guide").auto_shrink(false).show(ui, |ui| {
                ui.set_max_width(ui.available_width() - 12.0);
                for part in parts(TEXT) {
                    part_ui(ui, part);
                }
            });
        });
    if !open || ui.input(|i| i.key_pressed(Key::Escape)) {
        out.push(Command::ShowGuide(false));
    }
}

fn part_ui(ui: &mut Ui, part: Part<'_>) {
    let look = Look::of(ui);
    let words = |ui: &mut Ui, text: RichText| {
        ui.add(egui::Label::new(text.line_height(Some(19.0))).wrap());
    };
    match part {
        // The window has the title.
        Part::Title(_) => {}
        Part::Heading(text) => {
            ui.add_space(14.0);
            words(ui, RichText::new(text).font(look::semibold(look::SENTENCE)));
        }
        Part::Item(text) => words(ui, RichText::new(format!("•  {text}"))),
        Part::Paragraph(text) => words(ui, RichText::new(text)),
        Part::Code(text) => {
            words(ui, RichText::new(text).font(look::figures(look::SECONDARY)).color(look.dim))
        }
        Part::Picture { caption, file } => {
            if let Some(texture) = picture(ui.ctx(), file) {
                let width = ui.available_width();
                let size = texture.size_vec2();
                ui.add_space(6.0);
                ui.add(
                    egui::Image::new((texture.id(), vec2(width, width * size.y / size.x))).alt_text(caption),
                );
                show::note(ui, caption);
                ui.add_space(6.0);
            }
        }
    }
}

/// A picture of the guide, decoded once.
fn picture(ctx: &egui::Context, file: &str) -> Option<TextureHandle> {
    let id = egui::Id::unique(("guide", file));
    if let Some(texture) = ctx.data(|d| d.get_temp::<TextureHandle>(id)) {
        return Some(texture);
    }
    let (_, bytes) = PICTURES.iter().find(|(name, _)| *name == file)?;
    let picture = image::load_from_memory_with_format(bytes, image::ImageFormat::Png).ok()?.into_rgba8();
    let size = [picture.width() as usize, picture.height() as usize];
    let pixels = egui::ColorImage::from_rgba_unmultiplied(size, picture.as_raw());
    let texture = ctx.load_texture(file, pixels, egui::TextureOptions::LINEAR);
    ctx.data_mut(|d| d.insert_temp(id, texture.clone()));
    Some(texture)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_picture_of_the_text_is_there_and_readable() {
        let named: Vec<&str> = parts(TEXT)
            .filter_map(|p| match p {
                Part::Picture { file, .. } => Some(file),
                _ => None,
            })
            .collect();
        assert_eq!(named.len(), PICTURES.len());
        for file in named {
            let (_, bytes) = PICTURES.iter().find(|(name, _)| *name == file).expect(file);
            assert!(image::load_from_memory(bytes).is_ok(), "{file}");
        }
        // No sign of markup is left over for the reader.
        for part in parts(TEXT) {
            if let Part::Paragraph(text) | Part::Item(text) | Part::Heading(text) = part {
                assert!(!text.contains(['*', '`', '[']), "{text}");
            }
        }
    }
}
