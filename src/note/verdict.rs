//! The verdict of the first page, and what is still to be verified.

use super::builder::Builder;
use super::calculation::Calculation;
use super::coverage::coverage_words;
use super::doc::{Block, Item, Text, Verdict};
use super::margins::{Check, asked, check_name};
use super::standing::Standing;
use super::text::{capital, count, piece, plain, strong, with_symbols};
use crate::joint::Joint;
use std::collections::BTreeSet;

/// Everything that is still to be verified, in one list.
pub(super) fn open_section(
    b: &Builder<'_>,
    assumptions: &[(String, String)],
) -> Option<super::doc::Section> {
    let mut items: Vec<Item> = Vec::new();
    for (label, says) in assumptions {
        let label_of = format!("O{}", items.len() + 1);
        items.push(super::layout::item(
            &label_of,
            plain(&format!(
                "Assumption {label}: {}.",
                says.trim_end_matches('.')
            )),
        ));
    }
    if let Some(text) = unrecorded_issue(b.joint) {
        let label = format!("O{}", items.len() + 1);
        items.push(super::layout::item(&label, plain(&text)));
    }
    for (reason, numbers) in b.open_items() {
        let numbers = numbers.iter().map(String::as_str);
        let words: Vec<String> = super::layout::steps_and_tables(numbers).collect();
        let label = format!("O{}", items.len() + 1);
        let text = format!("{}: {}.", capital(&reason), words.join(", "));
        items.push(super::layout::item(&label, with_symbols(&text)));
    }
    if items.is_empty() {
        return None;
    }
    let intro = "To be verified before this note is signed. The mark “to be verified” stands at each line of a clause in question, and at each utilisation and margin that rests on an open item.";
    let blocks = vec![Block::Para { text: plain(intro) }, Block::Items { items }];
    Some(super::doc::Section {
        title: "Open items".to_owned(),
        id: "open-items".to_owned(),
        blocks,
    })
}

/// What is open where the record of changes does not tell of this issue; a first issue needs no entry.
fn unrecorded_issue(joint: &Joint) -> Option<String> {
    const FIRST: [&str; 6] = ["A", "0", "1", "00", "01", "-"];
    let revision = joint.revision.value.as_str();
    let told = joint
        .changes
        .iter()
        .any(|change| change.revision.value == revision);
    let first = joint.changes.is_empty() && FIRST.contains(&revision);
    (!told && !first).then(|| format!("The record of changes has no entry for issue {revision}."))
}

/// How many open items a note has.
fn open_words(all: usize) -> String {
    match all {
        0 => "No open item in this note.".to_owned(),
        1 => "1 open item in this note, see “Open items”.".to_owned(),
        many => format!("{many} open items in this note, see “Open items”."),
    }
}

/// The verdict of the first page.
pub(super) fn verdict(
    b: &Builder<'_>,
    calculation: &Calculation<'_>,
    checks: &[Check],
    open: &[(String, String)],
) -> Verdict {
    let standing = Standing::of(calculation);
    let all = open.len() + b.open_items().len() + usize::from(unrecorded_issue(b.joint).is_some());
    let Some(check) = checks.first() else {
        let lines = vec![
            vec![
                strong("No strength check of this note has a number."),
                piece(&format!(" {}", standing.tally())),
            ],
            plain(&coverage_words(b, calculation)),
            plain(&open_words(all)),
        ];
        return Verdict {
            label: "least margin of safety".to_owned(),
            figure: "none".to_owned(),
            lines,
        };
    };
    let asked = asked(calculation, check.outcome);
    let case = &b.joint.loads.cases[check.governing.case];
    let spot = super::stress::Spot {
        case: check.governing.case,
        run: check.governing.run,
        p: check.governing.s,
        side: check.governing.side,
    };
    let part = check
        .governing
        .part
        .map(|turn| format!(", {}", turn.word()))
        .unwrap_or_default();
    let mut first: Text = vec![piece(&format!(
        "{}{part}",
        capital(&check_name(asked, check.check))
    ))];
    first.extend(b.held_against(check));
    first.extend([
        piece(", at "),
        super::text::emph(&b.place_words(spot)),
        piece(", case "),
        strong(&case.name.value),
        piece(&format!(" ({}). ", case.level.value.word())),
    ]);
    if let Some(margin) = check.worked.as_ref().and_then(|worked| worked.margin) {
        let entry = b.ledger.get(margin);
        first.push(super::doc::Inline::StepRef {
            id: entry.anchor.clone(),
            text: format!("Step {}", entry.no),
        });
    }
    let mut marks: BTreeSet<String> = open
        .iter()
        .map(|(label, says)| format!("assumption {label} ({})", says.trim_end_matches('.')))
        .collect();
    if let Some(worked) = &check.worked {
        for value in [Some(worked.demand), Some(worked.capacity), worked.margin]
            .into_iter()
            .flatten()
        {
            marks.extend(b.ledger.marks_behind(value));
        }
    }
    let coverage = coverage_words(b, calculation);
    let tally = if standing.holds() {
        plain(&format!("{} {coverage}", standing.tally()))
    } else {
        vec![strong(&standing.tally()), piece(&format!(" {coverage}"))]
    };
    // What does not hold is said before where the margin is least.
    let mut lines = if standing.holds() {
        vec![first, tally]
    } else {
        vec![tally, first]
    };
    if marks.is_empty() {
        let text = match all {
            0 => open_words(0),
            many => format!(
                "No open item stands behind this margin; {many} in the note, see “Open items”."
            ),
        };
        lines.push(plain(&text));
    } else {
        let list: Vec<String> = marks.iter().cloned().collect();
        let verb = if list.len() == 1 { "stands" } else { "stand" };
        lines.push(with_symbols(&format!(
            "{} of {all} {verb} behind this margin, to be verified: {}.",
            capital(&count(list.len(), "open item", "open items")),
            list.join("; ")
        )));
    }
    Verdict {
        label: if standing.refused.is_empty() {
            "least margin of safety".to_owned()
        } else {
            "least of the margins found".to_owned()
        },
        figure: standing.figure(),
        lines,
    }
}
