//! The path of a run: one of `straight`, `arc`, `circle`, `polyline`.

use super::value::{read_positive, read_quantity, read_triple, refuse_range};
use crate::joint::{GivenAt, PathSpec, Triple, keys};
use crate::quantity::{Dim, UnitSet};
use crate::source::{Fields, Item, Value};

/// The keys that tell a path.
const KEYS: [&str; 4] = ["straight", "arc", "circle", "polyline"];

/// Legs shorter than this share of the largest coordinate have no direction left in their digits.
const SHORTEST: f64 = 1e-9;

/// Reads the path among a run's keys.
pub(super) fn read_path(fields: &mut Fields<'_>, set: UnitSet) -> Option<PathSpec> {
    let told: Vec<&str> = KEYS.into_iter().filter(|key| fields.has(key)).collect();
    let straight = fields.optional("straight", |item| read_straight(item, set));
    let arc = fields.optional("arc", |item| read_arc(item, set));
    let circle = fields.optional("circle", |item| read_circle(item, set));
    let closed = fields.take("closed");
    let is_closed = closed.and_then(Item::flag).unwrap_or(false);
    let polyline = fields.optional("polyline", |item| read_polyline(item, is_closed, set));
    if let Some(item) = closed
        && told != ["polyline"]
    {
        return item.refuse("not-taken", "`closed` is taken beside `polyline` only");
    }
    if told.len() != 1 {
        return refuse_choice(fields, "which-path", "path", &told, &KEYS);
    }
    straight.or(arc).or(circle).or(polyline)
}

/// Refuses none or several of the keys of which one is to be told.
pub(super) fn refuse_choice<T>(
    fields: &Fields<'_>,
    code: &'static str,
    what: &str,
    told: &[&str],
    keys: &[&str],
) -> Option<T> {
    let quoted = |keys: &[&str], last: &str| {
        let names: Vec<String> = keys.iter().map(|key| format!("`{key}`")).collect();
        names.join(last)
    };
    let help = format!("write one of {}", quoted(keys, ", "));
    if told.is_empty() {
        return fields.lacks(code, keys, format!("no {what} is told"), Some(&help));
    }
    let message = format!("more than one {what} is told: {}", quoted(told, " and "));
    fields.refuse(code, message, help)
}

/// Refuses points of which some have two coordinates and some three.
fn refuse_mixed(item: Item<'_>) -> Option<()> {
    let mut counts: Vec<usize> = Vec::new();
    for point in item.items()? {
        if let Value::List(parts) = &point.node.value {
            counts.push(parts.len());
        }
    }
    if counts.windows(2).all(|pair| pair[0] == pair[1]) {
        return Some(());
    }
    let message = format!(
        "some points of `{}` have two coordinates, some three",
        item.name
    );
    item.refuse_with(
        "wrong-count",
        message,
        "write all as `[x, y]`, or all as `[x, y, z]`",
    )
}

fn read_straight(item: Item<'_>, set: UnitSet) -> Option<PathSpec> {
    let points = item.list(|point| read_triple(point, Dim::LENGTH, set))?;
    let count = points.len();
    let Ok(ends) = <[Triple; 2]>::try_from(points) else {
        return item.refuse_with(
            "wrong-count",
            format!("`straight` takes two points, but has {count}"),
            "write `[[x, y], [x, y]]`; more corners make a `polyline`",
        );
    };
    refuse_mixed(item)?;
    if is_short(&ends[0], &ends[1]) {
        return item.refuse("zero-length", "the two points of `straight` are one");
    }
    Some(PathSpec::Straight(ends))
}

fn read_polyline(item: Item<'_>, closed: bool, set: UnitSet) -> Option<PathSpec> {
    let points = item.list(|point| read_triple(point, Dim::LENGTH, set))?;
    let Some((first, last)) = points
        .first()
        .zip(points.last())
        .filter(|_| points.len() >= 3)
    else {
        return item.refuse_with(
            "wrong-count",
            format!(
                "`polyline` takes three points or more, but has {}",
                points.len()
            ),
            "two points make a `straight`",
        );
    };
    refuse_mixed(item)?;
    if let Some(at) = points
        .windows(2)
        .position(|pair| is_short(&pair[0], &pair[1]))
    {
        return item.refuse(
            "zero-length",
            format!("points {} and {} of `polyline` are one", at + 1, at + 2),
        );
    }
    if closed && is_short(first, last) {
        return item.refuse_with(
            "zero-length",
            "the last point of `polyline` is its first",
            "`closed: true` joins them by itself: leave the last point out",
        );
    }
    Some(PathSpec::Polyline { points, closed })
}

/// Whether two points are one, within the digits of their coordinates.
fn is_short(a: &Triple, b: &Triple) -> bool {
    let (a, b) = (a.values(), b.values());
    let size = a
        .iter()
        .chain(&b)
        .fold(0.0_f64, |size, value| size.max(value.abs()));
    let step = (0..3).fold(0.0_f64, |step, axis| step.max((a[axis] - b[axis]).abs()));
    step <= SHORTEST * size
}

fn read_arc(item: Item<'_>, set: UnitSet) -> Option<PathSpec> {
    let mut fields = item.keyed(&keys::ARC)?;
    let centre = fields.required("centre", |item| read_triple(item, Dim::LENGTH, set));
    let radius = fields.required("radius", |item| read_positive(item, Dim::LENGTH, set));
    let from = fields.required("from", |item| read_quantity(item, Dim::ANGLE, set));
    let sweep = fields.required("sweep", |item| read_sweep(item, set));
    fields.finish();
    Some(PathSpec::Arc {
        centre: centre?,
        radius: radius?,
        from: from?,
        sweep: sweep?,
    })
}

/// Reads a swept angle: not zero, less than a full turn either way.
fn read_sweep(item: Item<'_>, set: UnitSet) -> Option<GivenAt> {
    let given = read_quantity(item, Dim::ANGLE, set)?;
    let size = given.value.value.abs();
    if size == 0.0 {
        return item.refuse("zero-length", "`sweep` is 0, which makes no arc");
    }
    // A full turn typed in rad has its last digit rounded; it is as full as 360 deg.
    if size >= std::f64::consts::TAU - 1e-9 {
        let less = if given.value.unit.as_deref() == Some("rad") {
            "under 2 pi"
        } else {
            "under 360"
        };
        return refuse_range(
            item,
            &given.value,
            set,
            &[less, "either way; a full turn is a `circle`"],
        );
    }
    Some(given)
}

fn read_circle(item: Item<'_>, set: UnitSet) -> Option<PathSpec> {
    let mut fields = item.keyed(&keys::CIRCLE)?;
    let centre = fields.required("centre", |item| read_triple(item, Dim::LENGTH, set));
    let radius = fields.required("radius", |item| read_positive(item, Dim::LENGTH, set));
    fields.finish();
    Some(PathSpec::Circle {
        centre: centre?,
        radius: radius?,
    })
}
