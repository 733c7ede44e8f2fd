//! Joint files read into what they say.

use seamnote::joint::{
    EndSpec, GivenAt, Joint, LegMeasure, Level, Paper, PathSpec, RunSpec, Shape, SizeSpec, ToeSpec,
    Triple, read_joint,
};
use seamnote::quantity::UnitSet;
use seamnote::source::{SourceFile, Told};
use std::sync::Arc;

fn read(text: &str) -> Joint {
    let file = Arc::new(SourceFile {
        name: "joints/x.yaml".into(),
        text: text.into(),
    });
    read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)))
}

fn full() -> Joint {
    read(include_str!("joint_files/full.yaml"))
}

/// A joint whose `weld` holds the pattern.
fn with_pattern(units: &str, pattern: &str) -> Joint {
    read(&format!(
        "note: SN-7\ntitle: Lug\nrevision: A\ndate: 2026-05-04\nunits: {units}\nframe: {{origin: corner}}\n\
         parts: {{lug: {{material: S355}}, frame: {{material: S355}}}}\n\
         weld: {{joins: [lug, frame], pattern: {{{pattern}}}}}\n\
         loads: {{at: [0, 0], level: limit, cases: [{{case: L1, force: [0, 1]}}]}}\nchecks: [{{clause: any}}]\n"
    ))
}

const MM: &str = "{force: N, length: mm}";

fn near(got: f64, wanted: f64, what: &str) {
    assert!(
        (got - wanted).abs() <= 1e-12 * wanted.abs().max(1.0),
        "{what}: {got}, not {wanted}"
    );
}

fn numbers(triple: &Triple) -> Vec<&str> {
    triple
        .parts
        .iter()
        .map(|part| part.number.as_str())
        .collect()
}

fn value(given: &Option<GivenAt>) -> f64 {
    given.as_ref().expect("it is told").value.value
}

fn ends(run: &RunSpec) -> [Option<EndSpec>; 2] {
    [0, 1].map(|end| run.ends[end].as_ref().map(|told| told.value))
}

fn text(told: &Option<Told<String>>) -> &str {
    told.as_ref().map_or("", |told| told.value.as_str())
}

fn straight(run: &RunSpec) -> [Vec<&str>; 2] {
    match &run.path {
        PathSpec::Straight([a, b]) => [numbers(a), numbers(b)],
        other => panic!("{} is no straight: {other:?}", run.name.value),
    }
}

#[test]
fn the_head_of_a_full_file_is_read() {
    let joint = full();
    assert_eq!(
        joint.title.value, "Mast foot: bracket to deck plate",
        "title"
    );
    assert_eq!(
        joint.title.place.line_column(),
        (3, 8),
        "place of the title"
    );
    assert_eq!(joint.date.value.to_string(), "2026-05-04", "date");
    assert_eq!(text(&joint.drawing), "LM-2207 sheet 3 #2", "drawing");
    assert_eq!(text(&joint.purpose).lines().count(), 3, "paragraphs stay");
    assert_eq!(
        (joint.units.value, joint.paper),
        (UnitSet::NewtonMillimetre, Paper::UsLetter),
        "units and paper"
    );
    assert_eq!(text(&joint.frame.axes[2]), "outboard", "z axis");
    let [bracket, deck] = joint.parts.as_slice() else {
        panic!("two parts")
    };
    near(value(&bracket.f_u), 470.0, "GPa in MPa");
    near(value(&deck.thickness), 12.7, "half an inch in mm");
    assert_eq!(
        (deck.more[0].0.value.as_str(), deck.more[0].1.value.as_str()),
        ("F_su", "200 MPa"),
        "raw strength"
    );
    assert_eq!(
        (bracket.to_be_verified, deck.to_be_verified),
        (false, true),
        "marks"
    );
    let filler = joint.filler.expect("filler");
    assert_eq!(
        (text(&filler.source), filler.more.len()),
        ("WPS-31 rev 2", 1),
        "filler"
    );
    assert_eq!(joint.checks[0].values[0].1.value, "1.25", "factor as typed");
    assert_eq!(
        text(&joint.checks[0].source),
        "NA to BS EN 1993-1-8",
        "source of the factor"
    );
    assert!(joint.checks[1].to_be_verified, "mark of a check");
    assert_eq!(
        joint.assumptions[1].says.value, "the deck is stiffened under the foot",
        "assumption"
    );
    assert!(
        joint.assumptions[1].to_be_verified && !joint.assumptions[0].to_be_verified,
        "open item"
    );
    assert_eq!(
        (joint.cautions.len(), joint.excluded[0].by.value.as_str()),
        (1, "SN-105"),
        "cautions, exclusions"
    );
    assert_eq!(
        joint.changes[1].date.value.to_string(),
        "2026-05-04",
        "change"
    );
    assert_eq!(joint.signatures.len(), 2, "signatures");
}

