//! The kinds of weld in section, square to the run: faces, legs, throat, angle, gap, planes checked.
//!
//! Not to scale: each section has one size on the sheet, its sizes stand beside it.

use super::canvas::{Canvas, Keep, Layer};
use super::drawing::{Drawing, Fill, Item, P2, Path, Span, Stroke, Style};
use super::place::{Candidate, around, beside, dearer, place_labels, rank};
use super::shape::tick;
use super::text::{TextWidth, Words, symbol, symbol_spans};
use super::view::unit;
use crate::criteria::FailurePath;
use crate::note::{SectionShape, WeldSection, list_mark};
use crate::quantity::real::{cos, sin, tan};

/// Width of a section, and its height without the words below (mm).
const CELL: [f64; 2] = [48.0, 40.0];
/// Sections in a row, and rows.
const ACROSS: usize = 3;
const DOWN: usize = 3;
/// The longer leg, and the thickness of the parts (mm).
const LEG: f64 = 11.0;
const ATTACHED: f64 = 6.0;
const BASE: f64 = 7.0;
/// How far the parts reach from the root (mm).
const REACH: f64 = 17.0;
/// From the base's face down to a dimension (mm).
const UNDER: f64 = 4.8;
/// From a toe to the plane through the part beside it (mm).
const BEYOND: f64 = 1.2;
/// Root gap as drawn (mm).
const GAP: f64 = 1.6;
/// From line to line of the words below (mm).
const LINE: f64 = 3.6;
/// Lines that a list of names or planes takes at most.
const MOST_LINES: usize = 3;

/// Draws the sections, row by row.
#[must_use]
pub fn draw_sections(sections: &[WeldSection], fonts: &dyn TextWidth) -> Drawing {
    let mut canvas = Canvas::new(fonts, P2::new(150.0, 170.0));
    let drawn = &sections[..sections.len().min(ACROSS * DOWN)];
    let mut top = 0.0;
    for row in drawn.chunks(ACROSS) {
        let mut lines = 0;
        for (section, column) in row.iter().zip([0.0, 1.0, 2.0]) {
            let mut cell = Cell {
                canvas: &mut canvas,
                section,
                origin: P2::new(column * CELL[0], top),
            };
            lines = lines.max(cell.draw());
        }
        top += CELL[1] + lines as f64 * LINE;
    }
    if sections.len() > ACROSS * DOWN {
        canvas.remarks.push(format!(
            "{} further kinds of weld are not drawn",
            sections.len() - ACROSS * DOWN
        ));
    }
    let labels = place_labels(&mut canvas);
    canvas.finish(labels)
}

fn plain(text: &str) -> Vec<Span> {
    vec![Span::new(text, Style::Plain)]
}

/// A section under way; its own axes have the root as origin, x along the base, y off it.
struct Cell<'a, 'f> {
    canvas: &'a mut Canvas<'f>,
    section: &'a WeldSection,
    origin: P2,
}

/// One bead in section: root, toes on the base and on the attached part, and the plane of the throat.
struct Bead {
    root: P2,
    on_base: P2,
    on_attached: P2,
    throat: P2,
}

impl Cell<'_, '_> {
    /// Draws the section; returns the number of lines of its words.
    fn draw(&mut self) -> usize {
        let planes = self.section.planes.clone();
        match self.section.shape {
            SectionShape::Complete { tee: false } => self.butt(),
            SectionShape::Complete { tee: true } => self.full_tee(),
            SectionShape::Fillet(_) | SectionShape::Throat(_) | SectionShape::Partial(_) => {
                self.tee(&planes);
            }
        }
        self.words()
    }

    /// From the section's own axes to the sheet.
    fn on_sheet(&self, p: P2) -> P2 {
        self.origin + P2::new(p.x, -p.y)
    }

