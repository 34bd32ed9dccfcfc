//! From a table of named columns to a scan: which column is what, in which unit, and who says so.

use super::ReadSettings;
use super::columns::{ColumnName, Kind};
use super::delimited::Table;
use super::preview::Role;
use super::prose;
use super::words::UnitWord;
use crate::notice::{Code, Notice};
use crate::scan::error::ScanError;
use crate::scan::{EnergyColumn, Layout, PropertyColumn, Scan, UnitOrigin, names};
use crate::units::{EnergyUnit, LengthUnit};

pub(crate) type Column = (ColumnName, Vec<Option<f64>>);

/// Builds the scan; the caller adds the check sum and passes it through the gate.
pub(crate) fn scan(file_name: &str, table: Table<'_>, settings: &ReadSettings) -> Result<Scan, ScanError> {
    let header = table.header.map(|h| h.names).unwrap_or_default();
    let has_header = header.iter().any(|n| !n.full.starts_with("column "));
    let mut columns: Vec<Column> = header.into_iter().zip(table.columns).collect();
    let all: Vec<String> = columns.iter().map(|c| c.0.full.clone()).collect();
    let length = columns.remove(length_index(&columns, settings, has_header)?);
    let (lengths_stated, energies_stated) = prose::units(&table.prose);
    let mut notices = Vec::new();
    let (length_unit, length_unit_origin) = length_unit(&length.0, settings, lengths_stated, &mut notices)?;
    let bond_lengths = required(&length, &table.row_lines)?;
    let is_energy = match &settings.energy_columns {
        Some(wanted) => chosen_columns(&columns, wanted)?,
        None => energy_columns(&columns, has_header),
    };
    let is_ignored = chosen_columns(&columns, &settings.ignored_columns)?;
    let is_energy: Vec<bool> =
        is_energy.into_iter().zip(&is_ignored).map(|(e, ignored)| e && !ignored).collect();
    if !is_energy.contains(&true) {
        return Err(ScanError::NoEnergyColumn { columns: all });
    }
    let (mut energies, mut properties, mut from_comment) = (Vec::new(), Vec::new(), false);
    let (mut energy_unit_origins, mut contradicted) = (Vec::new(), None);
    let kept = columns.into_iter().zip(is_energy).zip(is_ignored).filter(|(_, ignored)| !ignored);
    for (((name, values), energy), _) in kept {
        note_empty(&name.full, &values, &mut notices);
        if energy {
            let (unit, origin) = energy_unit(&name, settings, energies_stated)?;
            from_comment |= origin == UnitOrigin::Comment;
            if origin == UnitOrigin::Stated {
                contradicted = contradicted.or(energies_stated.filter(|s| s.0 != unit).map(|s| (s, unit)));
            }
            energy_unit_origins.push(origin);
            energies.push(EnergyColumn { name: name.full, label: name.label, unit, values, made: None });
        } else {
            properties.push(PropertyColumn { name: name.full, unit: name.unit_text, values });
        }
    }
    if let Some((unit, line)) = energies_stated.filter(|_| from_comment) {
        notices.push(stated("energies", unit.name(), line));
    }
    if let Some(((comment, line), header)) = contradicted {
        notices.push(contradiction("energies", header.name(), comment.name(), line));
    }
    notices.extend(table.left_out.iter().map(|name| text_column(name)));
    let named = prose::atoms(&table.prose);
    notices.extend(named.as_ref().map(atoms_from_comment));
    Ok(Scan {
        file_name: file_name.to_owned(),
        sha256: String::new(),
        layout: Layout::Delimited,
        length_column: length.0.full,
        length_unit,
        length_unit_origin,
        energy_unit_origins,
        separators: Some([table.format.delimiter.words(), table.format.sign.word()]),
        bond_lengths,
        energies,
        properties,
        row_lines: table.row_lines,
        row_remarks: table.row_remarks,
        charge: named.as_ref().and_then(|n| n.charge),
        atoms: named.map(|n| n.atoms),
        notices,
    })
}

/// What each column of a table is, as far as it can be told; no error, for a look at a file that is refused.
pub(crate) fn roles(columns: &[Column], settings: &ReadSettings, has_header: bool) -> Vec<Role> {
    let length = length_index(columns, settings, has_header).ok();
    let mut others = columns.to_vec();
    let mut roles = vec![Role::Property; columns.len()];
    if let Some(length) = length {
        others.remove(length);
        roles[length] = Role::Length;
    }
    let is_energy = match &settings.energy_columns {
        Some(wanted) => chosen_columns(&others, wanted).unwrap_or_else(|_| vec![false; others.len()]),
        None => energy_columns(&others, has_header),
    };
    let places = (0..columns.len()).filter(|i| Some(*i) != length);
    let is_ignored =
        chosen_columns(&others, &settings.ignored_columns).unwrap_or_else(|_| vec![false; others.len()]);
    for (place, (energy, ignored)) in places.zip(is_energy.into_iter().zip(is_ignored)) {
        if ignored {
            roles[place] = Role::Ignored;
        } else if energy {
            roles[place] = Role::Energy;
        }
    }
    roles
}

fn length_index(columns: &[Column], settings: &ReadSettings, has_header: bool) -> Result<usize, ScanError> {
    if let Some(wanted) = settings.length_column.as_deref() {
        let pairs: Vec<(&str, &str)> =
            columns.iter().map(|c| (c.0.full.as_str(), c.0.label.as_str())).collect();
        return names::find(&pairs, wanted);
    }
    if let Some(first) = columns.iter().position(|c| c.0.kind == Kind::Length) {
        return Ok(first);
    }
    let first_may_be = columns.first().is_some_and(|c| c.0.kind == Kind::Unknown);
    if !has_header || first_may_be {
        return Ok(0);
    }
    Err(ScanError::NoLengthColumn { columns: columns.iter().map(|c| c.0.full.clone()).collect() })
}

