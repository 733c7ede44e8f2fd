//! Beginning a project, and explanations of codes, sheets and keys.

use crate::keys::tables;
use crate::tidy::codes;
use clap::Parser;
use seamnote::cli::{Arguments, explain, fault_words, run};
use seamnote::criteria::{built_in, keys::SHEET};
use seamnote::joint::keys::{JOINT, PATTERN};
use seamnote::note::{doc::Block, sheet_page};
use seamnote::quantity::UnitSet;
use seamnote::render::{Drawings, Press, overflow, render_typst};
use seamnote::source::Form;

fn say(arguments: &[&str]) -> seamnote::cli::Said {
    let all = ["seamnote"].iter().chain(arguments);
    run(&Arguments::try_parse_from(all).unwrap(), false, &|_, _| ())
}

/// Holds an explanation to its snapshot.
#[track_caller]
fn shown(name: &str, thing: &str) {
    let mut settings = insta::Settings::clone_current();
    settings.set_omit_expression(true);
    settings.bind(|| insta::assert_snapshot!(name, explain(thing, built_in()).unwrap()));
}

fn patterns() -> Vec<String> {
    let Some(Form::Words(words)) = PATTERN.find("shape").map(|key| key.form) else {
        panic!("shapes are words");
    };
    let names = words
        .iter()
        .map(|word| word.to_lowercase().replace(' ', "-"));
    names.collect()
}

#[test]
fn a_project_begun_with_any_pattern_in_any_units_vets_without_fault_and_holds() {
    let mut tried = 0;
    for pattern in patterns() {
        for set in UnitSet::ALL {
            let folder = tempfile::tempdir().unwrap();
            let name = folder.path().to_str().unwrap();
            let units = format!("{},{}", set.force(), set.length());
            let begun = say(&["begin", name, "--pattern", &pattern, "--units", &units]);
            assert_eq!(begun.code, 0, "{pattern} {units}: {}", begun.err);
            let joint = folder.path().join(format!("joints/{pattern}.yaml"));
            // The check by the sheet beside it stands there as a comment.
            let text = std::fs::read_to_string(&joint).unwrap();
            assert!(text.contains("  # - {clause: own rule 1"), "{pattern}");
            std::fs::write(
                &joint,
                text.replace("  # - {clause: own", "  - {clause: own"),
            )
            .unwrap();
            let joints = folder.path().join("joints");
            let vetted = say(&["vet", joints.to_str().unwrap(), "--must-hold"]);
            assert_eq!(
                vetted.code, 0,
                "{pattern} {units}: {}{}",
                vetted.out, vetted.err
            );
            tried += 1;
        }
    }
    assert_eq!(tried, 45, "patterns times printing sets");
}

#[test]
fn a_project_begun_with_any_pattern_writes_its_note() {
    let folder = tempfile::tempdir().unwrap();
    let root = folder.path();
    for (at, pattern) in patterns().iter().enumerate() {
        let units = ["N,mm", "kip,in"][at % 2];
        let own = root.join(pattern);
        let begun = say(&[
            "begin",
            own.to_str().unwrap(),
            "--pattern",
            pattern,
            "--units",
            units,
        ]);
        assert_eq!(begun.code, 0, "{pattern}: {}", begun.err);
        let (joints, out) = (own.join("joints"), own.join("out"));
        let wrote = say(&[
            "write",
            joints.to_str().unwrap(),
            "--out",
            out.to_str().unwrap(),
        ]);
        assert_eq!(wrote.code, 0, "{pattern}: {}{}", wrote.out, wrote.err);
        assert!(
            out.join(pattern).join("note.pdf").is_file(),
            "{pattern}: a note"
        );
    }
}

#[test]
fn nothing_is_written_over() {
    let folder = tempfile::tempdir().unwrap();
    let name = folder.path().to_str().unwrap();
    let sheet = folder.path().join("joints/sheets/own-rule-1.yaml");
    std::fs::create_dir_all(sheet.parent().unwrap()).unwrap();
    std::fs::write(&sheet, "mine").unwrap();
    let begun = say(&["begin", name]);
    assert_eq!(begun.code, 1, "refused");
    assert!(
        begun.err.contains("own-rule-1.yaml: is there already"),
        "{}",
        begun.err
    );
    assert_eq!(
        std::fs::read_to_string(&sheet).unwrap(),
        "mine",
        "as it was"
    );
    assert!(
        !folder.path().join("joints/channel.yaml").exists(),
        "nothing else is written"
    );
}

