//! The range of bond lengths a fit uses.

use crate::units::LengthUnit;
use serde::{Deserialize, Serialize};

/// A range of bond lengths, edges inclusive, kept in the unit in which it was given.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Window {
    /// Lower edge.
    pub from: f64,
    /// Upper edge.
    pub to: f64,
    /// Unit of both.
    pub unit: LengthUnit,
}

/// Half width of the default window as a fraction of r_e.
pub const DEFAULT_HALF_WIDTH_OF_R_E: f64 = 0.15;

/// The default window is widened to at least this many points, where there are so many.
pub const DEFAULT_LEAST_POINTS: usize = 7;

impl Window {
    /// Whether a bond length, in the unit in which it was read, lies in the window, edges included.
    ///
    /// In the window's own unit the digits are compared as they are; across units an edge may miss by
    /// the rounding of the conversion.
    pub fn contains(&self, r_as_read: f64, unit: LengthUnit) -> bool {
        if unit == self.unit {
            return (self.from..=self.to).contains(&r_as_read);
        }
        let slack = 8.0 * f64::EPSILON * r_as_read.abs();
        let (from, to) = (self.unit.convert(self.from, unit), self.unit.convert(self.to, unit));
        (from - slack..=to + slack).contains(&r_as_read)
    }

    /// The edges in bohr.
    pub fn bohr(&self) -> (f64, f64) {
        (self.unit.to_bohr(self.from), self.unit.to_bohr(self.to))
    }

    /// The same window in another unit.
    pub fn converted(&self, unit: LengthUnit) -> Self {
        Self { from: self.unit.convert(self.from, unit), to: self.unit.convert(self.to, unit), unit }
    }
}

/// |x| ≤ 0.15 r_e, widened on both sides to the nearest points until it holds at least seven (or all).
///
/// `r_as_read` are the bond lengths of the points in use, in `unit`, in any order.
pub fn default_window(r_e_bohr: f64, r_as_read: &[f64], unit: LengthUnit) -> Window {
    let r_e = unit.from_bohr(r_e_bohr);
    let mut by_distance: Vec<f64> = r_as_read.iter().copied().filter(|r| r.is_finite()).collect();
    by_distance.sort_by(|a, b| (a - r_e).abs().total_cmp(&(b - r_e).abs()));
    let half = DEFAULT_HALF_WIDTH_OF_R_E * r_e;
    let start = Window { from: r_e - half, to: r_e + half, unit };
    by_distance.iter().take(DEFAULT_LEAST_POINTS).fold(start, |w, &r| Window {
        from: w.from.min(r),
        to: w.to.max(r),
        unit,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn edges_are_inclusive_in_the_unit_read() {
        let window = Window { from: 0.9, to: 1.3, unit: LengthUnit::Angstrom };
        assert!(window.contains(0.9, LengthUnit::Angstrom) && window.contains(1.3, LengthUnit::Angstrom));
        assert!(!window.contains(0.899_999_999_999_999_9, LengthUnit::Angstrom));
        for unit in [LengthUnit::Bohr, LengthUnit::Picometre, LengthUnit::Nanometre] {
            let (from, to) =
                (LengthUnit::Angstrom.convert(0.9, unit), LengthUnit::Angstrom.convert(1.3, unit));
            assert!(window.contains(from, unit) && window.contains(to, unit));
            assert!(!window.contains(from * (1.0 - 1e-9), unit) && !window.contains(f64::NAN, unit));
        }
        assert!(
            window.contains(90.0, LengthUnit::Picometre) && window.contains(130.0, LengthUnit::Picometre)
        );
    }

    #[test]
    fn the_default_is_widened_to_seven_points() {
        let r: Vec<f64> = (0..40).map(|k| 0.5 + 0.1 * f64::from(k)).collect();
        let window = default_window(1.52, &r, LengthUnit::Bohr);
        let inside = r.iter().filter(|&&r| window.contains(r, LengthUnit::Bohr)).count();
        assert_eq!(inside, 7);
        assert!(window.from <= 0.85 * 1.52 && window.to >= 1.15 * 1.52);
        let dense: Vec<f64> = (0..400).map(|k| 0.5 + 0.01 * f64::from(k)).collect();
        let plain = default_window(1.5, &dense, LengthUnit::Bohr);
        assert!((plain.from - 1.275).abs() < 1e-12 && (plain.to - 1.725).abs() < 1e-12);
        let few = default_window(1.5, &[0.7, 1.4, 3.0], LengthUnit::Bohr);
        assert!(few.from == 0.7 && few.to == 3.0);
    }
}
