//! What each fit costs: median of many runs, in microseconds. `cargo bench --no-default-features --bench fits`

use parabound::fit::{Family, FitPoint, FitRequest, Variable, Window, fit, morse_for_base};
use parabound::potential::{Potential, Rydberg};
use parabound::units::LengthUnit;
use std::hint::black_box;
use std::time::Instant;

/// Invented: a Rydberg well, so that no family but its own fits exactly.
fn scan(count: u32, from: f64, to: f64) -> Vec<FitPoint> {
    let well = Rydberg { e_min_hartree: -1.17, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.5 };
    (0..count)
        .map(|k| {
            let r_bohr = from + (to - from) * f64::from(k) / f64::from(count - 1);
            FitPoint { r_bohr, energy_hartree: well.energy_hartree(r_bohr), weight: 1.0 }
        })
        .collect()
}

fn median_microseconds(mut work: impl FnMut()) -> f64 {
    let mut times: Vec<f64> = (0..201)
        .map(|_| {
            let start = Instant::now();
            work();
            start.elapsed().as_secs_f64() * 1e6
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times[times.len() / 2]
}

fn main() {
    let points = scan(60, 1.0, 3.0);
    let window = Window { from: 1.0, to: 3.0, unit: LengthUnit::Bohr };
    let base = median_microseconds(|| drop(black_box(morse_for_base(black_box(&points)))));
    println!("morse_for_base, 60 points: {base:.1} us");
    let mut requests: Vec<FitRequest> = Family::ALL.iter().map(|&family| FitRequest::plain(family)).collect();
    requests.extend(
        [Variable::Xi, Variable::Z, Variable::Ogilvie].map(|variable| FitRequest::polynomial(6, variable)),
    );
    for request in requests {
        let time = median_microseconds(|| drop(black_box(fit(black_box(request), &points, window))));
        let variable = request.variable.map_or("", Variable::word);
        let end = fit(request, &points, window)
            .map_or_else(|error| error.to_string(), |fit| format!("{:?}", fit.end));
        println!("{} {variable}, 60 points: {time:.1} us ({end})", request.family.word());
    }
}
