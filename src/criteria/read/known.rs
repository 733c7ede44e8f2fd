//! The names of a sheet while it is read: their dimensions, and whether anything uses them.

use crate::formula::{FormulaError, Look, Node, Problem, Table, dimension, parse};
use crate::quantity::{Dim, UnitSet};
use crate::source::{Diagnostic, FaultBag, Item, Place, Told};
use std::collections::{BTreeMap, BTreeSet};

/// Words of the formula language that are no names.
const RESERVED: [&str; 13] = [
    "pi",
    "sqrt",
    "sin",
    "cos",
    "tan",
    "abs",
    "atan2",
    "min",
    "max",
    "sum",
    "lookup",
    "when",
    "otherwise",
];

/// What a name of a sheet is.
#[derive(Clone, Debug)]
struct Name {
    /// Its dimension; `None` for a word.
    dim: Option<Dim>,
    place: Place,
    used: bool,
}

/// The names declared so far.
#[derive(Clone, Debug, Default)]
pub(super) struct Known {
    names: BTreeMap<String, Name>,
    tables: BTreeMap<String, (Table, Place, bool)>,
    symbols: BTreeMap<String, String>,
    /// Names and tables whose own entries are at fault: what uses them is not blamed for it.
    broken: BTreeSet<String>,
}

impl Known {
    /// Declares a need or step; a name that exists or cannot be one is a fault.
    pub(super) fn declare(
        &mut self,
        name: &Told<String>,
        dim: Option<Dim>,
        faults: &FaultBag,
    ) -> Option<()> {
        self.check_name(name, faults)?;
        let entry = Name {
            dim,
            place: name.place.clone(),
            used: false,
        };
        self.names.insert(name.value.clone(), entry);
        Some(())
    }

    /// Declares a table.
    pub(super) fn declare_table(
        &mut self,
        name: &Told<String>,
        table: Table,
        faults: &FaultBag,
    ) -> Option<()> {
        if self.tables.contains_key(&name.value) {
            let message = format!("`{}` stands twice", name.value);
            return faults.refuse(Diagnostic::error("duplicate-name", message, &name.place));
        }
        if !super::super::from::is_name(&name.value) {
            return faults.refuse(bad_name(name));
        }
        self.tables
            .insert(name.value.clone(), (table, name.place.clone(), false));
        Some(())
    }

    fn check_name(&self, name: &Told<String>, faults: &FaultBag) -> Option<()> {
        if !super::super::from::is_name(&name.value) || RESERVED.contains(&name.value.as_str()) {
            return faults.refuse(bad_name(name));
        }
        if self.names.contains_key(&name.value) {
            let message = format!("`{}` stands twice in this sheet", name.value);
            return faults.refuse(Diagnostic::error("duplicate-name", message, &name.place));
        }
        Some(())
    }

    /// Notes that the entry of a name is at fault, and passes on what was read of it.
    pub(super) fn noted<T>(&mut self, key: &Told<String>, read: Option<T>) -> Option<T> {
        if read.is_none() {
            self.broken.insert(key.value.clone());
        }
        read
    }

    /// Declares the symbol of a name; two names with one symbol would print alike.
    pub(super) fn declare_symbol(
        &mut self,
        plain: String,
        name: &str,
        item: Item<'_>,
    ) -> Option<()> {
        match self.symbols.insert(plain, name.to_owned()) {
            Some(other) => item.refuse(
                "duplicate-symbol",
                format!("`{other}` has this symbol already"),
            ),
            None => Some(()),
        }
    }

    /// The dimension of a quantity that a check or limit names.
    pub(super) fn quantity(&mut self, item: Item<'_>) -> Option<(Told<String>, Dim)> {
        let name = item.raw()?;
        if self.broken.contains(&name.value) {
            return None;
        }
        let known: Vec<(&str, ())> = self
            .names
            .iter()
            .filter(|(_, known)| known.dim.is_some())
            .map(|(name, _)| (name.as_str(), ()))
            .collect();
        item.word(&known)?;
        let entry = self.names.get_mut(&name.value)?;
        entry.used = true;
        entry.dim.map(|dim| (name, dim))
    }

