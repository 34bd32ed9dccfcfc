//! Findings written out: JSON and tables.
