//! From a potential to its levels: range, mesh, count, levels, error estimate.

use super::chain::{Chain, node};
use super::factors::Factors;
use super::mesh::{Ground, MeshDemand, Walk, effective, survey};
use super::reference_element::ReferenceElement;
use super::search::{Found, lowest_levels};
use super::{
    BoundState, HIGHEST_V_WITHOUT_LIMIT, Inner, MOST_LEVELS, RadialError, RadialRequest, Solution,
    Wavefunction,
};
use crate::parallel::{WORTH_A_THREAD, in_halves, side_by_side};
use crate::potential::Potential;
use std::sync::Arc;

/// Polynomial degree of the elements.
pub(super) const DEGREE: usize = 14;
/// Levels bound by less than this share of the depth are not searched for by extending the mesh.
const LEAST_BINDING: f64 = 1e-15;
/// No accuracy below this is attempted: rounding.
const LEAST_ACCURACY: f64 = 3e-12;
/// Rounding of an energy, relative to the depth searched (measured: up to 3e-12 on long tails).
const ROUNDING: f64 = 2e-12;
/// Rounding of an energy relative to its distance from the potential's zero (measured: up to 3e-16).
const ROUNDING_OF_ZERO: f64 = 2e-15;
/// Accuracy of the potential's polynomials in units of the accuracy of the energies.
pub(super) const POTENTIAL_SHARE: f64 = 30.0;
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

/// (r, V) samples of the survey, ascending.
type Survey = Vec<(f64, f64)>;

/// Checks the request and finds lowest energy and top of the search.
fn demand(
    potential: &dyn Potential,
    request: &RadialRequest,
) -> Result<Option<(MeshDemand, Survey)>, RadialError> {
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
    let survey = survey(potential, two_mu, x)?;
    let bottom = survey.iter().fold(f64::INFINITY, |low, sample| low.min(sample.1));
    if bottom >= limit {
        return Ok(None);
    }
    let demand = MeshDemand {
        two_mu,
        rotation_x: x,
        top_hartree: limit,
        bottom_hartree: bottom,
        phase: phase_for(request.relative_accuracy),
        degree: DEGREE,
        potential_tolerance_hartree: 0.0,
    };
    Ok(Some((demand, survey)))
}

/// Phase of one element for an accuracy relative to the depth (measured on Morse functions, see benches).
pub(super) fn phase_for(relative_accuracy: f64) -> f64 {
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
) -> Result<Option<Problem>, RadialError> {
    let Some((mut demand, survey)) = demand(potential, request)? else {
        return Ok(None);
    };
    demand.phase *= phase_factor;
    let tolerance = POTENTIAL_SHARE * request.relative_accuracy.max(LEAST_ACCURACY) * phase_factor.powi(8);
    let depth_at = |top: f64, demand: &mut MeshDemand| {
        demand.top_hartree = top;
        demand.potential_tolerance_hartree = tolerance * (top - demand.bottom_hartree);
    };
    depth_at(demand.top_hartree, &mut demand);
    let limit = demand.top_hartree;
    let wanted = match request.highest_v {
        Some(v) => v.saturating_add(1),
        None if limit == f64::INFINITY => HIGHEST_V_WITHOUT_LIMIT + 1,
        None => usize::MAX,
    };
    if wanted == usize::MAX {
        let all = below_limit(potential, &demand, &survey)?;
        if all.count <= MOST_LEVELS {
            return Ok(Some(all));
        }
        // A tail without end: the lowest levels on a mesh of their own.
        depth_at(energy_of_count(&all, MOST_LEVELS), &mut demand);
        let mut walks = Walks::start(potential);
        walks.advance(Ground { potential, demand: &demand, survey: &survey }, 0.0)?;
        let chain = walks.chain(&demand, None)?;
        let mut factors = Factors::default();
        factors.factorise(&chain, demand.top_hartree);
        let count = factors.below.min(MOST_LEVELS);
        return Ok(Some(Problem { chain, demand, count }));
    }
    // Raise the top until enough levels lie below it.
    let mut height = height_of_levels(potential, &demand, wanted as f64 + 0.1);
    for _ in 0..200 {
        let top = demand.bottom_hartree + height;
        if top >= limit {
            depth_at(limit, &mut demand);
            return below_limit(potential, &demand, &survey).map(|mut problem| {
                problem.count = problem.count.min(wanted);
                Some(problem)
            });
        }
        depth_at(top, &mut demand);
        let mut walks = Walks::start(potential);
        walks.advance(Ground { potential, demand: &demand, survey: &survey }, 0.0)?;
        let chain = walks.chain(&demand, None)?;
        let mut factors = Factors::default();
        factors.factorise(&chain, top);
        if factors.below >= wanted {
            return Ok(Some(Problem { chain, demand, count: wanted }));
        }
        height *= (wanted as f64 / factors.below.max(1) as f64).clamp(1.15, 4.0);
        depth_at(limit, &mut demand);
    }
    Err(RadialError::Search)
}

