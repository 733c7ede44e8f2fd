//! Lays down a new project: one commented, working joint of a chosen pattern, a sheet, the schemas.
//!
//! Never writes over a file.

use super::ProjectError;
use super::schemas::{SchemaKind, published};
use crate::quantity::UnitSet;
use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};

/// What a joint of a new project is to be.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Start {
    /// The pattern's trade name, such as `two parallel lines`.
    pub pattern: String,
    /// The printing set.
    pub units: UnitSet,
}

/// Sizes and materials in one system of units.
struct Sizes {
    width: &'static str,
    depth: &'static str,
    half_width: &'static str,
    half_depth: &'static str,
    radius: &'static str,
    reach: &'static str,
    fillet: &'static str,
    thickness: [&'static str; 2],
    strengths: &'static str,
    forces: [&'static str; 3],
    material: &'static str,
    filler: &'static str,
    ends: &'static str,
    level: &'static str,
    checks: &'static str,
    allowable: &'static str,
}

const METRIC: Sizes = Sizes {
    width: "80 mm",
    depth: "120 mm",
    half_width: "40 mm",
    half_depth: "60 mm",
    radius: "40 mm",
    reach: "90 mm",
    fillet: "6 mm",
    thickness: ["10 mm", "12 mm"],
    strengths: "f_y: 355 MPa, f_u: 470 MPa, source: \"EN 10025-2:2019, table 7\"",
    forces: ["2 kN", "-6 kN", "4 kN"],
    material: "S355J2",
    filler: "{name: G 46 4 M21 3Si1, f_u: 530 MPa, source: WPS-1 rev 0}",
    ends: "less throat",
    level: "ultimate",
    checks: "  - {clause: EN 1993-1-8 4.5.3.2, gamma_M2: 1.25}
  - {clause: EN 1993-1-8 4.5.1-4.5.2}
  - {clause: EN 1993-1-1 6.2.6}",
    allowable: "160 MPa",
};

const INCH: Sizes = Sizes {
    width: "3 in",
    depth: "5 in",
    half_width: "1.5 in",
    half_depth: "2.5 in",
    radius: "1.5 in",
    reach: "4 in",
    fillet: "1/4 in",
    thickness: ["1/2 in", "5/8 in"],
    strengths: "f_y: 36 ksi, f_u: 58 ksi, source: ASTM A36/A36M-19",
    forces: ["0.5 kip", "-1.5 kip", "1 kip"],
    material: "A36",
    filler: "{name: E70XX, f_u: 70 ksi, source: WPS-1 rev 0}",
    ends: "full",
    level: "factored",
    checks: "  - {clause: AISC 360 J2.4 LRFD}
  - {clause: AISC 360 J4.2 LRFD}
  - {clause: AISC 360 J2.2b}",
    allowable: "24 ksi",
};

/// Lays down a project in `folder`; gives the files written, in order.
///
/// # Errors
///
/// [`ProjectError::File`] if one of the files exists already, in which case none is written, or
/// cannot be written.
pub fn begin(folder: &Path, start: &Start) -> Result<Vec<PathBuf>, ProjectError> {
    let files = files(start);
    let paths: Vec<PathBuf> = files.iter().map(|(name, _)| folder.join(name)).collect();
    if let Some(path) = paths.iter().find(|path| path.symlink_metadata().is_ok()) {
        return Err(fault(path, "is there already; nothing was written"));
    }
    for (path, (_, text)) in paths.iter().zip(&files) {
        write_new(path, text).map_err(|error| fault(path, &error.to_string()))?;
    }
    Ok(paths)
}

fn fault(path: &Path, what: &str) -> ProjectError {
    ProjectError::File {
        path: path.to_owned(),
        what: what.to_owned(),
    }
}

fn write_new(path: &Path, text: &str) -> std::io::Result<()> {
    if let Some(folder) = path.parent() {
        fs::create_dir_all(folder)?;
    }
    fs::File::create_new(path)?.write_all(text.as_bytes())
}

/// Names from the project's folder, and texts.
fn files(start: &Start) -> Vec<(String, String)> {
    let sizes = if start.units.is_inch() {
        &INCH
    } else {
        &METRIC
    };
    let stem = start.pattern.to_lowercase().replace(' ', "-");
    let schema = |kind: SchemaKind| {
        (
            format!("joints/schemas/{}", kind.file_name()),
            published(kind),
        )
    };
    vec![
        (format!("joints/{stem}.yaml"), joint(start, sizes)),
        ("joints/sheets/own-rule-1.yaml".to_owned(), sheet(sizes)),
        schema(SchemaKind::Joint),
        schema(SchemaKind::Project),
        schema(SchemaKind::Sheet),
    ]
}

/// The pattern's entry, where the load acts, and its components.
fn laid(pattern: &str, sizes: &Sizes) -> [String; 3] {
    let Sizes {
        width,
        depth,
        radius,
        half_width,
        half_depth,
        reach,
        ..
    } = sizes;
    let [x, y, z] = sizes.forces;
    let whole = format!("[{x}, {y}, {z}]");
    match pattern {
        // A line alone resists no moment about itself: its load acts at its middle.
        "single line" => [
            format!("depth: {depth}"),
            format!("[0, {half_depth}, 0]"),
            format!("[0, {y}, {z}]"),
        ],
        "circle" => [
            format!("radius: {radius}"),
            format!("[0, 0, {reach}]"),
            whole,
        ],
        "cruciform" => [
            format!("width: {width}, depth: {depth}"),
            format!("[0, 0, {reach}]"),
            whole,
        ],
        _ => [
            format!("width: {width}, depth: {depth}"),
            format!("[{half_width}, {half_depth}, {reach}]"),
            whole,
        ],
    }
}

fn joint(start: &Start, sizes: &Sizes) -> String {
    let [measures, at, force] = laid(&start.pattern, sizes);
    let (pattern, units) = (&start.pattern, start.units);
    let Sizes {
        fillet,
        strengths,
        material,
        filler,
        ends,
        level,
        checks,
        allowable,
        ..
    } = sizes;
    let [first, second] = sizes.thickness;
    format!(
        "\
# yaml-language-server: $schema=schemas/joint.schema.json
# A joint to begin with. Change what differs; `seamnote explain KEY` says what a key means,
# `seamnote vet` what is wrong, `seamnote write` writes the note.
note: N-1
title: Bracket to base plate
# Raise the revision with each issue, and say why under `changes`. The date is the issue's own.
revision: A
date: 2026-01-05
# The note is printed in these units; a value may carry its own.
units: {{force: {force_unit}, length: {length_unit}}}
{paper}
# The joint frame in words: right-handed, z out of the base toward the attached part.
frame:
  origin: {origin}
  x: across the bracket
  y: along the bracket
  z: out of the base, toward the bracket

# The attached part and the base. Without a source the note prints values as to be verified.
parts:
  bracket: {{material: {material}, thickness: {first}, {strengths}}}
  base: {{material: {material}, thickness: {second}, {strengths}}}
filler: {filler}

# The attached part is named first. Free ends are full, less leg, less throat, or continuous.
weld:
  joins: [bracket, base]
  ends: {ends}
  pattern: {{shape: {pattern}, {measures}, fillet: {fillet}}}
  # Runs of any other path stand in a list, beside the pattern or instead of it:
  # runs:
  #   - {{name: lower edge, straight: [[0, 0], [{width}, 0]], fillet: {fillet}, toe: -y}}

# Actions on the weld from the attached part, and where they act.
loads:
  at: {at}
  level: {level}
  cases:
    - {{case: L1, says: the case to design for, force: {force}}}
    - {{case: L2, says: one component alone, force: [0, {y}, 0], at: [{case_x}, {case_y}, 0]}}

# Clause sheets by their names; `seamnote explain NAME` shows one.
checks:
{checks}
  # A rule of one's own, from sheets/own-rule-1.yaml:
  # - {{clause: own rule 1, F: {allowable}, source: works standard 12}}

# `to be verified` makes an assumption an open item on the first page.
assumptions:
  - {{says: The loads include their factors., to be verified: true}}
",
        origin = if matches!(pattern.as_str(), "circle" | "cruciform") {
            "centre of the pattern"
        } else {
            "lower left corner of the pattern"
        },
        paper = if units.is_inch() {
            "paper: US Letter\n"
        } else {
            ""
        },
        force_unit = units.force(),
        length_unit = units.length(),
        width = sizes.width,
        y = sizes.forces[1],
        case_x = if matches!(pattern.as_str(), "single line" | "circle" | "cruciform") {
            "0"
        } else {
            sizes.half_width
        },
        case_y = if matches!(pattern.as_str(), "circle" | "cruciform") {
            "0"
        } else {
            sizes.half_depth
        },
    )
}

fn sheet(sizes: &Sizes) -> String {
    format!(
        "\
# yaml-language-server: $schema=../schemas/sheet.schema.json
# A criterion of one's own. A joint asks for it by its name; `seamnote explain own rule 1` shows
# it, `seamnote explain sheet.needs.from` and the like explain the keys.
name: own rule 1
title: Resultant on the throat against one allowable
source: {{document: Works standard 12, status: user's own}}
levels: [{level}]
# Evaluated at every point of every case; the demand peaks at ends of straight runs.
at: point
convex: true
requires: {{ends: any, welds: [fillet, stated]}}
covers: [throat]
# What the formulas use, and where it comes from.
needs:
  f: {{symbol: f, kind: stress, from: point.f, says: resultant on the throat}}
  F: {{symbol: [F, own], kind: stress, from: check.F, says: allowable of the works}}
checks:
  - {{name: throat, demand: f, capacity: F, says: resultant against the allowable}}
",
        level = sizes.level
    )
}
