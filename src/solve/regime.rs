//! What kind of group the runs make: planar, in space, on one line, or a point.

use crate::quantity::real;
use crate::weld::{LineProperties, Run, V3};

/// The directions in which a group resists moment, by the rank of its tensor K.
#[derive(Clone, Copy, PartialEq, Debug)]
pub enum Regime {
    /// All runs in one plane z = const with normals +z; the scalar formulas of the planar line method hold.
    Planar,
    /// Any other group that resists moment about every axis.
    Space,
    /// All runs on one line along the unit vector `u`: no moment about that line is resisted.
    Collinear {
        /// Direction of the line, unit.
        u: V3,
    },
    /// A point, which resists no moment.
    Point,
}

/// A regime and how near it is to a lesser one.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Classified {
    /// The regime.
    pub regime: Regime,
    /// √(λmin/λmax) of K; 0 for a line or a point.
    pub ratio: f64,
    /// Whether `ratio` of a full group is under [`WARN_BELOW`]: the group is nearly a line.
    pub is_slender: bool,
}

/// Ratio of eigenvalues of K under which a direction does not resist.
pub const RANK_RATIO: f64 = 1e-12;
/// √(λmin/λmax) under which a group is called slender.
pub const WARN_BELOW: f64 = 0.01;
/// Spread of z, as a part of the group's size, within which a group is planar.
const PLANAR_WITHIN: f64 = 1e-9;

/// Classifies a group by the eigenvalues of K.
///
/// A group whose extent is lost in the rounding of its own coordinates is a point.
#[must_use]
pub fn classify(runs: &[Run], properties: &LineProperties) -> Classified {
    let eigen = properties.tensor.symmetric_eigen();
    let least = eigen.eigenvalues.imin();
    let (low, high) = (eigen.eigenvalues[least], eigen.eigenvalues.max());
    let rounding = RANK_RATIO * properties.centroid.norm();
    if high.is_nan() || high <= properties.area * rounding * rounding {
        return Classified {
            regime: Regime::Point,
            ratio: 0.0,
            is_slender: false,
        };
    }
    if low < RANK_RATIO * high {
        let u = line_direction(runs, eigen.eigenvectors.column(least).into_owned());
        return Classified {
            regime: Regime::Collinear { u },
            ratio: 0.0,
            is_slender: false,
        };
    }
    let ratio = real::sqrt(low / high);
    let regime = if is_planar(runs, properties) {
        Regime::Planar
    } else {
        Regime::Space
    };
    Classified {
        regime,
        ratio,
        is_slender: ratio < WARN_BELOW,
    }
}

/// The direction of the first run, which on a line is exact; the eigenvector where there is none.
fn line_direction(runs: &[Run], eigenvector: V3) -> V3 {
    runs.iter()
        .find_map(|run| run.path.rate(0.5).try_normalize(f64::MIN_POSITIVE))
        .unwrap_or_else(|| eigenvector.normalize())
}

fn is_planar(runs: &[Run], properties: &LineProperties) -> bool {
    let near = PLANAR_WITHIN * properties.size + RANK_RATIO * properties.centroid.z.abs();
    runs.iter().all(|run| {
        let level = |p: f64| (run.path.point(p).z - properties.centroid.z).abs() <= near;
        let upright = (run.normal - V3::z()).norm() <= PLANAR_WITHIN;
        upright && [0.0, 1.0].into_iter().chain(run.path.extremes()).all(level)
    })
}
