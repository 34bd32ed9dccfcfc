//! What the window tests share.

mod cpu_renderer;

pub use cpu_renderer::{CpuRenderer, to_image};
