//! The findings file, format version 1: one function a section, in the order of the format page
//! (`assets/FINDINGS.md`). The JSON Schema beside that page is tested against real output.
//!
//! The sections are written as literal JSON values and not as mirror structs: the code then reads like
//! the format page, and a key cannot differ between the two without being seen.

mod fits;
mod windows;

use super::numbers::{angstrom, estimated, null_what_was_lost, number, numbers, quantity};
use crate::estimate::Estimate;
use crate::findings::{Findings, NextPoint, Point};
use crate::fit::ParameterUnit;
use crate::notice::{Code, Notice};
use crate::potential::curve::{InnerTail, OuterTail, ScanCurve};
use crate::radial::Level;
use crate::reach::{EndedBy, Interval, LevelReach, Reach};
use crate::species::Masses;
use crate::spectroscopy::Constants;
use crate::thermal::{Averages, ThermalPoint};
use crate::units::{
    ANGSTROM_PER_BOHR, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, PER_CM_PER_HARTREE, to_angstrom, to_per_cm,
};
use fits::fit;
use serde_json::{Value, json};

/// The value of the key `format`.
pub const FORMAT: &str = "parabound.findings";
/// The value of the key `format_version`.
pub const FORMAT_VERSION: u32 = 1;

/// One study as text, ending with a line feed.
pub fn findings_to_string(findings: &Findings) -> String {
    let mut text = format!("{:#}", findings_to_value(findings));
    text.push('\n');
    text
}

/// Several studies as one JSON array, ending with a line feed; a single one is not wrapped.
pub fn all_to_string(findings: &[&Findings]) -> String {
    if let [one] = findings {
        return findings_to_string(one);
    }
    let mut text = format!("{:#}", Value::Array(findings.iter().map(|f| findings_to_value(f)).collect()));
    text.push('\n');
    text
}

/// The kind of machine that this program was built for: another one may round its last digits in another way.
pub fn platform() -> String {
    format!("{}-{}", std::env::consts::ARCH, std::env::consts::OS)
}

/// One study as a JSON value.
pub fn findings_to_value(findings: &Findings) -> Value {
    let source = &findings.source;
    let mut value = json!({
        "format": FORMAT,
        "format_version": FORMAT_VERSION,
        "made_by": {"program": "parabound", "version": env!("CARGO_PKG_VERSION"), "platform": platform()},
        "source": {
            "file_name": source.file_name,
            "sha256": source.sha256,
            "layout": source.layout.word(),
            "curve": source.curve,
            "made": source.made,
            "length_unit": source.length_unit.name(),
            "energy_unit": source.energy_unit.name(),
            "length_column": source.length_column,
            "points": source.points.iter().map(point).collect::<Vec<_>>(),
        },
        "masses": findings.masses.as_ref().map(masses),
        "settings": findings.settings,
        "curve": findings.curve.as_deref().map(curve),
        "fits": findings.fits.iter().map(fit).collect::<Vec<_>>(),
        "comparison": fits::comparison(&findings.comparison),
        "window_study": findings.window_study.as_ref().map(windows::window_study),
        "levels": findings.levels.iter().chain(&findings.rotational_levels).map(level).collect::<Vec<_>>(),
        "constants": constants(&findings.constants),
        "reach": findings.reach.as_ref().map(reach),
        "thermal": findings.thermal.iter().map(thermal_point).collect::<Vec<_>>(),
        "next_points": findings.next_points.iter().map(next_point).collect::<Vec<_>>(),
        "notices": findings.notices.iter().map(notice).collect::<Vec<_>>(),
    });
    if let Value::Object(map) = &mut value {
        // Before the notices, which come last.
        let notices = map.remove("notices");
        map.append(&mut super::extras::sections(findings));
        map.extend(notices.map(|list| ("notices".to_owned(), list)));
    }
    let lost = null_what_was_lost(&mut value);
    if !lost.is_empty()
        && let Some(Value::Array(notices)) = value.get_mut("notices")
    {
        let text = format!("Not a finite number, written as null: {}.", lost.join(", "));
        notices.push(notice(&Notice::caution(Code::NotFinite, text)));
    }
    value
}

fn per_cm(estimate: Option<Estimate>) -> Value {
    estimate.map_or(Value::Null, |e| estimated(e, 1.0, "cm-1"))
}

