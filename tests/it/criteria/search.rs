//! Where sheets are worst: ends, arcs, sides of a toe, both parts, ties.

use super::kit::{assess_loads, assess_stress, fields, joint, near, one_run, runs, sound};
use seamnote::criteria::{Margin, Turn, built_in};
use seamnote::solve::local::on_throat;

/// Convex demands on a straight run are worst at an end; on an arc anywhere.
#[test]
fn convex_sheets_agree_with_dense_sampling() {
    let told = joint(
        "units: {force: N, length: mm}
parts:
  tube: {material: S355J2, thickness: 8, f_y: 355 MPa, f_u: 470 MPa, source: x}
  flange: {material: S275, thickness: 20, f_y: 275 MPa, f_u: 430 MPa, source: x}
weld:
  joins: [tube, flange]
  fillet: 6
  runs:
    - {name: ring, circle: {centre: [0, 0], radius: 60}, toe: outside}
    - {name: ear, straight: [[60, 0], [140, 10]], toe: +y, ends: full}
loads:
  at: [30, 20, 200]
  level: ultimate
  cases:
    - {case: A, force: [3 kN, -5 kN, 2 kN], moment: [0, 1 kN m, 0.5 kN m]}
    - {case: B, force: [-8 kN, 1 kN, -9 kN]}
checks: [{clause: EN 1993-1-8 4.5.3.2}, {clause: EN 1993-1-8 4.5.3.3}]
",
    );
    let found = sound(assess_loads(&told, built_in()));
    let (runs, fields) = (runs(&told), fields(&told, &runs(&told)));
    // The weaker part is the flange: f_u 430, S275, beta_w 0.85.
    let strength = 430.0 / (0.85 * 1.25);
    for outcome in &found.asked[0].strength[0].per_case {
        let mut dense: f64 = 0.0;
        for run in &runs {
            for step in 0..=20_000 {
                let p = f64::from(step) / 20_000.0;
                let on = on_throat(run, p, fields[outcome.case].at(run.path.point(p)))[0];
                let shear = on.tau_perp * on.tau_perp + on.tau_par * on.tau_par;
                dense = dense.max((on.sigma_perp * on.sigma_perp + 3.0 * shear).sqrt() / strength);
            }
        }
        assert!(
            outcome.utilisation >= dense * (1.0 - 1e-12),
            "{} misses {dense}",
            outcome.utilisation
        );
        near("search", outcome.utilisation, dense, 1e-7);
        assert!(!outcome.side_assumed, "the toe is told");
    }
}

#[test]
fn a_toe_that_is_not_told_takes_the_worse_side_and_says_so() {
    let told = |toe: &str| {
        joint(&format!(
            "units: {{force: N, length: mm}}
parts:
  a: {{material: S355, thickness: 8, f_u: 470, source: x}}
  b: {{material: S355, thickness: 8, f_u: 470, source: x}}
weld:
  joins: [a, b]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [100, 0]], fillet: 6{toe}}}]
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: ultimate, force: [1, 0, 0]}}]}}
checks: [{{clause: EN 1993-1-8 4.5.3.2}}, {{clause: EN 1993-1-8 4.5.3.3}}]
"
        ))
    };
    let f = [10.0, 60.0, 45.0];
    let both = sound(assess_stress(&told(""), built_in(), f));
    let sides = ["+y", "-y"].map(|side| {
        sound(assess_stress(
            &told(&format!(", toe: {side}")),
            built_in(),
            f,
        ))
    });
    for check in 0..2 {
        let at = &both.asked[0].strength[check].governing;
        let of = |found: &seamnote::criteria::Assessment| {
            found.asked[0].strength[check].governing.utilisation
        };
        let worse = of(&sides[0]).max(of(&sides[1]));
        assert!(
            (of(&sides[0]) - of(&sides[1])).abs() > 0.01,
            "the sides differ"
        );
        near("worse side", at.utilisation, worse, 1e-14);
        assert!(at.side_assumed, "flagged");
    }
    assert!(
        !both.asked[1].strength[0].governing.side_assumed,
        "a resultant needs no side"
    );
}

