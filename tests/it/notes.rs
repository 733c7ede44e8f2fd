//! The notes of `joints/`: committed texts are current, the PDF is whole, nothing is lost on the way.

use clap::Parser;
use pulldown_cmark::{Event, Options, Tag};
use seamnote::cli::{Arguments, run};
use seamnote::figure::{SerifFaces, draw_picture, standalone_source, typst_source};
use seamnote::note::Picture;
use seamnote::project::{
    JointFile, Kinds, Produced, Workshop, find_joints, read_joint_file, read_surroundings,
};
use seamnote::render::{Drawings, Press, Stray, TypstSource, overflow, render_typst};
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use std::sync::OnceLock;
use typst::foundations::Value;
use typst::introspection::MetadataElem;
use typst::layout::{Frame, FrameItem};
use typst_layout::PagedDocument;

/// A folder of the project.
pub(crate) fn project_folder(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(name)
}

/// Every joint of `joints/` with its outputs, made once.
pub(crate) fn demo() -> &'static [(JointFile, Produced)] {
    static DEMO: OnceLock<Vec<(JointFile, Produced)>> = OnceLock::new();
    DEMO.get_or_init(|| {
        let folder = project_folder("joints");
        let surroundings = read_surroundings(&folder).unwrap_or_else(|fault| panic!("{fault}"));
        let workshop = Workshop::new();
        find_joints(&[folder])
            .unwrap_or_else(|fault| panic!("{fault}"))
            .into_iter()
            .map(|joint| {
                let produced = workshop
                    .produce(&joint, &surroundings, Kinds::ALL)
                    .unwrap_or_else(|fault| panic!("{fault}"));
                (joint, produced)
            })
            .collect()
    })
}

/// The bytes of an output.
fn output<'a>(produced: &'a Produced, name: &str) -> &'a [u8] {
    let found = produced.outputs.iter().find(|output| output.name == name);
    &found.unwrap_or_else(|| panic!("{name} is not made")).bytes
}

/// A text output.
fn text<'a>(produced: &'a Produced, name: &str) -> &'a str {
    std::str::from_utf8(output(produced, name)).expect("outputs of text are UTF-8")
}

/// Whether the file holds the text.
fn holds(file: &[u8], wanted: &str) -> bool {
    file.windows(wanted.len())
        .any(|window| window == wanted.as_bytes())
}

#[test]
fn committed_texts_are_current() {
    let mut folders = BTreeSet::new();
    for (joint, produced) in demo() {
        folders.insert(joint.stem.clone());
        for name in std::iter::once("note.md".to_owned()).chain(drawings_of(produced)) {
            let name = name.as_str();
            let path = project_folder("out").join(&joint.stem).join(name);
            let committed = std::fs::read_to_string(&path).unwrap_or_default();
            assert!(
                committed == text(produced, name),
                "out/{}/{name} is not current; run `cargo run --release -- write` and read what changed",
                joint.stem
            );
        }
    }
    for entry in std::fs::read_dir(project_folder("out")).unwrap() {
        let entry = entry.unwrap();
        let name = entry.file_name().into_string().unwrap();
        let known = folders.contains(&name) || entry.path().is_file();
        assert!(known, "out/{name} has no joint");
    }
}

#[test]
fn outputs_are_whole_and_the_trace_is_last() {
    for (joint, produced) in demo() {
        let names: Vec<&str> = produced
            .outputs
            .iter()
            .map(|output| output.name.as_str())
            .collect();
        let mut wanted = vec!["note.md".to_owned()];
        wanted.extend(drawings_of(produced));
        wanted.extend(["note.pdf", "cases.csv", "trace.json"].map(str::to_owned));
        assert_eq!(names, wanted, "{}", joint.stem);
        assert!(
            produced
                .outputs
                .iter()
                .all(|output| !output.bytes.is_empty()),
            "{}: an output is empty",
            joint.stem
        );
    }
}

