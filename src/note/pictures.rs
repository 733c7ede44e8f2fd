//! What the drawings of the note show, as data with printed texts; drawn in a room above.
//!
//! The joint with its load, its welds in section, the stress at its points, the demand along it.

use super::builder::Builder;
use super::calculation::Calculation;
use super::doc::{Inline, Text};
use super::margins::{Check, asked, check_name};
use super::section::{WeldSection, listed};
use super::sketch::Sketch;
use super::text::{capital, emph, number, piece, plain, strong};
use crate::criteria::{Governing, Ground, profiles};
use crate::formula::Value;
use crate::quantity::Dim;
use crate::weld::{Run, V3};

/// Steps in which a path is followed for the drawing of demand along it.
const STEPS: u32 = 96;
/// Checks drawn at most, those of the largest utilisation.
const MOST_CURVES: usize = 5;

/// A ring nearer to a point than this part of the longest run stands next to it.
const NEAR: f64 = 0.1;

/// A drawing of the note.
#[derive(Clone, Debug)]
pub enum Picture {
    /// The weld group with its governing case.
    Joint(Sketch),
    /// The kinds of weld in section.
    Sections(Vec<WeldSection>),
    /// The stress at the points of the group.
    Stresses(StressSketch),
    /// Demand over capacity along the unfolded weld.
    Demand(DemandSketch),
}

/// The stress at the points of the group, in one case.
#[derive(Clone, Debug)]
pub struct StressSketch {
    /// The group without its load.
    pub group: Sketch,
    /// Points with the stress vector there, in the joint frame.
    pub vectors: Vec<(V3, V3)>,
    /// Resultant at the governing point as printed, with its unit.
    pub resultant: String,
    /// Unit of stress.
    pub unit: String,
    /// Name of the case.
    pub case: String,
}

/// Demand over capacity along the unfolded weld.
#[derive(Clone, Debug)]
pub struct DemandSketch {
    /// The runs in file order.
    pub runs: Vec<Unfolded>,
    /// One for each check, that of the largest utilisation first.
    pub curves: Vec<Curve>,
    /// How many checks are not drawn.
    pub left_out: usize,
}

/// A run laid out straight.
#[derive(Clone, Debug)]
pub struct Unfolded {
    /// Its name.
    pub name: String,
    /// Its length.
    pub length: f64,
    /// Numbers of the points at its ends, if they have one.
    pub ends: [Option<String>; 2],
    /// Whether it goes on where the run before it ends.
    pub joined: bool,
}

/// A check along the weld.
#[derive(Clone, Debug)]
pub struct Curve {
    /// Its letter, such as `a`.
    pub letter: String,
    /// The check and its case, for the caption.
    pub says: String,
    /// Its utilisation as printed, with a link to its step.
    pub utilisation: Option<Inline>,
    /// By run: the ratio at equal steps of its length.
    pub runs: Vec<(usize, Vec<f64>)>,
    /// Where it governs: run, part of its length and the utilisation.
    pub governing: (usize, f64, f64),
}

