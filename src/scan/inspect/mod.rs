//! First inspection of a curve's points: what is repeated, what is off, where it breaks, how noisy the
//! energies are. Only the points count here; what needs the curve or the levels is remarked by the study.
//!
//! All measures compare neighbouring points with each other, so that they are free of scale.

mod faults;
mod noise;
mod repeats;
mod shape;
mod student;
#[cfg(test)]
mod tests;
mod window;

pub use noise::noise_hartree;

use self::faults::{Break, OffPoint, faults};
use crate::digits::rounded;
use crate::notice::{Code, Notice};
use crate::units::{to_angstrom, to_per_cm};

/// Noise below this (hartree) is the rounding of the energies themselves and not worth a remark.
const ROUNDING_HARTREE: f64 = 1e-11;

/// One row of the scan as the inspection sees it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct InspectedPoint {
    /// Row of the scan, counted from 0 in file order.
    pub row: usize,
    /// Bond length in bohr.
    pub r_bohr: f64,
    /// Energy in hartree.
    pub energy_hartree: f64,
}

/// What the inspection found.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Inspection {
    /// Rows that cannot be used beside another of the same bond length, with the reason, ascending.
    pub left_out: Vec<(usize, String)>,
    /// Remarks.
    pub notices: Vec<Notice>,
    /// Noise of the energies in hartree, where it can be told from curvature.
    pub noise_hartree: Option<f64>,
}

/// Inspects the points that are to be used: ascending in r, equal bond lengths in file order. Of a
/// repeated bond length the first row counts, or the one that `kept` names.
pub fn inspect(points: &[InspectedPoint], kept: &[usize]) -> Inspection {
    let mut found = Inspection::default();
    let (single, repeats) = repeats::part(points, kept);
    let (r, e) = columns(&single);
    let faults = faults(&r, &e);
    found.noise_hartree = noise_of_the_rest(&r, &e, &faults);
    for (used, left_out) in repeats {
        let (reason, notice) = repeats::remark(used, left_out, found.noise_hartree);
        found.left_out.push((left_out.row, reason));
        found.notices.push(notice);
    }
    found.notices = repeats::gathered(found.notices);
    found.left_out.sort_by_key(|l| l.0);
    found.notices.extend(faults.off.iter().map(|point| off_curve(point, &r)));
    found.notices.extend(faults.breaks.iter().map(|b| broken(b, &r)));
    if let Some(noise) = found.noise_hartree.filter(|n| *n > ROUNDING_HARTREE) {
        let text = format!(
            "The energies carry a noise of about {} cm-1 ({noise:.1e} hartree); it enters the standard errors.",
            rounded(to_per_cm(noise), 2)
        );
        found.notices.push(Notice::info(Code::Noise, text));
    }
    found.notices.extend(shape::wiggles(&r, &e, found.noise_hartree));
    found
}

/// Noise of the longest stretch without a break, the points that are off left out.
fn noise_of_the_rest(r: &[f64], e: &[f64], faults: &faults::Faults) -> Option<f64> {
    let mut stretches = vec![(Vec::new(), Vec::new())];
    for i in 0..r.len() {
        if !faults.off.iter().any(|o| o.index == i)
            && let Some((x, y)) = stretches.last_mut()
        {
            x.push(r[i]);
            y.push(e[i]);
        }
        if faults.breaks.iter().any(|b| b.before == i) {
            stretches.push((Vec::new(), Vec::new()));
        }
    }
    let longest = stretches.into_iter().max_by_key(|s| s.0.len())?;
    noise_hartree(&longest.0, &longest.1)
}

fn columns(points: &[InspectedPoint]) -> (Vec<f64>, Vec<f64>) {
    let lowest = points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
    points.iter().map(|p| (p.r_bohr, p.energy_hartree - lowest)).unzip()
}

/// A share in words that stay honest where it is too small to be computed.
fn chance(share: f64) -> String {
    if share < 1e-9 {
        "in fewer than one scan in a billion".into()
    } else {
        format!("in about one of {:.0} scans", 1.0 / share)
    }
}

fn off_curve(point: &OffPoint, r: &[f64]) -> Notice {
    let text = format!(
        "The point at {:.4} angstrom lies about {} cm-1 {} the smooth curve through its neighbours. Scatter like \
         that of the other points would put one so far off {}. It is used; set it aside or compute it again.",
        to_angstrom(r[point.index]),
        rounded(to_per_cm(point.deviation_hartree.abs()), 2),
        if point.deviation_hartree < 0.0 { "below" } else { "above" },
        chance(point.chance)
    );
    Notice::caution(Code::OffCurve, text).at([r[point.index]])
}

fn broken(found: &Break, r: &[f64]) -> Notice {
    let (from, to) = (r[found.before], r[found.before + 1]);
    let between = format!("Between {:.4} and {:.4} angstrom", to_angstrom(from), to_angstrom(to));
    match found.crossing_bohr {
        Some(crossing) => {
            let change = to_per_cm(found.slope_change) * to_angstrom(1.0).recip();
            let side = if change < 0.0 {
                "beyond, the curve runs below the inner branch continued: a lower state has taken over"
            } else {
                "beyond, the curve runs above the inner branch continued: it follows a higher state"
            };
            let text = format!(
                "{between} the curve has a kink, near {:.4} angstrom: its slope changes by {} cm-1/angstrom; {side}, or the calculation has changed there. Restrict the scan to one branch, or compute one state throughout.",
                to_angstrom(crossing),
                rounded(change, 3)
            );
            Notice::caution(Code::Kink, text).at([from, to])
        }
        None => {
            let lower = if found.shift_hartree < 0.0 { "lower" } else { "higher" };
            let text = format!(
                "{between} the curve jumps: the outer branch lies {} cm-1 {lower} than the inner one continued. Another state, or another solution of the calculation, begins there. Restrict the scan to one branch, or compute one state throughout.",
                rounded(to_per_cm(found.shift_hartree.abs()), 3)
            );
            Notice::caution(Code::Jump, text).at([from, to])
        }
    }
}
