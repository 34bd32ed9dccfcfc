//! Thermal averages of a study: over the levels found, and over E(v, J) when rotation is asked for.

use super::derived::from_own_minimum;
use crate::findings::Findings;
use crate::fit::Family;
use crate::notice::{Code, Notice};
use crate::potential::curve::ScanCurve;
use crate::species::{Masses, mean_atomic_mass_u};
use crate::thermal::{
    self, HIGHEST_J, Position, RotatingSum, SpinWeights, ThermalPoint, ThermalSettings, rotating_levels,
};
use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, PER_CM_PER_HARTREE, rotational_constant_per_cm};
use std::sync::Arc;

/// Levels with a Boltzmann factor below e^−30 do not change a sum.
const HIGHEST_IN_KT: f64 = 30.0;

/// Levels of the Morse fit whose position is computed: far more than are populated below the dissociation of a bond.
const MORSE_LEVELS: usize = 150;

/// Fills `findings.thermal`, and before it `findings.morse_positions`.
pub fn fill(findings: &mut Findings, curve: &ScanCurve) {
    findings.morse_positions = morse_positions(findings).unwrap_or_default();
    let Some(input) = findings.thermal_input() else { return };
    let Some(masses) = &findings.masses else { return };
    let settings = &findings.settings.thermal;
    let mut points = thermal::thermal(&input, &settings.temperatures_kelvin);
    let mut notices = Vec::new();
    let mut sum = None;
    if settings.rotation {
        match rotate(&mut points, findings, curve, masses) {
            Ok(found) => {
                notices.extend(cut_too_early(&points, &found));
                sum = Some(Arc::new(found));
            }
            Err(notice) => notices.push(notice),
        }
    }
    notices.extend(left_out(settings));
    notices.extend(unsupported(&points));
    findings.thermal = points;
    findings.rotating_sum = sum;
    findings.notices.append(&mut notices);
}

/// ⟨r⟩ and ⟨x²⟩ of the levels of the Morse fit that are populated at the highest temperature.
fn morse_positions(findings: &Findings) -> Option<Vec<Position>> {
    let (morse, mass_me) = (findings.morse()?, findings.masses.as_ref()?.reduced_mass_me);
    let highest = findings.settings.thermal.temperatures_kelvin.iter().copied().fold(0.0, f64::max);
    let ceiling = HIGHEST_IN_KT * BOLTZMANN_PER_CM_PER_KELVIN * highest / PER_CM_PER_HARTREE;
    let levels = morse.levels_hartree(mass_me, MORSE_LEVELS);
    let lowest = *levels.first()?;
    let populated = levels.iter().take_while(|e| **e - lowest <= ceiling).count();
    let moments = morse.moments_bohr(mass_me, populated);
    let position = |(mean_r_bohr, mean_square_x_bohr2)| Position { mean_r_bohr, mean_square_x_bohr2 };
    Some(moments.into_iter().map(position).collect())
}

fn left_out(settings: &ThermalSettings) -> Option<Notice> {
    let (low, high) = thermal::TEMPERATURES_KELVIN;
    let wrong: Vec<String> = settings
        .temperatures_kelvin
        .iter()
        .filter(|t| !(**t >= low && **t <= high))
        .map(f64::to_string)
        .collect();
    (!wrong.is_empty()).then(|| {
        let text = format!(
            "No thermal averages at {} K: temperatures between {low} and {high} K are accepted.",
            wrong.join(", ")
        );
        Notice::caution(Code::TemperatureRange, text)
    })
}

fn unsupported(points: &[ThermalPoint]) -> Option<Notice> {
    let lowest = points.iter().filter(|p| !p.converged).map(|p| p.kelvin).min_by(f64::total_cmp)?;
    let text = format!(
        "Thermal averages from {lowest} K on are not converged: more than 0.01 % of the population is in levels \
         that lean on a tail or lie beyond the last one."
    );
    Some(Notice::info(Code::ThermalLevels, text))
}

