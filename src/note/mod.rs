//! The note: what a checker reads, as data.
//!
//! [`Calculation`] takes a joint as told to the outcome of every check; [`write_note`] works the
//! governing results again as numbered steps of a ledger and lays out the document, the trace and
//! the data of the drawing. Knows no file, no page and no typesetter.

mod arcs;
mod builder;
mod calculation;
mod cases;
mod clause;
mod closing;
mod coverage;
pub mod doc;
mod front;
mod handbook;
mod identity;
mod layout;
mod lines;
mod loads;
mod margins;
mod method;
mod pictures;
mod points;
mod powers;
mod proofs;
mod section;
mod sketch;
mod standing;
mod stress;
mod text;
mod throats;
mod trace;
mod verdict;
mod words;
mod write;

pub use calculation::{Calculation, Outcome, Refusal};
pub use clause::sheet_page;
pub use identity::Identity;
pub use pictures::{Curve, DemandSketch, Picture, StressSketch, Unfolded};
pub use section::{SectionShape, WeldSection, list_mark};
pub use sketch::{Sketch, SketchDimension, SketchLoad, SketchRun};
pub use standing::Standing;
pub use trace::{
    AtCentroid, Governing, Group, SCHEMA as TRACE_SCHEMA, Trace, TraceCase, TraceCheck,
    TraceClosure, TraceIdentity, TraceStep, Units,
};
pub use write::{Note, write_note};
