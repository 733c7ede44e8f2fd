//! Vectors at points, such as stresses, as arrows to one scale.

use super::canvas::strokes;
use super::compose::Sheet;
use super::drawing::{Item, MarkKind, Path, Span, Stroke, Style};
use super::place::{around, dearer, rank};
use super::rect::Rect;
use super::shape::small_head;
use super::triad::centroid_rects;
use super::unfolded::plain_number;
use super::view::unit;
use crate::quantity::real::ten_to;

/// Length of the longest vector, and of the shortest that is drawn (mm).
const LONGEST: f64 = 24.0;
const LEAST: f64 = 0.6;
/// A vector that a view shows by less than this part of itself points at the eye.
const SEEN: f64 = 0.1;

impl Sheet<'_> {
    /// Arrows at their points, the longest within bounds, to a scale of 1, 2 or 5 and their tenfolds.
    pub(super) fn vectors(&mut self) {
        let Some(vectors) = &self.scene.vectors else {
            return;
        };
        let lengths = vectors.arrows.iter().map(|(_, f)| f.norm());
        let longest = lengths.fold(0.0, f64::max);
        let Some(per_mm) = vector_scale(longest) else {
            return;
        };
        let stroke = Stroke::black(0.8);
        let centroid = self.scene.centroid.map(|c| self.view.image(&c));
        let mut drawn: Vec<Rect> = centroid.map(centroid_rects).unwrap_or_default();
        let mut left_out = false;
        for (index, (at, f)) in vectors.arrows.iter().enumerate() {
            let from = self.view.image(at);
            // As long as the vector is, whatever the view makes of its direction.
            let seen = self.view.image(f) / (self.view.scale * per_mm);
            let along = if seen.norm() > SEEN * f.norm() / per_mm {
                unit(seen) * (f.norm() / per_mm)
            } else {
                seen
            };
            let to = from + along;
            if along.norm() < LEAST {
                continue;
            }
            let shaft = Item::Path(Path::through(&[from, to], stroke));
            let head = small_head(to, unit(along), along.norm(), stroke);
            let rects = [&shaft, &head].map(strokes).concat();
            // The first one is where the check governs; others keep off those before them and the centroid.
            let meets = |one: &Rect| drawn.iter().any(|known| known.overlaps(one));
            if index > 0 && rects.iter().any(meets) {
                left_out = true;
                continue;
            }
            drawn.extend(rects.iter().copied());
            let mark = self.canvas.name(MarkKind::Arrow, rects);
            self.canvas.mark([shaft, head]);
            if index == 0 && !vectors.first.is_empty() {
                let span = Span::new(vectors.first.clone(), Style::Plain);
                let words = self.canvas.words(vec![span]);
                let mut places = around(to, 1.2, words.size(), unit(along));
                places.extend(dearer(around(to, 2.2, words.size(), unit(along)), 5.0));
                self.canvas
                    .want(rank::LOAD, words, to, places)
                    .naming(mark, 0.5);
            }
        }
        let text = plain_number(per_mm);
        let says = format!(
            "arrows: {text} {} to the millimetre of their length",
            vectors.unit
        );
        self.canvas.remark(&says);
        if left_out {
            self.canvas
                .remark("arrows that would cross others or the centroid’s mark are left out");
        }
    }
}

/// Stress for each mm of arrow: the least of 1, 2, 5 and their tenfolds at which the longest fits.
fn vector_scale(longest: f64) -> Option<f64> {
    if !(longest > 0.0 && longest.is_finite()) {
        return None;
    }
    (-12..=12)
        .flat_map(|power| [1.0, 2.0, 5.0].map(|digit| digit * ten_to(power)))
        .find(|per_mm| longest / per_mm <= LONGEST)
}
