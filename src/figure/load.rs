//! Loads: their points, arrows and turning arrows, and the lead from the centroid.

use super::canvas::{Canvas, Keep, Layer, strokes};
use super::drawing::{Fill, Item, MarkKind, P2, Path, Span, Stroke, Style};
use super::place::{Candidate, around, beside, dearer, rank};
use super::rect::{Bounds, Rect, square};
use super::scene::{Axis, Component, Load};
use super::shape::{HEADS, break_mark, circle, end_on, open_head, turning_arrow};
use super::text::symbol_spans;
use super::view::{View, unit};
use crate::quantity::real::{atan2, cos, sin, sqrt};

/// Length of an arrow (mm).
const ARROW: f64 = 13.0;
/// Where an arrow starts, from the middle of the point's mark (mm).
const START: f64 = 2.8;
/// Between a force's head and the moment's arrow that follows on the same line (mm).
const GAP: f64 = 2.0;
/// How much further out an arrow is tried, and how far aside, where it would lie on a run (mm).
const FURTHER: [f64; 4] = [0.0, 4.0, 8.0, 12.0];
const ASIDE: [f64; 3] = [0.0, 2.2, -2.2];
/// What it costs an arrow to cross a run, to lie along one, to touch a mark; to stand behind its
/// point; and for each mm aside.
const CROSSING: f64 = 12.0;
const ALONG: f64 = 60.0;
const TOUCHING: f64 = 6.0;
const BEHIND: f64 = 5.0;
const ASIDE_COST: f64 = 5.0;
/// Least radius of a turning arrow (mm).
const TURN: f64 = 6.5;
/// Radius of a load point's mark, and of a force end on (mm).
const POINT: f64 = 1.3;
const END_ON: f64 = 1.7;
/// Sweeps of a turning arrow, in degrees, and their radii (mm): where other lines leave no opening for
/// the first, the next.
const SWEEPS: [(f64, f64); 3] = [(200.0, TURN), (120.0, TURN), (60.0, 9.0)];
/// A load point nearer than this to the centroid shares its mark and letters (mm).
pub(super) const AT_CENTROID: f64 = 1.0;
/// How far outside the group a load point is drawn whose lead is broken (mm).
const NEARER: f64 = 26.0;

/// Where a load point is drawn.
#[derive(Clone, Copy, Debug)]
pub(super) struct Spot {
    /// On the sheet.
    pub(super) at: P2,
    /// Whether that is nearer than to scale.
    pub(super) broken: bool,
}

/// Finds the spot of a point on the sheet: its place to scale, or, where that is further outside the
/// group than `far` times its size, a nearer one on the same line from `centre`.
pub(super) fn spot(at: P2, group: &Bounds, centre: P2, far: f64) -> Spot {
    let d = at - centre;
    let distance = d.norm();
    let inside = exit(group, centre, unit(d));
    let shown = inside + NEARER;
    if distance - inside <= far * group.size().norm().max(1e-9) || shown >= distance {
        return Spot { at, broken: false };
    }
    Spot {
        at: centre + unit(d) * shown,
        broken: true,
    }
}

/// How far it is from a point inside upright bounds to their border along a unit vector.
fn exit(bounds: &Bounds, from: P2, d: P2) -> f64 {
    let reach = |i: usize| {
        let edge = if d[i] > 0.0 {
            bounds.max[i]
        } else {
            bounds.min[i]
        };
        if d[i].abs() < 1e-9 {
            f64::INFINITY
        } else {
            ((edge - from[i]) / d[i]).max(0.0)
        }
    };
    let least = reach(0).min(reach(1));
    if least.is_finite() { least } else { 0.0 }
}

/// Draws a load at its spot; `centre` is where its lead starts.
pub(super) fn draw_load(canvas: &mut Canvas<'_>, view: &View, load: &Load, spot: Spot, centre: P2) {
    if nonzero(&load.force).chain(nonzero(&load.moment)).count() > 0 {
        canvas.remark("arrows at the load show directions, not sizes; their values are components along the axes");
    }
    draw_lead(canvas, load, spot, centre);
    let end_on_force = nonzero(&load.force).find(|c| faces_reader(view, c.axis));
    let quiet = quiet_direction(&arrow_directions(view, load), spot.at - centre);
    draw_point(canvas, load, spot.at, centre, quiet, end_on_force);
    let mut used: Vec<(P2, f64)> = Vec::new();
    for component in nonzero(&load.force).filter(|c| !faces_reader(view, c.axis)) {
        draw_arrow(canvas, view, component, spot.at, Kind::Force, &mut used);
    }
    for component in nonzero(&load.moment).filter(|c| !faces_reader(view, c.axis)) {
        draw_arrow(canvas, view, component, spot.at, Kind::Moment, &mut used);
    }
    if let Some(turn) = nonzero(&load.moment).find(|c| faces_reader(view, c.axis)) {
        let mut busy: Vec<P2> = used.iter().map(|(d, _)| *d).collect();
        if (centre - spot.at).norm() > TURN {
            busy.push(unit(centre - spot.at));
        }
        draw_turn(canvas, turn, spot.at, &busy);
    }
}

