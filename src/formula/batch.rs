//! A formula over thousands of points: the tree as a flat program on blocks of numbers.
//!
//! Shares no evaluation loop with [`super::evaluate`]; a test compares them.

use super::eval::{Look, apply, call, evaluate};
use super::node::{Function, Kind, Node, Op, Relation};
use super::table::{Key, Table};
use super::{FormulaError, Problem};
use crate::quantity::real;

/// How many points one pass of a program works on: a few registers of this size stay in the cache.
const BLOCK: usize = 256;

/// A register of a program: one number for each point of a block.
pub type Block = [f64; BLOCK];

/// A compiled formula.
#[derive(Clone, Debug)]
pub struct Program {
    ops: Vec<Step>,
    depth: usize,
}

/// One operation on a stack of blocks.
#[derive(Clone, Debug)]
enum Step {
    /// Push a constant.
    Push(f64),
    /// Push a varying input.
    Load(usize),
    /// Change the sign of the top.
    Negate,
    /// Combine the two on top.
    Apply(Op),
    /// Apply a function to the top.
    Call(Function),
    /// Angle of (x, y), y under x.
    Atan2,
    /// Least or greatest of the top `count`.
    Extreme { greatest: bool, count: usize },
    /// Look the top up in a table of ranges.
    Lookup(Box<Table>),
    /// From the top: alternatives as condition left, right, value; last may be bare.
    Choose {
        relations: Vec<Relation>,
        otherwise: bool,
    },
}

impl Program {
    /// Compiles `node`; names in `varying` are inputs in that order, all others are fixed by `look`.
    ///
    /// # Errors
    ///
    /// [`FormulaError`] as [`evaluate`], for the parts that do not vary.
    pub fn compile(
        node: &Node,
        text: &str,
        varying: &[&str],
        look: &dyn Look,
    ) -> Result<Self, FormulaError> {
        let mut program = Self {
            ops: Vec::new(),
            depth: 0,
        };
        Compiler {
            text,
            varying,
            look,
            program: &mut program,
            height: 0,
        }
        .push(node)?;
        Ok(program)
    }

    /// Runs the program for `count` points; `inputs[k][point]` is the varying input `k`.
    ///
    /// A point whose value does not exist (a key outside its table, no branch) gives NaN.
    ///
    /// # Panics
    ///
    /// If an input is shorter than `count`.
    #[must_use]
    pub fn run(&self, inputs: &[&[f64]], count: usize) -> Vec<f64> {
        let mut out = vec![0.0; count];
        let mut stack = vec![[0.0; BLOCK]; self.depth.max(1)];
        let mut start = 0;
        while start < count {
            let size = BLOCK.min(count - start);
            self.run_block(inputs, start, size, &mut stack);
            out[start..start + size].copy_from_slice(&stack[0][..size]);
            start += size;
        }
        out
    }

    fn run_block(&self, inputs: &[&[f64]], start: usize, size: usize, stack: &mut [Block]) {
        let mut top = 0;
        for op in &self.ops {
            match op {
                Step::Push(number) => {
                    stack[top][..size].fill(*number);
                    top += 1;
                }
                Step::Load(input) => {
                    stack[top][..size].copy_from_slice(&inputs[*input][start..start + size]);
                    top += 1;
                }
                Step::Negate => stack[top - 1][..size].iter_mut().for_each(|x| *x = -*x),
                Step::Call(function) => {
                    stack[top - 1][..size]
                        .iter_mut()
                        .for_each(|x| *x = call(*function, *x));
                }
                Step::Apply(op) => {
                    combine(stack, top, size, |a, b| apply(*op, a, b));
                    top -= 1;
                }
                Step::Atan2 => {
                    combine(stack, top, size, real::atan2);
                    top -= 1;
                }
                Step::Extreme { greatest, count } => {
                    // The first of equals stays, as for the single evaluator.
                    let better = |a: f64, b: f64| if *greatest { b > a } else { b < a };
                    for _ in 1..*count {
                        combine(stack, top, size, |a, b| if better(a, b) { b } else { a });
                        top -= 1;
                    }
                }
                Step::Lookup(table) => stack[top - 1][..size].iter_mut().for_each(|x| {
                    *x = table
                        .row_of_quantity(*x)
                        .map_or(f64::NAN, |row| table.rows[row].value.value);
                }),
                Step::Choose {
                    relations,
                    otherwise,
                } => {
                    let used = relations.len() * 3 + usize::from(*otherwise);
                    let base = top - used;
                    #[expect(
                        clippy::needless_range_loop,
                        reason = "a point is read across several blocks"
                    )]
                    for point in 0..size {
                        let at = |row: usize| stack[base + row][point];
                        let chosen = relations
                            .iter()
                            .enumerate()
                            .find(|(k, relation)| relation.holds(at(3 * k), at(3 * k + 1)))
                            .map(|(k, _)| at(3 * k + 2));
                        let fallback = if *otherwise { at(used - 1) } else { f64::NAN };
                        stack[base][point] = chosen.unwrap_or(fallback);
                    }
                    top = base + 1;
                }
            }
        }
    }
}

