//! The render room: PDF and Markdown of a sample note.

#![allow(clippy::unwrap_used, reason = "tests may unwrap")]

#[path = "render/sample.rs"]
mod sample;

use seamnote::note::doc::*;
use seamnote::render::{
    Attachment, Drawings, EQUATION_WIDTH, Press, Relation, RenderError, TypstSource, markdown_text,
    overflow, render_markdown, render_typst,
};
use typst::layout::{Frame, FrameItem};

fn drawings() -> Drawings {
    Drawings::from([("figure".to_owned(), sample::DRAWING.to_owned())])
}

fn source(doc: &Doc) -> TypstSource {
    render_typst(doc, &drawings()).unwrap_or_else(|e| panic!("{e}"))
}

fn attachments() -> Vec<Attachment> {
    vec![
        Attachment {
            name: "mast-foot.yaml".into(),
            mime: "application/yaml".into(),
            relation: Relation::Source,
            description: "the joint file".into(),
            bytes: b"note: SN-104\n".to_vec(),
        },
        Attachment {
            name: "trace.json".into(),
            mime: "application/json".into(),
            relation: Relation::Data,
            description: "every step of the calculation".into(),
            bytes: b"{\"note\": \"SN-104\"}\n".to_vec(),
        },
    ]
}

/// Bytes of the sample with its attachments.
fn sample_pdf(press: &Press) -> Vec<u8> {
    let source = source(&sample::sample());
    let pdf = press.pdf(&source.text, &attachments());
    pdf.unwrap_or_else(|e| panic!("{}", source.explain(e)))
        .bytes
}

/// Whether the file holds the bytes.
fn holds(file: &[u8], wanted: &[u8]) -> bool {
    file.windows(wanted.len()).any(|w| w == wanted)
}

#[test]
fn the_sample_becomes_a_conforming_file() {
    let source = source(&sample::sample());
    let pdf = Press::new().pdf(&source.text, &attachments());
    let pdf = pdf.unwrap_or_else(|e| panic!("{}", source.explain(e)));
    assert_eq!(pdf.pages, 3, "pages of the sample");
    assert!(pdf.bytes.starts_with(b"%PDF-1.7"), "version of the file");
    for wanted in [
        "<pdfaid:part>3<",
        "<pdfuaid:part>1<",
        "/AFRelationship/Source",
        "/AFRelationship/Data",
    ] {
        assert!(holds(&pdf.bytes, wanted.as_bytes()), "{wanted} is missing");
    }
    if let Some(dir) = std::env::var_os("SEAMNOTE_SHOW") {
        let dir = std::path::Path::new(&dir);
        std::fs::write(dir.join("note.pdf"), &pdf.bytes).unwrap();
        std::fs::write(dir.join("note.typ"), &source.text).unwrap();
        let markdown = render_markdown(&sample::sample()).unwrap();
        std::fs::write(dir.join("note.md"), markdown).unwrap();
    }
}

#[test]
fn two_runs_and_two_threads_give_the_same_bytes() {
    let press = Press::new();
    let first = sample_pdf(&press);
    assert!(first == sample_pdf(&press), "a second run differs");
    assert!(first == sample_pdf(&Press::new()), "another press differs");
    let others: Vec<Vec<u8>> = std::thread::scope(|scope| {
        let run = || scope.spawn(|| sample_pdf(&press));
        let handles = [run(), run()];
        handles.map(|h| h.join().unwrap()).into()
    });
    assert!(
        others.iter().all(|bytes| *bytes == first),
        "a thread differs"
    );
}

#[test]
fn nothing_leaves_its_column_on_either_paper() {
    for paper in ["a4", "us-letter"] {
        let mut doc = sample::sample();
        doc.head.paper = paper;
        let pages = Press::new().pages(&source(&doc).text).unwrap();
        let strays = overflow(&pages);
        assert!(strays.is_empty(), "on {paper}: {strays:#?}");
    }
}

#[test]
fn what_leaves_its_column_or_overlaps_is_found() {
    let text = source(&sample::sample()).text;
    let wide = text.replace("f_x = frac(F_x, A)", &"f_x = frac(F_x, A)".repeat(12));
    let over = text.replace(
        "dx: 25mm, dy: 8mm, text(size: 8pt)[upper edge, leg 6]",
        "dx: 25mm, dy: 8mm, {text(size: 8pt)[upper edge]; place(top, [lower edge])}",
    );
    for (name, text) in [("column", wide), ("overlap", over)] {
        let pages = Press::new().pages(&text).unwrap_or_else(|e| panic!("{e}"));
        assert!(!overflow(&pages).is_empty(), "{name}: nothing is reported");
    }
}

