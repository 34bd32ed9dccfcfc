//! Gauss-Lobatto-Legendre collocation on the reference element [−1, 1], and Gauss-Legendre quadrature.
//!
//! Spectral elements with these nodes and lumped mass are the finite-element discrete variable
//! representation (T. N. Rescigno, C. W. McCurdy, Phys. Rev. A 62, 032706 (2000)).

use super::pair::pair_dot;
use std::sync::OnceLock;

/// Highest polynomial degree for which reference elements are kept.
pub(super) const HIGHEST_DEGREE: usize = 32;

/// Nodes, weights and stiffness of one polynomial degree on [−1, 1].
#[derive(Debug)]
pub(super) struct ReferenceElement {
    /// Polynomial degree p; there are p + 1 nodes.
    pub degree: usize,
    /// Gauss-Lobatto-Legendre nodes, ascending, ends included.
    pub nodes: Vec<f64>,
    /// Their quadrature weights (exact for degree 2p − 1).
    pub weights: Vec<f64>,
    /// Square roots of the weights.
    pub root_weights: Vec<f64>,
    /// Their inverses.
    pub inverse_root_weights: Vec<f64>,
    /// Barycentric interpolation weights of the nodes.
    pub barycentric: Vec<f64>,
    /// Stiffness ∫ l_i′ l_j′, row-major (p + 1)².
    pub stiffness: Vec<f64>,
    /// The stiffness between the p − 1 interior nodes in orthonormal coordinates, for half length 1.
    pub interior: Vec<f64>,
    /// Stiffness between each interior node (orthonormal) and the left and right end (as they are).
    pub to_ends: Vec<[f64; 2]>,
    /// Rows that give the Legendre coefficients of degree p − 1 and p of the polynomial through nodal values.
    pub highest: [Vec<f64>; 2],
    /// Gauss-Legendre nodes, p + 1 of them (exact for degree 2p + 1).
    pub gauss_nodes: Vec<f64>,
    /// Gauss-Legendre weights.
    pub gauss_weights: Vec<f64>,
}

/// How ψ² of one element is integrated up to any place: for ψ of degree p the integral is a Legendre series of
/// degree 2p + 1.
#[derive(Debug)]
pub(super) struct Cumulation {
    /// Points at which ψ² fixes the series: 2p + 1 Gauss points.
    points: usize,
    /// Values there from values at the p + 1 nodes, row-major.
    to_points: Vec<f64>,
    /// ½ w P_m at the points, a row for each m = 0 to 2p.
    moments: Vec<f64>,
    /// (2k + 1)/(k + 1) and (k + 1)/(k + 2) of Clenshaw's recurrence.
    recurrence: Vec<[f64; 2]>,
}

/// Places that [`Cumulation::up_to`] works on together.
const PLACES: usize = 8;

impl Cumulation {
    /// For elements of `degree` (see [`ReferenceElement::of_degree`]), computed once.
    pub fn of_degree(degree: usize) -> &'static Self {
        static KEPT: [OnceLock<Cumulation>; HIGHEST_DEGREE + 1] =
            [const { OnceLock::new() }; HIGHEST_DEGREE + 1];
        let degree = degree.clamp(2, HIGHEST_DEGREE);
        KEPT[degree].get_or_init(|| Self::build(ReferenceElement::of_degree(degree)))
    }

    fn build(element: &ReferenceElement) -> Self {
        let (nodes, points) = (element.degree + 1, 2 * element.degree + 1);
        let (x, w) = gauss_legendre(points);
        let mut to_points = Vec::with_capacity(points * nodes);
        for &x in &x {
            for j in 0..nodes {
                let mut unit = vec![0.0; nodes];
                unit[j] = 1.0;
                to_points.push(element.interpolate(&unit, x));
            }
        }
        let row = |m: usize| x.iter().zip(&w).map(move |(&x, w)| 0.5 * w * legendre_pair(m, x).0);
        let recurrence = |k: usize| {
            let k = k as f64;
            [(2.0 * k + 1.0) / (k + 1.0), (k + 1.0) / (k + 2.0)]
        };
        Self {
            points,
            to_points,
            moments: (0..points).flat_map(row).collect(),
            recurrence: (0..=points).map(recurrence).collect(),
        }
    }

    /// ∫ψ² from −1 to each of the places `t` (in [−1, 1]), times `half`, for ψ by its values at the nodes.
    ///
    /// The series is Σ g_k P_k with g_k = s_(k−1) − s_(k+1), s_m = ½ ∫ψ² P_m, since ∫P_m = (P_(m+1) − P_(m−1))/(2m + 1);
    /// all places go through Clenshaw's recurrence together.
    pub fn up_to(&self, values: &[f64], t: &[f64], half: f64, found: &mut Vec<f64>) {
        let squares: Vec<f64> = self
            .to_points
            .chunks_exact(values.len())
            .map(|row| {
                let psi = pair_dot(row, values);
                half * psi * psi
            })
            .collect();
        let mut s: Vec<f64> =
            self.moments.chunks_exact(self.points).map(|row| pair_dot(row, &squares)).collect();
        s.extend([0.0; 2]);
        // Some places at a time, so that the recurrence stays in registers.
        for places in t.chunks(PLACES) {
            let mut at = [0.0; PLACES];
            at[..places.len()].copy_from_slice(places);
            let (mut now, mut after) = ([0.0; PLACES], [0.0; PLACES]);
            for k in (0..=self.points).rev() {
                let g = if k == 0 { s[0] - s[1] } else { s[k - 1] - s[k + 1] };
                let [first, second] = self.recurrence[k];
                for i in 0..PLACES {
                    let next = g + first * at[i] * now[i] - second * after[i];
                    (after[i], now[i]) = (now[i], next);
                }
            }
            found.extend_from_slice(&now[..places.len()]);
        }
    }
}

