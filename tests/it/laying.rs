//! From told runs to runs: legs, sides, beads, toes, corners, ends, refusals; and load frames.

use seamnote::joint::{
    Case, EndSpec, GivenAt, LegMeasure, Level, LoadFrame, Loads, Part, PathSpec, RunSpec, SizeSpec,
    Stitch, ToeSpec, Triple, WeldSpec,
};
use seamnote::load::{FrameError, action, actions};
use seamnote::quantity::{Dim, Given, UnitSet};
use seamnote::source::{Place, SourceFile, Told};
use seamnote::weld::{
    End, Run, Segment, ThroatRule, V3, WeldErrorKind, WeldFaults, lay_weld, line_properties,
};
use std::f64::consts::{FRAC_1_SQRT_2, PI};
use std::sync::Arc;

/// A place that starts at byte `start`; runs take the hundreds, what they hold the bytes within.
fn place(start: usize) -> Place {
    let file = Arc::new(SourceFile {
        name: "joints/test.yaml".into(),
        text: " ".repeat(9999),
    });
    Place {
        file,
        start,
        end: start + 1,
    }
}

fn told<T>(value: T, start: usize) -> Told<T> {
    Told {
        value,
        place: place(start),
    }
}

fn given(value: f64, dim: Dim) -> Given {
    Given::stated(&value.to_string(), value, dim)
}

fn length(value: f64, start: usize) -> GivenAt {
    told(given(value, Dim::LENGTH), start)
}

fn angle(degrees: f64, start: usize) -> GivenAt {
    told(given(degrees.to_radians(), Dim::ANGLE), start)
}

fn triple(values: [f64; 3]) -> Triple {
    Triple {
        parts: values.map(|v| given(v, Dim::LENGTH)),
        place: place(1),
    }
}

fn flat(x: f64, y: f64) -> Triple {
    triple([x, y, 0.0])
}

/// A fillet of leg 6 along `path`, told at bytes 100 (index + 1) and on.
fn spec(index: usize, path: PathSpec) -> RunSpec {
    let at = 100 * (index + 1);
    RunSpec {
        name: told(format!("run {}", index + 1), at),
        path,
        size: SizeSpec::Fillet {
            leg: length(6.0, at + 1),
            measured: LegMeasure::AlongFaces,
        },
        between: None,
        gap: None,
        penetration: None,
        toe: None,
        both_sides: None,
        stitch: None,
        normal: None,
        joins: [told("bracket".into(), at + 2), told("deck".into(), at + 3)],
        ends: [None, None],
        place: Place {
            end: at + 99,
            ..place(at)
        },
    }
}

fn straight(index: usize, a: [f64; 2], b: [f64; 2]) -> RunSpec {
    spec(
        index,
        PathSpec::Straight([flat(a[0], a[1]), flat(b[0], b[1])]),
    )
}

fn polyline(index: usize, points: &[[f64; 2]], closed: bool) -> RunSpec {
    let points = points.iter().map(|p| flat(p[0], p[1])).collect();
    spec(index, PathSpec::Polyline { points, closed })
}

fn part(name: &str, thickness: Option<f64>) -> Part {
    Part {
        name: told(name.into(), 5),
        material: told("S355J2".into(), 5),
        thickness: thickness.map(|t| length(t, 5)),
        f_y: None,
        f_u: None,
        more: Vec::new(),
        source: None,
        to_be_verified: false,
        place: place(5),
    }
}

fn lay(runs: Vec<RunSpec>) -> Result<Vec<Run>, WeldFaults> {
    let parts = [part("bracket", Some(10.0)), part("deck", Some(12.0))];
    lay_weld(
        &WeldSpec {
            runs,
            pattern: None,
        },
        &parts,
        UnitSet::NewtonMillimetre,
    )
}

fn names(runs: &[Run]) -> Vec<&str> {
    runs.iter().map(|run| run.name.as_str()).collect()
}

/// The single fault that laying these runs gives, and the byte where it points.
fn fault(runs: Vec<RunSpec>) -> (WeldErrorKind, usize, String) {
    let faults = lay(runs).unwrap_err().0;
    assert_eq!(faults.len(), 1, "{faults:?}");
    (
        faults[0].kind.clone(),
        faults[0].place.start,
        faults[0].to_string(),
    )
}

