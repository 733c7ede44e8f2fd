//! Drawings of the joint: nothing overlaps, the room holds, typst accepts the source.

use std::collections::BTreeMap;
use std::f64::consts::{PI, TAU};
use std::path::PathBuf;

use nalgebra::Vector3;
use std::sync::{Arc, OnceLock};

use seamnote::criteria::built_in;
use seamnote::figure::{
    Axis, CheckPoint, Component, Dimension, Drawing, Fill, Governing, Ink, Item, Label, Load,
    MarkKind, PT, Piece, Rect, RunLine, Scene, SerifFaces, draw, draw_picture, standalone_source,
    typst_source,
};
use seamnote::joint::read_joint;
use seamnote::note::{Calculation, Picture, write_note};
use seamnote::source::{Faults, SourceFile};
use seamnote::weld::{Segment, V3};
use typst::diag::{FileError, FileResult};
use typst::foundations::{Bytes, Datetime, Duration};
use typst::layout::FrameItem;
use typst::syntax::{FileId, RootedPath, Source, VirtualPath, VirtualRoot};
use typst::text::{Font, FontBook};
use typst::utils::LazyHash;
use typst::{Library, LibraryExt, World};
use typst_kit::fonts::FontStore;
use typst_layout::PagedDocument;

/// A world of one source and the embedded fonts.
struct Sheet {
    library: LazyHash<Library>,
    fonts: FontStore,
    source: Source,
}

impl Sheet {
    fn new(text: String) -> Self {
        let path = RootedPath::new(
            VirtualRoot::Project,
            VirtualPath::new("figure.typ").unwrap(),
        );
        let mut fonts = FontStore::new();
        fonts.extend(typst_kit::fonts::embedded());
        Self {
            library: LazyHash::new(Library::default()),
            fonts,
            source: Source::new(path.intern(), text),
        }
    }

    /// One page, without a warning.
    fn compile(&self) -> PagedDocument {
        let done = typst::compile::<PagedDocument>(self);
        assert!(done.warnings.is_empty(), "warnings: {:?}", done.warnings);
        let document = done
            .output
            .unwrap_or_else(|faults| panic!("typst refuses: {faults:?}"));
        assert_eq!(document.pages().len(), 1, "the drawing takes one page");
        document
    }
}

impl World for Sheet {
    fn library(&self) -> &LazyHash<Library> {
        &self.library
    }
    fn book(&self) -> &LazyHash<FontBook> {
        self.fonts.book()
    }
    fn main(&self) -> FileId {
        self.source.id()
    }
    fn source(&self, id: FileId) -> FileResult<Source> {
        if id == self.source.id() {
            Ok(self.source.clone())
        } else {
            Err(FileError::AccessDenied)
        }
    }
    fn file(&self, _: FileId) -> FileResult<Bytes> {
        Err(FileError::AccessDenied)
    }
    fn font(&self, index: usize) -> Option<Font> {
        self.fonts.font(index)
    }
    fn today(&self, _: Option<Duration>) -> Option<Datetime> {
        None
    }
}

fn v(x: f64, y: f64, z: f64) -> V3 {
    Vector3::new(x, y, z)
}

fn straight(label: &str, throat: f64, a: V3, b: V3) -> RunLine {
    RunLine {
        path: Segment::Straight { a, b },
        counted: None,
        throat,
        label: label.into(),
        number: String::new(),
    }
}

fn points(at: &[V3]) -> Vec<CheckPoint> {
    at.iter()
        .enumerate()
        .map(|(i, at)| CheckPoint {
            at: *at,
            label: (i + 1).to_string(),
        })
        .collect()
}

fn part(axis: Axis, value: f64, text: &str) -> Component {
    Component {
        axis,
        value,
        text: text.into(),
    }
}

fn load(at: V3, force: Vec<Component>, moment: Vec<Component>) -> Load {
    Load {
        at,
        label: "P".into(),
        aside: String::new(),
        force,
        moment,
        distance: String::new(),
    }
}

fn dimension(from: V3, to: V3, axis: Axis, text: &str) -> Dimension {
    Dimension {
        from,
        to,
        alike: Vec::new(),
        axis,
        text: text.into(),
        optional: false,
    }
}

fn words(x: &str, y: &str, z: &str) -> [String; 3] {
    [x.into(), y.into(), z.into()]
}

/// The channel bracket: three runs, a load beside them.
fn channel() -> Scene {
    let at = [
        v(80.0, 0.0, 0.0),
        v(0.0, 0.0, 0.0),
        v(0.0, 120.0, 0.0),
        v(80.0, 120.0, 0.0),
    ];
    let p = v(210.0, 60.0, 0.0);
    Scene {
        runs: vec![
            straight("lower edge, leg 6", 4.243, at[0], at[1]),
            straight("back edge, leg 8", 5.657, at[1], at[2]),
            straight("upper edge, leg 6", 4.243, at[2], at[3]),
        ],
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("forward", "up", "outboard"),
        centroid: Some(v(16.2, 60.0, 0.0)),
        loads: vec![load(
            p,
            vec![part(Axis::X, 0.0, "0"), part(Axis::Y, -4200.0, "−4200 N")],
            vec![],
        )],
        governing: Some(Governing {
            at: at[3],
            label: "governs, L07".into(),
        }),
        dimensions: vec![
            dimension(at[1], at[0], Axis::X, "80"),
            dimension(at[1], at[2], Axis::Y, "120"),
            dimension(at[1], p, Axis::X, "210"),
        ],
        outlines: vec![],
        units: "mm".into(),
        planar: true,
        faint: false,
        vectors: None,
    }
}

