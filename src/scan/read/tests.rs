//! The sample scans, read whole.

use super::{ReadSettings, read_scan};
use crate::notice::Code;
use crate::scan::Scan;
use crate::scan::error::ScanError;
use crate::units::{EnergyUnit, LengthUnit};

fn bytes(folder: &str, file: &str) -> Vec<u8> {
    std::fs::read(format!("{}/{folder}/{file}", env!("CARGO_MANIFEST_DIR"))).expect("a file of the project")
}

fn read(folder: &str, file: &str) -> Scan {
    read_scan(file, &bytes(folder, file), &ReadSettings::default()).unwrap_or_else(|e| panic!("{file}: {e}"))
}

/// File, atoms, rows, length column and unit, energy columns, energy unit, number of properties.
type Expected = (
    &'static str,
    Option<&'static str>,
    usize,
    &'static str,
    LengthUnit,
    &'static [&'static str],
    EnergyUnit,
    usize,
);

const SAMPLES: [Expected; 7] = [
    (
        "lih_X_A.csv",
        Some("Li,H"),
        70,
        "R_angstrom",
        LengthUnit::Angstrom,
        &["E_X", "E_A"],
        EnergyUnit::Hartree,
        3,
    ),
    ("h2_fci.csv", Some("H,H"), 60, "R_angstrom", LengthUnit::Angstrom, &["E"], EnergyUnit::Hartree, 0),
    (
        "hf_rhf_mp2_ccsdt.csv",
        None,
        45,
        "R(angstrom)",
        LengthUnit::Angstrom,
        &["E_RHF", "E_MP2", "E_CCSD(T)"],
        EnergyUnit::Hartree,
        2,
    ),
    ("co_ccsdt_bohr.dat", Some("C,O"), 24, "R (bohr)", LengthUnit::Bohr, &["E"], EnergyUnit::Hartree, 0),
    (
        "hcl_messy.txt",
        Some("H,Cl"),
        26,
        "r(H-Cl)",
        LengthUnit::Angstrom,
        &["dE"],
        EnergyUnit::KilojoulePerMole,
        0,
    ),
    (
        "n2_casscf_nevpt2.tsv",
        Some("N,N"),
        46,
        "r_angstrom",
        LengthUnit::Angstrom,
        &["E_CASSCF", "E_NEVPT2"],
        EnergyUnit::Hartree,
        0,
    ),
    (
        "water_oh_relaxed.csv",
        None,
        19,
        "r_OH1_angstrom",
        LengthUnit::Angstrom,
        &["E_RHF", "E_MP2"],
        EnergyUnit::Hartree,
        2,
    ),
];

const OTHERS: [Expected; 6] = [
    ("hcl_clean.csv", None, 25, "R_angstrom", LengthUnit::Angstrom, &["E"], EnergyUnit::Hartree, 0),
    (
        "hf_basis_family.csv",
        Some("H,F"),
        19,
        "R_angstrom",
        LengthUnit::Angstrom,
        &["E_HF_DZ", "E_corr_DZ", "E_HF_TZ", "E_corr_TZ", "E_HF_QZ", "E_corr_QZ"],
        EnergyUnit::Hartree,
        0,
    ),
    (
        "hf_ccsdt_cc-pvdz.csv",
        None,
        19,
        "R_angstrom",
        LengthUnit::Angstrom,
        &["E_total"],
        EnergyUnit::Hartree,
        0,
    ),
    (
        "hf_ccsdt_cc-pvtz.csv",
        None,
        19,
        "R_angstrom",
        LengthUnit::Angstrom,
        &["E_total"],
        EnergyUnit::Hartree,
        0,
    ),
    (
        "hf_ccsdt_cc-pvqz.csv",
        None,
        19,
        "R_angstrom",
        LengthUnit::Angstrom,
        &["E_total"],
        EnergyUnit::Hartree,
        0,
    ),
    ("water_oh_rigid.dat", None, 26, "r_OH/A", LengthUnit::Angstrom, &["E_MP2"], EnergyUnit::Hartree, 0),
];

/// What each file holds is stated in the README beside it.
#[test]
fn every_scan_is_understood() {
    let all = SAMPLES.iter().map(|s| ("sample-scans", s)).chain(OTHERS.iter().map(|s| ("tests/scans", s)));
    for (folder, (file, atoms, rows, length, length_unit, energies, energy_unit, properties)) in all {
        let scan = read(folder, file);
        let labels: Vec<&str> = scan.energies.iter().map(|e| e.label.as_str()).collect();
        let pair = scan.atoms.as_ref().map(|[a, b]| format!("{a},{b}"));
        assert_eq!(labels, *energies, "{file}");
        assert_eq!((scan.length_column.as_str(), scan.length_unit), (*length, *length_unit), "{file}");
        assert_eq!((scan.bond_lengths.len(), scan.properties.len()), (*rows, *properties), "{file}");
        assert!(scan.energies.iter().all(|e| e.unit == *energy_unit), "{file}");
        assert_eq!(pair.as_deref(), *atoms, "{file}");
        assert_eq!(scan.charge, None, "{file}");
    }
}

