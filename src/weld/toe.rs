//! The side of a run on which the toe of its fillet lies, as a sign along n̂ = ẑ × t̂.

use super::path::Outline;
use super::{Segment, V3, WeldErrorKind};
use crate::joint::ToeSpec;
use crate::quantity::real;

/// Component of a toe's direction across the run under which it tells no side.
const ALONG: f64 = 1e-6;

/// The toe's side of segment `index` of an outline.
///
/// `centroid` and `size` are those of all runs as told: inside and outside of an open run that is
/// no arc are taken from there. A closed polyline takes them from its own sense of turning, an arc
/// from its centre.
pub(super) fn side(
    toe: ToeSpec,
    outline: &Outline,
    index: usize,
    centroid: V3,
    size: f64,
) -> Result<f64, WeldErrorKind> {
    let segment = &outline.segments[index];
    let normal = outline.normals[index];
    match (toe, segment) {
        (ToeSpec::Toward(direction), Segment::Straight { .. }) => {
            let across = normal
                .cross(&segment.tangent(0.5))
                .dot(&V3::from(direction));
            if across.abs() < ALONG {
                Err(WeldErrorKind::ToeAlongRun)
            } else {
                Ok(across.signum())
            }
        }
        (ToeSpec::Toward(direction), Segment::Arc { .. }) => {
            toward_on_arc(segment, V3::from(direction))
        }
        (ToeSpec::Outside, _) => outside(outline, index, centroid, size),
        (ToeSpec::Inside, _) => outside(outline, index, centroid, size).map(|s| -s),
    }
}

/// n̂ is minus the radial direction where the arc turns by the right hand, plus it otherwise.
fn toward_on_arc(segment: &Segment, direction: V3) -> Result<f64, WeldErrorKind> {
    let Segment::Arc {
        u, v, from, sweep, ..
    } = segment
    else {
        return Err(WeldErrorKind::ToeAlongRun);
    };
    // The radial component is largest at `peak` and falls off as the cosine from there.
    let (along_u, along_v) = (direction.dot(u), direction.dot(v));
    let peak = real::atan2(along_v, along_u);
    let reach = real::hypot(along_u, along_v);
    let outward = |p: f64| reach * real::cos(from + sweep * p - peak);
    let middle = outward(0.5);
    let one_side = [0.0, 1.0]
        .iter()
        .all(|p| outward(*p) * middle.signum() > -ALONG);
    // A turn of more than half a circle always changes sides.
    if middle.abs() < ALONG || !one_side || sweep.abs() > std::f64::consts::PI + ALONG {
        return Err(WeldErrorKind::ToeAlongRun);
    }
    Ok(-sweep.signum() * middle.signum())
}

fn outside(outline: &Outline, index: usize, centroid: V3, size: f64) -> Result<f64, WeldErrorKind> {
    let segment = &outline.segments[index];
    if let Segment::Arc { sweep, .. } = segment {
        return Ok(-sweep.signum());
    }
    if outline.closed {
        return Ok(-turning(outline));
    }
    let side = outline.normals[index].cross(&segment.tangent(0.5));
    let away = (segment.point(0.5) - centroid).dot(&side);
    if away.abs() < ALONG * size {
        Err(WeldErrorKind::ToeThroughCentroid)
    } else {
        Ok(away.signum())
    }
}

/// +1 where a closed polyline turns by the right hand about its normal, so that n̂ points inside.
fn turning(outline: &Outline) -> f64 {
    let origin = outline.segments[0].point(0.0);
    let twice_area: f64 = outline
        .segments
        .iter()
        .map(|s| {
            (s.point(0.0) - origin)
                .cross(&(s.point(1.0) - origin))
                .dot(&outline.normals[0])
        })
        .sum();
    twice_area.signum()
}