/// Replaces the two blocks on top by their combination.
fn combine(stack: &mut [Block], top: usize, size: usize, f: impl Fn(f64, f64) -> f64) {
    let (below, above) = stack.split_at_mut(top - 1);
    let left = &mut below[top - 2];
    for (a, b) in left[..size].iter_mut().zip(&above[0][..size]) {
        *a = f(*a, *b);
    }
}

struct Compiler<'a> {
    text: &'a str,
    varying: &'a [&'a str],
    look: &'a dyn Look,
    program: &'a mut Program,
    height: usize,
}

impl Compiler<'_> {
    fn emit(&mut self, op: Step, takes: usize) {
        self.height = self.height + 1 - takes;
        self.program.depth = self.program.depth.max(self.height);
        self.program.ops.push(op);
    }

    fn push(&mut self, node: &Node) -> Result<(), FormulaError> {
        if !node.names().iter().any(|name| self.varying.contains(name)) {
            let value = evaluate(node, self.text, self.look)?;
            self.emit(Step::Push(value), 0);
            return Ok(());
        }
        match &node.kind {
            Kind::Number(_) | Kind::Constant { .. } | Kind::Pi | Kind::Sum { .. } => {
                return Err(FormulaError {
                    text: self.text.to_owned(),
                    span: node.span.clone(),
                    problem: Problem::NestedSum,
                });
            }
            Kind::Name(name) => {
                let input = self
                    .varying
                    .iter()
                    .position(|known| known == name)
                    .expect("the name varies");
                self.emit(Step::Load(input), 0);
            }
            Kind::Negative(inner) => {
                self.push(inner)?;
                self.emit(Step::Negate, 1);
            }
            Kind::Binary { op, left, right } => {
                self.push(left)?;
                self.push(right)?;
                self.emit(Step::Apply(*op), 2);
            }
            Kind::Call { function, argument } => {
                self.push(argument)?;
                self.emit(Step::Call(*function), 1);
            }
            Kind::Atan2 { y, x } => {
                self.push(y)?;
                self.push(x)?;
                self.emit(Step::Atan2, 2);
            }
            Kind::Extreme { greatest, operands } => {
                for operand in operands {
                    self.push(operand)?;
                }
                self.emit(
                    Step::Extreme {
                        greatest: *greatest,
                        count: operands.len(),
                    },
                    operands.len(),
                );
            }
            Kind::Lookup { table, key } => {
                self.push(key)?;
                let table = self
                    .look
                    .table(table)
                    .filter(|table| matches!(table.key, Key::Quantity(_)));
                let table = table
                    .expect("the dimension check has found the table")
                    .clone();
                self.emit(Step::Lookup(Box::new(table)), 1);
            }
            Kind::When(branches) => {
                let mut relations = Vec::new();
                let mut takes = 0;
                for branch in branches {
                    if let Some(condition) = &branch.condition {
                        self.push(&condition.left)?;
                        self.push(&condition.right)?;
                        relations.push(condition.relation);
                        takes += 2;
                    }
                    self.push(&branch.value)?;
                    takes += 1;
                }
                let otherwise = branches
                    .last()
                    .is_some_and(|branch| branch.condition.is_none());
                self.emit(
                    Step::Choose {
                        relations,
                        otherwise,
                    },
                    takes,
                );
            }
        }
        Ok(())
    }
}
