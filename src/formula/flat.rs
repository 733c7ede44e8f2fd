//! A formula with its names resolved to values of the ledger, for many evaluations of one line.
//!
//! Gives the same bits as [`evaluate`](super::evaluate), in the same order of operations, without
//! looking a name up each time; a sum holds its terms one by one. Where the evaluator has a fault, there
//! is no value here, and the evaluator says why.

use super::eval::{apply, call, governs};
use super::ledger::{EntryLook, Value};
use super::node::{Function, Kind, Node, Op, Relation};
use super::table::{Key, Table};
use crate::formula::Look;
use crate::quantity::real;

/// A resolved formula.
pub(super) enum Flat {
    Number(f64),
    Value(Value),
    Negative(Box<Self>),
    Binary(Op, Box<[Self; 2]>),
    Call(Function, Box<Self>),
    Atan2(Box<[Self; 2]>),
    Extreme(bool, Vec<Self>),
    Sum(Vec<Self>),
    Lookup(Box<(Table, Self)>),
    When(Vec<Choice>),
}

/// A branch of a choice; no condition means otherwise.
pub(super) struct Choice {
    condition: Option<(Relation, [Flat; 2])>,
    value: Flat,
}

impl Flat {
    /// Resolves a formula; `None` where a name stands for nothing.
    pub(super) fn of(
        node: &Node,
        look: &EntryLook<'_>,
        member: Option<(&str, usize)>,
    ) -> Option<Self> {
        let part = |node: &Node| Self::of(node, look, member);
        let boxed = |node: &Node| part(node).map(Box::new);
        Some(match &node.kind {
            Kind::Number(number) => Self::Number(number.value),
            Kind::Constant { number, unit, .. } => Self::Number(if unit.is_degree() {
                number.value.to_radians()
            } else {
                number.value * unit.conversion(look.units()).value()
            }),
            Kind::Pi => Self::Number(std::f64::consts::PI),
            Kind::Name(name) => Self::Value(look.resolve(name, member)?),
            Kind::Negative(inner) => Self::Negative(boxed(inner)?),
            Kind::Binary { op, left, right } => {
                Self::Binary(*op, Box::new([part(left)?, part(right)?]))
            }
            Kind::Call { function, argument } => Self::Call(*function, boxed(argument)?),
            Kind::Atan2 { y, x } => Self::Atan2(Box::new([part(y)?, part(x)?])),
            Kind::Extreme { greatest, operands } => {
                Self::Extreme(*greatest, operands.iter().map(part).collect::<Option<_>>()?)
            }
            Kind::Sum { set, term } => {
                let terms = (0..look.members(set)?)
                    .map(|index| Self::of(term, look, Some((set, index))))
                    .collect::<Option<_>>()?;
                Self::Sum(terms)
            }
            Kind::Lookup { table, key } => Self::lookup(look.table(table)?, key, look, member)?,
            Kind::When(branches) => {
                let branch = |branch: &super::Branch| {
                    let condition = match &branch.condition {
                        None => None,
                        Some(told) => {
                            Some((told.relation, [part(&told.left)?, part(&told.right)?]))
                        }
                    };
                    let value = part(&branch.value)?;
                    Some(Choice { condition, value })
                };
                Self::When(branches.iter().map(branch).collect::<Option<_>>()?)
            }
        })
    }

    /// A table's value: known for a word, looked up for a quantity.
    fn lookup(
        table: &Table,
        key: &Node,
        look: &EntryLook<'_>,
        member: Option<(&str, usize)>,
    ) -> Option<Self> {
        if let (Kind::Name(name), Key::Word) = (&key.kind, table.key) {
            let row = table.row_of_word(look.word(name)?).ok()?;
            return Some(Self::Number(table.rows[row].value.value));
        }
        let key = Self::of(key, look, member)?;
        Some(Self::Lookup(Box::new((table.clone(), key))))
    }