/// Directions in which thin lines cross the circle of a turning arrow.
fn crossings(lines: &[Rect], at: P2, radius: f64) -> Vec<P2> {
    let at_line = |line: &Rect| {
        let foot = (at - line.centre).dot(&line.along);
        let aside = (at - line.centre - line.along * foot).norm_squared();
        let half = sqrt((radius * radius - aside).max(0.0));
        let on = |along: &f64| along.abs() <= line.half[0];
        let ends = [foot - half, foot + half].into_iter().filter(on);
        let to = |along: f64| unit(line.centre + line.along * along - at);
        match aside < radius * radius {
            true => ends.map(to).collect(),
            false => Vec::new(),
        }
    };
    lines.iter().flat_map(at_line).collect()
}

/// Directions on the sheet of the arrows that a load will have.
fn arrow_directions(view: &View, load: &Load) -> Vec<P2> {
    nonzero(&load.force)
        .chain(nonzero(&load.moment))
        .map(|c| view.direction(c.axis) * c.value.signum())
        .filter(|d| d.norm() > 1e-9)
        .collect()
}

/// The direction of the compass furthest from all arrows and from the lead, where the letters of a
/// load point are told apart best; the first of equals, from the upper right on.
fn quiet_direction(arrows: &[P2], from_centre: P2) -> P2 {
    let mut busy = arrows.to_vec();
    if from_centre.norm() > TURN {
        busy.push(-unit(from_centre));
    }
    let eighth = std::f64::consts::FRAC_PI_4;
    let mut found = (P2::zeros(), f64::INFINITY);
    for i in 1..9 {
        let turn = eighth * f64::from(i);
        let d = P2::new(cos(turn), -sin(turn));
        let nearest = busy.iter().map(|b| b.dot(&d)).fold(-1.0, f64::max);
        if nearest < found.1 - 1e-9 {
            found = (d, nearest);
        }
    }
    found.0
}

fn nonzero(components: &[Component]) -> impl Iterator<Item = &Component> {
    components.iter().filter(|c| c.value.abs() > 0.0)
}

fn faces_reader(view: &View, axis: Axis) -> bool {
    view.direction(axis).norm() < 1e-9
}

/// `F_y = −4200 N`.
fn symbol(kind: Kind, component: &Component) -> Vec<Span> {
    let letter = match kind {
        Kind::Force => "F",
        Kind::Moment => "M",
    };
    // A moment is the one given about the load's own point.
    let index = match kind {
        Kind::Force => component.axis.letter().to_owned(),
        Kind::Moment => format!("{},P", component.axis.letter()),
    };
    vec![
        Span::new(letter, Style::Italic),
        Span::new(index, Style::Sub),
        Span::new(format!(" = {}", component.text), Style::Plain),
    ]
}

/// Whether an arrow is a force's or a moment's.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Force,
    Moment,
}

/// The thin dashed line from the centroid to the load point, broken if it is not to scale.
fn draw_lead(canvas: &mut Canvas<'_>, load: &Load, spot: Spot, centre: P2) {
    let d = unit(spot.at - centre);
    let length = (spot.at - centre).norm();
    if length < 8.0 {
        return;
    }
    let (a, b) = (centre + d * 3.0, spot.at - d * START);
    canvas.aid(a, b, Stroke::grey(0.4).dashed());
    if !spot.broken {
        return;
    }
    let middle = centre + d * (length * 0.72);
    canvas.mark(break_mark(middle, d));
    canvas.remark(&format!("the distance to {} is broken", load.label));
    if !load.distance.is_empty() {
        let words = canvas.words(vec![Span::new(load.distance.clone(), Style::Plain)]);
        let mut places = beside(
            middle - d * 6.0,
            middle + d * 6.0,
            1.0,
            words.size(),
            -P2::y(),
            true,
        );
        places.extend(dearer(around(middle, 2.4, words.size(), -P2::y()), 5.0));
        canvas.want(rank::DIMENSION, words, middle, places);
    }
}

