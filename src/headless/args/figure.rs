//! Options of `parabound figure`.

use super::UsageError;
use super::choices::StudyChoices;
use super::value::{finite, value};
use crate::figure::GaugeMeasure;
use crate::figure::drawing::{Paper, Subject, View};
use lexopt::Parser;
use std::path::PathBuf;

/// Arguments of a picture.
#[derive(Clone, Debug)]
pub struct FigureArgs {
    /// The scan.
    pub file: PathBuf,
    /// Choices about the study.
    pub choices: StudyChoices,
    /// The picture: its ending says the format.
    pub out: PathBuf,
    /// Which picture.
    pub subject: Subject,
    /// The paper.
    pub paper: Paper,
    /// Dots per inch of a PNG picture.
    pub dots_per_inch: f64,
    /// Replace an existing file.
    pub overwrite: bool,
}

/// Options of a picture as far as they are given.
#[derive(Default)]
pub(super) struct FigureOptions {
    pub(super) out: Option<PathBuf>,
    pub(super) subject: Option<Subject>,
    pub(super) paper: Paper,
    pub(super) dots_per_inch: Option<f64>,
}

pub(super) fn figure_option(
    name: &str,
    parser: &mut Parser,
    figure: &mut FigureOptions,
) -> Result<bool, UsageError> {
    fn named<T: Copy>(list: &[(&str, T)], text: &str) -> Option<T> {
        list.iter().find(|(name, _)| *name == text).map(|(_, value)| *value)
    }
    fn names<T>(list: &[(&str, T)]) -> String {
        list.iter().map(|(name, _)| *name).collect::<Vec<_>>().join(", ")
    }
    let range = |from: f64, to: f64| move |t: &str| finite(t).filter(|v| (from..=to).contains(v));
    match name {
        "out" => figure.out = Some(parser.value()?.into()),
        "what" => {
            let subject = |t: &str| named(&Subject::ALL, t);
            figure.subject = Some(value(parser, "what", &names(&Subject::ALL), subject)?);
        }
        "view" => figure.paper.view = value(parser, "view", &names(&View::ALL), |t| named(&View::ALL, t))?,
        "gauge" => {
            let list = &GaugeMeasure::ALL;
            figure.paper.gauge = value(parser, "gauge", &names(list), |t| named(list, t))?;
        }
        "show-j" => {
            let j = |t: &str| t.parse().ok().filter(|j| *j <= 1000);
            figure.paper.j = value(parser, "show-j", "a whole number from 0 to 1000", j)?;
        }
        "width-mm" => {
            figure.paper.width_mm =
                value(parser, "width-mm", "a number from 40 to 1000", range(40.0, 1000.0))?;
        }
        "font-pt" => {
            figure.paper.font_pt = value(parser, "font-pt", "a number from 4 to 40", range(4.0, 40.0))?;
        }
        "theme" => {
            figure.paper.dark =
                value(parser, "theme", "light, dark", |t| named(&[("light", false), ("dark", true)], t))?;
        }
        "dpi" => {
            figure.dots_per_inch =
                Some(value(parser, "dpi", "a number from 50 to 1200", range(50.0, 1200.0))?);
        }
        _ => return Ok(false),
    }
    Ok(true)
}
