//! Rows of a delimited text: which sign separates the columns, which stands for decimals, and the numbers.

use super::number::{Cell, DecimalSign, parse_cell};

/// The most columns that are read; it bounds the memory a line of many separators takes.
pub const LIMIT_COLUMNS: usize = 1_000;

/// What separates the columns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Delimiter {
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
    const ALL: [Self; 4] = [Self::Semicolon, Self::Tab, Self::Comma, Self::Blanks];

    /// The sign, where it is a single one.
    pub(crate) const fn sign(self) -> Option<char> {
        match self {
            Self::Semicolon => Some(';'),
            Self::Tab => Some('\t'),
            Self::Comma => Some(','),
            Self::Blanks => None,
        }
    }

    /// The words used for it.
    pub(crate) const fn words(self) -> &'static str {
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
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Format {
    /// What separates the columns.
    pub delimiter: Delimiter,
    /// What stands for decimals.
    pub sign: DecimalSign,
    /// Number of columns.
    pub columns: usize,
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
    /// Reads a line.
    pub(crate) fn read(&mut self, content: &'a str, delimiter: Delimiter, sign: DecimalSign) {
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
    pub(crate) fn set(&mut self, written: Vec<&'a str>, sign: DecimalSign) {
        self.cells = written.iter().map(|cell| parse_cell(cell, sign)).collect();
        self.written = written;
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

/// The format that fits most of the sample lines; none where no line is a row of numbers.
pub(crate) fn choose_format(sample: &[&str]) -> Option<Format> {
    let mut best: Option<(usize, Format)> = None;
    let mut row = Row::default();
    for delimiter in Delimiter::ALL {
        for sign in [DecimalSign::Point, DecimalSign::Comma] {
            if delimiter == Delimiter::Comma && sign == DecimalSign::Comma {
                continue;
            }
            let mut counts: Vec<(usize, usize)> = Vec::new();
            for line in sample {
                row.read(line, delimiter, sign);
                if row.is_data() {
                    let columns = row.cells.len();
                    match counts.iter_mut().find(|c| c.0 == columns) {
                        Some(count) => count.1 += 1,
                        None => counts.push((columns, 1)),
                    }
                }
            }
            // The most frequent number of columns; the first of equals.
            let Some(&(columns, rows)) = counts.iter().rev().max_by_key(|c| c.1) else { continue };
            if best.is_none_or(|(most, _)| rows > most) {
                best = Some((rows, Format { delimiter, sign, columns }));
            }
        }
    }
    best.map(|b| b.1)
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
            assert_eq!(choose_format(sample), Some(Format { delimiter, sign, columns }), "{sample:?}");
        }
        assert_eq!(choose_format(&["one two", "three"]), None);
        assert_eq!(choose_format(&["1.0", "2.0"]), None);
    }

    #[test]
    fn quotes_keep_the_sign_inside() {
        let mut cells = Vec::new();
        Delimiter::Comma.split("\"R, bond (A)\", \"E\"", &mut cells);
        assert_eq!(cells, ["R, bond (A)", "E"]);
    }
}
