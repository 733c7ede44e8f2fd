//! The document as the templates see it: the data of [`Doc`] with the few lengths and groupings
//! that the page needs (widths of columns, alignment of numbers, lines of equations, link targets).

use std::collections::BTreeMap;

use serde_json::{Value, json};

use crate::note::doc::{Block, Doc, Head, Inline, Item, Line, Section, Step, Text, tail, words};

use super::columns::table_view;
use super::error::RenderError;
use super::faces::{Cut, text_width};
use super::fit::{shorten, soften, wrapped_lines};

/// Width of the text block (pt): 152 mm.
pub const TEXT_WIDTH: f64 = 152.0 / 25.4 * 72.0;
/// Width that an equation line has (pt): 141 mm.
pub const EQUATION_WIDTH: f64 = 141.0 / 25.4 * 72.0;
/// Width of the sources in the checker's margin (ems of their size): 20.5 mm at 7 pt.
pub(super) const MARGIN_ROOM: f64 = 20.5 / 25.4 * 72.0 / 7.0;
/// Size of the running head (pt).
const HEAD_SIZE: f64 = 8.0;

/// Drawings of a note by the name of their figure: typst expressions.
pub type Drawings = BTreeMap<String, String>;

/// Where links can lead, by id.
pub(super) type Targets = BTreeMap<String, Target>;

