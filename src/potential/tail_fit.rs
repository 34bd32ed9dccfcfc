//! V_inf and C_n of an inverse-power tail from the outermost points.

use super::tails::{Joint, OuterForm};

/// What the outermost points say about V_inf − C_n/rⁿ; energies on the curve's inner zero.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct TailFit {
    /// V_inf in hartree.
    pub asymptote: f64,
    /// C_n/r_lastⁿ in hartree.
    pub share: f64,
    /// Root mean square deviation of the points in hartree.
    pub rms: f64,
}

/// Least squares of V = V_inf − C_n/rⁿ over all points given, C_n alone where V_inf is given.
///
/// None with fewer points than unknowns or where C_n comes out not positive.
pub(crate) fn fit_tail(r: &[f64], e: &[f64], n: u32, asymptote: Option<f64>) -> Option<TailFit> {
    let (&r_last, &e_last) = r.last().zip(e.last())?;
    // Relative to the last point powers and energies are small numbers.
    let u: Vec<f64> = r.iter().map(|r| (r_last / r).powf(f64::from(n))).collect();
    let y: Vec<f64> = e.iter().map(|e| e - e_last).collect();
    let count = u.len() as f64;
    let (above, share) = match asymptote {
        Some(v) => {
            let above = v - e_last;
            let uu: f64 = u.iter().map(|u| u * u).sum();
            (above, u.iter().zip(&y).map(|(u, y)| u * (above - y)).sum::<f64>() / uu)
        }
        None if u.len() < 2 => return None,
        None => {
            let (mean_u, mean_y) = (u.iter().sum::<f64>() / count, y.iter().sum::<f64>() / count);
            let uu: f64 = u.iter().map(|u| (u - mean_u).powi(2)).sum();
            let share = -u.iter().zip(&y).map(|(u, y)| (u - mean_u) * (y - mean_y)).sum::<f64>() / uu;
            (mean_y + share * mean_u, share)
        }
    };
    let square: f64 = u.iter().zip(&y).map(|(u, y)| (above - share * u - y).powi(2)).sum();
    (share > 0.0 && share.is_finite() && above.is_finite()).then(|| TailFit {
        asymptote: e_last + above,
        share,
        rms: (square / count).sqrt(),
    })
}

impl TailFit {
    /// The tail from the joint on, C_n as fitted far out and the curve's own value at the joint; none where V_inf does
    /// not lie above it.
    pub(crate) fn form(&self, joint: Joint, n: u32) -> Option<OuterForm> {
        let gap = self.asymptote - joint.energy;
        (gap > 0.0).then(|| OuterForm::Power { n, gap, scale: self.share / gap })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// An exact tail gives back V_inf and C_n, with V_inf known or not (invented numbers).
    #[test]
    fn an_exact_tail_comes_back() {
        let (v_inf, c_n) = (0.17, 6.5);
        let r: Vec<f64> = (0..6).map(|i| 7.0 + 0.8 * f64::from(i)).collect();
        let e: Vec<f64> = r.iter().map(|r| v_inf - c_n / r.powi(6)).collect();
        let (last, energy) = (r[5], e[5]);
        for asymptote in [None, Some(v_inf)] {
            let found = fit_tail(&r, &e, 6, asymptote).unwrap();
            assert!((found.asymptote - v_inf).abs() < 1e-14 && found.rms < 1e-15);
            assert!((found.share * last.powi(6) / c_n - 1.0).abs() < 1e-9);
            let form = found.form(Joint { r: last, energy, slope: 0.0 }, 6).unwrap();
            let at = form.derivatives(Joint { r: last, energy, slope: 0.0 }, 20.0)[0];
            assert!((at - (v_inf - c_n / 20f64.powi(6))).abs() < 1e-13);
        }
        let falling: Vec<f64> = e.iter().map(|e| -e).collect();
        assert!(fit_tail(&r, &falling, 6, None).is_none());
        assert!(fit_tail(&r[..1], &e[..1], 6, None).is_none());
    }
}
