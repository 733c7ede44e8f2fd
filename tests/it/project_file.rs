//! `project.yaml`: what joints inherit, what stays their own, and where its faults are told.

use crate::command::{Project, Ran, joint, joint_with};
use crate::tidy::file;

/// What the mast foot shares with other joints, taken out of its file.
const SHARED: &str = "\
units: {force: N, length: mm}
note prefix: SN-
drawing: LM-2207 sheet 3
item: launch mast
materials:
  S355J2: {f_y: 355 MPa, f_u: 470, source: \"EN 10025-2:2019, table 7\"}
parts:
  deck: {material: S355J2, thickness: 12}
  never used: {material: S235JR}
fillers:
  G 46 4 M21 3Si1: {f_u: 530 MPa, source: WPS-31 rev 2}
checks:
  - {clause: EN 1993-1-8 4.5.3.2, gamma_M2: 1.25}
  - {clause: EN 1993-1-8 4.5.3.3, gamma_M2: 1.25}
  - {clause: EN 1993-1-8 4.5.1-4.5.2}
assumptions:
  - The guy forces are design values at the ultimate limit state and include their factors.
";

/// The mast foot's own entries, beside [`SHARED`].
fn own() -> String {
    let mut text = joint();
    for (from, to) in [
        ("units: {force: N, length: mm}\n", ""),
        ("note: SN-104", "note: 104"),
        ("drawing: LM-2207 sheet 3\n", ""),
        ("item: launch mast\n", ""),
        (
            ", f_y: 355 MPa, f_u: 470 MPa, source: \"EN 10025-2:2019, table 7\"",
            "",
        ),
        ("  deck: {material: S355J2, thickness: 12}\n", ""),
        (
            "filler: {name: G 46 4 M21 3Si1, f_u: 530 MPa, source: WPS-31 rev 2}",
            "filler: G 46 4 M21 3Si1",
        ),
        (
            "  - The guy forces are design values at the ultimate limit state and include their factors.\n",
            "",
        ),
    ] {
        assert!(text.contains(from), "the joint holds {from}");
        text = text.replace(from, to);
    }
    let (before, rest) = text.split_once("checks:\n").expect("it has checks");
    let (_, after) = rest.split_once("\n\n").expect("an empty line follows");
    format!("{before}{after}")
}

/// A project of one joint beside a project file.
fn project(shared: &str, own: &str) -> Project {
    let project = Project::new();
    project.put("joints/project.yaml", shared);
    project.put("joints/mast-foot.yaml", own);
    project
}

fn vet(shared: &str, own: &str) -> Ran {
    project(shared, own).run(&["vet"])
}

/// The trace of the one joint.
fn trace(project: &Project) -> serde_json::Value {
    let ran = project.run(&["write", "--only", "trace,cases,markdown"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    let text = std::fs::read_to_string(project.path("out/mast-foot/trace.json")).unwrap();
    serde_json::from_str(&text).unwrap()
}

fn note(project: &Project) -> String {
    std::fs::read_to_string(project.path("out/mast-foot/note.md")).unwrap()
}

#[test]
fn a_joint_that_inherits_gives_the_results_of_one_that_says_all() {
    let (whole, parted) = (Project::with_joint(), project(SHARED, &own()));
    let (one, other) = (trace(&whole), trace(&parted));
    assert_eq!(one["governing"], other["governing"], "what governs");
    assert_eq!(one["cases"], other["cases"], "every case");
    assert_eq!(one["note"], other["note"], "the number with its prefix");
    let note = note(&parted);
    for wanted in ["SN-104", "LM-2207 sheet 3", "launch mast", "WPS-31 rev 2"] {
        assert!(note.contains(wanted), "{wanted} is printed");
    }
    let inputs = "All inputs stand in *mast-foot.yaml* and *project.yaml*, attached";
    assert!(note.contains(inputs), "both files are named");
    assert!(
        !note.contains("never used"),
        "a part that is not joined stays out"
    );
}

#[test]
fn the_project_file_of_the_readme_serves_the_mast_foot() {
    let text = file("README.md").text;
    let (_, block) = text
        .split_once("```yaml\n# joints/project.yaml\n")
        .expect("README.md shows a project file");
    let (block, _) = block.split_once("```").expect("the block ends");
    let drawing = own().replace("title:", "drawing: LM-2207 sheet 3\ntitle:");
    let project = project(block, &drawing);
    let inherited = trace(&project);
    let whole = Project::with_joint();
    let told = trace(&whole);
    assert_eq!(inherited["note"], told["note"], "the number");
    assert_eq!(
        inherited["governing"]["check"], "EN 1993-1-8 4.5.3.2, equivalent stress",
        "its one check governs"
    );
}

#[test]
fn steps_point_to_the_project_file_for_what_stands_there() {
    let parted = project(SHARED, &own());
    let steps = trace(&parted)["steps"].to_string();
    let line = 1 + SHARED
        .lines()
        .position(|line| line.contains("f_u: 470"))
        .unwrap();
    let place = format!("project.yaml:{line}");
    assert!(steps.contains(&place), "{place} is the source of a step");
    assert!(steps.contains("mast-foot.yaml:"), "the joint's own too");
}

#[test]
fn the_identity_covers_inherited_values() {
    let before = trace(&project(SHARED, &own()));
    let after = trace(&project(&SHARED.replace("f_u: 470", "f_u: 471"), &own()));
    assert_ne!(before["identity"], after["identity"], "a changed strength");
    let unused = SHARED.replace("S235JR}", "S235JR, f_u: 360}");
    let same = trace(&project(&unused, &own()));
    assert_eq!(before["identity"], same["identity"], "a part not joined");
}

/// Nothing that a joint says can change under a signature: each edit gives another digest, of the
/// calculation or of the words.
#[test]
fn every_entry_is_under_a_digest_of_the_identity() {
    #[rustfmt::skip]
    let rows = [
        // from                                 to                                  digest
        ("source: WPS-31 rev 2",                "source: WPS-31 rev 3",             "calculation"),
        (", source: WPS-31 rev 2",              "",                                 "calculation"),
        ("EN 10025-2:2019, table 7\"}\n  deck",  "mill sheet 5\"}\n  deck",           "calculation"),
        (", to be verified: true",              "",                                 "calculation"),
        ("{name: lower edge",                   "{name: lower side",                "calculation"),
        ("x: forward",                          "x: aft",                           "calculation"),
        ("LM-2207 sheet 3",                     "LM-2207 sheet 4",                  "calculation"),
        ("note SN-020\"",                       "note SN-021\"",                    "calculation"),
        ("ends: less throat",                   "ends: less leg",                   "calculation"),
        ("L02, says: gust from ahead",          "L02, says: gust from astern",      "words"),
        ("Mast foot bracket to",                "Mast foot bracket on",             "words"),
        ("item: launch mast",                   "item: other mast",                 "words"),
        ("Shows that the weld",                 "Shows how the weld",               "words"),
        ("lower aft corner",                    "upper aft corner",                 "words"),
        ("within 100 mm",                       "within 150 mm",                    "words"),
        ("says: first issue",                   "says: issued",                     "words"),
    ];
    let identity = |text: &str| {
        let project = Project::new();
        project.put("joints/mast-foot.yaml", text);
        trace(&project)["identity"].clone()
    };
    let before = identity(&joint());
    for (from, to, digest) in rows {
        let after = identity(&joint_with(from, to));
        assert_ne!(before[digest], after[digest], "{from} to {to}");
        if digest == "words" {
            let key = "calculation";
            assert_eq!(before[key], after[key], "{from} to {to}: editorial");
        }
    }
}

#[test]
fn what_a_joint_says_itself_wins() {
    let shared = "\
units: {force: kip, length: in}
paper: US Letter
item: another mast
signatures: [designer]
parts:
  deck: {material: none, thickness: 1 mm}
materials:
  S355J2: {f_u: 1 MPa}
fillers: {G 46 4 M21 3Si1: {f_u: 1 MPa}}
checks: [{clause: EN 1993-1-8 4.7.1}]
note prefix: XX-
";
    let (whole, parted) = (Project::with_joint(), project(shared, &joint()));
    let (one, other) = (trace(&whole), trace(&parted));
    assert_eq!(one["identity"], other["identity"], "nothing is inherited");
    assert_eq!(one["note"], other["note"], "a whole number takes no prefix");
    let note = note(&parted);
    assert!(note.contains("designer"), "the role is inherited");
    let inputs = "All inputs stand in *mast-foot.yaml*, attached";
    assert!(note.contains(inputs), "only its own file is named");
}

#[test]
fn a_project_file_is_checked_whole_whether_used_or_not() {
    let ran = vet(
        "papr: A4\nunits: {force: N, length: mm}\nfillers:\n  spare: {f_u: -1, thickness: 2}\nmaterials: {odd: {f_y: 3 kN}}\nsignatures: []\n",
        &joint(),
    );
    assert_eq!(ran.code, 1, "{ran:?}");
    for wanted in [
        "error[unknown-key]: `papr` is no key of a project file\n --> joints/project.yaml:1:1",
        "did you mean `paper`?",
        "error[out-of-range]",
        "joints/project.yaml:4:16",
        "error[not-taken]: a filler takes no `thickness`",
        "error[wrong-kind]",
    ] {
        assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
    }
}

#[test]
fn names_that_stand_for_nothing_are_told_with_those_that_do() {
    let ran = vet(SHARED, &own().replace("filler: G 46", "filler: G 47"));
    assert_eq!(ran.code, 1, "{ran:?}");
    for wanted in [
        "error[unknown-filler]: `G 47 4 M21 3Si1` is no filler of the project file",
        "joints/mast-foot.yaml:",
        "it names: `G 46 4 M21 3Si1`",
    ] {
        assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
    }
    assert_eq!(ran.err.matches("error[").count(), 1, "{}", ran.err);
    let ran = vet(SHARED, &own().replace("[bracket, deck]", "[bracket, dck]"));
    for wanted in [
        "error[unknown-part]",
        "the project file names: `deck`, `never used`",
    ] {
        assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
    }
}

#[test]
fn a_number_without_a_unit_is_not_taken_into_other_units() {
    let own = own().replace("\nframe:", "\nunits: {force: kN, length: mm}\nframe:");
    let ran = vet(SHARED, &own);
    assert_eq!(ran.code, 1, "{ran:?}");
    for wanted in [
        "error[unit-missing]: `12` has no unit, and the joint has other `units` than the project file",
        "`470` has no unit",
        "`1.25` has no unit",
        "joints/project.yaml:",
    ] {
        assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
    }
    assert!(
        !ran.err.contains("`355 MPa` has"),
        "a unit is enough:\n{}",
        ran.err
    );
    let none = SHARED.replace("units: {force: N, length: mm}\n", "");
    let ran = vet(&none, &own);
    let wanted = "and the project file has no `units`";
    assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
}

#[test]
fn a_part_takes_all_of_its_material_or_nothing() {
    let own = own().replace(
        "bracket: {material: S355J2, thickness: 10}",
        "bracket: {material: S355J2, thickness: 10, f_y: 345, source: mill sheet}",
    );
    let ran = vet(SHARED, &own);
    let wanted = "error[missing-value]";
    assert!(ran.err.contains(wanted), "{wanted}:\n{}", ran.err);
    assert!(
        ran.err.contains("f_u"),
        "the ultimate strength:\n{}",
        ran.err
    );
}

#[test]
fn the_project_file_is_no_joint() {
    let ran = project(SHARED, &own()).run(&["vet", "joints/project.yaml"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(ran.err.contains("no joint"), "{}", ran.err);
}

#[test]
fn a_character_that_no_face_prints_is_told_at_its_place() {
    let own = joint_with("gust abeam", "gust 横 \u{1f32c}");
    let line = 1 + own.lines().position(|line| line.contains('横')).unwrap();
    let text = own.lines().nth(line - 1).unwrap();
    let column = 1 + text.chars().position(|c| c == '横').unwrap();
    let project = project("item: 桅\n", &own);
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(
        ran.err.contains("joints/project.yaml:1:7"),
        "project file first:\n{}",
        ran.err
    );
    project.put("joints/project.yaml", "item: mast\n");
    for command in ["vet", "write"] {
        let ran = project.run(&[command]);
        assert_eq!(ran.code, 1, "{ran:?}");
        for wanted in [
            "error[unprintable]: no face of the note prints U+6A2A, U+1F32C".to_owned(),
            format!("joints/mast-foot.yaml:{line}:{column}\n"),
        ] {
            assert!(ran.err.contains(&wanted), "{wanted}:\n{}", ran.err);
        }
        assert_eq!(ran.err.matches("error[").count(), 1, "{}", ran.err);
    }
}

/// The line of a table that `show` prints for a value.
#[track_caller]
fn shown(out: &str, name: &str) -> Vec<String> {
    let cells = |line: &str| -> Vec<String> {
        let cells = line.split("  ").filter(|cell| !cell.trim().is_empty());
        cells.map(|cell| cell.trim().to_owned()).collect()
    };
    let row = out.lines().map(cells).find(|row| row[1] == name);
    row.unwrap_or_else(|| panic!("{name} is not shown:\n{out}"))
}

#[test]
fn show_tells_where_each_value_comes_from() {
    let shared = SHARED.replace(
        ", gamma_M2: 1.25}\n  - {clause: EN 1993-1-8 4.5.3.3",
        "}\n  - {clause: EN 1993-1-8 4.5.3.3",
    );
    let own = own();
    let project = project(&shared, &own);
    let ran = project.run(&["show", "joints/mast-foot.yaml"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{ran:?}");
    let at = |file: &str, text: &str, word: &str| {
        let line = text.lines().position(|line| line.contains(word));
        format!("joints/{file}:{}", line.expect("the word is there") + 1)
    };
    let rows = [
        ("note", at("mast-foot.yaml", &own, "note: 104"), "SN-104"),
        ("units / force", at("project.yaml", &shared, "units"), "N"),
        (
            "parts / bracket / thickness",
            at("mast-foot.yaml", &own, "bracket: {"),
            "10",
        ),
        (
            "parts / bracket / f_u",
            at("project.yaml", &shared, "f_u: 470"),
            "470",
        ),
        (
            "parts / deck / thickness",
            at("project.yaml", &shared, "thickness: 12"),
            "12",
        ),
        (
            "filler / f_u",
            at("project.yaml", &shared, "f_u: 530"),
            "530 MPa",
        ),
        (
            "weld / runs / lower edge / straight",
            at("mast-foot.yaml", &own, "lower edge,"),
            "[[0, 0], [80, 0]]",
        ),
        (
            "assumptions / 1",
            at("project.yaml", &shared, "guy forces"),
            "The guy forces are design values at the ultimate limit state and include their factors.",
        ),
        ("paper", "by default".to_owned(), "A4"),
        (
            "signatures",
            "by default".to_owned(),
            "[prepared, checked, approved]",
        ),
        (
            "weld / runs / lower edge / between",
            "by default".to_owned(),
            "90 deg",
        ),
        (
            "loads / cases / L01 / moment",
            "by default".to_owned(),
            "[0, 0, 0]",
        ),
        (
            "checks / EN 1993-1-8 4.5.3.3 / gamma_M2",
            at("project.yaml", &shared, "4.5.3.3"),
            "1.25",
        ),
    ];
    for (name, place, value) in rows {
        assert_eq!(
            shown(&ran.out, name),
            [place.as_str(), name, value],
            "{name}"
        );
    }
    let default = shown(&ran.out, "checks / EN 1993-1-8 4.5.3.2 / gamma_M2");
    assert_eq!(default[0], "by default of the sheet", "{default:?}");
    assert!(default[2].starts_with("1.25 ("), "{default:?}");
    assert!(
        !ran.out.contains("never used"),
        "what the joint does not take:\n{}",
        ran.out
    );
    assert!(!project.path("out").exists(), "nothing is written");
}

#[test]
fn show_tells_the_faults_of_a_joint_that_cannot_be_read() {
    let ran = project(SHARED, &own().replace("fillet: 8", "filet: 8")).run(&["show", "joints"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{ran:?}");
    assert!(ran.err.contains("did you mean `fillet`?"), "{}", ran.err);
    let ran = Project::new().run(&["show"]);
    assert_eq!(ran.code, 2, "a path must be given: {ran:?}");
}

#[test]
fn no_damage_to_either_file_ends_the_program() {
    let read = |name: &str, text: String| {
        std::sync::Arc::new(seamnote::source::SourceFile {
            name: name.to_owned(),
            text,
        })
    };
    let (own, mut refused) = (own(), 0);
    let whole = seamnote::joint::read_project(&read("project.yaml", SHARED.to_owned())).unwrap();
    for at in (0..own.len()).filter(|at| own.is_char_boundary(*at)) {
        let Ok(root) = seamnote::source::parse_yaml(&read("joint.yaml", own[..at].to_owned()))
        else {
            continue;
        };
        let (root, faults) = whole.complete(&root);
        refused +=
            usize::from(seamnote::joint::read_joint_node(&root).is_err() || !faults.is_empty());
    }
    assert!(refused > 100, "only {refused} damaged joints were refused");
    let joint = seamnote::source::parse_yaml(&read("joint.yaml", own)).unwrap();
    for at in (0..SHARED.len()).filter(|at| SHARED.is_char_boundary(*at)) {
        for cut in [SHARED[..at].to_owned(), SHARED[at..].to_owned()] {
            if let Ok(shared) = seamnote::joint::read_project(&read("project.yaml", cut)) {
                let (root, faults) = shared.complete(&joint);
                let told = seamnote::joint::read_joint_node(&root);
                let places = told.err().map_or(0, |found| found.0.len()) + faults.len();
                assert!(places < 200, "{places} faults after a cut at {at}");
            }
        }
    }
}
