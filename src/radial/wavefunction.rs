//! What can be asked of a wavefunction on its mesh.

use super::Wavefunction;
use super::reference_element::{Cumulation, ReferenceElement};

impl Wavefunction {
    /// Elements of the mesh.
    fn elements(&self) -> usize {
        self.psi.len().saturating_sub(1) / self.degree.max(1)
    }

    /// Ends of element `e` in bohr and the values of ψ on it.
    fn element(&self, e: usize) -> (f64, f64, &[f64]) {
        let p = self.degree;
        (self.r_bohr[e * p], self.r_bohr[(e + 1) * p], &self.psi[e * p..=(e + 1) * p])
    }

    /// ψ′ at the two ends of the mesh, in bohr^(−3/2): at a hard wall moved outwards by δ the level falls by
    /// ψ′² δ/(2μ) (Hellmann-Feynman theorem).
    pub fn end_slopes(&self) -> (f64, f64) {
        let (p, n) = (self.degree, self.psi.len());
        if p == 0 || n <= p {
            return (0.0, 0.0);
        }
        let slope = |r: &[f64], psi: &[f64], end: usize| -> f64 {
            // Derivative of the Lagrange polynomial at its own node `end`, where ψ = 0.
            let product = |j: usize, without: usize| -> f64 {
                (0..=p).filter(|&k| k != j && k != without).map(|k| (r[end] - r[k]) / (r[j] - r[k])).product()
            };
            (0..=p).filter(|&j| j != end).map(|j| psi[j] * product(j, end) / (r[j] - r[end])).sum()
        };
        let last = n - 1 - p;
        (slope(&self.r_bohr[..=p], &self.psi[..=p], 0), slope(&self.r_bohr[last..], &self.psi[last..], p))
    }

    /// ⟨f⟩ = Σ w f(r) ψ².
    pub fn expectation(&self, f: impl Fn(f64) -> f64) -> f64 {
        self.r_bohr
            .iter()
            .zip(self.weight_bohr.iter())
            .zip(&self.psi)
            // ψ = 0 at the walls, where f need not be finite.
            .filter(|(_, psi)| **psi != 0.0)
            .map(|((&r, w), psi)| w * f(r) * psi * psi)
            .sum()
    }

    /// w ψ² at the mesh points: what an average sums over.
    pub fn weighted_density(&self) -> Vec<f64> {
        self.psi.iter().zip(self.weight_bohr.iter()).map(|(psi, w)| w * psi * psi).collect()
    }

    /// Probability between two bond lengths, ∫ψ² over the part of the mesh between them.
    ///
    /// The polynomials are integrated, not the nodes summed: parts of elements count exactly.
    pub fn probability(&self, from_bohr: f64, to_bohr: f64) -> f64 {
        if self.psi.is_empty() {
            return 0.0;
        }
        let reference = ReferenceElement::of_degree(self.degree);
        // Only the elements that the range touches.
        let first = self.r_bohr.partition_point(|r| *r <= from_bohr).saturating_sub(1) / self.degree;
        let end = self.r_bohr.partition_point(|r| *r < to_bohr).div_ceil(self.degree).min(self.elements());
        (first..end)
            .filter_map(|e| {
                let (left, right, _) = self.element(e);
                let (a, b) = (left.max(from_bohr), right.min(to_bohr));
                (b > a).then(|| self.probability_in_element(reference, e, (a, b)))
            })
            .sum()
    }

    /// ∫ψ² over part of one element; whole elements by their nodes, parts by Gauss-Legendre quadrature.
    fn probability_in_element(&self, reference: &ReferenceElement, e: usize, (a, b): (f64, f64)) -> f64 {
        let (left, right, values) = self.element(e);
        let half = 0.5 * (b - a);
        if a <= left && b >= right {
            return reference.weights.iter().zip(values).map(|(w, y)| w * half * y * y).sum();
        }
        reference
            .gauss_nodes
            .iter()
            .zip(&reference.gauss_weights)
            .map(|(x, w)| {
                let r = a + half * (1.0 + x);
                let psi = reference.interpolate(values, 2.0 * (r - left) / (right - left) - 1.0);
                w * half * psi * psi
            })
            .sum()
    }

