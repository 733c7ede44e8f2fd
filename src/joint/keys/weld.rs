//! The keys of `weld`: runs, their paths and sizes, the pattern.

use super::{ANGLE, ANY, AXIS, GAP, NUMBER, POINT, SIZE};
use crate::source::{Choice, Form, Key, KeyTable, Sign};

const END: Form = Form::Words(&["full", "less leg", "less throat", "continuous"]);
const TOE: Form = Form::Either(&[
    Form::Words(&["+x", "-x", "+y", "-y", "+z", "-z", "outside", "inside"]),
    Form::List(&NUMBER, 2, 3),
]);
const PATHS: &[&str] = &["straight", "arc", "circle", "polyline"];
const SIZES: &[&str] = &["fillet", "throat", "partial", "complete"];
const JOINS: Key = Key::may(
    "joins",
    Form::List(&Form::Text, 2, 2),
    "the attached part, then the base part",
    "[lug, deck]",
);
const ENDS: Key = Key::may(
    "ends",
    Form::Either(&[END, Form::List(&END, 2, 2)]),
    "what free ends do: one word, or first and last; `full` if not told",
    "less throat",
);
const TOE_SIDE: Key = Key::may(
    "toe",
    TOE,
    "side of the run on which the fillet stands; untold, both are evaluated",
    "-y",
);
const NORMAL: Key = Key::may(
    "normal",
    AXIS,
    "normal of the faying face, from base to attached part; [0, 0, 1] if not told",
    "[0, 1, 0]",
);
const ROOT_GAP: Key = Key::may("gap", GAP, "root gap", "1 mm");
const BETWEEN: Key = Key::may(
    "between",
    Form::Quantity("angle", Sign::Positive),
    "angle between the fusion faces; a right angle if not told",
    "75 deg",
);
const FILLET: Key = Key::may(
    "fillet",
    Form::Either(&[SIZE, Form::List(&SIZE, 2, 2)]),
    "leg of a fillet, or the legs on the base and on the attached part",
    "6",
);
const LEG_MEASURED: Key = Key::may(
    "leg measured",
    Form::Words(&["along faces", "square to face"]),
    "how the leg of a skewed fillet is measured; `along faces` if not told",
    "along faces",
);
const THROAT: Key = Key::may(
    "throat",
    SIZE,
    "effective throat of a fillet, as stated",
    "4",
);
const LEG: Key = Key::may(
    "leg",
    SIZE,
    "leg beside a stated throat, for rules on sizes",
    "6",
);
const PARTIAL: Key = Key::may(
    "partial",
    SIZE,
    "effective throat of a partial penetration weld",
    "5",
);
const COMPLETE: Key = Key::may(
    "complete",
    Form::Words(&["tee", "butt"]),
    "complete penetration, in a tee or a butt joint",
    "tee",
);

/// `weld`.
pub static WELD: KeyTable = KeyTable::new(
    "`weld`",
    "The weld group; what stands beside the runs holds for each run that does not say otherwise",
    &[
        JOINS,
        ENDS,
        FILLET,
        LEG_MEASURED,
        THROAT,
        LEG,
        PARTIAL,
        COMPLETE,
        TOE_SIDE,
        NORMAL,
        ROOT_GAP,
        BETWEEN,
        Key::may(
            "runs",
            Form::List(&Form::Map(&RUN), 0, ANY),
            "the runs",
            "[{name: foot, straight: [[0, 0], [160, 0]], fillet: 8}]",
        ),
        Key::may(
            "pattern",
            Form::Map(&PATTERN),
            "a group of runs by the trade name of its shape",
            "{shape: channel, width: 80, depth: 120, fillet: 6}",
        ),
    ],
)
.with_choices(&[Choice::Some(&["runs", "pattern"]), Choice::AtMostOne(SIZES)]);

