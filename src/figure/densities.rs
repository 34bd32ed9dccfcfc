//! Levels as drawn: line between the turning points and density, cut in two by the reach.

use crate::findings::Findings;
use crate::radial::{Level, Wavefunction};
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom};

/// Points a density is drawn with at most; the window is seldom wider than three times that.
const MOST_POINTS: usize = 420;
/// Densities are cut where they fall below this fraction of their maximum.
const NEGLIGIBLE: f64 = 2e-3;
/// Height of the highest density of v = 0 as a fraction of the lowest spacing.
const HEIGHT: f64 = 0.42;

/// One level of the main plot.
#[derive(Clone, Debug, PartialEq)]
pub struct LevelPicture {
    /// Vibrational quantum number.
    pub v: usize,
    /// Energy above the minimum in cm⁻¹.
    pub energy_per_cm: f64,
    /// Classical turning points in angstrom.
    pub turning_points: (f64, f64),
    /// Bond lengths of the density in angstrom, ascending.
    pub r: Vec<f64>,
    /// |ψ|² in 1/angstrom at them.
    pub density: Vec<f64>,
    /// Index ranges of `r` inside the reach (true) and outside, in order; neighbours share an end.
    pub parts: Vec<(bool, std::ops::RangeInclusive<usize>)>,
    /// cm⁻¹ of the plot per unit of density: one scale for all levels, so that areas compare.
    pub scale_per_cm: f64,
    /// Whether it is quasi-bound: drawn as a series, without density.
    pub quasi_bound: bool,
}

/// The levels of a study as drawn.
pub fn level_pictures(findings: &Findings) -> Vec<LevelPicture> {
    level_pictures_of(findings, &findings.levels)
}

/// Levels of one J as drawn.
pub(super) fn level_pictures_of(findings: &Findings, levels: &[Level]) -> Vec<LevelPicture> {
    let reach = reach_angstrom(findings);
    let scale = scale_per_cm(levels);
    levels.iter().filter(|l| l.energy_per_cm.is_finite()).map(|l| picture(l, reach, scale)).collect()
}

/// The energy reach in angstrom; an open end runs to infinity.
pub(super) fn reach_angstrom(findings: &Findings) -> Option<(f64, f64)> {
    let (reach, curve) = (findings.reach.as_ref()?, findings.curve.as_ref()?);
    let at = |x: f64| to_angstrom(curve.r_e_bohr.value + x);
    Some((
        reach.energy.x_minus_bohr.map_or(f64::NEG_INFINITY, at),
        reach.energy.x_plus_bohr.map_or(f64::INFINITY, at),
    ))
}

pub(super) fn scale_per_cm(levels: &[Level]) -> f64 {
    let Some(first) = levels.first() else { return 1.0 };
    let spacing = levels.get(1).map_or(first.energy_per_cm, |l| l.energy_per_cm - first.energy_per_cm);
    let peak = first.wavefunction.psi.iter().map(|p| p * p).fold(0.0, f64::max) / ANGSTROM_PER_BOHR;
    if peak > 0.0 { HEIGHT * spacing / peak } else { 1.0 }
}

fn picture(level: &Level, reach: Option<(f64, f64)>, scale_per_cm: f64) -> LevelPicture {
    let (mut r, mut density) = resampled(&level.wavefunction);
    let parts = match reach {
        Some(reach) => split(&mut r, &mut density, reach),
        None if r.is_empty() => Vec::new(),
        None => vec![(false, 0..=r.len() - 1)],
    };
    LevelPicture {
        v: level.v,
        energy_per_cm: level.energy_per_cm,
        turning_points: (
            to_angstrom(level.inner_turning_point_bohr),
            to_angstrom(level.outer_turning_point_bohr),
        ),
        r,
        density,
        parts,
        scale_per_cm,
        quasi_bound: false,
    }
}

