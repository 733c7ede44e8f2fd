//! What the user said of one joint: validated, in units, every value with its place.
//!
//! Holds and reads the joint file: one joint, one file, and the project file that joints share.
//! Computes no geometry and no stress.

pub mod keys;
mod project;
mod read;

pub use project::{ProjectFile, read_project, read_project_node};
pub use read::{read_joint, read_joint_node, read_quantity, read_triple};

use crate::quantity::{Given, UnitSet};
use crate::source::{Place, Told};
use chrono::NaiveDate;

/// A quantity with its place.
pub type GivenAt = Told<Given>;

/// A point or vector as typed: three quantities (a planar file may leave z out, which reads as 0).
#[derive(Clone, PartialEq, Debug)]
pub struct Triple {
    /// The x, y, z components.
    pub parts: [Given; 3],
    /// Where the list stands.
    pub place: Place,
}

impl Triple {
    /// The values in the printing set.
    #[must_use]
    pub fn values(&self) -> [f64; 3] {
        [
            self.parts[0].value,
            self.parts[1].value,
            self.parts[2].value,
        ]
    }
}

/// One joint file.
#[derive(Clone, Debug)]
pub struct Joint {
    /// Number of the note, such as `SN-104`.
    pub note: Told<String>,
    /// Title of the note.
    pub title: Told<String>,
    /// Issue letter or number.
    pub revision: Told<String>,
    /// Date of the issue, as stated; the program never asks the clock.
    pub date: Told<NaiveDate>,
    /// Drawing reference.
    pub drawing: Option<Told<String>>,
    /// What the joint belongs to, such as `launch mast`.
    pub item: Option<Told<String>>,
    /// What the note is for, in the user's words.
    pub purpose: Option<Told<String>>,
    /// The printing set.
    pub units: Told<UnitSet>,
    /// Page size.
    pub paper: Paper,
    /// Words for the origin and the axes.
    pub frame: FrameWords,
    /// Parts joined, in file order.
    pub parts: Vec<Part>,
    /// Filler metal.
    pub filler: Option<Filler>,
    /// The weld group.
    pub weld: WeldSpec,
    /// Load cases.
    pub loads: Loads,
    /// Checks asked for.
    pub checks: Vec<CheckSpec>,
    /// Assumptions, in file order.
    pub assumptions: Vec<Assumption>,
    /// Cautions of this joint, besides the usual ones.
    pub cautions: Vec<Told<String>>,
    /// What was looked at elsewhere: failure paths excluded from this note.
    pub excluded: Vec<Exclusion>,
    /// History of issues.
    pub changes: Vec<Change>,
    /// Roles that sign, in order, such as `prepared`, `checked`, `approved`.
    pub signatures: Vec<Told<String>>,
}

/// Page size of the note.
#[derive(Clone, Copy, PartialEq, Eq, Debug, Default)]
pub enum Paper {
    /// ISO 216 A4.
    #[default]
    A4,
    /// US Letter.
    UsLetter,
}

/// Words that describe the joint frame.
#[derive(Clone, Debug)]
pub struct FrameWords {
    /// Where the origin is.
    pub origin: Told<String>,
    /// Where x, y, z point.
    pub axes: [Option<Told<String>>; 3],
}

/// A part joined by the weld.
#[derive(Clone, Debug)]
pub struct Part {
    /// Its name (the key in the file).
    pub name: Told<String>,
    /// Material as named, such as `S355J2`.
    pub material: Told<String>,
    /// Thickness at the weld (length).
    pub thickness: Option<GivenAt>,
    /// Yield strength (stress).
    pub f_y: Option<GivenAt>,
    /// Ultimate strength (stress).
    pub f_u: Option<GivenAt>,
    /// Other named quantities a sheet may need, such as `F_su`, in file order.
    pub more: Vec<(Told<String>, RawQuantity)>,
    /// Where the strengths come from; without it they are printed as to be verified.
    pub source: Option<Told<String>>,
    /// Whether the user marked the source as still to be verified.
    pub to_be_verified: bool,
    /// Where the part's entry stands.
    pub place: Place,
}

/// Filler metal.
#[derive(Clone, Debug)]
pub struct Filler {
    /// Designation.
    pub name: Told<String>,
    /// Ultimate strength (stress).
    pub f_u: Option<GivenAt>,
    /// Other named quantities a sheet may need, such as an allowable.
    pub more: Vec<(Told<String>, RawQuantity)>,
    /// Where the strengths come from.
    pub source: Option<Told<String>>,
    /// Whether the user marked the source as still to be verified.
    pub to_be_verified: bool,
    /// Where the entry stands.
    pub place: Place,
}

/// A scalar kept as text, to be read as a quantity of the kind that a sheet declares.
pub type RawQuantity = Told<String>;