#[test]
fn every_pdf_conforms_and_carries_its_joint_file_and_its_trace() {
    for (joint, produced) in demo() {
        let pdf = output(produced, "note.pdf");
        let name = joint.path.file_name().unwrap().to_str().unwrap();
        let file = read_joint_file(&joint.path).unwrap();
        let trace = output(produced, "trace.json");
        for wanted in [
            "%PDF-1.7".to_owned(),
            "<pdfaid:part>3<".to_owned(),
            "<pdfaid:conformance>B<".to_owned(),
            "<pdfuaid:part>1<".to_owned(),
            format!("/UF({name})"),
            "/UF(trace.json)".to_owned(),
            "/AFRelationship/Source".to_owned(),
            "/AFRelationship/Data".to_owned(),
            format!(
                "/Subtype/application#2Fyaml/Params<</Size {}/",
                file.text.len()
            ),
            format!("/Subtype/application#2Fjson/Params<</Size {}/", trace.len()),
        ] {
            assert!(holds(pdf, &wanted), "{}: {wanted} is missing", joint.stem);
        }
    }
}

/// The files of a note's drawings, in their order.
fn drawings_of(produced: &Produced) -> Vec<String> {
    let pictures = produced.note.pictures.iter();
    pictures
        .map(|picture| format!("{}.svg", picture.name()))
        .collect()
}

/// The typst source of a note, written again from its document.
pub(crate) fn source_of(produced: &Produced) -> TypstSource {
    let faces = SerifFaces::embedded().unwrap();
    let drawn = |picture: &Picture| {
        let drawing = typst_source(&draw_picture(picture, &faces));
        (picture.name().to_owned(), drawing)
    };
    let drawings: Drawings = produced.note.pictures.iter().map(drawn).collect();
    render_typst(&produced.note.doc, &drawings).unwrap()
}

/// The pages of a note, set again from its document.
pub(crate) fn pages(press: &Press, produced: &Produced) -> PagedDocument {
    let source = source_of(produced);
    press
        .pages(&source.text)
        .unwrap_or_else(|fault| panic!("{}", source.explain(fault)))
}

/// A note to change, without what was written of it.
fn produced_alike(produced: &Produced) -> Produced {
    Produced {
        note: produced.note.clone(),
        outputs: Vec::new(),
    }
}

/// What stands where it must not in the demo notes, on either paper.
pub(crate) fn strays() -> Vec<(String, Stray)> {
    let press = Press::new();
    let mut found = Vec::new();
    for (joint, produced) in demo() {
        for paper in ["a4", "us-letter"] {
            let mut produced = produced_alike(produced);
            produced.note.doc.head.paper = paper;
            let strays = overflow(&pages(&press, &produced));
            found.extend(
                strays
                    .into_iter()
                    .map(|stray| (format!("{}, {paper}", joint.stem), stray)),
            );
        }
    }
    found
}

#[test]
fn nothing_leaves_its_column_or_overlaps_on_either_paper() {
    assert!(strays().is_empty(), "{:#?}", strays());
}

/// Sizes of the links of a frame (pt).
fn links(frame: &Frame, out: &mut Vec<[f64; 2]>) {
    for (_, item) in frame.items() {
        match item {
            FrameItem::Group(group) => links(&group.frame, out),
            FrameItem::Link(_, size) => out.push([size.x.to_pt(), size.y.to_pt()]),
            FrameItem::Text(_)
            | FrameItem::Shape(..)
            | FrameItem::Image(..)
            | FrameItem::Tag(_) => {}
        }
    }
}

/// A link that begins in one column and goes on in the next has an empty part in the first, and a
/// rectangle over both.
#[test]
fn no_link_is_empty() {
    let press = Press::new();
    for (joint, produced) in demo() {
        let mut sizes = Vec::new();
        for page in pages(&press, produced).pages() {
            links(&page.frame, &mut sizes);
        }
        assert!(sizes.len() > 50, "{}: {} links", joint.stem, sizes.len());
        let empty = sizes
            .iter()
            .find(|[width, height]| *width < 1.0 || *height < 1.0);
        assert!(empty.is_none(), "{}: {empty:?}", joint.stem);
    }
}

