//! The chain of elements factorised at a shift: eliminating the modes leaves a tridiagonal matrix of interface values,
//! whose pivots count the levels below the shift and solve for vectors.

use super::chain::{Chain, MODES, short_dot};

/// Factors of (H − s), kept between solves so that nothing is allocated again.
#[derive(Clone, Debug, Default)]
pub(super) struct Factors {
    shift: f64,
    /// Levels of the walled problem below the shift.
    pub below: usize,
    /// The same with a free (zero-slope) outer end.
    pub below_free_end: usize,
    inverse: Vec<f64>,
    /// Mode kept out of the elimination because it is close to the shift.
    kept: Vec<Option<usize>>,
    pivot: Vec<f64>,
    kept_pivot: Vec<f64>,
    /// Multipliers: interface to next interface, interface to kept mode, kept mode to next interface.
    to_next: Vec<f64>,
    to_kept: Vec<f64>,
    from_kept: Vec<f64>,
}

/// A pivot of exactly zero is as good as one of a rounding error.
pub(super) fn guarded(pivot: f64, scale: f64) -> f64 {
    let least = f64::EPSILON * f64::EPSILON * scale.abs().max(f64::MIN_POSITIVE);
    if pivot.abs() < least { least } else { pivot }
}

impl Factors {
    /// Factorises H − `shift` and counts the levels below `shift`.
    pub fn factorise(&mut self, chain: &Chain, shift: f64) {
        let elements = chain.elements();
        self.shift = shift;
        self.inverse.resize(chain.lambda.len(), 0.0);
        self.kept.resize(elements, None);
        for list in
            [&mut self.pivot, &mut self.kept_pivot, &mut self.to_next, &mut self.to_kept, &mut self.from_kept]
        {
            list.resize(elements + 1, 0.0);
        }
        let mut below = 0;
        // Pivot being collected at the left interface of the element; none at the inner wall.
        let mut carried = 0.0;
        for e in 0..elements {
            let (lambda, to_left, to_right) = chain.modes_at(e);
            let inverse = &mut self.inverse.as_chunks_mut::<MODES>().0[e];
            let under = lambda.iter().filter(|&&value| value < shift).count();
            let kept = nearest_mode(lambda, under, shift);
            for (inv, &value) in inverse.iter_mut().zip(lambda) {
                *inv = 1.0 / (value - shift);
            }
            below += under;
            if let Some(k) = kept {
                // Left out of the sums from the beginning: subtracting a huge term would lose the digits it is kept for.
                inverse[k] = 0.0;
                below -= usize::from(k < under);
            }
            let mut share = [0.0; MODES];
            for k in 0..MODES {
                share[k] = to_left[k] * inverse[k];
            }
            let (ll, lr) = (short_dot(&share, to_left), short_dot(&share, to_right));
            for k in 0..MODES {
                share[k] = to_right[k] * inverse[k];
            }
            let rr = short_dot(&share, to_right);
            self.kept[e] = kept;
            let direct = chain.beta[e] - lr;
            let mut next = chain.alpha[e + 1] - shift - rr;
            let inner_wall = e == 0;
            let pivot = guarded(carried - ll, chain.alpha[e]);
            if inner_wall {
                self.to_next[e] = 0.0;
                self.to_kept[e] = 0.0;
            } else {
                below += usize::from(pivot < 0.0);
                self.pivot[e] = pivot;
                self.to_next[e] = direct / pivot;
                next -= direct * self.to_next[e];
            }
            if let Some(k) = kept {
                let mut own = lambda[k] - shift;
                let mut right = to_right[k];
                if !inner_wall {
                    self.to_kept[e] = to_left[k] / pivot;
                    own -= to_left[k] * self.to_kept[e];
                    right -= direct * self.to_kept[e];
                }
                let own = guarded(own, chain.alpha[e]);
                below += usize::from(own < 0.0);
                self.kept_pivot[e] = own;
                self.from_kept[e] = right / own;
                next -= right * self.from_kept[e];
            }
            carried = next;
        }
        self.below = below;
        self.below_free_end = below + usize::from(carried < 0.0);
    }

    /// Solves (H − s) y = x in place.
    pub fn solve(&self, chain: &Chain, x: &mut [f64]) {
        let (elements, modes) = (chain.elements(), chain.modes);
        let (face, mode) = x.split_at_mut(elements + 1);
        face[0] = 0.0;
        face[elements] = 0.0;
        for e in 0..elements {
            let (_, to_left, to_right) = chain.modes_at(e);
            let (inside, inverse) =
                (&mode.as_chunks::<MODES>().0[e], &self.inverse.as_chunks::<MODES>().0[e]);
            let mut share = [0.0; MODES];
            for k in 0..MODES {
                share[k] = inside[k] * inverse[k];
            }
            let (left, right) = (short_dot(&share, to_left), short_dot(&share, to_right));
            face[e] -= left;
            face[e + 1] -= right;
            if e == 0 {
                face[0] = 0.0;
            }
            let from = face[e];
            face[e + 1] -= self.to_next[e] * from;
            if let Some(k) = self.kept[e] {
                let own = &mut mode[e * modes + k];
                *own -= self.to_kept[e] * from;
                face[e + 1] -= self.from_kept[e] * *own;
            }
        }
        face[elements] = 0.0;
        for e in (0..elements).rev() {
            let next = face[e + 1];
            let mut own = 0.0;
            if let Some(k) = self.kept[e] {
                own = mode[e * modes + k] / self.kept_pivot[e] - self.from_kept[e] * next;
            }
            let from = if e == 0 {
                0.0
            } else {
                face[e] / self.pivot[e] - self.to_next[e] * next - self.to_kept_if(e) * own
            };
            face[e] = from;
            let (_, to_left, to_right) = chain.modes_at(e);
            let (inside, inverse) =
                (&mut mode.as_chunks_mut::<MODES>().0[e], &self.inverse.as_chunks::<MODES>().0[e]);
            for k in 0..MODES {
                inside[k] = (inside[k] - to_left[k] * from - to_right[k] * next) * inverse[k];
            }
            if let Some(k) = self.kept[e] {
                mode[e * modes + k] = own;
            }
        }
    }

    fn to_kept_if(&self, e: usize) -> f64 {
        if self.kept[e].is_some() { self.to_kept[e] } else { 0.0 }
    }
}

/// The mode so close to `shift` that it must not be eliminated first.
pub(super) fn close_to_mode(lambda: &[f64], shift: f64) -> Option<usize> {
    nearest_mode(lambda, lambda.partition_point(|&value| value < shift), shift)
}

/// The mode so close to the shift that eliminating it first would cost digits.
pub(super) fn nearest_mode(lambda: &[f64], under: usize, shift: f64) -> Option<usize> {
    let spacing = if lambda.len() > 1 { lambda[1] - lambda[0] } else { lambda[0].abs() };
    let near = |k: usize| (lambda[k] - shift).abs() < 0.01 * spacing;
    if under < lambda.len() && near(under) {
        Some(under)
    } else if under > 0 && near(under - 1) {
        Some(under - 1)
    } else {
        None
    }
}
