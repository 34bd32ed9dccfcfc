//! Physical constants of one vintage (CODATA 2022) and the only unit conversions of the program.
//!
//! Source of every constant: CODATA recommended values 2022 (E. Tiesinga, P. J. Mohr, D. B. Newell,
//! B. N. Taylor), digits as published; those marked *exact* are fixed by the SI of 2019.

use serde::{Deserialize, Serialize};

/// Bohr radius in angstrom (CODATA 2022: 5.29177210544(82)e-11 m).
pub const ANGSTROM_PER_BOHR: f64 = 0.529_177_210_544;
/// Hartree in cm⁻¹ (CODATA 2022: hartree-inverse metre 2.1947463136314(24)e7 m⁻¹).
pub const PER_CM_PER_HARTREE: f64 = 219_474.631_363_14;
/// Hartree in electronvolt (CODATA 2022: 27.211386245981(30)).
pub const ELECTRONVOLT_PER_HARTREE: f64 = 27.211_386_245_981;
/// Hartree in joule (CODATA 2022: 4.3597447222060(48)e-18).
pub const JOULE_PER_HARTREE: f64 = 4.359_744_722_206e-18;
/// Avogadro constant in 1/mol (exact).
pub const AVOGADRO_PER_MOL: f64 = 6.022_140_76e23;
/// Boltzmann constant in J/K (exact).
pub const BOLTZMANN_JOULE_PER_KELVIN: f64 = 1.380_649e-23;
/// Planck constant in J s (exact).
pub const PLANCK_JOULE_SECOND: f64 = 6.626_070_15e-34;
/// Speed of light in m/s (exact).
pub const LIGHT_METRE_PER_SECOND: f64 = 299_792_458.0;
/// Electron mass in u (CODATA 2022: 5.485799090441(97)e-4).
pub const U_PER_ELECTRON_MASS: f64 = 5.485_799_090_441e-4;
/// Thermochemical calorie in joule (exact by definition).
pub const JOULE_PER_CALORIE: f64 = 4.184;
/// Hartree in kJ/mol, from the hartree in joule and the Avogadro constant.
pub const KILOJOULE_PER_MOLE_PER_HARTREE: f64 = JOULE_PER_HARTREE * AVOGADRO_PER_MOL * 1e-3;
/// Hartree/bohr² in N/m, from the hartree in joule and the Bohr radius.
pub const NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2: f64 =
    JOULE_PER_HARTREE / (ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR * 1e-20);
/// Boltzmann constant in cm⁻¹/K: k_B/(h c).
pub const BOLTZMANN_PER_CM_PER_KELVIN: f64 =
    BOLTZMANN_JOULE_PER_KELVIN / (PLANCK_JOULE_SECOND * LIGHT_METRE_PER_SECOND * 100.0);
/// Molar gas constant in J/(mol K) (exact): N_A k_B.
pub const GAS_CONSTANT_JOULE_PER_MOLE_KELVIN: f64 = AVOGADRO_PER_MOL * BOLTZMANN_JOULE_PER_KELVIN;

/// Unit of an energy column.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum EnergyUnit {
    /// Hartree, E_h.
    #[serde(rename = "hartree")]
    Hartree,
    /// Electronvolt.
    #[serde(rename = "eV")]
    Electronvolt,
    /// Millielectronvolt.
    #[serde(rename = "meV")]
    Millielectronvolt,
    /// Kilojoule per mole.
    #[serde(rename = "kJ/mol")]
    KilojoulePerMole,
    /// Kilocalorie (thermochemical) per mole.
    #[serde(rename = "kcal/mol")]
    KilocaloriePerMole,
    /// Wavenumber, E/(h c).
    #[serde(rename = "cm-1")]
    PerCm,
}

impl EnergyUnit {
    /// All energy units, in the order in which they are offered.
    pub const ALL: [Self; 6] = [
        Self::Hartree,
        Self::Electronvolt,
        Self::Millielectronvolt,
        Self::KilojoulePerMole,
        Self::KilocaloriePerMole,
        Self::PerCm,
    ];

    /// The name used in files and options.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Hartree => "hartree",
            Self::Electronvolt => "eV",
            Self::Millielectronvolt => "meV",
            Self::KilojoulePerMole => "kJ/mol",
            Self::KilocaloriePerMole => "kcal/mol",
            Self::PerCm => "cm-1",
        }
    }

    /// How many of this unit make one hartree.
    pub const fn per_hartree(self) -> f64 {
        match self {
            Self::Hartree => 1.0,
            Self::Electronvolt => ELECTRONVOLT_PER_HARTREE,
            Self::Millielectronvolt => ELECTRONVOLT_PER_HARTREE * 1e3,
            Self::KilojoulePerMole => KILOJOULE_PER_MOLE_PER_HARTREE,
            Self::KilocaloriePerMole => KILOJOULE_PER_MOLE_PER_HARTREE / JOULE_PER_CALORIE,
            Self::PerCm => PER_CM_PER_HARTREE,
        }
    }

    /// Converts a value in this unit to hartree.
    pub const fn to_hartree(self, value: f64) -> f64 {
        value / self.per_hartree()
    }

    /// Converts a value in hartree to this unit.
    pub const fn from_hartree(self, value_hartree: f64) -> f64 {
        value_hartree * self.per_hartree()
    }
}

