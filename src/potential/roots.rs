//! Real roots of a polynomial in an interval.

/// Σ c_n uⁿ.
pub(crate) fn value(coefficients: &[f64], u: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, &c| sum * u + c)
}

/// The coefficients of the derivative.
pub(crate) fn derivative(coefficients: &[f64]) -> Vec<f64> {
    coefficients.iter().enumerate().skip(1).map(|(n, &c)| n as f64 * c).collect()
}

/// All real roots of odd multiplicity in [`from`, `to`], ascending.
///
/// Between two neighbouring roots of the derivative a polynomial is monotonic, so each change of sign
/// there encloses exactly one root; it is bisected to the last digit. `from` and `to` are finite.
pub(crate) fn real_roots(coefficients: &[f64], from: f64, to: f64) -> Vec<f64> {
    let degree = coefficients.iter().rposition(|&c| c != 0.0).unwrap_or(0);
    if degree == 0 || coefficients.iter().any(|c| !c.is_finite()) {
        return Vec::new();
    }
    let coefficients = &coefficients[..=degree];
    let mut edges = vec![from];
    edges.extend(real_roots(&derivative(coefficients), from, to));
    edges.push(to);
    let mut roots: Vec<f64> = Vec::new();
    for pair in edges.windows(2) {
        let (mut a, mut b) = (pair[0], pair[1]);
        let (at_a, at_b) = (value(coefficients, a), value(coefficients, b));
        if at_a == 0.0 {
            if roots.last() != Some(&a) {
                roots.push(a);
            }
            continue;
        }
        if at_b == 0.0 || (at_a > 0.0) == (at_b > 0.0) {
            continue;
        }
        loop {
            let middle = 0.5 * (a + b);
            if middle <= a || middle >= b {
                break;
            }
            if (value(coefficients, middle) > 0.0) == (at_a > 0.0) {
                a = middle;
            } else {
                b = middle;
            }
        }
        roots.push(a);
    }
    if value(coefficients, to) == 0.0 {
        roots.push(to);
    }
    roots
}

/// A bound on the magnitude of every root [Cauchy]: 1 + max |c_n/c_last|.
pub(crate) fn root_bound(coefficients: &[f64]) -> f64 {
    let Some(degree) = coefficients.iter().rposition(|&c| c != 0.0) else { return 1.0 };
    let last = coefficients[degree];
    1.0 + coefficients[..degree].iter().fold(0.0, |m: f64, c| m.max((c / last).abs()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_every_simple_root_once() {
        // (u − 1)(u − 2)(u + 3) = u³ − 7u + 6
        let roots = real_roots(&[6.0, -7.0, 0.0, 1.0], -10.0, 10.0);
        assert_eq!(roots.len(), 3);
        assert!(roots.iter().zip([-3.0, 1.0, 2.0]).all(|(a, b)| (a - b).abs() < 1e-14));
        assert_eq!(real_roots(&[6.0, -7.0, 0.0, 1.0], 1.5, 10.0).len(), 1);
        assert!(real_roots(&[1.0, 0.0, 1.0], -5.0, 5.0).is_empty());
        assert!(real_roots(&[2.0], -5.0, 5.0).is_empty());
        assert!(real_roots(&[f64::NAN, 1.0], -5.0, 5.0).is_empty());
        assert!(real_roots(&[], -5.0, 5.0).is_empty());
        assert_eq!(real_roots(&[0.0, 1.0], 0.0, 5.0), [0.0]);
        assert!(root_bound(&[6.0, -7.0, 0.0, 1.0]) >= 3.0);
    }
}
