//! A value with the name it goes by and the bag its faults go into, and the plain readers of it.
//!
//! Every reader returns `None` once it has left a fault, so that reading goes on. Quantities
//! are read by those who know a printing set.

use super::{Diagnostic, FaultBag, Fields, KeyTable, Node, Place, Told, Value};

/// A value to be read.
#[derive(Clone, Copy, Debug)]
pub struct Item<'a> {
    /// What the file calls it, such as the key `throat`.
    pub name: &'a str,
    /// The value.
    pub node: &'a Node,
    /// Where its faults go.
    pub faults: &'a FaultBag,
}

impl<'a> Item<'a> {
    /// Where the value stands.
    #[must_use]
    pub fn place(&self) -> &'a Place {
        &self.node.place
    }

    /// Leaves a fault at the value.
    pub fn refuse<T>(&self, code: &'static str, message: impl Into<String>) -> Option<T> {
        self.faults
            .refuse(Diagnostic::error(code, message, self.place()))
    }

    /// Leaves a fault at the value, with a line of help.
    pub fn refuse_with<T>(
        &self,
        code: &'static str,
        message: impl Into<String>,
        help: impl Into<String>,
    ) -> Option<T> {
        self.faults
            .refuse(Diagnostic::error(code, message, self.place()).help(help))
    }

    /// The scalar's text, trimmed, and whether it was quoted; a list, a map or nothing is a fault.
    pub fn scalar(self) -> Option<(Told<String>, bool)> {
        match &self.node.value {
            Value::Scalar { text, quoted } => Some((
                Told {
                    value: text.trim().to_owned(),
                    place: self.place().clone(),
                },
                *quoted,
            )),
            Value::Null => self.empty(),
            Value::Map(_) if self.is_text_with_colon() => self.refuse_colon(),
            Value::List(_) | Value::Map(_) => self.refuse_with(
                "not-a-scalar",
                format!(
                    "`{}` is {}, but must be a single value",
                    self.name,
                    self.node.word()
                ),
                "write one value without brackets; quote a text that starts with `[` or `{`",
            ),
        }
    }

    /// A word or number as typed, for a reader who knows later what it must be.
    pub fn raw(self) -> Option<Told<String>> {
        self.scalar()
            .map(|(text, _)| text)
            .and_then(|text| self.not_empty(text))
    }

    /// Prose: any text that is not empty, over several lines if need be.
    pub fn text(self) -> Option<Told<String>> {
        let (text, quoted) = self.scalar()?;
        if !quoted && self.is_cut_by_comment() {
            return self.refuse_with(
                "cut-by-comment",
                format!("a ` #` starts a comment, so `{}` ends before it", self.name),
                "quote the text if the `#` belongs to it; else put the comment on a line of its own",
            );
        }
        if !quoted && matches!(text.value.as_str(), "~" | "null") {
            return self.empty();
        }
        if text
            .value
            .chars()
            .any(|c| c.is_control() && !matches!(c, '\n' | '\t'))
        {
            return self.refuse(
                "control-character",
                format!("`{}` holds a control character", self.name),
            );
        }
        self.not_empty(text)
    }

    /// A text of one line, such as a title or a name.
    pub fn line(self) -> Option<Told<String>> {
        let text = self.text()?;
        if text.value.contains('\n') {
            let message = format!("`{}` must be one line", self.name);
            return self.refuse_with("line-break", message, "write it without a line break");
        }
        Some(text)
    }

    /// `true` or `false`.
    pub fn flag(self) -> Option<bool> {
        self.word(&[("true", true), ("false", false)])
            .map(|told| told.value)
    }

    /// One of the words listed, with what it stands for.
    pub fn word<T: Copy>(self, words: &[(&str, T)]) -> Option<Told<T>> {
        let text = self.raw()?;
        if let Some((_, value)) = words.iter().find(|(word, _)| *word == text.value) {
            return Some(Told {
                value: *value,
                place: text.place,
            });
        }
        let known: Vec<&str> = words.iter().map(|(word, _)| *word).collect();
        let mut fault = Diagnostic::error(
            "unknown-word",
            format!("`{}` is no word for `{}`", text.value, self.name),
            &text.place,
        );
        if let Some(near) = nearest_of(&text.value, &known) {
            fault = fault.help(format!("did you mean `{near}`?"));
        }
        self.faults
            .refuse(fault.help(format!("allowed here: {}", listed(&known))))
    }

    /// A plain number: no unit, no fraction.
    pub fn number(self) -> Option<Told<f64>> {
        let text = self.raw()?;
        let typed = text.value.replace('−', "-");
        let digits = typed.strip_prefix('+').unwrap_or(&typed);
        match digits.parse::<f64>() {
            Ok(value) if value.is_finite() && !digits.contains(['n', 'N', 'i', 'I']) => {
                Some(Told {
                    value,
                    place: text.place,
                })
            }
            _ if typed.contains(',') => self.refuse_with(
                "decimal-comma",
                format!("`{}` has a decimal comma", text.value),
                format!(
                    "decimals take a point, as in `{}`",
                    text.value.replace(',', ".")
                ),
            ),
            _ => self.refuse(
                "not-a-number",
                format!(
                    "`{}` is `{}`, but must be a plain number",
                    self.name, text.value
                ),
            ),
        }
    }

    /// The items of a list, each read; a list with a faulty item gives none.
    pub fn list<T>(self, mut read: impl FnMut(Self) -> Option<T>) -> Option<Vec<T>> {
        let items: Vec<Option<T>> = self.items()?.into_iter().map(&mut read).collect();
        items.into_iter().collect()
    }

    /// How many items a list has; 0 for what is none.
    #[must_use]
    pub fn count(self) -> usize {
        match &self.node.value {
            Value::List(nodes) => nodes.len(),
            Value::Scalar { .. } | Value::Map(_) | Value::Null => 0,
        }
    }

    /// The items of a list, unread.
    pub fn items(self) -> Option<Vec<Self>> {
        match &self.node.value {
            Value::List(nodes) => Some(nodes.iter().map(|node| Self { node, ..self }).collect()),
            Value::Null => self.empty(),
            Value::Scalar { .. } | Value::Map(_) => self.refuse_with(
                "not-a-list",
                format!(
                    "`{}` is {}, but must be a list",
                    self.name,
                    self.node.word()
                ),
                "write `[one, two]`, or one item a line after `- `",
            ),
        }
    }

    /// The entries of a map with free keys, each read, in file order.
    pub fn entries<T>(
        self,
        mut read: impl FnMut(&'a Told<String>, Self) -> Option<T>,
    ) -> Option<Vec<T>> {
        let entries = self.map()?;
        let all: Vec<Option<T>> = entries
            .iter()
            .map(|(key, node)| {
                read(
                    key,
                    Self {
                        name: &key.value,
                        node,
                        faults: self.faults,
                    },
                )
            })
            .collect();
        all.into_iter().collect()
    }

    /// A reader of a map whose keys a table declares.
    pub fn keyed(self, table: &'static KeyTable) -> Option<Fields<'a>> {
        let entries = self.map()?;
        Some(Fields::new(table, entries, self.place(), self.faults))
    }

    fn map(self) -> Option<&'a [(Told<String>, Node)]> {
        match &self.node.value {
            Value::Map(entries) => Some(entries),
            Value::Null => self.empty(),
            Value::Scalar { .. } | Value::List(_) => self.refuse_with(
                "not-a-map",
                format!("`{}` is {}, but must be a map", self.name, self.node.word()),
                "write `{key: value, ...}`, or one `key: value` a line, indented",
            ),
        }
    }

    fn empty<T>(&self) -> Option<T> {
        if let Some(fault) = cut_at_comma(self.name, self.place()) {
            return self.faults.refuse(fault);
        }
        self.refuse_with(
            "empty-value",
            format!("`{}` has no value", self.name),
            "write its value, or take the key out where it is not needed",
        )
    }

    fn not_empty(&self, text: Told<String>) -> Option<Told<String>> {
        if text.value.is_empty() {
            self.empty()
        } else {
            Some(text)
        }
    }

    /// Whether the value is most likely a text that YAML took for a key and its value.
    #[must_use]
    pub fn is_text_with_colon(&self) -> bool {
        let braced = self.place().file.text[self.place().start..].starts_with('{');
        match &self.node.value {
            Value::Map(entries) => !braced && entries.len() == 1,
            Value::Scalar { .. } | Value::List(_) | Value::Null => false,
        }
    }

    /// Leaves the fault of an unquoted text with a colon.
    pub fn refuse_colon<T>(&self) -> Option<T> {
        self.refuse_with(
            "colon-in-text",
            "a `: ` inside an unquoted text makes it a key with a value",
            "quote the text, as in `\"one: two\"`",
        )
    }

    /// Whether a comment follows the value on its line.
    fn is_cut_by_comment(&self) -> bool {
        let rest = self
            .place()
            .file
            .text
            .get(self.place().end..)
            .unwrap_or_default();
        let line = rest.lines().next().unwrap_or_default();
        line.starts_with([' ', '\t']) && line.trim_start().starts_with('#')
    }
}

