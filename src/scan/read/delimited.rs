//! Delimited text: from lines to a table of named columns of numbers.

use super::ReadSettings;
use super::columns::ColumnName;
use super::fixed::Places;
use super::header::{self, Header, TextLine};
use super::number::{Cell, DecimalSign, parse_cell};
use super::table::{Delimiter, Format, LIMIT_COLUMNS, Row, choose_format};
use super::text::{Line, lines};
use crate::scan::error::ScanError;

/// The most rows that are read.
pub const LIMIT_ROWS: usize = 1_000_000;

/// Lines from which the format is told.
const SAMPLE_LINES: usize = 400;
/// Comment and title lines that are searched for names, units and atoms.
const LIMIT_TEXT_LINES: usize = 1_000;
/// Longest comment or title that is looked at: a header of as many columns as are read fits.
const LIMIT_TEXT_BYTES: usize = 64 << 10;

/// A table as read.
#[derive(Debug)]
pub(crate) struct Table<'a> {
    /// The header found, if any; then one name per column.
    pub header: Option<Header>,
    /// The values, column by column.
    pub columns: Vec<Vec<Option<f64>>>,
    /// What separates columns and decimals.
    pub format: Format,
    /// Line of each row, from 1.
    pub row_lines: Vec<usize>,
    /// Remarks behind rows, with the row from 0.
    pub row_remarks: Vec<(usize, String)>,
    /// Comment and title lines.
    pub prose: Vec<TextLine<'a>>,
    /// Names of the columns of words, which are left out.
    pub left_out: Vec<String>,
}

/// Reads delimited text.
///
/// # Errors
/// No rows, a cell that is no finite number, a row or header of another width, a second table.
pub(crate) fn parse<'a>(text: &'a str, settings: &ReadSettings) -> Result<Table<'a>, ScanError> {
    let sample: Vec<Line<'_>> = lines(text).filter(Line::has_content).take(SAMPLE_LINES).collect();
    let contents: Vec<&str> = sample.iter().map(|l| l.content).collect();
    let format = choose_format(&contents, settings).ok_or_else(|| no_table(text, &sample))?;
    if format.columns > LIMIT_COLUMNS {
        let line = first_data_line(&sample, &format);
        return Err(ScanError::TooManyColumns { line, limit_columns: LIMIT_COLUMNS });
    }
    if settings.delimiter.is_none() {
        check_commas(&sample, &format)?;
    }
    let used = used_columns(&contents, &format);
    let places = Places::of(&contents, &format);
    let mut reader = Reader::new(format, used, places);
    let mut row = Row::default();
    for line in lines(text) {
        reader.line(line, &mut row)?;
    }
    reader.finish()
}

