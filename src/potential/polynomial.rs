//! Power series about the minimum in a chosen variable, without a linear term.

use super::jet::Jet;
use super::roots::{derivative, real_roots, root_bound, value};
use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential};
use serde::{Deserialize, Serialize};
use std::sync::OnceLock;

/// The expansion variable of a polynomial.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Variable {
    /// x = r − r_e.
    X,
    /// ξ = (r − r_e)/r_e [J. L. Dunham, Phys. Rev. 41, 721 (1932)].
    Xi,
    /// z = (r − r_e)/r [G. Simons, R. G. Parr, J. M. Finlan, J. Chem. Phys. 59, 3229 (1973)].
    Z,
    /// 2 (r − r_e)/(r + r_e) [J. F. Ogilvie, Proc. R. Soc. A 378, 287 (1981)].
    Ogilvie,
}

impl Variable {
    /// All of them, in the order in which they are offered.
    pub const ALL: [Self; 4] = [Self::X, Self::Xi, Self::Z, Self::Ogilvie];

    /// The word used in findings files.
    pub const fn word(self) -> &'static str {
        match self {
            Self::X => "x",
            Self::Xi => "xi",
            Self::Z => "z",
            Self::Ogilvie => "ogilvie",
        }
    }

    /// The variable at r (bohr) with minimum r_e (bohr): bohr for `X`, else a pure number.
    pub fn at(self, r_bohr: f64, r_e_bohr: f64) -> f64 {
        let x = r_bohr - r_e_bohr;
        match self {
            Self::X => x,
            Self::Xi => x / r_e_bohr,
            Self::Z => x / r_bohr,
            Self::Ogilvie => 2.0 * x / (r_bohr + r_e_bohr),
        }
    }

    /// The bond length (bohr) at which the variable has the value `u`.
    pub fn bond_length_bohr(self, u: f64, r_e_bohr: f64) -> f64 {
        match self {
            Self::X => r_e_bohr + u,
            Self::Xi => r_e_bohr * (1.0 + u),
            Self::Z => r_e_bohr / (1.0 - u),
            Self::Ogilvie => r_e_bohr * (2.0 + u) / (2.0 - u),
        }
    }

    /// The values of the variable at r = 0 and at r = ∞.
    fn ends(self, r_e_bohr: f64) -> (f64, f64) {
        match self {
            Self::X => (-r_e_bohr, f64::INFINITY),
            Self::Xi => (-1.0, f64::INFINITY),
            Self::Z => (f64::NEG_INFINITY, 1.0),
            Self::Ogilvie => (-2.0, 2.0),
        }
    }

    fn jet(self, r_bohr: f64, r_e_bohr: f64) -> Jet {
        let r = Jet::variable(r_bohr);
        let x = r - Jet::constant(r_e_bohr);
        match self {
            Self::X => x,
            Self::Xi => x.scaled(1.0 / r_e_bohr),
            Self::Z => x * r.recip(),
            Self::Ogilvie => x.scaled(2.0) * (r + Jet::constant(r_e_bohr)).recip(),
        }
    }

    /// ∂u/∂r_e at fixed r.
    fn by_r_e(self, r: f64, r_e: f64) -> f64 {
        match self {
            Self::X => -1.0,
            Self::Xi => -r / (r_e * r_e),
            Self::Z => -1.0 / r,
            Self::Ogilvie => -4.0 * r / ((r + r_e) * (r + r_e)),
        }
    }
}

/// V(r) = e_min + Σ_{n ≥ 2} c_n uⁿ with u one of [`Variable`].
///
/// As a potential it reaches from its nearest stationary point below r_e to the nearest one above
/// (r = 0 and r = ∞ where there is none); levels count below the lower of the two barriers.
#[derive(Clone, Debug)]
pub struct Polynomial {
    variable: Variable,
    e_min_hartree: f64,
    r_e_bohr: f64,
    /// Coefficients of u⁰, u¹, u², ...; the first two are zero.
    series: Vec<f64>,
    /// Found when first asked for: a fit that moves the parameters needs none.
    ends: OnceLock<Ends>,
}

/// Where the well ends.
#[derive(Clone, Copy, Debug)]
struct Ends {
    range_bohr: (f64, f64),
    limit_hartree: f64,
}

impl PartialEq for Polynomial {
    fn eq(&self, other: &Self) -> bool {
        self.variable == other.variable && self.values() == other.values()
    }
}

impl Polynomial {
    /// From the minimum and the coefficients c_2, c_3, ... in hartree (per bohrⁿ for `Variable::X`).
    pub fn new(variable: Variable, e_min_hartree: f64, r_e_bohr: f64, from_c2: &[f64]) -> Self {
        let mut series = vec![0.0, 0.0];
        series.extend_from_slice(from_c2);
        Self { variable, e_min_hartree, r_e_bohr, series, ends: OnceLock::new() }
    }

    /// The variable.
    pub const fn variable(&self) -> Variable {
        self.variable
    }

    /// The highest power.
    pub const fn degree(&self) -> usize {
        self.series.len() - 1
    }

    fn ends(&self) -> Ends {
        *self.ends.get_or_init(|| self.find_ends())
    }