/// Adds the averages with rotation and gives what they are made from; a notice where there are none.
fn rotate(
    points: &mut [ThermalPoint],
    findings: &Findings,
    curve: &ScanCurve,
    masses: &Masses,
) -> Result<RotatingSum, Notice> {
    let lambda = findings.settings.levels.lambda;
    if lambda > 0 {
        let text = format!(
            "There are no thermal averages with rotation: they are made for closed-shell states, and this one has \
             Lambda = {lambda}."
        );
        return Err(Notice::caution(Code::ThermalLevels, text));
    }
    let highest_kelvin = points.iter().map(|p| p.kelvin).fold(0.0, f64::max);
    // Without levels this is not reached.
    let highest_v = findings.levels.len().saturating_sub(1);
    let levels = match rotating_levels(
        &curve.above_minimum(),
        masses.reduced_mass_me,
        HIGHEST_IN_KT * BOLTZMANN_PER_CM_PER_KELVIN * highest_kelvin,
        highest_v,
        findings.settings.levels.relative_accuracy,
    ) {
        Ok(levels) => levels,
        Err(error) => {
            let text = format!("There are no thermal averages with rotation: {error}.");
            return Err(Notice::caution(Code::NotConverged, text));
        }
    };
    let settings = &findings.settings.thermal;
    let of_morse = findings.found_fit(Family::Morse).and_then(|found| {
        let fit = found.result.as_ref().ok()?;
        rotating_levels(
            &from_own_minimum(&fit.model),
            masses.reduced_mass_me,
            HIGHEST_IN_KT * BOLTZMANN_PER_CM_PER_KELVIN * highest_kelvin,
            highest_v.min(MORSE_LEVELS),
            findings.settings.levels.relative_accuracy,
        )
        .ok()
    });
    let leaning_from_v = findings.levels.iter().find(|l| l.leans_on_tail).map(|l| l.v);
    let rigid = rotational_constant_per_cm(curve.local.r_e_bohr, masses.reduced_mass_me);
    let weights = spin_weights(settings, masses);
    let mut sum = RotatingSum::new(&levels, leaning_from_v, of_morse.as_deref(), rigid, weights);
    sum.mass_u = molecule_mass_u(masses);
    sum.electronic_weight = f64::from(settings.electronic_weight);
    sum.solved_for_kelvin = highest_kelvin;
    for point in points.iter_mut() {
        point.rotating = Some(sum.at(point.kelvin, point.harmonic));
    }
    Ok(sum)
}

/// Where the sum over E(v, J) was cut too early for what is populated, and by what.
fn cut_too_early(points: &[ThermalPoint], sum: &RotatingSum) -> Option<Notice> {
    let wrong = |p: &&ThermalPoint| p.rotating.is_some_and(|r| !r.converged);
    let lowest = points.iter().filter(wrong).min_by(|a, b| a.kelvin.total_cmp(&b.kelvin))?;
    let share = lowest.rotating.map_or(0.0, |r| 100.0 * r.unsupported_share);
    let (levels, highest_j) = sum.extent();
    let remedy = if highest_j >= HIGHEST_J {
        format!(
            " The sum stops at J = {HIGHEST_J}, where more levels would count: ask for lower temperatures."
        )
    } else {
        String::new()
    };
    let text = format!(
        "Thermal averages with rotation from {} K on are not converged: {} % of the population is in levels that lean on \
         a tail, or in the last ones below the limit, of {levels} levels up to J = {highest_j}.{remedy}",
        lowest.kelvin,
        crate::digits::rounded(share, 2)
    );
    let notice = if highest_j >= HIGHEST_J { Notice::caution } else { Notice::info };
    Some(notice(Code::ThermalLevels, text))
}

