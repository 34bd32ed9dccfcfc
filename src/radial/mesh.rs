//! Element boundaries from the local de Broglie wavelength.
//!
//! Walking away from the minimum, an element covers a fixed phase ∫ q dr. The local wavenumber q is the
//! largest over a ladder of energies up to the highest one searched, each weighted down by how far its
//! wavefunction has decayed there; near turning points q is floored by the Airy scale (2μ|V′|)^(1/3).

use super::RadialError;
use crate::potential::Potential;

/// Decay exponent ∫κ dr after which a wavefunction is zero to working precision (e⁻²⁰ = 2e-9, squared in
/// every energy and probability).
pub(super) const FULL_DECAY: f64 = 20.0;
/// No mesh grows beyond this many elements.
const MOST_ELEMENTS: usize = 4000;
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
}

impl MeshDemand {
    fn energy(&self, share: f64) -> f64 {
        self.top_hartree - share * (self.top_hartree - self.bottom_hartree)
    }
}

/// Effective potential and its slope.
fn value_and_slope(
    potential: &dyn Potential,
    demand: &MeshDemand,
    r: f64,
) -> Result<(f64, f64), RadialError> {
    let [v, slope, ..] = potential.derivatives_hartree(r);
    let centrifugal =
        if demand.rotation_x == 0.0 { 0.0 } else { demand.rotation_x / (demand.two_mu * r * r) };
    let (v, slope) = (v + centrifugal, slope - 2.0 * centrifugal / r);
    if v.is_nan() || v == f64::NEG_INFINITY {
        return Err(RadialError::NotFinite { r_bohr: r });
    }
    Ok((v, if slope.is_finite() { slope } else { 0.0 }))
}

/// One direction of the walk; can be continued later to larger distances.
#[derive(Clone, Debug)]
pub(super) struct Walk {
    /// Boundaries in the order walked.
    pub boundaries: Vec<f64>,
    outward: bool,
    decay: [f64; LADDER.len()],
    /// Whether the end of the range (a wall) has been reached.
    pub at_end: bool,
}

impl Walk {
    /// Starts at `from_bohr`.
    pub fn new(from_bohr: f64, outward: bool) -> Self {
        Self { boundaries: vec![from_bohr], outward, decay: [0.0; LADDER.len()], at_end: false }
    }

    /// Where the walk has arrived.
    pub fn end(&self) -> f64 {
        self.boundaries[self.boundaries.len() - 1]
    }

    /// Walks until the wavefunction at the ladder energy at or below `share` has decayed and `at_least_bohr`
    /// has been passed, or the range ends.
    pub fn advance(
        &mut self,
        potential: &dyn Potential,
        demand: &MeshDemand,
        share: f64,
        at_least_bohr: f64,
        breaks: &[f64],
    ) -> Result<(), RadialError> {
        let stop = LADDER.iter().position(|&rung| rung >= share).unwrap_or(LADDER.len() - 1);
        let range = potential.range_bohr();
        let wall = if self.outward { range.1 } else { range.0 };
        let sign = if self.outward { 1.0 } else { -1.0 };
        let singular_at_zero = range.0 >= 0.0;
        while !self.at_end && self.boundaries.len() < MOST_ELEMENTS {
            let r = self.end();
            let passed = (r - at_least_bohr) * sign >= 0.0;
            if passed && self.decay[stop] >= FULL_DECAY {
                break;
            }
            let (v, slope) = value_and_slope(potential, demand, r)?;
            let here = self.rate(demand, v, slope);
            let longest =
                if singular_at_zero { if self.outward { 0.6 * r } else { 0.35 * r } } else { f64::INFINITY };
            let to_wall = (wall - r) * sign;
            let mut length = (demand.phase / here).min(longest);
            if !length.is_finite() {
                // A free particle at rest in a range without bound.
                length = r.abs().max(1.0);
            }
            let mut ends = (v, slope);
            let mut middle = (v, slope);
            for _ in 0..4 {
                length = length.min(to_wall);
                middle = value_and_slope(potential, demand, r + 0.5 * sign * length)?;
                ends = value_and_slope(potential, demand, r + sign * length)?;
                let phase = length / 6.0
                    * (here
                        + 4.0 * self.rate(demand, middle.0, middle.1)
                        + self.rate(demand, ends.0, ends.1));
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
            if length >= to_wall {
                length = to_wall;
                self.at_end = true;
            } else if length > 0.7 * to_wall {
                length = 0.5 * to_wall;
            }
            let mut next = if self.at_end { wall } else { r + sign * length };
            if let Some(at) = first_break(breaks, r, next, 1e-3 * length) {
                next = at;
                self.at_end = false;
            }
            if next == r {
                break;
            }
            self.decay_over(demand, (next - r).abs(), [v, middle.0, ends.0]);
            self.boundaries.push(next);
        }
        Ok(())
    }

    /// Largest weighted wavenumber of the ladder.
    fn rate(&self, demand: &MeshDemand, v: f64, slope: f64) -> f64 {
        if v == f64::INFINITY {
            return f64::INFINITY;
        }
        let airy = (demand.two_mu * slope.abs()).cbrt();
        let airy = 0.5 * airy * airy;
        LADDER
            .iter()
            .zip(&self.decay)
            .map(|(&rung, &decay)| {
                let q = (demand.two_mu * (demand.energy(rung) - v).abs() + airy).sqrt();
                q * (-decay / demand.degree as f64).exp()
            })
            .fold(0.0, f64::max)
    }

    fn decay_over(&mut self, demand: &MeshDemand, length: f64, v: [f64; 3]) {
        for (&rung, decay) in LADDER.iter().zip(&mut self.decay) {
            let energy = demand.energy(rung);
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

/// The first break strictly between `from` and `to`, seen from `from`.
fn first_break(breaks: &[f64], from: f64, to: f64, margin: f64) -> Option<f64> {
    if to > from {
        let next = breaks.partition_point(|&b| b <= from + margin);
        breaks.get(next).copied().filter(|&b| b < to)
    } else {
        let next = breaks.partition_point(|&b| b < from - margin);
        next.checked_sub(1).map(|i| breaks[i]).filter(|&b| b > to)
    }
}

/// Bond lengths where the potential is looked at before the mesh is laid, to find further wells:
/// joints of the function and points in geometric (or even) spacing to both ends.
pub(super) fn survey_points(potential: &dyn Potential) -> Vec<f64> {
    let (from, to) = potential.range_bohr();
    let minimum = potential.minimum_bohr();
    let span = minimum.abs().max(1.0);
    let mut points: Vec<f64> =
        potential.breakpoints_bohr().iter().copied().filter(|r| *r > from && *r < to).collect();
    let far = if to.is_finite() { to } else { minimum + 8.0 * span };
    let near = if from.is_finite() { from } else { minimum - 8.0 * span };
    for i in 0..32 {
        let t = (f64::from(i) + 0.5) / 32.0;
        points.push(minimum + t * (far - minimum));
        points.push(minimum + t * (near - minimum));
    }
    points.push(minimum);
    points.sort_by(f64::total_cmp);
    points
}
