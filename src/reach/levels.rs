//! Reach by level and by level spacing.

use super::LevelReach;

/// The highest v with |ω_e (v + ½) − E_v| within the tolerance for it and all lower levels.
///
/// `energies_per_cm`: rotationless levels from V_e, v ascending from 0.
pub fn level_reach(energies_per_cm: &[f64], omega_e_per_cm: f64, tolerance_per_cm: f64) -> LevelReach {
    let deviations = energies_per_cm.iter().enumerate().map(|(v, e)| omega_e_per_cm * (v as f64 + 0.5) - e);
    LevelReach { tolerance_per_cm, highest_v: last_within(deviations, tolerance_per_cm) }
}

/// The highest v with |ω_e − (G(v + 1) − G(v))| within the tolerance for it and all lower ones.
pub fn spacing_reach(energies_per_cm: &[f64], omega_e_per_cm: f64, tolerance_per_cm: f64) -> LevelReach {
    let deviations = energies_per_cm.windows(2).map(|pair| omega_e_per_cm - (pair[1] - pair[0]));
    LevelReach { tolerance_per_cm, highest_v: last_within(deviations, tolerance_per_cm) }
}

fn last_within(deviations: impl Iterator<Item = f64>, tolerance: f64) -> Option<usize> {
    deviations.take_while(|d| d.abs() <= tolerance).count().checked_sub(1)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Morse: the level deviation is ω_e x_e (v + ½)², that of the spacing 2 ω_e x_e (v + 1).
    #[test]
    fn morse_ladder() {
        let (omega, anharmonicity) = (2000.0, 15.0);
        let energies: Vec<f64> =
            (0..20).map(|v| f64::from(v) + 0.5).map(|n| omega * n - anharmonicity * n * n).collect();
        // 15 (v + ½)² ≤ 100 up to v = 2 (93.75); 30 (v + 1) ≤ 100 up to v = 2 (90).
        assert_eq!(level_reach(&energies, omega, 100.0).highest_v, Some(2));
        assert_eq!(spacing_reach(&energies, omega, 100.0).highest_v, Some(2));
        assert_eq!(level_reach(&energies, omega, 3.0).highest_v, None);
        assert_eq!(spacing_reach(&energies[..1], omega, 1e9).highest_v, None);
    }
}
