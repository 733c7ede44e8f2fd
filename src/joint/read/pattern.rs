//! A pattern by its trade name, laid out as runs.
//!
//! The pattern's own axes are those of [`Shape`]. A point is mirrored, then turned about the
//! pattern's own origin, then moved to `at`; a toe told in the pattern is mirrored and turned with
//! it. A toe told for all runs of the weld is in the joint frame and stays.

use super::Context;
use super::size::read_toe;
use super::value::{read_not_negative, read_positive, read_quantity, read_triple, zero};
use super::weld::{Laid, Shared, Usual, pick_ends, pick_joins, pick_size};
use crate::joint::{GivenAt, PathSpec, PatternSpec, RunSpec, Shape, ToeSpec, Triple, keys};
use crate::quantity::{Dim, Given, real};
use crate::source::{Diagnostic, FaultBag, Fields, Item, Place, Told};

/// Significant decimals to which laid-out points are computed, counted from the largest
/// coordinate: the noise of a turn by 30° stays out of the digits, at 1e-12 of the size.
const DIGITS: i32 = 12;

const SHAPES: [(&str, Shape); 9] = [
    ("single line", Shape::SingleLine),
    ("two parallel lines", Shape::TwoParallelLines),
    ("angle", Shape::Angle),
    ("channel", Shape::Channel),
    ("tee", Shape::Tee),
    ("I outline", Shape::IOutline),
    ("cruciform", Shape::Cruciform),
    ("box", Shape::Box),
    ("circle", Shape::Circle),
];

/// Reads `pattern` and lays it out.
pub(super) fn read_pattern(
    item: Item<'_>,
    usual: &Usual,
    context: Context<'_>,
) -> Option<(PatternSpec, Vec<RunSpec>)> {
    let set = context.set;
    let mut fields = item.keyed(&keys::PATTERN)?;
    let shape = fields.required("shape", |item| item.word(&SHAPES));
    let lengths = ["width", "depth", "radius"].map(|key| {
        (
            key,
            fields.take(key),
            fields.optional(key, |item| read_positive(item, Dim::LENGTH, set)),
        )
    });
    let at = match fields.take("at") {
        Some(item) => read_triple(item, Dim::LENGTH, set),
        None => Some(Triple {
            parts: [Dim::LENGTH; 3].map(zero),
            place: item.place().clone(),
        }),
    };
    let turned = fields.optional("turned", |item| read_quantity(item, Dim::ANGLE, set));
    let mirrored = fields.optional("mirrored", Item::flag).unwrap_or(false);
    let doubled = fields.optional("doubled", |item| Some((item, item.flag()?)));
    let toe = fields.optional("toe", |item| read_toe(item, set));
    let size = pick_size(&mut fields, usual, set);
    let gap = fields.optional("gap", |item| read_not_negative(item, Dim::LENGTH, set));
    let joins = pick_joins(&mut fields, usual, context);
    let ends = pick_ends(&mut fields, usual);
    if let Some(shape) = &shape {
        check_lengths(shape, &lengths, &fields);
        check_doubled(shape, doubled, item.faults);
    }
    fields.finish();
    let [width, depth, radius] = lengths.map(|(_, _, given)| given);
    let pattern = PatternSpec {
        shape: shape?,
        width,
        depth,
        radius,
        at: at?,
        turned,
        mirrored,
        doubled: doubled.is_some_and(|(_, doubled)| doubled),
        place: item.place().clone(),
    };
    let placing = Placing::of(&pattern)?;
    let shared = Shared {
        size: size?,
        joins: joins?,
        ends,
        gap: gap.or_else(|| usual.gap.clone()),
        toe: toe
            .map(|told| told.map(|toe| placing.toe(toe)))
            .or_else(|| usual.toe.clone()),
        place: item.place().clone(),
    };
    let runs = lay_out(&pattern, &placing)?
        .into_iter()
        .map(|laid| shared.run(laid, usual))
        .collect();
    Some((pattern, runs))
}

/// Which of width, depth and radius a shape takes.
fn needs(shape: Shape) -> [bool; 3] {
    match shape {
        Shape::SingleLine => [false, true, false],
        Shape::Circle => [false, false, true],
        Shape::TwoParallelLines
        | Shape::Angle
        | Shape::Channel
        | Shape::Tee
        | Shape::IOutline
        | Shape::Cruciform
        | Shape::Box => [true, true, false],
    }
}

