//! Weights that a column of the file gives to the rows.

use super::StudyError;
use crate::fit::Weighting;
use crate::notice::{Code, Notice};
use crate::scan::read::parse_energy_unit;
use crate::scan::{EnergyColumn, Scan};
use crate::units::to_per_cm;

/// One weight a row: that of the column, 1/σ² in cm² where it holds standard errors, 0 where the cell is empty or makes
/// no weight; 1 for weightings that need no column. And a remark on the rows that count 0 for that.
///
/// # Errors
/// No column, or more than one, answers to the name.
pub fn by_column(
    scan: &Scan,
    energies: &EnergyColumn,
    weighting: &Weighting,
) -> Result<(Vec<f64>, Option<Notice>), StudyError> {
    let Weighting::Column { name, sigma } = weighting else {
        return Ok((vec![1.0; scan.bond_lengths.len()], None));
    };
    let (column, unit, values) = match scan.property_index(name) {
        Ok(index) => {
            let column = &scan.properties[index];
            (&column.name, column.unit.as_deref().and_then(parse_energy_unit), &column.values)
        }
        // Standard errors with a unit of energy look like one more curve.
        Err(error) => {
            let index = scan.curve_index(Some(name)).map_err(|_| StudyError::Weights(error))?;
            let column = &scan.energies[index];
            (&column.name, Some(column.unit), &column.values)
        }
    };
    let unit = unit.unwrap_or(energies.unit);
    let weight = |value: f64| {
        if !*sigma {
            return Some(value).filter(|w| *w >= 0.0);
        }
        Some(to_per_cm(unit.to_hartree(value)).powi(-2)).filter(|w| value > 0.0 && w.is_finite())
    };
    let found: Vec<Option<f64>> = values.iter().map(|value| value.and_then(weight)).collect();
    // Rows without an energy are no points, so their weights are nobody's business.
    let without: Vec<f64> = (0..found.len())
        .filter(|&row| found[row].is_none() && energies.values[row].is_some())
        .map(|row| scan.length_unit.to_bohr(scan.bond_lengths[row]))
        .collect();
    let remark = (!without.is_empty()).then(|| {
        let text = format!(
            "{} point{} without a usable {} in the column {}: the fits leave {} out, the curve does not.",
            without.len(),
            if without.len() == 1 { "" } else { "s" },
            if *sigma { "standard error" } else { "weight" },
            column,
            if without.len() == 1 { "it" } else { "them" }
        );
        Notice::caution(Code::NotFinite, text).at(without)
    });
    Ok((found.into_iter().map(|w| w.unwrap_or(0.0)).collect(), remark))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scan::PropertyColumn;
    use crate::units::{EnergyUnit, LengthUnit};

    /// Invented: three points with a column of standard errors in meV, the last cell empty.
    fn scan(unit: Option<&str>) -> Scan {
        let lengths = (LengthUnit::Angstrom, vec![0.9, 1.0, 1.1]);
        let mut scan =
            Scan::from_columns("made.csv", lengths, (EnergyUnit::PerCm, vec![9.0, 0.0, 9.0])).unwrap();
        scan.properties.push(PropertyColumn {
            name: "err".to_owned(),
            unit: unit.map(str::to_owned),
            values: vec![Some(2.0), Some(-1.0), None],
        });
        scan
    }

    fn weights(scan: &Scan, sigma: bool) -> (Vec<f64>, Option<Notice>) {
        by_column(scan, &scan.energies[0], &Weighting::Column { name: "err".to_owned(), sigma }).unwrap()
    }

    #[test]
    fn a_column_gives_weights_or_standard_errors_in_its_own_unit() {
        let (plain, remark) = weights(&scan(None), false);
        assert_eq!(plain, [2.0, 0.0, 0.0]);
        assert!(remark.unwrap().text.starts_with("2 points without a usable weight"));
        assert_eq!(weights(&scan(None), true).0, [0.25, 0.0, 0.0]);
        let per_cm = to_per_cm(EnergyUnit::Electronvolt.to_hartree(2.0));
        assert!((weights(&scan(Some("eV")), true).0[0] * per_cm * per_cm - 1.0).abs() < 1e-12);
        let other = Weighting::Column { name: "mass".to_owned(), sigma: false };
        let scan = scan(None);
        let error = by_column(&scan, &scan.energies[0], &other).unwrap_err().to_string();
        assert!(error.contains("mass") && error.contains("err"), "{error}");
        assert_eq!(by_column(&scan, &scan.energies[0], &Weighting::default()).unwrap(), (vec![1.0; 3], None));
    }
}
