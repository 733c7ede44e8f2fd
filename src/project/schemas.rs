//! The schemas that the program publishes, for editors and for machines.

use crate::criteria::{built_in, keys::SHEET};
use crate::joint::keys::{JOINT, PROJECT};
use crate::note::TRACE_SCHEMA;
use crate::source::schema;
use serde_json::Value;

/// What a schema is of.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum SchemaKind {
    /// A joint file.
    Joint,
    /// A project file.
    Project,
    /// A clause sheet.
    Sheet,
    /// The trace of a note.
    Trace,
}

impl SchemaKind {
    /// The name of its file among `schemas`.
    #[must_use]
    pub const fn file_name(self) -> &'static str {
        match self {
            Self::Joint => "joint.schema.json",
            Self::Project => "project.schema.json",
            Self::Sheet => "sheet.schema.json",
            Self::Trace => "trace.schema.json",
        }
    }
}

/// The text of a published schema, with a line end.
#[must_use]
pub fn published(kind: SchemaKind) -> String {
    match kind {
        SchemaKind::Joint => pretty(&with_sheets(schema(&JOINT, "Seamnote joint file"))),
        SchemaKind::Project => pretty(&with_sheets(schema(&PROJECT, "Seamnote project file"))),
        SchemaKind::Sheet => pretty(&schema(&SHEET, "Seamnote clause sheet")),
        SchemaKind::Trace => format!("{}\n", TRACE_SCHEMA.trim_end()),
    }
}

/// Adds the names of built-in sheets, which an editor offers; others stay allowed.
fn with_sheets(mut schema: Value) -> Value {
    let names = built_in()
        .sheets()
        .map(|sheet| Value::from(sheet.name.value.as_str()));
    let names: Value = names.collect();
    schema["$defs"]["a-check"]["properties"]["clause"]["examples"] = names;
    schema
}

fn pretty(schema: &Value) -> String {
    format!("{schema:#}\n")
}
