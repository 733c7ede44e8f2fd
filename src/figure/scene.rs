//! What a drawing of the joint shows, as data: the caller fills it, the figure room only draws it.
//!
//! Positions are in the joint frame and the note's length unit. Every number that is printed comes
//! as text from the caller, so that no figure of the drawing differs from the note's.

use crate::weld::{Segment, V3};

/// A weld group with one load case, ready to be drawn.
#[derive(Clone, Debug, Default)]
pub struct Scene {
    /// The runs, in file order.
    pub runs: Vec<RunLine>,
    /// Check points; points at one place share one mark and join their numbers.
    pub points: Vec<CheckPoint>,
    /// Origin of the joint frame, if it is to be drawn.
    pub origin: Option<V3>,
    /// Words that tell where x, y and z point, such as `forward`; an empty word draws the letter alone.
    pub axes: [String; 3],
    /// Centroid of the group.
    pub centroid: Option<V3>,
    /// Loads of the case drawn.
    pub loads: Vec<Load>,
    /// The governing point.
    pub governing: Option<Governing>,
    /// Dimensions asked for, those nearest to the joint first.
    pub dimensions: Vec<Dimension>,
    /// Outlines of the attached part, drawn thin and grey.
    pub outlines: Vec<Vec<V3>>,
    /// The note's length unit: `mm`, `m` or `in`.
    pub units: String,
    /// Whether the group is planar: drawn in the xy plane, seen from +z.
    pub planar: bool,
    /// Whether the runs are an outline in grey, under what is drawn on them.
    pub faint: bool,
    /// Vectors at points, such as stresses, drawn to one scale.
    pub vectors: Option<Vectors>,
}

/// Vectors of one kind, drawn as arrows with open heads.
#[derive(Clone, Debug)]
pub struct Vectors {
    /// Where each stands, and the vector.
    pub arrows: Vec<(V3, V3)>,
    /// Unit for the scale in the caption, such as `MPa`.
    pub unit: String,
    /// Text beside the first; empty for none.
    pub first: String,
}

/// A run of weld.
#[derive(Clone, Debug)]
pub struct RunLine {
    /// The root line as told.
    pub path: Segment,
    /// The part of it that is counted, where ends are cut off.
    pub counted: Option<Segment>,
    /// Effective throat (length).
    pub throat: f64,
    /// Text beside it, such as `upper edge, leg 6`; empty for none.
    pub label: String,
    /// Its number in the table of runs, which stands where the text finds no place.
    pub number: String,
}

/// A numbered check point.
#[derive(Clone, Debug)]
pub struct CheckPoint {
    /// Its place.
    pub at: V3,
    /// Its number.
    pub label: String,
}

/// The point that governs.
#[derive(Clone, Debug)]
pub struct Governing {
    /// Its place.
    pub at: V3,
    /// Text beside it, such as `governs, L07`.
    pub label: String,
}

/// An axis of the joint frame.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Axis {
    /// x.
    X,
    /// y.
    Y,
    /// z.
    Z,
}

impl Axis {
    /// The three axes in order.
    pub const ALL: [Self; 3] = [Self::X, Self::Y, Self::Z];

    /// Its letter.
    #[must_use]
    pub const fn letter(self) -> &'static str {
        match self {
            Self::X => "x",
            Self::Y => "y",
            Self::Z => "z",
        }
    }

    /// Its place in a vector.
    #[must_use]
    pub const fn index(self) -> usize {
        match self {
            Self::X => 0,
            Self::Y => 1,
            Self::Z => 2,
        }
    }

    /// Its unit vector.
    #[must_use]
    pub fn unit(self) -> V3 {
        let mut v = V3::zeros();
        v[self.index()] = 1.0;
        v
    }
}

/// A load: a force and a moment at a point, by components.
#[derive(Clone, Debug)]
pub struct Load {
    /// Point of application.
    pub at: V3,
    /// Its letter, such as `P`, printed in italics.
    pub label: String,
    /// Text after the letter, such as `z = 40`, where the view hides it; empty for none.
    pub aside: String,
    /// Force components; one of size 0 is not drawn.
    pub force: Vec<Component>,
    /// Moment components; one of size 0 is not drawn.
    pub moment: Vec<Component>,
    /// Text beside the broken lead line if the point stands too far out to be drawn in place and, in
    /// space, no dimension tells its place, such as `2400 from C`; empty for none.
    pub distance: String,
}

/// A component of a force or moment.
#[derive(Clone, Debug)]
pub struct Component {
    /// Its axis.
    pub axis: Axis,
    /// Its value with sign; only the sign, and whether it is 0, are drawn.
    pub value: f64,
    /// The value as printed, with its unit, such as `−4200 N`.
    pub text: String,
}

/// A dimension along an axis between two points.
#[derive(Clone, Debug)]
pub struct Dimension {
    /// First point.
    pub from: V3,
    /// Second point.
    pub to: V3,
    /// Other pairs of points that show the same distance as straight.
    pub alike: Vec<(V3, V3)>,
    /// The axis along which the distance is measured.
    pub axis: Axis,
    /// The distance as printed, perhaps with its symbol, such as `x_c = 16.2`.
    pub text: String,
    /// Whether it is left out where it would crowd the drawing.
    pub optional: bool,
}
