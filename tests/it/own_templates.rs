//! Templates of a project: they replace the built-in ones, their faults are told in them, and
//! nothing outside the folder of the joints is read.

use crate::command::{Project, Ran, joint_with};
use crate::tidy::file;
use seamnote::project::{Kinds, ProjectError, Workshop, find_joints, read_surroundings};
use std::time::Duration;

/// A project with a built-in template copied and changed.
fn with_template(name: &str, change: impl FnOnce(String) -> String) -> Project {
    let project = Project::with_joint();
    let text = change(file(&format!("templates/{name}")).text);
    project.put(&format!("joints/templates/{name}"), text);
    project
}

fn write(project: &Project, only: &str) -> Ran {
    project.run(&["write", "--only", only])
}

/// Asserts that a run was refused with each of these texts, and wrote nothing.
#[track_caller]
fn refused(project: &Project, ran: &Ran, wanted: &[&str]) {
    assert_eq!(ran.code, 1, "{ran:?}");
    for text in wanted {
        assert!(ran.err.contains(text), "{text}:\n{}", ran.err);
    }
    assert!(
        !project.path("out/mast-foot").exists(),
        "nothing is written"
    );
}

#[test]
fn a_template_of_the_project_sets_the_note() {
    let project = with_template("note.md", |text| {
        format!("{text}\nWorks copy of << head.number >>\n")
    });
    let page = file("templates/page.typ").text;
    project.put(
        "joints/templates/page.typ",
        format!("#let works = 1\n{page}"),
    );
    let ran = write(&project, "pdf,markdown");
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    let note = std::fs::read_to_string(project.path("out/mast-foot/note.md")).unwrap();
    let built_in = file("out/mast-foot/note.md").text;
    let (before, added) = note
        .split_once("\nWorks copy of ")
        .expect("the line added is printed");
    assert_eq!(added, "SN-104\n", "a value in the line added");
    assert_eq!(
        before.trim_end(),
        built_in.trim_end(),
        "the rest as built in"
    );
    let pdf = std::fs::read(project.path("out/mast-foot/note.pdf")).unwrap();
    let attached = b"template-page.typ";
    assert!(
        pdf.windows(attached.len()).any(|window| window == attached),
        "the template is attached"
    );
}

/// The override that README.md shows, as it shows it.
#[test]
fn the_override_of_the_readme_names_the_works() {
    let readme = file("README.md").text;
    let (_, example) = readme.split_once("An override: with ").unwrap();
    let from = example
        .split("```typst\n")
        .nth(1)
        .unwrap()
        .split("\n```")
        .next()
        .unwrap();
    let to = example
        .split("reads `")
        .nth(1)
        .unwrap()
        .split('`')
        .next()
        .unwrap();
    let project = with_template("page.typ", |text| {
        assert!(text.contains(from), "page.typ holds {from}");
        text.replace(from, to)
    });
    let joints = find_joints(&[project.path("joints")]).unwrap();
    let surroundings = read_surroundings(&project.path("joints")).unwrap();
    let produced = Workshop::new()
        .produce(&joints[0], &surroundings, Kinds::ALL)
        .unwrap_or_else(|fault| panic!("{fault}"));
    assert!(to.contains("Example Works"), "{to}");
    assert!(
        produced
            .outputs
            .iter()
            .any(|output| output.name == "note.pdf"),
        "it is set"
    );
}

#[test]
fn a_value_that_is_not_there_is_told_at_its_line() {
    let project = with_template("note.md", |text| format!("{text}\n  << head.colour >>\n"));
    let line = file("templates/note.md").text.lines().count() + 2;
    let place = format!("joints/templates/note.md:{line}:3\n");
    let wanted = [
        "error[template]: undefined value",
        &place,
        "|   << head.colour >>\n",
        "met while setting joints/mast-foot.yaml",
    ];
    refused(&project, &write(&project, "markdown"), &wanted);
}

#[test]
fn a_template_that_does_not_parse_is_told_at_its_line() {
    let project = with_template("note.typ", |text| format!("<% if %>\n{text}"));
    let wanted = [
        "error[template]: syntax error",
        "joints/templates/note.typ:1:1\n",
    ];
    refused(&project, &write(&project, "pdf"), &wanted);
}

#[test]
fn what_the_typesetter_refuses_is_told_in_the_template() {
    let project = with_template("page.typ", |text| format!("#no-such-word\n{text}"));
    let wanted = [
        "error[typesetting]: unknown variable: no-such-word",
        "joints/templates/page.typ:1:1\n",
        "1 | #no-such-word\n",
    ];
    refused(&project, &write(&project, "pdf"), &wanted);
    let last = file("templates/page.typ").text.lines().count() + 1;
    let project = with_template("page.typ", |text| format!("{text}#while true {{}}\n"));
    let place = format!("joints/templates/page.typ:{last}:1\n");
    let wanted = ["error[typesetting]: condition is always true", &place];
    refused(&project, &write(&project, "pdf"), &wanted);
    let project = with_template("note.typ", |text| {
        format!("{text}\n#read(\"../mast-foot.yaml\")\n")
    });
    let wanted = ["error[typesetting]", "joints/templates/note.typ:"];
    refused(&project, &write(&project, "pdf"), &wanted);
}

