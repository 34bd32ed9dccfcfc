//! The levels of a study: the solver's states with all that needs scan, reach and fits.

use super::tail_spread::TailSpread;
use crate::estimate::{ErrorSource, Estimate};
use crate::findings::Findings;
use crate::notice::{Code, Notice};
use crate::potential::curve::{ScanCurve, Side};
use crate::potential::{Family, Potential as _};
use crate::radial::{
    self, BoundState, Level, Observables, RadialError, RadialRequest, Solution, Wavefunction, dot,
};
use crate::reach::Interval;
use crate::settings::LevelSettings;
use crate::units::{omega_e_per_cm, rotational_constant_per_cm, to_angstrom, to_per_cm};

/// What is asked of the levels beside the curve.
pub struct Question<'a> {
    /// The settings.
    pub settings: &'a LevelSettings,
    /// Reduced mass in electron masses.
    pub mass_me: f64,
    /// Energy reach, where there is one.
    pub reach: Option<&'a Interval>,
    /// Rotational quantum number.
    pub j: u32,
}

impl Question<'_> {
    /// The request to the solver.
    pub fn request(&self) -> RadialRequest {
        RadialRequest {
            reduced_mass_me: self.mass_me,
            rotation_x: self.settings.rotation_x(self.j),
            relative_accuracy: self.settings.relative_accuracy,
            highest_v: Some(self.settings.highest_v),
        }
    }
}

/// The levels of one J, their remarks, and the solution that the centrifugal constants come from.
#[derive(Default)]
pub struct Solved {
    /// The levels, v ascending; D_v and H_v not yet filled in.
    pub levels: Vec<Level>,
    /// What was remarked.
    pub notices: Vec<Notice>,
    solution: Option<Solution>,
}

impl Solved {
    fn nothing(notice: Option<Notice>) -> Self {
        Self { notices: notice.into_iter().collect(), ..Self::default() }
    }

    /// Fills in D_v and H_v.
    pub fn distort(&mut self) {
        let Some(solution) = &self.solution else { return };
        let distortions = solution.distortion(self.levels.len());
        for (level, distortion) in self.levels.iter_mut().zip(distortions) {
            level.d_v_per_cm = to_per_cm(distortion.d_v_hartree);
            level.h_v_per_cm = Some(to_per_cm(distortion.h_v_hartree)).filter(|h| h.is_finite());
        }
    }
}

/// The solver's answer at one J, before anything is known about its errors.
pub struct States {
    solution: Solution,
    states: Vec<BoundState>,
    observed: Vec<Observables>,
}

/// All levels of the curve at one J with B_v, turning points and averages.
///
/// # Errors
/// [`RadialError`]
pub fn states(curve: &ScanCurve, question: &Question) -> Result<States, RadialError> {
    let above = curve.above_minimum();
    let mut solution = radial::solve(&above, &question.request())?;
    let observed = solution.observables(&above, curve.local.r_e_bohr, 0.0);
    let states = solution.take_states();
    Ok(States { solution, states, observed })
}

/// Solves for all levels of the curve at one J.
pub fn solve(curve: &ScanCurve, question: &Question) -> Solved {
    judged(curve, question, states(curve, question))
}

