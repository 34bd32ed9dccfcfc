//! The curve through the scan's points: base function, spline of the rest, tails.

mod above_minimum;
mod other_tails;
mod variants;

use super::Potential;
use super::interpolant::Interpolant;
use super::local_polynomial::LocalPolynomial;
pub use super::tails::{InnerTail, OuterTail};
use super::tails::{Joint, OuterForm};
use crate::estimate::Estimate;
use serde::{Deserialize, Serialize};
use std::sync::Arc;

pub use above_minimum::AboveMinimum;
pub(crate) use other_tails::{OtherTail, Side};
pub use variants::{CurveVariants, SeenCurve};

/// How the curve runs through the points.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum CurveKind {
    /// Morse base plus quintic spline of the rest (few points: the polynomial through all).
    #[default]
    Default,
    /// Quintic not-a-knot spline without base.
    Quintic,
    /// Cubic not-a-knot spline.
    Cubic,
}

/// Abscissa of the spline.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum SplineVariable {
    /// The bond length.
    R,
    /// y = (r − r_b)/(r + r_b).
    Y,
}

/// Choices about the curve and its tails.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct CurveSettings {
    /// Kind of curve.
    pub kind: CurveKind,
    /// Spline variable; none: by leave-one-out.
    pub variable: Option<SplineVariable>,
    /// Energy of the separated atoms, in the energy column's unit and scale.
    pub asymptote: Option<f64>,
    /// Leading inverse power n of the tail V_inf − C_n/rⁿ.
    pub tail_power: Option<u32>,
    /// Fit C_n, and V_inf where `asymptote` does not give it, to this many outermost points; needs `tail_power`.
    pub tail_fit_points: Option<usize>,
}

/// Where a function has its minimum and what it is like there, in atomic units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LocalDerivatives {
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Energy there in hartree, counted from the lowest point.
    pub v_e_hartree: f64,
    /// V″ in hartree/bohr².
    pub second_hartree: f64,
    /// V‴ in hartree/bohr³.
    pub third_hartree: f64,
    /// V⁗ in hartree/bohr⁴; NaN where the function has none.
    pub fourth_hartree: f64,
}

impl LocalDerivatives {
    /// From the position and `[V, V′, V″, V‴, V⁗]` there.
    pub(crate) const fn new(r_e_bohr: f64, d: [f64; 5]) -> Self {
        Self { r_e_bohr, v_e_hartree: d[0], second_hartree: d[2], third_hartree: d[3], fourth_hartree: d[4] }
    }

    /// a1 and a2 of V − V_e = a0 ξ² (1 + a1 ξ + a2 ξ² ...), ξ = x/r_e [Dunham 1932]; a2 is NaN without V⁗.
    pub fn dunham_a1_a2(&self) -> (f64, f64) {
        let r = self.r_e_bohr;
        (
            self.third_hartree * r / (3.0 * self.second_hartree),
            self.fourth_hartree * r * r / (12.0 * self.second_hartree),
        )
    }
}

/// The curve of a study with what is derived from it near its minimum.
///
/// Evaluation costs one exponential, one Horner scheme and a table look-up. Energies are kept from
/// the lowest point; [`ScanCurve::above_minimum`] gives them without the rounding of a large total energy.
#[derive(Clone, Debug)]
pub struct ScanCurve {
    /// Name of the kind as in the findings format, e.g. `morse+quintic`.
    pub kind: String,
    /// Abscissa of the spline, where there is one.
    pub variable: Option<SplineVariable>,
    /// First and last scanned point in use, in bohr.
    pub scan_range_bohr: (f64, f64),
    /// Position of the minimum in bohr.
    pub r_e_bohr: Estimate,
    /// V(r_e) in hartree.
    pub v_e_hartree: Estimate,
    /// V″, V‴, V⁗ at r_e in hartree/bohrⁿ; none where the curve has no such derivative.
    pub derivatives_hartree: [Option<Estimate>; 3],
    /// Inner tail.
    pub inner: InnerTail,
    /// Outer tail.
    pub outer: OuterTail,
    /// The curve's own minimum.
    pub local: LocalDerivatives,
    /// The same minimum by every other admissible interpolation: half the spread of a quantity over
    /// these and `local` is its interpolation error.
    pub alternatives: Vec<LocalDerivatives>,
    /// The minimum after each energy near it was changed by the noise; empty where no noise is known.
    pub noise_variants: Vec<LocalDerivatives>,
    /// Estimated noise of the energies in hartree, where it can be told from curvature.
    pub noise_hartree: Option<f64>,
    /// The bond lengths the curve runs through, ascending, in bohr.
    pub points_bohr: Arc<[f64]>,
    without_doubtful: Option<WithoutDoubtful>,
    body: Body,
}

