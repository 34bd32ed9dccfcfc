//! The fits of one study side by side, and which of them the data support.

use super::{Family, Fit, FitError, FitPoint, FitRequest};
use crate::estimate::ErrorSource;
use crate::potential::Potential as _;
use crate::units::to_per_cm;

/// A fit is as well supported as the best one when its AICc is less than this above it, and has no support when it is
/// more than [`NO_SUPPORT`] above [K. P. Burnham, D. R. Anderson, Sociol. Methods Res. 33, 261 (2004), from memory].
pub const SUPPORTED: f64 = 2.0;

/// See [`SUPPORTED`].
pub const NO_SUPPORT: f64 = 10.0;

/// One fit in the comparison. Energies in hartree.
#[derive(Clone, Debug, PartialEq)]
pub struct Compared {
    /// Index in the list of fits.
    pub index: usize,
    /// What people call it: family, and the degree used.
    pub label: String,
    /// Number of parameters.
    pub parameters: usize,
    /// sqrt(Σ d²/n).
    pub rms_residual_hartree: f64,
    /// max |d|.
    pub largest_residual_hartree: f64,
    /// The criterion.
    pub aicc: Option<f64>,
    /// The criterion above the lowest of all fits; none where it has none. All fits of a study see the same points
    /// and weights, so the differences mean something.
    pub aicc_difference: Option<f64>,
    /// exp(−Δ/2) as a share of the sum over all fits (Akaike weight).
    pub akaike_weight: Option<f64>,
    /// Root mean square of the leave-one-out errors.
    pub leave_one_out_rms_hartree: Option<f64>,
    /// Root mean square of model − energy over the points in use outside the window; none without such points or
    /// where the function is not defined at one of them.
    pub outside_rms_hartree: Option<f64>,
    /// Points outside that counted.
    pub outside_points: usize,
    /// Whether the residuals are smooth misfit.
    pub misfit: bool,
}

/// The fits side by side.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Comparison {
    /// The fits that succeeded, in the order of the settings.
    pub fits: Vec<Compared>,
    /// Which is supported by the data and which is not; none with fewer than two fits.
    pub sentence: Option<String>,
}

/// Compares the fits of one study. All were made with the same points and weights; `outside` are the points in use
/// outside the window.
pub fn compare(fits: &[(FitRequest, &Result<Fit, FitError>)], outside: &[FitPoint]) -> Comparison {
    let done = fits.iter().enumerate().filter_map(|(i, (_, fit))| Some((i, fit.as_ref().ok()?)));
    let mut compared: Vec<Compared> = done.map(|(index, fit)| one(index, fit, outside)).collect();
    let lowest = compared.iter().filter_map(|c| c.aicc).fold(f64::INFINITY, f64::min);
    let weight = |difference: f64| (-0.5 * difference).exp();
    compared.iter_mut().for_each(|c| c.aicc_difference = c.aicc.map(|a| a - lowest));
    let sum: f64 = compared.iter().filter_map(|c| c.aicc_difference).map(weight).sum();
    compared.iter_mut().for_each(|c| c.akaike_weight = c.aicc_difference.map(|d| weight(d) / sum));
    let sentence = sentence(&compared);
    Comparison { fits: compared, sentence }
}

/// `polynomial of degree 6`, `extended Morse of order 4`, `Morse`: names of people keep their capital.
pub fn label(fit: &Fit) -> String {
    let title = fit.model.family().running_name();
    match (fit.model.family(), fit.degree) {
        (Family::Polynomial, Some(degree)) => format!("{title} of degree {degree}"),
        (_, Some(order)) => format!("{title} of order {order}"),
        _ => title.to_owned(),
    }
}

fn one(index: usize, fit: &Fit, outside: &[FitPoint]) -> Compared {
    let (from, to) = fit.model.range_bohr();
    let errors: Option<Vec<f64>> = outside
        .iter()
        .map(|p| {
            let inside = p.r_bohr > from && p.r_bohr < to;
            // Beyond its own barrier a polynomial still has values: what it predicts there is what counts.
            let reachable = inside || fit.model.family() == Family::Polynomial;
            let error = fit.model.energy_hartree(p.r_bohr) - p.energy_hartree;
            (reachable && error.is_finite()).then_some(error)
        })
        .collect();
    let errors = errors.filter(|e| !e.is_empty());
    Compared {
        index,
        label: label(fit),
        parameters: fit.parameters.len(),
        rms_residual_hartree: fit.rms_residual_hartree,
        largest_residual_hartree: fit.largest_residual_hartree,
        aicc: fit.aicc,
        aicc_difference: None,
        akaike_weight: None,
        leave_one_out_rms_hartree: fit.leave_one_out_rms_hartree,
        outside_rms_hartree: errors
            .as_ref()
            .map(|e| (e.iter().map(|e| e * e).sum::<f64>() / e.len() as f64).sqrt())
            .filter(|rms| rms.is_finite()),
        outside_points: errors.map_or(0, |e| e.len()),
        misfit: fit.parameters.iter().any(|p| p.estimate.source == Some(ErrorSource::Misfit)),
    }
}

fn list(items: &[&Compared]) -> String {
    let names: Vec<&str> = items.iter().map(|c| c.label.as_str()).collect();
    match names.as_slice() {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [first @ .., last] => format!("{} and {last}", first.join(", ")),
    }
}

