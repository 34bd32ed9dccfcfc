//! Undamped Gauss-Newton steps: the finish of every iteration, and all of it close to a solution.

use super::Problem;
use super::place::{Place, rounding};
use crate::fit::qr::{Qr, length};

/// Undamped Gauss-Newton alone, from a start close to the solution: the parameters when the steps shrink
/// below 1e-9 of the first one or to rounding, else none.
pub(crate) fn follow(problem: &mut dyn Problem, start: Vec<f64>) -> Option<Vec<f64>> {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut place = Place::new(problem, start)?;
    let (mut first, mut last) = (0.0_f64, f64::INFINITY);
    for _ in 0..25 {
        let qr = Qr::new(&place.jacobian, n, p)?;
        let mut step: Vec<f64> = place.residuals.iter().map(|r| -r).collect();
        qr.transpose_times(&mut step);
        step.truncate(p);
        let size = length(&step);
        qr.back_substitute(&mut step);
        if size <= (1e-9 * first).max(2.0 * rounding(&place.values, &qr.lengths)) {
            return Some(place.moved(&step));
        }
        if size.is_nan() || size > 0.7 * last {
            return None;
        }
        place = Place::new(problem, place.moved(&step))?;
        (first, last) = (if first == 0.0 { size } else { first }, size);
    }
    None
}

/// Gauss-Newton steps as long as they shrink; the place before a step that does not is kept.
pub(super) fn undamped(problem: &mut dyn Problem, place: &mut Place, evaluations: &mut usize) {
    let (n, p) = (problem.observations(), problem.parameters());
    let mut last = f64::INFINITY;
    for _ in 0..60 {
        let Some(qr) = Qr::new(&place.jacobian, n, p) else { return };
        let mut step: Vec<f64> = place.residuals.iter().map(|r| -r).collect();
        qr.transpose_times(&mut step);
        step.truncate(p);
        let size = length(&step);
        qr.back_substitute(&mut step);
        if size.is_nan() || size >= 0.9 * last {
            return;
        }
        *evaluations += 1;
        let Some(new) = Place::new(problem, place.moved(&step)) else { return };
        // Rounding may raise the sum a little; a real rise means the step left the valley.
        if new.square_sum > place.square_sum * (1.0 + 1e-9) {
            return;
        }
        *place = new;
        last = size;
        let small = step.iter().zip(&place.values).all(|(s, v)| s.abs() <= f64::EPSILON * v.abs());
        if small || size <= rounding(&place.values, &qr.lengths) {
            return;
        }
    }
}