    /// The probability below any bond length, for many questions of one state; none without a mesh.
    pub fn running_probability(&self) -> Option<RunningProbability<'_>> {
        if self.psi.len() <= self.degree || self.degree == 0 {
            return None;
        }
        let reference = ReferenceElement::of_degree(self.degree);
        let mut sum = 0.0;
        let at_ends = (0..self.elements()).map(|e| {
            let before = sum;
            let (left, right, _) = self.element(e);
            sum += self.probability_in_element(reference, e, (left, right));
            before
        });
        Some(RunningProbability { at_ends: at_ends.collect(), of: self, reference })
    }

    /// ψ at the given bond lengths (any order), from the polynomial of the element each lies in; 0 outside the
    /// mesh.
    pub fn sample(&self, r_bohr: &[f64]) -> Vec<f64> {
        let reference = ReferenceElement::of_degree(self.degree);
        r_bohr
            .iter()
            .map(|&r| {
                let (Some(first), Some(last)) = (self.r_bohr.first(), self.r_bohr.last()) else {
                    return 0.0;
                };
                if !(r >= *first && r <= *last) {
                    return 0.0;
                }
                let point = self.r_bohr.partition_point(|&x| x < r);
                let e = (point.saturating_sub(1) / self.degree).min(self.elements() - 1);
                let (left, right, values) = self.element(e);
                reference.interpolate(values, 2.0 * (r - left) / (right - left) - 1.0)
            })
            .collect()
    }

    /// ψ² in 1/bohr at the given bond lengths.
    pub fn density_per_bohr(&self, r_bohr: &[f64]) -> Vec<f64> {
        self.sample(r_bohr).into_iter().map(|psi| psi * psi).collect()
    }

    /// Sign changes of ψ between its innermost and outermost mesh values that stand above rounding.
    pub fn nodes(&self) -> usize {
        let largest = self.psi.iter().fold(0.0_f64, |a, b| a.max(b.abs()));
        let mut count = 0;
        let mut sign = 0.0;
        for &psi in self.psi.iter().filter(|psi| psi.abs() > 1e-8 * largest) {
            if psi * sign < 0.0 {
                count += 1;
            }
            sign = psi.signum();
        }
        count
    }
}

/// ∫ψ² from the inner end of the mesh, kept at the ends of its elements.
#[derive(Clone, Debug)]
pub struct RunningProbability<'a> {
    of: &'a Wavefunction,
    reference: &'static ReferenceElement,
    /// Probability below the left end of each element.
    at_ends: Vec<f64>,
}

impl RunningProbability<'_> {
    /// Probability below `r_bohr`; the polynomials are integrated, as in [`Wavefunction::probability`].
    pub fn below(&self, r_bohr: f64) -> f64 {
        let points = &self.of.r_bohr;
        let last = points.len() - 1;
        if r_bohr.is_nan() || r_bohr <= points[0] {
            return 0.0;
        }
        let end = r_bohr.min(points[last]);
        let before = points.partition_point(|&x| x < end).saturating_sub(1);
        let e = (before / self.of.degree).min(self.at_ends.len() - 1);
        let (left, _, _) = self.of.element(e);
        self.at_ends[e] + self.of.probability_in_element(self.reference, e, (left, end))
    }

    /// The same at many bond lengths, ascending: the points of one element share its work.
    pub fn below_all(&self, ascending_bohr: &[f64]) -> Vec<f64> {
        let cumulation = Cumulation::of_degree(self.of.degree);
        let mut found = Vec::with_capacity(ascending_bohr.len());
        let mut places = Vec::new();
        for e in 0..self.at_ends.len() {
            let (left, right, values) = self.of.element(e);
            let rest = &ascending_bohr[found.len()..];
            if e == 0 {
                found.extend(rest.iter().take_while(|r| **r <= left).map(|_| 0.0));
            }
            let rest = &ascending_bohr[found.len()..];
            let inside = rest.partition_point(|r| *r <= right);
            if inside == 0 {
                continue;
            }
            let half = 0.5 * (right - left);
            places.clear();
            places.extend(rest[..inside].iter().map(|r| ((r - left) / half - 1.0).clamp(-1.0, 1.0)));
            let from = found.len();
            cumulation.up_to(values, &places, half, &mut found);
            found[from..].iter_mut().for_each(|p| *p += self.at_ends[e]);
        }
        let points = &self.of.r_bohr;
        let all = self.below(points[points.len() - 1]);
        found.resize(ascending_bohr.len(), all);
        found
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the single values, which sum whole elements by their nodes; at ends of elements and outside too (an
    /// invented function on an uneven mesh).
    #[test]
    fn many_bond_lengths_at_once_are_as_good_as_one() {
        let (degree, ends) = (14, [1.0, 1.7, 2.0, 3.1]);
        let reference = ReferenceElement::of_degree(degree);
        let mut r = vec![ends[0]];
        for pair in ends.windows(2) {
            r.extend(reference.nodes[1..].iter().map(|x| pair[0] + 0.5 * (pair[1] - pair[0]) * (1.0 + x)));
        }
        let psi: Vec<f64> = r.iter().map(|r| (7.0 * r).sin() * (-(r - 2.0) * (r - 2.0)).exp()).collect();
        let wavefunction =
            Wavefunction { degree, weight_bohr: vec![0.0; r.len()].into(), r_bohr: r.into(), psi };
        let running = wavefunction.running_probability().unwrap();
        let mut asked: Vec<f64> = (0..200).map(|i| 0.9 + 0.0115 * f64::from(i)).collect();
        asked.extend(ends);
        asked.sort_by(f64::total_cmp);
        let all = running.below_all(&asked);
        assert_eq!(all.len(), asked.len());
        for (r, p) in asked.iter().zip(&all) {
            assert!((p - running.below(*r)).abs() < 1e-11, "{r}: {p} {}", running.below(*r));
        }
        assert!(running.below_all(&[]).is_empty());
    }
}
