//! What else the points allow: the curve at given displacements by every other admissible interpolation, and after
//! each energy was changed by the noise. The spread of anything read off there is its error.

use super::{LocalDerivatives, ScanCurve};
use crate::potential::interpolant::Interpolant;

/// Points to either side of the minimum whose noise is followed: the influence of a point on a quintic spline falls by
/// more than half a knot.
const NOISE_POINTS: usize = 25;
/// Newton steps to the minimum of a curve that is hardly different.
const NEWTON_STEPS: usize = 4;

/// An admissible curve seen from its own minimum, in atomic units.
#[derive(Clone, Debug, PartialEq)]
pub struct SeenCurve {
    /// V″ at its minimum.
    pub second_hartree: f64,
    /// V above its minimum and V′ at each displacement asked for; none where it is not defined.
    pub at: Vec<Option<(f64, f64)>>,
}

/// The admissible curves at the displacements asked for.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct CurveVariants {
    /// By the other interpolations.
    pub others: Vec<SeenCurve>,
    /// Without points that were found off the curve.
    pub without_doubtful: Option<SeenCurve>,
    /// With one energy after the other raised by the noise; empty where no noise is known.
    pub noise: Vec<SeenCurve>,
}

impl ScanCurve {
    /// Every admissible curve at these displacements (bohr) from its own minimum.
    pub fn variants_at(&self, displacements_bohr: &[f64]) -> CurveVariants {
        let (first, last) = self.scan_range_bohr;
        let body = &self.body;
        let seen = |minimum: &LocalDerivatives, range: (f64, f64), d: &dyn Fn(f64) -> [f64; 5]| {
            let r_of = |x: &f64| minimum.r_e_bohr + x;
            let value = |x: &f64| {
                let r = r_of(x);
                let d = (r >= range.0 && r <= range.1).then(|| d(r))?;
                Some((d[0] - minimum.v_e_hartree, d[1])).filter(|(e, s)| e.is_finite() && s.is_finite())
            };
            SeenCurve {
                second_hartree: minimum.second_hartree,
                at: displacements_bohr.iter().map(value).collect(),
            }
        };
        let mut others = Vec::new();
        if let Some(minimum) = &body.other_minimum {
            others.push(seen(minimum, (first, last), &|r| body.other.derivatives(r)));
        }
        for polynomial in body.polynomials.iter() {
            let minimum = polynomial.minimum();
            let half = polynomial.half_width_bohr();
            let range = (minimum.r_e_bohr - half, minimum.r_e_bohr + half);
            let inside = |r: f64| polynomial.above_minimum(r).is_some();
            let derivatives = |r: f64| if inside(r) { polynomial.derivatives(r) } else { [f64::NAN; 5] };
            others.push(seen(&minimum, range, &derivatives));
        }
        let without_doubtful = self.without_doubtful.as_ref().map(|w| {
            let minimum = LocalDerivatives { v_e_hartree: w.v_e, ..w.local };
            seen(&minimum, w.range, &|r| w.interpolant.derivatives(r))
        });
        let noise = self.noise_curves(displacements_bohr);
        let noise = noise
            .iter()
            .map(|(minimum, curve)| seen(minimum, (first, last), &|r| curve.derivatives(r)))
            .collect();
        CurveVariants { others, without_doubtful, noise }
    }

    /// The interpolant once more for each point near the minimum with its energy raised by the noise.
    fn noise_curves(&self, displacements_bohr: &[f64]) -> Vec<(LocalDerivatives, Interpolant)> {
        let Some(noise) = self.noise_hartree else { return Vec::new() };
        let (r, interpolant, r_e) = (&self.points_bohr, &self.body.interpolant, self.local.r_e_bohr);
        let energies: Vec<f64> = r.iter().map(|&r| interpolant.energy(r)).collect();
        let nearest = r.partition_point(|&r| r < r_e);
        let (from, to) = (nearest.saturating_sub(NOISE_POINTS), r.len().min(nearest + NOISE_POINTS));
        // One point interval of room around all that is asked for.
        let ends = displacements_bohr.iter().map(|x| r_e + x).chain([r_e]);
        let (low, high) = ends.fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), r| (l.min(r), h.max(r)));
        let before = r.partition_point(|&p| p < low).saturating_sub(2);
        let after = (r.partition_point(|&p| p < high) + 1).min(r.len() - 1);
        let recipe = interpolant.recipe();
        let factors = recipe.factors(r);
        let mut changed = energies.clone();
        let variant = |i: usize| {
            changed[i] = energies[i] + noise;
            let curve = recipe.solve_between(&factors, (r, &changed), (r[before], r[after]));
            changed[i] = energies[i];
            let mut minimum = r_e;
            for _ in 0..NEWTON_STEPS {
                let d = curve.derivatives(minimum);
                minimum -= d[1] / d[2];
            }
            let found = LocalDerivatives::new(minimum, curve.derivatives(minimum));
            let fine = found.second_hartree > 0.0 && (r[before]..=r[after]).contains(&minimum);
            fine.then_some((found, curve))
        };
        (from..to).filter_map(variant).collect()
    }
}
