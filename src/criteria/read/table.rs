//! Reads the tables of a sheet: rows by word, or by ranges with stated bounds.

use super::known::Known;
use super::need::{check_quantity, read_stated};
use crate::criteria::keys;
use crate::criteria::sheet::{ABOVE, BySystem, CodeTable, Kind, RawRows, UP_TO};
use crate::quantity::UnitSet;
use crate::source::{Item, Told};

/// Reads one table and declares its name.
pub(super) fn read_table(
    key: &Told<String>,
    item: Item<'_>,
    known: &mut Known,
) -> Option<CodeTable> {
    let mut fields = item.keyed(&keys::TABLE)?;
    let cited = fields.required("cited", Item::line);
    let of = fields
        .required("key", |item| item.word(&Kind::WORDS))
        .map(|told| told.value);
    let gives = fields
        .required("gives", |item| item.word(&Kind::WORDS))
        .map(|told| told.value);
    let dim = gives.and_then(Kind::dim);
    if gives.is_some() && dim.is_none() {
        return fields.refuse(
            "wrong-kind",
            "a table gives a quantity, not a word",
            "say `gives: ratio`, `length` or such",
        );
    }
    let read = |set: Option<UnitSet>| move |item| read_rows(item, of?, gives?, set);
    let both = fields.optional("rows", read(None));
    let inch = fields.optional("inch", read(Some(UnitSet::KipInch)));
    let metric = fields.optional("metric", read(Some(UnitSet::NewtonMillimetre)));
    let one = fields.has("rows") != (fields.has("inch") || fields.has("metric"));
    if !one {
        fields.lacks::<()>(
            "missing-key",
            &["rows", "inch", "metric"],
            "rows for both systems of units, or rows for each, are needed",
            Some("write `rows:`, or `inch:` and `metric:`"),
        );
    }
    fields.finish();
    if !one {
        return None;
    }
    let rows = BySystem {
        inch: both.clone().or(inch),
        metric: both.or(metric),
    };
    let table = CodeTable {
        name: key.clone(),
        cited: cited?.value,
        key: of?,
        dim: dim?,
        rows,
    };
    let sample = table
        .table(UnitSet::NewtonMillimetre)
        .or_else(|| table.table(UnitSet::KipInch))?;
    known.declare_table(key, sample, item.faults)?;
    Some(table)
}

fn read_rows(item: Item<'_>, key: Kind, gives: Kind, set: Option<UnitSet>) -> Option<RawRows> {
    let mut last: Option<f64> = None;
    let mut closed = false;
    let rows = item.entries(|told, value| {
        let bound = check_key(told, value, key, set, closed)?;
        if let (Some(bound), Some(last)) = (bound, last)
            && bound <= last
        {
            return refuse_key(
                value,
                told,
                "is not above the bound before it",
                "order the ranges from small to large",
            );
        }
        last = bound.or(last);
        closed = closed || told.value == ABOVE;
        Some((told.clone(), read_stated(value, Some(gives), set)?))
    })?;
    if rows.is_empty() {
        return item.refuse("empty-value", "a table needs rows");
    }
    Some(rows)
}

/// The bound of a range's key; `None` inside for a word and for the last row.
fn check_key(
    told: &Told<String>,
    item: Item<'_>,
    key: Kind,
    set: Option<UnitSet>,
    closed: bool,
) -> Option<Option<f64>> {
    let Kind::Quantity(dim) = key else {
        return Some(None);
    };
    if closed {
        return refuse_key(
            item,
            told,
            "stands behind `above`",
            "`above` is the last row",
        );
    }
    if told.value == ABOVE {
        return Some(None);
    }
    let Some(bound) = told.value.strip_prefix(UP_TO) else {
        return refuse_key(
            item,
            told,
            "is no range",
            "write `up to 6 mm` (inclusive), and `above` for the last",
        );
    };
    check_quantity(item, bound, dim, set.unwrap_or(UnitSet::NewtonMillimetre))
        .map(|given| Some(given.value))
}

fn refuse_key<T>(item: Item<'_>, told: &Told<String>, what: &str, help: &str) -> Option<T> {
    let message = format!("`{}` {what}", told.value);
    item.faults
        .refuse(crate::source::Diagnostic::error("table-key", message, &told.place).help(help))
}
