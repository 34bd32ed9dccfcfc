//! Numbers as the window and the figures show them: those of [`crate::digits`], with thousands set
//! apart by thin spaces.

use crate::digits;
use crate::estimate::Estimate;

/// The space between groups of three digits, U+2009.
pub const THIN_SPACE: char = '\u{2009}';
/// What stands where there is no number.
pub const NONE: &str = "–";

/// Errors smaller than this fraction of the value are those of the arithmetic and are not shown.
const SMALLEST_RELATIVE_ERROR: f64 = 1e-10;

/// Sets groups of three digits before the decimal point apart.
fn grouped(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 6);
    let mut whole_digits = 0;
    let mut in_fraction = false;
    for part in text.split_inclusive(|c: char| !c.is_ascii_digit()) {
        let count = part.bytes().filter(u8::is_ascii_digit).count();
        for c in part.chars() {
            if c.is_ascii_digit() && !in_fraction {
                if whole_digits > 0 && count > 3 && (count - whole_digits).is_multiple_of(3) {
                    out.push(THIN_SPACE);
                }
                whole_digits += 1;
            }
            out.push(c);
        }
        in_fraction = part.ends_with('.');
        whole_digits = 0;
    }
    out
}

/// A number with so many decimals.
pub fn fixed(value: f64, decimals: usize) -> String {
    if value.is_finite() { grouped(&digits::fixed(value, decimals)) } else { NONE.to_owned() }
}

/// The same with a plus sign before positive numbers; zero has none.
pub fn signed(value: f64, decimals: usize) -> String {
    let text = fixed(value, decimals);
    let zero = !text.bytes().any(|b| (b'1'..=b'9').contains(&b));
    if value > 0.0 && !zero { format!("+{text}") } else { text }
}

/// A share as percent.
pub fn percent(share: f64, decimals: usize) -> String {
    if share.is_finite() { format!("{} %", fixed(share * 100.0, decimals)) } else { NONE.to_owned() }
}

/// Value and standard error as `value(error)`; without an error worth showing, `decimals` decimals.
pub fn with_error(value: f64, std_error: Option<f64>, decimals: usize) -> String {
    match std_error.filter(|e| e.is_finite() && *e > SMALLEST_RELATIVE_ERROR * value.abs()) {
        Some(error) => grouped(&digits::with_uncertainty(value, Some(error), 6)),
        None => fixed(value, decimals),
    }
}

/// The same with no more than `most` decimals: an error below them is left out.
pub fn with_error_capped(value: f64, std_error: Option<f64>, most: usize) -> String {
    let last = 10_f64.powi(-i32::try_from(most).unwrap_or(i32::MAX));
    with_error(value, std_error.filter(|e| *e >= 0.95 * last), most)
}

/// An estimate, see [`with_error`].
pub fn estimate(estimate: &Estimate, decimals: usize) -> String {
    with_error(estimate.value, estimate.std_error, decimals)
}

/// A number with so many digits that count; a power of ten where it is very small or very large.
pub fn significant(value: f64, digits: usize) -> String {
    let size = if value == 0.0 { 0.0 } else { value.abs().log10().floor() };
    if !value.is_finite() || !(-4.0..=6.0).contains(&size) {
        return scientific(value, digits.saturating_sub(1));
    }
    fixed(value, (digits as f64 - 1.0 - size).max(0.0) as usize)
}

/// A number as a power of ten with so many decimals, `4.35 × 10⁻¹²`.
pub fn scientific(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return NONE.to_owned();
    }
    let text = format!("{value:.decimals$e}").replace('-', "−");
    let Some((number, power)) = text.split_once('e') else { return text };
    let (sign, power) = power.strip_prefix('−').map_or(("", power), |p| ("⁻", p));
    format!("{number} × 10{sign}{}", superscript(power.parse().unwrap_or(0)))
}

/// Digits raised, for mass numbers: 35 gives ³⁵.
pub fn superscript(number: u32) -> String {
    const RAISED: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    number.to_string().bytes().map(|b| RAISED[usize::from(b - b'0')]).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn thousands_are_set_apart() {
        assert_eq!(fixed(1_234_567.25, 4), "1\u{2009}234\u{2009}567.2500");
        assert_eq!(fixed(-1234.0, 0), "−1\u{2009}234");
        assert_eq!(fixed(999.0, 0), "999");
        assert_eq!(fixed(-0.0001, 2), "0.00");
        assert_eq!(fixed(f64::NAN, 2), NONE);
        assert_eq!(signed(0.044, 3), "+0.044");
        assert_eq!(signed(0.0, 3), "0.000");
        assert_eq!(percent(0.2145, 1), "21.4 %");
    }

    #[test]
    fn the_error_rules_the_digits() {
        assert_eq!(with_error(1387.904, Some(0.0304), 2), "1\u{2009}387.90(3)");
        assert_eq!(with_error(12345.0, Some(2345.0), 0), "12\u{2009}000(2\u{2009}000)");
        assert_eq!(with_error_capped(2032.015, Some(2e-6), 2), "2\u{2009}032.02");
        assert_eq!(with_error_capped(2032.015, Some(0.3), 2), "2\u{2009}032.0(3)");
        assert_eq!(with_error(2.0, None, 3), "2.000");
        assert_eq!(with_error(2.0, Some(1e-14), 3), "2.000");
        assert_eq!(with_error(-1.0, Some(f64::NAN), 1), "−1.0");
    }

    #[test]
    fn raised_digits() {
        assert_eq!(superscript(35), "³⁵");
        assert_eq!(scientific(-4.352e-12, 2), "−4.35 × 10⁻¹²");
        assert_eq!(scientific(1e7, 0), "1 × 10⁷");
        assert_eq!(significant(0.012345, 3), "0.0123");
        assert_eq!(significant(12345.6, 3), "12\u{2009}346");
        assert_eq!(significant(1.2e-9, 2), "1.2 × 10⁻⁹");
        assert_eq!(significant(0.0, 3), "0.00");
    }
}
