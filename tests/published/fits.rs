//! A Morse fit to the CO sample scan against the same least squares done elsewhere.
//!
//! Reference: Gauss-Newton in 40-digit arithmetic (Python, mpmath) on the digits of the file, energies
//! counted from the lowest point, run until the step was below 1e-40. SciPy 1.17.1 `curve_fit` with the
//! analytic Jacobian and tolerances of 1e-15 gives the same parameters and standard errors to 8 digits.

use parabound::fit::{Family, FitPoint, FitRequest, Window, fit};
use parabound::units::LengthUnit;

#[expect(clippy::excessive_precision, reason = "digits as the reference computation printed them")]
/// e_min above the lowest point (hartree), r_e (bohr), d_e (hartree), a (1/bohr), each with its standard error.
const REFERENCE: [(f64, f64); 4] = [
    (-0.000_320_991_213_852_967_3, 3.941_629_825_136_203_8e-5),
    (2.138_411_324_317_725, 2.010_313_571_053_001_4e-4),
    (0.395_282_714_215_808_39, 1.674_028_684_277_358_5e-3),
    (1.245_639_652_019_943_2, 3.077_668_296_273_993_8e-3),
];

/// S in hartree².
const REFERENCE_SQUARE_SUM: f64 = 2.972_915_739_742_611e-7;

/// Energies of −113 hartree carry 1e-14; the parameters answer to that with a few hundred times as much.
const RELATIVE: f64 = 1e-9;

#[test]
fn morse_fit_of_the_co_scan() {
    let text = include_str!("../../sample-scans/co_ccsdt_bohr.dat");
    let rows = text.lines().filter(|line| !line.starts_with('!') && !line.trim().is_empty());
    let points: Vec<FitPoint> = rows
        .map(|line| {
            let numbers: Vec<f64> = line.split_whitespace().map(|word| word.parse().unwrap()).collect();
            FitPoint { r_bohr: numbers[0], energy_hartree: numbers[1], weight: 1.0 }
        })
        .collect();
    assert_eq!(points.len(), 24);
    let lowest = points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
    let window = Window { from: 1.8, to: 2.72, unit: LengthUnit::Bohr };
    let found = fit(FitRequest::plain(Family::Morse), &points, window).unwrap();
    for (j, (parameter, (value, error))) in found.parameters.iter().zip(REFERENCE).enumerate() {
        // e_min is a total energy; its reference counts from the lowest point.
        let (ours, scale) = if j == 0 {
            (parameter.estimate.value - lowest, 1e-3)
        } else {
            (parameter.estimate.value, value)
        };
        assert!((ours - value).abs() <= RELATIVE * scale.abs(), "{}: {ours} against {value}", parameter.name);
        let ours = parameter.estimate.std_error.unwrap();
        assert!(
            (ours / error - 1.0).abs() <= RELATIVE,
            "error of {}: {ours} against {error}",
            parameter.name
        );
    }
    let square_sum = found.rms_residual_hartree.powi(2) * 24.0;
    assert!((square_sum / REFERENCE_SQUARE_SUM - 1.0).abs() <= RELATIVE);
}

/// `tests/published/reference/morse-fit.json`, made by the script beside it with SciPy's `curve_fit`.
#[test]
fn morse_fits_agree_with_scipy_to_seven_digits() {
    let text = include_str!("reference/morse-fit.json");
    let reference: serde_json::Value = serde_json::from_str(text).unwrap();
    let scans = [
        ("co_ccsdt_bohr.dat", include_str!("../../sample-scans/co_ccsdt_bohr.dat"), LengthUnit::Bohr),
        ("h2_fci.csv", include_str!("../../sample-scans/h2_fci.csv"), LengthUnit::Angstrom),
        ("lih_X_A.csv", include_str!("../../sample-scans/lih_X_A.csv"), LengthUnit::Angstrom),
    ];
    let fits = reference["fits"].as_array().unwrap();
    assert_eq!(fits.len(), scans.len());
    for (entry, (name, text, unit)) in fits.iter().zip(scans) {
        assert_eq!(entry["scan"], name);
        let starts_with_number = |line: &&str| line.trim_start().starts_with(|c: char| c.is_ascii_digit());
        let points: Vec<FitPoint> = text
            .lines()
            .filter(starts_with_number)
            .map(|line| {
                let words = line.split([',', ' ']).filter(|word| !word.is_empty());
                let numbers: Vec<f64> = words.take(2).map(|word| word.parse().unwrap()).collect();
                FitPoint { r_bohr: unit.to_bohr(numbers[0]), energy_hartree: numbers[1], weight: 1.0 }
            })
            .collect();
        assert_eq!(points.len() as u64, entry["points"].as_u64().unwrap());
        let lowest = points.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
        let window = Window { from: 0.1, to: 50.0, unit: LengthUnit::Bohr };
        let found = fit(FitRequest::plain(Family::Morse), &points, window).unwrap();
        for (key, ours) in [
            ("e_min_above_lowest_hartree", "e_min"),
            ("r_e_bohr", "r_e"),
            ("d_e_hartree", "d_e"),
            ("a_per_bohr", "a"),
        ] {
            let parameter = found.parameters.iter().find(|p| p.name == ours).unwrap();
            let value = parameter.estimate.value - if ours == "e_min" { lowest } else { 0.0 };
            for (ours, theirs) in [
                (value, entry[key]["value"].as_f64().unwrap()),
                (parameter.estimate.std_error.unwrap(), entry[key]["std_error"].as_f64().unwrap()),
            ] {
                assert!((ours / theirs - 1.0).abs() < 1e-7, "{name} {key}: {ours} against {theirs}");
            }
        }
    }
}
