//! Options of the window.

use super::UsageError;
use super::choices::StudyChoices;
use super::value::value;
use lexopt::{Parser, ValueExt as _};
use std::path::PathBuf;

/// Arguments of the window.
#[derive(Clone, Debug, Default)]
pub struct WindowArgs {
    /// Files to open.
    pub files: Vec<PathBuf>,
    /// `auto`, `gl` or `cpu`.
    pub renderer: Option<String>,
    /// `light` or `dark`.
    pub theme: Option<String>,
    /// Page at the right.
    pub page: Option<String>,
    /// Where to paint a picture instead of opening a window.
    pub picture: Option<PathBuf>,
    /// Replace an existing picture.
    pub overwrite: bool,
    /// Size of the picture in points.
    pub size: Option<(u32, u32)>,
    /// Pixels per point of the picture.
    pub scale: Option<f32>,
    /// Choices about the study.
    pub choices: StudyChoices,
}

pub(super) fn window_option(
    name: &str,
    parser: &mut Parser,
    window: &mut WindowArgs,
) -> Result<bool, UsageError> {
    let one_of = |option: &'static str, names: &'static [&'static str], parser: &mut Parser| {
        value(parser, option, &names.join(", "), |t| names.contains(&t).then(|| t.to_owned()))
    };
    match name {
        "renderer" => window.renderer = Some(one_of("renderer", &["auto", "gl", "cpu"], parser)?),
        "theme" => window.theme = Some(one_of("theme", &["light", "dark"], parser)?),
        "page" => window.page = Some(parser.value()?.string()?),
        "picture" => {
            let png = |t: &str| t.to_lowercase().ends_with(".png").then(|| PathBuf::from(t));
            window.picture = Some(value(parser, "picture", "a file name that ends in .png", png)?);
        }
        "size" => {
            let size = |t: &str| {
                let (width, height) = t.split_once('x')?;
                let side = |s: &str| s.parse().ok().filter(|n| (200..=10_000).contains(n));
                Some((side(width)?, side(height)?))
            };
            window.size = Some(value(parser, "size", "WIDTHxHEIGHT in points, 200 to 10000 each", size)?);
        }
        "scale" => {
            let scale = |t: &str| t.parse().ok().filter(|s: &f32| (0.5..=4.0).contains(s));
            window.scale = Some(value(parser, "scale", "a number from 0.5 to 4", scale)?);
        }
        _ => return Ok(false),
    }
    Ok(true)
}
