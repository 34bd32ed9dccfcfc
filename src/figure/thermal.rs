//! Thermal quantities over temperature: numerical beside harmonic and Morse, in small pictures of one temperature axis.

use super::{Axis, Figure, Role, Series, Shape};
use crate::findings::Findings;
use crate::thermal::{Averages, ThermalPoint, boltzmann, thermal};
use crate::units::{ANGSTROM_PER_BOHR, BOLTZMANN_PER_CM_PER_KELVIN, omega_e_per_cm, to_angstrom};

/// Temperatures a line is drawn with.
const POINTS: usize = 241;
/// Levels whose populations are drawn.
const POPULATED: usize = 4;
/// Tolerance of q and U in percent, as the temperature reach has it.
const WITHIN_PERCENT: f64 = 1.0;

pub(super) const TEMPERATURE: Axis = Axis { title: "temperature", unit: "K" };
pub(super) const HARMONIC: &str = "Of ω_e from k = V″(r_e), in closed form.";
pub(super) const MORSE: &str = "Over the levels of the Morse fit.";
pub(super) const NUMERICAL: &str = "Over the levels of the curve.";

/// One of several pictures that share their temperature axis.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalPanel {
    /// The picture.
    pub figure: Figure,
    /// Names beside its lines: where, and what.
    pub marks: Vec<([f64; 2], String)>,
    /// Range of the ordinate, where it is not that of the lines.
    pub range: Option<(f64, f64)>,
}

/// What the panels are made from.
struct Lines<'a> {
    findings: &'a Findings,
    mesh: Vec<ThermalPoint>,
}

/// Six pictures over temperature: how far harmonic and Morse are off in the partition function and in the mean energy,
/// heat capacity, populations, mean bond length, mean-square amplitude. Empty without levels.
pub fn thermal_panels(findings: &Findings) -> Vec<ThermalPanel> {
    Lines::of(findings).map_or_else(Vec::new, |lines| {
        vec![
            lines.partition_function(),
            lines.mean_energy(),
            lines.heat_capacity(),
            lines.populations(),
            lines.mean_length(),
            lines.amplitude(),
        ]
    })
}

const fn figure(title: &'static str, unit: &'static str, series: Vec<Series>) -> Figure {
    Figure { x: TEMPERATURE, y: Axis { title, unit }, series }
}

impl<'a> Lines<'a> {
    fn of(findings: &'a Findings) -> Option<Self> {
        let input = findings.thermal_input()?;
        let highest = findings.thermal.iter().map(|p| p.kelvin).fold(0.0, f64::max);
        let kelvin: Vec<f64> = (1..=POINTS).map(|i| highest * i as f64 / POINTS as f64).collect();
        let mesh = thermal(&input, &kelvin);
        (!mesh.is_empty()).then_some(Self { findings, mesh })
    }

    fn line(&self, role: Role, about: &str, value: impl Fn(&ThermalPoint) -> Option<f64>) -> Option<Series> {
        let label = match role {
            Role::Parabola => "harmonic",
            Role::Morse => "Morse fit",
            _ => "numerical",
        };
        let at = |p: &ThermalPoint| Some([p.kelvin, value(p).filter(|v| v.is_finite())?]);
        let points: Vec<[f64; 2]> = self.mesh.iter().filter_map(at).collect();
        (!points.is_empty()).then(|| Series {
            role,
            label: label.to_owned(),
            about: about.to_owned(),
            strong: None,
            shape: Shape::Line(points),
        })
    }

    /// Rings at the temperatures of the settings.
    fn rings(&self, value: impl Fn(&ThermalPoint) -> f64) -> Series {
        Series {
            role: Role::Scanned,
            label: "temperatures listed".to_owned(),
            about: "At the temperatures of the settings.".to_owned(),
            strong: None,
            shape: Shape::Points(self.findings.thermal.iter().map(|p| [p.kelvin, value(p)]).collect()),
        }
    }

    /// The band up to the temperature reach, and the tolerance at either side of zero.
    fn tolerance(&self, limit: Option<f64>, about: &str) -> Vec<Series> {
        let looked = self.findings.reach.as_ref().and_then(|r| r.temperature_kelvin.looked_up_to);
        let band =
            limit.or(looked).map(|t| Series::plain(Role::Reach, "reach", about, Shape::Band(None, Some(t))));
        band.into_iter()
            .chain([
                Series::plain(Role::Zero, "no deviation", NUMERICAL, Shape::Level(0.0)),
                Series::plain(Role::Tolerance, "tolerance", about, Shape::Level(WITHIN_PERCENT)),
                Series::plain(Role::Tolerance, "tolerance", about, Shape::Level(-WITHIN_PERCENT)),
            ])
            .collect()
    }

    fn partition_function(&self) -> ThermalPanel {
        let limit = self.findings.reach.as_ref().and_then(|r| r.temperature_kelvin.partition_function);
        let about = "Up to where |ln q(harmonic) − ln q| ≤ 0.01, or as far as the levels tell.";
        let mut series = self.tolerance(limit, about);
        let off = |p: &ThermalPoint, of: Option<Averages>| {
            Some(100.0 * (of?.log_partition_function - p.vibrational.log_partition_function).exp_m1())
        };
        series.extend(self.line(Role::Morse, MORSE, |p| off(p, p.morse)));
        series.extend(self.line(Role::Parabola, HARMONIC, |p| off(p, p.harmonic)));
        ThermalPanel {
            range: deviation_range(&series),
            figure: figure("deviation of q", "%", series),
            marks: Vec::new(),
        }
    }

