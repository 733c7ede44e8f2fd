//! Works on joints with several threads and says what came of each, in the order of the files.

use super::aid;
use super::arguments::{Arguments, Command, OutputKind, ScopeArgs};
use super::exit;
use super::show::table;
use crate::note::{Calculation, Standing, write_note};
use crate::project::{
    JointFile, Kinds, ProjectError, Surroundings, Workshop, complete_joint, find_joints,
    read_surroundings, read_told, refuse_taken_notes, shown, written,
};
use crate::source::one_line;
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

/// Stack of a worker (bytes): a template of the size allowed may nest all its expressions.
const STACK: usize = 256 * 1024 * 1024;

/// How one joint stands.
struct Outcome {
    line: String,
    holds: bool,
}

/// Told after each joint: how many are done, and of how many.
pub type Progress<'a> = &'a (dyn Fn(usize, usize) + Sync);

/// Carries out a command. `colour` is for faults on a terminal.
#[must_use]
pub fn run(arguments: &Arguments, colour: bool, progress: Progress<'_>) -> Said {
    let (scope, job) = match &arguments.command {
        Command::Write { scope, out, only } => (
            scope,
            Job::Write {
                out: out.clone(),
                kinds: kinds(only),
            },
        ),
        Command::Vet { scope } => (scope, Job::Vet),
        Command::Show { paths } => return show(paths, colour),
        Command::Begin {
            folder,
            pattern,
            units,
        } => return aid::begin_project(folder, pattern, units, colour),
        Command::Explain { thing, joints, pdf } => {
            return aid::explained(thing, joints, pdf.as_deref(), colour);
        }
        Command::Schema { of } => return aid::schema(*of),
        Command::Completions { shell } => return aid::completions(*shell),
        Command::Manual { command } => return aid::manual(command.as_deref()),
    };
    match prepare(&scope.paths) {
        Ok((joints, folders)) => work(&joints, &folders, scope, &job, colour, progress),
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

type Folders = BTreeMap<PathBuf, Surroundings>;

fn prepare(paths: &[PathBuf]) -> Result<(Vec<JointFile>, Folders), ProjectError> {
    let mut joints = find_joints(paths)?;
    let mut folders = Folders::new();
    for joint in &joints {
        if !folders.contains_key(&joint.folder) {
            folders.insert(joint.folder.clone(), read_surroundings(&joint.folder)?);
        }
    }
    refuse_taken_notes(&mut joints, &folders);
    Ok((joints, folders))
}

/// Says what each joint says, and what is wrong with those that cannot be read.
fn show(paths: &[PathBuf], colour: bool) -> Said {
    let mut said = Said::default();
    let told_of = |joint: &JointFile, surroundings: &Surroundings| {
        let completed = complete_joint(joint, surroundings)?;
        let told = read_told(&completed, surroundings)?;
        Ok(table(&completed, &told, &surroundings.library))
    };
    let results = prepare(paths).map(|(joints, folders)| {
        let each = joints.iter();
        each.map(|joint| told_of(joint, &folders[&joint.folder]))
            .collect::<Vec<Result<String, ProjectError>>>()
    });
    for result in results.unwrap_or_else(|fault| vec![Err(fault)]) {
        match result {
            Ok(text) => {
                let gap = if said.out.is_empty() { "" } else { "\n" };
                said.out.push_str(&format!("{gap}{text}"));
            }
            Err(fault) => {
                said.err.push_str(&complaint(&fault, colour));
                said.code = exit::REFUSED;
            }
        }
    }
    said
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
    folders: &Folders,
    scope: &ScopeArgs,
    job: &Job,
    colour: bool,
    progress: Progress<'_>,
) -> Said {
    let available = std::thread::available_parallelism().map_or(1, usize::from);
    let threads = scope
        .threads
        .map_or(available, usize::from)
        .min(joints.len())
        .max(1);
    let sets = |surroundings: &Surroundings| !surroundings.templates.is_built_in();
    let workshop = match job {
        Job::Write { .. } => Some(Workshop::new()),
        Job::Vet => folders.values().any(sets).then(Workshop::new),
    };
    let next = AtomicUsize::new(0);
    let results: Mutex<BTreeMap<usize, Result<Outcome, ProjectError>>> =
        Mutex::new(BTreeMap::new());
    std::thread::scope(|threads_of| {
        for _ in 0..threads {
            let worker = std::thread::Builder::new().stack_size(STACK);
            let started = worker.spawn_scoped(threads_of, || {
                loop {
                    let index = next.fetch_add(1, Ordering::Relaxed);
                    let Some(joint) = joints.get(index) else {
                        break;
                    };
                    let result = guarded(joint, &folders[&joint.folder], job, workshop.as_ref());
                    let mut results = results
                        .lock()
                        .expect("no worker panics while it holds the results");
                    results.insert(index, result);
                    progress(results.len(), joints.len());
                }
            });
            started.expect("the machine starts a thread");
        }
    });
    let results = results
        .into_inner()
        .expect("no worker panics while it holds the results");
    let writes = matches!(job, Job::Write { .. });
    summary(joints, results, scope.must_hold, writes, colour)
}

/// One joint; a fault of the program itself stays with that joint.
fn guarded(
    joint: &JointFile,
    surroundings: &Surroundings,
    job: &Job,
    workshop: Option<&Workshop>,
) -> Result<Outcome, ProjectError> {
    let attempt = std::panic::AssertUnwindSafe(|| one(joint, surroundings, job, workshop));
    std::panic::catch_unwind(attempt).unwrap_or_else(|_| {
        Err(ProjectError::File {
            path: joint.path.clone(),
            what: "the program failed on this joint; please report it with the file".to_owned(),
        })
    })
}

fn one(
    joint: &JointFile,
    surroundings: &Surroundings,
    job: &Job,
    workshop: Option<&Workshop>,
) -> Result<Outcome, ProjectError> {
    match (job, workshop) {
        (Job::Write { out, kinds }, Some(workshop)) => {
            let produced = workshop.produce(joint, surroundings, *kinds)?;
            let folder = written(&produced, joint, out)?;
            Ok(said(
                &produced.note.standing,
                joint,
                &format!(" → {folder}"),
            ))
        }
        // Templates of a project are vetted by setting the note with them.
        (Job::Vet, Some(workshop)) if !surroundings.templates.is_built_in() => {
            let produced = workshop.produce(joint, surroundings, Kinds::ALL)?;
            Ok(said(&produced.note.standing, joint, ""))
        }
        _ => {
            let completed = complete_joint(joint, surroundings)?;
            let told = read_told(&completed, surroundings)?;
            let calculation = Calculation::of(&told, &surroundings.library)?;
            let note = write_note(&calculation)?;
            Ok(said(&note.standing, joint, ""))
        }
    }
}

fn said(standing: &Standing, joint: &JointFile, tail: &str) -> Outcome {
    let line = format!(
        "{}  {}{tail}",
        shown(&joint.path),
        one_line(&standing.line())
    );
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
        let names: Vec<String> = refused.iter().map(|path| shown(path)).collect();
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
