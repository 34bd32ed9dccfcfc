//! The built program, run on real scans: exit status, findings against the schema, tables, refusals.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on should stop with a panic")]

mod beyond;
mod figures;
mod findings;
mod fits;
mod options;
mod reading;
mod recheck;

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// A scan of the project, by file name.
fn scan(name: &str) -> PathBuf {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let places = [root.join("sample-scans").join(name), root.join("tests/scans").join(name)];
    places.iter().find(|p| p.exists()).unwrap_or_else(|| panic!("no scan {name}")).clone()
}

/// Runs the program with the arguments given.
fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_parabound")).args(arguments).output().expect("the program starts")
}

/// Runs `parabound study` with the arguments given.
fn study(arguments: &[&str]) -> Output {
    run(&[&["study"], arguments].concat())
}

/// Runs a study of one scan with findings on standard output, and reads them; status 0 is expected.
fn findings(name: &str, options: &[&str]) -> serde_json::Value {
    findings_with_status(name, options, 0)
}

fn findings_with_status(name: &str, options: &[&str], status: i32) -> serde_json::Value {
    let path = scan(name);
    let mut arguments = vec![path.to_str().expect("UTF-8"), "--out", "-"];
    arguments.extend_from_slice(options);
    let output = study(&arguments);
    assert_eq!(output.status.code(), Some(status), "{name}: {}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).expect("JSON on standard output")
}