    fn find_ends(&self) -> Ends {
        let (left_end, right_end) = self.variable.ends(self.r_e_bohr);
        // V′ = u (2 c2 + 3 c3 u + ...): the stationary points besides u = 0 are the roots of the bracket.
        let bracket = &derivative(&self.series)[1..];
        let bound = root_bound(bracket);
        let inside = |u: f64| u > left_end && u < right_end;
        let below =
            real_roots(bracket, left_end.max(-bound), 0.0).into_iter().rfind(|&u| u < 0.0 && inside(u));
        let above =
            real_roots(bracket, 0.0, right_end.min(bound)).into_iter().find(|&u| u > 0.0 && inside(u));
        let barrier = |u: Option<f64>, end: f64| {
            let u = u.unwrap_or(end);
            if u.is_finite() { value(&self.series, u) } else { f64::INFINITY }
        };
        let place = |u: f64| self.variable.bond_length_bohr(u, self.r_e_bohr);
        Ends {
            range_bohr: (below.map_or(0.0, place), above.map_or(f64::INFINITY, place)),
            limit_hartree: self.e_min_hartree + barrier(below, left_end).min(barrier(above, right_end)),
        }
    }
}

impl Potential for Polynomial {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let u = self.variable.jet(r_bohr, self.r_e_bohr);
        // Horner for the Taylor coefficients of the series at u, then r through u(r).
        let mut taylor = [0.0; 5];
        for &c in self.series.iter().rev() {
            for n in (1..5).rev() {
                taylor[n] = taylor[n] * u.0[0] + taylor[n - 1];
            }
            taylor[0] = taylor[0] * u.0[0] + c;
        }
        let mut derivatives = u.compose(taylor).derivatives();
        derivatives[0] += self.e_min_hartree;
        derivatives
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        self.e_min_hartree + value(&self.series, self.variable.at(r_bohr, self.r_e_bohr))
    }
    fn range_bohr(&self) -> (f64, f64) {
        self.ends().range_bohr
    }
    fn limit_hartree(&self) -> f64 {
        self.ends().limit_hartree
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e_bohr
    }
}

impl Parametric for Polynomial {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        let mut list = super::named(&[("e_min", ParameterUnit::TotalEnergy), ("r_e", ParameterUnit::Length)]);
        list.extend((2..=self.degree() as u32).map(|n| {
            let unit = if self.variable == Variable::X {
                ParameterUnit::Coefficient(n)
            } else {
                ParameterUnit::Wavenumber
            };
            (format!("c{n}"), unit)
        }));
        list
    }
    fn values(&self) -> Vec<f64> {
        let mut values = vec![self.e_min_hartree, self.r_e_bohr];
        values.extend_from_slice(&self.series[2..]);
        values
    }
    fn set_values(&mut self, values: &[f64]) {
        [self.e_min_hartree, self.r_e_bohr] = [values[0], values[1]];
        self.series[2..].copy_from_slice(&values[2..]);
        self.ends = OnceLock::new();
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let u = self.variable.at(r_bohr, self.r_e_bohr);
        gradient[0] = 1.0;
        let (mut power, mut slope) = (u, 0.0);
        for (n, (c, entry)) in self.series.iter().zip(gradient.iter_mut()).enumerate().skip(2) {
            slope += n as f64 * c * power;
            power *= u;
            *entry = power;
        }
        gradient[1] = slope * self.variable.by_r_e(r_bohr, self.r_e_bohr);
        self.e_min_hartree + value(&self.series, u)
    }
    fn fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::BondLength, self.r_e_bohr)
            .or_else(|| ModelFault::unless_positive(ModelFault::ForceConstant, self.series.get(2).copied()?))
    }
    /// The quartic in x with the derivatives of the scan.
    fn starts(shape: &LocalShape) -> Vec<Self> {
        let from_c2 = [shape.second_hartree / 2.0, shape.third_hartree / 6.0, shape.fourth_hartree / 24.0];
        vec![Self::new(Variable::X, shape.e_min_hartree, shape.r_e_bohr, &from_c2)]
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::check;

    const ALL: [Variable; 4] = [Variable::X, Variable::Xi, Variable::Z, Variable::Ogilvie];

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        for variable in ALL {
            let model = Polynomial::new(variable, -1.1, 1.4, &[0.2, -0.21, 0.13, -0.05, 0.01]);
            check::derivatives(&model, &[0.9, 1.4, 2.1]);
            check::gradient(&model, &[0.9, 1.4, 2.1]);
            for r in [0.8, 1.4, 3.0] {
                assert!((variable.bond_length_bohr(variable.at(r, 1.4), 1.4) - r).abs() < 1e-14);
            }
        }
    }

    /// V = x² − x³ has its barrier at x = 2/3, 4/27 high, and a wall at r = 0.
    #[test]
    fn a_cubic_ends_at_its_barrier() {
        let cubic = Polynomial::new(Variable::X, -5.0, 1.5, &[1.0, -1.0]);
        assert!((cubic.range_bohr().1 - (1.5 + 2.0 / 3.0)).abs() < 1e-14);
        assert_eq!(cubic.range_bohr().0, 0.0);
        assert!((cubic.limit_hartree() + 5.0 - 4.0 / 27.0).abs() < 1e-14);
    }

    /// z = 1 at infinite separation: one squared term has the limit e_min + c2.
    #[test]
    fn a_series_in_z_has_a_limit() {
        let kratzer = Polynomial::new(Variable::Z, 0.0, 2.0, &[0.3]);
        assert!((kratzer.limit_hartree() - 0.3).abs() < 1e-15);
        assert_eq!(kratzer.range_bohr(), (0.0, f64::INFINITY));
    }
}
