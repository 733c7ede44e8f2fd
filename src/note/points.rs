//! Numbered points of the group: the ends of runs as told, each place once.

use super::builder::{Builder, Cell, Line, Sheet, number_column, word_column};
use super::doc::Text;
use super::text::{piece, plain, symbol};
use crate::formula::{Draft, Origin, Symbol, Value};
use crate::joint::{PathSpec, RunSpec, Triple};
use crate::quantity::Dim;
use crate::weld::{Run, Segment, V3};

/// Points within this share of the group's size are one point.
const SAME: f64 = 1e-6;

/// A numbered point.
#[derive(Clone, Copy)]
pub(super) struct Point {
    /// Where it is.
    pub(super) at: V3,
    /// Its number on the drawing, from 1.
    pub(super) number: usize,
    /// Its coordinates in the ledger.
    pub(super) values: [Value; 3],
}

/// The letters of the axes.
pub(super) const AXES: [&str; 3] = ["x", "y", "z"];

/// How many of the three axes a group prints: two in the plane, three in space.
pub(super) fn axes(planar: bool) -> &'static [usize] {
    if planar { &[0, 1] } else { &[0, 1, 2] }
}

/// The ends of a told path.
pub(super) fn ends(path: &Segment) -> [V3; 2] {
    match path {
        Segment::Straight { a, b } => [*a, *b],
        Segment::Arc { .. } => [path.point(0.0), path.point(1.0)],
    }
}

/// The triples that a spec states as points, to print them as typed.
pub(super) fn stated(spec: &RunSpec) -> Vec<&Triple> {
    match &spec.path {
        PathSpec::Straight(points) => points.iter().collect(),
        PathSpec::Polyline { points, .. } => points.iter().collect(),
        PathSpec::Arc { centre, .. } | PathSpec::Circle { centre, .. } => vec![centre],
    }
}

impl Builder<'_> {
    /// The number of the point at a place, if one stands there.
    pub(super) fn point_at(&self, at: V3) -> Option<&Point> {
        let near = SAME * self.properties.size.max(f64::MIN_POSITIVE);
        self.points
            .iter()
            .find(|point| (point.at - at).norm() <= near)
    }

    /// Numbers the ends of all straight runs and open arcs.
    pub(super) fn number_points(&mut self) {
        for index in 0..self.runs.len() {
            let run = self.runs[index].clone();
            let [from, to] = ends(&run.told);
            let closed = matches!(run.told, Segment::Arc { .. })
                && (from - to).norm() <= SAME * self.properties.size;
            for at in if closed { vec![from] } else { vec![from, to] } {
                if self.point_at(at).is_none() {
                    let values = self.coordinates(&run, at);
                    let number = self.points.len() + 1;
                    self.points.push(Point { at, number, values });
                }
            }
        }
    }

    /// The coordinates of a new point: as typed where the file states them, else as laid out.
    fn coordinates(&mut self, run: &Run, at: V3) -> [Value; 3] {
        let spec = &self.joint.weld.runs[run.spec];
        let number = (self.points.len() + 1).to_string();
        let told = stated(spec)
            .into_iter()
            .find(|triple| (V3::from(triple.values()) - at).norm() <= 1e-12 * self.properties.size)
            .filter(|triple| triple.parts.iter().all(|part| part.number.len() <= 9))
            .cloned();
        let arc = matches!(run.told, Segment::Arc { .. });
        [0, 1, 2].map(|axis| {
            let symbol = Symbol::of(AXES[axis], &[&number]);
            let says = format!("Coordinate {} of point {number}", AXES[axis]);
            let id = format!("point-{number}.{}", AXES[axis]);
            match &told {
                Some(triple) => self.input(
                    id,
                    symbol,
                    &says,
                    &triple.parts[axis],
                    Origin::Input(triple.place.clone()),
                ),
                None => {
                    let method = match (&spec.stitch, arc, self.joint.weld.pattern.is_some()) {
                        (Some(_), _, _) => "laid out from the run, its bead and its pitch",
                        (None, true, _) => "on the arc, at its end",
                        (None, false, true) => "laid out from the pattern",
                        (None, false, false) => "laid out from the run as given",
                    };
                    let origin = Origin::Input(spec.place.clone());
                    self.ledger.found(
                        Draft {
                            id,
                            symbol,
                            says,
                            formula: method,
                            origin,
                            dim: None,
                        },
                        at[axis],
                        Dim::LENGTH,
                    )
                }
            }
        })
    }

    /// The table of points.
    pub(super) fn point_table(&mut self) {
        let unit = self.joint.units.value.length();
        let axes = axes(self.planar);
        let mut columns = vec![word_column("point")];
        columns.extend(
            axes.iter()
                .map(|axis| number_column(symbol(&Symbol::of(AXES[*axis], &[])), unit)),
        );
        columns.push(word_column("where"));
        let rows = (0..self.points.len())
            .map(|index| {
                let Point { at, number, values } = self.points[index];
                let mut cells = vec![Cell::Text(plain(&number.to_string()))];
                cells.extend(axes.iter().map(|axis| self.cell(values[*axis])));
                cells.push(Cell::Text(self.where_is(at)));
                Line {
                    id: format!("point-{number}"),
                    cells,
                    strong: false,
                }
            })
            .collect();
        self.table(Sheet {
            id: "points".to_owned(),
            caption: plain("Points of the weld group"),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
    }

    /// The runs that start or end at a place, in words.
    fn where_is(&self, at: V3) -> Text {
        let near = SAME * self.properties.size;
        let mut words: Vec<String> = Vec::new();
        for run in self.runs {
            let [from, to] = ends(&run.told);
            match ((from - at).norm() <= near, (to - at).norm() <= near) {
                (true, true) => words.push(format!("{}, where it closes", run.name)),
                (true, false) => words.push(format!("{}, start", run.name)),
                (false, true) => words.push(format!("{}, end", run.name)),
                (false, false) => {}
            }
        }
        vec![piece(&words.join("; "))]
    }
}
