//! Holds tables of keys, readers and published schemas to each other.
//!
//! Every file that reads well conforms to its schema; each of its entries is then left out,
//! renamed and spoilt in turn, and reader and schema are asked about the result.

use crate::faults::{JOINTS, PROJECTS, SHEETS};
use crate::schema::{departures, departures_within};
use crate::tidy::{File, file, files, root};
use seamnote::criteria::{keys::SHEET, read_sheet_node};
use seamnote::joint::{
    keys::{JOINT, PROJECT},
    read_joint_node, read_project_node,
};
use seamnote::project::{SchemaKind, published};
use seamnote::source::{
    Diagnostic, Faults, Form, KeyTable, Node, SourceFile, Value as Yaml, parse_yaml, schema,
};
use serde_json::Value;
use std::collections::BTreeSet;
use std::sync::Arc;

/// A kind of file: its table, its reader, files of it that read well.
struct Kind {
    table: &'static KeyTable,
    schema: Value,
    read: fn(&Node) -> Result<(), Faults>,
    good: Vec<File>,
}

fn kinds() -> [Kind; 3] {
    let among = |folders: &[&str]| -> Vec<File> {
        let found = folders.iter().flat_map(|folder| files(folder, &[".yaml"]));
        found.collect()
    };
    let joints = among(&["joints", "tests/it/valid"]).into_iter();
    // A filler named by a word alone is the project file's to tell.
    let whole = |file: &File| {
        let named = |line: &str| line.starts_with("filler: ") && !line.contains('{');
        !file.text.lines().any(named)
    };
    let joints = joints.filter(|file| {
        !file.name.contains("sheet") && !file.name.ends_with("project.yaml") && whole(file)
    });
    let joints: Vec<File> = joints.collect();
    let sheets = among(&[
        "src/criteria/sheets",
        "joints/sheets",
        "tests/it/valid/sheets",
    ]);
    [
        Kind {
            table: &JOINT,
            schema: schema(&JOINT, "joint"),
            read: |node| read_joint_node(node).map(|_| ()),
            good: joints,
        },
        Kind {
            table: &PROJECT,
            schema: schema(&PROJECT, "project"),
            read: |node| read_project_node(node.clone()).map(|_| ()),
            good: vec![
                file("tests/it/valid/project.yaml"),
                file("joints/project.yaml"),
            ],
        },
        Kind {
            table: &SHEET,
            schema: schema(&SHEET, "sheet"),
            read: |node| read_sheet_node(node).map(|_| ()),
            good: sheets,
        },
    ]
}

fn parse(name: &str, text: &str) -> Result<Node, Faults> {
    parse_yaml(&Arc::new(SourceFile {
        name: name.to_owned(),
        text: text.to_owned(),
    }))
}

/// The tree as an editor sees it: plain scalars by the core schema of YAML 1.2.
fn json(node: &Node) -> Value {
    match &node.value {
        Yaml::Null => Value::Null,
        Yaml::List(items) => items.iter().map(json).collect(),
        Yaml::Map(entries) => Value::Object(
            entries
                .iter()
                .map(|(key, node)| (key.value.clone(), json(node)))
                .collect(),
        ),
        Yaml::Scalar { text, quoted: true } => Value::String(text.clone()),
        Yaml::Scalar { text, .. } => match text.as_str() {
            "true" => Value::Bool(true),
            "false" => Value::Bool(false),
            "null" | "~" => Value::Null,
            _ => number(text).unwrap_or_else(|| Value::String(text.clone())),
        },
    }
}

/// The number that a plain scalar is in YAML.
fn number(text: &str) -> Option<Value> {
    let plain = |c: char| c.is_ascii_digit() || matches!(c, '+' | '-' | '.' | 'e' | 'E');
    let value: f64 = text.parse().ok()?;
    (text.chars().all(plain) && value.is_finite()).then(|| serde_json::json!(value))
}

/// What is done to an entry of a map.
#[derive(Clone, Copy, PartialEq, Debug)]
enum Change {
    LeftOut,
    Renamed,
    Empty,
    Scalar,
    List,
    Map,
}

