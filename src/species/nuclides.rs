//! The table of isotopes: masses and abundances, parsed once from `assets/isotopes.csv`.

use std::sync::OnceLock;

/// One line of the table.
#[derive(Clone, Debug, PartialEq)]
pub struct Isotope {
    /// Element symbol.
    pub symbol: &'static str,
    /// Number of protons.
    pub atomic_number: u32,
    /// Number of nucleons.
    pub mass_number: u32,
    /// Mass of the neutral atom in u (AME2020).
    pub mass_u: f64,
    /// Standard uncertainty of the mass in u.
    pub mass_uncertainty_u: f64,
    /// Natural abundance in mole percent (NUBASE2020); none where the isotope does not occur.
    pub abundance_percent: Option<f64>,
    /// Nuclear spin as printed, e.g. `3/2`; empty where unknown.
    pub nuclear_spin: &'static str,
}

/// All isotopes known here, by atomic number, then mass number.
pub fn isotopes() -> &'static [Isotope] {
    static TABLE: OnceLock<Vec<Isotope>> = OnceLock::new();
    // A line that does not parse would be dropped; a test counts the lines of the asset.
    TABLE.get_or_init(|| include_str!("../../assets/isotopes.csv").lines().filter_map(parse_line).collect())
}

fn parse_line(line: &'static str) -> Option<Isotope> {
    if line.starts_with('#') {
        return None;
    }
    let cells: Vec<&'static str> = line.trim_end().split(',').collect();
    let [symbol, atomic_number, mass_number, mass, uncertainty, abundance, nuclear_spin] = cells.as_slice()
    else {
        return None;
    };
    Some(Isotope {
        symbol,
        atomic_number: atomic_number.parse().ok()?,
        mass_number: mass_number.parse().ok()?,
        mass_u: mass.parse().ok()?,
        mass_uncertainty_u: uncertainty.parse().ok()?,
        abundance_percent: abundance.parse().ok(),
        nuclear_spin,
    })
}

/// The element symbols known here, by atomic number.
pub fn element_symbols() -> Vec<&'static str> {
    let mut symbols: Vec<&'static str> = isotopes().iter().map(|i| i.symbol).collect();
    symbols.dedup();
    symbols
}

/// The isotopes of an element, by mass number; empty for an unknown symbol.
pub fn isotopes_of(symbol: &str) -> &'static [Isotope] {
    let table = isotopes();
    let start = table.iter().position(|i| i.symbol == symbol).unwrap_or(table.len());
    let count = table[start..].iter().take_while(|i| i.symbol == symbol).count();
    &table[start..start + count]
}

/// The isotope meant when no mass number is given: the most abundant one; for an element that does not
/// occur in nature the heaviest one listed (an arbitrary but fixed choice, shown with the result).
pub fn default_isotope(symbol: &str) -> Option<&'static Isotope> {
    let known = isotopes_of(symbol);
    known
        .iter()
        .filter(|i| i.abundance_percent.is_some())
        .max_by(|a, b| a.abundance_percent.unwrap_or(0.0).total_cmp(&b.abundance_percent.unwrap_or(0.0)))
        .or_else(|| known.last())
}

/// Mean mass of an element's atoms in u, over the natural abundances listed; none where the mass number
/// is not the default one (an isotope chosen on purpose) or nothing of the element occurs in nature.
pub fn mean_atomic_mass_u(symbol: &str, mass_number: u32) -> Option<f64> {
    if default_isotope(symbol)?.mass_number != mass_number {
        return None;
    }
    let natural = || isotopes_of(symbol).iter().filter_map(|i| Some((i.mass_u, i.abundance_percent?)));
    let total: f64 = natural().map(|(_, share)| share).sum();
    (total > 0.0).then(|| natural().map(|(mass, share)| mass * share / total).sum())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_line_of_the_asset_is_read() {
        let lines = include_str!("../../assets/isotopes.csv")
            .lines()
            .filter(|l| !l.starts_with('#') && !l.starts_with("symbol"))
            .count();
        assert_eq!(isotopes().len(), lines);
        assert!(isotopes().is_sorted_by_key(|i| (i.atomic_number, i.mass_number)));
        assert!(isotopes().iter().all(|i| (i.mass_u - f64::from(i.mass_number)).abs() < 0.3));
    }

    #[test]
    fn abundances_of_an_element_add_up() {
        for symbol in element_symbols() {
            let sum: f64 = isotopes_of(symbol).iter().filter_map(|i| i.abundance_percent).sum();
            assert!(sum == 0.0 || (sum - 100.0).abs() < 0.2, "{symbol}: {sum} %");
        }
    }

    /// NIST Standard Reference Database 144 (2011), an older and independent evaluation.
    #[test]
    fn masses_agree_with_a_second_evaluation() {
        for (symbol, mass_number, mass_u) in [
            ("H", 1, 1.007_825_032_23),
            ("H", 2, 2.014_101_778_12),
            ("C", 12, 12.0),
            ("N", 14, 14.003_074_004_43),
            ("O", 16, 15.994_914_619_57),
            ("F", 19, 18.998_403_162_73),
            ("Cl", 35, 34.968_852_682),
            ("I", 127, 126.904_471_9),
        ] {
            let found = isotopes_of(symbol).iter().find(|i| i.mass_number == mass_number).expect("listed");
            assert!((found.mass_u / mass_u - 1.0).abs() < 6e-8, "{symbol}: {}", found.mass_u);
        }
    }

    #[test]
    fn the_default_is_the_most_abundant_or_the_heaviest() {
        assert_eq!(default_isotope("Cl").map(|i| i.mass_number), Some(35));
        assert_eq!(default_isotope("Li").map(|i| i.mass_number), Some(7));
        assert_eq!(
            default_isotope("Pu").map(|i| i.mass_number),
            isotopes_of("Pu").last().map(|i| i.mass_number)
        );
        assert_eq!(default_isotope("Xx"), None);
    }
}
