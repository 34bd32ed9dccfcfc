//! What 500 fits of a window study cost beside 20 single fits by a peer, in the same run:
//!
//! `PARABOUND_PEER=tests/published/reference/morse_fit.py cargo bench --no-default-features --bench window_study`
//!
//! The peer is a Python script that takes `--seconds SCAN` and prints the seconds of one fit; without one the
//! program's own numbers are printed alone.

use parabound::fit::window_study::{WindowStudyInput, WindowStudySettings, window_study};
use parabound::fit::{FitPoint, FitRequest, Variance};
use parabound::potential::curve::LocalDerivatives;
use parabound::spectroscopy::dunham;
use parabound::units::LengthUnit;
use std::hint::black_box;
use std::process::Command;
use std::time::Instant;

fn points(text: &str) -> (Vec<FitPoint>, Vec<f64>) {
    let rows = text.lines().filter(|line| line.starts_with(|c: char| c.is_ascii_digit()));
    rows.map(|line| {
        let mut numbers = line.split(',').map_while(|word| word.trim().parse::<f64>().ok());
        let (r, energy_hartree) = (numbers.next().unwrap_or(0.0), numbers.next().unwrap_or(0.0));
        let point = FitPoint { r_bohr: LengthUnit::Angstrom.to_bohr(r), energy_hartree, weight: 1.0 };
        (point, r)
    })
    .unzip()
}

fn peer_seconds(scan: &str) -> Option<f64> {
    let script = std::env::var_os("PARABOUND_PEER")?;
    let output = Command::new("python3").arg(script).arg("--seconds").arg(scan).output().ok()?;
    String::from_utf8_lossy(&output.stdout).trim().parse().ok()
}

/// Seconds and number of fits of one study, the median of 15.
fn study(text: &str, r_e_bohr: f64, mass_me: f64, models: Option<&[FitRequest]>) -> (f64, usize) {
    let (points, r_as_read) = points(text);
    let input = WindowStudyInput {
        points: &points,
        r_as_read: &r_as_read,
        unit: LengthUnit::Angstrom,
        r_e_bohr,
        variance: Variance::FromResiduals,
    };
    let constants = |local: &LocalDerivatives| {
        let c = dunham(local, mass_me);
        Some([c.omega_e_per_cm, c.omega_e_x_e_per_cm])
    };
    let mut settings = WindowStudySettings::default();
    if let Some(models) = models {
        settings.models = models.to_vec();
    }
    let mut runs: Vec<(f64, usize)> = (0..15)
        .map(|_| {
            let start = Instant::now();
            let found = window_study(black_box(input), &settings, &constants, &mut |_, _| true);
            (start.elapsed().as_secs_f64(), found.map_or(0, |s| s.fits.len()))
        })
        .collect();
    runs.sort_by(|a, b| a.0.total_cmp(&b.0));
    runs[runs.len() / 2]
}

fn main() {
    let root = concat!(env!("CARGO_MANIFEST_DIR"), "/sample-scans/");
    let scans = [
        ("h2_fci.csv", include_str!("../sample-scans/h2_fci.csv"), 1.402, 918.6),
        ("lih_X_A.csv", include_str!("../sample-scans/lih_X_A.csv"), 3.041, 1_606.0),
    ];
    for (name, text, r_e_bohr, mass_me) in scans {
        for model in WindowStudySettings::default().models {
            let (seconds, fits) = study(text, r_e_bohr, mass_me, Some(&[model]));
            let degree = model.degree.map_or_else(String::new, |d| format!(" {d}"));
            println!(
                "{name}: {}{degree}: {:.1} us a fit ({fits} fits)",
                model.family.word(),
                seconds / fits as f64 * 1e6
            );
        }
        let (seconds, fits) = study(text, r_e_bohr, mass_me, None);
        let of_500 = seconds / fits as f64 * 500.0;
        println!("{name}: {fits} fits in {:.2} ms; 500 in {:.2} ms", seconds * 1e3, of_500 * 1e3);
        if let Some(peer) = peer_seconds(&format!("{root}{name}")) {
            println!(
                "{name}: 20 single fits by the peer {:.2} ms; ratio {:.2}",
                20e3 * peer,
                of_500 / (20.0 * peer)
            );
        }
    }
}
