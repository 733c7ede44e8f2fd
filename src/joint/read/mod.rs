//! Reads a joint file into [`Joint`], all faults in one go.
//!
//! This file reads the head of the note and hands its sections on: values with units, parts and
//! other lists of words, the weld, its pattern, the loads.

mod load;
mod look;
mod part;
mod path;
mod pattern;
mod shared;
mod size;
mod value;
mod weld;

pub(super) use shared::check_project;
pub use value::{read_quantity, read_triple};

use look::look_of;

use super::{CheckSpec, Exclusion, FrameWords, Joint, Paper, keys};
use crate::quantity::UnitSet;
use crate::source::{
    Diagnostic, FaultBag, Faults, Fields, Item, Node, SourceFile, Told, Value, parse_yaml,
    read_keyed,
};
use std::sync::Arc;

/// Reads a joint file.
///
/// # Errors
///
/// All faults of the file, in file order: those of YAML alone if there are any, else those of
/// the joint.
pub fn read_joint(file: &Arc<SourceFile>) -> Result<Joint, Faults> {
    read_joint_node(&parse_yaml(file)?)
}

/// Reads a joint from its tree, which may hold entries of a project file beside its own.
///
/// # Errors
///
/// All faults, ordered by file and place.
pub fn read_joint_node(root: &Node) -> Result<Joint, Faults> {
    let faults = FaultBag::new();
    let joint = read_keyed(root, &keys::JOINT, &faults).and_then(read_root);
    Ok(faults.close(joint)?.0)
}

/// What the sections of a joint file need of each other.
#[derive(Clone, Copy)]
struct Context<'a> {
    /// The printing set; N, mm where it could not be read, so that reading goes on.
    set: UnitSet,
    /// Names of the parts, faulty ones too.
    parts: &'a [&'a str],
    /// Whether `parts` itself is misspelt, so that no name of a part is known.
    misspelt_parts: bool,
}

fn read_root(mut fields: Fields<'_>) -> Option<Joint> {
    let note = fields.required("note", Item::line);
    let title = fields.required("title", Item::line);
    let revision = fields.required("revision", Item::line);
    let date = fields.required("date", value::read_date);
    let drawing = fields.optional("drawing", Item::line);
    let item = fields.optional("item", Item::line);
    let purpose = fields.optional("purpose", Item::text);
    let units = fields.required("units", read_units);
    let set = units
        .as_ref()
        .map_or(UnitSet::NewtonMillimetre, |told| told.value);
    let paper = fields.optional("paper", |item| {
        item.word(&[("A4", Paper::A4), ("US Letter", Paper::UsLetter)])
    });
    let frame = fields.required("frame", read_frame);
    let names = part_names(&fields);
    let context = Context {
        set,
        parts: &names,
        misspelt_parts: fields.misspells(&["parts"]),
    };
    let parts = fields.required("parts", |item| part::read_parts(item, set));
    let filler = fields.optional("filler", |item| part::read_filler(item, set));
    let weld = fields.required("weld", |item| weld::read_weld(item, context));
    let loads = fields.required("loads", |item| load::read_loads(item, set));
    let checks = fields.required("checks", part::read_checks);
    let assumptions = fields.optional_list("assumptions", part::read_assumption);
    let cautions = fields.optional_list("cautions", Item::text);
    let excluded = fields.optional_list("excluded", part::read_exclusion);
    refuse_twice(&excluded, &checks, fields.faults());
    let changes = fields.optional_list("changes", part::read_change);
    let signatures = match fields.take("signatures") {
        Some(item) => item.list(Item::line),
        None => note.as_ref().map(usual_signatures),
    };
    fields.finish();
    Some(Joint {
        note: note?,
        title: title?,
        revision: revision?,
        date: date?,
        drawing,
        item,
        purpose,
        units: units?,
        paper: paper.map(|told| told.value).unwrap_or_default(),
        frame: frame?,
        parts: parts?,
        filler,
        weld: weld?,
        loads: loads?,
        checks: checks?,
        assumptions,
        cautions,
        excluded,
        changes,
        signatures: signatures?,
    })
}

/// Refuses a failure path excluded twice, and a check asked for twice with the same values.
fn refuse_twice(excluded: &[Exclusion], checks: &Option<Vec<CheckSpec>>, faults: &FaultBag) {
    check_distinct(
        excluded.iter().map(|entry| &entry.path),
        "exclusions",
        faults,
    );
    let mut seen: Vec<&CheckSpec> = Vec::new();
    for check in checks.iter().flatten() {
        if let Some(first) = seen.iter().find(|known| known.says_same(check)) {
            let (line, _) = first.clause.place.line_column();
            let message = format!(
                "`{}` is asked for twice with the same values",
                check.clause.value
            );
            let help = format!("the first is in line {line}");
            faults.push(Diagnostic::error("name-taken", message, &check.clause.place).help(help));
        }
        seen.push(check);
    }
}

/// The names under `parts`, whatever their entries hold.
fn part_names<'a>(fields: &Fields<'a>) -> Vec<&'a str> {
    match fields.peek("parts").map(|item| &item.node.value) {
        Some(Value::Map(entries)) => entries.iter().map(|(key, _)| key.value.as_str()).collect(),
        _ => Vec::new(),
    }
}

/// The roles that sign where the file names none.
fn usual_signatures(note: &Told<String>) -> Vec<Told<String>> {
    ["prepared", "checked", "approved"]
        .map(|role| note.clone().map(|_| role.to_owned()))
        .into()
}

