//! From the path that was told to segments: lines, legs of polylines, arcs and circles.
//!
//! Also places the beads of a two-sided run to either side, and stitches along a segment.

use super::{Segment, V3, WeldErrorKind};
use crate::joint::{PathSpec, RunSpec, Triple};
use crate::source::Place;
use std::f64::consts::PI;

/// A fault with its place.
pub(super) type Refusal = (WeldErrorKind, Place);

/// The segments of one run as told, before sides and stitches.
#[derive(Clone, Debug)]
pub(super) struct Outline {
    /// Segments in order; each begins where the one before ends.
    pub(super) segments: Vec<Segment>,
    /// Faying normal of each segment: unit, square to the segment.
    pub(super) normals: Vec<V3>,
    /// Whether the last segment ends where the first begins.
    pub(super) closed: bool,
}

/// Part of a coordinate under which two points are one.
const SAME_POINT: f64 = 1e-12;
/// Cosine between normal and run up to which they count as square.
const SQUARE_WITHIN: f64 = 1e-6;
/// Part of a full turn by which a sweep may exceed it through rounding.
const TURN_ROUNDING: f64 = 1e-12;
/// Most beads of one segment; a note shows each.
const MOST_BEADS: f64 = 2000.0;

/// A triple as a vector.
pub(super) fn vector(triple: &Triple) -> V3 {
    V3::from(triple.values())
}

/// Reads the path of a run.
///
/// The first axis of an arc's plane is the joint's x projected on it, or y where the normal runs
/// along x; angles turn by the right hand about the normal.
pub(super) fn outline(spec: &RunSpec) -> Result<Outline, Refusal> {
    let normal = told_normal(spec)?;
    let (segments, closed) = match &spec.path {
        PathSpec::Straight([a, b]) => (vec![leg(a, b)?], false),
        PathSpec::Polyline { points, closed } => (legs(points, *closed, &spec.place)?, *closed),
        PathSpec::Arc {
            centre,
            radius,
            from,
            sweep,
        } => {
            check_radius(radius.value.value, &radius.place)?;
            let swept = sweep.value.value;
            let most = 2.0 * PI * (1.0 + TURN_ROUNDING);
            if swept.is_nan() || swept.abs() < SAME_POINT || swept.abs() > most {
                return Err((WeldErrorKind::Sweep { sweep: swept }, sweep.place.clone()));
            }
            let (u, v) = plane_axes(normal);
            let (centre, radius) = (vector(centre), radius.value.value);
            let closed = swept.abs() > 2.0 * PI * (1.0 - TURN_ROUNDING);
            let from = from.value.value;
            (
                vec![Segment::Arc {
                    centre,
                    radius,
                    u,
                    v,
                    from,
                    sweep: swept,
                }],
                closed,
            )
        }
        PathSpec::Circle { centre, radius } => {
            check_radius(radius.value.value, &radius.place)?;
            let (u, v) = plane_axes(normal);
            (
                vec![Segment::circle(vector(centre), radius.value.value, u, v)],
                true,
            )
        }
    };
    let place = spec
        .normal
        .as_ref()
        .map_or(&spec.place, |triple| &triple.place);
    let normals = segments
        .iter()
        .map(|segment| square_normal(segment, normal).map_err(|kind| (kind, place.clone())))
        .collect::<Result<_, _>>()?;
    Ok(Outline {
        segments,
        normals,
        closed,
    })
}

fn told_normal(spec: &RunSpec) -> Result<V3, Refusal> {
    let Some(triple) = &spec.normal else {
        return Ok(V3::z());
    };
    vector(triple)
        .try_normalize(f64::MIN_POSITIVE)
        .ok_or((WeldErrorKind::NoNormal, triple.place.clone()))
}

/// The normal made square to a segment; refused where it is not so already.
fn square_normal(segment: &Segment, normal: V3) -> Result<V3, WeldErrorKind> {
    let Segment::Straight { .. } = segment else {
        return Ok(normal);
    };
    let tangent = segment.tangent(0.5);
    let cosine = normal.dot(&tangent);
    if cosine.abs() > SQUARE_WITHIN {
        return Err(WeldErrorKind::NormalNotSquare { cosine });
    }
    Ok((normal - tangent * cosine).normalize())
}

fn leg(a: &Triple, b: &Triple) -> Result<Segment, Refusal> {
    let (start, end) = (vector(a), vector(b));
    if (end - start).norm() <= SAME_POINT * start.amax().max(end.amax()) {
        return Err((WeldErrorKind::NoLength, b.place.clone()));
    }
    Ok(Segment::Straight { a: start, b: end })
}

