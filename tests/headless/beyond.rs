//! Rotation, quasi-bound levels, isotopes, properties and tails from the command line.

use super::{findings, findings::assert_satisfies_schema};
use serde_json::Value;

fn number(value: &Value) -> f64 {
    value.as_f64().expect("a number")
}

/// What was asked for is in the summary too.
#[test]
fn the_summary_names_rotation_tails_and_isotopologues() {
    let path = super::scan("h2_fci.csv");
    let plain = [path.to_str().expect("UTF-8"), "--atoms", "1H,1H"];
    let asked = ["--rotation", "0-3", "--tail-sensitivity", "--isotopologues", "2H,2H"];
    let of = |arguments: &[&str]| String::from_utf8(super::study(arguments).stdout).expect("UTF-8");
    let without = of(&plain);
    let with = of(&[&plain[..], &asked].concat());
    for needle in ["levels with J from 1 to 3", "Moving the tail", "Isotopologues on the same curve", "2H 2H"]
    {
        assert!(with.contains(needle) && !without.contains(needle), "{needle}\n{with}");
    }
}

/// LiH with rotation, other isotopes and its dipole columns. Reduced masses and isotopes: AME2020.
#[test]
fn rotation_isotopes_and_properties_of_lithium_hydride() {
    let value = findings(
        "lih_X_A.csv",
        &[
            "--atoms",
            "7Li,H",
            "--rotation",
            "0-6,30",
            "--isotopologues",
            "6Li,H;7Li,2H",
            "--tail-sensitivity",
        ],
    );
    assert_satisfies_schema(&value, "lih_X_A.csv");
    let levels = value["levels"].as_array().expect("levels");
    let order: Vec<(u64, u64)> =
        levels.iter().map(|l| (l["j"].as_u64().expect("j"), l["v"].as_u64().expect("v"))).collect();
    assert!(order.is_sorted() && order.iter().any(|o| o.0 == 30));
    let of = |v: u64, j: u64| levels.iter().find(|l| l["v"] == v && l["j"] == j).expect("a level");
    let energy = |v: u64, j: u64| number(&of(v, j)["energy"]["value"]);
    let b_0 = number(&of(0, 0)["b_v"]["value"]);
    assert!(((energy(0, 1) - energy(0, 0)) / (2.0 * b_0) - 1.0).abs() < 1e-3);

    // The fitted table agrees with B_0 = Y_01 + Y_11/2 + Y_21/4 + ...
    let y = value["dunham_table"]["y_kl"].as_array().expect("coefficients");
    let of_l1 = y.iter().filter(|c| c["l"] == 1);
    let b: f64 = of_l1.map(|c| number(&c["value"]) * 0.5_f64.powi(c["k"].as_i64().expect("k") as i32)).sum();
    assert!((b / b_0 - 1.0).abs() < 1e-4, "{b} {b_0}");

    let isotopes = value["isotopologues"].as_array().expect("isotopes");
    let zero_point = |v: &Value| number(&v["zero_point_energy"]["value"]);
    let mass = |v: &Value| number(&v["masses"]["reduced_mass"]["value"]);
    let own = number(&value["constants"]["zero_point_energy"]["value"]);
    for other in isotopes {
        // Harmonic in leading order: the zero-point energy goes with the root of the mass.
        let ratio = (number(&value["masses"]["reduced_mass"]["value"]) / mass(other)).sqrt();
        assert!((zero_point(other) / own / ratio - 1.0).abs() < 0.01);
        assert!(number(&other["levels"][0]["shift"]["value"]) * (ratio - 1.0) > 0.0);
    }

    let columns = value["property_averages"].as_array().expect("averages");
    let names: Vec<&str> = columns.iter().filter_map(|c| c["column"].as_str()).collect();
    assert_eq!(names, ["mu_X_au", "mu_A_au", "mu_XA_au"]);
    // Between the values at 1.5 and 1.75 angstrom, where v = 0 lives (the scan's own column).
    let mu_0 = number(&columns[0]["levels"][0]["value"]);
    assert!((2.2..2.5).contains(&mu_0), "{mu_0}");

    let quasi = value["quasi_bound"].as_array().expect("a list");
    assert!(quasi.iter().all(|q| number(&q["width"]["value"]) >= 0.0));
    let support = &value["level_support"];
    assert!(support["supported"].as_u64() <= support["levels"].as_u64());
    assert!(!support["sensitivity"].as_array().expect("trials").is_empty());
    assert!(value["birge_sponer"]["spacings"].as_array().is_some_and(|s| s.len() > 10));
}

/// H2 with a known limit and n = 6: quasi-bound levels appear where J lifts levels over the limit, and both ways to
/// the pole agree. The limit is twice the energy of the hydrogen atom in that basis or a little above the last point.
#[test]
fn quasi_bound_levels_of_hydrogen_and_a_fitted_tail() {
    let options = ["--atoms", "H,H", "--tail-power", "6", "--tail-points", "4", "--rotation", "10-20"];
    let value = findings("h2_fci.csv", &options);
    assert_satisfies_schema(&value, "h2_fci.csv");
    let notices = value["notices"].as_array().expect("notices");
    assert!(notices.iter().any(|n| n["code"] == "fitted-tail"), "{notices:#?}");
    let quasi = value["quasi_bound"].as_array().expect("a list");
    assert!(quasi.len() > 5, "{quasi:#?}");
    let limit = number(&value["curve"]["tails"]["outer"]["asymptote"]["value"]);
    let bottom = number(&value["curve"]["minimum"]["energy"]["value"]);
    let depth = (limit - bottom) * 219_474.631_363_14;
    for level in quasi {
        let (energy, width) = (number(&level["energy"]["value"]), number(&level["width"]["value"]));
        assert!(energy > depth && energy < number(&level["barrier"]["energy"]["value"]) + width);
        let (e, w) =
            (number(&level["by_phase"]["energy"]["value"]), number(&level["by_phase"]["width"]["value"]));
        let allowed = if width > 1e-3 * (energy - depth) { 1e-2 } else { 1e-3 };
        assert!((e - energy).abs() < 1e-3 + 1e-2 * width && (w / width - 1.0).abs() < allowed, "{level:#}");
        if width > 0.0 {
            // 1/(2 pi c) = 5.308837e-12 s cm-1 (c = 299792458 m/s).
            let lifetime = number(&level["lifetime"]["value"]);
            assert!((lifetime * width / 5.308_837_458e-12 - 1.0).abs() < 1e-8);
        }
    }
    assert_eq!(value["near_dissociation"]["n"], 6);
    let plain = findings("h2_fci.csv", &["--atoms", "H,H"]);
    assert!(plain["quasi_bound"].is_null() && plain["dunham_table"].is_null());
}
