//! The discretised Hamiltonian as a chain of elements, each in the eigenbasis of its own interior.
//!
//! Inside one element the lumped-mass Hamiltonian with both end values held at zero is diagonalised once:
//! modes λ_k, coupled only to the two interface values. What remains is an arrow chain
//! interface – modes – interface – …; eliminating the modes at a shift s leaves a tridiagonal matrix of
//! interface values, so one factorisation, one count (Sylvester's law of inertia; W. H. Wittrick,
//! F. W. Williams, Q. J. Mech. Appl. Math. 24, 263 (1971)) or one inverse iteration costs a few
//! operations per mesh point. All coordinates are orthonormal: interface value × √mass, and modes.

use super::RadialError;
use super::pair::{Pair, add_row, pair_dot};
use super::reference_element::ReferenceElement;
use super::small_eigen::{diagonalise, overlaps};
use super::solve::DEGREE;
use crate::parallel::{WORTH_A_THREAD, side_by_side};

/// Modes of an element of a chain that has vectors: the machine knows the length of the innermost loops.
pub(super) const MODES: usize = DEGREE - 1;

/// The mesh, the potential on it and the modes of every element.
#[derive(Clone, Debug)]
pub(super) struct Chain {
    /// The reference element all elements share.
    pub reference: &'static ReferenceElement,
    /// Element boundaries in bohr, ascending, one more than elements.
    pub boundaries: Vec<f64>,
    /// Effective potential at the nodes in hartree, elements × p + 1.
    pub potential: Vec<f64>,
    /// Interior modes per element, p − 1.
    pub modes: usize,
    /// Their energies in hartree, elements × modes, ascending inside an element.
    pub lambda: Vec<f64>,
    /// Coupling of a mode to the left and right interface values, in orthonormal coordinates.
    pub to_left: Vec<f64>,
    /// See [`Chain::to_left`].
    pub to_right: Vec<f64>,
    /// Modes in terms of interior nodes (orthonormal), elements × modes × modes, a mode per row.
    pub vectors: Vec<f64>,
    /// Diagonal of the interface block, one per boundary.
    pub alpha: Vec<f64>,
    /// Direct coupling of the two interfaces of an element.
    pub beta: Vec<f64>,
    /// Lumped mass in bohr at each boundary.
    pub mass: Vec<f64>,
    /// Its square root.
    root_mass: Vec<f64>,
    /// Square root of the half length of each element.
    root_half: Vec<f64>,
}

/// Some elements of a chain to be filled in, from one on.
struct Part<'a> {
    from: usize,
    vectors: &'a mut [f64],
    lambda: &'a mut [f64],
    pairs: &'a mut [[f64; 2]],
}

impl Chain {
    /// Discretises −1/(2μ) d²/dr² + V on `boundaries` with polynomials of `degree`; `values` is the effective
    /// potential at the nodes, p + 1 an element.
    ///
    /// # Errors
    /// [`RadialError::NoConvergence`]
    pub fn new(
        two_mu: f64,
        boundaries: Vec<f64>,
        values: Vec<f64>,
        degree: usize,
    ) -> Result<Self, RadialError> {
        Self::extended(two_mu, boundaries, values, degree, None)
    }

    /// The same, taking over the modes of elements that `earlier` (of the same potential, mass and degree) has too.
    ///
    /// # Errors
    /// [`RadialError::NoConvergence`]
    pub fn extended(
        two_mu: f64,
        boundaries: Vec<f64>,
        values: Vec<f64>,
        degree: usize,
        earlier: Option<&Self>,
    ) -> Result<Self, RadialError> {
        let mut chain = Self::empty(boundaries, values, degree);
        let (elements, modes) = (chain.elements(), chain.modes);
        let mut vectors = vec![0.0; elements * modes * modes];
        let mut lambda = std::mem::take(&mut chain.lambda);
        let mut pairs = vec![[0.0; 2]; elements * modes];
        let cut = if elements < WORTH_A_THREAD { elements } else { elements / 2 };
        let (low_vectors, high_vectors) = vectors.split_at_mut(cut * modes * modes);
        let (low_lambda, high_lambda) = lambda.split_at_mut(cut * modes);
        let (low_pairs, high_pairs) = pairs.split_at_mut(cut * modes);
        let low = Part { from: 0, vectors: low_vectors, lambda: low_lambda, pairs: low_pairs };
        let high = Part { from: cut, vectors: high_vectors, lambda: high_lambda, pairs: high_pairs };
        if cut == elements {
            chain.fill(low, two_mu, earlier)?;
        } else {
            let (low, high) =
                side_by_side(|| chain.fill(low, two_mu, earlier), || chain.fill(high, two_mu, earlier));
            low.and(high)?;
        }
        (chain.vectors, chain.lambda) = (vectors, lambda);
        (chain.to_left, chain.to_right) = pairs.into_iter().map(|[left, right]| (left, right)).unzip();
        chain.join(two_mu);
        Ok(chain)
    }