/// Unit of a length column.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum LengthUnit {
    /// 1e-10 m.
    #[serde(rename = "angstrom")]
    Angstrom,
    /// Bohr radius.
    #[serde(rename = "bohr")]
    Bohr,
    /// 1e-12 m.
    #[serde(rename = "pm")]
    Picometre,
    /// 1e-9 m.
    #[serde(rename = "nm")]
    Nanometre,
}

impl LengthUnit {
    /// All length units, in the order in which they are offered.
    pub const ALL: [Self; 4] = [Self::Angstrom, Self::Bohr, Self::Picometre, Self::Nanometre];

    /// The name used in files and options.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Angstrom => "angstrom",
            Self::Bohr => "bohr",
            Self::Picometre => "pm",
            Self::Nanometre => "nm",
        }
    }

    /// Converts a value in this unit to bohr.
    pub const fn to_bohr(self, value: f64) -> f64 {
        match self {
            Self::Bohr => value,
            Self::Angstrom => value / ANGSTROM_PER_BOHR,
            Self::Picometre => value / (ANGSTROM_PER_BOHR * 100.0),
            Self::Nanometre => value / (ANGSTROM_PER_BOHR / 10.0),
        }
    }

    /// Converts a value in bohr to this unit.
    pub const fn from_bohr(self, value_bohr: f64) -> f64 {
        match self {
            Self::Bohr => value_bohr,
            Self::Angstrom => value_bohr * ANGSTROM_PER_BOHR,
            Self::Picometre => value_bohr * (ANGSTROM_PER_BOHR * 100.0),
            Self::Nanometre => value_bohr * (ANGSTROM_PER_BOHR / 10.0),
        }
    }

    /// Converts a value in this unit to `other`; the same unit gives the same digits.
    pub fn convert(self, value: f64, other: Self) -> f64 {
        if self == other { value } else { other.from_bohr(self.to_bohr(value)) }
    }
}

/// Unit of a force constant.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub enum ForceConstantUnit {
    /// Newton per metre.
    #[default]
    #[serde(rename = "N/m")]
    NewtonPerMetre,
    /// Millidyne per angstrom, 100 N/m.
    #[serde(rename = "mdyn/angstrom")]
    MillidynePerAngstrom,
    /// The atomic unit.
    #[serde(rename = "hartree/bohr^2")]
    HartreePerBohr2,
    /// As molecular mechanics in SI-like units has it.
    #[serde(rename = "kJ/(mol nm^2)")]
    KilojoulePerMoleNanometre2,
    /// As molecular mechanics in calories has it.
    #[serde(rename = "kcal/(mol angstrom^2)")]
    KilocaloriePerMoleAngstrom2,
}

impl ForceConstantUnit {
    /// All of them, in the order in which they are offered.
    pub const ALL: [Self; 5] = [
        Self::NewtonPerMetre,
        Self::MillidynePerAngstrom,
        Self::HartreePerBohr2,
        Self::KilojoulePerMoleNanometre2,
        Self::KilocaloriePerMoleAngstrom2,
    ];

    /// The name used in files and options.
    pub const fn name(self) -> &'static str {
        match self {
            Self::NewtonPerMetre => "N/m",
            Self::MillidynePerAngstrom => "mdyn/angstrom",
            Self::HartreePerBohr2 => "hartree/bohr^2",
            Self::KilojoulePerMoleNanometre2 => "kJ/(mol nm^2)",
            Self::KilocaloriePerMoleAngstrom2 => "kcal/(mol angstrom^2)",
        }
    }

    /// How many of this unit make one hartree/bohr².
    pub const fn per_hartree_per_bohr2(self) -> f64 {
        const BOHR_NM: f64 = ANGSTROM_PER_BOHR * 0.1;
        match self {
            Self::NewtonPerMetre => NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2,
            Self::MillidynePerAngstrom => NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2 * 0.01,
            Self::HartreePerBohr2 => 1.0,
            Self::KilojoulePerMoleNanometre2 => KILOJOULE_PER_MOLE_PER_HARTREE / (BOHR_NM * BOHR_NM),
            Self::KilocaloriePerMoleAngstrom2 => {
                KILOJOULE_PER_MOLE_PER_HARTREE / JOULE_PER_CALORIE / (ANGSTROM_PER_BOHR * ANGSTROM_PER_BOHR)
            }
        }
    }
}

/// What a force constant k stands for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ForceConstantConvention {
    /// V = ½ k x²: k is the curvature.
    #[default]
    Half,
    /// V = k x²: k is half the curvature, as in many force fields.
    Full,
}

impl ForceConstantConvention {
    /// The word used in options.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Half => "half",
            Self::Full => "full",
        }
    }

    /// The formula in plain text.
    pub const fn formula(self) -> &'static str {
        match self {
            Self::Half => "V = 1/2 k x^2",
            Self::Full => "V = k x^2",
        }
    }

    /// k of this convention over the curvature.
    pub const fn of_curvature(self) -> f64 {
        match self {
            Self::Half => 1.0,
            Self::Full => 0.5,
        }
    }
}

