//! The program against published and independently computed values; one module per publication or file.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on should stop with a panic")]

mod densities;
mod experiment;
mod fits;
mod h2plus;
mod levels;
mod reach;
mod rotation;
mod scans;
mod strd;
mod thermal;
