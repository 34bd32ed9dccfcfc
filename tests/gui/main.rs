//! The window, driven by command and by label; no display, no GPU.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on should stop with a panic")]

mod agreement;
mod by_label;
mod columns;
mod commands;
mod every_command;
mod fits_page;
mod frames;
mod gallery;
mod harness;
mod invented;
mod killed;
mod logs;
mod pages;
mod paper;
mod pictures;
mod reach;
mod reading;
mod rotation;
mod saving;
mod working;
