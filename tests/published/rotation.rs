//! Rotation on the curve of a real scan: band constants by perturbation against levels solved with J directly, and
//! levels that do not depend on the mesh.
//!
//! Source of what must hold: E(v, J) = E(v, 0) + B X − D X² + H X³ − ..., X = J(J + 1), whose coefficients are the
//! derivatives of E by X (J. M. Hutson, J. Phys. B 14, 851 (1981)).

use super::scans::curve;
use parabound::potential::Potential;
use parabound::radial::{BoundState, RadialRequest, solve};
use parabound::units::{to_per_cm, u_to_electron_masses};

fn request(mass_u: f64, j: u32, accuracy: f64) -> RadialRequest {
    let j = f64::from(j);
    RadialRequest {
        reduced_mass_me: u_to_electron_masses(mass_u),
        rotation_x: j * (j + 1.0),
        relative_accuracy: accuracy,
        highest_v: None,
    }
}

fn states(potential: &dyn Potential, request: &RadialRequest) -> Vec<BoundState> {
    solve(potential, request).expect("levels").states
}

/// Reduced masses from the atomic masses of 1H, 7Li, 12C and 16O (AME2020), to the digits that matter here.
const SCANS: [(&str, usize, f64); 3] =
    [("lih_X_A.csv", 1, 0.881_238), ("co_ccsdt_bohr.dat", 1, 6.856_209), ("h2_fci.csv", 1, 0.503_913)];

#[test]
fn band_constants_agree_with_levels_solved_with_rotation() {
    for (file, column, mass) in SCANS {
        let curve = curve(file, column, None);
        let potential = curve.above_minimum();
        let still = solve(&potential, &request(mass, 0, 1e-11)).expect("levels");
        let constants = still.distortion(still.states.len());
        let (mut worst, mut compared) = (0.0_f64, 0);
        for j in [1_u32, 3, 5] {
            let x = f64::from(j * (j + 1));
            let turning = states(&potential, &request(mass, j, 1e-11));
            for v in 0..still.states.len() / 2 {
                let c = constants[v];
                let series = c.b_v_hartree * x - c.d_v_hartree * x * x + c.h_v_hartree * x.powi(3);
                let direct = turning[v].energy_hartree - still.states[v].energy_hartree;
                // The next term is about H²/D X⁴; twice that, and the rounding of the two energies.
                let next = 3.0 * (c.h_v_hartree.powi(2) / c.d_v_hartree).abs() * x.powi(4);
                let allowed = next + still.states[v].error_hartree + turning[v].error_hartree;
                let off = (series - direct).abs();
                assert!(off <= allowed, "{file} v = {v} J = {j}: {off:e} beyond {allowed:e}");
                worst = worst.max(to_per_cm(off));
                compared += 1;
            }
        }
        println!("{file}: {compared} levels, series and direct levels differ by {worst:.1e} cm-1 at most");
    }
}

#[test]
fn levels_with_much_rotation_lie_above_each_other_and_run_out() {
    for (file, column, mass) in SCANS {
        let curve = curve(file, column, None);
        let potential = curve.above_minimum();
        let mut last = states(&potential, &request(mass, 0, 1e-10));
        for j in [20, 60, 100, 160] {
            let next = states(&potential, &request(mass, j, 1e-10));
            assert!(next.len() <= last.len(), "{file} J = {j}");
            assert!(next.iter().zip(&last).all(|(a, b)| a.energy_hartree > b.energy_hartree));
            assert!(next.iter().all(|state| state.nodes == state.v));
            last = next;
        }
    }
}

/// Halving the tolerance moves no level by more than the errors stated.
#[test]
fn levels_of_real_scans_do_not_depend_on_the_mesh() {
    let all = [
        ("h2_fci.csv", 1, 0.503_913),
        ("n2_casscf_nevpt2.tsv", 2, 7.001_537),
        ("lih_X_A.csv", 1, 0.881_238),
        ("lih_X_A.csv", 2, 0.881_238),
        ("co_ccsdt_bohr.dat", 1, 6.856_209),
        ("hf_rhf_mp2_ccsdt.csv", 3, 0.957_055),
    ];
    for (file, column, mass) in all {
        let curve = curve(file, column, None);
        let potential = curve.above_minimum();
        for accuracy in [1e-8, 1e-10] {
            let coarse = states(&potential, &request(mass, 0, accuracy));
            let fine = states(&potential, &request(mass, 0, 0.5 * accuracy));
            assert_eq!(coarse.len(), fine.len(), "{file}");
            for (a, b) in coarse.iter().zip(&fine) {
                let moved = (a.energy_hartree - b.energy_hartree).abs();
                let stated = a.error_hartree + b.error_hartree;
                assert!(moved <= stated, "{file} {accuracy:e} v = {}: {moved:e} beyond {stated:e}", a.v);
            }
        }
    }
}
