//! Ways from levels to the dissociation limit: the straight line through the spacings, and the law of an inverse-power
//! tail.

use crate::radial::Level;
use crate::special::gamma;
use crate::units::{PER_CM_PER_HARTREE, to_per_cm};

/// Spacings of the levels and the straight line through them (R. T. Birge, H. Sponer, Phys. Rev. 28, 259 (1926)).
#[derive(Clone, Debug, PartialEq)]
pub struct BirgeSponer {
    /// ΔG_(v + ½) = E(v + 1) − E(v) in cm⁻¹, v ascending from 0.
    pub spacings_per_cm: Vec<f64>,
    /// ΔG = intercept − slope (v + 1), least squares over the spacings used; cm⁻¹.
    pub intercept_per_cm: f64,
    /// See [`BirgeSponer::intercept_per_cm`].
    pub slope_per_cm: f64,
    /// How many spacings, from v = 0 on, the line was drawn through.
    pub spacings_used: usize,
    /// Where the line ends, above V_e in cm⁻¹; none for a line that does not fall.
    pub extrapolated_limit_per_cm: Option<f64>,
}

/// The Birge-Sponer line through the spacings of all levels that lean on no tail; none with fewer than two spacings.
/// `levels`: rotationless, v ascending from 0.
pub fn birge_sponer(levels: &[Level]) -> Option<BirgeSponer> {
    let spacings_per_cm: Vec<f64> =
        levels.windows(2).map(|pair| pair[1].energy_per_cm - pair[0].energy_per_cm).collect();
    let supported = levels.iter().take_while(|l| !l.leans_on_tail).count();
    let used = supported.saturating_sub(1);
    if used < 2 {
        return None;
    }
    let n = used as f64;
    let mean_x = 0.5 * (n + 1.0);
    let mean_y = spacings_per_cm[..used].iter().sum::<f64>() / n;
    let (mut xy, mut xx) = (0.0, 0.0);
    for (i, spacing) in spacings_per_cm[..used].iter().enumerate() {
        let x = i as f64 + 1.0 - mean_x;
        xy += x * (spacing - mean_y);
        xx += x * x;
    }
    let slope = -xy / xx;
    let intercept = mean_y + slope * mean_x;
    // From v = 0 the line G(n) = a n − b n²/2, n = v + ½, goes up to its top at n = a/b.
    let top = intercept * intercept / (2.0 * slope);
    let first = 0.5 * intercept - 0.125 * slope;
    Some(BirgeSponer {
        extrapolated_limit_per_cm: (slope > 0.0 && intercept > 0.0)
            .then(|| levels[0].energy_per_cm + top - first),
        spacings_per_cm,
        intercept_per_cm: intercept,
        slope_per_cm: slope,
        spacings_used: used,
    })
}

/// The highest levels under a tail V_inf − C_n/rⁿ (R. J. Le Roy, R. B. Bernstein, J. Chem. Phys. 52, 3869 (1970)):
/// (V_inf − E)^((n − 2)/2n) falls on a straight line in v, whose slope C_n fixes.
#[derive(Clone, Debug, PartialEq)]
pub struct NearDissociation {
    /// n.
    pub n: u32,
    /// The exponent (n − 2)/2n.
    pub exponent: f64,
    /// (v, (V_inf − E)^exponent) of the levels in (cm⁻¹)^exponent, v ascending.
    pub levels: Vec<(usize, f64)>,
    /// Slope by v that C_n gives, in the same unit (positive: the amount of the fall).
    pub slope: f64,
    /// Fractional v at the limit, from the highest level and the slope.
    pub v_at_limit: f64,
}

/// Near-dissociation law of a tail with n > 2; `c_n` in hartree bohrⁿ, `limit_per_cm` above V_e. None without levels.
pub fn near_dissociation(
    levels: &[Level],
    limit_per_cm: f64,
    (n, c_n): (u32, f64),
    reduced_mass_me: f64,
) -> Option<NearDissociation> {
    if n <= 2 || c_n.is_nan() || c_n <= 0.0 {
        return None;
    }
    let order = f64::from(n);
    let exponent = (order - 2.0) / (2.0 * order);
    let below = levels.iter().filter(|l| l.energy_per_cm < limit_per_cm);
    let reduced: Vec<(usize, f64)> =
        below.map(|l| (l.v, (limit_per_cm - l.energy_per_cm).powf(exponent))).collect();
    let &(v, highest) = reduced.last()?;
    // dE/dv = sqrt(2π/μ) C_n^(−1/n) n Γ(1 + 1/n)/Γ(½ + 1/n) (V_inf − E)^((n + 2)/2n) in atomic units.
    let gammas = gamma(1.0 + 1.0 / order) / gamma(0.5 + 1.0 / order);
    let rate = (std::f64::consts::TAU / reduced_mass_me).sqrt() * c_n.powf(-1.0 / order) * order * gammas;
    let slope = exponent * rate * PER_CM_PER_HARTREE.powf(exponent);
    Some(NearDissociation { n, exponent, levels: reduced, slope, v_at_limit: v as f64 + highest / slope })
}

/// V_inf − V_e in cm⁻¹ and the inverse-power tail of a curve, where it has one with a known limit.
pub fn inverse_power_tail(curve: &crate::potential::curve::ScanCurve) -> Option<(f64, (u32, f64))> {
    match curve.outer {
        crate::potential::curve::OuterTail::InversePower { n, c_n_hartree_bohr_n, .. } => {
            Some((to_per_cm(curve.tail_depth_hartree()?), (n, c_n_hartree_bohr_n)))
        }
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectroscopy::from_levels::made_level;

    /// A Morse ladder is what Birge and Sponer assume: the line meets its depth.
    #[test]
    fn the_line_of_a_morse_ladder_ends_at_its_depth() {
        let (omega, omega_x) = (4400.0, 120.0);
        let energy = |n: f64| omega * n - omega_x * n * n;
        let levels: Vec<Level> = (0..12).map(|v| made_level(v, energy(v as f64 + 0.5), 0.0, v > 9)).collect();
        let found = birge_sponer(&levels).unwrap();
        assert_eq!((found.spacings_per_cm.len(), found.spacings_used), (11, 9));
        let depth = omega * omega / (4.0 * omega_x);
        assert!((found.extrapolated_limit_per_cm.unwrap() - depth).abs() < 1e-8);
        assert!((found.slope_per_cm - 2.0 * omega_x).abs() < 1e-9);
        assert!(birge_sponer(&levels[..2]).is_none());
    }
}
