//! Runs of weld: as thick as their throats, thin where an end is not counted, named or numbered.

use super::canvas::{Keep, Layer, strokes};
use super::compose::{SAME, Sheet};
use super::drawing::{Ink, Item, MarkKind, P2, Path, Span, Stroke, Style};
use super::place::{Candidate, around, beside, dearer, rank};
use super::rect::square;
use super::scene::RunLine;
use super::shape::disc_of;
use super::text::Words;
use super::view::{project, samples, unit};
use crate::quantity::real::hypot;
use crate::weld::{Segment, V3};

/// Greatest thickness of a run on the sheet (mm): beyond, the throat hides the joint.
const THICKEST: f64 = 6.0;
/// Least thickness of a run, and of one that is an outline under something else (mm).
const LEAST: f64 = 0.8;
/// Thicker runs are outlines with light grey inside, so that marks on them are seen (mm).
const SOLID: f64 = 2.5;
/// Thickness of such an outline, and of an end that is not counted (mm).
const RIM: f64 = 0.3;
/// Radius of the ring around a run's number, at least, and its space about the digits (mm).
const NUMBER_RING: f64 = 1.75;
const NUMBER_SPACE: f64 = 0.35;

/// An end of a run on the sheet.
#[derive(Clone, Copy)]
struct End {
    at: P2,
    /// Unit vector out of the run.
    out: P2,
    /// Thickness of the run (mm).
    width: f64,
}

