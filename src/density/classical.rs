//! The density of a classical particle: the share of a period that it spends near each bond length.

use super::Distribution;
use crate::potential::Potential;
use std::f64::consts::{FRAC_PI_2, PI};

/// Points between the turning points at which barriers above the energy are looked for.
const LOOK: usize = 200;
/// Panels over an allowed region, each with three Gauss points.
const PANELS: usize = 40;

/// The density proportional to 1/sqrt(E − V) wherever E > V, normalised.
///
/// Between two turning points a < b, with r = (a + b)/2 + (b − a)/2 sin θ, the integrand is smooth in θ: the
/// cumulated probability is exact to about 1e-8 and the singularities at the turning points do no harm.
/// Where barriers rise above the energy between the level's outermost turning points, every allowed region counts by
/// the time its own period lasts.
#[derive(Clone, Debug)]
pub struct ClassicalDensity<'a, P: Potential + ?Sized> {
    potential: &'a P,
    energy_hartree: f64,
    regions: Vec<Region>,
    total: f64,
}

/// An allowed region.
#[derive(Clone, Debug)]
struct Region {
    middle: f64,
    half: f64,
    /// ∫ dr/sqrt(E − V) up to the start of each panel, from the start of the first region; one more than panels.
    running: Vec<f64>,
    /// The integrand over each panel, times its width: c0 + c1 u + c2 u² through its Gauss values, u from −½ to ½.
    panels: Vec<[f64; 3]>,
}

impl<'a, P: Potential + ?Sized> ClassicalDensity<'a, P> {
    /// Of `energy_hartree` (on the potential's zero) between the outermost turning points; none where nothing is
    /// allowed.
    pub fn new(potential: &'a P, energy_hartree: f64, turning_points_bohr: (f64, f64)) -> Option<Self> {
        Self::with_barriers(potential, energy_hartree, turning_points_bohr, true)
    }

    /// The same; `barriers`: whether to look for barriers between the turning points, which is half of the work.
    pub fn with_barriers(
        potential: &'a P,
        energy_hartree: f64,
        (inner, outer): (f64, f64),
        barriers: bool,
    ) -> Option<Self> {
        let fine = inner.is_finite() && outer.is_finite() && outer > inner && energy_hartree.is_finite();
        if !fine {
            return None;
        }
        let kinetic = |r: f64| energy_hartree - potential.energy_hartree(r);
        let mut total = 0.0;
        let mut regions = Vec::new();
        let allowed = if barriers { allowed(&kinetic, inner, outer) } else { vec![(inner, outer)] };
        for (a, b) in allowed {
            let region = Region::new(&kinetic, (a, b), total);
            total = *region.running.last()?;
            regions.push(region);
        }
        (total > 0.0 && total.is_finite()).then_some(Self { potential, energy_hartree, regions, total })
    }
}

/// The intervals between `inner` and `outer` where `kinetic` is positive.
fn allowed(kinetic: &dyn Fn(f64) -> f64, inner: f64, outer: f64) -> Vec<(f64, f64)> {
    // Both ends are turning points or walls; only the points between them tell.
    let at = |i: usize| inner + (outer - inner) * i as f64 / LOOK as f64;
    let mut edges = vec![inner];
    let mut was = true;
    for i in 1..LOOK {
        let is = kinetic(at(i)) > 0.0;
        if i == 1 && !is {
            // Rounding of a turning point, or a level at the very bottom.
            was = false;
            edges.clear();
        } else if is != was {
            edges.push(edge(kinetic, at(i - 1), at(i)));
            was = is;
        }
    }
    if was {
        edges.push(outer);
    }
    edges.chunks_exact(2).map(|pair| (pair[0], pair[1])).filter(|(a, b)| b > a).collect()
}

fn edge(kinetic: &dyn Fn(f64) -> f64, mut a: f64, mut b: f64) -> f64 {
    let side = kinetic(a) > 0.0;
    loop {
        let middle = 0.5 * (a + b);
        if middle <= a || middle >= b {
            return middle;
        }
        if (kinetic(middle) > 0.0) == side { a = middle } else { b = middle }
    }
}

impl Region {
    fn new(kinetic: &dyn Fn(f64) -> f64, (a, b): (f64, f64), before: f64) -> Self {
        let (middle, half) = (0.5 * (a + b), 0.5 * (b - a));
        let integrand = |theta: f64| {
            let (sine, cosine) = theta.sin_cos();
            let energy = kinetic(middle + half * sine);
            if energy > 0.0 { half * cosine / energy.sqrt() } else { 0.0 }
        };
        let width = PI / PANELS as f64;
        let gauss = 0.5 * 0.6_f64.sqrt();
        let mut running = vec![before];
        let mut panels = Vec::with_capacity(PANELS);
        let mut sum = before;
        for panel in 0..PANELS {
            let centre = -FRAC_PI_2 + (panel as f64 + 0.5) * width;
            let [low, mid, high] = [-gauss, 0.0, gauss].map(|at| width * integrand(centre + at * width));
            sum += (5.0 * (low + high) + 8.0 * mid) / 18.0;
            running.push(sum);
            let bend = (low + high - 2.0 * mid) / (2.0 * gauss * gauss);
            panels.push([mid, (high - low) / (2.0 * gauss), bend]);
        }
        Self { middle, half, running, panels }
    }

    /// ∫ dr/sqrt(E − V) up to `r`.
    fn up_to(&self, r: f64) -> f64 {
        let theta = ((r - self.middle) / self.half).clamp(-1.0, 1.0).asin();
        let place = (theta + FRAC_PI_2) / PI * PANELS as f64;
        let panel = (place.max(0.0) as usize).min(PANELS - 1);
        let u = place - panel as f64 - 0.5;
        let [mid, slope, bend] = self.panels[panel];
        let rest = mid * (u + 0.5) + 0.5 * slope * (u * u - 0.25) + bend / 3.0 * (u * u * u + 0.125);
        self.running[panel] + rest
    }
}

impl<P: Potential + ?Sized> Distribution for ClassicalDensity<'_, P> {
    fn density_per_bohr(&self, r_bohr: f64) -> f64 {
        let inside = self.regions.iter().any(|g| (r_bohr - g.middle).abs() < g.half);
        let energy = if inside { self.energy_hartree - self.potential.energy_hartree(r_bohr) } else { 0.0 };
        if energy > 0.0 { 1.0 / (self.total * energy.sqrt()) } else { 0.0 }
    }

    fn below(&self, r_bohr: f64) -> f64 {
        let Some(region) = self.regions.iter().rfind(|g| g.middle - g.half <= r_bohr) else { return 0.0 };
        region.up_to(r_bohr) / self.total
    }

    fn support_bohr(&self) -> (f64, f64) {
        let (first, last) = (&self.regions[0], &self.regions[self.regions.len() - 1]);
        (first.middle - first.half, last.middle + last.half)
    }
}
