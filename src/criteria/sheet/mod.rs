//! A clause sheet as data: what a criterion needs, how it is computed, what it checks.
//!
//! Built-in sheets and a user's own have this one form. Formulas are parsed and their dimensions
//! checked when a sheet is read ([`super::read_sheet`]); nothing here evaluates them.

mod words;

pub use words::{EndRule, FailurePath, Kind, Role, Status, WeldKind};

use super::from::From;
use crate::formula::{Key, Node, Row, RowKey, Symbol, Table};
use crate::joint::Level;
use crate::quantity::{Dim, Given, UnitSet};
use crate::source::{Place, Told};
use crate::weld::Run;
use std::collections::BTreeMap;

/// A clause sheet.
#[derive(Clone, PartialEq, Debug)]
pub struct Sheet {
    /// Name by which joint files ask for it, such as `EN 1993-1-8 4.5.3.2`.
    pub name: Told<String>,
    /// Title, such as `Fillet welds, directional method`.
    pub title: Told<String>,
    /// Where its rules stand.
    pub source: SheetSource,
    /// Levels of load case that it takes; empty for a sheet of sizes.
    pub levels: Vec<Level>,
    /// What it is evaluated at.
    pub scope: Scope,
    /// Whether it is evaluated for the attached and the base part in turn.
    pub each_part: bool,
    /// Whether its demands are convex in the stress, so that ends of straight runs suffice.
    pub convex: bool,
    /// What free ends may be; empty if any.
    pub ends: Vec<EndRule>,
    /// Kinds of weld that it takes.
    pub welds: Vec<WeldKind>,
    /// Failure paths that it covers.
    pub covers: Vec<FailurePath>,
    /// Quantities and words that it needs, in file order.
    pub needs: Vec<Need>,
    /// Tables of the code.
    pub tables: Vec<CodeTable>,
    /// Steps in order.
    pub steps: Vec<Rule>,
    /// Strength checks (scope [`Scope::Point`]).
    pub checks: Vec<Strength>,
    /// Limits on sizes and lengths (scope [`Scope::Run`]).
    pub limits: Vec<Limit>,
    /// Conditions without which the sheet gives no number.
    pub validity: Vec<Validity>,
    /// Assumptions that a note with this sheet prints.
    pub assumptions: Vec<Told<String>>,
    /// Cautions that a note with this sheet prints.
    pub cautions: Vec<Told<String>>,
    /// The whole sheet.
    pub place: Place,
}

/// Where the rules of a sheet stand.
#[derive(Clone, PartialEq, Debug)]
pub struct SheetSource {
    /// Document, such as `EN 1993-1-8`.
    pub document: String,
    /// Edition, such as `2005`.
    pub edition: Option<String>,
    /// Clause, such as `4.5.3.2`.
    pub clause: Option<String>,
    /// How the text was come by.
    pub status: Status,
}

impl SheetSource {
    /// The source as the note cites it, such as `EN 1993-1-8:2005, 4.5.3.2`.
    #[must_use]
    pub fn cited(&self) -> String {
        let edition = self
            .edition
            .as_ref()
            .map(|edition| match self.status {
                // Standards are cited with a colon before the year.
                Status::UsersOwn => format!(", issue {edition}"),
                Status::Read | Status::Recalled | Status::CommonPractice => format!(":{edition}"),
            })
            .unwrap_or_default();
        let clause = self
            .clause
            .as_ref()
            .map(|clause| format!(", {clause}"))
            .unwrap_or_default();
        format!("{}{edition}{clause}", self.document)
    }
}

/// What a sheet is evaluated at.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Scope {
    /// Every point of every case of its levels.
    Point,
    /// Every run, without loads.
    Run,
}

/// A text for each system of units; both the same where the clause has one value.
#[derive(Clone, PartialEq, Debug)]
pub struct BySystem<T> {
    /// For notes in inches.
    pub inch: Option<T>,
    /// For notes in metric lengths.
    pub metric: Option<T>,
}