/// A tube on a flange: one circle, bending, torsion and axial force.
fn tube() -> Scene {
    let circle = Segment::Arc {
        centre: V3::zeros(),
        radius: 57.0,
        u: V3::x(),
        v: V3::y(),
        from: 0.0,
        sweep: TAU,
    };
    let at = [
        v(57.0, 0.0, 0.0),
        v(0.0, 57.0, 0.0),
        v(-57.0, 0.0, 0.0),
        v(0.0, -57.0, 0.0),
    ];
    let mut p = load(
        V3::zeros(),
        vec![
            part(Axis::X, 2500.0, "2500 N"),
            part(Axis::Z, -9000.0, "−9000 N"),
        ],
        vec![
            part(Axis::X, 1.2e6, "1.2 × 10⁶ N mm"),
            part(Axis::Z, 8.0e5, "8.0 × 10⁵ N mm"),
        ],
    );
    p.aside = "z = 400".into();
    p.at = v(0.0, 0.0, 400.0);
    Scene {
        runs: vec![RunLine {
            path: circle,
            counted: None,
            throat: 3.5,
            label: "tube 114.3, leg 5 all round".into(),
            number: "1".into(),
        }],
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("aft", "to port", "up"),
        centroid: Some(V3::zeros()),
        loads: vec![p],
        governing: Some(Governing {
            at: at[1],
            label: "governs, case 12".into(),
        }),
        dimensions: vec![
            dimension(at[2], at[0], Axis::X, "114"),
            dimension(at[3], at[1], Axis::Y, "114"),
        ],
        units: "mm".into(),
        planar: true,
        faint: false,
        vectors: None,
        ..Scene::default()
    }
}

/// A lug in inches: two parallel lines, a load in three components off the plane.
fn lug() -> Scene {
    let at = [
        v(0.0, 0.0, 0.0),
        v(6.0, 0.0, 0.0),
        v(0.0, 0.75, 0.0),
        v(6.0, 0.75, 0.0),
    ];
    let p = Load {
        aside: "z = 2.5".into(),
        ..load(
            v(3.0, 0.375, 2.5),
            vec![
                part(Axis::X, 3200.0, "3200 lbf"),
                part(Axis::Y, 450.0, "450 lbf"),
                part(Axis::Z, 5100.0, "5100 lbf"),
            ],
            vec![],
        )
    };
    Scene {
        runs: vec![
            straight("near side, leg 5/16", 0.221, at[0], at[1]),
            straight("far side, leg 5/16", 0.221, at[2], at[3]),
        ],
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("along the deck", "athwart", "up"),
        centroid: Some(v(3.0, 0.375, 0.0)),
        loads: vec![p],
        governing: Some(Governing {
            at: at[3],
            label: "governs, LC-4".into(),
        }),
        dimensions: vec![
            dimension(at[0], at[1], Axis::X, "6"),
            dimension(at[0], at[2], Axis::Y, "0.75"),
        ],
        units: "in".into(),
        planar: true,
        faint: false,
        vectors: None,
        ..Scene::default()
    }
}

/// Four runs on two planes.
fn space() -> Scene {
    let at = [
        v(0.0, 0.0, 0.0),
        v(150.0, 0.0, 0.0),
        v(0.0, 0.0, 100.0),
        v(150.0, 0.0, 100.0),
        v(0.0, 80.0, 0.0),
        v(0.0, 80.0, 100.0),
    ];
    let p = v(220.0, 40.0, 50.0);
    Scene {
        runs: vec![
            straight("foot, lower, leg 6", 4.243, at[0], at[1]),
            straight("foot, upper, leg 6", 4.243, at[2], at[3]),
            straight("wall, near, leg 5", 3.536, at[0], at[4]),
            straight("wall, far, leg 5", 3.536, at[2], at[5]),
        ],
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("forward", "up", "outboard"),
        centroid: Some(v(51.0, 12.4, 50.0)),
        loads: vec![load(
            p,
            vec![
                part(Axis::X, 1800.0, "1800 N"),
                part(Axis::Y, -6500.0, "−6500 N"),
                part(Axis::Z, 900.0, "900 N"),
            ],
            vec![
                part(Axis::Y, 2.4e5, "2.4 × 10⁵ N mm"),
                part(Axis::Z, -1.1e5, "−1.1 × 10⁵ N mm"),
            ],
        )],
        governing: Some(Governing {
            at: at[5],
            label: "governs, L03".into(),
        }),
        dimensions: vec![
            dimension(at[0], at[1], Axis::X, "150"),
            dimension(at[0], at[4], Axis::Y, "80"),
            dimension(at[0], at[2], Axis::Z, "100"),
        ],
        units: "mm".into(),
        planar: false,
        faint: false,
        vectors: None,
        ..Scene::default()
    }
}

