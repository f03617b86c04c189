//! Figures of a document.

use serde_json::Value;

/// A part by its name.
#[track_caller]
pub(crate) fn part<'a>(document: &'a Value, name: &str) -> &'a Value {
    let parts = document["parts"].as_array().expect("parts");
    parts.iter().find(|part| part["name"] == name).expect("a part of that name")
}

/// A number within a tolerance of what is due.
#[track_caller]
pub(crate) fn near(found: &Value, due: f64, tolerance: f64) {
    let found = found.as_f64().unwrap_or_else(|| panic!("{found} is no number"));
    assert!((found - due).abs() <= tolerance, "{found} is not {due} within {tolerance}");
}
