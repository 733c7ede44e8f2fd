//! Runs that lie on each other: collinear straights, arcs of one circle.

use super::{Segment, V3};
use crate::quantity::real;
use std::f64::consts::PI;

/// Part of the group's size within which paths count as the same line or circle.
const SAME_LINE: f64 = 1e-6;

/// The length on which two paths lie on each other (length); 0 if they do not.
///
/// `size` is the group's size, the measure of what counts as the same.
#[must_use]
pub fn overlap(first: &Segment, second: &Segment, size: f64) -> f64 {
    let near = SAME_LINE * size;
    match (first, second) {
        (Segment::Straight { a, b }, Segment::Straight { a: c, b: d }) => {
            straights(*a, *b, *c, *d, near)
        }
        (Segment::Arc { .. }, Segment::Arc { .. }) => arcs(first, second, near),
        (Segment::Straight { .. }, Segment::Arc { .. })
        | (Segment::Arc { .. }, Segment::Straight { .. }) => 0.0,
    }
}

fn straights(a: V3, b: V3, c: V3, d: V3, near: f64) -> f64 {
    let length = (b - a).norm();
    let along = (b - a) / length;
    let off = |point: V3| (point - a - along * (point - a).dot(&along)).norm();
    if off(c) > near || off(d) > near {
        return 0.0;
    }
    let (s, t) = ((c - a).dot(&along), (d - a).dot(&along));
    let shared = s.max(t).min(length) - s.min(t).max(0.0);
    if shared > near { shared } else { 0.0 }
}

fn arcs(first: &Segment, second: &Segment, near: f64) -> f64 {
    let (
        Segment::Arc {
            centre,
            radius,
            u,
            v,
            from,
            sweep,
        },
        Segment::Arc {
            centre: centre2,
            radius: radius2,
            u: u2,
            v: v2,
            from: from2,
            sweep: sweep2,
        },
    ) = (first, second)
    else {
        return 0.0;
    };
    let axes = u.cross(v).dot(&u2.cross(v2));
    if (centre - centre2).norm() > near
        || (radius - radius2).abs() > near
        || (axes.abs() - 1.0).abs() > SAME_LINE
    {
        return 0.0;
    }
    // The second arc's start and sweep in the first one's axes.
    let start_radial = u2 * real::cos(*from2) + v2 * real::sin(*from2);
    let start = real::atan2(start_radial.dot(v), start_radial.dot(u));
    let swept = if axes < 0.0 { -sweep2 } else { *sweep2 };
    let (low, high) = ordered(*from, *sweep);
    let (low2, high2) = ordered(start, swept);
    // Whole turns that can bring the second range onto the first.
    let turn = 2.0 * PI;
    let mut shared = 0.0;
    let mut shift = ((low - high2) / turn).ceil() * turn;
    while low2 + shift < high {
        shared += ((high2 + shift).min(high) - (low2 + shift).max(low)).max(0.0);
        shift += turn;
    }
    if shared * radius > near {
        shared * radius
    } else {
        0.0
    }
}

fn ordered(from: f64, sweep: f64) -> (f64, f64) {
    if sweep < 0.0 {
        (from + sweep, from)
    } else {
        (from, from + sweep)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn line(a: [f64; 3], b: [f64; 3]) -> Segment {
        Segment::Straight {
            a: V3::from(a),
            b: V3::from(b),
        }
    }

    #[test]
    fn collinear_lines_share_their_common_part() {
        let first = line([0.0, 0.0, 0.0], [3.0, 4.0, 0.0]);
        let inside = line([6.0, 8.0, 0.0], [1.5, 2.0, 0.0]);
        assert!(
            (overlap(&first, &inside, 10.0) - 2.5).abs() < 1e-12,
            "half of it"
        );
        let touching = line([3.0, 4.0, 0.0], [6.0, 8.0, 0.0]);
        assert!(overlap(&first, &touching, 10.0) < 1e-12, "end to end");
        let beside = line([0.0, 1.0, 0.0], [3.0, 5.0, 0.0]);
        assert!(overlap(&first, &beside, 10.0) < 1e-12, "parallel");
        let crossing = line([0.0, 4.0, 0.0], [3.0, 0.0, 0.0]);
        assert!(overlap(&first, &crossing, 10.0) < 1e-12, "crossing");
    }

    #[test]
    fn arcs_of_one_circle_share_their_common_part() {
        let arc = |v: V3, from: f64, sweep: f64| Segment::Arc {
            centre: V3::zeros(),
            radius: 2.0,
            u: V3::x(),
            v,
            from,
            sweep,
        };
        let upper = arc(V3::y(), 0.0, PI);
        assert!(
            (overlap(&upper, &arc(V3::y(), PI / 2.0, PI), 4.0) - PI).abs() < 1e-12,
            "a quarter"
        );
        assert!(
            overlap(&upper, &arc(V3::y(), PI, PI), 4.0) < 1e-9,
            "the lower half"
        );
        // Seen from the other side, the same upper half.
        assert!(
            (overlap(&upper, &arc(-V3::y(), 0.0, -PI), 4.0) - 2.0 * PI).abs() < 1e-12,
            "mirrored"
        );
        let around = arc(V3::y(), -4.0, 2.0 * PI);
        assert!(
            (overlap(&upper, &around, 4.0) - 2.0 * PI).abs() < 1e-12,
            "full turn"
        );
        assert!(
            overlap(&upper, &arc(V3::z(), 0.0, PI), 4.0) < 1e-12,
            "another plane"
        );
    }
}
