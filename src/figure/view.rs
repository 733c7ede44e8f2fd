//! The projection: flat onto the xy plane, or an isometric drawing of a group in space.
//!
//! Isometric drawing (ISO 5456-3:1996, isometric axonometry): the three axes stand 120° apart and
//! lengths along them are drawn to scale.

use nalgebra::Vector3;

use super::drawing::P2;
use super::scene::{Axis, RunLine, Scene};
use crate::quantity::real::{cos, sin, sqrt};
use crate::weld::{Segment, V3};

/// How much better the second viewpoint must show the shortest run to be preferred.
const CLEARLY_BETTER: f64 = 1.5;
/// cos 30°, the drawn direction of the level axes.
const COS_30: f64 = 0.866_025_403_784_438_6;

/// Directions of the axes on the sheet, and the scale.
#[derive(Clone, Debug)]
pub(super) struct View {
    /// Image of the unit vectors (mm per unit of length).
    images: [P2; 3],
    /// Whether z points at the reader.
    pub(super) flat: bool,
    /// Millimetres on the sheet for a unit of length along an axis.
    pub(super) scale: f64,
    /// For the caption.
    pub(super) words: String,
}

impl View {
    /// The view that suits a scene, at 1 mm a unit.
    pub(super) fn of(scene: &Scene) -> Self {
        if scene.planar {
            let images = [P2::new(1.0, 0.0), P2::new(0.0, -1.0), P2::zeros()];
            return Self {
                images,
                flat: true,
                scale: 1.0,
                words: "seen from +z".into(),
            };
        }
        let up = upright_axis(&scene.axes);
        let right = Self::isometric(up, true);
        let left = Self::isometric(up, false);
        if left.least_shown(&scene.runs) > CLEARLY_BETTER * right.least_shown(&scene.runs) {
            left
        } else {
            right
        }
    }

    /// An isometric drawing with axis `up` upright. From the right, the next axis points to the
    /// lower right and the one after to the upper right; else to the lower left and lower right.
    fn isometric(up: usize, from_right: bool) -> Self {
        let (first, second) = ((up + 1) % 3, (up + 2) % 3);
        let mut images = [P2::zeros(); 3];
        images[up] = P2::new(0.0, -1.0);
        let (a, b) = if from_right {
            (P2::new(COS_30, 0.5), P2::new(COS_30, -0.5))
        } else {
            (P2::new(-COS_30, 0.5), P2::new(COS_30, 0.5))
        };
        images[first] = a;
        images[second] = b;
        let sign = |i: usize| {
            if from_right && i == second {
                "−"
            } else {
                "+"
            }
        };
        let from: Vec<String> = Axis::ALL
            .iter()
            .map(|a| format!("{}{}", sign(a.index()), a.letter()))
            .collect();
        let words = format!(
            "isometric, seen from {}; lengths along the axes to scale",
            from.join(" ")
        );
        Self {
            images,
            flat: false,
            scale: 1.0,
            words,
        }
    }

    /// The same view at another scale.
    pub(super) fn scaled(&self, scale: f64) -> Self {
        Self {
            scale,
            ..self.clone()
        }
    }

    /// Image of a point or vector (mm).
    pub(super) fn image(&self, v: &V3) -> P2 {
        (self.images[0] * v.x + self.images[1] * v.y + self.images[2] * v.z) * self.scale
    }

    /// Direction of an axis on the sheet, of unit length; zero if it points at the reader.
    pub(super) fn direction(&self, axis: Axis) -> P2 {
        self.images[axis.index()]
    }

    /// The smallest part of its true extent that any run shows.
    fn least_shown(&self, runs: &[RunLine]) -> f64 {
        let shown = runs.iter().map(|run| match &run.path {
            Segment::Straight { a, b } => self.image(&(b - a)).norm() / (b - a).norm().max(1e-12),
            Segment::Arc { u, v, .. } => {
                let (p, q) = (self.image(u), self.image(v));
                (p.x * q.y - p.y * q.x).abs()
            }
        });
        shown.fold(f64::INFINITY, f64::min)
    }
}

/// The axis to draw upright: the one whose words say `up`, else z.
fn upright_axis(words: &[String; 3]) -> usize {
    let says_up = |text: &String| {
        text.split_whitespace()
            .any(|w| matches!(w, "up" | "upward" | "upwards"))
    };
    words.iter().position(says_up).unwrap_or(2)
}