/// P_n(x) and P_{n−1}(x) by the three-term recurrence.
fn legendre_pair(n: usize, x: f64) -> (f64, f64) {
    let (mut last, mut now) = (1.0, x);
    for k in 1..n {
        let k = k as f64;
        (last, now) = (now, ((2.0 * k + 1.0) * x * now - k * last) / (k + 1.0));
    }
    if n == 0 { (1.0, 0.0) } else { (now, last) }
}

impl ReferenceElement {
    /// The element of degree `degree` (2 to [`HIGHEST_DEGREE`], clamped), computed once.
    pub fn of_degree(degree: usize) -> &'static Self {
        static KEPT: [OnceLock<ReferenceElement>; HIGHEST_DEGREE + 1] =
            [const { OnceLock::new() }; HIGHEST_DEGREE + 1];
        let degree = degree.clamp(2, HIGHEST_DEGREE);
        KEPT[degree].get_or_init(|| Self::build(degree))
    }

    fn build(p: usize) -> Self {
        let n = p + 1;
        let order = p as f64;
        let mut nodes = vec![0.0; n];
        for (i, node) in nodes.iter_mut().enumerate() {
            let mut x = -(std::f64::consts::PI * i as f64 / order).cos();
            // Newton on (1 − x²) P_p′, whose derivative is −p (p + 1) P_p.
            for _ in 0..100 {
                let (now, last) = legendre_pair(p, x);
                let step = (order * (last - x * now)) / (order * (order + 1.0) * now);
                x += step;
                if step.abs() <= 1e-16 {
                    break;
                }
            }
            *node = x;
        }
        nodes[0] = -1.0;
        nodes[p] = 1.0;
        for i in 0..n / 2 {
            let half = 0.5 * (nodes[p - i] - nodes[i]);
            nodes[i] = -half;
            nodes[p - i] = half;
        }
        if n % 2 == 1 {
            nodes[p / 2] = 0.0;
        }
        let at_node: Vec<f64> = nodes.iter().map(|&x| legendre_pair(p, x).0).collect();
        let weights: Vec<f64> =
            at_node.iter().map(|&value| 2.0 / (order * (order + 1.0) * value * value)).collect();
        // Barycentric weights of these nodes are proportional to 1/P_p(x_i).
        let barycentric: Vec<f64> = at_node.iter().map(|&value| 1.0 / value).collect();
        let mut derivative = vec![0.0; n * n];
        for i in 0..n {
            let mut diagonal = 0.0;
            for j in 0..n {
                if i != j {
                    let d = at_node[i] / (at_node[j] * (nodes[i] - nodes[j]));
                    derivative[i * n + j] = d;
                    diagonal -= d;
                }
            }
            // Rows must annihilate constants exactly.
            derivative[i * n + i] = diagonal;
        }
        let mut stiffness = vec![0.0; n * n];
        for i in 0..n {
            for j in 0..=i {
                let value: f64 =
                    (0..n).map(|q| weights[q] * derivative[q * n + i] * derivative[q * n + j]).sum();
                stiffness[i * n + j] = value;
                stiffness[j * n + i] = value;
            }
        }
        let root_weights: Vec<f64> = weights.iter().map(|w| w.sqrt()).collect();
        let inside = || (1..p).flat_map(|i| (1..p).map(move |j| (i, j)));
        let interior =
            inside().map(|(i, j)| stiffness[i * n + j] / (root_weights[i] * root_weights[j])).collect();
        let to_ends =
            (1..p).map(|i| [stiffness[i], stiffness[p * n + i]].map(|k| k / root_weights[i])).collect();
        // c_k = (k + ½) ∫ P_k f; by this quadrature the norm of P_p itself comes out as 2/p.
        let row = |last: bool| -> Vec<f64> {
            let factor = if last { 0.5 * order } else { order - 0.5 };
            let legendre = |x: f64| if last { legendre_pair(p, x).0 } else { legendre_pair(p, x).1 };
            nodes.iter().zip(&weights).map(|(&x, w)| factor * w * legendre(x)).collect()
        };
        let highest = [row(false), row(true)];
        let (gauss_nodes, gauss_weights) = gauss_legendre(n);
        let inverse_root_weights = root_weights.iter().map(|w| 1.0 / w).collect();
        Self {
            degree: p,
            nodes,
            weights,
            root_weights,
            inverse_root_weights,
            barycentric,
            stiffness,
            interior,
            to_ends,
            highest,
            gauss_nodes,
            gauss_weights,
        }
    }

    /// Value at `x` in [−1, 1] of the polynomial through `values` at the nodes.
    pub fn interpolate(&self, values: &[f64], x: f64) -> f64 {
        let (mut above, mut below) = (0.0, 0.0);
        for ((&node, &weight), &value) in self.nodes.iter().zip(&self.barycentric).zip(values) {
            let distance = x - node;
            if distance == 0.0 {
                return value;
            }
            let share = weight / distance;
            above += share * value;
            below += share;
        }
        above / below
    }
}

