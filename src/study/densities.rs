//! Densities of a study: figures of every level, and all densities of one level for a picture or a table.

use crate::density::{
    COMPARED_UP_TO_V, ClassicalDensity, Densities, DensityFigures, Distribution, HarmonicDensity,
    MorseDensity, QuantumDensity, density_figures,
};
use crate::findings::Findings;
use crate::parallel::in_halves;
use crate::potential::curve::ScanCurve;
use crate::potential::{Morse, Potential as _};
use crate::radial::Level;
use crate::units::{PER_CM_PER_HARTREE, to_per_cm};

/// Points at which the densities of one level are given.
const POINTS: usize = 801;
/// Steps on each side of the minimum in which a barrier is looked for.
const LOOK: usize = 300;
/// Fewer levels than this are not worth a second thread.
const WORTH_A_THREAD: usize = 4;

/// Fills `findings.densities`.
pub fn fill(findings: &mut Findings, curve: &ScanCurve) {
    let picture = Picture::of(findings, curve);
    let levels = in_halves(&findings.levels, WORTH_A_THREAD, |part| {
        let asked = |v: usize| v <= COMPARED_UP_TO_V || findings.settings.densities.levels.contains(&v);
        part.iter().map(|level| picture.figures(level, asked(level.v))).collect()
    });
    findings.densities = Densities { averaging_width_bohr: picture.width_bohr, levels };
}

/// All densities of one level at the same bond lengths, in atomic units.
///
/// A list is empty where there is no such density. Energies count from V_e, so that each density can be drawn at the
/// energy of its own level.
#[derive(Clone, Debug, PartialEq)]
pub struct LevelDensities {
    /// Vibrational quantum number.
    pub v: usize,
    /// Bond lengths in bohr, ascending and even.
    pub r_bohr: Vec<f64>,
    /// |ψ|² of the numerical level in 1/bohr.
    pub numerical_per_bohr: Vec<f64>,
    /// |ψ|² of the harmonic level of the same v.
    pub harmonic_per_bohr: Vec<f64>,
    /// |ψ|² of the Morse fit's level of the same v.
    pub morse_per_bohr: Vec<f64>,
    /// Of a classical particle of the numerical level's energy on the curve; 0 beyond its turning points.
    pub classical_per_bohr: Vec<f64>,
    /// The numerical density averaged over the width.
    pub averaged_numerical_per_bohr: Vec<f64>,
    /// The classical density averaged over the same width.
    pub averaged_classical_per_bohr: Vec<f64>,
    /// That width in bohr.
    pub averaging_width_bohr: Option<f64>,
    /// Energy of the numerical level in cm⁻¹.
    pub energy_per_cm: f64,
    /// ω_e (v + ½) in cm⁻¹.
    pub harmonic_energy_per_cm: Option<f64>,
    /// Energy of the Morse fit's level in cm⁻¹, with the fit's own minimum counted from V_e.
    pub morse_energy_per_cm: Option<f64>,
    /// Its turning points in bohr.
    pub morse_turning_points_bohr: Option<(f64, f64)>,
    /// Turning points of the harmonic level in bohr.
    pub harmonic_turning_points_bohr: Option<(f64, f64)>,
    /// Ends of the energy reach as bond lengths in bohr; a side that the scan ends counts up to the scan's end.
    pub reach_bohr: Option<(f64, f64)>,
    /// The figures.
    pub figures: DensityFigures,
}

/// All densities of level `v` without rotation; none where there is no such level.
///
/// `averaging_width_bohr`: none takes that of the study's settings. Costs about a millisecond: a picture may ask for
/// it as the pointer moves.
pub fn level_densities(
    findings: &Findings,
    v: usize,
    averaging_width_bohr: Option<f64>,
) -> Option<LevelDensities> {
    let curve = findings.curve.as_deref()?;
    let level = findings.levels.iter().find(|l| l.v == v)?;
    let mut picture = Picture::of(findings, curve);
    if let Some(width) = averaging_width_bohr.filter(|w| *w > 0.0 && w.is_finite()) {
        picture.width_bohr = Some(width);
    }
    picture.densities(level)
}

/// What the densities of every level of a study share.
struct Picture<'a> {
    curve: &'a ScanCurve,
    mass_me: f64,
    reach_bohr: Option<(f64, f64)>,
    amplitude_bohr: Option<f64>,
    width_bohr: Option<f64>,
    morse: Option<Morse>,
    /// Whether a barrier may stand between the turning points of a level.
    barriers: bool,
}

