//! Characters that the note's faces cannot print, found where the user typed them.

use crate::render::prints;
use crate::source::{Diagnostic, Node, Place, Value};
use std::collections::BTreeSet;

/// A fault for each key and scalar of a tree that holds characters which no face prints.
///
/// Control characters are left to the readers of texts, which have their own words for them.
pub(super) fn unprintable(root: &Node) -> Vec<Diagnostic> {
    let mut faults = Vec::new();
    walk(root, &mut faults);
    faults
}

fn walk(node: &Node, faults: &mut Vec<Diagnostic>) {
    match &node.value {
        Value::Scalar { text, .. } => faults.extend(fault(text, &node.place)),
        Value::List(items) => items.iter().for_each(|item| walk(item, faults)),
        Value::Map(entries) => {
            for (key, value) in entries {
                faults.extend(fault(&key.value, &key.place));
                walk(value, faults);
            }
        }
        Value::Null => {}
    }
}

/// The fault of a text, at the first character that does not print.
fn fault(text: &str, place: &Place) -> Option<Diagnostic> {
    let lacking = |c: &char| !c.is_control() && !prints(*c);
    let first = text.chars().find(lacking)?;
    let all: BTreeSet<char> = text.chars().filter(lacking).collect();
    let named: Vec<String> = all
        .into_iter()
        .map(|c| format!("U+{:04X}", u32::from(c)))
        .collect();
    let message = format!("no face of the note prints {}", named.join(", "));
    let help = "notes print Latin, Greek and Cyrillic, and the usual signs of mathematics";
    Some(Diagnostic::error("unprintable", message, &spot(first, place)).help(help))
}

/// Where a character stands in the file; the whole scalar if it is typed as an escape.
fn spot(c: char, place: &Place) -> Place {
    let typed = place.file.text.get(place.start..place.end);
    match typed.and_then(|typed| typed.find(c)) {
        Some(at) => Place {
            file: place.file.clone(),
            start: place.start + at,
            end: place.start + at + c.len_utf8(),
        },
        None => place.clone(),
    }
}