/// The weld group as told: runs in file order, patterns already laid out as runs.
#[derive(Clone, Debug)]
pub struct WeldSpec {
    /// Runs.
    pub runs: Vec<RunSpec>,
    /// The pattern the runs came from, for the handbook second opinion.
    pub pattern: Option<PatternSpec>,
}

/// A run as told.
#[derive(Clone, Debug)]
pub struct RunSpec {
    /// Name, unique in the file.
    pub name: Told<String>,
    /// Path of the root.
    pub path: PathSpec,
    /// Size and kind.
    pub size: SizeSpec,
    /// Dihedral angle between the faces (rad); 90° if not told.
    pub between: Option<GivenAt>,
    /// Root gap (length).
    pub gap: Option<GivenAt>,
    /// Allowance on the throat for deep penetration (length), and the qualification record.
    pub penetration: Option<(GivenAt, Told<String>)>,
    /// Side of the run on which the fillet stands.
    pub toe: Option<Told<ToeSpec>>,
    /// Both sides of the attached plate: beads placed coincident, or apart by a length.
    pub both_sides: Option<Told<Option<Given>>>,
    /// Stitches: bead length, pitch (lengths).
    pub stitch: Option<Stitch>,
    /// Faying normal; +z if not told.
    pub normal: Option<Triple>,
    /// Names of the attached part and the base part.
    pub joins: [Told<String>; 2],
    /// What each free end does; `None` where the file does not say.
    pub ends: [Option<Told<EndSpec>>; 2],
    /// Where the run's entry stands.
    pub place: Place,
}

/// Path of a root.
#[derive(Clone, Debug)]
pub enum PathSpec {
    /// From one point to another.
    Straight([Triple; 2]),
    /// Corner points of straight legs, at least three; `closed` joins the last to the first.
    Polyline {
        /// Points.
        points: Vec<Triple>,
        /// Whether it closes.
        closed: bool,
    },
    /// Arc in the plane square to `normal` (of the run).
    Arc {
        /// Centre.
        centre: Triple,
        /// Radius (length).
        radius: GivenAt,
        /// Start angle from the plane's first axis (rad).
        from: GivenAt,
        /// Swept angle, positive by the right hand about the normal (rad).
        sweep: GivenAt,
    },
    /// Full circle in the plane square to `normal` (of the run).
    Circle {
        /// Centre.
        centre: Triple,
        /// Radius (length).
        radius: GivenAt,
    },
}

/// Size and kind of a weld.
#[derive(Clone, Debug)]
pub enum SizeSpec {
    /// Fillet of equal legs.
    Fillet {
        /// Leg (length).
        leg: GivenAt,
        /// How the leg is measured.
        measured: LegMeasure,
    },
    /// Fillet of unequal legs: on the base part, on the attached part (lengths).
    Unequal {
        /// Leg on the base part.
        on_base: GivenAt,
        /// Leg on the attached part.
        on_attached: GivenAt,
    },
    /// Effective throat as stated (length), with the leg if the file gives it for size rules.
    Throat {
        /// Throat.
        throat: GivenAt,
        /// Leg, if told.
        leg: Option<GivenAt>,
    },
    /// Partial penetration with the stated effective throat (length).
    Partial {
        /// Effective throat.
        throat: GivenAt,
    },
    /// Complete penetration; `tee` takes the attached part's thickness, else the thinner part's.
    Complete {
        /// Whether the joint is a tee.
        tee: bool,
        /// Where it is told.
        place: Place,
    },
}

/// How a fillet's leg is measured at a skewed angle.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum LegMeasure {
    /// Along each face: t = h cos(ψ/2).
    AlongFaces,
    /// Square to the other face: t = W/(2 sin(ψ/2)).
    SquareToFace,
}

/// The side of a run on which its fillet's toe (on the base) lies.
#[derive(Clone, Copy, PartialEq, Debug)]
pub enum ToeSpec {
    /// Toward a direction of the joint frame (unit vector).
    Toward([f64; 3]),
    /// Away from the centre of an arc, circle or closed outline.
    Outside,
    /// Toward the centre of an arc, circle or closed outline.
    Inside,
}

/// What an end of a run does.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum EndSpec {
    /// The bead goes on past the end (a corner, a return): no stop.
    Continuous,
    /// Full size up to the end.
    Full,
    /// A stop, shortened by one leg.
    LessLeg,
    /// A stop, shortened by one throat.
    LessThroat,
}

/// Stitches along a run.
#[derive(Clone, Debug)]
pub struct Stitch {
    /// Bead length (length).
    pub bead: GivenAt,
    /// Distance from bead start to bead start (length).
    pub pitch: GivenAt,
}

