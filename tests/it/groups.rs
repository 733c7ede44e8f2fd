//! Random groups against independent quadrature, closure, invariance, batch and refusals.

use crate::weldkit::{Lcg, circle, line, run};
use nalgebra::Matrix3;
use seamnote::load::Action;
use seamnote::solve::{
    Batch, Points, Regime, Resistance, Unresisted, check_points, closure, local, search,
};
use seamnote::weld::{LineProperties, Motion, Run, Segment, ThroatRule, V3, line_properties};
use std::f64::consts::PI;

/// ∫ t g(r) ds over a run by Simpson's rule on the raw numbers of its path; shares no code with
/// the crate.
fn simpson<const N: usize>(run: &Run, g: impl Fn([f64; 3]) -> [f64; N]) -> [f64; N] {
    let panels = 4000;
    let mut sum = [0.0; N];
    for i in 0..=panels {
        let s = f64::from(i) / f64::from(panels);
        let (r, speed) = match &run.path {
            Segment::Straight { a, b } => {
                let r = [0, 1, 2].map(|k| a[k] * (1.0 - s) + b[k] * s);
                (
                    r,
                    ((b.x - a.x).powi(2) + (b.y - a.y).powi(2) + (b.z - a.z).powi(2)).sqrt(),
                )
            }
            Segment::Arc {
                centre,
                radius,
                u,
                v,
                from,
                sweep,
            } => {
                let angle = from + s * sweep;
                let r = [0, 1, 2]
                    .map(|k| centre[k] + radius * (angle.cos() * u[k] + angle.sin() * v[k]));
                (r, radius * sweep.abs())
            }
        };
        let weight = if i == 0 || i == panels {
            1.0
        } else if i % 2 == 1 {
            4.0
        } else {
            2.0
        };
        for (sum, g) in sum.iter_mut().zip(g(r)) {
            *sum += run.throat * speed * weight * g / (3.0 * f64::from(panels));
        }
    }
    sum
}

fn over<const N: usize>(runs: &[Run], g: impl Fn([f64; 3]) -> [f64; N]) -> [f64; N] {
    let mut total = [0.0; N];
    for run in runs {
        for (total, part) in total.iter_mut().zip(simpson(run, &g)) {
            *total += part;
        }
    }
    total
}

#[test]
fn random_groups_match_independent_quadrature() {
    for seed in 0..200 {
        let mut chance = Lcg(seed);
        let runs = chance.group(seed % 2 == 1);
        let found = line_properties(&runs);
        let [area, x, y, z] = over(&runs, |[x, y, z]| [1.0, x, y, z]);
        assert!((found.area - area).abs() < 1e-9 * area, "seed {seed}: area");
        let c = [x / area, y / area, z / area];
        let miss = (found.centroid - V3::from(c)).norm();
        assert!(miss < 1e-9 * found.size, "seed {seed}: centroid by {miss}");
        let [xx, yy, zz, xy, yz, zx] = over(&runs, |r| {
            let [x, y, z] = [r[0] - c[0], r[1] - c[1], r[2] - c[2]];
            [x * x, y * y, z * z, x * y, y * z, z * x]
        });
        let k = Matrix3::new(yy + zz, -xy, -zx, -xy, zz + xx, -yz, -zx, -yz, xx + yy);
        let miss = (found.tensor - k).amax();
        assert!(miss < 1e-9 * k.trace(), "seed {seed}: K by {miss}");
        let sums: f64 = found
            .per_run
            .iter()
            .map(|r| r.i_xx() + r.transfer[(1, 1)])
            .sum();
        assert!(
            (sums - found.i_xx()).abs() < 1e-12 * k.trace(),
            "seed {seed}: the table adds up"
        );
    }
}

fn random_action(chance: &mut Lcg) -> Action {
    Action {
        force: chance.vector(1e4),
        moment: chance.vector(1e6),
        at: chance.vector(300.0),
    }
}

