//! Second opinions, printed: closure, the kernel against the steps, the handbook.

use super::builder::Builder;
use super::text::{piece, plain};
use crate::formula::{Draft, Origin, Symbol, Value};
use crate::solve::closure::Closure;
use crate::weld::V3;

/// What the residuals of closure and the two routines' difference must stay under.
pub(super) const AGREES: f64 = 1e-9;

impl Builder<'_> {
    /// A bound that holds, as a line of its own.
    pub(super) fn bound(&mut self, id: &str, symbol: Symbol, says: &str, value: f64) -> Value {
        let draft = Draft {
            id: id.to_owned(),
            symbol,
            says: says.to_owned(),
            formula: "",
            origin: Origin::Method("second opinion".to_owned()),
            dim: None,
        };
        let value = self.ledger.bound(draft, value, AGREES);
        self.show(value);
        value
    }

    /// Closure of the worked case about the load's own point.
    pub(super) fn closure(&mut self, case: usize, closure: &Closure) {
        let name = self.joint.loads.cases[case].name.value.clone();
        self.para(plain(&format!(
            "Closure, case {name}: the stresses of the steps above, summed numerically along the runs, must give back the force \
             applied, and about the load’s own point the moment given."
        )));
        let says = "Force that the sum misses, as a part of the force applied, or of the moment over the size";
        self.bound(
            "closure.force",
            Symbol::of("delta", &["F"]),
            says,
            closure.force_residual(),
        );
        let says = "Moment about the load’s point that the sum misses, as a part of the largest moment of the case: given, about the centroid, or force times size";
        self.bound(
            "closure.moment",
            Symbol::of("delta", &["M"]),
            says,
            closure.moment_residual(),
        );
    }

    /// The tensor kernel against the scalar steps at the governing point.
    pub(super) fn agreement(&mut self, kernel: V3, stress: [Value; 3]) {
        let steps = stress.map(|value| self.ledger.get(value).value);
        let scale = kernel.norm().max(f64::MIN_POSITIVE);
        let miss = (V3::from(steps) - kernel).norm() / scale;
        self.para(plain(
            "The stress at the governing point is computed a second time, in tensor form by a routine that shares no code with \
             the steps above; both must agree.",
        ));
        let says = "Difference of the two stresses, as a part of the resultant";
        self.bound("agreement.kernel", Symbol::of("delta", &["f"]), says, miss);
    }

    /// What replays, counted once all lines are made.
    pub(super) fn replay_words(&mut self, steps: usize) {
        self.para(plain(&replay_text(steps)));
    }

    /// A caution on a group that is nearly a line.
    pub(super) fn warn_nearly_collinear(&mut self, ratio: f64) {
        self.para(vec![
            super::text::strong("Caution: "),
            piece(&format!(
                "the group is nearly a line: its least resistance is {ratio:.4} of its greatest. Small errors of \
                 position weigh heavily on the bending stresses."
            )),
        ]);
    }
}

/// The words on replay.
pub(super) fn replay_text(steps: usize) -> String {
    format!(
        "Replay: each of the {steps} lines and table cells with a formula was evaluated again from its printed numbers and gave its \
         printed result, to one unit in the last digit."
    )
}
