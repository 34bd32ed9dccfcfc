//! What is reported of one level: turning points, probabilities, averages, B_v.

use super::chain::dot;
use super::{Inner, Solution};
use crate::parallel::{WORTH_A_THREAD, in_halves};
use crate::potential::Potential;
use crate::units::to_per_cm;

/// A level's figures that need its wavefunction and the potential, and nothing of the scan.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Observables {
    /// Vibrational quantum number.
    pub v: usize,
    /// Energy above V_e in cm⁻¹.
    pub energy_per_cm: f64,
    /// Estimated numerical error of the energy in cm⁻¹.
    pub numerical_error_per_cm: f64,
    /// V_inf − E in cm⁻¹; none for a potential that rises without limit.
    pub below_limit_per_cm: Option<f64>,
    /// B_v = ħ²⟨r⁻²⟩/(2μ) in cm⁻¹.
    pub b_v_per_cm: f64,
    /// Innermost classical turning point in bohr; the wall where the range ends inside the allowed region.
    pub inner_turning_point_bohr: f64,
    /// Outermost classical turning point in bohr; likewise.
    pub outer_turning_point_bohr: f64,
    /// ⟨r⟩ in bohr.
    pub mean_r_bohr: f64,
    /// ⟨r²⟩ in bohr².
    pub mean_square_r_bohr2: f64,
    /// ⟨(r − r_e)²⟩ in bohr².
    pub mean_square_x_bohr2: f64,
    /// Probability inside the innermost turning point.
    pub forbidden_inner: f64,
    /// Probability beyond the outermost turning point.
    pub forbidden_outer: f64,
    /// Probability wherever V > E: beyond both turning points and under barriers between them.
    pub forbidden_probability: f64,
}

/// What is the same for all levels, at the points of the mesh.
struct OnMesh {
    /// Effective potential in hartree.
    effective_hartree: Vec<f64>,
    /// 1/(2μr²), r, r², (r − r_e)²; zero at the walls, where ψ is.
    functions: [Vec<f64>; 4],
    /// Index of the lowest point where the effective potential falls up to it and rises from there on (walls left out).
    valley: Option<usize>,
}

impl OnMesh {
    fn new(inner: &Inner, r_bohr: &[f64], r_e: f64) -> Self {
        let chain = &inner.problem.chain;
        let (two_mu, n) = (inner.problem.demand.two_mu, chain.reference.degree + 1);
        let mut effective_hartree = Vec::with_capacity(r_bohr.len());
        for element in chain.potential.chunks_exact(n) {
            effective_hartree.extend_from_slice(&element[..n - 1]);
        }
        effective_hartree.extend(chain.potential.last());
        let last = r_bohr.len() - 1;
        let on_points = |f: &dyn Fn(f64) -> f64| -> Vec<f64> {
            let inside = |i: usize| i > 0 && i < last;
            r_bohr.iter().enumerate().map(|(i, &r)| if inside(i) { f(r) } else { 0.0 }).collect()
        };
        let functions = [
            on_points(&|r| 1.0 / (two_mu * r * r)),
            on_points(&|r| r),
            on_points(&|r| r * r),
            on_points(&|r| (r - r_e) * (r - r_e)),
        ];
        let inside = &effective_hartree[1..last];
        let lowest = (0..inside.len()).min_by(|i, k| inside[*i].total_cmp(&inside[*k]));
        let falls_and_rises =
            |i: &usize| inside[..=*i].is_sorted_by(|a, b| a >= b) && inside[*i..].is_sorted();
        let valley = lowest.filter(falls_and_rises).map(|i| i + 1);
        Self { effective_hartree, functions, valley }
    }
}

/// All bond lengths (bohr, ascending) where `effective` crosses `energy_hartree` between neighbouring points of
/// `r_bohr` (the two walls left out), with the values on `mesh`.
fn crossings(effective: &dyn Fn(f64) -> f64, energy_hartree: f64, r_bohr: &[f64], mesh: &OnMesh) -> Vec<f64> {
    let effective_hartree = &mesh.effective_hartree;
    let at = |i: usize| {
        let (low, high) = (effective_hartree[i - 1] - energy_hartree, effective_hartree[i] - energy_hartree);
        root(&|r| effective(r) - energy_hartree, r_bohr[i - 1], r_bohr[i], low, high)
    };
    if let Some(valley) = mesh.valley {
        if effective_hartree[valley] > energy_hartree {
            return Vec::new();
        }
        let above = effective_hartree[1..valley].partition_point(|v| *v > energy_hartree);
        let below = effective_hartree[valley..r_bohr.len() - 1].partition_point(|v| *v <= energy_hartree);
        let outer = valley + below;
        let crossed = [(above > 0).then_some(above + 1), (outer < r_bohr.len() - 1).then_some(outer)];
        return crossed.into_iter().flatten().map(at).collect();
    }
    let above = |i: usize| effective_hartree[i] > energy_hartree;
    (2..r_bohr.len() - 1).filter(|&i| above(i - 1) != above(i)).map(at).collect()
}

