//! Faults of a curve: points beside it, jumps and kinks between smooth branches.
//!
//! Every inner point and every gap is judged in windows of two widths and in two abscissae, r and
//! y = (r − r_0)/(r + r_0). A fault counts when it describes each of these windows better than any smooth
//! curve does; what a polynomial misses of a smooth curve differs from window to window, a fault does not.

use super::student;
use super::window::{Suited, Window};

/// Points per window.
const WIDTHS: [usize; 2] = [15, 21];
/// A point is beside the curve when chance puts one there in fewer scans than this share.
const CHANCE: f64 = 0.01;
/// How much better than a smooth curve a fault must describe its worst window, as a quotient of scores ...
const WORST: f64 = 0.7;
/// ... and the middle one of its windows, a point beside the curve, ...
const USUAL_OFF: f64 = 1.0;
/// ... or a jump or kink, which has more places to sit and more freedom.
const USUAL_BREAK: f64 = 2.4;
/// Faults smaller than this (hartree, 0.002 cm⁻¹) are below what calculations are converged to (common
/// practice, no source) and are left to the noise.
const NEGLIGIBLE_HARTREE: f64 = 1e-8;
/// Scatter below this is rounding (hartree).
const ROUNDING_HARTREE: f64 = 1e-12;
/// Scans longer than this are judged in one abscissa and one width, to bound the work.
const LONG: usize = 2_000;
/// Rounds of judging, each after what the one before has found is taken out.
const ROUNDS: usize = 8;
/// Most points that are called off: with more of them the scan as a whole is not smooth.
pub(super) const MOST_OFF: usize = 20;

/// A point beside the smooth curve through its neighbours.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct OffPoint {
    pub index: usize,
    /// Energy minus that of the smooth curve.
    pub deviation_hartree: f64,
    /// How often chance alone would do it, somewhere in a scan of so many points.
    pub chance: f64,
}

/// A gap between two points in which one smooth branch ends and another begins.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Break {
    /// Index of the last point before the gap.
    pub before: usize,
    /// What the second branch lies above the first in the middle of the gap.
    pub shift_hartree: f64,
    /// Slope of the second branch minus that of the first, in hartree/bohr.
    pub slope_change: f64,
    /// Where the branches cross, if they do in the gap (bohr).
    pub crossing_bohr: Option<f64>,
}

/// All faults found, ascending.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Faults {
    pub off: Vec<OffPoint>,
    pub breaks: Vec<Break>,
}

/// A suspicion with its weight.
#[derive(Clone, Copy)]
struct Suspect {
    fault: Fault,
    /// Position in the segment.
    at: usize,
    ratio: f64,
}

#[derive(Clone, Copy)]
enum Fault {
    Off(OffPoint),
    Break(Break),
}

/// Looks for faults. `r` ascending and distinct, `e` counted from the lowest.
pub(super) fn faults(r: &[f64], e: &[f64]) -> Faults {
    let mut found = Faults::default();
    let mut kept: Vec<usize> = (0..r.len()).collect();
    let most_off = (r.len() / 5).min(MOST_OFF);
    for _ in 0..ROUNDS {
        let mut new = false;
        let mut cuts: Vec<usize> = found.breaks.iter().map(|b| b.before).collect();
        cuts.sort_unstable();
        let mut rest: &[usize] = &kept;
        let mut segments = Vec::new();
        for cut in cuts {
            let at = rest.partition_point(|&i| i <= cut);
            segments.push(rest[..at].to_vec());
            rest = &rest[at..];
        }
        segments.push(rest.to_vec());
        for segment in segments {
            for suspect in judge(r, e, &segment) {
                match suspect.fault {
                    Fault::Off(off) if found.off.len() < most_off => {
                        found.off.push(off);
                        kept.retain(|&i| i != off.index);
                        new = true;
                    }
                    Fault::Break(b) if found.breaks.len() < MOST_OFF => {
                        found.breaks.push(b);
                        new = true;
                    }
                    _ => {}
                }
            }
        }
        if !new {
            break;
        }
    }
    found.off.sort_by_key(|o| o.index);
    found.breaks.sort_by_key(|b| b.before);
    found
}

/// A window length in one abscissa, with the scatter that its windows have in the middle.
struct View<'a> {
    x: &'a [f64],
    width: usize,
    noise: f64,
}

