//! The calculation identity: a digest over the inputs, the sheets used and the printed results.
//!
//! Not over places in files, comments, signatures, the program's version or the identity itself. A
//! second digest covers the words, so that an editorial change can be told from a technical one.

use crate::formula::{Kind, Ledger};
use crate::joint::{Joint, Part};
use crate::source::Told;
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
        let facts = facts(joint);
        for line in facts.iter().chain(sheets).chain(results) {
            let _ = writeln!(technical, "{line}");
        }
        let titles = [
            Some(&joint.title),
            joint.item.as_ref(),
            joint.purpose.as_ref(),
        ];
        for text in titles.into_iter().chain([Some(&joint.frame.origin)]) {
            let _ = writeln!(words, "{}", told(text));
        }
        for change in &joint.changes {
            let (issue, date) = (&change.revision.value, change.date.value);
            let _ = writeln!(words, "{issue}|{date}|{}", change.says.value);
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

/// What the inputs say beside their numbers: drawing, directions, materials and sources, toes and ends,
/// frames, checks, exclusions, open assumptions.
fn facts(joint: &Joint) -> Vec<String> {
    let runs = &joint.weld.runs;
    let joined = |part: &&Part| {
        let mut names = runs.iter().flat_map(|run| &run.joins);
        names.any(|name| name.value == part.name.value)
    };
    let mut facts = vec![format!("drawing|{}", told(joint.drawing.as_ref()))];
    facts.extend(
        joint
            .frame
            .axes
            .iter()
            .map(|axis| format!("axis|{}", told(axis.as_ref()))),
    );
    facts.extend(joint.parts.iter().filter(joined).map(|part| {
        let (name, material) = (&part.name.value, &part.material.value);
        let (more, source) = (pairs(&part.more), told(part.source.as_ref()));
        format!(
            "part|{name}|{material}|{more}|{source}|{}",
            part.to_be_verified
        )
    }));
    facts.extend(joint.filler.iter().map(|filler| {
        let (name, more) = (&filler.name.value, pairs(&filler.more));
        let source = told(filler.source.as_ref());
        format!("filler|{name}|{more}|{source}|{}", filler.to_be_verified)
    }));
    facts.extend(runs.iter().map(|run| {
        let joins = run.joins.each_ref().map(|name| name.value.as_str());
        let toe = run.toe.as_ref().map(|toe| toe.value);
        let ends = run
            .ends
            .each_ref()
            .map(|end| end.as_ref().map(|end| end.value));
        let record = run
            .penetration
            .as_ref()
            .map(|(_, record)| record.value.as_str());
        let both = run.both_sides.is_some();
        format!(
            "run|{}|{joins:?}|{toe:?}|{ends:?}|{both}|{record:?}",
            run.name.value
        )
    }));
    let frames = joint
        .loads
        .cases
        .iter()
        .filter_map(|case| case.frame.as_ref());
    facts.extend(frames.map(|frame| {
        let axes = frame.axes.each_ref().map(|axis| axis.values());
        format!(
            "frame|{}|{:?}|{axes:?}",
            frame.name.value,
            frame.origin.values()
        )
    }));
    facts.extend(joint.checks.iter().map(|check| {
        let (clause, values) = (&check.clause.value, pairs(&check.values));
        let source = told(check.source.as_ref());
        format!("check|{clause}|{values}|{source}|{}", check.to_be_verified)
    }));
    let excluded = joint.excluded.iter();
    facts.extend(excluded.map(|entry| format!("excluded|{}|{}", entry.path.value, entry.by.value)));
    let assumptions = joint.assumptions.iter();
    facts.extend(assumptions.map(|entry| format!("open|{}", entry.to_be_verified)));
    facts
}

/// A text, empty where it is not told.
fn told(text: Option<&Told<String>>) -> &str {
    text.map_or("", |text| text.value.as_str())
}

/// Names with their values as typed.
fn pairs(values: &[(Told<String>, Told<String>)]) -> String {
    let each = values.iter();
    let each = each.map(|(name, value)| format!("{}={};", name.value, value.value));
    each.collect()
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
