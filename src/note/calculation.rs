//! The way from a joint as told to the outcome of every check: runs, properties, stresses, margins.

use crate::criteria::{Asked, FailurePath, Ground, Library, Sheet, assess_one, unchecked_runs};
use crate::formula::Printed;
use crate::joint::Joint;
use crate::load::{Action, FrameError, actions};
use crate::quantity::Dim;
use crate::solve::{Field, Resistance, Unresisted};
use crate::source::{Diagnostic, Faults};
use crate::weld::{LineProperties, Run, V3, WeldError, lay_runs, line_properties};

/// Everything computed of one joint.
#[derive(Debug)]
pub struct Calculation<'a> {
    /// The joint as told.
    pub joint: &'a Joint,
    /// Runs with their effective throats.
    pub runs: Vec<Run>,
    /// Properties of the group.
    pub properties: LineProperties,
    /// Cases as actions in the joint frame.
    pub actions: Vec<Action>,
    /// How the group resists.
    pub resistance: Resistance,
    /// The stress field of each case, or why it has none.
    pub fields: Vec<Result<Field, Unresisted>>,
    /// What each check asked for gave.
    pub outcomes: Vec<Outcome>,
}

/// What a check asked for gave.
#[derive(Clone, Debug)]
pub enum Outcome {
    /// Numbers.
    Assessed(Asked),
    /// No number, and why.
    Refused(Refusal),
}

/// A check for which mechanics or the clause gives no number.
#[derive(Clone, Debug)]
pub struct Refusal {
    /// Name of the sheet.
    pub clause: String,
    /// Why there is no number.
    pub reason: String,
    /// What would help.
    pub help: String,
    /// The failure paths that the sheet covers.
    pub covers: Vec<FailurePath>,
    /// The number of the case that finds no resistance, if that is why.
    pub case: Option<usize>,
}

/// Faults of an assessment that are no mistakes of the file: a clause that does not apply.
const REFUSALS: [&str; 4] = ["ends-mismatch", "run-not-checked", "not-valid", "no-value"];

impl<'a> Calculation<'a> {
    /// Computes a joint.
    ///
    /// # Errors
    ///
    /// [`Faults`] with their places, if the joint file asks for what cannot be laid out or checked.
    pub fn of(joint: &'a Joint, library: &Library) -> Result<Self, Faults> {
        check_exclusions(joint)?;
        let runs = lay_runs(joint)
            .map_err(|faults| Faults(faults.0.into_iter().map(weld_fault).collect()))?;
        let properties = line_properties(&runs);
        let actions = actions(&joint.loads).map_err(|fault| Faults(vec![frame_fault(&fault)]))?;
        let resistance = Resistance::new(&runs, &properties);
        let fields: Vec<_> = actions
            .iter()
            .map(|action| resistance.field_of(action))
            .collect();
        let mut calculation = Self {
            joint,
            runs,
            properties,
            actions,
            resistance,
            fields,
            outcomes: Vec::new(),
        };
        calculation.outcomes = calculation.assess_all(library)?;
        Ok(calculation)
    }

    /// Whether all runs lie in one plane z = const with normals +z, so that two coordinates tell all.
    #[must_use]
    pub fn is_planar(&self) -> bool {
        let flat = |run: &Run| (run.normal - V3::z()).norm() < 1e-12;
        let height = self.properties.centroid.z;
        let near = 1e-9 * self.properties.size;
        let at_height = |run: &Run| {
            [0.0, 0.25, 0.5, 1.0]
                .iter()
                .all(|p| (run.path.point(*p).z - height).abs() <= near)
        };
        self.runs.iter().all(|run| flat(run) && at_height(run))
    }

    /// The first case that the group cannot resist, and why.
    #[must_use]
    pub fn unresisted(&self) -> Option<(usize, Unresisted)> {
        self.fields
            .iter()
            .enumerate()
            .find_map(|(case, field)| field.as_ref().err().map(|why| (case, *why)))
    }

    fn assess_all(&self, library: &Library) -> Result<Vec<Outcome>, Faults> {
        let stress = |case: usize, run: usize, p: f64| match &self.fields[case] {
            Ok(field) => field.at(self.runs[run].path.point(p)),
            Err(_) => V3::zeros(),
        };
        let ground = Ground {
            joint: self.joint,
            runs: &self.runs,
            stress: &stress,
        };
        let mut outcomes = Vec::new();
        let mut faults = Vec::new();
        for (index, check) in self.joint.checks.iter().enumerate() {
            let clause = &check.clause.value;
            match assess_one(&ground, index, library) {
                Ok(asked) if !asked.strength.is_empty() && self.unresisted().is_some() => {
                    let (case, why) = self.unresisted().expect("it was just found");
                    outcomes.push(Outcome::Refused(self.no_path(&asked.sheet, case, &why)));
                }
                Ok(asked) => outcomes.push(Outcome::Assessed(asked)),
                Err(found) if found.0.iter().all(|fault| REFUSALS.contains(&fault.code)) => {
                    let sheet = library
                        .find(clause)
                        .expect("a clause without a sheet is a fault");
                    outcomes.push(Outcome::Refused(refusal(sheet, &found.0)));
                }
                Err(found) => faults.extend(found.0),
            }
        }
        if !faults.is_empty() {
            return Err(Faults(faults));
        }
        Ok(refuse_unchecked(&ground, outcomes))
    }