    /// The same for [`Chain::energy_on`] alone: without the vectors of the modes, for a quarter of the work.
    ///
    /// # Errors
    /// [`RadialError::NoConvergence`]
    pub fn without_vectors(
        two_mu: f64,
        boundaries: Vec<f64>,
        values: Vec<f64>,
        degree: usize,
    ) -> Result<Self, RadialError> {
        let mut chain = Self::empty(boundaries, values, degree);
        let (modes, reference) = (chain.modes, chain.reference);
        let mut block = vec![0.0; modes * modes];
        let mut pairs = vec![0.0; 2 * modes];
        let mut scratch = vec![0.0; 2 * modes];
        for e in 0..chain.elements() {
            chain.fill_block(e, two_mu, &mut block);
            pairs.as_chunks_mut::<2>().0.copy_from_slice(&reference.to_ends);
            let range = e * modes..(e + 1) * modes;
            if !overlaps(&mut block, &mut pairs, &mut chain.lambda[range.clone()], &mut scratch, modes) {
                return Err(RadialError::NoConvergence { r_bohr: chain.boundaries[e] });
            }
            let to = chain.to_left[range.clone()].iter_mut().zip(&mut chain.to_right[range]);
            for ((left, right), pair) in to.zip(pairs.as_chunks::<2>().0) {
                (*left, *right) = (pair[0], pair[1]);
            }
        }
        chain.join(two_mu);
        Ok(chain)
    }

    /// Mesh and potential, nothing diagonalised.
    fn empty(boundaries: Vec<f64>, values: Vec<f64>, degree: usize) -> Self {
        let reference = ReferenceElement::of_degree(degree);
        let (p, elements) = (reference.degree, boundaries.len() - 1);
        let modes = p - 1;
        let mut chain = Self {
            reference,
            potential: values,
            modes,
            lambda: vec![0.0; elements * modes],
            to_left: vec![0.0; elements * modes],
            to_right: vec![0.0; elements * modes],
            vectors: Vec::new(),
            alpha: vec![0.0; elements + 1],
            beta: vec![0.0; elements],
            mass: vec![0.0; elements + 1],
            root_mass: Vec::new(),
            root_half: Vec::with_capacity(elements),
            boundaries,
        };
        for e in 0..elements {
            let (_, half) = chain.element(e);
            chain.mass[e] += reference.weights[0] * half;
            chain.mass[e + 1] += reference.weights[p] * half;
            chain.root_half.push(half.sqrt());
        }
        chain.root_mass = chain.mass.iter().map(|mass| mass.sqrt()).collect();
        chain
    }

    /// Left end and half length of element `e`.
    pub fn element(&self, e: usize) -> (f64, f64) {
        (self.boundaries[e], 0.5 * (self.boundaries[e + 1] - self.boundaries[e]))
    }

    /// Number of elements.
    pub fn elements(&self) -> usize {
        self.beta.len()
    }

    /// The element of `self` that lies between the same boundaries as element `e` of `other`.
    fn same_element(&self, other: &Self, e: usize) -> Option<usize> {
        let own = self.boundaries.partition_point(|&b| b < other.boundaries[e]);
        let pair = self.boundaries.get(own..own + 2)?;
        (self.modes == other.modes && pair == &other.boundaries[e..e + 2]).then_some(own)
    }

    /// The Hamiltonian of the interior of element `e` between orthonormal nodes.
    fn fill_block(&self, e: usize, two_mu: f64, block: &mut [f64]) {
        let (modes, half) = (self.modes, self.element(e).1);
        let kinetic = 1.0 / (two_mu * half * half);
        for (x, unit) in block.iter_mut().zip(&self.reference.interior) {
            *x = kinetic * unit;
        }
        let inside = &self.potential[e * (modes + 2) + 1..];
        for (x, v) in block.iter_mut().step_by(modes + 1).zip(inside) {
            *x += v;
        }
    }