/// The channel with its load twenty times its size away.
fn far() -> Scene {
    let p = v(2400.0, 60.0, 0.0);
    let mut scene = channel();
    scene.loads[0].at = p;
    scene.loads[0].distance = "2384 from C".into();
    scene.loads[0].force.push(part(Axis::X, 600.0, "600 N"));
    scene.loads[0]
        .moment
        .push(part(Axis::Z, -3.0e5, "−3.0 × 10⁵ N mm"));
    scene.dimensions[2] = dimension(V3::zeros(), p, Axis::X, "2400");
    scene
}

/// Two rows of stitches: many short beads, more names than places.
fn stitched() -> Scene {
    let mut scene = Scene {
        axes: words("along", "across", "up"),
        centroid: Some(v(290.0, 30.0, 0.0)),
        origin: Some(V3::zeros()),
        units: "mm".into(),
        planar: true,
        faint: false,
        vectors: None,
        ..Scene::default()
    };
    for row in 0..2 {
        for bead in 0..12 {
            let (x, y) = (f64::from(bead) * 50.0, f64::from(row) * 60.0);
            let (a, b) = (v(x, y, 0.0), v(x + 30.0, y, 0.0));
            let name = format!("row {} bead {}, leg 4", row + 1, bead + 1);
            let number = (scene.runs.len() + 1).to_string();
            scene.runs.push(RunLine {
                number,
                ..straight(&name, 2.828, a, b)
            });
            for at in [a, b] {
                let label = (scene.points.len() + 1).to_string();
                scene.points.push(CheckPoint { at, label });
            }
        }
    }
    scene.governing = Some(Governing {
        at: v(580.0, 60.0, 0.0),
        label: "governs, S2".into(),
    });
    scene.loads = vec![load(
        v(290.0, 200.0, 0.0),
        vec![part(Axis::X, 12000.0, "12 000 N")],
        vec![],
    )];
    scene.dimensions = vec![
        dimension(v(0.0, 0.0, 0.0), v(580.0, 0.0, 0.0), Axis::X, "580"),
        dimension(v(0.0, 0.0, 0.0), v(0.0, 60.0, 0.0), Axis::Y, "60"),
    ];
    scene
}

/// A ring sector with an outline, a slanted run and a load through the centroid.
fn curved() -> Scene {
    let arc = Segment::Arc {
        centre: v(80.0, 60.0, 0.0),
        radius: 60.0,
        u: V3::x(),
        v: V3::y(),
        from: -PI / 2.0,
        sweep: PI,
    };
    let at = [v(80.0, 0.0, 0.0), v(80.0, 120.0, 0.0), v(0.0, 40.0, 0.0)];
    Scene {
        runs: vec![
            RunLine {
                path: arc,
                counted: None,
                throat: 5.0,
                label: "nose, throat 5".into(),
                number: "1".into(),
            },
            straight("raked edge, throat 8", 8.0, at[1], at[2]),
        ],
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("", "", ""),
        centroid: Some(v(86.0, 66.0, 0.0)),
        loads: vec![load(
            v(86.0, 66.0, 0.0),
            vec![part(Axis::X, -3.2, "−3.2 kN"), part(Axis::Y, 1.5, "1.5 kN")],
            vec![part(Axis::Z, 250.0, "250 kN mm")],
        )],
        governing: Some(Governing {
            at: v(140.0, 60.0, 0.0),
            label: "governs, B".into(),
        }),
        dimensions: vec![dimension(at[2], v(140.0, 60.0, 0.0), Axis::X, "140")],
        outlines: vec![vec![at[0], v(0.0, 0.0, 0.0), at[2]]],
        units: "mm".into(),
        planar: true,
        faint: false,
        vectors: None,
    }
}

/// A small generator (Knuth, TAOCP 2, 3rd ed., 3.3.4, table 1, line 26: the MMIX multiplier).
struct Dice(u64);

impl Dice {
    fn roll(&mut self, low: f64, high: f64) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        let high_bits = u32::try_from(self.0 >> 32).unwrap();
        low + (high - low) * f64::from(high_bits) / f64::from(u32::MAX)
    }
}

/// A random scene: two to seven runs, one load with all six components, some far away.
fn random(seed: u64) -> Scene {
    let mut dice = Dice(seed * 7919 + 13);
    let planar = seed % 3 != 2;
    let size = [20.0, 150.0, 2000.0][usize::try_from(seed % 3).unwrap()];
    let mut place = |reach: f64| {
        let z = if planar { 0.0 } else { dice.roll(0.0, reach) };
        v(dice.roll(0.0, reach), dice.roll(0.0, reach * 0.7), z)
    };
    let mut at = Vec::new();
    let mut runs = Vec::new();
    for i in 0..2 + seed % 6 {
        let (a, b) = (place(size), place(size));
        let label = format!("run {}, leg {}", i + 1, 4 + i);
        runs.push(RunLine {
            number: (i + 1).to_string(),
            ..straight(&label, size * 0.03, a, b)
        });
        at.extend([a, b]);
    }
    let p = place(size * if seed.is_multiple_of(4) { 12.0 } else { 1.4 });
    let all = |unit: &str| {
        Axis::ALL
            .map(|a| part(a, if a == Axis::Y { -1.0 } else { 1.0 }, unit))
            .to_vec()
    };
    Scene {
        runs,
        points: points(&at),
        origin: Some(V3::zeros()),
        axes: words("forward", "up", "outboard"),
        centroid: Some(at.iter().sum::<V3>() / f64::from(u32::try_from(at.len()).unwrap())),
        loads: vec![Load {
            distance: "far from C".into(),
            ..load(p, all("1234 N"), all("5.678 × 10⁵ N mm"))
        }],
        governing: Some(Governing {
            at: at[1],
            label: "governs, L01".into(),
        }),
        dimensions: vec![
            dimension(at[0], at[1], Axis::X, "123.4"),
            dimension(V3::zeros(), p, Axis::Y, "567.8"),
        ],
        units: "mm".into(),
        planar,
        ..Scene::default()
    }
}

