//! A line of the calculation as it stands on the page: symbol = symbols = numbers = result, with unit.
//!
//! Breaks before `=`, and before a plus or minus where one reading alone is too long.

use super::ledger::{Env, Kind, Ledger, Value};
use super::math::Math;
use super::present::{Presenter, Reading};
use crate::quantity::UnitSet;

/// An equation in its lines.
#[derive(Clone, PartialEq, Debug, Default)]
pub struct Equation {
    /// Lines in Typst maths with words; aligned at `&`.
    pub lines: Vec<EquationLine>,
    /// The whole in LaTeX, aligned at `&`.
    pub latex: String,
}

/// A line of an equation.
#[derive(Clone, PartialEq, Debug)]
pub struct EquationLine {
    /// Typst maths.
    pub typst: String,
    /// Spoken words.
    pub words: String,
    /// Whether it continues the line above.
    pub continued: bool,
}

/// What fits on a line, in widths of a digit at the text size: 141 mm of 9.5 pt figures.
const LINE: f64 = 83.5;

/// One reading of an equation with the sign before it.
struct Piece {
    typst: String,
    latex: String,
    words: String,
    width: f64,
}

impl Ledger {
    /// The equation of a line.
    #[must_use]
    pub fn equation(&self, value: Value) -> Equation {
        let entry = self.get(value);
        let empty = Env::default();
        let mut remarks = Vec::new();
        let mut readings: Vec<Math> = Vec::new();
        match &entry.kind {
            Kind::Given(_) => {}
            Kind::Converted { given, node } => {
                readings.push(Math::Word(given.text().replacen('-', "−", 1)));
                readings.extend(Presenter::read(self, &empty, node, "", true).math);
            }
            Kind::Step { node, text, env } => {
                let symbols = Presenter::read(self, env, node, text, false);
                let Reading {
                    math,
                    remarks: chosen,
                } = Presenter::read(self, env, node, text, true);
                readings.extend(symbols.math);
                readings.extend(math.filter(|math| Some(math) != readings.last()));
                remarks = chosen;
            }
            Kind::Found { .. } => {}
            Kind::Bound { .. } => return self.bound_line(value),
        }
        let mut pieces: Vec<Piece> = readings.iter().flat_map(split_long).collect();
        let plain_result = Math::plain(self.printed(value));
        let repeats = readings
            .last()
            .is_some_and(|last| last.words() == plain_result.words());
        if repeats && pieces.len() > 1 {
            pieces.pop();
        }
        pieces.push(self.result(value, &remarks));
        lay_out(&entry.symbol, &pieces)
    }

    /// A formula in symbols as the head of a table's column: `A_i = t_i L_i`.
    ///
    /// # Errors
    ///
    /// [`super::FormulaError`] if the text does not parse.
    pub fn column_formula(
        &self,
        env: &Env,
        symbol: &super::Symbol,
        text: &str,
        set: &str,
    ) -> Result<Math, super::FormulaError> {
        let node = super::parse(text)?;
        let index = env.sets.get(set).map_or("i", |set| set.index.as_str());
        let formula = Presenter::head(self, env, &node, text, set);
        Ok(Math::Relation(
            "=",
            Box::new(Math::Symbol(symbol.with(index))),
            Box::new(formula),
        ))
    }

    /// A formula in symbols as a clause states it, every branch of a choice with its condition.
    ///
    /// `env` binds names to entries for their symbols; no value is read.
    #[must_use]
    pub fn rule(&self, env: &Env, symbol: &super::Symbol, node: &super::Node) -> Equation {
        let pieces = split_long(&Presenter::rule(self, env, node));
        lay_out(symbol, &pieces)
    }

    /// A condition in symbols as a clause states it; `env` as for [`Ledger::rule`].
    #[must_use]
    pub fn condition(&self, env: &Env, condition: &super::Condition) -> Math {
        Presenter::condition(self, env, condition)
    }