/// The point's mark and letter: a small circle, or the end of a force along the line of sight. At
/// the centroid its letter stands with the centroid's.
fn draw_point(
    canvas: &mut Canvas<'_>,
    load: &Load,
    at: P2,
    centre: P2,
    quiet: P2,
    end: Option<&Component>,
) {
    let at_centroid = (at - centre).norm() < AT_CENTROID;
    if let Some(force) = end {
        canvas.mark(end_on(at, END_ON, force.value > 0.0, Stroke::black(0.9)));
        let mark = Rect::upright(at, END_ON, END_ON);
        let mark = canvas.name(MarkKind::Arrow, vec![mark]);
        let words = canvas.words(symbol(Kind::Force, force));
        let mut places = around(at, 2.4, words.size(), quiet);
        places.extend(dearer(around(at, 3.4, words.size(), quiet), 3.0));
        canvas
            .want(rank::LOAD, words, at, places)
            .naming(mark, END_ON);
    } else if !at_centroid {
        canvas.mark([circle(at, POINT, Stroke::grey(0.6), Fill::White)]);
    }
    let letters = if at_centroid {
        format!("C, {}", load.label)
    } else {
        load.label.clone()
    };
    let mut spans = vec![Span::new(letters, Style::Italic)];
    if !load.aside.is_empty() {
        spans.push(Span::new(",  ", Style::Plain));
        spans.extend(symbol_spans(&load.aside));
    }
    let words = canvas.words(spans);
    let mut places = around(at, 2.4, words.size(), quiet);
    for (clear, cost) in [(3.6, 3.0), (5.5, 5.0)] {
        places.extend(dearer(around(at, clear, words.size(), quiet), cost));
    }
    canvas.want(rank::LETTER, words, at, places);
}

/// An arrow along an axis; a moment has two heads.
fn draw_arrow(
    canvas: &mut Canvas<'_>,
    view: &View,
    component: &Component,
    at: P2,
    kind: Kind,
    used: &mut Vec<(P2, f64)>,
) {
    let d = view.direction(component.axis) * component.value.signum();
    let stand = arrow_stand(canvas, at, d, used);
    let a = at + d * stand.start + square(d) * stand.aside;
    let tip = a + d * ARROW;
    used.push(if stand.start > 0.0 {
        (d, stand.start + ARROW)
    } else {
        (-d, -stand.start)
    });
    let stroke = Stroke::black(1.1);
    let mut parts = vec![
        Item::Path(Path::through(&[a, tip], stroke)),
        open_head(tip, d, stroke),
    ];
    if kind == Kind::Moment {
        parts.push(open_head(tip - d * HEADS, d, stroke));
    }
    let rects = parts.iter().flat_map(strokes).collect();
    let mark = canvas.name(MarkKind::Arrow, rects);
    canvas.mark(parts);
    let words = canvas.words(symbol(kind, component));
    let places = arrow_places([a, tip], d, words.size());
    canvas
        .want(rank::LOAD, words, (a + tip) / 2.0, places)
        .naming(mark, 0.3);
}

/// Where an arrow starts: along its direction from the point, and aside.
#[derive(Clone, Copy)]
struct Stand {
    start: f64,
    aside: f64,
}

/// The best stand of an arrow: at the point, or beyond an arrow on the same line; or behind the
/// point, with its head at it; or further out or aside, where it would lie on a run.
fn arrow_stand(canvas: &Canvas<'_>, at: P2, d: P2, used: &[(P2, f64)]) -> Stand {
    let end = |d: P2| {
        used.iter()
            .filter(|(e, _)| e.dot(&d) > 0.99)
            .map(|(_, end)| end + GAP)
            .fold(START, f64::max)
    };
    let (ahead, behind) = (end(d), -end(-d) - ARROW);
    let mut found = (
        Stand {
            start: ahead,
            aside: 0.0,
        },
        f64::INFINITY,
    );
    for further in FURTHER {
        for aside in ASIDE {
            for (start, own) in [(ahead + further, 0.0), (behind - further, BEHIND)] {
                let stand = Stand { start, aside };
                let from = at + d * start + square(d) * aside;
                let cost = own + further + ASIDE_COST * aside.abs() + lying_cost(canvas, from, d);
                if cost < found.1 - 1e-9 {
                    found = (stand, cost);
                }
            }
        }
    }
    found.0
}

/// What it costs an arrow to lie where it would.
fn lying_cost(canvas: &Canvas<'_>, from: P2, d: P2) -> f64 {
    let rect = Rect::line(from, from + d * ARROW, 1.0);
    let lines = canvas.welds.iter().chain(&canvas.foreseen);
    let worst = lines
        .filter(|line| line.overlaps(&rect))
        .map(|line| {
            if line.along.dot(&d).abs() > 0.9 {
                ALONG
            } else {
                CROSSING
            }
        })
        .fold(0.0, f64::max);
    worst
        + if canvas.is_clear(&rect) {
            0.0
        } else {
            TOUCHING
        }
}

/// Places beside an arrow's shaft and around its head.
fn arrow_places([a, tip]: [P2; 2], d: P2, size: [f64; 2]) -> Vec<Candidate> {
    let toward = if d.y.abs() < 0.2 { -P2::y() } else { P2::x() };
    let mut places = beside(a, tip, 1.5, size, toward, false);
    places.extend(dearer(around(tip, 1.2, size, d), 1.0));
    places.extend(dearer(around(tip, 2.2, size, d), 4.0));
    places.extend(dearer(beside(a, tip, 2.4, size, toward, false), 5.0));
    places
}

