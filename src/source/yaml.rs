//! Users' YAML files as a tree in which every node keeps its place and every scalar its text.
//!
//! YAML 1.2 events come from `saphyr-parser`. Scalars stay text (`1E3`, `NO`, `007`): what a
//! value means is for the reader of a field to say. Anchors, aliases and tags are refused, so a
//! small file cannot grow into a large tree.

use super::{Diagnostic, FaultBag, Faults, Place, SourceFile, Told, syntax};
use saphyr_parser::{Event, Parser, ScalarStyle, ScanError, Span};
use std::collections::BTreeMap;
use std::sync::Arc;

/// Largest file that is read (bytes). A joint file has a few kilobytes; a larger one is a mistake.
const MAX_BYTES: usize = 8 * 1024 * 1024;

/// Deepest nesting that is read; the file forms of this program need less than ten.
const MAX_DEPTH: usize = 64;

/// A node of the tree.
#[derive(Clone, PartialEq, Debug)]
pub struct Node {
    /// What it holds.
    pub value: Value,
    /// Where it stands; for an empty value, the place of its key.
    pub place: Place,
}

/// What a node holds.
#[derive(Clone, PartialEq, Debug)]
pub enum Value {
    /// A scalar as text.
    Scalar {
        /// The text, without its quotes.
        text: String,
        /// Whether it was quoted, or a block of text (`|`, `>`).
        quoted: bool,
    },
    /// A list.
    List(Vec<Node>),
    /// A map in file order; its keys are distinct.
    Map(Vec<(Told<String>, Node)>),
    /// Nothing after the key, the dash or the comma.
    Null,
}

impl Node {
    /// What the node is, in a word with its article, as used in fault texts.
    #[must_use]
    pub fn word(&self) -> &'static str {
        match self.value {
            Value::Scalar { .. } => "a single value",
            Value::List(_) => "a list",
            Value::Map(_) => "a map",
            Value::Null => "empty",
        }
    }
}

/// Reads a file's text into its tree.
///
/// # Errors
///
/// All faults of form: `file-too-large`, `nul-character`, `byte-order-mark`, `empty-file`; the
/// first fault of syntax (`yaml-syntax`, `colon-in-text`, `tab-indent`, `not-closed`);
/// `several-documents`, `too-deep`; every `duplicate-key`, `odd-key`, `anchor`, `alias`, `tag`.
pub fn parse_yaml(file: &Arc<SourceFile>) -> Result<Node, Faults> {
    check_text(file)?;
    let mut tree = Tree::new(file);
    for event in Parser::new_from_str(&file.text) {
        match event {
            Ok((event, span)) => tree.take(event, span)?,
            Err(error) => return Err(tree.stop(&error).into()),
        }
    }
    let root = tree.root.take();
    if root.is_none() && !tree.faults.has_errors() {
        let place = Place {
            file: file.clone(),
            start: 0,
            end: 0,
        };
        return Err(Diagnostic::error("empty-file", "the file holds no YAML", &place).into());
    }
    Ok(tree.faults.close(root)?.0)
}

/// Refuses texts that are no YAML before any parsing.
fn check_text(file: &Arc<SourceFile>) -> Result<(), Faults> {
    let place = |start: usize, end: usize| Place {
        file: file.clone(),
        start,
        end,
    };
    if file.text.len() > MAX_BYTES {
        let message = format!(
            "the file has {} bytes, but may have {MAX_BYTES} at most",
            file.text.len()
        );
        return Err(Diagnostic::error("file-too-large", message, &place(0, 0)).into());
    }
    if file.text.starts_with('\u{feff}') {
        return Err(Diagnostic::error(
            "byte-order-mark",
            "the file starts with a byte order mark",
            &place(0, 0),
        )
        .help("save it as UTF-8 without a byte order mark")
        .into());
    }
    if let Some(at) = file.text.find('\u{feff}') {
        return Err(Diagnostic::error(
            "byte-order-mark",
            "an invisible byte order mark (U+FEFF) stands here",
            &place(at, at + '\u{feff}'.len_utf8()),
        )
        .help("it came with pasted or joined text: delete the line and type it again")
        .into());
    }
    if let Some(at) = file.text.find('\0') {
        return Err(Diagnostic::error(
            "nul-character",
            "the text holds a NUL character",
            &place(at, at + 1),
        )
        .help("the file may be no text, or saved in another encoding than UTF-8")
        .into());
    }
    Ok(())
}

