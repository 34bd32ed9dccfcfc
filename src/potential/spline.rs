//! Not-a-knot interpolating splines of any degree up to six, as piecewise Taylor polynomials.
//!
//! The spline is found in the B-spline basis: both ends are knots of multiplicity p + 1, the interior
//! knots are the data abscissae without the first and last (p + 1)/2 (so no knot lies next to an end).
//! With the Schoenberg-Whitney conditions so fulfilled the collocation matrix is banded and totally
//! positive, and elimination without pivoting is stable [de Boor & Pinkus 1977, from memory]. With just
//! p + 1 points it is the polynomial through all.

/// Highest degree.
const MAX_DEGREE: usize = 6;
/// Coefficients of a piece.
const ORDER: usize = MAX_DEGREE + 1;

/// A piecewise polynomial with fast evaluation.
#[derive(Clone, Debug)]
pub(crate) struct PiecewisePolynomial {
    /// Ends of the pieces, ascending, one more than pieces.
    knots: Vec<f64>,
    /// Taylor coefficients about the left end of each piece.
    pieces: Vec<[f64; ORDER]>,
    /// First piece that meets each of a row of equal buckets over the whole range.
    buckets: Vec<u32>,
    /// Buckets per unit of the abscissa.
    buckets_per_unit: f64,
}

impl PiecewisePolynomial {
    /// Ends of the pieces.
    pub(crate) fn knots(&self) -> &[f64] {
        &self.knots
    }

    fn new(knots: Vec<f64>, pieces: Vec<[f64; ORDER]>) -> Self {
        let count = 4 * pieces.len();
        let (first, last) = (knots[0], knots[knots.len() - 1]);
        let buckets_per_unit = count as f64 / (last - first);
        let mut buckets = Vec::with_capacity(count);
        let mut piece = 0;
        for bucket in 0..count {
            let start = first + bucket as f64 / buckets_per_unit;
            while piece + 1 < pieces.len() && knots[piece + 1] <= start {
                piece += 1;
            }
            buckets.push(piece as u32);
        }
        Self { knots, pieces, buckets, buckets_per_unit }
    }

    /// The piece that holds `t` (the end pieces also outside) and the distance from its left end.
    fn locate(&self, t: f64) -> (&[f64; ORDER], f64) {
        // A cast from a negative float or NaN gives 0, from a large one the largest value.
        let bucket = ((t - self.knots[0]) * self.buckets_per_unit) as usize;
        let mut piece = self.buckets[bucket.min(self.buckets.len() - 1)] as usize;
        while piece > 0 && t < self.knots[piece] {
            piece -= 1; // rounding of the bucket's start
        }
        while piece + 1 < self.pieces.len() && t >= self.knots[piece + 1] {
            piece += 1;
        }
        (&self.pieces[piece], t - self.knots[piece])
    }

    /// Value at `t`.
    pub(crate) fn value(&self, t: f64) -> f64 {
        let (c, h) = self.locate(t);
        c.iter().rev().fold(0.0, |sum, &c| sum * h + c)
    }

    /// Value and four derivatives at `t`.
    pub(crate) fn derivatives(&self, t: f64) -> [f64; 5] {
        let (c, h) = self.locate(t);
        // Repeated synthetic division leaves s[k] = S⁽ᵏ⁾/k!.
        let mut s = *c;
        for k in 0..5 {
            for j in (k..MAX_DEGREE).rev() {
                s[j] += h * s[j + 1];
            }
        }
        [s[0], s[1], 2.0 * s[2], 6.0 * s[3], 24.0 * s[4]]
    }
}

/// The collocation problem of a spline on given abscissae, factored: one factorisation serves many
/// columns of values.
#[derive(Clone, Debug)]
pub(crate) struct SplineFactors {
    degree: usize,
    /// Knots with multiplicities.
    knots: Vec<f64>,
    /// Row i holds the matrix elements (i, i − p .. i + p) after elimination: unit lower and upper factor.
    band: Vec<Row>,
}

impl SplineFactors {
    /// Sets up the spline of `degree` (1 to 6) on strictly ascending abscissae, more than `degree` of
    /// them; an even degree only with exactly degree + 1 points.
    pub(crate) fn new(abscissae: &[f64], degree: usize) -> Self {
        let n = abscissae.len();
        debug_assert!((1..=MAX_DEGREE).contains(&degree) && n > degree);
        debug_assert!(degree % 2 == 1 || n == degree + 1);
        let skip = degree.div_ceil(2);
        let mut knots = vec![abscissae[0]; degree + 1];
        if n > degree + 1 {
            knots.extend_from_slice(&abscissae[skip..n - skip]);
        }
        knots.extend(std::iter::repeat_n(abscissae[n - 1], degree + 1));
        let mut band = vec![[0.0; 2 * MAX_DEGREE + 1]; n];
        for (i, row) in band.iter_mut().enumerate() {
            let interval = find_interval(&knots, degree, n, abscissae[i]);
            let values = basis(&knots, interval, degree, abscissae[i]);
            for (k, &value) in values.iter().take(degree + 1).enumerate() {
                // Function `interval` − p + k is column − row + p in the band; outside it all vanish.
                if let Some(place) = (interval + k).checked_sub(i)
                    && place <= 2 * degree
                {
                    row[place] = value;
                }
            }
        }
        // Of the two usual degrees the machine knows the length of the rows.
        match degree {
            5 => eliminate::<5>(&mut band),
            3 => eliminate::<3>(&mut band),
            _ => eliminate_any(&mut band, degree),
        }
        Self { degree, knots, band }
    }

