//! Every equation of the Markdown notes parses in a mathematics renderer that is not ours, and the
//! PDF notes show what a reader of archives and of a screen asks for.

use crate::notes::demo;
use pulldown_cmark::{Event, Options, Parser};
use pulldown_latex::{Parser as Latex, RenderConfig, Storage, push_mathml};
use seamnote::criteria::built_in;
use seamnote::note::{doc::Block, sheet_page};

/// The MathML of an equation, or what the renderer says of it.
fn mathml(latex: &str) -> Result<String, String> {
    let storage = Storage::new();
    let parser = Latex::new(latex, &storage);
    let mut out = String::new();
    push_mathml(&mut out, parser, RenderConfig::default()).map_err(|fault| fault.to_string())?;
    if out.contains("<merror") {
        return Err(out);
    }
    Ok(out)
}

/// Source: the reading of LaTeX mathematics by a general-purpose library.
#[test]
fn every_equation_of_the_markdown_is_mathematics_to_others() {
    let mut read = 0;
    let mut wrong = Vec::new();
    for (joint, produced) in demo() {
        let output = produced
            .outputs
            .iter()
            .find(|output| output.name == "note.md");
        let markdown = std::str::from_utf8(&output.unwrap().bytes).unwrap();
        let options = Options::ENABLE_MATH | Options::ENABLE_TABLES;
        for event in Parser::new_ext(markdown, options) {
            if let Event::InlineMath(latex) | Event::DisplayMath(latex) = event {
                read += 1;
                if let Err(fault) = mathml(&latex) {
                    wrong.push(format!("{}: {latex}\n  {fault}", joint.stem));
                }
            }
        }
    }
    for sheet in built_in().sheets() {
        for block in sheet_page(sheet)
            .sections
            .iter()
            .flat_map(|section| &section.blocks)
        {
            if let Block::Step(step) = block {
                read += 1;
                if let Err(fault) = mathml(&step.latex) {
                    wrong.push(format!("{}: {}\n  {fault}", sheet.name.value, step.latex));
                }
            }
        }
    }
    assert!(read > 500, "only {read} equations");
    assert!(
        wrong.is_empty(),
        "{} of {read}:\n{}",
        wrong.len(),
        wrong.join("\n")
    );
    assert!(
        mathml(r"\frac{1}{").is_err(),
        "what is no mathematics is found"
    );
}

/// How often a name stands in a file.
fn count(file: &[u8], name: &str) -> usize {
    file.windows(name.len())
        .filter(|window| *window == name.as_bytes())
        .count()
}

/// Source: ISO 32000-1:2008, 14.7 and 14.8 (tags), 14.9.2 (language), 12.3.3 (outline), 9.9 (embedded
/// fonts); ISO 14289-1:2014, 7.1 (title shown); ISO 19005-3:2012, 6.6.4 (identification), 6.8
/// (attachments).
#[test]
fn the_pdf_is_tagged_titled_outlined_and_whole() {
    for (joint, produced) in demo() {
        let output = produced
            .outputs
            .iter()
            .find(|output| output.name == "note.pdf");
        let pdf = &output.unwrap().bytes;
        let has = |name: &str| count(pdf, name) > 0;
        let stem = &joint.stem;
        for name in [
            "/StructTreeRoot",
            "/Marked true",
            "/Lang(en-GB)",
            "/DisplayDocTitle true",
            "/Outlines",
            "/AFRelationship/Source",
            "/AFRelationship/Data",
            "<pdfaid:part>3</pdfaid:part>",
            "<pdfuaid:part>1</pdfuaid:part>",
        ] {
            assert!(has(name), "{stem}: no {name}");
        }
        let faces = count(pdf, "/Type/FontDescriptor");
        let embedded = count(pdf, "/FontFile3") + count(pdf, "/FontFile2");
        assert!(
            faces > 2 && faces == embedded,
            "{stem}: {embedded} of {faces} faces embedded"
        );
        let sections = produced.note.doc.sections.len();
        assert!(
            count(pdf, "/Dest") >= sections,
            "{stem}: an outline entry for each section"
        );
        for refused in ["/JavaScript", "/Launch", "/URI("] {
            assert!(!has(refused), "{stem}: {refused}");
        }
        // A page of a note takes less than a hundred kilobytes.
        let pages = count(pdf, "/Type/Page/") + count(pdf, "/Type/Page\n");
        assert!(
            pdf.len() < 120_000 * pages.max(4),
            "{stem}: {} bytes",
            pdf.len()
        );
    }
}