/// Mass in u to electron masses.
pub const fn u_to_electron_masses(mass_u: f64) -> f64 {
    mass_u / U_PER_ELECTRON_MASS
}

/// Bohr to angstrom.
pub const fn to_angstrom(r_bohr: f64) -> f64 {
    LengthUnit::Angstrom.from_bohr(r_bohr)
}

/// Hartree to cm⁻¹.
pub const fn to_per_cm(energy_hartree: f64) -> f64 {
    EnergyUnit::PerCm.from_hartree(energy_hartree)
}

/// Harmonic wavenumber ω_e/cm⁻¹ = sqrt(k/μ)/(2π c), from k in hartree/bohr² and μ in electron masses.
///
/// In atomic units the level spacing of the oscillator is sqrt(k/μ) hartree. NaN when k/μ < 0.
pub fn omega_e_per_cm(force_constant_hartree_per_bohr2: f64, reduced_mass_me: f64) -> f64 {
    to_per_cm((force_constant_hartree_per_bohr2 / reduced_mass_me).sqrt())
}

/// Rotational constant B/cm⁻¹ = ħ²/(2 μ r²)/(h c), from r in bohr and μ in electron masses.
pub fn rotational_constant_per_cm(r_bohr: f64, reduced_mass_me: f64) -> f64 {
    to_per_cm(1.0 / (2.0 * reduced_mass_me * r_bohr * r_bohr))
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::PI;

    fn close(a: f64, b: f64, relative: f64) {
        assert!((a - b).abs() <= relative * b.abs(), "{a} against {b}");
    }

    /// The published factors must agree with each other through a second route; the tolerance is the
    /// rounding of the printed digits.
    #[test]
    fn factors_agree_by_a_second_route() {
        let hc = PLANCK_JOULE_SECOND * LIGHT_METRE_PER_SECOND * 100.0;
        close(PER_CM_PER_HARTREE, JOULE_PER_HARTREE / hc, 1e-12);
        // Twice the Rydberg constant, 10973731.568157 m⁻¹ (CODATA 2022).
        close(PER_CM_PER_HARTREE, 2.0 * 109_737.315_681_57, 1e-13);
        close(ELECTRONVOLT_PER_HARTREE, JOULE_PER_HARTREE / 1.602_176_634e-19, 1e-13);
        // ħ²/(2 u) in cm⁻¹ u Å² from h, c and m_u = 1.66053906892e-27 kg (CODATA 2022).
        let hbar = PLANCK_JOULE_SECOND / (2.0 * PI);
        let si = hbar * hbar / (2.0 * 1.660_539_068_92e-27 * 1e-20) / hc;
        let ours = rotational_constant_per_cm(LengthUnit::Angstrom.to_bohr(1.0), u_to_electron_masses(1.0));
        close(ours, si, 5e-12);
        close(BOLTZMANN_PER_CM_PER_KELVIN, 0.695_034_800_486_127_4, 1e-15);
    }

    #[test]
    fn force_constants_agree_with_published_factors() {
        let per = |unit: ForceConstantUnit| unit.per_hartree_per_bohr2();
        // The atomic unit of force, 8.2387235038e-8 N (CODATA 2022), over the Bohr radius.
        close(per(ForceConstantUnit::NewtonPerMetre), 8.238_723_503_8e-8 / 5.291_772_105_44e-11, 1e-10);
        // 15.569141 mdyn/angstrom a hartree/bohr² (common in force-field work; from memory, older constants).
        close(per(ForceConstantUnit::MillidynePerAngstrom), 15.569_141, 2e-5);
        // 143.9325 kcal/(mol angstrom²) a mdyn/angstrom (from memory): 1e-18 J times N_A over 4184 J.
        let ratio = per(ForceConstantUnit::KilocaloriePerMoleAngstrom2)
            / per(ForceConstantUnit::MillidynePerAngstrom);
        close(ratio, 6.022_140_76e23 * 1e-18 / 4184.0, 1e-14);
        close(ratio, 143.932_5, 1e-5);
        // 418.4 by definition of the calorie.
        let ratio = per(ForceConstantUnit::KilojoulePerMoleNanometre2)
            / per(ForceConstantUnit::KilocaloriePerMoleAngstrom2);
        close(ratio, 418.4, 1e-14);
        assert_eq!(per(ForceConstantUnit::HartreePerBohr2), 1.0);
        for unit in ForceConstantUnit::ALL {
            assert_eq!(serde_json::to_value(unit).unwrap(), unit.name());
        }
    }

    #[test]
    fn round_trips_keep_the_value() {
        for unit in EnergyUnit::ALL {
            close(unit.from_hartree(unit.to_hartree(1.234_5)), 1.234_5, 4e-16);
        }
        for unit in LengthUnit::ALL {
            close(unit.from_bohr(unit.to_bohr(1.234_5)), 1.234_5, 4e-16);
            assert_eq!(unit.convert(1.234_5, unit).to_bits(), 1.234_5_f64.to_bits());
        }
    }
}