    /// The bold result with its unit, and remarks behind it.
    fn result(&self, value: Value, remarks: &[Math]) -> Piece {
        let entry = self.get(value);
        let printed = self.printed(value);
        let unit = unit_text(self.units(), entry.dim);
        let sign = match (printed.negative, entry.signed) {
            (true, _) => "-",
            (false, true) => "+",
            (false, false) => "",
        };
        let exponent = printed
            .exponent
            .map(|power| power.to_string())
            .unwrap_or_default();
        let mut typst = format!(
            "#res(\"{sign}{}\", \"{exponent}\", \"{unit}\")",
            printed.mantissa
        );
        let number = match printed.exponent {
            Some(power) => format!("{sign}{} \\times 10^{{{power}}}", printed.mantissa),
            None => format!("{sign}{}", printed.mantissa),
        };
        let mut latex = format!(
            "\\mathbf{{{number}{}}}",
            unit_latex(self.units(), entry.dim)
        );
        let mut words = format!(
            "{}{} {unit}",
            if sign == "+" { "plus " } else { "" },
            Math::plain(printed.clone()).words()
        );
        let mut width =
            Math::plain(printed).width() * 1.16 + 0.4 + 1.65 * unit.chars().count() as f64;
        for remark in remarks {
            typst.push_str(&format!(" quad ({})", remark.typst()));
            latex.push_str(&format!(" \\quad ({})", remark.latex()));
            words.push_str(&format!(", {}", remark.words()));
            width += 3.9 + remark.width();
        }
        Piece {
            typst: format!("= {typst}"),
            latex: format!("= {latex}"),
            words: format!("equals {}", words.trim()),
            width: width + 2.7,
        }
    }

    fn bound_line(&self, value: Value) -> Equation {
        let entry = self.get(value);
        let limit = Math::plain(self.printed(value));
        let piece = Piece {
            typst: format!("<= {}", limit.typst()),
            latex: format!("\\le {}", limit.latex()),
            words: format!("is at most {}", limit.words()),
            width: 8.0,
        };
        lay_out(&entry.symbol, &[piece])
    }
}

/// The unit of a dimension as the templates take it: `N mm`, `mm^4`, `N/mm`, `N mm^-3`, `°`.
fn unit_text(units: UnitSet, dim: crate::quantity::Dim) -> String {
    let is_one = |power: f64| (power - 1.0).abs() < 1e-9;
    let factors = units.unit_of(dim);
    if let [(above, one), (below, minus)] = factors.as_slice()
        && is_one(*one)
        && *minus < 0.0
    {
        let power = if is_one(-minus) {
            String::new()
        } else {
            format!("^{}", -minus)
        };
        return format!("{above}/{below}{power}");
    }
    let words = factors.iter().map(|(name, power)| match *name {
        "deg" => "°".to_owned(),
        name if is_one(*power) => name.to_owned(),
        name => format!("{name}^{power}"),
    });
    words.collect::<Vec<_>>().join(" ")
}

/// The unit in LaTeX, with a thin space before it.
fn unit_latex(units: UnitSet, dim: crate::quantity::Dim) -> String {
    let factors = units.unit_of(dim);
    if factors.is_empty() {
        return String::new();
    }
    if let [("deg", power)] = factors.as_slice()
        && (power - 1.0).abs() < 1e-9
    {
        return "^\\circ".to_owned();
    }
    if let [(above, one), (below, minus)] = factors.as_slice()
        && (one - 1.0).abs() < 1e-9
        && *minus < 0.0
    {
        let power = if (minus + 1.0).abs() < 1e-9 {
            String::new()
        } else {
            format!("^{{{}}}", -minus)
        };
        return format!("\\,\\mathrm{{{above}/{below}}}{power}");
    }
    let parts: Vec<String> = factors
        .iter()
        .map(|(name, power)| {
            if (power - 1.0).abs() < 1e-9 {
                format!("\\mathrm{{{name}}}")
            } else {
                format!("\\mathrm{{{name}}}^{{{power}}}")
            }
        })
        .collect();
    format!("\\,{}", parts.join("\\,"))
}