/// The steps, then the tables, that use a step, by its id: their ids and numbers, in print order.
type Uses<'a> = BTreeMap<&'a str, Vec<(&'a str, String)>>;

/// Uses of a step that its margin names; the first ones lead on to the others.
const USES_NAMED: usize = 6;

/// Steps from which on a note has a list of its sections.
const LONG_NOTE: usize = 60;

/// A place that links can lead to.
#[derive(Clone, Debug)]
pub(super) struct Target {
    /// Its label in typst; a link to a step carries `step 12`, which readers of a screen hear.
    label: String,
    /// Its anchor in Markdown.
    anchor: String,
}

/// Builds the view; without drawings, figures have no source.
pub(super) fn view(doc: &Doc, drawings: Option<&Drawings>) -> Result<Value, RenderError> {
    let targets = targets(doc);
    let blocks = || doc.sections.iter().flat_map(|s| &s.blocks);
    let steps = blocks().filter_map(Block::as_step);
    let mut uses = Uses::new();
    for step in steps.clone() {
        for (id, _) in &step.uses {
            let user = (step.id.as_str(), step.no.clone());
            uses.entry(id).or_default().push(user);
        }
    }
    for (table, no) in blocks().filter_map(Block::as_table).zip(1..) {
        for id in &table.uses {
            let user = (table.id.as_str(), format!("table\u{a0}{no}"));
            uses.entry(id).or_default().push(user);
        }
    }
    let sections: Result<Vec<_>, _> = doc
        .sections
        .iter()
        .map(|s| section(s, &targets, &uses, drawings))
        .collect();
    Ok(json!({
        "head": head(&doc.head),
        "verdict": doc.verdict.as_ref().map(|verdict| json!({
            "label": verdict.label,
            "figure": verdict.figure,
            "lines": texts(&verdict.lines, &targets),
        })),
        "sections": sections?,
        "contents": steps.count() >= LONG_NOTE,
        "identity": doc.identity,
        "state": doc.state,
        "targets": targets.iter().map(|(id, t)| (id, &t.label)).collect::<BTreeMap<_, _>>(),
    }))
}

/// Where links can lead: steps and rows by their ids, then tables, drawings and sections.
fn targets(doc: &Doc) -> Targets {
    let mut found = Targets::new();
    let blocks = || doc.sections.iter().flat_map(|s| &s.blocks);
    let mut add = |id: &str, kind: &str, name: &str, label: String| {
        let anchor = anchor(kind, name);
        let target = Target { label, anchor };
        found.entry(id.to_owned()).or_insert(target);
    };
    for step in blocks().filter_map(Block::as_step) {
        add(&step.id, "step", &step.id, format!("step {}", step.no));
    }
    for (table, no) in blocks().filter_map(Block::as_table).zip(1..) {
        for (row, line) in table.rows.iter().chain(&table.foot).zip(1..) {
            if let Some(id) = &row.id {
                add(id, "row", id, format!("table {no}, row {line}"));
            }
        }
    }
    for table in blocks().filter_map(Block::as_table) {
        add(&table.id, "table", &table.id, format!("table {}", table.id));
    }
    for section in &doc.sections {
        let id = &section.id;
        add(id, "section", id, format!("section {id}"));
    }
    for figure in blocks().filter_map(Block::as_figure) {
        let (id, name) = (&figure.id, &figure.name);
        add(id, "figure", name, format!("figure {name}"));
    }
    found
}

/// A name that HTML and links take as it is.
fn anchor(kind: &str, id: &str) -> String {
    let safe = |c: char| {
        if c.is_ascii_alphanumeric() || c == '.' || c == '_' {
            c
        } else {
            '-'
        }
    };
    format!("{kind}-{}", id.chars().map(safe).collect::<String>())
}

/// Label and anchor of what a block itself is, under the keys of the templates.
pub(super) fn own_target(id: &str, targets: &Targets) -> (String, String) {
    let target = &targets[id];
    (target.label.clone(), target.anchor.clone())
}

/// Particulars, with the running title cut to its line.
fn head(head: &Head) -> Value {
    let issue = head
        .issue
        .as_ref()
        .map_or(String::new(), |(revision, date)| {
            format!("issue {} · {date}", shorten(revision, Cut::Regular, 8.0))
        });
    let room = TEXT_WIDTH / HEAD_SIZE - text_width(&issue, Cut::Regular) - 1.5;
    let number = shorten(&head.note, Cut::Bold, room / 2.0);
    let rest = room - text_width(&number, Cut::Bold) - text_width(" · ", Cut::Regular);
    json!({
        "note": head.note,
        "number": number,
        "title": head.title,
        "running": shorten(&head.title, Cut::Regular, rest),
        "issue": issue,
        "day": head.issue.as_ref().map_or(Value::Null, |(_, date)| day(date)),
        "paper": head.paper,
        "particulars": head.particulars.join(" · "),
    })
}

/// Year, month and day of an ISO date; null if it is none.
fn day(date: &str) -> Value {
    let parts: Vec<Option<u16>> = date.split('-').map(|p| p.parse().ok()).collect();
    match parts[..] {
        [Some(year), Some(month), Some(day)] => json!({"year": year, "month": month, "day": day}),
        _ => Value::Null,
    }
}

fn section(
    section: &Section,
    targets: &Targets,
    uses: &Uses<'_>,
    drawings: Option<&Drawings>,
) -> Result<Value, RenderError> {
    let mut blocks = Vec::new();
    for (n, told) in section.blocks.iter().enumerate() {
        let mut value = block(told, targets, uses, drawings)?;
        if matches!(told, Block::Para { .. }) {
            let next = section.blocks.get(n + 1);
            value["leads"] = matches!(next, Some(Block::Items { .. } | Block::Step(_))).into();
        }
        blocks.push(value);
    }
    Ok(json!({
        "title": section.title,
        "target": own_target(&section.id, targets).0,
        "anchor": own_target(&section.id, targets).1,
        "whole": section.blocks.iter().any(is_short_sign_off),
        "blocks": blocks,
    }))
}

/// Whether these are signatures that fit a page with their section: who signs sees what is signed.
fn is_short_sign_off(block: &Block) -> bool {
    /// Roles, and characters of each, that fit for sure.
    const ROLES: usize = 8;
    const LENGTH: usize = 60;
    match block {
        Block::Signatures { roles } => {
            roles.len() <= ROLES && roles.iter().all(|role| role.chars().count() <= LENGTH)
        }
        Block::Para { .. }
        | Block::Heading { .. }
        | Block::Items { .. }
        | Block::Step(_)
        | Block::Table(_)
        | Block::Figure(_) => false,
    }
}

fn block(
    block: &Block,
    targets: &Targets,
    uses: &Uses<'_>,
    drawings: Option<&Drawings>,
) -> Result<Value, RenderError> {
    Ok(match block {
        Block::Para { text: t } => json!({"kind": "para", "text": text(t, targets)}),
        Block::Heading { text } => json!({"kind": "heading", "text": text}),
        Block::Items { items } => {
            let items: Vec<_> = items.iter().map(|i| item(i, targets)).collect();
            json!({"kind": "items", "items": items})
        }
        Block::Step(s) => step(s, targets, uses),
        Block::Table(table) => table_view(table, targets),
        Block::Figure(figure) => {
            let lost = || RenderError::Internal(format!("no drawing named {}", figure.name));
            let source = drawings
                .map(|d| d.get(&figure.name).ok_or_else(lost))
                .transpose()?;
            json!({
                "kind": "figure",
                "target": own_target(&figure.id, targets).0,
                "anchor": own_target(&figure.id, targets).1,
                "name": figure.name,
                "alt": figure.alt,
                "caption": text(&figure.caption, targets),
                "source": source,
            })
        }
        Block::Signatures { roles } => json!({"kind": "signatures", "roles": roles}),
    })
}

fn item(item: &Item, targets: &Targets) -> Value {
    let source: Vec<Text> = item
        .source
        .iter()
        .map(|s| vec![Inline::Plain { text: s.clone() }])
        .collect();
    json!({
        "label": if item.label.is_empty() { "•" } else { &item.label },
        "text": text(&item.text, targets),
        "mark": item.mark,
        "source": texts(&source, targets),
        "source_lines": margin_lines(&source),
    })
}

fn step(step: &Step, targets: &Targets, uses: &Uses<'_>) -> Value {
    let used = uses.get(step.id.as_str()).map_or(&[][..], Vec::as_slice);
    let named = used.iter().take(USES_NAMED);
    let numbers: Vec<&str> = named.clone().map(|(_, no)| no.as_str()).collect();
    let back = format!("→ {}", numbers.join(", "));
    let back_lines = if used.is_empty() {
        0
    } else {
        wrapped_lines(&back, MARGIN_ROOM)
    };
    json!({
        "kind": "step",
        "target": own_target(&step.id, targets).0,
        "anchor": own_target(&step.id, targets).1,
        "no": step.no,
        "says": text(&step.says, targets),
        "mark": step.mark,
        "source": texts(&step.source, targets),
        "source_lines": margin_lines(&step.source) + back_lines,
        "used": named.map(|(id, no)| {
            let (label, anchor) = own_target(id, targets);
            json!({"no": no, "id": label, "anchor": anchor})
        }).collect::<Vec<_>>(),
        "used_more": used.len() > USES_NAMED,
        "equations": equations(&step.lines),
        "latex": step.latex,
        "uses": steps_first(&step.uses).map(|(id, no)| json!({
            "no": no,
            "table": no.starts_with("table"),
            "link": id,
            "anchor": targets.get(id).map(|t| &t.anchor),
        })).collect::<Vec<_>>(),
    })
}

/// What a step uses: steps in their order, then rows of tables.
fn steps_first(uses: &[(String, String)]) -> impl Iterator<Item = &(String, String)> {
    let is_table = |used: &&(String, String)| used.1.starts_with("table");
    let steps = uses.iter().filter(move |used| !is_table(used));
    steps.chain(uses.iter().filter(is_table))
}

/// Lines joined to equations: a line that is not continued begins a new one.
fn equations(lines: &[Line]) -> Vec<Value> {
    let mut grouped: Vec<(String, String)> = Vec::new();
    for line in lines {
        match grouped.last_mut() {
            Some((words, typst)) if line.continued => {
                words.push(' ');
                words.push_str(&line.words);
                typst.push_str(" \\\n    ");
                typst.push_str(&line.typst);
            }
            _ => grouped.push((line.words.clone(), line.typst.clone())),
        }
    }
    grouped
        .into_iter()
        .map(|(words, typst)| json!({"words": words, "typst": typst}))
        .collect()
}

/// Texts with their numbers joined and their links named.
pub(super) fn texts(list: &[Text], targets: &Targets) -> Vec<Value> {
    list.iter().map(|t| text(t, targets)).collect()
}

/// A text with its numbers joined and its links named.
pub(super) fn text(pieces: &[Inline], targets: &Targets) -> Value {
    pieces.iter().map(|p| piece(p, targets)).collect()
}

fn piece(piece: &Inline, targets: &Targets) -> Value {
    let label = |id: &String| {
        targets
            .get(id)
            .map_or_else(|| id.clone(), |t| t.label.clone())
    };
    let anchor = |id: &String| targets.get(id).map(|t| t.anchor.clone());
    match piece {
        Inline::Plain { text } => json!({"kind": "plain", "text": text}),
        Inline::Emph { text } => json!({"kind": "emph", "text": text}),
        Inline::Strong { text } => json!({"kind": "strong", "text": text}),
        Inline::Aside { text } => json!({"kind": "aside", "text": text}),
        Inline::Number {
            whole,
            decimals,
            exponent,
            step,
        } => json!({
            "kind": "number",
            "printed": format!("{whole}{}", tail(decimals, *exponent)),
            "link": step,
            "step": step.as_ref().map(label),
            "anchor": step.as_ref().and_then(anchor),
        }),
        Inline::Math {
            typst,
            latex,
            words,
        } => {
            json!({"kind": "math", "typst": typst, "latex": latex, "words": words})
        }
        Inline::StepRef { id, text } => {
            json!({
                "kind": "step-ref",
                "link": id,
                "id": label(id),
                "anchor": anchor(id),
                "text": text,
            })
        }
    }
}

/// How many lines the sources take in the margin, one after the other.
fn margin_lines(source: &[Text]) -> usize {
    let entries: Vec<String> = source.iter().map(|t| words(t)).collect();
    match entries.len() {
        0 => 0,
        _ => wrapped_lines(&soften(&entries.join("; "), MARGIN_ROOM), MARGIN_ROOM),
    }
}
