//! Faults of the values that a joint and a check give: missing, unknown, of a wrong kind.

use super::{Asking, Turn};
use crate::criteria::from::{From, Property, Which};
use crate::criteria::library::nearest;
use crate::criteria::sheet::Need;
use crate::quantity::GivenError;
use crate::source::{Diagnostic, Place, Told};
use crate::weld::Run;

impl Asking<'_> {
    pub(super) fn bad_value(
        &self,
        need: &Need,
        name: &str,
        error: &GivenError,
        place: &Place,
    ) -> Diagnostic {
        let code = if matches!(error, GivenError::Kind { .. }) {
            "wrong-kind"
        } else {
            "bad-quantity"
        };
        Diagnostic::error(code, format!("`{name}`: {error}"), place).help(format!(
            "`{}` takes {}: {}",
            self.sheet.name.value,
            need.kind.says(),
            need.says
        ))
    }

    /// The fault of a need that nothing gives.
    pub(super) fn missing(&self, need: &Need, run: &Run, turn: Option<Turn>) -> Diagnostic {
        let name = &self.sheet.name.value;
        let check = need.from.iter().find_map(|from| match from {
            From::Check(name) => Some(name),
            From::Point(_) | From::Run(_) | From::Part(..) | From::Filler(_) | From::Clause => None,
        });
        let hint = |fault: Diagnostic| match check {
            Some(key) => fault.help(format!("or add `{key}: ...` to the check")),
            None => fault,
        };
        match need
            .from
            .iter()
            .find(|from| matches!(from, From::Part(..) | From::Filler(_)))
        {
            Some(From::Part(which, property)) => {
                let wanted = property_name(property);
                let indices = match which {
                    Which::InTurn => vec![run.joins[turn.map_or(0, Turn::index)]],
                    Which::Attached => vec![run.joins[0]],
                    Which::Base => vec![run.joins[1]],
                    Which::Thinner | Which::Thicker | Which::Weaker => run.joins.to_vec(),
                };
                let lacks = |index: &&usize| {
                    matches!(self.part_quantity(need, **index, property), Ok(None))
                };
                let part = &self.joint.parts[*indices.iter().find(lacks).unwrap_or(&indices[0])];
                let message = format!(
                    "`{}` gives no `{wanted}`, which `{name}` needs",
                    part.name.value
                );
                let fault = Diagnostic::error("missing-value", message, &part.name.place)
                    .help(format!("add `{wanted}: ...`: {}", need.says));
                hint(fault)
            }
            Some(From::Filler(property)) => {
                let wanted = property_name(property);
                let (message, place) = match &self.joint.filler {
                    Some(filler) => (
                        format!("the filler gives no `{wanted}`, which `{name}` needs"),
                        &filler.name.place,
                    ),
                    None => (
                        format!("`{name}` needs `{wanted}` of a `filler`"),
                        &self.spec.clause.place,
                    ),
                };
                let fault = Diagnostic::error("missing-value", message, place)
                    .help(format!("add `filler: {{{wanted}: ...}}`: {}", need.says));
                hint(fault)
            }
            _ => {
                let key = check.unwrap_or(&need.name.value);
                self.fault("missing-value", format!("`{name}` needs `{key}`"))
                    .help(format!("add `{key}: ...` to the check: {}", need.says))
            }
        }
    }

    /// Values of the check that the sheet does not know.
    pub(in crate::criteria) fn unknown_values(&self) -> Vec<Diagnostic> {
        let known: Vec<&str> = self
            .sheet
            .needs
            .iter()
            .flat_map(|need| &need.from)
            .filter_map(|from| match from {
                From::Check(name) => Some(name.as_str()),
                From::Point(_) | From::Run(_) | From::Part(..) | From::Filler(_) | From::Clause => {
                    None
                }
            })
            .collect();
        let unknown = self
            .spec
            .values
            .iter()
            .filter(|(key, _)| !known.contains(&key.value.as_str()));
        unknown
            .map(|(key, _)| unknown_value(key, &known, &self.sheet.name.value))
            .collect()
    }
}

fn unknown_value(key: &Told<String>, known: &[&str], sheet: &str) -> Diagnostic {
    let message = format!("`{}` is no value of `{sheet}`", key.value);
    let mut fault = Diagnostic::error("unknown-value", message, &key.place);
    if let Some(near) = nearest(&key.value, known.iter().copied()) {
        fault = fault.help(format!("did you mean `{near}`?"));
    }
    if known.is_empty() {
        return fault.help("it takes no values");
    }
    let listed: Vec<String> = known.iter().map(|name| format!("`{name}`")).collect();
    fault.help(format!("it takes {}", listed.join(", ")))
}

pub(super) fn property_name(property: &Property) -> &str {
    match property {
        Property::Material => "material",
        Property::Thickness => "thickness",
        Property::Named(name) => name,
    }
}

pub(super) fn property_says(name: &str, need: &Need) -> String {
    match name {
        "thickness" => "thickness".to_owned(),
        "f_y" => "yield strength".to_owned(),
        "f_u" => "ultimate strength".to_owned(),
        _ => need.says.clone(),
    }
}
