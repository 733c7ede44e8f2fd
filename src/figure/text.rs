//! Sizes of labels from the metrics of the real faces.
//!
//! The room asks for widths through [`TextWidth`], so that it needs no font file itself;
//! [`SerifFaces`] answers from the embedded text face.

use typst::layout::Abs;
use typst::text::{Font, FontInstance, FontVariant, FontVariations};

use super::drawing::{Label, P2, Span, Style};
use super::rect::Rect;

/// Family that the labels are set in.
pub(super) const FAMILY: &str = "Libertinus Serif";
/// Size of the labels (pt).
pub(super) const SIZE_PT: f64 = 8.0;
/// Size of a subscript, as a part of the text around it.
pub(super) const SUB_SIZE: f64 = 0.7;
/// Drop of a subscript's baseline, in ems of the text around it.
pub(super) const SUB_DROP: f64 = 0.2;
/// Longest label (mm); longer ones end in an ellipsis.
pub(super) const LONGEST: f64 = 62.0;

/// A face of the text family.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Face {
    /// Upright.
    Regular,
    /// Italic.
    Italic,
    /// Bold.
    Bold,
}

/// Measure of a piece of text, in ems.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measure {
    /// Sum of the advances.
    pub width: f64,
    /// Highest ink above the baseline.
    pub rise: f64,
    /// Deepest ink below the baseline, positive down.
    pub fall: f64,
}

/// Whoever knows how wide a text is.
pub trait TextWidth {
    /// Measures a piece of text in a face.
    fn measure(&self, text: &str, face: Face) -> Measure;
}

/// The embedded serif, in the three faces that drawings use.
#[derive(Clone, Debug)]
pub struct SerifFaces {
    regular: FontInstance,
    italic: FontInstance,
    bold: FontInstance,
}

impl SerifFaces {
    /// Takes the faces from the fonts given, by family, slant and weight; `None` if one is missing.
    #[must_use]
    pub fn among(fonts: &[Font]) -> Option<Self> {
        let face = |italic: bool, weight: u16| {
            fonts.iter().find_map(|font| {
                let info = font.info();
                let variant = info.variant;
                let slanted = variant.style != typst::text::FontStyle::Normal;
                (info.family == FAMILY && slanted == italic && variant.weight.to_number() == weight)
                    .then(|| instance(font))
            })
        };
        Some(Self {
            regular: face(false, 400)?,
            italic: face(true, 400)?,
            bold: face(false, 700)?,
        })
    }

    /// The faces embedded in the program; `None` only if the build left them out.
    #[must_use]
    pub fn embedded() -> Option<Self> {
        let fonts: Vec<Font> = typst_kit::fonts::embedded().map(|(font, _)| font).collect();
        Self::among(&fonts)
    }
}

fn instance(font: &Font) -> FontInstance {
    font.clone().instantiate(
        FontVariant::default(),
        Abs::pt(SIZE_PT),
        &FontVariations::default(),
    )
}

impl TextWidth for SerifFaces {
    fn measure(&self, text: &str, face: Face) -> Measure {
        let font = match face {
            Face::Regular => &self.regular,
            Face::Italic => &self.italic,
            Face::Bold => &self.bold,
        };
        let ttf = font.ttf();
        let em = font.units_per_em();
        let mut out = Measure {
            width: 0.0,
            rise: 0.0,
            fall: 0.0,
        };
        for c in text.chars() {
            // A glyph the face lacks is set from another one; an em is wider than any letter's mean.
            let Some(glyph) = ttf.glyph_index(c) else {
                out = Measure {
                    width: out.width + 1.0,
                    rise: out.rise.max(0.8),
                    fall: out.fall.max(0.25),
                };
                continue;
            };
            out.width += f64::from(ttf.glyph_hor_advance(glyph).unwrap_or(0)) / em;
            if let Some(ink) = ttf.glyph_bounding_box(glyph) {
                out.rise = out.rise.max(f64::from(ink.y_max) / em);
                out.fall = out.fall.max(-f64::from(ink.y_min) / em);
            }
        }
        out
    }
}

