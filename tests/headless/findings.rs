//! Every delimited scan with an energy column: status 0, findings that satisfy the schema.

use super::{findings, findings_with_status, scan, study};
use serde_json::Value;

/// Scan, options it needs, and the number of energy columns.
const SCANS: [(&str, &[&str], usize); 12] = [
    ("h2_fci.csv", &["--atoms", "H,H"], 1),
    ("hf_rhf_mp2_ccsdt.csv", &["--atoms", "F,H"], 3),
    ("hf_basis_family.csv", &["--atoms", "H,F"], 6),
    ("hf_ccsdt_cc-pvdz.csv", &["--atoms", "H,F"], 1),
    ("hf_ccsdt_cc-pvtz.csv", &["--atoms", "H,F"], 1),
    ("hf_ccsdt_cc-pvqz.csv", &["--atoms", "H,F"], 1),
    ("co_ccsdt_bohr.dat", &["--atoms", "C,O"], 1),
    ("n2_casscf_nevpt2.tsv", &["--atoms", "N,N"], 2),
    ("lih_X_A.csv", &["--atoms", "Li,H"], 2),
    ("hcl_clean.csv", &["--atoms", "H,Cl"], 1),
    ("hcl_messy.txt", &["--atoms", "1H,35Cl"], 1),
    ("water_oh_rigid.dat", &["--reduced-mass", "0.9484"], 1),
];

pub(crate) fn schema() -> jsonschema::Validator {
    let text = include_str!("../../assets/findings.schema.json");
    let schema: Value = serde_json::from_str(text).expect("the schema is JSON");
    jsonschema::validator_for(&schema).expect("the schema is one")
}

pub(crate) fn assert_valid(validator: &jsonschema::Validator, value: &Value, what: &str) {
    let errors: Vec<String> =
        validator.iter_errors(value).map(|e| format!("{}: {e}", e.instance_path)).take(5).collect();
    assert!(errors.is_empty(), "{what}: {}", errors.join("\n"));
}

/// Fails with the first violations of the schema.
pub fn assert_satisfies_schema(value: &Value, what: &str) {
    assert_valid(&schema(), value, what);
}

#[test]
fn every_scan_gives_findings_that_satisfy_the_schema() {
    let validator = schema();
    for (name, options, columns) in SCANS {
        let value = findings(name, options);
        assert_valid(&validator, &value, name);
        assert!(!value["levels"].as_array().expect("levels").is_empty(), "{name} has levels");
        assert!(value["masses"]["reduced_mass"]["value"].as_f64().is_some_and(|m| m > 0.0));
        let fits = value["fits"].as_array().expect("fits");
        assert!(fits.len() == 3 && fits.iter().all(|f| f["converged"] == true), "{name}: {fits:#?}");
        if columns > 1 {
            // Correlation energies alone have no minimum: explained, and the others are done.
            let status = if name == "hf_basis_family.csv" { 4 } else { 0 };
            let all = findings_with_status(name, &[options, &["--curve", "all"]].concat(), status);
            assert_valid(&validator, &all, name);
            assert_eq!(all.as_array().map(Vec::len), Some(columns), "{name}");
        }
    }
    let relaxed = findings("water_oh_relaxed.csv", &["--reduced-mass", "0.9484", "--curve", "E_MP2"]);
    assert_valid(&validator, &relaxed, "water_oh_relaxed.csv");
    assert_eq!(relaxed["source"]["length_column"], "r_OH1_angstrom", "the first length is the scan's");
}

/// The flaws that the scan's origin page names: 1.28 angstrom twice, out of order, 1.44 angstrom from a
/// loosely converged calculation.
#[test]
fn the_messy_scan_is_understood_and_its_flaws_are_named() {
    let value = findings("hcl_messy.txt", &["--atoms", "H,Cl"]);
    let notices = value["notices"].as_array().expect("notices");
    for code in ["repeated-geometry", "resorted", "off-curve", "unit-from-comment"] {
        assert!(notices.iter().any(|n| n["code"] == code), "no {code} in {notices:#?}");
    }
    let off = notices.iter().find(|n| n["code"] == "off-curve").expect("off-curve");
    let at = off["at"][0].as_f64().expect("a place");
    assert!((at - 1.44).abs() < 1e-9, "{off}");
    assert_eq!(value["source"]["energy_unit"], "kJ/mol");
}

#[test]
fn a_scan_without_energies_is_refused_with_status_3() {
    let path = scan("hf_dipole_near_minimum.dat");
    let output = study(&[path.to_str().expect("UTF-8"), "--atoms", "H,F"]);
    assert_eq!(output.status.code(), Some(3));
    let message = String::from_utf8_lossy(&output.stderr);
    assert!(message.contains("energy"), "{message}");
    assert!(!message.contains("panicked"), "{message}");
}

#[test]
fn without_a_mass_there_are_fits_and_reach_but_no_levels() {
    let value = findings("hcl_clean.csv", &[]);
    assert_valid(&schema(), &value, "hcl_clean.csv");
    assert_eq!(value["levels"].as_array().map(Vec::len), Some(0));
    assert!(value["masses"].is_null());
    assert!(value["reach"]["energy"]["x_plus"]["value"].as_f64().is_some_and(|x| x > 0.0));
    assert!(value["curve"]["derivatives"]["second"]["value"].as_f64().is_some_and(|k| k > 0.0));
    assert!(value["notices"].as_array().expect("notices").iter().any(|n| n["code"] == "no-mass"));
}

/// The same scan and settings give the same bytes, and a round trip through the settings of the
/// findings file gives the same again.
#[test]
fn findings_are_reproducible_from_their_own_settings() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = scan("lih_X_A.csv");
    let path = path.to_str().expect("UTF-8");
    let first = study(&[path, "--atoms", "7Li,1H", "--window", "1.2,2.2", "--curve", "E_A", "--out", "-"]);
    let again = study(&[path, "--atoms", "7Li,1H", "--window", "1.2,2.2", "--curve", "E_A", "--out", "-"]);
    assert_eq!(first.stdout, again.stdout);
    let file = folder.path().join("f.json");
    std::fs::write(&file, &first.stdout).expect("written");
    let through = study(&[path, "--settings", file.to_str().expect("UTF-8"), "--out", "-"]);
    assert_eq!(
        String::from_utf8_lossy(&first.stdout),
        String::from_utf8_lossy(&through.stdout),
        "{}",
        String::from_utf8_lossy(&through.stderr)
    );
}

/// The program's own numbers, read back from the text, are the bits that a direct call gives.
#[test]
fn the_program_and_the_function_agree_bit_for_bit() {
    use parabound::{scan::read::read_scan, settings::Settings, study::study as call};
    let path = scan("h2_fci.csv");
    let bytes = std::fs::read(&path).expect("read");
    let mut settings = Settings::default();
    settings.masses.atoms = Some(parabound::species::parse_atoms("H,H").expect("atoms"));
    let scan = read_scan("h2_fci.csv", &bytes, &settings.read).expect("understood");
    let direct = parabound::export::json::findings_to_string(&call(&scan, &settings).expect("a study"));
    let direct: Value = serde_json::from_str(&direct).expect("JSON");
    assert_eq!(findings("h2_fci.csv", &["--atoms", "H,H"]), direct);
}
