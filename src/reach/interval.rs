//! Reach by energy and by force: the connected interval around the minimum within the tolerance.

use super::uncertainty::Criterion;
use super::{EndedBy, Interval, ReachSettings};
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;

/// Displacements below this share of r_e take the deviation from its series, not by subtraction.
const SERIES_SHARE: f64 = 1e-3;
/// Steps over a whole side of the scan when the crossing is looked for.
pub(super) const STEPS: u32 = 1000;

/// Energy and force reach of a scan's curve: only within the scanned points (and the well, where the
/// curve turns over). None when V″(r_e) is not positive.
pub fn energy_and_force_reach(curve: &ScanCurve, settings: &ReachSettings) -> Option<(Interval, Interval)> {
    let (mut energy, mut force) =
        energy_and_force_reach_of(&curve.above_minimum(), range_bohr(curve), settings.tolerance)?;
    for interval in [&mut energy, &mut force] {
        (interval.ended_by_minus, interval.ended_by_plus) =
            ended(curve, interval.x_minus_bohr, interval.x_plus_bohr);
    }
    Some((energy, force))
}

/// Reach of a scan's curve by an absolute tolerance, |V − V_e − H| ≤ `tolerance_hartree`; otherwise as
/// [`energy_and_force_reach`]. The leading order is (6 E/|V‴|)^(1/3).
pub fn absolute_reach(curve: &ScanCurve, tolerance_hartree: f64) -> Option<Interval> {
    let above = curve.above_minimum();
    let local = &curve.local;
    let (r_e, k) = (local.r_e_bohr, local.second_hartree);
    if !(k > 0.0 && k.is_finite()) {
        return None;
    }
    let off = |x: f64| above.energy_hartree(r_e + x) - 0.5 * k * x * x;
    let (from, to) = range_bohr(curve);
    let leading = Criterion::Absolute.leading_order(tolerance_hartree, local);
    let mut found = interval(off, (from - r_e, to - r_e), tolerance_hartree, leading);
    (found.ended_by_minus, found.ended_by_plus) = ended(curve, found.x_minus_bohr, found.x_plus_bohr);
    Some(found)
}

/// Where a curve is looked at: within the scanned points and the well.
pub(super) fn range_bohr(curve: &ScanCurve) -> (f64, f64) {
    let (from, to) = curve.range_bohr();
    let (first, last) = curve.scan_range_bohr;
    (from.max(first), to.min(last))
}

/// What ends an interval at either side.
pub(super) fn ended(curve: &ScanCurve, minus: Option<f64>, plus: Option<f64>) -> (EndedBy, EndedBy) {
    let (from, to) = curve.range_bohr();
    let (first, last) = curve.scan_range_bohr;
    let by = |x: Option<f64>, barrier: bool| match (x, barrier) {
        (Some(_), _) => EndedBy::Tolerance,
        (None, true) => EndedBy::Barrier,
        (None, false) => EndedBy::Scan,
    };
    (by(minus, from > first), by(plus, to < last))
}

/// Energy and force reach of any potential over a range of bond lengths (bohr).
///
/// Energy: |V − V_e − H| ≤ τ H with H = k x²/2; force: |V′ − k x| ≤ τ |k x|, k = V″(r_e). The first crossing on
/// either side ends the interval; it is found by marching and then bisected to rounding, so that its
/// relative error is about ε V/(τ H). Close to x = 0 the relative deviation is taken from its series,
/// V‴x/(3k) + V⁗x²/(12k) and V‴x/(2k) + V⁗x²/(6k). None when k is not positive.
pub fn energy_and_force_reach_of(
    potential: &dyn Potential,
    range_bohr: (f64, f64),
    tolerance: f64,
) -> Option<(Interval, Interval)> {
    let r_e = potential.minimum_bohr();
    let [v_e, _, k, third, fourth] = potential.derivatives_hartree(r_e);
    if !(k > 0.0 && k.is_finite()) {
        return None;
    }
    let fourth = if fourth.is_finite() { fourth } else { 0.0 };
    let near = SERIES_SHARE * r_e;
    let by_energy = |x: f64| {
        if x.abs() < near {
            x * (third / (3.0 * k) + x * fourth / (12.0 * k))
        } else {
            (potential.energy_hartree(r_e + x) - v_e) / (0.5 * k * x * x) - 1.0
        }
    };
    let by_force = |x: f64| {
        if x.abs() < near {
            x * (third / (2.0 * k) + x * fourth / (6.0 * k))
        } else {
            potential.derivatives_hartree(r_e + x)[1] / (k * x) - 1.0
        }
    };
    let leading = |factor: f64| (third != 0.0).then(|| factor * tolerance * k / third.abs());
    let sides = (range_bohr.0 - r_e, range_bohr.1 - r_e);
    Some((
        interval(by_energy, sides, tolerance, leading(3.0)),
        interval(by_force, sides, tolerance, leading(2.0)),
    ))
}

