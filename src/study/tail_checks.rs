//! Short scans, hard walls and doubtful points: the error bars have to hold the levels of the whole curve.

use super::study;
use crate::estimate::{ErrorSource, Estimate};
use crate::findings::Findings;
use crate::notice::Code;
use crate::potential::{Morse, Potential as _};
use crate::scan::read::read_scan;
use crate::settings::Settings;
use crate::species::MassSettings;
use crate::units::{LengthUnit, to_per_cm, u_to_electron_masses};

/// Reduced mass of HF in u (rounded).
const MASS_U: f64 = 0.957;

fn studied(text: &str, curve: &str) -> Findings {
    let scan = read_scan("scan.csv", text.as_bytes(), &Default::default()).unwrap();
    let masses = MassSettings { reduced_mass_u: Some(MASS_U), ..MassSettings::default() };
    study(&scan, &Settings { curve: Some(curve.into()), masses, ..Settings::default() }).unwrap()
}

/// The CCSD(T) scan of HF from `from` to `to` angstrom.
fn hydrogen_fluoride(from: f64, to: f64) -> Findings {
    let text = include_str!("../../sample-scans/hf_rhf_mp2_ccsdt.csv");
    let inside = |line: &&str| {
        let r: Option<f64> = line.split(',').next().and_then(|w| w.parse().ok());
        r.is_none_or(|r| r >= from && r <= to)
    };
    studied(&text.lines().filter(inside).collect::<Vec<_>>().join("\n"), "E_CCSD(T)(hartree)")
}

/// Invented, near HF.
const MORSE: Morse =
    Morse { e_min_hartree: -100.0, r_e_bohr: 1.733, well_depth_hartree: 0.22, a_per_bohr: 1.17 };

/// A scan of a function of r (angstrom), every `step` angstrom.
fn scanned(energy: impl Fn(f64) -> f64, from: f64, to: f64, step: f64) -> Findings {
    let mut text = String::from("r_angstrom,E_hartree\n");
    for i in 0..=((to - from) / step).round() as u32 {
        let r = from + step * f64::from(i);
        text.push_str(&format!("{r:.6},{:.13}\n", energy(LengthUnit::Angstrom.to_bohr(r))));
    }
    studied(&text, "E_hartree")
}

fn morse_scan(from: f64, to: f64) -> Findings {
    scanned(|r| MORSE.energy_hartree(r), from, to, 0.02)
}

fn within(found: Estimate, truth: f64, errors: f64) {
    println!("{} +- {:?} ({:?}), truth {truth}", found.value, found.std_error, found.source);
    assert!((found.value - truth).abs() <= errors * found.std_error.unwrap(), "{found:?}, truth {truth}");
}

/// A scan cut to 0.76 to 1.10 angstrom once printed its fundamental 14 cm-1 off with an error of 0.0003.
#[test]
fn a_short_scan_says_how_little_it_knows() {
    let whole = hydrogen_fluoride(0.0, 9.0);
    let truth = whole.constants.fundamental_per_cm.unwrap();
    println!("whole scan: {} +- {:?} ({:?})", truth.value, truth.std_error, truth.source);
    for (from, to) in [(0.75, 1.11), (0.75, 9.0), (0.0, 1.11)] {
        let cut = hydrogen_fluoride(from, to).constants;
        let zero = whole.constants.zero_point_energy_per_cm.unwrap().value;
        within(cut.zero_point_energy_per_cm.unwrap(), zero, 3.0);
        within(cut.fundamental_per_cm.unwrap(), truth.value, 3.0);
    }
    let cut = hydrogen_fluoride(0.75, 1.11).constants.fundamental_per_cm.unwrap();
    assert_eq!(cut.source, Some(ErrorSource::Tail));
    // Where the scan reaches far enough the tails do not matter.
    assert!(truth.std_error.unwrap() < 0.5 && truth.source != Some(ErrorSource::Tail));
}

