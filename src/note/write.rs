//! The whole note of a calculation: its sections in the order of the trade.

use super::builder::{Builder, Piece};
use super::calculation::{Calculation, Outcome};
use super::closing::{cautions, closing, identity_section, names_of, sheet_texts};
use super::coverage::coverage;
use super::doc::{Block, Doc, Head};
use super::identity::Identity;
use super::margins::{Check, Site, asked, check_name, drawn, ranked};
use super::pictures::Picture;
use super::sketch::Sketch;
use super::standing::Standing;
use super::stress::CaseTerms;
use super::text::{plain, slug};
use super::trace::{self, Trace};
use super::verdict::{open_section, verdict};
use crate::criteria::{Ground, WorkError};
use crate::formula::{Env, FormulaError, Kind, Ledger};
use crate::joint::Paper;
use crate::quantity::Dim;
use crate::solve::closure::{Closure, close};
use crate::source::{Diagnostic, Faults};
use crate::weld::{Run, V3};
use std::collections::{BTreeMap, BTreeSet};
use thiserror::Error;

/// A finished note.
#[derive(Clone, Debug)]
pub struct Note {
    /// The document.
    pub doc: Doc,
    /// The data of its drawings, in the order of their places.
    pub pictures: Vec<Picture>,
    /// Its digests.
    pub identity: Identity,
    /// How it stands.
    pub standing: Standing,
    /// The trace.
    pub trace: Trace,
}

