//! Words that every note prints: the usual cautions and the names of failure paths.

use crate::criteria::FailurePath;
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
    /// Two paths that one name tells.
    pairs: Vec<Pair>,
}

/// Two failure paths with a common name.
#[derive(Deserialize, Debug)]
#[serde(deny_unknown_fields)]
struct Pair {
    of: [String; 2],
    together: String,
}

/// Failure paths in a list, as the note names them; `paths` are in print order, so that pairs stand
/// side by side.
pub(super) fn path_names(paths: &[FailurePath]) -> Vec<String> {
    let words = words();
    let mut rest = paths;
    let mut names = Vec::new();
    while let [path, after @ ..] = rest {
        let next = after.first().map(|next| next.word());
        let is_pair = |pair: &&Pair| pair.of[0] == path.word() && Some(pair.of[1].as_str()) == next;
        let pair = words.pairs.iter().find(is_pair);
        rest = &after[usize::from(pair.is_some())..];
        names.push(pair.map_or_else(|| path_name(*path), |pair| pair.together.clone()));
    }
    names
}

/// A failure path as the note names it.
pub(super) fn path_name(path: FailurePath) -> String {
    let word = path.word();
    words()
        .paths
        .get(word)
        .map_or(word, String::as_str)
        .to_owned()
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
