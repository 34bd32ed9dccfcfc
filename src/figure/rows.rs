//! Constants, energies and reach as rows of label, value and unit, as window, report and clipboard show them.

use super::number;
use crate::estimate::Estimate;
use crate::findings::Findings;
use crate::potential::curve::OuterTail;
use crate::reach::{EndedBy, Interval, LevelReach};
use crate::units::{ANGSTROM_PER_BOHR, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, to_angstrom, to_per_cm};
use crate::verdict::percent;

const PER_CM: &str = "cm⁻¹";

/// One row of figures: label, one or two values, unit.
#[derive(Clone, Debug, Default)]
pub struct Row {
    /// Symbol or words.
    pub label: String,
    /// The value, already with its digits.
    pub value: String,
    /// A second value beside it, dimmer; rows of one block agree on having it.
    pub second: Option<String>,
    /// The unit.
    pub unit: &'static str,
    /// What it is: formula, source, where the error comes from.
    pub about: String,
}

impl Row {
    /// A row with one value.
    pub fn new(label: impl Into<String>, value: impl Into<String>, unit: &'static str) -> Self {
        Self { label: label.into(), value: value.into(), unit, ..Self::default() }
    }

    /// With a second value.
    pub fn beside(mut self, second: impl Into<String>) -> Self {
        self.second = Some(second.into());
        self
    }

    /// With words about it.
    pub fn about(mut self, about: impl Into<String>) -> Self {
        self.about = about.into();
        self
    }

    /// The row as one line of text, as copied and as read aloud.
    pub fn text(&self) -> String {
        let mut text = format!("{} {}", self.label, self.value);
        if let Some(second) = &self.second {
            text.push_str(&format!(" ({second})"));
        }
        if !self.unit.is_empty() {
            text.push_str(&format!(" {}", self.unit));
        }
        text
    }
}

/// How the error of an estimate was obtained, in words.
fn error_words(estimate: &Estimate) -> String {
    let Some(source) = estimate.source else { return String::new() };
    use crate::estimate::ErrorSource as Source;
    let words = match source {
        Source::Fit => "least-squares covariance",
        Source::Misfit => "covariance of residuals that are misfit rather than noise",
        Source::Interpolation => "spread between admissible interpolations",
        Source::Noise => "estimated noise of the energies",
        Source::Published => "published uncertainty",
        Source::Bootstrap => "spread over resampled residuals",
        Source::Tail => "spread between admissible continuations beyond the scan",
    };
    format!(" Error: {words}.")
}

fn shown(estimate: Option<Estimate>, decimals: usize) -> String {
    estimate.map_or_else(|| number::NONE.to_owned(), |e| number::estimate(&e, decimals))
}

