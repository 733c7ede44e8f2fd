//! The command line: arguments, workers, what is said at the end.
//!
//! Prints nothing itself: [`run`] gives texts and an exit code, `main.rs` prints them.

mod aid;
mod arguments;
mod explain;
mod show;
mod work;

pub use arguments::{Arguments, Command, SchemaOf};
pub use explain::{FaultWords, everything, explain, fault_words};
pub use work::{Progress, Said, run};

/// Exit codes.
pub mod exit {
    /// Everything asked for was done.
    pub const DONE: u8 = 0;
    /// An input was refused, or an output could not be made.
    pub const REFUSED: u8 = 1;
    /// The command line itself was wrong.
    pub const USAGE: u8 = 2;
    /// With `--must-hold`: a check does not hold or gives no number.
    pub const DOES_NOT_HOLD: u8 = 3;
}
