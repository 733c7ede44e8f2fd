//! The governing result of a check again, as steps of the ledger.
//!
//! The note's author has bound the stresses of the point and the dimensions of the run under their
//! words, such as `point_sigma_perp` and `run_throat`; here the sheet's own names are bound to the
//! same values, and every value is held against the one that the assessment found.

use super::assess::Ground;
use super::from::{From, PointField, RunField};
use super::outcome::{Asked, Governing, LimitOutcome, Margin};
use super::resolve::{Asking, Resolved, Sourced, Turn};
use super::sheet::{Capacity, Need, Sheet};
use super::state::{Site, fill, partner};
use crate::formula::{Bound, Draft, Env, FormulaError, Ledger, Origin, Symbol, Value};
use crate::joint::{GivenAt, LegMeasure, SizeSpec};
use crate::quantity::{Dim, Given};
use crate::solve::local::throat_planes;
use crate::source::Diagnostic;
use crate::weld::{Run, ThroatRule};
use std::collections::BTreeMap;
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
    #[error("`{name}` is {bound} in the steps, but {computed} in the assessment")]
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
    let utilisation = if at.demand > 0.0 {
        Some(desk.utilisation(check, demand, capacity)?)
    } else {
        None
    };
    let margin = match at.margin {
        Margin::High | Margin::FixedTermsExceed => None,
        Margin::Value(_) if strength.proportional => Some(desk.margin(check, demand, capacity)?),
        Margin::Value(_) => Some(desk.margin_by_factor(check, at.load_factor)?),
    };
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

/// The sheet's names being bound, one by one as they are asked for.
struct Desk<'a, 'g> {
    ledger: &'a mut Ledger,
    outer: &'a Env,
    ground: &'a Ground<'g>,
    asking: Asking<'a>,
    sheet: &'a Sheet,
    site: Site,
    point: Option<(usize, f64)>,
    prefix: &'a str,
    env: Env,
    steps: Vec<Value>,
}

impl<'a, 'g> Desk<'a, 'g> {
    fn new(
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

    fn run(&self) -> &'a Run {
        &self.ground.runs[self.site.run]
    }

    fn cited(&self) -> Origin {
        Origin::Clause(self.sheet.source.cited())
    }

