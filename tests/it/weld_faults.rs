//! Faults of a weld group beyond the reader: each is told at its value, with its code.

use seamnote::criteria::built_in;
use seamnote::joint::{Joint, LoadFrame, PathSpec, SizeSpec, Triple, read_joint};
use seamnote::note::Calculation;
use seamnote::project::{ProjectError, read_joint_file};
use seamnote::quantity::{Dim, Given};
use seamnote::source::{Faults, SourceFile, Told};
use std::sync::Arc;

/// A joint with these runs, one a line.
fn text(runs: &str) -> String {
    format!(
        "note: T-1\ntitle: Trial\nrevision: A\ndate: 2026-05-04\nunits: {{force: N, length: mm}}\n\
         frame: {{origin: here}}\n\
         parts:\n  a: {{material: S355, f_u: 470}}\n  b: {{material: S355, thickness: 10, f_u: 470}}\n\
         weld:\n  joins: [a, b]\n  runs:\n{runs}\
         loads: {{at: [50, 20, 0], level: ultimate, cases: [{{case: L1, force: [1, 2, 0]}}]}}\n\
         checks: [{{clause: throat ultimate, F_su: 200}}]\n"
    )
}

fn joint(runs: &str) -> Joint {
    let file = Arc::new(SourceFile {
        name: "joints/trial.yaml".to_owned(),
        text: text(runs),
    });
    read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)))
}

fn faults(joint: &Joint) -> Faults {
    match Calculation::of(joint, built_in()) {
        Err(faults) => faults,
        Ok(_) => panic!("the joint is not refused"),
    }
}

/// The one fault: its code and the text it stands at.
fn told(faults: &Faults) -> (&'static str, &str) {
    assert_eq!(faults.0.len(), 1, "{}", faults.render(false));
    let fault = &faults.0[0];
    let text = &fault.place.file.text[fault.place.start..fault.place.end];
    (fault.code, text)
}

#[test]
fn weld_faults_stand_at_their_values() {
    let line = "straight: [[0, 0], [100, 0]]";
    let other = "    - {name: far, straight: [[0, 50], [100, 50]], fillet: 6, toe: +y}\n";
    #[rustfmt::skip]
    let rows = [
        // code                          the run                                                    the value
        ("unequal-skewed",               format!("{line}, fillet: [6, 9], between: 80 deg"),         "6"),
        ("gap-too-wide",                 format!("{line}, fillet: 8, gap: 5"),                       "5"),
        ("gap-takes-leg",                format!("{line}, fillet: 3, gap: 3.5"),                     "3.5"),
        ("gap-on-stated-throat",         format!("{line}, throat: 4, gap: 2.5"),                     "2.5"),
        ("penetration-on-stated-throat", format!("{line}, throat: 4, penetration: {{extra: 1.5, record: PQR-1}}"), "1.5"),
        ("thickness-unknown",            format!("{line}, complete: tee"),                           "tee"),
        ("normal-not-square",            format!("{line}, fillet: 6, normal: [1, 0, 1]"),            "[1, 0, 1]"),
        ("toe-along-run",                format!("{line}, fillet: 6, toe: +x"),                      "+x"),
        ("skewed-both-sides",            format!("{line}, fillet: 6, between: 75 deg, sides: both"), "both"),
        ("stitch-pitch",                 format!("{line}, fillet: 6, stitch: {{bead: 40, pitch: 30}}"), "30"),
        ("bead-too-long",                format!("{line}, fillet: 6, stitch: {{bead: 140, pitch: 150}}"), "140"),
        ("too-many-beads",               format!("{line}, fillet: 6, stitch: {{bead: 0.001, pitch: 0.002}}"), "0.001"),
        ("leg-unknown",                  format!("{line}, throat: 4, ends: less leg"),               "less leg"),
        ("nothing-left-of-run",          "straight: [[0, 0], [10, 0]], fillet: 6, ends: less leg".to_owned(), "{name: near, straight: [[0, 0], [10, 0]], fillet: 6, ends: less leg}"),
        ("sides-apart",                  "circle: {centre: [0, 0], radius: 20}, fillet: 6, sides: {both apart by: 50}".to_owned(), "50"),
    ];
    for (code, run, value) in rows {
        let joint = joint(&format!("    - {{name: near, {run}}}\n{other}"));
        let faults = faults(&joint);
        assert_eq!(told(&faults), (code, value), "{}", faults.render(false));
    }
}

#[test]
fn runs_on_each_other_are_told_at_the_later_one() {
    let joint = joint(
        "    - {name: one, straight: [[0, 0], [100, 0]], fillet: 6}\n\
         \x20   - {name: two, straight: [[150, 0], [40, 0]], fillet: 6}\n",
    );
    let faults = faults(&joint);
    let (code, value) = told(&faults);
    assert_eq!(code, "coincident-runs", "{}", faults.render(false));
    assert!(value.starts_with("{name: two"), "{value}");
    assert!(
        faults.0[0].message.ends_with("over 60 mm"),
        "{}",
        faults.0[0].message
    );
}

