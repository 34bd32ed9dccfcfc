//! Small windows over the window.

mod columns;
mod path;

pub use columns::columns_ui;
pub use path::path_window_ui;
