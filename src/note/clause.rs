//! A clause sheet as a page: what it takes and needs, its tables, its steps typeset, its checks, its limits.
//!
//! Symbols come from the sheet, formulas from the trees that notes compute with; no value stands
//! there but those that the sheet states.

use super::doc::{Align, Block, Column, Doc, Head, Item, Line, Row, Section, Step, Table, Text};
use super::text::{capital, math, piece, plain, slug};
use crate::criteria::{
    Capacity, CodeTable, Kind as SheetKind, Limit, RawRows, Rule, Sheet, Side, Strength, Validity,
};
use crate::formula::{Bound, Draft, Env, Ledger, Math, NodeKind, Origin, Printed, Symbol};
use crate::quantity::{Dim, UnitSet};
use crate::source::Told;

/// The symbols of a sheet, bound to the names that its formulas use.
struct Symbols<'a> {
    sheet: &'a Sheet,
    ledger: Ledger,
    env: Env,
}

/// A sheet as a document, for the same templates as a note.
#[must_use]
pub fn sheet_page(sheet: &Sheet) -> Doc {
    let symbols = Symbols::of(sheet);
    let sections = [
        section("What it takes", vec![taken(sheet)]),
        section("What it needs", symbols.needs()),
        section("Tables", symbols.tables()),
        section("Steps", symbols.steps()),
        section("Checks", symbols.checks()),
        section("Limits", symbols.limits()),
        section("Valid where", symbols.validity()),
        section("Assumptions", items("A", &texts(&sheet.assumptions))),
        section("Cautions", items("C", &cautions(sheet))),
    ];
    let status = sheet.source.status.word();
    Doc {
        head: Head {
            note: sheet.name.value.clone(),
            title: sheet.title.value.clone(),
            issue: None,
            particulars: vec![
                format!("Clause sheet {}", sheet.name.value),
                sheet.source.cited(),
            ],
            paper: "a4",
        },
        verdict: None,
        sections: sections
            .into_iter()
            .filter(|section| !section.blocks.is_empty())
            .collect(),
        identity: None,
        state: format!("text of the clause: {status}"),
    }
}

impl<'a> Symbols<'a> {
    fn of(sheet: &'a Sheet) -> Self {
        let units = UnitSet::NewtonMillimetre;
        // A table that the clause has for inches alone is cited all the same.
        let mut tables = sheet.tables(UnitSet::KipInch);
        tables.extend(sheet.tables(units));
        let mut symbols = Self {
            sheet,
            ledger: Ledger::new(units, 1.0, 1.0),
            env: Env {
                tables,
                ..Env::default()
            },
        };
        for need in &sheet.needs {
            let name = &need.name.value;
            if need.kind.dim().is_some() {
                symbols.bind(name, &need.symbol);
            } else {
                let word = Bound::Word(name.replace('_', " "));
                symbols.env.names.insert(name.clone(), word);
            }
        }
        for step in &sheet.steps {
            symbols.bind(&step.name.value, &step.symbol);
        }
        symbols
    }

    /// Binds a name to an entry that has its symbol; its value is never read.
    fn bind(&mut self, name: &str, symbol: &Symbol) {
        let draft = Draft {
            id: slug(name),
            symbol: symbol.clone(),
            says: String::new(),
            formula: "",
            origin: Origin::Clause(String::new()),
            dim: None,
        };
        let value = self.ledger.found(draft, 1.0, Dim::NONE);
        self.env.bind(name, value);
    }

    /// The symbol of a need or step.
    fn symbol(&self, name: &str) -> Math {
        let need = self.sheet.need(name).map(|need| &need.symbol);
        let symbol = need.or_else(|| self.sheet.step(name).map(|step| &step.symbol));
        symbol.map_or_else(
            || Math::Word(name.to_owned()),
            |symbol| Math::Symbol(symbol.clone()),
        )
    }

    fn needs(&self) -> Vec<Block> {
        let rows = self.sheet.needs.iter().map(|need| {
            let symbol = match need.kind {
                SheetKind::Word => plain(&need.name.value),
                SheetKind::Quantity(_) => vec![math(&Math::Symbol(need.symbol.clone()))],
            };
            let kind = need.kind.says();
            let kind = kind.split_once(' ').map_or(kind.as_str(), |(_, word)| word);
            row(vec![
                symbol,
                plain(&need.says),
                plain(kind),
                plain(&need.places()),
                plain(&need.limits()),
            ])
        });
        let rows: Vec<Row> = rows.collect();
        if rows.is_empty() {
            return Vec::new();
        }
        vec![Block::Table(Table {
            id: "needs".to_owned(),
            caption: plain("What the sheet needs, and the first place that gives it"),
            formulas: Vec::new(),
            columns: ["", "what it is", "kind", "from", "default, bounds"]
                .map(column)
                .into(),
            rows,
            foot: None,
            uses: Vec::new(),
        })]
    }

    fn tables(&self) -> Vec<Block> {
        let of = |table: &CodeTable| tables(table, &self.sheet.source.document);
        self.sheet.tables.iter().flat_map(of).collect()
    }

    fn steps(&self) -> Vec<Block> {
        let step = |(at, rule): (usize, &Rule)| {
            let equation = self.ledger.rule(&self.env, &rule.symbol, &rule.node);
            let lines = equation.lines.into_iter().map(|line| Line {
                typst: line.typst,
                words: line.words,
                continued: line.continued,
            });
            self.block(
                at,
                &rule.name.value,
                &rule.says,
                lines.collect(),
                equation.latex,
            )
        };
        self.sheet.steps.iter().enumerate().map(step).collect()
    }

