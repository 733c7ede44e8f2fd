//! One formula, every reading.
//!
//! A formula is written once as plain algebra and parsed to one tree ([`Node`]). From that tree come
//! the value ([`evaluate`]), the dimension ([`dimension`]), the typeset forms ([`Math`]), the algebra of
//! the trace, the batch program ([`Program`]) and the list of steps that it uses. The [`Ledger`] holds
//! the worked calculation and settles how many digits each value is printed with.

mod algebra;
mod batch;
mod digits;
mod dims;
mod eval;
mod flat;
mod ledger;
mod lines;
mod math;
mod node;
mod parse;
mod present;
mod settle;
mod symbol;
mod table;

pub use batch::{Block, Program};
pub use digits::Printed;
pub use dims::dimension;
pub use eval::{Look, evaluate};
pub use ledger::{
    Bound, Draft, Entry, Env, Kind, Ledger, MARGIN_DECIMALS, Mark, Origin, Rounding, SumSet,
    UTILISATION_DECIMALS, Value,
};
pub use lines::{Equation, EquationLine};
pub use math::Math;
pub use node::{Branch, Condition, Function, Kind as NodeKind, Literal, Node, Op, Relation};
pub use parse::parse;
pub use present::TERMS_ON_PAGE;
pub use symbol::Symbol;
pub use table::{Key, Row, RowKey, Table};

use std::ops::Range;
use thiserror::Error;

/// A fault of a formula, with its text and the byte range at fault.
#[derive(Clone, PartialEq, Debug, Error)]
#[error("{problem}, in the formula `{text}`")]
pub struct FormulaError {
    /// The formula as written.
    pub text: String,
    /// Byte range in it.
    pub span: Range<usize>,
    /// What is wrong.
    pub problem: Problem,
}

/// What can be wrong with a formula.
#[derive(Clone, PartialEq, Debug, Error)]
pub enum Problem {
    /// A character that cannot stand there, or the end.
    #[error("{}", .0.as_ref().map_or("a value is needed at the end".to_owned(), |found| format!("`{found}` cannot stand here")))]
    Unexpected(Option<String>),
    /// A mark that is missing.
    #[error("{wanted} is needed {}", found.as_ref().map_or("at the end".to_owned(), |found| format!("here, not `{found}`")))]
    Wanted {
        /// What is needed, as `)` or in words.
        wanted: String,
        /// What was found; nothing at the end.
        found: Option<String>,
    },
    /// A number that does not parse.
    #[error("`{0}` is not a number")]
    Number(String),
    /// A unit that is refused.
    #[error("{0}")]
    Unit(String),
    /// Brackets nest too deep.
    #[error("the brackets nest too deep")]
    TooDeep,
    /// Too many operands.
    #[error("the formula has too many operands; split it into named steps")]
    TooLong,
    /// `min` or `max` of one operand.
    #[error("`{0}` takes two operands or more")]
    OneOperand(String),
    /// A sum inside a sum.
    #[error("a sum cannot stand inside a sum")]
    NestedSum,
    /// A function that does not exist.
    #[error(
        "`{0}` is not a function; there are sqrt, sin, cos, tan, abs, atan2, min, max, sum, lookup, when"
    )]
    UnknownFunction(String),
    /// A name that is not bound.
    #[error("`{name}` is not known here{}", nearest.as_ref().map(|near| format!("; did you mean `{near}`?")).unwrap_or_default())]
    UnknownName {
        /// The name.
        name: String,
        /// The nearest known one.
        nearest: Option<String>,
    },
    /// Two operands of different dimension.
    #[error("{left} and {right} cannot be {verb}")]
    Mismatch {
        /// Dimension of the left operand.
        left: String,
        /// Dimension of the right operand.
        right: String,
        /// `added`, `subtracted`, `compared`, or `branches of one choice`.
        verb: &'static str,
    },
    /// An operand of a dimension that its function does not take.
    #[error("{found} stands where {wanted} is needed")]
    Kind {
        /// Dimension found.
        found: String,
        /// Dimension needed.
        wanted: String,
    },
    /// The whole formula has another dimension than declared.
    #[error("the formula gives {found}, but {wanted} is declared")]
    Declared {
        /// Dimension of the formula.
        found: String,
        /// Dimension declared.
        wanted: String,
    },
    /// An exponent that is not a plain constant over a base with a unit.
    #[error("the exponent over a quantity with a unit must be a plain number")]
    Exponent,
    /// No branch holds.
    #[error("no condition of the choice holds")]
    NoBranch,
    /// A key outside the table's bounds.
    #[error("{key} is outside the table `{table}`, which covers {covers}")]
    OutsideTable {
        /// The key as printed.
        key: String,
        /// Name of the table.
        table: String,
        /// What it covers.
        covers: String,
    },
    /// A result that is no finite number.
    #[error("the value is not a finite number")]
    NotFinite,
    /// Printed operands cannot reproduce the printed result.
    #[error("the printed numbers cannot be made to give the printed result")]
    Unsettled,
}