fn first_data_line(sample: &[Line<'_>], format: &Format) -> usize {
    let mut row = Row::default();
    let found = sample.iter().find(|line| {
        row.read_as(line.content, format);
        row.is_data() && row.cells.len() == format.columns
    });
    found.map_or(1, |line| line.number)
}

/// Why no line of the sample is a row of a table.
fn no_table(text: &str, sample: &[Line<'_>]) -> ScanError {
    let mut row = Row::default();
    let mut single = None;
    for line in sample {
        for delimiter in Delimiter::ALL {
            let format = Format { delimiter, sign: DecimalSign::Point, columns: 0, labels: Vec::new() };
            row.read_as(line.content, &format);
            let number = |c: &Cell| matches!(c, Cell::Number(_));
            if row.cells.len() == 1 && row.cells.iter().all(number) {
                single.get_or_insert(line.number);
            } else if row.cells.len() > 1
                && row.cells.iter().any(number)
                && let Some(error) = bad_cell(&row, line.number, DecimalSign::Point, &[])
            {
                return error;
            }
        }
    }
    if let Some(line) = single {
        return ScanError::OneColumn { line };
    }
    let header = sample.iter().rev().find(|line| {
        let text = TextLine { number: line.number, text: line.content, is_comment: false };
        [Delimiter::Comma, Delimiter::Semicolon, Delimiter::Tab, Delimiter::Blanks]
            .iter()
            .any(|d| header::reads_as_header(&text, *d).is_some())
    });
    match header {
        Some(line) => ScanError::OnlyHeader { line: line.number, header: shortened(line.content) },
        None => ScanError::NoNumbers { lines: lines(text).count() },
    }
}

/// The first cell of a row that is no finite number.
fn bad_cell(row: &Row<'_>, line: usize, sign: DecimalSign, names: &[ColumnName]) -> Option<ScanError> {
    let (index, cell) =
        row.cells.iter().enumerate().find(|(_, c)| matches!(c, Cell::Text | Cell::NotFinite))?;
    let column = index + 1;
    let found = shortened(row.written[index]);
    let name = names.get(index).map_or_else(|| format!("column {column}"), |n| n.full.clone());
    let other = if sign == DecimalSign::Point { DecimalSign::Comma } else { DecimalSign::Point };
    Some(match cell {
        Cell::NotFinite => ScanError::NotFinite { line, column, name, found },
        _ if matches!(parse_cell(&found, other), Cell::Number(_)) => {
            ScanError::MixedDecimalSign { line, column, found, expected: sign.word() }
        }
        _ => ScanError::TextInNumber { line, column, name, found },
    })
}

/// A text cut to what a message can show.
fn shortened(text: &str) -> String {
    const SHOWN: usize = 60;
    let text = text.trim();
    match text.char_indices().nth(SHOWN) {
        Some((at, _)) => format!("{}...", &text[..at]),
        None => text.to_owned(),
    }
}

/// `0,74,-1,13` may be two numbers with decimal commas or four whole ones: not for us to say.
fn check_commas(sample: &[Line<'_>], format: &Format) -> Result<(), ScanError> {
    if format.delimiter != Delimiter::Comma || format.columns < 4 || format.columns % 2 == 1 {
        return Ok(());
    }
    let whole = |cell: &str| {
        let digits = cell.trim_start_matches(['+', '-']);
        !digits.is_empty() && digits.bytes().all(|b| b.is_ascii_digit())
    };
    let mut row = Row::default();
    let mut first = None;
    for line in sample {
        row.read_as(line.content, format);
        if !row.is_data() {
            // A header with as many names as cells settles that the commas separate.
            if row.cells.len() == format.columns && !row.cells.iter().any(|c| matches!(c, Cell::Number(_))) {
                return Ok(());
            }
            continue;
        }
        if !row.written.iter().all(|c| whole(c)) {
            return Ok(());
        }
        first.get_or_insert(line);
    }
    first.map_or(Ok(()), |line| {
        Err(ScanError::CommaTwoMeanings { line: line.number, found: shortened(line.content) })
    })
}

/// Number of columns without the trailing ones that are empty in every row of the sample.
fn used_columns(sample: &[&str], format: &Format) -> usize {
    let mut row = Row::default();
    let mut used = 2.min(format.columns);
    for line in sample {
        row.read_as(line, format);
        if row.is_data() && row.cells.len() == format.columns {
            used = used.max(row.cells.iter().rposition(|c| *c != Cell::Empty).map_or(0, |i| i + 1));
        }
    }
    used
}

/// The state while the lines go by.
struct Reader<'a> {
    used: usize,
    places: Option<Places>,
    before: Vec<TextLine<'a>>,
    header: Option<Header>,
    header_text: Option<&'a str>,
    table: Table<'a>,
    /// Numbers of the row at hand.
    plain: Vec<f64>,
}

impl<'a> Reader<'a> {
    fn new(format: Format, used: usize, places: Option<Places>) -> Self {
        let table = Table {
            header: None,
            columns: vec![Vec::new(); format.columns],
            format,
            row_lines: Vec::new(),
            row_remarks: Vec::new(),
            prose: Vec::new(),
            left_out: Vec::new(),
        };
        Self { used, places, before: Vec::new(), header: None, header_text: None, table, plain: Vec::new() }
    }

    fn begun(&self) -> bool {
        !self.table.row_lines.is_empty()
    }

    fn line(&mut self, line: Line<'a>, row: &mut Row<'a>) -> Result<(), ScanError> {
        if let Some(text) = line.whole_comment() {
            return self.text(TextLine { number: line.number, text, is_comment: true });
        }
        if !line.has_content() {
            return Ok(());
        }
        if self.begun() && self.plain_row(&line) {
            return Ok(());
        }
        row.read_as(line.content, &self.table.format);
        let data = row.is_data();
        if !self.begun() {
            if !data {
                let text = line.content.trim();
                return self.text(TextLine { number: line.number, text, is_comment: false });
            }
            self.find_header()?;
        } else if row.is_blank() || (!data && self.header_again(&line)?) {
            return Ok(());
        }
        self.row(line, row)
    }

    /// Takes a row of nothing but plain numbers, the usual one of a long table; false for any other, which is
    /// then read with all care. What it takes, the careful way reads as the same numbers.
    fn plain_row(&mut self, line: &Line<'a>) -> bool {
        let Some(sign) = self.table.format.delimiter.sign().map(|sign| sign as u8) else { return false };
        let columns = self.table.format.columns;
        let room = self.table.row_lines.len() < LIMIT_ROWS;
        if line.comment.is_some() || self.table.format.sign != DecimalSign::Point || !room {
            return false;
        }
        self.plain.clear();
        let mut rest = Some(line.content);
        while let Some(text) = rest {
            let end = text.bytes().position(|b| b == sign);
            rest = end.map(|at| &text[at + 1..]);
            let cell = text[..end.unwrap_or(text.len())].trim_ascii();
            let ends_in_digit = cell.as_bytes().last().is_some_and(u8::is_ascii_digit);
            match cell.parse::<f64>() {
                Ok(value) if ends_in_digit && value.is_finite() && self.plain.len() < columns => {
                    self.plain.push(value);
                }
                _ => return false,
            }
        }
        if self.plain.len() != columns {
            return false;
        }
        self.table.row_lines.push(line.number);
        for (column, value) in self.table.columns.iter_mut().zip(&self.plain) {
            column.push(Some(*value));
        }
        true
    }

    /// A comment or a title.
    fn text(&mut self, text: TextLine<'a>) -> Result<(), ScanError> {
        // A line of many pages holds no name, unit or atom.
        if text.text.is_empty() || text.text.len() > LIMIT_TEXT_BYTES {
            return Ok(());
        }
        if self.begun() && text.is_comment {
            self.refuse_other_header(&text)?;
        }
        if self.table.prose.len() < LIMIT_TEXT_LINES {
            self.table.prose.push(text);
        }
        if !self.begun() {
            if self.before.len() == LIMIT_TEXT_LINES {
                // The header stands near the numbers: the oldest lines may go.
                self.before.drain(..LIMIT_TEXT_LINES / 2);
            }
            self.before.push(text);
        }
        Ok(())
    }

    fn find_header(&mut self) -> Result<(), ScanError> {
        self.header =
            header::find(&self.before, self.table.format.delimiter, (self.used, self.table.format.columns))?;
        let line = self.header.as_ref().map_or(0, |h| h.line);
        self.header_text = self.before.iter().find(|t| t.number == line).map(|t| t.text);
        // A plain line between header and numbers, or right above numbers without a header, that is as
        // wide as a row and holds a number is a row gone wrong, not a title.
        let last_plain = self.before.iter().rev().find(|t| !t.is_comment).map_or(0, |t| t.number);
        let mut row = Row::default();
        for text in self.before.iter().filter(|t| !t.is_comment && t.number > line) {
            row.read_as(text.text, &self.table.format);
            let numbers = row.cells.iter().any(|c| matches!(c, Cell::Number(_)));
            let above = self.header.is_some() || text.number == last_plain;
            if above
                && numbers
                && row.cells.len() == self.table.format.columns
                && let Some(error) = bad_cell(&row, text.number, self.table.format.sign, self.names())
            {
                return Err(error);
            }
        }
        // Titles are prose, the header itself is not.
        self.table.prose.retain(|t| t.number != line);
        Ok(())
    }

    fn names(&self) -> &[ColumnName] {
        self.header.as_ref().map_or(&[], |h| &h.names)
    }

    /// Whether a plain line repeats the header, as tables joined end to end do.
    fn header_again(&self, line: &Line<'a>) -> Result<bool, ScanError> {
        let text = line.content.trim();
        if self.header_text == Some(text) {
            return Ok(true);
        }
        self.refuse_other_header(&TextLine { number: line.number, text, is_comment: false })?;
        Ok(false)
    }

    /// A header of other columns below rows of numbers begins a second table.
    fn refuse_other_header(&self, text: &TextLine<'_>) -> Result<(), ScanError> {
        let starts_like_one = text.text.starts_with(|c: char| !c.is_ascii_digit());
        if !starts_like_one || self.header_text == Some(text.text) {
            return Ok(());
        }
        let Some(names) = header::reads_as_header(text, self.table.format.delimiter) else { return Ok(()) };
        let same = self.names().len() == names.len()
            && self.names().iter().zip(&names).all(|(a, b)| a.label == b.label);
        if same || names.len() < self.used || names.len() > self.table.format.columns && text.is_comment {
            return Ok(());
        }
        Err(ScanError::SecondTable { line: text.number, header: shortened(text.text) })
    }

    fn row(&mut self, line: Line<'a>, row: &mut Row<'a>) -> Result<(), ScanError> {
        if row.cells.len() < self.table.format.columns
            && let Some(cells) = self.places.as_ref().and_then(|p| p.cells(line.content))
        {
            row.set(cells, &self.table.format);
        }
        if row.cells.len() != self.table.format.columns {
            // A row that begins with a word is a remark: that explains more than the count does.
            if row.cells.first() == Some(&Cell::Text)
                && let Some(error) = bad_cell(row, line.number, self.table.format.sign, self.names())
            {
                return Err(error);
            }
            let (found, expected) = (row.cells.len(), self.table.format.columns);
            return Err(ScanError::RaggedRow { line: line.number, found, expected });
        }
        if let Some(error) = bad_cell(row, line.number, self.table.format.sign, self.names()) {
            return Err(error);
        }
        if self.table.row_lines.len() == LIMIT_ROWS {
            return Err(ScanError::TooManyRows { line: line.number, limit_rows: LIMIT_ROWS });
        }
        let words = self.table.format.labels.iter().map(|&label| row.written[label]);
        let remarks: Vec<&str> = words.chain(line.comment).filter(|c| !c.is_empty()).collect();
        if !remarks.is_empty() {
            self.table.row_remarks.push((self.table.row_lines.len(), remarks.join(", ")));
        }
        self.table.row_lines.push(line.number);
        for (column, cell) in self.table.columns.iter_mut().zip(&row.cells) {
            column.push(if let Cell::Number(value) = cell { Some(*value) } else { None });
        }
        Ok(())
    }

    /// Names for all columns; columns without a name and without a value are dropped.
    fn finish(mut self) -> Result<Table<'a>, ScanError> {
        let mut header = self.header.take();
        let names = header.as_mut().map(|h| std::mem::take(&mut h.names)).unwrap_or_default();
        let line = header.as_ref().map(|h| h.line);
        let mut kept_names = Vec::new();
        let mut kept_columns = Vec::new();
        for (index, column) in self.table.columns.into_iter().enumerate() {
            let name = names.get(index).filter(|n| !n.full.is_empty()).cloned();
            if self.table.format.labels.contains(&index) {
                let name = name.unwrap_or_else(|| ColumnName::unnamed(index + 1));
                self.table.left_out.push(name.full);
            } else if name.is_some() || column.iter().any(Option::is_some) {
                kept_names.push(name.unwrap_or_else(|| ColumnName::unnamed(index + 1)));
                kept_columns.push(column);
            }
        }
        self.table.columns = kept_columns;
        self.table.header = Some(Header { line: line.unwrap_or(0), names: kept_names });
        Ok(self.table)
    }
}
