//! How a number is written: a quantity with unit and standard error, or a plain number. JSON has no word for what is
//! not finite, and a null in its place must not pass for "there is none": such a number is marked when it is written,
//! and the marks become null and a notice when the document is complete.

use crate::estimate::Estimate;
use crate::units::to_angstrom;
use serde_json::{Value, json};

/// Stands where a number was not finite until [`null_what_was_lost`] sees it. No text of a study holds this character.
const LOST: &str = "\u{1a}";

/// A plain number, or null where there is none.
pub(super) fn number(value: impl Into<Option<f64>>) -> Value {
    match value.into() {
        None => Value::Null,
        Some(value) if value.is_finite() => Value::from(value),
        Some(_) => Value::from(LOST),
    }
}

/// Plain numbers in a list.
pub(super) fn numbers<'a>(values: impl IntoIterator<Item = &'a f64>) -> Value {
    values.into_iter().map(|v| number(*v)).collect()
}

/// `value` in `unit`, without an error.
pub(super) fn quantity(value: f64, unit: &str) -> Value {
    json!({"value": number(value), "unit": unit, "std_error": null})
}

/// `estimate` times `factor` in `unit`; carries `method` where the source of the error is known.
pub(super) fn estimated(estimate: Estimate, factor: f64, unit: &str) -> Value {
    let e = estimate.scaled(factor);
    let mut value = json!({"value": number(e.value), "unit": unit, "std_error": number(e.std_error)});
    if let Some(source) = e.source {
        value["method"] = source.word().into();
    }
    value
}

/// A length in ångström.
pub(super) fn angstrom(r_bohr: f64) -> Value {
    quantity(to_angstrom(r_bohr), "angstrom")
}

/// Makes null of every number that was not finite, and of the whole quantity where it was its value. Returns the paths.
pub(super) fn null_what_was_lost(value: &mut Value) -> Vec<String> {
    fn walk(value: &mut Value, path: &str, lost: &mut Vec<String>) {
        let is_lost = |v: &Value| v.as_str() == Some(LOST);
        if is_lost(value) || value.get("value").is_some_and(|v| value.get("unit").is_some() && is_lost(v)) {
            lost.push(path.to_owned());
            *value = Value::Null;
            return;
        }
        match value {
            Value::Object(map) => {
                for (key, inner) in map.iter_mut() {
                    walk(inner, &format!("{path}/{key}"), lost);
                }
            }
            Value::Array(list) => {
                for (i, inner) in list.iter_mut().enumerate() {
                    walk(inner, &format!("{path}/{i}"), lost);
                }
            }
            _ => {}
        }
    }
    let mut lost = Vec::new();
    walk(value, "", &mut lost);
    lost
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::estimate::ErrorSource;

    #[test]
    fn what_is_not_finite_is_null_and_named_whether_quantity_error_or_plain_number() {
        let error = Estimate { value: 1.0, std_error: Some(f64::INFINITY), source: Some(ErrorSource::Fit) };
        let mut value = json!({
            "good": quantity(1.5, "K"),
            "none": number(None),
            "quantity": quantity(f64::NAN, "K"),
            "error": estimated(error, 2.0, "cm-1"),
            "plain": number(f64::INFINITY),
            "list": numbers(&[0.25, f64::NAN]),
        });
        let mut lost = null_what_was_lost(&mut value);
        lost.sort();
        assert_eq!(lost, ["/error/std_error", "/list/1", "/plain", "/quantity"]);
        assert_eq!(value["good"]["value"], 1.5);
        assert_eq!((&value["none"], &value["quantity"]), (&Value::Null, &Value::Null));
        assert_eq!((&value["error"]["value"], &value["error"]["std_error"]), (&json!(2.0), &Value::Null));
        assert_eq!(value["list"], json!([0.25, null]));
    }
}
