//! Element boundaries from the local de Broglie wavelength.
//!
//! Walking away from the minimum, an element covers a fixed phase ∫ q dr. The local wavenumber q is the
//! largest over a ladder of energies up to the highest one searched, each weighted down by how far its
//! wavefunction has decayed there; near turning points q is floored by the Airy scale (2μ|V′|)^(1/3).

use super::RadialError;
use super::chain::node;
use super::reference_element::ReferenceElement;
use crate::potential::Potential;

/// Decay exponent ∫κ dr after which a wavefunction is zero to working precision (e⁻²⁰ = 2e-9, squared in
/// every energy and probability).
pub(super) const FULL_DECAY: f64 = 20.0;
/// No mesh grows beyond this many elements.
const MOST_ELEMENTS: usize = 4000;
/// Cuts of one element before its polynomial is taken as good enough.
const MOST_CUTS: usize = 24;
/// Points of the survey on either side of the minimum.
const SURVEY: u16 = 48;
/// Energies of the ladder: share of the searched depth below its top.
const LADDER: [f64; 14] = [0.0, 1e-9, 1e-8, 1e-7, 1e-6, 1e-5, 1e-4, 1e-3, 1e-2, 0.05, 0.15, 0.35, 0.65, 0.95];

/// What the mesh must serve.
#[derive(Clone, Copy, Debug)]
pub(super) struct MeshDemand {
    /// Twice the reduced mass.
    pub two_mu: f64,
    /// X of the centrifugal term.
    pub rotation_x: f64,
    /// Highest energy searched, in hartree.
    pub top_hartree: f64,
    /// Energy of the effective minimum, in hartree.
    pub bottom_hartree: f64,
    /// Phase of one element.
    pub phase: f64,
    /// Polynomial degree.
    pub degree: usize,
    /// Size allowed to the two highest Legendre coefficients of the potential in an element.
    pub potential_tolerance_hartree: f64,
}

impl MeshDemand {
    /// The energies of the ladder.
    fn energies(&self) -> [f64; LADDER.len()] {
        LADDER.map(|share| self.top_hartree - share * (self.top_hartree - self.bottom_hartree))
    }
}

/// The ladder as one element meets it.
struct Rungs {
    two_mu: f64,
    energies: [f64; LADDER.len()],
    /// Squares of the weights of the wavenumbers.
    weights2: [f64; LADDER.len()],
}

impl Rungs {
    /// Largest weighted wavenumber of the ladder.
    fn rate(&self, v: f64, slope: f64) -> f64 {
        if v == f64::INFINITY {
            return f64::INFINITY;
        }
        let airy = (self.two_mu * slope.abs()).cbrt();
        let airy = 0.5 * airy * airy;
        let mut largest = 0.0_f64;
        for (energy, weight2) in self.energies.iter().zip(&self.weights2) {
            largest = largest.max((self.two_mu * (energy - v).abs() + airy) * weight2);
        }
        largest.sqrt()
    }
}

/// One direction of the walk; can be continued later to larger distances.
#[derive(Clone, Debug)]
pub(super) struct Walk {
    /// Boundaries in the order walked.
    pub boundaries: Vec<f64>,
    /// Effective potential at the nodes of each element, elements and nodes in the order walked.
    pub values: Vec<f64>,
    outward: bool,
    decay: [f64; LADDER.len()],
    /// Whether the end of the range (a wall) has been reached.
    pub at_end: bool,
}

/// What a walk looks at.
#[derive(Clone, Copy)]
pub(super) struct Ground<'a> {
    pub potential: &'a dyn Potential,
    pub demand: &'a MeshDemand,
    /// (r, V) samples, ascending.
    pub survey: &'a [(f64, f64)],
}

impl Ground<'_> {
    fn value(&self, r: f64) -> Result<f64, RadialError> {
        let v = effective(self.potential, self.demand.two_mu, self.demand.rotation_x, r);
        if v.is_nan() || v == f64::NEG_INFINITY { Err(RadialError::NotFinite { r_bohr: r }) } else { Ok(v) }
    }
}

impl Walk {
    /// Starts at `from_bohr`.
    pub fn new(from_bohr: f64, outward: bool) -> Self {
        Self {
            boundaries: vec![from_bohr],
            values: Vec::new(),
            outward,
            decay: [0.0; LADDER.len()],
            at_end: false,
        }
    }

    /// Where the walk has arrived.
    pub fn end(&self) -> f64 {
        self.boundaries[self.boundaries.len() - 1]
    }

    fn sign(&self) -> f64 {
        if self.outward { 1.0 } else { -1.0 }
    }

