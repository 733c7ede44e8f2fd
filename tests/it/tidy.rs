//! Holds the sources to the project's own rules: floors, lengths, words, fault codes, documents.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

/// The rooms of `src`, from the ground up: a room uses only those before it.
const FLOORS: [&str; 13] = [
    "source", "quantity", "formula", "joint", "weld", "load", "solve", "criteria", "note",
    "figure", "render", "project", "cli",
];

/// Longest a file may be without its tests.
const LONGEST: usize = 600;

/// Files that are longer, and why.
const LONG: [(&str, &str); 4] = [
    (
        "src/formula/ledger.rs",
        "the worked calculation and all its kinds of line",
    ),
    (
        "src/note/lines.rs",
        "tables and sums of line properties share their columns",
    ),
    (
        "src/note/margins.rs",
        "checks, their order and their tables share the sites",
    ),
    (
        "src/note/stress.rs",
        "planar, spatial and collinear forms of method 4 side by side",
    ),
];

/// Fault codes that no fixture and no test names, and why.
const UNTRIED: [(&str, &str); 0] = [];

/// A text file of the project.
pub(crate) struct File {
    /// Its name from the root of the project, with `/`.
    pub(crate) name: String,
    /// Its text.
    pub(crate) text: String,
}

impl File {
    /// The text before the tests at its foot.
    fn code(&self) -> &str {
        self.text
            .split_once("\n#[cfg(test)]\nmod tests")
            .map_or(self.text.as_str(), |(code, _)| code)
    }

    /// Its tests.
    fn tests(&self) -> &str {
        &self.text[self.code().len()..]
    }

    /// Numbered lines of code that are no comment.
    fn lines(&self) -> impl Iterator<Item = (usize, &str)> {
        let numbered = self.code().lines().enumerate();
        numbered
            .map(|(at, line)| (at + 1, line))
            .filter(|(_, line)| !line.trim_start().starts_with("//"))
    }

    /// The room of a file below `src`; `None` for `lib.rs` and `main.rs`.
    fn room(&self) -> Option<&str> {
        let (room, _) = self.name.strip_prefix("src/")?.split_once('/')?;
        Some(room)
    }
}

/// The root of the project.
pub(crate) fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// The file of a name from the root.
pub(crate) fn file(name: &str) -> File {
    let text = fs::read_to_string(root().join(name));
    File {
        name: name.to_owned(),
        text: text.unwrap_or_else(|fault| panic!("{name}: {fault}")),
    }
}

/// The files below a folder whose names end in one of `endings`, in order.
pub(crate) fn files(folder: &str, endings: &[&str]) -> Vec<File> {
    let mut names = Vec::new();
    collect(&root().join(folder), &mut names);
    names.sort();
    names
        .iter()
        .map(|path| {
            let name = path.strip_prefix(root()).unwrap();
            name.to_str().unwrap().replace('\\', "/")
        })
        .filter(|name| endings.iter().any(|ending| name.ends_with(ending)))
        .map(|name| file(&name))
        .collect()
}

fn collect(folder: &Path, names: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            collect(&path, names);
        } else {
            names.push(path);
        }
    }
}

fn sources() -> Vec<File> {
    let found = files("src", &[".rs"]);
    assert!(found.len() > 50, "only {} sources found", found.len());
    found
}

/// Fails with every line of `found`, if there is one.
#[track_caller]
fn none(found: &[String], rule: &str) {
    assert!(found.is_empty(), "{rule}:\n  {}", found.join("\n  "));
}

#[test]
fn each_file_says_what_it_is_for() {
    let found: Vec<String> = sources()
        .into_iter()
        .chain(files("tests", &[".rs"]))
        .filter(|file| !file.text.starts_with("//! "))
        .map(|file| file.name)
        .collect();
    none(&found, "files that do not open with `//!`");
}

