//! Where the YAML parser stopped, told in the words of somebody who writes joint files.
//!
//! The parser names the rule it was at; what the user did is read from the text around.

use super::line::Scanned;
use super::{Diagnostic, Place, SourceFile};
use std::sync::Arc;

/// The point at which the parser stopped.
pub(super) struct Stop<'a> {
    pub(super) file: &'a Arc<SourceFile>,
    /// Byte of the text.
    pub(super) at: usize,
    /// The parser's words.
    pub(super) info: &'a str,
    /// The innermost bracket still open, and its byte.
    pub(super) bracket: Option<(char, usize)>,
}

impl Stop<'_> {
    /// The fault, at the value that caused it where that can be told.
    pub(super) fn fault(&self) -> Diagnostic {
        let text = self.file.text.as_str();
        let start = text[..self.at].rfind('\n').map_or(0, |n| n + 1);
        let end = text[self.at..]
            .find('\n')
            .map_or(text.len(), |n| self.at + n);
        let line = &text[start..end];
        if self.info.contains("unknown anchor") {
            return alias_fault(&self.point(end));
        }
        if let Some(fault) = self
            .line_before_fault()
            .or_else(|| self.no_colon_fault(start, end))
        {
            return fault;
        }
        if let Some(fault) = self.quote_of_lines_fault() {
            return fault;
        }
        if let Some(tab) = leading_tab(text, start) {
            let place = self.place(tab, tab + 1);
            return Diagnostic::error("tab-indent", "a tab indents this line", &place)
                .help("indent with spaces");
        }
        if let Some((from, to)) = colon_in_text(line, self.at - start) {
            let place = self.place(start + from, start + to);
            return Diagnostic::error(
                "colon-in-text",
                "a `: ` inside an unquoted text starts a new key",
                &place,
            )
            .help("quote the text, as in `\"one: two\"`");
        }
        if text[self.at..].starts_with(['"', '\'']) && self.info.contains("quoted scalar") {
            return self.quote_fault(&self.place(self.at, end));
        }
        match self.bracket {
            Some((bracket, opened)) => self.bracket_fault(bracket, opened, &self.point(end)),
            None => self.plain_fault(line, &self.point(end)),
        }
    }

    /// The fault of the line before the stop: a text in brackets that a ` #` cut off together with its
    /// bracket, or a bracket without its end.
    ///
    /// The parser stops at the next token, and while it may still take the bracket for a key it has
    /// not told of it; so that line is read here. It is the last one that is more than a comment.
    fn line_before_fault(&self) -> Option<Diagnostic> {
        let before = &self.file.text[..self.at];
        let last = before.rfind('\n')?;
        let is_first = matches!(before[last..].trim(), "" | "-");
        let (mut start, mut line) = line_with_more(before, last)?;
        let mut scanned = Scanned::of(line, self.bracket.is_some());
        if scanned.open.is_empty() && scanned.cut.is_none() && line.trim_start().starts_with("- ") {
            // An item below an open bracket is taken for the end of the text in it.
            (start, line) = line_with_more(before, start.checked_sub(1)?)?;
            scanned = Scanned::of(line, self.bracket.is_some());
        }
        if let Some(cut) = scanned.cut {
            let place = self.place(start + cut.text.start, start + cut.text.end);
            let what = cut
                .key
                .map_or("the text".to_owned(), |key| format!("`{}`", &line[key]));
            let message = format!("a ` #` starts a comment, so {what} ends before it");
            let help = "quote the text if the `#` belongs to it; else put the comment on a line of its own";
            return Some(Diagnostic::error("cut-by-comment", message, &place).help(help));
        }
        let open = *scanned.open.last()?;
        if !is_first || self.bracket.is_some() || scanned.ends_with_comma {
            return None;
        }
        let bracket = if line[open..].starts_with('[') {
            '['
        } else {
            '{'
        };
        Some(self.not_closed(bracket, start + open, &self.place(self.at, self.at)))
    }

    /// The fault of a line that is to be a key and its value, but has no colon with a blank: the line
    /// of the stop, or the one before it if it starts in the same column.
    fn no_colon_fault(&self, start: usize, end: usize) -> Option<Diagnostic> {
        if self.bracket.is_some() {
            return None;
        }
        let text = self.file.text.as_str();
        let indent = |line: &str| line.len() - line.trim_start().len();
        let own = &text[start..end];
        let before = line_with_more(text, start.checked_sub(1)?);
        let lacks = |line: &str| {
            let words = line.trim();
            let key = words.starts_with(|c: char| c.is_ascii_alphabetic());
            key && !words.contains(": ") && !words.ends_with(':')
        };
        let (at, line) = [before, Some((start, own))]
            .into_iter()
            .flatten()
            .find(|(_, line)| indent(line) == indent(own) && lacks(line))?;
        let from = at + indent(line);
        let place = self.place(from, from + line.trim().len());
        let message = "this line has no colon with a blank behind its key";
        Some(Diagnostic::error("yaml-syntax", message, &place).help("write `key: value`"))
    }

    /// The fault of a quote that was closed only by the next one, in a line below.
    fn quote_of_lines_fault(&self) -> Option<Diagnostic> {
        if !self.info.contains("trailing content after") {
            return None;
        }
        let before = self.file.text[..self.at].trim_end();
        let quote = before
            .chars()
            .next_back()
            .filter(|c| matches!(c, '"' | '\''))?;
        let opened = before[..before.len() - 1].rfind(quote)?;
        before[opened..].contains('\n').then(|| {
            let end = opened + before[opened..].find('\n').unwrap_or(1);
            self.quote_fault(&self.place(opened, end))
        })
    }

    /// The fault of a bracket that is not closed before `point`.
    fn not_closed(&self, bracket: char, opened: usize, point: &Place) -> Diagnostic {
        let closing = if bracket == '[' { ']' } else { '}' };
        let (line, _) = point.line_column();
        Diagnostic::error(
            "not-closed",
            format!("the `{bracket}` that opens here is not closed"),
            &self.place(opened, opened + 1),
        )
        .help(format!(
            "a `,` or `{closing}` is missing before line {line}, where reading stopped"
        ))
    }

    fn place(&self, start: usize, end: usize) -> Place {
        Place {
            file: self.file.clone(),
            start,
            end,
        }
    }

    /// The one character at the stop; nothing at the end of its line.
    fn point(&self, line_end: usize) -> Place {
        let width = self.file.text[self.at..line_end]
            .chars()
            .next()
            .map_or(0, char::len_utf8);
        self.place(self.at, self.at + width)
    }

    /// The fault of a quoted text that does not end, or holds a bad escape.
    fn quote_fault(&self, place: &Place) -> Diagnostic {
        if self.info.contains("escape") || self.info.contains("hexadecimal") {
            return Diagnostic::error(
                "yaml-syntax",
                "this quoted text holds an unknown `\\` escape",
                place,
            )
            .help("in single quotes a `\\` is a plain character");
        }
        Diagnostic::error(
            "not-closed",
            "the quote that opens here is not closed",
            place,
        )
        .help("close it in the same line; a line below it that starts a key cannot be part of it")
    }

    /// The fault of a stop inside brackets: they are not closed if there stands something else
    /// than `,` or the closing bracket, or a key in a line below.
    fn bracket_fault(&self, bracket: char, opened: usize, point: &Place) -> Diagnostic {
        let is_below = self.file.text[opened..self.at].contains('\n');
        let opening = self.place(opened, opened + 1);
        if self.info.contains("expected ',' or")
            || (is_below && self.info.contains("placement of ':'"))
        {
            return self.not_closed(bracket, opened, point);
        }
        let (line, _) = opening.line_column();
        Diagnostic::error(
            "yaml-syntax",
            format!("this is no YAML: {}", self.cause()),
            point,
        )
        .help(format!("the `{bracket}` of line {line} is still open"))
    }

    /// The fault of a stop outside brackets.
    fn plain_fault(&self, line: &str, point: &Place) -> Diagnostic {
        if self.info.contains("misplaced bracket") {
            return Diagnostic::error("yaml-syntax", "this bracket closes nothing", point)
                .help("take it out, or quote the text it belongs to");
        }
        let of_indent = [
            "expected key",
            "'-' indicator",
            "indentation",
            "mapping values",
        ];
        if of_indent.iter().any(|words| self.info.contains(words)) {
            let indent = line.len() - line.trim_start().len();
            let (number, _) = point.line_column();
            let message =
                format!("line {number} is indented by {indent}, which fits no line above it");
            return Diagnostic::error("yaml-syntax", message, point)
                .help("the keys of one map start in one column, and so do the dashes of one list");
        }
        Diagnostic::error(
            "yaml-syntax",
            format!("this is no YAML: {}", self.cause()),
            point,
        )
        .help("quote a text that starts with one of `@ % & * ! | > ? [ { ] } ,` or a backquote")
    }

    /// The parser's words, without what it was doing at the time.
    fn cause(&self) -> String {
        let cause = match self.info.split_once(", ") {
            Some((doing, cause)) if doing.starts_with("while ") => cause,
            _ => self.info,
        };
        cause.replace("did not find expected", "did not find the expected")
    }
}

