//! Drawings of the joint: from a [`Scene`] to lines and labels, and to typst source.
//!
//! Thin black lines; runs as thick as their throats; open heads for loads, filled ones for axes,
//! oblique ticks for dimensions. Labels stand where their boxes, from the face's real metrics,
//! touch nothing. The drawing computes no quantity that is printed; it is pure and deterministic.

mod canvas;
mod compose;
mod dimension;
mod drawing;
mod from_note;
mod load;
mod place;
mod points;
mod rect;
mod runs;
mod scale;
mod scene;
mod section;
mod shape;
mod source;
mod text;
mod triad;
mod unfolded;
mod vectors;
mod view;

pub use canvas::firm_strokes;
pub use compose::{Room, draw, draw_in};
pub use drawing::{
    Dash, Drawing, Fill, Ink, Item, Label, Mark, MarkKind, P2, Path, Piece, Span, Stroke, Style,
    Tie,
};
pub use from_note::{draw_note, draw_picture, scene, stress_scene};
pub use rect::{Bounds, Rect};
pub use scene::{Axis, CheckPoint, Component, Dimension, Governing, Load, RunLine, Scene, Vectors};
pub use section::draw_sections;
pub use source::{standalone_source, typst_source};
pub use text::{Face, Measure, SerifFaces, TextWidth};
pub use unfolded::draw_unfolded;

/// A typographic point in mm: 1/72 in, 1 in = 25.4 mm.
pub const PT: f64 = 25.4 / 72.0;
