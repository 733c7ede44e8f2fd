//! Binds the names of a sheet to values of the ledger, each after everything that it uses.

use super::{AGREES, WorkError};
use crate::criteria::assess::Ground;
use crate::criteria::from::{From, PointField, RunField};
use crate::criteria::outcome::Asked;
use crate::criteria::resolve::{Asking, Resolved, Sourced, ToldWord, Turn};
use crate::criteria::sheet::{Need, Sheet};
use crate::criteria::state::{Site, fill, partner};
use crate::formula::{Bound, Draft, Env, Ledger, Origin, Symbol, Value};
use crate::quantity::{Dim, Given};
use crate::weld::Run;

/// The sheet's names being bound, one by one as they are asked for.
pub(super) struct Desk<'a, 'g> {
    pub(super) ledger: &'a mut Ledger,
    outer: &'a Env,
    pub(super) ground: &'a Ground<'g>,
    asking: Asking<'a>,
    pub(super) sheet: &'a Sheet,
    pub(super) site: Site,
    point: Option<(usize, f64)>,
    pub(super) prefix: &'a str,
    pub(super) env: Env,
    pub(super) steps: Vec<Value>,
}

impl<'a, 'g> Desk<'a, 'g> {
    pub(super) fn new(
        ledger: &'a mut Ledger,
        outer: &'a Env,
        ground: &'a Ground<'g>,
        asked: &'a Asked,
        site: Site,
        point: Option<(usize, f64)>,
        prefix: &'a str,
    ) -> Self {
        let sheet: &Sheet = &asked.sheet;
        let spec = &ground.joint.checks[asked.index];
        let asking = Asking {
            joint: ground.joint,
            index: asked.index,
            spec,
            sheet,
        };
        let env = Env {
            tables: sheet.tables(ledger.units()),
            ..Env::default()
        };
        Self {
            ledger,
            outer,
            ground,
            asking,
            sheet,
            site,
            point,
            prefix,
            env,
            steps: Vec::new(),
        }
    }

