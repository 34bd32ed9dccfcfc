//! The curve beyond the scanned points. Everything here is a continuation, not data: results that
//! would change with it are said to lean on the tail.

use crate::notice::{Code, Notice};
use crate::units::{to_angstrom, to_per_cm};

/// The inner tail.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum InnerTail {
    /// V_e + (V_1 − V_e) exp(−b (r − r_1)).
    Exponential {
        /// b in 1/bohr.
        b_per_bohr: f64,
    },
    /// A hard wall at the first point, or at the first maximum inside r_e.
    HardWall,
}

/// The outer tail.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum OuterTail {
    /// V_inf − C_n/rⁿ.
    InversePower {
        /// n.
        n: u32,
        /// C_n in hartree bohrⁿ.
        c_n_hartree_bohr_n: f64,
        /// V_inf in hartree.
        asymptote_hartree: f64,
        /// Whether V_inf is the program's assumption.
        assumed: bool,
    },
    /// V_inf − (V_inf − V_last) exp(−b (r − r_last)).
    Exponential {
        /// b in 1/bohr.
        b_per_bohr: f64,
        /// V_inf in hartree.
        asymptote_hartree: f64,
        /// Whether V_inf is the program's assumption.
        assumed: bool,
    },
    /// A hard wall at the last point, or at the first maximum beyond r_e.
    HardWall {
        /// Where, in bohr.
        r_bohr: f64,
    },
}

/// Where a tail begins: position, energy (on the curve's inner zero) and slope there.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Joint {
    pub r: f64,
    pub energy: f64,
    pub slope: f64,
}

/// The inner tail by the rule of the curve: exponential in value and slope, else a wall.
pub(crate) fn inner_tail(joint: Joint, v_e: f64) -> (InnerTail, Option<Notice>) {
    let b = -joint.slope / (joint.energy - v_e);
    if b > 0.0 && b.is_finite() {
        return (InnerTail::Exponential { b_per_bohr: b }, None);
    }
    let text = format!(
        "The curve does not rise towards shorter bonds at its first point ({:.4} angstrom); a hard wall \
         stands there. Add shorter bond lengths.",
        to_angstrom(joint.r)
    );
    (InnerTail::HardWall, Some(Notice::caution(Code::HardWall, text).at([joint.r])))
}

impl InnerTail {
    /// V and four derivatives inside the joint.
    pub(crate) fn derivatives(&self, joint: Joint, v_e: f64, r: f64) -> [f64; 5] {
        match *self {
            Self::Exponential { b_per_bohr: b } => {
                let e = (joint.energy - v_e) * (-b * (r - joint.r)).exp();
                [v_e + e, -b * e, b * b * e, -b * b * b * e, b.powi(4) * e]
            }
            // Outside the range: asked for only by mistake, answered with the value at the wall.
            Self::HardWall => [joint.energy, 0.0, 0.0, 0.0, 0.0],
        }
    }
}

/// The outer tail as it is evaluated: V_last + gap (1 − s(r)), s falling from 1 to 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum OuterForm {
    /// s = f (r_last/r)ⁿ − (f − 1) (r_last/r)ⁿ⁺²: C_n is f times that of the last point, without a jump.
    Power { n: u32, gap: f64, scale: f64 },
    /// s = exp(−b (r − r_last)).
    Exponential { b: f64, gap: f64 },
    /// No tail.
    Wall,
}

impl OuterForm {
    /// V and four derivatives beyond the joint.
    pub(crate) fn derivatives(&self, joint: Joint, r: f64) -> [f64; 5] {
        match *self {
            Self::Power { n, gap, scale } => {
                let n_scaled = inverse_power(joint.r, r, n);
                let n_plus_2 = inverse_power(joint.r, r, n.saturating_add(2));
                let mut d = [0.0; 5];
                for k in 0..5 {
                    d[k] = -gap * (scale * n_scaled[k] - (scale - 1.0) * n_plus_2[k]);
                }
                d[0] += joint.energy + gap;
                d
            }
            Self::Exponential { b, gap } => {
                let t = -b * (r - joint.r);
                let e = gap * t.exp();
                [joint.energy - gap * t.exp_m1(), b * e, -b * b * e, b * b * b * e, -b.powi(4) * e]
            }
            Self::Wall => [joint.energy, 0.0, 0.0, 0.0, 0.0],
        }
    }

