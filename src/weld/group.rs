//! Lays out the runs of a joint: sides, legs, beads, corners, ends, effective throats.

use super::path::{Outline, Refusal, beads, outline};
use super::throat::{FitUp, Size, throat_rule};
use super::twins::mark_twins;
use super::{End, Run, Segment, ThroatRule, V3, WeldError, WeldErrorKind, WeldFaults};
use super::{ends, overlap, toe};
use crate::joint::{Joint, Part, RunSpec, SizeSpec, WeldSpec};
use crate::quantity::UnitSet;
use crate::source::Told;
use std::f64::consts::{FRAC_PI_2, PI};

/// A run on its way, before the ends are known.
#[derive(Clone, Debug)]
pub(super) struct Piece {
    pub(super) name: String,
    pub(super) spec: usize,
    pub(super) told: Segment,
    pub(super) rule: ThroatRule,
    /// Leg as told, for end reductions (length).
    pub(super) leg: Option<f64>,
    pub(super) normal: V3,
    pub(super) toe: Option<f64>,
    pub(super) angle: f64,
    pub(super) joins: [usize; 2],
    /// Which ends lie inside the told run: corners of a polyline, a closed path.
    pub(super) inner: [bool; 2],
    pub(super) is_bead: bool,
    pub(super) side: Side,
}

/// Which of two beads on opposite sides of the attached plate a piece is.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub(super) enum Side {
    Only,
    Near,
    Far,
}

/// Lays out the runs of a joint, in file order.
///
/// Polylines become a run for each leg, stitches one for each bead, two-sided runs one for each
/// side. Where ends of runs meet, the weld goes on round the corner.
///
/// # Errors
///
/// [`WeldFaults`] with every fault found: sizes without a throat, paths without length, toes that
/// tell no side, ends that leave nothing, runs that lie on each other.
pub fn lay_runs(joint: &Joint) -> Result<Vec<Run>, WeldFaults> {
    lay_weld(&joint.weld, &joint.parts, joint.units.value)
}

/// [`lay_runs`] on what it needs of a joint.
///
/// # Errors
///
/// As [`lay_runs`].
pub fn lay_weld(weld: &WeldSpec, parts: &[Part], units: UnitSet) -> Result<Vec<Run>, WeldFaults> {
    let mut faults: Vec<Refusal> = Vec::new();
    let outlines: Vec<Option<Outline>> = weld
        .runs
        .iter()
        .map(|spec| outline(spec).map_err(|fault| faults.push(fault)).ok())
        .collect();
    let (centroid, size) = measure(&outlines);
    let mut pieces = Vec::new();
    for (index, (spec, outline)) in weld.runs.iter().zip(&outlines).enumerate() {
        let Some(outline) = outline else { continue };
        let cutter = Cutter {
            index,
            spec,
            parts,
            units,
            centroid,
            size,
        };
        match cutter.pieces(outline) {
            Ok(found) => pieces.extend(found),
            Err(fault) => faults.push(fault),
        }
    }
    let mut runs = finish(&pieces, weld, size, &mut faults);
    mark_twins(&mut runs, parts);
    find_overlaps(&runs, &pieces, weld, size, &mut faults);
    let fault = |(kind, place)| WeldError { kind, place, units };
    match (
        faults.is_empty(),
        runs.is_empty(),
        weld.pattern.as_ref().map(|pattern| &pattern.place),
    ) {
        (false, ..) => Err(WeldFaults(faults.into_iter().map(fault).collect())),
        (true, true, Some(place)) => Err(WeldFaults(vec![fault((
            WeldErrorKind::NoRuns,
            place.clone(),
        ))])),
        // A joint without runs and without pattern has no place to point at; the reader refuses it.
        (true, ..) => Ok(runs),
    }
}

