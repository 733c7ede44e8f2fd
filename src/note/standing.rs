//! How a joint stands: its least margin, how many checks hold, what gave no number.

use super::calculation::{Calculation, Outcome};
use super::margins::{asked, check_name, ranked};
use super::text::count;
use crate::criteria::Margin;
use crate::formula::Printed;

/// How a joint stands.
#[derive(Clone, PartialEq, Debug)]
pub struct Standing {
    /// The least margin of safety.
    pub margin: Option<Margin>,
    /// The check that governs, and its case.
    pub governing: Option<(String, String)>,
    /// Strength checks and limits that hold, and all of them.
    pub held: (usize, usize),
    /// Checks that gave no number.
    pub refused: usize,
}

impl Standing {
    /// The standing of a calculation.
    #[must_use]
    pub fn of(calculation: &Calculation<'_>) -> Self {
        let (mut held, mut all, mut refused) = (0, 0, 0);
        for outcome in &calculation.outcomes {
            match outcome {
                Outcome::Refused(_) => refused += 1,
                Outcome::Assessed(asked) => {
                    for strength in &asked.strength {
                        all += 1;
                        held += usize::from(strength.governing.margin.holds());
                    }
                    for limit in 0..asked.sheet.limits.len() {
                        all += 1;
                        let mut of_limit = asked.limits.iter().filter(|found| found.limit == limit);
                        held += usize::from(of_limit.all(|found| found.holds));
                    }
                }
            }
        }
        let first = ranked(calculation).into_iter().next();
        let governing = first.as_ref().map(|check| {
            let case = calculation.joint.loads.cases[check.governing.case]
                .name
                .value
                .clone();
            (
                check_name(asked(calculation, check.outcome), check.check),
                case,
            )
        });
        Self {
            margin: first.map(|check| check.governing.margin),
            governing,
            held: (held, all),
            refused,
        }
    }

    /// Whether every check holds and has a number.
    #[must_use]
    pub const fn holds(&self) -> bool {
        self.held.0 == self.held.1 && self.refused == 0
    }

    /// The least margin as printed: rounded down, with its sign.
    #[must_use]
    pub fn figure(&self) -> String {
        match self.margin {
            Some(Margin::Value(value)) => Printed::rounded(value, 2, false).signed_text(),
            Some(Margin::High) => "high".to_owned(),
            Some(Margin::FixedTermsExceed) => "fails".to_owned(),
            None => "none".to_owned(),
        }
    }

    /// How many checks hold, in words.
    #[must_use]
    pub fn tally(&self) -> String {
        let (held, all) = self.held;
        let verb = if held == 1 { "holds" } else { "hold" };
        let mut text = format!("{held} of {} {verb}.", count(all, "check", "checks"));
        if self.refused > 0 {
            text.push_str(&format!(
                " {} no number.",
                match self.refused {
                    1 => "1 check has".to_owned(),
                    many => format!("{many} checks have"),
                }
            ));
        }
        text
    }

    /// One line for the terminal.
    #[must_use]
    pub fn line(&self) -> String {
        let governing = match &self.governing {
            Some((check, case)) => format!("{}, case {case}", check),
            None => "no strength check".to_owned(),
        };
        format!(
            "least margin {}  {governing}  {}",
            self.figure(),
            self.tally()
        )
    }
}

impl Calculation<'_> {
    /// How the joint stands.
    #[must_use]
    pub fn standing(&self) -> Standing {
        Standing::of(self)
    }
}

/// How many failure paths are neither checked by a sheet nor excluded by the user.
pub(super) fn uncovered(calculation: &Calculation<'_>) -> usize {
    let covered = |word: &str| {
        let checked = calculation.outcomes.iter().any(|outcome| match outcome {
            Outcome::Assessed(asked) => asked.sheet.covers.iter().any(|path| path.word() == word),
            Outcome::Refused(_) => false,
        });
        checked
            || calculation
                .joint
                .excluded
                .iter()
                .any(|exclusion| exclusion.path.value == word)
    };
    crate::criteria::FailurePath::WORDS
        .iter()
        .filter(|(word, _)| !covered(word))
        .count()
}
