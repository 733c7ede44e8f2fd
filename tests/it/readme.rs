//! Holds README.md to the truth: its joint, its sheet, its excerpt, its lists of keys and commands.

use crate::tidy::{file, files};
use seamnote::criteria::{Library, built_in, read_sheet};
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, write_note};
use seamnote::render::{Press, render_markdown};
use seamnote::source::SourceFile;
use std::collections::BTreeSet;
use std::sync::Arc;

/// The block of README.md that is fenced as `language` and whose text starts with `head`.
fn block(language: &str, head: &str) -> String {
    let text = file("README.md").text;
    let fence = format!("```{language}\n{head}");
    let (_, rest) = text
        .split_once(&fence)
        .unwrap_or_else(|| panic!("README.md has no block of {language} that starts with {head}"));
    let (body, _) = rest.split_once("\n```").expect("the block closes");
    format!("{head}{body}\n")
}

fn source(name: &str, text: String) -> Arc<SourceFile> {
    Arc::new(SourceFile {
        name: name.to_owned(),
        text,
    })
}

const JOINT: &str = "joints/tie-down-lug.yaml";

fn joint_text() -> String {
    block("yaml", &format!("# {JOINT}"))
}

/// What the program says of a joint, and its Markdown note.
fn worked(text: String, library: &Library) -> (String, String) {
    let joint = read_joint(&source(JOINT, text))
        .unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let calculation = Calculation::of(&joint, library)
        .unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let said = format!(
        "{JOINT}  {} → out/tie-down-lug\n",
        calculation.standing().line()
    );
    let note = write_note(&calculation).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    (said, render_markdown(&note.doc).unwrap())
}

/// A line without anchors and without the targets of links.
fn plain(line: &str) -> String {
    let mut out = String::new();
    let mut rest = line;
    while let Some(at) = rest.find("<a id=") {
        out.push_str(&rest[..at]);
        rest = rest[at..].split_once("</a>").map_or("", |(_, after)| after);
    }
    out.push_str(rest);
    while let Some((before, after)) = out.split_once("](#") {
        let opening = before.rfind('[').expect("a link opens");
        let (_, after) = after.split_once(')').expect("a link closes");
        out = format!("{}{}{after}", &before[..opening], &before[opening + 1..]);
    }
    out
}

/// The verdict of a note and three of its steps, as README.md shows them.
fn excerpt(markdown: &str) -> String {
    let lines: Vec<String> = markdown.lines().map(plain).collect();
    let mut out: Vec<&str> = lines
        .iter()
        .skip_while(|line| !line.starts_with('>'))
        .take_while(|line| line.starts_with('>'))
        .map(String::as_str)
        .collect();
    for step in [
        "Equivalent stress on the throat",
        "Design strength for the equivalent stress",
        "Margin of safety",
    ] {
        let words = format!("** {step}");
        let is_step = |line: &String| line.starts_with("**") && line.contains(&words);
        let from = lines
            .iter()
            .position(is_step)
            .expect("the note has the step");
        let fences = lines[from..].iter().enumerate();
        let mut fences = fences.filter(|(_, line)| *line == "$$");
        let (last, _) = fences.nth(1).expect("its equation closes");
        out.push("");
        out.extend(lines[from..=from + last].iter().map(String::as_str));
    }
    out.join("\n")
}

#[test]
fn its_joint_gives_its_margin_and_its_excerpt() {
    let (said, markdown) = worked(joint_text(), built_in());
    assert_eq!(
        said,
        block("text", "joints/tie-down-lug.yaml  least margin +1.31"),
        "what it says"
    );
    let readme = file("README.md").text;
    let (_, rest) = readme
        .split_once("<!-- excerpt of note.md -->\n")
        .expect("an excerpt starts");
    let (shown, _) = rest
        .split_once("<!-- end of excerpt -->")
        .expect("an excerpt ends");
    let wanted = excerpt(&markdown);
    assert!(
        shown.trim() == wanted,
        "README.md shows another excerpt; it is to be\n\n{wanted}\n"
    );
}

#[test]
fn its_change_of_load_gives_its_margin() {
    let text = joint_text();
    assert_eq!(text.matches("55 kN").count(), 1, "the load that changes");
    let (said, _) = worked(text.replace("55 kN", "66 kN"), built_in());
    assert_eq!(
        said,
        block("text", "joints/tie-down-lug.yaml  least margin +1.20"),
        "what it says"
    );
}

#[test]
fn its_fault_is_told_as_it_shows() {
    let text = joint_text().replace("fillet: 8", "filet: 8");
    let faults = read_joint(&source(JOINT, text)).expect_err("the key is wrong");
    let shown = block("text", "error[unknown-key]");
    let told = faults.render(false);
    assert!(
        told.contains(shown.trim_end()),
        "README.md shows\n{shown}\nbut it is\n{told}"
    );
}

