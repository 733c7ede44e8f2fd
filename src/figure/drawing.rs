//! The drawing: paths, circles and labels on a sheet, in mm from its upper left corner, y down.

use nalgebra::Vector2;

use super::rect::{Bounds, Rect};
use crate::quantity::real::{cos, sin};

/// A point or vector on the sheet (mm, y down).
pub type P2 = Vector2<f64>;

/// A finished drawing.
#[derive(Clone, Debug, PartialEq)]
pub struct Drawing {
    /// Width (mm).
    pub width_mm: f64,
    /// Height (mm).
    pub height_mm: f64,
    /// What is drawn, from the bottom layer up; labels last.
    pub items: Vec<Item>,
    /// Scale for the caption, such as `1:2`.
    pub scale: String,
    /// How the drawing looks at the joint, for the caption, such as `seen from +z`.
    pub view: String,
    /// Labels for which there was no free place, by their text.
    pub dropped: Vec<String>,
    /// What is not drawn or not to scale, in words for the caption.
    pub remarks: Vec<String>,
    /// What labels name.
    pub marks: Vec<Mark>,
    /// The labels that name a mark.
    pub ties: Vec<Tie>,
}

/// A label and what it names on the sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Tie {
    /// The label's text.
    pub text: String,
    /// Its box, the ring around a number included.
    pub rect: Rect,
    /// Number of what is named in [`Drawing::marks`].
    pub mark: usize,
    /// Whether a leader joins them.
    pub led: bool,
}

/// Something drawn that a label names.
#[derive(Clone, Debug, PartialEq)]
pub struct Mark {
    /// What it is.
    pub kind: MarkKind,
    /// The boxes that cover it.
    pub rects: Vec<Rect>,
}

/// Kinds of what labels name; a label is told apart from others of its kind.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MarkKind {
    /// A check point.
    Point,
    /// An arrow, straight, turning or end on.
    Arrow,
    /// A run.
    Run,
    /// A curve of a diagram with its ring.
    Curve,
}

impl Mark {
    /// How far a label's box stands off it.
    #[must_use]
    pub fn distance(&self, rect: &Rect) -> f64 {
        let all = self.rects.iter().map(|own| own.distance(rect));
        all.fold(f64::INFINITY, f64::min)
    }

    /// Whether a box meets it.
    #[must_use]
    pub fn meets(&self, rect: &Rect) -> bool {
        self.rects.iter().any(|own| own.overlaps(rect))
    }

    /// The same moved by a vector.
    #[must_use]
    pub fn shifted(&self, by: P2) -> Self {
        Self {
            rects: self.rects.iter().map(|rect| rect.shifted(by)).collect(),
            ..*self
        }
    }
}

impl Tie {
    /// The same moved by a vector.
    #[must_use]
    pub fn shifted(&self, by: P2) -> Self {
        Self {
            rect: self.rect.shifted(by),
            ..self.clone()
        }
    }
}

/// One thing drawn.
#[derive(Clone, Debug, PartialEq)]
pub enum Item {
    /// An open or closed line.
    Path(Path),
    /// A circle.
    Circle {
        /// Centre.
        centre: P2,
        /// Radius (mm).
        radius: f64,
        /// Outline.
        stroke: Option<Stroke>,
        /// Inside.
        fill: Fill,
    },
    /// A line of text.
    Label(Label),
}

/// A line of straight pieces and cubic curves.
#[derive(Clone, Debug, PartialEq)]
pub struct Path {
    /// First point.
    pub start: P2,
    /// The pieces that follow.
    pub pieces: Vec<Piece>,
    /// Whether it returns to its start.
    pub closed: bool,
    /// Its stroke.
    pub stroke: Option<Stroke>,
    /// Its inside.
    pub fill: Fill,
}

/// A piece of a path.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Piece {
    /// Straight to a point.
    Line(P2),
    /// Bézier curve with two control points to an end.
    Cubic(P2, P2, P2),
}

/// A stroke.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stroke {
    /// Width (mm).
    pub width: f64,
    /// Ink.
    pub ink: Ink,
    /// Its dashes.
    pub dash: Dash,
}

/// Dashes of a stroke.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Dash {
    /// None: a full line.
    Full,
    /// Dashes.
    Dashed,
    /// Dots.
    Dotted,
    /// Long dashes with dots between.
    DashDotted,
}

/// Ink of a stroke.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ink {
    /// Black.
    Black,
    /// Grey, for what helps the eye but is no part of the joint.
    Grey,
    /// Light grey: what stands under something else.
    Faint,
    /// Lighter still: weld metal inside the outline of a thick run.
    Light,
}

/// Inside of a closed shape.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Fill {
    /// Nothing.
    None,
    /// White, hides what is under it.
    White,
    /// Light grey: weld metal in section.
    Grey,
    /// Black.
    Black,
}

