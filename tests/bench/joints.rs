//! Notes end to end: a cold process, and many joints on all cores against the typesetting alone.

use super::{least, seconds};
use clap::Parser;
use seamnote::cli::{Arguments, run};
use seamnote::criteria::built_in;
use seamnote::figure::{Drawing, SerifFaces, draw_note, standalone_source, typst_source};
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, write_note};
use seamnote::render::{Attachment, Drawings, Press, Relation, render_markdown, render_typst};
use seamnote::source::SourceFile;
use std::path::Path;
use std::process::Command;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};

/// Joints in the run of many.
pub(super) const MANY: usize = 100;

/// Rounds, of which the least time counts.
const ROUNDS: usize = 3;

/// The demo joint, from which the others are made.
const DEMO: &str = include_str!("../../joints/mast-foot.yaml");

/// What the typesetter gets for one joint.
struct Sources {
    note: String,
    drawings: Vec<String>,
    attachments: [Attachment; 2],
}

/// Times the program on one joint, started anew each time, all outputs.
pub(super) fn cold() {
    let folder = tempfile::tempdir().unwrap();
    write_joints(folder.path(), 1);
    let joint = folder.path().join("joint-000.yaml");
    let program = |only: Option<&str>| {
        let mut command = Command::new(env!("CARGO_BIN_EXE_seamnote"));
        command.arg("write").arg(&joint);
        command.arg("--out").arg(folder.path().join("out"));
        command.args(only.iter().flat_map(|kinds| ["--only", kinds]));
        let output = command.output().unwrap();
        assert!(output.status.success(), "the program failed");
    };
    let time = |only| least((0..15).map(|_| seconds(|| program(only))).collect());
    let (all, pdf, numbers) = (time(None), time(Some("pdf")), time(Some("cases,trace")));
    println!("  all outputs {:.1} ms", all * 1e3);
    println!(
        "  the PDF alone takes {:.2} of that, cases and trace alone {:.2}",
        pdf / all,
        numbers / all
    );
}

/// Times the stages of one joint in this process, one after another.
pub(super) fn stages() {
    let faces = SerifFaces::embedded().unwrap();
    let press = Press::new();
    let mut times: [Vec<f64>; 6] = Default::default();
    // A joint changed each time: the typesetter remembers what it has set as given.
    for round in 0..15 {
        let file = file(round);
        let mut clock = Clock::new(&mut times);
        let told = read_joint(&file).unwrap();
        let mut note = write_note(&Calculation::of(&told, built_in()).unwrap()).unwrap();
        clock.next();
        let drawings = draw_note(&mut note, &faces);
        clock.next();
        drop(render_markdown(&note.doc).unwrap());
        clock.next();
        let source = render_typst(&note.doc, &placed(&drawings)).unwrap();
        clock.next();
        for (_, drawing) in &drawings {
            drop(press.svg(&standalone_source(drawing)).unwrap());
        }
        clock.next();
        drop(press.pdf(&source.text, &[]).unwrap());
        clock.next();
    }
    let times = times.map(least);
    let all: f64 = times.iter().sum();
    let names = [
        "read, computed, worked",
        "drawing",
        "Markdown",
        "typst source",
        "SVG set",
        "PDF set",
    ];
    for (name, time) in names.iter().zip(times) {
        println!("  {name}: {:.3} of {:.1} ms", time / all, all * 1e3);
    }
}

/// Takes the times of stages in turn.
struct Clock<'a> {
    stages: std::slice::IterMut<'a, Vec<f64>>,
    last: std::time::Instant,
}

impl<'a> Clock<'a> {
    fn new(times: &'a mut [Vec<f64>; 6]) -> Self {
        Self {
            stages: times.iter_mut(),
            last: std::time::Instant::now(),
        }
    }

    /// Ends a stage.
    fn next(&mut self) {
        let times = self.stages.next().expect("there is a place for each stage");
        times.push(self.last.elapsed().as_secs_f64());
        self.last = std::time::Instant::now();
    }
}

/// Joints that are read only.
const READ: usize = 1000;

/// Times the reading of many joint files, and their computing up to the note, on one core.
pub(super) fn reading() {
    let files: Vec<Arc<SourceFile>> = (0..READ).map(file).collect();
    let bytes: usize = files.iter().map(|file| file.text.len()).sum();
    let read = || {
        files.iter().for_each(|file| {
            drop(read_joint(file).unwrap());
        });
    };
    let vet = || {
        for file in &files {
            let told = read_joint(file).unwrap();
            drop(write_note(&Calculation::of(&told, built_in()).unwrap()).unwrap());
        }
    };
    let time = |work: &dyn Fn()| least((0..ROUNDS).map(|_| seconds(work)).collect());
    let (read, vet) = (time(&read), time(&vet));
    println!(
        "  {READ} joints of {} kB read in {:.1} ms, {:.3} of reading and working them",
        bytes / 1000,
        read * 1e3,
        read / vet
    );
}

