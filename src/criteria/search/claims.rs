//! A sheet's claims held against its numbers: proportional to the loads, convex along a run.

use super::Search;
use crate::criteria::evaluate::{Bench, Pair};
use crate::solve::search::TIE;
use crate::source::Diagnostic;
use crate::weld::Segment;

/// Load factors beyond which a claim of proportionality is not followed.
const FAR: f64 = 1e6;
/// Relative miss up to which a demand counts as proportional to the loads.
const PROPORTIONAL: f64 = 1e-9;
impl Search<'_> {
    /// Holds the sheet's claims against every sample of one case: proportional, convex.
    pub(in crate::criteria) fn verify_claims(&self, case: usize) -> Result<(), Diagnostic> {
        for (bench, positions) in self.benches.iter().zip(&self.positions) {
            for check in 0..self.asking.sheet.checks.len() {
                for p in positions {
                    self.check_proportional(bench, check, (case, *p))?;
                }
                self.check_convex(bench, check, case)?;
            }
        }
        Ok(())
    }

    /// A convex ratio lies under the chord between the ends of a straight run.
    pub(super) fn check_convex(
        &self,
        bench: &Bench<'_>,
        check: usize,
        case: usize,
    ) -> Result<(), Diagnostic> {
        let run = &self.ground.runs[bench.site.run];
        if !self.asking.sheet.convex || matches!(run.path, Segment::Arc { .. }) {
            return Ok(());
        }
        let ratio = |p: f64| self.ratio(bench, check, (case, p, 1.0));
        let (start, end) = (ratio(0.0)?, ratio(1.0)?);
        for p in [0.25, 0.5, 0.75] {
            let (found, chord) = (ratio(p)?, start + p * (end - start));
            if found - chord > TIE * (start.max(end) + found) {
                let strength = &self.asking.sheet.checks[check];
                let message = format!(
                    "the sheet says `convex: true`, but `{}` is {found} between {start} and {end} for {}",
                    strength.name.value,
                    self.place(bench, case, p)
                );
                return Err(Diagnostic::error("not-convex", message, &strength.place)
                    .help("say `convex: false`: the whole run is then searched"));
            }
        }
        Ok(())
    }

    pub(super) fn check_proportional(
        &self,
        bench: &Bench<'_>,
        check: usize,
        (case, p): (usize, f64),
    ) -> Result<(), Diagnostic> {
        let strength = &self.asking.sheet.checks[check];
        if !strength.proportional || self.without_stress(bench, (case, p, 1.0)).is_some() {
            return Ok(());
        }
        let once = self.pair(bench, check, (case, p, 1.0))?;
        self.proportional_to(bench, check, (case, p), once, 2.0)?;
        // Where the limit is reached the claim must hold as well, or the margin is wrong.
        let reached = once.capacity / once.demand;
        if once.demand > 0.0 && once.capacity > 0.0 && reached < FAR {
            self.proportional_to(bench, check, (case, p), once, reached)?;
        }
        Ok(())
    }

    /// Refuses a claim of proportionality that fails at `times` the loads.
    fn proportional_to(
        &self,
        bench: &Bench<'_>,
        check: usize,
        (case, p): (usize, f64),
        once: Pair,
        times: f64,
    ) -> Result<(), Diagnostic> {
        let strength = &self.asking.sheet.checks[check];
        let other = self.pair(bench, check, (case, p, times))?;
        let differs = |a: f64, b: f64, size: f64| (a - b).abs() > PROPORTIONAL * size;
        // A demand that cancels to rounding noise is held to a part of the capacity.
        let noise = 1e-6 * once.capacity.abs();
        let demand = differs(
            other.demand,
            times * once.demand,
            other.demand.abs().max(noise),
        );
        let capacity = differs(other.capacity, once.capacity, once.capacity.abs());
        if !demand && !capacity {
            return Ok(());
        }
        let what = if demand {
            format!(
                "{times} times the loads make its demand {} of {}",
                other.demand, once.demand
            )
        } else {
            format!(
                "{times} times the loads make its capacity {} of {}",
                other.capacity, once.capacity
            )
        };
        let message = format!(
            "`{}` says it is proportional to the loads, but {what}",
            strength.name.value
        );
        Err(
            Diagnostic::error("not-proportional", message, &strength.place)
                .help("say `proportional: false`: the margin is then found as a load factor"),
        )
    }
}
