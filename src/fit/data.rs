//! The points of a fit, checked once.

use super::{FitError, FitPoint};

/// Points with a weight above zero, ascending in r, energies counted from the lowest of them.
#[derive(Clone, Debug)]
pub(crate) struct Data {
    /// Bond lengths in bohr.
    pub r_bohr: Vec<f64>,
    /// Energies above `zero_hartree`.
    pub energy_hartree: Vec<f64>,
    /// Weights, all positive.
    pub weight: Vec<f64>,
    /// The energy subtracted: with totals of a hundred hartree the fit would lose digits it needs.
    pub zero_hartree: f64,
}

impl Data {
    /// Takes the points with a positive weight.
    ///
    /// # Errors
    /// A number that is not finite, a bond length or weight that is not positive, fewer than `needed` points.
    pub fn new(points: &[FitPoint], needed: usize) -> Result<Self, FitError> {
        let mut used: Vec<&FitPoint> = points.iter().filter(|p| p.weight != 0.0).collect();
        let positive = |x: f64| x > 0.0 && x.is_finite();
        let usable = |p: &FitPoint| positive(p.r_bohr) && positive(p.weight) && p.energy_hartree.is_finite();
        if let Some(bad) = used.iter().find(|p| !usable(p)) {
            return Err(FitError::NotFinite { r_bohr: bad.r_bohr });
        }
        if used.len() < needed {
            return Err(FitError::TooFewPoints { points: used.len(), needed });
        }
        used.sort_by(|a, b| a.r_bohr.total_cmp(&b.r_bohr));
        let zero_hartree = used.iter().map(|p| p.energy_hartree).fold(f64::INFINITY, f64::min);
        Ok(Self {
            r_bohr: used.iter().map(|p| p.r_bohr).collect(),
            energy_hartree: used.iter().map(|p| p.energy_hartree - zero_hartree).collect(),
            weight: used.iter().map(|p| p.weight).collect(),
            zero_hartree,
        })
    }

    /// Number of points.
    pub fn len(&self) -> usize {
        self.r_bohr.len()
    }

    /// Index of the lowest point.
    pub fn lowest(&self) -> usize {
        let energy = &self.energy_hartree;
        (0..energy.len()).fold(0, |best, i| if energy[i] < energy[best] { i } else { best })
    }

    /// The same without one point.
    pub fn without(&self, index: usize) -> Self {
        let mut rest = self.clone();
        rest.r_bohr.remove(index);
        rest.energy_hartree.remove(index);
        rest.weight.remove(index);
        rest
    }

    /// A part of the points, as a copy.
    pub fn part(&self, range: std::ops::RangeInclusive<usize>) -> Self {
        Self {
            r_bohr: self.r_bohr[range.clone()].to_vec(),
            energy_hartree: self.energy_hartree[range.clone()].to_vec(),
            weight: self.weight[range].to_vec(),
            zero_hartree: self.zero_hartree,
        }
    }
}
