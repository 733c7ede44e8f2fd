//! Text of users made safe for the formats that hold it.

/// A typst string literal that reads as the text.
pub fn typst_string(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 2);
    out.push('"');
    for c in text.chars() {
        match c {
            '\\' => out.push_str("\\\\"),
            '"' => out.push_str("\\\""),
            '\n' => out.push_str("\\n"),
            '\r' => out.push_str("\\r"),
            '\t' => out.push_str("\\t"),
            c if c.is_control() => out.push_str(&format!("\\u{{{:x}}}", u32::from(c))),
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

/// Markdown (CommonMark with the tables, strikes and maths of GitHub) that reads as the text.
///
/// Stands anywhere in a line, in a table's cell too. Line breaks and tabs become entities, so that
/// the text stays in its block.
pub fn markdown_text(text: &str) -> String {
    let chars: Vec<char> = text.chars().collect();
    let mut out = String::with_capacity(text.len() + text.len() / 4);
    for (i, &c) in chars.iter().enumerate() {
        match c {
            '\n' => out.push_str("&#10;"),
            '\r' => out.push_str("&#13;"),
            '\t' => out.push_str("&#9;"),
            '\\' | '`' | '*' | '_' | '[' | ']' | '<' | '>' | '$' | '|' | '~' | '&' | '#' => {
                out.push('\\');
                out.push(c);
            }
            '+' | '-' | '=' | '.' | ')' if opens_block(&chars, i) => {
                out.push('\\');
                out.push(c);
            }
            ':' if opens_emoji(&chars[i + 1..]) => out.push_str("\\:"),
            _ => out.push(c),
        }
    }
    out
}

/// Whether the sign at `i` could open a list or underline a heading: nothing stands before it on
/// the line, or only digits before a point or bracket, and a blank, its like or nothing after it.
fn opens_block(chars: &[char], i: usize) -> bool {
    let (before, after) = (&chars[..i], chars.get(i + 1).copied().unwrap_or(' '));
    if !after.is_whitespace() && after != chars[i] {
        return false;
    }
    if matches!(chars[i], '.' | ')') {
        let digits = before
            .iter()
            .rev()
            .take_while(|c| c.is_ascii_digit())
            .count();
        return digits > 0 && before[..i - digits].iter().all(|c| c.is_whitespace());
    }
    before.iter().all(|c| c.is_whitespace() || *c == chars[i])
}

/// Whether a colon and these signs would read as the name of a picture, as in `:ship:`.
fn opens_emoji(rest: &[char]) -> bool {
    let name = rest
        .iter()
        .take_while(|c| c.is_ascii_alphanumeric() || matches!(c, '_' | '+' | '-'));
    let length = name.count();
    length > 0 && rest.get(length) == Some(&':')
}

/// Emphasised Markdown between marks of `*` or `**`, or between tags where marks would not hold.
pub(super) fn markdown_marked(text: &str, mark: &str) -> String {
    let inner = markdown_text(text);
    let ends = text.chars().next().zip(text.chars().last());
    match ends {
        None => String::new(),
        Some((a, z)) if a.is_alphanumeric() && z.is_alphanumeric() => {
            format!("{mark}{inner}{mark}")
        }
        Some(_) => {
            let tag = if mark == "*" { "em" } else { "strong" };
            format!("<{tag}>{inner}</{tag}>")
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn typst_strings_are_literals() {
        assert_eq!(
            typst_string("a\\b\"c\n#d\u{7}"),
            "\"a\\\\b\\\"c\\n#d\\u{7}\"",
            "escapes"
        );
    }

    #[test]
    fn only_what_markdown_would_read_is_escaped() {
        let rows = [
            ("1. the pad", "1\\. the pad"),
            ("x - 2.5 (mm)", "x - 2.5 (mm)"),
            ("+0.14", "+0.14"),
            ("---", "\\-\\-\\-"),
            ("- a", "\\- a"),
            ("a_b*c", "a\\_b\\*c"),
            ("at :ship: 10:30", "at \\:ship: 10:30"),
            ("a\nb", "a&#10;b"),
        ];
        for (typed, wanted) in rows {
            assert_eq!(markdown_text(typed), wanted, "{typed:?}");
        }
    }
}
