//! Householder QR of a tall matrix whose columns are first scaled to unit length.

/// A = Q R D with D the column lengths. Column-major; n rows, p columns, n ≥ p.
#[derive(Clone, Debug)]
pub(crate) struct Qr {
    rows: usize,
    columns: usize,
    /// Householder vectors below and on the diagonal, R above it.
    packed: Vec<f64>,
    /// 2/(vᵀv) of each Householder vector.
    beta: Vec<f64>,
    /// Diagonal of R.
    diagonal: Vec<f64>,
    /// Lengths of the original columns.
    pub lengths: Vec<f64>,
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    // Four running sums let the processor add in parallel; the order is fixed, so results repeat bit for bit.
    let mut sums = [0.0; 4];
    let (a4, b4) = (a.chunks_exact(4), b.chunks_exact(4));
    let rest: f64 = a4.remainder().iter().zip(b4.remainder()).map(|(x, y)| x * y).sum();
    for (x, y) in a4.zip(b4) {
        for k in 0..4 {
            sums[k] += x[k] * y[k];
        }
    }
    (sums[0] + sums[1]) + (sums[2] + sums[3]) + rest
}

/// Euclidean length, safe against overflow.
pub(crate) fn length(v: &[f64]) -> f64 {
    let plain = dot(v, v);
    if plain.is_normal() && plain < 1e300 {
        return plain.sqrt();
    }
    let largest = v.iter().fold(0.0, |m: f64, x| m.max(x.abs()));
    if largest == 0.0 || !largest.is_finite() {
        return if v.iter().any(|x| x.is_nan()) { f64::NAN } else { largest };
    }
    largest * v.iter().map(|x| (x / largest) * (x / largest)).sum::<f64>().sqrt()
}

impl Qr {
    /// Storage to be filled.
    pub const fn empty() -> Self {
        let none = Vec::new();
        Self {
            rows: 0,
            columns: 0,
            packed: none,
            beta: Vec::new(),
            diagonal: Vec::new(),
            lengths: Vec::new(),
        }
    }

    /// Factors `matrix` (column-major, `rows` × `columns`); none when an entry is not finite or a column is zero.
    pub fn new(matrix: &[f64], rows: usize, columns: usize) -> Option<Self> {
        let mut qr = Self::empty();
        qr.refill(rows, columns, |packed| packed.extend_from_slice(matrix)).then_some(qr)
    }

    /// Factors the matrix that `fill` pushes, column by column, in the storage of the last one: no allocation when
    /// it is no larger. False, and nothing to be used, where [`Self::new`] gives none.
    pub fn refill(&mut self, rows: usize, columns: usize, fill: impl FnOnce(&mut Vec<f64>)) -> bool {
        let Self { packed, beta, diagonal, lengths, .. } = self;
        [&mut *packed, beta, diagonal, lengths].into_iter().for_each(Vec::clear);
        (self.rows, self.columns) = (rows, columns);
        fill(packed);
        for column in packed.chunks_exact_mut(rows) {
            let size = length(column);
            if !(size > 0.0 && size.is_finite()) {
                return false;
            }
            column.iter_mut().for_each(|x| *x /= size);
            lengths.push(size);
        }
        for j in 0..columns {
            let (done, later) = packed.split_at_mut((j + 1) * rows);
            let v = &mut done[j * rows + j..];
            let size = length(v);
            let r = if v[0] > 0.0 { -size } else { size };
            v[0] -= r;
            diagonal.push(r);
            let square = dot(v, v);
            let factor_of = if square > 0.0 { 2.0 / square } else { 0.0 };
            beta.push(factor_of);
            for other in later.chunks_exact_mut(rows) {
                let factor = factor_of * dot(v, &other[j..]);
                other[j..].iter_mut().zip(v.iter()).for_each(|(x, y)| *x -= factor * y);
            }
        }
        true
    }

    fn reflect(&self, j: usize, v: &mut [f64]) {
        let h = &self.packed[j * self.rows + j..(j + 1) * self.rows];
        let factor = self.beta[j] * dot(h, &v[j..]);
        v[j..].iter_mut().zip(h).for_each(|(x, y)| *x -= factor * y);
    }

