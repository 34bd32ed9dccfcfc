//! The sentence: the answer in plain words, made from the numbers of a study and never saying more
//! than they do.

use crate::digits::{fixed, signed};
use crate::findings::Findings;
use crate::reach::{EndedBy, Interval};
use crate::units::to_angstrom;

/// The verdict in one or two sentences.
///
/// Parts that a study cannot have (no mass: no levels) are left out; a study that is impossible gets
/// the text of the notice that says why.
pub fn sentence(findings: &Findings) -> String {
    use crate::notice::Severity;
    if let Some(stop) = findings.notices.iter().find(|n| n.severity == Severity::Stop) {
        return stop.text.clone();
    }
    let Some(reach) = &findings.reach else {
        return "This curve has no parabola: its force constant at the minimum is not positive.".to_owned();
    };
    let percent = percent(reach.tolerance);
    let mut text = format!("Within {percent} in energy the parabola {}.", interval_words(&reach.energy));
    if findings.levels.is_empty() {
        if findings.masses.is_none() {
            text.push_str(" Name the atoms or a reduced mass, and the levels follow.");
        }
        return text;
    }
    let mut parts = Vec::new();
    if let Some(inside) = findings.levels.first().and_then(|l| l.inside_reach) {
        parts.push(format!("v = 0 keeps {} of its density there", share(inside)));
    }
    if let Some(level) = findings.levels.get(1) {
        parts.push(level_offset(-level.minus_harmonic_per_cm));
    }
    if let Some(kelvin) = reach.temperature_kelvin.partition_function {
        parts.push(format!(
            "the vibrational partition function is within 1 % up to {} K",
            fixed((kelvin / 10.0).floor() * 10.0, 0)
        ));
    }
    if !parts.is_empty() {
        let mut rest = parts.join("; ");
        if let Some(first) = rest.get(0..1).map(str::to_uppercase).filter(|f| f != "V") {
            rest.replace_range(0..1, &first);
        }
        text.push(' ');
        text.push_str(&rest);
        text.push('.');
    }
    text
}

/// A tolerance or share as a percentage without needless digits.
pub fn percent(fraction: f64) -> String {
    let percent = fraction * 100.0;
    let mut text = fixed(percent, 2);
    while text.contains('.') && (text.ends_with('0') || text.ends_with('.')) {
        text.pop();
    }
    format!("{text} %")
}

fn share(probability: f64) -> String {
    let percent = probability * 100.0;
    if percent >= 1.0 { format!("{} %", fixed(percent, 0)) } else { format!("{} %", fixed(percent, 1)) }
}

fn interval_words(interval: &Interval) -> String {
    let decimals = |x: f64| if x.abs() >= 0.995 { 2 } else { 3 };
    let side = |x: Option<f64>| x.map(to_angstrom).map(|x| signed(x, decimals(x)));
    let ended = (interval.ended_by_minus, interval.ended_by_plus);
    match (side(interval.x_minus_bohr), side(interval.x_plus_bohr), ended) {
        (Some(from), Some(to), _) => format!("holds from {from} to {to} Å"),
        (Some(from), None, (_, EndedBy::Scan)) => {
            format!("holds from {from} Å to the last point of the scan")
        }
        (None, Some(to), (EndedBy::Scan, _)) => {
            format!("holds from the first point of the scan to {to} Å")
        }
        _ => "holds over the whole scan".to_owned(),
    }
}

fn level_offset(harmonic_minus_numerical_per_cm: f64) -> String {
    let offset = harmonic_minus_numerical_per_cm;
    let size = if offset.abs() >= 9.5 { fixed(offset.abs(), 0) } else { fixed(offset.abs(), 1) };
    if size == "0.0" {
        return "the harmonic v = 1 level is right to 0.1 cm⁻¹".to_owned();
    }
    let word = if offset > 0.0 { "high" } else { "low" };
    format!("the harmonic v = 1 level is {size} cm⁻¹ too {word}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_for_every_kind_of_interval() {
        let interval = |minus: Option<f64>, plus: Option<f64>| Interval {
            x_minus_bohr: minus,
            x_plus_bohr: plus,
            leading_order_bohr: None,
            ended_by_minus: if minus.is_some() { EndedBy::Tolerance } else { EndedBy::Scan },
            ended_by_plus: if plus.is_some() { EndedBy::Tolerance } else { EndedBy::Scan },
        };
        assert_eq!(interval_words(&interval(Some(-0.0775), Some(0.083))), "holds from −0.041 to +0.044 Å");
        assert!(interval_words(&interval(None, Some(0.083))).contains("first point"));
        assert!(interval_words(&interval(Some(-0.0775), None)).contains("last point"));
        assert_eq!(interval_words(&interval(None, None)), "holds over the whole scan");
    }

    #[test]
    fn percentages_carry_no_needless_digits() {
        assert_eq!(percent(0.05), "5 %");
        assert_eq!(percent(0.025), "2.5 %");
        assert_eq!(percent(0.0001), "0.01 %");
    }

    #[test]
    fn the_offset_says_high_or_low() {
        assert_eq!(level_offset(49.8), "the harmonic v = 1 level is 50 cm⁻¹ too high");
        assert_eq!(level_offset(-3.21), "the harmonic v = 1 level is 3.2 cm⁻¹ too low");
        assert_eq!(level_offset(0.01), "the harmonic v = 1 level is right to 0.1 cm⁻¹");
    }
}
