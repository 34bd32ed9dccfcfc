//! The desktop window.

pub mod fonts;
pub mod painter;
pub mod program;
pub mod shell;

pub use program::Program;
