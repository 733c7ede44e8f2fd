//! Widths of a table's columns and the alignment of numbers on the decimal point.
//!
//! Fixed widths spare the typesetter the measuring of every cell; a column with maths in it is
//! left to measure itself. How a wide table shares the line stands in [`super::widths`].

use serde_json::{Value, json};

use crate::note::doc::{Align, Column, Inline, Row, Table, Text, tail, words};

use super::faces::{Cut, text_width};
use super::view::{TEXT_WIDTH, Targets, own_target, text, texts};
use super::widths::{Need, Width, squeezed, widths};

/// Size of table text (pt).
const SIZE: f64 = 8.5;
/// Size of text in a table that is too wide for the usual one (pt).
const MIDDLE_SIZE: f64 = 8.0;
/// No table text is smaller (pt).
const LEAST_SIZE: f64 = 7.5;
/// Space between columns (pt), half of it on each side of a cell.
const GAP: f64 = 10.0;
/// Room for kerning and rounding (pt).
const SLACK: f64 = 0.6;
/// Width from which a word breaks (ems): the template softens wider ones.
const WORD_EMS: f64 = 12.0;
/// The same at the usual size (pt).
const WORD: f64 = WORD_EMS * SIZE;
/// A guess for a sign of mathematics (ems): no letter of the maths face is wider.
const SIGN: f64 = 1.0;
/// The same for a sign of an index.
const INDEX_SIGN: f64 = 0.5;
/// The same for an operator with the space at its sides.
const OPERATOR: f64 = 1.4;
/// Asides are smaller than the text that they stand in.
const ASIDE: f64 = 0.86;
/// So are units in heads, a little.
const UNIT: f64 = 0.95;

/// What is known of a column's width.
struct Measure {
    /// Greatest width before the point (pt).
    whole: f64,
    /// Greatest width from the point on (pt).
    tail: f64,
    /// Greatest width of a cell of words (pt).
    words: f64,
    /// Width of head and unit (pt); none if maths stands in them.
    head: Option<f64>,
    /// Width of the widest word of the head (pt).
    word: f64,
    /// Width of the widest word of a cell of words (pt).
    longest: f64,
    /// A guess of the width of head and cells where maths stands in them (pt).
    guess: f64,
    /// Whether maths stands in a cell.
    maths: bool,
}

/// The table with widths of columns, row height and the padding after each number.
pub(super) fn table_view(table: &Table, targets: &Targets) -> Value {
    let rows = || table.rows.iter().chain(&table.foot);
    let measures: Vec<Measure> = table
        .columns
        .iter()
        .enumerate()
        .map(|(i, column)| {
            measure(
                column,
                rows().filter_map(|r| r.cells.get(i).map(|c| (c, r.strong))),
            )
        })
        .collect();
    let bands = bands(&table.columns, &measures);
    // Padding is measured at the usual size; a table in several bands has that.
    let scale = bands.first().map_or(1.0, |band| band.size / SIZE);
    let row = |r: &Row| row_view(r, &table.columns, &measures, scale, targets);
    json!({
        "kind": "table",
        "target": own_target(&table.id, targets).0,
        "anchor": own_target(&table.id, targets).1,
        "caption": text(&table.caption, targets),
        "formulas": texts(&table.formulas, targets),
        "columns": table.columns.iter().map(|c| json!({
            "head": text(&c.head, targets),
            "unit": text(&c.unit, targets),
            "align": c.align,
        })).collect::<Vec<_>>(),
        "bands": bands.iter().map(|band| band_view(band, &table.columns)).collect::<Vec<_>>(),
        "rows": table.rows.iter().map(row).collect::<Vec<_>>(),
        "foot": table.foot.as_ref().map(row),
    })
}

/// A band as the template takes it: its columns by their numbers, each with its room for words.
fn band_view(band: &Band, columns: &[Column]) -> Value {
    let joined = |parts: Vec<String>| parts.join(", ") + ",";
    json!({
        "size": (band.size < SIZE).then_some(band.size),
        "columns": band.columns,
        "rooms": band.widths.iter().map(|(_, room)| room).collect::<Vec<_>>(),
        "widths": joined(band.widths.iter().map(|(width, _)| written(width)).collect()),
        "sides": joined(band.columns.iter().map(|i| side(&columns[*i]).to_owned()).collect()),
    })
}