#[test]
fn runs_say_their_own_or_take_what_holds_for_all() {
    let joint = full();
    let run = |name: &str| {
        joint
            .weld
            .runs
            .iter()
            .find(|run| run.name.value == name)
            .expect("the run is there")
    };
    let lower = run("lower edge");
    assert!(
        matches!(&lower.size, SizeSpec::Fillet { leg, measured: LegMeasure::AlongFaces } if leg.value.number == "6"),
        "usual size"
    );
    assert_eq!(ends(lower), [Some(EndSpec::LessThroat); 2], "usual ends");
    near(value(&lower.between), 80_f64.to_radians(), "usual angle");
    near(value(&lower.gap), 0.5, "usual gap");
    assert_eq!(
        lower.toe.as_ref().unwrap().value,
        ToeSpec::Toward([0.0, -1.0, 0.0]),
        "usual toe"
    );
    assert_eq!(lower.joins[0].value, "bracket", "usual parts");
    let back = run("back edge");
    assert!(
        matches!(&back.size, SizeSpec::Unequal { on_base, on_attached } if on_base.value.number == "6" && on_attached.value.number == "9"),
        "two legs"
    );
    assert_eq!(
        ends(back),
        [Some(EndSpec::Full), Some(EndSpec::LessLeg)],
        "own ends"
    );
    let nose = run("nose");
    assert!(
        matches!(&nose.size, SizeSpec::Throat { leg: Some(leg), .. } if leg.value.number == "6"),
        "throat and leg"
    );
    assert!(
        matches!(&nose.path, PathSpec::Arc { sweep, .. } if (sweep.value.value - std::f64::consts::PI).abs() < 1e-15),
        "arc"
    );
    let boss = run("boss");
    assert!(
        matches!(&boss.path, PathSpec::Circle { radius, .. } if (radius.value.value - 15.875).abs() < 1e-12),
        "circle"
    );
    assert_eq!(
        boss.toe.as_ref().unwrap().value,
        ToeSpec::Toward([0.6, 0.0, 0.8]),
        "toe as a unit vector"
    );
    let rim = run("rim");
    assert!(
        matches!(&rim.path, PathSpec::Polyline { points, closed: true } if points.len() == 3),
        "polyline"
    );
    assert!(
        matches!(
            rim.size,
            SizeSpec::Fillet {
                measured: LegMeasure::SquareToFace,
                ..
            }
        ),
        "leg measured"
    );
    assert_eq!(
        rim.penetration.as_ref().unwrap().1.value,
        "WPQ-12",
        "record"
    );
    near(
        rim.both_sides
            .as_ref()
            .unwrap()
            .value
            .as_ref()
            .unwrap()
            .value,
        10.0,
        "beads apart",
    );
    assert_eq!(
        (rim.joins[0].value.as_str(), value(&rim.gap)),
        ("deck", 0.0),
        "own parts, own gap"
    );
    let rib = run("rib");
    assert!(
        matches!(rib.size, SizeSpec::Complete { tee: true, .. }),
        "complete"
    );
    assert!(
        rib.both_sides.as_ref().unwrap().value.is_none(),
        "both sides, coincident"
    );
    near(
        rib.stitch.as_ref().unwrap().pitch.value.value,
        100.0,
        "pitch",
    );
    assert_eq!(ends(rib), [Some(EndSpec::Continuous); 2], "continuous");
}

#[test]
fn loads_keep_their_names_and_points() {
    let joint = full();
    let names: Vec<&str> = joint
        .loads
        .cases
        .iter()
        .map(|case| case.name.value.as_str())
        .collect();
    assert_eq!(names, ["L01", "1E3", "NO", "007"], "names as typed");
    let [gust, service, moment, framed] = joint.loads.cases.as_slice() else {
        panic!("four cases")
    };
    assert_eq!(
        (gust.force.values(), gust.at.values()),
        ([0.0, -4200.0, 0.0], [210.0, 60.0, 0.0]),
        "usual point"
    );
    assert_eq!(
        (gust.level.value, service.level.value),
        (Level::Ultimate, Level::Service),
        "levels"
    );
    assert_eq!(
        (service.force.values(), service.moment.values()),
        ([100.0, 200.0, 0.0], [0.0; 3]),
        "no moment"
    );
    assert_eq!(
        (moment.force.values(), moment.at.values()),
        ([0.0; 3], [1.0, 2.0, 0.0]),
        "no force"
    );
    near(moment.moment.values()[2], 1.5e6, "moment");
    near(framed.force.values()[2], 4.448_221_615_260_5, "one lbf");
    let frame = framed.frame.as_ref().expect("the frame");
    assert_eq!(
        (frame.origin.values(), frame.axes[1].values()),
        ([100.0, 0.0, 50.0], [-0.8, 0.6, 0.0]),
        "frame"
    );
}

