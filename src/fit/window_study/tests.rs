//! Tests of the window study on invented scans.

use super::*;
use crate::fit::fit;
use crate::potential::Morse;
use crate::units::omega_e_per_cm;

const MASS: f64 = 918.0;

fn morse() -> Morse {
    Morse { e_min_hartree: -1.0, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 }
}

/// Invented: a Morse curve with repeatable errors of `noise` hartree.
fn scan(noise: f64) -> Vec<FitPoint> {
    (0..50)
        .map(|k| {
            let r_bohr = 0.86 + 0.025 * f64::from(k);
            let error = noise * (f64::from(k * k % 97) * 1.7).sin();
            FitPoint { r_bohr, energy_hartree: morse().energy_hartree(r_bohr) + error, weight: 1.0 }
        })
        .collect()
}

fn run(points: &[FitPoint], settings: &WindowStudySettings) -> WindowStudy {
    let r_as_read: Vec<f64> = points.iter().map(|p| p.r_bohr).collect();
    let input = WindowStudyInput {
        points,
        r_as_read: &r_as_read,
        unit: LengthUnit::Bohr,
        r_e_bohr: 1.4,
        variance: Variance::FromResiduals,
    };
    let constants = |l: &LocalDerivatives| Some([omega_e_per_cm(l.second_hartree, MASS), f64::NAN]);
    let (mut last, mut all) = (0, 0);
    let found = window_study(input, settings, &constants, &mut |done, total| {
        assert!(done == last + 1 && done <= total);
        (last, all) = (done, total);
        true
    })
    .unwrap();
    assert_eq!(last, all);
    found
}

#[test]
fn every_fit_is_the_fit_of_its_window() {
    let points = scan(1e-6);
    let found = run(&points, &WindowStudySettings { most_fits: 600, ..WindowStudySettings::default() });
    assert!(found.fits.len() > 300 && found.fits.len() <= 600, "{}", found.fits.len());
    assert!(found.fits.iter().any(|f| !f.symmetric));
    for one in found.fits.iter().step_by(7) {
        let inside: Vec<FitPoint> =
            points.iter().filter(|p| one.window.contains(p.r_bohr, LengthUnit::Bohr)).copied().collect();
        assert_eq!(inside.len(), one.points);
        let plain = fit(found.models[one.model], &inside, one.window);
        let (Ok(plain), Ok(numbers)) = (&plain, &one.numbers) else {
            assert_eq!(plain.is_err(), one.numbers.is_err(), "{plain:?} {one:?}");
            continue;
        };
        let r_e = plain.parameters[1].estimate;
        assert!((numbers.r_e_bohr.value - r_e.value).abs() < 1e-9, "{one:?}");
        let (ours, theirs) = (numbers.r_e_bohr.std_error.unwrap(), r_e.std_error.unwrap());
        assert!((ours / theirs - 1.0).abs() < 1e-3, "{ours} {theirs}");
        assert!((numbers.rms_residual_hartree / plain.rms_residual_hartree - 1.0).abs() < 1e-6);
    }
}

/// The proposal on clean data gives k to 1e-4; harmonic windows drift with W² and have their plateau at a larger
/// spread than higher degrees.
#[test]
fn the_plateau_gives_the_curvature() {
    let k = morse().force_constant_hartree_per_bohr2();
    for (noise, tolerance) in [(0.0, 1e-4), (1e-6, 3e-3)] {
        let found = run(&scan(noise), &WindowStudySettings::default());
        let proposal = found.proposal().unwrap();
        let numbers = proposal.numbers.as_ref().unwrap();
        let error = numbers.force_constant_hartree_per_bohr2.value / k - 1.0;
        println!(
            "noise {noise}: model {} W {:.3} k off by {error:.1e}",
            proposal.model,
            proposal.half_width_bohr()
        );
        assert!(error.abs() < tolerance, "{noise}: {error}");
        let spread = |model: usize| found.plateaus.iter().find(|p| p.model == model).map(|p| p.spread);
        assert!(spread(0).is_none_or(|harmonic| harmonic > spread(3).unwrap()));
        assert!(proposal.symmetric);
        assert!(numbers.omega_e_per_cm.unwrap().std_error.is_some());
    }
}

/// A scan of thousands of points stays within the limit; invented.
#[test]
fn long_scans_keep_to_the_limit() {
    let points: Vec<FitPoint> = (0..4_000)
        .map(|k| {
            let r_bohr = 0.8 + 3e-4 * f64::from(k);
            FitPoint { r_bohr, energy_hartree: morse().energy_hartree(r_bohr), weight: 1.0 }
        })
        .collect();
    let models = vec![FitRequest::plain(Family::Harmonic)];
    let found = run(&points, &WindowStudySettings { models, most_fits: 60, ..Default::default() });
    assert!((40..=60).contains(&found.fits.len()), "{}", found.fits.len());
}

#[test]
fn few_points_and_a_stop_end_early() {
    let points = scan(0.0);
    let few = run(&points[20..24], &WindowStudySettings::default());
    assert!(few.fits.is_empty() && few.proposed.is_none());
    let one_sided = run(&points[30..], &WindowStudySettings::default());
    assert!(one_sided.fits.is_empty());
    let none = run(&points, &WindowStudySettings { models: Vec::new(), ..Default::default() });
    assert!(none.fits.is_empty());
    let r_as_read: Vec<f64> = points.iter().map(|p| p.r_bohr).collect();
    let input = WindowStudyInput {
        points: &points,
        r_as_read: &r_as_read,
        unit: LengthUnit::Bohr,
        r_e_bohr: 1.4,
        variance: Variance::FromResiduals,
    };
    let stopped = window_study(input, &Default::default(), &|_| None, &mut |done, _| done < 9);
    assert_eq!(stopped, Err(Stopped { done: 9 }));
}
