//! The calculation identity: a digest over the inputs, the sheets used and the printed results.
//!
//! Not over places in files, comments, signatures, the program's version or the identity itself. A
//! second digest covers the words, so that an editorial change can be told from a technical one.

use crate::formula::{Kind, Ledger};
use crate::joint::Joint;
use sha2::{Digest, Sha256};
use std::fmt::Write;

/// Hexadecimal digits of a digest that are printed: 48 bits tell every note of an office apart.
const PRINTED: usize = 12;

/// Both digests of a note.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Identity {
    /// Over inputs, sheets and printed results.
    pub calculation: String,
    /// Over the words.
    pub words: String,
}

impl Identity {
    /// The digests of a settled calculation; `sheets` are the canonical texts of the sheets used,
    /// `results` every printed outcome of every case.
    pub(super) fn of(
        joint: &Joint,
        ledger: &Ledger,
        sheets: &[String],
        results: &[String],
    ) -> Self {
        let mut technical = String::new();
        let mut words = String::new();
        for value in ledger.values() {
            let entry = ledger.get(value);
            let kind = match &entry.kind {
                Kind::Given(given) | Kind::Converted { given, .. } => given.text(),
                Kind::Step { .. } => ledger.numbers_algebra(value).unwrap_or_default(),
                Kind::Found { .. } => "found".to_owned(),
                Kind::Bound { .. } => "bound".to_owned(),
            };
            let _ = writeln!(
                technical,
                "{}|{kind}|{}",
                entry.id,
                ledger.printed(value).algebra()
            );
            let _ = writeln!(words, "{}", entry.says);
        }
        for case in &joint.loads.cases {
            let parts = [&case.force, &case.moment, &case.at].map(|triple| triple.values());
            let _ = writeln!(
                technical,
                "{}|{}|{parts:?}",
                case.name.value,
                case.level.value.word()
            );
            let _ = writeln!(
                words,
                "{}",
                case.says.as_ref().map_or("", |says| says.value.as_str())
            );
        }
        for line in sheets.iter().chain(results) {
            let _ = writeln!(technical, "{line}");
        }
        for text in [&joint.title.value, &joint.frame.origin.value] {
            let _ = writeln!(words, "{text}");
        }
        for assumption in &joint.assumptions {
            let _ = writeln!(words, "{}", assumption.says.value);
        }
        for caution in &joint.cautions {
            let _ = writeln!(words, "{}", caution.value);
        }
        Self {
            calculation: digest(&technical),
            words: digest(&words),
        }
    }

    /// The calculation digest as printed, such as `7f3a 91c2 08de`.
    #[must_use]
    pub fn printed(&self) -> String {
        grouped(&self.calculation)
    }

    /// The digest of the words as printed.
    #[must_use]
    pub fn printed_words(&self) -> String {
        grouped(&self.words)
    }
}

/// The SHA-256 of a text (FIPS 180-4) in hexadecimal.
fn digest(text: &str) -> String {
    Sha256::digest(text.as_bytes())
        .iter()
        .fold(String::new(), |mut out, byte| {
            let _ = write!(out, "{byte:02x}");
            out
        })
}

/// The first digits in groups of four.
fn grouped(hex: &str) -> String {
    let groups: Vec<&str> = (0..PRINTED).step_by(4).map(|at| &hex[at..at + 4]).collect();
    groups.join(" ")
}
