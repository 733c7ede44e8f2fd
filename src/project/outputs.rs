//! Outputs on disk: staged beside their place, then renamed into it, the trace last.
//!
//! A reader that sees a new trace sees its whole note; a failure leaves the earlier note untouched.

use super::ProjectError;
use std::fs;
use std::path::Path;

/// A finished output file.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Output {
    /// Name within the note's folder.
    pub name: &'static str,
    /// Content.
    pub bytes: Vec<u8>,
}

/// Writes the outputs of one note into `folder`, in the order given.
///
/// # Errors
///
/// [`ProjectError::File`] naming the file or folder that cannot be written.
pub fn stage(folder: &Path, outputs: &[Output]) -> Result<(), ProjectError> {
    let error = |path: &Path, fault: std::io::Error| ProjectError::File {
        path: path.to_owned(),
        what: format!("cannot be written: {fault}"),
    };
    fs::create_dir_all(folder).map_err(|fault| error(folder, fault))?;
    let staging = tempfile::Builder::new()
        .prefix(".staging-")
        .tempdir_in(folder)
        .map_err(|fault| error(folder, fault))?;
    for output in outputs {
        let path = staging.path().join(output.name);
        fs::write(&path, &output.bytes).map_err(|fault| error(&path, fault))?;
    }
    // A trace stands for a whole note: it goes first, and comes back last.
    let trace = folder.join("trace.json");
    match fs::remove_file(&trace) {
        Err(fault) if fault.kind() != std::io::ErrorKind::NotFound => {
            return Err(error(&trace, fault));
        }
        Ok(()) | Err(_) => {}
    }
    for output in outputs {
        let path = folder.join(output.name);
        fs::rename(staging.path().join(output.name), &path).map_err(|fault| error(&path, fault))?;
    }
    staging.close().map_err(|fault| error(folder, fault))
}