/// Random scenes that are drawn to be measured.
const RANDOM: u64 = 200;

fn named_scenes() -> BTreeMap<String, Scene> {
    [
        ("channel", channel()),
        ("tube", tube()),
        ("lug", lug()),
        ("space", space()),
        ("far", far()),
        ("stitched", stitched()),
        ("curved", curved()),
    ]
    .into_iter()
    .map(|(name, scene)| (name.to_owned(), scene))
    .collect()
}

/// Drawings of the scenes of this file and of the random ones, made once.
fn drawings() -> &'static [(String, Drawing)] {
    static DRAWN: OnceLock<Vec<(String, Drawing)>> = OnceLock::new();
    DRAWN.get_or_init(|| {
        let fonts = SerifFaces::embedded().unwrap();
        let random = (0..RANDOM).map(|seed| (format!("random-{seed:03}"), random(seed)));
        named_scenes()
            .into_iter()
            .chain(random)
            .map(|(name, scene)| (name, draw(&scene, &fonts)))
            .collect()
    })
}

/// A part of a random joint file: a run in the plane.
fn run_text(dice: &mut Dice, index: usize) -> String {
    let x = dice.roll(0.0, 200.0).round();
    let y = (index as f64) * 40.0 + dice.roll(0.0, 30.0).round();
    let (long, deep) = (
        dice.roll(40.0, 260.0).round(),
        dice.roll(12.0, 90.0).round(),
    );
    let path = match dice.roll(0.0, 7.0) {
        kind if kind < 3.0 => format!("straight: [[{x}, {y}], [{}, {y}]]", x + long),
        kind if kind < 4.0 => format!(
            "polyline: [[{x}, {y}], [{}, {y}], [{}, {}]]",
            x + long,
            x + long,
            y + deep
        ),
        kind if kind < 5.0 => format!(
            "arc: {{centre: [{x}, {}], radius: {deep}, from: 0 deg, sweep: 150 deg}}",
            y + 300.0
        ),
        kind if kind < 6.0 => format!("circle: {{centre: [{}, {y}], radius: {deep}}}", x - 500.0),
        _ => format!(
            "straight: [[{x}, {y}], [{}, {y}]], stitch: {{bead: 20, pitch: {}}}",
            x + long,
            20.0 + deep
        ),
    };
    let size = match dice.roll(0.0, 8.0) {
        kind if kind < 3.0 => format!("fillet: {}", dice.roll(3.0, 12.0).round()),
        kind if kind < 4.0 => "fillet: [5, 9]".to_owned(),
        kind if kind < 5.0 => "fillet: 6, gap: 2".to_owned(),
        kind if kind < 6.0 => "fillet: 7, between: 70 deg".to_owned(),
        kind if kind < 7.0 => "partial: 5".to_owned(),
        _ => "complete: tee".to_owned(),
    };
    let name = [
        "edge",
        "a rather long name of a run",
        "rib",
        "lower flange, near side",
    ];
    let name = name[index % name.len()];
    format!("    - {{name: \"{name} {index}\", {path}, {size}}}\n")
}

/// A random joint file: one to six runs in the plane or in space, two cases, two checks.
fn random_joint(seed: u64) -> String {
    let mut dice = Dice(seed * 104_729 + 7);
    let count = 1 + usize::try_from(seed % 6).unwrap();
    let in_space = seed % 4 == 3;
    let mut runs = String::new();
    for index in 0..count {
        if in_space {
            let (y, z) = (
                dice.roll(0.0, 120.0).round(),
                dice.roll(-90.0, 90.0).round(),
            );
            let (from, to) = (dice.roll(0.0, 50.0).round(), dice.roll(80.0, 200.0).round());
            let normal = if index % 2 == 0 {
                "[0, 0, 1]"
            } else {
                "[0, 1, 0]"
            };
            runs.push_str(&format!(
                "    - {{name: seam {index}, straight: [[{from}, {y}, {z}], [{to}, {y}, {z}]], \
                 fillet: 5, normal: {normal}}}\n"
            ));
        } else {
            runs.push_str(&run_text(&mut dice, index));
        }
    }
    let reach = [200.0, 3000.0][usize::from(seed.is_multiple_of(5))];
    let height = [0.0, 500.0, 40.0][usize::try_from(seed % 3).unwrap()];
    let at = format!(
        "[{}, {}, {height}]",
        dice.roll(-100.0, reach).round(),
        dice.roll(0.0, 200.0).round()
    );
    let ends = ["full", "less leg", "less throat"][usize::try_from(seed % 3).unwrap()];
    format!(
        "note: T-1\ntitle: Random\nrevision: A\ndate: 2026-06-01\ndrawing: D-1\nitem: test\n\
         units: {{force: N, length: mm}}\nframe: {{origin: here, x: forward, y: up, z: outboard}}\n\
         parts:\n  plate: {{material: S355, thickness: 10, f_y: 355 MPa, f_u: 470 MPa, F_su: 300 MPa, source: record}}\n  \
         base: {{material: S355, thickness: 12, f_y: 355 MPa, f_u: 470 MPa, F_su: 300 MPa, source: record}}\n\
         filler: {{name: wire, f_u: 480 MPa, source: record}}\nweld:\n  joins: [plate, base]\n  ends: {ends}\n  runs:\n{runs}\
         loads:\n  at: {at}\n  level: service\n  cases:\n    \
         - {{case: L1, force: [{} N, -4200 N, {} N], moment: [0, 0, {} N m]}}\n    \
         - {{case: L2, force: [0, 800 N, 900 N]}}\n\
         checks:\n  - {{clause: throat allowable, F_allow: 140 MPa, source: record}}\n",
        dice.roll(-2000.0, 2000.0).round(),
        dice.roll(-2000.0, 2000.0).round(),
        dice.roll(-300.0, 300.0).round()
    )
}

