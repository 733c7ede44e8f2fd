//! Explains a fault code, a clause sheet or a key, each from the data that the program works by.
//!
//! Keys come from the tables that readers use, sheets from the library, fault codes from
//! `faults.yaml`, which a test holds complete.

mod key;
mod sheet;

use crate::criteria::Library;
use serde::Deserialize;
use std::collections::BTreeMap;
use std::sync::OnceLock;

/// What a fault code means.
#[derive(Clone, PartialEq, Eq, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FaultWords {
    /// What is wrong.
    pub means: String,
    /// What gives it, in a line.
    pub like: String,
    /// What mends it.
    pub mend: String,
}

/// The words of every fault code.
///
/// # Panics
///
/// If the data does not read, which a test excludes.
#[must_use]
pub fn fault_words() -> &'static BTreeMap<String, FaultWords> {
    static WORDS: OnceLock<BTreeMap<String, FaultWords>> = OnceLock::new();
    WORDS.get_or_init(|| {
        serde_yaml::from_str(include_str!("faults.yaml")).expect("the words of faults are YAML")
    })
}

/// How alike a name has to be to be offered; by the measure of Jaro and Winkler, of which 1 is
/// the same. The bound is this project's own.
const ALIKE: f64 = 0.78;

/// Most names offered for one that stands for nothing.
const MOST_OFFERED: usize = 4;

/// Everything that can be explained, by its names.
#[must_use]
pub fn everything(library: &Library) -> String {
    let sheets: Vec<&str> = library
        .sheets()
        .map(|sheet| sheet.name.value.as_str())
        .collect();
    let codes: Vec<&str> = fault_words().keys().map(String::as_str).collect();
    let mut keys: Vec<String> = key::names().filter(|name| name.contains('.')).collect();
    keys.sort_unstable();
    keys.dedup();
    format!(
        "clause sheets\n  {}\nfault codes\n  {}\nkeys\n  {}\n",
        sheets.join("\n  "),
        codes.join("\n  "),
        keys.join("\n  ")
    )
}

/// The explanation of a fault code, a clause sheet, a key, or a value that sheets take; of all where
/// a name is all of them.
///
/// # Errors
///
/// A text that says that nothing has this name, with the nearest names.
pub fn explain(thing: &str, library: &Library) -> Result<String, String> {
    let thing = thing.trim();
    let mut found = Vec::new();
    let code = thing.trim_start_matches("error[").trim_end_matches(']');
    if let Some(words) = fault_words().get(code) {
        found.push(format!(
            "fault {code}\n  means  {}\n  as in  {}\n  mend   {}\n",
            words.means, words.like, words.mend
        ));
    }
    if let Some(sheet) = library.find(thing) {
        found.push(sheet::says(sheet));
    }
    found.extend(key::says(thing));
    found.extend(sheet::value_says(thing, library));
    if found.is_empty() {
        Err(unknown(thing, library))
    } else {
        Ok(found.join("\n"))
    }
}

fn unknown(thing: &str, library: &Library) -> String {
    let low = thing.to_lowercase();
    let names = fault_words().keys().cloned();
    let names = names.chain(library.sheets().map(|sheet| sheet.name.value.clone()));
    // A part of a name says more than a likeness.
    let likeness = |name: &str| {
        let name = name.to_lowercase();
        if name.contains(&low) {
            1.0
        } else {
            strsim::jaro_winkler(&low, &name)
        }
    };
    let mut alike: Vec<(f64, String)> = names
        .chain(key::names())
        .map(|name| (likeness(&name), name))
        .filter(|(likeness, _)| *likeness > ALIKE)
        .collect();
    alike.sort_by(|a, b| b.0.total_cmp(&a.0).then_with(|| a.1.cmp(&b.1)));
    alike.dedup();
    let offered: Vec<String> = alike
        .into_iter()
        .take(MOST_OFFERED)
        .map(|(_, name)| format!("`{name}`"))
        .collect();
    let mut text = format!("error: nothing is called `{thing}`\n");
    if !offered.is_empty() {
        text += &format!("  = help: did you mean {}?\n", offered.join(" or "));
    }
    text + "  = help: name a fault code, a clause sheet, or a key such as `weld.runs.toe`; `seamnote explain` alone lists them\n"
}
