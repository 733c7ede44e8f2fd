//! The drawing as typst source: one code expression, or a page of its own.
//!
//! Text goes in as string literals, so that nothing a user typed is read as markup. Lengths are in
//! mm with three decimals.

use std::fmt::Write as _;

use super::drawing::{Dash, Drawing, Fill, Ink, Item, Label, Path, Piece, Span, Stroke, Style};
use super::text::{FAMILY, SIZE_PT, SUB_DROP, SUB_SIZE};

/// Margin of a page of its own (mm).
const MARGIN: f64 = 2.0;

/// The drawing as a typst code expression: a box of the drawing's size.
///
/// It sets its own face, size and paragraph shape, so that the page around it does not change it.
/// It holds shapes and text only, no maths; alternative text belongs to the figure around it.
#[must_use]
pub fn typst_source(drawing: &Drawing) -> String {
    let mut out = String::new();
    let (w, h) = (mm(drawing.width_mm), mm(drawing.height_mm));
    let _ = writeln!(out, "box(width: {w}, height: {h}, {{");
    let _ = writeln!(
        out,
        "  set text(font: {}, size: {SIZE_PT}pt, fill: black, weight: 400, style: \"normal\", \
         top-edge: \"baseline\", bottom-edge: \"baseline\", hyphenate: false, ligatures: false)",
        literal(FAMILY)
    );
    out.push_str(
        "  set par(justify: false, first-line-indent: 0pt, hanging-indent: 0pt, leading: 0pt)\n",
    );
    for item in &drawing.items {
        let _ = writeln!(out, "  {}", item_source(item));
    }
    out.push_str("})");
    out
}

/// A typst document of one page, as large as the drawing and a margin of 2 mm, on white.
#[must_use]
pub fn standalone_source(drawing: &Drawing) -> String {
    let (w, h) = (
        mm(drawing.width_mm + 2.0 * MARGIN),
        mm(drawing.height_mm + 2.0 * MARGIN),
    );
    let margin = mm(MARGIN);
    format!(
        "#set page(width: {w}, height: {h}, margin: {margin}, fill: white)\n#{}\n",
        typst_source(drawing)
    )
}

fn item_source(item: &Item) -> String {
    match item {
        Item::Path(path) => path_source(path),
        Item::Circle {
            centre,
            radius,
            stroke,
            fill,
        } => format!(
            "place(top + left, dx: {}, dy: {}, circle(radius: {}, stroke: {}, fill: {}))",
            mm(centre.x - radius),
            mm(centre.y - radius),
            mm(*radius),
            stroke_source(*stroke),
            fill_source(*fill)
        ),
        Item::Label(label) => label_source(label),
    }
}

fn path_source(path: &Path) -> String {
    let mut out = format!(
        "place(top + left, curve(stroke: {}, fill: {}, curve.move({})",
        stroke_source(path.stroke),
        fill_source(path.fill),
        pair(path.start)
    );
    for piece in &path.pieces {
        let _ = match piece {
            Piece::Line(p) => write!(out, ", curve.line({})", pair(*p)),
            Piece::Cubic(a, b, p) => {
                write!(
                    out,
                    ", curve.cubic({}, {}, {})",
                    pair(*a),
                    pair(*b),
                    pair(*p)
                )
            }
        };
    }
    if path.closed {
        out.push_str(", curve.close(mode: \"straight\")");
    }
    out.push_str("))");
    out
}

fn stroke_source(stroke: Option<Stroke>) -> String {
    let Some(stroke) = stroke else {
        return "none".into();
    };
    let ink = match stroke.ink {
        Ink::Black => "black",
        Ink::Grey => "luma(45%)",
        Ink::Faint => "luma(72%)",
        Ink::Light => "luma(85%)",
    };
    let dash = match stroke.dash {
        Dash::Full => "",
        Dash::Dashed => ", dash: (1.4mm, 0.9mm)",
        Dash::Dotted => ", dash: (0.35mm, 0.75mm)",
        Dash::DashDotted => ", dash: (2.2mm, 0.6mm, 0.35mm, 0.6mm)",
    };
    format!("(paint: {ink}, thickness: {}{dash})", mm(stroke.width))
}

const fn fill_source(fill: Fill) -> &'static str {
    match fill {
        Fill::None => "none",
        Fill::White => "white",
        Fill::Grey => "luma(85%)",
        Fill::Black => "black",
    }
}

/// A label: its box has no height and its left end on the baseline, about which it turns. It is a
/// little wider than the text, so that rounding never breaks the line.
fn label_source(label: &Label) -> String {
    let spans: Vec<String> = label.spans.iter().map(span_source).collect();
    let body = format!(
        "box(width: {}, {})",
        mm(label.width * 1.1 + 2.0),
        spans.join(" + ")
    );
    let turned = if label.angle.abs() < 1e-9 {
        body
    } else {
        format!(
            "rotate({}deg, origin: top + left, {body})",
            number(-label.angle.to_degrees())
        )
    };
    format!(
        "place(top + left, dx: {}, dy: {}, {turned})",
        mm(label.at.x),
        mm(label.at.y)
    )
}

fn span_source(span: &Span) -> String {
    let text = literal(&span.text);
    match span.style {
        Style::Plain => format!("text({text})"),
        Style::Italic => format!("emph(text({text}))"),
        Style::Bold => format!("strong(text({text}))"),
        Style::Sub => format!(
            "sub(typographic: false, baseline: {SUB_DROP}em, size: {SUB_SIZE}em, emph(text({text})))"
        ),
    }
}

/// A typst string literal.
fn literal(text: &str) -> String {
    let mut out = String::from("\"");
    for c in text.chars() {
        match c {
            '\\' => out.push_str("\\\\"),
            '"' => out.push_str("\\\""),
            '\n' | '\t' => out.push(' '),
            c if c.is_control() => {
                let _ = write!(out, "\\u{{{:x}}}", u32::from(c));
            }
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

fn pair(p: super::drawing::P2) -> String {
    format!("({}, {})", mm(p.x), mm(p.y))
}

fn mm(x: f64) -> String {
    format!("{}mm", number(x))
}

/// Three decimals at most, no negative zero.
fn number(x: f64) -> String {
    let text = format!("{x:.3}");
    let short = text.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" {
        "0".into()
    } else {
        short.into()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: typst reference, string literals: `\\`, `\"`, `\u{..}`.
    #[test]
    fn user_text_stays_inside_its_literal() {
        assert_eq!(
            literal(r#"a "b" \ #c"#),
            r#""a \"b\" \\ #c""#,
            "quotes and backslash"
        );
        assert_eq!(
            literal("a\nb\tc\u{7}"),
            "\"a b c\\u{7}\"",
            "one line, controls escaped"
        );
    }

    /// Source: this module's own rule on digits.
    #[test]
    fn lengths_are_short_and_without_negative_zero() {
        for (x, text) in [
            (-0.0001, "0"),
            (1.5, "1.5"),
            (10.0, "10"),
            (2.0 / 3.0, "0.667"),
        ] {
            assert_eq!(number(x), text, "{x}");
        }
    }
}