#[test]
fn numbers_keep_their_digits_and_their_order() {
    let scan = read("sample-scans", "hcl_messy.txt");
    assert_eq!(&scan.bond_lengths[..3], &[1.0, 1.10, 1.20]);
    assert_eq!(scan.energies[0].values[1], Some(70.53019));
    assert_eq!(scan.row_remarks, [(22, "SCF stopped at 1e-3 Eh, redo?".to_owned())]);
    assert_eq!(scan.line(22), 28);
    let codes: Vec<Code> = scan.notices.iter().map(|n| n.code).collect();
    assert_eq!(codes, [Code::UnitFromComment, Code::UnitFromComment, Code::AtomsFromComment]);
}

#[test]
fn empty_cells_are_noted() {
    let scan = read("sample-scans", "hf_rhf_mp2_ccsdt.csv");
    let dipole = &scan.properties[1];
    assert_eq!((dipole.name.as_str(), dipole.unit.as_deref()), ("mu_CCSD(T)(debye)", Some("debye")));
    assert!(dipole.values[0].is_none() && dipole.values.iter().any(Option::is_some));
    assert_eq!(scan.notices.iter().map(|n| n.code).collect::<Vec<_>>(), [Code::EmptyCells]);
}

#[test]
fn a_table_of_dipoles_is_refused() {
    let file = "hf_dipole_near_minimum.dat";
    let error = read_scan(file, &bytes("tests/scans", file), &ReadSettings::default()).expect_err("refused");
    let columns = vec!["R/bohr".to_owned(), "mu/au".to_owned()];
    assert_eq!(error, ScanError::NoEnergyColumn { columns });
}

#[test]
fn options_go_before_the_header() {
    let settings = ReadSettings {
        length_unit: Some(LengthUnit::Bohr),
        energy_unit: Some(EnergyUnit::PerCm),
        length_column: Some("r_OH2".to_owned()),
        ..ReadSettings::default()
    };
    let file = "water_oh_relaxed.csv";
    let scan = read_scan(file, &bytes("sample-scans", file), &settings).expect("read");
    assert_eq!((scan.length_column.as_str(), scan.length_unit), ("r_OH2_angstrom", LengthUnit::Bohr));
    assert!(scan.energies.iter().all(|e| e.unit == EnergyUnit::PerCm));
    assert_eq!(scan.curve_index(Some("MP2")), Ok(1));
    assert!(matches!(scan.curve_index(Some("E")), Err(ScanError::AmbiguousColumn { .. })));
}

#[test]
fn the_check_sum_is_that_of_the_bytes() {
    // FIPS 180-4, example of SHA-256 for the message "abc".
    assert_eq!(super::sha256_hex(b"abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
}

/// The three files hold the same calculation (README beside them); the coordinates are printed with
/// eight decimals of an angstrom, converted with 1 bohr = 0.52917721092 angstrom.
#[test]
fn three_layouts_of_one_scan_agree() {
    let table = read("sample-scans", "co_ccsdt_bohr.dat");
    let frames = read("tests/scans", "co_scan.xyz");
    let results = read("tests/scans", "co_qcschema.json");
    assert_eq!((frames.length_column.as_str(), frames.length_unit), ("r(C1-O2)", LengthUnit::Angstrom));
    assert_eq!(results.length_unit, LengthUnit::Bohr);
    assert_eq!(results.curve_index(Some("CCSD(T)/cc-pVQZ")), Ok(0));
    assert_eq!(
        results.energies.iter().map(|e| e.name.as_str()).collect::<Vec<_>>(),
        ["return_energy", "scf_total_energy", "ccsd_total_energy", "ccsd_prt_pr_total_energy"]
    );
    for scan in [&frames, &results] {
        assert_eq!(scan.atoms, table.atoms);
        assert_eq!((scan.bond_lengths.len(), scan.notices.len()), (24, 0));
    }
    for row in 0..24 {
        let r = table.bond_lengths[row];
        assert!((frames.bond_lengths[row] / 0.529_177_210_92 - r).abs() < 2e-8);
        assert!((results.bond_lengths[row] - r).abs() < 1e-12);
        let energy = |scan: &Scan| scan.energies[0].values[row].expect("an energy");
        assert_eq!(energy(&frames), energy(&table));
        assert!((energy(&results) - energy(&table)).abs() < 1e-11);
    }
}
