//! The weld group: what holds for all runs, the runs, and the pattern.

use super::path::read_path;
use super::value::{read_not_negative, read_positive, read_quantity, refuse_range};
use super::{Context, check_distinct, pattern, size, unknown_name};
use crate::joint::{EndSpec, GivenAt, RunSpec, SizeSpec, Stitch, ToeSpec, Triple, WeldSpec, keys};
use crate::quantity::{Dim, Given, UnitSet};
use crate::source::{Fields, Item, Place, Told, Value};
use std::cell::Cell;

/// What the keys beside `runs` say for every run that does not say otherwise.
///
/// Where a key may be missing, the outer `None` says so and the inner one marks a fault.
pub(super) struct Usual {
    pub(super) joins: Option<Option<[Told<String>; 2]>>,
    pub(super) ends: [Option<Told<EndSpec>>; 2],
    pub(super) size: Option<Option<SizeSpec>>,
    pub(super) toe: Option<Told<ToeSpec>>,
    pub(super) normal: Option<Triple>,
    pub(super) gap: Option<GivenAt>,
    pub(super) between: Option<GivenAt>,
    /// Whether a run has been told to lack `joins`: once for all runs is enough.
    missed_joins: Cell<bool>,
}

/// Reads `weld`.
pub(super) fn read_weld(item: Item<'_>, context: Context<'_>) -> Option<WeldSpec> {
    let mut fields = item.keyed(&keys::WELD)?;
    let usual = Usual {
        joins: fields.usual("joins", |item| read_joins(item, context)),
        ends: read_ends(&mut fields),
        size: size::read_size(&mut fields, context.set)
            .or_else(|| fields.misspells(&size::KEYS).then_some(None)),
        toe: fields.optional("toe", |item| size::read_toe(item, context.set)),
        normal: fields.optional("normal", |item| size::read_direction(item, context.set)),
        gap: fields.optional("gap", |item| {
            read_not_negative(item, Dim::LENGTH, context.set)
        }),
        between: fields.optional("between", |item| read_between(item, context.set)),
        missed_joins: Cell::default(),
    };
    let runs_item = fields.take("runs");
    let pattern_item = fields.take("pattern");
    if runs_item.is_none() && pattern_item.is_none() {
        fields.lacks::<()>(
            "missing-key",
            &["runs", "pattern"],
            "`weld` needs `runs` or `pattern`",
            Some("list the runs, or name a pattern by its shape"),
        );
        fields.finish();
        return None;
    }
    fields.finish();
    let runs = runs_item.map_or(Some(Vec::new()), |item| {
        item.list(|run| read_run(run, &usual, context))
    });
    let laid = pattern_item.map(|item| pattern::read_pattern(item, &usual, context));
    let (pattern, laid) = match laid {
        Some(laid) => laid.map(|(pattern, runs)| (Some(pattern), runs))?,
        None => (None, Vec::new()),
    };
    let mut runs: Vec<RunSpec> = runs?.into_iter().chain(laid).collect();
    if runs.is_empty() {
        return item.refuse("empty-list", "`runs` holds no run");
    }
    check_distinct(runs.iter().map(|run| &run.name), "runs", item.faults);
    runs.sort_by_key(|run| run.place.start);
    Some(WeldSpec { runs, pattern })
}

fn read_run(item: Item<'_>, usual: &Usual, context: Context<'_>) -> Option<RunSpec> {
    let set = context.set;
    let mut fields = item.keyed(&keys::RUN)?;
    let name = fields.required("name", Item::line);
    let path = read_path(&mut fields, set);
    let size = pick_size(&mut fields, usual, set);
    let between = fields.optional("between", |item| read_between(item, set));
    let gap = fields.optional("gap", |item| read_not_negative(item, Dim::LENGTH, set));
    let penetration = fields.optional("penetration", |item| read_penetration(item, set));
    let toe = fields.optional("toe", |item| size::read_toe(item, set));
    let both_sides = fields.optional("sides", |item| read_sides(item, set));
    let stitch = fields.optional("stitch", |item| read_stitch(item, set));
    let normal = fields.optional("normal", |item| size::read_direction(item, set));
    let joins = pick_joins(&mut fields, usual, context);
    let ends = pick_ends(&mut fields, usual);
    fields.finish();
    Some(RunSpec {
        name: name?,
        path: path?,
        size: size?,
        between: between.or_else(|| usual.between.clone()),
        gap: gap.or_else(|| usual.gap.clone()),
        penetration,
        toe: toe.or_else(|| usual.toe.clone()),
        both_sides,
        stitch,
        normal: normal.or_else(|| usual.normal.clone()),
        joins: joins?,
        ends,
        place: item.place().clone(),
    })
}

/// The size told here, or the usual one.
pub(super) fn pick_size(fields: &mut Fields<'_>, usual: &Usual, set: UnitSet) -> Option<SizeSpec> {
    match size::read_size(fields, set).or_else(|| usual.size.clone()) {
        Some(size) => size,
        None => super::path::refuse_choice(fields, "which-size", "size", &[], &size::KEYS),
    }
}