    fn path(&mut self, points: &[P2], stroke: Stroke) {
        let points: Vec<P2> = points.iter().map(|p| self.on_sheet(*p)).collect();
        let item = Item::Path(Path::through(&points, stroke));
        self.canvas.draw_kept(Layer::Mark, item, Keep::Off);
    }

    fn shape(&mut self, points: &[P2], fill: Fill) {
        let points: Vec<P2> = points.iter().map(|p| self.on_sheet(*p)).collect();
        let path = Path {
            stroke: Some(Stroke::black(0.9)),
            ..Path::filled(&points, fill)
        };
        self.canvas
            .draw_kept(Layer::Weld, Item::Path(path), Keep::OffIfPossible);
    }

    /// Direction of the attached part's face from the root, and the one square to it into the part.
    fn face(&self) -> (P2, P2) {
        let angle = self.section.angle;
        (
            P2::new(cos(angle), sin(angle)),
            P2::new(-sin(angle), cos(angle)),
        )
    }

    /// Half of the attached part's drawn thickness along the base.
    fn width_on_base(&self) -> f64 {
        ATTACHED / sin(self.section.angle).max(0.3)
    }

    fn lift(&self) -> f64 {
        if self.section.gap.is_some() { GAP } else { 0.0 }
    }

    /// The two parts: the base as a strip, the attached part standing on it at its angle.
    fn parts(&mut self) {
        let line = Stroke::black(0.6);
        let left = -self.width_on_base() - REACH + 3.0;
        for y in [0.0, -BASE] {
            self.path(&[P2::new(left, y), P2::new(REACH + 2.0, y)], line);
        }
        let (face, _) = self.face();
        let lift = self.lift();
        let slide = P2::new(lift / tan(self.section.angle).clamp(-1e6, 1e6), lift);
        let far = P2::new(-self.width_on_base(), 0.0);
        let top = |from: P2| from + face * (REACH / face.y.max(0.35) - lift);
        self.path(&[top(slide), slide, far + slide, top(far + slide)], line);
        let [attached, base] = self.section.parts.clone();
        let middle = (top(slide) + top(far + slide)) / 2.0;
        self.name(&attached, middle, P2::y());
        self.name(&base, P2::new(left + 1.0, -BASE / 2.0), -P2::x());
    }

    /// The name of a part near a place.
    fn name(&mut self, text: &str, at: P2, toward: P2) {
        let words = self.fit(text, Style::Italic, 18.0);
        let at = self.on_sheet(at);
        let toward = P2::new(toward.x, -toward.y);
        let inside = Candidate {
            centre: at - P2::x() * (words.size()[0] / 2.0 * toward.x),
            angle: 0.0,
            cost: if toward.x == 0.0 { 20.0 } else { 0.0 },
        };
        let mut places = vec![inside];
        places.extend(around(at, 1.2, words.size(), toward));
        places.extend(dearer(around(at, 3.0, words.size(), toward), 6.0));
        self.canvas.want(rank::POINT, words, at, places);
    }

    /// A text cut to a width (mm).
    fn fit(&self, text: &str, style: Style, width: f64) -> Words {
        let mut words = self.canvas.words(vec![Span::new(text, style)]);
        let mut kept = text.to_owned();
        while words.size()[0] > width && kept.pop().is_some() {
            words = self
                .canvas
                .words(vec![Span::new(format!("{}…", kept.trim_end()), style)]);
        }
        words
    }

