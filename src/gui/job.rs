//! What the worker does: the study of one curve with everything drawn of it.

use super::compute::Ticket;
use super::state::{CurveKey, Failure, Study};
use crate::figure::Pictures;
use crate::scan::Scan;
use crate::settings::Settings;
use crate::study::{Mark, Stage, study_observed};
use std::sync::Arc;

/// A study as the worker does it; tests put others in its place.
pub type StudyJob = fn(&Scan, &Settings, &Ticket) -> Result<Study, String>;

/// What is asked of the worker: the curve, its scan, its settings.
pub(super) type Request = (CurveKey, Arc<Scan>, Settings);

/// The study with everything drawn of it.
///
/// # Errors
/// Why settings and scan do not fit together.
pub fn compute(scan: &Scan, settings: &Settings, ticket: &Ticket) -> Result<Study, String> {
    let observer = |stage: Stage, mark: Mark| {
        if matches!(mark, Mark::Begins) {
            ticket.step(stage.name());
        }
    };
    let findings = study_observed(scan, settings, &observer).map_err(|e| e.to_string())?;
    ticket.step("drawing");
    let pictures = Arc::new(Pictures::of(&findings));
    Ok(Study { findings: Arc::new(findings), pictures })
}

/// What is told of a computation that broke off.
pub(super) fn broken_off(panic: &str, (_, scan, settings): &Request) -> Failure {
    let told = serde_json::to_string(settings).unwrap_or_default();
    let report = format!(
        "Parabound {} on {} ({})\nThe computation broke off: {panic}\nFile {}, SHA-256 {}, curve {}\nSettings {told}\n",
        env!("CARGO_PKG_VERSION"),
        std::env::consts::OS,
        std::env::consts::ARCH,
        scan.file_name,
        scan.sha256,
        settings.curve.as_deref().unwrap_or("1"),
    );
    Failure {
        text: format!(
            "The computation broke off: {panic}. This is a fault of the program; your scan and settings are unharmed."
        ),
        report: Some(report),
    }
}
