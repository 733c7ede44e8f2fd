//! A formula as typeset mathematics: in symbols, or with the printed numbers in their place.

use super::digits::Printed;
use super::eval::{evaluate, governs, lookup_row};
use super::ledger::{EntryLook, Env, Ledger, Value};
use super::math::Math;
use super::node::{Branch, Condition, Function, Kind, Node, Op};
use crate::quantity::{Dim, Unit};

/// Sums of at most this many terms are written out on the page.
pub const TERMS_ON_PAGE: usize = 4;

/// What a reading of a formula yields: the mathematics and remarks on what was chosen in it.
#[derive(Clone, PartialEq, Debug)]
pub(super) struct Reading {
    /// The mathematics; `None` where a long sum is not written out.
    pub(super) math: Option<Math>,
    /// Conditions that held, operands that governed.
    pub(super) remarks: Vec<Math>,
}

/// Reads formulas of one ledger line.
pub(super) struct Presenter<'a> {
    pub(super) look: EntryLook<'a>,
    pub(super) text: &'a str,
    /// Whether numbers stand in the place of symbols.
    pub(super) numbers: bool,
    /// Whether every branch of a choice stands there, not the one that holds.
    general: bool,
    remarks: Vec<Math>,
    elided: bool,
}

impl<'a> Presenter<'a> {
    fn new(ledger: &'a Ledger, env: &'a Env, text: &'a str, numbers: bool) -> Self {
        let look = EntryLook {
            ledger,
            env,
            printed: false,
            shift: None,
        };
        Self {
            look,
            text,
            numbers,
            general: false,
            remarks: Vec::new(),
            elided: false,
        }
    }

    /// The reading of a formula, in symbols or in numbers.
    pub(super) fn read(
        ledger: &'a Ledger,
        env: &'a Env,
        node: &Node,
        text: &'a str,
        numbers: bool,
    ) -> Reading {
        let mut presenter = Self::new(ledger, env, text, numbers);
        let math = presenter.math(node, None, false);
        Reading {
            math: (!presenter.elided).then_some(math),
            remarks: presenter.remarks,
        }
    }

    /// A formula in symbols for a table's head: names of a set's columns carry its index letter.
    pub(super) fn head(
        ledger: &'a Ledger,
        env: &'a Env,
        node: &Node,
        text: &'a str,
        set: &str,
    ) -> Math {
        Self::new(ledger, env, text, false).math(node, Some((set, 0)), false)
    }

    /// A formula in symbols as a clause states it, every branch of a choice with its condition.
    pub(super) fn rule(ledger: &'a Ledger, env: &'a Env, node: &Node) -> Math {
        let mut presenter = Self::new(ledger, env, "", false);
        presenter.general = true;
        presenter.math(node, None, false)
    }

    /// A condition in symbols, as a clause states it.
    pub(super) fn condition(ledger: &'a Ledger, env: &'a Env, condition: &Condition) -> Math {
        Self::new(ledger, env, "", false).relation(condition, None)
    }

    fn relation(&mut self, condition: &Condition, member: Option<(&str, usize)>) -> Math {
        let left = self.math(&condition.left, member, true);
        let right = self.math(&condition.right, member, true);
        Math::Relation(condition.relation.text(), Box::new(left), Box::new(right))
    }

    fn math(&mut self, node: &Node, member: Option<(&str, usize)>, inline: bool) -> Math {
        match &node.kind {
            Kind::Number(number) => Math::plain(Printed::typed(&number.text, number.value)),
            Kind::Constant {
                number,
                unit_text,
                unit,
            } => self.constant(&number.text, number.value, unit_text, unit),
            Kind::Pi => Math::Pi,
            Kind::Name(name) => self.name(name, member),
            Kind::Negative(inner) => {
                let inner = self.math(inner, member, inline);
                let inner = bracket_if(
                    matches!(inner, Math::Terms(_)) || inner.starts_negative(),
                    inner,
                );
                Math::Terms(vec![(true, inner)])
            }
            Kind::Binary { op, left, right } => self.binary(*op, left, right, member, inline),
            Kind::Call {
                function: Function::Sqrt,
                argument,
            } => Math::Root(Box::new(self.math(argument, member, inline))),
            Kind::Call {
                function: Function::Abs,
                argument,
            } => Math::Magnitude(Box::new(self.math(argument, member, inline))),
            Kind::Call { function, argument } => {
                Math::Call(function.text(), vec![self.math(argument, member, true)])
            }
            Kind::Atan2 { y, x } => Math::Call(
                "atan2",
                vec![self.math(y, member, true), self.math(x, member, true)],
            ),
            Kind::Extreme { greatest, operands } => self.extreme(*greatest, operands, member),
            Kind::Sum { set, term } => self.sum(set, term, inline),
            Kind::Lookup { table, key } => self.lookup(table, key, member),
            Kind::When(branches) if self.general => {
                let mut row = |branch: &Branch| {
                    let value = self.math(&branch.value, member, true);
                    let condition = branch.condition.as_ref();
                    (
                        value,
                        condition.map(|condition| self.relation(condition, member)),
                    )
                };
                Math::Cases(branches.iter().map(&mut row).collect())
            }
            Kind::When(branches) => {
                for branch in branches {
                    let Some(condition) = &branch.condition else {
                        return self.math(&branch.value, member, inline);
                    };
                    let holds = match (
                        self.value(&condition.left, member),
                        self.value(&condition.right, member),
                    ) {
                        (Some(left), Some(right)) => condition.relation.holds(left, right),
                        _ => false,
                    };
                    let relation = self.relation(condition, member);
                    if holds {
                        self.remarks
                            .push(Math::Row(vec![Math::Word("since".to_owned()), relation]));
                        return self.math(&branch.value, member, inline);
                    }
                }
                Math::Word("no branch holds".to_owned())
            }
        }
    }

