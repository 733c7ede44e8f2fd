//! Printed digits settle: four hundred random joints, every line of every note replayed.
//!
//! The joints are texts, so that the whole way is walked: reading, runs, stresses, checks, note, trace.

use crate::replay::replay;
use crate::schema::departures;
use seamnote::criteria::built_in;
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, Outcome, write_note};
use seamnote::source::{Faults, SourceFile};
use serde_json::Value;
use std::collections::BTreeMap;
use std::sync::Arc;

/// Joints tried.
const JOINTS: u64 = 400;

/// Most significant digits of a computed line over these joints: the end angles of short arcs, whose
/// own second moments are small differences, and one joint's leg, converted to inches, since a first
/// moment of five runs stands between it and the centroid. The program itself allows 13.
const MOST_DIGITS: usize = 10;

/// Wide joints refused though the assessment has their numbers: in one, a bead of 6 mm on a radius of
/// 40 mm has its middle almost on an axis, and its product of inertia asks for too many digits. There
/// should be none; `small_joints_have_a_note` in `whole.rs` holds the smallest of each kind.
const UNWRITTEN: usize = 1;

/// Which joints are tried.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(crate) enum Breadth {
    /// Runs of one bead: fillets with equal or unequal legs, gaps and penetration, stated throats.
    Plain,
    /// Besides: skewed fillets, both sides of a plate, stitches, legs beside stated throats.
    Wide,
}

/// A printing set with a grid step of length that is an exact decimal in it.
struct Family {
    force: &'static str,
    length: &'static str,
    /// Grid step as a decimal of the unit of length, about 1 mm.
    step: f64,
    /// Newtons in a unit of force, about.
    newtons: f64,
    /// Lengths told in another unit.
    other: &'static str,
}

#[rustfmt::skip]
const FAMILIES: [Family; 5] = [
    Family { force: "N",   length: "mm", step: 1.0,    newtons: 1.0,    other: "in" },
    Family { force: "kN",  length: "mm", step: 1.0,    newtons: 1000.0, other: "cm" },
    Family { force: "N",   length: "m",  step: 0.001,  newtons: 1.0,    other: "mm" },
    Family { force: "lbf", length: "in", step: 0.0625, newtons: 4.448,  other: "mm" },
    Family { force: "kip", length: "in", step: 0.0625, newtons: 4448.0, other: "mm" },
];

/// Levels and the sheets that take them, with entries that the check itself tells.
#[rustfmt::skip]
const CHECKS: [(&str, &[&str]); 4] = [
    ("ultimate", &["EN 1993-1-8 4.5.3.2", "EN 1993-1-8 4.5.3.3", "EN 1993-1-8 4.5.1-4.5.2", "throat ultimate",
                   "fusion face ultimate", "base metal ultimate", "EN 1993-1-1 6.2.6"]),
    ("factored", &["AISC 360 J2.4 LRFD", "AISC 360 J4.2 LRFD", "AISC 360 J2.2b"]),
    ("service",  &["throat allowable", "maximum shear", "AISC 360 J2.4 ASD"]),
    ("limit",    &["throat yield at limit load", "throat ultimate from limit load"]),
];

/// A linear congruential generator.
///
/// Constants: D. E. Knuth, *The Art of Computer Programming* 2, 3rd ed., section 3.3.4 (MMIX).
struct Chance(u64);

impl Chance {
    fn next(&mut self) -> u64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        self.0 >> 33
    }

    /// A whole number from `low` to `high`, both included.
    fn whole(&mut self, low: i64, high: i64) -> i64 {
        low + i64::try_from(self.next() % u64::try_from(high - low + 1).unwrap()).unwrap()
    }

    /// True once in `count`.
    fn once_in(&mut self, count: i64) -> bool {
        self.whole(1, count) == 1
    }

    fn pick<'a, T: ?Sized>(&mut self, list: &[&'a T]) -> &'a T {
        list[usize::try_from(self.next()).unwrap() % list.len()]
    }
}