    fn checks(&self) -> Vec<Block> {
        let check = |(at, check): (usize, &Strength)| {
            let capacity = match &check.capacity {
                Capacity::Name(name) => self.symbol(name),
                Capacity::Number(text, value) => Math::plain(Printed::typed(text, *value)),
            };
            let relation = relation("<=", self.symbol(&check.demand), capacity);
            let margin = if check.proportional {
                ""
            } else {
                "; the margin is a load factor less 1, since the demand is not proportional to the loads"
            };
            let says = format!("{}: {}{margin}", capital(&check.name.value), check.says);
            self.compared(
                self.sheet.steps.len() + at,
                &check.name.value,
                &says,
                &relation,
            )
        };
        self.sheet.checks.iter().enumerate().map(check).collect()
    }

    fn limits(&self) -> Vec<Block> {
        let limit = |(at, limit): (usize, &Limit)| {
            let sign = match limit.side {
                Side::AtLeast => ">=",
                Side::AtMost => "<=",
            };
            let relation = relation(sign, self.symbol(&limit.value), self.symbol(&limit.bound));
            let says = format!("{}: {}", capital(&limit.name.value), limit.says);
            self.compared(
                self.sheet.steps.len() + at,
                &limit.name.value,
                &says,
                &relation,
            )
        };
        self.sheet.limits.iter().enumerate().map(limit).collect()
    }

    fn validity(&self) -> Vec<Block> {
        let entry = |validity: &Validity| {
            let mut text = Text::new();
            if let NodeKind::When(branches) = &validity.node.kind
                && let Some(condition) = branches.first().and_then(|b| b.condition.as_ref())
            {
                text.push(math(&self.ledger.condition(&self.env, condition)));
                text.push(piece(": "));
            }
            text.push(piece(&validity.says));
            text
        };
        items(
            "V",
            &self.sheet.validity.iter().map(entry).collect::<Vec<_>>(),
        )
    }

    fn compared(&self, at: usize, name: &str, says: &str, relation: &Math) -> Block {
        let line = Line {
            typst: relation.typst(),
            words: relation.words(),
            continued: false,
        };
        self.block(
            at,
            &format!("compared {name}"),
            says,
            vec![line],
            relation.latex(),
        )
    }

    fn block(&self, at: usize, name: &str, says: &str, lines: Vec<Line>, latex: String) -> Block {
        Block::Step(Step {
            id: format!("{}.{}", at + 1, slug(name)),
            no: (at + 1).to_string(),
            says: plain(&capital(says)),
            lines,
            latex,
            source: vec![plain(&self.sheet.source.cited())],
            mark: None,
            uses: Vec::new(),
        })
    }
}

fn relation(sign: &'static str, left: Math, right: Math) -> Math {
    Math::Relation(sign, Box::new(left), Box::new(right))
}

fn section(title: &str, blocks: Vec<Block>) -> Section {
    Section {
        title: title.to_owned(),
        id: slug(title),
        blocks,
    }
}

fn taken(sheet: &Sheet) -> Block {
    let covers: Vec<&str> = sheet.covers.iter().map(|path| path.word()).collect();
    let says = format!(
        "{}. It covers the failure {} {}.",
        capital(&sheet.takes_what()),
        if covers.len() == 1 { "path" } else { "paths" },
        covers.join(", ")
    );
    Block::Para { text: plain(&says) }
}

fn column(head: &str) -> Column {
    Column {
        head: plain(head),
        unit: Text::new(),
        align: Align::Left,
    }
}

fn row(cells: Vec<Text>) -> Row {
    Row {
        cells,
        strong: false,
        id: None,
    }
}

fn texts(told: &[Told<String>]) -> Vec<Text> {
    told.iter().map(|told| plain(&told.value)).collect()
}

fn cautions(sheet: &Sheet) -> Vec<Text> {
    let mut all = texts(&sheet.cautions);
    all.extend(
        sheet
            .mark()
            .map(|mark| plain(&format!("To be verified: {mark}."))),
    );
    all
}

fn items(letter: &str, texts: &[Text]) -> Vec<Block> {
    if texts.is_empty() {
        return Vec::new();
    }
    let item = |(at, text): (usize, &Text)| Item {
        label: format!("{letter}{}", at + 1),
        text: text.clone(),
        mark: None,
        source: None,
    };
    vec![Block::Items {
        items: texts.iter().enumerate().map(item).collect(),
    }]
}

/// A table of the clause: one with both systems of units, or one for each.
fn tables(table: &CodeTable, document: &str) -> Vec<Block> {
    let variants = [("inch", &table.rows.inch), ("metric", &table.rows.metric)];
    let same = table.rows.inch == table.rows.metric;
    let told = variants.into_iter().skip(usize::from(same));
    let block = |(system, rows): (&str, &Option<RawRows>)| {
        let rows = rows.as_ref()?;
        let mut head = format!("{} of {document}", table.cited);
        if !same {
            head += &format!(", {system}");
        }
        Some(Block::Table(Table {
            id: format!("table-{}-{system}", slug(&table.name.value)),
            caption: plain(&capital(&head)),
            formulas: Vec::new(),
            columns: vec![column("for"), column("value")],
            rows: rows
                .iter()
                .map(|(key, value)| row(vec![plain(&key.value), plain(&value.value)]))
                .collect(),
            foot: None,
            uses: Vec::new(),
        }))
    };
    told.filter_map(block).collect()
}
