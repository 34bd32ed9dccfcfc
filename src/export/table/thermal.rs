//! The thermal table: one row a temperature, numerical beside harmonic and Morse.

use super::cell;
use crate::findings::Findings;
use crate::thermal::{Averages, ThermalPoint};
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom};
use std::io::Write;

/// A column: its name with unit, and how to get it.
type Column = (&'static str, fn(&ThermalPoint) -> Option<f64>);

fn energy(averages: &Averages) -> f64 {
    averages.mean_energy_kilojoule_per_mole()
}

fn capacity(averages: &Averages) -> f64 {
    averages.heat_capacity_joule_per_mole_kelvin()
}

fn entropy(averages: &Averages) -> f64 {
    averages.entropy_joule_per_mole_kelvin()
}

const COLUMNS: [Column; 36] = [
    ("temperature_K", |p| Some(p.kelvin)),
    ("partition_function", |p| Some(p.vibrational.partition_function)),
    ("mean_energy_kJ/mol", |p| Some(energy(&p.vibrational))),
    ("heat_capacity_J/(mol_K)", |p| Some(capacity(&p.vibrational))),
    ("entropy_J/(mol_K)", |p| Some(entropy(&p.vibrational))),
    ("mean_r_angstrom", |p| Some(to_angstrom(p.mean_r_bohr))),
    ("mean_square_x_angstrom2", |p| Some(p.mean_square_x_bohr2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)),
    ("harmonic_partition_function", |p| p.harmonic.map(|h| h.partition_function)),
    ("harmonic_mean_energy_kJ/mol", |p| p.harmonic.as_ref().map(energy)),
    ("harmonic_heat_capacity_J/(mol_K)", |p| p.harmonic.as_ref().map(capacity)),
    ("harmonic_entropy_J/(mol_K)", |p| p.harmonic.as_ref().map(entropy)),
    ("harmonic_mean_square_x_angstrom2", |p| {
        p.harmonic_mean_square_x_bohr2.map(|x2| x2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)
    }),
    ("morse_partition_function", |p| p.morse.map(|m| m.partition_function)),
    ("morse_mean_energy_kJ/mol", |p| p.morse.as_ref().map(energy)),
    ("morse_heat_capacity_J/(mol_K)", |p| p.morse.as_ref().map(capacity)),
    ("morse_entropy_J/(mol_K)", |p| p.morse.as_ref().map(entropy)),
    ("morse_mean_r_angstrom", |p| p.morse_mean_r_bohr.map(to_angstrom)),
    ("morse_mean_square_x_angstrom2", |p| {
        p.morse_mean_square_x_bohr2.map(|x2| x2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)
    }),
    ("population_v0", |p| p.populations.first().copied()),
    ("population_v1", |p| p.populations.get(1).copied()),
    ("population_v2", |p| p.populations.get(2).copied()),
    ("population_v3", |p| p.populations.get(3).copied()),
    ("population_v4", |p| p.populations.get(4).copied()),
    ("population_v5", |p| p.populations.get(5).copied()),
    ("rovibrational_partition_function", |p| p.rotating.map(|r| r.rovibrational.partition_function)),
    ("rovibrational_mean_energy_kJ/mol", |p| p.rotating.map(|r| energy(&r.rovibrational))),
    ("rovibrational_heat_capacity_J/(mol_K)", |p| p.rotating.map(|r| capacity(&r.rovibrational))),
    ("rovibrational_entropy_J/(mol_K)", |p| p.rotating.map(|r| entropy(&r.rovibrational))),
    ("rovibrational_mean_r_angstrom", |p| p.rotating.map(|r| to_angstrom(r.mean_r_bohr))),
    ("rovibrational_mean_square_x_angstrom2", |p| {
        p.rotating.map(|r| r.mean_square_x_bohr2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)
    }),
    ("rigid_rotor_harmonic_partition_function", |p| Some(p.rotating?.harmonic?.partition_function)),
    ("rigid_rotor_harmonic_heat_capacity_J/(mol_K)", |p| p.rotating?.harmonic.as_ref().map(capacity)),
    ("rovibrational_morse_partition_function", |p| Some(p.rotating?.morse?.partition_function)),
    ("gas_heat_capacity_J/(mol_K)", |p| Some(p.rotating?.ideal_gas?.heat_capacity_joule_per_mole_kelvin)),
    ("gas_entropy_J/(mol_K)", |p| Some(p.rotating?.ideal_gas?.entropy_joule_per_mole_kelvin)),
    ("gas_enthalpy_kJ/mol", |p| Some(p.rotating?.ideal_gas?.enthalpy_kilojoule_per_mole)),
];

/// Writes the table of all studies.
pub fn write(studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
    let mut writer = csv::Writer::from_writer(out);
    let head = ["file", "curve"]
        .into_iter()
        .chain(COLUMNS.iter().map(|c| c.0))
        .chain(["converged", "rovibrational_converged"]);
    writer.write_record(head)?;
    for study in studies {
        for point in &study.thermal {
            let mut row = vec![study.source.file_name.clone(), study.source.curve.clone()];
            row.extend(COLUMNS.iter().map(|(_, get)| cell(get(point))));
            row.push(point.converged.to_string());
            row.push(point.rotating.map_or_else(String::new, |r| r.converged.to_string()));
            writer.write_record(&row)?;
        }
    }
    writer.flush()?;
    Ok(())
}