fn read_units(item: Item<'_>) -> Option<Told<UnitSet>> {
    let mut fields = item.keyed(&keys::UNITS)?;
    let force = fields.required("force", Item::raw);
    let length = fields.required("length", Item::raw);
    fields.finish();
    let (force, length) = (force?, length?);
    if let Some(set) = UnitSet::from_names(&force.value, &length.value) {
        return Some(Told {
            value: set,
            place: item.place().clone(),
        });
    }
    let sets: Vec<String> = UnitSet::ALL
        .iter()
        .map(|set| format!("{} and {}", set.force(), set.length()))
        .collect();
    item.refuse_with(
        "unknown-units",
        format!("{} and {} make no printing set", force.value, length.value),
        format!(
            "a note is printed in {}; single values may still carry any unit",
            sets.join(", ")
        ),
    )
}

fn read_frame(item: Item<'_>) -> Option<FrameWords> {
    let mut fields = item.keyed(&keys::FRAME)?;
    let origin = fields.required("origin", Item::line);
    let axes = ["x", "y", "z"].map(|axis| fields.optional(axis, Item::line));
    fields.finish();
    if is_left_handed(
        axes.each_ref()
            .map(|words| words.as_ref().map(|told| told.value.as_str())),
    ) {
        let help = "moments go by the right-hand rule: turn one of the three round";
        return item.refuse_with(
            "left-handed",
            "x, y and z as told make a left-handed frame",
            help,
        );
    }
    Some(FrameWords {
        origin: origin?,
        axes,
    })
}

/// Whether the words of three axes tell a left-handed frame, as far as they are plain directions.
fn is_left_handed(axes: [Option<&str>; 3]) -> bool {
    // Forward, port and up are a right-handed frame.
    const DIRECTIONS: [(&str, usize, i32); 8] = [
        ("forward", 0, 1),
        ("fore", 0, 1),
        ("aft", 0, -1),
        ("port", 1, 1),
        ("starboard", 1, -1),
        ("up", 2, 1),
        ("upward", 2, 1),
        ("down", 2, -1),
    ];
    let of = |words: &str| {
        let mut found = words.split_whitespace().filter_map(|word| {
            let word = word
                .trim_matches(|c: char| !c.is_alphanumeric())
                .to_lowercase();
            DIRECTIONS.iter().find(|(known, ..)| *known == word)
        });
        let first = found.next()?;
        found.next().is_none().then_some((first.1, first.2))
    };
    let [Some(x), Some(y), Some(z)] = axes.map(|words| words.and_then(of)) else {
        return false;
    };
    let order = match [x.0, y.0, z.0] {
        [0, 1, 2] | [1, 2, 0] | [2, 0, 1] => 1,
        [0, 2, 1] | [2, 1, 0] | [1, 0, 2] => -1,
        _ => return false,
    };
    order * x.1 * y.1 * z.1 < 0
}

/// Repeated names that are told at most: more have one cause.
const MOST_TOLD: usize = 100;

/// Refuses names that stand twice; `what` says what they name, such as `runs`.
fn check_distinct<'a>(
    names: impl Iterator<Item = &'a Told<String>>,
    what: &str,
    faults: &FaultBag,
) {
    let mut seen = std::collections::BTreeMap::new();
    let mut looks = std::collections::BTreeMap::new();
    let mut told = 0;
    for name in names {
        if told == MOST_TOLD {
            return;
        }
        let twin = looks.insert(look_of(&name.value), name);
        if let Some(twin) = twin.filter(|twin| twin.value != name.value) {
            let message = format!("`{}` looks like another of the {what}", name.value);
            let (line, _) = twin.place.line_column();
            let help = format!(
                "the other is in line {line}; one of them holds a letter of another alphabet, an accent of its own or a wider space: on paper nobody can tell them apart"
            );
            faults.push(Diagnostic::error("names-look-alike", message, &name.place).help(help));
        }
        if let Some(first) = seen.insert(name.value.as_str(), name) {
            told += 1;
            let message = format!("`{}` names two {what}", name.value);
            let (line, _) = first.place.line_column();
            faults.push(
                Diagnostic::error("name-taken", message, &name.place)
                    .help(format!("the first is in line {line}")),
            );
        }
    }
}

/// Reads the entries of a map with free keys and refuses keys that look alike or stand twice,
/// those of faulty entries too; `what` says what they name.
fn read_named<'a, T>(
    item: Item<'a>,
    what: &str,
    mut read: impl FnMut(&'a Told<String>, Item<'a>) -> Option<T>,
) -> Option<Vec<T>> {
    let mut names = Vec::new();
    let entries = item.entries(|name, entry| {
        names.push(name);
        read(name, entry)
    });
    check_distinct(names.into_iter(), what, item.faults);
    entries
}

/// The fault of a name that stands for nothing, with the nearest that does.
fn unknown_name(code: &'static str, what: &str, name: &Told<String>, known: &[&str]) -> Diagnostic {
    let fault = Diagnostic::error(
        code,
        format!("`{}` is no {what} of this file", name.value),
        &name.place,
    );
    if known.is_empty() {
        return fault.help(format!("the file names no {what}"));
    }
    let listed: Vec<String> = known.iter().map(|word| format!("`{word}`")).collect();
    fault.help(format!("named are: {}", listed.join(", ")))
}
