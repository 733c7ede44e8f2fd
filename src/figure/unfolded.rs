//! Demand over capacity along the weld, laid out straight run by run.
//!
//! The capacity is the line at 1. Each curve is its check's in its governing case; a ring marks
//! where it governs; rings that overlap share their letters. Numbers of points stand at the ends,
//! names of runs below.

use super::PT;
use super::canvas::{Canvas, Keep, Layer, strokes};
use super::drawing::{Dash, Drawing, Fill, Item, MarkKind, P2, Path, Span, Stroke, Style};
use super::place::{Candidate, around, dearer, place_labels, rank};
use super::rect::Rect;
use super::shape::circle;
use super::text::{TextWidth, Words};
use super::view::unit;
use crate::note::{Curve, DemandSketch};

/// Width of the laid-out weld, and height of the capacity above it (mm).
const WIDTH: f64 = 106.0;
const HEIGHT: f64 = 40.0;
/// Between runs that do not go on where the one before ends (mm).
const GAP: f64 = 3.0;
/// Height of the diagram at most, in capacities.
const TALLEST: f64 = 1.6;
/// From the weld down to the top of the names of its runs (mm).
const NAMES: f64 = 5.4;
/// Height of a figure (mm).
const FIGURE: f64 = 1.85;
/// Between labels of a row, and how far one may stand beside its place (mm).
const ROW_SPACE: f64 = 0.6;
const ROW_SHIFT: f64 = 1.2;
/// Between names of runs (mm).
const NAME_SPACE: f64 = 2.0;
/// What it costs a letter to stand beside the run of its curve's ring.
const OUTSIDE: f64 = 4.0;
/// Radius of the ring where a curve governs, and how near two stand that share their letters (mm).
const PEAK: f64 = 1.0;
const RIM: f64 = 0.4;
/// Radius of the ring around a run's number (mm).
const RING: f64 = 1.75;
/// Least distance of ticks on the scale (mm), and how many there are at most.
const LEAST_STEP: f64 = 4.0;
const MOST_TICKS: u32 = 40;
/// Thickness of the laid-out weld (pt).
const WELD: f64 = 1.8;
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
    /// From tick to tick of the scale, and its end (ratios).
    step: f64,
    top: f64,
}

/// Where a curve governs.
struct Peak {
    at: P2,
    /// Number of the run.
    run: usize,
    letters: String,
    /// Boxes of the curve.
    rects: Vec<Rect>,
}

/// Labels in a row below the weld, from left to right.
struct Row {
    /// From the weld to the top of the figures (mm).
    top: f64,
    /// Where the last label ends (mm).
    end: f64,
    /// How many find no room.
    left_out: usize,
}

impl Row {
    fn at(top: f64) -> Self {
        Self {
            top,
            end: f64::NEG_INFINITY,
            left_out: 0,
        }
    }

    /// Puts a label under a place, a little to the right where the one before is in the way.
    fn put(&mut self, canvas: &mut Canvas<'_>, words: &Words, x: f64) {
        let half = words.size()[0] / 2.0;
        let left = (x - half).max(self.end + ROW_SPACE);
        if left > x - half + ROW_SHIFT {
            self.left_out += 1;
            canvas.dropped.push(words.text());
            return;
        }
        self.end = left + 2.0 * half;
        // On one baseline, whatever descends below it.
        let drop = if words.ring > 0.0 {
            words.ring
        } else {
            FIGURE + (words.fall - words.rise) / 2.0
        };
        let centre = P2::new(left + half, self.top + drop);
        if words.ring > 0.0 {
            let ring = circle(centre, words.ring, Stroke::black(0.5), Fill::None);
            canvas.draw(Layer::Mark, ring);
        }
        let label = Item::Label(words.label(centre, 0.0));
        canvas.draw_kept(Layer::Mark, label, Keep::Off);
    }

    fn tell(&self, canvas: &mut Canvas<'_>, what: &str) {
        if self.left_out > 0 {
            let says = format!("the numbers of {} {what} find no room", self.left_out);
            canvas.remark(&says);
        }
    }
}

