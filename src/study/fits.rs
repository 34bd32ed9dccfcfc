//! The fits of a study: the points in the window, each model, and what follows from the fitted function.

use super::points::fit_point;
use crate::estimate::{ErrorSource, Estimate};
use crate::findings::{Findings, FitFindings};
use crate::fit::{Fit, FitPoint, FitRequest, Window, default_window, fit};
use crate::potential::curve::{LocalDerivatives, ScanCurve};
use crate::potential::{Family, Model, Potential as _};
use crate::radial::{RadialRequest, bound_states};
use crate::spectroscopy::{DunhamConstants, dunham};
use crate::units::to_per_cm;

/// Ladders without an end (harmonic, rising polynomials) are listed up to this many rungs: far beyond what a
/// fit near the minimum can say.
const RUNGS: usize = 40;

/// Does every fit that the settings ask for.
pub fn fit_all(findings: &mut Findings, curve: &ScanCurve) {
    let source = &findings.source;
    let window = findings.settings.fits.window.unwrap_or_else(|| {
        let r: Vec<f64> = source.points.iter().filter(|p| p.used).map(|p| p.r_as_read).collect();
        default_window(curve.local.r_e_bohr, &r, source.length_unit)
    });
    let points: Vec<FitPoint> = source
        .points
        .iter()
        .filter(|p| p.used && window.contains(p.r_as_read, source.length_unit))
        .map(fit_point)
        .collect();
    let mass_me = findings.masses.as_ref().map(|m| m.reduced_mass_me);
    for &request in &findings.settings.fits.requests {
        let found = one_fit(request, &points, window, mass_me);
        if let Ok(fit) = &found.result {
            findings.notices.extend(fit.notices.iter().cloned());
        }
        findings.fits.push(found);
    }
}

fn one_fit(request: FitRequest, points: &[FitPoint], window: Window, mass_me: Option<f64>) -> FitFindings {
    let result = fit(request, points, window);
    let (mut constants_per_cm, mut levels_per_cm) = (Vec::new(), Vec::new());
    if let (Ok(fit), Some(mass_me)) = (&result, mass_me) {
        constants_per_cm = constants(fit, mass_me);
        levels_per_cm = levels(&fit.model, mass_me);
    }
    FitFindings { request, result, constants_per_cm, levels_per_cm }
}

/// Dunham's constants of the fitted function, with the covariance of its parameters propagated
/// linearly: σ² = gᵀ C g, g by central differences of one thousandth of a standard error.
fn constants(fit: &Fit, mass_me: f64) -> Vec<(&'static str, Option<Estimate>)> {
    let harmonic = fit.model.family() == Family::Harmonic;
    let named = |c: &DunhamConstants| {
        let anharmonic = |value: f64| (!harmonic).then_some(value);
        [
            ("omega_e", Some(c.omega_e_per_cm)),
            ("omega_e_x_e", anharmonic(c.omega_e_x_e_per_cm)),
            ("b_e", Some(c.b_e_per_cm)),
            ("alpha_e", anharmonic(c.alpha_e_per_cm)),
        ]
    };
    let Some(centre) = local(&fit.model).map(|l| named(&dunham(&l, mass_me))) else { return Vec::new() };
    let gradient: Option<Vec<[f64; 4]>> = (0..fit.covariance.len())
        .map(|i| {
            let step = 1e-3 * fit.covariance[i][i].sqrt();
            if step == 0.0 {
                return Some([0.0; 4]);
            }
            let moved = |sign: f64| {
                let mut model = fit.model.clone();
                let mut values = model.as_parametric().values();
                values[i] += sign * step;
                model.set_values(&values);
                local(&model).map(|l| named(&dunham(&l, mass_me)).map(|(_, v)| v.unwrap_or(0.0)))
            };
            let (up, down) = (moved(1.0)?, moved(-1.0)?);
            Some(std::array::from_fn(|c| (up[c] - down[c]) / (2.0 * step)))
        })
        .collect();
    let source = fit.parameters.iter().find_map(|p| p.estimate.source).unwrap_or(ErrorSource::Fit);
    centre
        .iter()
        .enumerate()
        .map(|(c, (name, value))| {
            let error = gradient.as_ref().filter(|g| !g.is_empty()).map(|g| {
                let variance: f64 = (0..g.len())
                    .flat_map(|i| (0..g.len()).map(move |j| (i, j)))
                    .map(|(i, j)| g[i][c] * fit.covariance[i][j] * g[j][c])
                    .sum();
                variance.max(0.0).sqrt()
            });
            let estimate = value.filter(|v| v.is_finite()).map(|v| match error {
                Some(error) => Estimate::with_error(v, error, source),
                None => Estimate::exact(v),
            });
            (*name, estimate)
        })
        .collect()
}

/// The fitted function at its own minimum.
fn local(model: &Model) -> Option<LocalDerivatives> {
    let r_e = model.minimum_bohr();
    let [v_e, _, second, third, fourth] = model.derivatives_hartree(r_e);
    (second > 0.0 && second.is_finite()).then_some(LocalDerivatives {
        r_e_bohr: r_e,
        v_e_hartree: v_e,
        second_hartree: second,
        third_hartree: third,
        fourth_hartree: fourth,
    })
}

/// The function's own levels in cm⁻¹ above its own minimum: closed form where there is one.
fn levels(model: &Model, mass_me: f64) -> Vec<f64> {
    let hartree = model.closed_form_levels_hartree(mass_me, RUNGS).unwrap_or_else(|| {
        let mut above = model.clone();
        let e_min = model.energy_hartree(model.minimum_bohr());
        above.shift_energy_hartree(-e_min);
        let request = RadialRequest {
            reduced_mass_me: mass_me,
            rotation_x: 0.0,
            relative_accuracy: 1e-10,
            highest_v: Some(RUNGS - 1),
        };
        bound_states(&above, &request)
            .map(|states| states.iter().map(|s| s.energy_hartree).collect())
            .unwrap_or_default()
    });
    hartree.into_iter().map(to_per_cm).collect()
}
