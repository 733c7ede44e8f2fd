//! Plain algebra to a tree: `+ - * / ^`, brackets, names, numbers with or without a unit, functions.
//!
//! Powers bind tighter than a sign, `-2^2` is −4; powers group from the right. `sum(runs, t*L)` sums
//! over a set, `lookup(beta_w, grade)` reads a table, `when(L < 4*w, L/4, otherwise, w)` chooses.

use super::node::{Branch, Condition, Function, Kind, Literal, Node, Op, Relation};
use super::{FormulaError, Problem};
use crate::quantity::Unit;
use std::ops::Range;

/// How deep brackets may nest; far beyond any formula that fits a page.
const DEEPEST: usize = 48;

/// How many operands a formula may have; beyond, it wants named steps.
const LONGEST: usize = 200;

/// Reads a formula.
///
/// # Errors
///
/// [`FormulaError`] with the byte range of the fault in `text`.
pub fn parse(text: &str) -> Result<Node, FormulaError> {
    let mut parser = Parser {
        text,
        at: 0,
        depth: 0,
        length: 0,
        in_sum: false,
    };
    let node = parser.sum_of_terms()?;
    parser.skip_space();
    if parser.at < text.len() {
        return Err(parser.fault(
            parser.at..parser.at + parser.char_len(),
            Problem::Unexpected(parser.next_text()),
        ));
    }
    Ok(node)
}

struct Parser<'a> {
    text: &'a str,
    at: usize,
    depth: usize,
    length: usize,
    in_sum: bool,
}

impl<'a> Parser<'a> {
    fn fault(&self, span: Range<usize>, problem: Problem) -> FormulaError {
        FormulaError {
            text: self.text.to_owned(),
            span,
            problem,
        }
    }