/// The text of a joint file; the same for the same seed.
pub(crate) fn joint_text(seed: u64, breadth: Breadth) -> String {
    let mut chance = Chance(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) + 1);
    chance.next();
    let family = &FAMILIES[usize::try_from(chance.next()).unwrap() % FAMILIES.len()];
    let in_space = chance.once_in(3);
    let mut text = format!(
        "note: R-{seed}\ntitle: random joint\nrevision: A\ndate: 2026-05-04\n\
         units: {{force: {}, length: {}}}\nframe: {{origin: a corner}}\n\
         parts:\n  \
         plate: {{material: S355J2, thickness: 10 mm, f_y: 355 MPa, f_u: 470 MPa, F_su: 280 MPa, source: list}}\n  \
         deck: {{material: S275JR, thickness: 1/2 in, f_y: 275 MPa, f_u: 410 MPa, F_su: 40 ksi}}\n\
         filler: {{name: rod, f_u: 70 ksi, F_su: 40 ksi, F_sy: 200 MPa, F_allow: 21 ksi, tau_allow: 120 MPa}}\n\
         weld:\n  joins: [plate, deck]\n  ends: {}\n  runs:\n",
        family.force,
        family.length,
        chance.pick(&["full", "full", "less throat", "less leg"]),
    );
    for run in 1..=chance.whole(1, 8) {
        text.push_str(&run_text(&mut chance, family, run, (in_space, breadth)));
    }
    text.push_str(&loads_text(&mut chance, family));
    text
}

/// A length on the grid, now and then in another unit.
fn length(chance: &mut Chance, family: &Family, steps: i64) -> String {
    if chance.once_in(12) {
        let size = match family.other {
            "in" => 0.0625,
            "cm" => 0.1,
            _ => 1.5,
        };
        return format!("{} {}", decimal(steps as f64 * size), family.other);
    }
    plain_length(family, steps)
}

/// A length on the grid in the file's unit: an exact decimal of few digits.
fn plain_length(family: &Family, steps: i64) -> String {
    decimal(steps as f64 * family.step)
}

