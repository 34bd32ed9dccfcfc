//! The reach through the whole study: closed forms on sampled Morse curves, errors that cover the truth when the energies
//! are noisy, wells of odd shapes, and fits against the curve. All scans here are invented.

use parabound::findings::Findings;
use parabound::fit::Family;
use parabound::potential::{Morse, Potential as _};
use parabound::reach::{AbsoluteTolerance, EndedBy, Interval};
use parabound::scan::read::read_scan;
use parabound::settings::Settings;
use parabound::study::study;
use parabound::units::{EnergyUnit, LengthUnit, PER_CM_PER_HARTREE, to_angstrom};
use parabound::verdict::sentence;

/// Root of g between a and b by plain bisection.
fn root(g: impl Fn(f64) -> f64, mut a: f64, mut b: f64) -> f64 {
    assert!(g(a) * g(b) < 0.0);
    for _ in 0..200 {
        let m = 0.5 * (a + b);
        if g(a) * g(m) <= 0.0 { b = m } else { a = m }
    }
    0.5 * (a + b)
}

/// The study of a table of bond lengths (angstrom) and energies (hartree).
fn of(points: &[(f64, f64)], change: impl Fn(&mut Settings)) -> Findings {
    let mut text = String::from("r_angstrom,E_hartree\n");
    for (r, e) in points {
        text.push_str(&format!("{r},{e}\n"));
    }
    let mut settings = Settings::default();
    settings.masses.reduced_mass_u = Some(6.86);
    change(&mut settings);
    let scan = read_scan("invented.csv", text.as_bytes(), &settings.read).unwrap();
    study(&scan, &settings).unwrap()
}

/// A CO-like Morse function.
fn morse() -> Morse {
    Morse { e_min_hartree: -113.1, r_e_bohr: 2.13, well_depth_hartree: 0.41, a_per_bohr: 1.22 }
}

/// 45 points, denser near the minimum, with noise of a fixed pattern.
fn sampled(morse: &Morse, noise_hartree: f64) -> Vec<(f64, f64)> {
    let mut state = 12345_u64;
    let mut uniform = move || {
        // Lehmer's generator with the multiplier of Park and Miller (1988).
        state = state * 16807 % 2_147_483_647;
        state as f64 / 2_147_483_647.0
    };
    (0..45)
        .map(|i| {
            let t = f64::from(i) / 44.0;
            let r = morse.r_e_bohr + (-0.7 + 1.4 * t + 2.2 * t * t) / morse.a_per_bohr;
            // Sum of twelve uniform numbers: a normal one to good accuracy.
            let normal = (0..12).map(|_| uniform()).sum::<f64>() - 6.0;
            (to_angstrom(r), morse.energy_hartree(r) + noise_hartree * normal)
        })
        .collect()
}

/// Ends of the reach of the exact function by energy, force and absolute energy, in bohr.
fn exact(morse: &Morse, tau: f64, absolute_hartree: f64) -> [[f64; 2]; 3] {
    let (a, d) = (morse.a_per_bohr, morse.well_depth_hartree);
    let energy = |t: f64| (-(-t).exp_m1() / t).powi(2) - 1.0;
    let force = |t: f64| (-t).exp() * -(-t).exp_m1() / t - 1.0;
    let off = |t: f64| d * ((-t).exp_m1().powi(2) - t * t) / absolute_hartree;
    let both = |g: &dyn Fn(f64) -> f64, tau: f64| {
        [root(|t| g(t) - tau, -1.0, -1e-3) / a, root(|t| g(t) + tau, 1e-3, 1.0) / a]
    };
    [both(&energy, tau), both(&force, tau), both(&off, 1.0)]
}

fn ends(interval: &Interval) -> [f64; 2] {
    [interval.x_minus_bohr.unwrap(), interval.x_plus_bohr.unwrap()]
}

