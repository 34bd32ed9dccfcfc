//! Small windows over the window.

mod path;

pub use path::path_window_ui;
