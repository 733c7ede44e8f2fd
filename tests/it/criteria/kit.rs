//! Joints and stresses for tests of sheets.

use seamnote::criteria::{Assessment, Ground, Library, Sheet, assess, built_in, read_sheet};
use seamnote::joint::{Joint, read_joint};
use seamnote::load::actions;
use seamnote::solve::{Field, Resistance};
use seamnote::source::{Faults, SourceFile};
use seamnote::weld::{Run, V3, lay_runs, line_properties};
use std::sync::Arc;

/// A joint from its sections, after a plain head.
pub(crate) fn joint(sections: &str) -> Joint {
    let text = format!(
        "note: T-1\ntitle: Trial\nrevision: A\ndate: 2026-05-04\nframe: {{origin: corner}}\n{sections}"
    );
    let file = Arc::new(SourceFile {
        name: "joints/trial.yaml".into(),
        text,
    });
    read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)))
}

/// A joint of one straight run along x, 100 long, with the size, check and level given; N and mm.
pub(crate) fn one_run(size: &str, material: &str, level: &str, check: &str) -> Joint {
    joint(&format!(
        "units: {{force: N, length: mm}}
parts:
  plate: {{{material}, thickness: 10, source: certificate}}
  base: {{{material}, thickness: 12, source: certificate}}
filler: {{name: E71T-1, f_u: 480 MPa, source: WPS}}
weld:
  joins: [plate, base]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [100, 0]], {size}, toe: +y}}]
loads:
  at: [0, 0, 0]
  cases: [{{case: L1, level: {level}, force: [1, 0, 0]}}]
checks: [{{{check}}}]
"
    ))
}

/// Runs of a joint.
pub(crate) fn runs(joint: &Joint) -> Vec<Run> {
    lay_runs(joint).unwrap_or_else(|faults| panic!("{:?}", faults.0))
}

/// The stress fields of a joint's cases, in file order.
pub(crate) fn fields(joint: &Joint, runs: &[Run]) -> Vec<Field> {
    let resistance = Resistance::new(runs, &line_properties(runs));
    actions(&joint.loads)
        .unwrap()
        .iter()
        .map(|action| resistance.field_of(action).unwrap())
        .collect()
}

/// Assesses a joint under its own loads.
pub(crate) fn assess_loads(joint: &Joint, library: &Library) -> Result<Assessment, Faults> {
    let runs = runs(joint);
    let fields = fields(joint, &runs);
    let stress = |case: usize, run: usize, s: f64| fields[case].at(runs[run].path.point(s));
    assess(
        &Ground {
            joint,
            runs: &runs,
            stress: &stress,
        },
        library,
    )
}

/// Assesses a joint under one stress everywhere.
pub(crate) fn assess_stress(
    joint: &Joint,
    library: &Library,
    f: [f64; 3],
) -> Result<Assessment, Faults> {
    let runs = runs(joint);
    let stress = |_: usize, _: usize, _: f64| V3::from(f);
    assess(
        &Ground {
            joint,
            runs: &runs,
            stress: &stress,
        },
        library,
    )
}

/// Shows faults where there should be none.
pub(crate) fn sound(found: Result<Assessment, Faults>) -> Assessment {
    found.unwrap_or_else(|faults| panic!("{}", faults.render(false)))
}

/// Demand, capacity and margin of a check of the first sheet asked for.
pub(crate) fn figures(found: &Assessment, check: usize) -> (f64, f64, f64) {
    let at = &found.asked[0].strength[check].governing;
    (
        at.demand,
        at.capacity,
        at.margin.value().unwrap_or(f64::INFINITY),
    )
}

/// Reads a sheet of a user.
pub(crate) fn sheet(text: &str) -> Result<Sheet, Faults> {
    read_sheet(&Arc::new(SourceFile {
        name: "joints/sheets/own.yaml".into(),
        text: text.to_owned(),
    }))
}

/// The project's sheets with one of a user beside them.
pub(crate) fn with_sheet(text: &str) -> Library {
    let mut library = built_in().clone();
    let own = sheet(text).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    library.add(own).unwrap();
    library
}

/// Asserts a value to a relative tolerance.
#[track_caller]
pub(crate) fn near(name: &str, got: f64, wanted: f64, relative: f64) {
    assert!(
        (got - wanted).abs() <= relative * wanted.abs(),
        "{name}: {got}, not {wanted}"
    );
}