/// The pictures of a joint file.
fn pictures(text: &str) -> Result<Vec<Picture>, Faults> {
    let file = Arc::new(SourceFile {
        name: "random.yaml".to_owned(),
        text: text.to_owned(),
    });
    let told = read_joint(&file)?;
    Ok(write_note(&Calculation::of(&told, built_in())?)?.pictures)
}

/// All drawings of the demo joints and of 200 random joints, made once.
fn pictured() -> &'static [(String, Drawing)] {
    static DRAWN: OnceLock<Vec<(String, Drawing)>> = OnceLock::new();
    DRAWN.get_or_init(|| {
        let fonts = SerifFaces::embedded().unwrap();
        let mut all = Vec::new();
        let mut add = |name: &str, pictures: &[Picture]| {
            for picture in pictures {
                let drawing = draw_picture(picture, &fonts);
                all.push((format!("{name}-{}", picture.name()), drawing));
            }
        };
        for (joint, produced) in crate::notes::demo() {
            add(&joint.stem, &produced.note.pictures);
        }
        let (mut seed, mut joints) = (0, 0);
        while joints < RANDOM {
            // A group that cannot carry its load has no note.
            match pictures(&random_joint(seed)) {
                Ok(pictures) => {
                    add(&format!("joint-{seed:03}"), &pictures);
                    joints += 1;
                }
                Err(faults) => {
                    let says = faults.render(false);
                    assert!(seed < 2 * joints + 20, "{joints} of {seed} joints: {says}");
                }
            }
            seed += 1;
        }
        all
    })
}

/// Both kinds of drawings.
fn everything() -> impl Iterator<Item = &'static (String, Drawing)> {
    drawings().iter().chain(pictured())
}

fn labels_of(drawing: &Drawing) -> Vec<&Label> {
    let items = drawing.items.iter();
    items
        .filter_map(|item| match item {
            Item::Label(label) => Some(label),
            Item::Path(_) | Item::Circle { .. } => None,
        })
        .collect()
}

/// Boxes of all strokes that are drawn firmly: black lines and circles, curves by short chords.
fn firm_strokes(drawing: &Drawing) -> Vec<Rect> {
    drawing
        .items
        .iter()
        .flat_map(seamnote::figure::firm_strokes)
        .collect()
}

/// Fails with all that was found.
#[track_caller]
fn none(found: &[String]) {
    let some: Vec<&String> = found.iter().take(20).collect();
    assert!(found.is_empty(), "{} found: {some:#?}", found.len());
}

/// Writes the drawings to be looked at where `SEAMNOTE_FIGURES` names a folder.
#[test]
fn drawings_are_kept_to_be_looked_at() {
    let Some(folder) = std::env::var_os("SEAMNOTE_FIGURES").map(PathBuf::from) else {
        return;
    };
    for (name, drawing) in everything().filter(|(name, _)| !name.ends_with("6")) {
        let document = Sheet::new(standalone_source(drawing)).compile();
        let svg = typst_svg::svg(&document.pages()[0], &typst_svg::SvgOptions::default());
        std::fs::write(folder.join(format!("{name}.svg")), svg).unwrap();
        comemo::evict(0);
    }
}

/// A number stands nearest to its own point, a value to its own arrow, a name to its own run; or a
/// leader joins them.
#[test]
fn a_label_stands_nearest_to_what_it_names() {
    let mut found = Vec::new();
    for (name, drawing) in everything() {
        for tie in drawing.ties.iter().filter(|tie| !tie.led) {
            let own = &drawing.marks[tie.mark];
            let near = own.distance(&tie.rect);
            for other in &drawing.marks {
                let alike = other.kind == own.kind && other.rects != own.rects;
                // The ring where a check governs may stand around a point.
                let around =
                    own.kind == MarkKind::Point && own.rects.iter().any(|rect| other.meets(rect));
                let alike = alike && !around;
                if alike && other.distance(&tie.rect) <= near {
                    found.push(format!("{name}: `{}` stands nearer to another", tie.text));
                }
            }
            if near > 4.0 {
                found.push(format!("{name}: `{}` stands {near} mm off", tie.text));
            }
        }
    }
    none(&found);
}