/// Ends told once for all runs: their place is outside each run.
fn all_ends(mut spec: RunSpec, end: EndSpec) -> RunSpec {
    spec.ends = [Some(told(end, 9)), Some(told(end, 9))];
    spec
}

fn channel() -> Vec<RunSpec> {
    vec![
        straight(0, [0.0, 0.0], [80.0, 0.0]),
        straight(1, [0.0, 0.0], [0.0, 120.0]),
        straight(2, [0.0, 120.0], [80.0, 120.0]),
    ]
}

#[test]
fn corners_go_on_and_free_ends_stop() {
    let throat = 6.0 * FRAC_1_SQRT_2;
    let runs = lay(channel()
        .into_iter()
        .map(|s| all_ends(s, EndSpec::LessThroat))
        .collect())
    .unwrap();
    let stop = End::Stop {
        less: throat,
        leg: false,
    };
    let expected = [
        [End::Continuous, stop],
        [End::Continuous; 2],
        [End::Continuous, stop],
    ];
    for (run, expected) in runs.iter().zip(expected) {
        assert_eq!(run.ends, expected, "{}", run.name);
        assert!((run.throat - throat).abs() < 1e-15, "{}", run.name);
        assert_eq!(
            (run.joins, run.normal, run.one_of_two),
            ([0, 1], V3::z(), false),
            "{}",
            run.name
        );
    }
    assert!(
        (runs[0].path.length() - (80.0 - throat)).abs() < 1e-12,
        "shortened at the free end only"
    );
    assert!(
        (runs[0].path.point(0.0)).norm() < 1e-12,
        "and not at the corner"
    );
    assert!(
        (runs[0].told.length() - 80.0).abs() < 1e-12,
        "the told path stays"
    );
    assert!(
        (runs[1].path.length() - 120.0).abs() < 1e-12,
        "between corners nothing is taken"
    );

    let less_leg = lay(channel()
        .into_iter()
        .map(|s| all_ends(s, EndSpec::LessLeg))
        .collect())
    .unwrap();
    assert_eq!(
        less_leg[2].ends[1],
        End::Stop {
            less: 6.0,
            leg: true
        },
        "one leg"
    );
    let untold = lay(channel()).unwrap();
    assert_eq!(
        untold[0].ends,
        [End::Continuous, End::Full],
        "nobody tells: full size"
    );
}

#[test]
fn a_run_may_tell_its_corner_otherwise() {
    let mut specs = channel();
    specs[0].ends = [
        Some(told(EndSpec::LessLeg, 150)),
        Some(told(EndSpec::Full, 151)),
    ];
    let runs = lay(specs).unwrap();
    assert_eq!(
        runs[0].ends,
        [
            End::Stop {
                less: 6.0,
                leg: true
            },
            End::Full
        ],
        "two ends told apart"
    );
    // One word for both ends of the run speaks of its free ends.
    let mut specs = channel();
    specs[0].ends = [
        Some(told(EndSpec::LessLeg, 150)),
        Some(told(EndSpec::LessLeg, 150)),
    ];
    let runs = lay(specs).unwrap();
    assert_eq!(
        runs[0].ends,
        [
            End::Continuous,
            End::Stop {
                less: 6.0,
                leg: true
            }
        ],
        "one word"
    );
}

#[test]
fn polylines_become_legs() {
    let mut open = polyline(
        0,
        &[[80.0, 0.0], [0.0, 0.0], [0.0, 120.0], [80.0, 120.0]],
        false,
    );
    open.ends = [
        Some(told(EndSpec::LessThroat, 150)),
        Some(told(EndSpec::Full, 151)),
    ];
    let runs = lay(vec![open]).unwrap();
    assert_eq!(
        names(&runs),
        ["run 1 (1)", "run 1 (2)", "run 1 (3)"],
        "legs are numbered"
    );
    assert!(
        matches!(
            runs[0].ends,
            [End::Stop { leg: false, .. }, End::Continuous]
        ),
        "{:?}",
        runs[0].ends
    );
    assert_eq!(
        runs[2].ends,
        [End::Continuous, End::Full],
        "the last leg has the told end"
    );
    let closed = polyline(0, &[[0.0, 0.0], [80.0, 0.0], [80.0, 120.0]], true);
    let runs = lay(vec![all_ends(closed, EndSpec::LessLeg)]).unwrap();
    assert_eq!(runs.len(), 3, "the closing leg too");
    assert!(
        runs.iter().all(|run| run.ends == [End::Continuous; 2]),
        "a closed outline has no free end"
    );
}

