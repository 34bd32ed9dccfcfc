//! What may lie beyond the ends of a curve: the same curve going on otherwise there.

use super::ScanCurve;
use crate::potential::tails::{InnerTail, Joint, OuterForm};
use crate::potential::{Morse, Potential};

/// One of the two ends of a curve.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Side {
    Inner,
    Outer,
}

#[derive(Clone, Copy, Debug)]
enum OtherForm {
    /// This function, shifted to meet the curve.
    Base(Morse),
    Inner(InnerTail),
    Outer(OuterForm),
}

/// A curve, energies counted from V_e, that goes on otherwise beyond one of its ends.
#[derive(Clone, Copy, Debug)]
pub(crate) struct OtherTail<'a> {
    curve: &'a ScanCurve,
    side: Side,
    form: OtherForm,
}

impl OtherTail<'_> {
    fn joint(&self) -> Joint {
        let body = &self.curve.body;
        if self.side == Side::Inner { body.inner_joint } else { body.outer_joint }
    }

    /// Whether `r_bohr` lies beyond the end at which this differs from the curve.
    pub(crate) fn differs_at(&self, r_bohr: f64) -> bool {
        if self.side == Side::Inner { r_bohr < self.joint().r } else { r_bohr > self.joint().r }
    }
}

impl Potential for OtherTail<'_> {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        if !self.differs_at(r_bohr) {
            return self.curve.above_minimum().derivatives_hartree(r_bohr);
        }
        let (joint, v_e) = (self.joint(), self.curve.body.v_e);
        let mut d = match self.form {
            OtherForm::Base(base) => {
                let mut d = base.derivatives_hartree(r_bohr);
                d[0] += joint.energy - base.energy_hartree(joint.r);
                d
            }
            OtherForm::Inner(tail) => tail.derivatives(joint, v_e, r_bohr),
            OtherForm::Outer(tail) => tail.derivatives(joint, r_bohr),
        };
        d[0] -= v_e;
        d
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        if self.differs_at(r_bohr) {
            self.derivatives_hartree(r_bohr)[0]
        } else {
            self.curve.above_minimum().energy_hartree(r_bohr)
        }
    }
    fn range_bohr(&self) -> (f64, f64) {
        let (from, to) = self.curve.body.range();
        if self.side == Side::Inner { (0.0, to) } else { (from, f64::INFINITY) }
    }
    fn limit_hartree(&self) -> f64 {
        let body = &self.curve.body;
        let (joint, inner_wall) = (self.joint(), self.curve.ends_in_wall(Side::Inner));
        let outside = match self.form {
            _ if self.side == Side::Inner => body.outer_joint.energy + body.outer.gap().unwrap_or(0.0),
            OtherForm::Base(base) => joint.energy + base.limit_hartree() - base.energy_hartree(joint.r),
            OtherForm::Outer(tail) => joint.energy + tail.gap().unwrap_or(0.0),
            OtherForm::Inner(_) => joint.energy,
        };
        let limited = self.side == Side::Outer && inner_wall;
        (if limited { outside.min(body.inner_joint.energy) } else { outside }) - body.v_e
    }
    fn minimum_bohr(&self) -> f64 {
        self.curve.local.r_e_bohr
    }
    fn breakpoints_bohr(&self) -> &[f64] {
        &self.curve.body.breakpoints
    }
}

impl ScanCurve {
    /// Other admissible continuations beyond one end of the curve.
    ///
    /// Inside: the base function goes on, shifted to meet the curve; without a base an exponential with half and with
    /// double the exponent. Outside: towards an assumed limit the base goes on; towards a given limit an exponential
    /// with the base's range parameter (without a base with half and double the exponent, for an inverse power the
    /// exponential in value and slope); at a hard wall the base, else an exponential in value and slope with the range
    /// parameter −V‴/(3V″) of the minimum. None beyond a barrier that lies within the scan, and none where the curve does
    /// not rise at its end.
    pub(crate) fn other_tails(&self, side: Side) -> Vec<OtherTail<'_>> {
        let body = &self.body;
        let base = body.interpolant.recipe().base;
        let forms = match side {
            Side::Inner if body.inner_joint.r > self.scan_range_bohr.0 => Vec::new(),
            Side::Inner => match (base, body.inner) {
                (Some(base), _) => vec![OtherForm::Base(base)],
                (None, InnerTail::Exponential { b_per_bohr: b }) => {
                    let inner = |b_per_bohr| OtherForm::Inner(InnerTail::Exponential { b_per_bohr });
                    vec![inner(0.5 * b), inner(2.0 * b)]
                }
                (None, InnerTail::HardWall) => Vec::new(),
            },
            Side::Outer if body.outer_joint.r < self.scan_range_bohr.1 || body.outer_joint.slope <= 0.0 => {
                Vec::new()
            }
            Side::Outer => self.outer_forms(base),
        };
        forms.into_iter().map(|form| OtherTail { curve: self, side, form }).collect()
    }

    fn outer_forms(&self, base: Option<Morse>) -> Vec<OtherForm> {
        let slope = self.body.outer_joint.slope;
        let outer = |b: f64, gap: f64| OtherForm::Outer(OuterForm::Exponential { b, gap });
        match (self.body.outer, base) {
            (OuterForm::Power { gap, .. }, _) => vec![outer(slope / gap, gap)],
            (OuterForm::Exponential { gap, .. }, Some(base)) if !self.body.outer_assumed => {
                vec![outer(base.a_per_bohr, gap)]
            }
            (OuterForm::Exponential { b, gap }, None) => vec![outer(0.5 * b, gap), outer(2.0 * b, gap)],
            (_, Some(base)) => vec![OtherForm::Base(base)],
            (OuterForm::Wall, None) => {
                let a = -self.local.third_hartree / (3.0 * self.local.second_hartree);
                if a > 0.0 && a.is_finite() { vec![outer(a, slope / a)] } else { Vec::new() }
            }
        }
    }
}
