//! Rows of a delimited text: which sign separates the columns, which stands for decimals, and the numbers.

use super::ReadSettings;
use super::columns::{ColumnName, Kind};
use super::number::{Cell, DecimalSign, parse_cell};
use serde::{Deserialize, Serialize};

/// The most columns that are read; it bounds the memory a line of many separators takes.
pub const LIMIT_COLUMNS: usize = 1_000;

/// What separates the columns.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Delimiter {
    /// `;`
    Semicolon,
    /// A tab, one per column.
    Tab,
    /// `,`
    Comma,
    /// Runs of blanks and tabs.
    Blanks,
}

impl Delimiter {
    /// In the order in which a tie is settled: with the first three an empty cell is possible.
    pub const ALL: [Self; 4] = [Self::Semicolon, Self::Tab, Self::Comma, Self::Blanks];

    /// The sign, where it is a single one.
    pub const fn sign(self) -> Option<char> {
        match self {
            Self::Semicolon => Some(';'),
            Self::Tab => Some('\t'),
            Self::Comma => Some(','),
            Self::Blanks => None,
        }
    }

    /// The word used for it.
    pub const fn words(self) -> &'static str {
        match self {
            Self::Semicolon => "semicolons",
            Self::Tab => "tabs",
            Self::Comma => "commas",
            Self::Blanks => "blanks",
        }
    }

    /// The cells of a line, trimmed, quotes taken off; one more than are read at most.
    pub(crate) fn split<'a>(self, content: &'a str, cells: &mut Vec<&'a str>) {
        cells.clear();
        let Some(sign) = self.sign() else {
            cells.extend(content.split_whitespace().map(unquoted).take(LIMIT_COLUMNS + 1));
            return;
        };
        if content.contains('"') {
            split_quoted(content, sign, cells);
        } else {
            cells.extend(content.split(sign).map(str::trim).take(LIMIT_COLUMNS + 1));
        }
    }
}

fn unquoted(cell: &str) -> &str {
    cell.strip_prefix('"').and_then(|c| c.strip_suffix('"')).unwrap_or(cell).trim()
}

fn split_quoted<'a>(content: &'a str, sign: char, cells: &mut Vec<&'a str>) {
    let (mut start, mut inside) = (0, false);
    for (at, c) in content.char_indices() {
        if c == '"' {
            inside = !inside;
        } else if c == sign && !inside {
            cells.push(unquoted(content[start..at].trim()));
            start = at + c.len_utf8();
            if cells.len() > LIMIT_COLUMNS {
                return;
            }
        }
    }
    cells.push(unquoted(content[start..].trim()));
}

/// How the rows are written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Format {
    /// What separates the columns.
    pub delimiter: Delimiter,
    /// What stands for decimals.
    pub sign: DecimalSign,
    /// Number of columns.
    pub columns: usize,
    /// Columns of words instead of numbers, ascending.
    pub labels: Vec<usize>,
}

/// One row taken apart: what each cell holds and how it is written.
#[derive(Default)]
pub(crate) struct Row<'a> {
    raw: Vec<&'a str>,
    /// What each cell holds.
    pub cells: Vec<Cell>,
    /// What stands there.
    pub written: Vec<&'a str>,
}

impl<'a> Row<'a> {
    /// Reads a line in a format: cells in columns of words count as empty.
    pub(crate) fn read_as(&mut self, content: &'a str, format: &Format) {
        self.read(content, format.delimiter, format.sign);
        self.blank(format);
    }

    fn blank(&mut self, format: &Format) {
        if self.cells.len() == format.columns {
            format.labels.iter().for_each(|&label| self.cells[label] = Cell::Empty);
        }
    }

    /// Reads a line.
    fn read(&mut self, content: &'a str, delimiter: Delimiter, sign: DecimalSign) {
        delimiter.split(content, &mut self.raw);
        self.cells.clear();
        self.written.clear();
        for &cell in &self.raw {
            let value = parse_cell(cell, sign);
            if value == Cell::Text && delimiter == Delimiter::Blanks {
                let parts = glued_parts(cell);
                if parts.len() > 1 && parts.iter().all(|p| matches!(parse_cell(p, sign), Cell::Number(_))) {
                    self.cells.extend(parts.iter().map(|p| parse_cell(p, sign)));
                    self.written.extend(parts);
                    continue;
                }
            }
            self.cells.push(value);
            self.written.push(cell);
        }
    }

