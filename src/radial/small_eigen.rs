//! Eigenvalues and eigenvectors of one small dense symmetric matrix: Householder reduction and the
//! implicit QL iteration (H. Bowdler, R. S. Martin, C. Reinsch, J. H. Wilkinson, Numer. Math. 11, 293
//! (1968)), with the eigenvectors kept as rows so that every rotation runs over contiguous memory.
//! Where only the overlaps of the eigenvectors with a few vectors are needed, those are carried along instead.

use super::chain::MODES;
use super::pair::{add_row, pair_dot, rotate};

/// Diagonalises the symmetric `matrix` (row-major, n × n, both triangles filled).
///
/// On return row k of `matrix` is the eigenvector of `values[k]`, values ascending. `scratch` holds at
/// least 2n numbers. Returns false when the iteration does not converge (60 rounds for one value).
pub(super) fn diagonalise(matrix: &mut [f64], values: &mut [f64], scratch: &mut [f64], n: usize) -> bool {
    let (off, column) = scratch.split_at_mut(n);
    reduce(matrix, values, off, column, n);
    accumulate(matrix, values, n);
    // The machine knows the length of the usual rows.
    let converged = match n {
        MODES => ql::<MODES>(matrix, values, off, n, MODES),
        _ => ql::<0>(matrix, values, off, n, n),
    };
    converged && {
        sort_rows(matrix, values, (n, n));
        true
    }
}

/// Eigenvalues of the symmetric `matrix` (destroyed), ascending, with the overlaps of each eigenvector with the two
/// vectors whose components stand in the rows of `pairs`; on return row k belongs to `values[k]`.
///
/// A quarter of the work of [`diagonalise`]. Returns false when the iteration does not converge.
pub(super) fn overlaps(
    matrix: &mut [f64],
    pairs: &mut [f64],
    values: &mut [f64],
    scratch: &mut [f64],
    n: usize,
) -> bool {
    let (off, column) = scratch.split_at_mut(n);
    reduce(matrix, values, off, column, n);
    for i in (2..n).rev() {
        // Half the squared length of the reflector, 0 where there was nothing to reflect.
        let h = values[i];
        if h != 0.0 {
            let u = &matrix[i * n..i * n + i];
            let mut along = [0.0; 2];
            for (pair, u) in pairs.chunks_exact(2).zip(u) {
                along[0] += pair[0] * u;
                along[1] += pair[1] * u;
            }
            let along = along.map(|x| x / h);
            for (pair, u) in pairs.chunks_exact_mut(2).zip(u) {
                pair[0] -= along[0] * u;
                pair[1] -= along[1] * u;
            }
        }
    }
    for (i, value) in values.iter_mut().enumerate() {
        *value = matrix[i * n + i];
    }
    ql::<2>(pairs, values, off, n, 2) && {
        sort_rows(pairs, values, (n, 2));
        true
    }
}

/// Householder reduction; on return row i of `a` holds reflector i in its first i columns and the diagonal of the
/// tridiagonal matrix after them, `half` half the squared lengths of the reflectors, `off[1..]` the other diagonal.
fn reduce(a: &mut [f64], half: &mut [f64], off: &mut [f64], p: &mut [f64], n: usize) {
    // Reduce from the last row upwards; reflector i lives in row i, columns 0..i.
    for i in (2..n).rev() {
        let (above, row) = a.split_at_mut(i * n);
        let u = &mut row[..i];
        let norm2: f64 = u[..i - 1].iter().map(|x| x * x).sum();
        if norm2 == 0.0 {
            off[i] = u[i - 1];
            half[i] = 0.0;
            continue;
        }
        let last = u[i - 1];
        let norm = (norm2 + last * last).sqrt();
        let g = if last >= 0.0 { -norm } else { norm };
        off[i] = g;
        u[i - 1] = last - g;
        let h = norm2 + u[i - 1] * u[i - 1];
        let h = 0.5 * h; // |u|²/2
        half[i] = h;
        // p = A u / h, from the full symmetric leading block
        let mut k = 0.0;
        for (j, pj) in p[..i].iter_mut().enumerate() {
            *pj = pair_dot(&above[j * n..j * n + i], u) / h;
            k += *pj * u[j];
        }
        let k = 0.5 * k / h;
        for (pj, uj) in p[..i].iter_mut().zip(u.iter()) {
            *pj -= k * uj;
        }
        for j in 0..i {
            let (pj, uj) = (p[j], u[j]);
            let row = &mut above[j * n..j * n + i];
            add_row(row, -uj, &p[..i]);
            add_row(row, -pj, u);
        }
    }
    if n > 1 {
        off[1] = a[n];
        half[1] = 0.0;
    }
    off[0] = 0.0;
    half[0] = 0.0;
}

/// Turns what [`reduce`] left into Qᵀ by rows (row k is what is rotated into the k-th tridiagonal basis vector) and
/// `diagonal`, which holds the half squared lengths before.
fn accumulate(a: &mut [f64], diagonal: &mut [f64], n: usize) {
    // Rows 0..i hold Qᵀ of the leading block before reflector i is applied to it.
    for i in 0..n {
        let h = diagonal[i];
        diagonal[i] = a[i * n + i];
        if h != 0.0 {
            let (above, row) = a.split_at_mut(i * n);
            let u = &row[..i];
            for j in 0..i {
                let q = &mut above[j * n..j * n + i];
                let share = pair_dot(q, u) / h;
                add_row(q, -share, u);
            }
        }
        for j in 0..i {
            a[j * n + i] = 0.0;
            a[i * n + j] = 0.0;
        }
        a[i * n + i] = 1.0;
    }
}

