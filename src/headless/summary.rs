//! The readable summary of a study on standard output.

mod beyond;

use crate::digits::{fixed, rounded, signed, with_uncertainty};
use crate::estimate::Estimate;
use crate::export::parameters::ParameterUnits;
use crate::findings::{Findings, FitFindings};
use crate::fit::{ParameterUnit, WindowStudy};
use crate::potential::curve::OuterTail;
use crate::reach::{EndedBy, Interval, TemperatureReach};
use crate::units::{ANGSTROM_PER_BOHR, EnergyUnit, LengthUnit, to_angstrom, to_per_cm};
use crate::verdict::sentence;
use std::fmt::Write as _;

/// The summary, several lines, ending with a line feed.
///
/// `units`: of the force constants.
pub fn summary(findings: &Findings, units: &ParameterUnits) -> String {
    let mut text = String::new();
    head(&mut text, findings);
    let _ = writeln!(text, "\n{}\n", sentence(findings));
    if findings.curve.is_some() {
        constants(&mut text, findings, units);
        fits(&mut text, findings, units);
        levels(&mut text, findings);
        reach(&mut text, findings);
        force_field(&mut text, findings, units);
        thermal(&mut text, findings);
        beyond::beyond(&mut text, findings);
    }
    notices(&mut text, findings);
    in_ascii(&text)
}

/// The summary goes through pipes and old terminals: signs of the window's typography become ASCII.
fn in_ascii(text: &str) -> String {
    text.replace("cm⁻¹", "cm-1").replace('Å', "angstrom").replace(['−', '–'], "-").replace('…', "...")
}

fn head(text: &mut String, findings: &Findings) {
    let source = &findings.source;
    let used = source.points.iter().filter(|p| p.used).count();
    let _ = write!(text, "{}  {}", source.file_name, source.curve);
    if let Some(masses) = &findings.masses {
        if let Some(atoms) = &masses.atoms {
            let names: Vec<String> = atoms.iter().map(|a| format!("{}{}", a.mass_number, a.symbol)).collect();
            let _ = write!(text, "  {}", names.join(" "));
        }
        let _ = write!(text, "  reduced mass {} u", rounded(masses.reduced_mass_u.value, 9));
    }
    let _ = write!(text, "\n{used} of {} points in use", source.points.len());
    if let Some(curve) = &findings.curve {
        let (from, to) = curve.scan_range_bohr;
        let _ =
            write!(text, ", {} to {} angstrom", rounded(to_angstrom(from), 5), rounded(to_angstrom(to), 5));
        let _ = write!(text, "; curve: {}", curve.kind);
        match curve.outer {
            OuterTail::HardWall { .. } => {}
            OuterTail::InversePower { asymptote_hartree, assumed, .. }
            | OuterTail::Exponential { asymptote_hartree, assumed, .. } => {
                let depth = to_per_cm(asymptote_hartree - curve.v_e_hartree.value);
                let given = findings.settings.interpolation.asymptote.is_some();
                let word = match (assumed, given) {
                    (true, _) => "assumed",
                    (false, true) => "given",
                    (false, false) => "from the tail",
                };
                let _ = write!(text, "; asymptote {} cm-1 above the minimum ({word})", fixed(depth, 0));
            }
        }
    }
    text.push('\n');
}

fn row(text: &mut String, name: &str, estimate: Option<Estimate>, unit: &str, note: &str) {
    if let Some(e) = estimate {
        let number = with_uncertainty(e.value, e.std_error, 8);
        let line = format!("  {name:<22}{number:>22}  {unit:<10}{note}");
        let _ = writeln!(text, "{}", line.trim_end());
    }
}

fn constants(text: &mut String, findings: &Findings, units: &ParameterUnits) {
    let Some(curve) = &findings.curve else { return };
    text.push_str("Constants of the curve\n");
    row(text, "r_e", Some(curve.r_e_bohr.scaled(ANGSTROM_PER_BOHR)), "angstrom", "");
    row(text, "energy at r_e", Some(curve.v_e_hartree), "hartree", "");
    let (unit, factor) = units.of(ParameterUnit::ForceConstant);
    let k = curve.derivatives_hartree[0].map(|k| k.scaled(factor));
    row(text, &format!("k ({})", units.convention.formula()), k, &unit, "");
    let constants = &findings.constants;
    let levels = constants.from_levels.as_ref();
    let beside = |e: Option<Estimate>| {
        e.map_or_else(String::new, |e| {
            format!("from levels: {}", with_uncertainty(e.value, e.std_error.filter(|s| *s > 0.0), 7))
        })
    };
    if let Some(d) = &constants.from_derivatives {
        let omega = beside(levels.map(|l| l.omega_e_per_cm));
        row(text, "omega_e", Some(d.omega_e_per_cm), "cm-1", &omega);
        let anharmonic = beside(levels.and_then(|l| l.omega_e_x_e_per_cm));
        row(text, "omega_e x_e", d.omega_e_x_e_per_cm, "cm-1", &anharmonic);
        row(text, "B_e", Some(d.b_e_per_cm), "cm-1", &beside(levels.and_then(|l| l.b_e_per_cm)));
        row(text, "alpha_e", d.alpha_e_per_cm, "cm-1", &beside(levels.and_then(|l| l.alpha_e_per_cm)));
        row(text, "centrifugal D_e", Some(d.centrifugal_d_e_per_cm), "cm-1", "");
    }
    row(text, "zero-point energy", constants.zero_point_energy_per_cm, "cm-1", "");
    row(text, "fundamental 1 <- 0", constants.fundamental_per_cm, "cm-1", "");
    row(text, "well depth D_e", constants.well_depth_per_cm, "cm-1", "");
    row(text, "D_0", constants.d_0_per_cm, "cm-1", "");
    text.push('\n');
}