#[test]
fn circles_and_arcs_lie_in_the_plane_of_their_normal() {
    let circle = |normal: Option<[f64; 3]>| {
        let path = PathSpec::Circle {
            centre: triple([1.0, 2.0, 3.0]),
            radius: length(25.0, 101),
        };
        let mut spec = all_ends(spec(0, path), EndSpec::LessThroat);
        spec.normal = normal.map(triple);
        lay(vec![spec]).unwrap().remove(0)
    };
    let plain = circle(None);
    assert_eq!(plain.ends, [End::Continuous; 2], "closed");
    assert!(
        (plain.path.length() - 50.0 * PI).abs() < 1e-12,
        "full length"
    );
    assert!(
        (plain.path.point(0.0) - V3::new(26.0, 2.0, 3.0)).norm() < 1e-12,
        "starts on x"
    );
    assert!(
        (plain.path.point(0.25) - V3::new(1.0, 27.0, 3.0)).norm() < 1e-12,
        "turns to y"
    );
    let about_x = circle(Some([2.0, 0.0, 0.0]));
    assert!(
        (about_x.path.point(0.0) - V3::new(1.0, 27.0, 3.0)).norm() < 1e-12,
        "starts on y"
    );
    assert!(
        (about_x.path.point(0.25) - V3::new(1.0, 2.0, 28.0)).norm() < 1e-12,
        "by the right hand"
    );
    assert!((about_x.normal - V3::x()).norm() < 1e-15, "unit normal");

    let arc = |from: f64, sweep: f64| {
        let radius = length(60.0, 101);
        let centre = flat(80.0, 60.0);
        spec(
            0,
            PathSpec::Arc {
                centre,
                radius,
                from: angle(from, 102),
                sweep: angle(sweep, 103),
            },
        )
    };
    let half = &lay(vec![arc(-90.0, 180.0)]).unwrap()[0];
    assert!(
        (half.path.point(0.0) - V3::new(80.0, 0.0, 0.0)).norm() < 1e-12,
        "start"
    );
    assert!(
        (half.path.point(0.5) - V3::new(140.0, 60.0, 0.0)).norm() < 1e-12,
        "middle"
    );
    let whole = &lay(vec![all_ends(arc(10.0, -360.0), EndSpec::LessLeg)]).unwrap()[0];
    assert_eq!(whole.ends, [End::Continuous; 2], "a full turn closes");
    let (kind, at, text) = fault(vec![arc(0.0, 400.0)]);
    assert!(
        matches!(kind, WeldErrorKind::Sweep { .. }) && at == 103,
        "{text} at {at}"
    );
    assert_eq!(
        text, "the arc sweeps 400°, but must sweep more than 0° and at most 360°",
        "text"
    );
}

/// The direction in the joint frame in which the toe lies.
fn toe_direction(run: &Run, p: f64) -> V3 {
    run.normal.cross(&run.path.tangent(p)) * run.toe.unwrap()
}

