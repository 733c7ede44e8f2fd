//! A reader over the entries of a map: known keys, free keys, and faults for all others.
//!
//! Collects faults and goes on, so that a file's faults are told in one go. Used for joints,
//! project files and clause sheets alike.

use super::item::{listed, nearest_of};
use super::{Diagnostic, FaultBag, Item, KeyTable, Node, Place, Told};

/// A map being read key by key; [`Fields::finish`] refuses what was not asked for.
///
/// # Examples
///
/// ```
/// use seamnote::source::{FaultBag, Item, SourceFile, parse_yaml, read_map};
/// use std::sync::Arc;
///
/// let text = "name: WPS-31\nsize: 6\ntable: {a: 1, b: 2}\n".to_owned();
/// let root = parse_yaml(&Arc::new(SourceFile { name: "x.yaml".into(), text })).expect("it is YAML");
/// let faults = FaultBag::new();
/// let mut fields = read_map(&root, "a sheet", &faults).expect("it is a map");
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
    what: &'static str,
    table: Option<&'static KeyTable>,
    entries: &'a [(Told<String>, Node)],
    taken: Vec<bool>,
    known: Vec<&'static str>,
    place: &'a Place,
    faults: &'a FaultBag,
}

impl<'a> Fields<'a> {
    pub(super) fn new(
        what: &'static str,
        entries: &'a [(Told<String>, Node)],
        place: &'a Place,
        faults: &'a FaultBag,
    ) -> Self {
        Self {
            what,
            table: None,
            entries,
            taken: vec![false; entries.len()],
            known: Vec::new(),
            place,
            faults,
        }
    }

    /// The same reader, held to a table of keys.
    pub(super) fn with_table(mut self, table: &'static KeyTable) -> Self {
        self.table = Some(table);
        self
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
    /// If the map has a table of keys and this is none of them: a mistake of the reader.
    pub fn take(&mut self, key: &'static str) -> Option<Item<'a>> {
        if let Some(table) = self.table {
            assert!(
                table.find(key).is_some(),
                "the table of {} lacks the key `{key}` that its reader asks for",
                self.what
            );
        }
        if !self.known.contains(&key) {
            self.known.push(key);
        }
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
            None => self.faults.refuse(Diagnostic::error(
                "missing-key",
                self.needs(key),
                self.place,
            )),
        }
    }

    /// Reads a key that may be left out; `None` if it is, or after a fault.
    pub fn optional<T>(
        &mut self,
        key: &'static str,
        read: impl FnOnce(Item<'a>) -> Option<T>,
    ) -> Option<T> {
        self.take(key).and_then(read)
    }

    /// Reads a list that may be left out: then, and after a fault, it is empty.
    pub fn optional_list<T>(
        &mut self,
        key: &'static str,
        read: impl FnMut(Item<'a>) -> Option<T>,
    ) -> Vec<T> {
        self.take(key)
            .and_then(|item| item.list(read))
            .unwrap_or_default()
    }

    /// Takes all keys not asked for by name; one that looks like a slip for a known key is a fault.
    pub fn free(&mut self) -> Vec<(&'a Told<String>, Item<'a>)> {
        let mut free = Vec::new();
        for (at, (key, node)) in self.entries.iter().enumerate() {
            if std::mem::replace(&mut self.taken[at], true) {
                continue;
            }
            match self.slip(&key.value) {
                Some(meant) => self.faults.push(self.unknown(key, node, Some(meant))),
                None => free.push((
                    key,
                    Item {
                        name: &key.value,
                        node,
                        faults: self.faults,
                    },
                )),
            }
        }
        free
    }

    /// Ends the reading; each key not taken is a fault.
    pub fn finish(self) {
        for (taken, (key, node)) in self.taken.iter().zip(self.entries) {
            if !taken {
                self.faults
                    .push(self.unknown(key, node, nearest_of(&key.value, &self.known)));
            }
        }
    }

    fn needs(&self, key: &str) -> String {
        format!("{} needs `{key}`", self.what)
    }

    /// The fault of a key that is not taken; it also stands for the missing key it was meant for.
    fn unknown(&self, key: &Told<String>, node: &Node, meant: Option<&str>) -> Diagnostic {
        let message = format!("`{}` is no key of {}", key.value, self.what);
        let mut fault = Diagnostic::error("unknown-key", message, &key.place);
        if let Some(meant) = meant {
            self.faults
                .withdraw("missing-key", &self.needs(meant), self.place);
            fault = fault.help(format!("did you mean `{meant}`?"));
        }
        if node.value == super::Value::Null {
            fault = fault.help("if it is part of a text: a comma inside `{ }` ends a text, so quote the whole text");
        }
        fault.help(format!("allowed here: {}", listed(&self.known)))
    }

    /// The known key that a free one was meant for: the same but for case, `_` and spaces, or
    /// one or two slips away from a long word. Short symbols may differ by a letter (`f_y`, `f_t`).
    fn slip(&self, typed: &str) -> Option<&'static str> {
        let bare = |word: &str| word.replace(['_', ' ', '-'], "").to_lowercase();
        let absent = self.known.iter().copied().filter(|key| !self.has(key));
        let long: Vec<&'static str> = absent.clone().filter(|key| key.len() > 4).collect();
        absent
            .into_iter()
            .find(|key| bare(key) == bare(typed))
            .or_else(|| nearest_of(typed, &long))
    }
}
