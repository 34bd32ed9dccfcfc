//! Levels and their observables against independently computed tables.
//!
//! Sources: `reference/lj-levels.json`, `morse-levels.json`, `other-potentials.json`, `harmonic-facts.json`;
//! each file says how it was computed (sinc collocation and quadruple-precision shooting in extended
//! precision; exact formulas) and how far it is to be trusted.
//!
//! The tables are solved in their own units (energy in cm⁻¹ or ε, length in Å or r_m, ħ²/2μ as the file
//! prints it), so that no rounded conversion factor enters the comparison: the equation has no other units.

use parabound::potential::Potential;
use parabound::radial::{BoundState, RadialRequest, bound_states};
use serde_json::Value;

/// A number written as a JSON number or as a decimal string.
fn number(value: &Value) -> f64 {
    value.as_f64().or_else(|| value.as_str()?.parse().ok()).expect("a number")
}

/// Any function of r given with its derivatives, for potentials that need no more.
struct Function<F: Fn(f64) -> [f64; 5] + Sync> {
    derivatives: F,
    range: (f64, f64),
    limit: f64,
    minimum: f64,
}

impl<F: Fn(f64) -> [f64; 5] + Sync> Potential for Function<F> {
    fn derivatives_hartree(&self, r: f64) -> [f64; 5] {
        (self.derivatives)(r)
    }
    fn range_bohr(&self) -> (f64, f64) {
        self.range
    }
    fn limit_hartree(&self) -> f64 {
        self.limit
    }
    fn minimum_bohr(&self) -> f64 {
        self.minimum
    }
}

/// Lennard-Jones 12-6 with ε = r_m = 1 (J. E. Jones, Proc. R. Soc. A 106, 463 (1924)).
fn lennard_jones() -> impl Potential {
    Function {
        derivatives: |r: f64| {
            let six = r.powi(-6);
            let twelve = six * six;
            [
                twelve - 2.0 * six,
                (-12.0 * twelve + 12.0 * six) / r,
                (156.0 * twelve - 84.0 * six) / r.powi(2),
                (-2184.0 * twelve + 672.0 * six) / r.powi(3),
                (32760.0 * twelve - 6048.0 * six) / r.powi(4),
            ]
        },
        range: (0.0, f64::INFINITY),
        limit: 0.0,
        minimum: 1.0,
    }
}

/// Morse function (P. M. Morse, Phys. Rev. 34, 57 (1929)).
fn morse(depth: f64, a: f64, r_e: f64) -> impl Potential {
    Function {
        derivatives: move |r: f64| {
            let y = (-a * (r - r_e)).exp();
            [
                depth * (1.0 - y).powi(2),
                2.0 * depth * a * y * (1.0 - y),
                2.0 * depth * a * a * y * (2.0 * y - 1.0),
                2.0 * depth * a.powi(3) * y * (1.0 - 4.0 * y),
                2.0 * depth * a.powi(4) * y * (8.0 * y - 1.0),
            ]
        },
        range: (0.0, f64::INFINITY),
        limit: depth,
        minimum: r_e,
    }
}

fn request(h2_over_2mu: f64) -> RadialRequest {
    RadialRequest {
        reduced_mass_me: 0.5 / h2_over_2mu,
        rotation_x: 0.0,
        relative_accuracy: 1e-10,
        highest_v: None,
    }
}

fn solve(potential: &dyn Potential, request: &RadialRequest) -> Vec<BoundState> {
    let states = bound_states(potential, request).expect("levels");
    for (v, state) in states.iter().enumerate() {
        assert_eq!((state.v, state.nodes), (v, v));
    }
    states
}

#[test]
fn lennard_jones_levels_agree_to_1e_10_of_the_depth() {
    let file: Value = serde_json::from_str(include_str!("reference/lj-levels.json")).unwrap();
    for case in file["cases"].as_array().unwrap() {
        let strength = number(&case["well_strength"]);
        let states = solve(&lennard_jones(), &request(1.0 / strength));
        assert_eq!(states.len() as u64, case["n_bound"].as_u64().unwrap());
        let mut worst: f64 = 0.0;
        for level in case["levels"].as_array().unwrap() {
            let v = level["v"].as_u64().unwrap() as usize;
            let error = (states[v].energy_hartree - number(&level["E_over_eps"])).abs();
            worst = worst.max(error);
            println!("{v} {error:e} {:e} {:e}", states[v].error_hartree, states[v].energy_hartree);
            assert!(states[v].error_hartree >= error, "stated error of v = {v}");
        }
        println!(
            "Lennard-Jones {strength}: {} levels, {} points, worst {worst:.1e} of the depth",
            states.len(),
            states[0].wavefunction.psi.len()
        );
        assert!(worst < 1e-10);
    }
}

#[test]
fn morse_levels_agree_to_1e_10_of_the_depth() {
    let file: Value = serde_json::from_str(include_str!("reference/morse-levels.json")).unwrap();
    for case in file["cases"].as_array().unwrap() {
        let p = &case["parameters"];
        let depth = number(&p["De_per_cm"]);
        let potential = morse(depth, number(&p["a_per_angstrom"]), number(&p["re_angstrom"]));
        let states = solve(&potential, &request(number(&case["hbar2_over_2mu_per_cm_angstrom2"])));
        assert_eq!(states.len() as u64, case["n_bound_J0"].as_u64().unwrap());
        let mut worst: f64 = 0.0;
        for level in case["levels"].as_array().unwrap() {
            let v = level["v"].as_u64().unwrap() as usize;
            let error = (states[v].energy_hartree - number(&level["E_per_cm_exact_full_line"])).abs();
            worst = worst.max(error / depth);
            println!(
                "{v} {:e} {:e} {:e}",
                error / depth,
                states[v].error_hartree / depth,
                states[v].energy_hartree
            );
            assert!(states[v].error_hartree >= error, "stated error of v = {v}");
        }
        println!(
            "Morse {}: {} levels, {} points, worst {worst:.1e} of the depth",
            case["name"],
            states.len(),
            states[0].wavefunction.psi.len()
        );
        assert!(worst < 1e-10);
    }
}
