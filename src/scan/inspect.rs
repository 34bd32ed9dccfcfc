//! First inspection of a curve's points: what is repeated, what is off, how noisy the energies are.
//!
//! All measures are free of scale: they compare neighbouring points with each other through
//! differences of high order, which smooth curves make small and errors of single points do not.

use crate::notice::{Code, Notice};
use crate::units::{to_angstrom, to_per_cm};

/// Order of the differences that a single point is judged by.
const OFF_ORDER: usize = 5;
/// A point is off when the differences around it fall by more than this factor without it.
const OFF_RATIO: f64 = 5.0;
/// Most points that are called off; with more of them the scan as a whole is not smooth.
const MOST_OFF: usize = 20;
/// Orders of the differences that the noise is read from.
const NOISE_ORDERS: std::ops::RangeInclusive<usize> = 4..=10;
/// Levels of successive orders that agree within this factor are a plateau: noise.
const PLATEAU: f64 = 2.0;
/// How many successive orders a plateau needs.
const PLATEAU_ORDERS: usize = 4;
/// Noise below this (hartree) is the rounding of the energies themselves and not worth a remark.
const ROUNDING_HARTREE: f64 = 1e-11;
/// Repeated energies that differ by less than this (hartree) agree: tight convergence thresholds.
const SAME_ENERGY_HARTREE: f64 = 1e-9;

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
    let mut single: Vec<InspectedPoint> = Vec::with_capacity(points.len());
    let mut repeats: Vec<(InspectedPoint, InspectedPoint)> = Vec::new();
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
    let (r, e) = columns(&single);
    let off = off_curve(&r, &e);
    let without = |i: &usize| !off.iter().any(|o| o.index == *i);
    let sound: Vec<InspectedPoint> = (0..single.len()).filter(without).map(|i| single[i]).collect();
    let (r_sound, e_sound) = columns(&sound);
    found.noise_hartree = noise_hartree(&r_sound, &e_sound);
    for (used, left_out) in repeats {
        let (reason, notice) = repeated(used, left_out, found.noise_hartree);
        found.left_out.push((left_out.row, reason));
        found.notices.push(notice);
    }
    found.left_out.sort_by_key(|l| l.0);
    for point in off {
        let text = format!(
            "The point at {:.4} angstrom lies about {:.2} cm-1 {} the smooth curve through its neighbours. It is \
             used; set it aside or compute it again.",
            to_angstrom(r[point.index]),
            to_per_cm(point.deviation_hartree.abs()),
            if point.deviation_hartree < 0.0 { "below" } else { "above" }
        );
        found.notices.push(Notice::caution(Code::OffCurve, text).at([r[point.index]]));
    }
    if let Some(noise) = found.noise_hartree.filter(|n| *n > ROUNDING_HARTREE) {
        let text = format!(
            "The energies carry a noise of about {:.1e} cm-1 ({noise:.1e} hartree); it enters the standard errors.",
            to_per_cm(noise)
        );
        found.notices.push(Notice::info(Code::Noise, text));
    }
    found
}

/// Bond lengths that only rounding or a change of unit makes different.
fn same_length(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs()
}

fn columns(points: &[InspectedPoint]) -> (Vec<f64>, Vec<f64>) {
    let lowest = points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
    points.iter().map(|p| (p.r_bohr, p.energy_hartree - lowest)).unzip()
}