/// A line of text with the box it takes.
#[derive(Clone, Debug, PartialEq)]
pub struct Label {
    /// Its pieces.
    pub spans: Vec<Span>,
    /// Left end of the baseline.
    pub at: P2,
    /// Turn, counter-clockwise as read (rad).
    pub angle: f64,
    /// Width (mm).
    pub width: f64,
    /// Ink above the baseline (mm).
    pub rise: f64,
    /// Ink below the baseline (mm).
    pub fall: f64,
}

/// A piece of a label in one face.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Span {
    /// Its text.
    pub text: String,
    /// Its look.
    pub style: Style,
}

/// Look of a piece of text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    /// Upright.
    Plain,
    /// Italic: a symbol or a remark.
    Italic,
    /// Bold: a point's number.
    Bold,
    /// Italic subscript of the symbol before it.
    Sub,
}

impl Span {
    /// A piece of text in a style.
    #[must_use]
    pub fn new(text: impl Into<String>, style: Style) -> Self {
        Self {
            text: text.into(),
            style,
        }
    }
}

impl Stroke {
    /// A black line of a width in points.
    #[must_use]
    pub fn black(points: f64) -> Self {
        Self {
            width: points * super::PT,
            ink: Ink::Black,
            dash: Dash::Full,
        }
    }

    /// A grey line of a width in points.
    #[must_use]
    pub fn grey(points: f64) -> Self {
        Self {
            width: points * super::PT,
            ink: Ink::Grey,
            dash: Dash::Full,
        }
    }

    /// The same, dashed.
    #[must_use]
    pub const fn dashed(self) -> Self {
        self.with(Dash::Dashed)
    }

    /// The same with other dashes.
    #[must_use]
    pub const fn with(self, dash: Dash) -> Self {
        Self { dash, ..self }
    }
}

impl Label {
    /// The label's own directions on the sheet: along the text, and up from the baseline.
    #[must_use]
    pub fn directions(angle: f64) -> (P2, P2) {
        let (s, c) = (sin(angle), cos(angle));
        (P2::new(c, -s), P2::new(-s, -c))
    }

    /// The box that its ink takes.
    #[must_use]
    pub fn rect(&self) -> Rect {
        let (along, up) = Self::directions(self.angle);
        let centre = self.at + along * (self.width / 2.0) + up * ((self.rise - self.fall) / 2.0);
        Rect {
            centre,
            along,
            half: [self.width / 2.0, (self.rise + self.fall) / 2.0],
        }
    }

    /// Its text without styles.
    #[must_use]
    pub fn text(&self) -> String {
        self.spans.iter().map(|s| s.text.as_str()).collect()
    }
}

impl Path {
    /// A polyline through the points given, at least one.
    #[must_use]
    pub fn through(points: &[P2], stroke: Stroke) -> Self {
        Self {
            start: points.first().copied().unwrap_or_else(P2::zeros),
            pieces: points.iter().skip(1).map(|p| Piece::Line(*p)).collect(),
            closed: false,
            stroke: Some(stroke),
            fill: Fill::None,
        }
    }

    /// A closed shape without outline.
    #[must_use]
    pub fn filled(points: &[P2], fill: Fill) -> Self {
        Self {
            closed: true,
            stroke: None,
            fill,
            ..Self::through(points, Stroke::black(0.0))
        }
    }

    /// Every point that bounds the path: its ends and control points.
    fn hull(&self) -> Vec<P2> {
        let mut points = vec![self.start];
        for piece in &self.pieces {
            match *piece {
                Piece::Line(p) => points.push(p),
                Piece::Cubic(a, b, p) => points.extend([a, b, p]),
            }
        }
        points
    }

    fn shifted(&self, by: P2) -> Self {
        let pieces = self.pieces.iter().map(|piece| match *piece {
            Piece::Line(p) => Piece::Line(p + by),
            Piece::Cubic(a, b, p) => Piece::Cubic(a + by, b + by, p + by),
        });
        Self {
            start: self.start + by,
            pieces: pieces.collect(),
            ..self.clone()
        }
    }
}

impl Item {
    /// The same thing moved by a vector.
    #[must_use]
    pub fn shifted(&self, by: P2) -> Self {
        match self {
            Self::Path(path) => Self::Path(path.shifted(by)),
            Self::Circle {
                centre,
                radius,
                stroke,
                fill,
            } => Self::Circle {
                centre: centre + by,
                radius: *radius,
                stroke: *stroke,
                fill: *fill,
            },
            Self::Label(label) => Self::Label(Label {
                at: label.at + by,
                ..label.clone()
            }),
        }
    }

    /// Adds its extent, half the stroke included, to `bounds`.
    pub fn bound(&self, bounds: &mut Bounds) {
        match self {
            Self::Path(path) => {
                let half = path.stroke.map_or(0.0, |s| s.width / 2.0);
                path.hull().iter().for_each(|p| bounds.add(*p, half));
            }
            Self::Circle {
                centre,
                radius,
                stroke,
                ..
            } => {
                bounds.add(*centre, radius + stroke.map_or(0.0, |s| s.width / 2.0));
            }
            Self::Label(label) => label
                .rect()
                .corners()
                .iter()
                .for_each(|p| bounds.add(*p, 0.0)),
        }
    }
}