/// Nothing is left out without a word: each label asked for stands there, or a remark counts it.
#[test]
fn no_label_is_dropped_without_a_remark() {
    let mut found = Vec::new();
    for (name, drawing) in everything() {
        let told = drawing.remarks.iter().any(|says| says.contains("no room"));
        if !drawing.dropped.is_empty() && !told {
            found.push(format!("{name}: {:?}", drawing.dropped));
        }
        if name.ends_with("joint") || name.starts_with("random") {
            assert!(drawing.dropped.is_empty(), "{name}: {:?}", drawing.dropped);
        }
    }
    none(&found);
}

/// Each number of a point and each run of a scene is on its drawing, by name or by number.
#[test]
fn every_point_and_every_run_is_labelled() {
    let mut found = Vec::new();
    let fonts = SerifFaces::embedded().unwrap();
    let random = (0..RANDOM).map(|seed| (format!("random-{seed:03}"), random(seed)));
    for (name, scene) in named_scenes().into_iter().chain(random.take(40)) {
        let drawing = draw(&scene, &fonts);
        let texts: Vec<String> = labels_of(&drawing).iter().map(|l| l.text()).collect();
        let numbers = texts.iter().flat_map(|text| text.split(", "));
        let numbers: Vec<&str> = numbers
            .map(|text| text.split("  ").next().unwrap())
            .collect();
        for point in &scene.points {
            if !numbers.contains(&point.label.as_str()) {
                found.push(format!("{name}: point {} has no number", point.label));
            }
        }
        let ringed = drawing
            .ties
            .iter()
            .filter(|tie| drawing.marks[tie.mark].kind == MarkKind::Run);
        if ringed.count() != scene.runs.len() {
            found.push(format!("{name}: not every run is labelled"));
        }
    }
    none(&found);
}

/// The thin straight lines of dimensions: black, of 0.3 pt.
fn thin_lines(drawing: &Drawing) -> Vec<Rect> {
    let paths = drawing.items.iter().filter_map(|item| match item {
        Item::Path(path) => Some(path),
        Item::Circle { .. } | Item::Label(_) => None,
    });
    let thin = paths.filter_map(|path| {
        let stroke = path.stroke.filter(|stroke| stroke.ink == Ink::Black)?;
        let is_thin = (stroke.width - 0.3 * PT).abs() < 1e-9;
        match path.pieces[..] {
            [Piece::Line(to)] if is_thin => Some(Rect::line(path.start, to, 0.05)),
            _ => None,
        }
    });
    thin.collect()
}

/// An arrow on an extension line would read as a part of the dimension: none lies along one.
#[test]
fn no_arrow_lies_along_a_line_of_a_dimension() {
    let (mut found, mut lines) = (Vec::new(), 0);
    for (name, drawing) in everything() {
        let thin = thin_lines(drawing);
        lines += thin.len();
        let arrows = drawing.marks.iter();
        for arrow in arrows.filter(|mark| mark.kind == MarkKind::Arrow) {
            // The shaft comes first.
            let Some(shaft) = arrow.rects.first().filter(|shaft| shaft.half[0] > 3.0) else {
                continue;
            };
            let along = |line: &&Rect| line.along.dot(&shaft.along).abs() > 0.99;
            let on = thin
                .iter()
                .filter(along)
                .any(|line| line.overlaps(&shaft.grown(-0.1)));
            if on {
                found.push(format!("{name}: an arrow on a thin line"));
            }
        }
    }
    assert!(lines > 200, "only {lines} thin lines are seen");
    none(&found);
}

/// What is white and without outline, such as the gap of a broken line, hides no run and no point.
#[test]
fn nothing_white_cuts_a_run_or_covers_a_point() {
    let mut found = Vec::new();
    for (name, drawing) in drawings() {
        // What comes before all of them lies under them.
        let under = |item: &&Item| seamnote::figure::firm_strokes(item).is_empty();
        for item in drawing.items.iter().skip_while(under) {
            let white = matches!(item, Item::Path(path) if path.fill == Fill::White && path.stroke.is_none());
            if !white {
                continue;
            }
            let mut bounds = seamnote::figure::Bounds::empty();
            item.bound(&mut bounds);
            let half = bounds.size() / 2.0;
            let area = Rect::upright(bounds.centre(), half.x, half.y);
            for mark in &drawing.marks {
                let hides = mark.kind != MarkKind::Arrow && mark.distance(&area) <= 0.0;
                if hides {
                    found.push(format!("{name}: white over a {:?}", mark.kind));
                }
            }
        }
    }
    none(&found);
}

#[test]
fn no_label_stands_on_another_or_on_a_line() {
    let mut found = Vec::new();
    for (name, drawing) in everything() {
        let labels = labels_of(drawing);
        assert!(!labels.is_empty(), "{name}: no label at all");
        let strokes = firm_strokes(drawing);
        for (i, a) in labels.iter().enumerate() {
            for b in &labels[i + 1..] {
                if a.rect().overlaps(&b.rect()) {
                    found.push(format!("{name}: `{}` on `{}`", a.text(), b.text()));
                }
            }
            if strokes.iter().any(|stroke| a.rect().overlaps(stroke)) {
                found.push(format!("{name}: `{}` on a line", a.text()));
            }
        }
    }
    none(&found);
}

