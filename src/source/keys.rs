//! The keys of a map, declared once: the reader, the published schemas and the explanations use them.
//!
//! A reader that asks for a key which its table lacks fails at once, and a test holds each table
//! to what the reader takes, needs and refuses. What a value means is for the reader to say; a
//! [`Form`] tells only how it looks.

/// A map of a user's file and its keys.
#[derive(Debug)]
pub struct KeyTable {
    /// What the map is, with its article, such as `a run`.
    pub what: &'static str,
    /// One line saying what it holds.
    pub says: &'static str,
    /// Its keys, in the order in which a file usually has them.
    pub keys: &'static [Key],
    /// How the values of free keys look; `None` if there are none.
    pub free: Option<Form>,
    /// Keys of which some are to be told, or only one.
    pub choices: &'static [Choice],
}

impl KeyTable {
    /// A table without free keys and choices.
    #[must_use]
    pub const fn new(what: &'static str, says: &'static str, keys: &'static [Key]) -> Self {
        Self {
            what,
            says,
            keys,
            free: None,
            choices: &[],
        }
    }

    /// The same table with free keys beside its own.
    #[must_use]
    pub const fn with_free(mut self, form: Form) -> Self {
        self.free = Some(form);
        self
    }

    /// The same table with choices among its keys.
    #[must_use]
    pub const fn with_choices(mut self, choices: &'static [Choice]) -> Self {
        self.choices = choices;
        self
    }

    /// A key by its name.
    #[must_use]
    pub fn find(&self, name: &str) -> Option<&'static Key> {
        self.keys.iter().find(|key| key.name == name)
    }
}

/// A key of a map.
#[derive(Debug)]
pub struct Key {
    /// The key as it is written.
    pub name: &'static str,
    /// How its value looks.
    pub form: Form,
    /// Whether it must always be there.
    pub must: bool,
    /// One line saying what it is.
    pub says: &'static str,
    /// An example of its value, as YAML.
    pub example: &'static str,
}

impl Key {
    /// A key that must always be there.
    #[must_use]
    pub const fn must(
        name: &'static str,
        form: Form,
        says: &'static str,
        example: &'static str,
    ) -> Self {
        Self {
            name,
            form,
            must: true,
            says,
            example,
        }
    }

    /// A key that may be left out, at least under some conditions.
    #[must_use]
    pub const fn may(
        name: &'static str,
        form: Form,
        says: &'static str,
        example: &'static str,
    ) -> Self {
        Self {
            must: false,
            ..Self::must(name, form, says, example)
        }
    }
}

/// How a value looks.
#[derive(Clone, Copy, Debug)]
pub enum Form {
    /// Any scalar: a text, a name, a word or a number that somebody else understands.
    Text,
    /// `true` or `false`.
    Flag,
    /// A date such as `2026-05-04`.
    Date,
    /// A number with or without unit; its kind in a word, such as `length`.
    Quantity(&'static str, Sign),
    /// One of the words.
    Words(&'static [&'static str]),
    /// A list, its least and greatest number of items.
    List(&'static Self, usize, usize),
    /// A map with known keys.
    Map(&'static KeyTable),
    /// A map of free names, and its least number of entries.
    Named(&'static Self, usize),
    /// One of several forms.
    Either(&'static [Self]),
}

/// Which numbers a quantity may have.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Sign {
    /// Any.
    Any,
    /// Zero or more.
    NotNegative,
    /// Above zero.
    Positive,
}

/// How many of several keys are to be told.
#[derive(Clone, Copy, Debug)]
pub enum Choice {
    /// Exactly one.
    One(&'static [&'static str]),
    /// One or more.
    Some(&'static [&'static str]),
    /// One or none.
    AtMostOne(&'static [&'static str]),
}
