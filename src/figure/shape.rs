//! The small shapes of the trade: arrow heads, ticks, break marks, turning arrows.

use super::drawing::{Fill, Item, P2, Path, Piece, Stroke};
use super::rect::square;
use super::view::arc_curves;

/// Length of an open head (mm).
const OPEN_HEAD: f64 = 2.6;
/// Length of a filled head (mm).
const FILLED_HEAD: f64 = 2.2;

/// An open head with its tip at `tip`, pointing along the unit vector `d`.
pub(super) fn open_head(tip: P2, d: P2, stroke: Stroke) -> Item {
    let side = square(d) * 0.95;
    let back = tip - d * OPEN_HEAD;
    Item::Path(Path::through(&[back + side, tip, back - side], stroke))
}

/// A slender filled head.
pub(super) fn filled_head(tip: P2, d: P2) -> Item {
    let side = square(d) * 0.6;
    let back = tip - d * FILLED_HEAD;
    Item::Path(Path::filled(&[back + side, tip, back - side], Fill::Black))
}

/// An oblique tick across a dimension line along `d`, at its end `p`, leaning as read.
pub(super) fn tick(p: P2, d: P2) -> Item {
    let lean = (d - square(d)) * (1.0 / std::f64::consts::SQRT_2);
    Item::Path(Path::through(
        &[p - lean * 1.1, p + lean * 1.1],
        Stroke::black(0.8),
    ))
}

/// A break across a line along `d` at `p`: a white gap between two slanted strokes.
pub(super) fn break_mark(p: P2, d: P2) -> Vec<Item> {
    let n = square(d);
    let slant = n * 1.6 + d * 0.5;
    let (a, b) = (p - d * 0.7, p + d * 0.7);
    let stroke = Stroke::black(0.6);
    vec![
        Item::Path(Path::filled(
            &[a - slant, a + slant, b + slant, b - slant],
            Fill::White,
        )),
        Item::Path(Path::through(&[a - slant, a + slant], stroke)),
        Item::Path(Path::through(&[b - slant, b + slant], stroke)),
    ]
}

/// A turning arrow about `centre`, starting at angle `from` over `sweep` (rad, counter-clockwise as
/// read), with an open head at its end.
pub(super) fn turning_arrow(
    centre: P2,
    radius: f64,
    from: f64,
    sweep: f64,
    stroke: Stroke,
) -> Vec<Item> {
    let point = |p: [f64; 2]| centre + P2::new(p[0], -p[1]) * radius;
    let curves = arc_curves(from, sweep);
    let last = curves[curves.len() - 1];
    let path = Path {
        pieces: curves
            .iter()
            .map(|[_, p, q, r]| Piece::Cubic(point(*p), point(*q), point(*r)))
            .collect(),
        ..Path::through(&[point(curves[0][0])], stroke)
    };
    // The head points along the chord of its own length, so that it sits on the curve.
    let tip = point(last[3]);
    let lead = sweep.signum() * (sweep.abs().min(OPEN_HEAD / radius));
    let back = arc_curves(from + sweep - lead, lead)[0][0];
    vec![
        Item::Path(path),
        open_head(tip, (tip - point(back)).normalize(), stroke),
    ]
}

/// A circle with outline and inside.
pub(super) fn circle(centre: P2, radius: f64, stroke: Stroke, fill: Fill) -> Item {
    Item::Circle {
        centre,
        radius,
        stroke: Some(stroke),
        fill,
    }
}

/// A filled disc.
pub(super) fn disc(centre: P2, radius: f64) -> Item {
    Item::Circle {
        centre,
        radius,
        stroke: None,
        fill: Fill::Black,
    }
}

/// The mark of an axis or force that points at the reader (a dot) or away (a cross).
pub(super) fn end_on(centre: P2, radius: f64, toward: bool, stroke: Stroke) -> Vec<Item> {
    let ring = circle(centre, radius, stroke, Fill::White);
    if toward {
        return vec![ring, disc(centre, radius * 0.32)];
    }
    let r = radius / std::f64::consts::SQRT_2;
    let (d, e) = (P2::new(r, r), P2::new(r, -r));
    vec![
        ring,
        Item::Path(Path::through(&[centre - d, centre + d], stroke)),
        Item::Path(Path::through(&[centre - e, centre + e], stroke)),
    ]
}
