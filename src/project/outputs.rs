//! Outputs on disk: staged beside their place, then renamed into it, the trace last.
//!
//! A reader that sees a new trace sees its whole note; a failure leaves the earlier note untouched.

use super::ProjectError;
use std::fs;
use std::io::Write;
use std::path::Path;
use std::time::Duration;

/// Start of the name of a staging folder.
const STAGING: &str = ".staging-";

/// A staging folder this much older than ours belongs to a run that was killed: a live one is staged
/// and renamed within a second.
const LEFT_OVER: Duration = Duration::from_secs(3600);

/// A finished output file.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Output {
    /// Name within the note's folder.
    pub name: String,
    /// Content.
    pub bytes: Vec<u8>,
}

impl Output {
    /// An output of a name within the note's folder.
    pub fn new(name: &str, bytes: impl Into<Vec<u8>>) -> Self {
        Self {
            name: name.to_owned(),
            bytes: bytes.into(),
        }
    }
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
    // What stands in the way is found before anything is changed.
    for output in outputs {
        let path = folder.join(&output.name);
        if path.is_dir() {
            return Err(error(&path, std::io::ErrorKind::IsADirectory.into()));
        }
    }
    let staging = tempfile::Builder::new()
        .prefix(STAGING)
        .tempdir_in(folder)
        .map_err(|fault| error(folder, fault))?;
    clear_left_over(folder, staging.path());
    for output in outputs {
        let path = staging.path().join(&output.name);
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
        let path = folder.join(&output.name);
        fs::rename(staging.path().join(&output.name), &path)
            .map_err(|fault| error(&path, fault))?;
    }
    staging.close().map_err(|fault| error(folder, fault))
}

/// Writes one file that belongs to no note: beside its place, then renamed into it.
///
/// # Errors
///
/// [`ProjectError::File`] if it cannot be written.
pub fn put(path: &Path, bytes: &[u8]) -> Result<(), ProjectError> {
    let error = |fault: std::io::Error| ProjectError::File {
        path: path.to_owned(),
        what: format!("cannot be written: {fault}"),
    };
    let folder = path
        .parent()
        .filter(|parent| !parent.as_os_str().is_empty());
    let mut staged =
        tempfile::NamedTempFile::new_in(folder.unwrap_or(Path::new("."))).map_err(error)?;
    staged.write_all(bytes).map_err(error)?;
    staged.persist(path).map_err(|fault| error(fault.error))?;
    Ok(())
}

/// Removes the staging folders that killed runs left in `folder`.
///
/// Age is told by the disk's own times, against those of the staging folder just made: no clock and no
/// lock. What cannot be read or removed stays; it harms nothing.
fn clear_left_over(folder: &Path, own: &Path) {
    let changed = |path: &Path| fs::symlink_metadata(path).and_then(|data| data.modified());
    let (Ok(now), Ok(entries)) = (changed(own), fs::read_dir(folder)) else {
        return;
    };
    for entry in entries.flatten() {
        let path = entry.path();
        let is_ours = entry.file_name().to_string_lossy().starts_with(STAGING)
            && entry.file_type().is_ok_and(|kind| kind.is_dir());
        let age = changed(&path)
            .ok()
            .and_then(|then| now.duration_since(then).ok());
        if is_ours && age.is_some_and(|age| age > LEFT_OVER) {
            let _ = fs::remove_dir_all(&path);
        }
    }
}
