//! The tree of a YAML file: texts, kinds and places.

use seamnote::joint::read_joint;
use seamnote::source::{Node, SourceFile, Value, parse_yaml};
use std::sync::Arc;

fn file(text: &str) -> Arc<SourceFile> {
    Arc::new(SourceFile {
        name: "joints/x.yaml".into(),
        text: text.into(),
    })
}

fn tree(text: &str) -> Node {
    parse_yaml(&file(text)).unwrap_or_else(|faults| panic!("{}", faults.render(false)))
}

fn code(text: &str) -> &'static str {
    parse_yaml(&file(text)).expect_err("the text has a fault").0[0].code
}

/// All scalars below a node as their texts, whether quoted, and the source text at their places.
fn scalars(node: &Node) -> Vec<(String, bool, String)> {
    let shown = node.place.file.text[node.place.start..node.place.end].to_owned();
    match &node.value {
        Value::Scalar { text, quoted } => vec![(text.clone(), *quoted, shown)],
        Value::List(items) => items.iter().flat_map(scalars).collect(),
        Value::Map(entries) => entries.iter().flat_map(|(_, node)| scalars(node)).collect(),
        Value::Null => vec![(String::new(), false, shown)],
    }
}

#[test]
fn scalars_stay_text() {
    let texts = [
        "1E3",
        "NO",
        "007",
        "0x1F",
        "true",
        "null",
        "~",
        "2026-05-04",
        "12:30",
        "1_000",
        ".5",
        "-y",
        "+y",
        "5 %",
    ];
    for text in texts {
        let root = tree(&format!("a: {text}\n"));
        assert_eq!(
            scalars(&root),
            [(text.to_owned(), false, text.to_owned())],
            "{text}"
        );
    }
}

#[test]
fn every_scalar_has_its_place() {
    let text =
        "tïtle: 焊缝 \"x\" # é\nlist: [1, 'it''s', \"a\\tb\"]\nmore:\n  - é\n  - k:   5 mm\n";
    for ending in ["\n", "\r\n"] {
        let root = tree(&text.replace('\n', ending));
        let got = scalars(&root);
        let wanted = [
            ("焊缝 \"x\"", false, "焊缝 \"x\""),
            ("1", false, "1"),
            ("it's", true, "'it''s'"),
            ("a\tb", true, "\"a\\tb\""),
            ("é", false, "é"),
            ("5 mm", false, "5 mm"),
        ];
        let wanted =
            wanted.map(|(text, quoted, shown)| (text.to_owned(), quoted, shown.to_owned()));
        assert_eq!(got, wanted, "line ending {ending:?}");
    }
}

#[test]
fn lines_and_columns_count_from_one_in_characters() {
    let root = tree("é: 1\nb: {c: é, d: 2}\n");
    let Value::Map(entries) = &root.value else {
        panic!("a map")
    };
    assert_eq!(entries[0].1.place.line_column(), (1, 4), "value of é");
    let Value::Map(inner) = &entries[1].1.value else {
        panic!("a map")
    };
    assert_eq!(inner[1].0.place.line_column(), (2, 11), "key d");
    assert_eq!(inner[1].1.place.short(), "x.yaml:2", "short form");
    assert_eq!(
        format!("{:?}", inner[1].1.place),
        "joints/x.yaml:2:14",
        "long form"
    );
}

#[test]
fn maps_and_lists_reach_from_their_first_to_their_last_value() {
    let text = "a:\n  b: 1\n  c: [2, 3]   # end\n\nd:\n  - x\n  - y\n\n";
    let root = tree(text);
    let Value::Map(entries) = &root.value else {
        panic!("a map")
    };
    let shown = |node: &Node| text[node.place.start..node.place.end].to_owned();
    assert_eq!(shown(&entries[0].1), "b: 1\n  c: [2, 3]", "map");
    assert!(
        shown(&entries[1].1).ends_with("- y"),
        "list: {}",
        shown(&entries[1].1)
    );
    assert_eq!(root.place.end, text.rfind('y').unwrap() + 1, "root");
}

#[test]
fn an_empty_value_stands_at_its_key() {
    let root = tree("a:\nb: {c: , d}\n");
    let places: Vec<String> = scalars(&root)
        .into_iter()
        .map(|(_, _, shown)| shown)
        .collect();
    assert_eq!(places, ["a", "c", "d"], "places");
}

#[test]
fn what_could_grow_or_hide_is_refused() {
    assert_eq!(
        code(&"x".repeat(8 * 1024 * 1024 + 1)),
        "file-too-large",
        "size"
    );
    assert_eq!(
        code(&format!("{}1{}", "[".repeat(65), "]".repeat(65))),
        "too-deep",
        "depth 65"
    );
    let deepest = tree(&format!("{}1{}", "[".repeat(64), "]".repeat(64)));
    assert_eq!(scalars(&deepest).len(), 1, "depth 64 is read");
    assert_eq!(code("a: &x [1]\nb: [*x, *x]\n"), "anchor", "anchor");
    assert_eq!(code(""), "empty-file", "no text");
    assert_eq!(code("---\n...\n"), "empty-file", "empty document");
    assert_eq!(code("a: 1\n---\nb: 1\n"), "several-documents", "documents");
    assert_eq!(
        scalars(&tree("---\na: 1\n...\n")).len(),
        1,
        "one document with its marks is read"
    );
}

#[test]
fn all_faults_of_form_are_told_at_once() {
    let faults = parse_yaml(&file("a: &x 1\na: !t 2\nb: *x\n? [k]\n: 3\n")).unwrap_err();
    let codes: Vec<&str> = faults.0.iter().map(|fault| fault.code).collect();
    assert_eq!(
        codes,
        ["anchor", "duplicate-key", "tag", "alias", "odd-key"],
        "codes"
    );
}

/// Text that is cut or broken anywhere is a joint or a fault, never a crash.
#[test]
fn damaged_files_are_told_not_crashed_on() {
    let whole = include_str!("joint_files/full.yaml");
    let mut read = 0;
    for (at, _) in whole.char_indices().step_by(3) {
        let cut = &whole[..at];
        for damage in ["", "\t", "{", "]", "\"", ": ", "\u{feff}", "*", "? ", "|\n"] {
            let text = format!(
                "{cut}{damage}{}",
                if damage.is_empty() { "" } else { &whole[at..] }
            );
            match read_joint(&file(&text)) {
                Ok(_) => read += 1,
                Err(faults) => assert!(!faults.render(false).is_empty(), "a fault has a form"),
            }
        }
    }
    assert!(read > 100, "many damages leave a good joint: {read}");
}
