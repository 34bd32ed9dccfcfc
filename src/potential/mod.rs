//! Potential-energy functions of one bond length: the trait all of them share, the fitted families
//! and the curve through the scan's points.
//!
//! A further family is one file here, its `mod` line, and one line of the registry below.

pub mod curve;
mod extended_morse;
mod extended_rydberg;
mod harmonic;
mod hulburt_hirschfelder;
pub(crate) mod interpolant;
mod jet;
pub(crate) mod local_polynomial;
mod morse;
mod parametric;
mod polynomial;
mod roots;
mod rydberg;
pub(crate) mod spline;
pub(crate) mod tail_fit;
pub(crate) mod tails;
mod varshni;
mod wells;

pub use extended_morse::ExtendedMorse;
pub use extended_rydberg::ExtendedRydberg;
pub use harmonic::Harmonic;
pub use hulburt_hirschfelder::HulburtHirschfelder;
pub use morse::Morse;
#[cfg(test)]
pub(crate) use parametric::check;
pub(crate) use parametric::named;
pub use parametric::{LocalShape, ModelFault, ParameterUnit, Parametric};
pub use polynomial::{Polynomial, Variable};
pub(crate) use roots::real_roots;
pub use rydberg::Rydberg;
pub use varshni::Varshni;

use serde::{Deserialize, Serialize};

/// A potential-energy function V(r) on a range of bond lengths.
///
/// Everything that asks for levels, reach or a picture talks to this trait.
pub trait Potential: Sync {
    /// V and its first four derivatives at `r_bohr`: `[V, V′, V″, V‴, V⁗]` in hartree/bohrⁿ.
    ///
    /// Finite for every r inside [`Potential::range_bohr`]; a derivative that the function does not
    /// have (V⁗ of a cubic spline) is NaN.
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5];

    /// V(r) in hartree.
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        self.derivatives_hartree(r_bohr)[0]
    }

    /// Where the function is defined: (from, to) in bohr, `to` may be infinite. Outside there is a hard wall.
    fn range_bohr(&self) -> (f64, f64);

    /// The energy in hartree below which levels are bound: the asymptote, the barrier top, or, where
    /// the function ends in a wall, V at that wall. Infinite for functions that rise without limit.
    fn limit_hartree(&self) -> f64;

    /// Position of the minimum of the well the levels live in, in bohr.
    fn minimum_bohr(&self) -> f64;

    /// Bond lengths (bohr, ascending) at which some derivative jumps: spline knots, joints of tails.
    fn breakpoints_bohr(&self) -> &[f64] {
        &[]
    }
}