impl<T> BySystem<T> {
    /// The variant of a printing set, which is never converted from the other system.
    #[must_use]
    pub const fn of(&self, set: UnitSet) -> Option<&T> {
        if set.is_inch() {
            self.inch.as_ref()
        } else {
            self.metric.as_ref()
        }
    }
}

/// A value that stands where the user gives none, or that the clause states.
#[derive(Clone, PartialEq, Debug)]
pub struct Stated {
    /// The text, number and unit.
    pub text: BySystem<Told<String>>,
    /// Where it comes from, if not from the sheet's own clause.
    pub source: Option<String>,
    /// How it was come by.
    pub status: Status,
}

/// Something that a sheet needs.
#[derive(Clone, PartialEq, Debug)]
pub struct Need {
    /// Name in the sheet's formulas.
    pub name: Told<String>,
    /// Symbol on the page.
    pub symbol: Symbol,
    /// What it is.
    pub kind: Kind,
    /// Where it comes from: the first of these that is given.
    pub from: Vec<From>,
    /// One line saying what it is.
    pub says: String,
    /// Its place in the ledger of factors.
    pub role: Option<Role>,
    /// The value if nobody gives one, or the clause's own.
    pub stated: Option<Stated>,
    /// Least value allowed, inclusive.
    pub least: Option<Told<String>>,
    /// Greatest value allowed, inclusive.
    pub most: Option<Told<String>>,
    /// Whether only the leading grade of a word counts: `S355` of `S355J2`.
    pub grade: bool,
    /// Where it is declared.
    pub place: Place,
}

/// Rows of a table as told: keys and values with their units.
pub type RawRows = Vec<(Told<String>, Told<String>)>;

/// A table of a code, in the variants that the code prints.
#[derive(Clone, PartialEq, Debug)]
pub struct CodeTable {
    /// Name in formulas.
    pub name: Told<String>,
    /// How the note cites it.
    pub cited: String,
    /// What its key is.
    pub key: Kind,
    /// Dimension of its values.
    pub dim: Dim,
    /// Its rows.
    pub rows: BySystem<RawRows>,
}

/// Key of a table's last row that has no upper bound.
pub const ABOVE: &str = "above";
/// Start of the key of a range.
pub const UP_TO: &str = "up to ";

impl CodeTable {
    /// The table for a printing set; `None` if the code has none for its system.
    ///
    /// # Panics
    ///
    /// Never for a sheet that was read: its rows were parsed then.
    #[must_use]
    pub fn table(&self, set: UnitSet) -> Option<Table> {
        let rows = self.rows.of(set)?;
        let row = |(key, value): &(Told<String>, Told<String>)| Row {
            key: self.row_key(&key.value, set),
            value: Given::parse(&value.value, self.dim, set)
                .expect("rows are parsed when the sheet is read"),
        };
        let key = match self.key {
            Kind::Word => Key::Word,
            Kind::Quantity(dim) => Key::Quantity(dim),
        };
        let rows = rows.iter().map(row).collect();
        Some(Table {
            name: self.name.value.clone(),
            cited: self.cited.clone(),
            key,
            dim: self.dim,
            rows,
        })
    }

    fn row_key(&self, text: &str, set: UnitSet) -> RowKey {
        match self.key {
            Kind::Word => RowKey::Word(text.to_owned()),
            Kind::Quantity(dim) => RowKey::UpTo(text.strip_prefix(UP_TO).map(|bound| {
                Given::parse(bound, dim, set).expect("bounds are parsed when the sheet is read")
            })),
        }
    }
}

/// A step: a named formula.
#[derive(Clone, PartialEq, Debug)]
pub struct Rule {
    /// Name in later formulas.
    pub name: Told<String>,
    /// Symbol on the page.
    pub symbol: Symbol,
    /// The formula as typed.
    pub formula: Told<String>,
    /// The formula.
    pub node: Node,
    /// Dimension of its value.
    pub dim: Dim,
    /// One line saying what it is.
    pub says: String,
}

