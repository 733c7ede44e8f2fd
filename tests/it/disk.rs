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