/// Constants of the curve, from derivatives and, beside them, from levels.
pub fn curve_rows(findings: &Findings) -> Vec<Row> {
    let Some(curve) = &findings.curve else { return Vec::new() };
    let none = || number::NONE.to_owned();
    let r_e = curve.r_e_bohr.scaled(ANGSTROM_PER_BOHR);
    let mut rows = vec![
        Row::new("rₑ", number::estimate(&r_e, 5), "Å")
            .about(format!("Root of V′ of the curve through the points.{}", error_words(&r_e)))
            .beside(""),
    ];
    if let Some(k) = curve.derivatives_hartree[0] {
        let k = k.scaled(NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2);
        rows.push(
            Row::new("k", number::estimate(&k, 2), "N/m")
                .about(format!("V″(rₑ), so that V = ½ k x² near the minimum.{}", error_words(&k)))
                .beside(""),
        );
    }
    let derivatives = findings.constants.from_derivatives.as_ref();
    let levels = findings.constants.from_levels.as_ref();
    let mut push =
        |label: &str, first: Option<Estimate>, second: Option<Estimate>, decimals: usize, about: &str| {
            if first.is_none() && second.is_none() {
                return;
            }
            let words = first.as_ref().map_or_else(String::new, error_words);
            let second = second.map_or_else(none, |e| number::estimate(&e, decimals));
            rows.push(
                Row::new(label, shown(first, decimals), PER_CM)
                    .beside(second)
                    .about(format!("{about}{words}")),
            );
        };
    push(
        "ωₑ",
        derivatives.map(|d| d.omega_e_per_cm),
        levels.map(|l| l.omega_e_per_cm),
        2,
        "√(k/μ)/(2πc) [Dunham 1932]; at the right from a polynomial through the levels in v + ½.",
    );
    push(
        "ωₑxₑ",
        derivatives.and_then(|d| d.omega_e_x_e_per_cm),
        levels.and_then(|l| l.omega_e_x_e_per_cm),
        3,
        "3/2 Bₑ (5/4 a₁² − a₂) [Dunham 1932].",
    );
    push("Bₑ", derivatives.map(|d| d.b_e_per_cm), levels.and_then(|l| l.b_e_per_cm), 4, "h/(8π²cμrₑ²).");
    push(
        "αₑ",
        derivatives.and_then(|d| d.alpha_e_per_cm),
        levels.and_then(|l| l.alpha_e_per_cm),
        4,
        "−(6 Bₑ²/ωₑ)(1 + a₁) [Dunham 1932].",
    );
    if let Some(d) = derivatives {
        let micro = d.centrifugal_d_e_per_cm.scaled(1e6);
        rows.push(
            Row::new("Dₑ (rotation)", number::estimate(&micro, 2), "10⁻⁶ cm⁻¹")
                .beside("")
                .about("Centrifugal constant 4 Bₑ³/ωₑ²."),
        );
    }
    let depth = findings.constants.well_depth_per_cm;
    let about = match (&depth, curve.outer) {
        (Some(_), _) => "V(∞) − Vₑ.",
        (None, OuterTail::HardWall { .. }) => "Not known: the curve ends in a wall before it dissociates.",
        (None, _) => "Not known: the energy of the separated atoms is assumed, not given.",
    };
    rows.push(Row::new("Dₑ (depth)", shown(depth, 1), PER_CM).beside("").about(about));
    if let (
        None,
        OuterTail::Exponential { asymptote_hartree, .. } | OuterTail::InversePower { asymptote_hartree, .. },
    ) = (&depth, curve.outer)
    {
        let assumed = to_per_cm(asymptote_hartree - curve.v_e_hartree.value);
        rows.push(
            Row::new("V(∞), assumed", number::fixed(assumed, 0), PER_CM)
                .beside("")
                .about("Where the tail beyond the last point levels off. Give the energy of the separated atoms on the left, and depth and D₀ follow."),
        );
    }
    rows
}

/// Energies of the numerical levels.
pub fn energy_rows(findings: &Findings) -> Vec<Row> {
    let constants = &findings.constants;
    let mut rows = Vec::new();
    let mut push = |label: &str, value: Option<Estimate>, about: &str| {
        if let Some(value) = value {
            rows.push(Row::new(label, number::estimate(&value, 2), PER_CM).about(about));
        }
    };
    push("zero-point energy", constants.zero_point_energy_per_cm, "E(0) − Vₑ of the numerical ground level.");
    push("fundamental 1 ← 0", constants.fundamental_per_cm, "E(1) − E(0) of the numerical levels, J = 0.");
    let level = |v: usize| findings.levels.iter().find(|l| l.v == v);
    if let (Some(zero), Some(two)) = (level(0), level(2)) {
        // As of the fundamental: the root of the squares is the cautious choice.
        let error = zero.energy_error_per_cm.zip(two.energy_error_per_cm).map(|(a, b)| a.hypot(b));
        let overtone = Estimate {
            value: two.energy_per_cm - zero.energy_per_cm,
            std_error: error,
            source: two.energy_estimate_per_cm().source,
        };
        push("first overtone 2 ← 0", Some(overtone), "E(2) − E(0) of the numerical levels, J = 0.");
    }
    push("dissociation energy D₀", constants.d_0_per_cm, "V(∞) − E(0).");
    if !findings.levels.is_empty() {
        let firm = findings.levels.iter().filter(|l| !l.leans_on_tail).count();
        rows.push(
            Row::new("levels supported by the scan", format!("{firm} of {}", findings.levels.len()), "")
                .about("Levels that would not change if the tails did, of all below the limit."),
        );
    }
    rows
}

