//! The levels of a study: the solver's states with all that needs scan, reach and fits.

use crate::findings::Findings;
use crate::notice::{Code, Notice};
use crate::potential::curve::ScanCurve;
use crate::potential::{Family, Potential as _};
use crate::radial::{self, Level, RadialRequest, Wavefunction};
use crate::reach::Interval;
use crate::units::{omega_e_per_cm, to_per_cm};

/// Solves for all levels of the curve and fills `findings.levels`.
pub fn solve(findings: &mut Findings, curve: &ScanCurve, mass_me: f64, reach: Option<&Interval>) {
    let request = RadialRequest {
        reduced_mass_me: mass_me,
        rotation_x: 0.0,
        relative_accuracy: findings.settings.levels.relative_accuracy,
        highest_v: Some(findings.settings.levels.highest_v),
    };
    let above = curve.above_minimum();
    let solution = match radial::solve(&above, &request) {
        Ok(solution) => solution,
        Err(error) => {
            let text = format!("There are no levels: {error}.");
            findings.notices.push(Notice::caution(Code::NotConverged, text));
            return;
        }
    };
    let Some(first) = solution.states.first() else {
        let text = "The well holds no level below its limit; the mass may be wrong, or the scan too short.";
        findings.notices.push(Notice::caution(Code::ImplausibleMass, text));
        return;
    };
    let r_e = curve.local.r_e_bohr;
    let observed = solution.observables(&above, r_e, 0.0);
    let distorted = solution.distortion(solution.states.len());
    let tails = TailShifts::new(curve, &first.wavefunction, findings);
    let errors = Errors::new(curve, &first.wavefunction);
    let omega_e = omega_e_per_cm(curve.local.second_hartree, mass_me);
    let asymptote_per_cm = curve.asymptote_hartree().and_then(|_| curve.tail_depth_hartree()).map(to_per_cm);
    let morse: &[f64] = findings
        .fits
        .iter()
        .find(|f| f.request.family == Family::Morse && f.result.is_ok())
        .map_or(&[], |f| &f.levels_per_cm);
    let levels = observed.iter().zip(&distorted).zip(&solution.states).map(|((seen, distortion), state)| {
        let psi = &state.wavefunction;
        let outside_scan = outside(psi, curve.scan_range_bohr);
        let harmonic = omega_e * (state.v as f64 + 0.5);
        Level {
            v: state.v,
            j: 0,
            energy_per_cm: seen.energy_per_cm,
            energy_error_per_cm: errors.of(psi).map(|e| e.hypot(seen.numerical_error_per_cm)),
            below_asymptote_per_cm: asymptote_per_cm.map(|limit| limit - seen.energy_per_cm),
            b_v_per_cm: seen.b_v_per_cm,
            d_v_per_cm: to_per_cm(distortion.d_v_hartree),
            h_v_per_cm: Some(to_per_cm(distortion.h_v_hartree)).filter(|h| h.is_finite()),
            inner_turning_point_bohr: seen.inner_turning_point_bohr,
            outer_turning_point_bohr: seen.outer_turning_point_bohr,
            mean_r_bohr: seen.mean_r_bohr,
            mean_square_x_bohr2: seen.mean_square_x_bohr2,
            forbidden_probability: seen.forbidden_probability,
            inside_reach: reach.map(|i| inside(psi, i, curve)),
            outside_scan,
            leans_on_tail: outside_scan > findings.settings.levels.lean_probability
                || tails.largest_per_cm(psi) > findings.settings.levels.lean_shift_per_cm,
            minus_harmonic_per_cm: seen.energy_per_cm - harmonic,
            minus_morse_per_cm: morse.get(state.v).map(|m| seen.energy_per_cm - m),
            wavefunction: psi.clone(),
        }
    });
    findings.levels = levels.collect();
    if findings.levels.len() > findings.settings.levels.highest_v {
        let text = format!(
            "Only the levels up to v = {} were computed; there may be more. So many levels point to a tail that \
             hardly falls off: check the energy of the separated atoms.",
            findings.settings.levels.highest_v
        );
        findings.notices.push(Notice::caution(Code::ManyLevels, text));
    }
    remark_on_leaning(findings);
}

fn outside(psi: &Wavefunction, (from, to): (f64, f64)) -> f64 {
    let (Some(&first), Some(&last)) = (psi.r_bohr.first(), psi.r_bohr.last()) else { return 0.0 };
    let inner = if first < from { psi.probability(first, from) } else { 0.0 };
    let outer = if last > to { psi.probability(to, last) } else { 0.0 };
    (inner + outer).max(0.0)
}

/// Probability inside the energy reach; a side that the scan ends counts up to the scan's end.
fn inside(psi: &Wavefunction, reach: &Interval, curve: &ScanCurve) -> f64 {
    let r_e = curve.local.r_e_bohr;
    let from = reach.x_minus_bohr.map_or(curve.scan_range_bohr.0, |x| r_e + x);
    let to = reach.x_plus_bohr.map_or(curve.scan_range_bohr.1, |x| r_e + x);
    psi.probability(from, to)
}

