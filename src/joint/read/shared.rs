//! Checks a project file by the readers of the joint file, so that both take the same words.

use super::part;
use super::read_units;
use super::value::{read_free, read_positive};
use crate::joint::{Paper, keys};
use crate::quantity::{Dim, UnitSet};
use crate::source::{Diagnostic, FaultBag, Fields, Item, Node, Told, read_keyed};

/// Reads every entry for its faults alone; the printing set if the file names one.
pub(in crate::joint) fn check_project(root: &Node, faults: &FaultBag) -> Option<UnitSet> {
    let mut fields = read_keyed(root, &keys::PROJECT, faults)?;
    let units = fields.optional("units", read_units).map(|told| told.value);
    let set = units.unwrap_or(UnitSet::NewtonMillimetre);
    fields.optional("paper", |item| {
        item.word(&[("A4", Paper::A4), ("US Letter", Paper::UsLetter)])
    });
    for key in ["note prefix", "drawing", "item"] {
        fields.optional(key, Item::line);
    }
    fields.optional("parts", |item| part::read_parts(item, set));
    fields.optional("materials", |item| {
        item.entries(|name, entry| check_strengths(name, entry, "a material", set))
    });
    fields.optional("fillers", |item| {
        item.entries(|name, entry| check_strengths(name, entry, "a filler", set))
    });
    fields.optional("checks", part::read_checks);
    fields.optional_list("assumptions", part::read_assumption);
    fields.optional_list("cautions", Item::text);
    fields.optional("signatures", |item| item.list(Item::line));
    fields.finish();
    units
}

/// Reads an entry of `materials` or `fillers`, which its key names.
fn check_strengths(
    name: &Told<String>,
    item: Item<'_>,
    what: &'static str,
    set: UnitSet,
) -> Option<()> {
    if name.value.trim().is_empty() {
        return item.refuse("empty-value", format!("{what} has an empty name"));
    }
    let mut fields = item.fields(what)?;
    for key in ["f_y", "f_u"] {
        fields.optional(key, |item| read_positive(item, Dim::STRESS, set));
    }
    part::read_standing(&mut fields);
    for key in ["thickness", "material", "name"] {
        refuse_key(&mut fields, key, what);
    }
    part::read_more(&mut fields, |item| read_free(item, set));
    fields.finish();
    Some(())
}

/// Refuses a key that belongs to the part or to the key above.
fn refuse_key(fields: &mut Fields<'_>, key: &'static str, what: &str) {
    if fields.peek(key).is_none() {
        return;
    }
    let faults = fields.faults();
    if let Some(item) = fields.take(key) {
        let message = format!("{what} takes no `{key}`");
        let help = "its name is the key of its entry; a thickness belongs to a part";
        faults.push(Diagnostic::error("not-taken", message, item.place()).help(help));
    }
}
