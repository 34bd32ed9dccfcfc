//! Which points of a scan a study uses.

use super::{StudyError, weights};
use crate::findings::Point;
use crate::fit::{FitPoint, Weighting};
use crate::notice::{Code, Notice};
use crate::scan::inspect::{InspectedPoint, inspect};
use crate::scan::{EnergyColumn, Scan};
use crate::settings::Settings;
use std::collections::BTreeMap;

/// The points of a curve, ascending in r (equal bond lengths in file order), with what was remarked.
///
/// Rows whose energy cell is empty are no points of this curve.
pub fn points(
    scan: &Scan,
    column: &EnergyColumn,
    settings: &Settings,
) -> Result<(Vec<Point>, Vec<Notice>), StudyError> {
    let rows = scan.bond_lengths.len();
    if let Some(wrong) = settings.set_aside.iter().find(|s| s.row >= rows) {
        return Err(StudyError::Row { what: "set aside", row: wrong.row, rows });
    }
    if let Weighting::Point { rows: weights, .. } = &settings.fits.weights
        && let Some(wrong) = weights.iter().find(|w| w.row >= rows)
    {
        return Err(StudyError::Row { what: "given a weight", row: wrong.row, rows });
    }
    let (given, remark) = weights::by_column(scan, column, &settings.fits.weights)?;
    let set_aside: BTreeMap<usize, &str> =
        settings.set_aside.iter().map(|s| (s.row, s.reason.as_str())).collect();
    let notes: BTreeMap<usize, &str> = settings.notes.iter().map(|n| (n.row, n.text.as_str())).collect();
    let mut points: Vec<Point> = (0..rows)
        .filter_map(|row| {
            let energy = column.values[row]?;
            let r_as_read = scan.bond_lengths[row];
            let why_not = set_aside.get(&row).map(|reason| (*reason).to_owned());
            Some(Point {
                row,
                r_as_read,
                r_bohr: scan.length_unit.to_bohr(r_as_read),
                energy_as_read: energy,
                energy_hartree: column.unit.to_hartree(energy),
                used: why_not.is_none(),
                weight: given[row],
                why_not,
                note: notes.get(&row).map(|text| (*text).to_owned()),
            })
        })
        .collect();
    let mut notices: Vec<Notice> = remark.into_iter().collect();
    let out_of_order = points.windows(2).filter(|w| w[1].r_as_read < w[0].r_as_read).count();
    if out_of_order > 0 {
        let falling = out_of_order + 1 == points.len();
        let how = if falling { "fall along the file" } else { "are not in order in the file" };
        notices.push(Notice::info(Code::Resorted, format!("The bond lengths {how}; they were sorted.")));
        points.sort_by(|a, b| a.r_as_read.total_cmp(&b.r_as_read));
    }
    let set_aside: Vec<f64> = points.iter().filter(|p| !p.used).map(|p| p.r_bohr).collect();
    if !set_aside.is_empty() {
        let count = set_aside.len();
        let text = format!("{count} point{} set aside by choice.", if count == 1 { "" } else { "s" });
        notices.push(Notice::info(Code::SetAside, text).at(set_aside));
    }
    inspect_points(&mut points, &settings.kept, &mut notices);
    Ok((points, notices))
}

fn inspect_points(points: &mut [Point], kept: &[usize], notices: &mut Vec<Notice>) {
    let inspected: Vec<InspectedPoint> = points
        .iter()
        .filter(|p| p.used)
        .map(|p| InspectedPoint { row: p.row, r_bohr: p.r_bohr, energy_hartree: p.energy_hartree })
        .collect();
    let mut found = inspect(&inspected, kept);
    let left_out: BTreeMap<usize, String> = found.left_out.into_iter().collect();
    for point in points.iter_mut() {
        if let Some(reason) = left_out.get(&point.row) {
            point.used = false;
            point.why_not = Some(reason.clone());
        }
    }
    notices.append(&mut found.notices);
}

/// The points in use, as fits and curve take them.
pub fn in_use(points: &[Point]) -> Vec<FitPoint> {
    points.iter().filter(|p| p.used).map(fit_point).collect()
}

/// One point as a fit takes it.
pub fn fit_point(point: &Point) -> FitPoint {
    FitPoint { r_bohr: point.r_bohr, energy_hartree: point.energy_hartree, weight: point.weight }
}
