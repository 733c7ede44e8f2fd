//! Line properties of a weld group: area, centroid, second moments, and the tensor K.
//!
//! The weld is treated as a line of width t. Every sum is taken about the group's centroid, so that
//! a far origin costs no digits.

use super::group::extent;
use super::{Run, V3};
use nalgebra::Matrix3;

/// Properties of one run, with its throat.
#[derive(Clone, PartialEq, Debug)]
pub struct RunProperties {
    /// Effective throat (length).
    pub throat: f64,
    /// Length of the effective path (length).
    pub length: f64,
    /// A = t L (area).
    pub area: f64,
    /// Centroid of the run (length).
    pub centroid: V3,
    /// t ∫ ρ ρᵀ ds about the run's own centroid (length⁴).
    pub own: Matrix3<f64>,
    /// A (c − C)(c − C)ᵀ, the transfer to the group's centroid (length⁴).
    pub transfer: Matrix3<f64>,
}

impl RunProperties {
    /// Own I_xx = t ∫ (y − y_c)² ds of a planar run (length⁴).
    #[must_use]
    pub fn i_xx(&self) -> f64 {
        self.own[(1, 1)]
    }

    /// Own I_yy = t ∫ (x − x_c)² ds of a planar run (length⁴).
    #[must_use]
    pub fn i_yy(&self) -> f64 {
        self.own[(0, 0)]
    }

    /// Own I_xy = t ∫ (x − x_c)(y − y_c) ds (length⁴).
    #[must_use]
    pub fn i_xy(&self) -> f64 {
        self.own[(0, 1)]
    }
}

/// Properties of a weld group.
#[derive(Clone, PartialEq, Debug)]
pub struct LineProperties {
    /// A = Σ t L (area).
    pub area: f64,
    /// Σ L (length).
    pub length: f64,
    /// C = Σ t ∫ r ds / A (length).
    pub centroid: V3,
    /// S = Σ t ∫ ρ ρᵀ ds, ρ = r − C (length⁴).
    pub second: Matrix3<f64>,
    /// K = Σ t ∫ [(ρ·ρ) 1 − ρ ρᵀ] ds (length⁴).
    pub tensor: Matrix3<f64>,
    /// Diagonal of the box around the group (length).
    pub size: f64,
    /// The runs in order.
    pub per_run: Vec<RunProperties>,
}

impl LineProperties {
    /// I_xx = Σ t ∫ (y − y_c)² ds (length⁴).
    #[must_use]
    pub fn i_xx(&self) -> f64 {
        self.second[(1, 1)]
    }

    /// I_yy = Σ t ∫ (x − x_c)² ds (length⁴).
    #[must_use]
    pub fn i_yy(&self) -> f64 {
        self.second[(0, 0)]
    }

    /// I_xy = Σ t ∫ (x − x_c)(y − y_c) ds (length⁴).
    #[must_use]
    pub fn i_xy(&self) -> f64 {
        self.second[(0, 1)]
    }

    /// J = I_xx + I_yy, the polar second moment about z through C (length⁴).
    #[must_use]
    pub fn j(&self) -> f64 {
        self.tensor[(2, 2)]
    }
}

/// The properties of a group of runs, from the exact integrals of each; a group without area has
/// its centroid at the origin.
///
/// # Source
///
/// O. W. Blodgett, *Design of Welded Structures*, 1966, section 7.4 (the weld as a line); the
/// tensor is the inertia tensor of a line of mass t per length.
#[must_use]
pub fn line_properties(runs: &[Run]) -> LineProperties {
    let lines: Vec<_> = runs
        .iter()
        .map(|run| (run.throat, run.path.integrals()))
        .collect();
    let area: f64 = lines
        .iter()
        .map(|(throat, line)| throat * line.length)
        .sum();
    // The first run's centroid as a working origin keeps small groups far away exact.
    let origin = lines
        .first()
        .map_or_else(V3::zeros, |(_, line)| line.centroid);
    let first: V3 = lines
        .iter()
        .map(|(throat, line)| (line.centroid - origin) * (throat * line.length))
        .sum();
    let centroid = if area > 0.0 {
        origin + first / area
    } else {
        V3::zeros()
    };
    let per_run: Vec<RunProperties> = lines
        .iter()
        .map(|(throat, line)| {
            let shift = line.centroid - centroid;
            RunProperties {
                throat: *throat,
                length: line.length,
                area: throat * line.length,
                centroid: line.centroid,
                own: line.second * *throat,
                transfer: shift * shift.transpose() * (throat * line.length),
            }
        })
        .collect();
    let second: Matrix3<f64> = per_run.iter().map(|run| run.own + run.transfer).sum();
    LineProperties {
        area,
        length: per_run.iter().map(|run| run.length).sum(),
        centroid,
        second,
        tensor: Matrix3::identity() * second.trace() - second,
        size: extent(runs.iter().map(|run| &run.path)),
        per_run,
    }
}
