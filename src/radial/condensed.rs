//! The chain with its modes eliminated: at a shift s only the interface values f remain, T(s) f = 0.
//!
//! T(s) is the Schur complement of the modes and M(s) = −dT/ds, the norm that f has with its modes. Inverse iteration
//! T(s) y = M(s) x is that of the whole problem with the modes following the interface values, and the Rayleigh quotient
//! of the whole vector is s + yᵀ M x / yᵀ M y; a round costs one division and six sums a mode and keeps no vector of the
//! length of the mesh. A mode so close to s that eliminating it would cost digits is kept beside the interface values.

use super::chain::{Chain, MODES, short_dot};
use super::factors::{guarded, nearest_mode};

/// The products of a mode's couplings: left·left, left·right, right·right, and a zero to fill the second pair.
type Products = [f64; 4];

/// What the elimination needs of every mode, in lanes of two.
#[derive(Debug)]
pub(super) struct Condensed<'a> {
    chain: &'a Chain,
    /// By element and mode.
    modes: Vec<[Products; MODES]>,
}

impl<'a> Condensed<'a> {
    pub fn new(chain: &'a Chain) -> Self {
        let products = |e: usize| {
            let (_, to_left, to_right) = chain.modes_at(e);
            let of = |k: usize| {
                let (left, right) = (to_left[k], to_right[k]);
                [left * left, left * right, right * right, 0.0]
            };
            std::array::from_fn(of)
        };
        Self { chain, modes: (0..chain.elements()).map(products).collect() }
    }
}

/// Σ p/(λ − s) over the modes of an element and, from the fifth place on, Σ p/(λ − s)², for the products p.
// Left as a function of its own, the sums are written to memory as neighbours, and are then summed two at a time.
#[inline(never)]
fn sums(products: &[Products; MODES], inverse: &[f64; MODES]) -> [f64; 8] {
    let mut sums = [0.0; 8];
    for (p, d) in products.iter().zip(inverse) {
        let share = p.map(|p| p * d);
        for c in 0..4 {
            sums[c] += share[c];
            sums[c + 4] += share[c] * d;
        }
    }
    sums
}

/// Interface values and kept modes.
#[derive(Clone, Debug, Default)]
pub(super) struct Reduced {
    face: Vec<f64>,
    own: Vec<f64>,
}

impl Reduced {
    pub fn from_faces(face: &[f64]) -> Self {
        let n = face.len();
        let mut face = face.to_vec();
        face[0] = 0.0;
        face[n - 1] = 0.0;
        Self { own: vec![1.0; n - 1], face }
    }

    pub fn copy_from(&mut self, other: &Self) {
        self.face.clone_from(&other.face);
        self.own.clone_from(&other.own);
    }
}

/// T(s) factorised, with M(s).
#[derive(Debug, Default)]
pub(super) struct ReducedFactors {
    pub shift: f64,
    /// Levels below the shift.
    pub below: usize,
    kept: Vec<Option<usize>>,
    pivot: Vec<f64>,
    kept_pivot: Vec<f64>,
    to_next: Vec<f64>,
    to_kept: Vec<f64>,
    from_kept: Vec<f64>,
    norm_face: Vec<f64>,
    norm_next: Vec<f64>,
}

