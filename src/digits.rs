//! Numbers as text: digits follow the uncertainty, `1387.895(3)`; without one, a sensible number of
//! significant digits. Shared by the window, the summary and the tables of a report.

/// A value with its standard error in concise notation: `1.609430(2)`.
///
/// The error is rounded to one digit, to two when its first digit is 1, and the value to the same
/// place. Errors of 10 units and more are written out, `1240(30)`. Without an error, or with one of
/// zero, the value gets `significant` digits. Not finite: `–`.
pub fn with_uncertainty(value: f64, std_error: Option<f64>, significant: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    let Some(error) = std_error.filter(|e| e.is_finite() && *e > 0.0) else {
        return rounded(value, significant);
    };
    let exponent = error.log10().floor();
    let leading = error / 10f64.powf(exponent);
    // 0.95 and above rounds up to the next power of ten and then shows as 1.0.
    let digits = if !(1.95..9.5).contains(&leading) { 2 } else { 1 };
    let place = if leading >= 9.5 { exponent + 1.0 } else { exponent } as i32 - (digits - 1);
    // An error below the rounding of a double is shown at the last digit that the value has.
    let last_digit = if value == 0.0 { place } else { value.abs().log10().floor() as i32 - 15 };
    if place < last_digit {
        return format!("{}(0)", fixed(value, usize::try_from(-last_digit.min(0)).unwrap_or(0)));
    }
    let unit = 10f64.powi(place);
    if place >= 0 {
        let (value, error) = ((value / unit).round() * unit, (error / unit).round() * unit);
        format!("{}({})", fixed(value, 0), fixed(error, 0))
    } else {
        let decimals = usize::try_from(-place).unwrap_or(0);
        format!("{}({})", fixed(value, decimals), fixed((error / unit).round(), 0))
    }
}

/// `value` with `significant` significant digits, in plain notation where that is readable.
pub fn rounded(value: f64, significant: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    let significant = significant.clamp(1, 17);
    if value == 0.0 {
        return "0".to_owned();
    }
    let exponent = value.abs().log10().floor() as i32;
    if !(-5..15).contains(&exponent) {
        return format!("{value:.*e}", significant - 1).replace('-', "−");
    }
    let decimals = significant as i32 - 1 - exponent;
    if decimals <= 0 {
        let unit = 10f64.powi(-decimals);
        return fixed((value / unit).round() * unit, 0);
    }
    fixed(value, usize::try_from(decimals).unwrap_or(0))
}

/// `value` with a fixed number of decimals and a true minus sign; never `−0`.
pub fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(rest) if rest.chars().all(|c| c == '0' || c == '.') => rest.to_owned(),
        Some(rest) => format!("−{rest}"),
        None => text,
    }
}

/// The same with an explicit sign: `+0.044`, `−0.041`.
pub fn signed(value: f64, decimals: usize) -> String {
    let text = fixed(value, decimals);
    if text.starts_with('−') || text == "–" { text } else { format!("+{text}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn concise_notation() {
        assert_eq!(with_uncertainty(1.609_430_06, Some(0.000_002), 6), "1.609430(2)");
        assert_eq!(with_uncertainty(22.757, Some(0.12), 6), "22.76(12)");
        assert_eq!(with_uncertainty(103.627, Some(0.031), 6), "103.63(3)");
        assert_eq!(with_uncertainty(1243.0, Some(34.0), 6), "1240(30)");
        assert_eq!(with_uncertainty(-0.000_117, Some(0.000_002), 6), "−0.000117(2)");
        assert_eq!(with_uncertainty(5.0, Some(0.096), 6), "5.00(10)");
        assert_eq!(with_uncertainty(f64::NAN, Some(0.1), 6), "–");
        assert_eq!(with_uncertainty(1.0, Some(0.0), 4), "1.000");
        // An error below the last digit of a double does not invent digits.
        assert_eq!(with_uncertainty(1.5, Some(1e-30), 4), "1.500000000000000(0)");
    }

    #[test]
    fn significant_digits() {
        assert_eq!(rounded(2_164.410_4, 6), "2164.41");
        assert_eq!(rounded(0.000_006_117_6, 3), "6.12e−6");
        assert_eq!(rounded(19_983.2, 3), "20000");
        assert_eq!(fixed(-0.000_1, 2), "0.00");
        assert_eq!(signed(0.043_9, 3), "+0.044");
        assert_eq!(signed(-0.041, 3), "−0.041");
    }
}
