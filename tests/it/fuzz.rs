//! Damaged files and formulas: a fault with its place comes out, or a result, never a crash.
//!
//! The damage is random but the same on every machine and in every run. `SEAMNOTE_SHOW` names a folder
//! into which each test writes how many texts it tried and which took longest.

use seamnote::criteria::{built_in, read_sheet};
use seamnote::formula::{
    Draft, Env, Key, Ledger, Origin, Row, RowKey, SumSet, Symbol, Table, parse,
};
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, write_note};
use seamnote::quantity::{Dim, Given, UnitSet};
use seamnote::source::{Faults, SourceFile};
use std::collections::BTreeMap;
use std::fmt::Write;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::time::{Duration, Instant};

/// Damaged joint files, over all demo joints.
const JOINTS: usize = 9_000;
/// Damaged sheets of a demo joint, each with the joint that asks for it.
const OWN_SHEETS: usize = 1_000;
/// Damaged sheets of the program itself, read only.
const BUILT_IN_SHEETS: usize = 2_000;
/// Formulas, half of them random, half damaged.
const FORMULAS: usize = 20_000;

/// SplitMix64: G. L. Steele, D. Lea, C. H. Flood, "Fast splittable pseudorandom number generators",
/// OOPSLA 2014.
struct Random(u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// A number under `end`; 0 if that is 0.
    fn below(&mut self, end: usize) -> usize {
        let end = u64::try_from(end.max(1)).unwrap();
        usize::try_from(self.next() % end).unwrap()
    }

    fn pick<'t>(&mut self, of: &[&'t str]) -> &'t str {
        of[self.below(of.len())]
    }
}

/// Values that stand at an edge of what is read.
const VALUES: [&str; 44] = [
    "0",
    "-0",
    "1",
    "-1",
    "1e308",
    "-1e308",
    "1e-308",
    "1e400",
    "NaN",
    "inf",
    "1/0",
    "1/3",
    "0.1",
    "1e9",
    "1e-9",
    "99999999999999999999",
    "5 mm",
    "5 m",
    "1 kN",
    "1 kip",
    "30 deg",
    "360 deg",
    "-360 deg",
    "6.283185307179586 rad",
    "5 %",
    "8 kg",
    "1 furlong",
    "1,5",
    "~",
    "null",
    "[]",
    "{}",
    "\"\"",
    "''",
    "[0, 0]",
    "[0, 0, 0]",
    "[[0, 0], [0, 0]]",
    "true",
    "+x",
    "-y",
    "full",
    "both",
    "Ａ１",
    "е\u{301}",
];

/// Marks that mean something to YAML or to a terminal.
const MARKS: [&str; 24] = [
    ":",
    ": ",
    " #",
    "# ",
    "-",
    "- ",
    ",",
    "[",
    "]",
    "{",
    "}",
    "\"",
    "'",
    "|",
    ">",
    "&a ",
    "*a ",
    "!t ",
    "\t",
    "\u{feff}",
    "\0",
    "\u{1b}[31m",
    "---\n",
    "é",
];

/// Where words and numbers of the text stand.
fn tokens(text: &str) -> Vec<(usize, usize)> {
    let mut found = Vec::new();
    let mut start = None;
    for (at, c) in text.char_indices().chain([(text.len(), ' ')]) {
        let inside = c.is_alphanumeric() || matches!(c, '_' | '.' | '-' | '+' | '/' | '%');
        match (inside, start) {
            (true, None) => start = Some(at),
            (false, Some(from)) => {
                found.push((from, at));
                start = None;
            }
            _ => {}
        }
    }
    found
}

/// Up to three damages to bytes, lines or values.
fn damaged(text: &str, random: &mut Random) -> String {
    let mut text = text.to_owned();
    for _ in 0..=random.below(3) {
        text = match random.below(8) {
            0 => bytes_damaged(&text, random),
            1 | 2 => lines_damaged(&text, random),
            3 => {
                let mut at = random.below(text.len() + 1);
                while !text.is_char_boundary(at) {
                    at -= 1;
                }
                format!("{}{}{}", &text[..at], random.pick(&MARKS), &text[at..])
            }
            _ => values_damaged(&text, random),
        };
    }
    text
}

fn bytes_damaged(text: &str, random: &mut Random) -> String {
    let mut bytes = text.as_bytes().to_vec();
    let at = random.below(bytes.len());
    match random.below(3) {
        0 => drop(bytes.splice(at.., [])),
        1 => {
            let byte = u8::try_from(random.below(256)).unwrap();
            bytes.insert(at.min(bytes.len()), byte);
        }
        _ => {
            if let Some(byte) = bytes.get_mut(at) {
                *byte ^= 1 << random.below(8);
            }
        }
    }
    String::from_utf8_lossy(&bytes).into_owned()
}

