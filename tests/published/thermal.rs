//! Thermal averages against sums in 30-digit arithmetic (reference/thermal.json) and against the NIST-JANAF
//! tables (reference/thermochemistry.json, values from memory as that file says).

use parabound::potential::{Morse, Potential as _};
use parabound::scan::read::read_scan;
use parabound::settings::Settings;
use parabound::species::parse_atoms;
use parabound::study::study;
use parabound::thermal::{Averages, harmonic, over_levels};
use parabound::units::{GAS_CONSTANT_JOULE_PER_MOLE_KELVIN, LengthUnit, PER_CM_PER_HARTREE};
use serde_json::Value;
use std::path::Path;

fn reference() -> Value {
    serde_json::from_str(include_str!("reference/thermal.json")).unwrap()
}

fn number(value: &Value) -> f64 {
    value.as_str().map_or_else(|| value.as_f64().unwrap(), |s| s.parse().unwrap())
}

fn close(found: f64, wanted: f64, relative: f64, what: &str) {
    assert!((found - wanted).abs() <= relative * wanted.abs(), "{what}: {found:e} against {wanted:e}");
}

fn agree(found: &Averages, row: &Value, relative: f64, what: &str) {
    close(found.partition_function, number(&row["q_from_ground_level"]), relative, what);
    close(found.mean_energy_per_cm, number(&row["U_minus_E0_per_cm"]), relative, what);
    close(found.heat_capacity_boltzmann, number(&row["Cv_over_kB"]), relative, what);
    // The reference takes ln q of a q of 30 digits: nothing below 1e-29 is left of q − 1.
    let entropy = number(&row["S_over_kB"]);
    assert!((found.entropy_boltzmann - entropy).abs() <= relative * entropy + 1e-29, "{what}: S");
    if let Some(joule) = row.get("Cv_J_per_mol_K") {
        close(found.heat_capacity_joule_per_mole_kelvin(), number(joule), relative, what);
    }
    if let Some(joule) = row.get("U_minus_E0_J_per_mol") {
        close(1e3 * found.mean_energy_kilojoule_per_mole(), number(joule), relative, what);
    }
}

/// The same level sums: Morse levels from their formula, the harmonic oscillator in closed form.
#[test]
fn level_sums_agree_to_1e_9() {
    let file = reference();
    let mut rows = 0;
    for block in file["blocks"].as_array().unwrap() {
        let (omega, anharmonicity) = (number(&block["we_per_cm"]), number(&block["wexe_per_cm"]));
        let count = block["n_bound"].as_u64().unwrap();
        // E_v − E_0 = v (ω_e − ω_e x_e (v + 1)), free of the rounding of a difference.
        let levels = (0..count).map(|v| v as f64).map(|v| (v * (omega - anharmonicity * (v + 1.0)), 1.0));
        for row in block["morse"].as_array().unwrap() {
            let kelvin = number(&row["T_K"]);
            let what = format!("{} at {kelvin} K", block["name"]);
            agree(&over_levels(levels.clone(), kelvin), row, 1e-9, &what);
            rows += 1;
        }
        for row in block["harmonic_same_we"].as_array().unwrap() {
            let kelvin = number(&row["T_K"]);
            agree(&harmonic(omega, kelvin), row, 1e-9, &format!("harmonic {} at {kelvin} K", block["name"]));
            rows += 1;
        }
    }
    assert_eq!(rows, 28);
}

