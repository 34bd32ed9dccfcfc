//! Weighted linear least squares: Householder QR on scaled columns, refined with residuals in twice
//! the working precision.
//!
//! The refinement solves the augmented system r + A x = b, Aᵀ r = 0 by corrections [Å. Björck, BIT 7,
//! 257 (1967)]; with design, coefficients and residuals kept as [`Precise`] it gives coefficients
//! correct to nearly all digits as long as the scaled condition number stays below about 1e15.

use super::precise::Precise;
use super::qr::{Qr, length};

/// Why there is no solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum LinearError {
    /// A number is not finite.
    NotFinite,
    /// Fewer rows than columns.
    TooFewRows {
        /// Rows.
        rows: usize,
        /// Columns.
        columns: usize,
    },
    /// The columns depend on each other to rounding.
    IllConditioned {
        /// Smallest over largest diagonal entry of R.
        reciprocal_condition: f64,
    },
}

/// A design matrix, column by column.
#[derive(Clone, Debug)]
pub struct Design {
    rows: usize,
    /// Column-major.
    entries: Vec<Precise>,
}

impl Design {
    /// From columns of equal length.
    pub fn from_columns(columns: &[Vec<Precise>]) -> Self {
        Self { rows: columns.first().map_or(0, Vec::len), entries: columns.concat() }
    }

    /// The powers u⁰ ... u^`degree` of each `u`, exact to about 30 digits.
    pub fn powers(u: &[Precise], degree: usize) -> Self {
        let rows = u.len();
        let mut entries = vec![Precise::new(1.0); rows];
        for n in 1..=degree {
            for (i, &u) in u.iter().enumerate() {
                entries.push(entries[(n - 1) * rows + i].times(u));
            }
        }
        Self { rows, entries }
    }

    /// Number of columns.
    pub fn columns(&self) -> usize {
        self.entries.len().checked_div(self.rows).unwrap_or(0)
    }
}

/// The least-squares solution of one linear problem.
#[derive(Clone, Debug)]
pub struct LinearSolution {
    /// The coefficients, one a column.
    pub coefficients: Vec<f64>,
    /// A x − b, unweighted, one a row.
    pub residuals: Vec<f64>,
    /// Σ w d².
    pub weighted_square_sum: f64,
    /// (Aᵀ W A)⁻¹.
    pub unit_covariance: Vec<Vec<f64>>,
    /// Diagonal of the projector onto the columns of the weighted design.
    pub leverages: Vec<f64>,
}

/// Most corrections; each gains as many digits as the condition number leaves.
const MOST_CORRECTIONS: usize = 40;

/// Minimises Σ w (A x − b)².
///
/// `weights` are positive, one a row. At most [`MOST_CORRECTIONS`] corrections, ended when none of the
/// coefficients changes any more or the corrections stop shrinking.
///
/// # Errors
/// [`LinearError`]: not finite, fewer rows than columns, dependent columns.
pub fn solve(design: &Design, b: &[f64], weights: &[f64]) -> Result<LinearSolution, LinearError> {
    let (n, p) = (design.rows, design.columns());
    if n < p || p == 0 {
        return Err(LinearError::TooFewRows { rows: n, columns: p });
    }
    let roots: Vec<Precise> = weights.iter().map(|&w| Precise::new(w).sqrt()).collect();
    let unweighted = weights.iter().all(|&w| w == 1.0);
    let scaled: Vec<Precise> = if unweighted {
        design.entries.clone()
    } else {
        design.entries.iter().enumerate().map(|(k, a)| a.times(roots[k % n])).collect()
    };
    let b: Vec<Precise> = b.iter().zip(&roots).map(|(&b, &root)| Precise::new(b).times(root)).collect();
    if scaled.iter().chain(&b).any(|x| !x.hi.is_finite()) {
        return Err(LinearError::NotFinite);
    }
    let plain: Vec<f64> = scaled.iter().map(|x| x.hi).collect();
    let qr = Qr::new(&plain, n, p).ok_or(LinearError::IllConditioned { reciprocal_condition: 0.0 })?;
    let reciprocal_condition = qr.reciprocal_condition();
    // Below this the first solution has no digit that a correction could build on.
    if reciprocal_condition.is_nan() || reciprocal_condition <= 4.0 * f64::EPSILON {
        return Err(LinearError::IllConditioned { reciprocal_condition });
    }
    let (x, r) = refine(&qr, &scaled, &b, &vec![0.0; p]);
    let coefficients: Vec<f64> = x.iter().map(|x| x.hi).collect();
    if coefficients.iter().any(|x| !x.is_finite()) {
        return Err(LinearError::NotFinite);
    }
    Ok(LinearSolution {
        coefficients,
        residuals: r.iter().zip(&roots).map(|(r, root)| -r.hi / root.hi).collect(),
        weighted_square_sum: r.iter().map(|r| r.hi * r.hi).sum(),
        unit_covariance: if reciprocal_condition < REFINE_COVARIANCE_BELOW {
            inverse_gram(&qr, &scaled, n)
        } else {
            qr.inverse_gram()
        },
        leverages: qr.leverages(),
    })
}

/// The plain (AᵀA)⁻¹ loses as many digits as the condition number has; nine remain above this.
const REFINE_COVARIANCE_BELOW: f64 = 1e-6;