type Length<'a> = (&'static str, Option<Item<'a>>, Option<GivenAt>);

fn word(shape: Shape) -> &'static str {
    SHAPES
        .iter()
        .find(|(_, known)| *known == shape)
        .map_or("", |(word, _)| word)
}

/// Leaves a fault for each length that the shape needs and lacks, or has and does not take.
fn check_lengths(shape: &Told<Shape>, lengths: &[Length<'_>; 3], fields: &Fields<'_>) {
    let (word, faults) = (word(shape.value), fields.faults());
    for ((key, item, _), needed) in lengths.iter().zip(needs(shape.value)) {
        match item {
            None if needed && !fields.misspells(&[key]) => {
                let message = format!("the pattern `{word}` needs `{key}`");
                faults.push(Diagnostic::error("missing-key", message, &shape.place));
            }
            Some(item) if !needed => {
                let message = format!("the pattern `{word}` takes no `{key}`");
                faults.push(Diagnostic::error("not-taken", message, item.place()));
            }
            _ => {}
        }
    }
}

/// The runs of a shape that `doubled` welds on both sides of their plate.
fn doubles(shape: Shape, run: &str) -> bool {
    match shape {
        Shape::SingleLine | Shape::TwoParallelLines | Shape::Cruciform => true,
        Shape::Tee => run == "stem",
        Shape::IOutline => run == "web",
        Shape::Angle | Shape::Channel | Shape::Box | Shape::Circle => false,
    }
}

/// Leaves a fault if the pattern is to be doubled and its shape has nothing to double.
fn check_doubled(shape: &Told<Shape>, doubled: Option<(Item<'_>, bool)>, faults: &FaultBag) {
    let Some((item, true)) = doubled else { return };
    if ["stem", "web"].iter().any(|run| doubles(shape.value, run)) {
        return;
    }
    let message = format!(
        "the pattern `{}` has no stem or web to double",
        word(shape.value)
    );
    let help = "`tee` doubles its stem, `I outline` its web, lines and `cruciform` all; runs take `sides: both`";
    faults.push(Diagnostic::error("not-taken", message, item.place()).help(help));
}

/// How a pattern's own points come into the joint frame.
struct Placing {
    cos: f64,
    sin: f64,
    mirrored: bool,
    at: Triple,
    /// Decimals to which points are computed.
    decimals: usize,
    place: Place,
}

impl Placing {
    fn of(pattern: &PatternSpec) -> Option<Self> {
        let (cos, sin) = pattern
            .turned
            .as_ref()
            .map_or((1.0, 0.0), |angle| turn(&angle.value));
        let lengths = [&pattern.width, &pattern.depth, &pattern.radius];
        let size = lengths.into_iter().flatten().map(|given| given.value.value);
        let size = size
            .chain(pattern.at.values())
            .fold(0.0_f64, |size, value| size.max(value.abs()));
        let (mut decimals, mut reach) = (DIGITS, 1.0);
        while reach < size && decimals > 0 {
            reach *= 10.0;
            decimals -= 1;
        }
        while size > 0.0 && reach > size * 10.0 && decimals < 30 {
            reach /= 10.0;
            decimals += 1;
        }
        Some(Self {
            cos,
            sin,
            mirrored: pattern.mirrored,
            at: pattern.at.clone(),
            decimals: usize::try_from(decimals).ok()?,
            place: pattern.place.clone(),
        })
    }

    /// A vector of the pattern, mirrored and turned.
    fn vector(&self, x: f64, y: f64) -> [f64; 2] {
        let x = if self.mirrored { -x } else { x };
        [x * self.cos - y * self.sin, x * self.sin + y * self.cos]
    }

    /// A point of the pattern in the joint frame.
    fn point(&self, x: f64, y: f64) -> Triple {
        let [dx, dy] = self.vector(x, y);
        let [ax, ay, _] = self.at.values();
        let [_, _, z] = self.at.parts.clone();
        let z = Given::stated(&shortest(z.value), z.value, Dim::LENGTH);
        Triple {
            parts: [self.coordinate(ax + dx), self.coordinate(ay + dy), z],
            place: self.place.clone(),
        }
    }

    /// A computed coordinate: rounded, with the shortest text that reads back as its value.
    fn coordinate(&self, value: f64) -> Given {
        let rounded = format!("{value:.*}", self.decimals)
            .parse()
            .unwrap_or(value);
        Given::stated(&shortest(rounded), rounded + 0.0, Dim::LENGTH)
    }

    fn toe(&self, toe: ToeSpec) -> ToeSpec {
        match toe {
            ToeSpec::Toward([x, y, z]) => {
                let [x, y] = self.vector(x, y);
                ToeSpec::Toward([x, y, z])
            }
            ToeSpec::Outside | ToeSpec::Inside => toe,
        }
    }
}

/// The shortest decimal text that reads back as the value; no sign on zero.
fn shortest(value: f64) -> String {
    format!("{}", value + 0.0)
}

/// Cosine and sine of a turn, exact for whole quarter turns in degrees.
fn turn(angle: &Given) -> (f64, f64) {
    let quarters = angle.typed / 90.0;
    let in_degrees = angle
        .unit
        .as_deref()
        .is_some_and(|unit| matches!(unit, "deg" | "°"));
    if !in_degrees || quarters.fract() != 0.0 {
        return (real::cos(angle.value), real::sin(angle.value));
    }
    let whole = quarters.rem_euclid(4.0);
    if whole < 0.5 {
        (1.0, 0.0)
    } else if whole < 1.5 {
        (0.0, 1.0)
    } else if whole < 2.5 {
        (-1.0, 0.0)
    } else {
        (0.0, -1.0)
    }
}

/// The runs of a shape in the order a welder would go round, each in its own axes.
fn lay_out(pattern: &PatternSpec, placing: &Placing) -> Option<Vec<Laid>> {
    if pattern.shape.value == Shape::Circle {
        let path = PathSpec::Circle {
            centre: placing.point(0.0, 0.0),
            radius: pattern.radius.clone()?,
        };
        return Some(vec![Laid {
            name: "circle",
            path,
            doubled: false,
        }]);
    }
    let b = pattern
        .width
        .as_ref()
        .map_or(0.0, |given| given.value.value);
    let d = pattern.depth.as_ref()?.value.value;
    let lines: Vec<(&'static str, [f64; 2], [f64; 2])> = match pattern.shape.value {
        Shape::Circle => Vec::new(),
        Shape::SingleLine => vec![("line", [0.0, 0.0], [0.0, d])],
        Shape::TwoParallelLines => vec![
            ("left line", [0.0, 0.0], [0.0, d]),
            ("right line", [b, 0.0], [b, d]),
        ],
        Shape::Angle => vec![
            ("left edge", [0.0, d], [0.0, 0.0]),
            ("lower edge", [0.0, 0.0], [b, 0.0]),
        ],
        Shape::Channel => vec![
            ("flange, lower", [b, 0.0], [0.0, 0.0]),
            ("web", [0.0, 0.0], [0.0, d]),
            ("flange, upper", [0.0, d], [b, d]),
        ],
        Shape::Tee => vec![
            ("flange", [0.0, d], [b, d]),
            ("stem", [b / 2.0, 0.0], [b / 2.0, d]),
        ],
        Shape::IOutline => vec![
            ("flange, lower", [0.0, 0.0], [b, 0.0]),
            ("web", [b / 2.0, 0.0], [b / 2.0, d]),
            ("flange, upper", [0.0, d], [b, d]),
        ],
        Shape::Cruciform => vec![
            ("line across", [-b / 2.0, 0.0], [b / 2.0, 0.0]),
            ("line along", [0.0, -d / 2.0], [0.0, d / 2.0]),
        ],
        Shape::Box => vec![
            ("lower edge", [0.0, 0.0], [b, 0.0]),
            ("right edge", [b, 0.0], [b, d]),
            ("upper edge", [b, d], [0.0, d]),
            ("left edge", [0.0, d], [0.0, 0.0]),
        ],
    };
    let laid = lines.into_iter().map(|(name, [x0, y0], [x1, y1])| Laid {
        name,
        path: PathSpec::Straight([placing.point(x0, y0), placing.point(x1, y1)]),
        doubled: pattern.doubled && doubles(pattern.shape.value, name),
    });
    Some(laid.collect())
}