/// Suspects of a segment that do not disturb each other, the worst first.
fn judge(r_all: &[f64], e_all: &[f64], segment: &[usize]) -> Vec<Suspect> {
    let n = segment.len();
    if n < Window::FEWEST {
        return Vec::new();
    }
    let r: Vec<f64> = segment.iter().map(|&i| r_all[i]).collect();
    let e: Vec<f64> = segment.iter().map(|&i| e_all[i]).collect();
    let lowest = (0..n).min_by(|&a, &b| e[a].total_cmp(&e[b])).unwrap_or(0);
    let y: Vec<f64> = r.iter().map(|x| (x - r[lowest]) / (x + r[lowest])).collect();
    let mut widths = WIDTHS.map(|w| w.min(n)).to_vec();
    widths.dedup();
    let mut abscissae = vec![&r, &y];
    if n > LONG {
        widths.truncate(1);
        abscissae.truncate(1);
    }
    let mut spikes: Vec<Option<Point>> = vec![Some(Point::default()); n];
    let mut gaps: Vec<Gap> = vec![Gap::default(); n];
    let mut views = 0;
    // What the middle scatter of all windows is worth, about.
    let freedom = (n / 2).max(3);
    for x in abscissae {
        for &width in &widths {
            views += 1;
            let windows: Vec<Window> = (0..=n - width)
                .map(|s| Window::new(&x[s..s + width], &e[s..s + width], ROUNDING_HARTREE))
                .collect();
            let view =
                View { x, width, noise: middle(windows.iter().map(Window::scatter_hartree).collect()) };
            for i in 0..n {
                let start = i.saturating_sub(width / 2).min(n - width);
                let window = &windows[start];
                let smooth = window.smooth();
                judge_point(window, smooth, i - start, view.noise, &mut spikes[i]);
                // Two points at least on either side, or a branch is no branch.
                if n >= WIDTHS[0] && i >= 3 && i + 3 <= n {
                    let place = (i - start, &view.x[start..start + view.width]);
                    judge_gap(window, smooth, place, (view.noise, freedom), &mut gaps[i]);
                }
            }
        }
    }
    let mut suspects: Vec<Suspect> = Vec::new();
    for i in 1..n.saturating_sub(1) {
        if let Some(point) = &spikes[i] {
            let worst = point.ratios.iter().copied().fold(f64::INFINITY, f64::min);
            let chance = (n as f64 * student::two_sided(middle(point.t.clone()), freedom)).min(1.0);
            let usual = middle(point.ratios.clone());
            let sized = point.size_hartree.abs() > NEGLIGIBLE_HARTREE;
            if worst > WORST && usual > USUAL_OFF && chance < CHANCE && sized {
                let off = OffPoint { index: segment[i], deviation_hartree: point.size_hartree, chance };
                suspects.push(Suspect { fault: Fault::Off(off), at: i, ratio: usual });
            }
        }
        let gap = &gaps[i];
        if let Some((worst, suited, kink)) = gap.worst.filter(|_| gap.ratios.len() == views) {
            let found = as_break(&r, segment, i, suited, kink);
            let size = found.shift_hartree.abs().max(suited.size[1].abs());
            let usual = middle(gap.ratios.clone());
            let chance = n as f64 * middle(gap.chances.clone());
            if worst > WORST && usual > USUAL_BREAK && chance < CHANCE && size > NEGLIGIBLE_HARTREE {
                suspects.push(Suspect { fault: Fault::Break(found), at: i, ratio: usual });
            }
        }
    }
    suspects.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    let mut chosen: Vec<Suspect> = Vec::new();
    for suspect in suspects {
        let near = |c: &Suspect| c.at.abs_diff(suspect.at) < WIDTHS[1];
        if !chosen.iter().any(near) {
            chosen.push(suspect);
        }
    }
    chosen
}

/// How much better than a smooth curve one with a point beside it describes the windows around the point.
#[derive(Clone, Default)]
struct Point {
    ratios: Vec<f64>,
    t: Vec<f64>,
    size_hartree: f64,
}

fn judge_point(window: &Window, smooth: Suited, i: usize, noise: f64, so_far: &mut Option<Point>) {
    *so_far = so_far.take().zip(window.spike(i)).map(|(mut point, spike)| {
        point.ratios.push(smooth.score / spike.score);
        point.t.push(spike.t(noise));
        // The last view is that of the wider window in y, which follows a curve best.
        point.size_hartree = spike.size[0];
        point
    });
}

/// How much better than a smooth curve two branches describe the windows around a gap.
#[derive(Clone, Default)]
struct Gap {
    ratios: Vec<f64>,
    /// How often chance alone does it at this gap.
    chances: Vec<f64>,
    /// The smallest ratio, what suits there, and whether it has two slopes.
    worst: Option<(f64, Suited, bool)>,
}

fn judge_gap(
    window: &Window,
    smooth: Suited,
    (i, x): (usize, &[f64]),
    (noise, freedom): (f64, usize),
    gap: &mut Gap,
) {
    let jump = window.jump(i).map(|s| (s, false));
    let kink = window.kink(i, x).map(|s| (s, true));
    let better = jump.into_iter().chain(kink).min_by(|a, b| a.0.score.total_cmp(&b.0.score));
    if let Some((suited, kink)) = better {
        let ratio = smooth.score / suited.score;
        gap.ratios.push(ratio);
        let t = suited.t(noise);
        // One fault: Student's t; two at once: F with 2 and ν, which has a closed form.
        gap.chances.push(if kink {
            (1.0 + t * t / freedom as f64).powf(-0.5 * freedom as f64)
        } else {
            student::two_sided(t, freedom)
        });
        if gap.worst.is_none_or(|w| ratio < w.0) {
            gap.worst = Some((ratio, suited, kink));
        }
    }
}

fn as_break(r: &[f64], segment: &[usize], i: usize, suited: Suited, kink: bool) -> Break {
    let (middle, gap) = (0.5 * (r[i - 1] + r[i]), r[i] - r[i - 1]);
    let [shift, ramp] = suited.size;
    // Where shift + ramp (r − middle)/gap = 0; a little beyond the gap is still within the error.
    let crossing = middle - shift / ramp * gap;
    let inside = kink && (crossing - middle).abs() <= 0.75 * gap;
    Break {
        before: segment[i - 1],
        shift_hartree: shift,
        slope_change: if kink { ramp / gap } else { 0.0 },
        crossing_bohr: inside.then(|| crossing.clamp(r[i - 1], r[i])),
    }
}

/// The middle one of some values; 0 of none.
fn middle(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values.get(values.len() / 2).copied().unwrap_or(0.0)
}
