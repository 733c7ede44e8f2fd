//! Tables of the notes: what stands in them, and that it stands clear.

use crate::notes::{demo, pages};
use crate::replay::{keyed, replay};
use seamnote::criteria::built_in;
use seamnote::joint::read_joint;
use seamnote::note::doc::{Align, Block, Doc, Inline, Row, Table};
use seamnote::note::{Calculation, Note, write_note};
use seamnote::project::Produced;
use seamnote::render::{Press, overflow};
use seamnote::source::SourceFile;
use std::collections::BTreeSet;
use std::sync::Arc;
use typst::layout::{Frame, FrameItem, Point};

/// A joint of long names: as many runs and cases as asked for.
fn long_names(runs: usize, cases: usize) -> String {
    let run = |at: usize| {
        let (y, rise) = (60 * at, at % 3 * 7);
        format!(
            "    - {{name: stiffener flange toward frame {at}, straight: [[0, {y}], [80, {}]], fillet: {}}}\n",
            y + rise,
            5 + at % 3
        )
    };
    let case = |at: usize| {
        format!(
            "    - {{case: GUST-UPWIND-{at:02}, says: gust from abeam with the boom held, \
             force: [{}, -2000, 500]}}\n",
            1000 + 10 * at
        )
    };
    let runs: String = (0..runs).map(run).collect();
    let cases: String = (1..=cases).map(case).collect();
    format!(
        "note: SN-1\ntitle: long names\nrevision: A\ndate: 2026-05-04\n\
         units: {{force: N, length: mm}}\nframe: {{origin: a corner}}\nparts:\n  \
         plate: {{material: S355J2, thickness: 10, f_y: 355, f_u: 470, F_su: 280}}\n  \
         deck: {{material: S355J2, thickness: 12, f_y: 355, f_u: 470, F_su: 280}}\n\
         filler: {{name: rod, f_u: 480, F_su: 280, F_allow: 140, tau_allow: 120}}\n\
         weld:\n  joins: [plate, deck]\n  ends: less throat\n  runs:\n{runs}\
         loads:\n  at: [50, 30, 20]\n  level: ultimate\n  cases:\n{cases}\
         checks:\n  - {{clause: EN 1993-1-8 4.5.3.2}}\n  - {{clause: base metal ultimate}}\n  - {{clause: EN 1993-1-8 4.5.1-4.5.2}}\n"
    )
}

/// The same joint stood up into space, where the tables have most columns.
fn in_space(text: &str) -> String {
    let text = text
        .replace("[[0, ", "[[0, 0, ")
        .replace("[80, ", "[80, 0, ");
    text.replace(", fillet", ", normal: [0, 1, 0], fillet")
}

/// The note of a joint's text.
fn produced(text: &str) -> Produced {
    let file = Arc::new(SourceFile {
        name: "joints/tables.yaml".to_owned(),
        text: text.to_owned(),
    });
    let told = read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let calculation = Calculation::of(&told, built_in());
    let calculation = calculation.unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let note = write_note(&calculation);
    Produced {
        note: note.unwrap_or_else(|faults| panic!("{}", faults.render(false))),
        outputs: Vec::new(),
    }
}

/// Long names of runs and cases wrap in their own columns and stand clear of their neighbours.
#[test]
fn no_cell_leaves_its_column() {
    let press = Press::new();
    for text in [
        long_names(4, 30),
        in_space(&long_names(12, 3)),
        long_names(4, 3).replace(
            "stiffener flange toward frame",
            "stiffener-flange-toward-frame",
        ),
        long_names(4, 3).replace("GUST-UPWIND-", "GUSTFROMABEAMWITHTHEBOOMHELD"),
    ] {
        let found = overflow(&pages(&press, &produced(&text)));
        assert!(found.is_empty(), "{found:#?}");
    }
}

/// The tables of a document.
fn tables(doc: &Doc) -> impl Iterator<Item = &Table> {
    let blocks = doc.sections.iter().flat_map(|section| &section.blocks);
    blocks.filter_map(Block::as_table)
}

fn table<'a>(note: &'a Note, id: &str) -> &'a Table {
    let found = tables(&note.doc).find(|table| table.id == id);
    found.unwrap_or_else(|| panic!("the note has no table {id}"))
}

