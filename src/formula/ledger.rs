//! The worked calculation: every value of a note, with its formula, its place and its printed digits.
//!
//! **Invariant**: no number reaches a page except through an [`Entry`].

use super::digits::Printed;
use super::eval::{Look, evaluate};
use super::node::Node;
use super::symbol::Symbol;
use super::table::Table;
use super::{FormulaError, Problem, dimension, parse};
use crate::quantity::{Dim, Given, UnitSet, real};
use crate::source::Place;
use std::collections::{BTreeMap, BTreeSet};

/// Significant digits that every value starts with.
pub(super) const START_DIGITS: usize = 4;

/// Digits within which a converted input is printed exactly, such as 7.9375 mm for 5/16 in.
const CONVERTED_DIGITS: usize = 8;

/// Forces, moments, stresses and lengths under this share of their natural size print 0: far above
/// rounding noise of double precision, far below what a joint can feel.
const LOAD_FLOOR: f64 = 1e-9;
/// The same for second moments, which small runs of a large group have as well; areas lie between.
const SECOND_FLOOR: f64 = 1e-13;
/// The same for products of second moments, such as their determinant in a slender group.
const PRODUCT_FLOOR: f64 = 1e-22;
/// The same for areas.
const AREA_FLOOR: f64 = 1e-11;

/// A value of the ledger.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub struct Value(pub(super) usize);

/// Where a line comes from, for the checker's margin.
#[derive(Clone, PartialEq, Debug)]
pub enum Origin {
    /// A document and clause.
    Clause(String),
    /// Geometry, statics, or a numbered part of the published method.
    Method(String),
    /// A place in a user's file.
    Input(Place),
}

/// What a line rests on that somebody has still to verify.
pub type Mark = String;

/// What a name stands for in a formula.
#[derive(Clone, PartialEq, Debug)]
pub enum Bound {
    /// A value of the ledger.
    Value(Value),
    /// A word, the key of a table.
    Word(String),
}

/// A set to sum over.
#[derive(Clone, PartialEq, Debug, Default)]
pub struct SumSet {
    /// Index letter on the page.
    pub index: String,
    /// Symbol of each column, without index.
    pub symbols: BTreeMap<String, Symbol>,
    /// Members in print order: the value of each column.
    pub members: Vec<BTreeMap<String, Value>>,
}

/// What the names of formulas stand for.
#[derive(Clone, PartialEq, Debug, Default)]
pub struct Env {
    /// Quantities and words by name.
    pub names: BTreeMap<String, Bound>,
    /// Sets by name.
    pub sets: BTreeMap<String, SumSet>,
    /// Tables by name.
    pub tables: BTreeMap<String, Table>,
}

impl Env {
    /// Binds a name to a value.
    pub fn bind(&mut self, name: &str, value: Value) {
        self.names.insert(name.to_owned(), Bound::Value(value));
    }

    /// The part of the environment that one formula uses.
    fn used_by(&self, node: &Node) -> Self {
        let mut used = Self::default();
        node.walk(&mut |node| match &node.kind {
            super::node::Kind::Name(name) => {
                if let Some(bound) = self.names.get(name) {
                    used.names.insert(name.clone(), bound.clone());
                }
            }
            super::node::Kind::Sum { set, .. } => {
                if let Some(known) = self.sets.get(set) {
                    used.sets.insert(set.clone(), known.clone());
                }
            }
            super::node::Kind::Lookup { table, .. } => {
                if let Some(known) = self.tables.get(table) {
                    used.tables.insert(table.clone(), known.clone());
                }
            }
            _ => {}
        });
        used
    }
}

/// What kind of line an entry is.
#[derive(Clone, PartialEq, Debug)]
pub enum Kind {
    /// An input as typed, in the printing set.
    Given(Given),
    /// An input in another unit: its conversion is a line of its own.
    Converted {
        /// The input as typed.
        given: Given,
        /// The conversion.
        node: Node,
    },
    /// A formula: its printed numbers replay to its printed value.
    Step {
        /// The tree.
        node: Node,
        /// The text.
        text: String,
        /// The names that it uses.
        env: Env,
    },
    /// A value found by a method, followed by steps that verify it.
    Found {
        /// The method.
        method: String,
    },
    /// A bound that holds: the value itself is noise and is never printed.
    Bound {
        /// The value must be at most this.
        limit: f64,
    },
}

