//! Starting values found from the scan itself.

use super::data::Data;
use super::nonlinear::IterationSettings;
use super::qr::{Qr, length};
use super::{FitError, families, polynomial};
use crate::potential::{LocalShape, Morse, Variable};

/// The shape near the minimum takes the points within this fraction of the lowest point's r,
const NEAR_MINIMUM: f64 = 0.2;
/// and at least this many, where there are.
const NEAR_MINIMUM_POINTS: usize = 7;

/// Position, depth and derivatives at the minimum from a local polynomial (degree 4, or lower for few points).
///
/// # Errors
/// The lowest point is the first or last, or the local polynomial has no minimum.
pub(crate) fn local_shape(data: &Data) -> Result<LocalShape, FitError> {
    let lowest = data.lowest();
    let last = data.len() - 1;
    if data.len() < 3 || lowest == 0 || lowest == last {
        return Err(FitError::NoMinimum);
    }
    let r_low = data.r_bohr[lowest];
    let near = |i: usize| (data.r_bohr[i] - r_low).abs() <= NEAR_MINIMUM * r_low;
    let (mut from, mut to) = (lowest - 1, lowest + 1);
    loop {
        let missing = to - from + 1 < NEAR_MINIMUM_POINTS;
        let left = (from > 0 && (missing || near(from - 1))).then(|| r_low - data.r_bohr[from - 1]);
        let right = (to < last && (missing || near(to + 1))).then(|| data.r_bohr[to + 1] - r_low);
        match (left, right) {
            (Some(l), Some(r)) if r <= l => to += 1,
            (Some(_), _) => from -= 1,
            (None, Some(_)) => to += 1,
            (None, None) => break,
        }
    }
    let part = data.part(from..=to);
    let highest = (part.len() - 1).min(4);
    // A quartic through noise may lose its minimum; the parabola of three points around the lowest never does.
    let local = (2..=highest)
        .rev()
        .find_map(|degree| polynomial::fit(&part, Variable::X, degree).ok())
        .map_or_else(|| polynomial::fit(&data.part(lowest - 1..=lowest + 1), Variable::X, 2), Ok)?;
    let coefficient = |n: usize| local.values.get(n).copied().unwrap_or(0.0);
    let (e_min_hartree, second_hartree) = (local.values[0], 2.0 * coefficient(2));
    // The last point is usually part of the way up; a well a fifth deeper is a fair first guess.
    let rise = data.energy_hartree[last] - e_min_hartree;
    Ok(LocalShape {
        e_min_hartree,
        r_e_bohr: local.values[1],
        second_hartree,
        third_hartree: 6.0 * coefficient(3),
        fourth_hartree: 24.0 * coefficient(4),
        depth_hartree: (1.2 * rise).max(second_hartree * 0.01),
    })
}

/// The shape with the depth of the Morse function through the points, where there is one: what is left to
/// guess for a family that is not too far from Morse.
///
/// # Errors
/// As for [`local_shape`].
pub(crate) fn well_shape(data: &Data) -> Result<LocalShape, FitError> {
    let shape = local_shape(data)?;
    let Some(start) = morse_start(data, &shape) else { return Ok(shape) };
    let morse = families::fit(data, &[start], IterationSettings::QUICK).map_or(start, |(morse, _)| morse);
    let a = morse.a_per_bohr;
    let second_hartree = morse.force_constant_hartree_per_bohr2();
    Ok(LocalShape {
        e_min_hartree: morse.e_min_hartree,
        r_e_bohr: morse.r_e_bohr,
        second_hartree,
        third_hartree: -3.0 * a * second_hartree,
        fourth_hartree: 7.0 * a * a * second_hartree,
        depth_hartree: morse.well_depth_hartree,
    })
}

/// Factors on the range parameter of the local shape that are tried.
const A_FACTORS: [f64; 7] = [0.25, 0.5, 0.7, 1.0, 1.4, 2.0, 4.0];