#[test]
fn each_fault_code_is_explained_and_no_other() {
    let given: Vec<String> = codes().into_keys().collect();
    let told: Vec<String> = fault_words().keys().cloned().collect();
    let missing: Vec<&String> = given.iter().filter(|code| !told.contains(code)).collect();
    let stale: Vec<&String> = told.iter().filter(|code| !given.contains(code)).collect();
    assert!(
        missing.is_empty(),
        "src/cli/explain/faults.yaml lacks {missing:?}"
    );
    assert!(
        stale.is_empty(),
        "src/cli/explain/faults.yaml has {stale:?}, which nothing gives"
    );
    for (code, words) in fault_words() {
        let text = explain(code, built_in()).unwrap();
        for part in [code, &words.means, &words.like, &words.mend] {
            assert!(
                !part.is_empty() && text.contains(part.as_str()),
                "{code}: {text}"
            );
        }
    }
}

#[test]
fn each_sheet_is_explained_whole() {
    for sheet in built_in().sheets() {
        let text = explain(&sheet.name.value, built_in()).unwrap();
        let needs = sheet.needs.iter().map(|need| &need.says);
        let steps = sheet.steps.iter().map(|step| &step.formula.value);
        let limits = sheet.limits.iter().map(|limit| &limit.says);
        let checks = sheet.checks.iter().map(|check| &check.says);
        let cautions = sheet.cautions.iter().map(|told| &told.value);
        let parts = needs
            .chain(steps)
            .chain(limits)
            .chain(checks)
            .chain(cautions);
        for part in parts.chain([&sheet.title.value, &sheet.source.cited()]) {
            assert!(
                text.contains(part.as_str()),
                "{}: no `{part}` in\n{text}",
                sheet.name.value
            );
        }
    }
    shown("explain_sheet_of_points", "EN 1993-1-8 4.5.3.2");
    shown("explain_sheet_of_runs", "AISC 360 J2.2b");
}

#[test]
fn all_names_are_listed_and_values_of_checks_explained() {
    let said = say(&["explain"]);
    for name in [
        "EN 1993-1-8 4.5.3.2",
        "which-size",
        "weld.runs.toe",
        "sheet.needs.from",
    ] {
        assert!(
            said.out.contains(&format!("\n  {name}\n")),
            "{name}:\n{}",
            said.out
        );
    }
    let text = explain("gamma_M2", built_in()).unwrap();
    assert!(
        text.starts_with("value gamma_M2 of a check\n  EN 1993-1-8 4.5.3.2: "),
        "{text}"
    );
    let text = explain("4.5.3", built_in()).unwrap_err();
    assert!(
        text.contains("`EN 1993-1-8 4.5.3.2` or `EN 1993-1-8 4.5.3.3`"),
        "{text}"
    );
}

/// A clause sheet as a page: every step typeset from the tree that notes compute with.
#[test]
fn each_sheet_is_set_as_a_page_with_its_steps() {
    let press = Press::new();
    for sheet in built_in().sheets() {
        let doc = sheet_page(sheet);
        let source = render_typst(&doc, &Drawings::new()).unwrap();
        let strays = overflow(&press.pages(&source.text).unwrap());
        assert!(strays.is_empty(), "{}: {strays:#?}", sheet.name.value);
        let steps: Vec<_> = doc
            .sections
            .iter()
            .flat_map(|s| &s.blocks)
            .filter_map(|block| block.as_step())
            .collect();
        let wanted = sheet.steps.len() + sheet.checks.len() + sheet.limits.len();
        assert_eq!(steps.len(), wanted, "{}", sheet.name.value);
        for (step, rule) in steps.iter().zip(&sheet.steps) {
            let start = format!("{} &=", rule.symbol.typst());
            assert!(
                step.lines[0].typst.starts_with(&start),
                "{:?}",
                step.lines[0]
            );
        }
    }
    let sheet = built_in().find("AISC 360 J2.4 LRFD end-loaded").unwrap();
    let latex = match &sheet_page(sheet).sections[2].blocks[0] {
        Block::Step(step) => step.latex.clone(),
        other => panic!("{other:?}"),
    };
    let wanted = r"\beta &= \begin{cases} 1 & \text{if } l \le 100 \, w \\ 1.2 - 0.002 \, l / w & \text{if } l \le 300 \, w \\ 180 \, w / l & \text{otherwise} \end{cases}";
    assert!(
        latex.contains(wanted),
        "every branch with its condition: {latex}"
    );
}