/// The ends are those of the function within their errors, and the errors grow with the noise.
#[test]
fn errors_of_the_ends_cover_the_truth() {
    let morse = morse();
    let truth = exact(&morse, 0.05, AbsoluteTolerance::default().hartree());
    let mut last = [[0.0; 2]; 3];
    for noise_per_cm in [0.0, 0.5, 2.5] {
        let findings = of(&sampled(&morse, noise_per_cm / PER_CM_PER_HARTREE), |_| ());
        let reach = findings.reach.as_ref().unwrap();
        for (which, interval) in [&reach.energy, &reach.force, &reach.absolute].into_iter().enumerate() {
            let errors = [interval.x_minus(), interval.x_plus()].map(|e| e.unwrap().std_error);
            for side in 0..2 {
                let off = (ends(interval)[side] - truth[which][side]).abs();
                let error = errors[side].unwrap_or(0.0);
                println!(
                    "noise {noise_per_cm} cm-1, criterion {which}, end {:+.5} A: off by {:.1e}, error {:.1e} A",
                    to_angstrom(truth[which][side]),
                    to_angstrom(off),
                    to_angstrom(error)
                );
                assert!(off <= 4.0 * error + 1e-6, "{noise_per_cm} {which} {side}: {off} {error}");
                assert!(error < 0.5 * truth[which][side].abs());
                if noise_per_cm > 1.0 {
                    assert!(error > last[which][side], "errors grow with the noise");
                }
                last[which][side] = error;
            }
        }
    }
}

/// The absolute reach in three units of the same tolerance is the same, and is that of the function.
#[test]
fn absolute_tolerances_in_any_unit() {
    let morse = morse();
    let points = sampled(&morse, 0.0);
    // 1 kcal/mol = 4.184 kJ/mol (exact) = 349.755 cm⁻¹.
    let tolerances = [
        (1.0, EnergyUnit::KilocaloriePerMole),
        (4.184, EnergyUnit::KilojoulePerMole),
        (349.755_089, EnergyUnit::PerCm),
    ];
    for (value, unit) in tolerances {
        let tolerance = AbsoluteTolerance { value, unit };
        let findings = of(&points, |s| s.reach.absolute = tolerance);
        let reach = findings.reach.as_ref().unwrap();
        let truth = exact(&morse, 0.05, EnergyUnit::KilocaloriePerMole.to_hartree(1.0))[2];
        for (found, wanted) in ends(&reach.absolute).into_iter().zip(truth) {
            assert!((found - wanted).abs() < 1e-5, "{value} {unit:?}: {found} {wanted}");
        }
        // Leading order (6 E/|V‴|)^(1/3), V‴ = −6 D a³ of a Morse function.
        let leading = (tolerance.hartree() / (morse.well_depth_hartree * morse.a_per_bohr.powi(3))).cbrt();
        assert!((reach.absolute.leading_order_bohr.unwrap() / leading - 1.0).abs() < 1e-3);
    }
}

/// A parabola: unlimited by every criterion, and the sentence says so and no more.
#[test]
fn a_parabola_has_no_end() {
    let points: Vec<(f64, f64)> = (0..31)
        .map(|i| 0.8 + 0.02 * f64::from(i))
        .map(|r| (r, 0.5 * 0.6 * LengthUnit::Angstrom.to_bohr(r - 1.1).powi(2) - 10.0))
        .collect();
    let findings = of(&points, |_| ());
    let reach = findings.reach.as_ref().unwrap();
    for interval in [&reach.energy, &reach.force, &reach.absolute] {
        assert_eq!((interval.x_minus_bohr, interval.x_plus_bohr), (None, None));
        assert_eq!((interval.ended_by_minus, interval.ended_by_plus), (EndedBy::Scan, EndedBy::Scan));
    }
    let text = sentence(&findings);
    println!("parabola: {text}");
    assert!(text.contains("holds over the whole scan"), "{text}");
    assert!(!text.contains("any temperature") && !text.contains("too high"), "{text}");
}

