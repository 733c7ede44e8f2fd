//! Explains a key of a joint file, of a project file or of a clause sheet, by its path or by its last word.

use crate::criteria::keys::SHEET;
use crate::joint::keys::{JOINT, PROJECT};
use crate::source::{Choice, Form, Key, KeyTable, Sign};

/// A key, the map that it stands in, and its path from the root of its file.
struct Stand {
    path: String,
    table: &'static KeyTable,
    key: &'static Key,
}

/// Every key by its path; those of project files begin with `project.`, of sheets with `sheet.`.
fn all() -> Vec<Stand> {
    let mut found = Vec::new();
    collect(&JOINT, "", &mut found);
    collect(&PROJECT, "project.", &mut found);
    collect(&SHEET, "sheet.", &mut found);
    found
}

fn collect(table: &'static KeyTable, before: &str, found: &mut Vec<Stand>) {
    for key in table.keys {
        let path = format!("{before}{}", key.name);
        let below = format!("{path}.");
        found.push(Stand { path, table, key });
        for table in maps(key.form) {
            collect(table, &below, found);
        }
    }
}

fn maps(form: Form) -> Vec<&'static KeyTable> {
    match form {
        Form::Map(table) => vec![table],
        Form::List(of, ..) | Form::Named(of, _) => maps(*of),
        Form::Either(forms) => forms.iter().flat_map(|form| maps(*form)).collect(),
        Form::Text | Form::Flag | Form::Date | Form::Quantity(..) | Form::Words(_) => Vec::new(),
    }
}

/// The paths and the last words of all keys.
pub(super) fn names() -> impl Iterator<Item = String> {
    all()
        .into_iter()
        .flat_map(|stand| [stand.path, stand.key.name.to_owned()])
}

/// The explanations of a key: of each whose path is or ends in this one.
pub(super) fn says(thing: &str) -> Vec<String> {
    let ending = format!(".{thing}");
    let fits = |stand: &Stand| stand.path == thing || stand.path.ends_with(&ending);
    all().iter().filter(|stand| fits(stand)).map(text).collect()
}

fn text(stand: &Stand) -> String {
    let Stand { path, table, key } = stand;
    let mut out = format!("key {path}\n  says   {}, of {}\n", key.says, table.what);
    out += &format!("  value  {}\n", form(key.form));
    out += &format!("  told   {}\n", told(table, key));
    out += &format!("  as in  {}: {}\n", key.name, key.example);
    for table in maps(key.form) {
        let keys: Vec<String> = table
            .keys
            .iter()
            .map(|key| format!("{}{}", key.name, if key.must { "*" } else { "" }))
            .collect();
        out += &format!("  holds  {}: {}\n", table.what, keys.join(", "));
    }
    out
}

/// Whether a key has to be told.
fn told(table: &KeyTable, key: &Key) -> String {
    if key.must {
        return "always".to_owned();
    }
    for choice in table.choices {
        let (words, keys) = match choice {
            Choice::One(keys) => ("exactly one of", keys),
            Choice::Some(keys) => ("at least one of", keys),
            Choice::AtMostOne(keys) => ("at most one of", keys),
        };
        if keys.contains(&key.name) {
            return format!("{words} {}", keys.join(", "));
        }
    }
    "where it is needed".to_owned()
}

/// How a value looks, in words.
fn form(form: Form) -> String {
    match form {
        Form::Text => "a text".to_owned(),
        Form::Flag => "true or false".to_owned(),
        Form::Date => "a date, year-month-day".to_owned(),
        Form::Quantity("ratio", _) => "a number".to_owned(),
        Form::Quantity("angle", _) => "an angle, in deg or rad".to_owned(),
        Form::Quantity(kind, sign) => {
            let bound = match sign {
                Sign::Any => "",
                Sign::NotNegative => ", 0 or more",
                Sign::Positive => ", above 0",
            };
            format!("a {kind} in the file's units or with its own{bound}")
        }
        Form::Words(words) => words.join(" | "),
        Form::List(of, least, most) => {
            format!("a list of {}: each {}", count(least, most), self::form(*of))
        }
        Form::Map(table) => format!("{}, a map", table.what),
        Form::Named(of, _) => format!("a map of names, each {}", self::form(*of)),
        Form::Either(forms) => {
            let each: Vec<String> = forms.iter().map(|form| self::form(*form)).collect();
            each.join("; or ")
        }
    }
}

fn count(least: usize, most: usize) -> String {
    match (least, most) {
        (0, usize::MAX) => "any number".to_owned(),
        (least, usize::MAX) => format!("{least} or more"),
        (least, most) if least == most => least.to_string(),
        (least, most) => format!("{least} to {most}"),
    }
}
