//! The templates of a note and the engine that fills them.

use minijinja::syntax::SyntaxConfig;
use minijinja::{AutoEscape, Environment, Error, Output, State, UndefinedBehavior, Value};

use super::error::RenderError;

/// Steps that a template may take, a bound on the loops of a user's own; a large note takes some
/// hundred thousand.
const FUEL: u64 = 50_000_000;

/// The templates of a note.
#[derive(Clone, Debug)]
pub struct Templates {
    /// The note as typst source.
    pub note_typ: String,
    /// Its page functions, included by it.
    pub page_typ: String,
    /// The note as Markdown.
    pub note_md: String,
}

impl Default for Templates {
    fn default() -> Self {
        Self {
            note_typ: include_str!("../../templates/note.typ").to_owned(),
            page_typ: include_str!("../../templates/page.typ").to_owned(),
            note_md: include_str!("../../templates/note.md").to_owned(),
        }
    }
}

/// How an engine writes values.
type Format = fn(&mut Output<'_>, &mut State<'_, '_>, &Value) -> Result<(), Error>;

/// An engine whose delimiters leave the braces of typst and LaTeX alone.
pub(super) fn environment<'a>(format: Format) -> Result<Environment<'a>, RenderError> {
    let syntax = SyntaxConfig::builder()
        .block_delimiters("<%", "%>")
        .variable_delimiters("<<", ">>")
        .comment_delimiters("<#", "#>")
        .trim_blocks(true)
        .lstrip_blocks(true)
        .build()
        .map_err(template_error)?;
    let mut env = Environment::new();
    env.set_syntax(syntax);
    env.set_fuel(Some(FUEL));
    env.set_undefined_behavior(UndefinedBehavior::Strict);
    env.set_auto_escape_callback(|_| AutoEscape::Custom("own".into()));
    env.set_formatter(format);
    env.add_filter("raw", |text: String| Value::from_safe_string(text));
    Ok(env)
}

/// A fault of a template with its place.
pub(super) fn template_error(error: Error) -> RenderError {
    RenderError::Template {
        name: error.name().unwrap_or("note").to_owned(),
        line: error.line(),
        message: format!("{error:#}"),
    }
}