fn remark_on_leaning(findings: &mut Findings) {
    let leaning = findings.levels.iter().filter(|l| l.leans_on_tail).count();
    let Some(lowest) = findings.levels.iter().find(|l| l.leans_on_tail) else { return };
    let all = findings.levels.len();
    let text = format!(
        "{} of {all} levels, from v = {} ({:.0} cm-1) on, lean on a tail that was never scanned; points further \
         out or the energy of the separated atoms would settle them.",
        leaning, lowest.v, lowest.energy_per_cm
    );
    let place = lowest.outer_turning_point_bohr;
    // A level that leans low in the well is a caution; the last few below the limit are to be expected.
    let notice = if lowest.v <= 2 { Notice::caution } else { Notice::info };
    findings.notices.push(notice(Code::LeansOnTail, text).at([place]));
}

/// Changes of the potential, at the mesh points, when the tail is moved.
///
/// The shift of a level is taken to first order, ⟨ψ|ΔV|ψ⟩: it decides only levels whose probability
/// outside the scan is small already, and there the second order is negligible.
struct TailShifts {
    changes: Vec<Vec<f64>>,
}

impl TailShifts {
    fn new(curve: &ScanCurve, mesh: &Wavefunction, findings: &Findings) -> Self {
        let settings = &findings.settings.levels;
        let depth = curve.tail_depth_hartree().unwrap_or(0.0);
        let shift = settings.lean_asymptote_fraction * depth;
        let variants = [
            curve.with_c_n_scaled(1.0 + settings.lean_c_n_fraction),
            curve.with_c_n_scaled(1.0 - settings.lean_c_n_fraction),
            curve.with_asymptote_shifted(shift),
            curve.with_asymptote_shifted(-shift),
        ];
        let end = curve.scan_range_bohr.1;
        let (_, wall) = curve.range_bohr();
        let changes = variants.into_iter().flatten().map(|variant| {
            let (_, variant_wall) = variant.range_bohr();
            let change = |&r: &f64| {
                if r <= end || r >= wall {
                    0.0
                } else if r >= variant_wall {
                    // The moved tail ends in a wall: whatever lies beyond counts as wholly changed.
                    depth
                } else {
                    variant.energy_hartree(r) - curve.energy_hartree(r)
                }
            };
            mesh.r_bohr.iter().map(change).collect()
        });
        Self { changes: changes.collect() }
    }

    /// The largest shift of a level over the changes, in cm⁻¹.
    fn largest_per_cm(&self, psi: &Wavefunction) -> f64 {
        self.changes.iter().map(|change| to_per_cm(average(psi, change)).abs()).fold(0.0, f64::max)
    }
}

/// Σ w ψ² f over the mesh.
fn average(psi: &Wavefunction, values: &[f64]) -> f64 {
    psi.psi.iter().zip(psi.weight_bohr.iter()).zip(values).map(|((p, w), f)| w * p * p * f).sum()
}

/// What makes the error of a level: the other interpolation, to first order, and the noise of the points.
struct Errors {
    other: Vec<f64>,
    known: bool,
    noise_hartree: Option<f64>,
    r_e_bohr: f64,
    knots_bohr: Vec<f64>,
}

impl Errors {
    fn new(curve: &ScanCurve, mesh: &Wavefunction) -> Self {
        Self {
            other: mesh.r_bohr.iter().map(|&r| curve.other_interpolation_hartree(r)).collect(),
            known: !curve.alternatives.is_empty(),
            noise_hartree: curve.noise_hartree,
            r_e_bohr: curve.local.r_e_bohr,
            knots_bohr: curve.points_bohr.to_vec(),
        }
    }

    /// sqrt(interpolation² + noise²) in cm⁻¹; none where neither is known.
    fn of(&self, psi: &Wavefunction) -> Option<f64> {
        if !self.known && self.noise_hartree.is_none() {
            return None;
        }
        let interpolation = 0.5 * average(psi, &self.other).abs();
        let noise = self.noise_hartree.map_or(0.0, |sigma| sigma * self.noise_weight(psi));
        Some(to_per_cm(interpolation.hypot(noise)))
    }

    /// sqrt(Σ_i g_i²) with g_i = ⟨ψ|h_i|ψ⟩ − h_i(r_e), h_i the hat function of point i: how the energy above
    /// V_e follows the points. Hats stand for the spline's own cardinal functions, which differ by oscillations that
    /// average out.
    fn noise_weight(&self, psi: &Wavefunction) -> f64 {
        let knots = &self.knots_bohr;
        if knots.len() < 2 {
            return 0.0;
        }
        let mut g = vec![0.0; knots.len()];
        let mut add = |r: f64, amount: f64| {
            let i = knots.partition_point(|k| *k <= r).clamp(1, knots.len() - 1);
            let t = ((r - knots[i - 1]) / (knots[i] - knots[i - 1])).clamp(0.0, 1.0);
            g[i - 1] += (1.0 - t) * amount;
            g[i] += t * amount;
        };
        for ((&r, &w), &p) in psi.r_bohr.iter().zip(psi.weight_bohr.iter()).zip(&psi.psi) {
            add(r, w * p * p);
        }
        add(self.r_e_bohr, -1.0);
        g.iter().map(|g| g * g).sum::<f64>().sqrt()
    }
}
