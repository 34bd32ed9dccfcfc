//! Remarks on a scan that need the curve, the masses or the levels: the grid where the zero-point density
//! lives, the range that the levels need, what the noise does to the anharmonicity, and units or masses that
//! cannot be meant.

use crate::findings::Findings;
use crate::notice::{Code, Notice};
use crate::potential::curve::{LocalDerivatives, ScanCurve};
use crate::scan::EnergyColumn;
use crate::spectroscopy::dunham;
use crate::units::{EnergyUnit, omega_e_per_cm, to_angstrom, to_per_cm};

/// Points per zero-point amplitude below which the grid is called coarse: with steps of a whole amplitude the
/// curve under the lowest level rests on about five points.
pub(super) const STEPS_PER_AMPLITUDE: f64 = 1.0;
/// Bond lengths (angstrom) between which every known bond lies, from H2+ squeezed to weakly bound rare gases
/// (common practice, no source).
const PLAUSIBLE_R_ANGSTROM: (f64, f64) = (0.3, 8.0);
/// Force constants (N/m) between which every known bond lies: N2 has 2300, Ne2 about 0.1 (from memory).
const PLAUSIBLE_K: (f64, f64) = (0.02, 6000.0);
/// Wells deeper than this (hartree) are no bonds: CO has 0.41 (from memory).
const DEEPEST_WELL_HARTREE: f64 = 5.0;
/// Harmonic wavenumbers above this are no vibrations: H2 has 4401 (from memory), muonium is left out.
const HIGHEST_OMEGA_PER_CM: f64 = 7000.0;
/// Noise that moves the anharmonicity by more than this share of itself is a caution.
const NOISE_SHARE: f64 = 0.1;
/// Rounding steps that move the anharmonicity by more than this share of itself are a caution.
const ROUNDING_SHARE: f64 = 0.05;

/// Adds what there is to say.
pub fn remark(findings: &mut Findings, curve: &ScanCurve, column: &EnergyColumn) {
    let mut found = Vec::new();
    found.extend(implausible_units(findings, curve));
    let rounding = rounding(findings, curve, column);
    if rounding.is_none() {
        noise(findings, curve);
    }
    found.extend(rounding);
    if let Some(mass_me) = findings.masses.as_ref().map(|m| m.reduced_mass_me) {
        found.extend(implausible_mass(curve, mass_me));
        found.extend(coarse_grid(findings, curve, mass_me));
        found.extend(short_range(findings, curve));
    }
    findings.notices.append(&mut found);
}

/// Relative change of the anharmonicity, which does not depend on the mass, when every energy near the minimum
/// moves by its own error.
fn shift_of_anharmonicity(curve: &ScanCurve) -> Option<f64> {
    let of = |local: &LocalDerivatives| {
        let (a1, a2) = local.dunham_a1_a2();
        (1.25 * a1 * a1 - a2) / local.r_e_bohr.powi(2)
    };
    let own = of(&curve.local);
    let squares: f64 = curve.noise_variants.iter().map(|v| (of(v) - own).powi(2)).sum();
    let share = squares.sqrt() / own.abs();
    (share > 0.0 && share.is_finite()).then_some(share)
}

/// Says in the notice on the noise what it does to ω_e x_e.
fn noise(findings: &mut Findings, curve: &ScanCurve) {
    let Some(share) = shift_of_anharmonicity(curve) else { return };
    let mass_me = findings.masses.as_ref().map(|m| m.reduced_mass_me);
    let constants = mass_me.map(|mass| dunham(&curve.local, mass).omega_e_x_e_per_cm);
    let moved = match constants.filter(|x| x.is_finite()) {
        Some(x) => format!("{} cm-1 ({:.1} %)", crate::digits::rounded((share * x).abs(), 2), 100.0 * share),
        None => format!("{:.1} %", 100.0 * share),
    };
    if let Some(notice) = findings.notices.iter_mut().find(|n| n.code == Code::Noise) {
        notice.text.push_str(&format!(" It alone makes omega_e x_e uncertain by {moved}."));
        if share > NOISE_SHARE {
            notice.severity = crate::notice::Severity::Caution;
            notice.text.push_str(" Tighter convergence thresholds would help more than further points.");
        }
    }
}

/// Decimal places that all energies of the column share; none for more than 12, which no table prints.
fn decimals(column: &EnergyColumn) -> Option<i32> {
    let whole = |scale: f64| {
        column.values.iter().flatten().all(|v| {
            let scaled = v * scale;
            (scaled - scaled.round()).abs() <= 1e-9 * scaled.abs().max(1.0)
        })
    };
    (0..=9).find(|&d| whole(10_f64.powi(d)))
}

/// Energies written with too few digits: the rounding alone would move the anharmonicity.
fn rounding(findings: &Findings, curve: &ScanCurve, column: &EnergyColumn) -> Option<Notice> {
    let places = decimals(column)?;
    let step_hartree = column.unit.to_hartree(10_f64.powi(-places)) - column.unit.to_hartree(0.0);
    // Standard deviation of rounding to the nearest step.
    let error = step_hartree / 12.0_f64.sqrt();
    let noise = curve.noise_hartree?;
    // Where the noise is far larger than the last digit, it is no matter of digits.
    if noise > 3.0 * error || noise < 0.3 * error {
        return None;
    }
    let share = shift_of_anharmonicity(curve)?;
    (share > ROUNDING_SHARE && findings.source.points.len() > 4).then(|| {
        let text = format!(
            "The energies look rounded: they have {places} decimal places in {} and a scatter of just that size \
             ({:.1e} cm-1). It alone makes omega_e x_e uncertain by {:.0} %; print more digits.",
            column.unit.name(),
            to_per_cm(noise),
            100.0 * share
        );
        Notice::caution(Code::RoundedEnergies, text)
    })
}