/// The levels with their standard errors, and what leans.
pub fn judged(curve: &ScanCurve, question: &Question, states: Result<States, RadialError>) -> Solved {
    let settings = question.settings;
    let States { solution, states, observed } = match states {
        Ok(states) => states,
        Err(error) => {
            let text = format!("There are no levels with J = {}: {error}.", question.j);
            return Solved::nothing(Some(Notice::caution(Code::NotConverged, text)));
        }
    };
    let r_e = curve.local.r_e_bohr;
    let Some(first) = states.first() else {
        return Solved::nothing((question.j == 0).then(|| no_level(curve, question.mass_me)));
    };
    let tails = TailShifts::new(curve, &first.wavefunction, settings);
    let errors = Errors::new(curve, &first.wavefunction);
    let densities: Vec<Vec<f64>> = states.iter().map(|s| s.wavefunction.weighted_density()).collect();
    let spread = TailSpread::new(curve, question, &states, &densities);
    let omega_e = omega_e_per_cm(curve.local.second_hartree, question.mass_me);
    let rigid = rotational_constant_per_cm(r_e, question.mass_me) * question.request().rotation_x;
    let asymptote_per_cm = curve.asymptote_hartree().and_then(|_| curve.tail_depth_hartree()).map(to_per_cm);
    let mut leaning: Option<Leans> = None;
    let off_nodes: Vec<usize> = states.iter().filter(|s| s.nodes != s.v).map(|s| s.v).collect();
    let levels = observed.iter().zip(states).zip(&densities).map(|((seen, state), density)| {
        let psi = state.wavefunction;
        let (inner_outside, outer_outside) = outside(&psi, curve.scan_range_bohr);
        let outside_scan = (inner_outside + outer_outside).max(0.0);
        let harmonic = omega_e * (state.v as f64 + 0.5) + rigid;
        let wall_shift = |side| spread.wall_shift_per_cm(state.v, side) > settings.lean_shift_per_cm;
        let leans = Leans {
            inner: inner_outside > settings.lean_probability || wall_shift(Side::Inner),
            outer: outer_outside > settings.lean_probability
                || tails.largest_per_cm(density) > settings.lean_shift_per_cm
                || wall_shift(Side::Outer),
        };
        let leans_on_tail = leans.inner || leans.outer || outside_scan > settings.lean_probability;
        if leans_on_tail {
            leaning.get_or_insert(leans);
        }
        let mut parts = errors.of(density);
        parts.push((spread.error_per_cm(state.v), ErrorSource::Tail));
        parts.push((seen.numerical_error_per_cm, ErrorSource::Interpolation));
        // The tail alone says nothing about the part inside the scan.
        let energy = if parts.len() > 2 || spread.error_per_cm(state.v) > seen.numerical_error_per_cm {
            Estimate::from_parts(seen.energy_per_cm, &parts)
        } else {
            Estimate::exact(seen.energy_per_cm)
        };
        Level {
            v: state.v,
            j: question.j,
            energy_per_cm: seen.energy_per_cm,
            energy_error_per_cm: energy.std_error,
            energy_error_source: energy.source,
            below_asymptote_per_cm: asymptote_per_cm.map(|limit| limit - seen.energy_per_cm),
            b_v_per_cm: seen.b_v_per_cm,
            d_v_per_cm: f64::NAN,
            h_v_per_cm: None,
            inner_turning_point_bohr: seen.inner_turning_point_bohr,
            outer_turning_point_bohr: seen.outer_turning_point_bohr,
            mean_r_bohr: seen.mean_r_bohr,
            mean_square_x_bohr2: seen.mean_square_x_bohr2,
            forbidden_probability: seen.forbidden_probability,
            inside_reach: question.reach.map(|i| inside(&psi, i, curve)),
            outside_scan,
            leans_on_tail,
            minus_harmonic_per_cm: seen.energy_per_cm - harmonic,
            minus_morse_per_cm: None,
            wavefunction: psi,
        }
    });
    let levels: Vec<Level> = levels.collect();
    let mut notices = Vec::new();
    if question.j == 0 {
        if levels.len() > settings.highest_v {
            let text = format!(
                "Only the levels up to v = {} were computed; there may be more. So many levels point to a tail that \
                 hardly falls off: check the energy of the separated atoms.",
                settings.highest_v
            );
            notices.push(Notice::caution(Code::ManyLevels, text));
        }
        notices.extend(leaning.and_then(|sides| remark_on_leaning(curve, &levels, sides)));
        notices.extend(remark_on_nodes(&off_nodes));
    }
    Solved { levels, notices, solution: Some(solution) }
}

/// Fills in E − E_Morse(v) from the Morse fit, where there is one.
pub fn beside_morse(findings: &mut Findings) {
    let Some(morse) = findings.found_fit(Family::Morse).map(|f| f.levels_per_cm.clone()) else { return };
    for (level, energy) in findings.levels.iter_mut().zip(morse) {
        level.minus_morse_per_cm = Some(level.energy_per_cm - energy);
    }
}

/// Probability inside and outside of the scanned range.
fn outside(psi: &Wavefunction, (from, to): (f64, f64)) -> (f64, f64) {
    let (Some(&first), Some(&last)) = (psi.r_bohr.first(), psi.r_bohr.last()) else { return (0.0, 0.0) };
    let inner = if first < from { psi.probability(first, from) } else { 0.0 };
    let outer = if last > to { psi.probability(to, last) } else { 0.0 };
    (inner, outer)
}

/// Probability inside the energy reach; a side that the scan ends counts up to the scan's end.
fn inside(psi: &Wavefunction, reach: &Interval, curve: &ScanCurve) -> f64 {
    let r_e = curve.local.r_e_bohr;
    let from = reach.x_minus_bohr.map_or(curve.scan_range_bohr.0, |x| r_e + x);
    let to = reach.x_plus_bohr.map_or(curve.scan_range_bohr.1, |x| r_e + x);
    psi.probability(from, to)
}