    /// The spline through `values` (one an abscissa).
    pub(crate) fn solve(&self, values: &[f64]) -> PiecewisePolynomial {
        self.to_pieces(&self.coefficients(values), f64::NEG_INFINITY, f64::INFINITY)
    }

    /// The same spline, kept only on the pieces that meet [`from`, `to`]; outside them its end pieces go on.
    pub(crate) fn solve_between(&self, values: &[f64], from: f64, to: f64) -> PiecewisePolynomial {
        self.to_pieces(&self.coefficients(values), from, to)
    }

    /// The value at `x` alone of the spline through `values`: no piece is made.
    pub(crate) fn value_at(&self, values: &[f64], x: f64) -> f64 {
        let (n, p) = (self.band.len(), self.degree);
        let c = self.coefficients(values);
        let interval = find_interval(&self.knots, p, n, x);
        let weights = basis(&self.knots, interval, p, x);
        (0..=p).map(|k| weights[k] * c[interval - p + k]).sum()
    }

    /// Coefficients of the B-splines.
    fn coefficients(&self, values: &[f64]) -> Vec<f64> {
        let mut c = values.to_vec();
        match self.degree {
            5 => back_substitute::<5>(&self.band, &mut c),
            3 => back_substitute::<3>(&self.band, &mut c),
            degree => back_substitute_any(&self.band, &mut c, degree),
        }
        c
    }

    /// Taylor coefficients of each piece that meets [`from`, `to`] from the B-spline coefficients.
    fn to_pieces(&self, c: &[f64], from: f64, to: f64) -> PiecewisePolynomial {
        let (p, t) = (self.degree, &self.knots);
        let first = find_interval(t, p, c.len(), from);
        let last = find_interval(t, p, c.len(), to);
        let mut pieces = Vec::with_capacity(last + 1 - first);
        for l in first..=last {
            let mut local = [0.0; ORDER];
            local[..=p].copy_from_slice(&c[l - p..=l]);
            let mut taylor = [0.0; ORDER];
            let mut factorial = 1.0;
            for k in 0..=p {
                // Here local[k..=p] are the coefficients of the k-th derivative, of degree p − k.
                let weights = basis(t, l, p - k, t[l]);
                let derivative: f64 = (0..=p - k).map(|i| weights[i] * local[k + i]).sum();
                taylor[k] = derivative / factorial;
                factorial *= (k + 1) as f64;
                for i in (k + 1..=p).rev() {
                    let j = l - p + i;
                    local[i] = (p - k) as f64 * (local[i] - local[i - 1]) / (t[j + p - k] - t[j]);
                }
            }
            pieces.push(taylor);
        }
        PiecewisePolynomial::new(t[first..=last + 1].to_vec(), pieces)
    }
}

/// One row of a band matrix, the diagonal at the place of the degree.
type Row = [f64; 2 * MAX_DEGREE + 1];

/// Elimination without pivoting, the multipliers left in the lower triangle.
#[inline(always)]
fn eliminate_any(band: &mut [Row], degree: usize) {
    for i in 0..band.len() {
        let (above, below) = band.split_at_mut(i + 1);
        let pivot = &above[i];
        for (step, row) in below.iter_mut().take(degree).enumerate() {
            let place = degree - 1 - step;
            let factor = row[place] / pivot[degree];
            row[place] = factor;
            for k in 1..=degree {
                row[place + k] -= factor * pivot[degree + k];
            }
        }
    }
}

/// Solves with the factors that [`eliminate_any`] left.
#[inline(always)]
fn back_substitute_any(band: &[Row], c: &mut [f64], degree: usize) {
    for i in 0..c.len() {
        let before = &c[i.saturating_sub(degree)..i];
        let factors = &band[i][degree - before.len()..degree];
        let sum: f64 = factors.iter().zip(before).map(|(f, c)| f * c).sum();
        c[i] -= sum;
    }
    for i in (0..c.len()).rev() {
        let after = &c[i + 1..];
        let sum: f64 = band[i][degree + 1..=2 * degree].iter().zip(after).map(|(f, c)| f * c).sum();
        c[i] = (c[i] - sum) / band[i][degree];
    }
}

/// The same, written for one degree.
fn back_substitute<const DEGREE: usize>(band: &[Row], c: &mut [f64]) {
    back_substitute_any(band, c, DEGREE);
}

