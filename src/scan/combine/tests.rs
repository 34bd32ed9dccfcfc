//! Recipes: the published formulas by hand, real columns against the files of the sums, and refusals.

use super::*;
use crate::scan::read::{ReadSettings, read_scan};
use crate::units::LengthUnit;

fn file(name: &str, made: &[&str]) -> Result<Scan, crate::scan::error::ScanError> {
    let path = format!("{}/tests/scans/{name}", env!("CARGO_MANIFEST_DIR"));
    let made = made.iter().map(|m| Recipe::parse(m).expect("a recipe")).collect();
    let settings = ReadSettings { made, ..ReadSettings::default() };
    read_scan(name, &std::fs::read(path).expect("readable"), &settings)
}

fn values(scan: &Scan, column: usize) -> Vec<f64> {
    scan.energies[column].values.iter().map(|v| v.expect("a value")).collect()
}

/// E_total = E_HF + E_corr; the files of the totals were printed from the same calculations, to 10 decimals.
#[test]
fn sums_of_columns_are_the_totals_printed() {
    for (basis, zeta) in [("DZ", "d"), ("TZ", "t"), ("QZ", "q")] {
        let recipe = format!("E_total = E_HF_{basis} + E_corr_{basis}");
        let scan = file("hf_basis_family.csv", &[&recipe]).expect("a scan");
        let made = scan.energies.last().expect("a column");
        assert_eq!((made.made.as_deref(), made.unit), (Some(recipe.as_str()), EnergyUnit::Hartree));
        let total = file(&format!("hf_ccsdt_cc-pv{zeta}z.csv"), &[]).expect("a scan");
        for (made, printed) in values(&scan, 6).iter().zip(values(&total, 0)) {
            assert!((made - printed).abs() < 1.6e-10, "{basis}: {made} {printed}");
        }
    }
}

/// Closed forms: E_inf = (E1 E3 − E2²)/(E1 + E3 − 2 E2) for three cardinal numbers (Feller 1992, solved by
/// hand), (27 E3 − 64 E4)/(27 − 64) for the correlation (Helgaker et al. 1997).
#[test]
fn limits_are_those_of_the_published_formulas() {
    let recipe = "E_CBS = hf3(E_HF_DZ, E_HF_TZ, E_HF_QZ; 2,3,4) + corr2(E_corr_TZ,E_corr_QZ; 3,4)";
    let scan = file("hf_basis_family.csv", &[recipe]).expect("a scan");
    let [d, t, q] = [0, 2, 4].map(|c| values(&scan, c));
    let [ct, cq] = [3, 5].map(|c| values(&scan, c));
    for (i, made) in values(&scan, 6).into_iter().enumerate() {
        let hf = (d[i] * q[i] - t[i] * t[i]) / (d[i] + q[i] - 2.0 * t[i]);
        let correlation = (27.0 * ct[i] - 64.0 * cq[i]) / (27.0 - 64.0);
        // The quotient of small differences of large products loses digits, ours does not.
        assert!((made - hf - correlation).abs() < 1e-8, "{made} {hf} {correlation}");
        assert!(made < q[i] + cq[i], "the limit lies below every basis");
    }
}

/// Invented sequences that follow the laws exactly give back their limits.
#[test]
fn sequences_that_follow_the_laws_give_their_limits() {
    let x =
        |law: &dyn Fn(f64) -> f64, cardinals: &[f64]| cardinals.iter().map(|&c| law(c)).collect::<Vec<_>>();
    let exponential = |c: f64| -100.0 + 0.7 * (-1.63 * c).exp();
    let found = limit(Rule::Exponential3, &x(&exponential, &[2.0, 3.0, 4.0])).expect("a limit");
    assert!((found + 100.0).abs() < 1e-13);
    let decay = (-1.63_f64).exp();
    let found = limit(Rule::Exponential2 { decay }, &x(&exponential, &[3.0, 4.0])).expect("a limit");
    assert!((found + 100.0).abs() < 1e-13);
    let recipe = Recipe::parse("C = corr2(A, B; 3, 5; 3.4)").expect("a recipe");
    let Quantity::Limit { rule, .. } = recipe.terms[0].quantity else { panic!("a limit") };
    let power = |c: f64| -0.3 + 0.2 * c.powf(-3.4);
    assert!((limit(rule, &x(&power, &[3.0, 5.0])).expect("a limit") + 0.3).abs() < 1e-15);
}