/// Centroid of all paths as lines of equal throat, and the group's size (length).
fn measure(outlines: &[Option<Outline>]) -> (V3, f64) {
    let segments = || {
        outlines
            .iter()
            .flatten()
            .flat_map(|outline| &outline.segments)
    };
    let mut length = 0.0;
    let mut first = V3::zeros();
    for segment in segments() {
        let line = segment.integrals();
        length += line.length;
        first += line.first_about_origin();
    }
    let centroid = if length > 0.0 {
        first / length
    } else {
        V3::zeros()
    };
    (centroid, extent(segments()))
}

/// Diagonal of the box around paths (length).
pub(super) fn extent<'a>(segments: impl Iterator<Item = &'a Segment>) -> f64 {
    let mut low = V3::repeat(f64::INFINITY);
    let mut high = V3::repeat(f64::NEG_INFINITY);
    for segment in segments {
        for p in segment.extremes().into_iter().chain([0.0, 1.0]) {
            let point = segment.point(p);
            low = low.inf(&point);
            high = high.sup(&point);
        }
    }
    if low.x.is_finite() {
        (high - low).norm()
    } else {
        0.0
    }
}

/// Cuts one told run into pieces.
struct Cutter<'a> {
    index: usize,
    spec: &'a RunSpec,
    parts: &'a [Part],
    units: UnitSet,
    centroid: V3,
    size: f64,
}

