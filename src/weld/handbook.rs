//! Unit line properties of the handbook patterns in closed form: a second opinion on the sums.
//!
//! They hold for welds of one throat along the whole outline, in the pattern's own axes (x across
//! the width b, y along the depth d, origin at the lower left corner; at the centre for the circle
//! and the cruciform). They share no code with the sums over runs.

use crate::joint::Shape;
use std::f64::consts::PI;

/// Unit line properties in the pattern's own axes.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct UnitLine {
    /// Length of weld (length).
    pub length: f64,
    /// Centroid (length).
    pub centroid: [f64; 2],
    /// ∫ (y − y_c)² ds (length³).
    pub i_xx: f64,
    /// ∫ (x − x_c)² ds (length³).
    pub i_yy: f64,
    /// ∫ (x − x_c)(y − y_c) ds (length³).
    pub i_xy: f64,
    /// J_u = ∫ r² ds about the centroid (length³).
    pub j: f64,
}

/// The closed forms as plain algebra in `b`, `d`, `r`, in the order of [`UnitLine`]:
/// length, x̄, ȳ, I_u,xx, I_u,yy, I_u,xy, J_u.
pub type Algebra = [&'static str; 7];

/// Unit line properties of a pattern of width `b`, depth `d` and radius `r` (lengths).
///
/// `doubled` means two coincident beads: on the stem of a tee, on the web of an I outline, on each
/// line of a single line, two parallel lines and a cruciform. `None` where the handbooks have no
/// such doubled pattern. Dimensions that a shape does not take are not read.
///
/// # Source
///
/// R. G. Budynas, J. K. Nisbett, *Shigley's Mechanical Engineering Design*, tables 9-1 and 9-2
/// (single line, parallel lines, angle, channel, box, circle; tee and I outline with two beads on
/// the stem or web); O. W. Blodgett, *Design of Welded Structures*, section 7.4, table 5. The
/// single-bead tee and I outline, the cruciform and every product of inertia are derived.
#[must_use]
pub fn unit_line(shape: Shape, doubled: bool, b: f64, d: f64, r: f64) -> Option<UnitLine> {
    let beads = if doubled { 2.0 } else { 1.0 };
    let (b2, b3, d2, d3) = (b * b, b * b * b, d * d, d * d * d);
    let sum = |length, centroid, i_xx, i_yy, i_xy| UnitLine {
        length,
        centroid,
        i_xx,
        i_yy,
        i_xy,
        j: i_xx + i_yy,
    };
    Some(match (shape, doubled) {
        (Shape::SingleLine, _) => sum(beads * d, [0.0, d / 2.0], beads * d3 / 12.0, 0.0, 0.0),
        (Shape::TwoParallelLines, _) => UnitLine {
            j: beads * d * (3.0 * b2 + d2) / 6.0,
            ..sum(
                beads * 2.0 * d,
                [b / 2.0, d / 2.0],
                beads * d3 / 6.0,
                beads * b2 * d / 2.0,
                0.0,
            )
        },
        (Shape::Angle, false) => {
            let l = b + d;
            UnitLine {
                j: (l * l * l * l - 6.0 * b2 * d2) / (12.0 * l),
                ..sum(
                    l,
                    [b2 / (2.0 * l), d2 / (2.0 * l)],
                    d3 * (4.0 * b + d) / (12.0 * l),
                    b3 * (b + 4.0 * d) / (12.0 * l),
                    -b2 * d2 / (4.0 * l),
                )
            }
        }
        (Shape::Channel, false) => {
            let l = 2.0 * b + d;
            UnitLine {
                j: (8.0 * b3 + 6.0 * b * d2 + d3) / 12.0 - b2 * b2 / l,
                ..sum(
                    l,
                    [b2 / l, d / 2.0],
                    d2 * (6.0 * b + d) / 12.0,
                    b3 * (b + 2.0 * d) / (3.0 * l),
                    0.0,
                )
            }
        }
        (Shape::Tee, false) => {
            let l = b + d;
            let y = d * (2.0 * b + d) / (2.0 * l);
            sum(
                l,
                [b / 2.0, y],
                d3 * (4.0 * b + d) / (12.0 * l),
                b3 / 12.0,
                0.0,
            )
        }
        (Shape::Tee, true) => {
            let l = b + 2.0 * d;
            let y = d * (b + d) / l;
            sum(
                l,
                [b / 2.0, y],
                d3 * (2.0 * b + d) / (3.0 * l),
                b3 / 12.0,
                0.0,
            )
        }
        (Shape::IOutline, false) => sum(
            2.0 * b + d,
            [b / 2.0, d / 2.0],
            d2 * (6.0 * b + d) / 12.0,
            b3 / 6.0,
            0.0,
        ),
        (Shape::IOutline, true) => sum(
            2.0 * (b + d),
            [b / 2.0, d / 2.0],
            d2 * (3.0 * b + d) / 6.0,
            b3 / 6.0,
            0.0,
        ),
        (Shape::Cruciform, _) => sum(
            beads * (b + d),
            [0.0, 0.0],
            beads * d3 / 12.0,
            beads * b3 / 12.0,
            0.0,
        ),
        (Shape::Box, false) => {
            let s = b + d;
            UnitLine {
                j: s * s * s / 6.0,
                ..sum(
                    2.0 * s,
                    [b / 2.0, d / 2.0],
                    d2 * (3.0 * b + d) / 6.0,
                    b2 * (b + 3.0 * d) / 6.0,
                    0.0,
                )
            }
        }
        (Shape::Circle, false) => {
            let cube = r * r * r;
            UnitLine {
                j: 2.0 * PI * cube,
                ..sum(2.0 * PI * r, [0.0, 0.0], PI * cube, PI * cube, 0.0)
            }
        }
        (Shape::Angle | Shape::Channel | Shape::Box | Shape::Circle, true) => return None,
    })
}

/// The same closed forms as plain algebra, for a note that prints them.
///
/// # Source
///
/// As [`unit_line`]; a test evaluates each and compares.
#[must_use]
pub const fn algebra(shape: Shape, doubled: bool) -> Option<Algebra> {
    Some(match (shape, doubled) {
        (Shape::SingleLine, false) => ["d", "0", "d/2", "d^3/12", "0", "0", "d^3/12"],
        (Shape::SingleLine, true) => ["2*d", "0", "d/2", "d^3/6", "0", "0", "d^3/6"],
        (Shape::TwoParallelLines, false) => [
            "2*d",
            "b/2",
            "d/2",
            "d^3/6",
            "b^2*d/2",
            "0",
            "d*(3*b^2+d^2)/6",
        ],
        (Shape::TwoParallelLines, true) => [
            "4*d",
            "b/2",
            "d/2",
            "d^3/3",
            "b^2*d",
            "0",
            "d*(3*b^2+d^2)/3",
        ],
        (Shape::Angle, false) => [
            "b+d",
            "b^2/(2*(b+d))",
            "d^2/(2*(b+d))",
            "d^3*(4*b+d)/(12*(b+d))",
            "b^3*(b+4*d)/(12*(b+d))",
            "-(b^2*d^2)/(4*(b+d))",
            "((b+d)^4-6*b^2*d^2)/(12*(b+d))",
        ],
        (Shape::Channel, false) => [
            "2*b+d",
            "b^2/(2*b+d)",
            "d/2",
            "d^2*(6*b+d)/12",
            "b^3*(b+2*d)/(3*(2*b+d))",
            "0",
            "(8*b^3+6*b*d^2+d^3)/12-b^4/(2*b+d)",
        ],
        (Shape::Tee, false) => [
            "b+d",
            "b/2",
            "d*(2*b+d)/(2*(b+d))",
            "d^3*(4*b+d)/(12*(b+d))",
            "b^3/12",
            "0",
            "d^3*(4*b+d)/(12*(b+d))+b^3/12",
        ],
        (Shape::Tee, true) => [
            "b+2*d",
            "b/2",
            "d*(b+d)/(b+2*d)",
            "d^3*(2*b+d)/(3*(b+2*d))",
            "b^3/12",
            "0",
            "d^3*(2*b+d)/(3*(b+2*d))+b^3/12",
        ],
        (Shape::IOutline, false) => [
            "2*b+d",
            "b/2",
            "d/2",
            "d^2*(6*b+d)/12",
            "b^3/6",
            "0",
            "d^2*(6*b+d)/12+b^3/6",
        ],
        (Shape::IOutline, true) => [
            "2*(b+d)",
            "b/2",
            "d/2",
            "d^2*(3*b+d)/6",
            "b^3/6",
            "0",
            "d^2*(3*b+d)/6+b^3/6",
        ],
        (Shape::Cruciform, false) => ["b+d", "0", "0", "d^3/12", "b^3/12", "0", "(b^3+d^3)/12"],
        (Shape::Cruciform, true) => ["2*(b+d)", "0", "0", "d^3/6", "b^3/6", "0", "(b^3+d^3)/6"],
        (Shape::Box, false) => [
            "2*(b+d)",
            "b/2",
            "d/2",
            "d^2*(3*b+d)/6",
            "b^2*(b+3*d)/6",
            "0",
            "(b+d)^3/6",
        ],
        (Shape::Circle, false) => ["2*pi*r", "0", "0", "pi*r^3", "pi*r^3", "0", "2*pi*r^3"],
        (Shape::Angle | Shape::Channel | Shape::Box | Shape::Circle, true) => return None,
    })
}
