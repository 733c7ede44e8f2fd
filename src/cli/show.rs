//! What a joint says, value by value, each with the place that it comes from.

use crate::criteria::{From, Library};
use crate::joint::{CheckSpec, Joint, Paper, RunSpec, SizeSpec};
use crate::project::Completed;
use crate::source::{Node, Place, Value};

/// Keys that name an item of a list, in the order in which they are tried.
const NAMES: [&str; 5] = ["name", "case", "clause", "path", "revision"];

/// Words in the column of places for what no file says.
const DEFAULT: &str = "by default";

/// A value: where it comes from, what it is called, what it is.
struct Row {
    place: String,
    name: String,
    value: String,
}

/// Every value of a joint as a table: place, name, value; the program's and the sheets' defaults
/// stand last.
pub(super) fn table(completed: &Completed, joint: &Joint, library: &Library) -> String {
    let mut rows = Vec::new();
    walk(&completed.root, "", &mut rows);
    defaults(joint, &mut rows);
    for check in &joint.checks {
        sheet_defaults(check, joint, library, &mut rows);
    }
    let width = |of: fn(&Row) -> &str| {
        let lengths = rows.iter().map(|row| of(row).chars().count());
        lengths.max().unwrap_or(0)
    };
    let (places, names) = (width(|row| &row.place), width(|row| &row.name));
    rows.iter()
        .map(|row| {
            let Row { place, name, value } = row;
            format!("{place:places$}  {name:names$}  {value}\n")
        })
        .collect()
}

fn walk(node: &Node, name: &str, rows: &mut Vec<Row>) {
    let below = |part: &str| {
        if name.is_empty() {
            part.to_owned()
        } else {
            format!("{name} / {part}")
        }
    };
    match &node.value {
        Value::Map(entries) => {
            for (key, value) in entries {
                walk(value, &below(&one_line(&key.value)), rows);
            }
        }
        Value::List(items) if !is_plain(node) => {
            for (index, item) in items.iter().enumerate() {
                walk(item, &below(&label(item, index)), rows);
            }
        }
        Value::List(_) | Value::Scalar { .. } | Value::Null => rows.push(Row {
            place: printed(&node.place),
            name: name.to_owned(),
            value: inline(node),
        }),
    }
}

/// Whether a list stands on one line of one file and holds no map: a point, a vector, a few words.
fn is_plain(node: &Node) -> bool {
    fn within(node: &Node, home: (&str, usize)) -> bool {
        match &node.value {
            Value::Map(_) => false,
            Value::List(items) => items.iter().all(|item| within(item, home)),
            Value::Scalar { .. } | Value::Null => line(&node.place) == home,
        }
    }
    within(node, line(&node.place))
}

fn line(place: &Place) -> (&str, usize) {
    (&place.file.name, place.line_column().0)
}

fn printed(place: &Place) -> String {
    let (file, line) = line(place);
    format!("{}:{line}", crate::source::one_line(file))
}

/// What an item of a list is called: by its own name, or by its number.
fn label(item: &Node, index: usize) -> String {
    let Value::Map(entries) = &item.value else {
        return (index + 1).to_string();
    };
    let named = NAMES.iter().find_map(|name| {
        let (_, node) = entries.iter().find(|(key, _)| key.value == *name)?;
        Some(inline(node))
    });
    named.unwrap_or_else(|| (index + 1).to_string())
}

fn inline(node: &Node) -> String {
    match &node.value {
        Value::Scalar { text, .. } => one_line(text),
        Value::List(items) => {
            let items: Vec<String> = items.iter().map(inline).collect();
            format!("[{}]", items.join(", "))
        }
        Value::Map(_) | Value::Null => String::new(),
    }
}

/// A text on one line, which cannot drive a terminal.
fn one_line(text: &str) -> String {
    let words: Vec<&str> = text.split_whitespace().collect();
    crate::source::one_line(&words.join(" "))
}

/// The values that the program takes where no file gives one.
fn defaults(joint: &Joint, rows: &mut Vec<Row>) {
    let own = |key: &str| {
        !rows
            .iter()
            .any(|row| row.name == key || row.name.starts_with(&format!("{key} / ")))
    };
    let mut add = Vec::new();
    if own("paper") {
        let paper = match joint.paper {
            Paper::A4 => "A4",
            Paper::UsLetter => "US Letter",
        };
        add.push(("paper".to_owned(), paper.to_owned()));
    }
    if own("signatures") {
        let roles: Vec<&str> = joint
            .signatures
            .iter()
            .map(|role| role.value.as_str())
            .collect();
        add.push(("signatures".to_owned(), format!("[{}]", roles.join(", "))));
    }
    for run in &joint.weld.runs {
        let name = |key: &str| format!("weld / runs / {} / {key}", run.name.value);
        add.extend(run_defaults(run).map(|(key, value)| (name(key), value.to_owned())));
    }
    for case in &joint.loads.cases {
        for key in ["force", "moment"] {
            let name = format!("loads / cases / {} / {key}", case.name.value);
            if own(&name) {
                add.push((name, "[0, 0, 0]".to_owned()));
            }
        }
    }
    rows.extend(add.into_iter().map(|(name, value)| Row {
        place: DEFAULT.to_owned(),
        name,
        value,
    }));
}

/// What holds for a run of which neither it nor the weld says anything.
fn run_defaults(run: &RunSpec) -> impl Iterator<Item = (&'static str, &'static str)> {
    let fillet = matches!(run.size, SizeSpec::Fillet { .. } | SizeSpec::Unequal { .. });
    let one_sided = fillet && run.both_sides.is_none() && run.toe.is_none();
    let ends = run.ends.iter().any(Option::is_none);
    [
        (ends, ("ends", "full, where an end is free")),
        (run.between.is_none(), ("between", "90 deg")),
        (run.normal.is_none(), ("normal", "[0, 0, 1]")),
        (one_sided, ("toe", "both sides evaluated")),
    ]
    .into_iter()
    .filter_map(|(untold, row)| untold.then_some(row))
}

/// The values that a check leaves to its sheet.
fn sheet_defaults(check: &CheckSpec, joint: &Joint, library: &Library, rows: &mut Vec<Row>) {
    let Some(sheet) = library.find(&check.clause.value) else {
        return;
    };
    for need in &sheet.needs {
        let ([From::Check(name)], Some(stated)) = (need.from.as_slice(), &need.stated) else {
            continue;
        };
        let told = check.values.iter().any(|(key, _)| key.value == *name);
        let Some(text) = stated.text.of(joint.units.value).filter(|_| !told) else {
            continue;
        };
        let source = stated
            .source
            .clone()
            .unwrap_or_else(|| sheet.source.cited());
        rows.push(Row {
            place: format!("{DEFAULT} of the sheet"),
            name: format!("checks / {} / {name}", check.clause.value),
            value: format!("{} ({source})", text.value),
        });
    }
}
