//! `--tolerance`: how far the parabola may be off.

use super::UsageError;
use super::value::finite;
use crate::reach::{AbsoluteTolerance, ReachSettings};
use crate::scan::read::parse_energy_unit;
use crate::units::EnergyUnit;

/// Tolerances of the reach that were given; none leaves a setting alone.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Tolerances {
    /// Relative, of energy and force.
    pub relative: Option<f64>,
    /// As an energy.
    pub absolute: Option<AbsoluteTolerance>,
    /// Of the level reach in cm⁻¹.
    pub levels_per_cm: Option<f64>,
    /// Of the spacing reach in cm⁻¹.
    pub spacing_per_cm: Option<f64>,
}

const ACCEPTED: &str = "a share such as 5% or 0.05, an energy such as 1kcal/mol, levels=50cm-1 or spacing=20cm-1, several \
                        with commas between";

impl Tolerances {
    /// Takes what the option says.
    pub(super) fn read(&mut self, text: &str) -> Result<(), UsageError> {
        let wrong = || UsageError::Value {
            option: "tolerance",
            found: text.to_owned(),
            accepted: ACCEPTED.to_owned(),
        };
        for part in text.split(',').map(str::trim) {
            let energy = |t: &str| energy(t).map(|a| EnergyUnit::PerCm.from_hartree(a.hartree()));
            let taken = if let Some(rest) = part.strip_prefix("levels=") {
                self.levels_per_cm = energy(rest);
                self.levels_per_cm.is_some()
            } else if let Some(rest) = part.strip_prefix("spacing=") {
                self.spacing_per_cm = energy(rest);
                self.spacing_per_cm.is_some()
            } else if let Some(share) = share(part) {
                self.relative = Some(share);
                true
            } else {
                self.absolute = self::energy(part);
                self.absolute.is_some()
            };
            if !taken {
                return Err(wrong());
            }
        }
        Ok(())
    }

    /// Lays what was given over the settings.
    pub(super) fn apply(&self, settings: &mut ReachSettings) {
        settings.tolerance = self.relative.unwrap_or(settings.tolerance);
        settings.absolute = self.absolute.unwrap_or(settings.absolute);
        settings.level_tolerance_per_cm = self.levels_per_cm.or(settings.level_tolerance_per_cm);
        settings.spacing_tolerance_per_cm = self.spacing_per_cm.or(settings.spacing_tolerance_per_cm);
    }
}

/// `5%` or `0.05`.
fn share(text: &str) -> Option<f64> {
    let value = match text.strip_suffix('%') {
        Some(percent) => finite(percent.trim_end())? / 100.0,
        None => finite(text)?,
    };
    (value > 0.0).then_some(value)
}

/// A number with its unit of energy behind it.
fn energy(text: &str) -> Option<AbsoluteTolerance> {
    // The unit begins at the first place from which on it is one; `1e3 cm-1` has letters in its number.
    let split = text.char_indices().map(|(i, _)| i).find(|&i| {
        i > 0 && finite(text[..i].trim_end()).is_some() && parse_energy_unit(text[i..].trim()).is_some()
    })?;
    let value = finite(text[..split].trim_end()).filter(|v| *v > 0.0)?;
    Some(AbsoluteTolerance { value, unit: parse_energy_unit(text[split..].trim())? })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_form_is_understood() {
        let mut found = Tolerances::default();
        found.read("2.5%, 4 kJ/mol,levels=50cm-1,spacing=1e-3eV").unwrap();
        assert_eq!(found.relative, Some(0.025));
        assert_eq!(
            found.absolute,
            Some(AbsoluteTolerance { value: 4.0, unit: EnergyUnit::KilojoulePerMole })
        );
        assert!((found.levels_per_cm.unwrap() - 50.0).abs() < 1e-9);
        // 1 meV is 8.0655 cm⁻¹.
        assert!((found.spacing_per_cm.unwrap() - 8.0655).abs() < 1e-3);
        let mut found = Tolerances::default();
        found.read("0.1").unwrap();
        assert_eq!(found.relative, Some(0.1));
        for wrong in ["", "-5%", "0", "1 kcal", "levels=5%", "5%,", "x", "kJ/mol", "-1kJ/mol"] {
            assert!(Tolerances::default().read(wrong).is_err(), "{wrong}");
        }
    }
}
