//! A reader over the entries of a map: known keys, free keys, and faults for all others.
//!
//! Collects faults and goes on, so that a file's faults are told in one go. Used for joints,
//! project files and clause sheets alike.

use super::item::{listed, nearest_of};
use super::{Diagnostic, FaultBag, Item, KeyTable, Node, Place, Told};

/// Items of a list of words at most: what no reader reads is no part of a note.
const MOST: usize = 1000;

/// A map being read key by key; [`Fields::finish`] refuses what was not asked for.
///
/// # Examples
///
/// ```
/// use seamnote::source::{FaultBag, Form, Item, Key, KeyTable, SourceFile, parse_yaml, read_keyed};
/// use std::sync::Arc;
///
/// static SHEET: KeyTable = KeyTable::new("a sheet", "What a sheet holds", &[
///     Key::must("name", Form::Text, "its name", "WPS-31"),
///     Key::may("size", Form::Text, "a number", "6"),
///     Key::may("table", Form::Named(&Form::Text, 0), "numbers by their names", "{a: 1}"),
/// ]);
/// let text = "name: WPS-31\nsize: 6\ntable: {a: 1, b: 2}\n".to_owned();
/// let root = parse_yaml(&Arc::new(SourceFile { name: "x.yaml".into(), text })).expect("it is YAML");
/// let faults = FaultBag::new();
/// let mut fields = read_keyed(&root, &SHEET, &faults).expect("it is a map");
/// let name = fields.required("name", Item::line).expect("it is there");
/// let size = fields.optional("size", Item::number);
/// let table = fields.optional("table", |item| item.entries(|key, value| Some((key.value.clone(), value.number()?.value))));
/// fields.finish();
/// assert_eq!(name.value, "WPS-31");
/// assert_eq!(size.map(|size| size.value), Some(6.0));
/// assert_eq!(table, Some(vec![("a".to_owned(), 1.0), ("b".to_owned(), 2.0)]));
/// assert!(!faults.has_errors());
/// ```
#[must_use = "`finish` refuses unknown keys"]
#[derive(Debug)]
pub struct Fields<'a> {
    table: &'static KeyTable,
    entries: &'a [(Told<String>, Node)],
    taken: Vec<bool>,
    place: &'a Place,
    faults: &'a FaultBag,
}

impl<'a> Fields<'a> {
    pub(super) fn new(
        table: &'static KeyTable,
        entries: &'a [(Told<String>, Node)],
        place: &'a Place,
        faults: &'a FaultBag,
    ) -> Self {
        Self {
            table,
            entries,
            taken: vec![false; entries.len()],
            place,
            faults,
        }
    }

