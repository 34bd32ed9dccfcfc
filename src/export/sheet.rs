//! Tables as a page shows them, for the clipboard: tab-separated text, CSV with all digits, LaTeX.

use super::compare::{Form, latex_words};
use std::fmt::Write as _;

/// One cell.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Cell {
    /// As it is shown, with its digits.
    pub shown: String,
    /// The number behind it, where there is one: CSV gives it in full.
    pub value: Option<f64>,
    /// Whether it stands apart from the others, as quasi-bound levels do.
    pub apart: bool,
}

impl Cell {
    /// Words, or a number with the digits shown and no more.
    pub fn words(shown: impl Into<String>) -> Self {
        Self { shown: shown.into(), value: None, apart: false }
    }

    /// A number.
    pub fn number(value: f64, shown: impl Into<String>) -> Self {
        Self { shown: shown.into(), value: Some(value), apart: false }
    }

    /// A whole number.
    pub fn count(value: usize) -> Self {
        Self::words(value.to_string())
    }

    /// Nothing.
    pub fn none() -> Self {
        Self::words("–")
    }

    /// The same, standing apart.
    pub fn apart(mut self) -> Self {
        self.apart = true;
        self
    }
}

/// A column: name and unit.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Heading {
    /// Its name.
    pub name: String,
    /// Its unit; empty where it has none.
    pub unit: String,
}

impl Heading {
    /// A column.
    pub fn new(name: impl Into<String>, unit: impl Into<String>) -> Self {
        Self { name: name.into(), unit: unit.into() }
    }

    /// Name and unit as written over a column.
    pub fn text(&self) -> String {
        if self.unit.is_empty() { self.name.clone() } else { format!("{} / {}", self.name, self.unit) }
    }
}

/// A table.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Sheet {
    /// What it is.
    pub title: String,
    /// Its columns.
    pub columns: Vec<Heading>,
    /// Its rows, each with one cell a column.
    pub rows: Vec<Vec<Cell>>,
}

/// Tables one after the other in a form.
pub fn sheets(all: &[Sheet], form: Form) -> String {
    let one = |sheet: &Sheet| match form {
        Form::Text => text(sheet),
        Form::Csv => csv(sheet),
        Form::Latex => latex(sheet),
    };
    all.iter().filter(|s| !s.rows.is_empty()).map(one).collect::<Vec<_>>().join("\n")
}

/// Without the thin spaces between thousands, which other programs do not read.
fn plain(text: &str) -> String {
    text.replace('\u{2009}', "")
}

fn text(sheet: &Sheet) -> String {
    let mut out = String::new();
    let _ = writeln!(out, "{}", sheet.title);
    let head: Vec<String> = sheet.columns.iter().map(Heading::text).collect();
    let _ = writeln!(out, "{}", head.join("\t"));
    for row in &sheet.rows {
        let cells: Vec<String> = row.iter().map(|c| plain(&c.shown)).collect();
        let _ = writeln!(out, "{}", cells.join("\t").trim_end());
    }
    out
}

fn csv(sheet: &Sheet) -> String {
    let mut writer = csv::Writer::from_writer(Vec::new());
    // Writing into memory does not fail.
    let _ = writer.write_record(sheet.columns.iter().map(Heading::text));
    for row in &sheet.rows {
        let cell = |c: &Cell| match c.value {
            Some(value) if value.is_finite() => value.to_string(),
            Some(_) => String::new(),
            None if c.shown == "–" => String::new(),
            None => plain(&c.shown).replace('−', "-"),
        };
        let _ = writer.write_record(row.iter().map(cell));
    }
    writer.into_inner().ok().and_then(|bytes| String::from_utf8(bytes).ok()).unwrap_or_default()
}

fn latex(sheet: &Sheet) -> String {
    let mut out = String::new();
    let _ = writeln!(out, "% {}", latex_words(&sheet.title));
    let rest = sheet.columns.len().saturating_sub(1);
    let _ = writeln!(out, r"\begin{{tabular}}{{l{}}}", "r".repeat(rest));
    let line = |cells: Vec<String>| cells.join(" & ");
    let names = sheet.columns.iter().map(|c| signs(&c.name)).collect();
    let units = sheet.columns.iter().map(|c| signs(&c.unit)).collect();
    let _ = writeln!(out, r"{} \\", line(names));
    let _ = writeln!(out, r"{} \\ \hline", line(units));
    for row in &sheet.rows {
        let _ = writeln!(out, r"{} \\", line(row.iter().map(|c| signs(&plain(&c.shown))).collect()));
    }
    out.push_str("\\end{tabular}\n");
    out
}