    fn rest(&self) -> &'a str {
        &self.text[self.at..]
    }

    fn char_len(&self) -> usize {
        self.rest().chars().next().map_or(0, char::len_utf8)
    }

    fn next_text(&self) -> Option<String> {
        self.rest().chars().next().map(String::from)
    }

    fn skip_space(&mut self) {
        self.at += self.rest().len() - self.rest().trim_start().len();
    }

    fn eat(&mut self, mark: &str) -> bool {
        self.skip_space();
        let found = self.rest().starts_with(mark);
        if found {
            self.at += mark.len();
        }
        found
    }

    fn need(&mut self, mark: &'static str) -> Result<(), FormulaError> {
        if self.eat(mark) {
            return Ok(());
        }
        let problem = Problem::Wanted {
            wanted: format!("`{mark}`"),
            found: self.next_text(),
        };
        Err(self.fault(self.at..self.at + self.char_len(), problem))
    }

    fn binary(op: Op, left: Node, right: Node) -> Node {
        let span = left.span.start..right.span.end;
        Node {
            kind: Kind::Binary {
                op,
                left: Box::new(left),
                right: Box::new(right),
            },
            span,
        }
    }

    fn sum_of_terms(&mut self) -> Result<Node, FormulaError> {
        self.depth += 1;
        if self.depth > DEEPEST {
            return Err(self.fault(self.at..self.at, Problem::TooDeep));
        }
        let mut node = self.product()?;
        loop {
            let op = if self.eat("+") {
                Op::Add
            } else if self.eat("-") {
                Op::Sub
            } else {
                break;
            };
            node = Self::binary(op, node, self.product()?);
        }
        self.depth -= 1;
        Ok(node)
    }

    fn product(&mut self) -> Result<Node, FormulaError> {
        let mut node = self.signed()?;
        loop {
            let op = if self.eat("*") {
                Op::Mul
            } else if self.eat("/") {
                Op::Div
            } else {
                break;
            };
            node = Self::binary(op, node, self.signed()?);
        }
        Ok(node)
    }

    fn signed(&mut self) -> Result<Node, FormulaError> {
        self.skip_space();
        let start = self.at;
        if self.eat("-") {
            self.depth += 1;
            if self.depth > DEEPEST {
                return Err(self.fault(start..self.at, Problem::TooDeep));
            }
            let inner = self.signed()?;
            self.depth -= 1;
            let span = start..inner.span.end;
            return Ok(Node {
                kind: Kind::Negative(Box::new(inner)),
                span,
            });
        }
        self.length += 1;
        if self.length > LONGEST {
            return Err(self.fault(start..self.at, Problem::TooLong));
        }
        let base = self.primary()?;
        if self.eat("^") {
            self.depth += 1;
            if self.depth > DEEPEST {
                return Err(self.fault(start..self.at, Problem::TooDeep));
            }
            let exponent = self.signed()?;
            self.depth -= 1;
            return Ok(Self::binary(Op::Pow, base, exponent));
        }
        Ok(base)
    }

    fn primary(&mut self) -> Result<Node, FormulaError> {
        self.skip_space();
        let start = self.at;
        if self.eat("(") {
            let mut node = self.sum_of_terms()?;
            self.need(")")?;
            node.span = start..self.at;
            return Ok(node);
        }
        match self.rest().chars().next() {
            Some(c) if c.is_ascii_digit() || c == '.' => self.number(),
            Some(c) if c.is_ascii_alphabetic() => self.named(),
            _ => {
                let found = self.next_text();
                Err(self.fault(start..start + self.char_len(), Problem::Unexpected(found)))
            }
        }
    }

    fn number(&mut self) -> Result<Node, FormulaError> {
        let start = self.at;
        let digits = self
            .rest()
            .find(|c: char| !c.is_ascii_digit() && c != '.')
            .unwrap_or(self.rest().len());
        let text = &self.rest()[..digits];
        self.at += digits;
        let value: f64 = text
            .parse()
            .ok()
            .filter(|value: &f64| value.is_finite())
            .ok_or_else(|| self.fault(start..self.at, Problem::Number(text.to_owned())))?;
        let number = Literal {
            text: text.to_owned(),
            value,
        };
        let after_number = self.at;
        self.skip_space();
        let word = self.word();
        if word.is_empty() && !self.rest().starts_with(['%', '°']) {
            self.at = after_number;
            return Ok(Node {
                kind: Kind::Number(number),
                span: start..self.at,
            });
        }
        let unit_start = self.at;
        self.at += if word.is_empty() {
            self.char_len()
        } else {
            word.len()
        };
        let unit_text = self.text[unit_start..self.at].to_owned();
        let unit = Unit::parse(&unit_text)
            .map_err(|fault| self.fault(unit_start..self.at, Problem::Unit(fault.to_string())))?;
        Ok(Node {
            kind: Kind::Constant {
                number,
                unit_text,
                unit,
            },
            span: start..self.at,
        })
    }

    /// The name that starts here: letters, digits and underscores.
    fn word(&self) -> &'a str {
        let rest = self.rest();
        if !rest.starts_with(|c: char| c.is_ascii_alphabetic()) {
            return "";
        }
        let end = rest
            .find(|c: char| !c.is_ascii_alphanumeric() && c != '_')
            .unwrap_or(rest.len());
        &rest[..end]
    }

    fn named(&mut self) -> Result<Node, FormulaError> {
        let start = self.at;
        let word = self.word();
        self.at += word.len();
        if !self.eat("(") {
            self.at = start + word.len();
            let kind = if word == "pi" {
                Kind::Pi
            } else {
                Kind::Name(word.to_owned())
            };
            return Ok(Node {
                kind,
                span: start..self.at,
            });
        }
        let kind = self.call(word, start)?;
        self.need(")")?;
        Ok(Node {
            kind,
            span: start..self.at,
        })
    }

    /// The inside of a call, up to its closing bracket.
    fn call(&mut self, word: &str, start: usize) -> Result<Kind, FormulaError> {
        if let Some(function) = Function::ALL
            .into_iter()
            .find(|function| function.text() == word)
        {
            return Ok(Kind::Call {
                function,
                argument: Box::new(self.sum_of_terms()?),
            });
        }
        match word {
            "atan2" => {
                let y = Box::new(self.sum_of_terms()?);
                self.need(",")?;
                Ok(Kind::Atan2 {
                    y,
                    x: Box::new(self.sum_of_terms()?),
                })
            }
            "min" | "max" => {
                let mut operands = vec![self.sum_of_terms()?];
                while self.eat(",") {
                    operands.push(self.sum_of_terms()?);
                }
                if operands.len() < 2 {
                    return Err(self.fault(start..self.at, Problem::OneOperand(word.to_owned())));
                }
                Ok(Kind::Extreme {
                    greatest: word == "max",
                    operands,
                })
            }
            "sum" => {
                if self.in_sum {
                    return Err(self.fault(start..self.at, Problem::NestedSum));
                }
                self.skip_space();
                let set = self.word().to_owned();
                self.at += set.len();
                self.need(",")?;
                self.in_sum = true;
                let term = Box::new(self.sum_of_terms()?);
                self.in_sum = false;
                Ok(Kind::Sum { set, term })
            }
            "lookup" => {
                self.skip_space();
                let table = self.word().to_owned();
                self.at += table.len();
                self.need(",")?;
                Ok(Kind::Lookup {
                    table,
                    key: Box::new(self.sum_of_terms()?),
                })
            }
            "when" => self.branches(),
            _ => Err(self.fault(
                start..start + word.len(),
                Problem::UnknownFunction(word.to_owned()),
            )),
        }
    }

    fn branches(&mut self) -> Result<Kind, FormulaError> {
        let mut branches = Vec::new();
        loop {
            self.skip_space();
            let condition = if self.word() == "otherwise" {
                self.at += "otherwise".len();
                None
            } else {
                Some(self.condition()?)
            };
            self.need(",")?;
            let last = condition.is_none();
            branches.push(Branch {
                condition,
                value: self.sum_of_terms()?,
            });
            if last || !self.eat(",") {
                return Ok(Kind::When(branches));
            }
        }
    }

    fn condition(&mut self) -> Result<Condition, FormulaError> {
        let left = Box::new(self.sum_of_terms()?);
        let relation = if self.eat("<=") {
            Relation::AtMost
        } else if self.eat(">=") {
            Relation::AtLeast
        } else if self.eat("<") {
            Relation::Less
        } else if self.eat(">") {
            Relation::Greater
        } else {
            let problem = Problem::Wanted {
                wanted: "one of `<`, `<=`, `>`, `>=`".to_owned(),
                found: self.next_text(),
            };
            return Err(self.fault(self.at..self.at + self.char_len(), problem));
        };
        Ok(Condition {
            left,
            relation,
            right: Box::new(self.sum_of_terms()?),
        })
    }
}
