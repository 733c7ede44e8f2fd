//! The governing result of a check again, as steps of the ledger.
//!
//! The note's author has bound the stresses of the point and the dimensions of the run under their
//! words, such as `point_sigma_perp` and `run_throat`; here the sheet's own names are bound to the
//! same values, and every value is held against the one that the assessment found.

mod desk;
mod dimension;
mod margin;

use super::assess::Ground;
use super::outcome::{Asked, Governing, LimitOutcome, Margin};
use super::sheet::Capacity;
use super::state::Site;
use crate::formula::{Env, FormulaError, Ledger, Value};
use crate::solve::local::throat_planes;
use crate::source::Diagnostic;
use desk::Desk;
use thiserror::Error;

/// Part of its size by which a bound value may differ from the assessment's: both are computed in
/// full precision by different routes.
const AGREES: f64 = 1e-8;

/// Why a result cannot be worked out.
#[derive(Clone, PartialEq, Debug, Error)]
pub enum WorkError {
    /// The author bound no value under a name.
    #[error("nothing is bound to `{0}`")]
    Unbound(String),
    /// A bound value, or a result, is not the assessment's.
    #[error("`{name}` is {bound:e} in the steps, but {computed:e} in the assessment")]
    Disagrees {
        /// The name.
        name: String,
        /// Its value in the ledger.
        bound: f64,
        /// The value that the assessment found.
        computed: f64,
    },
    /// A formula has no value.
    #[error(transparent)]
    Formula(#[from] FormulaError),
    /// A value of the joint or check is refused.
    #[error("{}", .0.message)]
    Refused(Box<Diagnostic>),
}

impl std::convert::From<Diagnostic> for WorkError {
    fn from(fault: Diagnostic) -> Self {
        Self::Refused(Box::new(fault))
    }
}

/// A worked strength check.
#[derive(Clone, PartialEq, Debug)]
pub struct Worked {
    /// Demand D.
    pub demand: Value,
    /// Capacity R.
    pub capacity: Value,
    /// Utilisation U = D/R; none where there is no demand.
    pub utilisation: Option<Value>,
    /// Margin of safety; none where [`Margin::reason`] says why.
    pub margin: Option<Value>,
    /// Everything that was added, in order: inputs, steps, the found load factor.
    pub steps: Vec<Value>,
}

/// A worked limit.
#[derive(Clone, PartialEq, Debug)]
pub struct WorkedLimit {
    /// The value.
    pub value: Value,
    /// Its bound.
    pub bound: Value,
    /// Everything that was added, in order.
    pub steps: Vec<Value>,
}

/// Writes check `check` of a sheet at a point into the ledger.
///
/// `env` binds what the author has worked out: `point_f`, `point_f_par`, `point_f_n`, `point_f_z`,
/// `point_sigma_perp`, `point_tau_perp`, `point_tau_par`, `point_sin_phi`, `point_q`,
/// `point_q_plate`, `run_throat`, `run_leg`, `run_leg_base`, `run_leg_attached`, `run_face`,
/// `run_length`, `run_effective_length`, `run_angle`, as far as the sheet asks for them. Line loads,
/// legs, faces and the angle are worked out here where they are not bound; the line load on an
/// attached part with beads on both sides must be bound. New ids start with `prefix`; a step that
/// the ledger has under its id already is used again.
///
/// # Errors
///
/// [`WorkError`] if a name is not bound, a value differs from the assessment's, or a formula fails.
pub fn work(
    ledger: &mut Ledger,
    env: &Env,
    ground: &Ground<'_>,
    asked: &Asked,
    check: usize,
    at: &Governing,
    prefix: &str,
) -> Result<Worked, WorkError> {
    let plane = throat_planes(&ground.runs[at.run], at.s)
        .iter()
        .position(|plane| plane.side * at.side > 0.0)
        .unwrap_or_default();
    let site = Site {
        run: at.run,
        turn: at.part,
        plane,
        assumed: at.side_assumed,
    };
    let mut desk = Desk::new(
        ledger,
        env,
        ground,
        asked,
        site,
        Some((at.case, at.s)),
        prefix,
    );
    let strength = &asked.sheet.checks[check];
    let demand = desk.name(&strength.demand)?;
    let capacity = match &strength.capacity {
        Capacity::Name(name) => desk.name(name)?,
        Capacity::Number(text, value) => desk.number(text, *value),
    };
    desk.agree(
        &strength.demand,
        demand,
        at.demand,
        at.demand.abs().max(AGREES * at.capacity),
    )?;
    desk.agree("capacity", capacity, at.capacity, at.capacity.abs())?;
    let proportional = strength.proportional;
    let (utilisation, margin) = match at.margin {
        Margin::Value(_) if proportional => {
            let utilisation = desk.utilisation(check, demand, capacity)?;
            (
                Some(utilisation),
                Some(desk.margin(check, demand, capacity)?),
            )
        }
        Margin::Value(_) => {
            let (utilisation, margin) =
                desk.margin_by_factor(check, (demand, capacity), at.load_factor)?;
            (Some(utilisation), Some(margin))
        }
        Margin::FixedTermsExceed => (Some(desk.utilisation(check, demand, capacity)?), None),
        Margin::High => (None, None),
    };
    if let Some(utilisation) = utilisation {
        desk.agree("U", utilisation, at.utilisation, at.utilisation.abs())?;
    }
    if let (Some(margin), Margin::Value(wanted)) = (margin, at.margin) {
        desk.agree("MS", margin, wanted, 1.0 + wanted.abs())?;
    }
    Ok(Worked {
        demand,
        capacity,
        utilisation,
        margin,
        steps: desk.steps,
    })
}

/// Writes a limit of a sheet at a run into the ledger; `env` as for [`work`], without points.
///
/// # Errors
///
/// As [`work`].
pub fn work_limit(
    ledger: &mut Ledger,
    env: &Env,
    ground: &Ground<'_>,
    asked: &Asked,
    at: &LimitOutcome,
    prefix: &str,
) -> Result<WorkedLimit, WorkError> {
    let site = Site {
        run: at.run,
        turn: at.part,
        plane: 0,
        assumed: false,
    };
    let mut desk = Desk::new(ledger, env, ground, asked, site, None, prefix);
    let limit = &asked.sheet.limits[at.limit];
    let value = desk.name(&limit.value)?;
    let bound = desk.name(&limit.bound)?;
    desk.agree(&limit.value, value, at.value, at.value.abs())?;
    desk.agree(&limit.bound, bound, at.bound, at.bound.abs())?;
    desk.mark(bound);
    Ok(WorkedLimit {
        value,
        bound,
        steps: desk.steps,
    })
}