/// The same, written for one degree.
fn eliminate<const DEGREE: usize>(band: &mut [Row]) {
    eliminate_any(band, DEGREE);
}

/// Index l with knots[l] ≤ x < knots[l + 1], the last non-empty one for the right end.
fn find_interval(knots: &[f64], degree: usize, n: usize, x: f64) -> usize {
    knots[degree + 1..n].partition_point(|&k| k <= x) + degree
}

/// The degree + 1 B-splines that do not vanish in interval l, at x [de Boor 1978, algorithm BSPLVB].
fn basis(knots: &[f64], l: usize, degree: usize, x: f64) -> [f64; ORDER] {
    // The machine knows the lengths of the loops.
    match degree {
        0 => basis_of::<0>(knots, l, x),
        1 => basis_of::<1>(knots, l, x),
        2 => basis_of::<2>(knots, l, x),
        3 => basis_of::<3>(knots, l, x),
        4 => basis_of::<4>(knots, l, x),
        5 => basis_of::<5>(knots, l, x),
        _ => basis_of::<MAX_DEGREE>(knots, l, x),
    }
}

fn basis_of<const DEGREE: usize>(knots: &[f64], l: usize, x: f64) -> [f64; ORDER] {
    let mut b = [0.0; ORDER];
    b[0] = 1.0;
    // The knots that matter: `DEGREE` to either side.
    let near = &knots[l + 1 - DEGREE..][..2 * DEGREE];
    for d in 1..=DEGREE {
        let mut carried = 0.0;
        for i in 0..d {
            let (left, right) = (near[DEGREE + i - d], near[DEGREE + i]);
            let share = b[i] / (right - left);
            b[i] = carried + (right - x) * share;
            carried = (x - left) * share;
        }
        b[d] = carried;
    }
    b
}

#[cfg(test)]
mod tests {
    use super::*;

    fn uneven(n: usize) -> Vec<f64> {
        (0..n).map(|i| 0.7 + 2.0 * (i as f64 / n as f64).powf(1.4) + 0.01 * (i as f64 * 1.7).sin()).collect()
    }

    /// A polynomial of the spline's degree is reproduced with all derivatives.
    #[test]
    fn reproduces_polynomials_of_its_degree() {
        for (degree, n) in [(3, 5), (3, 24), (4, 5), (5, 6), (5, 9), (5, 40), (6, 7)] {
            let x = uneven(n);
            let f = |t: f64| {
                let mut s = [0.0; 5];
                for k in 0..=degree {
                    let c = 1.0 / (1.0 + k as f64);
                    let u = t - 1.3;
                    let mut factor = c;
                    for (d, s) in s.iter_mut().enumerate() {
                        if k >= d {
                            *s += factor * u.powi((k - d) as i32);
                            factor *= (k - d) as f64;
                        }
                    }
                }
                s
            };
            let values: Vec<f64> = x.iter().map(|&t| f(t)[0]).collect();
            let spline = SplineFactors::new(&x, degree).solve(&values);
            for i in 0..=200 {
                let t = x[0] + (x[n - 1] - x[0]) * i as f64 / 200.0;
                let (got, want) = (spline.derivatives(t), f(t));
                assert!((spline.value(t) - got[0]).abs() < 1e-13);
                for d in 0..5 {
                    let tolerance = 1e-12 * 40_f64.powi(d as i32);
                    assert!((got[d] - want[d]).abs() < tolerance, "{degree} {n} {t} {d}: {got:?} {want:?}");
                }
            }
        }
    }

    /// The quintic meets the data, is four times continuously differentiable at its knots and converges
    /// with the sixth power of the step.
    #[test]
    fn quintic_is_smooth_and_of_sixth_order() {
        let f = |t: f64| (-t).exp() * (2.0 * t).sin();
        let mut errors = Vec::new();
        for n in [41, 81, 161, 321] {
            let x: Vec<f64> = (0..n).map(|i| 3.0 * i as f64 / (n - 1) as f64).collect();
            let y: Vec<f64> = x.iter().map(|&t| f(t)).collect();
            let spline = SplineFactors::new(&x, 5).solve(&y);
            for (t, y) in x.iter().zip(&y) {
                assert!((spline.value(*t) - y).abs() < 1e-14);
            }
            for &k in &spline.knots()[1..spline.knots().len() - 1] {
                let (before, after) = (spline.derivatives(k - 1e-13), spline.derivatives(k));
                for d in 0..5 {
                    assert!((before[d] - after[d]).abs() < 1e-7, "{k} {d}");
                }
            }
            let worst =
                (0..3000).map(|i| 3.0 * f64::from(i) / 2999.0).map(|t| (spline.value(t) - f(t)).abs());
            errors.push(worst.fold(0.0, f64::max));
        }
        let order = (errors[2] / errors[3]).log2();
        assert!((5.5..6.5).contains(&order), "order {order}, errors {errors:?}");
    }
}