    /// The beads of a tee on one side or on both.
    fn beads(&self) -> Vec<Bead> {
        let (face, _) = self.face();
        let [base, attached] = match &self.section.shape {
            SectionShape::Fillet([base, attached]) => {
                let longest = base.0.max(attached.0);
                [base.0 / longest, attached.0 / longest].map(|part| part * LEG)
            }
            SectionShape::Throat(_) | SectionShape::Partial(_) | SectionShape::Complete { .. } => {
                [0.85 * LEG; 2]
            }
        };
        let groove = matches!(self.section.shape, SectionShape::Partial(_));
        let bead = |root: P2, x: P2| {
            let on_attached = root + face * attached;
            if groove {
                // The bevel goes into the attached part; its root lies inside. The plane stands as in
                // a fillet with equal legs, from the root to the face.
                let depth = 0.75 * self.width_on_base();
                return Bead {
                    root: root - x * depth,
                    on_base: root,
                    on_attached,
                    throat: root + face * depth,
                };
            }
            let on_base = root + x * base;
            let along = on_attached - on_base;
            let part = (root - on_base).dot(&along) / along.norm_squared();
            Bead {
                root,
                on_base,
                on_attached,
                throat: on_base + along * part,
            }
        };
        let mut beads = vec![bead(P2::zeros(), P2::x())];
        if self.section.both {
            beads.push(bead(P2::new(-self.width_on_base(), 0.0), -P2::x()));
        }
        beads
    }

    fn tee(&mut self, planes: &[FailurePath]) {
        self.parts();
        let beads = self.beads();
        for bead in &beads {
            self.shape(&[bead.root, bead.on_base, bead.on_attached], Fill::Grey);
        }
        let bead = &beads[0];
        let checks = |path| planes.contains(&path);
        let broken = Stroke::black(1.2).dashed();
        let throat = if checks(FailurePath::Throat) {
            broken
        } else {
            Stroke::black(0.5)
        };
        for bead in &beads {
            self.path(&[bead.root, bead.throat], throat);
        }
        self.beside_planes(bead, &checks, broken);
        self.sizes(bead);
        if !self.section.angle_text.is_empty() {
            self.angle();
        }
    }

    /// The fusion faces and the planes of the parts that are checked, each a little off the face.
    fn beside_planes(&mut self, bead: &Bead, checks: &dyn Fn(FailurePath) -> bool, broken: Stroke) {
        let (face, into) = self.face();
        let rows = [
            (
                FailurePath::FusionFaceBase,
                [bead.root, bead.on_base],
                -P2::y() * 0.7,
            ),
            (
                FailurePath::FusionFaceAttached,
                [bead.root, bead.on_attached],
                into * 0.7,
            ),
            // Through the thickness of the part, just beyond the toe.
            (
                FailurePath::BaseMetalBase,
                [bead.on_base, bead.on_base - P2::y() * BASE],
                P2::x() * BEYOND,
            ),
            (
                FailurePath::BaseMetalAttached,
                [bead.on_attached, bead.on_attached + into * ATTACHED],
                face * BEYOND,
            ),
        ];
        for (path, [from, to], off) in rows {
            if checks(path) {
                self.path(&[from + off, to + off], broken);
            }
        }
    }

    /// Legs and throat with their sizes.
    fn sizes(&mut self, bead: &Bead) {
        let throat = symbol(&self.section.throat.0);
        if matches!(self.section.shape, SectionShape::Partial(_)) {
            // The throat is the depth that the weld goes in from the face.
            self.leg(bead.root, bead.on_base, (-P2::y(), UNDER), throat);
        } else {
            let out = unit(bead.throat - bead.root);
            self.label(throat, bead.throat + out * 0.6, out);
        }
        if let SectionShape::Fillet([base, attached]) = self.section.shape.clone() {
            self.leg(bead.root, bead.on_base, (-P2::y(), UNDER), plain(&base.1));
            let (_, into) = self.face();
            // Outside the attached part; beyond the bead where the part is welded on both sides.
            let beside = if self.section.both {
                (-into, (bead.on_base - bead.root).norm() + 4.0)
            } else {
                (into, ATTACHED + 4.0)
            };
            self.leg(bead.root, bead.on_attached, beside, plain(&attached.1));
        }
    }