    /// The value, with `at` giving the number of each value of the ledger; `None` if it or any part of
    /// it is not finite, or a choice or a table has no answer.
    pub(super) fn value(&self, at: &impl Fn(Value) -> f64) -> Option<f64> {
        let value = match self {
            Self::Number(number) => *number,
            Self::Value(value) => at(*value),
            Self::Negative(inner) => -inner.value(at)?,
            Self::Binary(op, sides) => apply(*op, sides[0].value(at)?, sides[1].value(at)?),
            Self::Call(function, argument) => call(*function, argument.value(at)?),
            Self::Atan2(sides) => real::atan2(sides[0].value(at)?, sides[1].value(at)?),
            Self::Extreme(greatest, operands) => {
                let values: Vec<f64> = operands
                    .iter()
                    .map(|operand| operand.value(at))
                    .collect::<Option<_>>()?;
                values[governs(*greatest, &values)]
            }
            Self::Sum(terms) => {
                let mut total = 0.0;
                for term in terms {
                    total += term.value(at)?;
                }
                total
            }
            Self::Lookup(lookup) => {
                let (table, key) = &**lookup;
                let row = table.row_of_quantity(key.value(at)?).ok()?;
                table.rows[row].value.value
            }
            Self::When(branches) => {
                for Choice { condition, value } in branches {
                    let holds = match condition {
                        None => true,
                        Some((relation, sides)) => {
                            relation.holds(sides[0].value(at)?, sides[1].value(at)?)
                        }
                    };
                    if holds {
                        return value.value(at);
                    }
                }
                return None;
            }
        };
        value.is_finite().then_some(value)
    }
}

#[cfg(test)]
mod tests {
    use super::Flat;
    use crate::formula::ledger::EntryLook;
    use crate::formula::{Bound, Draft, Env, Kind, Ledger, Origin, SumSet, Symbol, Value};
    use crate::quantity::{Dim, Given, UnitSet};
    use std::collections::BTreeMap;

    /// The resolved form has the very bits of the evaluator, which looks names up.
    #[test]
    fn the_resolved_form_gives_the_evaluators_bits() {
        let units = UnitSet::NewtonMillimetre;
        let mut ledger = Ledger::new(units, 1000.0, 100.0);
        let mut env = Env::default();
        let origin = || Origin::Method("trial".to_owned());
        let mut given = |name: &str, text: &str, dim| {
            let given = Given::parse(text, dim, units).unwrap();
            ledger.given(
                name.to_owned(),
                Symbol::of("a", &[]),
                name.to_owned(),
                &given,
                origin(),
            )
        };
        let (a, psi) = (
            given("a", "3.1", Dim::LENGTH),
            given("psi", "37 deg", Dim::ANGLE),
        );
        let members: Vec<BTreeMap<String, Value>> = ["0.1", "-2.7", "1e3"]
            .iter()
            .map(|text| BTreeMap::from([("x".to_owned(), given(text, text, Dim::LENGTH))]))
            .collect();
        env.bind("a", a);
        env.names.insert("psi".to_owned(), Bound::Value(psi));
        let symbols = BTreeMap::from([("x".to_owned(), Symbol::of("x", &[]))]);
        env.sets.insert(
            "runs".to_owned(),
            SumSet {
                index: "i".to_owned(),
                symbols,
                members,
            },
        );
        let formulas = [
            "sum(runs, x*(x - a)/3)",
            "-a^2/(1 m) + sqrt(a*(2 mm))*cos(psi)",
            "max(a, sum(runs, x), 2*a)",
            "when(a < 2 mm, a, otherwise, a*tan(psi)/pi)",
            "atan2(a, 7 mm) + psi",
        ];
        for formula in formulas {
            let draft = Draft {
                id: "r".to_owned(),
                symbol: Symbol::of("r", &[]),
                says: String::new(),
                formula,
                origin: origin(),
                dim: None,
            };
            let value = ledger
                .step(draft, &env)
                .unwrap_or_else(|fault| panic!("{fault}"));
            let entry = ledger.get(value);
            let Kind::Step { node, env, .. } = &entry.kind else {
                panic!("a step has a formula")
            };
            let look = EntryLook {
                ledger: &ledger,
                env,
                printed: false,
                shift: None,
            };
            let flat = Flat::of(node, &look, None).expect("every name stands for something");
            let got = flat.value(&|used| ledger.get(used).value + 0.0);
            assert_eq!(
                got.map(f64::to_bits),
                Some(entry.value.to_bits()),
                "{formula}"
            );
        }
    }
}
