//! Properties of the parts joined and of the filler.

use super::fault::{property_name, property_says};
use super::{Asking, Resolved, Sourced, slug};
use crate::criteria::from::Property;
use crate::criteria::sheet::Need;
use crate::formula::{Origin, Symbol};
use crate::joint::{Filler, GivenAt};
use crate::quantity::Given;
use crate::source::{Diagnostic, Told};

impl Asking<'_> {
    pub(super) fn of_part(
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
    pub(super) fn of_both(
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

    pub(super) fn part_quantity(
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
            Some(format!("{name} of {}", part.name.value))
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
                "{}: {}, {}",
                property_says(name, need),
                part.name.value,
                part.material.value
            ),
            given: told.value,
            origin: Origin::Input(told.place),
            mark,
        }))
    }

    pub(super) fn of_filler(
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
            Some(format!("{name} of {}", filler.name.value))
        } else if filler.source.is_none() {
            Some(format!("{name} of {}: no source given", filler.name.value))
        } else {
            None
        };
        Ok(told.map(|told| {
            Resolved::One(Box::new(Sourced {
                id: format!("filler.{}", slug(name)),
                symbol: need.symbol.clone(),
                says: format!("{}: {}", property_says(name, need), filler.name.value),
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
}
