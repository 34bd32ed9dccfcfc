//! Time of the radial solver on Morse functions like H2, HCl, CO and I2 (parameters invented near the molecules).
//!
//! Prints for each: levels, mesh points, evaluations of the potential, median time of a cold solve with B_v, the same
//! with D_v and H_v, and the cost per level in sweeps of the Numerov recurrence over a mesh of equal accuracy.
//!
//! Run: `cargo bench --no-default-features --bench levels`

use parabound::potential::Potential;
use parabound::radial::{RadialRequest, Solution, solve};
use std::hint::black_box;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Instant;

/// A Morse function that counts its evaluations, in its own units (cm⁻¹, Å).
struct Morse {
    depth: f64,
    a: f64,
    r_e: f64,
    evaluations: AtomicUsize,
}

impl Potential for Morse {
    fn derivatives_hartree(&self, r: f64) -> [f64; 5] {
        self.evaluations.fetch_add(1, Ordering::Relaxed);
        let (depth, a) = (self.depth, self.a);
        let y = (-a * (r - self.r_e)).exp();
        [
            depth * (1.0 - y).powi(2),
            2.0 * depth * a * y * (1.0 - y),
            2.0 * depth * a * a * y * (2.0 * y - 1.0),
            2.0 * depth * a.powi(3) * y * (1.0 - 4.0 * y),
            2.0 * depth * a.powi(4) * y * (8.0 * y - 1.0),
        ]
    }
    fn energy_hartree(&self, r: f64) -> f64 {
        self.evaluations.fetch_add(1, Ordering::Relaxed);
        let y = (-self.a * (r - self.r_e)).exp();
        self.depth * (1.0 - y) * (1.0 - y)
    }
    fn range_bohr(&self) -> (f64, f64) {
        (0.0, f64::INFINITY)
    }
    fn limit_hartree(&self) -> f64 {
        self.depth
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e
    }
}

/// Median of `repeat` timings of `work`, in microseconds.
fn median_us(repeat: usize, mut work: impl FnMut()) -> f64 {
    let mut times: Vec<f64> = (0..repeat)
        .map(|_| {
            let start = Instant::now();
            work();
            start.elapsed().as_secs_f64() * 1e6
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times[repeat / 2]
}

/// One outward sweep of Numerov's recurrence at energy `energy`, h²-scaled potential in `f`.
fn numerov_sweep(f: &[f64], energy: f64) -> f64 {
    let (mut last, mut now) = (0.0, 1e-20);
    for &v in f {
        let t = v - energy;
        let next = ((2.0 + 10.0 * t) * now - (1.0 - t) * last) / (1.0 - t);
        (last, now) = (now, next);
    }
    now
}

fn b_v(solution: &Solution) -> f64 {
    solution.states.iter().map(|s| s.wavefunction.expectation(|r| 1.0 / (r * r))).sum()
}

fn main() {
    // Depth in cm⁻¹, a in 1/Å, r_e in Å, ħ²/2μ in cm⁻¹ Å².
    let cases = [
        ("H2-like", 38300.0, 1.94, 0.7414, 33.453_451_623_767_91),
        ("HCl-like", 37240.0, 1.87, 1.2746, 17.208_809_340_295_165),
        ("CO-like", 90540.0, 2.3, 1.13, 2.458_739_103_211_083_8),
        ("I2-like", 12550.0, 1.86, 2.6663, 0.265_674_312_377_073_07),
    ];
    println!("case       levels points evaluations   solve+B/us   +D,H/us  us/level  Numerov sweeps/level");
    for (name, depth, a, r_e, h2_over_2mu) in cases {
        let potential = Morse { depth, a, r_e, evaluations: AtomicUsize::new(0) };
        let request = RadialRequest {
            reduced_mass_me: 0.5 / h2_over_2mu,
            rotation_x: 0.0,
            relative_accuracy: 1e-10,
            highest_v: None,
        };
        let Ok(solution) = solve(&potential, &request) else {
            println!("{name}: no levels");
            continue;
        };
        let evaluations = potential.evaluations.load(Ordering::Relaxed);
        let (levels, points) =
            (solution.states.len(), solution.states.first().map_or(0, |s| s.wavefunction.psi.len()));
        let plain = median_us(201, || {
            if let Ok(solution) = solve(black_box(&potential), &request) {
                black_box(b_v(&solution));
            }
        });
        let bent = median_us(101, || {
            if let Ok(solution) = solve(black_box(&potential), &request) {
                black_box(b_v(&solution));
                black_box(solution.distortion(usize::MAX));
            }
        });
        // Numerov's error in E is about (k h)⁴/240 of the kinetic energy; 1e-10 asks for k h = 0.0125 at the bottom
        // of the well, over the range the solver itself uses.
        let k = (depth / h2_over_2mu).sqrt();
        let length = 0.5 / a + 8.0 / a;
        let steps = (length * k / 0.0125) as usize;
        let f = vec![1e-6; steps];
        let sweep = median_us(101, || {
            black_box(numerov_sweep(black_box(&f), black_box(2e-6)));
        });
        println!(
            "{name:10} {levels:6} {points:6} {evaluations:11} {plain:12.1} {bent:9.1} {:9.2} {:8.2} (of {steps} steps, {sweep:.1} us)",
            plain / levels as f64,
            plain / levels as f64 / sweep,
        );
    }
}
