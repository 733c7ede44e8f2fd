//! What each end of a run does once the whole group is known: corners, stops, shortening.

use super::group::Piece;
use super::path::Refusal;
use super::{End, V3, WeldErrorKind};
use crate::joint::{EndSpec, RunSpec};
use crate::source::Told;

/// Part of the group's size within which ends of runs meet.
pub(super) const MEETING: f64 = 1e-6;

/// Marks the ends that meet an end of another run, or of the same closed run.
///
/// Stitched beads take no part, nor do two beads on opposite sides of one plate meet each other.
pub(super) fn find_corners(pieces: &[Piece], size: f64) -> Vec<[bool; 2]> {
    let near = MEETING * size;
    let ends: Vec<(usize, usize, V3)> = pieces
        .iter()
        .enumerate()
        .filter(|(_, piece)| !piece.is_bead)
        .flat_map(|(i, piece)| [(i, 0, piece.told.point(0.0)), (i, 1, piece.told.point(1.0))])
        .collect();
    let mut corners = vec![[false; 2]; pieces.len()];
    // Sorted by x, only neighbours within reach are compared.
    let mut order: Vec<usize> = (0..ends.len()).collect();
    order.sort_by(|a, b| ends[*a].2.x.total_cmp(&ends[*b].2.x));
    for (at, first) in order.iter().enumerate() {
        let (i, end_i, point_i) = ends[*first];
        for second in &order[at + 1..] {
            let (j, end_j, point_j) = ends[*second];
            if point_j.x - point_i.x > near {
                break;
            }
            if (point_j - point_i).norm() <= near && !are_sides(&pieces[i], &pieces[j], i == j) {
                corners[i][end_i] = true;
                corners[j][end_j] = true;
            }
        }
    }
    corners
}

/// Whether two pieces are beads on opposite sides of one plate.
fn are_sides(first: &Piece, second: &Piece, same: bool) -> bool {
    !same && first.spec == second.spec && first.side != second.side
}

/// The end `which` of a piece.
///
/// Told ends are those of the free ends. At a corner the bead goes on, unless the run itself tells
/// its two ends apart. An end nobody tells is full size; that of a stitched bead is a stop less one
/// throat.
pub(super) fn end(
    piece: &Piece,
    which: usize,
    at_corner: bool,
    spec: &RunSpec,
) -> Result<End, Refusal> {
    if piece.inner[which] {
        return Ok(End::Continuous);
    }
    let told = spec.ends[which].as_ref();
    if at_corner && !piece.is_bead && !is_told_for_corner(spec, which) {
        return Ok(End::Continuous);
    }
    let throat = piece.rule.throat();
    match told.map(|told| (told.value, told)) {
        None if piece.is_bead => Ok(End::Stop {
            less: throat,
            leg: false,
        }),
        None | Some((EndSpec::Full, _)) => Ok(End::Full),
        Some((EndSpec::Continuous, _)) => Ok(End::Continuous),
        Some((EndSpec::LessThroat, _)) => Ok(End::Stop {
            less: throat,
            leg: false,
        }),
        Some((EndSpec::LessLeg, at)) => match piece.leg {
            Some(less) => Ok(End::Stop { less, leg: true }),
            None => Err((WeldErrorKind::LegUnknown, at.place.clone())),
        },
    }
}

/// Whether the run's own entry tells this end apart from the other, as in `ends: [full, less leg]`.
fn is_told_for_corner(spec: &RunSpec, which: usize) -> bool {
    let within = |told: &Told<EndSpec>| {
        told.place.file == spec.place.file
            && told.place.start >= spec.place.start
            && told.place.end <= spec.place.end
    };
    match (&spec.ends[which], &spec.ends[1 - which]) {
        (Some(told), Some(other)) => within(told) && told.place != other.place,
        (Some(told), None) => within(told),
        (None, _) => false,
    }
}

/// The shortening of an end (length).
pub(super) const fn shortening(end: End) -> f64 {
    match end {
        End::Continuous | End::Full => 0.0,
        End::Stop { less, .. } => less,
    }
}
