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
    fn standard(&self) -> f64 {
        (self.rss / self.freedom as f64).sqrt()
    }

    /// Size of the fault over its standard error, the scatter being that of the window or `noise`,
    /// whichever is larger.
    pub(super) fn t(&self, noise: f64) -> f64 {
        ((self.rss_smooth - self.rss).max(0.0)).sqrt() / self.standard().max(noise)
    }
}

/// The descriptions of a window, judged.
pub(super) struct Window {
    /// Residuals of the points after each degree.
    residuals: Vec<Vec<f64>>,
    /// Orthonormal polynomials.
    basis: Vec<Vec<f64>>,
    /// A residual sum below this is rounding.
    floor: f64,
}

impl Window {
    /// Points per window that are needed.
    pub(super) const FEWEST: usize = LOWEST_DEGREE + FREE + 2;

    pub(super) fn new(x: &[f64], e: &[f64], rounding: f64) -> Self {
        let m = x.len();
        let (low, high) = (x[0], x[m - 1]);
        let u: Vec<f64> = x.iter().map(|x| (2.0 * x - low - high) / (high - low)).collect();
        let mut basis: Vec<Vec<f64>> = vec![vec![1.0 / (m as f64).sqrt(); m]];
        while basis.len() <= m - FREE {
            let last = &basis[basis.len() - 1];
            let mut next: Vec<f64> = last.iter().zip(&u).map(|(p, u)| p * u).collect();
            for p in &basis {
                remove(&mut next, p);
            }
            let norm = dot(&next, &next).sqrt();
            next.iter_mut().for_each(|v| *v /= norm);
            basis.push(next);
        }
        let mean = e.iter().sum::<f64>() / m as f64;
        let mut residual: Vec<f64> = e.iter().map(|e| e - mean).collect();
        let residuals = basis.iter().map(|p| {
            remove(&mut residual, p);
            residual.clone()
        });
        let floor = m as f64 * rounding * rounding;
        Self { residuals: residuals.collect(), basis, floor }
    }

    fn points(&self) -> usize {
        self.basis[0].len()
    }

    fn suited(&self, degree: usize, columns: usize, rss: f64, size: [f64; 2]) -> Suited {
        let m = self.points() as f64;
        let k = (degree + 2 + columns) as f64;
        let rss = rss.max(self.floor);
        let residual = &self.residuals[degree];
        Suited {
            score: rss * ((2.0 * k + 2.0 * k * (k + 1.0) / (m - k - 1.0)) / m).exp(),
            rss,
            rss_smooth: dot(residual, residual),
            freedom: self.points() - degree - 1 - columns,
            size,
        }
    }

    fn degrees(&self) -> std::ops::RangeInclusive<usize> {
        LOWEST_DEGREE..=self.points() - FREE
    }

    /// One smooth curve.
    pub(super) fn smooth(&self) -> Suited {
        let of = |q: usize| self.suited(q, 0, dot(&self.residuals[q], &self.residuals[q]), [0.0; 2]);
        best(self.degrees().map(of)).unwrap_or_else(|| of(LOWEST_DEGREE))
    }

    /// A smooth curve with point i beside it.
    pub(super) fn spike(&self, i: usize) -> Option<Suited> {
        let mut free: f64 = 1.0;
        let mut found: Option<Suited> = None;
        for (q, p) in self.basis.iter().enumerate() {
            free -= p[i] * p[i];
            if q >= LOWEST_DEGREE && free > SEEN {
                let residual = &self.residuals[q];
                let rss = dot(residual, residual) - residual[i] * residual[i] / free;
                let this = self.suited(q, 1, rss, [residual[i] / free, 0.0]);
                if found.is_none_or(|f| this.score < f.score) {
                    found = Some(this);
                }
            }
        }
        found
    }

    /// A smooth curve on which all points from i on are shifted by one value.
    pub(super) fn jump(&self, i: usize) -> Option<Suited> {
        self.columns(vec![step(self.points(), i)])
    }

    /// Two branches with different value and slope, parted between points i − 1 and i. The second size is the
    /// change of slope times the width of that gap, the first the shift in the middle of it.
    pub(super) fn kink(&self, i: usize, x: &[f64]) -> Option<Suited> {
        let (middle, gap) = (0.5 * (x[i - 1] + x[i]), x[i] - x[i - 1]);
        let ramp = x.iter().map(|x| ((x - middle) / gap).max(0.0)).collect();
        self.columns(vec![step(self.points(), i), ramp])
    }

    fn columns(&self, mut columns: Vec<Vec<f64>>) -> Option<Suited> {
        let length: Vec<f64> = columns.iter().map(|c| dot(c, c)).collect();
        let mut found: Option<Suited> = None;
        for (q, p) in self.basis.iter().enumerate() {
            columns.iter_mut().for_each(|c| remove(c, p));
            if q < LOWEST_DEGREE {
                continue;
            }
            let seen = |c: &[f64], length: f64| dot(c, c) > SEEN * SEEN * length;
            let residual = &self.residuals[q];
            let rss = dot(residual, residual);
            let first = &columns[0];
            if !seen(first, length[0]) {
                continue;
            }
            let (aa, ar) = (dot(first, first), dot(first, residual));
            let this = match columns.get(1) {
                None => self.suited(q, 1, rss - ar * ar / aa, [ar / aa, 0.0]),
                Some(second) => {
                    let (ab, bb, br) = (dot(first, second), dot(second, second), dot(second, residual));
                    let free = aa * bb - ab * ab;
                    if !seen(second, length[1]) || free < 1e-6 * aa * bb {
                        continue;
                    }
                    let (a, b) = ((bb * ar - ab * br) / free, (aa * br - ab * ar) / free);
                    self.suited(q, 2, rss - a * ar - b * br, [a, b])
                }
            };
            if found.is_none_or(|f| this.score < f.score) {
                found = Some(this);
            }
        }
        found
    }

    /// Scatter of the window in hartree, one point being allowed to lie beside the curve.
    pub(super) fn scatter_hartree(&self) -> f64 {
        let spikes = (0..self.points()).filter_map(|i| self.spike(i));
        best(spikes.chain([self.smooth()])).map_or(0.0, |b| b.standard())
    }
}

fn best(all: impl Iterator<Item = Suited>) -> Option<Suited> {
    all.min_by(|a, b| a.score.total_cmp(&b.score))
}

fn step(points: usize, from: usize) -> Vec<f64> {
    (0..points).map(|k| if k < from { 0.0 } else { 1.0 }).collect()
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// Takes the share along a unit vector out.
fn remove(from: &mut [f64], unit: &[f64]) {
    let share = dot(from, unit);
    from.iter_mut().zip(unit).for_each(|(v, u)| *v -= share * u);
}
