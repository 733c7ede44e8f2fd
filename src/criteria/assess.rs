//! Every check asked for, over all cases, runs and points: what governs.

use super::evaluate::Bench;
use super::library::Library;
use super::limit::limits;
use super::outcome::{Asked, Assessment, Governing, StrengthOutcome};
use super::resolve::{Asking, Turn};
use super::search::Search;
use super::sheet::{EndRule, Scope, Sheet, WeldKind};
use super::state::Site;
use crate::formula::Table;
use crate::joint::Joint;
use crate::solve::local::throat_planes;
use crate::solve::search::beats;
use crate::source::{Diagnostic, Faults};
use crate::weld::{End, Run, V3};
use std::collections::BTreeMap;
use std::sync::Arc;

/// What an assessment stands on: the joint, its runs, and the stress of every case.
pub struct Ground<'a> {
    /// The joint as told.
    pub joint: &'a Joint,
    /// Its runs.
    pub runs: &'a [Run],
    /// The stress on the throat in the joint frame, of a case (index), at a run (index), at a
    /// parameter along its path; linear in the loads.
    pub stress: &'a dyn Fn(usize, usize, f64) -> V3,
}

/// Evaluates every check that a joint asks for.
///
/// Convex sheets look at the ends of straight runs; arcs and all other sheets are searched along
/// the whole run, by samples and then refinement to 1e-9 of the value. Ties within 1e-9 go to file
/// order. Where the side of a toe is not told and the sheet needs it, the worse of both is taken.
/// A margin is 1/U − 1 where the demand is proportional to the loads, which is verified; else
/// λ − 1 with λ the least positive load factor that reaches the limit.
///
/// # Errors
///
/// All faults: unknown sheets (`unknown-sheet`), values (`unknown-value`, `missing-value`,
/// `wrong-kind`, `bad-quantity`, `out-of-range`, `no-variant`, `missing-leg`), no case of a level
/// that the sheet takes (`no-case-of-level`), ends that it does not take (`ends-mismatch`), runs that
/// nothing takes (`no-run-taken`, `run-not-checked`), a number that it does not give (`not-valid`,
/// `no-value`, `capacity-not-positive`), or a sheet that claims to be
/// proportional or convex and is not (`not-proportional`, `not-convex`).
pub fn assess(ground: &Ground<'_>, library: &Library) -> Result<Assessment, Faults> {
    let mut faults = Vec::new();
    let mut asked = Vec::new();
    for index in 0..ground.joint.checks.len() {
        match assess_one(ground, index, library) {
            Ok(outcome) => asked.push(outcome),
            Err(found) => faults.extend(found.0),
        }
    }
    if faults.is_empty() {
        faults.extend(unchecked_runs(ground, &asked));
    }
    if faults.is_empty() {
        Ok(Assessment { asked })
    } else {
        Err(distinct(faults))
    }
}

/// Evaluates one check that a joint asks for, by its index; runs that it leaves out are its own
/// business, see [`unchecked_runs`].
///
/// # Errors
///
/// As [`assess`], of this check.
pub fn assess_one(ground: &Ground<'_>, index: usize, library: &Library) -> Result<Asked, Faults> {
    let spec = &ground.joint.checks[index];
    let Some(sheet) = library.find(&spec.clause.value) else {
        return Err(Faults(vec![unknown_sheet(&spec.clause, library)]));
    };
    let asking = Asking {
        joint: ground.joint,
        index,
        spec,
        sheet,
    };
    one_check(ground, asking, sheet).map_err(distinct)
}

fn distinct(faults: Vec<Diagnostic>) -> Faults {
    let mut distinct: Vec<Diagnostic> = Vec::new();
    for fault in faults {
        if !distinct.contains(&fault) {
            distinct.push(fault);
        }
    }
    Faults(distinct)
}

fn unknown_sheet(clause: &crate::source::Told<String>, library: &Library) -> Diagnostic {
    let message = format!("there is no clause sheet `{}`", clause.value);
    let mut fault = Diagnostic::error("unknown-sheet", message, &clause.place);
    if let Some(near) = library.nearest(&clause.value) {
        fault = fault.help(format!("did you mean `{near}`?"));
    }
    let names: Vec<String> = library
        .sheets()
        .map(|sheet| format!("`{}`", sheet.name.value))
        .collect();
    fault.help(format!("there are {}", names.join(", ")))
}