/// Two labels side by side along one slope: their upright boxes share much, they themselves nothing.
#[test]
fn slanted_labels_overlap_only_where_they_do() {
    let text = source(&sample::sample()).text;
    let with = |apart: &str| {
        let label =
            |dx: &str| format!("place(dx: {dx}, rotate(-45deg, text(size: 8pt)[a slanted label]))");
        let both = format!("{{{}; {}}}", label("0mm"), label(apart));
        let drawing = format!("dx: 25mm, dy: 8mm, {both}");
        let text = text.replace(
            "dx: 25mm, dy: 8mm, text(size: 8pt)[upper edge, leg 6]",
            &drawing,
        );
        assert!(
            text.contains("a slanted label"),
            "the labels stand in the drawing"
        );
        let pages = Press::new().pages(&text).unwrap_or_else(|e| panic!("{e}"));
        let strays = overflow(&pages);
        strays.iter().any(|stray| stray.what == "a slanted label")
    };
    assert!(!with("6mm"), "4.2 mm apart, they stand clear");
    assert!(with("2mm"), "1.4 mm apart, they overlap");
}

/// Links and their destinations, page by page, as the typesetter laid them out.
fn links(document: &typst_layout::PagedDocument) -> Vec<(usize, [i64; 4], String)> {
    use typst::layout::{Abs, Frame, FrameItem, Point};
    use typst::model::Destination;
    fn walk(
        frame: &Frame,
        at: Point,
        page: usize,
        document: &typst_layout::PagedDocument,
        out: &mut Vec<(usize, [i64; 4], String)>,
    ) {
        #[allow(
            clippy::cast_possible_truncation,
            reason = "a page is under a million points"
        )]
        let round = |a: Abs| (a.to_pt() * 1000.0).round() as i64;
        for (pos, item) in frame.items() {
            let here = at + *pos;
            match item {
                FrameItem::Group(group) => walk(&group.frame, here, page, document, out),
                FrameItem::Link(destination, size) => {
                    let Destination::Location(location) = destination else {
                        panic!("a link is left unresolved: {destination:?}")
                    };
                    let target = document.introspector().position(*location);
                    let target = target.map(|p| (p.page, round(p.point.x), round(p.point.y)));
                    let area = [here.x, here.y, size.x, size.y].map(round);
                    out.push((page, area, format!("{target:?}")));
                }
                FrameItem::Text(_)
                | FrameItem::Shape(..)
                | FrameItem::Image(..)
                | FrameItem::Tag(_) => {}
            }
        }
    }
    let mut out = Vec::new();
    for (n, page) in document.pages().iter().enumerate() {
        walk(&page.frame, Point::zero(), n, document, &mut out);
    }
    out
}

/// The low-level replacement of link destinations must agree with links to labels.
#[test]
fn resolved_links_equal_the_typesetters_own() {
    let text = source(&sample::sample()).text;
    let own = text
        .replace(
            "= link(\n  targets.at(id, default: id),",
            "= link(\n  label(targets.at(id)),",
        )
        .replace(
            "= link(target, text(fill: grey, body))",
            "= link(label(target), text(fill: grey, body))",
        );
    let own = own
        .replace("#link(\"", "#link(label(\"")
        .replace("(label(\"table 2, row 1\",", "(label(\"table 2, row 1\"),");
    let own = own
        .replace("(label(\"step 1\",", "(label(\"step 1\"),")
        .replace("(label(\"step 3\",", "(label(\"step 3\"),");
    let press = Press::new();
    let ours = links(&press.pages(&text).unwrap());
    let theirs = links(&press.pages(&own).unwrap_or_else(|e| panic!("{e}")));
    assert!(ours.len() > 10, "links are missing: {}", ours.len());
    assert_eq!(ours, theirs, "links differ");
}

#[test]
fn links_that_lead_nowhere_are_faults() {
    let mut doc = sample::sample();
    doc.verdict.as_mut().unwrap().lines[1][1] = Inline::StepRef {
        id: "gone".into(),
        text: "step 99".into(),
    };
    let fault = Press::new().pdf(&source(&doc).text, &[]).unwrap_err();
    assert_eq!(fault, RenderError::Unresolved(vec!["gone".into()]), "PDF");
    let fault = render_markdown(&doc).unwrap_err();
    assert_eq!(
        fault,
        RenderError::Unresolved(vec!["gone".into()]),
        "Markdown"
    );
}

