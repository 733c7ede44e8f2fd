//! Rendering: the document as data becomes Markdown, typst source, PDF and SVG.
//!
//! Computes no number; sets what the document holds. Nothing here reads files or the clock.

mod check;
mod columns;
mod drawings;
mod error;
mod escape;
mod faces;
mod fit;
mod links;
mod markdown;
mod pdf;
mod templates;
mod typst;
mod view;
mod widths;
mod world;

pub use self::typst::{TypstSource, render_typst};
pub use check::{Fault, Stray, overflow};
pub use error::{RenderError, TypesetFault};
pub use escape::{markdown_text, typst_string};
pub use faces::{Cut, FAMILIES, face, prints, text_width};
pub use markdown::render_markdown;
pub use pdf::{Attachment, Pdf, Relation};
pub use templates::Templates;
pub use view::{Drawings, EQUATION_WIDTH, TEXT_WIDTH};
pub use world::Press;
