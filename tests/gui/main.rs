//! The window, driven by command and by label; no display, no GPU.

mod by_label;
mod commands;
mod frames;
mod harness;
