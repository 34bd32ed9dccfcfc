//! The density of a bond at a temperature as drawn on the main plot, cut in two by the reach.

use super::densities::{reach_angstrom, scale_per_cm, split};
use crate::findings::Findings;
use crate::units::{ANGSTROM_PER_BOHR, to_angstrom};

/// Densities are cut where they fall below this fraction of their maximum.
const NEGLIGIBLE: f64 = 2e-3;

/// The density at one temperature. To be drawn from the minimum of the curve upwards, by
/// [`ThermalDensityPicture::scale_per_cm`] a unit: below the lowest level, so that it meets none of theirs.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalDensityPicture {
    /// Temperature in K.
    pub kelvin: f64,
    /// Bond lengths in angstrom, ascending.
    pub r: Vec<f64>,
    /// Σ p_v |ψ_v|² in 1/angstrom at them.
    pub density: Vec<f64>,
    /// Index ranges of `r` inside the reach (true) and outside, in order; neighbours share an end.
    pub parts: Vec<(bool, std::ops::RangeInclusive<usize>)>,
    /// The harmonic density: bond length and 1/angstrom.
    pub harmonic: Vec<[f64; 2]>,
    /// cm⁻¹ of the plot per unit of density, that of the levels.
    pub scale_per_cm: f64,
    /// Share of the numerical density inside the energy reach; none without a reach.
    pub inside_reach: Option<f64>,
    /// The same of the harmonic one.
    pub harmonic_inside_reach: Option<f64>,
    /// Populations of the harmonic levels, v ascending.
    pub harmonic_populations: Vec<f64>,
}

/// The density at a temperature, vibration alone; none without levels.
pub fn thermal_density_picture(findings: &Findings, kelvin: f64) -> Option<ThermalDensityPicture> {
    let found = findings.thermal_density(kelvin)?;
    let reach = reach_angstrom(findings);
    let all: Vec<f64> = found.r_bohr.iter().map(|r| to_angstrom(*r)).collect();
    let per_angstrom = |d: &[f64]| d.iter().map(|d| d / ANGSTROM_PER_BOHR).collect::<Vec<f64>>();
    let (whole, harmonic) = (per_angstrom(&found.numerical_per_bohr), per_angstrom(&found.harmonic_per_bohr));
    let share = |density: &[f64]| {
        let (from, to) = reach.filter(|_| !density.is_empty())?;
        Some(area(&all, density, from, to) / area(&all, density, f64::NEG_INFINITY, f64::INFINITY))
    };
    let (inside_reach, harmonic_inside_reach) = (share(&whole), share(&harmonic));
    let highest = whole.iter().copied().fold(0.0, f64::max);
    let seen = |d: &&f64| **d > NEGLIGIBLE * highest;
    let first = whole.iter().position(|d| seen(&d))?;
    let last = whole.iter().rposition(|d| seen(&d))?;
    let (mut r, mut density) = (all[first..=last].to_vec(), whole[first..=last].to_vec());
    let parts = match reach {
        Some(reach) => split(&mut r, &mut density, reach),
        None => vec![(false, 0..=r.len() - 1)],
    };
    let points = all.iter().zip(harmonic).filter(|(_, d)| *d > NEGLIGIBLE * highest);
    Some(ThermalDensityPicture {
        kelvin,
        harmonic: points.map(|(r, d)| [*r, d]).collect(),
        parts,
        r,
        density,
        scale_per_cm: scale_per_cm(&findings.levels),
        inside_reach,
        harmonic_inside_reach,
        harmonic_populations: found.harmonic_populations,
    })
}

/// The area under a line between two abscissas, by trapezoids cut at both ends.
fn area(x: &[f64], y: &[f64], from: f64, to: f64) -> f64 {
    x.windows(2)
        .zip(y.windows(2))
        .map(|(x, y)| {
            let (a, b) = (x[0].max(from), x[1].min(to));
            if b <= a {
                return 0.0;
            }
            let at = |v: f64| y[0] + (y[1] - y[0]) * (v - x[0]) / (x[1] - x[0]);
            0.5 * (b - a) * (at(a) + at(b))
        })
        .sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::settings::Settings;

    /// Near 0 K it is the density of v = 0; when hot it is wider, and less of it lies in the reach.
    #[test]
    fn cold_it_is_the_ground_level_and_hot_it_is_wide() {
        let text = include_str!("../../sample-scans/lih_X_A.csv");
        let scan = crate::scan::read::read_scan("lih_X_A.csv", text.as_bytes(), &Default::default()).unwrap();
        let mut settings = Settings::default();
        settings.masses.atoms = Some(crate::species::parse_atoms("7Li,1H").unwrap());
        let findings = crate::study::study(&scan, &settings).unwrap();
        let [cold, hot] = [10.0, 3000.0].map(|t| thermal_density_picture(&findings, t).unwrap());
        let ground = findings.levels[0].inside_reach.unwrap();
        assert!((cold.inside_reach.unwrap() - ground).abs() < 1e-3, "{ground} {:?}", cold.inside_reach);
        assert!(hot.inside_reach.unwrap() < 0.8 * ground);
        let width = |p: &ThermalDensityPicture| p.r[p.r.len() - 1] - p.r[0];
        assert!(width(&hot) > 1.5 * width(&cold));
        let whole = area(&hot.r, &hot.density, 0.0, 99.0);
        assert!((whole - 1.0).abs() < 0.01, "{whole}");
        assert!(hot.parts.iter().any(|p| p.0) && hot.parts.iter().any(|p| !p.0));
        // The bond is longer than the harmonic one at 3000 K: harmonic density is symmetric about r_e.
        assert!(hot.harmonic_inside_reach.unwrap() > 0.0 && !hot.harmonic.is_empty());
    }
}