    fn mean_energy(&self) -> ThermalPanel {
        let limit = self.findings.reach.as_ref().and_then(|r| r.temperature_kelvin.mean_energy);
        let about = "Up to where |U(harmonic) − U| ≤ 0.01 k_B T, or as far as the levels tell.";
        let mut series = self.tolerance(limit, about);
        let off = |p: &ThermalPoint, of: Option<Averages>| {
            let kt = BOLTZMANN_PER_CM_PER_KELVIN * p.kelvin;
            Some(100.0 * (of?.mean_energy_per_cm - p.vibrational.mean_energy_per_cm) / kt)
        };
        series.extend(self.line(Role::Morse, MORSE, |p| off(p, p.morse)));
        series.extend(self.line(Role::Parabola, HARMONIC, |p| off(p, p.harmonic)));
        ThermalPanel {
            range: deviation_range(&series),
            figure: figure("deviation of U", "% of kT", series),
            marks: Vec::new(),
        }
    }

    fn heat_capacity(&self) -> ThermalPanel {
        let capacity = |a: &Averages| a.heat_capacity_joule_per_mole_kelvin();
        let mut series = Vec::new();
        series.extend(self.line(Role::Parabola, HARMONIC, |p| p.harmonic.as_ref().map(capacity)));
        series.extend(self.line(Role::Morse, MORSE, |p| p.morse.as_ref().map(capacity)));
        series.extend(self.line(Role::Scanned, NUMERICAL, |p| Some(capacity(&p.vibrational))));
        series.push(self.rings(|p| capacity(&p.vibrational)));
        ThermalPanel { figure: figure("heat capacity", "J/(mol K)", series), marks: Vec::new(), range: None }
    }

    fn populations(&self) -> ThermalPanel {
        let levels = &self.findings.levels;
        let lowest = levels.first().map_or(0.0, |l| l.energy_per_cm);
        let excitations: Vec<f64> = levels.iter().map(|l| l.energy_per_cm - lowest).collect();
        let omega = self
            .findings
            .thermal_input()
            .map_or(f64::NAN, |i| omega_e_per_cm(i.force_constant_hartree_per_bohr2, i.reduced_mass_me));
        let (mut series, mut marks) = (Vec::new(), Vec::new());
        for v in 0..POPULATED.min(levels.len()) {
            let harmonic = |p: &ThermalPoint| {
                let u = omega / (BOLTZMANN_PER_CM_PER_KELVIN * p.kelvin);
                Some(100.0 * -(-u).exp_m1() * (-u * v as f64).exp())
            };
            let about = format!("Population of v = {v}.");
            series.extend(self.line(Role::Parabola, &about, harmonic));
            let numerical = |p: &ThermalPoint| boltzmann(&excitations, p.kelvin).get(v).map(|p| 100.0 * p);
            let line = self.line(Role::Scanned, &about, numerical);
            if let Some(Shape::Line(points)) = line.as_ref().map(|l| &l.shape)
                && let Some(last) = points.last()
            {
                // Clear of the line over the whole width of the name.
                let near = points.iter().filter(|p| p[0] > 0.8 * last[0]);
                let height = near.map(|p| p[1]).fold(last[1], f64::max);
                marks.push(([last[0], height], format!("v = {v}")));
            }
            series.extend(line);
        }
        ThermalPanel { figure: figure("population", "%", series), marks, range: Some((0.0, 104.0)) }
    }

    fn mean_length(&self) -> ThermalPanel {
        let r_e = self.findings.curve.as_ref().map(|c| c.local.r_e_bohr);
        let mut series = Vec::new();
        series.extend(self.line(Role::Parabola, "r_e: that of a harmonic bond at any temperature.", |_| {
            r_e.map(to_angstrom)
        }));
        series.extend(self.line(Role::Morse, MORSE, |p| p.morse_mean_r_bohr.map(to_angstrom)));
        series.extend(self.line(Role::Scanned, NUMERICAL, |p| Some(to_angstrom(p.mean_r_bohr))));
        series.push(self.rings(|p| to_angstrom(p.mean_r_bohr)));
        ThermalPanel { figure: figure("mean bond length", "Å", series), marks: Vec::new(), range: None }
    }

    fn amplitude(&self) -> ThermalPanel {
        let square = |x2: f64| x2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR * 1e3;
        let mut series = Vec::new();
        series.extend(self.line(Role::Parabola, HARMONIC, |p| p.harmonic_mean_square_x_bohr2.map(square)));
        series.extend(self.line(Role::Morse, MORSE, |p| p.morse_mean_square_x_bohr2.map(square)));
        series.extend(self.line(Role::Scanned, NUMERICAL, |p| Some(square(p.mean_square_x_bohr2))));
        series.push(self.rings(|p| square(p.mean_square_x_bohr2)));
        ThermalPanel {
            figure: figure("mean square x", "10⁻³ Å²", series), marks: Vec::new(), range: None
        }
    }
}

/// A range that shows the tolerance and the deviations, but no more than twelve tolerances to either side.
fn deviation_range(series: &[Series]) -> Option<(f64, f64)> {
    let lines = series.iter().filter_map(|s| match &s.shape {
        Shape::Line(points) => Some(points),
        _ => None,
    });
    let most = lines.flatten().map(|p| p[1].abs()).fold(0.0, f64::max);
    let half = (1.15 * most).clamp(2.0 * WITHIN_PERCENT, 12.0 * WITHIN_PERCENT);
    Some((-half, half))
}