/// A Morse curve sampled like a real scan (45 points, invented spacing), through the whole study: curve, levels, sums.
#[test]
fn sampled_morse_curves_agree_to_1e_5_up_to_2000_kelvin() {
    let file = reference();
    for (block, r_e) in file["blocks"].as_array().unwrap().iter().zip([1.128, 2.666]) {
        let parameters = &block["parameters"];
        let morse = Morse {
            e_min_hartree: 0.0,
            r_e_bohr: LengthUnit::Angstrom.to_bohr(r_e),
            well_depth_hartree: number(&parameters["De_per_cm"]) / PER_CM_PER_HARTREE,
            a_per_bohr: number(&parameters["a_per_angstrom"]) * LengthUnit::Angstrom.to_bohr(1.0).recip(),
        };
        let a = number(&parameters["a_per_angstrom"]);
        let mut text = String::from("R_angstrom,E_hartree\n");
        for i in 0..45 {
            // Denser near the minimum, from −1.0/a to +6/a: at 2000 K the I2-like well is populated up to its limit.
            let t = f64::from(i) / 44.0;
            let r = r_e + (-1.0 + 2.4 * t + 4.6 * t * t) / a;
            let energy = morse.energy_hartree(LengthUnit::Angstrom.to_bohr(r));
            text.push_str(&format!("{r},{energy}\n"));
        }
        let mut settings = Settings::default();
        settings.masses.reduced_mass_u = Some(number(&parameters["reduced_mass_amu"]));
        let scan = read_scan("morse.csv", text.as_bytes(), &settings.read).unwrap();
        let findings = study(&scan, &settings).unwrap();
        let (mut worst, mut positions) = (0.0_f64, 0);
        for point in &findings.thermal {
            let rows = block["morse"].as_array().unwrap();
            let Some(row) = rows.iter().find(|r| number(&r["T_K"]) == point.kelvin) else { continue };
            let what = format!("{} sampled, {} K", block["name"], point.kelvin);
            agree(&point.vibrational, row, 1e-5, &what);
            agree(&point.morse.unwrap(), row, 1e-5, &what);
            // The Morse fit of a Morse curve is the curve: its positions are those of the numerical levels.
            if let Some(mean) = point.morse_mean_r_bohr {
                close(mean, point.mean_r_bohr, 1e-5, &what);
                close(point.morse_mean_square_x_bohr2.unwrap(), point.mean_square_x_bohr2, 1e-4, &what);
                positions += 1;
            }
            // The I2-like well is only 9 kT deep at 2000 K: its last levels count, and that is said.
            let shallow = block["name"] == "I2-like" && point.kelvin == 2000.0;
            assert_eq!(point.converged, !shallow, "{what}");
            let q = number(&row["q_from_ground_level"]);
            worst = worst.max((point.vibrational.partition_function / q - 1.0).abs());
            for (found, wanted) in
                point.populations.iter().zip(row["populations_v0_to_3"].as_array().unwrap())
            {
                assert!((found - number(wanted)).abs() < 1e-5, "{what}: {found} {wanted}");
            }
        }
        println!("{}: partition function off by at most {worst:.1e}", block["name"]);
        assert!(positions > 2, "{positions}");
    }
}

/// Harmonic ⟨x²⟩ at low temperature is half the square of the zero-point amplitude; the numerical one is
/// larger on a molecule's curve, and ⟨r⟩ grows with temperature (common practice, no source).
#[test]
fn amplitudes_grow_with_temperature() {
    let findings = real_scan("hf_ccsdt_cc-pvqz.csv", "H,F", &[100.0, 1000.0, 2000.0], false);
    let curve = findings.curve.as_deref().unwrap();
    let zero_point = findings.reach.as_ref().unwrap().zero_point_amplitude_bohr.unwrap();
    let cold = &findings.thermal[0];
    close(cold.harmonic_mean_square_x_bohr2.unwrap(), 0.5 * zero_point * zero_point, 1e-9, "harmonic x²");
    assert!(cold.mean_square_x_bohr2 > cold.harmonic_mean_square_x_bohr2.unwrap());
    assert!(cold.mean_r_bohr > curve.local.r_e_bohr);
    for pair in findings.thermal.windows(2) {
        assert!(pair[1].mean_r_bohr > pair[0].mean_r_bohr);
        assert!(pair[1].vibrational.entropy_boltzmann > pair[0].vibrational.entropy_boltzmann);
    }
}

fn real_scan(name: &str, atoms: &str, kelvin: &[f64], rotation: bool) -> parabound::findings::Findings {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let places = [root.join("sample-scans").join(name), root.join("tests/scans").join(name)];
    let path = places.iter().find(|p| p.exists()).expect("the scan");
    let mut settings = Settings::default();
    settings.masses.atoms = Some(parse_atoms(atoms).unwrap());
    settings.thermal.temperatures_kelvin = kelvin.to_vec();
    settings.thermal.rotation = rotation;
    let scan = read_scan(name, &std::fs::read(path).unwrap(), &settings.read).unwrap();
    study(&scan, &settings).unwrap()
}

