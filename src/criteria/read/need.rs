//! Reads what a sheet needs: name, symbol, kind, where from, default, bounds.

use super::known::Known;
use crate::criteria::from::From;
use crate::criteria::keys;
use crate::criteria::sheet::{BySystem, Kind, Need, Role, Stated, Status};
use crate::formula::Symbol;
use crate::quantity::{Dim, Given, UnitSet};
use crate::source::{Fields, Item, Told, Value};

/// Reads one need and declares its name.
pub(super) fn read_need(key: &Told<String>, item: Item<'_>, known: &mut Known) -> Option<Need> {
    let mut fields = item.keyed(&keys::NEED)?;
    let kind = fields
        .required("kind", |item| item.word(&Kind::WORDS))
        .map(|told| told.value);
    let declared = kind.and_then(|kind| known.declare(key, kind.dim(), item.faults));
    let is_word = kind == Some(Kind::Word);
    let symbol = if is_word {
        fields
            .optional("symbol", read_symbol)
            .or_else(|| Symbol::declared("k", Vec::new()).ok())
    } else {
        fields.required("symbol", |item| {
            let symbol = read_symbol(item)?;
            known.declare_symbol(symbol.plain(), &key.value, item)?;
            Some(symbol)
        })
    };
    let from = fields.required("from", |item| read_from(item, kind));
    let says = fields.required("says", Item::text);
    let role = fields
        .optional("role", |item| item.word(&Role::WORDS))
        .map(|told| told.value);
    let is_clause = from
        .as_ref()
        .is_some_and(|from| from.contains(&From::Clause));
    let stated = match (is_clause, fields.has("default")) {
        (true, _) => read_variants(&mut fields, kind).map(|text| Stated {
            text,
            source: None,
            status: Status::Read,
        }),
        (false, true) => fields.required("default", |item| read_default(item, kind)),
        (false, false) => None,
    };
    if !is_clause {
        let help =
            "a value stands beside `from: clause`; else write `default: {value: ..., source: ...}`";
        for key in ["value", "inch", "metric"] {
            fields.astray("not-taken", key, help);
        }
    }
    let least = fields.optional("least", |item| read_bound(item, kind));
    let most = fields.optional("most", |item| read_bound(item, kind));
    let grade = fields
        .optional("pattern", |item| read_pattern(item, kind))
        .unwrap_or(false);
    let has_check = from
        .as_ref()
        .is_some_and(|from| from.iter().any(|from| matches!(from, From::Check(_))));
    if stated.is_some() && !is_clause && !has_check {
        return fields.refuse(
            "sheet-default",
            "only a value of the check can have a default",
            "add `check.NAME` to `from`",
        );
    }
    if is_clause && from.as_ref().is_some_and(|from| from.len() > 1) {
        return fields.refuse(
            "sheet-default",
            "what the clause states comes from nowhere else",
            "write `from: clause`",
        );
    }
    fields.finish();
    declared?;
    Some(Need {
        name: key.clone(),
        symbol: symbol?,
        kind: kind?,
        from: from?,
        says: says?.value,
        role,
        stated,
        least,
        most,
        grade,
        place: item.place().clone(),
    })
}

/// A symbol: `f`, or a list of base and index, such as `[sigma, perp]`.
pub(super) fn read_symbol(item: Item<'_>) -> Option<Symbol> {
    let mut parts = match item.node.value {
        Value::List(_) => item.list(Item::raw)?,
        Value::Scalar { .. } | Value::Map(_) | Value::Null => vec![item.raw()?],
    };
    if parts.is_empty() {
        return item.refuse(
            "bad-symbol",
            "a symbol needs a base, such as `f` or `[f, u]`",
        );
    }
    let base = parts.remove(0);
    match Symbol::declared(
        &base.value,
        parts.into_iter().map(|part| part.value).collect(),
    ) {
        Ok(symbol) => Some(symbol),
        Err(message) => item.refuse_with(
            "bad-symbol",
            message,
            "write `f` or `[f, u]`: the base, then its index",
        ),
    }
}

/// One word or a list of words, of which the first that is given counts.
fn read_from(item: Item<'_>, kind: Option<Kind>) -> Option<Vec<From>> {
    match item.node.value {
        Value::List(ref items) if items.is_empty() => item.refuse(
            "empty-list",
            "`from` names no place that a value comes from",
        ),
        Value::List(_) => item.list(|item| read_one_from(item, kind)),
        Value::Scalar { .. } | Value::Map(_) | Value::Null => {
            read_one_from(item, kind).map(|from| vec![from])
        }
    }
}

