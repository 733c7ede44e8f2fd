//! Geometry of one smooth piece of a root line: points, tangents, exact line integrals, trimming.
//!
//! A position along a segment is a parameter from 0 (start) to 1 (end), proportional to length.
//! The integrals are closed forms per unit throat; arcs are integrated in the axes of
//! their own middle, which stays exact for flat arcs of a large radius.

use super::{Segment, V3};
use crate::quantity::real;
use nalgebra::Matrix3;
use std::f64::consts::PI;

/// Line integrals of a segment per unit throat, about its own centroid.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct LineIntegrals {
    /// ∫ ds (length).
    pub length: f64,
    /// Centroid, ∫ r ds / ∫ ds (length).
    pub centroid: V3,
    /// ∫ ρ ρᵀ ds with ρ = r − centroid (length³).
    pub second: Matrix3<f64>,
}

impl LineIntegrals {
    /// ∫ r ds about the origin of the joint frame (length²).
    #[must_use]
    pub fn first_about_origin(&self) -> V3 {
        self.centroid * self.length
    }

    /// ∫ (r − o)(r − o)ᵀ ds about any point `o` (length³), by the transfer theorem.
    #[must_use]
    pub fn second_about(&self, o: V3) -> Matrix3<f64> {
        let shift = self.centroid - o;
        self.second + shift * shift.transpose() * self.length
    }
}

impl Segment {
    /// A full circle about `centre` in the plane of `u` and `v`, starting on `u`.
    #[must_use]
    pub fn circle(centre: V3, radius: f64, u: V3, v: V3) -> Self {
        Self::Arc {
            centre,
            radius,
            u,
            v,
            from: 0.0,
            sweep: 2.0 * PI,
        }
    }

    /// Length (length).
    #[must_use]
    pub fn length(&self) -> f64 {
        match self {
            Self::Straight { a, b } => (b - a).norm(),
            Self::Arc { radius, sweep, .. } => radius * sweep.abs(),
        }
    }

    /// The point at parameter `p`.
    #[must_use]
    pub fn point(&self, p: f64) -> V3 {
        match self {
            Self::Straight { b, .. } if p >= 1.0 => *b,
            Self::Straight { a, b } => a + (b - a) * p,
            Self::Arc { centre, radius, .. } => centre + self.radial(p) * *radius,
        }
    }

    /// The unit tangent at parameter `p`, in the direction of travel.
    #[must_use]
    pub fn tangent(&self, p: f64) -> V3 {
        self.rate(p).normalize()
    }

    /// dr/dp at parameter `p` (length).
    #[must_use]
    pub fn rate(&self, p: f64) -> V3 {
        match self {
            Self::Straight { a, b } => b - a,
            Self::Arc {
                radius,
                u,
                v,
                from,
                sweep,
                ..
            } => {
                let angle = from + sweep * p;
                (v * real::cos(angle) - u * real::sin(angle)) * (radius * sweep)
            }
        }
    }

    /// The unit vector from an arc's centre to its point at `p`; zero for a straight.
    #[must_use]
    pub fn radial(&self, p: f64) -> V3 {
        match self {
            Self::Straight { .. } => V3::zeros(),
            Self::Arc {
                u, v, from, sweep, ..
            } => {
                let angle = from + sweep * p;
                u * real::cos(angle) + v * real::sin(angle)
            }
        }
    }

    /// Exact line integrals per unit throat.
    ///
    /// Straight: `second = L d dᵀ/12` with `d` from start to end. Arc of half angle α about its
    /// middle: centroid at `R sin α/α`, `R³ (α − sin α cos α)` along the chord and
    /// `R³ (α + sin α cos α − 2 sin²α/α)` square to it.
    ///
    /// # Source
    ///
    /// Derived from the definitions; integrals of the sine and cosine, taken about the arc's middle.
    #[must_use]
    pub fn integrals(&self) -> LineIntegrals {
        match self {
            Self::Straight { a, b } => {
                let d = b - a;
                let length = d.norm();
                let second = d * d.transpose() * (length / 12.0);
                LineIntegrals {
                    length,
                    centroid: (a + b) * 0.5,
                    second,
                }
            }
            Self::Arc {
                centre,
                radius,
                u,
                v,
                from,
                sweep,
            } => {
                let half = sweep.abs() / 2.0;
                let middle = from + sweep / 2.0;
                let (sine, cosine) = (real::sin(middle), real::cos(middle));
                let radial = u * cosine + v * sine;
                let along = v * cosine - u * sine;
                let cube = radius * radius * radius;
                let second = along * along.transpose() * (cube * chord_second(half))
                    + radial * radial.transpose() * (cube * sagitta_second(half));
                let centroid = centre + radial * (radius * real::sin(half) / half);
                LineIntegrals {
                    length: self.length(),
                    centroid,
                    second,
                }
            }
        }
    }

