//! Quasi-bound levels: states behind the centrifugal barrier that decay by tunnelling.
//!
//! A level is a pole of the scattering matrix: the solution regular inside that is a purely outgoing wave far out has
//! a complex energy E − iΓ/2 (A. J. F. Siegert, Phys. Rev. 56, 750 (1939)). The elements of the bound levels are
//! eliminated at complex energy from both sides towards the top of the barrier; there the equation is as well
//! conditioned as for a bound level, so that widths are right to their own relative accuracy however narrow. Each pole
//! is found a second time from real energies alone ([`super::real_axis`]).

use super::chain::Chain;
use super::factors::Factors;
use super::mesh::{Ground, MeshDemand, Walk, effective, survey};
use super::outgoing::{C, outgoing_slope, pivot_at};
use super::real_axis::{self, Search};
use super::solve::{self, DEGREE, POTENTIAL_SHARE};
use super::{RadialError, RadialRequest};
use crate::potential::Potential;

/// A quasi-bound level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct QuasiBound {
    /// Vibrational quantum number, counted on from the bound levels of the same J.
    pub v: usize,
    /// Energy of the pole in hartree, on the potential's own zero.
    pub energy_hartree: f64,
    /// Width Γ in hartree; 0 where it is below the smallest number.
    pub width_hartree: f64,
    /// Energy and width from real energies alone, in hartree; none where that would cost too much.
    pub by_phase_hartree: Option<(f64, f64)>,
    /// Top of the barrier in hartree, on the potential's own zero.
    pub barrier_hartree: f64,
    /// Where it stands, in bohr.
    pub barrier_bohr: f64,
}

impl QuasiBound {
    /// Lifetime ħ/Γ in atomic units of time; none for a width of zero.
    pub fn lifetime_au(&self) -> Option<f64> {
        (self.width_hartree > 0.0).then(|| 1.0 / self.width_hartree)
    }
}

/// The potential up to a bond length.
struct Cut<'a> {
    whole: &'a dyn Potential,
    to: f64,
}

impl Potential for Cut<'_> {
    fn derivatives_hartree(&self, r: f64) -> [f64; 5] {
        self.whole.derivatives_hartree(r)
    }
    fn energy_hartree(&self, r: f64) -> f64 {
        self.whole.energy_hartree(r)
    }
    fn range_bohr(&self) -> (f64, f64) {
        (self.whole.range_bohr().0, self.to)
    }
    fn limit_hartree(&self) -> f64 {
        self.whole.limit_hartree()
    }
    fn minimum_bohr(&self) -> f64 {
        self.whole.minimum_bohr()
    }
    fn breakpoints_bohr(&self) -> &[f64] {
        self.whole.breakpoints_bohr()
    }
}

/// Step of the walk that looks for the barrier, relative.
const WALK: f64 = 1.02;
/// Longest walk: 1.02^700 is a million.
const MOST_STEPS: usize = 700;

/// Outermost maximum of the effective potential above the limit, (r, V_eff), and the lowest V_eff inside it.
fn barrier(potential: &dyn Potential, two_mu: f64, x: f64) -> Option<(f64, f64, f64)> {
    let (start, limit) = (potential.minimum_bohr(), potential.limit_hartree());
    let v = |r: f64| effective(potential, two_mu, x, r) - limit;
    let r: Vec<f64> = (0..MOST_STEPS).map(|i| start * WALK.powi(i as i32)).collect();
    let values: Vec<f64> = r.iter().map(|&r| v(r)).collect();
    // Far out what is left is rounding of the limit.
    let noise = 1e-11 * values[0].abs();
    let peak = |i: usize| values[i] > noise && values[i] >= values[i + 1] && values[i] > values[i - 1];
    let top = (1..MOST_STEPS - 1).rev().find(|&i| peak(i))?;
    let bottom = values[..top].iter().copied().fold(f64::INFINITY, f64::min);
    // Golden section.
    let (mut a, mut b) = (r[top - 1], r[top + 1]);
    let share = 0.5 * (5.0_f64.sqrt() - 1.0);
    for _ in 0..60 {
        let (left, right) = (b - share * (b - a), a + share * (b - a));
        if v(left) > v(right) { b = right } else { a = left }
    }
    let at = 0.5 * (a + b);
    let height = v(at);
    (height > 0.0 && height.is_finite() && bottom < height).then_some((at, height + limit, bottom + limit))
}

/// Everything that does not depend on the level.
struct Setting<'a> {
    potential: &'a dyn Potential,
    demand: MeshDemand,
    survey: Vec<(f64, f64)>,
    limit: f64,
    nu: f64,
    barrier_bohr: f64,
}

