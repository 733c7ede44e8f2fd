//! From the note's pictures to drawings: with the sections and the unfolded weld, which are drawn
//! from the note's data as they are, the place where the figure room meets the note.

use super::compose::draw;
use super::drawing::Drawing;
use super::scene::{
    Axis, CheckPoint, Component, Dimension, Governing, Load, RunLine, Scene, Vectors,
};
use super::section::draw_sections;
use super::text::TextWidth;
use super::unfolded::draw_unfolded;
use crate::note::{Note, Picture, Sketch, SketchLoad, StressSketch};
use crate::weld::V3;

/// The scene of a sketch.
#[must_use]
pub fn scene(sketch: &Sketch) -> Scene {
    Scene {
        runs: sketch
            .runs
            .iter()
            .enumerate()
            .map(|(at, run)| RunLine {
                path: run.path.clone(),
                counted: run.counted.clone(),
                throat: run.throat,
                label: run.text.clone(),
                number: (at + 1).to_string(),
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
            .map(|dimension| Dimension {
                from: dimension.from,
                to: dimension.to,
                alike: dimension.alike.clone(),
                axis: Axis::ALL[dimension.axis],
                text: dimension.text.clone(),
                optional: dimension.optional,
            })
            .collect(),
        outlines: Vec::new(),
        units: sketch.units.to_owned(),
        planar: sketch.planar && !sketch.raised,
        faint: false,
        vectors: None,
    }
}

/// The scene of the stresses at the points: flat only where no stress leaves the plane.
#[must_use]
pub fn stress_scene(sketch: &StressSketch) -> Scene {
    let group = scene(&sketch.group);
    let runs = group.runs.into_iter().map(|run| RunLine {
        label: String::new(),
        ..run
    });
    let largest = sketch
        .vectors
        .iter()
        .map(|(_, f)| f.norm())
        .fold(0.0, f64::max);
    let in_plane = sketch
        .vectors
        .iter()
        .all(|(_, f)| f.z.abs() <= 1e-9 * largest);
    Scene {
        runs: runs.collect(),
        planar: sketch.group.planar && in_plane,
        faint: true,
        origin: None,
        vectors: Some(Vectors {
            arrows: sketch.vectors.clone(),
            unit: sketch.unit.clone(),
            first: sketch.resultant.clone(),
        }),
        ..group
    }
}

/// Draws every picture of a note, with its name, and completes the captions.
pub fn draw_note(note: &mut Note, fonts: &dyn TextWidth) -> Vec<(&'static str, Drawing)> {
    let pictures = 0..note.pictures.len();
    let draw = |at: usize| {
        let drawing = draw_picture(&note.pictures[at], fonts);
        note.set_caption(at, &drawing.view, &drawing.scale, &drawing.remarks);
        (note.pictures[at].name(), drawing)
    };
    pictures.map(draw).collect()
}

/// Draws a picture of the note.
#[must_use]
pub fn draw_picture(picture: &Picture, fonts: &dyn TextWidth) -> Drawing {
    match picture {
        Picture::Joint(sketch) => draw(&scene(sketch), fonts),
        Picture::Sections(sections) => draw_sections(sections, fonts),
        Picture::Stresses(sketch) => draw(&stress_scene(sketch), fonts),
        Picture::Demand(sketch) => draw_unfolded(sketch, fonts),
    }
}

/// A load; its distance is said where no dimension tells its place.
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
