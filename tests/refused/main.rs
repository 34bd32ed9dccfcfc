//! Files that must be refused, each with the message it must provoke, and odd ones that must be understood.
//!
//! The expectations stand in the file itself, on lines that begin with `#>` and are blanked before it is
//! read, or in a file of the same name with `.expect` added where a further line would change the case.
//! `#> refused: TEXT` (may be repeated): the message contains TEXT. `#> length-unit`, `energy-unit`,
//! `length-column`, `bond`: options. `#> columns`, `rows`, `first`, `notices`, `atoms`, `charge`, `properties`:
//! what is understood. All numbers in these files are invented.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on should stop with a panic")]

mod mutation;

use parabound::scan::Scan;
use parabound::scan::read::{ReadSettings, parse_energy_unit, parse_length_unit, read_scan};
use std::path::{Path, PathBuf};

/// A file with its expectations.
struct Case {
    name: String,
    bytes: Vec<u8>,
    marks: Vec<(String, String)>,
}

impl Case {
    fn read(path: &Path) -> Self {
        let name = path.file_name().expect("a file name").to_string_lossy().into_owned();
        let sidecar = path.with_file_name(format!("{name}.expect"));
        let bytes = std::fs::read(path).expect("readable");
        let (bytes, notes) = match std::fs::read_to_string(sidecar) {
            Ok(text) => (bytes, text.lines().map(str::to_owned).collect()),
            Err(_) => without_marks(&bytes),
        };
        let marks: Vec<(String, String)> = notes
            .iter()
            .map(|n| n.split_once(": ").unwrap_or_else(|| panic!("{name}: mark {n:?}")))
            .map(|(key, value)| (key.to_owned(), value.to_owned()))
            .collect();
        assert!(!marks.is_empty(), "{name} says nothing of what is expected");
        Self { name, bytes, marks }
    }

    fn all(&self, key: &str) -> Vec<&str> {
        self.marks.iter().filter(|m| m.0 == key).map(|m| m.1.as_str()).collect()
    }

    fn settings(&self) -> ReadSettings {
        let one = |key: &str| self.all(key).first().copied();
        ReadSettings {
            length_column: one("length-column").map(str::to_owned),
            length_unit: one("length-unit").map(|u| parse_length_unit(u).expect("a length unit")),
            bond: one("bond").map(|b| {
                let (a, b) = b.split_once(',').expect("two numbers");
                [a, b].map(|n| n.parse().expect("a number"))
            }),
            energy_unit: one("energy-unit").map(|u| parse_energy_unit(u).expect("an energy unit")),
            ..ReadSettings::default()
        }
    }
}

/// Blanks the mark lines, so that all line numbers stay.
fn without_marks(bytes: &[u8]) -> (Vec<u8>, Vec<String>) {
    let (mut kept, mut notes) = (Vec::new(), Vec::new());
    for line in bytes.split_inclusive(|&b| b == b'\n') {
        match line.strip_prefix(b"#> ") {
            Some(note) => {
                notes.push(String::from_utf8_lossy(note).trim().to_owned());
                kept.extend_from_slice(b"#\n");
            }
            None => kept.extend_from_slice(line),
        }
    }
    (kept, notes)
}

fn cases(folder: &str) -> Vec<Case> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/refused").join(folder);
    let mut paths: Vec<PathBuf> =
        std::fs::read_dir(folder).expect("the folder").map(|e| e.expect("an entry").path()).collect();
    paths.retain(|p| p.extension().is_none_or(|e| e != "expect"));
    paths.sort();
    paths.iter().map(|p| Case::read(p)).collect()
}

#[test]
fn refused_files_say_why() {
    let cases = cases("scans");
    assert!(cases.len() >= 40, "only {} refused files", cases.len());
    let mut wrong = Vec::new();
    for case in &cases {
        let wanted = case.all("refused");
        assert!(!wanted.is_empty(), "{} has no message to provoke", case.name);
        match read_scan(&case.name, &case.bytes, &case.settings()) {
            Ok(scan) => wrong.push(format!("{} was read: {}", case.name, understood(&scan, "columns"))),
            Err(error) => {
                let message = error.to_string();
                if !wanted.iter().all(|w| message.contains(w)) {
                    wrong.push(format!("{}: wanted {wanted:?}, got {message:?}", case.name));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn odd_files_are_understood() {
    let mut wrong = Vec::new();
    for case in cases("accepted") {
        match read_scan(&case.name, &case.bytes, &case.settings()) {
            Err(error) => wrong.push(format!("{} was refused: {error}", case.name)),
            Ok(scan) => {
                for key in ["columns", "rows", "first", "atoms", "charge", "properties", "notices"] {
                    // No word of notices means that there must be none.
                    let wanted = case.all(key).first().copied();
                    let wanted = if key == "notices" { Some(wanted.unwrap_or("")) } else { wanted };
                    let found = understood(&scan, key);
                    if wanted.is_some_and(|w| w != found) {
                        wrong.push(format!("{}, {key}: wanted {wanted:?}, got {found:?}", case.name));
                    }
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

fn understood(scan: &Scan, key: &str) -> String {
    match key {
        "columns" => {
            let length = scan.length_label();
            let mut text = format!("{length} [{}]", scan.length_unit.name());
            for column in &scan.energies {
                text.push_str(&format!(", {} [{}]", column.label, column.unit.name()));
            }
            text
        }
        "rows" => scan.bond_lengths.len().to_string(),
        "first" => format!("{} {}", scan.bond_lengths[0], scan.energies[0].values[0].expect("a value")),
        "atoms" => scan.atoms.as_ref().map_or_else(String::new, |[a, b]| format!("{a},{b}")),
        "charge" => scan.charge.map_or_else(String::new, |q| q.to_string()),
        "properties" => scan.properties.iter().map(|p| p.name.as_str()).collect::<Vec<_>>().join(", "),
        "notices" => scan.notices.iter().map(|n| n.code.name()).collect::<Vec<_>>().join(" "),
        other => panic!("unknown mark {other}"),
    }
}

#[test]
fn a_file_of_too_many_rows_is_refused() {
    use parabound::scan::read::LIMIT_ROWS;
    let text = format!("R_A,E_Eh\n{}", "1,2\n".repeat(LIMIT_ROWS + 1));
    let error = read_scan("long.csv", text.as_bytes(), &ReadSettings::default()).expect_err("refused");
    assert!(error.to_string().starts_with(&format!("line {}: more than", LIMIT_ROWS + 2)), "{error}");
}

#[test]
fn a_file_of_too_many_bytes_is_refused() {
    use parabound::scan::read::LIMIT_BYTES;
    let error = read_scan("large.csv", &vec![b'1'; LIMIT_BYTES + 1], &ReadSettings::default());
    assert!(error.expect_err("refused").to_string().starts_with("the file has 67108865 bytes"));
}