    /// Walks until the wavefunction at the ladder energy at or below `share` has decayed and `at_least_bohr`
    /// has been passed, or the range ends.
    pub fn advance(&mut self, ground: Ground, share: f64, at_least_bohr: f64) -> Result<(), RadialError> {
        let stop = LADDER.iter().position(|&rung| rung >= share).unwrap_or(LADDER.len() - 1);
        let (from, to) = ground.potential.range_bohr();
        let wall = if self.outward { to } else { from };
        let sign = self.sign();
        let reference = ReferenceElement::of_degree(ground.demand.degree);
        let mut values = vec![0.0; reference.degree + 1];
        while !self.at_end {
            let r = self.end();
            if (r - at_least_bohr) * sign >= 0.0 && self.decay[stop] >= FULL_DECAY {
                break;
            }
            if self.boundaries.len() >= MOST_ELEMENTS {
                return Err(RadialError::Mesh { r_bohr: r });
            }
            values[0] = match self.values.last() {
                Some(&value) => value,
                None => ground.value(r)?,
            };
            let (mut length, middle) = self.length_by_phase(ground, values[0], wall)?;
            let to_wall = (wall - r) * sign;
            // Close to r = 0 one element takes the rest, where the wavefunction is a power of r.
            if length >= to_wall || (!self.outward && to_wall < 0.12 * self.boundaries[0]) {
                length = to_wall;
            } else if length > 0.7 * to_wall {
                length = 0.5 * to_wall;
            }
            let next = self.fit_to_potential(ground, reference, r + sign * length, wall, &mut values)?;
            if next == r {
                if (r - at_least_bohr) * sign < 0.0 {
                    return Err(RadialError::Mesh { r_bohr: r });
                }
                break;
            }
            self.at_end = next == wall;
            let ends = values[reference.degree];
            self.decay_over(
                ground.demand,
                (next - r).abs(),
                [values[0], middle.min(ends.max(values[0])), ends],
            );
            self.boundaries.push(next);
            self.values.extend_from_slice(&values);
        }
        Ok(())
    }

    /// Length whose phase is the one demanded, and V at its middle.
    fn length_by_phase(&self, ground: Ground, v: f64, wall: f64) -> Result<(f64, f64), RadialError> {
        let (demand, r, sign) = (ground.demand, self.end(), self.sign());
        let singular_at_zero = ground.potential.range_bohr().0 >= 0.0;
        let longest = match (singular_at_zero, self.outward) {
            (true, true) => 0.6 * r,
            (true, false) => 0.35 * r,
            (false, _) => f64::INFINITY,
        };
        let to_wall = (wall - r) * sign;
        let rungs = self.rungs(demand);
        let mut length = (demand.phase / rungs.rate(v, 0.0)).min(longest);
        if !length.is_finite() {
            // A free particle at rest in a range without bound.
            length = r.abs().max(1.0);
        }
        // No element steps over something the survey has seen.
        for &(at, seen) in survey_inside(ground.survey, r, r + sign * length) {
            length = length.min((at - r).abs() + demand.phase / rungs.rate(seen, 0.0));
        }
        let mut middle = v;
        for _ in 0..4 {
            length = length.min(to_wall);
            middle = ground.value(r + 0.5 * sign * length)?;
            let end = ground.value(r + sign * length)?;
            let slope = (end - v) / length;
            let phase = length / 6.0
                * (rungs.rate(v, slope) + 4.0 * rungs.rate(middle, slope) + rungs.rate(end, slope));
            if !phase.is_finite() {
                // An infinite wall inside the element: closer.
                length *= 0.5;
                continue;
            }
            let better = (length * (demand.phase / phase).clamp(0.3, 1.5)).min(longest);
            if (better - length).abs() <= 0.08 * length || (better > length && length == to_wall) {
                break;
            }
            length = better;
        }
        Ok((length, middle))
    }