fn fits(text: &mut String, findings: &Findings, units: &ParameterUnits) {
    let first = findings.fits.iter().find_map(|f| f.result.as_ref().ok());
    let Some(first) = first else {
        text.push_str("Fits\n");
        findings.fits.iter().for_each(|f| fit(text, f, units));
        text.push('\n');
        return;
    };
    let edge = |value: f64| rounded(first.window.unit.convert(value, LengthUnit::Angstrom), 5);
    let _ = writeln!(
        text,
        "Fits in the window {} to {} angstrom ({} points)",
        edge(first.window.from),
        edge(first.window.to),
        first.points
    );
    findings.fits.iter().for_each(|f| fit(text, f, units));
    if let Some(sentence) = &findings.comparison.sentence {
        let _ = writeln!(text, "  {sentence}");
    }
    if let Some(study) = &findings.window_study {
        let _ = writeln!(text, "  {}", window_study(study));
    }
    text.push('\n');
}

/// What a window study proposes, in a sentence.
fn window_study(study: &WindowStudy) -> String {
    let done = study.fits.len();
    let plateau = study.proposed.and_then(|p| study.plateaus.get(p));
    let (Some(plateau), Some(proposal)) = (plateau, study.proposal()) else {
        return format!("Window study: {done} fits, no window width over which omega_e settles.");
    };
    let model = study.models[plateau.model];
    let degree = model.degree.map_or_else(String::new, |d| format!(" of degree {d}"));
    let edge = |value: f64| rounded(proposal.window.unit.convert(value, LengthUnit::Angstrom), 5);
    format!(
        "Window study: {done} fits; omega_e is flat to {} % over half widths of {} to {} angstrom for the {}{degree}: take \
         the window {} to {} angstrom.",
        rounded(100.0 * plateau.spread, 2),
        fixed(to_angstrom(plateau.from_half_width_bohr), 3),
        fixed(to_angstrom(plateau.to_half_width_bohr), 3),
        model.family.word(),
        edge(proposal.window.from),
        edge(proposal.window.to)
    )
}

fn fit(text: &mut String, findings: &FitFindings, units: &ParameterUnits) {
    let family = findings.request.family.word();
    match &findings.result {
        Err(error) => {
            let _ = writeln!(text, "  {family}: {error}");
        }
        Ok(fit) => {
            let degree = fit.degree.map_or_else(String::new, |d| format!(" of degree {d}"));
            let _ = writeln!(
                text,
                "  {family}{degree}: rms residual {} cm-1, largest {} cm-1",
                rounded(to_per_cm(fit.rms_residual_hartree), 3),
                rounded(to_per_cm(fit.largest_residual_hartree), 3)
            );
            for p in &fit.parameters {
                let (unit, factor) = units.of(p.unit);
                row(text, &format!("  {}", p.name), Some(p.estimate.scaled(factor)), &unit, "");
            }
            for (name, estimate) in &findings.constants_per_cm {
                row(text, &format!("  {name}"), *estimate, "cm-1", "");
            }
        }
    }
}

/// How many levels the summary lists; the findings file has all.
const LISTED: usize = 12;

fn levels(text: &mut String, findings: &Findings) {
    if findings.levels.is_empty() {
        return;
    }
    let supported = findings.levels.iter().filter(|l| !l.leans_on_tail).count();
    let _ = writeln!(
        text,
        "Levels: {} below the limit, {supported} of them supported by the scan\n     v        E/cm-1       B_v/cm-1   - harmonic   - Morse   beyond turning points",
        findings.levels.len()
    );
    for level in findings.levels.iter().take(LISTED) {
        let morse = level.minus_morse_per_cm.map_or_else(|| "–".to_owned(), |d| signed(d, 2));
        let _ = writeln!(
            text,
            "  {:>4}  {:>12}  {:>13}  {:>11}  {:>8}   {:>6} %{}",
            level.v,
            fixed(level.energy_per_cm, 3),
            rounded(level.b_v_per_cm, 7),
            signed(level.minus_harmonic_per_cm, 2),
            morse,
            fixed(100.0 * level.forbidden_probability, 2),
            if level.leans_on_tail { "   leans on the tail" } else { "" }
        );
    }
    if findings.levels.len() > LISTED {
        let _ = writeln!(text, "  ... {} more in the findings file", findings.levels.len() - LISTED);
    }
    text.push('\n');
}