fn lines_damaged(text: &str, random: &mut Random) -> String {
    let mut lines: Vec<&str> = text.lines().collect();
    let (one, other) = (random.below(lines.len()), random.below(lines.len()));
    let indented = format!("  {}", lines.get(one).copied().unwrap_or_default());
    match random.below(5) {
        _ if lines.is_empty() => {}
        0 => drop(lines.remove(one)),
        1 => lines.insert(other, lines[one]),
        2 => lines.swap(one, other),
        3 => lines[one] = &indented,
        _ => lines[one] = lines[one].trim_start(),
    }
    lines.join("\n") + "\n"
}

fn values_damaged(text: &str, random: &mut Random) -> String {
    let places = tokens(text);
    if places.is_empty() {
        return text.to_owned();
    }
    let (from, to) = places[random.below(places.len())];
    let (start, end) = places[random.below(places.len())];
    let new = match random.below(3) {
        0 => &text[start..end],
        _ => random.pick(&VALUES),
    };
    format!("{}{new}{}", &text[..from], &text[to..])
}

/// What a test tried: counts, the longest, and what crashed.
#[derive(Default)]
struct Tried {
    count: usize,
    faulty: usize,
    longest: (Duration, String),
    bad: Vec<String>,
}

impl Tried {
    /// Tries one text; `work` gives the faults that came out, or what is wrong with them.
    fn one(&mut self, text: &str, work: impl FnOnce() -> Result<bool, String>) {
        let clock = Instant::now();
        let outcome = catch_unwind(AssertUnwindSafe(work));
        let time = clock.elapsed();
        self.count += 1;
        if time > self.longest.0 {
            self.longest = (time, text.to_owned());
        }
        match outcome {
            Ok(Ok(faulty)) => self.faulty += usize::from(faulty),
            Ok(Err(what)) => self.bad.push(format!("{what}\n{text}")),
            Err(_) => self.bad.push(format!("a crash on\n{text}")),
        }
    }

    /// Ends a test: nothing bad, and both faults and results came out.
    fn end(self, name: &str) {
        if let Some(folder) = std::env::var_os("SEAMNOTE_SHOW") {
            let mut text = format!(
                "{} tried, {} faulty, {} bad; the longest took {:?}:\n{}\n",
                self.count,
                self.faulty,
                self.bad.len(),
                self.longest.0,
                self.longest.1
            );
            for bad in &self.bad {
                writeln!(text, "----\n{bad}").unwrap();
            }
            std::fs::write(std::path::Path::new(&folder).join(name), text).unwrap();
        }
        let some = self.bad.len().min(3);
        assert!(
            self.bad.is_empty(),
            "{} bad: {}",
            self.bad.len(),
            self.bad[..some].join("\n----\n")
        );
        assert!(
            self.faulty * 10 > self.count,
            "{name}: of {} {} are faulty",
            self.count,
            self.faulty
        );
        assert!(self.faulty < self.count, "{name}: all are faulty");
    }
}

fn file(name: &str, text: &str) -> Arc<SourceFile> {
    Arc::new(SourceFile {
        name: name.to_owned(),
        text: text.to_owned(),
    })
}

/// Whether each fault has a code, words and a place within its file, and renders.
fn check_faults(faults: &Faults) -> Result<bool, String> {
    if faults.0.is_empty() {
        return Err("faults without a fault".to_owned());
    }
    for fault in &faults.0 {
        let place = &fault.place;
        let text = &place.file.text;
        let whole = place.start <= place.end
            && place.end <= text.len()
            && text.is_char_boundary(place.start)
            && text.is_char_boundary(place.end);
        if !whole || fault.message.is_empty() || place.file.name.is_empty() {
            return Err(format!(
                "`{}` has no place or no words: {fault:?}",
                fault.code
            ));
        }
    }
    let shown = faults.render(false);
    if shown.contains('\u{1b}')
        && !faults
            .0
            .iter()
            .any(|fault| fault.place.file.text.contains('\u{1b}'))
    {
        return Err("a fault drives the terminal".to_owned());
    }
    Ok(true)
}

/// Reads and computes a joint up to its note, as `vet` does; whether there are faults.
fn vet(joint: &Arc<SourceFile>, sheet: Option<&Arc<SourceFile>>) -> Result<bool, String> {
    let worked = || -> Result<(), Faults> {
        let mut library = built_in().clone();
        if let Some(sheet) = sheet {
            library.add(read_sheet(sheet)?)?;
        }
        let told = read_joint(joint)?;
        let note = write_note(&Calculation::of(&told, &library)?)?;
        assert!(!note.standing.line().is_empty(), "a joint stands somehow");
        Ok(())
    };
    match worked() {
        Ok(()) => Ok(false),
        Err(faults) => check_faults(&faults),
    }
}