/// Where the marks of the template stand in a frame: their words and heights (pt).
fn marks(frame: &Frame, top: f64, out: &mut Vec<(String, f64)>) {
    for (at, item) in frame.items() {
        let top = top + at.y.to_pt();
        match item {
            FrameItem::Group(group) => marks(&group.frame, top, out),
            FrameItem::Tag(typst::introspection::Tag::Start(content, _)) => {
                let Some(mark) = content.to_packed::<MetadataElem>() else {
                    continue;
                };
                let Value::Dict(mark) = &mark.value else {
                    continue;
                };
                for (kind, name) in mark.iter() {
                    if let Value::Str(name) = name {
                        out.push((format!("{kind} {name}"), top));
                    }
                }
            }
            _ => {}
        }
    }
}

#[test]
fn a_drawing_stands_at_its_spot_or_at_the_head_of_the_next_page() {
    /// Between its spot and a drawing at most (pt).
    const NEAR: f64 = 25.0;
    let press = Press::new();
    let (mut at_spot, mut later) = (0, 0);
    for (joint, produced) in demo() {
        for paper in ["a4", "us-letter"] {
            let mut produced = produced_alike(produced);
            produced.note.doc.head.paper = paper;
            let document = pages(&press, &produced);
            let mut found: Vec<(usize, String, f64)> = Vec::new();
            for (page, set) in document.pages().iter().enumerate() {
                let mut on_page = Vec::new();
                marks(&set.frame, 0.0, &mut on_page);
                found.extend(on_page.into_iter().map(|(words, y)| (page, words, y)));
            }
            let mut order = Vec::new();
            for picture in &produced.note.pictures {
                let place = |kind: &str| {
                    let words = format!("{kind} {}", picture.name());
                    found.iter().find(|mark| mark.1 == words).unwrap()
                };
                let (spot, drawing) = (place("spot"), place("drawing"));
                let from = drawing.2 - spot.2;
                let name = format!("{}, {paper}, {}", joint.stem, picture.name());
                if spot.0 == drawing.0 {
                    at_spot += 1;
                    assert!(from.abs() < NEAR, "{name}: {from} pt from its spot");
                } else {
                    later += 1;
                    assert_eq!(spot.0 + 1, drawing.0, "{name}");
                }
                order.push((drawing.0, drawing.2));
            }
            assert!(order.is_sorted(), "{}: {order:?}", joint.stem);
        }
    }
    assert!(
        at_spot > 20 && later > 10,
        "{at_spot} and {later}: both ways are to be seen"
    );
}

/// The text of a frame, without blanks: the typesetter spaces words by position.
fn words(frame: &Frame, out: &mut String) {
    for (_, item) in frame.items() {
        match item {
            FrameItem::Group(group) => words(&group.frame, out),
            FrameItem::Text(text) => out.extend(text.text.chars().filter(|c| !c.is_whitespace())),
            FrameItem::Shape(..)
            | FrameItem::Image(..)
            | FrameItem::Link(..)
            | FrameItem::Tag(_) => {}
        }
    }
}

#[test]
fn the_first_page_has_the_verdict_and_every_page_its_identity() {
    let press = Press::new();
    for (joint, produced) in demo() {
        let note = &produced.note;
        let document = pages(&press, produced);
        let count = document.pages().len();
        let pdf = output(produced, "note.pdf");
        let tag = format!("<xmpTPg:NPages>{count}<");
        assert!(
            count > 0 && holds(pdf, &tag),
            "{}: {count} pages",
            joint.stem
        );
        let close = |text: &str| text.split_whitespace().collect::<String>();
        for (index, page) in document.pages().iter().enumerate() {
            let mut on_page = String::new();
            words(&page.frame, &mut on_page);
            let mut wanted = vec![
                note.identity.printed(),
                note.doc.head.note.clone(),
                "DRAFT — not signed".to_owned(),
            ];
            if index == 0 {
                wanted.push(note.doc.head.title.clone());
                wanted.push(note.standing.figure());
                wanted.push(note.standing.tally());
            }
            for wanted in wanted {
                assert!(
                    on_page.contains(&close(&wanted)),
                    "{}, page {}: {wanted} is missing in {on_page}",
                    joint.stem,
                    index + 1
                );
            }
        }
    }
}

