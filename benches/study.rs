//! What a whole study costs, stage by stage, how the levels grow, and the same beside a peer script in the same run:
//!
//! `PARABOUND_PEER_STUDY=path/to/script.py cargo bench --no-default-features --bench study`
//!
//! The peer is a Python script that takes `SCAN REDUCED_MASS_U --column N --grid POINTS --repeat K` and prints JSON
//! with `seconds` (medians, with the keys `curve`, `levels`, `total`) and `largest_change_on_finer_grid` in cm-1.
//! Without one the program's own numbers are printed alone. `PARABOUND_BENCH_ONLY=lih` studies the first sample a few
//! times and nothing else, for a count of instructions (see benches/README.md).

use parabound::scan::Scan;
use parabound::scan::read::read_scan;
use parabound::settings::Settings;
use parabound::study::{Mark, Stage, study, study_observed};
use std::collections::BTreeMap;
use std::hint::black_box;
use std::process::Command;
use std::sync::Mutex;
use std::time::Instant;

/// Studies behind each median.
const REPEAT: usize = 101;

/// One scan to be studied.
struct Case {
    name: &'static str,
    text: String,
    mass_u: f64,
    /// Points of the peer's grid, as it has them by default or as many levels need; and a grid that comes nearer to the
    /// exactness of the levels here (1e-10 of the depth), where the first does not.
    peer_grids: &'static [u32],
}

fn cases() -> Vec<Case> {
    let case = |name, text: &str, mass_u, peer_grids| Case { name, text: text.into(), mass_u, peer_grids };
    vec![
        case("lih_X_A.csv", include_str!("../sample-scans/lih_X_A.csv"), 0.881_24, &[400, 1200]),
        case("h2_fci.csv", include_str!("../sample-scans/h2_fci.csv"), 0.503_91, &[400, 1200]),
        case(
            "n2_casscf_nevpt2.tsv",
            include_str!("../sample-scans/n2_casscf_nevpt2.tsv"),
            7.001_54,
            &[400, 1200],
        ),
        case("I2-like Morse function", &morse_scan(12_550.0, 1.86, 2.6663), 63.452_2, &[600]),
    ]
}

/// A scan of a Morse function (invented, near I2): depth in cm⁻¹, a in 1/Å, r_e in Å; 121 points.
fn morse_scan(depth: f64, a: f64, r_e: f64) -> String {
    let mut text = String::from("R_angstrom,E_hartree\n");
    for i in 0..=120 {
        let t = f64::from(i) / 120.0;
        let r = (1e6 * (r_e - 0.4663 + 5.8 * t.powf(1.7))).round() * 1e-6;
        let energy = depth / parabound::units::PER_CM_PER_HARTREE * (1.0 - (-a * (r - r_e)).exp()).powi(2);
        text.push_str(&format!("{r:.6},{energy:.14}\n"));
    }
    text
}

fn settings(mass_u: f64) -> Settings {
    let mut settings = Settings::default();
    settings.masses.reduced_mass_u = Some(mass_u);
    settings
}

fn read(case: &Case) -> Scan {
    match read_scan(case.name, case.text.as_bytes(), &Default::default()) {
        Ok(scan) => scan,
        Err(error) => panic!("{}: {error}", case.name),
    }
}

fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[values.len() / 2]
}

/// Medians of the stages and of the whole, in milliseconds, and the number of levels.
fn stages(scan: &Scan, settings: &Settings) -> (BTreeMap<&'static str, f64>, usize) {
    let mut all: BTreeMap<&'static str, Vec<f64>> = BTreeMap::new();
    let mut levels = 0;
    for _ in 0..REPEAT {
        let marks = Mutex::new(Vec::new());
        let start = Instant::now();
        let findings = study_observed(black_box(scan), settings, &|stage: Stage, mark| {
            if let Ok(mut marks) = marks.lock() {
                marks.push((stage, mark, Instant::now()));
            }
        });
        all.entry("total").or_default().push(start.elapsed().as_secs_f64() * 1e3);
        levels = findings.map_or(0, |f| f.levels.len());
        let marks = marks.into_inner().unwrap_or_default();
        for (stage, _, end) in marks.iter().filter(|m| m.1 == Mark::Ended) {
            let begun = marks.iter().find(|m| m.0 == *stage && m.1 == Mark::Begins);
            let seconds = begun.map_or(0.0, |(_, _, begun)| (*end - *begun).as_secs_f64());
            all.entry(stage.name()).or_default().push(seconds * 1e3);
        }
    }
    (all.into_iter().map(|(stage, values)| (stage, median(values))).collect(), levels)
}