impl Sheet<'_> {
    pub(super) fn runs(&mut self) {
        self.canvas.runs = self.scene.runs.len();
        let mut ends: Vec<End> = Vec::new();
        for run in &self.scene.runs {
            ends.extend(self.run(run));
        }
        self.close_ends(&ends);
        let ring = self.number_ring();
        for run in &self.scene.runs {
            self.run_label(run, ring);
        }
    }

    /// Draws a run; returns its ends.
    fn run(&mut self, run: &RunLine) -> Vec<End> {
        let counted = run.counted.as_ref().unwrap_or(&run.path);
        let width = self.run_width(run);
        let ink = if self.scene.faint {
            Ink::Faint
        } else {
            Ink::Black
        };
        let line = |path: &Segment, width: f64, ink: Ink| {
            let stroke = Stroke {
                width,
                ink,
                ..Stroke::black(0.0)
            };
            Item::Path(Path {
                stroke: Some(stroke),
                ..project(&self.view, path)
            })
        };
        let (thin, thick) = (line(&run.path, RIM, ink), line(counted, width, ink));
        let core = line(counted, width - 2.0 * RIM, Ink::Light);
        if run.counted.is_some() {
            if !self.scene.faint {
                self.canvas
                    .remark("thin ends are not counted in the length");
            }
            self.canvas.draw_kept(Layer::Weld, thin, Keep::Off);
        }
        self.canvas.draw_kept(Layer::Weld, thick, Keep::Off);
        if self.hollow(width) {
            self.canvas.draw(Layer::Core, core);
        }
        self.run_ends(counted, width)
    }

    /// As thick as the throat to scale, but always visible.
    fn run_width(&self, run: &RunLine) -> f64 {
        (run.throat * self.view.scale).clamp(LEAST, THICKEST)
    }

    /// Whether a run is an outline with light grey inside.
    fn hollow(&self, width: f64) -> bool {
        width > SOLID && !self.scene.faint
    }

    /// Both ends of a run; none for a full circle.
    fn run_ends(&self, path: &Segment, width: f64) -> Vec<End> {
        let points = samples(path);
        let last = points.len() - 1;
        if (points[0] - points[last]).norm() < 1e-9 * (1.0 + points[0].norm()) {
            return Vec::new();
        }
        let end = |at: &V3, before: &V3| {
            let (at, before) = (self.view.image(at), self.view.image(before));
            End {
                at,
                out: unit(at - before),
                width,
            }
        };
        vec![
            end(&points[0], &points[1]),
            end(&points[last], &points[last - 1]),
        ]
    }

    /// Closes the outline at free ends, and the notch where runs meet.
    fn close_ends(&mut self, ends: &[End]) {
        for (i, end) in ends.iter().enumerate() {
            let mut others = ends.iter().enumerate().filter(|(j, _)| *j != i);
            let met = others.find(|(_, other)| (other.at - end.at).norm() < SAME);
            match met {
                Some((_, other)) => self.notch(end, other),
                None if self.hollow(end.width) => self.cap(end),
                None => {}
            }
        }
    }

    fn notch(&mut self, end: &End, other: &End) {
        if self.scene.faint {
            return;
        }
        let half = end.width.min(other.width) / 2.0;
        let disc = disc_of(end.at, half, Ink::Black);
        self.canvas.draw_kept(Layer::Weld, disc, Keep::Off);
        if self.hollow(end.width) && self.hollow(other.width) {
            let core = disc_of(end.at, half - RIM, Ink::Light);
            self.canvas.draw(Layer::Core, core);
        }
    }

    fn cap(&mut self, end: &End) {
        let middle = end.at - end.out * (RIM / 2.0);
        let side = square(end.out) * (end.width / 2.0);
        let stroke = Stroke {
            width: RIM,
            ..Stroke::black(0.0)
        };
        let item = Item::Path(Path::through(&[middle - side, middle + side], stroke));
        self.canvas.draw(Layer::Core, item);
    }

    /// Radius of the rings around the numbers of runs: one for all.
    fn number_ring(&self) -> f64 {
        let radius = |run: &RunLine| {
            let [width, height] = self.number(run).size();
            hypot(width, height) / 2.0 + NUMBER_SPACE
        };
        self.scene
            .runs
            .iter()
            .map(radius)
            .fold(NUMBER_RING, f64::max)
    }

    fn number(&self, run: &RunLine) -> Words {
        let span = Span::new(run.number.clone(), Style::Plain);
        self.canvas.words(vec![span])
    }

    /// The name beside the run, or its number in a ring.
    fn run_label(&mut self, run: &RunLine, ring: f64) {
        if run.label.is_empty() {
            return;
        }
        let half = self.run_width(run) / 2.0;
        let path = project(&self.view, run.counted.as_ref().unwrap_or(&run.path));
        let stroke = Stroke {
            width: 2.0 * half,
            ..Stroke::black(0.0)
        };
        let rects = strokes(&Item::Path(Path {
            stroke: Some(stroke),
            ..path
        }));
        let mark = self.canvas.name(MarkKind::Run, rects);
        let span = Span::new(run.label.clone(), Style::Plain);
        let words = self.canvas.words(vec![span]);
        let number = self.number(run).ringed(ring);
        let (places, anchor) = self.run_places(&run.path, half, words.size(), true);
        let (plain, _) = self.run_places(&run.path, half, number.size(), false);
        let want = self.canvas.want(rank::RUN, words, anchor, places);
        want.naming(mark, half);
        if !run.number.is_empty() {
            want.or(number, plain);
        }
    }

    /// Places beside a run, the text along it where `turned`; and the run's middle.
    fn run_places(
        &self,
        path: &Segment,
        half: f64,
        size: [f64; 2],
        turned: bool,
    ) -> (Vec<Candidate>, P2) {
        let clear = half + if turned { 1.1 } else { 0.7 };
        match path {
            Segment::Straight { a, b } => {
                let (a, b) = (self.view.image(a), self.view.image(b));
                let middle = (a + b) / 2.0;
                let toward = self.inward(middle);
                let mut places = beside(a, b, clear, size, toward, turned);
                let free = around(middle, clear, size, -toward);
                let short = size[0] > 1.3 * (b - a).norm();
                places = dearer(places, if short && turned { 6.0 } else { 0.0 });
                places.extend(dearer(free, 4.0));
                (places, middle)
            }
            Segment::Arc { .. } => self.arc_places(path, clear, size),
        }
    }

    /// Places outside and inside a curved run, level, from its middle to its ends.
    fn arc_places(&self, path: &Segment, clear: f64, size: [f64; 2]) -> (Vec<Candidate>, P2) {
        let points: Vec<P2> = samples(path).iter().map(|p| self.view.image(p)).collect();
        let mut places = Vec::new();
        for (at, cost) in [
            (16, 0.0),
            (12, 0.5),
            (20, 0.5),
            (8, 1.0),
            (24, 1.0),
            (4, 1.5),
            (28, 1.5),
        ] {
            let out = -self.inward(points[at]);
            places.extend(dearer(around(points[at], clear, size, out), cost));
        }
        (places, points[16])
    }
}
