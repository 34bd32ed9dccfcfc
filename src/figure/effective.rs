//! The effective potential of a rotating molecule, V(r) + ħ²[J(J + 1) − Λ²]/(2μr²), with its bound and quasi-bound
//! levels.

use super::curve::{TAIL_FRACTION, mesh};
use super::densities::{LevelPicture, level_pictures_of};
use super::ladders::{Ladder, Ladders};
use super::views::framed;
use super::{Role, Series, Shape, number};
use crate::figure::geometry::Bounds;
use crate::findings::{Findings, QuasiBoundLevel};
use crate::potential::Potential;
use crate::potential::curve::ScanCurve;
use crate::study::RotatingLevels;
use crate::units::{LengthUnit, to_angstrom, to_per_cm};

/// The curve is followed beyond its barrier by this factor.
const BEYOND_BARRIER: f64 = 1.35;
/// Steps in which turning points are looked for.
const STEPS: u32 = 400;
/// Halvings of a bracket.
const HALVINGS: u32 = 60;

/// A quasi-bound level as drawn.
#[derive(Clone, Debug, PartialEq)]
pub struct QuasiBoundPicture {
    /// Vibrational quantum number, counted on from the bound levels.
    pub v: usize,
    /// Energy above the minimum of the curve without rotation, in cm⁻¹.
    pub energy_per_cm: f64,
    /// Classical turning points inside the barrier, in angstrom.
    pub inside: (f64, f64),
    /// Where it comes out of the barrier, in angstrom.
    pub exit: f64,
}

/// Everything that is drawn of one J.
#[derive(Clone, Debug, PartialEq)]
pub struct RotationPicture {
    /// J.
    pub j: u32,
    /// The potential and the lines of the quasi-bound levels; those behind first.
    pub series: Vec<Series>,
    /// All levels, v ascending; the quasi-bound ones have no density.
    pub levels: Vec<LevelPicture>,
    /// The quasi-bound levels.
    pub quasi_bound: Vec<QuasiBoundPicture>,
    /// Levels without rotation beside those with it.
    pub ladders: Ladders,
    /// The lowest six levels.
    pub near_minimum: Option<Bounds>,
    /// Up to the top of the barrier.
    pub whole_well: Option<Bounds>,
}

/// V_eff in cm⁻¹ above V_e over the bond length in bohr.
struct Effective<'a> {
    curve: &'a ScanCurve,
    /// X/(2μ) in hartree bohr².
    centrifugal: f64,
}

impl Effective<'_> {
    fn per_cm(&self, r_bohr: f64) -> f64 {
        to_per_cm(self.curve.above_minimum().energy_hartree(r_bohr) + self.centrifugal / (r_bohr * r_bohr))
    }

    fn line(&self, from: f64, to: f64) -> Vec<[f64; 2]> {
        let points = mesh(from, to, self.curve.r_e_bohr.value).into_iter();
        points.map(|r| [to_angstrom(r), self.per_cm(r)]).filter(|p| p[1].is_finite()).collect()
    }

    /// Where V_eff crosses an energy between two bond lengths on either side of it.
    fn crossing(&self, energy: f64, (mut below, mut above): (f64, f64)) -> f64 {
        for _ in 0..HALVINGS {
            let middle = 0.5 * (below + above);
            if self.per_cm(middle) < energy { below = middle } else { above = middle }
        }
        0.5 * (below + above)
    }

    /// Turning points of a level behind a barrier, and where it comes out; none where the curve does not hold it.
    fn turning_points(&self, energy: f64, barrier_bohr: f64) -> Option<[f64; 3]> {
        let start = self.curve.scan_range_bohr.0.max(self.curve.range_bohr().0).min(0.6 * barrier_bohr);
        let at = |i: u32| start + (barrier_bohr - start) * f64::from(i) / f64::from(STEPS);
        let bottom = (0..=STEPS).map(at).min_by(|a, b| self.per_cm(*a).total_cmp(&self.per_cm(*b)))?;
        if self.per_cm(bottom) >= energy {
            return None;
        }
        let mut inner = bottom;
        while self.per_cm(inner) < energy {
            inner *= 0.98;
            if inner < 0.02 * bottom {
                return None;
            }
        }
        let mut outer = barrier_bohr;
        while self.per_cm(outer) >= energy {
            outer *= 1.02;
            if outer > 1e4 * barrier_bohr {
                return None;
            }
        }
        Some([
            self.crossing(energy, (bottom, inner)),
            self.crossing(energy, (bottom, barrier_bohr)),
            self.crossing(energy, (outer, barrier_bohr)),
        ])
    }
}