#[test]
fn toes_lie_on_the_told_side() {
    let directions = [
        ToeSpec::Toward([0.0, -1.0, 0.0]),
        ToeSpec::Toward([-1.0, 0.0, 0.0]),
        ToeSpec::Toward([0.0, 1.0, 0.0]),
    ];
    let told_by_direction: Vec<RunSpec> = channel()
        .into_iter()
        .zip(directions)
        .map(|(s, toe)| RunSpec {
            toe: Some(told(toe, 20)),
            ..s
        })
        .collect();
    let outside = |mut specs: Vec<RunSpec>, toe: ToeSpec| {
        specs.iter_mut().for_each(|s| s.toe = Some(told(toe, 20)));
        specs
    };
    let expected = [-V3::y(), -V3::x(), V3::y()];
    for specs in [told_by_direction, outside(channel(), ToeSpec::Outside)] {
        for (run, expected) in lay(specs).unwrap().iter().zip(expected) {
            assert!(
                (toe_direction(run, 0.5) - expected).norm() < 1e-12,
                "{}",
                run.name
            );
        }
    }
    // A closed outline knows its inside though its centroid may lie on the other side of a leg.
    let re_entrant = [
        [0.0, 0.0],
        [100.0, 0.0],
        [100.0, 100.0],
        [90.0, 100.0],
        [90.0, 10.0],
        [0.0, 10.0],
    ];
    for points in [
        re_entrant.to_vec(),
        re_entrant.iter().rev().copied().collect(),
    ] {
        for run in lay(outside(vec![polyline(0, &points, true)], ToeSpec::Inside)).unwrap() {
            let inner = run.told.point(0.5) + toe_direction(&run, 0.5);
            let (x, y) = (inner.x, inner.y);
            assert!(
                (x > 90.0 || y < 10.0) && x > 0.0 && y > 0.0 && x < 100.0 && y < 100.0,
                "{inner}"
            );
        }
    }
    for sweep in [200.0, -200.0] {
        let path = || PathSpec::Arc {
            centre: flat(3.0, 4.0),
            radius: length(10.0, 101),
            from: angle(20.0, 102),
            sweep: angle(sweep, 103),
        };
        for (toe, sign) in [(ToeSpec::Outside, 1.0), (ToeSpec::Inside, -1.0)] {
            let run = lay(outside(vec![spec(0, path())], toe)).unwrap().remove(0);
            let expected = run.path.radial(0.3) * sign;
            assert!(
                (toe_direction(&run, 0.3) - expected).norm() < 1e-12,
                "{sweep} {toe:?}"
            );
        }
        let toward = outside(vec![spec(0, path())], ToeSpec::Toward([1.0, 0.0, 0.0]));
        assert_eq!(
            fault(toward).0,
            WeldErrorKind::ToeAlongRun,
            "it changes sides along the arc"
        );
    }
    let quarter = PathSpec::Arc {
        centre: flat(0.0, 0.0),
        radius: length(10.0, 101),
        from: angle(0.0, 102),
        sweep: angle(90.0, 103),
    };
    let run = lay(outside(
        vec![spec(0, quarter)],
        ToeSpec::Toward([1.0, 0.0, 0.0]),
    ))
    .unwrap()
    .remove(0);
    assert!(
        (toe_direction(&run, 0.4) - run.path.radial(0.4)).norm() < 1e-12,
        "a quarter has one side"
    );

    let along = outside(
        vec![straight(0, [0.0, 0.0], [0.0, 9.0])],
        ToeSpec::Toward([0.0, 1.0, 0.0]),
    );
    let (kind, at, _) = fault(along);
    assert!(
        kind == WeldErrorKind::ToeAlongRun && at == 20,
        "points at the toe"
    );
    let lone = outside(vec![straight(0, [0.0, 0.0], [0.0, 9.0])], ToeSpec::Outside);
    assert_eq!(
        fault(lone).0,
        WeldErrorKind::ToeThroughCentroid,
        "its own centroid"
    );
}