/// Which ends of the scan a level leans on.
#[derive(Clone, Copy)]
struct Leans {
    inner: bool,
    outer: bool,
}

/// Why a well holds no level: a scan that ends too low, or a mass.
fn no_level(curve: &ScanCurve, mass_me: f64) -> Notice {
    let first = 0.5 * omega_e_per_cm(curve.local.second_hartree, mass_me);
    let low = |side: Side| to_per_cm(curve.end_height_hartree(side)) < first && curve.ends_in_wall(side);
    let ends: Vec<Side> = [Side::Inner, Side::Outer].into_iter().filter(|&side| low(side)).collect();
    if ends.is_empty() {
        let text = "The well holds no level below its limit; the mass may be wrong, or the scan too short.";
        return Notice::caution(Code::ImplausibleMass, text);
    }
    let says: Vec<String> = ends
        .iter()
        .map(|&side| {
            format!(
                "{:.0} cm-1 above the minimum at its {} end",
                to_per_cm(curve.end_height_hartree(side)),
                name(side)
            )
        })
        .collect();
    let add: Vec<String> = ends.iter().map(|&side| wanted(curve, side)).collect();
    let text = format!(
        "The scan ends {}, below the first level (near {first:.0} cm-1, half of omega_e), so there are no levels: {}.",
        says.join(" and "),
        add.join(" and ")
    );
    Notice::caution(Code::ShortRange, text).at(ends.iter().map(|&side| curve.end_and_step_bohr(side).0))
}

const fn name(side: Side) -> &'static str {
    match side {
        Side::Inner => "inner",
        Side::Outer => "outer",
    }
}

/// The points to add at one end, e.g. "add points below 1.000 angstrom".
fn wanted(curve: &ScanCurve, side: Side) -> String {
    let (end, _) = curve.end_and_step_bohr(side);
    let where_to = if side == Side::Inner { "below" } else { "beyond" };
    format!("add points {where_to} {:.3} angstrom", to_angstrom(end))
}

/// Levels whose wavefunctions have another number of nodes than v.
fn remark_on_nodes(off_nodes: &[usize]) -> Option<Notice> {
    let v = off_nodes.first()?;
    let text = format!(
        "{} levels, from v = {v} on, have wavefunctions whose nodes do not count up to v: they are not resolved \
         well enough. Do not use them.",
        off_nodes.len()
    );
    Some(Notice::caution(Code::NotConverged, text))
}

fn remark_on_leaning(curve: &ScanCurve, levels: &[Level], sides: Leans) -> Option<Notice> {
    let leaning = levels.iter().filter(|l| l.leans_on_tail).count();
    let lowest = levels.iter().find(|l| l.leans_on_tail)?;
    let all = levels.len();
    let inner = sides.inner.then(|| wanted(curve, Side::Inner));
    let outer = (sides.outer || !sides.inner).then(|| {
        let known = curve.asymptote_hartree().is_some();
        let or_give = if known { "" } else { " or give the energy of the separated atoms" };
        format!("{}{or_give}", wanted(curve, Side::Outer))
    });
    let add: Vec<String> = inner.into_iter().chain(outer).collect();
    let text = format!(
        "{} of {all} levels, from v = {} ({:.0} cm-1) on, lean on a part of the curve that was never scanned; {} to \
         settle them.",
        leaning,
        lowest.v,
        lowest.energy_per_cm,
        add.join(", and ")
    );
    let inner = sides.inner.then_some(lowest.inner_turning_point_bohr);
    let outer = (sides.outer || !sides.inner).then_some(lowest.outer_turning_point_bohr);
    // A level that leans low in the well is a caution; the last few below the limit are to be expected.
    let notice = if lowest.v <= 2 { Notice::caution } else { Notice::info };
    Some(notice(Code::LeansOnTail, text).at(inner.into_iter().chain(outer)))
}

/// Changes of the potential, at the mesh points, when the tail is moved.
///
/// The shift of a level is taken to first order, ⟨ψ|ΔV|ψ⟩: it decides only levels whose probability
/// outside the scan is small already, and there the second order is negligible.
struct TailShifts {
    /// At the mesh points from `from` on, beyond the scan; before them nothing changes.
    changes: Vec<Vec<f64>>,
    from: usize,
}

impl TailShifts {
    fn new(curve: &ScanCurve, mesh: &Wavefunction, settings: &LevelSettings) -> Self {
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
        let from = mesh.r_bohr.partition_point(|r| *r <= end);
        let changes = variants.into_iter().flatten().map(|variant| {
            let (_, variant_wall) = variant.range_bohr();
            let change = |&r: &f64| {
                if r >= wall {
                    0.0
                } else if r >= variant_wall {
                    // The moved tail ends in a wall: whatever lies beyond counts as wholly changed.
                    depth
                } else {
                    variant.energy_hartree(r) - curve.energy_hartree(r)
                }
            };
            mesh.r_bohr[from..].iter().map(change).collect()
        });
        Self { changes: changes.collect(), from }
    }

