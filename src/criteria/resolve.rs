//! From what a sheet needs to the values that a joint and a check give, each with its source.
//!
//! Both the assessment and the worked calculation ask here, so that they cannot differ. Evaluates
//! no formula.

use super::from::{From, PointField, Property, RunField, Which};
use super::sheet::{Need, Sheet, Status};
use crate::formula::{Origin, Symbol};
use crate::joint::{CheckSpec, Filler, GivenAt, Joint, Part, SizeSpec};
use crate::quantity::{Dim, Given, GivenError, UnitSet, real};
use crate::source::{Diagnostic, Place, Told};
use crate::weld::{Run, ThroatRule};

/// The part in turn of a sheet that is evaluated for each part.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub enum Turn {
    /// The attached part.
    Attached,
    /// The base part.
    Base,
}

impl Turn {
    /// Its place in [`Run::joins`].
    #[must_use]
    pub const fn index(self) -> usize {
        match self {
            Self::Attached => 0,
            Self::Base => 1,
        }
    }

    /// The word in notes.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Attached => "attached part",
            Self::Base => "base part",
        }
    }
}

/// A quantity with all that the ledger says of it.
#[derive(Clone, Debug)]
pub(super) struct Sourced {
    pub(super) id: String,
    pub(super) symbol: Symbol,
    pub(super) says: String,
    pub(super) given: Given,
    pub(super) origin: Origin,
    pub(super) mark: Option<String>,
}

/// What a need stands for at one run.
#[derive(Clone, Debug)]
pub(super) enum Resolved {
    /// A word, and where it comes from.
    Word(String),
    /// A stress or line load of the point.
    Point(PointField),
    /// A dimension of the run, in the printing set.
    Run(RunField, f64),
    /// One quantity.
    One(Box<Sourced>),
    /// The lesser or the greater of two: of the attached and the base part.
    Extreme {
        greatest: bool,
        of: Box<[Sourced; 2]>,
    },
}

impl Resolved {
    /// The value of a quantity that does not vary from point to point.
    pub(super) fn value(&self) -> Option<f64> {
        match self {
            Self::Word(_) | Self::Point(_) => None,
            Self::Run(_, value) => Some(*value),
            Self::One(one) => Some(one.given.value),
            Self::Extreme { greatest, of } => {
                let (first, second) = (of[0].given.value, of[1].given.value);
                Some(if *greatest {
                    first.max(second)
                } else {
                    first.min(second)
                })
            }
        }
    }
}

/// One check of a joint with its sheet.
#[derive(Clone, Copy, Debug)]
pub(super) struct Asking<'a> {
    pub(super) joint: &'a Joint,
    /// Index of the check in the joint file.
    pub(super) index: usize,
    pub(super) spec: &'a CheckSpec,
    pub(super) sheet: &'a Sheet,
}

