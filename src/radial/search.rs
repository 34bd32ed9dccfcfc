//! Finding the levels of a chain: brackets from counts, Rayleigh-quotient iteration inside them.

use super::chain::{Chain, dot};
use super::condensed::{Condensed, Reduced, ReducedFactors, product, scale};
use super::factors::Factors;
use crate::parallel::side_by_side;

/// Relative size of the unwanted part of a vector at which it is finished.
const FINISHED: f64 = 1e-13;
/// Residual of a finished vector as a share of the depth; whatever the neighbours, the energy is right to this.
const FINISHED_RESIDUAL: f64 = 1e-9;
/// Levels closer than this share of the depth are kept orthogonal explicitly.
const DEGENERATE: f64 = 1e-6;
/// From this number of levels on two threads share the search.
const WORTH_A_THREAD: usize = 64;
/// Rounds for one level before the bracket's middle is taken as it is.
const MOST_ROUNDS: usize = 400;

/// One level in the coordinates of the chain.
#[derive(Clone, Debug)]
pub(super) struct Found {
    /// Energy in hartree.
    pub energy: f64,
    /// Normalised vector.
    pub vector: Vec<f64>,
    /// Distance to the nearest other level assumed while the vector was refined.
    pub gap: f64,
}

/// Brackets of the levels below `top`: `low[v]` has at most v levels below it, `high[v]` more than v.
struct Brackets {
    low: Vec<f64>,
    high: Vec<f64>,
}

impl Brackets {
    fn note(&mut self, energy: f64, below: usize) {
        for (v, (low, high)) in self.low.iter_mut().zip(&mut self.high).enumerate() {
            if below <= v {
                *low = low.max(energy);
            } else {
                *high = high.min(energy);
            }
        }
    }
}

/// The lowest `wanted` levels of the chain, all of which lie between `bottom` and `top`.
pub(super) fn lowest_levels(
    chain: &Chain,
    factors: &mut Factors,
    bottom: f64,
    top: f64,
    wanted: usize,
) -> Vec<Found> {
    let scale = top - bottom;
    let start = start_vector(chain);
    let condensed = Condensed::new(chain);
    let search = |from: usize, to: usize| {
        let mut factors = Factors::default();
        let mut brackets = Brackets { low: vec![bottom; to], high: vec![top; to] };
        let mut found: Vec<Option<Found>> = vec![None; to];
        let mut work = Work {
            y: vec![0.0; chain.len()],
            start: &start,
            scale,
            condensed: &condensed,
            reduced: ReducedFactors::default(),
            vectors: Default::default(),
            kept: Vec::new(),
        };
        for v in from..to {
            if found[v].is_none() {
                find(chain, &mut factors, &mut brackets, &mut found, v, &mut work);
            }
        }
        found.into_iter().flatten().collect::<Vec<Found>>()
    };
    let mut levels = if wanted < WORTH_A_THREAD {
        search(0, wanted)
    } else {
        let middle = wanted / 2;
        let (mut low, mut high) = side_by_side(|| search(0, middle), || search(middle, wanted));
        let apart =
            low.last().zip(high.first()).is_some_and(|(a, b)| b.energy - a.energy > 2.0 * DEGENERATE * scale);
        if apart {
            low.append(&mut high);
            low
        } else {
            // A pair on the seam: its members must know of each other.
            search(0, wanted)
        }
    };
    polish_clusters(chain, factors, &mut levels, scale);
    // Pairs closer than rounding may have come out in either order.
    levels.sort_by(|a, b| a.energy.total_cmp(&b.energy));
    orthogonalise(&mut levels, DEGENERATE * scale);
    levels
}

struct Work<'a> {
    y: Vec<f64>,
    /// Where every iteration begins.
    start: &'a [f64],
    scale: f64,
    condensed: &'a Condensed<'a>,
    reduced: ReducedFactors,
    /// Reduced vector, its norm image, and what is solved for.
    vectors: [Reduced; 3],
    kept: Vec<Option<usize>>,
}

/// A count at a shift off the level by less than this share of the distance to its neighbours tells which level it is.
const NEAR_BY: f64 = 0.01;

/// Most levels from which the next one is extrapolated.
const LOOK_BACK: usize = 8;