/// Draws the diagram.
#[must_use]
pub fn draw_unfolded(sketch: &DemandSketch, fonts: &dyn TextWidth) -> Drawing {
    let mut canvas = Canvas::new(fonts, P2::new(WIDTH + 18.0, 85.0));
    let layout = Layout::of(sketch);
    layout.draw_axis(&mut canvas, sketch);
    let looks = CURVES.map(|(width, dash)| Stroke::black(width).with(dash));
    let drawn = sketch.curves.iter().zip(looks);
    let peaks: Vec<Peak> = drawn
        .map(|(curve, stroke)| Peak {
            at: layout.governing(curve),
            run: curve.governing.0,
            letters: curve.letter.clone(),
            rects: layout.draw_curve(&mut canvas, curve, stroke),
        })
        .collect();
    // The ring of the largest utilisation lies on top.
    for peak in peaks.iter().rev() {
        canvas.mark([circle(peak.at, PEAK, Stroke::black(0.8), Fill::White)]);
    }
    let apart = joined(&mut canvas, peaks);
    for (index, peak) in apart.into_iter().enumerate().rev() {
        layout.letter(&mut canvas, peak, index == 0);
    }
    let labels = place_labels(&mut canvas);
    canvas.finish(labels)
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
        // The scale ends at a tick, in halves or, where they would stand too close, in whole units.
        let to_tick = |step: f64| (top / step - 1e-9).ceil() * step;
        let unit = |top: f64| HEIGHT * if top > TALLEST { TALLEST / top } else { 1.0 };
        let halves = to_tick(0.5);
        let (step, top) = if unit(halves) < LEAST_STEP * 2.0 {
            (1.0, to_tick(1.0))
        } else {
            (0.5, halves)
        };
        Self {
            starts,
            widths,
            unit: unit(top),
            step,
            top,
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
        for index in 0..sketch.runs.len() {
            let (from, to) = (self.point(index, 0.0, 0.0), self.point(index, 1.0, 0.0));
            // Its upper edge is the zero of the scale, so that it hides no small utilisation.
            let under = P2::y() * (WELD / 2.0 * super::PT);
            canvas.line(from + under, to + under, Stroke::black(WELD));
            for end in [from, to] {
                canvas.line(end, end + P2::y() * TICK, Stroke::black(0.6));
                canvas.aid(end, end - P2::y() * self.unit, Stroke::grey(0.3));
            }
        }
        self.number_points(canvas, sketch);
        self.name_runs(canvas, sketch);
        let (left, right) = (P2::new(-3.0, 0.0), P2::new(self.right(), 0.0));
        let (step, top) = (self.step, self.top);
        canvas.line(left, left - P2::y() * (top * self.unit), Stroke::black(0.4));
        let title = canvas.words(vec![Span::new("U", Style::Italic)]);
        let over = left - P2::y() * (top * self.unit + 1.0 + title.size()[1] / 2.0);
        let title = title.label(over, 0.0);
        canvas.draw_kept(Layer::Mark, Item::Label(title), Keep::Off);
        let ticks = (0..MOST_TICKS).map(|tick| f64::from(tick) * step);
        for part in ticks.take_while(|part| *part <= top) {
            let up = -P2::y() * (part * self.unit);
            canvas.line(left + up - P2::x() * TICK, left + up, Stroke::black(0.4));
            let words = canvas.words(vec![Span::new(plain_number(part), Style::Plain)]);
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

    /// Numbers of points below the ends of runs.
    fn number_points(&self, canvas: &mut Canvas<'_>, sketch: &DemandSketch) {
        let mut row = Row::at(TICK + 0.8);
        for (index, run) in sketch.runs.iter().enumerate() {
            for (part, number) in [0.0, 1.0].into_iter().zip(&run.ends) {
                let shared = run.joined && part == 0.0;
                if let Some(number) = number.as_ref().filter(|_| !shared) {
                    let words = canvas.words(vec![Span::new(number.clone(), Style::Bold)]);
                    row.put(canvas, &words, self.point(index, part, 0.0).x);
                }
            }
        }
        row.tell(canvas, "points");
    }

    /// Names below their runs if all fit, else their numbers.
    fn name_runs(&self, canvas: &mut Canvas<'_>, sketch: &DemandSketch) {
        let words = |text: &str| canvas.words(vec![Span::new(text, Style::Plain)]);
        let names = sketch.runs.iter().map(|run| words(&run.name));
        let mut labels: Vec<Words> = names.collect();
        let middle = |index: usize| self.point(index, 0.5, 0.0).x;
        let right = |index: usize, label: &Words| middle(index) + label.size()[0] / 2.0;
        let fit = labels.windows(2).enumerate().all(|(index, two)| {
            right(index, &two[0]) + NAME_SPACE
                <= 2.0 * middle(index + 1) - right(index + 1, &two[1])
        });
        if !fit {
            let number = |index: usize| words(&index.to_string()).ringed(RING);
            labels = (1..=labels.len()).map(number).collect();
            canvas.remark("circled numbers: rows of the table “Runs as given”");
        }
        let mut row = Row::at(NAMES);
        for (index, label) in labels.iter().enumerate() {
            row.put(canvas, label, middle(index));
        }
        row.tell(canvas, "runs");
    }

    /// Draws a curve; returns the boxes of its strokes.
    fn draw_curve(&self, canvas: &mut Canvas<'_>, curve: &Curve, stroke: Stroke) -> Vec<Rect> {
        let mut rects = Vec::new();
        for (run, ratios) in &curve.runs {
            let steps = ratios.len().saturating_sub(1).max(1);
            let part = |step: usize| step as f64 / steps as f64;
            let points: Vec<P2> = ratios
                .iter()
                .enumerate()
                .map(|(step, ratio)| self.point(*run, part(step), *ratio))
                .collect();
            let item = Item::Path(Path::through(&points, stroke));
            rects.extend(strokes(&item));
            canvas.draw_kept(Layer::Weld, item, Keep::Off);
        }
        rects
    }

    /// Where a curve governs.
    fn governing(&self, curve: &Curve) -> P2 {
        let (run, part, ratio) = curve.governing;
        self.point(run, part, ratio)
    }

    /// The letters of a ring: over the largest curve, under the others.
    fn letter(&self, canvas: &mut Canvas<'_>, peak: Peak, first: bool) {
        let at = peak.at;
        let words = canvas.words(vec![Span::new(peak.letters, Style::Bold)]);
        let mut rects = peak.rects;
        rects.push(Rect::upright(at, PEAK, PEAK));
        let mark = canvas.name(MarkKind::Curve, rects);
        // Toward the middle, so that the ends of the diagram keep their width.
        let side = if first { -1.0 } else { 1.0 };
        let inward = P2::new((self.right() / 2.0 - at.x) / WIDTH, side);
        let toward = unit(inward);
        let mut places = around(at, 1.8, words.size(), toward);
        places.extend(dearer(around(at, 2.6, words.size(), toward), 3.0));
        // Over its own run if there is room.
        let own = self.starts[peak.run]..self.starts[peak.run] + self.widths[peak.run];
        for place in &mut places {
            if !own.contains(&place.centre.x) {
                place.cost += OUTSIDE;
            }
        }
        canvas
            .want(rank::GOVERNING, words, at, places)
            .naming(mark, PEAK);
    }
}

/// Rings that overlap, one with the next, as one: at the place of the first, with all letters.
fn joined(canvas: &mut Canvas<'_>, peaks: Vec<Peak>) -> Vec<Peak> {
    let mut found: Vec<(Peak, Vec<P2>)> = Vec::new();
    for peak in peaks {
        let near = |known: &P2| (known - peak.at).norm() < 2.0 * PEAK + RIM;
        match found.iter_mut().find(|(_, rings)| rings.iter().any(near)) {
            Some((first, rings)) => {
                first.letters = format!("{}, {}", first.letters, peak.letters);
                first.rects.extend(peak.rects);
                rings.push(peak.at);
                canvas
                    .remark("letters that stand together name their rings from the upper one down");
            }
            None => {
                let at = peak.at;
                found.push((peak, vec![at]));
            }
        }
    }
    found.into_iter().map(|(peak, _)| peak).collect()
}

/// A curve is at least as thick as print needs.
const _: () = assert!(0.5 * PT > 0.17, "a curve too thin for print");
