//! Checks of a set note: nothing leaves its column, no two texts overlap.
//!
//! Works on the page frames, with the real outlines of glyphs and shapes.

use typst::layout::{Frame, FrameItem, Point, Rect, Transform};
use typst_layout::{Page, PagedDocument};

use super::faces::FAMILIES;
use crate::quantity::real;

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
    /// Its upright box.
    at: [f64; 4],
    /// The corners of its box as it is turned, in order round it (mm).
    corners: [[f64; 2]; 4],
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
        let text = |other: &&Ink| ink.text && other.text && overlap(ink, other);
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

/// Whether two boxes, as they are turned, share more than a touch.
///
/// Two convex shapes are apart if they are so along the normal of a side of one of them.
fn overlap(a: &Ink, b: &Ink) -> bool {
    let upright = |i: usize| a.at[i + 2].min(b.at[i + 2]) - a.at[i].max(b.at[i]);
    if upright(0) <= TOUCH || upright(1) <= TOUCH {
        return false;
    }
    [a, b].into_iter().flat_map(normals).all(|normal| {
        let reach = |ink: &Ink| {
            let along = ink.corners.map(|[x, y]| x * normal[0] + y * normal[1]);
            along
                .into_iter()
                .fold((f64::MAX, f64::MIN), |(low, high), at| {
                    (low.min(at), high.max(at))
                })
        };
        let ((a_low, a_high), (b_low, b_high)) = (reach(a), reach(b));
        a_high.min(b_high) - a_low.max(b_low) > TOUCH
    })
}

/// Unit normals of two neighbouring sides of a box; none for a side without length.
fn normals(ink: &Ink) -> impl Iterator<Item = [f64; 2]> {
    let [first, second, _, last] = ink.corners;
    [second, last].into_iter().filter_map(move |next| {
        let (x, y) = (next[0] - first[0], next[1] - first[1]);
        let length = real::hypot(x, y);
        (length > 0.0).then(|| [-y / length, x / length])
    })
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
                    let text_runs = family != FAMILIES[1];
                    inks.push(ink(text.text.to_string(), text.bbox(), here, text_runs));
                }
            }
            FrameItem::Shape(shape, _) => {
                inks.push(ink("shape".to_owned(), shape.bbox(true), here, false));
            }
            FrameItem::Image(_, size, _) => {
                let rect = Rect::new(Point::zero(), size.to_point());
                inks.push(ink("image".to_owned(), rect, here, false));
            }
            FrameItem::Link(..) | FrameItem::Tag(_) => {}
        }
    }
}

/// Ink of a box on the page (mm), whatever its turn.
fn ink(what: String, rect: Rect, transform: Transform, text: bool) -> Ink {
    let corners = [
        rect.min,
        Point::new(rect.max.x, rect.min.y),
        rect.max,
        Point::new(rect.min.x, rect.max.y),
    ]
    .map(|p| p.transform(transform))
    .map(|p| [p.x.to_mm(), p.y.to_mm()]);
    let least = |i: usize| corners.iter().map(|p| p[i]).fold(f64::MAX, f64::min);
    let most = |i: usize| corners.iter().map(|p| p[i]).fold(f64::MIN, f64::max);
    Ink {
        what,
        at: [least(0), least(1), most(0), most(1)],
        corners,
        text,
    }
}
