//! The command line, run as a user runs it: exit codes, what is written, what is said.

use crate::notes::project_folder;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::time::SystemTime;
use tempfile::TempDir;

/// What a run of the program gave.
#[derive(Debug)]
pub(crate) struct Ran {
    pub(crate) code: i32,
    pub(crate) out: String,
    pub(crate) err: String,
}

/// A project in a folder of its own, removed at the end.
pub(crate) struct Project {
    root: TempDir,
}

impl Project {
    /// An empty project.
    pub(crate) fn new() -> Self {
        Self {
            root: tempfile::tempdir().unwrap(),
        }
    }

    /// A project with the joint of the mast foot.
    pub(crate) fn with_joint() -> Self {
        let project = Self::new();
        project.put("joints/mast-foot.yaml", joint());
        project
    }

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.root.path().join(name)
    }

    pub(crate) fn put(&self, name: &str, text: impl AsRef<[u8]>) {
        let path = self.path(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(path, text).unwrap();
    }

    /// Runs the program in the project's folder.
    pub(crate) fn run(&self, arguments: &[&str]) -> Ran {
        let output = Command::new(env!("CARGO_BIN_EXE_seamnote"))
            .args(arguments)
            .current_dir(self.root.path())
            .output()
            .expect("the program runs");
        Ran {
            code: output.status.code().expect("the program ends by itself"),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }

    /// Every file below the project's folder, with its bytes and the time of its last change.
    fn files(&self) -> BTreeMap<PathBuf, (Vec<u8>, SystemTime)> {
        let mut files = BTreeMap::new();
        collect(self.root.path(), self.root.path(), &mut files);
        files
    }

    /// Names of the files below a folder.
    fn names(&self, folder: &str) -> Vec<String> {
        let prefix = Path::new(folder);
        self.files()
            .keys()
            .filter_map(|path| path.strip_prefix(prefix).ok())
            .map(|path| path.to_str().unwrap().to_owned())
            .collect()
    }
}

fn collect(root: &Path, folder: &Path, files: &mut BTreeMap<PathBuf, (Vec<u8>, SystemTime)>) {
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            collect(root, &path, files);
        } else {
            let changed = std::fs::metadata(&path).unwrap().modified().unwrap();
            let bytes = std::fs::read(&path).unwrap();
            files.insert(
                path.strip_prefix(root).unwrap().to_owned(),
                (bytes, changed),
            );
        }
    }
}

/// The joint of the mast foot.
pub(crate) fn joint() -> String {
    std::fs::read_to_string(project_folder("joints/mast-foot.yaml")).unwrap()
}

/// The joint with a part of its text replaced, which must be there.
pub(crate) fn joint_with(from: &str, to: &str) -> String {
    let text = joint();
    assert!(text.contains(from), "the joint holds {from}");
    text.replace(from, to)
}

/// The joint with loads that it does not bear.
fn weak_joint() -> String {
    joint_with("-17.6 kN", "-176 kN")
}

const ALL: [&str; 8] = [
    "mast-foot/cases.csv",
    "mast-foot/demand.svg",
    "mast-foot/joint.svg",
    "mast-foot/note.md",
    "mast-foot/note.pdf",
    "mast-foot/sections.svg",
    "mast-foot/stresses.svg",
    "mast-foot/trace.json",
];

