//! Which column answers to a name.

use super::error::ScanError;

/// Index of the column that answers to `wanted`, among pairs of full name and name without unit.
///
/// Tried in this order, the first that finds any decides: the name as written, the name in other letter
/// case, the number from 1, a part as written, a part in other letter case.
pub(crate) fn find(names: &[(&str, &str)], wanted: &str) -> Result<usize, ScanError> {
    let wanted = wanted.trim();
    let lower = wanted.to_lowercase();
    let unknown = || ScanError::UnknownColumn {
        wanted: wanted.to_owned(),
        known: names.iter().map(|n| n.0.to_owned()).collect(),
    };
    if wanted.is_empty() {
        return Err(unknown());
    }
    type Step<'a> = &'a dyn Fn(usize, &(&str, &str)) -> bool;
    let steps: [Step<'_>; 5] = [
        &|_, n| n.0 == wanted || n.1 == wanted,
        &|_, n| n.0.to_lowercase() == lower || n.1.to_lowercase() == lower,
        &|i, _| wanted.parse() == Ok(i + 1),
        &|_, n| n.0.contains(wanted),
        &|_, n| n.0.to_lowercase().contains(&lower),
    ];
    for fits in steps {
        let found: Vec<usize> =
            names.iter().enumerate().filter(|(i, n)| fits(*i, n)).map(|(i, _)| i).collect();
        match found.as_slice() {
            [] => {}
            [one] => return Ok(*one),
            many => {
                return Err(ScanError::AmbiguousColumn {
                    wanted: wanted.to_owned(),
                    candidates: many.iter().map(|&i| names[i].0.to_owned()).collect(),
                });
            }
        }
    }
    Err(unknown())
}

#[cfg(test)]
mod tests {
    use super::*;

    const NAMES: [(&str, &str); 3] =
        [("E_RHF(hartree)", "E_RHF"), ("E_MP2(hartree)", "E_MP2"), ("E_CCSD(T)(hartree)", "E_CCSD(T)")];

    #[test]
    fn a_column_answers_to_name_label_number_and_part() {
        for wanted in ["E_MP2(hartree)", "E_MP2", "e_mp2", "2", "MP2", "mp2"] {
            assert_eq!(find(&NAMES, wanted), Ok(1), "{wanted}");
        }
        assert_eq!(find(&NAMES, "(T)"), Ok(2));
    }

    #[test]
    fn a_name_as_written_goes_before_a_part() {
        assert_eq!(find(&[("E_CI_big (eV)", "E_CI_big"), ("E_CI (eV)", "E_CI")], "E_CI"), Ok(1));
    }

    #[test]
    fn what_is_unknown_or_ambiguous_lists_the_choice() {
        let message = |wanted: &str| find(&NAMES, wanted).expect_err("refused").to_string();
        assert!(message("DFT").contains("E_RHF(hartree)") && message("DFT").contains("number from 1"));
        assert!(message("hartree").contains("fits"), "{}", message("hartree"));
        assert!(message("4").contains("no column"));
        assert!(message("  ").contains("no column"));
    }
}
