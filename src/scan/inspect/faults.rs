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
/// How much better than a smooth curve a fault must describe its windows, as a quotient of scores.
#[derive(Clone, Copy)]
struct Limits {
    /// The worst window.
    worst: f64,
    /// The middle one.
    usual: f64,
}

/// A point beside the curve.
const OFF: Limits = Limits { worst: 0.7, usual: 1.0 };
/// A jump or kink, which has more places to sit and more freedom.
const BREAK: Limits = Limits { worst: 0.4, usual: 1.6 };
/// The same once a point beside it is taken out, with which part of it goes.
const STILL_A_BREAK: Limits = Limits { worst: 0.4, usual: 1.0 };
/// Faults smaller than this (hartree, 0.002 cm⁻¹) are below what calculations are converged to (common
/// practice, no source) and are left to the noise.
const NEGLIGIBLE_HARTREE: f64 = 1e-8;
/// A break smaller than this (0.02 cm⁻¹) parts no two states and no two solutions: where points stand coarse on a steep
/// wall, windows of few points see as much where there is none.
const NEGLIGIBLE_BREAK_HARTREE: f64 = 1e-7;
/// Scatter below this is rounding (hartree).
const ROUNDING_HARTREE: f64 = 1e-12;
/// Scans longer than this are judged in one abscissa and one width, and after the first round only around
/// what the round before has found: it bounds the work.
const LONG: usize = 2_000;
/// With more degrees of freedom than this Student's distribution is the normal one in all that matters here.
const MOST_FREEDOM: usize = 1_000;
/// Rounds of judging, each after what the one before has found is taken out.
const ROUNDS: usize = 8;
/// Points to each side of a break within which it is looked for again.
const BESIDE: usize = 3;
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
    // Where the last round has changed something.
    let mut changed: Option<Vec<usize>> = None;
    for _ in 0..ROUNDS {
        let mut new = Vec::new();
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
            let asked = |i: usize| match &changed {
                Some(changed) if r.len() > LONG => changed.iter().any(|c| c.abs_diff(i) <= 2 * WIDTHS[1]),
                _ => true,
            };
            for suspect in judge(r, e, &segment, asked) {
                match suspect.fault {
                    Fault::Off(off) if found.off.len() < most_off => {
                        found.off.push(off);
                        kept.retain(|&i| i != off.index);
                        new.push(off.index);
                    }
                    Fault::Break(b) if found.breaks.len() < MOST_OFF => {
                        found.breaks.push(b);
                        new.push(b.before);
                    }
                    _ => {}
                }
            }
        }
        if new.is_empty() {
            break;
        }
        changed = Some(new);
    }
    found.off.sort_by_key(|o| o.index);
    found.breaks.sort_by_key(|b| b.before);
    found
}

/// A window length in one abscissa, and the scatter that its windows have in the middle once it was asked for.
struct View<'a> {
    x: &'a [f64],
    width: usize,
    noise: Option<f64>,
}

impl View<'_> {
    /// The middle scatter (hartree). Of many windows a sample tells it as well.
    fn noise(&mut self, e: &[f64]) -> f64 {
        *self.noise.get_or_insert_with(|| {
            let mut window = Window::new(self.width, ROUNDING_HARTREE);
            let starts = (0..=self.x.len() - self.width).step_by(self.x.len() / LONG + 1);
            let scatter = starts.map(|s| {
                window.look_at(&self.x[s..s + self.width], &e[s..s + self.width]);
                window.scatter_hartree()
            });
            middle(scatter.collect())
        })
    }
}

/// Suspects of a segment that do not disturb each other, the worst first. Only places are judged that
/// `asked` names, by their index in the whole scan.
///
/// A point beside the curve looks like a break next to it as well. What tells is the curve without the point:
/// a break is still there.
fn judge(r: &[f64], e: &[f64], segment: &[usize], asked: impl Fn(usize) -> bool) -> Vec<Suspect> {
    let mut all = suspects(r, e, segment, asked, BREAK);
    let is_break = |s: &Suspect| matches!(s.fault, Fault::Break(_));
    let points: Vec<usize> = all.iter().filter(|s| !is_break(s)).map(|s| s.at).collect();
    for point in points {
        let beside = |s: &Suspect| is_break(s) && s.at.abs_diff(point) <= BESIDE;
        if !all.iter().any(beside) {
            continue;
        }
        let mut rest = segment.to_vec();
        let taken_out = rest.remove(point);
        let near = |i: usize| i.abs_diff(taken_out) <= BESIDE;
        let still = suspects(r, e, &rest, near, STILL_A_BREAK).iter().any(is_break);
        all.retain(|s| if still { is_break(s) || s.at != point } else { !beside(s) });
    }
    apart(all)
}

