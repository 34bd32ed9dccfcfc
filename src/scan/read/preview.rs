//! A first look at a file, for choosing what its columns are: it succeeds where reading does not.

use super::ReadSettings;
use super::assemble::{self, Column};
use super::{delimited, text};

/// Bytes that are looked at.
const LOOKED_AT: usize = 64 << 10;
/// Rows, lines and letters of a line that are shown.
const ROWS: usize = 8;
const LINES: usize = 12;
const LETTERS: usize = 120;

/// What a column is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// The bond length.
    Length,
    /// An energy.
    Energy,
    /// Any other number along the curve.
    Property,
    /// Nothing that is used.
    Ignored,
}

/// A column with its first values.
#[derive(Clone, Debug, PartialEq)]
pub struct PreviewColumn {
    /// Its header, or `column 2` where there is none.
    pub name: String,
    /// What it is taken for.
    pub role: Role,
    /// The first values; none where a cell is empty.
    pub cells: Vec<Option<f64>>,
}

/// The beginning of a file, as it is understood.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Preview {
    /// The columns; none where no table is seen.
    pub columns: Vec<PreviewColumn>,
    /// What separates columns and decimals, in words.
    pub separators: Option<[&'static str; 2]>,
    /// The first lines as they stand in the file.
    pub lines: Vec<String>,
}

impl Preview {
    /// The header as one text, by which a file of the same kind is recognised; none without a header.
    pub fn header(&self) -> Option<String> {
        let named = self.columns.iter().any(|c| !c.name.starts_with("column "));
        named.then(|| self.columns.iter().map(|c| c.name.as_str()).collect::<Vec<_>>().join("\t"))
    }
}

/// Looks at the first part of a file; time and memory do not grow with its length.
pub fn preview(bytes: &[u8], settings: &ReadSettings) -> Preview {
    let part = match bytes.get(..LOOKED_AT) {
        // Not in the middle of a line.
        Some(part) => &part[..part.iter().rposition(|b| *b == b'\n').map_or(part.len(), |at| at + 1)],
        None => bytes,
    };
    let Ok((text, _)) = text::decode(part) else { return Preview::default() };
    let shown = text.lines().take(LINES).map(|line| line.chars().take(LETTERS).collect());
    let lines = shown.collect();
    let Ok(table) = delimited::parse(&text, settings) else { return Preview { lines, ..Preview::default() } };
    let names = table.header.map(|h| h.names).unwrap_or_default();
    let has_header = names.iter().any(|n| !n.full.starts_with("column "));
    let columns: Vec<Column> = names.into_iter().zip(table.columns).collect();
    let roles = assemble::roles(&columns, settings, has_header);
    let column = |((name, values), role): (Column, Role)| PreviewColumn {
        name: name.full,
        role,
        cells: values.into_iter().take(ROWS).collect(),
    };
    Preview {
        columns: columns.into_iter().zip(roles).map(column).collect(),
        separators: Some([table.format.delimiter.words(), table.format.sign.word()]),
        lines,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scan::read::{DecimalSign, Delimiter};

    #[test]
    fn a_refused_table_shows_its_columns() {
        let seen = preview(b"x,first,second\n1.0,-1.1,3\n1.1,-1.2,4\n", &ReadSettings::default());
        let names: Vec<_> = seen.columns.iter().map(|c| (c.name.as_str(), c.role)).collect();
        assert_eq!(names, [("x", Role::Length), ("first", Role::Energy), ("second", Role::Energy)]);
        assert_eq!(seen.columns[1].cells, [Some(-1.1), Some(-1.2)]);
        assert_eq!(seen.header().as_deref(), Some("x\tfirst\tsecond"));
        let chosen = ReadSettings { energy_columns: Some(vec!["second".into()]), ..ReadSettings::default() };
        let seen = preview(b"x,first,second\n1.0,-1.1,3\n", &chosen);
        assert_eq!(
            seen.columns.iter().map(|c| c.role).collect::<Vec<_>>(),
            [Role::Length, Role::Property, Role::Energy]
        );
        let ignored = ReadSettings { ignored_columns: vec!["first".into()], ..ReadSettings::default() };
        let seen = preview(b"x,first,second\n1.0,-1.1,3\n", &ignored);
        assert_eq!(seen.columns[1].role, Role::Ignored);
    }

    /// Another delimiter is another table; where there is none the lines are still shown.
    #[test]
    fn the_delimiter_chosen_is_followed() {
        let bytes = b"1,5;2,5\n1,6;2,6\n";
        let of = |delimiter, decimal_sign| {
            preview(bytes, &ReadSettings { delimiter, decimal_sign, ..ReadSettings::default() })
        };
        let told = of(None, None);
        assert_eq!(told.separators, Some(["semicolons", "comma"]));
        assert_eq!(told.columns[0].cells[0], Some(1.5));
        assert_eq!(told.header(), None);
        let wrong = of(Some(Delimiter::Tab), Some(DecimalSign::Point));
        assert!(wrong.columns.is_empty());
        assert_eq!(wrong.lines, ["1,5;2,5", "1,6;2,6"]);
        assert_eq!(preview(b"\0\x01", &ReadSettings::default()), Preview::default());
        let long = [b"R_A,E_Eh\n".to_vec(), b"1.25,-1.5\n".repeat(100_000)].concat();
        assert_eq!(preview(&long, &ReadSettings::default()).columns[0].cells.len(), ROWS);
    }
}
