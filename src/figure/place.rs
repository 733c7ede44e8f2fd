//! Places for labels: each label takes the best of its candidate places in turn.
//!
//! Greedy by rank: dimensions and the governing point first, names of runs last. A place on another
//! label, a run, an arrow or a mark is never taken; nor is one that stands nearer to another mark of
//! the kind than to the label's own. A label without such a place goes further off with a leader.
//! Point-feature labelling by candidates follows J. Christensen, J. Marks, S. Shieber, *An empirical
//! study of algorithms for point-feature label placement*, ACM Trans. Graphics 14 (1995), section 3.

use super::canvas::{Canvas, Keep, Layer, Obstacle};
use super::drawing::{Fill, Item, Mark, MarkKind, P2, Path, Stroke, Tie};
use super::rect::{Bounds, Rect};
use super::text::Words;
use crate::quantity::real::{cos, sin};

/// Space between labels (mm to each side).
const PAD: f64 = 0.6;
/// Space between a label and what it must keep off (mm).
const CLEAR: f64 = 0.4;
/// Space between a leader and a line beside it (mm).
const APART: f64 = 0.4;
/// Cost of standing on an aid such as an extension line.
const ON_AID: f64 = 12.0;
/// Cost of each mm by which a label makes the drawing larger than its room.
const OUTSIDE: f64 = 4.0;
/// Radii at which a label with a leader is tried (mm).
const FAR: [f64; 8] = [2.6, 4.2, 6.5, 9.0, 12.0, 16.0, 21.0, 28.0];
/// How many of them a wording takes that has another one after it.
const NOT_FAR: usize = 4;
/// More runs than this are many: their names are not led at all.
pub(super) const MANY: usize = 8;
/// Cost of a leader, above every place without one.
const LEADER: f64 = 100.0;
/// A leader that rises less than this part of its run is level, and what that costs.
const LEVEL: f64 = 0.35;
const LEVEL_COST: f64 = 30.0;
/// How much nearer to its own mark than to any other a label without leader stands (mm).
const TELL: f64 = 0.3;
/// How far off its mark it stands at most (mm).
const NEAR: f64 = 4.0;
/// Rounds of placement at most.
const ROUNDS: usize = 48;
/// Step along a line from its middle (part of it), and how many there are to either side.
const SLIDE: f64 = 0.04;
const SLIDES: u8 = 9;
/// Step of the search for any free place (mm).
const ANYWHERE: f64 = 1.5;

/// A place where a label may stand.
#[derive(Clone, Copy, Debug)]
pub(super) struct Candidate {
    /// Centre of its box.
    pub(super) centre: P2,
    /// Turn (rad).
    pub(super) angle: f64,
    /// How much less it is liked than the best.
    pub(super) cost: f64,
}

/// A wording of a label, with its places near by.
#[derive(Clone, Debug)]
pub(super) struct Form {
    /// The label.
    pub(super) words: Words,
    /// Places near by.
    pub(super) candidates: Vec<Candidate>,
}

/// A label that asks for a place.
#[derive(Clone, Debug)]
pub(super) struct Want {
    /// Order: low ranks choose first.
    pub(super) rank: u8,
    /// Its wordings, the best first.
    pub(super) forms: Vec<Form>,
    /// What it names; a leader would start here.
    pub(super) anchor: P2,
    /// Radius about the anchor that its leader leaves free (mm).
    pub(super) clear: f64,
    /// Number of the mark that it names, if it has to be told from others.
    pub(super) names: Option<usize>,
}

impl Want {
    /// Ties the label to a mark, `clear` large about its anchor.
    pub(super) fn naming(&mut self, mark: usize, clear: f64) -> &mut Self {
        (self.names, self.clear) = (Some(mark), clear);
        self
    }

    /// Adds a wording for where those before find no place.
    pub(super) fn or(&mut self, words: Words, candidates: Vec<Candidate>) -> &mut Self {
        self.forms.push(Form { words, candidates });
        self
    }
}

/// Ranks in which labels choose.
pub(super) mod rank {
    pub(in super::super) const DIMENSION: u8 = 0;
    pub(in super::super) const GOVERNING: u8 = 1;
    /// A turning arrow, which has the fewest places.
    pub(in super::super) const TURN: u8 = 2;
    pub(in super::super) const LOAD: u8 = 3;
    pub(in super::super) const LETTER: u8 = 4;
    pub(in super::super) const POINT: u8 = 5;
    pub(in super::super) const RUN: u8 = 6;
}

/// Places for a box around a point, `clear` off it, those along `toward` first.
pub(super) fn around(anchor: P2, clear: f64, size: [f64; 2], toward: P2) -> Vec<Candidate> {
    ring(anchor, clear, size, toward, 16)
}