/// (AᵀA)⁻¹ column by column: with b = 0 and Aᵀ r = −e_k the augmented system has x = (AᵀA)⁻¹ e_k.
fn inverse_gram(qr: &Qr, a: &[Precise], n: usize) -> Vec<Vec<f64>> {
    let p = a.len() / n;
    let zero = vec![Precise::default(); n];
    let columns: Vec<Vec<Precise>> = (0..p)
        .map(|k| {
            let mut right = vec![0.0; p];
            right[k] = -1.0;
            refine(qr, a, &zero, &right).0
        })
        .collect();
    (0..p).map(|i| (0..p).map(|j| columns[i.min(j)][i.max(j)].hi).collect()).collect()
}

/// Solution of the augmented system r + A x = b, Aᵀ r = g, by corrections from zero.
fn refine(qr: &Qr, a: &[Precise], b: &[Precise], g: &[f64]) -> (Vec<Precise>, Vec<Precise>) {
    let (n, p) = (b.len(), g.len());
    let (mut x, mut r) = (vec![Precise::default(); p], vec![Precise::default(); n]);
    let mut last_change = f64::INFINITY;
    for _ in 0..MOST_CORRECTIONS {
        // What is left of both equations, in twice the working precision.
        let mut left: Vec<Precise> = b.iter().zip(&r).map(|(b, r)| b.plus(r.negative())).collect();
        for (column, x) in a.chunks_exact(n).zip(&x) {
            let minus = x.negative();
            left.iter_mut().zip(column).for_each(|(f, a)| *f = f.plus(a.times(minus)));
        }
        let mut f: Vec<f64> = left.iter().map(|f| f.hi).collect();
        let along = |column: &[Precise]| {
            column.iter().zip(&r).fold(Precise::default(), |s, (a, r)| s.plus(a.times(*r)))
        };
        let mut w: Vec<f64> = a
            .chunks_exact(n)
            .zip(g)
            .map(|(column, &g)| Precise::new(g).plus(along(column).negative()).hi)
            .collect();
        // With A = Q R: w = R⁻ᵀ g, dx = R⁻¹ (c₁ − w), dr = Q (w, c₂), c = Qᵀ f.
        qr.forward_substitute(&mut w);
        qr.transpose_times(&mut f);
        let mut dx: Vec<f64> = f.iter().zip(&w).map(|(c, w)| c - w).collect();
        qr.back_substitute(&mut dx);
        f[..p].copy_from_slice(&w);
        qr.times(&mut f);
        let scaled: Vec<f64> = dx.iter().zip(&qr.lengths).map(|(d, s)| d * s).collect();
        let change = length(&scaled) + length(&f);
        if change.is_nan() || change >= last_change {
            break;
        }
        x.iter_mut().zip(&dx).for_each(|(x, d)| *x = x.plus(Precise::new(*d)));
        r.iter_mut().zip(&f).for_each(|(r, d)| *r = r.plus(Precise::new(*d)));
        let settled = |(x, d): (&Precise, &f64)| d.abs() <= 0.25 * f64::EPSILON * x.hi.abs();
        if x.iter().zip(&dx).all(settled) {
            break;
        }
        last_change = change;
    }
    (x, r)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn powers(u: &[f64], degree: usize) -> Design {
        Design::powers(&u.iter().map(|&u| Precise::new(u)).collect::<Vec<_>>(), degree)
    }

    /// An exact cubic far from its centre, where plain normal equations keep no digit (invented data).
    #[test]
    fn recovers_an_exact_polynomial() {
        let u: Vec<f64> = (0..12).map(|k| 100.0 + k as f64).collect();
        let b: Vec<f64> = u.iter().map(|u| 3.0 - 2.0 * u + 0.5 * u * u + u * u * u).collect();
        let solution = solve(&powers(&u, 3), &b, &[1.0; 12]).unwrap();
        for (found, want) in solution.coefficients.iter().zip([3.0, -2.0, 0.5, 1.0]) {
            assert!((found / want - 1.0).abs() < 1e-15, "{found} against {want}");
        }
        assert!((solution.leverages.iter().sum::<f64>() - 4.0).abs() < 1e-9);
    }

    /// A weight of 4 counts like the same row four times.
    #[test]
    fn a_weight_is_a_repetition() {
        let u = [0.0, 1.0, 2.0, 3.0];
        let b = [0.1, 0.9, 2.2, 2.7];
        let weighted = solve(&powers(&u, 1), &b, &[1.0, 4.0, 1.0, 1.0]).unwrap();
        let (u, b) = ([0.0, 1.0, 1.0, 1.0, 1.0, 2.0, 3.0], [0.1, 0.9, 0.9, 0.9, 0.9, 2.2, 2.7]);
        let repeated = solve(&powers(&u, 1), &b, &[1.0; 7]).unwrap();
        for k in 0..2 {
            assert!((weighted.coefficients[k] - repeated.coefficients[k]).abs() < 1e-14);
            assert!((weighted.unit_covariance[k][k] - repeated.unit_covariance[k][k]).abs() < 1e-14);
        }
        assert!((weighted.weighted_square_sum - repeated.weighted_square_sum).abs() < 1e-14);
    }

    #[test]
    fn refuses_what_has_no_solution() {
        let same = vec![Precise::new(1.0); 3];
        let twice = Design::from_columns(&[same.clone(), same]);
        assert!(matches!(
            solve(&twice, &[1.0, 2.0, 3.0], &[1.0; 3]),
            Err(LinearError::IllConditioned { .. })
        ));
        assert!(matches!(solve(&powers(&[1.0], 2), &[1.0], &[1.0]), Err(LinearError::TooFewRows { .. })));
        let line = powers(&[1.0, 2.0], 1);
        assert!(matches!(solve(&line, &[f64::NAN, 1.0], &[1.0; 2]), Err(LinearError::NotFinite)));
    }
}
