//! Why a file could not be read as a scan: place, value found, what is accepted, one next step.

use thiserror::Error;

/// Why a file could not be read as a scan. Lines count from 1 as an editor shows them, columns from 1.
/// The caller knows the file's name and puts it before the message.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum ScanError {
    /// No bytes, or nothing but blanks.
    #[error("the file is empty; choose the file that holds the table of bond lengths and energies")]
    Empty,
    /// More bytes than are read.
    #[error(
        "the file has {found_bytes} bytes, more than the {limit_bytes} that are read; keep only the table of bond lengths and energies"
    )]
    TooLarge {
        /// Size of the file.
        found_bytes: usize,
        /// The most that is read.
        limit_bytes: usize,
    },
    /// More rows than are read.
    #[error(
        "line {line}: more than {limit_rows} rows of numbers; a bond scan has tens to thousands, so keep every n-th row"
    )]
    TooManyRows {
        /// The first line too many.
        line: usize,
        /// The most that is read.
        limit_rows: usize,
    },
    /// More columns than are read.
    #[error(
        "line {line}: more than {limit_columns} columns; a bond scan has one row per bond length, so turn the table round"
    )]
    TooManyColumns {
        /// The first such line.
        line: usize,
        /// The most that is read.
        limit_columns: usize,
    },
    /// Not text.
    #[error(
        "byte {offset} has the value {value}, which no text file holds; export the table as plain text (CSV) and open that"
    )]
    Binary {
        /// Position of the byte, from 0.
        offset: usize,
        /// Its value.
        value: u8,
    },
    /// Text without a row of numbers.
    #[error(
        "none of the {lines} lines holds two or more numbers; a scan is a table with one row per bond length, columns separated by comma, semicolon, tab or blanks"
    )]
    NoNumbers {
        /// Number of lines.
        lines: usize,
    },
    /// A header and no rows.
    #[error(
        "line {line}: after the header {header:?} there are no rows of numbers; add the bond lengths and energies below it"
    )]
    OnlyHeader {
        /// Line of the header.
        line: usize,
        /// The header as written.
        header: String,
    },
    /// One number a row.
    #[error(
        "line {line}: only one column of numbers; a scan needs bond lengths and energies side by side, separated by comma, semicolon, tab or blanks"
    )]
    OneColumn {
        /// The first such line.
        line: usize,
    },
    /// A cell of the table is no number.
    #[error(
        "line {line}, column {column} ({name}): {found:?} is no number; write it as 0.95, -100.25 or 1.2e-3, leave an unknown value as NA, and put # before remarks"
    )]
    TextInNumber {
        /// Line.
        line: usize,
        /// Column.
        column: usize,
        /// Name of the column.
        name: String,
        /// What stands there.
        found: String,
    },
    /// A cell is infinite or not a number.
    #[error(
        "line {line}, column {column} ({name}): {found:?} is not a finite number; where a calculation failed, write NA or remove the row"
    )]
    NotFinite {
        /// Line.
        line: usize,
        /// Column.
        column: usize,
        /// Name of the column.
        name: String,
        /// What stands there.
        found: String,
    },
    /// A bond length is zero or negative.
    #[error(
        "line {line}: the bond length {found} in column {name} is not positive; if that column is no bond length, name the right one with --length-column"
    )]
    LengthNotPositive {
        /// Line.
        line: usize,
        /// Name of the length column.
        name: String,
        /// The value, in the unit of the file.
        found: f64,
    },
    /// A row has no bond length.
    #[error("line {line}: no bond length in column {name}; fill it in or remove the row")]
    LengthMissing {
        /// Line.
        line: usize,
        /// Name of the length column.
        name: String,
    },
    /// Comma and point both stand for the decimal sign.
    #[error(
        "line {line}, column {column}: {found:?} does not use the decimal {expected} of the rows before; use one decimal sign in the whole file and none for thousands"
    )]
    MixedDecimalSign {
        /// Line.
        line: usize,
        /// Column.
        column: usize,
        /// What stands there.
        found: String,
        /// The decimal sign of the other rows.
        expected: &'static str,
    },
    /// Commas may separate columns or decimals.
    #[error(
        "line {line}: in {found:?} a comma may separate columns or stand for the decimal point; separate the columns with semicolons or write decimal points"
    )]
    CommaTwoMeanings {
        /// The first such line.
        line: usize,
        /// The line as written.
        found: String,
    },
    /// The unit of the bond lengths is not stated.
    #[error("the unit of the bond lengths ({}) is not stated{}; give it with --length-unit (angstrom, bohr, pm, nm) or in the header, as in R_angstrom", named(column), unknown_unit(found_unit.as_deref()))]
    LengthUnitMissing {
        /// Name of the length column.
        column: String,
        /// A unit that stands there and is not known.
        found_unit: Option<String>,
    },
    /// The unit of an energy column is not stated.
    #[error("the unit of the energies ({}) is not stated{}; give it with --energy-unit (hartree, eV, meV, kJ/mol, kcal/mol, cm-1) or in the header, as in E_hartree", named(column), unknown_unit(found_unit.as_deref()))]
    EnergyUnitMissing {
        /// Name of the energy column.
        column: String,
        /// A unit that stands there and is not known.
        found_unit: Option<String>,
    },
    /// A length unit on an energy column or the other way round.
    #[error(
        "column {column} has the unit {unit}, which is not a unit of {wanted}; correct the header, or name the bond-length column with --length-column"
    )]
    UnitOfWrongKind {
        /// Name of the column.
        column: String,
        /// The unit it states.
        unit: &'static str,
        /// What the column's name says it holds.
        wanted: &'static str,
    },
    /// No column is a bond length.
    #[error(
        "no column is a bond length: the header names {}; name it with --length-column, or begin its name with R",
        list(columns)
    )]
    NoLengthColumn {
        /// All column names.
        columns: Vec<String>,
    },
    /// No column is an energy.
    #[error(
        "no column is an energy: the header names {}; add an energy column and let its name begin with E, as in E_hartree",
        list(columns)
    )]
    NoEnergyColumn {
        /// All column names.
        columns: Vec<String>,
    },
    /// All energy columns are empty.
    #[error("column {column} holds no energy in any row; fill it in or choose another file")]
    NoEnergies {
        /// Name of the first energy column.
        column: String,
    },
    /// No column answers to a name.
    #[error(
        "no column is called {wanted:?}; choose from {}, by name, part of it, or number from 1",
        list(known)
    )]
    UnknownColumn {
        /// What was asked for.
        wanted: String,
        /// What there is.
        known: Vec<String>,
    },
    /// Several columns answer to a name.
    #[error("{wanted:?} fits {}; write more of the name, or its number from 1", list(candidates))]
    AmbiguousColumn {
        /// What was asked for.
        wanted: String,
        /// The columns it fits.
        candidates: Vec<String>,
    },
    /// A row has too few or too many cells.
    #[error(
        "line {line}: {found} columns where the other rows have {expected}; complete the row (NA for an unknown value) or put # before it"
    )]
    RaggedRow {
        /// Line.
        line: usize,
        /// Number of cells in this row.
        found: usize,
        /// Number of cells in the others.
        expected: usize,
    },
    /// The header has another number of columns than the rows.
    #[error(
        "line {line}: the header names {names} columns, the rows have {columns}; give each column one name, units in brackets or after _"
    )]
    HeaderMismatch {
        /// Line of the header.
        line: usize,
        /// Number of names.
        names: usize,
        /// Number of columns.
        columns: usize,
    },
    /// A second block of rows holds other columns than the first.
    #[error(
        "line {line}: a second table begins here with the header {header:?}, another than the first one's; put each table into a file of its own"
    )]
    SecondTable {
        /// Line of the second header.
        line: usize,
        /// That header as written.
        header: String,
    },
    /// A frame does not begin with the number of its atoms.
    #[error(
        "line {line}: {found:?} is not the number of atoms that a frame begins with; check that each frame has as many lines as its first one says"
    )]
    AtomCount {
        /// Line.
        line: usize,
        /// What stands there.
        found: String,
    },
    /// A line of a frame is no atom.
    #[error(
        "line {line}: {found:?} is not an element symbol followed by three coordinates; check that the frame has as many atoms as its first line says"
    )]
    AtomLine {
        /// Line.
        line: usize,
        /// What stands there.
        found: String,
    },
    /// The last frame is incomplete.
    #[error("line {line}: this frame announces {expected} atoms and has {found}; complete it or remove it")]
    FrameCut {
        /// Line where the frame begins.
        line: usize,
        /// Number of atoms announced.
        expected: usize,
        /// Number of atoms there.
        found: usize,
    },
    /// No comment line holds an energy.
    #[error(
        "line {line}: no energy in this comment line nor in any other; write it there as in: energy = -113.25 hartree"
    )]
    NoEnergyInComments {
        /// The first comment line.
        line: usize,
    },
    /// Energies of one file in different units.
    #[error(
        "line {line}: the energy has another unit than in line {first}, or only one of them has any; use one unit, or give it with --energy-unit"
    )]
    UnitsDiffer {
        /// Line.
        line: usize,
        /// The line it is compared with.
        first: usize,
    },
    /// Frames of different molecules.
    #[error(
        "the frame at {place} has the atoms {found}, the first one {expected}; a scan is one molecule with its atoms in one order"
    )]
    OtherAtoms {
        /// Line where the frame begins, or its number from 1.
        place: usize,
        /// Its atoms.
        found: String,
        /// Atoms of the first frame.
        expected: String,
    },
    /// More than two atoms, and no bond chosen among them.
    #[error("{} among the atoms {}; name the two atoms of the bond by their numbers with --bond, as in --bond 1,2", no_bond(chosen), atoms.join(", "))]
    BondNotChosen {
        /// What was chosen.
        chosen: Option<[usize; 2]>,
        /// The atoms with their numbers.
        atoms: Vec<String>,
    },
    /// The file begins like JSON and is none.
    #[error("line {line}, column {column}: this is not valid JSON ({problem}); export the results again")]
    NotJson {
        /// Line.
        line: usize,
        /// Column.
        column: usize,
        /// What is wrong.
        problem: JsonProblem,
    },
    /// JSON without something that a QCSchema result has.
    #[error(
        "result {place}: no {key}; a scan is read from QCSchema results with molecule and energy, one or a list of them"
    )]
    KeyMissing {
        /// Number of the result, from 1.
        place: usize,
        /// What is missing.
        key: &'static str,
    },
    /// Logs or the patterns on them are refused.
    #[error(transparent)]
    Lines(#[from] super::read::LinesError),
    /// A curve cannot be made from the columns.
    #[error(transparent)]
    Combine(#[from] super::combine::CombineError),
    /// Columns of different length (only from data made in a program).
    #[error(
        "column {column} has {found} values for {expected} bond lengths; give one for each, none where it is unknown"
    )]
    UnequalColumns {
        /// Name of the column.
        column: String,
        /// Its number of values.
        found: usize,
        /// Number of bond lengths.
        expected: usize,
    },
}