fn interval(
    deviation: impl Fn(f64) -> f64,
    (minus, plus): (f64, f64),
    tolerance: f64,
    leading_order_bohr: Option<f64>,
) -> Interval {
    let first_step = leading_order_bohr.map_or(f64::INFINITY, |x| x / 16.0);
    let x_minus_bohr = first_crossing(&deviation, minus, tolerance, first_step);
    let x_plus_bohr = first_crossing(&deviation, plus, tolerance, first_step);
    let ended = |x: Option<f64>| if x.is_some() { EndedBy::Tolerance } else { EndedBy::Scan };
    Interval::new(x_minus_bohr, x_plus_bohr, leading_order_bohr, (ended(x_minus_bohr), ended(x_plus_bohr)))
}

/// The displacement nearest to 0 towards `end` at which |deviation| passes the tolerance.
fn first_crossing(deviation: impl Fn(f64) -> f64, end: f64, tolerance: f64, first_step: f64) -> Option<f64> {
    let beyond = |x: f64| deviation(x).abs() > tolerance;
    let side = end.abs();
    let largest_step = side / f64::from(STEPS);
    if largest_step.is_nan() || largest_step <= 0.0 {
        return None;
    }
    let mut inside = 0.0_f64;
    // Small steps at first, so that a short reach is not stepped over; they grow by a twentieth of the way.
    while inside < side {
        let step = largest_step.min(first_step.max(0.05 * inside)).max(f64::EPSILON * side);
        let outside = (inside + step).min(side);
        if beyond(outside.copysign(end)) {
            return Some(bisect(|x| beyond(x.copysign(end)), inside, outside).copysign(end));
        }
        inside = outside;
    }
    None
}

