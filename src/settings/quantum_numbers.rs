//! Lists of quantum numbers as text: with commas and ranges.

use super::HIGHEST_J;

/// Reads `1,2,10`, `0-20` or both mixed; none where it is anything else or a number is above [`HIGHEST_J`]. Nothing
/// written is an empty list.
pub fn quantum_numbers(text: &str) -> Option<Vec<u32>> {
    let mut all = Vec::new();
    if text.trim().is_empty() {
        return Some(all);
    }
    for part in text.split(',') {
        let number = |t: &str| t.trim().parse().ok().filter(|j: &u32| *j <= HIGHEST_J);
        let (from, to) = match part.split_once(['-', '–']) {
            Some((from, to)) => (number(from)?, number(to)?),
            None => (number(part)?, number(part)?),
        };
        if from > to {
            return None;
        }
        all.extend(from..=to);
    }
    Some(all)
}

/// Writes a list as [`quantum_numbers`] reads it, runs of three and more as ranges.
pub fn quantum_numbers_text(all: &[u32]) -> String {
    let mut parts: Vec<String> = Vec::new();
    let mut rest = all;
    while let Some(&first) = rest.first() {
        let run =
            rest.iter().enumerate().take_while(|(i, n)| Some(**n) == first.checked_add(*i as u32)).count();
        if run > 2 {
            parts.push(format!("{first}-{}", rest[run - 1]));
            rest = &rest[run..];
        } else {
            parts.push(first.to_string());
            rest = &rest[1..];
        }
    }
    parts.join(",")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lists_are_read_as_they_are_written() {
        for text in ["", "7", "1,2", "0-20", "1,4-6,3,1000"] {
            let all = quantum_numbers(text).expect("a list");
            assert_eq!(quantum_numbers_text(&all), text);
        }
        assert_eq!(quantum_numbers(" 1 , 3 - 5 "), Some(vec![1, 3, 4, 5]));
        for text in ["x", "5-2", "1001", "1,,2", "-1", "1-"] {
            assert_eq!(quantum_numbers(text), None, "{text}");
        }
    }
}