#[test]
fn faults_name_the_line_of_the_template() {
    let mut templates = seamnote::render::Templates::default();
    templates.note_typ.push_str("\n#no-such-function()\n");
    let lines = templates.note_typ.lines().count();
    let source = templates.typst(&sample::sample(), &drawings()).unwrap();
    let fault = source.explain(Press::new().pdf(&source.text, &[]).unwrap_err());
    let text = fault.to_string();
    assert!(
        text.contains("unknown variable: no-such-function"),
        "{text}"
    );
    assert!(
        text.contains(&format!("template note.typ, line {lines}")),
        "{text}"
    );

    templates.note_typ.push_str("<< head.no_such_field >>");
    let fault = templates
        .typst(&sample::sample(), &drawings())
        .unwrap_err()
        .to_string();
    assert!(
        fault.contains(&format!("template note.typ, line {}", lines + 1)),
        "{fault}"
    );
}

#[test]
fn warnings_are_faults() {
    let text = "#set document(title: \"t\", date: none)\n#set text(font: \"No Such Face\")\nx";
    let fault = Press::new().pdf(text, &[]).unwrap_err().to_string();
    assert!(fault.contains("unknown font family"), "{fault}");
}

#[test]
fn unprintable_text_is_refused_by_name() {
    let mut doc = sample::sample();
    doc.head.title = "中 \u{202e}4.2".into();
    let fault = render_typst(&doc, &drawings()).unwrap_err();
    assert_eq!(
        fault,
        RenderError::Glyphs(vec!['\u{202e}', '中']),
        "what is refused"
    );
    assert_eq!(
        fault.to_string(),
        "the note's faces cannot print U+202E, `中` (U+4E2D)",
        "text"
    );
}

#[test]
fn widths_grow_with_the_line_and_know_the_maths_face() {
    let lines = [
        "x",
        "x x",
        r##"J = #n("a", "3.254", "6") = #res("4.235", "6", "mm^4")"##,
    ];
    let widths = Press::new().widths(&lines).unwrap();
    assert!(
        widths[0] > 3.0 && widths[0] < 8.0,
        "x takes {} pt",
        widths[0]
    );
    let miss = (widths[1] - 2.0 * widths[0]).abs();
    assert!(miss < 0.01, "x x takes {} pt", widths[1]);
    assert!(
        widths[2] > 100.0 && widths[2] < EQUATION_WIDTH,
        "J takes {} pt",
        widths[2]
    );
}

/// Texts that would be read as markup if they were not escaped.
#[rustfmt::skip]
const NASTY: [&str; 32] = [
    "#", "#let x = 1", "$", "$x$ and $$y$$", "*", "*bold* _slanted_", "<b>&amp;</b>", "a|b \\| c", "\\", "\\\\ end\\",
    "\"quoted\" 'single'", "line one\nline two", "`code` ``", "- list", "1. list", "2) list", "> quote", "~~gone~~ ~",
    "[link](http://x.y)", "![image](x.png)", "<!-- hidden -->", "](", "// comment /* x */", "https://a.b/c?d=e&f",
    "@ref <label> [content]", "שלום 4.2 עולם", "{{ x }} {% y %}", "<< x >> <% y %> <# z #>", "= heading", "---", "a  b\tc", ":ship: &copy; <https://a.b>",
];

/// The sample with a nasty string in every text that a user can write.
fn nasty(text: &str) -> Doc {
    let s = || text.to_owned();
    let all = || {
        vec![
            Inline::Plain { text: s() },
            Inline::Plain {
                text: " plain ".into(),
            },
            Inline::Emph { text: s() },
            Inline::Plain {
                text: " emph ".into(),
            },
            Inline::Strong { text: s() },
            Inline::Plain {
                text: " strong ".into(),
            },
            Inline::Aside { text: s() },
            Inline::Plain {
                text: " aside ".into(),
            },
            Inline::StepRef {
                id: "t1".into(),
                text: s(),
            },
        ]
    };
    let mut doc = sample::sample();
    doc.head = Head {
        note: s(),
        title: s(),
        issue: Some((s(), "2026-05-04".into())),
        particulars: vec![s(), s(), s()],
        ..doc.head
    };
    doc.verdict = Some(Verdict {
        label: s(),
        figure: s(),
        lines: vec![all()],
    });
    doc.identity = Some(s());
    doc.state = s();
    for section in &mut doc.sections {
        section.title = s();
        for block in &mut section.blocks {
            spoil(block, text, &all());
        }
    }
    doc
}

