//! What an assessment yields: for each check what governs, for each case the worst, for each run
//! the limits.

use super::resolve::Turn;
use super::sheet::Sheet;
use crate::weld::V3;
use std::sync::Arc;

/// The outcome of every check asked for, in file order.
#[derive(Clone, Debug)]
pub struct Assessment {
    /// One for each entry of the joint's checks.
    pub asked: Vec<Asked>,
}

/// The outcome of one check asked for.
#[derive(Clone, Debug)]
pub struct Asked {
    /// Index in the joint's checks.
    pub index: usize,
    /// Its sheet.
    pub sheet: Arc<Sheet>,
    /// Cases that it took, in file order; none for a sheet of sizes.
    pub taken: Vec<usize>,
    /// Cases of other levels, which it does not take.
    pub not_taken: Vec<usize>,
    /// Runs of other kinds of weld, which it does not take.
    pub left_out: Vec<usize>,
    /// Outcomes of the sheet's strength checks, in its order.
    pub strength: Vec<StrengthOutcome>,
    /// Outcomes of the sheet's limits: by limit, then run, then part.
    pub limits: Vec<LimitOutcome>,
}

/// The outcome of one strength check of a sheet.
#[derive(Clone, PartialEq, Debug)]
pub struct StrengthOutcome {
    /// Index in the sheet's checks.
    pub check: usize,
    /// The worst of all cases and points.
    pub governing: Governing,
    /// The worst of each case taken, in file order.
    pub per_case: Vec<Governing>,
    /// The worst of each part in turn, for a sheet that is evaluated for each part; else empty.
    pub by_part: Vec<Governing>,
}

/// A point of a case with its demand and capacity.
#[derive(Clone, PartialEq, Debug)]
pub struct Governing {
    /// Index of the case in the joint's loads.
    pub case: usize,
    /// Index of the run.
    pub run: usize,
    /// Parameter along the run's path, 0 to 1.
    pub s: f64,
    /// The point in the joint frame (length).
    pub position: V3,
    /// Side of the toe along n̂: +1 or −1.
    pub side: f64,
    /// Whether that side is not stated and the worse of both was taken.
    pub side_assumed: bool,
    /// The part in turn.
    pub part: Option<Turn>,
    /// Demand D in the printing set.
    pub demand: f64,
    /// Capacity R in the printing set, above 0.
    pub capacity: f64,
    /// Utilisation max(0, D)/R.
    pub utilisation: f64,
    /// Margin of safety.
    pub margin: Margin,
    /// Least positive load factor that reaches the limit; infinite if none does.
    pub load_factor: f64,
}

/// A margin of safety.
#[derive(Clone, Copy, PartialEq, Debug)]
pub enum Margin {
    /// MS.
    Value(f64),
    /// No load factor reaches the limit: there is no demand, or it does not grow with the loads.
    High,
    /// The terms that do not grow with the loads exceed the limit by themselves.
    FixedTermsExceed,
}

impl Margin {
    /// MS as a number; −1 where the fixed terms exceed the limit by themselves.
    #[must_use]
    pub const fn value(self) -> Option<f64> {
        match self {
            Self::Value(value) => Some(value),
            Self::High => None,
            Self::FixedTermsExceed => Some(-1.0),
        }
    }

    /// Why there is no plain number.
    #[must_use]
    pub const fn reason(self) -> Option<&'static str> {
        match self {
            Self::Value(_) => None,
            Self::High => Some("high: no load factor reaches the limit"),
            Self::FixedTermsExceed => {
                Some("the terms that do not grow with the loads exceed the limit by themselves")
            }
        }
    }

    /// Whether the check holds.
    #[must_use]
    pub fn holds(self) -> bool {
        self.value().is_none_or(|value| value >= 0.0)
    }
}

impl Governing {
    /// What a larger value of makes a point worse: 1/λ, 0 where no load factor reaches the limit.
    #[must_use]
    pub fn severity(&self) -> f64 {
        if self.load_factor > 0.0 {
            1.0 / self.load_factor
        } else {
            f64::INFINITY
        }
    }
}

/// The outcome of one limit at one run.
#[derive(Clone, PartialEq, Debug)]
pub struct LimitOutcome {
    /// Index in the sheet's limits.
    pub limit: usize,
    /// Index of the run.
    pub run: usize,
    /// The part in turn.
    pub part: Option<Turn>,
    /// The value in the printing set.
    pub value: f64,
    /// Its bound in the printing set.
    pub bound: f64,
    /// Whether it keeps the bound, which is inclusive.
    pub holds: bool,
}