#[test]
fn random_groups_close_about_the_point_of_the_load() {
    for seed in 0..200 {
        let mut chance = Lcg(1000 + seed);
        let runs = chance.group(seed % 2 == 1);
        let found = line_properties(&runs);
        let mut action = random_action(&mut chance);
        match seed % 5 {
            0 => action.force = V3::zeros(),
            1 => action.moment = V3::zeros(),
            _ => {}
        }
        let field = Resistance::new(&runs, &found).field_of(&action).unwrap();
        let closed = closure::close(&runs, &action, found.centroid, found.size, |_, _, r| {
            field.at(r)
        });
        let (force, moment) = (closed.force_residual(), closed.moment_residual());
        assert!(
            force < 1e-9 && moment < 1e-9,
            "seed {seed}: {force:.2e}, {moment:.2e}"
        );
        // The same sums by the tests' own quadrature.
        let sums = over(&runs, |r| {
            let r = V3::from(r);
            let f = field.at(r);
            let m = (r - action.at).cross(&f);
            [f.x, f.y, f.z, m.x, m.y, m.z]
        });
        let miss = (V3::new(sums[3], sums[4], sums[5]) - action.moment).norm();
        assert!(
            miss < 1e-9 * closed.moment_scale,
            "seed {seed}: own quadrature by {miss}"
        );
    }
}

/// A second opinion must be able to fail: faults that a solver could have leave a residual.
#[test]
fn closure_finds_faults() {
    let runs = vec![
        line([0.0, 0.0], [0.0, 100.0], 5.0),
        line([0.0, 0.0], [60.0, 0.0], 3.0),
    ];
    let found = line_properties(&runs);
    let action = Action {
        force: V3::new(300.0, -4000.0, 900.0),
        moment: V3::new(1e4, -2e4, 3e4),
        at: V3::new(210.0, 60.0, 35.0),
    };
    let residuals = |found: &LineProperties, action: &Action, shift: V3| {
        let field = Resistance::new(&runs, found).field_of(action).unwrap();
        let closed = closure::close(&runs, action, found.centroid, found.size, |_, _, r| {
            field.at(r + shift)
        });
        closed.force_residual().max(closed.moment_residual())
    };
    assert!(residuals(&found, &action, V3::zeros()) < 1e-12, "no fault");
    let mut no_product = found.clone();
    no_product.tensor[(0, 1)] = 0.0;
    no_product.tensor[(1, 0)] = 0.0;
    assert!(
        residuals(&no_product, &action, V3::zeros()) > 1e-3,
        "product of inertia dropped"
    );
    let mut off_centre = found.clone();
    off_centre.centroid.x += 0.01;
    assert!(
        residuals(&off_centre, &action, V3::zeros()) > 1e-6,
        "centroid misplaced"
    );
    let mut thin = found.clone();
    thin.area *= 1.0 + 1e-6;
    assert!(residuals(&thin, &action, V3::zeros()) > 1e-8, "area");
    assert!(
        residuals(&found, &action, V3::new(0.0, 0.1, 0.0)) > 1e-6,
        "field shifted"
    );
    // An error of transfer: solved for the moment as if it acted at the centroid.
    let field = Resistance::new(&runs, &found)
        .field(action.force, action.moment)
        .unwrap();
    let closed = closure::close(&runs, &action, found.centroid, found.size, |_, _, r| {
        field.at(r)
    });
    assert!(
        closed.force_residual() < 1e-12 && closed.moment_residual() > 0.1,
        "transfer forgotten"
    );
}

/// The scalar formulas of the line method for planar groups against the tensor.
#[test]
fn planar_groups_follow_the_scalar_formulas() {
    for seed in 0..100 {
        let mut chance = Lcg(5000 + seed);
        let runs = chance.group(false);
        let found = line_properties(&runs);
        let resistance = Resistance::new(&runs, &found);
        assert_eq!(resistance.class.regime, Regime::Planar, "seed {seed}");
        let action = random_action(&mut chance);
        let (force, moment) = action.about(found.centroid);
        let field = resistance.field_of(&action).unwrap();
        let (i_xx, i_yy, i_xy, j) = (found.i_xx(), found.i_yy(), found.i_xy(), found.j());
        for point in check_points(&runs) {
            let x = point.position.x - found.centroid.x;
            let y = point.position.y - found.centroid.y;
            let determinant = i_xx * i_yy - i_xy * i_xy;
            let across =
                (moment.x * i_yy + moment.y * i_xy) * y - (moment.y * i_xx + moment.x * i_xy) * x;
            let scalar = V3::new(
                force.x / found.area - moment.z * y / j,
                force.y / found.area + moment.z * x / j,
                force.z / found.area + across / determinant,
            );
            let miss = (field.at(point.position) - scalar).norm();
            assert!(
                miss < 1e-9 * scalar.norm(),
                "seed {seed}: {miss:.2e} of {}",
                scalar.norm()
            );
        }
    }
}

