//! Runs told one by one that stand on both faces of one plate.
//!
//! A user may tell the two fillets of a plate as two runs, or as a pattern of parallel lines. The
//! plate between them carries both, so they are marked as two beads of one plate exactly as if one
//! run had told both sides.

use super::{Run, Segment, V3};
use crate::joint::Part;

/// Share of the plate's thickness by which the distance of two runs may miss it.
const THICKNESS_WITHIN: f64 = 0.02;
/// Sine of the angle under which two runs count as parallel.
const PARALLEL: f64 = 1e-6;

/// Marks straight runs that stand opposite each other on the faces of one attached plate.
pub(super) fn mark_twins(runs: &mut [Run], parts: &[Part]) {
    for first in 0..runs.len() {
        for second in first + 1..runs.len() {
            let untold = !runs[first].one_of_two && !runs[second].one_of_two;
            if untold && stand_opposite(&runs[first], &runs[second], parts) {
                runs[first].one_of_two = true;
                runs[second].one_of_two = true;
            }
        }
    }
}

fn stand_opposite(one: &Run, other: &Run, parts: &[Part]) -> bool {
    let (Segment::Straight { a, b }, Segment::Straight { a: c, b: d }) = (&one.told, &other.told)
    else {
        return false;
    };
    let Some(thickness) = parts
        .get(one.joins[0])
        .and_then(|part| part.thickness.as_ref())
    else {
        return false;
    };
    let thickness = thickness.value.value;
    let along: V3 = (b - a).normalize();
    let apart = (c + d) / 2.0 - (a + b) / 2.0;
    let across = apart - along * apart.dot(&along);
    one.joins[0] == other.joins[0]
        && along.cross(&(d - c).normalize()).norm() < PARALLEL
        && (across.norm() - thickness).abs() <= THICKNESS_WITHIN * thickness
        && across.dot(&one.normal).abs() <= THICKNESS_WITHIN * thickness
        && apart.dot(&along).abs() < (b - a).norm().min((d - c).norm()) / 2.0
}
