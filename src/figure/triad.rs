//! The axes with their words, in the free corner nearest to the lower left.

use super::canvas::{Canvas, strokes};
use super::drawing::{Fill, Item, P2, Path, Span, Stroke, Style};
use super::place::around;
use super::rect::{Bounds, Rect};
use super::scene::Axis;
use super::shape::{circle, disc, end_on, filled_head};
use super::view::View;

/// Length of an axis (mm).
const LENGTH: f64 = 9.0;
/// Space kept around (mm).
const CLEAR: f64 = 2.4;
/// Cost of a place inside the group.
const AMONG: f64 = 30.0;
/// Step of the search for a free corner (mm).
const STEP: f64 = 2.0;

/// Draws the axes where they stand free, within the room and outside the group if that can be.
pub(super) fn draw_triad(
    canvas: &mut Canvas<'_>,
    view: &View,
    words: &[String; 3],
    labels: &mut Vec<Item>,
    group: &Bounds,
) {
    let items = triad(canvas, view, words);
    let boxes: Vec<Rect> = items
        .iter()
        .flat_map(strokes)
        .map(|r| r.grown(CLEAR))
        .collect();
    let mut own = Bounds::empty();
    items.iter().for_each(|item| item.bound(&mut own));
    let mut all = canvas.bounds();
    labels.iter().for_each(|item| item.bound(&mut all));
    let by = corner(canvas, &boxes, &own, &all, group);
    for item in items {
        let item = item.shifted(by);
        if matches!(item, Item::Label(_)) {
            labels.push(item);
        } else {
            canvas.mark([item]);
        }
    }
}

/// The axes about the sheet's origin.
fn triad(canvas: &Canvas<'_>, view: &View, words: &[String; 3]) -> Vec<Item> {
    let mut items = Vec::new();
    let mut labels: Vec<Item> = Vec::new();
    for axis in Axis::ALL {
        let d = view.direction(axis);
        let mut spans = vec![Span::new(axis.letter(), Style::Italic)];
        let word = &words[axis.index()];
        if !word.is_empty() {
            spans.push(Span::new(format!(" {word}"), Style::Plain));
        }
        let text = canvas.words(spans);
        let end_on_axis = d.norm() < 1e-9;
        // An axis toward the reader has its letter under the ring, its first letter at the ring.
        let (tip, clear, toward) = if end_on_axis {
            (P2::zeros(), 2.0, P2::y())
        } else {
            (d * LENGTH, 1.0, d)
        };
        let places = around(tip, clear, text.size(), toward);
        let place = places.iter().min_by(|a, b| a.cost.total_cmp(&b.cost));
        if let Some(place) = place {
            labels.push(Item::Label(text.label(place.centre, 0.0)));
        }
        if !end_on_axis {
            items.push(Item::Path(Path::through(
                &[P2::zeros(), tip - d * 1.0],
                Stroke::black(0.7),
            )));
            items.push(filled_head(tip, d));
        }
    }
    if view.flat {
        items.extend(end_on(P2::zeros(), 0.95, true, Stroke::black(0.7)));
    } else {
        items.push(disc(P2::zeros(), 0.45));
    }
    items.extend(labels);
    items
}

/// The shift to the free place nearest to the lower left corner of what is drawn. Places that make
/// the drawing larger cost more, most of all beyond the room; so do places inside the group.
fn corner(canvas: &Canvas<'_>, boxes: &[Rect], own: &Bounds, all: &Bounds, group: &Bounds) -> P2 {
    let size = own.size();
    let drawn = all.size();
    let low = all.min - size - P2::repeat(CLEAR + STEP);
    let count = (all.max - low).map(|x| x / STEP);
    let mut found = (P2::zeros(), f64::INFINITY);
    let steps = |n: f64| (0_u16..).take_while(move |i| f64::from(*i) <= n);
    for i in steps(count.x) {
        for j in steps(count.y + size.y / STEP) {
            let min = low + P2::new(f64::from(i), f64::from(j)) * STEP;
            let by = min - own.min;
            let max = min + size;
            let grown = all.max.sup(&max) - all.min.inf(&min);
            let wider = (grown - drawn).sum();
            let over = (grown - canvas.room).map(|x| x.max(0.0)).sum();
            let away = (min.x - all.min.x).max(0.0) + 0.6 * (all.max.y - max.y).abs();
            let among = min.x < group.max.x
                && max.x > group.min.x
                && min.y < group.max.y
                && max.y > group.min.y;
            let cost = away * 0.5 + wider * 0.6 + over * 20.0 + if among { AMONG } else { 0.0 };
            if cost < found.1 && boxes.iter().all(|b| free(canvas, &b.shifted(by))) {
                found = (by, cost);
            }
        }
    }
    found.0
}

fn free(canvas: &Canvas<'_>, rect: &Rect) -> bool {
    !canvas.obstacles.iter().any(|o| o.rect.overlaps(rect))
}

/// The centroid's mark: a cross in a circle.
pub(super) fn draw_centroid(canvas: &mut Canvas<'_>, at: P2) {
    canvas.mark(centroid_mark(at));
}

/// The boxes of the centroid's mark.
pub(super) fn centroid_rects(at: P2) -> Vec<Rect> {
    centroid_mark(at).iter().flat_map(strokes).collect()
}

fn centroid_mark(at: P2) -> [Item; 3] {
    let thin = Stroke::black(0.7);
    let arm = |arm: P2| Item::Path(Path::through(&[at - arm, at + arm], thin));
    [
        circle(at, 1.3, thin, Fill::White),
        arm(P2::x() * 2.3),
        arm(P2::y() * 2.3),
    ]
}