/// A list or map that is still open.
struct Open {
    start: usize,
    /// `[` or `{` where the collection is in brackets.
    bracket: Option<char>,
    filling: Filling,
}

/// What an open collection holds so far.
enum Filling {
    List(Vec<Node>),
    Map {
        entries: Vec<(Told<String>, Node)>,
        seen: BTreeMap<String, Place>,
        key: Option<Told<String>>,
    },
}

/// Builds the tree from events.
struct Tree<'a> {
    file: &'a Arc<SourceFile>,
    /// Byte offset of each character; empty where the text is ASCII and both are the same.
    bytes: Vec<usize>,
    open: Vec<Open>,
    root: Option<Node>,
    documents: usize,
    last_end: usize,
    faults: FaultBag,
}

impl<'a> Tree<'a> {
    fn new(file: &'a Arc<SourceFile>) -> Self {
        let ascii = file.text.is_ascii();
        let bytes = if ascii {
            Vec::new()
        } else {
            file.text.char_indices().map(|(at, _)| at).collect()
        };
        Self {
            file,
            bytes,
            open: Vec::new(),
            root: None,
            documents: 0,
            last_end: 0,
            faults: FaultBag::new(),
        }
    }

    /// The byte offset of a character index, which is what the parser's marks hold.
    fn byte(&self, index: usize) -> usize {
        let len = self.file.text.len();
        if self.bytes.is_empty() {
            index.min(len)
        } else {
            self.bytes.get(index).copied().unwrap_or(len)
        }
    }

    fn place(&self, start: usize, end: usize) -> Place {
        Place {
            file: self.file.clone(),
            start,
            end: end.max(start),
        }
    }

    fn span(&self, span: Span) -> Place {
        self.place(self.byte(span.start.index()), self.byte(span.end.index()))
    }

    /// The fault at which the parser stopped.
    fn stop(&self, error: &ScanError) -> Diagnostic {
        let at = self.byte(error.marker().index());
        let bracket = self
            .open
            .iter()
            .rev()
            .find_map(|open| Some((open.bracket?, open.start)));
        syntax::Stop {
            file: self.file,
            at,
            info: error.info(),
            bracket,
        }
        .fault()
    }

    /// Takes one event in.
    fn take(&mut self, event: Event<'_>, span: Span) -> Result<(), Faults> {
        let place = self.span(span);
        match event {
            Event::Nothing | Event::StreamStart | Event::StreamEnd | Event::DocumentEnd => {}
            Event::DocumentStart(_) => self.start_document(&place)?,
            Event::Alias(_) => {
                self.faults.push(syntax::alias_fault(&place));
                self.add(Node {
                    value: Value::Null,
                    place,
                });
            }
            Event::Scalar(text, style, anchor, tag) => {
                self.refuse_marks(anchor, tag.is_some(), &place);
                let value = match style {
                    ScalarStyle::Plain if text.is_empty() => Value::Null,
                    ScalarStyle::Plain => Value::Scalar {
                        text: text.into_owned(),
                        quoted: false,
                    },
                    ScalarStyle::SingleQuoted
                    | ScalarStyle::DoubleQuoted
                    | ScalarStyle::Literal
                    | ScalarStyle::Folded => Value::Scalar {
                        text: text.into_owned(),
                        quoted: true,
                    },
                };
                self.add(Node { value, place });
            }
            Event::SequenceStart(anchor, tag) => {
                self.refuse_marks(anchor, tag.is_some(), &place);
                self.open(place, Filling::List(Vec::new()))?;
            }
            Event::MappingStart(anchor, tag) => {
                self.refuse_marks(anchor, tag.is_some(), &place);
                let filling = Filling::Map {
                    entries: Vec::new(),
                    seen: BTreeMap::new(),
                    key: None,
                };
                self.open(place, filling)?;
            }
            Event::SequenceEnd | Event::MappingEnd => self.close(&place),
        }
        Ok(())
    }

