//! Load cases and the frames they may be told in.

use super::value::{read_full_triple, read_triple, zero};
use super::{check_distinct, read_named, unknown_name};
use crate::joint::{Case, Level, LoadFrame, Loads, Triple, keys};
use crate::quantity::{Dim, UnitSet, real};
use crate::source::{Diagnostic, Fields, Item, Told};
use std::cell::Cell;

/// How far axes may be from unit length and from square: what six printed decimals give.
const ORTHONORMAL: f64 = 1e-6;

/// What holds for every case that does not say otherwise.
struct Usual {
    /// The outer `None`: not told; the inner one: told, but refused.
    at: Option<Option<Triple>>,
    level: Option<Option<Told<Level>>>,
    frames: Vec<LoadFrame>,
    /// Names of all frames, faulty ones too.
    names: Vec<Told<String>>,
    /// Whether `frames` itself is misspelt, so that no name of a frame is known.
    misspelt_frames: bool,
    /// Whether a case has been told to lack its level: once for all cases is enough.
    missed_level: Cell<bool>,
    /// As `missed_level`, for the point of application.
    missed_point: Cell<bool>,
}

/// Reads `loads`.
pub(super) fn read_loads(item: Item<'_>, set: UnitSet) -> Option<Loads> {
    let mut fields = item.keyed(&keys::LOADS)?;
    let at = fields.usual("at", |item| read_triple(item, Dim::LENGTH, set));
    let level = fields.usual("level", read_level);
    let misspelt_frames = fields.misspells(&["frames"]);
    let mut names = Vec::new();
    let frames = fields.optional("frames", |item| {
        read_named(item, "frames", |name, frame| {
            names.push(name.clone());
            Some(read_frame(name, frame, set))
        })
    });
    let usual = Usual {
        at,
        level,
        frames: frames.into_iter().flatten().flatten().collect(),
        names,
        misspelt_frames,
        missed_level: Cell::default(),
        missed_point: Cell::default(),
    };
    let cases = fields.required("cases", |item| {
        item.list(|case| read_case(case, &usual, set))
    });
    fields.finish();
    let cases = cases?;
    if cases.is_empty() {
        return item.refuse("empty-list", "`cases` holds no load case");
    }
    check_distinct(
        cases.iter().map(|case| &case.name),
        "load cases",
        item.faults,
    );
    Some(Loads { cases })
}

fn read_level(item: Item<'_>) -> Option<Told<Level>> {
    let levels = [
        Level::Service,
        Level::Factored,
        Level::Limit,
        Level::Ultimate,
    ];
    item.word(&levels.map(|level| (level.word(), level)))
}

fn read_case(item: Item<'_>, usual: &Usual, set: UnitSet) -> Option<Case> {
    let mut fields = item.keyed(&keys::CASE)?;
    let name = fields.required("case", Item::line);
    let says = fields.optional("says", Item::text);
    let level = pick_level(&mut fields, usual);
    let frame = fields.take("in").map(|item| pick_frame(item, usual));
    let told = (fields.has("force"), fields.has("moment"));
    let force = fields.optional("force", |item| read_triple(item, Dim::FORCE, set));
    let moment = fields.optional("moment", |item| read_full_triple(item, Dim::MOMENT, set));
    let at = pick_point(&mut fields, usual, told.0, frame.is_some(), set);
    let (force, moment) = match told {
        (false, false) => {
            let message = "the case has neither `force` nor `moment`";
            let help = "write one of them, with zeros if it is a case of no load";
            fields.lacks::<()>("missing-load", &["force", "moment"], message, Some(help));
            (None, None)
        }
        (true, true) => (force, moment),
        (true, false) => fill(force, Dim::MOMENT),
        (false, true) => {
            let (moment, force) = fill(moment, Dim::FORCE);
            (force, moment)
        }
    };
    fields.finish();
    let frame = match frame {
        Some(frame) => Some(frame?),
        None => None,
    };
    let place = item.place().clone();
    Some(Case {
        name: name?,
        says,
        level: level?,
        force: force?,
        moment: moment?,
        at: at?,
        frame,
        place,
    })
}

/// The vector as told, and the other one, left out: zero, standing where the first stands.
fn fill(told: Option<Triple>, dim: Dim) -> (Option<Triple>, Option<Triple>) {
    let other = told.as_ref().map(|told| Triple {
        parts: [dim; 3].map(zero),
        place: told.place.clone(),
    });
    (told, other)
}

