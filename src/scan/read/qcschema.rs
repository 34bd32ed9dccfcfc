//! QCSchema JSON (an open standard of the field): one result or a list of them.
//!
//! Geometry in bohr and energies in hartree, as the schema has it.

use super::ReadSettings;
use super::delimited::LIMIT_ROWS;
use super::frames::{Frame, Frames};
use crate::scan::error::ScanError;
use crate::scan::{EnergyColumn, Layout};
use crate::units::{EnergyUnit, LengthUnit};
use serde_json::Value;

/// Whether a text is JSON by its first sign.
pub(crate) fn looks_like(text: &str) -> bool {
    text.trim_start().starts_with(['{', '['])
}

/// Reads all results: the energy returned and every total energy listed beside it.
///
/// # Errors
/// Not JSON, no molecule, no energy, coordinates that do not fit the atoms.
pub(crate) fn parse(text: &str, settings: &ReadSettings) -> Result<Frames, ScanError> {
    let json: Value = serde_json::from_str(text).map_err(|e| ScanError::NotJson {
        line: e.line(),
        column: e.column(),
        problem: e.classify().into(),
    })?;
    let results = match json {
        Value::Array(results) => results,
        one => vec![one],
    };
    if results.len() > LIMIT_ROWS {
        return Err(ScanError::TooManyRows { line: 1, limit_rows: LIMIT_ROWS });
    }
    let frames = results.iter().enumerate().map(|(i, r)| frame(i + 1, r)).collect::<Result<Vec<_>, _>>()?;
    let unit = settings.energy_unit.unwrap_or(EnergyUnit::Hartree);
    let first = results.first().ok_or(ScanError::Empty)?;
    let returned: Vec<Option<f64>> = results.iter().map(returned_energy).collect();
    if returned.iter().all(Option::is_none) {
        return Err(missing(1, "return_result (a number, driver energy) or properties.return_energy"));
    }
    let mut energies = vec![EnergyColumn {
        name: "return_energy".to_owned(),
        label: model(first).unwrap_or_else(|| "return_energy".to_owned()),
        unit,
        values: returned,
        made: None,
    }];
    let listed = first["properties"].as_object().into_iter().flatten().map(|(key, _)| key);
    for key in listed.filter(|key| key.ends_with("_total_energy")) {
        let values: Vec<Option<f64>> = results.iter().map(|r| r["properties"][key].as_f64()).collect();
        if values.iter().any(Option::is_some) {
            let label = key.trim_end_matches("_total_energy").to_owned();
            energies.push(EnergyColumn { name: key.clone(), label, unit, values, made: None });
        }
    }
    let charge = first["molecule"]["molecular_charge"].as_f64().filter(|q| *q != 0.0 && q.abs() < 100.0);
    Ok(Frames {
        layout: Layout::Qcschema,
        length_unit: LengthUnit::Bohr,
        frames,
        energies,
        charge: charge.map(|q| q.round() as i32),
    })
}

fn missing(place: usize, key: &'static str) -> ScanError {
    ScanError::KeyMissing { place, key }
}

fn frame(place: usize, result: &Value) -> Result<Frame, ScanError> {
    let molecule = &result["molecule"];
    let symbols: Vec<String> = molecule["symbols"]
        .as_array()
        .and_then(|list| list.iter().map(|s| s.as_str().map(str::to_owned)).collect())
        .ok_or_else(|| missing(place, "molecule.symbols"))?;
    // Flat as the schema has it, or one list an atom.
    let numbers: Vec<f64> = molecule["geometry"]
        .as_array()
        .and_then(|list| {
            list.iter()
                .flat_map(|v| v.as_array().map_or_else(|| std::slice::from_ref(v), Vec::as_slice))
                .map(Value::as_f64)
                .collect()
        })
        .ok_or_else(|| missing(place, "molecule.geometry"))?;
    if symbols.is_empty() || numbers.len() != 3 * symbols.len() {
        return Err(missing(place, "molecule.geometry with three numbers for each symbol"));
    }
    let coordinates = numbers.chunks_exact(3).map(|c| [c[0], c[1], c[2]]).collect();
    Ok(Frame { place, symbols, coordinates })
}

/// The energy a result returns; none for a calculation that failed.
fn returned_energy(result: &Value) -> Option<f64> {
    if result["success"] == Value::Bool(false) {
        return None;
    }
    let returned = result["return_result"]
        .as_f64()
        .filter(|_| matches!(result["driver"].as_str(), Some("energy") | None));
    returned.or_else(|| result["properties"]["return_energy"].as_f64())
}

/// Method and basis, as a name for the column.
fn model(result: &Value) -> Option<String> {
    let method = result["model"]["method"].as_str()?;
    Some(match result["model"]["basis"].as_str() {
        Some(basis) => format!("{method}/{basis}"),
        None => method.to_owned(),
    })
}