#[test]
fn a_side_inside_needs_a_centroid_off_the_run() {
    let joint = joint("    - {name: one, straight: [[0, 0], [100, 0]], fillet: 6, toe: inside}\n");
    assert_eq!(
        told(&faults(&joint)),
        ("toe-through-centroid", "inside"),
        "code and value"
    );
}

/// A length as the program would state it.
fn length(value: f64) -> Given {
    Given::stated(&value.to_string(), value, Dim::LENGTH)
}

/// A change that the reader of joint files would have refused.
type Change = fn(&mut Joint);

/// Rooms do not rely on the reader: what it refuses, they refuse too.
#[test]
fn what_the_reader_refuses_is_refused_again() {
    let rows: [(&str, Change); 10] = [
        ("weld-angle", |joint| {
            let angle = Given::stated("4", 4.0, Dim::ANGLE);
            let place = joint.note.place.clone();
            joint.weld.runs[0].between = Some(Told {
                value: angle,
                place,
            });
        }),
        ("gap-negative", |joint| {
            let (value, place) = (length(-1.0), joint.note.place.clone());
            joint.weld.runs[0].gap = Some(Told { value, place });
        }),
        ("no-throat", |joint| {
            let (value, place) = (length(0.0), joint.note.place.clone());
            joint.weld.runs[0].size = SizeSpec::Partial {
                throat: Told { value, place },
            };
        }),
        ("run-without-length", |joint| {
            if let PathSpec::Straight(ends) = &mut joint.weld.runs[0].path {
                ends[1] = ends[0].clone();
            }
        }),
        ("few-points", |joint| {
            let points = points(joint);
            let closed = false;
            joint.weld.runs[0].path = PathSpec::Polyline { points, closed };
        }),
        ("radius", |joint| {
            joint.weld.runs[0].path = arc(joint, 0.0, 1.0)
        }),
        ("sweep", |joint| {
            joint.weld.runs[0].path = arc(joint, 20.0, 0.0)
        }),
        ("sweep", |joint| {
            joint.weld.runs[0].path = arc(joint, 20.0, 7.0)
        }),
        ("no-normal", |joint| {
            let (parts, place) = ([0.0; 3].map(length), joint.note.place.clone());
            joint.weld.runs[0].normal = Some(Triple { parts, place });
        }),
        ("bad-frame", |joint| {
            let place = joint.note.place.clone();
            let axis = |x: f64, y: f64, z: f64| Triple {
                parts: [x, y, z].map(|value| Given::stated(&value.to_string(), value, Dim::NONE)),
                place: place.clone(),
            };
            joint.loads.cases[0].frame = Some(LoadFrame {
                name: joint.note.clone(),
                origin: joint.loads.cases[0].at.clone(),
                axes: [
                    axis(1.0, 0.0, 0.0),
                    axis(0.0, 1.0, 0.0),
                    axis(0.0, 0.0, -1.0),
                ],
            });
        }),
    ];
    for (code, change) in rows {
        let mut joint = joint("    - {name: one, straight: [[0, 0], [100, 0]], fillet: 6}\n");
        change(&mut joint);
        let faults = Calculation::of(&joint, built_in()).expect_err(code);
        assert_eq!(told(&faults).0, code, "{}", faults.render(false));
    }
}

#[test]
fn a_pattern_that_lays_no_run_is_refused() {
    let pattern = text("").replace(
        "  runs:\n",
        "  pattern: {shape: circle, radius: 20, fillet: 6}\n",
    );
    let file = Arc::new(SourceFile {
        name: "joints/trial.yaml".to_owned(),
        text: pattern,
    });
    let mut joint = read_joint(&file).unwrap();
    assert_eq!(joint.weld.runs.len(), 1, "a circle is one run");
    joint.weld.runs.clear();
    let faults = faults(&joint);
    assert_eq!(
        told(&faults),
        ("no-runs", "{shape: circle, radius: 20, fillet: 6}"),
        "code and value"
    );
}

/// The end points of the first run.
fn points(joint: &Joint) -> Vec<Triple> {
    match &joint.weld.runs[0].path {
        PathSpec::Straight(ends) => ends.to_vec(),
        PathSpec::Polyline { .. } | PathSpec::Arc { .. } | PathSpec::Circle { .. } => Vec::new(),
    }
}

/// An arc about the start of the first run; the sweep in rad.
fn arc(joint: &Joint, radius: f64, sweep: f64) -> PathSpec {
    let told = |value| Told {
        value,
        place: joint.note.place.clone(),
    };
    let angle = |value: f64| told(Given::stated(&value.to_string(), value, Dim::ANGLE));
    PathSpec::Arc {
        centre: points(joint)[0].clone(),
        radius: told(length(radius)),
        from: angle(0.0),
        sweep: angle(sweep),
    }
}

#[test]
fn bytes_that_are_no_text_are_told_at_the_first_one() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("trial.yaml");
    std::fs::write(&path, b"note: T-1\ntitle: \xff\n").unwrap();
    let Err(ProjectError::Faults(faults)) = read_joint_file(&path) else {
        panic!("the file is not refused");
    };
    assert_eq!(told(&faults).0, "not-utf8", "the code");
    assert_eq!(faults.0[0].place.line_column(), (2, 8), "the place");
}
