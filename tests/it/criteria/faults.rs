//! Faults of sheets and of checks: each code once, some with their whole printed form.

use super::kit::{assess_loads, assess_stress, joint, one_run, sheet, with_sheet};
use super::own::{ASK, INTERACTION};
use seamnote::criteria::built_in;

/// A sheet with a table, a lookup, a default, bounds and a condition.
const SOUND: &str = "\
name: own rule
title: A rule of the works
source: {document: Works standard 9, status: user's own}
levels: [ultimate]
at: point
convex: true
requires: {ends: any, welds: [fillet]}
covers: [throat]
needs:
  f: {symbol: f, kind: stress, from: point.f, says: resultant}
  t: {symbol: t, kind: length, from: thinner.thickness, says: thickness}
  F: {symbol: [F, a], kind: stress, from: check.F, says: allowable, least: 1 MPa, most: 900 MPa}
  n: {symbol: n, kind: ratio, from: check.n, says: factor, default: {value: 1.5, source: \"rule 3\"}}
tables:
  k: {cited: table 1, key: length, gives: ratio, rows: {up to 6 mm: 1.0, up to 1/2 in: 0.9, above: 0.8}}
steps:
  k: {symbol: k, formula: \"lookup(k, t)\", says: factor of size}
  R: {symbol: R, formula: \"k*F/n\", says: strength}
checks:
  - {name: throat, demand: f, capacity: R, says: resultant against strength}
validity:
  - {holds: \"t >= 2 mm\", says: thin sheet has rules of its own}
";

#[test]
fn a_formula_of_wrong_dimension_is_refused_at_its_place() {
    let text = SOUND.replace("k*F/n", "k*F + t");
    assert_eq!(
        sheet(&text).unwrap_err().render(false),
        "\
error[formula-dimension]: a stress and a length cannot be added
  --> joints/sheets/own.yaml:18:28
   |
18 |   R: {symbol: R, formula: \"k*F + t\", says: strength}
   |                            ^^^^^^^",
        "form"
    );
    let text = SOUND.replace("k*F/n", "sqrt(k*F)/n");
    assert_eq!(
        sheet(&text).unwrap_err().render(false),
        "\
error[formula-dimension]: the demand is a stress, but the capacity is force^(6/12) length^-1
  --> joints/sheets/own.yaml:20:5
   |
20 |   - {name: throat, demand: f, capacity: R, says: resultant against strength}
   |     ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^",
        "form"
    );
    let text = SOUND.replace("k*F/n\"", "k*Fa/n\"");
    assert_eq!(
        sheet(&text).unwrap_err().0[0].render(false),
        "\
error[unknown-name]: `Fa` is not known here; did you mean `F`?
  --> joints/sheets/own.yaml:18:30
   |
18 |   R: {symbol: R, formula: \"k*Fa/n\", says: strength}
   |                              ^^",
        "form"
    );
}

#[test]
fn an_unknown_place_gets_the_nearest() {
    let text = SOUND.replace("point.f,", "point.tau_perb,");
    let fault = &sheet(&text).unwrap_err().0[0];
    assert_eq!(fault.code, "unknown-word", "{}", fault.render(false));
    assert_eq!(
        fault.message, "`point.tau_perb` is no place that a value comes from",
        "message"
    );
    assert_eq!(fault.help[0], "did you mean `point.tau_perp`?", "nearest");
}

/// Each change of the sound sheet makes the fault, at the text given.
#[test]
fn sheets_are_refused_with_code_and_place() {
    sheet(SOUND).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    #[rustfmt::skip]
    let rows = [
        // from                               to                                   code                at
        ("\"k*F/n\"",                         "\"k*F/(n\"",                        "formula-syntax",   ""),
        ("t >= 2 mm",                         "t >= 2 MPa",                        "formula-dimension", "2 MPa"),
        ("t >= 2 mm",                         "t",                                 "formula-syntax",   ""),
        ("\"lookup(k, t)\"",                  "\"lookup(k, F)\"",                  "formula-dimension", "F"),
        ("\"lookup(k, t)\"",                  "\"lookup(q, t)\"",                  "unknown-name",     "lookup(q, t)"),
        ("  R: {symbol: R, ",                 "  n: {symbol: R, ",                 "duplicate-name",   "n"),
        ("  R: {symbol: R, ",                 "  max: {symbol: R, ",               "bad-name",         "max"),
        ("symbol: R",                         "symbol: k",                         "duplicate-symbol", "k"),
        ("symbol: R",                         "symbol: strength",                  "bad-symbol",       "strength"),
        ("formula: \"k*F/n\", says",          "formula: \"k*F/n\", kind: force, says", "formula-dimension", "\"k*F/n\""),
        ("kind: length, from: thinner",       "kind: force, from: thinner",        "wrong-kind",       "thinner.thickness"),
        ("thinner.thickness",                 "thinner.f_y",                       "unknown-word",     "thinner.f_y"),
        ("from: thinner.thickness",           "from: []",                          "empty-list",       "[]"),
        ("from: thinner.thickness",           "from: thinner.thickness, default: {value: 3 mm, source: x}", "sheet-default", ""),
        ("from: check.n",                     "from: [clause, check.n], value: 1", "sheet-default",    ""),
        ("default: {value: 1.5, ",            "default: {",                        "missing-key",      ""),
        ("least: 1 MPa",                      "least: 1",                          "unit-missing",     "1"),
        ("least: 1 MPa",                      "least: 1 mm",                       "bad-quantity",     "1 mm"),
        ("up to 1/2 in",                      "up to 5 mm",                        "table-key",        "up to 5 mm"),
        ("up to 1/2 in",                      "6 to 12 mm",                        "table-key",        "6 to 12 mm"),
        ("above: 0.8",                        "above: 0.8, up to 60 mm: 0.7",      "table-key",        "up to 60 mm"),
        ("gives: ratio",                      "gives: word",                       "wrong-kind",       ""),
        ("\"k*F/n\"",                         "\"F/n\"",                           "unused-name",      "k"),
        ("levels: [ultimate]\n",              "",                                  "sheet-scope",      "own rule"),
        ("at: point",                         "at: run",                           "sheet-scope",      ""),
        ("from: point.f,",                    "from: check.f,",                    "sheet-scope",      "own rule"),
        ("thinner.thickness",                 "part.thickness",                    "sheet-parts",      "t"),
        ("convex: true",                      "for each: part",                    "sheet-parts",      "own rule"),
        ("demand: f, capacity: R",            "demand: R, capacity: f",            "not-convex",       ""),
        ("capacity: R",                       "capacity: -1",                      "out-of-range",     "-1"),
        ("demand: f",                         "demand: q",                         "unknown-word",     "q"),
        ("welds: [fillet]",                   "welds: [filet]",                    "unknown-word",     "filet"),
    ];
    for (from, to, code, at) in rows {
        let text = SOUND.replacen(from, to, 1);
        assert_ne!(text, SOUND, "`{from}` stands in the sheet");
        let faults = sheet(&text).expect_err(to);
        let found = faults.0.iter().find(|fault| fault.code == code);
        let Some(fault) = found else {
            panic!("{to}: no {code} in\n{}", faults.render(false))
        };
        let place = &fault.place.file.text[fault.place.start..fault.place.end];
        assert!(
            at.is_empty() || place == at,
            "{to}: at `{place}`\n{}",
            fault.render(false)
        );
    }
}

fn refused(material: &str, size: &str, level: &str, check: &str, code: &str) -> String {
    let told = one_run(size, material, level, check);
    let faults = assess_stress(&told, &with_sheet(SOUND), [30.0, 10.0, 0.0]).expect_err(check);
    let found = faults.0.iter().find(|fault| fault.code == code);
    let Some(fault) = found else {
        panic!("{check}: no {code} in\n{}", faults.render(false))
    };
    fault.render(false)
}

#[test]
fn checks_are_refused_with_code_and_advice() {
    let sheet = "clause: own rule";
    let plain = "material: S355";
    #[rustfmt::skip]
    let rows = [
        // material, size, level, check                                                   code               told
        (plain, "fillet: 6", "ultimate", "clause: own rul, F: 100".to_owned(),            "unknown-sheet",   "did you mean `own rule`?"),
        (plain, "fillet: 6", "ultimate", format!("{sheet}, F: 100, nn: 2"),               "unknown-value",   "it takes `F`, `n`"),
        (plain, "fillet: 6", "ultimate", sheet.to_owned(),                                "missing-value",   "add `F: ...` to the check: allowable"),
        (plain, "fillet: 6", "ultimate", format!("{sheet}, F: 100 mm"),                   "wrong-kind",      "a stress is needed here"),
        (plain, "fillet: 6", "ultimate", format!("{sheet}, F: lots"),                     "bad-quantity",    "`own rule` takes a stress: allowable"),
        (plain, "fillet: 6", "ultimate", format!("{sheet}, F: 0.5"),                      "out-of-range",    "`F` is 0.5, but must be at least 1 MPa"),
        (plain, "fillet: 6", "ultimate", format!("{sheet}, F: 1 GPa"),                    "out-of-range",    "`F` is 1 GPa, but must be at most 900 MPa"),
        (plain, "fillet: 6", "service",  format!("{sheet}, F: 100"),                      "no-case-of-level", "takes cases of level ultimate, of which there is none"),
        (plain, "partial: 6", "ultimate", format!("{sheet}, F: 100"),                     "no-run-taken",    "the first run is a partial penetration weld"),
        (plain, "fillet: 6", "ultimate", "clause: EN 1993-1-8 4.5.3.2".to_owned(),        "missing-value",   "`plate` gives no `f_u`"),
        ("material: S690, f_u: 770", "fillet: 6", "ultimate", "clause: EN 1993-1-8 4.5.3.2".to_owned(), "no-value", "`S690` is outside the table `beta_w`"),
        (plain, "throat: 4", "service", "clause: AISC 360 J2.2b".to_owned(),              "missing-leg",     "run `seam` tells no leg"),
        ("material: S355, f_u: 470", "fillet: 6, between: 50 deg", "ultimate", "clause: EN 1993-1-8 4.5.3.3".to_owned(), "not-valid", "it asks that psi >= 60 deg"),
        ("material: S355, f_u: 470", "fillet: 6, ends: less leg", "ultimate", "clause: EN 1993-1-8 4.5.3.3".to_owned(), "ends-mismatch", "run `seam` ends `less leg`, but `EN 1993-1-8 4.5.3.3` requires `less throat` or `full`"),
        (plain, "fillet: 6, ends: less throat", "factored", "clause: AISC 360 J2.4 LRFD".to_owned(), "ends-mismatch", "requires `full`"),
    ];
    for (material, size, level, check, code, told) in rows {
        let shown = refused(material, size, level, &check, code);
        assert!(shown.contains(told), "{check}:\n{shown}");
    }
}

#[test]
fn a_grade_can_be_told_with_the_check() {
    let check = "clause: EN 1993-1-8 4.5.3.2, grade: S460";
    let told = one_run("fillet: 6", "material: S690, f_u: 540", "ultimate", check);
    let found = assess_stress(&told, built_in(), [30.0, 10.0, 0.0]).unwrap();
    let capacity = found.asked[0].strength[0].governing.capacity;
    assert!(
        (capacity - 540.0 / 1.25).abs() < 1e-9,
        "beta_w of S460 is 1, {capacity}"
    );
}

#[test]
fn a_yield_check_without_a_limit_case_is_refused_in_full_form() {
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        "clause: throat yield at limit load, F_sy: 100",
    );
    assert_eq!(
        assess_stress(&told, built_in(), [1.0, 0.0, 0.0]).unwrap_err().render(false),
        "\
error[no-case-of-level]: `throat yield at limit load` takes cases of level limit, of which there is none
  --> joints/trial.yaml:18:19
   |
18 | checks: [{clause: throat yield at limit load, F_sy: 100}]
   |                   ^^^^^^^^^^^^^^^^^^^^^^^^^^
   = help: the cases are of level ultimate",
        "form"
    );
}

#[test]
fn a_run_that_no_sheet_takes_is_refused() {
    let told = |checks: &str| {
        joint(&format!(
            "units: {{force: N, length: mm}}
parts:
  a: {{material: S355, thickness: 8, f_y: 355, f_u: 470, source: x}}
  b: {{material: S355, thickness: 8, f_y: 355, f_u: 470, source: x}}
weld:
  joins: [a, b]
  ends: full
  runs:
    - {{name: one, straight: [[0, 0], [100, 0]], fillet: 6}}
    - {{name: two, straight: [[0, 50], [100, 50]], complete: butt}}
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: ultimate, force: [1, 0, 0]}}]}}
checks: [{{clause: EN 1993-1-8 4.5.3.2}}{checks}]
"
        ))
    };
    let faults = assess_loads(&told(""), built_in()).unwrap_err();
    assert_eq!(
        faults.0[0].code,
        "run-not-checked",
        "{}",
        faults.render(false)
    );
    let both = assess_loads(&told(", {clause: EN 1993-1-8 4.7.1}"), built_in()).unwrap();
    assert_eq!(both.asked[0].left_out, [1], "the groove is left out");
    assert_eq!(both.asked[1].left_out, [0], "the fillet is left out");
}

#[test]
fn a_capacity_that_is_not_above_zero_is_refused() {
    let library = with_sheet(&SOUND.replace("k*F/n", "k*F/n - 100 MPa"));
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        "clause: own rule, F: 100",
    );
    let faults = assess_stress(&told, &library, [1.0, 0.0, 0.0]).unwrap_err();
    assert_eq!(
        faults.0[0].code,
        "capacity-not-positive",
        "{}",
        faults.render(false)
    );
}

#[test]
fn the_table_of_a_system_that_a_clause_lacks_is_not_converted() {
    let text = SOUND.replace(
        "rows: {up to 6 mm: 1.0, up to 1/2 in: 0.9, above: 0.8}",
        "inch: {up to 1 in: 1.0, above: 0.9}",
    );
    let library = with_sheet(&text);
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        "clause: own rule, F: 100",
    );
    let faults = assess_stress(&told, &library, [1.0, 0.0, 0.0]).unwrap_err();
    assert_eq!(faults.0[0].code, "no-variant", "{}", faults.render(false));
}

#[test]
fn faults_of_several_checks_come_together() {
    let told = one_run(
        "fillet: 6",
        "material: S355",
        "ultimate",
        &format!("{ASK}}}, {{clause: nothing}}, {{clause: EN 1993-1-8 4.5.3.2"),
    );
    let faults = assess_stress(&told, &with_sheet(INTERACTION), [1.0, 0.0, 0.0]).unwrap_err();
    let codes: Vec<&str> = faults.0.iter().map(|fault| fault.code).collect();
    assert_eq!(
        codes,
        ["unknown-sheet", "missing-value"],
        "{}",
        faults.render(false)
    );
}
