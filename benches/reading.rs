//! Reading a long table against the `csv` package's `deserialize` of the same columns to f64, in one run.

use parabound::scan::read::{ReadSettings, read_scan};
use std::fmt::Write as _;
use std::hint::black_box;
use std::time::Instant;

const ROWS: usize = 100_000;
const RUNS: usize = 15;

fn main() {
    let mut text = String::from("R_angstrom,E_hartree\n");
    for i in 0..ROWS {
        // Invented numbers of the usual length.
        let r = 0.5 + 1e-4 * i as f64;
        let e = -113.2 + 0.4 * (1.0 - (-1.2 * (r - 1.1)).exp()).powi(2);
        let _ = writeln!(text, "{r:.6},{e:.12}");
    }
    let bytes = text.as_bytes();
    let settings = ReadSettings::default();
    let (mut ours, mut theirs) = (Vec::new(), Vec::new());
    // In turn, so that both see the same machine.
    for _ in 0..RUNS {
        let start = Instant::now();
        let scan = read_scan("long.csv", black_box(bytes), &settings).expect("a scan");
        ours.push(start.elapsed().as_secs_f64());
        assert_eq!(scan.bond_lengths.len(), ROWS);
        let start = Instant::now();
        let rows: Vec<(f64, f64)> =
            csv::Reader::from_reader(black_box(bytes)).deserialize().collect::<Result<_, _>>().expect("rows");
        theirs.push(start.elapsed().as_secs_f64());
        assert_eq!(rows.len(), ROWS);
    }
    let least = |v: &[f64]| v.iter().copied().fold(f64::INFINITY, f64::min);
    let (ours, theirs) = (least(&ours), least(&theirs));
    println!("{ROWS} rows: {:.2} ms, csv {:.2} ms, ratio {:.2}", 1e3 * ours, 1e3 * theirs, ours / theirs);
}
