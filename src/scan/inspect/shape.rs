//! The course of a curve as a whole, told from second differences of its points.

use crate::notice::{Code, Notice};
use crate::units::{to_angstrom, to_per_cm};

/// A bend counts when it departs from the straight line between neighbours by more than this (hartree) ...
const VISIBLE_HARTREE: f64 = 3e-7;
/// ... and by this multiple of the noise.
const NOISE_MULTIPLE: f64 = 5.0;
/// Successive points that must agree.
const RUN: usize = 3;

/// Beyond its minimum a curve that goes to a limit bends downward once and stays so, its bend fading.
/// A second upward bend, seen in several points, is remarked: the curve is not one smooth dissociation.
pub(super) fn wiggles(r: &[f64], e: &[f64], noise_hartree: Option<f64>) -> Option<Notice> {
    let n = r.len();
    let lowest = (0..n).min_by(|&a, &b| e[a].total_cmp(&e[b]))?;
    let threshold = VISIBLE_HARTREE.max(NOISE_MULTIPLE * noise_hartree.unwrap_or(0.0));
    // What a point lies below the line through its neighbours: positive where the curve bends upward.
    let sag = |i: usize| {
        let t = (r[i] - r[i - 1]) / (r[i + 1] - r[i - 1]);
        e[i - 1] + t * (e[i + 1] - e[i - 1]) - e[i]
    };
    let (mut down, mut up, mut from) = (0, 0, None);
    let mut largest = 0.0_f64;
    for i in lowest + 1..n.saturating_sub(1) {
        let s = sag(i);
        if down < RUN {
            down = if s < -threshold { down + 1 } else { 0 };
        } else if s > threshold {
            up += 1;
            largest = largest.max(s);
            from.get_or_insert(i);
        }
    }
    let first = from.filter(|_| up >= RUN)?;
    let text = format!(
        "Beyond {:.3} angstrom the curve wiggles: having bent downward it bends upward again, by up to {:.2} cm-1 \
         between neighbouring points. No single smooth dissociation does that; superposition of incomplete basis \
         sets, a change of the active orbitals or an avoided crossing can. High levels and the tail suffer.",
        to_angstrom(r[first]),
        to_per_cm(largest)
    );
    Some(Notice::caution(Code::Wiggles, text).at(r[first..n].iter().copied().take(1)))
}
