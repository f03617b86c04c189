//! `strake schema`, as an editor gets it. What it holds, the tests of the tank file show.

use crate::{document, run};

#[test]
fn the_schema_is_one_document_in_either_format() {
    let text = run(&["schema"]);
    assert_eq!((text.status, text.stderr.as_str()), (0, ""));
    let (status, schema) = document(&["schema"]);
    assert_eq!(status, 0);
    assert_eq!(serde_json::from_str::<serde_json::Value>(&text.stdout).unwrap(), schema);
    let dialect = schema["$schema"].as_str().unwrap();
    assert!(dialect.ends_with("json-schema.org/draft/2020-12/schema"), "{dialect}");
    assert_eq!(schema["additionalProperties"], false);
    assert_eq!(schema["properties"]["level"]["$ref"], "#/$defs/level");
    let sensor = &schema["$defs"]["level"]["properties"]["sensor"];
    assert_eq!(sensor["enum"], serde_json::json!(["head", "innage", "ullage"]));
    let at = schema["$defs"]["level"]["properties"]["at"]["description"].as_str().unwrap();
    assert!(at.ends_with("In m, mm, ft or in."), "{at}");
}

#[test]
fn its_help_is_as_pinned() {
    let ran = run(&["schema", "--help"]);
    let expected = include_str!("snapshots/schema_help.txt");
    assert_eq!(ran.stdout, expected, "{}", ran.stdout);
}
