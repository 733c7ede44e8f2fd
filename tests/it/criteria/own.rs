//! A user's own sheets: interactions, fixed terms, factors that depend on direction.

use super::kit::{
    assess_loads, assess_stress, figures, joint, near, one_run, sheet, sound, with_sheet,
};
use seamnote::criteria::Margin;

/// An interaction of a company manual, with the shares of two components squared.
pub(crate) const INTERACTION: &str = "
name: works standard 7
title: Interaction of shear along and across
source: {document: Works standard 7, clause: \"4.2\", status: user's own}
levels: [ultimate, limit]
at: point
requires: {ends: any, welds: [fillet]}
covers: [throat]
needs:
  f_par: {symbol: [f, par], kind: stress, from: point.f_par, says: stress along the run}
  f_n: {symbol: [f, n], kind: stress, from: point.f_n, says: stress across the run}
  F_par: {symbol: [F, par], kind: stress, from: check.F_par, says: allowable along}
  F_n: {symbol: [F, n], kind: stress, from: check.F_n, says: allowable across}
  pull:
    symbol: [p, \"0\"]
    kind: ratio
    from: check.pull
    role: fixed
    says: share of the strength taken by shrinkage, whatever the load
    least: 0
    default: {value: 0, source: \"works standard 7, 4.1\"}
steps:
  R_par: {symbol: [R, par], formula: f_par/F_par, says: share along}
  R_n: {symbol: [R, n], formula: f_n/F_n, says: share across}
  I: {symbol: I, formula: R_par^2 + R_n^2 + pull, says: interaction}
checks:
  - {name: interaction, demand: I, capacity: 1, proportional: false, says: the interaction stays under 1}
";

pub(crate) const ASK: &str =
    "clause: works standard 7, F_par: 100, F_n: 80, source: works standard 7";

/// Source: method 6: 0.5² + 0.5² has MS 0.41, not 1.00.
#[test]
fn an_interaction_has_its_margin_by_load_factor() {
    let library = with_sheet(INTERACTION);
    let told = one_run("fillet: 6", "material: S355", "ultimate", ASK);
    let found = sound(assess_stress(&told, &library, [50.0, 40.0, 0.0]));
    let (demand, capacity, margin) = figures(&found, 0);
    near("demand", demand, 0.5, 1e-14);
    near("capacity", capacity, 1.0, 1e-15);
    near("margin", margin, std::f64::consts::SQRT_2 - 1.0, 1e-12);
}

#[test]
fn fixed_terms_are_not_scaled() {
    let library = with_sheet(INTERACTION);
    let told = |pull: f64| {
        one_run(
            "fillet: 6",
            "material: S355",
            "ultimate",
            &format!("{ASK}, pull: {pull}"),
        )
    };
    // 0.28 + 2·0.25 λ² = 1 gives λ = 1.2.
    let found = sound(assess_stress(&told(0.28), &library, [50.0, 40.0, 0.0]));
    near("margin", figures(&found, 0).2, 0.2, 1e-12);
    let found = sound(assess_stress(&told(1.1), &library, [50.0, 40.0, 0.0]));
    let at = &found.asked[0].strength[0].governing;
    assert_eq!(
        at.margin,
        Margin::FixedTermsExceed,
        "over the limit by itself"
    );
    assert!(
        at.margin.value().unwrap() < 0.0 && !at.margin.holds(),
        "fails"
    );
    // Without loads, nothing reaches the limit.
    let found = sound(assess_stress(&told(0.5), &library, [0.0; 3]));
    assert_eq!(
        found.asked[0].strength[0].governing.margin,
        Margin::High,
        "no load"
    );
}

#[test]
fn a_wrong_claim_of_proportionality_is_refused() {
    let library = with_sheet(&INTERACTION.replace("proportional: false", "proportional: true"));
    let told = one_run("fillet: 6", "material: S355", "ultimate", ASK);
    let faults = assess_stress(&told, &library, [50.0, 40.0, 0.0]).unwrap_err();
    assert_eq!(
        faults.render(false),
        "\
error[not-proportional]: `interaction` says it is proportional to the loads, but 2 times the loads make its demand 2 of 0.5
  --> joints/sheets/own.yaml:27:5
   |
27 |   - {name: interaction, demand: I, capacity: 1, proportional: true, says: the interaction stays under 1}
   |     ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^
   = help: say `proportional: false`: the margin is then found as a load factor",
        "form"
    );
}

/// The worst case is that of the least load factor, not of the largest interaction: with a fixed
/// term the two can differ.
#[test]
fn the_least_load_factor_governs_not_the_largest_interaction() {
    // A demand of which one part does not grow with the loads, and which depends on the run.
    let text = INTERACTION
        .replace(
            "  R_par: {",
            "  own: {symbol: [p, t], formula: pull*t/(6 mm), says: share of shrinkage}\n  R_par: {",
        )
        .replace("R_par^2 + R_n^2 + pull", "R_par^2 + R_n^2 + own")
        .replace(
            "needs:\n",
            "needs:\n  t: {symbol: t, kind: length, from: run.leg, says: leg}\n",
        );
    let library = with_sheet(&text);
    let told = joint(&format!(
        "units: {{force: N, length: mm}}
parts: {{plate: {{material: S355, thickness: 10}}, base: {{material: S355, thickness: 10}}}}
weld:
  joins: [plate, base]
  ends: full
  runs:
    - {{name: thick, straight: [[0, 0], [100, 0]], fillet: 12}}
    - {{name: thin, straight: [[0, 50], [100, 50]], fillet: 3}}
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: ultimate, force: [1, 0, 0]}}]}}
checks: [{{{ASK}, pull: 0.3}}]
"
    ));
    let runs = super::kit::runs(&told);
    // Thick: 0.6 + 0.09 λ², λ = 2.108. Thin: 0.15 + 0.25 λ², λ = 1.844.
    let stress = |_: usize, run: usize, _: f64| {
        seamnote::weld::V3::new(if run == 0 { 30.0 } else { 50.0 }, 0.0, 0.0)
    };
    let ground = seamnote::criteria::Ground {
        joint: &told,
        runs: &runs,
        stress: &stress,
    };
    let at = sound(seamnote::criteria::assess(&ground, &library)).asked[0].strength[0]
        .governing
        .clone();
    assert_eq!(
        at.run, 1,
        "the thin run reaches its limit first though its interaction is 0.4, not 0.69"
    );
    near(
        "load factor",
        at.load_factor,
        (0.85_f64 / 0.25).sqrt(),
        1e-10,
    );
}