/// Exact points of a Morse function: the tails alone are wrong, and the closed form is the truth.
#[test]
fn short_scans_of_a_morse_function_hold_its_levels() {
    let levels = MORSE.levels_hartree(u_to_electron_masses(MASS_U), 40);
    let level = |v: usize| to_per_cm(levels[v]);
    for (from, to) in [(0.76, 1.12), (0.78, 1.30), (0.60, 1.12), (0.70, 1.10)] {
        let found = morse_scan(from, to).constants;
        within(found.zero_point_energy_per_cm.unwrap(), level(0), 2.0);
        within(found.fundamental_per_cm.unwrap(), level(1) - level(0), 2.0);
    }
}

/// A function that turns over: its barrier stands as a wall, and the levels that feel it lean.
#[test]
fn levels_at_a_hard_wall_lean() {
    // Invented: a cubic with its barrier of 0.2 hartree 2 bohr outside of the minimum.
    let cubic = |r: f64| (r - 1.733).powi(2) * (0.15 - 0.05 * (r - 1.733));
    let found = scanned(cubic, 0.5, 2.2, 0.02);
    assert!(found.notices.iter().any(|n| n.code == Code::TurnsOver), "{:?}", found.notices);
    let last = found.levels.last().unwrap();
    assert!(last.leans_on_tail, "{}", last.energy_per_cm);
    assert!(!found.levels[0].leans_on_tail);
}

/// Which side is missing is said, with the bond length.
#[test]
fn the_lean_notice_names_the_side() {
    let text = |from: f64, to: f64| {
        let found = morse_scan(from, to);
        let notice = found.notices.iter().find(|n| n.code == Code::LeansOnTail);
        notice.map(|n| n.text.clone()).unwrap_or_default()
    };
    let inner = text(0.88, 2.4);
    assert!(inner.contains("below 0.880 angstrom") && !inner.contains("beyond"), "{inner}");
    let outer = text(0.5, 1.0);
    assert!(outer.contains("beyond 1.000 angstrom") && !outer.contains("below"), "{outer}");
}

/// Six points that end below the first level: the scan is to blame, not the mass.
#[test]
fn a_scan_that_ends_below_the_first_level_says_so() {
    let found = scanned(|r| MORSE.energy_hartree(r), 0.87, 0.97, 0.02);
    assert!(found.levels.is_empty());
    let notice = found.notices.iter().find(|n| n.code == Code::ShortRange).unwrap();
    assert!(
        notice.text.contains("below the first level") && notice.text.contains("beyond 0.970"),
        "{notice:?}"
    );
    assert!(!found.notices.iter().any(|n| n.code == Code::ImplausibleMass), "{:?}", found.notices);
}

/// A point from another calculation: the errors reach to the curve without it.
#[test]
fn a_doubtful_point_widens_the_errors() {
    let read = |text: &str| studied(text, "E_hartree");
    let clean = morse_scan(0.5, 2.5);
    let mut text = String::from("r_angstrom,E_hartree\n");
    for i in 0..=100 {
        let r = 0.5 + 0.02 * f64::from(i);
        let off = if i == 26 { 2e-4 } else { 0.0 };
        text.push_str(&format!(
            "{r:.6},{:.13}\n",
            MORSE.energy_hartree(LengthUnit::Angstrom.to_bohr(r)) + off
        ));
    }
    let found = read(&text);
    assert!(found.notices.iter().any(|n| n.code == Code::OffCurve), "{:?}", found.notices);
    let of = |f: &Findings| f.constants.clone();
    let (clean, found) = (of(&clean), of(&found));
    within(found.zero_point_energy_per_cm.unwrap(), clean.zero_point_energy_per_cm.unwrap().value, 2.0);
    let omega = |c: &crate::spectroscopy::Constants| c.from_derivatives.as_ref().unwrap().omega_e_per_cm;
    within(omega(&found), omega(&clean).value, 2.0);
}

/// Energies beyond all measure are refused, not a panic.
#[test]
fn energies_beyond_all_measure_give_a_notice() {
    for scale in [1e60, 1e100, 1e200] {
        let found = scanned(|r| scale * (r - 1.7).powi(2), 0.6, 1.2, 0.05);
        assert!(found.levels.iter().all(|l| l.energy_per_cm.is_finite()));
    }
}
