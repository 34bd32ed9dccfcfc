//! What a file would mean in every unit that it leaves open.

use super::command::Command;
use crate::estimate::Estimate;
use crate::scan::Scan;
use crate::scan::read::{ReadSettings, read_scan};
use crate::settings::Settings;
use crate::species::masses;
use crate::units::{EnergyUnit, LengthUnit, omega_e_per_cm, to_angstrom};

/// Bounds of what is common for a bond: rₑ in angstrom, ωₑ in cm⁻¹, rise from the minimum to the last point in
/// electronvolt. From the lightest and the most weakly bound diatomic molecules; common practice, no source.
const COMMON_R_E: (f64, f64) = (0.6, 6.0);
const COMMON_OMEGA_E: (f64, f64) = (10.0, 5000.0);
const COMMON_RISE: (f64, f64) = (5e-4, 25.0);

/// One choice of units with what would follow from it.
#[derive(Clone, Debug, PartialEq)]
pub struct Meaning {
    /// Unit of the bond lengths.
    pub length: LengthUnit,
    /// Unit of the energies.
    pub energy: EnergyUnit,
    /// rₑ in angstrom; the bond length of the lowest point where there is no minimum.
    pub r_e_angstrom: f64,
    /// ωₑ in cm⁻¹, where a mass is known and there is a minimum.
    pub omega_e_per_cm: Option<f64>,
    /// How far the energy rises from the minimum to the point at the longest bond length, in electronvolt.
    pub rise_electronvolt: f64,
    /// Whether all of it is common for a bond.
    pub is_common: bool,
}

impl Meaning {
    /// The command that makes this choice.
    pub fn command(&self, read: &ReadSettings) -> Command {
        Command::ReadAgain(ReadSettings {
            length_unit: Some(self.length),
            energy_unit: Some(self.energy),
            ..read.clone()
        })
    }
}

/// Every choice of the units that are open, the common ones first; empty where the file cannot be read whatever they
/// are.
///
/// One study is enough: with other units rₑ, force constant and energies only change by factors.
pub fn meanings(file_name: &str, bytes: &[u8], start: &Settings) -> Vec<Meaning> {
    let with = |length_unit, energy_unit| {
        let read = ReadSettings { length_unit, energy_unit, ..start.read.clone() };
        read_scan(file_name, bytes, &read)
    };
    let (some_length, some_energy) = (LengthUnit::Angstrom, EnergyUnit::Hartree);
    let Ok(scan) = with(Some(some_length), Some(some_energy)) else { return Vec::new() };
    let lengths =
        match start.read.length_unit.or_else(|| Some(with(None, Some(some_energy)).ok()?.length_unit)) {
            Some(stated) => vec![stated],
            None => LengthUnit::ALL.to_vec(),
        };
    let column = scan.curve_index(start.curve.as_deref()).unwrap_or(0);
    let stated = || Some(with(Some(some_length), None).ok()?.energies.get(column)?.unit);
    let energies = match start.read.energy_unit.or_else(stated) {
        Some(stated) => vec![stated],
        None => EnergyUnit::ALL.to_vec(),
    };
    let Some(shape) = shape(&scan, start) else { return Vec::new() };
    let mut all: Vec<Meaning> =
        lengths.iter().flat_map(|l| energies.iter().map(|e| shape.meaning(*l, *e))).collect();
    all.sort_by_key(|m| !m.is_common);
    all
}

/// The same for every unit there is, whatever the file says.
pub fn all_meanings(file_name: &str, bytes: &[u8], start: &Settings) -> Vec<Meaning> {
    let (length, energy) = (LengthUnit::Angstrom, EnergyUnit::Hartree);
    let read = ReadSettings { length_unit: Some(length), energy_unit: Some(energy), ..start.read.clone() };
    let shape = read_scan(file_name, bytes, &read).ok().and_then(|scan| shape(&scan, start));
    let Some(shape) = shape else { return Vec::new() };
    LengthUnit::ALL
        .into_iter()
        .flat_map(|length| EnergyUnit::ALL.map(|energy| shape.meaning(length, energy)))
        .collect()
}

/// The curve as if its file were in angstrom and hartree.
struct Shape {
    r_e_bohr: f64,
    force_constant: Option<f64>,
    mass_me: Option<f64>,
    rise_hartree: f64,
}