/// The curve without doubtful points.
#[derive(Clone, Debug)]
struct WithoutDoubtful {
    /// Its minimum, on the zero of the whole curve.
    local: LocalDerivatives,
    interpolant: Arc<Interpolant>,
    /// Energy of its minimum on its own zero.
    v_e: f64,
    range: (f64, f64),
}

/// What is evaluated. Energies count from `zero`.
#[derive(Clone, Debug)]
struct Body {
    interpolant: Arc<Interpolant>,
    /// The interpolation in the other variable.
    other: Arc<Interpolant>,
    other_minimum: Option<LocalDerivatives>,
    polynomials: Arc<[LocalPolynomial]>,
    zero: f64,
    v_e: f64,
    inner: InnerTail,
    inner_joint: Joint,
    outer: OuterForm,
    outer_joint: Joint,
    outer_assumed: bool,
    breakpoints: Arc<Vec<f64>>,
}

/// Everything a curve is put together from.
pub(crate) struct CurveParts {
    pub kind: String,
    pub variable: Option<SplineVariable>,
    pub scan_range: (f64, f64),
    pub interpolant: Arc<Interpolant>,
    pub zero: f64,
    pub local: LocalDerivatives,
    pub inner: InnerTail,
    pub inner_joint: Joint,
    pub outer: OuterForm,
    pub outer_joint: Joint,
    pub outer_assumed: bool,
    pub alternatives: Vec<LocalDerivatives>,
    pub other: Arc<Interpolant>,
    pub other_minimum: Option<LocalDerivatives>,
    pub polynomials: Arc<[LocalPolynomial]>,
    pub points: Arc<[f64]>,
    pub noise_variants: Vec<LocalDerivatives>,
    pub noise_hartree: Option<f64>,
}

impl ScanCurve {
    pub(crate) fn assemble(parts: CurveParts) -> Self {
        let (from, to) = (parts.inner_joint.r, parts.outer_joint.r);
        let mut breakpoints = vec![from];
        // The margin keeps out the end knots themselves, which a change of variable rounds.
        let inside = |r: &f64| *r > from * (1.0 + 1e-9) && *r < to * (1.0 - 1e-9);
        breakpoints.extend(parts.interpolant.knots_bohr().into_iter().filter(inside));
        breakpoints.push(to);
        let mut curve = Self {
            kind: parts.kind,
            variable: parts.variable,
            scan_range_bohr: parts.scan_range,
            r_e_bohr: Estimate::exact(0.0),
            v_e_hartree: Estimate::exact(0.0),
            derivatives_hartree: [None; 3],
            inner: parts.inner,
            outer: parts.outer.shown(parts.outer_joint, parts.zero, parts.outer_assumed),
            local: parts.local,
            alternatives: parts.alternatives,
            noise_variants: parts.noise_variants,
            noise_hartree: parts.noise_hartree,
            points_bohr: parts.points,
            without_doubtful: None,
            body: Body {
                interpolant: parts.interpolant,
                other: parts.other,
                other_minimum: parts.other_minimum,
                polynomials: parts.polynomials,
                zero: parts.zero,
                v_e: parts.local.v_e_hartree,
                inner: parts.inner,
                inner_joint: parts.inner_joint,
                outer: parts.outer,
                outer_joint: parts.outer_joint,
                outer_assumed: parts.outer_assumed,
                breakpoints: Arc::new(breakpoints),
            },
        };
        curve.set_estimates();
        curve
    }

    fn set_estimates(&mut self) {
        let curve = &*self;
        let derivative = |f: fn(&LocalDerivatives) -> f64| {
            let estimate = curve.estimate(|local| Some(f(local)));
            estimate.filter(|e| e.value.is_finite())
        };
        let derivatives = [
            derivative(|l| l.second_hartree),
            derivative(|l| l.third_hartree),
            derivative(|l| l.fourth_hartree),
        ];
        let r_e = derivative(|l| l.r_e_bohr).unwrap_or(Estimate::exact(self.local.r_e_bohr));
        let v_e = derivative(|l| l.v_e_hartree).unwrap_or(Estimate::exact(self.local.v_e_hartree));
        self.derivatives_hartree = derivatives;
        self.r_e_bohr = r_e;
        self.v_e_hartree = Estimate { value: v_e.value + self.body.zero, ..v_e };
    }