fn implausible_units(findings: &Findings, curve: &ScanCurve) -> Option<Notice> {
    let r_e = to_angstrom(curve.local.r_e_bohr);
    let k = curve.local.second_hartree * crate::units::NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2;
    let used = findings.source.points.iter().filter(|p| p.used && p.r_bohr > curve.local.r_e_bohr);
    let highest = used.map(|p| p.energy_hartree).fold(f64::NEG_INFINITY, f64::max);
    let well = highest - curve.v_e_hartree.value;
    let units = format!(
        "bond lengths in {} and energies in {}",
        findings.source.length_unit.name(),
        findings.source.energy_unit.name()
    );
    let odd = if !(PLAUSIBLE_R_ANGSTROM.0..=PLAUSIBLE_R_ANGSTROM.1).contains(&r_e) {
        format!("the bond would be {r_e:.3} angstrom long")
    } else if !(PLAUSIBLE_K.0..=PLAUSIBLE_K.1).contains(&k) {
        format!("the force constant would be {} N/m", crate::digits::rounded(k, 3))
    } else if well > DEEPEST_WELL_HARTREE {
        format!(
            "the well would be at least {} eV deep",
            crate::digits::rounded(EnergyUnit::Electronvolt.from_hartree(well), 3)
        )
    } else {
        return None;
    };
    let text = format!("With {units} {odd}, which no bond is. Check the units.");
    Some(Notice::caution(Code::ImplausibleUnit, text).at([curve.local.r_e_bohr]))
}

fn implausible_mass(curve: &ScanCurve, mass_me: f64) -> Option<Notice> {
    let omega = omega_e_per_cm(curve.local.second_hartree, mass_me);
    (omega > HIGHEST_OMEGA_PER_CM).then(|| {
        let text = format!(
            "With this mass omega_e would be {omega:.0} cm-1; no bond vibrates faster than H2 (4401 cm-1). Check the \
             atoms or the reduced mass, which is in u, and the units."
        );
        Notice::caution(Code::ImplausibleMass, text)
    })
}

/// The steps between points where the lowest level lives, against its amplitude √(ħ/(μω)).
fn coarse_grid(findings: &Findings, curve: &ScanCurve, mass_me: f64) -> Option<Notice> {
    let r_e = curve.local.r_e_bohr;
    let amplitude = (curve.local.second_hartree * mass_me).powf(-0.25);
    // The density of v = 0 lies to 99.5 % within twice the amplitude.
    let (from, to) = (r_e - 2.0 * amplitude, r_e + 2.0 * amplitude);
    let points: Vec<f64> = findings.source.points.iter().filter(|p| p.used).map(|p| p.r_bohr).collect();
    let steps = points.windows(2).filter(|w| w[1] > from && w[0] < to);
    let widest = steps.max_by(|a, b| (a[1] - a[0]).total_cmp(&(b[1] - b[0])))?;
    let step = widest[1] - widest[0];
    (step * STEPS_PER_AMPLITUDE > amplitude).then(|| {
        let text = format!(
            "The grid is coarse where the lowest level lives: steps up to {:.4} angstrom against a zero-point amplitude \
             of {:.4} angstrom.",
            to_angstrom(step),
            to_angstrom(amplitude)
        );
        Notice::caution(Code::CoarseGrid, text).at([widest[0], widest[1]])
    })
}

/// Ends of the scan that lie below the levels that the constants are taken from.
fn short_range(findings: &Findings, curve: &ScanCurve) -> Option<Notice> {
    let points: Vec<_> = findings.source.points.iter().filter(|p| p.used).collect();
    let (first, last) = (points.first()?, points.last()?);
    let above = |energy: f64| to_per_cm(energy - curve.v_e_hartree.value);
    let wanted = findings.settings.levels.constants_highest_v;
    let level = findings.levels.iter().rfind(|l| l.v <= wanted)?;
    let short: Vec<(&str, f64, f64)> = [("inner", first), ("outer", last)]
        .into_iter()
        .map(|(side, p)| (side, above(p.energy_hartree), p.r_bohr))
        .filter(|(_, height, _)| *height < level.energy_per_cm)
        .collect();
    if short.is_empty() {
        return None;
    }
    let ends: Vec<String> = short
        .iter()
        .map(|(side, height, _)| format!("at the {side} end it reaches {height:.0} cm-1"))
        .collect();
    let text = format!(
        "The scan is too short for the level v = {} at {:.0} cm-1, which the constants from levels are to use: {}. \
         Extend it there.",
        level.v,
        level.energy_per_cm,
        ends.join(", ")
    );
    Some(Notice::info(Code::ShortRange, text).at(short.iter().map(|s| s.2)))
}
