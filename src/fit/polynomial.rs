//! Polynomials about their own minimum, solved as ordinary linear least squares.
//!
//! In x, ξ and z = (r − r_e)/r the functions of degree N span the same space wherever the variable is
//! centred. So the fit runs linearly about the lowest point; its minimum is then found, and parameters
//! and covariance are carried over exactly: it is the same fit, not a second one.

use super::FitError;
use super::data::Data;
use super::linear::{self, Design, LinearSolution};
use super::precise::Precise;
use crate::potential::{Variable, real_roots};

/// A polynomial fit, energies counted from the zero of the data.
#[derive(Clone, Debug)]
pub(crate) struct PolynomialFit {
    /// e_min, r_e, c_2, c_3, ... in atomic units.
    pub values: Vec<f64>,
    /// ∂values/∂(linear coefficients).
    pub jacobian: Vec<Vec<f64>>,
    /// The linear solution it stands on.
    pub linear: LinearSolution,
}

/// The linear variable s, affine in the expansion variable: s = (r − r_c)/w, or (1 − r_c/r)/w for z.
#[derive(Clone, Copy)]
struct Centre {
    variable: Variable,
    r_c: f64,
    width: f64,
}

impl Centre {
    fn s(self, r: f64) -> Precise {
        // The abscissae are formed in plain doubles and then taken as exact: an error of one rounding in s
        // is an error of one rounding in r, while errors of single powers would not cancel.
        let x = r - self.r_c;
        Precise::new(if self.variable == Variable::Z { x / r } else { x } / self.width)
    }

    /// r_e and its derivative by s at the minimum.
    fn r_e(self, s: f64) -> (f64, f64) {
        if self.variable == Variable::Z {
            let r_e = self.r_c / (1.0 - self.width * s);
            (r_e, r_e * r_e * self.width / self.r_c)
        } else {
            (self.r_c + self.width * s, self.width)
        }
    }

    /// g with c_m = C_m gᵐ (C_m the Taylor coefficients in s), and its derivative by s at the minimum.
    fn factor(self, r_e: f64) -> (f64, f64) {
        match self.variable {
            Variable::Xi => (r_e / self.width, 1.0),
            Variable::Z => (self.r_c / (self.width * r_e), -1.0),
            Variable::X | Variable::Ogilvie => (1.0 / self.width, 0.0),
        }
    }
}

/// Fits a polynomial of `degree` in `variable` (x, ξ or z; the Ogilvie variable is not linear).
///
/// # Errors
/// Too few or dependent points, or no minimum between the first and the last point.
pub(crate) fn fit(data: &Data, variable: Variable, degree: usize) -> Result<PolynomialFit, FitError> {
    let n = data.len();
    if n < degree + 1 {
        return Err(FitError::TooFewPoints { points: n, needed: degree + 1 });
    }
    let r_c = data.r_bohr[data.lowest()];
    let mut centre = Centre { variable, r_c, width: 1.0 };
    centre.width = data.r_bohr.iter().map(|&r| centre.s(r).hi.abs()).fold(0.0, f64::max);
    let s: Vec<Precise> = data.r_bohr.iter().map(|&r| centre.s(r)).collect();
    let linear = linear::solve(&Design::powers(&s, degree), &data.energy_hartree, &data.weight)?;
    let minimum = lowest_minimum(&linear.coefficients, s[0].hi, s[n - 1].hi).ok_or(FitError::NoMinimum)?;
    let (values, jacobian) = about_minimum(&linear.coefficients, minimum, centre);
    Ok(PolynomialFit { values, jacobian, linear })
}

/// The lowest point with P′ = 0 and P″ > 0 in [from, to].
fn lowest_minimum(b: &[f64], from: f64, to: f64) -> Option<f64> {
    let slope: Vec<f64> = b.iter().enumerate().skip(1).map(|(k, b)| k as f64 * b).collect();
    real_roots(&slope, from, to)
        .into_iter()
        .filter(|&s| taylor(b, s, 2) > 0.0)
        .min_by(|&a, &b_| taylor(b, a, 0).total_cmp(&taylor(b, b_, 0)))
}

/// P⁽ᵐ⁾(s)/m!.
fn taylor(b: &[f64], s: f64, m: usize) -> f64 {
    b.iter().enumerate().skip(m).rev().fold(0.0, |sum, (k, b)| sum * s + binomial(k, m) * b)
}

fn binomial(k: usize, m: usize) -> f64 {
    (0..m).fold(1.0, |product, i| product * (k - i) as f64 / (i + 1) as f64)
}

/// e_min, r_e, c_2 ... about the minimum at s, and their derivatives by the coefficients b.
fn about_minimum(b: &[f64], s: f64, centre: Centre) -> (Vec<f64>, Vec<Vec<f64>>) {
    let count = b.len();
    let (r_e, r_e_by_s) = centre.r_e(s);
    let (g, g_by_s) = centre.factor(r_e);
    let curvature = 2.0 * taylor(b, s, 2);
    let power = |n: usize| s.powi(n as i32);
    // P′(s) = 0 moves with b_k: ∂s/∂b_k = −k s^(k−1)/P″(s).
    let s_by_b: Vec<f64> =
        (0..count).map(|k| if k == 0 { 0.0 } else { -(k as f64) * power(k - 1) / curvature }).collect();
    let mut values = vec![taylor(b, s, 0), r_e];
    let mut jacobian = vec![(0..count).map(power).collect(), s_by_b.iter().map(|d| r_e_by_s * d).collect()];
    for m in 2..count {
        let (coefficient, next) = (taylor(b, s, m), taylor(b, s, m + 1));
        let (scale, lower) = (g.powi(m as i32), g.powi(m as i32 - 1));
        values.push(coefficient * scale);
        let along = (m + 1) as f64 * next * scale + coefficient * m as f64 * lower * g_by_s;
        let row = (0..count).map(|k| {
            let direct = if k >= m { binomial(k, m) * power(k - m) * scale } else { 0.0 };
            direct + along * s_by_b[k]
        });
        jacobian.push(row.collect());
    }
    (values, jacobian)
}