#[test]
fn the_largest_resultant_is_found_on_arcs() {
    for seed in 0..60 {
        let mut chance = Lcg(7000 + seed);
        let runs = chance.group(seed % 2 == 1);
        let action = random_action(&mut chance);
        let field = Resistance::new(&runs, &line_properties(&runs))
            .field_of(&action)
            .unwrap();
        let found = search::largest_resultant(&runs, &field).unwrap();
        let at = |run: usize, p: f64| field.at(runs[run].path.point(p)).norm();
        let searched = search::governing(&runs, at).unwrap();
        let convex = search::governing_convex(&runs, at).unwrap();
        let mut dense: f64 = 0.0;
        for index in 0..runs.len() {
            for step in 0..=5000 {
                dense = dense.max(at(index, f64::from(step) / 5000.0));
            }
        }
        for (name, value) in [
            ("stationary", found.value),
            ("searched", searched.value),
            ("convex", convex.value),
        ] {
            assert!(
                value >= dense * (1.0 - 1e-9),
                "seed {seed}: {name} {value}, dense {dense}"
            );
            assert!(
                (value - found.value).abs() <= 2e-9 * found.value,
                "seed {seed}: {name} {value}"
            );
        }
        assert_eq!(found.spot.run, searched.spot.run, "seed {seed}");
    }
}

/// A demand that is not convex peaks inside a run; one with a kink is found too.
#[test]
fn peaks_inside_a_run_are_found() {
    let smooth = search::peak(32, |p| (3.0 * PI * (p - 0.2137)).cos() - p).unwrap();
    // Stationary where 3π sin(3π (0.2137 − p)) = 1.
    let expected = 0.2137 - (1.0 / (3.0 * PI)).asin() / (3.0 * PI);
    assert!((smooth.p - expected).abs() < 1e-6, "{}", smooth.p);
    let kink = search::peak(32, |p| 2.0 - (p - 0.777_777).abs()).unwrap();
    assert!((kink.value - 2.0).abs() < 2e-9, "{}", kink.value);
    let flat = search::peak(32, |_| 3.0).unwrap();
    assert!(flat.p < 1e-12, "of equals the earliest: {}", flat.p);
    let end = search::peak(32, |p| p).unwrap();
    assert!((end.p - 1.0).abs() < 1e-12, "ends are included: {}", end.p);
    assert!(
        search::peak(32, |p| 1.0 / (p - 0.5)).is_err(),
        "infinite demand"
    );
}

/// Facts of common practice.
#[test]
fn facts_of_common_practice() {
    let torque = Action {
        force: V3::zeros(),
        moment: V3::new(0.0, 0.0, 5e5),
        at: V3::zeros(),
    };
    let lone = vec![line([10.0, 20.0], [70.0, 100.0], 4.0)];
    let field = Resistance::new(&lone, &line_properties(&lone))
        .field_of(&torque)
        .unwrap();
    let ends = [0.0, 1.0].map(|p| field.at(lone[0].path.point(p)).norm());
    assert!(
        (ends[0] - ends[1]).abs() < 1e-12 * ends[0],
        "a lone run under torsion: {ends:?}"
    );

    let ring = vec![circle([5.0, -7.0], 40.0, 4.0)];
    let field = Resistance::new(&ring, &line_properties(&ring))
        .field_of(&torque)
        .unwrap();
    let expected = 5e5 / (2.0 * PI * 40.0 * 40.0 * 4.0);
    for step in 0..100 {
        let stress = field.at(ring[0].path.point(f64::from(step) / 100.0)).norm();
        assert!(
            (stress - expected).abs() < 1e-12 * expected,
            "a circle under torsion: {stress}"
        );
    }

    let (b, d) = (60.0, 100.0);
    let corners = [[0.0, 0.0], [b, 0.0], [b, d], [0.0, d]];
    let side = |i: usize| line(corners[i], corners[(i + 1) % 4], 4.0);
    let rectangle: Vec<Run> = (0..4).map(side).collect();
    let pair = vec![side(1), side(3)];
    let mut chance = Lcg(42);
    for runs in [rectangle, pair] {
        for _ in 0..50 {
            let action = random_action(&mut chance);
            let field = Resistance::new(&runs, &line_properties(&runs))
                .field_of(&action)
                .unwrap();
            let resultant = |run: usize, p: f64| field.at(runs[run].path.point(p)).norm();
            let spot = search::governing(&runs, resultant).unwrap().spot;
            assert!(
                spot.p < 1e-9 || spot.p > 1.0 - 1e-9,
                "governed at a corner: {spot:?}"
            );
        }
    }
}

