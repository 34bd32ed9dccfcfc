//! The curve builder on functions whose derivatives are known.

use super::*;
use crate::potential::Potential;
use crate::potential::curve::OuterTail;

/// A Rydberg function, −D (1 + a x) exp(−a x): not a Morse function, so the spline has work to do.
fn rydberg(r: f64) -> [f64; 5] {
    let (depth, a, x) = (0.17, 1.7, r - 1.9);
    let e = depth * (-a * x).exp();
    let ax = a * x;
    [
        -e * (1.0 + ax),
        a * e * ax,
        a * a * e * (1.0 - ax),
        a.powi(3) * e * (ax - 2.0),
        a.powi(4) * e * (3.0 - ax),
    ]
}

fn sampled(f: impl Fn(f64) -> f64, r: impl IntoIterator<Item = f64>) -> Vec<FitPoint> {
    r.into_iter().map(|r_bohr| FitPoint { r_bohr, energy_hartree: f(r_bohr), weight: 1.0 }).collect()
}

/// Points denser around the minimum, as scans are made.
fn grid(n: usize, from: f64, to: f64) -> Vec<f64> {
    let middle = 1.9;
    (0..n)
        .map(|i| 2.0 * i as f64 / (n - 1) as f64 - 1.0)
        .map(|t| middle + if t < 0.0 { (middle - from) * t } else { (to - middle) * t * (0.3 + 0.7 * t) })
        .collect()
}

fn built(points: &[FitPoint], settings: &CurveSettings) -> (ScanCurve, Vec<Notice>) {
    build_curve(points, None, settings).unwrap()
}

fn codes(notices: &[Notice]) -> Vec<Code> {
    notices.iter().map(|n| n.code).collect()
}

/// Energies, minimum and derivatives of the default curve on 45 points; the stated errors cover the true
/// ones. A large total energy changes nothing.
#[test]
fn the_default_curve_recovers_a_known_function() {
    for offset in [0.0, -460.4] {
        let points = sampled(|r| rydberg(r)[0] + offset, grid(45, 1.1, 7.0));
        let (curve, _) = built(&points, &CurveSettings::default());
        assert_eq!(curve.kind, "morse+quintic");
        let exact = rydberg(1.9);
        assert!((curve.r_e_bohr.value - 1.9).abs() < 1e-8);
        assert!((curve.v_e_hartree.value - exact[0] - offset).abs() < 1e-9);
        for (found, (want, tolerance)) in
            curve.derivatives_hartree.iter().zip([(exact[2], 2e-6), (exact[3], 2e-5), (exact[4], 2e-3)])
        {
            let found = found.unwrap();
            assert!((found.value / want - 1.0).abs() < tolerance, "{found:?} {want}");
            assert!((found.value - want).abs() <= 3.0 * found.std_error.unwrap(), "{found:?} {want}");
        }
        let (above, zero) = (curve.above_minimum(), exact[0]);
        for i in 0..500 {
            let r = 1.1 + 5.9 * f64::from(i) / 499.0;
            assert!((above.energy_hartree(r) - (rydberg(r)[0] - zero)).abs() < 5e-7, "{r}");
            assert!((curve.energy_hartree(r) - rydberg(r)[0] - offset).abs() < 5e-7, "{r}");
        }
        for p in &points {
            assert!((curve.energy_hartree(p.r_bohr) - p.energy_hartree).abs() < 1e-12);
        }
    }
}

/// Each kind is what it says; few points give the polynomial through all.
#[test]
fn kinds_and_few_points() {
    let many = sampled(|r| rydberg(r)[0], grid(20, 1.2, 4.0));
    for (kind, name) in [(CurveKind::Quintic, "quintic"), (CurveKind::Cubic, "cubic")] {
        let (curve, _) = built(&many, &CurveSettings { kind, ..CurveSettings::default() });
        assert_eq!(curve.kind, name);
        assert_eq!(curve.derivatives_hartree[2].is_none(), kind == CurveKind::Cubic);
        assert!((curve.r_e_bohr.value - 1.9).abs() < 1e-3);
    }
    for n in 5..8 {
        // A polynomial of degree n − 1 is recovered exactly.
        let f = |r: f64| 0.4 * (r - 1.9).powi(2) - 0.3 * (r - 1.9).powi(3) + 0.05 * (r - 1.9).powi(n - 1);
        let points = sampled(f, (0..n).map(|i| 1.5 + 0.15 * f64::from(i)));
        let (curve, notices) = built(&points, &CurveSettings::default());
        assert_eq!((curve.kind.as_str(), curve.variable), ("polynomial", None));
        assert!((curve.energy_hartree(1.83) - f(1.83)).abs() < 1e-14);
        assert!((curve.r_e_bohr.value - 1.9).abs() < 1e-10);
        assert!(
            matches!(curve.outer, OuterTail::HardWall { .. }) && codes(&notices).contains(&Code::HardWall)
        );
    }
}