/// The reach in short.
pub fn short_reach_rows(findings: &Findings) -> Vec<Row> {
    let Some(reach) = &findings.reach else { return Vec::new() };
    let tolerance = percent(reach.tolerance);
    let mut rows = vec![
        Row::new(format!("energy within {tolerance}"), interval_text(&reach.energy), "Å"),
        Row::new(format!("force within {tolerance}"), interval_text(&reach.force), "Å"),
    ];
    if let Some(levels) = &reach.levels {
        rows.push(Row::new(level_label(levels, findings), level_value(levels), ""));
    }
    if let Some(kelvin) = reach.temperature_kelvin.partition_function {
        rows.push(
            Row::new("partition function within 1 %", temperature_text(kelvin), "K").about(
                "Vibration alone: the highest temperature up to which |ln q(harmonic) − ln q| ≤ 0.01.",
            ),
        );
    }
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        rows.push(Row::new("zero-point amplitude", number::fixed(to_angstrom(amplitude), 4), "Å"));
    }
    rows
}

/// Masses, constants and energies as lines of text, one a line, for the clipboard.
pub fn constants_text(findings: &Findings) -> String {
    let mut lines = vec![format!("{}  {}", findings.source.file_name, findings.source.curve_label)];
    if let Some(masses) = &findings.masses {
        let atoms = masses.atoms.as_ref().map_or_else(String::new, |atoms| {
            atoms.iter().map(|a| format!("{}{} ", a.mass_number, a.symbol)).collect()
        });
        lines.push(format!("{atoms}reduced mass\t{}\tu", number::fixed(masses.reduced_mass_u.value, 8)));
    }
    for row in curve_rows(findings).iter().chain(&energy_rows(findings)).chain(&short_reach_rows(findings)) {
        let second = row
            .second
            .as_deref()
            .filter(|s| !s.is_empty())
            .map_or_else(String::new, |s| format!("\t(from levels {s})"));
        lines.push(format!("{}\t{}\t{}{second}", row.label, row.value, row.unit));
    }
    lines.join("\n") + "\n"
}

/// A highest temperature in kelvin.
pub fn temperature_text(kelvin: f64) -> String {
    if kelvin < 0.5 { "not even at 0".to_owned() } else { format!("up to {}", number::fixed(kelvin, 0)) }
}

/// Both ends in angstrom.
pub fn interval_text(interval: &Interval) -> String {
    let end = |x: Option<f64>, ended: EndedBy| match (x, ended) {
        (Some(x), _) => number::signed(to_angstrom(x), 4),
        (None, EndedBy::Barrier) => "barrier".to_owned(),
        (None, _) => "scan end".to_owned(),
    };
    let (minus, plus) = (interval.ended_by_minus, interval.ended_by_plus);
    format!("{} … {}", end(interval.x_minus_bohr, minus), end(interval.x_plus_bohr, plus))
}

/// What the level reach counts, e.g. `levels within 5 % of ωₑ`.
pub fn level_label(reach: &LevelReach, findings: &Findings) -> String {
    let omega = findings.constants.from_derivatives.as_ref().map(|d| d.omega_e_per_cm.value);
    match omega {
        Some(omega) if findings.settings.reach.level_tolerance_per_cm.is_none() && omega > 0.0 => {
            format!("levels within {} of ωₑ", percent(reach.tolerance_per_cm / omega))
        }
        _ => format!("levels within {} cm⁻¹", number::fixed(reach.tolerance_per_cm, 1)),
    }
}

/// The highest v within the tolerance.
pub fn level_value(reach: &LevelReach) -> String {
    reach.highest_v.map_or_else(|| "none".to_owned(), |v| format!("v ≤ {v}"))
}
