//! The line in which a recipe is written.

use super::{CombineError, Rule};
use crate::scan::read::parse_energy_unit;
use crate::units::EnergyUnit;
use serde::{Deserialize, Serialize};

/// Most terms of a recipe.
const LIMIT_TERMS: usize = 100;

/// How a curve is made from columns; as text in settings.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "String", into = "String")]
pub struct Recipe {
    /// Name of the curve made.
    pub name: String,
    pub(super) terms: Vec<Term>,
    text: String,
}

/// A factor times something.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Term {
    pub factor: f64,
    pub quantity: Quantity,
}

/// What is summed.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Quantity {
    Constant { value: f64, unit: EnergyUnit },
    Column(String),
    Limit { rule: Rule, columns: Vec<String> },
}

impl Recipe {
    /// The recipe as it was written.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// Reads `NAME = TERM + TERM ...`.
    ///
    /// A term is a column (its name, its name without the unit, an unambiguous part, in quotes where it holds
    /// other signs than letters, digits, `_` and `.`; or `#2` for the second), with a factor before it
    /// (`0.5*A`) if wanted; a constant with its unit (`0.1 eV`); or a limit:
    /// `hf3(A,B,C; 2,3,4)`, `hf2(A,B; 3,4; EXPONENT)`, `corr2(A,B; 3,4)` or `corr2(A,B; 3,4; POWER)`.
    ///
    /// # Errors
    /// [`CombineError::Syntax`] and [`CombineError::Cardinals`].
    pub fn parse(text: &str) -> Result<Self, CombineError> {
        let text = text.trim();
        let mut reader = Reader { all: text, rest: text };
        let name = reader.name("the name of the curve to be made")?;
        reader.sign('=', "the sign =")?;
        let mut terms = Vec::new();
        loop {
            let negative = reader.take('-');
            if !negative && !terms.is_empty() {
                reader.sign('+', "+, - or the end")?;
            } else if terms.is_empty() {
                reader.take('+');
            }
            if terms.len() == LIMIT_TERMS {
                return Err(reader.expected("no more than a hundred terms"));
            }
            terms.push(reader.term(if negative { -1.0 } else { 1.0 })?);
            if reader.rest.trim().is_empty() {
                break;
            }
        }
        if terms.iter().all(|t| matches!(t.quantity, Quantity::Constant { .. })) {
            return Err(reader.expected("at least one column"));
        }
        Ok(Self { name, terms, text: text.to_owned() })
    }
}

impl TryFrom<String> for Recipe {
    type Error = CombineError;

    fn try_from(text: String) -> Result<Self, CombineError> {
        Self::parse(&text)
    }
}

impl From<Recipe> for String {
    fn from(recipe: Recipe) -> Self {
        recipe.text
    }
}

struct Reader<'a> {
    all: &'a str,
    rest: &'a str,
}

impl<'a> Reader<'a> {
    fn expected(&self, expected: &'static str) -> CombineError {
        let at: String = self.rest.trim().chars().take(30).collect();
        let at = if at.is_empty() { "the end".to_owned() } else { at };
        CombineError::Syntax { recipe: self.all.to_owned(), at, expected }
    }

    fn take(&mut self, sign: char) -> bool {
        match self.rest.trim_start().strip_prefix(sign) {
            Some(rest) => {
                self.rest = rest;
                true
            }
            None => false,
        }
    }

    fn sign(&mut self, sign: char, expected: &'static str) -> Result<(), CombineError> {
        if self.take(sign) { Ok(()) } else { Err(self.expected(expected)) }
    }

