//! Invented scans with planted faults: the share found and the share of false alarms, printed.
//!
//! The curves are Morse functions with Gaussian noise of known size on top; all faults
//! are invented. Sizes are in multiples of the noise.

use parabound::notice::Code;
use parabound::scan::inspect::{InspectedPoint, Inspection, inspect};

/// Generator of pseudo-random numbers (G. Marsaglia, Xorshift RNGs, J. Stat. Softw. 8 (14), 2003).
struct Xorshift(u64);

impl Xorshift {
    fn uniform(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    fn below(&mut self, limit: usize) -> usize {
        ((self.uniform() * limit as f64) as usize).min(limit - 1)
    }

    /// Box and Muller.
    fn gaussian(&mut self) -> f64 {
        let radius = (-2.0 * (1.0 - self.uniform()).ln()).sqrt();
        radius * (std::f64::consts::TAU * self.uniform()).cos()
    }
}

/// A curve without a fault: bond lengths in bohr, energies in hartree, and noise sizes that its grid resolves.
struct Curve {
    name: &'static str,
    r: Vec<f64>,
    e: Vec<f64>,
    noise_hartree: f64,
}

/// Invented Morse functions on uneven grids, like H2, CO and I2 in range and steepness.
fn curves() -> Vec<Curve> {
    let make =
        |name, points: usize, (r_e, a, depth): (f64, f64, f64), (from, to): (f64, f64), noise_hartree| {
            let step = (to - from) / (points - 1) as f64;
            let r: Vec<f64> =
                (0..points).map(|i| from + step * (i as f64 + 0.15 * (2.3 * i as f64).sin())).collect();
            let e = r.iter().map(|r| depth * (1.0 - (-a * (r - r_e)).exp()).powi(2)).collect();
            Curve { name, r, e, noise_hartree }
        };
    vec![
        make("H2-like, 60 points", 60, (1.4, 1.03, 0.174), (0.8, 4.5), 2e-6),
        make("CO-like, 40 points", 40, (2.13, 1.22, 0.41), (1.7, 3.3), 2e-6),
        make("I2-like, 80 points", 80, (5.04, 0.98, 0.057), (4.3, 9.0), 1e-7),
    ]
}

const SCANS: usize = 40;
/// Three independent runs; arbitrary.
const SEEDS: [u64; 3] = [0x5eed_0f5c_a25a_1234, 0x0123_4567_89ab_cdef, 0x2545_f491_4f6c_dd1d];
/// Distance from the ends within which a fault does not count as interior.
const MARGIN: usize = 5;
/// Fewest points of a branch beside a planted break.
const BRANCH: usize = 8;

fn noisy(curve: &Curve, random: &mut Xorshift) -> Vec<f64> {
    curve.e.iter().map(|e| e + curve.noise_hartree * random.gaussian()).collect()
}

fn inspected(r: &[f64], e: &[f64]) -> Inspection {
    let point = |(row, (&r_bohr, &energy_hartree))| InspectedPoint { row, r_bohr, energy_hartree };
    inspect(&r.iter().zip(e).enumerate().map(point).collect::<Vec<_>>(), &[])
}

/// Bond lengths of the faults found.
fn places(found: &Inspection, codes: &[Code]) -> Vec<Vec<f64>> {
    found.notices.iter().filter(|n| codes.contains(&n.code)).map(|n| n.at_bohr.clone()).collect()
}

/// What a run of scans with one fault each gave.
#[derive(Default)]
struct Tally {
    scans: usize,
    /// A fault was told at the place.
    found: usize,
    /// And it was called what it is.
    named: usize,
    others: usize,
}

impl Tally {
    fn plus(self, other: Self) -> Self {
        Self {
            scans: self.scans + other.scans,
            found: self.found + other.found,
            named: self.named + other.named,
            others: self.others + other.others,
        }
    }

