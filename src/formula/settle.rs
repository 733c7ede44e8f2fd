//! How many digits each value is printed with.
//!
//! Every value starts with four significant digits. A line whose printed operands do not give its
//! printed result, to one unit in the last digit, has the operand raised whose half-unit error moves
//! the result most; that operand is then printed with the new digits everywhere. A small difference of
//! large numbers, which would ask for more than seven, is printed with fewer digits of its own instead.
//! Equal values of one symbol rise together. Repeated to a bound.

use super::flat::Flat;
use super::ledger::{EntryLook, Freedom, Kind, Ledger, Rounding, Value};
use super::node::{Kind as NodeKind, Op};
use super::symbol::Symbol;
use super::{FormulaError, Problem, evaluate};
use crate::quantity::{Dim, real};
use std::collections::VecDeque;

/// Terms of a plain sum rise to this many digits so that its last digit adds up to the eye.
const SUM_DIGITS: usize = 6;

/// Where an operand would need more digits than this, a small difference of large numbers, the result
/// gives up a digit instead: it has no more to give.
const MANY_DIGITS: usize = 7;

/// How often equal values that are rounded apart are looked for.
const ROUNDS_APART: usize = 2;

/// No value is printed with more digits than this; beyond, the note refuses.
const MOST_DIGITS: usize = 13;

/// An operand with so many digits is not raised for the sake of a result rounded to one side.
const ENOUGH_DIGITS: usize = 5;

impl Ledger {
    /// Raises printed digits until every step replays.
    ///
    /// # Errors
    ///
    /// [`Problem::Unsettled`] if a line needs an operand beyond the bound of 13 digits.
    pub fn settle(&mut self) -> Result<(), FormulaError> {
        self.keep_printed(None);
        let lines = Lines::of(self);
        let mut queue = Queue::of(self.values());
        for _ in 0..ROUNDS_APART {
            self.settle_lines(&mut queue, &lines)?;
            // Equal values at the edge of a digit may be rounded apart: they get another one.
            let apart = self.rounded_apart(&lines);
            for value in apart {
                self.get_mut(value).digits += 1;
                self.keep_printed(Some(value));
                queue.add(value);
                queue.add_users(value, &lines, value);
            }
        }
        self.settle_lines(&mut queue, &lines)
    }

    /// Raises digits until every line of the queue replays.
    fn settle_lines(&mut self, queue: &mut Queue, lines: &Lines) -> Result<(), FormulaError> {
        while let Some(value) = queue.next() {
            while let Some(raised) = self.raise_or_round(value, lines)? {
                self.keep_printed(Some(raised));
                queue.add_users(raised, lines, value);
                let digits = self.get(raised).digits;
                for twin in lines.alike[raised.0].iter().copied() {
                    let entry = self.get_mut(twin);
                    if entry.digits < digits && entry.freedom == Freedom::Free {
                        entry.digits = digits;
                        self.keep_printed(Some(twin));
                        queue.add_users(twin, lines, value);
                    }
                }
            }
        }
        Ok(())
    }

    /// The values of those groups whose members print differently with the same digits.
    fn rounded_apart(&self, lines: &Lines) -> Vec<Value> {
        let free = |value: Value| {
            let entry = self.get(value);
            entry.freedom == Freedom::Free
                && entry.rounding == Rounding::Nearest
                && entry.digits < MANY_DIGITS
                && matches!(entry.kind, Kind::Step { .. } | Kind::Found { .. })
        };
        let mut apart = Vec::new();
        for first in self.values() {
            let others = &lines.alike[first.0];
            if others.is_empty() || others[0].0 < first.0 || !free(first) {
                continue;
            }
            let (digits, text) = (self.get(first).digits, self.printed(first).text());
            let alike = |other: &Value| free(*other) && self.get(*other).digits == digits;
            let group: Vec<Value> = others.iter().copied().filter(alike).collect();
            if group
                .iter()
                .any(|other| self.printed(*other).text() != text)
            {
                apart.push(first);
                apart.extend(group);
            }
        }
        apart
    }