/// The EN directional demand √(σ⊥² + 3(τ⊥² + τ∥²)), the worse throat plane where the toe is not
/// told: it feels tangents, normals, toes and the dihedral angle.
fn directional(run: &Run, p: f64, f: V3) -> f64 {
    local::on_throat(run, p, f)
        .iter()
        .map(|s| (s.sigma_perp.powi(2) + 3.0 * (s.tau_perp.powi(2) + s.tau_par.powi(2))).sqrt())
        .fold(0.0, f64::max)
}

fn demands(runs: &[Run], action: &Action) -> [f64; 2] {
    let field = Resistance::new(runs, &line_properties(runs))
        .field_of(action)
        .unwrap();
    let stress = |run: usize, p: f64| field.at(runs[run].path.point(p));
    let directional =
        search::governing(runs, |run, p| directional(&runs[run], p, stress(run, p))).unwrap();
    [
        search::largest_resultant(runs, &field).unwrap().value,
        directional.value,
    ]
}

fn assert_same(got: [f64; 2], expected: [f64; 2], what: &str) {
    for (got, expected) in got.iter().zip(expected) {
        // Two peaks found to 1e-9 each.
        assert!(
            (got - expected).abs() <= 2e-9 * expected,
            "{what}: {got}, not {expected}"
        );
    }
}

#[test]
fn moving_joint_and_loads_together_changes_nothing() {
    for seed in 0..40 {
        let mut chance = Lcg(9000 + seed);
        let mut runs = chance.group(seed % 2 == 1);
        for run in &mut runs {
            let legs = (chance.between(3.0, 9.0), chance.between(3.0, 9.0));
            run.rule = ThroatRule::UnequalLegs {
                on_base: legs.0,
                on_attached: legs.1,
                gap: 0.0,
                extra: 0.0,
            };
            run.throat = run.rule.throat();
        }
        let action = random_action(&mut chance);
        let expected = demands(&runs, &action);
        let (axis, size) = (chance.vector(1.0).normalize(), line_properties(&runs).size);
        let shift = chance.vector(size);
        for (what, motion) in [
            (
                "turned",
                Motion::turn(axis, chance.between(-3.0, 3.0)).then_shift(shift),
            ),
            ("mirrored", Motion::mirror(axis).then_shift(shift)),
            ("turned in its plane", Motion::turn(V3::z(), 1.0)),
            ("mirrored in x", Motion::mirror(V3::x())),
        ] {
            let moved: Vec<Run> = runs.iter().map(|run| run.moved(&motion)).collect();
            assert_same(
                demands(&moved, &action.moved(&motion)),
                expected,
                &format!("seed {seed} {what}"),
            );
        }
        let reversed: Vec<Run> = runs.iter().map(Run::reversed).collect();
        assert_same(
            demands(&reversed, &action),
            expected,
            &format!("seed {seed} reversed"),
        );
        let mut elsewhere = action;
        elsewhere.at = chance.vector(100.0);
        elsewhere.moment = action.about(elsewhere.at).1;
        assert_same(
            demands(&runs, &elsewhere),
            expected,
            &format!("seed {seed} load re-pointed"),
        );
    }
}

