//! Runs with their effective throats, and the group they make.
//!
//! Turns what the joint file says ([`crate::joint::RunSpec`]) into paths with a constant effective
//! throat, placed at the root. Vectors are in the joint frame, lengths in the printing set.

mod ends;
mod error;
mod group;
pub mod handbook;
mod motion;
mod overlap;
mod path;
mod properties;
mod segment;
mod throat;
mod toe;
mod twins;

pub use error::{WeldError, WeldErrorKind, WeldFaults};
pub use group::{lay_runs, lay_weld};
pub use motion::Motion;
pub use overlap::overlap;
pub use properties::{LineProperties, RunProperties, line_properties};
pub use segment::LineIntegrals;
pub use throat::{FitUp, GAP_FREE_IN, GAP_LIMIT_IN, Size, inch, throat_rule};

use nalgebra::Vector3;

/// A vector or point in the joint frame.
pub type V3 = Vector3<f64>;

/// A smooth piece of a root line.
#[derive(Clone, PartialEq, Debug)]
pub enum Segment {
    /// From `a` to `b`.
    Straight {
        /// Start.
        a: V3,
        /// End.
        b: V3,
    },
    /// Arc: `centre + radius (cos θ u + sin θ v)`, θ from `from` over `sweep`.
    Arc {
        /// Centre.
        centre: V3,
        /// Radius (length).
        radius: f64,
        /// First axis of its plane, unit.
        u: V3,
        /// Second axis of its plane, unit, square to `u`; `u × v` is the run's normal.
        v: V3,
        /// Start angle (rad).
        from: f64,
        /// Swept angle, signed (rad).
        sweep: f64,
    },
}

/// How the effective throat follows from what was told. All lengths in the printing set.
#[derive(Clone, PartialEq, Debug)]
pub enum ThroatRule {
    /// Equal legs along the faces: t = (h − g) cos(ψ/2) + extra.
    EqualLegs {
        /// Leg as told.
        leg: f64,
        /// Gap taken off the leg: 0 at or under the threshold.
        gap: f64,
        /// Dihedral angle (rad).
        angle: f64,
        /// Deep-penetration allowance, 0 if none.
        extra: f64,
    },
    /// Legs square to the faces: t = (W − g)/(2 sin(ψ/2)) + extra.
    SquareLegs {
        /// Leg as told.
        leg: f64,
        /// Gap taken off the leg.
        gap: f64,
        /// Dihedral angle (rad).
        angle: f64,
        /// Deep-penetration allowance, 0 if none.
        extra: f64,
    },
    /// Unequal legs at a right angle: t = h1 h2/√(h1² + h2²) + extra.
    UnequalLegs {
        /// Leg on the base part as told.
        on_base: f64,
        /// Leg on the attached part as told.
        on_attached: f64,
        /// Gap taken off both legs.
        gap: f64,
        /// Deep-penetration allowance, 0 if none.
        extra: f64,
    },
    /// The throat as stated.
    Stated {
        /// Throat.
        throat: f64,
    },
    /// Partial penetration, the stated effective throat.
    Partial {
        /// Throat.
        throat: f64,
    },
    /// Complete penetration: the thickness of part `part`.
    Complete {
        /// Thickness.
        thickness: f64,
        /// Index of the part in the joint.
        part: usize,
    },
}

/// What an end of a run does, once the whole group is known.
#[derive(Clone, Copy, PartialEq, Debug)]
pub enum End {
    /// The bead goes on: a corner, a return, a closed circle.
    Continuous,
    /// Full size up to the end.
    Full,
    /// A stop, shortened by `less` (length).
    Stop {
        /// Shortening.
        less: f64,
        /// Whether it is one leg (true) or one throat (false).
        leg: bool,
    },
}

/// A run with its effective throat.
#[derive(Clone, PartialEq, Debug)]
pub struct Run {
    /// Name, unique in the group; beads and legs of one spec add a number or a side.
    pub name: String,
    /// Index of the spec it came from.
    pub spec: usize,
    /// The root as told.
    pub told: Segment,
    /// The root that enters the properties, shortened at stops.
    pub path: Segment,
    /// Effective throat (length).
    pub throat: f64,
    /// How the throat follows.
    pub rule: ThroatRule,
    /// Faying normal, unit.
    pub normal: V3,
    /// Side of the toe along n̂ = ẑ × t̂: +1, −1, or `None` where the file does not say.
    pub toe: Option<f64>,
    /// Dihedral angle between the faces (rad).
    pub angle: f64,
    /// Index of the attached part and the base part.
    pub joins: [usize; 2],
    /// Start and end.
    pub ends: [End; 2],
    /// Whether it is one of two beads on opposite sides of the attached plate.
    pub one_of_two: bool,
}