/// A path on the sheet: its start, and cubic pieces or one straight piece.
pub(super) fn project(view: &View, path: &Segment) -> super::drawing::Path {
    use super::drawing::{Path, Piece, Stroke};
    match path {
        Segment::Straight { a, b } => {
            Path::through(&[view.image(a), view.image(b)], Stroke::black(0.0))
        }
        Segment::Arc {
            centre,
            radius,
            u,
            v,
            from,
            sweep,
        } => {
            let (c, u, v) = (
                view.image(centre),
                view.image(&(u * *radius)),
                view.image(&(v * *radius)),
            );
            let point = |p: [f64; 2]| c + u * p[0] + v * p[1];
            let curves = arc_curves(*from, *sweep);
            Path {
                pieces: curves
                    .iter()
                    .map(|[_, p, q, r]| Piece::Cubic(point(*p), point(*q), point(*r)))
                    .collect(),
                ..Path::through(&[point(curves[0][0])], Stroke::black(0.0))
            }
        }
    }
}

/// Bézier curves of an arc of the unit circle, one for at most an eighth of the turn.
///
/// Control points stand 4/3 tan(θ/4) along the tangents (the usual fit through the middle of the
/// arc): off by less than 5e-6 of the radius at 45°.
pub(super) fn arc_curves(from: f64, sweep: f64) -> Vec<[[f64; 2]; 4]> {
    const MOST: u32 = 64;
    let eighth = std::f64::consts::FRAC_PI_4;
    let count = (1..MOST)
        .find(|n| sweep.abs() <= f64::from(*n) * eighth + 1e-9)
        .unwrap_or(MOST);
    let step = sweep / f64::from(count);
    let pull = 4.0 / 3.0 * crate::quantity::real::tan(step / 4.0);
    (0..count)
        .map(|i| {
            let a = from + step * f64::from(i);
            let b = from + step * f64::from(i + 1);
            let (p, q) = ([cos(a), sin(a)], [cos(b), sin(b)]);
            [
                p,
                [p[0] - pull * p[1], p[1] + pull * p[0]],
                [q[0] + pull * q[1], q[1] - pull * q[0]],
                q,
            ]
        })
        .collect()
}

/// Points along a path, ends included: enough to bound it and to keep labels off it.
pub(super) fn samples(path: &Segment) -> Vec<V3> {
    match path {
        Segment::Straight { a, b } => vec![*a, *b],
        Segment::Arc {
            centre,
            radius,
            u,
            v,
            from,
            sweep,
        } => {
            let at = |t: f64| -> Vector3<f64> { centre + (u * cos(t) + v * sin(t)) * *radius };
            (0..=32)
                .map(|i| at(from + sweep * f64::from(i) / 32.0))
                .collect()
        }
    }
}

/// Unit vector, or x where the length is nothing.
pub(super) fn unit(v: P2) -> P2 {
    let length = sqrt(v.norm_squared());
    if length > 1e-9 { v / length } else { P2::x() }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::real::hypot;

    /// Source: the bound in the comment of `arc_curves`, at the middle of each curve and between.
    #[test]
    fn curves_stay_on_their_circle() {
        for [p, q, r, s] in arc_curves(0.3, -std::f64::consts::TAU) {
            for t in [0.2, 0.5, 0.8_f64] {
                let w = 1.0 - t;
                let at = |i: usize| {
                    w * w * w * p[i]
                        + 3.0 * w * w * t * q[i]
                        + 3.0 * w * t * t * r[i]
                        + t * t * t * s[i]
                };
                assert!(
                    (hypot(at(0), at(1)) - 1.0).abs() < 5e-6,
                    "off the circle at {t}"
                );
            }
        }
    }

    /// Source: ISO 5456-3:1996, isometric axonometry: right-handed axes 120° apart, equally scaled.
    #[test]
    fn isometric_axes_stand_120_degrees_apart() {
        for up in 0..3 {
            let view = View::isometric(up, false);
            let [x, y, z] = view.images;
            for (a, b) in [(x, y), (y, z), (z, x)] {
                assert!((a.dot(&b) + 0.5).abs() < 1e-12, "cos 120° = −1/2");
                assert!(a.x * b.y - a.y * b.x < 0.0, "counter-clockwise, y down");
            }
        }
    }

    /// Source: the joint frame is drawn as its words say: `y up` stands upright.
    #[test]
    fn the_axis_that_points_up_is_upright() {
        let words = [
            "forward".to_owned(),
            "up, off the deck".replace(',', ""),
            "outboard".to_owned(),
        ];
        assert_eq!(upright_axis(&words), 1, "y says up");
        assert_eq!(
            upright_axis(&["".into(), "".into(), "upset".into()]),
            2,
            "z by default"
        );
    }
}
