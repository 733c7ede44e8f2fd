//! Governing results written into the ledger as steps, and replayed.

use super::kit::{assess_stress, one_run, runs, sound, with_sheet};
use super::own::{ASK, INTERACTION};
use seamnote::criteria::{
    Assessment, Ground, Library, WorkError, Worked, built_in, work, work_limit,
};
use seamnote::formula::{Draft, Env, Ledger, Origin, Symbol, Value};
use seamnote::joint::Joint;
use seamnote::quantity::{Dim, Given, UnitSet};
use seamnote::weld::V3;

/// A ledger with the stress components of a point, as a note's author would bind them.
fn desk(f: [f64; 3], throat: &str) -> (Ledger, Env) {
    let mut ledger = Ledger::new(UnitSet::NewtonMillimetre, 1000.0, 100.0);
    let mut env = Env::default();
    let place = || Origin::Method("statics".into());
    for (name, index, value) in [
        ("point_f_par", "par", f[0]),
        ("point_f_n", "n", f[1]),
        ("point_f_z", "z", f[2]),
    ] {
        let given = Given::stated(&value.to_string(), value, Dim::STRESS);
        let value = ledger.given(
            name.replace('_', "-"),
            Symbol::of("f", &[index]),
            name.into(),
            &given,
            place(),
        );
        env.bind(name, value);
    }
    let given = Given::stated(throat, throat.parse().unwrap(), Dim::LENGTH);
    let t = ledger.given(
        "t".into(),
        Symbol::of("t", &[]),
        "throat".into(),
        &given,
        place(),
    );
    env.bind("run_throat", t);
    for (name, symbol, formula) in [
        (
            "point_f",
            Symbol::of("f", &[]),
            "sqrt(point_f_par^2 + point_f_n^2 + point_f_z^2)",
        ),
        (
            "point_sigma_perp",
            Symbol::of("sigma", &["perp"]),
            "(point_f_z - point_f_n)/sqrt(2)",
        ),
        (
            "point_tau_perp",
            Symbol::of("tau", &["perp"]),
            "(point_f_z + point_f_n)/sqrt(2)",
        ),
    ] {
        let draft = Draft {
            id: name.replace('_', "-"),
            symbol,
            says: name.into(),
            formula,
            origin: place(),
            dim: None,
        };
        let value = ledger.step(draft, &env).unwrap();
        env.bind(name, value);
    }
    (ledger, env)
}

/// Works every check of the first sheet asked for; the printed numbers must replay.
fn worked(
    joint: &Joint,
    library: &Library,
    f: [f64; 3],
    throat: &str,
) -> (Ledger, Vec<Worked>, Assessment) {
    let found = sound(assess_stress(joint, library, f));
    let laid = runs(joint);
    let stress = |_: usize, _: usize, _: f64| V3::from(f);
    let ground = Ground {
        joint,
        runs: &laid,
        stress: &stress,
    };
    let (mut ledger, env) = desk(f, throat);
    let all: Vec<Worked> = (0..found.asked[0].strength.len())
        .map(|check| {
            let at = &found.asked[0].strength[check].governing;
            work(&mut ledger, &env, &ground, &found.asked[0], check, at, "c1")
                .unwrap_or_else(|error| panic!("{error}"))
        })
        .collect();
    ledger.settle().unwrap();
    for value in ledger.values() {
        if let Some(miss) = ledger.replay_miss(value).unwrap() {
            assert!(
                miss <= 1.0 + 1e-6,
                "{}: misses by {miss} units",
                ledger.get(value).id
            );
        }
    }
    (ledger, all, found)
}

fn value(ledger: &Ledger, id: &str) -> f64 {
    ledger
        .get(ledger.find(id).unwrap_or_else(|| panic!("no {id}")))
        .value
}

fn line(ledger: &Ledger, value: Value) -> String {
    ledger.equation(value).latex
}

