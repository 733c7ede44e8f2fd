//! Tables of a code: a value for each named key, or for each range of a quantity with stated bounds.

use super::{FormulaError, Problem};
use crate::quantity::{Dim, Given};

/// A table of a code.
#[derive(Clone, PartialEq, Debug)]
pub struct Table {
    /// Name in formulas.
    pub name: String,
    /// How the note cites it, such as `table 4.1`.
    pub cited: String,
    /// What its key is.
    pub key: Key,
    /// Dimension of its values.
    pub dim: Dim,
    /// Rows, ranges ascending.
    pub rows: Vec<Row>,
}

/// What the key of a table is.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Key {
    /// A word, such as a steel grade.
    Word,
    /// A quantity of this dimension.
    Quantity(Dim),
}

/// A row of a table.
#[derive(Clone, PartialEq, Debug)]
pub struct Row {
    /// Its key.
    pub key: RowKey,
    /// Its value, as the code prints it.
    pub value: Given,
}

/// The key of a row.
#[derive(Clone, PartialEq, Debug)]
pub enum RowKey {
    /// A word.
    Word(String),
    /// Above the row before (or above 0) up to and including the bound; no bound in a last row.
    UpTo(Option<Given>),
}

impl Table {
    /// The row for a word.
    ///
    /// # Errors
    ///
    /// [`Problem::OutsideTable`] if no row has it.
    pub fn row_of_word(&self, word: &str) -> Result<usize, Problem> {
        self.rows
            .iter()
            .position(|row| matches!(&row.key, RowKey::Word(known) if known == word))
            .ok_or_else(|| self.outside(format!("`{word}`")))
    }

    /// The row whose range holds a quantity; bounds are inclusive at the top.
    ///
    /// # Errors
    ///
    /// [`Problem::OutsideTable`] if the quantity is not above 0 or beyond the last bound.
    pub fn row_of_quantity(&self, quantity: f64) -> Result<usize, Problem> {
        // A bound typed in the table and a quantity converted from another unit may differ by rounding.
        let within = |bound: f64| quantity <= bound + 1e-12 * bound.abs();
        let row = self.rows.iter().position(|row| match &row.key {
            RowKey::UpTo(Some(bound)) => within(bound.value),
            RowKey::UpTo(None) => true,
            RowKey::Word(_) => false,
        });
        match row {
            Some(row) if quantity > 0.0 => Ok(row),
            _ => Err(self.outside(format!("{quantity}"))),
        }
    }

    fn outside(&self, key: String) -> Problem {
        let covers: Vec<String> = (0..self.rows.len())
            .map(|row| self.row_words(row))
            .collect();
        Problem::OutsideTable {
            key,
            table: self.name.clone(),
            covers: covers.join(", "),
        }
    }

    /// The key of a row in words, such as `S355` or `over 6 up to 13`.
    #[must_use]
    pub fn row_words(&self, row: usize) -> String {
        let bound = |at: usize| match &self.rows[at].key {
            RowKey::UpTo(Some(bound)) => Some(bound.text()),
            RowKey::UpTo(None) | RowKey::Word(_) => None,
        };
        let below = row.checked_sub(1).and_then(bound);
        match (&self.rows[row].key, below) {
            (RowKey::Word(word), _) => word.clone(),
            (RowKey::UpTo(Some(top)), Some(low)) => format!("over {low} up to {}", top.text()),
            (RowKey::UpTo(Some(top)), None) => format!("up to {}", top.text()),
            (RowKey::UpTo(None), Some(low)) => format!("over {low}"),
            (RowKey::UpTo(None), None) => "any".to_owned(),
        }
    }
}

/// The error of a lookup at its place in a formula.
pub(super) fn at_place(problem: Problem, text: &str, span: std::ops::Range<usize>) -> FormulaError {
    FormulaError {
        text: text.to_owned(),
        span,
        problem,
    }
}