/// Nodes and weights of `n`-point Gauss-Legendre quadrature on [−1, 1], ascending.
fn gauss_legendre(n: usize) -> (Vec<f64>, Vec<f64>) {
    let count = n as f64;
    let mut nodes = Vec::with_capacity(n);
    let mut weights = Vec::with_capacity(n);
    for i in 0..n {
        let mut x = -(std::f64::consts::PI * (i as f64 + 0.75) / (count + 0.5)).cos();
        let mut slope = 1.0;
        for _ in 0..100 {
            let (now, last) = legendre_pair(n, x);
            slope = count * (last - x * now) / (1.0 - x * x);
            let step = now / slope;
            x -= step;
            if step.abs() <= 1e-16 {
                break;
            }
        }
        nodes.push(x);
        weights.push(2.0 / ((1.0 - x * x) * slope * slope));
    }
    (nodes, weights)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// ∫ xᵏ over [−1, 1].
    fn monomial(k: i32) -> f64 {
        if k % 2 == 1 { 0.0 } else { 2.0 / f64::from(k + 1) }
    }

    #[test]
    fn quadratures_are_exact_to_their_degree() {
        for p in [2, 5, 12, 20] {
            let element = ReferenceElement::of_degree(p);
            for k in 0..2 * p as i32 {
                let lobatto: f64 =
                    element.nodes.iter().zip(&element.weights).map(|(x, w)| w * x.powi(k)).sum();
                assert!((lobatto - monomial(k)).abs() < 1e-14, "p {p} k {k}");
                let gauss: f64 =
                    element.gauss_nodes.iter().zip(&element.gauss_weights).map(|(x, w)| w * x.powi(k)).sum();
                assert!((gauss - monomial(k)).abs() < 1e-14, "p {p} k {k}");
            }
        }
    }

    #[test]
    fn stiffness_and_interpolation_reproduce_polynomials() {
        let element = ReferenceElement::of_degree(10);
        let n = element.degree + 1;
        let values: Vec<f64> = element.nodes.iter().map(|x| x.powi(7)).collect();
        let mut energy = 0.0;
        for i in 0..n {
            for j in 0..n {
                energy += values[i] * element.stiffness[i * n + j] * values[j];
            }
        }
        // ∫ (7 x⁶)² = 49 · 2/13
        assert!((energy - 98.0 / 13.0).abs() < 1e-12, "{energy}");
        for degree in [9, 10] {
            let values: Vec<f64> = element.nodes.iter().map(|&x| legendre_pair(degree, x).0).collect();
            for (k, row) in element.highest.iter().enumerate() {
                let coefficient: f64 = row.iter().zip(&values).map(|(a, b)| a * b).sum();
                assert!((coefficient - f64::from(u8::from(degree == 9 + k))).abs() < 1e-13);
            }
        }
        assert!((element.interpolate(&values, 0.377) - 0.377_f64.powi(7)).abs() < 1e-14);
    }
}
