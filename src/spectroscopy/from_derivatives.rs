//! Constants from the derivatives of V at r_e.

use super::{DerivativeConstants, DunhamCoefficient};
use crate::potential::curve::{LocalDerivatives, ScanCurve};
use crate::units::{omega_e_per_cm, rotational_constant_per_cm};

/// Spectroscopic constants from V″, V‴ and V⁗ at r_e [J. L. Dunham, Phys. Rev. 41, 721 (1932)].
///
/// With V − V_e = a0 ξ² (1 + a1 ξ + a2 ξ² ...), ξ = x/r_e: ω_e = sqrt(k/μ)/(2πc), B_e = h/(8π²cμr_e²),
/// α_e = −(6 B_e²/ω_e)(1 + a1), ω_e x_e = (3/2) B_e (5 a1²/4 − a2), Y_00 = (B_e/8)(3 a2 − 7 a1²/4) and the
/// leading terms of Y_02 to Y_04. Standard errors: half the spread over the curve's admissible
/// interpolations, and the noise of the energies propagated.
pub fn from_derivatives(curve: &ScanCurve, reduced_mass_me: f64) -> DerivativeConstants {
    let estimate = |f: Quantity| curve.estimate(|local| Some(f(&Dunham::new(local, reduced_mass_me))));
    let coefficients: [(u32, u32, Quantity); 4] =
        [(0, 2, Dunham::y_02), (1, 2, Dunham::y_12), (0, 3, Dunham::y_03), (0, 4, Dunham::y_04)];
    // A curve has a minimum with positive curvature, so these three are always finite.
    let sure = |f: Quantity| {
        estimate(f)
            .unwrap_or(crate::estimate::Estimate::exact(f(&Dunham::new(&curve.local, reduced_mass_me))))
    };
    DerivativeConstants {
        omega_e_per_cm: sure(|d| d.omega),
        omega_e_x_e_per_cm: estimate(Dunham::omega_x),
        b_e_per_cm: sure(|d| d.b),
        alpha_e_per_cm: estimate(Dunham::alpha),
        centrifugal_d_e_per_cm: sure(|d| -d.y_02()),
        y_00_per_cm: estimate(Dunham::y_00),
        dunham_per_cm: coefficients
            .into_iter()
            .filter_map(|(k, l, f)| estimate(f).map(|value_per_cm| DunhamCoefficient { k, l, value_per_cm }))
            .collect(),
    }
}

/// A constant by its formula.
type Quantity = fn(&Dunham) -> f64;

/// Dunham's leading constants of any function with a minimum; cm⁻¹.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DunhamConstants {
    /// ω_e.
    pub omega_e_per_cm: f64,
    /// ω_e x_e; NaN without V⁗.
    pub omega_e_x_e_per_cm: f64,
    /// B_e.
    pub b_e_per_cm: f64,
    /// α_e.
    pub alpha_e_per_cm: f64,
}

/// The constants of [`from_derivatives`] for one minimum, without errors.
pub fn dunham(local: &LocalDerivatives, reduced_mass_me: f64) -> DunhamConstants {
    let d = Dunham::new(local, reduced_mass_me);
    DunhamConstants {
        omega_e_per_cm: d.omega,
        omega_e_x_e_per_cm: d.omega_x(),
        b_e_per_cm: d.b,
        alpha_e_per_cm: d.alpha(),
    }
}

/// What Dunham's formulas are written in; cm⁻¹.
#[derive(Clone, Copy, Debug)]
struct Dunham {
    omega: f64,
    b: f64,
    a1: f64,
    a2: f64,
}

