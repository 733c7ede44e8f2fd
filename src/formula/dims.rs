//! The dimension of a formula; every branch and operand is checked.

use super::eval::{Look, unknown};
use super::node::{Function, Kind, Node, Op};
use super::table::Key;
use super::{FormulaError, Problem};
use crate::quantity::Dim;

/// The dimension of `node`.
///
/// # Errors
///
/// [`FormulaError`] with the place and both dimensions where operands do not fit.
pub fn dimension(node: &Node, text: &str, look: &dyn Look) -> Result<Dim, FormulaError> {
    Checker { text, look }.dim(node, None)
}

struct Checker<'a> {
    text: &'a str,
    look: &'a dyn Look,
}

impl Checker<'_> {
    fn fault(&self, node: &Node, problem: Problem) -> FormulaError {
        FormulaError {
            text: self.text.to_owned(),
            span: node.span.clone(),
            problem,
        }
    }

    fn need(&self, node: &Node, set: Option<&str>, wanted: Dim) -> Result<Dim, FormulaError> {
        let found = self.dim(node, set)?;
        if found == wanted {
            return Ok(found);
        }
        Err(self.fault(
            node,
            Problem::Kind {
                found: found.word(),
                wanted: wanted.word(),
            },
        ))
    }

    fn same(
        &self,
        node: &Node,
        left: Dim,
        right: Dim,
        verb: &'static str,
    ) -> Result<Dim, FormulaError> {
        if left == right {
            return Ok(left);
        }
        Err(self.fault(
            node,
            Problem::Mismatch {
                left: left.word(),
                right: right.word(),
                verb,
            },
        ))
    }

    fn dim(&self, node: &Node, set: Option<&str>) -> Result<Dim, FormulaError> {
        match &node.kind {
            Kind::Number(_) | Kind::Pi => Ok(Dim::NONE),
            Kind::Constant { unit, .. } => Ok(unit.dim),
            Kind::Name(name) => self
                .look
                .dim(name, set)
                .ok_or_else(|| self.fault(node, unknown(name, self.look))),
            Kind::Negative(inner) => self.dim(inner, set),
            Kind::Binary { op, left, right } => self.binary(node, *op, left, right, set),
            Kind::Call { function, argument } => match function {
                Function::Sqrt => {
                    let inner = self.dim(argument, set)?;
                    inner
                        .power(0.5)
                        .ok_or_else(|| self.fault(node, Problem::Exponent))
                }
                Function::Sin | Function::Cos | Function::Tan => {
                    self.need(argument, set, Dim::ANGLE).map(|_| Dim::NONE)
                }
                Function::Abs => self.dim(argument, set),
            },
            Kind::Atan2 { y, x } => {
                let (y, x) = (self.dim(y, set)?, self.dim(x, set)?);
                self.same(node, y, x, "compared").map(|_| Dim::ANGLE)
            }
            Kind::Extreme { operands, .. } => {
                let first = self.dim(&operands[0], set)?;
                for operand in &operands[1..] {
                    let other = self.dim(operand, set)?;
                    self.same(operand, first, other, "compared")?;
                }
                Ok(first)
            }
            Kind::Sum { set, term } => {
                self.look
                    .members(set)
                    .ok_or_else(|| self.fault(node, unknown(set, self.look)))?;
                self.dim(term, Some(set))
            }
            Kind::Lookup { table, key } => {
                let table = self
                    .look
                    .table(table)
                    .ok_or_else(|| self.fault(node, unknown(table, self.look)))?;
                match (table.key, &key.kind) {
                    (Key::Word, Kind::Name(name)) if self.look.word(name).is_some() => {}
                    (Key::Word, _) => {
                        let found = "another value".to_owned();
                        return Err(self.fault(
                            key,
                            Problem::Kind {
                                found,
                                wanted: "a word".to_owned(),
                            },
                        ));
                    }
                    (Key::Quantity(dim), _) => {
                        self.need(key, set, dim)?;
                    }
                }
                Ok(table.dim)
            }
            Kind::When(branches) => {
                let first = self.dim(&branches[0].value, set)?;
                for branch in branches {
                    if let Some(condition) = &branch.condition {
                        let left = self.dim(&condition.left, set)?;
                        let right = self.dim(&condition.right, set)?;
                        self.same(&condition.right, left, right, "compared")?;
                    }
                    let other = self.dim(&branch.value, set)?;
                    self.same(&branch.value, first, other, "branches of one choice")?;
                }
                Ok(first)
            }
        }
    }

    fn binary(
        &self,
        node: &Node,
        op: Op,
        left: &Node,
        right: &Node,
        set: Option<&str>,
    ) -> Result<Dim, FormulaError> {
        let base = self.dim(left, set)?;
        match op {
            Op::Add => self
                .dim(right, set)
                .and_then(|other| self.same(node, base, other, "added")),
            Op::Sub => self
                .dim(right, set)
                .and_then(|other| self.same(node, base, other, "subtracted")),
            Op::Mul => Ok(base.times(self.dim(right, set)?)),
            Op::Div => Ok(base.over(self.dim(right, set)?)),
            Op::Pow => {
                self.need(right, set, Dim::NONE)?;
                if base == Dim::NONE {
                    return Ok(base);
                }
                constant(right)
                    .and_then(|exponent| base.power(exponent))
                    .ok_or_else(|| self.fault(right, Problem::Exponent))
            }
        }
    }
}

/// The value of an exponent that is a plain number, such as `2`, `-1`, `1/3`.
fn constant(node: &Node) -> Option<f64> {
    match &node.kind {
        Kind::Number(number) => Some(number.value),
        Kind::Negative(inner) => constant(inner).map(|value| -value),
        Kind::Binary {
            op: Op::Div,
            left,
            right,
        } => Some(constant(left)? / constant(right)?),
        Kind::Binary { .. }
        | Kind::Constant { .. }
        | Kind::Pi
        | Kind::Name(_)
        | Kind::Call { .. }
        | Kind::Atan2 { .. }
        | Kind::Extreme { .. }
        | Kind::Sum { .. }
        | Kind::Lookup { .. }
        | Kind::When(_) => None,
    }
}
