//! The program against published and independently computed values; one module per publication or file.

mod experiment;
mod fits;
mod levels;
mod scans;
mod strd;
