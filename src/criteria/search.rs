//! Where a check is worst: samples by the batch program, refinement by the single evaluator.

use super::assess::Ground;
use super::evaluate::{Bench, Pair, fault};
use super::margin::{LARGEST, least_factor};
use super::outcome::{Governing, Margin};
use super::resolve::Asking;
use super::state::fill;
use crate::solve::local::throat_planes;
use crate::solve::search::{beats, intervals, peak};
use crate::source::Diagnostic;
use crate::weld::Segment;
use std::cell::RefCell;

/// Points of one batch: the columns of a pass stay small however many cases there are.
const BATCH: usize = 16_384;
/// Part of the largest sampled ratio below which a local maximum is not refined: sampling at 32
/// intervals a quarter turn misses far less than that.
const WORTH_REFINING: f64 = 0.9;
/// Relative miss up to which a demand counts as proportional to the loads.
const PROPORTIONAL: f64 = 1e-9;
/// Rounds in which the worst point and its load factor are brought together.
const ROUNDS: u32 = 12;

/// A sampled point that may be the worst of its case.
#[derive(Clone, Copy, Debug)]
struct Sample {
    bench: usize,
    p: f64,
    ratio: f64,
    /// Neighbouring samples between which the ratio may be larger still.
    near: Option<(f64, f64)>,
}

/// The search of one sheet.
pub(super) struct Search<'a> {
    ground: &'a Ground<'a>,
    asking: Asking<'a>,
    benches: &'a [Bench<'a>],
    positions: Vec<Vec<f64>>,
}

