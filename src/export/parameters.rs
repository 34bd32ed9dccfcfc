//! The parameters of a fit as text or LaTeX, with value(uncertainty), unit and convention named.

use crate::digits::{rounded, with_uncertainty};
use crate::fit::comparison::label;
use crate::fit::{Fit, ParameterUnit};
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit, PER_CM_PER_HARTREE};
use std::fmt::Write as _;

/// The units in which parameters are written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ParameterUnits {
    /// Unit of well depths and coefficients. Total energies stay in hartree.
    pub energy: EnergyUnit,
    /// Unit of lengths and, inverted, of range parameters.
    pub length: LengthUnit,
    /// Unit of force constants.
    pub force_constant: ForceConstantUnit,
    /// What k stands for.
    pub convention: ForceConstantConvention,
}

impl Default for ParameterUnits {
    fn default() -> Self {
        Self {
            energy: EnergyUnit::PerCm,
            length: LengthUnit::Angstrom,
            force_constant: ForceConstantUnit::default(),
            convention: ForceConstantConvention::default(),
        }
    }
}

impl ParameterUnits {
    /// Name of the unit and factor from atomic units of a parameter.
    pub fn of(&self, unit: ParameterUnit) -> (String, f64) {
        let (energy, length) = (self.energy.name(), self.length.name());
        let (per_hartree, per_bohr) = (self.energy.per_hartree(), self.length.from_bohr(1.0));
        let power = |n: u32| per_bohr.powi(-n.cast_signed());
        match unit {
            ParameterUnit::TotalEnergy => ("hartree".to_owned(), 1.0),
            ParameterUnit::Wavenumber => (energy.to_owned(), per_hartree),
            ParameterUnit::Length => (length.to_owned(), per_bohr),
            ParameterUnit::InverseLength => (format!("1/{length}"), power(1)),
            ParameterUnit::InverseLengthPower(n) => (format!("1/{length}^{n}"), power(n)),
            ParameterUnit::ForceConstant => {
                let factor = self.force_constant.per_hartree_per_bohr2() * self.convention.of_curvature();
                (self.force_constant.name().to_owned(), factor)
            }
            ParameterUnit::Coefficient(n) => (format!("{energy}/{length}^{n}"), per_hartree * power(n)),
            ParameterUnit::Dimensionless => ("1".to_owned(), 1.0),
        }
    }
}

/// Significant digits of a value without an error.
const DIGITS: usize = 8;

/// One parameter a row: name, value(uncertainty), unit.
pub fn rows(fit: &Fit, units: &ParameterUnits) -> Vec<(String, String, String)> {
    let row = |name: &str, estimate: crate::estimate::Estimate, unit: ParameterUnit| {
        let (unit, factor) = units.of(unit);
        let e = estimate.scaled(factor);
        (name.to_owned(), with_uncertainty(e.value, e.std_error, DIGITS), unit)
    };
    let mut rows: Vec<(String, String, String)> =
        fit.parameters.iter().map(|p| row(&p.name, p.estimate, p.unit)).collect();
    // Every family has a curvature at its minimum; the harmonic one has it as a parameter.
    if !fit.parameters.iter().any(|p| p.unit == ParameterUnit::ForceConstant)
        && let Some(k) = fit.force_constant_hartree_per_bohr2()
    {
        rows.push(row("k", k, ParameterUnit::ForceConstant));
    }
    rows
}

/// What the numbers are, in one line.
fn caption(fit: &Fit, units: &ParameterUnits) -> String {
    let edge = |r: f64| rounded(fit.window.unit.convert(r, units.length), 5);
    format!(
        "{} fit, {} points from {} to {} {}, rms residual {} cm-1; k: {}",
        label(fit),
        fit.points,
        edge(fit.window.from),
        edge(fit.window.to),
        units.length.name(),
        rounded(fit.rms_residual_hartree * PER_CM_PER_HARTREE, 3),
        units.convention.formula()
    )
}

/// Standard errors in brackets count in the last digits given.
pub fn text(fit: &Fit, units: &ParameterUnits) -> String {
    let mut text = format!("{}\n", caption(fit, units));
    for (name, value, unit) in rows(fit, units) {
        let unit = if unit == "1" { "" } else { &unit };
        let line = format!("{name:<8}{value:>24}  {unit}");
        let _ = writeln!(text, "{}", line.trim_end());
    }
    text
}

/// A `tabular` of name, value(uncertainty) and unit, with the caption as a comment.
pub fn latex(fit: &Fit, units: &ParameterUnits) -> String {
    let mut text = format!("% {}\n\\begin{{tabular}}{{lll}}\n", caption(fit, units).replace('−', "-"));
    for (name, value, unit) in rows(fit, units) {
        let _ = writeln!(
            text,
            "${}$ & ${}$ & ${}$ \\\\",
            latex_name(&name),
            latex_number(&value),
            latex_unit(&unit)
        );
    }
    text.push_str("\\end{tabular}\n");
    text
}

fn latex_name(name: &str) -> String {
    let symbol = match name {
        "e_min" => "V_\\mathrm{e}",
        "r_e" => "r_\\mathrm{e}",
        "d_e" => "D_\\mathrm{e}",
        _ => "",
    };
    if !symbol.is_empty() {
        return symbol.to_owned();
    }
    if let Some(n) = name.strip_prefix("beta_") {
        return format!("\\beta_{{{n}}}");
    }
    match name.find(|c: char| c.is_ascii_digit()) {
        Some(at) if at > 0 => format!("{}_{{{}}}", &name[..at], &name[at..]),
        _ => name.to_owned(),
    }
}

