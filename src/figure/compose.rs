//! Puts a drawing together: finds the largest standard scale at which everything fits.

use super::canvas::{Canvas, Keep, Layer};
use super::dimension::{Placed, draw_dimension};
use super::drawing::{Drawing, Fill, Ink, Item, P2, Path, Span, Stroke, Style};
use super::load::{AT_CENTROID, Spot, draw_load, draw_outline, spot};
use super::place::{Candidate, around, beside, dearer, place_labels, rank};
use super::rect::Bounds;
use super::scale::{Scale, standard};
use super::scene::{Dimension, RunLine, Scene};
use super::shape::{circle, disc, open_head};
use super::text::TextWidth;
use super::triad::{draw_centroid, draw_triad};
use super::view::{View, project, samples, unit};
use crate::quantity::real::ten_to;
use crate::weld::{Segment, V3};

/// Greatest thickness of a run on the sheet (mm): beyond, the throat hides the joint.
const THICKEST_RUN: f64 = 6.0;
/// Least thickness of a run (pt).
const LEAST_RUN: f64 = 0.9;
/// The same of a run that is an outline under something else.
const LEAST_FAINT: f64 = 2.4;
/// Radius of a check point's circle, and the least where points crowd (mm).
const POINT: f64 = 0.75;
const LEAST_POINT: f64 = 0.35;
/// Points nearer than this on the sheet share a mark (mm).
const SAME: f64 = 0.25;
/// Least radius of the ring around the governing point; it stands clear of the thickest run (mm).
const RING: f64 = 1.75;
/// A dimension in space longer than this many times the group's size is broken.
const LONGEST_LINE: f64 = 1.5;
/// Length of the longest vector, and of the shortest that is drawn (mm).
const LONGEST_VECTOR: f64 = 24.0;
const LEAST_VECTOR: f64 = 0.6;
/// An origin further outside the group than this part of its size is not drawn.
const ORIGIN_REACH: f64 = 0.6;

/// The room on the page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Room {
    /// Width (mm).
    pub width: f64,
    /// Height (mm).
    pub height: f64,
}

impl Default for Room {
    /// The note's column, less a little on each side.
    fn default() -> Self {
        Self {
            width: 128.0,
            height: 85.0,
        }
    }
}

/// Draws a scene for the note's column.
///
/// See [`draw_in`].
#[must_use]
pub fn draw(scene: &Scene, fonts: &dyn TextWidth) -> Drawing {
    draw_in(scene, fonts, Room::default())
}

/// Draws a scene at the largest standard scale at which it fits the room with all its furniture.
///
/// Positions and throats of the scene are in its length unit, the drawing is in mm. Only a scene
/// that fits at no scale, for the length of its texts, gives a drawing larger than the room.
/// Labels without a free place are left out and listed in [`Drawing::dropped`].
#[must_use]
pub fn draw_in(scene: &Scene, fonts: &dyn TextWidth, room: Room) -> Drawing {
    let view = View::of(scene);
    let room = P2::new(room.width, room.height);
    let bare = group_bounds(&view, &scene.runs).size();
    let scales = standard(&scene.units);
    let last = scales.len() - 1;
    for (i, scale) in scales.iter().enumerate() {
        if i < last && (bare.x * scale.factor > room.x || bare.y * scale.factor > room.y) {
            continue;
        }
        let drawing = Sheet::new(scene, view.scaled(scale.factor), fonts, room).finish(scale);
        if i == last || (drawing.width_mm <= room.x && drawing.height_mm <= room.y) {
            return drawing;
        }
    }
    unreachable!("the last scale always returns")
}

/// A sheet under way.
struct Sheet<'a> {
    scene: &'a Scene,
    view: View,
    canvas: Canvas<'a>,
    group: Bounds,
    /// Where leads start and to which labels turn: the centroid, or the middle of the group.
    centre: P2,
    spots: Vec<Spot>,
}

impl<'a> Sheet<'a> {
    fn new(scene: &'a Scene, view: View, fonts: &'a dyn TextWidth, room: P2) -> Self {
        let group = group_bounds(&view, &scene.runs);
        let centre = scene
            .centroid
            .map_or_else(|| group.centre(), |c| view.image(&c));
        let spots = scene
            .loads
            .iter()
            .map(|l| spot(view.image(&l.at), &group, centre))
            .collect();
        Self {
            scene,
            view,
            canvas: Canvas::new(fonts, room),
            group,
            centre,
            spots,
        }
    }

