//! The keys of clause sheets: name, form, whether it must be there, a line of words, an example.
//!
//! `read` asks for these and no others; README.md's table of keys says the same more briefly.

use crate::source::{Choice, Form, Key, KeyTable};

const ANY: usize = usize::MAX;
const TEXTS: Form = Form::List(&Form::Text, 0, ANY);
const LEVELS: Form = Form::Words(&["service", "factored", "limit", "ultimate"]);
const END: Form = Form::Words(&["full", "less throat", "less leg"]);
const STATUS: Form = Form::Words(&[
    "read",
    "recalled from memory",
    "common practice",
    "user's own",
]);
const KIND: Form = Form::Words(&[
    "force",
    "length",
    "stress",
    "area",
    "moment",
    "line load",
    "angle",
    "ratio",
    "word",
]);
const ONE_OR_LIST: Form = Form::Either(&[Form::Text, Form::List(&Form::Text, 1, ANY)]);
const ROWS: Form = Form::Named(&Form::Text, 1);
const SYMBOL: Key = Key::must(
    "symbol",
    ONE_OR_LIST,
    "symbol on the page: a base, or base and index",
    "[tau, par]",
);
const SAYS: Key = Key::must(
    "says",
    Form::Text,
    "one line saying what it is",
    "shear along the run",
);
const VALUE: Key = Key::may(
    "value",
    Form::Text,
    "value for both systems of units",
    "1.25",
);
const INCH: Key = Key::may("inch", Form::Text, "value of notes in inches", "3/16 in");
const METRIC: Key = Key::may("metric", Form::Text, "value of metric notes", "5 mm");

/// A clause sheet.
pub static SHEET: KeyTable = KeyTable::new(
    "a clause sheet",
    "A criterion: what it needs, how it is computed, what it checks",
    &[
        Key::must(
            "name",
            Form::Text,
            "name by which joint files ask for it",
            "LM-M7 7.4",
        ),
        Key::must(
            "title",
            Form::Text,
            "what it is about",
            "Interaction of shear along the run and stress across it",
        ),
        Key::must(
            "source",
            Form::Map(&SOURCE),
            "where its rules stand",
            "{document: Company manual LM-M7, status: user's own}",
        ),
        Key::may(
            "levels",
            Form::List(&LEVELS, 0, ANY),
            "levels of load case that it takes",
            "[ultimate]",
        ),
        Key::must(
            "at",
            Form::Words(&["point", "run"]),
            "evaluated at every point of every case, or at runs without loads",
            "point",
        ),
        Key::may(
            "for each",
            Form::Words(&["part"]),
            "evaluated for the attached and the base part in turn",
            "part",
        ),
        Key::may(
            "convex",
            Form::Flag,
            "whether the demand peaks at ends of straight runs",
            "true",
        ),
        Key::must(
            "requires",
            Form::Map(&REQUIRES),
            "which ends and welds it takes",
            "{ends: any, welds: [fillet]}",
        ),
        Key::must(
            "covers",
            Form::List(
                &Form::Words(&[
                    "throat",
                    "fusion face attached",
                    "fusion face base",
                    "base metal attached",
                    "base metal base",
                    "plate bending",
                    "heat-affected zone",
                    "root bending",
                    "fatigue",
                    "size and length",
                ]),
                0,
                ANY,
            ),
            "failure paths that it covers",
            "[throat]",
        ),
        Key::may(
            "needs",
            Form::Named(&Form::Map(&NEED), 0),
            "quantities and words that it needs, by their names in formulas",
            "{f: {symbol: f, kind: stress, from: point.f, says: resultant}}",
        ),
        Key::may(
            "tables",
            Form::Named(&Form::Map(&TABLE), 0),
            "tables of the code, by their names in formulas",
            "{beta: {cited: table 4.1, key: word, gives: ratio, rows: {S235: 0.8, S355: 0.9}}}",
        ),
        Key::may(
            "steps",
            Form::Named(&Form::Map(&STEP), 0),
            "steps of the calculation in order, by their names in formulas",
            "{I: {symbol: I, formula: f/F, says: utilisation}}",
        ),
        Key::may(
            "checks",
            Form::List(&Form::Map(&STRENGTH), 0, ANY),
            "demands against capacities",
            "[{name: throat, demand: f, capacity: F, says: throat stress}]",
        ),
        Key::may(
            "limits",
            Form::List(&Form::Map(&LIMIT), 0, ANY),
            "limits on sizes and lengths",
            "[{name: throat, value: a, at least: a_min, says: least throat}]",
        ),
        Key::may(
            "validity",
            Form::List(&Form::Map(&CONDITION), 0, ANY),
            "conditions without which the sheet gives no number",
            "[{holds: psi >= 60 deg, says: the angle is covered}]",
        ),
        Key::may(
            "assumptions",
            TEXTS,
            "assumptions that a note with this sheet prints",
            "[The filler matches the parts.]",
        ),
        Key::may(
            "cautions",
            TEXTS,
            "cautions that a note with this sheet prints",
            "[Found in tests on legs up to 12 mm.]",
        ),
    ],
);

/// `source` of a sheet.
pub static SOURCE: KeyTable = KeyTable::new(
    "`source`",
    "Where the rules of the sheet stand",
    &[
        Key::must("document", Form::Text, "the document", "EN 1993-1-8"),
        Key::may("edition", Form::Text, "its edition", "\"2005\""),
        Key::may("clause", Form::Text, "the clause", "4.5.3.2"),
        Key::must("status", STATUS, "how the text was come by", "user's own"),
    ],
);