/// Every way in which there is no curve says so, with the notice that stops the study.
#[test]
fn impossible_curves_say_why() {
    let fail = |points: &[FitPoint]| build_curve(points, None, &CurveSettings::default()).unwrap_err();
    let r = grid(12, 1.2, 4.0);
    let repulsive = sampled(|r| 0.3 * (-2.0 * r).exp() + 0.1 / r, r.clone());
    let falling = sampled(|r| rydberg(r)[0], r.iter().copied().filter(|r| *r < 1.85));
    let rising = sampled(|r| rydberg(r)[0], r.iter().copied().filter(|r| *r > 1.91));
    let good = sampled(|r| rydberg(r)[0], r);
    let mut repeated = good.clone();
    repeated[4].r_bohr = repeated[3].r_bohr;
    let mut broken = good.clone();
    broken[4].energy_hartree = f64::NAN;
    for (points, code) in [
        (&good[..4], Code::FewPoints),
        (&[], Code::FewPoints),
        (&repulsive, Code::NoMinimum),
        (&falling, Code::MinimumAtEnd),
        (&rising, Code::MinimumAtEnd),
        (&repeated, Code::RepeatedGeometry),
        (&broken, Code::NotFinite),
    ] {
        let notice = fail(points).notice();
        assert_eq!(notice.code, code, "{}", notice.text);
        assert!(notice.text.ends_with('.') && notice.text.len() > 40, "{}", notice.text);
    }
}

/// A curve that turns over is used up to its maximum; one with a second minimum belongs to the deeper well.
#[test]
fn curves_that_turn_over_end_at_the_maximum() {
    // Maximum at r = 4 by construction: V′ = (r − 2)(4 − r) e^(−r/2)/2 changes sign there.
    let f = |r: f64| {
        let antiderivative = |r: f64| (r * r - 2.0 * r + 4.0) * (-0.5 * r).exp();
        antiderivative(r)
    };
    let points = sampled(f, (0..40).map(|i| 1.2 + 0.1 * f64::from(i)));
    let (curve, notices) = built(&points, &CurveSettings::default());
    assert!(codes(&notices).contains(&Code::TurnsOver), "{notices:?}");
    let OuterTail::HardWall { r_bohr } = curve.outer else { panic!("{:?}", curve.outer) };
    assert!((r_bohr - 4.0).abs() < 1e-4, "{r_bohr}");
    assert!((curve.r_e_bohr.value - 2.0).abs() < 1e-5);
    assert!((curve.limit_hartree() - f(4.0)).abs() < 1e-7);
    assert_eq!(curve.range_bohr().1.to_bits(), r_bohr.to_bits());

    let double = |r: f64| 0.05 * (r - 2.0).powi(2) * ((r - 3.5).powi(2) + 0.1);
    let points = sampled(double, (0..40).map(|i| 1.4 + 0.07 * f64::from(i)));
    let (curve, notices) = built(&points, &CurveSettings::default());
    assert!(codes(&notices).contains(&Code::SecondMinimum), "{notices:?}");
    assert!((curve.r_e_bohr.value - 2.0).abs() < 1e-4);
}

