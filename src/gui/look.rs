//! Colours, text sizes and spacing, for dark and light. No other file names a colour or a size.

use crate::figure::Role;
use crate::figure::drawing::palette::{self, Palette, Rgb};
use eframe::egui;
use egui::{Color32, CornerRadius, FontFamily, FontId, Margin, Stroke, TextStyle, Theme, vec2};

/// Text sizes in points: small print, secondary, body, sentence.
pub const SMALL: f32 = 11.5;
/// Secondary text and figures.
pub const SECONDARY: f32 = 12.5;
/// Body text.
pub const BODY: f32 = 13.0;
/// The sentence on top.
pub const SENTENCE: f32 = 14.5;
/// Height of a row.
pub const ROW: f32 = 25.0;
/// The unit of spacing.
pub const STEP: f32 = 4.0;
/// Radius of corners.
pub const CORNER: u8 = 6;
/// Side length of what can be grabbed.
pub const GRAB: f32 = 14.0;

/// The colours of one theme, by what they are for.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs, reason = "each name says what the colour is for")]
pub struct Look {
    pub palette: &'static Palette,
    pub ground: Color32,
    pub panel: Color32,
    pub raised: Color32,
    pub rule: Color32,
    pub grid: Color32,
    pub text: Color32,
    pub dim: Color32,
    pub faint: Color32,
    pub scan: Color32,
    pub harmonic: Color32,
    pub morse: Color32,
    pub polynomial: Color32,
    pub reach: Color32,
    pub outside: Color32,
    pub level: Color32,
    pub accent: Color32,
    pub rotation: Color32,
    pub stop: Color32,
}

const fn rgb(hex: u32) -> Color32 {
    Color32::from_rgb((hex >> 16) as u8, (hex >> 8) as u8, hex as u8)
}

const fn color(Rgb(r, g, b): Rgb) -> Color32 {
    Color32::from_rgb(r, g, b)
}

/// The colours that the window shares with pictures for paper.
const fn shared(of: &'static Palette, own: Own) -> Look {
    Look {
        palette: of,
        ground: own.ground,
        panel: own.panel,
        raised: own.raised,
        rule: own.rule,
        faint: own.faint,
        stop: own.stop,
        grid: color(of.grid),
        text: color(of.text),
        dim: color(of.dim),
        scan: color(of.scan),
        harmonic: color(of.harmonic),
        morse: color(of.morse),
        polynomial: color(of.polynomial),
        reach: color(of.reach),
        outside: color(of.outside),
        level: color(of.level),
        accent: color(of.accent),
        rotation: color(of.rotation),
    }
}

/// The colours that only the window has.
struct Own {
    ground: Color32,
    panel: Color32,
    raised: Color32,
    rule: Color32,
    faint: Color32,
    stop: Color32,
}

/// Dark theme.
pub const DARK: Look = shared(
    &palette::DARK,
    Own {
        ground: rgb(0x12161b),
        panel: rgb(0x181d24),
        raised: rgb(0x212832),
        rule: rgb(0x2c3440),
        faint: rgb(0x5f6b7a),
        stop: rgb(0xf07f7f),
    },
);

/// Light theme.
pub const LIGHT: Look = shared(
    &palette::LIGHT,
    Own {
        ground: rgb(0xf6f4ef),
        panel: rgb(0xfdfcfa),
        raised: rgb(0xffffff),
        rule: rgb(0xd8d4ca),
        faint: rgb(0x8b93a0),
        stop: rgb(0xb3261e),
    },
);

impl Look {
    /// The colours of the theme in force.
    pub fn of(ui: &egui::Ui) -> &'static Self {
        if ui.visuals().dark_mode { &DARK } else { &LIGHT }
    }

    /// The colour of a series.
    pub const fn role(&self, role: Role) -> Color32 {
        color(self.palette.role(role))
    }
}

/// The face of headings and of the sentence.
pub fn semibold(size: f32) -> FontId {
    FontId::new(size, super::fonts::semibold())
}

/// The face of running text.
pub fn plain(size: f32) -> FontId {
    FontId::new(size, FontFamily::Proportional)
}

/// The face of figures: digits of equal width.
pub fn figures(size: f32) -> FontId {
    FontId::new(size, FontFamily::Monospace)
}