    /// Modes of a part of the elements, and their couplings without the factors that [`Chain::join`] gives them.
    fn fill(&self, part: Part, two_mu: f64, earlier: Option<&Self>) -> Result<(), RadialError> {
        let modes = self.modes;
        let mut scratch = vec![0.0; 2 * modes];
        let elements = part
            .vectors
            .chunks_exact_mut(modes * modes)
            .zip(part.lambda.chunks_exact_mut(modes))
            .zip(part.pairs.chunks_exact_mut(modes));
        for (e, ((block, lambda), pairs)) in (part.from..).zip(elements) {
            let known = earlier.and_then(|chain| Some((chain, chain.same_element(self, e)?)));
            if let Some((chain, k)) = known {
                block.copy_from_slice(&chain.vectors[k * modes * modes..(k + 1) * modes * modes]);
                lambda.copy_from_slice(&chain.lambda[k * modes..(k + 1) * modes]);
            } else {
                self.fill_block(e, two_mu, block);
                if !diagonalise(block, lambda, &mut scratch, modes) {
                    return Err(RadialError::NoConvergence { r_bohr: self.boundaries[e] });
                }
            }
            for (pair, row) in pairs.iter_mut().zip(block.chunks_exact(modes)) {
                let (mut left, mut right) = (0.0, 0.0);
                for (x, [to_left, to_right]) in row.iter().zip(&self.reference.to_ends) {
                    left += x * to_left;
                    right += x * to_right;
                }
                *pair = [left, right];
            }
        }
        Ok(())
    }

    /// Scales the couplings of the modes to the interface values and fills in the block of the interfaces.
    fn join(&mut self, two_mu: f64) {
        let (p, modes) = (self.reference.degree, self.modes);
        let n = p + 1;
        let stiffness = &self.reference.stiffness;
        for e in 0..self.elements() {
            let (_, half) = self.element(e);
            // Coupling of the unscaled interface value to an orthonormal interior node:
            // K_0i/(2μ half)/√(w_i half); the interface's own √mass follows.
            let scale = 1.0 / (two_mu * half * self.root_half[e]);
            let (left_mass, right_mass) = (self.root_mass[e], self.root_mass[e + 1]);
            let range = e * modes..(e + 1) * modes;
            self.to_left[range.clone()].iter_mut().for_each(|x| *x *= scale / left_mass);
            self.to_right[range].iter_mut().for_each(|x| *x *= scale / right_mass);
            self.beta[e] = stiffness[p] / (two_mu * half) / (left_mass * right_mass);
            self.alpha[e] += stiffness[0] / (two_mu * half) / self.mass[e];
            self.alpha[e + 1] += stiffness[p * n + p] / (two_mu * half) / self.mass[e + 1];
        }
        for (e, alpha) in self.alpha.iter_mut().enumerate() {
            *alpha += if e == 0 { self.potential[0] } else { self.potential[e * n - 1] };
        }
    }

    /// The modes of every element, one a row.
    fn rows(&self) -> &[[[f64; MODES]; MODES]] {
        self.vectors.as_chunks::<MODES>().0.as_chunks::<MODES>().0
    }

    /// ψ at the mesh points (elements × p + 1) of a vector of this basis.
    pub fn to_nodes(&self, vector: &[f64], psi: &mut [f64]) {
        let p = MODES + 1;
        let (face, mode) = vector.split_at(self.alpha.len());
        let elements = self.rows().iter().zip(mode.as_chunks::<MODES>().0);
        for (e, (rows, amounts)) in elements.enumerate() {
            let mut inside = [0.0; MODES];
            for (row, amount) in rows.iter().zip(amounts) {
                add_row(&mut inside, *amount, row);
            }
            let scale = 1.0 / self.root_half[e];
            psi[e * p] = face[e] / self.root_mass[e];
            let weights = &self.reference.inverse_root_weights[1..p];
            for ((value, x), w) in psi[e * p + 1..(e + 1) * p].iter_mut().zip(&inside).zip(weights) {
                *value = x * w * scale;
            }
        }
        let end = self.elements();
        psi[end * p] = face[end] / self.root_mass[end];
    }

