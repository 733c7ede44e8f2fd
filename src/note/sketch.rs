//! What the drawing of the joint shows, as data with printed texts; drawn in a room above.

use super::builder::Builder;
use super::loads::CaseValues;
use super::points::AXES;
use crate::formula::Printed;
use crate::joint::SizeSpec;
use crate::quantity::Dim;
use crate::weld::{Run, Segment, V3};

/// The joint and its governing case, ready to be drawn.
#[derive(Clone, Debug, Default)]
pub struct Sketch {
    /// Runs: path, throat, text.
    pub runs: Vec<SketchRun>,
    /// Numbered points.
    pub points: Vec<(V3, String)>,
    /// Words for where the axes point.
    pub axes: [String; 3],
    /// Centroid of the group.
    pub centroid: V3,
    /// The load of the worked case.
    pub load: Option<SketchLoad>,
    /// The governing point and its text.
    pub governing: Option<(V3, String)>,
    /// Distances along an axis: from, to, axis, text.
    pub dimensions: Vec<(V3, V3, usize, String)>,
    /// Unit of length.
    pub units: &'static str,
    /// Whether the group is planar.
    pub planar: bool,
    /// Name of the case drawn.
    pub case: Option<String>,
}

/// A run of the drawing.
#[derive(Clone, Debug)]
pub struct SketchRun {
    /// Root as told.
    pub path: Segment,
    /// Effective throat.
    pub throat: f64,
    /// Text, such as `upper edge, leg 6`.
    pub text: String,
}

/// The load of the drawing: components with sign and printed text.
#[derive(Clone, Debug)]
pub struct SketchLoad {
    /// Point of application.
    pub at: V3,
    /// Text for the coordinate that the view hides.
    pub aside: String,
    /// Distance from the centroid in words.
    pub distance: String,
    /// Force components.
    pub force: [(f64, String); 3],
    /// Moment components about the point.
    pub moment: [(f64, String); 3],
}

/// Characters of a run's name that the drawing shows at most; it shortens further to fit.
const LONGEST_NAME: usize = 60;

/// A short decimal of a length for the drawing.
fn short(length: f64, size: f64) -> String {
    Printed::of(length, 4, 7, 1e-9 * size).text()
}

impl Builder<'_> {
    /// The drawing's data.
    pub(super) fn sketch(
        &self,
        case: Option<(usize, &CaseValues)>,
        governing: Option<(V3, String)>,
    ) -> Sketch {
        let units = self.joint.units.value;
        let size = self.properties.size;
        let centroid = self.properties.centroid;
        let runs = (0..self.runs.len())
            .map(|index| SketchRun {
                path: self.runs[index].told.clone(),
                throat: self.runs[index].throat,
                text: self.run_text(index),
            })
            .collect();
        let load = case.map(|(index, values)| {
            let at = self.actions[index].at;
            let text = |value, dim: Dim| {
                format!("{} {}", self.ledger.printed(value).text(), units.text(dim))
            };
            let part = |values: [_; 3], dim: Dim| {
                values.map(|value| (self.ledger.get(value).value, text(value, dim)))
            };
            let height = at.z - centroid.z;
            let raised = self.planar && height.abs() > 1e-9 * size;
            SketchLoad {
                at,
                aside: if raised {
                    format!("(P at z = {})", short(at.z, size))
                } else {
                    String::new()
                },
                distance: format!("{} from C", short((at - centroid).norm(), size)),
                force: part(values.force, Dim::FORCE),
                moment: part(values.moment, Dim::MOMENT),
            }
        });
        let axes = self
            .joint
            .frame
            .axes
            .each_ref()
            .map(|words| words.as_ref().map_or(String::new(), |w| w.value.clone()));
        Sketch {
            runs,
            points: self
                .points
                .iter()
                .map(|point| (point.at, point.number.to_string()))
                .collect(),
            axes,
            centroid,
            dimensions: self.dimensions(load.as_ref().map(|load| load.at)),
            load,
            governing,
            units: units.length(),
            planar: self.planar,
            case: case.map(|(index, _)| self.joint.loads.cases[index].name.value.clone()),
        }
    }

    /// The name of a run with its leg or throat.
    fn run_text(&self, index: usize) -> String {
        let spec = &self.joint.weld.runs[self.runs[index].spec];
        let size = match &spec.size {
            SizeSpec::Fillet { leg, .. } => format!("leg {}", leg.value.text()),
            SizeSpec::Unequal {
                on_base,
                on_attached,
            } => {
                format!(
                    "legs {} and {}",
                    on_base.value.text(),
                    on_attached.value.text()
                )
            }
            SizeSpec::Throat { throat, .. } | SizeSpec::Partial { throat } => {
                format!("throat {}", throat.value.text())
            }
            SizeSpec::Complete { .. } => "full penetration".to_owned(),
        };
        let size = size.replace(&format!(" {}", self.joint.units.value.length()), "");
        let name: String = self.runs[index].name.chars().take(LONGEST_NAME).collect();
        format!("{name}, {size}")
    }

    /// Overall width and depth of the group, and how far out the load stands.
    fn dimensions(&self, load: Option<V3>) -> Vec<(V3, V3, usize, String)> {
        let size = self.properties.size;
        let mut low = V3::repeat(f64::INFINITY);
        let mut high = V3::repeat(f64::NEG_INFINITY);
        for run in self.runs {
            let mut at: Vec<f64> = vec![0.0, 1.0];
            at.extend(run.told.extremes());
            for p in at {
                let point = run.told.point(p);
                low = low.inf(&point);
                high = high.sup(&point);
            }
        }
        let mut out = Vec::new();
        let turn = 2.0 * std::f64::consts::PI - 1e-9;
        if let (
            [
                Run {
                    told: Segment::Arc { radius, sweep, .. },
                    ..
                },
            ],
            true,
        ) = (self.runs, self.planar)
            && sweep.abs() > turn
        {
            // A circle is dimensioned once, by its diameter.
            let mut to = low;
            to.x = high.x;
            out.push((low, to, 0, format!("Ø {}", short(2.0 * radius, size))));
            return out;
        }
        for axis in 0..AXES.len() {
            let length = high[axis] - low[axis];
            if length > 1e-9 * size && !(self.planar && axis == 2) {
                let mut to = low;
                to[axis] = high[axis];
                out.push((low, to, axis, short(length, size)));
            }
        }
        if let (Some(load), true) = (load, self.planar) {
            for axis in [0, 1] {
                let from = low;
                let reach = load[axis] - from[axis];
                let beyond =
                    load[axis] > high[axis] + 1e-6 * size || load[axis] < low[axis] - 1e-6 * size;
                if beyond {
                    out.push((from, load, axis, short(reach.abs(), size)));
                }
            }
        }
        out
    }
}
