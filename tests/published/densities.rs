//! Densities against reference/harmonic-facts.json (30-digit arithmetic), reference/morse-levels.json (probabilities by
//! collocation and quadrature of the exact functions) and closed forms; facts of the trade on every sample scan.

use parabound::density::{ClassicalDensity, Distribution, HarmonicDensity, MorseDensity, distance};
use parabound::findings::Findings;
use parabound::potential::{Harmonic, Morse, Potential as _};
use parabound::scan::read::read_scan;
use parabound::settings::Settings;
use parabound::species::parse_atoms;
use parabound::study::{level_densities, study};
use parabound::units::{LengthUnit, PER_CM_PER_HARTREE};
use serde_json::Value;
use std::path::Path;

fn number(value: &Value) -> f64 {
    value.as_str().map_or_else(|| value.as_f64().unwrap(), |s| s.parse().unwrap())
}

fn harmonic_facts() -> Value {
    serde_json::from_str(include_str!("reference/harmonic-facts.json")).unwrap()
}

/// Forbidden probabilities and densities of n = 0 to 50, in the file's reduced units (amplitude 1, centre 0).
#[test]
fn harmonic_densities_are_those_of_the_facts() {
    let file = harmonic_facts();
    let of = |n: usize| HarmonicDensity::new(n, 0.0, 1.0).unwrap();
    let mut last = 1.0;
    for level in file["levels"].as_array().unwrap() {
        let n = level["n"].as_u64().unwrap() as usize;
        let density = of(n);
        let forbidden = density.forbidden_probability();
        let turn = density.turning_points_bohr().1;
        let found = [
            (forbidden, "P_forbidden"),
            (turn, "y_turn"),
            (density.density_per_bohr(0.0), "psi2_at_0"),
            (density.density_per_bohr(turn), "psi2_at_turn"),
        ];
        for (value, key) in found {
            assert!((value - number(&level[key])).abs() < 1e-13, "n = {n}, {key}: {value}");
        }
        // The tails shrink as n grows.
        assert!(forbidden < last);
        last = forbidden;
    }
    for sample in file["quantum_density_samples"].as_array().unwrap() {
        let found = of(sample["n"].as_u64().unwrap() as usize).density_per_bohr(number(&sample["y"]));
        assert!((found - number(&sample["rho"])).abs() < 1e-14);
    }
    for sample in file["classical_density"]["samples"].as_array().unwrap() {
        let n = sample["n"].as_u64().unwrap() as usize;
        let (y, rho) = (number(&sample["y"]), number(&sample["rho"]));
        assert!((of(n).classical().density_per_bohr(y) - rho).abs() < 1e-14);
        // The classical density on a curve comes out of a quadrature; here the curve is the parabola.
        let parabola = Harmonic { e_min_hartree: 0.0, r_e_bohr: 0.0, force_constant_hartree_per_bohr2: 1.0 };
        let on_curve = ClassicalDensity::new(&parabola, n as f64 + 0.5, of(n).turning_points_bohr()).unwrap();
        assert!((on_curve.density_per_bohr(y) - rho).abs() < 1e-8 * rho);
        assert!((on_curve.below(y) - of(n).classical().below(y)).abs() < 1e-8);
    }
}

/// Averaged over a width, the quantum density goes to the classical 1/(π sqrt(A² − x²)) as n grows: the distance falls
/// at a fixed width, and further when the width grows.
#[test]
fn averaged_densities_approach_the_classical_one() {
    let of = |n: usize, width: f64| {
        let quantum = HarmonicDensity::new(n, 0.0, 1.0).unwrap();
        distance(&quantum, &quantum.classical(), width).unwrap()
    };
    println!("L1 distance to the classical density, both averaged over a width in zero-point amplitudes");
    for width in [0.5, 1.0, 2.0] {
        let row: Vec<f64> = [0, 1, 3, 10, 30, 100].into_iter().map(|n| of(n, width)).collect();
        println!("  width {width}: n = 0, 1, 3, 10, 30, 100: {row:.4?}");
        assert!(row[4] < row[3] && row[5] < row[4], "{row:?}");
    }
    assert!(of(10, 2.0) < of(10, 0.5) && of(30, 1.0) < 0.5 * of(3, 1.0));
    // A sharp quantum density keeps its nodes: hardly averaged it never comes near.
    assert!(of(30, 0.05) > 0.5);
}

/// Closed-form Morse densities: normalised, and forbidden probabilities as in the reference (which gives those of the
/// problem with ψ(0) = 0; the full line differs by less than the digits printed).
#[test]
fn morse_densities_are_those_of_the_reference() {
    let file: Value = serde_json::from_str(include_str!("reference/morse-levels.json")).unwrap();
    let (mut checked, mut worst, mut norm) = (0, 0.0_f64, 0.0_f64);
    for case in file["cases"].as_array().unwrap() {
        let p = &case["parameters"];
        let angstrom = LengthUnit::Angstrom.to_bohr(1.0);
        let morse = Morse {
            e_min_hartree: 0.0,
            r_e_bohr: number(&p["re_angstrom"]) * angstrom,
            well_depth_hartree: number(&p["De_per_cm"]) / PER_CM_PER_HARTREE,
            a_per_bohr: number(&p["a_per_angstrom"]) / angstrom,
        };
        // ħ²/2μ in cm⁻¹ Å² gives the mass without any other constant.
        let h2 = number(&case["hbar2_over_2mu_per_cm_angstrom2"]) / PER_CM_PER_HARTREE * angstrom * angstrom;
        let mass_me = 0.5 / h2;
        for level in case["levels"].as_array().unwrap() {
            let Some(expected) = level.get("P_forbidden") else { continue };
            let v = level["v"].as_u64().unwrap() as usize;
            let density = MorseDensity::new(&morse, mass_me, v).unwrap();
            let (from, to) = density.support_bohr();
            norm = norm.max((density.below(to) - density.below(from) - 1.0).abs());
            worst = worst.max((density.forbidden_probability() - number(expected)).abs());
            let turn = number(&level["r_turn_outer_angstrom"]) * angstrom;
            assert!((density.turning_points_bohr().1 / turn - 1.0).abs() < 1e-9);
            checked += 1;
        }
    }
    println!("{checked} Morse levels: norm off by {norm:.1e}, forbidden probability by {worst:.1e}");
    assert!(checked > 40 && norm < 1e-9 && worst < 1e-7);
}

