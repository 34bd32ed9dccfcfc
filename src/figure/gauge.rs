//! The gauge: how far the curve departs from its parabola, against the tolerance.

use super::{Axis, BOND_LENGTH, Figure, Role, Series, Shape, number};
use crate::findings::Findings;
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::reach::{Interval, Reach};
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom, to_per_cm};

/// What the gauge measures.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum GaugeMeasure {
    /// (V − V_e − H)/H in percent, H = ½ k x².
    #[default]
    EnergyPercent,
    /// V − V_e − H in cm⁻¹.
    EnergyPerCm,
    /// (V′ − k x)/(k x) in percent.
    ForcePercent,
    /// V′ − k x in cm⁻¹/Å.
    ForcePerCmAngstrom,
}

impl GaugeMeasure {
    /// The measures by their names on the command line.
    pub const ALL: [(&'static str, Self); 4] = [
        ("energy", Self::EnergyPercent),
        ("energy-cm-1", Self::EnergyPerCm),
        ("force", Self::ForcePercent),
        ("force-cm-1", Self::ForcePerCmAngstrom),
    ];

    /// Its name on the command line.
    pub fn name(self) -> &'static str {
        Self::ALL.into_iter().find(|(_, m)| *m == self).map_or("", |(name, _)| name)
    }

    /// The measure of this name.
    pub fn of_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|(n, _)| *n == name).map(|(_, measure)| measure)
    }

    const fn axis(self) -> Axis {
        match self {
            Self::EnergyPercent => Axis { title: "deviation", unit: "%" },
            Self::EnergyPerCm => Axis { title: "deviation", unit: "cm⁻¹" },
            Self::ForcePercent => Axis { title: "force deviation", unit: "%" },
            Self::ForcePerCmAngstrom => Axis { title: "force deviation", unit: "cm⁻¹/Å" },
        }
    }

    const fn about(self) -> &'static str {
        match self {
            Self::EnergyPercent => "(V − Vₑ − ½ k x²)/(½ k x²), with k = V″(rₑ).",
            Self::EnergyPerCm => "V − Vₑ − ½ k x², with k = V″(rₑ).",
            Self::ForcePercent => "(V′ − k x)/(k x), with k = V″(rₑ).",
            Self::ForcePerCmAngstrom => "V′ − k x, with k = V″(rₑ).",
        }
    }

    const fn leading_about(self) -> &'static str {
        match self {
            Self::EnergyPercent => "V‴ x/(3 k): what the cubic term alone would do.",
            Self::EnergyPerCm => "V‴ x³/6: what the cubic term alone would do.",
            Self::ForcePercent => "V‴ x/(2 k): what the cubic term alone would do.",
            Self::ForcePerCmAngstrom => "V‴ x²/2: what the cubic term alone would do.",
        }
    }

    /// What the cubic term alone would do at displacement x.
    fn leading(self, k: f64, third: f64, x: f64) -> f64 {
        match self {
            Self::EnergyPercent => 100.0 * third * x / (3.0 * k),
            Self::EnergyPerCm => to_per_cm(third * x.powi(3) / 6.0),
            Self::ForcePercent => 100.0 * third * x / (2.0 * k),
            Self::ForcePerCmAngstrom => to_per_cm(0.5 * third * x * x) / ANGSTROM_PER_BOHR,
        }
    }

    /// The deviation at displacement x; near x = 0 relative ones from their limit, as a difference of nearly equal
    /// numbers would lose all digits.
    fn deviation(self, curve: &ScanCurve, k: f64, third: f64, x: f64) -> f64 {
        let relative = matches!(self, Self::EnergyPercent | Self::ForcePercent);
        if relative && x.abs() < 1e-3 {
            return self.leading(k, third, x);
        }
        let r = curve.local.r_e_bohr + x;
        let above = curve.above_minimum();
        let h = 0.5 * k * x * x;
        match self {
            Self::EnergyPercent => 100.0 * (above.energy_hartree(r) - h) / h,
            Self::EnergyPerCm => to_per_cm(above.energy_hartree(r) - h),
            Self::ForcePercent => 100.0 * (above.derivatives_hartree(r)[1] / (k * x) - 1.0),
            Self::ForcePerCmAngstrom => {
                to_per_cm(above.derivatives_hartree(r)[1] - k * x) / ANGSTROM_PER_BOHR
            }
        }
    }

    /// The reach by this measure; the one by force serves both forces.
    pub(super) const fn interval(self, reach: &Reach) -> &Interval {
        match self {
            Self::EnergyPercent => &reach.energy,
            Self::EnergyPerCm => &reach.absolute,
            Self::ForcePercent | Self::ForcePerCmAngstrom => &reach.force,
        }
    }

    /// The tolerance in the unit of the axis, where it is one number.
    pub(super) fn tolerance(self, reach: &Reach) -> Option<f64> {
        match self {
            Self::EnergyPercent | Self::ForcePercent => Some(100.0 * reach.tolerance),
            Self::EnergyPerCm => Some(to_per_cm(reach.absolute_tolerance.hartree())),
            Self::ForcePerCmAngstrom => None,
        }
    }
}