fn latex_number(value: &str) -> String {
    let plain = value.replace('−', "-");
    match plain.split_once('e') {
        Some((mantissa, exponent)) => format!("{mantissa} \\times 10^{{{exponent}}}"),
        None => plain,
    }
}

/// `cm-1/angstrom^3` to `\mathrm{cm^{-1}\,\mathring{A}^{-3}}`.
fn latex_unit(unit: &str) -> String {
    if unit == "1" {
        return String::new();
    }
    let mut factors = Vec::new();
    let mut below = false;
    let word = |word: &str, below: bool| -> String {
        let (name, power) = match word.split_once('^') {
            Some((name, power)) => (name, power.parse().unwrap_or(1)),
            None if word == "cm-1" => ("cm", -1),
            None => (word, 1),
        };
        let power = if below { -power } else { power };
        let symbol = match name {
            "angstrom" => "\\mathring{A}",
            "hartree" => "E_h",
            "bohr" => "a_0",
            other => other,
        };
        if power == 1 { symbol.to_owned() } else { format!("{symbol}^{{{power}}}") }
    };
    for part in unit.split_inclusive('/') {
        for factor in part.trim_end_matches('/').trim_matches(['(', ')']).split(' ') {
            if factor != "1" && !factor.is_empty() {
                factors.push(word(factor, below));
            }
        }
        below = below || part.ends_with('/');
    }
    format!("\\mathrm{{{}}}", factors.join("\\,"))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::{Family, FitPoint, FitRequest, Variable, Window, fit};
    use crate::potential::{Morse, Potential};

    /// Invented: a Morse curve with alternating errors.
    fn fitted(request: FitRequest) -> Fit {
        let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
        let points: Vec<FitPoint> = (0..30)
            .map(|k| {
                let r_bohr = 1.1 + 0.025 * f64::from(k);
                let error = if k % 2 == 0 { 1e-6 } else { -1e-6 };
                FitPoint { r_bohr, energy_hartree: morse.energy_hartree(r_bohr) + error, weight: 1.0 }
            })
            .collect();
        fit(request, &points, Window { from: 1.1, to: 1.825, unit: LengthUnit::Bohr }).unwrap()
    }

    #[test]
    fn text_names_unit_and_convention() {
        let harmonic = fitted(FitRequest::plain(Family::Harmonic));
        let k = |units: &ParameterUnits| {
            let rows = rows(&harmonic, units);
            let (_, value, unit) = rows.iter().find(|(name, ..)| name == "k").unwrap().clone();
            (value.split('(').next().unwrap().parse::<f64>().unwrap(), unit)
        };
        let plain = ParameterUnits::default();
        let curvature = harmonic.parameters[2].estimate.value;
        for unit in ForceConstantUnit::ALL {
            for convention in [ForceConstantConvention::Half, ForceConstantConvention::Full] {
                let units = ParameterUnits { force_constant: unit, convention, ..plain };
                let (value, name) = k(&units);
                let want = curvature * unit.per_hartree_per_bohr2() * convention.of_curvature();
                assert!((value / want - 1.0).abs() < 0.05, "{value} {want} {name}");
                assert_eq!(name, unit.name());
                assert!(text(&harmonic, &units).contains(convention.formula()));
            }
        }
    }

    #[test]
    fn morse_parameters_follow_the_units_chosen() {
        let morse = fitted(FitRequest::plain(Family::Morse));
        let units = ParameterUnits {
            energy: EnergyUnit::KilojoulePerMole,
            length: LengthUnit::Nanometre,
            force_constant: ForceConstantUnit::KilojoulePerMoleNanometre2,
            convention: ForceConstantConvention::Full,
        };
        let written = text(&morse, &units);
        println!("{written}");
        let value = |name: &str| {
            let line = written.lines().find(|l| l.starts_with(name)).unwrap();
            let number = line.split_whitespace().nth(1).unwrap().split('(').next().unwrap();
            number.parse::<f64>().unwrap()
        };
        // In one system of units k x² is D_e a² x² for the full convention.
        assert!((value("k") / (value("d_e") * value("a").powi(2)) - 1.0).abs() < 1e-2, "{written}");
        assert!((value("d_e") / (0.17 * 2_625.499_64) - 1.0).abs() < 1e-2);
        let latex = latex(&morse, &units);
        for needle in [
            "\\begin{tabular}",
            "$D_\\mathrm{e}$ & $",
            "\\mathrm{kJ\\,mol^{-1}\\,nm^{-2}}",
            "V = k x^2",
            "nm^{-1}",
        ] {
            assert!(latex.contains(needle), "{needle} in {latex}");
        }
        assert!(!latex.contains('−'));
    }

    #[test]
    fn names_and_units_of_a_polynomial() {
        let polynomial = fitted(FitRequest::polynomial(5, Variable::X));
        let latex = latex(&polynomial, &ParameterUnits::default());
        assert!(
            latex.contains("$c_{3}$") && latex.contains("\\mathrm{cm^{-1}\\,\\mathring{A}^{-3}}"),
            "{latex}"
        );
        assert_eq!(latex_name("beta_10"), "\\beta_{10}");
        assert_eq!(latex_number("6.12e−6"), "6.12 \\times 10^{-6}");
        assert_eq!(latex_unit("N/m"), "\\mathrm{N\\,m^{-1}}");
    }
}
