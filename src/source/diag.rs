//! Faults found in users' files: plain data, and their one printed form.
//!
//! Which text a fault has is decided where it is found; nothing here knows a joint or a sheet.

use super::Place;
use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};
use std::cell::RefCell;
use std::fmt;

/// How bad a fault is.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Severity {
    /// The file is refused.
    Error,
    /// The file is read, and the user is told.
    Warning,
}

/// One fault, at its place.
#[derive(Clone, PartialEq, Debug)]
pub struct Diagnostic {
    /// Stable kebab-case name.
    pub code: &'static str,
    /// Whether the file is refused.
    pub severity: Severity,
    /// What is wrong: lower case, no full stop.
    pub message: String,
    /// The value at fault.
    pub place: Place,
    /// What would mend it, one line each.
    pub help: Vec<String>,
}

/// Characters of a message that are told at most: a value may be as long as its file.
const LONGEST: usize = 400;

/// A message with its middle left out if it is too long.
fn bounded(message: String) -> String {
    let count = message.chars().count();
    if count <= LONGEST {
        return message;
    }
    let half = LONGEST / 2;
    let head: String = message.chars().take(half).collect();
    let tail: String = message.chars().skip(count - half).collect();
    format!("{head} … {tail}")
}

impl Diagnostic {
    /// A fault that refuses the file.
    #[must_use]
    pub fn error(code: &'static str, message: impl Into<String>, place: &Place) -> Self {
        Self {
            code,
            severity: Severity::Error,
            message: bounded(message.into()),
            place: place.clone(),
            help: Vec::new(),
        }
    }

    /// A fault that the user is told of, though the file is read.
    #[must_use]
    pub fn warning(code: &'static str, message: impl Into<String>, place: &Place) -> Self {
        Self {
            severity: Severity::Warning,
            ..Self::error(code, message, place)
        }
    }

    /// Adds a line of help.
    #[must_use]
    pub fn help(mut self, line: impl Into<String>) -> Self {
        self.help.push(bounded(line.into()));
        self
    }

    /// The printed form: heading, place, the line with the value underlined, help.
    ///
    /// A value of several lines is underlined on its first. No line end follows the last line.
    #[must_use]
    pub fn render(&self, colour: bool) -> String {
        let (line, start, end) = self.first_line();
        let message = one_line(&self.message);
        let name = one_line(&self.place.file.name);
        let help: Vec<String> = self.help.iter().map(|line| one_line(line)).collect();
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Warning => Level::WARNING,
        };
        let snippet = Snippet::source(line)
            .line_start(self.place.line_column().0)
            .path(name.as_str())
            .annotation(AnnotationKind::Primary.span(start..end));
        let mut report = level
            .primary_title(message.as_str())
            .id(self.code)
            .element(snippet);
        for line in &help {
            report = report.element(Level::HELP.message(line.as_str()));
        }
        let renderer = if colour {
            Renderer::styled()
        } else {
            Renderer::plain()
        };
        close_up(&renderer.render(&[report]))
    }

    /// The first line of the place, and the byte range of the value in it.
    fn first_line(&self) -> (&str, usize, usize) {
        let text = self.place.file.text.as_str();
        let start = self.place.start.min(text.len());
        let from = text[..start].rfind('\n').map_or(0, |at| at + 1);
        let to = text[start..].find('\n').map_or(text.len(), |at| start + at);
        let line = text[from..to].trim_end_matches('\r');
        let start = (start - from).min(line.len());
        let end = (self.place.end.max(self.place.start) - from).clamp(start, line.len());
        let value = &line[start..end];
        (line, start, start + value.trim_end().len())
    }
}

/// Writes control characters and marks of direction as escapes, so that neither a file's text nor its
/// name can drive the terminal.
#[must_use]
pub fn one_line(text: &str) -> String {
    let turns = |c| matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}');
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        if c.is_control() || turns(c) {
            out.extend(c.escape_default());
        } else {
            out.push(c);
        }
    }
    out
}

/// Takes out the empty gutter line which the renderer puts between the carets and the help.
fn close_up(report: &str) -> String {
    let lines: Vec<&str> = report.lines().collect();
    let is_gap = |at: usize| {
        let next = lines
            .get(at + 1)
            .map_or(String::new(), |line| without_colour(line));
        without_colour(lines[at]).trim() == "|" && next.trim_start().starts_with("= help")
    };
    let kept: Vec<&str> = (0..lines.len())
        .filter(|&at| !is_gap(at))
        .map(|at| lines[at])
        .collect();
    kept.join("\n")
}

/// A line without its terminal colour codes.
fn without_colour(line: &str) -> String {
    let mut out = String::new();
    let mut rest = line;
    while let Some(at) = rest.find('\u{1b}') {
        out.push_str(&rest[..at]);
        rest = rest[at..].find('m').map_or("", |end| &rest[at + end + 1..]);
    }
    out + rest
}

/// Most faults printed for one file; nobody reads on, and each one costs a walk over the text.
const MOST_SHOWN: usize = 200;

/// The faults of a file, in file order; never empty when returned as an error.
#[derive(Clone, PartialEq, Debug)]
pub struct Faults(pub Vec<Diagnostic>);

impl Faults {
    /// The printed form of the faults, an empty line between two.
    ///
    /// Of more than 200 faults the rest is counted only: a file so wrong has one cause.
    #[must_use]
    pub fn render(&self, colour: bool) -> String {
        let mut each: Vec<String> = self
            .0
            .iter()
            .take(MOST_SHOWN)
            .map(|fault| fault.render(colour))
            .collect();
        if self.0.len() > MOST_SHOWN {
            each.push(format!("and {} more faults", self.0.len() - MOST_SHOWN));
        }
        each.join("\n\n")
    }
}