/// Root of `f` between `a` and `b`, where it has the values `fa` and `fb` of opposite sign: inverse quadratic
/// interpolation where it is safe, else halving (T. R. Chandrupatla, Adv. Eng. Softw. 28, 145 (1997)).
fn root(f: &dyn Fn(f64) -> f64, mut a: f64, mut b: f64, mut fa: f64, mut fb: f64) -> f64 {
    let mut share = 0.5;
    for _ in 0..200 {
        let x = a + share * (b - a);
        let fx = f(x);
        if fx.is_nan() {
            return x;
        }
        // The root stays between a and b; c is where one of them was before.
        let (c, fc);
        if (fx > 0.0) == (fa > 0.0) {
            (c, fc) = (a, fa);
        } else {
            (c, fc) = (b, fb);
            (b, fb) = (a, fa);
        }
        (a, fa) = (x, fx);
        let (best, value) = if fa.abs() < fb.abs() { (a, fa) } else { (b, fb) };
        let least = 2.0 * f64::EPSILON * best.abs() / (b - a).abs();
        if value == 0.0 || least >= 0.5 {
            return best;
        }
        let (xi, phi) = ((a - b) / (c - b), (fa - fb) / (fc - fb));
        share = if phi * phi < xi && (1.0 - phi) * (1.0 - phi) < 1.0 - xi {
            fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
        } else {
            0.5
        };
        share = if share.is_nan() { 0.5 } else { share.clamp(least, 1.0 - least) };
    }
    0.5 * (a + b)
}

/// Innermost and outermost classical turning points (bohr) of `energy_hartree` on V alone: roots of V = E outside
/// all allowed regions that a walk from the minimum in steps of 1 % of r_e meets; the end of the range where it ends
/// first. None when V exceeds E at the minimum.
pub fn turning_points_bohr(potential: &dyn Potential, energy_hartree: f64) -> Option<(f64, f64)> {
    let minimum = potential.minimum_bohr();
    let f = |r: f64| potential.energy_hartree(r) - energy_hartree;
    let at_minimum = f(minimum);
    if at_minimum.is_nan() || at_minimum > 0.0 {
        return None;
    }
    let (from, to) = potential.range_bohr();
    let walk = |end: f64, sign: f64| {
        let mut step = 0.01 * minimum.abs().max(1e-3);
        let (mut r, mut value) = (minimum, at_minimum);
        for _ in 0..2000 {
            let next = r + sign * step;
            let next = if (next - end) * sign >= 0.0 { end } else { next };
            let there = f(next);
            if there > 0.0 {
                let (low, high) =
                    if sign > 0.0 { ((r, value), (next, there)) } else { ((next, there), (r, value)) };
                let there = if there.is_finite() { there } else { f64::MAX };
                return match sign > 0.0 {
                    true => root(&f, low.0, high.0, low.1, there),
                    false => root(&f, low.0, high.0, there, high.1),
                };
            }
            if next == end {
                break;
            }
            (r, value) = (next, there);
            step *= 1.02;
        }
        r
    };
    Some((walk(from, -1.0), walk(to, 1.0)))
}

impl Solution {
    /// Figures of every level; `r_e_bohr` and `v_e_hartree` are the zero of displacements and energies.
    pub fn observables(
        &self,
        potential: &dyn Potential,
        r_e_bohr: f64,
        v_e_hartree: f64,
    ) -> Vec<Observables> {
        let Some(inner) = &self.inner else {
            return Vec::new();
        };
        let Some(first) = self.states.first() else {
            return Vec::new();
        };
        let mesh = OnMesh::new(inner, &first.wavefunction.r_bohr, r_e_bohr);
        let all: Vec<usize> = (0..self.states.len()).collect();
        in_halves(&all, WORTH_A_THREAD, |part| {
            part.iter().map(|&v| self.observables_of(inner, potential, v, (&mesh, v_e_hartree))).collect()
        })
    }

    fn observables_of(
        &self,
        inner: &Inner,
        potential: &dyn Potential,
        v: usize,
        (mesh, v_e): (&OnMesh, f64),
    ) -> Observables {
        let state = &self.states[v];
        let psi = &state.wavefunction;
        let demand = &inner.problem.demand;
        let (two_mu, x) = (demand.two_mu, demand.rotation_x);
        let effective =
            |r: f64| potential.energy_hartree(r) + if x == 0.0 { 0.0 } else { x / (two_mu * r * r) };
        let last = psi.r_bohr.len() - 1;
        let energy = state.energy_hartree;
        let turning = crossings(&effective, energy, &psi.r_bohr, mesh);
        let (from, to) = (psi.r_bohr[0], psi.r_bohr[last]);
        // A wall inside the allowed region takes the place of the turning point.
        let inner_end =
            if mesh.effective_hartree[1] > energy { turning.first().copied().unwrap_or(to) } else { from };
        let outer_end = if mesh.effective_hartree[last - 1] > energy {
            turning.last().copied().unwrap_or(from)
        } else {
            to
        };
        let forbidden_inner = psi.probability(from, inner_end);
        let forbidden_outer = psi.probability(outer_end, to);
        let between: Vec<f64> =
            turning.iter().copied().filter(|r| *r > inner_end && *r < outer_end).collect();
        let barriers: f64 = between.chunks_exact(2).map(|pair| psi.probability(pair[0], pair[1])).sum();
        let limit = potential.limit_hartree();
        let density = psi.weighted_density();
        let [inverse_square, mean_r, mean_square_r, mean_square_x] =
            mesh.functions.each_ref().map(|f| dot(&density, f));
        Observables {
            v: state.v,
            energy_per_cm: to_per_cm(energy - v_e),
            numerical_error_per_cm: to_per_cm(state.error_hartree),
            below_limit_per_cm: limit.is_finite().then(|| to_per_cm(limit - energy)),
            b_v_per_cm: to_per_cm(inverse_square),
            inner_turning_point_bohr: inner_end,
            outer_turning_point_bohr: outer_end,
            mean_r_bohr: mean_r,
            mean_square_r_bohr2: mean_square_r,
            mean_square_x_bohr2: mean_square_x,
            forbidden_inner,
            forbidden_outer,
            forbidden_probability: forbidden_inner + forbidden_outer + barriers,
        }
    }
}
