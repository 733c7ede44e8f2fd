//! The keys of the joint file and of the project file: name, form, whether it must be there, a line of words, an example.
//!
//! `read` asks for these and no others; README.md's table of keys says the same more briefly.

mod weld;

pub use weld::{ARC, CIRCLE, PATTERN, PENETRATION, RUN, SIDES, STITCH, WELD};

use crate::source::{Choice, Form, Key, KeyTable, Sign};

const ANY: usize = usize::MAX;
const LENGTH: Form = Form::Quantity("length", Sign::Any);
const SIZE: Form = Form::Quantity("length", Sign::Positive);
const GAP: Form = Form::Quantity("length", Sign::NotNegative);
const STRENGTH: Form = Form::Quantity("stress", Sign::Positive);
const ANGLE: Form = Form::Quantity("angle", Sign::Any);
const NUMBER: Form = Form::Quantity("ratio", Sign::Any);
const FORCE: Form = Form::Quantity("force", Sign::Any);
const MOMENT: Form = Form::Quantity("moment", Sign::Any);
const POINT: Form = Form::List(&LENGTH, 2, 3);
const AXIS: Form = Form::List(&NUMBER, 3, 3);
const TEXTS: Form = Form::List(&Form::Text, 0, ANY);
const PAPER: Form = Form::Words(&["A4", "US Letter"]);
const PARTS: Form = Form::Named(&Form::Map(&PART), 1);
const CHECKS: Form = Form::List(&Form::Map(&CHECK), 1, ANY);
const ASSUMPTIONS: Form = Form::List(&Form::Either(&[Form::Text, Form::Map(&ASSUMPTION)]), 0, ANY);
const LEVEL: Form = Form::Words(&["service", "factored", "limit", "ultimate"]);

const SOURCE: Key = Key::may(
    "source",
    Form::Text,
    "where the values come from; without it they are printed as to be verified",
    "test report TR-88",
);
const TO_BE_VERIFIED: Key = Key::may(
    "to be verified",
    Form::Flag,
    "whether this is an open item",
    "true",
);
const F_Y: Key = Key::may("f_y", STRENGTH, "yield strength", "355 MPa");
const F_U: Key = Key::may("f_u", STRENGTH, "ultimate strength", "470 MPa");

/// The joint file.
pub static JOINT: KeyTable = KeyTable::new(
    "a joint file",
    "One welded joint and the note on it",
    &[
        Key::must("note", Form::Text, "number of the note", "SN-104"),
        Key::must(
            "title",
            Form::Text,
            "title of the note",
            "Mast foot to deck",
        ),
        Key::must("revision", Form::Text, "issue, a letter or number", "B"),
        Key::must("date", Form::Date, "date of the issue", "2026-05-04"),
        Key::may(
            "drawing",
            Form::Text,
            "drawing of the joint",
            "LM-2207 sheet 3",
        ),
        Key::may(
            "item",
            Form::Text,
            "what the joint belongs to",
            "launch mast",
        ),
        Key::may(
            "purpose",
            Form::Text,
            "what the note is to show",
            "Shows that the weld carries the gust.",
        ),
        Key::may(
            "units",
            Form::Map(&UNITS),
            "the units that the note is printed in",
            "{force: N, length: mm}",
        ),
        Key::may("paper", PAPER, "size of the page; A4 if not told", "A4"),
        Key::must(
            "frame",
            Form::Map(&FRAME),
            "the joint frame in words",
            "{origin: lower aft corner, z: outboard}",
        ),
        Key::may(
            "parts",
            PARTS,
            "the parts joined, by their names",
            "{lug: {material: S355J2}, deck: {material: S355J2}}",
        ),
        Key::may(
            "filler",
            Form::Either(&[Form::Text, Form::Map(&FILLER)]),
            "the filler metal",
            "{name: E70XX, f_u: 70 ksi, source: WPS-12}",
        ),
        Key::must(
            "weld",
            Form::Map(&WELD),
            "the weld group",
            "{joins: [lug, deck], pattern: {shape: box, width: 80, depth: 120, fillet: 6}}",
        ),
        Key::must(
            "loads",
            Form::Map(&LOADS),
            "the load cases",
            "{at: [80, 0, 90], level: ultimate, cases: [{case: L1, force: [0, 4.2 kN, 0]}]}",
        ),
        Key::may(
            "checks",
            CHECKS,
            "the checks asked for",
            "[{clause: EN 1993-1-8 4.5.3.2}]",
        ),
        Key::may(
            "assumptions",
            ASSUMPTIONS,
            "what the note takes for granted",
            "[The deck is stiff against the lug.]",
        ),
        Key::may(
            "cautions",
            TEXTS,
            "cautions of this joint, beside the usual ones",
            "[Not for use below -20 °C.]",
        ),
        Key::may(
            "excluded",
            Form::List(&Form::Map(&EXCLUSION), 0, ANY),
            "failure paths that somebody else checks",
            "[{path: fatigue, by: note SN-020}]",
        ),
        Key::may(
            "changes",
            Form::List(&Form::Map(&CHANGE), 0, ANY),
            "history of the issues",
            "[{revision: B, date: 2026-05-04, says: gust raised}]",
        ),
        Key::may(
            "signatures",
            TEXTS,
            "roles that sign; prepared, checked, approved if not told",
            "[prepared, checked]",
        ),
    ],
);

