//! From a potential to its levels: range, mesh, count, levels, error estimate.

use super::chain::{Chain, Factors, node};
use super::mesh::{MeshDemand, Walk, survey_points};
use super::search::{Found, lowest_levels};
use super::{BoundState, HIGHEST_V_WITHOUT_LIMIT, Inner, RadialError, RadialRequest, Solution, Wavefunction};
use crate::potential::Potential;
use std::sync::Arc;

/// Polynomial degree of the elements.
pub(super) const DEGREE: usize = 14;
/// Levels bound by less than this share of the depth are not searched for by extending the mesh.
const LEAST_BINDING: f64 = 1e-15;
/// No accuracy below this is attempted: rounding.
const LEAST_ACCURACY: f64 = 1e-12;
/// Rounding of an energy, relative to the depth searched (measured: below 1e-13 on Morse functions).
const ROUNDING: f64 = 2e-13;
/// Rounds of refinement when the estimated error exceeds the accuracy asked for.
const MOST_REFINEMENTS: usize = 4;

/// A discretised problem ready to be searched.
#[derive(Clone, Debug)]
pub(super) struct Problem {
    pub chain: Chain,
    pub demand: MeshDemand,
    /// Levels below the top, as counted.
    pub count: usize,
}

/// Checks the request and finds lowest energy and top of the search.
fn demand(potential: &dyn Potential, request: &RadialRequest) -> Result<Option<MeshDemand>, RadialError> {
    let mu = request.reduced_mass_me;
    if !(mu > 0.0 && mu.is_finite()) {
        return Err(RadialError::Mass { reduced_mass_me: mu });
    }
    let two_mu = 2.0 * mu;
    let x = request.rotation_x;
    let minimum = potential.minimum_bohr();
    let limit = potential.limit_hartree();
    if !potential.energy_hartree(minimum).is_finite() {
        return Err(RadialError::NotFinite { r_bohr: minimum });
    }
    if limit.is_nan() || !x.is_finite() {
        return Err(RadialError::NotFinite { r_bohr: potential.range_bohr().1 });
    }
    let mut bottom = f64::INFINITY;
    for r in survey_points(potential) {
        let v = effective(potential, two_mu, x, r);
        if v.is_nan() {
            return Err(RadialError::NotFinite { r_bohr: r });
        }
        bottom = bottom.min(v);
    }
    if bottom >= limit {
        return Ok(None);
    }
    Ok(Some(MeshDemand {
        two_mu,
        rotation_x: x,
        top_hartree: limit,
        bottom_hartree: bottom,
        phase: phase_for(request.relative_accuracy),
        degree: DEGREE,
    }))
}

/// Effective potential V + X/(2μr²) in hartree.
fn effective(potential: &dyn Potential, two_mu: f64, x: f64, r: f64) -> f64 {
    let v = potential.energy_hartree(r);
    if x == 0.0 { v } else { v + x / (two_mu * r * r) }
}

/// Phase of one element for an accuracy relative to the depth (measured on Morse functions, see benches).
fn phase_for(relative_accuracy: f64) -> f64 {
    let digits = -relative_accuracy.clamp(1e-13, 1e-2).log10();
    (8.2 - 0.28 * digits).clamp(3.5, 8.0)
}

/// Mesh and chain for all levels below the top, or up to `highest_v`.
///
/// None: nothing is bound.
pub(super) fn problem(
    potential: &dyn Potential,
    request: &RadialRequest,
    phase_factor: f64,
    align: bool,
) -> Result<Option<Problem>, RadialError> {
    let Some(mut demand) = demand(potential, request)? else {
        return Ok(None);
    };
    demand.phase *= phase_factor;
    let limit = demand.top_hartree;
    let wanted = match request.highest_v {
        Some(v) => v.saturating_add(1),
        None if limit == f64::INFINITY => HIGHEST_V_WITHOUT_LIMIT + 1,
        None => usize::MAX,
    };
    if wanted == usize::MAX {
        return below_limit(potential, &demand, align).map(Some);
    }
    // Raise the top until enough levels lie below it, starting from the harmonic estimate.
    let minimum = potential.minimum_bohr();
    let curvature = potential.derivatives_hartree(minimum)[2];
    let quantum = (2.0 * curvature / demand.two_mu).sqrt();
    let quantum = if quantum.is_finite() && quantum > 0.0 {
        quantum
    } else {
        1.0 / (demand.two_mu * minimum * minimum).max(f64::MIN_POSITIVE)
    };
    let mut height = quantum * (wanted as f64 + 0.5);
    for _ in 0..200 {
        let top = demand.bottom_hartree + height;
        if top >= limit {
            return below_limit(potential, &demand, align).map(|mut problem| {
                problem.count = problem.count.min(wanted);
                Some(problem)
            });
        }
        demand.top_hartree = top;
        let mut walks = Walks::start(potential);
        walks.advance(potential, &demand, 0.0, align)?;
        let chain = walks.chain(potential, &demand)?;
        let mut factors = Factors::default();
        factors.factorise(&chain, top);
        if factors.below >= wanted {
            return Ok(Some(Problem { chain, demand, count: wanted }));
        }
        height *= (wanted as f64 / factors.below.max(1) as f64).clamp(1.15, 4.0);
        demand.top_hartree = limit;
    }
    Ok(None)
}