/// Extrapolates the ladder found so far by the polynomial through its last levels; of the degrees offered the one
/// that changes the result of the degree below it least.
fn guess(found: &[Option<Found>], v: usize, low: f64, high: f64) -> f64 {
    let middle = 0.5 * (low + high);
    let back = |n: usize| v.checked_sub(n).and_then(|i| found[i].as_ref()).map(|f| f.energy);
    // Backward differences of the levels v − 1, v − 2, ...; their sum up to order k is the extrapolation of degree k.
    let mut differences = [0.0; LOOK_BACK];
    let mut count = 0;
    while let Some(energy) = back(count + 1).filter(|_| count < LOOK_BACK) {
        differences[count] = energy;
        count += 1;
    }
    for order in 1..count {
        for i in (order..count).rev() {
            differences[i] = differences[i - 1] - differences[i];
        }
    }
    if count < 2 {
        return middle;
    }
    let mut sum = differences[0] + differences[1];
    let mut least = f64::INFINITY;
    let mut best = sum;
    for difference in &differences[2..count] {
        sum += difference;
        if difference.abs() < least {
            (least, best) = (difference.abs(), sum);
        }
    }
    if best > low && best < high { best } else { middle }
}

fn find(
    chain: &Chain,
    factors: &mut Factors,
    brackets: &mut Brackets,
    found: &mut [Option<Found>],
    v: usize,
    work: &mut Work<'_>,
) {
    let rounding = 4.0 * f64::EPSILON * work.scale;
    let mut shift = guess(found, v, brackets.low[v], brackets.high[v]);
    for _ in 0..MOST_ROUNDS {
        // Isolate: a shift whose count says it is next to v.
        work.reduced.factorise(work.condensed, shift);
        let below = work.reduced.below;
        brackets.note(shift, below);
        let (low, high) = (brackets.low[v], brackets.high[v]);
        let near = below == v || below == v + 1;
        let narrow = high - low <= 16.0 * rounding;
        if near
            && !narrow
            && let Some(level) = refine_reduced(brackets, found, v, shift, work)
        {
            found[v] = Some(level);
            return;
        }
        if near || narrow {
            factors.factorise(chain, shift);
            if let Some(level) = refine(chain, factors, brackets, found, (v, narrow), shift, work) {
                if found[v].is_none() {
                    found[v] = Some(level);
                }
                return;
            }
            if narrow {
                return;
            }
        }
        let (low, high) = (brackets.low[v], brackets.high[v]);
        shift = 0.5 * (low + high);
    }
}

/// Distance to the levels next to `v` that the refinement assumes: the spacing so far, or what the counts leave open.
fn assumed_gap(brackets: &Brackets, previous: Option<&Found>, v: usize, shift: f64, work: &Work<'_>) -> f64 {
    let rounding = 4.0 * f64::EPSILON * work.scale;
    match previous {
        Some(previous) => (shift - previous.energy).abs().max(rounding),
        None => (brackets.high[v] - brackets.low[v]).max(0.05 * work.scale / brackets.low.len() as f64),
    }
}

/// Whether the level found at `energy` from `shift`, with `below` levels below the shift, is level v.
///
/// Where the two are one to rounding, the count at the shift fits two levels; a count on the far side decides.
fn is_level(
    v: usize,
    (energy, shift): (f64, f64),
    below: usize,
    rounding: f64,
    count: &mut dyn FnMut(f64) -> usize,
) -> bool {
    if (energy - shift).abs() > 16.0 * rounding {
        return below == if energy > shift { v } else { v + 1 };
    }
    (below == v && count(energy + 64.0 * rounding) > v)
        || (below == v + 1 && count(energy - 64.0 * rounding) <= v)
}