/// Source: geometry (status: derived). A fillet on a horizontal run along +x, toe toward −y:
/// n̂ = +y, so s = −1.
#[test]
fn throat_components_follow_the_toe() {
    let rule = ThroatRule::EqualLegs {
        leg: 6.0,
        gap: 0.0,
        angle: PI / 2.0,
        extra: 0.0,
    };
    let bead = Run {
        toe: Some(-1.0),
        rule,
        ..line([0.0, 0.0], [80.0, 0.0], 4.0)
    };
    // A pull on the attached part away from the toe, toward +y, opens the throat.
    let pulled = local::on_throat(&bead, 0.5, V3::new(3.0, 10.0, 0.0));
    assert_eq!(pulled.len(), 1, "one plane for a told toe");
    let root_half = 10.0 / 2.0_f64.sqrt();
    assert!(
        (pulled[0].sigma_perp - root_half).abs() < 1e-12,
        "tension is positive: {pulled:?}"
    );
    assert!((pulled[0].tau_perp + root_half).abs() < 1e-12, "{pulled:?}");
    assert!((pulled[0].tau_par - 3.0).abs() < 1e-12, "{pulled:?}");
    let lifted = local::on_throat(&bead, 0.5, V3::new(0.0, 0.0, 10.0))[0];
    assert!(
        (lifted.sigma_perp - root_half).abs() < 1e-12
            && (lifted.tau_perp - root_half).abs() < 1e-12,
        "{lifted:?}"
    );

    // Unequal legs: e runs from the root square to the hypotenuse between the toes.
    let rule = ThroatRule::UnequalLegs {
        on_base: 3.0,
        on_attached: 4.0,
        gap: 0.0,
        extra: 0.0,
    };
    let bead = Run {
        toe: Some(-1.0),
        rule,
        ..bead
    };
    let plane = local::throat_planes(&bead, 0.5)[0];
    let hypotenuse = V3::new(0.0, -3.0, 0.0) - V3::new(0.0, 0.0, 4.0);
    assert!(
        plane.e.dot(&hypotenuse).abs() < 1e-12,
        "square to the hypotenuse"
    );
    assert!(
        (plane.e * 2.4 - V3::new(0.0, -3.0, 0.0))
            .dot(&plane.e)
            .abs()
            < 1e-12,
        "the throat is 2.4"
    );
    assert!(
        plane.m.dot(&plane.e).abs() < 1e-12 && plane.m.z > 0.0,
        "{plane:?}"
    );

    // Skewed: the plane halves the angle between the faces.
    let angle = 60.0_f64.to_radians();
    let rule = ThroatRule::EqualLegs {
        leg: 6.0,
        gap: 0.0,
        angle,
        extra: 0.0,
    };
    let bead = Run {
        toe: None,
        rule,
        angle,
        ..bead
    };
    let planes = local::throat_planes(&bead, 0.5);
    assert_eq!(planes.len(), 2, "both sides where the toe is not told");
    for plane in planes {
        let base = V3::new(0.0, plane.side, 0.0);
        let attached = V3::new(0.0, plane.side * angle.cos(), angle.sin());
        assert!(
            (plane.e.dot(&base) - plane.e.dot(&attached)).abs() < 1e-12,
            "halves the angle"
        );
        assert!(
            (plane.e.dot(&base) - (angle / 2.0).cos()).abs() < 1e-12,
            "at half of it"
        );
    }
    // Invariants of the split: the resultant stays.
    let f = V3::new(1.0, -2.0, 3.0);
    for s in local::on_throat(&bead, 0.5, f) {
        let sum = s.sigma_perp.powi(2) + s.tau_perp.powi(2) + s.tau_par.powi(2);
        assert!((sum - f.norm_squared()).abs() < 1e-12, "{s:?}");
    }
}

#[test]
fn the_angle_to_the_run_is_sound_near_zero() {
    let bead = line([0.0, 0.0], [3.0, 4.0], 1.0);
    let along = local::local(&bead, 0.5, V3::new(3.0, 4.0, 1e-12));
    assert!((along.sin_phi - 2e-13).abs() < 1e-15, "{}", along.sin_phi);
    assert!((along.f_par - 5.0).abs() < 1e-12, "{along:?}");
    let none = local::local(&bead, 0.5, V3::zeros());
    assert!(none.sin_phi.abs() < 1e-300, "f = 0 has no angle");
    let across = local::local(&bead, 0.5, V3::new(-4e-100, 3e-100, 0.0));
    assert!(
        (across.sin_phi - 1.0).abs() < 1e-12 && across.f_n > 0.0,
        "{across:?}"
    );
}

