//! H2+ from its tabulated Born-Oppenheimer curve alone: 63 points, no analytic form, the limit and the power of the
//! tail as anyone knows them (−½ hartree, charge and induced dipole: n = 4).
//!
//! Sources: `reference/h2plus-curve.csv` (two-centre separation in 28 digits) and `reference/h2plus-levels-some.json`
//! (levels of that curve by sinc collocation in 120 bits, with the long-range series beyond 60 bohr).

use parabound::fit::{FitPoint, curve::build_curve};
use parabound::potential::Potential;
use parabound::potential::curve::CurveSettings;
use parabound::radial::{RadialRequest, solve};
use parabound::units::to_per_cm;
use serde_json::Value;

#[test]
fn levels_of_the_tabulated_curve_are_right_to_a_thousandth_of_a_wavenumber() {
    let points: Vec<FitPoint> = include_str!("reference/h2plus-curve.csv")
        .lines()
        .filter(|line| line.starts_with(|c: char| c.is_ascii_digit()))
        .map(|line| {
            let cells: Vec<f64> = line.split(',').map(|cell| cell.parse().expect("a number")).collect();
            FitPoint { r_bohr: cells[0], energy_hartree: cells[2], weight: 1.0 }
        })
        .collect();
    assert_eq!(points.len(), 63);
    let settings = CurveSettings { tail_power: Some(4), ..CurveSettings::default() };
    let (curve, _) = build_curve(&points, Some(-0.5), &settings).expect("a curve");
    println!("{} in {:?}, base and tail {:?}", curve.kind, curve.variable, curve.outer);
    let file: Value = serde_json::from_str(include_str!("reference/h2plus-levels-some.json")).expect("JSON");
    let limit = curve.above_minimum().limit_hartree();
    let mut worst = 0.0_f64;
    for block in file["blocks"].as_array().expect("a list") {
        let number = |v: &Value| -> f64 { v.as_str().expect("text").parse().expect("a number") };
        let mass = number(&block["reduced_mass_in_electron_masses"]);
        for j in [0_u32, 1] {
            let x = f64::from(j * (j + 1));
            let request = RadialRequest {
                reduced_mass_me: mass,
                rotation_x: x,
                relative_accuracy: 1e-10,
                highest_v: None,
            };
            let states = solve(&curve.above_minimum(), &request).expect("levels").states;
            if let Some(count) = block["n_bound"].get(format!("J={j}")) {
                // Closer to the limit than the tolerance the tail from one point decides, not the table.
                let bound = states.iter().filter(|s| to_per_cm(limit - s.energy_hartree) > 1e-3).count();
                assert_eq!(Some(bound as u64), count.as_u64(), "{} J = {j}", block["molecule"]);
            }
            let of_j = block["levels"].as_array().expect("a list").iter().filter(|l| l["J"] == j);
            for level in of_j {
                let v = level["v"].as_u64().expect("v") as usize;
                let found = to_per_cm(states[v].energy_hartree - limit);
                let off = found - number(&level["E_minus_dissociation_per_cm"]);
                println!("{} v = {v} J = {j}: off by {off:.1e} cm-1", block["molecule"]);
                worst = worst.max(off.abs());
            }
        }
    }
    assert!(worst < 1e-3, "{worst:e}");
}