impl<'a> Search<'a> {
    pub(super) fn new(
        ground: &'a Ground<'a>,
        asking: Asking<'a>,
        benches: &'a [Bench<'a>],
    ) -> Self {
        let positions = benches
            .iter()
            .map(|bench| {
                let path = &ground.runs[bench.site.run].path;
                if asking.sheet.convex && matches!(path, Segment::Straight { .. }) {
                    return vec![0.0, 1.0];
                }
                let count = intervals(path);
                (0..=count)
                    .map(|index| f64::from(index) / f64::from(count))
                    .collect()
            })
            .collect();
        Self {
            ground,
            asking,
            benches,
            positions,
        }
    }

    /// For each check of the sheet, the worst point of each case.
    pub(super) fn worst_of_cases(
        &self,
        cases: &[usize],
    ) -> Result<Vec<Vec<Governing>>, Diagnostic> {
        let checks = self.asking.sheet.checks.len();
        let mut worst: Vec<Vec<Governing>> = vec![Vec::new(); checks];
        let points = self.positions.iter().map(Vec::len).max().unwrap_or(1);
        for chunk in cases.chunks((BATCH / points).max(1)) {
            for (case, samples) in chunk.iter().zip(self.sweep(chunk, 1.0)?) {
                for (check, samples) in samples.iter().enumerate() {
                    let sample = self.pick(*case, check, samples, 1.0)?;
                    worst[check].push(if self.asking.sheet.checks[check].proportional {
                        self.proportional(*case, check, sample)?
                    } else {
                        self.by_factor(*case, check, sample)?
                    });
                }
            }
        }
        Ok(worst)
    }

    /// Samples every site for the loads of `cases` times `scale`: by case, by check, the points that
    /// may be worst.
    fn sweep(&self, cases: &[usize], scale: f64) -> Result<Vec<Vec<Vec<Sample>>>, Diagnostic> {
        let checks = self.asking.sheet.checks.len();
        let mut found: Vec<Vec<Vec<Sample>>> = vec![vec![Vec::new(); checks]; cases.len()];
        for (index, bench) in self.benches.iter().enumerate() {
            let positions = &self.positions[index];
            let count = cases.len() * positions.len();
            let columns = self.columns(bench, cases, positions, scale);
            let batch = bench.at_points(&columns, count);
            if let Some((condition, point)) = batch.broken {
                let (case, p) = (
                    cases[point / positions.len()],
                    positions[point % positions.len()],
                );
                return Err(bench.broken(condition, &self.place(bench, case, p)));
            }
            let mut ratios = Vec::with_capacity(positions.len());
            for (check, [demand, capacity]) in bench.of_batch(&batch).into_iter().enumerate() {
                for (at, case) in cases.iter().enumerate() {
                    ratios.clear();
                    for (step, p) in positions.iter().enumerate() {
                        let point = at * positions.len() + step;
                        let pair = Pair {
                            demand: demand.at(point),
                            capacity: capacity.at(point),
                        };
                        ratios.push(self.ratio_of(bench, check, pair, (*case, *p, scale))?);
                    }
                    keep_peaks(&mut found[at][check], index, positions, &ratios);
                }
            }
        }
        Ok(found)
    }

    fn columns(
        &self,
        bench: &Bench<'_>,
        cases: &[usize],
        positions: &[f64],
        scale: f64,
    ) -> Vec<Vec<f64>> {
        let mut columns =
            vec![Vec::with_capacity(cases.len() * positions.len()); bench.fields.len()];
        let mut values = vec![0.0; bench.fields.len()];
        for case in cases {
            for p in positions {
                fill(
                    self.ground,
                    &bench.site,
                    &bench.fields,
                    (*case, *p, scale),
                    &mut values,
                );
                for (column, value) in columns.iter_mut().zip(&values) {
                    column.push(*value);
                }
            }
        }
        columns
    }

    /// The worst of the samples, refined between its neighbours where a run is searched.
    fn pick(
        &self,
        case: usize,
        check: usize,
        samples: &[Sample],
        scale: f64,
    ) -> Result<Sample, Diagnostic> {
        let largest = samples
            .iter()
            .map(|sample| sample.ratio)
            .fold(0.0, f64::max);
        let mut best: Option<Sample> = None;
        for sample in samples {
            let mut candidate = *sample;
            if let Some(near) = sample.near
                && sample.ratio > 0.0
                && sample.ratio >= WORTH_REFINING * largest
            {
                candidate = self.refine(case, check, candidate, near, scale)?;
            }
            if best.is_none_or(|best| beats(candidate.ratio, best.ratio)) {
                best = Some(candidate);
            }
        }
        Ok(best.expect("every sheet has a site with points"))
    }

    fn refine(
        &self,
        case: usize,
        check: usize,
        sample: Sample,
        (low, high): (f64, f64),
        scale: f64,
    ) -> Result<Sample, Diagnostic> {
        let failed = RefCell::new(None);
        let bench = &self.benches[sample.bench];
        let ratio = |x: f64| match self.ratio(bench, check, (case, low + x * (high - low), scale)) {
            Ok(ratio) => ratio,
            Err(fault) => {
                failed.borrow_mut().get_or_insert(fault);
                f64::NAN
            }
        };
        let found = peak(2, ratio);
        match (found, failed.into_inner()) {
            (_, Some(fault)) => Err(fault),
            (Ok(found), None) if beats(found.value, sample.ratio) => Ok(Sample {
                p: low + found.p * (high - low),
                ratio: found.value,
                ..sample
            }),
            (_, None) => Ok(sample),
        }
    }

    /// Demand and capacity at one point by the single evaluator.
    fn pair(
        &self,
        bench: &Bench<'_>,
        check: usize,
        at: (usize, f64, f64),
    ) -> Result<Pair, Diagnostic> {
        let mut values = vec![0.0; bench.fields.len()];
        fill(self.ground, &bench.site, &bench.fields, at, &mut values);
        match bench.at_point(&values) {
            Ok(pairs) => Ok(pairs[check]),
            Err(error) => Err(fault(&self.asking, &error, &self.place(bench, at.0, at.1))),
        }
    }

    fn ratio(
        &self,
        bench: &Bench<'_>,
        check: usize,
        at: (usize, f64, f64),
    ) -> Result<f64, Diagnostic> {
        let pair = self
            .pair(bench, check, at)
            .or_else(|fault| self.without_stress(bench, at).ok_or(fault))?;
        self.ratio_of(bench, check, pair, at)
    }

    /// A point without any stress has no demand, whatever a formula divides by.
    fn without_stress(
        &self,
        bench: &Bench<'_>,
        (case, p, scale): (usize, f64, f64),
    ) -> Option<Pair> {
        let f = (self.ground.stress)(case, bench.site.run, p) * scale;
        (f.norm() <= 0.0).then_some(Pair {
            demand: 0.0,
            capacity: 1.0,
        })
    }

    /// max(0, D)/R.
    fn ratio_of(
        &self,
        bench: &Bench<'_>,
        check: usize,
        pair: Pair,
        at: (usize, f64, f64),
    ) -> Result<f64, Diagnostic> {
        let pair = if pair.demand.is_finite() && pair.capacity.is_finite() {
            pair
        } else {
            // The single evaluator says why there is no number.
            self.pair(bench, check, at)
                .or_else(|fault| self.without_stress(bench, at).ok_or(fault))?
        };
        if pair.capacity <= 0.0 {
            let sheet = self.asking.sheet;
            let message = format!(
                "the capacity of `{}` is {}, but must be above 0, for {}",
                sheet.checks[check].name.value,
                pair.capacity,
                self.place(bench, at.0, at.1)
            );
            return Err(self.asking.fault("capacity-not-positive", message));
        }
        Ok(pair.demand.max(0.0) / pair.capacity)
    }

    fn place(&self, bench: &Bench<'_>, case: usize, p: f64) -> String {
        let name = &self.ground.joint.loads.cases[case].name.value;
        format!(
            "case `{name}` on run `{}` at {p:.3} of its length",
            self.ground.runs[bench.site.run].name
        )
    }

    fn outcome(
        &self,
        case: usize,
        check: usize,
        sample: Sample,
        factor: f64,
        margin: Margin,
    ) -> Result<Governing, Diagnostic> {
        let bench = &self.benches[sample.bench];
        let at = (case, sample.p, 1.0);
        let pair = self
            .pair(bench, check, at)
            .or_else(|fault| self.without_stress(bench, at).ok_or(fault))?;
        let run = &self.ground.runs[bench.site.run];
        Ok(Governing {
            case,
            run: bench.site.run,
            s: sample.p,
            position: run.path.point(sample.p),
            side: throat_planes(run, sample.p)[bench.site.plane].side,
            side_assumed: bench.site.assumed,
            part: bench.site.turn,
            demand: pair.demand,
            capacity: pair.capacity,
            utilisation: pair.demand.max(0.0) / pair.capacity,
            margin,
            load_factor: factor,
        })
    }

    fn proportional(
        &self,
        case: usize,
        check: usize,
        sample: Sample,
    ) -> Result<Governing, Diagnostic> {
        self.check_proportional(&self.benches[sample.bench], check, (case, sample.p))?;
        let (factor, margin) = if sample.ratio > 0.0 {
            (1.0 / sample.ratio, Margin::Value(1.0 / sample.ratio - 1.0))
        } else {
            (f64::INFINITY, Margin::High)
        };
        self.outcome(case, check, sample, factor, margin)
    }

    /// The point of a case whose load factor is least.
    ///
    /// Starts from the point of the largest D/R. At its load factor every other point of the group
    /// is looked at; one that exceeds its limit there takes over, until none does.
    fn by_factor(&self, case: usize, check: usize, start: Sample) -> Result<Governing, Diagnostic> {
        let mut sample = start;
        let mut factor = self.factor(case, check, sample);
        for _ in 0..ROUNDS {
            if factor <= 0.0 {
                break;
            }
            let probe = factor.min(LARGEST);
            let samples = self.sweep(&[case], probe)?;
            let other = self.pick(case, check, &samples[0][check], probe)?;
            let lower = self.factor(case, check, other);
            if !beats(other.ratio, 1.0) || lower >= factor {
                break;
            }
            (sample, factor) = (other, lower);
        }
        let margin = if factor <= 0.0 {
            Margin::FixedTermsExceed
        } else if factor.is_finite() {
            Margin::Value(factor - 1.0)
        } else {
            Margin::High
        };
        self.outcome(case, check, sample, factor, margin)
    }

    fn factor(&self, case: usize, check: usize, sample: Sample) -> f64 {
        let bench = &self.benches[sample.bench];
        least_factor(
            |factor| match self.pair(bench, check, (case, sample.p, factor)) {
                Ok(pair) if pair.capacity > 0.0 => pair.demand - pair.capacity,
                Ok(_) => f64::NAN,
                Err(_) => self
                    .without_stress(bench, (case, sample.p, factor))
                    .map_or(f64::NAN, |_| -1.0),
            },
        )
    }

    /// Holds the claim of proportionality against every sample of one case.
    pub(super) fn verify_proportional(&self, case: usize) -> Result<(), Diagnostic> {
        for (bench, positions) in self.benches.iter().zip(&self.positions) {
            for check in 0..self.asking.sheet.checks.len() {
                for p in positions {
                    self.check_proportional(bench, check, (case, *p))?;
                }
            }
        }
        Ok(())
    }

    fn check_proportional(
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
        let twice = self.pair(bench, check, (case, p, 2.0))?;
        let differs = |a: f64, b: f64, size: f64| (a - b).abs() > PROPORTIONAL * size;
        // A demand that cancels to rounding noise is held to a part of the capacity.
        let noise = 1e-6 * once.capacity.abs();
        let demand = differs(
            twice.demand,
            2.0 * once.demand,
            twice.demand.abs().max(noise),
        );
        let capacity = differs(twice.capacity, once.capacity, once.capacity.abs());
        if !demand && !capacity {
            return Ok(());
        }
        let what = if demand {
            format!(
                "twice the loads make its demand {} of {}",
                twice.demand, once.demand
            )
        } else {
            format!(
                "twice the loads make its capacity {} of {}",
                twice.capacity, once.capacity
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

/// Keeps the samples that no neighbour exceeds; the two ends of a straight run are both kept.
fn keep_peaks(found: &mut Vec<Sample>, bench: usize, positions: &[f64], ratios: &[f64]) {
    let searched = positions.len() > 2;
    for (at, ratio) in ratios.iter().enumerate() {
        let before = at.checked_sub(1);
        let after = (at + 1 < ratios.len()).then_some(at + 1);
        // Of equal neighbours the first stands for all.
        let is_peak = before.is_none_or(|other| *ratio > ratios[other])
            && after.is_none_or(|other| *ratio >= ratios[other]);
        if searched && !is_peak {
            continue;
        }
        let near = searched.then(|| {
            (
                positions[before.unwrap_or(at)],
                positions[after.unwrap_or(at)],
            )
        });
        found.push(Sample {
            bench,
            p: positions[at],
            ratio: *ratio,
            near,
        });
    }
}
