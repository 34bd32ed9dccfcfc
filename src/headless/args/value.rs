//! Values of options: text to number, list or choice.

use super::UsageError;
use crate::fit::{EnergyWeights, Family, FitRequest, RowWeight, Variable, Weighting, Window};
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

/// `equal`, `noise`, `noise=SIGMA`, `energy`, `energy=STEP` (both in cm-1), `column=NAME`, `sigma=NAME` or
/// `rows=ROW:W,ROW:W`.
pub(super) fn weighting(text: &str) -> Option<Weighting> {
    let (by, given) = match text.split_once('=') {
        Some((by, given)) => (by, Some(given.trim())),
        None => (text, None),
    };
    let positive = |text: &str| finite(text).filter(|n| *n > 0.0);
    Some(match (by, given) {
        ("equal", None) => Weighting::Equal {},
        ("noise", None) => Weighting::Noise { sigma_per_cm: None },
        ("noise", Some(sigma)) => Weighting::Noise { sigma_per_cm: Some(positive(sigma)?) },
        ("energy", None) => Weighting::Energy(EnergyWeights::default()),
        ("energy", Some(step)) => {
            Weighting::Energy(EnergyWeights { step_per_cm: positive(step)?, ..EnergyWeights::default() })
        }
        ("column" | "sigma", Some(name)) if !name.is_empty() => {
            Weighting::Column { name: name.to_owned(), sigma: by == "sigma" }
        }
        ("rows", Some(list)) => {
            let row = |part: &str| {
                let (row, weight) = part.split_once(':')?;
                let weight = finite(weight.trim()).filter(|w| *w >= 0.0)?;
                Some(RowWeight { row: row.trim().parse().ok()?, weight })
            };
            let rows = list.split(',').map(row).collect::<Option<Vec<RowWeight>>>()?;
            Weighting::Point { rows, others: 1.0, declared: false }
        }
        _ => return None,
    })
}

/// Fits with commas between: a family's word, for polynomials `:DEGREE:VARIABLE`, for extended Morse functions `:ORDER:P`,
/// both parts optional.
pub(super) fn fit_requests(text: &str) -> Option<Vec<FitRequest>> {
    let one = |part: &str| {
        let mut words = part.trim().split(':');
        let word = words.next()?;
        let family = *Family::ALL.iter().find(|f| f.word() == word)?;
        let mut request = FitRequest::plain(family);
        if let Some(degree) = words.next() {
            let takes_one = matches!(family, Family::Polynomial | Family::ExtendedMorse);
            request.degree = Some(degree.parse().ok().filter(|_| takes_one)?);
        }
        match (words.next(), family) {
            (None, _) => {}
            (Some(word), Family::Polynomial) => {
                request.variable = Some(Variable::ALL.into_iter().find(|v| v.word() == word)?);
            }
            (Some(power), _) => request.power = Some(power.parse().ok()?),
        }
        words.next().is_none().then_some(request)
    };
    text.split(',').map(one).collect()
}

/// The families by their words.
pub(super) fn family_words() -> String {
    Family::ALL.iter().map(|f| f.word()).collect::<Vec<_>>().join(", ")
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
    fn fits_are_named_with_degree_and_variable() {
        let found = fit_requests("harmonic, polynomial:4:xi,extended_morse:8:3,varshni").unwrap();
        let extended =
            FitRequest { degree: Some(8), power: Some(3), ..FitRequest::plain(Family::ExtendedMorse) };
        assert_eq!(
            found,
            [
                FitRequest::plain(Family::Harmonic),
                FitRequest::polynomial(4, Variable::Xi),
                extended,
                FitRequest::plain(Family::Varshni)
            ]
        );
        for wrong in ["", "spline", "morse:4", "polynomial:x", "polynomial:4:w", "polynomial:4:xi:2"] {
            assert!(fit_requests(wrong).is_none(), "{wrong}");
        }
    }

    #[test]
    fn weights_need_a_positive_scale() {
        assert_eq!(weighting("noise=0.5"), Some(Weighting::Noise { sigma_per_cm: Some(0.5) }));
        for wrong in
            ["noise=-1", "noise=x", "equal=1", "column", "column=", "rows=3", "rows=3:-1", "energy=0"]
        {
            assert!(weighting(wrong).is_none(), "{wrong}");
        }
        assert_eq!(weighting("sigma=err"), Some(Weighting::Column { name: "err".to_owned(), sigma: true }));
        let rows = vec![RowWeight { row: 3, weight: 0.5 }, RowWeight { row: 7, weight: 0.0 }];
        assert_eq!(
            weighting("rows=3:0.5, 7:0"),
            Some(Weighting::Point { rows, others: 1.0, declared: false })
        );
    }
}