#[test]
fn files_are_short_or_say_why_not() {
    let mut found = Vec::new();
    for file in sources() {
        let lines = file.code().lines().count();
        let excused = LONG.iter().any(|(name, _)| *name == file.name);
        if lines > LONGEST && !excused {
            found.push(format!("{}: {lines} lines before its tests", file.name));
        } else if lines <= LONGEST && excused {
            found.push(format!("{}: no longer needs its excuse", file.name));
        }
    }
    none(&found, "files to part, or to take off the list");
}

#[test]
fn rooms_stand_on_their_floors() {
    let order: Vec<String> = file("src/lib.rs")
        .lines()
        .filter_map(|(_, line)| {
            Some(
                line.strip_prefix("pub mod ")?
                    .trim_end_matches(';')
                    .to_owned(),
            )
        })
        .collect();
    assert_eq!(order, FLOORS, "the order of rooms in src/lib.rs");
    let rank = |room: &str| FLOORS.iter().position(|known| *known == room);
    let mut found = Vec::new();
    for file in sources() {
        let Some(room) = file.room() else { continue };
        let own = rank(room).unwrap_or_else(|| panic!("{}: no known room", file.name));
        for (line, used) in rooms_used(&file) {
            let fault = match rank(&used) {
                Some(other) if other <= own => continue,
                Some(_) => "stands above it",
                None => "is no room",
            };
            found.push(format!(
                "{}:{line}: `{room}` uses `{used}`, which {fault}",
                file.name
            ));
        }
    }
    none(&found, "uses of rooms");
}

/// The rooms that a file's code names as `crate::room`, with their lines.
fn rooms_used(file: &File) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (number, line) in file.lines() {
        for (at, word) in line.match_indices("crate::") {
            let rest = &line[at + word.len()..];
            let names = match rest.strip_prefix('{') {
                Some(list) => list.trim_end_matches(['}', ';']).split(',').collect(),
                None => vec![rest],
            };
            for name in names {
                let end = name.find(|c: char| !c.is_ascii_lowercase() && c != '_');
                let name = name.trim_start()[..end.unwrap_or(name.len())].to_owned();
                if !name.is_empty() {
                    found.push((number, name));
                }
            }
        }
    }
    found
}

#[test]
fn only_the_outer_rooms_know_files_clock_and_terminal() {
    let outer = [
        "std::fs",
        "std::env",
        "std::time",
        "std::io",
        "std::net",
        "std::process",
    ];
    let printing = ["println!", "eprintln!", "print!(", "eprint!(", "dbg!"];
    let clock = ["SystemTime", "Instant::now", "Utc::now", "Local::now"];
    let mut found = Vec::new();
    for file in sources() {
        let inner = file
            .room()
            .is_some_and(|room| room != "project" && room != "cli");
        let main = file.name == "src/main.rs";
        for (number, line) in file.lines() {
            let has = |words: &[&str]| words.iter().any(|word| line.contains(word));
            if has(&clock) || (inner && has(&outer)) || (!main && has(&printing)) {
                found.push(format!("{}:{number}: {}", file.name, line.trim()));
            }
        }
    }
    none(&found, "files, clock or terminal where they do not belong");
}

#[test]
fn numbers_are_the_same_on_every_machine() {
    let methods = [
        "sin", "cos", "tan", "asin", "acos", "atan", "atan2", "sin_cos", "sinh", "cosh", "tanh",
        "exp", "exp2", "exp_m1", "ln", "ln_1p", "log", "log2", "log10", "powf", "powi", "sqrt",
        "cbrt", "hypot",
    ]
    .map(|method| format!(".{method}("));
    let banned = [
        concat!("mul", "_add"),
        concat!("un", "safe "),
        "HashMap",
        "HashSet",
        "f32",
    ];
    let mut found = Vec::new();
    for file in sources() {
        for (number, line) in file.lines() {
            let method = methods.iter().any(|method| line.contains(method.as_str()));
            if method || banned.iter().any(|word| line.contains(word)) {
                found.push(format!("{}:{number}: {}", file.name, line.trim()));
            }
        }
    }
    none(
        &found,
        "arithmetic outside `quantity::real`, or order and memory left to chance",
    );
}