struct Walks {
    inward: Walk,
    outward: Walk,
}

impl Walks {
    fn start(potential: &dyn Potential) -> Self {
        let r = potential.minimum_bohr();
        Self { inward: Walk::new(r, false), outward: Walk::new(r, true) }
    }

    /// Walks both ways until the level at `share` below the top has decayed.
    fn advance(
        &mut self,
        potential: &dyn Potential,
        demand: &MeshDemand,
        share: f64,
        align: bool,
    ) -> Result<(), RadialError> {
        let stop = demand.top_hartree - share * (demand.top_hartree - demand.bottom_hartree);
        let breaks = if align { potential.breakpoints_bohr() } else { &[] };
        let (mut first, mut last) = (f64::INFINITY, f64::NEG_INFINITY);
        for r in survey_points(potential) {
            if effective(potential, demand.two_mu, demand.rotation_x, r) < stop {
                first = first.min(r);
                last = last.max(r);
            }
        }
        self.inward.advance(potential, demand, 0.0, first, breaks)?;
        self.outward.advance(potential, demand, share, last, breaks)
    }

    fn chain(&self, potential: &dyn Potential, demand: &MeshDemand) -> Result<Chain, RadialError> {
        Chain::new(potential, demand.two_mu, demand.rotation_x, self.boundaries(), demand.degree)
    }

    fn boundaries(&self) -> Vec<f64> {
        let inward = self.inward.boundaries.iter().skip(1).rev();
        let mut all: Vec<f64> = inward.chain(&self.outward.boundaries).copied().collect();
        if all.len() < 2 {
            let r = all[0];
            all.push(r + r.abs().max(1.0));
        }
        all
    }
}

/// Everything below a finite limit, the mesh carried out until the highest level has decayed.
fn below_limit(potential: &dyn Potential, demand: &MeshDemand, align: bool) -> Result<Problem, RadialError> {
    let limit = demand.top_hartree;
    let depth = limit - demand.bottom_hartree;
    let mut walks = Walks::start(potential);
    let mut factors = Factors::default();
    let mut share = 1e-4;
    for _ in 0..60 {
        walks.advance(potential, demand, share, align)?;
        let chain = walks.chain(potential, demand)?;
        factors.factorise(&chain, limit);
        let count = factors.below;
        let may_hold_more = !walks.outward.at_end
            && (factors.below_free_end != count || tail_phase(potential, demand, walks.outward.end()) > 0.1);
        // How far below the limit the highest level lies, within a factor of four.
        let mut binding = 0.25;
        if count > 0 {
            while binding > LEAST_BINDING {
                factors.factorise(&chain, limit - binding * depth);
                if factors.below == count {
                    break;
                }
                binding *= 0.25;
            }
        }
        let decayed = walks.outward.at_end || binding >= share || count == 0;
        if (decayed && !may_hold_more) || share <= LEAST_BINDING {
            return Ok(Problem { chain, demand: *demand, count });
        }
        share = if decayed { share / 16.0 } else { binding.min(share / 2.0) }.max(LEAST_BINDING);
    }
    let chain = walks.chain(potential, demand)?;
    factors.factorise(&chain, limit);
    Ok(Problem { count: factors.below, chain, demand: *demand })
}

/// Size of −2μ (V − limit) r² at the outer end: below a few per cent, what lies beyond cannot bind a level
/// that the slope of the zero-energy solution does not show.
fn tail_phase(potential: &dyn Potential, demand: &MeshDemand, r: f64) -> f64 {
    let v = effective(potential, demand.two_mu, demand.rotation_x, r);
    demand.two_mu * (demand.top_hartree - v) * r * r
}

