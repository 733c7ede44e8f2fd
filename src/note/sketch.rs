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
    /// Distances along an axis.
    pub dimensions: Vec<SketchDimension>,
    /// Unit of length.
    pub units: &'static str,
    /// Whether the group is planar.
    pub planar: bool,
    /// Whether the load stands high over a planar group, so that a view in space shows its arm.
    pub raised: bool,
    /// Name of the case drawn.
    pub case: Option<String>,
}

/// A run of the drawing.
#[derive(Clone, Debug)]
pub struct SketchRun {
    /// Root as told.
    pub path: Segment,
    /// The part that is counted, where a stop cuts an end off.
    pub counted: Option<Segment>,
    /// Effective throat.
    pub throat: f64,
    /// Text, such as `upper edge, leg 6`.
    pub text: String,
}

/// A distance along an axis.
#[derive(Clone, Debug)]
pub struct SketchDimension {
    /// First point.
    pub from: V3,
    /// Second point.
    pub to: V3,
    /// Other pairs of points that show the same distance as straight.
    pub alike: Vec<(V3, V3)>,
    /// Number of the axis.
    pub axis: usize,
    /// The distance as printed.
    pub text: String,
    /// Whether it is left out where it would crowd the drawing.
    pub optional: bool,
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
/// Further pairs of points that a dimension may be drawn between.
const MOST_ALIKE: usize = 7;

/// A load higher over the group than this part of the group's size is high, if it stands aside of the
/// centroid by less than this part of its height.
const HIGH: f64 = 0.15;
const BESIDE: f64 = 0.5;

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
                counted: self.counted(index),
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
            let hidden = self.planar && !self.raised(at) && at.z.abs() > 1e-9 * size;
            SketchLoad {
                at,
                aside: if hidden {
                    format!("z_P = {} {}", short(at.z, size), units.length())
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
            raised: load.as_ref().is_some_and(|load| self.raised(load.at)),
            load,
            governing,
            units: units.length(),
            planar: self.planar,
            case: case.map(|(index, _)| self.joint.loads.cases[index].name.value.clone()),
        }
    }

    /// The part of a run that is counted, if it is not the whole.
    pub(super) fn counted(&self, index: usize) -> Option<Segment> {
        let run = &self.runs[index];
        let cut = run.told.length() - run.path.length();
        (cut > 1e-9 * self.properties.size).then(|| run.path.clone())
    }

    /// The name of a run with its leg or throat, its radius, and its beads; a further bead of a run
    /// in stitches is named alone.
    fn run_text(&self, index: usize) -> String {
        let run = &self.runs[index];
        let spec = &self.joint.weld.runs[run.spec];
        let unit = format!(" {}", self.joint.units.value.length());
        let bare = |text: String| text.replace(&unit, "");
        let name: String = run.name.chars().take(LONGEST_NAME).collect();
        let mut parts = vec![name, bare(size_words(&spec.size))];
        parts.extend(self.radius_words(run));
        if let Some(stitch) = &spec.stitch {
            if self.runs[..index]
                .iter()
                .any(|other| other.spec == run.spec)
            {
                parts.truncate(1);
            } else {
                let (bead, pitch) = (stitch.bead.value.text(), stitch.pitch.value.text());
                parts.push(bare(format!("beads {bead}, pitch {pitch}")));
            }
        }
        parts.join(", ")
    }

    /// `R 60` of an arc, `Ø 120` of a circle; the lone circle has a dimension.
    fn radius_words(&self, run: &Run) -> Option<String> {
        let Segment::Arc { radius, sweep, .. } = &run.told else {
            return None;
        };
        let size = self.properties.size;
        if !full_turn(*sweep) {
            return Some(format!("R {}", short(*radius, size)));
        }
        let lone = self.lone_circle().is_some();
        (!lone).then(|| format!("Ø {}", short(2.0 * radius, size)))
    }

    /// Whether a load stands over a planar group, high against its distance from the centroid.
    fn raised(&self, load: V3) -> bool {
        let arm = load - self.properties.centroid;
        let aside = crate::quantity::real::hypot(arm.x, arm.y);
        self.planar && arm.z.abs() > HIGH * self.properties.size && aside < BESIDE * arm.z.abs()
    }

    /// Overall sizes of the group, how far out the load stands, and where the centroid lies.
    fn dimensions(&self, load: Option<V3>) -> Vec<SketchDimension> {
        let raised = load.is_some_and(|load| self.raised(load));
        let mut out = match self.lone_circle() {
            Some(diameter) => vec![diameter],
            None => self.extents(),
        };
        match load {
            Some(load) if raised => out.push(self.height(load)),
            Some(load) if self.planar => out.extend(self.overhangs(load)),
            _ => {}
        }
        if self.planar && !raised {
            out.extend(self.centroid_place());
        }
        out
    }

    fn dimension(&self, from: V3, to: V3, axis: usize) -> SketchDimension {
        let text = short((to[axis] - from[axis]).abs(), self.properties.size);
        SketchDimension {
            from,
            to,
            alike: Vec::new(),
            axis,
            text,
            optional: false,
        }
    }

