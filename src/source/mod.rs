//! Text with its places: source files, spans, faults and the YAML tree that users' files are read into.
//!
//! Knows no joint and no sheet; reads no disk. A fault is data until [`Diagnostic::render`].

mod diag;
mod fields;
mod item;
mod keys;
mod line;
mod schema;
mod syntax;
mod yaml;

pub use diag::{Diagnostic, FaultBag, Faults, Severity, one_line};
pub use fields::Fields;
pub use item::{Item, nearest_of, read_keyed};
pub use keys::{Choice, Form, Key, KeyTable, Sign};
pub use schema::schema;
pub use yaml::{Node, Value, parse_yaml};

use std::fmt;
use std::sync::Arc;

/// A file's name as the user would type it, and its text.
#[derive(PartialEq, Eq, Debug)]
pub struct SourceFile {
    /// Path relative to where the program was called, with forward slashes.
    pub name: String,
    /// The whole text.
    pub text: String,
}

/// A byte range of a source file.
#[derive(Clone, PartialEq, Eq)]
pub struct Place {
    /// The file.
    pub file: Arc<SourceFile>,
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

impl Place {
    /// The one-based line and column (counting characters) of the first byte.
    #[must_use]
    pub fn line_column(&self) -> (usize, usize) {
        let before = &self.file.text[..self.start.min(self.file.text.len())];
        let line = before.matches('\n').count() + 1;
        let column = before
            .rsplit('\n')
            .next()
            .unwrap_or_default()
            .chars()
            .count()
            + 1;
        (line, column)
    }

    /// The last part of the file's name with the line, such as `mast-foot.yaml:14`.
    #[must_use]
    pub fn short(&self) -> String {
        let name = self.file.name.rsplit('/').next().unwrap_or_default();
        format!("{name}:{}", self.line_column().0)
    }
}

impl fmt::Debug for Place {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let (line, column) = self.line_column();
        write!(out, "{}:{line}:{column}", self.file.name)
    }
}

/// A value together with the place it was read from.
#[derive(Clone, PartialEq, Debug)]
pub struct Told<T> {
    /// The value.
    pub value: T,
    /// Where it stands.
    pub place: Place,
}

impl<T> Told<T> {
    /// The same place with another value.
    pub fn map<U>(self, change: impl FnOnce(T) -> U) -> Told<U> {
        Told {
            value: change(self.value),
            place: self.place,
        }
    }
}
