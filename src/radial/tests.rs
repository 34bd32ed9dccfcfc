//! Identities and hard cases of the solver. All potentials here are invented.

use super::solve::{levels, problem};
use super::*;

/// A function of r with its slope (the solver needs no more).
struct Function<F: Fn(f64) -> f64 + Sync> {
    value: F,
    range: (f64, f64),
    limit: f64,
    minimum: f64,
}

impl<F: Fn(f64) -> f64 + Sync> Potential for Function<F> {
    fn derivatives_hartree(&self, r: f64) -> [f64; 5] {
        let h = 1e-5 * r.abs().max(0.1);
        let v = |x| (self.value)(x);
        let slope = (v(r + h) - v(r - h)) / (2.0 * h);
        let second = (v(r + 30.0 * h) - 2.0 * v(r) + v(r - 30.0 * h)) / (900.0 * h * h);
        [v(r), slope, second, f64::NAN, f64::NAN]
    }
    fn energy_hartree(&self, r: f64) -> f64 {
        (self.value)(r)
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

const ANY_R: (f64, f64) = (0.0, f64::INFINITY);

fn request(two_mu: f64) -> RadialRequest {
    RadialRequest {
        reduced_mass_me: 0.5 * two_mu,
        rotation_x: 0.0,
        relative_accuracy: 1e-10,
        highest_v: None,
    }
}

/// Solves, and checks what must hold for every potential: v in order, energies ascending, orthonormal
/// wavefunctions, and the separate count.
fn solve_and_check(potential: &dyn Potential, request: &RadialRequest) -> Vec<BoundState> {
    let states = bound_states(potential, request).expect("levels");
    if request.highest_v.is_none() && potential.limit_hartree().is_finite() {
        let count = count_below(potential, request, potential.limit_hartree()).expect("count");
        assert_eq!(states.len(), count, "levels against count");
    }
    for (v, state) in states.iter().enumerate() {
        assert_eq!(state.v, v);
        assert!(v == 0 || state.energy_hartree >= states[v - 1].energy_hartree);
        let w = &state.wavefunction;
        for other in &states[..=v] {
            let overlap: f64 =
                (0..w.psi.len()).map(|i| w.weight_bohr[i] * w.psi[i] * other.wavefunction.psi[i]).sum();
            let expected = f64::from(u8::from(other.v == v));
            assert!((overlap - expected).abs() < 1e-9, "<{v}|{}> = {overlap:e}", other.v);
        }
        assert!((w.probability(f64::NEG_INFINITY, f64::INFINITY) - 1.0).abs() < 1e-12);
    }
    states
}

#[test]
fn a_box_has_the_levels_of_a_box() {
    // Equal elements put element boundaries on the nodes of many levels: the modes of the elements then
    // coincide with levels.
    let length = std::f64::consts::PI;
    let flat =
        Function { value: |_| 0.0, range: (1.0, 1.0 + length), limit: 400.25, minimum: 1.0 + 0.5 * length };
    let states = solve_and_check(&flat, &request(1.0));
    assert_eq!(states.len(), 20);
    for state in &states {
        let exact = ((state.v + 1) * (state.v + 1)) as f64;
        assert!((state.energy_hartree - exact).abs() < 1e-11 * 400.0, "v = {}", state.v);
        assert_eq!(state.nodes, state.v);
        let mid = state.wavefunction.sample(&[1.0 + 0.3]);
        let exact = (2.0 / length).sqrt() * (((state.v + 1) as f64) * 0.3).sin();
        assert!((mid[0] - exact).abs() < 1e-7, "v = {}", state.v);
    }
}

#[test]
fn two_equal_wells_give_pairs() {
    // The splitting runs from far below rounding to a whole spacing.
    let double = Function {
        value: |r: f64| {
            let x = r - 8.0;
            0.02 * (x * x - 16.0).powi(2)
        },
        range: ANY_R,
        limit: f64::INFINITY,
        minimum: 4.0,
    };
    let states = solve_and_check(&double, &RadialRequest { highest_v: Some(23), ..request(16.0) });
    assert_eq!(states.len(), 24);
    let splitting = |n: usize| states[2 * n + 1].energy_hartree - states[2 * n].energy_hartree;
    assert!(splitting(0) < 1e-11 && splitting(0) >= 0.0);
    assert!(splitting(11) > 0.5 * (states[22].energy_hartree - states[21].energy_hartree));
    // Closer pairs than the accuracy asked for may sit on one side each.
    for state in states.iter().filter(|s| splitting(s.v / 2) > 1e-5) {
        assert_eq!(state.nodes, state.v);
        let left = state.wavefunction.probability(0.0, 8.0);
        assert!((left - 0.5).abs() < 1e-4, "v = {}: {left}", state.v);
    }
}

#[test]
fn a_second_well_far_away_is_not_missed() {
    // The minimum named lies in the shallower well; the deeper one stands 12 bohr further out.
    let two = Function {
        value: |r: f64| -(-(r - 4.0).powi(2)).exp() - 1.5 * (-(r - 16.0).powi(2)).exp(),
        range: ANY_R,
        limit: 0.0,
        minimum: 4.0,
    };
    let states = solve_and_check(&two, &request(40.0));
    let far = states.iter().filter(|s| s.wavefunction.probability(10.0, 30.0) > 0.5).count();
    let near = states.len() - far;
    let alone = |depth: f64, at: f64| {
        let one = Function {
            value: move |r: f64| -depth * (-(r - at).powi(2)).exp(),
            range: ANY_R,
            limit: 0.0,
            minimum: at,
        };
        solve_and_check(&one, &request(40.0)).len()
    };
    assert_eq!((near, far), (alone(1.0, 4.0), alone(1.5, 16.0)));
}

/// Morse function with λ = sqrt(2μD)/a; the levels on the whole line are D − (λ − v − ½)² a²/2μ.
fn morse(lambda: f64) -> impl Potential {
    Function {
        value: move |r: f64| lambda * lambda * (1.0 - (-(r - 9.0)).exp()).powi(2),
        range: ANY_R,
        limit: lambda * lambda,
        minimum: 9.0,
    }
}

#[test]
fn shallow_wells_hold_one_level_or_none() {
    assert!(solve_and_check(&morse(0.3), &request(1.0)).is_empty());
    assert!(solve_and_check(&morse(0.4999), &request(1.0)).is_empty());
    for lambda in [0.7, 0.51, 0.501] {
        let states = solve_and_check(&morse(lambda), &request(1.0));
        assert_eq!(states.len(), 1, "λ = {lambda}");
        let exact = lambda * lambda - (lambda - 0.5_f64).powi(2);
        let error = (states[0].energy_hartree - exact).abs();
        // The function on the whole line has the same level as long as the wall at 0 is out of reach.
        assert!(error < 1e-9 * lambda * lambda, "λ = {lambda}: {error:e}");
    }
}

#[test]
fn a_level_a_hair_below_the_limit_is_found() {
    for beyond in [1e-2, 1e-3, 1e-4] {
        let lambda = 7.5 + beyond;
        let states = solve_and_check(&morse(lambda), &request(1.0));
        assert_eq!(states.len(), 8);
        let binding = lambda * lambda - states[7].energy_hartree;
        let error = (binding - beyond * beyond).abs() / (lambda * lambda);
        assert!(error < 1e-11, "{beyond}: {binding:e}");
    }
}

#[test]
fn rotation_lifts_the_levels_out_of_the_well() {
    let potential = morse(9.3);
    let mut last = usize::MAX;
    for j in [0.0, 20.0, 60.0, 120.0, 300.0] {
        let request = RadialRequest { rotation_x: j * (j + 1.0), ..request(1.0) };
        let states = solve_and_check(&potential, &request);
        assert!(states.len() <= last);
        last = states.len();
    }
    assert_eq!(last, 0);
}

#[test]
fn an_endless_tail_is_cut_at_a_stated_number_of_levels() {
    let slow = Function {
        value: |r: f64| (1.0 - (-2.0 * (r - 2.0)).exp()).powi(2) + 1e-2 * (1.0 - (-1e-3 * (r - 2.0)).exp()),
        range: ANY_R,
        limit: 1.01,
        minimum: 2.0,
    };
    let states = bound_states(&slow, &request(4000.0)).expect("levels");
    assert_eq!(states.len(), MOST_LEVELS);
    assert!(states.windows(2).all(|pair| pair[0].energy_hartree < pair[1].energy_hartree));
    assert!(states.iter().all(|state| state.nodes == state.v));
}

#[test]
fn bad_input_is_refused() {
    for mass in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        let request = RadialRequest { reduced_mass_me: mass, ..request(1.0) };
        assert!(matches!(bound_states(&morse(3.0), &request), Err(RadialError::Mass { .. })));
    }
    let broken = Function {
        value: |r: f64| if r > 11.0 { f64::NAN } else { 9.0 * (1.0 - (-(r - 9.0)).exp()).powi(2) },
        range: ANY_R,
        limit: 9.0,
        minimum: 9.0,
    };
    let refused = bound_states(&broken, &request(1.0));
    assert!(matches!(refused, Err(RadialError::NotFinite { r_bohr }) if r_bohr > 11.0));
    let nowhere = Function { value: |_| f64::NAN, range: ANY_R, limit: 1.0, minimum: 2.0 };
    assert!(bound_states(&nowhere, &request(1.0)).is_err());
}

/// Evenly distributed numbers from a seed (xorshift; G. Marsaglia, J. Stat. Softw. 8 (14) (2003)).
struct Dice(u64);

impl Dice {
    fn between(&mut self, low: f64, high: f64) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        low + (high - low) * (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
}

/// Extended Morse functions with random β, some with a second well or a shelf, shallow to deep.
fn random_potential(dice: &mut Dice) -> (impl Potential, f64) {
    let lambda = 10_f64.powf(dice.between(-0.2, 1.9));
    let betas: Vec<f64> =
        (0..4).map(|i| if i == 0 { dice.between(0.8, 1.3) } else { dice.between(-0.3, 0.3) }).collect();
    let r_e = dice.between(1.0, 4.0);
    let bump = if dice.between(0.0, 1.0) < 0.4 { dice.between(-0.6, 0.3) } else { 0.0 };
    let (at, width) = (r_e + dice.between(1.5, 5.0), dice.between(0.3, 1.0));
    let value = move |r: f64| {
        let y = (r.powi(3) - r_e.powi(3)) / (r.powi(3) + r_e.powi(3));
        let beta = betas.iter().rev().fold(0.0, |sum, b| sum * y + b);
        (1.0 - (-beta * (r - r_e)).exp()).powi(2) + bump * (-((r - at) / width).powi(2)).exp()
    };
    (Function { value, range: ANY_R, limit: 1.0, minimum: r_e }, lambda * lambda)
}

/// What a survey of random potentials found.
#[derive(Default)]
struct Surveyed {
    levels: usize,
    /// Levels with a stated error below the true one.
    wrong: usize,
    worst: f64,
    /// Levels off by more than the accuracy asked for.
    beyond: usize,
    /// Potentials whose tail was refused.
    refused: usize,
    /// Stated over true error, where the true one stands above rounding (1e-11 of the depth).
    ratios: Vec<f64>,
}

/// Compares with levels on a much finer mesh, and their number with a count that shares no search with them.
fn survey(seeds: std::ops::Range<u64>, accuracy: f64) -> Surveyed {
    let mut found = Surveyed::default();
    for seed in seeds {
        let mut dice = Dice(0x9e37_79b9_7f4a_7c15 ^ (seed + 1).wrapping_mul(0x2545_f491_4f6c_dd1d));
        let (potential, two_mu) = random_potential(&mut dice);
        let request = RadialRequest { relative_accuracy: accuracy, ..request(two_mu) };
        // A tail that all but never ends needs more mesh than there may be: refused, and said so.
        let (states, finest) = match (bound_states(&potential, &request), problem(&potential, &request, 0.5))
        {
            (Ok(states), Ok(finest)) => (states, finest),
            (Err(RadialError::Mesh { .. }), _) | (_, Err(RadialError::Mesh { .. })) => {
                found.refused += 1;
                continue;
            }
            (Err(error), _) | (_, Err(error)) => panic!("seed {seed}: {error}"),
        };
        let reference = finest.map(|p| levels(&p)).unwrap_or_default();
        assert_eq!(states.len(), reference.len(), "seed {seed}: number of levels");
        assert_eq!(
            states.len(),
            count_below(&potential, &request, 1.0).expect("count"),
            "seed {seed}: count"
        );
        // A list that was cut belongs to a tail without end; its last levels hang on where the mesh ends.
        if states.len() == MOST_LEVELS {
            continue;
        }
        for (state, exact) in states.iter().zip(&reference) {
            let error = (state.energy_hartree - exact.energy).abs();
            found.levels += 1;
            found.worst = found.worst.max(error);
            found.beyond += usize::from(error > accuracy);
            if error > 1e-11 {
                found.ratios.push(state.error_hartree / error);
            }
            if error > state.error_hartree {
                found.wrong += 1;
                println!("seed {seed} v {} error {error:e} stated {:e}", state.v, state.error_hartree);
            }
        }
    }
    found.ratios.sort_by(f64::total_cmp);
    found
}

#[test]
fn the_stated_error_is_the_true_one_or_more() {
    for (potentials, accuracy) in [(60, 1e-6), (1000, 1e-10)] {
        let found = survey(0..potentials, accuracy);
        let median = found.ratios.get(found.ratios.len() / 2).copied().unwrap_or(1.0);
        println!(
            "{potentials} potentials, accuracy {accuracy:e}: {} levels, {} with a larger error than stated, worst {:.1e}, \
             median of stated over true error {median:.1} where that exceeds rounding ({} levels)",
            found.levels,
            found.wrong,
            found.worst,
            found.ratios.len()
        );
        assert!(found.refused * 100 <= potentials as usize, "{} refused", found.refused);
        assert!(found.levels > 500 && found.wrong * 100 <= found.levels);
        // No level is off by more than the accuracy asked for. (Seed 886, v = 12 was once: a shift met the level above to
        // the last digit, where the count at the shift fits both.)
        assert!(found.beyond == 0 && median <= 100.0, "{} beyond", found.beyond);
    }
}

/// A zero of the potential far from the well costs digits; the error stated says so, and nothing hangs on them.
#[test]
fn a_far_zero_is_in_the_error_stated() {
    let two_mu = 2.0 * 1605.0;
    let well = |zero: f64| Function {
        value: move |r: f64| zero + 0.1 * (1.0 - (-(r - 2.0)).exp()).powi(2),
        range: ANY_R,
        limit: zero + 0.1,
        minimum: 2.0,
    };
    let own = solve_and_check(&well(0.0), &request(two_mu));
    for zero in [-8.0, -113.0, -7000.0] {
        let far = bound_states(&well(zero), &request(two_mu)).expect("levels");
        let (mut worst, mut stated) = (0.0_f64, 0.0_f64);
        for (a, b) in own.iter().zip(&far) {
            let off = (a.energy_hartree - (b.energy_hartree - zero)).abs();
            assert!(
                off <= a.error_hartree + b.error_hartree,
                "{zero} v = {}: {off:e}, {:e}",
                a.v,
                b.error_hartree
            );
            worst = worst.max(off);
            stated = stated.max(b.error_hartree);
        }
        println!("zero at {zero} hartree: off by {worst:.1e} hartree at most, {stated:.1e} stated");
    }
}
