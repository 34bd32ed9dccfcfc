//! The minimum of an interpolant, its stationary points, and the same minimum by other interpolations.

use super::Data;
use crate::potential::curve::{LocalDerivatives, SplineVariable};
use crate::potential::interpolant::{Interpolant, Recipe};
use crate::potential::local_polynomial::LocalPolynomial;

/// Parts into which an interval between points is cut when stationary points are looked for.
const PARTS: usize = 8;
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
///
/// A slope of exactly zero at a sample (usual in symmetric scans) is a stationary point where the slope has
/// different signs on its two sides; a flat piece counts once, at its middle.
pub(super) fn stationary_points(f: impl Fn(f64) -> [f64; 5], r: &[f64]) -> Vec<StationaryPoint> {
    let mut found = Vec::new();
    // The last sample with a slope, and the first and last of those without one since.
    let mut before = (r[0], f(r[0])[1]);
    let mut flat: Option<(f64, f64, usize)> = None;
    for (interval, pair) in r.windows(2).enumerate() {
        let step = (pair[1] - pair[0]) / PARTS as f64;
        for part in 1..=PARTS {
            let end = if part == PARTS { pair[1] } else { pair[0] + step * part as f64 };
            let slope = f(end)[1];
            if slope == 0.0 {
                let (from, _, first) = flat.unwrap_or((end, end, interval));
                flat = Some((from, end, first));
                continue;
            }
            if before.1 != 0.0 && (before.1 < 0.0) != (slope < 0.0) {
                let (r, interval) = match flat {
                    Some((from, to, first)) => (from + 0.5 * (to - from), first),
                    None => (root_of_slope(&f, before.0, end), interval),
                };
                found.push(StationaryPoint { r, maximum: before.1 > 0.0, interval });
            }
            (before, flat) = ((end, slope), None);
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

/// Other admissible interpolations of the scan.
pub(super) struct Alternatives {
    /// Their minima.
    pub minima: Vec<LocalDerivatives>,
    /// The spline in the other variable.
    pub other: Interpolant,
    /// Its minimum; none where it has none in the bracket.
    pub other_minimum: Option<LocalDerivatives>,
    /// The local polynomials.
    pub polynomials: Vec<LocalPolynomial>,
}

/// The minimum by the spline in the other variable and by local polynomials, where the scan allows.
/// The spline in the other variable comes along with its own minimum, where it has one, for the spread of the
/// levels.
pub(super) fn alternatives(data: &Data, recipe: &Recipe, local: &LocalDerivatives) -> Alternatives {
    let other = match recipe.variable {
        SplineVariable::R => SplineVariable::Y,
        SplineVariable::Y => SplineVariable::R,
    };
    let spline = Recipe { variable: other, ..*recipe }.through(&data.r, &data.e);
    let (from, to) = data.bracket();
    let other_minimum = minimum_between(|r| spline.derivatives(r), from, to);
    let by_degree = |&degree: &usize| LocalPolynomial::through(data, local.r_e_bohr, degree);
    let polynomials: Vec<_> = LOCAL_DEGREES.iter().filter_map(by_degree).collect();
    let minima = other_minimum.into_iter().chain(polynomials.iter().map(LocalPolynomial::minimum)).collect();
    Alternatives { minima, other: spline, other_minimum, polynomials }
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

impl LocalPolynomial {
    /// The least-squares polynomial of `degree` over |x| ≤ 0.2 r_e; none unless there are more points than
    /// coefficients and it has a minimum near r_e.
    fn through(data: &Data, r_e: f64, degree: usize) -> Option<Self> {
        let mut polynomial = Self::least_squares(&data.r, &data.e, r_e, degree)?;
        let reach = 0.25 * polynomial.half_width_bohr();
        polynomial.set_minimum(minimum_between(|r| polynomial.derivatives(r), r_e - reach, r_e + reach)?);
        Some(polynomial)
    }
}