    /// The vector of this basis of a function given at the mesh points; its values at the walls are dropped.
    pub fn to_basis(&self, psi: &[f64], vector: &mut [f64]) {
        let p = MODES + 1;
        let faces = self.alpha.len();
        let (face, mode) = vector.split_at_mut(faces);
        let elements = self.rows().iter().zip(mode.as_chunks_mut::<MODES>().0);
        for (e, (rows, amounts)) in elements.enumerate() {
            let scale = self.root_half[e];
            face[e] = psi[e * p] * self.root_mass[e];
            let mut inside = [0.0; MODES];
            let values = psi[e * p + 1..(e + 1) * p].iter().zip(&self.reference.root_weights[1..p]);
            for (x, (value, root)) in inside.iter_mut().zip(values) {
                *x = value * root * scale;
            }
            for (row, amount) in rows.iter().zip(amounts) {
                *amount = short_dot(row, &inside);
            }
        }
        face[0] = 0.0;
        face[faces - 1] = 0.0;
    }

    /// λ and the couplings to the left and to the right of element `e`.
    pub fn modes_at(&self, e: usize) -> (&[f64; MODES], &[f64; MODES], &[f64; MODES]) {
        (
            &self.lambda.as_chunks::<MODES>().0[e],
            &self.to_left.as_chunks::<MODES>().0[e],
            &self.to_right.as_chunks::<MODES>().0[e],
        )
    }

    /// (H − `shift`) x.
    pub fn apply(&self, x: &[f64], shift: f64, image: &mut [f64]) {
        let (face, mode) = x.split_at(self.alpha.len());
        let (face_image, mode_image) = image.split_at_mut(self.alpha.len());
        for ((y, x), alpha) in face_image.iter_mut().zip(face).zip(&self.alpha) {
            *y = (alpha - shift) * x;
        }
        let inside = mode.as_chunks::<MODES>().0.iter().zip(mode_image.as_chunks_mut::<MODES>().0);
        for (e, (mode, mode_image)) in inside.enumerate() {
            let (from, to) = (face[e], face[e + 1]);
            let (lambda, to_left, to_right) = self.modes_at(e);
            for k in 0..MODES {
                mode_image[k] = (lambda[k] - shift) * mode[k] + to_left[k] * from + to_right[k] * to;
            }
            face_image[e] += self.beta[e] * to + short_dot(to_left, mode);
            face_image[e + 1] += self.beta[e] * from + short_dot(to_right, mode);
        }
        face_image[0] = 0.0;
        face_image[face.len() - 1] = 0.0;
    }

    /// Rayleigh functional on `other` (the same elements, another degree) of a level of this chain: its interface
    /// values, with the interiors that solve the equation there at the level's energy.
    ///
    /// The interface values are right to the square root of the difference, so the result is right to its square.
    pub fn energy_on(&self, other: &Self, level: &super::search::Found) -> f64 {
        let modes = other.modes;
        let energy = level.energy;
        let (mut above, mut norm) = (0.0, 0.0);
        let value = |i: usize| level.vector[i] / self.root_mass[i] * other.root_mass[i];
        let mut right = value(0);
        for e in 0..self.elements() {
            let left = right;
            right = value(e + 1);
            // Each interface is counted once, with the element to its right.
            above += left * left * (other.alpha[e] - energy) + 2.0 * left * right * other.beta[e];
            norm += left * left;
            for k in e * modes..(e + 1) * modes {
                let coupling = other.to_left[k] * left + other.to_right[k] * right;
                let amount = coupling / (other.lambda[k] - energy);
                above -= amount * coupling;
                norm += amount * amount;
            }
        }
        energy + above / norm
    }

    /// Length of a vector in this basis: interface values (both walls included, kept zero), then modes.
    pub fn len(&self) -> usize {
        self.alpha.len() + self.lambda.len()
    }
}

/// Σ a b over the modes of one element.
#[inline(always)]
pub(super) fn short_dot(a: &[f64; MODES], b: &[f64; MODES]) -> f64 {
    pair_dot(a, b)
}

/// Σ a b in four independent sums, in an order that does not depend on the machine.
pub(crate) fn dot(a: &[f64], b: &[f64]) -> f64 {
    let (a4, rest_a) = a.as_chunks::<4>();
    let (b4, rest_b) = b.as_chunks::<4>();
    let rest: f64 = rest_a.iter().zip(rest_b).map(|(x, y)| x * y).sum();
    let mut sums = [Pair::both(0.0); 2];
    for (x, y) in a4.iter().zip(b4) {
        sums[0] = sums[0] + Pair::new([x[0], x[1]]) * Pair::new([y[0], y[1]]);
        sums[1] = sums[1] + Pair::new([x[2], x[3]]) * Pair::new([y[2], y[3]]);
    }
    sums[0].sum() + sums[1].sum() + rest
}

/// A node of an element.
pub(super) fn node(from: f64, half: f64, x: f64) -> f64 {
    from + half * (1.0 + x)
}