fn row_view(
    row: &Row,
    columns: &[Column],
    measures: &[Measure],
    scale: f64,
    targets: &Targets,
) -> Value {
    let cell = |((cell, column), measure): ((&Text, &Column), &Measure)| {
        let pad = match column.align {
            Align::Left => 0.0,
            Align::Point if is_number(cell) => measure.tail - split(cell, row.strong).1,
            Align::Point => 0.0,
        };
        json!({"text": text(cell, targets), "pad": (pad * scale * 100.0).round() / 100.0})
    };
    let cells: Vec<Value> = row
        .cells
        .iter()
        .zip(columns)
        .zip(measures)
        .map(cell)
        .collect();
    json!({
        "cells": cells,
        "strong": row.strong,
        "target": row.id.as_ref().map(|id| own_target(id, targets).0),
        "anchor": row.id.as_ref().map(|id| own_target(id, targets).1),
    })
}

/// Measures a column over its cells, each with whether it is bold.
fn measure<'a>(column: &Column, cells: impl Iterator<Item = (&'a Text, bool)>) -> Measure {
    let mut found = Measure {
        whole: 0.0,
        tail: 0.0,
        words: 0.0,
        head: head_width(column),
        word: 0.0,
        longest: 0.0,
        guess: guess(&column.head).max(UNIT * text_points(&column.unit, false)),
        maths: false,
    };
    for (cell, strong) in cells {
        if column.align == Align::Point && is_number(cell) {
            let (whole, tail) = split(cell, strong);
            found.whole = found.whole.max(whole);
            found.tail = found.tail.max(tail);
        } else {
            found.words = found.words.max(text_points(cell, strong));
            found.longest = found.longest.max(longest_word(cell, strong));
        }
        if has_maths(cell) {
            found.maths = true;
            found.guess = found.guess.max(guess(cell));
        }
    }
    found.word = longest_word(&column.head, false);
    found
}

/// Width of the widest word of a text (pt), as far as it does not break.
fn longest_word(pieces: &[Inline], strong: bool) -> f64 {
    let strong = strong || pieces.iter().any(|p| matches!(p, Inline::Strong { .. }));
    let widths = words(pieces);
    let widths = widths.split_whitespace().map(|w| width(w, strong));
    widths.fold(0.0, f64::max).min(WORD)
}

/// A guess of a text's width (pt), never too small for a symbol with its indices.
fn guess(pieces: &[Inline]) -> f64 {
    let signs = |latex: &str| {
        let ems = |c: char| match c {
            '+' | '-' | '=' | '<' | '>' | '/' => OPERATOR,
            c if c.is_alphanumeric() => INDEX_SIGN,
            _ => 0.0,
        };
        let latex = latex.replace("\\mathrm", "");
        SIZE * (SIGN - INDEX_SIGN + latex.chars().map(ems).sum::<f64>())
    };
    let points = |p: &Inline| match p {
        Inline::Math { latex, .. } => signs(latex),
        other => text_points(std::slice::from_ref(other), false),
    };
    pieces.iter().map(points).sum()
}

/// Whether the cell ends in a number, which stands on the decimal point of its column.
fn is_number(cell: &Text) -> bool {
    matches!(cell.last(), Some(Inline::Number { .. }))
}

/// Widths of a cell before and from its point on (pt).
fn split(cell: &Text, strong: bool) -> (f64, f64) {
    let after = match cell.last() {
        Some(Inline::Number {
            decimals, exponent, ..
        }) => width(&tail(decimals, *exponent), strong),
        _ => 0.0,
    };
    (text_points(cell, strong) - after, after)
}

/// Width of a text (pt), maths left out.
fn text_points(pieces: &[Inline], strong: bool) -> f64 {
    let points = |p: &Inline| match p {
        Inline::Plain { text } | Inline::StepRef { text, .. } => width(text, strong),
        Inline::Strong { text } => width(text, true),
        Inline::Emph { text } => {
            SIZE * text_width(text, if strong { Cut::BoldItalic } else { Cut::Italic })
        }
        Inline::Aside { text } => ASIDE * width(text, strong),
        Inline::Number {
            whole,
            decimals,
            exponent,
            ..
        } => width(whole, strong) + width(&tail(decimals, *exponent), strong),
        Inline::Math { .. } => 0.0,
    };
    pieces.iter().map(points).sum()
}

/// Width of a plain string at table size (pt).
fn width(text: &str, strong: bool) -> f64 {
    SIZE * text_width(text, if strong { Cut::Bold } else { Cut::Regular })
}

fn has_maths(pieces: &[Inline]) -> bool {
    pieces.iter().any(|p| matches!(p, Inline::Math { .. }))
}

/// Width of head and unit on a line each (pt), if no maths stands in them.
fn head_width(column: &Column) -> Option<f64> {
    if has_maths(&column.head) || has_maths(&column.unit) {
        return None;
    }
    let unit = UNIT * text_points(&column.unit, false);
    Some(text_points(&column.head, false).max(unit))
}

