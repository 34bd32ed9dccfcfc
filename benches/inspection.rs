//! The inspection of a scan: short ones, which every study pays for, and long ones, which must stay bounded.

use parabound::scan::inspect::{InspectedPoint, inspect};
use std::hint::black_box;
use std::time::Instant;

/// Invented: a Morse function with or without scatter.
fn scan(points: usize, scatter_hartree: f64) -> Vec<InspectedPoint> {
    let point = |row: usize| {
        let r_bohr = 1.0 + 5.0 * row as f64 / points as f64;
        let noise = (((row * row) as f64 * 0.618_033_988_75).fract() - 0.5) * scatter_hartree;
        let energy_hartree = 0.17 * (1.0 - (-1.03 * (r_bohr - 1.4)).exp()).powi(2) + noise;
        InspectedPoint { row, r_bohr, energy_hartree }
    };
    (0..points).map(point).collect()
}

fn main() {
    for (points, runs) in [(20, 400), (40, 200), (60, 200), (1_000, 10), (100_000, 3)] {
        for scatter in [0.0, 1e-6] {
            let rows = scan(points, scatter);
            let mut least = f64::INFINITY;
            for _ in 0..runs {
                let start = Instant::now();
                black_box(inspect(black_box(&rows), &[]));
                least = least.min(start.elapsed().as_secs_f64());
            }
            println!("{points:6} points, scatter {scatter:.0e} hartree: {:9.3} ms", 1e3 * least);
        }
    }
}
