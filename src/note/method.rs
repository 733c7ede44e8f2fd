//! The method in one section, so that every later line can point at it.

use super::builder::Builder;
use super::doc::{Inline, Text};
use super::text::{math, piece};
use crate::formula::{Math, Printed, Symbol};
use crate::solve::Regime;

/// A symbol as a piece of text.
fn sym(base: &str, index: &[&str]) -> Inline {
    math(&Math::Symbol(Symbol::of(base, index)))
}

/// An equation of symbols: left = right.
fn equals(left: Math, right: Math) -> Inline {
    math(&Math::Relation("=", Box::new(left), Box::new(right)))
}

fn symbol(base: &str, index: &[&str]) -> Math {
    Math::Symbol(Symbol::of(base, index))
}

fn over(above: Math, below: Math) -> Math {
    Math::Slash(Box::new(above), Box::new(below))
}

/// `(a − b)` of two symbols.
fn difference(a: &str, index: &[&str], b: &str) -> Math {
    let terms = vec![(false, symbol(a, index)), (true, symbol(b, &["c"]))];
    Math::Bracket(Box::new(Math::Terms(terms)))
}

impl Builder<'_> {
    /// The method, its signs and its symbols.
    pub(super) fn method(&mut self, regime: Regime, on_throat: bool) {
        self.part("method", "Method");
        self.para(vec![piece(
            "Elastic line method: the weld is a line along its root, as wide as its effective throat; the parts are \
             rigid against it. The actions on the group give a force on each unit of throat area that is linear in the \
             position. Forces act on the weld group from the attached part, moments by the right-hand rule. Sources: \
             O. W. Blodgett, Design of Welded Structures (1966), section 7.4; R. G. Budynas and J. K. Nisbett, \
             Shigley’s Mechanical Engineering Design, chapter 9. The product of inertia is never dropped.",
        )]);
        match regime {
            Regime::Planar => self.para(planar()),
            Regime::Space => self.para(space()),
            Regime::Collinear { .. } => self.para(collinear()),
            Regime::Point => {}
        }
        if on_throat {
            self.para(throat_words(regime));
        }
        let stopped = (0..self.runs.len()).any(|run| self.counted(run).is_some());
        self.para(symbols(stopped, on_throat));
    }
}

/// The symbols that stand in formulas without a step of their own.
fn symbols(stopped: bool, on_throat: bool) -> Text {
    let mut text = vec![
        piece("Symbols: index "),
        sym("s", &[]),
        piece(" is the start of a run, "),
        sym("e", &[]),
        piece(" its end, "),
        sym("m", &[]),
        piece(" its middle, "),
        sym("c", &[]),
        piece(" the centroid of the group, "),
        sym("P", &[]),
        piece(" the point of application; "),
    ];
    if stopped {
        text.extend([
            sym("c", &["s"]),
            piece(" and "),
            sym("c", &["e"]),
            piece(" are what a stop takes off a run; "),
        ]);
    }
    text.extend([
        sym("i", &[]),
        piece(
            " counts the runs; a figure counts the runs too, with a coordinate the points, with a leg, a strength or a thickness \
             the parts (1 attached, 2 base); an index a, b, … tells sizes apart. ",
        ),
    ]);
    if on_throat {
        text.extend([
            sym("ell", &[]),
            piece(" is the direction of a run, "),
            sym("k", &[]),
            piece(" the faying normal, "),
            sym("n", &[]),
            piece(" = "),
            sym("k", &[]),
            piece(" × "),
            sym("ell", &[]),
            piece(" the direction across the run. "),
        ]);
    }
    text.push(piece(
        "Along a straight run the largest value of a check that is convex in the stress stands at an end; on arcs and \
         for other checks it is searched along the run.",
    ));
    text
}