    /// Takes the curve built without points that the inspection found off the curve as what may be true too: the
    /// whole difference to it enters every error.
    pub(crate) fn set_without_doubtful(&mut self, without: &Self) {
        let local = LocalDerivatives {
            v_e_hartree: without.local.v_e_hartree + without.body.zero - self.body.zero,
            ..without.local
        };
        self.without_doubtful = Some(WithoutDoubtful {
            local,
            interpolant: Arc::clone(&without.body.interpolant),
            v_e: without.local.v_e_hartree,
            range: without.scan_range_bohr,
        });
        self.set_estimates();
    }

    /// Any quantity of the minimum with its standard error: half the spread over the admissible
    /// interpolations, the whole difference to the curve without points found off it, and the noise of the energies
    /// propagated linearly. None where the curve has no
    /// such quantity; an alternative that has none does not count.
    pub fn estimate(&self, quantity: impl Fn(&LocalDerivatives) -> Option<f64>) -> Option<Estimate> {
        let value = quantity(&self.local).filter(|v| v.is_finite())?;
        let (mut low, mut high, mut known) = (value, value, false);
        for other in self.alternatives.iter().filter_map(&quantity).filter(|v| v.is_finite()) {
            (low, high, known) = (low.min(other), high.max(other), true);
        }
        let shifts = self.noise_variants.iter().filter_map(&quantity).map(|v| v - value);
        let variance: f64 = shifts.filter(|s| s.is_finite()).map(|s| s * s).sum();
        let noise = (!self.noise_variants.is_empty()).then(|| variance.sqrt());
        let doubt = self.without_doubtful.as_ref().and_then(|w| quantity(&w.local)).map(|v| v - value);
        let doubt = doubt.filter(|d| d.is_finite());
        let spread = known.then_some(0.5 * (high - low));
        let interpolation = match (spread, doubt) {
            (None, None) => None,
            (spread, doubt) => Some(spread.unwrap_or(0.0).hypot(doubt.unwrap_or(0.0))),
        };
        Some(Estimate::from_spread_and_noise(value, interpolation, noise))
    }

    /// By how much the other admissible interpolations (the spline in the other variable, the local polynomials
    /// inside their window) depart from this curve at the bond lengths given, in hartree, each counted from its own
    /// minimum; zero outside the scan. Half the spread, averaged over a level, is the level's interpolation error.
    pub fn other_interpolations_hartree(&self, r_bohr: &[f64]) -> Vec<Vec<f64>> {
        let (from, to) = self.scan_range_bohr;
        let inside = |r: f64| (from..=to).contains(&r);
        let own = |r: f64| self.body.interpolant.energy(r) - self.body.v_e;
        let mut found = Vec::new();
        if let Some(minimum) = &self.body.other_minimum {
            let other = |r: f64| self.body.other.energy(r) - minimum.v_e_hartree - own(r);
            found.push(r_bohr.iter().map(|&r| if inside(r) { other(r) } else { 0.0 }).collect());
        }
        for polynomial in self.body.polynomials.iter() {
            let other = |r: f64| polynomial.above_minimum(r).map_or(0.0, |v| v - own(r));
            found.push(r_bohr.iter().map(|&r| if inside(r) { other(r) } else { 0.0 }).collect());
        }
        found
    }

    /// The same for the curve without points found off it; none where there are no such points.
    pub fn without_doubtful_hartree(&self, r_bohr: &[f64]) -> Option<Vec<f64>> {
        let without = self.without_doubtful.as_ref()?;
        let (from, to) =
            (without.range.0.max(self.body.inner_joint.r), without.range.1.min(self.body.outer_joint.r));
        let change = |&r: &f64| {
            if !(from..=to).contains(&r) {
                return 0.0;
            }
            without.interpolant.energy(r) - without.v_e - (self.body.interpolant.energy(r) - self.body.v_e)
        };
        Some(r_bohr.iter().map(change).collect())
    }

    /// Where the curve ends at this side, and the last step between points before it, in bohr.
    pub(crate) fn end_and_step_bohr(&self, side: Side) -> (f64, f64) {
        let points = &self.points_bohr;
        let n = points.len();
        match side {
            Side::Inner => (self.body.inner_joint.r, points[1] - points[0]),
            Side::Outer => (self.body.outer_joint.r, points[n - 1] - points[n - 2]),
        }
    }