/// The project file.
pub static PROJECT: KeyTable = KeyTable::new(
    "a project file",
    "What the joints of a folder share; what a joint says itself wins",
    &[
        Key::may(
            "units",
            Form::Map(&UNITS),
            "the units of joints that name none, and of bare numbers of this file",
            "{force: N, length: mm}",
        ),
        Key::may(
            "paper",
            PAPER,
            "size of the page of joints that name none",
            "A4",
        ),
        Key::may(
            "note prefix",
            Form::Text,
            "stands before the number of a note that is digits alone",
            "SN-",
        ),
        Key::may("drawing", Form::Text, "drawing of the joints", "LM-2207"),
        Key::may(
            "item",
            Form::Text,
            "what the joints belong to",
            "launch mast",
        ),
        Key::may(
            "parts",
            PARTS,
            "parts that a weld may join, by their names",
            "{deck: {material: S355J2}}",
        ),
        Key::may(
            "materials",
            Form::Named(&Form::Map(&MATERIAL), 0),
            "strengths of parts that give none, by the name of their material",
            "{S355J2: {f_u: 470 MPa, source: certificate MC-12}}",
        ),
        Key::may(
            "fillers",
            Form::Named(&Form::Map(&SHARED_FILLER), 0),
            "fillers that a joint may name, with their strengths",
            "{E70XX: {f_u: 70 ksi, source: WPS-12}}",
        ),
        Key::may(
            "checks",
            CHECKS,
            "the checks of joints that ask for none",
            "[{clause: EN 1993-1-8 4.5.3.2}]",
        ),
        Key::may(
            "assumptions",
            ASSUMPTIONS,
            "what all notes take for granted, before the joint's own",
            "[The deck is stiff.]",
        ),
        Key::may(
            "cautions",
            TEXTS,
            "cautions of all joints, before the joint's own",
            "[Not for use below -20 °C.]",
        ),
        Key::may(
            "signatures",
            TEXTS,
            "roles that sign the notes of joints that name none",
            "[prepared, checked]",
        ),
    ],
);

/// An entry of `materials`; free keys are further strengths by their names.
pub static MATERIAL: KeyTable = KeyTable::new(
    "a material",
    "Strengths of a material; any further one stands by its name, such as `F_su`",
    &[F_Y, F_U, SOURCE, TO_BE_VERIFIED],
)
.with_free(Form::Text);

/// An entry of `fillers`; free keys are further strengths by their names.
pub static SHARED_FILLER: KeyTable = KeyTable::new(
    "a filler",
    "Strengths of a filler; any further one stands by its name, such as `F_allow`",
    &[F_U, SOURCE, TO_BE_VERIFIED],
)
.with_free(Form::Text);

/// `units`.
pub static UNITS: KeyTable = KeyTable::new(
    "`units`",
    "The printing set: N and mm, kN and mm, N and m, lbf and in, or kip and in",
    &[
        Key::must(
            "force",
            Form::Words(&["N", "kN", "lbf", "kip"]),
            "unit of forces",
            "N",
        ),
        Key::must(
            "length",
            Form::Words(&["mm", "m", "in"]),
            "unit of lengths",
            "mm",
        ),
    ],
);

/// `frame`.
pub static FRAME: KeyTable = KeyTable::new(
    "`frame`",
    "The joint frame in words: right-handed, z out of the base for a planar group",
    &[
        Key::must(
            "origin",
            Form::Text,
            "where the origin is",
            "lower aft corner of the pad",
        ),
        Key::may("x", Form::Text, "where x points", "forward"),
        Key::may("y", Form::Text, "where y points", "up"),
        Key::may("z", Form::Text, "where z points", "outboard"),
    ],
);

/// An entry of `parts`; free keys are further strengths by their names.
pub static PART: KeyTable = KeyTable::new(
    "a part",
    "A part joined; any further strength stands by its name, such as `F_su`",
    &[
        Key::must("material", Form::Text, "material as named", "S355J2"),
        Key::may("thickness", SIZE, "thickness at the weld", "10 mm"),
        F_Y,
        F_U,
        SOURCE,
        TO_BE_VERIFIED,
    ],
)
.with_free(Form::Text);