/// A point (x, y) of the pattern is at (10, 20) + turn by 90° of (−x, y) = (10 − y, 20 − x).
#[test]
fn a_pattern_is_mirrored_turned_and_moved() {
    let joint = full();
    let pattern = joint.weld.pattern.as_ref().expect("the pattern");
    assert_eq!(
        (pattern.shape.value, pattern.mirrored),
        (Shape::Channel, true),
        "as told"
    );
    let runs = &joint.weld.runs[6..];
    let names: Vec<&str> = runs.iter().map(|run| run.name.value.as_str()).collect();
    assert_eq!(names, ["flange, lower", "web", "flange, upper"], "names");
    assert_eq!(
        straight(&runs[0]),
        [vec!["10", "-60", "5"], vec!["10", "20", "5"]],
        "lower flange"
    );
    assert_eq!(
        straight(&runs[1]),
        [vec!["10", "20", "5"], vec!["-110", "20", "5"]],
        "web"
    );
    assert_eq!(
        straight(&runs[2]),
        [vec!["-110", "20", "5"], vec!["-110", "-60", "5"]],
        "upper flange"
    );
    for run in runs {
        // Toe −x of the pattern: mirrored to +x, turned to +y.
        assert_eq!(
            run.toe.as_ref().unwrap().value,
            ToeSpec::Toward([0.0, 1.0, 0.0]),
            "{}",
            run.name.value
        );
        assert!(
            matches!(&run.size, SizeSpec::Fillet { leg, .. } if leg.value.number == "4"),
            "size"
        );
        near(value(&run.gap), 1.0, "gap");
        assert_eq!(ends(run), [Some(EndSpec::LessThroat); 2], "ends as for all");
    }
}