    /// Replaces the cells by those found in another way.
    pub(crate) fn set(&mut self, written: Vec<&'a str>, format: &Format) {
        self.cells = written.iter().map(|cell| parse_cell(cell, format.sign)).collect();
        self.written = written;
        self.blank(format);
    }

    /// The columns that hold words, where the line is otherwise a row: two numbers or more beside them, and
    /// words that cannot be meant as a number, a name of a column or a unit.
    fn labels(&self) -> Option<Vec<usize>> {
        let numbers = self.cells.iter().filter(|c| matches!(c, Cell::Number(_))).count();
        let words: Vec<usize> = (0..self.cells.len()).filter(|&i| self.cells[i] == Cell::Text).collect();
        let fine = numbers > 1 && !words.is_empty() && words.iter().all(|&i| is_label(self.written[i]));
        fine.then_some(words)
    }

    /// Whether the line is a row of a table: two or more cells, no text, at least one number.
    pub(crate) fn is_data(&self) -> bool {
        self.cells.len() > 1
            && !self.cells.contains(&Cell::Text)
            && self.cells.iter().any(|c| matches!(c, Cell::Number(_) | Cell::NotFinite))
    }

    /// Whether no cell holds anything.
    pub(crate) fn is_blank(&self) -> bool {
        self.cells.iter().all(|c| *c == Cell::Empty)
    }
}

/// In columns of fixed width a negative number may touch the one before it: `1.0000-100.25`.
fn glued_parts(cell: &str) -> Vec<&str> {
    let (mut parts, mut start) = (Vec::new(), 0);
    let bytes = cell.as_bytes();
    for at in 1..bytes.len() {
        if matches!(bytes[at], b'-' | b'+') && (bytes[at - 1].is_ascii_digit() || bytes[at - 1] == b'.') {
            parts.push(&cell[start..at]);
            start = at;
        }
    }
    parts.push(&cell[start..]);
    parts
}

/// Whether a cell is a word: it begins with a letter and names no quantity that a scan has, or is a date.
fn is_label(cell: &str) -> bool {
    let date = |sign: char| {
        let parts: Vec<&str> = cell.split(sign).collect();
        parts.len() == 3 && parts.iter().all(|p| !p.is_empty() && p.bytes().all(|b| b.is_ascii_digit()))
    };
    let word = cell.starts_with(char::is_alphabetic)
        && matches!(
            ColumnName::parse(cell),
            ColumnName { kind: Kind::Unknown | Kind::Property, unit: None, .. }
        );
    word || date('-') || date('/') || date(':')
}

/// Rows that must agree before a column of words is believed.
const LABELLED_ROWS: usize = 3;

