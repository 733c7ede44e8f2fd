//! Published tables, factors and examples through the project's own sheets.

use super::kit::{assess_loads, assess_stress, figures, joint, near, one_run, sound};
use seamnote::criteria::{LimitOutcome, Scope, Status, built_in};
use seamnote::quantity::UnitSet;

const EN_SIMPLE: &str = "clause: EN 1993-1-8 4.5.3.3";
const EN_DIRECTIONAL: &str = "clause: EN 1993-1-8 4.5.3.2";

#[test]
fn every_sheet_reads_and_says_what_it_stands_on() {
    let sheets: Vec<_> = built_in().sheets().collect();
    assert_eq!(sheets.len(), 23, "the project's own sheets");
    for sheet in sheets {
        let name = &sheet.name.value;
        assert!(
            !sheet.covers.is_empty() && !sheet.welds.is_empty(),
            "{name}"
        );
        assert_eq!(sheet.scope == Scope::Run, sheet.levels.is_empty(), "{name}");
        assert_eq!(
            sheet.mark().is_some(),
            sheet.source.status == Status::Recalled,
            "{name}"
        );
        for set in UnitSet::ALL {
            assert_eq!(
                sheet.tables(set).len(),
                sheet.tables.len(),
                "{name}: tables in {set:?}"
            );
        }
    }
}

/// Source: EN 1993-1-8:2005, table 4.1 (read) and table 2.1, gamma_M2 = 1.25 (read).
#[test]
fn correlation_factors_match_table_4_1() {
    for (grade, beta) in [
        ("S235", 0.80),
        ("S275", 0.85),
        ("S355", 0.90),
        ("S420", 1.00),
        ("S460", 1.00),
    ] {
        let told = one_run(
            "fillet: 6",
            &format!("material: {grade}J2+N, f_u: 500"),
            "ultimate",
            EN_DIRECTIONAL,
        );
        let found = sound(assess_stress(&told, built_in(), [0.0, 0.0, 10.0]));
        let (_, capacity, _) = figures(&found, 0);
        near(grade, 500.0 / (capacity * 1.25), beta, 1e-14);
    }
}

/// Source: EN 1993-1-8:2005, 4.5.3.3(3), derived from table 4.1; five digits are printed.
#[test]
fn design_shear_strengths_match() {
    #[rustfmt::skip]
    let rows = [
        ("S235", 360.0, 207.85), ("S275", 430.0, 233.66), ("S275", 410.0, 222.79), ("S355", 510.0, 261.73),
        ("S355", 490.0, 251.47), ("S355", 470.0, 241.20), ("S460", 540.0, 249.42),
    ];
    for (grade, f_u, printed) in rows {
        let told = one_run(
            "throat: 5",
            &format!("material: {grade}, f_u: {f_u}"),
            "ultimate",
            EN_SIMPLE,
        );
        let found = sound(assess_stress(&told, built_in(), [30.0, 0.0, 0.0]));
        let (demand, capacity, _) = figures(&found, 0);
        near("line load", demand, 150.0, 1e-14);
        near(grade, capacity / 5.0, printed, 5e-4);
    }
}

/// Source: Steel Buildings in Europe, Multi-storey part 5, 2.2.6, p. 5-11 (read): throat of double
/// fillets as strong as the plate in tension; two digits are printed.
#[test]
fn full_strength_throats_match() {
    for (grade, f_y, f_u, a_over_t, recomputed) in [
        ("S235", 235.0, 360.0, 0.46, 0.4616),
        ("S275", 275.0, 430.0, 0.48, 0.4805),
        ("S355", 355.0, 510.0, 0.55, 0.5537),
        ("S460", 460.0, 550.0, 0.74, 0.7392),
    ] {
        let told = one_run(
            "throat: 5",
            &format!("material: {grade}, f_u: {f_u}"),
            "ultimate",
            EN_DIRECTIONAL,
        );
        // Each of two beads carries half of f_y t, so that the needed a/t is the ratio at f = f_y/2.
        let found = sound(assess_stress(&told, built_in(), [0.0, 0.0, f_y / 2.0]));
        let at = &found.asked[0].strength[0].governing;
        near(grade, at.utilisation, a_over_t, 1e-2);
        near(grade, at.utilisation, recomputed, 2e-4);
    }
}