/// How the digits of a value may still move while they settle.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub(super) enum Freedom {
    /// Up and down.
    Free,
    /// They were lowered, since the operands would have needed too many; up only if nothing else helps.
    Lowered,
    /// They were lowered and had to rise again: up only.
    Rising,
}

/// A value with all that the page says of it.
#[derive(Clone, PartialEq, Debug)]
pub struct Entry {
    /// Stable id.
    pub id: String,
    /// Symbol.
    pub symbol: Symbol,
    /// One line saying what it is.
    pub says: String,
    /// What kind of line it is.
    pub kind: Kind,
    /// The value in the printing set; rad for angles.
    pub value: f64,
    /// Its dimension.
    pub dim: Dim,
    /// Where it comes from.
    pub origin: Origin,
    /// What of it is still to be verified.
    pub mark: Option<Mark>,
    /// Whether the sign of the result is always printed (margins).
    pub signed: bool,
    /// Which way it is rounded where it is printed.
    pub rounding: Rounding,
    /// Of a found value, what it was found from; of a line that verifies, what it is to return.
    pub rests_on: Vec<Value>,
    /// What the checker's margin calls it, such as `step 12` or `table 2`; empty until the note is laid out.
    pub no: String,
    /// The id that links lead to: its own, or that of the table row it stands in.
    pub anchor: String,
    /// Significant digits it is printed with.
    pub(super) digits: usize,
    /// At or under this magnitude it prints 0.
    pub(super) floor: f64,
    /// How its digits may still move.
    pub(super) freedom: Freedom,
}

/// What is needed to add a line.
#[derive(Clone, Debug)]
pub struct Draft<'a> {
    /// Stable id: letters, digits, `.` and `-`.
    pub id: String,
    /// Symbol.
    pub symbol: Symbol,
    /// One line saying what it is.
    pub says: String,
    /// Plain algebra.
    pub formula: &'a str,
    /// Where it comes from.
    pub origin: Origin,
    /// The declared dimension; the formula's own if `None`.
    pub dim: Option<Dim>,
}

/// Which way a printed value is rounded: margins down, utilisations up, so that neither flatters.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Rounding {
    /// To the nearest, with the digits that its lines ask for.
    Nearest,
    /// A margin of safety: toward −∞, to [`MARGIN_DECIMALS`].
    Down,
    /// A utilisation: toward +∞, to [`UTILISATION_DECIMALS`].
    Up,
}

/// Decimals of a margin of safety.
pub const MARGIN_DECIMALS: i32 = 2;
/// Decimals of a utilisation.
pub const UTILISATION_DECIMALS: i32 = 3;

impl Rounding {
    /// The value rounded this way.
    fn of(self, value: f64, nearest: Printed) -> Printed {
        match self {
            Self::Nearest => nearest,
            Self::Down => Printed::rounded(value, MARGIN_DECIMALS, false),
            Self::Up => Printed::rounded(value, UTILISATION_DECIMALS, true),
        }
    }
}

/// The worked calculation of one note.
#[derive(Clone, Debug)]
pub struct Ledger {
    units: UnitSet,
    /// Natural sizes of force and length, for the floors.
    scales: (f64, f64),
    entries: Vec<Entry>,
    /// What is printed of each entry, kept while digits settle; empty before.
    pub(super) shown: Vec<(Printed, f64)>,
}

impl Ledger {
    /// An empty ledger; `force` and `length` are the natural sizes of the joint, for the floors under
    /// which values print 0.
    #[must_use]
    pub fn new(units: UnitSet, force: f64, length: f64) -> Self {
        Self {
            units,
            scales: (force, length),
            entries: Vec::new(),
            shown: Vec::new(),
        }
    }

    /// The printing set.
    #[must_use]
    pub const fn units(&self) -> UnitSet {
        self.units
    }

    /// An entry.
    #[must_use]
    pub fn get(&self, value: Value) -> &Entry {
        &self.entries[value.0]
    }

    /// An entry, to number it or mark it.
    pub fn get_mut(&mut self, value: Value) -> &mut Entry {
        &mut self.entries[value.0]
    }

    /// Every value, in the order of its making.
    pub fn values(&self) -> impl Iterator<Item = Value> + use<> {
        (0..self.entries.len()).map(Value)
    }

