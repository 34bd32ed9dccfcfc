//! Tables as comma-separated text: levels of one or several studies, constants with one row a curve, the fits of
//! window studies.
//! Units stand in the header; an empty cell means that the study has no such value.

mod densities;
mod thermal;

use crate::estimate::Estimate;
use crate::findings::Findings;
use crate::units::{
    ANGSTROM_PER_BOHR, LengthUnit, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, to_angstrom, to_per_cm,
};
use std::io::Write;

/// Which table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Table {
    /// One row a level.
    Levels,
    /// One row a curve.
    Constants,
    /// One row a fit of the window study.
    WindowStudy,
    /// One row a point of a curve, bond length and energy as read.
    Curve,
    /// One row a bond length of each chosen level.
    Densities,
    /// One row a temperature.
    Thermal,
}

impl Table {
    /// The tables by their names on the command line.
    pub const ALL: [(&'static str, Self); 6] = [
        ("levels", Self::Levels),
        ("constants", Self::Constants),
        ("window-study", Self::WindowStudy),
        ("curve", Self::Curve),
        ("densities", Self::Densities),
        ("thermal", Self::Thermal),
    ];

    /// Writes the table of all studies given.
    ///
    /// # Errors
    /// Whatever the writer fails with.
    pub fn write(self, studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
        match self {
            Self::Levels => write_levels(studies, out),
            Self::Constants => write_constants(studies, out),
            Self::WindowStudy => write_window_studies(studies, out),
            Self::Curve => write_curves(studies, out),
            Self::Densities => densities::write(studies, out),
            Self::Thermal => thermal::write(studies, out),
        }
    }
}

fn cell(value: Option<f64>) -> String {
    value.filter(|v| v.is_finite()).map_or_else(String::new, |v| v.to_string())
}

fn write_levels(studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
    let mut writer = csv::Writer::from_writer(out);
    writer.write_record([
        "file",
        "curve",
        "v",
        "j",
        "energy_cm-1",
        "energy_std_error_cm-1",
        "below_asymptote_cm-1",
        "b_v_cm-1",
        "d_v_cm-1",
        "h_v_cm-1",
        "inner_turning_point_angstrom",
        "outer_turning_point_angstrom",
        "mean_r_angstrom",
        "mean_square_x_angstrom2",
        "forbidden_probability",
        "inside_reach",
        "outside_scan",
        "leans_on_tail",
        "minus_harmonic_cm-1",
        "minus_morse_cm-1",
    ])?;
    for study in studies {
        for level in study.levels.iter().chain(&study.rotational_levels) {
            writer.write_record([
                study.source.file_name.clone(),
                study.source.curve.clone(),
                level.v.to_string(),
                level.j.to_string(),
                cell(Some(level.energy_per_cm)),
                cell(level.energy_error_per_cm),
                cell(level.below_asymptote_per_cm),
                cell(Some(level.b_v_per_cm)),
                cell(Some(level.d_v_per_cm)),
                cell(level.h_v_per_cm),
                cell(Some(to_angstrom(level.inner_turning_point_bohr))),
                cell(Some(to_angstrom(level.outer_turning_point_bohr))),
                cell(Some(to_angstrom(level.mean_r_bohr))),
                cell(Some(level.mean_square_x_bohr2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)),
                cell(Some(level.forbidden_probability)),
                cell(level.inside_reach),
                cell(Some(level.outside_scan)),
                level.leans_on_tail.to_string(),
                cell(Some(level.minus_harmonic_per_cm)),
                cell(level.minus_morse_per_cm),
            ])?;
        }
    }
    writer.flush()?;
    Ok(())
}

const WINDOW_COLUMNS: [&str; 21] = [
    "file",
    "curve",
    "model",
    "degree",
    "from_angstrom",
    "to_angstrom",
    "points",
    "half_width_angstrom",
    "symmetric",
    "converged",
    "r_e_angstrom",
    "r_e_std_error_angstrom",
    "k_N/m",
    "k_std_error_N/m",
    "omega_e_cm-1",
    "omega_e_std_error_cm-1",
    "omega_e_x_e_cm-1",
    "omega_e_x_e_std_error_cm-1",
    "rms_residual_cm-1",
    "aicc",
    "proposed",
];

fn write_window_studies(studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
    let mut writer = csv::Writer::from_writer(out);
    writer.write_record(WINDOW_COLUMNS)?;
    for study in studies {
        let Some(windows) = &study.window_study else { continue };
        let proposal = windows.proposed.and_then(|p| windows.plateaus.get(p)).map(|p| p.middle);
        for (i, fit) in windows.fits.iter().enumerate() {
            let model = windows.models[fit.model];
            let numbers = fit.numbers.as_ref().ok();
            let edge = |value: f64| fit.window.unit.convert(value, LengthUnit::Angstrom).to_string();
            let mut row = vec![
                study.source.file_name.clone(),
                study.source.curve.clone(),
                model.family.word().to_owned(),
                model.degree.map_or_else(String::new, |d| d.to_string()),
                edge(fit.window.from),
                edge(fit.window.to),
                fit.points.to_string(),
                to_angstrom(fit.half_width_bohr()).to_string(),
                fit.symmetric.to_string(),
                numbers.is_some().to_string(),
            ];
            let k_factor = NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2;
            for estimate in [
                numbers.map(|n| n.r_e_bohr.scaled(ANGSTROM_PER_BOHR)),
                numbers.map(|n| n.force_constant_hartree_per_bohr2.scaled(k_factor)),
                numbers.and_then(|n| n.omega_e_per_cm),
                numbers.and_then(|n| n.omega_e_x_e_per_cm),
            ] {
                row.push(cell(estimate.map(|e| e.value)));
                row.push(cell(estimate.and_then(|e| e.std_error)));
            }
            row.push(cell(numbers.map(|n| to_per_cm(n.rms_residual_hartree))));
            row.push(cell(numbers.and_then(|n| n.aicc)));
            row.push((proposal == Some(i)).to_string());
            writer.write_record(&row)?;
        }
    }
    writer.flush()?;
    Ok(())
}

/// A column of the constants table: its name with unit, and how to get it.
type ConstantColumn = (&'static str, fn(&Findings) -> Option<Estimate>);

const CONSTANT_COLUMNS: [ConstantColumn; 15] = [
    ("r_e_angstrom", |f| f.curve.as_ref().map(|c| c.r_e_bohr.scaled(ANGSTROM_PER_BOHR))),
    ("energy_at_r_e_hartree", |f| f.curve.as_ref().map(|c| c.v_e_hartree)),
    ("k_N/m", |f| {
        let k = f.curve.as_ref()?.derivatives_hartree[0]?;
        Some(k.scaled(NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2))
    }),
    ("omega_e_cm-1", |f| f.constants.from_derivatives.as_ref().map(|c| c.omega_e_per_cm)),
    ("omega_e_x_e_cm-1", |f| f.constants.from_derivatives.as_ref()?.omega_e_x_e_per_cm),
    ("b_e_cm-1", |f| f.constants.from_derivatives.as_ref().map(|c| c.b_e_per_cm)),
    ("alpha_e_cm-1", |f| f.constants.from_derivatives.as_ref()?.alpha_e_per_cm),
    ("centrifugal_d_e_cm-1", |f| f.constants.from_derivatives.as_ref().map(|c| c.centrifugal_d_e_per_cm)),
    ("omega_e_from_levels_cm-1", |f| f.constants.from_levels.as_ref().map(|c| c.omega_e_per_cm)),
    ("omega_e_x_e_from_levels_cm-1", |f| f.constants.from_levels.as_ref()?.omega_e_x_e_per_cm),
    ("zero_point_energy_cm-1", |f| f.constants.zero_point_energy_per_cm),
    ("fundamental_cm-1", |f| f.constants.fundamental_per_cm),
    ("d_e_cm-1", |f| f.constants.well_depth_per_cm),
    ("d_0_cm-1", |f| f.constants.d_0_per_cm),
    ("reduced_mass_u", |f| f.masses.as_ref().map(|m| m.reduced_mass_u)),
];

fn write_constants(studies: &[&Findings], out: impl Write) -> Result<(), csv::Error> {
    let mut writer = csv::Writer::from_writer(out);
    let mut header = vec!["file".to_owned(), "curve".to_owned()];
    for (name, _) in CONSTANT_COLUMNS {
        header.push(name.to_owned());
        header.push(format!("{name}_std_error"));
    }
    writer.write_record(&header)?;
    for study in studies {
        let mut row = vec![study.source.file_name.clone(), study.source.curve.clone()];
        for (_, get) in CONSTANT_COLUMNS {
            let estimate = get(study);
            row.push(cell(estimate.map(|e| e.value)));
            row.push(cell(estimate.and_then(|e| e.std_error)));
        }
        writer.write_record(&row)?;
    }
    writer.flush()?;
    Ok(())
}

/// Bond length and energy of every point of the curves, as read: the same digits, the units in the header.
///
/// A table of one curve is a scan that reads back the same to the last digit. Of several curves those that
/// share their bond lengths stand side by side; any other begins a table of its own below a blank line.
fn write_curves(studies: &[&Findings], mut out: impl Write) -> Result<(), csv::Error> {
    let mut rest: Vec<&Findings> = studies.to_vec();
    let mut first = true;
    while !rest.is_empty() {
        let lead = rest[0];
        let lengths =
            |f: &Findings| -> Vec<u64> { f.source.points.iter().map(|p| p.r_as_read.to_bits()).collect() };
        let own = lengths(lead);
        let unit = lead.source.length_unit;
        let (together, others): (Vec<&Findings>, Vec<&Findings>) =
            rest.into_iter().partition(|f| f.source.length_unit == unit && lengths(f) == own);
        rest = others;
        if !std::mem::take(&mut first) {
            writeln!(out)?;
        }
        write_table_of_curves(&together, &mut out)?;
    }
    Ok(())
}

fn write_table_of_curves(together: &[&Findings], out: &mut impl Write) -> Result<(), csv::Error> {
    let lead = &together[0].source;
    let mut writer = csv::Writer::from_writer(out);
    let mut header = vec![format!("r [{}]", lead.length_unit.name())];
    header.extend(
        together.iter().map(|f| format!("{} [{}]", energy_name(&f.source), f.source.energy_unit.name())),
    );
    writer.write_record(&header)?;
    for (row, point) in lead.points.iter().enumerate() {
        let mut cells = vec![point.r_as_read.to_string()];
        cells.extend(together.iter().map(|f| f.source.points[row].energy_as_read.to_string()));
        writer.write_record(&cells)?;
    }
    writer.flush()?;
    Ok(())
}

/// A name that is known as that of an energy when the table is read again.
fn energy_name(source: &crate::findings::Source) -> String {
    let label = source.curve_label.replace(['[', ']', '"'], " ");
    if label.starts_with("E") { label } else { format!("E {label}") }
}