/// A heading has one number and title in both.
#[test]
fn every_section_title_stands_in_the_pages_and_in_the_markdown() {
    let press = Press::new();
    for (joint, produced) in demo() {
        let mut all = String::new();
        for page in pages(&press, produced).pages() {
            words(&page.frame, &mut all);
        }
        let markdown = text(produced, "note.md");
        for (index, section) in produced.note.doc.sections.iter().enumerate() {
            let heading = format!("</a>{} {}\n", index + 1, section.title);
            assert!(markdown.contains(&heading), "{}: {heading}", joint.stem);
            let heading = format!("{}{}", index + 1, section.title);
            let heading: String = heading.split_whitespace().collect();
            assert!(all.contains(&heading), "{}: {heading}", joint.stem);
        }
    }
}

/// The order in which the trade expects the sections of a stress note.
const SECTIONS: [&str; 18] = [
    "purpose",
    "inputs",
    "assumptions",
    "geometry",
    "materials",
    "method",
    "loads",
    "lines",
    "stress",
    "margins",
    "refusals",
    "sizes",
    "opinions",
    "coverage",
    "open-items",
    "cautions",
    "changes",
    "signatures",
];

/// Sections that no note is without.
const ALWAYS: [&str; 10] = [
    "purpose",
    "inputs",
    "geometry",
    "materials",
    "loads",
    "lines",
    "opinions",
    "coverage",
    "cautions",
    "signatures",
];

#[test]
fn sections_stand_in_the_order_of_the_trade() {
    for (joint, produced) in demo() {
        let ids: Vec<&str> = produced
            .note
            .doc
            .sections
            .iter()
            .map(|section| section.id.as_str())
            .collect();
        let places: Vec<usize> = ids
            .iter()
            .map(|id| {
                SECTIONS
                    .iter()
                    .position(|known| known == id)
                    .unwrap_or_else(|| panic!("{}: unknown section {id}", joint.stem))
            })
            .collect();
        assert!(
            places.windows(2).all(|pair| pair[0] < pair[1]),
            "{}: {ids:?}",
            joint.stem
        );
        for wanted in ALWAYS {
            assert!(ids.contains(&wanted), "{}: no {wanted}", joint.stem);
        }
        assert!(
            produced
                .note
                .doc
                .sections
                .iter()
                .all(|section| !section.blocks.is_empty()),
            "{}: an empty section is printed",
            joint.stem
        );
    }
}

#[test]
fn every_note_has_its_cautions() {
    for (joint, produced) in demo() {
        let markdown = text(produced, "note.md");
        let (_, cautions) = markdown.split_once(" Cautions\n").unwrap();
        let cautions = cautions.split("\n## ").next().unwrap();
        for wanted in [
            "qualified engineers",
            "Local codes",
            "licensed practice",
            "Allowables are to be confirmed",
        ] {
            assert!(cautions.contains(wanted), "{}: {wanted}", joint.stem);
        }
    }
}

/// The ids that inline HTML makes link targets.
fn anchors(html: &str) -> impl Iterator<Item = &str> {
    html.split("<a id=\"")
        .skip(1)
        .filter_map(|rest| rest.split('"').next())
}