/// Tails by what is given, and their changes for the lean test.
#[test]
fn tails_follow_what_is_given() {
    let points = sampled(|r| rydberg(r)[0], grid(30, 1.2, 4.5));
    let at_last = rydberg(4.5);
    let with = |asymptote, tail_power| {
        let settings = CurveSettings { tail_power, ..CurveSettings::default() };
        build_curve(&points, asymptote, &settings).unwrap()
    };
    let (assumed, notices) = with(None, None);
    assert!(matches!(assumed.outer, OuterTail::Exponential { assumed: true, .. }), "{:?}", assumed.outer);
    assert!(codes(&notices).contains(&Code::AssumedTail) && assumed.asymptote_hartree().is_none());
    assert!(assumed.with_c_n_scaled(1.2).is_none());

    let (known, _) = with(Some(0.0), None);
    assert_eq!(known.asymptote_hartree().map(|v| v.abs() < 1e-15), Some(true));
    assert!((known.tail_depth_hartree().unwrap() - 0.17).abs() < 1e-7);
    assert!((known.limit_hartree()).abs() < 1e-15 && known.range_bohr().1.is_infinite());
    let shifted = known.with_asymptote_shifted(0.01).unwrap();
    assert!((shifted.limit_hartree() - 0.01).abs() < 1e-15);
    for r in [1.3, 3.0, 4.49] {
        assert_eq!(shifted.energy_hartree(r).to_bits(), known.energy_hartree(r).to_bits());
    }
    let slope = |curve: &ScanCurve, r: f64| curve.derivatives_hartree(r)[1];
    assert!((slope(&shifted, 4.5 + 1e-9) - slope(&known, 4.5)).abs() < 1e-9);
    let below = known.with_asymptote_shifted(-0.1).unwrap();
    assert_eq!(below.outer, OuterTail::HardWall { r_bohr: 4.5 });

    let (power, _) = with(Some(0.0), Some(6));
    let scaled = power.with_c_n_scaled(1.2).unwrap();
    let (
        OuterTail::InversePower { c_n_hartree_bohr_n: c, .. },
        OuterTail::InversePower { c_n_hartree_bohr_n: more, .. },
    ) = (power.outer, scaled.outer)
    else {
        panic!("{:?} {:?}", power.outer, scaled.outer)
    };
    assert!((more / c - 1.2).abs() < 1e-14 && (c + at_last[0] * 4.5_f64.powi(6)).abs() < 1e-9);
    assert!((scaled.energy_hartree(4.5 + 1e-9) - at_last[0]).abs() < 1e-8);

    let (_, notices) = with(Some(-0.1), None);
    assert!(codes(&notices).contains(&Code::HardWall));
}

/// Breakpoints ascend and hold both joints.
#[test]
fn breakpoints_ascend() {
    for variable in [SplineVariable::R, SplineVariable::Y] {
        let settings = CurveSettings { variable: Some(variable), ..CurveSettings::default() };
        let (curve, _) = built(&sampled(|r| rydberg(r)[0], grid(30, 1.2, 4.5)), &settings);
        assert_eq!(curve.variable, Some(variable));
        let breaks = curve.breakpoints_bohr();
        assert!(breaks.windows(2).all(|w| w[0] < w[1]));
        assert_eq!((breaks[0], breaks[breaks.len() - 1]), curve.scan_range_bohr);
        assert_eq!(breaks.len(), 30 - 6 + 2);
    }
}

/// Energies with a known error (invented, fixed pattern): the noise is found within a factor of two and the
/// standard error of k covers the true error without being far larger.
#[test]
fn noise_is_found_and_enters_the_errors() {
    let sigma = 2e-7;
    // A fixed sequence with unit variance: golden-ratio steps are evenly spread over (−√3, √3).
    let errors = |i: usize| {
        3.0_f64.sqrt() * (2.0 * ((i * i) as f64 * 0.618_033_988_75 + 0.3 * i as f64).fract() - 1.0)
    };
    let mut points = sampled(|r| rydberg(r)[0], (0..40).map(|i| 1.35 + 0.04 * f64::from(i)));
    for (i, p) in points.iter_mut().enumerate() {
        p.energy_hartree += sigma * errors(i);
    }
    let (curve, _) = built(&points, &CurveSettings::default());
    let noise = curve.noise_hartree.unwrap();
    assert!((0.5..2.0).contains(&(noise / sigma)), "{noise}");
    let k = curve.derivatives_hartree[0].unwrap();
    let (error, true_error) = (k.std_error.unwrap(), (k.value - rydberg(1.9)[2]).abs());
    assert!(true_error < 3.0 * error && error < 0.05 * k.value, "{k:?} {true_error}");
}

/// Nonsense of any size ends as a curve or as an error, never in a panic. Invented data.
#[test]
fn odd_data_never_panics() {
    for n in 5..12 {
        for seed in 0..40 {
            let value = |i: usize| ((i * 7919 + seed * 104_729) as f64 * 0.618_033_988_75).fract();
            let points: Vec<FitPoint> = (0..n)
                .map(|i| FitPoint {
                    r_bohr: 1.0 + i as f64 + 0.5 * value(i + 50),
                    energy_hartree: value(i),
                    weight: 1.0,
                })
                .collect();
            for kind in [CurveKind::Default, CurveKind::Quintic, CurveKind::Cubic] {
                if let Ok((curve, _)) =
                    build_curve(&points, None, &CurveSettings { kind, ..CurveSettings::default() })
                {
                    assert!(curve.local.second_hartree > 0.0);
                    let (from, to) = curve.range_bohr();
                    let r = curve.r_e_bohr.value;
                    assert!(from < r && r < to && curve.limit_hartree() > curve.v_e_hartree.value);
                }
            }
        }
    }
    let flat = sampled(|_| 1.0, (0..9).map(f64::from).map(|i| 1.0 + i));
    assert!(build_curve(&flat, None, &CurveSettings::default()).is_err());
    let steps = sampled(|r| if r < 3.0 { 1.0 } else { 0.0 }, (0..9).map(f64::from).map(|i| 1.0 + i));
    assert!(build_curve(&steps, None, &CurveSettings::default()).is_err());
}

