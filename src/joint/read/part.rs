//! Parts, filler, checks, and the lists of words: assumptions, exclusions, changes.

use super::read_named;
use super::value::{read_date, read_free_positive, read_positive};
use crate::joint::{Assumption, Change, CheckSpec, Exclusion, Filler, Part, RawQuantity, keys};
use crate::quantity::{Dim, UnitSet};
use crate::source::{Fields, Item, Told, Value};

/// Reads `parts`, in file order.
pub(super) fn read_parts(item: Item<'_>, set: UnitSet) -> Option<Vec<Part>> {
    let parts = read_named(item, "parts", |name, part| read_part(name, part, set))?;
    if parts.is_empty() {
        item.refuse("empty-list", "`parts` names no part")
    } else {
        Some(parts)
    }
}

fn read_part(name: &Told<String>, item: Item<'_>, set: UnitSet) -> Option<Part> {
    if name.value.trim().is_empty() {
        return item.refuse("empty-value", "a part has an empty name");
    }
    let mut fields = item.keyed(&keys::PART)?;
    let material = fields.required("material", Item::line);
    let thickness = fields.optional("thickness", |item| read_positive(item, Dim::LENGTH, set));
    let f_y = fields.optional("f_y", |item| read_positive(item, Dim::STRESS, set));
    let f_u = fields.optional("f_u", |item| read_positive(item, Dim::STRESS, set));
    let (source, to_be_verified) = read_standing(&mut fields);
    let more = read_more(&mut fields, |item| read_free_positive(item, set));
    fields.finish();
    Some(Part {
        name: name.clone(),
        material: material?,
        thickness,
        f_y,
        f_u,
        more,
        source,
        to_be_verified,
        place: item.place().clone(),
    })
}

/// Reads `filler`.
pub(super) fn read_filler(item: Item<'_>, set: UnitSet) -> Option<Filler> {
    let mut fields = item.keyed(&keys::FILLER)?;
    let name = fields.required("name", Item::line);
    let f_u = fields.optional("f_u", |item| read_positive(item, Dim::STRESS, set));
    let (source, to_be_verified) = read_standing(&mut fields);
    let more = read_more(&mut fields, |item| read_free_positive(item, set));
    fields.finish();
    Some(Filler {
        name: name?,
        f_u,
        more,
        source,
        to_be_verified,
        place: item.place().clone(),
    })
}

/// Reads `checks`: at least one.
pub(super) fn read_checks(item: Item<'_>) -> Option<Vec<CheckSpec>> {
    let checks = item.list(read_check)?;
    if checks.is_empty() {
        item.refuse("empty-list", "`checks` asks for no check")
    } else {
        Some(checks)
    }
}

fn read_check(item: Item<'_>) -> Option<CheckSpec> {
    let mut fields = item.keyed(&keys::CHECK)?;
    let clause = fields.required("clause", Item::line);
    let (source, to_be_verified) = read_standing(&mut fields);
    let values = read_more(&mut fields, Item::raw);
    fields.finish();
    Some(CheckSpec {
        clause: clause?,
        values,
        source,
        to_be_verified,
        place: item.place().clone(),
    })
}

/// Reads `source` and `to be verified`.
pub(super) fn read_standing(fields: &mut Fields<'_>) -> (Option<Told<String>>, bool) {
    let source = fields.optional("source", Item::line);
    let to_be_verified = fields.optional("to be verified", Item::flag);
    (source, to_be_verified.unwrap_or(false))
}

/// Reads all other keys as quantities whose kind a sheet will say.
pub(super) fn read_more<'a>(
    fields: &mut Fields<'a>,
    read: impl Fn(Item<'a>) -> Option<RawQuantity>,
) -> Vec<(Told<String>, RawQuantity)> {
    let free = fields.free();
    free.into_iter()
        .filter_map(|(key, item)| Some((key.clone(), read(item)?)))
        .collect()
}

/// Reads an assumption: a text, or a map with `says`.
pub(super) fn read_assumption(item: Item<'_>) -> Option<Assumption> {
    if !matches!(item.node.value, Value::Map(_)) {
        return Some(Assumption {
            says: item.text()?,
            to_be_verified: false,
        });
    }
    let mut fields = item.keyed(&keys::ASSUMPTION)?;
    if !fields.has("says") && item.is_text_with_colon() {
        return item.refuse_colon();
    }
    let says = fields.required("says", Item::text);
    let to_be_verified = fields.optional("to be verified", Item::flag);
    fields.finish();
    Some(Assumption {
        says: says?,
        to_be_verified: to_be_verified.unwrap_or(false),
    })
}

/// Reads an entry of `excluded`.
pub(super) fn read_exclusion(item: Item<'_>) -> Option<Exclusion> {
    let mut fields = item.keyed(&keys::EXCLUSION)?;
    let path = fields.required("path", Item::line);
    let by = fields.required("by", Item::line);
    fields.finish();
    Some(Exclusion {
        path: path?,
        by: by?,
    })
}

/// Reads an entry of `changes`.
pub(super) fn read_change(item: Item<'_>) -> Option<Change> {
    let mut fields = item.keyed(&keys::CHANGE)?;
    let revision = fields.required("revision", Item::line);
    let date = fields.required("date", read_date);
    let says = fields.required("says", Item::text);
    fields.finish();
    Some(Change {
        revision: revision?,
        date: date?,
        says: says?,
    })
}