    /// A run of signs that a name may have without quotes.
    fn word(&mut self) -> &'a str {
        let rest = self.rest.trim_start();
        let end = rest.find(|c: char| !(c.is_alphanumeric() || "_.#".contains(c))).unwrap_or(rest.len());
        self.rest = &rest[end..];
        &rest[..end]
    }

    fn name(&mut self, expected: &'static str) -> Result<String, CombineError> {
        for quote in ['"', '\''] {
            if let Some(inside) = self.rest.trim_start().strip_prefix(quote) {
                let end = inside.find(quote).ok_or_else(|| self.expected("the closing quote"))?;
                self.rest = &inside[end + 1..];
                let name = inside[..end].trim();
                return if name.is_empty() { Err(self.expected(expected)) } else { Ok(name.to_owned()) };
            }
        }
        let before = self.rest;
        let word = self.word();
        if word.is_empty() {
            self.rest = before;
            return Err(self.expected(expected));
        }
        // `#2` is a column by its number; without the sign it would be a constant.
        Ok(word.strip_prefix('#').unwrap_or(word).to_owned())
    }

    /// A number if one stands here, exponent included.
    fn number(&mut self) -> Option<f64> {
        let rest = self.rest.trim_start();
        let bytes = rest.as_bytes();
        if !bytes.first().is_some_and(|b| b.is_ascii_digit() || *b == b'.') {
            return None;
        }
        let mut end = 0;
        while end < bytes.len() {
            let exponent_sign = matches!(bytes[end], b'+' | b'-')
                && matches!(bytes[end - 1], b'e' | b'E')
                && bytes.get(end + 1).is_some_and(u8::is_ascii_digit);
            if !(bytes[end].is_ascii_digit() || matches!(bytes[end], b'.' | b'e' | b'E') || exponent_sign) {
                break;
            }
            end += 1;
        }
        // `2e` followed by a letter is no exponent: `0.5 eV` has a blank, `0.5eV` has not.
        let mut written = &rest[..end];
        while let Some(shorter) = written.strip_suffix(['e', 'E']) {
            written = shorter;
        }
        let value = written.parse().ok().filter(|v: &f64| v.is_finite())?;
        self.rest = &rest[written.len()..];
        Some(value)
    }

    fn term(&mut self, sign: f64) -> Result<Term, CombineError> {
        let mut factor = sign;
        if let Some(value) = self.number() {
            if !self.take('*') {
                let before = self.rest;
                let unit = self.unit();
                let Some(unit) = parse_energy_unit(unit) else {
                    self.rest = before;
                    return Err(self.expected("* and a column, or the unit of the constant"));
                };
                return Ok(Term { factor, quantity: Quantity::Constant { value, unit } });
            }
            factor *= value;
        }
        let quoted = self.rest.trim_start().starts_with(['"', '\'']);
        let name = self.name("a column, hf3(...), hf2(...), corr2(...) or a constant with its unit")?;
        let quantity = if !quoted && self.take('(') { self.limit(&name)? } else { Quantity::Column(name) };
        if self.take('*') {
            factor *= self.number().ok_or_else(|| self.expected("a number"))?;
        }
        Ok(Term { factor, quantity })
    }

    /// The word of a unit: `kJ/mol`, `cm-1`.
    fn unit(&mut self) -> &'a str {
        let rest = self.rest.trim_start();
        let known = ["kJ/mol", "kcal/mol", "cm-1"]
            .iter()
            .find(|u| rest.get(..u.len()).is_some_and(|start| start.eq_ignore_ascii_case(u)));
        match known {
            Some(unit) => {
                self.rest = &rest[unit.len()..];
                &rest[..unit.len()]
            }
            None => self.word(),
        }
    }

    fn limit(&mut self, rule: &str) -> Result<Quantity, CombineError> {
        let columns_needed = match rule {
            "hf3" => 3,
            "hf2" | "corr2" => 2,
            _ => {
                return Err(
                    self.expected("hf3, hf2 or corr2 before the bracket; names with brackets in quotes")
                );
            }
        };
        let mut columns = vec![self.name("a column")?];
        while self.take(',') {
            columns.push(self.name("a column")?);
        }
        if columns.len() != columns_needed {
            return Err(self.expected("three columns for hf3, two for hf2 and corr2"));
        }
        self.sign(';', "; and the cardinal numbers")?;
        let mut cardinals = vec![self.number().ok_or_else(|| self.expected("a cardinal number"))?];
        while self.take(',') {
            cardinals.push(self.number().ok_or_else(|| self.expected("a cardinal number"))?);
        }
        let exponent = if self.take(';') {
            Some(self.number().ok_or_else(|| self.expected("an exponent"))?)
        } else {
            None
        };
        self.sign(')', "a closing bracket")?;
        let wrong = |rule, problem| CombineError::Cardinals { recipe: self.all.to_owned(), rule, problem };
        let ascending = cardinals.windows(2).all(|w| w[0] < w[1]) && cardinals[0] > 0.0;
        if cardinals.len() != columns_needed || !ascending {
            return Err(wrong("cardinal numbers", "give one for each column, ascending, as in 2,3,4"));
        }
        let rule = match (rule, exponent) {
            ("hf3", None) => {
                let even = (cardinals[2] - cardinals[1] - (cardinals[1] - cardinals[0])).abs() < 1e-9;
                if !even {
                    return Err(wrong(
                        "hf3",
                        "the three cardinal numbers must be equally spaced, as in 2,3,4",
                    ));
                }
                Rule::Exponential3
            }
            ("hf3", Some(_)) => {
                return Err(wrong("hf3", "three energies fix the exponent; leave it out, or use hf2"));
            }
            ("hf2", Some(alpha)) if alpha > 0.0 => {
                Rule::Exponential2 { decay: (-alpha * (cardinals[1] - cardinals[0])).exp() }
            }
            ("hf2", _) => {
                return Err(wrong("hf2", "two energies need a positive exponent: hf2(A, B; 3,4; 1.63)"));
            }
            (_, power) => {
                let power = power.unwrap_or(3.0);
                if power <= 0.0 || power > 20.0 {
                    return Err(wrong(
                        "corr2",
                        "the power must be positive and at most 20; the usual one is 3",
                    ));
                }
                let [x1, x2] = [cardinals[0].powf(power), cardinals[1].powf(power)];
                Rule::InversePower { weights: [-x1 / (x2 - x1), x2 / (x2 - x1)] }
            }
        };
        Ok(Quantity::Limit { rule, columns })
    }
}
