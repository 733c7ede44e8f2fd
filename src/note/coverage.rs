//! Failure paths: which the note checks, which the user excludes, which it does not cover.

use super::builder::Builder;
use super::calculation::{Calculation, Outcome};
use super::text::{capital, plain, slug, strong};
use super::words::{path_name, path_names};
use crate::criteria::FailurePath;

/// Failure paths: checked, excluded by the user, or not covered by this note.
pub(super) fn coverage(b: &mut Builder<'_>, calculation: &Calculation<'_>) {
    b.part("coverage", "Failure paths");
    let mut rows = Vec::new();
    for (word, path) in FailurePath::WORDS {
        let mut by: Vec<String> = Vec::new();
        let mut fails = false;
        let mut without: Vec<String> = Vec::new();
        for outcome in &calculation.outcomes {
            match outcome {
                Outcome::Assessed(asked) if asked.sheet.covers.contains(&path) => {
                    by.push(asked.sheet.name.value.clone());
                    fails |= asked
                        .strength
                        .iter()
                        .any(|strength| !strength.governing.margin.holds());
                    fails |= asked.limits.iter().any(|limit| !limit.holds);
                }
                Outcome::Refused(refusal) if refusal.covers.contains(&path) => {
                    without.push(refusal.clause.clone());
                }
                Outcome::Assessed(_) | Outcome::Refused(_) => {}
            }
        }
        let excluded = calculation
            .joint
            .excluded
            .iter()
            .find(|exclusion| exclusion.path.value == word);
        let (state, detail) = match (by.is_empty(), excluded) {
            (false, _) if fails => (vec![strong("does not hold")], by.join("; ")),
            (false, _) => (plain("checked"), by.join("; ")),
            (true, Some(exclusion)) => (plain("excluded"), exclusion.by.value.clone()),
            (true, None) if !without.is_empty() => (
                vec![strong("no number")],
                format!("{}: see “Checks without a number”", without.join("; ")),
            ),
            (true, None) => (
                vec![strong("not covered")],
                "not checked in this note; to be checked elsewhere".to_owned(),
            ),
        };
        let cells = vec![
            super::builder::Cell::Text(plain(&capital(&path_name(path)))),
            super::builder::Cell::Text(state),
            super::builder::Cell::Text(plain(&detail)),
        ];
        rows.push(super::builder::Line {
            id: format!("path.{}", slug(word)),
            cells,
            strong: false,
        });
    }
    let columns = vec![
        super::builder::word_column("failure path"),
        super::builder::word_column("state"),
        super::builder::word_column("by"),
    ];
    let caption = plain("Failure paths of the joint, and where each is looked at");
    b.table(super::builder::Sheet {
        id: "paths".to_owned(),
        caption,
        formulas: Vec::new(),
        columns,
        rows,
        foot: None,
    });
}

/// The failure paths that the note does not cover, and those that the user excludes.
pub(super) fn coverage_words(b: &Builder<'_>, calculation: &Calculation<'_>) -> String {
    let uncovered = super::standing::uncovered(calculation);
    let mut words = if uncovered.is_empty() {
        "Every failure path is checked or excluded.".to_owned()
    } else {
        let names = path_names(&uncovered);
        format!("Not covered by this note: {}.", names.join(", "))
    };
    let excluded = path_names(&super::standing::excluded(b.joint));
    if !excluded.is_empty() {
        words.push_str(&format!(" Excluded: {}.", excluded.join(", ")));
    }
    words
}