fn legs(points: &[Triple], closed: bool, place: &Place) -> Result<Vec<Segment>, Refusal> {
    if points.len() < 3 {
        return Err((
            WeldErrorKind::FewPoints {
                points: points.len(),
            },
            place.clone(),
        ));
    }
    let mut found = points
        .windows(2)
        .map(|pair| leg(&pair[0], &pair[1]))
        .collect::<Result<Vec<_>, _>>()?;
    if closed {
        found.push(leg(&points[points.len() - 1], &points[0])?);
    }
    Ok(found)
}

fn check_radius(radius: f64, place: &Place) -> Result<(), Refusal> {
    if radius > 0.0 {
        Ok(())
    } else {
        Err((WeldErrorKind::Radius { radius }, place.clone()))
    }
}

/// First and second axis of the plane square to `normal`.
fn plane_axes(normal: V3) -> (V3, V3) {
    let across = |axis: V3| axis - normal * normal.dot(&axis);
    let u = across(V3::x())
        .try_normalize(SQUARE_WITHIN)
        .unwrap_or_else(|| across(V3::y()).normalize());
    (u, normal.cross(&u))
}

impl Outline {
    /// The outline moved by `distance` along n̂ = ẑ × t̂, with mitred corners; `None` if it cannot be.
    pub(super) fn beside(&self, distance: f64) -> Option<Self> {
        let mut moved = self.clone();
        let count = self.segments.len();
        for (index, segment) in self.segments.iter().enumerate() {
            moved.segments[index] = match segment {
                Segment::Straight { a, b } => {
                    let before = match (index, self.closed) {
                        (0, false) => None,
                        (0, true) => Some(count - 1),
                        _ => Some(index - 1),
                    };
                    let after = match (index + 1 == count, self.closed) {
                        (true, false) => None,
                        (true, true) => Some(0),
                        _ => Some(index + 1),
                    };
                    let start = a + self.mitre(index, before)? * distance;
                    let end = b + self.mitre(index, after)? * distance;
                    if (end - start).dot(&(b - a)) <= 0.0 {
                        return None;
                    }
                    Segment::Straight { a: start, b: end }
                }
                Segment::Arc {
                    centre,
                    radius,
                    u,
                    v,
                    from,
                    sweep,
                } => {
                    let radius = radius - sweep.signum() * distance;
                    if radius <= 0.0 {
                        return None;
                    }
                    Segment::Arc {
                        centre: *centre,
                        radius,
                        u: *u,
                        v: *v,
                        from: *from,
                        sweep: *sweep,
                    }
                }
            };
        }
        Some(moved)
    }

    /// How a corner moves for a unit move of its legs: (n₁ + n₂)/(1 + n₁·n₂).
    fn mitre(&self, index: usize, other: Option<usize>) -> Option<V3> {
        let side = |i: usize| self.normals[i].cross(&self.segments[i].tangent(0.5));
        let own = side(index);
        let Some(other) = other else { return Some(own) };
        let theirs = side(other);
        let share = 1.0 + own.dot(&theirs);
        (share > SQUARE_WITHIN).then(|| (own + theirs) / share)
    }
}

/// Parameter ranges of the beads of a stitched segment.
///
/// The first bead begins where the segment begins, one follows each pitch, and a bead that does
/// not fit whole is left out; on a closed path the last one keeps its distance from the first.
pub(super) fn beads(
    segment: &Segment,
    bead: f64,
    pitch: f64,
    closed: bool,
) -> Result<Vec<[f64; 2]>, WeldErrorKind> {
    let length = segment.length();
    if pitch.is_nan() || pitch <= bead {
        return Err(WeldErrorKind::Pitch { pitch, bead });
    }
    if bead.is_nan() || bead <= 0.0 || bead > length * (1.0 + STITCH_ROUNDING) {
        return Err(WeldErrorKind::BeadTooLong { bead, length });
    }
    let last = if closed { pitch } else { bead };
    let count = ((length - last) / pitch + STITCH_ROUNDING).floor() + 1.0;
    if count > MOST_BEADS {
        return Err(WeldErrorKind::TooManyBeads { beads: count });
    }
    let mut found = Vec::new();
    let mut index = 0.0;
    while index < count.max(1.0) {
        let start = index * pitch / length;
        found.push([start, (start + bead / length).min(1.0)]);
        index += 1.0;
    }
    Ok(found)
}

/// Part of a pitch by which a bead may overrun through rounding and still fit.
const STITCH_ROUNDING: f64 = 1e-9;