/// The density (1/angstrom) on an even mesh over the region where it is not negligible.
fn resampled(wave: &Wavefunction) -> (Vec<f64>, Vec<f64>) {
    let peak = wave.psi.iter().map(|p| p.abs()).fold(0.0, f64::max);
    let threshold = peak * NEGLIGIBLE.sqrt();
    let visible = |p: &f64| p.abs() > threshold;
    let (Some(first), Some(last)) = (wave.psi.iter().position(visible), wave.psi.iter().rposition(visible))
    else {
        return (Vec::new(), Vec::new());
    };
    let first = first.saturating_sub(1);
    let last = (last + 1).min(wave.psi.len().min(wave.r_bohr.len()) - 1);
    if last <= first {
        return (Vec::new(), Vec::new());
    }
    let (from, to) = (wave.r_bohr[first], wave.r_bohr[last]);
    let at = |i: usize| from + (to - from) * i as f64 / (MOST_POINTS - 1) as f64;
    (0..MOST_POINTS)
        .map(|i| (to_angstrom(at(i)), psi_at(wave, at(i)).powi(2) / ANGSTROM_PER_BOHR))
        .filter(|(r, d)| r.is_finite() && d.is_finite())
        .unzip()
}

/// ψ between mesh points by Lagrange's polynomial through the six nearest ones: a solver's mesh may
/// be too coarse to be joined by straight lines.
fn psi_at(wave: &Wavefunction, r: f64) -> f64 {
    let n = wave.r_bohr.len().min(wave.psi.len());
    let width = n.min(6);
    let after = wave.r_bohr[..n].partition_point(|&x| x < r);
    let start = after.saturating_sub(width / 2).min(n - width);
    let x = &wave.r_bohr[start..start + width];
    let y = &wave.psi[start..start + width];
    (0..width)
        .map(|i| (0..width).filter(|&j| j != i).fold(y[i], |term, j| term * (r - x[j]) / (x[i] - x[j])))
        .sum()
}

/// Cuts the mesh at the ends of the reach and says which parts lie inside.
pub(super) fn split(
    r: &mut Vec<f64>,
    density: &mut Vec<f64>,
    (from, to): (f64, f64),
) -> Vec<(bool, std::ops::RangeInclusive<usize>)> {
    if r.len() < 2 {
        return Vec::new();
    }
    for edge in [from, to] {
        let i = r.partition_point(|&x| x < edge);
        if i > 0 && i < r.len() && r[i] > edge {
            let t = (edge - r[i - 1]) / (r[i] - r[i - 1]);
            density.insert(i, density[i - 1] + t * (density[i] - density[i - 1]));
            r.insert(i, edge);
        }
    }
    let last = r.len() - 1;
    let cuts = [r.partition_point(|&x| x < from).min(last), r.partition_point(|&x| x < to).min(last)];
    let mut parts = Vec::new();
    let mut start = 0;
    for (inside, end) in [(false, cuts[0]), (true, cuts[1]), (false, last)] {
        if end > start {
            parts.push((inside, start..=end));
            start = end;
        }
    }
    parts
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented: a Gaussian of unit norm.
    fn gaussian() -> Wavefunction {
        let r_bohr: std::sync::Arc<[f64]> = (0..60).map(|i| 0.1 * f64::from(i)).collect();
        let norm = std::f64::consts::PI.powf(-0.25);
        let psi = r_bohr.iter().map(|r| norm * (-0.5 * (r - 3.0).powi(2)).exp()).collect();
        Wavefunction { degree: 1, weight_bohr: vec![0.1; 60].into(), r_bohr, psi }
    }

    #[test]
    fn the_density_keeps_its_area() {
        let (r, d) = resampled(&gaussian());
        let area: f64 =
            r.windows(2).zip(d.windows(2)).map(|(r, d)| 0.5 * (r[1] - r[0]) * (d[0] + d[1])).sum();
        assert!((area - 1.0).abs() < 2e-3, "{area}");
    }

    #[test]
    fn the_reach_cuts_it_in_three() {
        let (mut r, mut d) = resampled(&gaussian());
        let parts = split(&mut r, &mut d, (1.5, 1.7));
        assert_eq!(parts.iter().map(|p| p.0).collect::<Vec<_>>(), [false, true, false]);
        let inside = &parts[1].1;
        assert_eq!((r[*inside.start()], r[*inside.end()]), (1.5, 1.7));
        assert_eq!(split(&mut r, &mut d, (f64::NEG_INFINITY, f64::INFINITY)), [(true, 0..=r.len() - 1)]);
        assert_eq!(split(&mut r, &mut d, (8.0, 9.0)), [(false, 0..=r.len() - 1)]);
    }
}
