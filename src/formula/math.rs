//! Typeset mathematics as a small layout tree, with its Typst, LaTeX and spoken forms and a width.
//!
//! The width is a bound in widths of a digit, from the advances of the text face; lines are broken
//! by it, and a test on the demo notes holds that nothing leaves the text block.

use super::digits::Printed;
use super::symbol::Symbol;

/// A piece of typeset mathematics.
#[derive(Clone, PartialEq, Debug)]
pub enum Math {
    /// A number, linked to the step that made it.
    Number {
        /// The number as printed.
        printed: Printed,
        /// Whether it is an angle, printed with the degree sign.
        degrees: bool,
        /// Id of the step.
        link: Option<String>,
    },
    /// A symbol.
    Symbol(Symbol),
    /// Upright words.
    Word(String),
    /// π.
    Pi,
    /// Terms with their signs: true is minus.
    Terms(Vec<(bool, Self)>),
    /// Factors; a dot stands between numbers, a thin space between symbols.
    Product(Vec<Self>),
    /// A built-up fraction.
    Fraction(Box<Self>, Box<Self>),
    /// A fraction on the line.
    Slash(Box<Self>, Box<Self>),
    /// A power.
    Power(Box<Self>, Box<Self>),
    /// A square root.
    Root(Box<Self>),
    /// Brackets.
    Bracket(Box<Self>),
    /// A magnitude.
    Magnitude(Box<Self>),
    /// A function by its name.
    Call(&'static str, Vec<Self>),
    /// A sum sign over an index letter.
    Sum(String, Box<Self>),
    /// A comparison with its sign as in formulas.
    Relation(&'static str, Box<Self>, Box<Self>),
    /// Pieces side by side.
    Row(Vec<Self>),
    /// Values with the conditions that they hold under; the last one may have none.
    Cases(Vec<(Self, Option<Self>)>),
}

/// Escapes a text for a Typst string literal.
fn literal(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 2);
    out.push('"');
    for c in text.chars() {
        match c {
            '"' | '\\' => {
                out.push('\\');
                out.push(c);
            }
            c if c.is_control() => out.push(' '),
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

/// Escapes a text for LaTeX's `\text{…}`.
fn latex_text(text: &str) -> String {
    let mut out = String::from("\\text{");
    for c in text.chars() {
        match c {
            '#' | '$' | '%' | '&' | '_' | '{' | '}' => {
                out.push('\\');
                out.push(c);
            }
            '\\' => out.push_str("\\textbackslash "),
            '~' => out.push_str("\\textasciitilde "),
            '^' => out.push_str("\\textasciicircum "),
            c if c.is_control() => out.push(' '),
            c => out.push(c),
        }
    }
    out.push('}');
    out
}

impl Math {
    /// A number without a link.
    #[must_use]
    pub fn plain(printed: Printed) -> Self {
        Self::Number {
            printed,
            degrees: false,
            link: None,
        }
    }

    /// Whether it starts with a minus sign, so that it needs brackets after an operator.
    #[must_use]
    pub fn starts_negative(&self) -> bool {
        match self {
            Self::Number { printed, .. } => printed.negative,
            Self::Terms(terms) => terms
                .first()
                .is_some_and(|term| term.0 || term.1.starts_negative()),
            Self::Product(factors) | Self::Row(factors) => {
                factors.first().is_some_and(Self::starts_negative)
            }
            Self::Slash(above, _) => above.starts_negative(),
            Self::Power(base, _) => base.starts_negative(),
            Self::Symbol(_)
            | Self::Word(_)
            | Self::Pi
            | Self::Fraction(..)
            | Self::Root(_)
            | Self::Bracket(_)
            | Self::Magnitude(_)
            | Self::Call(..)
            | Self::Sum(..)
            | Self::Relation(..)
            | Self::Cases(_) => false,
        }
    }

    /// Whether a factor ends or starts in a digit, so that a dot must part it from its neighbour.
    fn is_numeric(&self) -> bool {
        match self {
            Self::Number { .. } => true,
            Self::Power(base, _) => base.is_numeric(),
            Self::Product(factors) => factors.iter().any(Self::is_numeric),
            Self::Fraction(above, below) | Self::Slash(above, below) => {
                above.is_numeric() || below.is_numeric()
            }
            Self::Bracket(inner)
            | Self::Root(inner)
            | Self::Magnitude(inner)
            | Self::Sum(_, inner) => inner.is_numeric(),
            Self::Call(_, arguments) | Self::Row(arguments) => {
                arguments.iter().any(Self::is_numeric)
            }
            Self::Terms(terms) => terms.iter().any(|term| term.1.is_numeric()),
            Self::Relation(..) | Self::Symbol(_) | Self::Word(_) | Self::Pi | Self::Cases(_) => {
                false
            }
        }
    }

    /// Whether a dot stands between two neighbouring factors.
    fn dotted(left: &Self, right: &Self) -> bool {
        let number_first = matches!(left, Self::Number { .. });
        let opens = matches!(
            right,
            Self::Number { .. } | Self::Power(..) | Self::Fraction(..) | Self::Slash(..)
        );
        (left.is_numeric() && right.is_numeric())
            || (number_first && opens && right.is_numeric())
            || (!number_first && matches!(right, Self::Number { .. }))
    }

    /// The Typst maths source, as the templates' functions take it.
    #[must_use]
    pub fn typst(&self) -> String {
        match self {
            Self::Number {
                printed,
                degrees,
                link,
            } => {
                let sign = if printed.negative { "-" } else { "" };
                let degree = if *degrees { "#u(\"°\")" } else { "" };
                let number = match (link, printed.exponent) {
                    (Some(id), None) => format!("#n({}, \"{}\")", literal(id), printed.mantissa),
                    (Some(id), Some(power)) => {
                        format!("#n({}, \"{}\", \"{power}\")", literal(id), printed.mantissa)
                    }
                    (None, None) => printed.mantissa.clone(),
                    (None, Some(power)) => format!("{} times 10^({power})", printed.mantissa),
                };
                format!("{sign}{number}{degree}")
            }
            Self::Symbol(symbol) => symbol.typst(),
            Self::Word(text) => literal(text),
            Self::Pi => "pi".to_owned(),
            Self::Terms(terms) => join_terms(terms, Self::typst),
            Self::Product(factors) => join_factors(factors, Self::typst, " dot ", " "),
            Self::Fraction(above, below) => format!("frac({}, {})", above.typst(), below.typst()),
            Self::Slash(above, below) => format!("{} \\/ {}", above.typst(), below.typst()),
            Self::Power(base, exponent) => format!("{}^({})", base.typst(), exponent.typst()),
            Self::Root(inner) => format!("sqrt({})", inner.typst()),
            Self::Bracket(inner) => format!("({})", inner.typst()),
            Self::Magnitude(inner) => format!("abs({})", inner.typst()),
            Self::Call(name, arguments) => {
                format!("{name}({})", join(arguments, Self::typst, ", "))
            }
            Self::Sum(index, term) => format!("scripts(sum)_{index} {}", term.typst()),
            Self::Relation(sign, left, right) => {
                format!("{} {sign} {}", left.typst(), right.typst())
            }
            Self::Row(pieces) => join(pieces, Self::typst, " "),
            Self::Cases(rows) => {
                let rows = rows.iter().map(|(value, condition)| match condition {
                    Some(condition) => {
                        format!("{} & quad \"if\" {}", value.typst(), condition.typst())
                    }
                    None => format!("{} & quad \"otherwise\"", value.typst()),
                });
                format!("cases({})", rows.collect::<Vec<_>>().join(", "))
            }
        }
    }

    /// The LaTeX maths source.
    #[must_use]
    pub fn latex(&self) -> String {
        match self {
            Self::Number {
                printed, degrees, ..
            } => {
                let sign = if printed.negative { "-" } else { "" };
                let degree = if *degrees { "^\\circ" } else { "" };
                match printed.exponent {
                    None => format!("{sign}{}{degree}", printed.mantissa),
                    Some(power) => {
                        format!("{sign}{} \\times 10^{{{power}}}{degree}", printed.mantissa)
                    }
                }
            }
            Self::Symbol(symbol) => symbol.latex(),
            Self::Word(text) => latex_text(text),
            Self::Pi => "\\pi".to_owned(),
            Self::Terms(terms) => join_terms(terms, Self::latex),
            Self::Product(factors) => join_factors(factors, Self::latex, " \\cdot ", " \\, "),
            Self::Fraction(above, below) => {
                format!("\\frac{{{}}}{{{}}}", above.latex(), below.latex())
            }
            Self::Slash(above, below) => format!("{} / {}", above.latex(), below.latex()),
            Self::Power(base, exponent) => format!("{}^{{{}}}", base.latex(), exponent.latex()),
            Self::Root(inner) => format!("\\sqrt{{{}}}", inner.latex()),
            Self::Bracket(inner) => format!("\\left({}\\right)", inner.latex()),
            Self::Magnitude(inner) => format!("\\left|{}\\right|", inner.latex()),
            Self::Call(name, arguments) => {
                let name = if *name == "atan2" {
                    "\\operatorname{atan2}".to_owned()
                } else {
                    format!("\\{name}")
                };
                format!(
                    "{name}\\left({}\\right)",
                    join(arguments, Self::latex, ", ")
                )
            }
            Self::Sum(index, term) => format!("\\sum_{{{index}}} {}", term.latex()),
            Self::Relation(sign, left, right) => {
                let sign = match *sign {
                    "<=" => "\\le",
                    ">=" => "\\ge",
                    other => other,
                };
                format!("{} {sign} {}", left.latex(), right.latex())
            }
            Self::Row(pieces) => join(pieces, Self::latex, " \\; "),
            Self::Cases(rows) => {
                let rows = rows.iter().map(|(value, condition)| match condition {
                    Some(condition) => {
                        format!("{} & \\text{{if }} {}", value.latex(), condition.latex())
                    }
                    None => format!("{} & \\text{{otherwise}}", value.latex()),
                });
                let rows = rows.collect::<Vec<_>>().join(" \\\\ ");
                ["\\begin{cases}", &rows, "\\end{cases}"].join(" ")
            }
        }
    }

    /// Spoken words, for accessibility.
    #[must_use]
    pub fn words(&self) -> String {
        match self {
            Self::Number {
                printed, degrees, ..
            } => {
                let sign = if printed.negative { "minus " } else { "" };
                let degree = if *degrees { " degrees" } else { "" };
                match printed.exponent {
                    None => format!("{sign}{}{degree}", printed.mantissa),
                    Some(power) => {
                        format!("{sign}{} times 10 to the {power}{degree}", printed.mantissa)
                    }
                }
            }
            Self::Symbol(symbol) => symbol.words(),
            Self::Word(text) => text.clone(),
            Self::Pi => "pi".to_owned(),
            Self::Terms(terms) => {
                let mut out = String::new();
                for (at, (minus, term)) in terms.iter().enumerate() {
                    out.push_str(match (at, minus) {
                        (0, false) => "",
                        (0, true) => "minus ",
                        (_, false) => " plus ",
                        (_, true) => " minus ",
                    });
                    out.push_str(&term.words());
                }
                out
            }
            Self::Product(factors) => join(factors, Self::words, " times "),
            Self::Fraction(above, below) | Self::Slash(above, below) => {
                format!("{} over {}", above.words(), below.words())
            }
            Self::Power(base, exponent) => match exponent.words().as_str() {
                "2" => format!("{} squared", base.words()),
                words => format!("{} to the power {words}", base.words()),
            },
            Self::Root(inner) => format!("the square root of {}", inner.words()),
            Self::Bracket(inner) => format!("the quantity {}", inner.words()),
            Self::Magnitude(inner) => format!("the magnitude of {}", inner.words()),
            Self::Call(name, arguments) => {
                format!("{name} of {}", join(arguments, Self::words, " and "))
            }
            Self::Sum(_, term) => format!("the sum of {}", term.words()),
            Self::Relation(sign, left, right) => {
                let sign = match *sign {
                    "<" => "is less than",
                    "<=" => "is at most",
                    ">" => "is greater than",
                    ">=" => "is at least",
                    _ => "equals",
                };
                format!("{} {sign} {}", left.words(), right.words())
            }
            Self::Row(pieces) => join(pieces, Self::words, " "),
            Self::Cases(rows) => {
                let rows = rows.iter().map(|(value, condition)| match condition {
                    Some(condition) => format!("{} if {}", value.words(), condition.words()),
                    None => format!("otherwise {}", value.words()),
                });
                rows.collect::<Vec<_>>().join(", ")
            }
        }
    }

    /// A bound of the printed width, in widths of a digit; measured on the faces of the page.
    #[must_use]
    pub fn width(&self) -> f64 {
        match self {
            Self::Number {
                printed, degrees, ..
            } => {
                let power = printed
                    .exponent
                    .map_or(0.0, |power| 4.6 + 0.8 * power.to_string().len() as f64);
                let point = if printed.mantissa.contains('.') {
                    -0.42
                } else {
                    0.0
                };
                let sign = if printed.negative { 1.6 } else { 0.0 };
                sign + printed.mantissa.len() as f64
                    + point
                    + power
                    + if *degrees { 0.8 } else { 0.0 }
            }
            Self::Symbol(symbol) => symbol.width(),
            Self::Word(text) => 0.95 * text.chars().count() as f64,
            Self::Pi => 1.3,
            Self::Terms(terms) => {
                let lead = if terms.first().is_some_and(|term| term.0) {
                    1.6
                } else {
                    0.0
                };
                lead + terms.iter().map(|term| 2.5 + term.1.width()).sum::<f64>() - 2.5
            }
            Self::Product(factors) => {
                let gaps = factors.windows(2).map(|pair| {
                    if Self::dotted(&pair[0], &pair[1]) {
                        1.5
                    } else {
                        0.4
                    }
                });
                factors.iter().map(Self::width).sum::<f64>() + gaps.sum::<f64>()
            }
            Self::Fraction(above, below) => above.width().max(below.width()) + 0.5,
            Self::Slash(above, below) => above.width() + below.width() + 1.2,
            Self::Power(base, exponent) => base.width() + 0.8 * exponent.width() + 0.2,
            Self::Root(inner) => inner.width() + 1.8,
            Self::Bracket(inner) => inner.width() + 1.7,
            Self::Magnitude(inner) => inner.width() + 1.2,
            Self::Call(name, arguments) => {
                let inner: f64 = arguments
                    .iter()
                    .map(|argument| argument.width() + 1.0)
                    .sum();
                0.95 * name.len() as f64 + inner + 1.2
            }
            Self::Sum(_, term) => 3.4 + term.width(),
            Self::Relation(_, left, right) => left.width() + right.width() + 2.7,
            Self::Row(pieces) => pieces.iter().map(|piece| piece.width() + 0.6).sum(),
            Self::Cases(rows) => {
                let widest = |widths: Vec<f64>| widths.into_iter().fold(0.0, f64::max);
                let values = rows.iter().map(|row| row.0.width()).collect();
                let conditions = rows.iter().map(|(_, condition)| {
                    condition
                        .as_ref()
                        .map_or(9.0, |condition| condition.width() + 3.0)
                });
                widest(values) + widest(conditions.collect()) + 5.0
            }
        }
    }
}

fn join(pieces: &[Math], form: impl Fn(&Math) -> String, between: &str) -> String {
    pieces.iter().map(form).collect::<Vec<_>>().join(between)
}

fn join_terms(terms: &[(bool, Math)], form: impl Fn(&Math) -> String) -> String {
    let mut out = String::new();
    for (at, (minus, term)) in terms.iter().enumerate() {
        out.push_str(match (at, minus) {
            (0, false) => "",
            (0, true) => "-",
            (_, false) => " + ",
            (_, true) => " - ",
        });
        out.push_str(&form(term));
    }
    out
}

fn join_factors(factors: &[Math], form: impl Fn(&Math) -> String, dot: &str, thin: &str) -> String {
    let mut out = String::new();
    for (at, factor) in factors.iter().enumerate() {
        if at > 0 {
            out.push_str(if Math::dotted(&factors[at - 1], factor) {
                dot
            } else {
                thin
            });
        }
        out.push_str(&form(factor));
    }
    out
}
