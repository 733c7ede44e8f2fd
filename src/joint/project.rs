//! The project file: what the joints of a folder share, put into a joint's tree before it is read.
//!
//! Every node keeps its own place, so faults and sources of an inherited value point into the
//! project file. What a joint says itself wins. Knows no quantity but whether it has a unit.

use super::Joint;
use super::read::check_project;
use crate::quantity::UnitSet;
use crate::source::{Diagnostic, FaultBag, Faults, Node, SourceFile, Told, Value, parse_yaml};
use std::sync::Arc;

/// Keys that a joint takes whole where it does not have them itself.
const WHOLE: [&str; 6] = ["units", "paper", "drawing", "item", "checks", "signatures"];

/// Lists to which a joint adds its own items.
const ADDED: [&str; 2] = ["assumptions", "cautions"];

/// Keys of a part that are no property of its material.
const OF_PART: [&str; 2] = ["material", "thickness"];

/// Keys of words, which have no unit.
const WORDS: [&str; 5] = ["material", "name", "source", "clause", "to be verified"];

/// A project file without faults.
#[derive(Clone, Debug)]
pub struct ProjectFile {
    /// The file.
    pub file: Arc<SourceFile>,
    root: Node,
    units: Option<UnitSet>,
}

/// Reads a project file.
///
/// # Errors
///
/// All faults of the file, in file order, whether a joint uses the entry or not.
pub fn read_project(file: &Arc<SourceFile>) -> Result<ProjectFile, Faults> {
    read_project_node(parse_yaml(file)?)
}

/// Reads the tree of a project file.
///
/// # Errors
///
/// As [`read_project`].
pub fn read_project_node(root: Node) -> Result<ProjectFile, Faults> {
    let faults = FaultBag::new();
    let units = check_project(&root, &faults);
    let (units, _) = faults.close(Some(units))?;
    Ok(ProjectFile {
        file: root.place.file.clone(),
        root,
        units,
    })
}

impl ProjectFile {
    /// A joint's tree with what it inherits, and the faults of inheriting.
    ///
    /// Taken whole where the joint lacks them: units, paper, drawing, item, checks, signatures.
    /// Assumptions and cautions stand before the joint's own. A part named by `joins`, a material
    /// named by a part that gives no property of it, and a filler named by a word are looked up.
    /// A `note` of digits alone gets the prefix.
    #[must_use]
    pub fn complete(&self, joint: &Node) -> (Node, Vec<Diagnostic>) {
        let mut root = joint.clone();
        let mut faults = Vec::new();
        if let Value::Map(entries) = &mut root.value {
            let same_units = self.agrees(entries);
            self.prefix_note(entries);
            self.take_filler(entries, &mut faults);
            self.take_parts(entries);
            self.take_whole(entries);
            self.add_lists(entries);
            if !same_units {
                self.check_units(entries, &mut faults);
            }
        }
        (root, faults)
    }

    /// Names under `parts`.
    #[must_use]
    pub fn part_names(&self) -> Vec<&str> {
        names(self.entry("parts"))
    }

    fn entry(&self, key: &str) -> Option<&Node> {
        find(&self.root, key)
    }

    /// The project's own entry with its key.
    fn pair(&self, key: &str) -> Option<(Told<String>, Node)> {
        pair(&self.root, key)
    }

    /// Whether bare numbers of the project file mean the same in the joint.
    ///
    /// A joint whose units cannot be read gets its own fault.
    fn agrees(&self, joint: &[(Told<String>, Node)]) -> bool {
        match joint.iter().find(|(key, _)| key.value == "units") {
            Some((_, own)) => set_of(own).is_none_or(|set| Some(set) == self.units),
            None => true,
        }
    }

    fn take_whole(&self, joint: &mut Vec<(Told<String>, Node)>) {
        for key in WHOLE {
            if !joint.iter().any(|(known, _)| known.value == key) {
                joint.extend(self.pair(key));
            }
        }
    }

    fn add_lists(&self, joint: &mut Vec<(Told<String>, Node)>) {
        for key in ADDED {
            let Some((told, shared)) = self.pair(key) else {
                continue;
            };
            match joint.iter_mut().find(|(known, _)| known.value == key) {
                Some((_, own)) => {
                    if let (Value::List(own), Value::List(shared)) = (&mut own.value, shared.value)
                    {
                        own.splice(0..0, shared);
                    }
                }
                None => joint.push((told, shared)),
            }
        }
    }

