//! Values of options: text to number, list or choice.

use super::UsageError;
use crate::fit::{EnergyWeights, Weighting, Window};
use crate::units::LengthUnit;
use lexopt::{Parser, ValueExt as _};

/// The option's value through `read`, or an error that says what is accepted.
pub(super) fn value<T>(
    parser: &mut Parser,
    option: &'static str,
    accepted: &str,
    read: impl Fn(&str) -> Option<T>,
) -> Result<T, UsageError> {
    let found = parser.value()?.string()?;
    read(found.trim()).ok_or(UsageError::Value { option, found, accepted: accepted.to_owned() })
}

/// A finite number.
pub(super) fn finite(text: &str) -> Option<f64> {
    text.parse().ok().filter(|v: &f64| v.is_finite())
}

/// `1,2,10`, `0-20` or both mixed.
pub(super) fn quantum_numbers(text: &str) -> Option<Vec<u32>> {
    const HIGHEST: u32 = 1000;
    let mut all = Vec::new();
    for part in text.split(',') {
        let number = |t: &str| t.trim().parse().ok().filter(|j: &u32| *j <= HIGHEST);
        let (from, to) = match part.split_once('-') {
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

/// `equal`, `noise`, `noise=SIGMA`, `energy` or `energy=STEP`, both in cm-1.
pub(super) fn weighting(text: &str) -> Option<Weighting> {
    let (by, number) = match text.split_once('=') {
        Some((by, number)) => (by, Some(finite(number).filter(|n| *n > 0.0)?)),
        None => (text, None),
    };
    match (by, number) {
        ("equal", None) => Some(Weighting::Equal {}),
        ("noise", sigma_per_cm) => Some(Weighting::Noise { sigma_per_cm }),
        ("energy", step) => {
            let default = EnergyWeights::default();
            let step_per_cm = step.unwrap_or(default.step_per_cm);
            Some(Weighting::Energy(EnergyWeights { step_per_cm, ..default }))
        }
        _ => None,
    }
}

/// Two bond lengths in angstrom, the smaller first.
pub(super) fn window_range(text: &str) -> Option<Window> {
    let (from, to) = text.split_once(',')?;
    let (from, to) = (finite(from.trim())?, finite(to.trim())?);
    (0.0 < from && from < to).then_some(Window { from, to, unit: LengthUnit::Angstrom })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn weights_need_a_positive_scale() {
        assert_eq!(weighting("noise=0.5"), Some(Weighting::Noise { sigma_per_cm: Some(0.5) }));
        assert!(weighting("noise=-1").is_none() && weighting("equal=1").is_none());
    }
}
