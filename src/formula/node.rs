//! The formula tree: every reading of a formula starts here.
//!
//! A `match` over [`Kind`] has no wildcard arm, so that a new kind fails to compile until value,
//! dimension, typeset forms, algebra and batch program all handle it.

use crate::quantity::Unit;
use std::ops::Range;

/// A node of the tree with its byte range in the formula's text.
#[derive(Clone, PartialEq, Debug)]
pub struct Node {
    /// What it is.
    pub kind: Kind,
    /// Byte range in the text that was parsed.
    pub span: Range<usize>,
}

/// What a node is.
#[derive(Clone, PartialEq, Debug)]
pub enum Kind {
    /// A bare number, as typed: dimensionless.
    Number(Literal),
    /// A constant with its unit, such as `17 m`.
    Constant {
        /// The number as typed.
        number: Literal,
        /// The unit as typed.
        unit_text: String,
        /// The unit.
        unit: Unit,
    },
    /// π.
    Pi,
    /// A named quantity.
    Name(String),
    /// A sign.
    Negative(Box<Node>),
    /// An operation of two operands.
    Binary {
        /// The operation.
        op: Op,
        /// Left operand.
        left: Box<Node>,
        /// Right operand.
        right: Box<Node>,
    },
    /// A function of one argument.
    Call {
        /// The function.
        function: Function,
        /// Its argument.
        argument: Box<Node>,
    },
    /// The angle of the vector (x, y): `atan2(y, x)`.
    Atan2 {
        /// Opposite side.
        y: Box<Node>,
        /// Adjacent side.
        x: Box<Node>,
    },
    /// The least or the greatest of several operands.
    Extreme {
        /// `true` for the greatest.
        greatest: bool,
        /// Two operands or more.
        operands: Vec<Node>,
    },
    /// A sum over the members of a named set.
    Sum {
        /// Name of the set.
        set: String,
        /// The term.
        term: Box<Node>,
    },
    /// A value read from a table of a code.
    Lookup {
        /// Name of the table.
        table: String,
        /// The key: a name bound to a text, or a quantity.
        key: Box<Node>,
    },
    /// Ordered branches, of which the first whose condition holds is taken.
    When(Vec<Branch>),
}

/// A number as typed and its value.
#[derive(Clone, PartialEq, Debug)]
pub struct Literal {
    /// The text as typed.
    pub text: String,
    /// Its value.
    pub value: f64,
}

/// A branch of [`Kind::When`]; no condition means otherwise.
#[derive(Clone, PartialEq, Debug)]
pub struct Branch {
    /// The condition.
    pub condition: Option<Condition>,
    /// The value if it holds.
    pub value: Node,
}

/// A comparison of two quantities of one dimension.
#[derive(Clone, PartialEq, Debug)]
pub struct Condition {
    /// Left side.
    pub left: Box<Node>,
    /// The relation.
    pub relation: Relation,
    /// Right side.
    pub right: Box<Node>,
}

/// Relations of a condition.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Relation {
    /// `<`
    Less,
    /// `<=`
    AtMost,
    /// `>`
    Greater,
    /// `>=`
    AtLeast,
}

impl Relation {
    /// Whether it holds between two values.
    #[must_use]
    pub fn holds(self, left: f64, right: f64) -> bool {
        match self {
            Self::Less => left < right,
            Self::AtMost => left <= right,
            Self::Greater => left > right,
            Self::AtLeast => left >= right,
        }
    }

    /// Its text in formulas.
    #[must_use]
    pub const fn text(self) -> &'static str {
        match self {
            Self::Less => "<",
            Self::AtMost => "<=",
            Self::Greater => ">",
            Self::AtLeast => ">=",
        }
    }
}

/// Operations of two operands.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Op {
    /// Addition.
    Add,
    /// Subtraction.
    Sub,
    /// Multiplication.
    Mul,
    /// Division.
    Div,
    /// Power.
    Pow,
}

impl Op {
    /// Its text in formulas and in the trace.
    #[must_use]
    pub const fn text(self) -> &'static str {
        match self {
            Self::Add => "+",
            Self::Sub => "-",
            Self::Mul => "*",
            Self::Div => "/",
            Self::Pow => "^",
        }
    }
}

/// Functions of one argument.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Function {
    /// Square root.
    Sqrt,
    /// Sine of an angle.
    Sin,
    /// Cosine of an angle.
    Cos,
    /// Tangent of an angle.
    Tan,
    /// Magnitude.
    Abs,
}

impl Function {
    /// Every function, for the parser and for error texts.
    pub const ALL: [Self; 5] = [Self::Sqrt, Self::Sin, Self::Cos, Self::Tan, Self::Abs];

    /// Its text in formulas.
    #[must_use]
    pub const fn text(self) -> &'static str {
        match self {
            Self::Sqrt => "sqrt",
            Self::Sin => "sin",
            Self::Cos => "cos",
            Self::Tan => "tan",
            Self::Abs => "abs",
        }
    }
}

impl Node {
    /// Calls `visit` for the node and everything under it, in reading order.
    pub fn walk<'a>(&'a self, visit: &mut dyn FnMut(&'a Self)) {
        visit(self);
        match &self.kind {
            Kind::Number(_) | Kind::Constant { .. } | Kind::Pi | Kind::Name(_) => {}
            Kind::Negative(inner)
            | Kind::Call {
                argument: inner, ..
            } => inner.walk(visit),
            Kind::Binary { left, right, .. } => {
                left.walk(visit);
                right.walk(visit);
            }
            Kind::Atan2 { y, x } => {
                y.walk(visit);
                x.walk(visit);
            }
            Kind::Extreme { operands, .. } => {
                operands.iter().for_each(|operand| operand.walk(visit))
            }
            Kind::Sum { term, .. } => term.walk(visit),
            Kind::Lookup { key, .. } => key.walk(visit),
            Kind::When(branches) => {
                for branch in branches {
                    if let Some(condition) = &branch.condition {
                        condition.left.walk(visit);
                        condition.right.walk(visit);
                    }
                    branch.value.walk(visit);
                }
            }
        }
    }

    /// The names that stand in it, each once, in reading order.
    #[must_use]
    pub fn names(&self) -> Vec<&str> {
        let mut names = Vec::new();
        self.walk(&mut |node| {
            if let Kind::Name(name) = &node.kind
                && !names.contains(&name.as_str())
            {
                names.push(name.as_str());
            }
        });
        names
    }
}