/// A turning arrow about the point, in the widest opening between the arrows.
fn draw_turn(canvas: &mut Canvas<'_>, component: &Component, at: P2, busy: &[P2]) {
    let sense = component.value.signum();
    let found = SWEEPS.map(|(degrees, radius)| {
        let mut busy = busy.to_vec();
        busy.extend(crossings(&canvas.foreseen, at, radius));
        let sweep = degrees.to_radians();
        let (from, crossed) = opening(&busy, sense, sweep);
        (from, crossed, sweep, radius)
    });
    let free = found.iter().find(|(_, crossed, ..)| *crossed == 0);
    let (from, _, sweep, radius) = *free.unwrap_or(&found[0]);
    let stroke = Stroke::black(1.1);
    let parts = turning_arrow(at, radius, from, sense * sweep, stroke);
    let rects = parts.iter().flat_map(strokes).collect();
    let mark = canvas.name(MarkKind::Arrow, rects);
    canvas.mark(parts);
    let middle = from + sense * sweep / 2.0;
    let out = P2::new(cos(middle), -sin(middle));
    let words = canvas.words(symbol(Kind::Moment, component));
    let mut places = around(at, radius + 1.6, words.size(), out);
    places.extend(dearer(around(at, radius + 2.6, words.size(), out), 4.0));
    for part in [0.25, 0.75] {
        let turn = from + sense * sweep * part;
        let out = P2::new(cos(turn), -sin(turn));
        places.extend(dearer(around(at, radius + 2.0, words.size(), out), 2.0));
    }
    canvas
        .want(rank::TURN, words, at + out * radius, places)
        .naming(mark, 0.3);
}

/// The start angle, in steps of 15°, at which the arc crosses the fewest of the busy directions and
/// keeps its ends furthest from them; and how many it crosses.
fn opening(busy: &[P2], sense: f64, sweep: f64) -> (f64, usize) {
    let turn = std::f64::consts::TAU;
    let mut found = (0.0, usize::MAX, f64::NEG_INFINITY);
    for i in 0..24 {
        let from = turn / 24.0 * f64::from(i);
        let clear: Vec<f64> = busy
            .iter()
            .map(|d| ((atan2(-d.y, d.x) - from) * sense).rem_euclid(turn))
            .map(|after| (after - sweep).min(turn - after))
            .collect();
        // An arrow nearer to the arc's end than a head is wide counts as crossed.
        let crossed = clear.iter().filter(|c| **c < 0.2).count();
        let space: f64 = clear.iter().map(|c| c.clamp(0.0, 0.5)).sum();
        if crossed < found.1 || (crossed == found.1 && space > found.2 + 1e-9) {
            found = (from, crossed, space);
        }
    }
    (found.0, found.1)
}

/// The outline of the attached part, thin and grey.
pub(super) fn draw_outline(canvas: &mut Canvas<'_>, points: &[P2]) {
    let item = Item::Path(Path::through(points, Stroke::grey(0.4)));
    canvas.draw_kept(Layer::Aid, item, Keep::OffIfPossible);
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: the rule stated above: 200° fit between two arrows a right angle apart.
    #[test]
    fn a_turning_arrow_crosses_no_arrow_where_there_is_room() {
        let busy = [P2::new(1.0, 0.0), P2::new(0.0, 1.0)];
        let sweep = SWEEPS[0].0.to_radians();
        for sense in [1.0, -1.0] {
            let (from, crossed) = opening(&busy, sense, sweep);
            assert_eq!(crossed, 0, "there is room for 200°");
            for d in busy {
                let turn = std::f64::consts::TAU;
                let after = ((atan2(-d.y, d.x) - from) * sense).rem_euclid(turn);
                assert!(after > sweep, "the arc from {from} passes over an arrow");
            }
        }
    }

    /// Source: geometry: from the middle of a 4 by 2 box it is 2 to the right and √2 at 45°.
    #[test]
    fn the_border_is_found_from_inside() {
        let mut bounds = Bounds::empty();
        bounds.add(P2::new(-2.0, -1.0), 0.0);
        bounds.add(P2::new(2.0, 1.0), 0.0);
        let diagonal = P2::new(1.0, 1.0).normalize();
        assert!(
            (exit(&bounds, P2::zeros(), P2::x()) - 2.0).abs() < 1e-12,
            "to the right"
        );
        assert!(
            (exit(&bounds, P2::zeros(), diagonal) - 2.0_f64.sqrt()).abs() < 1e-12,
            "at 45°"
        );
    }
}
