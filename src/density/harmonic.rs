//! Densities of the harmonic oscillator in closed form.

use super::Distribution;
use super::erfc::erfc;
use std::f64::consts::PI;

/// |ψ_v|² of the harmonic oscillator about a centre.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct HarmonicDensity {
    v: usize,
    centre_bohr: f64,
    amplitude_bohr: f64,
}

impl HarmonicDensity {
    /// `amplitude_bohr` is sqrt(ħ/(μ ω)), the turning point of v = 0. None unless it is positive and finite.
    pub fn new(v: usize, centre_bohr: f64, amplitude_bohr: f64) -> Option<Self> {
        let fine = amplitude_bohr > 0.0 && amplitude_bohr.is_finite() && centre_bohr.is_finite();
        fine.then_some(Self { v, centre_bohr, amplitude_bohr })
    }

    /// Its classical turning points, centre ∓ sqrt(2v + 1) amplitudes, in bohr.
    pub fn turning_points_bohr(&self) -> (f64, f64) {
        let a = (2.0 * self.v as f64 + 1.0).sqrt() * self.amplitude_bohr;
        (self.centre_bohr - a, self.centre_bohr + a)
    }

    /// Probability beyond both turning points; erfc(1) for v = 0.
    pub fn forbidden_probability(&self) -> f64 {
        2.0 * self.beyond((2.0 * self.v as f64 + 1.0).sqrt())
    }

    /// The density of the classical particle of the same energy, 1/(π sqrt(A² − x²)).
    pub const fn classical(&self) -> ClassicalHarmonic {
        ClassicalHarmonic { of: *self }
    }

    /// ψ_v and ∫ψ_v² beyond y ≥ 0, in units of the amplitude.
    ///
    /// ψ_n by its three-term recurrence; the integral by ∫_y^∞ ψ_n² = ∫_y^∞ ψ_(n−1)² + ψ_n ψ_(n−1)/√(2n), which
    /// follows from the ladder operators, (ψ_n ψ_(n−1))′ = √(2n) (ψ_(n−1)² − ψ_n²).
    fn ladder(&self, y: f64) -> (f64, f64) {
        let (mut last, mut now) = (0.0, PI.powf(-0.25) * (-0.5 * y * y).exp());
        let mut beyond = 0.5 * erfc(y);
        for n in 1..=self.v {
            let n = n as f64;
            let next = (2.0 / n).sqrt() * y * now - ((n - 1.0) / n).sqrt() * last;
            (last, now) = (now, next);
            beyond += now * last / (2.0 * n).sqrt();
        }
        (now, beyond)
    }

    fn beyond(&self, y: f64) -> f64 {
        self.ladder(y).1.max(0.0)
    }
}

impl Distribution for HarmonicDensity {
    fn density_per_bohr(&self, r_bohr: f64) -> f64 {
        let psi = self.ladder((r_bohr - self.centre_bohr) / self.amplitude_bohr).0;
        psi * psi / self.amplitude_bohr
    }

    fn below(&self, r_bohr: f64) -> f64 {
        let y = (r_bohr - self.centre_bohr) / self.amplitude_bohr;
        if y >= 0.0 { 1.0 - self.beyond(y) } else { self.beyond(-y) }
    }

    fn support_bohr(&self) -> (f64, f64) {
        // Six amplitudes beyond the turning points nothing is left (e^−36 for v = 0, less for any other).
        let (a, b) = self.turning_points_bohr();
        (a - 6.0 * self.amplitude_bohr, b + 6.0 * self.amplitude_bohr)
    }
}

/// The classical particle in a parabola.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ClassicalHarmonic {
    of: HarmonicDensity,
}

impl Distribution for ClassicalHarmonic {
    fn density_per_bohr(&self, r_bohr: f64) -> f64 {
        let (a, b) = self.support_bohr();
        let square = (r_bohr - a) * (b - r_bohr);
        if square > 0.0 { 1.0 / (PI * square.sqrt()) } else { 0.0 }
    }

    fn below(&self, r_bohr: f64) -> f64 {
        let (a, b) = self.support_bohr();
        let x = ((2.0 * r_bohr - a - b) / (b - a)).clamp(-1.0, 1.0);
        0.5 + x.asin() / PI
    }

    fn support_bohr(&self) -> (f64, f64) {
        self.of.turning_points_bohr()
    }
}