    /// Whether the curve ends in a hard wall at this side.
    pub(crate) fn ends_in_wall(&self, side: Side) -> bool {
        match side {
            Side::Inner => self.inner == InnerTail::HardWall,
            Side::Outer => self.body.outer == OuterForm::Wall,
        }
    }

    /// Height of the curve above V_e at its end at this side, in hartree.
    pub(crate) fn end_height_hartree(&self, side: Side) -> f64 {
        let joint = if side == Side::Inner { self.body.inner_joint } else { self.body.outer_joint };
        joint.energy - self.body.v_e
    }

    /// The same curve with energies counted from V_e, free of the rounding of large total energies.
    /// Reach and levels are best computed from this.
    pub const fn above_minimum(&self) -> AboveMinimum<'_> {
        AboveMinimum { curve: self }
    }

    /// V_inf in hartree where it is known, not assumed.
    pub const fn asymptote_hartree(&self) -> Option<f64> {
        match self.outer {
            OuterTail::InversePower { asymptote_hartree, assumed: false, .. }
            | OuterTail::Exponential { asymptote_hartree, assumed: false, .. } => Some(asymptote_hartree),
            _ => None,
        }
    }

    /// Height of V_inf, known or assumed, above V_e in hartree; none for a hard wall.
    pub fn tail_depth_hartree(&self) -> Option<f64> {
        self.body.outer.gap().map(|gap| self.body.outer_joint.energy + gap - self.body.v_e)
    }

    /// The same curve with V_inf moved by `shift_hartree`; none where there is no outer tail.
    ///
    /// For the test whether a level leans on the tail; the spline is not fitted anew. A V_inf that comes
    /// to lie at or below the last point gives a hard wall.
    pub fn with_asymptote_shifted(&self, shift_hartree: f64) -> Option<Self> {
        let gap = self.body.outer.gap()? + shift_hartree;
        Some(self.with_outer(self.body.outer.with_gap(gap, self.body.outer_joint.slope)))
    }

    /// The same curve with C_n multiplied by `factor`; none where the tail is no inverse power.
    ///
    /// V_inf − C_n [f (1/r)ⁿ − (f − 1) r_last²/rⁿ⁺²]: far out C_n is f times as large, at the last point the
    /// curve keeps its value, so that a level solver meets no jump.
    pub fn with_c_n_scaled(&self, factor: f64) -> Option<Self> {
        match self.body.outer {
            OuterForm::Power { n, gap, scale } => {
                Some(self.with_outer(OuterForm::Power { n, gap, scale: scale * factor }))
            }
            _ => None,
        }
    }

    fn with_outer(&self, outer: OuterForm) -> Self {
        let mut curve = self.clone();
        curve.outer = outer.shown(self.body.outer_joint, self.body.zero, self.body.outer_assumed);
        curve.body.outer = outer;
        curve
    }
}

impl Body {
    fn energy(&self, r: f64) -> f64 {
        if r < self.inner_joint.r || r > self.outer_joint.r {
            return self.derivatives(r)[0];
        }
        self.interpolant.energy(r)
    }

    fn derivatives(&self, r: f64) -> [f64; 5] {
        if r < self.inner_joint.r {
            self.inner.derivatives(self.inner_joint, self.v_e, r)
        } else if r > self.outer_joint.r {
            self.outer.derivatives(self.outer_joint, r)
        } else {
            self.interpolant.derivatives(r)
        }
    }

    fn range(&self) -> (f64, f64) {
        let from = match self.inner {
            InnerTail::Exponential { .. } => 0.0,
            InnerTail::HardWall => self.inner_joint.r,
        };
        let to = if self.outer == OuterForm::Wall { self.outer_joint.r } else { f64::INFINITY };
        (from, to)
    }

    fn limit(&self) -> f64 {
        let outside = self.outer_joint.energy + self.outer.gap().unwrap_or(0.0);
        match self.inner {
            InnerTail::Exponential { .. } => outside,
            InnerTail::HardWall => outside.min(self.inner_joint.energy),
        }
    }
}

impl Potential for ScanCurve {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let mut d = self.body.derivatives(r_bohr);
        d[0] += self.body.zero;
        d
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        self.body.energy(r_bohr) + self.body.zero
    }
    fn range_bohr(&self) -> (f64, f64) {
        self.body.range()
    }
    fn limit_hartree(&self) -> f64 {
        self.body.limit() + self.body.zero
    }
    fn minimum_bohr(&self) -> f64 {
        self.local.r_e_bohr
    }
    fn breakpoints_bohr(&self) -> &[f64] {
        &self.body.breakpoints
    }
}