/// Boundary between `inside` and `outside`, to rounding.
pub(super) fn bisect(beyond: impl Fn(f64) -> bool, mut inside: f64, mut outside: f64) -> f64 {
    loop {
        let middle = 0.5 * (inside + outside);
        if middle <= inside || middle >= outside {
            return middle;
        }
        if beyond(middle) { outside = middle } else { inside = middle }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::{Harmonic, Morse};

    fn morse(a: f64) -> Morse {
        Morse { e_min_hartree: 0.0, r_e_bohr: 2.0, well_depth_hartree: 0.17, a_per_bohr: a }
    }

    /// Root of g between a and b by plain bisection, for the closed forms.
    fn root(g: impl Fn(f64) -> f64, mut a: f64, mut b: f64) -> f64 {
        assert!(g(a) * g(b) < 0.0);
        for _ in 0..200 {
            let m = 0.5 * (a + b);
            if g(a) * g(m) <= 0.0 { b = m } else { a = m }
        }
        0.5 * (a + b)
    }

    /// With t = a x the Morse deviations are free of D and a: ((1 − e^−t)/t)² − 1 and (e^−t − e^−2t)/t − 1.
    /// The reach must be their roots, and its expansion ±τ + (7/12) τ² (energy), ±2τ/3 + (28/81) τ² (force), all
    /// over a, with an error of third order (definition of the reach; checked here by halving τ).
    #[test]
    fn morse_reach_is_the_root_of_the_exact_expressions() {
        let energy = |t: f64| (-(-t).exp_m1() / t).powi(2) - 1.0;
        let force = |t: f64| (-t).exp() * -(-t).exp_m1() / t - 1.0;
        for a in [0.4, 1.03, 2.5] {
            let mut misses = Vec::new();
            for tau in [0.01, 0.02, 0.05, 0.1] {
                let (e, f) = energy_and_force_reach_of(&morse(a), (0.05, 30.0), tau).unwrap();
                for (found, exact, one, two) in [
                    (e, &energy as &dyn Fn(f64) -> f64, 1.0, 7.0 / 12.0),
                    (f, &force as &dyn Fn(f64) -> f64, 2.0 / 3.0, 28.0 / 81.0),
                ] {
                    let minus = root(|t| exact(t) - tau, -1.0, -1e-3) / a;
                    let plus = root(|t| exact(t) + tau, 1e-3, 1.0) / a;
                    let (x_minus, x_plus) = (found.x_minus_bohr.unwrap(), found.x_plus_bohr.unwrap());
                    assert!((x_minus - minus).abs() < 1e-12 && (x_plus - plus).abs() < 1e-12, "{a} {tau}");
                    assert_eq!(found.ended_by_minus, EndedBy::Tolerance);
                    assert!((found.leading_order_bohr.unwrap() - one * tau / a).abs() < 1e-12);
                    let expanded = |sign: f64| (sign * one * tau + two * tau * tau) / a;
                    misses.push((
                        tau,
                        (x_plus - expanded(1.0)).abs() * a,
                        (x_minus - expanded(-1.0)).abs() * a,
                    ));
                }
            }
            for (tau, plus, minus) in misses {
                assert!(plus < tau.powi(3) && minus < tau.powi(3), "{tau} {plus} {minus}");
            }
        }
    }

    /// A parabola is its own harmonic picture: unlimited, and the scan ends it.
    #[test]
    fn harmonic_reach_is_ended_by_the_scan() {
        let harmonic = Harmonic { e_min_hartree: 0.0, r_e_bohr: 2.0, force_constant_hartree_per_bohr2: 0.3 };
        let (e, f) = energy_and_force_reach_of(&harmonic, (1.0, 4.0), 1e-6).unwrap();
        for found in [e, f] {
            assert_eq!((found.x_minus_bohr, found.x_plus_bohr, found.leading_order_bohr), (None, None, None));
            assert_eq!((found.ended_by_minus, found.ended_by_plus), (EndedBy::Scan, EndedBy::Scan));
        }
    }

    /// V = k x²/2 + c x⁴: no cubic term, reach ± sqrt(τ k/2c) by energy and ± sqrt(τ k/4c) by force, no
    /// leading order; with c < 0 (a double barrier) the same.
    struct Quartic {
        c: f64,
    }

    impl Potential for Quartic {
        fn derivatives_hartree(&self, r: f64) -> [f64; 5] {
            let x = r - 3.0;
            let (k, c) = (0.2, self.c);
            [
                x * x * (0.5 * k + c * x * x),
                x * (k + 4.0 * c * x * x),
                k + 12.0 * c * x * x,
                24.0 * c * x,
                24.0 * c,
            ]
        }
        fn range_bohr(&self) -> (f64, f64) {
            (0.0, f64::INFINITY)
        }
        fn limit_hartree(&self) -> f64 {
            f64::INFINITY
        }
        fn minimum_bohr(&self) -> f64 {
            3.0
        }
    }

    #[test]
    fn quartic_reach_is_symmetric_and_has_no_leading_order() {
        for c in [0.05, -0.02_f64] {
            let (e, f) = energy_and_force_reach_of(&Quartic { c }, (1.0, 5.0), 0.05).unwrap();
            for (found, factor) in [(e, 2.0), (f, 4.0)] {
                let exact = (0.05 * 0.2 / (factor * c.abs())).sqrt();
                assert!((found.x_plus_bohr.unwrap() - exact).abs() < 1e-12);
                assert!((found.x_minus_bohr.unwrap() + exact).abs() < 1e-12);
                assert_eq!(found.leading_order_bohr, None);
            }
        }
    }

    /// Tiny tolerances are resolved through the series; a short scan ends the reach on its side only.
    #[test]
    fn extremes() {
        let (e, _) = energy_and_force_reach_of(&morse(1.0), (0.5, 30.0), 1e-7).unwrap();
        assert!((e.x_plus_bohr.unwrap() - 1e-7).abs() < 1e-13);
        let (e, _) = energy_and_force_reach_of(&morse(1.0), (1.9, 2.02), 0.05).unwrap();
        assert_eq!((e.ended_by_minus, e.ended_by_plus), (EndedBy::Tolerance, EndedBy::Scan));
        assert!(e.x_plus_bohr.is_none());
    }
}
