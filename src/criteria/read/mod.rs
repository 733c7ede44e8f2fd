//! Reads a clause sheet, all faults in one go; every formula is checked for its dimension here.
//!
//! This file reads the head of a sheet and holds its sections against each other; needs, tables
//! and rules have files of their own. Evaluates nothing.

mod known;
mod need;
mod rule;
mod table;

use super::keys;
use super::sheet::{Capacity, EndRule, FailurePath, Scope, Sheet, SheetSource, Status, WeldKind};
use crate::joint::Level;
use crate::source::{
    Diagnostic, FaultBag, Faults, Fields, Item, Node, SourceFile, Value, parse_yaml, read_keyed,
};
use known::Known;
use std::sync::Arc;

/// Reads a clause sheet.
///
/// # Errors
///
/// All faults of the file, in file order: those of YAML alone if there are any, else those of the
/// sheet, with formulas of wrong dimension among them.
pub fn read_sheet(file: &Arc<SourceFile>) -> Result<Sheet, Faults> {
    read_sheet_node(&parse_yaml(file)?)
}

/// Reads a clause sheet from its tree.
///
/// # Errors
///
/// All faults of the sheet, in file order.
pub fn read_sheet_node(root: &Node) -> Result<Sheet, Faults> {
    let faults = FaultBag::new();
    let sheet = read_keyed(root, &keys::SHEET, &faults).and_then(read_root);
    Ok(faults.close(sheet)?.0)
}

/// Levels and their words.
const LEVELS: [(&str, Level); 4] = [
    ("service", Level::Service),
    ("factored", Level::Factored),
    ("limit", Level::Limit),
    ("ultimate", Level::Ultimate),
];

fn read_root(mut fields: Fields<'_>) -> Option<Sheet> {
    let name = fields.required("name", Item::line);
    let title = fields.required("title", Item::line);
    let source = fields.required("source", read_source);
    let scope = fields.required("at", |item| {
        item.word(&[("point", Scope::Point), ("run", Scope::Run)])
    });
    let levels = fields.optional_list("levels", |item| item.word(&LEVELS).map(|told| told.value));
    let each_part = fields
        .optional("for each", |item| item.word(&[("part", true)]))
        .is_some();
    let convex = fields.optional("convex", Item::flag).unwrap_or(false);
    let requires = fields.required("requires", read_requires);
    let covers = fields.required("covers", |item| {
        item.list(|item| item.word(&FailurePath::WORDS))
    });
    let mut known = Known::default();
    let needs = fields.optional("needs", |item| {
        item.entries(|key, item| {
            let read = need::read_need(key, item, &mut known);
            known.noted(key, read)
        })
    });
    let tables = fields.optional("tables", |item| {
        item.entries(|key, item| {
            let read = table::read_table(key, item, &mut known);
            known.noted(key, read)
        })
    });
    let steps = fields.optional("steps", |item| {
        item.entries(|key, item| {
            let read = rule::read_step(key, item, &mut known);
            known.noted(key, read)
        })
    });
    let checks = fields.optional_list("checks", |item| rule::read_strength(item, &mut known));
    let limits = fields.optional_list("limits", |item| rule::read_limit(item, &mut known));
    let validity = fields.optional_list("validity", |item| rule::read_validity(item, &mut known));
    let assumptions = fields.optional_list("assumptions", Item::text);
    let cautions = fields.optional_list("cautions", Item::text);
    known.refuse_unused(fields.faults());
    let place = fields.place().clone();
    let sheet = requires
        .zip(name)
        .zip(title)
        .zip(source)
        .zip(scope)
        .zip(covers)
        .map(
            |((((((ends, welds), name), title), source), scope), covers)| Sheet {
                name,
                title,
                source,
                levels,
                scope: scope.value,
                each_part,
                convex,
                ends,
                welds,
                covers: covers.into_iter().map(|told| told.value).collect(),
                needs: needs.unwrap_or_default(),
                tables: tables.unwrap_or_default(),
                steps: steps.unwrap_or_default(),
                checks,
                limits,
                validity,
                assumptions,
                cautions,
                place,
            },
        );
    if let Some(sheet) = &sheet
        && !fields.faults().has_errors()
    {
        check_scope(sheet, &fields);
        check_parts(sheet, &fields);
        check_convex(sheet, fields.faults());
    }
    fields.finish();
    sheet
}