/// What is drawn of the levels of one J; none without a curve or a mass.
pub fn rotation_picture(findings: &Findings, rotating: &RotatingLevels) -> Option<RotationPicture> {
    let (curve, masses) = (findings.curve.as_deref()?, findings.masses.as_ref()?);
    let j = rotating.j;
    let x = findings.settings.levels.rotation_x(j);
    let effective = Effective { curve, centrifugal: x / (2.0 * masses.reduced_mass_me) };
    let quasi: Vec<(&QuasiBoundLevel, QuasiBoundPicture)> =
        rotating.quasi_bound.iter().filter_map(|q| Some((q, quasi_picture(&effective, q)?))).collect();
    let mut series = potential(&effective, rotating, findings.settings.levels.lambda);
    series.extend(quasi.iter().flat_map(|(level, picture)| lines(level, picture)));
    let mut levels = level_pictures_of(findings, &rotating.levels);
    let quasi_bound: Vec<QuasiBoundPicture> = quasi.into_iter().map(|(_, picture)| picture).collect();
    levels.extend(quasi_bound.iter().map(|q| LevelPicture {
        v: q.v,
        energy_per_cm: q.energy_per_cm,
        turning_points: q.inside,
        r: vec![q.inside.0, q.inside.1],
        density: vec![0.0, 0.0],
        parts: Vec::new(),
        scale_per_cm: 0.0,
        quasi_bound: true,
    }));
    Some(RotationPicture {
        j,
        series,
        ladders: ladders(findings, j, &levels),
        near_minimum: near_minimum(&levels).filter(Bounds::is_valid),
        whole_well: whole_well(findings, &effective, rotating).filter(Bounds::is_valid),
        levels,
        quasi_bound,
    })
}

fn quasi_picture(effective: &Effective, level: &QuasiBoundLevel) -> Option<QuasiBoundPicture> {
    let [inner, outer, exit] = effective.turning_points(level.energy_per_cm, level.barrier_bohr)?;
    Some(QuasiBoundPicture {
        v: level.v,
        energy_per_cm: level.energy_per_cm,
        inside: (to_angstrom(inner), to_angstrom(outer)),
        exit: to_angstrom(exit),
    })
}

/// The potential itself, in the scan and beyond it.
fn potential(effective: &Effective, rotating: &RotatingLevels, lambda: u32) -> Vec<Series> {
    let curve = effective.curve;
    let (first, last) = curve.scan_range_bohr;
    let (from, to) = curve.range_bohr();
    let extra = TAIL_FRACTION * (last - first);
    let barrier = rotating.quasi_bound.iter().map(|q| q.barrier_bohr).fold(0.0, f64::max);
    let (inner, outer) =
        ((first - extra).max(from).max(0.3 * first), (last + extra).max(BEYOND_BARRIER * barrier).min(to));
    let j = rotating.j;
    let minus = if lambda == 0 { String::new() } else { format!(" − {}", lambda * lambda) };
    let barrier_words = rotating.quasi_bound.first().map_or_else(String::new, |q| {
        format!(
            " Its barrier stands at {} Å, {} cm⁻¹ above Vₑ.",
            number::fixed(to_angstrom(q.barrier_bohr), 3),
            number::fixed(q.barrier_per_cm, 1)
        )
    });
    let one = |role, about: String, a: f64, b: f64| Series {
        role,
        label: format!("effective, J = {j}"),
        about,
        strong: None,
        shape: Shape::Line(effective.line(a, b)),
    };
    let words = format!("V(r) + ħ²[J(J + 1){minus}]/(2μr²) with J = {j}.{barrier_words}");
    let tail = "The effective potential beyond the scan: a continuation, not data.";
    let end = last.min(to);
    let mut series = Vec::new();
    if inner < first {
        series.push(one(Role::EffectiveTail, tail.to_owned(), inner, first));
    }
    if outer > end {
        series.push(one(Role::EffectiveTail, tail.to_owned(), end, outer));
    }
    series.push(one(Role::Effective, words, first, end));
    series
}