/// The settings' choice, else by nuclear spin for two protons (1/4, 3/4) and two deuterons (2/3, 1/3), whose
/// rotation is slow to become classical; else the symmetry number.
fn spin_weights(settings: &ThermalSettings, masses: &Masses) -> SpinWeights {
    if let Some([even, odd]) = settings.spin_weights {
        return SpinWeights::EvenOdd(even, odd);
    }
    if let Some(number) = settings.symmetry_number.filter(|n| *n > 0) {
        return SpinWeights::Symmetry(f64::from(number));
    }
    let equal = masses
        .atoms
        .as_ref()
        .filter(|[a, b]| a.symbol == b.symbol && a.mass_number == b.mass_number)
        .map(|[a, _]| (a.symbol.as_str(), a.mass_number));
    match equal {
        Some(("H", 1)) => SpinWeights::EvenOdd(0.25, 0.75),
        Some(("H", 2)) => SpinWeights::EvenOdd(2.0 / 3.0, 1.0 / 3.0),
        Some(_) => SpinWeights::Symmetry(2.0),
        None => SpinWeights::Symmetry(1.0),
    }
}

/// Mass of the molecule in u: the mean over natural isotopes where an atom is the default isotope, as tables of
/// thermochemistry have it, else the isotope chosen. None without atoms.
fn molecule_mass_u(masses: &Masses) -> Option<f64> {
    let atoms = masses.atoms.as_ref()?;
    Some(atoms.iter().map(|a| mean_atomic_mass_u(&a.symbol, a.mass_number).unwrap_or(a.mass_u.value)).sum())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::settings::Settings;

    fn found(change: impl Fn(&mut Settings)) -> Findings {
        let text = include_str!("../../sample-scans/lih_X_A.csv");
        let scan = crate::scan::read::read_scan("lih_X_A.csv", text.as_bytes(), &Default::default()).unwrap();
        let mut settings = Settings::default();
        settings.masses.atoms = Some(crate::species::parse_atoms("7Li,1H").unwrap());
        settings.thermal.rotation = true;
        change(&mut settings);
        crate::study::study(&scan, &settings).unwrap()
    }

    fn notice(findings: &Findings) -> Option<&str> {
        let with_rotation = |n: &&Notice| n.code == Code::ThermalLevels && n.text.contains("with rotation");
        findings.notices.iter().find(with_rotation).map(|n| n.text.as_str())
    }

    /// Levels cut at v = 2 lack what is populated when hot, and the notice says from which temperature on; with all of
    /// them nothing is lacking.
    #[test]
    fn a_sum_cut_too_early_is_said_with_its_temperature() {
        let whole = found(|_| {});
        assert!(whole.thermal.iter().all(|p| p.rotating.is_some_and(|r| r.converged)));
        assert_eq!(notice(&whole), None);
        let cut = found(|s| s.levels.highest_v = 2);
        let firm = |kelvin: f64| {
            let point = cut.thermal.iter().find(|p| p.kelvin == kelvin).unwrap();
            point.rotating.unwrap().converged
        };
        assert!(firm(100.0) && firm(200.0) && !firm(2000.0));
        let lowest = cut.thermal.iter().find(|p| !firm(p.kelvin)).unwrap().kelvin;
        let said = notice(&cut).unwrap();
        assert!(said.contains(&format!("from {lowest} K on")) && said.contains("up to J ="), "{said}");
    }

    /// At other temperatures than those listed the kept levels give what a study of that temperature gives, and beyond
    /// the highest one they say when they no longer suffice.
    #[test]
    fn kept_levels_serve_any_temperature() {
        let listed = found(|s| s.thermal.temperatures_kelvin = vec![300.0, 1000.0]);
        let own = found(|s| s.thermal.temperatures_kelvin = vec![650.0, 1000.0]);
        let at = listed.thermal_at(&[650.0]).remove(0).rotating.unwrap();
        let wanted = own.thermal[0].rotating.unwrap();
        assert_eq!(at.rovibrational, wanted.rovibrational);
        assert_eq!((at.mean_r_bohr, at.ideal_gas), (wanted.mean_r_bohr, wanted.ideal_gas));
        let hot = listed.thermal_at(&[9000.0]).remove(0).rotating.unwrap();
        assert!(!hot.converged && hot.unsupported_share > 1e-4);
    }
}