fn next_point(next: &NextPoint) -> Value {
    json!({"r": angstrom(next.r_bohr), "why": next.why})
}

fn point(point: &Point) -> Value {
    json!({
        "r": number(to_angstrom(point.r_bohr)),
        "energy": number(point.energy_hartree),
        "used": point.used,
        "weight": number(point.weight),
        "why_not": point.why_not, "note": point.note,
    })
}

pub(super) fn masses(masses: &Masses) -> Value {
    let atoms = masses.atoms.as_ref().map(|atoms| {
        atoms
            .iter()
            .map(|a| {
                json!({"symbol": a.symbol, "mass_number": a.mass_number, "mass": estimated(a.mass_u, 1.0, "u")})
            })
            .collect::<Vec<_>>()
    });
    json!({
        "atoms": atoms,
        "charge": masses.charge,
        "reduced_mass": estimated(masses.reduced_mass_u, 1.0, "u"),
    })
}

fn curve(curve: &ScanCurve) -> Value {
    let derivative = |index: usize, power: i32| {
        curve.derivatives_hartree[index].map_or(Value::Null, |e| {
            let unit = if power == 2 { "N/m".to_owned() } else { format!("cm-1/angstrom^{power}") };
            let factor = if power == 2 {
                NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2
            } else {
                PER_CM_PER_HARTREE / ANGSTROM_PER_BOHR.powi(power)
            };
            estimated(e, factor, &unit)
        })
    };
    json!({
        "kind": curve.kind,
        "spline_variable": curve.variable,
        "scan_range": {"from": angstrom(curve.scan_range_bohr.0), "to": angstrom(curve.scan_range_bohr.1)},
        "minimum": {
            "r_e": estimated(curve.r_e_bohr, ANGSTROM_PER_BOHR, "angstrom"),
            "energy": estimated(curve.v_e_hartree, 1.0, "hartree"),
        },
        "derivatives": {"second": derivative(0, 2), "third": derivative(1, 3), "fourth": derivative(2, 4)},
        "tails": {"inner": inner_tail(curve.inner), "outer": outer_tail(curve.outer)},
    })
}

fn inner_tail(tail: InnerTail) -> Value {
    match tail {
        InnerTail::Exponential { b_per_bohr } => {
            json!({"kind": "exponential", "b": quantity(b_per_bohr / ANGSTROM_PER_BOHR, "1/angstrom")})
        }
        InnerTail::HardWall => json!({"kind": "hard-wall", "b": null}),
    }
}

fn outer_tail(tail: OuterTail) -> Value {
    match tail {
        OuterTail::InversePower { n, c_n_hartree_bohr_n, asymptote_hartree, assumed } => {
            let factor = PER_CM_PER_HARTREE * ANGSTROM_PER_BOHR.powi(n.cast_signed());
            json!({
                "kind": "inverse-power",
                "asymptote": quantity(asymptote_hartree, "hartree"),
                "assumed": assumed,
                "n": n,
                "c_n": quantity(c_n_hartree_bohr_n * factor, &format!("cm-1 angstrom^{n}")),
                "b": null,
                "wall": null,
            })
        }
        OuterTail::Exponential { b_per_bohr, asymptote_hartree, assumed } => json!({
            "kind": "exponential",
            "asymptote": quantity(asymptote_hartree, "hartree"),
            "assumed": assumed,
            "n": null,
            "c_n": null,
            "b": quantity(b_per_bohr / ANGSTROM_PER_BOHR, "1/angstrom"),
            "wall": null,
        }),
        OuterTail::HardWall { r_bohr } => json!({
            "kind": "hard-wall",
            "asymptote": null,
            "assumed": false,
            "n": null,
            "c_n": null,
            "b": null,
            "wall": angstrom(r_bohr),
        }),
    }
}