/// Steps in which a harmonic oscillator's half width is crossed by [`phase_below`].
const PHASE_STEPS: f64 = 24.0;
/// Steps after which it gives up.
const MOST_PHASE_STEPS: usize = 2000;

/// Height above the bottom at which the phase integral (1/π) ∫ √(2μ(E − V)) dr is about `phase`; the harmonic
/// estimate where that is no use. A starting value: whether the levels are there is counted.
fn height_of_levels(potential: &dyn Potential, demand: &MeshDemand, phase: f64) -> f64 {
    let minimum = potential.minimum_bohr();
    let curvature = potential.derivatives_hartree(minimum)[2];
    let quantum = (2.0 * curvature / demand.two_mu).sqrt();
    if !(quantum.is_finite() && quantum > 0.0) {
        return phase / (demand.two_mu * minimum * minimum).max(f64::MIN_POSITIVE);
    }
    let harmonic = quantum * phase;
    let highest = demand.top_hartree - demand.bottom_hartree;
    let mut height = harmonic;
    for _ in 0..12 {
        if height >= highest {
            return highest;
        }
        let step = (2.0 * height / curvature).sqrt() / PHASE_STEPS;
        let found = phase_below(potential, demand, demand.bottom_hartree + height, step);
        let Some(found) = found.filter(|f| *f > 0.0) else { return harmonic };
        if (found - phase).abs() < 0.05 {
            return height;
        }
        height *= (phase / found).clamp(0.25, 4.0);
    }
    height
}

/// (1/π) ∫ √(2μ(E − V)) dr over the well around the minimum, by the trapezoidal rule; none where the well has no end
/// within a reasonable number of steps.
fn phase_below(potential: &dyn Potential, demand: &MeshDemand, energy: f64, step: f64) -> Option<f64> {
    let (from, to) = potential.range_bohr();
    let minimum = potential.minimum_bohr();
    let wavenumber = |r: f64| {
        let v = effective(potential, demand.two_mu, demand.rotation_x, r);
        (demand.two_mu * (energy - v)).max(0.0).sqrt()
    };
    let mut sum = wavenumber(minimum);
    for sign in [-1.0, 1.0] {
        let mut r = minimum;
        for round in 1.. {
            r += sign * step;
            let k = if r <= from || r >= to { 0.0 } else { wavenumber(r) };
            if k.is_nan() || round == MOST_PHASE_STEPS {
                return None;
            }
            if k == 0.0 {
                break;
            }
            sum += k;
        }
    }
    Some(sum * step / std::f64::consts::PI)
}

/// An energy below which at least `count` levels lie, and few more.
fn energy_of_count(problem: &Problem, count: usize) -> f64 {
    let (mut low, mut high) = (problem.demand.bottom_hartree, problem.demand.top_hartree);
    let mut factors = Factors::default();
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        factors.factorise(&problem.chain, middle);
        if factors.below == count {
            return middle;
        }
        if factors.below < count { low = middle } else { high = middle }
    }
    high
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
    fn advance(&mut self, ground: Ground, share: f64) -> Result<(), RadialError> {
        let demand = ground.demand;
        let stop = demand.top_hartree - share * (demand.top_hartree - demand.bottom_hartree);
        let (mut first, mut last) = (f64::INFINITY, f64::NEG_INFINITY);
        for &(r, _) in ground.survey.iter().filter(|sample| sample.1 < stop) {
            first = first.min(r);
            last = last.max(r);
        }
        self.inward.advance(ground, 0.0, first)?;
        self.outward.advance(ground, share, last)
    }

    fn chain(&self, demand: &MeshDemand, earlier: Option<&Chain>) -> Result<Chain, RadialError> {
        let inward = self.inward.boundaries.iter().skip(1).rev();
        let boundaries: Vec<f64> = inward.chain(&self.outward.boundaries).copied().collect();
        if boundaries.len() < 2 {
            return Err(RadialError::Mesh { r_bohr: self.outward.end() });
        }
        let values = self.inward.values.iter().rev().chain(&self.outward.values).copied().collect();
        Chain::extended(demand.two_mu, boundaries, values, demand.degree, earlier)
    }
}

