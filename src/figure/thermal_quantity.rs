//! One thermal quantity over temperature, and how far the harmonic and the Morse picture are off in it.

use super::thermal::{HARMONIC, MORSE, NUMERICAL, TEMPERATURE};
use super::{Axis, Figure, Role, Series, Shape};
use crate::findings::Findings;
use crate::thermal::{Averages, ThermalPoint};
use crate::units::{ANGSTROM_PER_BOHR, GAS_CONSTANT_JOULE_PER_MOLE_KELVIN, to_angstrom};

/// Temperatures a line is drawn with.
const POINTS: usize = 161;

/// A quantity that depends on temperature.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum ThermalQuantity {
    /// q, counted from the lowest level.
    PartitionFunction,
    /// U above the lowest level.
    MeanEnergy,
    /// C_V.
    #[default]
    HeatCapacity,
    /// S.
    Entropy,
    /// ⟨r⟩.
    MeanLength,
    /// ⟨x²⟩ about r_e.
    MeanSquareX,
}

/// A quantity over temperature.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalPicture {
    /// Numerical, harmonic, Morse.
    pub values: Figure,
    /// Harmonic and Morse minus numerical, with the temperature reach where there is one.
    pub deviation: Figure,
    /// Range of the deviation that shows the tolerance too, and of a model that is far off no more than matters.
    pub deviation_range: Option<(f64, f64)>,
}

/// One value of each picture at a temperature; none where there is none.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct ThermalValues {
    /// Over the numerical levels.
    pub numerical: f64,
    /// Harmonic.
    pub harmonic: Option<f64>,
    /// Of the Morse fit.
    pub morse: Option<f64>,
}

impl ThermalQuantity {
    /// All of them, in the order of the page.
    pub const ALL: [Self; 6] = [
        Self::PartitionFunction,
        Self::MeanEnergy,
        Self::HeatCapacity,
        Self::Entropy,
        Self::MeanLength,
        Self::MeanSquareX,
    ];

    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::PartitionFunction => "partition function",
            Self::MeanEnergy => "mean energy",
            Self::HeatCapacity => "heat capacity",
            Self::Entropy => "entropy",
            Self::MeanLength => "mean bond length",
            Self::MeanSquareX => "mean square x",
        }
    }

    /// Its symbol.
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::PartitionFunction => "q",
            Self::MeanEnergy => "U − E(0)",
            Self::HeatCapacity => "Cᵥ",
            Self::Entropy => "S",
            Self::MeanLength => "⟨r⟩",
            Self::MeanSquareX => "⟨x²⟩",
        }
    }

    /// The unit of its values.
    pub const fn unit(self) -> &'static str {
        match self {
            Self::PartitionFunction => "",
            Self::MeanEnergy => "kJ/mol",
            Self::HeatCapacity | Self::Entropy => "J/(mol K)",
            Self::MeanLength => "Å",
            Self::MeanSquareX => "10⁻³ Å²",
        }
    }

    /// What it is, in a sentence.
    pub const fn about(self) -> &'static str {
        match self {
            Self::PartitionFunction => "q = Σ g exp(−(E − E(0))/k_BT), counted from the lowest level.",
            Self::MeanEnergy => "Mean energy above the lowest level.",
            Self::HeatCapacity => "Cᵥ: variance of the energy over k_BT².",
            Self::Entropy => "S = R (ln q + U/k_BT).",
            Self::MeanLength => "Mean bond length; the harmonic picture keeps it at rₑ.",
            Self::MeanSquareX => "Mean square displacement from rₑ, the mean-square amplitude.",
        }
    }

    /// How its deviation is measured.
    const fn deviation_axis(self) -> Axis {
        match self {
            Self::PartitionFunction => Axis { title: "off in q", unit: "%" },
            Self::MeanEnergy => Axis { title: "off in U", unit: "% of kT" },
            Self::HeatCapacity => Axis { title: "off in Cᵥ", unit: "% of R" },
            Self::Entropy => Axis { title: "off in S", unit: "% of R" },
            Self::MeanLength => Axis { title: "off in ⟨r⟩", unit: "%" },
            Self::MeanSquareX => Axis { title: "off in ⟨x²⟩", unit: "%" },
        }
    }

    /// The tolerance of the temperature reach in the unit of the deviation.
    const fn tolerance(self) -> Option<f64> {
        match self {
            Self::PartitionFunction | Self::MeanEnergy => Some(1.0),
            Self::MeanSquareX => Some(5.0),
            Self::HeatCapacity | Self::Entropy | Self::MeanLength => None,
        }
    }

    /// The values at a temperature: with rotation where the point has it.
    pub fn values(self, point: &ThermalPoint, r_e_bohr: Option<f64>) -> ThermalValues {
        let of = |get: fn(&Averages) -> f64| match &point.rotating {
            Some(r) => ThermalValues {
                numerical: get(&r.rovibrational),
                harmonic: r.harmonic.as_ref().map(get),
                morse: r.morse.as_ref().map(get),
            },
            None => ThermalValues {
                numerical: get(&point.vibrational),
                harmonic: point.harmonic.as_ref().map(get),
                morse: point.morse.as_ref().map(get),
            },
        };
        let square = |bohr2: f64| 1e3 * bohr2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR;
        // Where the fit's levels with rotation are, is not computed.
        let vibrating = point.rotating.is_none();
        match self {
            Self::PartitionFunction => of(|a| a.partition_function),
            Self::MeanEnergy => of(Averages::mean_energy_kilojoule_per_mole),
            Self::HeatCapacity => of(Averages::heat_capacity_joule_per_mole_kelvin),
            Self::Entropy => of(Averages::entropy_joule_per_mole_kelvin),
            Self::MeanLength => ThermalValues {
                numerical: to_angstrom(point.rotating.map_or(point.mean_r_bohr, |r| r.mean_r_bohr)),
                harmonic: r_e_bohr.map(to_angstrom),
                morse: point.morse_mean_r_bohr.filter(|_| vibrating).map(to_angstrom),
            },
            Self::MeanSquareX => ThermalValues {
                numerical: square(
                    point.rotating.map_or(point.mean_square_x_bohr2, |r| r.mean_square_x_bohr2),
                ),
                harmonic: point.harmonic_mean_square_x_bohr2.map(square),
                morse: point.morse_mean_square_x_bohr2.filter(|_| vibrating).map(square),
            },
        }
    }

    /// How far a value is off, in the unit of the deviation.
    fn off(self, point: &ThermalPoint, value: f64, numerical: f64) -> f64 {
        match self {
            Self::MeanEnergy => {
                let kt = 1e-3 * GAS_CONSTANT_JOULE_PER_MOLE_KELVIN * point.kelvin;
                100.0 * (value - numerical) / kt
            }
            Self::HeatCapacity | Self::Entropy => {
                100.0 * (value - numerical) / GAS_CONSTANT_JOULE_PER_MOLE_KELVIN
            }
            _ => 100.0 * (value - numerical) / numerical,
        }
    }
}