fn reach(text: &mut String, findings: &Findings) {
    let Some(reach) = &findings.reach else { return };
    let _ = writeln!(
        text,
        "Reach of the parabola at a tolerance of {}",
        crate::verdict::percent(reach.tolerance)
    );
    let _ = writeln!(text, "  energy                {}", interval_line(&reach.energy));
    let _ = writeln!(text, "  force                 {}", interval_line(&reach.force));
    let tolerance = reach.absolute_tolerance;
    let name = format!("energy, {} {}", tolerance.value, tolerance.unit.name());
    let _ = writeln!(text, "  {name:<21} {}", interval_line(&reach.absolute));
    let highest = |v: Option<usize>| v.map_or_else(|| "none".to_owned(), |v| format!("v <= {v}"));
    if let Some(levels) = reach.levels {
        let tolerance = rounded(levels.tolerance_per_cm, 4);
        let _ =
            writeln!(text, "  levels                {} (within {tolerance} cm-1)", highest(levels.highest_v));
    }
    if let Some(spacing) = reach.spacing {
        let tolerance = rounded(spacing.tolerance_per_cm, 4);
        let _ = writeln!(
            text,
            "  spacings              {} (within {tolerance} cm-1)",
            highest(spacing.highest_v)
        );
    }
    temperatures(text, &reach.temperature_kelvin);
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        let _ = writeln!(text, "  zero-point amplitude  {} angstrom", fixed(to_angstrom(amplitude), 4));
    }
    text.push('\n');
}

/// Both ends with their errors, and how far from the minimum they lie in energy.
fn interval_line(interval: &Interval) -> String {
    let side = |end: Option<Estimate>, ended: EndedBy| match (end, ended) {
        (Some(e), _) => {
            let e = e.scaled(ANGSTROM_PER_BOHR);
            let sign = if e.value > 0.0 { "+" } else { "" };
            // Errors below the last digit shown are not worth showing.
            let error = e.std_error.filter(|error| *error > 5e-6);
            format!(
                "{sign}{}",
                error.map_or_else(|| fixed(e.value, 5), |s| with_uncertainty(e.value, Some(s), 5))
            )
        }
        (None, EndedBy::Barrier) => "barrier".to_owned(),
        (None, _) => "end of scan".to_owned(),
    };
    if interval.x_minus_bohr.is_none() && interval.x_plus_bohr.is_none() {
        let scan = (interval.ended_by_minus, interval.ended_by_plus) == (EndedBy::Scan, EndedBy::Scan);
        return if scan { "the whole scan".to_owned() } else { "the whole well".to_owned() };
    }
    let ends =
        (side(interval.x_minus(), interval.ended_by_minus), side(interval.x_plus(), interval.ended_by_plus));
    let strain: Vec<String> = interval
        .energies_hartree
        .iter()
        .flatten()
        .map(|e| rounded(EnergyUnit::KilocaloriePerMole.from_hartree(*e), 3))
        .collect();
    let strain = match strain.as_slice() {
        [] => String::new(),
        some => format!(" (V - V_e there: {} kcal/mol)", some.join(", ")),
    };
    format!("{} ... {} angstrom{strain}", ends.0, ends.1)
}

/// Up to which temperature the harmonic picture stands, by three quantities.
fn temperatures(text: &mut String, reach: &TemperatureReach) {
    let Some(looked) = reach.looked_up_to else { return };
    for (name, limit, within) in [
        ("partition function", reach.partition_function, "1 %"),
        ("mean energy", reach.mean_energy, "0.01 k T"),
        ("mean square x", reach.mean_square_x, "5 %"),
    ] {
        let words = match limit {
            Some(kelvin) if kelvin < 1.0 => format!("not within {within} at any temperature"),
            Some(kelvin) => format!("within {within} up to {} K", fixed(kelvin.floor(), 0)),
            None => {
                format!("within {within} up to {} K at least, where the levels end", fixed(looked.floor(), 0))
            }
        };
        let _ = writeln!(text, "  {name:<22}{words}");
    }
}

