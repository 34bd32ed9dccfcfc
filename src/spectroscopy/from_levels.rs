//! Constants fitted to numerical levels.

use super::{LevelConstants, LevelSet};
use crate::estimate::{ErrorSource, Estimate};
use crate::radial::Level;
use nalgebra::{DMatrix, DVector};

/// Fewest levels that constants are taken from.
const LEVELS_NEEDED: usize = 4;

/// Least squares of E(v, 0) by a polynomial in (v + ½) with a free constant, and of B_v by a straight line.
///
/// E = c + ω_e (v + ½) − ω_e x_e (v + ½)² + ω_e y_e (v + ½)³, B_v = B_e − α_e (v + ½), over v = 0 .. `highest_v`
/// as far as the levels do not lean on a tail; the degree falls to one less than the number of levels.
/// Standard errors are those of the fit, none when it is exact (as many coefficients as levels). `levels`:
/// rotationless, v ascending from 0, energies in cm⁻¹. None with fewer than four levels: two would make ω_e the
/// fundamental and three leave out the second anharmonicity that the other constants lean on.
pub fn from_levels(levels: &[Level], set: LevelSet) -> Option<LevelConstants> {
    let used: Vec<&Level> =
        levels.iter().take(set.highest_v.saturating_add(1)).take_while(|l| !l.leans_on_tail).collect();
    if used.len() < LEVELS_NEEDED {
        return None;
    }
    let column = |f: fn(&Level) -> f64| -> Vec<f64> { used.iter().map(|l| f(l)).collect() };
    let (v, energies, b) = (column(|l| l.v as f64), column(|l| l.energy_per_cm), column(|l| l.b_v_per_cm));
    let fitted = polynomial(&v, &energies, set.degree)?;
    let line = polynomial(&v, &b, 1);
    let term = |power: usize, sign: f64| fitted.get(power).map(|e| e.scaled(sign));
    Some(LevelConstants {
        omega_e_per_cm: term(1, 1.0)?,
        omega_e_x_e_per_cm: term(2, -1.0),
        omega_e_y_e_per_cm: term(3, 1.0),
        b_e_per_cm: line.as_ref().map(|l| l[0]),
        alpha_e_per_cm: line.as_ref().map(|l| l[1].scaled(-1.0)),
        levels_used: used.iter().map(|l| l.v).collect(),
    })
}

/// Coefficients of the least-squares polynomial in (v + ½), with their standard errors.
fn polynomial(v: &[f64], y: &[f64], degree: usize) -> Option<Vec<Estimate>> {
    let degree = degree.min(v.len().checked_sub(1)?);
    if degree == 0 {
        return None;
    }
    let matrix = DMatrix::from_fn(v.len(), degree + 1, |row, power| (v[row] + 0.5).powi(power as i32));
    let values = DVector::from_column_slice(y);
    let qr = matrix.clone().qr();
    let r = qr.r();
    let coefficients = r.solve_upper_triangular(&(qr.q().transpose() * &values))?;
    let freedom = v.len() - degree - 1;
    let inverse = r.solve_upper_triangular(&DMatrix::identity(degree + 1, degree + 1))?;
    let variance = (values - matrix * &coefficients).norm_squared() / freedom as f64;
    let estimate = |(i, &value): (usize, &f64)| {
        if freedom == 0 {
            return Estimate::exact(value);
        }
        Estimate::with_error(value, (variance * inverse.row(i).norm_squared()).sqrt(), ErrorSource::Fit)
    };
    Some(coefficients.iter().enumerate().map(estimate).collect())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::radial::Wavefunction;

    fn level(v: usize, energy: f64, b: f64, leans: bool) -> Level {
        Level {
            v,
            j: 0,
            energy_per_cm: energy,
            energy_error_per_cm: None,
            energy_error_source: None,
            below_asymptote_per_cm: None,
            b_v_per_cm: b,
            d_v_per_cm: 0.0,
            h_v_per_cm: None,
            inner_turning_point_bohr: 0.0,
            outer_turning_point_bohr: 0.0,
            mean_r_bohr: 0.0,
            mean_square_x_bohr2: 0.0,
            forbidden_probability: 0.0,
            inside_reach: None,
            outside_scan: 0.0,
            leans_on_tail: leans,
            minus_harmonic_per_cm: 0.0,
            minus_morse_per_cm: None,
            wavefunction: Wavefunction {
                degree: 1,
                r_bohr: Vec::new().into(),
                weight_bohr: Vec::new().into(),
                psi: Vec::new(),
            },
        }
    }

    fn ladder(lean_from: usize) -> Vec<Level> {
        let energy = |n: f64| -0.3 + 2170.0 * n - 13.3 * n * n + 0.012 * n * n * n;
        (0..8)
            .map(|v| (v, v as f64 + 0.5))
            .map(|(v, n)| level(v, energy(n), 1.93 - 0.0175 * n, v >= lean_from))
            .collect()
    }

    #[test]
    fn recovers_a_cubic_ladder() {
        let found = from_levels(&ladder(9), LevelSet { highest_v: 4, degree: 3 }).unwrap();
        let close = |e: Estimate, want: f64| assert!((e.value - want).abs() < 1e-8, "{e:?} {want}");
        close(found.omega_e_per_cm, 2170.0);
        close(found.omega_e_x_e_per_cm.unwrap(), 13.3);
        close(found.omega_e_y_e_per_cm.unwrap(), 0.012);
        close(found.b_e_per_cm.unwrap(), 1.93);
        close(found.alpha_e_per_cm.unwrap(), 0.0175);
        assert_eq!(found.levels_used, [0, 1, 2, 3, 4]);
        assert!(found.omega_e_per_cm.std_error.unwrap() < 1e-7);
    }

    /// Leaning levels are left out; an exact fit has no standard error, and three levels give no constants: with
    /// two, "ω_e" would be the fundamental.
    #[test]
    fn four_levels_are_needed() {
        let set = LevelSet { highest_v: 4, degree: 3 };
        let found = from_levels(&ladder(4), set).unwrap();
        assert_eq!(found.levels_used, [0, 1, 2, 3]);
        assert_eq!(found.omega_e_per_cm.std_error, None);
        assert!((found.omega_e_x_e_per_cm.unwrap().value - 13.3).abs() < 1e-8);
        assert!(found.b_e_per_cm.unwrap().std_error.is_some());
        for few in 0..=3 {
            assert!(from_levels(&ladder(few), set).is_none());
        }
        assert!(from_levels(&[], set).is_none());
    }

    /// One value off by δ on five levels of a cubic: the fit's error is that of the fourth difference,
    /// δ/sqrt(70) of unit norm.
    #[test]
    fn standard_errors_come_from_the_residual() {
        let mut levels = ladder(9);
        levels[2].energy_per_cm += 0.7;
        let found = from_levels(&levels, LevelSet { highest_v: 4, degree: 3 }).unwrap();
        // Residual: the part of the change along (1, −4, 6, −4, 1)/sqrt(70).
        let s = 0.7 * 6.0 / 70.0_f64.sqrt();
        // Variance of the cubic coefficient on equidistant points: 1/Σ P3² with P3 = (−1, 2, 0, −2, 1), scaled by 5/6.
        let want = s * (5.0 / 6.0) / 10.0_f64.sqrt();
        let got = found.omega_e_y_e_per_cm.unwrap().std_error.unwrap();
        assert!((got - want).abs() < 1e-9, "{got} {want}");
    }
}
