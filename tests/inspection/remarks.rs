//! Remarks that need the curve, the masses or the levels, on an invented scan made worse in one way at a time.

use parabound::notice::{Code, Notice, Severity};
use parabound::scan::Scan;
use parabound::settings::Settings;
use parabound::species::AtomChoice;
use parabound::study::study;
use parabound::units::{EnergyUnit, LengthUnit};

/// Invented: a Morse function like that of HCl (r_e 1.27 angstrom, a 1.87 per angstrom, depth 4.6 eV).
fn morse_ev(r: f64) -> f64 {
    4.6 * (1.0 - (-1.87 * (r - 1.27)).exp()).powi(2)
}

fn remarks(
    r: Vec<f64>,
    e: Vec<f64>,
    units: (LengthUnit, EnergyUnit),
    change: impl Fn(&mut Settings),
) -> Vec<Notice> {
    let scan = Scan::from_columns("invented.csv", (units.0, r), (units.1, e)).expect("a scan");
    let mut settings = Settings::default();
    let atom = |a: &str| AtomChoice::parse(a).expect("an atom");
    settings.masses.atoms = Some([atom("H"), atom("Cl")]);
    change(&mut settings);
    study(&scan, &settings).expect("a study").notices
}

fn grid(from: f64, to: f64, step: f64) -> Vec<f64> {
    (0..=((to - from) / step).round() as usize).map(|i| from + step * i as f64).collect()
}

fn severity(notices: &[Notice], code: Code) -> Option<Severity> {
    notices.iter().find(|n| n.code == code).map(|n| n.severity)
}

const UNITS: (LengthUnit, EnergyUnit) = (LengthUnit::Angstrom, EnergyUnit::Electronvolt);
const REMARKS: [Code; 6] = [
    Code::CoarseGrid,
    Code::ShortRange,
    Code::RoundedEnergies,
    Code::ImplausibleUnit,
    Code::ImplausibleMass,
    Code::Noise,
];

#[test]
fn a_good_scan_is_told_nothing() {
    let r = grid(0.95, 2.6, 0.04);
    let found = remarks(r.clone(), r.into_iter().map(morse_ev).collect(), UNITS, |_| {});
    for code in REMARKS {
        assert_eq!(severity(&found, code), None, "{found:?}");
    }
}

#[test]
fn a_coarse_grid_and_a_short_range_are_told() {
    let r = grid(0.9, 2.6, 0.15);
    let found = remarks(r.clone(), r.into_iter().map(morse_ev).collect(), UNITS, |_| {});
    assert_eq!(severity(&found, Code::CoarseGrid), Some(Severity::Caution), "{found:?}");
    let r = grid(1.1, 1.5, 0.03);
    let found = remarks(r.clone(), r.into_iter().map(morse_ev).collect(), UNITS, |_| {});
    assert_eq!(severity(&found, Code::ShortRange), Some(Severity::Info), "{found:?}");
    assert_eq!(severity(&found, Code::CoarseGrid), None, "{found:?}");
}

#[test]
fn too_few_digits_are_told_from_noise() {
    let r = grid(0.95, 2.6, 0.04);
    let round = |e: f64| (morse_ev(e) * 1e3).round() / 1e3;
    let found = remarks(r.clone(), r.iter().map(|&r| round(r)).collect(), UNITS, |_| {});
    assert_eq!(severity(&found, Code::RoundedEnergies), Some(Severity::Caution), "{found:?}");
    // The same scatter in energies of many digits is noise, and its effect on the anharmonicity is told.
    let scatter = |(i, &r): (usize, &f64)| morse_ev(r) + 5e-4 * ((i * i) as f64 * 0.618_033_988_75).fract();
    let found = remarks(r.clone(), r.iter().enumerate().map(scatter).collect(), UNITS, |_| {});
    assert_eq!(severity(&found, Code::RoundedEnergies), None, "{found:?}");
    let noise = found.iter().find(|n| n.code == Code::Noise).expect("a notice");
    assert!(noise.text.contains("omega_e x_e uncertain by"), "{}", noise.text);
}

#[test]
fn impossible_units_and_masses_are_told() {
    let r = grid(0.95, 2.6, 0.04);
    let e: Vec<f64> = r.iter().map(|&r| morse_ev(r)).collect();
    for units in
        [(LengthUnit::Angstrom, EnergyUnit::Hartree), (LengthUnit::Picometre, EnergyUnit::Electronvolt)]
    {
        let found = remarks(r.clone(), e.clone(), units, |_| {});
        assert_eq!(severity(&found, Code::ImplausibleUnit), Some(Severity::Caution), "{units:?} {found:?}");
    }
    // A slip of the decimal point.
    let light = |s: &mut Settings| {
        s.masses.atoms = None;
        s.masses.reduced_mass_u = Some(0.01);
    };
    let found = remarks(r, e, UNITS, light);
    assert_eq!(severity(&found, Code::ImplausibleMass), Some(Severity::Caution), "{found:?}");
}
