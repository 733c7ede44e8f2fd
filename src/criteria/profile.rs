//! Utilisation along every run, for a drawing of what a check finds between its points.

use super::assess::{Ground, benches};
use super::outcome::Asked;
use super::resolve::Asking;
use super::search::Search;
use crate::solve::search::beats;
use crate::source::Diagnostic;

/// Utilisation along one run.
#[derive(Clone, PartialEq, Debug)]
pub struct Profile {
    /// Index of the run.
    pub run: usize,
    /// The utilisation at equal steps of the path's parameter, both ends included.
    pub ratios: Vec<f64>,
}

/// Follows check `check` of an assessed sheet along all runs that it takes, in one case.
///
/// At each place the worst of the parts in turn and of the throat planes counts. `steps` is the
/// number of equal steps that each path is followed in, a quarter of it where the demand is not
/// proportional to the loads and each place has a load factor of its own.
///
/// # Errors
///
/// The fault of a place at which the check has no number, as [`assess`](super::assess()) tells it.
pub fn profiles(
    ground: &Ground<'_>,
    asked: &Asked,
    check: usize,
    case: usize,
    steps: u32,
) -> Result<Vec<Profile>, Diagnostic> {
    let asking = Asking {
        joint: ground.joint,
        index: asked.index,
        spec: &ground.joint.checks[asked.index],
        sheet: &asked.sheet,
    };
    let tables = asked.sheet.tables(ground.joint.units.value);
    let taken: Vec<usize> = (0..ground.runs.len())
        .filter(|run| !asked.left_out.contains(run))
        .collect();
    let benches = benches(ground, asking, &tables, &taken)
        .map_err(|faults| faults.into_iter().next().expect("a refusal has a fault"))?;
    let search = Search::new(ground, asking, &benches);
    // A load factor is a root to be found at each place: fewer places do.
    let steps = if asked.sheet.checks[check].proportional {
        steps
    } else {
        (steps / 4).max(1)
    };
    let positions: Vec<f64> = (0..=steps)
        .map(|step| f64::from(step) / f64::from(steps))
        .collect();
    let mut found: Vec<Profile> = Vec::new();
    for bench in &benches {
        let run = bench.site.run;
        let ratios = search.along(bench, check, case, &positions)?;
        match found.last_mut() {
            Some(known) if known.run == run => {
                for (known, other) in known.ratios.iter_mut().zip(ratios) {
                    if beats(other, *known) {
                        *known = other;
                    }
                }
            }
            _ => found.push(Profile { run, ratios }),
        }
    }
    Ok(found)
}