/// A capacity that depends on the direction: 1 + 0.5 sin^1.5 of the angle, as a user may write it.
#[test]
fn a_direction_dependent_capacity_is_searched_along_the_run() {
    let text = "
name: directional
title: Directional strength
source: {document: Works standard 8, status: user's own}
levels: [ultimate]
at: point
requires: {ends: any, welds: [fillet]}
covers: [throat]
needs:
  f: {symbol: f, kind: stress, from: point.f, says: resultant}
  s: {symbol: [s, phi], kind: ratio, from: point.sin_phi, says: sine of the angle to the run}
  F: {symbol: F, kind: stress, from: check.F, says: strength along}
steps:
  k: {symbol: k, formula: 1 + 0.5*s^1.5, says: increase}
  R: {symbol: R, formula: k*F, says: strength}
checks:
  - {name: resultant, demand: f, capacity: R, says: resultant against strength}
";
    let library = with_sheet(text);
    let told = joint(
        "units: {force: N, length: mm}
parts: {plate: {material: S355, thickness: 10}, base: {material: S355, thickness: 10}}
weld:
  joins: [plate, base]
  ends: full
  fillet: 6
  runs:
    - {name: spine, straight: [[0, 0], [0, 120]]}
    - {name: nose, arc: {centre: [40, 60], radius: 60, from: -90 deg, sweep: 180 deg}}
loads:
  at: [150, 20, 0]
  cases:
    - {case: L1, level: ultimate, force: [2 kN, -9 kN, 0]}
    - {case: L2, level: ultimate, force: [-4 kN, 3 kN, 2 kN]}
checks: [{clause: directional, F: 100}]
",
    );
    let found = sound(assess_loads(&told, &library));
    let runs = super::kit::runs(&told);
    let fields = super::kit::fields(&told, &runs);
    for outcome in &found.asked[0].strength[0].per_case {
        let mut dense: f64 = 0.0;
        for run in &runs {
            for step in 0..=20_000 {
                let p = f64::from(step) / 20_000.0;
                let f = fields[outcome.case].at(run.path.point(p));
                let local = seamnote::solve::local::local(run, p, f);
                dense =
                    dense.max(local.resultant / (100.0 * (1.0 + 0.5 * local.sin_phi.powf(1.5))));
            }
        }
        assert!(
            outcome.utilisation >= dense * (1.0 - 1e-12),
            "{} misses {dense}",
            outcome.utilisation
        );
        near("search", outcome.utilisation, dense, 1e-6);
    }
}

#[test]
fn a_sheet_of_the_same_name_is_refused() {
    let mut library = with_sheet(INTERACTION);
    let twice = library.add(sheet(INTERACTION).unwrap()).unwrap_err();
    assert_eq!(
        twice.0[0].code,
        "duplicate-sheet",
        "{}",
        twice.render(false)
    );
}

/// A concave demand that says it is convex would be looked at only where it is least.
#[test]
fn a_wrong_claim_of_convexity_is_refused() {
    let text = "
name: concave
title: Root of the stress
source: {document: Works standard 8, status: user's own}
levels: [ultimate]
at: point
convex: true
requires: {ends: any, welds: [fillet]}
covers: [throat]
needs:
  f: {symbol: f, kind: stress, from: point.f_par, says: stress along}
  F: {symbol: F, kind: stress, from: check.F, says: strength}
steps:
  I: {symbol: I, formula: sqrt(abs(f)/F), says: root of the share}
checks:
  - {name: root, demand: I, capacity: 1, proportional: false, says: under 1}
";
    let library = with_sheet(text);
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        "clause: concave, F: 100",
    );
    let laid = super::kit::runs(&told);
    let stress = |_: usize, _: usize, s: f64| seamnote::weld::V3::new(10.0 + 50.0 * s, 0.0, 0.0);
    let ground = seamnote::criteria::Ground {
        joint: &told,
        runs: &laid,
        stress: &stress,
    };
    let faults = seamnote::criteria::assess(&ground, &library).unwrap_err();
    assert_eq!(faults.0[0].code, "not-convex", "{}", faults.render(false));
    let searched = with_sheet(&text.replace("convex: true", "convex: false"));
    let at = sound(seamnote::criteria::assess(&ground, &searched)).asked[0].strength[0]
        .governing
        .clone();
    near("found at the end", at.utilisation, 0.6, 1e-10);
    // √(0.6 λ) = 1
    near("by load factor", at.load_factor, 1.0 / 0.6, 1e-10);
}

#[test]
fn factors_are_listed_with_role_and_source() {
    let told = one_run(
        "fillet: 6",
        "material: 4130",
        "limit",
        "clause: throat ultimate from limit load, F_su: 60, FS: 1.4",
    );
    let laid = super::kit::runs(&told);
    let stress = |_: usize, _: usize, _: f64| seamnote::weld::V3::x();
    let ground = seamnote::criteria::Ground {
        joint: &told,
        runs: &laid,
        stress: &stress,
    };
    let found = sound(seamnote::criteria::assess(
        &ground,
        seamnote::criteria::built_in(),
    ));
    let factors = seamnote::criteria::factors(&ground, &found.asked[0]).unwrap();
    let told: Vec<(&str, f64, bool)> = factors
        .iter()
        .map(|factor| {
            (
                factor.name.as_str(),
                factor.given.value,
                factor.mark.is_some(),
            )
        })
        .collect();
    assert_eq!(
        told,
        [("FS", 1.4, true), ("FF", 1.15, false)],
        "the first has another value than the default"
    );
    assert!(
        factors
            .iter()
            .all(|factor| factor.role == seamnote::criteria::Role::FactorOnLoad),
        "on load"
    );
}
