//! What a family offers to a fit: its parameters, ∂V/∂p, starting values.

use super::Potential;

/// Unit of a fitted parameter, for the doors; values are kept in atomic units.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ParameterUnit {
    /// A total energy: hartree inside and outside.
    TotalEnergy,
    /// A well depth or coefficient of a dimensionless variable: hartree inside, cm⁻¹ outside.
    Wavenumber,
    /// A length: bohr inside, angstrom outside.
    Length,
    /// A range parameter: 1/bohr inside, 1/angstrom outside.
    InverseLength,
    /// A range parameter of another power: 1/bohrⁿ inside, 1/angstromⁿ outside.
    InverseLengthPower(u32),
    /// A force constant: hartree/bohr² inside, N/m outside.
    ForceConstant,
    /// A coefficient of xⁿ: hartree/bohrⁿ inside, cm⁻¹/angstromⁿ outside.
    Coefficient(u32),
    /// A pure number.
    Dimensionless,
}

/// Why parameter values make no well.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ModelFault {
    /// The force constant is not positive.
    ForceConstant,
    /// The well depth is not positive.
    WellDepth,
    /// The range parameter is not positive.
    RangeParameter,
    /// The bond length of the minimum is not positive.
    BondLength,
}

impl std::fmt::Display for ModelFault {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(match self {
            Self::ForceConstant => "the force constant",
            Self::WellDepth => "the well depth",
            Self::RangeParameter => "the range parameter",
            Self::BondLength => "the bond length of the minimum",
        })
    }
}

impl ModelFault {
    /// `fault` when `value` is not above zero (NaN included).
    pub(crate) fn unless_positive(fault: Self, value: f64) -> Option<Self> {
        if value > 0.0 { None } else { Some(fault) }
    }
}

/// The shape of a scan near its minimum, from which every family takes its starting values.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LocalShape {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// V″(r_e) in hartree/bohr², positive.
    pub second_hartree: f64,
    /// V‴(r_e) in hartree/bohr³.
    pub third_hartree: f64,
    /// V⁗(r_e) in hartree/bohr⁴.
    pub fourth_hartree: f64,
    /// A guess at the well depth in hartree, positive.
    pub depth_hartree: f64,
}

/// A potential with adjustable parameters.
pub trait Parametric: Potential {
    /// Names as in the findings format, and units; the first is `e_min`, the energy of the minimum.
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)>;

    /// The parameters in that order, in atomic units.
    fn values(&self) -> Vec<f64>;

    /// Replaces all parameters; `values` has the length of [`Parametric::values`].
    fn set_values(&mut self, values: &[f64]);

    /// V(r) in hartree; fills `gradient` with ∂V/∂p in atomic units, same order and length.
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64;

    /// What, if anything, keeps these parameters from making a well.
    fn fault(&self) -> Option<ModelFault>;

    /// Starting values, the likeliest first.
    fn starts(shape: &LocalShape) -> Vec<Self>
    where
        Self: Sized;
}

/// Names as owned strings.
pub(crate) fn named(list: &[(&str, ParameterUnit)]) -> Vec<(String, ParameterUnit)> {
    list.iter().map(|&(name, unit)| (name.to_owned(), unit)).collect()
}

/// Checks of a family against differences, for the tests of each family.
#[cfg(test)]
pub(crate) mod check {
    use super::*;

    /// Each derivative against the Richardson-extrapolated central difference of the one below it.
    pub fn derivatives(potential: &dyn Potential, at_bohr: &[f64]) {
        for &r in at_bohr {
            let exact = potential.derivatives_hartree(r);
            assert!((potential.energy_hartree(r) - exact[0]).abs() <= 1e-15 * exact[0].abs().max(1.0));
            for n in 0..4 {
                let difference = |h: f64| {
                    let (above, below) =
                        (potential.derivatives_hartree(r + h), potential.derivatives_hartree(r - h));
                    (above[n] - below[n]) / (2.0 * h)
                };
                let h = 2e-3;
                let want = (4.0 * difference(h / 2.0) - difference(h)) / 3.0;
                let scale = exact.iter().skip(1).fold(1e-3, |m: f64, d| m.max(d.abs()));
                assert!(
                    (exact[n + 1] - want).abs() < 2e-8 * scale,
                    "V^({}) at {r}: {exact:?} against {want}",
                    n + 1
                );
            }
        }
    }

    /// ∂V/∂p against central differences.
    pub fn gradient<P: Parametric + Clone>(model: &P, at_bohr: &[f64]) {
        let values = model.values();
        let mut gradient = vec![0.0; values.len()];
        assert_eq!(model.parameter_names().len(), values.len());
        for &r in at_bohr {
            let energy = model.gradient(r, &mut gradient);
            assert!((energy - model.energy_hartree(r)).abs() < 1e-14);
            for (j, &value) in values.iter().enumerate() {
                let shifted = |h: f64| {
                    let mut changed = values.clone();
                    changed[j] += h;
                    let mut other = model.clone();
                    other.set_values(&changed);
                    other.energy_hartree(r)
                };
                let h = 1e-3 * value.abs().max(0.1);
                let difference = |h: f64| (shifted(h) - shifted(-h)) / (2.0 * h);
                let want = (4.0 * difference(h / 2.0) - difference(h)) / 3.0;
                let scale = gradient[j].abs().max(1e-2);
                assert!(
                    (gradient[j] - want).abs() < 1e-9 * scale,
                    "dV/dp{j} at {r}: {} against {want}",
                    gradient[j]
                );
            }
        }
    }
}
