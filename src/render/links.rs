//! Links inside a note, resolved after the layout.
//!
//! The templates emit links to pseudo-addresses (`step 12`); once the pages stand, each is replaced
//! by the place of the label of that name. A link to a label would make the typesetter lay out
//! the whole document once more for the same result.

use std::collections::BTreeSet;

use typst::ecow::EcoVec;
use typst::foundations::Label;
use typst::introspection::{Introspector, Location};
use typst::layout::{Frame, FrameItem};
use typst::model::{Destination, Document, Url};
use typst::utils::PicoStr;
use typst_layout::PagedDocument;

use super::drawings::settle_drawings;
use super::error::RenderError;

/// The document with every pseudo-address replaced by the place of its label.
///
/// # Errors
///
/// [`RenderError::Unresolved`] with the addresses that no label answers.
pub(super) fn resolve_links(document: &PagedDocument) -> Result<PagedDocument, RenderError> {
    let introspector = document.introspector().clone();
    let find = |url: &Url| {
        let label = Label::new(PicoStr::intern(url.as_str()))?;
        introspector.query_label(label).ok()?.location()
    };
    let mut lost = BTreeSet::new();
    let mut pages: EcoVec<_> = document.pages().iter().cloned().collect();
    for page in pages.make_mut() {
        resolve_frame(&mut page.frame, &find, &mut lost);
    }
    if !lost.is_empty() {
        return Err(RenderError::Unresolved(lost.into_iter().collect()));
    }
    settle_drawings(&mut pages);
    Ok(PagedDocument::new(pages, document.info().clone()))
}

/// Replaces the destinations in one frame and the frames inside it.
fn resolve_frame(
    frame: &mut Frame,
    find: &dyn Fn(&Url) -> Option<Location>,
    lost: &mut BTreeSet<String>,
) {
    if !holds_links(frame) {
        return;
    }
    frame.retain(|item| {
        match item {
            FrameItem::Link(destination, _) => resolve_one(destination, find, lost),
            FrameItem::Group(group) => resolve_frame(&mut group.frame, find, lost),
            FrameItem::Text(_)
            | FrameItem::Shape(..)
            | FrameItem::Image(..)
            | FrameItem::Tag(_) => {}
        }
        true
    });
}

/// Replaces one destination, or records that it leads nowhere.
fn resolve_one(
    destination: &mut Destination,
    find: &dyn Fn(&Url) -> Option<Location>,
    lost: &mut BTreeSet<String>,
) {
    if let Destination::Url(url) = destination {
        match find(url) {
            Some(location) => *destination = Destination::Location(location),
            None => {
                lost.insert(url.as_str().to_owned());
            }
        }
    }
}

/// Whether there is anything to replace, so that frames without links stay shared.
fn holds_links(frame: &Frame) -> bool {
    frame.items().any(|(_, item)| match item {
        FrameItem::Link(Destination::Url(_), _) => true,
        FrameItem::Group(group) => holds_links(&group.frame),
        FrameItem::Link(..)
        | FrameItem::Text(_)
        | FrameItem::Shape(..)
        | FrameItem::Image(..)
        | FrameItem::Tag(_) => false,
    })
}
