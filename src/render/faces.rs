//! The embedded faces: which ones notes use, how wide text is in them, what they can print.

use std::sync::LazyLock;

use typst::layout::Abs;
use typst::text::{FontInstance, FontStretch, FontStyle, FontVariant, FontVariations, FontWeight};
use typst_kit::fonts::FontStore;

/// Families that notes use: text, maths, and the fallback of the text for rarer signs.
pub const FAMILIES: [&str; 3] = [
    "Libertinus Serif",
    "New Computer Modern Math",
    "DejaVu Sans Mono",
];

/// All faces of [`FAMILIES`], loaded once.
pub(super) static STORE: LazyLock<FontStore> = LazyLock::new(|| {
    let mut store = FontStore::new();
    let used = typst_kit::fonts::embedded();
    store.extend(used.filter(|(_, info)| FAMILIES.contains(&info.family.as_str())));
    store
});

static FACES: LazyLock<Faces> = LazyLock::new(|| Faces {
    regular: text_face(FontWeight::REGULAR, FontStyle::Normal),
    italic: text_face(FontWeight::REGULAR, FontStyle::Italic),
    bold: text_face(FontWeight::BOLD, FontStyle::Normal),
    bold_italic: text_face(FontWeight::BOLD, FontStyle::Italic),
});

/// A cut of the text face.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cut {
    /// Upright.
    Regular,
    /// Italic.
    Italic,
    /// Bold upright.
    Bold,
    /// Bold italic.
    BoldItalic,
}

struct Faces {
    regular: FontInstance,
    italic: FontInstance,
    bold: FontInstance,
    bold_italic: FontInstance,
}

fn text_face(weight: FontWeight, style: FontStyle) -> FontInstance {
    let variant = FontVariant::new(style, weight, FontStretch::NORMAL);
    let index = STORE.book().select(&FAMILIES[0].to_lowercase(), variant);
    let font = index
        .and_then(|i| STORE.font(i))
        .expect("the text family is embedded");
    font.instantiate(variant, Abs::pt(10.0), &FontVariations::default())
}

/// The embedded face of a cut, for figures that measure glyphs.
pub fn face(cut: Cut) -> &'static FontInstance {
    match cut {
        Cut::Regular => &FACES.regular,
        Cut::Italic => &FACES.italic,
        Cut::Bold => &FACES.bold,
        Cut::BoldItalic => &FACES.bold_italic,
    }
}

/// Width of a text on one line (ems of its size), without kerning.
///
/// A character that the text face lacks counts as one em, more than any fallback takes.
pub fn text_width(text: &str, cut: Cut) -> f64 {
    let ttf = face(cut).ttf();
    let em = f64::from(ttf.units_per_em());
    let advance = |c: char| {
        let glyph = ttf.glyph_index(c)?;
        Some(f64::from(ttf.glyph_hor_advance(glyph)?) / em)
    };
    let seen = text.chars().filter(|c| !takes_no_room(*c));
    seen.map(|c| advance(c).unwrap_or(1.0)).sum()
}

/// Whether a character only says where a line may break.
const fn takes_no_room(c: char) -> bool {
    matches!(
        c,
        '\u{ad}' | '\u{200b}'..='\u{200d}' | '\u{2060}' | '\u{feff}'
    )
}

/// Whether the note can print the character as itself, without reordering its neighbours.
///
/// Directional controls are refused because they make a printed number differ from the typed one.
#[must_use]
pub fn prints(c: char) -> bool {
    match c {
        '\n' | '\r' | '\t' => true,
        c if takes_no_room(c) => true,
        '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' => false,
        c if c.is_control() => false,
        c => covered(c, FAMILIES[0]) || covered(c, FAMILIES[2]),
    }
}

fn covered(c: char, family: &str) -> bool {
    let book = STORE.book();
    book.select_family(&family.to_lowercase())
        .filter_map(|index| book.info(index))
        .any(|info| info.coverage.contains(u32::from(c)))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The decimal alignment of tables rests on digits of one width.
    #[test]
    fn digits_share_one_width() {
        for cut in [Cut::Regular, Cut::Bold] {
            let zero = text_width("0", cut);
            for d in '1'..='9' {
                let miss = (text_width(&d.to_string(), cut) - zero).abs();
                assert!(miss < 1e-12, "{d} in {cut:?} is not as wide as 0");
            }
        }
    }

    #[test]
    fn only_printable_text_passes() {
        for c in "aÄ−×·°²ψβא‖⟂≤\n".chars() {
            assert!(prints(c), "{c:?} is refused");
        }
        for c in ['\u{0}', '\u{202e}', '\u{2067}', '中', '\u{1f600}'] {
            assert!(!prints(c), "{c:?} passes");
        }
    }
}