/// Ideal gases from ab initio curves against the NIST-JANAF tables. The curves' own errors come in: a B_e that is
/// too small gives S too large by R ln(B_exp/B), which is printed beside the difference and explains it.
#[test]
fn ideal_gases_against_thermochemical_tables() {
    let file: Value = serde_json::from_str(include_str!("reference/thermochemistry.json")).unwrap();
    let constants: Value = serde_json::from_str(include_str!("reference/diatomic-constants.json")).unwrap();
    let curves = [
        ("H2", "h2_fci.csv", "H,H"),
        ("N2", "n2_casscf_nevpt2.tsv", "N,N"),
        ("CO", "co_ccsdt_bohr.dat", "C,O"),
        ("HCl", "hcl_clean.csv", "H,Cl"),
    ];
    for (molecule, scan, atoms) in curves {
        let rows = file["molecules"].as_array().unwrap().iter().find(|m| m["molecule"] == molecule).unwrap();
        let findings = real_scan(scan, atoms, &[298.15, 1000.0], true);
        let published = constants["molecules"].as_array().unwrap().iter().find(|m| m["molecule"] == molecule);
        let b_e = findings.constants.from_derivatives.as_ref().unwrap().b_e_per_cm.value;
        let by_b_e = GAS_CONSTANT_JOULE_PER_MOLE_KELVIN * (number(&published.unwrap()["Be"]) / b_e).ln();
        println!("{molecule}: B_e makes {by_b_e:+.3} J/(mol K) in S");
        for (point, row) in findings.thermal.iter().zip(rows["rows"].as_array().unwrap()) {
            assert_eq!(point.kelvin, number(&row["T"]));
            let gas = point.rotating.unwrap().ideal_gas.unwrap();
            let (cp, s) = (gas.heat_capacity_joule_per_mole_kelvin, gas.entropy_joule_per_mole_kelvin);
            let (d_cp, d_s) = (cp - number(&row["Cp"]), s - number(&row["S"]));
            println!("  {} K: C_p {cp:.3} ({d_cp:+.3}), S {s:.3} ({d_s:+.3}) J/(mol K)", point.kelvin);
            // H − H(0) at 298.15 K of the same tables, from memory: CO 8.671, N2 8.670, HCl 8.640, H2 8.467 kJ/mol.
            let h = match molecule {
                "CO" => 8.671,
                "N2" => 8.670,
                "HCl" => 8.640,
                _ => 8.467,
            };
            if point.kelvin == 298.15 {
                let d_h = gas.enthalpy_kilojoule_per_mole - h;
                println!("  H - H(0) {:.3} ({d_h:+.3}) kJ/mol", gas.enthalpy_kilojoule_per_mole);
                assert!(d_h.abs() < 0.01, "{molecule}: {d_h}");
            }
            // The rigid rotor with the harmonic oscillator is near, the J sum of the Morse fit nearer.
            let rotating = point.rotating.unwrap();
            let off = |a: Option<Averages>| {
                (a.unwrap().partition_function / rotating.rovibrational.partition_function - 1.0).abs()
            };
            println!(
                "  q: rigid rotor off by {:.2e}, Morse by {:.2e}",
                off(rotating.harmonic),
                off(rotating.morse)
            );
            assert!(off(rotating.harmonic) < 0.06 && off(rotating.morse) < off(rotating.harmonic));
            assert!(d_cp.abs() < 0.03 && (d_s - by_b_e).abs() < 0.03, "{molecule} at {} K", point.kelvin);
        }
    }
}

/// The density at a temperature is normalised, its mean and its mean square are the thermal averages, and the harmonic
/// one is the Gaussian that Bloch (1932) found; populations fall with v and add up to 1.
#[test]
fn thermal_densities_have_the_thermal_moments() {
    let findings = real_scan("hf_ccsdt_cc-pvqz.csv", "H,F", &[298.15, 3000.0], false);
    let r_e = findings.curve.as_deref().unwrap().local.r_e_bohr;
    for point in &findings.thermal {
        let found = findings.thermal_density(point.kelvin).unwrap();
        let step = found.r_bohr[1] - found.r_bohr[0];
        let moment = |density: &[f64], f: &dyn Fn(f64) -> f64| {
            step * found.r_bohr.iter().zip(density).map(|(r, d)| f(*r) * d).sum::<f64>()
        };
        let numerical = &found.numerical_per_bohr;
        assert!((moment(numerical, &|_| 1.0) - 1.0).abs() < 1e-6);
        close(moment(numerical, &|r| r), point.mean_r_bohr, 1e-6, "mean");
        close(moment(numerical, &|r| (r - r_e).powi(2)), point.mean_square_x_bohr2, 1e-5, "mean square");
        let variance = moment(&found.harmonic_per_bohr, &|r| (r - r_e).powi(2));
        close(variance, point.harmonic_mean_square_x_bohr2.unwrap(), 1e-3, "harmonic mean square");
        assert!((found.populations.iter().sum::<f64>() - 1.0).abs() < 1e-6);
        assert!(found.populations.windows(2).all(|p| p[1] < p[0]));
        assert!(
            (found.harmonic_populations[0] - 1.0 / point.harmonic.unwrap().partition_function).abs() < 1e-12
        );
    }
    assert!(findings.thermal_density(-1.0).is_none() && findings.thermal_density(f64::NAN).is_none());
}
