//! Clause sheets: criteria as data, and what they give for a joint.
//!
//! A sheet is YAML: what it needs, tables, steps, checks, limits of validity. [`built_in`] holds the
//! project's own sheets; a user's are read by the same [`read_sheet`]. [`assess()`] evaluates every
//! check asked for over all cases and points and says what governs; [`work()`] writes the governing
//! result into the ledger as numbered steps. Adding a criterion needs no Rust.

mod assess;
mod evaluate;
mod factor;
mod from;
pub mod keys;
mod library;
mod limit;
mod margin;
mod outcome;
mod profile;
mod read;
mod resolve;
mod says;
mod search;
mod sheet;
mod state;
mod work;

pub use assess::{Ground, assess, assess_one, unchecked_runs};
pub use factor::{Factor, factors};
pub use from::{From, PointField, Property, RunField, Unknown, Which};
pub use library::{Library, built_in};
pub use outcome::{Asked, Assessment, Governing, LimitOutcome, Margin, StrengthOutcome};
pub use profile::{Profile, profiles};
pub use read::{read_sheet, read_sheet_node};
pub use resolve::Turn;
pub use sheet::{
    ABOVE, BySystem, Capacity, CodeTable, EndRule, FailurePath, Kind, Limit, Need, RawRows, Role,
    Rule, Scope, Sheet, SheetSource, Side, Stated, Status, Strength, UP_TO, Validity, WeldKind,
};
pub use state::partner;
pub use work::{WorkError, Worked, WorkedLimit, work, work_limit};
