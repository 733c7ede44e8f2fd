//! Why a weld group is refused: data and place; the text is in `Display`.

use crate::quantity::{UnitSet, real};
use crate::source::Place;
use std::fmt;

/// A fault of the weld group, at its place in the joint file.
#[derive(Clone, PartialEq, Debug)]
pub struct WeldError {
    /// What is wrong.
    pub kind: WeldErrorKind,
    /// Where it was told.
    pub place: Place,
    /// The printing set, for the units of the text.
    pub units: UnitSet,
}

/// All faults of a weld group; never empty.
#[derive(Clone, PartialEq, Debug)]
pub struct WeldFaults(pub Vec<WeldError>);

/// What is wrong with a run or its size. Lengths in the printing set, angles in rad.
#[derive(Clone, PartialEq, Debug)]
pub enum WeldErrorKind {
    /// Dihedral angle not between 0° and 180°.
    Angle {
        /// Angle (rad).
        angle: f64,
    },
    /// Unequal legs at another angle than 90°.
    UnequalSkewed {
        /// Angle (rad).
        angle: f64,
    },
    /// Negative root gap.
    GapNegative {
        /// Gap.
        gap: f64,
    },
    /// Root gap beyond what a fillet may bridge.
    GapTooWide {
        /// Gap.
        gap: f64,
        /// Widest accepted.
        limit: f64,
    },
    /// The gap takes all of the leg.
    GapTakesLeg {
        /// Gap.
        gap: f64,
        /// Leg, the smaller of two.
        leg: f64,
    },
    /// A gap that would be taken off a leg, where the throat is stated.
    GapOnStated {
        /// Gap.
        gap: f64,
    },
    /// A penetration allowance where the throat is stated.
    PenetrationOnStated {
        /// Allowance.
        extra: f64,
    },
    /// The size gives no throat above 0.
    NoThroat {
        /// Throat it would give.
        throat: f64,
    },
    /// Complete penetration into a part of unknown thickness.
    ThicknessUnknown {
        /// The part.
        part: String,
    },
    /// A name that is no part of the joint.
    UnknownPart {
        /// The name.
        part: String,
    },
    /// A run without length.
    NoLength,
    /// A radius that is not above 0.
    Radius {
        /// Radius.
        radius: f64,
    },
    /// A sweep of nothing, or of more than a full turn.
    Sweep {
        /// Sweep (rad).
        sweep: f64,
    },
    /// A polyline of fewer than three points.
    FewPoints {
        /// How many.
        points: usize,
    },
    /// A normal without length.
    NoNormal,
    /// A normal that is not square to the run.
    NormalNotSquare {
        /// Cosine of the angle between normal and run.
        cosine: f64,
    },
    /// A toe direction along the run or along its normal, or one that changes sides along an arc.
    ToeAlongRun,
    /// Inside or outside of a run that passes through the centroid.
    ToeThroughCentroid,
    /// Two-sided and skewed without a toe: nobody knows which side has the angle.
    SkewedSides {
        /// Angle (rad).
        angle: f64,
    },
    /// Beads of both sides are placed apart by less than nothing, or by more than the path bears.
    Apart {
        /// Distance.
        apart: f64,
    },
    /// Stitch pitch not above the bead's length.
    Pitch {
        /// Pitch.
        pitch: f64,
        /// Bead.
        bead: f64,
    },
    /// A bead longer than its run.
    BeadTooLong {
        /// Bead.
        bead: f64,
        /// Length of the run.
        length: f64,
    },
    /// More beads than a note can show.
    TooManyBeads {
        /// How many.
        beads: f64,
    },
    /// An end less one leg, where no leg is told.
    LegUnknown,
    /// End reductions leave nothing of the run.
    NothingLeft {
        /// Name of the run.
        run: String,
        /// Its length.
        length: f64,
        /// Sum of the reductions.
        less: f64,
    },
    /// Two runs lie on each other and are not declared as two beads.
    Coincident {
        /// Name of the earlier run.
        first: String,
        /// Name of the later run.
        second: String,
        /// Length on which they lie on each other.
        overlap: f64,
    },
    /// No run at all.
    NoRuns,
}

