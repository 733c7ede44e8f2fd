//! Small makers of running text.

use super::doc::{Inline, Text};
use crate::formula::{Math, Printed, Symbol};

/// Plain text.
pub(super) fn plain(text: &str) -> Text {
    vec![piece(text)]
}

/// A piece of plain text.
pub(super) fn piece(text: &str) -> Inline {
    Inline::Plain {
        text: text.to_owned(),
    }
}

/// A piece of emphasis.
pub(super) fn emph(text: &str) -> Inline {
    Inline::Emph {
        text: text.to_owned(),
    }
}

/// A piece in bold.
pub(super) fn strong(text: &str) -> Inline {
    Inline::Strong {
        text: text.to_owned(),
    }
}

/// Mathematics in running text.
pub(super) fn math(math: &Math) -> Inline {
    Inline::Math {
        typst: math.typst(),
        latex: math.latex(),
        words: math.words(),
    }
}

/// A symbol in running text.
pub(super) fn symbol(symbol: &Symbol) -> Inline {
    math(&Math::Symbol(symbol.clone()))
}

/// A number split at its point, for cells.
pub(super) fn number(printed: &Printed, signed: bool, step: Option<String>) -> Inline {
    let sign = match (printed.negative, signed) {
        (true, _) => "−",
        (false, true) => "+",
        (false, false) => "",
    };
    let (whole, decimals) = match printed.mantissa.split_once('.') {
        Some((whole, decimals)) => (whole, format!(".{decimals}")),
        None => (printed.mantissa.as_str(), String::new()),
    };
    Inline::Number {
        whole: format!("{sign}{whole}"),
        decimals,
        exponent: printed.exponent,
        step,
    }
}

/// Text whose words such as `F_su` are set as symbols.
pub(super) fn with_symbols(text: &str) -> Text {
    let mut out: Text = Vec::new();
    let mut rest = String::new();
    for word in text.split_inclusive(' ') {
        let bare = word.trim_end_matches([' ', ',', ';', '.', ':']);
        let named = bare.split_once('_').filter(|(base, index)| {
            base.len() == 1 && base.is_ascii() && index.chars().all(|c| c.is_ascii_alphanumeric())
        });
        let made =
            named.and_then(|(base, index)| Symbol::declared(base, vec![index.to_owned()]).ok());
        match made {
            Some(made) => {
                if !rest.is_empty() {
                    out.push(piece(&std::mem::take(&mut rest)));
                }
                out.push(symbol(&made));
                rest.push_str(&word[bare.len()..]);
            }
            None => rest.push_str(word),
        }
    }
    if !rest.is_empty() {
        out.push(piece(&rest));
    }
    out
}

/// A short name for ids: lower-case letters and digits with single hyphens.
pub(super) fn slug(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        if c.is_ascii_alphanumeric() {
            out.push(c.to_ascii_lowercase());
        } else if !out.is_empty() && !out.ends_with('-') {
            out.push('-');
        }
    }
    let out = out.trim_end_matches('-').to_owned();
    if out.is_empty() { "x".to_owned() } else { out }
}

/// A count with its noun: `1 case`, `3 cases`.
pub(super) fn count(number: usize, one: &str, many: &str) -> String {
    format!("{number} {}", if number == 1 { one } else { many })
}

/// A text with its first letter in upper case.
pub(super) fn capital(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |first| {
        first.to_uppercase().chain(chars).collect()
    })
}
