//! The sections of a findings file that levels lead to: rotation, tails, isotopes, properties, Y_kl.

use super::json::masses;
use super::numbers::{angstrom, estimated, number, quantity};
use crate::findings::{Findings, Isotopologue, LevelSupport, PropertyAverages, QuasiBoundLevel};
use crate::spectroscopy::{BirgeSponer, DunhamCoefficient, DunhamTable, NearDissociation};
use serde_json::{Map, Value, json};

/// All of these sections by their keys.
pub(super) fn sections(findings: &Findings) -> Map<String, Value> {
    let mut map = Map::new();
    let quasi = findings.quasi_bound.as_ref();
    let mut put = |key: &str, value: Value| map.insert(key.to_owned(), value);
    put("densities", super::densities::densities(&findings.densities));
    put("quasi_bound", quasi.map_or(Value::Null, |list| list.iter().map(quasi_bound).collect()));
    put("property_averages", findings.property_averages.iter().map(averages).collect());
    put("isotopologues", findings.isotopologues.iter().map(isotopologue).collect());
    put("level_support", findings.level_support.as_ref().map_or(Value::Null, support));
    put("dunham_table", findings.dunham_table.as_ref().map_or(Value::Null, dunham));
    put("birge_sponer", findings.birge_sponer.as_ref().map_or(Value::Null, |b| birge_sponer(b, findings)));
    put("near_dissociation", findings.near_dissociation.as_ref().map_or(Value::Null, near_dissociation));
    map
}

fn per_cm(value: f64) -> Value {
    quantity(value, "cm-1")
}

fn quasi_bound(level: &QuasiBoundLevel) -> Value {
    let lifetime = level.lifetime_seconds().map(|t| quantity(t, "s"));
    json!({
        "v": level.v,
        "j": level.j,
        "energy": per_cm(level.energy_per_cm),
        "width": per_cm(level.width_per_cm),
        "lifetime": lifetime,
        "by_phase": level.by_phase_per_cm.map(|(e, w)| json!({"energy": per_cm(e), "width": per_cm(w)})),
        "barrier": {"r": angstrom(level.barrier_bohr), "energy": per_cm(level.barrier_per_cm)},
    })
}

fn averages(averages: &PropertyAverages) -> Value {
    json!({
        "column": averages.column,
        "unit": averages.unit,
        "levels": averages.levels.iter()
            .map(|a| json!({"v": a.v, "j": a.j, "value": number(a.value), "outside": number(a.outside)}))
            .collect::<Vec<_>>(),
    })
}

fn isotopologue(other: &Isotopologue) -> Value {
    json!({
        "masses": masses(&other.masses),
        "omega_e": per_cm(other.omega_e_per_cm),
        "zero_point_energy": other.zero_point_energy_per_cm.map(per_cm),
        "d_0": other.d_0_per_cm.map(per_cm),
        "levels": other.levels.iter().map(|l| json!({
            "v": l.v,
            "energy": per_cm(l.energy_per_cm),
            "b_v": per_cm(l.b_v_per_cm),
            "shift": l.shift_per_cm.map(per_cm),
        })).collect::<Vec<_>>(),
    })
}

fn support(support: &LevelSupport) -> Value {
    json!({
        "levels": support.levels,
        "supported": support.supported,
        "sensitivity": support.sensitivity.iter().map(|t| json!({
            "change": t.change,
            "levels": t.levels,
            "unmoved": t.unmoved,
            "largest_shift": per_cm(t.largest_shift_per_cm),
        })).collect::<Vec<_>>(),
    })
}

/// A coefficient with its indices.
pub(super) fn coefficient(y: &DunhamCoefficient) -> Value {
    let mut value = estimated(y.value_per_cm, 1.0, "cm-1");
    value["k"] = y.k.into();
    value["l"] = y.l.into();
    value
}

fn dunham(table: &DunhamTable) -> Value {
    json!({
        "y_kl": table.coefficients.iter().map(coefficient).collect::<Vec<_>>(),
        "levels_used": table.levels,
        "rms_residual": per_cm(table.rms_residual_per_cm),
        "largest_residual": per_cm(table.largest_residual_per_cm),
    })
}

fn birge_sponer(line: &BirgeSponer, findings: &Findings) -> Value {
    let depth = findings.constants.well_depth_per_cm;
    json!({
        "spacings": line.spacings_per_cm.iter().enumerate()
            .map(|(v, s)| json!({"v": v, "spacing": per_cm(*s)})).collect::<Vec<_>>(),
        "intercept": per_cm(line.intercept_per_cm),
        "slope": per_cm(line.slope_per_cm),
        "spacings_used": line.spacings_used,
        "extrapolated_limit": line.extrapolated_limit_per_cm.map(per_cm),
        "true_limit": depth.map(|d| estimated(d, 1.0, "cm-1")),
    })
}

fn near_dissociation(law: &NearDissociation) -> Value {
    json!({
        "n": law.n,
        "exponent": number(law.exponent),
        "slope": number(law.slope),
        "v_at_limit": number(law.v_at_limit),
        "levels": law.levels.iter().map(|(v, y)| json!({"v": v, "value": number(*y)})).collect::<Vec<_>>(),
    })
}