/// Writes the two enums and their dispatch from the one list of families.
macro_rules! registry {
    ($($(#[$doc:meta])* $name:ident as $word:literal, $title:literal, $running:literal,)*) => {
        /// A family of model functions.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
        pub enum Family {
            $($(#[$doc])* #[serde(rename = $word)] $name,)*
        }

        impl Family {
            /// All families, in the order in which they are offered.
            pub const ALL: &[Self] = &[$(Self::$name),*];

            /// The word used in findings and settings.
            pub const fn word(self) -> &'static str {
                match self { $(Self::$name => $word,)* }
            }

            /// The name people read.
            pub const fn title(self) -> &'static str {
                match self { $(Self::$name => $title,)* }
            }

            /// The same in running text: names of people keep their capital.
            pub const fn running_name(self) -> &'static str {
                match self { $(Self::$name => $running,)* }
            }

            /// Starting values for a scan of this shape, the likeliest first.
            pub fn starts(self, shape: &LocalShape) -> Vec<Model> {
                match self { $(Self::$name => $name::starts(shape).into_iter().map(Model::from).collect(),)* }
            }
        }

        /// A fitted function of any family.
        #[derive(Clone, Debug, PartialEq)]
        pub enum Model {
            $($(#[$doc])* $name($name),)*
        }

        impl Model {
            /// Its family.
            pub const fn family(&self) -> Family {
                match self { $(Self::$name(_) => Family::$name,)* }
            }

            /// The function with its parameters.
            pub fn as_parametric(&self) -> &dyn Parametric {
                match self { $(Self::$name(model) => model,)* }
            }

            /// Puts parameters in place of the function's own, in the order of [`Parametric::values`].
            pub fn set_values(&mut self, values: &[f64]) {
                let model: &mut dyn Parametric = match self { $(Self::$name(model) => model,)* };
                model.set_values(values);
            }

            /// Adds `energy_hartree` to the energy of the minimum, which is every family's first parameter.
            pub fn shift_energy_hartree(&mut self, energy_hartree: f64) {
                let model: &mut dyn Parametric = match self { $(Self::$name(model) => model,)* };
                let mut values = model.values();
                values[0] += energy_hartree;
                model.set_values(&values);
            }
        }

        $(impl From<$name> for Model {
            fn from(model: $name) -> Self {
                Self::$name(model)
            }
        })*

        impl Potential for Model {
            fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
                match self { $(Self::$name(model) => model.derivatives_hartree(r_bohr),)* }
            }
            fn energy_hartree(&self, r_bohr: f64) -> f64 {
                match self { $(Self::$name(model) => model.energy_hartree(r_bohr),)* }
            }
            fn range_bohr(&self) -> (f64, f64) {
                match self { $(Self::$name(model) => model.range_bohr(),)* }
            }
            fn limit_hartree(&self) -> f64 {
                match self { $(Self::$name(model) => model.limit_hartree(),)* }
            }
            fn minimum_bohr(&self) -> f64 {
                match self { $(Self::$name(model) => model.minimum_bohr(),)* }
            }
        }
    };
}

registry! {
    /// V = e_min + k x²/2.
    Harmonic as "harmonic", "Harmonic", "harmonic",
    /// A polynomial about its own minimum, no linear term.
    Polynomial as "polynomial", "Polynomial", "polynomial",
    /// Morse [1929].
    Morse as "morse", "Morse", "Morse",
    /// Extended Morse, β a polynomial in y_p [Lee et al. 1999].
    ExtendedMorse as "extended_morse", "Extended Morse", "extended Morse",
    /// Varshni [1957].
    Varshni as "varshni", "Varshni", "Varshni",
    /// Rydberg [1931], one range parameter.
    Rydberg as "rydberg", "Rydberg", "Rydberg",
    /// Extended Rydberg [Murrell & Sorbie 1974].
    ExtendedRydberg as "extended_rydberg", "Extended Rydberg", "extended Rydberg",
    /// Hulburt-Hirschfelder [1941, erratum 1961].
    HulburtHirschfelder as "hulburt_hirschfelder", "Hulburt-Hirschfelder", "Hulburt-Hirschfelder",
}

impl Parametric for Model {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        self.as_parametric().parameter_names()
    }
    fn values(&self) -> Vec<f64> {
        self.as_parametric().values()
    }
    fn set_values(&mut self, values: &[f64]) {
        Self::set_values(self, values);
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        self.as_parametric().gradient(r_bohr, gradient)
    }
    fn fault(&self) -> Option<ModelFault> {
        self.as_parametric().fault()
    }
    /// The start of the simplest family: what family to take is not the shape's to say.
    fn starts(shape: &LocalShape) -> Vec<Self> {
        Harmonic::starts(shape).into_iter().map(Self::from).collect()
    }
}

impl Model {
    /// Closed-form levels in hartree above the model's own minimum, v ascending, for a reduced mass in
    /// electron masses; none where the family has no closed form. At most `count` for a harmonic function.
    pub fn closed_form_levels_hartree(&self, reduced_mass_me: f64, count: usize) -> Option<Vec<f64>> {
        match self {
            Self::Harmonic(model) => Some(model.levels_hartree(reduced_mass_me, count)),
            Self::Morse(model) => Some(model.levels_hartree(reduced_mass_me, count)),
            _ => None,
        }
    }
}
