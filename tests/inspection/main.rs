//! What the inspection finds in scans with planted faults, and that it leaves good scans alone.

mod planted;
mod real;
mod remarks;
