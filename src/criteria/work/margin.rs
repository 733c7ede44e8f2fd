//! Utilisation and margin as steps; a margin by load factor is found and then verified.

use super::WorkError;
use super::desk::Desk;
use crate::criteria::sheet::Capacity;
use crate::formula::{Bound, Draft, Env, Origin, Rounding, Symbol, Value};
use crate::quantity::Dim;
use std::collections::BTreeMap;

/// The demand as D and the capacity as R.
fn against(demand: Value, capacity: Value) -> Env {
    let mut env = Env::default();
    env.bind("D", demand);
    env.bind("R", capacity);
    env
}

impl Desk<'_, '_> {
    pub(super) fn utilisation(
        &mut self,
        check: usize,
        demand: Value,
        capacity: Value,
    ) -> Result<Value, WorkError> {
        let env = against(demand, capacity);
        let strength = &self.sheet.checks[check];
        let is_one = matches!(&strength.capacity, Capacity::Number(_, number) if (number - 1.0).abs() < 1e-15);
        let draft = Draft {
            id: format!("{}.{}.utilisation", self.prefix, check + 1),
            symbol: Symbol::of("U", &[]),
            says: format!("utilisation: {}", strength.says),
            formula: if is_one { "D" } else { "D/R" },
            origin: self.cited(),
            dim: Some(Dim::NONE),
        };
        let value = self.step_in(draft, &env)?;
        if !is_one {
            self.ledger.get_mut(value).rounding = Rounding::Up;
        }
        self.mark(value);
        Ok(value)
    }

    pub(super) fn margin(
        &mut self,
        check: usize,
        demand: Value,
        capacity: Value,
    ) -> Result<Value, WorkError> {
        let env = against(demand, capacity);
        self.margin_step(check, "R/D - 1", &env)
    }

    fn margin_step(&mut self, check: usize, formula: &str, env: &Env) -> Result<Value, WorkError> {
        let draft = Draft {
            id: format!("{}.{}.margin", self.prefix, check + 1),
            symbol: Symbol::of("MS", &[]),
            says: format!("margin of safety: {}", self.sheet.checks[check].name.value),
            formula,
            origin: Origin::Method("margin of safety".to_owned()),
            dim: Some(Dim::NONE),
        };
        let value = self.step_in(draft, env)?;
        let entry = self.ledger.get_mut(value);
        entry.signed = true;
        entry.rounding = Rounding::Down;
        self.mark(value);
        Ok(value)
    }

    /// The load factor that reaches the limit, the check again at that factor, and the margin.
    pub(super) fn margin_by_factor(
        &mut self,
        check: usize,
        (demand, capacity): (Value, Value),
        factor: f64,
    ) -> Result<(Value, Value), WorkError> {
        let id = format!("{}.{}.at-limit", self.prefix, check + 1);
        let lambda = Draft {
            id: format!("{id}.load-factor"),
            symbol: Symbol::of("lambda", &[]),
            says: "least load factor that reaches the limit".to_owned(),
            formula: "least positive root, bracketed and bisected; the steps below verify it",
            origin: Origin::Method("margin of safety".to_owned()),
            dim: Some(Dim::NONE),
        };
        let lambda = self.ledger.found(lambda, factor, Dim::NONE);
        self.ledger.get_mut(lambda).rests_on = vec![demand, capacity];
        self.steps.push(lambda);
        let ratio = self.at_factor(check, lambda, &id)?;
        self.agree("demand over capacity at the limit", ratio, 1.0, 1.0)?;
        let mut env = Env::default();
        env.bind("lambda", lambda);
        let draft = Draft {
            id: format!("{}.{}.utilisation", self.prefix, check + 1),
            symbol: Symbol::of("U", &[]),
            says: "utilisation: the loads as a part of those that reach the limit".to_owned(),
            formula: "1/lambda",
            origin: Origin::Method("margin of safety".to_owned()),
            dim: Some(Dim::NONE),
        };
        let utilisation = self.step_in(draft, &env)?;
        self.ledger.get_mut(utilisation).rounding = Rounding::Up;
        self.mark(utilisation);
        Ok((utilisation, self.margin_step(check, "lambda - 1", &env)?))
    }

    /// The sheet's steps again, with the point's stresses times the load factor.
    fn at_factor(&mut self, check: usize, lambda: Value, id: &str) -> Result<Value, WorkError> {
        let at_limit = BTreeMap::from([("lambda".to_owned(), Bound::Value(lambda))]);
        let mut env = self.env.clone();
        let bound: Vec<(String, Value)> = self.bound_point_needs();
        for (name, value) in bound {
            let mut local = Env {
                names: at_limit.clone(),
                ..Env::default()
            };
            local.bind("x", value);
            let (symbol, dim) = {
                let entry = self.ledger.get(value);
                (entry.symbol.with("lambda"), entry.dim)
            };
            let draft = Draft {
                id: format!("{id}.{name}"),
                symbol,
                says: "the stress at the load factor".to_owned(),
                formula: "lambda*x",
                origin: Origin::Method("the stresses grow with the loads".to_owned()),
                dim: Some(dim),
            };
            // The sine of an angle does not grow.
            if dim != Dim::NONE {
                let scaled = self.step_in(draft, &local)?;
                env.bind(&name, scaled);
            }
        }
        let varying: Vec<String> = self
            .sheet
            .varying()
            .into_iter()
            .map(str::to_owned)
            .collect();
        for step in &self.sheet.steps {
            let name = &step.name.value;
            if varying.contains(name) && env.names.contains_key(name) {
                let draft = Draft {
                    id: format!("{id}.{name}"),
                    symbol: step.symbol.with("lambda"),
                    says: format!("at the load factor: {}", step.says),
                    formula: &step.formula.value,
                    origin: self.cited(),
                    dim: Some(step.dim),
                };
                let value = self.step_in(draft, &env)?;
                env.bind(name, value);
            }
        }
        let strength = &self.sheet.checks[check];
        let (demand, formula) = (
            strength.demand.as_str(),
            match &strength.capacity {
                Capacity::Name(name) => format!("{}/{name}", strength.demand),
                Capacity::Number(_, number) if (number - 1.0).abs() < 1e-15 => {
                    strength.demand.clone()
                }
                Capacity::Number(text, _) => format!("{}/{text}", strength.demand),
            },
        );
        debug_assert!(
            env.names.contains_key(demand),
            "the demand was bound before"
        );
        let draft = Draft {
            id: format!("{id}.ratio"),
            symbol: Symbol::of("U", &["lambda"]),
            says: "at the load factor the limit is reached".to_owned(),
            formula: &formula,
            origin: self.cited(),
            dim: Some(Dim::NONE),
        };
        self.step_in(draft, &env)
    }

    /// The needs of the point that are bound, with their values.
    fn bound_point_needs(&self) -> Vec<(String, Value)> {
        let names = self
            .sheet
            .needs
            .iter()
            .filter(|need| need.is_at_point())
            .map(|need| &need.name.value);
        names
            .filter_map(|name| match self.env.names.get(name)? {
                Bound::Value(value) => Some((name.clone(), *value)),
                Bound::Word(_) => None,
            })
            .collect()
    }
}
