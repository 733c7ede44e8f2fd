//! Runs, groups and a small random source for the tests of the mechanics.

use seamnote::weld::{End, Run, Segment, ThroatRule, V3};
use std::f64::consts::{FRAC_PI_2, PI};

/// A run of stated throat in the plane z = 0, or wherever its path lies.
pub(crate) fn run(path: Segment, throat: f64) -> Run {
    Run {
        name: "run".into(),
        spec: 0,
        told: path.clone(),
        path,
        throat,
        rule: ThroatRule::Stated { throat },
        normal: V3::z(),
        toe: None,
        angle: FRAC_PI_2,
        joins: [0, 1],
        ends: [End::Full; 2],
        one_of_two: false,
    }
}

/// A straight run in the plane z = 0.
pub(crate) fn line(a: [f64; 2], b: [f64; 2], throat: f64) -> Run {
    let at = |p: [f64; 2]| V3::new(p[0], p[1], 0.0);
    run(Segment::Straight { a: at(a), b: at(b) }, throat)
}

/// A circle in the plane z = 0.
pub(crate) fn circle(centre: [f64; 2], radius: f64, throat: f64) -> Run {
    run(
        Segment::circle(V3::new(centre[0], centre[1], 0.0), radius, V3::x(), V3::y()),
        throat,
    )
}

/// A linear congruential generator; the tests' only source of chance.
///
/// Constants: D. E. Knuth, *The Art of Computer Programming* 2, 3rd ed., section 3.3.4 (MMIX).
pub(crate) struct Lcg(pub(crate) u64);

impl Lcg {
    fn step(&mut self) -> u64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        self.0 >> 33
    }

    /// Between `low` and `high`.
    pub(crate) fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * (self.step() as f64 / (1u64 << 31) as f64)
    }

    /// One of `count`.
    pub(crate) fn pick(&mut self, count: u64) -> u64 {
        self.step() % count
    }

    /// A vector with components within ±`reach`.
    pub(crate) fn vector(&mut self, reach: f64) -> V3 {
        V3::from_fn(|_, _| self.between(-reach, reach))
    }

    /// A group of 2 to 7 runs of straights and arcs, each with a toe or none.
    pub(crate) fn group(&mut self, in_space: bool) -> Vec<Run> {
        let count = 2 + self.pick(6);
        (0..count).map(|_| self.run(in_space)).collect()
    }

    fn run(&mut self, in_space: bool) -> Run {
        let flat = |v: V3| if in_space { v } else { V3::new(v.x, v.y, 0.0) };
        let normal = if in_space {
            self.vector(1.0).normalize()
        } else {
            V3::z()
        };
        let across = normal.cross(&flat(self.vector(1.0)));
        let (u, centre) = (across.normalize(), flat(self.vector(100.0)));
        let v = normal.cross(&u);
        let path = if self.pick(3) == 0 {
            let sign = if self.pick(2) == 0 { 1.0 } else { -1.0 };
            let sweep = sign * self.between(0.05, 2.0 * PI);
            Segment::Arc {
                centre,
                radius: self.between(5.0, 80.0),
                u,
                v,
                from: self.between(-4.0, 4.0),
                sweep,
            }
        } else {
            Segment::Straight {
                a: centre,
                b: centre + u * self.between(5.0, 200.0),
            }
        };
        let toe = match self.pick(3) {
            0 => None,
            1 => Some(1.0),
            _ => Some(-1.0),
        };
        Run {
            normal,
            toe,
            ..run(path, self.between(2.0, 9.0))
        }
    }
}
