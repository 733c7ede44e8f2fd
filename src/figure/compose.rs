//! Puts a drawing together: finds the largest standard scale at which everything fits.

use super::canvas::Canvas;
use super::dimension::{Placed, draw_dimension};
use super::drawing::{Drawing, Mark, MarkKind, P2, Span, Stroke, Style};
use super::load::{AT_CENTROID, Spot, draw_load, draw_outline, spot};
use super::place::{around, dearer, place_labels, rank};
use super::rect::Bounds;
use super::scale::{Scale, standard};
use super::scene::{Axis, Dimension, Load, RunLine, Scene};
use super::text::TextWidth;
use super::triad::{draw_centroid, draw_triad};
use super::view::{View, samples, unit};
use crate::weld::V3;

/// Points nearer than this on the sheet share a mark (mm).
pub(super) const SAME: f64 = 0.25;
/// Half of the cross at the foot of a load (mm).
const FOOT: f64 = 0.9;
/// An origin further outside the group than this part of its size is not drawn.
const ORIGIN_REACH: f64 = 0.6;

/// How often loads and dimensions are drawn anew to keep them apart.
const TRIES: usize = 3;

/// A load point further outside the group than this many times its size is drawn nearer, the next
/// number where the group would stay small.
const FAR: [f64; 3] = [2.0, 0.7, 0.2];
/// The part of the room's width or height that a group should take.
const FILLED: f64 = 0.45;

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
/// Positions and throats of the scene are in its length unit, the drawing is in mm. Where a load far
/// out makes the group small, its distance is broken sooner. Only a scene that fits at no scale, for
/// the length of its texts, gives a drawing larger than the room.
#[must_use]
pub fn draw_in(scene: &Scene, fonts: &dyn TextWidth, room: Room) -> Drawing {
    let room = P2::new(room.width, room.height);
    let mut best: Option<(Drawing, f64)> = None;
    for far in FAR {
        let (drawing, filled) = largest(scene, fonts, room, far);
        if filled >= FILLED {
            return drawing;
        }
        if best.as_ref().is_none_or(|(_, most)| filled > *most + 1e-9) {
            best = Some((drawing, filled));
        }
    }
    best.map_or_else(
        || largest(scene, fonts, room, FAR[0]).0,
        |(drawing, _)| drawing,
    )
}

/// The drawing at the largest scale that fits, and the part of the room's width or height that the
/// group takes in it.
fn largest(scene: &Scene, fonts: &dyn TextWidth, room: P2, far: f64) -> (Drawing, f64) {
    let view = View::of(scene);
    let bare = group_bounds(&view, &scene.runs).size();
    let scales = standard(&scene.units);
    let last = scales.len() - 1;
    for (i, scale) in scales.iter().enumerate() {
        let taken = (bare * scale.factor).component_div(&room).max();
        if i < last && taken > 1.0 {
            continue;
        }
        let view = view.scaled(scale.factor);
        let drawing = Sheet::new(scene, view, fonts, room, far).finish(scale);
        if i == last || (drawing.width_mm <= room.x && drawing.height_mm <= room.y) {
            return (drawing, taken);
        }
    }
    unreachable!("the last scale always returns")
}

/// A sheet under way.
pub(super) struct Sheet<'a> {
    pub(super) scene: &'a Scene,
    pub(super) view: View,
    pub(super) canvas: Canvas<'a>,
    group: Bounds,
    /// Where leads start and to which labels turn: the centroid, or the middle of the group.
    centre: P2,
    spots: Vec<Spot>,
    /// How far out a load point is drawn in place, in sizes of the group.
    far: f64,
}

impl<'a> Sheet<'a> {
    fn new(scene: &'a Scene, view: View, fonts: &'a dyn TextWidth, room: P2, far: f64) -> Self {
        let group = group_bounds(&view, &scene.runs);
        let centre = scene
            .centroid
            .map_or_else(|| group.centre(), |c| view.image(&c));
        let spots = scene
            .loads
            .iter()
            .map(|l| spot(view.image(&l.at), &group, centre, far))
            .collect();
        Self {
            scene,
            view,
            canvas: Canvas::new(fonts, room),
            group,
            centre,
            spots,
            far,
        }
    }

    fn finish(mut self, scale: &Scale) -> Drawing {
        self.outlines();
        self.runs();
        self.points();
        self.centroid();
        self.measured();
        let mut labels = place_labels(&mut self.canvas);
        draw_triad(
            &mut self.canvas,
            &self.view,
            &self.scene.axes,
            &mut labels,
            &self.group,
        );
        Drawing {
            scale: scale.text.clone(),
            view: self.view.words,
            ..self.canvas.finish(labels)
        }
    }

