//! The sections of a findings file about densities.

use super::json::quantity;
use crate::density::{Densities, DensityFigures, Shares};
use crate::units::to_angstrom;
use serde_json::{Value, json};

/// The figures of the densities of all levels without rotation.
pub(super) fn densities(densities: &Densities) -> Value {
    json!({
        "averaging_width": densities.averaging_width_bohr.map(|w| quantity(to_angstrom(w), "angstrom")),
        "levels": densities.levels.iter().map(level).collect::<Vec<_>>(),
    })
}

fn level(figures: &DensityFigures) -> Value {
    let shares =
        |s: &Shares| json!({"numerical": s.numerical, "harmonic": s.harmonic, "classical": s.classical});
    json!({
        "v": figures.v,
        "forbidden_probability": shares(&figures.forbidden),
        "inside_reach": shares(&figures.inside_reach),
        "classical_distance": figures.classical_distance,
    })
}
