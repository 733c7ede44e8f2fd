//! Checks worked in full at their governing points, margins of all checks, cases, sizes.

use super::builder::{Builder, Cell, Line, Sheet, number_column, word_column};
use super::calculation::{Calculation, Outcome};
use super::doc::{Align, Column, Text};
use super::loads::{CASES_IN_NOTE, CaseValues};
use super::pictures::{DEMAND, STRESSES};
use super::stress::{CaseTerms, Spot};
use super::text::{capital, piece, plain, slug, strong, symbol};
use super::write::NoteError;
use crate::criteria::{
    Asked, From, Governing, Ground, LimitOutcome, Margin, Side, Turn, Worked, partner, work,
    work_limit,
};
use crate::formula::{
    Bound, Draft, Env, MARGIN_DECIMALS, Origin, Printed, Symbol, UTILISATION_DECIMALS, Value,
};
use crate::quantity::Dim;
use crate::solve::{Batch, Points, Regime};
use crate::weld::V3;
use std::collections::{BTreeMap, BTreeSet};

/// A strength check with its governing point and what was worked of it.
pub(super) struct Check {
    /// Index of the outcome.
    pub(super) outcome: usize,
    /// Index of the sheet's check.
    pub(super) check: usize,
    /// What governs it.
    pub(super) governing: Governing,
    /// Its steps, once worked.
    pub(super) worked: Option<Worked>,
}

/// A spot with the names that its checks ask for.
struct Wanted {
    spot: Spot,
    names: BTreeSet<String>,
}

/// What the stress of one spot was worked to.
pub(super) struct Site {
    spot: Spot,
    env: Env,
    /// f_x, f_y, f_z.
    pub(super) stress: [Value; 3],
}

impl Site {
    /// The resultant stress, if a check asked for it.
    pub(super) fn resultant(&self) -> Option<Value> {
        match self.env.names.get("point_f") {
            Some(Bound::Value(value)) => Some(*value),
            Some(Bound::Word(_)) | None => None,
        }
    }
}

/// All strength checks of a calculation, the least margin first, else in file order.
pub(super) fn ranked(calculation: &Calculation<'_>) -> Vec<Check> {
    let mut checks = Vec::new();
    for (outcome, asked) in calculation.outcomes.iter().enumerate() {
        if let Outcome::Assessed(asked) = asked {
            for strength in &asked.strength {
                let found = if strength.by_part.is_empty() {
                    std::slice::from_ref(&strength.governing)
                } else {
                    &strength.by_part[..]
                };
                checks.extend(found.iter().map(|governing| Check {
                    outcome,
                    check: strength.check,
                    governing: governing.clone(),
                    worked: None,
                }));
            }
        }
    }
    let mut first = 0;
    for (at, check) in checks.iter().enumerate() {
        if check.governing.severity() > checks[first].governing.severity() * (1.0 + 1e-9) {
            first = at;
        }
    }
    if !checks.is_empty() {
        let least = checks.remove(first);
        checks.insert(0, least);
    }
    checks
}

/// The assessed sheet of an outcome.
pub(super) fn asked<'c>(calculation: &'c Calculation<'_>, outcome: usize) -> &'c Asked {
    match &calculation.outcomes[outcome] {
        Outcome::Assessed(asked) => asked,
        Outcome::Refused(_) => unreachable!("only assessed outcomes have checks"),
    }
}

/// Name of a check: the sheet, and the check if the sheet has several.
pub(super) fn check_name(asked: &Asked, check: usize) -> String {
    let sheet = &asked.sheet;
    if sheet.checks.len() == 1 {
        sheet.name.value.clone()
    } else {
        format!("{}, {}", sheet.name.value, sheet.checks[check].name.value)
    }
}

fn spot_of(governing: &Governing) -> Spot {
    Spot {
        case: governing.case,
        run: governing.run,
        p: governing.s,
        side: governing.side,
    }
}

fn same_place(a: Spot, b: Spot) -> bool {
    a.case == b.case && a.run == b.run && (a.p - b.p).abs() < 1e-9 && a.side * b.side > 0.0
}

