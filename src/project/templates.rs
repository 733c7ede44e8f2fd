//! Templates of a project in place of the built-in ones, and their faults as the user reads them.

use super::ProjectError;
use super::read::{file_error, read_joint_file, sorted, within};
use crate::render::{RenderError, Templates};
use crate::source::{Diagnostic, Faults, Place, SourceFile};
use std::collections::BTreeMap;
use std::path::Path;
use std::sync::Arc;

/// Folder beside the joints that holds a project's own templates.
const FOLDER: &str = "templates";

/// Bytes of a template at most: its expressions nest on the stack.
const LARGEST: usize = 200_000;

/// The templates of a project.
#[derive(Clone, Debug, Default)]
pub struct OwnTemplates {
    /// What notes are set with.
    pub templates: Templates,
    /// The files among them that are the project's own, by name.
    pub files: BTreeMap<String, Arc<SourceFile>>,
}

/// The built-in templates, those in the `templates` folder beside the joints in their places.
///
/// # Errors
///
/// [`ProjectError`] if a file cannot be read or bears no template's name.
pub(super) fn read_templates(folder: &Path) -> Result<OwnTemplates, ProjectError> {
    let mut own = OwnTemplates::default();
    let place = folder.join(FOLDER);
    if !place.is_dir() {
        return Ok(own);
    }
    for path in sorted(&place)? {
        let name = path.file_name().unwrap_or_default().to_string_lossy();
        if name.starts_with('.') {
            continue;
        }
        let templates = &mut own.templates;
        let replaced = match &*name {
            "note.typ" => &mut templates.note_typ,
            "page.typ" => &mut templates.page_typ,
            "note.md" => &mut templates.note_md,
            _ => {
                let what = "is no template: note.typ, page.typ and note.md may stand here";
                return Err(file_error(&path, what));
            }
        };
        within(folder, &path)?;
        let file = read_joint_file(&path)?;
        if file.text.len() > LARGEST {
            let what = format!(
                "has {} bytes, more than the {LARGEST} of a template",
                file.text.len()
            );
            return Err(file_error(&path, what));
        }
        replaced.clone_from(&file.text);
        own.files.insert(name.into_owned(), file);
    }
    Ok(own)
}

impl OwnTemplates {
    /// Whether a note is set with the built-in templates alone.
    #[must_use]
    pub fn is_built_in(&self) -> bool {
        self.files.is_empty()
    }

    /// A fault of setting a note: at its line of the project's own template, if it stands there.
    pub(super) fn explain(&self, joint: &str, fault: RenderError) -> ProjectError {
        let faults = match &fault {
            RenderError::Template {
                name,
                line,
                message,
            } => {
                let place = self.place(name, line.unwrap_or(1));
                let told =
                    place.map(|place| Diagnostic::error("template", first_line(message), &place));
                told.into_iter().collect()
            }
            RenderError::Typeset(faults) => faults
                .iter()
                .filter_map(|fault| {
                    let (name, line) = fault.template.as_ref()?;
                    let place = self.place(name, *line)?;
                    let words = first_line(&fault.message);
                    let mut told = Diagnostic::error("typesetting", words, &place);
                    told.help.extend(fault.hints.iter().cloned());
                    Some(told)
                })
                .collect(),
            RenderError::TooLong(_) => {
                let mut names = ["note.typ", "page.typ"].into_iter();
                let place = names.find_map(|name| self.place(name, 1));
                let help = "look for a loop without end in it or in what it calls";
                place
                    .map(|place| {
                        Diagnostic::error("typesetting", fault.to_string(), &place).help(help)
                    })
                    .into_iter()
                    .collect()
            }
            RenderError::Unresolved(_) | RenderError::Glyphs(_) => self.somewhere(&fault),
            RenderError::Internal(_) => Vec::new(),
        };
        let faults = match &fault {
            RenderError::Typeset(_) if faults.is_empty() => self.somewhere(&fault),
            _ => faults,
        };
        if faults.is_empty() {
            return ProjectError::Render {
                joint: joint.to_owned(),
                fault,
            };
        }
        let setting = |told: Diagnostic| told.help(format!("met while setting {joint}"));
        Faults(faults.into_iter().map(setting).collect()).into()
    }

    /// A fault that no line is known of: at the top of the first own template that the note is set with.
    fn somewhere(&self, fault: &RenderError) -> Vec<Diagnostic> {
        let mut names = self.files.keys();
        let place = names.find_map(|name| self.place(name, 1));
        let told = |place| {
            let words = fault.to_string();
            let words = words.lines().next().unwrap_or_default();
            Diagnostic::error("typesetting", words, &place)
                .help("somewhere in the templates of the project")
        };
        place.map(told).into_iter().collect()
    }

    /// A line of an own template, without its indent.
    fn place(&self, name: &str, line: usize) -> Option<Place> {
        let file = self.files.get(name)?;
        let before = file.text.split_inclusive('\n').take(line.saturating_sub(1));
        let start: usize = before.map(str::len).sum();
        let text = file.text[start..].lines().next().unwrap_or_default();
        let start = start + (text.len() - text.trim_start().len());
        Some(Place {
            file: file.clone(),
            start,
            end: start + text.trim().len(),
        })
    }
}

/// The engine's words without the excerpt that it may add below them, and without the place.
fn first_line(message: &str) -> String {
    let line = message.lines().next().unwrap_or_default();
    let line = line.rsplit_once(" (in ").map_or(line, |(words, _)| words);
    line.trim_end_matches('.').to_owned()
}
