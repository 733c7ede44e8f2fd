//! Values with units, dates and points, each with the fault texts a user needs.

use crate::joint::{GivenAt, RawQuantity, Triple};
use crate::quantity::{Dim, Given, GivenError, UnitError, UnitSet, near_unit};
use crate::source::{Diagnostic, Item, Place, Told};
use chrono::NaiveDate;

/// Reads a quantity of the dimension; a bare number takes the printing set's own unit.
pub fn read_quantity(item: Item<'_>, dim: Dim, set: UnitSet) -> Option<GivenAt> {
    let text = item.raw()?;
    match Given::parse(&text.value, dim, set) {
        Ok(value) => Some(Told {
            value,
            place: text.place,
        }),
        Err(error) => refuse_quantity(item, &text.value, &error, dim, set),
    }
}

/// Reads a further strength: as [`read_free`], above zero.
pub(super) fn read_free_positive(item: Item<'_>, set: UnitSet) -> Option<RawQuantity> {
    let text = read_free(item, set)?;
    if !Given::typed_number(&text.value).is_ok_and(|number| number > 0.0) {
        let message = format!("`{}` is {}, but must be above 0", item.name, text.value);
        return item.refuse_with("out-of-range", message, "a strength is a positive number");
    }
    Some(text)
}

/// Reads a number or a quantity of any kind, kept as typed for a sheet that says its kind.
pub(super) fn read_free(item: Item<'_>, set: UnitSet) -> Option<RawQuantity> {
    let text = item.raw()?;
    match Given::parse(&text.value, Dim::NONE, set) {
        Ok(_) | Err(GivenError::Kind { .. }) => Some(text),
        Err(error) => {
            let example = if set.is_inch() { "45 ksi" } else { "310 MPa" };
            let help = format!(
                "a further value is a number, or a number with its unit, as in `{example}`"
            );
            if matches!(error, GivenError::Unit(UnitError::Mass(_))) {
                return item.refuse_with("unknown-unit", error.to_string(), help);
            }
            refuse_with_help(item, &text.value, &error, Dim::NONE, help)
        }
    }
}

fn refuse_quantity<T>(
    item: Item<'_>,
    text: &str,
    error: &GivenError,
    dim: Dim,
    set: UnitSet,
) -> Option<T> {
    refuse_with_help(item, text, error, dim, advice(dim, set))
}

/// Refuses a text that is no quantity; `usual` says how one is written.
fn refuse_with_help<T>(
    item: Item<'_>,
    text: &str,
    error: &GivenError,
    dim: Dim,
    usual: String,
) -> Option<T> {
    let (code, message, help) = match error {
        GivenError::NotANumber(_) => (
            "not-a-number",
            format!("`{text}` is not a number"),
            match ungrouped(text) {
                Some(plain) => format!("write `{plain}`: thousands have no separator"),
                None if text.contains(['"', '″', '\'']) => {
                    "inches are written `in`, feet `ft`".to_owned()
                }
                None => usual,
            },
        ),
        GivenError::NotFinite(_) => ("not-a-number", error.to_string(), usual),
        GivenError::Comma(_) => (
            "decimal-comma",
            match ungrouped(text) {
                Some(_) => format!("`{text}` has a comma in its number"),
                None => format!("`{text}` has a decimal comma"),
            },
            comma_advice(text),
        ),
        GivenError::Unit(UnitError::Mass(_)) if dim == Dim::FORCE => (
            "mass-for-force",
            format!("{error}; a load is a force"),
            "write the force, in N, kN, kgf, lbf or kip".to_owned(),
        ),
        GivenError::Unit(UnitError::Mass(_)) => (
            "mass-for-force",
            format!("{error}, but {} is needed here", dim.word()),
            usual,
        ),
        GivenError::Unit(UnitError::Unknown(_) | UnitError::Malformed(_)) => {
            ("unknown-unit", error.to_string(), usual)
        }
        GivenError::Kind { .. } => ("wrong-kind", format!("`{}`: {error}", item.name), usual),
        GivenError::BareAngle(_) | GivenError::BareStress(_) => {
            ("unit-missing", error.to_string(), usual)
        }
    };
    let mut fault = Diagnostic::error(code, message, item.place());
    if let GivenError::Unit(UnitError::Unknown(name)) = error
        && let Some(near) = near_unit(name)
    {
        fault = fault.help(format!("did you mean `{near}`?"));
    }
    item.faults.refuse(fault.help(help))
}