#[test]
fn the_directional_method_is_written_out() {
    let told = one_run(
        "throat: 4.2",
        "material: S355J2, f_u: 470",
        "ultimate",
        "clause: EN 1993-1-8 4.5.3.2",
    );
    let (ledger, all, found) = worked(&told, built_in(), [80.0, 30.0, 60.0], "4.2");
    for (check, worked) in all.iter().enumerate() {
        let at = &found.asked[0].strength[check].governing;
        let of = |value: Option<Value>| ledger.get(value.unwrap()).value;
        assert!(
            (of(worked.utilisation) - at.utilisation).abs() < 1e-12,
            "utilisation of {check}"
        );
        assert!(
            (of(worked.margin) - at.margin.value().unwrap()).abs() < 1e-12,
            "margin of {check}"
        );
        assert!(
            ledger.get(worked.margin.unwrap()).signed,
            "the sign of a margin is printed"
        );
    }
    // Both parts have one strength: the first of the tie is said to govern.
    assert!(
        (value(&ledger, "c1.f_u") - 470.0).abs() < 1e-12,
        "weaker part"
    );
    assert!(
        (value(&ledger, "c1.beta_w") - 0.9).abs() < 1e-15,
        "looked up by the grade"
    );
    assert!(
        matches!(&ledger.get(ledger.find("c1.beta_w").unwrap()).origin, Origin::Clause(text) if text == "EN 1993-1-8:2005, 4.5.3.2"),
        "cited"
    );
    assert!(
        ledger.find("part.plate.f_u").is_some() && ledger.find("part.base.f_u").is_some(),
        "inputs"
    );
    // Shared steps of the two checks stand once.
    let ids: Vec<String> = ledger
        .values()
        .map(|value| ledger.get(value).id.clone())
        .collect();
    let mut distinct = ids.clone();
    distinct.sort();
    distinct.dedup();
    assert_eq!(ids.len(), distinct.len(), "ids are distinct: {ids:?}");
    // The clause is recalled from memory: the margin says so.
    let marks = ledger.marks_behind(all[0].margin.unwrap());
    assert_eq!(
        marks.into_iter().collect::<Vec<_>>(),
        ["EN 1993-1-8:2005, 4.5.3.2: text recalled, not yet compared with the document"],
        "open items"
    );
    let eq = line(&ledger, ledger.find("c1.sigma_eq").unwrap());
    assert!(eq.contains("\\sigma_{\\perp}"), "{eq}");
}

#[test]
fn line_loads_and_defaults_are_written_out() {
    let told = one_run(
        "throat: 4.2",
        "material: S275, f_u: 410",
        "ultimate",
        "clause: EN 1993-1-8 4.5.3.3",
    );
    let (ledger, all, found) = worked(&told, built_in(), [80.0, 30.0, 60.0], "4.2");
    let f = (80.0_f64 * 80.0 + 30.0 * 30.0 + 60.0 * 60.0).sqrt();
    assert!(
        (value(&ledger, "c1.line-load") - 4.2 * f).abs() < 1e-10,
        "q = t f"
    );
    let gamma = ledger.get(ledger.find("check.1.default.gamma_M2").unwrap());
    assert!(
        matches!(&gamma.origin, Origin::Clause(text) if text.starts_with("EN 1993-1-8:2005, table 2.1")),
        "source"
    );
    let at = &found.asked[0].strength[0].governing;
    assert!(
        (ledger.get(all[0].demand).value - at.demand).abs() < 1e-10,
        "demand"
    );
}

#[test]
fn an_interaction_is_verified_at_its_load_factor() {
    let library = with_sheet(INTERACTION);
    let told = one_run(
        "throat: 4.2, leg: 6",
        "material: S355",
        "ultimate",
        &format!("{ASK}, pull: 0.28"),
    );
    let library_takes = library.find("works standard 7").unwrap();
    assert_eq!(library_takes.welds.len(), 1, "fillets by their legs only");
    let told_fillet = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        &format!("{ASK}, pull: 0.28"),
    );
    let (ledger, all, found) = worked(&told_fillet, &library, [50.0, 40.0, 0.0], "4.243");
    let at = &found.asked[0].strength[0].governing;
    assert!(
        (value(&ledger, "c1.1.at-limit.load-factor") - 1.2).abs() < 1e-9,
        "found"
    );
    assert!(
        (value(&ledger, "c1.1.at-limit.ratio") - 1.0).abs() < 1e-9,
        "verified"
    );
    assert!(
        (value(&ledger, "c1.1.at-limit.f_par") - 60.0).abs() < 1e-7,
        "scaled"
    );
    assert!(
        (value(&ledger, "c1.I") - 0.78).abs() < 1e-12,
        "at the loads themselves"
    );
    let margin = ledger.get(all[0].margin.unwrap());
    assert!(
        (margin.value - 0.2).abs() < 1e-9 && margin.signed,
        "{}",
        margin.value
    );
    assert!(
        (at.margin.value().unwrap() - margin.value).abs() < 1e-9,
        "as assessed"
    );
    assert!(
        ledger.marks_behind(all[0].margin.unwrap()).is_empty(),
        "a user's own sheet with a source"
    );
    // A stated throat is not taken by this sheet.
    assert!(
        assess_stress(&told, &library, [1.0, 0.0, 0.0]).is_err(),
        "stated throats are left out"
    );
}