/// `requires` of a sheet.
pub static REQUIRES: KeyTable = KeyTable::new(
    "`requires`",
    "What free ends may be, and which kinds of weld the sheet takes",
    &[
        Key::must(
            "ends",
            Form::Either(&[Form::Words(&["any"]), END, Form::List(&END, 0, ANY)]),
            "what free ends may be",
            "[less throat, full]",
        ),
        Key::must(
            "welds",
            Form::List(
                &Form::Words(&["fillet", "stated", "partial", "complete"]),
                0,
                ANY,
            ),
            "kinds of weld",
            "[fillet, stated]",
        ),
    ],
);

/// An entry of `needs`.
pub static NEED: KeyTable = KeyTable::new(
    "a need",
    "A quantity or word that the sheet needs",
    &[
        Key::may(
            "symbol",
            ONE_OR_LIST,
            "symbol on the page: a base, or base and index; a word has none",
            "[tau, par]",
        ),
        Key::must("kind", KIND, "what it is", "stress"),
        Key::must(
            "from",
            ONE_OR_LIST,
            "where it comes from; of a list the first that is given",
            "point.tau_par",
        ),
        SAYS,
        Key::may(
            "role",
            Form::Words(&["factor on load", "factor on strength", "fixed"]),
            "its place among the factors",
            "factor on strength",
        ),
        Key::may(
            "default",
            Form::Map(&DEFAULT),
            "the value where the check gives none",
            "{value: 1.25, source: National Annex}",
        ),
        VALUE,
        INCH,
        METRIC,
        Key::may("least", Form::Text, "least value allowed", "0"),
        Key::may("most", Form::Text, "greatest value allowed", "1"),
        Key::may(
            "pattern",
            Form::Words(&["grade"]),
            "only the leading grade of a word counts: `S355` of `S355J2`",
            "grade",
        ),
    ],
);

/// `default` of a need.
pub static DEFAULT: KeyTable = KeyTable::new(
    "`default`",
    "The value where the check gives none",
    &[
        VALUE,
        INCH,
        METRIC,
        Key::must(
            "source",
            Form::Text,
            "where the value comes from",
            "National Annex",
        ),
        Key::may(
            "status",
            STATUS,
            "how it was come by; `read` if not told",
            "read",
        ),
    ],
)
.with_choices(&[Choice::Some(&["value", "inch", "metric"])]);

/// An entry of `tables`.
pub static TABLE: KeyTable = KeyTable::new(
    "a table",
    "A table of the code, read by `lookup(table, key)`",
    &[
        Key::must("cited", Form::Text, "how the note cites it", "table 4.1"),
        Key::must("key", KIND, "what its keys are", "word"),
        Key::must("gives", KIND, "what its values are", "ratio"),
        Key::may(
            "rows",
            ROWS,
            "rows for both systems of units: a word, `up to 6 mm`, or `above`",
            "{S235: 0.8, S355: 0.9}",
        ),
        Key::may(
            "inch",
            ROWS,
            "rows of notes in inches",
            "{up to 1/4 in: 1/8 in, above: 3/16 in}",
        ),
        Key::may(
            "metric",
            ROWS,
            "rows of metric notes",
            "{up to 6 mm: 3 mm, above: 5 mm}",
        ),
    ],
)
.with_choices(&[Choice::Some(&["rows", "inch", "metric"])]);

/// An entry of `steps`.
pub static STEP: KeyTable = KeyTable::new(
    "a step",
    "A step of the calculation",
    &[
        SYMBOL,
        Key::must(
            "formula",
            Form::Text,
            "plain algebra over needs and earlier steps",
            "sqrt(sigma^2 + 3*tau^2)",
        ),
        Key::may("kind", KIND, "what it gives, to be checked", "stress"),
        SAYS,
    ],
);

/// An entry of `checks`.
pub static STRENGTH: KeyTable = KeyTable::new(
    "a check",
    "A demand against a capacity",
    &[
        Key::must("name", Form::Text, "its name", "interaction"),
        Key::must("demand", Form::Text, "name of the demand", "I"),
        Key::must(
            "capacity",
            Form::Text,
            "name of the capacity, or a number",
            "1",
        ),
        Key::may(
            "proportional",
            Form::Flag,
            "whether the demand grows with the load by its first power",
            "false",
        ),
        SAYS,
    ],
);

/// An entry of `limits`.
pub static LIMIT: KeyTable = KeyTable::new(
    "a limit",
    "A limit on a size or length",
    &[
        Key::must("name", Form::Text, "its name", "least throat"),
        Key::must("value", Form::Text, "name of what is limited", "a"),
        Key::may("at least", Form::Text, "name of the lower bound", "a_min"),
        Key::may("at most", Form::Text, "name of the upper bound", "a_max"),
        SAYS,
    ],
)
.with_choices(&[Choice::One(&["at least", "at most"])]);

/// An entry of `validity`.
pub static CONDITION: KeyTable = KeyTable::new(
    "a condition",
    "A condition without which the sheet gives no number",
    &[
        Key::must("holds", Form::Text, "the condition", "psi >= 60 deg"),
        SAYS,
    ],
);