/// Source: derived, sigma_eq = (F/a) sqrt(3 - sin² theta); the transverse ratio is sqrt(3/2).
#[test]
fn the_directional_method_gains_on_the_simplified_one() {
    for (degrees, ratio) in [(0.0_f64, 1.0), (45.0, 1.09545), (90.0, 1.22474)] {
        let (sine, cosine) = degrees.to_radians().sin_cos();
        let f = [100.0 * cosine, 100.0 * sine, 0.0];
        let use_of = |check| {
            let told = one_run("fillet: 6", "material: S355J2, f_u: 470", "ultimate", check);
            sound(assess_stress(&told, built_in(), f)).asked[0].strength[0]
                .governing
                .utilisation
        };
        near(
            &degrees.to_string(),
            use_of(EN_SIMPLE) / use_of(EN_DIRECTIONAL),
            ratio,
            1e-4,
        );
    }
}

/// Source: EN 1993-1-8:2005, 4.5.3.2 (recalled from memory): |sigma_perp| <= 0.9 f_u/gamma_M2.
#[test]
fn the_second_directional_check_has_its_own_limit() {
    let told = one_run(
        "fillet: 6",
        "material: S355J2, f_u: 470",
        "ultimate",
        EN_DIRECTIONAL,
    );
    // Pull along +z and -y, away from the toe at +y, is all square to the throat.
    let found = sound(assess_stress(&told, built_in(), [0.0, -100.0, 100.0]));
    let (demand, capacity, _) = figures(&found, 1);
    near("sigma_perp", demand, 100.0 * 2f64.sqrt(), 1e-12);
    near("limit", capacity, 0.9 * 470.0 / 1.25, 1e-14);
    let pressed = sound(assess_stress(&told, built_in(), [0.0, 100.0, -100.0]));
    near(
        "its magnitude counts",
        figures(&pressed, 1).0,
        demand,
        1e-12,
    );
}

fn limits(
    units: &str,
    sizes: &str,
    thickness: [&str; 2],
    length: f64,
    clause: &str,
) -> Vec<LimitOutcome> {
    let told = joint(&format!(
        "units: {{{units}}}
parts:
  plate: {{material: S355, thickness: {}}}
  base: {{material: S355, thickness: {}}}
weld:
  joins: [plate, base]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [{length}, 0]], {sizes}}}]
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: service, force: [1, 0, 0]}}]}}
checks: [{{clause: {clause}}}]
",
        thickness[0], thickness[1]
    ));
    sound(assess_stress(&told, built_in(), [0.0; 3])).asked[0]
        .limits
        .clone()
}

/// Source: EN 1993-1-8:2005, 4.5.1 and 4.5.2 (read at second hand): a >= 3 mm, l_eff >= max(30 mm, 6 a).
#[test]
fn least_throat_and_length_of_en() {
    let mm = "force: N, length: mm";
    for (throat, length, holds, l_min) in [
        (3.0, 30.0, [true, true], 30.0),
        (2.99, 30.0, [false, true], 30.0),
        (4.0, 29.99, [true, false], 30.0),
        (8.0, 48.0, [true, true], 48.0),
        (8.0, 47.99, [true, false], 48.0),
    ] {
        let found = limits(
            mm,
            &format!("throat: {throat}"),
            ["10", "10"],
            length,
            "EN 1993-1-8 4.5.1-4.5.2",
        );
        assert_eq!(
            [found[0].holds, found[1].holds],
            holds,
            "throat {throat}, length {length}"
        );
        near("least throat", found[0].bound, 3.0, 1e-15);
        near("least length", found[1].bound, l_min, 1e-15);
    }
    // The clause is metric: in inches its lengths are converted exactly.
    let inch = limits(
        "force: kip, length: in",
        "throat: 3/16 in",
        ["1/2 in", "1/2 in"],
        2.0,
        "EN 1993-1-8 4.5.1-4.5.2",
    );
    near("3 mm in inches", inch[0].bound, 3.0 / 25.4, 1e-15);
}

/// Source: AISC 360-16/-22, table J2.4 (read): by the thinner part, upper bounds inclusive.
#[test]
fn least_legs_match_table_j2_4() {
    let bound = |units, thickness| {
        limits(
            units,
            "fillet: 20",
            [thickness, "50"],
            500.0,
            "AISC 360 J2.2b",
        )[0]
        .bound
    };
    for (t, w) in [
        ("0.25", 0.125),
        ("1/2 in", 0.1875),
        ("3/4", 0.25),
        ("0.751", 0.3125),
        ("0.2501", 0.1875),
        ("3", 0.3125),
    ] {
        near(t, bound("force: kip, length: in", t), w, 1e-15);
    }
    for (t, w) in [
        ("6", 3.0),
        ("13", 5.0),
        ("19", 6.0),
        ("19.1", 8.0),
        ("6.01", 5.0),
        ("13.1", 6.0),
    ] {
        near(t, bound("force: N, length: mm", t), w, 1e-15);
    }
    // The metric table is not the inch table converted.
    near(
        "in metres",
        bound("force: N, length: m", "13 mm"),
        0.005,
        1e-15,
    );
}

