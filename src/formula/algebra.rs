//! Plain algebra for the trace: fully bracketed, in symbols or in printed numbers.
//!
//! Anyone can evaluate the numbers with `+ - * / ^`, brackets, sqrt, sin, cos, tan, atan2, min, max, abs
//! and pi, angles in rad, and must get the printed value.

use super::digits::Printed;
use super::eval::{evaluate, lookup_row};
use super::ledger::{EntryLook, Env, Kind as LineKind, Ledger, Value};
use super::node::{Kind, Node};
use crate::quantity::Dim;

impl Ledger {
    /// The formula of a line in symbols; `None` for a line without one.
    #[must_use]
    pub fn formula_algebra(&self, value: Value) -> Option<String> {
        self.algebra(value, false)
    }

    /// The formula of a line in printed numbers; it evaluates to the printed value (degrees for angles).
    #[must_use]
    pub fn numbers_algebra(&self, value: Value) -> Option<String> {
        let text = self.algebra(value, true)?;
        Some(if self.get(value).dim == Dim::ANGLE {
            format!("({text}*180/pi)")
        } else {
            text
        })
    }

    fn algebra(&self, value: Value, numbers: bool) -> Option<String> {
        let empty = Env::default();
        let (node, text, env) = match &self.get(value).kind {
            LineKind::Step { node, text, env } => (node, text.as_str(), env),
            LineKind::Converted { node, .. } => (node, "", &empty),
            LineKind::Given(_) | LineKind::Found { .. } | LineKind::Bound { .. } => return None,
        };
        let look = EntryLook {
            ledger: self,
            env,
            printed: false,
            shift: None,
        };
        Some(
            Writer {
                look,
                text,
                numbers,
            }
            .write(node, None),
        )
    }
}

struct Writer<'a> {
    look: EntryLook<'a>,
    text: &'a str,
    numbers: bool,
}

impl Writer<'_> {
    fn write(&self, node: &Node, member: Option<(&str, usize)>) -> String {
        match &node.kind {
            Kind::Number(number) => Printed::typed(&number.text, number.value).algebra(),
            Kind::Constant {
                number,
                unit_text,
                unit,
            } => {
                if !self.numbers {
                    return format!("({} {unit_text})", number.text);
                }
                if unit.is_degree() {
                    return format!("({}*pi/180)", number.text);
                }
                let mut text = number.text.clone();
                for factor in unit.conversion(self.look.ledger.units()).factors {
                    let sign = if factor.power < 0 { '/' } else { '*' };
                    text = format!("({text}{sign}({}^{}))", factor.number, factor.power.abs());
                }
                text
            }
            Kind::Pi => "pi".to_owned(),
            Kind::Name(name) => self.name(name, member),
            Kind::Negative(inner) => format!("(-{})", self.write(inner, member)),
            Kind::Binary { op, left, right } => {
                format!(
                    "({}{}{})",
                    self.write(left, member),
                    op.text(),
                    self.write(right, member)
                )
            }
            Kind::Call { function, argument } => {
                format!("{}({})", function.text(), self.write(argument, member))
            }
            Kind::Atan2 { y, x } => {
                format!("atan2({},{})", self.write(y, member), self.write(x, member))
            }
            Kind::Extreme { greatest, operands } => {
                let name = if *greatest { "max" } else { "min" };
                let mut operands = operands.iter().map(|operand| self.write(operand, member));
                let first = operands.next().unwrap_or_default();
                operands.fold(first, |so_far, next| format!("{name}({so_far},{next})"))
            }
            Kind::Sum { set, term } => self.sum(set, term),
            Kind::Lookup { table, key } => {
                if !self.numbers {
                    return format!("lookup({table},{})", self.write(key, member));
                }
                let Some(table) = super::Look::table(&self.look, table) else {
                    return String::new();
                };
                let value = || evaluate(key, self.text, &self.look);
                match lookup_row(table, key, &self.look, value, self.text) {
                    Ok(row) => Printed::of(table.rows[row].value.value, 6, 9, 0.0).algebra(),
                    Err(_) => String::new(),
                }
            }
            Kind::When(branches) => self.when(branches, member),
        }
    }

    fn when(&self, branches: &[super::Branch], member: Option<(&str, usize)>) -> String {
        if !self.numbers {
            let parts: Vec<String> = branches
                .iter()
                .map(|branch| {
                    let value = self.write(&branch.value, member);
                    match &branch.condition {
                        None => format!("otherwise,{value}"),
                        Some(condition) => {
                            let left = self.write(&condition.left, member);
                            let right = self.write(&condition.right, member);
                            format!("{left}{}{right},{value}", condition.relation.text())
                        }
                    }
                })
                .collect();
            return format!("when({})", parts.join(","));
        }
        let holds = |branch: &&super::Branch| match &branch.condition {
            None => true,
            Some(condition) => {
                let side = |node: &Node| evaluate(node, self.text, &self.look).unwrap_or(f64::NAN);
                condition
                    .relation
                    .holds(side(&condition.left), side(&condition.right))
            }
        };
        branches
            .iter()
            .find(holds)
            .map(|branch| self.write(&branch.value, member))
            .unwrap_or_default()
    }

    fn name(&self, name: &str, member: Option<(&str, usize)>) -> String {
        let Some(value) = self.look.resolve(name, member) else {
            return super::Look::word(&self.look, name)
                .unwrap_or(name)
                .to_owned();
        };
        let entry = self.look.ledger.get(value);
        if !self.numbers {
            return entry.symbol.plain();
        }
        let printed = self.look.ledger.printed(value);
        let text = printed.algebra();
        match (
            entry.dim == Dim::ANGLE,
            printed.negative || printed.exponent.is_some(),
        ) {
            (true, _) => format!("({text}*pi/180)"),
            (false, true) => format!("({text})"),
            (false, false) => text,
        }
    }

    fn sum(&self, set: &str, term: &Node) -> String {
        let count = super::Look::members(&self.look, set).unwrap_or(0);
        let terms: Vec<String> = (0..count)
            .map(|index| self.write(term, Some((set, index))))
            .collect();
        if terms.is_empty() {
            "0".to_owned()
        } else {
            format!("({})", terms.join("+"))
        }
    }
}
