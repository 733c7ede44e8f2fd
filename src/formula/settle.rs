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
        let mut queue: VecDeque<Value> = self.values().collect();
        let mut waiting = vec![true; queue.len()];
        while let Some(value) = queue.pop_front() {
            waiting[value.0] = false;
            while let Some(raised) = self.raise_or_round(value, &lines)? {
                let digits = self.get(raised).digits;
                for changed in lines.alike[raised.0].iter().copied().chain([raised]) {
                    let entry = self.get_mut(changed);
                    if changed != raised {
                        if entry.digits >= digits || entry.freedom != Freedom::Free {
                            continue;
                        }
                        entry.digits = digits;
                    }
                    self.keep_printed(Some(changed));
                    for other in lines.users[changed.0].iter().copied().chain([changed]) {
                        if other != value && !waiting[other.0] {
                            waiting[other.0] = true;
                            queue.push_back(other);
                        }
                    }
                }
            }
        }
        Ok(())
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
            uses,
            users,
            alike: alike(ledger),
        }
    }
}

/// For each value, the others of its family that are equal to it, such as throats of runs of one size.
fn alike(ledger: &Ledger) -> Vec<Vec<Value>> {
    /// Values that differ by less, in parts of themselves, are equal.
    const EQUAL: f64 = 1e-12;
    let mut ranked: Vec<(Symbol, f64, Value)> = ledger
        .values()
        .map(|value| {
            (
                ledger.get(value).symbol.family(),
                ledger.get(value).value,
                value,
            )
        })
        .collect();
    ranked.sort_by(|a, b| a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)));
    let mut alike = vec![Vec::new(); ranked.len()];
    let is_equal = |a: &(Symbol, f64, Value), b: &(Symbol, f64, Value)| {
        a.0 == b.0 && (a.1 - b.1).abs() <= EQUAL * a.1.abs()
    };
    for group in ranked.chunk_by(is_equal) {
        for (_, _, one) in group {
            let others = group.iter().map(|(_, _, other)| *other);
            alike[one.0] = others.filter(|other| other != one).collect();
        }
    }
    alike
}