impl WeldErrorKind {
    /// A stable name for lists of faults.
    #[must_use]
    pub const fn code(&self) -> &'static str {
        match self {
            Self::Angle { .. } => "weld-angle",
            Self::UnequalSkewed { .. } => "unequal-skewed",
            Self::GapNegative { .. } => "gap-negative",
            Self::GapTooWide { .. } => "gap-too-wide",
            Self::GapTakesLeg { .. } => "gap-takes-leg",
            Self::GapOnStated { .. } => "gap-on-stated-throat",
            Self::PenetrationOnStated { .. } => "penetration-on-stated-throat",
            Self::NoThroat { .. } => "no-throat",
            Self::ThicknessUnknown { .. } => "thickness-unknown",
            Self::UnknownPart { .. } => "unknown-part",
            Self::NoLength => "run-without-length",
            Self::Radius { .. } => "radius",
            Self::Sweep { .. } => "sweep",
            Self::FewPoints { .. } => "few-points",
            Self::NoNormal => "no-normal",
            Self::NormalNotSquare { .. } => "normal-not-square",
            Self::ToeAlongRun => "toe-along-run",
            Self::ToeThroughCentroid => "toe-through-centroid",
            Self::SkewedSides { .. } => "skewed-both-sides",
            Self::Apart { .. } => "sides-apart",
            Self::Pitch { .. } => "stitch-pitch",
            Self::BeadTooLong { .. } => "bead-too-long",
            Self::TooManyBeads { .. } => "too-many-beads",
            Self::LegUnknown => "leg-unknown",
            Self::NothingLeft { .. } => "nothing-left-of-run",
            Self::Coincident { .. } => "coincident-runs",
            Self::NoRuns => "no-runs",
        }
    }

    /// What the user can do about it, if that is not plain.
    #[must_use]
    pub const fn help(&self) -> Option<&'static str> {
        Some(match self {
            Self::UnequalSkewed { .. } => "state the effective throat, as in `throat: 4.2 mm`",
            Self::GapTooWide { .. } => {
                "close the fit-up; wider gaps (to 5/16 in, for thicknesses of 3 in and more with \
                 backing) are not taken here (AWS D1.1 fit-up)"
            }
            Self::GapTakesLeg { .. } | Self::GapOnStated { .. } => {
                "a gap over 1/16 in is taken off the leg in full: state the leg as it will be \
                 welded, or the throat that is left without a gap"
            }
            Self::PenetrationOnStated { .. } => "a stated throat already holds the penetration",
            Self::ThicknessUnknown { .. } => "give the part its `thickness`",
            Self::NormalNotSquare { .. } => {
                "the faying normal points out of the base, square to the run"
            }
            Self::ToeAlongRun => {
                "name a side that the run does not run along, or `inside`, `outside`"
            }
            Self::ToeThroughCentroid => "name the side by a direction, as in `toe: +x`",
            Self::SkewedSides { .. } => "`toe` tells on which side the stated angle is",
            Self::LegUnknown => "give the `leg` beside the throat, or say `less throat`",
            Self::Coincident { .. } => {
                "welds on both sides of a plate are one run with `sides: both`; else move one"
            }
            Self::Angle { .. }
            | Self::GapNegative { .. }
            | Self::NoThroat { .. }
            | Self::UnknownPart { .. }
            | Self::NoLength
            | Self::Radius { .. }
            | Self::Sweep { .. }
            | Self::FewPoints { .. }
            | Self::NoNormal
            | Self::Apart { .. }
            | Self::Pitch { .. }
            | Self::BeadTooLong { .. }
            | Self::TooManyBeads { .. }
            | Self::NothingLeft { .. }
            | Self::NoRuns => return None,
        })
    }
}

/// A number for an error text: six significant digits at most.
fn six(value: f64) -> String {
    let rounded: f64 = format!("{value:.5e}").parse().unwrap_or(value);
    rounded.to_string()
}