    pub(super) fn run(&self) -> &'a Run {
        &self.ground.runs[self.site.run]
    }

    pub(super) fn cited(&self) -> Origin {
        Origin::Clause(self.sheet.source.cited())
    }

    /// The value of a need or step, bound or worked out.
    pub(super) fn name(&mut self, name: &str) -> Result<Value, WorkError> {
        self.bind(name)?;
        match self.env.names.get(name) {
            Some(Bound::Value(value)) => Ok(*value),
            Some(Bound::Word(_)) | None => Err(WorkError::Unbound(name.to_owned())),
        }
    }

    /// Binds a need or step, after everything that it uses.
    fn bind(&mut self, name: &str) -> Result<(), WorkError> {
        if self.env.names.contains_key(name) {
            return Ok(());
        }
        if let Some(need) = self.sheet.need(name) {
            return self.bind_need(need);
        }
        let Some(step) = self.sheet.step(name) else {
            return Err(WorkError::Unbound(name.to_owned()));
        };
        let mut says = step.says.clone();
        let mut told: Vec<ToldWord> = Vec::new();
        for used in step.node.names() {
            self.bind(used)?;
            if let Some(word) = self.asking.told_word(used) {
                says.push_str(&format!(", {}", word.says));
                told.push(word);
            }
        }
        let draft = Draft {
            id: format!("{}.{name}", self.prefix),
            symbol: step.symbol.clone(),
            says,
            formula: &step.formula.value,
            origin: self.cited(),
            dim: Some(step.dim),
        };
        let value = self.step(draft)?;
        for open in told.into_iter().filter_map(|word| word.open) {
            let mark = &mut self.ledger.get_mut(value).mark;
            *mark = Some(match mark.take() {
                Some(known) if !known.contains(&open) => format!("{known}; {open}"),
                Some(known) => known,
                None => open,
            });
        }
        self.env.bind(name, value);
        Ok(())
    }

    fn bind_need(&mut self, need: &Need) -> Result<(), WorkError> {
        let value = match self.asking.resolve(need, self.run(), self.site.turn)? {
            Resolved::Word(word) => {
                self.env
                    .names
                    .insert(need.name.value.clone(), Bound::Word(word));
                return Ok(());
            }
            Resolved::Point(field) => self.point_value(field)?,
            Resolved::Run(field, computed) => {
                let value = self.run_value(field)?;
                self.agree(&need.name.value, value, computed, computed.abs())?;
                value
            }
            Resolved::One(one) => self.given(&one),
            Resolved::Extreme { greatest, of } => self.extreme(need, greatest, &of)?,
        };
        self.env.bind(&need.name.value, value);
        Ok(())
    }

    /// Adds a step, or finds the one that has its id.
    fn step(&mut self, draft: Draft<'_>) -> Result<Value, WorkError> {
        let env = std::mem::take(&mut self.env);
        let value = self.step_in(draft, &env);
        self.env = env;
        value
    }

    pub(super) fn step_in(&mut self, draft: Draft<'_>, env: &Env) -> Result<Value, WorkError> {
        if let Some(known) = self.ledger.find(&draft.id) {
            return Ok(known);
        }
        let of_clause = draft.origin == self.cited();
        let value = self.ledger.step(draft, env)?;
        if of_clause {
            self.mark(value);
        }
        self.steps.push(value);
        Ok(value)
    }

    /// Adds an input with its mark, or finds the one that has its id.
    pub(super) fn given(&mut self, one: &Sourced) -> Value {
        if let Some(known) = self.ledger.find(&one.id) {
            return known;
        }
        let value = self.ledger.given(
            one.id.clone(),
            one.symbol.clone(),
            one.says.clone(),
            &one.given,
            one.origin.clone(),
        );
        self.ledger.get_mut(value).mark.clone_from(&one.mark);
        self.steps.push(value);
        value
    }

    fn extreme(
        &mut self,
        need: &Need,
        greatest: bool,
        of: &[Sourced; 2],
    ) -> Result<Value, WorkError> {
        let mut env = Env::default();
        env.bind("attached", self.given(&of[0]));
        env.bind("base", self.given(&of[1]));
        let draft = Draft {
            id: format!("{}.{}", self.prefix, need.name.value),
            symbol: need.symbol.clone(),
            says: need.says.clone(),
            formula: if greatest {
                "max(attached, base)"
            } else {
                "min(attached, base)"
            },
            origin: self.cited(),
            dim: need.kind.dim(),
        };
        self.step_in(draft, &env)
    }

    pub(super) fn number(&mut self, text: &str, value: f64) -> Value {
        let id = format!("{}.capacity", self.prefix);
        if let Some(known) = self.ledger.find(&id) {
            return known;
        }
        let given = Given::stated(text, value, Dim::NONE);
        let says = "limit of the interaction".to_owned();
        let value = self
            .ledger
            .given(id, Symbol::of("R", &[]), says, &given, self.cited());
        self.steps.push(value);
        value
    }

    /// What the author bound under the word of a field.
    pub(super) fn outer(&self, from: &From) -> Option<Value> {
        match self.outer.names.get(&from.bound_name()?)? {
            Bound::Value(value) => Some(*value),
            Bound::Word(_) => None,
        }
    }

    pub(super) fn unbound(from: &From) -> WorkError {
        WorkError::Unbound(from.bound_name().unwrap_or_default())
    }

    /// The value of a stress or line load, held against the assessment's.
    fn point_value(&mut self, field: PointField) -> Result<Value, WorkError> {
        let value = match self.outer(&From::Point(field)) {
            Some(value) => value,
            None => self.derived_point(field)?,
        };
        if let Some((case, s)) = self.point {
            let mut out = [0.0; 2];
            fill(
                self.ground,
                &self.site,
                &[field, PointField::Resultant],
                (case, s, 1.0),
                &mut out,
            );
            let size = match field {
                PointField::SinPhi => 1.0,
                PointField::LineLoad | PointField::PlateLoad => {
                    out[0].abs().max(out[1] * self.run().throat)
                }
                _ => out[1],
            };
            let name = From::Point(field).bound_name().unwrap_or_default();
            self.agree(&name, value, out[0], size)?;
        }
        Ok(value)
    }

    /// A stress or line load that follows from others that are bound.
    fn derived_point(&mut self, field: PointField) -> Result<Value, WorkError> {
        let missing = || Self::unbound(&From::Point(field));
        match field {
            PointField::Along => self
                .outer(&From::Point(PointField::TauPar))
                .ok_or_else(missing),
            PointField::TauPar => self
                .outer(&From::Point(PointField::Along))
                .ok_or_else(missing),
            PointField::LineLoad => self.line_load(),
            PointField::PlateLoad => {
                let both = self.site.turn != Some(Turn::Base)
                    && partner(self.ground.runs, self.site.run).is_some();
                if both {
                    Err(missing())
                } else {
                    self.point_value(PointField::LineLoad)
                }
            }
            PointField::SinPhi => self.sin_phi(),
            PointField::Resultant
            | PointField::Across
            | PointField::Through
            | PointField::SigmaPerp
            | PointField::TauPerp => Err(missing()),
        }
    }

    fn line_load(&mut self) -> Result<Value, WorkError> {
        let mut env = Env::default();
        env.bind("t", self.run_value(RunField::Throat)?);
        env.bind("f", self.point_value(PointField::Resultant)?);
        let draft = Draft {
            id: format!("{}.line-load", self.prefix),
            symbol: Symbol::of("q", &[]),
            says: "line load of the bead: throat times resultant".to_owned(),
            formula: "t*f",
            origin: Origin::Method("statics".to_owned()),
            dim: Some(Dim::LINE_LOAD),
        };
        self.step_in(draft, &env)
    }

    fn sin_phi(&mut self) -> Result<Value, WorkError> {
        let mut env = Env::default();
        env.bind("f_n", self.point_value(PointField::Across)?);
        env.bind("f_z", self.point_value(PointField::Through)?);
        env.bind("f", self.point_value(PointField::Resultant)?);
        let draft = Draft {
            id: format!("{}.sin-phi", self.prefix),
            symbol: Symbol::of("s", &["phi"]),
            says: "sine of the angle between stress and run".to_owned(),
            formula: "sqrt(f_n^2 + f_z^2)/f",
            origin: Origin::Method("geometry".to_owned()),
            dim: Some(Dim::NONE),
        };
        self.step_in(draft, &env)
    }

    /// Refuses a value that is not the assessment's, to 1e-8 of `size` or of itself: a resultant, which is
    /// the usual size, is 0 where squares of tiny loads vanish.
    pub(super) fn agree(
        &self,
        name: &str,
        value: Value,
        computed: f64,
        size: f64,
    ) -> Result<(), WorkError> {
        let bound = self.ledger.get(value).value;
        if (bound - computed).abs() <= AGREES * size.max(bound.abs()) {
            return Ok(());
        }
        Err(WorkError::Disagrees {
            name: name.to_owned(),
            bound,
            computed,
        })
    }

    /// Marks a value with what of the sheet is still to be verified.
    pub(super) fn mark(&mut self, value: Value) {
        if let Some(mark) = self.sheet.mark() {
            self.ledger.get_mut(value).mark.get_or_insert(mark);
        }
    }
}