    /// Loads and dimensions. Where a dimension's thin lines meet an arrow, both are drawn again with
    /// the arrows off those lines; the try in which the fewest meet stands.
    fn measured(&mut self) {
        let mut loads = self.scene.loads.clone();
        for load in &mut loads {
            if self.tells(load) {
                load.distance.clear();
            }
        }
        let bare = self.canvas.clone();
        let mut best: Option<(usize, Canvas<'a>)> = None;
        let mut foreseen = Vec::new();
        for _ in 0..TRIES {
            self.canvas = Canvas {
                foreseen,
                ..bare.clone()
            };
            for (load, spot) in loads.iter().zip(&self.spots) {
                draw_load(&mut self.canvas, &self.view, load, *spot, self.centre);
            }
            self.vectors();
            self.origin();
            for dimension in &self.scene.dimensions {
                self.dimension(dimension);
            }
            let met = self.arrows_met();
            foreseen = self.canvas.extensions.clone();
            if best.as_ref().is_none_or(|(least, _)| met < *least) {
                best = Some((met, self.canvas.clone()));
            }
            if met == 0 {
                break;
            }
        }
        if let Some((_, canvas)) = best {
            self.canvas = canvas;
        }
    }

    /// How many pairs of an arrow and a thin line of a dimension meet.
    fn arrows_met(&self) -> usize {
        let arrows = self.canvas.marks.iter();
        let arrows = arrows.filter(|mark| mark.kind == MarkKind::Arrow);
        let met = |mark: &Mark| {
            let lines = self.canvas.extensions.iter();
            lines.filter(|line| mark.meets(line)).count()
        };
        arrows.map(met).sum()
    }

    fn outlines(&mut self) {
        for outline in self.scene.outlines.iter().filter(|o| o.len() > 1) {
            let points: Vec<P2> = outline.iter().map(|p| self.view.image(p)).collect();
            draw_outline(&mut self.canvas, &points);
        }
    }

    /// Direction from a place to the centre of the group; up where there is none.
    pub(super) fn inward(&self, from: P2) -> P2 {
        let d = self.centre - from;
        if d.norm() > 1.0 { unit(d) } else { -P2::y() }
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
            P2::new(-1.0, -0.1)
        };
        let mut places = around(at, clear, words.size(), toward);
        places.extend(dearer(around(at, clear + 1.4, words.size(), toward), 5.0));
        self.canvas.want(rank::LETTER, words, at, places);
    }

    fn dimension(&mut self, dimension: &Dimension) {
        let mut placed = vec![self.placed(dimension, (dimension.from, dimension.to))];
        if placed[0].astray() {
            return;
        }
        // To a point drawn nearer only its own line leads.
        let alike = dimension.alike.iter();
        let alike = alike.map(|pair| self.placed(dimension, *pair));
        placed.extend(alike.filter(|placed| !placed.broken));
        let drawn = draw_dimension(&mut self.canvas, &self.view, dimension, &placed);
        if drawn == Some(0) {
            self.mark_foot(dimension);
        }
    }

    /// A small cross where a dimension to a load begins, if nothing else stands there.
    fn mark_foot(&mut self, dimension: &Dimension) {
        let at = dimension.from;
        let near = |p: &V3| (at - p).norm() < 1e-9 * (1.0 + p.norm());
        let known = self.scene.points.iter().any(|point| near(&point.at))
            || self.scene.centroid.as_ref().is_some_and(near)
            || self.scene.origin.as_ref().is_some_and(near);
        if self.view.flat || !self.is_load(&dimension.to) || known {
            return;
        }
        let foot = self.view.image(&at);
        let thin = Stroke::black(0.4);
        for arm in [P2::x() * FOOT, P2::y() * FOOT] {
            self.canvas.line(foot - arm, foot + arm, thin);
        }
    }

    /// Whether a dimension in space tells where a load stands.
    fn tells(&self, load: &Load) -> bool {
        let to_load = |dimension: &&Dimension| {
            stands_at(load, &dimension.to)
                && !self
                    .placed(dimension, (dimension.from, dimension.to))
                    .astray()
        };
        !self.view.flat && self.scene.dimensions.iter().any(|d| to_load(&d))
    }

    fn is_load(&self, p: &V3) -> bool {
        self.scene.loads.iter().any(|load| stands_at(load, p))
    }

    /// A dimension between two of the points that it may be drawn between.
    fn placed(&self, dimension: &Dimension, (from, to): (V3, V3)) -> Placed {
        let found = |p: &V3| spot(self.view.image(p), &self.group, self.centre, self.far);
        let found = [found(&from), found(&to)];
        let told = found.map(|s| s.at);
        let mut ends = told;
        let broken = found.iter().any(|s| s.broken);
        let centroid_only = self
            .scene
            .centroid
            .is_some_and(|c| (c - from).norm() < 1e-9 || (c - to).norm() < 1e-9);
        let mut from_end = None;
        let differs = |axis: &Axis| {
            let (a, b) = (from[axis.index()], to[axis.index()]);
            *axis != dimension.axis && (a - b).abs() > 1e-9 * (1.0 + a.abs() + b.abs())
        };
        let apart: Vec<Axis> = Axis::ALL.into_iter().filter(differs).collect();
        let apart = match apart[..] {
            [only] if !broken => Some(only),
            _ => None,
        };
        if !self.view.flat {
            let axis = dimension.axis;
            let along = (to[axis.index()] - from[axis.index()]) * self.view.scale;
            (ends, from_end) = self.squared(axis, along, ends, broken);
        }
        Placed {
            axis: dimension.axis,
            ends,
            told,
            apart,
            to_load: self.is_load(&from)
                || self.is_load(&to)
                || (centroid_only && !dimension.optional),
            group: self.group,
            broken,
            from_end,
        }
    }

    /// In space, both ends are brought onto one line along the axis, so that the line's length is
    /// the distance measured; a thin line shows where the second end came from. To a point drawn
    /// nearer the line reaches as far as the point does.
    fn squared(
        &self,
        axis: Axis,
        along: f64,
        ends: [P2; 2],
        broken: bool,
    ) -> ([P2; 2], Option<P2>) {
        let d = self.view.direction(axis);
        let shown = match broken {
            true => (ends[1] - ends[0]).dot(&d),
            false => along,
        };
        let second = ends[0] + d * shown;
        let from_end = ((second - ends[1]).norm() > 0.5).then_some(ends[1]);
        ([ends[0], second], from_end)
    }
}

/// Whether a load stands at a point.
fn stands_at(load: &Load, p: &V3) -> bool {
    (load.at - p).norm() < 1e-9 * (1.0 + p.norm())
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
