//! The words by which a sheet says where a quantity comes from, such as `point.sigma_perp`.

use super::sheet::Kind;
use crate::quantity::Dim;

/// Where a need comes from.
#[derive(Clone, PartialEq, Eq, Debug)]
pub enum From {
    /// A stress or line load at the point.
    Point(PointField),
    /// A dimension of the run.
    Run(RunField),
    /// A property of a part.
    Part(Which, Property),
    /// A property of the filler.
    Filler(Property),
    /// A value given with the check in the joint file.
    Check(String),
    /// The clause itself states it.
    Clause,
}

/// Stresses and line loads at a point.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub enum PointField {
    /// |f| on the throat (stress).
    Resultant,
    /// Along the run (stress).
    Along,
    /// Across the run in the faying plane (stress).
    Across,
    /// Out of the faying plane (stress).
    Through,
    /// Square to the throat plane, tension positive (stress).
    SigmaPerp,
    /// In the throat plane, square to the run (stress).
    TauPerp,
    /// In the throat plane, along the run (stress).
    TauPar,
    /// Sine of the angle between stress and run (ratio); 0 without stress.
    SinPhi,
    /// t |f| of this bead (line load).
    LineLoad,
    /// Line load on the part in turn: on the attached part the vector sum of both beads.
    PlateLoad,
}

impl PointField {
    /// Words, what they stand for, and their dimensions.
    pub const WORDS: [(&'static str, Self, Dim); 10] = [
        ("f", Self::Resultant, Dim::STRESS),
        ("f_par", Self::Along, Dim::STRESS),
        ("f_n", Self::Across, Dim::STRESS),
        ("f_z", Self::Through, Dim::STRESS),
        ("sigma_perp", Self::SigmaPerp, Dim::STRESS),
        ("tau_perp", Self::TauPerp, Dim::STRESS),
        ("tau_par", Self::TauPar, Dim::STRESS),
        ("sin_phi", Self::SinPhi, Dim::NONE),
        ("q", Self::LineLoad, Dim::LINE_LOAD),
        ("q_plate", Self::PlateLoad, Dim::LINE_LOAD),
    ];

    /// Whether it depends on the side of the toe.
    #[must_use]
    pub const fn needs_toe(self) -> bool {
        matches!(self, Self::SigmaPerp | Self::TauPerp)
    }
}

/// Dimensions of a run.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum RunField {
    /// Effective throat.
    Throat,
    /// Leg as told; the lesser of unequal legs.
    Leg,
    /// Leg on the base part as told.
    LegBase,
    /// Leg on the attached part as told.
    LegAttached,
    /// The leg that works on the part in turn: less the gap, along the face.
    Face,
    /// Length as told.
    Length,
    /// Length less the ends that do not count.
    EffectiveLength,
    /// Angle between the faces.
    Angle,
}

impl RunField {
    /// Words, what they stand for, and their dimensions.
    pub const WORDS: [(&'static str, Self, Dim); 8] = [
        ("throat", Self::Throat, Dim::LENGTH),
        ("leg", Self::Leg, Dim::LENGTH),
        ("leg_base", Self::LegBase, Dim::LENGTH),
        ("leg_attached", Self::LegAttached, Dim::LENGTH),
        ("face", Self::Face, Dim::LENGTH),
        ("length", Self::Length, Dim::LENGTH),
        ("effective_length", Self::EffectiveLength, Dim::LENGTH),
        ("angle", Self::Angle, Dim::ANGLE),
    ];
}

/// Which part a property is of.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Which {
    /// The part in turn of a sheet that is evaluated for each part.
    InTurn,
    /// The attached part.
    Attached,
    /// The base part.
    Base,
    /// The thinner part: only its thickness.
    Thinner,
    /// The thicker part: only its thickness.
    Thicker,
    /// The lesser strength of the two parts, or the material of the weaker one.
    Weaker,
}

/// A property of a part or filler.
#[derive(Clone, PartialEq, Eq, Debug)]
pub enum Property {
    /// Material or designation (word).
    Material,
    /// Thickness (length).
    Thickness,
    /// A strength or other quantity by its name in the joint file, such as `f_u`.
    Named(String),
}

/// Groups of words, for advice.
const GROUPS: [&str; 9] = [
    "point", "run", "part", "attached", "base", "thinner", "thicker", "weaker", "filler",
];

impl From {
    /// Reads a word such as `point.sigma_perp`.
    ///
    /// # Errors
    ///
    /// The nearest known word, if one is near, and the words allowed.
    pub fn parse(text: &str) -> Result<Self, Unknown> {
        if text == "clause" {
            return Ok(Self::Clause);
        }
        let Some((group, name)) = text.split_once('.') else {
            return Err(Unknown::of(text, &words()));
        };
        if !is_name(name) {
            return Err(Unknown::of(text, &words()));
        }
        let within = |known: &[&str]| {
            let known: Vec<String> = known.iter().map(|word| format!("{group}.{word}")).collect();
            Unknown::of(text, &known)
        };
        let named = |which| Ok(Self::Part(which, property(name)));
        match group {
            "point" => PointField::WORDS
                .iter()
                .find(|row| row.0 == name)
                .map(|row| Self::Point(row.1))
                .ok_or_else(|| within(&PointField::WORDS.map(|row| row.0))),
            "run" => RunField::WORDS
                .iter()
                .find(|row| row.0 == name)
                .map(|row| Self::Run(row.1))
                .ok_or_else(|| within(&RunField::WORDS.map(|row| row.0))),
            "part" => named(Which::InTurn),
            "attached" => named(Which::Attached),
            "base" => named(Which::Base),
            "thinner" | "thicker" if name != "thickness" => Err(within(&["thickness"])),
            "thinner" => named(Which::Thinner),
            "thicker" => named(Which::Thicker),
            "weaker" if name == "thickness" => Err(within(&["f_y", "f_u", "material"])),
            "weaker" => named(Which::Weaker),
            "filler" if name == "thickness" => Err(within(&["f_u", "material"])),
            "filler" => Ok(Self::Filler(property(name))),
            "check" => Ok(Self::Check(name.to_owned())),
            _ => Err(Unknown::of(text, &words())),
        }
    }