/// Unit outside and factor from atomic units for a fitted parameter.
pub fn parameter_unit(unit: ParameterUnit) -> (String, f64) {
    match unit {
        ParameterUnit::TotalEnergy => ("hartree".to_owned(), 1.0),
        ParameterUnit::Wavenumber => ("cm-1".to_owned(), PER_CM_PER_HARTREE),
        ParameterUnit::Length => ("angstrom".to_owned(), ANGSTROM_PER_BOHR),
        ParameterUnit::InverseLength => ("1/angstrom".to_owned(), 1.0 / ANGSTROM_PER_BOHR),
        ParameterUnit::InverseLengthPower(n) => {
            (format!("1/angstrom^{n}"), ANGSTROM_PER_BOHR.powi(-n.cast_signed()))
        }
        ParameterUnit::ForceConstant => ("N/m".to_owned(), NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2),
        ParameterUnit::Coefficient(n) => {
            (format!("cm-1/angstrom^{n}"), PER_CM_PER_HARTREE / ANGSTROM_PER_BOHR.powi(n.cast_signed()))
        }
        ParameterUnit::Dimensionless => ("1".to_owned(), 1.0),
    }
}

fn level(level: &Level) -> Value {
    let energy = per_cm(Some(level.energy_estimate_per_cm()));
    json!({
        "v": level.v,
        "j": level.j,
        "energy": energy,
        "below_asymptote": level.below_asymptote_per_cm.map(|e| quantity(e, "cm-1")),
        "b_v": quantity(level.b_v_per_cm, "cm-1"),
        "d_v": quantity(level.d_v_per_cm, "cm-1"),
        "h_v": level.h_v_per_cm.map(|h| quantity(h, "cm-1")),
        "turning_points": {
            "inner": angstrom(level.inner_turning_point_bohr),
            "outer": angstrom(level.outer_turning_point_bohr),
        },
        "mean_r": angstrom(level.mean_r_bohr),
        "mean_square_x": quantity(level.mean_square_x_bohr2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR, "angstrom^2"),
        "forbidden_probability": number(level.forbidden_probability),
        "inside_reach": number(level.inside_reach),
        "outside_scan": number(level.outside_scan),
        "leans_on_tail": level.leans_on_tail,
        "minus_harmonic": quantity(level.minus_harmonic_per_cm, "cm-1"),
        "minus_morse": level.minus_morse_per_cm.map(|d| quantity(d, "cm-1")),
    })
}

fn constants(constants: &Constants) -> Value {
    let from_derivatives = constants.from_derivatives.as_ref().map(|c| {
        json!({
            "omega_e": per_cm(Some(c.omega_e_per_cm)),
            "omega_e_x_e": per_cm(c.omega_e_x_e_per_cm),
            "b_e": per_cm(Some(c.b_e_per_cm)),
            "alpha_e": per_cm(c.alpha_e_per_cm),
            "centrifugal_d_e": per_cm(Some(c.centrifugal_d_e_per_cm)),
            "y_00": per_cm(c.y_00_per_cm),
            "y_kl": c.dunham_per_cm.iter().map(super::extras::coefficient).collect::<Vec<_>>(),
        })
    });
    let from_levels = constants.from_levels.as_ref().map(|c| {
        json!({
            "omega_e": per_cm(Some(c.omega_e_per_cm)),
            "omega_e_x_e": per_cm(c.omega_e_x_e_per_cm),
            "omega_e_y_e": per_cm(c.omega_e_y_e_per_cm),
            "b_e": per_cm(c.b_e_per_cm),
            "alpha_e": per_cm(c.alpha_e_per_cm),
            "levels_used": c.levels_used,
        })
    });
    json!({
        "from_derivatives": from_derivatives,
        "from_levels": from_levels,
        "zero_point_energy": per_cm(constants.zero_point_energy_per_cm),
        "fundamental": per_cm(constants.fundamental_per_cm),
        "d_e": per_cm(constants.well_depth_per_cm),
        "d_0": per_cm(constants.d_0_per_cm),
    })
}

pub(super) fn interval(interval: &Interval) -> Value {
    let word = |ended: EndedBy| match ended {
        EndedBy::Tolerance => "tolerance",
        EndedBy::Scan => "scan",
        EndedBy::Barrier => "barrier",
    };
    let end = |e: Option<Estimate>| e.map(|e| estimated(e, ANGSTROM_PER_BOHR, "angstrom"));
    let energy = |i: usize| interval.energies_hartree[i].map(|e| quantity(to_per_cm(e), "cm-1"));
    json!({
        "x_minus": end(interval.x_minus()),
        "x_plus": end(interval.x_plus()),
        "leading_order": end(interval.leading_order()),
        "ended_by": {"x_minus": word(interval.ended_by_minus), "x_plus": word(interval.ended_by_plus)},
        "energy_at": {"x_minus": energy(0), "x_plus": energy(1)},
    })
}