    fn finish(mut self, scale: &Scale) -> Drawing {
        self.outlines();
        self.runs();
        self.points();
        self.centroid();
        for (load, spot) in self.scene.loads.iter().zip(&self.spots) {
            draw_load(&mut self.canvas, &self.view, load, *spot, self.centre);
        }
        self.vectors();
        self.origin();
        for dimension in &self.scene.dimensions {
            self.dimension(dimension);
        }
        let (mut labels, dropped) = place_labels(&mut self.canvas);
        draw_triad(
            &mut self.canvas,
            &self.view,
            &self.scene.axes,
            &mut labels,
            &self.group,
        );
        self.sheet(labels, dropped, scale)
    }

    /// Sorts the layers and moves all to the upper left corner.
    fn sheet(mut self, labels: Vec<Item>, dropped: Vec<String>, scale: &Scale) -> Drawing {
        self.canvas.items.sort_by_key(|(layer, _)| *layer);
        let all: Vec<Item> = self
            .canvas
            .items
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
            scale: scale.text.clone(),
            view: self.view.words,
            dropped,
            remarks: self.canvas.remarks,
        }
    }

    fn outlines(&mut self) {
        for outline in self.scene.outlines.iter().filter(|o| o.len() > 1) {
            let points: Vec<P2> = outline.iter().map(|p| self.view.image(p)).collect();
            draw_outline(&mut self.canvas, &points);
        }
    }

    fn runs(&mut self) {
        self.canvas.runs = self.scene.runs.len();
        let mut ends: Vec<(P2, f64)> = Vec::new();
        for run in &self.scene.runs {
            let stroke = self.run_stroke(run);
            let path = Path {
                stroke: Some(stroke),
                ..project(&self.view, &run.path)
            };
            self.canvas
                .draw_kept(Layer::Weld, Item::Path(path), Keep::Off);
            for point in run_ends(&run.path) {
                let end = self.view.image(&point);
                self.corner(&ends, end, stroke.width / 2.0);
                ends.push((end, stroke.width / 2.0));
            }
            if !run.label.is_empty() {
                self.run_label(run, stroke.width / 2.0);
            }
        }
    }

    /// Closes the notch where a run's end meets an earlier one.
    fn corner(&mut self, ends: &[(P2, f64)], end: P2, half: f64) {
        let earlier = ends.iter().find(|(p, _)| (p - end).norm() < SAME);
        if let Some((p, other)) = earlier.filter(|_| !self.scene.faint) {
            self.canvas.draw(Layer::Weld, disc(*p, half.min(*other)));
        }
    }

    /// As thick as the throat to scale, but always visible.
    fn run_stroke(&self, run: &RunLine) -> Stroke {
        let least = if self.scene.faint {
            Stroke {
                ink: Ink::Faint,
                ..Stroke::black(LEAST_FAINT)
            }
        } else {
            Stroke::black(LEAST_RUN)
        };
        Stroke {
            width: (run.throat * self.view.scale)
                .max(least.width)
                .min(THICKEST_RUN),
            ..least
        }
    }

    fn run_label(&mut self, run: &RunLine, half: f64) {
        let words = self
            .canvas
            .words(vec![Span::new(run.label.clone(), Style::Plain)]);
        let (size, clear) = (words.size(), half + 1.1);
        let (places, anchor) = match &run.path {
            Segment::Straight { a, b } => {
                let (a, b) = (self.view.image(a), self.view.image(b));
                let middle = (a + b) / 2.0;
                let toward = self.inward(middle);
                let mut places = beside(a, b, clear, size, toward, true);
                let free = around(middle, clear, size, -toward);
                let short = size[0] > 1.3 * (b - a).norm();
                places = dearer(places, if short { 6.0 } else { 0.0 });
                places.extend(dearer(free, 4.0));
                (places, middle)
            }
            Segment::Arc { .. } => self.arc_places(&run.path, clear, size),
        };
        self.canvas.want(rank::RUN, words, anchor, places);
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

    /// Direction from a place to the centre of the group; up where there is none.
    fn inward(&self, from: P2) -> P2 {
        let d = self.centre - from;
        if d.norm() > 1.0 { unit(d) } else { -P2::y() }
    }

    fn points(&mut self) {
        let shared = self.shared_points();
        let places: Vec<P2> = shared.iter().map(|(p, _)| *p).collect();
        for (i, (at, text)) in shared.into_iter().enumerate() {
            let near = nearest(&places, i);
            let radius = POINT.min(near * 0.45).max(LEAST_POINT);
            self.canvas
                .mark([circle(at, radius, Stroke::black(0.7), Fill::White)]);
            let governs = self.governing_at(at);
            let mut spans = vec![Span::new(text, Style::Bold)];
            if let Some(says) = governs {
                spans.push(Span::new(format!("  {says}"), Style::Italic));
                self.governing(at, spans);
            } else {
                self.point_label(at, spans, rank::POINT, radius + 0.9);
            }
        }
        let alone = self
            .scene
            .governing
            .as_ref()
            .map(|g| (self.view.image(&g.at), g.label.clone()));
        if let Some((at, says)) =
            alone.filter(|(at, _)| places.iter().all(|p| (p - at).norm() >= SAME))
        {
            self.canvas.mark([disc(at, 0.5)]);
            self.governing(at, vec![Span::new(says, Style::Italic)]);
        }
    }

    /// Arrows at their points, the longest within bounds, to a scale of 1, 2 or 5 and their tenfolds.
    fn vectors(&mut self) {
        let Some(vectors) = &self.scene.vectors else {
            return;
        };
        let longest = vectors
            .arrows
            .iter()
            .map(|(_, f)| f.norm())
            .fold(0.0, f64::max);
        let Some(per_mm) = vector_scale(longest) else {
            return;
        };
        let stroke = Stroke::black(0.8);
        for (index, (at, f)) in vectors.arrows.iter().enumerate() {
            let from = self.view.image(at);
            let along = self.view.image(f) / (self.view.scale * per_mm);
            let to = from + along;
            if along.norm() < LEAST_VECTOR {
                continue;
            }
            self.canvas.line(from, to, stroke);
            self.canvas.mark([open_head(to, unit(along), stroke)]);
            if index == 0 && !vectors.first.is_empty() {
                let words = self
                    .canvas
                    .words(vec![Span::new(vectors.first.clone(), Style::Plain)]);
                let mut places = around(to, 1.2, words.size(), unit(along));
                places.extend(dearer(around(to, 3.5, words.size(), unit(along)), 5.0));
                self.canvas.want(rank::LOAD, words, to, places);
            }
        }
        let text = super::unfolded::plain_number(per_mm);
        self.canvas
            .remarks
            .push(format!("arrows: {text} {} to the millimetre", vectors.unit));
    }

    fn governing_at(&self, at: P2) -> Option<String> {
        let governing = self.scene.governing.as_ref()?;
        ((self.view.image(&governing.at) - at).norm() < SAME).then(|| governing.label.clone())
    }

    fn governing(&mut self, at: P2, spans: Vec<Span>) {
        let thickest = self
            .scene
            .runs
            .iter()
            .map(|r| self.run_stroke(r).width)
            .fold(0.0, f64::max);
        let radius = RING.max(thickest / 2.0 + 0.7);
        self.canvas
            .mark([circle(at, radius, Stroke::black(0.9), Fill::None)]);
        self.point_label(at, spans, rank::GOVERNING, radius + 0.6);
    }

    fn point_label(&mut self, at: P2, spans: Vec<Span>, rank: u8, clear: f64) {
        let words = self.canvas.words(spans);
        let out = -self.inward(at);
        let size = words.size();
        let mut places = around(at, clear, size, out);
        places.extend(dearer(around(at, clear + 1.5, size, out), 4.0));
        self.canvas.want(rank, words, at, places);
    }

    /// Check points by place, the numbers of those at one place joined.
    fn shared_points(&self) -> Vec<(P2, String)> {
        let mut shared: Vec<(P2, String)> = Vec::new();
        for point in &self.scene.points {
            let at = self.view.image(&point.at);
            match shared.iter_mut().find(|(p, _)| (p - at).norm() < SAME) {
                Some((_, text)) => *text = format!("{text}, {}", point.label),
                None => shared.push((at, point.label.clone())),
            }
        }
        shared
    }

    fn centroid(&mut self) {
        if self.scene.centroid.is_some() {
            draw_centroid(&mut self.canvas, self.centre);
            let shared = self
                .spots
                .iter()
                .any(|s| (s.at - self.centre).norm() < AT_CENTROID);
            if !shared {
                self.letter("C", self.centre, 2.0);
            }
        }
    }

    fn origin(&mut self) {
        let Some(origin) = self.scene.origin else {
            return;
        };
        let at = self.view.image(&origin);
        if !self
            .group
            .holds(at, ORIGIN_REACH * self.group.size().norm().max(10.0))
        {
            self.canvas
                .remarks
                .push("the origin lies outside the drawing".into());
            return;
        }
        let known = self
            .scene
            .points
            .iter()
            .any(|p| (self.view.image(&p.at) - at).norm() < SAME);
        if !known {
            let thin = Stroke::black(0.5);
            self.canvas
                .line(at - P2::x() * 1.3, at + P2::x() * 1.3, thin);
            self.canvas
                .line(at - P2::y() * 1.3, at + P2::y() * 1.3, thin);
        }
        self.letter("O", at, 1.6);
    }

    fn letter(&mut self, letter: &str, at: P2, clear: f64) {
        let words = self.canvas.words(vec![Span::new(letter, Style::Italic)]);
        let toward = if letter == "C" {
            P2::new(0.7, -0.7)
        } else {
            P2::new(-0.8, -0.6)
        };
        let mut places = around(at, clear, words.size(), toward);
        places.extend(dearer(around(at, clear + 1.4, words.size(), toward), 5.0));
        self.canvas.want(rank::LETTER, words, at, places);
    }

    fn dimension(&mut self, dimension: &Dimension) {
        let load_at = |p: &V3| {
            self.scene
                .loads
                .iter()
                .position(|l| (l.at - p).norm() < 1e-9 * (1.0 + p.norm()))
        };
        let hits = [load_at(&dimension.from), load_at(&dimension.to)];
        let found = |p: &V3| spot(self.view.image(p), &self.group, self.centre);
        let found = [found(&dimension.from), found(&dimension.to)];
        let mut ends = found.map(|s| s.at);
        let mut broken = found.iter().any(|s| s.broken);
        let centroid_only = self.scene.centroid.is_some_and(|c| {
            (c - dimension.from).norm() < 1e-9 || (c - dimension.to).norm() < 1e-9
        });
        if !self.view.flat {
            (ends, broken) = self.squared(dimension, ends, broken);
        }
        let to_load = hits.iter().any(Option::is_some) || centroid_only;
        draw_dimension(
            &mut self.canvas,
            &self.view,
            &Placed {
                dimension,
                ends,
                to_load,
                group: self.group,
                broken,
            },
        );
    }

    /// In space, both ends are brought onto one line along the axis, so that the line's length is
    /// the distance measured; a thin line shows where the second end came from. A line much longer
    /// than the group is broken.
    fn squared(&mut self, dimension: &Dimension, ends: [P2; 2], broken: bool) -> ([P2; 2], bool) {
        let axis = dimension.axis;
        let along = (dimension.to[axis.index()] - dimension.from[axis.index()]) * self.view.scale;
        let longest = LONGEST_LINE * self.group.size().norm().max(10.0);
        let broken = broken || along.abs() > longest;
        let shown = if broken {
            along.clamp(-longest, longest)
        } else {
            along
        };
        let second = ends[0] + self.view.direction(axis) * shown;
        if (second - ends[1]).norm() > 0.5 {
            self.canvas.aid(second, ends[1], Stroke::grey(0.3).dashed());
        }
        ([ends[0], second], broken)
    }
}

