//! Densities of the Morse oscillator in closed form.

use super::Distribution;
use crate::potential::{Morse, Potential as _};
use crate::radial::gauss_legendre_8;
use crate::special::log_gamma;

/// The density is followed outwards until ln(|ψ|²/peak) falls below this.
const FAINT: f64 = -34.0;
/// Largest phase over a panel of eight Gauss points, in radians.
const MOST_PHASE: f64 = 2.0;
/// Steps outwards at most.
const MOST_STEPS: usize = 20_000;

/// |ψ_v|² of a Morse function on the full line.
///
/// ψ = N z^s e^(−z/2) L_v^(2s)(z), z = 2λ e^(−a x), λ = sqrt(2 μ D_e)/(a ħ), s = λ − v − ½,
/// N² = 2 s a v!/Γ(2λ − v) [P. M. Morse, Phys. Rev. 34, 57 (1929)].
#[derive(Clone, Debug)]
pub struct MorseDensity {
    r_e_bohr: f64,
    a_per_bohr: f64,
    lambda: f64,
    v: usize,
    turning_points_bohr: (f64, f64),
    /// Ends of the panels in bohr, ascending, and the probability below each.
    panels: Vec<(f64, f64)>,
}

impl MorseDensity {
    /// None where the function has no level v.
    pub fn new(morse: &Morse, reduced_mass_me: f64, v: usize) -> Option<Self> {
        if v >= morse.bound_levels(reduced_mass_me) {
            return None;
        }
        let a = morse.a_per_bohr;
        let lambda = (2.0 * reduced_mass_me * morse.well_depth_hartree).sqrt() / a;
        let share = 1.0 - (lambda - v as f64 - 0.5).powi(2) / (lambda * lambda);
        // E = D (1 − e^(−a x))² at the turning points.
        let root = share.sqrt();
        let turning = (morse.r_e_bohr - root.ln_1p() / a, morse.r_e_bohr - (-root).ln_1p() / a);
        let fine = lambda.is_finite() && turning.0.is_finite() && turning.1.is_finite();
        let mut density = Self {
            r_e_bohr: morse.r_e_bohr,
            a_per_bohr: a,
            lambda,
            v,
            turning_points_bohr: turning,
            panels: Vec::new(),
        };
        if !fine {
            return None;
        }
        let energy = share * morse.well_depth_hartree;
        let wave_number = |r: f64| {
            (2.0 * reduced_mass_me * (energy - morse.energy_hartree(r) + morse.e_min_hartree).abs()).sqrt()
        };
        density.cumulate(&wave_number)?;
        Some(density)
    }

    /// Its classical turning points in bohr.
    pub const fn turning_points_bohr(&self) -> (f64, f64) {
        self.turning_points_bohr
    }

    /// Probability beyond both turning points.
    pub fn forbidden_probability(&self) -> f64 {
        let (a, b) = self.turning_points_bohr;
        self.below(a) + 1.0 - self.below(b)
    }

    /// ln |ψ|² in 1/bohr.
    fn log_density(&self, r_bohr: f64) -> f64 {
        let s = self.lambda - self.v as f64 - 0.5;
        let alpha = 2.0 * s;
        let log_z = (2.0 * self.lambda).ln() - self.a_per_bohr * (r_bohr - self.r_e_bohr);
        let z = log_z.exp();
        // Laguerre functions normalised at every step, with their scale kept as a logarithm: neither overflows.
        let mut log_scale = 0.5 * (alpha * log_z - z - log_gamma(alpha + 1.0));
        let (mut last, mut now) = (0.0, 1.0);
        for n in 0..self.v {
            let n = n as f64;
            let next = ((2.0 * n + 1.0 + alpha - z) * now - (n * (n + alpha)).sqrt() * last)
                / ((n + 1.0) * (n + 1.0 + alpha)).sqrt();
            (last, now) = (now, next);
            let size = now.abs().max(last.abs());
            if size > 1e100 {
                last /= size;
                now /= size;
                log_scale += size.ln();
            }
        }
        (alpha * self.a_per_bohr).ln() + 2.0 * (log_scale + now.abs().ln())
    }

    /// Panels of at most a fraction of the local wavelength over the whole density, and their running sum.
    fn cumulate(&mut self, wave_number: &dyn Fn(f64) -> f64) -> Option<()> {
        let (inner, outer) = self.turning_points_bohr;
        let longest = 0.5 / self.a_per_bohr;
        // The wave number may rise steeply from a turning point on: both ends and the middle of a panel count.
        let step = |r: f64| {
            let phase = |h: f64| h * [r, r + 0.5 * h, r + h].map(wave_number).into_iter().fold(0.0, f64::max);
            let mut h = longest;
            while phase(h) > MOST_PHASE {
                h *= 0.5;
            }
            h
        };
        let peak = (0..=64)
            .map(|i| self.log_density(inner + (outer - inner) * f64::from(i) / 64.0))
            .fold(f64::NEG_INFINITY, f64::max);
        let seen = |r: f64| self.log_density(r) > peak + FAINT;
        let (mut from, mut to) = (inner, outer);
        for _ in 0..MOST_STEPS {
            if !seen(from) {
                break;
            }
            from -= longest.min(1.0 / wave_number(from));
        }
        let mut stride = longest;
        for _ in 0..MOST_STEPS {
            if !seen(to) {
                break;
            }
            to += stride;
            stride *= 1.1;
        }
        let (mut r, mut sum) = (from, 0.0);
        let mut panels = vec![(from, 0.0)];
        while r < to {
            let next = (r + step(r)).min(to);
            sum += self.probability(r, next);
            panels.push((next, sum));
            if panels.len() > MOST_STEPS || next <= r {
                return None;
            }
            r = next;
        }
        // The closed form is normalised; what is missing lies in the tails left out.
        (sum > 0.0 && sum.is_finite()).then(|| self.panels = panels)
    }

    fn probability(&self, a: f64, b: f64) -> f64 {
        let half = 0.5 * (b - a);
        let (nodes, weights) = gauss_legendre_8();
        let at = |x: &f64| self.log_density(a + half * (1.0 + x)).exp();
        nodes.iter().zip(weights).map(|(x, w)| half * w * at(x)).sum()
    }
}

impl Distribution for MorseDensity {
    fn density_per_bohr(&self, r_bohr: f64) -> f64 {
        self.log_density(r_bohr).exp()
    }

    fn below(&self, r_bohr: f64) -> f64 {
        let after = self.panels.partition_point(|p| p.0 <= r_bohr);
        match (after.checked_sub(1).and_then(|i| self.panels.get(i)), self.panels.get(after)) {
            (Some(left), Some(_)) => left.1 + self.probability(left.0, r_bohr),
            (Some(last), None) => last.1,
            _ => 0.0,
        }
    }

    fn support_bohr(&self) -> (f64, f64) {
        (self.panels[0].0, self.panels[self.panels.len() - 1].0)
    }
}