    /// V_inf − V_last.
    pub(crate) const fn gap(&self) -> Option<f64> {
        match *self {
            Self::Power { gap, .. } | Self::Exponential { gap, .. } => Some(gap),
            Self::Wall => None,
        }
    }

    /// The same tail towards another V_inf; a wall where that is not above the last point.
    pub(crate) fn with_gap(&self, new_gap: f64, slope: f64) -> Self {
        match *self {
            Self::Wall => Self::Wall,
            _ if new_gap <= 0.0 => Self::Wall,
            Self::Power { n, scale, .. } => Self::Power { n, gap: new_gap, scale },
            Self::Exponential { .. } => Self::Exponential { b: slope / new_gap, gap: new_gap },
        }
    }

    /// The tail as it is shown and written; `zero` is added to energies.
    pub(crate) fn shown(&self, joint: Joint, zero: f64, assumed: bool) -> OuterTail {
        match *self {
            Self::Power { n, gap, scale } => OuterTail::InversePower {
                n,
                c_n_hartree_bohr_n: scale * gap * joint.r.powf(f64::from(n)),
                asymptote_hartree: zero + (joint.energy + gap),
                assumed,
            },
            Self::Exponential { b, gap } => OuterTail::Exponential {
                b_per_bohr: b,
                asymptote_hartree: zero + (joint.energy + gap),
                assumed,
            },
            Self::Wall => OuterTail::HardWall { r_bohr: joint.r },
        }
    }
}

/// (r_0/r)ⁿ and its derivatives.
fn inverse_power(r_0: f64, r: f64, n: u32) -> [f64; 5] {
    let n = f64::from(n);
    let mut d = [(r_0 / r).powf(n), 0.0, 0.0, 0.0, 0.0];
    for k in 1..5 {
        d[k] = -(n + (k - 1) as f64) * d[k - 1] / r;
    }
    d
}

/// What is known about the outside of the scan; energies on the curve's inner zero.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Outside {
    /// V_inf given by the user.
    pub asymptote: Option<f64>,
    /// n given by the user.
    pub power: Option<u32>,
    /// V_inf and range parameter a (1/bohr) of the base function.
    pub base: Option<(f64, f64)>,
}

/// An assumed exponential may fall off this much slower than its base function, and no more.
const SLOWEST_ASSUMED_FALL: f64 = 0.25;

