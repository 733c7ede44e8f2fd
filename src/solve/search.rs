//! Where a demand peaks: along a run, and over a group.
//!
//! A demand is any function of the run and the parameter along it. Ties within 1e-9 go to the
//! earlier position in file order.

use super::field::Field;
use super::points::Spot;
use crate::quantity::real;
use crate::weld::{Run, Segment, V3};
use std::f64::consts::PI;
use thiserror::Error;

/// A peak of a demand.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Peak {
    /// Parameter, 0 to 1.
    pub p: f64,
    /// The demand there.
    pub value: f64,
}

/// A peak over a group.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Governing {
    /// Where it stands.
    pub spot: Spot,
    /// The demand there.
    pub value: f64,
}

/// Why a search has no result.
#[derive(Clone, Copy, PartialEq, Debug, Error)]
pub enum SearchError {
    /// The demand is NaN or infinite somewhere.
    #[error("the demand at parameter {p} of run {run} is {value}")]
    NotFinite {
        /// Index of the run.
        run: usize,
        /// Parameter.
        p: f64,
        /// The value.
        value: f64,
    },
    /// There is no run to search.
    #[error("there is no run to search")]
    NoRuns,
}

/// Part of a value within which two peaks tie.
pub const TIE: f64 = 1e-9;
/// Intervals of the first sampling on a straight run, and on each quarter turn of an arc: demands
/// of fillet clauses have a handful of peaks a turn.
const SAMPLES: u32 = 32;
/// Golden-section steps: 0.618⁵⁰ of two sample intervals is 1e-12 of the run, under which even a
/// demand with a kink is exact to 1e-9.
const STEPS: u32 = 50;
/// (√5 − 1)/2, the golden section.
const GOLDEN: f64 = 0.618_033_988_749_894_9;

/// Whether `later` beats `earlier` by more than a tie.
#[must_use]
pub fn beats(later: f64, earlier: f64) -> bool {
    later - earlier > TIE * later.abs().max(earlier.abs())
}

/// The largest value of `demand` on [0, 1], ends included, from `intervals` sample intervals.
///
/// Every sample that no neighbour exceeds is refined by golden section between its neighbours to
/// 1e-12 of the range. The search sees peaks wider than a sample interval.
///
/// # Errors
///
/// [`SearchError::NotFinite`] (of run 0) if the demand is NaN or infinite at a position tried.
pub fn peak(intervals: u32, demand: impl Fn(f64) -> f64) -> Result<Peak, SearchError> {
    let value_at = |p: f64| {
        let value = demand(p);
        if value.is_finite() {
            Ok(value)
        } else {
            Err(SearchError::NotFinite { run: 0, p, value })
        }
    };
    let at = |index: u32| f64::from(index) / f64::from(intervals);
    let values = (0..=intervals)
        .map(|i| value_at(at(i)))
        .collect::<Result<Vec<f64>, _>>()?;
    let mut best = Peak {
        p: 0.0,
        value: values[0],
    };
    for (index, value) in (0..=intervals).zip(&values) {
        let here = index as usize;
        let before = if here == 0 {
            f64::NEG_INFINITY
        } else {
            values[here - 1]
        };
        let after = values.get(here + 1).copied().unwrap_or(f64::NEG_INFINITY);
        if *value < before || *value < after {
            continue;
        }
        let sample = Peak {
            p: at(index),
            value: *value,
        };
        let (low, high) = (at(index.saturating_sub(1)), at((index + 1).min(intervals)));
        let refined = golden(low, high, &value_at)?;
        // A sample that ties with its refinement stands: it is the rounder position.
        for candidate in [sample, refined] {
            if beats(candidate.value, best.value) {
                best = candidate;
            }
        }
    }
    Ok(best)
}

/// Golden-section search for a maximum between `low` and `high`.
///
/// # Source
///
/// J. Kiefer, "Sequential minimax search for a maximum", *Proc. AMS* 4 (1953), 502–506.
fn golden(
    mut low: f64,
    mut high: f64,
    value_at: &impl Fn(f64) -> Result<f64, SearchError>,
) -> Result<Peak, SearchError> {
    let mut left = high - GOLDEN * (high - low);
    let mut right = low + GOLDEN * (high - low);
    let (mut at_left, mut at_right) = (value_at(left)?, value_at(right)?);
    for _ in 0..STEPS {
        if at_left >= at_right {
            (high, right, at_right) = (right, left, at_left);
            left = high - GOLDEN * (high - low);
            at_left = value_at(left)?;
        } else {
            (low, left, at_left) = (left, right, at_right);
            right = low + GOLDEN * (high - low);
            at_right = value_at(right)?;
        }
    }
    Ok(if at_left >= at_right {
        Peak {
            p: left,
            value: at_left,
        }
    } else {
        Peak {
            p: right,
            value: at_right,
        }
    })
}

/// Sample intervals for a run: more for an arc, by its turn.
#[must_use]
pub fn intervals(path: &Segment) -> u32 {
    let Segment::Arc { sweep, .. } = path else {
        return SAMPLES;
    };
    let mut quarters = 1;
    while f64::from(quarters) * PI / 2.0 < sweep.abs() - 1e-9 {
        quarters += 1;
    }
    SAMPLES * quarters
}