#[test]
fn no_label_leaves_its_frame() {
    let mut found = Vec::new();
    for (name, drawing) in everything() {
        for label in labels_of(drawing) {
            let inside = |p: &seamnote::figure::P2| {
                p.x >= -1e-6
                    && p.y >= -1e-6
                    && p.x <= drawing.width_mm + 1e-6
                    && p.y <= drawing.height_mm + 1e-6
            };
            if !label.rect().corners().iter().all(inside) {
                found.push(format!("{name}: `{}` leaves the frame", label.text()));
            }
        }
    }
    none(&found);
}

/// Width of all text in a frame (mm), as typst sets it.
fn text_width(frame: &typst::layout::Frame) -> f64 {
    frame
        .items()
        .map(|(_, item)| match item {
            FrameItem::Group(group) => text_width(&group.frame),
            FrameItem::Text(text) => text.width().to_mm(),
            _ => 0.0,
        })
        .sum()
}

/// The boxes rest on the real faces: widths differ from typst's by kerning only.
#[test]
fn labels_are_as_wide_as_typst_sets_them() {
    for (name, drawing) in &drawings()[..20] {
        let document = Sheet::new(standalone_source(drawing)).compile();
        let set = text_width(&document.pages()[0].frame);
        let computed: f64 = drawing
            .items
            .iter()
            .filter_map(|item| match item {
                Item::Label(label) => Some(label.width),
                Item::Path(_) | Item::Circle { .. } => None,
            })
            .sum();
        assert!(
            (set / computed - 1.0).abs() < 0.02,
            "{name}: {computed} mm computed, {set} mm set"
        );
        comemo::evict(0);
    }
}

#[test]
fn every_drawing_fits_its_room() {
    let mut found = Vec::new();
    for (name, drawing) in everything() {
        let high = if name.ends_with("sections") {
            170.0
        } else {
            85.0
        };
        let wide = match name.rsplit('-').next() {
            Some("joint" | "stresses") => 128.0,
            Some("sections") => 150.0,
            _ => 132.0,
        };
        if drawing.width_mm > wide || drawing.height_mm > high {
            let (width, height) = (drawing.width_mm, drawing.height_mm);
            found.push(format!("{name}: {width:.1} by {height:.1} mm"));
        }
    }
    none(&found);
}

/// Source: the scene's own numbers: 120 mm at 1:2 is 60 mm between the upper and the lower run.
#[test]
fn the_channel_is_drawn_to_its_scale() {
    let drawing = draw(&channel(), &SerifFaces::embedded().unwrap());
    assert_eq!(drawing.scale, "1:2", "the largest standard scale that fits");
    let thick: Vec<_> = drawing
        .items
        .iter()
        .filter_map(|item| match item {
            Item::Path(path) => path
                .stroke
                .filter(|s| s.width > 1.5 && s.ink == Ink::Black)
                .map(|s| (path.start, s.width)),
            Item::Circle { .. } | Item::Label(_) => None,
        })
        .collect();
    assert_eq!(thick.len(), 3, "three runs");
    assert!(
        (thick[0].0.y - thick[2].0.y - 60.0).abs() < 1e-9,
        "depth to scale"
    );
    assert!(
        (thick[1].1 - 5.657 / 2.0).abs() < 1e-9,
        "the back edge is as thick as its throat"
    );
    assert!(drawing.dropped.is_empty(), "dropped: {:?}", drawing.dropped);
}

/// Source: the rule that a group takes at least 45 % of the room's width or height.
#[test]
fn a_far_load_leaves_the_group_its_part_of_the_room() {
    let drawing = draw(&far(), &SerifFaces::embedded().unwrap());
    let mut bounds = seamnote::figure::Bounds::empty();
    let runs = drawing.marks.iter().filter(|m| m.kind == MarkKind::Run);
    for corner in runs.flat_map(|m| &m.rects).flat_map(Rect::corners) {
        bounds.add(corner, 0.0);
    }
    let size = bounds.size();
    let part = (size.x / 128.0).max(size.y / 85.0);
    assert!(part >= 0.45, "the group takes {part} of the room");
}

/// A moment about the line of sight has two heads, as one across it has.
#[test]
fn a_turning_arrow_has_two_heads() {
    let mut scene = channel();
    scene.loads[0].force.clear();
    scene.loads[0].moment = vec![part(Axis::Z, 5.0, "5 N m")];
    let drawing = draw(&scene, &SerifFaces::embedded().unwrap());
    let wide = 1.1 * seamnote::figure::PT;
    let head = |item: &&Item| {
        matches!(item, Item::Path(path) if path.pieces.len() == 2
            && path.stroke.is_some_and(|s| (s.width - wide).abs() < 1e-9))
    };
    assert_eq!(drawing.items.iter().filter(head).count(), 2, "open heads");
}

#[test]
fn zero_components_are_not_drawn() {
    let drawing = draw(&channel(), &SerifFaces::embedded().unwrap());
    let source = typst_source(&drawing);
    assert!(source.contains("−4200 N"), "the force along y is named");
    assert!(
        !source.contains(" = 0\""),
        "the force along x is 0 and not named"
    );
}

