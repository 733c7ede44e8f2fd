//! The note under construction: the worked calculation and the pieces of each section.
//!
//! Pieces name values of the ledger; numbers and margins are set only when the whole is laid out, so
//! that a number raised by the digit rule is the same everywhere.

use super::doc::{Align, Block, Column, Inline, Item, Text};
use super::text::plain;
use crate::formula::{Draft, Env, FormulaError, Ledger, Origin, Symbol, Value};
use crate::joint::Joint;
use crate::load::Action;
use crate::quantity::{Dim, Given};
use crate::weld::{LineProperties, Run};
use std::collections::{BTreeMap, BTreeSet};

/// A section under construction.
pub(super) struct Part {
    /// Title.
    pub(super) title: String,
    /// Stable name.
    pub(super) id: String,
    /// Pieces in order.
    pub(super) pieces: Vec<Piece>,
}

/// A piece of a section.
pub(super) enum Piece {
    /// A finished block.
    Block(Block),
    /// A step of the calculation.
    Step(Value),
    /// A table whose cells name values.
    Table(Sheet),
}

/// A table under construction.
pub(super) struct Sheet {
    /// Stable id.
    pub(super) id: String,
    /// Caption, in words.
    pub(super) caption: Text,
    /// The formulas of its columns.
    pub(super) formulas: Vec<Text>,
    /// Columns.
    pub(super) columns: Vec<Column>,
    /// Rows.
    pub(super) rows: Vec<Line>,
    /// The row of sums.
    pub(super) foot: Option<Line>,
}

/// A row of a table under construction.
pub(super) struct Line {
    /// Stable id.
    pub(super) id: String,
    /// Cells.
    pub(super) cells: Vec<Cell>,
    /// Whether it is printed bold.
    pub(super) strong: bool,
}

/// A cell of a table under construction.
pub(super) enum Cell {
    /// Words.
    Text(Text),
    /// A value made elsewhere: the number links there.
    Linked(Value),
    /// A value made in this row: links to it lead here.
    Own(Value),
    /// A value made elsewhere, rounded for the eye: margins down, utilisations up.
    Rounded {
        /// The value.
        value: Value,
        /// Digits after the point.
        decimals: i32,
        /// Whether it rounds up.
        up: bool,
    },
}

/// The note under construction.
pub(super) struct Builder<'a> {
    pub(super) joint: &'a Joint,
    pub(super) runs: &'a [Run],
    pub(super) properties: &'a LineProperties,
    pub(super) actions: &'a [Action],
    pub(super) ledger: Ledger,
    /// Names that every later formula may use.
    pub(super) env: Env,
    pub(super) parts: Vec<Part>,
    /// Stable short names of the runs.
    pub(super) slugs: Vec<String>,
    /// Whether all runs lie in one plane of the joint frame.
    pub(super) planar: bool,
    /// Numbered points: position and the label on the drawing.
    pub(super) points: Vec<super::points::Point>,
    /// Formulas that named values of runs, by run: `L`, `t`, `x_m` and so on.
    pub(super) run_values: Vec<BTreeMap<String, Value>>,
    /// Inputs already in the ledger, by their place.
    pub(super) given: BTreeMap<String, Value>,
    /// Names of the cases that no strength check takes.
    pub(super) unchecked: Vec<String>,
    /// Values that have their place on a page already.
    pub(super) placed: BTreeSet<Value>,
    /// How many drawings have their place already.
    pub(super) figures: usize,
}

impl Builder<'_> {
    /// Starts a section.
    pub(super) fn part(&mut self, id: &str, title: &str) {
        self.parts.push(Part {
            title: title.to_owned(),
            id: id.to_owned(),
            pieces: Vec::new(),
        });
    }

    fn last(&mut self) -> &mut Part {
        self.parts.last_mut().expect("a section has been started")
    }

    /// Adds a paragraph.
    pub(super) fn para(&mut self, text: Text) {
        self.last().pieces.push(Piece::Block(Block::Para { text }));
    }

    /// Adds a small heading.
    pub(super) fn heading(&mut self, text: &str) {
        self.last().pieces.push(Piece::Block(Block::Heading {
            text: text.to_owned(),
        }));
    }

    /// Adds a finished block.
    pub(super) fn block(&mut self, block: Block) {
        self.last().pieces.push(Piece::Block(block));
    }

    /// Adds a list.
    pub(super) fn items(&mut self, items: Vec<Item>) {
        self.block(Block::Items { items });
    }

    /// Adds a table.
    pub(super) fn table(&mut self, sheet: Sheet) {
        self.last().pieces.push(Piece::Table(sheet));
    }

    /// Shows a value as a step, unless it stands on a page already.
    pub(super) fn show(&mut self, value: Value) {
        if !self.placed.insert(value) {
            return;
        }
        self.last().pieces.push(Piece::Step(value));
    }

    /// A cell for a value: its own place if it has none yet, else a link to it.
    pub(super) fn cell(&mut self, value: Value) -> Cell {
        if self.placed.insert(value) {
            Cell::Own(value)
        } else {
            Cell::Linked(value)
        }
    }

    /// Makes a step without showing it, and binds it to `name`.
    pub(super) fn make(
        &mut self,
        name: &str,
        draft: Draft<'_>,
        env: &Env,
    ) -> Result<Value, FormulaError> {
        let value = self.ledger.step(draft, env)?;
        self.env.bind(name, value);
        Ok(value)
    }

    /// Makes a step of the whole joint, shows it, and binds it to its own plain name.
    pub(super) fn step(
        &mut self,
        symbol: Symbol,
        says: &str,
        formula: &str,
        method: &str,
    ) -> Result<Value, FormulaError> {
        let name = symbol.plain();
        let env = self.env.clone();
        let origin = Origin::Method(method.to_owned());
        let draft = Draft {
            id: name.replace('_', "-"),
            symbol,
            says: says.to_owned(),
            formula,
            origin,
            dim: None,
        };
        let value = self.make(&name, draft, &env)?;
        self.show(value);
        Ok(value)
    }

    /// An input of the joint file, put into the ledger once for each place and symbol.
    pub(super) fn input(
        &mut self,
        id: String,
        symbol: Symbol,
        says: &str,
        given: &Given,
        origin: Origin,
    ) -> Value {
        if let Some(known) = self.given.get(&id) {
            return *known;
        }
        let value = self
            .ledger
            .given(id.clone(), symbol, says.to_owned(), given, origin);
        self.given.insert(id, value);
        value
    }

    /// A zero that the geometry states, such as the product of inertia of a full circle.
    pub(super) fn zero(&mut self, id: String, symbol: Symbol, says: &str, dim: Dim) -> Value {
        let origin = Origin::Method("symmetry".to_owned());
        self.input(id, symbol, says, &Given::stated("0", 0.0, dim), origin)
    }
}

/// A column of numbers whose head is a symbol.
pub(super) fn number_column(head: Inline, unit: &str) -> Column {
    let unit = if unit.is_empty() {
        Vec::new()
    } else {
        plain(unit)
    };
    Column {
        head: vec![head],
        unit,
        align: Align::Point,
    }
}

/// A column of words.
pub(super) fn word_column(head: &str) -> Column {
    Column {
        head: plain(head),
        unit: Vec::new(),
        align: Align::Left,
    }
}
