//! Check points with their numbers, and the ring around the one that governs.

use super::canvas::{Keep, Layer};
use super::compose::{SAME, Sheet};
use super::drawing::{Fill, MarkKind, P2, Span, Stroke, Style};
use super::place::{around, dearer, rank};
use super::rect::Rect;
use super::shape::{circle, disc};

/// Radius of a check point's circle, and the least where points crowd (mm).
const POINT: f64 = 0.75;
const LEAST_POINT: f64 = 0.35;
/// Radius of the ring around the governing point, and the least beside a point's mark (mm).
const RING: f64 = 1.75;
const LEAST_RING: f64 = 1.1;
/// Between the ring and a point's mark (mm).
const RING_SPACE: f64 = 0.35;

/// Check points at one place on the sheet.
struct Shared {
    at: P2,
    /// Their numbers.
    text: String,
    /// Radius of their mark (mm).
    radius: f64,
}

impl Sheet<'_> {
    /// All check points; the ring last, so that it hides nothing of them.
    pub(super) fn points(&mut self) {
        let shared = self.shared_points();
        let governing = self.scene.governing.as_ref();
        let governing = governing.map(|g| (self.view.image(&g.at), g.label.clone()));
        for point in &shared {
            let ringed = governing
                .as_ref()
                .is_some_and(|(at, _)| (at - point.at).norm() < SAME);
            let fill = if ringed { Fill::Black } else { Fill::White };
            let mark = circle(point.at, point.radius, Stroke::black(0.7), fill);
            self.canvas.draw_kept(Layer::Dot, mark, Keep::Off);
            if !ringed {
                let number = vec![Span::new(point.text.clone(), Style::Bold)];
                self.point_label(point.at, number, rank::POINT, point.radius);
            }
        }
        if let Some((at, says)) = governing {
            self.governing(at, &says, &shared);
        }
    }

    /// The ring with the number of its point, if it stands at one, and its words.
    fn governing(&mut self, at: P2, says: &str, shared: &[Shared]) {
        let own = shared.iter().find(|point| (point.at - at).norm() < SAME);
        let mut spans = Vec::new();
        match own {
            Some(point) => {
                spans.push(Span::new(point.text.clone(), Style::Bold));
                spans.push(Span::new(format!("  {says}"), Style::Italic));
            }
            None => {
                let dot = disc(at, LEAST_POINT);
                self.canvas.draw_kept(Layer::Dot, dot, Keep::Off);
                spans.push(Span::new(says, Style::Italic));
            }
        }
        let radius = ring_radius(at, shared);
        // Arrows that start at the point stay visible.
        // So do the runs, where the ring stands beside a point.
        let core = if self.scene.vectors.is_some() || own.is_none() {
            Fill::None
        } else {
            Fill::White
        };
        let ring = circle(at, radius, Stroke::black(1.0), core);
        self.canvas.draw_kept(Layer::Ring, ring, Keep::Off);
        self.point_label(at, spans, rank::GOVERNING, radius);
    }

    fn point_label(&mut self, at: P2, spans: Vec<Span>, rank: u8, radius: f64) {
        let mark = Rect::upright(at, radius, radius);
        let mark = self.canvas.name(MarkKind::Point, vec![mark]);
        let words = self.canvas.words(spans);
        let out = -self.inward(at);
        let size = words.size();
        let mut places = around(at, radius + 0.6, size, out);
        places.extend(dearer(around(at, radius + 1.2, size, out), 2.0));
        places.extend(dearer(around(at, radius + 2.0, size, out), 5.0));
        self.canvas
            .want(rank, words, at, places)
            .naming(mark, radius);
    }

    /// Check points by place, the numbers of those at one place joined.
    fn shared_points(&self) -> Vec<Shared> {
        let mut shared: Vec<Shared> = Vec::new();
        for point in &self.scene.points {
            let at = self.view.image(&point.at);
            match shared
                .iter_mut()
                .find(|known| (known.at - at).norm() < SAME)
            {
                Some(known) => known.text = format!("{}, {}", known.text, point.label),
                None => shared.push(Shared {
                    at,
                    text: point.label.clone(),
                    radius: POINT,
                }),
            }
        }
        let places: Vec<P2> = shared.iter().map(|point| point.at).collect();
        for (i, point) in shared.iter_mut().enumerate() {
            point.radius = POINT.min(nearest(&places, i) * 0.45).max(LEAST_POINT);
        }
        shared
    }
}

/// Radius of the ring: clear of the mark of a point near by, or well around it.
fn ring_radius(at: P2, shared: &[Shared]) -> f64 {
    let others = shared
        .iter()
        .map(|point| ((point.at - at).norm(), point.radius))
        .filter(|(far, _)| *far >= SAME);
    let near = others.min_by(|a, b| a.0.total_cmp(&b.0));
    match near {
        Some((far, dot)) if far - dot - RING_SPACE < LEAST_RING => RING.max(far + dot + RING_SPACE),
        Some((far, dot)) => RING.min(far - dot - RING_SPACE),
        None => RING,
    }
}

/// Distance from one place to the nearest other.
fn nearest(places: &[P2], i: usize) -> f64 {
    let others = places.iter().enumerate().filter(|(j, _)| *j != i);
    others
        .map(|(_, p)| (p - places[i]).norm())
        .fold(f64::INFINITY, f64::min)
}
