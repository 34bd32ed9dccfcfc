//! Plain text of the numerics as it is set in window and report.

use super::number::THIN_SPACE;

/// Text of the numerics, which is plain enough for any terminal, as the window writes units.
pub fn typographic(text: &str) -> String {
    let mut text = text.replace("cm-1", "cm⁻¹").replace(" angstrom", " Å");
    // Options of the command line mean nothing here.
    while let Some(start) = text.find(" (--") {
        let Some(length) = text[start..].find(')') else { break };
        text.replace_range(start..=start + length, "");
    }
    set_numbers(&text)
}

/// True minus signs before numbers, thin spaces between the thousands of numbers of five digits and more.
fn set_numbers(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 8);
    let chars: Vec<char> = text.chars().collect();
    let mut at = 0;
    while at < chars.len() {
        let before = at.checked_sub(1).map(|i| chars[i]);
        let free = before.is_none_or(|c| !c.is_alphanumeric() && c != '.' && c != '_' && c != '-');
        if chars[at] == '-' && free && chars.get(at + 1).is_some_and(char::is_ascii_digit) {
            out.push('−');
            at += 1;
            continue;
        }
        let digits = chars[at..].iter().take_while(|c| c.is_ascii_digit()).count();
        if digits == 0 {
            out.push(chars[at]);
            at += 1;
            continue;
        }
        for (i, digit) in chars[at..at + digits].iter().enumerate() {
            if free && digits > 4 && i > 0 && (digits - i).is_multiple_of(3) {
                out.push(THIN_SPACE);
            }
            out.push(*digit);
        }
        at += digits;
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_set_and_options_left_out() {
        assert_eq!(typographic("11 cm-1 at 1.44 angstrom"), "11 cm⁻¹ at 1.44 Å");
        assert_eq!(
            typographic("name the atoms (--atoms) or a mass (--reduced-mass)."),
            "name the atoms or a mass."
        );
        assert_eq!(typographic("left open (--"), "left open (--");
        assert_eq!(typographic("v = 23 (19976 cm-1), -0.5"), "v = 23 (19\u{2009}976 cm⁻¹), −0.5");
        assert_eq!(typographic("[Watson 1980] lag-1, a 2-3, 0.12345"), "[Watson 1980] lag-1, a 2-3, 0.12345");
    }
}
