//! The program against published and independently computed values; one module per publication or file.

mod levels;
mod strd;
