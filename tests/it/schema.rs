//! A structural check of JSON against the published schemas: of the trace, of joints, of sheets.
//!
//! Knows the keywords which those schemas use and refuses any other, so that a keyword added later
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

/// Where `value` departs from `part`, a schema within `root`.
pub(crate) fn departures_within(root: &Value, part: &Value, value: &Value) -> Vec<String> {
    let mut out = Vec::new();
    walk(root, part, value, "value", &mut out);
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
                if let Some(text) = value.as_str()
                    && !fits(rule.as_str().unwrap(), text)
                {
                    out.push(format!("{at}: {value} does not fit {rule}"));
                }
            }
            "minLength" => {
                let short = |text: &str| text.chars().count() < to_usize(rule);
                if value.as_str().is_some_and(short) {
                    out.push(format!("{at}: the text is too short"));
                }
            }
            "minProperties" => {
                if value
                    .as_object()
                    .is_some_and(|map| map.len() < to_usize(rule))
                {
                    out.push(format!("{at}: too few entries"));
                }
            }
            "minimum" | "exclusiveMinimum" => {
                let bound = rule.as_f64().unwrap();
                let below =
                    |number: f64| number < bound || (keyword != "minimum" && number <= bound);
                if value.as_f64().is_some_and(below) {
                    out.push(format!("{at}: {value} is below its {keyword} {rule}"));
                }
            }
            "allOf" => {
                for form in rule.as_array().unwrap() {
                    walk(root, form, value, at, out);
                }
            }
            "anyOf" | "oneOf" => {
                let forms = rule.as_array().unwrap();
                let met = forms
                    .iter()
                    .filter(|form| departures_within(root, form, value).is_empty())
                    .count();
                if met == 0 || (keyword == "oneOf" && met > 1) {
                    out.push(format!("{at}: meets {met} of {keyword} {rule}"));
                }
            }
            "not" => {
                if departures_within(root, rule, value).is_empty() {
                    out.push(format!("{at}: meets {rule}"));
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
            None => match rules.get("additionalProperties") {
                Some(Value::Bool(false)) => {
                    out.push(format!("{at}: {name} is not in the schema"));
                }
                Some(form @ Value::Object(_)) => {
                    walk(root, form, member, &format!("{at}.{name}"), out);
                }
                _ => {}
            },
        }
    }
}

fn to_usize(rule: &Value) -> usize {
    usize::try_from(rule.as_u64().unwrap()).unwrap()
}

/// Whether a text fits one of the patterns in use, each written out by hand.
fn fits(pattern: &str, text: &str) -> bool {
    let digits = |text: &str| text.chars().all(|c| c.is_ascii_digit());
    let number = |text: &str, signs: &[char]| {
        let text = text.strip_prefix(signs).unwrap_or(text);
        let text = text.strip_prefix('.').unwrap_or(text);
        text.starts_with(|c: char| c.is_ascii_digit()) && !text.contains(',')
    };
    let any = ['+', '-', '\u{2212}'];
    match pattern {
        "^[0-9a-f]{64}$" => {
            let hex = |c: char| c.is_ascii_digit() || ('a'..='f').contains(&c);
            text.len() == 64 && text.chars().all(hex)
        }
        "^[0-9]{4}-[0-9]{2}-[0-9]{2}$" => {
            let parts: Vec<&str> = text.split('-').collect();
            parts.iter().map(|part| part.len()).eq([4, 2, 2])
                && parts.iter().all(|part| digits(part))
        }
        "^[+\u{2212}-]?\\.?[0-9][^,]*$" => number(text, &any),
        "^[+]?\\.?[0-9][^,]*$" => number(text, &['+']),
        "^[+\u{2212}-]?\\.?[0-9][^,]*(deg|rad|°)$" => {
            number(text, &any) && ["deg", "rad", "°"].iter().any(|unit| text.ends_with(unit))
        }
        other => panic!("unknown pattern {other}"),
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
        "boolean" => value.is_boolean(),
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
        ("/identity/words",        serde_json::json!("F00"),       "does not fit"),
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