fn planar() -> Text {
    let area = || symbol("A", &[]);
    let term =
        |moment: Math, lever: Math| over(Math::Product(vec![moment, lever]), symbol("J", &[]));
    let along = |axis: &'static str, minus: bool, lever: Math| {
        Math::Terms(vec![
            (false, over(symbol("F", &[axis]), area())),
            (minus, term(symbol("M", &["z"]), lever)),
        ])
    };
    let bending = Math::Terms(vec![
        (
            false,
            Math::Product(vec![symbol("N", &["x"]), difference("y", &[], "y")]),
        ),
        (
            true,
            Math::Product(vec![symbol("N", &["y"]), difference("x", &[], "x")]),
        ),
    ]);
    vec![
        piece("In the faying plane: "),
        equals(
            symbol("f", &["w", "x"]),
            along("x", true, difference("y", &[], "y")),
        ),
        piece("; "),
        equals(
            symbol("f", &["w", "y"]),
            along("y", false, difference("x", &[], "x")),
        ),
        piece("; out of it: "),
        equals(
            symbol("f", &["w", "z"]),
            Math::Terms(vec![
                (false, over(symbol("F", &["z"]), area())),
                (
                    false,
                    over(Math::Bracket(Box::new(bending)), symbol("Delta", &[])),
                ),
            ]),
        ),
        piece(", with the moments about the centroid."),
    ]
}

fn space() -> Text {
    let turn = |a: &'static str, b: &'static str| {
        Math::Terms(vec![
            (
                false,
                Math::Product(vec![symbol("theta", &[a]), difference(b, &[], b)]),
            ),
            (
                true,
                Math::Product(vec![symbol("theta", &[b]), difference(a, &[], a)]),
            ),
        ])
    };
    let along = |axis: &'static str, a: &'static str, b: &'static str| {
        let Math::Terms(mut terms) = turn(a, b) else {
            unreachable!("a turn has two terms")
        };
        terms.insert(0, (false, over(symbol("F", &[axis]), symbol("A", &[]))));
        equals(symbol("f", &["w", axis]), Math::Terms(terms))
    };
    vec![
        piece("In space: "),
        along("x", "y", "z"),
        piece("; "),
        along("y", "z", "x"),
        piece("; "),
        along("z", "x", "y"),
        piece(
            ", where the twist θ solves Kθ = M for the moments about the centroid, and K is the inertia tensor of the throat areas.",
        ),
    ]
}

fn collinear() -> Text {
    vec![
        piece("All runs lie on one line, along its unit vector u: the stress from the moments is "),
        math(&Math::Row(vec![
            Math::Word("(M × u)".to_owned()),
            over(symbol("p", &[]), symbol("I", &["L"])),
        ])),
        piece(", with M about the centroid, "),
        sym("p", &[]),
        piece(" from the centroid along the line and "),
        sym("I", &["L"]),
        piece(
            " the second moment of the throats about the centroid. A moment about the line itself finds no resistance and is refused.",
        ),
    ]
}

/// `(out ± across)/√2` with its symbols.
fn on_throat_plane(minus: bool, out: &Math) -> Math {
    let across = symbol("f", &["n"]);
    let terms = Math::Terms(vec![(false, out.clone()), (minus, across)]);
    let root = Math::Root(Box::new(Math::Number {
        printed: Printed::typed("2", 2.0),
        degrees: false,
        link: None,
    }));
    over(Math::Bracket(Box::new(terms)), root)
}

fn throat_words(regime: Regime) -> Text {
    let out = match regime {
        Regime::Planar => symbol("f", &["w", "z"]),
        Regime::Space | Regime::Collinear { .. } | Regime::Point => symbol("f", &["out"]),
    };
    vec![
        piece("On the throat plane of a fillet with equal legs, tension positive: "),
        equals(symbol("sigma", &["perp"]), on_throat_plane(true, &out)),
        piece(" and "),
        equals(symbol("tau", &["perp"]), on_throat_plane(false, &out)),
        piece(
            " if the toe on the base stands toward the direction across the run, with the signs of ",
        ),
        sym("f", &["n"]),
        piece(" changed if it stands against it; "),
        math(&out),
        piece(" is the stress out of the faying plane, "),
        sym("f", &["n"]),
        piece(
            " that across the run, and the table “Runs as given” tells the toe of each run. At another angle the plane \
             halves the angle between the faces; with unequal legs it is square \
             to the line from toe to toe. A stated throat and a partial penetration weld are taken as fillets of equal \
             legs; the plane of a complete penetration weld is the faying plane itself.",
        ),
    ]
}