#[test]
fn a_sheet_is_written_as_a_page_and_nothing_else_is() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("clause.pdf");
    let name = path.to_str().unwrap();
    let said = say(&["explain", "AISC", "360", "J2.2b", "--pdf", name]);
    assert_eq!((said.code, said.err.as_str()), (0, ""), "{said:?}");
    let bytes = std::fs::read(&path).unwrap();
    assert!(bytes.starts_with(b"%PDF-"), "a PDF");
    let said = say(&["explain", "which-size", "--pdf", name]);
    assert_eq!(said.code, 1, "{said:?}");
    assert!(
        said.err.contains("`which-size` is no clause sheet"),
        "{}",
        said.err
    );
    assert_eq!(std::fs::read(&path).unwrap(), bytes, "the file stays");
    let lost = folder.path().join("none/clause.pdf");
    let said = say(&["explain", "AISC 360 J2.2b", "--pdf", lost.to_str().unwrap()]);
    assert_eq!(said.code, 1, "{said:?}");
    assert!(
        said.err.contains("clause.pdf: cannot be written"),
        "{}",
        said.err
    );
}

#[test]
fn each_key_is_explained_by_its_name() {
    for table in tables(&JOINT).into_iter().chain(tables(&SHEET)) {
        for key in table.keys {
            let text = explain(key.name, built_in()).unwrap();
            let says = format!("{}, of {}", key.says, table.what);
            assert!(
                text.contains(&says),
                "`{}` of {}:\n{text}",
                key.name,
                table.what
            );
        }
    }
    shown("explain_key", "weld.runs.toe");
    shown("explain_key_of_map", "weld");
    shown("explain_key_of_sheet", "sheet.needs.from");
}

#[test]
fn an_unknown_thing_gets_the_nearest_names() {
    let rows = [
        ("unknown-ky", "`unknown-key`"),
        ("EN 1993-1-8 4.5.3.4", "`EN 1993-1-8 4.5.3.3`"),
        ("weld.run.toe", "`weld.runs.toe`"),
    ];
    for (typed, offered) in rows {
        let text = explain(typed, built_in()).unwrap_err();
        assert!(text.contains(offered), "{typed}: {text}");
    }
    let text = explain("qqqq", built_in()).unwrap_err();
    assert!(!text.contains("did you mean"), "{text}");
    let said = say(&["explain", "qqqq"]);
    assert_eq!((said.code, said.out.as_str()), (1, ""), "refused");
}

#[test]
fn a_sheet_of_ones_own_is_explained_from_its_folder() {
    let folder = format!("{}/joints", env!("CARGO_MANIFEST_DIR"));
    let said = say(&["explain", "works", "rule", "7", "--joints", &folder]);
    assert_eq!(said.code, 0, "{}", said.err);
    assert!(said.out.contains("sheet works rule 7"), "{}", said.out);
}

#[test]
fn completions_and_manual_know_each_command_and_option() {
    use clap::CommandFactory;
    let program = Arguments::command();
    let commands: Vec<&clap::Command> = program.get_subcommands().collect();
    assert!(commands.len() >= 7, "commands");
    let manual = say(&["manual"]);
    assert!(manual.out.contains(".TH seamnote 1"), "{}", manual.out);
    for shell in ["bash", "zsh", "fish"] {
        let said = say(&["completions", shell]);
        for command in &commands {
            assert!(
                said.out.contains(command.get_name()),
                "{shell}: {}",
                command.get_name()
            );
        }
        for option in ["must-hold", "pattern"] {
            assert!(said.out.contains(option), "{shell}: {option}");
        }
    }
    for command in &commands {
        let name = command.get_name();
        assert!(manual.out.contains(name), "the manual lacks {name}");
        let page = say(&["manual", name]);
        assert_eq!(page.code, 0, "{name}: {}", page.err);
        assert!(
            page.out.contains(&format!(".TH seamnote-{name} 1")),
            "{}",
            page.out
        );
        for option in command
            .get_arguments()
            .filter_map(|argument| argument.get_long())
        {
            let escaped = option.replace('-', "\\-");
            assert!(page.out.contains(&escaped), "{name}: --{option}");
        }
    }
    assert_eq!(say(&["manual", "qqq"]).code, 2, "no such command");
}