/// Source: AISC 360-16/-22, J2.2b(b) (read): t under 1/4 in, else t − 1/16 in (2 mm); examples
/// t = 1/4 in gives 3/16 in, t = 3/8 in gives 5/16 in.
#[test]
fn greatest_legs_along_edges() {
    let bound =
        |units, t| limits(units, "fillet: 1", [t, "50"], 500.0, "AISC 360 J2.2b edges")[0].bound;
    for (t, w) in [("1/4", 0.1875), ("3/8", 0.3125), ("3/16", 0.1875)] {
        near(t, bound("force: kip, length: in", t), w, 1e-15);
    }
    for (t, w) in [("5", 5.0), ("6", 4.0), ("10", 8.0)] {
        near(t, bound("force: N, length: mm", t), w, 1e-15);
    }
}

/// Source: AISC 360-16/-22, J2.2b(c) (read): four legs.
#[test]
fn least_length_of_aisc() {
    let holds = |length| {
        limits(
            "force: N, length: mm",
            "fillet: 6",
            ["10", "10"],
            length,
            "AISC 360 J2.2b",
        )[1]
        .holds
    };
    assert!(holds(24.0), "four legs");
    assert!(!holds(23.99), "under four legs");
}

fn us_run(level: &str, check: &str) -> seamnote::joint::Joint {
    joint(&format!(
        "units: {{force: kip, length: in}}
parts:
  plate: {{material: A572, thickness: 0.5, f_y: 50, f_u: 65, source: mill}}
  base: {{material: A572, thickness: 1, f_y: 50, f_u: 65, source: mill}}
filler: {{name: E70, f_u: 70, source: WPS}}
weld:
  joins: [plate, base]
  ends: full
  runs: [{{name: seam, straight: [[0, 0], [10, 0]], fillet: 1/16 in, toe: +y}}]
loads: {{at: [0, 0, 0], cases: [{{case: L1, level: {level}, force: [1, 0, 0]}}]}}
checks: [{{{check}}}]
"
    ))
}

/// Source: AISC 360-16/-22, table J2.5 (read): 0.60 F_EXX, phi 0.75, Omega 2.00; AISC Manual, eqs.
/// 8-2a and 8-2b (read): 1.392 and 0.928 kip/in for each sixteenth of an inch of leg, F_EXX 70 ksi.
#[test]
fn fillet_strengths_of_aisc() {
    for (level, check, stress, unit, recomputed) in [
        (
            "factored",
            "clause: AISC 360 J2.4 LRFD",
            31.5,
            1.392,
            1.39212,
        ),
        ("service", "clause: AISC 360 J2.4 ASD", 21.0, 0.928, 0.92808),
    ] {
        let found = sound(assess_stress(
            &us_run(level, check),
            built_in(),
            [1.0, 0.0, 0.0],
        ));
        let (_, capacity, _) = figures(&found, 0);
        near(check, capacity, stress, 1e-14);
        let throat = 0.0625 / 2f64.sqrt();
        near(check, capacity * throat, unit, 5e-4);
        near(check, capacity * throat, recomputed, 1e-5);
    }
}

/// Source: AISC Manual, eqs. 9-6 and 9-7 (read): t_min = 3.09 D/F_u (one side), 6.19 D/F_u (two
/// sides), D in sixteenths, F_EXX 70 ksi; AISC 360, table J2.5: base metal rupture 0.60 F_u, 0.75.
#[test]
fn base_metal_matches_the_weld_at_the_manuals_thickness() {
    for (lines, coefficient, printed) in [(1.0, 3.09359, 3.09), (2.0, 6.18718, 6.19)] {
        let found = sound(assess_stress(
            &us_run("factored", "clause: AISC 360 J4.2 LRFD"),
            built_in(),
            [1.0, 0.0, 0.0],
        ));
        // Shear rupture governs at the thinner part, t = 0.5 in.
        let (_, rupture, _) = figures(&found, 1);
        let per_thickness = rupture / 0.5;
        near(
            "0.75 times 0.60 F_u",
            per_thickness,
            0.75 * 0.60 * 65.0,
            1e-14,
        );
        let weld = lines * 1.392_122;
        near(
            "coefficient",
            weld / per_thickness * 65.0,
            coefficient,
            1e-5,
        );
        near("as printed", weld / per_thickness * 65.0, printed, 2e-3);
    }
}