/// Stress for each mm of arrow: the least of 1, 2, 5 and their tenfolds at which the longest fits.
fn vector_scale(longest: f64) -> Option<f64> {
    if !(longest > 0.0 && longest.is_finite()) {
        return None;
    }
    (-12..=12)
        .flat_map(|power| [1.0, 2.0, 5.0].map(|digit| digit * ten_to(power)))
        .find(|per_mm| longest / per_mm <= LONGEST_VECTOR)
}

/// Bounds of the runs on the sheet; a point at the origin for a group without runs.
fn group_bounds(view: &View, runs: &[RunLine]) -> Bounds {
    let mut bounds = Bounds::empty();
    for p in runs.iter().flat_map(|run| samples(&run.path)) {
        bounds.add(view.image(&p), 0.0);
    }
    if runs.is_empty() {
        bounds.add(P2::zeros(), 0.0);
    }
    bounds
}

/// Both ends of a run; none for a full circle.
fn run_ends(path: &Segment) -> impl Iterator<Item = V3> {
    let points = samples(path);
    let (a, b) = (points[0], points[points.len() - 1]);
    let closed = (a - b).norm() < 1e-9 * (1.0 + a.norm());
    [a, b].into_iter().filter(move |_| !closed)
}

/// Distance from one place to the nearest other.
fn nearest(places: &[P2], i: usize) -> f64 {
    let others = places.iter().enumerate().filter(|(j, _)| *j != i);
    others
        .map(|(_, p)| (p - places[i]).norm())
        .fold(f64::INFINITY, f64::min)
}