    /// A leg's dimension, set off to one side; its text stands over a level line.
    fn leg(&mut self, from: P2, to: P2, (out, away): (P2, f64), text: Vec<Span>) {
        let level = out.y < -0.9;
        let off = out * away;
        let thin = Stroke::black(0.35);
        for p in [from, to] {
            self.path(&[p + out * 1.0, p + off + out * 0.8], thin);
        }
        self.path(&[from + off, to + off], thin);
        for p in [from, to] {
            let (p, d) = (
                self.on_sheet(p + off),
                P2::new(to.x - from.x, from.y - to.y),
            );
            self.canvas.mark([tick(p, unit(d))]);
        }
        let words = self.canvas.words(text);
        let (a, b) = (self.on_sheet(from + off), self.on_sheet(to + off));
        let toward = P2::new(out.x, if level { out.y } else { -out.y });
        let places = beside(a, b, 0.5, words.size(), toward, false);
        self.canvas
            .want(rank::DIMENSION, words, (a + b) / 2.0, places);
    }

    /// The angle between the faces, over the bead.
    fn angle(&mut self) {
        let half = self.section.angle / 2.0;
        let radius = LEG + 2.6;
        let points: Vec<P2> = (0..=12)
            .map(|step| {
                let turn = self.section.angle * f64::from(step) / 12.0;
                P2::new(cos(turn), sin(turn)) * radius
            })
            .collect();
        self.path(&points, Stroke::black(0.35));
        let out = P2::new(cos(half), sin(half));
        let at = P2::new(cos(half * 0.5), sin(half * 0.5)) * (radius + 0.5);
        self.label(plain(&self.section.angle_text), at, out);
    }

    fn label(&mut self, text: Vec<Span>, at: P2, toward: P2) {
        let words = self.canvas.words(text);
        let at = self.on_sheet(at);
        let toward = P2::new(toward.x, -toward.y);
        let mut places = around(at, 0.8, words.size(), toward);
        places.extend(dearer(around(at, 2.4, words.size(), toward), 5.0));
        self.canvas.want(rank::GOVERNING, words, at, places);
    }

    /// A tee welded through: the foot of the attached part is weld.
    fn full_tee(&mut self) {
        self.parts();
        let width = self.width_on_base();
        let (left, right) = (P2::new(-width, 0.0), P2::zeros());
        let (face, _) = self.face();
        let root = (left + right) / 2.0 + P2::y() * 0.6;
        self.shape(
            &[left, right, right + face * 6.0, root, left + face * 6.0],
            Fill::Grey,
        );
        self.through(left + P2::y() * 0.6, right + P2::y() * 0.6, P2::y() * 9.0);
    }

    /// The thickness of a weld that goes through, dimensioned; a broken line if it is checked.
    fn through(&mut self, from: P2, to: P2, off: P2) {
        if self.section.planes.contains(&FailurePath::Throat) {
            self.path(&[from, to], Stroke::black(1.2).dashed());
        }
        let thin = Stroke::black(0.35);
        for p in [from, to] {
            self.path(&[p + off * 0.75, p + off * 1.1], thin);
        }
        self.path(&[from + off, to + off], thin);
        let d = P2::new(to.x - from.x, from.y - to.y);
        for p in [from, to] {
            let p = self.on_sheet(p + off);
            self.canvas.mark([tick(p, unit(d))]);
        }
        let throat = symbol(&self.section.throat.0);
        self.label(throat, to + off, unit(to - from));
    }

    /// Two plates in line, welded through.
    fn butt(&mut self) {
        let line = Stroke::black(0.6);
        let half = BASE / 2.0 + 1.5;
        let (top, foot) = (half - 2.0, -half - 2.0);
        for (inner, outer, side) in [(-1.0, -REACH - 2.0, -1.0), (1.0, REACH + 2.0, 1.0)] {
            self.path(&[P2::new(outer, top), P2::new(5.0 * side, top)], line);
            self.path(&[P2::new(outer, foot), P2::new(inner, foot)], line);
        }
        self.shape(
            &[
                P2::new(-5.0, top),
                P2::new(5.0, top),
                P2::new(1.0, foot),
                P2::new(-1.0, foot),
            ],
            Fill::Grey,
        );
        let [attached, base] = self.section.parts.clone();
        let middle = f64::midpoint(top, foot);
        self.name(&attached, P2::new(-REACH + 6.0, middle), P2::x());
        self.name(&base, P2::new(REACH, middle), P2::x());
        self.through(P2::new(0.0, foot), P2::new(0.0, top), P2::x() * 8.0);
    }