/// What a demand is held against.
#[derive(Clone, PartialEq, Debug)]
pub enum Capacity {
    /// A need or step.
    Name(String),
    /// A plain number as typed, such as the 1 of an interaction.
    Number(String, f64),
}

/// A strength check.
#[derive(Clone, PartialEq, Debug)]
pub struct Strength {
    /// Name, such as `resultant on the throat`.
    pub name: Told<String>,
    /// The need or step that is the demand D.
    pub demand: String,
    /// The capacity R.
    pub capacity: Capacity,
    /// Whether D is proportional to the loads and R does not depend on their size.
    pub proportional: bool,
    /// One line saying what must hold.
    pub says: String,
    /// Where it is declared.
    pub place: Place,
}

/// Which way a limit bounds its value.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Side {
    /// The value must be at least the bound.
    AtLeast,
    /// The value must be at most the bound.
    AtMost,
}

/// A limit on a size or length.
#[derive(Clone, PartialEq, Debug)]
pub struct Limit {
    /// Name, such as `least leg`.
    pub name: Told<String>,
    /// The need or step that is bounded.
    pub value: String,
    /// Which way.
    pub side: Side,
    /// The need or step that bounds it.
    pub bound: String,
    /// One line saying what must hold.
    pub says: String,
    /// Where it is declared.
    pub place: Place,
}

/// A condition without which a sheet gives no number.
#[derive(Clone, PartialEq, Debug)]
pub struct Validity {
    /// The condition as typed.
    pub holds: Told<String>,
    /// A choice that is 1 where the condition holds and 0 elsewhere.
    pub node: Node,
    /// Text of that choice.
    pub text: String,
    /// Why the sheet gives no number otherwise.
    pub says: String,
}

impl Status {
    /// The mark of what is cited with this status, if it still has to be verified.
    pub(super) fn mark(self, cited: &str) -> Option<String> {
        (self == Self::Recalled)
            .then(|| format!("{cited}: text recalled, not yet compared with the document"))
    }
}

impl Sheet {
    /// The tables for a printing set, by name.
    #[must_use]
    pub fn tables(&self, set: UnitSet) -> BTreeMap<String, Table> {
        self.tables
            .iter()
            .filter_map(|table| Some((table.name.value.clone(), table.table(set)?)))
            .collect()
    }

    /// A need by its name.
    #[must_use]
    pub fn need(&self, name: &str) -> Option<&Need> {
        self.needs.iter().find(|need| need.name.value == name)
    }

    /// A step by its name.
    #[must_use]
    pub fn step(&self, name: &str) -> Option<&Rule> {
        self.steps.iter().find(|step| step.name.value == name)
    }

    /// The dimension of a need or step.
    #[must_use]
    pub fn dim(&self, name: &str) -> Option<Dim> {
        self.need(name)
            .and_then(|need| need.kind.dim())
            .or_else(|| self.step(name).map(|step| step.dim))
    }

    /// The names of needs and steps that vary from point to point.
    #[must_use]
    pub fn varying(&self) -> Vec<&str> {
        let mut names: Vec<&str> = self
            .needs
            .iter()
            .filter(|need| need.is_at_point())
            .map(|need| need.name.value.as_str())
            .collect();
        for step in &self.steps {
            if step.node.names().iter().any(|name| names.contains(name)) {
                names.push(&step.name.value);
            }
        }
        names
    }

    /// Whether the document's text still has to be verified, and the mark that says so.
    #[must_use]
    pub fn mark(&self) -> Option<String> {
        self.source.status.mark(&self.source.cited())
    }

    /// Whether a weld of this kind is taken.
    #[must_use]
    pub fn takes(&self, run: &Run) -> bool {
        self.welds.contains(&WeldKind::of(run))
    }
}

impl Need {
    /// Whether it is a quantity of a point.
    #[must_use]
    pub fn is_at_point(&self) -> bool {
        self.from.iter().any(|from| matches!(from, From::Point(_)))
    }
}