    /// The diameter of a group that is one full circle.
    fn lone_circle(&self) -> Option<SketchDimension> {
        let [
            Run {
                told:
                    Segment::Arc {
                        centre,
                        radius,
                        sweep,
                        ..
                    },
                ..
            },
        ] = self.runs
        else {
            return None;
        };
        let reach = V3::x() * *radius;
        let mut diameter = self.dimension(centre - reach, centre + reach, 0);
        diameter.text = format!("Ø {}", diameter.text);
        (self.planar && full_turn(*sweep)).then_some(diameter)
    }

    /// The group's extent along each axis, between points of runs that lie as straight along it as
    /// any do.
    fn extents(&self) -> Vec<SketchDimension> {
        let size = self.properties.size;
        let points = self.extreme_points();
        let axes = if self.planar { 0..2 } else { 0..AXES.len() };
        let extent = |axis: usize| {
            let along = points.iter().map(|point| point[axis]);
            let low = along.clone().fold(f64::INFINITY, f64::min);
            let high = along.fold(f64::NEG_INFINITY, f64::max);
            let at = |level: f64| {
                let level = move |point: &&V3| (point[axis] - level).abs() < 1e-6 * size;
                points.iter().filter(level)
            };
            let pairs = at(low).flat_map(|from| at(high).map(move |to| (*from, *to)));
            let off = |pair: &(V3, V3)| (pair.1 - pair.0).norm();
            let straightest = pairs
                .clone()
                .map(|pair| off(&pair))
                .fold(f64::MAX, f64::min);
            let mut alike = pairs.filter(|pair| off(pair) < straightest + 1e-6 * size);
            let (from, to) = alike.next()?;
            (high - low > 1e-9 * size).then(|| SketchDimension {
                alike: alike.take(MOST_ALIKE).collect(),
                ..self.dimension(from, to, axis)
            })
        };
        axes.filter_map(extent).collect()
    }

    /// Ends of all runs, and where arcs reach furthest.
    fn extreme_points(&self) -> Vec<V3> {
        let of_run = |run: &Run| {
            let mut at: Vec<f64> = vec![0.0, 1.0];
            at.extend(run.told.extremes());
            at.into_iter()
                .map(|p| run.told.point(p))
                .collect::<Vec<V3>>()
        };
        self.runs.iter().flat_map(of_run).collect()
    }

    /// The height of a load over the plane of the group, from its foot up.
    fn height(&self, load: V3) -> SketchDimension {
        let plane = self.properties.centroid.z;
        let foot = V3::new(load.x, load.y, plane);
        // From a point of the group beside the foot the height shows as well.
        let near = 1e-6 * self.properties.size;
        let beside = |point: &V3| {
            let apart = [0, 1].map(|axis: usize| (point[axis] - load[axis]).abs() > near);
            apart[0] != apart[1]
        };
        let points = self.extreme_points().into_iter().filter(beside);
        let mut height = SketchDimension {
            alike: points.map(|point| (point, load)).take(MOST_ALIKE).collect(),
            ..self.dimension(foot, load, 2)
        };
        // Where the plane is that of the origin, the height is the coordinate.
        if plane.abs() < 1e-9 * self.properties.size {
            height.text = format!("z_P = {}", short(load.z, self.properties.size));
        }
        height
    }

    /// How far a load stands beyond the group, from the group's lower left corner.
    fn overhangs(&self, load: V3) -> Vec<SketchDimension> {
        let near = 1e-6 * self.properties.size;
        let points = self.extreme_points();
        let low = points
            .iter()
            .fold(V3::repeat(f64::INFINITY), |low, p| low.inf(p));
        let high = points
            .iter()
            .fold(V3::repeat(f64::NEG_INFINITY), |high, p| high.sup(p));
        let beyond =
            |axis: &usize| load[*axis] > high[*axis] + near || load[*axis] < low[*axis] - near;
        [0, 1]
            .into_iter()
            .filter(beyond)
            .map(|axis| self.dimension(low, load, axis))
            .collect()
    }

    /// The coordinates of the centroid, where they are not 0.
    fn centroid_place(&self) -> Vec<SketchDimension> {
        let centroid = self.properties.centroid;
        let place = |axis: usize| SketchDimension {
            text: format!(
                "{}_c = {}",
                AXES[axis],
                short(centroid[axis], self.properties.size)
            ),
            optional: true,
            ..self.dimension(V3::zeros(), centroid, axis)
        };
        let told = |axis: &usize| centroid[*axis].abs() > 1e-6 * self.properties.size;
        [0, 1].into_iter().filter(told).map(place).collect()
    }
}

/// The leg or throat of a run.
fn size_words(size: &SizeSpec) -> String {
    match size {
        SizeSpec::Fillet { leg, .. } => format!("leg {}", leg.value.text()),
        SizeSpec::Unequal {
            on_base,
            on_attached,
        } => {
            let (base, attached) = (on_base.value.text(), on_attached.value.text());
            format!("legs {base} and {attached}")
        }
        SizeSpec::Throat { throat, .. } | SizeSpec::Partial { throat } => {
            format!("throat {}", throat.value.text())
        }
        SizeSpec::Complete { .. } => "complete penetration".to_owned(),
    }
}

/// Whether a sweep is a full turn.
fn full_turn(sweep: f64) -> bool {
    sweep.abs() > 2.0 * std::f64::consts::PI - 1e-9
}