    fn start_document(&mut self, place: &Place) -> Result<(), Faults> {
        self.documents += 1;
        if self.documents == 1 {
            return Ok(());
        }
        Err(Diagnostic::error(
            "several-documents",
            "a second YAML document starts here",
            place,
        )
        .help("write each in a file of its own, and take out the line `---`")
        .into())
    }

    fn refuse_marks(&self, anchor: usize, tag: bool, place: &Place) {
        if anchor != 0 {
            let fault = Diagnostic::error("anchor", "anchors (`&name`) are not taken", place);
            self.faults.push(
                fault.help(
                    "write the value out where it is used; quote a text that starts with `&`",
                ),
            );
        }
        if tag {
            let fault = Diagnostic::error("tag", "tags (`!name`) are not taken", place);
            self.faults
                .push(fault.help("leave the tag out; quote a text that starts with `!`"));
        }
    }

    fn open(&mut self, place: Place, filling: Filling) -> Result<(), Faults> {
        if self.open.len() >= MAX_DEPTH {
            let message = format!("lists and maps are nested more than {MAX_DEPTH} deep");
            return Err(Diagnostic::error("too-deep", message, &place).into());
        }
        let bracket = self.file.text[place.start..place.end]
            .chars()
            .next()
            .filter(|c| matches!(c, '[' | '{'));
        self.open.push(Open {
            start: place.start,
            bracket,
            filling,
        });
        Ok(())
    }

    fn close(&mut self, place: &Place) {
        let Some(open) = self.open.pop() else { return };
        // The parser's mark of a closing bracket may reach over a comment behind it.
        let end = if open.bracket.is_some() {
            (place.start + 1).min(place.end)
        } else {
            self.last_end
        };
        let place = self.place(open.start, end);
        let value = match open.filling {
            Filling::List(items) => Value::List(items),
            Filling::Map { entries, .. } => Value::Map(entries),
        };
        self.add(Node { value, place });
    }

    /// Puts a finished node where it belongs: a list's next item, a map's key or value, the root.
    fn add(&mut self, mut node: Node) {
        if node.value != Value::Null {
            self.last_end = node.place.end;
        }
        let Some(open) = self.open.last_mut() else {
            self.root = (node.value != Value::Null).then_some(node);
            return;
        };
        match &mut open.filling {
            Filling::List(items) => items.push(node),
            Filling::Map { entries, seen, key } => match key.take() {
                None => *key = Some(read_key(node, seen, &self.faults)),
                Some(key) => {
                    if node.value == Value::Null {
                        node.place = key.place.clone();
                    }
                    entries.push((key, node));
                }
            },
        }
    }
}

/// Reads a node as a key; a list, a map, an empty or repeated key is a fault.
fn read_key(node: Node, seen: &mut BTreeMap<String, Place>, faults: &FaultBag) -> Told<String> {
    let Value::Scalar { text, .. } = node.value else {
        faults.push(Diagnostic::error(
            "odd-key",
            format!("a key is a word, but this is {}", node.word()),
            &node.place,
        ));
        return Told {
            value: String::new(),
            place: node.place,
        };
    };
    if let Some(first) = seen.get(&text) {
        let fault = Diagnostic::error(
            "duplicate-key",
            format!("`{text}` stands twice in one map"),
            &node.place,
        );
        faults.push(fault.help(format!("the first is in line {}", first.line_column().0)));
    } else {
        seen.insert(text.clone(), node.place.clone());
    }
    Told {
        value: text,
        place: node.place,
    }
}
