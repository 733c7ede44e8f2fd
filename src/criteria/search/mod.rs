//! Where a check is worst: samples by the batch program, refinement by the single evaluator.

mod claims;

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
pub(in crate::criteria) struct Search<'a> {
    ground: &'a Ground<'a>,
    asking: Asking<'a>,
    benches: &'a [Bench<'a>],
    positions: Vec<Vec<f64>>,
}

impl<'a> Search<'a> {
    pub(in crate::criteria) fn new(
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
    pub(in crate::criteria) fn worst_of_cases(
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

    /// Utilisation of a check along one site in one case: D/R where the demand is proportional to the
    /// loads, else one over the least load factor that reaches the limit.
    pub(in crate::criteria) fn along(
        &self,
        bench: &Bench<'_>,
        check: usize,
        case: usize,
        positions: &[f64],
    ) -> Result<Vec<f64>, Diagnostic> {
        if self.asking.sheet.checks[check].proportional {
            return self.ratios_along(bench, check, case, positions);
        }
        let place = self
            .benches
            .iter()
            .position(|known| std::ptr::eq(known, bench));
        let factor = |p: &f64| {
            let sample = Sample {
                bench: place.expect("the site is one of the search"),
                p: *p,
                ratio: 0.0,
                near: None,
            };
            1.0 / self.factor(case, check, sample)
        };
        Ok(positions.iter().map(factor).collect())
    }

    /// max(0, D)/R of a check along one site in one case, by the batch program.
    fn ratios_along(
        &self,
        bench: &Bench<'_>,
        check: usize,
        case: usize,
        positions: &[f64],
    ) -> Result<Vec<f64>, Diagnostic> {
        let columns = self.columns(bench, &[case], positions, 1.0);
        let batch = bench.at_points(&columns, positions.len());
        if let Some((condition, point)) = batch.broken {
            let place = self.place(bench, case, positions[point]);
            return Err(bench.broken(condition, &place));
        }
        let [demand, capacity] = &bench.of_batch(&batch)[check];
        let ratio = |(at, p): (usize, &f64)| {
            let pair = Pair {
                demand: demand.at(at),
                capacity: capacity.at(at),
            };
            self.ratio_of(bench, check, pair, (case, *p, 1.0))
        };
        positions.iter().enumerate().map(ratio).collect()
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
            utilisation: match margin {
                Margin::Value(_) | Margin::High
                    if !self.asking.sheet.checks[check].proportional =>
                {
                    1.0 / factor
                }
                _ => pair.demand.max(0.0) / pair.capacity,
            },
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
        self.check_convex(&self.benches[sample.bench], check, case)?;
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::criteria::sheet::Scope;
    use crate::criteria::state::Site;
    use crate::criteria::{Turn, built_in};
    use crate::joint::{CheckSpec, Joint, read_joint};
    use crate::source::SourceFile;
    use crate::weld::{Run, V3, lay_runs};
    use std::sync::Arc;

    /// Numbers between −1 and 1, the same on every machine.
    struct Random(u64);

    impl Random {
        fn next(&mut self) -> f64 {
            self.0 = self
                .0
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            f64::from(u32::try_from(self.0 >> 32).unwrap()) / f64::from(u32::MAX) * 2.0 - 1.0
        }
    }

    /// A joint with every value that a sheet of the project may ask for.
    fn joint(units: &str, size: &str) -> Joint {
        let text = format!(
            "note: T
title: T
revision: A
date: 2026-05-04
units: {units}
frame: {{origin: o}}
parts:
  a: {{material: S355J2, thickness: 0.4, f_y: 50 ksi, f_u: 65 ksi, F_su: 40 ksi, source: x}}
  b: {{material: S275, thickness: 0.5, f_y: 40 ksi, f_u: 60 ksi, F_su: 35 ksi, source: x}}
filler: {{name: E70, f_u: 70 ksi, F_su: 32 ksi, F_sy: 20 ksi, F_allow: 21 ksi, tau_allow: 20 ksi, source: x}}
weld:
  joins: [a, b]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [10, 2]], {size}, sides: both}}]
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: ultimate, force: [1, 0, 0]}}]}}
checks: [{{clause: x}}]
"
        );
        let file = Arc::new(SourceFile {
            name: "trial.yaml".into(),
            text,
        });
        read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)))
    }

    /// The batch program and the single evaluator share no loop; they give the same numbers.
    #[test]
    fn batch_and_single_agree_on_random_points_for_every_sheet() {
        let mut random = Random(7);
        let mut compared = 0;
        for units in ["{force: kip, length: in}", "{force: N, length: m}"] {
            for size in ["fillet: 0.25", "partial: 0.2", "complete: tee"] {
                let joint = joint(units, size);
                let runs = if size == "complete: tee" {
                    one_bead(&joint)
                } else {
                    lay_runs(&joint).unwrap()
                };
                for sheet in built_in()
                    .sheets()
                    .filter(|sheet| sheet.scope == Scope::Point && sheet.takes(&runs[0]))
                {
                    compared += compare(&joint, &runs, sheet, &mut random);
                }
            }
        }
        assert!(compared >= 200 * 2 * 20, "{compared} comparisons");
    }

    /// A groove fills its plate: it has no second bead.
    fn one_bead(joint: &Joint) -> Vec<Run> {
        let mut joint = joint.clone();
        joint.weld.runs[0].both_sides = None;
        lay_runs(&joint).unwrap()
    }

    fn compare(
        joint: &Joint,
        runs: &[Run],
        sheet: &crate::criteria::Sheet,
        random: &mut Random,
    ) -> usize {
        let spec = CheckSpec {
            values: vec![(
                crate::source::Told {
                    value: "end_loaded_length".into(),
                    place: joint.checks[0].place.clone(),
                },
                crate::source::Told {
                    value: "70".into(),
                    place: joint.checks[0].place.clone(),
                },
            )],
            ..joint.checks[0].clone()
        };
        let points: Vec<V3> = (0..400)
            .map(|_| V3::new(random.next(), random.next(), random.next()) * 30.0)
            .collect();
        let stress = |case: usize, run: usize, _: f64| points[case + 200 * run];
        let ground = Ground {
            joint,
            runs,
            stress: &stress,
        };
        let asking = Asking {
            joint,
            index: 0,
            spec: &spec,
            sheet,
        };
        let tables = sheet.tables(joint.units.value);
        let turn = sheet.each_part.then_some(Turn::Attached);
        let site = Site {
            run: 0,
            turn,
            plane: 0,
            assumed: false,
        };
        let bench = Bench::new(asking, &tables, runs, site)
            .unwrap_or_else(|fault| panic!("{}", fault.render(false)));
        let benches = [bench];
        let search = Search::new(&ground, asking, &benches);
        let cases: Vec<usize> = (0..200).collect();
        let columns = search.columns(&benches[0], &cases, &[0.5], 1.0);
        let batch = benches[0].at_points(&columns, 200);
        assert_eq!(batch.broken, None, "{}", sheet.name.value);
        for (check, [demand, capacity]) in benches[0].of_batch(&batch).into_iter().enumerate() {
            for case in &cases {
                let single = search.pair(&benches[0], check, (*case, 0.5, 1.0)).unwrap();
                for (name, batch, single) in [
                    ("demand", demand.at(*case), single.demand),
                    ("capacity", capacity.at(*case), single.capacity),
                ] {
                    let same = (batch - single).abs() <= 1e-14 * single.abs();
                    assert!(
                        same,
                        "{}: {name} of case {case} is {batch}, not {single}",
                        sheet.name.value
                    );
                }
            }
        }
        200 * sheet.checks.len()
    }
}
