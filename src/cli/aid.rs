//! Commands that help to begin and to understand: a new project, explanations, schemas,
//! completions, the manual.

use super::arguments::{Arguments, SchemaOf, UNITS};
use super::work::{Said, complaint};
use super::{everything, exit, explain};
use crate::criteria::Library;
use crate::joint::keys::PATTERN;
use crate::project::{
    ProjectError, SchemaKind, Start, Workshop, begin, published, put, read_library, shown,
};
use crate::quantity::UnitSet;
use crate::source::Form;
use clap::CommandFactory;
use std::path::Path;

/// Lays down a project and says what to do next.
pub(super) fn begin_project(folder: &Path, pattern: &str, units: &str, colour: bool) -> Said {
    let start = Start {
        pattern: shape(pattern),
        units: UNITS
            .into_iter()
            .find(|(name, _)| *name == units)
            .map_or(UnitSet::NewtonMillimetre, |(_, set)| set),
    };
    match begin(folder, &start) {
        Ok(paths) => {
            let lines: Vec<String> = paths
                .iter()
                .map(|path| format!("{}\n", path.display()))
                .collect();
            let next = format!(
                "next: change to {}, look into the joint, and run `seamnote write`\n",
                folder.display()
            );
            said(lines.concat() + &next)
        }
        Err(fault) => refused(&fault, colour),
    }
}

/// The trade name of a pattern that the command line names with hyphens.
fn shape(typed: &str) -> String {
    let words = match PATTERN.find("shape").map(|key| key.form) {
        Some(Form::Words(words)) => words,
        _ => &[],
    };
    let spaced = typed.replace('-', " ");
    let known = words.iter().find(|word| word.to_lowercase() == spaced);
    known.map_or(spaced.clone(), |word| (*word).to_owned())
}

/// Explains what the words name, or sets the clause sheet that they name as a page.
pub(super) fn explained(thing: &[String], joints: &Path, pdf: Option<&Path>, colour: bool) -> Said {
    let library = match read_library(joints) {
        Ok(library) => library,
        Err(fault) => return refused(&fault, colour),
    };
    let thing = thing.join(" ");
    if let Some(path) = pdf {
        return match set_sheet(&thing, &library, path) {
            Ok(text) => said(text),
            Err(fault) => refused(&fault, colour),
        };
    }
    if thing.trim().is_empty() {
        return said(everything(&library));
    }
    match explain(&thing, &library) {
        Ok(text) => said(text),
        Err(text) => Said {
            err: text,
            code: exit::REFUSED,
            ..Said::default()
        },
    }
}

/// Sets a clause sheet into a file, and says where it is.
fn set_sheet(name: &str, library: &Library, path: &Path) -> Result<String, ProjectError> {
    let Some(sheet) = library.find(name) else {
        return Err(ProjectError::File {
            path: path.to_owned(),
            what: format!(
                "not written: `{name}` is no clause sheet, and nothing else is set as a page"
            ),
        });
    };
    put(path, &Workshop::new().sheet_pdf(sheet)?)?;
    Ok(format!("{} → {}\n", sheet.name.value, shown(path)))
}

/// Prints a schema.
pub(super) fn schema(of: SchemaOf) -> Said {
    said(published(match of {
        SchemaOf::Joint => SchemaKind::Joint,
        SchemaOf::Project => SchemaKind::Project,
        SchemaOf::Sheet => SchemaKind::Sheet,
        SchemaOf::Trace => SchemaKind::Trace,
    }))
}

/// Prints the completions of a shell.
pub(super) fn completions(shell: clap_complete::Shell) -> Said {
    let mut text = Vec::new();
    clap_complete::generate(shell, &mut Arguments::command(), "seamnote", &mut text);
    said(String::from_utf8_lossy(&text).into_owned())
}

/// Prints the manual page of the program, or of a command.
pub(super) fn manual(command: Option<&str>) -> Said {
    let mut program = Arguments::command();
    program.build();
    let page = match command {
        None => program,
        Some(name) => match program.find_subcommand(name) {
            Some(command) => command.clone(),
            None => {
                return Said {
                    err: format!("error: `{name}` is no command\n"),
                    code: exit::USAGE,
                    ..Said::default()
                };
            }
        },
    };
    // The page of a command goes by both names, as in `seamnote-write`.
    let title = page.get_display_name().unwrap_or("seamnote").to_owned();
    let mut text = Vec::new();
    clap_mangen::Man::new(page)
        .title(title)
        .render(&mut text)
        .expect("writing to memory does not fail");
    said(String::from_utf8_lossy(&text).into_owned())
}

fn said(out: String) -> Said {
    Said {
        out,
        code: exit::DONE,
        ..Said::default()
    }
}

fn refused(fault: &ProjectError, colour: bool) -> Said {
    Said {
        err: complaint(fault, colour),
        code: exit::REFUSED,
        ..Said::default()
    }
}
