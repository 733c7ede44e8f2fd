//! Finds and reads joint files, clause sheets and the project file.

use super::glyphs::unprintable;
use super::templates::{OwnTemplates, read_templates};
use super::{ProjectError, shown};
use crate::criteria::{Library, built_in, read_sheet};
use crate::joint::{Joint, ProjectFile, read_joint_node, read_project};
use crate::source::{Diagnostic, Faults, Node, Place, SourceFile, Value, parse_yaml};
use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The file beside the joints that holds what they share.
const PROJECT_FILE: &str = "project.yaml";

/// A user's file may have this many bytes: a thousand times the largest joint seen.
const LARGEST: u64 = 8 * 1024 * 1024;

/// A joint file found, and the folder of its project.
#[derive(Clone, Debug)]
pub struct JointFile {
    /// The file.
    pub path: PathBuf,
    /// Its folder, whose `sheets` folder holds the user's own sheets.
    pub folder: PathBuf,
    /// Name of its folder of outputs: the file's name without extension.
    pub stem: String,
    /// Whether its folder was named, not the file itself: then it may be no link out of the folder.
    pub listed: bool,
    /// What is wrong with it beside the other joints.
    pub faults: Vec<Diagnostic>,
}

pub(super) fn file_error(path: &Path, what: impl Into<String>) -> ProjectError {
    ProjectError::File {
        path: path.to_owned(),
        what: what.into(),
    }
}

/// The joints under the given paths: a file as it is, of a folder every `.yaml` in it, in order.
///
/// # Errors
///
/// [`ProjectError::File`] if a path does not exist, holds no joint, or two joints would share one
/// folder of outputs.
pub fn find_joints(paths: &[PathBuf]) -> Result<Vec<JointFile>, ProjectError> {
    let mut found = Vec::new();
    for path in paths {
        if path.is_dir() {
            let before = found.len();
            for entry in sorted(path)? {
                let name = entry
                    .file_name()
                    .and_then(|name| name.to_str())
                    .unwrap_or_default();
                if is_yaml(&entry) && !entry.is_dir() && name != PROJECT_FILE {
                    found.push(JointFile {
                        listed: true,
                        ..joint_file(&entry)
                    });
                }
            }
            if found.len() == before {
                return Err(file_error(
                    path,
                    "holds no joint: joints are files that end in .yaml",
                ));
            }
        } else if path.is_file() {
            if path.file_name().is_some_and(|name| name == PROJECT_FILE) {
                return Err(file_error(
                    path,
                    "is what the joints beside it share, no joint; name their folder",
                ));
            }
            found.push(joint_file(path));
        } else {
            return Err(file_error(path, "there is no such file or folder"));
        }
    }
    let mut seen: BTreeSet<PathBuf> = BTreeSet::new();
    found.retain(|joint| seen.insert(joint.path.clone()));
    let mut stems: BTreeMap<&str, &Path> = BTreeMap::new();
    for joint in &found {
        if joint
            .stem
            .contains(|c: char| c.is_control() || c == char::REPLACEMENT_CHARACTER)
        {
            return Err(file_error(
                &joint.path,
                "has a name that is no plain text, but names its folder of outputs; rename it",
            ));
        }
        if joint.stem.chars().all(|c| c == '.') {
            return Err(file_error(
                &joint.path,
                "has no name for its folder of outputs; rename it",
            ));
        }
        if let Some(other) = stems.insert(&joint.stem, &joint.path) {
            let what = format!(
                "would write into the same folder of outputs as {}; rename one of the two",
                shown(other)
            );
            return Err(file_error(&joint.path, what));
        }
    }
    Ok(found)
}

/// Leaves a fault in each joint whose note has the number of an earlier one.
///
/// Files that cannot be read are passed over: their own faults are told when they are worked on.
pub fn refuse_taken_notes(joints: &mut [JointFile], folders: &BTreeMap<PathBuf, Surroundings>) {
    // A joint alone has nothing to be compared with.
    if joints.len() < 2 {
        return;
    }
    let mut taken: BTreeMap<String, Place> = BTreeMap::new();
    for joint in joints {
        let Ok(completed) = complete_joint(joint, &folders[&joint.folder]) else {
            continue;
        };
        let Some((number, place)) = note_number(&completed.root) else {
            continue;
        };
        match taken.get(&number) {
            Some(first) => {
                let (line, _) = first.line_column();
                let message = format!("`{number}` is the number of another note");
                let help = format!(
                    "{}:{line} has it too; two notes with one number cannot both be signed",
                    first.file.name
                );
                joint
                    .faults
                    .push(Diagnostic::error("note-taken", message, &place).help(help));
            }
            None => drop(taken.insert(number, place)),
        }
    }
}

