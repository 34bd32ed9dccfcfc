//! Constants of computed scans beside experiment.
//!
//! Source: `reference/diatomic-constants.json`, K. P. Huber and G. Herzberg, Constants of Diatomic Molecules (1979);
//! the file says of each value whether a public data set confirms it or it is from memory.
//!
//! A scan is one Born-Oppenheimer curve of an approximate method, so the tolerances are those of the method,
//! not of the program (common practice, no source): full CI with a quadruple-zeta basis within 0.1 % (what is
//! left out is adiabatic and basis-set correction); CCSD(T) with triple- or quadruple-zeta bases within 0.5 %
//! in r_e and 1 % in ω_e; second-order and multireference perturbation theory 1 % and 1.5 %; RHF bonds too short by
//! some 2 % and too stiff by 8 %; full CI of the two valence electrons of LiH, without core-valence correlation,
//! 1 % too long and 1.5 % too soft. B_e follows r_e with twice its tolerance; ω_e x_e and α_e, third and
//! fourth derivatives, within 12 %.

use crate::scans::curve;
use parabound::spectroscopy::from_derivatives;
use parabound::units::{to_angstrom, u_to_electron_masses};
use serde_json::Value;

struct Case {
    file: &'static str,
    column: usize,
    molecule: &'static str,
    /// Relative tolerances of r_e, ω_e, and of ω_e x_e and α_e.
    r_e: f64,
    omega_e: f64,
    anharmonic: f64,
}

const fn case(
    file: &'static str,
    column: usize,
    molecule: &'static str,
    tolerances: (f64, f64, f64),
) -> Case {
    let (r_e, omega_e, anharmonic) = tolerances;
    Case { file, column, molecule, r_e, omega_e, anharmonic }
}

const CASES: [Case; 13] = [
    case("h2_fci.csv", 1, "H2", (1e-3, 1e-3, 0.02)),
    case("h2_fci.csv", 1, "D2", (1e-3, 1e-3, 0.02)),
    case("hcl_clean.csv", 1, "HCl", (5e-3, 0.01, 0.12)),
    case("co_ccsdt_bohr.dat", 1, "CO", (5e-3, 0.01, 0.12)),
    case("hf_ccsdt_cc-pvtz.csv", 1, "HF", (5e-3, 0.01, 0.12)),
    case("hf_ccsdt_cc-pvqz.csv", 1, "HF", (5e-3, 0.01, 0.12)),
    case("hf_rhf_mp2_ccsdt.csv", 3, "HF", (5e-3, 0.01, 0.12)),
    case("hf_rhf_mp2_ccsdt.csv", 2, "HF", (0.01, 0.015, 0.12)),
    case("hf_rhf_mp2_ccsdt.csv", 1, "HF", (0.02, 0.09, 0.12)),
    case("n2_casscf_nevpt2.tsv", 1, "N2", (0.01, 0.015, 0.12)),
    case("n2_casscf_nevpt2.tsv", 2, "N2", (0.01, 0.015, 0.12)),
    case("lih_X_A.csv", 1, "LiH", (0.01, 0.015, 0.12)),
    case("hf_ccsdt_cc-pvdz.csv", 1, "HF", (5e-3, 0.01, 0.12)),
];

#[test]
fn computed_constants_beside_huber_and_herzberg() {
    let text = include_str!("reference/diatomic-constants.json");
    let all: Value = serde_json::from_str(text).expect("JSON");
    let molecules = all["molecules"].as_array().expect("molecules");
    println!("deviation from experiment in percent: r_e, omega_e, omega_e x_e, B_e, alpha_e");
    for case in CASES {
        let row = molecules.iter().find(|m| m["molecule"] == case.molecule).expect("a molecule of the table");
        let mass = u_to_electron_masses(row["derived"]["mu_amu"].as_f64().expect("mass"));
        let curve = curve(case.file, case.column, None);
        let found = from_derivatives(&curve, mass);
        let deviations = [
            ("re", to_angstrom(curve.r_e_bohr.value), case.r_e),
            ("we", found.omega_e_per_cm.value, case.omega_e),
            ("wexe", found.omega_e_x_e_per_cm.expect("wexe").value, case.anharmonic),
            ("Be", found.b_e_per_cm.value, 2.0 * case.r_e),
            ("alpha_e", found.alpha_e_per_cm.expect("alpha_e").value, case.anharmonic),
        ]
        .map(|(key, value, tolerance)| (key, value / row[key].as_f64().expect("value") - 1.0, tolerance));
        let shown: Vec<String> = deviations.iter().map(|d| format!("{:+.2}", 100.0 * d.1)).collect();
        println!("{:24} {} {:4} {}", case.file, case.column, case.molecule, shown.join("  "));
        for (key, deviation, tolerance) in deviations {
            assert!(deviation.abs() <= tolerance, "{} {} {key}: {deviation}", case.file, case.column);
        }
    }
}