#[test]
fn every_link_of_the_markdown_leads_somewhere() {
    for (joint, produced) in demo() {
        let markdown = text(produced, "note.md");
        let mut targets = BTreeSet::new();
        let (mut links, mut images) = (BTreeSet::new(), Vec::new());
        let (mut rows, mut display) = (0, 0);
        let options = Options::ENABLE_TABLES | Options::ENABLE_MATH;
        for event in pulldown_cmark::Parser::new_ext(markdown, options) {
            match event {
                Event::InlineHtml(html) | Event::Html(html) => {
                    for id in anchors(&html) {
                        assert!(targets.insert(id.to_owned()), "{}: two {id}", joint.stem);
                    }
                }
                Event::Start(Tag::Link { dest_url, .. }) => {
                    links.insert(dest_url.to_string());
                }
                Event::Start(Tag::Image { dest_url, .. }) => images.push(dest_url.to_string()),
                Event::Start(Tag::TableRow) => rows += 1,
                Event::DisplayMath(_) => display += 1,
                _ => {}
            }
        }
        assert_eq!(images, drawings_of(produced), "{}: images", joint.stem);
        assert!(
            rows > 10 && display > 10,
            "{}: {rows} rows, {display} steps",
            joint.stem
        );
        assert!(links.len() > 10, "{}: {} links", joint.stem, links.len());
        for link in links {
            let id = link
                .strip_prefix('#')
                .unwrap_or_else(|| panic!("{}: {link} leads out of the note", joint.stem));
            assert!(targets.contains(id), "{}: {link} leads nowhere", joint.stem);
        }
    }
}

#[test]
fn each_drawing_is_an_svg_with_text_as_outlines() {
    let press = Press::new();
    let faces = SerifFaces::embedded().unwrap();
    for (joint, produced) in demo() {
        for picture in &produced.note.pictures {
            let name = format!("{}.svg", picture.name());
            let svg = text(produced, &name);
            let drawing = draw_picture(picture, &faces);
            let again = press.svg(&standalone_source(&drawing)).unwrap();
            assert!(
                svg == again,
                "{}: {name} differs when drawn again",
                joint.stem
            );
            assert!(svg.starts_with("<svg"), "{}: no SVG", joint.stem);
            for refused in ["<text", "href=\"http", "<image", "<script"] {
                assert!(!svg.contains(refused), "{}: {refused}", joint.stem);
            }
        }
    }
}

/// Writes every demo joint with a number of threads; the bytes of every file by name.
fn written(threads: &str) -> Vec<(PathBuf, Vec<u8>)> {
    let out = tempfile::tempdir().unwrap();
    let joints = project_folder("joints");
    let arguments = ["seamnote", "write", "--threads", threads, "--out"]
        .map(std::ffi::OsString::from)
        .into_iter()
        .chain([out.path().into(), joints.into()]);
    let said = run(&Arguments::parse_from(arguments), false, &|_, _| ());
    assert_eq!(said.code, 0, "{}", said.err);
    let mut files = Vec::new();
    for folder in std::fs::read_dir(out.path()).unwrap() {
        for file in std::fs::read_dir(folder.unwrap().path()).unwrap() {
            let path = file.unwrap().path();
            let bytes = std::fs::read(&path).unwrap();
            files.push((path.strip_prefix(out.path()).unwrap().to_owned(), bytes));
        }
    }
    files.sort();
    files
}

#[test]
fn runs_and_threads_give_the_same_bytes() {
    let (one, two) = (written("1"), written("2"));
    let outputs: usize = demo()
        .iter()
        .map(|(_, produced)| produced.outputs.len())
        .sum();
    assert_eq!(one.len(), outputs, "the outputs of each joint");
    assert_eq!(one.len(), two.len(), "files of two threads");
    for ((name, bytes), (other, again)) in one.iter().zip(&two) {
        assert_eq!(name, other, "names of files");
        assert!(
            bytes == again,
            "{} differs with two threads",
            name.display()
        );
        let (stem, file) = (name.parent().unwrap(), name.file_name().unwrap());
        let (_, produced) = demo()
            .iter()
            .find(|(joint, _)| Path::new(&joint.stem) == stem)
            .unwrap();
        let made = output(produced, file.to_str().unwrap());
        assert!(bytes == made, "{} differs in another run", name.display());
    }
}