/// The number of a note and where it stands.
fn note_number(root: &Node) -> Option<(String, Place)> {
    let Value::Map(entries) = &root.value else {
        return None;
    };
    let (_, node) = entries.iter().find(|(key, _)| key.value == "note")?;
    match &node.value {
        Value::Scalar { text, .. } => Some((text.trim().to_owned(), node.place.clone())),
        Value::List(_) | Value::Map(_) | Value::Null => None,
    }
}

/// Whether a file of a folder is a user's YAML; hidden ones, which editors and archives leave, are not.
fn is_yaml(path: &Path) -> bool {
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    !name.starts_with('.') && (name.ends_with(".yaml") || name.ends_with(".yml"))
}

fn joint_file(path: &Path) -> JointFile {
    let folder = path
        .parent()
        .filter(|parent| !parent.as_os_str().is_empty())
        .unwrap_or(Path::new("."));
    let stem = path
        .file_stem()
        .map(|stem| stem.to_string_lossy())
        .unwrap_or_default();
    JointFile {
        path: path.to_owned(),
        folder: folder.to_owned(),
        stem: stem.into_owned(),
        listed: false,
        faults: Vec::new(),
    }
}

pub(super) fn sorted(folder: &Path) -> Result<Vec<PathBuf>, ProjectError> {
    let entries = fs::read_dir(folder).map_err(|fault| file_error(folder, fault.to_string()))?;
    let mut paths = Vec::new();
    for entry in entries {
        paths.push(
            entry
                .map_err(|fault| file_error(folder, fault.to_string()))?
                .path(),
        );
    }
    paths.sort();
    Ok(paths)
}

/// Refuses a file that a symbolic link leads to from outside the folder of the joints.
pub(super) fn within(folder: &Path, path: &Path) -> Result<(), ProjectError> {
    let real = |path: &Path| {
        let real = fs::canonicalize(path);
        real.map_err(|fault| file_error(path, fault.to_string()))
    };
    if real(path)?.starts_with(real(folder)?) {
        return Ok(());
    }
    let what = format!(
        "is a symbolic link out of {}; nothing outside it is read, so copy the file there",
        shown(folder)
    );
    Err(file_error(path, what))
}

/// Reads a file as text with its name as the user would type it.
///
/// # Errors
///
/// [`ProjectError::File`] if it cannot be read or is too large; [`ProjectError::Faults`] at the
/// first byte that is no UTF-8.
pub fn read_joint_file(path: &Path) -> Result<Arc<SourceFile>, ProjectError> {
    let known = fs::metadata(path).map_err(|fault| file_error(path, fault.to_string()))?;
    if !known.is_file() {
        return Err(file_error(path, "is no file"));
    }
    let size = known.len();
    if size > LARGEST {
        return Err(file_error(
            path,
            format!("has {size} bytes, more than the {LARGEST} that are read"),
        ));
    }
    let bytes = fs::read(path).map_err(|fault| file_error(path, fault.to_string()))?;
    let name = path.to_string_lossy().replace('\\', "/");
    match String::from_utf8(bytes) {
        Ok(text) => Ok(Arc::new(SourceFile { name, text })),
        Err(fault) => {
            let start = fault.utf8_error().valid_up_to();
            let text = String::from_utf8_lossy(fault.as_bytes()).into_owned();
            let file = Arc::new(SourceFile { name, text });
            let place = Place {
                end: (start + 3).min(file.text.len()),
                file,
                start,
            };
            let fault =
                Diagnostic::error("not-utf8", "this byte is no UTF-8 text".to_owned(), &place)
                    .help("save the file as UTF-8");
            Err(Faults(vec![fault]).into())
        }
    }
}

