//! One window of neighbouring points: which description suits it best, a smooth curve, one with a point
//! beside it, or two smooth branches.
//!
//! Descriptions are polynomials of degree 3 and up; each costs what the corrected Akaike criterion says
//! [Hurvich and Tsai 1989]. So the degree that a smooth curve needs is found from the points themselves, and
//! a fault is believed only where it explains more than higher degrees do.

/// Lowest degree of a description.
const LOWEST_DEGREE: usize = 3;
/// Points that the highest degree leaves free.
const FREE: usize = 6;
/// A column that the polynomials contain to more than this share cannot be told from them.
const SEEN: f64 = 1e-3;
/// Most points of a window, padded with zeros to whole lanes.
const MOST_POINTS: usize = 24;
/// Most degrees, zero counted.
const MOST_DEGREES: usize = MOST_POINTS - FREE + 1;
/// Sums run in this many lanes, so that the machine can add several at once.
const LANES: usize = 4;

type Row = [f64; MOST_POINTS];

/// How well a description suits.
#[derive(Clone, Copy, Debug)]
pub(super) struct Suited {
    /// S exp((2K + 2K(K+1)/(m−K−1))/m): the smaller the better, in hartree².
    pub score: f64,
    /// Sum of the squared residuals.
    rss: f64,
    /// The same without the fault.
    rss_smooth: f64,
    /// Points minus parameters.
    freedom: usize,
    /// What the fault adds to the energies, in hartree, per column.
    pub size: [f64; 2],
}

impl Suited {
    /// Scatter of the points about the description, in hartree.
    pub(super) fn standard(&self) -> f64 {
        (self.rss / self.freedom as f64).sqrt()
    }

    /// Root of what the fault takes from the sum of squares, in hartree: over the scatter it is Student's t.
    pub(super) fn gain(&self) -> f64 {
        (self.rss_smooth - self.rss).max(0.0).sqrt()
    }
}

/// The descriptions of a window, judged. One value serves many windows of one length, one after the other.
pub(super) struct Window {
    points: usize,
    /// Energies scatter by this much through rounding alone (hartree).
    rounding: f64,
    /// What a description with so many parameters costs, as a factor on the sum of squares.
    cost: [f64; MOST_POINTS],
    /// Orthonormal polynomials of the points' abscissae, zero beyond the points.
    basis: [Row; MOST_DEGREES],
    /// Residuals of the points after each degree, and the sums of their squares.
    residuals: [Row; MOST_DEGREES],
    rss: [f64; MOST_DEGREES],
}

impl Window {
    /// Points per window that are needed.
    pub(super) const FEWEST: usize = LOWEST_DEGREE + FREE + 2;

    /// For windows of so many points, [`Self::FEWEST`] to 24.
    pub(super) fn new(points: usize, rounding_hartree: f64) -> Self {
        debug_assert!((Self::FEWEST..=MOST_POINTS).contains(&points));
        let m = points as f64;
        let mut cost = [f64::INFINITY; MOST_POINTS];
        for (k, cost) in cost.iter_mut().enumerate().take(points - 1) {
            let k = k as f64;
            *cost = ((2.0 * k + 2.0 * k * (k + 1.0) / (m - k - 1.0)) / m).exp();
        }
        Self {
            points,
            rounding: rounding_hartree,
            cost,
            basis: [[0.0; MOST_POINTS]; MOST_DEGREES],
            residuals: [[0.0; MOST_POINTS]; MOST_DEGREES],
            rss: [0.0; MOST_DEGREES],
        }
    }

    /// Looks at these points: abscissae ascending and distinct, energies beside them.
    ///
    /// The polynomials come from their three-term recurrence, which stays orthogonal to 1e-12 for so few points.
    pub(super) fn look_at(&mut self, x: &[f64], e: &[f64]) {
        let m = self.points;
        let padded = m.next_multiple_of(LANES);
        let (low, high) = (x[0], x[m - 1]);
        let mut u: Row = [0.0; MOST_POINTS];
        let mut residual: Row = [0.0; MOST_POINTS];
        let mean = e.iter().sum::<f64>() / m as f64;
        for k in 0..m {
            u[k] = (2.0 * x[k] - low - high) / (high - low);
            residual[k] = e[k] - mean;
        }
        let flat = 1.0 / (m as f64).sqrt();
        let mut last: Row = [0.0; MOST_POINTS];
        last[..m].fill(flat);
        let mut before: Row = [0.0; MOST_POINTS];
        let mut beta = 0.0;
        for degree in 0..=m - FREE {
            let share = dot(&residual[..padded], &last[..padded]);
            for k in 0..padded {
                residual[k] -= share * last[k];
            }
            self.basis[degree] = last;
            self.residuals[degree] = residual;
            self.rss[degree] = dot(&residual[..padded], &residual[..padded]);
            let mut next: Row = [0.0; MOST_POINTS];
            for k in 0..padded {
                next[k] = u[k] * last[k];
            }
            let alpha = dot(&next[..padded], &last[..padded]);
            for k in 0..padded {
                next[k] -= alpha * last[k] + beta * before[k];
            }
            beta = dot(&next[..padded], &next[..padded]).sqrt();
            let scale = beta.recip();
            for value in &mut next[..padded] {
                *value *= scale;
            }
            before = last;
            last = next;
        }
    }

