//! Dimensions of a run that sheets ask for.

use super::{Asking, Turn};
use crate::criteria::from::RunField;
use crate::joint::SizeSpec;
use crate::quantity::real;
use crate::source::Diagnostic;
use crate::weld::{Run, ThroatRule};

impl Asking<'_> {
    /// A dimension of a run, in the printing set.
    pub(super) fn run_field(
        &self,
        field: RunField,
        run: &Run,
        turn: Option<Turn>,
    ) -> Result<f64, Diagnostic> {
        match field {
            RunField::Throat => Ok(run.throat),
            RunField::Length => Ok(run.told.length()),
            RunField::EffectiveLength => Ok(run.path.length()),
            RunField::Angle => Ok(run.angle),
            RunField::Leg => self.legs(run).map(|[base, attached]| base.min(attached)),
            RunField::LegBase => self.legs(run).map(|[base, _]| base),
            RunField::LegAttached => self.legs(run).map(|[_, attached]| attached),
            RunField::Face => {
                let [base, attached] = self.legs(run)?;
                let leg = if turn == Some(Turn::Base) {
                    base
                } else {
                    attached
                };
                Ok(match run.rule {
                    ThroatRule::EqualLegs { gap, .. } | ThroatRule::UnequalLegs { gap, .. } => {
                        leg - gap
                    }
                    ThroatRule::SquareLegs { gap, angle, .. } => (leg - gap) / real::sin(angle),
                    ThroatRule::Stated { .. }
                    | ThroatRule::Partial { .. }
                    | ThroatRule::Complete { .. } => leg,
                })
            }
        }
    }

    /// The legs as told, on the base and on the attached part.
    fn legs(&self, run: &Run) -> Result<[f64; 2], Diagnostic> {
        let spec = &self.joint.weld.runs[run.spec];
        match (&run.rule, &spec.size) {
            (ThroatRule::EqualLegs { leg, .. } | ThroatRule::SquareLegs { leg, .. }, _) => {
                Ok([*leg; 2])
            }
            (
                ThroatRule::UnequalLegs {
                    on_base,
                    on_attached,
                    ..
                },
                _,
            ) => Ok([*on_base, *on_attached]),
            (ThroatRule::Stated { .. }, SizeSpec::Throat { leg: Some(leg), .. }) => {
                Ok([leg.value.value; 2])
            }
            (
                ThroatRule::Stated { .. }
                | ThroatRule::Partial { .. }
                | ThroatRule::Complete { .. },
                _,
            ) => {
                let message = format!(
                    "run `{}` tells no leg, which `{}` needs",
                    run.name, self.sheet.name.value
                );
                Err(Diagnostic::error("missing-leg", message, &spec.name.place)
                    .help("give `leg:` beside the throat, or another sheet"))
            }
        }
    }
}
