//! Words that every note prints: the usual cautions and the names of failure paths.

use serde::Deserialize;
use std::collections::BTreeMap;
use std::sync::OnceLock;

/// The program's own words.
#[derive(Deserialize, Debug)]
#[serde(deny_unknown_fields)]
pub(super) struct Words {
    /// Cautions of every note.
    pub(super) cautions: Vec<String>,
    /// Failure paths by the word of the sheets, as the note names them.
    pub(super) paths: BTreeMap<String, String>,
}

/// The words, read once.
///
/// # Panics
///
/// If the program's own data does not parse, which a test would show.
pub(super) fn words() -> &'static Words {
    static WORDS: OnceLock<Words> = OnceLock::new();
    WORDS.get_or_init(|| {
        serde_yaml::from_str(include_str!("words.yaml")).expect("the program's own words parse")
    })
}
