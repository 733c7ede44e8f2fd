//! The typesetter's world: the embedded faces, one source, the attachments; no files, no packages,
//! no clock.

use typst::diag::{FileError, FileResult};
use typst::foundations::{Bytes, Datetime, Duration};
use typst::syntax::{FileId, RootedPath, Source, VirtualPath, VirtualRoot};
use typst::text::{Font, FontBook};
use typst::utils::LazyHash;
use typst::{Library, LibraryExt, World};

use super::faces::{FAMILIES, STORE};

/// What is the same for all documents: the faces and the typesetter's library, built once.
///
/// It may be shared by plain threads; run no documents inside a work-stealing pool.
pub struct Press {
    library: LazyHash<Library>,
}

impl Press {
    /// Builds the library; the faces load with the first document.
    pub fn new() -> Self {
        Self {
            library: LazyHash::new(Library::default()),
        }
    }
}

impl Default for Press {
    fn default() -> Self {
        Self::new()
    }
}

impl std::fmt::Debug for Press {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Press")
            .field("families", &FAMILIES)
            .finish_non_exhaustive()
    }
}

/// One document on the press.
pub(super) struct Job<'a> {
    press: &'a Press,
    source: Source,
    attachments: Vec<Bytes>,
}

impl<'a> Job<'a> {
    /// A document of this source whose attachments are served as `/attachments/N`.
    pub(super) fn new(press: &'a Press, text: String, attachments: Vec<Bytes>) -> Self {
        Self {
            press,
            source: Source::new(virtual_file("note.typ"), text),
            attachments,
        }
    }

    /// The source, for faults.
    pub(super) fn text(&self) -> &Source {
        &self.source
    }
}

/// Name of the n-th attachment inside the world.
pub(super) fn attachment_path(n: usize) -> String {
    format!("/attachments/{n}")
}

/// File ids are interned for ever, so each role has one fixed path.
fn virtual_file(name: &str) -> FileId {
    let path = VirtualPath::new(name).expect("a fixed relative path is valid");
    RootedPath::new(VirtualRoot::Project, path).intern()
}

impl World for Job<'_> {
    fn library(&self) -> &LazyHash<Library> {
        &self.press.library
    }

    fn book(&self) -> &LazyHash<FontBook> {
        STORE.book()
    }

    fn main(&self) -> FileId {
        self.source.id()
    }

    fn source(&self, id: FileId) -> FileResult<Source> {
        if id == self.source.id() {
            return Ok(self.source.clone());
        }
        Err(FileError::NotSource)
    }

    fn file(&self, id: FileId) -> FileResult<Bytes> {
        let wanted = id.get().vpath().get_with_slash();
        let found = (0..self.attachments.len()).find(|&n| attachment_path(n) == wanted);
        found
            .map(|n| self.attachments[n].clone())
            .ok_or(FileError::AccessDenied)
    }

    fn font(&self, index: usize) -> Option<Font> {
        STORE.font(index)
    }

    fn today(&self, _: Option<Duration>) -> Option<Datetime> {
        None
    }
}
