//! The gauge: how far the curve departs from its parabola, against the tolerance.

use super::{Axis, BOND_LENGTH, Figure, Role, Series, Shape, number};
use crate::findings::Findings;
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::units::to_angstrom;

/// Deviation (V − V_e − H)/H in percent at displacement x; near x = 0 from its limit V‴ x/(3 k), as
/// a difference of nearly equal numbers would lose all digits.
fn deviation_percent(curve: &ScanCurve, k: f64, third: f64, x: f64) -> f64 {
    if x.abs() < 1e-3 {
        return 100.0 * third * x / (3.0 * k);
    }
    let h = 0.5 * k * x * x;
    100.0 * (curve.energy_hartree(curve.r_e_bohr.value + x) - curve.v_e_hartree.value - h) / h
}

/// Deviation of the curve from its parabola in percent of the parabola's energy, with the tolerance,
/// the leading-order line and the zero-point amplitude.
pub fn gauge(findings: &Findings) -> Figure {
    let y = Axis { title: "deviation", unit: "%" };
    let mut series = Vec::new();
    if let Some(curve) = findings.curve.as_deref()
        && let Some(k) = curve.derivatives_hartree[0].map(|e| e.value).filter(|k| *k > 0.0)
    {
        let third = curve.derivatives_hartree[1].map_or(0.0, |e| e.value);
        series.extend(reach(findings, curve));
        series.push(leading_order(curve, k, third));
        series.push(exact(curve, k, third));
    }
    Figure { x: BOND_LENGTH, y, series }
}

fn exact(curve: &ScanCurve, k: f64, third: f64) -> Series {
    let (first, last) = curve.scan_range_bohr;
    let r_e = curve.r_e_bohr.value;
    let n = 700;
    // Half the points within 40 % of r_e, where the curve bends.
    let near = (0.4 * r_e).min(last - r_e).min(r_e - first).max(0.0);
    let mut x: Vec<f64> =
        (0..=n).map(|i| first - r_e + (last - first) * f64::from(i) / f64::from(n)).collect();
    x.extend((0..=n).map(|i| near * (2.0 * f64::from(i) / f64::from(n) - 1.0)));
    x.sort_by(f64::total_cmp);
    x.dedup();
    let at = |x: f64| [to_angstrom(r_e + x), deviation_percent(curve, k, third, x)];
    Series {
        role: Role::Scanned,
        label: "deviation from the parabola".to_owned(),
        about: "(V − Vₑ − ½ k x²)/(½ k x²), with k = V″(rₑ).".to_owned(),
        strong: None,
        shape: Shape::Line(x.into_iter().map(at).filter(|p| p.iter().all(|c| c.is_finite())).collect()),
    }
}

fn leading_order(curve: &ScanCurve, k: f64, third: f64) -> Series {
    let (r_e, slope) = (curve.r_e_bohr.value, 100.0 * third / (3.0 * k));
    let at = |x: f64| [to_angstrom(r_e + x), slope * x];
    Series {
        role: Role::LeadingOrder,
        label: "leading order".to_owned(),
        about: "V‴ x/(3 k): what the cubic term alone would do.".to_owned(),
        strong: None,
        shape: Shape::Line(vec![at(curve.scan_range_bohr.0 - r_e), at(curve.scan_range_bohr.1 - r_e)]),
    }
}

fn reach(findings: &Findings, curve: &ScanCurve) -> Vec<Series> {
    let Some(reach) = findings.reach.as_ref() else { return Vec::new() };
    let r_e = curve.r_e_bohr.value;
    let end = |x: Option<f64>| x.map(|x| to_angstrom(r_e + x));
    let plain = |role, label: &str, about: String, shape| Series {
        role,
        label: label.to_owned(),
        about,
        strong: None,
        shape,
    };
    let tau = 100.0 * reach.tolerance;
    let mut series = vec![
        plain(
            Role::Reach,
            "reach",
            "Between the two crossings of the deviation with the tolerance.".to_owned(),
            Shape::Band(end(reach.energy.x_minus_bohr), end(reach.energy.x_plus_bohr)),
        ),
        plain(Role::Zero, "no deviation", String::new(), Shape::Level(0.0)),
        plain(Role::Tolerance, "tolerance", "The tolerance of the reach.".to_owned(), Shape::Level(tau)),
        plain(Role::Tolerance, "tolerance", "The tolerance of the reach.".to_owned(), Shape::Level(-tau)),
    ];
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        series.push(plain(
            Role::ZeroPoint,
            "zero-point amplitude",
            format!(
                "√(ℏ/(μω)) = {} Å on either side of rₑ: how far the harmonic ground state swings.",
                number::fixed(to_angstrom(amplitude), 4)
            ),
            Shape::Bar(0.0, to_angstrom(r_e - amplitude), to_angstrom(r_e + amplitude)),
        ));
    }
    series
}