    /// The value with an id.
    #[must_use]
    pub fn find(&self, id: &str) -> Option<Value> {
        self.entries
            .iter()
            .position(|entry| entry.id == id)
            .map(Value)
    }

    /// The absolute floor of a dimension, under which a value prints 0.
    #[must_use]
    pub fn floor(&self, dim: Dim) -> f64 {
        let part = |scale: f64, twelfths: i16| real::power(scale, f64::from(twelfths) / 12.0);
        let share = match (dim.force, dim.length / 12) {
            (0, 2) => AREA_FLOOR,
            (0, 3 | 4) => SECOND_FLOOR,
            (0, 5..) => PRODUCT_FLOOR,
            _ => LOAD_FLOOR,
        };
        share * part(self.scales.0, dim.force) * part(self.scales.1, dim.length)
    }

    /// Raises the magnitude under which a value prints 0, for a small difference of large numbers.
    pub fn raise_floor(&mut self, value: Value, floor: f64) {
        let entry = &mut self.entries[value.0];
        entry.floor = entry.floor.max(floor);
    }

    fn push(&mut self, draft: Draft<'_>, kind: Kind, value: f64, dim: Dim) -> Value {
        self.entries.push(Entry {
            anchor: draft.id.clone(),
            id: draft.id,
            symbol: draft.symbol,
            says: draft.says,
            kind,
            value,
            dim,
            origin: draft.origin,
            mark: None,
            signed: false,
            rounding: Rounding::Nearest,
            rests_on: Vec::new(),
            no: String::new(),
            digits: START_DIGITS,
            floor: self.floor(dim),
            freedom: Freedom::Free,
        });
        Value(self.entries.len() - 1)
    }

    /// Adds an input; another unit than the printing set's makes a conversion line.
    pub fn given(
        &mut self,
        id: String,
        symbol: Symbol,
        says: String,
        given: &Given,
        origin: Origin,
    ) -> Value {
        let kind = if given.is_converted() {
            let node = parse(&conversion_text(given)).expect("a conversion is plain arithmetic");
            Kind::Converted {
                given: given.clone(),
                node,
            }
        } else {
            Kind::Given(given.clone())
        };
        let draft = Draft {
            id,
            symbol,
            says,
            formula: "",
            origin,
            dim: None,
        };
        self.push(draft, kind, given.value, given.dim)
    }

    /// Adds a step: parses its formula, checks its dimension, evaluates it.
    ///
    /// # Errors
    ///
    /// [`FormulaError`] with the formula's text and place.
    pub fn step(&mut self, draft: Draft<'_>, env: &Env) -> Result<Value, FormulaError> {
        let node = parse(draft.formula)?;
        let look = EntryLook {
            ledger: self,
            env,
            printed: false,
            shift: None,
        };
        let dim = dimension(&node, draft.formula, &look)?;
        if let Some(wanted) = draft.dim
            && wanted != dim
        {
            let problem = Problem::Declared {
                found: dim.word(),
                wanted: wanted.word(),
            };
            return Err(FormulaError {
                text: draft.formula.to_owned(),
                span: 0..draft.formula.len(),
                problem,
            });
        }
        let value = evaluate(&node, draft.formula, &look)?;
        let env = env.used_by(&node);
        let text = draft.formula.to_owned();
        Ok(self.push(draft, Kind::Step { node, text, env }, value, dim))
    }

    /// Adds a value found by a method; steps that verify it should follow.
    pub fn found(&mut self, draft: Draft<'_>, value: f64, dim: Dim) -> Value {
        let method = draft.formula.to_owned();
        self.push(draft, Kind::Found { method }, value, dim)
    }

    /// Adds a bound: `value` is at most `limit`; only the bound is printed.
    pub fn bound(&mut self, draft: Draft<'_>, value: f64, limit: f64) -> Value {
        self.push(draft, Kind::Bound { limit }, value, Dim::NONE)
    }

    /// The value that the formula of a line has where some of its names take other values, such as
    /// the coordinates of another point.
    ///
    /// # Errors
    ///
    /// [`FormulaError`] if the formula has no value there, or the line has no formula.
    pub fn value_at(&self, value: Value, others: &[(&str, f64)]) -> Result<f64, FormulaError> {
        let Kind::Step { node, text, env } = &self.get(value).kind else {
            let id = self.get(value).id.clone();
            return Err(FormulaError {
                text: id,
                span: 0..0,
                problem: Problem::NotFinite,
            });
        };
        let look = EntryLook {
            ledger: self,
            env,
            printed: false,
            shift: None,
        };
        evaluate(node, text, &Elsewhere { look, others })
    }