/// The text of a cell, mathematics left out.
fn words(cell: &[Inline]) -> String {
    let word = |piece: &Inline| match piece {
        Inline::Plain { text }
        | Inline::Emph { text }
        | Inline::Strong { text }
        | Inline::Aside { text }
        | Inline::StepRef { text, .. } => text.clone(),
        Inline::Number {
            whole, decimals, ..
        } => format!("{whole}{decimals}"),
        Inline::Math { .. } => String::new(),
    };
    cell.iter().map(word).collect()
}

/// The power of ten in a column's head.
fn head_power(unit: &[Inline]) -> Option<i32> {
    let unit = words(unit);
    let raised = unit.strip_prefix("10")?.split(' ').next()?;
    let figures = ["⁰", "¹", "²", "³", "⁴", "⁵", "⁶", "⁷", "⁸", "⁹"];
    let mut plain = raised.replace('⁻', "-");
    for (digit, raised) in figures.iter().enumerate() {
        plain = plain.replace(raised, &digit.to_string());
    }
    plain.parse().ok()
}

/// The number of a cell as it is keyed in, with the power of its own or of its head.
fn keyed_cell(cell: &[Inline], power: Option<i32>) -> Option<String> {
    let Some(Inline::Number {
        whole,
        decimals,
        exponent,
        ..
    }) = cell.last()
    else {
        return None;
    };
    let number = format!("{}{decimals}", whole.replace('−', "-").replace('+', ""));
    Some(match exponent.or(power) {
        Some(power) => format!("{number}*10^({power})"),
        None => number,
    })
}

/// A printed number by what counts in it: sign, digits and the power of its last digit.
fn essence(printed: &str) -> (bool, String, i64) {
    let (mantissa, exponent) = printed.split_once("*10^").unwrap_or((printed, "0"));
    let exponent: i64 = exponent.trim_matches(['(', ')']).parse().unwrap();
    let decimals = mantissa.split_once('.').map_or(0, |(_, after)| after.len());
    let digits: String = mantissa.chars().filter(char::is_ascii_digit).collect();
    let digits = digits.trim_start_matches('0').to_owned();
    if digits.is_empty() {
        return (false, digits, 0);
    }
    let last = exponent - i64::try_from(decimals).unwrap();
    (mantissa.starts_with('-'), digits, last)
}

/// All numbers that a note prints, by their digits.
fn printed(note: &Note) -> BTreeSet<(bool, String, i64)> {
    let trace: serde_json::Value = serde_json::from_str(&note.trace_json()).unwrap();
    let steps = trace["steps"].as_array().unwrap().iter();
    steps
        .map(|step| essence(step["printed"].as_str().unwrap()))
        .collect()
}

/// One power of ten stands in the head of a column, and moves no digit of its cells.
#[test]
fn a_column_has_one_power_and_every_digit_of_its_values() {
    let long = produced(&long_names(12, 3));
    let demos = demo().iter().map(|(_, produced)| &produced.note);
    let mut moved = 0;
    for note in demos.chain([&long.note]) {
        let known = printed(note);
        for table in tables(&note.doc) {
            for (at, column) in table.columns.iter().enumerate() {
                let Some(power) = head_power(&column.unit) else {
                    continue;
                };
                for row in table.rows.iter().chain(&table.foot) {
                    let Some(number) = keyed_cell(&row.cells[at], Some(power)) else {
                        continue;
                    };
                    let told = format!("{}: {number}", table.id);
                    assert!(known.contains(&essence(&number)), "{told} is not printed");
                    let Some(Inline::Number { exponent, .. }) = row.cells[at].last() else {
                        continue;
                    };
                    assert_eq!(*exponent, None, "{told} has a power of its own too");
                    moved += 1;
                }
            }
        }
    }
    assert!(moved > 60, "only {moved} cells stand under a power of ten");
}

/// Demand and capacity stand side by side, so each keeps its own power of ten.
#[test]
fn columns_that_are_compared_keep_their_numbers_as_they_are() {
    let note = produced(&long_names(2, 2).replace("-2000", "-2e9")).note;
    let margins = table(&note, "margin-table");
    let demand = &margins.rows[0].cells[3];
    let Some(Inline::Number { exponent, .. }) = demand.last() else {
        panic!("{demand:?} is no number");
    };
    assert!(exponent.is_some(), "{demand:?} has no power of ten");
    assert_eq!(head_power(&margins.columns[3].unit), None, "its head");
}