/// The name and text of each demo joint.
fn demo() -> Vec<(String, String)> {
    let folder = crate::tidy::root().join("joints");
    let mut joints: Vec<(String, String)> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
        .filter(|path| path.file_name().is_some_and(|name| name != "project.yaml"))
        .map(|path| {
            let name = path.file_name().unwrap().to_str().unwrap().to_owned();
            (name, std::fs::read_to_string(&path).unwrap())
        })
        .collect();
    joints.sort();
    joints
}

/// The demo's own sheet, and the text of the joint that asks for it.
fn own_sheet() -> (String, String) {
    let sheet = crate::tidy::file("joints/sheets/works-rule-7.yaml").text;
    let (_, joint) = demo()
        .into_iter()
        .find(|(_, text)| text.contains("clause: works rule 7"))
        .expect("a demo joint asks for the sheet");
    (sheet, joint)
}

fn damaged_joints(seed: u64) {
    let joints = demo();
    let sheet = file("works-rule-7.yaml", &own_sheet().0);
    let mut random = Random(seed);
    let mut tried = Tried::default();
    for at in 0..JOINTS / 3 {
        let (name, text) = &joints[at % joints.len()];
        let text = damaged(text, &mut random);
        tried.one(&text, || vet(&file(name, &text), Some(&sheet)));
    }
    tried.end(&format!("fuzz-joints-{seed}.txt"));
}

#[test]
fn damaged_joints_give_faults_or_notes_1() {
    damaged_joints(1);
}

#[test]
fn damaged_joints_give_faults_or_notes_2() {
    damaged_joints(2);
}

#[test]
fn damaged_joints_give_faults_or_notes_3() {
    damaged_joints(3);
}

#[test]
fn damaged_sheets_give_faults_or_notes() {
    let (sheet, joint) = own_sheet();
    let joint = file("demo.yaml", &joint);
    let mut random = Random(4);
    let mut tried = Tried::default();
    for _ in 0..OWN_SHEETS {
        let text = damaged(&sheet, &mut random);
        tried.one(&text, || {
            vet(&joint, Some(&file("works-rule-7.yaml", &text)))
        });
    }
    tried.end("fuzz-own-sheets.txt");
}

#[test]
fn damaged_sheets_of_the_program_give_faults_or_sheets() {
    let sheets = crate::tidy::files("src/criteria/sheets", &["yaml"]);
    assert!(sheets.len() > 10, "there are sheets");
    let mut random = Random(5);
    let mut tried = Tried::default();
    for at in 0..BUILT_IN_SHEETS {
        let sheet = &sheets[at % sheets.len()];
        let text = damaged(&sheet.text, &mut random);
        tried.one(&text, || match read_sheet(&file(&sheet.name, &text)) {
            Ok(_) => Ok(false),
            Err(faults) => check_faults(&faults),
        });
    }
    tried.end("fuzz-sheets.txt");
}

/// Names that formulas may use.
const NAMES: [&str; 7] = ["a", "b", "F_x", "n", "psi", "x", "gone"];

/// A ledger with quantities of several kinds, a set and a table.
fn bench() -> (Ledger, Env) {
    let units = UnitSet::NewtonMillimetre;
    let mut ledger = Ledger::new(units, 1000.0, 100.0);
    let mut env = Env::default();
    let rows = [
        ("a", "3", Dim::LENGTH),
        ("b", "-4.25", Dim::LENGTH),
        ("F_x", "1.2 kN", Dim::FORCE),
        ("n", "0", Dim::NONE),
        ("psi", "60 deg", Dim::ANGLE),
    ];
    let origin = || Origin::Method("trial".to_owned());
    for (name, text, dim) in rows {
        let given = Given::parse(text, dim, units).unwrap();
        let (base, index) = name.split_once('_').unwrap_or((name, ""));
        let indices: Vec<&str> = Some(index)
            .into_iter()
            .filter(|index| !index.is_empty())
            .collect();
        let value = ledger.given(
            name.to_owned(),
            Symbol::of(base, &indices),
            name.to_owned(),
            &given,
            origin(),
        );
        env.bind(name, value);
    }
    let member = |text: &str, ledger: &mut Ledger| {
        let given = Given::parse(text, Dim::LENGTH, units).unwrap();
        let id = format!("x{text}");
        let value = ledger.given(id, Symbol::of("x", &[]), "x".to_owned(), &given, origin());
        BTreeMap::from([("x".to_owned(), value)])
    };
    let members = vec![member("1", &mut ledger), member("-2.5", &mut ledger)];
    let set = SumSet {
        index: "i".to_owned(),
        symbols: BTreeMap::from([("x".to_owned(), Symbol::of("x", &[]))]),
        members,
    };
    env.sets.insert("runs".to_owned(), set);
    let given = |text: &str, dim| Given::parse(text, dim, units).unwrap();
    let table = Table {
        name: "T".to_owned(),
        cited: "table 1".to_owned(),
        key: Key::Quantity(Dim::LENGTH),
        dim: Dim::NONE,
        rows: vec![Row {
            key: RowKey::UpTo(Some(given("5", Dim::LENGTH))),
            value: given("0.9", Dim::NONE),
        }],
    };
    env.tables.insert("T".to_owned(), table);
    (ledger, env)
}