/// However rough a scan is, the spline in the other variable has a minimum between the neighbours of the lowest point,
/// for it runs through all three: it always counts for the spread. Invented data, too rough for local polynomials.
#[test]
fn the_spline_in_the_other_variable_always_has_its_minimum() {
    for variable in [SplineVariable::R, SplineVariable::Y] {
        let settings =
            CurveSettings { kind: CurveKind::Quintic, variable: Some(variable), ..CurveSettings::default() };
        let mut built = 0;
        for seed in 0..200 {
            let value = |i: usize| ((i * 7919 + seed * 104_729) as f64 * 0.618_033_988_75).fract();
            let points: Vec<FitPoint> = (0..9)
                .map(|i| FitPoint { r_bohr: 0.3 + (i * i) as f64, energy_hartree: value(i), weight: 1.0 })
                .collect();
            let Ok((curve, _)) = build_curve(&points, None, &settings) else { continue };
            let r = curve.r_e_bohr.value;
            let others = curve.other_interpolations_hartree(&[0.9 * r, r, 1.1 * r]);
            assert!(!others.is_empty() && others.len() == curve.alternatives.len(), "{seed}");
            assert!(others.iter().flatten().all(|v| v.is_finite()), "{seed}");
            assert!(curve.r_e_bohr.std_error.is_some_and(f64::is_finite), "{seed}: {:?}", curve.r_e_bohr);
            built += 1;
        }
        assert!(built > 50, "{built}");
    }
}

/// Symmetric scans put samples exactly on the minimum, where V′ is 0 to the last bit.
#[test]
fn symmetric_scans_have_their_minimum_in_the_middle() {
    for n in 5..=31 {
        for (middle, half) in [(1.0, 0.25), (1.05, 0.25), (2.5, 0.5), (2.625, 0.625), (2.0, 0.5)] {
            let step = 2.0 * half / f64::from(n - 1);
            let points = sampled(
                |r| (r - middle) * (r - middle),
                (0..n).map(|i| middle + step * (f64::from(i) - 0.5 * f64::from(n - 1))),
            );
            let (curve, _) = built(&points, &CurveSettings::default());
            let r_e = curve.r_e_bohr.value;
            assert!((r_e - middle).abs() < 1e-7, "{n} points around {middle}: {r_e}");
        }
    }
    // Two scans that once gave 1.025 and 2.5625.
    for (from, step, n, middle) in [(0.8, 0.05, 11, 1.0), (2.0, 0.125, 11, 2.5)] {
        let points = sampled(|r| (r - middle) * (r - middle), (0..n).map(|i| from + step * f64::from(i)));
        let (curve, notices) = built(&points, &CurveSettings::default());
        assert!((curve.r_e_bohr.value - middle).abs() < 1e-7, "{}", curve.r_e_bohr.value);
        // A parabola has no anharmonicity to disagree about.
        assert!(!codes(&notices).contains(&Code::DerivativeSpread), "{notices:?}");
    }
}

/// Where V′ is exactly 0 at a sample, at a minimum, a maximum, an inflection and along a flat piece.
#[test]
fn a_slope_of_exactly_zero_is_a_stationary_point_where_it_changes_sign() {
    let r: Vec<f64> = (0..9).map(|i| 0.5 * f64::from(i)).collect();
    let found = |slope: fn(f64) -> f64| {
        let points = stationary_points(|r| [0.0, slope(r), 1.0, 0.0, 0.0], &r);
        points.iter().map(|s| (s.r, s.maximum)).collect::<Vec<_>>()
    };
    assert_eq!(found(|r| r - 2.0), [(2.0, false)]);
    assert_eq!(found(|r| 2.0 - r), [(2.0, true)]);
    assert_eq!(found(|r| (r - 2.0) * (r - 2.0)), []);
    assert_eq!(found(|r| r - r.clamp(1.0, 3.0)), [(2.0, false)]);
    assert_eq!(found(|r| (r - 1.0) * (r - 3.0)), [(1.0, true), (3.0, false)]);
}
