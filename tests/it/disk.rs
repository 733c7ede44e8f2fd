//! Odd names and leftovers on the disk.

use crate::command::Project;
use std::fs::{File, FileTimes};
use std::time::Duration;

#[test]
fn control_characters_of_names_do_not_reach_the_terminal() {
    let project = Project::with_joint();
    let text = std::fs::read_to_string(project.path("joints/mast-foot.yaml")).unwrap();
    project.put("more\u{1b}[31m/mast-foot.yaml", &text);
    let ran = project.run(&["vet", "more\u{1b}[31m/mast-foot.yaml"]);
    assert_eq!(ran.code, 0, "{ran:?}");
    assert!(
        ran.out.contains("more\\u{1b}[31m/mast-foot.yaml"),
        "{}",
        ran.out
    );
    project.put("more\u{1b}[31m/mast-foot.yaml", "note: [");
    let ran = project.run(&["vet", "more\u{1b}[31m/mast-foot.yaml"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(ran.err.contains("--> more\\u{1b}[31m/"), "{}", ran.err);
    assert!(!ran.err.contains('\u{1b}'), "{}", ran.err);
    project.put("joints/a\u{7}b.yaml", &text);
    let ran = project.run(&["write"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    assert!(
        ran.err
            .contains("joints/a\\u{7}b.yaml: has a name that is no plain text"),
        "{}",
        ran.err
    );
}

#[cfg(unix)]
#[test]
fn a_name_that_is_no_utf8_is_refused() {
    use std::os::unix::ffi::OsStrExt;
    let project = Project::with_joint();
    let name = std::ffi::OsStr::from_bytes(b"joints/lug\xff.yaml");
    let path = project.path("").join(name);
    std::fs::copy(project.path("joints/mast-foot.yaml"), path).unwrap();
    let ran = project.run(&["write"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    assert!(
        ran.err
            .contains("joints/lug\u{fffd}.yaml: has a name that is no plain text"),
        "{}",
        ran.err
    );
    assert!(!project.path("out").exists(), "nothing is written");
}

/// A staging folder of a killed run goes, that of a run under way and what is not ours stay.
#[test]
fn old_staging_folders_are_cleared_away() {
    let project = Project::with_joint();
    let old = ["out/mast-foot/.staging-killed", "out/mast-foot/.other"];
    project.put("out/mast-foot/.staging-live/note.md", "half");
    for folder in old {
        project.put(&format!("{folder}/note.md"), "half");
        let opened = File::open(project.path(folder)).unwrap();
        let then = opened.metadata().unwrap().modified().unwrap() - Duration::from_secs(7200);
        opened
            .set_times(FileTimes::new().set_modified(then))
            .unwrap();
    }
    assert_eq!(
        project.run(&["write", "--only", "trace"]).code,
        0,
        "it writes"
    );
    let stands = |name: &str| project.path(name).exists();
    assert!(
        !stands("out/mast-foot/.staging-killed"),
        "the old one is gone"
    );
    assert!(stands("out/mast-foot/.staging-live"), "the young one stays");
    assert!(stands("out/mast-foot/.other"), "what is not ours stays");
}

/// What cannot be said is no success; a reader that closes its end has seen enough.
#[cfg(target_os = "linux")]
#[test]
fn a_full_standard_output_is_told() {
    use std::process::{Command, Stdio};
    let program = env!("CARGO_BIN_EXE_seamnote");
    let full = File::options().write(true).open("/dev/full").unwrap();
    let ran = Command::new(program)
        .args(["schema", "joint"])
        .stdout(full)
        .output()
        .unwrap();
    let err = String::from_utf8_lossy(&ran.stderr).into_owned();
    assert_eq!(ran.status.code(), Some(1), "{err}");
    assert!(err.starts_with("error: standard output: "), "{err}");
    let mut closed = Command::new(program)
        .args(["schema", "joint"])
        .stdout(Stdio::piped())
        .spawn()
        .unwrap();
    drop(closed.stdout.take());
    assert_eq!(closed.wait().unwrap().code(), Some(0), "a closed pipe");
}

/// What stands in the way of an output is found before the earlier note is touched.
#[test]
fn an_output_in_the_way_leaves_the_earlier_note() {
    let project = Project::with_joint();
    assert_eq!(project.run(&["write"]).code, 0, "first run");
    let folder = project.path("out/mast-foot");
    std::fs::remove_file(folder.join("note.pdf")).unwrap();
    std::fs::create_dir(folder.join("note.pdf")).unwrap();
    let before = std::fs::read(folder.join("note.md")).unwrap();
    let text = std::fs::read_to_string(project.path("joints/mast-foot.yaml")).unwrap();
    project.put(
        "joints/mast-foot.yaml",
        text.replace("-17.6 kN", "-18.6 kN"),
    );
    let ran = project.run(&["write"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(
        ran.err.contains("note.pdf: cannot be written"),
        "{}",
        ran.err
    );
    assert_eq!(
        std::fs::read(folder.join("note.md")).unwrap(),
        before,
        "the text stands"
    );
    assert!(folder.join("trace.json").is_file(), "so does the trace");
}