/// The peer's seconds for curve and levels and for everything, in milliseconds, and how far its grid is from a finer
/// one in cm⁻¹.
fn peer(case: &Case, grid: u32) -> Option<[f64; 3]> {
    let script = std::env::var_os("PARABOUND_PEER_STUDY")?;
    let file = std::env::temp_dir().join(format!("parabound-bench-{}.csv", std::process::id()));
    std::fs::write(&file, &case.text).ok()?;
    let mut command = Command::new("python3");
    command.arg(script).arg(&file).arg(case.mass_u.to_string());
    command.args(["--column", "1", "--repeat", "9", "--grid", &grid.to_string()]);
    let output = command.output().ok()?;
    std::fs::remove_file(&file).ok()?;
    let value: serde_json::Value = serde_json::from_slice(&output.stdout).ok()?;
    let ms = |stage: &str| value["seconds"][stage].as_f64().map(|s| s * 1e3);
    let change = value["largest_change_on_finer_grid"].as_f64()?;
    Some([ms("curve")? + ms("levels")?, ms("total")?, change])
}

fn whole_studies() {
    for case in cases() {
        let scan = read(&case);
        let (medians, levels) = stages(&scan, &settings(case.mass_u));
        println!("{}: {levels} levels; medians of {REPEAT} studies in ms:", case.name);
        let list: Vec<String> = medians.iter().map(|(stage, ms)| format!("{stage} {ms:.3}")).collect();
        println!("  {}", list.join(", "));
        println!("  whole study {:.3}", medians["total"]);
        // The peer's curve and levels have the machine to themselves: so do ours, without the fits beside them.
        let (alone, _) = with(&scan, case.mass_u, |settings| settings.fits.requests.clear());
        let own = alone["curve"] + alone["levels"];
        println!("  curve and levels, no fits beside them: {own:.3}");
        for &grid in case.peer_grids {
            if let Some([theirs, total, change]) = peer(&case, grid) {
                println!(
                    "  the peer with a grid of {grid}, off by {change:.1e} cm-1: curve and levels {theirs:.1}, ratio {:.1}; \
                     whole study {total:.1}, ratio {:.1}",
                    theirs / own,
                    total / medians["total"]
                );
            }
        }
    }
}

/// Milliseconds of the stages of levels and of the rest with `change` made to the settings.
fn with(scan: &Scan, mass_u: f64, change: impl Fn(&mut Settings)) -> (BTreeMap<&'static str, f64>, usize) {
    let mut settings = settings(mass_u);
    change(&mut settings);
    stages(scan, &settings)
}

fn growth() {
    println!("Growth with the number of levels (a Morse function, heavier and heavier):");
    let case = Case {
        name: "Morse function",
        text: morse_scan(12_550.0, 1.86, 2.6663),
        mass_u: 1.0,
        peer_grids: &[],
    };
    let scan = read(&case);
    for mass_u in [1.0, 4.0, 16.0, 63.0] {
        let (medians, levels) = with(&scan, mass_u, |_| ());
        let ms = medians["levels"];
        println!("  {levels:4} levels: {ms:.3} ms, {:.1} us a level", 1e3 * ms / levels as f64);
    }
    let cases = cases();
    println!(
        "Growth with J (all levels of J = 1 to N of {}, D_v and quasi-bound levels included):",
        cases[0].name
    );
    let scan = read(&cases[0]);
    for highest in [0_u32, 5, 10, 20] {
        let (medians, _) = with(&scan, cases[0].mass_u, |s| s.levels.rotation = (1..=highest).collect());
        let (ms, each) = (medians["further"], medians["further"] / f64::from(highest.max(1)));
        println!("  N = {highest:2}: {ms:.2} ms, {each:.2} ms a J");
    }
    println!("Growth with the number of curves (the same curve again and again):");
    for curves in [1_usize, 2, 4, 8] {
        let start = Instant::now();
        for _ in 0..curves * 16 {
            black_box(study(&scan, &settings(cases[0].mass_u)).is_ok());
        }
        let ms = start.elapsed().as_secs_f64() * 1e3 / 16.0;
        println!("  {curves}: {ms:.2} ms, {:.2} ms a curve", ms / curves as f64);
    }
}

fn main() {
    if std::env::var_os("PARABOUND_BENCH_ONLY").is_some() {
        let case = &cases()[0];
        let scan = read(case);
        for _ in 0..4 {
            black_box(study(&scan, &settings(case.mass_u)).is_ok());
        }
        return;
    }
    whole_studies();
    growth();
}
