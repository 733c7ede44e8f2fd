//! One line read on its own: brackets that stay open, and a text that a comment cuts off.
//!
//! Only for fault texts: it knows brackets, quotes, keys and comments, and nothing of indents.

use std::ops::Range;

/// What a line leaves open.
#[derive(Default, Debug)]
pub(super) struct Scanned {
    /// Bytes of the brackets that open in the line and do not close, outermost first.
    pub(super) open: Vec<usize>,
    /// The unquoted text in brackets that the comment cuts off with a `,` or a closing bracket.
    pub(super) cut: Option<Cut>,
    /// Whether the last mark before the end or the comment is a `,`, after which more may follow.
    pub(super) ends_with_comma: bool,
}

/// An unquoted text that ends where a comment starts.
#[derive(PartialEq, Eq, Debug)]
pub(super) struct Cut {
    /// The key before the text, where there is one.
    pub(super) key: Option<Range<usize>>,
    /// The text.
    pub(super) text: Range<usize>,
}

impl Scanned {
    /// Reads a line; `in_bracket` says that it begins inside a bracket of a line before.
    pub(super) fn of(line: &str, in_bracket: bool) -> Self {
        let mut scanned = Self::default();
        let mut quote = None;
        let (mut start, mut key, mut previous) = (0, None, ' ');
        for (at, c) in line.char_indices() {
            let at_start = line[start..at].trim().is_empty();
            let inside = in_bracket || !scanned.open.is_empty();
            if let Some(open) = quote {
                if c == open && previous != '\\' {
                    quote = None;
                }
            } else if matches!(c, '"' | '\'') && at_start {
                quote = Some(c);
            } else if matches!(c, '[' | '{') && (at_start || inside) {
                scanned.open.push(at);
                (start, key) = (at + 1, None);
            } else if matches!(c, ']' | '}' | ',') && inside {
                if c != ',' {
                    scanned.open.pop();
                }
                (start, key) = (at + 1, None);
            } else if c == ' ' && (line[start..at].trim() == "-" || previous == ':') {
                key = (previous == ':').then(|| trimmed(line, start..at - 1));
                start = at + 1;
            } else if c == '#' && previous.is_whitespace() {
                scanned.cut = inside.then(|| cut(line, key, start..at)).flatten();
                scanned.ends_with_comma = line[..at].trim_end().ends_with(',');
                return scanned;
            }
            previous = c;
        }
        scanned.ends_with_comma = line.trim_end().ends_with(',');
        scanned
    }
}

/// The text before a comment, if it is one that the comment cuts off: it is no number and no bracket,
/// and the comment holds what should have followed.
fn cut(line: &str, key: Option<Range<usize>>, text: Range<usize>) -> Option<Cut> {
    let cuts = line[text.end..].contains([',', ']', '}']);
    let text = trimmed(line, text);
    let value = &line[text.clone()];
    let is_word = key.is_some() || value.starts_with(char::is_alphabetic);
    let is_text = !value.is_empty() && !value.starts_with(['"', '\'', '[', '{']);
    (cuts && is_word && is_text).then_some(Cut { key, text })
}

/// A range without the blanks at its ends.
fn trimmed(line: &str, range: Range<usize>) -> Range<usize> {
    let word = &line[range.clone()];
    let lead = word.len() - word.trim_start().len();
    range.start + lead..range.start + lead + word.trim().len()
}

#[cfg(test)]
mod tests {
    use super::Scanned;

    #[test]
    fn a_line_tells_what_it_leaves_open() {
        #[rustfmt::skip]
        let rows: [(&str, &[usize], Option<(&str, &str)>); 9] = [
            ("- {name: a #b, leg: 6}",     &[2],  Some(("name", "a"))),
            ("- {name: 'a #b', leg: 6}",   &[],   None),
            ("- {name: lug's, leg: 6} # x, y", &[], None),
            ("joins: [lug #1, deck]",      &[7],  Some(("", "lug"))),
            ("at: [20, 200 # x, y",        &[4],  None),
            ("at: [20, 200, # x, y",       &[4],  None),
            ("- {a: [1, 2], b: {c: 1}",    &[2],  None),
            ("title: a {b #c, d",          &[],   None),
            ("title: lug, deck #3, x",     &[],   None),
        ];
        for (line, open, cut) in rows {
            let scanned = Scanned::of(line, false);
            assert_eq!(scanned.open, open, "{line}");
            let told = scanned.cut.map(|cut| {
                let key = cut.key.map_or("", |key| &line[key]);
                (key, &line[cut.text])
            });
            assert_eq!(told, cut, "{line}");
        }
    }
}
