//! The sheet while it is being drawn: items by layer, what labels must keep clear of, labels wanted.

use super::drawing::{
    Drawing, Fill, Ink, Item, Mark, MarkKind, P2, Path, Piece, Span, Stroke, Tie,
};
use super::place::{Candidate, Form, Want};
use super::rect::{Bounds, Rect};
use super::text::{TextWidth, Words};
use crate::quantity::real::{cos, sin};

/// How far a thin line breaks off before a label (mm).
const BREAK: f64 = 0.4;

/// Layers from the bottom up.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Layer {
    /// Outlines, lead and extension lines.
    Aid,
    /// Runs.
    Weld,
    /// The inside of thick runs.
    Core,
    /// Arrows, dimensions, centroid.
    Mark,
    /// The ring around the governing point.
    Ring,
    /// Check points.
    Dot,
}

/// How bad it is for a label to stand on something.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Keep {
    /// Never: runs, arrows, marks, dimension lines.
    Off,
    /// If there is no better place: lead and extension lines, outlines.
    OffIfPossible,
}

/// Something that labels keep clear of.
#[derive(Clone, Copy, Debug)]
pub(super) struct Obstacle {
    /// Its box.
    pub(super) rect: Rect,
    /// How strictly.
    pub(super) keep: Keep,
}

/// The sheet.
#[derive(Clone)]
pub(super) struct Canvas<'a> {
    pub(super) fonts: &'a dyn TextWidth,
    pub(super) items: Vec<(Layer, Item)>,
    pub(super) obstacles: Vec<Obstacle>,
    pub(super) wants: Vec<Want>,
    pub(super) remarks: Vec<String>,
    /// What labels name.
    pub(super) marks: Vec<Mark>,
    /// Labels that are placed and name something.
    pub(super) ties: Vec<Tie>,
    /// Texts of labels that are left out.
    pub(super) dropped: Vec<String>,
    /// Boxes of the runs alone.
    pub(super) welds: Vec<Rect>,
    /// Boxes of the thin lines of dimensions.
    pub(super) extensions: Vec<Rect>,
    /// Where such lines stood in the try before: arrows keep off them.
    pub(super) foreseen: Vec<Rect>,
    /// How many runs there are.
    pub(super) runs: usize,
    /// The room on the page (mm).
    pub(super) room: P2,
}

impl<'a> Canvas<'a> {
    pub(super) fn new(fonts: &'a dyn TextWidth, room: P2) -> Self {
        Self {
            fonts,
            items: vec![],
            obstacles: vec![],
            wants: vec![],
            remarks: vec![],
            marks: vec![],
            ties: vec![],
            dropped: vec![],
            welds: vec![],
            extensions: vec![],
            foreseen: vec![],
            runs: 0,
            room,
        }
    }

    /// Adds an item that labels need not mind.
    pub(super) fn draw(&mut self, layer: Layer, item: Item) {
        self.items.push((layer, item));
    }

    /// Adds an item together with the boxes of its strokes.
    pub(super) fn draw_kept(&mut self, layer: Layer, item: Item, keep: Keep) {
        let rects = strokes(&item);
        if layer == Layer::Weld {
            self.welds.extend(&rects);
        }
        self.obstacles
            .extend(rects.into_iter().map(|rect| Obstacle { rect, keep }));
        self.items.push((layer, item));
    }

    /// Adds several items that nothing may stand on.
    pub(super) fn mark(&mut self, items: impl IntoIterator<Item = Item>) {
        for item in items {
            self.draw_kept(Layer::Mark, item, Keep::Off);
        }
    }

    /// Adds a straight line that nothing may stand on.
    pub(super) fn line(&mut self, a: P2, b: P2, stroke: Stroke) {
        self.mark([Item::Path(Path::through(&[a, b], stroke))]);
    }

    /// Adds a thin straight line that labels avoid if they can.
    pub(super) fn aid(&mut self, a: P2, b: P2, stroke: Stroke) {
        let item = Item::Path(Path::through(&[a, b], stroke));
        self.draw_kept(Layer::Aid, item, Keep::OffIfPossible);
    }

    /// Measures a label.
    pub(super) fn words(&self, spans: Vec<Span>) -> Words {
        Words::new(spans, self.fonts)
    }

    /// Remembers something that a label will name; returns its number.
    pub(super) fn name(&mut self, kind: MarkKind, rects: Vec<Rect>) -> usize {
        self.marks.push(Mark { kind, rects });
        self.marks.len() - 1
    }

    /// Asks for a label at the best of some places.
    pub(super) fn want(
        &mut self,
        rank: u8,
        words: Words,
        anchor: P2,
        candidates: Vec<Candidate>,
    ) -> &mut Want {
        self.wants.push(Want {
            rank,
            forms: vec![Form { words, candidates }],
            anchor,
            clear: 1.0,
            names: None,
        });
        let last = self.wants.len() - 1;
        &mut self.wants[last]
    }

    /// How much is drawn, to come back to.
    pub(super) fn state(&self) -> [usize; 3] {
        [self.items.len(), self.obstacles.len(), self.ties.len()]
    }

    /// Takes back what was drawn since.
    pub(super) fn restore(&mut self, [items, obstacles, ties]: [usize; 3]) {
        self.items.truncate(items);
        self.obstacles.truncate(obstacles);
        self.ties.truncate(ties);
    }