/// Times many joints in one process on all cores against the typesetting of the same sources.
pub(super) fn many() {
    let folder = tempfile::tempdir().unwrap();
    write_joints(folder.path(), MANY);
    let threads = std::thread::available_parallelism().map_or(1, usize::from);
    let faces = SerifFaces::embedded().unwrap();
    let sources: Vec<Sources> = (0..MANY).map(|n| sources(n, &faces)).collect();
    let press = Press::new();
    let pdf = |n: usize| {
        drop(
            press
                .pdf(&sources[n].note, &sources[n].attachments)
                .unwrap(),
        )
    };
    let svg = |n: usize| {
        for drawing in &sources[n].drawings {
            drop(press.svg(drawing).unwrap());
        }
    };
    pdf(0);

    let mut times: [Vec<f64>; 5] = Default::default();
    for _ in 0..ROUNDS {
        times[0].push(seconds(|| program(folder.path(), None)));
        times[1].push(seconds(|| program(folder.path(), Some("pdf"))));
        times[2].push(seconds(|| on(threads, &pdf)));
        times[3].push(seconds(|| on(threads, &svg)));
        times[4].push(seconds(|| program(folder.path(), Some("cases,trace"))));
    }
    let [all, pdf_only, typeset, drawn, numbers] = times.map(least);
    println!(
        "  {threads} threads, all outputs: {:.1} ms a joint",
        all * 1e3 / 100.0
    );
    println!(
        "  PDF by the program over the typesetting of its sources alone: {:.3}",
        pdf_only / typeset
    );
    println!(
        "  all outputs over the typesetting of note and drawing alone: {:.3}",
        all / (typeset + drawn)
    );
    println!(
        "  share of typesetting in all outputs: {:.2}",
        (typeset + drawn) / all
    );
    println!(
        "  cases and trace alone: {:.3} of all outputs",
        numbers / all
    );
}

/// Writes the notes of a folder's joints in this process.
fn program(folder: &Path, only: Option<&str>) {
    let out = folder.join("out");
    let mut words = vec!["seamnote".into(), "write".into(), folder.into()];
    words.extend(["--out".into(), out.into_os_string()]);
    words.extend(
        only.iter()
            .flat_map(|kinds| ["--only".into(), (*kinds).into()]),
    );
    let said = run(&Arguments::parse_from(words), false, &|_, _| ());
    assert_eq!(said.code, 0, "{}", said.err);
}

/// Does `work` for every joint on plain threads.
fn on(threads: usize, work: &(impl Fn(usize) + Sync)) {
    let next = AtomicUsize::new(0);
    std::thread::scope(|scope| {
        for _ in 0..threads {
            scope.spawn(|| {
                loop {
                    let n = next.fetch_add(1, Ordering::Relaxed);
                    if n >= MANY {
                        break;
                    }
                    work(n);
                }
            });
        }
    });
}

/// The n-th joint: the demo with a number, a title and loads of its own.
fn text(n: usize) -> String {
    DEMO.replace("SN-104", &format!("SN-{}", 1000 + n))
        .replace("title: Mast foot", &format!("title: Mast foot {n},"))
        .replace("-14.2 kN", &format!("-{}.{} kN", 10 + n % 9, n % 10))
        .replace("-17.6 kN", &format!("-{}.{} kN", 12 + n % 7, (3 * n) % 10))
}

fn write_joints(folder: &Path, count: usize) {
    for n in 0..count {
        std::fs::write(folder.join(format!("joint-{n:03}.yaml")), text(n)).unwrap();
    }
}

/// The n-th joint's file.
fn file(n: usize) -> Arc<SourceFile> {
    Arc::new(SourceFile {
        name: format!("joint-{n:03}.yaml"),
        text: text(n),
    })
}

/// Drawings as the note takes them.
fn placed(drawings: &[(&str, Drawing)]) -> Drawings {
    let source = |(name, drawing): &(&str, Drawing)| ((*name).to_owned(), typst_source(drawing));
    drawings.iter().map(source).collect()
}

/// What the program hands to the typesetter for the n-th joint.
fn sources(n: usize, faces: &SerifFaces) -> Sources {
    let file = file(n);
    let told = read_joint(&file).unwrap();
    let mut note = write_note(&Calculation::of(&told, built_in()).unwrap()).unwrap();
    let drawings = draw_note(&mut note, faces);
    let attachment = |name: &str, mime: &str, relation, bytes: &[u8]| Attachment {
        name: name.to_owned(),
        mime: mime.to_owned(),
        relation,
        description: "bench".to_owned(),
        bytes: bytes.to_vec(),
    };
    Sources {
        note: render_typst(&note.doc, &placed(&drawings)).unwrap().text,
        drawings: drawings
            .iter()
            .map(|(_, drawing)| standalone_source(drawing))
            .collect(),
        attachments: [
            attachment(
                &file.name,
                "application/yaml",
                Relation::Source,
                file.text.as_bytes(),
            ),
            attachment(
                "trace.json",
                "application/json",
                Relation::Data,
                note.trace_json().as_bytes(),
            ),
        ],
    }
}