/// An entry of `runs`.
pub static RUN: KeyTable = KeyTable::new(
    "a run",
    "One run of weld: its path, its size, what it joins",
    &[
        Key::must("name", Form::Text, "name, once in a file", "lower edge"),
        Key::may(
            "straight",
            Form::List(&POINT, 2, 2),
            "from one point to another",
            "[[0, 0], [80, 0]]",
        ),
        Key::may(
            "polyline",
            Form::List(&POINT, 3, ANY),
            "corner points of straight legs",
            "[[0, 0], [80, 0], [80, 60]]",
        ),
        Key::may(
            "closed",
            Form::Flag,
            "whether the last point of a `polyline` joins the first",
            "true",
        ),
        Key::may(
            "arc",
            Form::Map(&ARC),
            "an arc in the faying plane",
            "{centre: [80, 60], radius: 60, from: -90 deg, sweep: 180 deg}",
        ),
        Key::may(
            "circle",
            Form::Map(&CIRCLE),
            "a full circle in the faying plane",
            "{centre: [0, 0], radius: 30}",
        ),
        FILLET,
        LEG_MEASURED,
        THROAT,
        LEG,
        PARTIAL,
        COMPLETE,
        BETWEEN,
        ROOT_GAP,
        Key::may(
            "penetration",
            Form::Map(&PENETRATION),
            "what deep penetration adds to the throat",
            "{extra: 1 mm, record: WPQR-7}",
        ),
        TOE_SIDE,
        Key::may(
            "sides",
            Form::Either(&[Form::Words(&["both"]), Form::Map(&SIDES)]),
            "both sides of the attached plate are welded: `both` lays the two beads on one line, `both apart by` as far apart as the plate is thick",
            "both",
        ),
        Key::may(
            "stitch",
            Form::Map(&STITCH),
            "an intermittent weld",
            "{bead: 50, pitch: 150}",
        ),
        NORMAL,
        JOINS,
        ENDS,
    ],
)
.with_choices(&[Choice::One(PATHS), Choice::AtMostOne(SIZES)]);

/// `arc` of a run.
pub static ARC: KeyTable = KeyTable::new(
    "`arc`",
    "An arc in the faying plane of its run",
    &[
        Key::must("centre", POINT, "its centre", "[80, 60]"),
        Key::must("radius", SIZE, "its radius", "60"),
        Key::must(
            "from",
            ANGLE,
            "angle of its start from the plane's first axis",
            "-90 deg",
        ),
        Key::must(
            "sweep",
            ANGLE,
            "angle swept, by the right hand about the normal",
            "180 deg",
        ),
    ],
);

/// `circle` of a run.
pub static CIRCLE: KeyTable = KeyTable::new(
    "`circle`",
    "A circle in the faying plane of its run",
    &[
        Key::must("centre", POINT, "its centre", "[0, 0]"),
        Key::must("radius", SIZE, "its radius", "30"),
    ],
);

/// `penetration` of a run.
pub static PENETRATION: KeyTable = KeyTable::new(
    "`penetration`",
    "Deep penetration, with the record that allows it",
    &[
        Key::must("extra", SIZE, "what it adds to the throat", "1 mm"),
        Key::must(
            "record",
            Form::Text,
            "record of the procedure's qualification",
            "WPQR-7",
        ),
    ],
);

/// `sides` of a run, with a distance.
pub static SIDES: KeyTable = KeyTable::new(
    "`sides`",
    "Beads on both sides of the attached plate",
    &[Key::must(
        "both apart by",
        SIZE,
        "distance between the two roots",
        "20",
    )],
);

/// `stitch` of a run.
pub static STITCH: KeyTable = KeyTable::new(
    "`stitch`",
    "An intermittent weld",
    &[
        Key::must("bead", SIZE, "length of a bead", "50"),
        Key::must("pitch", SIZE, "distance from start to start", "150"),
    ],
);

/// `pattern` of the weld.
pub static PATTERN: KeyTable = KeyTable::new(
    "a pattern",
    "Runs laid out by the trade name of their shape",
    &[
        Key::must(
            "shape",
            Form::Words(&[
                "single line",
                "two parallel lines",
                "angle",
                "channel",
                "tee",
                "I outline",
                "cruciform",
                "box",
                "circle",
            ]),
            "trade name",
            "channel",
        ),
        Key::may("width", SIZE, "width, along its own x", "80"),
        Key::may("depth", SIZE, "depth, along its own y", "120"),
        Key::may("radius", SIZE, "radius of a circle", "40"),
        Key::may(
            "at",
            POINT,
            "where its own origin stands; [0, 0] if not told",
            "[0, 0]",
        ),
        Key::may("turned", ANGLE, "turn about its own origin", "90 deg"),
        Key::may(
            "mirrored",
            Form::Flag,
            "mirrored in its own y axis, before it is turned",
            "true",
        ),
        Key::may(
            "doubled",
            Form::Flag,
            "stem, web or lines are welded on both sides",
            "true",
        ),
        TOE_SIDE,
        FILLET,
        LEG_MEASURED,
        THROAT,
        LEG,
        PARTIAL,
        COMPLETE,
        ROOT_GAP,
        JOINS,
        ENDS,
    ],
)
.with_choices(&[Choice::AtMostOne(SIZES)]);