    /// Reads a formula: its text, its tree and its dimension. `wrap` puts text around it before it
    /// is parsed, such as the choice around a condition.
    pub(super) fn formula(
        &mut self,
        item: Item<'_>,
        wrap: [&str; 2],
    ) -> Option<(Told<String>, String, Node, Dim)> {
        let told = item.raw()?;
        let text = format!("{}{}{}", wrap[0], told.value, wrap[1]);
        let parsed = parse(&text);
        if parsed.as_ref().is_ok_and(|node| self.uses_broken(node)) {
            return None;
        }
        let read = parsed.and_then(|node| dimension(&node, &text, self).map(|dim| (node, dim)));
        match read {
            Ok((node, dim)) => {
                self.mark_used(&node);
                Some((told, text, node, dim))
            }
            Err(mut error) => {
                // What is wrapped around the user's text is none of it.
                if let Problem::Wanted { found, .. } = &mut error.problem
                    && error.span.start >= wrap[0].len() + told.value.len()
                {
                    *found = None;
                }
                item.faults.refuse(fault(&error, &told, wrap[0].len()))
            }
        }
    }

    fn uses_broken(&self, node: &Node) -> bool {
        let mut found = false;
        node.walk(&mut |node| match &node.kind {
            crate::formula::NodeKind::Name(name)
            | crate::formula::NodeKind::Lookup { table: name, .. } => {
                found = found || self.broken.contains(name);
            }
            _ => {}
        });
        found
    }

    fn mark_used(&mut self, node: &Node) {
        node.walk(&mut |node| match &node.kind {
            crate::formula::NodeKind::Name(name) => {
                if let Some(known) = self.names.get_mut(name) {
                    known.used = true;
                }
            }
            crate::formula::NodeKind::Lookup { table, .. } => {
                if let Some(known) = self.tables.get_mut(table) {
                    known.2 = true;
                }
            }
            _ => {}
        });
    }

    /// Refuses what nothing uses: a value asked of the user for nothing is a slip of the sheet.
    pub(super) fn refuse_unused(&self, faults: &FaultBag) {
        if faults.has_errors() {
            return;
        }
        let names = self
            .names
            .iter()
            .filter(|(_, known)| !known.used)
            .map(|(name, known)| (name, &known.place));
        let tables = self
            .tables
            .iter()
            .filter(|(_, known)| !known.2)
            .map(|(name, known)| (name, &known.1));
        for (name, place) in names.chain(tables) {
            let message = format!("nothing uses `{name}`");
            faults.push(
                Diagnostic::error("unused-name", message, place)
                    .help("use it in a step or check, or take it out"),
            );
        }
    }
}

fn bad_name(name: &Told<String>) -> Diagnostic {
    let message = format!("`{}` cannot be a name in formulas", name.value);
    Diagnostic::error("bad-name", message, &name.place)
        .help("a letter, then letters, digits and `_`; no name of a function")
}

/// The fault of a formula, at its place inside the scalar where the text stands there as it is.
pub(super) fn fault(error: &FormulaError, told: &Told<String>, shift: usize) -> Diagnostic {
    let code = match &error.problem {
        Problem::UnknownName { .. } => "unknown-name",
        Problem::Mismatch { .. }
        | Problem::Kind { .. }
        | Problem::Declared { .. }
        | Problem::Exponent => "formula-dimension",
        Problem::Unexpected(_)
        | Problem::Wanted { .. }
        | Problem::Number(_)
        | Problem::Unit(_)
        | Problem::TooDeep
        | Problem::TooLong
        | Problem::OneOperand(_)
        | Problem::NestedSum
        | Problem::UnknownFunction(_)
        | Problem::NoBranch
        | Problem::OutsideTable { .. }
        | Problem::NotFinite
        | Problem::Unsettled => "formula-syntax",
    };
    let raw = told
        .place
        .file
        .text
        .get(told.place.start..told.place.end)
        .unwrap_or_default();
    let place = match raw.find(&told.value) {
        Some(at) => {
            let clamp = |offset: usize| {
                told.place.start + at + offset.saturating_sub(shift).min(told.value.len())
            };
            Place {
                start: clamp(error.span.start),
                end: clamp(error.span.end),
                ..told.place.clone()
            }
        }
        None => told.place.clone(),
    };
    Diagnostic::error(code, error.problem.to_string(), &place)
}

impl Look for Known {
    fn units(&self) -> UnitSet {
        UnitSet::NewtonMillimetre
    }

    fn dim(&self, name: &str, _: Option<&str>) -> Option<Dim> {
        self.names.get(name)?.dim
    }

    fn value(&self, _: &str, _: Option<(&str, usize)>) -> Option<f64> {
        None
    }

    fn word(&self, name: &str) -> Option<&str> {
        self.names
            .get(name)
            .filter(|known| known.dim.is_none())
            .map(|_| "")
    }

    fn members(&self, _: &str) -> Option<usize> {
        None
    }

    fn table(&self, name: &str) -> Option<&Table> {
        self.tables.get(name).map(|known| &known.0)
    }

    fn known(&self) -> Vec<&str> {
        self.names
            .keys()
            .chain(self.tables.keys())
            .map(String::as_str)
            .collect()
    }
}