    fn value(&self, node: &Node, member: Option<(&str, usize)>) -> Option<f64> {
        // Inside a sum each member is read in its own place; conditions there are not remarked on.
        if member.is_some() {
            None
        } else {
            evaluate(node, self.text, &self.look).ok()
        }
    }

    fn number_of(&self, value: Value) -> Math {
        let entry = self.look.ledger.get(value);
        Math::Number {
            printed: self.look.ledger.printed(value),
            degrees: entry.dim == Dim::ANGLE,
            link: Some(entry.anchor.clone()),
        }
    }

    fn name(&self, name: &str, member: Option<(&str, usize)>) -> Math {
        if let Some(word) = super::Look::word(&self.look, name) {
            return Math::Word(word.to_owned());
        }
        if self.numbers {
            return match self.look.resolve(name, member) {
                Some(value) => self.number_of(value),
                None => Math::Word(name.to_owned()),
            };
        }
        let column = member
            .and_then(|(set, _)| self.look.env.sets.get(set))
            .and_then(|set| Some(Math::Symbol(set.symbols.get(name)?.with(&set.index))));
        column.unwrap_or_else(|| match self.look.resolve(name, None) {
            Some(value) => Math::Symbol(self.look.ledger.get(value).symbol.clone()),
            None => Math::Word(name.to_owned()),
        })
    }

    fn constant(&self, text: &str, value: f64, unit_text: &str, unit: &Unit) -> Math {
        let number = Math::plain(Printed::typed(text, value));
        if unit.is_degree() {
            return Math::Number {
                printed: Printed::typed(text, value),
                degrees: true,
                link: None,
            };
        }
        if !self.numbers {
            return Math::Row(vec![number, Math::Word(unit_text.to_owned())]);
        }
        let mut math = number;
        for factor in unit.conversion(self.look.ledger.units()).factors {
            let base = Math::plain(Printed::of(factor.number, 17, 17, 0.0));
            let power = factor.power.abs();
            let raised = if power == 1 {
                base
            } else {
                let power = Printed::of(f64::from(power), 3, 3, 0.0);
                Math::Power(Box::new(base), Box::new(Math::plain(power)))
            };
            math = if factor.power > 0 {
                Math::Product(vec![math, raised])
            } else {
                Math::Slash(Box::new(math), Box::new(raised))
            };
        }
        math
    }

    fn binary(
        &mut self,
        op: Op,
        left: &Node,
        right: &Node,
        member: Option<(&str, usize)>,
        inline: bool,
    ) -> Math {
        match op {
            Op::Add | Op::Sub => {
                let mut terms = match self.math(left, member, inline) {
                    Math::Terms(terms) => terms,
                    other => vec![(false, other)],
                };
                let is_sum = op == Op::Add && matches!(right.kind, Kind::Sum { .. });
                match self.math(right, member, inline) {
                    Math::Terms(more) if is_sum => {
                        terms.extend(more.into_iter().map(|(minus, term)| (minus, as_term(term))));
                    }
                    right => terms.push((op == Op::Sub, as_term(right))),
                }
                Math::Terms(terms)
            }
            Op::Mul => {
                let mut factors = match self.math(left, member, inline) {
                    Math::Product(factors) => factors,
                    other => vec![as_factor(other, true)],
                };
                match self.math(right, member, inline) {
                    other @ Math::Product(_) => factors.push(Math::Bracket(Box::new(other))),
                    other => factors.push(as_factor(other, false)),
                }
                Math::Product(factors)
            }
            Op::Div => {
                // Inside a fraction, a function or an exponent a fraction stands on the line.
                let above = self.math(left, member, true);
                let below = self.math(right, member, true);
                if !inline {
                    return Math::Fraction(Box::new(above), Box::new(below));
                }
                let above = bracket_if(matches!(above, Math::Terms(_)), above);
                let low = matches!(
                    below,
                    Math::Terms(_) | Math::Product(_) | Math::Slash(..) | Math::Row(_)
                ) || below.starts_negative();
                Math::Slash(Box::new(above), Box::new(bracket_if(low, below)))
            }
            Op::Pow => {
                let base = self.math(left, member, inline);
                let bare = match &base {
                    Math::Symbol(_) | Math::Bracket(_) | Math::Pi => true,
                    Math::Number {
                        printed, degrees, ..
                    } => !printed.negative && printed.exponent.is_none() && !degrees,
                    _ => false,
                };
                let exponent = self.math(right, member, true);
                Math::Power(Box::new(bracket_if(!bare, base)), Box::new(exponent))
            }
        }
    }