/// Source: AISC 360-16/-22, J2.2b(d), eq. J2-1 (read): beta = 1.2 − 0.002 l/w, 1 up to 100, beyond
/// 300 an effective length of 180 w.
#[test]
fn end_loaded_fillets_lose_length() {
    for (l_over_w, beta) in [
        (50.0, 1.0),
        (100.0, 1.0),
        (144.0, 0.912),
        (200.0, 0.8),
        (300.0, 0.6),
        (400.0, 0.45),
    ] {
        let length = l_over_w / 16.0;
        for (level, method, full) in [("factored", "LRFD", 31.5), ("service", "ASD", 21.0)] {
            let check =
                format!("clause: AISC 360 J2.4 {method} end-loaded, end_loaded_length: {length}");
            let found = sound(assess_stress(
                &us_run(level, &check),
                built_in(),
                [1.0, 0.0, 0.0],
            ));
            near(
                &format!("l/w {l_over_w}, {method}"),
                figures(&found, 0).1,
                full * beta,
                1e-12,
            );
        }
    }
}

/// Source: practice (derived): allowable 60, limit stress 20, FS 1.5, fitting factor 1.15 give
/// MS = 60/(20·1.5·1.15) − 1 = 0.73913. The factors are the defaults of 14 CFR 25.303 (read),
/// 25.625 (read), the same in 23.2230 and 29.625(a) (read).
#[test]
fn margins_with_factors() {
    let check = "clause: throat ultimate from limit load, F_su: 60, source: handbook";
    let told = one_run("fillet: 6", "material: 4130", "limit", check);
    let found = sound(assess_stress(&told, built_in(), [12.0, 16.0, 0.0]));
    let (demand, capacity, margin) = figures(&found, 0);
    near("demand", demand, 34.5, 1e-14);
    near("capacity", capacity, 60.0, 1e-15);
    assert!((margin - 0.73913).abs() < 1e-5, "{margin}");
    let sheet = built_in().find("throat ultimate from limit load").unwrap();
    for (name, value, source) in [
        ("FS", "1.5", "14 CFR 25.303"),
        ("FF", "1.15", "14 CFR 25.625"),
    ] {
        let stated = sheet.need(name).unwrap().stated.clone().unwrap();
        assert_eq!(stated.text.metric.unwrap().value, value, "{name}");
        assert_eq!(stated.source.as_deref(), Some(source), "{name}");
        assert_eq!(stated.status, Status::Read, "{name}");
    }
    // At ultimate load the factor of safety is in the load already.
    let told = one_run(
        "fillet: 6",
        "material: 4130",
        "ultimate",
        "clause: throat ultimate, F_su: 60",
    );
    let found = sound(assess_stress(&told, built_in(), [12.0, 16.0, 0.0]));
    near("no factor twice", figures(&found, 0).0, 23.0, 1e-14);
    // Seats and belts, 14 CFR 29.625(d) (read): 1.33.
    let check =
        "clause: throat ultimate from limit load, F_su: 60, FF: 1.33, source: 14 CFR 29.625(d)";
    let told = one_run("fillet: 6", "material: 4130", "limit", check);
    near(
        "seats",
        figures(
            &sound(assess_stress(&told, built_in(), [12.0, 16.0, 0.0])),
            0,
        )
        .0,
        20.0 * 1.5 * 1.33,
        1e-14,
    );
}

/// Source: V. B. Bhandari, Design of Machine Elements, 3rd ed., example 8.12 (read at second hand):
/// throat 2.020271 mm by the maximum shear convention; recomputed 2.020305, and 3.194383 by the
/// vector resultant.
#[test]
fn bhandari_8_12_by_its_own_convention_and_by_the_resultant() {
    for (clause, throat, published) in [
        ("clause: maximum shear, tau_allow: 70", 2.020_305, 2.020_271),
        (
            "clause: throat allowable, F_allow: 70",
            3.194_383,
            3.194_383,
        ),
    ] {
        let told = joint(&format!(
            "units: {{force: N, length: mm}}
parts: {{bar: {{material: C20, thickness: 100}}, wall: {{material: C20, thickness: 50}}}}
weld:
  joins: [bar, wall]
  ends: full
  runs:
    - {{name: top, straight: [[0, 100], [50, 100]], throat: {throat}}}
    - {{name: bottom, straight: [[0, 0], [50, 0]], throat: {throat}}}
loads: {{cases: [{{case: P, level: service, force: [0, -10 kN, 0], at: [25, 50, 100]}}]}}
checks: [{{{clause}}}]
"
        ));
        let at = &sound(assess_loads(&told, built_in())).asked[0].strength[0].governing;
        near(clause, at.utilisation, 1.0, 1e-6);
        near(clause, at.utilisation, published / throat, 2e-5);
    }
}