    fn suited(&self, degree: usize, columns: usize, rss: f64, size: [f64; 2]) -> Suited {
        let rss = rss.max(self.points as f64 * self.rounding * self.rounding);
        Suited {
            score: rss * self.cost[degree + 2 + columns],
            rss,
            rss_smooth: self.rss[degree],
            freedom: self.points - degree - 1 - columns,
            size,
        }
    }

    fn degrees(&self) -> std::ops::RangeInclusive<usize> {
        LOWEST_DEGREE..=self.points - FREE
    }

    /// One smooth curve.
    pub(super) fn smooth(&self) -> Suited {
        let of = |q: usize| self.suited(q, 0, self.rss[q], [0.0; 2]);
        best(self.degrees().map(of)).unwrap_or_else(|| of(LOWEST_DEGREE))
    }

    /// A smooth curve with point i beside it.
    pub(super) fn spike(&self, i: usize) -> Option<Suited> {
        let mut free = 1.0 - (0..LOWEST_DEGREE).map(|q| self.basis[q][i].powi(2)).sum::<f64>();
        best(self.degrees().filter_map(|q| {
            free -= self.basis[q][i] * self.basis[q][i];
            let residual = self.residuals[q][i];
            let rss = self.rss[q] - residual * residual / free;
            (free > SEEN).then(|| self.suited(q, 1, rss, [residual / free, 0.0]))
        }))
    }

    /// A smooth curve on which all points from i on are shifted by one value, and two branches with different
    /// value and slope, parted between points i − 1 and i. Of the latter the second size is the change of
    /// slope times the width of that gap, the first the shift in the middle of it.
    pub(super) fn branches(&self, i: usize, x: &[f64]) -> [Option<Suited>; 2] {
        let (middle, gap) = (0.5 * (x[i - 1] + x[i]), x[i] - x[i - 1]);
        let mut ramp: Row = [0.0; MOST_POINTS];
        for k in i..self.points {
            ramp[k] = (x[k] - middle) / gap;
        }
        let from_i = |row: &Row| row[i..self.points].iter().sum::<f64>();
        let along_ramp = |row: &Row| {
            row[i..self.points].iter().zip(&ramp[i..self.points]).map(|(a, b)| a * b).sum::<f64>()
        };
        let whole = [(self.points - i) as f64, along_ramp(&ramp)];
        // Products of the two columns, step and ramp, once the polynomials are taken out of them.
        let [mut aa, mut bb] = whole;
        let mut ab = from_i(&ramp);
        let (mut jump, mut kink) = (None, None);
        for (q, p) in self.basis.iter().enumerate().take(self.points - FREE + 1) {
            let (a, b) = (from_i(p), along_ramp(p));
            aa -= a * a;
            bb -= b * b;
            ab -= a * b;
            if q < LOWEST_DEGREE || aa <= SEEN * SEEN * whole[0] {
                continue;
            }
            let (ar, br) = (from_i(&self.residuals[q]), along_ramp(&self.residuals[q]));
            keep_better(&mut jump, self.suited(q, 1, self.rss[q] - ar * ar / aa, [ar / aa, 0.0]));
            let free = aa * bb - ab * ab;
            if bb > SEEN * SEEN * whole[1] && free >= 1e-6 * aa * bb {
                let (a, b) = ((bb * ar - ab * br) / free, (aa * br - ab * ar) / free);
                keep_better(&mut kink, self.suited(q, 2, self.rss[q] - a * ar - b * br, [a, b]));
            }
        }
        [jump, kink]
    }

    /// Scatter of the window in hartree, one point being allowed to lie beside the curve.
    pub(super) fn scatter_hartree(&self) -> f64 {
        let spikes = (0..self.points).filter_map(|i| self.spike(i));
        best(spikes.chain([self.smooth()])).map_or(0.0, |b| b.standard())
    }
}

fn best(all: impl Iterator<Item = Suited>) -> Option<Suited> {
    all.min_by(|a, b| a.score.total_cmp(&b.score))
}

fn keep_better(so_far: &mut Option<Suited>, this: Suited) {
    if so_far.is_none_or(|s| this.score < s.score) {
        *so_far = Some(this);
    }
}

/// Of whole lanes.
fn dot(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; LANES];
    for (a, b) in a.chunks_exact(LANES).zip(b.chunks_exact(LANES)) {
        for (sum, (a, b)) in sums.iter_mut().zip(a.iter().zip(b)) {
            *sum += a * b;
        }
    }
    (sums[0] + sums[1]) + (sums[2] + sums[3])
}