#[test]
fn a_far_load_keeps_the_group_large_and_says_so() {
    let drawing = draw(&far(), &SerifFaces::embedded().unwrap());
    assert!(
        ["1:2", "1:2.5"].contains(&drawing.scale.as_str()),
        "group drawn at {}",
        drawing.scale
    );
    assert!(
        drawing.remarks.iter().any(|r| r.contains("broken")),
        "remarks: {:?}",
        drawing.remarks
    );
    assert!(
        typst_source(&drawing).contains("2384 from C"),
        "the distance stands beside the break"
    );
}

#[test]
fn crowded_stitches_have_numbers_in_rings_for_names() {
    let drawing = draw(&stitched(), &SerifFaces::embedded().unwrap());
    let of_runs = drawing
        .ties
        .iter()
        .filter(|tie| drawing.marks[tie.mark].kind == MarkKind::Run);
    let of_runs: Vec<&str> = of_runs.map(|tie| tie.text.as_str()).collect();
    assert_eq!(of_runs.len(), 24, "every bead is labelled");
    assert!(of_runs.contains(&"17"), "{of_runs:?}");
    assert!(
        drawing
            .remarks
            .contains(&"circled numbers: rows of the table “Runs as given”".to_owned()),
        "{:?}",
        drawing.remarks
    );
}

#[test]
fn the_same_scene_gives_the_same_source() {
    let fonts = SerifFaces::embedded().unwrap();
    let scene = space();
    assert_eq!(
        typst_source(&draw(&scene, &fonts)),
        typst_source(&draw(&scene, &fonts)),
        "two runs differ"
    );
}

/// User text cannot leave its literal, and unusual text still compiles.
#[test]
fn hostile_text_is_only_text() {
    let mut scene = channel();
    scene.runs[0].label = "a\" #panic(1) \\ $x$ [b] // c\n\u{7}".into();
    scene.governing.as_mut().unwrap().label = "*bold* _x_ `raw` <l> @ref".into();
    let drawing = draw(&scene, &SerifFaces::embedded().unwrap());
    Sheet::new(standalone_source(&drawing)).compile();
}

/// As the note uses it: in a figure with alternative text, in a document with its own face, size and
/// paragraphs, under PDF/A-2b with PDF/UA-1.
#[test]
fn the_expression_stands_in_an_accessible_note() {
    for scene in [channel(), space()] {
        let drawing = draw(&scene, &SerifFaces::embedded().unwrap());
        let text = format!(
            "#set document(title: \"T\", date: datetime(year: 2026, month: 5, day: 4))\n#set text(lang: \"en\", size: 9.5pt)\n\
             #set par(justify: true, first-line-indent: 1em)\n= Axes\n\
             #figure({}, alt: \"The weld group.\", caption: [Scale {}.])\n",
            typst_source(&drawing),
            drawing.scale
        );
        let document = Sheet::new(text).compile();
        let standards = [typst_pdf::PdfStandard::A_2b, typst_pdf::PdfStandard::Ua_1];
        let options = typst_pdf::PdfOptions {
            standards: typst_pdf::PdfStandards::new(&standards).unwrap(),
            ..typst_pdf::PdfOptions::default()
        };
        let pdf = typst_pdf::pdf(&document, &options);
        assert!(pdf.is_ok(), "refused: {:?}", pdf.err());
    }
}

/// A dimension to a far origin is broken, too, and leaves the group its size.
#[test]
fn a_far_origin_does_not_shrink_the_group() {
    let mut scene = channel();
    scene.dimensions.push(dimension(
        v(-9000.0, 0.0, 0.0),
        V3::zeros(),
        Axis::X,
        "9000",
    ));
    scene.origin = Some(v(-9000.0, 0.0, 0.0));
    let drawing = draw(&scene, &SerifFaces::embedded().unwrap());
    assert!(
        ["1:2.5", "1:5"].contains(&drawing.scale.as_str()),
        "group drawn at {}",
        drawing.scale
    );
    assert!(
        drawing.remarks.iter().any(|r| r.contains("origin")),
        "remarks: {:?}",
        drawing.remarks
    );
}

/// A very long name ends in an ellipsis rather than leave the page.
#[test]
fn a_very_long_name_is_cut() {
    let mut scene = channel();
    scene.runs[1].label = "a run with quite a name ".repeat(12);
    let drawing = draw(&scene, &SerifFaces::embedded().unwrap());
    assert!(drawing.width_mm <= 128.0, "{} mm wide", drawing.width_mm);
    assert!(typst_source(&drawing).contains('…'), "cut with an ellipsis");
}

/// Scenes compile without a warning to one page of the drawing's size; text becomes outlines in the
/// SVG.
#[test]
fn every_drawing_compiles() {
    for (name, drawing) in &drawings()[..20] {
        let document = Sheet::new(standalone_source(drawing)).compile();
        let page = &document.pages()[0];
        let width = page.frame.width().to_mm();
        assert!(
            (width - drawing.width_mm - 4.0).abs() < 1e-3,
            "{name}: page {width} mm wide"
        );
        let svg = typst_svg::svg(page, &typst_svg::SvgOptions::default());
        assert!(!svg.contains("<text"), "{name}: text is left as text");
        comemo::evict(0);
    }
}
