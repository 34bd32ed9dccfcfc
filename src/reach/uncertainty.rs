//! How well the ends of a reach are known: what other admissible curves and the noise of the energies make of them.

use super::Interval;
use crate::estimate::Estimate;
use crate::potential::Potential;
use crate::potential::curve::{CurveVariants, LocalDerivatives, ScanCurve, SeenCurve};

/// Ends nearer to the minimum than this share of r_e lie where the deviation is that of the leading order.
const NEAR_SHARE: f64 = 1e-3;

/// What decides about a displacement.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Criterion {
    /// Relative deviation of the energy.
    Energy,
    /// Relative deviation of the force.
    Force,
    /// Deviation of the energy in hartree.
    Absolute,
}

impl Criterion {
    /// The deviation at displacement x from V above its minimum, V′ and k there.
    fn deviation(self, x: f64, k: f64, (energy, slope): (f64, f64)) -> f64 {
        match self {
            Self::Energy => energy / (0.5 * k * x * x) - 1.0,
            Self::Force => slope / (k * x) - 1.0,
            Self::Absolute => energy - 0.5 * k * x * x,
        }
    }

    /// Its derivative by x.
    fn slope(self, x: f64, k: f64, [energy, slope, curvature]: [f64; 3]) -> f64 {
        match self {
            Self::Energy => (2.0 * slope - 4.0 * energy / x) / (k * x * x),
            Self::Force => (curvature - slope / x) / (k * x),
            Self::Absolute => slope - k * x,
        }
    }

    /// The leading-order end as a function of the derivatives at the minimum.
    pub(super) fn leading_order(self, tolerance: f64, local: &LocalDerivatives) -> Option<f64> {
        let third = local.third_hartree.abs();
        let length = match self {
            Self::Energy => 3.0 * tolerance * local.second_hartree / third,
            Self::Force => 2.0 * tolerance * local.second_hartree / third,
            Self::Absolute => (6.0 * tolerance / third).cbrt(),
        };
        length.is_finite().then_some(length)
    }
}

/// Fills in the errors of the ends of intervals on one curve.
///
/// To first order: another curve whose deviation at the end differs by δ has its own end δ/|d′| away, d′ the slope of
/// the deviation there. Half the spread over the other interpolations, the whole difference to the curve without
/// doubtful points, and the noise in quadrature, as for every other quantity of the curve.
pub(super) fn fill(curve: &ScanCurve, intervals: &mut [(Criterion, f64, &mut Interval)]) {
    let ends: Vec<f64> =
        intervals.iter().flat_map(|(_, _, i)| [i.x_minus_bohr, i.x_plus_bohr]).flatten().collect();
    let variants = curve.variants_at(&ends);
    let mut next = 0;
    for (criterion, tolerance, interval) in intervals.iter_mut() {
        let leading = curve.estimate(|local| criterion.leading_order(*tolerance, local));
        interval.leading_order_error = leading.and_then(|e| e.std_error.zip(e.source));
        for outer in [false, true] {
            let Some(x) = (if outer { interval.x_plus_bohr } else { interval.x_minus_bohr }) else {
                continue;
            };
            let index = next;
            next += 1;
            let estimate = if x.abs() < NEAR_SHARE * curve.local.r_e_bohr {
                leading.map(|e| Estimate { value: x, ..e })
            } else {
                Some(end(curve, *criterion, x, &variants, index))
            };
            let error = estimate.and_then(|e| e.std_error.zip(e.source));
            if outer {
                interval.x_plus_error = error;
            } else {
                interval.x_minus_error = error;
            }
        }
    }
}

fn end(curve: &ScanCurve, criterion: Criterion, x: f64, variants: &CurveVariants, index: usize) -> Estimate {
    let k = curve.local.second_hartree;
    let d = curve.above_minimum().derivatives_hartree(curve.local.r_e_bohr + x);
    let own = criterion.deviation(x, k, (d[0], d[1]));
    let slope = criterion.slope(x, k, [d[0], d[1], d[2]]);
    let shift = |seen: &SeenCurve| {
        let other = criterion.deviation(x, seen.second_hartree, seen.at.get(index).copied().flatten()?);
        Some((own - other) / slope).filter(|s| s.is_finite())
    };
    let (mut low, mut high, mut known) = (0.0_f64, 0.0_f64, false);
    for shift in variants.others.iter().filter_map(shift) {
        (low, high, known) = (low.min(shift), high.max(shift), true);
    }
    let spread = known.then_some(0.5 * (high - low));
    let doubt = variants.without_doubtful.as_ref().and_then(shift);
    let interpolation = match (spread, doubt) {
        (None, None) => None,
        (spread, doubt) => Some(spread.unwrap_or(0.0).hypot(doubt.unwrap_or(0.0))),
    };
    let noise = (!variants.noise.is_empty())
        .then(|| variants.noise.iter().filter_map(shift).map(|s| s * s).sum::<f64>().sqrt());
    Estimate::from_spread_and_noise(x, interpolation, noise)
}