fn one_check(
    ground: &Ground<'_>,
    asking: Asking<'_>,
    sheet: &Arc<Sheet>,
) -> Result<Asked, Vec<Diagnostic>> {
    let mut faults = asking.unknown_values();
    let (taken_runs, left_out): (Vec<usize>, Vec<usize>) =
        (0..ground.runs.len()).partition(|run| sheet.takes(&ground.runs[*run]));
    if taken_runs.is_empty() {
        faults.push(no_run_taken(ground, asking));
    }
    let (taken, not_taken) = cases(ground.joint, sheet);
    if sheet.scope == Scope::Point && taken.is_empty() {
        faults.push(no_case_of_level(ground.joint, asking));
    }
    faults.extend(
        taken_runs
            .iter()
            .flat_map(|run| wrong_ends(ground, asking, *run)),
    );
    let tables = sheet.tables(ground.joint.units.value);
    if let Some(table) = sheet
        .tables
        .iter()
        .find(|table| !tables.contains_key(&table.name.value))
    {
        let system = if ground.joint.units.value.is_inch() {
            "inches"
        } else {
            "metric lengths"
        };
        let message = format!(
            "`{}` has no table `{}` in {system}",
            sheet.name.value, table.name.value
        );
        faults.push(
            asking
                .fault("no-variant", message)
                .help("use a printing set of the clause's own system"),
        );
    }
    if !faults.is_empty() {
        return Err(faults);
    }
    let benches = benches(ground, asking, &tables, &taken_runs)?;
    let (strength, limits) = match sheet.scope {
        Scope::Point => (
            strength(ground, asking, benches, &taken).map_err(|fault| vec![fault])?,
            Vec::new(),
        ),
        Scope::Run => (Vec::new(), limits(&benches)),
    };
    let (taken, not_taken) = if sheet.scope == Scope::Point {
        (taken, not_taken)
    } else {
        Default::default()
    };
    Ok(Asked {
        index: asking.index,
        sheet: sheet.clone(),
        taken,
        not_taken,
        left_out,
        strength,
        limits,
    })
}

/// The sheet made ready for every site of the runs that it takes, run by run.
pub(super) fn benches<'a>(
    ground: &Ground<'_>,
    asking: Asking<'a>,
    tables: &'a BTreeMap<String, Table>,
    taken: &[usize],
) -> Result<Vec<Bench<'a>>, Vec<Diagnostic>> {
    let (mut benches, mut faults) = (Vec::new(), Vec::new());
    for site in taken
        .iter()
        .flat_map(|run| sites(&ground.runs[*run], *run, asking.sheet))
    {
        match Bench::new(asking, tables, ground.runs, site) {
            Ok(bench) => benches.push(bench),
            Err(fault) => faults.push(fault),
        }
    }
    if faults.is_empty() {
        Ok(benches)
    } else {
        Err(faults)
    }
}

/// The cases that a sheet takes, and the others.
fn cases(joint: &Joint, sheet: &Sheet) -> (Vec<usize>, Vec<usize>) {
    (0..joint.loads.cases.len())
        .partition(|case| sheet.levels.contains(&joint.loads.cases[*case].level.value))
}

fn no_case_of_level(joint: &Joint, asking: Asking<'_>) -> Diagnostic {
    let takes: Vec<&str> = asking
        .sheet
        .levels
        .iter()
        .map(|level| level.word())
        .collect();
    let mut has: Vec<&str> = Vec::new();
    for case in &joint.loads.cases {
        if !has.contains(&case.level.value.word()) {
            has.push(case.level.value.word());
        }
    }
    let message = format!(
        "`{}` takes cases of level {}, of which there is none",
        asking.sheet.name.value,
        takes.join(" or ")
    );
    asking
        .fault("no-case-of-level", message)
        .help(format!("the cases are of level {}", has.join(", ")))
}

fn no_run_taken(ground: &Ground<'_>, asking: Asking<'_>) -> Diagnostic {
    let kinds: Vec<&str> = asking.sheet.welds.iter().map(|kind| kind.says()).collect();
    let first = ground
        .runs
        .first()
        .map_or("no run", |run| WeldKind::of(run).says());
    let message = format!("`{}` takes no run of this group", asking.sheet.name.value);
    asking.fault("no-run-taken", message).help(format!(
        "it takes {}; the first run is {first}",
        kinds.join(" or ")
    ))
}

