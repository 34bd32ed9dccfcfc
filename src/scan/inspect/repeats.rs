//! Bond lengths that are there more than once.

use super::InspectedPoint;
use crate::notice::{Code, Notice, Severity};
use crate::units::{to_angstrom, to_per_cm};

/// Repeated energies that differ by less than this (hartree) agree: tight convergence thresholds.
const SAME_ENERGY_HARTREE: f64 = 1e-9;

/// More repeated bond lengths than this are told in one notice a severity.
const MOST_TOLD: usize = 10;

/// The same remarks, gathered where there are many.
pub(super) fn gathered(remarks: Vec<Notice>) -> Vec<Notice> {
    if remarks.len() <= MOST_TOLD {
        return remarks;
    }
    let (cautions, infos): (Vec<Notice>, Vec<Notice>) =
        remarks.into_iter().partition(|n| n.severity == Severity::Caution);
    let one = |all: Vec<Notice>, notice: fn(Code, String) -> Notice, how: &str| {
        let count = all.len();
        let text = format!(
            "{count} rows repeat the bond length of another row; the energies {how}. Of each bond length the first row \
             is used."
        );
        let at = all.into_iter().flat_map(|n| n.at_bohr).take(MOST_TOLD);
        (count > 0).then(|| notice(Code::RepeatedGeometry, text).at(at))
    };
    let agree = one(infos, Notice::info, "agree");
    one(cautions, Notice::caution, "differ").into_iter().chain(agree).collect()
}

/// The points with each bond length once, and the pairs of a point used and one left out.
pub(super) fn part(
    points: &[InspectedPoint],
    kept: &[usize],
) -> (Vec<InspectedPoint>, Vec<(InspectedPoint, InspectedPoint)>) {
    let mut single: Vec<InspectedPoint> = Vec::with_capacity(points.len());
    let mut repeats = Vec::new();
    for &point in points {
        match single.last_mut() {
            Some(before) if same_length(before.r_bohr, point.r_bohr) => {
                if kept.contains(&point.row) && !kept.contains(&before.row) {
                    repeats.push((point, *before));
                    *before = point;
                } else {
                    repeats.push((*before, point));
                }
            }
            _ => single.push(point),
        }
    }
    (single, repeats)
}

/// Bond lengths that only rounding or a change of unit makes different.
fn same_length(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs()
}

/// Why one of two is left out, and what is said about it.
pub(super) fn remark(used: InspectedPoint, left_out: InspectedPoint, noise: Option<f64>) -> (String, Notice) {
    let difference = left_out.energy_hartree - used.energy_hartree;
    // Three standard deviations of a difference of two energies.
    let agree = difference.abs() <= noise.map_or(0.0, |n| 3.0 * 2.0_f64.sqrt() * n).max(SAME_ENERGY_HARTREE);
    let at = to_angstrom(used.r_bohr);
    let rows = format!("rows {} and {}", used.row + 1, left_out.row + 1);
    let notice = if agree {
        let text = format!("The bond length {at:.4} angstrom is there twice ({rows}); the energies agree.");
        Notice::info(Code::RepeatedGeometry, text)
    } else {
        let text = format!(
            "The bond length {at:.4} angstrom is there twice ({rows}); the energies differ by {:.3} cm-1. Row {} is \
             used, the other one set aside.",
            to_per_cm(difference.abs()),
            used.row + 1
        );
        Notice::caution(Code::RepeatedGeometry, text)
    };
    (format!("same bond length as row {}", used.row + 1), notice.at([used.r_bohr]))
}