impl Asking<'_> {
    pub(super) fn units(&self) -> UnitSet {
        self.joint.units.value
    }

    /// A fault at the check's clause.
    pub(super) fn fault(&self, code: &'static str, message: String) -> Diagnostic {
        Diagnostic::error(code, message, &self.spec.clause.place)
    }

    /// What `need` stands for at `run`, for the part in turn.
    pub(super) fn resolve(
        &self,
        need: &Need,
        run: &Run,
        turn: Option<Turn>,
    ) -> Result<Resolved, Diagnostic> {
        for from in &need.from {
            if let Some(found) = self.look(need, from, run, turn)? {
                self.check_bounds(need, &found)?;
                return Ok(found);
            }
        }
        if let Some(stated) = self.stated(need, "default")? {
            return Ok(stated);
        }
        Err(self.missing(need, run, turn))
    }

    /// What one place gives; `None` if it gives nothing.
    fn look(
        &self,
        need: &Need,
        from: &From,
        run: &Run,
        turn: Option<Turn>,
    ) -> Result<Option<Resolved>, Diagnostic> {
        let joins = run.joins;
        let turn_index = turn.map_or(0, Turn::index);
        match from {
            From::Point(field) => Ok(Some(Resolved::Point(*field))),
            From::Run(field) => self
                .run_field(*field, run, turn)
                .map(|value| Some(Resolved::Run(*field, value))),
            From::Part(which, property) => match which {
                Which::InTurn => self.of_part(need, joins[turn_index], property),
                Which::Attached => self.of_part(need, joins[0], property),
                Which::Base => self.of_part(need, joins[1], property),
                Which::Thinner | Which::Thicker => {
                    self.of_both(need, joins, property, *which == Which::Thicker)
                }
                Which::Weaker if *property == Property::Material => Ok(Some(
                    self.word(need, &self.joint.parts[self.weaker(joins)].material.value),
                )),
                Which::Weaker => self.of_both(need, joins, property, false),
            },
            From::Filler(property) => match &self.joint.filler {
                Some(filler) => self.of_filler(need, filler, property),
                None => Ok(None),
            },
            From::Check(name) => self.of_check(need, name),
            From::Clause => self.stated(need, "clause"),
        }
    }

    /// The index of the part of lesser ultimate strength (or yield strength where that is missing).
    fn weaker(&self, joins: [usize; 2]) -> usize {
        let [first, second] = joins.map(|part| &self.joint.parts[part]);
        let both = |of: fn(&Part) -> &Option<GivenAt>| {
            Some((
                of(first).as_ref()?.value.value,
                of(second).as_ref()?.value.value,
            ))
        };
        let strengths = both(|part| &part.f_u).or_else(|| both(|part| &part.f_y));
        match strengths {
            Some((first, second)) if second < first => joins[1],
            _ => joins[0],
        }
    }

    fn word(&self, need: &Need, text: &str) -> Resolved {
        Resolved::Word(if need.grade {
            leading_grade(text).to_owned()
        } else {
            text.to_owned()
        })
    }

    fn of_part(
        &self,
        need: &Need,
        part: usize,
        property: &Property,
    ) -> Result<Option<Resolved>, Diagnostic> {
        if *property == Property::Material {
            return Ok(Some(
                self.word(need, &self.joint.parts[part].material.value),
            ));
        }
        Ok(self
            .part_quantity(need, part, property)?
            .map(|one| Resolved::One(Box::new(one))))
    }

    /// The lesser or greater of both parts; a single value where the run joins one part to itself.
    fn of_both(
        &self,
        need: &Need,
        joins: [usize; 2],
        property: &Property,
        greatest: bool,
    ) -> Result<Option<Resolved>, Diagnostic> {
        let first = self.part_quantity(need, joins[0], property)?;
        let second = self.part_quantity(need, joins[1], property)?;
        Ok(first.zip(second).map(|(first, second)| {
            if joins[0] == joins[1] {
                Resolved::One(Box::new(first))
            } else {
                Resolved::Extreme {
                    greatest,
                    of: Box::new([first, second]),
                }
            }
        }))
    }

    fn part_quantity(
        &self,
        need: &Need,
        index: usize,
        property: &Property,
    ) -> Result<Option<Sourced>, Diagnostic> {
        let part = &self.joint.parts[index];
        let name = property_name(property);
        let told = match name {
            "thickness" => part.thickness.clone(),
            "f_y" => part.f_y.clone(),
            "f_u" => part.f_u.clone(),
            _ => self.raw(need, &part.more, name)?,
        };
        let is_strength = name != "thickness";
        let mark = if !is_strength {
            None
        } else if part.to_be_verified {
            Some(format!("{name} of {}: to be verified", part.name.value))
        } else if part.source.is_none() {
            Some(format!("{name} of {}: no source given", part.name.value))
        } else {
            None
        };
        let number = (index + 1).to_string();
        let symbol = match name {
            "thickness" => Symbol::of("t", &["p", &number]),
            "f_y" => Symbol::of("f", &["y", &number]),
            "f_u" => Symbol::of("f", &["u", &number]),
            _ => need.symbol.with(&number),
        };
        Ok(told.map(|told| Sourced {
            id: format!("part.{}.{}", slug(&part.name.value), slug(name)),
            symbol,
            says: format!(
                "{} of {}, {}",
                property_says(name),
                part.name.value,
                part.material.value
            ),
            given: told.value,
            origin: Origin::Input(told.place),
            mark,
        }))
    }

    fn of_filler(
        &self,
        need: &Need,
        filler: &Filler,
        property: &Property,
    ) -> Result<Option<Resolved>, Diagnostic> {
        let name = property_name(property);
        let told = match name {
            "material" => return Ok(Some(self.word(need, &filler.name.value))),
            "f_u" => filler.f_u.clone(),
            _ => self.raw(need, &filler.more, name)?,
        };
        let mark = if filler.to_be_verified {
            Some(format!("{name} of {}: to be verified", filler.name.value))
        } else if filler.source.is_none() {
            Some(format!("{name} of {}: no source given", filler.name.value))
        } else {
            None
        };
        Ok(told.map(|told| {
            Resolved::One(Box::new(Sourced {
                id: format!("filler.{}", slug(name)),
                symbol: need.symbol.clone(),
                says: format!(
                    "{} of the filler, {}",
                    property_says(name),
                    filler.name.value
                ),
                given: told.value,
                origin: Origin::Input(told.place),
                mark,
            }))
        }))
    }

    /// A quantity kept as text under a name, read as the kind that the sheet declares.
    fn raw(
        &self,
        need: &Need,
        more: &[(Told<String>, Told<String>)],
        name: &str,
    ) -> Result<Option<GivenAt>, Diagnostic> {
        let Some((_, raw)) = more.iter().find(|(key, _)| key.value == name) else {
            return Ok(None);
        };
        let dim = need.kind.dim().unwrap_or_default();
        match Given::parse(&raw.value, dim, self.units()) {
            Ok(value) => Ok(Some(Told {
                value,
                place: raw.place.clone(),
            })),
            Err(error) => Err(self.bad_value(need, name, &error, &raw.place)),
        }
    }

    fn bad_value(&self, need: &Need, name: &str, error: &GivenError, place: &Place) -> Diagnostic {
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

    fn of_check(&self, need: &Need, name: &str) -> Result<Option<Resolved>, Diagnostic> {
        let Some((_, raw)) = self.spec.values.iter().find(|(key, _)| key.value == name) else {
            return Ok(None);
        };
        let Some(dim) = need.kind.dim() else {
            return Ok(Some(self.word(need, &raw.value)));
        };
        let given = Given::parse(&raw.value, dim, self.units())
            .map_err(|error| self.bad_value(need, name, &error, &raw.place))?;
        let mark = self.check_mark(need, name, &given)?;
        Ok(Some(Resolved::One(Box::new(Sourced {
            id: format!("check.{}.{}", self.index + 1, slug(name)),
            symbol: need.symbol.clone(),
            says: need.says.clone(),
            given,
            origin: Origin::Input(raw.place.clone()),
            mark,
        }))))
    }

    /// What is to be verified of a value of the check: an allowable or a factor without a source,
    /// unless it is the sheet's own default.
    fn check_mark(
        &self,
        need: &Need,
        name: &str,
        given: &Given,
    ) -> Result<Option<String>, Diagnostic> {
        let what = format!("{name} of the check {}", self.sheet.name.value);
        if self.spec.to_be_verified {
            return Ok(Some(format!("{what}: to be verified")));
        }
        let matters = given.dim == Dim::STRESS || need.role.is_some();
        if self.spec.source.is_some() || !matters {
            return Ok(None);
        }
        let default = self
            .stated(need, "default")?
            .as_ref()
            .and_then(Resolved::value);
        let is_default =
            default.is_some_and(|default| (default - given.value).abs() <= 1e-12 * default.abs());
        Ok((!is_default).then(|| format!("{what}: no source given")))
    }

    /// The value that the sheet states for this printing set.
    fn stated(&self, need: &Need, kind: &str) -> Result<Option<Resolved>, Diagnostic> {
        let Some(stated) = &need.stated else {
            return Ok(None);
        };
        let Some(text) = stated.text.of(self.units()) else {
            let system = if self.units().is_inch() {
                "inches"
            } else {
                "metric lengths"
            };
            let message = format!(
                "`{}` states no `{}` for {system}",
                self.sheet.name.value, need.name.value
            );
            return Err(self
                .fault("no-variant", message)
                .help("use a printing set of the clause's own system"));
        };
        let Some(dim) = need.kind.dim() else {
            return Ok(Some(self.word(need, &text.value)));
        };
        let given = Given::parse(&text.value, dim, self.units())
            .map_err(|error| Diagnostic::error("bad-quantity", error.to_string(), &text.place))?;
        let source = stated
            .source
            .clone()
            .unwrap_or_else(|| self.sheet.source.cited());
        let mark = (stated.status == Status::Recalled)
            .then(|| format!("{source}: recalled from memory, to be verified"));
        Ok(Some(Resolved::One(Box::new(Sourced {
            id: format!("check.{}.{kind}.{}", self.index + 1, slug(&need.name.value)),
            symbol: need.symbol.clone(),
            says: need.says.clone(),
            given,
            origin: Origin::Clause(source),
            mark,
        }))))
    }

    fn check_bounds(&self, need: &Need, found: &Resolved) -> Result<(), Diagnostic> {
        let Some(value) = found.value() else {
            return Ok(());
        };
        let parse = |text: &Option<Told<String>>| {
            let text = text.as_ref()?;
            Some((
                Given::parse(&text.value, need.kind.dim()?, self.units())
                    .ok()?
                    .value,
                text.value.clone(),
            ))
        };
        // Bounds are inclusive; a value converted from another unit may miss one by rounding.
        let slack = |bound: f64| 1e-12 * bound.abs();
        let wrong = match (parse(&need.least), parse(&need.most)) {
            (Some((bound, text)), _) if value < bound - slack(bound) => format!("at least {text}"),
            (_, Some((bound, text))) if value > bound + slack(bound) => format!("at most {text}"),
            _ => return Ok(()),
        };
        let (text, place) = match found {
            Resolved::One(one) => (one.given.text(), input_place(&one.origin)),
            Resolved::Extreme { .. }
            | Resolved::Run(..)
            | Resolved::Word(_)
            | Resolved::Point(_) => (value.to_string(), None),
        };
        let message = format!("`{}` is {text}, but must be {wrong}", need.name.value);
        let place = place.unwrap_or_else(|| self.spec.clause.place.clone());
        Err(
            Diagnostic::error("out-of-range", message, &place).help(format!(
                "the bound is of `{}`: {}",
                self.sheet.name.value, need.says
            )),
        )
    }

    /// The fault of a need that nothing gives.
    fn missing(&self, need: &Need, run: &Run, turn: Option<Turn>) -> Diagnostic {
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

    /// A dimension of a run, in the printing set.
    fn run_field(&self, field: RunField, run: &Run, turn: Option<Turn>) -> Result<f64, Diagnostic> {
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

    /// Values of the check that the sheet does not know.
    pub(super) fn unknown_values(&self) -> Vec<Diagnostic> {
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
    if let Some(near) = super::library::nearest(&key.value, known.iter().copied()) {
        fault = fault.help(format!("did you mean `{near}`?"));
    }
    if known.is_empty() {
        return fault.help("it takes no values");
    }
    let listed: Vec<String> = known.iter().map(|name| format!("`{name}`")).collect();
    fault.help(format!("it takes {}", listed.join(", ")))
}

fn input_place(origin: &Origin) -> Option<Place> {
    match origin {
        Origin::Input(place) => Some(place.clone()),
        Origin::Clause(_) | Origin::Method(_) => None,
    }
}

fn property_name(property: &Property) -> &str {
    match property {
        Property::Material => "material",
        Property::Thickness => "thickness",
        Property::Named(name) => name,
    }
}

fn property_says(name: &str) -> String {
    match name {
        "thickness" => "thickness".to_owned(),
        "f_y" => "yield strength".to_owned(),
        "f_u" => "ultimate strength".to_owned(),
        other => other.to_owned(),
    }
}

/// The leading letters and digits of a material's name: `S355` of `S355J2+N`.
fn leading_grade(text: &str) -> &str {
    let text = text.trim();
    let letters = text
        .find(|c: char| !c.is_ascii_alphabetic())
        .unwrap_or(text.len());
    let digits = text[letters..]
        .find(|c: char| !c.is_ascii_digit())
        .unwrap_or(text.len() - letters);
    if letters > 0 && digits > 0 {
        &text[..letters + digits]
    } else {
        text
    }
}

/// A text as part of an id: letters, digits and `-`.
pub(super) fn slug(text: &str) -> String {
    let mut slug = String::new();
    for c in text.chars() {
        match c {
            c if c.is_ascii_alphanumeric() || c == '_' => slug.push(c),
            _ if slug.ends_with('-') || slug.is_empty() => {}
            _ => slug.push('-'),
        }
    }
    slug.trim_end_matches('-').to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn grades_lead_a_material_name() {
        for (name, grade) in [
            ("S355J2", "S355"),
            ("S355J2+N", "S355"),
            ("S235", "S235"),
            ("S460ML", "S460"),
            ("6061-T6", "6061-T6"),
            ("steel", "steel"),
        ] {
            assert_eq!(leading_grade(name), grade, "{name}");
        }
        assert_eq!(slug("top plate (2)"), "top-plate-2", "an id");
    }
}