#[test]
fn its_sheet_is_read_and_gives_its_margin() {
    let sheet = source(
        "joints/sheets/manual-7.4.yaml",
        block("yaml", "# joints/sheets/manual-7.4.yaml"),
    );
    let mut library = built_in().clone();
    library
        .add(read_sheet(&sheet).unwrap_or_else(|faults| panic!("{}", faults.render(false))))
        .unwrap();
    let text = joint_text() + &block("yaml", "  - {clause: LM-M7 7.4");
    let (said, markdown) = worked(text, &library);
    assert!(
        said.contains("least margin +1.30  LM-M7 7.4, case L2  5 of 5 strength checks"),
        "{said}"
    );
    assert!(
        file("README.md").text.contains("the margin +1.30"),
        "the margin of its sheet"
    );
    assert!(
        markdown.contains("Found in tests on legs up to 12 mm."),
        "the sheet's caution"
    );
}

#[test]
fn it_lists_each_key_of_joint_files_and_sheets() {
    let text = file("README.md").text;
    let readers = files("src/joint/read", &[".rs"])
        .into_iter()
        .chain(files("src/criteria/read", &[".rs"]));
    let takers = [
        ".take(",
        ".required(",
        ".optional(",
        ".optional_list(",
        ".has(",
    ];
    let mut keys = BTreeSet::new();
    for file in readers {
        for taker in takers {
            for (at, _) in file.text.match_indices(taker) {
                let rest = file.text[at + taker.len()..].trim_start();
                if let Some((key, _)) = rest.strip_prefix('"').and_then(|rest| rest.split_once('"'))
                {
                    keys.insert(key.to_owned());
                }
            }
        }
    }
    assert!(keys.len() > 70, "only {} keys found", keys.len());
    let told = |key: &str| {
        let quoted = text.split('`').skip(1).step_by(2);
        let word = |c: char| !matches!(c, '{' | '}' | ',' | ':' | '[' | ']');
        let within = |text: &str| {
            let parts = text.split(|c: char| !word(c));
            parts.map(str::trim).any(|part| part == key)
        };
        quoted.into_iter().any(within)
    };
    let missing: Vec<&String> = keys.iter().filter(|key| !told(key)).collect();
    assert!(
        missing.is_empty(),
        "README.md does not tell the keys {missing:?}"
    );
}

#[test]
fn it_lists_each_built_in_sheet_and_place_of_values() {
    let text = file("README.md").text;
    let mut missing = Vec::new();
    for sheet in built_in().sheets() {
        let row = format!("`{}`", sheet.name.value);
        if !text
            .lines()
            .any(|line| line.starts_with('|') && line.contains(&row))
        {
            missing.push(row);
        }
        let values = sheet.needs.iter().flat_map(|need| &need.from);
        for from in values {
            if let seamnote::criteria::From::Check(name) = from
                && !text.contains(&format!("`{name}`"))
            {
                missing.push(format!("`{name}` of {}", sheet.name.value));
            }
        }
    }
    let points = seamnote::criteria::PointField::WORDS.map(|row| format!("`point.{}`", row.0));
    let runs = seamnote::criteria::RunField::WORDS.map(|row| format!("`run.{}`", row.0));
    let places = points.into_iter().chain(runs);
    missing.extend(places.filter(|place| !text.contains(place.as_str())));
    assert!(missing.is_empty(), "README.md does not tell {missing:?}");
}

#[test]
fn its_commands_are_those_that_the_checks_run() {
    let text = file("README.md").text;
    let checks = file(".ci/run").text;
    for command in ["cargo run --release -- write", "cargo test --release"] {
        let fenced = format!("```sh\n{command}\n```");
        assert!(
            text.contains(&fenced),
            "README.md does not set `{command}` apart"
        );
        assert!(
            checks.lines().any(|line| line == command),
            ".ci/run does not run `{command}`"
        );
    }
    for option in ["--must-hold", "--threads", "--out", "--only"] {
        assert!(text.contains(option), "README.md does not tell `{option}`");
    }
}

/// The first page of a demo note, as README.md shows it; rewritten with the snapshots.
#[test]
fn its_picture_is_the_first_page_of_the_demo() {
    const PICTURE: &str = "out/first-page.svg";
    let (joint, produced) = crate::notes::demo()
        .iter()
        .find(|(joint, _)| joint.stem == "mast-foot")
        .expect("the demo joint of the picture");
    let press = Press::new();
    let page = press
        .page_svg(&crate::notes::source_of(produced).text, 0)
        .unwrap();
    let path = crate::tidy::root().join(PICTURE);
    if std::env::var_os("INSTA_UPDATE").is_some_and(|mode| mode == "always") {
        std::fs::write(&path, &page).unwrap();
    }
    let committed = std::fs::read_to_string(&path).unwrap_or_default();
    assert!(committed == page, "{PICTURE} is not that of {}", joint.stem);
    let readme = crate::tidy::file("README.md").text;
    assert!(
        readme.contains(&format!("]({PICTURE})")),
        "README.md shows {PICTURE}"
    );
}