/// The last row of each table of properties is the sum of the printed cells above it, and the steps
/// of the group lead there.
#[test]
fn tables_of_many_runs_end_in_their_sums() {
    let note = produced(&long_names(12, 3)).note;
    for id in ["throats", "own", "transfer"] {
        let table = table(&note, id);
        let foot = table.foot.as_ref().expect("a row of sums");
        let mut sums = 0;
        for (at, column) in table.columns.iter().enumerate() {
            let power = head_power(&column.unit);
            let number = |row: &Row| keyed_cell(&row.cells[at], power).map(|text| keyed(&text));
            let (Align::Point, Some((sum, unit, _))) = (column.align, number(foot)) else {
                continue;
            };
            let added: f64 = table
                .rows
                .iter()
                .filter_map(number)
                .map(|cell| cell.0)
                .sum();
            assert!(
                (added - sum).abs() <= unit,
                "{id}: {added} is told as {sum}"
            );
            sums += 1;
        }
        assert_eq!(sums, 3, "{id}: columns with a sum");
    }
    let steps = || note.doc.sections.iter().flat_map(|section| &section.blocks);
    for (id, row) in [
        ("group.x-c", "sum.throats"),
        ("group.y-c", "sum.throats"),
        ("group.i-xx", "sum.own"),
        ("group.i-xy", "sum.transfer"),
    ] {
        let step = steps()
            .filter_map(Block::as_step)
            .find(|step| step.id == id);
        let step = step.unwrap_or_else(|| panic!("no step {id}"));
        let lines: String = step.lines.iter().map(|line| line.typst.as_str()).collect();
        assert!(lines.contains(&format!("#n(\"{row}\"")), "{id}: {lines}");
    }
}

/// With more runs than a step writes out, printed numbers still give the printed results.
#[test]
fn notes_of_many_runs_replay() {
    for text in [long_names(5, 1), long_names(12, 2), long_names(30, 1)] {
        let trace = serde_json::from_str(&produced(&text).note.trace_json()).unwrap();
        let found = replay(&trace);
        assert!(found.faults.is_empty(), "{}", found.faults.join("\n"));
        assert!(found.zeros.is_empty(), "{}", found.zeros.join("\n"));
    }
}

/// Sixty cases stand in the note, the governing one in bold, their one level in the captions.
#[test]
fn all_cases_stand_in_the_note_up_to_sixty() {
    for (cases, listed) in [(3, 3), (60, 60), (61, 60)] {
        let note = produced(&long_names(2, cases)).note;
        let mut bold = Vec::new();
        for id in ["cases", "case-margins"] {
            let table = table(&note, id);
            assert_eq!(table.rows.len(), listed, "{id} of {cases} cases");
            let caption = words(&table.caption);
            assert!(caption.contains("; level ultimate"), "{caption}");
            let heads: Vec<String> = table.columns.iter().map(|c| words(&c.head)).collect();
            assert!(!heads.contains(&"level".to_owned()), "{id}: {heads:?}");
            let strong = table.rows.iter().filter(|row| row.strong);
            bold.push(strong.map(|row| words(&row.cells[0])).collect::<Vec<_>>());
        }
        assert_eq!(
            bold[0],
            [format!("GUST-UPWIND-{cases:02}")],
            "{cases} cases"
        );
        assert_eq!(bold[0], bold[1], "the two tables agree");
    }
}

/// Cases of two levels keep their column.
#[test]
fn levels_that_differ_stand_in_a_column() {
    let text = long_names(2, 2).replace(
        "{case: GUST-UPWIND-02,",
        "{case: GUST-UPWIND-02, level: limit,",
    );
    let note = produced(&text).note;
    let cases = table(&note, "cases");
    assert_eq!(words(&cases.columns[1].head), "level");
    assert!(!words(&cases.caption).contains("level"), "the caption");
}

/// A limit's value leads to the row of its own run, also where another run has the same size.
#[test]
fn links_of_limits_lead_to_their_own_run() {
    let mut seen = 0;
    for (joint, produced) in demo() {
        let Some(table) = tables(&produced.note.doc).find(|table| table.id == "limit-table") else {
            continue;
        };
        let throats = self::table(&produced.note, "throats");
        for row in &table.rows {
            let Some(Inline::Number {
                step: Some(link), ..
            }) = row.cells[2].last()
            else {
                continue;
            };
            let leads = |row: &&Row| row.id.as_ref() == Some(link);
            if let Some(target) = throats.rows.iter().find(leads) {
                let (run, named) = (words(&target.cells[1]), words(&row.cells[1]));
                assert_eq!(run, named, "{}: {link}", joint.stem);
                seen += 1;
            }
        }
    }
    assert!(seen > 5, "only {seen} limits lead to a run's row");
}