/// Everything below a finite limit, the mesh carried out until the highest level has decayed.
fn below_limit(
    potential: &dyn Potential,
    demand: &MeshDemand,
    survey: &[(f64, f64)],
) -> Result<Problem, RadialError> {
    let limit = demand.top_hartree;
    let depth = limit - demand.bottom_hartree;
    let mut walks = Walks::start(potential);
    let mut factors = Factors::default();
    let mut share = 1e-4;
    let mut earlier: Option<Chain> = None;
    for _ in 0..60 {
        walks.advance(Ground { potential, demand, survey }, share)?;
        let chain = walks.chain(demand, earlier.as_ref())?;
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
        earlier = Some(chain);
    }
    let chain = walks.chain(demand, earlier.as_ref())?;
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
    let finer = problem(potential, request, 0.71)?;
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
    let mut factor = 1.0;
    let mut round = 0;
    loop {
        let Some(problem) = problem(potential, request, factor)? else {
            return Ok(Solution { states: Vec::new(), inner: None });
        };
        let (found, coarse) = if problem.count < WORTH_A_THREAD {
            (levels(&problem), coarser(potential, &problem))
        } else {
            side_by_side(|| levels(&problem), || coarser(potential, &problem))
        };
        let errors = estimated_errors(&problem, &coarse?, &found);
        let depth = problem.demand.top_hartree - problem.demand.bottom_hartree;
        let worst = errors.iter().fold(0.0_f64, |a, &b| a.max(b));
        // What a zero far from the well costs no finer mesh brings back.
        let zero = problem.demand.top_hartree.abs().max(problem.demand.bottom_hartree.abs());
        let enough =
            worst <= request.relative_accuracy.max(LEAST_ACCURACY) * depth + 2.0 * ROUNDING_OF_ZERO * zero;
        if enough || round == MOST_REFINEMENTS {
            let states = states(&problem, &found, &errors);
            return Ok(Solution { states, inner: Some(Inner { problem, found }) });
        }
        factor *= 0.75;
        round += 1;
    }
}

/// The same mesh with polynomials one degree lower.
fn coarser(potential: &dyn Potential, problem: &Problem) -> Result<Chain, RadialError> {
    let demand = &problem.demand;
    let degree = demand.degree - 1;
    let boundaries = problem.chain.boundaries.clone();
    let values = node_values(potential, demand, &boundaries, ReferenceElement::of_degree(degree))?;
    Chain::without_vectors(demand.two_mu, boundaries, values, degree)
}

/// Twice the difference to the coarser problem, plus rounding: of the depth, and of the potential's own zero, which
/// costs digits where it is far from the well.
fn estimated_errors(problem: &Problem, coarse: &Chain, found: &[Found]) -> Vec<f64> {
    let demand = &problem.demand;
    let zero = demand.top_hartree.abs().max(demand.bottom_hartree.abs());
    let rounding = ROUNDING * (demand.top_hartree - demand.bottom_hartree) + ROUNDING_OF_ZERO * zero;
    let error =
        |level: &Found| 2.0 * (problem.chain.energy_on(coarse, level) - level.energy).abs() + rounding;
    found.iter().map(error).collect()
}

/// Effective potential at the nodes of every element.
fn node_values(
    potential: &dyn Potential,
    demand: &MeshDemand,
    boundaries: &[f64],
    reference: &ReferenceElement,
) -> Result<Vec<f64>, RadialError> {
    let p = reference.degree;
    let mut values = Vec::with_capacity((boundaries.len() - 1) * (p + 1));
    for (e, pair) in boundaries.windows(2).enumerate() {
        let half = 0.5 * (pair[1] - pair[0]);
        for (i, &x) in reference.nodes.iter().enumerate() {
            let r = if i == p { pair[1] } else { node(pair[0], half, x) };
            // Interfaces belong to two elements; one evaluation serves both.
            let v = match values.last() {
                Some(&last) if i == 0 => last,
                _ => effective(potential, demand.two_mu, demand.rotation_x, r),
            };
            let wall = (e == 0 && i == 0) || (e + 2 == boundaries.len() && i == p);
            // ψ = 0 at the walls: an infinite value does no harm.
            match (v.is_finite(), wall && !v.is_nan()) {
                (true, _) => values.push(v),
                (false, true) => values.push(demand.top_hartree),
                (false, false) => return Err(RadialError::NotFinite { r_bohr: r }),
            }
        }
    }
    Ok(values)
}

fn states(problem: &Problem, found: &[Found], errors: &[f64]) -> Vec<BoundState> {
    let (r_bohr, weight_bohr) = mesh_points(&problem.chain);
    let state = |v: usize| {
        let level = &found[v];
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
            error_hartree: errors[v],
            nodes: wavefunction.nodes(),
            wavefunction,
        }
    };
    let all: Vec<usize> = (0..found.len()).collect();
    in_halves(&all, WORTH_A_THREAD, |part| part.iter().map(|&v| state(v)).collect())
}

/// Mesh points and their lumped weights, in bohr.
pub(super) fn mesh_points(chain: &Chain) -> (Arc<[f64]>, Arc<[f64]>) {
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