    /// The kind that it has by itself; `None` where the sheet declares it.
    #[must_use]
    pub fn kind(&self) -> Option<Kind> {
        let dim = match self {
            Self::Point(field) => PointField::WORDS
                .iter()
                .find(|row| row.1 == *field)
                .map(|row| row.2),
            Self::Run(field) => RunField::WORDS
                .iter()
                .find(|row| row.1 == *field)
                .map(|row| row.2),
            Self::Part(_, Property::Material) | Self::Filler(Property::Material) => {
                return Some(Kind::Word);
            }
            Self::Part(_, Property::Thickness) | Self::Filler(Property::Thickness) => {
                Some(Dim::LENGTH)
            }
            Self::Part(_, Property::Named(name)) | Self::Filler(Property::Named(name)) => {
                matches!(name.as_str(), "f_y" | "f_u").then_some(Dim::STRESS)
            }
            Self::Check(_) | Self::Clause => None,
        };
        dim.map(Kind::Quantity)
    }

    /// Whether it depends on the part in turn.
    #[must_use]
    pub const fn is_in_turn(&self) -> bool {
        matches!(
            self,
            Self::Part(Which::InTurn, _)
                | Self::Point(PointField::PlateLoad)
                | Self::Run(RunField::Face)
        )
    }

    /// The name under which a note binds it: the word with `_` for the dot, such as `point_f`.
    #[must_use]
    pub fn bound_name(&self) -> Option<String> {
        match self {
            Self::Point(field) => PointField::WORDS
                .iter()
                .find(|row| row.1 == *field)
                .map(|row| format!("point_{}", row.0)),
            Self::Run(field) => RunField::WORDS
                .iter()
                .find(|row| row.1 == *field)
                .map(|row| format!("run_{}", row.0)),
            Self::Part(..) | Self::Filler(_) | Self::Check(_) | Self::Clause => None,
        }
    }
}

fn property(name: &str) -> Property {
    match name {
        "material" => Property::Material,
        "thickness" => Property::Thickness,
        _ => Property::Named(name.to_owned()),
    }
}

/// Whether a text can be a name: a letter, then letters, digits and underscores.
pub(super) fn is_name(text: &str) -> bool {
    text.starts_with(|c: char| c.is_ascii_alphabetic())
        && text.chars().all(|c| c.is_ascii_alphanumeric() || c == '_')
}

/// Every word with a fixed meaning, and samples of the free ones.
fn words() -> Vec<String> {
    let point = PointField::WORDS
        .iter()
        .map(|row| format!("point.{}", row.0));
    let run = RunField::WORDS.iter().map(|row| format!("run.{}", row.0));
    let parts = GROUPS[2..4 + 1].iter().flat_map(|group| {
        ["thickness", "f_y", "f_u", "material"].map(|name| format!("{group}.{name}"))
    });
    let others = [
        "thinner.thickness",
        "thicker.thickness",
        "weaker.f_y",
        "weaker.f_u",
        "weaker.material",
    ];
    let last = ["filler.f_u", "clause", "check.NAME"];
    point
        .chain(run)
        .chain(parts)
        .chain(others.into_iter().chain(last).map(str::to_owned))
        .collect()
}

/// A word that says nothing here.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Unknown {
    /// The nearest known word.
    pub nearest: Option<String>,
    /// Words allowed.
    pub allowed: Vec<String>,
}

impl Unknown {
    fn of(text: &str, known: &[String]) -> Self {
        let near = known
            .iter()
            .map(|word| (strsim::damerau_levenshtein(text, word), word))
            .min_by_key(|(slips, _)| *slips)
            .filter(|(slips, _)| *slips <= 3);
        Self {
            nearest: near.map(|(_, word)| word.clone()),
            allowed: known.to_vec(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_are_read_and_wrong_ones_get_the_nearest() {
        assert_eq!(
            From::parse("point.tau_par"),
            Ok(From::Point(PointField::TauPar)),
            "a stress"
        );
        assert_eq!(
            From::parse("weaker.f_u"),
            Ok(From::Part(Which::Weaker, Property::Named("f_u".into()))),
            "a strength"
        );
        assert_eq!(
            From::parse("check.gamma_M2"),
            Ok(From::Check("gamma_M2".into())),
            "a value of the check"
        );
        for (wrong, near) in [
            ("point.sigma_prep", Some("point.sigma_perp")),
            ("runs.throat", Some("run.throat")),
            ("thinner.f_y", None),
            ("thiner.thickness", Some("thinner.thickness")),
            ("weaker.thickness", None),
            ("nonsense", None),
            ("check.", None),
        ] {
            let fault = From::parse(wrong).unwrap_err();
            assert_eq!(fault.nearest.as_deref(), near, "{wrong}");
            assert!(!fault.allowed.is_empty(), "{wrong}");
        }
    }
}
