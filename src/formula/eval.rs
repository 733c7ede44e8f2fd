//! The value of a formula at one place.

use super::node::{Function, Kind, Node, Op};
use super::table::{Key, Table, at_place};
use super::{FormulaError, Problem};
use crate::quantity::{Dim, UnitSet, real};

/// Where a formula finds its names: quantities, words, sets to sum over, tables.
///
/// `member` is the index in the set that is being summed; `None` outside a sum.
pub trait Look {
    /// The printing set that constants are converted to.
    fn units(&self) -> UnitSet;
    /// The dimension of a quantity, if the name is one.
    fn dim(&self, name: &str, set: Option<&str>) -> Option<Dim>;
    /// The value of a quantity in the printing set (rad for angles).
    fn value(&self, name: &str, member: Option<(&str, usize)>) -> Option<f64>;
    /// The word bound to a name.
    fn word(&self, name: &str) -> Option<&str>;
    /// The number of members of a set.
    fn members(&self, set: &str) -> Option<usize>;
    /// A table.
    fn table(&self, name: &str) -> Option<&Table>;
    /// Every name that could be meant, for advice on a wrong one.
    fn known(&self) -> Vec<&str>;
}

/// The value of `node` in the printing set; angles in rad.
///
/// # Errors
///
/// [`FormulaError`] if a name is unknown, no branch holds, a key is outside its table, or the value is
/// not finite.
pub fn evaluate(node: &Node, text: &str, look: &dyn Look) -> Result<f64, FormulaError> {
    Evaluator { text, look }.value(node, None)
}

/// The row of `table` that `key` picks.
pub(super) fn lookup_row(
    table: &Table,
    key: &Node,
    look: &dyn Look,
    value: impl FnOnce() -> Result<f64, FormulaError>,
    text: &str,
) -> Result<usize, FormulaError> {
    let row = match (&key.kind, table.key) {
        (Kind::Name(name), Key::Word) => {
            let word = look
                .word(name)
                .ok_or_else(|| unknown(name, look))
                .map_err(|p| at_place(p, text, key.span.clone()))?;
            table.row_of_word(word)
        }
        _ => table.row_of_quantity(value()?),
    };
    row.map_err(|problem| at_place(problem, text, key.span.clone()))
}

/// The problem of an unknown name, with the nearest known one.
pub(super) fn unknown(name: &str, look: &dyn Look) -> Problem {
    let nearest = look
        .known()
        .into_iter()
        .map(|known| (strsim::jaro_winkler(name, known), known))
        .filter(|(likeness, _)| *likeness > 0.8)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, known)| known.to_owned());
    Problem::UnknownName {
        name: name.to_owned(),
        nearest,
    }
}

/// The value of a binary operation.
pub(super) fn apply(op: Op, left: f64, right: f64) -> f64 {
    match op {
        Op::Add => left + right,
        Op::Sub => left - right,
        Op::Mul => left * right,
        Op::Div => left / right,
        Op::Pow => real::power(left, right),
    }
}

/// The value of a function.
pub(super) fn call(function: Function, argument: f64) -> f64 {
    match function {
        Function::Sqrt => real::sqrt(argument),
        Function::Sin => real::sin(argument),
        Function::Cos => real::cos(argument),
        Function::Tan => real::tan(argument),
        Function::Abs => argument.abs(),
    }
}

/// The operand that governs an extreme: the first of equals.
pub(super) fn governs(greatest: bool, values: &[f64]) -> usize {
    let mut best = 0;
    for (at, value) in values.iter().enumerate() {
        let better = if greatest {
            *value > values[best]
        } else {
            *value < values[best]
        };
        if better {
            best = at;
        }
    }
    best
}

struct Evaluator<'a> {
    text: &'a str,
    look: &'a dyn Look,
}

impl Evaluator<'_> {
    fn value(&self, node: &Node, member: Option<(&str, usize)>) -> Result<f64, FormulaError> {
        let fault = |problem| at_place(problem, self.text, node.span.clone());
        let value = match &node.kind {
            Kind::Number(number) => number.value,
            Kind::Constant { number, unit, .. } => {
                if unit.is_degree() {
                    number.value.to_radians()
                } else {
                    number.value * unit.conversion(self.look.units()).value()
                }
            }
            Kind::Pi => std::f64::consts::PI,
            Kind::Name(name) => self
                .look
                .value(name, member)
                .ok_or_else(|| fault(unknown(name, self.look)))?,
            Kind::Negative(inner) => -self.value(inner, member)?,
            Kind::Binary { op, left, right } => {
                apply(*op, self.value(left, member)?, self.value(right, member)?)
            }
            Kind::Call { function, argument } => call(*function, self.value(argument, member)?),
            Kind::Atan2 { y, x } => real::atan2(self.value(y, member)?, self.value(x, member)?),
            Kind::Extreme { greatest, operands } => {
                let values: Vec<f64> = operands
                    .iter()
                    .map(|operand| self.value(operand, member))
                    .collect::<Result<_, _>>()?;
                values[governs(*greatest, &values)]
            }
            Kind::Sum { set, term } => {
                let count = self
                    .look
                    .members(set)
                    .ok_or_else(|| fault(unknown(set, self.look)))?;
                let mut total = 0.0;
                for index in 0..count {
                    total += self.value(term, Some((set, index)))?;
                }
                total
            }
            Kind::Lookup { table, key } => {
                let table = self
                    .look
                    .table(table)
                    .ok_or_else(|| fault(unknown(table, self.look)))?;
                let row = lookup_row(table, key, self.look, || self.value(key, member), self.text)?;
                table.rows[row].value.value
            }
            Kind::When(branches) => {
                for branch in branches {
                    let holds = match &branch.condition {
                        None => true,
                        Some(condition) => condition.relation.holds(
                            self.value(&condition.left, member)?,
                            self.value(&condition.right, member)?,
                        ),
                    };
                    if holds {
                        return self.value(&branch.value, member);
                    }
                }
                return Err(fault(Problem::NoBranch));
            }
        };
        if value.is_finite() {
            Ok(value)
        } else {
            Err(fault(Problem::NotFinite))
        }
    }
}
