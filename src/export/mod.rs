//! Findings written out: the findings file (JSON) and tables. Writers take a `Write`; nothing here
//! opens a file.

pub mod compare;
mod densities;
mod extras;
pub mod json;
mod numbers;
pub mod parameters;
pub mod recheck;
pub mod sheet;
pub mod table;