/// One row for each case and check, the same as in the trace.
#[test]
fn the_table_of_cases_has_every_case() {
    for (joint, produced) in demo() {
        let trace: serde_json::Value = serde_json::from_str(text(produced, "trace.json")).unwrap();
        let outcomes: usize = trace["cases"]
            .as_array()
            .unwrap()
            .iter()
            .map(|case| case["checks"].as_array().unwrap().len())
            .sum();
        let rows = text(produced, "cases.csv").lines().count() - 1;
        assert_eq!(rows, outcomes, "{}: rows of cases.csv", joint.stem);
        let margins = trace["cases"].as_array().unwrap().iter().flat_map(|case| {
            let checks = case["checks"].as_array().unwrap().iter();
            checks.filter_map(|check| check["margin"].as_f64())
        });
        let least = margins.fold(f64::INFINITY, f64::min);
        let governing = trace["governing"]["margin"].as_f64();
        assert!(
            governing.is_none_or(|margin| (margin - least).abs() <= 1e-9 * least.abs()),
            "{}: {governing:?} governs, but {least} is the least",
            joint.stem
        );
    }
}

/// Each joint is told once, in rising order, whatever the threads.
#[test]
fn progress_counts_every_joint() {
    let joints = crate::tidy::root().join("joints");
    for threads in ["1", "2"] {
        let told = std::sync::Mutex::new(Vec::new());
        let words = [
            "seamnote",
            "vet",
            joints.to_str().unwrap(),
            "--threads",
            threads,
        ];
        let said = run(&Arguments::parse_from(words), false, &|done, of| {
            told.lock().unwrap().push((done, of));
        });
        assert_eq!((said.code, said.err.as_str()), (0, ""));
        let of = demo().len();
        let each: Vec<(usize, usize)> = (1..=of).map(|done| (done, of)).collect();
        assert_eq!(told.into_inner().unwrap(), each, "{threads} threads");
    }
}

/// Runs of different kinds take sheets of their own, which are asked for one by one.
#[test]
fn runs_of_two_kinds_have_the_numbers_of_their_own_sheets() {
    let (_, produced) = demo()
        .iter()
        .find(|(joint, _)| joint.stem == "davit-base")
        .expect("a demo joint of two kinds of weld");
    let standing = &produced.note.standing;
    assert_eq!(standing.refused, [""; 0], "every check has a number");
    let failed = ["EN 1993-1-8 4.7.1", "EN 1993-1-8 4.7.2, equivalent stress"];
    assert_eq!(standing.failed, failed, "both strengths are exceeded");
    let markdown = text(produced, "note.md");
    assert!(
        markdown.contains("1 of 3 strength checks holds. Not held: EN 1993-1-8 4.7.1"),
        "{markdown}"
    );
}

/// The demo shows every kind of verdict: good, good with open items, failing, without a number.
#[test]
fn the_demo_has_every_kind_of_verdict() {
    let has = |what: &dyn Fn(&seamnote::note::Standing) -> bool| {
        demo()
            .iter()
            .any(|(_, produced)| what(&produced.note.standing))
    };
    assert!(demo().len() >= 6, "six joints or more");
    assert!(has(&|standing| standing.holds()), "a note that holds");
    assert!(
        has(&|standing| !standing.failed.is_empty()),
        "a note that fails"
    );
    assert!(
        has(&|standing| !standing.refused.is_empty()),
        "a note with a refusal"
    );
    let open = |wanted: &str| {
        demo().iter().any(|(_, produced)| {
            let verdict = produced.note.doc.verdict.as_ref().unwrap();
            format!("{:?}", verdict.lines).contains(wanted)
        })
    };
    assert!(
        open("No open item in this note."),
        "a note without open items"
    );
    assert!(
        open("behind this margin, to be verified"),
        "a margin with open items"
    );
}