impl Picture {
    /// Name of its file, without extension.
    #[must_use]
    pub const fn name(&self) -> &'static str {
        match self {
            Self::Joint(_) => JOINT,
            Self::Sections(_) => SECTIONS,
            Self::Stresses(_) => STRESSES,
            Self::Demand(_) => DEMAND,
        }
    }

    /// The words of its caption, once it is drawn: from where it is seen, at which scale, and what
    /// the drawing leaves out.
    #[must_use]
    pub fn caption(&self, view: &str, scale: &str, remarks: &[String]) -> Text {
        let lengths = |units: &str| match units {
            "in" => "inches".to_owned(),
            other => other.to_owned(),
        };
        let remarks: String = remarks
            .iter()
            .map(|remark| format!(" {}.", capital(remark.trim_end_matches('.'))))
            .collect();
        let mut words = match self {
            Self::Joint(sketch) => {
                let case = sketch.case.as_ref();
                let case = case.map_or(String::new(), |case| format!(", with case {case}"));
                plain(&format!(
                    "The weld group, {view}{case}. Scale\u{a0}{scale}; lengths in {}.",
                    lengths(sketch.units)
                ))
            }
            Self::Sections(sections) => {
                let kinds = if sections.len() == 1 {
                    "The weld in section"
                } else {
                    "The kinds of weld in section"
                };
                let broken = if sections.iter().all(|section| section.planes.is_empty()) {
                    ""
                } else {
                    " Broken lines: planes that are checked."
                };
                plain(&format!(
                    "{kinds}, square to the run; not to scale.{broken}"
                ))
            }
            Self::Stresses(sketch) => plain(&format!(
                "Stress on the throat along the runs in case {}, {view}. Scale of lengths\u{a0}{scale}.",
                sketch.case
            )),
            Self::Demand(demand) => {
                let mut words = plain(
                    "Utilisation along the weld, laid out run by run at its effective length, each check in its governing case: ",
                );
                for (at, curve) in demand.curves.iter().enumerate() {
                    words.push(strong(&curve.letter));
                    words.push(piece(&format!("\u{a0}({}) {}", DASHES[at], curve.says)));
                    if let Some(utilisation) = &curve.utilisation {
                        words.extend([
                            piece(", "),
                            emph("U"),
                            piece("\u{a0}=\u{a0}"),
                            utilisation.clone(),
                        ]);
                    }
                    let last = at + 1 == demand.curves.len();
                    words.push(piece(if last { "." } else { "; " }));
                }
                words.push(piece(&match demand.left_out {
                    0 => String::new(),
                    1 => " One further check is not drawn.".to_owned(),
                    some => format!(" {some} further checks are not drawn."),
                }));
                words
            }
        };
        words.push(piece(&remarks));
        words
    }

    /// What the drawing shows, for those who do not see it.
    #[must_use]
    pub fn alt(&self, caption: &str) -> String {
        let says = match self {
            Self::Joint(sketch) => joint_alt(sketch),
            Self::Sections(sections) => {
                let each: Vec<String> = sections
                    .iter()
                    .map(|section| {
                        format!(
                            "{}: {}, throat {}",
                            listed(&section.runs),
                            section.shape.words(),
                            section.throat.1
                        )
                    })
                    .collect();
                format!("Sections through the welds. {}.", each.join(". "))
            }
            Self::Stresses(sketch) => {
                let governs = match sketch.resultant.as_str() {
                    "" => String::new(),
                    resultant => format!("; {resultant} at the governing point"),
                };
                format!(
                    "Drawing of the weld group with an arrow at each point for the stress there{governs}."
                )
            }
            Self::Demand(demand) => {
                let each: Vec<String> = demand
                    .curves
                    .iter()
                    .map(|curve| {
                        let run = &demand.runs[curve.governing.0].name;
                        format!("curve {} is largest on {run}", curve.letter)
                    })
                    .collect();
                let runs: Vec<String> = demand.runs.iter().map(|run| run.name.clone()).collect();
                format!(
                    "Diagram over the runs {}; the capacity is the line at 1: {}.",
                    listed(&runs),
                    each.join("; ")
                )
            }
        };
        format!("{says} {caption}")
    }
}

/// What the drawing of the joint shows: its runs, sizes, ring and load.
fn joint_alt(sketch: &Sketch) -> String {
    let runs: Vec<&str> = sketch.runs.iter().map(|run| run.text.as_str()).collect();
    let sizes = sketch.dimensions.iter().filter(|size| !size.optional);
    let sizes: Vec<&str> = sizes.map(|size| size.text.as_str()).collect();
    let sizes = if sizes.is_empty() {
        String::new()
    } else {
        format!(" Dimensions: {}.", sizes.join(", "))
    };
    format!(
        "Drawing of the weld group with its runs: {}.{sizes}{}{}",
        runs.join("; "),
        ring_alt(sketch),
        load_alt(sketch)
    )
}

/// Where the ring stands.
fn ring_alt(sketch: &Sketch) -> String {
    let Some((at, words)) = &sketch.governing else {
        return String::new();
    };
    let points = sketch.points.iter();
    let far = points.map(|(point, number)| ((point - at).norm(), number));
    let lengths = sketch.runs.iter().map(|run| run.path.length());
    let near = NEAR * lengths.fold(0.0, f64::max);
    match far.min_by(|a, b| a.0.total_cmp(&b.0)) {
        Some((far, number)) if far < 1e-9 => format!(" A ring marks point {number}: {words}."),
        Some((far, number)) if far < near => {
            format!(" A ring stands next to point {number}: {words}.")
        }
        _ => format!(" A ring marks the point that governs: {words}."),
    }
}

/// The load point and what acts there.
fn load_alt(sketch: &Sketch) -> String {
    let Some(load) = &sketch.load else {
        return String::new();
    };
    let acting = |parts: &[(f64, String); 3], letter: &str| {
        let parts = parts.iter().zip(["x", "y", "z"]);
        parts
            .filter(|((value, _), _)| *value != 0.0)
            .map(|((_, text), axis)| format!("{letter}{axis} = {text}"))
            .collect::<Vec<_>>()
    };
    let mut all = acting(&load.force, "F");
    all.extend(acting(&load.moment, "M"));
    let place = if load.distance.starts_with("0 ") {
        "at the centroid C".to_owned()
    } else {
        load.distance.clone()
    };
    format!(" At the load point P, {place}, act {}.", all.join(", "))
}