impl ReducedFactors {
    /// Factorises T(`shift`) and counts the levels below `shift`.
    pub fn factorise(&mut self, condensed: &Condensed, shift: f64) {
        let chain = condensed.chain;
        let elements = chain.elements();
        self.shift = shift;
        self.kept.resize(elements, None);
        for list in [
            &mut self.pivot,
            &mut self.kept_pivot,
            &mut self.to_next,
            &mut self.to_kept,
            &mut self.from_kept,
            &mut self.norm_face,
            &mut self.norm_next,
        ] {
            list.resize(elements + 1, 0.0);
        }
        let mut below = 0;
        let (mut carried, mut norm) = (0.0, 1.0);
        for e in 0..elements {
            let (lambda, to_left, to_right) = chain.modes_at(e);
            let under = lambda.iter().filter(|&&value| value < shift).count();
            below += under;
            let kept = nearest_mode(lambda, under, shift);
            let mut inverse = lambda.map(|value| 1.0 / (value - shift));
            if let Some(k) = kept {
                inverse[k] = 0.0;
            }
            let [ll, lr, rr, _, norms @ ..] = sums(&condensed.modes[e], &inverse);
            self.kept[e] = kept;
            self.norm_face[e] = norm + norms[0];
            self.norm_next[e] = norms[1];
            norm = 1.0 + norms[2];
            let direct = chain.beta[e] - lr;
            let mut next = chain.alpha[e + 1] - shift - rr;
            let inner_wall = e == 0;
            let pivot = guarded(carried - ll, chain.alpha[e]);
            self.pivot[e] = pivot;
            if inner_wall {
                self.to_next[e] = 0.0;
            } else {
                below += usize::from(pivot < 0.0);
                self.to_next[e] = direct / pivot;
                next -= direct * self.to_next[e];
            }
            if let Some(k) = kept {
                below -= usize::from(k < under);
                let (left, mut right) = (to_left[k], to_right[k]);
                let mut own = lambda[k] - shift;
                self.to_kept[e] = 0.0;
                if !inner_wall {
                    self.to_kept[e] = left / pivot;
                    own -= left * self.to_kept[e];
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
        self.norm_face[elements] = norm;
        self.below = below;
    }

    /// M x.
    pub fn norm(&self, x: &Reduced, image: &mut Reduced) {
        let elements = self.kept.len();
        image.face.resize(elements + 1, 0.0);
        image.own.resize(elements, 0.0);
        let mut from_left = 0.0;
        for e in 0..elements {
            image.face[e] = from_left + self.norm_face[e] * x.face[e] + self.norm_next[e] * x.face[e + 1];
            from_left = self.norm_next[e] * x.face[e];
            image.own[e] = if self.kept[e].is_some() { x.own[e] } else { 0.0 };
        }
        image.face[0] = 0.0;
        image.face[elements] = 0.0;
    }

    /// Solves T y = x in place.
    pub fn solve(&self, x: &mut Reduced) {
        let elements = self.kept.len();
        for e in 0..elements {
            let from = x.face[e];
            x.face[e + 1] -= self.to_next[e] * from;
            if self.kept[e].is_some() {
                x.own[e] -= self.to_kept[e] * from;
                x.face[e + 1] -= self.from_kept[e] * x.own[e];
            }
        }
        x.face[elements] = 0.0;
        for e in (0..elements).rev() {
            let next = x.face[e + 1];
            let mut taken = self.to_next[e] * next;
            if self.kept[e].is_some() {
                x.own[e] = x.own[e] / self.kept_pivot[e] - self.from_kept[e] * next;
                taken += self.to_kept[e] * x.own[e];
            }
            x.face[e] = if e == 0 { 0.0 } else { x.face[e] / self.pivot[e] - taken };
        }
    }

    /// Gives modes that were not kept before the amounts that follow from the interface values.
    pub fn take_over(&self, condensed: &Condensed, before: &[Option<usize>], x: &mut Reduced) {
        let chain = condensed.chain;
        for (e, kept) in self.kept.iter().enumerate() {
            if let Some(k) = kept.filter(|_| before.get(e) != Some(kept)) {
                let at = e * MODES + k;
                let pull = chain.to_left[at] * x.face[e] + chain.to_right[at] * x.face[e + 1];
                x.own[e] = -pull / guarded(chain.lambda[at] - self.shift, chain.lambda[at]);
            }
        }
    }

    /// Which modes are kept.
    pub fn kept(&self) -> &[Option<usize>] {
        &self.kept
    }

    /// The whole normalised vector of the chain, its modes following the interface values at `energy`, and the norm of
    /// (H − `energy`) times it, as it is and not as the iteration has it: where many elements have a mode at the
    /// energy, elimination without pivoting can fail.
    pub fn whole(&self, condensed: &Condensed, x: &Reduced, energy: f64) -> (Vec<f64>, f64) {
        let chain = condensed.chain;
        let mut vector = x.face.clone();
        vector.reserve(chain.lambda.len());
        let mut residual2 = 0.0;
        let mut from_left = 0.0;
        for (e, kept) in self.kept.iter().enumerate() {
            let (left, right) = (x.face[e], x.face[e + 1]);
            let (lambda, to_left, to_right) = chain.modes_at(e);
            let mut inside = [0.0; MODES];
            for k in 0..MODES {
                inside[k] = (to_left[k] * left + to_right[k] * right) / (energy - lambda[k]);
            }
            if let Some(k) = *kept {
                inside[k] = x.own[e];
                let row = (lambda[k] - energy) * x.own[e] + to_left[k] * left + to_right[k] * right;
                residual2 += row * row;
            }
            if e > 0 {
                let own = (chain.alpha[e] - energy) * left + chain.beta[e] * right;
                let row = from_left + own + short_dot(to_left, &inside);
                residual2 += row * row;
            }
            from_left = chain.beta[e] * left + short_dot(to_right, &inside);
            vector.extend_from_slice(&inside);
        }
        let scale = 1.0 / super::chain::dot(&vector, &vector).sqrt();
        vector.iter_mut().for_each(|v| *v *= scale);
        (vector, residual2.sqrt() * scale)
    }
}

/// x · y over interface values and kept modes (a mode that is not kept must be zero in one of them).
pub(super) fn product(x: &Reduced, y: &Reduced) -> f64 {
    super::chain::dot(&x.face, &y.face) + super::chain::dot(&x.own, &y.own)
}

/// x times a number.
pub(super) fn scale(x: &mut Reduced, by: f64) {
    x.face.iter_mut().chain(&mut x.own).for_each(|v| *v *= by);
}