#[test]
fn loops_of_a_templates_statements_end() {
    let inner = "<% for a in range(9999) %><% for b in range(9999) %><% endfor %><% endfor %>\n";
    let project = with_template("note.md", |text| format!("{inner}{text}"));
    let wanted = [
        "error[template]: ",
        "fuel",
        "joints/templates/note.md:1:1\n",
    ];
    refused(&project, &write(&project, "markdown"), &wanted);
}

#[test]
fn a_file_that_is_no_template_is_not_passed_over() {
    let project = Project::with_joint();
    project.put("joints/templates/note.typst", "x");
    let ran = project.run(&["write"]);
    let wanted = [
        "joints/templates/note.typst: is no template",
        "note.typ, page.typ",
    ];
    refused(&project, &ran, &wanted);
}

#[cfg(unix)]
#[test]
fn links_out_of_the_folder_are_refused() {
    use std::os::unix::fs::symlink;
    let sheet = file("joints/sheets/works-rule-7.yaml").text;
    let cases = [
        (
            "joints/sheets/rule.yaml",
            "elsewhere/rule.yaml",
            sheet.as_str(),
        ),
        (
            "joints/project.yaml",
            "elsewhere/project.yaml",
            "paper: A4\n",
        ),
        ("joints/templates/note.md", "elsewhere/note.md", "x"),
    ];
    for (link, target, text) in cases {
        let project = Project::with_joint();
        project.put(target, text);
        let folder = project.path(link);
        std::fs::create_dir_all(folder.parent().unwrap()).unwrap();
        symlink(project.path(target), project.path(link)).unwrap();
        let ran = project.run(&["write", "--only", "cases"]);
        let wanted = format!("{link}: is a symbolic link out of joints");
        refused(&project, &ran, &[&wanted]);
        std::fs::remove_file(project.path(target)).unwrap();
        let ran = project.run(&["vet"]);
        refused(&project, &ran, &[link, "No such file"]);
    }
    // A joint that is such a link is refused by itself.
    let project = Project::with_joint();
    project.put("elsewhere/other.yaml", joint_with("SN-104", "SN-105"));
    symlink(
        project.path("elsewhere/other.yaml"),
        project.path("joints/other.yaml"),
    )
    .unwrap();
    symlink(
        project.path("elsewhere/none.yaml"),
        project.path("joints/third.yaml"),
    )
    .unwrap();
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    for text in [
        "other.yaml: is a symbolic link out of joints",
        "third.yaml: No such file",
    ] {
        assert!(ran.err.contains(text), "{text}:\n{}", ran.err);
    }
    assert!(
        ran.out.starts_with("joints/mast-foot.yaml  least margin"),
        "{}",
        ran.out
    );
    let project = Project::with_joint();
    project.put("joints/sheets/real/rule.txt", sheet);
    // An editor's lock is a link to nowhere.
    symlink("user@host:1", project.path("joints/.#mast-foot.yaml")).unwrap();
    symlink(
        project.path("joints/sheets/real/rule.txt"),
        project.path("joints/sheets/rule.yaml"),
    )
    .unwrap();
    let ran = project.run(&["vet"]);
    assert_eq!(
        (ran.code, ran.err.as_str()),
        (0, ""),
        "a link within: {ran:?}"
    );
}

/// A project with templates of its own is vetted by setting its notes.
#[test]
fn vet_finds_the_faults_of_templates() {
    for (name, from, to) in [
        ("note.md", "<< head.title|trim >>", "<< head.colour >>"),
        ("page.typ", "#let small = 7pt", "#let small = 7pints"),
    ] {
        let project = with_template(name, |text| {
            assert!(text.contains(from), "{name} holds {from}");
            text.replace(from, to)
        });
        let ran = project.run(&["vet"]);
        let place = format!(" --> joints/templates/{name}:");
        let wanted = [place.as_str(), "refused: joints/mast-foot.yaml\n"];
        refused(&project, &ran, &wanted);
    }
    let project = with_template("note.md", |text| text);
    let ran = project.run(&["vet"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    assert!(!project.path("out").exists(), "vet writes nothing");
}

/// A loop that does not end within the time allowed is given up and told.
#[test]
fn a_template_that_takes_too_long_is_given_up() {
    let project = with_template("page.typ", |text| {
        format!(
            "{text}\n#{{ for a in range(3000) {{ for b in range(1000) {{ let c = a * b }} }} }}\n"
        )
    });
    let folder = project.path("joints");
    let joints = find_joints(std::slice::from_ref(&folder)).unwrap();
    let surroundings = read_surroundings(&folder).unwrap();
    let workshop = Workshop::new().with_patience(Duration::from_millis(1));
    let fault = workshop
        .produce(&joints[0], &surroundings, Kinds::ALL)
        .expect_err("a millisecond is too short");
    let ProjectError::Faults(faults) = fault else {
        panic!("{fault}")
    };
    let told = faults.render(false);
    for text in [
        "error[typesetting]: the note is not set after 0.001 s\n",
        "joints/templates/page.typ:1:1\n",
        "look for a loop without end",
    ] {
        assert!(told.contains(text), "{text}:\n{told}");
    }
}