/// Rayleigh-quotient iteration on the interface values alone, from a shift that `work.reduced` holds; none where it
/// leaves the bracket, where the count contradicts v, or near a level already found: then [`refine`] takes over.
fn refine_reduced(
    brackets: &mut Brackets,
    found: &[Option<Found>],
    v: usize,
    start: f64,
    work: &mut Work<'_>,
) -> Option<Found> {
    let rounding = 4.0 * f64::EPSILON * work.scale;
    let previous = v.checked_sub(1).and_then(|i| found[i].as_ref());
    let mut shift = start;
    let [mut x, mut image, mut y] = std::mem::take(&mut work.vectors);
    let faces = work.reduced.kept().len() + 1;
    x.copy_from(&Reduced::from_faces(&work.start[..faces]));
    let mut unwanted = 1e2;
    let mut still = 0;
    let mut level = None;
    // A shift some way off the level, and the levels below it.
    let mut aside: Option<(f64, usize)> = None;
    for round in 0..12 {
        if round > 0 {
            work.kept.clear();
            work.kept.extend_from_slice(work.reduced.kept());
            work.reduced.factorise(work.condensed, shift);
            brackets.note(shift, work.reduced.below);
            work.reduced.take_over(work.condensed, &work.kept, &mut x);
        }
        let gap = assumed_gap(brackets, previous, v, shift, work);
        if previous.is_some() && gap <= 10.0 * DEGENERATE * work.scale {
            break;
        }
        work.reduced.norm(&x, &mut image);
        y.copy_from(&image);
        work.reduced.solve(&mut y);
        let overlap = product(&y, &image);
        let length2 = product(&image, &image);
        work.reduced.norm(&y, &mut image);
        let norm2 = product(&y, &image);
        if !(norm2.is_finite() && norm2 > 0.0) {
            break;
        }
        let energy = shift + overlap / norm2;
        scale(&mut y, 1.0 / norm2.sqrt());
        std::mem::swap(&mut x, &mut y);
        let distance = (energy - shift).abs().max(rounding * 0.25);
        unwanted *= (distance / gap).min(10.0);
        still = if distance <= 4.0 * rounding { still + 1 } else { 0 };
        // ‖(H − E) x‖: (H − shift) x is the right-hand side over the norm, and zero in the modes.
        let residual = (length2 / norm2 - (energy - shift).powi(2)).max(0.0).sqrt();
        let settled = residual <= FINISHED_RESIDUAL * work.scale;
        if settled && (unwanted < FINISHED || (unwanted < 1e-6 && still > 0)) || still > 1 {
            let below = work.reduced.below;
            let (vector, residual) = work.reduced.whole(work.condensed, &x, energy);
            let mut count = |at: f64| {
                work.reduced.factorise(work.condensed, at);
                work.reduced.below
            };
            let on_the_level = (energy - shift).abs() <= 16.0 * rounding;
            // An earlier count beside the level, nearer by far than its neighbours, spares one of its own.
            let told = aside.filter(|(at, _)| on_the_level && (energy - at).abs() < NEAR_BY * gap);
            let sure = match told {
                Some((at, below)) => is_level(v, (energy, at), below, rounding, &mut count),
                None => is_level(v, (energy, shift), below, rounding, &mut count),
            };
            if sure && residual <= FINISHED_RESIDUAL * work.scale {
                level = Some(Found { energy, vector, gap });
            }
            break;
        }
        if (energy < brackets.low[v] - rounding || energy > brackets.high[v] + rounding) && round > 0 {
            break;
        }
        if (energy - shift).abs() > 64.0 * rounding {
            aside = Some((shift, work.reduced.below));
        }
        let outside = energy < brackets.low[v] || energy > brackets.high[v];
        shift = if outside { 0.5 * (brackets.low[v] + brackets.high[v]) } else { energy };
    }
    work.vectors = [x, image, y];
    level
}

/// Rayleigh-quotient iteration from an already factorised shift; none when it leaves the bracket of v or the
/// count contradicts v (`forced`: the bracket is down to rounding and any count is taken).
fn refine(
    chain: &Chain,
    factors: &mut Factors,
    brackets: &mut Brackets,
    found: &[Option<Found>],
    (v, forced): (usize, bool),
    start: f64,
    work: &mut Work<'_>,
) -> Option<Found> {
    let rounding = 4.0 * f64::EPSILON * work.scale;
    let previous = v.checked_sub(1).and_then(|i| found[i].as_ref());
    let mut shift = start;
    let mut vector = work.start.to_vec();
    let mut unwanted = 1e2;
    let mut still = 0;
    for round in 0..12 {
        if round > 0 {
            factors.factorise(chain, shift);
            brackets.note(shift, factors.below);
        }
        let gap = assumed_gap(brackets, previous, v, shift, work);
        work.y.copy_from_slice(&vector);
        factors.solve(chain, &mut work.y);
        deflate(&mut work.y, found, v, shift, DEGENERATE * work.scale);
        let norm2 = dot(&work.y, &work.y);
        let overlap = dot(&work.y, &vector);
        if !norm2.is_finite() || norm2 == 0.0 {
            return None;
        }
        let norm = norm2.sqrt();
        let energy = shift + overlap / norm2;
        let scale = 1.0 / norm;
        for (x, y) in vector.iter_mut().zip(&work.y) {
            *x = y * scale;
        }
        let distance = (energy - shift).abs().max(rounding * 0.25);
        unwanted *= (distance / gap).min(10.0);
        // At rounding distance twice over there is nothing more to gain, whatever the neighbours.
        still = if distance <= 4.0 * rounding { still + 1 } else { 0 };
        // ‖(H − E) x‖, free of charge: (H − shift) x is the last vector over the norm.
        let residual = (1.0 / norm2 - (energy - shift).powi(2)).max(0.0).sqrt();
        let settled = residual <= FINISHED_RESIDUAL * work.scale;
        if settled && (unwanted < FINISHED || (unwanted < 1e-6 && still > 0)) || still > 1 {
            let mut count = |at: f64| {
                work.reduced.factorise(work.condensed, at);
                work.reduced.below
            };
            if !forced && !is_level(v, (energy, shift), factors.below, rounding, &mut count) {
                return None;
            }
            // As it is, not as the iteration has it: a shift that meets the level to the last digit can spoil a round.
            chain.apply(&vector, energy, &mut work.y);
            if forced || dot(&work.y, &work.y).sqrt() <= FINISHED_RESIDUAL * work.scale {
                return Some(Found { energy, vector, gap });
            }
            shift = energy + 1e-7 * gap;
            continue;
        }
        let outside = energy < brackets.low[v] - rounding || energy > brackets.high[v] + rounding;
        // The first estimate comes from a vector that knows nothing yet.
        if outside && !forced && round > 0 {
            return None;
        }
        shift = if outside { 0.5 * (brackets.low[v] + brackets.high[v]) } else { energy };
    }
    // A bracket down to rounding holds the level, whatever kept the iteration from settling.
    forced.then_some(Found { energy: shift, vector, gap: rounding })
}

