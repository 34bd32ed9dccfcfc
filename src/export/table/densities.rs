//! The table of densities: one row a bond length of each chosen level.

use super::cell;
use crate::findings::Findings;
use crate::study::level_densities;
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom};
use std::io::Write;

/// Levels written where the settings choose none: v = 0 to 5.
const DEFAULT_LEVELS: usize = 6;

/// Writes the table of all studies; levels that a study does not have are left out.
pub fn write(studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
    let mut writer = csv::Writer::from_writer(out);
    writer.write_record([
        "file",
        "curve",
        "v",
        "energy_cm-1",
        "r_angstrom",
        "inside_reach",
        "numerical_1/angstrom",
        "harmonic_1/angstrom",
        "morse_1/angstrom",
        "classical_1/angstrom",
        "averaging_width_angstrom",
        "averaged_numerical_1/angstrom",
        "averaged_classical_1/angstrom",
        "classical_distance",
    ])?;
    for study in studies {
        let chosen = &study.settings.densities.levels;
        let levels: Vec<usize> =
            if chosen.is_empty() { (0..DEFAULT_LEVELS).collect() } else { chosen.clone() };
        for v in levels {
            write_level(study, v, &mut writer)?;
        }
    }
    writer.flush()?;
    Ok(())
}

fn write_level<W: Write>(study: &Findings, v: usize, writer: &mut csv::Writer<W>) -> Result<(), csv::Error> {
    let Some(found) = level_densities(study, v, None) else { return Ok(()) };
    let reach = found.reach_bohr.map(|(a, b)| (to_angstrom(a), to_angstrom(b)));
    for (i, r) in found.r_bohr.iter().enumerate() {
        let r = to_angstrom(*r);
        let per_angstrom = |list: &[f64]| cell(list.get(i).map(|d| d / ANGSTROM_PER_BOHR));
        writer.write_record([
            study.source.file_name.clone(),
            study.source.curve.clone(),
            v.to_string(),
            cell(Some(found.energy_per_cm)),
            cell(Some(r)),
            reach.map_or_else(String::new, |(from, to)| (r >= from && r <= to).to_string()),
            per_angstrom(&found.numerical_per_bohr),
            per_angstrom(&found.harmonic_per_bohr),
            per_angstrom(&found.morse_per_bohr),
            per_angstrom(&found.classical_per_bohr),
            cell(found.averaging_width_bohr.map(to_angstrom)),
            per_angstrom(&found.averaged_numerical_per_bohr),
            per_angstrom(&found.averaged_classical_per_bohr),
            cell(found.figures.classical_distance),
        ])?;
    }
    Ok(())
}