    /// Shortens the element that would end at `next` until its polynomial follows the potential, at joints of the
    /// potential where there are any inside, else by halves; leaves V at the nodes in `values`.
    fn fit_to_potential(
        &self,
        ground: Ground,
        reference: &ReferenceElement,
        mut next: f64,
        wall: f64,
        values: &mut [f64],
    ) -> Result<f64, RadialError> {
        let (demand, r) = (ground.demand, self.end());
        let p = reference.degree;
        // Where the highest level has decayed, less will do.
        let tolerance = demand.potential_tolerance_hartree * (2.0 * self.decay[0].min(300.0)).exp();
        for round in 0..MOST_CUTS {
            let half = 0.5 * (next - r).abs();
            for i in 1..=p {
                let at = match (i == p, self.outward) {
                    (true, _) => next,
                    (_, true) => node(r, half, reference.nodes[i]),
                    // Seen from the other end the nodes are mirrored.
                    (_, false) => r - half * (1.0 + reference.nodes[i]),
                };
                values[i] = if i == p && next == wall {
                    // ψ = 0 there: an infinite value does no harm.
                    let v = effective(ground.potential, demand.two_mu, demand.rotation_x, at);
                    if v.is_finite() { v } else { values[p - 1] }
                } else {
                    ground.value(at)?
                };
            }
            let [odd, even] = &reference.highest;
            let coefficient = |row: &[f64]| row.iter().zip(&*values).map(|(a, b)| a * b).sum::<f64>().abs();
            let unresolved = coefficient(odd) + coefficient(even);
            if unresolved <= tolerance || round + 1 == MOST_CUTS {
                break;
            }
            next = match last_break(ground.potential.breakpoints_bohr(), r, next) {
                Some(at) => at,
                None => 0.5 * (r + next),
            };
        }
        match values.iter().position(|v| !v.is_finite()) {
            Some(_) => Err(RadialError::NotFinite { r_bohr: next }),
            None => Ok(next),
        }
    }

    /// The ladder with its weights where the walk has arrived.
    fn rungs(&self, demand: &MeshDemand) -> Rungs {
        let weight2 =
            |decay: f64| if decay == 0.0 { 1.0 } else { (-decay / (0.75 * demand.degree as f64)).exp() };
        Rungs { two_mu: demand.two_mu, energies: demand.energies(), weights2: self.decay.map(weight2) }
    }

    fn decay_over(&mut self, demand: &MeshDemand, length: f64, v: [f64; 3]) {
        for (energy, decay) in demand.energies().into_iter().zip(&mut self.decay) {
            let kappa = v.map(|v| (demand.two_mu * (v - energy)).max(0.0).sqrt());
            let added = length / 6.0 * (kappa[0] + 4.0 * kappa[1] + kappa[2]);
            if kappa[2] == 0.0 {
                *decay = 0.0;
            } else if added.is_finite() {
                *decay += added;
            } else {
                *decay = FULL_DECAY;
            }
        }
    }
}

/// Samples of the survey strictly between two bond lengths.
fn survey_inside(survey: &[(f64, f64)], a: f64, b: f64) -> &[(f64, f64)] {
    let first = survey.partition_point(|s| s.0 <= a.min(b));
    let last = survey.partition_point(|s| s.0 < a.max(b));
    &survey[first..last.max(first)]
}

/// The break farthest from `from` and strictly before `to`.
fn last_break(breaks: &[f64], from: f64, to: f64) -> Option<f64> {
    let margin = 1e-6 * (to - from).abs();
    if to > from {
        let inside = breaks.partition_point(|&b| b < to - margin);
        inside.checked_sub(1).map(|i| breaks[i]).filter(|&b| b > from + margin)
    } else {
        let inside = breaks.partition_point(|&b| b <= to + margin);
        breaks.get(inside).copied().filter(|&b| b < from - margin)
    }
}

/// (r, effective V) at bond lengths where the potential is looked at before the mesh is laid, ascending, to find the
/// lowest point and further wells: joints of the function and points in even spacing to both ends.
///
/// # Errors
/// [`RadialError::NotFinite`] where V is NaN.
pub(super) fn survey(
    potential: &dyn Potential,
    two_mu: f64,
    rotation_x: f64,
) -> Result<Vec<(f64, f64)>, RadialError> {
    let (from, to) = potential.range_bohr();
    let minimum = potential.minimum_bohr();
    let span = minimum.abs().max(1.0);
    let mut points: Vec<f64> =
        potential.breakpoints_bohr().iter().copied().filter(|r| *r > from && *r < to).collect();
    let far = if to.is_finite() { to } else { minimum + 8.0 * span };
    let near = if from.is_finite() { from } else { minimum - 8.0 * span };
    for i in 0..SURVEY {
        let t = (f64::from(i) + 0.5) / f64::from(SURVEY);
        // Denser towards the minimum: t² outward, where there may be far to go.
        points.push(minimum + t * t * (far - minimum));
        points.push(minimum + t * (near - minimum));
    }
    points.push(minimum);
    points.sort_by(f64::total_cmp);
    points.dedup();
    points
        .into_iter()
        .map(|r| {
            let v = effective(potential, two_mu, rotation_x, r);
            if v.is_nan() { Err(RadialError::NotFinite { r_bohr: r }) } else { Ok((r, v)) }
        })
        .collect()
}

/// Effective potential V + X/(2μr²) in hartree.
pub(super) fn effective(potential: &dyn Potential, two_mu: f64, x: f64, r: f64) -> f64 {
    let v = potential.energy_hartree(r);
    if x == 0.0 { v } else { v + x / (two_mu * r * r) }
}