#[test]
fn a_lone_line_bent_about_itself_is_refused() {
    let runs = vec![line([0.0, 0.0], [30.0, 40.0], 4.0)];
    let found = line_properties(&runs);
    let resistance = Resistance::new(&runs, &found);
    let u = V3::new(0.6, 0.8, 0.0);
    assert_eq!(
        resistance.class.regime,
        Regime::Collinear { u },
        "direction of the run"
    );
    let refused = resistance.field(V3::zeros(), u * 1000.0).unwrap_err();
    let Unresisted::AboutLine {
        moment, u: line, ..
    } = refused
    else {
        panic!("{refused:?}")
    };
    assert!(
        (moment - 1000.0).abs() < 1e-9 && (line - u).norm() < 1e-12,
        "{refused:?}"
    );
    assert!(refused.to_string().contains("no load path"), "{refused}");
    // What is left of it: f = F/A + (M × u) s/I_L.
    let moment = V3::new(-800.0, 600.0, 500.0);
    let force = V3::new(10.0, 20.0, 30.0);
    let field = resistance.field(force, moment).unwrap();
    let (i_l, s) = (4.0 * 50.0_f64.powi(3) / 12.0, 25.0);
    let expected = force / 200.0 + moment.cross(&u) * (s / i_l);
    assert!(
        (field.at(V3::new(30.0, 40.0, 0.0)) - expected).norm() < 1e-12,
        "{expected}"
    );
    // A force with its point off the line turns it about itself.
    let off = Action {
        force: V3::z() * 100.0,
        moment: V3::zeros(),
        at: V3::new(15.0 - 4.0, 20.0 + 3.0, 0.0),
    };
    assert!(
        matches!(resistance.field_of(&off), Err(Unresisted::AboutLine { .. })),
        "5 mm off the line"
    );
    let on = Action {
        at: V3::new(15.0, 20.0, 0.0),
        ..off
    };
    assert!(resistance.field_of(&on).is_ok(), "on the line");
}

#[test]
fn collinear_runs_are_one_line() {
    let mut chance = Lcg(3);
    for _ in 0..20 {
        let (start, u) = (chance.vector(1e3), chance.vector(1.0).normalize());
        let piece = |from: f64, to: f64| {
            run(
                Segment::Straight {
                    a: start + u * from,
                    b: start + u * to,
                },
                3.0,
            )
        };
        let runs = vec![piece(0.0, 10.0), piece(30.0, 45.0), piece(70.0, 60.0)];
        let found = line_properties(&runs);
        let resistance = Resistance::new(&runs, &found);
        let Regime::Collinear { u: along } = resistance.class.regime else {
            panic!("{:?}", resistance.class)
        };
        assert!((along - u).norm() < 1e-12, "{along}");
        let across = u.cross(&V3::x()).normalize();
        assert!(
            resistance.field(u * 5.0, across * 100.0).is_ok(),
            "bending about another axis"
        );
        assert!(
            resistance
                .field(u * 5.0, (across + u * 1e-6) * 100.0)
                .is_err(),
            "a part about the line"
        );
    }
}

#[test]
fn a_point_resists_no_moment() {
    let runs = [line([5.0, 5.0], [5.0, 6.0], 1.0)];
    let mut found = line_properties(&runs);
    found.second.fill(0.0);
    found.tensor.fill(0.0);
    found.size = 0.0;
    let resistance = Resistance::new(&runs, &found);
    assert_eq!(resistance.class.regime, Regime::Point, "K = 0");
    let moment = V3::new(0.0, 0.0, 7.0);
    let refused = resistance.field(V3::x(), moment).unwrap_err();
    assert!(matches!(refused, Unresisted::OnPoint { .. }), "{refused:?}");
    let field = resistance
        .field(V3::new(6.0, 0.0, 0.0), V3::zeros())
        .unwrap();
    assert!(
        (field.at(V3::zeros()) - V3::new(6.0, 0.0, 0.0)).norm() < 1e-12,
        "a force is resisted"
    );
    found.area = 0.0;
    assert_eq!(
        Resistance::new(&runs, &found).field(V3::x(), V3::zeros()),
        Err(Unresisted::NoArea),
        "no area"
    );
}

#[test]
fn slender_groups_warn_and_planes_are_told_from_space() {
    let pair = |apart: f64| {
        vec![
            line([0.0, 0.0], [1000.0, 0.0], 3.0),
            line([0.0, apart], [1000.0, apart], 3.0),
        ]
    };
    let class = |runs: &[Run]| Resistance::new(runs, &line_properties(runs)).class;
    // √(I_xx/J) of two lines a apart, L long: near (a/2)/(L/√12), where a = 5.77 gives 0.01.
    assert!(
        class(&pair(5.6)).is_slender && !class(&pair(6.0)).is_slender,
        "{:?}",
        class(&pair(5.6))
    );
    assert_eq!(
        class(&pair(5.6)).regime,
        Regime::Planar,
        "slender, but planar"
    );
    let tilted: Vec<Run> = pair(100.0)
        .iter()
        .map(|run| run.moved(&Motion::turn(V3::x(), 0.3)))
        .collect();
    assert_eq!(class(&tilted).regime, Regime::Space, "another plane");
    let lifted: Vec<Run> = pair(100.0)
        .iter()
        .map(|run| run.moved(&Motion::turn(V3::x(), 0.0).then_shift(V3::new(0.0, 0.0, 1e5))))
        .collect();
    assert_eq!(class(&lifted).regime, Regime::Planar, "z = const");
    let upside_down: Vec<Run> = pair(100.0)
        .into_iter()
        .map(|r| Run {
            normal: -V3::z(),
            ..r
        })
        .collect();
    assert_eq!(class(&upside_down).regime, Regime::Space, "normals −z");
}