fn spoil(block: &mut Block, text: &str, all: &Text) {
    match block {
        Block::Para { text } => *text = all.clone(),
        Block::Heading { text: t } => *t = text.into(),
        Block::Items { items } => {
            for item in items {
                *item = Item {
                    label: text.into(),
                    text: all.clone(),
                    mark: Some(text.into()),
                    source: Some(text.into()),
                };
            }
        }
        Block::Step(step) => {
            step.says = all.clone();
            step.source = vec![all.clone()];
            step.mark = Some(text.into());
        }
        Block::Table(table) => {
            table.caption = all.clone();
            table.columns[0].head = all.clone();
            table.columns[1].unit = all.clone();
            for row in &mut table.rows {
                row.cells[0] = vec![Inline::Plain { text: text.into() }];
            }
            table.rows.truncate(2);
        }
        Block::Figure(figure) => {
            figure.caption = all.clone();
            figure.alt = text.into();
        }
        Block::Signatures { roles } => roles[0] = text.into(),
    }
}

/// All text of the pages in the order of its setting, without blanks and places to break.
fn set_text(document: &typst_layout::PagedDocument) -> String {
    use typst::layout::{Frame, FrameItem};
    fn walk(frame: &Frame, out: &mut String) {
        for (_, item) in frame.items() {
            match item {
                FrameItem::Group(group) => walk(&group.frame, out),
                FrameItem::Text(text) => out.push_str(&text.text),
                FrameItem::Link(..)
                | FrameItem::Shape(..)
                | FrameItem::Image(..)
                | FrameItem::Tag(_) => {}
            }
        }
    }
    let mut out = String::new();
    document
        .pages()
        .iter()
        .for_each(|page| walk(&page.frame, &mut out));
    bare(&out)
}

fn bare(text: &str) -> String {
    text.chars()
        .filter(|c| !c.is_whitespace() && *c != '\u{200b}')
        .collect()
}

#[test]
fn nasty_text_sets_as_typed() {
    let press = Press::new();
    for text in NASTY {
        let source = source(&nasty(text));
        let pdf = press.pdf(&source.text, &[]);
        assert!(
            pdf.is_ok(),
            "{text:?}: {}",
            source.explain(pdf.unwrap_err())
        );
        // Runs of another direction are set apart from their neighbours.
        let running = match text {
            _ if text.contains('ש') => "4.2".to_owned(),
            _ => bare(&format!(
                "{text} plain {text} emph {text} strong {text} aside {text}"
            )),
        };
        let found = set_text(&press.pages(&source.text).unwrap())
            .matches(&running)
            .count();
        assert!(found >= 27, "{text:?} is set {found} times");
    }
}

/// Long words break, long titles are cut in the head, wide tables wrap.
#[test]
fn long_text_stays_in_its_column() {
    let path =
        "joints/bridge/frames/the_bracket_at_the_foot_of_the_mast_on_frame_17.yaml".to_owned();
    for text in ["m".repeat(90), path, "many words ".repeat(12)] {
        let mut doc = nasty(&text);
        doc.verdict = sample::sample().verdict;
        doc.identity = Some("7f3a 91c2 08de".into());
        doc.state = "DRAFT".into();
        for section in &mut doc.sections {
            for block in &mut section.blocks {
                // Labels and units are the program's own and short.
                if let Block::Items { items } = block {
                    items.iter_mut().for_each(|item| item.label = "A1".into());
                } else if let Block::Table(table) = block {
                    table.columns[1].unit = sample::t("mm");
                }
            }
        }
        let pages = Press::new().pages(&source(&doc).text).unwrap();
        let strays = overflow(&pages);
        if let Some(dir) = std::env::var_os("SEAMNOTE_SHOW") {
            let pdf = Press::new().pdf(&source(&doc).text, &[]).unwrap();
            std::fs::write(std::path::Path::new(&dir).join("long.pdf"), pdf.bytes).unwrap();
        }
        assert!(
            strays.is_empty(),
            "{} strays, first {:#?}",
            strays.len(),
            &strays[..strays.len().min(6)]
        );
    }
}

