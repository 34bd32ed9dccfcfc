//! Other isotopes of the same molecule on the same curve.

use crate::findings::{Findings, IsotopicLevel, Isotopologue};
use crate::parallel::in_halves;
use crate::potential::curve::ScanCurve;
use crate::radial::{RadialRequest, solve};
use crate::settings::Settings;
use crate::species::{self, MassSettings, Masses, SpeciesError};
use crate::units::{omega_e_per_cm, to_per_cm};

/// The masses of all pairs that the settings name.
///
/// # Errors
/// [`SpeciesError`] for a pair that does not exist.
pub fn masses(settings: &Settings, scan_charge: Option<i32>) -> Result<Vec<Masses>, SpeciesError> {
    let one = |atoms: &[species::AtomChoice; 2]| {
        let choice =
            MassSettings { atoms: Some(atoms.clone()), reduced_mass_u: None, ..settings.masses.clone() };
        species::masses(&choice, None, scan_charge)
    };
    settings.isotopologues.iter().filter_map(|atoms| one(atoms).transpose()).collect()
}

/// Solves for the levels of every pair, without rotation.
pub fn fill(findings: &mut Findings, curve: &ScanCurve, pairs: &[Masses]) {
    let settings = &findings.settings.levels;
    let above = curve.above_minimum();
    let one = |masses: &Masses| {
        let mass_me = masses.reduced_mass_me;
        let request = RadialRequest {
            reduced_mass_me: mass_me,
            rotation_x: 0.0,
            relative_accuracy: settings.relative_accuracy,
            highest_v: Some(settings.highest_v),
        };
        let solution = solve(&above, &request).ok();
        let seen = solution.map(|s| s.observables(&above, curve.local.r_e_bohr, 0.0)).unwrap_or_default();
        let levels = seen.iter().map(|level| IsotopicLevel {
            v: level.v,
            energy_per_cm: level.energy_per_cm,
            b_v_per_cm: level.b_v_per_cm,
            shift_per_cm: findings.levels.get(level.v).map(|own| level.energy_per_cm - own.energy_per_cm),
        });
        Isotopologue {
            omega_e_per_cm: omega_e_per_cm(curve.local.second_hartree, mass_me),
            zero_point_energy_per_cm: seen.first().map(|level| level.energy_per_cm),
            d_0_per_cm: curve
                .asymptote_hartree()
                .and(curve.tail_depth_hartree())
                .zip(seen.first())
                .map(|(depth, level)| to_per_cm(depth) - level.energy_per_cm),
            levels: levels.collect(),
            masses: masses.clone(),
        }
    };
    let all = in_halves(pairs, 2, |part| part.iter().map(one).collect());
    findings.isotopologues = all;
}