pub(super) fn alias_fault(place: &Place) -> Diagnostic {
    Diagnostic::error("alias", "aliases (`*name`) are not taken", place)
        .help("write the value out where it is used; quote a text that starts with `*`")
}

/// The last line before the line end at `end` that is more than a comment, and where it starts.
fn line_with_more(text: &str, mut end: usize) -> Option<(usize, &str)> {
    loop {
        let start = text[..end].rfind('\n').map_or(0, |n| n + 1);
        let line = &text[start..end];
        if !line.trim().is_empty() && !line.trim_start().starts_with('#') {
            return Some((start, line));
        }
        end = start.checked_sub(1)?;
    }
}

/// Lines in which the tab at fault is looked for, from that of the stop.
const LINES_AHEAD: usize = 4;

/// The byte of a tab that indents the line at fault or one soon below it.
fn leading_tab(text: &str, line_start: usize) -> Option<usize> {
    let tab_of = |from: usize, line: &str| {
        let indent = line.len() - line.trim_start_matches([' ', '\t']).len();
        line[..indent].find('\t').map(|at| from + at)
    };
    // The parser may stop at the key above: the next lines that hold something count, too.
    let mut at = line_start;
    for line in text[line_start..].split('\n').take(LINES_AHEAD) {
        if let Some(tab) = tab_of(at, line) {
            return Some(tab);
        }
        at += line.len() + 1;
    }
    None
}

/// The range of the unquoted text in which the parser met a colon, where that is what stopped it.
///
/// `at` is the byte of the colon in the line. There must be a key before the text in this line;
/// otherwise the line itself is a key at the wrong indent.
fn colon_in_text(line: &str, at: usize) -> Option<(usize, usize)> {
    let is_colon = line[at..].starts_with(": ") || line[at..].trim_end() == ":";
    let key_end = line.get(..at)?.rfind(": ")?;
    if !is_colon {
        return None;
    }
    let start = key_end + 2;
    let start = start + (line[start..at].len() - line[start..at].trim_start().len());
    if line[start..at].is_empty() || line[start..].starts_with(['"', '\'', '[', '{']) {
        return None;
    }
    let stop = if line[..start].contains('{') {
        line[at..].find([',', '}'])
    } else {
        line[at..].find(" #")
    };
    let end = stop.map_or(line.len(), |n| at + n);
    Some((start, start + line[start..end].trim_end().len()))
}