impl Setting<'_> {
    /// Boundaries and values from the inner end to the barrier.
    fn inside(&self) -> Result<(Vec<f64>, Vec<f64>), RadialError> {
        let demand = &self.demand;
        let start = self.potential.minimum_bohr();
        let low =
            self.survey.iter().find(|sample| sample.1 < demand.top_hartree).map_or(start, |sample| sample.0);
        let mut inward = Walk::new(start, false);
        let ground = Ground { potential: self.potential, demand, survey: &self.survey };
        inward.advance(ground, 0.0, low)?;
        let cut = Cut { whole: self.potential, to: self.barrier_bohr };
        let mut outward = Walk::new(start, true);
        outward.advance(Ground { potential: &cut, ..ground }, 0.0, self.barrier_bohr)?;
        let boundaries = inward.boundaries.iter().skip(1).rev().chain(&outward.boundaries).copied().collect();
        let values = inward.values.iter().rev().chain(&outward.values).copied().collect();
        Ok((boundaries, values))
    }

    /// End of the mesh for a level at `energy`: beyond its outer turning point and where the potential has fallen off.
    fn end(&self, energy: f64) -> f64 {
        let above = energy - self.limit;
        let k = (self.demand.two_mu * above).sqrt();
        let mut end = (3.0 * (self.demand.rotation_x.sqrt() / k)).max(1.5 * self.barrier_bohr);
        let residue = |r: f64| (self.potential.energy_hartree(r) - self.limit).abs();
        while residue(end) > FALLEN_OFF * above && k * end < LONGEST_PHASE {
            end *= 1.1;
        }
        end
    }

    /// The whole mesh with `end`, and the index of the interface on the barrier.
    fn chain(&self, inside: &(Vec<f64>, Vec<f64>), end: f64) -> Result<(Chain, usize), RadialError> {
        let cut = Cut { whole: self.potential, to: end };
        let mut beyond = Walk::new(self.barrier_bohr, true);
        beyond.advance(Ground { potential: &cut, demand: &self.demand, survey: &self.survey }, 0.0, end)?;
        let at = inside.0.len() - 1;
        let boundaries = inside.0.iter().chain(&beyond.boundaries[1..]).copied().collect();
        let values = inside.1.iter().chain(&beyond.values).copied().collect();
        Ok((Chain::new(self.demand.two_mu, boundaries, values, self.demand.degree)?, at))
    }

    /// ψ′/ψ of the outgoing wave at the end of the mesh.
    fn outer_slope(&self, energy: C, end: f64) -> C {
        // What the potential still is there is taken into the wavenumber.
        let k = ((energy - self.potential.energy_hartree(end)) * self.demand.two_mu).sqrt();
        k * outgoing_slope(self.nu, k * end)
    }
}

/// The potential counts as fallen off below this share of the level's energy above the limit,
const FALLEN_OFF: f64 = 1e-8;
/// or where the mesh would grow beyond this phase.
const LONGEST_PHASE: f64 = 600.0;

/// All quasi-bound levels of `potential` with the rotation of `request`: energies between the limit and the top of the
/// barrier, v ascending. Empty without rotation, without a barrier and for potentials that end in a wall.
///
/// Against the poles of `reference/resonances.json` (exterior complex scaling in extended precision) energies agree to
/// 1e-10 of the depth and widths to better than 1e-3.
///
/// # Errors
/// [`RadialError`]
pub fn quasi_bound(
    potential: &dyn Potential,
    request: &RadialRequest,
) -> Result<Vec<QuasiBound>, RadialError> {
    let mu = request.reduced_mass_me;
    if !(mu > 0.0 && mu.is_finite()) {
        return Err(RadialError::Mass { reduced_mass_me: mu });
    }
    let (two_mu, x) = (2.0 * mu, request.rotation_x);
    let limit = potential.limit_hartree();
    if x <= 0.0 || !limit.is_finite() || potential.range_bohr().1.is_finite() {
        return Ok(Vec::new());
    }
    let Some((barrier_bohr, barrier_hartree, bottom)) = barrier(potential, two_mu, x) else {
        return Ok(Vec::new());
    };
    let bound = solve::problem(potential, &RadialRequest { highest_v: None, ..*request }, 1.0)?
        .map_or(0, |p| p.count);
    let depth = barrier_hartree - bottom;
    let demand = MeshDemand {
        two_mu,
        rotation_x: x,
        top_hartree: barrier_hartree,
        bottom_hartree: bottom,
        phase: solve::phase_for(request.relative_accuracy),
        degree: DEGREE,
        potential_tolerance_hartree: POTENTIAL_SHARE * request.relative_accuracy.max(1e-12) * depth,
    };
    let nu = (0.25 + x).sqrt() - 0.5;
    let survey = survey(potential, two_mu, x)?;
    let setting = Setting { potential, demand, survey, limit, nu, barrier_bohr };
    let inside = setting.inside()?;
    let inner = Chain::new(two_mu, inside.0.clone(), inside.1.clone(), DEGREE)?;
    let mut factors = Factors::default();
    factors.factorise(&inner, barrier_hartree);
    let candidates = factors.below_free_end;
    let mut found = Vec::new();
    for v in bound..candidates {
        let bracket = bracket(&inner, &mut factors, v, (limit, barrier_hartree));
        if let Some(level) = level(&setting, &inside, v, bracket, barrier_hartree)? {
            found.push(level);
        }
    }
    Ok(found)
}