/// What is wrong with a JSON text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum JsonProblem {
    /// It breaks the rules of JSON.
    Syntax,
    /// It ends too early.
    CutShort,
    /// A value is of the wrong sort or too large.
    Value,
}

impl From<serde_json::error::Category> for JsonProblem {
    fn from(category: serde_json::error::Category) -> Self {
        use serde_json::error::Category;
        match category {
            Category::Syntax => Self::Syntax,
            Category::Eof | Category::Io => Self::CutShort,
            Category::Data => Self::Value,
        }
    }
}

impl std::fmt::Display for JsonProblem {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(match self {
            Self::Syntax => "a sign that JSON does not allow here",
            Self::CutShort => "the text ends too early",
            Self::Value => "a value that cannot be represented",
        })
    }
}

fn no_bond(chosen: &Option<[usize; 2]>) -> String {
    match chosen {
        None => "no bond is chosen".to_owned(),
        Some([a, b]) => format!("{a},{b} is no bond"),
    }
}

/// A column in a sentence; one without a header is called by its number already.
fn named(column: &str) -> String {
    if column.starts_with("column ") { column.to_owned() } else { format!("column {column}") }
}

fn unknown_unit(found: Option<&str>) -> String {
    found.map_or_else(String::new, |unit| format!(" in a unit known here ({unit:?} is none)"))
}

/// Names in quotes with commas between; a long list is cut with the count of the rest.
fn list(names: &[String]) -> String {
    const SHOWN: usize = 12;
    let mut text = names.iter().take(SHOWN).map(|n| format!("{n:?}")).collect::<Vec<_>>().join(", ");
    if names.len() > SHOWN {
        text.push_str(&format!(" and {} more", names.len() - SHOWN));
    }
    if text.is_empty() { "nothing".to_owned() } else { text }
}
