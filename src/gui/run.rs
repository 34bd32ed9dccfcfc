//! From the command line to the window, or to a picture of it.

use super::app::{App, Start};
use super::painter::{Canvas, render_offscreen};
use super::preferences::state_folder;
use super::shell::{Renderer, ShellOptions, run as open_window};
use super::state::Page;
use crate::files::{self, Replace};
use crate::headless::{Input, WindowArgs, read_settings};
use crate::settings::Settings;
use crate::study::study;
use eframe::egui;
use std::path::Path;

const DONE: u8 = 0;
const WRONG_USAGE: u8 = 2;
const NOT_READ: u8 = 3;
const IMPOSSIBLE: u8 = 4;

/// Opens the window, or paints it into a picture; gives the exit status.
pub fn run(arguments: WindowArgs) -> u8 {
    match start_of(&arguments) {
        Ok((start, theme)) => match &arguments.picture {
            Some(path) => paint(path, start, theme, &arguments),
            None => window(start, theme, &arguments),
        },
        Err((status, message)) => fail(status, &message),
    }
}

fn fail(status: u8, message: &str) -> u8 {
    eprintln!("parabound: {message}");
    status
}

/// What the window starts with, and the theme asked for.
fn start_of(arguments: &WindowArgs) -> Result<(Start, Option<egui::Theme>), (u8, String)> {
    let mut settings = match &arguments.choices.settings_file {
        Some(path) => read_settings(path).map_err(|message| (NOT_READ, message))?,
        None => Settings::default(),
    };
    arguments.choices.apply(&mut settings);
    let usage = |message: String| (WRONG_USAGE, message);
    if settings.read.lines.is_some() && arguments.files.is_empty() {
        let text = "patterns search text logs: name the files, or the folder they are in";
        return Err(usage(text.to_owned()));
    }
    let page = arguments.page.as_deref().map_or(Ok(Page::default()), page_of).map_err(usage)?;
    let theme = arguments.theme.as_deref().map(theme_of).transpose().map_err(usage)?;
    let start = Start { files: arguments.files.clone(), settings, page, ..Start::default() };
    Ok((start, theme))
}

fn page_of(word: &str) -> Result<Page, String> {
    let found = Page::ALL.into_iter().find(|p| p.name().eq_ignore_ascii_case(word.trim()));
    found.ok_or_else(|| {
        let known = Page::ALL.map(|p| p.name().to_lowercase()).join(", ");
        format!("page {word:?} is not known: choose {known}")
    })
}

fn theme_of(word: &str) -> Result<egui::Theme, String> {
    match word.trim().to_ascii_lowercase().as_str() {
        "light" => Ok(egui::Theme::Light),
        "dark" => Ok(egui::Theme::Dark),
        _ => Err(format!("theme {word:?} is not known: choose light or dark")),
    }
}

fn window(start: Start, theme: Option<egui::Theme>, arguments: &WindowArgs) -> u8 {
    let wanted = arguments.renderer.as_deref().map(str::parse::<Renderer>).transpose();
    let renderer = match wanted.and_then(Renderer::choose) {
        Ok(renderer) => renderer,
        Err(error) => return fail(WRONG_USAGE, &error.to_string()),
    };
    let mut options = ShellOptions { renderer, ..ShellOptions::default() };
    if let Some((width, height)) = arguments.size {
        options.size_points = [width as f32, height as f32];
    }
    let start = Start { state_folder: state_folder(), theme, ..start };
    let make = |ctx: &egui::Context| -> Box<dyn super::Program> {
        if let Some(theme) = theme {
            ctx.set_theme(theme);
        }
        Box::new(App::new(ctx, start))
    };
    match open_window(make, &options) {
        Ok(()) => DONE,
        Err(error) => fail(error.exit_status(), &error.to_string()),
    }
}

/// What `parabound study` would end with for the files in the picture: the picture shows the refusal, the
/// status says it.
fn status_of(start: &Start) -> u8 {
    let settings = &start.settings;
    let one = |files: &[std::path::PathBuf]| -> Result<u8, String> {
        let scan = Input::read(files, &settings.read)?.scan(&settings.read)?;
        let findings = study(&scan, settings).map_err(|e| e.to_string())?;
        Ok(if findings.impossible() { IMPOSSIBLE } else { DONE })
    };
    let status = |files: Vec<std::path::PathBuf>| {
        let place = files.first().map_or_else(String::new, |path| path.display().to_string());
        one(&files).unwrap_or_else(|message| fail(NOT_READ, &format!("{place}: {message}")))
    };
    Input::groups(&start.files, &settings.read).into_iter().map(status).max().unwrap_or(DONE)
}

fn paint(path: &Path, start: Start, theme: Option<egui::Theme>, arguments: &WindowArgs) -> u8 {
    if path.exists() && !arguments.overwrite {
        let message = format!("{}: this file exists and is not replaced; give --overwrite", path.display());
        return fail(NOT_READ, &message);
    }
    let scale = arguments.scale.unwrap_or(1.0);
    let (width, height) = arguments.size.unwrap_or((1400, 900));
    let pixels = |points: u32| (points as f32 * scale).round() as usize;
    let canvas = Canvas {
        size_px: [pixels(width), pixels(height)],
        pixels_per_point: scale,
        theme: theme.unwrap_or(egui::Theme::Dark),
        ..Canvas::default()
    };
    let status = status_of(&start);
    let start = Start { inline: true, ..start };
    let picture = render_offscreen(|ctx| App::new(ctx, start), canvas);
    let replace = if arguments.overwrite { Replace::Anything } else { Replace::Nothing };
    let written = picture
        .to_png()
        .map_err(|e| format!("{}: could not be encoded ({e})", path.display()))
        .and_then(|bytes| files::write(path, &bytes, replace).map_err(|e| e.to_string()));
    match written {
        Ok(()) => status,
        Err(message) => fail(NOT_READ, &message),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn patterns_need_the_logs_to_be_named() {
        let mut arguments = WindowArgs::default();
        arguments.choices.length_pattern = Some("R = (\\S+)".to_owned());
        assert!(start_of(&arguments).is_err_and(|(status, text)| status == 2 && text.contains("folder")));
        arguments.files = vec!["logs".into()];
        assert!(start_of(&arguments).is_ok_and(|(start, _)| start.settings.read.lines.is_some()));
    }

    #[test]
    fn words_of_the_command_line() {
        assert_eq!(page_of("Levels"), Ok(Page::Levels));
        assert!(page_of("colour").is_err_and(|e| e.contains("constants, levels")));
        assert_eq!(theme_of("light"), Ok(egui::Theme::Light));
        assert!(theme_of("blue").is_err());
    }
}