    /// Why a case finds no resistance, in units of the note.
    fn unresisted_words(&self, why: &Unresisted) -> String {
        let units = self.joint.units.value;
        let moment = |value: f64| {
            let printed = Printed::of(value.abs(), 4, 4, 0.0);
            format!(
                "the moment of magnitude {} {}",
                printed.text(),
                units.text(Dim::MOMENT)
            )
        };
        match why {
            Unresisted::AboutLine {
                moment: about, u, ..
            } => {
                let direction = [u.x, u.y, u.z].map(|part| Printed::of(part, 4, 4, 1e-9).text());
                format!(
                    "{} about the line of the welds, along ({}), finds no resistance: bending of a weld about its \
                     own root is no load path",
                    moment(*about),
                    direction.join(", ")
                )
            }
            Unresisted::OnPoint { moment: on, .. } => {
                format!("{} finds no resistance: the group is a point", moment(*on))
            }
            Unresisted::NoArea | Unresisted::Inaccurate { .. } => why.to_string(),
        }
    }

    fn no_path(&self, sheet: &Sheet, case: usize, why: &Unresisted) -> Refusal {
        let name = &self.joint.loads.cases[case].name.value;
        let help = match why {
            Unresisted::AboutLine { .. } => {
                "weld a second line away from the first, or let another part carry this moment and take it out of the case"
            }
            Unresisted::OnPoint { .. } | Unresisted::NoArea => {
                "give the group runs of length that can resist a moment"
            }
            Unresisted::Inaccurate { .. } => {
                "spread the runs: the group is too nearly a line for this moment"
            }
        };
        Refusal {
            clause: sheet.name.value.clone(),
            reason: format!("case {name}: {}", self.unresisted_words(why)),
            help: help.to_owned(),
            covers: sheet.covers.clone(),
            case: Some(case),
        }
    }
}

/// A check without a number, for the faults that kept it from one.
fn refusal(sheet: &Sheet, faults: &[Diagnostic]) -> Refusal {
    let help = faults.iter().flat_map(|fault| &fault.help);
    Refusal {
        clause: sheet.name.value.clone(),
        reason: once(faults.iter().map(|fault| fault.message.as_str())),
        help: once(help.map(String::as_str)),
        covers: sheet.covers.clone(),
        case: None,
    }
}

/// Takes the numbers of strength checks back where a run of the group is looked at by none of them:
/// the least margin would be that of a part of the weld.
fn refuse_unchecked(ground: &Ground<'_>, outcomes: Vec<Outcome>) -> Vec<Outcome> {
    let assessed = outcomes.iter().filter_map(|outcome| match outcome {
        Outcome::Assessed(asked) => Some(asked),
        Outcome::Refused(_) => None,
    });
    let faults = unchecked_runs(ground, assessed);
    if faults.is_empty() {
        return outcomes;
    }
    let refuse = |outcome: Outcome| match outcome {
        Outcome::Assessed(asked) if !asked.strength.is_empty() => {
            Outcome::Refused(refusal(&asked.sheet, &faults))
        }
        other => other,
    };
    outcomes.into_iter().map(refuse).collect()
}

/// A fault of the weld at its place.
fn weld_fault(fault: WeldError) -> Diagnostic {
    let told = Diagnostic::error(fault.kind.code(), fault.to_string(), &fault.place);
    match fault.kind.help() {
        Some(help) => told.help(help),
        None => told,
    }
}

/// A fault of a load's frame at its place.
fn frame_fault(fault: &FrameError) -> Diagnostic {
    let (FrameError::NotOrthonormal { place, .. } | FrameError::LeftHanded { place, .. }) = fault;
    Diagnostic::error("bad-frame", fault.to_string(), place)
        .help("write three unit vectors, square to each other, right-handed")
}

/// Texts in their order, each once, without the marks of code.
fn once<'t>(texts: impl Iterator<Item = &'t str>) -> String {
    let mut seen: Vec<String> = Vec::new();
    for text in texts {
        let text = text.replace('`', "");
        if !seen.contains(&text) {
            seen.push(text);
        }
    }
    seen.join("; ")
}

/// Refuses an exclusion of a failure path that the note does not know.
fn check_exclusions(joint: &Joint) -> Result<(), Faults> {
    let known: Vec<&str> = FailurePath::WORDS.iter().map(|(word, _)| *word).collect();
    let faults: Vec<Diagnostic> = joint
        .excluded
        .iter()
        .filter(|exclusion| !known.contains(&exclusion.path.value.as_str()))
        .map(|exclusion| {
            let message = format!("`{}` is no failure path of the note", exclusion.path.value);
            let listed: Vec<String> = known.iter().map(|word| format!("`{word}`")).collect();
            Diagnostic::error("unknown-path", message, &exclusion.path.place)
                .help(format!("paths are {}", listed.join(", ")))
        })
        .collect();
    if faults.is_empty() {
        Ok(())
    } else {
        Err(Faults(faults))
    }
}
