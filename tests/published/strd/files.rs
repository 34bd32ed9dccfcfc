//! Reads the data files as they are printed.

use std::path::PathBuf;

/// One set.
pub struct Set {
    pub name: String,
    /// Start 1 (hard) and start 2 (easy); none for linear sets.
    pub starts: Vec<Vec<f64>>,
    pub certified: Vec<f64>,
    /// Certified standard errors.
    pub errors: Vec<f64>,
    /// Certified residual sum of squares.
    pub square_sum: f64,
    /// Predictors of each observation.
    pub x: Vec<Vec<f64>>,
    /// Response of each observation.
    pub y: Vec<f64>,
}

/// The data begin on this line of every file.
const FIRST_DATA_LINE: usize = 61;

pub fn nonlinear() -> Vec<Set> {
    texts("nonlinear").into_iter().map(|(name, text)| set(name, &text, 'b')).collect()
}

pub fn linear() -> Vec<Set> {
    texts("linear").into_iter().map(|(name, text)| set(name, &text, 'B')).collect()
}

/// Name and text of each file of a folder, in order of the names.
fn texts(folder: &str) -> Vec<(String, String)> {
    let folder: PathBuf =
        [env!("CARGO_MANIFEST_DIR"), "tests/published/reference/nist-strd", folder].iter().collect();
    let mut files: Vec<PathBuf> =
        std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    files
        .iter()
        .map(|path| {
            (path.file_stem().unwrap().to_str().unwrap().to_owned(), std::fs::read_to_string(path).unwrap())
        })
        .collect()
}

fn numbers(text: &str) -> Vec<f64> {
    text.split_whitespace().map(|word| word.parse().unwrap_or_else(|_| panic!("no number: {word}"))).collect()
}

fn set(name: String, text: &str, letter: char) -> Set {
    let mut set = Set {
        starts: Vec::new(),
        certified: Vec::new(),
        errors: Vec::new(),
        square_sum: f64::NAN,
        x: Vec::new(),
        y: Vec::new(),
        name,
    };
    if letter == 'b' {
        set.starts = vec![Vec::new(), Vec::new()];
    }
    for (k, line) in text.lines().enumerate() {
        let line = line.trim();
        if k + 1 >= FIRST_DATA_LINE {
            let mut row = numbers(line);
            if row.is_empty() {
                continue;
            }
            // Nelson's model is that of log y.
            let y = row.remove(0);
            set.y.push(if set.name == "Nelson" { y.ln() } else { y });
            set.x.push(row);
        } else if let Some(rest) = line.strip_prefix("Residual Sum of Squares:") {
            set.square_sum = numbers(rest)[0];
        } else if let Some(rest) = line.strip_prefix("Residual ").filter(|_| letter == 'B') {
            let words: Vec<&str> = rest.split_whitespace().collect();
            if words.len() == 3 {
                set.square_sum = words[1].parse().unwrap();
            }
        } else if let Some(rest) = parameter_row(line, letter) {
            let row = numbers(rest);
            let (certified, errors) = (row[row.len() - 2], row[row.len() - 1]);
            set.certified.push(certified);
            set.errors.push(errors);
            set.starts.iter_mut().zip(&row).for_each(|(start, &value)| start.push(value));
        }
    }
    assert!(set.square_sum.is_finite() && !set.certified.is_empty() && !set.y.is_empty(), "{}", set.name);
    set
}

/// What follows `b1 =` (nonlinear) or `B0` (linear) at the start of a line.
fn parameter_row(line: &str, letter: char) -> Option<&str> {
    let rest = line.strip_prefix(letter)?.trim_start_matches(|c: char| c.is_ascii_digit());
    let rest = if letter == 'b' { rest.trim_start().strip_prefix('=')? } else { rest };
    rest.starts_with(' ').then_some(rest)
}
