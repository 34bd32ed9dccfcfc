//! The minimum of an interpolant, its stationary points, and the same minimum by other interpolations.

use super::Data;
use crate::potential::curve::{LocalDerivatives, SplineVariable};
use crate::potential::interpolant::{Interpolant, Recipe};
use nalgebra::{DMatrix, DVector};

/// Parts into which an interval between points is cut when stationary points are looked for.
const PARTS: usize = 8;
/// Half width of the window of the local polynomials, relative to r_e.
const LOCAL_WINDOW: f64 = 0.2;
/// Degrees of the local polynomials.
const LOCAL_DEGREES: [usize; 2] = [6, 8];
/// Changing an energy further from the lowest point than this many points does not move the minimum
/// noticeably: the influence of a point on a quintic spline falls by more than half a knot.
const NOISE_POINTS: usize = 25;

/// A root of V′.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct StationaryPoint {
    pub r: f64,
    pub maximum: bool,
    /// Index of the interval between data points it lies in.
    pub interval: usize,
}

/// Root of V′ between a and b, where V′ has different signs, to the last digit.
fn root_of_slope(f: &impl Fn(f64) -> [f64; 5], mut a: f64, mut b: f64) -> f64 {
    let falling = f(a)[1] < 0.0;
    let mut r = 0.5 * (a + b);
    for _ in 0..200 {
        let d = f(r);
        if d[1] == 0.0 {
            return r;
        }
        if (d[1] < 0.0) == falling {
            a = r
        } else {
            b = r
        }
        let newton = r - d[1] / d[2];
        let next = if newton > a && newton < b { newton } else { 0.5 * (a + b) };
        if next == r || (b - a) <= f64::EPSILON * b.abs() {
            return next;
        }
        r = next;
    }
    r
}

/// All stationary points within the scan, ascending.
pub(super) fn stationary_points(f: impl Fn(f64) -> [f64; 5], r: &[f64]) -> Vec<StationaryPoint> {
    let mut found = Vec::new();
    let mut before = f(r[0])[1];
    for (interval, pair) in r.windows(2).enumerate() {
        let step = (pair[1] - pair[0]) / PARTS as f64;
        for part in 1..=PARTS {
            let end = if part == PARTS { pair[1] } else { pair[0] + step * part as f64 };
            let after = f(end)[1];
            if before != 0.0 && after != 0.0 && (before < 0.0) != (after < 0.0) {
                let start = pair[0] + step * (part - 1) as f64;
                found.push(StationaryPoint {
                    r: root_of_slope(&f, start, end),
                    maximum: before > 0.0,
                    interval,
                });
            }
            // A slope of exactly zero at a sample point: the sign before it stands.
            if after != 0.0 {
                before = after;
            }
        }
    }
    found
}

/// The lowest minimum between two bond lengths.
pub(super) fn minimum_between(f: impl Fn(f64) -> [f64; 5], from: f64, to: f64) -> Option<LocalDerivatives> {
    let minima = stationary_points(&f, &[from, to]).into_iter().filter(|s| !s.maximum);
    let candidates = minima.map(|s| LocalDerivatives::new(s.r, f(s.r))).filter(|l| l.second_hartree > 0.0);
    candidates.min_by(|a, b| a.v_e_hartree.total_cmp(&b.v_e_hartree))
}

/// The minimum by the spline in the other variable and by local polynomials, where the scan allows.
/// The spline in the other variable comes along, for the spread of the levels.
pub(super) fn alternatives(
    data: &Data,
    recipe: &Recipe,
    local: &LocalDerivatives,
) -> (Vec<LocalDerivatives>, Interpolant) {
    let other = match recipe.variable {
        SplineVariable::R => SplineVariable::Y,
        SplineVariable::Y => SplineVariable::R,
    };
    let spline = Recipe { variable: other, ..*recipe }.through(&data.r, &data.e);
    let (from, to) = data.bracket();
    let mut found = Vec::new();
    found.extend(minimum_between(|r| spline.derivatives(r), from, to));
    found.extend(LOCAL_DEGREES.iter().filter_map(|&degree| by_polynomial(data, local.r_e_bohr, degree)));
    (found, spline)
}

/// The minimum of the least-squares polynomial of `degree` over |x| ≤ 0.2 r_e; none unless there are more
/// points than coefficients.
fn by_polynomial(data: &Data, r_e: f64, degree: usize) -> Option<LocalDerivatives> {
    let half = LOCAL_WINDOW * r_e;
    let inside: Vec<usize> = (0..data.r.len()).filter(|&i| (data.r[i] - r_e).abs() <= half).collect();
    if inside.len() <= degree + 1 {
        return None;
    }
    let matrix = DMatrix::from_fn(inside.len(), degree + 1, |row, power| {
        ((data.r[inside[row]] - r_e) / half).powi(power as i32)
    });
    let energies = DVector::from_iterator(inside.len(), inside.iter().map(|&i| data.e[i]));
    let qr = matrix.qr();
    let coefficients = qr.r().solve_upper_triangular(&(qr.q().transpose() * energies))?;
    let derivatives = |r: f64| {
        let t = (r - r_e) / half;
        let mut s: Vec<f64> = coefficients.iter().copied().collect();
        for k in 0..5 {
            for j in (k..degree).rev() {
                s[j] += t * s[j + 1];
            }
        }
        let scale = |k: i32| half.powi(-k);
        [s[0], s[1] * scale(1), 2.0 * s[2] * scale(2), 6.0 * s[3] * scale(3), 24.0 * s[4] * scale(4)]
    };
    minimum_between(derivatives, r_e - 0.25 * half, r_e + 0.25 * half)
}

/// The minimum after each energy near it was raised by the noise, one after the other.
pub(super) fn noise_variants(data: &Data, interpolant: &Interpolant, noise: f64) -> Vec<LocalDerivatives> {
    let recipe = interpolant.recipe();
    let factors = recipe.factors(&data.r);
    let (from, to) = data.bracket();
    let mut changed = data.e.clone();
    let variant = |i: usize| {
        changed[i] = data.e[i] + noise;
        let curve = recipe.solve_between(&factors, (&data.r, &changed), (from, to));
        changed[i] = data.e[i];
        minimum_between(|r| curve.derivatives(r), from, to)
    };
    let end = data.r.len().min(data.lowest + NOISE_POINTS + 1);
    (data.lowest.saturating_sub(NOISE_POINTS)..end).filter_map(variant).collect()
}