/// A reading as a piece, in several where it is too long for a line: broken before plus or minus.
fn split_long(math: &Math) -> Vec<Piece> {
    let piece = |sign: &str, math: &Math| Piece {
        typst: format!("{sign} {}", math.typst()),
        latex: format!(
            "{} {}",
            if sign == "quad + thin" {
                "\\quad +"
            } else {
                "="
            },
            math.latex()
        ),
        words: format!(
            "{} {}",
            if sign == "=" { "equals" } else { "plus" },
            math.words()
        ),
        width: math.width() + 2.7,
    };
    let Math::Terms(terms) = math else {
        return vec![piece("=", math)];
    };
    if math.width() + 6.0 <= LINE {
        return vec![piece("=", math)];
    }
    let mut pieces: Vec<Piece> = Vec::new();
    let mut group: Vec<(bool, Math)> = Vec::new();
    let close = |group: &mut Vec<(bool, Math)>, pieces: &mut Vec<Piece>| {
        if group.is_empty() {
            return;
        }
        let math = Math::Terms(std::mem::take(group));
        let first = pieces.is_empty();
        let minus = matches!(&math, Math::Terms(terms) if terms[0].0);
        let (sign, latex, words) = match (first, minus) {
            (true, _) => ("=", "=", "equals"),
            (false, false) => ("quad + thin", "\\quad +", "plus"),
            (false, true) => ("quad", "\\quad", ""),
        };
        pieces.push(Piece {
            typst: format!("{sign} {}", math.typst()),
            latex: format!("{latex} {}", math.latex()),
            words: format!("{words} {}", math.words()).trim().to_owned(),
            width: LINE,
        });
    };
    for term in terms {
        group.push(term.clone());
        if Math::Terms(group.clone()).width() + 6.0 > LINE && group.len() > 1 {
            let last = group.pop().expect("the group has two terms or more");
            close(&mut group, &mut pieces);
            group.push(last);
        }
    }
    close(&mut group, &mut pieces);
    pieces
}

/// Where the lines of an equation begin: as full as they go, but no result stands alone on a line
/// that could hold the numbers before it, too.
fn breaks(start: f64, pieces: &[Piece]) -> Vec<usize> {
    let mut begins = vec![0];
    let mut used = start;
    for (at, piece) in pieces.iter().enumerate() {
        if at > 0 && used + piece.width > LINE {
            begins.push(at);
            used = start;
        }
        used += piece.width;
    }
    let (last, begin) = (pieces.len() - 1, begins[begins.len() - 1]);
    let alone = begins.len() > 1 && begin == last;
    let before = if begins.len() > 1 {
        begins[begins.len() - 2]
    } else {
        0
    };
    if alone && last - before > 1 && start + pieces[last - 1].width + pieces[last].width <= LINE {
        begins.pop();
        begins.push(last - 1);
    }
    begins
}

/// Sets the pieces in lines after the symbol.
fn lay_out(symbol: &super::Symbol, pieces: &[Piece]) -> Equation {
    let start = symbol.width() + 0.5;
    let begins = breaks(start, pieces);
    let mut lines: Vec<EquationLine> = Vec::new();
    let mut latex = symbol.latex();
    for (at, piece) in pieces.iter().enumerate() {
        if at == 0 {
            lines.push(EquationLine {
                typst: format!("{} &{}", symbol.typst(), piece.typst),
                words: format!("{} {}", symbol.words(), piece.words),
                continued: false,
            });
            latex.push_str(&format!(" &{}", piece.latex));
        } else if !begins.contains(&at) {
            let line = lines.last_mut().expect("the first piece made a line");
            line.typst.push_str(&format!(" {}", piece.typst));
            line.words.push_str(&format!(" {}", piece.words));
            latex.push_str(&format!(" {}", piece.latex));
        } else {
            lines.push(EquationLine {
                typst: format!("&{}", piece.typst),
                words: piece.words.clone(),
                continued: true,
            });
            latex.push_str(&format!(" \\\\\n&{}", piece.latex));
        }
    }
    Equation {
        lines,
        latex: ["\\begin{aligned}", &latex, "\\end{aligned}"].join("\n"),
    }
}