fn repeated(used: InspectedPoint, left_out: InspectedPoint, noise: Option<f64>) -> (String, Notice) {
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

/// Weights of the divided difference over the abscissae, with unit norm, so that independent errors of
/// the values come through with their own size.
fn difference_weights(r: &[f64]) -> Vec<f64> {
    let scale = (r[r.len() - 1] - r[0]) / 4.0; // keeps the products near one
    let weight = |i: usize| {
        let others = r.iter().enumerate().filter(|(k, _)| *k != i);
        1.0 / others.map(|(_, x)| (r[i] - x) / scale).product::<f64>()
    };
    let mut weights: Vec<f64> = (0..r.len()).map(weight).collect();
    let norm = weights.iter().map(|w| w * w).sum::<f64>().sqrt();
    weights.iter_mut().for_each(|w| *w /= norm);
    weights
}

fn difference(r: &[f64], e: &[f64]) -> f64 {
    difference_weights(r).iter().zip(e).map(|(w, e)| w * e).sum()
}

/// A point that its neighbours do not agree with.
#[derive(Clone, Copy, Debug, PartialEq)]
struct OffPoint {
    index: usize,
    /// Energy minus that of the polynomial through its neighbours.
    deviation_hartree: f64,
}

/// Points far off the smooth curve, ascending; at most one in five and no more than [`MOST_OFF`].
///
/// For each point the root mean square of the normalised differences of fifth order that contain it is
/// compared with that of those that bridge its place without it. On a smooth curve leaving a point out
/// makes the differences larger, as the steps widen; where the point is the error it makes them fall.
fn off_curve(r: &[f64], e: &[f64]) -> Vec<OffPoint> {
    let mut index: Vec<usize> = (0..r.len()).collect();
    let mut found = Vec::new();
    while found.len() < (r.len() / 5).min(MOST_OFF) {
        let (x, y): (Vec<f64>, Vec<f64>) = index.iter().map(|&i| (r[i], e[i])).unzip();
        let ratios = (1..x.len().saturating_sub(1)).map(|i| (off_ratio(&x, &y, i), i));
        let Some((ratio, worst)) = ratios.max_by(|a, b| a.0.total_cmp(&b.0)) else { break };
        if ratio.is_nan() || ratio <= OFF_RATIO {
            break;
        }
        found.push(OffPoint { index: index[worst], deviation_hartree: deviation(&x, &y, worst) });
        index.remove(worst);
    }
    found.sort_by_key(|o| o.index);
    found
}

/// Quotient of the differences around point i with it and without it; 0 where there are too few points.
fn off_ratio(r: &[f64], e: &[f64], i: usize) -> f64 {
    let width = OFF_ORDER + 1;
    if r.len() < width + 3 {
        return 0.0;
    }
    // All windows that hold the point, or both its neighbours when it is gone, lie in here.
    let (from, to) = (i.saturating_sub(width), (i + width + 1).min(r.len()));
    let (r, e, i) = (&r[from..to], &e[from..to], i - from);
    let with = mean_square(r, e, i.saturating_sub(OFF_ORDER), i);
    let without = |v: &[f64]| [&v[..i], &v[i + 1..]].concat();
    // Windows that hold i − 1 and (now) i.
    let bridging = mean_square(&without(r), &without(e), i.saturating_sub(OFF_ORDER), i - 1);
    // Differences at the level of rounding say nothing.
    let floor = (f64::EPSILON * e.iter().fold(1.0, |m: f64, x| m.max(x.abs()))).powi(2);
    (with / bridging.max(floor)).sqrt()
}

/// Mean square of the differences over the windows that start at `from` to `to` inclusive.
fn mean_square(r: &[f64], e: &[f64], from: usize, to: usize) -> f64 {
    let width = OFF_ORDER + 1;
    let squares =
        (from..=to).filter(|s| s + width <= r.len()).map(|s| difference(&r[s..s + width], &e[s..s + width]));
    let (sum, count) = squares.fold((0.0, 0), |(s, n), d| (s + d * d, n + 1));
    sum / f64::from(count.max(1))
}

/// Energy of point i minus the polynomial through its neighbours, three on each side where there are.
fn deviation(r: &[f64], e: &[f64], i: usize) -> f64 {
    let from = i.saturating_sub(3).min(r.len().saturating_sub(7));
    let to = (from + 7).min(r.len());
    let weights = difference_weights(&r[from..to]);
    weights.iter().zip(&e[from..to]).map(|(w, e)| w * e).sum::<f64>() / weights[i - from]
}

/// Standard deviation of the noise of the energies, where it can be told from curvature.
///
/// Differences of rising order, with weights of unit norm, fall with the order for a smooth curve but
/// stay at σ for independent errors. The noise is the level of the first plateau over four orders,
/// each level the median of |differences|/0.6745.
pub fn noise_hartree(r_bohr: &[f64], energy_hartree: &[f64]) -> Option<f64> {
    let n = r_bohr.len();
    let levels: Vec<f64> = NOISE_ORDERS
        .take_while(|order| n >= order + 5)
        .map(|order| {
            let windows = r_bohr.windows(order + 1).zip(energy_hartree.windows(order + 1));
            let mut sizes: Vec<f64> = windows.map(|(r, e)| difference(r, e).abs()).collect();
            sizes.sort_by(f64::total_cmp);
            sizes[sizes.len() / 2] / 0.674_5
        })
        .collect();
    levels.windows(PLATEAU_ORDERS).find_map(|plateau| {
        let (low, high) = plateau.iter().fold((f64::INFINITY, 0.0_f64), |(l, h), &x| (l.min(x), h.max(x)));
        (high > 0.0 && high <= PLATEAU * low).then(|| plateau.iter().sum::<f64>() / plateau.len() as f64)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented: a Morse-like curve on an uneven grid.
    fn smooth(n: usize) -> Vec<InspectedPoint> {
        let point = |row: usize| {
            let r_bohr = 1.5 + 0.05 * row as f64 + 0.01 * (row as f64 * 2.3).sin();
            let y = 1.0 - (-1.1 * (r_bohr - 2.2)).exp();
            InspectedPoint { row, r_bohr, energy_hartree: 0.2 * y * y - 100.0 }
        };
        (0..n).map(point).collect()
    }

    /// Any single inner point that is off by 2e-5 hartree is found, alone, with its deviation; so are two.
    #[test]
    fn single_points_that_are_off_are_found() {
        assert_eq!(inspect(&smooth(40), &[]), Inspection::default());
        for bad in 2..38 {
            let mut points = smooth(40);
            points[bad].energy_hartree -= 2e-5;
            let (r, e) = columns(&points);
            let off = off_curve(&r, &e);
            assert_eq!(off.iter().map(|o| o.index).collect::<Vec<_>>(), [bad]);
            assert!((off[0].deviation_hartree / -2e-5 - 1.0).abs() < 0.1, "{off:?}");
            let notices = inspect(&points, &[]).notices;
            assert_eq!(notices[0].at_bohr, [points[bad].r_bohr]);
        }
        let mut points = smooth(40);
        points[10].energy_hartree += 3e-5;
        points[24].energy_hartree -= 1e-4;
        let (r, e) = columns(&points);
        assert_eq!(off_curve(&r, &e).iter().map(|o| o.index).collect::<Vec<_>>(), [10, 24]);
    }

    /// Of a repeated bond length the first row counts, or the one that is kept; agreement is told from
    /// disagreement.
    #[test]
    fn repeated_bond_lengths() {
        let mut points = smooth(20);
        points.insert(8, InspectedPoint { row: 33, ..points[7] });
        let found = inspect(&points, &[]);
        assert_eq!(found.left_out, [(33, "same bond length as row 8".to_string())]);
        assert_eq!(found.notices[0].severity, crate::notice::Severity::Info);
        points[8].energy_hartree += 1e-6;
        let found = inspect(&points, &[33]);
        assert_eq!(found.left_out, [(7, "same bond length as row 34".to_string())]);
        assert_eq!(found.notices[0].severity, crate::notice::Severity::Caution);
        assert_eq!(found.notices[0].code, Code::RepeatedGeometry);
        // Three times the same, and nothing else.
        let three: Vec<InspectedPoint> = (0..3).map(|row| InspectedPoint { row, ..points[0] }).collect();
        assert_eq!(inspect(&three, &[]).left_out.len(), 2);
        assert_eq!(inspect(&[], &[]), Inspection::default());
    }

    /// Noise of a known size (fixed pattern, invented) is measured within a factor of two; a smooth curve has none.
    #[test]
    fn noise_is_told_from_curvature() {
        let (r, mut e) = columns(&smooth(60));
        assert_eq!(noise_hartree(&r, &e), None);
        for sigma in [1e-8, 1e-6] {
            let (_, clean) = columns(&smooth(60));
            for (i, (e, clean)) in e.iter_mut().zip(clean).enumerate() {
                let spread = ((i * i) as f64 * 0.618_033_988_75 + 0.3 * i as f64).fract();
                *e = clean + sigma * 3.0_f64.sqrt() * (2.0 * spread - 1.0);
            }
            let found = noise_hartree(&r, &e).unwrap();
            assert!((0.5..2.0).contains(&(found / sigma)), "{found} {sigma}");
        }
        assert_eq!(noise_hartree(&r[..8], &e[..8]), None);
    }
}
