//! Reach of a fitted function against the scan's curve.

use super::interval::{STEPS, bisect, ended};
use super::{EndedBy, Interval};
use crate::estimate::ErrorSource;
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;

/// Where a fit stands for the curve.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FitReach {
    /// Relative tolerance τ.
    pub tolerance: f64,
    /// Absolute tolerance in hartree.
    pub absolute_hartree: f64,
    /// Displacements from the curve's r_e; none where the fit is off by more than the tolerance at r_e itself.
    pub interval: Option<Interval>,
}

/// The connected interval around r_e in which |V_fit − V| ≤ max(τ (V − V_e), absolute tolerance).
///
/// Total energies are compared, so that a fit whose minimum lies too high or too low pays for it. `band_hartree`: the
/// standard error of the fitted energy at a bond length, from which those of the ends follow to first order.
pub fn fit_reach(
    curve: &ScanCurve,
    fit: &dyn Potential,
    (tolerance, absolute_hartree): (f64, f64),
    band_hartree: &dyn Fn(f64) -> Option<(f64, ErrorSource)>,
) -> FitReach {
    let r_e = curve.local.r_e_bohr;
    // Both on the scan's own zero: the curve's energies above V_e, the fit's from the same V_e.
    let above = curve.above_minimum();
    let zero = curve.v_e_hartree.value;
    let excess = |x: f64| {
        let energy = above.energy_hartree(r_e + x);
        let off = (fit.energy_hartree(r_e + x) - zero - energy).abs();
        off - (tolerance * energy).max(absolute_hartree)
    };
    let (from, to) = super::interval::range_bohr(curve);
    let side = |end: f64, sign: f64| {
        let length = (end - r_e).abs();
        let mut inside = 0.0;
        for i in 1..=STEPS {
            let outside = length * f64::from(i) / f64::from(STEPS);
            // A fit that is no number there does not stand for the curve.
            if !matches!(excess(sign * outside), e if e <= 0.0) {
                let crossing = bisect(|x| !matches!(excess(sign * x), e if e <= 0.0), inside, outside);
                return Some(sign * crossing);
            }
            inside = outside;
        }
        None
    };
    let interval = (excess(0.0) <= 0.0).then(|| {
        let (x_minus, x_plus) = (side(from, -1.0), side(to, 1.0));
        let (by_minus, by_plus) = ended(curve, x_minus, x_plus);
        let mut interval = Interval::new(x_minus, x_plus, None, (by_minus, by_plus));
        interval.energies_hartree = [x_minus, x_plus].map(|x| x.map(|x| above.energy_hartree(r_e + x)));
        let error = |x: Option<f64>| {
            let x = x?;
            let (band, source) = band_hartree(r_e + x)?;
            let h = 1e-5 * r_e;
            let slope = (excess(x + h) - excess(x - h)) / (2.0 * h);
            Some((band / slope.abs(), source)).filter(|e| e.0.is_finite())
        };
        (interval.x_minus_error, interval.x_plus_error) = (error(x_minus), error(x_plus));
        interval
    });
    FitReach { tolerance, absolute_hartree, interval }
}

impl FitReach {
    /// Whether the fit stands for the curve over the whole scan.
    pub fn whole_scan(&self) -> bool {
        self.interval.is_some_and(|i| {
            i.x_minus_bohr.is_none() && i.x_plus_bohr.is_none() && i.ended_by_plus != EndedBy::Barrier
        })
    }
}