    /// Raises an operand of a line; a result that is rounded to one side is rounded to the nearest
    /// instead, which replays sooner, where its operands have digits enough.
    fn raise_or_round(
        &mut self,
        value: Value,
        lines: &Lines,
    ) -> Result<Option<Value>, FormulaError> {
        let one_sided = self.get(value).rounding != Rounding::Nearest;
        let many = |used: &Value| self.get(*used).digits >= ENOUGH_DIGITS;
        if one_sided
            && self.replay_miss(value)?.is_some_and(|miss| miss > 1.0)
            && self.uses(value).iter().any(many)
        {
            self.get_mut(value).rounding = Rounding::Nearest;
            return Ok(Some(value));
        }
        self.raise_for(value, lines)
    }

    /// The miss of a replay in units of the last printed digit; `None` for a line that has no formula.
    ///
    /// # Errors
    ///
    /// [`FormulaError`] if the printed numbers do not evaluate.
    pub fn replay_miss(&self, value: Value) -> Result<Option<f64>, FormulaError> {
        let Kind::Step { node, text, env } = &self.get(value).kind else {
            return Ok(None);
        };
        let look = EntryLook {
            ledger: self,
            env,
            printed: true,
            shift: None,
        };
        Ok(Some(self.miss_of(value, evaluate(node, text, &look)?)))
    }

    /// How far a replayed value is from the printed one, in units of its last digit.
    fn miss_of(&self, value: Value, replayed: f64) -> f64 {
        let replayed = self.shown(value, replayed);
        let printed = self.printed(value);
        let unit = if printed.is_zero() {
            self.unit_of_zero(value)
        } else {
            self.unit(value)
        };
        (replayed - printed.value()).abs() / unit
    }

    /// The value as printed: degrees for an angle.
    fn shown(&self, value: Value, number: f64) -> f64 {
        if self.get(value).dim == Dim::ANGLE {
            number.to_degrees()
        } else {
            number
        }
    }

