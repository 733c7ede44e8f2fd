//! The trace: the whole calculation as JSON, for machines and for later years.
//!
//! Its form is published in `trace.schema.json` beside this file. Numbers are in the printing set,
//! angles in rad; `numbers` of a step evaluates to `printed`.

use super::layout::{origin, unit};
use crate::formula::{Kind, Ledger};
use crate::quantity::UnitSet;
use crate::weld::V3;
use nalgebra::Matrix3;
use serde::Serialize;

/// The published form of a trace.
pub const SCHEMA: &str = include_str!("trace.schema.json");

/// The trace of a note.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct Trace {
    /// Number of the note.
    pub note: String,
    /// Issue.
    pub revision: String,
    /// Digests.
    pub identity: TraceIdentity,
    /// Version of the program.
    pub program: String,
    /// Units of the printing set.
    pub units: Units,
    /// Properties of the weld group.
    pub group: Group,
    /// Cases in file order.
    pub cases: Vec<TraceCase>,
    /// The least margin.
    pub governing: Option<Governing>,
    /// Residuals of closure for the governing case.
    pub closure: Option<TraceClosure>,
    /// Lines of the calculation.
    pub steps: Vec<TraceStep>,
}

/// Digests in full.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct TraceIdentity {
    /// Over inputs, sheets and printed results.
    pub calculation: String,
    /// Over the words.
    pub words: String,
}

/// Units of the printing set.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct Units {
    /// Unit of force.
    pub force: &'static str,
    /// Unit of length.
    pub length: &'static str,
    /// Unit of stress.
    pub stress: &'static str,
}

impl Units {
    /// The units of a set.
    pub(super) const fn of(set: UnitSet) -> Self {
        Self {
            force: set.force(),
            length: set.length(),
            stress: set.stress(),
        }
    }
}

/// Properties of the weld group about its centroid.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct Group {
    /// Area of all throats.
    pub area: f64,
    /// Centroid.
    pub centroid: [f64; 3],
    /// ∫ t (y − y_c)² ds.
    pub ixx: f64,
    /// ∫ t (x − x_c)² ds.
    pub iyy: f64,
    /// ∫ t (x − x_c)(y − y_c) ds.
    pub ixy: f64,
    /// ixx + iyy.
    pub j: f64,
    /// K by rows.
    pub tensor: [[f64; 3]; 3],
}

/// Rows of a matrix.
pub(super) fn rows(matrix: &Matrix3<f64>) -> [[f64; 3]; 3] {
    [0, 1, 2].map(|row| [0, 1, 2].map(|column| matrix[(row, column)]))
}

/// A case with its outcomes.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct TraceCase {
    /// Name.
    pub case: String,
    /// Stated level.
    pub level: &'static str,
    /// Force in the joint frame.
    pub force: [f64; 3],
    /// Moment about `at`.
    pub moment: [f64; 3],
    /// Point of application in the joint frame.
    pub at: [f64; 3],
    /// The same actions at the centroid.
    pub at_centroid: AtCentroid,
    /// Worst outcome of each check.
    pub checks: Vec<TraceCheck>,
}

/// Actions at the centroid.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct AtCentroid {
    /// Force.
    pub force: [f64; 3],
    /// Moment.
    pub moment: [f64; 3],
}

/// The worst outcome of a check in a case.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct TraceCheck {
    /// The check.
    pub check: String,
    /// The run and point.
    pub point: String,
    /// Position in the joint frame.
    pub position: [f64; 3],
    /// Demand.
    pub demand: f64,
    /// Capacity.
    pub capacity: f64,
    /// Unit of demand and capacity.
    pub unit: String,
    /// Utilisation; null where it does not exist.
    pub utilisation: Option<f64>,
    /// Margin of safety; null where it does not exist.
    pub margin: Option<f64>,
    /// Why a margin does not exist.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
}

/// The least margin.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct Governing {
    /// The check.
    pub check: String,
    /// The case.
    pub case: String,
    /// The run and point.
    pub point: String,
    /// The margin.
    pub margin: Option<f64>,
}

/// Residuals of closure, as parts of the load.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct TraceClosure {
    /// Of the force.
    pub force_residual: f64,
    /// Of the moment about the load's point.
    pub moment_residual: f64,
}

/// A line of the calculation.
#[derive(Clone, PartialEq, Debug, Serialize)]
pub struct TraceStep {
    /// Stable id.
    pub id: String,
    /// Printed number, or the table that it stands in.
    pub no: String,
    /// `given`, `converted`, `step`, `found` or `bound`.
    pub kind: &'static str,
    /// Symbol in plain letters.
    pub symbol: String,
    /// What it is.
    pub says: String,
    /// Plain algebra in symbols; null for a line without formula.
    pub formula: Option<String>,
    /// Plain algebra in printed numbers; null for a line without formula.
    pub numbers: Option<String>,
    /// Full-precision value in the printing set; rad for an angle, null for a bound.
    pub value: Option<f64>,
    /// The number as printed; degrees for an angle.
    pub printed: String,
    /// Unit of `printed`.
    pub unit: String,
    /// Ids of the lines whose numbers stand in it.
    pub uses: Vec<String>,
    /// Clause, method or place.
    pub source: String,
}

/// The components of a vector.
pub(super) fn components(v: V3) -> [f64; 3] {
    [v.x, v.y, v.z]
}

/// Every line of a settled ledger.
pub(super) fn steps(ledger: &Ledger) -> Vec<TraceStep> {
    ledger
        .values()
        .map(|value| {
            let entry = ledger.get(value);
            let kind = match entry.kind {
                Kind::Given(_) => "given",
                Kind::Converted { .. } => "converted",
                Kind::Step { .. } => "step",
                Kind::Found { .. } => "found",
                Kind::Bound { .. } => "bound",
            };
            TraceStep {
                id: entry.id.clone(),
                no: entry.no.clone(),
                kind,
                symbol: entry.symbol.plain(),
                says: entry.says.clone(),
                formula: ledger.formula_algebra(value),
                numbers: ledger.numbers_algebra(value),
                value: (kind != "bound").then_some(entry.value),
                printed: ledger.printed(value).algebra(),
                unit: if kind == "bound" {
                    String::new()
                } else {
                    unit(ledger, entry.dim)
                },
                uses: ledger
                    .uses(value)
                    .into_iter()
                    .map(|used| ledger.get(used).id.clone())
                    .collect(),
                source: origin(&entry.origin),
            }
        })
        .collect()
}