/// Method 6: through-thickness shear sums all beads on a plate; the base takes each by itself.
#[test]
fn two_beads_add_up_on_the_attached_part() {
    let told = joint(
        "units: {force: N, length: mm}
parts:
  web: {material: S355, thickness: 8, f_y: 355, source: x}
  deck: {material: S355, thickness: 4, f_y: 355, source: x}
weld:
  joins: [web, deck]
  ends: full
  runs: [{name: seam, straight: [[0, 0], [100, 0]], throat: 5, sides: both}]
loads: {at: [0, 0, 0], cases: [{case: L1, level: ultimate, force: [1, 0, 0]}]}
checks: [{clause: EN 1993-1-1 6.2.6}]
",
    );
    let laid = runs(&told);
    assert_eq!(laid.len(), 2, "two beads");
    let stress = |_: usize, run: usize, s: f64| {
        seamnote::weld::V3::new(if run == 0 { 30.0 } else { 10.0 }, 40.0 * s, 0.0)
    };
    let ground = seamnote::criteria::Ground {
        joint: &told,
        runs: &laid,
        stress: &stress,
    };
    let found = sound(seamnote::criteria::assess(&ground, built_in()));
    let at = &found.asked[0].strength[0].governing;
    // Attached: 5·√(40² + 80²)/8 at the end s = 1. Base: 5·√(30² + 40²)/4, the greater.
    near("base alone", at.demand, 62.5, 1e-12);
    assert_eq!(at.part, Some(Turn::Base), "the thin deck governs");
    let thick = joint(&format!(
        "units: {{force: N, length: mm}}
parts:
  web: {{material: S355, thickness: 8, f_y: 355, source: x}}
  deck: {{material: S355, thickness: 40, f_y: 355, source: x}}
weld:
  joins: [web, deck]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [100, 0]], throat: 5, sides: both}}]
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: ultimate, force: [1, 0, 0]}}]}}
checks: [{{clause: {}}}]
",
        "EN 1993-1-1 6.2.6"
    ));
    let ground = seamnote::criteria::Ground {
        joint: &thick,
        runs: &laid,
        stress: &stress,
    };
    let found = sound(seamnote::criteria::assess(&ground, built_in()));
    let at = &found.asked[0].strength[0].governing;
    assert_eq!(at.part, Some(Turn::Attached), "both beads on the web");
    near(
        "vector sum",
        at.demand,
        5.0 * (40.0_f64 * 40.0 + 80.0 * 80.0).sqrt() / 8.0,
        1e-12,
    );
}

/// Fusion face: line load over the leg that works, less the gap.
#[test]
fn fusion_faces_take_the_leg_that_works() {
    let told = joint(
        "units: {force: N, length: mm}
parts:
  lug: {material: 4130, thickness: 8, F_su: 300 MPa, source: x}
  skin: {material: 4130, thickness: 4, F_su: 250 MPa, source: x}
weld:
  joins: [lug, skin]
  ends: full
  runs: [{name: seam, straight: [[0, 0], [100, 0]], fillet: [9, 6], gap: 2}]
loads: {at: [0, 0, 0], cases: [{case: L1, level: ultimate, force: [1, 0, 0]}]}
checks: [{clause: fusion face ultimate}]
",
    );
    let found = sound(assess_stress(&told, built_in(), [50.0, 0.0, 0.0]));
    let at = &found.asked[0].strength[0].governing;
    let throat = 7.0 * 4.0 / 65.0_f64.sqrt();
    // Attached: q/4 against 300; base: q/7 against 250.
    assert_eq!(at.part, Some(Turn::Attached), "the smaller face");
    near("face", at.demand, 1.15 * 50.0 * throat / 4.0, 1e-12);
    near("allowable", at.capacity, 300.0, 1e-15);
}

#[test]
fn ties_go_to_file_order_and_no_stress_is_high() {
    let told = one_run(
        "fillet: 6",
        "material: S355, f_u: 470",
        "ultimate",
        "clause: EN 1993-1-8 4.5.3.2",
    );
    let found = sound(assess_stress(&told, built_in(), [10.0, 0.0, 0.0]));
    assert!(
        found.asked[0].strength[0].governing.s.abs() < 1e-15,
        "the first of equal ends"
    );
    let none = sound(assess_stress(&told, built_in(), [0.0; 3]));
    let at = &none.asked[0].strength[0].governing;
    assert_eq!(
        (at.margin, at.margin.value()),
        (Margin::High, None),
        "no demand"
    );
    assert!(
        at.margin.reason().is_some() && at.margin.holds(),
        "says why"
    );
}

#[test]
fn cases_of_other_levels_are_listed_and_not_taken() {
    let told = joint(
        "units: {force: N, length: mm}
parts: {a: {material: S355, thickness: 8}, b: {material: S355, thickness: 8}}
weld:
  joins: [a, b]
  ends: full
  runs: [{name: seam, straight: [[0, 0], [100, 0]], fillet: 6}]
loads:
  at: [50, 0, 0]
  cases:
    - {case: one, level: limit, force: [100, 0, 0]}
    - {case: two, level: ultimate, force: [9000, 0, 0]}
    - {case: three, level: limit, force: [300, 0, 0]}
checks: [{clause: throat yield at limit load, F_sy: 100}]
",
    );
    let asked = &sound(assess_loads(&told, built_in())).asked[0];
    assert_eq!(
        (asked.taken.as_slice(), asked.not_taken.as_slice()),
        (&[0, 2][..], &[1][..]),
        "by level"
    );
    assert_eq!(
        asked.strength[0].governing.case, 2,
        "the worse of those taken"
    );
    assert_eq!(
        asked.strength[0].per_case.len(),
        2,
        "one for each case taken"
    );
}