/// The energy columns that the user names.
fn chosen_columns(columns: &[Column], wanted: &[String]) -> Result<Vec<bool>, ScanError> {
    let pairs: Vec<(&str, &str)> = columns.iter().map(|c| (c.0.full.as_str(), c.0.label.as_str())).collect();
    let mut chosen = vec![false; columns.len()];
    for name in wanted {
        chosen[names::find(&pairs, name)?] = true;
    }
    Ok(chosen)
}

/// Which columns are energies: those whose header says so; where none does, those it says nothing about.
fn energy_columns(columns: &[Column], has_header: bool) -> Vec<bool> {
    let of = |kind: Kind| columns.iter().map(|c| c.0.kind == kind).collect::<Vec<bool>>();
    let said = of(Kind::Energy);
    if said.contains(&true) {
        said
    } else if has_header {
        let unsaid = columns.iter().map(|c| c.0.kind == Kind::Unknown && c.0.unit.is_none());
        unsaid.collect()
    } else {
        vec![true; columns.len()]
    }
}

fn length_unit(
    name: &ColumnName,
    settings: &ReadSettings,
    comment: prose::Stated<LengthUnit>,
    notices: &mut Vec<Notice>,
) -> Result<(LengthUnit, UnitOrigin), ScanError> {
    if let Some(unit) = settings.length_unit {
        return Ok((unit, UnitOrigin::Chosen));
    }
    if let Some(unit) = name.length_unit() {
        if let Some((other, line)) = comment.filter(|c| c.0 != unit) {
            notices.push(contradiction("bond lengths", unit.name(), other.name(), line));
        }
        return Ok((unit, UnitOrigin::Stated));
    }
    if let Some(UnitWord::Energy(unit)) = name.unit {
        return Err(wrong_kind(name, unit.name(), "length"));
    }
    match comment.filter(|_| name.unit_text.is_none()) {
        Some((unit, line)) => {
            notices.push(stated("bond lengths", unit.name(), line));
            Ok((unit, UnitOrigin::Comment))
        }
        None => Err(ScanError::LengthUnitMissing {
            column: name.full.clone(),
            found_unit: name.unit_text.clone(),
        }),
    }
}

/// The unit of an energy column, and who says it.
fn energy_unit(
    name: &ColumnName,
    settings: &ReadSettings,
    comment: prose::Stated<EnergyUnit>,
) -> Result<(EnergyUnit, UnitOrigin), ScanError> {
    if let Some(unit) = settings.energy_unit {
        return Ok((unit, UnitOrigin::Chosen));
    }
    if let Some(unit) = name.energy_unit() {
        return Ok((unit, UnitOrigin::Stated));
    }
    if let Some(UnitWord::Length(unit)) = name.unit {
        return Err(wrong_kind(name, unit.name(), "energy"));
    }
    match comment.filter(|_| name.unit_text.is_none()) {
        Some((unit, _)) => Ok((unit, UnitOrigin::Comment)),
        None => Err(ScanError::EnergyUnitMissing {
            column: name.full.clone(),
            found_unit: name.unit_text.clone(),
        }),
    }
}

fn wrong_kind(name: &ColumnName, unit: &'static str, wanted: &'static str) -> ScanError {
    ScanError::UnitOfWrongKind { column: name.full.clone(), unit, wanted }
}

fn stated(what: &str, unit: &str, line: usize) -> Notice {
    Notice::info(
        Code::UnitFromComment,
        format!(
            "The unit of the {what}, {unit}, is stated only in words, in line {line}; the header does not repeat it."
        ),
    )
}

fn atoms_from_comment(named: &prose::NamedAtoms) -> Notice {
    let [a, b] = &named.atoms;
    let charge = named.charge.map_or_else(String::new, |q| format!(" and the charge {q:+}"));
    let text = format!(
        "The atoms {a} and {b}{charge} are taken from the words {:?} in line {}; choose others if something else is \
         meant.",
        named.words, named.line
    );
    Notice::info(Code::AtomsFromComment, text)
}

fn text_column(name: &str) -> Notice {
    let text = format!("Column {name} holds words, not numbers; it is left out and shown beside the points.");
    Notice::info(Code::TextColumn, text)
}

fn contradiction(what: &str, header: &str, comment: &str, line: usize) -> Notice {
    let text = format!(
        "The header gives the {what} in {header}, the words in line {line} say {comment}. The header is followed; if \
         the words are right, give the unit yourself."
    );
    Notice::caution(Code::UnitContradicted, text)
}

fn required(length: &Column, row_lines: &[usize]) -> Result<Vec<f64>, ScanError> {
    let missing = |line: &usize| ScanError::LengthMissing { line: *line, name: length.0.full.clone() };
    length.1.iter().zip(row_lines).map(|(value, line)| value.ok_or_else(|| missing(line))).collect()
}

fn note_empty(name: &str, values: &[Option<f64>], notices: &mut Vec<Notice>) {
    let empty = values.iter().filter(|v| v.is_none()).count();
    if empty > 0 {
        let text = format!(
            "Column {name} has no value in {empty} of {} rows; they are left out there.",
            values.len()
        );
        notices.push(Notice::info(Code::EmptyCells, text));
    }
}