/// What a force field wants of this bond: k in its unit and convention, and where it holds.
fn force_field(text: &mut String, findings: &Findings, units: &ParameterUnits) {
    let (Some(reach), Some(curve)) = (&findings.reach, &findings.curve) else { return };
    let Some(k) = curve.derivatives_hartree[0] else { return };
    let (unit, factor) = units.of(ParameterUnit::ForceConstant);
    let k = k.scaled(factor);
    let r_e = curve.r_e_bohr.scaled(ANGSTROM_PER_BOHR);
    let _ = writeln!(
        text,
        "In a force field, {}: k = {} {unit}, r_0 = {} angstrom",
        units.convention.formula(),
        with_uncertainty(k.value, k.std_error, 6),
        with_uncertainty(r_e.value, r_e.std_error, 6)
    );
    let tolerance = reach.absolute_tolerance;
    let _ = writeln!(
        text,
        "  this term stands for the curve within {} {}: {}",
        tolerance.value,
        tolerance.unit.name(),
        interval_line(&reach.absolute)
    );
    for fit in &findings.fits {
        let Some(reach) = &fit.reach else { continue };
        let name = fit_name(fit);
        let words = match &reach.interval {
            Some(interval) => interval_line(interval),
            None => "nowhere: off by more at r_e itself".to_owned(),
        };
        let _ = writeln!(text, "  {name:<25}{words}");
    }
    let fitted = findings.fits.iter().any(|f| f.reach.is_some());
    if fitted {
        let _ = writeln!(
            text,
            "  (fits: |V_fit - V| at most {} of V - V_e or {} {}, whichever is larger)",
            crate::verdict::percent(reach.tolerance),
            tolerance.value,
            tolerance.unit.name()
        );
    }
    text.push('\n');
}

/// Family and degree of a fit.
fn fit_name(fit: &FitFindings) -> String {
    let degree = fit.result.as_ref().ok().and_then(|f| f.degree);
    degree.map_or_else(
        || fit.request.family.word().to_owned(),
        |d| format!("{} of degree {d}", fit.request.family.word()),
    )
}

/// Numerical averages beside harmonic ones; the findings file and the thermal table have the rest.
fn thermal(text: &mut String, findings: &Findings) {
    if findings.thermal.is_empty() {
        return;
    }
    text.push_str(
        "Thermal averages of the vibration (harmonic in brackets)\n       T/K             q              U/(kJ/mol)        C_V/(J/(mol K))    rms x/angstrom\n",
    );
    for point in &findings.thermal {
        let beside = |value: f64, harmonic: Option<f64>, decimals: usize| {
            let harmonic = harmonic.map_or_else(|| "–".to_owned(), |h| fixed(h, decimals));
            format!("{} ({harmonic})", fixed(value, decimals))
        };
        let (v, h) = (&point.vibrational, point.harmonic.as_ref());
        let line = format!(
            "  {:>8}  {:>18}  {:>18}  {:>18}  {:>18}",
            rounded(point.kelvin, 6),
            beside(v.partition_function, h.map(|h| h.partition_function), 5),
            beside(v.mean_energy_kilojoule_per_mole(), h.map(|h| h.mean_energy_kilojoule_per_mole()), 4),
            beside(
                v.heat_capacity_joule_per_mole_kelvin(),
                h.map(|h| h.heat_capacity_joule_per_mole_kelvin()),
                3
            ),
            beside(
                to_angstrom(point.mean_square_x_bohr2.sqrt()),
                point.harmonic_mean_square_x_bohr2.map(|x2| to_angstrom(x2.sqrt())),
                5
            ),
        );
        let _ = writeln!(text, "{line}{}", if point.converged { "" } else { "  not converged" });
    }
    let gases = findings.thermal.iter().filter_map(|p| Some((p.kelvin, p.rotating?.ideal_gas?)));
    for (kelvin, gas) in gases {
        let _ = writeln!(
            text,
            "  ideal gas at 1 bar, {} K: C_p {}, S {} J/(mol K), H - H(0) {} kJ/mol",
            rounded(kelvin, 6),
            fixed(gas.heat_capacity_joule_per_mole_kelvin, 3),
            fixed(gas.entropy_joule_per_mole_kelvin, 3),
            fixed(gas.enthalpy_kilojoule_per_mole, 3)
        );
    }
    text.push('\n');
}

fn notices(text: &mut String, findings: &Findings) {
    for notice in &findings.notices {
        let at = notice.at_angstrom();
        let place = match at.as_slice() {
            [] => String::new(),
            [one] => format!(" (at {} angstrom)", rounded(*one, 5)),
            many => {
                let list: Vec<String> = many.iter().take(6).map(|r| rounded(*r, 5)).collect();
                let more = if many.len() > 6 { ", ..." } else { "" };
                format!(" (at {}{more} angstrom)", list.join(", "))
            }
        };
        let _ = writeln!(text, "{}: {}{place}", notice.severity.word(), notice.text);
    }
}