fn read_one_from(item: Item<'_>, kind: Option<Kind>) -> Option<From> {
    let text = item.raw()?;
    let from = match From::parse(&text.value) {
        Ok(from) => from,
        Err(unknown) => {
            let mut fault = crate::source::Diagnostic::error(
                "unknown-word",
                format!("`{}` is no place that a value comes from", text.value),
                &text.place,
            );
            if let Some(near) = unknown.nearest {
                fault = fault.help(format!("did you mean `{near}`?"));
            }
            let allowed: Vec<String> = unknown
                .allowed
                .iter()
                .map(|word| format!("`{word}`"))
                .collect();
            return item
                .faults
                .refuse(fault.help(format!("allowed here: {}", allowed.join(", "))));
        }
    };
    match (from.kind(), kind) {
        (Some(own), Some(kind)) if own != kind => {
            let message = format!(
                "`{}` is {}, but {} is declared",
                text.value,
                own.says(),
                kind.says()
            );
            item.refuse("wrong-kind", message)
        }
        _ => Some(from),
    }
}

fn read_default(item: Item<'_>, kind: Option<Kind>) -> Option<Stated> {
    let mut fields = item.keyed(&keys::DEFAULT)?;
    let text = read_variants(&mut fields, kind);
    let source = fields.required("source", Item::text);
    let status = fields.optional("status", |item| item.word(&Status::WORDS));
    fields.finish();
    let status = status.map_or(Status::Read, |told| told.value);
    Some(Stated {
        text: text?,
        source: Some(source?.value),
        status,
    })
}

/// `value` for both systems of units, or `inch` and `metric`.
fn read_variants(fields: &mut Fields<'_>, kind: Option<Kind>) -> Option<BySystem<Told<String>>> {
    let both = fields.optional("value", |item| read_stated(item, kind, None));
    let inch = fields.optional("inch", |item| {
        read_stated(item, kind, Some(UnitSet::KipInch))
    });
    let metric = fields.optional("metric", |item| {
        read_stated(item, kind, Some(UnitSet::NewtonMillimetre))
    });
    let has_one = fields.has("value");
    let has_system = fields.has("inch") || fields.has("metric");
    if has_one == has_system {
        let help = "write `value: ...`, or `inch: ...` and `metric: ...`";
        return fields.lacks(
            "missing-key",
            &["value", "inch", "metric"],
            "a value stated for both systems of units, or one for each, is needed",
            Some(help),
        );
    }
    Some(BySystem {
        inch: both.clone().or(inch),
        metric: both.or(metric),
    })
}

/// A value as text, checked to parse; a sheet's quantities say their units.
pub(super) fn read_stated(
    item: Item<'_>,
    kind: Option<Kind>,
    set: Option<UnitSet>,
) -> Option<Told<String>> {
    let text = item.raw()?;
    if let Some(dim) = kind?.dim() {
        check_quantity(
            item,
            &text.value,
            dim,
            set.unwrap_or(UnitSet::NewtonMillimetre),
        )?;
    }
    Some(text)
}

/// Parses a quantity of a sheet: bare numbers only where there is no unit.
pub(super) fn check_quantity(item: Item<'_>, text: &str, dim: Dim, set: UnitSet) -> Option<Given> {
    match Given::parse(text, dim, set) {
        Ok(given) if given.unit.is_none() && dim != Dim::NONE => item.refuse_with(
            "unit-missing",
            format!("`{text}` has no unit; a sheet has none of its own"),
            format!("write {} with its unit", dim.word()),
        ),
        Ok(given) => Some(given),
        Err(error) => item.refuse("bad-quantity", error.to_string()),
    }
}

fn read_bound(item: Item<'_>, kind: Option<Kind>) -> Option<Told<String>> {
    if kind == Some(Kind::Word) {
        return item.refuse("wrong-kind", "a word has no bounds");
    }
    read_stated(item, kind, None)
}

fn read_pattern(item: Item<'_>, kind: Option<Kind>) -> Option<bool> {
    item.word(&[("grade", true)])?;
    if kind == Some(Kind::Word) {
        Some(true)
    } else {
        item.refuse("wrong-kind", "only a word has a pattern")
    }
}
