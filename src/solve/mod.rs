//! Stresses of a weld group by the elastic line method.
//!
//! Takes plain runs and actions; knows no clause and no file. [`Regime`] says in which directions a
//! group resists, [`Resistance`] turns a load into a stress field, [`Batch`] evaluates many fields
//! at many points, [`local`] splits a stress at a run, [`search`] finds where a demand peaks, and
//! [`closure`] integrates a field back to the load.

pub mod closure;
mod field;
mod kernel;
pub mod local;
mod points;
mod regime;
pub mod search;

pub use field::{Field, Resistance, Unresisted};
pub use kernel::{Batch, LANES, Largest, Points};
pub use points::{CheckPoint, Spot, check_points};
pub use regime::{Classified, RANK_RATIO, Regime, WARN_BELOW, classify};
