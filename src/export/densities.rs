//! The sections of a findings file about densities.

use super::numbers::{angstrom, number};
use crate::density::{Densities, DensityFigures, Shares};
use serde_json::{Value, json};

/// The figures of the densities of all levels without rotation.
pub(super) fn densities(densities: &Densities) -> Value {
    json!({
        "averaging_width": densities.averaging_width_bohr.map(angstrom),
        "levels": densities.levels.iter().map(level).collect::<Vec<_>>(),
    })
}

fn level(figures: &DensityFigures) -> Value {
    let shares = |s: &Shares| json!({"numerical": number(s.numerical), "harmonic": number(s.harmonic), "classical": number(s.classical)});
    json!({
        "v": figures.v,
        "forbidden_probability": shares(&figures.forbidden),
        "inside_reach": shares(&figures.inside_reach),
        "classical_distance": number(figures.classical_distance),
    })
}