/// The implicit QL iteration on the tridiagonal matrix; `z` has n rows of `width` numbers that are rotated along.
///
/// `WIDTH`: `width` where it is known beforehand, else 0.
fn ql<const WIDTH: usize>(z: &mut [f64], d: &mut [f64], e: &mut [f64], n: usize, width: usize) -> bool {
    let width = if WIDTH > 0 { WIDTH } else { width };
    for i in 1..n {
        e[i - 1] = e[i];
    }
    e[n - 1] = 0.0;
    for l in 0..n {
        for round in 0.. {
            let m = (l..n - 1)
                .find(|&m| e[m].abs() <= f64::EPSILON * (d[m].abs() + d[m + 1].abs()))
                .unwrap_or(n - 1);
            if m == l {
                break;
            }
            if round == 60 {
                return false;
            }
            let mut g = (d[l + 1] - d[l]) / (2.0 * e[l]);
            let mut r = g.hypot(1.0);
            g = d[m] - d[l] + e[l] / (g + r.copysign(g));
            let (mut s, mut c, mut p) = (1.0, 1.0, 0.0);
            let mut underflow = false;
            for i in (l..m).rev() {
                let f = s * e[i];
                let b = c * e[i];
                r = (f * f + g * g).sqrt();
                e[i + 1] = r;
                if r == 0.0 {
                    d[i + 1] -= p;
                    e[m] = 0.0;
                    underflow = true;
                    break;
                }
                s = f / r;
                c = g / r;
                g = d[i + 1] - p;
                r = (d[i] - g) * s + 2.0 * c * b;
                p = s * r;
                d[i + 1] = g + p;
                g = c * r - b;
                let (low, high) = z.split_at_mut((i + 1) * width);
                rotate(&mut low[i * width..], &mut high[..width], c, s);
            }
            if underflow {
                continue;
            }
            d[l] -= p;
            e[l] = g;
            e[m] = 0.0;
        }
    }
    true
}

/// Ascending values, rows along (selection sort: n is small).
fn sort_rows(z: &mut [f64], d: &mut [f64], (n, width): (usize, usize)) {
    for i in 0..n {
        let mut least = i;
        for j in i + 1..n {
            if d[j] < d[least] {
                least = j;
            }
        }
        if least != i {
            d.swap(i, least);
            let (low, high) = z.split_at_mut(least * width);
            low[i * width..(i + 1) * width].swap_with_slice(&mut high[..width]);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{diagonalise, overlaps};

    #[test]
    fn vectors_diagonalise_the_matrix_and_are_orthonormal() {
        for n in [1, 2, 3, 7, 19] {
            // Invented symmetric matrix with a spread of scales, a zero row pattern included.
            let mut a = vec![0.0; n * n];
            for i in 0..n {
                for j in 0..=i {
                    let value = if (i + j) % 5 == 4 {
                        0.0
                    } else {
                        ((3 * i + 7 * j + 1) as f64).sin() + if i == j { (i * i) as f64 } else { 0.0 }
                    };
                    a[i * n + j] = value;
                    a[j * n + i] = value;
                }
            }
            let original = a.clone();
            let mut values = vec![0.0; n];
            assert!(diagonalise(&mut a, &mut values, &mut vec![0.0; 2 * n], n));
            assert!(values.windows(2).all(|pair| pair[0] <= pair[1]));
            // The same by what is carried along: overlaps with two invented vectors, up to a sign a row.
            let ends: Vec<[f64; 2]> = (0..n).map(|i| [(i as f64).cos(), 1.0 / (1.0 + i as f64)]).collect();
            let mut pairs: Vec<f64> = ends.iter().flatten().copied().collect();
            let mut again = vec![0.0; n];
            assert!(overlaps(&mut original.clone(), &mut pairs, &mut again, &mut vec![0.0; 2 * n], n));
            for k in 0..n {
                assert!((again[k] - values[k]).abs() < 1e-12 * (n * n) as f64);
                let row = &a[k * n..(k + 1) * n];
                let along = [0, 1].map(|c| row.iter().zip(&ends).map(|(x, e)| x * e[c]).sum::<f64>());
                let sign = (along[0] * pairs[2 * k] + along[1] * pairs[2 * k + 1]).signum();
                for c in 0..2 {
                    assert!((sign * pairs[2 * k + c] - along[c]).abs() < 1e-11 * n as f64, "{n} {k} {c}");
                }
            }
            for k in 0..n {
                let row = &a[k * n..(k + 1) * n];
                for l in 0..n {
                    let dot: f64 = row.iter().zip(&a[l * n..(l + 1) * n]).map(|(x, y)| x * y).sum();
                    assert!((dot - f64::from(u8::from(k == l))).abs() < 1e-13);
                }
                for i in 0..n {
                    let image: f64 = (0..n).map(|j| original[i * n + j] * row[j]).sum();
                    assert!((image - values[k] * row[i]).abs() < 1e-12 * (n * n) as f64);
                }
            }
        }
    }
}
