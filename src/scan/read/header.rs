//! Finding the names of the columns: in a plain line, in a comment, with a line of units below, or nowhere.

use super::columns::{ColumnName, Kind, strip_brackets};
use super::table::Delimiter;
use super::words::parse_unit;
use crate::scan::error::ScanError;

/// A line before the first row of numbers.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct TextLine<'a> {
    /// Number of the line, from 1.
    pub number: usize,
    /// Its text, without the comment sign.
    pub text: &'a str,
    /// Whether it is a comment.
    pub is_comment: bool,
}

/// The header found.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Header {
    /// Its line, from 1.
    pub line: usize,
    /// One name per column.
    pub names: Vec<ColumnName>,
}

/// Finds the header among the lines before the numbers, the nearest first, plain lines before comments.
///
/// `least` to `most` is how many names fit: trailing columns that are always empty need none.
///
/// # Errors
/// A header that names another number of columns than the rows have.
pub(crate) fn find(
    before: &[TextLine<'_>],
    delimiter: Delimiter,
    (least, most): (usize, usize),
) -> Result<Option<Header>, ScanError> {
    const LOOKED_AT: usize = 40;
    let fits = |cells: &[String]| (least..=most).contains(&cells.len());
    let mut units: Option<Vec<String>> = None;
    for is_comment in [false, true] {
        let lines = before.iter().rev().filter(|l| l.is_comment == is_comment).take(LOOKED_AT);
        for (nearness, line) in lines.enumerate() {
            let choices = splits(line, delimiter);
            if let Some(cells) = choices.iter().find(|c| fits(c) && is_line_of_units(c)) {
                units.get_or_insert_with(|| cells.clone());
                continue;
            }
            let parsed: Vec<Vec<ColumnName>> =
                choices.iter().map(|cells| cells.iter().map(|c| ColumnName::parse(c)).collect()).collect();
            let explicit = !is_comment && nearness == 0 && delimiter.sign().is_some();
            let found = choices.iter().zip(&parsed).enumerate().find(|(i, (cells, names))| {
                let taken_as_is = explicit && *i == 0 && !cells.iter().any(|c| starts_like_number(c));
                fits(cells) && (taken_as_is || is_header(names, is_comment))
            });
            if let Some((_, (_, names))) = found {
                return Ok(Some(finish(line.number, names.clone(), units)));
            }
            // Remarks may follow the names in a comment, set off by wide gaps.
            if let Some(names) =
                parsed.iter().find(|n| is_comment && n.len() > most && is_header(&n[..most], true))
            {
                return Ok(Some(finish(line.number, names[..most].to_vec(), units)));
            }
            if !is_comment && nearness == 0 && parsed.first().is_some_and(|n| is_header(n, true)) {
                let names = parsed.first().map_or(0, Vec::len);
                return Err(ScanError::HeaderMismatch { line: line.number, names, columns: least });
            }
        }
    }
    // Units alone, with no names above them, still tell what the columns are.
    Ok(units.map(|cells| Header { line: 0, names: cells.iter().map(|c| ColumnName::parse(c)).collect() }))
}

fn finish(line: usize, names: Vec<ColumnName>, units: Option<Vec<String>>) -> Header {
    let names = match units {
        Some(units) if units.len() == names.len() => {
            names.into_iter().zip(units).map(|(name, unit)| name.with_unit(&unit)).collect()
        }
        _ => names,
    };
    Header { line, names }
}

/// A name does not begin like a number: such a line is a row gone wrong.
fn starts_like_number(cell: &str) -> bool {
    cell.trim_start_matches(['+', '-', '.', ',']).starts_with(|c: char| c.is_ascii_digit())
}

/// Whether a line that stands alone reads as names of columns of a scan.
pub(crate) fn reads_as_header(line: &TextLine<'_>, delimiter: Delimiter) -> Option<Vec<ColumnName>> {
    splits(line, delimiter)
        .into_iter()
        .map(|cells| cells.iter().map(|c| ColumnName::parse(c)).collect::<Vec<_>>())
        .find(|names| names.len() > 1 && is_header(names, true))
}

/// A header names a bond length and something else, in few words each; in a plain line one unit is enough.
fn is_header(names: &[ColumnName], is_comment: bool) -> bool {
    const MOST_LETTERS: usize = 60;
    const MOST_WORDS: usize = 4;
    let short = names
        .iter()
        .all(|n| n.full.chars().count() <= MOST_LETTERS && n.full.split_whitespace().count() <= MOST_WORDS);
    let has = |kinds: &[Kind]| names.iter().any(|n| kinds.contains(&n.kind));
    let named = has(&[Kind::Length]) && has(&[Kind::Energy, Kind::Property]);
    // `distances in angstrom` in a comment is prose, which is read elsewhere, with a notice.
    let prose = is_comment && names.iter().any(|n| n.full.contains(" in "));
    short && !prose && (named || (!is_comment && names.iter().any(|n| n.unit.is_some())))
}

fn is_line_of_units(cells: &[String]) -> bool {
    cells.iter().all(|c| {
        parse_unit(strip_brackets(c)).is_some() || matches!(strip_brackets(c), "debye" | "D" | "deg")
    }) && cells.iter().any(|c| parse_unit(strip_brackets(c)).is_some())
}

/// The ways a line may be taken apart into names, the table's own delimiter first.
fn splits(line: &TextLine<'_>, delimiter: Delimiter) -> Vec<Vec<String>> {
    let text = without_lead(line.text);
    let owned = |cells: &[&str]| cells.iter().map(|c| (*c).to_owned()).collect::<Vec<_>>();
    let mut choices = Vec::new();
    let mut cells = Vec::new();
    if delimiter.sign().is_some() {
        delimiter.split(text, &mut cells);
        choices.push(owned(&cells));
    }
    choices.push(by_words(text));
    let wide: Vec<&str> =
        text.split('\t').flat_map(|part| part.split("  ")).map(str::trim).filter(|p| !p.is_empty()).collect();
    choices.push(owned(&wide));
    choices.push(after_brackets(text));
    for other in [Delimiter::Comma, Delimiter::Semicolon].into_iter().filter(|d| *d != delimiter) {
        other.split(text, &mut cells);
        choices.push(owned(&cells));
    }
    choices.retain(|c| c.iter().any(|cell| !cell.is_empty()));
    choices
}

/// `Columns: r E` without its lead.
fn without_lead(text: &str) -> &str {
    match text.split_once(':') {
        Some((lead, rest))
            if matches!(
                lead.trim().to_lowercase().as_str(),
                "columns" | "column" | "cols" | "header" | "fields"
            ) =>
        {
            rest.trim()
        }
        _ => text,
    }
}

/// Words, a unit in brackets or behind a slash kept with its name: `R (bohr)`, `E / kJ mol-1`.
fn by_words(text: &str) -> Vec<String> {
    let mut names: Vec<String> = Vec::new();
    let mut open = 0_usize;
    let mut glue = false;
    for word in text.split_whitespace() {
        let joins =
            open > 0 || glue || word.starts_with(['(', '[', '/']) || word == "mol-1" || word == "mol^-1";
        match names.last_mut() {
            Some(last) if joins => {
                last.push(' ');
                last.push_str(word);
            }
            _ => names.push(word.to_owned()),
        }
        let opened = word.matches(['(', '[']).count();
        let closed = word.matches([')', ']']).count();
        open = (open + opened).saturating_sub(closed);
        glue = word.ends_with('/');
    }
    names.iter().map(|n| n.trim_end_matches([',', ';']).to_owned()).collect()
}

/// Names of several words, each ended by its unit in brackets: `bond length (A) total energy (Eh)`.
fn after_brackets(text: &str) -> Vec<String> {
    text.split_inclusive([')', ']']).map(|p| p.trim().to_owned()).filter(|p| !p.is_empty()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(lines: &[(&str, bool)], delimiter: Delimiter, columns: usize) -> Option<Vec<String>> {
        let before: Vec<TextLine<'_>> = lines
            .iter()
            .enumerate()
            .map(|(i, (text, is_comment))| TextLine { number: i + 1, text, is_comment: *is_comment })
            .collect();
        let header = find(&before, delimiter, (columns, columns)).expect("no mismatch")?;
        Some(header.names.into_iter().map(|n| n.full).collect())
    }

    #[test]
    fn headers_are_found_in_plain_lines_and_comments() {
        for (lines, delimiter, expected) in [
            (&[("HCl, a scan", false), ("R,E", false)][..], Delimiter::Comma, &["R", "E"][..]),
            (&[("R (bohr)        E (hartree)", true)], Delimiter::Blanks, &["R (bohr)", "E (hartree)"]),
            (&[("R (bohr) E (kJ mol-1)", false)], Delimiter::Blanks, &["R (bohr)", "E (kJ mol-1)"]),
            (&[("r / A E / kJ mol-1", true)], Delimiter::Blanks, &["r / A", "E / kJ mol-1"]),
            (&[("Columns: r, E", true)], Delimiter::Blanks, &["r", "E"]),
            (
                &[("bond length (A) total energy (Eh)", false)],
                Delimiter::Blanks,
                &["bond length (A)", "total energy (Eh)"],
            ),
            (
                &[("R/bohr      mu/au   HF, CCSD(T)/aug-cc-pVTZ, field +-0.001 au", true)],
                Delimiter::Blanks,
                &["R/bohr", "mu/au"],
            ),
            (&[("R  E", false), ("(pm) (eV)", false)], Delimiter::Blanks, &["R (pm)", "E (eV)"]),
            (&[("R,E", false), ("r in angstrom, E in hartree", true)], Delimiter::Comma, &["R", "E"]),
        ] {
            let found = names(lines, delimiter, 2).expect("header");
            assert_eq!(found, expected, "{lines:?}");
        }
    }

    #[test]
    fn prose_and_titles_are_no_headers() {
        for text in [
            "HCl bond scan, CCSD(T)",
            "energies in kJ/mol, distances in Angstrom",
            "made by hand",
            "HF molecule",
        ] {
            assert_eq!(names(&[(text, true)], Delimiter::Blanks, 2), None, "{text}");
        }
        assert_eq!(names(&[("HCl scan", false)], Delimiter::Blanks, 2), None);
    }

    #[test]
    fn a_header_of_another_width_is_refused() {
        let line = TextLine { number: 3, text: "R_A,E_HF_Eh,E_MP2_Eh", is_comment: false };
        let found = find(&[line], Delimiter::Comma, (2, 2));
        assert_eq!(found, Err(ScanError::HeaderMismatch { line: 3, names: 3, columns: 2 }));
    }
}
