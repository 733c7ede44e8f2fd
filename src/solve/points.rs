//! Check points of a group: run ends and arc extremes, in file order.

use crate::weld::{Run, V3};

/// A position on a run.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Spot {
    /// Index of the run.
    pub run: usize,
    /// Parameter along its effective path, 0 to 1.
    pub p: f64,
}

/// A check point of the note.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct CheckPoint {
    /// Where on which run.
    pub spot: Spot,
    /// Position (length).
    pub position: V3,
}

/// Start and end of each run, and between them the extremes of its arc; a closed circle has its
/// start only once.
#[must_use]
pub fn check_points(runs: &[Run]) -> Vec<CheckPoint> {
    let mut found = Vec::new();
    for (index, run) in runs.iter().enumerate() {
        let start = run.path.point(0.0);
        let is_closed = (run.path.point(1.0) - start).norm() < CLOSED_WITHIN * run.path.length();
        let last = if is_closed { None } else { Some(1.0) };
        for p in [0.0].into_iter().chain(run.path.extremes()).chain(last) {
            let spot = Spot { run: index, p };
            found.push(CheckPoint {
                spot,
                position: run.path.point(p),
            });
        }
    }
    found
}

/// Part of a path's length within which its end is its start.
const CLOSED_WITHIN: f64 = 1e-9;
