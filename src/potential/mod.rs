//! Potential-energy functions of one bond length: the trait all of them share, the fitted families
//! and the curve through the scan's points.

pub mod curve;

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

/// A fitted function of any family.
#[derive(Clone, Debug)]
pub enum Model {}

impl Potential for Model {
    fn derivatives_hartree(&self, _r_bohr: f64) -> [f64; 5] {
        match *self {}
    }
    fn range_bohr(&self) -> (f64, f64) {
        match *self {}
    }
    fn limit_hartree(&self) -> f64 {
        match *self {}
    }
    fn minimum_bohr(&self) -> f64 {
        match *self {}
    }
}
