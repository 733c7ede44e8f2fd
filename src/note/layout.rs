//! From the note under construction to the document: settles digits, numbers steps, fills cells.

use super::builder::{Builder, Cell, Line, Piece, Sheet};
use super::doc::{Block, Item, Row, Section, Step, Table, Text};
use super::powers::powers;
use super::text::{number, piece, plain};
use crate::formula::{FormulaError, Kind, Ledger, Origin, Printed, Value};
use crate::quantity::Dim;
use crate::source::Place;

impl Builder<'_> {
    /// Gives every value that a shown line uses a place: what stands nowhere yet is listed in `part`.
    pub(super) fn place_the_rest(&mut self, part: &str) {
        let mut open: Vec<Value> = self.placed.iter().copied().collect();
        let mut missing: Vec<Value> = Vec::new();
        while let Some(value) = open.pop() {
            for used in self.ledger.uses(value) {
                if self.placed.insert(used) {
                    missing.push(used);
                    open.push(used);
                }
            }
        }
        // Inputs in another unit are echoed and converted on a line of their own.
        missing.sort_unstable();
        if let Some(part) = self.parts.iter_mut().find(|known| known.id == part) {
            part.pieces.extend(missing.into_iter().map(Piece::Step));
        }
    }

    /// A conversion stands in a cell as its result only: list its line in `part` as well.
    pub(super) fn converted_in_cells(&self) -> Vec<Value> {
        let mut found = Vec::new();
        for piece in self.parts.iter().flat_map(|part| &part.pieces) {
            if let Piece::Table(sheet) = piece {
                for cell in sheet
                    .rows
                    .iter()
                    .chain(&sheet.foot)
                    .flat_map(|row| &row.cells)
                {
                    if let Cell::Own(value) = cell
                        && matches!(self.ledger.get(*value).kind, Kind::Converted { .. })
                        && !found.contains(value)
                    {
                        found.push(*value);
                    }
                }
            }
        }
        found
    }

    /// Moves the home of values from their cells to steps of `part`.
    pub(super) fn show_conversions(&mut self, part: &str) {
        let converted = self.converted_in_cells();
        if converted.is_empty() {
            return;
        }
        for piece in self.parts.iter_mut().flat_map(|part| &mut part.pieces) {
            if let Piece::Table(sheet) = piece {
                for cell in sheet
                    .rows
                    .iter_mut()
                    .chain(&mut sheet.foot)
                    .flat_map(|row| &mut row.cells)
                {
                    if let Cell::Own(value) = cell
                        && converted.contains(value)
                    {
                        *cell = Cell::Linked(*value);
                    }
                }
            }
        }
        if let Some(part) = self.parts.iter_mut().find(|known| known.id == part) {
            part.pieces.extend(converted.into_iter().map(Piece::Step));
        }
    }

    /// Settles the digits and numbers everything in print order.
    ///
    /// # Errors
    ///
    /// [`FormulaError`] if the digits do not settle.
    pub(super) fn settle_and_number(&mut self) -> Result<(), FormulaError> {
        self.parts.retain(|part| !part.pieces.is_empty());
        self.ledger.settle()?;
        let (mut steps, mut tables) = (0, 0);
        let pieces: Vec<&Piece> = self.parts.iter().flat_map(|part| &part.pieces).collect();
        for piece in pieces {
            match piece {
                Piece::Block(_) => {}
                Piece::Step(value) => {
                    steps += 1;
                    self.ledger.get_mut(*value).no = steps.to_string();
                }
                Piece::Table(sheet) => {
                    tables += 1;
                    for row in sheet.rows.iter().chain(&sheet.foot) {
                        for cell in &row.cells {
                            if let Cell::Own(value) = cell {
                                let entry = self.ledger.get_mut(*value);
                                entry.no = format!("table {tables}");
                                entry.anchor.clone_from(&row.id);
                            }
                        }
                    }
                }
            }
        }
        Ok(())
    }

    /// The sections of the document.
    pub(super) fn sections(&mut self) -> Vec<Section> {
        let parts = std::mem::take(&mut self.parts);
        parts
            .into_iter()
            .map(|part| {
                let blocks = part
                    .pieces
                    .into_iter()
                    .map(|piece| match piece {
                        Piece::Block(block) => block,
                        Piece::Step(value) => Block::Step(self.step_block(value)),
                        Piece::Table(sheet) => Block::Table(self.table_block(sheet)),
                    })
                    .collect();
                Section {
                    title: part.title,
                    id: part.id,
                    blocks,
                }
            })
            .collect()
    }

    fn step_block(&self, value: Value) -> Step {
        let entry = self.ledger.get(value);
        let equation = self.ledger.equation(value);
        let mut says = plain(&super::text::capital(&entry.says));
        if let Kind::Found { method } = &entry.kind {
            says.push(piece(&format!(" ({method})")));
        }
        let uses = self.ledger.uses(value);
        let mut source = vec![plain(&in_margin(&entry.origin))];
        source.extend(self.used_lines(&uses));
        let mut anchors: Vec<(String, String)> = Vec::new();
        for used in &uses {
            let used = self.ledger.get(*used);
            let pair = (used.anchor.clone(), used.no.clone());
            let same_table =
                pair.1.starts_with("table") && anchors.iter().any(|known| known.1 == pair.1);
            if !same_table && !anchors.contains(&pair) {
                anchors.push(pair);
            }
        }
        Step {
            id: entry.anchor.clone(),
            no: entry.no.clone(),
            says,
            lines: equation
                .lines
                .into_iter()
                .map(|line| super::doc::Line {
                    typst: line.typst,
                    words: line.words,
                    continued: line.continued,
                })
                .collect(),
            latex: equation.latex,
            source,
            mark: self.is_open(value).then(|| "to be verified".to_owned()),
            uses: anchors,
        }
    }

    /// Whether a line is to be verified: by itself, or as a utilisation or margin that rests on such.
    fn is_open(&self, value: Value) -> bool {
        let entry = self.ledger.get(value);
        let result = matches!(entry.symbol.plain().as_str(), "U" | "MS");
        let assumed = || {
            let told = &self.joint.assumptions;
            told.iter().any(|told| told.to_be_verified) || !self.free_gaps().is_empty()
        };
        entry.mark.is_some()
            || (result && (assumed() || !self.ledger.marks_behind(value).is_empty()))
    }

    /// Everything still to be verified, with the numbers of the lines that carry it.
    pub(super) fn open_items(&self) -> Vec<(String, Vec<String>)> {
        let mut items: Vec<(String, Vec<String>)> = Vec::new();
        for value in self.ledger.values() {
            let entry = self.ledger.get(value);
            let Some(mark) = &entry.mark else { continue };
            if entry.no.is_empty() {
                continue;
            }
            match items.iter_mut().find(|(known, _)| known == mark) {
                Some((_, numbers)) if !numbers.contains(&entry.no) => {
                    numbers.push(entry.no.clone())
                }
                Some(_) => {}
                None => items.push((mark.clone(), vec![entry.no.clone()])),
            }
        }
        items
    }

    /// Where the numbers of a line come from: `steps 5, 7–9` and `tables 1, 2`.
    fn used_lines(&self, uses: &[Value]) -> Vec<Text> {
        let numbers = uses.iter().map(|used| self.ledger.get(*used).no.as_str());
        steps_and_tables(numbers).map(|text| plain(&text)).collect()
    }

    fn table_block(&self, sheet: Sheet) -> Table {
        let powers = powers(&self.ledger, &sheet);
        let uses = self.steps_behind(&sheet);
        let row = |line| self.row(line, &powers);
        let mut columns = sheet.columns;
        for (column, power) in columns.iter_mut().zip(&powers) {
            if let Some(power) = power {
                let text = Printed::power_text(*power);
                column.unit.insert(0, piece(&format!("{text} ")));
            }
        }
        Table {
            id: sheet.id,
            caption: sheet.caption,
            formulas: sheet.formulas,
            columns,
            rows: sheet.rows.into_iter().map(row).collect(),
            foot: sheet.foot.map(row),
            uses,
        }
    }

    /// The steps that the cells of a table take their numbers from, each once.
    fn steps_behind(&self, sheet: &Sheet) -> Vec<String> {
        let lines = sheet.rows.iter().chain(&sheet.foot);
        let mut found: Vec<String> = Vec::new();
        for cell in lines.flat_map(|line| &line.cells) {
            let values = match cell {
                Cell::Own(value) => self.ledger.uses(*value),
                Cell::Linked(value) | Cell::Rounded { value, .. } => vec![*value],
                Cell::Text(_) => Vec::new(),
            };
            for value in values {
                let entry = self.ledger.get(value);
                let is_step = !entry.no.is_empty() && !entry.no.starts_with("table");
                if is_step && !found.contains(&entry.anchor) {
                    found.push(entry.anchor.clone());
                }
            }
        }
        found
    }

    fn row(&self, line: Line, powers: &[Option<i32>]) -> Row {
        let cells = line.cells.into_iter().zip(powers);
        Row {
            cells: cells
                .map(|(cell, power)| self.cell_text(cell, *power))
                .collect(),
            strong: line.strong,
            id: Some(line.id),
        }
    }

    /// A cell's text; the power of ten of its column stands in the head.
    fn cell_text(&self, cell: Cell, power: Option<i32>) -> Text {
        match cell {
            Cell::Text(text) => text,
            Cell::Own(value) => vec![self.number(value, false, power)],
            Cell::Linked(value) => vec![self.number(value, true, power)],
            Cell::Rounded {
                value,
                decimals,
                up,
            } => {
                let entry = self.ledger.get(value);
                let link = (!entry.no.is_empty()).then(|| entry.anchor.clone());
                let rounded = Printed::rounded(entry.value, decimals, up);
                vec![number(&rounded, entry.signed, link)]
            }
        }
    }

    fn number(&self, value: Value, linked: bool, power: Option<i32>) -> super::doc::Inline {
        let entry = self.ledger.get(value);
        let printed = self.ledger.printed(value);
        let moved = power.and_then(|power| printed.at_power(power));
        let printed = moved.map_or(printed, |moved| Printed {
            exponent: None,
            ..moved
        });
        number(&printed, entry.signed, linked.then(|| entry.anchor.clone()))
    }
}