    /// The part between parameters `from` and `to`.
    #[must_use]
    pub fn part(&self, from: f64, to: f64) -> Self {
        match self {
            Self::Straight { a, .. } => {
                let start = if from <= 0.0 { *a } else { self.point(from) };
                Self::Straight {
                    a: start,
                    b: self.point(to),
                }
            }
            Self::Arc {
                centre,
                radius,
                u,
                v,
                from: angle,
                sweep,
            } => Self::Arc {
                centre: *centre,
                radius: *radius,
                u: *u,
                v: *v,
                from: angle + sweep * from,
                sweep: sweep * (to - from),
            },
        }
    }

    /// The segment shortened by `start` and `end` (lengths); `None` if nothing is left.
    #[must_use]
    pub fn trimmed(&self, start: f64, end: f64) -> Option<Self> {
        let length = self.length();
        let left = length - start - end;
        if left.is_nan() || left <= NOTHING_LEFT * length {
            return None;
        }
        if start <= 0.0 && end <= 0.0 {
            return Some(self.clone());
        }
        Some(self.part(start / length, 1.0 - end / length))
    }

    /// The same path run through from its end to its start.
    #[must_use]
    pub fn reversed(&self) -> Self {
        match self {
            Self::Straight { a, b } => Self::Straight { a: *b, b: *a },
            Self::Arc {
                centre,
                radius,
                u,
                v,
                from,
                sweep,
            } => Self::Arc {
                centre: *centre,
                radius: *radius,
                u: *u,
                v: *v,
                from: from + sweep,
                sweep: -sweep,
            },
        }
    }

    /// Parameters strictly inside an arc at which x, y or z has an extreme, ascending.
    #[must_use]
    pub fn extremes(&self) -> Vec<f64> {
        let Self::Arc {
            u, v, from, sweep, ..
        } = self
        else {
            return Vec::new();
        };
        let (low, high) = if *sweep < 0.0 {
            (from + sweep, *from)
        } else {
            (*from, from + sweep)
        };
        let mut found: Vec<f64> = Vec::new();
        for axis in 0..3 {
            if real::hypot(u[axis], v[axis]) < FLAT {
                continue;
            }
            let first = real::atan2(v[axis], u[axis]);
            let mut angle = first + ((low - first) / PI).ceil() * PI;
            while angle < high {
                found.push((angle - from) / sweep);
                angle += PI;
            }
        }
        found.retain(|p| *p > SAME && *p < 1.0 - SAME);
        found.sort_by(f64::total_cmp);
        found.dedup_by(|later, earlier| *later - *earlier < SAME);
        found
    }
}

/// Part of a segment's length under which nothing is left of it.
const NOTHING_LEFT: f64 = 1e-9;
/// Component of a plane's axes under which a coordinate does not change along an arc.
const FLAT: f64 = 1e-9;
/// Parameters closer than this are one point.
const SAME: f64 = 1e-9;
/// Double angle (rad) under which the series are used: the closed forms cancel there.
const SERIES_BELOW: f64 = 1.0;
/// Terms of the series: at 1 rad the next one is below 1e-20 of the first.
const SERIES_TERMS: u32 = 12;

/// α − sin α cos α, without cancellation for small α.
fn chord_second(half: f64) -> f64 {
    let x = 2.0 * half;
    if x >= SERIES_BELOW {
        return half - real::sin(x) / 2.0;
    }
    // x/2 − sin x/2 = Σ (−1)^(j+1) x^(2j+1) / (2 (2j+1)!), j from 1.
    series(x, |j| if j == 0 { 0.0 } else { -0.5 })
}

/// α + sin α cos α − 2 sin²α/α, without cancellation for small α.
fn sagitta_second(half: f64) -> f64 {
    let x = 2.0 * half;
    if x >= SERIES_BELOW {
        let sine = real::sin(half);
        return half + real::sin(x) / 2.0 - 2.0 * sine * sine / half;
    }
    // Σ (−1)^j x^(2j+1)/(2j+1)! · (j − 1)/(2 (j + 1)), j from 2.
    series(x, |j| {
        let j = f64::from(j);
        if j < 2.0 {
            0.0
        } else {
            (j - 1.0) / (2.0 * (j + 1.0))
        }
    })
}

/// Σ (−1)^j c(j) x^(2j+1)/(2j+1)! over the first terms.
fn series(x: f64, coefficient: impl Fn(u32) -> f64) -> f64 {
    let mut term = x;
    let mut sum = 0.0;
    for j in 0..SERIES_TERMS {
        sum += coefficient(j) * term;
        let next = f64::from(2 * j + 2) * f64::from(2 * j + 3);
        term *= -x * x / next;
    }
    sum
}

#[cfg(test)]
mod tests {
    use super::*;

    fn arc(radius: f64, from: f64, sweep: f64) -> Segment {
        Segment::Arc {
            centre: V3::new(3.0, -2.0, 1.0),
            radius,
            u: V3::x(),
            v: V3::y(),
            from,
            sweep,
        }
    }

