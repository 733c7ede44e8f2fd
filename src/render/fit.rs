//! Fitting text to a width: cutting with an ellipsis, places to break long words, counting lines.

use super::faces::{Cut, text_width};

/// The text on one line, cut with an ellipsis where it is wider than `room` (ems).
pub(super) fn shorten(text: &str, cut: Cut, room: f64) -> String {
    let line = text.split_whitespace().collect::<Vec<_>>().join(" ");
    if text_width(&line, cut) <= room {
        return line;
    }
    let mut kept = String::new();
    for c in line.chars() {
        kept.push(c);
        if text_width(&kept, cut) + text_width("…", cut) > room {
            kept.pop();
            break;
        }
    }
    kept.push('…');
    kept
}

/// Zero-width spaces in words wider than `room` (ems): after punctuation, else where a line is full.
pub(super) fn soften(text: &str, room: f64) -> String {
    let mut out = String::with_capacity(text.len());
    for word in text.split_inclusive(char::is_whitespace) {
        if text_width(word.trim_end(), Cut::Bold) <= room {
            out.push_str(word);
        } else {
            soften_word(word, room, &mut out);
        }
    }
    out
}

fn soften_word(word: &str, room: f64, out: &mut String) {
    let mut used = 0.0;
    for c in word.chars() {
        let width = text_width(c.encode_utf8(&mut [0; 4]), Cut::Bold);
        if used > 0.0 && used + width > room {
            out.push('\u{200b}');
            used = 0.0;
        }
        out.push(c);
        used += width;
        if matches!(c, '/' | '_' | '.' | ':' | '-' | '\\') {
            out.push('\u{200b}');
            used = 0.0;
        }
    }
}

/// Lines of a text filled greedily to `room` (ems).
pub(super) fn wrapped_lines(text: &str, room: f64) -> usize {
    let mut lines = 1;
    let mut used = 0.0;
    for word in text.split_inclusive([' ', '\u{200b}', '\n']) {
        let bare = word.trim_end_matches([' ', '\u{200b}', '\n']);
        if used > 0.0 && used + text_width(bare, Cut::Regular) > room {
            lines += 1;
            used = 0.0;
        }
        used += text_width(bare, Cut::Regular);
        if word.ends_with(' ') {
            used += text_width(" ", Cut::Regular);
        }
        if word.ends_with('\n') {
            lines += 1;
            used = 0.0;
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_wide_words_get_places_to_break() {
        let rows = [
            ("a short text", "a short text"),
            (
                "very_long_name.yaml:14",
                "very_\u{200b}long_\u{200b}name.\u{200b}yaml:\u{200b}14",
            ),
        ];
        for (typed, wanted) in rows {
            assert_eq!(soften(typed, 8.0), wanted, "{typed}");
        }
        let letters = soften(&"m".repeat(100), 8.0);
        let widest = letters
            .split('\u{200b}')
            .map(|run| text_width(run, Cut::Bold));
        assert!(widest.fold(0.0, f64::max) <= 8.0, "{letters}");
    }

    #[test]
    fn a_cut_text_fits_and_says_so() {
        let cut = shorten("A title\nof two lines", Cut::Regular, 5.0);
        assert!(
            cut.ends_with('…') && text_width(&cut, Cut::Regular) <= 5.0,
            "{cut}"
        );
        assert_eq!(
            shorten("A  title\n", Cut::Regular, 5.0),
            "A title",
            "a text that fits"
        );
    }

    #[test]
    fn lines_are_counted_as_they_fill() {
        for (text, lines) in [("one", 1), ("four words fill two", 2), ("a\nb", 2)] {
            assert_eq!(wrapped_lines(text, 6.0), lines, "{text:?}");
        }
    }
}