#[test]
fn texts_hold_no_places_of_one_machine_and_no_leftovers() {
    let words = [
        concat!("tran", "script"),
        concat!("lec", "ture"),
        concat!("to", "do!"),
        concat!("fix", "me"),
        concat!("xx", "x"),
        concat!("as an ", "ai"),
        concat!("index.cra", "tes.io"),
    ];
    let places = ["work", "root", "home", "tmp", "users"].map(|folder| format!("/{folder}/"));
    let mut all = Vec::new();
    for folder in ["src", "tests", "templates", "joints", "out"] {
        all.extend(files(
            folder,
            &[".rs", ".yaml", ".typ", ".md", ".json", ".snap"],
        ));
    }
    let documents = [
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "Cargo.toml",
        ".ci/run",
        ".gitignore",
    ];
    all.extend(documents.map(file));
    let mut found = Vec::new();
    for file in &all {
        for (at, line) in file.text.to_lowercase().lines().enumerate() {
            let of = |word: &String| line.contains(word.as_str()) && !line.contains("`/");
            if words.iter().any(|word| line.contains(word)) || places.iter().any(of) {
                found.push(format!("{}:{}: {}", file.name, at + 1, line.trim()));
            }
        }
    }
    none(&found, "words that do not belong into the project");
}

#[test]
fn comments_are_plain_prose() {
    let mut found = Vec::new();
    for file in sources().into_iter().chain(files("tests", &[".rs"])) {
        for (at, line) in file.text.lines().enumerate() {
            let comment = line.trim_start().starts_with("//");
            if comment && line.split('`').step_by(2).any(|text| text.contains('—')) {
                found.push(format!("{}:{}: {}", file.name, at + 1, line.trim()));
            }
        }
    }
    none(&found, "comments with dashes in them");
}

#[test]
fn each_test_file_is_part_of_the_test_crate() {
    let main = file("tests/it/main.rs").text;
    let mut found = Vec::new();
    for entry in fs::read_dir(root().join("tests/it")).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        let Some(module) = name.strip_suffix(".rs").filter(|module| *module != "main") else {
            continue;
        };
        if !main.contains(&format!("mod {module};")) {
            found.push(name);
        }
    }
    found.sort();
    none(&found, "test files that tests/it/main.rs does not name");
}

/// What of a module's text gives a fault its code.
const CODE_TAKERS: [&str; 10] = [
    "Diagnostic::error(",
    "Diagnostic::warning(",
    ".refuse(",
    ".refuse_with(",
    ".lacks(",
    ".lacks::<()>(",
    ".astray(",
    ".fault(",
    "unknown_name(",
    "refuse_choice(",
];

/// The fault codes that a file's code gives.
fn codes_of(file: &File) -> BTreeSet<String> {
    let code: String = file.lines().map(|(_, line)| format!("{line}\n")).collect();
    let mut found = BTreeSet::new();
    for taker in CODE_TAKERS {
        for (at, _) in code.match_indices(taker) {
            let arguments = code[at + taker.len()..].trim_start();
            let arguments = match arguments.split_once(',') {
                Some((first, rest)) if taker == "refuse_choice(" && !first.contains(['"', '(']) => {
                    rest.trim_start()
                }
                _ => arguments,
            };
            found.extend(literal(arguments));
        }
    }
    let blocks = [
        ("let code", "};"),
        ("let (code,", "};"),
        ("fn code(", "\n    }\n"),
    ];
    for (start, end) in blocks {
        for (at, _) in code.match_indices(start) {
            let block = &code[at..];
            let block = &block[..block.find(end).unwrap_or(block.len())];
            for (quote, _) in block.match_indices('"') {
                let before = block[..quote].trim_end();
                if ["=>", "{", "("]
                    .iter()
                    .any(|opening| before.ends_with(opening))
                {
                    found.extend(literal(&block[quote..]));
                }
            }
        }
    }
    found
}

