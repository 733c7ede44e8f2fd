//! A typst source becomes pages, the pages a PDF/A-3b and PDF/UA-1 file or an SVG drawing.
//!
//! The date of issue stands in the source (`set document`), so the bytes depend on nothing else.

use typst::diag::SourceDiagnostic;
use typst::ecow::EcoVec;
use typst::foundations::{Bytes, Smart};
use typst::{World, WorldExt};
use typst_layout::PagedDocument;
use typst_pdf::{PdfOptions, PdfStandard, PdfStandards};

use super::error::{RenderError, TypesetFault};
use super::escape::typst_string;
use super::links::resolve_links;
use super::world::{Job, Press, attachment_path};

/// A file that travels inside the PDF.
#[derive(Clone, Debug)]
pub struct Attachment {
    /// File name without folders.
    pub name: String,
    /// Media type, such as `application/yaml`.
    pub mime: String,
    /// What the file is to the note.
    pub relation: Relation,
    /// One line on what it is.
    pub description: String,
    /// Its content.
    pub bytes: Vec<u8>,
}

/// What an attached file is to the note, in the words of ISO 32000-2 (AFRelationship).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Relation {
    /// The note was made from it.
    Source,
    /// It holds the data that the note shows.
    Data,
}

/// Documents for which results of the typesetter are remembered: those that other threads set at
/// the same time must not lose theirs.
const MEMORY: usize = 4;

/// Sets each line on a page of its own size; links keep their ids.
const MEASURING: &str = r#"
#let n(id, mantissa, ..exponent) = linked((:), id, mantissa, exponent.pos().at(0, default: ""))
#set page(width: auto, height: auto, margin: 0pt)
#show: style
"#;

/// The profiles of a note: PDF/A-3b, which asks for a date, and PDF/UA-1.
const ARCHIVED: [PdfStandard; 2] = [PdfStandard::A_3b, PdfStandard::Ua_1];

/// A finished PDF.
#[derive(Clone, Debug)]
pub struct Pdf {
    /// The file.
    pub bytes: Vec<u8>,
    /// Number of pages.
    pub pages: usize,
}

impl Press {
    /// Sets the source and exports it with its attachments.
    ///
    /// # Errors
    ///
    /// [`RenderError::Typeset`] if the typesetter refuses or warns, or if the file would not
    /// conform; [`RenderError::Unresolved`] if a link leads to no step.
    pub fn pdf(&self, source: &str, attachments: &[Attachment]) -> Result<Pdf, RenderError> {
        let text = format!("{source}{}", attach_calls(attachments));
        let bytes = attachments
            .iter()
            .map(|a| Bytes::new(a.bytes.clone()))
            .collect();
        finish(&Job::new(self, text, bytes), &ARCHIVED)
    }

    /// Sets a source without a date, such as a clause sheet, and exports it: no archival profile.
    ///
    /// # Errors
    ///
    /// As [`Press::pdf`].
    pub fn undated_pdf(&self, source: &str) -> Result<Pdf, RenderError> {
        let job = Job::new(self, source.to_owned(), Vec::new());
        finish(&job, &[PdfStandard::Ua_1])
    }

    /// Sets the source and exports its only page as SVG, text as outlines.
    ///
    /// # Errors
    ///
    /// [`RenderError::Typeset`] if the typesetter refuses or warns, or if there is not one page.
    pub fn svg(&self, source: &str) -> Result<String, RenderError> {
        let job = Job::new(self, source.to_owned(), Vec::new());
        let result = compile(&job).and_then(|document| match document.pages() {
            [page] => Ok(typst_svg::svg(page, &typst_svg::SvgOptions::default())),
            pages => Err(RenderError::Internal(format!(
                "a drawing of {} pages",
                pages.len()
            ))),
        });
        comemo::evict(MEMORY);
        result
    }

    /// Sets the source and exports one of its pages as SVG on white, text as outlines.
    ///
    /// # Errors
    ///
    /// As [`Press::pdf`]; [`RenderError::Internal`] if there is no such page.
    pub fn page_svg(&self, source: &str, page: usize) -> Result<String, RenderError> {
        let document = self.pages(source)?;
        let lost = || RenderError::Internal(format!("no page {}", page + 1));
        let page = document.pages().get(page).ok_or_else(lost)?;
        Ok(typst_svg::svg(page, &typst_svg::SvgOptions::default()))
    }