/// Pieces of a text that may begin with a symbol and its index, such as `x_c = 16.2`.
pub(super) fn symbol_spans(text: &str) -> Vec<Span> {
    match text.split_once(' ') {
        Some((name, rest)) if name.contains('_') || rest.starts_with('=') => {
            let mut spans = symbol(name);
            spans.push(Span::new(format!(" {rest}"), Style::Plain));
            spans
        }
        _ => vec![Span::new(text, Style::Plain)],
    }
}

/// A symbol such as `t` or `t_a`.
pub(super) fn symbol(name: &str) -> Vec<Span> {
    match name.split_once('_') {
        Some((letter, index)) => vec![
            Span::new(letter, Style::Italic),
            Span::new(index, Style::Sub),
        ],
        None => vec![Span::new(name, Style::Italic)],
    }
}

/// A label not yet placed: its pieces and its size in mm.
#[derive(Clone, Debug)]
pub(super) struct Words {
    pub(super) spans: Vec<Span>,
    pub(super) width: f64,
    pub(super) rise: f64,
    pub(super) fall: f64,
    /// Radius of the ring around it (mm); 0 for none.
    pub(super) ring: f64,
}

impl Words {
    /// Measures the pieces; a label longer than [`LONGEST`] loses the end of its longest piece.
    pub(super) fn new(spans: Vec<Span>, fonts: &dyn TextWidth) -> Self {
        let mut words = Self::measured(spans, fonts);
        while words.width > LONGEST {
            let longest = words
                .spans
                .iter_mut()
                .max_by_key(|s| s.text.chars().count());
            let Some(span) = longest.filter(|s| s.text.chars().count() > 2) else {
                break;
            };
            let keep = span.text.chars().count() - 2;
            let kept: String = span.text.chars().take(keep).collect();
            span.text = format!("{}…", kept.trim_end());
            words = Self::measured(words.spans, fonts);
        }
        words
    }

    fn measured(spans: Vec<Span>, fonts: &dyn TextWidth) -> Self {
        let em = SIZE_PT * super::PT;
        let mut words = Self {
            spans,
            width: 0.0,
            rise: 0.0,
            fall: 0.0,
            ring: 0.0,
        };
        for span in &words.spans {
            let (face, size, drop) = match span.style {
                Style::Plain => (Face::Regular, em, 0.0),
                Style::Italic => (Face::Italic, em, 0.0),
                Style::Bold => (Face::Bold, em, 0.0),
                Style::Sub => (Face::Italic, em * SUB_SIZE, em * SUB_DROP),
            };
            let m = fonts.measure(&span.text, face);
            words.width += m.width * size;
            words.rise = words.rise.max(m.rise * size - drop);
            words.fall = words.fall.max(m.fall * size + drop);
        }
        words
    }

    /// The same within a ring.
    pub(super) fn ringed(self, ring: f64) -> Self {
        Self { ring, ..self }
    }

    /// Width and height of the box.
    pub(super) fn size(&self) -> [f64; 2] {
        [
            self.width.max(2.0 * self.ring),
            (self.rise + self.fall).max(2.0 * self.ring),
        ]
    }

    /// The box with its centre at a place.
    pub(super) fn rect(&self, centre: P2, angle: f64) -> Rect {
        let (along, _) = Label::directions(angle);
        Rect {
            centre,
            along,
            half: self.size().map(|side| side / 2.0),
        }
    }

    /// The label with the centre of its box at a place.
    pub(super) fn label(&self, centre: P2, angle: f64) -> Label {
        let (along, up) = Label::directions(angle);
        Label {
            spans: self.spans.clone(),
            at: centre - along * (self.width / 2.0) - up * ((self.rise - self.fall) / 2.0),
            angle,
            width: self.width,
            rise: self.rise,
            fall: self.fall,
        }
    }

    /// The text without styles.
    pub(super) fn text(&self) -> String {
        self.spans.iter().map(|s| s.text.as_str()).collect()
    }
}