fn decimal(value: f64) -> String {
    let text = format!("{value:.4}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

fn point(chance: &mut Chance, family: &Family, in_space: bool) -> ([i64; 3], String) {
    let reach = if in_space { 120 } else { 0 };
    let at = [
        chance.whole(-200, 200),
        chance.whole(-200, 200),
        chance.whole(-reach, reach),
    ];
    (at, point_text(family, at, in_space))
}

fn point_text(family: &Family, at: [i64; 3], in_space: bool) -> String {
    let used = if in_space { &at[..] } else { &at[..2] };
    let parts: Vec<String> = used
        .iter()
        .map(|steps| plain_length(family, *steps))
        .collect();
    format!("[{}]", parts.join(", "))
}

fn cross(a: [i64; 3], b: [i64; 3]) -> [i64; 3] {
    [
        a[1] * b[2] - a[2] * b[1],
        a[2] * b[0] - a[0] * b[2],
        a[0] * b[1] - a[1] * b[0],
    ]
}

fn run_text(
    chance: &mut Chance,
    family: &Family,
    number: i64,
    (in_space, breadth): (bool, Breadth),
) -> String {
    let mut keys = vec![format!("name: run {number}")];
    let (a, a_text) = point(chance, family, in_space);
    let mut is_straight = false;
    match chance.whole(1, 6) {
        1 => keys.push(format!(
            "circle: {{centre: {a_text}, radius: {}}}",
            radius(chance, family)
        )),
        2 | 3 => {
            let sweep = chance.whole(10, 340) * if chance.once_in(2) { 1 } else { -1 };
            let sweep = if chance.once_in(6) {
                format!("{:.3} rad", sweep as f64 / 60.0)
            } else {
                format!("{sweep} deg")
            };
            keys.push(format!(
                "arc: {{centre: {a_text}, radius: {}, from: {} deg, sweep: {sweep}}}",
                radius(chance, family),
                chance.whole(-180, 180)
            ));
        }
        _ => {
            is_straight = true;
            let mut b = a;
            match chance.whole(0, 3) {
                0 => b[0] += chance.whole(20, 150),
                1 => b[1] += chance.whole(20, 150),
                _ => b = point(chance, family, in_space).0,
            }
            let d = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
            keys.push(format!(
                "straight: [{a_text}, {}]",
                point_text(family, b, in_space)
            ));
            let mut normal = [0, 0, 1];
            if in_space {
                let helper = [chance.whole(-2, 2), chance.whole(-2, 2), chance.whole(1, 3)];
                normal = cross(d, helper);
                keys.push(format!("normal: {normal:?}"));
            }
            if chance.once_in(2) {
                let toe = cross(normal, d);
                let sign = if chance.once_in(2) { 1 } else { -1 };
                keys.push(format!("toe: {:?}", toe.map(|part| sign * part)));
            }
        }
    }
    if !is_straight {
        if in_space {
            let normal = chance.pick(&["[1, 0, 0]", "[0, 0, 1]", "[0, 3, 4]", "[1, -2, 2]"]);
            keys.push(format!("normal: {normal}"));
        }
        if chance.once_in(2) {
            keys.push(format!("toe: {}", chance.pick(&["inside", "outside"])));
        }
    }
    size_text(chance, family, breadth, &mut keys);
    format!("    - {{{}}}\n", keys.join(", "))
}

fn radius(chance: &mut Chance, family: &Family) -> String {
    let steps = chance.whole(15, 90);
    length(chance, family, steps)
}

fn size_text(chance: &mut Chance, family: &Family, breadth: Breadth, keys: &mut Vec<String>) {
    let is_wide = breadth == Breadth::Wide;
    let leg = chance.whole(3, 12);
    let other = chance.whole(3, 12);
    let is_fillet = match chance.whole(1, 8) {
        1 => {
            keys.push(format!(
                "fillet: [{}, {}]",
                plain_length(family, leg),
                plain_length(family, other)
            ));
            false
        }
        2 => {
            let of_leg = if is_wide { other } else { leg + 2 };
            let (throat, leg) = (plain_length(family, leg), plain_length(family, of_leg));
            keys.push(format!("throat: {throat}, leg: {leg}"));
            false
        }
        3 => {
            keys.push(format!("partial: {}", plain_length(family, leg)));
            false
        }
        _ => {
            keys.push(format!("fillet: {}", length(chance, family, leg)));
            true
        }
    };
    if is_wide && is_fillet && chance.once_in(5) {
        keys.push(format!("between: {} deg", chance.whole(60, 120)));
        if chance.once_in(2) {
            keys.push("leg measured: square to face".to_owned());
        }
    }
    if is_fillet && chance.once_in(6) {
        keys.push(format!("gap: {:.1} mm", chance.whole(0, 40) as f64 / 10.0));
    }
    if is_fillet && chance.once_in(10) {
        keys.push("penetration: {extra: 1 mm, record: WPQ-12}".to_owned());
    }
    if is_wide && is_fillet && chance.once_in(12) {
        keys.push("sides: both".to_owned());
    }
    if is_wide && chance.once_in(12) {
        keys.push("stitch: {bead: 20 mm, pitch: 55 mm}".to_owned());
    }
    if chance.once_in(4) {
        let end = chance.pick(&["full", "less throat", "[full, less throat]", "continuous"]);
        keys.push(format!("ends: {end}"));
    }
}

fn loads_text(chance: &mut Chance, family: &Family) -> String {
    let (level, sheets) = CHECKS[usize::try_from(chance.next()).unwrap() % CHECKS.len()];
    let (_, at) = point(chance, family, true);
    let mut text = format!("loads:\n  at: {at}\n  level: {level}\n  cases:\n");
    for case in 1..=chance.whole(1, 3) {
        let force = triple(chance, |chance| force(chance, family));
        let moment = triple(chance, |chance| moment(chance, family));
        let own = if chance.once_in(4) {
            format!(", at: {}", point(chance, family, true).1)
        } else {
            String::new()
        };
        text.push_str(&format!(
            "    - {{case: L{case}, force: {force}, moment: {moment}{own}}}\n"
        ));
    }
    text.push_str("checks:\n");
    for sheet in sheets
        .iter()
        .filter(|sheet| !chance.once_in(3) && **sheet != last_resort(level))
    {
        text.push_str(&format!("  - {{clause: {sheet}}}\n"));
    }
    text.push_str(&format!("  - {{clause: {}}}\n", last_resort(level)));
    text
}

/// A sheet of the level, so that no list of checks is empty.
fn last_resort(level: &str) -> &'static str {
    match level {
        "ultimate" => "throat ultimate",
        "factored" => "AISC 360 J2.4 LRFD",
        "service" => "throat allowable",
        _ => "throat ultimate from limit load",
    }
}

fn triple(chance: &mut Chance, part: impl Fn(&mut Chance) -> String) -> String {
    let parts: Vec<String> = (0..3).map(|_| part(chance)).collect();
    format!("[{}]", parts.join(", "))
}

fn force(chance: &mut Chance, family: &Family) -> String {
    let newtons = chance.whole(-30_000, 30_000);
    match chance.whole(1, 8) {
        1 => "0".to_owned(),
        2 => format!("{} kN", newtons as f64 / 1000.0),
        3 => format!("{} lbf", newtons / 5),
        _ => figures(newtons as f64 / family.newtons),
    }
}

fn moment(chance: &mut Chance, family: &Family) -> String {
    let newton_metres = chance.whole(-900, 900);
    match chance.whole(1, 8) {
        1 | 2 => "0".to_owned(),
        3 => format!("{newton_metres} N m"),
        4 => format!("{} lbf ft", newton_metres / 2),
        _ => figures(newton_metres as f64 * 1000.0 * family.step / family.newtons),
    }
}

/// A decimal of about three digits, as people type it.
fn figures(value: f64) -> String {
    let size = value.abs();
    match size {
        _ if size >= 100.0 => format!("{value:.0}"),
        _ if size >= 1.0 => format!("{value:.2}"),
        _ => format!("{value:.4}"),
    }
}

/// What came of the joints.
#[derive(Default)]
pub(crate) struct Tally {
    pub(crate) written: usize,
    /// Joints refused, by the code of the first fault.
    pub(crate) refused: BTreeMap<String, usize>,
    /// Checks without a number, by the first words of the reason.
    pub(crate) numberless: BTreeMap<String, usize>,
    pub(crate) lines: usize,
    pub(crate) symbols: usize,
    /// Most significant digits, and where.
    pub(crate) digits: (usize, String),
    /// Largest miss in units of the last digit, and where.
    pub(crate) miss: (f64, String),
    /// Notes refused because the steps lack a value or disagree with the assessment.
    pub(crate) unwritten: Vec<String>,
    /// Notes refused because their digits do not settle.
    pub(crate) unsettled: Vec<String>,
    /// Lines that print 0 and should not.
    pub(crate) zeros: Vec<String>,
    /// Everything else that does not hold.
    pub(crate) faults: Vec<String>,
}

impl Tally {
    /// Walks all joints of a breadth.
    pub(crate) fn of(breadth: Breadth) -> Self {
        let schema: Value = serde_json::from_str(seamnote::note::TRACE_SCHEMA).unwrap();
        let mut tally = Self::default();
        for seed in 1..=JOINTS {
            let text = joint_text(seed, breadth);
            let walked = std::panic::catch_unwind(std::panic::AssertUnwindSafe(|| {
                tally.walk(seed, &text, &schema);
            }));
            assert!(walked.is_ok(), "joint {seed} panics:\n{text}");
        }
        tally
    }

    fn walk(&mut self, seed: u64, text: &str, schema: &Value) {
        let file = Arc::new(SourceFile {
            name: format!("joints/random-{seed}.yaml"),
            text: text.to_owned(),
        });
        let told = match read_joint(&file) {
            Ok(told) => told,
            Err(faults) => return self.refuse(seed, &faults),
        };
        let calculation = match Calculation::of(&told, built_in()) {
            Ok(calculation) => calculation,
            Err(faults) => return self.refuse(seed, &faults),
        };
        self.reasons(seed, &calculation.outcomes);
        let note = match write_note(&calculation) {
            Ok(note) => note,
            Err(faults) => return self.refuse(seed, &faults),
        };
        self.written += 1;
        let trace: Value = serde_json::from_str(&note.trace_json()).unwrap();
        let found = replay(&trace);
        self.lines += found.lines;
        self.symbols += found.symbols;
        if found.digits.0 > self.digits.0 {
            self.digits = (found.digits.0, format!("{seed}: {}", found.digits.1));
        }
        if found.miss.0 > self.miss.0 {
            self.miss = (found.miss.0, format!("{seed}: {}", found.miss.1));
        }
        let zeros = found.zeros.into_iter();
        self.zeros
            .extend(zeros.map(|fault| format!("{seed}: {fault}")));
        let all = found.faults.into_iter().chain(departures(schema, &trace));
        self.faults
            .extend(all.map(|fault| format!("{seed}: {fault}")));
    }

    /// A check without a number has a reason and a way out.
    fn reasons(&mut self, seed: u64, outcomes: &[Outcome]) {
        for outcome in outcomes {
            let Outcome::Refused(refusal) = outcome else {
                continue;
            };
            let name = |word: &&str| word.chars().any(|c| c.is_ascii_digit());
            let words: Vec<&str> = refusal
                .reason
                .split_whitespace()
                .filter(|word| !name(word))
                .take(6)
                .collect();
            *self.numberless.entry(words.join(" ")).or_default() += 1;
            if refusal.reason.is_empty() || refusal.help.is_empty() {
                self.faults.push(format!(
                    "{seed}: {} is refused without a reason or help: {}",
                    refusal.clause, refusal.reason
                ));
            }
        }
    }

    fn refuse(&mut self, seed: u64, faults: &Faults) {
        let first = &faults.0[0];
        *self.refused.entry(first.code.to_owned()).or_default() += 1;
        // A note that cannot be written is a fault of the program, not of the joint.
        if first.code == "no-note" {
            let list = if first.message.contains("cannot be made to give") {
                &mut self.unsettled
            } else {
                &mut self.unwritten
            };
            list.push(format!("{seed}: {}", first.message));
        }
        if faults.0.iter().any(|fault| fault.message.is_empty()) {
            self.faults.push(format!("{seed}: a refusal without words"));
        }
    }

    /// One line on all joints.
    pub(crate) fn summary(&self) -> String {
        format!(
            "{} written, {} lines, {} in symbols; most digits {:?}; largest miss {:?}; refused {:?}; without a number {:?}",
            self.written,
            self.lines,
            self.symbols,
            self.digits,
            self.miss,
            self.refused,
            self.numberless
        )
    }
}

#[test]
fn four_hundred_random_joints_settle_and_replay() {
    let tally = Tally::of(Breadth::Plain);
    let summary = tally.summary();
    let faults = [&tally.faults[..], &tally.unwritten].concat();
    assert!(faults.is_empty(), "{summary}\n{}", faults.join("\n"));
    assert!(
        tally.unsettled.is_empty(),
        "{summary}\n{} unsettled:\n{}",
        tally.unsettled.len(),
        tally.unsettled.join("\n")
    );
    assert!(
        tally.zeros.is_empty(),
        "{summary}\n{} zeros:\n{}",
        tally.zeros.len(),
        tally.zeros.join("\n")
    );
    assert!(tally.digits.0 <= MOST_DIGITS, "digits: {summary}");
    let refused: usize = tally.refused.values().sum();
    assert_eq!(
        (tally.written + refused) as u64,
        JOINTS,
        "joints: {summary}"
    );
    assert!(tally.written >= 300, "too few notes: {summary}");
    assert!(tally.lines > 30_000, "too few lines: {summary}");
}

/// Every wide joint ends in a note that replays or in a refusal with words, never in a wrong note.
#[test]
fn wide_joints_give_no_note_that_does_not_replay() {
    let tally = Tally::of(Breadth::Wide);
    let summary = tally.summary();
    assert!(
        tally.faults.is_empty(),
        "{summary}\n{}",
        tally.faults.join("\n")
    );
    let unwritten = [&tally.unwritten[..], &tally.unsettled].concat();
    assert!(
        unwritten.len() <= UNWRITTEN,
        "{summary}\n{}",
        unwritten.join("\n")
    );
    let refused: usize = tally.refused.values().sum();
    assert_eq!(
        (tally.written + refused) as u64,
        JOINTS,
        "joints: {summary}"
    );
    assert!(tally.written >= 250, "too few notes: {summary}");
}