/// Ends of a run that the sheet does not take.
fn wrong_ends(ground: &Ground<'_>, asking: Asking<'_>, run: usize) -> Option<Diagnostic> {
    let run = &ground.runs[run];
    let allowed = &asking.sheet.ends;
    let rule = |end: &End| match end {
        End::Continuous => None,
        End::Full => Some(EndRule::Full),
        End::Stop { leg: true, .. } => Some(EndRule::LessLeg),
        End::Stop { leg: false, .. } => Some(EndRule::LessThroat),
    };
    let wrong = run
        .ends
        .iter()
        .filter_map(rule)
        .find(|rule| !allowed.is_empty() && !allowed.contains(rule))?;
    let wanted: Vec<String> = allowed
        .iter()
        .map(|rule| format!("`{}`", rule.word()))
        .collect();
    let message = format!(
        "run `{}` ends `{}`, but `{}` requires {}",
        run.name,
        wrong.word(),
        asking.sheet.name.value,
        wanted.join(" or ")
    );
    let place = &ground.joint.weld.runs[run.spec].name.place;
    Some(
        Diagnostic::error("ends-mismatch", message, place)
            .help("say what the free ends do in `ends:` of the weld"),
    )
}

/// The sites of a run: for each part in turn, for each throat plane that must be looked at.
fn sites(run: &Run, index: usize, sheet: &Sheet) -> Vec<Site> {
    let turns: &[Option<Turn>] = if sheet.each_part {
        &[Some(Turn::Attached), Some(Turn::Base)]
    } else {
        &[None]
    };
    let needs_toe = sheet
        .needs
        .iter()
        .flat_map(|need| &need.from)
        .any(|from| matches!(from, super::from::From::Point(field) if field.needs_toe()));
    let planes = if needs_toe {
        throat_planes(run, 0.0).len()
    } else {
        1
    };
    let site = |turn: Option<Turn>, plane| Site {
        run: index,
        turn,
        plane,
        assumed: planes > 1,
    };
    turns
        .iter()
        .flat_map(|turn| (0..planes).map(|plane| site(*turn, plane)))
        .collect()
}

/// The strength checks of one sheet over the cases that it takes.
fn strength(
    ground: &Ground<'_>,
    asking: Asking<'_>,
    mut benches: Vec<Bench<'_>>,
    taken: &[usize],
) -> Result<Vec<StrengthOutcome>, Diagnostic> {
    let mut turns: Vec<Option<Turn>> = Vec::new();
    for bench in &benches {
        if !turns.contains(&bench.site.turn) {
            turns.push(bench.site.turn);
        }
    }
    let mut outcomes: Vec<StrengthOutcome> = Vec::new();
    for turn in turns {
        let (of_turn, others) = benches
            .into_iter()
            .partition(|bench| bench.site.turn == turn);
        benches = others;
        let search = Search::new(ground, asking, &of_turn);
        search.verify_claims(taken[0])?;
        for (check, per_case) in search.worst_of_cases(taken)?.into_iter().enumerate() {
            let governing = worst(&per_case).clone();
            match outcomes.get_mut(check) {
                Some(known) => known.add_part(per_case, governing),
                None => outcomes.push(StrengthOutcome {
                    check,
                    by_part: turn.map(|_| governing.clone()).into_iter().collect(),
                    governing,
                    per_case,
                }),
            }
        }
    }
    Ok(outcomes)
}

/// The worst of several points; of equals the first.
fn worst(found: &[Governing]) -> &Governing {
    let mut worst = &found[0];
    for other in &found[1..] {
        if beats(other.severity(), worst.severity()) {
            worst = other;
        }
    }
    worst
}

impl StrengthOutcome {
    /// Takes in what the same check gave for the next part in turn.
    fn add_part(&mut self, per_case: Vec<Governing>, governing: Governing) {
        for (known, other) in self.per_case.iter_mut().zip(per_case) {
            if beats(other.severity(), known.severity()) {
                *known = other;
            }
        }
        if beats(governing.severity(), self.governing.severity()) {
            self.governing = governing.clone();
        }
        self.by_part.push(governing);
    }
}

/// Runs whose strength none of these checks looks at, if they look at any.
pub fn unchecked_runs<'a>(
    ground: &Ground<'_>,
    asked: impl IntoIterator<Item = &'a Asked>,
) -> Vec<Diagnostic> {
    let strength: Vec<&Asked> = asked
        .into_iter()
        .filter(|asked| asked.sheet.scope == Scope::Point)
        .collect();
    if strength.is_empty() {
        return Vec::new();
    }
    let unchecked = (0..ground.runs.len())
        .filter(|run| strength.iter().all(|asked| asked.left_out.contains(run)));
    let fault = |run: usize| {
        let run = &ground.runs[run];
        let kind = WeldKind::of(run).says();
        let message = format!(
            "run `{}` is {kind}, which no strength check asked for takes",
            run.name
        );
        Diagnostic::error(
            "run-not-checked",
            message,
            &ground.joint.weld.runs[run.spec].name.place,
        )
        .help("ask for a sheet that takes it besides")
    };
    unchecked.map(fault).collect()
}
