//! One sheet at one site: formulas evaluated at a point, or over many points at once.

use super::from::PointField;
use super::resolve::{Asking, Resolved};
use super::sheet::Capacity;
use super::state::Site;
use crate::formula::{FormulaError, Look, Program, Table, evaluate};
use crate::quantity::{Dim, UnitSet};
use crate::source::Diagnostic;
use crate::weld::Run;
use std::collections::BTreeMap;

/// Names with their values: those fixed at the site, and those of one point.
#[derive(Clone, Debug)]
pub(super) struct Names<'a> {
    asking: Asking<'a>,
    tables: &'a BTreeMap<String, Table>,
    pub(super) values: BTreeMap<&'a str, f64>,
    pub(super) words: BTreeMap<&'a str, String>,
}

impl Look for Names<'_> {
    fn units(&self) -> UnitSet {
        self.asking.units()
    }

    fn dim(&self, name: &str, _: Option<&str>) -> Option<Dim> {
        self.asking.sheet.dim(name)
    }

    fn value(&self, name: &str, _: Option<(&str, usize)>) -> Option<f64> {
        self.values.get(name).copied()
    }

    fn word(&self, name: &str) -> Option<&str> {
        self.words.get(name).map(String::as_str)
    }

    fn members(&self, _: &str) -> Option<usize> {
        None
    }

    fn table(&self, name: &str) -> Option<&Table> {
        self.tables.get(name)
    }

    fn known(&self) -> Vec<&str> {
        self.values
            .keys()
            .chain(self.words.keys())
            .copied()
            .collect()
    }
}

/// A compiled step or condition.
#[derive(Clone, Debug)]
struct Stage<'a> {
    name: &'a str,
    program: Program,
}

/// A sheet made ready for one site.
#[derive(Clone, Debug)]
pub(super) struct Bench<'a> {
    pub(super) asking: Asking<'a>,
    pub(super) site: Site,
    /// The names that vary, with what they are.
    inputs: Vec<(&'a str, PointField)>,
    pub(super) fields: Vec<PointField>,
    stages: Vec<Stage<'a>>,
    conditions: Vec<(usize, Program)>,
    pub(super) fixed: Names<'a>,
}

/// A demand and its capacity.
#[derive(Clone, Copy, PartialEq, Debug)]
pub(super) struct Pair {
    pub(super) demand: f64,
    pub(super) capacity: f64,
}

impl<'a> Bench<'a> {
    /// Resolves every need at the site, evaluates what does not vary, compiles what does.
    pub(super) fn new(
        asking: Asking<'a>,
        tables: &'a BTreeMap<String, Table>,
        runs: &[Run],
        site: Site,
    ) -> Result<Self, Diagnostic> {
        let run = &runs[site.run];
        let fixed = Names {
            asking,
            tables,
            values: BTreeMap::new(),
            words: BTreeMap::new(),
        };
        let mut bench = Self {
            asking,
            site,
            inputs: Vec::new(),
            fields: Vec::new(),
            stages: Vec::new(),
            conditions: Vec::new(),
            fixed,
        };
        for need in &asking.sheet.needs {
            let name = need.name.value.as_str();
            match asking.resolve(need, run, site.turn)? {
                Resolved::Word(word) => {
                    bench.fixed.words.insert(name, word);
                }
                Resolved::Point(field) => {
                    bench.inputs.push((name, field));
                    bench.fields.push(field);
                }
                fixed @ (Resolved::Run(..) | Resolved::One(_) | Resolved::Extreme { .. }) => {
                    bench
                        .fixed
                        .values
                        .insert(name, fixed.value().expect("it is a quantity"));
                }
            }
        }
        bench.prepare(run)?;
        Ok(bench)
    }

    fn prepare(&mut self, run: &Run) -> Result<(), Diagnostic> {
        let sheet = self.asking.sheet;
        let at = |error: FormulaError| fault(&self.asking, &error, &format!("run `{}`", run.name));
        let mut varying: Vec<&str> = self.inputs.iter().map(|input| input.0).collect();
        for step in &sheet.steps {
            let (name, text) = (step.name.value.as_str(), step.formula.value.as_str());
            if step.node.names().iter().any(|name| varying.contains(name)) {
                let program =
                    Program::compile(&step.node, text, &varying, &self.fixed).map_err(at)?;
                self.stages.push(Stage { name, program });
                varying.push(name);
            } else {
                let value = evaluate(&step.node, text, &self.fixed).map_err(at)?;
                self.fixed.values.insert(name, value);
            }
        }
        for (index, condition) in sheet.validity.iter().enumerate() {
            if condition
                .node
                .names()
                .iter()
                .any(|name| varying.contains(name))
            {
                let program =
                    Program::compile(&condition.node, &condition.text, &varying, &self.fixed)
                        .map_err(at)?;
                self.conditions.push((index, program));
            } else if evaluate(&condition.node, &condition.text, &self.fixed).map_err(at)? < 0.5 {
                return Err(self.invalid(index, &format!("run `{}`", run.name)));
            }
        }
        Ok(())
    }