/// `filler`; free keys are further strengths by their names.
pub static FILLER: KeyTable = KeyTable::new(
    "`filler`",
    "The filler metal; any further strength stands by its name, such as `F_allow`",
    &[
        Key::must("name", Form::Text, "designation", "G 46 4 M21 3Si1"),
        F_U,
        SOURCE,
        TO_BE_VERIFIED,
    ],
)
.with_free(Form::Text);

/// An entry of `checks`; free keys are the values that the sheet takes.
pub static CHECK: KeyTable = KeyTable::new(
    "a check",
    "A clause sheet by its name, and the values that it takes by theirs",
    &[
        Key::must(
            "clause",
            Form::Text,
            "name of a clause sheet",
            "EN 1993-1-8 4.5.3.2",
        ),
        SOURCE,
        TO_BE_VERIFIED,
    ],
)
.with_free(Form::Text);

/// An entry of `assumptions`.
pub static ASSUMPTION: KeyTable = KeyTable::new(
    "an assumption",
    "An assumption that may be an open item",
    &[
        Key::must(
            "says",
            Form::Text,
            "the assumption",
            "The deck is stiffened under the edge.",
        ),
        TO_BE_VERIFIED,
    ],
);

/// An entry of `excluded`.
pub static EXCLUSION: KeyTable = KeyTable::new(
    "an exclusion",
    "A failure path that this note leaves to somebody else",
    &[
        Key::must(
            "path",
            Form::Text,
            "a failure path of the note's table",
            "fatigue",
        ),
        Key::must("by", Form::Text, "who checks it, where", "note SN-020"),
    ],
);

/// An entry of `changes`.
pub static CHANGE: KeyTable = KeyTable::new(
    "a change",
    "An issue and what it changed",
    &[
        Key::must("revision", Form::Text, "the issue", "B"),
        Key::must("date", Form::Date, "its date", "2026-05-04"),
        Key::must(
            "says",
            Form::Text,
            "what changed and why",
            "gust raised to 4.2 kN",
        ),
    ],
);

/// `loads`.
pub static LOADS: KeyTable = KeyTable::new(
    "`loads`",
    "Actions on the weld from the attached part",
    &[
        Key::may(
            "at",
            POINT,
            "point of application for each case that names none",
            "[210, 60, 0]",
        ),
        Key::may(
            "level",
            LEVEL,
            "level of each case that names none",
            "ultimate",
        ),
        Key::may(
            "frames",
            Form::Named(&Form::Map(&LOAD_FRAME), 0),
            "frames that cases may be told in",
            "{sling: {origin: [0, 0, 0], x: [1, 0, 0], y: [0, 0.8, 0.6], z: [0, -0.6, 0.8]}}",
        ),
        Key::must(
            "cases",
            Form::List(&Form::Map(&CASE), 1, ANY),
            "the load cases",
            "[{case: L01, force: [0, -4.2 kN, 0]}]",
        ),
    ],
);

/// An entry of `frames`.
pub static LOAD_FRAME: KeyTable = KeyTable::new(
    "a frame",
    "A right-handed frame in the joint frame",
    &[
        Key::must("origin", POINT, "its origin", "[50, 170, 30]"),
        Key::must("x", AXIS, "its x axis, of length 1", "[1, 0, 0]"),
        Key::must("y", AXIS, "its y axis, of length 1", "[0, 0.8, 0.6]"),
        Key::must("z", AXIS, "its z axis, of length 1", "[0, -0.6, 0.8]"),
    ],
);

/// An entry of `cases`.
pub static CASE: KeyTable = KeyTable::new(
    "a load case",
    "One load case: a force, a moment about the point, or both",
    &[
        Key::must("case", Form::Text, "its name, once in a file", "L01"),
        Key::may("says", Form::Text, "what it is", "gust abeam"),
        Key::may(
            "level",
            LEVEL,
            "whether and how the loads are factored",
            "ultimate",
        ),
        Key::may(
            "in",
            Form::Text,
            "name of the frame that it is told in",
            "sling",
        ),
        Key::may("at", POINT, "point of application", "[210, 60, 0]"),
        Key::may(
            "force",
            Form::List(&FORCE, 2, 3),
            "components of the force",
            "[0, -4.2 kN, 0]",
        ),
        Key::may(
            "moment",
            Form::List(&MOMENT, 3, 3),
            "components of the moment about the point",
            "[0, 0, 0.35 kN m]",
        ),
    ],
)
.with_choices(&[Choice::Some(&["force", "moment"])]);
