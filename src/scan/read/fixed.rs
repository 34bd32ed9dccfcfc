//! Columns of fixed width: a cell left blank shows by the place of the others.

use super::table::{Delimiter, Format, Row};
use std::ops::Range;

/// Where each column stands in its line.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Places(Vec<Range<usize>>);

impl Places {
    /// The places of the columns, told from complete rows; none unless at least two of them keep all
    /// columns apart.
    pub(crate) fn of(sample: &[&str], format: &Format) -> Option<Self> {
        if format.delimiter != Delimiter::Blanks {
            return None;
        }
        let mut row = Row::default();
        let (mut places, mut rows): (Vec<Range<usize>>, usize) = (Vec::new(), 0);
        for line in sample {
            row.read_as(line, format);
            let Some(words) = words(line).filter(|w| row.is_data() && w.len() == format.columns) else {
                continue;
            };
            rows += 1;
            if places.is_empty() {
                places = words;
            } else {
                for (place, word) in places.iter_mut().zip(words) {
                    *place = place.start.min(word.start)..place.end.max(word.end);
                }
            }
        }
        let apart = places.windows(2).all(|pair| pair[0].end < pair[1].start);
        (rows > 1 && apart).then_some(Self(places))
    }

    /// The cells of a row that lacks some: `""` where one is blank. None where the row is merely short: its
    /// last column must be there, or be blank up to its end.
    pub(crate) fn cells<'a>(&self, line: &'a str) -> Option<Vec<&'a str>> {
        let words = words(line)?;
        let mut cells = vec![""; self.0.len()];
        for word in words {
            let mut touched =
                self.0.iter().enumerate().filter(|(_, p)| p.start < word.end && word.start < p.end);
            let (column, _) = touched.next()?;
            if touched.next().is_some() || !cells[column].is_empty() {
                return None;
            }
            cells[column] = &line[word];
        }
        let padded = self.0.last().is_some_and(|p| line.len() >= p.end);
        padded.then_some(cells)
    }
}

/// Places of the words of a line; none where a place in the text is not a place on the screen.
fn words(line: &str) -> Option<Vec<Range<usize>>> {
    if !line.is_ascii() || line.contains('\t') {
        return None;
    }
    let start_of = |word: &str| word.as_ptr() as usize - line.as_ptr() as usize;
    Some(line.split_ascii_whitespace().map(|w| start_of(w)..start_of(w) + w.len()).collect())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scan::read::number::DecimalSign;

    const FORMAT: Format =
        Format { delimiter: Delimiter::Blanks, sign: DecimalSign::Point, columns: 3, labels: Vec::new() };

    #[test]
    fn blank_cells_are_found_by_their_place() {
        let places = Places::of(&["  0.70   -1.10    0.5", "  0.75  -12.14   10.5"], &FORMAT).expect("apart");
        assert_eq!(places.cells("  0.80            0.7"), Some(vec!["0.80", "", "0.7"]));
        assert_eq!(places.cells("  0.80   -1.12       "), Some(vec!["0.80", "-1.12", ""]));
        assert_eq!(places.cells("  0.80   -1.12"), None);
        assert_eq!(places.cells("  0.80   -1.12 11111.5555"), Some(vec!["0.80", "-1.12", "11111.5555"]));
        assert_eq!(places.cells("  0.80 -1.123456789.5"), None);
    }

    #[test]
    fn free_columns_have_no_place() {
        assert_eq!(Places::of(&["0.70 -1.10 0.5", "0.75       -1.14      0.5"], &FORMAT), None);
        assert_eq!(Places::of(&["0.70 -1.10 0.5"], &FORMAT), None);
    }
}