impl Dunham {
    fn new(local: &LocalDerivatives, mass: f64) -> Self {
        let (a1, a2) = local.dunham_a1_a2();
        let omega = omega_e_per_cm(local.second_hartree, mass);
        Self { omega, b: rotational_constant_per_cm(local.r_e_bohr, mass), a1, a2 }
    }
    fn omega_x(&self) -> f64 {
        1.5 * self.b * (1.25 * self.a1 * self.a1 - self.a2)
    }
    fn alpha(&self) -> f64 {
        -6.0 * self.b * self.b / self.omega * (1.0 + self.a1)
    }
    fn y_00(&self) -> f64 {
        0.125 * self.b * (3.0 * self.a2 - 1.75 * self.a1 * self.a1)
    }
    fn y_02(&self) -> f64 {
        -4.0 * self.b.powi(3) / self.omega.powi(2)
    }
    fn y_12(&self) -> f64 {
        let shape = 9.5 + 9.0 * self.a1 + 4.5 * self.a1 * self.a1 - 4.0 * self.a2;
        -12.0 * self.b.powi(4) / self.omega.powi(3) * shape
    }
    fn y_03(&self) -> f64 {
        16.0 * self.b.powi(5) / self.omega.powi(4) * (3.0 + self.a1)
    }
    fn y_04(&self) -> f64 {
        let shape = 13.0 + 9.0 * self.a1 - self.a2 + 2.25 * self.a1 * self.a1;
        -64.0 * self.b.powi(7) / self.omega.powi(6) * shape
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::{Morse, Potential};
    use crate::units::{PER_CM_PER_HARTREE, to_per_cm};

    /// A Morse function gives ω_e x_e = ħa²/(4πcμ) and Y_00 = 0, to rounding.
    #[test]
    fn morse_identity() {
        for (depth, a, r_e, mass) in [(0.17, 1.03, 1.4, 918.0), (0.41, 1.21, 2.13, 12_498.0)] {
            let morse = Morse { e_min_hartree: 0.0, r_e_bohr: r_e, well_depth_hartree: depth, a_per_bohr: a };
            let local = LocalDerivatives::new(r_e, morse.derivatives_hartree(r_e));
            let d = Dunham::new(&local, mass);
            // ħ²a²/(2μ) in hartree.
            let exact = to_per_cm(a * a / (2.0 * mass));
            assert!((d.omega_x() / exact - 1.0).abs() < 1e-13, "{} {exact}", d.omega_x());
            assert!(d.y_00().abs() < 1e-13 * d.omega);
            assert!((d.omega / (PER_CM_PER_HARTREE * a * (2.0 * depth / mass).sqrt()) - 1.0).abs() < 1e-14);
        }
    }

    /// Dunham's own formulas in extended precision. Source: `tests/published/reference/dunham.json`; its a1 and
    /// a2 go in. Coefficients that consist of their leading term agree to rounding, the others up to the
    /// correction of relative order (B_e/ω_e)², which needs higher derivatives.
    #[test]
    fn coefficients_agree_with_the_published_formulas() {
        let text = include_str!("../../tests/published/reference/dunham.json");
        let all: serde_json::Value = serde_json::from_str(text).unwrap();
        let number =
            |v: &serde_json::Value| v.as_str().map_or_else(|| v.as_f64(), |s| s.parse().ok()).unwrap();
        let blocks = all["blocks"].as_array().unwrap();
        assert!(blocks.len() > 2);
        for block in blocks {
            let a = &block["a1_to_a6"];
            let (omega, b) = (number(&block["we_per_cm"]), number(&block["Be_per_cm"]));
            let d = Dunham { omega, b, a1: number(&a[0]), a2: number(&a[1]) };
            let second_order = (b / omega).powi(2);
            for (key, found, tolerance) in [
                ("Y10", d.omega, 100.0 * second_order),
                ("Y20", -d.omega_x(), 100.0 * second_order),
                ("Y01", d.b, 100.0 * second_order),
                ("Y11", -d.alpha(), 100.0 * second_order),
                ("Y02", d.y_02(), 100.0 * second_order),
                ("Y12", d.y_12(), 1e-12),
                ("Y03", d.y_03(), 1e-12),
                ("Y04", d.y_04(), 1e-12),
            ] {
                let want = number(&block["Y_dunham_per_cm"][key]);
                assert!((found / want - 1.0).abs() < tolerance, "{} {key}: {found} {want}", block["name"]);
            }
            let y_00 = number(&block["Y_dunham_per_cm"]["Y00"]);
            assert!((d.y_00() - y_00).abs() < 1e-12 * b, "{}: {} {y_00}", block["name"], d.y_00());
        }
    }
}
