//! Demand over capacity along the weld, laid out straight run by run.
//!
//! The capacity is the line at 1. Each curve is its check's in its governing case; a ring marks
//! where it governs. Numbers of points stand at the ends, names of runs below.

use super::canvas::{Canvas, Keep, Layer};
use super::drawing::{Dash, Drawing, Fill, Item, P2, Path, Span, Stroke, Style};
use super::place::{Candidate, around, dearer, place_labels, rank};
use super::rect::Bounds;
use super::shape::circle;
use super::text::TextWidth;
use crate::note::{Curve, DemandSketch};

/// Width of the laid-out weld, and height of the capacity above it (mm).
const WIDTH: f64 = 116.0;
const HEIGHT: f64 = 40.0;
/// Between runs that do not go on where the one before ends (mm).
const GAP: f64 = 3.0;
/// Height of the diagram at most, in capacities.
const TALLEST: f64 = 2.5;
/// From the weld down to the baseline of the names of its runs (mm).
const NAMES: f64 = 7.4;
/// Half the length of a tick (mm).
const TICK: f64 = 1.0;

/// Strokes of the curves, in their order.
const CURVES: [(f64, Dash); 5] = [
    (1.1, Dash::Full),
    (1.1, Dash::Dashed),
    (1.3, Dash::Dotted),
    (1.1, Dash::DashDotted),
    (0.5, Dash::Full),
];

/// The places of the runs on the sheet: where each starts, and how wide it is.
struct Layout {
    starts: Vec<f64>,
    widths: Vec<f64>,
    /// Height of a ratio of 1 (mm).
    unit: f64,
}

/// Draws the diagram.
#[must_use]
pub fn draw_unfolded(sketch: &DemandSketch, fonts: &dyn TextWidth) -> Drawing {
    let mut canvas = Canvas::new(fonts, P2::new(WIDTH + 20.0, 1.5 * HEIGHT));
    let layout = Layout::of(sketch);
    layout.draw_axis(&mut canvas, sketch);
    for (curve, (width, dash)) in sketch.curves.iter().zip(CURVES) {
        layout.draw_curve(&mut canvas, curve, Stroke::black(width).with(dash));
    }
    for curve in &sketch.curves {
        layout.mark_governing(&mut canvas, curve);
    }
    let (labels, dropped) = place_labels(&mut canvas);
    finished(canvas, labels, dropped)
}

/// A drawing of what stands on a canvas, moved to the upper left corner.
pub(super) fn finished(canvas: Canvas<'_>, labels: Vec<Item>, dropped: Vec<String>) -> Drawing {
    let mut items = canvas.items;
    items.sort_by_key(|(layer, _)| *layer);
    let all: Vec<Item> = items
        .into_iter()
        .map(|(_, item)| item)
        .chain(labels)
        .collect();
    let mut bounds = Bounds::empty();
    all.iter().for_each(|item| item.bound(&mut bounds));
    let size = bounds.size();
    Drawing {
        width_mm: size.x,
        height_mm: size.y,
        items: all.iter().map(|item| item.shifted(-bounds.min)).collect(),
        scale: String::new(),
        view: String::new(),
        dropped,
        remarks: canvas.remarks,
    }
}