fn samples() -> Vec<(&'static str, Findings)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let all = [
        ("co_ccsdt_bohr.dat", "C,O"),
        ("h2_fci.csv", "H,H"),
        ("hcl_messy.txt", "H,Cl"),
        ("hf_rhf_mp2_ccsdt.csv", "H,F"),
        ("lih_X_A.csv", "7Li,H"),
        ("n2_casscf_nevpt2.tsv", "N,N"),
        ("water_oh_relaxed.csv", "O,H"),
    ];
    let on_disk = std::fs::read_dir(root.join("sample-scans")).unwrap().count();
    assert_eq!(all.len() + 1, on_disk, "every sample and its README");
    all.into_iter()
        .map(|(name, atoms)| {
            let mut settings = Settings::default();
            settings.masses.atoms = Some(parse_atoms(atoms).unwrap());
            let bytes = std::fs::read(root.join("sample-scans").join(name)).unwrap();
            let scan = read_scan(name, &bytes, &settings.read).unwrap();
            (name, study(&scan, &settings).unwrap())
        })
        .collect()
}

/// Common practice, no source: for small displacements the restoring force is linear, the more so the smaller they
/// are; v = 0 is densest near the minimum while the classical particle of its energy is likeliest at the ends.
#[test]
fn facts_of_the_trade_on_every_sample() {
    for (name, findings) in samples() {
        let curve = findings.curve.as_deref().unwrap();
        let amplitude = findings.reach.as_ref().unwrap().zero_point_amplitude_bohr.unwrap();
        let above = curve.above_minimum();
        let r_e = curve.local.r_e_bohr;
        let from_linear = |x: f64| {
            let k = curve.local.second_hartree;
            (above.derivatives_hartree(r_e + x)[1] / (k * x) - 1.0).abs()
        };
        for sign in [-1.0, 1.0] {
            let off = [0.1, 0.05, 0.025].map(|share| from_linear(sign * share * amplitude));
            assert!(off[0] < 0.05 && off[1] < 0.6 * off[0] && off[2] < 0.6 * off[1], "{name}: {off:?}");
        }
        let found = level_densities(&findings, 0, None).unwrap();
        let peak = (0..found.r_bohr.len())
            .max_by(|a, b| found.numerical_per_bohr[*a].total_cmp(&found.numerical_per_bohr[*b]))
            .map(|i| found.r_bohr[i])
            .unwrap();
        assert!(
            (peak - r_e).abs() < 0.25 * amplitude,
            "{name}: densest at {} of the amplitude",
            (peak - r_e) / amplitude
        );
        let level = &findings.levels[0];
        let (a, b) = (level.inner_turning_point_bohr, level.outer_turning_point_bohr);
        let classical =
            ClassicalDensity::new(&above, level.energy_per_cm / PER_CM_PER_HARTREE, (a, b)).unwrap();
        // A tenth of the way at either end holds more than a tenth in the middle.
        let tenth = 0.1 * (b - a);
        let share = |from: f64| classical.below(from + tenth) - classical.below(from);
        let middle = share(0.5 * (a + b) - 0.5 * tenth);
        assert!(share(a) > middle && share(b - tenth) > middle, "{name}");
        let forbidden: Vec<f64> =
            findings.densities.levels.iter().filter_map(|f| f.forbidden.harmonic).take(6).collect();
        assert!(forbidden.windows(2).all(|p| p[1] < p[0]), "{name}: harmonic tails shrink, {forbidden:?}");
    }
}

/// On every sample the averaged density comes nearer to the classical one as v grows from 0. Close to the limit of a
/// well it departs again at a fixed width: the outermost lobe grows far wider than the width there.
#[test]
fn high_levels_of_the_samples_are_nearer_to_classical() {
    for (name, findings) in samples() {
        let found: Vec<f64> = findings.densities.levels.iter().filter_map(|f| f.classical_distance).collect();
        println!("{name}: distance to the classical density of v = 0, 1, ...: {found:.3?}");
        let last = found.len().min(6) - 1;
        assert!(last > 1 && found[last] < 0.8 * found[0], "{name}: {found:?}");
        let figures = &findings.densities.levels[0];
        let share = figures.inside_reach;
        assert!(
            share.numerical.unwrap() > 0.0 && share.classical.unwrap() > 0.0 && share.harmonic.unwrap() > 0.0
        );
        assert!((figures.forbidden.harmonic.unwrap() - 0.157_299_207_050_285_1).abs() < 1e-14);
    }
}