/// What to write for a number with a comma: a decimal comma, or one that parts thousands.
fn comma_advice(text: &str) -> String {
    let Some(plain) = ungrouped(text) else {
        return format!("write `{}`", text.replace(',', "."));
    };
    if text.matches(',').count() == 1 && !text.contains('.') {
        let point = text.replace(',', ".");
        return format!("write `{plain}` if the comma parts thousands, `{point}` if it is decimal");
    }
    format!("write `{plain}`: decimals take a point, thousands have no separator")
}

/// A number whose digits are grouped by threes, with the groups joined; `None` if they are not.
///
/// Groups are parted by commas, points, blanks or apostrophes; another mark parts the decimals.
fn ungrouped(text: &str) -> Option<String> {
    let end = text.find(char::is_alphabetic).unwrap_or(text.len());
    let (number, unit) = text.split_at(end);
    let number = number.trim_end();
    let digits = number.trim_start_matches(['+', '-', '−']);
    let mark = digits.chars().find(|c| !c.is_ascii_digit())?;
    if !matches!(mark, ',' | '.' | ' ' | '\'' | '’') {
        return None;
    }
    let decimal = if mark == '.' { ',' } else { '.' };
    let (whole, decimals) = match digits.split_once(decimal) {
        Some((whole, decimals)) => (whole, Some(decimals)),
        None => (digits, None),
    };
    let mut groups = whole.split(mark);
    let first = groups.next()?;
    let all_digits = |group: &str| group.chars().all(|c| c.is_ascii_digit());
    let grouped = matches!(first.len(), 1..=3)
        && all_digits(first)
        && groups.all(|group| group.len() == 3 && all_digits(group))
        && decimals.is_none_or(|decimals| !decimals.is_empty() && all_digits(decimals));
    if !grouped || (mark == '.' && decimals.is_none()) {
        return None;
    }
    let sign = &number[..number.len() - digits.len()];
    let tail = decimals.map_or(String::new(), |decimals| format!(".{decimals}"));
    let unit = if unit.is_empty() {
        String::new()
    } else {
        format!(" {unit}")
    };
    Some(format!("{sign}{}{tail}{unit}", whole.replace(mark, "")))
}

/// How a quantity of the dimension is written.
fn advice(dim: Dim, set: UnitSet) -> String {
    let own = set.label(dim);
    let example = match (dim, set.is_inch()) {
        (Dim::NONE, _) => {
            return "write a plain number, as in `1.25`, or a percentage, as in `5 %`".to_owned();
        }
        (Dim::ANGLE, _) => return "write an angle with its unit, as in `90 deg`".to_owned(),
        (Dim::LENGTH, false) => "6 mm",
        (Dim::LENGTH, true) => "1/4 in",
        (Dim::FORCE, false) => "4.2 kN",
        (Dim::FORCE, true) => "4.2 kip",
        (Dim::MOMENT, false) => "4.2 kN m",
        (Dim::MOMENT, true) => "4.2 kip in",
        (Dim::STRESS, false) => "355 MPa",
        (Dim::STRESS, true) => "50 ksi",
        _ => return format!("write {} in {own}, or with its unit", dim.word()),
    };
    format!(
        "write {} in {own}, or with its unit, as in `{example}`",
        dim.word()
    )
}

/// Reads a quantity above zero.
pub(super) fn read_positive(item: Item<'_>, dim: Dim, set: UnitSet) -> Option<GivenAt> {
    let given = read_quantity(item, dim, set)?;
    if given.value.value > 0.0 {
        Some(given)
    } else {
        refuse_range(item, &given.value, set, &["above 0"])
    }
}

/// Reads a quantity of zero or more.
pub(super) fn read_not_negative(item: Item<'_>, dim: Dim, set: UnitSet) -> Option<GivenAt> {
    let given = read_quantity(item, dim, set)?;
    if given.value.value >= 0.0 {
        Some(given)
    } else {
        refuse_range(item, &given.value, set, &["0", "or more"])
    }
}

/// Refuses a quantity; the bounds name the first limit before and the words after its unit.
pub(super) fn refuse_range<T>(
    item: Item<'_>,
    given: &Given,
    set: UnitSet,
    bounds: &[&str],
) -> Option<T> {
    let unit = given.unit.clone().unwrap_or_else(|| set.label(given.dim));
    let limit = match bounds {
        [limit, after] => format!("{} {after}", with_unit(limit, &unit)),
        _ => with_unit(&bounds.concat(), &unit),
    };
    let message = format!(
        "`{}` is {}, but must be {limit}",
        item.name,
        with_unit(&given.number, &unit)
    );
    item.refuse_with("out-of-range", message, advice(given.dim, set))
}

fn with_unit(number: &str, unit: &str) -> String {
    if unit.is_empty() {
        number.to_owned()
    } else {
        format!("{number} {unit}")
    }
}