impl Cutter<'_> {
    fn pieces(&self, outline: &Outline) -> Result<Vec<Piece>, Refusal> {
        let joins = [self.part(0)?, self.part(1)?];
        let angle = self
            .spec
            .between
            .as_ref()
            .map_or(FRAC_PI_2, |told| told.value.value);
        let toes = self.toes(outline)?;
        let Some(both) = &self.spec.both_sides else {
            return self.side(outline, Side::Only, &toes, angle, joins);
        };
        let skewed = (angle - FRAC_PI_2).abs() > 1e-9;
        if skewed && toes.iter().any(Option::is_none) {
            return Err((WeldErrorKind::SkewedSides { angle }, both.place.clone()));
        }
        let apart = both.value.as_ref().map_or(0.0, |given| given.value);
        let mut found = Vec::new();
        for (side, sign) in [(Side::Near, 1.0), (Side::Far, -1.0)] {
            let toes: Vec<Option<f64>> = toes
                .iter()
                .map(|toe| Some(toe.unwrap_or(1.0) * sign))
                .collect();
            // The plate makes the supplement of the angle on its far side.
            let angle = if skewed && side == Side::Far {
                PI - angle
            } else {
                angle
            };
            let moved = Self::beside(outline, &toes, apart)
                .ok_or_else(|| (WeldErrorKind::Apart { apart }, both.place.clone()))?;
            found.extend(self.side(&moved, side, &toes, angle, joins)?);
        }
        Ok(found)
    }

    /// The outline moved by half of `apart` toward its toes.
    fn beside(outline: &Outline, toes: &[Option<f64>], apart: f64) -> Option<Outline> {
        if apart.is_nan() || apart < 0.0 {
            return None;
        }
        if apart < f64::MIN_POSITIVE {
            return Some(outline.clone());
        }
        let sign = toes[0]?;
        // Legs with toes on different sides of their n̂ cannot be moved as one outline.
        if toes.iter().any(|toe| *toe != Some(sign)) {
            return None;
        }
        outline.beside(sign * apart / 2.0)
    }

    fn part(&self, which: usize) -> Result<usize, Refusal> {
        let name = &self.spec.joins[which];
        self.parts
            .iter()
            .position(|part| part.name.value == name.value)
            .ok_or_else(|| {
                (
                    WeldErrorKind::UnknownPart {
                        part: name.value.clone(),
                    },
                    name.place.clone(),
                )
            })
    }

    fn toes(&self, outline: &Outline) -> Result<Vec<Option<f64>>, Refusal> {
        let Some(Told { value, place }) = &self.spec.toe else {
            return Ok(vec![None; outline.segments.len()]);
        };
        (0..outline.segments.len())
            .map(|index| {
                toe::side(*value, outline, index, self.centroid, self.size)
                    .map(Some)
                    .map_err(|kind| (kind, place.clone()))
            })
            .collect()
    }

    /// The pieces of one side: a run for each leg, or for each bead of it.
    fn side(
        &self,
        outline: &Outline,
        side: Side,
        toes: &[Option<f64>],
        angle: f64,
        joins: [usize; 2],
    ) -> Result<Vec<Piece>, Refusal> {
        let (rule, leg) = self.size(angle, joins)?;
        let count = outline.segments.len();
        let mut found = Vec::new();
        for (index, segment) in outline.segments.iter().enumerate() {
            let piece = Piece {
                name: self.name(index, count, side),
                spec: self.index,
                told: segment.clone(),
                rule: rule.clone(),
                leg,
                normal: outline.normals[index],
                toe: toes[index],
                angle,
                joins,
                inner: [
                    index > 0 || outline.closed,
                    index + 1 < count || outline.closed,
                ],
                is_bead: false,
                side,
            };
            match &self.spec.stitch {
                None => found.push(piece),
                Some(_) => found.extend(self.stitched(&piece, outline.closed && count == 1)?),
            }
        }
        Ok(found)
    }

    fn stitched(&self, piece: &Piece, closed: bool) -> Result<Vec<Piece>, Refusal> {
        let Some(stitch) = &self.spec.stitch else {
            return Ok(vec![piece.clone()]);
        };
        let (bead, pitch) = (stitch.bead.value.value, stitch.pitch.value.value);
        let ranges = beads(&piece.told, bead, pitch, closed).map_err(|kind| {
            let place = if matches!(kind, WeldErrorKind::Pitch { .. }) {
                &stitch.pitch
            } else {
                &stitch.bead
            };
            (kind, place.place.clone())
        })?;
        let bead = |(number, [from, to]): (usize, [f64; 2])| Piece {
            name: format!("{}, bead {}", piece.name, number + 1),
            told: piece.told.part(from, to),
            inner: [false; 2],
            is_bead: true,
            ..piece.clone()
        };
        Ok(ranges.into_iter().enumerate().map(bead).collect())
    }

    fn name(&self, index: usize, count: usize, side: Side) -> String {
        let told = &self.spec.name.value;
        let leg = if count > 1 {
            format!(" ({})", index + 1)
        } else {
            String::new()
        };
        let side = match side {
            Side::Only => "",
            Side::Near => ", near side",
            Side::Far => ", far side",
        };
        format!("{told}{leg}{side}")
    }

    /// The throat rule, and the leg as told.
    fn size(&self, angle: f64, joins: [usize; 2]) -> Result<(ThroatRule, Option<f64>), Refusal> {
        let spec = self.spec;
        let mut told_leg = None;
        let (size, size_place) = match &spec.size {
            SizeSpec::Fillet { leg, measured } => (
                Size::Equal {
                    leg: leg.value.value,
                    measured: *measured,
                },
                &leg.place,
            ),
            SizeSpec::Unequal {
                on_base,
                on_attached,
            } => {
                let (on_base_leg, on_attached) = (on_base.value.value, on_attached.value.value);
                (
                    Size::Unequal {
                        on_base: on_base_leg,
                        on_attached,
                    },
                    &on_base.place,
                )
            }
            SizeSpec::Throat { throat, leg } => {
                told_leg = leg.as_ref().map(|leg| leg.value.value);
                (Size::Throat(throat.value.value), &throat.place)
            }
            SizeSpec::Partial { throat } => (Size::Partial(throat.value.value), &throat.place),
            SizeSpec::Complete { tee, place } => {
                let (thickness, part) = self
                    .thickness(*tee, joins)
                    .map_err(|kind| (kind, place.clone()))?;
                (Size::Complete { thickness, part }, place)
            }
        };
        let gap = spec.gap.as_ref();
        let extra = spec.penetration.as_ref().map(|(extra, _)| extra);
        let value =
            |told: Option<&crate::joint::GivenAt>| told.map_or(0.0, |told| told.value.value);
        let fit = FitUp {
            angle,
            gap: value(gap),
            extra: value(extra),
        };
        let rule = throat_rule(size, fit, self.units).map_err(|kind| {
            let between = spec.between.as_ref();
            let told = match &kind {
                WeldErrorKind::Angle { .. } => between.map(|told| &told.place),
                WeldErrorKind::GapNegative { .. }
                | WeldErrorKind::GapTooWide { .. }
                | WeldErrorKind::GapTakesLeg { .. }
                | WeldErrorKind::GapOnStated { .. } => gap.map(|told| &told.place),
                WeldErrorKind::PenetrationOnStated { .. } => extra.map(|told| &told.place),
                _ => None,
            };
            (kind, told.unwrap_or(size_place).clone())
        })?;
        let leg = rule.leg().or(told_leg);
        Ok((rule, leg))
    }

    /// The thickness that a complete penetration weld takes: in a tee the attached part's, else the
    /// thinner part's.
    fn thickness(&self, tee: bool, joins: [usize; 2]) -> Result<(f64, usize), WeldErrorKind> {
        let known = |part: usize| {
            let part_spec = &self.parts[part];
            part_spec
                .thickness
                .as_ref()
                .map(|told| (told.value.value, part))
                .ok_or_else(|| WeldErrorKind::ThicknessUnknown {
                    part: part_spec.name.value.clone(),
                })
        };
        let attached = known(joins[0])?;
        if tee {
            return Ok(attached);
        }
        let base = known(joins[1])?;
        Ok(if base.0 < attached.0 { base } else { attached })
    }
}

