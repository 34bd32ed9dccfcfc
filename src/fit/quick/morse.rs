//! Morse functions from the fit of a neighbouring window by Newton's method on the sum of squares.
//!
//! The second derivatives of the model keep the convergence quadratic where the residuals are misfit; Gauss-Newton
//! steps, which leave them out, need three times as many evaluations there.

use super::{AtMinimum, MOST_COEFFICIENTS, QuickFits, WELL_CONDITIONED, numbers};
use crate::fit::qr::length;
use crate::fit::window_study::{ConstantsOf, WindowNumbers};
use crate::potential::Morse;

/// More steps than this are left to the careful fit.
const MOST_STEPS: usize = 20;

/// A step that lowers the sum of squares at none of so many halvings is left to it too.
const MOST_HALVINGS: usize = 6;

/// A step that changes the residuals by less than this share of them is the last: the error left is about its square.
const LAST_STEP: f64 = 1e-6;

/// Values e_min, r_e, D_e, a, gradient and second derivatives of half the sum of squares there.
struct Hill {
    square_sum: f64,
    gradient: [f64; 4],
    hessian: [[f64; 4]; 4],
    /// What the curvature of the model adds to the second derivatives.
    bend: [[f64; 4]; 4],
    /// Lengths of the columns of the weighted Jacobian.
    lengths: [f64; 4],
}

impl QuickFits {
    /// The numbers of a Morse function started at `near`, whose energy is a total one, and the function itself; none when
    /// the careful fit must decide.
    pub fn morse(&mut self, near: &Morse, constants: ConstantsOf<'_>) -> Option<(WindowNumbers, Morse)> {
        if !self.plain || self.r_bohr.len() < 5 {
            return None;
        }
        let n = self.r_bohr.len();
        let start =
            [near.e_min_hartree - self.zero_hartree, near.r_e_bohr, near.well_depth_hartree, near.a_per_bohr];
        let mut values = self.newton(start)?;
        let Self { r_bohr, roots, qr, .. } = self;
        let filled = qr.refill(n, 4, |packed| {
            packed.resize(4 * n, 0.0);
            for (i, (&r, root)) in r_bohr.iter().zip(roots.iter()).enumerate() {
                let jacobian = Terms::new(values, r).jacobian(values);
                (0..4).for_each(|j| packed[j * n + i] = root * jacobian[j]);
            }
        });
        if !filled || self.qr.reciprocal_condition() <= WELL_CONDITIONED {
            return None;
        }
        self.polish(&mut values);
        let [e_min, r_e, depth, a] = values;
        let well = depth > 0.0 && a > 0.0 && (self.r_bohr[0]..=self.r_bohr[n - 1]).contains(&r_e);
        if !well {
            return None;
        }
        self.residuals.clear();
        let points = self.r_bohr.iter().zip(&self.energy_hartree);
        self.residuals.extend(points.map(|(&r, e)| Terms::new(values, r).energy(values) - e));
        let mut gradients = [[0.0; MOST_COEFFICIENTS]; 4];
        let a2 = a * a;
        gradients[0][1] = 1.0;
        gradients[1][2..4].copy_from_slice(&[2.0 * a2, 4.0 * depth * a]);
        gradients[2][2..4].copy_from_slice(&[-6.0 * a2 * a, -18.0 * depth * a2]);
        gradients[3][2..4].copy_from_slice(&[14.0 * a2 * a2, 56.0 * depth * a2 * a]);
        let curvature = 2.0 * depth * a2;
        let local = [r_e, curvature, -3.0 * a * curvature, 7.0 * a2 * curvature];
        let at = AtMinimum { values: local, gradients, columns: 4, qr: &self.qr };
        let found = numbers(&self.residuals, &self.weight, self.variance, &at, constants);
        let e_min_hartree = e_min + self.zero_hartree;
        Some((found, Morse { e_min_hartree, r_e_bohr: r_e, well_depth_hartree: depth, a_per_bohr: a }))
    }

    /// A Gauss-Newton step by the factorised Jacobian, which keeps the digits that the squared condition of the Hessian
    /// took.
    fn polish(&mut self, values: &mut [f64; 4]) {
        self.residuals.clear();
        let points = self.r_bohr.iter().zip(&self.energy_hartree).zip(&self.roots);
        self.residuals
            .extend(points.map(|((&r, e), root)| root * (e - Terms::new(*values, r).energy(*values))));
        self.qr.transpose_times(&mut self.residuals);
        let mut step: [f64; 4] = std::array::from_fn(|j| self.residuals[j]);
        self.qr.back_substitute(&mut step);
        if step.iter().all(|s| s.is_finite()) {
            values.iter_mut().zip(step).for_each(|(v, s)| *v += s);
        }
    }

    fn newton(&self, start: [f64; 4]) -> Option<[f64; 4]> {
        let mut place = start;
        let mut hill = self.hill(place);
        for _ in 0..MOST_STEPS {
            let (mut step, size) = hill.step()?;
            let terms: [f64; 4] = std::array::from_fn(|j| place[j] * hill.lengths[j]);
            let last = size <= (f64::EPSILON * length(&terms)).max(LAST_STEP * hill.square_sum.sqrt());
            if last {
                return Some(std::array::from_fn(|j| place[j] + step[j]));
            }
            let mut halvings = 0;
            loop {
                let moved: [f64; 4] = std::array::from_fn(|j| place[j] + step[j]);
                if moved[2] > 0.0 && moved[3] > 0.0 {
                    let ahead = self.hill(moved);
                    if ahead.square_sum < hill.square_sum {
                        (place, hill) = (moved, ahead);
                        break;
                    }
                }
                halvings += 1;
                if halvings > MOST_HALVINGS {
                    return None;
                }
                step = step.map(|s| 0.5 * s);
            }
        }
        None
    }

