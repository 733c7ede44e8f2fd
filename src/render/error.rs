//! What can go wrong when a note is set: faults of templates and sources, and their places.

use std::fmt;

/// A fault of rendering.
#[derive(Clone, Debug, PartialEq)]
pub enum RenderError {
    /// A template does not parse, or asks for a value that is not there.
    Template {
        /// File name of the template.
        name: String,
        /// Line in it, one-based, if known.
        line: Option<usize>,
        /// What is wrong.
        message: String,
    },
    /// The typesetter refused the source or warned about it.
    Typeset(Vec<TypesetFault>),
    /// Links lead to steps that the note does not hold.
    Unresolved(Vec<String>),
    /// Characters that no face of the note has, or that would reorder the text around them.
    Glyphs(Vec<char>),
    /// The typesetter was given up after so many seconds.
    TooLong(f64),
    /// The program's own fault.
    Internal(String),
}

/// A complaint of the typesetter.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TypesetFault {
    /// What is wrong.
    pub message: String,
    /// Line of the typst source, one-based, and the text of that line.
    pub at: Option<(usize, String)>,
    /// Template and its line that wrote that line, if known.
    pub template: Option<(String, usize)>,
    /// What would help.
    pub hints: Vec<String>,
}

impl fmt::Display for RenderError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Template {
                name,
                line: Some(line),
                message,
            } => {
                write!(f, "template {name}, line {line}: {message}")
            }
            Self::Template {
                name,
                line: None,
                message,
            } => {
                write!(f, "template {name}: {message}")
            }
            Self::Typeset(faults) => {
                let lines: Vec<_> = faults.iter().map(ToString::to_string).collect();
                write!(f, "{}", lines.join("\n"))
            }
            Self::Unresolved(links) => {
                write!(f, "links that lead nowhere: {}", links.join(", "))
            }
            Self::Glyphs(chars) => {
                let list: Vec<_> = chars.iter().map(|c| name_char(*c)).collect();
                write!(f, "the note's faces cannot print {}", list.join(", "))
            }
            Self::TooLong(limit) => {
                write!(f, "the note is not set after {} s", limit)
            }
            Self::Internal(message) => write!(f, "internal fault: {message}"),
        }
    }
}

impl std::error::Error for RenderError {}

impl fmt::Display for TypesetFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "typesetting: {}", self.message)?;
        if let Some((line, text)) = &self.at {
            write!(f, "\n  at line {line} of the source: {}", text.trim())?;
        }
        if let Some((name, line)) = &self.template {
            write!(f, "\n  written by template {name}, line {line}")?;
        }
        for hint in &self.hints {
            write!(f, "\n  help: {hint}")?;
        }
        Ok(())
    }
}

/// A character as its code point, with itself where it is safe to show.
fn name_char(c: char) -> String {
    let code = format!("U+{:04X}", u32::from(c));
    if c.is_alphanumeric() {
        format!("`{c}` ({code})")
    } else {
        code
    }
}