const CHANGES: [Change; 6] = [
    Change::LeftOut,
    Change::Renamed,
    Change::Empty,
    Change::Scalar,
    Change::List,
    Change::Map,
];

/// The keys and list places from the root to an entry.
type Path = Vec<usize>;

/// Paths of all entries of maps below a node.
fn entries(node: &Node, at: &mut Path, found: &mut Vec<Path>) {
    let is_map = matches!(node.value, Yaml::Map(_));
    let children: Vec<&Node> = match &node.value {
        Yaml::Map(entries) => entries.iter().map(|(_, node)| node).collect(),
        Yaml::List(items) => items.iter().collect(),
        Yaml::Scalar { .. } | Yaml::Null => Vec::new(),
    };
    for (index, child) in children.into_iter().enumerate() {
        at.push(index);
        if is_map {
            found.push(at.clone());
        }
        entries(child, at, found);
        at.pop();
    }
}

fn changed(root: &Node, path: &[usize], change: Change) -> Node {
    let mut root = root.clone();
    let (last, before) = path.split_last().unwrap();
    let mut node = &mut root;
    for index in before {
        node = match &mut node.value {
            Yaml::Map(entries) => &mut entries[*index].1,
            Yaml::List(items) => &mut items[*index],
            Yaml::Scalar { .. } | Yaml::Null => unreachable!("a path leads through maps and lists"),
        };
    }
    let Yaml::Map(entries) = &mut node.value else {
        unreachable!("a path ends in a map");
    };
    let word = Yaml::Scalar {
        text: "no such word".to_owned(),
        quoted: true,
    };
    match change {
        Change::LeftOut => drop(entries.remove(*last)),
        Change::Renamed => entries[*last].0.value = "no such key".to_owned(),
        Change::Empty => entries[*last].1.value = Yaml::Null,
        Change::Scalar => entries[*last].1.value = word,
        Change::List => entries[*last].1.value = Yaml::List(Vec::new()),
        Change::Map => entries[*last].1.value = Yaml::Map(Vec::new()),
    }
    root
}

