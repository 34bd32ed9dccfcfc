//! Polynomials in x, all degrees from one factorisation: the columns of a lower degree are the first of a higher one.

use super::{AtMinimum, QuickFits, WELL_CONDITIONED, numbers};
use crate::fit::qr::Qr;
use crate::fit::window_study::{ConstantsOf, WindowNumbers};

/// Coefficients of the highest degree offered.
pub(super) const MOST_COEFFICIENTS: usize = 13;

/// The powers of s = (r − r_e)/width with the right-hand side turned along.
pub(super) struct Powers {
    qr: Qr,
    /// Qᵀ sqrt(w) E.
    turned: Vec<f64>,
    s: Vec<f64>,
    width: f64,
    /// Columns factorised.
    columns: usize,
}

impl Powers {
    pub const fn empty() -> Self {
        Self { qr: Qr::empty(), turned: Vec::new(), s: Vec::new(), width: 1.0, columns: 0 }
    }

    /// False where a number is not finite.
    pub fn prepare(&mut self, r: &[f64], energy: &[f64], roots: &[f64], r_e: f64, highest: usize) -> bool {
        let n = r.len();
        self.width = (r_e - r[0]).abs().max((r[n - 1] - r_e).abs());
        self.s.clear();
        self.s.extend(r.iter().map(|r| (r - r_e) / self.width));
        self.turned.clear();
        self.turned.extend(energy.iter().zip(roots).map(|(e, root)| e * root));
        // An error needs a point more than there are coefficients.
        self.columns = (highest + 1).min(n - 1).min(MOST_COEFFICIENTS);
        let (s, columns) = (&self.s, self.columns);
        let filled = self.qr.refill(n, columns, |packed| {
            packed.extend_from_slice(roots);
            for k in n..n * columns {
                packed.push(packed[k - n] * s[k % n]);
            }
        });
        if filled {
            self.qr.transpose_times(&mut self.turned);
        }
        filled && self.turned.iter().all(|x| x.is_finite())
    }
}

impl QuickFits {
    /// The numbers of a polynomial of `degree`; none when the careful fit must decide: fewer spare points than an
    /// error needs, a number that is not finite, no minimum near r_e, dependent columns.
    pub fn polynomial(&mut self, degree: usize, constants: ConstantsOf<'_>) -> Option<WindowNumbers> {
        let (p, powers) = (degree + 1, &self.powers);
        if !self.plain || p > powers.columns || powers.qr.leading_condition(p) <= WELL_CONDITIONED {
            return None;
        }
        let mut storage = [0.0; MOST_COEFFICIENTS];
        let b = &mut storage[..p];
        b.copy_from_slice(&powers.turned[..p]);
        powers.qr.back_substitute(b);
        let s = &powers.s;
        let minimum = minimum(b, s[0], s[s.len() - 1])?;
        let value = |s: f64| b.iter().rev().fold(0.0, |sum, b| sum * s + b);
        self.residuals.clear();
        self.residuals.extend(s.iter().zip(&self.energy_hartree).map(|(&s, e)| value(s) - e));
        let at = at_minimum(b, minimum, self.r_e_bohr, powers);
        Some(numbers(&self.residuals, &self.weight, self.variance, &at, constants))
    }
}

/// The root of P′ that Newton's method reaches from s = 0, with P″ > 0 there and within the points.
fn minimum(b: &[f64], from: f64, to: f64) -> Option<f64> {
    let mut s = 0.0;
    for _ in 0..30 {
        let (mut value, mut slope, mut half_curvature) = (0.0, 0.0, 0.0);
        for &b in b.iter().rev() {
            half_curvature = half_curvature * s + slope;
            slope = slope * s + value;
            value = value * s + b;
        }
        if !(half_curvature > 0.0 && (from..=to).contains(&s)) {
            return None;
        }
        let step = slope / (2.0 * half_curvature);
        s -= step;
        if step.abs() <= 4.0 * f64::EPSILON {
            return Some(s).filter(|s| (from..=to).contains(s));
        }
    }
    None
}

fn at_minimum<'a>(b: &[f64], s: f64, r_e_bohr: f64, powers: &'a Powers) -> AtMinimum<'a> {
    let p = b.len();
    // Taylor coefficients at s by repeated division by (s′ − s); zero beyond the degree.
    let mut taylor = [0.0; MOST_COEFFICIENTS + 1];
    taylor[..p].copy_from_slice(b);
    for m in 0..p.min(6) {
        for k in (m..p - 1).rev() {
            taylor[k] += s * taylor[k + 1];
        }
    }
    // binomials[m][k] = C(k, m) s^(k−m) = ∂ taylor[m]/∂ b[k].
    let mut binomials = [[0.0; MOST_COEFFICIENTS]; 5];
    binomials[0][0] = 1.0;
    for k in 1..p {
        binomials[0][k] = s * binomials[0][k - 1];
        for m in 1..5 {
            binomials[m][k] = s * binomials[m][k - 1] + binomials[m - 1][k - 1];
        }
    }
    let mut values = [r_e_bohr + powers.width * s, 0.0, 0.0, 0.0];
    let mut gradients = [[0.0; MOST_COEFFICIENTS]; 4];
    // P′(s) = 0 moves with b[k]: ∂s/∂b[k] = −k s^(k−1)/P″(s).
    let s_by_b = |k: usize| -binomials[1][k] / (2.0 * taylor[2]);
    gradients[0][..p].iter_mut().enumerate().for_each(|(k, g)| *g = powers.width * s_by_b(k));
    let (mut factorial, mut power) = (1.0, powers.width);
    for m in 2..5 {
        factorial *= m as f64;
        power *= powers.width;
        let (factor, next) = (factorial / power, (m + 1) as f64 * taylor[m + 1]);
        values[m - 1] = factor * taylor[m];
        for (k, g) in gradients[m - 1][..p].iter_mut().enumerate() {
            *g = factor * (binomials[m][k] + next * s_by_b(k));
        }
    }
    AtMinimum { values, gradients, columns: p, qr: &powers.qr }
}