    /// The number as it is printed everywhere; degrees for an angle.
    #[must_use]
    pub fn printed(&self, value: Value) -> Printed {
        match self.shown.get(value.0) {
            Some((printed, _)) => printed.clone(),
            None => self.print(value),
        }
    }

    /// Keeps what is printed of every value, and again of one whose digits have changed.
    pub(super) fn keep_printed(&mut self, changed: Option<Value>) {
        let kept = |ledger: &Self, value: Value| {
            let printed = ledger.print(value);
            let plain = ledger.plain_value(value, &printed);
            (printed, plain)
        };
        match changed {
            Some(value) => self.shown[value.0] = kept(self, value),
            None => self.shown = self.values().map(|value| kept(self, value)).collect(),
        }
    }

    fn print(&self, value: Value) -> Printed {
        let entry = self.get(value);
        let shown = if entry.dim == Dim::ANGLE {
            entry.value.to_degrees()
        } else {
            entry.value
        };
        match &entry.kind {
            Kind::Given(given) => {
                let typed_degrees = given.unit.as_deref().is_none_or(|unit| unit != "rad");
                if typed_degrees {
                    Printed::typed(&given.number, given.typed)
                } else {
                    Printed::of(shown, entry.digits, CONVERTED_DIGITS, 0.0)
                }
            }
            Kind::Converted { .. } => Printed::of(shown, entry.digits, CONVERTED_DIGITS, 0.0),
            Kind::Step { .. } | Kind::Found { .. } => {
                let nearest = Printed::of(shown, entry.digits, entry.digits, entry.floor);
                entry.rounding.of(shown, nearest)
            }
            Kind::Bound { limit } => Printed::of(*limit, 1, 1, 0.0),
        }
    }

    /// The number that the printed text stands for, in the printing set; rad for an angle.
    #[must_use]
    pub fn printed_value(&self, value: Value) -> f64 {
        match self.shown.get(value.0) {
            Some((_, plain)) => *plain,
            None => self.plain_value(value, &self.print(value)),
        }
    }

    fn plain_value(&self, value: Value, printed: &Printed) -> f64 {
        let number = printed.value();
        if self.get(value).dim == Dim::ANGLE {
            number.to_radians()
        } else {
            number
        }
    }

    /// The values that a line's numbers come from, in the order of its formula, each once; of a found
    /// value, those that it was found from.
    #[must_use]
    pub fn uses(&self, value: Value) -> Vec<Value> {
        let Kind::Step { node, env, .. } = &self.get(value).kind else {
            return self.get(value).rests_on.clone();
        };
        let mut uses = Vec::new();
        let mut seen = BTreeSet::new();
        let mut add = |used: Value| {
            if seen.insert(used) {
                uses.push(used);
            }
        };
        let mut in_sum: Vec<&SumSet> = Vec::new();
        node.walk(&mut |node| match &node.kind {
            super::node::Kind::Sum { set, .. } => in_sum.extend(env.sets.get(set)),
            super::node::Kind::Name(name) => {
                if let Some(Bound::Value(used)) = env.names.get(name) {
                    add(*used);
                }
                for set in &in_sum {
                    set.members
                        .iter()
                        .filter_map(|member| member.get(name))
                        .for_each(|used| add(*used));
                }
            }
            _ => {}
        });
        uses
    }

    /// Everything still to be verified that a value rests on, directly or through its operands.
    #[must_use]
    pub fn marks_behind(&self, value: Value) -> BTreeSet<Mark> {
        let mut marks = BTreeSet::new();
        let mut seen = BTreeSet::new();
        let mut open = vec![value];
        while let Some(next) = open.pop() {
            if seen.insert(next) {
                marks.extend(self.get(next).mark.clone());
                open.extend(self.uses(next));
            }
        }
        marks
    }
}