    /// The value of a need or step, bound or worked out.
    fn name(&mut self, name: &str) -> Result<Value, WorkError> {
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
        for used in step.node.names() {
            self.bind(used)?;
        }
        let draft = Draft {
            id: format!("{}.{name}", self.prefix),
            symbol: step.symbol.clone(),
            says: step.says.clone(),
            formula: &step.formula.value,
            origin: self.cited(),
            dim: Some(step.dim),
        };
        let value = self.step(draft)?;
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

    fn step_in(&mut self, draft: Draft<'_>, env: &Env) -> Result<Value, WorkError> {
        if let Some(known) = self.ledger.find(&draft.id) {
            return Ok(known);
        }
        let value = self.ledger.step(draft, env)?;
        self.steps.push(value);
        Ok(value)
    }

    /// Adds an input with its mark, or finds the one that has its id.
    fn given(&mut self, one: &Sourced) -> Value {
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

    fn number(&mut self, text: &str, value: f64) -> Value {
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
    fn outer(&self, from: &From) -> Option<Value> {
        match self.outer.names.get(&from.bound_name()?)? {
            Bound::Value(value) => Some(*value),
            Bound::Word(_) => None,
        }
    }

    fn unbound(from: &From) -> WorkError {
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

    /// The value of a dimension of the run.
    fn run_value(&mut self, field: RunField) -> Result<Value, WorkError> {
        if let Some(value) = self.outer(&From::Run(field)) {
            return Ok(value);
        }
        let spec = &self.ground.joint.weld.runs[self.run().spec];
        match (field, &spec.size) {
            (RunField::Throat | RunField::Length | RunField::EffectiveLength, _) => {
                Err(Self::unbound(&From::Run(field)))
            }
            (RunField::Angle, _) => Ok(self.angle(spec.between.as_ref())),
            (RunField::Face, _) => self.face(),
            (_, SizeSpec::Fillet { leg, .. } | SizeSpec::Throat { leg: Some(leg), .. }) => {
                Ok(self.told("leg", Symbol::of("h", &[]), "leg", leg))
            }
            (RunField::LegBase, SizeSpec::Unequal { on_base, .. }) => Ok(self.told(
                "leg-base",
                Symbol::of("h", &["b"]),
                "leg on the base part",
                on_base,
            )),
            (RunField::LegAttached, SizeSpec::Unequal { on_attached, .. }) => Ok(self.told(
                "leg-attached",
                Symbol::of("h", &["a"]),
                "leg on the attached part",
                on_attached,
            )),
            (RunField::Leg, SizeSpec::Unequal { .. }) => {
                let mut env = Env::default();
                env.bind("base", self.run_value(RunField::LegBase)?);
                env.bind("attached", self.run_value(RunField::LegAttached)?);
                let draft = Draft {
                    id: format!("{}.lesser-leg", self.prefix),
                    symbol: Symbol::of("h", &["min"]),
                    says: "lesser leg".to_owned(),
                    formula: "min(base, attached)",
                    origin: Origin::Method("geometry".to_owned()),
                    dim: Some(Dim::LENGTH),
                };
                self.step_in(draft, &env)
            }
            (
                RunField::Leg | RunField::LegBase | RunField::LegAttached,
                SizeSpec::Throat { leg: None, .. }
                | SizeSpec::Partial { .. }
                | SizeSpec::Complete { .. },
            ) => Err(Self::unbound(&From::Run(field))),
        }
    }

    /// An input of the run's entry.
    fn told(&mut self, id: &str, symbol: Symbol, what: &str, told: &GivenAt) -> Value {
        let spec = self.run().spec;
        let name = &self.ground.joint.weld.runs[spec].name.value;
        self.given(&Sourced {
            id: format!("run.{}.{id}", spec + 1),
            symbol,
            says: format!("{what} of {name}"),
            given: told.value.clone(),
            origin: Origin::Input(told.place.clone()),
            mark: None,
        })
    }

    fn angle(&mut self, told: Option<&GivenAt>) -> Value {
        let symbol = Symbol::of("psi", &[]);
        if let Some(told) = told {
            return self.told("angle", symbol, "angle between the faces", told);
        }
        let square = Given {
            unit: Some("deg".into()),
            ..Given::stated("90", 90.0, Dim::ANGLE)
        };
        self.given(&Sourced {
            id: format!("run.{}.angle", self.run().spec + 1),
            symbol,
            says: "angle between the faces, where the file tells no other".to_owned(),
            given: Given {
                value: std::f64::consts::FRAC_PI_2,
                ..square
            },
            origin: Origin::Method("geometry".to_owned()),
            mark: None,
        })
    }

    /// The fusion face on the part in turn: the leg less the gap, along the face.
    fn face(&mut self) -> Result<Value, WorkError> {
        let run = self.run();
        let leg = self.run_value(if self.site.turn == Some(Turn::Base) {
            RunField::LegBase
        } else {
            RunField::LegAttached
        })?;
        let (gap, square) = match run.rule {
            ThroatRule::EqualLegs { gap, .. } | ThroatRule::UnequalLegs { gap, .. } => (gap, false),
            ThroatRule::SquareLegs { gap, .. } => (gap, true),
            ThroatRule::Stated { .. }
            | ThroatRule::Partial { .. }
            | ThroatRule::Complete { .. } => (0.0, false),
        };
        let spec = &self.ground.joint.weld.runs[run.spec];
        debug_assert_eq!(
            square,
            matches!(
                &spec.size,
                SizeSpec::Fillet {
                    measured: LegMeasure::SquareToFace,
                    ..
                }
            )
        );
        let gap = spec.gap.as_ref().filter(|_| gap > 0.0);
        let mut env = Env::default();
        env.bind("h", leg);
        if let Some(gap) = gap {
            let value = self.told("gap", Symbol::of("g", &[]), "root gap", gap);
            env.bind("g", value);
        }
        if square {
            let value = self.run_value(RunField::Angle)?;
            env.bind("psi", value);
        }
        let formula = match (gap.is_some(), square) {
            (false, false) => return Ok(leg),
            (true, false) => "h - g",
            (false, true) => "h/sin(psi)",
            (true, true) => "(h - g)/sin(psi)",
        };
        let turn = self.site.turn.map_or("", Turn::word);
        let draft = Draft {
            id: format!("{}.face", self.prefix),
            symbol: Symbol::of("h", &["f"]),
            says: format!("fusion face on the {turn}"),
            formula,
            origin: Origin::Method("geometry".to_owned()),
            dim: Some(Dim::LENGTH),
        };
        self.step_in(draft, &env)
    }

    /// Refuses a value that is not the assessment's, to 1e-8 of `size`.
    fn agree(&self, name: &str, value: Value, computed: f64, size: f64) -> Result<(), WorkError> {
        let bound = self.ledger.get(value).value;
        if (bound - computed).abs() <= AGREES * size {
            return Ok(());
        }
        Err(WorkError::Disagrees {
            name: name.to_owned(),
            bound,
            computed,
        })
    }

    /// Marks a value with what of the sheet is still to be verified.
    fn mark(&mut self, value: Value) {
        if let Some(mark) = self.sheet.mark() {
            self.ledger.get_mut(value).mark.get_or_insert(mark);
        }
    }

    fn utilisation(
        &mut self,
        check: usize,
        demand: Value,
        capacity: Value,
    ) -> Result<Value, WorkError> {
        let mut env = Env::default();
        env.bind("D", demand);
        env.bind("R", capacity);
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
        self.mark(value);
        Ok(value)
    }

    fn margin(&mut self, check: usize, demand: Value, capacity: Value) -> Result<Value, WorkError> {
        let mut env = Env::default();
        env.bind("D", demand);
        env.bind("R", capacity);
        self.margin_step(check, "R/D - 1", &env)
    }

    fn margin_step(&mut self, check: usize, formula: &str, env: &Env) -> Result<Value, WorkError> {
        let draft = Draft {
            id: format!("{}.{}.margin", self.prefix, check + 1),
            symbol: Symbol::of("M", &["S"]),
            says: "margin of safety".to_owned(),
            formula,
            origin: Origin::Method("margin of safety".to_owned()),
            dim: Some(Dim::NONE),
        };
        let value = self.step_in(draft, env)?;
        self.ledger.get_mut(value).signed = true;
        self.mark(value);
        Ok(value)
    }

    /// The load factor that reaches the limit, the check again at that factor, and the margin.
    fn margin_by_factor(&mut self, check: usize, factor: f64) -> Result<Value, WorkError> {
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
        self.steps.push(lambda);
        let ratio = self.at_factor(check, lambda, &id)?;
        self.agree("demand over capacity at the limit", ratio, 1.0, 1.0)?;
        let mut env = Env::default();
        env.bind("lambda", lambda);
        self.margin_step(check, "lambda - 1", &env)
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
