//! The small shapes of the trade: arrow heads, ticks, break marks, turning arrows.

use super::drawing::{Fill, Ink, Item, P2, Path, Piece, Stroke};
use super::rect::square;
use super::view::arc_curves;

/// Length of an open head (mm).
const OPEN_HEAD: f64 = 2.6;
/// From the first head of a moment to the second (mm).
pub(super) const HEADS: f64 = 2.0;
/// Length of a filled head (mm).
const FILLED_HEAD: f64 = 2.2;

/// An open head, smaller on an arrow that is hardly longer than it.
pub(super) fn small_head(tip: P2, d: P2, length: f64, stroke: Stroke) -> Item {
    let size = (0.6 * length / OPEN_HEAD).min(1.0);
    let (side, back) = (square(d) * (0.95 * size), tip - d * (OPEN_HEAD * size));
    Item::Path(Path::through(&[back + side, tip, back - side], stroke))
}

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
/// read), with two open heads at its end, as a moment has.
pub(super) fn turning_arrow(
    centre: P2,
    radius: f64,
    from: f64,
    sweep: f64,
    stroke: Stroke,
) -> Vec<Item> {
    let point = |p: [f64; 2]| centre + P2::new(p[0], -p[1]) * radius;
    let curves = arc_curves(from, sweep);
    let path = Path {
        pieces: curves
            .iter()
            .map(|[_, p, q, r]| Piece::Cubic(point(*p), point(*q), point(*r)))
            .collect(),
        ..Path::through(&[point(curves[0][0])], stroke)
    };
    // Each head points along the chord of its own length, so that it sits on the curve.
    let head = |end: f64| {
        let lead = sweep.signum() * (sweep.abs().min(OPEN_HEAD / radius));
        let chord = arc_curves(end - lead, lead);
        let (back, tip) = (point(chord[0][0]), point(chord[chord.len() - 1][3]));
        open_head(tip, (tip - back).normalize(), stroke)
    };
    let (last, first) = (from + sweep, from + sweep - sweep.signum() * HEADS / radius);
    vec![Item::Path(path), head(last), head(first)]
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

/// A disc of some ink, as a point that is stroked.
pub(super) fn disc_of(centre: P2, radius: f64, ink: Ink) -> Item {
    let stroke = Stroke {
        width: radius,
        ink,
        ..Stroke::black(0.0)
    };
    circle(centre, radius / 2.0, stroke, Fill::None)
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
