//! The verdict as shown on top of the picture, and what each part of it rests on.

use crate::findings::Findings;
use crate::verdict;

/// The verdict, and what it rests on.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Sentence {
    /// One or two sentences.
    pub text: String,
    /// Where each part comes from.
    pub why: Vec<String>,
}

/// The verdict on a study.
pub fn sentence(findings: &Findings) -> Sentence {
    let mut why = Vec::new();
    if let Some(reach) = findings.reach.as_ref().filter(|_| !findings.impossible()) {
        let tolerance = verdict::percent(reach.tolerance);
        why.push(format!(
            "Reach: |V − Vₑ − ½ k x²| ≤ {tolerance} of ½ k x², with k = V″(rₑ) of the curve through the points."
        ));
        if findings.levels.first().is_some_and(|l| l.inside_reach.is_some()) {
            why.push(
                "Share: ∫|ψ₀|² dr between the ends of the reach, ψ₀ of the numerical ground state."
                    .to_owned(),
            );
        }
        if findings.levels.len() > 1 {
            why.push(
                "Level: ωₑ(1 + ½) with ωₑ from k, against the numerical level of the curve, both from Vₑ."
                    .to_owned(),
            );
        }
        if let Some(looked) = reach.temperature_kelvin.looked_up_to {
            why.push(format!(
                "Temperature: |ln q(harmonic) − ln q| ≤ 0.01, q over the vibrational levels, which support temperatures up \
                 to {} K.",
                crate::digits::fixed(looked.floor(), 0)
            ));
        }
    }
    Sentence { text: verdict::sentence(findings), why }
}
