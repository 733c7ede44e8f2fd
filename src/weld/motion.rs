//! Rigid motions and mirrors of a weld group.
//!
//! Points move as Q p + shift, forces as Q F, moments as det(Q) Q M.

use super::{Run, Segment, V3};
use nalgebra::Matrix3;

/// A turn or a mirror `q`, followed by a shift.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Motion {
    /// Orthogonal, determinant +1 (turn) or −1 (mirror).
    pub q: Matrix3<f64>,
    /// Shift (length).
    pub shift: V3,
}

impl Motion {
    /// A turn by `angle` (rad) about the unit vector `axis` through the origin.
    ///
    /// # Source
    ///
    /// Rodrigues' formula: Q = 1 + sin φ W + (1 − cos φ) W², W the cross product with the axis.
    #[must_use]
    pub fn turn(axis: V3, angle: f64) -> Self {
        use crate::quantity::real::{cos, sin};
        let w = axis.cross_matrix();
        let q = Matrix3::identity() + w * sin(angle) + w * w * (1.0 - cos(angle));
        Self {
            q,
            shift: V3::zeros(),
        }
    }

    /// The mirror in the plane through the origin square to the unit vector `normal`.
    #[must_use]
    pub fn mirror(normal: V3) -> Self {
        Self {
            q: Matrix3::identity() - normal * normal.transpose() * 2.0,
            shift: V3::zeros(),
        }
    }

    /// The same turn or mirror with another shift.
    #[must_use]
    pub const fn then_shift(self, shift: V3) -> Self {
        Self { q: self.q, shift }
    }

    /// +1 for a turn, −1 for a mirror.
    #[must_use]
    pub fn handedness(&self) -> f64 {
        self.q.determinant().signum()
    }

    /// A point.
    #[must_use]
    pub fn point(&self, p: V3) -> V3 {
        self.q * p + self.shift
    }

    /// A direction, force or other true vector.
    #[must_use]
    pub fn vector(&self, v: V3) -> V3 {
        self.q * v
    }

    /// A moment or other axial vector.
    #[must_use]
    pub fn axial(&self, m: V3) -> V3 {
        self.q * m * self.handedness()
    }
}

impl Segment {
    /// The segment moved; under a mirror an arc keeps `u × v` on its moved normal.
    #[must_use]
    pub fn moved(&self, motion: &Motion) -> Self {
        match self {
            Self::Straight { a, b } => Self::Straight {
                a: motion.point(*a),
                b: motion.point(*b),
            },
            Self::Arc {
                centre,
                radius,
                u,
                v,
                from,
                sweep,
            } => {
                let hand = motion.handedness();
                Self::Arc {
                    centre: motion.point(*centre),
                    radius: *radius,
                    u: motion.vector(*u),
                    v: motion.vector(*v) * hand,
                    from: from * hand,
                    sweep: sweep * hand,
                }
            }
        }
    }
}

impl Run {
    /// The run moved; a mirror turns n̂ and so the sign of the toe's side.
    #[must_use]
    pub fn moved(&self, motion: &Motion) -> Self {
        Self {
            told: self.told.moved(motion),
            path: self.path.moved(motion),
            normal: motion.vector(self.normal),
            toe: self.toe.map(|side| side * motion.handedness()),
            ..self.clone()
        }
    }

    /// The same weld run through from its end to its start; its toe's side changes sign with n̂.
    #[must_use]
    pub fn reversed(&self) -> Self {
        Self {
            told: self.told.reversed(),
            path: self.path.reversed(),
            toe: self.toe.map(|side| -side),
            ends: [self.ends[1], self.ends[0]],
            ..self.clone()
        }
    }
}