    /// One unit in the last digit that the value is held to: the printed one, or the digits assigned
    /// where trailing zeros were dropped.
    fn unit(&self, value: Value) -> f64 {
        let printed = self.printed(value);
        if self.get(value).rounding != Rounding::Nearest {
            return printed.unit_in_last();
        }
        let size = printed.value().abs();
        let digits = i32::try_from(self.get(value).digits).unwrap_or(i32::MAX);
        #[expect(
            clippy::cast_possible_truncation,
            reason = "the power of ten of a double fits"
        )]
        let power = libm::floor(libm::log10(size) + 1e-12) as i32;
        printed.unit_in_last().min(real::ten_to(power - digits + 1))
    }

    /// What counts as one unit where the result prints 0: a thousandth of the largest operand's effect,
    /// and never over one half of a whole unit, so that nobody reads another digit than 0.
    fn unit_of_zero(&self, value: Value) -> f64 {
        let Kind::Step { node, text, env } = &self.get(value).kind else {
            return 1.0;
        };
        let mut largest: f64 = 0.0;
        for used in self.uses(value) {
            let size = self.get(used).value;
            let look = EntryLook {
                ledger: self,
                env,
                printed: false,
                shift: Some((used, size)),
            };
            if let Ok(moved) = evaluate(node, text, &look) {
                largest = largest.max(self.shown(value, moved).abs());
            }
        }
        (1e-3 * largest).min(0.5).max(self.get(value).floor)
    }

    /// Units in the last digit that a replay may miss: one, but half of one for a plain sum, whose
    /// last digit every reader adds up in passing.
    fn allowed_miss(&self, value: Value) -> f64 {
        let Kind::Step { node, .. } = &self.get(value).kind else {
            return 1.0;
        };
        let mut plain = true;
        node.walk(&mut |node| {
            plain &= matches!(
                node.kind,
                NodeKind::Name(_)
                    | NodeKind::Sum { .. }
                    | NodeKind::Negative(_)
                    | NodeKind::Binary {
                        op: Op::Add | Op::Sub,
                        ..
                    }
            );
        });
        if plain { 0.5 } else { 1.0 }
    }

    /// Raises one operand of a line that does not replay; `None` once it does.
    fn raise_for(&mut self, value: Value, lines: &Lines) -> Result<Option<Value>, FormulaError> {
        let replayed = lines.flats[value.0]
            .as_ref()
            .and_then(|flat| flat.value(&|used| self.printed_value(used) + 0.0));
        let miss = match replayed {
            Some(replayed) => self.miss_of(value, replayed),
            None => match self.replay_miss(value)? {
                Some(miss) => miss,
                None => return Ok(None),
            },
        };
        // A hair over is rounding of the replay itself.
        if miss <= self.allowed_miss(value) + 1e-6 {
            return Ok(None);
        }
        let cosmetic = miss <= 1.0 + 1e-6;
        let most = if cosmetic { SUM_DIGITS } else { MOST_DIGITS };
        let worst = self.worst_operand(value, most, lines);
        if worst.is_none() && cosmetic {
            return Ok(None);
        }
        let entry = self.get(value);
        let spent = |used: Value| {
            let used = self.get(used);
            used.digits >= MANY_DIGITS || used.freedom == Freedom::Lowered
        };
        let many = worst.is_none_or(spent);
        if many && !cosmetic && entry.digits > 1 && entry.freedom != Freedom::Rising {
            let entry = self.get_mut(value);
            entry.digits -= 1;
            entry.freedom = Freedom::Lowered;
            return Ok(Some(value));
        }
        let Some(used) = worst else {
            let Kind::Step { text, .. } = &entry.kind else {
                return Ok(None);
            };
            let span = 0..text.len();
            return Err(FormulaError {
                text: text.clone(),
                span,
                problem: Problem::Unsettled,
            });
        };
        let entry = self.get_mut(used);
        entry.digits += 1;
        if entry.freedom == Freedom::Lowered {
            entry.freedom = Freedom::Rising;
        }
        Ok(Some(used))
    }

    /// The operand whose rounding moves the result most, of those that may take another digit.
    fn worst_operand(&self, value: Value, most: usize, lines: &Lines) -> Option<Value> {
        let plain = self.allowed_miss(value) < 1.0;
        let mut worst: Option<(f64, Value)> = None;
        for used in lines.uses[value.0].iter().copied() {
            if self.get(used).digits >= most || !self.can_rise(used) {
                continue;
            }
            let effect = if plain {
                // In a plain sum every operand moves the result by its own rounding.
                self.printed(used).unit_in_last()
            } else {
                self.effect_of_rounding(lines.flats[value.0].as_ref(), used)
            };
            if worst.is_none_or(|(known, _)| effect > known) {
                worst = Some((effect, used));
            }
        }
        worst.map(|(_, used)| used)
    }

    /// Whether more digits would change what is printed of a value.
    fn can_rise(&self, value: Value) -> bool {
        let entry = self.get(value);
        let computed = match entry.kind {
            Kind::Step { .. } | Kind::Found { .. } | Kind::Converted { .. } => true,
            Kind::Given(_) => entry.dim == Dim::ANGLE,
            Kind::Bound { .. } => false,
        };
        let shown = self.shown(value, entry.value);
        computed && (self.printed(value).value() - shown).abs() > 1e-14 * shown.abs()
    }

    /// How far half a unit in the last digit of `used` moves the result of a line.
    fn effect_of_rounding(&self, line: Option<&Flat>, used: Value) -> f64 {
        let Some(line) = line else {
            return 0.0;
        };
        let half = 0.5 * self.printed(used).unit_in_last();
        let half = if self.get(used).dim == Dim::ANGLE {
            half.to_radians()
        } else {
            half
        };
        let at = |shift: f64| {
            let number =
                |value: Value| self.printed_value(value) + if value == used { shift } else { 0.0 };
            line.value(&number).unwrap_or(f64::INFINITY)
        };
        (at(half) - at(-half)).abs()
    }
}

/// Lines that are still to be looked at, each once.
struct Queue {
    values: VecDeque<Value>,
    waiting: Vec<bool>,
}

impl Queue {
    fn of(values: impl Iterator<Item = Value>) -> Self {
        let values: VecDeque<Value> = values.collect();
        let waiting = vec![true; values.len()];
        Self { values, waiting }
    }

    fn next(&mut self) -> Option<Value> {
        let value = self.values.pop_front()?;
        self.waiting[value.0] = false;
        Some(value)
    }