/// All suspects of a segment.
///
/// Whoever looks innocent in one view is not looked at in the next ones, and the scatter of all windows is
/// computed only when somebody is left to be held against it: nearly always nobody is.
fn suspects(
    r_all: &[f64],
    e_all: &[f64],
    segment: &[usize],
    asked: impl Fn(usize) -> bool,
    breaks: Limits,
) -> Vec<Suspect> {
    let n = segment.len();
    if n < Window::FEWEST {
        return Vec::new();
    }
    let r: Vec<f64> = segment.iter().map(|&i| r_all[i]).collect();
    let e: Vec<f64> = segment.iter().map(|&i| e_all[i]).collect();
    let lowest = (0..n).min_by(|&a, &b| e[a].total_cmp(&e[b])).unwrap_or(0);
    let y: Vec<f64> = r.iter().map(|x| (x - r[lowest]) / (x + r[lowest])).collect();
    let widths = WIDTHS.map(|w| w.min(n));
    let view = |x, width| View { x, width, noise: None };
    // The last one follows a curve best: it tells the size of a point's deviation.
    let mut views = match (n > LONG, widths[0] == widths[1]) {
        (true, _) => vec![view(r.as_slice(), widths[0])],
        (_, true) => vec![view(&r, widths[0]), view(&y, widths[0])],
        _ => vec![view(&y, widths[0]), view(&r, widths[0]), view(&r, widths[1]), view(&y, widths[1])],
    };
    let in_question = |i: usize| asked(segment[i]);
    let mut spikes: Vec<Case> = (1..n - 1).filter(|&i| in_question(i)).map(Case::new).collect();
    let mut gaps: Vec<Case> = Vec::new();
    if n >= WIDTHS[0] {
        // Two points at least on either side, or a branch is no branch.
        gaps.extend((3..=n - 3).filter(|&i| in_question(i)).map(Case::new));
    }
    let count = views.len();
    for view in &views {
        look(view, &e, &mut spikes, &mut gaps);
        spikes.retain(|case| case.is_open(count, OFF));
        gaps.retain(|case| case.is_open(count, breaks));
    }
    // What the middle scatter of all windows is worth, about.
    let freedom = (n / 2).clamp(3, MOST_FREEDOM);
    let mut suspects: Vec<Suspect> = Vec::new();
    // First without the scatter of the other windows, which only makes a suspect look more innocent.
    // A point is judged by the better of the two middle views, a break, which has more freedom, by the worse.
    let mut chance = |case: &Case, middle: usize| {
        let own = n as f64 * case.chances(freedom, &mut |_| 0.0)[middle];
        if own >= CHANCE {
            return own;
        }
        n as f64 * case.chances(freedom, &mut |view| views[view].noise(&e))[middle]
    };
    let (better, worse) = ((count - 1) / 2, count / 2);
    for case in &spikes {
        let Some(last) = case.views.last() else { continue };
        let deviation_hartree = last.suited.size[0];
        if deviation_hartree.abs() <= NEGLIGIBLE_HARTREE {
            continue;
        }
        let chance = chance(case, better);
        if chance < CHANCE {
            let off = OffPoint { index: segment[case.at], deviation_hartree, chance };
            suspects.push(Suspect { fault: Fault::Off(off), at: case.at, ratio: case.usual() });
        }
    }
    for case in &gaps {
        let Some(worst) = case.worst() else { continue };
        let found = as_break(&r, segment, case.at, worst.suited, worst.kink);
        let size = found.shift_hartree.abs().max(worst.suited.size[1].abs());
        if size > NEGLIGIBLE_BREAK_HARTREE && chance(case, worse) < CHANCE {
            suspects.push(Suspect { fault: Fault::Break(found), at: case.at, ratio: case.usual() });
        }
    }
    suspects
}

