//! The note as Markdown, from its template.
//!
//! The formatter escapes every string so that it reads as typed; maths and anchors are asked for by
//! the filter `raw`.

use std::collections::BTreeSet;

use minijinja::value::{Serde, ValueKind};
use minijinja::{Error, ErrorKind, Output, State, Value};

use crate::note::doc::Doc;

use super::error::RenderError;
use super::escape::{markdown_marked, markdown_text};
use super::templates::{Templates, environment, template_error};
use super::view::view;

impl Templates {
    /// The note as Markdown.
    ///
    /// # Errors
    ///
    /// [`RenderError::Template`] if the template is at fault; [`RenderError::Unresolved`] if a link
    /// leads to no step.
    pub fn markdown(&self, doc: &Doc) -> Result<String, RenderError> {
        let view = view(doc, None)?;
        check_links(&view)?;
        let mut env = environment(format_markdown)?;
        env.add_filter("emph", |text: String| mark(&text, "*"));
        env.add_filter("bold", |text: String| mark(&text, "**"));
        env.add_filter("in_cell", |latex: String| latex.replace('|', "\\|"));
        env.add_template("note.md", &self.note_md)
            .map_err(template_error)?;
        let template = env.get_template("note.md").map_err(template_error)?;
        let text = template.render(Serde(&view)).map_err(template_error)?;
        Ok(tidy(&text))
    }
}

/// The note as Markdown by the built-in template.
///
/// # Errors
///
/// As [`Templates::markdown`].
pub fn render_markdown(doc: &Doc) -> Result<String, RenderError> {
    Templates::default().markdown(doc)
}

/// Refuses links that lead nowhere.
fn check_links(view: &serde_json::Value) -> Result<(), RenderError> {
    let mut lost = BTreeSet::new();
    collect_lost(view, &mut lost);
    if lost.is_empty() {
        return Ok(());
    }
    Err(RenderError::Unresolved(lost.into_iter().collect()))
}

/// Links carry the id that they look for, and the anchor that was found for it or null.
fn collect_lost(value: &serde_json::Value, lost: &mut BTreeSet<String>) {
    match value {
        serde_json::Value::Array(list) => list.iter().for_each(|v| collect_lost(v, lost)),
        serde_json::Value::Object(map) => {
            let wanted = map.get("link").and_then(serde_json::Value::as_str);
            if let (Some(id), Some(serde_json::Value::Null)) = (wanted, map.get("anchor")) {
                lost.insert(id.to_owned());
            }
            map.values().for_each(|v| collect_lost(v, lost));
        }
        serde_json::Value::Null
        | serde_json::Value::Bool(_)
        | serde_json::Value::Number(_)
        | serde_json::Value::String(_) => {}
    }
}

fn mark(text: &str, sign: &str) -> Value {
    Value::from_safe_string(markdown_marked(text, sign))
}

/// Writes a value as Markdown.
fn format_markdown(
    out: &mut Output<'_>,
    _: &mut State<'_, '_>,
    value: &Value,
) -> Result<(), Error> {
    let written = match value.kind() {
        ValueKind::String if value.is_safe() => value.to_string(),
        ValueKind::String => markdown_text(value.as_str().unwrap_or_default()),
        ValueKind::Number => value.to_string(),
        kind => {
            let message = format!("a {kind} cannot be printed; print its parts");
            return Err(Error::new(ErrorKind::InvalidOperation, message));
        }
    };
    out.write_str(&written).map_err(Error::from)
}

/// One blank line between blocks, none at the end, no blanks at ends of lines.
fn tidy(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut blank = true;
    for line in text.lines().map(str::trim_end) {
        if !line.is_empty() {
            out.push_str(line);
            out.push('\n');
        } else if !blank {
            out.push('\n');
        }
        blank = line.is_empty();
    }
    out.truncate(out.trim_end().len());
    out.push('\n');
    out
}