fn read_source(item: Item<'_>) -> Option<SheetSource> {
    let mut fields = item.keyed(&keys::SOURCE)?;
    let document = fields.required("document", Item::line);
    let edition = fields.optional("edition", Item::line);
    let clause = fields.optional("clause", Item::line);
    let status = fields.required("status", |item| item.word(&Status::WORDS));
    fields.finish();
    Some(SheetSource {
        document: document?.value,
        edition: edition.map(|told| told.value),
        clause: clause.map(|told| told.value),
        status: status?.value,
    })
}

fn read_requires(item: Item<'_>) -> Option<(Vec<EndRule>, Vec<WeldKind>)> {
    let mut fields = item.keyed(&keys::REQUIRES)?;
    let ends = fields.required("ends", read_ends);
    let welds = fields.required("welds", |item| {
        item.list(|item| item.word(&WeldKind::WORDS))
    });
    fields.finish();
    Some((ends?, welds?.into_iter().map(|told| told.value).collect()))
}

/// `any`, one word, or a list of words.
fn read_ends(item: Item<'_>) -> Option<Vec<EndRule>> {
    match &item.node.value {
        Value::Scalar { text, .. } if text == "any" => Some(Vec::new()),
        Value::List(_) => item.list(|item| item.word(&EndRule::WORDS).map(|told| told.value)),
        Value::Scalar { .. } | Value::Map(_) | Value::Null => {
            item.word(&EndRule::WORDS).map(|told| vec![told.value])
        }
    }
}

/// A sheet of points has levels and checks; a sheet of runs has limits and asks for no stress.
fn check_scope(sheet: &Sheet, fields: &Fields<'_>) {
    let refuse = |message: String, help: &str| {
        let fault = Diagnostic::error("sheet-scope", message, &sheet.name.place).help(help);
        fields.faults().push(fault);
    };
    match sheet.scope {
        Scope::Point => {
            if sheet.levels.is_empty() {
                refuse(
                    "a sheet `at: point` needs `levels`".into(),
                    "say which levels of load case it takes",
                );
            }
            if sheet.checks.is_empty() && !fields.has("checks") {
                refuse(
                    "a sheet `at: point` needs `checks`".into(),
                    "give a demand and a capacity",
                );
            }
            if !sheet.limits.is_empty() {
                refuse(
                    "a sheet `at: point` takes no `limits`".into(),
                    "put them into a sheet `at: run`",
                );
            }
            if !sheet.needs.iter().any(super::sheet::Need::is_at_point) {
                refuse(
                    "a sheet `at: point` asks for no stress".into(),
                    "name one, as in `from: point.f`",
                );
            }
        }
        Scope::Run => {
            if !sheet.levels.is_empty() || !sheet.checks.is_empty() {
                refuse(
                    "a sheet `at: run` takes no `levels` and no `checks`".into(),
                    "its rules are `limits`",
                );
            }
            if sheet.limits.is_empty() && !fields.has("limits") {
                refuse(
                    "a sheet `at: run` needs `limits`".into(),
                    "give a value and its bound",
                );
            }
            for need in sheet.needs.iter().filter(|need| need.is_at_point()) {
                let message = format!(
                    "`{}` is a stress, which a sheet `at: run` does not know",
                    need.name.value
                );
                fields
                    .faults()
                    .push(Diagnostic::error("sheet-scope", message, &need.name.place));
            }
        }
    }
}

/// `for each: part` and the quantities of the part in turn belong together.
fn check_parts(sheet: &Sheet, fields: &Fields<'_>) {
    let in_turn = sheet
        .needs
        .iter()
        .find(|need| need.from.iter().any(super::from::From::is_in_turn));
    let fault = match (sheet.each_part, in_turn) {
        (false, Some(need)) => {
            let message = format!(
                "`{}` is of the part in turn, but the sheet has no `for each: part`",
                need.name.value
            );
            Diagnostic::error("sheet-parts", message, &need.name.place)
                .help("add `for each: part`, or name the part")
        }
        (true, None) => {
            let message = "the sheet says `for each: part`, but asks for nothing of the part";
            Diagnostic::error("sheet-parts", message, &sheet.name.place)
                .help("as in `from: part.thickness`")
        }
        (false, None) | (true, Some(_)) => return,
    };
    fields.faults().push(fault);
}

/// Only a demand against a capacity that is the same all along a run can be convex.
fn check_convex(sheet: &Sheet, faults: &FaultBag) {
    if !sheet.convex {
        return;
    }
    let varying = sheet.varying();
    for check in &sheet.checks {
        if let Capacity::Name(name) = &check.capacity
            && varying.contains(&name.as_str())
        {
            let message =
                format!("`{name}` varies along a run, so that `convex: true` cannot hold");
            faults.push(
                Diagnostic::error("not-convex", message, &check.place).help("say `convex: false`"),
            );
        }
    }
}
