//! The desktop window.
//!
//! `app` holds the parts; `state` says what there is; `command` and `apply` are the only way to change
//! it; `panels` and `plot` read it, draw, and collect commands.

pub mod app;
pub mod apply;
mod autosave;
pub mod catalog;
mod chart;
pub mod command;
pub mod compute;
pub mod densities;
mod dialogs;
pub mod extras;
pub mod files;
pub mod fonts;
mod history;
pub mod job;
mod keeper;
mod kept;
mod log_files;
pub mod look;
pub mod meaning;
pub mod painter;
mod panels;
mod paper;
pub mod plot;
pub mod preferences;
pub mod product;
pub mod program;
pub mod reading;
mod run;
pub mod samples;
mod saving;
mod seen;
pub mod session;
pub mod sheets;
pub mod shell;
mod show;
pub mod state;
mod take;
mod view;
pub mod watch;

pub use paper::drawing_to_png;
pub use program::Program;
pub use run::run;
