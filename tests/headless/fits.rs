//! Choices about fits: weights, resampled errors, the window study, units of parameters.

use super::findings::{assert_valid, schema};
use super::{findings, scan, study};
use serde_json::Value;
use std::fs;

fn morse(value: &Value) -> &Value {
    let fits = value["fits"].as_array().expect("fits");
    fits.iter().find(|f| f["model"] == "morse").expect("a Morse fit")
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("no number: {value}"))
}

#[test]
fn weights_change_the_fits_and_nothing_else() {
    let validator = schema();
    let options = ["--atoms", "H,F", "--window", "0.7,1.6"];
    let plain = findings("hf_rhf_mp2_ccsdt.csv", &options);
    for weights in ["energy=5000", "noise=0.5", "noise"] {
        let value = findings("hf_rhf_mp2_ccsdt.csv", &[&options[..], &["--weights", weights]].concat());
        assert_valid(&validator, &value, weights);
        assert_eq!(value["levels"].as_array().map(Vec::len), plain["levels"].as_array().map(Vec::len));
        assert_eq!(
            value["curve"]["minimum"], plain["curve"]["minimum"],
            "{weights}: the curve has no weights"
        );
        let (ours, equal) = (&morse(&value)["parameters"][2], &morse(&plain)["parameters"][2]);
        match weights {
            "energy=5000" => assert_ne!(ours["value"], equal["value"]),
            // A common weight moves nothing but the error, which then follows σ alone.
            "noise=0.5" => {
                assert!((number(&ours["value"]) / number(&equal["value"]) - 1.0).abs() < 1e-9);
                assert_ne!(ours["std_error"], equal["std_error"]);
                assert_eq!(value["source"]["points"][0]["weight"], 4.0);
            }
            _ => {}
        }
    }
}

/// Invented: the parabola 0.2 x² with alternating errors, a column of weights and one of standard errors in cm-1.
fn weighted_scan(folder: &std::path::Path) -> String {
    let rows: Vec<String> = (0..15)
        .map(|k| {
            let x = -0.21 + 0.03 * f64::from(k);
            let energy = -1.0 + 0.2 * x * x + if k % 2 == 0 { 1e-5 } else { -1e-5 };
            let weight = if k == 3 { 0.0 } else { 1.0 + f64::from(k % 3) };
            format!("{:.3},{energy:.8},{weight},{}", 1.2 + x, 2.0 + f64::from(k % 2))
        })
        .collect();
    let path = folder.join("weighted.csv");
    fs::write(&path, format!("r_angstrom,E_hartree,weight,err_cm-1\n{}\n", rows.join("\n")))
        .expect("written");
    path.to_str().expect("UTF-8").to_owned()
}

#[test]
fn weights_come_from_a_column_or_row_by_row() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = weighted_scan(folder.path());
    let run = |weights: &str| {
        let out = folder.path().join("out.json");
        let arguments = [&path, "--weights", weights, "--out", out.to_str().expect("UTF-8"), "--overwrite"];
        let output = study(&arguments);
        let text = String::from_utf8_lossy(&output.stderr).into_owned();
        let value = fs::read_to_string(&out).ok().and_then(|t| serde_json::from_str::<Value>(&t).ok());
        (output.status.code(), text, value.unwrap_or_default())
    };
    let of = |value: &Value| -> Vec<f64> {
        value["source"]["points"].as_array().expect("points").iter().map(|p| number(&p["weight"])).collect()
    };
    let (_, _, equal) = run("equal");
    let (status, _, column) = run("column=weight");
    assert_eq!(status, Some(0));
    assert_eq!(of(&column)[..5], [1.0, 2.0, 3.0, 0.0, 2.0]);
    // Row 3 lies in the window, and its weight of 0 leaves it out.
    let in_window = |value: &Value| number(&value["fits"][0]["window"]["points"]);
    assert_eq!(in_window(&column), in_window(&equal) - 1.0);
    assert_eq!(column["curve"]["minimum"], equal["curve"]["minimum"], "the curve has no weights");
    assert_valid(&schema(), &column, "column");
    let (_, _, sigma) = run("sigma=err");
    assert_eq!(of(&sigma)[..2], [0.25, 1.0 / 9.0]);
    assert_ne!(
        sigma["fits"][0]["parameters"][2]["std_error"],
        equal["fits"][0]["parameters"][2]["std_error"]
    );
    let (_, _, rows) = run("rows=0:0.5,2:0");
    assert_eq!(of(&rows)[..4], [0.5, 1.0, 0.0, 1.0]);
    let (status, text, _) = run("column=nowhere");
    assert!(status == Some(3) && text.contains("nowhere") && text.contains("weight"), "{status:?} {text}");
}

#[test]
fn resampled_errors_stand_beside_the_others() {
    let options = ["--atoms", "H,Cl", "--bootstrap", "60", "--seed", "5"];
    let value = findings("hcl_clean.csv", &options);
    assert_valid(&schema(), &value, "bootstrap");
    assert_eq!(value, findings("hcl_clean.csv", &options), "the seed makes it repeatable");
    for fit in value["fits"].as_array().expect("fits") {
        let resampled = &fit["bootstrap"];
        assert_eq!(resampled["repeats"], 60);
        let (plain, other) = (&fit["constants"]["omega_e"], &resampled["constants"]["omega_e"]);
        assert_eq!(plain["value"], other["value"]);
        assert_eq!(other["method"], "bootstrap");
        let ratio = number(&other["std_error"]) / number(&plain["std_error"]);
        assert!((0.5..2.0).contains(&ratio), "{}: {ratio}", fit["model"]);
        let (plain, other) = (&fit["levels"][1]["energy"], &resampled["levels"][1]["energy"]);
        let ratio = number(&other["std_error"]) / number(&plain["std_error"]);
        assert!((0.5..2.0).contains(&ratio), "level 1 of {}: {ratio}", fit["model"]);
    }
    assert!(findings("hcl_clean.csv", &["--atoms", "H,Cl"])["fits"][0]["bootstrap"].is_null());
}

