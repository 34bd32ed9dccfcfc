//! Levels and their observables against independently computed tables.
//!
//! Sources: `reference/lj-levels.json`, `morse-levels.json`, `other-potentials.json`, `harmonic-facts.json`;
//! each file says how it was computed (sinc collocation and quadruple-precision shooting in extended
//! precision; exact formulas) and how far it is to be trusted.
//!
//! The tables are solved in their own units (energy in cm⁻¹ or ε, length in Å or r_m, ħ²/2μ as the file
//! prints it), so that no rounded conversion factor enters the comparison: the equation has no other units.

use parabound::potential::Potential;
use parabound::radial::{BoundState, QuasiBound, RadialRequest, bound_states, quasi_bound};
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
    let file: Value = serde_json::from_str(include_str!("reference/lj-levels.json")).expect("JSON");
    for case in file["cases"].as_array().expect("a list") {
        let strength = number(&case["well_strength"]);
        let states = solve(&lennard_jones(), &request(1.0 / strength));
        assert_eq!(states.len() as u64, case["n_bound"].as_u64().expect("a count"));
        let mut worst: f64 = 0.0;
        for level in case["levels"].as_array().expect("a list") {
            let v = level["v"].as_u64().expect("a count") as usize;
            let error = (states[v].energy_hartree - number(&level["E_over_eps"])).abs();
            worst = worst.max(error);
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

/// Worst deviations of one table, printed at its end.
#[derive(Default)]
struct Worst(Vec<(&'static str, f64)>);

impl Worst {
    fn note(&mut self, name: &'static str, error: f64) {
        match self.0.iter_mut().find(|entry| entry.0 == name) {
            Some(entry) => entry.1 = entry.1.max(error),
            None => self.0.push((name, error)),
        }
    }

    /// Fails where a quantity is off by more than its tolerance; every quantity needs one.
    fn within(&self, what: &str, tolerances: &[(&str, f64)]) {
        println!(
            "{what}: {}",
            self.0.iter().map(|(n, e)| format!("{n} {e:.1e}")).collect::<Vec<_>>().join(", ")
        );
        for (name, error) in &self.0 {
            let tolerance = tolerances.iter().find(|entry| entry.0 == *name).expect("a tolerance").1;
            assert!(*error <= tolerance, "{what}: {name} off by {error:e}");
        }
    }
}

fn relative(value: f64, reference: f64) -> f64 {
    ((value - reference) / reference).abs()
}

/// Everything a case of `morse-levels.json` or `other-potentials.json` prints, against the solver.
fn compare(case: &Value, potential: &dyn Potential, depth: f64, energy_key: &str) {
    let request = request(number(&case["hbar2_over_2mu_per_cm_angstrom2"]));
    let solution = parabound::radial::solve(potential, &request).expect("levels");
    let states = &solution.states;
    assert_eq!(states.len() as u64, case["n_bound_J0"].as_u64().expect("a count"), "number of levels");
    assert!(states.iter().enumerate().all(|(v, s)| (s.v, s.nodes) == (v, v)));
    let observables = solution.observables(potential, potential.minimum_bohr(), 0.0);
    let distortion = solution.distortion(usize::MAX);
    let mut worst = Worst::default();
    let per_cm = parabound::units::to_per_cm(1.0);
    for level in case["levels"].as_array().expect("a list") {
        let v = level["v"].as_u64().expect("a count") as usize;
        let (state, of, bent) = (&states[v], &observables[v], &distortion[v]);
        let error = (state.energy_hartree - number(&level[energy_key])).abs();
        // The table's own float64 column is good to 7e-10 cm-1 (its ABOUT: 6.4e-10 at worst).
        assert!(state.error_hartree + 7e-10 >= error, "stated error of v = {v}: {error:e}");
        worst.note("E/depth", error / depth);
        worst.note("B", relative(of.b_v_per_cm / per_cm, number(&level["B_v_per_cm"])));
        worst.note("B (perturbation)", relative(bent.b_v_hartree, number(&level["B_v_per_cm"])));
        worst.note("D", relative(bent.d_v_hartree, number(&level["D_v_per_cm"])));
        worst.note("H", relative(bent.h_v_hartree, number(&level["H_v_per_cm"])));
        worst.note("<r>", relative(of.mean_r_bohr, number(&level["r_mean_angstrom"])));
        worst.note("<r2>", relative(of.mean_square_r_bohr2, number(&level["r2_mean_angstrom2"])));
        worst.note("P inner", (of.forbidden_inner - number(&level["P_forbidden_inner"])).abs());
        worst.note("P outer", (of.forbidden_outer - number(&level["P_forbidden_outer"])).abs());
        worst.note("P", (of.forbidden_probability - number(&level["P_forbidden"])).abs());
        for (value, key) in [
            (of.inner_turning_point_bohr, "r_turn_inner_angstrom"),
            (of.outer_turning_point_bohr, "r_turn_outer_angstrom"),
        ] {
            worst.note("turning points", relative(value, number(&level[key])));
        }
    }
    for level in case["rotational_levels"].as_array().expect("a list") {
        let (v, j) = (level["v"].as_u64().expect("a count") as usize, number(&level["J"]));
        let request = RadialRequest { rotation_x: j * (j + 1.0), highest_v: Some(v), ..request };
        let states = bound_states(potential, &request).expect("levels");
        worst.note("E(v, J)/depth", (states[v].energy_hartree - number(&level["E_per_cm"])).abs() / depth);
    }
    let what =
        format!("{}, {} levels, {} points", case["name"], states.len(), states[0].wavefunction.psi.len());
    worst.within(
        &what,
        &[
            ("E/depth", 1e-10),
            ("E(v, J)/depth", 1e-10),
            ("B", 1e-10),
            ("B (perturbation)", 1e-10),
            ("D", 1e-8),
            // Printed with seven digits, computed with eight or fewer.
            ("H", 1e-5),
            ("<r>", 1e-10),
            ("<r2>", 1e-10),
            ("P inner", 1e-9),
            ("P outer", 1e-9),
            ("P", 1e-9),
            ("turning points", 1e-11),
        ],
    );
}

#[test]
fn morse_levels_and_observables() {
    let file: Value = serde_json::from_str(include_str!("reference/morse-levels.json")).expect("JSON");
    for case in file["cases"].as_array().expect("a list") {
        let p = &case["parameters"];
        let depth = number(&p["De_per_cm"]);
        let potential = morse(depth, number(&p["a_per_angstrom"]), number(&p["re_angstrom"]));
        compare(case, &potential, depth, "E_per_cm_exact_full_line");
    }
}

/// A closed form given by its value alone; the slope, which only lays the mesh, by a central difference.
fn from_value(
    value: impl Fn(f64) -> f64 + Sync,
    range: (f64, f64),
    limit: f64,
    minimum: f64,
) -> impl Potential {
    let derivatives = move |r: f64| {
        let step = 1e-4 * r;
        let slope = (value(r + step) - value(r - step)) / (2.0 * step);
        [value(r), slope, f64::NAN, f64::NAN, f64::NAN]
    };
    Function { derivatives, range, limit, minimum }
}

#[test]
fn other_potentials_levels_and_observables() {
    let file: Value = serde_json::from_str(include_str!("reference/other-potentials.json")).expect("JSON");
    for case in file["cases"].as_array().expect("a list") {
        let p = &case["parameters"];
        let of = |key: &str| number(&p[key]);
        let (depth, r_e) = (of("De"), of("re"));
        let range = (0.0, f64::INFINITY);
        match case["name"].as_str().expect("a name") {
            "rydberg" => {
                let a = of("a");
                let v = move |r: f64| {
                    let x = a * (r - r_e);
                    depth - depth * (1.0 + x) * (-x).exp()
                };
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            "varshni" => {
                let b = of("b");
                let v = move |r: f64| depth * (1.0 - r_e / r * (-b * (r * r - r_e * r_e)).exp()).powi(2);
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            "double_exp" => {
                let (al, be) = (of("al"), of("be"));
                let v = move |r: f64| {
                    let x = r - r_e;
                    depth + depth * (be * (-al * x).exp() - al * (-be * x).exp()) / (al - be)
                };
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            "emo" => {
                let q = of("q") as i32;
                let betas: Vec<f64> = p["betas"].as_array().expect("a list").iter().map(number).collect();
                let v = move |r: f64| {
                    let y = (r.powi(q) - r_e.powi(q)) / (r.powi(q) + r_e.powi(q));
                    let beta = betas.iter().rev().fold(0.0, |sum, b| sum * y + b);
                    depth * (1.0 - (-beta * (r - r_e)).exp()).powi(2)
                };
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            "hulburt" => {
                let (a, b, c) = (of("a"), of("b"), of("c"));
                let v = move |r: f64| {
                    let x = a * (r - r_e);
                    let e = (-x).exp();
                    depth * ((1.0 - e).powi(2) + c * x.powi(3) * e * e * (1.0 + b * x))
                };
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            "murrell_sorbie" => {
                let (a1, a2, a3) = (of("a1"), of("a2"), of("a3"));
                let v = move |r: f64| {
                    let x = r - r_e;
                    depth - depth * (1.0 + x * (a1 + x * (a2 + x * a3))) * (-a1 * x).exp()
                };
                compare(case, &from_value(v, range, depth, r_e), depth, "E_per_cm");
            }
            other => panic!("no such form here: {other}"),
        }
    }
}

#[test]
fn harmonic_levels_are_evenly_spaced_and_stray_as_known() {
    let file: Value = serde_json::from_str(include_str!("reference/harmonic-facts.json")).expect("JSON");
    // ω = μ = 1, far from r = 0: the file's own reduced units.
    let r_e = 20.0;
    let potential = Function {
        derivatives: move |r: f64| [0.5 * (r - r_e).powi(2), r - r_e, 1.0, 0.0, 0.0],
        range: (0.0, f64::INFINITY),
        limit: f64::INFINITY,
        minimum: r_e,
    };
    let request = RadialRequest { highest_v: Some(40), ..request(0.5) };
    let solution = parabound::radial::solve(&potential, &request).expect("levels");
    assert_eq!(solution.states.len(), 41);
    let observables = solution.observables(&potential, r_e, 0.0);
    let mut worst = Worst::default();
    for state in &solution.states {
        worst.note("spacing", (state.energy_hartree - (state.v as f64 + 0.5)).abs());
    }
    for level in file["levels"].as_array().expect("a list") {
        let n = level["n"].as_u64().expect("a count") as usize;
        let Some(of) = observables.get(n) else { continue };
        worst.note("P", (of.forbidden_probability - number(&level["P_forbidden"])).abs());
        worst.note("<y2>", relative(of.mean_square_x_bohr2, number(&level["y2_mean"])));
        worst.note("turning point", relative(of.outer_turning_point_bohr - r_e, number(&level["y_turn"])));
        let wavefunction = &solution.states[n].wavefunction;
        let fourth = wavefunction.expectation(|r| (r - r_e).powi(4));
        worst.note("<y4>", relative(fourth, number(&level["y4_mean"])));
        let at = wavefunction.density_per_bohr(&[r_e, of.outer_turning_point_bohr]);
        worst.note("density at 0", (at[0] - number(&level["psi2_at_0"])).abs());
        worst.note("density at the turning point", (at[1] - number(&level["psi2_at_turn"])).abs());
    }
    let exact = 1e-10;
    worst.within(
        "harmonic",
        &[
            ("spacing", exact),
            ("P", exact),
            ("<y2>", exact),
            ("<y4>", exact),
            ("turning point", exact),
            ("density at 0", exact),
            ("density at the turning point", exact),
        ],
    );
}

/// Source: `reference/resonances.json` (poles by exterior complex scaling with 110 bits, two contours; a fit of phase
/// shifts agrees). Widths to 1e-3, to 1 % where the width exceeds a thousandth of the energy.
#[test]
fn quasi_bound_levels_and_their_widths() {
    let file: Value = serde_json::from_str(include_str!("reference/resonances.json")).expect("JSON");
    let cases = file["cases"].as_array().expect("a list");
    assert_eq!(cases.len(), 6);
    for case in cases {
        let p = &case["parameters"];
        let j = number(&case["J"]);
        let is_lennard_jones = p.get("well_strength").is_some();
        let (h2_over_2mu, depth, energy, width) = if is_lennard_jones {
            (1.0 / number(&p["well_strength"]), 1.0, number(&case["E_res_eps"]), number(&case["width_eps"]))
        } else {
            let of = |key: &str| number(&p[key]);
            let (energy, width) = (number(&case["E_res_per_cm"]), number(&case["width_per_cm"]));
            (of("hbar2_over_2mu_per_cm_angstrom2"), of("De_per_cm"), energy, width)
        };
        let request = RadialRequest { rotation_x: j * (j + 1.0), ..request(h2_over_2mu) };
        let found = if is_lennard_jones {
            quasi_bound(&lennard_jones(), &request)
        } else {
            quasi_bound(&morse(depth, number(&p["a_per_angstrom"]), number(&p["re_angstrom"])), &request)
        }
        .expect("levels");
        // The Morse table counts from dissociation, the function here from its minimum.
        let zero = if is_lennard_jones { 0.0 } else { depth };
        let nearest = found
            .iter()
            .min_by(|a, b| {
                let distance = |q: &QuasiBound| (q.energy_hartree - zero - energy).abs();
                distance(a).total_cmp(&distance(b))
            })
            .expect("a level");
        let off = (nearest.energy_hartree - zero - energy).abs() / depth;
        let width_off = relative(nearest.width_hartree, width);
        let (e, w) = nearest.by_phase_hartree.expect("a check");
        let check = ((e - nearest.energy_hartree).abs() / depth, relative(w, nearest.width_hartree));
        println!(
            "{} J = {j}: E off by {off:.1e} of the depth, width by {width_off:.1e}; real energies differ by {:.1e}, {:.1e}",
            case["name"], check.0, check.1
        );
        let allowed = if width > 1e-3 * energy { 1e-2 } else { 1e-3 };
        assert!(off < 1e-10 && width_off < allowed);
        assert!(check.0 < 1e-8 && check.1 < allowed);
    }
}