/// A double well, a quartic term and five points: two-sided, and nothing is said beyond the barrier or of levels that
/// there are not.
#[test]
fn wells_of_odd_shapes() {
    // V = b (x² − 1)² about the inner well at x = −1: k = 8 b, V‴ = −24 b.
    let b = 0.02;
    let double: Vec<(f64, f64)> = (0..81)
        .map(|i| -1.6 + 0.04 * f64::from(i))
        .map(|x| (to_angstrom(3.0 + x), b * (x * x - 1.0_f64).powi(2)))
        .collect();
    let findings = of(&double, |_| ());
    let reach = findings.reach.as_ref().unwrap();
    let leading = reach.energy.leading_order_bohr.unwrap();
    assert!((leading - 3.0 * 0.05 * 8.0 / 24.0).abs() < 1e-4, "{leading}");
    println!("double well: {}", sentence(&findings));
    let wide = of(&double, |s| s.reach.tolerance = 3.0);
    let reach = wide.reach.as_ref().unwrap();
    // At the barrier V is b and the parabola 4 b: never off by three times the parabola on that side.
    let (minus, plus) = (reach.energy.ended_by_minus, reach.energy.ended_by_plus);
    assert!(minus == EndedBy::Barrier || plus == EndedBy::Barrier, "{reach:?}");
    assert!(sentence(&wide).contains("the barrier where the well ends"), "{}", sentence(&wide));

    // V = k x²/2 + c x⁴: the ends by energy at sqrt(τ k/2c).
    let (k, c) = (0.4, 0.3);
    let quartic: Vec<(f64, f64)> = (0..61)
        .map(|i| -0.6 + 0.02 * f64::from(i))
        .map(|x| (to_angstrom(2.5 + x), 0.5 * k * x * x + c * x.powi(4)))
        .collect();
    let findings = of(&quartic, |_| ());
    let found = ends(&findings.reach.as_ref().unwrap().energy);
    let wanted = (0.05_f64 * k / (2.0 * c)).sqrt();
    println!("quartic: {}", sentence(&findings));
    assert!((found[1] - wanted).abs() < 1e-4 && (found[0] + wanted).abs() < 1e-4, "{found:?} {wanted}");

    // Five points, no mass, no dissociation.
    let few = of(&[(1.0, 0.03), (1.05, 0.01), (1.1, 0.0), (1.15, 0.008), (1.2, 0.02)], |s| {
        s.masses.reduced_mass_u = None;
    });
    let text = sentence(&few);
    println!("five points: {text}");
    assert!(text.contains("Name the atoms") && !text.contains("v = 0"), "{text}");
}

/// The reach of fits by the rule of the definitions, checked against the rule itself at the ends and between them.
#[test]
fn fits_reach_as_far_as_the_rule_says() {
    // No Morse function: a quartic term on top.
    let bent: Vec<(f64, f64)> = sampled(&morse(), 0.0)
        .into_iter()
        .map(|(r, e)| (r, e + 0.05 * (r - 1.127_f64).powi(4) / (1.0 + (r - 1.127).powi(4))))
        .collect();
    let tolerance = AbsoluteTolerance { value: 50.0, unit: EnergyUnit::PerCm };
    let findings = of(&bent, |s| s.reach.absolute = tolerance);
    let curve = findings.curve.as_deref().unwrap();
    let above = curve.above_minimum();
    let r_e = curve.local.r_e_bohr;
    let mut checked = 0;
    for fit in &findings.fits {
        let Ok(result) = &fit.result else { continue };
        let Some(interval) = fit.reach.unwrap().interval else { continue };
        println!("{}: {interval:?}", fit.request.family.word());
        let excess = |x: f64| {
            let energy = above.energy_hartree(r_e + x);
            let off = (result.model.energy_hartree(r_e + x) - curve.v_e_hartree.value - energy).abs();
            off - (0.05 * energy).max(tolerance.hartree())
        };
        for (end, error) in
            [(interval.x_minus_bohr, interval.x_minus_error), (interval.x_plus_bohr, interval.x_plus_error)]
        {
            let Some(x) = end else { continue };
            assert!(excess(x).abs() < 1e-9, "{:?}: {}", fit.request.family, excess(x));
            for share in 0..20 {
                assert!(excess(x * f64::from(share) / 20.0) <= 0.0);
            }
            assert!(error.is_some_and(|e| e.0 > 0.0 && e.0 < x.abs()), "{error:?}");
            checked += 1;
        }
    }
    assert!(checked >= 2, "{checked}");
    // The harmonic fit of the same window does not reach as far out as the Morse fit.
    let out = |family| {
        let fit = findings.fits.iter().find(|f| f.request.family == family).unwrap();
        // A fit that is off at r_e itself reaches nowhere.
        fit.reach.unwrap().interval.map_or(0.0, |i| i.x_plus_bohr.unwrap_or(f64::INFINITY))
    };
    assert!(out(Family::Harmonic) < out(Family::Morse));
}