#[test]
fn two_sided_runs_have_opposite_toes() {
    let both = |apart: Option<f64>| {
        let mut stem = straight(0, [0.0, 0.0], [50.0, 0.0]);
        stem.toe = Some(told(ToeSpec::Toward([0.0, -1.0, 0.0]), 120));
        stem.both_sides = Some(told(apart.map(|a| given(a, Dim::LENGTH)), 121));
        stem
    };
    let runs = lay(vec![all_ends(both(None), EndSpec::LessThroat)]).unwrap();
    assert_eq!(
        names(&runs),
        ["run 1, near side", "run 1, far side"],
        "names"
    );
    assert_eq!(runs[0].path, runs[1].path, "coincident");
    assert!(
        (toe_direction(&runs[0], 0.5) + V3::y()).norm() < 1e-12,
        "near: as told"
    );
    assert!(
        (toe_direction(&runs[1], 0.5) - V3::y()).norm() < 1e-12,
        "far: opposite"
    );
    assert!(runs.iter().all(|run| run.one_of_two), "marked");
    assert!(
        matches!(runs[0].ends, [End::Stop { .. }, End::Stop { .. }]),
        "the other side is no corner"
    );

    let runs = lay(vec![both(Some(10.0))]).unwrap();
    assert!(
        (runs[0].path.point(0.0) - V3::new(0.0, -5.0, 0.0)).norm() < 1e-12,
        "near side"
    );
    assert!(
        (runs[1].path.point(1.0) - V3::new(50.0, 5.0, 0.0)).norm() < 1e-12,
        "far side"
    );
    let mut skewed = both(None);
    skewed.between = Some(angle(70.0, 122));
    let runs = lay(vec![skewed.clone()]).unwrap();
    for (run, degrees) in runs.iter().zip([70.0_f64, 110.0]) {
        let expected = 6.0 * (degrees.to_radians() / 2.0).cos();
        assert!(
            (run.throat - expected).abs() < 1e-12,
            "{}: {}",
            run.name,
            run.throat
        );
        assert!(
            (run.angle.to_degrees() - degrees).abs() < 1e-12,
            "{}: the supplement",
            run.name
        );
    }
    skewed.toe = None;
    assert!(
        matches!(
            fault(vec![skewed]),
            (WeldErrorKind::SkewedSides { .. }, 121, _)
        ),
        "which side?"
    );

    // An outline moved to both sides keeps its corners closed.
    let mut outline = polyline(
        0,
        &[[0.0, 0.0], [80.0, 0.0], [80.0, 120.0], [0.0, 120.0]],
        true,
    );
    outline.toe = Some(told(ToeSpec::Outside, 120));
    outline.both_sides = Some(told(Some(given(8.0, Dim::LENGTH)), 121));
    let runs = lay(vec![outline]).unwrap();
    let around = |side: &str| -> f64 {
        runs.iter()
            .filter(|run| run.name.ends_with(side))
            .map(|run| run.path.length())
            .sum()
    };
    assert!(
        (around("near side") - 2.0 * (88.0 + 128.0)).abs() < 1e-9,
        "outside is longer"
    );
    assert!(
        (around("far side") - 2.0 * (72.0 + 112.0)).abs() < 1e-9,
        "inside is shorter"
    );
    assert!(
        runs.iter().all(|run| run.ends == [End::Continuous; 2]),
        "closed"
    );
    let mut ring = spec(
        0,
        PathSpec::Circle {
            centre: flat(0.0, 0.0),
            radius: length(20.0, 101),
        },
    );
    ring.toe = Some(told(ToeSpec::Outside, 120));
    ring.both_sides = Some(told(Some(given(4.0, Dim::LENGTH)), 121));
    let radii: Vec<f64> = lay(vec![ring])
        .unwrap()
        .iter()
        .map(|run| run.path.length() / (2.0 * PI))
        .collect();
    assert!(
        (radii[0] - 22.0).abs() < 1e-12 && (radii[1] - 18.0).abs() < 1e-12,
        "{radii:?}"
    );
}

fn stitched(spec: RunSpec, bead: f64, pitch: f64) -> RunSpec {
    RunSpec {
        stitch: Some(Stitch {
            bead: length(bead, 130),
            pitch: length(pitch, 131),
        }),
        ..spec
    }
}