/// The code at the head of a text, if a literal of that form stands there.
fn literal(text: &str) -> Option<String> {
    let (word, _) = text.strip_prefix('"')?.split_once('"')?;
    let fits = |c: char| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-';
    (!word.is_empty() && word.chars().all(fits)).then(|| word.to_owned())
}

/// Every fault code with the files that give it.
pub(crate) fn codes() -> BTreeMap<String, Vec<String>> {
    let mut all: BTreeMap<String, Vec<String>> = BTreeMap::new();
    for file in sources() {
        for code in codes_of(&file) {
            all.entry(code).or_default().push(file.name.clone());
        }
    }
    assert!(all.len() > 80, "only {} fault codes found", all.len());
    all
}

#[test]
fn fault_codes_are_listed_for_developers() {
    let text = file("DEVELOPERS.md").text;
    let (_, section) = text
        .split_once("\n## Fault codes\n")
        .expect("there is a section");
    let section = section.split("\n## ").next().unwrap();
    let items = section
        .lines()
        .filter_map(|line| line.strip_prefix("- ")?.split_once(": "));
    let listed: BTreeSet<&str> = items
        .flat_map(|(_, codes)| codes.split('`').skip(1).step_by(2))
        .collect();
    let given = codes();
    let missing = given.keys().filter(|code| !listed.contains(code.as_str()));
    let stale = listed.iter().filter(|code| !given.contains_key(**code));
    let found: Vec<String> = missing
        .map(|code| format!("`{code}` is missing: {}", given[code].join(", ")))
        .chain(stale.map(|code| format!("`{code}` is listed, but nothing gives it")))
        .collect();
    none(&found, "the list of fault codes in DEVELOPERS.md");
}

#[test]
fn fault_codes_are_tried() {
    let mut tried = String::new();
    for file in files("tests/it", &[".rs", ".snap"]) {
        if file.name != "tests/it/tidy.rs" {
            tried.push_str(&file.text);
        }
    }
    for file in sources() {
        tried.push_str(file.tests());
    }
    let mut found = Vec::new();
    for (code, names) in codes() {
        let named = tried.contains(&format!("[{code}]")) || tried.contains(&format!("\"{code}\""));
        let excused = UNTRIED.iter().any(|(known, _)| *known == code);
        if !named && !excused {
            found.push(format!(
                "`{code}` has no fixture and no test: {}",
                names.join(", ")
            ));
        } else if named && excused {
            found.push(format!("`{code}` is tried: take it off the list"));
        }
    }
    none(&found, "fault codes without a test");
}

#[test]
fn developers_find_each_dependency_and_no_more_than_they_read() {
    let text = file("DEVELOPERS.md").text;
    let lines = text.lines().count();
    assert!(
        lines < 300,
        "DEVELOPERS.md has {lines} lines, not under 300"
    );
    let manifest = file("Cargo.toml").text;
    let code: String = sources()
        .iter()
        .chain(&files("tests", &[".rs"]))
        .flat_map(|file| [file.text.as_str(), "\n"].map(str::to_owned))
        .collect();
    let mut found = Vec::new();
    for section in ["[dependencies]\n", "[dev-dependencies]\n"] {
        let (_, rest) = manifest.split_once(section).expect("there is the section");
        let rows = rest.lines().take_while(|line| !line.starts_with('['));
        for row in rows.filter(|row| !row.is_empty()) {
            let name = row.split(' ').next().unwrap();
            if !text.contains(&format!("`{name}`")) {
                found.push(format!("`{name}` has no reason in DEVELOPERS.md"));
            }
            let path = name.replace('-', "_");
            if !["::", "!("]
                .iter()
                .any(|after| code.contains(&format!("{path}{after}")))
            {
                found.push(format!("nothing uses `{name}`"));
            }
        }
    }
    none(
        &found,
        "dependencies that DEVELOPERS.md gives no reason for",
    );
}
