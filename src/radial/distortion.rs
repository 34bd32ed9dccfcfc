//! Centrifugal constants by perturbation of the discretised problem.
//!
//! With W = 1/(2μr²) and E(v, X) = E + B X − D X² + H X³: B = ⟨W⟩, (H₀ − E) ψ₁ = −(W − B) ψ₀ with ψ₁ ⊥ ψ₀,
//! −D = ⟨ψ₀|W|ψ₁⟩, H = ⟨ψ₁|W − B|ψ₁⟩ (J. M. Hutson, J. Phys. B 14, 851 (1981); the equations are solved here on
//! the elements of the level itself).

use super::Solution;
use super::chain::{Chain, dot};
use super::factors::Factors;
use super::search::Found;
use super::solve::mesh_points;
use crate::parallel::{WORTH_A_THREAD, in_halves};

/// Centrifugal constants of one level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Distortion {
    /// B_v = ħ²⟨r⁻²⟩/(2μ) in hartree.
    pub b_v_hartree: f64,
    /// D_v in hartree.
    pub d_v_hartree: f64,
    /// H_v in hartree.
    pub h_v_hartree: f64,
}

/// Numbers reused from level to level.
struct Work<'a> {
    /// 1/(2μr²) at the mesh points.
    rotation: &'a [f64],
    /// The same times the weights of quadrature.
    rotation_weight: &'a [f64],
    nodes: Vec<f64>,
    image: Vec<f64>,
    first: Vec<f64>,
    rest: Vec<f64>,
    factors: Factors,
}

impl Solution {
    /// Centrifugal constants of the levels `0..levels` (all there are, if fewer).
    ///
    /// One factorisation and one solve a level. For X ≠ 0 they are the derivatives at that X.
    pub fn distortion(&self, levels: usize) -> Vec<Distortion> {
        let Some(inner) = &self.inner else {
            return Vec::new();
        };
        let chain = &inner.problem.chain;
        let two_mu = inner.problem.demand.two_mu;
        let (r, weight) = mesh_points(chain);
        // At the walls ψ = 0; r = 0 may be one of them.
        let rotation: Vec<f64> =
            r.iter().map(|r| if *r == 0.0 { 0.0 } else { 1.0 / (two_mu * r * r) }).collect();
        let rotation_weight: Vec<f64> = rotation.iter().zip(weight.iter()).map(|(x, w)| x * w).collect();
        in_halves(&inner.found[..levels.min(inner.found.len())], WORTH_A_THREAD, |part| {
            let mut work = Work {
                rotation: &rotation,
                rotation_weight: &rotation_weight,
                nodes: vec![0.0; r.len()],
                image: vec![0.0; chain.len()],
                first: vec![0.0; chain.len()],
                rest: vec![0.0; chain.len()],
                factors: Factors::default(),
            };
            part.iter().map(|level| distortion(chain, level, &mut work)).collect()
        })
    }
}

fn distortion(chain: &Chain, level: &Found, work: &mut Work) -> Distortion {
    let zero = &level.vector;
    chain.to_nodes(zero, &mut work.nodes);
    for (x, w) in work.nodes.iter_mut().zip(work.rotation) {
        *x *= w;
    }
    chain.to_basis(&work.nodes, &mut work.image);
    let b = dot(zero, &work.image);
    // The right-hand side −(W − B) ψ₀ is orthogonal to ψ₀ by construction. The shift stands a little beside the level,
    // so that rounding does not fill the result with ψ₀; the second round removes what that costs.
    work.factors.factorise(chain, level.energy + 1e-6 * level.gap);
    work.first.fill(0.0);
    for round in 0..2 {
        if round == 0 {
            work.rest.fill(0.0);
        } else {
            chain.apply(&work.first, level.energy, &mut work.rest);
        }
        for ((y, w), x) in work.rest.iter_mut().zip(&work.image).zip(zero) {
            *y = b * x - w - *y;
        }
        work.factors.solve(chain, &mut work.rest);
        let part = dot(zero, &work.rest);
        for ((y, more), x) in work.first.iter_mut().zip(&work.rest).zip(zero) {
            *y += more - part * x;
        }
    }
    // Once more, since what was taken out may have been large; then D = −⟨ψ₁|W − B|ψ₀⟩, where the remnant does not
    // meet the large B.
    let part = dot(zero, &work.first);
    let mut d = 0.0;
    for ((y, w), x) in work.first.iter_mut().zip(&work.image).zip(zero) {
        *y -= part * x;
        d -= *y * (w - b * x);
    }
    let norm2 = dot(&work.first, &work.first);
    chain.to_nodes(&work.first, &mut work.nodes);
    let mean: f64 = work.nodes.iter().zip(work.rotation_weight).map(|(x, w)| w * x * x).sum();
    let h = mean - b * norm2;
    Distortion { b_v_hartree: b, d_v_hartree: d, h_v_hartree: h }
}