    fn print(&self, what: &str) {
        println!(
            "{what}: {} of {} found, {} rightly named, {} false alarms beside",
            self.found, self.scans, self.named, self.others
        );
    }
}

/// Spikes of `size` times the noise.
fn spikes(curve: &Curve, size: f64, random: &mut Xorshift) -> Tally {
    let mut tally = Tally::default();
    for _ in 0..SCANS {
        let mut e = noisy(curve, random);
        let at = MARGIN + random.below(e.len() - 2 * MARGIN);
        e[at] += size * curve.noise_hartree * if random.below(2) == 0 { 1.0 } else { -1.0 };
        let found = places(&inspected(&curve.r, &e), &[Code::OffCurve, Code::Kink, Code::Jump]);
        tally.scans += 1;
        // A break in the gap before or behind it tells the same place.
        let there = |f: &Vec<f64>| f.contains(&curve.r[at]);
        tally.found += usize::from(found.iter().any(there));
        tally.named += usize::from(found.contains(&vec![curve.r[at]]));
        tally.others += found.iter().filter(|f| !there(f)).count();
    }
    tally
}

/// Where a planted break has the size asked for.
#[derive(Clone, Copy, PartialEq)]
enum Measure {
    /// Everywhere beyond: a jump.
    Shift,
    /// A kink, at the first point beyond it.
    FirstPoint,
    /// A kink, one mean step beyond it.
    Step,
}

/// Jumps and kinks of `size` times the noise.
fn breaks(curve: &Curve, measure: Measure, size: f64, random: &mut Xorshift) -> Tally {
    let mut tally = Tally::default();
    let n = curve.r.len();
    let step = (curve.r[n - 1] - curve.r[0]) / (n - 1) as f64;
    for _ in 0..SCANS {
        let mut e = noisy(curve, random);
        let at = BRANCH - 1 + random.below(n - 2 * BRANCH);
        let gap = curve.r[at + 1] - curve.r[at];
        let place = curve.r[at] + 0.8 * random.uniform() * gap;
        let sign = if random.below(2) == 0 { 1.0 } else { -1.0 };
        for (energy, &r) in e.iter_mut().zip(&curve.r).skip(at + 1) {
            let grown = match measure {
                Measure::Shift => 1.0,
                Measure::FirstPoint => (r - place) / (curve.r[at + 1] - place),
                Measure::Step => (r - place) / step,
            };
            *energy += sign * size * curve.noise_hartree * grown;
        }
        let found = places(&inspected(&curve.r, &e), &[Code::OffCurve, Code::Kink, Code::Jump]);
        // Noise may move the place by one gap.
        let near =
            |f: &Vec<f64>| f.len() == 2 && f[0] >= curve.r[at - 1] && f[1] <= curve.r[(at + 2).min(n - 1)];
        tally.scans += 1;
        // So does one of its two ends, called a point beside the curve.
        let there = |f: &Vec<f64>| near(f) || *f == [curve.r[at]] || *f == [curve.r[at + 1]];
        tally.found += usize::from(found.iter().any(there));
        tally.named += usize::from(found.iter().any(near));
        tally.others += found.iter().filter(|f| !there(f)).count();
    }
    tally
}

#[test]
fn spikes_jumps_and_kinks_are_found() {
    let over_seeds = |run: &dyn Fn(&mut Xorshift) -> Tally| {
        SEEDS.iter().map(|&seed| run(&mut Xorshift(seed))).fold(Tally::default(), Tally::plus)
    };
    for curve in curves() {
        let ten = over_seeds(&|random| spikes(&curve, 10.0, random));
        ten.print(&format!("{}, spikes of 10 times the noise", curve.name));
        let five = over_seeds(&|random| spikes(&curve, 5.0, random));
        five.print(&format!("{}, spikes of 5 times the noise", curve.name));
        let jumps = over_seeds(&|random| breaks(&curve, Measure::Shift, 20.0, random));
        jumps.print(&format!("{}, jumps of 20 times the noise", curve.name));
        let kinks = over_seeds(&|random| breaks(&curve, Measure::FirstPoint, 20.0, random));
        kinks.print(&format!("{}, kinks of 20 times the noise at the first point beyond", curve.name));
        let weak = over_seeds(&|random| breaks(&curve, Measure::Step, 20.0, random));
        weak.print(&format!("{}, kinks of 20 times the noise one step beyond", curve.name));
        assert_eq!(ten.found, ten.scans, "{}", curve.name);
        assert!(five.found > 0, "{}", curve.name);
        assert_eq!(jumps.found, jumps.scans, "{}", curve.name);
        assert_eq!(kinks.found, kinks.scans, "{}", curve.name);
        // A kink right at a point can hardly be told from that point being off.
        for tally in [ten, jumps, kinks] {
            assert!(100 * tally.named >= 94 * tally.scans, "{}: {} named", curve.name, tally.named);
        }
    }
}

#[test]
fn noise_alone_raises_few_alarms_and_is_measured() {
    for curve in curves() {
        let (mut alarms, mut measured) = (0, Vec::new());
        let mut randoms = SEEDS.map(Xorshift);
        for i in 0..2 * SCANS * SEEDS.len() {
            let found = inspected(&curve.r, &noisy(&curve, &mut randoms[i % SEEDS.len()]));
            alarms += places(&found, &[Code::OffCurve, Code::Kink, Code::Jump]).len();
            measured.push(found.noise_hartree.unwrap_or(0.0) / curve.noise_hartree);
        }
        measured.sort_by(f64::total_cmp);
        let (low, high) = (measured[measured.len() / 10], measured[9 * measured.len() / 10]);
        println!(
            "{}, noise alone: {alarms} false alarms in {} scans; noise measured over true {low:.2} to {high:.2} (80 %)",
            curve.name,
            measured.len()
        );
        assert!(alarms <= measured.len() / 16, "{}: {alarms}", curve.name);
        assert!(low > 0.5 && high < 2.0, "{}: {low} {high}", curve.name);
    }
}

/// Two rows whose energies were swapped.
#[test]
fn swapped_rows_are_noticed() {
    let scans = SCANS * SEEDS.len();
    for curve in curves() {
        let mut seen = 0;
        let mut randoms = SEEDS.map(Xorshift);
        for i in 0..scans {
            let random = &mut randoms[i % SEEDS.len()];
            let mut e = noisy(&curve, random);
            let at = MARGIN + random.below(e.len() - 2 * MARGIN);
            e.swap(at, at + 1);
            let difference = (e[at] - e[at + 1]).abs();
            let found = places(&inspected(&curve.r, &e), &[Code::OffCurve, Code::Kink, Code::Jump]);
            let near = |r: &f64| *r >= curve.r[at - 1] && *r <= curve.r[at + 2];
            seen += usize::from(difference < 20.0 * curve.noise_hartree || found.iter().flatten().any(near));
        }
        println!("{}, swapped rows: {seen} of {scans} noticed", curve.name);
        assert_eq!(seen, scans, "{}", curve.name);
    }
}
