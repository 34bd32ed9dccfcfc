//! What the unknown course of the curve beyond the scan does to the levels: the error it makes, and whether a hard
//! wall carries them.

use super::levels::Question;
use crate::potential::Potential as _;
use crate::potential::curve::{OtherTail, ScanCurve, Side};
use crate::radial::{self, BoundState, RadialRequest, Wavefunction, dot};
use crate::units::to_per_cm;

/// A first-order shift of a low level above this (cm⁻¹) is no perturbation to rely on: the levels are solved once
/// with the other tail.
const FIRST_ORDER_UP_TO_PER_CM: f64 = 1.0;
/// Accuracy of that solution relative to its depth: it makes an error bar.
const ROUGH_ACCURACY: f64 = 1e-7;
/// Changes of the potential (hartree) are cut here: where a tail rises beyond it, no wavefunction is left.
const LARGEST_CHANGE_HARTREE: f64 = 1e3;

/// The shifts of all levels by what may lie beyond one end of the scan, in cm⁻¹.
struct SideShifts {
    side: Side,
    /// By the level.
    shifts_per_cm: Vec<f64>,
    /// Shift by moving a hard wall there outwards by one step of the scan; zero without a wall.
    wall_per_cm: Vec<f64>,
}

/// The shifts beyond both ends.
pub(super) struct TailSpread {
    sides: [SideShifts; 2],
}

impl TailSpread {
    /// First order, ⟨ψ|V_other − V|ψ⟩ beyond the joint, at a hard wall ψ′² δ/(2μ) with δ the last step of the scan;
    /// where that exceeds 1 cm⁻¹ for a low level, the difference to the levels solved with the other tail.
    ///
    /// `densities`: w ψ² of every state at the mesh points.
    pub(super) fn new(
        curve: &ScanCurve,
        question: &Question,
        states: &[BoundState],
        densities: &[Vec<f64>],
    ) -> Self {
        Self {
            sides: [Side::Inner, Side::Outer].map(|side| shifts(curve, question, side, (states, densities))),
        }
    }

    /// Error of the energy of level v.
    pub(super) fn error_per_cm(&self, v: usize) -> f64 {
        self.sides[0].shifts_per_cm[v].hypot(self.sides[1].shifts_per_cm[v])
    }

    /// Shift of level v by moving the hard wall at one end, where there is one.
    pub(super) fn wall_shift_per_cm(&self, v: usize, side: Side) -> f64 {
        self.sides.iter().find(|s| s.side == side).map_or(0.0, |s| s.wall_per_cm[v])
    }
}

fn shifts(
    curve: &ScanCurve,
    question: &Question,
    side: Side,
    (states, densities): (&[BoundState], &[Vec<f64>]),
) -> SideShifts {
    let others = curve.other_tails(side);
    let wall_per_cm: Vec<f64> =
        states.iter().map(|s| wall_shift(curve, side, &s.wavefunction, question.mass_me)).collect();
    let above = curve.above_minimum();
    let mesh = states.first().map(|state| state.wavefunction.r_bohr.clone());
    let first_order = |other: &OtherTail| -> Vec<f64> {
        let change = |&r: &f64| {
            if !other.differs_at(r) {
                return 0.0;
            }
            let change = other.energy_hartree(r) - above.energy_hartree(r);
            if change.is_nan() { 0.0 } else { change.clamp(-LARGEST_CHANGE_HARTREE, LARGEST_CHANGE_HARTREE) }
        };
        let changes: Vec<f64> = mesh.iter().flat_map(|r| r.iter()).map(change).collect();
        densities.iter().map(|density| to_per_cm(dot(density, &changes)).abs()).collect()
    };
    let low = question.settings.constants_highest_v + 1;
    let worst_low = |s: &[f64]| s.iter().take(low).fold(0.0_f64, |m, x| m.max(*x));
    let (mut shifts_per_cm, mut worst) = (wall_per_cm.clone(), others.first());
    if !curve.ends_in_wall(side) {
        for other in &others {
            let by_this = first_order(other);
            if worst_low(&by_this) >= worst_low(&shifts_per_cm) {
                worst = Some(other);
            }
            shifts_per_cm.iter_mut().zip(by_this).for_each(|(s, o)| *s = s.max(o));
        }
    }
    if worst_low(&shifts_per_cm) > FIRST_ORDER_UP_TO_PER_CM
        && let Some(other) = worst
    {
        let request = RadialRequest {
            relative_accuracy: ROUGH_ACCURACY.max(question.settings.relative_accuracy),
            highest_v: Some(low.max(1) + 3),
            ..question.request()
        };
        if let Ok(solved) = radial::bound_states(other, &request) {
            for ((shift, own), other) in shifts_per_cm.iter_mut().zip(states).zip(solved) {
                *shift = to_per_cm(other.energy_hartree - own.energy_hartree).abs();
            }
        }
    }
    SideShifts { side, shifts_per_cm, wall_per_cm }
}

fn wall_shift(curve: &ScanCurve, side: Side, psi: &Wavefunction, mass_me: f64) -> f64 {
    if !curve.ends_in_wall(side) {
        return 0.0;
    }
    let (end, step) = curve.end_and_step_bohr(side);
    let mesh_end = if side == Side::Inner { psi.r_bohr.first() } else { psi.r_bohr.last() };
    // Where the mesh stops short of the wall, the level does not feel it.
    if mesh_end.is_none_or(|r| (r - end).abs() > 1e-9 * end) {
        return 0.0;
    }
    let (inner, outer) = psi.end_slopes();
    let slope = if side == Side::Inner { inner } else { outer };
    to_per_cm(slope * slope * step / (2.0 * mass_me))
}