/// Sets both themes of a context.
pub fn install(ctx: &egui::Context) {
    for (theme, look) in [(Theme::Dark, &DARK), (Theme::Light, &LIGHT)] {
        ctx.style_mut_of(theme, |style| apply(style, look));
    }
}

fn apply(style: &mut egui::Style, look: &Look) {
    style.text_styles = [
        (TextStyle::Small, plain(SMALL)),
        (TextStyle::Body, plain(BODY)),
        (TextStyle::Button, plain(BODY)),
        (TextStyle::Monospace, figures(SECONDARY)),
        (TextStyle::Heading, semibold(SENTENCE)),
    ]
    .into();
    let spacing = &mut style.spacing;
    spacing.item_spacing = vec2(2.0 * STEP, STEP);
    spacing.button_padding = vec2(2.0 * STEP, 3.0);
    spacing.interact_size = vec2(10.0 * STEP, ROW);
    spacing.window_margin = Margin::same(12);
    spacing.menu_margin = Margin::same(8);
    spacing.combo_width = 64.0;
    spacing.tooltip_width = 340.0;
    style.interaction.selectable_labels = false;
    style.interaction.tooltip_delay = 0.35;

    let visuals = &mut style.visuals;
    let corner = CornerRadius::same(CORNER);
    let hairline = Stroke::new(1.0, look.rule);
    visuals.panel_fill = look.panel;
    visuals.window_fill = look.raised;
    visuals.window_stroke = hairline;
    visuals.window_corner_radius = corner;
    visuals.menu_corner_radius = corner;
    visuals.extreme_bg_color = look.ground;
    visuals.faint_bg_color = look.raised;
    visuals.hyperlink_color = look.accent;
    visuals.warn_fg_color = look.accent;
    visuals.error_fg_color = look.stop;
    visuals.selection.bg_fill = look.reach.gamma_multiply(0.35);
    visuals.selection.stroke = Stroke::new(1.0, look.text);
    visuals.text_cursor.stroke = Stroke::new(1.5, look.accent);
    visuals.override_text_color = None;
    let states = &mut visuals.widgets;
    for (state, fill, border, text) in [
        (&mut states.noninteractive, look.panel, look.rule, look.text),
        (&mut states.inactive, look.raised, look.rule, look.text),
        (&mut states.hovered, look.raised, look.dim, look.text),
        (&mut states.active, look.rule, look.accent, look.text),
        (&mut states.open, look.raised, look.dim, look.text),
    ] {
        state.bg_fill = fill;
        state.weak_bg_fill = fill;
        state.bg_stroke = Stroke::new(1.0, border);
        state.fg_stroke = Stroke::new(1.0, text);
        state.corner_radius = corner;
        state.expansion = 0.0;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative luminance of sRGB and contrast ratio as WCAG 2.1 defines them (formula from memory).
    fn contrast(a: Color32, b: Color32) -> f64 {
        let luminance = |c: Color32| {
            let linear = |v: u8| {
                let s = f64::from(v) / 255.0;
                if s <= 0.03928 { s / 12.92 } else { ((s + 0.055) / 1.055).powf(2.4) }
            };
            0.2126 * linear(c.r()) + 0.7152 * linear(c.g()) + 0.0722 * linear(c.b())
        };
        let (x, y) = (luminance(a), luminance(b));
        (x.max(y) + 0.05) / (x.min(y) + 0.05)
    }

    #[test]
    fn text_and_lines_stand_out() {
        for look in [DARK, LIGHT] {
            for ground in [look.ground, look.panel, look.raised] {
                for text in [look.text, look.dim, look.accent, look.stop] {
                    assert!(
                        contrast(text, ground) >= 4.5,
                        "{text:?} on {ground:?}: {}",
                        contrast(text, ground)
                    );
                }
                for line in [
                    look.scan,
                    look.morse,
                    look.polynomial,
                    look.reach,
                    look.outside,
                    look.level,
                    look.rotation,
                ] {
                    assert!(
                        contrast(line, ground) >= 3.0,
                        "{line:?} on {ground:?}: {}",
                        contrast(line, ground)
                    );
                }
            }
            // Figures in the colour of a model stand on panels and cards only.
            for ground in [look.panel, look.raised] {
                for text in [look.harmonic, look.morse, look.reach, look.rotation] {
                    assert!(
                        contrast(text, ground) >= 4.5,
                        "{text:?} on {ground:?}: {}",
                        contrast(text, ground)
                    );
                }
            }
        }
    }
}