    fn extreme(
        &mut self,
        greatest: bool,
        operands: &[Node],
        member: Option<(&str, usize)>,
    ) -> Math {
        let values: Option<Vec<f64>> = operands
            .iter()
            .map(|operand| self.value(operand, member))
            .collect();
        if let (Some(values), true) = (values, self.numbers) {
            const ORDER: [&str; 6] = ["first", "second", "third", "fourth", "fifth", "sixth"];
            let which = governs(greatest, &values);
            let tie = values
                .iter()
                .filter(|value| (*value - values[which]).abs() <= 1e-12 * values[which].abs())
                .count()
                > 1;
            let order = ORDER.get(which).copied().unwrap_or("last");
            let words = if tie {
                format!("equal; the {order} is taken")
            } else {
                format!("the {order} governs")
            };
            self.remarks.push(Math::Word(words));
        }
        let arguments = operands
            .iter()
            .map(|operand| self.math(operand, member, true))
            .collect();
        Math::Call(if greatest { "max" } else { "min" }, arguments)
    }

    fn sum(&mut self, set: &str, term: &Node, inline: bool) -> Math {
        let Some(members) = self.look.env.sets.get(set) else {
            return Math::Word(set.to_owned());
        };
        if !self.numbers {
            let index = members.index.clone();
            let term = self.math(term, Some((set, 0)), inline);
            let term = bracket_if(matches!(term, Math::Terms(_)), term);
            return Math::Sum(index, Box::new(term));
        }
        let count = members.members.len();
        if count > TERMS_ON_PAGE {
            self.elided = true;
        }
        let terms = (0..count)
            .map(|index| {
                let term = self.math(term, Some((set, index)), inline);
                let bare = index == 0 && !matches!(term, Math::Terms(_));
                (false, if bare { term } else { as_term(term) })
            })
            .collect();
        Math::Terms(terms)
    }

    fn lookup(&mut self, name: &str, key: &Node, member: Option<(&str, usize)>) -> Math {
        let Some(table) = super::Look::table(&self.look, name) else {
            return Math::Word(name.to_owned());
        };
        let (cited, table) = (table.cited.clone(), table.clone());
        if !self.numbers {
            let key = self.math(key, member, true);
            return Math::Row(vec![Math::Word(cited), Math::Bracket(Box::new(key))]);
        }
        let value = || evaluate(key, self.text, &self.look);
        let Ok(row) = lookup_row(&table, key, &self.look, value, self.text) else {
            return Math::Word(cited);
        };
        self.remarks
            .push(Math::Word(format!("row: {}", table.row_words(row))));
        let given = &table.rows[row].value;
        Math::plain(Printed::of(given.value, 6, 9, 0.0))
    }
}

/// Wraps in brackets on a condition.
fn bracket_if(condition: bool, math: Math) -> Math {
    if condition {
        Math::Bracket(Box::new(math))
    } else {
        math
    }
}

/// A term after a plus or minus: a sum is bracketed, and so is a negative number at its start.
fn as_term(math: Math) -> Math {
    match math {
        Math::Product(mut factors) if factors.first().is_some_and(Math::starts_negative) => {
            let first = factors.remove(0);
            factors.insert(0, Math::Bracket(Box::new(first)));
            Math::Product(factors)
        }
        other => bracket_if(
            matches!(other, Math::Terms(_)) || other.starts_negative(),
            other,
        ),
    }
}

/// A factor of a product, bracketed where it must be.
fn as_factor(math: Math, first: bool) -> Math {
    let sum = match &math {
        Math::Terms(terms) => terms.len() > 1 || !first,
        Math::Relation(..) | Math::Sum(..) => !first,
        _ => false,
    };
    let negative = !first && math.starts_negative();
    bracket_if(sum || negative, math)
}