impl Builder<'_> {
    /// Works the stress at every governing point; gives the sites in the order of `checks`.
    pub(super) fn work_stresses(
        &mut self,
        calculation: &Calculation<'_>,
        checks: &[Check],
        cases: &mut CaseTerms,
    ) -> Result<Vec<Site>, NoteError> {
        let mut wanted: Vec<Wanted> = Vec::new();
        for check in checks {
            let spot = spot_of(&check.governing);
            let sheet = &asked(calculation, check.outcome).sheet;
            let names: BTreeSet<String> = sheet
                .needs
                .iter()
                .flat_map(|need| need.from.iter().filter_map(From::bound_name))
                .collect();
            match wanted.iter_mut().find(|known| same_place(known.spot, spot)) {
                Some(known) => known.names.extend(names),
                None => wanted.push(Wanted { spot, names }),
            }
        }
        self.part(
            "stress",
            if wanted.len() == 1 {
                "Stress at the governing point"
            } else {
                "Stress at the governing points"
            },
        );
        self.para(vec![
            self.figure_ref(1, STRESSES),
            piece(" shows the stress on the throat along the runs."),
        ]);
        self.figure(STRESSES);
        let regime = calculation.resistance.class.regime;
        let mut sites = Vec::new();
        for (index, Wanted { spot, names }) in wanted.into_iter().enumerate() {
            let words = format!(
                "{}, case {}",
                self.place_words(spot),
                self.joint.loads.cases[spot.case].name.value
            );
            self.case_at_centroid(spot.case, regime, cases)?;
            self.heading(&capital(&words));
            let (values, case_env) = cases[&spot.case].clone();
            let tag = format!("stress-{}", index + 1);
            let env = self.work_spot(&tag, spot, &values, &case_env, regime, &|name| {
                names.contains(name)
            })?;
            let stress = Self::stress_values(&env).expect("the components were worked");
            sites.push(Site { spot, env, stress });
        }
        Ok(sites)
    }

    /// Demand, capacity and utilisation of a worked check, in words: `: 399.3 against 1023 N/mm, U = 0.391`.
    pub(super) fn held_against(&self, check: &Check) -> Text {
        let Some(worked) = &check.worked else {
            return Vec::new();
        };
        let text = |value: Value| self.ledger.printed(value).text();
        let is_factor = |value: &&Value| self.ledger.get(**value).id.ends_with(".load-factor");
        if let Some(factor) = worked.steps.iter().find(is_factor) {
            return plain(&format!(
                ": its limit is reached at {} times the loads",
                text(*factor)
            ));
        }
        let unit = self.ledger.get(worked.demand).dim;
        let unit = self.joint.units.value.text(unit);
        let space = if unit.is_empty() { "" } else { " " };
        let (demand, capacity) = (text(worked.demand), text(worked.capacity));
        let mut words = plain(&format!(": {demand} against {capacity}{space}{unit}"));
        if let Some(value) = worked.utilisation {
            let up = Printed::rounded(self.ledger.get(value).value, UTILISATION_DECIMALS, true);
            words.extend([
                piece(", "),
                super::text::emph("U"),
                piece(&format!("\u{a0}=\u{a0}{}", up.text())),
            ]);
        }
        words
    }

    /// Works every check at its governing point.
    pub(super) fn work_checks(
        &mut self,
        calculation: &Calculation<'_>,
        ground: &Ground<'_>,
        checks: &mut [Check],
        sites: &[Site],
        cases: &CaseTerms,
    ) -> Result<(), NoteError> {
        self.part("margins", "Margins");
        for check in checks.iter_mut() {
            let asked = asked(calculation, check.outcome);
            let spot = spot_of(&check.governing);
            let site = sites
                .iter()
                .find(|site| same_place(site.spot, spot))
                .expect("every check has its site");
            let part = check
                .governing
                .part
                .map(|turn| format!(", {}", turn.word()))
                .unwrap_or_default();
            self.heading(&format!("{}{part}", check_name(asked, check.check)));
            let mut env = site.env.clone();
            self.twin_load(
                calculation,
                check,
                &mut env,
                cases,
                &format!(
                    "plate-{}",
                    sites
                        .iter()
                        .position(|known| std::ptr::eq(known, site))
                        .unwrap_or_default()
                        + 1
                ),
            )?;
            let number = sites
                .iter()
                .position(|known| std::ptr::eq(known, site))
                .unwrap_or_default()
                + 1;
            let turn = check.governing.part.map_or("", Turn::word);
            let prefix = slug(&format!("check-{} at-{number} {turn}", check.outcome + 1));
            let worked = work(
                &mut self.ledger,
                &env,
                ground,
                asked,
                check.check,
                &check.governing,
                &prefix,
            )?;
            for value in &worked.steps {
                self.show(*value);
            }
            check.worked = Some(worked);
        }
        Ok(())
    }

    /// The line load of both beads, where a check of the attached part needs it.
    fn twin_load(
        &mut self,
        calculation: &Calculation<'_>,
        check: &Check,
        env: &mut Env,
        cases: &CaseTerms,
        tag: &str,
    ) -> Result<(), NoteError> {
        let sheet = &asked(calculation, check.outcome).sheet;
        let needs_plate = sheet.needs.iter().any(|need| {
            need.from
                .iter()
                .filter_map(From::bound_name)
                .any(|name| name == "point_q_plate")
        });
        let governing = &check.governing;
        if !needs_plate || governing.part == Some(Turn::Base) {
            return Ok(());
        }
        let known = self.ledger.find(&format!("{tag}.q-plate"));
        if let Some(known) = known {
            env.bind("point_q_plate", known);
            return Ok(());
        }
        let Some((other, reversed)) = partner(self.runs, governing.run) else {
            return Ok(());
        };
        let p = if reversed {
            1.0 - governing.s
        } else {
            governing.s
        };
        let apart = (self.runs[other].path.point(p) - governing.position).norm()
            > 1e-9 * self.properties.size;
        let twin = if apart {
            let (values, case_env) = cases[&governing.case].clone();
            let spot = Spot {
                case: governing.case,
                run: other,
                p,
                side: governing.side,
            };
            let regime = calculation.resistance.class.regime;
            let env = self.work_spot(
                &format!("{tag}-twin"),
                spot,
                &values,
                &case_env,
                regime,
                &|_| false,
            )?;
            Self::stress_values(&env)
        } else {
            None
        };
        self.plate_load(tag, env, Some((other, twin)), governing.run)?;
        Ok(())
    }

    /// The table of margins.
    pub(super) fn margin_table(&mut self, calculation: &Calculation<'_>, checks: &[Check]) {
        let units = self.ledger.units();
        let demand_dims: BTreeSet<Dim> = checks
            .iter()
            .filter_map(|check| check.worked.as_ref())
            .map(|worked| self.ledger.get(worked.demand).dim)
            .collect();
        let one_unit = if demand_dims.len() == 1 {
            demand_dims.first().map(|dim| units.text(*dim))
        } else {
            None
        };
        let unit = one_unit.clone().unwrap_or_default();
        let head = |text: &str, align| Column {
            head: plain(text),
            unit: Vec::new(),
            align,
        };
        let mut columns = vec![
            word_column("check"),
            word_column("case"),
            word_column("place"),
            number_column(symbol(&Symbol::of("D", &[])), &unit),
            number_column(symbol(&Symbol::of("R", &[])), &unit),
        ];
        if one_unit.is_none() {
            columns.push(word_column("unit"));
        }
        columns.push(number_column(symbol(&Symbol::of("U", &[])), ""));
        columns.push(head("MS", Align::Point));
        let mut rows = Vec::new();
        for (index, check) in checks.iter().enumerate() {
            let Some(worked) = &check.worked else {
                continue;
            };
            let asked = asked(calculation, check.outcome);
            let part = check
                .governing
                .part
                .map(|turn| format!(", {}", turn.word()))
                .unwrap_or_default();
            let mut cells = vec![
                Cell::Text(plain(&format!("{}{part}", check_name(asked, check.check)))),
                Cell::Text(plain(
                    &self.joint.loads.cases[check.governing.case].name.value,
                )),
                Cell::Text(plain(&self.place_words(spot_of(&check.governing)))),
                self.cell(worked.demand),
                self.cell(worked.capacity),
            ];
            if one_unit.is_none() {
                cells.push(Cell::Text(plain(
                    &units.text(self.ledger.get(worked.demand).dim),
                )));
            }
            cells.push(worked.utilisation.map_or_else(
                || Cell::Text(plain("0")),
                |value| Cell::Rounded {
                    value,
                    decimals: UTILISATION_DECIMALS,
                    up: true,
                },
            ));
            cells.push(match (worked.margin, check.governing.margin) {
                (Some(value), _) => Cell::Rounded {
                    value,
                    decimals: MARGIN_DECIMALS,
                    up: false,
                },
                (None, Margin::FixedTermsExceed) => Cell::Text(plain("fails")),
                (None, _) => Cell::Text(plain("high")),
            });
            rows.push(Line {
                id: format!("margin-row-{}", index + 1),
                cells,
                strong: index == 0,
            });
        }
        if rows.is_empty() {
            return;
        }
        let mut caption = "Margins of all strength checks at their governing points, the least in bold: demand, capacity, \
                           utilisation rounded up, margin of safety rounded down"
            .to_owned();
        let proportional = |check: &Check| {
            asked(calculation, check.outcome).sheet.checks[check.check].proportional
        };
        if !checks.iter().all(proportional) {
            caption.push_str(
                "; where the demand is not proportional to the loads, the utilisation is one over the load factor at the limit",
            );
        }
        self.table(Sheet {
            id: "margin-table".to_owned(),
            caption: plain(&caption),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        self.levels(calculation);
    }

    /// Which cases each sheet took.
    fn levels(&mut self, calculation: &Calculation<'_>) {
        for outcome in &calculation.outcomes {
            let Outcome::Assessed(asked) = outcome else {
                continue;
            };
            if asked.not_taken.is_empty() || asked.strength.is_empty() {
                continue;
            }
            let names: Vec<&str> = asked
                .not_taken
                .iter()
                .map(|case| self.joint.loads.cases[*case].name.value.as_str())
                .collect();
            let text = format!(
                "{} takes no cases of the level stated for {}.",
                asked.sheet.name.value,
                names.join(", ")
            );
            self.para(plain(&text));
        }
    }

    /// The worst check of each case.
    pub(super) fn case_margins(&mut self, calculation: &Calculation<'_>) -> Vec<usize> {
        if calculation.outcomes.iter().any(
            |outcome| matches!(outcome, Outcome::Assessed(asked) if !asked.strength.is_empty()),
        ) {
            self.para(vec![
                self.figure_ref(1, DEMAND),
                piece(" shows utilisations along the weld."),
            ]);
            self.figure(DEMAND);
        }
        let mut of_case: BTreeMap<usize, (usize, usize, &Governing)> = BTreeMap::new();
        for (outcome, given) in calculation.outcomes.iter().enumerate() {
            let Outcome::Assessed(asked) = given else {
                continue;
            };
            for strength in &asked.strength {
                for at in &strength.per_case {
                    let found = (outcome, strength.check, at);
                    let known = of_case.entry(at.case).or_insert(found);
                    if at.severity() > known.2.severity() * (1.0 + 1e-9) {
                        *known = found;
                    }
                }
            }
        }
        let mut worst: Vec<(usize, usize, usize, &Governing)> = of_case
            .into_iter()
            .map(|(case, (outcome, check, at))| (case, outcome, check, at))
            .collect();
        worst.sort_by(|a, b| {
            b.3.severity()
                .total_cmp(&a.3.severity())
                .then(a.0.cmp(&b.0))
        });
        let order: Vec<usize> = worst.iter().map(|row| row.0).collect();
        if worst.len() < 2 {
            return order;
        }
        let level = self.shared_level();
        let mut columns = vec![word_column("case")];
        if level.is_none() {
            columns.push(word_column("level"));
        }
        columns.extend([
            word_column("check"),
            word_column("place"),
            number_column(symbol(&Symbol::of("U", &[])), ""),
            Column {
                head: plain("MS"),
                unit: Vec::new(),
                align: Align::Point,
            },
        ]);
        let total = worst.len();
        let mut rows = Vec::new();
        for (case, outcome, check, at) in worst.into_iter().take(CASES_IN_NOTE) {
            let told = self.joint.loads.cases[case].clone();
            let id = format!("worst.{}-{}", case + 1, slug(&told.name.value));
            let utilisation = self.batch_value(
                &format!("{id}.u"),
                Symbol::of("U", &[]),
                "Utilisation",
                at.utilisation,
            );
            let margin = match at.margin {
                Margin::Value(margin) => {
                    let value = self.batch_value(
                        &format!("{id}.ms"),
                        Symbol::of("MS", &[]),
                        "Margin of safety",
                        margin,
                    );
                    self.ledger.get_mut(value).signed = true;
                    Cell::Rounded {
                        value,
                        decimals: MARGIN_DECIMALS,
                        up: false,
                    }
                }
                Margin::High => Cell::Text(plain("high")),
                Margin::FixedTermsExceed => Cell::Text(plain("fails")),
            };
            let mut cells = vec![Cell::Text(plain(&told.name.value))];
            if level.is_none() {
                cells.push(Cell::Text(plain(told.level.value.word())));
            }
            cells.extend([
                Cell::Text(plain(&check_name(asked(calculation, outcome), check))),
                Cell::Text(plain(&self.place_words(spot_of(at)))),
                Cell::Rounded {
                    value: utilisation,
                    decimals: UTILISATION_DECIMALS,
                    up: true,
                },
                margin,
            ]);
            rows.push(Line {
                id,
                cells,
                strong: rows.is_empty(),
            });
        }
        let mut caption = if total > CASES_IN_NOTE {
            format!(
                "Least margin of each case, the {CASES_IN_NOTE} that rank first of {total}; all stand in cases.csv"
            )
        } else {
            let cases = match total {
                1 => "the case".to_owned(),
                _ => format!("each of the {total} cases"),
            };
            format!("Least margin of {cases}, computed at every check point")
        };
        if let Some(level) = level {
            caption.push_str(&format!("; level {level}"));
        }
        caption.push_str("; governing case in bold");
        self.table(Sheet {
            id: "case-margins".to_owned(),
            caption: plain(&caption),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        order
    }

    fn batch_value(&mut self, id: &str, symbol: Symbol, says: &str, value: f64) -> Value {
        let draft = Draft {
            id: id.to_owned(),
            symbol,
            says: says.to_owned(),
            formula: "batch evaluation over all points of the case",
            origin: Origin::Method("every case computed".to_owned()),
            dim: None,
        };
        let made = self.ledger.found(draft, value, Dim::NONE);
        self.placed.insert(made);
        made
    }

    /// Checks that gave no number, and why.
    pub(super) fn refusals(
        &mut self,
        calculation: &Calculation<'_>,
        cases: &mut CaseTerms,
    ) -> Result<(), NoteError> {
        let refused: Vec<_> = calculation
            .outcomes
            .iter()
            .filter_map(|outcome| match outcome {
                Outcome::Refused(refusal) => Some(refusal.clone()),
                Outcome::Assessed(_) => None,
            })
            .collect();
        if refused.is_empty() {
            return Ok(());
        }
        let unresisted = refused.iter().find_map(|refusal| refusal.case);
        self.part("refusals", "Checks without a number");
        let these = match refused.len() {
            1 => "this check",
            _ => "these checks",
        };
        self.para(plain(&format!(
            "For {these} mechanics or the clause gives no number, so this note gives none."
        )));
        if unresisted.is_some() {
            self.para(plain(
                "Where one case finds no resistance, the check has no least margin, and none of its other cases is printed.",
            ));
        }
        let items = refused
            .into_iter()
            .map(|refusal| {
                let mut text: Text = vec![
                    strong(&refusal.clause.clone()),
                    piece(&format!(": {}.", refusal.reason)),
                ];
                if !refusal.help.is_empty() {
                    text.push(piece(&format!(" What would help: {}.", refusal.help)));
                }
                super::layout::item("", text)
            })
            .collect();
        self.items(items);
        if let Some(case) = unresisted {
            self.case_at_centroid(case, calculation.resistance.class.regime, cases)?;
        }
        Ok(())
    }

    /// The actions of a case about the centroid, under a heading of their own, unless they are worked.
    fn case_at_centroid(
        &mut self,
        case: usize,
        regime: Regime,
        cases: &mut CaseTerms,
    ) -> Result<(), NoteError> {
        if cases.contains_key(&case) {
            return Ok(());
        }
        let name = self.joint.loads.cases[case].name.value.clone();
        self.heading(&format!("Case {name}, about the centroid"));
        let values = self.work_case(case)?;
        let tag = format!("case.{}-{}", case + 1, slug(&name));
        let env = self.case_terms(&tag, case, &values, regime)?;
        cases.insert(case, (values, env));
        Ok(())
    }

    /// Limits on sizes and lengths: each distinct one in steps, then all runs.
    pub(super) fn sizes(
        &mut self,
        calculation: &Calculation<'_>,
        ground: &Ground<'_>,
    ) -> Result<(), NoteError> {
        self.part("sizes", "Sizes and detailing");
        let mut rows = Vec::new();
        for (index, outcome) in calculation.outcomes.iter().enumerate() {
            let Outcome::Assessed(asked) = outcome else {
                continue;
            };
            let mut done: Vec<(LimitOutcome, Value, Value)> = Vec::new();
            for limit in &asked.limits {
                let known = done
                    .iter()
                    .find(|(known, ..)| same_limit(known, limit))
                    .map(|(known, value, bound)| {
                        let own = |of: &Value| self.own_size(*of, known.run, limit.run);
                        (own(value), own(bound))
                    });
                let (value, bound) = match known {
                    Some(known) => known,
                    None => {
                        if done.is_empty() {
                            self.heading(&asked.sheet.name.value);
                        }
                        let env = self.size_env(limit.run);
                        let prefix = format!("limit-{}-{}", index + 1, done.len() + 1);
                        let worked =
                            work_limit(&mut self.ledger, &env, ground, asked, limit, &prefix)?;
                        for step in &worked.steps {
                            self.show(*step);
                        }
                        done.push((limit.clone(), worked.value, worked.bound));
                        (worked.value, worked.bound)
                    }
                };
                rows.push(self.limit_row(asked, limit, value, bound, rows.len()));
            }
        }
        if rows.is_empty() {
            return Ok(());
        }
        let unit = self.joint.units.value.length();
        let columns = vec![
            word_column("limit"),
            word_column("run"),
            number_column(piece("value"), unit),
            word_column(""),
            number_column(piece("bound"), unit),
            word_column(""),
        ];
        let caption = plain("Limits on sizes and lengths, run by run");
        self.table(Sheet {
            id: "limit-table".to_owned(),
            caption,
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        Ok(())
    }

    fn limit_row(
        &mut self,
        asked: &Asked,
        limit: &LimitOutcome,
        value: Value,
        bound: Value,
        at: usize,
    ) -> Line {
        let rule = &asked.sheet.limits[limit.limit];
        let part = limit
            .part
            .map(|turn| format!(", {}", turn.word()))
            .unwrap_or_default();
        let sign = match rule.side {
            Side::AtLeast => "≥",
            Side::AtMost => "≤",
        };
        let name = format!("{}: {}{part}", asked.sheet.name.value, rule.name.value);
        let cells = vec![
            Cell::Text(plain(&name)),
            Cell::Text(plain(&self.runs[limit.run].name)),
            self.cell(value),
            Cell::Text(plain(sign)),
            self.cell(bound),
            Cell::Text(if limit.holds {
                plain("holds")
            } else {
                vec![strong("fails")]
            }),
        ];
        Line {
            id: format!("limit-row-{}", at + 1),
            cells,
            strong: false,
        }
    }

    /// The size of run `to` that stands for a size of run `from`: its own row, not that of another
    /// run of the same size. A value worked from sizes stays.
    fn own_size(&self, value: Value, from: usize, to: usize) -> Value {
        let (from, to) = (self.size_env(from), self.size_env(to));
        let named = from
            .names
            .iter()
            .find(|(_, bound)| **bound == Bound::Value(value));
        match named.and_then(|(name, _)| to.names.get(name)) {
            Some(Bound::Value(own)) => *own,
            Some(Bound::Word(_)) | None => value,
        }
    }

    /// The names of a run's sizes as sheets read them.
    fn size_env(&self, run: usize) -> Env {
        let mut env = Env::default();
        let told = if self.is_trimmed() { "L_0" } else { "L" };
        for (from, to) in [
            ("t", "run_throat"),
            ("L", "run_effective_length"),
            (told, "run_length"),
            ("leg_base", "run_leg_base"),
            ("leg_attached", "run_leg_attached"),
        ] {
            if let Some(value) = self.run_values[run].get(from) {
                env.bind(to, *value);
            }
        }
        let values = &self.run_values[run];
        if let (Some(base), Some(attached)) = (values.get("leg_base"), values.get("leg_attached"))
            && base == attached
        {
            env.bind("run_leg", *base);
        }
        env
    }

    /// Where a spot is, in words: its point number and run, or its angle on an arc.
    pub(super) fn place_words(&self, spot: Spot) -> String {
        let run = &self.runs[spot.run];
        let at: V3 = run.path.point(spot.p);
        if let (Some(point), true) = (
            self.point_at(run.told.point(spot.p)),
            spot.p <= 0.0 || spot.p >= 1.0,
        ) {
            let end = if spot.p <= 0.0 { "start" } else { "end" };
            let cut = (at - run.told.point(spot.p)).norm() > 1e-9 * self.properties.size;
            let end = if cut {
                format!("effective {end}")
            } else {
                end.to_owned()
            };
            let closed =
                (run.told.point(0.0) - run.told.point(1.0)).norm() < 1e-9 * self.properties.size;
            let end = if closed {
                "on".to_owned()
            } else {
                format!("{end} of")
            };
            return format!("point {}, {end} {}", point.number, run.name);
        }
        match &run.path {
            crate::weld::Segment::Arc { from, sweep, .. } => {
                let degrees = (from + spot.p * sweep).to_degrees();
                format!(
                    "{} at {}°",
                    run.name,
                    Printed::of(degrees, 4, 4, 1e-6).text()
                )
            }
            crate::weld::Segment::Straight { .. } => {
                let distance = (at - run.path.point(0.0)).norm();
                let size = self.properties.size;
                format!(
                    "{}, {} {} from its start",
                    run.name,
                    Printed::of(distance, 4, 4, 1e-9 * size).text(),
                    self.joint.units.value.length()
                )
            }
        }
    }

    /// The batch kernel's stress at the spot of a check.
    pub(super) fn kernel_stress(
        calculation: &Calculation<'_>,
        governing: &Governing,
    ) -> Option<V3> {
        let field = calculation.fields[governing.case].as_ref().ok()?;
        let points = Points::new(&[governing.position], field.centroid);
        Some(Batch::new(&[*field]).stress(0, &points, 0))
    }
}

/// Whether two limits have one value and one bound by one rule.
fn same_limit(a: &LimitOutcome, b: &LimitOutcome) -> bool {
    let near = |x: f64, y: f64| (x - y).abs() <= 1e-12 * x.abs().max(y.abs());
    a.limit == b.limit && a.part == b.part && near(a.value, b.value) && near(a.bound, b.bound)
}

/// A case's values as the drawing shows them.
pub(super) fn drawn(cases: &CaseTerms, case: usize) -> Option<(usize, &CaseValues)> {
    cases.get(&case).map(|(values, _)| (case, values))
}
