//! What the program remembers from one start to the next, beside any study: theme, size of the interface, files
//! used last, how files were read. One small file, shared by all windows: each change reads it anew under a lock.

use super::apply::Effect;
use super::command::{Command, InterfaceSize};
use super::reading::Remembered;
use super::state::State;
use crate::files::{Replace, write};
use eframe::egui;
use serde::{Deserialize, Serialize};
use std::fs::File;
use std::path::{Path, PathBuf};

const FILE: &str = "preferences.json";

/// What is remembered. Keys of other versions are passed over.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub struct Preferences {
    /// Dark or light; none: as the desktop.
    pub dark: Option<bool>,
    /// Size of the interface; 1 is as the desktop has it.
    pub zoom: f32,
    /// Whether nothing moves by itself.
    pub still: bool,
    /// Whether the hints on the sample were put away.
    pub hints_seen: bool,
    /// Files used last, the latest first.
    pub recent: Vec<PathBuf>,
    /// How files were read.
    pub reading: Remembered,
}

impl Default for Preferences {
    fn default() -> Self {
        let (recent, reading) = (Vec::new(), Remembered::default());
        Self { dark: None, zoom: 1.0, still: false, hints_seen: false, recent, reading }
    }
}

/// Smallest and largest size of the interface.
pub const ZOOM_RANGE: [f32; 2] = [0.5, 3.0];

/// Carries out a command about what the program remembers; none when the command is about something else.
pub(super) fn apply_preference(command: &Command, state: &mut State) -> Option<Vec<Effect>> {
    let preferences = &mut state.preferences;
    match command {
        Command::SetDark(dark) => preferences.dark = Some(*dark),
        Command::SetStill(still) => preferences.still = *still,
        Command::SizeInterface(size) => {
            let zoom = match size {
                InterfaceSize::Larger => preferences.zoom + 0.1,
                InterfaceSize::Smaller => preferences.zoom - 0.1,
                InterfaceSize::Usual => 1.0,
            };
            // In tenths, so that as many steps back lead to the same size.
            preferences.zoom = ((10.0 * zoom).round() / 10.0).clamp(ZOOM_RANGE[0], ZOOM_RANGE[1]);
        }
        Command::ShowHints(false) => {
            state.view.hints = false;
            preferences.hints_seen = true;
        }
        _ => return None,
    }
    Some(vec![Effect::Prefer])
}

/// Gives the window the look that is remembered.
pub(super) fn dress(ctx: &egui::Context, preferences: &Preferences) {
    if let Some(dark) = preferences.dark {
        ctx.set_theme(if dark { egui::Theme::Dark } else { egui::Theme::Light });
    }
    ctx.set_zoom_factor(preferences.zoom);
    ctx.all_styles_mut(|style| {
        let usual = egui::Style::default();
        style.animation_time = if preferences.still { 0.0 } else { usual.animation_time };
        style.scroll_animation =
            if preferences.still { egui::style::ScrollAnimation::none() } else { usual.scroll_animation };
        style.visuals.text_cursor.blink = !preferences.still;
    });
}

impl Preferences {
    /// What is remembered in this folder; the defaults where nothing is, or nothing that can be read.
    pub fn load(folder: &Path) -> Self {
        let read = std::fs::read(folder.join(FILE)).ok();
        let mut found: Self = read.and_then(|b| serde_json::from_slice(&b).ok()).unwrap_or_default();
        found.zoom =
            if found.zoom.is_finite() { found.zoom.clamp(ZOOM_RANGE[0], ZOOM_RANGE[1]) } else { 1.0 };
        found
    }

    /// Changes what is remembered; other windows may do the same at the same time.
    ///
    /// # Errors
    /// What the system says, in words.
    pub fn update(folder: &Path, change: impl FnOnce(&mut Self)) -> Result<(), String> {
        let problem = |e: std::io::Error| format!("Preferences are not kept: {}: {e}.", folder.display());
        std::fs::create_dir_all(folder).map_err(problem)?;
        let lock = File::options().create(true).append(true).open(folder.join("preferences.lock"));
        let lock = lock.map_err(problem)?;
        lock.lock().map_err(problem)?;
        let before = Self::load(folder);
        let mut now = before.clone();
        change(&mut now);
        if now == before {
            return Ok(());
        }
        let text = serde_json::to_string_pretty(&now).map_err(|e| problem(e.into()))?;
        write(&folder.join(FILE), text.as_bytes(), Replace::Anything).map_err(|e| format!("{e}."))
    }
}

/// The folder for what the program keeps by itself: the one that `PARABOUND_STATE_DIR` names, else the usual
/// place of the system (XDG Base Directory Specification on Linux; common practice elsewhere, no source).
pub fn state_folder() -> Option<PathBuf> {
    let set = |name: &str| std::env::var_os(name).filter(|v| !v.is_empty()).map(PathBuf::from);
    if let Some(folder) = set("PARABOUND_STATE_DIR") {
        return Some(folder);
    }
    if cfg!(target_os = "windows") {
        return Some(set("LOCALAPPDATA")?.join("Parabound"));
    }
    if cfg!(target_os = "macos") {
        return Some(set("HOME")?.join("Library/Application Support/Parabound"));
    }
    let base = set("XDG_STATE_HOME").filter(|p| p.is_absolute());
    Some(base.or_else(|| Some(set("HOME")?.join(".local/state")))?.join("parabound"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn changes_of_two_windows_are_both_kept() {
        let folder = tempfile::tempdir().expect("a folder");
        std::thread::scope(|scope| {
            for i in 0..8 {
                let path = folder.path();
                scope.spawn(move || {
                    Preferences::update(path, |p| p.recent.push(PathBuf::from(format!("{i}.csv"))))
                        .expect("written");
                });
            }
        });
        assert_eq!(Preferences::load(folder.path()).recent.len(), 8);
    }

    #[test]
    fn nonsense_is_passed_over() {
        let folder = tempfile::tempdir().expect("a folder");
        std::fs::write(folder.path().join(FILE), "{\"zoom\": 1e9, \"colour\": 3}").expect("written");
        assert_eq!(Preferences::load(folder.path()).zoom, ZOOM_RANGE[1]);
        std::fs::write(folder.path().join(FILE), "not JSON").expect("written");
        assert_eq!(Preferences::load(folder.path()), Preferences::default());
    }
}