/// Names of the drawings' files.
pub(super) const JOINT: &str = "joint";
pub(super) const SECTIONS: &str = "sections";
pub(super) const STRESSES: &str = "stresses";
pub(super) const DEMAND: &str = "demand";

/// How the curves of demand are drawn, in their order.
const DASHES: [&str; MOST_CURVES] = ["full", "dashed", "dotted", "dash-dotted", "thin"];

impl Builder<'_> {
    /// The stress at the points of the group in the case of a check, and the resultant where it governs.
    pub(super) fn stress_sketch(
        &self,
        group: Sketch,
        ground: &Ground<'_>,
        governing: &Governing,
        resultant: Option<Value>,
    ) -> StressSketch {
        let mut vectors: Vec<(V3, V3)> = Vec::new();
        let mut add = |run: usize, p: f64| {
            let at = self.runs[run].path.point(p);
            if vectors
                .iter()
                .all(|(known, _)| (known - at).norm() > 1e-9 * self.properties.size)
            {
                vectors.push((at, (ground.stress)(governing.case, run, p)));
            }
        };
        add(governing.run, governing.s);
        for (index, run) in self.runs.iter().enumerate() {
            let steps: u32 = match run.path {
                crate::weld::Segment::Straight { .. } => 2,
                crate::weld::Segment::Arc { sweep, .. } if sweep.abs() > 4.0 => 8,
                crate::weld::Segment::Arc { .. } => 4,
            };
            for step in 0..=steps {
                add(index, f64::from(step) / f64::from(steps));
            }
        }
        let units = self.joint.units.value;
        StressSketch {
            group: Sketch {
                load: None,
                dimensions: Vec::new(),
                ..group
            },
            vectors,
            resultant: resultant.map_or(String::new(), |value| {
                let printed = self.ledger.printed(value).text();
                format!("{printed} {}", units.text(Dim::STRESS))
            }),
            unit: units.text(Dim::STRESS),
            case: self.joint.loads.cases[governing.case].name.value.clone(),
        }
    }

    /// Utilisation along the weld, the checks of the largest utilisation first; a check that has no
    /// number between its points is left out.
    pub(super) fn demand_sketch(
        &self,
        calculation: &Calculation<'_>,
        ground: &Ground<'_>,
        checks: &[Check],
    ) -> DemandSketch {
        let mut order: Vec<&Check> = Vec::new();
        for check in checks {
            let same =
                |known: &&mut &Check| known.outcome == check.outcome && known.check == check.check;
            match order.iter_mut().find(same) {
                Some(known) if check.governing.severity() > known.governing.severity() => {
                    *known = check;
                }
                Some(_) => {}
                None => order.push(check),
            }
        }
        order.sort_by(|a, b| b.governing.severity().total_cmp(&a.governing.severity()));
        let mut left_out = order.len().saturating_sub(MOST_CURVES);
        let mut curves = Vec::new();
        for (check, letter) in order.iter().take(MOST_CURVES).zip('a'..) {
            let asked = asked(calculation, check.outcome);
            let governing = &check.governing;
            let Ok(followed) = profiles(ground, asked, check.check, governing.case, STEPS) else {
                left_out += 1;
                continue;
            };
            let worked = check.worked.as_ref().and_then(|worked| worked.utilisation);
            let utilisation = worked.map(|value| {
                let step = self.ledger.get(value).anchor.clone();
                number(&self.ledger.printed(value), false, Some(step))
            });
            curves.push(Curve {
                letter: letter.to_string(),
                says: format!(
                    "{}{}, case {}",
                    check_name(asked, check.check),
                    if governing.part.is_some() {
                        ", the worse part"
                    } else {
                        ""
                    },
                    self.joint.loads.cases[governing.case].name.value
                ),
                runs: followed
                    .into_iter()
                    .map(|along| (along.run, along.ratios))
                    .collect(),
                utilisation,
                governing: (governing.run, governing.s, governing.utilisation),
            });
        }
        DemandSketch {
            runs: self.unfolded(),
            curves,
            left_out,
        }
    }

    fn unfolded(&self) -> Vec<Unfolded> {
        let near = 1e-6 * self.properties.size;
        let mut last: Option<V3> = None;
        let unfold = |run: &Run| {
            let [from, to] = super::points::ends(&run.told);
            let joined = last.is_some_and(|last| (last - from).norm() <= near);
            last = Some(to);
            Unfolded {
                name: run.name.clone(),
                length: run.path.length(),
                ends: [from, to].map(|at| self.point_at(at).map(|point| point.number.to_string())),
                joined,
            }
        };
        self.runs.iter().map(unfold).collect()
    }
}
