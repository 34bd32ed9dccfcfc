//! The densities of one level as lines on the main plot: numerical, harmonic, Morse, classical, averaged.

use super::densities::{reach_angstrom, scale_per_cm, split};
use crate::density::DensityFigures;
use crate::findings::Findings;
use crate::study::level_densities;
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom};

/// Which density a line shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DensityKind {
    /// Of the numerical level.
    Numerical,
    /// Of the harmonic level of the same v.
    Harmonic,
    /// Of the Morse fit's level of the same v.
    Morse,
    /// Of the classical particle with the numerical level's energy.
    Classical,
    /// The numerical one averaged over the width.
    AveragedNumerical,
    /// The classical one averaged over the same width.
    AveragedClassical,
}

/// One density. To be drawn from `energy_per_cm` upwards, by [`DensityPicture::scale_per_cm`] a unit.
#[derive(Clone, Debug, PartialEq)]
pub struct DensityLine {
    /// Which.
    pub kind: DensityKind,
    /// Its name in a legend.
    pub label: &'static str,
    /// What it is, in a sentence.
    pub about: &'static str,
    /// Energy of its own level above the minimum in cm⁻¹: where its base line stands.
    pub energy_per_cm: f64,
    /// Bond length in angstrom and density in 1/angstrom, ascending.
    pub points: Vec<[f64; 2]>,
    /// Classical turning points of its own level in angstrom: beyond them lie the forbidden tails.
    pub turning_points: Option<(f64, f64)>,
    /// Index ranges of `points` inside the reach (true) and outside, in order; neighbours share an end.
    pub parts: Vec<(bool, std::ops::RangeInclusive<usize>)>,
}

/// All densities of one level.
#[derive(Clone, Debug, PartialEq)]
pub struct DensityPicture {
    /// Vibrational quantum number.
    pub v: usize,
    /// The lines: numerical first, then whatever else the study has.
    pub lines: Vec<DensityLine>,
    /// cm⁻¹ of the plot per unit of density, the same as that of [`super::LevelPicture`].
    pub scale_per_cm: f64,
    /// The averaging width in angstrom.
    pub averaging_width: Option<f64>,
    /// Forbidden probabilities, shares inside the reach, distance to the classical density.
    pub figures: DensityFigures,
}

/// The densities of level `v`, averaged over `averaging_width` (angstrom; none: as the settings say); none where
/// there is no such level.
pub fn density_picture(
    findings: &Findings,
    v: usize,
    averaging_width: Option<f64>,
) -> Option<DensityPicture> {
    let width_bohr = averaging_width.map(|w| crate::units::LengthUnit::Angstrom.to_bohr(w));
    let found = level_densities(findings, v, width_bohr)?;
    let level = findings.levels.iter().find(|l| l.v == v)?;
    let own = (level.inner_turning_point_bohr, level.outer_turning_point_bohr);
    let reach = reach_angstrom(findings);
    let mut lines = Vec::new();
    let mut add = |kind, label, about, energy: Option<f64>, turning: Option<(f64, f64)>, list: &[f64]| {
        let Some(energy_per_cm) = energy.filter(|_| !list.is_empty()) else { return };
        let both = found.r_bohr.iter().zip(list);
        let (mut r, mut density): (Vec<f64>, Vec<f64>) = both
            .map(|(r, d)| (to_angstrom(*r), d / ANGSTROM_PER_BOHR))
            .filter(|(r, d)| r.is_finite() && d.is_finite())
            .unzip();
        let parts = match reach {
            Some(reach) => split(&mut r, &mut density, reach),
            None => r.len().checked_sub(1).map(|last| (false, 0..=last)).into_iter().collect(),
        };
        lines.push(DensityLine {
            kind,
            label,
            about,
            energy_per_cm,
            points: r.into_iter().zip(density).map(|(r, d)| [r, d]).collect(),
            turning_points: turning.map(|(a, b)| (to_angstrom(a), to_angstrom(b))),
            parts,
        });
    };
    let energy = Some(found.energy_per_cm);
    add(
        DensityKind::Numerical,
        "numerical",
        "|ψ|² of the level of the curve.",
        energy,
        Some(own),
        &found.numerical_per_bohr,
    );
    add(
        DensityKind::Harmonic,
        "harmonic",
        "|ψ|² of the same v in the parabola with k = V″(rₑ).",
        found.harmonic_energy_per_cm,
        found.harmonic_turning_points_bohr,
        &found.harmonic_per_bohr,
    );
    add(
        DensityKind::Morse,
        "Morse",
        "|ψ|² of the same v of the Morse fit [Morse 1929].",
        found.morse_energy_per_cm,
        found.morse_turning_points_bohr,
        &found.morse_per_bohr,
    );
    add(
        DensityKind::Classical,
        "classical",
        "The share of a period that a classical particle of this energy spends at each bond length.",
        energy,
        Some(own),
        &found.classical_per_bohr,
    );
    add(
        DensityKind::AveragedNumerical,
        "numerical, averaged",
        "|ψ|² averaged over the width.",
        energy,
        Some(own),
        &found.averaged_numerical_per_bohr,
    );
    add(
        DensityKind::AveragedClassical,
        "classical, averaged",
        "The classical density averaged over the same width.",
        energy,
        Some(own),
        &found.averaged_classical_per_bohr,
    );
    Some(DensityPicture {
        v,
        lines,
        scale_per_cm: scale_per_cm(&findings.levels),
        averaging_width: found.averaging_width_bohr.map(to_angstrom),
        figures: found.figures,
    })
}