#[test]
fn stitches_become_beads() {
    let long = || straight(0, [0.0, 0.0], [350.0, 0.0]);
    let runs = lay(vec![stitched(long(), 50.0, 150.0)]).unwrap();
    assert_eq!(
        names(&runs),
        ["run 1, bead 1", "run 1, bead 2", "run 1, bead 3"],
        "names"
    );
    for (run, start) in runs.iter().zip([0.0, 150.0, 300.0]) {
        assert!((run.told.point(0.0).x - start).abs() < 1e-9, "{}", run.name);
        assert!(
            (run.told.point(1.0).x - start - 50.0).abs() < 1e-9,
            "{}",
            run.name
        );
        let throat = 6.0 * FRAC_1_SQRT_2;
        assert_eq!(
            run.ends,
            [End::Stop {
                less: throat,
                leg: false
            }; 2],
            "beads stop"
        );
        assert!(
            (run.path.length() - (50.0 - 2.0 * throat)).abs() < 1e-9,
            "{}",
            run.name
        );
    }
    let full = lay(vec![all_ends(stitched(long(), 50.0, 150.0), EndSpec::Full)]).unwrap();
    assert!(
        (line_properties(&full).length - 150.0).abs() < 1e-9,
        "told full"
    );
    let short = lay(vec![stitched(
        straight(0, [0.0, 0.0], [349.0, 0.0]),
        50.0,
        150.0,
    )])
    .unwrap();
    assert_eq!(short.len(), 2, "a bead that does not fit whole is left out");
    let ring = spec(
        0,
        PathSpec::Circle {
            centre: flat(0.0, 0.0),
            radius: length(100.0, 101),
        },
    );
    let runs = lay(vec![stitched(ring, 50.0, 50.0 * PI)]).unwrap();
    assert_eq!(
        runs.len(),
        4,
        "the last bead keeps its distance from the first"
    );
    let centroid = line_properties(&runs).centroid.norm();
    assert!(centroid < 1e-9, "evenly round: {centroid}");

    let (kind, at, text) = fault(vec![stitched(long(), 50.0, 50.0)]);
    assert!(
        matches!(kind, WeldErrorKind::Pitch { .. }) && at == 131,
        "{text}"
    );
    assert_eq!(
        text, "the pitch is 50 mm, but must be above the bead's length of 50 mm",
        "text"
    );
    let (kind, at, text) = fault(vec![stitched(long(), 400.0, 500.0)]);
    assert!(
        matches!(kind, WeldErrorKind::BeadTooLong { .. }) && at == 130,
        "{text}"
    );
}

#[test]
fn coincident_runs_are_refused() {
    let twice = vec![
        straight(0, [0.0, 0.0], [80.0, 0.0]),
        straight(1, [60.0, 0.0], [200.0, 0.0]),
    ];
    let (kind, at, text) = fault(twice);
    assert!(
        matches!(kind, WeldErrorKind::Coincident { .. }) && at == 200,
        "at the later run"
    );
    assert_eq!(text, "`run 2` lies on `run 1` over 20 mm", "text");
    let circle = |i: usize| {
        spec(
            i,
            PathSpec::Circle {
                centre: flat(0.0, 0.0),
                radius: length(20.0, 101),
            },
        )
    };
    assert!(
        matches!(
            fault(vec![circle(0), circle(1)]).0,
            WeldErrorKind::Coincident { .. }
        ),
        "circles"
    );
    let folded = polyline(0, &[[0.0, 0.0], [80.0, 0.0], [40.0, 0.0]], false);
    assert!(
        matches!(fault(vec![folded]).0, WeldErrorKind::Coincident { .. }),
        "folded back on itself"
    );
    let end_to_end = vec![
        straight(0, [0.0, 0.0], [80.0, 0.0]),
        straight(1, [80.0, 0.0], [200.0, 0.0]),
    ];
    assert_eq!(
        lay(end_to_end).unwrap()[0].ends[1],
        End::Continuous,
        "end to end goes on"
    );
    let crossing = vec![
        straight(0, [0.0, 0.0], [80.0, 0.0]),
        straight(1, [40.0, -9.0], [40.0, 9.0]),
    ];
    assert!(lay(crossing).is_ok(), "crossing");
}

#[test]
fn normals_are_square_to_their_runs() {
    let upright = |normal: [f64; 3]| {
        let mut run = straight(0, [0.0, 0.0], [80.0, 0.0]);
        run.normal = Some(triple(normal));
        run
    };
    let run = lay(vec![upright([0.0, 0.0, -3.0])]).unwrap().remove(0);
    assert!((run.normal + V3::z()).norm() < 1e-15, "made unit");
    let run = lay(vec![upright([5e-7, 0.0, 1.0])]).unwrap().remove(0);
    assert!(
        run.normal.dot(&run.path.tangent(0.5)).abs() < 1e-15,
        "made square"
    );
    let (kind, at, text) = fault(vec![upright([1.0, 0.0, 1.0])]);
    assert!(
        matches!(kind, WeldErrorKind::NormalNotSquare { .. }) && at == 1,
        "at the normal"
    );
    assert_eq!(
        text, "the normal makes 45° with the run, but must make 90°",
        "text"
    );
    assert_eq!(
        fault(vec![upright([0.0; 3])]).0,
        WeldErrorKind::NoNormal,
        "no direction"
    );
    // A run along z needs a normal of its own.
    let rising = spec(
        0,
        PathSpec::Straight([flat(0.0, 0.0), triple([0.0, 0.0, 50.0])]),
    );
    assert!(
        matches!(fault(vec![rising]).0, WeldErrorKind::NormalNotSquare { .. }),
        "+z along it"
    );
}