fn pick_level(fields: &mut Fields<'_>, usual: &Usual) -> Option<Told<Level>> {
    match fields
        .take("level")
        .map(read_level)
        .or_else(|| usual.level.clone())
    {
        Some(level) => level,
        None if usual.missed_level.replace(true) => None,
        None => fields.lacks(
            "missing-level",
            &["level"],
            "the case has no `level`, and none is told for all cases",
            Some("write `level: service`, `factored`, `limit` or `ultimate`"),
        ),
    }
}

/// The point of application: told here; else the usual one, in the joint frame; else the origin
/// for a case of moments alone, which act anywhere alike.
fn pick_point(
    fields: &mut Fields<'_>,
    usual: &Usual,
    has_force: bool,
    has_frame: bool,
    set: UnitSet,
) -> Option<Triple> {
    if let Some(item) = fields.take("at") {
        return read_triple(item, Dim::LENGTH, set);
    }
    if !has_frame && let Some(at) = &usual.at {
        return at.clone();
    }
    if !has_force {
        return Some(Triple {
            parts: [Dim::LENGTH; 3].map(zero),
            place: fields.place().clone(),
        });
    }
    if usual.missed_point.replace(true) {
        return None;
    }
    if has_frame {
        return fields.lacks(
            "missing-point",
            &["at"],
            "a case in a frame of its own needs its own `at`",
            Some(
                "write `at: [x, y, z]` in that frame; the `at` of all cases is in the joint frame",
            ),
        );
    }
    fields.lacks(
        "missing-point",
        &["at"],
        "the force has no point of application",
        Some("write `at: [x, y, z]` in the case, or beside `cases` for all"),
    )
}

fn pick_frame(item: Item<'_>, usual: &Usual) -> Option<LoadFrame> {
    let name = item.line()?;
    if let Some(frame) = usual
        .frames
        .iter()
        .find(|frame| frame.name.value == name.value)
    {
        return Some(frame.clone());
    }
    let known: Vec<&str> = usual.names.iter().map(|name| name.value.as_str()).collect();
    if usual.misspelt_frames || known.contains(&name.value.as_str()) {
        return None;
    }
    item.faults
        .refuse(unknown_name("unknown-frame", "frame", &name, &known))
}

fn read_frame(name: &Told<String>, item: Item<'_>, set: UnitSet) -> Option<LoadFrame> {
    let mut fields = item.keyed(&keys::LOAD_FRAME)?;
    let origin = fields.required("origin", |item| read_triple(item, Dim::LENGTH, set));
    let axes = ["x", "y", "z"]
        .map(|axis| fields.required(axis, |item| read_full_triple(item, Dim::NONE, set)));
    fields.finish();
    let [x, y, z] = axes;
    let axes = [x?, y?, z?];
    match frame_fault(name, &axes) {
        Some(fault) => item.faults.refuse(fault),
        None => Some(LoadFrame {
            name: name.clone(),
            origin: origin?,
            axes,
        }),
    }
}

/// What keeps three axes from being a right-handed frame of unit vectors.
fn frame_fault(name: &Told<String>, axes: &[Triple; 3]) -> Option<Diagnostic> {
    let values = [0, 1, 2].map(|axis: usize| axes[axis].values());
    let letters = ["x", "y", "z"];
    for ((axis, value), letter) in axes.iter().zip(values).zip(letters) {
        let length = real::sqrt(dot(value, value));
        if (length - 1.0).abs() > ORTHONORMAL {
            let message = format!(
                "axis `{letter}` of `{}` has length {length:.6}, but must have 1",
                name.value
            );
            return Some(
                Diagnostic::error("not-orthonormal", message, &axis.place)
                    .help("divide each component by the length, to six decimals or more"),
            );
        }
    }
    for (first, second) in [(0, 1), (1, 2), (0, 2)] {
        let cosine = dot(values[first], values[second]);
        if cosine.abs() > ORTHONORMAL {
            let (a, b) = (letters[first], letters[second]);
            let message = format!(
                "axes `{a}` and `{b}` of `{}` are not square: their product is {cosine:.6}",
                name.value
            );
            return Some(Diagnostic::error(
                "not-orthonormal",
                message,
                &axes[second].place,
            ));
        }
    }
    let [x, y, z] = values;
    let cross = [
        x[1] * y[2] - x[2] * y[1],
        x[2] * y[0] - x[0] * y[2],
        x[0] * y[1] - x[1] * y[0],
    ];
    if dot(cross, z) > 0.0 {
        return None;
    }
    let message = format!("the axes of `{}` are left-handed", name.value);
    Some(
        Diagnostic::error("not-orthonormal", message, &axes[2].place)
            .help("turn the `z` axis round"),
    )
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
