//! A structural check of JSON against the published schema of the trace.
//!
//! Knows the keywords which that schema uses and refuses any other, so that a keyword added later
//! cannot go unchecked. Follows JSON Schema, draft 2020-12.

use serde_json::{Map, Value};

/// Keywords that say nothing on the data.
const NOTES: [&str; 4] = ["$schema", "$defs", "title", "description"];

/// Where `value` departs from `schema`, one line each; none if it conforms.
pub(crate) fn departures(schema: &Value, value: &Value) -> Vec<String> {
    let mut out = Vec::new();
    walk(schema, schema, value, "trace", &mut out);
    out
}

fn walk(root: &Value, schema: &Value, value: &Value, at: &str, out: &mut Vec<String>) {
    let rules = schema.as_object().expect("a schema is an object");
    for (keyword, rule) in rules {
        match keyword.as_str() {
            "$ref" => {
                let path = rule.as_str().unwrap().trim_start_matches('#');
                let target = root.pointer(path).expect("a reference leads somewhere");
                walk(root, target, value, at, out);
            }
            "type" => {
                if !types(rule).iter().any(|name| is_of(name, value)) {
                    out.push(format!("{at}: {value} is not of type {rule}"));
                }
            }
            "enum" => {
                if !rule.as_array().unwrap().contains(value) {
                    out.push(format!("{at}: {value} is not one of {rule}"));
                }
            }
            "pattern" => {
                // The only pattern in use: a digest in hexadecimal.
                assert_eq!(rule, "^[0-9a-f]{64}$", "{at}: an unknown pattern");
                let text = value.as_str().unwrap_or_default();
                let hex = |c: char| c.is_ascii_digit() || ('a'..='f').contains(&c);
                if text.len() != 64 || !text.chars().all(hex) {
                    out.push(format!("{at}: {value} is no digest"));
                }
            }
            "minItems" => count(rule, value, at, "too few", |have, want| have < want, out),
            "maxItems" => count(rule, value, at, "too many", |have, want| have > want, out),
            "items" => {
                for (index, item) in value.as_array().into_iter().flatten().enumerate() {
                    walk(root, rule, item, &format!("{at}[{index}]"), out);
                }
            }
            "required" | "properties" | "additionalProperties" => {}
            other => assert!(NOTES.contains(&other), "{at}: unknown keyword {other}"),
        }
    }
    if let Some(object) = value.as_object() {
        members(root, rules, object, at, out);
    }
}

/// The members of an object: those required, those allowed, each by its own schema.
fn members(
    root: &Value,
    rules: &Map<String, Value>,
    object: &Map<String, Value>,
    at: &str,
    out: &mut Vec<String>,
) {
    for name in rules
        .get("required")
        .and_then(Value::as_array)
        .into_iter()
        .flatten()
    {
        if !object.contains_key(name.as_str().unwrap()) {
            out.push(format!("{at}: {name} is missing"));
        }
    }
    let known = rules.get("properties").and_then(Value::as_object);
    for (name, member) in object {
        match known.and_then(|known| known.get(name)) {
            Some(schema) => walk(root, schema, member, &format!("{at}.{name}"), out),
            None if rules.get("additionalProperties") == Some(&Value::Bool(false)) => {
                out.push(format!("{at}: {name} is not in the schema"));
            }
            None => {}
        }
    }
}

fn count(
    rule: &Value,
    value: &Value,
    at: &str,
    words: &str,
    wrong: fn(u64, u64) -> bool,
    out: &mut Vec<String>,
) {
    let have = value.as_array().map_or(0, Vec::len) as u64;
    if wrong(have, rule.as_u64().unwrap()) {
        out.push(format!("{at}: {words} items"));
    }
}

fn types(rule: &Value) -> Vec<&str> {
    match rule {
        Value::String(one) => vec![one],
        several => several
            .as_array()
            .unwrap()
            .iter()
            .map(|name| name.as_str().unwrap())
            .collect(),
    }
}

fn is_of(name: &str, value: &Value) -> bool {
    match name {
        "object" => value.is_object(),
        "array" => value.is_array(),
        "string" => value.is_string(),
        "number" => value.is_number(),
        "null" => value.is_null(),
        other => panic!("unknown type {other}"),
    }
}

#[test]
fn departures_from_the_schema_are_found() {
    let schema: Value = serde_json::from_str(seamnote::note::TRACE_SCHEMA).unwrap();
    let whole = serde_json::json!({
        "note": "SN-1", "revision": "A", "program": "0.1.0",
        "identity": {"calculation": "0".repeat(64), "words": "f".repeat(64)},
        "units": {"force": "N", "length": "mm", "stress": "MPa"},
        "group": {"area": 1.0, "centroid": [0.0, 0.0, 0.0], "ixx": 1, "iyy": 1, "ixy": 0, "j": 2,
                  "tensor": [[1, 0, 0], [0, 1, 0], [0, 0, 2]]},
        "cases": [], "governing": null, "closure": null,
        "steps": [{"id": "a", "no": "1", "kind": "step", "symbol": "a", "says": "", "formula": null,
                   "numbers": null, "value": 1.0, "printed": "1", "unit": "mm", "uses": [], "source": "x"}],
    });
    assert_eq!(departures(&schema, &whole), [""; 0], "a whole trace");
    #[rustfmt::skip]
    let rows: [(&str, Value, &str); 8] = [
        ("/note",                  serde_json::json!(1),           "not of type"),
        ("/identity/words",        serde_json::json!("F00"),       "no digest"),
        ("/group/centroid",        serde_json::json!([0, 0]),      "too few"),
        ("/group/tensor/0",        serde_json::json!([0, 0, 0, 0]),"too many"),
        ("/steps/0/kind",          serde_json::json!("guess"),     "not one of"),
        ("/steps/0/value",         serde_json::json!("1"),         "not of type"),
        ("/units",                 serde_json::json!({}),          "is missing"),
        ("/governing",             serde_json::json!({"check": "", "case": "", "point": "", "margin": null, "more": 1}),
                                                                   "not in the schema"),
    ];
    for (pointer, value, wanted) in rows {
        let mut broken = whole.clone();
        *broken.pointer_mut(pointer).unwrap() = value;
        let found = departures(&schema, &broken).join("\n");
        assert!(found.contains(wanted), "{pointer}: {found}");
    }
}