    /// The fault of a condition of validity that does not hold.
    fn invalid(&self, index: usize, place: &str) -> Diagnostic {
        let condition = &self.asking.sheet.validity[index];
        let message = format!(
            "`{}` gives no number for {place}: {}",
            self.asking.sheet.name.value, condition.says
        );
        let used: Vec<String> = condition
            .node
            .names()
            .iter()
            .filter_map(|name| Some(format!("{name} = {}", self.fixed.values.get(name)?)))
            .collect();
        let found = if used.is_empty() {
            String::new()
        } else {
            format!("; here {}", used.join(", "))
        };
        self.asking
            .fault("not-valid", message)
            .help(format!("it asks that {}{found}", condition.holds.value))
    }

    /// Demand and capacity of every check at one point, by the single evaluator.
    pub(super) fn at_point(&self, inputs: &[f64]) -> Result<Vec<Pair>, FormulaError> {
        let names = self.names_at(inputs)?;
        let value = |name: &str| names.values.get(name).copied().unwrap_or(f64::NAN);
        Ok(self.pairs(value))
    }

    /// Every name at one point, by the single evaluator.
    fn names_at(&self, inputs: &[f64]) -> Result<Names<'a>, FormulaError> {
        let mut names = self.fixed.clone();
        for ((name, _), value) in self.inputs.iter().zip(inputs) {
            names.values.insert(name, *value);
        }
        for step in &self.asking.sheet.steps {
            if !names.values.contains_key(step.name.value.as_str()) {
                let value = evaluate(&step.node, &step.formula.value, &names)?;
                names.values.insert(&step.name.value, value);
            }
        }
        Ok(names)
    }

    fn pairs(&self, value: impl Fn(&str) -> f64) -> Vec<Pair> {
        let capacity = |capacity: &Capacity| match capacity {
            Capacity::Name(name) => value(name),
            Capacity::Number(_, number) => *number,
        };
        let pair = |check: &super::sheet::Strength| Pair {
            demand: value(&check.demand),
            capacity: capacity(&check.capacity),
        };
        self.asking.sheet.checks.iter().map(pair).collect()
    }

    /// Demand and capacity of every check at `count` points, by the batch program.
    ///
    /// `columns[k]` is the varying input `k` at every point. A number that does not exist is NaN.
    pub(super) fn at_points(&self, columns: &[Vec<f64>], count: usize) -> Batch<'a> {
        let mut all: Vec<(&'a str, Vec<f64>)> = self
            .inputs
            .iter()
            .zip(columns)
            .map(|(input, column)| (input.0, column.clone()))
            .collect();
        for stage in &self.stages {
            let inputs: Vec<&[f64]> = all.iter().map(|(_, column)| column.as_slice()).collect();
            let out = stage.program.run(&inputs, count);
            all.push((stage.name, out));
        }
        let inputs: Vec<&[f64]> = all.iter().map(|(_, column)| column.as_slice()).collect();
        let broken = self
            .conditions
            .iter()
            .flat_map(|(index, program)| {
                let out = program.run(&inputs, count);
                // A condition that has no value does not hold.
                out.iter()
                    .position(|held| held.is_nan() || *held < 0.5)
                    .map(|point| (*index, point))
            })
            .next();
        Batch {
            columns: all,
            broken,
        }
    }

    /// Demand and capacity of every check over a batch.
    pub(super) fn of_batch<'b>(&self, batch: &'b Batch<'_>) -> Vec<[Column<'b>; 2]> {
        let value = |name: &str| {
            let column = batch.columns.iter().find(|(known, _)| *known == name);
            match column {
                Some((_, column)) => Column::Each(column),
                None => Column::All(self.fixed.values.get(name).copied().unwrap_or(f64::NAN)),
            }
        };
        let capacity = |capacity: &Capacity| match capacity {
            Capacity::Name(name) => value(name),
            Capacity::Number(_, number) => Column::All(*number),
        };
        self.asking
            .sheet
            .checks
            .iter()
            .map(|check| [value(&check.demand), capacity(&check.capacity)])
            .collect()
    }

    /// The fault of a broken condition at a point in words.
    pub(super) fn broken(&self, condition: usize, place: &str) -> Diagnostic {
        self.invalid(condition, place)
    }
}

/// One number for every point of a batch, or the same for all.
#[derive(Clone, Copy, Debug)]
pub(super) enum Column<'b> {
    All(f64),
    Each(&'b [f64]),
}

impl Column<'_> {
    /// The number of one point.
    pub(super) fn at(self, point: usize) -> f64 {
        match self {
            Self::All(value) => value,
            Self::Each(column) => column[point],
        }
    }
}

/// Columns of numbers, one for each varying name.
#[derive(Clone, Debug)]
pub(super) struct Batch<'a> {
    columns: Vec<(&'a str, Vec<f64>)>,
    /// A condition that some point breaks: its index and the point.
    pub(super) broken: Option<(usize, usize)>,
}

/// The fault of a formula that has no value in a place told in words.
pub(super) fn fault(asking: &Asking<'_>, error: &FormulaError, place: &str) -> Diagnostic {
    let message = format!(
        "`{}` gives no number for {place}: {}",
        asking.sheet.name.value, error.problem
    );
    asking
        .fault("no-value", message)
        .help(format!("in its formula `{}`", error.text))
}