fn shape(scan: &Scan, start: &Settings) -> Option<Shape> {
    let mass_me =
        masses(&start.masses, scan.atoms.as_ref(), scan.charge).ok().flatten().map(|m| m.reduced_mass_me);
    let mut scan = scan.clone();
    scan.atoms = None;
    // Without a mass there are no levels to compute.
    let mut settings = Settings { curve: start.curve.clone(), ..Settings::default() };
    settings.fits.requests.clear();
    let findings = crate::study::study(&scan, &settings).ok()?;
    let points = || findings.source.points.iter().filter(|p| p.used);
    let lowest = points().min_by(|a, b| a.energy_hartree.total_cmp(&b.energy_hartree))?;
    let last = points().next_back()?;
    let value = |estimate: &Estimate| estimate.value;
    let curve = findings.curve.as_deref();
    let v_e = curve.map_or(lowest.energy_hartree, |c| value(&c.v_e_hartree));
    Some(Shape {
        r_e_bohr: curve.map_or(lowest.r_bohr, |c| value(&c.r_e_bohr)),
        force_constant: curve.and_then(|c| c.derivatives_hartree[0].as_ref().map(value)),
        mass_me,
        rise_hartree: last.energy_hartree - v_e,
    })
}

impl Shape {
    fn meaning(&self, length: LengthUnit, energy: EnergyUnit) -> Meaning {
        let stretch = length.convert(1.0, LengthUnit::Angstrom);
        let scale = energy.to_hartree(1.0);
        let r_e_angstrom = to_angstrom(self.r_e_bohr) * stretch;
        let force_constant = self.force_constant.map(|k| k * scale / (stretch * stretch));
        let omega_e_per_cm =
            force_constant.filter(|k| *k > 0.0).zip(self.mass_me).map(|(k, m)| omega_e_per_cm(k, m));
        let rise_electronvolt = EnergyUnit::Electronvolt.from_hartree(self.rise_hartree * scale);
        let within = |(low, high): (f64, f64), value: f64| value >= low && value <= high;
        let is_common = within(COMMON_R_E, r_e_angstrom)
            && omega_e_per_cm.is_none_or(|omega| within(COMMON_OMEGA_E, omega))
            && within(COMMON_RISE, rise_electronvolt);
        Meaning { length, energy, r_e_angstrom, omega_e_per_cm, rise_electronvolt, is_common }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented: k = 0.5 and depth 0.1 in the units of the file, minimum at 2.5.
    fn file(header: &str) -> Vec<u8> {
        let morse = |r: f64| 0.1 * (1.0 - (-(2.5_f64.sqrt()) * (r - 2.5)).exp()).powi(2);
        let rows: Vec<String> =
            (0..30).map(|i| 1.7 + 0.1 * f64::from(i)).map(|r| format!("{r:.2},{:.10}", morse(r))).collect();
        format!("{header}\n{}\n", rows.join("\n")).into_bytes()
    }

    #[test]
    fn every_choice_is_what_reading_with_it_gives() {
        let bytes = file("# atoms: C O\nR,E");
        let start = Settings::default();
        let all = meanings("plain.csv", &bytes, &start);
        assert_eq!(all.len(), LengthUnit::ALL.len() * EnergyUnit::ALL.len());
        for meaning in &all {
            let read = ReadSettings {
                length_unit: Some(meaning.length),
                energy_unit: Some(meaning.energy),
                ..ReadSettings::default()
            };
            let scan = read_scan("plain.csv", &bytes, &read).expect("read");
            let findings = crate::study::study(&scan, &start).expect("studied");
            let curve = findings.curve.as_deref().expect("a minimum");
            let close = |a: f64, b: f64| (a - b).abs() <= 1e-5 * b.abs();
            assert!(close(meaning.r_e_angstrom, to_angstrom(curve.r_e_bohr.value)), "{meaning:?}");
            let omega = findings.constants.from_derivatives.as_ref().map(|d| d.omega_e_per_cm.value);
            if let (Some(a), Some(b)) = (meaning.omega_e_per_cm, omega) {
                assert!(close(a, b), "{meaning:?}: {b}");
            }
        }
        let first = &all[0];
        assert!(first.is_common && all.iter().any(|m| !m.is_common));
    }

    #[test]
    fn what_is_stated_is_not_asked() {
        let all = meanings("plain.csv", &file("R_bohr,E"), &Settings::default());
        assert_eq!(all.len(), EnergyUnit::ALL.len());
        assert!(all.iter().all(|m| m.length == LengthUnit::Bohr));
        assert!(meanings("empty.csv", b"", &Settings::default()).is_empty());
    }
}