    /// Source: calculus (status: derived); integrals of the sine and cosine about the arc's centre.
    #[test]
    fn arcs_match_the_integrals_about_their_centre() {
        for (from, sweep) in [
            (0.3, 1.1),
            (-2.0, 4.5),
            (1.0, -2.4),
            (0.0, 2.0 * PI),
            (0.2, 0.9),
        ] {
            let (r, t0, t1): (f64, f64, f64) = (7.0, from, from + sweep);
            let sign = f64::signum(sweep);
            let expected = [
                r * (t1 - t0) * sign,
                r * r * (t1.sin() - t0.sin()) * sign,
                r * r * (t0.cos() - t1.cos()) * sign,
                r.powi(3) * ((t1 - t0) / 2.0 + ((2.0 * t1).sin() - (2.0 * t0).sin()) / 4.0) * sign,
                r.powi(3) * ((t1 - t0) / 2.0 - ((2.0 * t1).sin() - (2.0 * t0).sin()) / 4.0) * sign,
                r.powi(3) * (t1.sin().powi(2) - t0.sin().powi(2)) / 2.0 * sign,
            ];
            let found = arc(r, from, sweep).integrals();
            let centre = V3::new(3.0, -2.0, 1.0);
            let first = (found.centroid - centre) * found.length;
            let second = found.second_about(centre);
            let got = [
                found.length,
                first.x,
                first.y,
                second[(0, 0)],
                second[(1, 1)],
                second[(0, 1)],
            ];
            for (got, expected) in got.iter().zip(expected) {
                assert!(
                    (got - expected).abs() < 1e-12 * 7f64.powi(3) * 3.0,
                    "{got}, not {expected}"
                );
            }
        }
    }

    /// The series and the closed forms meet where one takes over from the other.
    #[test]
    fn series_meet_the_closed_forms() {
        for half in [0.4999, 0.45_f64] {
            let (s, c) = (half.sin(), half.cos());
            let chord = half - s * c;
            let sagitta = half + s * c - 2.0 * s * s / half;
            assert!(
                (chord_second(half) - chord).abs() < 1e-14 * chord * 10.0,
                "chord at {half}"
            );
            assert!(
                (sagitta_second(half) - sagitta).abs() < 1e-12 * sagitta,
                "sagitta at {half}"
            );
        }
    }

    /// A flat arc approaches the straight line of its chord.
    #[test]
    fn flat_arcs_become_straight() {
        let found = arc(1e9, -0.5e-7, 1e-7).integrals();
        assert!(
            (found.second[(1, 1)] - 1e6 / 12.0).abs() < 1e-6,
            "{}",
            found.second
        );
        let sagitta = 1e9 * 1e-7 * 1e-7 / 8.0;
        // Second moment of a flat parabola about its mean: L s² 4/45.
        let expected = 100.0 * sagitta * sagitta * 4.0 / 45.0;
        let across = found.second[(0, 0)];
        assert!(
            (across - expected).abs() < 1e-6 * expected,
            "{across}, not {expected}"
        );
    }

    #[test]
    fn trimming_and_reversing_keep_the_path() {
        for path in [
            arc(5.0, 0.4, -2.0),
            Segment::Straight {
                a: V3::x(),
                b: V3::new(4.0, 4.0, 0.0),
            },
        ] {
            let length = path.length();
            let cut = path.trimmed(1.0, 0.5).unwrap();
            assert!(
                (cut.length() - (length - 1.5)).abs() < 1e-12,
                "trimmed length"
            );
            assert!(
                (cut.point(0.0) - path.point(1.0 / length)).norm() < 1e-12,
                "start"
            );
            assert!(
                (cut.point(1.0) - path.point(1.0 - 0.5 / length)).norm() < 1e-12,
                "end"
            );
            assert_eq!(
                path.trimmed(length / 2.0, length / 2.0),
                None,
                "nothing is left"
            );
            let back = path.reversed();
            assert!(
                (back.point(0.25) - path.point(0.75)).norm() < 1e-12,
                "reversed point"
            );
            assert!(
                (back.tangent(0.25) + path.tangent(0.75)).norm() < 1e-12,
                "reversed tangent"
            );
        }
    }

    #[test]
    fn extremes_lie_on_the_axes() {
        let found = arc(1.0, 0.0, 2.0 * PI).extremes();
        let expected = [0.25, 0.5, 0.75];
        assert_eq!(found.len(), 3, "{found:?}");
        assert!(
            found
                .iter()
                .zip(expected)
                .all(|(a, b)| (a - b).abs() < 1e-12),
            "{found:?}"
        );
        let half = arc(1.0, PI / 2.0, -PI).extremes();
        assert!(half.len() == 1 && (half[0] - 0.5).abs() < 1e-12, "{half:?}");
    }
}