/// A random formula, well formed as algebra but not always in its dimensions.
fn formula(random: &mut Random, depth: usize) -> String {
    if depth == 0 {
        return match random.below(4) {
            0 => random
                .pick(&[
                    "0", "1", "2", "0.5", "3 mm", "1e200", "90 deg", "5 kN", "1 MPa", "pi",
                ])
                .to_owned(),
            _ => random.pick(&NAMES).to_owned(),
        };
    }
    let mut inner = || formula(random, depth - 1);
    let (one, two, three) = (inner(), inner(), inner());
    match random.below(14) {
        0 => format!("{one} + {two}"),
        1 => format!("({one} - {two})"),
        2 => format!("{one}*{two}"),
        3 => format!("{one}/({two})"),
        4 => format!(
            "({one})^{}",
            random.pick(&["2", "3", "-1", "0.5", "0", "a", "(1/3)", "400"])
        ),
        5 => format!("-{one}"),
        6 => format!("sqrt({one})"),
        7 => format!("{}({one})", random.pick(&["sin", "cos", "tan", "abs"])),
        8 => format!("atan2({one}, {two})"),
        9 => format!("{}({one}, {two}, {three})", random.pick(&["min", "max"])),
        10 => format!("sum(runs, {one}*x)"),
        11 => format!("lookup(T, {one})"),
        12 => format!("when({one} < {two}, {three}, otherwise, {one})"),
        _ => format!("({one}*{two}/{three})"),
    }
}

#[test]
fn random_and_damaged_formulas_give_faults_or_values() {
    let (ledger, env) = bench();
    let mut random = Random(6);
    let mut tried = Tried::default();
    for at in 0..FORMULAS {
        let depth = random.below(5);
        let mut text = formula(&mut random, depth);
        if at % 2 == 1 {
            text = damaged(&text, &mut random);
        }
        tried.one(&text, || read_formula(&mut ledger.clone(), &env, &text));
    }
    tried.end("fuzz-formulas.txt");
}

/// Parses, checks and evaluates a formula and prints it in every form; whether it is at fault.
fn read_formula(ledger: &mut Ledger, env: &Env, text: &str) -> Result<bool, String> {
    let draft = Draft {
        id: "r".to_owned(),
        symbol: Symbol::of("r", &[]),
        says: String::new(),
        formula: text,
        origin: Origin::Method("trial".to_owned()),
        dim: None,
    };
    let parsed = parse(text);
    let value = match ledger.step(draft, env) {
        Ok(value) => value,
        Err(fault) => {
            let span = &fault.span;
            let whole = fault.text.get(span.start..span.end).is_some();
            return if whole && !fault.to_string().is_empty() {
                Ok(true)
            } else {
                Err(format!("the fault has no place: {fault:?}"))
            };
        }
    };
    if parsed.is_err() {
        return Err("a step without a formula".to_owned());
    }
    if !ledger.get(value).value.is_finite() {
        return Err("a value that is no number".to_owned());
    }
    // A line that cannot be printed so that it replays is refused, and that is no crash.
    let settled = ledger.settle().is_ok();
    let shown = ledger.equation(value);
    let numbers = ledger.numbers_algebra(value);
    if shown.lines.is_empty() || numbers.is_none() {
        return Err(format!("a step that prints nothing, settled: {settled}"));
    }
    Ok(false)
}

/// Files that once crashed, or were told of in wrong words. The last line of each says what comes out:
/// `# comes out: CODE LINE:COLUMN`, or `# comes out: a note`.
#[test]
fn past_finds_come_out_as_they_say() {
    let files = crate::tidy::files("tests/it/corpus", &["yaml"]);
    assert!(files.len() >= 10, "there are {} finds", files.len());
    for found in files {
        let (_, wanted) = found
            .text
            .rsplit_once("# comes out: ")
            .expect("it says what comes out");
        let worked = || -> Result<(), Faults> {
            let told = read_joint(&file(&found.name, &found.text))?;
            write_note(&Calculation::of(&told, built_in())?)?;
            Ok(())
        };
        let got = match worked() {
            Ok(()) => "a note".to_owned(),
            Err(faults) => {
                let (line, column) = faults.0[0].place.line_column();
                format!("{} {line}:{column}", faults.0[0].code)
            }
        };
        assert_eq!(got, wanted.trim(), "{}", found.name);
    }
}
