//! From what a sheet needs to the values that a joint and a check give, each with its source.
//!
//! Both the assessment and the worked calculation ask here, so that they cannot differ. Evaluates
//! no formula.

mod fault;
mod part;
mod run;

use super::from::{From, PointField, Property, RunField, Which};
use super::sheet::{Need, Sheet};
use crate::formula::{Origin, Symbol};
use crate::joint::{CheckSpec, GivenAt, Joint, Part};
use crate::quantity::{Dim, Given, UnitSet};
use crate::source::{Diagnostic, Place, Told};
use crate::weld::Run;

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
pub(in crate::criteria) struct Sourced {
    pub(in crate::criteria) id: String,
    pub(in crate::criteria) symbol: Symbol,
    pub(in crate::criteria) says: String,
    pub(in crate::criteria) given: Given,
    pub(in crate::criteria) origin: Origin,
    pub(in crate::criteria) mark: Option<String>,
}

/// What a need stands for at one run.
#[derive(Clone, Debug)]
pub(in crate::criteria) enum Resolved {
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
    pub(in crate::criteria) fn value(&self) -> Option<f64> {
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

/// A word that a check tells.
#[derive(Clone, Debug)]
pub(in crate::criteria) struct ToldWord {
    /// The word in a sentence, with its source.
    pub(in crate::criteria) says: String,
    /// What of it is to be verified.
    pub(in crate::criteria) open: Option<String>,
}

/// One check of a joint with its sheet.
#[derive(Clone, Copy, Debug)]
pub(in crate::criteria) struct Asking<'a> {
    pub(in crate::criteria) joint: &'a Joint,
    /// Index of the check in the joint file.
    pub(in crate::criteria) index: usize,
    pub(in crate::criteria) spec: &'a CheckSpec,
    pub(in crate::criteria) sheet: &'a Sheet,
}

impl Asking<'_> {
    pub(in crate::criteria) fn units(&self) -> UnitSet {
        self.joint.units.value
    }

    /// A fault at the check's clause.
    pub(in crate::criteria) fn fault(&self, code: &'static str, message: String) -> Diagnostic {
        Diagnostic::error(code, message, &self.spec.clause.place)
    }

    /// What `need` stands for at `run`, for the part in turn.
    pub(in crate::criteria) fn resolve(
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
            says: self.with_source(&need.says),
            given,
            origin: Origin::Input(raw.place.clone()),
            mark,
        }))))
    }

    /// A word that the check tells for a need, such as a grade in place of the material's.
    pub(in crate::criteria) fn told_word(&self, name: &str) -> Option<ToldWord> {
        let need = self.sheet.need(name)?;
        if need.kind.dim().is_some() {
            return None;
        }
        let (_, raw) = self.spec.values.iter().find(|(key, _)| key.value == name)?;
        Some(ToldWord {
            says: self.with_source(&format!("{name} {} as told", raw.value)),
            open: self.open(name),
        })
    }

    /// Words with the source that the check gives, if it does.
    fn with_source(&self, says: &str) -> String {
        match &self.spec.source {
            Some(source) => format!("{says} ({})", source.value),
            None => says.to_owned(),
        }
    }

    /// What is to be verified of a value of the check that has no default: said to be so, or without
    /// a source.
    fn open(&self, name: &str) -> Option<String> {
        let what = format!("{name} of the check {}", self.sheet.name.value);
        match &self.spec.source {
            _ if self.spec.to_be_verified => Some(what),
            Some(_) => None,
            None => Some(format!("{what}: no source given")),
        }
    }

    /// What is to be verified of a value of the check: an allowable or a factor without a source,
    /// unless it is the sheet's own default.
    fn check_mark(
        &self,
        need: &Need,
        name: &str,
        given: &Given,
    ) -> Result<Option<String>, Diagnostic> {
        let open = self.open(name);
        let matters = given.dim == Dim::STRESS || need.role.is_some();
        if open.is_none() || self.spec.to_be_verified {
            return Ok(open);
        }
        if !matters {
            return Ok(None);
        }
        let default = self
            .stated(need, "default")?
            .as_ref()
            .and_then(Resolved::value);
        let is_default =
            default.is_some_and(|default| (default - given.value).abs() <= 1e-12 * default.abs());
        Ok(open.filter(|_| !is_default))
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
        let mark = match &stated.source {
            Some(_) => stated.status.mark(&source),
            None => self.sheet.mark(),
        };
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
}

fn input_place(origin: &Origin) -> Option<Place> {
    match origin {
        Origin::Input(place) => Some(place.clone()),
        Origin::Clause(_) | Origin::Method(_) => None,
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
pub(in crate::criteria) fn slug(text: &str) -> String {
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