/// Reads a point or vector of two or three components; the third is 0 where it is left out.
pub fn read_triple(item: Item<'_>, dim: Dim, set: UnitSet) -> Option<Triple> {
    let items = item.items()?;
    if !matches!(items.len(), 2 | 3) {
        return refuse_count(item, items.len(), "two or three");
    }
    triple(item, &items, dim, set)
}

/// Reads a vector of three components, where two would leave open which axis is meant.
pub(super) fn read_full_triple(item: Item<'_>, dim: Dim, set: UnitSet) -> Option<Triple> {
    let items = item.items()?;
    if items.len() != 3 {
        return refuse_count(item, items.len(), "three");
    }
    triple(item, &items, dim, set)
}

fn triple(item: Item<'_>, items: &[Item<'_>], dim: Dim, set: UnitSet) -> Option<Triple> {
    refuse_odd_commas(item, items)?;
    let read: Vec<Option<GivenAt>> = items
        .iter()
        .map(|part| near_enough(*part, read_quantity(*part, dim, set)?, set))
        .collect();
    let mut parts = [zero(dim), zero(dim), zero(dim)];
    for (part, given) in parts.iter_mut().zip(read) {
        *part = given?.value;
    }
    Some(Triple {
        parts,
        place: item.place().clone(),
    })
}

/// Refuses a coordinate that no joint has: a kilometre or more off.
fn near_enough(item: Item<'_>, given: GivenAt, set: UnitSet) -> Option<GivenAt> {
    let is_far = |kilometre: Given| given.value.value.abs() >= kilometre.value;
    let is_length = given.value.dim == Dim::LENGTH;
    if !(is_length && Given::parse("1000 m", Dim::LENGTH, set).is_ok_and(is_far)) {
        return Some(given);
    }
    item.refuse_with(
        "out-of-range",
        format!(
            "the coordinate {} is a kilometre or more",
            given.value.text()
        ),
        "write where the joint is, in the frame of the joint",
    )
}

/// Refuses a list whose commas show that a decimal comma or a lost component made it what it is:
/// some stand between digits without a blank and some do not, or one stands at the end.
fn refuse_odd_commas(item: Item<'_>, items: &[Item<'_>]) -> Option<()> {
    let text = &item.place().file.text;
    let between = |pair: &[Item<'_>]| text.get(pair[0].place().end..pair[1].place().start);
    let tight = |pair: &&[Item<'_>]| between(pair) == Some(",");
    let pairs = || items.windows(2);
    if let Some(pair) = pairs()
        .find(tight)
        .filter(|_| !pairs().all(|pair| tight(&pair)))
    {
        let place = Place {
            end: pair[1].place().end,
            ..pair[0].place().clone()
        };
        let typed = text.get(place.start..place.end).unwrap_or_default();
        let message = format!("`{typed}` is two components of `{}`", item.name);
        let help = format!(
            "write `{}` if the comma is decimal, else put a blank behind it as behind the others",
            typed.replacen(',', ".", 1)
        );
        return item
            .faults
            .refuse(Diagnostic::error("decimal-comma", message, &place).help(help));
    }
    let last = items
        .last()
        .map_or(item.place().end, |last| last.place().end);
    let rest = text.get(last..item.place().end).unwrap_or_default();
    if items.len() < 3 && rest.trim_start().starts_with(',') {
        let message = format!(
            "`{}` ends in a comma, as if a component were lost",
            item.name
        );
        return item.refuse_with("wrong-count", message, "write `[x, y, z]`");
    }
    Some(())
}

fn refuse_count<T>(item: Item<'_>, count: usize, wanted: &str) -> Option<T> {
    let message = format!("`{}` takes {wanted} components, but has {count}", item.name);
    let help = if count > 3 {
        "decimals take a point: `1.5`, not `1,5`"
    } else {
        "write `[x, y, z]`"
    };
    item.refuse_with("wrong-count", message, help)
}

/// A component left out.
pub(super) fn zero(dim: Dim) -> Given {
    Given::stated("0", 0.0, dim)
}

/// Reads a date of the form `2026-05-04`.
pub(super) fn read_date(item: Item<'_>) -> Option<Told<NaiveDate>> {
    let text = item.raw()?;
    let date = NaiveDate::parse_from_str(&text.value, "%Y-%m-%d")
        .ok()
        .filter(|_| text.value.len() == 10);
    match date {
        Some(value) => Some(Told {
            value,
            place: text.place,
        }),
        None => item.refuse_with(
            "bad-date",
            format!("`{}` is no date", text.value),
            "write year, month and day as in `2026-05-04`",
        ),
    }
}
