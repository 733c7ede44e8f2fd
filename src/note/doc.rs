//! The document as data: sections, steps, tables, lists; what the templates read.
//!
//! Every mathematical piece carries its typeset forms already; the templates compute nothing.

use serde::Serialize;

/// A whole note, ready for the templates.
#[derive(Clone, Debug, Serialize)]
pub struct Doc {
    /// Particulars for head, title and document properties.
    pub head: Head,
    /// The verdict of the first page; a sheet has none.
    pub verdict: Option<Verdict>,
    /// Sections in print order; none is empty.
    pub sections: Vec<Section>,
    /// The calculation identity as printed in the foot, in groups, such as `7f3a 91c2 08de`; a sheet
    /// has none.
    pub identity: Option<String>,
    /// State of the note, such as `DRAFT — not signed`.
    pub state: String,
}

/// Particulars of the note; plain text as the user typed it.
#[derive(Clone, Debug, Serialize)]
pub struct Head {
    /// Number, such as `SN-104`; a sheet's name.
    pub note: String,
    /// Title.
    pub title: String,
    /// Issue and its ISO date; a sheet has none.
    pub issue: Option<(String, String)>,
    /// What stands under the title: number and issue, drawing, what the joint belongs to.
    pub particulars: Vec<String>,
    /// `a4` or `us-letter`, the typesetter's names.
    pub paper: &'static str,
}

/// The verdict: one large figure and the words beside it.
#[derive(Clone, Debug, Serialize)]
pub struct Verdict {
    /// What the figure is: `least margin of safety`, or that of the margins found.
    pub label: String,
    /// The figure with its sign, such as `+0.14`.
    pub figure: String,
    /// Paragraphs beside it.
    pub lines: Vec<Text>,
}

/// A numbered section.
#[derive(Clone, Debug, Serialize)]
pub struct Section {
    /// Its title.
    pub title: String,
    /// A stable name for links, such as `loads`.
    pub id: String,
    /// Its blocks, in order.
    pub blocks: Vec<Block>,
}

/// A block of a section.
#[derive(Clone, Debug, Serialize)]
#[serde(tag = "kind", rename_all = "kebab-case")]
pub enum Block {
    /// A paragraph.
    Para {
        /// Its text.
        text: Text,
    },
    /// A small heading inside a section (level 2).
    Heading {
        /// Its text.
        text: String,
    },
    /// A list with labels, such as assumptions A1, A2.
    Items {
        /// The entries.
        items: Vec<Item>,
    },
    /// A numbered step of the calculation.
    Step(Step),
    /// A table by rules alone.
    Table(Table),
    /// The drawing of the joint.
    Figure(FigureRef),
    /// The signature table.
    Signatures {
        /// Roles, in order.
        roles: Vec<String>,
    },
}

impl Block {
    /// The step, if it is one.
    pub fn as_step(&self) -> Option<&Step> {
        if let Self::Step(step) = self {
            Some(step)
        } else {
            None
        }
    }

    /// The table, if it is one.
    pub fn as_table(&self) -> Option<&Table> {
        if let Self::Table(table) = self {
            Some(table)
        } else {
            None
        }
    }

    /// The drawing, if it is one.
    pub fn as_figure(&self) -> Option<&FigureRef> {
        if let Self::Figure(figure) = self {
            Some(figure)
        } else {
            None
        }
    }
}

/// An entry of a labelled list.
#[derive(Clone, Debug, Serialize)]
pub struct Item {
    /// Label, such as `A1`; empty for a plain bullet.
    pub label: String,
    /// Text.
    pub text: Text,
    /// Visible mark after the text, such as `to be verified`.
    pub mark: Option<String>,
    /// Where it comes from, for the right margin.
    pub source: Option<String>,
}

/// A numbered step.
#[derive(Clone, Debug, Serialize)]
pub struct Step {
    /// Stable id, the target of links: letters, digits, `.`, `-`.
    pub id: String,
    /// Printed number.
    pub no: String,
    /// The line of words.
    pub says: Text,
    /// The equation in lines; the first starts with the symbol, later ones with `=` or an operator.
    /// Empty for a step in words only.
    pub lines: Vec<Line>,
    /// The equation as one Markdown display (LaTeX, aligned at `=`).
    pub latex: String,
    /// Sources for the right margin, one per line: a clause, `steps 5, 12`, `file.yaml:14`.
    pub source: Vec<Text>,
    /// Visible mark, such as `to be verified`.
    pub mark: Option<String>,
    /// Steps whose numbers stand in it, for the Markdown links: id and printed number.
    pub uses: Vec<(String, String)>,
}