#[test]
fn the_batch_gives_what_single_fields_give() {
    let mut chance = Lcg(77);
    let runs = chance.group(true);
    let found = line_properties(&runs);
    let resistance = Resistance::new(&runs, &found);
    let fields: Vec<_> = (0..1003)
        .map(|_| resistance.field_of(&random_action(&mut chance)).unwrap())
        .collect();
    let positions: Vec<V3> = (0..37)
        .map(|i| runs[i % runs.len()].path.point(i as f64 / 36.0))
        .collect();
    let (batch, points) = (Batch::new(&fields), Points::new(&positions, found.centroid));
    let largest = batch.largest(&points);
    assert_eq!(largest.len(), fields.len(), "one for each case");
    for (case, field) in fields.iter().enumerate() {
        let resultants: Vec<f64> = positions.iter().map(|r| field.at(*r).norm()).collect();
        let most = resultants.iter().copied().fold(0.0, f64::max);
        let Some(got) = largest.get(case) else {
            panic!("case {case}")
        };
        assert!(
            (got.resultant - most).abs() <= 1e-9 * most,
            "case {case}: {got:?}, not {most}"
        );
        let first = resultants
            .iter()
            .position(|f| *f >= most * (1.0 - 1e-12))
            .unwrap();
        assert_eq!(got.point, first, "case {case}");
        let f = batch.stress(case, &points, got.point);
        assert!(
            (f - field.at(positions[got.point])).norm() <= 1e-12 * most,
            "case {case}"
        );
    }
    for threads in [1, 2, 3, 8] {
        assert_eq!(
            batch.largest_on(&points, threads),
            largest,
            "{threads} threads, the same bits"
        );
    }
    let mut seen = 0;
    batch.each_stress(&points, |case, point, f| {
        seen += 1;
        assert_eq!(
            f,
            batch.stress(case, &points, point),
            "case {case}, point {point}"
        );
    });
    assert_eq!(seen, 1003 * 37, "every case at every point");
    // Mirrored points tie: the earlier governs.
    let ring = vec![circle([0.0, 0.0], 30.0, 3.0)];
    let found = line_properties(&ring);
    let torque = Resistance::new(&ring, &found)
        .field(V3::zeros(), V3::new(0.0, 0.0, 1e5))
        .unwrap();
    let around: Vec<V3> = (0..50)
        .map(|i| ring[0].path.point(f64::from(i) / 50.0))
        .collect();
    let tied = Batch::new(&[torque]).largest(&Points::new(&around, found.centroid));
    assert_eq!(tied[0].point, 0, "equal all round");
    assert!(
        batch.largest(&Points::new(&[], found.centroid)).is_empty(),
        "no points"
    );
}

#[test]
fn check_points_are_ends_and_extremes() {
    let runs = vec![
        line([0.0, 0.0], [10.0, 0.0], 1.0),
        circle([0.0, 0.0], 5.0, 1.0),
    ];
    let found = check_points(&runs);
    let at: Vec<[f64; 2]> = found
        .iter()
        .map(|c| [c.position.x.round(), c.position.y.round()])
        .collect();
    let expected = [
        [0.0, 0.0],
        [10.0, 0.0],
        [5.0, 0.0],
        [0.0, 5.0],
        [-5.0, 0.0],
        [0.0, -5.0],
    ];
    assert!(
        at.iter()
            .zip(expected)
            .all(|(a, b)| (a[0] - b[0]).abs() + (a[1] - b[1]).abs() < 0.5),
        "{at:?}"
    );
    assert_eq!(at.len(), 6, "a circle has its start once");
}
