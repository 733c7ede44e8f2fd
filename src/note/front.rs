//! What stands before the calculation: purpose, inputs and sources, assumptions, axes, materials.

use super::builder::{Builder, Cell, Line, Sheet, number_column, word_column};
use super::doc::{Block, FigureRef, Inline, Item, Text};
use super::pictures::{JOINT, SECTIONS};
use super::points::ends;
use super::text::{emph, piece, plain, symbol};
use crate::formula::{Origin, Printed, Symbol};
use crate::joint::{Part, SizeSpec, ToeSpec};
use crate::quantity::{Dim, Given};
use crate::weld::{End, GAP_FREE_IN, Segment, ThroatRule, inch};

impl Builder<'_> {
    /// What the note is for.
    pub(super) fn purpose(&mut self) {
        self.part("purpose", "Purpose");
        if let Some(purpose) = &self.joint.purpose {
            self.para(plain(&purpose.value));
        }
        let item = self
            .joint
            .item
            .as_ref()
            .map(|item| format!(" of the {}", item.value))
            .unwrap_or_default();
        let [attached, base] = self.runs[0].joins;
        let name = |index: usize| self.joint.parts[index].name.value.clone();
        let text = format!(
            "This note checks the weld group{item} that joins {} to {}, by the elastic line method: the weld as \
             a line of its effective throat, the parts rigid against it.",
            name(attached),
            name(base)
        );
        self.para(plain(&text));
    }

    /// Where the inputs come from, and the unit set.
    pub(super) fn inputs(&mut self) {
        self.part("inputs", "Inputs and their sources");
        let file = self
            .joint
            .note
            .place
            .file
            .name
            .rsplit('/')
            .next()
            .unwrap_or_default()
            .to_owned();
        let units = self.joint.units.value;
        let mut text = vec![piece("All inputs stand in "), emph(&file)];
        if let Some(shared) = self.joint.inherits_from() {
            text.push(piece(" and "));
            text.push(emph(shared));
        }
        text.push(piece(", attached to the PDF with the clause sheets used"));
        if let Some(drawing) = &self.joint.drawing {
            text.push(piece(&format!("; geometry by drawing {}", drawing.value)));
        }
        text.push(piece(&format!(
            "; “line 12” beside a step is a line of {}. Every number below is in {}, {} and {}; an input given in another unit is converted on a line of its own. \
             Re-keying the printed numbers of a line gives its printed result, to one unit in the last digit; margins are \
             rounded down, utilisations up. Beside a step, “→ 12” leads to where its result is used (… stands for more), and the box is for \
             the checker’s tick.",
            match self.joint.inherits_from() {
                Some(shared) => format!("the first, “{shared}:12” one of the second"),
                None => "it".to_owned(),
            },
            units.force(),
            units.length(),
            // No line ends inside a unit.
            units.stress().replace('/', "/\u{2060}")
        )));
        self.para(text);
    }

    /// Assumptions of the user, the clauses and the method; open items are marked.
    pub(super) fn assumptions(&mut self, of_sheets: &[(String, String)]) -> Vec<(String, String)> {
        self.part("assumptions", "Assumptions");
        let mut items = Vec::new();
        let mut open = Vec::new();
        for assumption in &self.joint.assumptions {
            let label = format!("A{}", items.len() + 1);
            if assumption.to_be_verified {
                open.push((label.clone(), assumption.says.value.clone()));
            }
            items.push(Item {
                label,
                text: plain(&assumption.says.value),
                mark: assumption
                    .to_be_verified
                    .then(|| "to be verified".to_owned()),
                source: Some(super::layout::line_of(&assumption.says.place)),
            });
        }
        for (run, gap) in self.free_gaps() {
            let label = format!("A{}", items.len() + 1);
            let says = format!(
                "The root gap of run “{run}”, {gap}, is not over 1/16 in, so the legs count in full: the fit-up rule for \
                 steel, to be confirmed for the material and the code that governs."
            );
            open.push((label.clone(), says.clone()));
            items.push(Item {
                label,
                text: plain(&says),
                mark: Some("to be verified".to_owned()),
                source: Some("AWS D1.1".to_owned()),
            });
        }
        for (says, source) in of_sheets {
            let label = format!("A{}", items.len() + 1);
            items.push(Item {
                label,
                text: plain(says),
                mark: None,
                source: Some(source.clone()),
            });
        }
        if !items.is_empty() {
            self.items(items);
        }
        open
    }

    /// Axes, the drawing, and the group as told.
    pub(super) fn geometry(&mut self) {
        self.part("geometry", "Axes and geometry");
        let frame = &self.joint.frame;
        let mut text = vec![piece(&format!(
            "The origin is the {}",
            without_article(frame.origin.value.trim_end_matches('.'))
        ))];
        let mut parted = ";";
        for (axis, words) in super::points::AXES.iter().zip(&frame.axes) {
            if let Some(words) = words {
                text.push(piece(&format!("{parted} ")));
                text.push(symbol(&Symbol::of(axis, &[])));
                text.push(piece(&format!(" {}", words.value)));
                parted = ",";
            }
        }
        text.push(piece(". "));
        if self.planar {
            text.push(piece("The group lies in one faying plane, "));
            text.push(symbol(&Symbol::of("x", &[])));
            text.push(piece(" and "));
            text.push(symbol(&Symbol::of("y", &[])));
            text.push(piece(" in it, "));
            text.push(symbol(&Symbol::of("z", &[])));
            text.push(piece(" out of the base toward the attached part."));
        } else {
            text.push(piece(
                "The group stands in space; each run has its own faying normal.",
            ));
        }
        text.push(piece(" "));
        text.push(self.figure_ref(1, JOINT));
        text.push(piece(" shows the group, "));
        text.push(self.figure_ref(2, SECTIONS));
        text.push(piece(match self.weld_kinds().len() {
            1 => " its weld in section.",
            _ => " its welds in section.",
        }));
        self.para(text);
        self.figure(JOINT);
        if !self.points.is_empty() {
            self.point_table();
        }
        self.told_runs();
        if !self.planar {
            self.normals_table();
        }
        self.figure(SECTIONS);
    }

    /// The place of a drawing; its caption is written once it is drawn.
    pub(super) fn figure(&mut self, name: &str) {
        self.figures += 1;
        self.block(Block::Figure(FigureRef {
            name: name.to_owned(),
            id: figure_id(name),
            caption: Vec::new(),
            alt: String::new(),
        }));
    }

    /// A link to the drawing that stands `ahead` drawings on.
    pub(super) fn figure_ref(&self, ahead: usize, name: &str) -> Inline {
        Inline::StepRef {
            id: figure_id(name),
            text: format!("Figure\u{a0}{}", self.figures + ahead),
        }
    }

    /// The faying normals of the runs.
    fn normals_table(&mut self) {
        let mut columns = vec![word_column(""), word_column("run")];
        columns.extend(
            super::points::AXES
                .map(|axis| super::builder::number_column(symbol(&Symbol::of("k", &[axis])), "")),
        );
        let mut rows = Vec::new();
        for index in 0..self.runs.len() {
            self.normal_values(index);
            let mut cells = vec![
                Cell::Text(plain(&(index + 1).to_string())),
                Cell::Text(plain(&self.runs[index].name)),
            ];
            for axis in super::points::AXES {
                let value = self.run_values[index][&format!("n_{axis}")];
                cells.push(self.cell(value));
            }
            rows.push(Line {
                id: format!("normal.{}", self.slugs[index]),
                cells,
                strong: false,
            });
        }
        let caption = plain("Faying normals of the runs, out of the base toward the attached part");
        self.table(Sheet {
            id: "normals".to_owned(),
            caption,
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
    }

    /// The runs as told.
    fn told_runs(&mut self) {
        let columns = vec![
            word_column(""),
            word_column("run"),
            word_column("weld"),
            word_column("from"),
            word_column("to"),
            word_column("toe"),
            word_column("ends"),
        ];
        let rows = (0..self.runs.len())
            .map(|index| {
                let run = &self.runs[index];
                let [from, to] = ends(&run.told);
                let number = |at| {
                    self.point_at(at)
                        .map_or_else(|| "–".to_owned(), |point| point.number.to_string())
                };
                let cells = vec![
                    Cell::Text(plain(&(index + 1).to_string())),
                    Cell::Text(plain(&run.name)),
                    Cell::Text(plain(&self.weld_words(index))),
                    Cell::Text(plain(&number(from))),
                    Cell::Text(plain(&number(to))),
                    Cell::Text(plain(&self.toe_words(index))),
                    Cell::Text(plain(&end_words(run.ends))),
                ];
                Line {
                    id: format!("run.{}", self.slugs[index]),
                    cells,
                    strong: false,
                }
            })
            .collect();
        let stitched = |spec: &crate::joint::RunSpec| spec.stitch.is_some();
        let caption = if self.joint.weld.runs.iter().any(stitched) {
            "Runs as given; stitched beads end by themselves, also where they meet another run"
        } else {
            "Runs as given"
        };
        self.table(Sheet {
            id: "runs".to_owned(),
            caption: plain(caption),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
    }

    /// Runs with a gap that takes nothing off a leg, and the gap as told.
    pub(super) fn free_gaps(&self) -> Vec<(String, String)> {
        let free = GAP_FREE_IN * inch(self.joint.units.value);
        let mut gaps: Vec<(String, String)> = Vec::new();
        for run in self.runs {
            let Some(gap) = &self.joint.weld.runs[run.spec].gap else {
                continue;
            };
            let told = (run.name.clone(), self.typed_length(&gap.value));
            if gap.value.value > 0.0 && gap.value.value <= free && !gaps.contains(&told) {
                gaps.push(told);
            }
        }
        gaps
    }

    /// The side of the root on which the fillet's toe on the base stands.
    fn toe_words(&self, index: usize) -> String {
        let run = &self.runs[index];
        match (&self.joint.weld.runs[run.spec].toe, &run.rule) {
            (_, ThroatRule::Complete { .. }) => "–".to_owned(),
            (None, _) => "not stated".to_owned(),
            (Some(toe), _) => match toe.value {
                ToeSpec::Outside => "outside".to_owned(),
                ToeSpec::Inside => "inside".to_owned(),
                ToeSpec::Toward(_) => {
                    let across = run.normal.cross(&run.path.tangent(0.5)) * run.toe.unwrap_or(1.0);
                    direction_words(across)
                }
            },
        }
    }

    /// A length as typed, with the note's unit where it has none of its own.
    fn typed_length(&self, given: &Given) -> String {
        match &given.unit {
            Some(_) => given.text(),
            None => format!("{} {}", given.number, self.joint.units.value.length()),
        }
    }

    /// A run's weld in words, sizes as typed.
    pub(super) fn weld_words(&self, index: usize) -> String {
        let run = &self.runs[index];
        let spec = &self.joint.weld.runs[run.spec];
        let typed = |given: &Given| self.typed_length(given);
        let mut words = match &spec.size {
            SizeSpec::Fillet { leg, .. } => format!("fillet, leg {}", typed(&leg.value)),
            SizeSpec::Unequal {
                on_base,
                on_attached,
            } => {
                format!(
                    "fillet, legs {} on base, {} on attached",
                    typed(&on_base.value),
                    typed(&on_attached.value)
                )
            }
            SizeSpec::Throat { throat, .. } => format!("fillet, throat {}", typed(&throat.value)),
            SizeSpec::Partial { throat } => {
                format!("partial penetration, throat {}", typed(&throat.value))
            }
            SizeSpec::Complete { .. } => "complete penetration".to_owned(),
        };
        if let Some(gap) = &spec.gap {
            words.push_str(&format!(", gap {}", typed(&gap.value)));
        }
        if let Some(stitch) = &spec.stitch {
            words.push_str(&format!(
                ", beads {}, pitch {}",
                typed(&stitch.bead.value),
                typed(&stitch.pitch.value)
            ));
        }
        if matches!(run.told, Segment::Arc { .. }) {
            words.push_str(", on an arc");
        }
        words
    }

    /// Materials with their strengths and sources.
    pub(super) fn materials(&mut self) {
        self.part("materials", "Materials and allowables");
        let units = self.joint.units.value;
        let stress = |base: &str, index: &str| {
            number_column(symbol(&Symbol::of(base, &[index])), units.stress())
        };
        let parts: Vec<Part> = self.joint.parts.clone();
        let told = [
            parts.iter().any(|part| part.thickness.is_some()),
            parts.iter().any(|part| part.f_y.is_some()),
            parts.iter().any(|part| part.f_u.is_some()),
        ];
        let mut columns = vec![word_column("part"), word_column("material")];
        let numbers = [
            number_column(symbol(&Symbol::of("t", &["p"])), units.length()),
            stress("f", "y"),
            stress("f", "u"),
        ];
        columns.extend(kept(numbers, told));
        columns.push(word_column("source"));
        let mut rows = Vec::new();
        for (index, part) in parts.iter().enumerate() {
            let number = (index + 1).to_string();
            let mut cells = vec![
                Cell::Text(plain(&part.name.value)),
                Cell::Text(plain(&part.material.value)),
            ];
            let values = [
                (
                    "thickness",
                    Symbol::of("t", &["p", &number]),
                    "Thickness",
                    &part.thickness,
                ),
                (
                    "f_y",
                    Symbol::of("f", &["y", &number]),
                    "Yield strength",
                    &part.f_y,
                ),
                (
                    "f_u",
                    Symbol::of("f", &["u", &number]),
                    "Ultimate strength",
                    &part.f_u,
                ),
            ];
            for (name, symbol, says, given) in kept(values, told) {
                let Some(given) = given else {
                    cells.push(Cell::Text(plain("–")));
                    continue;
                };
                let id = format!("part.{}.{name}", super::text::slug(&part.name.value));
                let says = format!("{says} of {}", part.name.value);
                let value = self.input(
                    id,
                    symbol,
                    &says,
                    &given.value,
                    Origin::Input(given.place.clone()),
                );
                let unsure = part.to_be_verified || part.source.is_none();
                if unsure && given.value.dim == Dim::STRESS {
                    self.ledger.get_mut(value).mark =
                        Some(format!("strengths of {}", part.name.value));
                }
                cells.push(self.cell(value));
            }
            cells.push(Cell::Text(source_words(
                part.source.as_ref().map(|s| s.value.as_str()),
                part.to_be_verified,
            )));
            rows.push(Line {
                id: format!("part.{}", super::text::slug(&part.name.value)),
                cells,
                strong: false,
            });
        }
        self.table(Sheet {
            id: "parts".to_owned(),
            caption: plain("Parts joined"),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        self.filler();
    }

    fn filler(&mut self) {
        let Some(filler) = self.joint.filler.clone() else {
            return;
        };
        let mut text = vec![piece(&format!(
            "Filler metal {}; source: ",
            filler.name.value
        ))];
        text.extend(source_words(
            filler.source.as_ref().map(|s| s.value.as_str()),
            filler.to_be_verified,
        ));
        text.push(piece("."));
        self.para(text);
        if let Some(given) = &filler.f_u {
            let symbol = Symbol::of("f", &["u", "w"]);
            let says = format!(
                "Ultimate strength of the filler metal {}",
                filler.name.value
            );
            let origin = Origin::Input(given.place.clone());
            let value = self.input("filler.f_u".to_owned(), symbol, &says, &given.value, origin);
            if filler.to_be_verified || filler.source.is_none() {
                self.ledger.get_mut(value).mark = Some("strength of the filler metal".to_owned());
            }
            self.show(value);
        }
    }
}

/// The columns that some part has a value for.
fn kept<T>(columns: [T; 3], told: [bool; 3]) -> impl Iterator<Item = T> {
    columns
        .into_iter()
        .zip(told)
        .filter(|(_, told)| *told)
        .map(|(column, _)| column)
}

fn figure_id(name: &str) -> String {
    format!("figure.{name}")
}

/// A source in words, with the mark of one that is missing or open.
fn source_words(source: Option<&str>, to_be_verified: bool) -> Text {
    match (source, to_be_verified) {
        (Some(source), false) => plain(source),
        (Some(source), true) => vec![piece(source), super::text::strong(" [to be verified]")],
        (None, _) => vec![super::text::strong("[no source: to be verified]")],
    }
}

/// What both ends of a run do, in words.
fn end_words(ends: [End; 2]) -> String {
    let word = |end: End| match end {
        End::Continuous => "continuous",
        End::Full => "full size",
        End::Stop { leg: true, .. } => "stop, less one leg",
        End::Stop { leg: false, .. } => "stop, less one throat",
    };
    let [start, end] = ends.map(word);
    if start == end {
        format!("both {start}")
    } else {
        format!("{start}; {end}")
    }
}

/// A direction in words: `+x`, `−y`, or its components.
fn direction_words(direction: crate::weld::V3) -> String {
    for (axis, letter) in super::points::AXES.into_iter().enumerate() {
        let along = direction[axis];
        if (along.abs() - 1.0).abs() < 1e-9 {
            return format!("{}{letter}", if along < 0.0 { "−" } else { "+" });
        }
    }
    let part = |value: f64| Printed::of(value, 3, 3, 1e-9).text();
    format!(
        "({}, {}, {})",
        part(direction.x),
        part(direction.y),
        part(direction.z)
    )
}

/// Words that follow an article, without their own.
fn without_article(words: &str) -> &str {
    words.strip_prefix("the ").unwrap_or(words)
}