    fn hill(&self, values: [f64; 4]) -> Hill {
        let none = [[0.0; 4]; 4];
        let mut hill =
            Hill { square_sum: 0.0, gradient: [0.0; 4], hessian: none, bend: none, lengths: [0.0; 4] };
        let (depth, a) = (values[2], values[3]);
        let mut bent = [0.0; 5];
        for ((&r, energy), &w) in self.r_bohr.iter().zip(&self.energy_hartree).zip(&self.weight) {
            let terms = Terms::new(values, r);
            let d = terms.energy(values) - energy;
            let (wd, jacobian) = (w * d, terms.jacobian(values));
            hill.square_sum += wd * d;
            for i in 0..4 {
                hill.gradient[i] += wd * jacobian[i];
                let wj = w * jacobian[i];
                (0..=i).for_each(|j| hill.hessian[i][j] += wj * jacobian[j]);
            }
            // Second derivatives of V: by (r_e, r_e), (r_e, D), (r_e, a), (D, a), (a, a), without common factors.
            let Terms { x, y, u } = terms;
            let (uy, turn) = (u * y, y * (y - u));
            let (wd_uy, wd_turn) = (wd * uy, wd * turn);
            bent[0] += wd_turn;
            bent[1] += wd_uy;
            bent[2] += wd_turn * x;
            bent[3] += wd_uy * x;
            bent[4] += wd_turn * x * x;
        }
        hill.lengths = std::array::from_fn(|j| hill.hessian[j][j].sqrt());
        hill.bend[1][1] = 2.0 * depth * a * a * bent[0];
        hill.bend[2][1] = -2.0 * a * bent[1];
        hill.bend[3][1] = -2.0 * depth * (bent[1] + a * bent[2]);
        hill.bend[3][2] = 2.0 * bent[3];
        hill.bend[3][3] = 2.0 * depth * bent[4];
        hill
    }
}

impl Hill {
    /// Newton's step and its size, sqrt(gᵀ H⁻¹ g), the change of the residuals it predicts; where the sum of squares
    /// does not bend upwards, a Gauss-Newton step. None where the columns depend on each other.
    fn step(&self) -> Option<([f64; 4], f64)> {
        let scale = self.lengths.map(|s| if s > 0.0 { s } else { 1.0 });
        let l = self.cholesky(&scale, 1.0).or_else(|| self.cholesky(&scale, 0.0))?;
        let mut half = [0.0; 4];
        for i in 0..4 {
            let sum: f64 = (0..i).map(|k| l[i][k] * half[k]).sum();
            half[i] = (-self.gradient[i] / scale[i] - sum) / l[i][i];
        }
        let size = length(&half);
        let mut step = [0.0; 4];
        for i in (0..4).rev() {
            let sum: f64 = (i + 1..4).map(|k| l[k][i] * step[k]).sum();
            step[i] = (half[i] - sum) / l[i][i];
        }
        step.iter_mut().zip(scale).for_each(|(s, d)| *s /= d);
        step.iter().all(|s| s.is_finite()).then_some((step, size))
    }

    /// The Cholesky factor, row by row, of the second derivatives by scaled parameters, with this share of the bend.
    fn cholesky(&self, scale: &[f64; 4], share: f64) -> Option<[[f64; 4]; 4]> {
        let mut l = [[0.0; 4]; 4];
        for i in 0..4 {
            for j in 0..=i {
                let sum: f64 = (0..j).map(|k| l[i][k] * l[j][k]).sum();
                let entry = self.hessian[i][j] + share * self.bend[i][j];
                let left = entry / (scale[i] * scale[j]) - sum;
                if i > j {
                    l[i][j] = left / l[j][j];
                    continue;
                }
                // Less than rounding leaves of a number near one.
                if left.is_nan() || left <= 16.0 * f64::EPSILON {
                    return None;
                }
                l[i][i] = left.sqrt();
            }
        }
        Some(l)
    }
}

/// x = r − r_e, y = exp(−a x), u = 1 − y at one point.
#[derive(Clone, Copy)]
struct Terms {
    x: f64,
    y: f64,
    u: f64,
}

impl Terms {
    fn new(values: [f64; 4], r: f64) -> Self {
        let x = r - values[1];
        let minus_u = (-values[3] * x).exp_m1();
        Self { x, y: 1.0 + minus_u, u: -minus_u }
    }
    fn energy(self, values: [f64; 4]) -> f64 {
        values[0] + values[2] * self.u * self.u
    }
    /// ∂V/∂(e_min, r_e, D_e, a).
    fn jacobian(self, values: [f64; 4]) -> [f64; 4] {
        let slope = 2.0 * values[2] * self.u * self.y;
        [1.0, -values[3] * slope, self.u * self.u, slope * self.x]
    }
}