/// The format that fits most of the sample lines, among those the settings allow; none where no line is a
/// row of numbers.
pub(crate) fn choose_format(sample: &[&str], settings: &ReadSettings) -> Option<Format> {
    let mut best: Option<(usize, Format)> = None;
    let mut labelled: Option<(usize, Format)> = None;
    let keep = |best: &mut Option<(usize, Format)>, rows: usize, format: Format| {
        if best.as_ref().is_none_or(|(most, _)| rows > *most) {
            *best = Some((rows, format));
        }
    };
    let mut row = Row::default();
    for delimiter in Delimiter::ALL.into_iter().filter(|d| settings.delimiter.is_none_or(|s| s == *d)) {
        for sign in DecimalSign::ALL.into_iter().filter(|d| settings.decimal_sign.is_none_or(|s| s == *d)) {
            if delimiter == Delimiter::Comma && sign == DecimalSign::Comma {
                continue;
            }
            let mut counts: Vec<((usize, Vec<usize>), usize)> = Vec::new();
            for line in sample {
                row.read(line, delimiter, sign);
                let labels = if row.is_data() { Some(Vec::new()) } else { row.labels() };
                if let Some(labels) = labels {
                    let shape = (row.cells.len(), labels);
                    match counts.iter_mut().find(|c| c.0 == shape) {
                        Some(count) => count.1 += 1,
                        None => counts.push((shape, 1)),
                    }
                }
            }
            // The most frequent shape; the first of equals.
            for with_labels in [false, true] {
                let alike = counts.iter().rev().filter(|c| c.0.1.is_empty() != with_labels);
                let Some(((columns, labels), rows)) = alike.max_by_key(|c| c.1) else { continue };
                let format = Format { delimiter, sign, columns: *columns, labels: labels.clone() };
                keep(if with_labels { &mut labelled } else { &mut best }, *rows, format);
            }
        }
    }
    let plain_rows = best.as_ref().map_or(0, |b| b.0);
    let labelled = labelled.filter(|l| l.0 >= LABELLED_ROWS && l.0 > plain_rows);
    labelled.or(best).map(|b| b.1)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_format_is_found() {
        for (sample, delimiter, sign, columns) in [
            (&["R,E", "0.7,-1.1", "0.8,-1.2"][..], Delimiter::Comma, DecimalSign::Point, 2),
            (&["0,7;-1,1", "0,8;-1,2"][..], Delimiter::Semicolon, DecimalSign::Comma, 2),
            (&["0.7\t-1.1\t", "0.8\t-1.2\t3"][..], Delimiter::Tab, DecimalSign::Point, 3),
            (&["0,7\t-1,1"][..], Delimiter::Tab, DecimalSign::Comma, 2),
            (&["  0.7 \t -1.1", " 0.8   -1.2"][..], Delimiter::Blanks, DecimalSign::Point, 2),
            (&["0,7 -1,1", "0,8 1,2"][..], Delimiter::Blanks, DecimalSign::Comma, 2),
            (&["0.7, -1.1", "0.8, -1.2"][..], Delimiter::Comma, DecimalSign::Point, 2),
            (&["0.700-100.1234", "0.800-100.2345"][..], Delimiter::Blanks, DecimalSign::Point, 2),
            (&["\"0.7\",\"-1.1\""][..], Delimiter::Comma, DecimalSign::Point, 2),
        ] {
            let format = Format { delimiter, sign, columns, labels: Vec::new() };
            assert_eq!(choose_format(sample, &ReadSettings::default()), Some(format), "{sample:?}");
        }
        assert_eq!(choose_format(&["one two", "three"], &ReadSettings::default()), None);
        assert_eq!(choose_format(&["1.0", "2.0"], &ReadSettings::default()), None);
    }

    #[test]
    fn columns_of_words_are_seen() {
        let chosen =
            |sample: &[&str]| choose_format(sample, &ReadSettings::default()).map(|f| (f.columns, f.labels));
        let rows = ["tight 0.7 -1.1", "loose 0.8 -1.2", "tight 0.9 -1.1"];
        assert_eq!(chosen(&rows), Some((3, vec![0])));
        assert_eq!(
            chosen(&["0.7,-1.1,a,2024-01-05", "1,2,b,2024-01-06", "2,3,c,2024-01-07"]),
            Some((4, vec![2, 3]))
        );
        // Rows that begin with names of quantities are a table lying on its side.
        assert_eq!(chosen(&["r 0.7 0.8 0.9", "E -1.1 -1.2 -1.1", "V 1 2 3"]), None);
        assert_eq!(chosen(&rows[..2]), None);
        assert_eq!(chosen(&["0.7 O.1", "0.8 O.2", "0.9 O.3"]), None);
    }

    /// What the user says goes before what the lines look like.
    #[test]
    fn a_delimiter_can_be_chosen() {
        let lines = ["0,70 -1,10", "0,75 -1,14"];
        let settings = ReadSettings { delimiter: Some(Delimiter::Comma), ..ReadSettings::default() };
        assert_eq!(choose_format(&lines, &settings), None);
        let settings = ReadSettings { decimal_sign: Some(DecimalSign::Comma), ..ReadSettings::default() };
        assert_eq!(choose_format(&lines, &settings).map(|f| f.columns), Some(2));
    }

    #[test]
    fn quotes_keep_the_sign_inside() {
        let mut cells = Vec::new();
        Delimiter::Comma.split("\"R, bond (A)\", \"E\"", &mut cells);
        assert_eq!(cells, ["R, bond (A)", "E"]);
    }
}