    /// Widths of lines of typst maths as the note's steps set them (pt).
    ///
    /// # Errors
    ///
    /// [`RenderError::Typeset`] if the typesetter refuses a line or warns about it.
    pub fn widths(&self, lines: &[&str]) -> Result<Vec<f64>, RenderError> {
        if lines.is_empty() {
            return Ok(Vec::new());
        }
        let mut text = include_str!("../../templates/page.typ").to_owned();
        text.push_str(MEASURING);
        for line in lines {
            text.push_str(&format!("#page[$ {line} $]\n"));
        }
        let job = Job::new(self, text, Vec::new());
        let result = compile(&job);
        comemo::evict(MEMORY);
        Ok(result?
            .pages()
            .iter()
            .map(|page| page.frame.width().to_pt())
            .collect())
    }

    /// Sets the source into pages with its links resolved, for checks of the layout.
    ///
    /// # Errors
    ///
    /// As [`Press::pdf`].
    pub fn pages(&self, source: &str) -> Result<PagedDocument, RenderError> {
        let job = Job::new(self, source.to_owned(), Vec::new());
        let result = compile(&job).and_then(|document| resolve_links(&document));
        comemo::evict(MEMORY);
        result
    }
}

/// Sets a source; a warning is a fault.
pub(super) fn compile(job: &Job<'_>) -> Result<PagedDocument, RenderError> {
    let warned = typst::compile::<PagedDocument>(job);
    let document = warned.output.map_err(|faults| complain(job, &faults))?;
    if warned.warnings.is_empty() {
        return Ok(document);
    }
    Err(complain(job, &warned.warnings))
}

/// Sets a source into pages, resolves their links and exports them in the given profiles.
fn finish(job: &Job<'_>, profiles: &[PdfStandard]) -> Result<Pdf, RenderError> {
    let result = compile(job)
        .and_then(|document| resolve_links(&document))
        .and_then(|document| export(job, &document, profiles));
    comemo::evict(MEMORY);
    result
}

/// Exports pages in the given profiles.
fn export(
    job: &Job<'_>,
    document: &PagedDocument,
    profiles: &[PdfStandard],
) -> Result<Pdf, RenderError> {
    let standards =
        PdfStandards::new(profiles).map_err(|e| RenderError::Internal(e.message().to_string()))?;
    let options = PdfOptions {
        ident: Smart::Custom(job.text().text().to_owned()),
        creator: Smart::Custom(Some("Seamnote".to_owned())),
        standards,
        ..PdfOptions::default()
    };
    let bytes = typst_pdf::pdf(document, &options).map_err(|faults| complain(job, &faults))?;
    Ok(Pdf {
        bytes,
        pages: document.pages().len(),
    })
}

/// The calls that embed the attachments; they print nothing.
fn attach_calls(attachments: &[Attachment]) -> String {
    let call = |(n, a): (usize, &Attachment)| {
        let relation = match a.relation {
            Relation::Source => "source",
            Relation::Data => "data",
        };
        format!(
            "\n#pdf.attach({}, read({}, encoding: none), relationship: {}, mime-type: {}, \
             description: {})",
            typst_string(&a.name),
            typst_string(&attachment_path(n)),
            typst_string(relation),
            typst_string(&a.mime),
            typst_string(&a.description),
        )
    };
    attachments.iter().enumerate().map(call).collect()
}

/// The typesetter's complaints as our own, with the line of the source.
fn complain(job: &Job<'_>, faults: &EcoVec<SourceDiagnostic>) -> RenderError {
    let fault = |d: &SourceDiagnostic| TypesetFault {
        message: d.message.to_string(),
        at: line_of(job, d),
        template: None,
        hints: d.hints.iter().map(|h| h.v.to_string()).collect(),
    };
    RenderError::Typeset(faults.iter().map(fault).collect())
}

/// The line of the source where a complaint stands, or where the call that led to it does.
fn line_of(job: &Job<'_>, fault: &SourceDiagnostic) -> Option<(usize, String)> {
    let range = job.range(fault.span)?;
    let source = job.source(job.main()).ok()?;
    let line = source.lines().byte_to_line(range.start)?;
    let text = source.text().lines().nth(line)?;
    Some((line + 1, text.to_owned()))
}
