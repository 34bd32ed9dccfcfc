//! Averages of the scan's property columns over the levels.

use crate::findings::{Findings, PropertyAverage, PropertyAverages};
use crate::potential::curve::SplineVariable;
use crate::potential::interpolant::{Interpolant, Recipe};
use crate::radial::{Wavefunction, dot};
use crate::scan::{PropertyColumn, Scan};

/// Fewest points a column is interpolated through.
const LEAST_POINTS: usize = 4;
/// Degree of the spline, as far as the points allow.
const DEGREE: usize = 5;

/// Averages every property column over every level.
///
/// A quintic not-a-knot spline in r through the column's values at the points in use (a cubic below six points);
/// outside them the end values go on, and the probability there is given beside each average.
pub fn fill(findings: &mut Findings, scan: &Scan) {
    if scan.properties.is_empty() {
        return;
    }
    let densities: Vec<Vec<f64>> =
        findings.levels.iter().map(|level| level.wavefunction.weighted_density()).collect();
    let averages: Vec<PropertyAverages> =
        scan.properties.iter().filter_map(|column| average(findings, column, &densities)).collect();
    findings.property_averages = averages;
}

/// The points of a column that the study uses, ascending in r.
fn points(findings: &Findings, column: &PropertyColumn) -> (Vec<f64>, Vec<f64>) {
    let used = findings.source.points.iter().filter(|p| p.used);
    used.filter_map(|p| Some((p.r_bohr, column.values.get(p.row).copied().flatten()?))).unzip()
}

/// `densities`: w ψ² of every level at the mesh points.
fn average(findings: &Findings, column: &PropertyColumn, densities: &[Vec<f64>]) -> Option<PropertyAverages> {
    let (r, values) = points(findings, column);
    if r.len() < LEAST_POINTS {
        return None;
    }
    let degree = if r.len() > DEGREE { DEGREE } else { 3 };
    let spline =
        Recipe { base: None, variable: SplineVariable::R, r_b_bohr: r[0], degree }.through(&r, &values);
    let ends = (r[0], r[r.len() - 1]);
    let first = findings.levels.first()?;
    let on_mesh = sampled(&spline, ends, &first.wavefunction);
    let whole_scan = findings.curve.as_ref().is_some_and(|curve| curve.scan_range_bohr == ends);
    let levels = findings.levels.iter().zip(densities).map(|(level, density)| PropertyAverage {
        v: level.v,
        j: level.j,
        value: dot(density, &on_mesh),
        outside: if whole_scan {
            level.outside_scan
        } else {
            (1.0 - level.wavefunction.probability(ends.0, ends.1)).max(0.0)
        },
    });
    Some(PropertyAverages {
        column: column.name.clone(),
        unit: column.unit.clone(),
        levels: levels.collect(),
    })
}

fn sampled(spline: &Interpolant, (from, to): (f64, f64), mesh: &Wavefunction) -> Vec<f64> {
    mesh.r_bohr.iter().map(|r| spline.energy(r.clamp(from, to))).collect()
}
