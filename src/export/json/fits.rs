//! The fits of a findings file: each fit, and the fits side by side.

use super::super::numbers::{estimated, number, numbers, quantity};
use super::{interval, parameter_unit, per_cm};
use crate::estimate::{ErrorSource, Estimate};
use crate::findings::{FitBootstrap, FitFindings};
use crate::fit::{Comparison, Fit, Parameter, Window};
use crate::reach::FitReach;
use crate::units::to_per_cm;
use serde_json::{Map, Value, json};

fn window_json(window: Window, points: usize) -> Value {
    let edge =
        |value: f64| quantity(window.unit.convert(value, crate::units::LengthUnit::Angstrom), "angstrom");
    json!({"from": edge(window.from), "to": edge(window.to), "points": points})
}

pub(super) fn fit(findings: &FitFindings) -> Value {
    let request = &findings.request;
    let constants: Map<String, Value> =
        findings.constants_per_cm.iter().map(|(name, e)| ((*name).to_owned(), per_cm(*e))).collect();
    let head = |degree: Option<u32>| json!({"model": request.family, "variable": request.variable, "degree": degree, "power": request.power_in_use()});
    let (mut value, rest) = match &findings.result {
        Ok(fit) => {
            let factors: Vec<f64> = fit.parameters.iter().map(|p| parameter_unit(p.unit).1).collect();
            let covariance: Vec<Value> = fit
                .covariance
                .iter()
                .zip(&factors)
                .map(|(row, fi)| row.iter().zip(&factors).map(|(c, fj)| number(c * fi * fj)).collect())
                .collect();
            let rest = json!({
                "window": window_json(fit.window, fit.points),
                "converged": true,
                "failure": null,
                "parameters": fit.parameters.iter().map(parameter).collect::<Vec<_>>(),
                "covariance": covariance,
                "correlations": fit.correlations().iter().map(numbers).collect::<Vec<_>>(),
                "rms_residual": quantity(to_per_cm(fit.rms_residual_hartree), "cm-1"),
                "largest_residual": quantity(to_per_cm(fit.largest_residual_hartree), "cm-1"),
                "aicc": number(fit.aicc),
                "leave_one_out_rms":
                    fit.leave_one_out_rms_hartree.map(|e| quantity(to_per_cm(e), "cm-1")),
                "constants": constants,
                "levels": levels(findings, fit),
                "reach": findings.reach.as_ref().map(reach),
                "bootstrap": findings.bootstrap.as_ref().map(|b| bootstrap(findings, fit, b)),
            });
            (head(fit.degree), rest)
        }
        Err(error) => (
            head(request.degree),
            json!({
                "window": null, "converged": false, "failure": error.to_string(), "parameters": [],
                "covariance": [], "correlations": [], "rms_residual": null, "largest_residual": null, "aicc": null,
                "leave_one_out_rms": null, "constants": constants, "levels": [],
                "reach": null, "bootstrap": null,
            }),
        ),
    };
    if let (Value::Object(value), Value::Object(rest)) = (&mut value, rest) {
        value.extend(rest);
    }
    value
}

/// Where the fit stands for the curve.
fn reach(reach: &FitReach) -> Value {
    json!({
        "tolerance": number(reach.tolerance),
        "absolute_tolerance": quantity(to_per_cm(reach.absolute_hartree), "cm-1"),
        "energy": reach.interval.as_ref().map(interval),
    })
}

fn parameter(parameter: &Parameter) -> Value {
    let (unit, factor) = parameter_unit(parameter.unit);
    let mut value = json!({"name": parameter.name});
    if let (Value::Object(head), Value::Object(rest)) =
        (&mut value, estimated(parameter.estimate, factor, &unit))
    {
        head.extend(rest);
    }
    value
}

fn levels(findings: &FitFindings, fit: &Fit) -> Vec<Value> {
    let source = fit.error_source();
    let energies = findings.levels_per_cm.iter().enumerate();
    energies
        .map(|(v, &energy)| {
            let error = findings.level_errors_per_cm.get(v).copied().flatten();
            let estimate =
                error.map_or(Estimate::exact(energy), |error| Estimate::with_error(energy, error, source));
            json!({"v": v, "energy": estimated(estimate, 1.0, "cm-1")})
        })
        .collect()
}

/// The same values with the standard errors of resampled residuals.
fn bootstrap(findings: &FitFindings, fit: &Fit, bootstrap: &FitBootstrap) -> Value {
    let resampled = |value: f64, error: Option<f64>| {
        error.map_or(Estimate::exact(value), |e| Estimate::with_error(value, e, ErrorSource::Bootstrap))
    };
    let parameters: Vec<Value> = fit
        .parameters
        .iter()
        .zip(&bootstrap.parameter_errors)
        .map(|(p, error)| {
            parameter(&Parameter { estimate: resampled(p.estimate.value, *error), ..p.clone() })
        })
        .collect();
    let constants: Map<String, Value> = findings
        .constants_per_cm
        .iter()
        .zip(&bootstrap.constant_errors_per_cm)
        .map(|((name, e), error)| ((*name).to_owned(), per_cm(e.map(|e| resampled(e.value, *error)))))
        .collect();
    let levels = findings.levels_per_cm.iter().zip(&bootstrap.level_errors_per_cm).enumerate();
    json!({
        "repeats": bootstrap.settings.repeats,
        "seed": bootstrap.settings.seed,
        "failed": bootstrap.failed,
        "parameters": parameters,
        "constants": constants,
        "levels": levels
            .map(|(v, (&e, error))| json!({"v": v, "energy": estimated(resampled(e, *error), 1.0, "cm-1")}))
            .collect::<Vec<_>>(),
    })
}

/// The fits side by side.
pub(super) fn comparison(comparison: &Comparison) -> Value {
    let energy = |hartree: Option<f64>| hartree.map(|e| quantity(to_per_cm(e), "cm-1"));
    json!({
        "sentence": comparison.sentence,
        "fits": comparison.fits.iter().map(|c| json!({
            "fit": c.index,
            "label": c.label,
            "parameters": c.parameters,
            "rms_residual": energy(Some(c.rms_residual_hartree)),
            "largest_residual": energy(Some(c.largest_residual_hartree)),
            "aicc": number(c.aicc),
            "aicc_difference": number(c.aicc_difference),
            "akaike_weight": number(c.akaike_weight),
            "leave_one_out_rms": energy(c.leave_one_out_rms_hartree),
            "outside_rms": energy(c.outside_rms_hartree),
            "outside_points": c.outside_points,
            "misfit": c.misfit,
        })).collect::<Vec<_>>(),
    })
}
