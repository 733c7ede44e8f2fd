//! Limits on sizes and lengths, run by run.

use super::evaluate::Bench;
use super::outcome::LimitOutcome;
use super::sheet::Side;

/// A value converted from another unit may miss an inclusive bound by rounding.
const SLACK: f64 = 1e-9;

/// The limits of a sheet at every site: by limit, then run, then part.
pub(super) fn limits(benches: &[Bench<'_>]) -> Vec<LimitOutcome> {
    let Some(first) = benches.first() else {
        return Vec::new();
    };
    let outcome = |(index, limit): (usize, &super::sheet::Limit)| {
        let at = |bench: &Bench<'_>| {
            let value = |name: &str| {
                bench
                    .fixed
                    .values
                    .get(name)
                    .copied()
                    .expect("a sheet of sizes has no points")
            };
            let (value, bound) = (value(&limit.value), value(&limit.bound));
            let slack = SLACK * bound.abs();
            let holds = match limit.side {
                Side::AtLeast => value >= bound - slack,
                Side::AtMost => value <= bound + slack,
            };
            LimitOutcome {
                limit: index,
                run: bench.site.run,
                part: bench.site.turn,
                value,
                bound,
                holds,
            }
        };
        benches.iter().map(at).collect::<Vec<_>>()
    };
    first
        .asking
        .sheet
        .limits
        .iter()
        .enumerate()
        .flat_map(outcome)
        .collect()
}