/// Whether V does anything but fall to the minimum and rise from there on, between the outermost turning points of all
/// levels.
fn has_barriers(curve: &ScanCurve, levels: &[Level]) -> bool {
    let from = levels.iter().map(|l| l.inner_turning_point_bohr).fold(f64::INFINITY, f64::min);
    let to = levels.iter().map(|l| l.outer_turning_point_bohr).fold(f64::NEG_INFINITY, f64::max);
    let r_e = curve.local.r_e_bohr;
    let monotonic = |end: f64| {
        let v = (0..=LOOK).map(|i| curve.energy_hartree(r_e + (end - r_e) * i as f64 / LOOK as f64));
        v.is_sorted()
    };
    !(monotonic(from) && monotonic(to))
}

impl<'a> Picture<'a> {
    fn of(findings: &Findings, curve: &'a ScanCurve) -> Self {
        let r_e = curve.local.r_e_bohr;
        let reach = findings.reach.as_ref();
        let amplitude_bohr = reach.and_then(|r| r.zero_point_amplitude_bohr);
        Self {
            curve,
            mass_me: findings.masses.as_ref().map_or(f64::NAN, |m| m.reduced_mass_me),
            reach_bohr: reach.map(|r| {
                (
                    r.energy.x_minus_bohr.map_or(curve.scan_range_bohr.0, |x| r_e + x),
                    r.energy.x_plus_bohr.map_or(curve.scan_range_bohr.1, |x| r_e + x),
                )
            }),
            amplitude_bohr,
            width_bohr: findings.settings.densities.averaging_width_bohr(amplitude_bohr),
            morse: findings.morse(),
            barriers: has_barriers(curve, &findings.levels),
        }
    }

    fn figures(&self, level: &Level, compared: bool) -> DensityFigures {
        let above = self.curve.above_minimum();
        let width = self.width_bohr.filter(|_| compared);
        density_figures(&above, level, self.reach_bohr, self.amplitude_bohr, width, self.barriers)
    }

    fn densities(&self, level: &Level) -> Option<LevelDensities> {
        let above = self.curve.above_minimum();
        let quantum = QuantumDensity::new(&level.wavefunction)?;
        let turning = (level.inner_turning_point_bohr, level.outer_turning_point_bohr);
        let energy = level.energy_per_cm / PER_CM_PER_HARTREE;
        let classical = ClassicalDensity::with_barriers(&above, energy, turning, self.barriers);
        let r_e = self.curve.local.r_e_bohr;
        let harmonic = self.amplitude_bohr.and_then(|a| HarmonicDensity::new(level.v, r_e, a));
        let morse = self.morse.as_ref().and_then(|m| MorseDensity::new(m, self.mass_me, level.v));
        let (from, to) = quantum.support_bohr();
        let r_bohr: Vec<f64> =
            (0..POINTS).map(|i| from + (to - from) * i as f64 / (POINTS - 1) as f64).collect();
        let sampled = |d: Option<&dyn Distribution>| -> Vec<f64> {
            d.map_or_else(Vec::new, |d| r_bohr.iter().map(|r| d.density_per_bohr(*r)).collect())
        };
        let averaged = |d: Option<&dyn Distribution>| -> Vec<f64> {
            let both = d.zip(self.width_bohr);
            both.map_or_else(Vec::new, |(d, w)| r_bohr.iter().map(|r| d.averaged_per_bohr(*r, w)).collect())
        };
        let on_classical = classical.as_ref().map(|c| c as &dyn Distribution);
        let on_harmonic = harmonic.as_ref().map(|h| h as &dyn Distribution);
        let on_morse = morse.as_ref().map(|m| m as &dyn Distribution);
        let mut figures = self.figures(level, true);
        if let Some(morse) = &morse {
            figures.forbidden.morse = Some(morse.forbidden_probability());
            figures.inside_reach.morse = self.reach_bohr.map(|(a, b)| morse.below(b) - morse.below(a));
        }
        Some(LevelDensities {
            v: level.v,
            numerical_per_bohr: level.wavefunction.density_per_bohr(&r_bohr),
            harmonic_per_bohr: sampled(on_harmonic),
            morse_per_bohr: sampled(on_morse),
            classical_per_bohr: sampled(on_classical),
            averaged_numerical_per_bohr: averaged(Some(&quantum)),
            averaged_classical_per_bohr: averaged(on_classical),
            averaging_width_bohr: self.width_bohr,
            energy_per_cm: level.energy_per_cm,
            harmonic_energy_per_cm: harmonic.map(|_| level.energy_per_cm - level.minus_harmonic_per_cm),
            morse_energy_per_cm: self.morse.zip(level.minus_morse_per_cm).map(|(m, minus)| {
                level.energy_per_cm - minus + to_per_cm(m.e_min_hartree - self.curve.v_e_hartree.value)
            }),
            morse_turning_points_bohr: morse.as_ref().map(MorseDensity::turning_points_bohr),
            harmonic_turning_points_bohr: harmonic.map(|h| h.turning_points_bohr()),
            reach_bohr: self.reach_bohr,
            figures,
            r_bohr,
        })
    }
}