#[test]
fn complete_penetration_takes_a_thickness() {
    let complete = |tee: bool| RunSpec {
        size: SizeSpec::Complete {
            tee,
            place: place(140),
        },
        ..straight(0, [0.0, 0.0], [80.0, 0.0])
    };
    let lay_with = |tee: bool, attached: Option<f64>, base: Option<f64>| {
        let parts = [part("bracket", attached), part("deck", base)];
        let weld = WeldSpec {
            runs: vec![complete(tee)],
            pattern: None,
        };
        lay_weld(&weld, &parts, UnitSet::NewtonMillimetre)
    };
    let rule = |tee, attached, base| lay_with(tee, attached, base).unwrap()[0].rule.clone();
    let takes = |thickness: f64, part: usize| ThroatRule::Complete { thickness, part };
    assert_eq!(
        rule(true, Some(20.0), Some(12.0)),
        takes(20.0, 0),
        "in a tee the attached part"
    );
    assert_eq!(
        rule(false, Some(20.0), Some(12.0)),
        takes(12.0, 1),
        "else the thinner"
    );
    assert_eq!(
        rule(true, Some(20.0), None),
        takes(20.0, 0),
        "a tee needs no other thickness"
    );
    let refused = lay_with(false, Some(20.0), None).unwrap_err().0;
    assert_eq!(
        refused[0].kind,
        WeldErrorKind::ThicknessUnknown {
            part: "deck".into()
        },
        "{refused:?}"
    );
    assert_eq!(
        refused[0].place.start, 140,
        "where complete penetration is told"
    );
}

#[test]
fn every_fault_is_found_in_one_go() {
    let mut no_leg = straight(0, [0.0, 0.0], [80.0, 0.0]);
    no_leg.size = SizeSpec::Throat {
        throat: length(4.0, 101),
        leg: None,
    };
    no_leg.ends = [
        Some(told(EndSpec::LessLeg, 150)),
        Some(told(EndSpec::Full, 151)),
    ];
    let short = all_ends(straight(1, [0.0, 50.0], [8.0, 50.0]), EndSpec::LessThroat);
    let no_length = straight(2, [5.0, 5.0], [5.0, 5.0]);
    let mut gap = straight(3, [0.0, 90.0], [80.0, 90.0]);
    gap.gap = Some(length(5.0, 420));
    let mut stranger = straight(4, [0.0, 99.0], [80.0, 99.0]);
    stranger.joins[1].value = "hull".into();
    let faults = lay(vec![no_leg, short, no_length, gap, stranger])
        .unwrap_err()
        .0;
    let texts: Vec<String> = faults
        .iter()
        .map(|f| format!("{}: {}", f.place.start, f))
        .collect();
    let expected = [
        "1: the run has no length",
        "420: the root gap is 5 mm, but a fillet bridges at most 3/16 in (4.7625 mm)",
        "503: `hull` is no part of this joint",
        "150: an end is shortened by one leg, but no leg is told",
        "200: the ends of `run 2` take 8.48528 mm off its 8 mm and leave nothing",
    ];
    assert_eq!(texts, expected, "all of them");
    let help = faults[1].kind.help().unwrap_or_default();
    assert!(
        help.contains("5/16 in") && help.contains("3 in"),
        "says when more would be permitted: {help}"
    );
    assert_eq!(faults[1].kind.code(), "gap-too-wide", "stable code");
    // With its leg told beside the throat, an end less one leg is known.
    let mut leg = straight(0, [0.0, 0.0], [80.0, 0.0]);
    leg.size = SizeSpec::Throat {
        throat: length(4.0, 101),
        leg: Some(length(7.0, 102)),
    };
    let run = lay(vec![all_ends(leg, EndSpec::LessLeg)])
        .unwrap()
        .remove(0);
    assert!(
        (run.path.length() - 66.0).abs() < 1e-12 && run.rule == ThroatRule::Stated { throat: 4.0 },
        "{run:?}"
    );
}

