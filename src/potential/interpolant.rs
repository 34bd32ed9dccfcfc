//! The interpolant: a Morse base or none, plus a spline in r or in y through what the base leaves.

use super::curve::SplineVariable;
use super::spline::{PiecewisePolynomial, SplineFactors};
use super::{Morse, Potential};
use splines::{Interpolation, Key, Spline};

/// What an interpolant is made of, apart from the points.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Recipe {
    /// The base, on the same zero as the energies.
    pub base: Option<Morse>,
    /// Abscissa of the spline.
    pub variable: SplineVariable,
    /// r_b of y = (r − r_b)/(r + r_b), in bohr.
    pub r_b_bohr: f64,
    /// Degree of the spline.
    pub degree: usize,
}

impl Recipe {
    fn abscissa(&self, r: f64) -> f64 {
        match self.variable {
            SplineVariable::R => r,
            SplineVariable::Y => (r - self.r_b_bohr) / (r + self.r_b_bohr),
        }
    }

    /// The factored collocation problem on these bond lengths.
    pub(crate) fn factors(&self, r_bohr: &[f64]) -> SplineFactors {
        let abscissae: Vec<f64> = r_bohr.iter().map(|&r| self.abscissa(r)).collect();
        SplineFactors::new(&abscissae, self.degree)
    }

    /// The interpolant through `energies` (one a bond length, on the base's zero).
    pub(crate) fn solve(&self, factors: &SplineFactors, r_bohr: &[f64], energies: &[f64]) -> Interpolant {
        let rest = self.rest(r_bohr, energies);
        let pieces = factors.solve(&rest);
        let values = (self.degree == 3).then(|| stroke_bezier(&pieces, &rest, |i| self.abscissa(r_bohr[i])));
        Interpolant { recipe: *self, pieces, values }
    }

    /// As [`Recipe::solve`], made only for bond lengths in [`from`, `to`]; a cubic is made whole.
    pub(crate) fn solve_between(
        &self,
        factors: &SplineFactors,
        (r_bohr, energies): (&[f64], &[f64]),
        (from, to): (f64, f64),
    ) -> Interpolant {
        if self.degree == 3 {
            return self.solve(factors, r_bohr, energies);
        }
        let rest = self.rest(r_bohr, energies);
        let pieces = factors.solve_between(&rest, self.abscissa(from), self.abscissa(to));
        Interpolant { recipe: *self, pieces, values: None }
    }

    /// What the base leaves of the energies.
    pub(crate) fn rest(&self, r_bohr: &[f64], energies: &[f64]) -> Vec<f64> {
        let base = |r: f64| self.base.map_or(0.0, |b| b.energy_hartree(r));
        r_bohr.iter().zip(energies).map(|(&r, &e)| e - base(r)).collect()
    }

    /// By how much the interpolant through the points given misses the energy `rest` + base at another bond length:
    /// both counted from the base, which therefore drops out.
    pub(crate) fn miss(&self, r_bohr: &[f64], rest: &[f64], (at_bohr, rest_there): (f64, f64)) -> f64 {
        self.factors(r_bohr).value_at(rest, self.abscissa(at_bohr)) - rest_there
    }

    /// Both steps at once.
    pub(crate) fn through(&self, r_bohr: &[f64], energies: &[f64]) -> Interpolant {
        self.solve(&self.factors(r_bohr), r_bohr, energies)
    }
}

/// A cubic spline in the form of the `splines` package: each stretch a cubic whose Bézier handles are
/// the ordinates y ± m h/3, m the slope at the key.
fn stroke_bezier(
    pieces: &PiecewisePolynomial,
    values: &[f64],
    abscissa: impl Fn(usize) -> f64,
) -> Spline<f64, f64> {
    let last = values.len() - 1;
    let keys = (0..=last).map(|i| {
        let x = abscissa(i);
        let slope = pieces.derivatives(x)[1];
        let before = if i == 0 { 0.0 } else { x - abscissa(i - 1) };
        let after = if i == last { 0.0 } else { abscissa(i + 1) - x };
        let handles = (values[i] - slope * before / 3.0, values[i] + slope * after / 3.0);
        Key::new(x, values[i], Interpolation::StrokeBezier(handles.0, handles.1))
    });
    Spline::from_vec(keys.collect())
}

/// A smooth function through points: base plus spline.
#[derive(Clone, Debug)]
pub(crate) struct Interpolant {
    recipe: Recipe,
    pieces: PiecewisePolynomial,
    /// Values of a cubic spline.
    values: Option<Spline<f64, f64>>,
}

impl Interpolant {
    /// What it is made of.
    pub(crate) const fn recipe(&self) -> &Recipe {
        &self.recipe
    }

