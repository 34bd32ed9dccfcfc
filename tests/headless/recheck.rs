//! `parabound recheck`: the same, a changed value, a changed source, another version, files that are none.

use super::{run, scan, study};
use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};

/// Findings of LiH beside a copy of their source, in a folder.
fn prepared(folder: &Path) -> (PathBuf, PathBuf) {
    let (file, source) = (folder.join("f.json"), folder.join("lih_X_A.csv"));
    fs::copy(scan("lih_X_A.csv"), &source).expect("copied");
    let made = study(&[
        source.to_str().expect("UTF-8"),
        "--atoms",
        "7Li,1H",
        "--curve",
        "all",
        "--thermal-rotation",
        "--temperatures",
        "100,298.15",
        "--out",
        file.to_str().expect("UTF-8"),
    ]);
    assert_eq!(made.status.code(), Some(0), "{}", String::from_utf8_lossy(&made.stderr));
    (file, source)
}

fn recheck(file: &Path, more: &[&str]) -> (Option<i32>, String) {
    let mut arguments = vec!["recheck", file.to_str().expect("UTF-8")];
    arguments.extend_from_slice(more);
    let output = run(&arguments);
    let text = [output.stdout, output.stderr].concat();
    (output.status.code(), String::from_utf8_lossy(&text).into_owned())
}

fn changed(file: &Path, change: impl FnOnce(&mut Value)) {
    let mut value: Value = serde_json::from_slice(&fs::read(file).expect("read")).expect("JSON");
    change(&mut value);
    fs::write(file, value.to_string()).expect("written");
}

#[test]
fn the_same_is_the_same_and_differences_are_named() {
    let folder = tempfile::tempdir().expect("a folder");
    let (file, source) = prepared(folder.path());
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(0), "{text}");
    assert_eq!(text.matches("the same").count(), 2, "one line a study: {text}");

    // The last bit of one level.
    changed(&file, |v| {
        let energy = &mut v[0]["levels"][3]["energy"]["value"];
        let old = energy.as_f64().expect("a number");
        *energy = f64::from_bits(old.to_bits() + 1).into();
    });
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(5), "{text}");
    assert!(text.contains("/levels/3/energy/value") && text.contains("1 of"), "{text}");

    // Made by another version: 1e-9 is enough, and it is said.
    changed(&file, |v| {
        for study in v.as_array_mut().expect("studies") {
            study["made_by"]["version"] = "0.0.1".into();
        }
    });
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(0), "{text}");
    assert!(text.contains("version 0.0.1"), "{text}");

    // Made on another kind of machine: the same.
    changed(&file, |v| {
        for study in v.as_array_mut().expect("studies") {
            study["made_by"]["version"] = env!("CARGO_PKG_VERSION").into();
            study["made_by"]["platform"] = "abacus-wood".into();
        }
    });
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(0), "{text}");
    assert!(text.contains("on abacus-wood, compared to 1e-9"), "{text}");

    // One study without its source: the other is compared all the same.
    changed(&file, |v| v[0]["source"]["file_name"] = "gone.csv".into());
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(3), "{text}");
    assert!(text.contains("gone.csv is not beside it") && text.matches("the same").count() == 1, "{text}");
    changed(&file, |v| v[0]["source"]["file_name"] = "lih_X_A.csv".into());

    // A source that has changed: its sum and what follows from it.
    let scan_text = fs::read_to_string(&source).expect("read");
    let moved = folder.path().join("elsewhere.csv");
    fs::write(&moved, format!("{scan_text}\n")).expect("written");
    fs::remove_file(&source).expect("removed");
    let (status, text) = recheck(&file, &[]);
    assert_eq!(status, Some(3), "{text}");
    assert!(text.contains("--source"), "{text}");
    let (status, text) = recheck(&file, &["--source", moved.to_str().expect("UTF-8")]);
    assert_eq!(status, Some(5), "{text}");
    assert!(text.contains("/source/sha256") && !text.contains("/levels"), "{text}");
}

#[test]
fn what_is_no_findings_file_is_refused_with_status_3() {
    let folder = tempfile::tempdir().expect("a folder");
    let write = |name: &str, content: &str| {
        let path = folder.path().join(name);
        fs::write(&path, content).expect("written");
        path
    };
    for (name, content) in [
        ("text.json", "not JSON"),
        ("other.json", "{\"a\": 1}"),
        ("empty.json", "[]"),
        (
            "path.json",
            "{\"format\": \"parabound.findings\", \"format_version\": 1, \"source\": {\"file_name\": \"../x\"}}",
        ),
    ] {
        let (status, text) = recheck(&write(name, content), &[]);
        assert_eq!(status, Some(3), "{name}: {text}");
        assert!(text.contains(name) && !text.contains("panicked"), "{text}");
    }
    assert_eq!(recheck(&folder.path().join("none.json"), &[]).0, Some(3));
    assert_eq!(run(&["recheck"]).status.code(), Some(2));
    assert_eq!(run(&["recheck", "a", "--atoms", "H,H"]).status.code(), Some(2));
}