/// Takes the part along lower levels out that are as good as degenerate with this one.
fn deflate(y: &mut [f64], found: &[Option<Found>], v: usize, energy: f64, width: f64) {
    for other in found[..v].iter().rev().flatten() {
        if (energy - other.energy).abs() > width {
            break;
        }
        take_out(y, &other.vector);
    }
}

/// Removes from `y` its part along the unit vector `other`.
fn take_out(y: &mut [f64], other: &[f64]) {
    let part = dot(y, other);
    for (a, b) in y.iter_mut().zip(other) {
        *a -= part * b;
    }
}

fn normalise(y: &mut [f64]) {
    let scale = 1.0 / dot(y, y).sqrt();
    y.iter_mut().for_each(|x| *x *= scale);
}

/// Makes the vectors of levels closer than `width` orthogonal, each to those below it.
fn orthogonalise(levels: &mut [Found], width: f64) {
    for i in 1..levels.len() {
        let (lower, rest) = levels.split_at_mut(i);
        let level = &mut rest[0];
        let near = lower.iter().rev().take_while(|other| level.energy - other.energy <= width);
        let mut any = false;
        for other in near {
            take_out(&mut level.vector, &other.vector);
            any = true;
        }
        if any {
            normalise(&mut level.vector);
        }
    }
}

/// Refines again where two levels turned out closer than was assumed.
fn polish_clusters(chain: &Chain, factors: &mut Factors, levels: &mut [Found], scale: f64) {
    let rounding = 4.0 * f64::EPSILON * scale;
    let mut image = vec![0.0; chain.len()];
    for i in 0..levels.len() {
        let above = levels.get(i + 1).map_or(f64::INFINITY, |l| l.energy - levels[i].energy);
        let below = if i == 0 { f64::INFINITY } else { levels[i].energy - levels[i - 1].energy };
        let gap = above.min(below).max(rounding);
        if gap >= 0.3 * levels[i].gap || gap <= 1e3 * rounding {
            continue;
        }
        // A little beside the level, away from its neighbour, so that the solve stays regular.
        let share = (100.0 * rounding / gap).clamp(1e-4, 0.1);
        let beside = if above < below { -share * gap } else { share * gap };
        factors.factorise(chain, levels[i].energy + beside);
        let mut unwanted = 1.0;
        for _ in 0..14 {
            let (lower, rest) = levels.split_at_mut(i);
            let level = &mut rest[0];
            factors.solve(chain, &mut level.vector);
            if let Some(other) = lower.last().filter(|_| below <= above) {
                take_out(&mut level.vector, &other.vector);
            }
            normalise(&mut level.vector);
            unwanted *= share;
            if unwanted < FINISHED {
                break;
            }
        }
        let level = &mut levels[i];
        chain.apply(&level.vector, level.energy, &mut image);
        level.energy += dot(&level.vector, &image);
        level.gap = gap;
    }
}

/// Equal amounts of everything, with signs that no symmetry shares.
fn start_vector(chain: &Chain) -> Vec<f64> {
    let mut seed = 0x2545_f491_4f6c_dd1d_u64;
    (0..chain.len())
        .map(|_| {
            seed ^= seed << 13;
            seed ^= seed >> 7;
            seed ^= seed << 17;
            let sign = if seed & 1 == 0 { 1.0 } else { -1.0 };
            sign * (0.5 + (seed >> 11) as f64 / (1_u64 << 54) as f64)
        })
        .collect()
}
