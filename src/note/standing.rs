//! How a joint stands: its least margin, how many checks hold, what gave no number.

use super::calculation::{Calculation, Outcome};
use super::margins::{asked, check_name, ranked};
use super::text::count;
use crate::criteria::{FailurePath, Margin};
use crate::formula::{MARGIN_DECIMALS, Printed};
use crate::joint::Joint;

/// How a joint stands.
#[derive(Clone, PartialEq, Debug)]
pub struct Standing {
    /// The least margin of safety.
    pub margin: Option<Margin>,
    /// The check that governs, and its case.
    pub governing: Option<(String, String)>,
    /// Strength checks that hold, and all of them; a check of both parts counts twice.
    pub strength: (usize, usize),
    /// Limits that hold, and all of them.
    pub limits: (usize, usize),
    /// Names of the checks and limits that do not hold.
    pub failed: Vec<String>,
    /// Names of the checks that gave no number, each with its reason in brief.
    pub refused: Vec<String>,
    /// Names of the cases that no strength check takes, though other cases are taken.
    pub unchecked: Vec<String>,
}

impl Standing {
    /// The standing of a calculation.
    #[must_use]
    pub fn of(calculation: &Calculation<'_>) -> Self {
        let (mut limits, mut failed, mut refused) = ((0, 0), Vec::new(), Vec::new());
        let checks = ranked(calculation);
        let holding = checks.iter().filter(|check| check.governing.margin.holds());
        let strength = (holding.count(), checks.len());
        for outcome in &calculation.outcomes {
            match outcome {
                Outcome::Refused(refusal) => {
                    refused.push(format!("{} ({})", refusal.clause, brief(&refusal.reason)));
                }
                Outcome::Assessed(asked) => {
                    for strength in &asked.strength {
                        if !strength.governing.margin.holds() {
                            failed.push(check_name(asked, strength.check));
                        }
                    }
                    for (index, limit) in asked.sheet.limits.iter().enumerate() {
                        let mut of_limit = asked.limits.iter().filter(|found| found.limit == index);
                        limits.1 += 1;
                        if of_limit.all(|found| found.holds) {
                            limits.0 += 1;
                        } else {
                            failed
                                .push(format!("{}, {}", asked.sheet.name.value, limit.name.value));
                        }
                    }
                }
            }
        }
        let first = checks.into_iter().next();
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
            strength,
            limits,
            failed,
            refused,
            unchecked: unchecked(calculation),
        }
    }

    /// Whether every check holds and has a number, and every case is taken by one.
    #[must_use]
    pub fn holds(&self) -> bool {
        self.failed.is_empty() && self.refused.is_empty() && self.unchecked.is_empty()
    }

    /// The least margin as printed: rounded down, with its sign.
    #[must_use]
    pub fn figure(&self) -> String {
        match self.margin {
            Some(Margin::Value(value)) => {
                Printed::rounded(value, MARGIN_DECIMALS, false).signed_text()
            }
            Some(Margin::High) => "high".to_owned(),
            Some(Margin::FixedTermsExceed) => "fails".to_owned(),
            None => "none".to_owned(),
        }
    }

    /// How many checks hold, in words.
    #[must_use]
    pub fn tally(&self) -> String {
        let counted = |(held, all): (usize, usize), one: &str, many: &str| {
            (all > 0).then(|| format!("{held} of {}", count(all, one, many)))
        };
        // A check without a number is one that does not hold.
        let (held, rows) = self.strength;
        let all = if rows > 0 {
            rows + self.refused.len()
        } else {
            0
        };
        let parts: Vec<String> = [
            counted((held, all), "strength check", "strength checks"),
            counted(self.limits, "limit", "limits"),
        ]
        .into_iter()
        .flatten()
        .collect();
        let one = (all <= 1 || held == 1) && (self.limits.1 <= 1 || self.limits.0 == 1);
        let verb = if one && parts.len() == 1 {
            "holds"
        } else {
            "hold"
        };
        let mut text = if parts.is_empty() {
            String::new()
        } else {
            format!("{} {verb}.", parts.join(" and "))
        };
        for (names, one, many) in [
            (&self.failed, "Not held", "Not held"),
            (&self.refused, "Without a number", "Without a number"),
            (
                &self.unchecked,
                "Case taken by no strength check",
                "Cases taken by no strength check",
            ),
        ] {
            if !names.is_empty() {
                let lead = if names.len() == 1 { one } else { many };
                let space = if text.is_empty() { "" } else { " " };
                text.push_str(&format!("{space}{lead}: {}.", names.join("; ")));
            }
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

/// The first part of a reason, cut where it is long; the note tells it whole.
fn brief(reason: &str) -> String {
    const LONGEST: usize = 240;
    let first = reason.split("; ").next().unwrap_or_default();
    if first.chars().count() <= LONGEST {
        return first.to_owned();
    }
    let cut: String = first.chars().take(LONGEST).collect();
    format!("{} …", cut.trim_end())
}

/// The failure paths that are neither checked by a sheet nor excluded by the user, in print order.
pub(super) fn uncovered(calculation: &Calculation<'_>) -> Vec<FailurePath> {
    let excluded = excluded(calculation.joint);
    let covered = |path: &FailurePath| {
        let checked = calculation.outcomes.iter().any(|outcome| match outcome {
            Outcome::Assessed(asked) => asked.sheet.covers.contains(path),
            // That there is no number is told by itself.
            Outcome::Refused(refusal) => refusal.covers.contains(path),
        });
        checked || excluded.contains(path)
    };
    let all = FailurePath::WORDS.into_iter().map(|(_, path)| path);
    all.filter(|path| !covered(path)).collect()
}

/// The failure paths that the user excludes, in print order.
pub(super) fn excluded(joint: &Joint) -> Vec<FailurePath> {
    let told = |word: &str| joint.excluded.iter().any(|entry| entry.path.value == word);
    let all = FailurePath::WORDS.into_iter();
    all.filter(|(word, _)| told(word))
        .map(|(_, path)| path)
        .collect()
}

/// The cases that no strength check takes, if any other case is taken.
fn unchecked(calculation: &Calculation<'_>) -> Vec<String> {
    let taken = |case: usize| {
        calculation.outcomes.iter().any(|outcome| match outcome {
            Outcome::Assessed(asked) => asked.taken.contains(&case),
            Outcome::Refused(_) => false,
        })
    };
    let cases = &calculation.joint.loads.cases;
    if !(0..cases.len()).any(taken) {
        return Vec::new();
    }
    (0..cases.len())
        .filter(|case| !taken(*case))
        .map(|case| cases[case].name.value.clone())
        .collect()
}
