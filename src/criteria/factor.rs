//! The factors of a check: name, value, source, and whether each stands on load or strength.

use super::assess::Ground;
use super::outcome::Asked;
use super::resolve::{Asking, Resolved};
use super::sheet::Role;
use crate::formula::{Origin, Symbol};
use crate::quantity::Given;
use crate::source::Faults;

/// A factor of a check, for the ledger of factors.
#[derive(Clone, PartialEq, Debug)]
pub struct Factor {
    /// Name in the sheet.
    pub name: String,
    /// Symbol on the page.
    pub symbol: Symbol,
    /// What it is.
    pub says: String,
    /// Where it stands.
    pub role: Role,
    /// Its value as typed or stated.
    pub given: Given,
    /// Where it comes from: the joint file, or a clause by default.
    pub origin: Origin,
    /// What of it is still to be verified.
    pub mark: Option<String>,
    /// Id under which [`super::work()`] enters it into the ledger.
    pub id: String,
}

/// The factors of a check asked for, in the order of its sheet.
///
/// # Errors
///
/// As [`super::assess()`] for the values of the check.
pub fn factors(ground: &Ground<'_>, asked: &Asked) -> Result<Vec<Factor>, Faults> {
    let spec = &ground.joint.checks[asked.index];
    let asking = Asking {
        joint: ground.joint,
        index: asked.index,
        spec,
        sheet: &asked.sheet,
    };
    let Some(run) = ground.runs.iter().find(|run| asked.sheet.takes(run)) else {
        return Ok(Vec::new());
    };
    let mut found = Vec::new();
    for need in &asked.sheet.needs {
        let Some(role) = need.role else { continue };
        if let Resolved::One(one) = asking.resolve(need, run, Some(super::Turn::Attached))? {
            found.push(Factor {
                name: need.name.value.clone(),
                symbol: need.symbol.clone(),
                says: need.says.clone(),
                role,
                given: one.given,
                origin: one.origin,
                mark: one.mark,
                id: one.id,
            });
        }
    }
    Ok(found)
}
