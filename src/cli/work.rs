//! Works on joints with several threads and says what came of each, in the order of the files.

use super::aid;
use super::arguments::{Arguments, Command, OutputKind, ScopeArgs};
use super::exit;
use crate::criteria::Library;
use crate::note::{Calculation, Standing, write_note};
use crate::project::{
    JointFile, Kinds, ProjectError, Workshop, find_joints, read_joint_file, read_library, written,
};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};

/// What a command says, and its exit code.
#[derive(Clone, PartialEq, Eq, Debug, Default)]
pub struct Said {
    /// For standard output.
    pub out: String,
    /// For standard error.
    pub err: String,
    /// Exit code.
    pub code: u8,
}

/// How one joint stands.
struct Outcome {
    line: String,
    holds: bool,
}

/// Carries out a command. `colour` is for faults on a terminal.
#[must_use]
pub fn run(arguments: &Arguments, colour: bool) -> Said {
    let (scope, job) = match &arguments.command {
        Command::Write { scope, out, only } => (
            scope,
            Job::Write {
                out: out.clone(),
                kinds: kinds(only),
            },
        ),
        Command::Vet { scope } => (scope, Job::Vet),
        Command::Begin {
            folder,
            pattern,
            units,
        } => return aid::begin_project(folder, pattern, units, colour),
        Command::Explain { thing, joints } => return aid::explained(thing, joints, colour),
        Command::Schema { of } => return aid::schema(*of),
        Command::Completions { shell } => return aid::completions(*shell),
        Command::Manual { command } => return aid::manual(command.as_deref()),
    };
    match prepare(scope) {
        Ok((joints, libraries)) => work(&joints, &libraries, scope, &job, colour),
        Err(fault) => Said {
            err: complaint(&fault, colour),
            code: exit::REFUSED,
            ..Said::default()
        },
    }
}

enum Job {
    Write { out: PathBuf, kinds: Kinds },
    Vet,
}

type Libraries = BTreeMap<PathBuf, Library>;

fn prepare(scope: &ScopeArgs) -> Result<(Vec<JointFile>, Libraries), ProjectError> {
    let joints = find_joints(&scope.paths)?;
    let mut libraries = Libraries::new();
    for joint in &joints {
        if !libraries.contains_key(&joint.folder) {
            libraries.insert(joint.folder.clone(), read_library(&joint.folder)?);
        }
    }
    Ok((joints, libraries))
}

fn kinds(only: &[OutputKind]) -> Kinds {
    if only.is_empty() {
        return Kinds::ALL;
    }
    Kinds {
        pdf: only.contains(&OutputKind::Pdf),
        markdown: only.contains(&OutputKind::Markdown),
        cases: only.contains(&OutputKind::Cases),
        trace: only.contains(&OutputKind::Trace),
    }
}

fn work(
    joints: &[JointFile],
    libraries: &Libraries,
    scope: &ScopeArgs,
    job: &Job,
    colour: bool,
) -> Said {
    let available = std::thread::available_parallelism().map_or(1, usize::from);
    let threads = scope
        .threads
        .map_or(available, usize::from)
        .min(joints.len())
        .max(1);
    let workshop = match job {
        Job::Write { .. } => Some(Workshop::new()),
        Job::Vet => None,
    };
    let next = AtomicUsize::new(0);
    let results: Mutex<BTreeMap<usize, Result<Outcome, ProjectError>>> =
        Mutex::new(BTreeMap::new());
    std::thread::scope(|threads_of| {
        for _ in 0..threads {
            threads_of.spawn(|| {
                loop {
                    let index = next.fetch_add(1, Ordering::Relaxed);
                    let Some(joint) = joints.get(index) else {
                        break;
                    };
                    let result = guarded(joint, &libraries[&joint.folder], job, workshop.as_ref());
                    results
                        .lock()
                        .expect("no worker panics while it holds the results")
                        .insert(index, result);
                }
            });
        }
    });
    let results = results
        .into_inner()
        .expect("no worker panics while it holds the results");
    summary(joints, results, scope.must_hold, workshop.is_some(), colour)
}

/// One joint; a fault of the program itself stays with that joint.
fn guarded(
    joint: &JointFile,
    library: &Library,
    job: &Job,
    workshop: Option<&Workshop>,
) -> Result<Outcome, ProjectError> {
    let attempt = std::panic::AssertUnwindSafe(|| one(joint, library, job, workshop));
    std::panic::catch_unwind(attempt).unwrap_or_else(|_| {
        Err(ProjectError::File {
            path: joint.path.clone(),
            what: "the program failed on this joint; please report it with the file".to_owned(),
        })
    })
}

fn one(
    joint: &JointFile,
    library: &Library,
    job: &Job,
    workshop: Option<&Workshop>,
) -> Result<Outcome, ProjectError> {
    match (job, workshop) {
        (Job::Write { out, kinds }, Some(workshop)) => {
            let produced = workshop.produce(joint, library, *kinds)?;
            let folder = written(&produced, joint, out)?;
            Ok(said(
                &produced.note.standing,
                joint,
                &format!(" → {folder}"),
            ))
        }
        _ => {
            let file = read_joint_file(&joint.path)?;
            let told = crate::joint::read_joint(&file)?;
            let calculation = Calculation::of(&told, library)?;
            let note = write_note(&calculation)?;
            Ok(said(&note.standing, joint, ""))
        }
    }
}

fn said(standing: &Standing, joint: &JointFile, tail: &str) -> Outcome {
    let line = format!("{}  {}{tail}", joint.path.display(), standing.line());
    Outcome {
        line,
        holds: standing.holds(),
    }
}

fn summary(
    joints: &[JointFile],
    results: BTreeMap<usize, Result<Outcome, ProjectError>>,
    must_hold: bool,
    writes: bool,
    colour: bool,
) -> Said {
    let mut said = Said::default();
    let mut refused: Vec<&Path> = Vec::new();
    let mut all_hold = true;
    for (index, result) in results {
        match result {
            Ok(Outcome { line, holds }) => {
                said.out.push_str(&line);
                said.out.push('\n');
                all_hold &= holds;
            }
            Err(fault) => {
                said.err.push_str(&complaint(&fault, colour));
                refused.push(&joints[index].path);
            }
        }
    }
    if !refused.is_empty() {
        let names: Vec<String> = refused
            .iter()
            .map(|path| path.display().to_string())
            .collect();
        let tail = if writes {
            "; an earlier note stands as it was"
        } else {
            ""
        };
        said.err
            .push_str(&format!("refused: {}{tail}\n", names.join(", ")));
        said.code = exit::REFUSED;
    } else if must_hold && !all_hold {
        said.err
            .push_str("a check does not hold, or gives no number\n");
        said.code = exit::DOES_NOT_HOLD;
    }
    said
}

pub(super) fn complaint(fault: &ProjectError, colour: bool) -> String {
    match fault {
        ProjectError::Faults(faults) => format!("{}\n", faults.render(colour).trim_end()),
        other => format!("error: {other}\n"),
    }
}
