//! The fixed words of sheets: status, ends, kinds of weld, failure paths, kinds of quantity, roles.

use crate::quantity::Dim;
use crate::weld::{Run, ThroatRule};

/// How a statement was come by.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Status {
    /// Read in the document's own text.
    Read,
    /// Recalled from memory: to be verified against the document.
    Recalled,
    /// Common practice without one document.
    CommonPractice,
    /// The user's own rule.
    UsersOwn,
}

impl Status {
    /// Words and what they stand for.
    pub const WORDS: [(&'static str, Self); 4] = [
        ("read", Self::Read),
        ("recalled from memory", Self::Recalled),
        ("common practice", Self::CommonPractice),
        ("user's own", Self::UsersOwn),
    ];

    /// The word in files and notes.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Read => "read",
            Self::Recalled => "recalled from memory",
            Self::CommonPractice => "common practice",
            Self::UsersOwn => "user's own",
        }
    }
}

/// What a sheet allows of a free end.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum EndRule {
    /// Full size up to the end.
    Full,
    /// Shortened by one throat.
    LessThroat,
    /// Shortened by one leg.
    LessLeg,
}

impl EndRule {
    /// Words and what they stand for.
    pub const WORDS: [(&'static str, Self); 3] = [
        ("full", Self::Full),
        ("less throat", Self::LessThroat),
        ("less leg", Self::LessLeg),
    ];

    /// The word in files and notes.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Full => "full",
            Self::LessThroat => "less throat",
            Self::LessLeg => "less leg",
        }
    }
}

/// Kinds of weld.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum WeldKind {
    /// Fillet told by its legs.
    Fillet,
    /// Fillet told by its throat.
    Stated,
    /// Partial penetration.
    Partial,
    /// Complete penetration.
    Complete,
}

impl WeldKind {
    /// Words and what they stand for.
    pub const WORDS: [(&'static str, Self); 4] = [
        ("fillet", Self::Fillet),
        ("stated", Self::Stated),
        ("partial", Self::Partial),
        ("complete", Self::Complete),
    ];

    /// The kind of a run.
    #[must_use]
    pub const fn of(run: &Run) -> Self {
        match run.rule {
            ThroatRule::EqualLegs { .. }
            | ThroatRule::SquareLegs { .. }
            | ThroatRule::UnequalLegs { .. } => Self::Fillet,
            ThroatRule::Stated { .. } => Self::Stated,
            ThroatRule::Partial { .. } => Self::Partial,
            ThroatRule::Complete { .. } => Self::Complete,
        }
    }

    /// What it is, in words.
    #[must_use]
    pub const fn says(self) -> &'static str {
        match self {
            Self::Fillet => "a fillet told by its legs",
            Self::Stated => "a fillet told by its throat",
            Self::Partial => "a partial penetration weld",
            Self::Complete => "a complete penetration weld",
        }
    }
}

/// Failure paths of a welded joint: the rows of the coverage matrix.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub enum FailurePath {
    /// The weld throat.
    Throat,
    /// The fusion face on the attached part.
    FusionFaceAttached,
    /// The fusion face on the base part.
    FusionFaceBase,
    /// The attached part's metal beside the weld.
    BaseMetalAttached,
    /// The base part's metal beside the weld.
    BaseMetalBase,
    /// Bending of the plates, effective width of parts that are not stiff.
    PlateBending,
    /// The heat-affected zone.
    HeatAffectedZone,
    /// Bending that opens the root of a one-sided weld.
    RootBending,
    /// Fatigue.
    Fatigue,
    /// Limits on size and length.
    SizeAndLength,
}

impl FailurePath {
    /// Every path in print order, by its word.
    pub const WORDS: [(&'static str, Self); 10] = [
        ("throat", Self::Throat),
        ("fusion face attached", Self::FusionFaceAttached),
        ("fusion face base", Self::FusionFaceBase),
        ("base metal attached", Self::BaseMetalAttached),
        ("base metal base", Self::BaseMetalBase),
        ("plate bending", Self::PlateBending),
        ("heat-affected zone", Self::HeatAffectedZone),
        ("root bending", Self::RootBending),
        ("fatigue", Self::Fatigue),
        ("size and length", Self::SizeAndLength),
    ];

    /// The word in files and notes.
    ///
    /// # Panics
    ///
    /// Never: every path has a word.
    #[must_use]
    pub fn word(self) -> &'static str {
        Self::WORDS
            .iter()
            .find(|(_, path)| *path == self)
            .map(|(word, _)| *word)
            .expect("every path has a word")
    }
}

/// What a need is: a word, or a quantity of a dimension.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Kind {
    /// A word, the key of a table.
    Word,
    /// A quantity.
    Quantity(Dim),
}

impl Kind {
    /// Words and what they stand for.
    pub const WORDS: [(&'static str, Self); 9] = [
        ("force", Self::Quantity(Dim::FORCE)),
        ("length", Self::Quantity(Dim::LENGTH)),
        ("stress", Self::Quantity(Dim::STRESS)),
        ("area", Self::Quantity(Dim::AREA)),
        ("moment", Self::Quantity(Dim::MOMENT)),
        ("line load", Self::Quantity(Dim::LINE_LOAD)),
        ("angle", Self::Quantity(Dim::ANGLE)),
        ("ratio", Self::Quantity(Dim::NONE)),
        ("word", Self::Word),
    ];

    /// The dimension of a quantity.
    #[must_use]
    pub const fn dim(self) -> Option<Dim> {
        match self {
            Self::Word => None,
            Self::Quantity(dim) => Some(dim),
        }
    }

    /// What it is, in words with an article.
    #[must_use]
    pub fn says(self) -> String {
        self.dim().map_or_else(|| "a word".to_owned(), Dim::word)
    }
}

/// Where a need stands in the ledger of factors.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Role {
    /// A factor that multiplies the load.
    FactorOnLoad,
    /// A factor that reduces the strength.
    FactorOnStrength,
    /// A term that does not grow with the loads of the case.
    Fixed,
}

impl Role {
    /// Words and what they stand for.
    pub const WORDS: [(&'static str, Self); 3] = [
        ("factor on load", Self::FactorOnLoad),
        ("factor on strength", Self::FactorOnStrength),
        ("fixed", Self::Fixed),
    ];
}
