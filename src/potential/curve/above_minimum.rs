//! A curve with its energies counted from its minimum, as the radial problem wants it.

use super::ScanCurve;
use crate::potential::Potential;

/// A scan's curve with energies counted from V_e.
#[derive(Clone, Copy, Debug)]
pub struct AboveMinimum<'a> {
    pub(super) curve: &'a ScanCurve,
}

impl Potential for AboveMinimum<'_> {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let mut d = self.curve.body.derivatives(r_bohr);
        d[0] -= self.curve.body.v_e;
        d
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        self.curve.body.energy(r_bohr) - self.curve.body.v_e
    }
    fn range_bohr(&self) -> (f64, f64) {
        self.curve.body.range()
    }
    fn limit_hartree(&self) -> f64 {
        self.curve.body.limit() - self.curve.body.v_e
    }
    fn minimum_bohr(&self) -> f64 {
        self.curve.local.r_e_bohr
    }
    fn breakpoints_bohr(&self) -> &[f64] {
        &self.curve.body.breakpoints
    }
}
