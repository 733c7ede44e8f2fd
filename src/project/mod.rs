//! Files: finds and reads joints and sheets, stages and renames outputs.
//!
//! The only room that touches the disk. Everything inside takes texts and gives bytes.

mod begin;
mod outputs;
mod produce;
mod read;
mod schemas;

pub use begin::{Start, begin};
pub use outputs::{Output, stage};
pub use produce::{Kinds, Produced, Workshop, written};
pub use read::{JointFile, find_joints, read_joint_file, read_library};
pub use schemas::{SchemaKind, published};

use crate::render::RenderError;
use crate::source::Faults;
use std::path::PathBuf;
use thiserror::Error;

/// Why a joint gave no outputs.
#[derive(Debug, Error)]
pub enum ProjectError {
    /// Faults of the user's files, with their places.
    #[error("{0}")]
    Faults(Faults),
    /// A file or folder that cannot be read or written.
    #[error("{path}: {what}", path = .path.display())]
    File {
        /// The file or folder.
        path: PathBuf,
        /// What happened, and what to do.
        what: String,
    },
    /// The note could not be set.
    #[error("{joint}: {fault}")]
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
