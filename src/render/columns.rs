//! Widths of a table's columns and the alignment of numbers on the decimal point.
//!
//! Fixed widths spare the typesetter the measuring of every cell; a column with maths in it is
//! left to measure itself, a wide table of words shares what is left of the line.

use serde_json::{Value, json};

use crate::note::doc::{Align, Column, Inline, Row, Table, Text};

use super::faces::{Cut, text_width};
use super::view::{TEXT_WIDTH, Targets, own_target, plain, tail, text};

/// Size of table text (pt).
const SIZE: f64 = 8.5;
/// Space between columns (pt), half of it on each side of a cell.
const GAP: f64 = 10.0;
/// Room for kerning and rounding (pt).
const SLACK: f64 = 0.6;
/// Width from which a word of a head breaks (pt): the template softens words over 12 ems.
const WORD: f64 = 12.0 * SIZE;
/// Asides are smaller than the text that they stand in.
const ASIDE: f64 = 0.86;

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
    /// Whether maths stands in a cell.
    maths: bool,
}

/// A width as the typesetter takes it.
enum Width {
    Auto,
    Points(f64),
    Share(u32),
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
    let widths = choose(&table.columns, &measures);
    let row = |r: &Row| row_view(r, &table.columns, &measures, targets);
    json!({
        "kind": "table",
        "target": own_target(&table.id, targets).0,
        "anchor": own_target(&table.id, targets).1,
        "caption": text(&table.caption, targets),
        "columns": table.columns.iter().map(|c| json!({
            "head": text(&c.head, targets),
            "unit": text(&c.unit, targets),
            "align": c.align,
        })).collect::<Vec<_>>(),
        "widths": widths.iter().map(written).collect::<Vec<_>>().join(", ") + ",",
        "sides": table.columns.iter().map(side).collect::<Vec<_>>().join(", ") + ",",
        "rows": table.rows.iter().map(row).collect::<Vec<_>>(),
        "foot": table.foot.as_ref().map(row),
    })
}

fn row_view(row: &Row, columns: &[Column], measures: &[Measure], targets: &Targets) -> Value {
    let cell = |((cell, column), measure): ((&Text, &Column), &Measure)| {
        let pad = match column.align {
            Align::Left => 0.0,
            Align::Point if is_number(cell) => measure.tail - split(cell, row.strong).1,
            Align::Point => 0.0,
        };
        json!({"text": text(cell, targets), "pad": (pad * 100.0).round() / 100.0})
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
        maths: false,
    };
    for (cell, strong) in cells {
        if column.align == Align::Point && is_number(cell) {
            let (whole, tail) = split(cell, strong);
            found.whole = found.whole.max(whole);
            found.tail = found.tail.max(tail);
        } else {
            found.words = found.words.max(text_points(cell, strong));
        }
        found.maths |= has_maths(cell);
    }
    let words = plain(&column.head);
    let widest = words
        .split_whitespace()
        .map(|w| width(w, false))
        .fold(0.0, f64::max);
    found.word = widest.min(WORD);
    found
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
    let unit = ASIDE * text_points(&column.unit, false);
    Some(text_points(&column.head, false).max(unit))
}

/// Chooses the widths: natural ones if they fit, else heads wrap, else columns of words share.
fn choose(columns: &[Column], measures: &[Measure]) -> Vec<Width> {
    let pairs = || columns.iter().zip(measures).enumerate();
    let natural: Vec<_> = pairs()
        .map(|(i, (c, m))| one(c, m, inset(i, columns.len()), false))
        .collect();
    if fits(&natural) {
        return natural;
    }
    let wrapped: Vec<_> = pairs()
        .map(|(i, (c, m))| one(c, m, inset(i, columns.len()), true))
        .collect();
    if fits(&wrapped) {
        return wrapped;
    }
    let mut shared = wrapped;
    for (i, (column, _)) in pairs() {
        if column.align == Align::Left && matches!(shared[i], Width::Points(_)) {
            shared[i] = Width::Share(1);
        }
    }
    shared
}

/// Room that a cell leaves at its sides (pt); the outer sides of a table leave none.
fn inset(i: usize, count: usize) -> f64 {
    let outer = usize::from(i == 0) + usize::from(i + 1 == count);
    GAP / 2.0 * f64::from(2 - u8::try_from(outer).expect("at most two sides"))
}

fn one(column: &Column, measure: &Measure, inset: f64, wrap_head: bool) -> Width {
    let Some(head) = measure.head else {
        return Width::Auto;
    };
    if column.share > 0 {
        return Width::Share(column.share);
    }
    if measure.maths {
        return Width::Auto;
    }
    let head = if wrap_head { measure.word } else { head };
    Width::Points((measure.whole + measure.tail).max(measure.words).max(head) + inset + SLACK)
}

/// Whether the fixed widths leave the text block its width, with room for the shares.
fn fits(widths: &[Width]) -> bool {
    /// A column that wraps must take the widest word that does not break.
    const LEAST: f64 = WORD + GAP;
    /// A guess for a column that measures itself (pt).
    const MATHS: f64 = 40.0;
    let points = |w: &Width| match w {
        Width::Auto => MATHS,
        Width::Points(p) => *p,
        Width::Share(_) => LEAST,
    };
    widths.iter().map(points).sum::<f64>() <= TEXT_WIDTH
}

fn written(width: &Width) -> String {
    match width {
        Width::Auto => "auto".to_owned(),
        Width::Points(p) => format!("{:.2}pt", p),
        Width::Share(n) => format!("{n}fr"),
    }
}

fn side(column: &Column) -> &'static str {
    match column.align {
        Align::Left => "left",
        Align::Point => "right",
    }
}
