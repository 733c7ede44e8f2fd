//! From the note's sketch to a scene: the only place where the figure room meets the note.

use super::scene::{Axis, CheckPoint, Component, Dimension, Governing, Load, RunLine, Scene};
use crate::note::{Sketch, SketchLoad};
use crate::weld::V3;

/// The scene of a sketch.
#[must_use]
pub fn scene(sketch: &Sketch) -> Scene {
    Scene {
        runs: sketch
            .runs
            .iter()
            .map(|run| RunLine {
                path: run.path.clone(),
                throat: run.throat,
                label: run.text.clone(),
            })
            .collect(),
        points: sketch
            .points
            .iter()
            .map(|(at, label)| CheckPoint {
                at: *at,
                label: label.clone(),
            })
            .collect(),
        origin: Some(V3::zeros()),
        axes: sketch.axes.clone(),
        centroid: Some(sketch.centroid),
        loads: sketch.load.iter().map(load).collect(),
        governing: sketch.governing.as_ref().map(|(at, label)| Governing {
            at: *at,
            label: label.clone(),
        }),
        dimensions: sketch
            .dimensions
            .iter()
            .map(|(from, to, axis, text)| Dimension {
                from: *from,
                to: *to,
                axis: Axis::ALL[*axis],
                text: text.clone(),
            })
            .collect(),
        outlines: Vec::new(),
        units: sketch.units.to_owned(),
        planar: sketch.planar,
    }
}

fn load(load: &SketchLoad) -> Load {
    let parts = |values: &[(f64, String); 3]| {
        Axis::ALL
            .into_iter()
            .map(|axis| {
                let (value, text) = &values[axis.index()];
                Component {
                    axis,
                    value: *value,
                    text: text.clone(),
                }
            })
            .collect()
    };
    Load {
        at: load.at,
        label: "P".to_owned(),
        aside: load.aside.clone(),
        force: parts(&load.force),
        moment: parts(&load.moment),
        distance: load.distance.clone(),
    }
}