    /// The runs, the kind of weld, the planes checked, in lines below.
    fn words(&mut self) -> usize {
        let checked = if self.section.checked.is_empty() {
            vec!["no strength checked".to_owned()]
        } else {
            self.lines("checked: ", &self.section.checked, Style::Plain)
        };
        let names = self.lines("", &self.section.runs, Style::Bold);
        let fit = |text: &String, style: Style| self.fit(text, style, CELL[0] - 2.0);
        let mut lines: Vec<Words> = names.iter().map(|line| fit(line, Style::Bold)).collect();
        lines.push(fit(&self.kind(), Style::Plain));
        lines.push(self.throat());
        lines.extend(checked.iter().map(|line| fit(line, Style::Plain)));
        let left = self.origin.x - self.width_on_base() - REACH + 3.0;
        let top = self.origin.y + BASE + 5.0;
        for (index, words) in lines.iter().enumerate() {
            // On one baseline, whatever descends below it.
            let drop = (words.fall - words.rise) / 2.0;
            let y = top + index as f64 * LINE + drop;
            let label = words.label(P2::new(left + words.size()[0] / 2.0, y), 0.0);
            self.canvas
                .draw_kept(Layer::Mark, Item::Label(label), Keep::Off);
        }
        lines.len()
    }

    /// A list in lines that fit the cell; the last one counts what finds no room.
    fn lines(&self, head: &str, items: &[String], style: Style) -> Vec<String> {
        let fits = |text: &str| {
            let words = self.canvas.words(vec![Span::new(text, style)]);
            words.size()[0] <= CELL[0] - 2.0
        };
        let mark = list_mark(items).to_string();
        let mut lines = vec![head.to_owned()];
        for (index, item) in items.iter().enumerate() {
            let comma = if index + 1 < items.len() { &mark } else { "" };
            let line = lines.len() - 1;
            let space = if index == 0 { "" } else { " " };
            let longer = format!("{}{space}{item}{comma}", lines[line]);
            if index == 0 || fits(&longer) {
                lines[line] = longer;
            } else if lines.len() == MOST_LINES {
                lines.push(format!("and {} more", items.len() - index));
                break;
            } else {
                lines.push(format!("{item}{comma}"));
            }
        }
        lines
    }

    /// The effective throat with its value.
    fn throat(&self) -> Words {
        let (name, value) = &self.section.throat;
        let mut spans = plain("throat ");
        spans.extend(symbol_spans(&format!("{name} = {value}")));
        self.canvas.words(spans)
    }

    fn kind(&self) -> String {
        let both = if self.section.both {
            ", both sides"
        } else {
            ""
        };
        let kind = match &self.section.shape {
            SectionShape::Fillet([base, attached]) if base.1 == attached.1 => {
                format!("fillet, leg {}", base.1)
            }
            SectionShape::Fillet([base, attached]) => {
                format!("fillet, legs {} and {}", base.1, attached.1)
            }
            SectionShape::Throat(_) => "fillet, stated throat".to_owned(),
            SectionShape::Partial(_) => "partial penetration".to_owned(),
            SectionShape::Complete { .. } => "complete penetration".to_owned(),
        };
        let gap = match &self.section.gap {
            Some(gap) => format!(", gap {gap}"),
            None => String::new(),
        };
        format!("{kind}{both}{gap}")
    }
}