/// Level v lies above the level with a free end on the barrier and below the one with a wall there.
fn bracket(inner: &Chain, factors: &mut Factors, v: usize, (limit, top): (f64, f64)) -> (f64, f64) {
    let mut edge = |walled: bool| {
        let (mut low, mut high) = (limit, top);
        for _ in 0..50 {
            let middle = 0.5 * (low + high);
            factors.factorise(inner, middle);
            let below = if walled { factors.below } else { factors.below_free_end };
            if below > v { high = middle } else { low = middle }
        }
        0.5 * (low + high)
    };
    (edge(false), edge(true))
}

fn level(
    setting: &Setting,
    inside: &(Vec<f64>, Vec<f64>),
    v: usize,
    (low, high): (f64, f64),
    barrier_hartree: f64,
) -> Result<Option<QuasiBound>, RadialError> {
    let limit = setting.limit;
    let two_mu = setting.demand.two_mu;
    let width_of_bracket = high - low;
    let mut place = 0.5 * (low + high);
    let mut round = 0;
    let (chain, at, end, root) = loop {
        let end = setting.end(place);
        let (chain, at) = setting.chain(inside, end)?;
        let residual =
            |e: f64| pivot_at(&chain, two_mu, at, C::from(e), setting.outer_slope(C::from(e), end)).re;
        // Bisection on the sign: positive below the level, negative above it; at the walled level itself is a pole.
        let (mut a, mut b) =
            (low.max(limit + 1e-9 * (barrier_hartree - limit)), high - 1e-9 * width_of_bracket);
        if residual(b) > 0.0 {
            return Ok(None);
        }
        for _ in 0..60 {
            let middle = 0.5 * (a + b);
            if residual(middle) > 0.0 { a = middle } else { b = middle }
        }
        let root = 0.5 * (a + b);
        // The mesh must reach as far as the level found needs, not the one guessed.
        if round == 6 || root - limit >= 0.6 * (place - limit) {
            break (chain, at, end, root);
        }
        place = root;
        round += 1;
    };
    let pivot = |e: C| pivot_at(&chain, two_mu, at, e, setting.outer_slope(e, end));
    let h = 1e-4 * width_of_bracket.max(1e-9 * (barrier_hartree - limit));
    let mut energy = C::from(root);
    for _ in 0..40 {
        let slope = (pivot(energy + h) - pivot(energy - h)) / (2.0 * h);
        let step = pivot(energy) / slope;
        energy -= step;
        let settled = step.re.abs() <= 1e-14 * (barrier_hartree - limit);
        if settled && step.im.abs() <= 1e-9 * energy.im.abs() {
            break;
        }
    }
    if !(energy.re > limit && energy.im <= 0.0) {
        return Ok(None);
    }
    let width = -2.0 * energy.im;
    // Smooth on the scale of the bracket; wide levels need points as far apart as they are wide.
    let step = (1e-3 * width_of_bracket).max(0.3 * width).min(0.3 * (energy.re - limit));
    let first = chain.boundaries[0];
    let from = if first > 0.0 { first } else { chain.boundaries[1] };
    let search = Search {
        two_mu,
        rotation_x: setting.demand.rotation_x,
        nu: setting.nu,
        stations_bohr: [from, setting.barrier_bohr, end],
        energy: energy.re,
        step,
        limit,
    };
    Ok(Some(QuasiBound {
        v,
        energy_hartree: energy.re,
        width_hartree: width,
        by_phase_hartree: real_axis::pole(setting.potential, &search),
        barrier_hartree,
        barrier_bohr: setting.barrier_bohr,
    }))
}
