//! Tests of whole fits: exactness, error bars, window bias, edge cases. All data here are invented.

use super::*;
use crate::potential::{
    ExtendedMorse, ExtendedRydberg, Harmonic, HulburtHirschfelder, Morse, Polynomial, Potential, Rydberg,
    Varshni,
};
use crate::units::LengthUnit;

const WINDOW: Window = Window { from: 0.1, to: 10.0, unit: LengthUnit::Bohr };

/// `count` even points of a model from `from` to `to` bohr.
fn sampled(model: &dyn Potential, count: u32, from: f64, to: f64) -> Vec<FitPoint> {
    (0..count)
        .map(|k| {
            let r_bohr = from + (to - from) * f64::from(k) / f64::from(count - 1);
            FitPoint { r_bohr, energy_hartree: model.energy_hartree(r_bohr), weight: 1.0 }
        })
        .collect()
}

fn around(model: &dyn Potential, count: u32, half: f64) -> Vec<FitPoint> {
    sampled(model, count, model.minimum_bohr() - half, model.minimum_bohr() + half)
}

fn assert_recovers(model: &Model, request: FitRequest, points: &[FitPoint], relative: f64) {
    let found = fit(request, points, WINDOW).unwrap();
    let wanted = model.as_parametric().values();
    assert_eq!(found.parameters.len(), wanted.len());
    for (parameter, want) in found.parameters.iter().zip(wanted) {
        let (value, error) = (parameter.estimate.value, (parameter.estimate.value - want).abs());
        let name = format!("{} {}", model.family().word(), parameter.name);
        assert!(error <= relative * want.abs().max(1e-3), "{name}: {value} against {want}");
    }
    assert!(found.rms_residual_hartree < 1e-13);
}

