//! Small joints of every kind of weld have a whole note; labels of drawings stand clear.

use crate::command::{Project, joint_with};
use crate::notes::strays;

/// Labels along slanted lines that stand clear of each other are no overlap, though their upright
/// boxes meet: the check must look at the boxes as turned.
#[test]
fn slanted_labels_that_stand_clear_are_no_overlap() {
    let found = strays();
    assert!(found.is_empty(), "{found:#?}");
}

/// A joint of one or two runs with one case and one check.
fn small_joint(ends: &str, runs: &[&str], level: &str, clause: &str) -> String {
    let runs: String = runs
        .iter()
        .enumerate()
        .map(|(index, run)| format!("    - {{name: run {}, {run}}}\n", index + 1))
        .collect();
    format!(
        "note: SN-1\ntitle: small\nrevision: A\ndate: 2026-05-04\nunits: {{force: N, length: mm}}\n\
         frame: {{origin: a corner}}\nparts:\n  \
         plate: {{material: S355J2, thickness: 10, f_y: 355, f_u: 470, F_su: 280}}\n  \
         deck: {{material: S355J2, thickness: 12, f_y: 355, f_u: 470, F_su: 280}}\n\
         filler: {{name: rod, f_u: 480, F_su: 280, F_allow: 140, tau_allow: 120}}\n\
         weld:\n  joins: [plate, deck]\n  ends: {ends}\n  runs:\n{runs}\
         loads:\n  at: [50, 30, 20]\n  level: {level}\n  cases:\n    \
         - {{case: L1, force: [1000, -2000, 500]}}\n\
         checks:\n  - {{clause: {clause}}}\n"
    )
}

/// The smallest joints found whose note is refused though the assessment has its numbers.
#[test]
fn small_joints_have_a_note() {
    const LINE: &str = "straight: [[0, 80], [100, 80]], fillet: 6";
    const BOTH: &str = "straight: [[0, 0], [100, 0]], fillet: 6, sides: both";
    #[rustfmt::skip]
    let rows: [(&str, &str, &[&str], &str, &str); 13] = [
        ("skewed, toes told", "full",
         &["straight: [[0, 0], [100, 0]], fillet: 6, between: 65 deg, toe: -y",
           "straight: [[0, 80], [100, 80]], fillet: 6, toe: +y"],
         "ultimate", "EN 1993-1-8 4.5.3.2"),
        ("skewed arc", "full",
         &["arc: {centre: [0, 0], radius: 80, from: 0 deg, sweep: 180 deg}, fillet: 6, between: 91 deg"],
         "ultimate", "EN 1993-1-8 4.5.3.2"),
        ("stitched arc", "full",
         &["arc: {centre: [0, 0], radius: 80, from: 0 deg, sweep: 180 deg}, fillet: 6, stitch: {bead: 20, pitch: 50}"],
         "ultimate", "throat ultimate"),
        ("stitched circle", "full",
         &["circle: {centre: [0, 0], radius: 80}, fillet: 6, stitch: {bead: 20, pitch: 50}"],
         "ultimate", "throat ultimate"),
        ("both sides, plate at ultimate", "full", &[BOTH, LINE], "ultimate", "base metal ultimate"),
        ("both sides, EN plate", "full", &[BOTH, LINE], "ultimate", "EN 1993-1-1 6.2.6"),
        ("both sides, AISC plate", "full", &[BOTH, LINE], "factored", "AISC 360 J4.2 LRFD"),
        ("both sides, skewed", "full",
         &["straight: [[0, 0], [100, 0]], fillet: 6, sides: both, between: 65 deg, toe: +y", LINE],
         "ultimate", "throat ultimate"),
        ("one throat, two legs", "full",
         &["straight: [[0, 0], [100, 0]], throat: 5, leg: 8", "straight: [[0, 80], [100, 80]], throat: 5, leg: 7"],
         "ultimate", "fusion face ultimate"),
        ("one throat, ends less two legs", "less leg",
         &["straight: [[0, 0], [100, 0]], throat: 5, leg: 8", "straight: [[0, 80], [100, 80]], throat: 5, leg: 7"],
         "ultimate", "throat ultimate"),
        ("an arc that ends at -360 deg", "full",
         &["arc: {centre: [0, 0], radius: 70, from: -169 deg, sweep: -191 deg}, normal: [1, 0, 0], fillet: 8"],
         "service", "maximum shear"),
        ("a short arc far from a line", "full",
         &["arc: {centre: [-104, 142], radius: 89, from: -69 deg, sweep: -0.167 rad}, fillet: [7, 8], ends: less throat",
           "straight: [[-160, -109], [-25, -152]], fillet: 7"],
         "service", "throat allowable"),
        ("a short line far from a circle", "less throat",
         &["straight: [[-88, -189, 22], [-88, -136, 22]], throat: 11",
           "arc: {centre: [2, 133, 47], radius: 90, from: -178 deg, sweep: -249 deg}, fillet: 11",
           "straight: [[196, 173, -45], [190, 134, -48]], normal: [-33, 6, -12], fillet: 9"],
         "ultimate", "throat ultimate"),
    ];
    let mut refused = Vec::new();
    for (name, ends, runs, level, clause) in rows {
        let project = Project::new();
        project.put("joints/small.yaml", small_joint(ends, runs, level, clause));
        assert_eq!(
            project.run(&["vet"]).code,
            0,
            "{name}: the joint has numbers"
        );
        let ran = project.run(&["write", "--only", "trace"]);
        if ran.code != 0 {
            let first = ran.err.lines().next().unwrap_or_default();
            refused.push(format!("{name}: {first}"));
        }
    }
    assert!(refused.is_empty(), "{}", refused.join("\n"));
}