/// Places for a box in `count` directions around a point.
fn ring(anchor: P2, clear: f64, size: [f64; 2], toward: P2, count: u8) -> Vec<Candidate> {
    let part = std::f64::consts::TAU / f64::from(count);
    (0..count)
        .map(|i| {
            let turn = part * f64::from(i);
            let d = P2::new(cos(turn), -sin(turn));
            let step = |c: f64, half: f64| {
                let beside = if c.abs() < 0.1 {
                    0.0
                } else {
                    c.signum() * half
                };
                c * clear + beside
            };
            let off = P2::new(step(d.x, size[0] / 2.0), step(d.y, size[1] / 2.0));
            Candidate {
                centre: anchor + off,
                angle: 0.0,
                cost: 4.0 * (1.0 - d.dot(&toward)),
            }
        })
        .collect()
}

/// The same places, liked less.
pub(super) fn dearer(candidates: Vec<Candidate>, by: f64) -> Vec<Candidate> {
    candidates
        .into_iter()
        .map(|c| Candidate {
            cost: c.cost + by,
            ..c
        })
        .collect()
}

/// Places beside a line from `a` to `b`, the text along it where `turned`, nearest to its middle and
/// on the side of `toward` first.
pub(super) fn beside(
    a: P2,
    b: P2,
    clear: f64,
    size: [f64; 2],
    toward: P2,
    turned: bool,
) -> Vec<Candidate> {
    let d = super::view::unit(b - a);
    let angle = if turned { reading_angle(d) } else { 0.0 };
    let n = super::rect::square(d);
    let half = if turned {
        size[1] / 2.0
    } else {
        (n.x * size[0]).abs() / 2.0 + (n.y * size[1]).abs() / 2.0
    };
    let mut out = Vec::new();
    let slides = (0..=SLIDES).flat_map(|i| [1.0, -1.0].map(|way| f64::from(i) * way));
    for slide in slides {
        let part = 0.5 + SLIDE * slide;
        let on = a + (b - a) * part;
        for side in [1.0, -1.0] {
            let off = n * side * (clear + half);
            let cost = slide.abs() * 0.8 + if off.dot(&toward) > 0.0 { 0.0 } else { 3.0 };
            out.push(Candidate {
                centre: on + off,
                angle,
                cost,
            });
        }
    }
    out
}

/// The turn that sets text along a direction, read from below or from the right.
pub(super) fn reading_angle(d: P2) -> f64 {
    let upright = if d.x < -1e-6 || (d.x.abs() <= 1e-6 && d.y > 0.0) {
        -d
    } else {
        d
    };
    let angle = crate::quantity::real::atan2(-upright.y, upright.x);
    if angle.abs() < 1e-9 { 0.0 } else { angle }
}

/// Places every label wanted; returns the labels.
///
/// A label that others shut in chooses before them in another round.
pub(super) fn place_labels(canvas: &mut Canvas<'_>) -> Vec<Item> {
    let mut wants = std::mem::take(&mut canvas.wants);
    wants.sort_by_key(|w| w.rank);
    for round in 1..=ROUNDS {
        let before = canvas.state();
        match place_round(canvas, &wants, round == ROUNDS) {
            Ok(labels) => return labels,
            Err(shut_in) => {
                canvas.restore(before);
                let want = wants.remove(shut_in);
                wants.insert(0, want);
            }
        }
    }
    Vec::new()
}

/// Places the labels in their order; the number of one that finds no place that it could be led to
/// without crossing a label, unless it is the `last` round.
fn place_round(canvas: &mut Canvas<'_>, wants: &[Want], last: bool) -> Result<Vec<Item>, usize> {
    let mut table = Table {
        taken: Vec::new(),
        all: canvas.bounds(),
        last,
    };
    let mut labels = Vec::new();
    for (index, want) in wants.iter().enumerate() {
        let Some((words, place)) = table.choose(want, canvas) else {
            return Err(index);
        };
        let rect = words.rect(place.centre, place.angle);
        let led = place.cost >= LEADER;
        if led {
            draw_leader(canvas, want, words, &place);
        }
        if let Some(mark) = want.names {
            let text = words.text();
            canvas.ties.push(Tie {
                text,
                rect,
                mark,
                led,
            });
        }
        rect.corners().iter().for_each(|p| table.all.add(*p, 0.0));
        table.taken.push(rect.grown(PAD));
        labels.extend(set(words, &place));
    }
    if labels
        .iter()
        .any(|item| matches!(item, Item::Circle { .. }))
    {
        canvas.remark("circled numbers: rows of the table “Runs as given”");
    }
    let taken = table.taken.into_iter().map(|rect| Obstacle {
        rect,
        keep: Keep::Off,
    });
    canvas.obstacles.extend(taken);
    Ok(labels)
}

