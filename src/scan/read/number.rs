//! Numbers as programs and people write them.

use serde::{Deserialize, Serialize};

/// The sign between whole and decimal part.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum DecimalSign {
    /// `0.95`
    Point,
    /// `0,95`
    Comma,
}

impl DecimalSign {
    /// Both, the usual one first.
    pub const ALL: [Self; 2] = [Self::Point, Self::Comma];

    /// The word used in messages.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Point => "point",
            Self::Comma => "comma",
        }
    }
}

/// What a cell holds.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Cell {
    /// A finite number.
    Number(f64),
    /// Nothing, or a mark that stands for nothing.
    Empty,
    /// Infinite, too large, or not a number.
    NotFinite,
    /// Anything else.
    Text,
}

/// Reads one cell. Fortran exponents (`1.0D-05`, and `0.1234-100` without a letter), typographic minus
/// signs and marks for a missing value (`NA`, `-`, ...) are understood.
pub(crate) fn parse_cell(cell: &str, sign: DecimalSign) -> Cell {
    let cell = cell.trim();
    if sign == DecimalSign::Point {
        // The common case costs nothing more: a plain number, no word such as `inf` or `nan`.
        if cell.bytes().next_back().is_some_and(|b| b.is_ascii_digit() || b == b'.')
            && let Ok(value) = cell.parse::<f64>()
        {
            return if value.is_finite() { Cell::Number(value) } else { Cell::NotFinite };
        }
    }
    if is_missing(cell) {
        return Cell::Empty;
    }
    let bare = cell.trim_start_matches(['+', '-', '−']).to_ascii_lowercase();
    if matches!(bare.as_str(), "nan" | "inf" | "infinity" | "1.#inf" | "1.#ind" | "1.#qnan") {
        return Cell::NotFinite;
    }
    match normal(cell, sign).and_then(|text| text.parse::<f64>().ok()) {
        Some(value) if value.is_finite() => Cell::Number(value),
        Some(_) => Cell::NotFinite,
        None => Cell::Text,
    }
}

fn is_missing(cell: &str) -> bool {
    matches!(cell, "" | "-" | "--" | "---" | "—" | "–" | "?")
        || ["na", "n/a", "n.a.", "none", "null"].iter().any(|word| cell.eq_ignore_ascii_case(word))
}

/// The number in the notation that the standard library reads; none if it is no number.
fn normal(cell: &str, sign: DecimalSign) -> Option<String> {
    const LONGEST: usize = 400;
    if cell.len() > LONGEST {
        return None;
    }
    let mut text = String::with_capacity(cell.len() + 1);
    let (mut digits, mut exponent, mut decimal) = (0_usize, false, false);
    let mut chars = cell.chars().peekable();
    while let Some(c) = chars.next() {
        match c {
            '0'..='9' => {
                digits += 1;
                text.push(c);
            }
            '+' | '-' | '−' => {
                let after_letter = text.ends_with('e');
                if !text.is_empty() && !after_letter {
                    // Fortran leaves the letter out when the exponent has three digits.
                    let rest: String = chars.clone().collect();
                    if exponent || !decimal || rest.len() != 3 || !rest.bytes().all(|b| b.is_ascii_digit()) {
                        return None;
                    }
                    exponent = true;
                    text.push('e');
                }
                text.push(if c == '+' { '+' } else { '-' });
            }
            'e' | 'E' | 'd' | 'D' if digits > 0 && !exponent => {
                exponent = true;
                text.push('e');
            }
            '.' | ',' => {
                let wanted = if sign == DecimalSign::Comma { ',' } else { '.' };
                let digit_follows = chars.peek().is_some_and(char::is_ascii_digit);
                // A comma at the end of a cell is a separator, not a decimal sign.
                if c != wanted || decimal || exponent || (c == ',' && !digit_follows) {
                    return None;
                }
                decimal = true;
                text.push('.');
            }
            _ => return None,
        }
    }
    (digits > 0).then_some(text)
}

#[cfg(test)]
mod tests {
    use super::*;
    use DecimalSign::{Comma, Point};

    #[test]
    fn usual_notations_are_read() {
        for (text, value) in [
            ("0.95", 0.95),
            ("-100.25", -100.25),
            ("+1", 1.0),
            (".5", 0.5),
            ("5.", 5.0),
            ("1e-3", 1e-3),
            ("1.0D-05", 1e-5),
            ("-1.5d+02", -150.0),
            ("0.1234-100", 0.1234e-100),
            ("−2.5", -2.5),
        ] {
            assert_eq!(parse_cell(text, Point), Cell::Number(value), "{text}");
        }
        assert_eq!(parse_cell("-0,95", Comma), Cell::Number(-0.95));
        assert_eq!(parse_cell("1,5D+01", Comma), Cell::Number(15.0));
        assert_eq!(parse_cell("12", Comma), Cell::Number(12.0));
    }

    #[test]
    fn what_is_no_number_is_told_apart() {
        for text in ["1.2.3", "1,5", "abc", "1e", "e5", "+", "1-2", "12abc", "0x10", "1 2", "****", "1.0-10"]
        {
            assert_eq!(parse_cell(text, Point), Cell::Text, "{text}");
        }
        for text in ["1.5", "1,5,", "1.234,5", ","] {
            assert_eq!(parse_cell(text, Comma), Cell::Text, "{text}");
        }
        for text in ["NaN", "-inf", "Infinity", "1e999", "nan"] {
            assert_eq!(parse_cell(text, Point), Cell::NotFinite, "{text}");
        }
        for text in ["", " ", "-", "NA", "n/a", "None"] {
            assert_eq!(parse_cell(text, Point), Cell::Empty, "{text}");
        }
    }
}