/// The words of an origin for the checker's narrow margin: of an input of the joint file its line.
pub(super) fn in_margin(from: &Origin) -> String {
    match from {
        Origin::Input(place) => line_of(place),
        Origin::Clause(_) | Origin::Method(_) => with_its_word(&origin(from)),
    }
}

/// A text whose short whole numbers stay with the word before: the 3 of `issue 3`, alone on a line of
/// the margin, would read as a step.
fn with_its_word(text: &str) -> String {
    let mut words = text.split(' ');
    let mut out = words.next().unwrap_or_default().to_owned();
    for word in words {
        let bare = word.trim_end_matches([',', ';', ':', ')']);
        let is_number = (1..=2).contains(&bare.len()) && bare.chars().all(|c| c.is_ascii_digit());
        out.push(if is_number { '\u{a0}' } else { ' ' });
        out.push_str(word);
    }
    out
}

/// The line of a place; with its file where that is the project's.
pub(super) fn line_of(place: &Place) -> String {
    let text = place.short();
    match text.rsplit_once(':') {
        Some((name, line)) if name != "project.yaml" => format!("line {line}"),
        _ => text,
    }
}

/// The words of an origin for the trace.
pub(super) fn origin(origin: &Origin) -> String {
    match origin {
        Origin::Clause(clause) => clause.clone(),
        Origin::Method(method) => method.clone(),
        Origin::Input(place) => place.short(),
    }
}

