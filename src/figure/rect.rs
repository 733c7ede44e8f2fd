//! Turned rectangles and their overlap, by separating axes; upright bounds.

use super::drawing::P2;

/// A rectangle in any direction.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rect {
    /// Centre.
    pub centre: P2,
    /// Unit vector of its first side.
    pub along: P2,
    /// Half its sides (mm).
    pub half: [f64; 2],
}

impl Rect {
    /// An upright rectangle from its centre and half sides.
    #[must_use]
    pub fn upright(centre: P2, half_width: f64, half_height: f64) -> Self {
        Self {
            centre,
            along: P2::x(),
            half: [half_width, half_height],
        }
    }

    /// A line from `a` to `b`, `half` thick to either side, with square ends.
    #[must_use]
    pub fn line(a: P2, b: P2, half: f64) -> Self {
        let d = b - a;
        let length = d.norm();
        let along = if length > 1e-9 { d / length } else { P2::x() };
        Self {
            centre: (a + b) / 2.0,
            along,
            half: [length / 2.0, half],
        }
    }

    /// The same, larger by `pad` on every side.
    #[must_use]
    pub fn grown(self, pad: f64) -> Self {
        Self {
            half: [self.half[0] + pad, self.half[1] + pad],
            ..self
        }
    }

    /// The same, longer by `pad` at both ends.
    #[must_use]
    pub fn lengthened(self, pad: f64) -> Self {
        Self {
            half: [self.half[0] + pad, self.half[1]],
            ..self
        }
    }

    /// The same, moved.
    #[must_use]
    pub fn shifted(self, by: P2) -> Self {
        Self {
            centre: self.centre + by,
            ..self
        }
    }

    /// Its four corners.
    #[must_use]
    pub fn corners(&self) -> [P2; 4] {
        let u = self.along * self.half[0];
        let v = square(self.along) * self.half[1];
        let c = self.centre;
        [c - u - v, c + u - v, c + u + v, c - u + v]
    }

    /// Whether the insides of two rectangles meet.
    #[must_use]
    pub fn overlaps(&self, other: &Self) -> bool {
        let d = other.centre - self.centre;
        let reach = self.half[0] + self.half[1] + other.half[0] + other.half[1];
        if d.x.abs() > reach || d.y.abs() > reach {
            return false;
        }
        [
            self.along,
            square(self.along),
            other.along,
            square(other.along),
        ]
        .iter()
        .all(|axis| d.dot(axis).abs() < self.reach(axis) + other.reach(axis) - 1e-9)
    }

    /// How far two rectangles stand apart; 0 where they meet.
    #[must_use]
    pub fn distance(&self, other: &Self) -> f64 {
        if self.overlaps(other) {
            return 0.0;
        }
        // The shortest way between two convex shapes ends at a corner of one of them.
        let from = |corners: [P2; 4], to: &Self| {
            let ways = corners.map(|corner| to.distance_to(corner));
            ways.into_iter().fold(f64::INFINITY, f64::min)
        };
        from(self.corners(), other).min(from(other.corners(), self))
    }

    /// How far a point stands off the rectangle; 0 inside.
    #[must_use]
    pub fn distance_to(&self, p: P2) -> f64 {
        let d = p - self.centre;
        let over = |x: f64, half: f64| (x.abs() - half).max(0.0);
        P2::new(
            over(d.dot(&self.along), self.half[0]),
            over(d.dot(&square(self.along)), self.half[1]),
        )
        .norm()
    }

    /// Half its extent along a unit vector.
    fn reach(&self, axis: &P2) -> f64 {
        self.half[0] * self.along.dot(axis).abs()
            + self.half[1] * square(self.along).dot(axis).abs()
    }

    /// Least and greatest coordinate along a unit vector.
    #[must_use]
    pub fn span(&self, axis: &P2) -> [f64; 2] {
        let middle = self.centre.dot(axis);
        [middle - self.reach(axis), middle + self.reach(axis)]
    }
}

/// The vector turned a quarter.
#[must_use]
pub(super) fn square(v: P2) -> P2 {
    P2::new(-v.y, v.x)
}

/// Upright bounds of what was added.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounds {
    /// Least coordinates.
    pub min: P2,
    /// Greatest coordinates.
    pub max: P2,
}

impl Bounds {
    /// Bounds of nothing.
    #[must_use]
    pub fn empty() -> Self {
        Self {
            min: P2::repeat(f64::INFINITY),
            max: P2::repeat(f64::NEG_INFINITY),
        }
    }

    /// Adds a point with a margin around it.
    pub fn add(&mut self, p: P2, margin: f64) {
        self.min = self.min.inf(&(p - P2::repeat(margin)));
        self.max = self.max.sup(&(p + P2::repeat(margin)));
    }

    /// Width and height; negative if nothing was added.
    #[must_use]
    pub fn size(&self) -> P2 {
        self.max - self.min
    }

    /// Least and greatest coordinate along a unit vector.
    #[must_use]
    pub fn span(&self, axis: &P2) -> [f64; 2] {
        let half = self.size() / 2.0;
        Rect::upright(self.centre(), half.x, half.y).span(axis)
    }

    /// The bounds of both.
    #[must_use]
    pub fn with(mut self, other: &Self) -> Self {
        self.min = self.min.inf(&other.min);
        self.max = self.max.sup(&other.max);
        self
    }

    /// The middle.
    #[must_use]
    pub fn centre(&self) -> P2 {
        (self.max + self.min) / 2.0
    }

    /// Whether a point lies within, `margin` added around.
    #[must_use]
    pub fn holds(&self, p: P2, margin: f64) -> bool {
        (0..2).all(|i| p[i] >= self.min[i] - margin && p[i] <= self.max[i] + margin)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: geometry: a square of side 2 turned by 45° reaches √2 along x.
    #[test]
    fn turned_squares_meet_where_their_corners_do() {
        let diagonal = P2::new(0.5_f64.sqrt(), 0.5_f64.sqrt());
        let turned = Rect {
            centre: P2::zeros(),
            along: diagonal,
            half: [1.0, 1.0],
        };
        let near = Rect::upright(P2::new(2.40, 0.0), 1.0, 1.0);
        let far = Rect::upright(P2::new(2.42, 0.0), 1.0, 1.0);
        assert!(turned.overlaps(&near), "2.40 < 1 + √2");
        assert!(!turned.overlaps(&far), "2.42 > 1 + √2");
    }

    /// Source: geometry: corner to corner 3 and 4 apart is 5; side to side the gap itself.
    #[test]
    fn distances_are_those_of_the_nearest_points() {
        let one = Rect::upright(P2::zeros(), 1.0, 1.0);
        for (centre, far) in [
            (P2::new(5.0, 6.0), 5.0),
            (P2::new(5.0, 0.5), 3.0),
            (P2::new(1.5, 0.0), 0.0),
        ] {
            let other = Rect::upright(centre, 1.0, 1.0);
            assert!(
                (one.distance(&other) - far).abs() < 1e-12,
                "{centre}: not {far}"
            );
        }
    }

    /// Source: geometry: upright bounds of both meet, the rectangles do not.
    #[test]
    fn a_slanted_line_passes_by_a_box_inside_its_bounds() {
        let line = Rect::line(P2::zeros(), P2::new(10.0, 10.0), 0.1);
        let label = Rect::upright(P2::new(8.0, 2.0), 2.0, 1.0);
        assert!(
            !line.overlaps(&label),
            "the box stands well under the diagonal"
        );
        assert!(
            line.overlaps(&label.shifted(P2::new(-5.0, 2.0))),
            "moved onto the diagonal"
        );
    }
}
