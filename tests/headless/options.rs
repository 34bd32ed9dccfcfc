//! Options, files written and not written, exit statuses.

use super::{findings, scan, study};
use std::fs;

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

#[test]
fn the_summary_is_readable_and_carries_units() {
    let path = scan("lih_X_A.csv");
    let output = study(&[path.to_str().expect("UTF-8"), "--atoms", "7Li,1H"]);
    assert_eq!(output.status.code(), Some(0));
    let summary = text(&output.stdout);
    for needle in ["Within 5 %", "omega_e", "cm-1", "angstrom", "N/m", "zero-point energy", "70 of 70 points"]
    {
        assert!(summary.contains(needle), "no {needle:?} in\n{summary}");
    }
}

#[test]
fn files_are_replaced_only_when_they_are_findings_or_when_asked() {
    let folder = tempfile::tempdir().expect("a folder");
    let out = folder.path().join("f.json");
    let path = scan("hcl_clean.csv");
    let arguments = |more: &[&'static str]| {
        let mut list = vec![path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--out"];
        let out = out.to_str().expect("UTF-8").to_owned();
        let mut list: Vec<String> = list.drain(..).map(str::to_owned).collect();
        list.push(out);
        list.extend(more.iter().map(|s| (*s).to_owned()));
        list
    };
    let run = |more: &[&'static str]| {
        let list = arguments(more);
        study(&list.iter().map(String::as_str).collect::<Vec<_>>()).status.code()
    };
    assert_eq!(run(&[]), Some(0));
    assert_eq!(run(&[]), Some(0), "a findings file is replaced");
    fs::write(&out, "precious").expect("written");
    assert_eq!(run(&[]), Some(3));
    assert_eq!(fs::read_to_string(&out).expect("read"), "precious");
    assert_eq!(run(&["--overwrite"]), Some(0));
    assert!(fs::read_to_string(&out).expect("read").contains("parabound.findings"));
}

#[test]
fn tables_and_a_folder_of_findings() {
    let folder = tempfile::tempdir().expect("a folder");
    let at = |name: &str| folder.path().join(name).to_str().expect("UTF-8").to_owned();
    let path = scan("lih_X_A.csv");
    let output = study(&[
        path.to_str().expect("UTF-8"),
        "--atoms",
        "Li,H",
        "--curve",
        "all",
        "--out-dir",
        &at("out"),
        "--table",
        &format!("levels={}", at("levels.csv")),
        "--table",
        &format!("constants={}", at("constants.csv")),
        "--timings",
        "--repeat",
        "2",
    ]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let names: Vec<String> = fs::read_dir(at("out"))
        .expect("folder")
        .map(|e| e.expect("entry").file_name().to_string_lossy().into_owned())
        .collect();
    assert_eq!(names.len(), 2, "{names:?}");
    let constants = fs::read_to_string(at("constants.csv")).expect("table");
    assert_eq!(constants.lines().count(), 3, "{constants}");
    assert!(constants.lines().next().is_some_and(|h| h.contains("omega_e_cm-1,omega_e_cm-1_std_error")));
    let levels = fs::read_to_string(at("levels.csv")).expect("table");
    assert!(levels.lines().count() > 20, "{levels}");
    let timings: serde_json::Value =
        serde_json::from_str(text(&output.stderr).trim()).expect("one JSON line on standard error");
    // Medians of two passes are means, so that the stages of one thread add up to less than the total, and to most
    // of it. The fits run beside them; three fits with levels take more than 20 microseconds on any machine.
    let seconds = |stage: &str| timings["seconds"][stage].as_f64().unwrap_or(f64::NAN);
    let one_after_another = [
        "points",
        "curve",
        "levels",
        "level_errors",
        "distortion",
        "constants",
        "reach",
        "densities",
        "thermal",
        "further",
    ];
    let sum: f64 = one_after_another.map(seconds).iter().sum();
    let total = seconds("total");
    assert!(one_after_another.iter().all(|stage| seconds(stage) > 0.0), "{timings}");
    assert!(seconds("read") > 0.0 && sum <= total && sum > 0.3 * total, "{timings}");
    assert!(seconds("fits") > 2e-5 && seconds("fits") < total, "{timings}");
}

#[test]
fn wrong_usage_wrong_files_and_impossible_curves_have_their_statuses() {
    let folder = tempfile::tempdir().expect("a folder");
    let write = |name: &str, content: &str| {
        let path = folder.path().join(name);
        fs::write(&path, content).expect("written");
        path.to_str().expect("UTF-8").to_owned()
    };
    assert_eq!(study(&["--wibble"]).status.code(), Some(2));
    assert_eq!(study(&[]).status.code(), Some(2));
    assert_eq!(study(&["no-such-file.csv"]).status.code(), Some(3));

    // A unit that is not stated is never guessed; the message names the option that settles it.
    let bare = write("bare.csv", "1.0,2.0\n1.1,1.0\n1.2,0.5\n1.3,0.4\n1.4,0.6\n1.5,1.0\n1.6,1.6\n");
    let output = study(&[&bare]);
    assert_eq!(output.status.code(), Some(3), "{}", text(&output.stdout));
    assert!(text(&output.stderr).contains("--length-unit"), "{}", text(&output.stderr));
    let settled = study(&[&bare, "--length-unit", "angstrom", "--energy-unit", "eV", "--atoms", "H,F"]);
    assert_eq!(settled.status.code(), Some(0), "{}", text(&settled.stderr));

    // A curve without a minimum (invented numbers): explained, status 4, findings written all the same.
    let falling = write(
        "falling.csv",
        "R_angstrom,E_eV\n1.0,5.0\n1.1,4.0\n1.2,3.2\n1.3,2.6\n1.4,2.2\n1.5,1.9\n1.6,1.7\n1.7,1.6\n",
    );
    let output = study(&[&falling, "--atoms", "H,F", "--out", "-"]);
    assert_eq!(output.status.code(), Some(4), "{}", text(&output.stderr));
    let value: serde_json::Value = serde_json::from_slice(&output.stdout).expect("findings");
    assert_eq!(value["notices"][0]["severity"], "stop");
    assert!(value["curve"].is_null());

    // Of several files each is done; the status is the highest.
    let good = scan("hcl_clean.csv");
    let output = study(&["no-such-file.csv", good.to_str().expect("UTF-8"), "--atoms", "H,Cl"]);
    assert_eq!(output.status.code(), Some(3));
    assert!(text(&output.stdout).contains("omega_e"));
    let few = write("few.csv", "R_angstrom,E_eV\n1.0,5.0\n1.1,4.0\n1.2,5.2\n");
    assert_eq!(study(&[&few, good.to_str().expect("UTF-8"), "--atoms", "H,Cl"]).status.code(), Some(4));
}

#[test]
fn isotopes_charge_and_reduced_mass_change_the_levels_as_they_must() {
    let first = |options: &[&str]| {
        let value = findings("hcl_clean.csv", options);
        value["levels"][0]["energy"]["value"].as_f64().expect("a level")
    };
    let hcl = first(&["--atoms", "H,Cl"]);
    let dcl = first(&["--atoms", "2H,35Cl"]);
    assert!((hcl / dcl - 1.39).abs() < 0.02, "isotope ratio {}", hcl / dcl);
    let mass = findings("hcl_clean.csv", &["--atoms", "H,Cl"])["masses"]["reduced_mass"]["value"].to_string();
    assert_eq!(hcl.to_bits(), first(&["--reduced-mass", &mass]).to_bits());
    let ion = first(&["--atoms", "H,Cl", "--charge", "1"]);
    assert!(ion < hcl && hcl - ion < 0.1, "an electron less is a heavier reduced mass by m_e only");
}

/// Found by a first user: a lost write reported success, and repeated headers lost every curve.
#[cfg(target_os = "linux")]
#[test]
fn a_lost_write_is_no_success() {
    let path = scan("hcl_clean.csv");
    let full = std::fs::OpenOptions::new().write(true).open("/dev/full").expect("there is one");
    let status = std::process::Command::new(env!("CARGO_BIN_EXE_parabound"))
        .args(["study", path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--out", "-"])
        .stdout(full)
        .stderr(std::process::Stdio::null())
        .status()
        .expect("the program starts");
    assert_eq!(status.code(), Some(3));
    let out = study(&[path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--out", "/dev/null"]);
    assert_eq!(out.status.code(), Some(0), "a device is written to: {}", text(&out.stderr));
}

#[test]
fn the_summary_is_ascii_and_gives_the_constants_of_each_fit() {
    let path = scan("hcl_messy.txt");
    let output = study(&[path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--set-aside", "1.44"]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let summary = text(&output.stdout);
    assert!(summary.is_ascii(), "{summary}");
    assert!(summary.matches("omega_e ").count() >= 4, "curve and three fits\n{summary}");
    assert!(!summary.contains("off the curve"), "the loose point is set aside\n{summary}");
    let nowhere = study(&[path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--set-aside", "9.9"]);
    assert_eq!(nowhere.status.code(), Some(3));
}

#[test]
fn two_masses_and_settings_without_sense_are_refused() {
    let path = scan("hcl_clean.csv");
    let path = path.to_str().expect("UTF-8");
    let both = study(&[path, "--atoms", "H,Cl", "--reduced-mass", "1"]);
    assert_eq!(both.status.code(), Some(2));
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("s.json");
    fs::write(&file, r#"{"reach": {"tolerance": -1}}"#).expect("written");
    let refused = study(&[path, "--settings", file.to_str().expect("UTF-8")]);
    assert_eq!(refused.status.code(), Some(3));
    assert!(text(&refused.stderr).contains("reach.tolerance"), "{}", text(&refused.stderr));
}

#[test]
fn what_would_have_no_effect_is_said() {
    let path = scan("lih_X_A.csv");
    let path = path.to_str().expect("UTF-8");
    let refused = |more: &[&str], status: i32, needle: &str| {
        let output = study(&[&[path, "--atoms", "7Li,1H"], more].concat());
        assert_eq!(output.status.code(), Some(status), "{more:?}");
        assert!(text(&output.stderr).contains(needle), "{more:?}: {}", text(&output.stderr));
    };
    refused(&["--seed", "3"], 2, "--seed does nothing without --bootstrap");
    refused(&["--tail-points", "5"], 2, "--tail-points does nothing without --tail-power");
    refused(&["--weights", "rows=999:0.5"], 3, "row 999 is given a weight, but the scan has 70 rows");
}

#[test]
fn thermal_averages_by_option_and_as_a_table() {
    let folder = tempfile::tempdir().expect("a folder");
    let table = folder.path().join("t.csv");
    let path = scan("hcl_clean.csv");
    let output = study(&[
        path.to_str().expect("UTF-8"),
        "--atoms",
        "H,Cl",
        "--temperatures",
        "150,298.15",
        "--thermal-rotation",
        "--table",
        &format!("thermal={}", table.to_str().expect("UTF-8")),
    ]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let table = fs::read_to_string(table).expect("table");
    assert_eq!(table.lines().count(), 3, "{table}");
    let header: Vec<&str> = table.lines().next().expect("a header").split(',').collect();
    let row: Vec<&str> = table.lines().nth(2).expect("a row").split(',').collect();
    let cell =
        |name: &str| row[header.iter().position(|h| *h == name).expect(name)].parse::<f64>().expect(name);
    assert_eq!(cell("temperature_K"), 298.15);
    // A diatomic gas at room temperature: C_p close to 7R/2.
    assert!((cell("gas_heat_capacity_J/(mol_K)") - 29.1).abs() < 0.1);
    assert!(text(&output.stdout).contains("Thermal averages"), "{}", text(&output.stdout));
    for wrong in ["--temperatures 0", "--temperatures 1,x", "--temperatures 1e9"] {
        let mut arguments = vec![path.to_str().expect("UTF-8")];
        arguments.extend(wrong.split(' '));
        assert_eq!(study(&arguments).status.code(), Some(2), "{wrong}");
    }
}

#[test]
fn settings_come_out_of_a_study_file_too() {
    use parabound::settings::Settings;
    use parabound::study_file::{FORMAT, Focus, StudyCurve, StudyFile, StudyScan, VERSION};
    let mut settings = Settings { curve: Some("E_A".into()), ..Settings::default() };
    settings.reach.tolerance = 0.03;
    let curve =
        |name: &str, settings: &Settings| StudyCurve { name: name.into(), settings: settings.clone() };
    let file = StudyFile {
        format: FORMAT.into(),
        version: VERSION,
        scans: vec![StudyScan {
            file_name: "lih_X_A.csv".into(),
            curves: vec![curve("E_X", &Settings::default()), curve("E_A", &settings)],
            ..StudyScan::default()
        }],
        focus: Some(Focus { scan: 0, curve: "E_A".into() }),
        ..StudyFile::default()
    };
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("lih.parabound");
    let path_text = path.to_str().expect("UTF-8").to_owned();
    fs::write(&path, file.to_text()).expect("written");
    let through = findings("lih_X_A.csv", &["--settings", &path_text]);
    let direct = serde_json::to_value(&settings).expect("JSON");
    assert_eq!(through["settings"]["reach"], direct["reach"]);
    let curve = through["source"]["curve"].as_str().expect("a name");
    assert!(curve.starts_with("E_A"), "{curve}");
    // Which curve is meant has to be said where none is in focus.
    fs::write(&path, StudyFile { focus: None, ..file }.to_text()).expect("written");
    let scan = scan("lih_X_A.csv");
    let output = study(&[scan.to_str().expect("UTF-8"), "--settings", &path_text]);
    assert_eq!(output.status.code(), Some(3));
    assert!(text(&output.stderr).contains("in focus"), "{}", text(&output.stderr));
}

#[test]
fn rotation_of_open_shells_is_not_summed_in_silence() {
    let path = scan("hcl_clean.csv");
    let list = [path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--lambda", "1", "--thermal-rotation"];
    let output = study(&list);
    assert_eq!(output.status.code(), Some(0));
    let summary = text(&output.stdout);
    assert!(summary.contains("made for closed-shell states"), "{summary}");
}

#[test]
fn a_limit_from_the_outer_points_has_no_error_of_its_own() {
    let path = scan("hcl_clean.csv");
    let with = |more: &[&str]| {
        let mut list = vec![path.to_str().expect("UTF-8"), "--atoms", "H,Cl", "--out", "-"];
        list.extend_from_slice(more);
        let output = study(&list);
        assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
        let value: serde_json::Value = serde_json::from_slice(&output.stdout).expect("JSON");
        value["constants"]["d_e"].clone()
    };
    let followed = with(&["--tail-power", "6"]);
    assert!(followed["value"].is_number() && followed["std_error"].is_null(), "{followed}");
    let given = with(&["--asymptote", "0.0"]);
    assert!(given.is_null() || given["std_error"].is_number(), "{given}");
}

#[test]
fn constants_that_a_degree_cannot_know_are_null() {
    let folder = tempfile::tempdir().expect("a folder");
    let settings = folder.path().join("s.json");
    let requests: Vec<serde_json::Value> =
        [2, 3, 4].map(|degree| serde_json::json!({"family": "polynomial", "degree": degree})).to_vec();
    fs::write(&settings, serde_json::json!({"fits": {"requests": requests}}).to_string()).expect("written");
    let path = scan("hcl_clean.csv");
    let list = [
        path.to_str().expect("UTF-8"),
        "--atoms",
        "H,Cl",
        "--settings",
        settings.to_str().expect("UTF-8"),
        "--out",
        "-",
    ];
    let output = study(&list);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let value: serde_json::Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let known = |fit: usize, name: &str| !value["fits"][fit]["constants"][name].is_null();
    for (fit, expected) in [(0, [false, false]), (1, [false, true]), (2, [true, true])] {
        assert_eq!([known(fit, "omega_e_x_e"), known(fit, "alpha_e")], expected, "fit {fit}");
    }
}

#[test]
fn atoms_that_were_chosen_come_from_no_comment() {
    let path = scan("hcl_messy.txt");
    let of = |more: &[&str]| {
        let mut list = vec![path.to_str().expect("UTF-8")];
        list.extend_from_slice(more);
        text(&study(&list).stdout)
    };
    assert!(of(&[]).contains("are taken from the words"));
    assert!(!of(&["--atoms", "2H,35Cl"]).contains("are taken from the words"));
    // Words that go on in the next line of the source have one blank between them.
    assert!(!of(&[]).lines().any(|l| l.starts_with("caution") && l.contains("  ")), "{}", of(&[]));
}