    /// v ← Qᵀ v.
    pub fn transpose_times(&self, v: &mut [f64]) {
        (0..self.columns).for_each(|j| self.reflect(j, v));
    }

    /// v ← Q v.
    pub fn times(&self, v: &mut [f64]) {
        (0..self.columns).rev().for_each(|j| self.reflect(j, v));
    }

    /// The entry (i, j) of R, i ≤ j, for the unit-length columns.
    pub fn r(&self, i: usize, j: usize) -> f64 {
        if i == j { self.diagonal[i] } else { self.packed[j * self.rows + i] }
    }

    /// Solves R D x = c in place, for the leading columns, as many as `c` has entries: the first columns of a matrix
    /// have the leading part of its factorisation.
    pub fn back_substitute(&self, c: &mut [f64]) {
        let p = c.len();
        for i in (0..p).rev() {
            let tail: f64 = (i + 1..p).map(|j| self.r(i, j) * c[j]).sum();
            c[i] = (c[i] - tail) / self.diagonal[i];
        }
        c.iter_mut().zip(&self.lengths).for_each(|(x, d)| *x /= d);
    }

    /// Solves (R D)ᵀ w = g in place, for the leading columns, as many as `g` has entries.
    pub fn forward_substitute(&self, g: &mut [f64]) {
        g.iter_mut().zip(&self.lengths).for_each(|(x, d)| *x /= d);
        for j in 0..g.len() {
            let head = dot(&self.packed[j * self.rows..j * self.rows + j], &g[..j]);
            g[j] = (g[j] - head) / self.diagonal[j];
        }
    }

    /// Smallest over largest diagonal entry of R: near the rounding unit the columns depend on each other.
    pub fn reciprocal_condition(&self) -> f64 {
        self.leading_condition(self.columns)
    }

    /// The same of the first `columns` columns alone.
    pub fn leading_condition(&self, columns: usize) -> f64 {
        let sizes = self.diagonal[..columns].iter().map(|d| d.abs());
        sizes.clone().fold(f64::INFINITY, f64::min) / sizes.fold(0.0, f64::max)
    }

    /// (AᵀA)⁻¹, row by row.
    pub fn inverse_gram(&self) -> Vec<Vec<f64>> {
        let p = self.columns;
        let columns: Vec<Vec<f64>> = (0..p)
            .map(|k| {
                let mut unit = vec![0.0; p];
                unit[k] = 1.0;
                self.back_substitute(&mut unit);
                unit
            })
            .collect();
        let entry = |i: usize, j: usize| columns.iter().map(|c| c[i] * c[j]).sum::<f64>();
        (0..p).map(|i| (0..p).map(|j| entry(i.min(j), i.max(j))).collect()).collect()
    }

    /// The diagonal of the projector A (AᵀA)⁻¹ Aᵀ.
    pub fn leverages(&self) -> Vec<f64> {
        let mut sums = vec![0.0; self.rows];
        let mut column = vec![0.0; self.rows];
        for j in 0..self.columns {
            column.fill(0.0);
            column[j] = 1.0;
            self.times(&mut column);
            sums.iter_mut().zip(&column).for_each(|(s, q)| *s += q * q);
        }
        sums
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn factors_multiply_back() {
        let (n, p) = (6, 3);
        let matrix: Vec<f64> = (0..n * p).map(|k| ((k * k + 3 * k) % 11) as f64 + 0.25 * k as f64).collect();
        let qr = Qr::new(&matrix, n, p).unwrap();
        for j in 0..p {
            let mut column = vec![0.0; n];
            (0..=j).for_each(|i| column[i] = qr.r(i, j) * qr.lengths[j]);
            qr.times(&mut column);
            let want = &matrix[j * n..(j + 1) * n];
            assert!(column.iter().zip(want).all(|(a, b)| (a - b).abs() < 1e-13));
        }
        assert!((qr.leverages().iter().sum::<f64>() - p as f64).abs() < 1e-14);
        assert!(Qr::new(&[0.0, 0.0], 2, 1).is_none() && Qr::new(&[f64::NAN, 1.0], 2, 1).is_none());
        assert!((length(&[3e200, 4e200]) / 5e200 - 1.0).abs() < 1e-15);
    }
}
