//! What is said of a file before it is studied, curves made from columns, and tables that read back the same.

use super::{findings, scan, study};
use std::fs;

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

#[test]
fn a_dry_run_says_what_was_understood() {
    let path = scan("lih_X_A.csv");
    let output = study(&[path.to_str().expect("UTF-8"), "--dry-run", "--curve", "E_A"]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let said = text(&output.stdout);
    for needle in [
        "layout         delimited, columns separated by commas, decimal point",
        "rows           70, 0.9 to 10 angstrom",
        "bond length    R_angstrom, in angstrom (as the header says)",
        "energy  2    * E_A_hartree, in hartree (as the header says); 70 values",
        "property       mu_XA_au",
        "atoms          Li,H (named in the file)",
    ] {
        assert!(said.contains(needle), "{needle}:\n{said}");
    }
    assert!(!said.contains("omega_e"), "{said}");
    let chosen = ["--energy-column", "E_A", "--ignore-column", "mu_XA"];
    let said = study(&[&[path.to_str().expect("UTF-8"), "--dry-run"], &chosen[..]].concat());
    let said = text(&said.stdout);
    assert!(
        said.contains("energy  1    * E_A_hartree") && said.contains("property       E_X_hartree"),
        "{said}"
    );
    assert!(!said.contains("mu_XA_au"), "{said}");
    let wrong = study(&[path.to_str().expect("UTF-8"), "--dry-run", "--ignore-column", "colour"]);
    assert_eq!(wrong.status.code(), Some(3));
    let path = scan("hcl_messy.txt");
    let said = study(&[path.to_str().expect("UTF-8"), "--dry-run", "--energy-unit", "eV"]);
    assert!(text(&said.stdout).contains("in eV (as chosen)"), "{}", text(&said.stdout));
    assert!(text(&said.stdout).contains("in angstrom (as a comment says)"), "{}", text(&said.stdout));
    let output = study(&["no-such-file.csv", "--dry-run"]);
    assert_eq!(output.status.code(), Some(3));
}

#[test]
fn a_curve_made_from_columns_is_studied_and_says_how_it_was_made() {
    let recipe = "E_CBS = hf3(E_HF_DZ,E_HF_TZ,E_HF_QZ; 2,3,4) + corr2(E_corr_TZ,E_corr_QZ; 3,4)";
    let value = findings("hf_basis_family.csv", &["--make", recipe, "--atoms", "H,F"]);
    assert_eq!(value["source"]["curve"], "E_CBS");
    assert_eq!(value["source"]["made"], recipe);
    assert_eq!(value["settings"]["read"]["made"][0], recipe);
    let omega = value["constants"]["from_derivatives"]["omega_e"]["value"].as_f64().expect("a number");
    let largest = findings("hf_ccsdt_cc-pvqz.csv", &["--atoms", "H,F"]);
    let largest = largest["constants"]["from_derivatives"]["omega_e"]["value"].as_f64().expect("a number");
    assert!((omega - largest).abs() < 40.0, "{omega} {largest}");
    let path = scan("hf_basis_family.csv");
    let wrong = study(&[path.to_str().expect("UTF-8"), "--make", "E = A +"]);
    assert_eq!(wrong.status.code(), Some(2));
    let unknown = study(&[path.to_str().expect("UTF-8"), "--make", "E = E_HF_5Z + 2*E_HF_TZ"]);
    assert_eq!(unknown.status.code(), Some(3), "{}", text(&unknown.stderr));
    assert!(text(&unknown.stderr).contains("no column"), "{}", text(&unknown.stderr));
}

#[test]
fn a_curve_written_as_a_table_reads_back_the_same() {
    let folder = tempfile::tempdir().expect("a folder");
    for (file, column) in [
        ("hcl_messy.txt", "1"),
        ("co_ccsdt_bohr.dat", "1"),
        ("n2_casscf_nevpt2.tsv", "2"),
        ("lih_X_A.csv", "2"),
    ] {
        let table = folder.path().join(format!("{file}.{column}.csv"));
        let path = scan(file);
        let option = format!("curve={}", table.to_str().expect("UTF-8"));
        let output = study(&[
            path.to_str().expect("UTF-8"),
            "--curve",
            column,
            "--reduced-mass",
            "1",
            "--table",
            &option,
        ]);
        assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
        let read = |name: &str, bytes: &[u8], column: usize| {
            let settings = parabound::scan::read::ReadSettings::default();
            let scan = parabound::scan::read::read_scan(name, bytes, &settings).expect("a scan");
            let values = scan.energies[column].values.iter().map(|v| v.expect("a value").to_bits());
            let mut points: Vec<(u64, u64)> =
                scan.bond_lengths.iter().map(|r| r.to_bits()).zip(values).collect();
            points.sort_by_key(|p| p.0);
            (points, scan.length_unit, scan.energies[column].unit)
        };
        let before =
            read(file, &fs::read(&path).expect("readable"), column.parse::<usize>().expect("a number") - 1);
        let after = read("table.csv", &fs::read(&table).expect("readable"), 0);
        assert_eq!(before, after, "{file}");
    }
}

/// Invented logs of a Morse function like that of HCl; the energy is printed twice, the last one counts.
#[test]
fn logs_are_read_by_patterns_that_are_kept() {
    let folder = tempfile::tempdir().expect("a folder");
    let logs = folder.path().join("logs");
    fs::create_dir(&logs).expect("a folder");
    for i in 0..20 {
        let r = 1.0 + 0.05 * f64::from(i);
        let e = 4.6 * (1.0 - (-1.87 * (r - 1.27)).exp()).powi(2);
        let log = format!("distance = {r:.3} A\ncycle 1  E = {:.9}\ncycle 2  E = {e:.9} eV\n", e + 1.0);
        fs::write(logs.join(format!("p{i:02}.log")), log).expect("written");
    }
    let (logs, out) = (logs.to_str().expect("UTF-8").to_owned(), folder.path().join("f.json"));
    let out = out.to_str().expect("UTF-8");
    let patterns =
        ["--length-pattern", r"distance = (\S+)", "--energy-pattern", r"E = (\S+)", "--atoms", "H,Cl"];
    let units = ["--length-unit", "angstrom", "--energy-unit", "eV"];
    let output = study(&[&[logs.as_str(), "--out", out], &patterns[..], &units[..]].concat());
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let value: serde_json::Value = serde_json::from_slice(&fs::read(out).expect("read")).expect("JSON");
    assert_eq!(
        (&value["source"]["layout"], &value["source"]["file_name"]),
        (&"lines".into(), &"logs".into())
    );
    let r_e = value["curve"]["minimum"]["r_e"]["value"].as_f64().expect("a number");
    assert!((r_e - 1.27).abs() < 1e-4, "{r_e}");
    // The findings file carries the patterns; the same study from it.
    let again = study(&[logs.as_str(), "--settings", out, "--out", "-"]);
    assert_eq!(text(&again.stdout), fs::read_to_string(out).expect("read"));
    let first = study(&[logs.as_str(), "--settings", out, "--match", "first", "--dry-run"]);
    assert!(text(&first.stdout).contains("layout         lines"), "{}", text(&first.stdout));
    let missing = study(&[&[logs.as_str()], &patterns[..]].concat());
    assert_eq!(missing.status.code(), Some(3));
    assert!(text(&missing.stderr).contains("--length-unit"), "{}", text(&missing.stderr));
    let wrong = study(&[logs.as_str(), "--settings", out, "--energy-pattern", "energy (.*)"]);
    assert!(text(&wrong.stderr).contains("p00.log: no line matches"), "{}", text(&wrong.stderr));
}