impl fmt::Display for Faults {
    /// Writes how many faults there are, and where the first stands.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let count = self.0.len();
        write!(
            out,
            "{count} {}",
            if count == 1 { "fault" } else { "faults" }
        )?;
        match self.0.first() {
            Some(first) => write!(out, ", the first at {:?}: {}", first.place, first.message),
            None => Ok(()),
        }
    }
}

impl std::error::Error for Faults {}

impl From<Diagnostic> for Faults {
    fn from(fault: Diagnostic) -> Self {
        Self(vec![fault])
    }
}

/// Collects faults while a file is read, so that all of them are told in one go.
///
/// Readers share it by reference.
#[derive(Default, Debug)]
pub struct FaultBag(RefCell<Vec<Diagnostic>>);

impl FaultBag {
    /// An empty bag.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a fault.
    pub fn push(&self, fault: Diagnostic) {
        self.0.borrow_mut().push(fault);
    }

    /// Adds a fault and gives the `None` that a reader returns with it.
    pub fn refuse<T>(&self, fault: Diagnostic) -> Option<T> {
        self.push(fault);
        None
    }

    /// Whether a fault in the bag refuses the file.
    #[must_use]
    pub fn has_errors(&self) -> bool {
        self.0
            .borrow()
            .iter()
            .any(|fault| fault.severity == Severity::Error)
    }

    /// Ends the reading: the value, with the warnings, if nothing refuses it.
    ///
    /// # Errors
    ///
    /// All faults in file order, if one of them is an error.
    ///
    /// # Panics
    ///
    /// If a reader returned `None` without a fault, which is a mistake in the reader.
    pub fn close<T>(self, value: Option<T>) -> Result<(T, Vec<Diagnostic>), Faults> {
        let has_errors = self.has_errors();
        let mut faults = self.0.into_inner();
        faults.sort_by(|a, b| {
            (&a.place.file.name, a.place.start).cmp(&(&b.place.file.name, b.place.start))
        });
        match value {
            Some(value) if !has_errors => Ok((value, faults)),
            _ => {
                assert!(has_errors, "a reader that gives no value leaves a fault");
                Err(Faults(faults))
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::SourceFile;
    use std::sync::Arc;

    fn fault(text: &str, start: usize, end: usize) -> Diagnostic {
        let file = Arc::new(SourceFile {
            name: "joints/bracket.yaml".into(),
            text: text.into(),
        });
        Diagnostic::error(
            "out-of-range",
            "`throat` is -6 mm, but must be above 0 mm",
            &Place { file, start, end },
        )
        .help("write a length in mm, or with its unit, as in `6 mm`")
    }

    #[test]
    fn the_printed_form_is_the_style_guides() {
        let text = "weld:\n  runs:\n  - name: a\n    throat: -6\n";
        let start = text.find("-6").unwrap();
        let wanted = "\
error[out-of-range]: `throat` is -6 mm, but must be above 0 mm
 --> joints/bracket.yaml:4:13
  |
4 |     throat: -6
  |             ^^
  = help: write a length in mm, or with its unit, as in `6 mm`";
        assert_eq!(fault(text, start, start + 2).render(false), wanted, "form");
        let plain: Vec<String> = fault(text, start, start + 2)
            .render(true)
            .lines()
            .map(without_colour)
            .collect();
        assert_eq!(
            plain.join("\n").replace(" \n", "\n"),
            wanted,
            "the same without its colours"
        );
    }

    #[test]
    fn columns_count_characters_and_long_values_show_their_first_line() {
        let text = "a: 1\r\ntitle: é 焊缝 x\r\n  more\r\n";
        let start = text.find('焊').unwrap();
        let shown = fault(text, start, text.len()).render(false);
        assert!(shown.contains("bracket.yaml:2:10\n"), "{shown}");
        assert!(
            shown.contains("\n2 | title: é 焊缝 x\n  |          ^^^^^^\n"),
            "{shown}"
        );
        assert!(!shown.contains("more"), "{shown}");
    }

    #[test]
    fn a_fault_at_the_end_of_the_text_and_control_characters_render() {
        let mut late = fault("a: 1\n", 5, 5);
        late.message = "bad \u{1b}[31m text".into();
        let shown = late.render(false);
        assert!(shown.contains("bracket.yaml:2:1\n"), "{shown}");
        assert!(shown.contains("bad \\u{1b}[31m text"), "{shown}");
        assert!(!shown.contains('\u{1b}'), "{shown}");
    }

    #[test]
    fn a_file_full_of_faults_is_cut_off() {
        let shown = Faults(vec![fault("ab", 0, 1); 203]).render(false);
        assert_eq!(shown.matches("error[").count(), 200, "shown");
        assert!(shown.ends_with("\n\nand 3 more faults"), "counted");
    }

    #[test]
    fn a_bag_gives_all_faults_in_file_order_and_keeps_warnings() {
        let bag = FaultBag::new();
        bag.push(fault("ab", 1, 2));
        bag.push(fault("ab", 0, 1));
        let faults = bag.close(Some(())).unwrap_err();
        let starts: Vec<usize> = faults.0.iter().map(|fault| fault.place.start).collect();
        assert_eq!(starts, [0, 1], "order");
        let bag = FaultBag::new();
        bag.push(Diagnostic {
            severity: Severity::Warning,
            ..fault("ab", 1, 2)
        });
        assert_eq!(bag.close(Some(7)).unwrap().1.len(), 1, "warnings stay");
    }
}