#[test]
fn write_makes_every_output_and_says_how_the_joint_stands() {
    let project = Project::with_joint();
    let ran = project.run(&["write"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    assert_eq!(project.names("out"), ALL, "outputs");
    for wanted in [
        "joints/mast-foot.yaml",
        "least margin +",
        "strength checks and 2 of 2 limits hold",
        "out/mast-foot",
    ] {
        assert!(ran.out.contains(wanted), "{wanted}: {}", ran.out);
    }
    assert_eq!(
        ran.out.lines().count(),
        1,
        "one line for one joint: {}",
        ran.out
    );
}

#[test]
fn a_second_run_writes_the_same_bytes() {
    let project = Project::with_joint();
    assert_eq!(project.run(&["write"]).code, 0, "first run");
    let first = project.files();
    assert_eq!(
        project.run(&["write", "--threads", "1"]).code,
        0,
        "second run"
    );
    let second = project.files();
    assert_eq!(first.len(), second.len(), "files");
    for (path, (bytes, _)) in &first {
        assert!(*bytes == second[path].0, "{} differs", path.display());
    }
}

#[test]
fn vet_says_how_the_joint_stands_and_writes_nothing() {
    let project = Project::with_joint();
    let before = project.files();
    let ran = project.run(&["vet"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    assert!(ran.out.contains("least margin +"), "{}", ran.out);
    assert_eq!(project.files(), before, "vet writes nothing");
    assert!(!project.path("out").exists(), "vet makes no folder");
    let written = project.run(&["write"]);
    assert!(
        written.out.starts_with(ran.out.trim_end()),
        "vet and write say the same: {} and {}",
        ran.out,
        written.out
    );
}

#[test]
fn only_makes_the_outputs_asked_for() {
    #[rustfmt::skip]
    let rows: [(&str, &[&str]); 5] = [
        ("pdf",          &["mast-foot/note.pdf"]),
        ("markdown",     &["mast-foot/demand.svg", "mast-foot/joint.svg", "mast-foot/note.md", "mast-foot/sections.svg", "mast-foot/stresses.svg"]),
        ("cases",        &["mast-foot/cases.csv"]),
        ("trace",        &["mast-foot/trace.json"]),
        ("pdf,trace",    &["mast-foot/note.pdf", "mast-foot/trace.json"]),
    ];
    let whole = Project::with_joint();
    whole.run(&["write"]);
    let whole = whole.files();
    for (only, wanted) in rows {
        let project = Project::with_joint();
        let ran = project.run(&["write", "--only", only]);
        assert_eq!(ran.code, 0, "--only {only}: {ran:?}");
        assert_eq!(project.names("out"), wanted, "--only {only}");
        for (path, (bytes, _)) in project.files() {
            let same = whole[&path].0 == bytes;
            assert!(same, "--only {only}: {} differs", path.display());
        }
    }
}

#[test]
fn out_names_the_folder_and_makes_it() {
    let project = Project::with_joint();
    let ran = project.run(&[
        "write",
        "--only",
        "cases",
        "--out",
        "issues/B",
        "joints/mast-foot.yaml",
    ]);
    assert_eq!(ran.code, 0, "{ran:?}");
    assert_eq!(
        project.names("issues/B"),
        ["mast-foot/cases.csv"],
        "outputs"
    );
    assert!(!project.path("out").exists(), "nothing goes elsewhere");
    assert!(ran.out.contains("issues/B/mast-foot"), "{}", ran.out);
}

#[test]
fn a_wrong_command_line_exits_with_2() {
    let project = Project::with_joint();
    let before = project.files();
    #[rustfmt::skip]
    let rows: [&[&str]; 7] = [
        &[],
        &["print"],
        &["write", "--only", "paper"],
        &["write", "--threads", "0"],
        &["write", "--threads", "many"],
        &["vet", "--out", "elsewhere"],
        &["write", "--no-such-option"],
    ];
    for arguments in rows {
        let ran = project.run(arguments);
        assert_eq!(ran.code, 2, "{arguments:?}: {ran:?}");
        assert!(
            !ran.err.is_empty() && ran.out.is_empty(),
            "{arguments:?}: {ran:?}"
        );
    }
    assert_eq!(project.files(), before, "nothing is written");
}

#[test]
fn help_tells_commands_and_exit_codes() {
    let ran = Project::new().run(&["--help"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    for wanted in ["write", "vet", "Exit codes", "qualified engineers"] {
        assert!(ran.out.contains(wanted), "{wanted}: {}", ran.out);
    }
    let version = Project::new().run(&["--version"]);
    assert_eq!(
        version.out,
        concat!("seamnote ", env!("CARGO_PKG_VERSION"), "\n"),
        "version"
    );
}

#[test]
fn must_hold_exits_with_3_where_a_check_does_not_hold() {
    let project = Project::new();
    project.put("joints/mast-foot.yaml", weak_joint());
    for command in ["vet", "write"] {
        let plain = project.run(&[command]);
        assert_eq!(
            plain.code, 0,
            "{command}: a margin below 0 is a result: {plain:?}"
        );
        assert!(
            plain.out.contains("least margin −"),
            "{command}: {}",
            plain.out
        );
        let held = project.run(&[command, "--must-hold"]);
        assert_eq!(held.code, 3, "{command} --must-hold: {held:?}");
        assert!(
            held.err.contains("does not hold"),
            "{command}: {}",
            held.err
        );
    }
    assert_eq!(
        project.names("out"),
        ALL,
        "the note is written all the same"
    );
    project.put("joints/mast-foot.yaml", joint());
    assert_eq!(
        project.run(&["vet", "--must-hold"]).code,
        0,
        "once it holds"
    );
}

#[test]
fn must_hold_exits_with_3_where_a_check_has_no_number() {
    let project = Project::new();
    let text = joint();
    let lines: Vec<&str> = text
        .lines()
        .filter(|line| !line.contains("name: lower edge") && !line.contains("name: upper edge"))
        .collect();
    project.put("joints/mast-foot.yaml", lines.join("\n") + "\n");
    let ran = project.run(&["write", "--must-hold"]);
    assert_eq!(ran.code, 3, "a lone line bent about itself: {ran:?}");
    let note = std::fs::read_to_string(project.path("out/mast-foot/note.md")).unwrap();
    assert!(
        note.contains("Checks without a number"),
        "the note says why"
    );
    assert!(
        note.contains("least margin of safety: none"),
        "the verdict says so"
    );
}

#[test]
fn a_refused_joint_leaves_its_earlier_note_untouched() {
    let project = Project::with_joint();
    project.put(
        "joints/second.yaml",
        joint_with("note: SN-104", "note: SN-105"),
    );
    assert_eq!(project.run(&["write"]).code, 0, "first run");
    let before = project.files();
    project.put(
        "joints/mast-foot.yaml",
        joint_with("fillet: 8", "fillet: -8"),
    );
    project.put(
        "joints/second.yaml",
        joint_with("note: SN-104", "note: SN-106"),
    );
    let ran = project.run(&["write"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(ran.err.contains("error[out-of-range]"), "{}", ran.err);
    assert!(ran.err.contains("joints/mast-foot.yaml:29:"), "{}", ran.err);
    assert!(
        ran.err.contains("an earlier note stands as it was"),
        "{}",
        ran.err
    );
    let after = project.files();
    for (path, old) in &before {
        let is_first = path.starts_with("out/mast-foot");
        if is_first {
            assert!(after[path] == *old, "{} was touched", path.display());
        }
    }
    let second = Path::new("out/second/note.md");
    assert!(
        after[second].0 != before[second].0,
        "the joint beside it is written anew"
    );
    assert!(ran.out.contains("joints/second.yaml"), "{}", ran.out);
}

#[test]
fn an_unknown_key_is_pointed_at_with_what_it_may_mean() {
    let project = Project::new();
    project.put("joints/mast-foot.yaml", joint_with("drawing:", "drawin:"));
    let ran = project.run(&["vet"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    insta::with_settings!({omit_expression => true}, {
        insta::assert_snapshot!("unknown_key", ran.err.split("refused:").next().unwrap());
    });
}

#[test]
fn text_that_is_not_utf8_is_pointed_at() {
    let project = Project::new();
    let mut bytes = joint().into_bytes();
    let at = joint()
        .find("launch mast.")
        .unwrap_or_else(|| joint().find("launch mast").unwrap());
    bytes[at] = 0xE9;
    project.put("joints/mast-foot.yaml", bytes);
    let ran = project.run(&["write"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    let line = joint()[..at].lines().count();
    assert!(ran.err.contains("error[not-utf8]"), "{}", ran.err);
    assert!(
        ran.err.contains(&format!("joints/mast-foot.yaml:{line}:")),
        "{}",
        ran.err
    );
    assert!(ran.err.contains("UTF-8"), "{}", ran.err);
    assert!(!project.path("out").exists(), "nothing is written");
}

#[test]
fn two_joints_of_one_name_are_refused_before_anything_is_written() {
    let project = Project::with_joint();
    project.put("more/mast-foot.yaml", joint());
    let ran = project.run(&["write", "joints", "more"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    for wanted in ["joints/mast-foot.yaml", "more/mast-foot.yaml", "rename"] {
        assert!(ran.err.contains(wanted), "{wanted}: {}", ran.err);
    }
    assert!(!project.path("out").exists(), "nothing is written");
}

#[test]
fn what_is_not_there_is_named() {
    let project = Project::new();
    let ran = project.run(&["write"]);
    assert_eq!(ran.code, 1, "no folder of joints: {ran:?}");
    assert!(
        ran.err.contains("joints: there is no such file or folder"),
        "{}",
        ran.err
    );
    project.put("joints/read-me.txt", "no joint");
    project.put("joints/project.yaml", "units: {force: N, length: mm}\n");
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "an empty folder of joints: {ran:?}");
    assert!(ran.err.contains("holds no joint"), "{}", ran.err);
    let ran = project.run(&["vet", "joints/gone.yaml"]);
    assert_eq!(ran.code, 1, "a file that is not there: {ran:?}");
    assert!(ran.err.contains("joints/gone.yaml"), "{}", ran.err);
}

#[test]
fn a_folder_that_cannot_be_written_is_named() {
    let project = Project::with_joint();
    // A file where the folder should be: no user may write below it, not even one with all rights.
    project.put("out", "a file");
    let ran = project.run(&["write"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    assert!(
        ran.err.contains("out/mast-foot: cannot be written"),
        "{}",
        ran.err
    );
    assert_eq!(
        std::fs::read_to_string(project.path("out")).unwrap(),
        "a file",
        "the file stands"
    );
}

#[test]
fn nothing_is_left_of_the_staging_folder() {
    let project = Project::with_joint();
    assert_eq!(project.run(&["write"]).code, 0, "first run");
    let entries: Vec<_> = std::fs::read_dir(project.path("out/mast-foot"))
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    assert_eq!(entries.len(), ALL.len(), "{entries:?}");
    assert!(
        !entries.iter().any(|name| name.starts_with('.')),
        "{entries:?}"
    );
}

/// A sheet as a company manual would give it.
const SHEET: &str = "\
name: Works rule 12
title: Resultant on the throat with a works factor
source: {document: Works manual, edition: \"7\", clause: rule 12, status: user's own}
levels: [ultimate]
at: point
convex: true
requires: {ends: any, welds: [fillet]}
covers: [throat]
needs:
  f:
    symbol: f
    kind: stress
    from: point.f
    says: resultant on the throat
  f_u:
    symbol: [f, u]
    kind: stress
    from: weaker.f_u
    says: ultimate strength of the weaker part
  eta:
    symbol: eta
    kind: ratio
    from: check.eta
    says: works factor
    role: factor on strength
    least: 1
steps:
  f_w:
    symbol: [f, w]
    formula: f_u/(sqrt(3)*eta)
    says: works strength
checks:
  - name: works
    demand: f
    capacity: f_w
    says: resultant against the works strength
cautions:
  - Works caution, printed with every note.
";

#[test]
fn a_users_own_sheet_works_from_file_to_note() {
    let project = Project::new();
    let clause = "- {clause: EN 1993-1-8 4.5.3.3, gamma_M2: 1.25}";
    project.put(
        "joints/mast-foot.yaml",
        joint_with(clause, "- {clause: Works rule 12, eta: 2.5}"),
    );
    project.put("joints/sheets/works-12.yaml", SHEET);
    let ran = project.run(&["write", "--only", "markdown,trace"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    assert!(ran.out.contains("Works rule 12"), "it governs: {}", ran.out);
    let note = std::fs::read_to_string(project.path("out/mast-foot/note.md")).unwrap();
    for wanted in [
        "Works rule 12",
        "works strength",
        "Works manual",
        "Works caution, printed with every note.",
    ] {
        assert!(note.contains(wanted), "{wanted} is missing");
    }
    let trace = std::fs::read_to_string(project.path("out/mast-foot/trace.json")).unwrap();
    let trace: serde_json::Value = serde_json::from_str(&trace).unwrap();
    let found = crate::replay::replay(&trace);
    assert!(found.faults.is_empty(), "{}", found.faults.join("\n"));
    let steps = trace["steps"].as_array().unwrap();
    let of_works =
        |step: &&serde_json::Value| step["says"].as_str().unwrap().contains("works strength");
    let strength = steps.iter().find(of_works).unwrap();
    // 470/(√3 · 2.5)
    let value = strength["value"].as_f64().unwrap();
    assert!((value - 108.541_85).abs() < 1e-5, "works strength {value}");
}

#[test]
fn a_fault_in_a_users_sheet_is_pointed_at_in_the_sheet() {
    let project = Project::with_joint();
    project.put(
        "joints/sheets/works-12.yaml",
        SHEET.replace("f_u/(sqrt(3)*eta)", "f_u/(sqrt(3)*etta)"),
    );
    let ran = project.run(&["write"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    for wanted in [
        "error[unknown-name]: `etta` is not known here",
        "joints/sheets/works-12.yaml:30:27",
        "did you mean `eta`?",
    ] {
        assert!(ran.err.contains(wanted), "{wanted}: {}", ran.err);
    }
    // The step at fault is known all the same: no second fault follows from the first.
    assert_eq!(ran.err.matches("error[").count(), 1, "{}", ran.err);
    assert!(!project.path("out").exists(), "nothing is written");
}

#[test]
fn a_sheet_of_a_name_that_is_taken_is_refused() {
    let project = Project::with_joint();
    let name = "EN 1993-1-8 4.5.3.3";
    project.put(
        "joints/sheets/own.yaml",
        SHEET.replace("Works rule 12", name),
    );
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(ran.err.contains("error[duplicate-sheet]"), "{}", ran.err);
    assert!(
        ran.err.contains("joints/sheets/own.yaml:1:7"),
        "{}",
        ran.err
    );
}

#[test]
fn sheets_are_taken_from_beside_their_joints_only() {
    let project = Project::with_joint();
    project.put("joints/sheets/works-12.yaml", SHEET);
    let clause = "- {clause: EN 1993-1-8 4.5.3.3, gamma_M2: 1.25}";
    let text = joint_with(clause, "- {clause: Works rule 12, eta: 2.5}");
    project.put("more/other.yaml", text.replace("SN-104", "SN-105"));
    let ran = project.run(&["vet", "joints", "more"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(ran.out.contains("joints/mast-foot.yaml"), "{}", ran.out);
    assert!(ran.err.contains("more/other.yaml:42:"), "{}", ran.err);
    assert!(ran.err.contains("Works rule 12"), "{}", ran.err);
}

/// The order of what is said is that of the files, whatever the threads.
#[test]
fn joints_are_told_in_the_order_of_their_files() {
    let project = Project::new();
    for name in ["d", "a", "c", "b", "e", "f"] {
        let text = joint_with("note: SN-104", &format!("note: SN-{name}"));
        let text = if name == "c" {
            text.replace("fillet: 8", "fillet: 0")
        } else {
            text
        };
        project.put(&format!("joints/{name}.yaml"), text);
    }
    for threads in ["1", "4"] {
        let ran = project.run(&["vet", "--threads", threads]);
        assert_eq!(ran.code, 1, "{ran:?}");
        let order: Vec<&str> = ran
            .out
            .lines()
            .map(|line| line.split("  ").next().unwrap())
            .collect();
        let wanted = ["a", "b", "d", "e", "f"].map(|name| format!("joints/{name}.yaml"));
        assert_eq!(order, wanted, "with {threads} threads");
        assert!(ran.err.contains("refused: joints/c.yaml\n"), "{}", ran.err);
    }
}

/// Two notes with one number cannot both be signed: all but the first are refused at their number.
#[test]
fn a_number_of_another_note_is_refused() {
    let project = Project::with_joint();
    project.put("joints/other.yaml", joint());
    project.put(
        "more/third.yaml",
        joint_with("note: SN-104", "note:  SN-104 "),
    );
    project.put(
        "more/fourth.yaml",
        joint_with("note: SN-104", "note: SN-105"),
    );
    let ran = project.run(&["vet", "joints", "more"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    let fault = |place: &str| {
        format!("error[note-taken]: `SN-104` is the number of another note\n --> {place}\n")
    };
    for place in ["joints/other.yaml:2:7", "more/third.yaml:2:8"] {
        assert!(ran.err.contains(&fault(place)), "{place}:\n{}", ran.err);
    }
    assert!(
        ran.err.contains("joints/mast-foot.yaml:2 has it too"),
        "{}",
        ran.err
    );
    assert!(
        ran.out.contains("joints/mast-foot.yaml  ") && ran.out.contains("more/fourth.yaml  "),
        "{}",
        ran.out
    );
    assert_eq!(
        project.run(&["vet", "more/third.yaml"]).code,
        0,
        "alone it is no fault"
    );
}

/// A case whose level no strength check takes is named, and does not pass the gate.
#[test]
fn a_case_that_no_check_takes_is_named_and_does_not_hold() {
    let project = Project::with_joint();
    let told = joint_with("{case: L01,", "{case: L01, level: service,");
    project.put("joints/mast-foot.yaml", told);
    let ran = project.run(&["vet", "--must-hold"]);
    assert_eq!(ran.code, 3, "{ran:?}");
    assert!(
        ran.out.contains("Case taken by no strength check: L01."),
        "{}",
        ran.out
    );
}

/// An exclusion names a failure path of the note, or is refused.
#[test]
fn an_exclusion_of_an_unknown_path_is_refused() {
    let project = Project::with_joint();
    project.put(
        "joints/mast-foot.yaml",
        joint_with("path: fatigue", "path: weld fatigue"),
    );
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(
        ran.err
            .contains("error[unknown-path]: `weld fatigue` is no failure path"),
        "{}",
        ran.err
    );
    assert!(ran.err.contains("`heat-affected zone`"), "{}", ran.err);
}

/// A bare strength in kN and mm would be GPa, which nobody means.
#[test]
fn a_bare_strength_in_kilonewtons_is_refused() {
    let project = Project::with_joint();
    let told = joint_with(
        "units: {force: N, length: mm}",
        "units: {force: kN, length: mm}",
    );
    let told = told.replace("f_u: 470 MPa", "f_u: 470");
    project.put("joints/mast-foot.yaml", told);
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(
        ran.err.contains("error[unit-missing]: `470` has no unit"),
        "{}",
        ran.err
    );
}
