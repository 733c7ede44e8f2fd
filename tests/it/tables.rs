//! Tables of the notes: what stands in them, and that it stands clear.

use crate::notes::pages;
use seamnote::criteria::built_in;
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, write_note};
use seamnote::project::Produced;
use seamnote::render::{Press, overflow};
use seamnote::source::SourceFile;
use std::sync::Arc;

/// A joint of long names: as many runs and cases as asked for.
fn long_names(runs: usize, cases: usize) -> String {
    let run = |at: usize| {
        let (y, rise) = (60 * at, at % 3 * 7);
        format!(
            "    - {{name: stiffener flange toward frame {at}, straight: [[0, {y}], [80, {}]], fillet: {}}}\n",
            y + rise,
            5 + at % 3
        )
    };
    let case = |at: usize| {
        format!(
            "    - {{case: GUST-UPWIND-{at:02}, says: gust from abeam with the boom held, \
             force: [{}, -2000, 500]}}\n",
            1000 + 10 * at
        )
    };
    let runs: String = (0..runs).map(run).collect();
    let cases: String = (1..=cases).map(case).collect();
    format!(
        "note: SN-1\ntitle: long names\nrevision: A\ndate: 2026-05-04\n\
         units: {{force: N, length: mm}}\nframe: {{origin: a corner}}\nparts:\n  \
         plate: {{material: S355J2, thickness: 10, f_y: 355, f_u: 470, F_su: 280}}\n  \
         deck: {{material: S355J2, thickness: 12, f_y: 355, f_u: 470, F_su: 280}}\n\
         filler: {{name: rod, f_u: 480, F_su: 280, F_allow: 140, tau_allow: 120}}\n\
         weld:\n  joins: [plate, deck]\n  ends: less throat\n  runs:\n{runs}\
         loads:\n  at: [50, 30, 20]\n  level: ultimate\n  cases:\n{cases}\
         checks:\n  - {{clause: EN 1993-1-8 4.5.3.2}}\n  - {{clause: base metal ultimate}}\n  - {{clause: EN 1993-1-8 4.5.1-4.5.2}}\n"
    )
}

/// The same joint stood up into space, where the tables have most columns.
fn in_space(text: &str) -> String {
    let text = text
        .replace("[[0, ", "[[0, 0, ")
        .replace("[80, ", "[80, 0, ");
    text.replace(", fillet", ", normal: [0, 1, 0], fillet")
}

/// The note of a joint's text.
fn produced(text: &str) -> Produced {
    let file = Arc::new(SourceFile {
        name: "joints/tables.yaml".to_owned(),
        text: text.to_owned(),
    });
    let told = read_joint(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let calculation = Calculation::of(&told, built_in());
    let calculation = calculation.unwrap_or_else(|faults| panic!("{}", faults.render(false)));
    let note = write_note(&calculation);
    Produced {
        note: note.unwrap_or_else(|faults| panic!("{}", faults.render(false))),
        outputs: Vec::new(),
    }
}

/// Long names of runs and cases wrap in their own columns and stand clear of their neighbours.
#[test]
fn no_cell_leaves_its_column() {
    let press = Press::new();
    for text in [
        long_names(4, 30),
        in_space(&long_names(12, 3)),
        long_names(4, 3).replace(
            "stiffener flange toward frame",
            "stiffener-flange-toward-frame",
        ),
        long_names(4, 3).replace("GUST-UPWIND-", "GUSTFROMABEAMWITHTHEBOOMHELD"),
    ] {
        let found = overflow(&pages(&press, &produced(&text)));
        assert!(found.is_empty(), "{found:#?}");
    }
}