    /// Where the map stands.
    #[must_use]
    pub fn place(&self) -> &'a Place {
        self.place
    }

    /// Where faults go.
    #[must_use]
    pub fn faults(&self) -> &'a FaultBag {
        self.faults
    }

    /// Leaves a fault at the map.
    pub fn refuse<T>(
        &self,
        code: &'static str,
        message: impl Into<String>,
        help: impl Into<String>,
    ) -> Option<T> {
        self.faults
            .refuse(Diagnostic::error(code, message, self.place).help(help))
    }

    /// Whether the file has the key.
    #[must_use]
    pub fn has(&self, key: &str) -> bool {
        self.entries.iter().any(|(known, _)| known.value == key)
    }

    /// A key's value without taking it, if the file has it.
    #[must_use]
    pub fn peek(&self, key: &'static str) -> Option<Item<'a>> {
        let (_, node) = self.entries.iter().find(|(known, _)| known.value == key)?;
        Some(Item {
            name: key,
            node,
            faults: self.faults,
        })
    }

    /// Takes a key's value unread, if the file has it.
    ///
    /// # Panics
    ///
    /// If the table of keys lacks this one: a mistake of the reader.
    pub fn take(&mut self, key: &'static str) -> Option<Item<'a>> {
        assert!(
            self.table.find(key).is_some(),
            "the table of {} lacks the key `{key}` that its reader asks for",
            self.table.what
        );
        let at = self
            .entries
            .iter()
            .position(|(known, _)| known.value == key)?;
        self.taken[at] = true;
        Some(Item {
            name: key,
            node: &self.entries[at].1,
            faults: self.faults,
        })
    }

    /// Reads a key that must be there; `None` leaves a fault.
    pub fn required<T>(
        &mut self,
        key: &'static str,
        read: impl FnOnce(Item<'a>) -> Option<T>,
    ) -> Option<T> {
        match self.take(key) {
            Some(item) => read(item),
            None => {
                let message = format!("{} needs `{key}`", self.table.what);
                let example = self.table.find(key).map_or("...", |key| key.example);
                let help = format!("write `{key}: {example}`, with your own value");
                self.lacks("missing-key", &[key], message, Some(&help))
            }
        }
    }

    /// Whether a key that the map does not take was meant for one of these, which then need not be missed.
    #[must_use]
    pub fn misspells(&self, keys: &[&str]) -> bool {
        let mut strangers = self.entries.iter().zip(&self.taken);
        strangers.any(|((typed, node), taken)| {
            let strange = !taken && self.table.find(&typed.value).is_none();
            let meant = || self.meant(&typed.value, node);
            strange && meant().is_some_and(|meant| keys.contains(&meant))
        })
    }

    /// Leaves a fault at the map for the lack of one of some keys, if none of them is misspelt.
    pub fn lacks<T>(
        &self,
        code: &'static str,
        keys: &[&str],
        message: impl Into<String>,
        help: Option<&str>,
    ) -> Option<T> {
        if self.misspells(keys) {
            return None;
        }
        let mut fault = Diagnostic::error(code, message, self.place);
        fault.help.extend(help.map(str::to_owned));
        self.faults.refuse(fault)
    }

    /// Refuses a key that belongs elsewhere, in words of its own, if the file has it.
    pub fn astray(&mut self, code: &'static str, key: &str, help: &str) {
        let Some(at) = self
            .entries
            .iter()
            .position(|(known, _)| known.value == key)
        else {
            return;
        };
        self.taken[at] = true;
        let message = format!("{} takes no `{key}`", self.table.what);
        let fault = Diagnostic::error(code, message, &self.entries[at].1.place);
        self.faults.push(fault.help(help));
    }

    /// Reads a key that may be left out; `None` if it is, or after a fault.
    pub fn optional<T>(
        &mut self,
        key: &'static str,
        read: impl FnOnce(Item<'a>) -> Option<T>,
    ) -> Option<T> {
        self.take(key).and_then(read)
    }

    /// Reads a value that entries below fall back on: the outer `None` if it is not told, the inner
    /// one if it is told but refused, or misspelt.
    pub fn usual<T>(
        &mut self,
        key: &'static str,
        read: impl FnOnce(Item<'a>) -> Option<T>,
    ) -> Option<Option<T>> {
        match self.take(key) {
            Some(item) => Some(read(item)),
            None => self.misspells(&[key]).then_some(None),
        }
    }

    /// Reads a list that may be left out: then, and after a fault, it is empty.
    pub fn optional_list<T>(
        &mut self,
        key: &'static str,
        read: impl FnMut(Item<'a>) -> Option<T>,
    ) -> Vec<T> {
        let Some(item) = self.take(key) else {
            return Vec::new();
        };
        let count = item.count();
        if count > MOST {
            let message = format!("`{key}` has {count} items, but a note takes {MOST} at most");
            let fault = Diagnostic::error("too-many", message, item.place());
            self.faults
                .push(fault.help("refer to a document that holds them"));
            return Vec::new();
        }
        item.list(read).unwrap_or_default()
    }

    /// Takes all keys not asked for by name; one that looks like a slip for a known key is a fault.
    pub fn free(&mut self) -> Vec<(&'a Told<String>, Item<'a>)> {
        let mut free = Vec::new();
        for (at, (key, node)) in self.entries.iter().enumerate() {
            if self.taken[at] || self.meant(&key.value, node).is_some() {
                continue;
            }
            self.taken[at] = true;
            let item = Item {
                name: &key.value,
                node,
                faults: self.faults,
            };
            free.push((key, item));
        }
        free
    }

    /// Ends the reading; each key not taken is a fault.
    pub fn finish(self) {
        for (taken, (key, node)) in self.taken.iter().zip(self.entries) {
            if !taken {
                self.faults.push(self.unknown(key, node));
            }
        }
    }

    fn unknown(&self, key: &Told<String>, node: &Node) -> Diagnostic {
        let cut = super::item::cut_at_comma(&key.value, &key.place);
        if let Some(fault) = cut.filter(|_| node.value == super::Value::Null) {
            return fault;
        }
        let message = format!("`{}` is no key of {}", key.value, self.table.what);
        let mut fault = Diagnostic::error("unknown-key", message, &key.place);
        if let Some(meant) = self.unparted(&key.value, node) {
            let value = key.value[meant.len()..].trim_start_matches([':', '=', ' ']);
            fault = fault.help(format!(
                "a colon and a blank part a key from its value: `{meant}: {value}`"
            ));
        } else if let Some(meant) = self.meant(&key.value, node) {
            fault = fault.help(format!("did you mean `{meant}`?"));
        }
        if node.value == super::Value::Null && self.unparted(&key.value, node).is_none() {
            fault = fault.help("if it is part of a text: a comma inside `{ }` ends a text, so quote the whole text");
        }
        let others = match self.table.free {
            Some(_) => ", and the names that clause sheets ask for",
            None => "",
        };
        fault.help(format!("allowed here: {}{others}", listed(&self.names())))
    }

    /// The key that a text begins with which YAML took for a key as a whole: `fillet:6`, `fillet = 6`.
    fn unparted(&self, typed: &str, node: &Node) -> Option<&'static str> {
        if node.value != super::Value::Null {
            return None;
        }
        let mut names = self.names().into_iter();
        names.find(|name| {
            let rest = typed.strip_prefix(name);
            rest.is_some_and(|rest| rest.starts_with([':', '=', ' ']))
        })
    }

    fn names(&self) -> Vec<&'static str> {
        self.table.keys.iter().map(|key| key.name).collect()
    }

    /// The known key that a key of no table was meant for.
    ///
    /// Where any key may stand: the same but for case, `_` and spaces, or one or two slips away
    /// from a long word. Short symbols may differ by a letter (`f_y`, `f_t`).
    fn meant(&self, typed: &str, node: &Node) -> Option<&'static str> {
        if let Some(key) = self.unparted(typed, node) {
            return Some(key);
        }
        if self.table.free.is_none() {
            return nearest_of(typed, &self.names());
        }
        let bare = |word: &str| word.replace(['_', ' ', '-'], "").to_lowercase();
        let absent = self.names().into_iter().filter(|key| !self.has(key));
        let long: Vec<&'static str> = absent.clone().filter(|key| key.len() > 4).collect();
        absent
            .into_iter()
            .find(|key| bare(key) == bare(typed))
            .or_else(|| nearest_of(typed, &long))
    }
}