/// A label at its place, with the ring around it.
fn set(words: &Words, place: &Candidate) -> Vec<Item> {
    let label = Item::Label(words.label(place.centre, place.angle));
    if words.ring <= 0.0 {
        return vec![label];
    }
    let ring = Item::Circle {
        centre: place.centre,
        radius: words.ring,
        stroke: Some(Stroke::black(0.5)),
        fill: Fill::None,
    };
    vec![ring, label]
}

/// What a leader must not cross.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Care {
    /// Labels, marks and lines.
    Lines,
    /// Labels, and marks of the kind that it leads to.
    Marks,
    /// Labels.
    Labels,
}

/// What is placed so far.
struct Table {
    /// Boxes of labels.
    taken: Vec<Rect>,
    /// Bounds of all.
    all: Bounds,
    /// Whether a label may stand where no leader reaches it.
    last: bool,
}

impl Table {
    /// The first wording that finds a place: near by, or led; the last one stands anywhere.
    fn choose<'w>(&self, want: &'w Want, canvas: &Canvas<'_>) -> Option<(&'w Words, Candidate)> {
        let last = want.forms.last()?;
        for form in &want.forms {
            let more = !std::ptr::eq(form, last);
            let radii = match more {
                true if canvas.runs > MANY => 0,
                true => NOT_FAR,
                false => FAR.len(),
            };
            let near: Vec<Candidate> = form
                .candidates
                .iter()
                .filter(|place| tells(canvas, want, &form.words.rect(place.centre, place.angle)))
                .copied()
                .collect();
            let place = self
                .best(&form.words, &near, canvas)
                .or_else(|| self.led(want, &form.words, canvas, radii, Care::Lines));
            if let Some(place) = place {
                return Some((&form.words, place));
            }
        }
        // What names a place of its own may have a leader that passes over lines.
        let words = &last.words;
        self.led(want, words, canvas, FAR.len(), Care::Marks)
            .or_else(|| self.anywhere(want, words, canvas))
            .map(|place| (words, place))
    }

    /// The cheapest free place; the first of equals.
    fn best(&self, words: &Words, places: &[Candidate], canvas: &Canvas<'_>) -> Option<Candidate> {
        let mut found: Option<Candidate> = None;
        for place in places {
            let rect = words.rect(place.centre, place.angle);
            let limit = found.map_or(f64::INFINITY, |f| f.cost);
            if place.cost >= limit || self.taken.iter().any(|t| t.overlaps(&rect.grown(PAD))) {
                continue;
            }
            let cost = place.cost
                + standing_cost(&rect.grown(CLEAR), canvas)
                + outside_cost(&rect, canvas.room, &self.all);
            if cost < limit {
                found = Some(Candidate { cost, ..*place });
            }
        }
        found
    }

    /// A place further off, joined by a leader that crosses nothing it must not.
    fn led(
        &self,
        want: &Want,
        words: &Words,
        canvas: &Canvas<'_>,
        radii: usize,
        care: Care,
    ) -> Option<Candidate> {
        let size = words.size();
        let ring_at = |(i, radius): (usize, &f64)| {
            let cost = LEADER + 20.0 * f64::from(u8::try_from(i).unwrap_or(u8::MAX));
            let radius = want.clear + radius;
            let mut places = dearer(ring(want.anchor, radius, size, P2::zeros(), 24), cost);
            for place in &mut places {
                place.cost += level_cost(place.centre - want.anchor);
            }
            places
        };
        let places: Vec<Candidate> = FAR[..radii]
            .iter()
            .enumerate()
            .flat_map(ring_at)
            .filter(|place| self.leads(want, words, place, canvas, care))
            .collect();
        self.best(words, &places, canvas)
    }

    /// Whether a leader from the anchor to a box crosses nothing that it must not.
    fn leads(
        &self,
        want: &Want,
        words: &Words,
        place: &Candidate,
        canvas: &Canvas<'_>,
        care: Care,
    ) -> bool {
        let [from, to] = leader_ends(want, words, place);
        let line = Rect::line(from, to, 0.1);
        let later = Rect::line(from + super::view::unit(to - from) * 0.5, to, APART);
        !self.taken.iter().any(|t| t.overlaps(&line))
            && (care != Care::Lines || canvas.is_clear(&later))
            && (care == Care::Labels || !others(canvas, want).any(|other| other.meets(&line)))
    }

    /// The free place nearest to the anchor, wherever it is: first within the room.
    fn anywhere(&self, want: &Want, words: &Words, canvas: &Canvas<'_>) -> Option<Candidate> {
        let size = P2::from(words.size());
        let level = |centre: P2| level_cost(centre - want.anchor);
        let low = self.all.min - size - P2::repeat(4.0);
        let count = (self.all.max - low + size + P2::repeat(4.0)).map(|x| x / ANYWHERE);
        let steps = |n: f64| (0_u16..).take_while(move |i| f64::from(*i) <= n);
        let mut places: Vec<Candidate> = steps(count.x)
            .flat_map(|i| steps(count.y).map(move |j| P2::new(f64::from(i), f64::from(j))))
            .map(|at| {
                let centre = low + at * ANYWHERE;
                let rect = words.rect(centre, 0.0);
                let outside = outside_cost(&rect, canvas.room, &self.all);
                Candidate {
                    centre,
                    angle: 0.0,
                    cost: 2.0 * LEADER
                        + (centre - want.anchor).norm()
                        + outside
                        + level(centre) / 8.0,
                }
            })
            .collect();
        places.sort_by(|a, b| a.cost.total_cmp(&b.cost));
        let free = |place: &&Candidate| {
            let rect = words.rect(place.centre, 0.0);
            !self.taken.iter().any(|t| t.overlaps(&rect.grown(PAD)))
                && canvas.is_clear(&rect.grown(CLEAR))
        };
        let open: Vec<&Candidate> = places.iter().filter(free).collect();
        let led = |care: Care| {
            let mut open = open.iter().copied();
            open.find(|place| self.leads(want, words, place, canvas, care))
        };
        let found = led(Care::Marks).or_else(|| led(Care::Labels));
        let unled = open.first().copied().filter(|_| self.last);
        found.or(unled).copied()
    }
}

