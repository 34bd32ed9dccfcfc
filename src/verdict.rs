//! The sentence: the answer in plain words, made from the numbers of a study and never saying more
//! than they do.

use crate::digits::{fixed, signed};
use crate::estimate::Estimate;
use crate::findings::Findings;
use crate::radial::Level;
use crate::reach::{EndedBy, Interval, TemperatureReach};
use crate::units::to_angstrom;

/// The verdict in one or two sentences.
///
/// Parts that a study cannot have (no mass: no levels) are left out; a study that is impossible gets
/// the text of the notice that says why. Numbers have no more decimals than their errors leave them, and levels that
/// lean on a part never scanned are said to.
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
        parts.push(level_offset(level));
    }
    parts.extend(temperature_words(&reach.temperature_kelvin));
    parts.extend(leaning(&findings.levels));
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
    // Two digits that are not zero, however small the tolerance.
    let decimals =
        if percent >= 0.01 || percent <= 0.0 { 2 } else { (1.0 - percent.log10()).ceil() as usize };
    let mut text = fixed(percent, decimals);
    while text.contains('.') && (text.ends_with('0') || text.ends_with('.')) {
        text.pop();
    }
    format!("{text} %")
}

/// A share as a percentage; neither all nor nothing is said of what only comes close.
fn share(probability: f64) -> String {
    let percent = probability * 100.0;
    match percent {
        p if p > 0.0 && p < 0.05 => "less than 0.1 %".to_owned(),
        p if p < 0.95 => format!("{} %", fixed(p, 1)),
        p if p > 99.5 && p < 99.95 => format!("{} %", fixed(p, 1)),
        p if (99.95..100.0).contains(&p) => "more than 99.9 %".to_owned(),
        p => format!("{} %", fixed(p, 0)),
    }
}

/// A warning where what was said of v = 0 or v = 1 would change with the part of the curve that was never scanned.
fn leaning(levels: &[Level]) -> Option<String> {
    let lowest = levels.iter().take(2).find(|l| l.leans_on_tail)?;
    Some(format!("v = {} leans on a part of the curve that was never scanned", lowest.v))
}

/// Decimals that an error leaves, between none and `most`.
fn decimals_within(error: Option<f64>, most: usize) -> usize {
    match error.filter(|e| *e > 0.0) {
        // The last decimal shown is not smaller than a fifth of the error.
        Some(error) => (-(0.2 * error).log10()).floor().clamp(0.0, most as f64) as usize,
        None => most,
    }
}

/// "from a to b", or how far the scan goes; with "about" where an end is hardly known.
pub fn interval_words(interval: &Interval) -> String {
    let ends = [interval.x_minus(), interval.x_plus()].map(|end| end.map(|e| e.scaled(to_angstrom(1.0))));
    let vague = |e: &Estimate| e.std_error.is_some_and(|error| error > 0.2 * e.value.abs());
    let about = if ends.iter().flatten().any(vague) { "about " } else { "" };
    let side = |e: Estimate| {
        let (size, mut decimals) = (e.value.abs(), 3);
        if size >= 0.995 {
            decimals = 2;
        } else if size < 0.0095 {
            // Two digits, however short the reach.
            decimals = if size > 0.0 { ((1.0 - size.log10()).ceil() as usize).min(9) } else { 3 };
        }
        let allowed = decimals_within(e.std_error, decimals).max(if size < 1.0 { 1 } else { 0 });
        let text = signed(e.value, allowed);
        // An error as large as the end itself must not turn it into zero.
        if text.bytes().any(|b| (b'1'..=b'9').contains(&b)) { text } else { signed(e.value, decimals) }
    };
    let beyond = |ended: EndedBy, scan: &str| match ended {
        EndedBy::Barrier => "the barrier where the well ends".to_owned(),
        _ => scan.to_owned(),
    };
    let first = beyond(interval.ended_by_minus, "the first point of the scan");
    let last = beyond(interval.ended_by_plus, "the last point of the scan");
    match ends {
        [Some(from), Some(to)] => format!("holds from {about}{} to {} Å", side(from), side(to)),
        [Some(from), None] => format!("holds from {about}{} Å to {last}", side(from)),
        [None, Some(to)] => format!("holds from {first} to {about}{} Å", side(to)),
        [None, None]
            if (interval.ended_by_minus, interval.ended_by_plus) == (EndedBy::Scan, EndedBy::Scan) =>
        {
            "holds over the whole scan".to_owned()
        }
        [None, None] => format!("holds from {first} to {last}"),
    }
}

/// How far off the harmonic v = 1 level is, as well as the numerical one is known.
fn level_offset(level: &Level) -> String {
    offset_words(-level.minus_harmonic_per_cm, level.energy_error_per_cm)
}

fn offset_words(offset: f64, error: Option<f64>) -> String {
    if let Some(error) = error.filter(|e| *e > offset.abs() && *e > 0.05) {
        let decimals = if error < 9.5 { 1 } else { 0 };
        return format!(
            "the harmonic v = 1 level is right within the error of {} cm⁻¹",
            fixed(error, decimals)
        );
    }
    let most = if offset.abs() >= 9.5 { 0 } else { 1 };
    let size = fixed(offset.abs(), decimals_within(error, most));
    if size == "0.0" {
        return "the harmonic v = 1 level is right to 0.1 cm⁻¹".to_owned();
    }
    let word = if offset > 0.0 { "high" } else { "low" };
    let about = if error.is_some_and(|e| e > 0.2 * offset.abs()) { "about " } else { "" };
    format!("the harmonic v = 1 level is {about}{size} cm⁻¹ too {word}")
}

