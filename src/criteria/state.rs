//! The stresses and line loads at a point that sheets ask for.

use super::assess::Ground;
use super::from::PointField;
use super::resolve::Turn;
use crate::solve::local::{local, on_throat};
use crate::weld::{Run, V3};

/// Where a sheet is evaluated along a run: the part in turn and the side of the toe.
#[derive(Clone, Copy, PartialEq, Debug)]
pub(super) struct Site {
    /// Index of the run.
    pub(super) run: usize,
    /// The part in turn.
    pub(super) turn: Option<Turn>,
    /// Which throat plane, in the order of [`crate::solve::local::throat_planes`].
    pub(super) plane: usize,
    /// Whether the file does not say the side of the toe and the sheet needs it.
    pub(super) assumed: bool,
}

/// The other of two beads on opposite sides of the attached plate, and whether it runs the other way.
#[must_use]
pub fn partner(runs: &[Run], index: usize) -> Option<(usize, bool)> {
    let run = &runs[index];
    if !run.one_of_two {
        return None;
    }
    let middle = run.path.point(0.5);
    let other = runs
        .iter()
        .enumerate()
        .filter(|(at, other)| *at != index && other.one_of_two && other.joins[0] == run.joins[0])
        .filter(|(_, other)| {
            other.spec != run.spec || other.toe.zip(run.toe).is_none_or(|(a, b)| a * b < 0.0)
        })
        .map(|(at, other)| (at, (other.path.point(0.5) - middle).norm()))
        .min_by(|a, b| a.1.total_cmp(&b.1))?
        .0;
    let (start, path) = (run.path.point(0.0), &runs[other].path);
    let reversed = (path.point(1.0) - start).norm() < (path.point(0.0) - start).norm();
    Some((other, reversed))
}

/// Writes the fields asked for at parameter `p`, for the loads of `case` times `scale`.
pub(super) fn fill(
    ground: &Ground<'_>,
    site: &Site,
    fields: &[PointField],
    (case, p, scale): (usize, f64, f64),
    out: &mut [f64],
) {
    let run = &ground.runs[site.run];
    let f = (ground.stress)(case, site.run, p) * scale;
    let parts = local(run, p, f);
    let throat = fields
        .iter()
        .any(|field| matches!(field, PointField::SigmaPerp | PointField::TauPerp))
        .then(|| on_throat(run, p, f)[site.plane]);
    for (field, out) in fields.iter().zip(out) {
        *out = match field {
            PointField::Resultant => parts.resultant,
            PointField::Along | PointField::TauPar => parts.f_par,
            PointField::Across => parts.f_n,
            PointField::Through => parts.f_z,
            PointField::SigmaPerp => throat.map_or(0.0, |throat| throat.sigma_perp),
            PointField::TauPerp => throat.map_or(0.0, |throat| throat.tau_perp),
            PointField::SinPhi => parts.sin_phi,
            PointField::LineLoad => run.throat * parts.resultant,
            PointField::PlateLoad => plate_load(ground, site, f, (case, p, scale)).norm(),
        };
    }
}

/// The line load on the part in turn, as a vector: the attached part of two beads carries both.
fn plate_load(ground: &Ground<'_>, site: &Site, f: V3, (case, p, scale): (usize, f64, f64)) -> V3 {
    let own = f * ground.runs[site.run].throat;
    if site.turn == Some(Turn::Base) {
        return own;
    }
    match partner(ground.runs, site.run) {
        None => own,
        Some((other, reversed)) => {
            let there = if reversed { 1.0 - p } else { p };
            own + (ground.stress)(case, other, there) * (scale * ground.runs[other].throat)
        }
    }
}