/// The worst suspects, each far enough from the worse ones, no more of a kind than can be called faults.
fn apart(mut suspects: Vec<Suspect>) -> Vec<Suspect> {
    suspects.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    let mut chosen: Vec<Suspect> = Vec::new();
    let mut left = [MOST_OFF; 2];
    for suspect in suspects {
        let left = &mut left[usize::from(matches!(suspect.fault, Fault::Break(_)))];
        let near = |c: &Suspect| c.at.abs_diff(suspect.at) < WIDTHS[1];
        if *left > 0 && !chosen.iter().any(near) {
            *left -= 1;
            chosen.push(suspect);
        }
    }
    chosen
}

/// A place under suspicion: a point that may lie beside the curve, or a gap (before the point) that may
/// part two branches.
struct Case {
    at: usize,
    /// What each view has shown so far.
    views: Vec<Seen>,
    /// No description with the fault was possible in some view.
    closed: bool,
}

/// How much better than a smooth curve the fault describes a window.
#[derive(Clone, Copy)]
struct Seen {
    /// Score of the smooth curve over that of the fault.
    ratio: f64,
    suited: Suited,
    /// Whether two slopes describe it best.
    kink: bool,
}

impl Case {
    fn new(at: usize) -> Self {
        Self { at, views: Vec::new(), closed: false }
    }

    fn add(&mut self, smooth: Suited, fault: Option<(Suited, bool)>) {
        match fault {
            Some((suited, kink)) => {
                self.views.push(Seen { ratio: smooth.score / suited.score, suited, kink });
            }
            None => self.closed = true,
        }
    }

    /// Whether the worst and the middle one of so many views may still be above their limits.
    fn is_open(&self, views: usize, limits: Limits) -> bool {
        !self.closed
            && self.views.iter().all(|v| v.ratio > limits.worst)
            && self.views.iter().filter(|v| v.ratio <= limits.usual).count() <= views / 2
    }

    /// The middle ratio.
    fn usual(&self) -> f64 {
        middle(self.views.iter().map(|v| v.ratio).collect())
    }

    /// The view in which the fault explains least.
    fn worst(&self) -> Option<&Seen> {
        self.views.iter().min_by(|a, b| a.ratio.total_cmp(&b.ratio))
    }

    /// Probabilities that chance does it at one place, a view each, ascending. The scatter is that of the
    /// window or the one given for the view, whichever is larger.
    fn chances(&self, freedom: usize, noise: &mut dyn FnMut(usize) -> f64) -> Vec<f64> {
        let of = |(view, seen): (usize, &Seen)| {
            let t = seen.suited.gain() / seen.suited.standard().max(noise(view));
            // One fault: Student's t; two at once: F with 2 and ν, which has a closed form.
            if seen.kink {
                (1.0 + t * t / freedom as f64).powf(-0.5 * freedom as f64)
            } else {
                student::two_sided(t, freedom)
            }
        };
        let mut chances: Vec<f64> = self.views.iter().enumerate().map(of).collect();
        chances.sort_by(f64::total_cmp);
        chances
    }
}

/// Looks at all open cases, each in the window around it.
fn look(view: &View, e: &[f64], spikes: &mut [Case], gaps: &mut [Case]) {
    let (n, width) = (view.x.len(), view.width);
    let mut window = Window::new(width, ROUNDING_HARTREE);
    let mut seen = usize::MAX;
    let (mut spikes, mut gaps) = (spikes.iter_mut().peekable(), gaps.iter_mut().peekable());
    let mut smooth = None;
    loop {
        let next = [spikes.peek().map(|c| c.at), gaps.peek().map(|c| c.at)];
        let Some(at) = next.into_iter().flatten().min() else { break };
        let start = at.saturating_sub(width / 2).min(n - width);
        let x = &view.x[start..start + width];
        if start != seen {
            window.look_at(x, &e[start..start + width]);
            smooth = None;
            seen = start;
        }
        let smooth = *smooth.get_or_insert_with(|| window.smooth());
        if let Some(case) = spikes.next_if(|c| c.at == at) {
            case.add(smooth, window.spike(at - start).map(|s| (s, false)));
        }
        if let Some(case) = gaps.next_if(|c| c.at == at) {
            let [jump, kink] = window.branches(at - start, x);
            let both = jump.map(|s| (s, false)).into_iter().chain(kink.map(|s| (s, true)));
            case.add(smooth, both.min_by(|a, b| a.0.score.total_cmp(&b.0.score)));
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