/// What a level leader costs: a short one before a number reads as a minus sign.
fn level_cost(off: P2) -> f64 {
    if off.y.abs() < LEVEL * off.x.abs() {
        LEVEL_COST
    } else {
        0.0
    }
}

/// Whether a box stands nearer to the mark that its label names than to others of the kind; beads
/// on one line are one mark.
fn tells(canvas: &Canvas<'_>, want: &Want, rect: &Rect) -> bool {
    let Some(own) = want.names else { return true };
    let mark = &canvas.marks[own];
    let near = mark.distance(rect) + TELL;
    if near > NEAR {
        return false;
    }
    others(canvas, want).all(|other| other.distance(rect) > near)
}

/// The marks of the kind of that which a label names, but for those at its very place and the ring
/// around a point; and arrows that stand off it.
fn others<'c>(canvas: &'c Canvas<'_>, want: &Want) -> impl Iterator<Item = &'c Mark> {
    let own = want.names.map(|own| &canvas.marks[own]);
    canvas.marks.iter().filter(move |other| {
        own.is_some_and(|own| {
            let apart = || !own.rects.iter().any(|rect| other.meets(rect));
            match (own.kind, other.kind) {
                (MarkKind::Point, MarkKind::Point) => apart(),
                (kind, alike) if kind == alike => own.rects != other.rects,
                (_, MarkKind::Arrow) => apart(),
                _ => false,
            }
        })
    })
}

/// What it costs to stand here; infinite on what labels must keep off.
fn standing_cost(rect: &Rect, canvas: &Canvas<'_>) -> f64 {
    let mut cost = 0.0;
    for obstacle in canvas.obstacles.iter().filter(|o| o.rect.overlaps(rect)) {
        match obstacle.keep {
            Keep::Off => return f64::INFINITY,
            Keep::OffIfPossible => cost += ON_AID,
        }
    }
    cost
}

/// What it costs to make the drawing larger than its room.
fn outside_cost(rect: &Rect, room: P2, all: &Bounds) -> f64 {
    let mut grown = *all;
    rect.corners().iter().for_each(|p| grown.add(*p, 0.0));
    let over = |i: usize| (grown.size()[i] - room[i].max(all.size()[i])).max(0.0);
    OUTSIDE * (over(0) + over(1)).min(10.0)
}

/// From just off the anchor to the nearest point of the box, or to the ring around the words.
fn leader_ends(want: &Want, words: &Words, place: &Candidate) -> [P2; 2] {
    let rect = words.rect(place.centre, place.angle);
    let d = want.anchor - rect.centre;
    let n = super::rect::square(rect.along);
    let (u, v) = (d.dot(&rect.along), d.dot(&n));
    let clamp = |x: f64, half: f64| x.clamp(-half - 0.3, half + 0.3);
    let end = if words.ring > 0.0 {
        rect.centre + super::view::unit(d) * words.ring
    } else {
        rect.centre + rect.along * clamp(u, rect.half[0]) + n * clamp(v, rect.half[1])
    };
    let way = super::view::unit(end - want.anchor);
    [want.anchor + way * (want.clear + 0.2), end]
}

fn draw_leader(canvas: &mut Canvas<'_>, want: &Want, words: &Words, place: &Candidate) {
    let [a, b] = leader_ends(want, words, place);
    let item = Item::Path(Path::through(&[a, b], Stroke::black(0.4)));
    canvas.draw_kept(Layer::Mark, item, Keep::Off);
}
