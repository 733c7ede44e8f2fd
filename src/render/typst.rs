//! The note as typst source, from the templates.
//!
//! The formatter turns every string into a typst string literal; maths and drawings, which are
//! typst already, are asked for by the filter `raw`.

use std::collections::BTreeSet;

use minijinja::value::{Serde, ValueKind};
use minijinja::{Error, ErrorKind, Output, OutputSpan, State, Value};

use crate::note::doc::Doc;

use super::error::{RenderError, TypesetFault};
use super::escape::typst_string;
use super::faces::prints;
use super::fit::soften;
use super::templates::{Templates, environment, template_error};
use super::view::{Drawings, MARGIN_ROOM, view};

/// Widest word that a line of running text takes without a place to break (ems).
const WORD_ROOM: f64 = 40.0;

/// A typst source that knows which template line wrote each part of it.
#[derive(Clone, Debug)]
pub struct TypstSource {
    /// The source.
    pub text: String,
    /// Starts of the parts (byte of the source), with template and line there.
    places: Vec<(usize, String, usize)>,
}

impl TypstSource {
    fn new(text: String, spans: &[OutputSpan]) -> Self {
        let place = |span: &OutputSpan| {
            let start = span.output_range().start;
            (start, span.name().to_owned(), span.line())
        };
        let places = spans.iter().map(place).collect();
        Self { text, places }
    }

    /// The error with the template line beside each line of the source.
    pub fn explain(&self, error: RenderError) -> RenderError {
        let RenderError::Typeset(faults) = error else {
            return error;
        };
        let placed = |mut fault: TypesetFault| {
            let line = fault.at.as_ref().map(|(line, _)| *line);
            fault.template = line.and_then(|line| self.template_line(line));
            fault
        };
        RenderError::Typeset(faults.into_iter().map(placed).collect())
    }

    /// Template and line that wrote the first text of a line of the source.
    fn template_line(&self, line: usize) -> Option<(String, usize)> {
        let before = self.text.split_inclusive('\n').take(line.checked_sub(1)?);
        let start: usize = before.map(str::len).sum();
        let indent = self.text[start..].find(|c: char| c == '\n' || !c.is_whitespace());
        let at = start + indent.unwrap_or(0);
        let after = self.places.partition_point(|(start, ..)| *start <= at);
        let (start, name, first) = self.places.get(after.checked_sub(1)?)?;
        let passed = self.text[*start..at].matches('\n').count();
        Some((name.clone(), first + passed))
    }
}

impl Templates {
    /// The note as typst source, ready for [`super::Press::pdf`].
    ///
    /// # Errors
    ///
    /// [`RenderError::Template`] if a template is at fault; [`RenderError::Glyphs`] if the note
    /// holds characters that no face prints; [`RenderError::Internal`] if a drawing is missing.
    pub fn typst(&self, doc: &Doc, drawings: &Drawings) -> Result<TypstSource, RenderError> {
        let view = view(doc, Some(drawings))?;
        check_glyphs(&view)?;
        let mut env = environment(format_typst)?;
        let room = |room: Option<f64>| room.unwrap_or(WORD_ROOM);
        env.add_filter("soft", move |text: String, ems: Option<f64>| {
            soften(&text, room(ems))
        });
        env.add_global("margin_room", MARGIN_ROOM);
        env.add_template("page.typ", &self.page_typ)
            .map_err(template_error)?;
        env.add_template("note.typ", &self.note_typ)
            .map_err(template_error)?;
        let template = env.get_template("note.typ").map_err(template_error)?;
        let (text, spans) = template
            .render_with_spans(Serde(&view))
            .map_err(template_error)?;
        Ok(TypstSource::new(text, &spans))
    }
}

/// The note as typst source by the built-in templates.
///
/// # Errors
///
/// As [`Templates::typst`].
pub fn render_typst(doc: &Doc, drawings: &Drawings) -> Result<TypstSource, RenderError> {
    Templates::default().typst(doc, drawings)
}

/// Writes a value as typst code.
fn format_typst(out: &mut Output<'_>, _: &mut State<'_, '_>, value: &Value) -> Result<(), Error> {
    let written = match value.kind() {
        ValueKind::String if value.is_safe() => value.to_string(),
        ValueKind::String => typst_string(value.as_str().unwrap_or_default()),
        ValueKind::Number => value.to_string(),
        ValueKind::Bool => value.is_true().to_string(),
        ValueKind::None => "none".to_owned(),
        kind => {
            let message = format!("a {kind} cannot be printed; print its parts");
            return Err(Error::new(ErrorKind::InvalidOperation, message));
        }
    };
    out.write_str(&written).map_err(Error::from)
}

/// Refuses text that the faces cannot print as typed.
fn check_glyphs(view: &serde_json::Value) -> Result<(), RenderError> {
    let mut missing = BTreeSet::new();
    collect_missing(view, &mut missing);
    if missing.is_empty() {
        return Ok(());
    }
    Err(RenderError::Glyphs(missing.into_iter().collect()))
}

fn collect_missing(value: &serde_json::Value, missing: &mut BTreeSet<char>) {
    match value {
        serde_json::Value::String(text) => missing.extend(text.chars().filter(|c| !prints(*c))),
        serde_json::Value::Array(list) => list.iter().for_each(|v| collect_missing(v, missing)),
        serde_json::Value::Object(map) => {
            let printed = map.iter().filter(|(key, value)| !is_code(key, value));
            printed.for_each(|(_, v)| collect_missing(v, missing));
        }
        serde_json::Value::Null | serde_json::Value::Bool(_) | serde_json::Value::Number(_) => {}
    }
}

/// Whether a value is not printed as text: code with faces of its own, or words read aloud.
fn is_code(key: &str, value: &serde_json::Value) -> bool {
    value.is_string() && ["typst", "latex", "source", "words", "alt"].contains(&key)
}
