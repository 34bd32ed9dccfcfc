//! Thermal averages over levels.
