//! Residuals of the fits at the points of the window.

use super::curve::{fit_label, fit_role};
use super::{Axis, BOND_LENGTH, Figure, Role, Series, Shape};
use crate::findings::Findings;
use crate::units::{to_angstrom, to_per_cm};

/// Model minus energy at the fitted points, in cm⁻¹.
pub fn residuals(findings: &Findings) -> Figure {
    let mut series = vec![Series {
        role: Role::Zero,
        label: "no residual".to_owned(),
        about: String::new(),
        strong: None,
        shape: Shape::Level(0.0),
    }];
    for fit in &findings.fits {
        let Ok(result) = &fit.result else { continue };
        let points: Vec<[f64; 2]> = result
            .residuals
            .iter()
            .map(|&(r, d)| [to_angstrom(r), to_per_cm(d)])
            .filter(|p| p.iter().all(|c| c.is_finite()))
            .collect();
        let (label, role) = (fit_label(fit), fit_role(fit.request.family));
        let about = format!("{label}: fitted minus scanned energy at the points in the window.");
        for shape in [Shape::Line(points.clone()), Shape::Points(points)] {
            series.push(Series { role, label: label.clone(), about: about.clone(), strong: None, shape });
        }
    }
    Figure { x: BOND_LENGTH, y: Axis { title: "residual", unit: "cm⁻¹" }, series }
}
