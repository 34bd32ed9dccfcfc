//! Y_kl from a least-squares fit to E(v, J), the way constants are taken from measured lines.

use super::DunhamCoefficient;
use crate::estimate::{ErrorSource, Estimate};
use crate::fit::Precise;
use crate::fit::linear::{Design, solve};
use crate::radial::Level;

/// Which Y_kl are fitted to which levels.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct DunhamChoice {
    /// Highest v that enters.
    pub highest_v: usize,
    /// Highest power k of (v + ½) for l = 0; for higher l it falls by one a step.
    pub vibration_degree: usize,
    /// Highest power l of X.
    pub rotation_degree: usize,
    /// Λ of the electronic state: X = J(J + 1) − Λ².
    pub lambda: u32,
}

/// The coefficients of E(v, J) = Σ Y_kl (v + ½)ᵏ Xˡ, X = J(J + 1) − Λ² (0 for the levels without rotation).
#[derive(Clone, Debug, PartialEq)]
pub struct DunhamTable {
    /// The coefficients, l ascending, then k.
    pub coefficients: Vec<DunhamCoefficient>,
    /// Levels that entered.
    pub levels: usize,
    /// Root mean square of the residuals in cm⁻¹.
    pub rms_residual_per_cm: f64,
    /// Largest residual in cm⁻¹.
    pub largest_residual_per_cm: f64,
}

/// Fits the table to levels of several J (equal weights; levels that lean on a tail are left out).
///
/// Degrees fall to what the v and J there are can determine. Standard errors are those of the fit: they measure
/// the terms left out, not the curve. None with fewer than two v or two J, or with dependent columns.
pub fn dunham_table<'a>(
    levels: impl IntoIterator<Item = &'a Level>,
    choice: DunhamChoice,
) -> Option<DunhamTable> {
    let used: Vec<&Level> =
        levels.into_iter().filter(|l| l.v <= choice.highest_v && !l.leans_on_tail).collect();
    let different = |of: fn(&Level) -> usize| {
        let mut all: Vec<usize> = used.iter().map(|l| of(l)).collect();
        all.sort_unstable();
        all.dedup();
        all.len()
    };
    let (vs, js) = (different(|l| l.v), different(|l| l.j as usize));
    if vs < 2 || js < 2 {
        return None;
    }
    let (k_most, l_most) = (choice.vibration_degree.min(vs - 1), choice.rotation_degree.min(js - 1));
    let lambda2 = f64::from(choice.lambda).powi(2);
    let x = |level: &Level| match f64::from(level.j) {
        0.0 => 0.0,
        j => j * (j + 1.0) - lambda2,
    };
    let mut powers: Vec<(usize, usize)> =
        (0..=l_most).flat_map(|l| (0..=k_most.saturating_sub(l)).map(move |k| (k, l))).collect();
    // One level more than coefficients, so that there is an error.
    powers.truncate(used.len().checked_sub(1)?);
    let column = |&(k, l): &(usize, usize)| -> Vec<Precise> {
        let power = |level: &&Level| {
            let (n, x) = (Precise::new(level.v as f64 + 0.5), Precise::new(x(level)));
            let vibration = (0..k).fold(Precise::new(1.0), |product, _| product.times(n));
            (0..l).fold(vibration, |product, _| product.times(x))
        };
        used.iter().map(power).collect()
    };
    let columns: Vec<Vec<Precise>> = powers.iter().map(column).collect();
    let energies: Vec<f64> = used.iter().map(|l| l.energy_per_cm).collect();
    let solution = solve(&Design::from_columns(&columns), &energies, &vec![1.0; used.len()]).ok()?;
    let variance = solution.weighted_square_sum / (used.len() - powers.len()) as f64;
    let coefficients = powers
        .iter()
        .enumerate()
        .map(|(i, &(k, l))| DunhamCoefficient {
            k: k as u32,
            l: l as u32,
            value_per_cm: Estimate::with_error(
                solution.coefficients[i],
                (variance * solution.unit_covariance[i][i]).max(0.0).sqrt(),
                ErrorSource::Fit,
            ),
        })
        .collect();
    Some(DunhamTable {
        coefficients,
        levels: used.len(),
        rms_residual_per_cm: (solution.weighted_square_sum / used.len() as f64).sqrt(),
        largest_residual_per_cm: solution.residuals.iter().fold(0.0, |m, d| m.max(d.abs())),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectroscopy::from_levels::made_level;

    const CHOICE: DunhamChoice =
        DunhamChoice { highest_v: 6, vibration_degree: 3, rotation_degree: 2, lambda: 0 };

    /// Invented coefficients come back from levels made of them; a term left out shows in residual and errors.
    #[test]
    fn coefficients_come_back() {
        let y = [
            (0, 0, -0.3),
            (1, 0, 2170.0),
            (2, 0, -13.3),
            (3, 0, 0.01),
            (0, 1, 1.93),
            (1, 1, -0.0175),
            (0, 2, -6e-6),
        ];
        let energy = |v: f64, x: f64, more: f64| -> f64 {
            let sum: f64 = y.iter().map(|&(k, l, c)| c * (v + 0.5).powi(k) * x.powi(l)).sum();
            sum + more * (v + 0.5).powi(4)
        };
        let made = |more: f64| -> Vec<Level> {
            let mut all = Vec::new();
            for j in [0_u32, 5, 10, 20] {
                for v in 0..7_usize {
                    let x = f64::from(j) * (f64::from(j) + 1.0);
                    let mut level = made_level(v, energy(v as f64, x, more), 0.0, false);
                    level.j = j;
                    all.push(level);
                }
            }
            all
        };
        let table = dunham_table(&made(0.0), CHOICE).unwrap();
        assert!(table.rms_residual_per_cm < 1e-9 && table.levels == 28);
        for &(k, l, want) in &y {
            let found = table.coefficients.iter().find(|c| (c.k, c.l) == (k as u32, l as u32)).unwrap();
            assert!((found.value_per_cm.value - want).abs() < 1e-10 * want.abs().max(1e-3), "{k} {l}");
        }
        let rough = dunham_table(&made(1e-3), CHOICE).unwrap();
        assert!(rough.rms_residual_per_cm > 1e-4);
        assert!(rough.coefficients[1].value_per_cm.std_error.unwrap() > 1e-4);
        let one_j: Vec<Level> = made(0.0).into_iter().filter(|l| l.j == 0).collect();
        assert!(dunham_table(&one_j, CHOICE).is_none());
    }
}