/// A pattern by its trade name, as told; the runs it makes carry their own specs.
#[derive(Clone, Debug)]
pub struct PatternSpec {
    /// Shape.
    pub shape: Told<Shape>,
    /// Width b, depth d, or radius r (lengths), as the shape takes them.
    pub width: Option<GivenAt>,
    /// Depth d (length).
    pub depth: Option<GivenAt>,
    /// Radius r (length).
    pub radius: Option<GivenAt>,
    /// Where its own origin stands (lengths).
    pub at: Triple,
    /// Turned about z through its own origin (rad).
    pub turned: Option<GivenAt>,
    /// Mirrored in its own y axis (x → −x) before turning.
    pub mirrored: bool,
    /// Stem of a tee, web of an I outline, or all lines of a pattern of lines welded on both sides.
    pub doubled: bool,
    /// Where the entry stands.
    pub place: Place,
}

/// Trade names of weld patterns.
///
/// Own axes: x across the width b, y along the depth d, origin at the lower left corner of the
/// outline (the centre for `Circle` and `Cruciform`).
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Shape {
    /// One line of length d along y.
    SingleLine,
    /// Two lines of length d along y, b apart in x.
    TwoParallelLines,
    /// Line d along y at x = 0 and line b along the bottom (y = 0).
    Angle,
    /// Line d along y at x = 0 and two lines b (bottom, top), open to +x.
    Channel,
    /// Flange line b along the top (y = d) and stem d at x = b/2.
    Tee,
    /// Two flange lines b (y = 0, d) and web d at x = b/2.
    IOutline,
    /// Lines b and d crossing at mid-length.
    Cruciform,
    /// Four sides b × d.
    Box,
    /// Circle of radius r.
    Circle,
}

/// Loads as told.
#[derive(Clone, Debug)]
pub struct Loads {
    /// Cases in file order.
    pub cases: Vec<Case>,
}

/// One load case: actions ON the weld group FROM the attached part.
#[derive(Clone, Debug)]
pub struct Case {
    /// Name; stays text, whatever YAML would make of it.
    pub name: Told<String>,
    /// What it is, in words.
    pub says: Option<Told<String>>,
    /// Stated level.
    pub level: Told<Level>,
    /// Force components (force), in the case's frame.
    pub force: Triple,
    /// Moment components about the load's point (moment), in the case's frame.
    pub moment: Triple,
    /// Point of application (length), in the case's frame.
    pub at: Triple,
    /// Frame of the case; `None` is the joint frame.
    pub frame: Option<LoadFrame>,
    /// Where the entry stands.
    pub place: Place,
}

/// A load's own frame: an origin and the columns of R, as told, in the joint frame.
#[derive(Clone, Debug)]
pub struct LoadFrame {
    /// Name.
    pub name: Told<String>,
    /// Origin o in the joint frame (length).
    pub origin: Triple,
    /// Its x, y, z axes in the joint frame (plain numbers).
    pub axes: [Triple; 3],
}

/// Level of a load case.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Level {
    /// Unfactored working loads.
    Service,
    /// Factored loads of a limit state (LRFD).
    Factored,
    /// Limit loads (aerospace).
    Limit,
    /// Ultimate loads, or design loads at the ultimate limit state.
    Ultimate,
}

impl Level {
    /// The word in files and notes.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Service => "service",
            Self::Factored => "factored",
            Self::Limit => "limit",
            Self::Ultimate => "ultimate",
        }
    }
}

/// A check asked for: a clause sheet by its name, and the values it is to use.
#[derive(Clone, Debug)]
pub struct CheckSpec {
    /// Name of the sheet.
    pub clause: Told<String>,
    /// Values by name, in file order.
    pub values: Vec<(Told<String>, RawQuantity)>,
    /// Source of each value that has one of its own.
    pub source: Option<Told<String>>,
    /// Whether the user marked these values as still to be verified.
    pub to_be_verified: bool,
    /// Where the entry stands.
    pub place: Place,
}

impl CheckSpec {
    /// Whether another entry gives the same values to the same sheet.
    #[must_use]
    pub fn says_same(&self, other: &Self) -> bool {
        let values = |check: &Self| {
            let mut values: Vec<(String, String)> = check
                .values
                .iter()
                .map(|(name, value)| (name.value.clone(), value.value.clone()))
                .collect();
            values.sort();
            values
        };
        self.clause.value == other.clause.value && values(self) == values(other)
    }
}

/// An assumption of the note.
#[derive(Clone, Debug)]
pub struct Assumption {
    /// The text.
    pub says: Told<String>,
    /// Whether it is still to be verified: an open item.
    pub to_be_verified: bool,
}

/// A failure path that this note leaves to somebody else.
#[derive(Clone, Debug)]
pub struct Exclusion {
    /// The failure path, by the word of the coverage matrix.
    pub path: Told<String>,
    /// Who checks it, where.
    pub by: Told<String>,
}

/// A line of the change record.
#[derive(Clone, Debug)]
pub struct Change {
    /// Issue.
    pub revision: Told<String>,
    /// Date.
    pub date: Told<NaiveDate>,
    /// What changed.
    pub says: Told<String>,
}