/// Why a note cannot be written.
#[derive(Clone, PartialEq, Debug, Error)]
pub(super) enum NoteError {
    /// A formula of the worked calculation.
    #[error(transparent)]
    Formula(#[from] FormulaError),
    /// A check that cannot be worked.
    #[error(transparent)]
    Work(#[from] WorkError),
    /// A second opinion that does not agree.
    #[error("a second opinion disagrees: {says}: {value:.3e}, more than {limit:.0e}")]
    Disagrees {
        /// What was compared.
        says: String,
        /// The difference.
        value: f64,
        /// What it may be.
        limit: f64,
    },
}

/// Writes the note of a calculation.
///
/// # Errors
///
/// [`Faults`] at the joint's check if a value cannot be printed so that it replays, or the steps
/// and the assessment disagree: then no note is better than a wrong one.
pub fn write_note(calculation: &Calculation<'_>) -> Result<Note, Faults> {
    compose(calculation).map_err(|fault| {
        let place = &calculation.joint.note.place;
        let message = format!("the note cannot be written: {fault}");
        Faults(vec![Diagnostic::error("no-note", message, place)])
    })
}

fn builder<'c>(calculation: &'c Calculation<'_>) -> Builder<'c> {
    let size = calculation.properties.size.max(f64::MIN_POSITIVE);
    let force = calculation
        .actions
        .iter()
        .map(|action| {
            let (force, moment) = action.about(calculation.properties.centroid);
            force.norm().max(moment.norm() / size)
        })
        .fold(0.0, f64::max);
    let mut slugs: Vec<String> = Vec::new();
    for run in &calculation.runs {
        let mut name = slug(&run.name);
        while slugs.contains(&name) {
            name.push('x');
        }
        slugs.push(name);
    }
    Builder {
        joint: calculation.joint,
        runs: &calculation.runs,
        properties: &calculation.properties,
        actions: &calculation.actions,
        ledger: Ledger::new(
            calculation.joint.units.value,
            force.max(f64::MIN_POSITIVE),
            size,
        ),
        env: Env::default(),
        figures: 0,
        parts: Vec::new(),
        slugs,
        planar: calculation.is_planar(),
        points: Vec::new(),
        run_values: vec![BTreeMap::new(); calculation.runs.len()],
        given: BTreeMap::new(),
        unchecked: Standing::of(calculation).unchecked,
        placed: BTreeSet::new(),
    }
}

fn compose(calculation: &Calculation<'_>) -> Result<Note, NoteError> {
    let joint = calculation.joint;
    let stress = |case: usize, run: usize, p: f64| match &calculation.fields[case] {
        Ok(field) => field.at(calculation.runs[run].path.point(p)),
        Err(_) => V3::zeros(),
    };
    let ground = Ground {
        joint,
        runs: &calculation.runs,
        stress: &stress,
    };
    let mut b = builder(calculation);
    let mut checks = ranked(calculation);
    let mut cases = CaseTerms::new();

    b.purpose();
    b.inputs();
    let open = b.assumptions(&sheet_texts(calculation, |asked| &asked.sheet.assumptions));
    b.number_points();
    b.geometry();
    b.materials();
    let on_throat = calculation.outcomes.iter().any(|outcome| match outcome {
        Outcome::Assessed(asked) => names_of(asked).any(|name| name == "point_sigma_perp"),
        Outcome::Refused(_) => false,
    });
    b.method(calculation.resistance.class.regime, on_throat);
    b.part("loads", "Loads");
    b.part("lines", "Line properties");
    b.throats()?;
    b.line_properties()?;
    let sites = if checks.is_empty() {
        Vec::new()
    } else {
        b.work_stresses(calculation, &checks, &mut cases)?
    };
    b.work_checks(calculation, &ground, &mut checks, &sites, &cases)?;
    b.margin_table(calculation, &checks);
    let order = b.case_margins(calculation);
    b.refusals(calculation, &mut cases)?;
    b.sizes(calculation, &ground)?;
    loads_part(&mut b, calculation, &order);
    let closure = second_opinions(&mut b, calculation, &checks, &sites)?;
    coverage(&mut b, calculation);
    cautions(&mut b, calculation);
    closing(&mut b);

    b.show_conversions("inputs");
    b.place_the_rest("inputs");
    b.show_conversions("inputs");
    order_parts(&mut b);
    check_bounds(&b.ledger)?;
    b.settle_and_number()?;
    count_replays(&mut b);

    let standing = Standing::of(calculation);
    let results = result_lines(calculation);
    let sheets = sheet_lines(calculation);
    let identity = Identity::of(joint, &b.ledger, &sheets, &results);
    let verdict = verdict(&b, calculation, &checks, &open);
    let governing = checks.first().map(|check| {
        let case: String = joint.loads.cases[check.governing.case]
            .name
            .value
            .chars()
            .take(40)
            .collect();
        (check.governing.position, format!("governs, {case}"))
    });
    let unresisted = calculation.unresisted().map(|(case, _)| case);
    let first_case = checks.first().map(|check| check.governing.case);
    let first_case = first_case.or(unresisted);
    let sketch = b.sketch(first_case.and_then(|case| drawn(&cases, case)), governing);
    let pictures = pictures(&b, calculation, &ground, sketch, &checks, &sites);
    let trace = whole_trace(&b, calculation, &checks, &identity, closure.as_ref());
    let open_items = open_section(&b, &open);
    let mut sections = b.sections();
    if let Some(section) = open_items {
        let at = sections
            .iter()
            .position(|known| known.id == "cautions")
            .unwrap_or(sections.len());
        sections.insert(at, section);
    }
    identity_section(&mut sections, &identity);
    let doc = Doc {
        head: head(calculation),
        verdict: Some(verdict),
        sections,
        identity: Some(identity.printed()),
        state: "DRAFT — not signed".to_owned(),
    };
    Ok(Note {
        doc,
        pictures,
        identity,
        standing,
        trace,
    })
}

/// The drawings of the note, in the order of their places.
fn pictures(
    b: &Builder<'_>,
    calculation: &Calculation<'_>,
    ground: &Ground<'_>,
    sketch: Sketch,
    checks: &[Check],
    sites: &[Site],
) -> Vec<Picture> {
    let mut pictures = vec![
        Picture::Joint(sketch.clone()),
        Picture::Sections(b.weld_sections(calculation)),
    ];
    if let (Some(check), Some(site)) = (checks.first(), sites.first()) {
        let stresses = b.stress_sketch(sketch, ground, &check.governing, site.resultant());
        pictures.push(Picture::Stresses(stresses));
        pictures.push(Picture::Demand(b.demand_sketch(
            calculation,
            ground,
            checks,
        )));
    }
    pictures
}

/// Whether every second opinion agrees: a bound is printed only if it holds.
fn check_bounds(ledger: &Ledger) -> Result<(), NoteError> {
    for value in ledger.values() {
        let entry = ledger.get(value);
        if let Kind::Bound { limit } = entry.kind
            && (entry.value.is_nan() || entry.value.abs() > limit)
        {
            return Err(NoteError::Disagrees {
                says: entry.says.clone(),
                value: entry.value,
                limit,
            });
        }
    }
    Ok(())
}

fn head(calculation: &Calculation<'_>) -> Head {
    let joint = calculation.joint;
    let (note, revision) = (&joint.note.value, &joint.revision.value);
    let date = joint.date.value.to_string();
    let mut particulars = vec![format!("Stress note {note}, issue {revision}, {date}")];
    let drawing = joint.drawing.as_ref();
    particulars.extend(drawing.map(|drawing| format!("drawing {}", drawing.value)));
    particulars.extend(joint.item.as_ref().map(|item| item.value.clone()));
    Head {
        note: note.clone(),
        title: joint.title.value.clone(),
        issue: Some((revision.clone(), date)),
        particulars,
        paper: match joint.paper {
            Paper::A4 => "a4",
            Paper::UsLetter => "us-letter",
        },
    }
}

/// The loads: the table of cases first, then the cases that were worked with the stresses.
fn loads_part(b: &mut Builder<'_>, calculation: &Calculation<'_>, order: &[usize]) {
    let all: Vec<usize> = (0..calculation.joint.loads.cases.len()).collect();
    let first = if order.is_empty() { &all } else { order };
    b.part("case-list", "Loads");
    b.case_table(first, !order.is_empty());
}

/// Moves the list of cases to its place before the line properties.
fn order_parts(b: &mut Builder<'_>) {
    let take = |b: &mut Builder<'_>, id: &str| {
        b.parts
            .iter_mut()
            .find(|part| part.id == id)
            .map(|part| std::mem::take(&mut part.pieces))
            .unwrap_or_default()
    };
    let mut pieces = take(b, "case-list");
    // Loads told in another unit are converted where they are listed.
    let (loads, others): (Vec<Piece>, Vec<Piece>) = take(b, "inputs").into_iter().partition(
        |piece| matches!(piece, Piece::Step(value) if [Dim::FORCE, Dim::MOMENT].contains(&b.ledger.get(*value).dim)),
    );
    pieces.extend(loads);
    for (id, pieces) in [("loads", pieces), ("inputs", others)] {
        if let Some(part) = b.parts.iter_mut().find(|part| part.id == id) {
            part.pieces.extend(pieces);
        }
    }
}

/// Closure, the kernel, the handbook.
fn second_opinions(
    b: &mut Builder<'_>,
    calculation: &Calculation<'_>,
    checks: &[Check],
    sites: &[Site],
) -> Result<Option<Closure>, NoteError> {
    b.part("opinions", "Second opinions");
    let class = calculation.resistance.class;
    if class.is_slender {
        b.warn_nearly_collinear(class.ratio);
    }
    let mut closure = None;
    if let (Some(check), Some(site)) = (checks.first(), sites.first()) {
        let case = check.governing.case;
        let properties = &calculation.properties;
        let action = &calculation.actions[case];
        let stress = |_: &Run, _: f64, r: V3| b.stress_elsewhere(calculation, site, r);
        let found = close(
            &calculation.runs,
            action,
            properties.centroid,
            properties.size,
            stress,
        );
        b.closure(case, &found);
        closure = Some(found);
        if let Some(kernel) = Builder::kernel_stress(calculation, &check.governing) {
            b.agreement(kernel, site.stress);
        }
    }
    b.handbook()?;
    b.replay_words(0);
    Ok(closure)
}

/// Puts the number of lines with a formula into the words on replay.
fn count_replays(b: &mut Builder<'_>) {
    let count = b
        .ledger
        .values()
        .filter(|value| b.ledger.formula_algebra(*value).is_some())
        .count();
    let words = super::proofs::replay_text(count);
    for part in b.parts.iter_mut().filter(|part| part.id == "opinions") {
        if let Some(Piece::Block(Block::Para { text })) = part.pieces.last_mut() {
            *text = plain(&words);
        }
    }
}

/// Canonical lines of the sheets used.
fn sheet_lines(calculation: &Calculation<'_>) -> Vec<String> {
    let mut lines = Vec::new();
    for outcome in &calculation.outcomes {
        if let Outcome::Assessed(asked) = outcome {
            let sheet = &asked.sheet;
            lines.push(format!("{}|{}", sheet.name.value, sheet.source.cited()));
            lines.extend(
                sheet
                    .steps
                    .iter()
                    .map(|step| format!("{}={}", step.name.value, step.formula.value)),
            );
            lines.extend(
                sheet
                    .checks
                    .iter()
                    .map(|check| format!("{}|{:?}", check.demand, check.capacity)),
            );
            lines.extend(
                sheet
                    .limits
                    .iter()
                    .map(|limit| format!("{}|{:?}|{}", limit.value, limit.side, limit.bound)),
            );
        }
    }
    lines
}

/// Every outcome of every case, as printed.
fn result_lines(calculation: &Calculation<'_>) -> Vec<String> {
    super::cases::rows(calculation)
        .into_iter()
        .map(|row| row.join("|"))
        .collect()
}

fn whole_trace(
    b: &Builder<'_>,
    calculation: &Calculation<'_>,
    checks: &[Check],
    identity: &Identity,
    closure: Option<&Closure>,
) -> Trace {
    let joint = calculation.joint;
    let properties = &calculation.properties;
    let spot = |at: &crate::criteria::Governing| super::stress::Spot {
        case: at.case,
        run: at.run,
        p: at.s,
        side: at.side,
    };
    let cases = (0..joint.loads.cases.len())
        .map(|case| {
            let action = calculation.actions[case];
            let (force, moment) = action.about(properties.centroid);
            trace::TraceCase {
                case: joint.loads.cases[case].name.value.clone(),
                level: joint.loads.cases[case].level.value.word(),
                force: trace::components(action.force),
                moment: trace::components(action.moment),
                at: trace::components(action.at),
                at_centroid: trace::AtCentroid {
                    force: trace::components(force),
                    moment: trace::components(moment),
                },
                checks: super::cases::of_case(calculation, case)
                    .into_iter()
                    .map(|(name, at, unit)| trace::TraceCheck {
                        check: name,
                        point: b.place_words(spot(at)),
                        position: trace::components(at.position),
                        demand: at.demand,
                        capacity: at.capacity,
                        unit,
                        utilisation: Some(at.utilisation),
                        margin: at.margin.value(),
                        reason: at.margin.reason().map(str::to_owned),
                    })
                    .collect(),
            }
        })
        .collect();
    Trace {
        note: joint.note.value.clone(),
        revision: joint.revision.value.clone(),
        identity: trace::TraceIdentity {
            calculation: identity.calculation.clone(),
            words: identity.words.clone(),
        },
        program: env!("CARGO_PKG_VERSION").to_owned(),
        units: trace::Units::of(joint.units.value),
        group: trace::Group {
            area: properties.area,
            centroid: trace::components(properties.centroid),
            ixx: properties.i_xx(),
            iyy: properties.i_yy(),
            ixy: properties.i_xy(),
            j: properties.j(),
            tensor: trace::rows(&properties.tensor),
        },
        cases,
        governing: checks.first().map(|check| trace::Governing {
            check: check_name(asked(calculation, check.outcome), check.check),
            case: joint.loads.cases[check.governing.case].name.value.clone(),
            point: b.place_words(spot(&check.governing)),
            margin: check.governing.margin.value(),
        }),
        closure: closure.map(|closure| trace::TraceClosure {
            force_residual: closure.force_residual(),
            moment_residual: closure.moment_residual(),
        }),
        steps: trace::steps(&b.ledger),
    }
}

impl Note {
    /// Completes the captions of a picture once it is drawn.
    pub fn set_caption(&mut self, picture: usize, view: &str, scale: &str, remarks: &[String]) {
        let picture = &self.pictures[picture];
        let caption = picture.caption(view, scale, remarks);
        let blocks = self
            .doc
            .sections
            .iter_mut()
            .flat_map(|section| &mut section.blocks);
        for block in blocks {
            if let Block::Figure(figure) = block
                && figure.name == picture.name()
            {
                figure.alt = picture.alt(&super::doc::words(&caption));
                figure.caption.clone_from(&caption);
            }
        }
    }

    /// The trace as JSON text.
    ///
    /// # Panics
    ///
    /// Never: a trace holds only finite numbers and texts.
    #[must_use]
    pub fn trace_json(&self) -> String {
        let mut text = serde_json::to_string_pretty(&self.trace).expect("a trace is plain data");
        text.push('\n');
        text
    }

    /// The table of all cases and checks as CSV (RFC 4180), the worst point of each.
    #[must_use]
    pub fn cases_csv(&self) -> String {
        super::cases::csv(&self.trace)
    }
}
