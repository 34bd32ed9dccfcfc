//! Parabound: from an ab initio bond scan to spectroscopic constants, true levels and the reach of
//! the harmonic picture.
//!
//! One pure function carries the whole job: [`study::study`] takes a [`scan::Scan`] and
//! [`settings::Settings`] and returns [`findings::Findings`]. The window and the headless command
//! both call it and nothing else.
//!
//! # Units
//! Atomic units inside (bohr, hartree, electron mass), as plain `f64`; every public name ends in its
//! unit. Spectroscopic constants are kept in cm⁻¹, as the field quotes them. Conversions happen at the
//! doors, in [`units`] only.
//!
//! # Symbols
//! | Symbol | Identifier |
//! | --- | --- |
//! | r, r_e | `r_bohr`, `r_e_bohr` |
//! | V, D_e (depth), D_0 | `energy_hartree`, `well_depth_hartree`, `d_0_per_cm` |
//! | μ | `reduced_mass_me` |
//! | k_e | `force_constant_hartree_per_bohr2` |
//! | ω_e, ω_e x_e | `omega_e_per_cm`, `omega_e_x_e_per_cm` |
//! | B_e, α_e | `b_e_per_cm`, `alpha_e_per_cm` |
//! | D_e (centrifugal) | `centrifugal_d_e_per_cm` (never bare `d_e`: it has two meanings) |
//! | v, J, G(v), B_v | `v`, `j`, `energy_per_cm`, `b_v_per_cm` |

pub mod density;
pub mod digits;
pub mod estimate;
pub mod export;
pub mod figure;
pub mod files;
pub mod findings;
pub mod fit;
#[cfg(feature = "gui")]
pub mod gui;
pub mod headless;
pub mod notice;
pub(crate) mod parallel;
pub mod potential;
pub mod radial;
pub mod reach;
pub mod report;
pub mod scan;
pub mod settings;
pub mod special;
pub mod species;
pub mod spectroscopy;
pub mod study;
pub mod study_file;
pub mod thermal;
pub mod units;
pub mod verdict;