/// A line of an equation, in typst maths; broken only where it must be.
#[derive(Clone, Debug, Serialize)]
pub struct Line {
    /// Typst maths, without the dollar signs: linked numbers as `#n("id", "4.243")` or
    /// `#n("id", "3.254", "6")` (mantissa, power of ten), results as
    /// `#res("-7.980", "5", "N mm")`, units after a plain number as `25.06#u("°")`. One `&` stands
    /// before the relation where the lines of an equation align.
    pub typst: String,
    /// The line in plain words, for accessibility.
    pub words: String,
    /// Whether the line starts under the first `=` (a continued line).
    pub continued: bool,
}

/// A table by rules alone: heavy, light, heavy.
#[derive(Clone, Debug, Serialize)]
pub struct Table {
    /// Stable id.
    pub id: String,
    /// Caption, printed above, in words.
    pub caption: Text,
    /// The formulas of its columns, printed under the caption, one each.
    pub formulas: Vec<Text>,
    /// Columns.
    pub columns: Vec<Column>,
    /// Rows.
    pub rows: Vec<Row>,
    /// A last row set off by a light rule, such as the sums.
    pub foot: Option<Row>,
    /// Ids of the steps that its cells take numbers from.
    pub uses: Vec<String>,
}

/// A column of a table.
#[derive(Clone, Debug, Serialize)]
pub struct Column {
    /// Head.
    pub head: Text,
    /// Unit under the head; empty if none.
    pub unit: Text,
    /// How cells align.
    pub align: Align,
}

/// Alignment of a column.
#[derive(Clone, Copy, Debug, Serialize, PartialEq, Eq)]
#[serde(rename_all = "kebab-case")]
pub enum Align {
    /// Words.
    Left,
    /// Numbers, on the decimal point.
    Point,
}

/// A row of a table.
#[derive(Clone, Debug, Serialize)]
pub struct Row {
    /// Cells, one per column.
    pub cells: Vec<Text>,
    /// Whether the row is printed bold (the least margin).
    pub strong: bool,
    /// Id, if links lead to it.
    pub id: Option<String>,
}

/// The drawing that the figure room made for this note.
#[derive(Clone, Debug, Serialize)]
pub struct FigureRef {
    /// Name of its file without extension.
    pub name: String,
    /// Stable id.
    pub id: String,
    /// Caption.
    pub caption: Text,
    /// Alternative text.
    pub alt: String,
}

/// Running text.
pub type Text = Vec<Inline>;

/// A piece of running text.
#[derive(Clone, Debug, Serialize, PartialEq)]
#[serde(tag = "kind", rename_all = "kebab-case")]
pub enum Inline {
    /// Plain text, exactly as it is to be read; the templates escape it.
    Plain {
        /// The text.
        text: String,
    },
    /// Emphasis.
    Emph {
        /// The text.
        text: String,
    },
    /// Bold.
    Strong {
        /// The text.
        text: String,
    },
    /// Grey, small: a mark or an aside.
    Aside {
        /// The text.
        text: String,
    },
    /// A number for a decimal-aligned cell or a line of text, split at its point.
    Number {
        /// Sign and whole digits, such as `−12`.
        whole: String,
        /// Point and decimals, such as `.50`; may be empty.
        decimals: String,
        /// Exponent of ten, if printed as m × 10ⁿ.
        exponent: Option<i32>,
        /// Step that made it, if it links.
        step: Option<String>,
    },
    /// Inline maths.
    Math {
        /// Typst maths without dollar signs.
        typst: String,
        /// LaTeX without dollar signs.
        latex: String,
        /// Plain words.
        words: String,
    },
    /// A link to a step or a drawing by its printed number, such as `step 12`.
    StepRef {
        /// Id of the step or drawing.
        id: String,
        /// Text of the link.
        text: String,
    },
}

impl Inline {
    /// The plain characters of a piece, maths as its words.
    #[must_use]
    pub fn words(&self) -> String {
        match self {
            Self::Plain { text }
            | Self::Emph { text }
            | Self::Strong { text }
            | Self::Aside { text }
            | Self::StepRef { text, .. } => text.clone(),
            Self::Number {
                whole,
                decimals,
                exponent,
                ..
            } => format!("{whole}{}", tail(decimals, *exponent)),
            Self::Math { words, .. } => words.clone(),
        }
    }
}

/// The plain characters of a text, maths as its words.
#[must_use]
pub fn words(text: &[Inline]) -> String {
    text.iter().map(Inline::words).collect()
}

/// What follows the whole digits of a number: decimals and power of ten.
#[must_use]
pub fn tail(decimals: &str, exponent: Option<i32>) -> String {
    let power = exponent
        .map(|e| format!("×10{}", superscript(e)))
        .unwrap_or_default();
    format!("{decimals}{power}")
}

/// An integer in superior figures.
fn superscript(n: i32) -> String {
    let figures = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let raise = |c: char| match c.to_digit(10) {
        Some(d) => figures[d as usize],
        None => '⁻',
    };
    n.to_string().chars().map(raise).collect()
}