impl fmt::Display for WeldError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let unit = self.units.length();
        let length = |value: f64| format!("{} {unit}", six(value));
        let degrees = |angle: f64| format!("{}°", six(angle.to_degrees()));
        match &self.kind {
            WeldErrorKind::Angle { angle } => {
                write!(
                    out,
                    "the angle between the faces is {}, but must lie between 0° and 180°",
                    degrees(*angle)
                )
            }
            WeldErrorKind::UnequalSkewed { angle } => write!(
                out,
                "unequal legs at {} give no throat by rule; they do at 90° only",
                degrees(*angle)
            ),
            WeldErrorKind::GapNegative { gap } => {
                write!(
                    out,
                    "the root gap is {}, but must be 0 or more",
                    length(*gap)
                )
            }
            WeldErrorKind::GapTooWide { gap, limit } => write!(
                out,
                "the root gap is {}, but a fillet bridges at most 3/16 in ({})",
                length(*gap),
                length(*limit)
            ),
            WeldErrorKind::GapTakesLeg { gap, leg } => {
                write!(
                    out,
                    "the root gap of {} leaves nothing of the leg of {}",
                    length(*gap),
                    length(*leg)
                )
            }
            WeldErrorKind::GapOnStated { gap } => write!(
                out,
                "the root gap of {} is over 1/16 in, but the throat is stated and has no leg to take it from",
                length(*gap)
            ),
            WeldErrorKind::PenetrationOnStated { extra } => write!(
                out,
                "a penetration allowance of {} stands beside a stated throat",
                length(*extra)
            ),
            WeldErrorKind::NoThroat { throat } => {
                write!(
                    out,
                    "the effective throat is {}, but must be above 0",
                    length(*throat)
                )
            }
            WeldErrorKind::ThicknessUnknown { part } => {
                write!(
                    out,
                    "complete penetration takes the thickness of `{part}`, which is not told"
                )
            }
            WeldErrorKind::UnknownPart { part } => write!(out, "`{part}` is no part of this joint"),
            WeldErrorKind::NoLength => out.write_str("the run has no length"),
            WeldErrorKind::Radius { radius } => {
                write!(
                    out,
                    "the radius is {}, but must be above 0",
                    length(*radius)
                )
            }
            WeldErrorKind::Sweep { sweep } => write!(
                out,
                "the arc sweeps {}, but must sweep more than 0° and at most 360°",
                degrees(*sweep)
            ),
            WeldErrorKind::FewPoints { points } => {
                write!(
                    out,
                    "the polyline has {points} points, but needs at least 3"
                )
            }
            WeldErrorKind::NoNormal => out.write_str("the normal has no length"),
            WeldErrorKind::NormalNotSquare { cosine } => write!(
                out,
                "the normal makes {} with the run, but must make 90°",
                degrees(real::acos(cosine.clamp(-1.0, 1.0)))
            ),
            WeldErrorKind::ToeAlongRun => {
                out.write_str("the toe's direction does not tell a side of the run")
            }
            WeldErrorKind::ToeThroughCentroid => {
                out.write_str("the run passes through the centroid and has no inside")
            }
            WeldErrorKind::SkewedSides { angle } => write!(
                out,
                "both sides of a plate at {} are welded, but no toe tells which side is which",
                degrees(*angle)
            ),
            WeldErrorKind::Apart { apart } => {
                write!(
                    out,
                    "the sides cannot be welded {} apart on this path",
                    length(*apart)
                )
            }
            WeldErrorKind::Pitch { pitch, bead } => write!(
                out,
                "the pitch is {}, but must be above the bead's length of {}",
                length(*pitch),
                length(*bead)
            ),
            WeldErrorKind::BeadTooLong { bead, length: run } => {
                write!(
                    out,
                    "a bead of {} does not fit on {}",
                    length(*bead),
                    length(*run)
                )
            }
            WeldErrorKind::TooManyBeads { beads } => {
                write!(out, "the run would hold {} beads", six(*beads))
            }
            WeldErrorKind::LegUnknown => {
                out.write_str("an end is shortened by one leg, but no leg is told")
            }
            WeldErrorKind::NothingLeft {
                run,
                length: told,
                less,
            } => write!(
                out,
                "the ends of `{run}` take {} off its {} and leave nothing",
                length(*less),
                length(*told)
            ),
            WeldErrorKind::Coincident {
                first,
                second,
                overlap,
            } => write!(
                out,
                "`{second}` lies on `{first}` over {}",
                length(*overlap)
            ),
            WeldErrorKind::NoRuns => out.write_str("the weld has no runs"),
        }
    }
}

impl std::error::Error for WeldError {}

impl fmt::Display for WeldFaults {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (index, fault) in self.0.iter().enumerate() {
            if index > 0 {
                out.write_str("\n")?;
            }
            write!(out, "{fault}")?;
        }
        Ok(())
    }
}

impl std::error::Error for WeldFaults {}
