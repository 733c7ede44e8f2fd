//! Checks a project file by the readers of the joint file, so that both take the same words.

use super::part;
use super::value::{read_free_positive, read_positive};
use super::{read_named, read_units};
use crate::joint::{Paper, keys};
use crate::quantity::{Dim, UnitSet};
use crate::source::{FaultBag, Item, KeyTable, Node, Told, read_keyed};

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
    for (key, table) in [
        ("materials", &keys::MATERIAL),
        ("fillers", &keys::SHARED_FILLER),
    ] {
        fields.optional(key, |item| {
            read_named(item, key, |name, entry| {
                check_strengths(name, entry, table, set)
            })
        });
    }
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
    table: &'static KeyTable,
    set: UnitSet,
) -> Option<()> {
    if name.value.trim().is_empty() {
        return item.refuse("empty-value", format!("{} has an empty name", table.what));
    }
    let mut fields = item.keyed(table)?;
    for key in ["f_y", "f_u"]
        .into_iter()
        .filter(|key| table.find(key).is_some())
    {
        fields.optional(key, |item| read_positive(item, Dim::STRESS, set));
    }
    part::read_standing(&mut fields);
    for key in ["thickness", "material", "name"] {
        let help = "its name is the key of its entry; a thickness belongs to a part";
        fields.astray("not-taken", key, help);
    }
    part::read_more(&mut fields, |item| read_free_positive(item, set));
    fields.finish();
    Some(())
}