/// The conversion of an input as plain arithmetic, such as `(-4.2)*10^3`.
fn conversion_text(given: &Given) -> String {
    let number = match given.number.trim().rsplit_once(' ') {
        Some((whole, fraction)) if fraction.contains('/') && !whole.ends_with('/') => {
            let sign = if whole.starts_with('-') { "-" } else { "" };
            format!("{sign}({} + {fraction})", whole.trim_start_matches('-'))
        }
        _ => Printed::typed(&given.number, given.typed).algebra(),
    };
    let number = if given.number.contains('/') && !number.contains('(') {
        given.number.clone()
    } else {
        number
    };
    let mut text = number;
    for factor in &given.conversion.factors {
        let tens = (factor.number - 10.0).abs() < 1e-12;
        let sign = if factor.power < 0 && !tens { "/" } else { "*" };
        let power = if tens {
            factor.power
        } else {
            factor.power.abs()
        };
        text.push_str(sign);
        match power {
            1 => text.push_str(&format!("{}", factor.number)),
            power if power < 0 => text.push_str(&format!("{}^(-{})", factor.number, -power)),
            power => text.push_str(&format!("{}^{power}", factor.number)),
        }
    }
    text
}

/// Names looked up in the ledger, by full values or by printed ones.
pub(super) struct EntryLook<'a> {
    pub(super) ledger: &'a Ledger,
    pub(super) env: &'a Env,
    /// Whether names give their printed values.
    pub(super) printed: bool,
    /// A value moved by an amount, to see what its rounding does.
    pub(super) shift: Option<(Value, f64)>,
}

impl EntryLook<'_> {
    /// The value of the ledger that a name stands for.
    pub(super) fn resolve(&self, name: &str, member: Option<(&str, usize)>) -> Option<Value> {
        let in_set =
            member.and_then(|(set, index)| self.env.sets.get(set)?.members.get(index)?.get(name));
        in_set.copied().or_else(|| match self.env.names.get(name)? {
            Bound::Value(value) => Some(*value),
            Bound::Word(_) => None,
        })
    }
}

impl Look for EntryLook<'_> {
    fn units(&self) -> UnitSet {
        self.ledger.units
    }

    fn dim(&self, name: &str, set: Option<&str>) -> Option<Dim> {
        self.resolve(name, set.map(|set| (set, 0)))
            .map(|value| self.ledger.get(value).dim)
    }

    fn value(&self, name: &str, member: Option<(&str, usize)>) -> Option<f64> {
        let value = self.resolve(name, member)?;
        let plain = if self.printed {
            self.ledger.printed_value(value)
        } else {
            self.ledger.get(value).value
        };
        let moved = self
            .shift
            .filter(|(shifted, _)| *shifted == value)
            .map_or(0.0, |(_, by)| by);
        Some(plain + moved)
    }

    fn word(&self, name: &str) -> Option<&str> {
        match self.env.names.get(name)? {
            Bound::Word(word) => Some(word),
            Bound::Value(_) => None,
        }
    }

    fn members(&self, set: &str) -> Option<usize> {
        self.env.sets.get(set).map(|set| set.members.len())
    }

    fn table(&self, name: &str) -> Option<&Table> {
        self.env.tables.get(name)
    }

    fn known(&self) -> Vec<&str> {
        let names = self.env.names.keys().map(String::as_str);
        let columns = self
            .env
            .sets
            .values()
            .flat_map(|set| set.symbols.keys().map(String::as_str));
        names
            .chain(columns)
            .chain(self.env.sets.keys().map(String::as_str))
            .collect()
    }
}

/// A line's names with other values for some of them.
struct Elsewhere<'a> {
    look: EntryLook<'a>,
    others: &'a [(&'a str, f64)],
}

impl Look for Elsewhere<'_> {
    fn units(&self) -> UnitSet {
        self.look.units()
    }

    fn dim(&self, name: &str, set: Option<&str>) -> Option<Dim> {
        self.look.dim(name, set)
    }

    fn value(&self, name: &str, member: Option<(&str, usize)>) -> Option<f64> {
        let other = self.others.iter().find(|(known, _)| *known == name);
        other
            .map(|(_, value)| *value)
            .or_else(|| self.look.value(name, member))
    }

    fn word(&self, name: &str) -> Option<&str> {
        self.look.word(name)
    }

    fn members(&self, set: &str) -> Option<usize> {
        self.look.members(set)
    }

    fn table(&self, name: &str) -> Option<&Table> {
        self.look.table(name)
    }

    fn known(&self) -> Vec<&str> {
        self.look.known()
    }
}
