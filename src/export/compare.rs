//! Curves side by side: constants of several studies, as they are or as differences to a reference.

use crate::digits;
use crate::estimate::Estimate;
use crate::findings::Findings;
use crate::units::{ANGSTROM_PER_BOHR, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2};
use std::fmt::Write as _;

/// What is compared.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Quantity {
    /// r_e.
    BondLength,
    /// k = V″(r_e).
    ForceConstant,
    /// ω_e.
    OmegaE,
    /// ω_e x_e.
    OmegaEXE,
    /// B_e.
    BE,
    /// α_e.
    AlphaE,
    /// Zero-point energy.
    ZeroPoint,
    /// The fundamental.
    Fundamental,
    /// Well depth.
    WellDepth,
}

impl Quantity {
    /// All of them, in the order of the table.
    pub const ALL: [Self; 9] = [
        Self::BondLength,
        Self::ForceConstant,
        Self::OmegaE,
        Self::OmegaEXE,
        Self::BE,
        Self::AlphaE,
        Self::ZeroPoint,
        Self::Fundamental,
        Self::WellDepth,
    ];

    /// Its symbol or name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::BondLength => "rₑ",
            Self::ForceConstant => "k",
            Self::OmegaE => "ωₑ",
            Self::OmegaEXE => "ωₑxₑ",
            Self::BE => "Bₑ",
            Self::AlphaE => "αₑ",
            Self::ZeroPoint => "ZPE",
            Self::Fundamental => "1 ← 0",
            Self::WellDepth => "Dₑ",
        }
    }

    /// The same in LaTeX.
    const fn latex(self) -> &'static str {
        match self {
            Self::BondLength => r"$r_\mathrm{e}$",
            Self::ForceConstant => "$k$",
            Self::OmegaE => r"$\omega_\mathrm{e}$",
            Self::OmegaEXE => r"$\omega_\mathrm{e}x_\mathrm{e}$",
            Self::BE => r"$B_\mathrm{e}$",
            Self::AlphaE => r"$\alpha_\mathrm{e}$",
            Self::ZeroPoint => "ZPE",
            Self::Fundamental => r"$1 \leftarrow 0$",
            Self::WellDepth => r"$D_\mathrm{e}$",
        }
    }

    /// The unit that values are shown in.
    pub const fn unit(self) -> &'static str {
        match self {
            Self::BondLength => "Å",
            Self::ForceConstant => "N/m",
            _ => "cm⁻¹",
        }
    }

    /// Decimals of a value without an error.
    pub const fn decimals(self) -> usize {
        match self {
            Self::BondLength => 5,
            Self::BE | Self::AlphaE => 4,
            Self::OmegaEXE => 3,
            _ => 2,
        }
    }

    /// What it is.
    pub const fn about(self) -> &'static str {
        match self {
            Self::BondLength => "Root of V′ of the curve through the points.",
            Self::ForceConstant => "V″(rₑ), so that V = ½ k x² near the minimum.",
            Self::OmegaE => "√(k/μ)/(2πc) [Dunham 1932].",
            Self::OmegaEXE => "3/2 Bₑ (5/4 a₁² − a₂) [Dunham 1932].",
            Self::BE => "h/(8π²cμrₑ²).",
            Self::AlphaE => "−(6 Bₑ²/ωₑ)(1 + a₁) [Dunham 1932].",
            Self::ZeroPoint => "Zero-point energy: E(0) − Vₑ of the numerical ground level.",
            Self::Fundamental => "Fundamental: E(1) − E(0) of the numerical levels, J = 0.",
            Self::WellDepth => "V(∞) − Vₑ, where the energy of the separated atoms is known.",
        }
    }

    /// The value of a study in [`Self::unit`].
    pub fn of(self, findings: &Findings) -> Option<Estimate> {
        let curve = findings.curve.as_ref()?;
        let constants = &findings.constants;
        let derivatives = constants.from_derivatives.as_ref();
        match self {
            Self::BondLength => Some(curve.r_e_bohr.scaled(ANGSTROM_PER_BOHR)),
            Self::ForceConstant => {
                curve.derivatives_hartree[0].map(|k| k.scaled(NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2))
            }
            Self::OmegaE => derivatives.map(|d| d.omega_e_per_cm),
            Self::OmegaEXE => derivatives.and_then(|d| d.omega_e_x_e_per_cm),
            Self::BE => derivatives.map(|d| d.b_e_per_cm),
            Self::AlphaE => derivatives.and_then(|d| d.alpha_e_per_cm),
            Self::ZeroPoint => constants.zero_point_energy_per_cm,
            Self::Fundamental => constants.fundamental_per_cm,
            Self::WellDepth => constants.well_depth_per_cm,
        }
    }
}