/// A temperature rounded down: it holds up to there.
fn rounded_down(kelvin: f64) -> String {
    let step = if kelvin >= 100.0 { 10.0 } else { 1.0 };
    fixed((kelvin / step).floor() * step, 0)
}

/// Up to which temperature the harmonic partition function stands.
///
/// Where the levels end before the tolerance is met nothing is said beyond the temperature that they support.
fn temperature_words(reach: &TemperatureReach) -> Option<String> {
    let subject = "the vibrational partition function is within 1 %";
    match (reach.partition_function, reach.looked_up_to) {
        (Some(kelvin), _) if kelvin < 1.0 => {
            Some("the vibrational partition function is off by more than 1 % at any temperature".to_owned())
        }
        (Some(kelvin), _) => Some(format!("{subject} up to {} K", rounded_down(kelvin))),
        (None, Some(kelvin)) if kelvin >= 1.0 => {
            Some(format!("{subject} up to {} K at least, as far as the levels tell", rounded_down(kelvin)))
        }
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::estimate::ErrorSource;

    fn interval(minus: Option<f64>, plus: Option<f64>) -> Interval {
        let by = |x: Option<f64>| if x.is_some() { EndedBy::Tolerance } else { EndedBy::Scan };
        Interval::new(minus, plus, None, (by(minus), by(plus)))
    }

    #[test]
    fn words_for_every_kind_of_interval() {
        assert_eq!(interval_words(&interval(Some(-0.0775), Some(0.083))), "holds from −0.041 to +0.044 Å");
        assert!(interval_words(&interval(None, Some(0.083))).contains("first point"));
        assert!(interval_words(&interval(Some(-0.0775), None)).contains("last point"));
        assert_eq!(interval_words(&interval(None, None)), "holds over the whole scan");
        let mut barrier = interval(Some(-0.0775), None);
        barrier.ended_by_plus = EndedBy::Barrier;
        assert_eq!(interval_words(&barrier), "holds from −0.041 Å to the barrier where the well ends");
        let short = interval(Some(-1.5e-6), Some(1.6e-6));
        assert_eq!(interval_words(&short), "holds from −0.00000079 to +0.00000085 Å");
    }

    /// No decimal that the error does not leave.
    #[test]
    fn errors_take_decimals_away() {
        let mut found = interval(Some(-0.0775), Some(0.083));
        found.x_plus_error = Some((0.0038, ErrorSource::Noise));
        assert_eq!(interval_words(&found), "holds from −0.041 to +0.044 Å");
        found.x_plus_error = Some((0.014, ErrorSource::Noise));
        assert_eq!(interval_words(&found), "holds from −0.041 to +0.04 Å");
        found.x_plus_error = Some((0.08, ErrorSource::Noise));
        assert_eq!(interval_words(&found), "holds from about −0.041 to +0.04 Å");
    }

    #[test]
    fn percentages_carry_no_needless_digits() {
        assert_eq!(percent(0.05), "5 %");
        assert_eq!(percent(0.025), "2.5 %");
        assert_eq!(percent(0.0001), "0.01 %");
        assert_eq!(percent(1e-6), "0.0001 %");
        assert_eq!(share(0.9999), "more than 99.9 %");
        assert_eq!(
            (share(0.0), share(1e-5), share(0.27)),
            ("0.0 %".into(), "less than 0.1 %".into(), "27 %".into())
        );
    }

    #[test]
    fn the_offset_says_high_or_low() {
        let words = |offset, error| offset_words(offset, error);
        assert_eq!(words(49.8, None), "the harmonic v = 1 level is 50 cm⁻¹ too high");
        assert_eq!(words(-3.21, Some(0.1)), "the harmonic v = 1 level is 3.2 cm⁻¹ too low");
        assert_eq!(words(0.01, Some(0.001)), "the harmonic v = 1 level is right to 0.1 cm⁻¹");
        assert_eq!(words(4.2, Some(2.0)), "the harmonic v = 1 level is about 4 cm⁻¹ too high");
        assert_eq!(words(1.4, Some(3.0)), "the harmonic v = 1 level is right within the error of 3.0 cm⁻¹");
    }

    /// 'Holds wherever we looked' and 'fails at once' are told apart.
    #[test]
    fn a_temperature_that_was_not_met_is_no_failure() {
        let of = |q, looked| {
            let reach =
                TemperatureReach { partition_function: q, looked_up_to: looked, ..Default::default() };
            temperature_words(&reach).unwrap_or_default()
        };
        assert!(of(Some(1678.0), Some(2400.0)).ends_with("within 1 % up to 1670 K"));
        assert!(of(None, Some(853.0)).ends_with("up to 850 K at least, as far as the levels tell"));
        assert!(of(Some(0.0), Some(853.0)).contains("more than 1 % at any temperature"));
        assert_eq!(of(None, None), "");
        assert!(of(Some(42.7), None).ends_with("42 K"));
    }
}
