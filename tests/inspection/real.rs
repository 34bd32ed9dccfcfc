//! Real scans: the clean ones pass without a word against their quality, the flawed ones are named.
//!
//! What is wrong with each scan is told by its origin in `sample-scans/README.md` and `tests/scans/README.md`.

use parabound::notice::{Code, Notice, Severity};
use parabound::scan::read::{ReadSettings, read_scan};
use parabound::settings::Settings;
use parabound::species::AtomChoice;
use parabound::study::study;
use std::path::PathBuf;

/// Remarks against the quality of the points, as opposed to what any scan is told.
const AGAINST_THE_DATA: [Code; 13] = [
    Code::RepeatedGeometry,
    Code::OffCurve,
    Code::Kink,
    Code::Jump,
    Code::Noise,
    Code::NoMinimum,
    Code::MinimumAtEnd,
    Code::SecondMinimum,
    Code::Hump,
    Code::TurnsOver,
    Code::Wiggles,
    Code::RoundedEnergies,
    Code::ImplausibleUnit,
];

/// The cautions of a column, the first one being 1.
fn cautions(file: &str, column: usize, atoms: Option<&str>) -> Vec<Notice> {
    let root = PathBuf::from(env!("CARGO_MANIFEST_DIR"));
    let path = ["sample-scans", "tests/scans"].iter().map(|f| root.join(f).join(file)).find(|p| p.exists());
    let bytes = std::fs::read(path.expect("a scan of the project")).expect("readable");
    let scan = read_scan(file, &bytes, &ReadSettings::default()).expect("a scan");
    let mut settings = Settings { curve: Some(column.to_string()), ..Settings::default() };
    settings.masses.atoms = atoms.map(|a| {
        let (a, b) = a.split_once(',').expect("two atoms");
        [AtomChoice::parse(a).expect("an atom"), AtomChoice::parse(b).expect("an atom")]
    });
    let findings = study(&scan, &settings).expect("a study");
    let all = findings.notices.into_iter();
    all.filter(|n| n.severity >= Severity::Caution).collect()
}

fn against(file: &str, column: usize, atoms: Option<&str>) -> Vec<Notice> {
    cautions(file, column, atoms).into_iter().filter(|n| AGAINST_THE_DATA.contains(&n.code)).collect()
}

/// Source of the list: these calculations were tightly converged and cover one state each.
#[test]
fn clean_scans_are_left_alone() {
    let mut wrong = Vec::new();
    let mut check = |file: &str, column: usize, atoms: &str| {
        for notice in against(file, column, Some(atoms)) {
            wrong.push(format!("{file} {column}: {} at {:?}", notice.text, notice.at_angstrom()));
        }
    };
    check("h2_fci.csv", 1, "H,H");
    check("hcl_clean.csv", 1, "H,Cl");
    check("co_ccsdt_bohr.dat", 1, "C,O");
    check("co_scan.xyz", 1, "C,O");
    check("co_qcschema.json", 1, "C,O");
    for basis in ["d", "t", "q"] {
        check(&format!("hf_ccsdt_cc-pv{basis}z.csv"), 1, "H,F");
    }
    for column in [1, 3, 5] {
        check("hf_basis_family.csv", column, "H,F");
    }
    check("lih_X_A.csv", 1, "Li,H");
    check("lih_X_A.csv", 2, "Li,H");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

fn has(notices: &[Notice], code: Code, at_angstrom: f64, within: f64) -> bool {
    let near = |n: &Notice| n.at_angstrom().iter().any(|r| (r - at_angstrom).abs() <= within);
    notices.iter().any(|n| n.code == code && near(n))
}

/// RHF of HF: points 0.04 Å apart on the wall, where windows of few points once saw a jump of 0.007 cm⁻¹.
#[test]
fn a_coarse_wall_is_no_jump() {
    let found = against("hf_rhf_mp2_ccsdt.csv", 1, Some("H,F"));
    assert!(!found.iter().any(|n| matches!(n.code, Code::Jump | Code::Kink)), "{found:?}");
}

#[test]
fn real_flaws_are_named() {
    // One loosely converged point; one bond length twice.
    let messy = against("hcl_messy.txt", 1, Some("H,Cl"));
    let codes: Vec<Code> = messy.iter().map(|n| n.code).collect();
    assert_eq!(codes, [Code::RepeatedGeometry, Code::OffCurve], "{messy:?}");
    assert!(has(&messy, Code::OffCurve, 1.44, 1e-9) && has(&messy, Code::RepeatedGeometry, 1.28, 1e-9));
    assert!(messy[1].text.contains("below"), "{}", messy[1].text);
    // Single-reference methods that bend over where the bond breaks.
    for (column, at) in [(2, 2.9), (3, 2.3)] {
        let found = against("hf_rhf_mp2_ccsdt.csv", column, Some("H,F"));
        assert!(has(&found, Code::TurnsOver, at, 0.1), "{found:?}");
    }
    // Basis-set superposition beyond 2.6 angstrom.
    let found = against("n2_casscf_nevpt2.tsv", 1, Some("N,N"));
    assert!(has(&found, Code::Wiggles, 2.8, 0.21), "{found:?}");
}