#[test]
fn the_told_path_is_kept_in_space() {
    let edge = |z: f64| {
        let mut run = spec(
            0,
            PathSpec::Straight([triple([0.0, 0.0, z]), triple([0.0, 60.0, z])]),
        );
        run.normal = Some(triple([1.0, 0.0, 0.0]));
        run.toe = Some(told(ToeSpec::Toward([0.0, 0.0, 1.0]), 120));
        run
    };
    let run = lay(vec![edge(7.0)]).unwrap().remove(0);
    // n̂ = x × y = z: the toe is on its side.
    assert_eq!(run.toe, Some(1.0), "toward z");
    let expected = Segment::Straight {
        a: V3::new(0.0, 0.0, 7.0),
        b: V3::new(0.0, 60.0, 7.0),
    };
    assert_eq!(run.told, expected, "as told");
}

fn case(force: [f64; 3], moment: [f64; 3], at: [f64; 3], frame: Option<LoadFrame>) -> Case {
    Case {
        name: told("L01".into(), 1),
        says: None,
        level: told(Level::Ultimate, 1),
        force: triple(force),
        moment: triple(moment),
        at: triple(at),
        frame,
        place: place(1),
    }
}

fn frame(axes: [[f64; 3]; 3]) -> LoadFrame {
    LoadFrame {
        name: told("mast".into(), 7),
        origin: triple([100.0, 0.0, 50.0]),
        axes: axes.map(triple),
    }
}

/// Source: definitions (status: derived): v_joint = R v, p_joint = o + R p, M_C = M + (P − C) × F.
#[test]
fn loads_come_into_the_joint_frame() {
    let plain = action(&case(
        [1.0, 2.0, 3.0],
        [4.0, 5.0, 6.0],
        [7.0, 8.0, 9.0],
        None,
    ))
    .unwrap();
    assert_eq!(
        (plain.force, plain.moment),
        (V3::new(1.0, 2.0, 3.0), V3::new(4.0, 5.0, 6.0)),
        "as told"
    );
    let (force, moment) = plain.about(V3::new(7.0, 8.0, 8.0));
    assert_eq!(
        (force, moment),
        (plain.force, V3::new(2.0, 6.0, 6.0)),
        "lever (0, 0, 1)"
    );

    // A quarter turn about z: the frame's x is the joint's y.
    let quarter = frame([[0.0, 1.0, 0.0], [-1.0, 0.0, 0.0], [0.0, 0.0, 1.0]]);
    let turned = action(&case(
        [10.0, 0.0, 0.0],
        [0.0, 20.0, 0.0],
        [5.0, 0.0, 0.0],
        Some(quarter.clone()),
    ))
    .unwrap();
    assert_eq!(turned.force, V3::new(0.0, 10.0, 0.0), "R F");
    assert_eq!(turned.moment, V3::new(-20.0, 0.0, 0.0), "R M");
    assert_eq!(turned.at, V3::new(100.0, 5.0, 50.0), "o + R p");

    // Axes typed to seven digits are made exact: lengths stay.
    let (c, s) = (0.866_025_4, 0.5);
    let typed = frame([[c, s, 0.0], [-s, c, 0.0], [0.0, 0.0, 1.0]]);
    let turned = action(&case([3.0, 4.0, 12.0], [0.0; 3], [0.0; 3], Some(typed))).unwrap();
    assert!(
        (turned.force.norm() - 13.0).abs() < 1e-14,
        "{}",
        turned.force.norm()
    );

    let refused = |axes| {
        actions(&Loads {
            cases: vec![case([1.0; 3], [0.0; 3], [0.0; 3], Some(frame(axes)))],
        })
    };
    let left = refused([[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, -1.0]]).unwrap_err();
    assert!(matches!(left, FrameError::LeftHanded { .. }), "{left}");
    let long = refused([[1.000_01, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]]).unwrap_err();
    assert!(matches!(long, FrameError::NotOrthonormal { .. }), "{long}");
    let nothing = refused([[0.0; 3], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]]).unwrap_err();
    assert!(
        matches!(nothing, FrameError::NotOrthonormal { .. }),
        "{nothing}"
    );
}