/// The plateau's ω_e beside that of the curve through the points: within a thousandth on clean scans.
#[test]
fn the_window_study_proposes_a_window_that_gives_the_curvature() {
    let folder = tempfile::tempdir().expect("a folder");
    let validator = schema();
    for (name, atoms) in [("hcl_clean.csv", "H,Cl"), ("co_ccsdt_bohr.dat", "C,O"), ("lih_X_A.csv", "Li,H")] {
        let table = folder.path().join(name);
        let table_option = format!("window-study={}", table.to_str().expect("UTF-8"));
        let value = findings(name, &["--atoms", atoms, "--table", &table_option]);
        assert_valid(&validator, &value, name);
        let windows = &value["window_study"];
        let fits = windows["fits"].as_array().expect("fits");
        let proposed = windows["proposed_plateau"].as_u64().expect("a plateau") as usize;
        let middle = windows["plateaus"][proposed]["middle"].as_u64().expect("a window") as usize;
        let ours = number(&fits[middle]["omega_e"]["value"]);
        let curve = number(&value["constants"]["from_derivatives"]["omega_e"]["value"]);
        assert!((ours / curve - 1.0).abs() < 1e-3, "{name}: {ours} {curve}");
        assert!(fits.iter().any(|f| f["symmetric"] == false) && fits.len() <= 2_000);
        let rows = fs::read_to_string(&table).expect("table");
        assert_eq!(rows.lines().count(), fits.len() + 1);
        assert_eq!(rows.lines().filter(|l| l.ends_with(",true")).count(), 1, "one proposal");
        // The proposed window as the fit window gives the same numbers.
        let edge = |side: &str| number(&fits[middle]["window"][side]["value"]).to_string();
        let model = &windows["models"][fits[middle]["model"].as_u64().expect("index") as usize];
        println!(
            "{name}: {} {} {} to {}, omega_e {ours}, curve {curve}",
            model["model"],
            model["degree"],
            edge("from"),
            edge("to")
        );
    }
    assert!(findings("hcl_clean.csv", &["--atoms", "H,Cl"])["window_study"].is_null());
}

#[test]
fn the_fits_are_compared_in_words_and_numbers() {
    let value = findings("h2_fci.csv", &["--atoms", "H,H"]);
    let comparison = &value["comparison"];
    let fits = comparison["fits"].as_array().expect("fits");
    assert_eq!(fits.len(), 3);
    assert!(fits.iter().any(|f| f["aicc_difference"] == 0.0));
    assert!(fits.iter().all(|f| number(&f["outside_points"]) > 10.0));
    let sentence = comparison["sentence"].as_str().expect("a sentence");
    assert!(sentence.contains("support the polynomial of degree 6"), "{sentence}");
    for fit in value["fits"].as_array().expect("fits") {
        let correlations = fit["correlations"].as_array().expect("a matrix");
        assert_eq!(correlations.len(), fit["parameters"].as_array().map_or(0, Vec::len));
        assert!(correlations.iter().enumerate().all(|(i, row)| row[i] == 1.0));
    }
    assert!(morse(&value)["constants"]["d_e"]["std_error"].as_f64().is_some_and(|e| e > 0.0));
    assert!(morse(&value)["levels"][3]["energy"]["std_error"].as_f64().is_some_and(|e| e > 0.0));
}

#[test]
fn parameters_in_the_unit_and_convention_of_a_force_field() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = scan("hcl_clean.csv");
    let at = |name: &str| folder.path().join(name).to_str().expect("UTF-8").to_owned();
    let run = |file: &str, convention: &str| {
        let output = study(&[
            path.to_str().expect("UTF-8"),
            "--atoms",
            "H,Cl",
            "--force-constant-unit",
            "kcal/(mol angstrom^2)",
            "--convention",
            convention,
            "--parameter-energy-unit",
            "kcal/mol",
            "--parameters",
            &at(file),
        ]);
        assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
        let summary = String::from_utf8_lossy(&output.stdout).into_owned();
        let line = summary.lines().find(|l| l.trim_start().starts_with("k (V")).expect("k").to_owned();
        (line, fs::read_to_string(at(file)).expect("parameters"))
    };
    let (half, text) = run("p.txt", "half");
    let (full, latex) = run("p.tex", "full");
    let k = |line: &str| -> f64 {
        let number = line.split(')').nth(1).expect("a value").trim();
        number.split('(').next().and_then(|n| n.trim().parse().ok()).expect("a number")
    };
    assert!((k(&half) / k(&full) - 2.0).abs() < 1e-4, "{half} {full}");
    assert!(
        half.contains("V = 1/2 k x^2")
            && full.contains("V = k x^2")
            && full.contains("kcal/(mol angstrom^2)")
    );
    assert!(text.contains("Morse fit") && text.contains("kcal/mol"), "{text}");
    assert!(latex.contains("\\begin{tabular}") && latex.contains("D_\\mathrm{e}"), "{latex}");
}