    fn add(&mut self, value: Value) {
        if !std::mem::replace(&mut self.waiting[value.0], true) {
            self.values.push_back(value);
        }
    }

    /// A changed value and the lines that use it, but for the one at hand.
    fn add_users(&mut self, changed: Value, lines: &Lines, at_hand: Value) {
        for user in lines.users[changed.0].iter().copied().chain([changed]) {
            if user != at_hand {
                self.add(user);
            }
        }
    }
}

/// What of the lines stays while digits move.
struct Lines {
    /// The formula of each line that has one.
    flats: Vec<Option<Flat>>,
    /// The values that each line uses.
    uses: Vec<Vec<Value>>,
    /// For each value, the lines whose formulas use it.
    users: Vec<Vec<Value>>,
    /// For each value, the equal ones of its family: they are printed alike, as far as they can be.
    alike: Vec<Vec<Value>>,
}

impl Lines {
    fn of(ledger: &Ledger) -> Self {
        let flat = |value: Value| {
            let Kind::Step { node, env, .. } = &ledger.get(value).kind else {
                return None;
            };
            let look = EntryLook {
                ledger,
                env,
                printed: true,
                shift: None,
            };
            Flat::of(node, &look, None)
        };
        let uses: Vec<Vec<Value>> = ledger.values().map(|value| ledger.uses(value)).collect();
        let mut users = vec![Vec::new(); uses.len()];
        for (value, used) in ledger.values().zip(&uses) {
            for used in used {
                users[used.0].push(value);
            }
        }
        Self {
            flats: ledger.values().map(flat).collect(),
            alike: alike(ledger, &uses),
            uses,
            users,
        }
    }
}

/// For each value, those equal to it that are read beside it: of the same family, such as throats of
/// runs of one size, operands that a line hands on, and what it verifies.
fn alike(ledger: &Ledger, uses: &[Vec<Value>]) -> Vec<Vec<Value>> {
    /// Values that differ by less, in parts of themselves, are equal.
    const EQUAL: f64 = 1e-11;
    let is_equal = |a: Value, b: Value| {
        let (a, b) = (ledger.get(a), ledger.get(b));
        a.dim == b.dim && a.value != 0.0 && (a.value - b.value).abs() <= EQUAL * a.value.abs()
    };
    let mut ranked: Vec<(Symbol, Value)> = ledger
        .values()
        .map(|value| (ledger.get(value).symbol.family(), value))
        .collect();
    ranked.sort_by(|a, b| {
        let number = |value: Value| ledger.get(value).value;
        a.0.cmp(&b.0).then(number(a.1).total_cmp(&number(b.1)))
    });
    let mut groups = Groups::of(ranked.len());
    for pair in ranked.windows(2) {
        if pair[0].0 == pair[1].0 && is_equal(pair[0].1, pair[1].1) {
            groups.join(pair[0].1, pair[1].1);
        }
    }
    for (value, used) in ledger.values().zip(uses) {
        let beside = used.iter().chain(&ledger.get(value).rests_on);
        for used in beside.copied().filter(|used| is_equal(value, *used)) {
            groups.join(value, used);
        }
    }
    let values: Vec<Value> = ledger.values().collect();
    groups.others(&values)
}

/// Values in groups, each of which knows its first.
struct Groups(Vec<usize>);

impl Groups {
    fn of(count: usize) -> Self {
        Self((0..count).collect())
    }

    fn first(&mut self, mut at: usize) -> usize {
        while self.0[at] != at {
            self.0[at] = self.0[self.0[at]];
            at = self.0[at];
        }
        at
    }

    fn join(&mut self, a: Value, b: Value) {
        let (a, b) = (self.first(a.0), self.first(b.0));
        self.0[a.max(b)] = a.min(b);
    }

    /// For each value, the others of its group.
    fn others(mut self, values: &[Value]) -> Vec<Vec<Value>> {
        let mut members: Vec<Vec<Value>> = vec![Vec::new(); self.0.len()];
        for value in values.iter().copied() {
            let first = self.first(value.0);
            members[first].push(value);
        }
        let others = |value: &Value| {
            let group = members[self.first(value.0)].iter().copied();
            group.filter(|other| other != value).collect()
        };
        values.iter().map(others).collect()
    }
}