    /// The largest shift of a level over the changes, in cm⁻¹.
    fn largest_per_cm(&self, density: &[f64]) -> f64 {
        let beyond = &density[self.from..];
        self.changes.iter().map(|change| to_per_cm(dot(beyond, change)).abs()).fold(0.0, f64::max)
    }
}

/// What makes the error of a level inside the scan: the other interpolations, to first order, and the noise of the
/// points.
struct Errors {
    /// What the other interpolations change of V at the mesh points.
    others: Vec<Vec<f64>>,
    /// The same for the curve without points found off it.
    without_doubtful: Option<Vec<f64>>,
    noise_hartree: Option<f64>,
    /// Index of the upper hat and its share, per mesh point and last for r_e; empty where no noise is known.
    hats: Vec<(usize, f64)>,
    knots: usize,
}

impl Errors {
    fn new(curve: &ScanCurve, mesh: &Wavefunction) -> Self {
        Self {
            others: curve.other_interpolations_hartree(&mesh.r_bohr),
            without_doubtful: curve.without_doubtful_hartree(&mesh.r_bohr),
            noise_hartree: curve.noise_hartree,
            hats: Self::hats(curve, mesh),
            knots: curve.points_bohr.len(),
        }
    }

    fn hats(curve: &ScanCurve, mesh: &Wavefunction) -> Vec<(usize, f64)> {
        let knots = &curve.points_bohr;
        if knots.len() < 2 || curve.noise_hartree.is_none() {
            return Vec::new();
        }
        let hat = |&r: &f64| {
            let i = knots.partition_point(|k| *k <= r).clamp(1, knots.len() - 1);
            (i, ((r - knots[i - 1]) / (knots[i] - knots[i - 1])).clamp(0.0, 1.0))
        };
        mesh.r_bohr.iter().chain([&curve.local.r_e_bohr]).map(hat).collect()
    }

    /// Interpolation (half the spread over the admissible ones, and the whole difference to the curve without points
    /// found off it) and noise, in cm⁻¹; only what is known. `density`: w ψ² at the mesh points.
    fn of(&self, density: &[f64]) -> Vec<(f64, ErrorSource)> {
        let shift = |change: &Vec<f64>| to_per_cm(dot(density, change));
        let (low, high) =
            self.others.iter().map(shift).fold((0.0_f64, 0.0_f64), |(l, h), x| (l.min(x), h.max(x)));
        let spread = (!self.others.is_empty()).then_some(0.5 * (high - low));
        let doubt = self.without_doubtful.as_ref().map(shift);
        let noise = self.noise_hartree.map(|sigma| to_per_cm(sigma * self.noise_weight(density)));
        let interpolation = spread.into_iter().chain(doubt).map(|e| (e.abs(), ErrorSource::Interpolation));
        interpolation.chain(noise.map(|e| (e, ErrorSource::Noise))).collect()
    }

    /// sqrt(Σ_i g_i²) with g_i = ⟨ψ|h_i|ψ⟩ − h_i(r_e), h_i the hat function of point i: how the energy above
    /// V_e follows the points. Hats stand for the spline's own cardinal functions, which differ by oscillations that
    /// average out.
    fn noise_weight(&self, density: &[f64]) -> f64 {
        let Some((at_minimum, on_mesh)) = self.hats.split_last() else { return 0.0 };
        let mut g = vec![0.0; self.knots];
        let mut add = |&(i, t): &(usize, f64), amount: f64| {
            g[i - 1] += (1.0 - t) * amount;
            g[i] += t * amount;
        };
        for (hat, &amount) in on_mesh.iter().zip(density) {
            add(hat, amount);
        }
        add(at_minimum, -1.0);
        g.iter().map(|g| g * g).sum::<f64>().sqrt()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Levels whose nodes do not count up to v are not to be used.
    #[test]
    fn levels_with_wrong_nodes_are_a_caution() {
        assert_eq!(remark_on_nodes(&[]), None);
        let notice = remark_on_nodes(&[7, 8]).expect("a notice");
        assert_eq!((notice.code, notice.severity), (Code::NotConverged, crate::notice::Severity::Caution));
        assert!(notice.text.contains("2 levels, from v = 7 on"), "{}", notice.text);
    }
}