/// A Morse start by variable projection: for fixed a the function is linear in 1, q, q² with
/// q = exp(−a (r − r_low)), so only a is searched, on a coarse grid around −V‴/(3 V″).
pub(crate) fn morse_start(data: &Data, shape: &LocalShape) -> Option<Morse> {
    let slope = -shape.third_hartree / (3.0 * shape.second_hartree);
    let centre = if slope.is_finite() && slope * shape.r_e_bohr > 0.1 {
        slope
    } else {
        (shape.second_hartree / (2.0 * shape.depth_hartree)).sqrt()
    };
    let candidates = A_FACTORS.iter().filter_map(|f| morse_for_a(data, shape.r_e_bohr, f * centre));
    candidates.min_by(|a, b| a.1.total_cmp(&b.1)).map(|(morse, _)| morse)
}

/// The best Morse function with the given a, and its sum of squares; none when it is no well.
fn morse_for_a(data: &Data, r_0: f64, a: f64) -> Option<(Morse, f64)> {
    let n = data.len();
    let mut design = Vec::with_capacity(3 * n);
    let roots: Vec<f64> = data.weight.iter().map(|w| w.sqrt()).collect();
    design.extend_from_slice(&roots);
    design.extend(data.r_bohr.iter().zip(&roots).map(|(r, root)| root * (-a * (r - r_0)).exp()));
    for i in 0..n {
        let q = design[n + i] / roots[i];
        design.push(design[n + i] * q);
    }
    let qr = Qr::new(&design, n, 3)?;
    let mut right: Vec<f64> = data.energy_hartree.iter().zip(&roots).map(|(e, root)| e * root).collect();
    qr.transpose_times(&mut right);
    let misfit = length(&right[3..]);
    right.truncate(3);
    qr.back_substitute(&mut right);
    let (c1, c2) = (right[1], right[2]);
    // V = c0 + c1 q + c2 q² has its minimum at q = −c1/(2 c2), a depth c1²/(4 c2) below c0.
    let (q_e, depth) = (-c1 / (2.0 * c2), c1 * c1 / (4.0 * c2));
    let morse = Morse {
        e_min_hartree: right[0] - depth,
        r_e_bohr: r_0 - q_e.ln() / a,
        well_depth_hartree: depth,
        a_per_bohr: a,
    };
    let well = depth > 0.0 && q_e > 0.0 && morse.r_e_bohr > 0.0 && morse.r_e_bohr.is_finite();
    (well && misfit.is_finite()).then_some((morse, misfit))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::FitPoint;
    use crate::potential::Potential;

    /// Invented: a Morse function on an even grid.
    #[test]
    fn a_morse_scan_gives_its_own_parameters() {
        let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
        let points: Vec<FitPoint> = (0..40)
            .map(|k| {
                let r_bohr = 0.9 + 0.05 * f64::from(k);
                FitPoint { r_bohr, energy_hartree: morse.energy_hartree(r_bohr), weight: 1.0 }
            })
            .collect();
        let data = Data::new(&points, 4).unwrap();
        let shape = local_shape(&data).unwrap();
        assert!((shape.r_e_bohr - 1.4).abs() < 1e-3);
        assert!((shape.second_hartree / morse.force_constant_hartree_per_bohr2() - 1.0).abs() < 0.01);
        let start = morse_start(&data, &shape).unwrap();
        assert!((start.a_per_bohr / 1.03 - 1.0).abs() < 0.3 && (start.r_e_bohr - 1.4).abs() < 0.05);
        let (exact, misfit) = morse_for_a(&data, 1.4, 1.03).unwrap();
        assert!((exact.well_depth_hartree / 0.17 - 1.0).abs() < 1e-12 && misfit < 1e-13);
    }

    #[test]
    fn a_scan_that_only_falls_has_no_shape() {
        let points: Vec<FitPoint> = (1..9)
            .map(|k| FitPoint { r_bohr: f64::from(k), energy_hartree: 1.0 / f64::from(k), weight: 1.0 })
            .collect();
        assert_eq!(local_shape(&Data::new(&points, 3).unwrap()).unwrap_err(), FitError::NoMinimum);
    }
}
