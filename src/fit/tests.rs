//! Tests of weights, bands and of what a fit says when it fails. All data here are invented.

use super::*;
use crate::potential::{Harmonic, Morse, Potential, Rydberg};
use crate::units::LengthUnit;

const WINDOW: Window = Window { from: 0.1, to: 10.0, unit: LengthUnit::Bohr };

fn sampled(model: &dyn Potential, count: u32, from: f64, to: f64) -> Vec<FitPoint> {
    (0..count)
        .map(|k| {
            let r_bohr = from + (to - from) * f64::from(k) / f64::from(count - 1);
            FitPoint { r_bohr, energy_hartree: model.energy_hartree(r_bohr), weight: 1.0 }
        })
        .collect()
}

fn morse() -> Morse {
    Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 }
}

/// Alternating errors of `size`: rough, so that no fit calls them misfit.
fn rough(size: f64) -> Vec<FitPoint> {
    let mut points = sampled(&morse(), 30, 1.0, 2.2);
    points.iter_mut().enumerate().for_each(|(k, p)| {
        p.energy_hartree += if k % 2 == 0 { size } else { -size };
    });
    points
}

/// Σ w V_i = s² p for the variances V_i of the fitted values: the trace of the projector, an identity of least squares
/// that holds for linear and, at the solution, for nonlinear problems.
#[test]
fn the_band_has_the_trace_of_the_projector() {
    let mut points = rough(1e-5);
    points.iter_mut().enumerate().for_each(|(k, p)| p.weight = 1.0 + (k % 3) as f64);
    for request in [FitRequest::plain(Family::Morse), FitRequest::polynomial(5, Variable::Xi)] {
        let found = fit(request, &points, WINDOW).unwrap();
        let p = found.parameters.len() as f64;
        let square_sum: f64 =
            found.residuals.iter().zip(&points).map(|((_, d), point)| point.weight * d * d).sum();
        let variance = square_sum / (points.len() as f64 - p);
        let trace: f64 =
            points.iter().map(|q| q.weight * found.band_hartree(q.r_bohr).unwrap().powi(2)).sum();
        assert!((trace / (variance * p) - 1.0).abs() < 1e-7, "{trace} {}", variance * p);
        // Where there are no points the curve is known less well.
        assert!(found.band_hartree(3.0).unwrap() > found.band_hartree(1.5).unwrap());
        let correlations = found.correlations();
        for (i, row) in correlations.iter().enumerate() {
            assert!(row[i] == 1.0 && row.iter().all(|c| (-1.0..=1.0).contains(c)));
        }
    }
}

#[test]
fn declared_weights_take_the_errors_from_the_weights_alone() {
    let (small, large) = (rough(1e-5), rough(2e-5));
    let declared = |points: &[FitPoint], sigma: f64| {
        let points: Vec<FitPoint> =
            points.iter().map(|p| FitPoint { weight: sigma.powi(-2), ..*p }).collect();
        fit_with(FitRequest::plain(Family::Harmonic), &points, WINDOW, Variance::Declared).unwrap()
    };
    let errors = |f: &Fit| f.parameters.iter().map(|p| p.estimate.std_error.unwrap()).collect::<Vec<f64>>();
    let polynomial = |points: &[FitPoint], sigma: f64| {
        let points: Vec<FitPoint> =
            points.iter().map(|p| FitPoint { weight: sigma.powi(-2), ..*p }).collect();
        fit_with(FitRequest::polynomial(6, Variable::X), &points, WINDOW, Variance::Declared).unwrap()
    };
    // Twice the declared noise doubles the errors.
    for (a, b) in errors(&declared(&small, 1e-5)).iter().zip(errors(&declared(&small, 2e-5))) {
        assert!((b / a - 2.0).abs() < 1e-9, "{a} {b}");
    }
    // Twice the residuals do not; they only move the place where the curvature is taken.
    let (small, large) = (polynomial(&small, 1e-5), polynomial(&large, 1e-5));
    for (a, b) in errors(&small).iter().zip(errors(&large)) {
        assert!((b / a - 1.0).abs() < 1e-2, "{a} {b}");
    }
    assert!(small.parameters.iter().all(|p| p.estimate.source == Some(ErrorSource::Noise)));
}

/// On a Rydberg function the columns of a1 and a2 of the extended one are parallel.
#[test]
fn parameters_that_cannot_be_told_apart_are_called_so() {
    let rydberg = Rydberg { e_min_hartree: -1.17, r_e_bohr: 2.4, well_depth_hartree: 0.17, a_per_bohr: 1.5 };
    let found = fit(FitRequest::plain(Family::ExtendedRydberg), &sampled(&rydberg, 40, 1.7, 6.0), WINDOW);
    assert!(matches!(found, Err(FitError::IllConditioned { .. })), "{found:?}");
    assert_eq!(found.unwrap_err().code(), Code::IllConditioned);
}

/// A parabola, and a curve that is steeper outside than inside, have neither depth nor range: no silent success,
/// and a Morse function says where it is driven.
#[test]
fn a_parabola_gives_no_depth() {
    let parabola = Harmonic { e_min_hartree: -1.0, r_e_bohr: 1.4, force_constant_hartree_per_bohr2: 0.37 };
    let points = sampled(&parabola, 30, 1.0, 1.8);
    let mut reverse = points.clone();
    reverse.iter_mut().for_each(|p| p.energy_hartree += 0.05 * (p.r_bohr - 1.4).powi(3));
    for family in [Family::Morse, Family::Varshni, Family::Rydberg, Family::HulburtHirschfelder] {
        for points in [&points, &reverse] {
            match fit(FitRequest::plain(family), points, WINDOW) {
                Err(error) => println!("{}: {error}", family.word()),
                Ok(found) => {
                    println!("{}: {:?} {:?}", family.word(), found.reciprocal_condition, found.parameters);
                    assert!(found.rms_residual_hartree > 1e-6, "{family:?} cannot equal a parabola");
                }
            }
        }
    }
    let morse = fit(FitRequest::plain(Family::Morse), &reverse, WINDOW);
    assert_eq!(morse.unwrap_err(), FitError::AtBound { what: ModelFault::RangeParameter });
}
