//! Files: finds and reads joints, sheets, templates and what joints share, stages and renames outputs.
//!
//! The only room that touches the disk. Everything inside takes texts and gives bytes.

mod begin;
mod glyphs;
mod outputs;
mod produce;
mod read;
mod schemas;
mod templates;

pub use begin::{Start, begin};
pub use outputs::{Output, put, stage};
pub use produce::{Kinds, Produced, Workshop, written};
pub use read::{
    Completed, JointFile, Surroundings, complete_joint, find_joints, read_joint_file, read_library,
    read_surroundings, read_told, refuse_taken_notes,
};
pub use schemas::{SchemaKind, published};
pub use templates::OwnTemplates;

use crate::render::RenderError;
use crate::source::{Faults, one_line};
use std::path::{Path, PathBuf};
use thiserror::Error;

/// Why a joint gave no outputs.
#[derive(Debug, Error)]
pub enum ProjectError {
    /// Faults of the user's files, with their places.
    #[error("{0}")]
    Faults(Faults),
    /// A file or folder that cannot be read or written.
    #[error("{path}: {what}", path = shown(.path))]
    File {
        /// The file or folder.
        path: PathBuf,
        /// What happened, and what to do.
        what: String,
    },
    /// The note could not be set.
    #[error("{joint}: {fault}", joint = one_line(.joint))]
    Render {
        /// The joint file.
        joint: String,
        /// What happened.
        fault: RenderError,
    },
}

impl From<Faults> for ProjectError {
    fn from(faults: Faults) -> Self {
        Self::Faults(faults)
    }
}

/// A path for the terminal: control characters are escaped.
#[must_use]
pub fn shown(path: &Path) -> String {
    one_line(&path.to_string_lossy())
}
