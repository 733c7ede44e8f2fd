//! Drawings put where their section speaks of them, after the layout.
//!
//! The typesetter sets a drawing at the head or the foot of the page that its section has come to,
//! or of the next page where it finds no room. On its own page it is moved to its spot, and what
//! stands around it closes up: nothing leaves the page, for the room is the same. The template marks
//! the spot in the text, and the drawing with the space that it keeps.

use typst::ecow::EcoVec;
use typst::foundations::{Dict, Value};
use typst::introspection::{MetadataElem, Tag};
use typst::layout::{Abs, Frame, FrameItem, GroupItem, Point};
use typst_layout::Page;

/// Part of the free room between text and text that stands above a drawing; and of its own space
/// where nothing follows it on the page.
const ABOVE: f64 = 0.45;
const ABOVE_LAST: f64 = 0.8;
/// How far letters reach under their line, in parts of their size.
const DESCENT: f64 = 0.25;

/// An item of a frame at its place.
type Placed = (Point, FrameItem);

/// A drawing of the page that its spot stands on.
struct Drawing {
    name: String,
    item: FrameItem,
    /// Its left edge in the text.
    left: Abs,
    height: Abs,
    /// Between it and the text.
    space: Abs,
    /// Whether it stands above the text.
    top: bool,
}

/// Moves the drawings of each page to their spots.
pub(super) fn settle_drawings(pages: &mut EcoVec<Page>) {
    for page in pages.make_mut() {
        if let Some(settled) = settled(&page.frame) {
            page.frame = settled;
        }
    }
}

/// The frame with its drawings moved; none if there is nothing to move.
fn settled(frame: &Frame) -> Option<Frame> {
    let text_of = |item: &FrameItem| match item {
        FrameItem::Group(group) if spots(&group.frame).next().is_some() => Some(group.clone()),
        _ => None,
    };
    let mut items = frame.items().enumerate();
    let (index, text) = items.find_map(|(n, (_, item))| Some((n, text_of(item)?)))?;
    let origin = frame.items().nth(index)?.0;
    let names: Vec<String> = spots(&text.frame).collect();
    let mut drawings = Vec::new();
    // A drawing stands beside the text, or after it in the same frame.
    let mut rest = |at: Point, item: &FrameItem, top: bool| {
        let found = as_drawing(item).filter(|drawing| names.contains(&drawing.name));
        let is_own = found.is_some();
        drawings.extend(found.map(|drawing| Drawing {
            left: at.x,
            top,
            ..drawing
        }));
        !is_own
    };
    let around: Vec<(usize, Placed)> = frame
        .items()
        .cloned()
        .enumerate()
        .filter(|(n, (at, item))| rest(*at - Point::with_x(origin.x), item, *n < index))
        .collect();
    let lines: Vec<Placed> = text
        .frame
        .items()
        .filter(|(at, item)| rest(*at, item, false))
        .cloned()
        .collect();
    if drawings.is_empty() {
        return None;
    }
    let mut inner = Frame::new(text.frame.size(), text.frame.kind());
    inner.push_multiple(interleaved(lines, &drawings));
    let moved = FrameItem::Group(GroupItem {
        frame: inner,
        ..text
    });
    let mut out = Frame::new(frame.size(), frame.kind());
    out.push_multiple(around.into_iter().map(|(n, (at, item))| {
        let item = if n == index { moved.clone() } else { item };
        (at, item)
    }));
    Some(out)
}

/// The text with the drawings at their spots; it moves up by those above it, and on from each.
fn interleaved(text: Vec<Placed>, drawings: &[Drawing]) -> Vec<Placed> {
    let room = |drawing: &Drawing| drawing.height + drawing.space;
    let above = drawings.iter().filter(|drawing| drawing.top);
    let mut shift = -above.map(room).sum::<Abs>();
    let is_ink = |item: &FrameItem| !matches!(item, FrameItem::Tag(_));
    let last = text.iter().rposition(|(_, item)| is_ink(item));
    let mut filled = shift;
    let mut out = Vec::with_capacity(text.len() + drawings.len());
    for (n, (at, item)) in text.into_iter().enumerate() {
        let at = at + Point::with_y(shift);
        let name = spot(&item);
        if is_ink(&item) {
            filled = filled.max(bottom(at, &item));
        }
        let here = drawings.iter().find(|d| Some(&d.name) == name.as_ref());
        out.push((at, item));
        if let Some(drawing) = here {
            let above = if last < Some(n) {
                drawing.space * ABOVE_LAST
            } else {
                (at.y - filled + drawing.space) * ABOVE
            };
            let place = Point::new(drawing.left, filled + above);
            out.push((place, drawing.item.clone()));
            shift += room(drawing);
            filled = place.y + drawing.height;
        }
    }
    out
}

/// How far down an item reaches.
fn bottom(at: Point, item: &FrameItem) -> Abs {
    at.y + match item {
        FrameItem::Group(group) => group.frame.height(),
        FrameItem::Text(text) => text.size * DESCENT,
        FrameItem::Shape(shape, _) => shape.bbox(true).max.y,
        FrameItem::Image(_, size, _) => size.y,
        FrameItem::Link(..) | FrameItem::Tag(_) => Abs::zero(),
    }
}

/// Names of the spots that stand directly in a text.
fn spots(text: &Frame) -> impl Iterator<Item = String> {
    text.items().filter_map(|(_, item)| spot(item))
}

/// The name of a spot.
fn spot(item: &FrameItem) -> Option<String> {
    let FrameItem::Tag(tag) = item else {
        return None;
    };
    name(mark(tag)?, "spot")
}

/// A drawing that floats, as its mark tells.
fn as_drawing(item: &FrameItem) -> Option<Drawing> {
    let FrameItem::Group(group) = item else {
        return None;
    };
    let mark = group.parent.and_then(|_| first_mark(&group.frame))?;
    let space = match mark.get("space") {
        Ok(Value::Length(length)) => length.abs,
        _ => return None,
    };
    Some(Drawing {
        name: name(mark, "drawing")?,
        item: item.clone(),
        left: Abs::zero(),
        height: group.frame.height(),
        space,
        top: false,
    })
}

fn first_mark(frame: &Frame) -> Option<&Dict> {
    frame.items().find_map(|(_, item)| match item {
        FrameItem::Tag(tag) => mark(tag),
        FrameItem::Group(group) => first_mark(&group.frame),
        _ => None,
    })
}

/// The words of a mark of the template.
fn mark(tag: &Tag) -> Option<&Dict> {
    let Tag::Start(content, _) = tag else {
        return None;
    };
    match &content.to_packed::<MetadataElem>()?.value {
        Value::Dict(words) => Some(words),
        _ => None,
    }
}

fn name(mark: &Dict, key: &str) -> Option<String> {
    match mark.get(key) {
        Ok(Value::Str(name)) => Some(name.as_str().to_owned()),
        _ => None,
    }
}