fn sentence(compared: &[Compared]) -> Option<String> {
    if compared.len() < 2 {
        return None;
    }
    let ranked: Vec<&Compared> = compared.iter().filter(|c| c.aicc_difference.is_some()).collect();
    let Some(best) = ranked
        .iter()
        .min_by(|a, b| a.aicc_difference.unwrap_or(0.0).total_cmp(&b.aicc_difference.unwrap_or(0.0)))
    else {
        return Some("The points in the window are too few to say which family they support.".to_owned());
    };
    let group = |test: &dyn Fn(f64) -> bool| {
        let all = ranked.iter().filter(|c| c.index != best.index && c.aicc_difference.is_some_and(test));
        all.copied().collect::<Vec<&Compared>>()
    };
    let (equal, weak, none) = (
        group(&|d| d <= SUPPORTED),
        group(&|d| d > SUPPORTED && d <= NO_SUPPORT),
        group(&|d| d > NO_SUPPORT),
    );
    let mut text = format!("Of these fits the points in the window support the {} fit", best.label);
    if !equal.is_empty() {
        text.push_str(&format!(" and, about as well, the {}", list(&equal)));
    }
    if !weak.is_empty() {
        text.push_str(&format!("; less well the {}", list(&weak)));
    }
    if !none.is_empty() {
        // The one of them that comes closest.
        let smallest = none.iter().filter_map(|c| c.aicc_difference).fold(f64::INFINITY, f64::min);
        text.push_str(&format!("; not the {} (AICc higher by {smallest:.0} or more)", list(&none)));
    }
    let unranked: Vec<&Compared> = compared.iter().filter(|c| c.aicc.is_none()).collect();
    if !unranked.is_empty() {
        text.push_str(&format!("; for the {} the points are too few to say", list(&unranked)));
    }
    text.push('.');
    if best.misfit {
        text.push_str(&format!(
            " Its residuals ({} cm-1 rms) are smooth misfit, not noise: the order of the fits can be trusted, the \
             weight of the evidence cannot.",
            crate::digits::rounded(to_per_cm(best.rms_residual_hartree), 2)
        ));
    }
    let outside = ranked.iter().filter_map(|c| c.outside_rms_hartree.map(|rms| (rms, *c)));
    if let Some((rms, far)) = outside.min_by(|a, b| a.0.total_cmp(&b.0)) {
        text.push_str(&format!(
            " Outside the window the {} fit predicts best ({} cm-1 rms over {} points).",
            far.label,
            crate::digits::rounded(to_per_cm(rms), 2),
            far.outside_points
        ));
    }
    Some(text)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::{Variable, Window, fit};
    use crate::potential::Morse;
    use crate::units::LengthUnit;

    /// Invented: a Morse curve with alternating errors.
    fn points(from: f64, to: f64, count: u32) -> Vec<FitPoint> {
        let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
        (0..count)
            .map(|k| {
                let r_bohr = from + (to - from) * f64::from(k) / f64::from(count - 1);
                let error = 1e-7 * f64::from((k * 7) % 5).sin();
                FitPoint { r_bohr, energy_hartree: morse.energy_hartree(r_bohr) + error, weight: 1.0 }
            })
            .collect()
    }

    #[test]
    fn a_morse_curve_supports_the_morse_function() {
        let requests = [
            FitRequest::plain(Family::Harmonic),
            FitRequest::plain(Family::Morse),
            FitRequest::polynomial(4, Variable::X),
            FitRequest::polynomial(10, Variable::X),
        ];
        let window = Window { from: 1.0, to: 2.0, unit: LengthUnit::Bohr };
        let inside = points(1.05, 1.95, 31);
        let results: Vec<Result<Fit, FitError>> = requests.iter().map(|r| fit(*r, &inside, window)).collect();
        let pairs: Vec<(FitRequest, &Result<Fit, FitError>)> =
            requests.iter().copied().zip(&results).collect();
        let found = compare(&pairs, &points(2.0, 3.0, 8));
        assert_eq!(found.fits.len(), 4);
        let sum: f64 = found.fits.iter().filter_map(|c| c.akaike_weight).sum();
        assert!((sum - 1.0).abs() < 1e-12);
        assert_eq!(found.fits[1].aicc_difference, Some(0.0));
        assert!(found.fits[0].misfit && found.fits[0].aicc_difference.unwrap() > NO_SUPPORT);
        // The Morse function alone knows what lies outside.
        let outside = |k: usize| found.fits[k].outside_rms_hartree.unwrap();
        assert!(outside(1) < 1e-5 && outside(0) > 0.1 && outside(2) > 100.0 * outside(1));
        let sentence = found.sentence.unwrap();
        for needle in
            ["support the Morse fit", "not the harmonic", "Outside the window the Morse fit predicts best"]
        {
            assert!(sentence.contains(needle), "{sentence}");
        }
    }

    #[test]
    fn few_points_support_nothing() {
        let window = Window { from: 1.0, to: 2.0, unit: LengthUnit::Bohr };
        let inside = points(1.1, 1.8, 5);
        let requests = [FitRequest::plain(Family::Harmonic), FitRequest::plain(Family::Morse)];
        let results: Vec<Result<Fit, FitError>> = requests.iter().map(|r| fit(*r, &inside, window)).collect();
        let pairs: Vec<(FitRequest, &Result<Fit, FitError>)> =
            requests.iter().copied().zip(&results).collect();
        let found = compare(&pairs, &[]);
        assert!(found.fits.iter().all(|c| c.aicc.is_none() && c.outside_rms_hartree.is_none()));
        assert!(found.sentence.unwrap().contains("too few"));
        assert_eq!(compare(&[], &[]), Comparison::default());
    }
}
