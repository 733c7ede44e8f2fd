//! Checks of a set note: nothing leaves its column, no two texts overlap.
//!
//! Works on the page frames, with the real outlines of glyphs and shapes.

use typst::layout::{Abs, Frame, FrameItem, Point, Rect, Transform};
use typst_layout::{Page, PagedDocument};

use super::faces::FAMILIES;

/// Left edge of the text block (mm), as in the page template.
const LEFT: f64 = 22.0;
/// Right edge of the text block (mm).
const RIGHT: f64 = 174.0;
/// The checker's margin (mm): sources and tick boxes.
const MARGIN: (f64, f64) = (178.5, 204.0);
/// How far ink may pass an edge (mm): side bearings of large or slanted letters, and half of a rule.
const SLACK: f64 = 0.6;
/// How far outlines may meet before they count as overlapping (mm): descenders under a line may
/// touch ascenders of the next.
const TOUCH: f64 = 0.35;

/// Something that stands where it must not.
#[derive(Clone, Debug, PartialEq)]
pub struct Stray {
    /// Page, one-based.
    pub page: usize,
    /// The text, or `shape` or `image`.
    pub what: String,
    /// Its box on the page: left, top, right, bottom (mm).
    pub at: [f64; 4],
    /// Why it is reported.
    pub fault: Fault,
}

/// Why something is reported.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Fault {
    /// It stands neither in the text block nor in the checker's margin, or across both.
    Column,
    /// It leaves the page at the top or the bottom.
    Page,
    /// It overlaps another text.
    Overlap {
        /// That text.
        with: String,
    },
}

/// Ink on a page.
struct Ink {
    what: String,
    at: [f64; 4],
    /// Whether it is running text, which nothing may overlap; parts of a formula may.
    text: bool,
}

/// Everything in the document that leaves its column or the page, or overlaps a text.
pub fn overflow(document: &PagedDocument) -> Vec<Stray> {
    let pages = document.pages().iter().enumerate();
    pages
        .flat_map(|(n, page)| page_strays(n + 1, page))
        .collect()
}

fn page_strays(number: usize, page: &Page) -> Vec<Stray> {
    let mut inks = Vec::new();
    collect(&page.frame, Transform::identity(), &mut inks);
    let height = page.frame.height().to_mm();
    let mut strays = Vec::new();
    let mut report = |ink: &Ink, fault| {
        strays.push(Stray {
            page: number,
            what: ink.what.clone(),
            at: ink.at,
            fault,
        });
    };
    for (i, ink) in inks.iter().enumerate() {
        if !in_column(ink.at) {
            report(ink, Fault::Column);
        }
        if ink.at[1] < 0.0 || ink.at[3] > height {
            report(ink, Fault::Page);
        }
        let text = |other: &&Ink| ink.text && other.text && overlap(ink.at, other.at);
        if let Some(other) = inks[..i].iter().find(text) {
            report(
                ink,
                Fault::Overlap {
                    with: other.what.clone(),
                },
            );
        }
    }
    strays
}

/// Whether a box lies in the text block or in the checker's margin.
fn in_column([left, _, right, _]: [f64; 4]) -> bool {
    let within = |from: f64, to: f64| left >= from - SLACK && right <= to + SLACK;
    within(LEFT, RIGHT) || within(MARGIN.0, MARGIN.1)
}

fn overlap(a: [f64; 4], b: [f64; 4]) -> bool {
    let shared = |i: usize| a[i + 2].min(b[i + 2]) - a[i].max(b[i]);
    shared(0) > TOUCH && shared(1) > TOUCH
}

/// Collects the ink of a frame and the frames in it.
fn collect(frame: &Frame, transform: Transform, inks: &mut Vec<Ink>) {
    for (position, item) in frame.items() {
        let here = transform.pre_concat(Transform::translate(position.x, position.y));
        match item {
            FrameItem::Group(group) => {
                collect(&group.frame, here.pre_concat(group.transform), inks);
            }
            FrameItem::Text(text) => {
                let family = text.font.font().info().family.as_str();
                if text.text.chars().any(|c| !c.is_whitespace()) {
                    inks.push(Ink {
                        what: text.text.to_string(),
                        at: placed(text.bbox(), here),
                        text: family != FAMILIES[1],
                    });
                }
            }
            FrameItem::Shape(shape, _) => inks.push(Ink {
                what: "shape".to_owned(),
                at: placed(shape.bbox(true), here),
                text: false,
            }),
            FrameItem::Image(_, size, _) => inks.push(Ink {
                what: "image".to_owned(),
                at: placed(Rect::new(Point::zero(), size.to_point()), here),
                text: false,
            }),
            FrameItem::Link(..) | FrameItem::Tag(_) => {}
        }
    }
}

/// A box on the page (mm), whatever the turn.
fn placed(rect: Rect, transform: Transform) -> [f64; 4] {
    let corners = [
        rect.min,
        rect.max,
        Point::new(rect.min.x, rect.max.y),
        Point::new(rect.max.x, rect.min.y),
    ]
    .map(|p| p.transform(transform));
    let least = |f: fn(&Point) -> Abs| {
        corners
            .iter()
            .map(|p| f(p).to_mm())
            .fold(f64::MAX, f64::min)
    };
    let most = |f: fn(&Point) -> Abs| {
        corners
            .iter()
            .map(|p| f(p).to_mm())
            .fold(f64::MIN, f64::max)
    };
    [least(|p| p.x), least(|p| p.y), most(|p| p.x), most(|p| p.y)]
}