/// Where `demand(run, p)` is largest over the runs, each searched along its whole length.
///
/// # Errors
///
/// [`SearchError`] if the demand is not finite somewhere, or there are no runs.
pub fn governing(
    runs: &[Run],
    demand: impl Fn(usize, f64) -> f64,
) -> Result<Governing, SearchError> {
    let peaks = runs.iter().enumerate().map(|(index, run)| {
        let found =
            peak(intervals(&run.path), |p| demand(index, p)).map_err(|error| match error {
                SearchError::NotFinite { p, value, .. } => SearchError::NotFinite {
                    run: index,
                    p,
                    value,
                },
                SearchError::NoRuns => error,
            })?;
        Ok((
            Spot {
                run: index,
                p: found.p,
            },
            found.value,
        ))
    });
    earliest(peaks)
}

/// As [`governing`] for a demand that is convex in the stress on straight runs: there only the ends
/// are looked at.
///
/// # Errors
///
/// As [`governing`].
pub fn governing_convex(
    runs: &[Run],
    demand: impl Fn(usize, f64) -> f64,
) -> Result<Governing, SearchError> {
    let peaks = runs.iter().enumerate().flat_map(|(index, run)| {
        let found: Vec<Result<Peak, SearchError>> = match run.path {
            Segment::Straight { .. } => [0.0, 1.0]
                .map(|p| {
                    Ok(Peak {
                        p,
                        value: demand(index, p),
                    })
                })
                .into(),
            Segment::Arc { .. } => vec![peak(intervals(&run.path), |p| demand(index, p))],
        };
        found.into_iter().map(move |peak| match peak {
            Ok(Peak { p, value }) if value.is_finite() => Ok((Spot { run: index, p }, value)),
            Ok(Peak { p, value }) | Err(SearchError::NotFinite { p, value, .. }) => {
                Err(SearchError::NotFinite {
                    run: index,
                    p,
                    value,
                })
            }
            Err(error) => Err(error),
        })
    });
    earliest(peaks)
}

/// The largest resultant of a field over the runs: ends of straights; ends and every stationary
/// point of arcs.
///
/// # Errors
///
/// As [`governing`].
pub fn largest_resultant(runs: &[Run], field: &Field) -> Result<Governing, SearchError> {
    let candidates = runs.iter().enumerate().flat_map(|(index, run)| {
        let inner = stationary_points(&run.path, field);
        [0.0].into_iter().chain(inner).chain([1.0]).map(move |p| {
            let value = field.at(run.path.point(p)).norm();
            if value.is_finite() {
                Ok((Spot { run: index, p }, value))
            } else {
                Err(SearchError::NotFinite {
                    run: index,
                    p,
                    value,
                })
            }
        })
    });
    earliest(candidates)
}

fn earliest(
    found: impl Iterator<Item = Result<(Spot, f64), SearchError>>,
) -> Result<Governing, SearchError> {
    let mut best: Option<Governing> = None;
    for item in found {
        let (spot, value) = item?;
        if best.is_none_or(|best| beats(value, best.value)) {
            best = Some(Governing { spot, value });
        }
    }
    best.ok_or(SearchError::NoRuns)
}

/// Intervals on a full turn in which zeros of the derivative are bracketed.
const BRACKETS: u32 = 128;

/// Parameters inside an arc at which |f|² of a field may be stationary, ascending; none for a
/// straight.
///
/// On an arc f = a + b cos θ + c sin θ, so d|f|²/dθ is a trigonometric polynomial of degree two,
/// with at most four zeros a turn. Zeros with a change of sign are bisected; where the derivative
/// comes near zero without one, the nearest sample is added, which costs nothing: every candidate
/// is evaluated.
#[must_use]
pub fn stationary_points(path: &Segment, field: &Field) -> Vec<f64> {
    let Segment::Arc {
        centre,
        radius,
        u,
        v,
        from,
        sweep,
    } = path
    else {
        return Vec::new();
    };
    let a = field.at(*centre);
    let b: V3 = field.twist.cross(u) * *radius;
    let c: V3 = field.twist.cross(v) * *radius;
    // Half of d|f|²/dθ = (a + b cos θ + c sin θ)·(c cos θ − b sin θ).
    let slope = |p: f64| {
        let angle = from + sweep * p;
        let (sine, cosine) = (real::sin(angle), real::cos(angle));
        (a + b * cosine + c * sine).dot(&(c * cosine - b * sine))
    };
    let samples: Vec<(f64, f64)> = (0..=BRACKETS)
        .map(|i| f64::from(i) / f64::from(BRACKETS))
        .map(|p| (p, slope(p)))
        .collect();
    let mut found: Vec<f64> = Vec::new();
    for pair in samples.windows(2) {
        let ((low, at_low), (high, at_high)) = (pair[0], pair[1]);
        if (at_low > 0.0) != (at_high > 0.0) {
            found.push(bisect(low, high, at_low > 0.0, &slope));
        }
    }
    for three in samples.windows(3) {
        let size = |i: usize| three[i].1.abs();
        if size(1) <= size(0) && size(1) <= size(2) {
            found.push(three[1].0);
        }
    }
    found.retain(|p| *p > 0.0 && *p < 1.0);
    found.sort_by(f64::total_cmp);
    found
}

/// The zero between `low` and `high`, at which the slope is positive on the low side if `rising`.
fn bisect(mut low: f64, mut high: f64, rising: bool, slope: &impl Fn(f64) -> f64) -> f64 {
    // 50 halvings of 1/128 end below the spacing of numbers near 1.
    for _ in 0..50 {
        let middle = f64::midpoint(low, high);
        if (slope(middle) > 0.0) == rising {
            low = middle
        } else {
            high = middle
        }
    }
    f64::midpoint(low, high)
}
