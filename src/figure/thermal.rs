//! Heat capacity of the bond over temperature: numerical, harmonic, Morse.

use super::{Axis, Figure, Role, Series, Shape};
use crate::findings::Findings;
use crate::thermal::{Averages, ThermalPoint, thermal};

const POINTS: usize = 300;

/// C_V of the vibration over temperature, up to the highest temperature of the settings; the temperatures
/// of the settings as points.
pub fn thermal_figure(findings: &Findings) -> Figure {
    let x = Axis { title: "temperature", unit: "K" };
    let y = Axis { title: "vibrational heat capacity", unit: "J/(mol K)" };
    let mut series = Vec::new();
    let highest = findings.thermal.iter().map(|p| p.kelvin).fold(0.0, f64::max);
    if let Some(input) = findings.thermal_input().filter(|_| highest > 0.0) {
        if let Some(limit) = findings.reach.as_ref().and_then(|r| r.temperature_kelvin.partition_function) {
            series.push(Series {
                role: Role::Reach,
                label: "harmonic q within 1 %".to_owned(),
                about: "Up to where |ln q(harmonic) − ln q| ≤ 0.01.".to_owned(),
                strong: None,
                shape: Shape::Band(None, Some(limit)),
            });
        }
        let mesh: Vec<f64> = (1..=POINTS).map(|i| highest * i as f64 / POINTS as f64).collect();
        let found = thermal(&input, &mesh);
        let mut add = |role, label: &str, about: &str, of: fn(&ThermalPoint) -> Option<Averages>| {
            let at = |p: &ThermalPoint| Some([p.kelvin, of(p)?.heat_capacity_joule_per_mole_kelvin()]);
            let points: Vec<[f64; 2]> = found.iter().filter_map(at).collect();
            if !points.is_empty() {
                series.push(Series {
                    role,
                    label: label.to_owned(),
                    about: about.to_owned(),
                    strong: None,
                    shape: Shape::Line(points),
                });
            }
        };
        add(Role::Parabola, "harmonic", "Of ω_e from k = V″(r_e), in closed form.", |p| p.harmonic);
        add(Role::Morse, "Morse fit", "Over the levels of the Morse fit.", |p| p.morse);
        add(Role::Scanned, "numerical", "Over the levels of the curve.", |p| Some(p.vibrational));
        let at = |p: &ThermalPoint| [p.kelvin, p.vibrational.heat_capacity_joule_per_mole_kelvin()];
        series.push(Series {
            role: Role::Scanned,
            label: "numerical".to_owned(),
            about: "At the temperatures of the settings.".to_owned(),
            strong: None,
            shape: Shape::Points(findings.thermal.iter().map(at).collect()),
        });
    }
    Figure { x, y, series }
}