/// Reads the root of a file as a map whose keys a table declares.
pub fn read_keyed<'a>(
    node: &'a Node,
    table: &'static KeyTable,
    faults: &'a FaultBag,
) -> Option<Fields<'a>> {
    Item {
        name: "the file",
        node,
        faults,
    }
    .keyed(table)
}

/// The known word that a typed one was most likely meant for.
///
/// The bound is this project's own: one slip in a short word, two in a longer one.
pub fn nearest_of<'k>(typed: &str, known: &[&'k str]) -> Option<&'k str> {
    let typed_low = typed.to_lowercase();
    let slips = |word: &str| strsim::damerau_levenshtein(&typed_low, &word.to_lowercase());
    let best = known
        .iter()
        .copied()
        .map(|word| (slips(word), word))
        .min_by_key(|(slips, _)| *slips)?;
    let bound = if typed.chars().count() > 4 { 2 } else { 1 };
    (best.0 <= bound).then_some(best.1)
}

/// Words in backquotes, with commas between.
pub(super) fn listed(words: &[&str]) -> String {
    words
        .iter()
        .map(|word| format!("`{word}`"))
        .collect::<Vec<_>>()
        .join(", ")
}

/// The fault of a key that is the second part of a number, which a decimal comma in braces cut in two.
pub(super) fn cut_at_comma(key: &str, place: &Place) -> Option<Diagnostic> {
    let before = place.file.text.get(..place.start)?.strip_suffix(',')?;
    let digits = |c: char| c.is_ascii_digit();
    let whole = &before[before.trim_end_matches(digits).len()..];
    if whole.is_empty() || !key.starts_with(digits) {
        return None;
    }
    let number = format!("{whole},{key}");
    let point = number.replace(',', ".");
    let message = format!("`{number}` has a decimal comma");
    let fault = Diagnostic::error("decimal-comma", message, place);
    Some(fault.help(format!("decimals take a point, as in `{point}`")))
}