/// The parts joined as told here, or the usual ones.
pub(super) fn pick_joins(
    fields: &mut Fields<'_>,
    usual: &Usual,
    context: Context<'_>,
) -> Option<[Told<String>; 2]> {
    match fields
        .take("joins")
        .map(|item| read_joins(item, context))
        .or_else(|| usual.joins.clone())
    {
        Some(joins) => joins,
        None if usual.missed_joins.replace(true) => None,
        None => fields.lacks(
            "missing-key",
            &["joins"],
            "`joins` is told neither here nor for all runs",
            Some("write `joins: [attached part, base part]`"),
        ),
    }
}

/// What the ends do as told here, or as usual.
pub(super) fn pick_ends(fields: &mut Fields<'_>, usual: &Usual) -> [Option<Told<EndSpec>>; 2] {
    let told = fields.has("ends");
    let ends = read_ends(fields);
    if told { ends } else { usual.ends.clone() }
}

fn read_ends(fields: &mut Fields<'_>) -> [Option<Told<EndSpec>>; 2] {
    fields
        .optional("ends", size::read_ends)
        .map_or([None, None], |ends| ends.map(Some))
}

fn read_joins(item: Item<'_>, context: Context<'_>) -> Option<[Told<String>; 2]> {
    let names = item.list(|name| {
        let name = name.line()?;
        if context.misspelt_parts || context.parts.contains(&name.value.as_str()) {
            return Some(name);
        }
        item.faults
            .refuse(unknown_name("unknown-part", "part", &name, context.parts))
    })?;
    let count = names.len();
    names.try_into().ok().or_else(|| {
        let message = format!("`joins` names two parts, but has {count}");
        item.refuse_with(
            "wrong-count",
            message,
            "write `joins: [attached part, base part]`",
        )
    })
}

/// Reads the angle between the faces: above 0, under 180°.
fn read_between(item: Item<'_>, set: UnitSet) -> Option<GivenAt> {
    let given = read_quantity(item, Dim::ANGLE, set)?;
    if given.value.value > 0.0 && given.value.value < std::f64::consts::PI {
        return Some(given);
    }
    let limit = if given.value.unit.as_deref() == Some("rad") {
        "between 0 and pi"
    } else {
        "between 0 and 180"
    };
    refuse_range(item, &given.value, set, &[limit])
}

fn read_penetration(item: Item<'_>, set: UnitSet) -> Option<(GivenAt, Told<String>)> {
    let mut fields = item.keyed(&keys::PENETRATION)?;
    let extra = fields.required("extra", |item| read_positive(item, Dim::LENGTH, set));
    let record = fields.required("record", Item::line);
    fields.finish();
    Some((extra?, record?))
}

/// Reads `sides`: `both`, or a map with how far apart the beads lie.
fn read_sides(item: Item<'_>, set: UnitSet) -> Option<Told<Option<Given>>> {
    if !matches!(item.node.value, Value::Map(_)) {
        return item.word(&[("both", ())]).map(|told| told.map(|()| None));
    }
    let mut fields = item.keyed(&keys::SIDES)?;
    let apart = fields.required("both apart by", |item| {
        read_positive(item, Dim::LENGTH, set)
    });
    fields.finish();
    Some(apart?.map(Some))
}

fn read_stitch(item: Item<'_>, set: UnitSet) -> Option<Stitch> {
    let mut fields = item.keyed(&keys::STITCH)?;
    let bead = fields.required("bead", |item| read_positive(item, Dim::LENGTH, set));
    let pitch = fields.required("pitch", |item| read_positive(item, Dim::LENGTH, set));
    fields.finish();
    Some(Stitch {
        bead: bead?,
        pitch: pitch?,
    })
}

/// A path, a name and a toe laid out by a pattern, to be made a run.
pub(super) struct Laid {
    pub(super) name: &'static str,
    pub(super) path: crate::joint::PathSpec,
    pub(super) doubled: bool,
}

/// What all runs of a pattern share.
pub(super) struct Shared {
    pub(super) size: SizeSpec,
    pub(super) joins: [Told<String>; 2],
    pub(super) ends: [Option<Told<EndSpec>>; 2],
    pub(super) gap: Option<GivenAt>,
    pub(super) toe: Option<Told<ToeSpec>>,
    pub(super) place: Place,
}

impl Shared {
    /// The run of a path laid out; what a pattern cannot say is as usual.
    pub(super) fn run(&self, laid: Laid, usual: &Usual) -> RunSpec {
        let told = |place: &Place| Told {
            value: None,
            place: place.clone(),
        };
        RunSpec {
            name: Told {
                value: laid.name.to_owned(),
                place: self.place.clone(),
            },
            path: laid.path,
            size: self.size.clone(),
            between: usual.between.clone(),
            gap: self.gap.clone(),
            penetration: None,
            toe: self.toe.clone(),
            both_sides: laid.doubled.then(|| told(&self.place)),
            stitch: None,
            normal: usual.normal.clone(),
            joins: self.joins.clone(),
            ends: self.ends.clone(),
            place: self.place.clone(),
        }
    }
}
