//! Batch evaluation of many stress fields at many points, structure of arrays (tensor form).
//!
//! f = F/A + θ × ρ with ρ = r − C. Eight cases go through each step side by side. No fused
//! multiply-add, so that every split of the work gives the same bits.

use super::field::Field;
use crate::quantity::real;
use crate::weld::V3;

/// Cases that go through one step side by side.
pub const LANES: usize = 8;

/// Part of a resultant by which a later point must exceed an earlier one to govern.
const TIE: f64 = 1e-9;

/// One number of each of eight cases.
type Lane = [f64; LANES];

/// The fields of eight cases.
#[derive(Clone, Copy, PartialEq, Debug, Default)]
struct Block {
    mean: [Lane; 3],
    twist: [Lane; 3],
}

/// Fields of many cases of one group, ready for the batch.
#[derive(Clone, PartialEq, Debug)]
pub struct Batch {
    cases: usize,
    centroid: V3,
    blocks: Vec<Block>,
}

/// Points of a group relative to its centroid.
#[derive(Clone, PartialEq, Debug)]
pub struct Points {
    rho: Vec<[f64; 3]>,
}

/// The largest resultant of a case and the point where it stands.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Largest {
    /// Index of the point; of ties within 1e-9 the earliest.
    pub point: usize,
    /// |f| there (stress).
    pub resultant: f64,
}

impl Points {
    /// Points `positions` of the group whose centroid is `centroid` (lengths).
    #[must_use]
    pub fn new(positions: &[V3], centroid: V3) -> Self {
        Self {
            rho: positions.iter().map(|r| (r - centroid).into()).collect(),
        }
    }

    /// Number of points.
    #[must_use]
    pub const fn len(&self) -> usize {
        self.rho.len()
    }

    /// Whether there is no point.
    #[must_use]
    pub const fn is_empty(&self) -> bool {
        self.rho.is_empty()
    }
}

impl Batch {
    /// Packs the fields of all cases; the last step is filled up with empty cases.
    #[must_use]
    pub fn new(fields: &[Field]) -> Self {
        let pack = |chunk: &[Field]| {
            let mut block = Block::default();
            for (lane, field) in chunk.iter().enumerate() {
                for axis in 0..3 {
                    block.mean[axis][lane] = field.mean[axis];
                    block.twist[axis][lane] = field.twist[axis];
                }
            }
            block
        };
        Self {
            cases: fields.len(),
            centroid: fields
                .first()
                .map_or_else(V3::zeros, |field| field.centroid),
            blocks: fields.chunks(LANES).map(pack).collect(),
        }
    }

    /// Number of cases.
    #[must_use]
    pub const fn cases(&self) -> usize {
        self.cases
    }

    /// The centroid of the group (length).
    #[must_use]
    pub const fn centroid(&self) -> V3 {
        self.centroid
    }

    /// The stress of one case at one point.
    ///
    /// # Panics
    ///
    /// If the case or the point does not exist.
    #[must_use]
    pub fn stress(&self, case: usize, points: &Points, point: usize) -> V3 {
        assert!(case < self.cases, "case {case} of {}", self.cases);
        let f = stress(&self.blocks[case / LANES], points.rho[point]);
        let lane = case % LANES;
        V3::new(f[0][lane], f[1][lane], f[2][lane])
    }

    /// Calls `visit(case, point, f)` for every case at every point; the points of a case come in
    /// order, the cases in steps of eight.
    pub fn each_stress(&self, points: &Points, mut visit: impl FnMut(usize, usize, V3)) {
        for (step, block) in self.blocks.iter().enumerate() {
            for (point, rho) in points.rho.iter().enumerate() {
                let f = stress(block, *rho);
                let first = step * LANES;
                let lanes = f[0].iter().zip(&f[1]).zip(&f[2]).take(self.cases - first);
                for (lane, ((x, y), z)) in lanes.enumerate() {
                    visit(first + lane, point, V3::new(*x, *y, *z));
                }
            }
        }
    }

    /// The largest resultant of each case over the points, in case order; empty without points.
    #[must_use]
    pub fn largest(&self, points: &Points) -> Vec<Largest> {
        self.largest_of(points, 0..self.blocks.len())
    }

    /// [`Self::largest`] with the work split over `threads` threads; the same to the bit.
    #[must_use]
    pub fn largest_on(&self, points: &Points, threads: usize) -> Vec<Largest> {
        let share = self.blocks.len().div_ceil(threads.max(1)).max(1);
        let ranges = (0..self.blocks.len())
            .step_by(share)
            .map(|at| at..(at + share).min(self.blocks.len()));
        std::thread::scope(|scope| {
            let workers: Vec<_> = ranges
                .map(|range| scope.spawn(move || self.largest_of(points, range)))
                .collect();
            workers
                .into_iter()
                .flat_map(|worker| worker.join().expect("the kernel does not panic"))
                .collect()
        })
    }

    fn largest_of(&self, points: &Points, steps: std::ops::Range<usize>) -> Vec<Largest> {
        if points.is_empty() {
            return Vec::new();
        }
        let mut found = Vec::with_capacity(steps.len() * LANES);
        for step in steps {
            let (square, at) = largest_of_block(&self.blocks[step], &points.rho);
            for lane in 0..LANES.min(self.cases - step * LANES) {
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    reason = "the index was counted up from 0"
                )]
                let point = at[lane] as usize;
                let resultant = real::sqrt(square[lane]);
                found.push(Largest { point, resultant });
            }
        }
        found
    }
}

/// f = F/A + θ × ρ of eight cases at one point.
#[inline(always)]
fn stress(block: &Block, [x, y, z]: [f64; 3]) -> [Lane; 3] {
    let ([tx, ty, tz], [mx, my, mz]) = (&block.twist, &block.mean);
    let mut f = [[0.0; LANES]; 3];
    for lane in 0..LANES {
        f[0][lane] = mx[lane] + (ty[lane] * z - tz[lane] * y);
        f[1][lane] = my[lane] + (tz[lane] * x - tx[lane] * z);
        f[2][lane] = mz[lane] + (tx[lane] * y - ty[lane] * x);
    }
    f
}

/// The largest |f|² of eight cases, and the index of its point as a number.
fn largest_of_block(block: &Block, points: &[[f64; 3]]) -> (Lane, Lane) {
    // A square must exceed the last by twice the tie of the resultant.
    let margin = 1.0 + 2.0 * TIE;
    let mut best = [-1.0; LANES];
    let mut at = [0.0; LANES];
    let mut index = 0.0;
    for rho in points {
        let [x, y, z] = stress(block, *rho);
        for lane in 0..LANES {
            let square = x[lane] * x[lane] + y[lane] * y[lane] + z[lane] * z[lane];
            let larger = square > best[lane] * margin;
            best[lane] = if larger { square } else { best[lane] };
            at[lane] = if larger { index } else { at[lane] };
        }
        index += 1.0;
    }
    (best, at)
}
