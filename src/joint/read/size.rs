//! Size and kind of a weld, its toe side, and what its ends do.

use super::path::refuse_choice;
use super::value::{read_full_triple, read_positive, read_triple};
use crate::joint::{EndSpec, GivenAt, LegMeasure, SizeSpec, ToeSpec, Triple};
use crate::quantity::{Dim, UnitSet, real};
use crate::source::{Fields, Item, Told, Value};

/// The keys that tell a size.
pub(super) const KEYS: [&str; 4] = ["fillet", "throat", "partial", "complete"];

/// Reads the size among the keys of a run, a pattern or the weld.
///
/// `None` if none of the keys is there, `Some(None)` after a fault.
pub(super) fn read_size(fields: &mut Fields<'_>, set: UnitSet) -> Option<Option<SizeSpec>> {
    let told: Vec<&str> = KEYS.into_iter().filter(|key| fields.has(key)).collect();
    let measured = fields.take("leg measured");
    let leg = fields.take("leg");
    let fillet = fields.optional("fillet", |item| read_fillet(item, measured, set));
    let throat = fields.optional("throat", |item| read_throat(item, leg, set));
    let partial = fields.optional("partial", |item| {
        Some(SizeSpec::Partial {
            throat: read_positive(item, Dim::LENGTH, set)?,
        })
    });
    let complete = fields.optional("complete", |item| {
        let tee = item.word(&[("tee", true), ("butt", false)])?;
        Some(SizeSpec::Complete {
            tee: tee.value,
            place: tee.place,
        })
    });
    let strays = [(measured, "fillet"), (leg, "throat")];
    for (item, beside) in strays
        .into_iter()
        .filter_map(|(item, beside)| Some((item?, beside)))
    {
        if !told.contains(&beside) {
            let message = format!("`{}` is taken beside `{beside}` only", item.name);
            return Some(item.refuse("not-taken", message));
        }
    }
    match told.len() {
        0 => None,
        1 => Some(fillet.or(throat).or(partial).or(complete)),
        _ => Some(refuse_choice(fields, "which-size", "size", &told, &KEYS)),
    }
}

fn read_fillet(item: Item<'_>, measured: Option<Item<'_>>, set: UnitSet) -> Option<SizeSpec> {
    let Value::List(_) = item.node.value else {
        let leg = read_positive(item, Dim::LENGTH, set);
        let measured = match measured {
            Some(item) => read_measure(item),
            None => Some(LegMeasure::AlongFaces),
        };
        return Some(SizeSpec::Fillet {
            leg: leg?,
            measured: measured?,
        });
    };
    if let Some(measured) = measured {
        return measured.refuse(
            "not-taken",
            "`leg measured` is taken with one leg only; two legs lie along the faces",
        );
    }
    let legs = item.list(|leg| read_positive(leg, Dim::LENGTH, set))?;
    let count = legs.len();
    match <[GivenAt; 2]>::try_from(legs) {
        Ok([on_base, on_attached]) => Some(SizeSpec::Unequal {
            on_base,
            on_attached,
        }),
        Err(_) => item.refuse_with(
            "wrong-count",
            format!("`fillet` takes one leg or two, but has {count}"),
            "write `6`, or `[6, 9]`: the leg on the base first, then on the attached part",
        ),
    }
}

fn read_measure(item: Item<'_>) -> Option<LegMeasure> {
    let words = [
        ("along faces", LegMeasure::AlongFaces),
        ("square to face", LegMeasure::SquareToFace),
    ];
    item.word(&words).map(|told| told.value)
}

fn read_throat(item: Item<'_>, leg: Option<Item<'_>>, set: UnitSet) -> Option<SizeSpec> {
    let throat = read_positive(item, Dim::LENGTH, set);
    let leg = match leg {
        Some(item) => Some(read_positive(item, Dim::LENGTH, set)?),
        None => None,
    };
    Some(SizeSpec::Throat {
        throat: throat?,
        leg,
    })
}

/// Reads a toe side: a word, or a direction of two or three components.
pub(super) fn read_toe(item: Item<'_>, set: UnitSet) -> Option<Told<ToeSpec>> {
    if let Value::List(_) = item.node.value {
        let direction = read_triple(item, Dim::NONE, set)?;
        let unit = unit_vector(item, &direction)?;
        return Some(Told {
            value: ToeSpec::Toward(unit),
            place: direction.place,
        });
    }
    let toward = ToeSpec::Toward;
    item.word(&[
        ("+x", toward([1.0, 0.0, 0.0])),
        ("-x", toward([-1.0, 0.0, 0.0])),
        ("+y", toward([0.0, 1.0, 0.0])),
        ("-y", toward([0.0, -1.0, 0.0])),
        ("+z", toward([0.0, 0.0, 1.0])),
        ("-z", toward([0.0, 0.0, -1.0])),
        ("outside", ToeSpec::Outside),
        ("inside", ToeSpec::Inside),
    ])
}

/// Reads a direction of three components that is not zero; its length does not matter.
pub(super) fn read_direction(item: Item<'_>, set: UnitSet) -> Option<Triple> {
    let direction = read_full_triple(item, Dim::NONE, set)?;
    unit_vector(item, &direction)?;
    Some(direction)
}

fn unit_vector(item: Item<'_>, direction: &Triple) -> Option<[f64; 3]> {
    let [x, y, z] = direction.values();
    let length = real::hypot(real::hypot(x, y), z);
    if length > 0.0 && length.is_finite() {
        return Some([x / length, y / length, z / length]);
    }
    item.refuse(
        "zero-length",
        format!("`{}` is no direction: its length is {length}", item.name),
    )
}

/// Reads what the two ends do: one word for both, or a list of two.
pub(super) fn read_ends(item: Item<'_>) -> Option<[Told<EndSpec>; 2]> {
    let Value::List(_) = item.node.value else {
        let both = read_end(item)?;
        return Some([both.clone(), both]);
    };
    let ends = item.list(read_end)?;
    let count = ends.len();
    ends.try_into().ok().or_else(|| {
        let message = format!("`ends` takes one word or two, but has {count}");
        item.refuse_with(
            "wrong-count",
            message,
            "write one word for both ends, or `[first, last]`",
        )
    })
}

fn read_end(item: Item<'_>) -> Option<Told<EndSpec>> {
    item.word(&[
        ("full", EndSpec::Full),
        ("less leg", EndSpec::LessLeg),
        ("less throat", EndSpec::LessThroat),
        ("continuous", EndSpec::Continuous),
    ])
}