/// A quantity from low temperatures up to `highest_kelvin`, with rotation where the findings have it. None without levels.
pub fn thermal_picture(
    findings: &Findings,
    quantity: ThermalQuantity,
    highest_kelvin: f64,
) -> Option<ThermalPicture> {
    let kelvin: Vec<f64> = (1..=POINTS).map(|i| highest_kelvin * i as f64 / POINTS as f64).collect();
    let mesh = findings.thermal_at(&kelvin);
    if mesh.is_empty() {
        return None;
    }
    let r_e = findings.curve.as_ref().map(|c| c.local.r_e_bohr);
    let values: Vec<(&ThermalPoint, ThermalValues)> =
        mesh.iter().map(|p| (p, quantity.values(p, r_e))).collect();
    let line = |role: Role, value: &dyn Fn(&ThermalPoint, &ThermalValues) -> Option<f64>| {
        let (label, about) = match role {
            Role::Parabola => ("harmonic", HARMONIC),
            Role::Morse => ("Morse fit", MORSE),
            _ => ("numerical", NUMERICAL),
        };
        let at = |(p, v): &(&ThermalPoint, ThermalValues)| {
            Some([p.kelvin, value(p, v).filter(|v| v.is_finite())?])
        };
        let points: Vec<[f64; 2]> = values.iter().filter_map(at).collect();
        (!points.is_empty()).then(|| plain(role, label, about, Shape::Line(points)))
    };
    let absolute = [
        line(Role::Parabola, &|_, v| v.harmonic),
        line(Role::Morse, &|_, v| v.morse),
        line(Role::Scanned, &|_, v| Some(v.numerical)),
    ];
    let off = [
        line(Role::Morse, &|p, v| v.morse.map(|m| quantity.off(p, m, v.numerical))),
        line(Role::Parabola, &|p, v| v.harmonic.map(|h| quantity.off(p, h, v.numerical))),
    ];
    let off: Vec<Series> = off.into_iter().flatten().collect();
    let unit = quantity.unit();
    let figure = |y: Axis, series: Vec<Series>| Figure { x: TEMPERATURE, y, series };
    Some(ThermalPicture {
        values: figure(Axis { title: quantity.name(), unit }, absolute.into_iter().flatten().collect()),
        deviation: figure(quantity.deviation_axis(), [reach(findings, quantity), off.clone()].concat()),
        deviation_range: quantity.tolerance().and_then(|t| range(&off, t)),
    })
}

/// At least two tolerances, at most twelve.
fn range(series: &[Series], tolerance: f64) -> Option<(f64, f64)> {
    let lines = series.iter().filter_map(|s| match &s.shape {
        Shape::Line(points) => Some(points),
        _ => None,
    });
    let most = lines.flatten().map(|p| p[1].abs()).fold(0.0, f64::max);
    let half = (1.15 * most).clamp(2.0 * tolerance, 12.0 * tolerance);
    half.is_finite().then_some((-half, half))
}

