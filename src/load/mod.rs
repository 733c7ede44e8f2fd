//! Load cases as actions on the weld group in the joint frame.
//!
//! Turns cases in frames of their own into the joint frame. Factors and combinations are left to
//! the cases as told; stresses to [`crate::solve`].

use crate::joint::{Case, LoadFrame, Loads, Triple};
use crate::source::Place;
use crate::weld::{Motion, V3};
use nalgebra::Matrix3;
use thiserror::Error;

/// A force and a moment ON the weld group FROM the attached part, in the joint frame.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Action {
    /// Force (force).
    pub force: V3,
    /// Moment about `at`, right-hand rule (moment).
    pub moment: V3,
    /// Point of application (length).
    pub at: V3,
}

/// A frame whose axes are no right-handed orthonormal set.
#[derive(Clone, PartialEq, Debug, Error)]
pub enum FrameError {
    /// The axes are not of unit length and square to each other.
    #[error(
        "the axes of frame `{name}` miss unit length or squareness by {miss:.3e}, but may miss them by 1e-6"
    )]
    NotOrthonormal {
        /// Name of the frame.
        name: String,
        /// Largest entry of RᵀR − 1.
        miss: f64,
        /// Where the frame is told.
        place: Place,
    },
    /// The axes are left-handed.
    #[error("the axes of frame `{name}` are left-handed")]
    LeftHanded {
        /// Name of the frame.
        name: String,
        /// Where the frame is told.
        place: Place,
    },
}

/// Entry of RᵀR − 1 up to which told axes count as orthonormal.
const ORTHONORMAL_WITHIN: f64 = 1e-6;

/// A load's frame: v_joint = R v, p_joint = o + R p.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Frame {
    /// R: the frame's axes as columns in the joint frame, orthonormal.
    pub r: Matrix3<f64>,
    /// o: its origin in the joint frame (length).
    pub origin: V3,
}

impl Frame {
    /// Reads a told frame and makes its axes exactly orthonormal.
    ///
    /// # Errors
    ///
    /// [`FrameError`] if the axes as told are not orthonormal to 1e-6 or left-handed.
    pub fn new(told: &LoadFrame) -> Result<Self, FrameError> {
        let columns = told.axes.each_ref().map(vector);
        let r = Matrix3::from_columns(&columns);
        let (name, place) = (told.name.value.clone(), told.name.place.clone());
        let miss = (r.transpose() * r - Matrix3::identity()).amax();
        if miss.is_nan() || miss > ORTHONORMAL_WITHIN {
            return Err(FrameError::NotOrthonormal { name, miss, place });
        }
        if r.determinant() < 0.0 {
            return Err(FrameError::LeftHanded { name, place });
        }
        Ok(Self {
            r: nearest_rotation(r),
            origin: vector(&told.origin),
        })
    }
}

/// The rotation nearest to a matrix that is one to 1e-6.
///
/// Newton's iteration for the polar factor, R ← R (3 − RᵀR)/2, doubles the digits at each step;
/// three steps reach the last bit from 1e-6. It favours no axis.
///
/// # Source
///
/// N. J. Higham, *Functions of Matrices*, SIAM 2008, section 8.3 (Newton–Schulz iteration).
fn nearest_rotation(told: Matrix3<f64>) -> Matrix3<f64> {
    (0..3).fold(told, |r, _| {
        r * (Matrix3::identity() * 3.0 - r.transpose() * r) * 0.5
    })
}

fn vector(triple: &Triple) -> V3 {
    V3::from(triple.values())
}

/// The action of one case in the joint frame.
///
/// # Errors
///
/// [`FrameError`] of its frame.
pub fn action(case: &Case) -> Result<Action, FrameError> {
    let (force, moment, at) = (vector(&case.force), vector(&case.moment), vector(&case.at));
    let Some(told) = &case.frame else {
        return Ok(Action { force, moment, at });
    };
    let frame = Frame::new(told)?;
    Ok(Action {
        force: frame.r * force,
        moment: frame.r * moment,
        at: frame.origin + frame.r * at,
    })
}

/// The actions of all cases in the joint frame, in file order.
///
/// # Errors
///
/// [`FrameError`] of the first case whose frame is refused.
pub fn actions(loads: &Loads) -> Result<Vec<Action>, FrameError> {
    loads.cases.iter().map(action).collect()
}

impl Action {
    /// The force and the moment about another point: M_C = M + (P − C) × F.
    #[must_use]
    pub fn about(&self, c: V3) -> (V3, V3) {
        (self.force, self.moment + (self.at - c).cross(&self.force))
    }

    /// The action moved with the joint: F → Q F, M → det(Q) Q M, P → Q P + shift.
    #[must_use]
    pub fn moved(&self, motion: &Motion) -> Self {
        Self {
            force: motion.vector(self.force),
            moment: motion.axial(self.moment),
            at: motion.point(self.at),
        }
    }
}