    /// Value at r, in hartree on the zero of the energies it runs through.
    pub(crate) fn energy(&self, r_bohr: f64) -> f64 {
        let t = self.recipe.abscissa(r_bohr);
        // The package's spline has no value at its last key and none outside.
        let sampled = self.values.as_ref().filter(|_| t.is_finite()).and_then(|spline| spline.sample(t));
        let rest = sampled.unwrap_or_else(|| self.pieces.value(t));
        rest + self.recipe.base.map_or(0.0, |base| base.energy_hartree(r_bohr))
    }

    /// Value and four derivatives at r; V⁗ of a cubic is NaN.
    pub(crate) fn derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let mut d = match self.recipe.variable {
            SplineVariable::R => self.pieces.derivatives(r_bohr),
            SplineVariable::Y => self.through_y(r_bohr),
        };
        if self.recipe.degree == 3 {
            d[4] = f64::NAN;
        }
        if let Some(base) = &self.recipe.base {
            for (d, b) in d.iter_mut().zip(base.derivatives_hartree(r_bohr)) {
                *d += b;
            }
        }
        d
    }

    /// Derivatives of S(y(r)) by the chain rule, y = 1 − 2 r_b/(r + r_b).
    fn through_y(&self, r: f64) -> [f64; 5] {
        let r_b = self.recipe.r_b_bohr;
        let q = 1.0 / (r + r_b);
        let s = self.pieces.derivatives((r - r_b) * q);
        let y1 = 2.0 * r_b * q * q;
        let y2 = -2.0 * q * y1;
        let y3 = -3.0 * q * y2;
        let y4 = -4.0 * q * y3;
        [
            s[0],
            s[1] * y1,
            s[2] * y1 * y1 + s[1] * y2,
            s[3] * y1.powi(3) + 3.0 * s[2] * y1 * y2 + s[1] * y3,
            s[4] * y1.powi(4)
                + 6.0 * s[3] * y1 * y1 * y2
                + s[2] * (3.0 * y2 * y2 + 4.0 * y1 * y3)
                + s[1] * y4,
        ]
    }

    /// Ends of the pieces as bond lengths.
    pub(crate) fn knots_bohr(&self) -> Vec<f64> {
        let to_r = |&t: &f64| match self.recipe.variable {
            SplineVariable::R => t,
            SplineVariable::Y => self.recipe.r_b_bohr * (1.0 + t) / (1.0 - t),
        };
        self.pieces.knots().iter().map(to_r).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn points() -> (Vec<f64>, Vec<f64>) {
        let r: Vec<f64> = (0..30).map(|i| 1.3 + 0.002 * f64::from(i).powf(2.1)).collect();
        let e = r.iter().map(|r| 3.0 / r.powi(4) - 0.9 / r).collect();
        (r, e)
    }

    fn recipe(degree: usize, variable: SplineVariable) -> Recipe {
        let base = Morse { e_min_hartree: -0.1, r_e_bohr: 2.3, well_depth_hartree: 0.2, a_per_bohr: 0.9 };
        Recipe { base: Some(base), variable, r_b_bohr: 2.3, degree }
    }

    /// Each derivative is the slope of the one before, in both variables.
    #[test]
    fn derivatives_agree_with_differences() {
        let (r, e) = points();
        for variable in [SplineVariable::R, SplineVariable::Y] {
            let curve = recipe(5, variable).through(&r, &e);
            for t in [1.41, 2.31, 2.9, 3.47] {
                let h = 1e-5;
                let (before, at, after) =
                    (curve.derivatives(t - h), curve.derivatives(t), curve.derivatives(t + h));
                for d in 0..4 {
                    let slope = (after[d] - before[d]) / (2.0 * h);
                    let scale = 1e-7 * at[d + 1].abs().max(1e-2);
                    assert!((slope - at[d + 1]).abs() < scale, "{variable:?} {t} {d}: {slope} {at:?}");
                }
                assert!((curve.energy(t) - at[0]).abs() < 1e-15);
            }
            for (r, e) in r.iter().zip(&e) {
                assert!((curve.energy(*r) - e).abs() < 1e-15);
            }
        }
    }

    /// Values of the cubic come from the `splines` package, its derivatives from our own pieces: both
    /// are the same function, at the last key and just outside too.
    #[test]
    fn cubic_agrees_with_the_splines_package() {
        let (r, e) = points();
        let curve = recipe(3, SplineVariable::R).through(&r, &e);
        let (first, last) = (r[0], r[r.len() - 1]);
        for i in 0..=10_000 {
            let t = first + (last - first) * f64::from(i) / 10_000.0;
            let (package, own) = (curve.energy(t), curve.derivatives(t)[0]);
            assert!((package - own).abs() < 1e-15, "{t}: {package} {own}");
        }
        assert!(curve.derivatives(2.0)[4].is_nan());
        assert!((curve.energy(last + 1e-3) - curve.derivatives(last + 1e-3)[0]).abs() < 1e-15);
    }
}