/// A quasi-bound level: dashed inside the barrier, dotted where it tunnels.
fn lines(level: &QuasiBoundLevel, picture: &QuasiBoundPicture) -> [Series; 2] {
    let about = quasi_bound_words(level);
    let one = |role, label: &str, from: f64, to: f64| Series {
        role,
        label: label.to_owned(),
        about: about.clone(),
        strong: None,
        shape: Shape::Line(vec![[from, picture.energy_per_cm], [to, picture.energy_per_cm]]),
    };
    let (inner, outer) = picture.inside;
    [
        one(Role::Tunnelling, "tunnelling", outer, picture.exit),
        one(Role::QuasiBound, "quasi-bound", inner, outer),
    ]
}

/// Energy, width and lifetime of a quasi-bound level in words.
pub fn quasi_bound_words(level: &QuasiBoundLevel) -> String {
    format!(
        "v = {}, J = {}: {} cm⁻¹ above Vₑ, width Γ {} cm⁻¹, lifetime ħ/Γ {}.",
        level.v,
        level.j,
        number::fixed(level.energy_per_cm, 2),
        width_text(level.width_per_cm),
        lifetime_text(level.lifetime_seconds())
    )
}

/// A width in cm⁻¹ with three digits, as a power of ten where it is small.
pub fn width_text(width_per_cm: f64) -> String {
    if width_per_cm >= 1e-3 {
        number::significant(width_per_cm, 3)
    } else {
        number::scientific(width_per_cm, 2)
    }
}

/// A lifetime with its unit, from seconds.
pub fn lifetime_text(seconds: Option<f64>) -> String {
    const UNITS: [(f64, &str); 6] =
        [(1.0, "s"), (1e-3, "ms"), (1e-6, "µs"), (1e-9, "ns"), (1e-12, "ps"), (1e-15, "fs")];
    const YEAR: f64 = 365.25 * 86_400.0;
    let Some(t) = seconds.filter(|t| t.is_finite()) else { return "beyond all measure".to_owned() };
    if t >= YEAR {
        return format!("{} years", number::scientific(t / YEAR, 1));
    }
    let (size, unit) = UNITS.into_iter().find(|(size, _)| t >= *size).unwrap_or(UNITS[5]);
    let value = t / size;
    let text = if value >= 1e3 { number::scientific(value, 2) } else { number::significant(value, 3) };
    format!("{text} {unit}")
}

/// Levels without rotation beside those of J, quasi-bound ones on top.
fn ladders(findings: &Findings, j: u32, levels: &[LevelPicture]) -> Ladders {
    let column = |role, label: String, energies_per_cm| Ladder { role, label, energies_per_cm };
    let mut with: Vec<f64> = Vec::new();
    for level in levels {
        // A level that is not there leaves its place open.
        while with.len() < level.v {
            with.push(f64::NAN);
        }
        with.push(level.energy_per_cm);
    }
    Ladders {
        columns: vec![
            column(
                Role::Scanned,
                "J = 0".to_owned(),
                findings.levels.iter().map(|l| l.energy_per_cm).collect(),
            ),
            column(Role::Effective, format!("J = {j}"), with),
        ],
        first_outside: None,
    }
}

