//! The faces of the window: a sans for text in two weights, figures of equal width, and symbols.
//!
//! All of them are bundled (`assets/fonts`, with their licences), so text looks the same on every machine
//! and every symbol used here can be drawn.

use eframe::egui::{self, FontData, FontDefinitions, FontFamily};
use std::sync::Arc;

/// Name of the family for headings and the sentence.
pub const SEMIBOLD: &str = "semibold";

/// The family for headings and the sentence.
#[must_use]
pub fn semibold() -> FontFamily {
    FontFamily::Name(SEMIBOLD.into())
}

const SANS: &str = "Parabound Sans";
const SANS_SEMIBOLD: &str = "Parabound Sans SemiBold";
const MONO: &str = "Parabound Mono";
const MONO_SYMBOLS: &str = "Parabound Mono Symbols";
const SYMBOLS: &str = "Parabound Symbols";

/// Makes the bundled faces the fonts of this context. Call before the first pass.
pub fn install_fonts(ctx: &egui::Context) {
    ctx.set_fonts(definitions(FontDefinitions::default()));
}

/// Our faces in front of those already there, which stay as a last resort for file names in other scripts.
fn definitions(mut fonts: FontDefinitions) -> FontDefinitions {
    let mut add = |name: &str, bytes: &'static [u8]| {
        fonts.font_data.insert(name.to_owned(), Arc::new(FontData::from_static(bytes)));
    };
    add(SANS, include_bytes!("../../assets/fonts/ParaboundSans-Regular.otf"));
    add(SANS_SEMIBOLD, include_bytes!("../../assets/fonts/ParaboundSans-SemiBold.otf"));
    add(MONO, include_bytes!("../../assets/fonts/ParaboundMono-Regular.ttf"));
    add(MONO_SYMBOLS, include_bytes!("../../assets/fonts/ParaboundMonoSymbols.ttf"));
    add(SYMBOLS, include_bytes!("../../assets/fonts/ParaboundSymbols.ttf"));
    let fallback = fonts.families.get(&FontFamily::Proportional).cloned().unwrap_or_default();
    let faces = [
        (FontFamily::Proportional, &[SANS, SYMBOLS][..]),
        (semibold(), &[SANS_SEMIBOLD, SYMBOLS]),
        (FontFamily::Monospace, &[MONO, MONO_SYMBOLS, SYMBOLS]),
    ];
    for (family, names) in faces {
        let last = fonts.families.get(&family).unwrap_or(&fallback).clone();
        let all = names.iter().map(|name| (*name).to_owned()).chain(last).collect();
        fonts.families.insert(family, all);
    }
    fonts
}

#[cfg(test)]
mod tests {
    use super::*;
    use egui::FontId;

    /// Every symbol the window, the tables and the figures may show, apart from plain ASCII.
    const SYMBOLS_USED: &str = "₀₁₂₃₄₅₆₇₈₉₊₋₍₎ₐₑₕₖₗₘₙₒₚᵣₛₜᵤᵥₓ⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁽⁾ⁿⁱ\
        αβγδεζηθικλμνξοπρστυφχψωϕϑΑΒΓΔΕΖΗΘΙΚΛΜΝΞΟΠΡΣΤΥΦΧΨΩ\
        Åµℏ⟨⟩‖′″‴⁗→←↔↑↓⇌±∓×÷·∙•−–—…≤≥≪≫≈≠≡∝∼√∫∂∇∑∏∞∈∆½¼¾⅓⅔°‰†‡\
        ●○◆◇▲▼△▽▶◀■□✓✗“”‘’«»§¶©®äöüÄÖÜßéèçñøåæœŁł⌘⇧⌥";

    #[test]
    fn our_own_faces_draw_every_symbol() {
        let own = definitions(FontDefinitions::empty());
        let mut fonts = egui::epaint::text::Fonts::new(egui::epaint::text::TextOptions::default(), own);
        let mut view = fonts.with_pixels_per_point(1.0);
        for family in [FontFamily::Proportional, FontFamily::Monospace, semibold()] {
            let id = FontId::new(13.0, family.clone());
            let missing: String = SYMBOLS_USED.chars().filter(|c| !view.has_glyph(&id, *c)).collect();
            assert_eq!(missing, "", "{family:?}");
            assert!(view.has_glyphs(&id, &(' '..='~').collect::<String>()), "{family:?}");
            // The check itself must be able to fail: no face here has this one.
            assert!(!view.has_glyph(&id, '\u{1F980}'), "{family:?}");
        }
    }

    /// Whatever stands in a text of the window is in our own faces.
    #[test]
    fn every_sign_in_the_sources_of_the_window_can_be_drawn() {
        let own = definitions(FontDefinitions::empty());
        let mut fonts = egui::epaint::text::Fonts::new(egui::epaint::text::TextOptions::default(), own);
        let mut view = fonts.with_pixels_per_point(1.0);
        let id = FontId::new(13.0, FontFamily::Proportional);
        let mut missing = String::new();
        let mut folders = ["gui", "figure"]
            .map(|f| std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("src").join(f))
            .to_vec();
        while let Some(folder) = folders.pop() {
            for entry in std::fs::read_dir(folder).expect("a folder").flatten() {
                let path = entry.path();
                if path.is_dir() {
                    folders.push(path);
                    continue;
                }
                let text = std::fs::read_to_string(&path).expect("a source");
                let code = text.split("#[cfg(test)]").next().unwrap_or(&text);
                let lines = code.lines().filter(|l| !l.trim_start().starts_with("//"));
                missing
                    .extend(lines.flat_map(str::chars).filter(|c| !c.is_ascii() && !view.has_glyph(&id, *c)));
            }
        }
        let spaces = ['\u{2009}', '\u{202f}', '\u{a0}'];
        missing.retain(|c| !spaces.contains(&c));
        assert_eq!(missing, "");
    }

    #[test]
    fn figures_have_equal_width() {
        let ctx = egui::Context::default();
        install_fonts(&ctx);
        let mut out = ctx.run_ui(egui::RawInput::default(), |_| {});
        out.textures_delta.clear();
        let id = FontId::new(12.5, FontFamily::Monospace);
        let widths: Vec<f32> =
            "0123456789.-+()−±".chars().map(|c| ctx.fonts_mut(|f| f.glyph_width(&id, c))).collect();
        assert!(widths.iter().all(|w| *w > 0.0 && (w - widths[0]).abs() < 1e-3), "{widths:?}");
    }
}