/// Values of every quantity, in the order of [`Quantity::ALL`].
pub type Values = [Option<Estimate>; Quantity::ALL.len()];

/// The values of a study.
pub fn values(findings: &Findings) -> Values {
    Quantity::ALL.map(|q| q.of(findings))
}

/// One curve of the comparison.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// Its name.
    pub name: String,
    /// Its values.
    pub values: Values,
}

/// `values` minus those of the reference, with the error of the value; the reference's own errors are
/// left out, as errors of like calculations go together.
pub fn differences(values: &Values, reference: &Values) -> Values {
    std::array::from_fn(|i| {
        let (value, from) = (values[i]?, reference[i]?);
        Some(Estimate { value: value.value - from.value, ..value })
    })
}

/// How a table is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Aligned by tabs.
    Text,
    /// Comma-separated, values at full precision.
    Csv,
    /// A LaTeX tabular.
    Latex,
}

impl Form {
    /// All of them, with their names.
    pub const ALL: [(&'static str, Self); 3] =
        [("text", Self::Text), ("CSV", Self::Csv), ("LaTeX", Self::Latex)];
}

/// The table as text; `reference` names what differences are taken to, where they are.
pub fn table(entries: &[Entry], reference: Option<&str>, form: Form) -> String {
    match form {
        Form::Text => text(entries, reference),
        Form::Csv => csv(entries, reference),
        Form::Latex => latex(entries, reference),
    }
}

fn text(entries: &[Entry], reference: Option<&str>) -> String {
    let mut out = String::new();
    if let Some(name) = reference {
        let _ = writeln!(out, "differences to {name}");
    }
    let head = Quantity::ALL.map(|q| format!("{} / {}", q.name(), q.unit()));
    let _ = writeln!(out, "curve\t{}", head.join("\t"));
    for entry in entries {
        let cells = cells(entry, reference.is_some());
        let _ = writeln!(out, "{}\t{}", entry.name, cells.join("\t"));
    }
    out
}

/// Values with the digits that their errors allow.
fn cells(entry: &Entry, signed: bool) -> Vec<String> {
    let cell = |(q, value): (Quantity, &Option<Estimate>)| match value {
        None => "–".to_owned(),
        Some(e) => shown(e, q, signed),
    };
    Quantity::ALL.into_iter().zip(&entry.values).map(cell).collect()
}

/// A value as shown in the table; differences carry their sign.
pub fn shown(value: &Estimate, quantity: Quantity, signed: bool) -> String {
    let least = 10_f64.powi(-(quantity.decimals() as i32)) * 0.5;
    let error = value.std_error.filter(|e| e.is_finite() && *e >= least);
    let text = match error {
        Some(error) => digits::with_uncertainty(value.value, Some(error), 6),
        None => digits::fixed(value.value, quantity.decimals()),
    };
    if signed && value.value > 0.0 { format!("+{text}") } else { text }
}

fn csv(entries: &[Entry], reference: Option<&str>) -> String {
    const KEYS: [&str; Quantity::ALL.len()] = [
        "r_e_angstrom",
        "k_newton_per_metre",
        "omega_e_per_cm",
        "omega_e_x_e_per_cm",
        "b_e_per_cm",
        "alpha_e_per_cm",
        "zero_point_energy_per_cm",
        "fundamental_per_cm",
        "well_depth_per_cm",
    ];
    let mut writer = csv::Writer::from_writer(Vec::new());
    let mut head = vec!["curve".to_owned(), "reference".to_owned()];
    for key in KEYS {
        head.extend([key.to_owned(), format!("{key}_std_error")]);
    }
    // Writing into memory does not fail.
    let _ = writer.write_record(&head);
    for entry in entries {
        let mut row = vec![entry.name.clone(), reference.unwrap_or_default().to_owned()];
        for value in &entry.values {
            let number = |v: Option<f64>| v.map_or_else(String::new, |v| v.to_string());
            row.extend([number(value.map(|e| e.value)), number(value.and_then(|e| e.std_error))]);
        }
        let _ = writer.write_record(&row);
    }
    writer.into_inner().ok().and_then(|bytes| String::from_utf8(bytes).ok()).unwrap_or_default()
}

fn latex(entries: &[Entry], reference: Option<&str>) -> String {
    let mut out = String::new();
    if let Some(name) = reference {
        let _ = writeln!(out, "% differences to {name}");
    }
    let _ = writeln!(out, r"\begin{{tabular}}{{l{}}}", "r".repeat(Quantity::ALL.len()));
    let head = Quantity::ALL.map(Quantity::latex);
    let _ = writeln!(out, r"curve & {} \\", head.join(" & "));
    let unit = |q: Quantity| match q.unit() {
        "Å" => r"\AA",
        "cm⁻¹" => r"cm$^{-1}$",
        other => other,
    };
    let _ = writeln!(out, r" & {} \\ \hline", Quantity::ALL.map(unit).join(" & "));
    for entry in entries {
        let cells: Vec<String> = cells(entry, reference.is_some()).iter().map(|c| latex_number(c)).collect();
        let _ = writeln!(out, r"{} & {} \\", latex_words(&entry.name), cells.join(" & "));
    }
    out.push_str("\\end{tabular}\n");
    out
}

fn latex_number(text: &str) -> String {
    if text == "–" { "--".to_owned() } else { format!("${}$", text.replace('−', "-")) }
}

/// Words with the characters escaped that LaTeX reads as commands.
pub(super) fn latex_words(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '_' | '&' | '%' | '#' | '$' | '{' | '}' => out.extend(['\\', c]),
            '\\' => out.push_str(r"\textbackslash{}"),
            '~' => out.push_str(r"\textasciitilde{}"),
            '^' => out.push_str(r"\textasciicircum{}"),
            '·' => out.push_str(r"$\cdot$"),
            c => out.push(c),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::estimate::ErrorSource;

    /// Invented numbers.
    fn entry(name: &str, omega: f64) -> Entry {
        let mut values: Values = Default::default();
        values[0] = Some(Estimate::with_error(1.2345678, 2e-5, ErrorSource::Interpolation));
        values[2] = Some(Estimate::with_error(omega, 0.3, ErrorSource::Interpolation));
        Entry { name: name.to_owned(), values }
    }

    #[test]
    fn differences_keep_the_error_of_the_value() {
        let (a, b) = (entry("a", 1001.5), entry("b", 1000.0));
        let d = differences(&a.values, &b.values);
        assert_eq!(d[2].map(|e| (e.value, e.std_error)), Some((1.5, Some(0.3))));
        assert_eq!(d[1], None);
        assert_eq!(d[2].map(|e| shown(&e, Quantity::OmegaE, true)), Some("+1.5(3)".to_owned()));
    }

    #[test]
    fn tables_in_every_form() {
        let entries = [entry("E_X · a&b", 1001.5)];
        let text = table(&entries, None, Form::Text);
        assert!(text.contains("1.23457(2)\t–\t1001.5(3)"), "{text}");
        let csv = table(&entries, Some("b"), Form::Csv);
        let mut reader = csv::Reader::from_reader(csv.as_bytes());
        let row = reader.records().next().expect("a row").expect("readable");
        assert_eq!((&row[1], &row[2], &row[6], &row[7]), ("b", "1.2345678", "1001.5", "0.3"));
        let latex = table(&entries, None, Form::Latex);
        assert!(latex.contains(r"E\_X $\cdot$ a\&b & $1.23457(2)$ & --"), "{latex}");
        assert_eq!(latex.matches(r"\\").count(), 3);
    }
}