    /// Says something in the caption, once.
    pub(super) fn remark(&mut self, says: &str) {
        if self.remarks.iter().all(|known| known != says) {
            self.remarks.push(says.to_owned());
        }
    }

    /// Bounds of all that is drawn so far.
    pub(super) fn bounds(&self) -> Bounds {
        let mut bounds = Bounds::empty();
        self.items
            .iter()
            .for_each(|(_, item)| item.bound(&mut bounds));
        bounds
    }

    /// The drawing of all that stands here, the lowest layer first, moved to the upper left corner.
    /// A thin line breaks off where a label stands on it.
    pub(super) fn finish(mut self, labels: Vec<Item>) -> Drawing {
        let breaks = self.breaks(&labels);
        self.items.extend(breaks);
        self.items.sort_by_key(|(layer, _)| *layer);
        let below = self.items.into_iter().map(|(_, item)| item);
        let all: Vec<Item> = below.chain(labels).collect();
        let mut bounds = Bounds::empty();
        all.iter().for_each(|item| item.bound(&mut bounds));
        let (size, by) = (bounds.size(), -bounds.min);
        Drawing {
            width_mm: size.x,
            height_mm: size.y,
            items: all.iter().map(|item| item.shifted(by)).collect(),
            scale: String::new(),
            view: String::new(),
            dropped: self.dropped,
            remarks: self.remarks,
            marks: self.marks.iter().map(|mark| mark.shifted(by)).collect(),
            ties: self.ties.iter().map(|tie| tie.shifted(by)).collect(),
        }
    }

    /// White under each label that stands on thin lines.
    fn breaks(&self, labels: &[Item]) -> Vec<(Layer, Item)> {
        let is_aid = |(layer, item): &(Layer, Item)| (*layer == Layer::Aid).then(|| strokes(item));
        let aids: Vec<Rect> = self.items.iter().filter_map(is_aid).flatten().collect();
        let boxes = labels.iter().filter_map(|item| match item {
            Item::Label(label) => Some(label.rect().grown(BREAK)),
            Item::Path(_) | Item::Circle { .. } => None,
        });
        boxes
            .filter(|rect| aids.iter().any(|aid| aid.overlaps(rect)))
            .map(|rect| Item::Path(Path::filled(&rect.corners(), Fill::White)))
            .map(|white| (Layer::Aid, white))
            .collect()
    }

    /// Whether a box is clear of all that must not be covered.
    pub(super) fn is_clear(&self, rect: &Rect) -> bool {
        !self
            .obstacles
            .iter()
            .any(|o| o.keep == Keep::Off && o.rect.overlaps(rect))
    }
}

/// Boxes that cover the strokes of an item; a curve is covered chord by chord.
pub(super) fn strokes(item: &Item) -> Vec<Rect> {
    match item {
        Item::Path(path) => {
            let half = path.stroke.map_or(0.05, |s| s.width / 2.0);
            let points = flattened(path);
            points
                .windows(2)
                .map(|w| Rect::line(w[0], w[1], half))
                .collect()
        }
        Item::Circle {
            centre,
            radius,
            stroke,
            fill,
        } => {
            let thick = stroke.map_or(0.0, |s| s.width / 2.0);
            if *fill == Fill::None {
                return ring(*centre, *radius, thick);
            }
            vec![Rect::upright(*centre, radius + thick, radius + thick)]
        }
        Item::Label(label) => vec![label.rect()],
    }
}

/// Boxes along an open ring, by sixteen chords.
fn ring(centre: P2, radius: f64, thick: f64) -> Vec<Rect> {
    let part = std::f64::consts::TAU / 16.0;
    let at = |i: u8| {
        let turn = part * f64::from(i);
        centre + P2::new(cos(turn), sin(turn)) * radius
    };
    (0..16)
        .map(|i| Rect::line(at(i), at(i + 1), thick))
        .collect()
}

/// The path as a polyline, eight chords a curve.
fn flattened(path: &Path) -> Vec<P2> {
    let mut points = vec![path.start];
    let mut from = path.start;
    for piece in &path.pieces {
        match *piece {
            Piece::Line(p) => {
                points.push(p);
                from = p;
            }
            Piece::Cubic(a, b, p) => {
                for i in 1..=8 {
                    let t = f64::from(i) / 8.0;
                    let w = 1.0 - t;
                    points.push(
                        from * (w * w * w)
                            + a * (3.0 * w * w * t)
                            + b * (3.0 * w * t * t)
                            + p * (t * t * t),
                    );
                }
                from = p;
            }
        }
    }
    if path.closed {
        points.push(path.start);
    }
    points
}

/// Boxes of an item's strokes if labels must keep off it: everything but labels, thin aids
/// (extension lines, leads, outlines) and white shapes without outline.
#[must_use]
pub fn firm_strokes(item: &Item) -> Vec<Rect> {
    let thin = |s: &Stroke| s.ink != Ink::Black || s.width < 0.35 * super::PT;
    let firm = match item {
        Item::Path(path) => path
            .stroke
            .as_ref()
            .map_or(path.fill == Fill::Black, |s| !thin(s)),
        Item::Circle { .. } => true,
        Item::Label(_) => false,
    };
    if firm { strokes(item) } else { Vec::new() }
}