/// The table and key of an entry, if its map has a table and the key is one of it.
fn place<'n>(
    kind: &Kind,
    root: &'n Node,
    path: &[usize],
) -> (Option<(&'static KeyTable, Form)>, &'n str) {
    let mut forms = vec![Form::Map(kind.table)];
    let mut node = root;
    let mut key = "";
    let mut found = None;
    for index in path {
        let maps = flat(&forms);
        match &node.value {
            Yaml::Map(entries) => {
                key = entries[*index].0.value.as_str();
                node = &entries[*index].1;
                found = None;
                forms = Vec::new();
                for form in maps {
                    match form {
                        Form::Map(table) => {
                            if let Some(known) = table.find(key) {
                                found = Some((table, known.form));
                                forms.push(known.form);
                            }
                        }
                        Form::Named(of, _) => forms.push(*of),
                        _ => {}
                    }
                }
            }
            Yaml::List(items) => {
                node = &items[*index];
                forms = maps
                    .into_iter()
                    .filter_map(|form| match form {
                        Form::List(of, ..) => Some(*of),
                        _ => None,
                    })
                    .collect();
            }
            Yaml::Scalar { .. } | Yaml::Null => unreachable!("a path leads through maps and lists"),
        }
    }
    (found, key)
}

fn flat(forms: &[Form]) -> Vec<Form> {
    forms
        .iter()
        .flat_map(|form| match form {
            Form::Either(several) => flat(several),
            other => vec![*other],
        })
        .collect()
}

/// Faults of form that a schema is to see wherever they arise.
const OF_FORM: [&str; 5] = [
    "not-a-map",
    "not-a-scalar",
    "not-a-list",
    "empty-value",
    "unknown-key",
];

/// Keys whose absence the reader refuses and a schema cannot, and why.
const UNSEEN_ABSENCE: [(&str, &str, &str); 10] = [
    ("a joint file", "units", "the project file may tell it"),
    ("a joint file", "parts", "the project file may tell it"),
    ("a joint file", "checks", "the project file may tell it"),
    ("a joint file", "filler", "the project file may tell it"),
    ("`weld`", "joins", "a run may tell it instead"),
    ("a run", "joins", "the weld may tell it for all"),
    ("a pattern", "joins", "the weld may tell it for all"),
    ("a pattern", "width", "depends on the shape"),
    ("a pattern", "depth", "depends on the shape"),
    ("a pattern", "radius", "depends on the shape"),
];

/// The same for sheets.
const UNSEEN_IN_SHEETS: [(&str, &str, &str); 4] = [
    ("a need", "symbol", "a word has none"),
    ("a need", "value", "depends on where the need comes from"),
    ("a need", "inch", "depends on where the need comes from"),
    ("a need", "metric", "depends on where the need comes from"),
];

#[test]
fn readers_and_schemas_agree_on_every_entry() {
    let mut wrong = BTreeSet::new();
    let mut tried = 0;
    for kind in kinds() {
        for file in &kind.good {
            let root = parse(&file.name, &file.text).unwrap();
            let mut paths = Vec::new();
            entries(&root, &mut Vec::new(), &mut paths);
            for path in paths {
                for change in CHANGES {
                    tried += 1;
                    if let Some(fault) = disagreement(&kind, &root, &path, change) {
                        wrong.insert(fault);
                    }
                }
            }
        }
    }
    assert!(tried > 5000, "only {tried} changes tried");
    let wrong: Vec<String> = wrong.into_iter().collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

/// What is wrong between reader and schema after a change, if anything.
fn disagreement(kind: &Kind, root: &Node, path: &[usize], change: Change) -> Option<String> {
    let changed = changed(root, path, change);
    let faults = (kind.read)(&changed)
        .err()
        .map_or(Vec::new(), |faults| faults.0);
    let departures = departures(&kind.schema, &json(&changed));
    let (of_table, key) = place(kind, root, path);
    let what = of_table.map_or("free", |(table, _)| table.what);
    let at = format!("{} {what}, `{key}` {change:?}", kind.table.what);
    if !departures.is_empty() && faults.is_empty() {
        return Some(format!(
            "{at}: the schema refuses what is read: {departures:?}"
        ));
    }
    let has = |codes: &[&str]| faults.iter().any(|fault| codes.contains(&fault.code));
    let excused = UNSEEN_ABSENCE
        .iter()
        .chain(&UNSEEN_IN_SHEETS)
        .any(|(table, name, _)| (*table, *name) == (what, key));
    // A wrong word can make other keys mean nothing, such as those beside `from: clause`.
    let form =
        change != Change::Scalar && has(&OF_FORM) && !(has(&["unknown-key"]) && of_table.is_none());
    if departures.is_empty() && form && !excused {
        return Some(format!("{at}: the schema takes {}", told(&faults)));
    }
    let (table, form) = of_table?;
    let must = table.find(key).is_some_and(|key| key.must);
    if change == Change::LeftOut && departures.is_empty() && has(&["missing-key"]) && !excused {
        return Some(format!("{at}: the schema misses {}", told(&faults)));
    }
    if change == Change::LeftOut && must && faults.is_empty() {
        return Some(format!("{at}: the reader does not need it"));
    }
    if change == Change::Scalar {
        return words_fault(form, &faults).map(|fault| format!("{at}: {fault}"));
    }
    None
}

fn told(faults: &[Diagnostic]) -> String {
    let each = faults
        .iter()
        .map(|fault| format!("[{}] {}", fault.code, fault.message));
    each.collect::<Vec<_>>().join("; ")
}

/// Where the words of a form are not those that the reader names.
fn words_fault(form: Form, faults: &[Diagnostic]) -> Option<String> {
    let words: Vec<&str> = flat(&[form])
        .into_iter()
        .filter_map(|form| match form {
            Form::Words(words) => Some(words.iter().copied()),
            _ => None,
        })
        .flatten()
        .collect();
    let fault = faults.iter().find(|fault| fault.code == "unknown-word")?;
    let allowed = fault
        .help
        .iter()
        .find_map(|line| line.strip_prefix("allowed here: "))?;
    let allowed: Vec<&str> = allowed.split('`').skip(1).step_by(2).collect();
    let known: Vec<&&str> = words.iter().filter(|word| **word != "any").collect();
    let missing = allowed.iter().any(|word| !words.contains(word));
    let stale = known.iter().any(|word| !allowed.contains(word));
    (!words.is_empty() && (missing || stale))
        .then(|| format!("the table has {words:?}, the reader {allowed:?}"))
}

#[test]
fn files_that_read_well_conform_and_use_every_key() {
    for kind in kinds() {
        let mut used = BTreeSet::new();
        assert!(!kind.good.is_empty(), "files of {}", kind.table.what);
        for file in &kind.good {
            let root = parse(&file.name, &file.text).unwrap();
            if let Err(faults) = (kind.read)(&root) {
                panic!("{}", faults.render(false));
            }
            assert_eq!(
                departures(&kind.schema, &json(&root)),
                [""; 0],
                "{}",
                file.name
            );
            let mut paths = Vec::new();
            entries(&root, &mut Vec::new(), &mut paths);
            for path in paths {
                if let (Some((table, _)), key) = place(&kind, &root, &path) {
                    used.insert((table.what, key.to_owned()));
                }
            }
        }
        let mut missing = Vec::new();
        for table in tables(kind.table) {
            for key in table.keys {
                if !used.contains(&(table.what, key.name.to_owned())) {
                    missing.push(format!("`{}` of {}", key.name, table.what));
                }
            }
        }
        assert!(
            missing.is_empty(),
            "no file that reads well uses {missing:?}"
        );
    }
}

/// The tables that a root leads to, each once.
pub(crate) fn tables(root: &'static KeyTable) -> Vec<&'static KeyTable> {
    let mut found: Vec<&'static KeyTable> = vec![root];
    let mut at = 0;
    while at < found.len() {
        let mut forms: Vec<Form> = found[at].keys.iter().map(|key| key.form).collect();
        while let Some(form) = forms.pop() {
            match form {
                Form::Map(table) if !found.iter().any(|known| std::ptr::eq(*known, table)) => {
                    found.push(table);
                }
                Form::List(of, ..) | Form::Named(of, _) => forms.push(*of),
                Form::Either(several) => forms.extend(several),
                Form::Map(_)
                | Form::Text
                | Form::Flag
                | Form::Date
                | Form::Quantity(..)
                | Form::Words(_) => {}
            }
        }
        at += 1;
    }
    found
}

#[test]
fn examples_look_as_their_keys_say() {
    for kind in kinds() {
        for table in tables(kind.table) {
            let name = table.what.replace('`', "").replace(' ', "-");
            let definition = match kind.schema["$defs"].get(&name) {
                Some(definition) => definition,
                None => &kind.schema,
            };
            for key in table.keys {
                let text = format!("{}: {}\n", key.name, key.example);
                let node = parse("example.yaml", &text)
                    .unwrap_or_else(|faults| panic!("{}", faults.render(false)));
                let value = &json(&node)[key.name];
                let found =
                    departures_within(&kind.schema, &definition["properties"][key.name], value);
                assert_eq!(found, [""; 0], "`{}` of {}", key.name, table.what);
            }
        }
    }
}

/// Fixtures whose faults a schema cannot see, and why.
const UNSEEN: [(&str, &str); 46] = [
    ("left-handed.yaml", "what the words mean"),
    (
        "decimal-comma-component.yaml",
        "two components are two components",
    ),
    (
        "decimal-comma-point.yaml",
        "two components are two components",
    ),
    ("not-a-number-grouped.yaml", "units"),
    ("wrong-count-trailing.yaml", "the text itself"),
    ("wrong-count-mixed.yaml", "points against each other"),
    ("unknown-unit-case.yaml", "units"),
    (
        "out-of-range-coordinate.yaml",
        "its bound is in another unit in each set",
    ),
    ("out-of-range-further.yaml", "a free value is text"),
    ("missing-level-once.yaml", "the case or `loads` may tell it"),
    ("name-taken-check.yaml", "two entries against each other"),
    ("name-taken-excluded.yaml", "two entries against each other"),
    (
        "mass-for-force-length.yaml",
        "units of quantities are the reader's",
    ),
    ("names-look-alike-accent.yaml", "compares names"),
    ("names-look-alike-frames.yaml", "compares names"),
    ("names-look-alike-parts.yaml", "compares names"),
    ("names-look-alike.yaml", "compares names"),
    ("not-a-number-free.yaml", "a free value is text"),
    (
        "unknown-unit-free.yaml",
        "units of quantities are the reader's",
    ),
    ("control-character.yaml", "the text itself"),
    ("cut-by-comment.yaml", "a comment is no part of the tree"),
    (
        "line-break.yaml",
        "a text of several lines is right elsewhere",
    ),
    ("mass-for-force.yaml", "units"),
    (
        "missing-key-pattern.yaml",
        "which lengths are needed depends on the shape",
    ),
    ("missing-level.yaml", "the case or `loads` may tell it"),
    (
        "missing-point-frame.yaml",
        "the case or `loads` may tell it",
    ),
    ("missing-point.yaml", "the case or `loads` may tell it"),
    ("name-taken-case.yaml", "two entries against each other"),
    ("name-taken.yaml", "two entries against each other"),
    ("not-a-number-inches.yaml", "units"),
    ("not-orthonormal-left.yaml", "arithmetic"),
    ("not-orthonormal-square.yaml", "arithmetic"),
    ("not-orthonormal.yaml", "arithmetic"),
    ("not-taken-doubled.yaml", "depends on the shape"),
    ("not-taken-pattern.yaml", "depends on the shape"),
    ("not-taken.yaml", "depends on the path"),
    (
        "out-of-range-unit.yaml",
        "a bound on a number with its unit",
    ),
    ("unknown-frame.yaml", "a name of the same file"),
    (
        "unknown-key-free.yaml",
        "a near miss where any key may stand",
    ),
    ("unknown-part.yaml", "a name of the same file"),
    ("unknown-unit.yaml", "units"),
    ("unknown-units.yaml", "two words against each other"),
    ("which-size-none.yaml", "the run or the weld may tell it"),
    ("wrong-kind.yaml", "units"),
    ("zero-length-toe.yaml", "arithmetic"),
    ("zero-length.yaml", "arithmetic"),
];

/// The same for fixtures of project files.
#[rustfmt::skip]
const UNSEEN_IN_PROJECTS: [(&str, &str); 14] = [
    ("cut-by-comment.yaml", "a comment is no part of the tree"),
    ("empty-value-name.yaml", "a name of spaces is a name to it"),
    ("line-break.yaml", "a text of several lines is right elsewhere"),
    ("mass-for-force.yaml", "units"),
    ("names-look-alike-parts.yaml", "compares names"),
    ("names-look-alike.yaml", "compares names"),
    ("not-a-number-free.yaml", "a free value is text"),
    ("not-taken-name.yaml", "a name like any further strength"),
    ("not-taken.yaml", "a name like any further strength"),
    ("unknown-key-source.yaml", "a near miss where any key may stand"),
    ("unknown-key-strength.yaml", "a near miss where any key may stand"),
    ("unknown-unit.yaml", "units"),
    ("unknown-units.yaml", "two words against each other"),
    ("wrong-kind.yaml", "units"),
];

/// The same for fixtures of sheets.
#[rustfmt::skip]
const UNSEEN_IN_SHEET_FIXTURES: [(&str, &str); 31] = [
    ("bad-name.yaml", "which names formulas take"),
    ("bad-quantity.yaml", "units"),
    ("bad-symbol.yaml", "how a symbol is built"),
    ("duplicate-name.yaml", "names of the same sheet"),
    ("duplicate-symbol.yaml", "names of the same sheet"),
    ("formula-dimension-capacity.yaml", "dimensions"),
    ("formula-dimension-kind.yaml", "dimensions"),
    ("formula-dimension-sum.yaml", "dimensions"),
    ("formula-dimension.yaml", "dimensions"),
    ("formula-syntax-comparison.yaml", "a formula is text"),
    ("formula-syntax.yaml", "a formula is text"),
    ("not-convex.yaml", "algebra"),
    ("not-taken.yaml", "depends on where the need comes from"),
    ("out-of-range.yaml", "a capacity is a name or a number"),
    ("sheet-default-clause.yaml", "depends on where the need comes from"),
    ("sheet-default.yaml", "depends on where the need comes from"),
    ("sheet-parts.yaml", "depends on what the sheet is evaluated at"),
    ("sheet-scope-point.yaml", "depends on what the sheet is evaluated at"),
    ("sheet-scope-levels.yaml", "depends on what the sheet is evaluated at"),
    ("sheet-scope.yaml", "depends on what the sheet is evaluated at"),
    ("table-key-above.yaml", "order of rows"),
    ("table-key-order.yaml", "order of rows"),
    ("table-key-range.yaml", "a row's key is text"),
    ("unit-missing.yaml", "units"),
    ("unknown-name-table.yaml", "names of the same sheet"),
    ("unknown-name.yaml", "names of the same sheet"),
    ("unknown-word-demand.yaml", "names of the same sheet"),
    ("unknown-word-place.yaml", "places are text: a check's value may have any name"),
    ("unused-name.yaml", "names of the same sheet"),
    ("wrong-kind-table.yaml", "a kind that is right elsewhere"),
    ("wrong-kind.yaml", "a kind against a place"),
];

#[test]
fn a_schema_refuses_the_fault_fixtures_or_it_is_said_why_not() {
    let kinds = [
        (&JOINT, JOINTS, &UNSEEN[..]),
        (&PROJECT, PROJECTS, &UNSEEN_IN_PROJECTS[..]),
        (&SHEET, SHEETS, &UNSEEN_IN_SHEET_FIXTURES[..]),
    ];
    let mut found = Vec::new();
    for (table, fixtures, unseen) in kinds {
        let schema = schema(table, "faulty");
        let named = fixtures.files();
        for (name, file) in &named {
            // A file that is no YAML as the reader takes it has no tree to ask about.
            let Ok(root) = parse(name, &file.text) else {
                continue;
            };
            let refused = !departures(&schema, &json(&root)).is_empty();
            let excused = unseen.iter().any(|(known, _)| known == name);
            if refused == excused {
                found.push(format!(
                    "{name} of {}: refused {refused}, listed as unseen {excused}",
                    fixtures.folder
                ));
            }
        }
        for (known, _) in unseen {
            assert!(
                named.iter().any(|(name, _)| name == known),
                "{known} is a fixture"
            );
        }
    }
    assert!(found.is_empty(), "{}", found.join("\n"));
}

/// Each schema that an editor finds beside the demo joints, by its place.
const PUBLISHED: [(&str, SchemaKind); 3] = [
    ("joints/schemas/joint.schema.json", SchemaKind::Joint),
    ("joints/schemas/project.schema.json", SchemaKind::Project),
    ("joints/schemas/sheet.schema.json", SchemaKind::Sheet),
];

#[test]
fn schemas_beside_the_demo_joints_are_current_and_found_from_each_file() {
    let rewrite = std::env::var_os("INSTA_UPDATE").is_some_and(|mode| mode == "always");
    for (name, kind) in PUBLISHED {
        let text = published(kind);
        if rewrite {
            std::fs::create_dir_all(root().join("joints/schemas")).unwrap();
            std::fs::write(root().join(name), &text).unwrap();
        }
        assert_eq!(
            file(name).text,
            text,
            "{name}: print it by `seamnote schema`"
        );
    }
    for file in files("joints", &[".yaml"]) {
        let first = file.text.lines().next().unwrap_or_default();
        let place = first
            .strip_prefix("# yaml-language-server: $schema=")
            .unwrap_or_else(|| panic!("{} names no schema in its first line", file.name));
        let folder = root().join(&file.name);
        let schema = folder.parent().unwrap().join(place);
        assert!(schema.is_file(), "{}: no schema at {place}", file.name);
    }
}
