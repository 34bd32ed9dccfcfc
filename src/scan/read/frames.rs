//! From frames of Cartesian coordinates to a scan: the bond length between two atoms, frame by frame.

use super::ReadSettings;
use crate::notice::{Code, Notice};
use crate::scan::error::ScanError;
use crate::scan::{EnergyColumn, Layout, Scan, UnitOrigin};
use crate::species::AtomChoice;
use crate::units::LengthUnit;

/// One geometry with its line (or its place in the list, from 1).
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Frame {
    /// Line where it begins, or its number from 1 where there are no lines.
    pub place: usize,
    /// Element symbols as written.
    pub symbols: Vec<String>,
    /// Coordinates, three an atom, in the unit of the file.
    pub coordinates: Vec<[f64; 3]>,
}

/// What the frames of a file have in common.
pub(crate) struct Frames {
    /// How the file was laid out.
    pub layout: Layout,
    /// Unit of the coordinates.
    pub length_unit: LengthUnit,
    /// The geometries, at least one, in file order.
    pub frames: Vec<Frame>,
    /// The energy columns, one value a frame.
    pub energies: Vec<EnergyColumn>,
    /// Charge of the molecule, where the file says.
    pub charge: Option<i32>,
}

impl Frames {
    /// Builds the scan; the caller adds the check sum and passes it through the gate.
    pub(crate) fn scan(self, file_name: &str, settings: &ReadSettings) -> Result<Scan, ScanError> {
        let first = self.frames.first().ok_or(ScanError::Empty)?;
        if let Some(other) = self.frames.iter().find(|f| f.symbols != first.symbols) {
            let (found, expected) = (formula(&other.symbols), formula(&first.symbols));
            return Err(ScanError::OtherAtoms { place: other.place, found, expected });
        }
        let [a, b] = chosen_bond(&first.symbols, settings)?;
        let bond_lengths = self.frames.iter().map(|f| distance(f.coordinates[a], f.coordinates[b])).collect();
        // The mass of a bond in something larger is not that of its two atoms.
        let atoms = if first.symbols.len() == 2 { pair(&first.symbols) } else { None };
        let notices = self.energies.iter().filter_map(without_values).collect();
        Ok(Scan {
            file_name: file_name.to_owned(),
            sha256: String::new(),
            layout: self.layout,
            length_column: format!("r({}{}-{}{})", first.symbols[a], a + 1, first.symbols[b], b + 1),
            length_unit: settings.length_unit.unwrap_or(self.length_unit),
            length_unit_origin: origin(settings.length_unit.is_some()),
            energy_unit_origins: vec![origin(settings.energy_unit.is_some()); self.energies.len()],
            separators: None,
            bond_lengths,
            row_lines: self.frames.iter().map(|f| f.place).collect(),
            energies: self.energies,
            properties: Vec::new(),
            row_remarks: Vec::new(),
            atoms,
            charge: self.charge,
            notices,
        })
    }
}

const fn origin(chosen: bool) -> UnitOrigin {
    if chosen { UnitOrigin::Chosen } else { UnitOrigin::Format }
}

fn without_values(column: &EnergyColumn) -> Option<Notice> {
    let empty = column.values.iter().filter(|v| v.is_none()).count();
    let text = format!("Column {} has no value in {empty} of {} frames.", column.name, column.values.len());
    (empty > 0).then(|| Notice::info(Code::EmptyCells, text))
}

/// The two atoms of the bond, counted from 0: the only two there are, or those chosen.
fn chosen_bond(symbols: &[String], settings: &ReadSettings) -> Result<[usize; 2], ScanError> {
    match settings.bond {
        Some([a, b]) if a != b && (1..=symbols.len()).contains(&a) && (1..=symbols.len()).contains(&b) => {
            Ok([a - 1, b - 1])
        }
        None if symbols.len() == 2 => Ok([0, 1]),
        chosen => Err(ScanError::BondNotChosen { chosen, atoms: numbered(symbols) }),
    }
}

fn distance(a: [f64; 3], b: [f64; 3]) -> f64 {
    let [x, y, z] = [0, 1, 2].map(|i| b[i] - a[i]);
    x.hypot(y).hypot(z)
}

fn pair(symbols: &[String]) -> Option<[AtomChoice; 2]> {
    Some([AtomChoice::parse(&symbols[0]).ok()?, AtomChoice::parse(&symbols[1]).ok()?])
}

fn numbered(symbols: &[String]) -> Vec<String> {
    symbols.iter().enumerate().map(|(i, s)| format!("{} {s}", i + 1)).collect()
}

/// The symbols in a row, cut to what a message can show.
fn formula(symbols: &[String]) -> String {
    const SHOWN: usize = 10;
    let mut text = symbols.iter().take(SHOWN).map(String::as_str).collect::<Vec<_>>().join(" ");
    if symbols.len() > SHOWN {
        text.push_str(" ...");
    }
    text
}