    fn prefix_note(&self, joint: &mut [(Told<String>, Node)]) {
        let Some(prefix) = self.entry("note prefix").and_then(text) else {
            return;
        };
        let note = joint.iter_mut().find(|(key, _)| key.value == "note");
        if let Some((_, note)) = note
            && let Value::Scalar { text, .. } = &mut note.value
            && !text.is_empty()
            && text.chars().all(|c| c.is_ascii_digit())
        {
            text.insert_str(0, prefix.trim());
        }
    }

    /// Puts the filler in whose name the joint gives.
    fn take_filler(&self, joint: &mut [(Told<String>, Node)], faults: &mut Vec<Diagnostic>) {
        let own = joint.iter_mut().find(|(key, _)| key.value == "filler");
        let Some((_, own)) = own else { return };
        let Some(name) = text(own).map(str::trim) else {
            return;
        };
        let Some((key, mut node)) = self.entry("fillers").and_then(|all| pair(all, name)) else {
            let message = format!("`{name}` is no filler of the project file");
            let known = listed(&names(self.entry("fillers")));
            let help = format!("{known}; or write `filler: {{name: ...}}`");
            faults.push(Diagnostic::error("unknown-filler", message, &own.place).help(help));
            // A filler that reads, so that this stays the only fault.
            let told = Told {
                value: name.to_owned(),
                place: own.place.clone(),
            };
            own.value = Value::Map(vec![name_entry(told)]);
            return;
        };
        if let Value::Map(entries) = &mut node.value {
            entries.insert(0, name_entry(key));
        }
        *own = node;
    }

    /// Adds the parts that the weld names, then the materials that parts name.
    fn take_parts(&self, joint: &mut Vec<(Told<String>, Node)>) {
        let mut joined = Vec::new();
        if let Some((_, weld)) = joint.iter().find(|(key, _)| key.value == "weld") {
            joined_names(weld, &mut joined);
        }
        let shared = self.pair("parts");
        let at = joint.iter().position(|(key, _)| key.value == "parts");
        let own = at.is_some();
        let at = match (at, &shared) {
            (Some(at), _) => at,
            (None, Some((key, node))) => {
                let empty = Node {
                    value: Value::Map(Vec::new()),
                    place: node.place.clone(),
                };
                joint.push((key.clone(), empty));
                joint.len() - 1
            }
            (None, None) => return,
        };
        let Value::Map(parts) = &mut joint[at].1.value else {
            return;
        };
        for name in joined {
            let known = parts.iter().any(|(key, _)| key.value == name);
            if let (false, Some((_, shared))) = (known, &shared) {
                parts.extend(pair(shared, &name));
            }
        }
        for (_, part) in parts.iter_mut() {
            self.take_material(part);
        }
        // Without a part it is the joint that lacks the key.
        if parts.is_empty() && !own {
            joint.pop();
        }
    }

    /// Gives a part the properties of its material, all or none: a source covers all strengths
    /// beside it.
    fn take_material(&self, part: &mut Node) {
        let Some(name) = find(part, "material").and_then(text) else {
            return;
        };
        let material = self
            .entry("materials")
            .and_then(|all| find(all, name.trim()));
        let (Some(Value::Map(given)), Value::Map(own)) =
            (material.map(|node| &node.value), &mut part.value)
        else {
            return;
        };
        if own
            .iter()
            .all(|(key, _)| OF_PART.contains(&key.value.as_str()))
        {
            own.extend(given.iter().cloned());
        }
    }

    /// Refuses inherited numbers without a unit, which would mean something else in the joint.
    fn check_units(&self, joint: &[(Told<String>, Node)], faults: &mut Vec<Diagnostic>) {
        let mut bare = Vec::new();
        for (key, node) in joint {
            if ["parts", "filler", "checks"].contains(&key.value.as_str()) {
                bare_numbers(node, &self.file, &mut bare);
            }
        }
        let unit = match self.units {
            Some(_) => "the joint has other `units` than the project file",
            None => "the project file has no `units`",
        };
        for (number, node) in bare {
            let message = format!("`{number}` has no unit, and {unit}");
            let help = "write its unit here (a ratio may be in %), or the whole entry in the joint";
            faults.push(Diagnostic::error("unit-missing", message, &node.place).help(help));
        }
    }
}

