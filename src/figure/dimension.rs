//! Dimension lines with their extension lines, oblique ticks and text.

use super::canvas::{Canvas, Keep, Layer};
use super::drawing::{Item, P2, Path, Stroke};
use super::place::{Candidate, MANY, around, dearer, rank, reading_angle};
use super::rect::{Bounds, Rect, square};
use super::scene::{Axis, Dimension};
use super::shape::{break_mark, tick};
use super::text::symbol_spans;
use super::view::{View, unit};

/// From what is drawn to the first dimension line, and from line to line (mm).
const STEP: f64 = 6.5;
/// From a load in space to its first dimension line: room for the values at its arrows (mm).
const LOAD_STEP: f64 = 18.0;
/// Free to either side of a dimension line (mm).
const BAND: f64 = 3.2;
/// Gap between the point and its extension line (mm).
const GAP: f64 = 1.6;
/// From the point on, what stands at the point itself is not crossed (mm).
const OFF: f64 = 2.5;
/// Cost of a way that would crowd the drawing with a dimension that may be left out.
const CROWDED: f64 = 70.0;
/// Cost of a line that stays over what is drawn, however far it is carried.
const THROUGH: f64 = 20.0;
/// Cost of an end that stands where nothing is drawn.
const GHOST: f64 = 25.0;
/// Cost of an extension line that crosses something.
const CROSSING: f64 = 14.0;
/// Cost of what stands between the points and the line, at each of three places.
const BETWEEN: f64 = 5.0;
/// How far an extension line passes the dimension line (mm).
const PAST: f64 = 1.2;

/// A dimension with its ends as drawn, one pair of those that show it alike.
pub(super) struct Placed {
    /// The axis along which it is measured.
    pub(super) axis: Axis,
    /// Ends on the sheet, in space brought onto one line along the axis.
    pub(super) ends: [P2; 2],
    /// Ends on the sheet as they are.
    pub(super) told: [P2; 2],
    /// The one other axis along which the ends differ: lines that lead along it start at both.
    pub(super) apart: Option<Axis>,
    /// Whether an end is a load point: such dimensions stand on the other side.
    pub(super) to_load: bool,
    /// Bounds of the runs.
    pub(super) group: Bounds,
    /// Whether it is not to scale.
    pub(super) broken: bool,
    /// Where the second end came from, if it was brought in line with the first.
    pub(super) from_end: Option<P2>,
}

impl Placed {
    /// Whether its line would lead past a load that is drawn nearer, and so show it elsewhere.
    pub(super) fn astray(&self) -> bool {
        self.broken && self.from_end.is_some()
    }
}

/// A way of setting the dimension line off.
#[derive(Clone, Copy)]
struct Way {
    out: P2,
    ends: [P2; 2],
    feet: [P2; 2],
    /// Whether its lines start at the ends as they are.
    direct: bool,
    cost: f64,
}

/// Draws a dimension outside all that stands beside it, between the ends that leave it the best way;
/// the number of that pair, `None` if it is left out.
pub(super) fn draw_dimension(
    canvas: &mut Canvas<'_>,
    view: &View,
    dimension: &Dimension,
    placed: &[Placed],
) -> Option<usize> {
    let rated = placed.iter().enumerate().flat_map(|(pair, placed)| {
        let ways = ways(canvas, view, placed);
        ways.into_iter().map(move |way| (pair, way))
    });
    let Some((pair, way)) = rated.min_by(|a, b| a.1.cost.total_cmp(&b.1.cost)) else {
        canvas.remarks.push(format!(
            "the dimension {} lies along the line of sight",
            dimension.text
        ));
        return None;
    };
    let placed = &placed[pair];
    let d = view.direction(dimension.axis);
    let crowded = way.cost > CROWDED || placed.broken || canvas.runs > MANY;
    if dimension.optional && crowded {
        return None;
    }
    if let Some(from) = placed.from_end.filter(|_| !way.direct) {
        canvas.aid(placed.ends[1], from, Stroke::black(0.3));
        canvas
            .extensions
            .push(Rect::line(placed.ends[1], from, 0.1));
    }
    let [a, b] = way.feet;
    for (foot, end) in [(a, way.ends[0]), (b, way.ends[1])] {
        if (foot - end).dot(&way.out) > GAP {
            let points = [end + way.out * GAP, foot + way.out * PAST];
            let line = Item::Path(Path::through(&points, Stroke::black(0.3)));
            canvas.draw_kept(Layer::Aid, line, Keep::Off);
            let off = end + way.out * OFF.min((foot - end).norm());
            canvas.extensions.push(Rect::line(off, foot, 0.1));
        }
    }
    canvas.line(a, b, Stroke::black(0.4));
    canvas.mark([tick(a, unit(d)), tick(b, unit(d))]);
    if placed.broken {
        canvas.mark(break_mark(a + (b - a) * 0.78, unit(b - a)));
    }
    want_text(canvas, dimension, view.flat, [a, b], way.out);
    Some(pair)
}