/// The built-in sheets and those in the `sheets` folder beside the joints.
///
/// # Errors
///
/// [`ProjectError`] if a sheet cannot be read, or two have one name.
pub fn read_library(folder: &Path) -> Result<Library, ProjectError> {
    let mut library = built_in().clone();
    let sheets = folder.join("sheets");
    if !sheets.is_dir() {
        return Ok(library);
    }
    let mut faults = Vec::new();
    for path in sorted(&sheets)?
        .into_iter()
        .filter(|path| is_yaml(path) && !path.is_dir())
    {
        within(folder, &path)?;
        let file = read_joint_file(&path)?;
        faults.extend(parse_yaml(&file).map_or_else(|_| Vec::new(), |root| unprintable(&root)));
        let added = read_sheet(&file).and_then(|sheet| library.add(sheet));
        if let Err(found) = added {
            faults.extend(found.0);
        }
    }
    if faults.is_empty() {
        Ok(library)
    } else {
        Err(Faults(faults).into())
    }
}

/// What the joints of a folder are read with.
#[derive(Clone, Debug)]
pub struct Surroundings {
    /// Clause sheets, built in and the user's own.
    pub library: Library,
    /// What the joints share, if the folder has a project file.
    pub shared: Option<ProjectFile>,
    /// What the notes are set with.
    pub templates: OwnTemplates,
}

/// Reads what stands beside the joints of a folder: sheets, project file, templates.
///
/// # Errors
///
/// [`ProjectError`] if one of them cannot be read or has faults.
pub fn read_surroundings(folder: &Path) -> Result<Surroundings, ProjectError> {
    let path = folder.join(PROJECT_FILE);
    let shared = if fs::symlink_metadata(&path).is_ok() {
        within(folder, &path)?;
        let file = read_joint_file(&path)?;
        let mut faults = unprintable(&parse_yaml(&file)?);
        let shared = read_project(&file).map_err(|found| faults.extend(found.0));
        match shared {
            Ok(shared) if faults.is_empty() => Some(shared),
            Ok(_) | Err(()) => return Err(in_order(faults).into()),
        }
    } else {
        None
    };
    Ok(Surroundings {
        library: read_library(folder)?,
        shared,
        templates: read_templates(folder)?,
    })
}

/// A joint's file and its tree, what it inherits put in.
#[derive(Clone, Debug)]
pub struct Completed {
    /// The joint file.
    pub file: Arc<SourceFile>,
    /// The tree.
    pub root: Node,
    faults: Vec<Diagnostic>,
}

/// Reads a joint's tree and puts in what it inherits.
///
/// # Errors
///
/// [`ProjectError`] if the file cannot be read as YAML.
pub fn complete_joint(
    joint: &JointFile,
    surroundings: &Surroundings,
) -> Result<Completed, ProjectError> {
    if joint.listed {
        within(&joint.folder, &joint.path)?;
    }
    let file = read_joint_file(&joint.path)?;
    let own = parse_yaml(&file)?;
    let mut faults = joint.faults.clone();
    faults.extend(unprintable(&own));
    let root = match &surroundings.shared {
        Some(shared) => {
            let (root, mut found) = shared.complete(&own);
            faults.append(&mut found);
            root
        }
        None => own,
    };
    Ok(Completed { file, root, faults })
}

/// Reads a joint with what it inherits.
///
/// # Errors
///
/// [`ProjectError`] with all faults of the joint, in file order.
pub fn read_told(
    completed: &Completed,
    surroundings: &Surroundings,
) -> Result<Joint, ProjectError> {
    let mut faults = completed.faults.clone();
    let joint = read_joint_node(&completed.root);
    match joint {
        Ok(joint) if faults.is_empty() => return Ok(joint),
        Ok(_) => {}
        Err(found) => {
            let new = |fault: &Diagnostic| completed.faults.iter().all(|f| f.place != fault.place);
            faults.extend(found.0.into_iter().filter(new));
        }
    }
    if let Some(shared) = &surroundings.shared {
        let named: Vec<String> = shared
            .part_names()
            .iter()
            .map(|name| format!("`{name}`"))
            .collect();
        for fault in &mut faults {
            if fault.code == "unknown-part" && !named.is_empty() {
                fault
                    .help
                    .push(format!("the project file names: {}", named.join(", ")));
            }
        }
    }
    Err(in_order(faults).into())
}

fn in_order(mut faults: Vec<Diagnostic>) -> Faults {
    faults.sort_by(|a, b| {
        (&a.place.file.name, a.place.start).cmp(&(&b.place.file.name, b.place.start))
    });
    Faults(faults)
}
