//! A second way to the pole of a quasi-bound level, which shares nothing with the elements: Numerov's recurrence in
//! x = ln r at real energies only, and the pole of the polynomial through the mismatch of the logarithmic steps.

use super::mesh::effective;
use super::outgoing::C;
use crate::potential::Potential;

/// Largest local wavenumber times step.
const STEP: f64 = 0.04;
/// Longest grid.
const MOST_POINTS: usize = 400_000;
/// Energies on either side of the middle.
const SIDE: i32 = 3;

/// Where to look.
#[derive(Clone, Copy, Debug)]
pub(super) struct Search {
    pub two_mu: f64,
    /// X of the centrifugal term and its order: X = ν(ν + 1).
    pub rotation_x: f64,
    pub nu: f64,
    /// Inner end, place of the match, outer end in bohr.
    pub stations_bohr: [f64; 3],
    /// Middle and step of the real energies in hartree.
    pub energy: f64,
    pub step: f64,
    /// Energy at infinity in hartree.
    pub limit: f64,
}

/// Outgoing Riccati-Hankel function by its series in 1/ρ (ends for whole ν, asymptotic else).
fn outgoing(nu: f64, rho: f64) -> C {
    let (mut term, mut sum) = (C::new(1.0, 0.0), C::new(1.0, 0.0));
    for m in 1..500 {
        let m = f64::from(m);
        let next = term * C::i() * ((nu + m) * (nu - m + 1.0) / (2.0 * m * rho));
        if next.norm_sqr() == 0.0 || next.norm_sqr() > term.norm_sqr() && m > nu + 1.0 {
            break;
        }
        term = next;
        sum += term;
    }
    C::new(rho.cos(), rho.sin()) * sum
}

/// E and width of the pole; none where the grid would be too long or no pole is near.
pub(super) fn pole(potential: &dyn Potential, search: &Search) -> Option<(f64, f64)> {
    let [from, at, to] = search.stations_bohr;
    let wave = |r: f64| {
        let v = effective(potential, search.two_mu, search.rotation_x, r);
        (search.two_mu * (v - search.energy).abs()).sqrt() * r
    };
    // The largest wavenumber in x inside the allowed regions and the barrier, from a coarse walk.
    let range = (to / from).ln();
    let places = (0..400).map(|i| from * (range * (f64::from(i) + 0.5) / 400.0).exp());
    let largest = places.map(wave).filter(|q| q.is_finite()).fold(1.0, f64::max);
    let count = (range * largest / STEP).ceil();
    if !count.is_finite() || count > MOST_POINTS as f64 {
        return None;
    }
    let count = count as usize + 50;
    let h = range / count as f64;
    let r: Vec<f64> = (0..=count).map(|i| from * (h * i as f64).exp()).collect();
    let v: Vec<f64> = r.iter().map(|&r| potential.energy_hartree(r)).collect();
    let middle = r.partition_point(|&x| x < at).clamp(2, count - 2);
    let grid = Grid { search, h, r: &r, v: &v, middle };
    let mut differences: Vec<C> = (-SIDE..=SIDE)
        .map(|j| grid.mismatch(search.energy + f64::from(j) * search.step))
        .collect::<Option<_>>()?;
    // Newton's divided differences on the nodes −SIDE, ..., SIDE.
    let n = differences.len();
    for order in 1..n {
        for k in (order..n).rev() {
            differences[k] = (differences[k] - differences[k - 1]) / order as f64;
        }
    }
    let at_node = |k: usize| k as f64 - f64::from(SIDE);
    let value = |z: C| (0..n).rev().fold(C::new(0.0, 0.0), |sum, k| sum * (z - at_node(k)) + differences[k]);
    let mut z = C::new(0.0, 0.0);
    for _ in 0..60 {
        let slope = (value(z + 1e-3) - value(z - 1e-3)) / 2e-3;
        let step = value(z) / slope;
        z -= step;
        if z.re.is_nan() || z.re.abs() >= 2.0 * f64::from(SIDE) {
            return None;
        }
        if step.im.abs() <= 1e-12 * z.im.abs() && step.re.abs() < 1e-12 {
            break;
        }
    }
    Some((search.energy + search.step * z.re, -2.0 * search.step * z.im))
}

struct Grid<'a> {
    search: &'a Search,
    h: f64,
    r: &'a [f64],
    v: &'a [f64],
    middle: usize,
}

impl Grid<'_> {
    /// Difference of y_(m+1)/y_m between the inner solution and the outgoing wave; y = (1 − h²G/12) φ, ψ = √r φ,
    /// φ″ = G φ with G = ¼ + X + 2μ r² (V − E).
    fn mismatch(&self, energy: f64) -> Option<C> {
        let Search { two_mu, rotation_x, nu, limit, .. } = *self.search;
        let t = |i: usize| {
            let g = 0.25 + rotation_x + two_mu * self.r[i] * self.r[i] * (self.v[i] - energy);
            g * self.h * self.h / 12.0
        };
        let c = |i: usize| {
            let t = t(i);
            (2.0 + 10.0 * t) / (1.0 - t)
        };
        let last = self.r.len() - 1;
        let start = (0..self.middle).find(|&i| t(i) < 0.3)?;
        let mut ratio = f64::INFINITY;
        for i in start + 1..=self.middle {
            ratio = c(i) - 1.0 / ratio;
        }
        // What the potential still is at the end is taken into the wavenumber there.
        let k = (two_mu * (energy - limit - (self.v[last] - limit))).sqrt();
        let y = |i: usize| outgoing(nu, k * self.r[i]) * ((1.0 - t(i)) / self.r[i].sqrt());
        let (mut next, mut now) = (y(last), y(last - 1));
        // Constant along the recurrence: Im(y_(i+1) conj y_i).
        let mut casoratian = (next * now.conj()).im;
        for i in (self.middle + 1..last).rev() {
            let before = now * c(i) - next;
            (next, now) = (now, before);
            if now.norm_sqr() > 1e200 {
                next *= 1e-100;
                now *= 1e-100;
                casoratian *= 1e-200;
            }
        }
        let square = now.norm_sqr();
        let outer = C::new((next * now.conj()).re / square, casoratian / square);
        let mismatch = C::from(ratio) - outer;
        (mismatch.re.is_finite() && mismatch.im.is_finite()).then_some(mismatch)
    }
}