/// Equal values of one symbol print the same digits, run by run and step by step.
#[test]
fn what_is_equal_is_printed_alike() {
    let long = produced(&long_names(12, 3));
    let mut pairs = 0;
    for produced in demo().iter().map(|(_, produced)| produced).chain([&long]) {
        let trace: serde_json::Value = serde_json::from_str(&produced.note.trace_json()).unwrap();
        let steps = trace["steps"].as_array().unwrap().iter();
        let run = |c: char| c.is_ascii_digit();
        let computed: Vec<(&str, f64, &str)> = steps
            .filter(|step| step["kind"] == "step")
            .map(|step| {
                let symbol = step["symbol"].as_str().unwrap().trim_end_matches(run);
                let printed = step["printed"].as_str().unwrap();
                (symbol, step["value"].as_f64().unwrap(), printed)
            })
            .collect();
        for (at, one) in computed.iter().enumerate() {
            for other in &computed[at + 1..] {
                if one.0 == other.0 && (one.1 - other.1).abs() < 1e-13 * one.1.abs() {
                    pairs += 1;
                    assert_eq!(
                        one.2, other.2,
                        "{} of {}",
                        one.0, produced.note.doc.head.note
                    );
                }
            }
        }
    }
    assert!(pairs > 100, "only {pairs} pairs of equal values");
}

/// A box on a page: left, top, right, bottom (pt).
type Ink = [f64; 4];

/// Ink of texts and horizontal rules of a frame.
fn ink(frame: &Frame, at: Point, texts: &mut Vec<(String, Ink)>, rules: &mut Vec<Ink>) {
    for (position, item) in frame.items() {
        let here = at + *position;
        match item {
            FrameItem::Group(group) => ink(&group.frame, here, texts, rules),
            FrameItem::Text(text) => {
                // The box of a text has its y turned over.
                let (low, high) = (text.bbox().min + here, text.bbox().max + here);
                let edges = [low.x, high.y, high.x, low.y].map(|edge| edge.to_pt());
                texts.push((text.text.to_string(), edges));
            }
            FrameItem::Shape(shape, _) => {
                let size = shape.bbox(false).size();
                if size.y.to_pt().abs() < 0.01 {
                    let right = (here.x + size.x).to_pt();
                    let y = here.y.to_pt();
                    rules.push([here.x.to_pt(), y, right, y]);
                }
            }
            FrameItem::Image(..) | FrameItem::Link(..) | FrameItem::Tag(_) => {}
        }
    }
}

/// Formulas stand by themselves under the caption, and no index or bracket touches a rule.
#[test]
fn captions_are_words_and_nothing_touches_a_rule() {
    const LEFT: f64 = 22.0 / 25.4 * 72.0;
    const CLEAR: f64 = 1.0;
    let press = Press::new();
    let long = produced(&in_space(&long_names(12, 3)));
    let (mut formulas, mut rules_seen) = (0, 0);
    for produced in demo().iter().map(|(_, produced)| produced).chain([&long]) {
        for table in tables(&produced.note.doc) {
            let is_maths = |piece: &Inline| matches!(piece, Inline::Math { .. });
            assert!(!table.caption.iter().any(is_maths), "{}: caption", table.id);
            let one_each = table
                .formulas
                .iter()
                .all(|f| f.len() == 1 && is_maths(&f[0]));
            assert!(one_each, "{}: {:?}", table.id, table.formulas);
            formulas += table.formulas.len();
        }
        for page in pages(&press, produced).pages() {
            let (mut texts, mut rules) = (Vec::new(), Vec::new());
            ink(&page.frame, Point::zero(), &mut texts, &mut rules);
            // Rules of tables begin where the text does, but for half their thickness.
            rules.retain(|rule| (rule[0] - LEFT).abs() < 0.5);
            rules_seen += rules.len();
            let broken = texts.iter().find(|(text, _)| text.contains("cas\u{200b}e"));
            assert!(broken.is_none(), "a word that fits is broken: {broken:?}");
            for rule in rules {
                for (text, [left, top, right, bottom]) in &texts {
                    let beside = *right < rule[0] || *left > rule[2];
                    let clear = *bottom < rule[1] - CLEAR || *top > rule[1] + CLEAR;
                    assert!(
                        beside || clear,
                        "{text} is {top} to {bottom}, rule {rule:?}"
                    );
                }
            }
        }
    }
    assert!(formulas > 40, "only {formulas} formulas");
    assert!(rules_seen > 200, "only {rules_seen} rules");
}