/// Name of a run, and x, y of its first and last point.
type Line<'a> = (&'a str, [&'a str; 4]);

#[test]
fn patterns_have_the_lines_of_their_shapes() {
    #[rustfmt::skip]
    let rows: [(&str, &[Line<'_>]); 8] = [
        ("single line, depth: 90", &[("line", ["0", "0", "0", "90"])]),
        ("two parallel lines, width: 40, depth: 90",
            &[("left line", ["0", "0", "0", "90"]), ("right line", ["40", "0", "40", "90"])]),
        ("angle, width: 40, depth: 90",
            &[("left edge", ["0", "90", "0", "0"]), ("lower edge", ["0", "0", "40", "0"])]),
        ("channel, width: 40, depth: 90",
            &[("flange, lower", ["40", "0", "0", "0"]), ("web", ["0", "0", "0", "90"]), ("flange, upper", ["0", "90", "40", "90"])]),
        ("tee, width: 40, depth: 90",
            &[("flange", ["0", "90", "40", "90"]), ("stem", ["20", "0", "20", "90"])]),
        ("I outline, width: 40, depth: 90",
            &[("flange, lower", ["0", "0", "40", "0"]), ("web", ["20", "0", "20", "90"]), ("flange, upper", ["0", "90", "40", "90"])]),
        ("cruciform, width: 40, depth: 90",
            &[("line across", ["-20", "0", "20", "0"]), ("line along", ["0", "-45", "0", "45"])]),
        ("box, width: 40, depth: 90",
            &[("lower edge", ["0", "0", "40", "0"]), ("right edge", ["40", "0", "40", "90"]),
              ("upper edge", ["40", "90", "0", "90"]), ("left edge", ["0", "90", "0", "0"])]),
    ];
    for (shape, lines) in rows {
        let joint = with_pattern(MM, &format!("shape: {shape}, fillet: 6"));
        let got: Vec<Line<'_>> = joint
            .weld
            .runs
            .iter()
            .map(|run| {
                let [a, b] = straight(run);
                (run.name.value.as_str(), [a[0], a[1], b[0], b[1]])
            })
            .collect();
        assert_eq!(got, lines, "{shape}");
        assert!(
            joint
                .weld
                .runs
                .iter()
                .all(|run| run.toe.is_none() && run.ends == [None, None]),
            "{shape}: nothing more is told"
        );
    }
}

#[test]
fn stems_and_webs_are_doubled_and_circles_keep_their_toe() {
    let doubled = |pattern: &str| -> Vec<bool> {
        let joint = with_pattern(MM, pattern);
        joint
            .weld
            .runs
            .iter()
            .map(|run| {
                run.both_sides
                    .as_ref()
                    .is_some_and(|told| told.value.is_none())
            })
            .collect()
    };
    assert_eq!(
        doubled("shape: tee, width: 40, depth: 90, doubled: true, fillet: 6"),
        [false, true],
        "stem"
    );
    assert_eq!(
        doubled("shape: I outline, width: 40, depth: 90, doubled: true, fillet: 6"),
        [false, true, false],
        "web"
    );
    assert_eq!(
        doubled("shape: single line, depth: 90, doubled: true, fillet: 6"),
        [true],
        "line"
    );
    assert_eq!(
        doubled("shape: cruciform, width: 40, depth: 90, doubled: true, fillet: 6"),
        [true, true],
        "cross"
    );
    assert_eq!(
        doubled("shape: box, width: 40, depth: 90, doubled: false, fillet: 6"),
        [false; 4],
        "box"
    );
    let joint = with_pattern(
        MM,
        "shape: circle, radius: 30, at: [5, 6], turned: 30 deg, mirrored: true, toe: outside, fillet: 6",
    );
    let [run] = joint.weld.runs.as_slice() else {
        panic!("one run")
    };
    assert_eq!(run.toe.as_ref().unwrap().value, ToeSpec::Outside, "toe");
    assert!(
        matches!(&run.path, PathSpec::Circle { centre, .. } if numbers(centre) == ["5", "6", "0"]),
        "centre"
    );
}

/// 80 cos 30° = 69.282 032 302 755 09…, here to twelve digits; 80 sin 30° = 40.
#[test]
fn laid_out_points_have_short_texts_that_read_back_as_their_values() {
    let joint = with_pattern(
        MM,
        "shape: box, width: 80, depth: 0.3, turned: 30 deg, fillet: 6",
    );
    assert_eq!(
        straight(&joint.weld.runs[0])[1],
        ["69.2820323028", "40", "0"],
        "corner"
    );
    let joint = with_pattern(
        "{force: kip, length: in}",
        "shape: single line, depth: 1/3 in, at: [1/8, 0.1], fillet: 1/4",
    );
    assert_eq!(
        straight(&joint.weld.runs[0])[0],
        ["0.125", "0.1", "0"],
        "in the printing set"
    );
    for run in &with_pattern(
        MM,
        "shape: channel, width: 7 in, depth: 11 cm, turned: 0.3 rad, fillet: 6",
    )
    .weld
    .runs
    {
        let PathSpec::Straight(points) = &run.path else {
            panic!("a straight")
        };
        for part in points.iter().flat_map(|point| &point.parts) {
            let back: f64 = part.number.parse().unwrap();
            assert_eq!(
                back.to_bits(),
                part.value.to_bits(),
                "{} reads back",
                part.number
            );
            assert!(part.number.len() <= 16, "{} is short", part.number);
        }
    }
}

#[test]
fn quarter_turns_are_exact() {
    #[rustfmt::skip]
    let rows = [
        ("0 deg", ["0", "90"]), ("90 deg", ["-90", "0"]), ("180 deg", ["0", "-90"]), ("270 deg", ["90", "0"]),
        ("-90 deg", ["90", "0"]), ("-180°", ["0", "-90"]), ("450 deg", ["-90", "0"]),
    ];
    for (turned, end) in rows {
        let joint = with_pattern(
            MM,
            &format!("shape: single line, depth: 90, turned: {turned}, fillet: 6, toe: +x"),
        );
        assert_eq!(straight(&joint.weld.runs[0])[1][..2], end, "{turned}");
        let ToeSpec::Toward(toe) = joint.weld.runs[0].toe.as_ref().unwrap().value else {
            panic!("a direction")
        };
        assert!(
            toe.iter().all(|part| [0.0, 1.0, -1.0].contains(part)),
            "{turned}: {toe:?}"
        );
    }
}

/// What no reader reads is refused, at once: lists of words beyond a thousand items.
#[test]
fn lists_of_words_are_bounded() {
    for (count, refused) in [(1000, false), (1001, true)] {
        let text = format!(
            "{}\nassumptions:\n{}",
            include_str!("valid/usual-fillet.yaml"),
            "  - The deck is stiff.\n".repeat(count)
        );
        let file = Arc::new(SourceFile {
            name: "joints/x.yaml".into(),
            text,
        });
        let told = read_joint(&file).map_err(|faults| faults.render(false));
        assert_eq!(told.is_err(), refused, "{count} items: {told:?}");
        if let Err(told) = told {
            let wanted =
                "error[too-many]: `assumptions` has 1001 items, but a note takes 1000 at most\n";
            assert!(told.starts_with(wanted), "{told}");
        }
    }
}

#[test]
fn what_is_left_out_has_its_usual_value() {
    let joint = with_pattern(MM, "shape: single line, depth: 90, fillet: 6");
    let roles: Vec<&str> = joint
        .signatures
        .iter()
        .map(|role| role.value.as_str())
        .collect();
    assert_eq!(roles, ["prepared", "checked", "approved"], "roles");
    assert_eq!(joint.paper, Paper::A4, "paper");
    assert!(
        joint.filler.is_none() && joint.assumptions.is_empty() && joint.purpose.is_none(),
        "nothing invented"
    );
}
