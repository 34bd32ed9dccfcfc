//! Small windows over the window.

mod columns;
mod guide;
mod keys;
mod logs;
mod path;
mod recipes;
mod search;

pub use columns::columns_ui;
pub use guide::guide_ui;
pub use keys::keys_ui;
pub use logs::logs_ui;
pub use path::path_window_ui;
pub use search::search_ui;
