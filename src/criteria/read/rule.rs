//! Reads the rules of a sheet: steps, strength checks, limits, conditions of validity.

use super::known::Known;
use super::need::read_symbol;
use crate::criteria::keys;
use crate::criteria::sheet::{Capacity, Kind, Limit, Rule, Side, Strength, Validity};
use crate::quantity::Dim;
use crate::source::{Diagnostic, Item, Told};

/// Reads one step and declares its name.
pub(super) fn read_step(key: &Told<String>, item: Item<'_>, known: &mut Known) -> Option<Rule> {
    let mut fields = item.keyed(&keys::STEP)?;
    let symbol = fields.required("symbol", |item| {
        let symbol = read_symbol(item)?;
        known.declare_symbol(symbol.plain(), &key.value, item)?;
        Some(symbol)
    });
    let formula = fields.required("formula", |item| known.formula(item, ["", ""]));
    let wanted = fields.optional("kind", |item| item.word(&Kind::WORDS));
    let says = fields.required("says", Item::text);
    fields.finish();
    let (formula, _, node, dim) = formula?;
    if let Some(wanted) = wanted
        && wanted.value != Kind::Quantity(dim)
    {
        let message = format!(
            "the formula gives {}, but {} is declared",
            dim.word(),
            wanted.value.says()
        );
        item.faults.push(Diagnostic::error(
            "formula-dimension",
            message,
            &formula.place,
        ));
    }
    known.declare(key, Some(dim), item.faults)?;
    Some(Rule {
        name: key.clone(),
        symbol: symbol?,
        formula,
        node,
        dim,
        says: says?.value,
    })
}

/// Reads one strength check.
pub(super) fn read_strength(item: Item<'_>, known: &mut Known) -> Option<Strength> {
    let mut fields = item.keyed(&keys::STRENGTH)?;
    let name = fields.required("name", Item::line);
    let demand = fields.required("demand", |item| known.quantity(item));
    let capacity = fields.required("capacity", |item| read_capacity(item, known));
    let proportional = fields.optional("proportional", Item::flag).unwrap_or(true);
    let says = fields.required("says", Item::text);
    fields.finish();
    let ((demand, of_demand), (capacity, of_capacity)) = (demand?, capacity?);
    if of_demand != of_capacity {
        let message = format!(
            "the demand is {}, but the capacity is {}",
            of_demand.word(),
            of_capacity.word()
        );
        return item.refuse("formula-dimension", message);
    }
    Some(Strength {
        name: name?,
        demand: demand.value,
        capacity,
        proportional,
        says: says?.value,
        place: item.place().clone(),
    })
}

/// A name, or a plain number above zero.
fn read_capacity(item: Item<'_>, known: &mut Known) -> Option<(Capacity, Dim)> {
    let text = item.raw()?;
    if !text
        .value
        .starts_with(|c: char| c.is_ascii_digit() || c == '.' || c == '-')
    {
        return known
            .quantity(item)
            .map(|(name, dim)| (Capacity::Name(name.value), dim));
    }
    let number = item.number()?;
    if number.value <= 0.0 {
        return item.refuse(
            "out-of-range",
            format!("the capacity is {}, but must be above 0", text.value),
        );
    }
    Some((Capacity::Number(text.value, number.value), Dim::NONE))
}

/// Reads one limit.
pub(super) fn read_limit(item: Item<'_>, known: &mut Known) -> Option<Limit> {
    let mut fields = item.keyed(&keys::LIMIT)?;
    let name = fields.required("name", Item::line);
    let value = fields.required("value", |item| known.quantity(item));
    let least = fields.optional("at least", |item| known.quantity(item));
    let most = fields.optional("at most", |item| known.quantity(item));
    let says = fields.required("says", Item::text);
    let one = fields.has("at least") != fields.has("at most");
    if !one {
        fields.lacks::<()>(
            "missing-key",
            &["at least", "at most"],
            "a limit needs one bound",
            Some("write `at least: NAME` or `at most: NAME`"),
        );
    }
    fields.finish();
    if !one {
        return None;
    }
    let side = if least.is_some() {
        Side::AtLeast
    } else {
        Side::AtMost
    };
    let ((value, of_value), (bound, of_bound)) = (value?, least.or(most)?);
    if of_value != of_bound {
        let message = format!(
            "the value is {}, but its bound is {}",
            of_value.word(),
            of_bound.word()
        );
        return item.refuse("formula-dimension", message);
    }
    Some(Limit {
        name: name?,
        value: value.value,
        side,
        bound: bound.value,
        says: says?.value,
        place: item.place().clone(),
    })
}

/// Reads one condition of validity.
pub(super) fn read_validity(item: Item<'_>, known: &mut Known) -> Option<Validity> {
    let mut fields = item.keyed(&keys::CONDITION)?;
    let holds = fields.required("holds", |item| {
        known.formula(item, ["when(", ", 1, otherwise, 0)"])
    });
    let says = fields.required("says", Item::text);
    fields.finish();
    let (holds, text, node, _) = holds?;
    Some(Validity {
        holds,
        node,
        text,
        says: says?.value,
    })
}
