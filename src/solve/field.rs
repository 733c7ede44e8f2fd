//! From a load to the stress field of the group: f(r) = F/A + θ × (r − C), K θ = M_C.

use super::regime::{Classified, Regime, classify};
use crate::load::Action;
use crate::weld::{LineProperties, Run, V3};
use nalgebra::{Cholesky, Const, Matrix3};
use thiserror::Error;

/// A stress field, linear in position.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Field {
    /// F/A (stress).
    pub mean: V3,
    /// θ = K⁻¹ M_C (stress per length).
    pub twist: V3,
    /// C (length).
    pub centroid: V3,
}

impl Field {
    /// The force per throat area at a point (stress).
    #[must_use]
    pub fn at(&self, r: V3) -> V3 {
        self.mean + self.twist.cross(&(r - self.centroid))
    }
}

/// Why a load has no stress field.
#[derive(Clone, Copy, PartialEq, Debug, Error)]
pub enum Unresisted {
    /// No throat area.
    #[error("the group has no throat area")]
    NoArea,
    /// A moment about the one line on which the group lies.
    #[error(
        "the moment {moment:.4e} about the line of the welds, along ({:.4}, {:.4}, {:.4}), finds no \
         resistance: bending of a weld about its own root is no load path",
        u.x, u.y, u.z
    )]
    AboutLine {
        /// Moment about the line through the centroid (moment).
        moment: f64,
        /// Direction of the line, unit.
        u: V3,
        /// A point of the line: the centroid (length).
        at: V3,
    },
    /// A moment on a point.
    #[error("the moment {moment:.4e} finds no resistance: the group is a point")]
    OnPoint {
        /// Magnitude of the moment about the point (moment).
        moment: f64,
        /// The point (length).
        at: V3,
    },
    /// K θ misses the moment by more than the tolerance.
    #[error("K times the twist misses the moment by {residual:.3e}, more than {allowed:.3e}")]
    Inaccurate {
        /// |K θ − M_C| (moment).
        residual: f64,
        /// What is allowed (moment).
        allowed: f64,
    },
}

/// What of the moment may stay unresisted, as a part of max(|M_C|, |F| L).
const RESIDUAL: f64 = 1e-9;

/// How a group resists: its properties with K factorised once.
#[derive(Clone, Debug)]
pub struct Resistance {
    /// A (area).
    pub area: f64,
    /// C (length).
    pub centroid: V3,
    /// K (length⁴).
    pub tensor: Matrix3<f64>,
    /// Diagonal of the box around the group (length).
    pub size: f64,
    /// Regime of the group.
    pub class: Classified,
    inverse: Inverse,
}

/// K⁻¹ in the directions that resist.
#[derive(Clone, Debug)]
enum Inverse {
    Full(Cholesky<f64, Const<3>>),
    /// I_L = Σ t ∫ s² ds of a line along `u`.
    Line {
        u: V3,
        i_l: f64,
    },
    None,
}

impl Resistance {
    /// Factorises the tensor of a group.
    #[must_use]
    pub fn new(runs: &[Run], properties: &LineProperties) -> Self {
        let class = classify(runs, properties);
        let inverse = match class.regime {
            Regime::Planar | Regime::Space => properties
                .tensor
                .cholesky()
                .map_or(Inverse::None, Inverse::Full),
            Regime::Collinear { u } => Inverse::Line {
                u,
                i_l: (properties.second * u).dot(&u),
            },
            Regime::Point => Inverse::None,
        };
        Self {
            area: properties.area,
            centroid: properties.centroid,
            tensor: properties.tensor,
            size: properties.size,
            class,
            inverse,
        }
    }

    /// The stress field under `force` and the moment `moment` about the centroid.
    ///
    /// A line along `u` takes θ = M_⊥/I_L, so that f = F/A + (M_C × u) s/I_L.
    ///
    /// # Errors
    ///
    /// [`Unresisted`] if |K θ − M_C| exceeds 1e-9 max(|M_C|, |F| L), naming the moment and the
    /// line, or if the group has no area.
    pub fn field(&self, force: V3, moment: V3) -> Result<Field, Unresisted> {
        if self.area.is_nan() || self.area <= 0.0 {
            return Err(Unresisted::NoArea);
        }
        let twist = match &self.inverse {
            Inverse::Full(factor) => {
                let first = factor.solve(&moment);
                // One refinement step takes back what a slender group costs in digits.
                first + factor.solve(&(moment - self.tensor * first))
            }
            Inverse::Line { u, i_l } => (moment - u * u.dot(&moment)) / *i_l,
            Inverse::None => V3::zeros(),
        };
        self.check(force, moment, twist)?;
        Ok(Field {
            mean: force / self.area,
            twist,
            centroid: self.centroid,
        })
    }

    /// The stress field of an action.
    ///
    /// # Errors
    ///
    /// As [`Self::field`].
    pub fn field_of(&self, action: &Action) -> Result<Field, Unresisted> {
        let (force, moment) = action.about(self.centroid);
        self.field(force, moment)
    }

    fn check(&self, force: V3, moment: V3, twist: V3) -> Result<(), Unresisted> {
        let residual = (self.tensor * twist - moment).norm();
        let allowed = RESIDUAL * moment.norm().max(force.norm() * self.size);
        if residual <= allowed {
            return Ok(());
        }
        let at = self.centroid;
        Err(match &self.inverse {
            Inverse::Full(_) => Unresisted::Inaccurate { residual, allowed },
            Inverse::Line { u, .. } => Unresisted::AboutLine {
                moment: moment.dot(u),
                u: *u,
                at,
            },
            Inverse::None => Unresisted::OnPoint {
                moment: moment.norm(),
                at,
            },
        })
    }
}
