//! Dimensions of the run as values of the ledger: bound by the author, or inputs and steps here.

use super::WorkError;
use super::desk::Desk;
use crate::criteria::from::{From, RunField};
use crate::criteria::resolve::{Sourced, Turn};
use crate::formula::{Draft, Env, Origin, Symbol, Value};
use crate::joint::{GivenAt, LegMeasure, SizeSpec};
use crate::quantity::{Dim, Given};
use crate::weld::ThroatRule;

impl Desk<'_, '_> {
    /// The value of a dimension of the run.
    pub(super) fn run_value(&mut self, field: RunField) -> Result<Value, WorkError> {
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
                Symbol::of("h", &["2"]),
                "leg on the base part",
                on_base,
            )),
            (RunField::LegAttached, SizeSpec::Unequal { on_attached, .. }) => Ok(self.told(
                "leg-attached",
                Symbol::of("h", &["1"]),
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
            ),
            "the rule follows from the size"
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
}
