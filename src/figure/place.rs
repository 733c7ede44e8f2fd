//! Places for labels: each label takes the best of its candidate places in turn.
//!
//! Greedy by rank: dimensions and the governing point first, names of runs last. A place on another
//! label, a run, an arrow or a mark is never taken; a label that has no place is dropped and named.
//! Point-feature labelling by candidates follows J. Christensen, J. Marks, S. Shieber, *An empirical
//! study of algorithms for point-feature label placement*, ACM Trans. Graphics 14 (1995), section 3.

use super::canvas::{Canvas, Keep, Layer, Obstacle};
use super::drawing::{Item, P2, Path, Stroke};
use super::rect::{Bounds, Rect};
use super::text::Words;
use crate::quantity::real::{cos, sin};

/// Space between labels (mm to each side).
const PAD: f64 = 0.35;
/// Space between a label and what it must keep off (mm).
const CLEAR: f64 = 0.25;
/// Cost of standing on an aid such as an extension line.
const ON_AID: f64 = 12.0;
/// Cost of each mm by which a label makes the drawing larger than its room.
const OUTSIDE: f64 = 4.0;
/// Radii at which a label with a leader is tried (mm).
const FAR: [f64; 7] = [4.2, 6.5, 9.0, 12.0, 16.0, 21.0, 28.0];
/// More runs than this are many: their names are not led far.
const MANY: usize = 8;
/// Cost of a leader, above every place without one.
const LEADER: f64 = 100.0;

/// A place where a label may stand.
#[derive(Clone, Copy, Debug)]
pub(super) struct Candidate {
    /// Centre of its box.
    pub(super) centre: P2,
    /// Turn (rad).
    pub(super) angle: f64,
    /// How much less it is liked than the best.
    pub(super) cost: f64,
}

/// A label that asks for a place.
#[derive(Clone, Debug)]
pub(super) struct Want {
    /// Order: low ranks choose first.
    pub(super) rank: u8,
    /// The label.
    pub(super) words: Words,
    /// What it names; a leader would start here.
    pub(super) anchor: P2,
    /// Places near by.
    pub(super) candidates: Vec<Candidate>,
}

/// Ranks in which labels choose.
pub(super) mod rank {
    pub(in super::super) const DIMENSION: u8 = 0;
    pub(in super::super) const GOVERNING: u8 = 1;
    /// A turning arrow, which has the fewest places.
    pub(in super::super) const TURN: u8 = 2;
    pub(in super::super) const LOAD: u8 = 3;
    pub(in super::super) const LETTER: u8 = 4;
    pub(in super::super) const POINT: u8 = 5;
    pub(in super::super) const RUN: u8 = 6;
}

/// Places for a box around a point, `clear` off it, those along `toward` first.
pub(super) fn around(anchor: P2, clear: f64, size: [f64; 2], toward: P2) -> Vec<Candidate> {
    ring(anchor, clear, size, toward, 8)
}

/// Places for a box in `count` directions around a point.
fn ring(anchor: P2, clear: f64, size: [f64; 2], toward: P2, count: u8) -> Vec<Candidate> {
    let part = std::f64::consts::TAU / f64::from(count);
    (0..count)
        .map(|i| {
            let turn = part * f64::from(i);
            let d = P2::new(cos(turn), -sin(turn));
            let step = |c: f64, half: f64| {
                let beside = if c.abs() < 0.1 {
                    0.0
                } else {
                    c.signum() * half
                };
                c * clear + beside
            };
            let off = P2::new(step(d.x, size[0] / 2.0), step(d.y, size[1] / 2.0));
            Candidate {
                centre: anchor + off,
                angle: 0.0,
                cost: 4.0 * (1.0 - d.dot(&toward)),
            }
        })
        .collect()
}

/// The same places, liked less.
pub(super) fn dearer(candidates: Vec<Candidate>, by: f64) -> Vec<Candidate> {
    candidates
        .into_iter()
        .map(|c| Candidate {
            cost: c.cost + by,
            ..c
        })
        .collect()
}

/// Places beside a line from `a` to `b`, the text along it where `turned`, nearest to its middle and
/// on the side of `toward` first.
pub(super) fn beside(
    a: P2,
    b: P2,
    clear: f64,
    size: [f64; 2],
    toward: P2,
    turned: bool,
) -> Vec<Candidate> {
    let d = super::view::unit(b - a);
    let angle = if turned { reading_angle(d) } else { 0.0 };
    let n = super::rect::square(d);
    let half = if turned {
        size[1] / 2.0
    } else {
        (n.x * size[0]).abs() / 2.0 + (n.y * size[1]).abs() / 2.0
    };
    let mut out = Vec::new();
    for (i, part) in [0.5, 0.38, 0.62, 0.26, 0.74, 0.18, 0.82, 0.14, 0.86]
        .into_iter()
        .enumerate()
    {
        let on = a + (b - a) * part;
        for side in [1.0, -1.0] {
            let off = n * side * (clear + half);
            let slide = f64::from(u8::try_from(i).unwrap_or(u8::MAX));
            let cost = slide * 0.8 + if off.dot(&toward) > 0.0 { 0.0 } else { 3.0 };
            out.push(Candidate {
                centre: on + off,
                angle,
                cost,
            });
        }
    }
    out
}

/// The turn that sets text along a direction, read from below or from the right.
pub(super) fn reading_angle(d: P2) -> f64 {
    let upright = if d.x < -1e-6 || (d.x.abs() <= 1e-6 && d.y > 0.0) {
        -d
    } else {
        d
    };
    let angle = crate::quantity::real::atan2(-upright.y, upright.x);
    if angle.abs() < 1e-9 { 0.0 } else { angle }
}