/// A number of the scale of a drawing, such as 0.5 or 20, without noise.
pub(super) fn plain_number(value: f64) -> String {
    let text = format!("{value:.12}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

impl Layout {
    fn of(sketch: &DemandSketch) -> Self {
        let total: f64 = sketch.runs.iter().map(|run| run.length).sum();
        let breaks = sketch.runs.iter().skip(1).filter(|run| !run.joined).count();
        let breaks = f64::from(u32::try_from(breaks).unwrap_or(u32::MAX));
        // Many runs stand close.
        let gap = GAP.min(0.4 * WIDTH / breaks.max(1.0));
        let scale = (WIDTH - gap * breaks) / total.max(f64::MIN_POSITIVE);
        let (mut starts, mut widths, mut at) = (Vec::new(), Vec::new(), 0.0);
        for (index, run) in sketch.runs.iter().enumerate() {
            if index > 0 && !run.joined {
                at += gap;
            }
            starts.push(at);
            widths.push(run.length * scale);
            at += run.length * scale;
        }
        let curves = sketch.curves.iter().flat_map(|curve| &curve.runs);
        let top = curves
            .flat_map(|(_, ratios)| ratios)
            .copied()
            .fold(1.0, f64::max);
        Self {
            starts,
            widths,
            unit: HEIGHT * if top > TALLEST { TALLEST / top } else { 1.0 },
        }
    }

    fn point(&self, run: usize, part: f64, ratio: f64) -> P2 {
        P2::new(
            self.starts[run] + part * self.widths[run],
            -ratio * self.unit,
        )
    }

    fn right(&self) -> f64 {
        let last = self.starts.len().saturating_sub(1);
        self.starts.get(last).copied().unwrap_or(0.0)
            + self.widths.get(last).copied().unwrap_or(0.0)
    }

    /// The weld as the axis, its ends and names; the scale at the left; the capacity.
    fn draw_axis(&self, canvas: &mut Canvas<'_>, sketch: &DemandSketch) {
        for (index, run) in sketch.runs.iter().enumerate() {
            let (from, to) = (self.point(index, 0.0, 0.0), self.point(index, 1.0, 0.0));
            canvas.line(from, to, Stroke::black(1.8));
            for end in [from, to] {
                canvas.line(end, end + P2::y() * TICK, Stroke::black(0.6));
                canvas.aid(end, end - P2::y() * self.unit, Stroke::grey(0.3));
            }
            for (end, number) in [from, to].into_iter().zip(&run.ends) {
                let shared = run.joined && (end - from).norm() < 1e-9;
                if let Some(number) = number.as_ref().filter(|_| !shared) {
                    let words = canvas.words(vec![Span::new(number.clone(), Style::Bold)]);
                    let height = TICK + 0.9 + words.size()[1] / 2.0;
                    let at = |dx: f64, cost: f64| Candidate {
                        centre: end + P2::new(dx, height),
                        angle: 0.0,
                        cost,
                    };
                    let half = words.size()[0] / 2.0 + 0.5;
                    let places = vec![at(0.0, 0.0), at(half, 1.0), at(-half, 1.0)];
                    canvas.want(rank::LETTER, words, end, places);
                }
            }
        }
        self.name_runs(canvas, sketch);
        let (left, right) = (P2::new(-3.0, 0.0), P2::new(self.right(), 0.0));
        canvas.line(left, left - P2::y() * self.unit, Stroke::black(0.4));
        for (part, text) in [(0.0, "0"), (0.5, "0.5"), (1.0, "1")] {
            let up = -P2::y() * (part * self.unit);
            canvas.line(left + up - P2::x() * TICK, left + up, Stroke::black(0.4));
            let words = canvas.words(vec![Span::new(text, Style::Plain)]);
            let centre = left + up - P2::x() * (TICK + 0.8 + words.size()[0] / 2.0);
            let label = words.label(centre, 0.0);
            canvas.draw_kept(Layer::Mark, Item::Label(label), Keep::Off);
        }
        let one = -P2::y() * self.unit;
        canvas.aid(left + one / 2.0, right + one / 2.0, Stroke::grey(0.3));
        canvas.line(left + one, right + one, Stroke::black(0.7));
        let words = canvas.words(vec![Span::new("capacity", Style::Italic)]);
        let [width, height] = words.size();
        let at = |x: f64, side: f64, cost: f64| Candidate {
            centre: P2::new(x, one.y - side * (0.8 + height / 2.0)),
            angle: 0.0,
            cost,
        };
        let (far, near) = (right.x - width / 2.0, left.x + 1.0 + width / 2.0);
        let places = vec![
            at(far, 1.0, 0.0),
            at(near, 1.0, 1.0),
            at(far, -1.0, 2.0),
            at(near, -1.0, 3.0),
        ];
        canvas.want(rank::GOVERNING, words, right + one, places);
    }

    /// Names below their runs if all fit, else their numbers.
    fn name_runs(&self, canvas: &mut Canvas<'_>, sketch: &DemandSketch) {
        let named: Vec<_> = sketch
            .runs
            .iter()
            .map(|run| canvas.words(vec![Span::new(run.name.clone(), Style::Plain)]))
            .collect();
        let gap = |index: usize| {
            let joined = |at: usize| sketch.runs.get(at).is_none_or(|run| run.joined);
            if index > 0 && joined(index) {
                -1.0
            } else {
                1.0
            }
        };
        let fit = named
            .iter()
            .enumerate()
            .all(|(index, words)| words.size()[0] <= self.widths[index] + gap(index));
        if !fit {
            canvas
                .remarks
                .push("the numbers of runs are those of the table of runs".to_owned());
        }
        for (index, name) in named.into_iter().enumerate() {
            let words = if fit {
                name
            } else {
                canvas.words(vec![Span::new((index + 1).to_string(), Style::Plain)])
            };
            if words.size()[0] > self.widths[index] + 1.5 {
                continue;
            }
            // On one baseline, whatever descends below it.
            let drop = (words.fall - words.rise) / 2.0;
            let centre = self.point(index, 0.5, 0.0) + P2::y() * (NAMES + drop);
            let label = words.label(centre, 0.0);
            canvas.draw_kept(Layer::Mark, Item::Label(label), Keep::Off);
        }
    }

    fn draw_curve(&self, canvas: &mut Canvas<'_>, curve: &Curve, stroke: Stroke) {
        for (run, ratios) in &curve.runs {
            let steps = ratios.len().saturating_sub(1).max(1);
            let part = |step: usize| step as f64 / steps as f64;
            let points: Vec<P2> = ratios
                .iter()
                .enumerate()
                .map(|(step, ratio)| self.point(*run, part(step), *ratio))
                .collect();
            let item = Item::Path(Path::through(&points, stroke));
            canvas.draw_kept(Layer::Weld, item, Keep::OffIfPossible);
        }
    }

    fn mark_governing(&self, canvas: &mut Canvas<'_>, curve: &Curve) {
        let (run, part, ratio, text) = &curve.governing;
        let at = self.point(*run, *part, *ratio);
        canvas.mark([circle(at, 1.0, Stroke::black(0.8), Fill::White)]);
        let mut spans = vec![Span::new(curve.letter.clone(), Style::Bold)];
        if !text.is_empty() {
            spans.push(Span::new(format!("  {text}"), Style::Plain));
        }
        let words = canvas.words(spans);
        let mut places = around(at, 1.8, words.size(), -P2::y());
        places.extend(dearer(around(at, 3.2, words.size(), -P2::y()), 3.0));
        canvas.want(rank::GOVERNING, words, at, places);
    }
}