/// The ways that the view offers: along another axis, to either side; none for a dimension along
/// the line of sight.
fn ways(canvas: &Canvas<'_>, view: &View, placed: &Placed) -> Vec<Way> {
    let axis = placed.axis;
    if view.direction(axis).norm() < 1e-9 {
        return Vec::new();
    }
    let others = Axis::ALL
        .into_iter()
        .filter(|o| *o != axis && view.direction(*o).norm() > 1e-9);
    let outs = others.flat_map(|other| {
        let direct = placed.apart == Some(other);
        [1.0, -1.0].map(|sign| (unit(view.direction(other) * sign), direct))
    });
    outs.map(|(out, direct)| way(canvas, view, placed, out, direct))
        .collect()
}

/// Carries the line outward along `out` until it is clear, and rates the way: short, crossing
/// little, on the wished side, away from the group.
fn way(canvas: &Canvas<'_>, view: &View, placed: &Placed, out: P2, direct: bool) -> Way {
    let d = unit(view.direction(placed.axis));
    let normal = if square(d).dot(&out) > 0.0 {
        square(d)
    } else {
        -square(d)
    };
    let ends = if direct { placed.told } else { placed.ends };
    let furthest = ends[0].dot(&normal).max(ends[1].dot(&normal));
    let border = placed.group.span(&normal)[1];
    let base = if view.flat {
        furthest.max(border)
    } else {
        furthest
    };
    let at_level =
        |level: f64| ends.map(|p| p + out * ((level - p.dot(&normal)) / out.dot(&normal)));
    let clear =
        |feet: &[P2; 2]| canvas.is_clear(&Rect::line(feet[0], feet[1], BAND).lengthened(1.0));
    let beside_load = match placed.to_load && !view.flat {
        true => ends[1].dot(&normal) + LOAD_STEP,
        false => f64::NEG_INFINITY,
    };
    let first = beside_load.max(base + STEP);
    let levels = (0..80).map(|i| first + 0.5 * f64::from(i));
    let found = levels.map(at_level).find(clear);
    let through = found.is_none();
    let feet = found.unwrap_or_else(|| at_level(first));
    let crossings = feet.iter().zip(&ends).filter(|(foot, end)| {
        let line = Rect::line(*end + out * OFF, **foot, 0.1);
        (*foot - *end).dot(&out) > OFF && !canvas.is_clear(&line)
    });
    // What stands between the points and the line leaves less room for its labels.
    let between = [0.35, 0.65, 0.95].into_iter().filter(|part| {
        let [a, b] = [0, 1].map(|end: usize| ends[end] + (feet[end] - ends[end]) * *part);
        !view.flat && !canvas.is_clear(&Rect::line(a, b, 0.5))
    });
    let middle = (ends[0] + ends[1]) / 2.0;
    let inward = !view.flat && out.dot(&(middle - placed.group.centre())) < 0.0;
    let against = out.dot(&wish(d, placed.to_load)) < 0.0;
    let reach = (feet[0] - ends[0]).norm().max((feet[1] - ends[1]).norm());
    let cost = reach
        + CROSSING * f64::from(u8::try_from(crossings.count()).unwrap_or(u8::MAX))
        + BETWEEN * f64::from(u8::try_from(between.count()).unwrap_or(u8::MAX))
        + if through { THROUGH } else { 0.0 }
        + if placed.from_end.is_some() && !direct {
            GHOST
        } else {
            0.0
        }
        + if inward { 12.0 } else { 0.0 }
        + if against {
            if view.flat { 60.0 } else { 6.0 }
        } else {
            0.0
        };
    Way {
        out,
        ends,
        feet,
        direct,
        cost,
    }
}

/// The side where the line is looked for: below and to the left; above and to the right for
/// dimensions that lead to a load.
fn wish(d: P2, to_load: bool) -> P2 {
    let own = if d.x.abs() > 0.5 {
        P2::new(-0.1, 1.0)
    } else {
        P2::new(-1.0, 0.1)
    };
    if to_load { -own } else { own }
}

fn want_text(canvas: &mut Canvas<'_>, dimension: &Dimension, flat: bool, [a, b]: [P2; 2], out: P2) {
    let words = canvas.words(symbol_spans(&dimension.text));
    let d = unit(b - a);
    let angle = reading_angle(d);
    let (along, up) = super::drawing::Label::directions(angle);
    let size = words.size();
    let lift = 0.7 + size[1] / 2.0;
    // Over the line; in space on the side away from what is measured.
    let over = if flat || up.dot(&out) > 0.0 { up } else { -up };
    let mut places = Vec::new();
    for (part, cost) in [(0.5, 0.0), (0.4, 1.0), (0.6, 1.0), (0.3, 2.0), (0.7, 2.0)] {
        let on = a + (b - a) * part;
        for (side, more) in [(1.0, 0.0), (-1.0, 3.0)] {
            places.push(Candidate {
                centre: on + over * (side * lift),
                angle,
                cost: cost + more,
            });
        }
    }
    // A span too short for its text: beside either end, on the line's own prolongation.
    let length = (b - a).norm();
    let beyond = length / 2.0 + 1.8 + size[0] / 2.0;
    let middle = (a + b) / 2.0;
    for (side, cost) in [(1.0, 6.0), (-1.0, 6.5)] {
        places.push(Candidate {
            centre: middle + along * (side * beyond),
            angle,
            cost,
        });
    }
    if size[0] + 1.6 > length {
        places.drain(..10);
    }
    places.extend(dearer(around(middle, 2.0, size, out), 9.0));
    canvas.want(rank::DIMENSION, words, middle, places);
}
