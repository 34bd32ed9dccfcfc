//! The elements of a chain eliminated at complex energy, and the outgoing wave beyond them.

use super::chain::Chain;
use super::factors::close_to_mode;
use nalgebra::Complex;

/// A complex number.
pub(super) type C = Complex<f64>;

/// H′/H of the outgoing Riccati-Hankel function of order ν at `rho` (by ρ): the second continued fraction of
/// J. W. Steed for Coulomb functions without charge (A. R. Barnett, D. H. Feng, J. W. Steed, L. J. B. Goldfarb,
/// Comput. Phys. Commun. 8, 377 (1974)), by the modified Lentz algorithm. Any real ν; |ρ| beyond the turning point.
pub(super) fn outgoing_slope(nu: f64, rho: C) -> C {
    let i = C::i();
    let tiny = C::new(1e-100, 0.0);
    let nonzero = |z: C| if z.norm_sqr() == 0.0 { tiny } else { z };
    let (mut f, mut c, mut d) = (tiny, tiny, C::new(0.0, 0.0));
    for n in 1..20_000 {
        let m = f64::from(n);
        let a = (m - 1.0 - nu) * (m + nu);
        let b = (rho + i * m) * 2.0;
        d = nonzero(b + d * a).inv();
        c = nonzero(b + c.inv() * a);
        let step = c * d;
        f *= step;
        // For whole ν the fraction ends.
        if a == 0.0 || (step - 1.0).norm() < 1e-15 {
            break;
        }
    }
    i + i / rho * f
}

/// What element `e`, with `pivot` at its near interface (none: ψ = 0 there), adds to the pivot at its far one.
/// `inward`: the near interface is the outer one.
fn across(chain: &Chain, e: usize, energy: C, pivot: Option<C>, inward: bool) -> C {
    let range = e * chain.modes..(e + 1) * chain.modes;
    let lambda = &chain.lambda[range.clone()];
    let (mut near, mut far) = (&chain.to_left[range.clone()], &chain.to_right[range]);
    if inward {
        std::mem::swap(&mut near, &mut far);
    }
    let kept = close_to_mode(lambda, energy.re);
    let zero = C::new(0.0, 0.0);
    let (mut nn, mut nf, mut ff) = (zero, zero, zero);
    for (k, ((&value, &n), &f)) in lambda.iter().zip(near).zip(far).enumerate() {
        if Some(k) != kept {
            let d = (C::from(value) - energy).inv();
            nn += d * (n * n);
            nf += d * (n * f);
            ff += d * (f * f);
        }
    }
    let direct = C::from(chain.beta[e]) - nf;
    let eliminated = pivot.map(|p| (p - nn).inv());
    let mut added = -ff - eliminated.map_or(zero, |inverse| direct * direct * inverse);
    if let Some(k) = kept {
        let mut own = C::from(lambda[k]) - energy;
        let mut coupling = C::from(far[k]);
        if let Some(inverse) = eliminated {
            own -= inverse * (near[k] * near[k]);
            coupling -= direct * inverse * near[k];
        }
        added -= coupling * coupling / own;
    }
    added
}

/// The pivot of (H − E) at interface `at` after everything else is eliminated: zero at an eigenvalue.
///
/// ψ = 0 at the inner end; ψ′/ψ = `outer_slope` (1/bohr) at the outer end.
pub(super) fn pivot_at(chain: &Chain, two_mu: f64, at: usize, energy: C, outer_slope: C) -> C {
    let faces = chain.alpha.len();
    let mut from_left = None;
    let mut added = C::new(0.0, 0.0);
    for e in 0..at {
        added = across(chain, e, energy, from_left, false);
        from_left = Some(C::from(chain.alpha[e + 1]) - energy + added);
    }
    let mut pivot = C::from(chain.alpha[at]) - energy + added;
    let end = faces - 1;
    let mut from_right = C::from(chain.alpha[end]) - energy - outer_slope / (two_mu * chain.mass[end]);
    for e in (at..end).rev() {
        added = across(chain, e, energy, Some(from_right), true);
        from_right = C::from(chain.alpha[e]) - energy + added;
    }
    pivot += added;
    pivot
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Closed forms: ν = 0 is e^{iρ}, ν = 1 is e^{iρ}(1 + i/ρ), ν = 2 is e^{iρ}(1 + 3i/ρ − 3/ρ²).
    #[test]
    fn outgoing_waves_of_low_order_have_their_closed_forms() {
        let i = C::i();
        for rho in [C::new(3.0, 0.0), C::new(7.0, -0.4), C::new(40.0, 1.0)] {
            let one = i - i / (rho * (rho + i));
            let (value, slope) =
                (1.0 + 3.0 * i / rho - 3.0 / (rho * rho), -3.0 * i / (rho * rho) + 6.0 / rho.powi(3));
            let two = i + slope / value;
            for (nu, want) in [(0.0, i), (1.0, one), (2.0, two)] {
                assert!((outgoing_slope(nu, rho) - want).norm() < 1e-14, "{nu} {rho}");
            }
        }
        // The Wronskian of h and its conjugate fixes the imaginary part: Im = 1/|h|²; ν = 1 at ρ = 3.
        let slope = outgoing_slope(1.0, C::new(3.0, 0.0));
        assert!((slope.im - 1.0 / (1.0 + 1.0 / 9.0)).abs() < 1e-14);
    }
}