/// Numbers of lines in words: `steps 5, 7–9`, then `tables 1, 2`, as far as there are some.
pub(super) fn steps_and_tables<'n>(
    numbers: impl Iterator<Item = &'n str>,
) -> impl Iterator<Item = String> {
    let (mut steps, mut tables) = (Vec::new(), Vec::new());
    for no in numbers {
        match no.strip_prefix("table ") {
            Some(table) => tables.extend(table.parse::<usize>().ok()),
            None => steps.extend(no.parse::<usize>().ok()),
        }
    }
    [("step", steps), ("table", tables)]
        .into_iter()
        .filter(|(_, numbers)| !numbers.is_empty())
        .map(|(word, numbers)| ranges(word, numbers))
}

/// `step 5`, `steps 5, 7–9`.
fn ranges(word: &str, mut numbers: Vec<usize>) -> String {
    numbers.sort_unstable();
    numbers.dedup();
    let mut parts: Vec<String> = Vec::new();
    let mut at = 0;
    while at < numbers.len() {
        let mut end = at;
        while end + 1 < numbers.len() && numbers[end + 1] == numbers[end] + 1 {
            end += 1;
        }
        match end - at {
            0 => parts.push(numbers[at].to_string()),
            1 => {
                parts.push(numbers[at].to_string());
                parts.push(numbers[end].to_string());
            }
            // A range is not broken after its dash.
            _ => parts.push(format!("{}–\u{2060}{}", numbers[at], numbers[end])),
        }
        at = end + 1;
    }
    let plural = if numbers.len() == 1 { "" } else { "s" };
    // The word stays with its first number.
    format!("{word}{plural}\u{a0}{}", parts.join(", "))
}

/// A plain entry of a list.
pub(super) fn item(label: &str, text: Text) -> Item {
    Item {
        label: label.to_owned(),
        text,
        mark: None,
        source: None,
    }
}

/// The plain unit of a value, for words and the trace.
pub(super) fn unit(ledger: &Ledger, dim: Dim) -> String {
    ledger.units().label(dim)
}
