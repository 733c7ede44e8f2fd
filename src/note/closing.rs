//! What closes the note: cautions, the record of changes, signatures, identity.

use super::builder::Builder;
use super::calculation::{Calculation, Outcome};
use super::doc::{Block, Item};
use super::identity::Identity;
use super::text::{piece, plain, strong};
use super::words::words;
use crate::criteria::{Asked, From};
use crate::formula::Printed;
use crate::weld::{End, Run, V3};

/// The names of points and runs that a sheet asks for.
pub(super) fn names_of(asked: &Asked) -> impl Iterator<Item = String> + '_ {
    asked
        .sheet
        .needs
        .iter()
        .flat_map(|need| need.from.iter().filter_map(From::bound_name))
}

/// Texts of the sheets used, each once, with the name of the sheet.
pub(super) fn sheet_texts(
    calculation: &Calculation<'_>,
    texts: impl Fn(&Asked) -> &Vec<crate::source::Told<String>>,
) -> Vec<(String, String)> {
    let mut out: Vec<(String, String)> = Vec::new();
    for outcome in &calculation.outcomes {
        if let Outcome::Assessed(asked) = outcome {
            for text in texts(asked) {
                if !out.iter().any(|(known, _)| *known == text.value) {
                    out.push((text.value.clone(), asked.sheet.source.cited()));
                }
            }
        }
    }
    out
}

/// Free ends that nearly meet: most likely a slip in a coordinate, and not seen in a margin.
fn near_ends(calculation: &Calculation<'_>) -> Vec<String> {
    /// Ends nearer than so many throats are looked at.
    const NEAR: f64 = 3.0;
    let units = calculation.joint.units.value;
    let size = calculation.properties.size;
    let mut ends: Vec<(&Run, &str, V3)> = Vec::new();
    for run in &calculation.runs {
        for (end, at) in run.ends.iter().zip([0.0, 1.0]) {
            let word = if at > 0.5 { "end" } else { "start" };
            if !matches!(end, End::Continuous) {
                ends.push((run, word, run.told.point(at)));
            }
        }
    }
    let mut found = Vec::new();
    for (index, (run, word, at)) in ends.iter().enumerate() {
        for (other, other_word, other_at) in &ends[index + 1..] {
            let apart = (at - other_at).norm();
            let near = NEAR * run.throat.max(other.throat);
            // Beads of one spec lie side by side or in a row.
            if run.spec != other.spec && apart > 1e-6 * size && apart <= near {
                let distance = Printed::of(apart, 3, 3, 0.0).text();
                found.push(format!(
                    "The {word} of {} and the {other_word} of {} are {distance} {} apart and count as free ends; if they are \
                     to meet, a coordinate is wrong.",
                    run.name,
                    other.name,
                    units.length()
                ));
            }
        }
    }
    found
}

/// The usual cautions, those of the sheets used, those of the user.
pub(super) fn cautions(b: &mut Builder<'_>, calculation: &Calculation<'_>) {
    b.part("cautions", "Cautions");
    let mut items: Vec<Item> = Vec::new();
    let mut add = |text: &str, source: Option<String>| {
        let label = format!("C{}", items.len() + 1);
        items.push(Item {
            label,
            text: plain(text),
            mark: None,
            source,
        });
    };
    for caution in &calculation.joint.cautions {
        add(&caution.value, Some(super::layout::line_of(&caution.place)));
    }
    for text in near_ends(calculation) {
        add(&text, None);
    }
    for (text, source) in sheet_texts(calculation, |asked| &asked.sheet.cautions) {
        add(&text, Some(source));
    }
    for text in &words().cautions {
        add(text, None);
    }
    b.items(items);
}

/// Change record and signatures.
pub(super) fn closing(b: &mut Builder<'_>) {
    let joint = b.joint;
    if !joint.changes.is_empty() {
        b.part("changes", "Change record");
        let rows = joint
            .changes
            .iter()
            .enumerate()
            .map(|(index, change)| super::builder::Line {
                id: format!("change-{}", index + 1),
                cells: [
                    &change.revision.value,
                    &change.date.value.to_string(),
                    &change.says.value,
                ]
                .into_iter()
                .map(|text| super::builder::Cell::Text(plain(text)))
                .collect(),
                strong: false,
            })
            .collect();
        let columns = vec![
            super::builder::word_column("issue"),
            super::builder::word_column("date"),
            super::builder::word_column("what changed"),
        ];
        let caption = plain("Issues of this note");
        b.table(super::builder::Sheet {
            id: "issues".to_owned(),
            caption,
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
    }
    b.part("signatures", "Signatures");
    b.block(Block::Signatures {
        roles: joint
            .signatures
            .iter()
            .map(|role| role.value.clone())
            .collect(),
    });
}

/// The identity in words, before the signatures, which name it.
pub(super) fn identity_section(sections: &mut [super::doc::Section], identity: &Identity) {
    if let Some(section) = sections
        .iter_mut()
        .find(|section| section.id == "signatures")
    {
        let text = vec![
            piece("Calculation identity "),
            strong(&identity.printed()),
            piece(&format!(
                ", over inputs, clause sheets and printed results; the words have the digest {}. Written by Seamnote {}. A signature stands \
                 for this identity only: a note that prints another one is unsigned.",
                identity.printed_words(),
                env!("CARGO_PKG_VERSION")
            )),
        ];
        section.blocks.insert(0, Block::Para { text });
    }
}