/// Decides the ends, shortens the paths, and makes the runs.
fn finish(pieces: &[Piece], weld: &WeldSpec, size: f64, faults: &mut Vec<Refusal>) -> Vec<Run> {
    let corners = ends::find_corners(pieces, size);
    let mut runs = Vec::new();
    for (piece, corner) in pieces.iter().zip(corners) {
        let spec = &weld.runs[piece.spec];
        let decide = |which: usize| ends::end(piece, which, corner[which], spec);
        match (decide(0), decide(1)) {
            (Ok(start), Ok(end)) => match shortened(piece, [start, end]) {
                Ok(run) => runs.push(run),
                Err(kind) => faults.push((kind, spec.place.clone())),
            },
            (start, end) => faults.extend([start.err(), end.err()].into_iter().flatten()),
        }
    }
    faults.dedup();
    runs
}

fn shortened(piece: &Piece, ends: [End; 2]) -> Result<Run, WeldErrorKind> {
    let [start, end] = ends.map(ends::shortening);
    let path = piece
        .told
        .trimmed(start, end)
        .ok_or_else(|| WeldErrorKind::NothingLeft {
            run: piece.name.clone(),
            length: piece.told.length(),
            less: start + end,
        })?;
    Ok(Run {
        name: piece.name.clone(),
        spec: piece.spec,
        told: piece.told.clone(),
        path,
        throat: piece.rule.throat(),
        rule: piece.rule.clone(),
        normal: piece.normal,
        toe: piece.toe,
        angle: piece.angle,
        joins: piece.joins,
        ends,
        one_of_two: piece.side != Side::Only,
    })
}

/// Refuses runs that lie on each other, unless they are the two beads of one plate.
fn find_overlaps(
    runs: &[Run],
    pieces: &[Piece],
    weld: &WeldSpec,
    size: f64,
    faults: &mut Vec<Refusal>,
) {
    if runs.len() != pieces.len() {
        return;
    }
    for (j, later) in runs.iter().enumerate() {
        for (i, earlier) in runs[..j].iter().enumerate() {
            if pieces[i].spec == pieces[j].spec && pieces[i].side != pieces[j].side {
                continue;
            }
            let overlap = overlap::overlap(&earlier.told, &later.told, size);
            if overlap > 0.0 {
                let (first, second) = (earlier.name.clone(), later.name.clone());
                let kind = WeldErrorKind::Coincident {
                    first,
                    second,
                    overlap,
                };
                faults.push((kind, weld.runs[later.spec].place.clone()));
            }
        }
    }
}