#[test]
fn unsourced_values_are_marked() {
    let told = one_run(
        "fillet: 6",
        "material: 4130",
        "limit",
        "clause: throat ultimate from limit load, F_su: 60, FS: 1.4",
    );
    let (ledger, all, _) = worked(&told, built_in(), [12.0, 16.0, 0.0], "4.243");
    let marks: Vec<String> = ledger
        .marks_behind(all[0].margin.unwrap())
        .into_iter()
        .collect();
    assert_eq!(
        marks,
        [
            "FS of the check throat ultimate from limit load: no source given",
            "F_su of the check throat ultimate from limit load: no source given"
        ],
        "an allowable and a factor other than the default"
    );
}

#[test]
fn a_limit_is_written_out() {
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        "clause: AISC 360 J2.2b",
    );
    let found = sound(assess_stress(&told, built_in(), [0.0; 3]));
    let laid = runs(&told);
    let stress = |_: usize, _: usize, _: f64| V3::zeros();
    let ground = Ground {
        joint: &told,
        runs: &laid,
        stress: &stress,
    };
    let (mut ledger, mut env) = desk([0.0; 3], "4.243");
    let length = Given::stated("100", 100.0, Dim::LENGTH);
    let l = ledger.given(
        "l".into(),
        Symbol::of("L", &[]),
        "length".into(),
        &length,
        Origin::Method("x".into()),
    );
    env.bind("run_effective_length", l);
    for at in &found.asked[0].limits {
        let worked = work_limit(&mut ledger, &env, &ground, &found.asked[0], at, "c1").unwrap();
        assert!(
            (ledger.get(worked.value).value - at.value).abs() < 1e-12,
            "value"
        );
        assert!(
            (ledger.get(worked.bound).value - at.bound).abs() < 1e-12,
            "bound"
        );
    }
    // Thinner part 10 mm: 5 mm of the metric table; its row is printed.
    assert!(
        (value(&ledger, "c1.w_min") - 5.0).abs() < 1e-15,
        "table J2.4"
    );
    assert!(
        (value(&ledger, "c1.t") - 10.0).abs() < 1e-15,
        "thinner part"
    );
}

#[test]
fn values_that_are_not_the_assessments_are_refused() {
    let told = one_run(
        "throat: 4.2",
        "material: S355J2, f_u: 470",
        "ultimate",
        "clause: EN 1993-1-8 4.5.3.2",
    );
    let found = sound(assess_stress(&told, built_in(), [80.0, 30.0, 60.0]));
    let laid = runs(&told);
    let stress = |_: usize, _: usize, _: f64| V3::new(80.0, 30.0, 60.0);
    let ground = Ground {
        joint: &told,
        runs: &laid,
        stress: &stress,
    };
    // A wrong sign of the stress out of the plane.
    let (mut ledger, env) = desk([80.0, 30.0, -60.0], "4.2");
    let at = &found.asked[0].strength[0].governing;
    let error = work(&mut ledger, &env, &ground, &found.asked[0], 0, at, "c1").unwrap_err();
    assert!(
        matches!(&error, WorkError::Disagrees { name, .. } if name == "point_sigma_perp"),
        "{error}"
    );
    let (mut ledger, mut env) = desk([80.0, 30.0, 60.0], "4.2");
    env.names.remove("point_tau_perp");
    let error = work(&mut ledger, &env, &ground, &found.asked[0], 0, at, "c1").unwrap_err();
    assert_eq!(error, WorkError::Unbound("point_tau_perp".into()), "named");
}