/// Room that a cell leaves at its sides (pt); the outer sides of a table leave none.
fn inset(i: usize, count: usize) -> f64 {
    let outer = usize::from(i == 0) + usize::from(i + 1 == count);
    GAP / 2.0 * f64::from(2 - u8::try_from(outer).expect("at most two sides"))
}

/// What a column asks of the line, its sides included, where text is `scale` times its usual size.
fn need(column: &Column, measure: &Measure, inset: f64, scale: f64) -> Need {
    let cells = (measure.whole + measure.tail).max(measure.words);
    let points = |width: f64| scale * width + inset + SLACK;
    let (Some(head), false) = (measure.head, measure.maths) else {
        return Need::measured(points(cells.max(measure.guess)));
    };
    let wrapped = cells.max(measure.word);
    let least = match column.align {
        Align::Left => measure.longest.max(measure.word),
        Align::Point => wrapped,
    };
    Need {
        natural: points(cells.max(head)),
        wrapped: points(wrapped),
        least: points(least),
        measured: false,
    }
}

/// Columns of a table that stand side by side on one line.
struct Band {
    /// Their numbers.
    columns: Vec<usize>,
    /// Size of the text (pt).
    size: f64,
    /// The width of each, and the width (ems) from which a word is given places to break.
    widths: Vec<(Width, f64)>,
}

/// How the columns share lines: on one, with smaller text where the usual one leaves a word no room;
/// else in bands at the usual size, each led by the columns that name its rows; words break only
/// where even that leaves no room.
fn bands(columns: &[Column], measures: &[Measure]) -> Vec<Band> {
    let all: Vec<usize> = (0..columns.len()).collect();
    let needs = |chosen: &[usize], size: f64| -> Vec<Need> {
        let sides = |at| inset(at, chosen.len());
        let each = chosen.iter().enumerate();
        each.map(|(at, i)| need(&columns[*i], &measures[*i], sides(at), size / SIZE))
            .collect()
    };
    let whole = |chosen: &[usize], size: f64| {
        let widths = widths(&needs(chosen, size), TEXT_WIDTH)?;
        Some(Band {
            columns: chosen.to_vec(),
            size,
            widths: widths.into_iter().map(|width| (width, WORD_EMS)).collect(),
        })
    };
    let sizes = [SIZE, MIDDLE_SIZE, LEAST_SIZE];
    if let Some(band) = sizes.into_iter().find_map(|size| whole(&all, size)) {
        return vec![band];
    }
    if let Some(bands) = in_bands(columns, &|chosen| whole(chosen, SIZE)) {
        return bands;
    }
    let needs = needs(&all, LEAST_SIZE);
    let room = |i: usize, width: &Width| match width {
        Width::Points(points) if *points < needs[i].least => {
            (points - inset(i, columns.len())) / LEAST_SIZE
        }
        Width::Points(_) | Width::Auto => WORD_EMS,
    };
    let widths = squeezed(&needs, TEXT_WIDTH).into_iter().enumerate();
    vec![Band {
        widths: widths.map(|(i, width)| (width, room(i, &width))).collect(),
        columns: all,
        size: LEAST_SIZE,
    }]
}

/// The fewest bands, as even as they can be; none if a column finds no room beside those that name
/// the rows, or if all columns are words.
fn in_bands(columns: &[Column], whole: &dyn Fn(&[usize]) -> Option<Band>) -> Option<Vec<Band>> {
    /// Columns that name a row at most, such as its number and its name.
    const MOST_KEYS: usize = 2;
    let is_words = |column: &&Column| column.align == Align::Left;
    let words = columns.iter().take_while(is_words).count();
    let keys = words.clamp(1, MOST_KEYS);
    let rest: Vec<usize> = (keys..columns.len()).collect();
    if words == columns.len() || rest.is_empty() {
        return None;
    }
    let band = |chosen: &[usize]| {
        let with_keys: Vec<usize> = (0..keys).chain(chosen.iter().copied()).collect();
        whole(&with_keys)
    };
    (2..=rest.len()).find_map(|count| {
        let each = rest.len().div_ceil(count);
        rest.chunks(each).map(band).collect()
    })
}

fn written(width: &Width) -> String {
    match width {
        Width::Auto => "auto".to_owned(),
        Width::Points(p) => format!("{p:.2}pt"),
    }
}

fn side(column: &Column) -> &'static str {
    match column.align {
        Align::Left => "left",
        Align::Point => "right",
    }
}