/// The lowest six levels, quasi-bound ones among them.
fn near_minimum(levels: &[LevelPicture]) -> Option<Bounds> {
    let index = levels.len().checked_sub(1)?.min(5);
    let top = &levels[index];
    let spacing = match index.checked_sub(1) {
        Some(below) => top.energy_per_cm - levels[below].energy_per_cm,
        None => 0.2 * top.energy_per_cm,
    };
    Some(framed(top.turning_points, top.energy_per_cm + 0.55 * spacing))
}

/// From the inner wall to beyond the barrier; without a barrier as far as the highest level goes.
fn whole_well(findings: &Findings, effective: &Effective, rotating: &RotatingLevels) -> Option<Bounds> {
    let without = super::views::whole_well(findings, effective.curve)?;
    let Some(quasi) = rotating.quasi_bound.first() else {
        let highest = rotating.levels.last().map_or(0.0, |l| l.energy_per_cm);
        return Some(Bounds { y: (without.y.0, without.y.1.max(1.1 * highest)), ..without });
    };
    let right = to_angstrom(BEYOND_BARRIER * quasi.barrier_bohr);
    let top = quasi.barrier_per_cm.max(without.y.1 / 1.1);
    let room = 0.35 * (quasi.barrier_per_cm - effective.per_cm(LengthUnit::Angstrom.to_bohr(right))).abs();
    Some(Bounds {
        x: (without.x.0, without.x.1.max(right)),
        y: (without.y.0, (top + room).max(1.06 * quasi.barrier_per_cm)),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// At the turning points the effective potential is the energy; the barrier stands between the last two.
    #[test]
    fn quasi_bound_levels_turn_where_the_potential_is_their_energy() {
        let bytes = include_bytes!("../../sample-scans/lih_X_A.csv");
        let settings = crate::settings::Settings::default();
        let scan = crate::scan::read::read_scan("lih_X_A.csv", bytes, &settings.read).expect("a scan");
        let findings = crate::study::study(&scan, &settings).expect("a study");
        let rotating = crate::study::rotating_levels(&findings, 20).expect("levels");
        let picture = rotation_picture(&findings, &rotating).expect("a picture");
        assert!(!picture.quasi_bound.is_empty() && picture.quasi_bound.len() == rotating.quasi_bound.len());
        let curve = findings.curve.as_deref().expect("a curve");
        let mass = findings.masses.as_ref().expect("a mass").reduced_mass_me;
        let effective = Effective { curve, centrifugal: 420.0 / (2.0 * mass) };
        for (level, drawn) in rotating.quasi_bound.iter().zip(&picture.quasi_bound) {
            for r in [drawn.inside.0, drawn.inside.1, drawn.exit] {
                let energy = effective.per_cm(LengthUnit::Angstrom.to_bohr(r));
                assert!((energy - level.energy_per_cm).abs() < 1e-6, "{energy} {}", level.energy_per_cm);
            }
            let barrier = to_angstrom(level.barrier_bohr);
            assert!(drawn.inside.0 < drawn.inside.1 && drawn.inside.1 < barrier && barrier < drawn.exit);
        }
        // What the study lists for the J of its settings is the same.
        let mut listed = settings.clone();
        listed.levels.rotation = vec![20];
        let findings = crate::study::study(&scan, &listed).expect("a study");
        let again = crate::study::rotating_levels(&findings, 20).expect("levels");
        assert_eq!(again.quasi_bound, rotating.quasi_bound);
        assert!(crate::study::rotating_levels(&findings, 0).is_none());
    }

    #[test]
    fn lifetimes_have_a_unit_that_fits() {
        assert_eq!(lifetime_text(Some(2.5e-12)), "2.50 ps");
        assert_eq!(lifetime_text(Some(3.0e-17)), "0.0300 fs");
        assert_eq!(lifetime_text(Some(3.15576e10)), "1.0 × 10³ years");
        assert_eq!(lifetime_text(None), "beyond all measure");
        assert_eq!(width_text(2.62), "2.62");
        assert_eq!(width_text(4.352e-12), "4.35 × 10⁻¹²");
    }
}
