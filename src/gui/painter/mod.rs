//! Painting without a GPU: egui's triangles rasterised on the processor, in safe code.
//!
//! One painter serves three purposes: the window where there is no graphics hardware, pictures with no
//! display at all, and picture tests that give the same bits on every machine.

mod cpu;
mod far;
mod offscreen;
mod picture;
mod pixel;
mod texture;
mod triangle;

pub use cpu::CpuPainter;
pub use offscreen::{Canvas, Offscreen, render_offscreen};
pub use picture::{MAX_SIDE_PX, Picture};