/// See [`super::count_below`].
pub(super) fn count_below(
    potential: &dyn Potential,
    request: &RadialRequest,
    energy_hartree: f64,
) -> Result<usize, RadialError> {
    let finer = problem(potential, request, 0.71, !potential.breakpoints_bohr().is_empty())?;
    Ok(finer.map_or(0, |problem| {
        let mut factors = Factors::default();
        factors.factorise(&problem.chain, energy_hartree.min(problem.demand.top_hartree));
        factors.below
    }))
}

/// Levels of a problem with vectors.
pub(super) fn levels(problem: &Problem) -> Vec<Found> {
    let mut factors = Factors::default();
    lowest_levels(
        &problem.chain,
        &mut factors,
        problem.demand.bottom_hartree,
        problem.demand.top_hartree,
        problem.count,
    )
}

/// See [`super::solve`].
pub(super) fn solve(potential: &dyn Potential, request: &RadialRequest) -> Result<Solution, RadialError> {
    let align = !potential.breakpoints_bohr().is_empty();
    let mut factor = 1.0;
    let mut round = 0;
    loop {
        let Some(problem) = problem(potential, request, factor, align)? else {
            return Ok(Solution { states: Vec::new(), inner: None });
        };
        let found = levels(&problem);
        let errors = estimated_errors(potential, &problem, &found)?;
        let depth = problem.demand.top_hartree - problem.demand.bottom_hartree;
        let worst = errors.iter().fold(0.0_f64, |a, &b| a.max(b));
        let enough = worst <= request.relative_accuracy.max(LEAST_ACCURACY) * depth;
        if enough || round == MOST_REFINEMENTS {
            let states = states(&problem, &found, &errors);
            return Ok(Solution { states, inner: Some(Inner { problem, found }) });
        }
        factor *= 0.75;
        round += 1;
    }
}

/// Difference to the same mesh with polynomials one degree lower, plus rounding.
fn estimated_errors(
    potential: &dyn Potential,
    problem: &Problem,
    found: &[Found],
) -> Result<Vec<f64>, RadialError> {
    let demand = &problem.demand;
    let coarse = Chain::new(
        potential,
        demand.two_mu,
        demand.rotation_x,
        problem.chain.boundaries.clone(),
        demand.degree - 1,
    )?;
    let depth = demand.top_hartree - demand.bottom_hartree;
    let rounding = ROUNDING * depth;
    Ok(found
        .iter()
        .map(|level| (problem.chain.energy_on(&coarse, level) - level.energy).abs() + rounding)
        .collect())
}

fn states(problem: &Problem, found: &[Found], errors: &[f64]) -> Vec<BoundState> {
    let (r_bohr, weight_bohr) = mesh_points(&problem.chain);
    found
        .iter()
        .zip(errors)
        .enumerate()
        .map(|(v, (level, &error_hartree))| {
            let mut psi = vec![0.0; r_bohr.len()];
            problem.chain.to_nodes(&level.vector, &mut psi);
            let largest = psi.iter().fold(0.0_f64, |a, b| a.max(b.abs()));
            let first = psi.iter().find(|x| x.abs() > 1e-4 * largest);
            if first.is_some_and(|x| *x < 0.0) {
                psi.iter_mut().for_each(|x| *x = -*x);
            }
            let wavefunction = Wavefunction {
                degree: problem.chain.reference.degree,
                r_bohr: r_bohr.clone(),
                weight_bohr: weight_bohr.clone(),
                psi,
            };
            BoundState {
                v,
                energy_hartree: level.energy,
                error_hartree,
                nodes: wavefunction.nodes(),
                wavefunction,
            }
        })
        .collect()
}

/// Mesh points and their lumped weights, in bohr.
fn mesh_points(chain: &Chain) -> (Arc<[f64]>, Arc<[f64]>) {
    let (p, elements) = (chain.reference.degree, chain.elements());
    let mut r = Vec::with_capacity(elements * p + 1);
    let mut weight = Vec::with_capacity(elements * p + 1);
    for e in 0..elements {
        let (from, half) = chain.element(e);
        r.push(from);
        weight.push(chain.mass[e]);
        for i in 1..p {
            r.push(node(from, half, chain.reference.nodes[i]));
            weight.push(half * chain.reference.weights[i]);
        }
    }
    r.push(chain.boundaries[elements]);
    weight.push(chain.mass[elements]);
    (r.into(), weight.into())
}