/// An entry `name` that says what a key said.
fn name_entry(key: Told<String>) -> (Told<String>, Node) {
    let told = Told {
        value: "name".to_owned(),
        place: key.place.clone(),
    };
    let node = Node {
        value: Value::Scalar {
            text: key.value,
            quoted: true,
        },
        place: key.place,
    };
    (told, node)
}

impl Joint {
    /// The name without folders of the file that the joint inherits inputs from, if it does.
    #[must_use]
    pub fn inherits_from(&self) -> Option<&str> {
        let own = &self.note.place.file;
        let parts = self.parts.iter().flat_map(|part| {
            let given = [&part.f_y, &part.f_u].into_iter().flatten();
            let more = part.more.iter().map(|(_, raw)| &raw.place);
            given
                .map(|given| &given.place)
                .chain(more)
                .chain([&part.name.place])
        });
        let rest = [&self.units.place]
            .into_iter()
            .chain(self.filler.iter().map(|filler| &filler.place))
            .chain(self.checks.iter().map(|check| &check.place))
            .chain(self.assumptions.iter().map(|item| &item.says.place));
        let other = parts.chain(rest).find(|place| place.file != *own)?;
        other.file.name.rsplit('/').next()
    }
}

fn pair(map: &Node, key: &str) -> Option<(Told<String>, Node)> {
    let Value::Map(entries) = &map.value else {
        return None;
    };
    entries
        .iter()
        .find(|(known, _)| known.value == key)
        .cloned()
}

fn find<'a>(map: &'a Node, key: &str) -> Option<&'a Node> {
    let Value::Map(entries) = &map.value else {
        return None;
    };
    let (_, node) = entries.iter().find(|(known, _)| known.value == key)?;
    Some(node)
}

fn text(node: &Node) -> Option<&str> {
    match &node.value {
        Value::Scalar { text, .. } => Some(text),
        Value::List(_) | Value::Map(_) | Value::Null => None,
    }
}

fn names(map: Option<&Node>) -> Vec<&str> {
    match map.map(|map| &map.value) {
        Some(Value::Map(entries)) => entries.iter().map(|(key, _)| key.value.as_str()).collect(),
        _ => Vec::new(),
    }
}

fn listed(names: &[&str]) -> String {
    if names.is_empty() {
        return "it names none".to_owned();
    }
    let quoted: Vec<String> = names.iter().map(|name| format!("`{name}`")).collect();
    format!("it names: {}", quoted.join(", "))
}

/// The printing set of an entry `units`, if it reads.
fn set_of(units: &Node) -> Option<UnitSet> {
    let of = |key| find(units, key).and_then(text).map(str::trim);
    UnitSet::from_names(of("force")?, of("length")?)
}

/// Every name under a key `joins` at any depth, in file order.
fn joined_names(node: &Node, names: &mut Vec<String>) {
    match &node.value {
        Value::Map(entries) => {
            for (key, value) in entries {
                match &value.value {
                    Value::List(items) if key.value == "joins" => {
                        let told = items.iter().filter_map(text);
                        names.extend(told.map(|name| name.trim().to_owned()));
                    }
                    _ => joined_names(value, names),
                }
            }
        }
        Value::List(items) => items.iter().for_each(|item| joined_names(item, names)),
        Value::Scalar { .. } | Value::Null => {}
    }
}

/// The numbers without a unit that stand in `file`.
fn bare_numbers<'a>(node: &'a Node, file: &Arc<SourceFile>, found: &mut Vec<(&'a str, &'a Node)>) {
    match &node.value {
        Value::Map(entries) => {
            let quantities = entries
                .iter()
                .filter(|(key, _)| !WORDS.contains(&key.value.as_str()));
            quantities.for_each(|(_, value)| bare_numbers(value, file, found));
        }
        Value::List(items) => items
            .iter()
            .for_each(|item| bare_numbers(item, file, found)),
        Value::Scalar { text, .. } if node.place.file == *file && is_bare(text) => {
            found.push((text, node));
        }
        Value::Scalar { .. } | Value::Null => {}
    }
}

/// Whether a text is a number with neither unit nor per cent.
fn is_bare(text: &str) -> bool {
    let signs = |c: char| "+-−./, eE".contains(c);
    text.chars().any(|c| c.is_ascii_digit()) && text.chars().all(|c| c.is_ascii_digit() || signs(c))
}
