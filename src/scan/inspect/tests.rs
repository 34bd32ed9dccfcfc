//! What the inspection makes of smooth curves, single points and repeated bond lengths.

use super::*;

/// Invented: a Morse-like curve on an uneven grid.
fn smooth(n: usize) -> Vec<InspectedPoint> {
    let point = |row: usize| {
        let r_bohr = 1.5 + 0.05 * row as f64 + 0.01 * (row as f64 * 2.3).sin();
        let y = 1.0 - (-1.1 * (r_bohr - 2.2)).exp();
        InspectedPoint { row, r_bohr, energy_hartree: 0.2 * y * y - 100.0 }
    };
    (0..n).map(point).collect()
}

/// Any single inner point that is off by 2e-5 hartree is found, alone, with its deviation; so are two.
#[test]
fn single_points_that_are_off_are_found() {
    assert_eq!(inspect(&smooth(40), &[]), Inspection::default());
    for bad in 2..38 {
        let mut points = smooth(40);
        points[bad].energy_hartree -= 2e-5;
        let (r, e) = columns(&points);
        let off = faults(&r, &e).off;
        assert_eq!(off.iter().map(|o| o.index).collect::<Vec<_>>(), [bad]);
        assert!((off[0].deviation_hartree / -2e-5 - 1.0).abs() < 0.1, "{off:?}");
        let notices = inspect(&points, &[]).notices;
        assert_eq!(notices[0].at_bohr, [points[bad].r_bohr]);
    }
    let mut points = smooth(40);
    points[10].energy_hartree += 3e-5;
    points[24].energy_hartree -= 1e-4;
    let (r, e) = columns(&points);
    assert_eq!(faults(&r, &e).off.iter().map(|o| o.index).collect::<Vec<_>>(), [10, 24]);
}

/// Of a repeated bond length the first row counts, or the one that is kept; agreement is told from
/// disagreement.
#[test]
fn repeated_bond_lengths() {
    let mut points = smooth(20);
    points.insert(8, InspectedPoint { row: 33, ..points[7] });
    let found = inspect(&points, &[]);
    assert_eq!(found.left_out, [(33, "same bond length as row 8".to_string())]);
    assert_eq!(found.notices[0].severity, crate::notice::Severity::Info);
    points[8].energy_hartree += 1e-6;
    let found = inspect(&points, &[33]);
    assert_eq!(found.left_out, [(7, "same bond length as row 34".to_string())]);
    assert_eq!(found.notices[0].severity, crate::notice::Severity::Caution);
    assert_eq!(found.notices[0].code, Code::RepeatedGeometry);
    // Three times the same, and nothing else.
    let three: Vec<InspectedPoint> = (0..3).map(|row| InspectedPoint { row, ..points[0] }).collect();
    assert_eq!(inspect(&three, &[]).left_out.len(), 2);
    assert_eq!(inspect(&[], &[]), Inspection::default());
}

/// Many repeated bond lengths are told together, agreeing ones apart from others.
#[test]
fn many_repeats_make_few_notices() {
    let mut points: Vec<InspectedPoint> =
        smooth(30).into_iter().flat_map(|p| [p, InspectedPoint { row: p.row + 100, ..p }]).collect();
    points[1].energy_hartree += 1e-3;
    let found = inspect(&points, &[]);
    assert_eq!(found.left_out.len(), 30);
    let texts: Vec<&str> = found.notices.iter().map(|n| n.text.as_str()).collect();
    assert_eq!(texts.len(), 2, "{texts:?}");
    assert!(texts[0].starts_with("1 rows") && texts[0].contains("differ"), "{texts:?}");
    assert!(texts[1].starts_with("29 rows") && texts[1].contains("agree"), "{texts:?}");
}