/// Three hundred runs, and ten thousand cases, are worked in full: nothing on the way grows with the
/// cube of the one or the square of the other. Both take a second or less.
#[test]
fn large_joints_have_a_note() {
    let runs: Vec<String> = (0..300)
        .map(|n| {
            let (x, y) = (40 * (n % 20), 50 * (n / 20));
            format!(
                "straight: [[{x}, {y}], [{}, {}]], fillet: 6",
                x + 25,
                y + n % 3
            )
        })
        .collect();
    let runs: Vec<&str> = runs.iter().map(String::as_str).collect();
    let clause = "EN 1993-1-8 4.5.3.2";
    let many_runs = small_joint("less throat", &runs, "ultimate", clause);
    let cases: String = (0..10_000)
        .map(|n| {
            format!(
                "    - {{case: C{n}, force: [{}, {}, {}]}}\n",
                n % 101,
                n % 53,
                n % 61
            )
        })
        .collect();
    let two = small_joint("full", &[runs[0], runs[30]], "ultimate", clause);
    let (head, tail) = two.split_once("    - {case: L1").unwrap();
    let (_, tail) = tail.split_once('\n').unwrap();
    let project = Project::new();
    project.put("joints/runs.yaml", many_runs);
    let head = head.replace("note: ", "note: C-");
    project.put("joints/cases.yaml", format!("{head}{cases}{tail}"));
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 0, "{}", ran.err);
    assert_eq!(ran.out.matches("least margin +").count(), 2, "{}", ran.out);
}

/// `vet` writes nothing, so it has no earlier note to speak of.
#[test]
fn vet_does_not_speak_of_earlier_notes() {
    let project = Project::new();
    project.put(
        "joints/mast-foot.yaml",
        joint_with("fillet: 8", "fillet: -8"),
    );
    let ran = project.run(&["vet"]);
    assert_eq!(ran.code, 1, "{ran:?}");
    assert!(
        ran.err.contains("refused: joints/mast-foot.yaml"),
        "{}",
        ran.err
    );
    assert!(!ran.err.contains("earlier note"), "{}", ran.err);
}