fn level_reach(reach: Option<LevelReach>) -> Value {
    reach.map_or(
        Value::Null,
        |r| json!({"tolerance": quantity(r.tolerance_per_cm, "cm-1"), "highest_v": r.highest_v}),
    )
}

fn reach(reach: &Reach) -> Value {
    let kelvin = |t: Option<f64>| t.map(|t| quantity(t, "K"));
    json!({
        "tolerance": number(reach.tolerance),
        "energy": interval(&reach.energy),
        "force": interval(&reach.force),
        "absolute": {
            "tolerance": quantity(reach.absolute_tolerance.value, reach.absolute_tolerance.unit.name()),
            "energy": interval(&reach.absolute),
        },
        "levels": level_reach(reach.levels),
        "spacing": level_reach(reach.spacing),
        "temperature": {
            "partition_function": kelvin(reach.temperature_kelvin.partition_function),
            "mean_energy": kelvin(reach.temperature_kelvin.mean_energy),
            "mean_square_x": kelvin(reach.temperature_kelvin.mean_square_x),
            "looked_up_to": kelvin(reach.temperature_kelvin.looked_up_to),
        },
        "zero_point_amplitude": reach.zero_point_amplitude_bohr.map(angstrom),
    })
}

fn averages(averages: &Averages) -> Value {
    json!({
        "partition_function": number(averages.partition_function),
        "mean_energy": quantity(averages.mean_energy_kilojoule_per_mole(), "kJ/mol"),
        "heat_capacity": quantity(averages.heat_capacity_joule_per_mole_kelvin(), "J/(mol K)"),
        "entropy": quantity(averages.entropy_joule_per_mole_kelvin(), "J/(mol K)"),
    })
}

fn thermal_point(point: &ThermalPoint) -> Value {
    let square = |x2: f64| quantity(x2 * ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR, "angstrom^2");
    let harmonic = point.harmonic.as_ref().map(|h| {
        let mut value = averages(h);
        value["mean_square_x"] = point.harmonic_mean_square_x_bohr2.map_or(Value::Null, square);
        value
    });
    let morse = point.morse.as_ref().map(|m| {
        let mut value = averages(m);
        value["mean_r"] = point.morse_mean_r_bohr.map_or(Value::Null, angstrom);
        value["mean_square_x"] = point.morse_mean_square_x_bohr2.map_or(Value::Null, square);
        value
    });
    let rovibrational = point.rotating.map(|r| {
        let mut value = averages(&r.rovibrational);
        value["harmonic"] = r.harmonic.as_ref().map_or(Value::Null, averages);
        value["morse"] = r.morse.as_ref().map_or(Value::Null, averages);
        value["mean_r"] = angstrom(r.mean_r_bohr);
        value["mean_square_x"] = square(r.mean_square_x_bohr2);
        value["unsupported_share"] = r.unsupported_share.into();
        value["converged"] = r.converged.into();
        value
    });
    let ideal_gas = point.rotating.and_then(|r| r.ideal_gas).map(|gas| {
        json!({
            "heat_capacity": quantity(gas.heat_capacity_joule_per_mole_kelvin, "J/(mol K)"),
            "entropy": quantity(gas.entropy_joule_per_mole_kelvin, "J/(mol K)"),
            "enthalpy": quantity(gas.enthalpy_kilojoule_per_mole, "kJ/mol"),
        })
    });
    json!({
        "temperature": quantity(point.kelvin, "K"),
        "vibrational": averages(&point.vibrational),
        "mean_r": angstrom(point.mean_r_bohr),
        "mean_square_x": square(point.mean_square_x_bohr2),
        "harmonic": harmonic,
        "morse": morse,
        "populations": numbers(&point.populations),
        "rovibrational": rovibrational,
        "ideal_gas": ideal_gas,
        "unsupported_share": point.unsupported_share,
        "converged": point.converged,
    })
}

fn notice(notice: &Notice) -> Value {
    let at = notice.at_angstrom();
    json!({
        "severity": notice.severity.word(),
        "code": notice.code.name(),
        "text": notice.text,
        "at": if at.is_empty() { Value::Null } else { numbers(&at) },
    })
}
