//! The layout keeps its promises: layers, documents, sample scans.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on should stop with a panic")]

use std::fs;
use std::path::{Path, PathBuf};

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn rust_files(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    let mut entries: Vec<_> =
        fs::read_dir(folder).expect("folder").map(|e| e.expect("entry").path()).collect();
    entries.sort();
    for path in entries {
        if path.is_dir() {
            found.extend(rust_files(&path));
        } else if path.extension().is_some_and(|e| e == "rs") && !path.ends_with("tests.rs") {
            // `tests.rs` beside the code is a test and may use what it needs.
            found.push(path);
        }
    }
    found
}

/// What every area may name.
const COMMON: &[&str] = &["units", "estimate", "notice", "special", "parallel"];
/// The physics and what it reads.
const PHYSICS: &[&str] = &[
    "species",
    "scan",
    "potential",
    "fit",
    "radial",
    "spectroscopy",
    "reach",
    "settings",
    "thermal",
    "density",
];

/// Areas in the order of dependency, each with groups of areas that it may name.
const LAYERS: [(&str, &[&[&str]]); 23] = [
    ("units", &[]),
    ("special", &[]),
    ("parallel", &[]),
    ("estimate", &[&["units"]]),
    ("digits", &[]),
    ("notice", &[&["units"]]),
    ("species", &[&["units", "estimate"]]),
    ("scan", &[COMMON, &["digits", "species"]]),
    ("potential", &[COMMON]),
    ("fit", &[COMMON, &["digits", "potential", "scan"]]),
    ("radial", &[COMMON, &["potential"]]),
    ("spectroscopy", &[COMMON, &["potential", "radial", "settings", "fit"]]),
    ("thermal", &[&["units", "potential", "radial"]]),
    ("reach", &[&["units", "estimate", "potential", "radial", "thermal", "settings"]]),
    ("density", &[&["units", "special", "potential", "radial"]]),
    ("settings", &[COMMON, PHYSICS]),
    ("findings", &[COMMON, PHYSICS]),
    ("verdict", &[COMMON, &["digits", "findings", "radial", "reach"]]),
    ("study", &[COMMON, PHYSICS, &["digits", "findings"]]),
    ("study_file", &[&["settings"]]),
    ("figure", &[COMMON, PHYSICS, &["digits", "findings", "verdict", "study"]]),
    ("export", &[COMMON, PHYSICS, &["digits", "findings", "verdict", "study"]]),
    ("report", &[COMMON, PHYSICS, &["digits", "findings", "verdict", "figure", "export"]]),
];

#[test]
fn every_area_names_only_areas_before_it() {
    let mut wrong = Vec::new();
    for (area, allowed) in LAYERS {
        let file = root().join(format!("src/{area}.rs"));
        let files = if file.exists() { vec![file] } else { rust_files(&root().join("src").join(area)) };
        assert!(!files.is_empty(), "no area {area}");
        for file in files {
            let text = fs::read_to_string(&file).expect("source");
            // Tests beside the code may use what they need.
            let code = text.split("#[cfg(test)]\nmod tests").next().unwrap_or(&text);
            let code: String =
                code.lines().filter(|l| !l.trim_start().starts_with("//")).collect::<Vec<_>>().join("\n");
            for (at, _) in code.match_indices("crate::") {
                let rest = &code[at + 7..];
                let heads: Vec<&str> = match rest.strip_prefix('{') {
                    Some(group) => group.split('}').next().unwrap_or("").split(',').collect(),
                    None => vec![rest],
                };
                for head in heads {
                    let name: String =
                        head.trim().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
                    if name != area
                        && !name.is_empty()
                        && !allowed.iter().any(|group| group.contains(&name.as_str()))
                    {
                        wrong.push(format!("{} names {name}", file.display()));
                    }
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn only_the_window_names_the_gui_packages_and_only_the_doors_open_files() {
    for file in rust_files(&root().join("src")) {
        let name = file.strip_prefix(root()).expect("inside").to_string_lossy().replace('\\', "/");
        let text = fs::read_to_string(&file).expect("source");
        let code = text.split("#[cfg(test)]\nmod tests {").next().unwrap_or(&text);
        if !name.starts_with("src/gui/") {
            for package in [
                "egui::",
                "eframe::",
                "egui_plot::",
                "egui_extras::",
                "egui_winit::",
                "glow::",
                "image::",
                "rfd::",
                "softbuffer::",
                "winit::",
            ] {
                assert!(!code.contains(package), "{name} names {package}");
            }
        }
        let door = ["src/files.rs", "src/headless/", "src/gui/"].iter().any(|d| name.starts_with(d));
        assert!(door || !code.contains("std::fs"), "{name} opens files");
        assert!(
            door || !(code.contains("Instant::now") || code.contains("std::env::var")),
            "{name} reads the clock or the environment"
        );
    }
}

/// Pictures and links of the documents exist.
#[test]
fn the_documents_link_to_what_exists() {
    let mut links = 0;
    for document in ["README.md", "DEVELOPERS.md", "sample-scans/README.md"] {
        let text = fs::read_to_string(root().join(document)).expect(document);
        for rest in text.split("](").skip(1) {
            let target = rest.split(')').next().unwrap_or("");
            if !target.contains("://") && !target.starts_with('#') {
                links += 1;
                assert!(root().join(target).exists(), "{document} links to {target}, which does not exist");
            }
        }
    }
    assert!(links > 0, "the README shows a picture");
}

/// Paths in back quotes in the two documents exist.
#[test]
fn the_documents_name_what_exists() {
    for document in ["README.md", "DEVELOPERS.md", "sample-scans/README.md"] {
        let text = fs::read_to_string(root().join(document)).expect(document);
        for quoted in text.split('`').skip(1).step_by(2) {
            let is_path = ["src/", "tests/", "assets/", "benches/", "sample-scans/", ".ci/"]
                .iter()
                .any(|p| quoted.starts_with(p));
            if is_path && !quoted.contains(['*', ' ', '<']) {
                assert!(root().join(quoted).exists(), "{document} names {quoted}, which does not exist");
            }
        }
    }
}

#[test]
fn every_sample_scan_has_its_origin_listed() {
    let readme = fs::read_to_string(root().join("sample-scans/README.md")).expect("README");
    let mut scans = 0;
    for entry in fs::read_dir(root().join("sample-scans")).expect("folder") {
        let name = entry.expect("entry").file_name().to_string_lossy().into_owned();
        if name != "README.md" {
            scans += 1;
            assert!(readme.contains(&name), "sample-scans/README.md does not tell where {name} comes from");
        }
    }
    assert!(scans >= 5);
}