/// The outer tail by the rule of the curve, and whether its V_inf is an assumption.
///
/// V_inf and n given: V_inf − C_n/rⁿ through the last value. n alone: V_inf and C_n from value and
/// slope. V_inf alone: exponential in value and slope. Nothing: exponential to the base's limit,
/// assumed. Where that is impossible: a hard wall and a caution.
///
/// A scan that has all but reached its limit ends flat, often well below the limit of its base; the
/// exponential between the two would then stretch over hundreds of bohr and hold levels that no molecule
/// has. Where it would fall off slower than a quarter of the base's range parameter a, V_inf follows from the
/// slope instead, V_last + V′/a: also assumed, and said so.
pub(crate) fn outer_tail(joint: Joint, outside: Outside) -> (OuterForm, bool, Vec<Notice>) {
    let at = to_angstrom(joint.r);
    let wall = |why: String| {
        let text = format!(
            "{why} The curve ends in a hard wall at its last point ({at:.4} angstrom); levels that reach it \
             lean on the wall. Add longer bond lengths or give the energy of the separated atoms."
        );
        (OuterForm::Wall, false, vec![Notice::caution(Code::HardWall, text).at([joint.r])])
    };
    let exponential = |gap: f64| OuterForm::Exponential { b: joint.slope / gap, gap };
    if joint.slope <= 0.0 {
        return wall("The curve does not rise at its last point, so no tail can be joined to it.".into());
    }
    match (outside.asymptote, outside.power, outside.base) {
        (Some(asymptote), _, _) if asymptote <= joint.energy => wall(format!(
            "The energy given for the separated atoms lies {:.1} cm-1 below the last point.",
            to_per_cm(joint.energy - asymptote)
        )),
        (Some(asymptote), Some(n), _) if n > 0 => {
            (OuterForm::Power { n, gap: asymptote - joint.energy, scale: 1.0 }, false, Vec::new())
        }
        (Some(asymptote), _, _) => (exponential(asymptote - joint.energy), false, Vec::new()),
        (None, Some(n), _) if n > 0 => {
            let gap = joint.slope * joint.r / f64::from(n);
            let text = format!(
                "The energy of the separated atoms, {:.1} cm-1 above the last point, follows from value and slope \
                 there with a tail in 1/r^{n}. Give it to be sure.",
                to_per_cm(gap)
            );
            let notice = Notice::info(Code::AssumedTail, text).at([joint.r]);
            (OuterForm::Power { n, gap, scale: 1.0 }, false, vec![notice])
        }
        (None, _, Some((limit, a))) if limit > joint.energy => {
            let gap = limit - joint.energy;
            if joint.slope < SLOWEST_ASSUMED_FALL * a * gap {
                let near = joint.slope / a;
                let text = format!(
                    "Beyond the last point ({at:.4} angstrom) the curve is assumed to level off {:.1} cm-1 higher, \
                     as its slope there suggests (the limit of its Morse base, {:.0} cm-1 higher, is out of reach of \
                     that slope). Give the energy of the separated atoms to have d_e and d_0.",
                    to_per_cm(near),
                    to_per_cm(gap)
                );
                let notice = Notice::info(Code::AssumedTail, text).at([joint.r]);
                return (exponential(near), true, vec![notice]);
            }
            let text = format!(
                "Beyond the last point ({at:.4} angstrom) the curve goes on to the limit of its Morse base, \
                 {:.0} cm-1 higher: an assumption. Give the energy of the separated atoms to have d_e and d_0.",
                to_per_cm(gap)
            );
            (exponential(gap), true, vec![Notice::info(Code::AssumedTail, text).at([joint.r])])
        }
        (None, _, Some((limit, _))) => wall(format!(
            "The Morse base would end {:.1} cm-1 below the last point.",
            to_per_cm(joint.energy - limit)
        )),
        (None, _, None) => wall("Nothing is known about the energy of the separated atoms.".into()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const JOINT: Joint = Joint { r: 4.0, energy: 0.1, slope: 0.02 };

    fn check_slopes(f: impl Fn(f64) -> [f64; 5], r: f64) {
        let h = 1e-4;
        let (before, at, after) = (f(r - h), f(r), f(r + h));
        for d in 0..4 {
            let slope = (after[d] - before[d]) / (2.0 * h);
            assert!((slope - at[d + 1]).abs() < 1e-6 * at[d + 1].abs().max(1e-4), "{r} {d} {slope} {at:?}");
        }
    }

    #[test]
    fn tails_meet_the_curve_and_their_derivatives_are_right() {
        let (inner, notice) = inner_tail(Joint { r: 1.0, energy: 0.3, slope: -0.9 }, 0.01);
        let joint = Joint { r: 1.0, energy: 0.3, slope: -0.9 };
        assert!(notice.is_none());
        let at = inner.derivatives(joint, 0.01, 1.0);
        assert!((at[0] - 0.3).abs() < 1e-16 && (at[1] + 0.9).abs() < 1e-15);
        check_slopes(|r| inner.derivatives(joint, 0.01, r), 0.7);

        let cases = [
            (Outside { asymptote: Some(0.13), power: None, base: Some((0.2, 0.4)) }, true),
            (Outside { asymptote: None, power: Some(6), base: Some((0.2, 0.4)) }, true),
            (Outside { asymptote: None, power: None, base: Some((0.2, 0.4)) }, true),
            (Outside { asymptote: Some(0.13), power: Some(6), base: None }, false),
        ];
        for (outside, slope_too) in cases {
            let (form, assumed, _) = outer_tail(JOINT, outside);
            assert_eq!(assumed, outside.asymptote.is_none() && outside.power.is_none());
            let at = form.derivatives(JOINT, JOINT.r);
            assert!((at[0] - JOINT.energy).abs() < 1e-15, "{form:?}");
            assert_eq!((at[1] - JOINT.slope).abs() < 1e-15, slope_too, "{form:?}");
            check_slopes(|r| form.derivatives(JOINT, r), 5.0);
            let far = form.derivatives(JOINT, 1e4)[0];
            assert!((far - JOINT.energy - form.gap().unwrap()).abs() < 1e-12);
            if let Some(v_inf) = outside.asymptote {
                assert!((far - v_inf).abs() < 1e-12);
            }
        }
    }

    /// V_inf − C_n/rⁿ with C_n from the last value, and a scaled C_n far out without a jump at the joint.
    #[test]
    fn inverse_power_has_the_coefficient_it_says() {
        let outside = Outside { asymptote: Some(0.13), power: Some(6), base: None };
        let (form, assumed, _) = outer_tail(JOINT, outside);
        let OuterTail::InversePower { n, c_n_hartree_bohr_n: c, asymptote_hartree: v, .. } =
            form.shown(JOINT, 0.0, assumed)
        else {
            panic!("{form:?}")
        };
        for r in [4.0_f64, 5.5, 9.0] {
            let direct = v - c / r.powi(n as i32);
            assert!((form.derivatives(JOINT, r)[0] - direct).abs() < 1e-15);
        }
        let OuterForm::Power { n, gap, .. } = form else { panic!("{form:?}") };
        let scaled = OuterForm::Power { n, gap, scale: 1.2 };
        assert!((scaled.derivatives(JOINT, JOINT.r)[0] - JOINT.energy).abs() < 1e-16);
        let deviation = |f: OuterForm, r: f64| v - f.derivatives(JOINT, r)[0];
        assert!((deviation(scaled, 60.0) / deviation(form, 60.0) - 1.2).abs() < 1e-3);
    }

    #[test]
    fn impossible_tails_become_walls_with_a_caution() {
        let falling = Joint { slope: -0.01, ..JOINT };
        let given = Outside { asymptote: Some(0.2), power: None, base: None };
        let below = Outside { asymptote: Some(0.1), power: Some(6), base: Some((0.3, 0.4)) };
        let low_base = Outside { asymptote: None, power: None, base: Some((0.05, 0.4)) };
        for (joint, outside) in
            [(falling, given), (JOINT, below), (JOINT, low_base), (JOINT, Outside::default())]
        {
            let (form, _, notices) = outer_tail(joint, outside);
            assert_eq!(form, OuterForm::Wall);
            assert_eq!(notices[0].code, Code::HardWall);
        }
        let (inner, notice) = inner_tail(Joint { r: 1.0, energy: 0.3, slope: 0.2 }, 0.0);
        assert_eq!(inner, InnerTail::HardWall);
        assert_eq!(notice.map(|n| n.code), Some(Code::HardWall));
    }

    /// A flat end far below the base's limit: V_inf from the slope, not an exponential over hundreds of bohr.
    #[test]
    fn an_assumed_tail_falls_off_no_slower_than_a_quarter_of_its_base() {
        let joint = Joint { r: 19.0, energy: 0.091, slope: 1e-7 };
        let outside = Outside { asymptote: None, power: None, base: Some((0.0925, 0.6)) };
        let (form, assumed, notices) = outer_tail(joint, outside);
        let OuterForm::Exponential { b, gap } = form else { panic!("{form:?}") };
        assert!(assumed && notices.len() == 1);
        assert!((b - 0.6).abs() < 1e-12 && (gap - 1e-7 / 0.6).abs() < 1e-18);
    }
}