/// Places every label wanted; returns the labels and the texts of those dropped.
pub(super) fn place_labels(canvas: &mut Canvas<'_>) -> (Vec<Item>, Vec<String>) {
    let mut wants = std::mem::take(&mut canvas.wants);
    wants.sort_by_key(|w| w.rank);
    let mut taken: Vec<Rect> = Vec::new();
    let mut all = canvas.bounds();
    let (mut labels, mut dropped) = (Vec::new(), Vec::new());
    for want in wants {
        let near = best(&want.words, &want.candidates, canvas, &taken, &all);
        let led = near.or_else(|| far(&want, canvas, &taken, &all, true));
        // What the reader cannot do without may have a leader that passes over lines.
        let found = if want.rank < rank::POINT {
            led.or_else(|| far(&want, canvas, &taken, &all, false))
        } else {
            led
        };
        let Some(place) = found else {
            dropped.push(want.words.text());
            continue;
        };
        let rect = want.words.rect(place.centre, place.angle);
        if place.cost >= LEADER {
            draw_leader(canvas, want.anchor, &rect);
        }
        rect.corners().iter().for_each(|p| all.add(*p, 0.0));
        taken.push(rect.grown(PAD));
        labels.push(Item::Label(want.words.label(place.centre, place.angle)));
    }
    canvas
        .obstacles
        .extend(taken.into_iter().map(|rect| Obstacle {
            rect,
            keep: Keep::Off,
        }));
    (labels, dropped)
}

/// The cheapest free place; the first of equals.
fn best(
    words: &Words,
    places: &[Candidate],
    canvas: &Canvas<'_>,
    taken: &[Rect],
    all: &Bounds,
) -> Option<Candidate> {
    let mut found: Option<Candidate> = None;
    for place in places {
        let rect = words.rect(place.centre, place.angle);
        let limit = found.map_or(f64::INFINITY, |f| f.cost);
        if place.cost >= limit || taken.iter().any(|t| t.overlaps(&rect.grown(PAD))) {
            continue;
        }
        let cost = place.cost
            + standing_cost(&rect.grown(CLEAR), canvas)
            + outside_cost(&rect, canvas.room, all);
        if cost < limit {
            found = Some(Candidate { cost, ..*place });
        }
    }
    found
}

/// What it costs to stand here; infinite on what labels must keep off.
fn standing_cost(rect: &Rect, canvas: &Canvas<'_>) -> f64 {
    let mut cost = 0.0;
    for obstacle in canvas.obstacles.iter().filter(|o| o.rect.overlaps(rect)) {
        match obstacle.keep {
            Keep::Off => return f64::INFINITY,
            Keep::OffIfPossible => cost += ON_AID,
        }
    }
    cost
}

/// What it costs to make the drawing larger than its room.
fn outside_cost(rect: &Rect, room: P2, all: &Bounds) -> f64 {
    let mut grown = *all;
    rect.corners().iter().for_each(|p| grown.add(*p, 0.0));
    let over = |i: usize| (grown.size()[i] - room[i].max(all.size()[i])).max(0.0);
    OUTSIDE * (over(0) + over(1)).min(10.0)
}

/// A place further off, joined by a leader that crosses no label, and nothing else where `strict`.
/// Numbers of points, and names of runs where there are many, are dropped sooner than led far.
fn far(
    want: &Want,
    canvas: &Canvas<'_>,
    taken: &[Rect],
    all: &Bounds,
    strict: bool,
) -> Option<Candidate> {
    let near_only = want.rank >= rank::POINT && (want.rank == rank::POINT || canvas.runs > MANY);
    let radii = if near_only { &FAR[..2] } else { &FAR[..] };
    let size = want.words.size();
    let led = |(i, radius): (usize, &f64)| {
        let cost = LEADER + 20.0 * f64::from(u8::try_from(i).unwrap_or(u8::MAX));
        dearer(ring(want.anchor, *radius, size, P2::zeros(), 16), cost)
    };
    let places: Vec<Candidate> = radii
        .iter()
        .enumerate()
        .flat_map(led)
        .filter(|place| {
            let rect = want.words.rect(place.centre, place.angle);
            let leader = leader_ends(want.anchor, &rect);
            let line = Rect::line(leader[0], leader[1], 0.1);
            let later = Rect::line(
                leader[0] + super::view::unit(leader[1] - leader[0]) * 1.5,
                leader[1],
                0.1,
            );
            !taken.iter().any(|t| t.overlaps(&line)) && (!strict || canvas.is_clear(&later))
        })
        .collect();
    best(&want.words, &places, canvas, taken, all)
}

/// From just off the anchor to the nearest point of the box.
fn leader_ends(anchor: P2, rect: &Rect) -> [P2; 2] {
    let d = anchor - rect.centre;
    let n = super::rect::square(rect.along);
    let (u, v) = (d.dot(&rect.along), d.dot(&n));
    let clamp = |x: f64, half: f64| x.clamp(-half - 0.3, half + 0.3);
    let end = rect.centre + rect.along * clamp(u, rect.half[0]) + n * clamp(v, rect.half[1]);
    [anchor + super::view::unit(end - anchor) * 1.2, end]
}

fn draw_leader(canvas: &mut Canvas<'_>, anchor: P2, rect: &Rect) {
    let [a, b] = leader_ends(anchor, rect);
    let item = Item::Path(Path::through(&[a, b], Stroke::black(0.3)));
    canvas.draw_kept(Layer::Mark, item, Keep::Off);
}