/// Counterpoise: E_int = E_AB(AB) − E_A(AB) − E_B(AB), all three in the basis of the pair (S. F. Boys, F. Bernardi,
/// Mol. Phys. 19, 553 (1970)). Invented energies.
#[test]
fn a_counterpoise_correction_is_a_sum() {
    let text =
        "R_angstrom,E_AB_hartree,E_A_hartree,E_B_hartree\n3.0,-2.5,-1.25,-1.2\n4.0,-2.5,-1.125,-1.25\n";
    let made = vec![Recipe::parse("E_int = E_AB - E_A - E_B").expect("a recipe")];
    let settings = ReadSettings { made, ..ReadSettings::default() };
    let scan = read_scan("pair.csv", text.as_bytes(), &settings).expect("a scan");
    assert!((values(&scan, 3)[0] + 0.05).abs() < 1e-15);
    assert_eq!(values(&scan, 3)[1], -0.125);
}

fn small() -> Scan {
    let r = (LengthUnit::Angstrom, vec![1.0, 1.5]);
    let mut scan =
        Scan::from_columns("small.csv", r, (EnergyUnit::Hartree, vec![-1.0, -2.0])).expect("a scan");
    let column = |name: &str, unit, values: [Option<f64>; 2]| EnergyColumn {
        name: name.into(),
        label: name.into(),
        unit,
        values: values.into(),
        made: None,
    };
    scan.energies.push(column("B", EnergyUnit::Electronvolt, [Some(27.0), None]));
    scan.energies.push(column("CCSD(T)", EnergyUnit::Hartree, [Some(-1.5), Some(-1.0)]));
    scan
}

fn made(recipe: &str) -> Result<EnergyColumn, CombineError> {
    let mut scan = small().with_made(&Recipe::parse(recipe)?)?;
    Ok(scan.energies.pop().expect("a column"))
}

#[test]
fn units_factors_constants_and_gaps() {
    let column = made("S = E + 0.5*B - 2 eV").expect("a column");
    let expected = -1.0 + EnergyUnit::Electronvolt.to_hartree(0.5 * 27.0 - 2.0);
    assert!((column.values[0].expect("a value") - expected).abs() < 1e-15);
    assert_eq!((column.values[1], column.unit), (None, EnergyUnit::Hartree));
    let column = made("D = -'CCSD(T)' * 2 + #1 + 1e-1 hartree").expect("a column");
    assert_eq!(column.values, [Some(3.0 - 1.0 + 0.1), Some(2.0 - 2.0 + 0.1)]);
    assert_eq!(made("b = B*2").expect("a column").unit, EnergyUnit::Electronvolt);
}

#[test]
fn refusals_say_where_and_what() {
    for (recipe, needle) in [
        ("S", "the sign ="),
        ("S = ", "a column, hf3"),
        ("S = A B", "+, - or the end"),
        ("S = 2", "the unit of the constant"),
        ("S = 2 eV", "at least one column"),
        ("S = 'A", "closing quote"),
        ("S = cbs(A,B; 2,3)", "hf3, hf2 or corr2"),
        ("S = hf3(A,B; 2,3)", "three columns for hf3"),
        ("S = hf3(A,B,C; 2,4,5)", "equally spaced"),
        ("S = hf2(A,B; 3,4)", "positive exponent"),
        ("S = corr2(A,B; 4,3)", "ascending"),
        ("S = corr2(A,B; 3,4; 0)", "the power"),
        ("S = E + Q", "no column"),
        ("E = B + B", "choose another name"),
        ("S = hf3(E, B, #3; 2,3,4)", "at the bond length 1 angstrom the ratio of the steps"),
    ] {
        let message = made(recipe).expect_err(recipe).to_string();
        assert!(message.contains(needle), "{recipe}: {message}");
    }
}

#[test]
fn a_recipe_is_text_in_settings() {
    let recipe = Recipe::parse(" S = 0.5 * E ").expect("a recipe");
    let json = serde_json::to_string(&recipe).expect("text");
    assert_eq!(json, "\"S = 0.5 * E\"");
    assert_eq!(serde_json::from_str::<Recipe>(&json).expect("a recipe"), recipe);
    assert!(serde_json::from_str::<Recipe>("\"S = \"").is_err());
}
