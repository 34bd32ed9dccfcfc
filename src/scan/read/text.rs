//! From bytes to lines: encodings, line ends, comments.

use crate::notice::{Code, Notice};
use crate::scan::error::ScanError;

/// The most bytes that are read: a scan of a million rows with ten columns fits.
pub const LIMIT_BYTES: usize = 64 << 20;

/// Bytes that are looked at together.
const BLOCK: usize = 256;

/// The text of a file and what decoding remarked.
///
/// UTF-8 and, with a byte-order mark, UTF-16 are decoded as such; anything else is taken as Latin-1,
/// with a notice, since every byte has a meaning there.
///
/// # Errors
/// Empty, too large, or holding bytes that no text has.
pub(crate) fn decode(bytes: &[u8]) -> Result<(String, Option<Notice>), ScanError> {
    if bytes.len() > LIMIT_BYTES {
        return Err(ScanError::TooLarge { found_bytes: bytes.len(), limit_bytes: LIMIT_BYTES });
    }
    let (text, notice) = match bytes {
        [0xff, 0xfe, rest @ ..] => (utf16(rest, u16::from_le_bytes), Some(encoding("UTF-16"))),
        [0xfe, 0xff, rest @ ..] => (utf16(rest, u16::from_be_bytes), Some(encoding("UTF-16"))),
        _ => {
            let body = bytes.strip_prefix(&[0xef, 0xbb, 0xbf]).unwrap_or(bytes);
            let offset = bytes.len() - body.len();
            // Whole blocks are asked first: the machine then looks at many bytes at a time.
            let suspect = body
                .chunks(BLOCK)
                .position(|block| block.iter().fold(false, |found, &b| found | is_never_text(b)));
            if let Some(block) = suspect
                && let Some(at) = body[block * BLOCK..].iter().position(|&b| is_never_text(b))
            {
                let at = block * BLOCK + at;
                return Err(ScanError::Binary { offset: at + offset, value: body[at] });
            }
            match std::str::from_utf8(body) {
                Ok(text) => (text.to_owned(), None),
                Err(_) => (body.iter().map(|&b| char::from(b)).collect(), Some(encoding("Latin-1"))),
            }
        }
    };
    if text.trim().is_empty() { Err(ScanError::Empty) } else { Ok((text, notice)) }
}

fn encoding(name: &str) -> Notice {
    Notice::info(
        Code::TextEncoding,
        format!("The file is not UTF-8; it was read as {name}. Check names with accents or the sign Å."),
    )
}

fn utf16(bytes: &[u8], unit: fn([u8; 2]) -> u16) -> String {
    let units = bytes.chunks_exact(2).map(|pair| unit([pair[0], pair[1]]));
    char::decode_utf16(units).map(|c| c.unwrap_or(char::REPLACEMENT_CHARACTER)).collect()
}

/// Control bytes other than tab, line ends, form feed, end-of-file mark of old systems.
const fn is_never_text(byte: u8) -> bool {
    (byte < 9) | (byte == 11) | ((byte > 13) & (byte < 32) & (byte != 26)) | (byte == 127)
}

/// One line of a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Line<'a> {
    /// Number of the line, from 1.
    pub number: usize,
    /// All of it.
    pub raw: &'a str,
    /// What stands before a comment sign.
    pub content: &'a str,
    /// What stands behind the comment sign.
    pub comment: Option<&'a str>,
}

impl<'a> Line<'a> {
    /// The comment of a line that holds nothing else.
    pub(crate) fn whole_comment(&self) -> Option<&'a str> {
        self.comment.filter(|_| self.content.trim().is_empty())
    }

    /// Whether the line holds anything before a comment.
    pub(crate) fn has_content(&self) -> bool {
        self.content.bytes().next().is_some_and(|b| b.is_ascii_graphic()) || !self.content.trim().is_empty()
    }
}

/// The lines of a text, ended by LF, CR LF or CR alone, comments (# or !) cut off.
pub(crate) fn lines(text: &str) -> impl Iterator<Item = Line<'_>> {
    let mut start = Some(0);
    let mut number = 0;
    std::iter::from_fn(move || {
        let from = start?;
        let bytes = &text.as_bytes()[from..];
        // One pass over the bytes: all four signs are ASCII, so every cut is at a character.
        let mut comment = None;
        let mut end = bytes.len();
        for (at, byte) in bytes.iter().enumerate() {
            match byte {
                b'\n' | b'\r' => {
                    end = at;
                    break;
                }
                b'#' | b'!' if comment.is_none() => comment = Some(at),
                _ => {}
            }
        }
        let skipped = if bytes[end..].starts_with(b"\r\n") { 2 } else { 1 };
        let next = from + end + skipped;
        start = (next < text.len()).then_some(next);
        number += 1;
        // The end-of-file mark of old systems (byte 26) is no content.
        let line = &text[from..from + end];
        let line = if line.ends_with('\u{1a}') { line.trim_end_matches('\u{1a}') } else { line };
        Some(match comment.filter(|&at| at < line.len()) {
            None => Line { number, raw: line, content: line, comment: None },
            Some(at) => Line {
                number,
                raw: line,
                content: &line[..at],
                comment: Some(line[at..].trim_start_matches(['#', '!']).trim()),
            },
        })
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn encodings_are_recognised() {
        assert_eq!(decode(b"\xef\xbb\xbfr,E\n"), Ok(("r,E\n".to_owned(), None)));
        let (text, notice) = decode(b"r [\xc5]\n").expect("Latin-1");
        assert_eq!(text, "r [Å]\n");
        assert_eq!(notice.map(|n| n.code), Some(Code::TextEncoding));
        let (text, notice) = decode(b"\xff\xfer\0,\0E\0").expect("UTF-16");
        assert_eq!((text.as_str(), notice.is_some()), ("r,E", true));
    }

    #[test]
    fn what_is_no_text_is_refused() {
        assert_eq!(decode(b""), Err(ScanError::Empty));
        assert_eq!(decode(b" \r\n\t"), Err(ScanError::Empty));
        assert_eq!(decode(b"PK\x03\x04"), Err(ScanError::Binary { offset: 2, value: 3 }));
        assert!(matches!(decode(&vec![b' '; LIMIT_BYTES + 1]), Err(ScanError::TooLarge { .. })));
    }

    #[test]
    fn every_line_end_counts_once() {
        let numbers: Vec<_> =
            lines("a\r\nb\rc\n\nd # x\n").map(|l| (l.number, l.content, l.comment)).collect();
        let expected = [(1, "a", None), (2, "b", None), (3, "c", None), (4, "", None), (5, "d ", Some("x"))];
        assert_eq!(numbers, expected);
        assert_eq!(lines("  ## two\n").next().and_then(|l| l.whole_comment()), Some("two"));
    }
}