/// Deviation of the curve from its parabola in percent of the parabola's energy, see [`gauge_of`].
pub fn gauge(findings: &Findings) -> Figure {
    gauge_of(findings, GaugeMeasure::EnergyPercent)
}

/// Deviation of the curve from its parabola by a measure, with the tolerance, the leading-order line and the zero-point
/// amplitude.
pub fn gauge_of(findings: &Findings, measure: GaugeMeasure) -> Figure {
    let mut series = Vec::new();
    if let Some(curve) = findings.curve.as_deref()
        && let Some(k) = curve.derivatives_hartree[0].map(|e| e.value).filter(|k| *k > 0.0)
    {
        let third = curve.derivatives_hartree[1].map_or(0.0, |e| e.value);
        series.extend(reach(findings, curve, measure));
        let leading = |x: f64| measure.leading(k, third, x);
        series.push(line(curve, Role::LeadingOrder, "leading order", measure.leading_about(), &leading));
        let exact = |x: f64| measure.deviation(curve, k, third, x);
        series.push(line(curve, Role::Scanned, "deviation from the parabola", measure.about(), &exact));
    }
    Figure { x: BOND_LENGTH, y: measure.axis(), series }
}

/// The classical turning points of the lowest levels at the zero line of a gauge: both ends of each, v ascending
/// outwards. None without levels.
pub fn gauge_turning_points(findings: &Findings, levels: usize) -> Option<Series> {
    let ends = findings
        .levels
        .iter()
        .take(levels)
        .flat_map(|l| [l.inner_turning_point_bohr, l.outer_turning_point_bohr]);
    let points: Vec<[f64; 2]> = ends.map(|r| [to_angstrom(r), 0.0]).collect();
    (!points.is_empty()).then(|| Series {
        role: Role::Zero,
        label: "turning points of the levels".to_owned(),
        about: "Where a classical particle of each level's energy turns: v = 0 inside, higher v outwards."
            .to_owned(),
        strong: None,
        shape: Shape::Points(points),
    })
}

/// A line over the whole scan: half the points within 40 % of r_e, where the curve bends.
fn line(curve: &ScanCurve, role: Role, label: &str, about: &str, value: &dyn Fn(f64) -> f64) -> Series {
    let (first, last) = curve.scan_range_bohr;
    let r_e = curve.r_e_bohr.value;
    let n = 700;
    let near = (0.4 * r_e).min(last - r_e).min(r_e - first).max(0.0);
    let mut x: Vec<f64> =
        (0..=n).map(|i| first - r_e + (last - first) * f64::from(i) / f64::from(n)).collect();
    x.extend((0..=n).map(|i| near * (2.0 * f64::from(i) / f64::from(n) - 1.0)));
    x.sort_by(f64::total_cmp);
    x.dedup();
    let at = |x: f64| [to_angstrom(r_e + x), value(x)];
    Series {
        role,
        label: label.to_owned(),
        about: about.to_owned(),
        strong: None,
        shape: Shape::Line(x.into_iter().map(at).filter(|p| p.iter().all(|c| c.is_finite())).collect()),
    }
}

fn reach(findings: &Findings, curve: &ScanCurve, measure: GaugeMeasure) -> Vec<Series> {
    let Some(reach) = findings.reach.as_ref() else { return Vec::new() };
    let r_e = curve.r_e_bohr.value;
    let end = |x: Option<f64>| x.map(|x| to_angstrom(r_e + x));
    let interval = measure.interval(reach);
    let mut series = vec![
        Series::plain(
            Role::Reach,
            "reach",
            "Between the two crossings of the deviation with the tolerance.".to_owned(),
            Shape::Band(end(interval.x_minus_bohr), end(interval.x_plus_bohr)),
        ),
        Series::plain(Role::Zero, "no deviation", String::new(), Shape::Level(0.0)),
    ];
    for tolerance in measure.tolerance(reach).into_iter().flat_map(|t| [t, -t]) {
        let about = "The tolerance of the reach.".to_owned();
        series.push(Series::plain(Role::Tolerance, "tolerance", about, Shape::Level(tolerance)));
    }
    if measure == GaugeMeasure::ForcePerCmAngstrom
        && let Some(k) = curve.derivatives_hartree[0].map(|e| e.value)
    {
        let (first, last) = curve.scan_range_bohr;
        for sign in [1.0, -1.0] {
            let at = |r: f64| {
                let allowed = reach.tolerance * k * (r - r_e).abs();
                [to_angstrom(r), sign * to_per_cm(allowed) / ANGSTROM_PER_BOHR]
            };
            let about = "τ |k x|: the tolerance grows with the displacement.".to_owned();
            series.push(Series::plain(
                Role::Tolerance,
                "tolerance",
                about,
                Shape::Line(vec![at(first), at(r_e), at(last)]),
            ));
        }
    }
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        series.push(Series::plain(
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
