//! The models of the nonlinear sets, as printed in their files.

use super::dual::Dual;
use std::f64::consts::PI;

/// The value of the set's model at the predictors `x` with parameters `b`.
pub fn model(name: &str, b: &[Dual], x: &[f64]) -> Dual {
    let t = x[0];
    let one = Dual::from(1.0);
    match name {
        "Bennett5" => b[0] * (b[1] + t).pow(-(one / b[2])),
        "BoxBOD" | "Misra1a" => b[0] * (one - (-b[1] * t).exp()),
        "Chwirut1" | "Chwirut2" => (-b[0] * t).exp() / (b[1] + b[2] * t),
        "DanWood" => b[0] * Dual::from(t).pow(b[1]),
        "ENSO" => {
            let wave = |period: Dual, c: Dual, s: Dual| {
                let angle = Dual::from(2.0 * PI * t) / period;
                c * angle.cos() + s * angle.sin()
            };
            b[0] + wave(Dual::from(12.0), b[1], b[2]) + wave(b[3], b[4], b[5]) + wave(b[6], b[7], b[8])
        }
        "Eckerle4" => {
            let u = (Dual::from(t) - b[2]) / b[1];
            b[0] / b[1] * (-(u * u) / 2.0).exp()
        }
        "Gauss1" | "Gauss2" | "Gauss3" => {
            let peak = |height: Dual, place: Dual, width: Dual| {
                let u = (Dual::from(t) - place) / width;
                height * (-(u * u)).exp()
            };
            b[0] * (-b[1] * t).exp() + peak(b[2], b[3], b[4]) + peak(b[5], b[6], b[7])
        }
        "Hahn1" | "Thurber" => {
            let cubic = |a: Dual, b: Dual, c: Dual, d: Dual| ((d * t + c) * t + b) * t + a;
            cubic(b[0], b[1], b[2], b[3]) / cubic(one, b[4], b[5], b[6])
        }
        "Kirby2" => ((b[2] * t + b[1]) * t + b[0]) / ((b[4] * t + b[3]) * t + 1.0),
        "Lanczos1" | "Lanczos2" | "Lanczos3" => {
            b[0] * (-b[1] * t).exp() + b[2] * (-b[3] * t).exp() + b[4] * (-b[5] * t).exp()
        }
        "MGH09" => b[0] * ((b[1] + t) * t) / ((b[2] + t) * t + b[3]),
        "MGH10" => b[0] * (b[1] / (b[2] + t)).exp(),
        "MGH17" => b[0] + b[1] * (-b[3] * t).exp() + b[2] * (-b[4] * t).exp(),
        "Misra1b" => {
            let u = b[1] * t / 2.0 + 1.0;
            b[0] * (one - one / (u * u))
        }
        "Misra1c" => b[0] * (one - (b[1] * (2.0 * t) + 1.0).pow(Dual::from(-0.5))),
        "Misra1d" => b[0] * b[1] * t / (b[1] * t + 1.0),
        "Nelson" => b[0] - b[1] * t * (-b[2] * x[1]).exp(),
        "Rat42" => b[0] / ((b[1] - b[2] * t).exp() + 1.0),
        "Rat43" => b[0] / ((b[1] - b[2] * t).exp() + 1.0).pow(one / b[3]),
        "Roszman1" => b[0] - b[1] * t - (b[2] / (Dual::from(t) - b[3])).atan() / PI,
        other => panic!("no model is written down for {other}"),
    }
}
