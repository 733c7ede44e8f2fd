//! Second opinions, printed: closure, the kernel against the steps, the handbook.

use super::builder::Builder;
use super::text::{piece, plain};
use crate::formula::{Draft, Env, FormulaError, Origin, Symbol, Value};
use crate::quantity::Dim;
use crate::solve::closure::Closure;
use crate::weld::{V3, handbook};

/// What the residuals of closure and the two routines' difference must stay under.
pub(super) const AGREES: f64 = 1e-9;

impl Builder<'_> {
    /// A bound that holds, as a line of its own.
    fn bound(&mut self, id: &str, symbol: Symbol, says: &str, value: f64) -> Value {
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
            "Closure, case {name}: the stress field is integrated along the runs by quadrature that knows no closed \
             form. Its force must be the force applied, its moment about the load's own point the moment given."
        )));
        let says = "Force missed by the integral, as a part of the force applied";
        self.bound(
            "closure.force",
            Symbol::of("delta", &["F"]),
            says,
            closure.force_residual(),
        );
        let says =
            "Moment missed by the integral about the load's point, as a part of the moment applied";
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
            "Two routines that share no code, the scalar steps above and a tensor kernel, must give one stress at the \
             governing point.",
        ));
        let says = "Difference of the two stresses, as a part of the resultant";
        self.bound("agreement.kernel", Symbol::of("delta", &["f"]), says, miss);
    }

    /// The handbook's unit properties beside the sums, where the group is a pattern of one size.
    pub(super) fn handbook(&mut self) -> Result<(), FormulaError> {
        let Some(pattern) = self.joint.weld.pattern.clone() else {
            return Ok(());
        };
        let one_size = self
            .runs
            .iter()
            .all(|run| (run.throat - self.runs[0].throat).abs() < 1e-12 * run.throat);
        let from_pattern = self
            .runs
            .iter()
            .all(|run| run.path == run.told && run.spec < self.joint.weld.runs.len());
        let value = |given: &Option<crate::joint::GivenAt>| {
            given.as_ref().map_or(0.0, |given| given.value.value)
        };
        let shape = pattern.shape.value;
        let (b, d, r) = (
            value(&pattern.width),
            value(&pattern.depth),
            value(&pattern.radius),
        );
        let Some(unit) = handbook::unit_line(shape, pattern.doubled, b, d, r) else {
            return Ok(());
        };
        if !one_size
            || !from_pattern
            || (unit.length - self.properties.length).abs() > 1e-9 * unit.length
        {
            return Ok(());
        }
        let Some(algebra) = handbook::algebra(shape, pattern.doubled) else {
            return Ok(());
        };
        self.para(plain(
            "Handbook: the group is a pattern of one size, so the unit properties of the machine-design handbooks \
             (Shigley, tables 9-1 and 9-2; Blodgett, section 7.4) times the throat must give the polar second moment \
             summed above.",
        ));
        let mut env = Env::default();
        for (name, says, given) in [
            ("b", "Width of the pattern", &pattern.width),
            ("d", "Depth of the pattern", &pattern.depth),
            ("r", "Radius of the pattern", &pattern.radius),
        ] {
            if let Some(given) = given {
                let origin = Origin::Input(given.place.clone());
                let id = format!("pattern.{name}");
                let value = self.input(id, Symbol::of(name, &[]), says, &given.value, origin);
                self.show(value);
                env.bind(name, value);
            }
        }
        let throat = self.run_values[0]["t"];
        let draft = |id: &str, symbol: Symbol, says: &str| (id.to_owned(), symbol, says.to_owned());
        let (id, symbol, says) = draft(
            "handbook.ju",
            Symbol::of("J", &["u"]),
            "Polar second moment of the unit lines, by the handbook",
        );
        let origin = Origin::Clause("Shigley, table 9-1".to_owned());
        let unit_j = self.ledger.step(
            Draft {
                id,
                symbol,
                says,
                formula: algebra[6],
                origin,
                dim: Some(Dim::VOLUME),
            },
            &env,
        )?;
        self.show(unit_j);
        env.bind("J_u", unit_j);
        env.bind("t", throat);
        let (id, symbol, says) = draft(
            "handbook.j",
            Symbol::of("J", &["hb"]),
            "Polar second moment of the group, by the handbook",
        );
        let origin = Origin::Clause("Shigley, eq. 9-6".to_owned());
        let j = self.ledger.step(
            Draft {
                id,
                symbol,
                says,
                formula: "t*J_u",
                origin,
                dim: None,
            },
            &env,
        )?;
        self.show(j);
        let sum = self.properties.j();
        let miss = (self.ledger.get(j).value - sum).abs() / sum;
        let says = "Difference of the handbook's polar second moment from the sum, as a part of it";
        self.bound(
            "agreement.handbook",
            Symbol::of("delta", &["J"]),
            says,
            miss,
        );
        Ok(())
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
        "Replay: each of the {steps} lines with a formula was evaluated again from its printed numbers and gave its \
         printed result, to one unit in the last digit."
    )
}
