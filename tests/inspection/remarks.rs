//! Remarks that need the curve, the masses or the levels, on an invented scan made worse in one way at a time.

use parabound::findings::Findings;
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
    studied(r, e, units, change).notices
}

fn studied(
    r: Vec<f64>,
    e: Vec<f64>,
    units: (LengthUnit, EnergyUnit),
    change: impl Fn(&mut Settings),
) -> Findings {
    let scan = Scan::from_columns("invented.csv", (units.0, r), (units.1, e)).expect("a scan");
    let mut settings = Settings::default();
    let atom = |a: &str| AtomChoice::parse(a).expect("an atom");
    settings.masses.atoms = Some([atom("H"), atom("Cl")]);
    change(&mut settings);
    study(&scan, &settings).expect("a study")
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

fn morse_over(r: Vec<f64>) -> Findings {
    let e = r.iter().map(|&r| morse_ev(r)).collect();
    studied(r, e, UNITS, |_| {})
}

/// On a coarse grid the next points part the wide steps near the minimum; with them the caution is gone.
#[test]
fn next_points_part_the_steps_of_a_coarse_grid() {
    let mut r = grid(0.9, 2.6, 0.15);
    let inside = |r: f64| (0.9..=2.6).contains(&r);
    let found = morse_over(r.clone());
    let notice = found.notices.iter().find(|n| n.code == Code::CoarseGrid).expect("a notice");
    let between: Vec<f64> = found.next_points.iter().map(|n| n.r_as_read).filter(|r| inside(*r)).collect();
    assert!(!between.is_empty() && between.len() <= 6, "{between:?}");
    for next in found.next_points.iter().filter(|n| inside(n.r_as_read)) {
        assert!((1.0..1.6).contains(&next.r_as_read), "{next:?}");
        assert!(r.iter().all(|old| (old - next.r_as_read).abs() > 0.02), "{next:?}");
        assert!(next.why.contains("zero-point amplitude") && next.why.contains("angstrom"), "{next:?}");
        assert!(notice.text.contains(&next.r_as_read.to_string()), "{}", notice.text);
    }
    r.extend(between);
    r.sort_by(f64::total_cmp);
    let found = morse_over(r);
    assert_eq!(severity(&found.notices, Code::CoarseGrid), None, "{:?}", found.notices);
}

/// Points added where the notice names them let more levels stand on the scan, on either side.
#[test]
fn next_points_lie_beyond_the_end_that_levels_lean_on() {
    for (from, to, outer) in [(0.7, 1.75, true), (1.05, 3.4, false)] {
        let r = grid(from, to, 0.035);
        let found = morse_over(r.clone());
        let supported = |f: &Findings| f.levels.iter().take_while(|l| !l.leans_on_tail).count();
        let notice = found.notices.iter().find(|n| n.code == Code::LeansOnTail).expect("a notice");
        let beyond = |r: f64| if outer { r > to } else { r < from };
        assert!(found.next_points.iter().any(|n| beyond(n.r_as_read)), "{:?}", found.next_points);
        for next in &found.next_points {
            assert!(beyond(next.r_as_read), "{next:?}");
            assert!(next.why.contains("leans on the curve"), "{next:?}");
            assert!(notice.text.contains(&next.r_as_read.to_string()), "{}", notice.text);
        }
        let mut more = r;
        more.extend(found.next_points.iter().map(|n| n.r_as_read));
        more.sort_by(f64::total_cmp);
        let after = morse_over(more);
        assert!(supported(&after) > supported(&found), "{} {}", supported(&after), supported(&found));
    }
}

/// A scan that ends at its lowest point: the next points carry on from there.
#[test]
fn a_minimum_at_the_end_asks_for_points_beyond() {
    let found = morse_over(grid(0.8, 1.2, 0.05));
    assert_eq!(severity(&found.notices, Code::MinimumAtEnd), Some(Severity::Stop), "{:?}", found.notices);
    let next: Vec<f64> = found.next_points.iter().map(|n| n.r_as_read).collect();
    assert_eq!(next, [1.25, 1.3]);
    let inside = |r: f64| (0.95..=2.6).contains(&r);
    assert!(!morse_over(grid(0.95, 2.6, 0.04)).next_points.iter().any(|n| inside(n.r_as_read)));
}

/// Invented: a well beside the first one, and a fall inside it.
#[test]
fn a_second_minimum_and_a_hump_are_named_with_their_places() {
    let bump = |r: f64, at: f64, width: f64| (-((r - at) / width).powi(2)).exp();
    let r = grid(0.95, 3.0, 0.04);
    let two = |r: f64| morse_ev(r) - 2.0 * bump(r, 2.2, 0.2);
    let found = remarks(r.clone(), r.iter().map(|&r| two(r)).collect(), UNITS, |_| {});
    let place = |code: Code| found.iter().find(|n| n.code == code).map(Notice::at_angstrom);
    assert!(place(Code::SecondMinimum).is_some_and(|at| (at[0] - 2.2).abs() < 0.1), "{found:?}");
    assert!(place(Code::TurnsOver).is_some_and(|at| (1.5..2.1).contains(&at[0])), "{found:?}");
    let r = grid(0.8, 2.6, 0.03);
    let inside = |r: f64| morse_ev(r) - 20.0 * bump(r, 0.75, 0.12);
    let found = remarks(r.clone(), r.iter().map(|&r| inside(r)).collect(), UNITS, |_| {});
    let hump = found.iter().find(|n| n.code == Code::Hump).map(Notice::at_angstrom);
    assert!(hump.is_some_and(|at| (0.8..1.1).contains(&at[0])), "{found:?}");
}