/// The text that Markdown shows, block by block, ends trimmed.
fn shown(markdown: &str) -> Vec<String> {
    use pulldown_cmark::{Event, Options, Parser, Tag, TagEnd};
    let options = Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH | Options::ENABLE_MATH;
    let mut blocks = vec![String::new()];
    for event in Parser::new_ext(markdown, options) {
        match event {
            Event::Text(text) => blocks.last_mut().unwrap().push_str(&text),
            Event::InlineHtml(tag) => assert!(
                tag.starts_with("<a id=\"")
                    || ["</a>", "<em>", "</em>", "<strong>", "</strong>"].contains(&&*tag),
                "text became the tag {tag}"
            ),
            Event::Start(Tag::Paragraph | Tag::Heading { .. } | Tag::TableCell | Tag::Item)
            | Event::End(
                TagEnd::Paragraph | TagEnd::Heading(_) | TagEnd::TableCell | TagEnd::Item,
            ) => blocks.push(String::new()),
            Event::Start(
                Tag::Image { .. }
                | Tag::Link { .. }
                | Tag::Emphasis
                | Tag::Strong
                | Tag::Table(_)
                | Tag::TableHead
                | Tag::TableRow
                | Tag::List(None)
                | Tag::BlockQuote(_),
            )
            | Event::End(_)
            | Event::InlineMath(_)
            | Event::DisplayMath(_) => {}
            other => panic!("text became {other:?}"),
        }
    }
    blocks
        .into_iter()
        .map(|b| b.trim().to_owned())
        .filter(|b| !b.is_empty())
        .collect()
}

#[test]
fn nasty_text_reads_as_typed_in_markdown() {
    for text in NASTY {
        let markdown = render_markdown(&nasty(text)).unwrap();
        let blocks = shown(&markdown);
        let running = format!("{text} plain {text} emph {text} strong {text} aside {text}");
        let count = |wanted: &str| blocks.iter().filter(|b| b.contains(wanted)).count();
        // Verdict, paragraph, figure, 9 steps, 3 items, 4 captions, 4 heads, 4 units.
        assert_eq!(
            count(running.trim()),
            27,
            "{text:?} as running text in\n{markdown}\n{blocks:#?}"
        );
        let cells = blocks.iter().filter(|b| *b == text.trim()).count();
        // Title, a heading, 9 cells, a role, an image's alternative text stands with its figure.
        assert!(
            cells >= 11,
            "{text:?} stands alone {cells} times in\n{markdown}\n{blocks:#?}"
        );
    }
}

#[test]
fn markdown_text_alone_is_a_paragraph_of_itself() {
    for text in NASTY {
        assert_eq!(shown(&markdown_text(text)), [text.trim()], "{text:?}");
    }
}

/// The texts of a frame with their sizes (pt).
fn texts(frame: &Frame, out: &mut Vec<(String, f64)>) {
    for (_, item) in frame.items() {
        match item {
            FrameItem::Group(group) => texts(&group.frame, out),
            FrameItem::Text(text) => out.push((text.text.to_string(), text.size.to_pt())),
            FrameItem::Shape(..)
            | FrameItem::Image(..)
            | FrameItem::Link(..)
            | FrameItem::Tag(_) => {}
        }
    }
}

/// Columns that no line holds stand in bands, each led by number and name of the rows; no number is
/// lost or set twice, and none is smaller than the least size.
#[test]
fn a_table_too_wide_for_the_line_stands_in_bands() {
    const LEAST: f64 = 7.5;
    for (numbers, bands) in [(5, 1), (9, 2), (14, 3), (30, 5)] {
        let mut doc = sample::sample();
        let table = sample::wide_table(numbers);
        doc.sections[0].blocks.push(Block::Table(table));
        let document = Press::new().pages(&source(&doc).text).unwrap();
        assert_eq!(overflow(&document), [], "{numbers} columns");
        let mut found = Vec::new();
        for page in document.pages() {
            texts(&page.frame, &mut found);
        }
        for run in 1..=3 {
            let times = |wanted: &str| {
                found
                    .iter()
                    .filter(|(text, _)| text.ends_with(wanted))
                    .count()
            };
            let leads = times(&format!("flange {run}"));
            assert_eq!(leads, bands, "{numbers} columns, run {run}");
            for at in 1..=numbers {
                let number = format!("−{run}{at:02}.123456");
                assert_eq!(times(&number), 1, "{number} of {numbers} columns");
            }
        }
        let in_table = found.iter().filter(|(text, _)| text.contains(".123456"));
        let least = in_table
            .map(|(_, size)| *size)
            .fold(f64::INFINITY, f64::min);
        assert!(least >= LEAST, "{least} pt in {numbers} columns");
    }
}
