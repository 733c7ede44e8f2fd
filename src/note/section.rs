//! The kinds of weld of a joint in section, as data for their drawing.

use super::builder::Builder;
use super::calculation::{Calculation, Outcome};
use super::words::path_names;
use crate::criteria::{FailurePath, partner};
use crate::joint::{RunSpec, SizeSpec};
use crate::weld::{Run, ThroatRule};

/// A kind of weld in section, square to the run.
#[derive(Clone, Debug)]
pub struct WeldSection {
    /// The runs of this kind, by their names.
    pub runs: Vec<String>,
    /// Attached part and base part, by their names.
    pub parts: [String; 2],
    /// What the weld is.
    pub shape: SectionShape,
    /// Dihedral angle between the faces (rad).
    pub angle: f64,
    /// The angle as text, where it is not a right one.
    pub angle_text: String,
    /// Root gap as told, if any.
    pub gap: Option<String>,
    /// Whether the other side of the attached part is welded alike.
    pub both: bool,
    /// The symbol of the effective throat, such as `t_a`, and its value as printed.
    pub throat: (String, String),
    /// The planes that the note checks.
    pub planes: Vec<FailurePath>,
    /// Their names.
    pub checked: Vec<String>,
}

/// The shape of a weld in section.
#[derive(Clone, Debug)]
pub enum SectionShape {
    /// Fillet: legs on the base and on the attached part, values and texts.
    Fillet([(f64, String); 2]),
    /// Fillet of a stated throat.
    Throat(f64),
    /// Partial penetration groove of a stated throat.
    Partial(f64),
    /// Complete penetration, a tee or a butt.
    Complete {
        /// Whether the joint is a tee.
        tee: bool,
    },
}

/// Names in a list: parted by semicolons where a name has a comma.
pub(super) fn listed(names: &[String]) -> String {
    names.join(&format!("{} ", list_mark(names)))
}

/// What parts the names of a list.
#[must_use]
pub fn list_mark(names: &[String]) -> char {
    if names.iter().any(|name| name.contains(',')) {
        ';'
    } else {
        ','
    }
}

impl SectionShape {
    pub(super) fn words(&self) -> String {
        match self {
            Self::Fillet([base, attached]) if base.1 == attached.1 => {
                format!("fillet, leg {}", base.1)
            }
            Self::Fillet([base, attached]) => {
                format!(
                    "fillet, leg {} on the base, {} on the attached part",
                    base.1, attached.1
                )
            }
            Self::Throat(_) => "fillet of stated throat".to_owned(),
            Self::Partial(_) => "partial penetration".to_owned(),
            Self::Complete { tee: true } => "complete penetration, tee".to_owned(),
            Self::Complete { tee: false } => "complete penetration, butt".to_owned(),
        }
    }
}

impl Builder<'_> {
    /// The kinds of weld in section, each once, in file order.
    pub(super) fn weld_sections(&self, calculation: &Calculation<'_>) -> Vec<WeldSection> {
        let of_kind = |kind: Vec<usize>| {
            let mut runs: Vec<String> = Vec::new();
            for run in &kind {
                let name = &self.runs[*run].name;
                if !runs.contains(name) {
                    runs.push(name.clone());
                }
            }
            let first = self.weld_section(calculation, kind[0]);
            WeldSection { runs, ..first }
        };
        self.weld_kinds().into_iter().map(of_kind).collect()
    }

    /// The runs that look the same in section, kind by kind; no kind is without one.
    pub(super) fn weld_kinds(&self) -> Vec<Vec<usize>> {
        let mut kinds: Vec<Vec<usize>> = Vec::new();
        for (index, run) in self.runs.iter().enumerate() {
            let mut known = kinds.iter_mut();
            match known.find(|kind| self.alike(&self.runs[kind[0]], run)) {
                Some(kind) => kind.push(index),
                None => kinds.push(vec![index]),
            }
        }
        kinds
    }

    /// Whether two runs look the same in section.
    fn alike(&self, one: &Run, other: &Run) -> bool {
        let spec = |run: &Run| &self.joint.weld.runs[run.spec];
        let told = |spec: &RunSpec| {
            (
                spec.gap.as_ref().map(|gap| gap.value.text()),
                spec.both_sides.is_some(),
            )
        };
        one.rule == other.rule
            && one.joins == other.joins
            && (one.angle - other.angle).abs() < 1e-9
            && told(spec(one)) == told(spec(other))
    }

    fn weld_section(&self, calculation: &Calculation<'_>, index: usize) -> WeldSection {
        let run = &self.runs[index];
        let spec = &self.joint.weld.runs[run.spec];
        let unit = format!(" {}", self.joint.units.value.length());
        let bare = |text: String| text.replace(&unit, "");
        let leg = |given: &crate::joint::GivenAt| (given.value.value, bare(given.value.text()));
        let shape = match &spec.size {
            SizeSpec::Fillet { leg: told, .. } => SectionShape::Fillet([leg(told), leg(told)]),
            SizeSpec::Unequal {
                on_base,
                on_attached,
            } => SectionShape::Fillet([leg(on_base), leg(on_attached)]),
            SizeSpec::Throat { .. } => SectionShape::Throat(run.throat),
            SizeSpec::Partial { .. } => SectionShape::Partial(run.throat),
            SizeSpec::Complete { tee, .. } => SectionShape::Complete { tee: *tee },
        };
        let right = (run.angle - std::f64::consts::FRAC_PI_2).abs() < 1e-9;
        let part = |at: usize| &self.joint.parts[run.joins[at]];
        let throat = self.run_values[index].get("t");
        let throat = throat.map_or((String::new(), String::new()), |value| {
            let symbol = self.ledger.get(*value).symbol.plain();
            (symbol, self.ledger.printed(*value).text())
        });
        let mut planes: Vec<FailurePath> = Vec::new();
        for outcome in &calculation.outcomes {
            if let Outcome::Assessed(asked) = outcome
                && !asked.strength.is_empty()
                && !asked.left_out.contains(&index)
            {
                planes.extend(&asked.sheet.covers);
            }
        }
        planes.sort_unstable();
        planes.dedup();
        // Limits on size are no plane through the weld or the parts.
        planes.retain(|path| *path != FailurePath::SizeAndLength);
        WeldSection {
            runs: Vec::new(),
            parts: [0, 1].map(|at| part(at).name.value.clone()),
            shape,
            angle: run.angle,
            angle_text: if right || matches!(run.rule, ThroatRule::Complete { .. }) {
                String::new()
            } else {
                format!(
                    "{}°",
                    crate::formula::Printed::of(run.angle.to_degrees(), 5, 7, 1e-6).text()
                )
            },
            gap: spec.gap.as_ref().map(|gap| bare(gap.value.text())),
            both: spec.both_sides.is_some() || partner(self.runs, index).is_some(),
            throat,
            checked: path_names(&planes),
            planes,
        }
    }
}
