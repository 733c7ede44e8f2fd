//! JSON Schemas (draft 2020-12) from tables of keys, for editors.
//!
//! A schema sees the form of a file and never more: names that stand for nothing, units, bounds
//! with units and whatever two keys say together are the reader's. It refuses nothing that the
//! reader takes as plain YAML, which a test holds.

use super::keys::{Choice, Form, Key, KeyTable, Sign};
use serde_json::{Map, Value, json};

/// Dates.
const DATE: &str = "^[0-9]{4}-[0-9]{2}-[0-9]{2}$";
/// A number of any sign with a decimal point, and whatever unit.
const QUANTITY: &str = "^[+−-]?\\.?[0-9][^,]*$";
/// The same without a minus.
const NOT_BELOW: &str = "^[+]?\\.?[0-9][^,]*$";
/// An angle says its unit.
const ANGLE: &str = "^[+−-]?\\.?[0-9][^,]*(deg|rad|°)$";

/// The schema of a file whose root is the map `root`.
#[must_use]
pub fn schema(root: &'static KeyTable, title: &str) -> Value {
    let mut tables = Map::new();
    let mut out = object(root);
    let mut open = maps_of(root);
    while let Some(table) = open.pop() {
        if !tables.contains_key(&id(table)) {
            tables.insert(id(table), Value::Object(object(table)));
            open.extend(maps_of(table));
        }
    }
    out.insert(
        "$schema".into(),
        "https://json-schema.org/draft/2020-12/schema".into(),
    );
    out.insert("title".into(), title.into());
    out.insert("$defs".into(), Value::Object(tables));
    Value::Object(out)
}

/// The name of a table among the definitions.
fn id(table: &KeyTable) -> String {
    table.what.replace('`', "").replace(' ', "-")
}

fn maps_of(table: &KeyTable) -> Vec<&'static KeyTable> {
    let mut found = Vec::new();
    for key in table.keys {
        collect(key.form, &mut found);
    }
    found
}

fn collect(form: Form, found: &mut Vec<&'static KeyTable>) {
    match form {
        Form::Map(table) => found.push(table),
        Form::List(of, ..) | Form::Named(of, _) => collect(*of, found),
        Form::Either(forms) => forms.iter().for_each(|form| collect(*form, found)),
        Form::Text | Form::Flag | Form::Date | Form::Quantity(..) | Form::Words(_) => {}
    }
}

fn object(table: &KeyTable) -> Map<String, Value> {
    let properties: Map<String, Value> = table
        .keys
        .iter()
        .map(|key| (key.name.to_owned(), property(key)))
        .collect();
    let needed: Vec<&str> = table
        .keys
        .iter()
        .filter(|key| key.must)
        .map(|key| key.name)
        .collect();
    let mut out = Map::new();
    out.insert("type".into(), "object".into());
    out.insert("description".into(), table.says.into());
    out.insert("properties".into(), Value::Object(properties));
    out.insert("required".into(), json!(needed));
    let free = table.free.map_or(Value::Bool(false), value);
    out.insert("additionalProperties".into(), free);
    let choices: Vec<Value> = table.choices.iter().map(|choice| chosen(*choice)).collect();
    if !choices.is_empty() {
        out.insert("allOf".into(), Value::Array(choices));
    }
    out
}

fn chosen(choice: Choice) -> Value {
    let each = |keys: &[&str]| -> Vec<Value> {
        keys.iter().map(|key| json!({"required": [key]})).collect()
    };
    match choice {
        Choice::One(keys) => json!({"oneOf": each(keys)}),
        Choice::Some(keys) => json!({"anyOf": each(keys)}),
        Choice::AtMostOne(keys) => {
            let mut forms = each(keys);
            forms.push(json!({"not": {"anyOf": each(keys)}}));
            json!({"oneOf": forms})
        }
    }
}

/// A key's value, with what an editor shows beside it.
fn property(key: &Key) -> Value {
    let mut out = value(key.form);
    if let Value::Object(map) = &mut out {
        let says = format!("{}; as in `{}: {}`", key.says, key.name, key.example);
        map.insert("description".into(), says.into());
    }
    out
}

fn value(form: Form) -> Value {
    match form {
        Form::Text => json!({"type": ["string", "number", "boolean"], "minLength": 1}),
        Form::Flag => json!({"type": "boolean"}),
        Form::Date => json!({"type": "string", "pattern": DATE}),
        Form::Quantity("angle", _) => json!({"type": "string", "pattern": ANGLE}),
        Form::Quantity(_, Sign::Any) => json!({"type": ["number", "string"], "pattern": QUANTITY}),
        Form::Quantity(_, Sign::NotNegative) => {
            json!({"type": ["number", "string"], "pattern": NOT_BELOW, "minimum": 0})
        }
        Form::Quantity(_, Sign::Positive) => {
            json!({"type": ["number", "string"], "pattern": NOT_BELOW, "exclusiveMinimum": 0})
        }
        Form::Words(words) => json!({"enum": words}),
        Form::List(of, least, most) => {
            let mut out = json!({"type": "array", "items": value(*of)});
            if least > 0 {
                out["minItems"] = least.into();
            }
            if most < usize::MAX {
                out["maxItems"] = most.into();
            }
            out
        }
        Form::Map(table) => json!({"$ref": format!("#/$defs/{}", id(table))}),
        Form::Named(of, least) => {
            json!({"type": "object", "additionalProperties": value(*of), "minProperties": least})
        }
        Form::Either(forms) => {
            let forms: Vec<Value> = forms.iter().map(|form| value(*form)).collect();
            json!({"anyOf": forms})
        }
    }
}