/// Letters and figures that stand higher or lower, with what they are in LaTeX.
const RAISED: &str = "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺";
const RAISED_PLAIN: &str = "0123456789-+";
const LOWERED: &str = "₀₁₂₃₄₅₆₇₈₉ₑₕᵥₖₗₙ₊₋";
const LOWERED_PLAIN: &str = "0123456789ehvkln+-";
const SIGNS: [(char, &str); 29] = [
    ('−', "-"),
    ('–', "--"),
    ('ω', r"\omega"),
    ('α', r"\alpha"),
    ('β', r"\beta"),
    ('γ', r"\gamma"),
    ('Γ', r"\Gamma"),
    ('Λ', r"\Lambda"),
    ('Δ', r"\Delta"),
    ('μ', r"\mu"),
    ('µ', r"\mu"),
    ('τ', r"\tau"),
    ('ξ', r"\xi"),
    ('σ', r"\sigma"),
    ('Å', r"\AA"),
    ('″', "''"),
    ('ℏ', r"\hbar"),
    ('ħ', r"\hbar"),
    ('⟨', r"\langle"),
    ('⟩', r"\rangle"),
    ('½', r"\tfrac{1}{2}"),
    ('∞', r"\infty"),
    ('√', r"\surd"),
    ('×', r"\times"),
    ('·', r"\cdot"),
    ('←', r"\leftarrow"),
    ('≤', r"\le"),
    ('±', r"\pm"),
    ('…', r"\ldots"),
];

/// Words and signs as LaTeX has them; runs that stand higher or lower become one exponent or index.
fn signs(text: &str) -> String {
    let find = |from: &str, to: &'static str, c: char| {
        from.chars().position(|x| x == c).and_then(|i| to.chars().nth(i))
    };
    let mut out = String::new();
    let mut words = String::new();
    let mut chars = text.chars().peekable();
    while let Some(c) = chars.next() {
        let script = [('^', RAISED, RAISED_PLAIN), ('_', LOWERED, LOWERED_PLAIN)]
            .into_iter()
            .find(|(_, from, _)| from.contains(c));
        let sign = SIGNS.iter().find(|(sign, _)| *sign == c).map(|(_, latex)| *latex);
        if script.is_none() && sign.is_none() {
            words.push(c);
            continue;
        }
        out.push_str(&latex_words(&std::mem::take(&mut words)));
        if let Some((mark, from, to)) = script {
            let mut run: String = find(from, to, c).into_iter().collect();
            while let Some(next) = chars.peek().and_then(|n| find(from, to, *n)) {
                run.push(next);
                chars.next();
            }
            let _ = write!(out, "${mark}{{{run}}}$");
        } else if let Some(sign) = sign {
            // A dash between words is no minus.
            if sign == "--" || sign == r"\AA" {
                out.push_str(sign)
            } else {
                let _ = write!(out, "${sign}$");
            }
            if sign == r"\AA" {
                out.push_str("{}");
            }
        }
    }
    out.push_str(&latex_words(&words));
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented numbers.
    fn sheet() -> Sheet {
        Sheet {
            title: "Levels of a_b".into(),
            columns: vec![Heading::new("v", ""), Heading::new("E − Vₑ", "cm⁻¹")],
            rows: vec![
                vec![Cell::count(0), Cell::number(-1234.56789, "−1\u{2009}234.57(2)")],
                vec![Cell::count(1), Cell::none()],
            ],
        }
    }

    #[test]
    fn a_table_in_every_form() {
        let all = [sheet(), Sheet::default()];
        assert_eq!(sheets(&all, Form::Text), "Levels of a_b\nv\tE − Vₑ / cm⁻¹\n0\t−1234.57(2)\n1\t–\n");
        assert_eq!(sheets(&all, Form::Csv), "v,E − Vₑ / cm⁻¹\n0,-1234.56789\n1,\n");
        let latex = sheets(&all, Form::Latex);
        assert!(latex.contains(r"v & E $-$ V$_{e}$ \\"), "{latex}");
        assert!(latex.contains(r" & cm$^{-1}$ \\ \hline"), "{latex}");
        assert!(latex.contains(r"0 & $-$1234.57(2) \\"), "{latex}");
        assert!(latex.starts_with("% Levels of a\\_b\n"), "{latex}");
    }
}