#[test]
fn exact_points_give_back_the_parameters() {
    for (e_min_hartree, relative) in [(0.0, 1e-12), (-100.3, 3e-10)] {
        let harmonic = Harmonic { e_min_hartree, r_e_bohr: 1.4, force_constant_hartree_per_bohr2: 0.37 };
        assert_recovers(
            &harmonic.into(),
            FitRequest::plain(Family::Harmonic),
            &around(&harmonic, 15, 0.3),
            relative,
        );
        let morse = Morse { e_min_hartree, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
        assert_recovers(&morse.into(), FitRequest::plain(Family::Morse), &around(&morse, 30, 0.7), relative);
        for variable in [Variable::X, Variable::Xi, Variable::Z, Variable::Ogilvie] {
            let model = Polynomial::new(variable, e_min_hartree, 1.4, &[0.3, -0.33, 0.2, -0.1]);
            let request = FitRequest::polynomial(5, variable);
            assert_recovers(&model.clone().into(), request, &around(&model, 20, 0.4), 100.0 * relative);
        }
    }
}

#[test]
fn exact_wells_of_the_other_families_give_back_the_parameters() {
    let (e_min_hartree, r_e_bohr, well_depth_hartree) = (-1.17, 2.4, 0.17);
    let wells: [Model; 5] = [
        Rydberg { e_min_hartree, r_e_bohr, well_depth_hartree, a_per_bohr: 1.5 }.into(),
        Varshni { e_min_hartree, r_e_bohr, well_depth_hartree, b_per_bohr2: 0.06 }.into(),
        ExtendedRydberg { e_min_hartree, r_e_bohr, well_depth_hartree, a_per_bohr_n: [2.3, 1.3, 0.31] }
            .into(),
        HulburtHirschfelder {
            e_min_hartree,
            r_e_bohr,
            well_depth_hartree,
            a_per_bohr: 1.2,
            b: 1.1,
            c: 0.075,
        }
        .into(),
        ExtendedMorse {
            e_min_hartree,
            r_e_bohr,
            well_depth_hartree,
            power: 2,
            beta_per_bohr: vec![1.03, 0.12, -0.07, 0.06, 0.02],
        }
        .into(),
    ];
    for model in wells {
        assert_recovers(&model, FitRequest::plain(model.family()), &sampled(&model, 40, 1.7, 6.0), 1e-8);
    }
}

/// Dense even points of a Morse function: k_fit/k = 1 + a²W²/2 and r_e shifted by +0.3 a W² at leading
/// order (the expansion of the least-squares conditions in W; derived anew for this test).
#[test]
fn the_harmonic_fit_carries_the_bias_of_its_window() {
    let morse = Morse { e_min_hartree: 0.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let k = morse.force_constant_hartree_per_bohr2();
    let deviations: Vec<(f64, f64)> = [0.2, 0.1]
        .into_iter()
        .map(|w| {
            let found = fit(FitRequest::plain(Family::Harmonic), &around(&morse, 8001, w), WINDOW).unwrap();
            let value = |j: usize| found.parameters[j].estimate.value;
            let (k_bias, shift) = (value(2) / k - 1.0, value(1) - 1.4);
            let aw = morse.a_per_bohr * w;
            (k_bias / (0.5 * aw * aw) - 1.0, shift / (0.3 * aw * w) - 1.0)
        })
        .collect();
    // The next order is W² higher: halving W must bring the ratio four times closer to one.
    for (wide, narrow) in [(deviations[0].0, deviations[1].0), (deviations[0].1, deviations[1].1)] {
        assert!(narrow.abs() < 0.02, "{deviations:?}");
        assert!((wide / narrow - 4.0).abs() < 0.5, "{deviations:?}");
    }
}

/// Derivatives at the minimum of a polynomial of rising degree go to those of the curve.
#[test]
fn polynomials_converge_to_the_derivatives() {
    let morse = Morse { e_min_hartree: 0.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let k = morse.force_constant_hartree_per_bohr2();
    let points = around(&morse, 31, 0.3);
    let errors: Vec<f64> = [2, 4, 6, 8, 10]
        .into_iter()
        .map(|degree| {
            let found = fit(FitRequest::polynomial(degree, Variable::X), &points, WINDOW).unwrap();
            (2.0 * found.parameters[2].estimate.value / k - 1.0).abs()
        })
        .collect();
    assert!(errors.windows(2).all(|pair| pair[1] < 0.2 * pair[0]), "{errors:?}");
}

/// A linear congruential generator and Box-Muller: repeatable noise without a package.
struct Noise(u64);

impl Noise {
    fn uniform(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        ((self.0 >> 11) as f64 + 0.5) / (1u64 << 53) as f64
    }
    fn normal(&mut self) -> f64 {
        (-2.0 * self.uniform().ln()).sqrt() * (std::f64::consts::TAU * self.uniform()).cos()
    }
}

/// Share of repeats in which each parameter lies within two of its standard errors of the truth.
fn coverage(
    model: &Model,
    request: FitRequest,
    points: &[FitPoint],
    sigma: f64,
    repeats: u32,
) -> Vec<(String, f64)> {
    let truth = model.as_parametric().values();
    let mut hits = vec![0u32; truth.len()];
    let mut noise = Noise(20_260_731);
    let mut names = Vec::new();
    for _ in 0..repeats {
        let noisy: Vec<FitPoint> = points
            .iter()
            .map(|p| FitPoint { energy_hartree: p.energy_hartree + sigma * noise.normal(), ..*p })
            .collect();
        let found = fit(request, &noisy, WINDOW).unwrap();
        for (j, parameter) in found.parameters.iter().enumerate() {
            let within = 2.0 * parameter.estimate.std_error.unwrap();
            hits[j] += u32::from((parameter.estimate.value - truth[j]).abs() <= within);
        }
        names = found.parameters.into_iter().map(|p| p.name).collect();
    }
    names.into_iter().zip(hits.iter().map(|&h| f64::from(h) / f64::from(repeats))).collect()
}

/// Two standard errors hold 95.45 % of a normal distribution and 94 % of Student's with 16 degrees of
/// freedom; 2,000 repeats scatter by 0.5 %.
#[test]
fn error_bars_cover_the_truth() {
    let (e_min_hartree, r_e_bohr) = (-1.0, 1.4);
    let cases: [(Model, FitRequest); 3] = [
        (
            Harmonic { e_min_hartree, r_e_bohr, force_constant_hartree_per_bohr2: 0.37 }.into(),
            FitRequest::plain(Family::Harmonic),
        ),
        (
            Polynomial::new(Variable::X, e_min_hartree, r_e_bohr, &[0.19, -0.2, 0.13]).into(),
            FitRequest::polynomial(4, Variable::X),
        ),
        (
            Morse { e_min_hartree, r_e_bohr, well_depth_hartree: 0.17, a_per_bohr: 1.03 }.into(),
            FitRequest::plain(Family::Morse),
        ),
    ];
    for (model, request) in cases {
        for (name, share) in coverage(&model, request, &around(&model, 21, 0.5), 1e-5, 2_000) {
            println!("coverage {} {name} {:.1} %", model.family().word(), 100.0 * share);
            assert!((0.92..=0.98).contains(&share), "{} {name}: {share}", model.family().word());
        }
    }
}

/// Leave-one-out of a linear fit from d/(1 − h) is what refits find.
#[test]
fn leave_one_out_needs_no_refit_for_linear_fits() {
    let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let points = around(&morse, 15, 0.4);
    let request = FitRequest::polynomial(4, Variable::X);
    let all = fit(request, &points, WINDOW).unwrap();
    let mut sum = 0.0;
    for i in 0..points.len() {
        let mut rest = points.clone();
        let left_out = rest.remove(i);
        let other = fit(request, &rest, WINDOW).unwrap();
        sum += (other.model.energy_hartree(left_out.r_bohr) - left_out.energy_hartree).powi(2);
    }
    let want = (sum / points.len() as f64).sqrt();
    assert!((all.leave_one_out_rms_hartree.unwrap() / want - 1.0).abs() < 1e-6);
}

/// Above 200 points leave-one-out comes from leverages: beside 200 points the refits agree with it, and thousands of
/// points, which refits would keep busy for minutes, take no time that grows with their square.
#[test]
fn leave_one_out_of_many_points_needs_no_refits() {
    let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let rms = |count: u32| {
        let points = around(&morse, count, 0.4);
        let found = fit(FitRequest::plain(Family::Rydberg), &points, WINDOW).unwrap();
        (found.leave_one_out_rms_hartree.unwrap(), found.rms_residual_hartree)
    };
    let ratio = |(loo, rms): (f64, f64)| (loo / rms - 1.0) * 200.0;
    let (refits, leverages) = (ratio(rms(200)), ratio(rms(201)));
    assert!(refits > 1.0 && (leverages / refits - 1.0).abs() < 0.1, "{refits} {leverages}");
    let (many, plain) = rms(20_000);
    assert!(many >= plain);
}

#[test]
fn statistics_follow_their_definitions() {
    let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let mut points = around(&morse, 41, 0.4);
    points.iter_mut().enumerate().for_each(|(k, p)| p.weight = 1.0 + (k % 3) as f64);
    points[2].weight = 0.0;
    let found = fit(FitRequest::plain(Family::Harmonic), &points, WINDOW).unwrap();
    let d: Vec<f64> = found.residuals.iter().map(|&(_, d)| d).collect();
    assert_eq!((found.points, d.len()), (40, 40));
    for (&(r, d), point) in found.residuals.iter().zip(points.iter().filter(|p| p.weight > 0.0)) {
        assert!(
            r == point.r_bohr && (found.model.energy_hartree(r) - point.energy_hartree - d).abs() < 1e-15
        );
    }
    let rms = (d.iter().map(|d| d * d).sum::<f64>() / 40.0).sqrt();
    assert!((found.rms_residual_hartree / rms - 1.0).abs() < 1e-12);
    assert!(found.largest_residual_hartree == d.iter().fold(0.0, |m: f64, d| m.max(d.abs())));
    // A common factor of the weights changes nothing but the criterion.
    points.iter_mut().for_each(|p| p.weight *= 16.0);
    let scaled = fit(FitRequest::plain(Family::Harmonic), &points, WINDOW).unwrap();
    for (a, b) in found.parameters.iter().zip(&scaled.parameters) {
        assert!((a.estimate.value - b.estimate.value).abs() < 1e-14);
        assert!((a.estimate.std_error.unwrap() / b.estimate.std_error.unwrap() - 1.0).abs() < 1e-10);
    }
    // Smooth misfit is named as such.
    assert!(found.parameters.iter().all(|p| p.estimate.source == Some(ErrorSource::Misfit)));
    assert!(found.notices.iter().any(|n| n.code == crate::notice::Code::Misfit));
}

#[test]
fn as_many_parameters_as_points_have_no_errors() {
    let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    for (request, count) in [
        (FitRequest::polynomial(6, Variable::X), 3),
        (FitRequest::plain(Family::Harmonic), 3),
        (FitRequest::plain(Family::Morse), 4),
    ] {
        let found = fit(request, &sampled(&morse, count, 1.1, 1.8), WINDOW).unwrap();
        assert!(
            found.covariance.is_empty() && found.aicc.is_none() && found.leave_one_out_rms_hartree.is_none()
        );
        assert!(found.parameters.iter().all(|p| p.estimate.std_error.is_none()));
        assert!(found.notices.iter().any(|n| n.code == crate::notice::Code::FewPoints));
        assert_eq!(found.parameters.len(), count as usize);
    }
}

#[test]
fn what_cannot_be_fitted_says_why() {
    let morse = Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 };
    let points = sampled(&morse, 20, 1.1, 2.0);
    let wall = sampled(&morse, 20, 1.5, 3.0);
    for &family in Family::ALL {
        let request = FitRequest::plain(family);
        assert!(matches!(fit(request, &[], WINDOW), Err(FitError::TooFewPoints { points: 0, .. })));
        assert!(matches!(fit(request, &points[..2], WINDOW), Err(FitError::TooFewPoints { points: 2, .. })));
        assert!(matches!(fit(request, &wall, WINDOW), Err(FitError::NoMinimum)), "{family:?}");
        for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            let mut broken = points.clone();
            broken[3].energy_hartree = bad;
            assert!(matches!(fit(request, &broken, WINDOW), Err(FitError::NotFinite { .. })));
            broken[3] = FitPoint { r_bohr: bad, ..points[3] };
            assert!(matches!(fit(request, &broken, WINDOW), Err(FitError::NotFinite { .. })));
        }
        // A flat line, and one geometry many times: an error of some kind, never a panic or a hang.
        let flat: Vec<FitPoint> = points.iter().map(|p| FitPoint { energy_hartree: -1.0, ..*p }).collect();
        assert!(fit(request, &flat, WINDOW).is_err());
        assert!(fit(request, &[points[5]; 20], WINDOW).is_err());
    }
    assert!(matches!(
        fit(FitRequest::polynomial(13, Variable::X), &points, WINDOW),
        Err(FitError::Degree { .. })
    ));
    assert!(matches!(
        fit(FitRequest::polynomial(1, Variable::X), &points, WINDOW),
        Err(FitError::Degree { .. })
    ));
}

/// Energies of any size, and a parabola for Morse: an end within the limits, whatever it is.
#[test]
fn odd_scans_end() {
    for scale in [1e-300, 1e-12, 1e12, 1e150] {
        let points: Vec<FitPoint> = (0..20)
            .map(|k| {
                let r_bohr = 1.0 + 0.05 * f64::from(k);
                FitPoint { r_bohr, energy_hartree: scale * (r_bohr - 1.45).powi(2), weight: 1.0 }
            })
            .collect();
        for &family in Family::ALL {
            if let Ok(found) = fit(FitRequest::plain(family), &points, WINDOW) {
                assert!(found.parameters.iter().all(|p| p.estimate.value.is_finite()));
            }
        }
    }
}

/// The base of the curve repeats bit for bit and equals the fit.
#[test]
fn the_base_is_the_morse_fit() {
    let rydberg = Rydberg { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.5 };
    let points = sampled(&rydberg, 60, 0.9, 4.0);
    let base = morse_for_base(&points).unwrap();
    assert_eq!(base, morse_for_base(&points).unwrap());
    let mut reversed = points.clone();
    reversed.reverse();
    assert_eq!(base, morse_for_base(&reversed).unwrap());
    let found = fit(FitRequest::plain(Family::Morse), &points, WINDOW).unwrap();
    for (a, b) in found.model.as_parametric().values().iter().zip(crate::potential::Parametric::values(&base))
    {
        assert!((a / b - 1.0).abs() < 1e-9, "{a} {b}");
    }
}

/// Bond length in bohr and energy of the first column of a sample scan (angstrom, hartree).
fn sample(text: &str) -> Vec<FitPoint> {
    let rows = text.lines().filter(|line| line.starts_with(|c: char| c.is_ascii_digit()));
    rows.map(|line| {
        let numbers: Vec<f64> = line.split(',').take(2).map(|word| word.trim().parse().unwrap()).collect();
        FitPoint { r_bohr: LengthUnit::Angstrom.to_bohr(numbers[0]), energy_hartree: numbers[1], weight: 1.0 }
    })
    .collect()
}

/// Extended Morse functions (p = 2) through whole real scans reach 1 cm⁻¹ by order 12 at the latest.
#[test]
fn extended_morse_follows_whole_scans() {
    let scans = [
        ("H2", include_str!("../../sample-scans/h2_fci.csv")),
        ("LiH", include_str!("../../sample-scans/lih_X_A.csv")),
    ];
    for (name, text) in scans {
        let points = sample(text);
        let mut criteria = Vec::new();
        let rms: Vec<f64> = (0..=12)
            .map(|order| {
                let request = FitRequest { degree: Some(order), ..FitRequest::plain(Family::ExtendedMorse) };
                let found = fit(request, &points, WINDOW);
                let rms =
                    found.as_ref().map_or(f64::INFINITY, |f| crate::units::to_per_cm(f.rms_residual_hartree));
                let aicc = found.as_ref().ok().and_then(|f| f.aicc);
                println!(
                    "extended Morse {name} order {order}: rms {rms:.3} cm-1, AICc {aicc:.1?} {:?}",
                    found.err()
                );
                criteria.extend(aicc.map(|aicc| (order, aicc)));
                rms
            })
            .collect();
        let lowest = criteria.iter().min_by(|a, b| a.1.total_cmp(&b.1)).unwrap();
        let stops = criteria.windows(2).find(|pair| pair[1].1 >= pair[0].1).map_or(12, |pair| pair[0].0);
        println!(
            "extended Morse {name}: AICc first stops falling at order {stops}, lowest at order {}",
            lowest.0
        );
        assert!(rms[lowest.0 as usize] < 1.0, "{name}: {rms:?}");
    }
}