fn plain(role: Role, label: &str, about: &str, shape: Shape) -> Series {
    Series { role, label: label.to_owned(), about: about.to_owned(), strong: None, shape }
}

/// The band up to the temperature reach and its tolerance; the zero line.
fn reach(findings: &Findings, quantity: ThermalQuantity) -> Vec<Series> {
    let zero = plain(Role::Zero, "no deviation", NUMERICAL, Shape::Level(0.0));
    let Some((tolerance, reach)) = quantity.tolerance().zip(findings.reach.as_ref()) else {
        return vec![zero];
    };
    let t = reach.temperature_kelvin;
    let (limit, about) = match quantity {
        ThermalQuantity::PartitionFunction => {
            (t.partition_function, "Vibration alone: up to where |ln q(harmonic) − ln q| ≤ 0.01.")
        }
        ThermalQuantity::MeanEnergy => {
            (t.mean_energy, "Vibration alone: up to where |U(harmonic) − U| ≤ 0.01 k_B T.")
        }
        _ => (t.mean_square_x, "Vibration alone: up to where ⟨x²⟩ is within 5 %."),
    };
    let band = limit.or(t.looked_up_to).filter(|k| *k > 0.0);
    let band = band.map(|k| plain(Role::Reach, "reach", about, Shape::Band(None, Some(k))));
    let lines = [tolerance, -tolerance].map(|t| plain(Role::Tolerance, "tolerance", about, Shape::Level(t)));
    band.into_iter().chain([zero]).chain(lines).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::settings::Settings;

    fn found(rotation: bool) -> Findings {
        let text = include_str!("../../sample-scans/lih_X_A.csv");
        let scan = crate::scan::read::read_scan("lih_X_A.csv", text.as_bytes(), &Default::default()).unwrap();
        let mut settings = Settings::default();
        settings.masses.atoms = Some(crate::species::parse_atoms("7Li,1H").unwrap());
        settings.thermal.rotation = rotation;
        crate::study::study(&scan, &settings).unwrap()
    }

    fn last(figure: &Figure, role: Role) -> Option<f64> {
        figure.series.iter().find_map(|s| match &s.shape {
            Shape::Line(points) if s.role == role => points.last().map(|p| p[1]),
            _ => None,
        })
    }

    /// At 2000 K the classical limit is near: R for vibration, 2R with rotation (equipartition); the anharmonic ladder is
    /// closer than the harmonic one, so harmonic values of q and U are too small and Morse is nearer.
    #[test]
    fn every_quantity_has_its_lines_with_and_without_rotation() {
        let gas = GAS_CONSTANT_JOULE_PER_MOLE_KELVIN;
        for (rotation, parts) in [(false, 1.0), (true, 2.0)] {
            let findings = found(rotation);
            let picture = |q| thermal_picture(&findings, q, 2000.0).unwrap();
            for quantity in ThermalQuantity::ALL {
                let picture = picture(quantity);
                for role in [Role::Scanned, Role::Parabola] {
                    assert!(last(&picture.values, role).is_some_and(|v| v > 0.0), "{quantity:?} {role:?}");
                }
                assert!(last(&picture.deviation, Role::Parabola).is_some(), "{quantity:?}");
                let bands = picture.deviation.series.iter().filter(|s| s.role == Role::Tolerance).count();
                assert_eq!(bands, if quantity.tolerance().is_some() { 2 } else { 0 });
            }
            let capacity = last(&picture(ThermalQuantity::HeatCapacity).values, Role::Scanned).unwrap();
            assert!((capacity / gas - parts).abs() < 0.15 * parts, "{capacity}");
            for quantity in [ThermalQuantity::PartitionFunction, ThermalQuantity::MeanEnergy] {
                let off = picture(quantity).deviation;
                let (harmonic, morse) =
                    (last(&off, Role::Parabola).unwrap(), last(&off, Role::Morse).unwrap());
                assert!(harmonic < -1.0 && morse.abs() < 0.5 * harmonic.abs(), "{harmonic} {morse}");
            }
            let length = picture(ThermalQuantity::MeanLength);
            assert!(last(&length.deviation, Role::Parabola).unwrap() < -1.0, "a bond grows with temperature");
        }
        assert!(findings_without_levels());
    }

    fn findings_without_levels() -> bool {
        let text = "r / angstrom, E / hartree\n1.0,0.1\n1.2,0.02\n1.4,0.0\n1.6,0.01\n1.8,0.03\n2.0,0.05\n";
        let scan = crate::scan::read::read_scan("x.csv", text.as_bytes(), &Default::default()).unwrap();
        let findings = crate::study::study(&scan, &Settings::default()).unwrap();
        thermal_picture(&findings, ThermalQuantity::Entropy, 1000.0).is_none()
    }
}
