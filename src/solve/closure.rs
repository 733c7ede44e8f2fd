//! Closure: the stress field integrated back to the applied force and moment.
//!
//! Composite Gauss–Legendre quadrature along the paths; knows no closed form, so that a fault in
//! the properties, the tensor or the transfer to the centroid shows up as a residual.

use crate::load::Action;
use crate::weld::{Run, V3};

/// What the stresses sum to, beside what was applied.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Closure {
    /// ∫ t f ds (force).
    pub force: V3,
    /// ∫ t (r − P) × f ds about the load's own point P (moment).
    pub moment: V3,
    /// |∫ t f ds − F| (force).
    pub force_miss: f64,
    /// |∫ t (r − P) × f ds − M| (moment).
    pub moment_miss: f64,
    /// What the force's miss is measured by: max(|F|, |M_C|/L) (force).
    pub force_scale: f64,
    /// What the moment's miss is measured by: max(|M|, |M_C|, |F| L, |P − C| |F|) (moment).
    pub moment_scale: f64,
}

impl Closure {
    /// The force's miss over its scale; 0 where nothing is applied and nothing is missed.
    #[must_use]
    pub fn force_residual(&self) -> f64 {
        relative(self.force_miss, self.force_scale)
    }

    /// The moment's miss over its scale; 0 where nothing is applied and nothing is missed.
    #[must_use]
    pub fn moment_residual(&self) -> f64 {
        relative(self.moment_miss, self.moment_scale)
    }
}

fn relative(miss: f64, scale: f64) -> f64 {
    if miss > 0.0 || miss.is_nan() {
        miss / scale
    } else {
        0.0
    }
}

/// Positive nodes of the eight-point Gauss–Legendre rule on [−1, 1], and their weights.
///
/// M. Abramowitz, I. A. Stegun, *Handbook of Mathematical Functions*, table 25.4, n = 8.
const NODES: [[f64; 2]; 4] = [
    [0.183_434_642_495_649_8, 0.362_683_783_378_362],
    [0.525_532_409_916_329, 0.313_706_645_877_887_3],
    [0.796_666_477_413_626_7, 0.222_381_034_453_374_48],
    [0.960_289_856_497_536_3, 0.101_228_536_290_376_26],
];
/// Panels of each run: on a full circle each is an eighth of a turn, where the rule errs by 1e-16.
const PANELS: u32 = 8;

/// ∫ value(p) dp over [0, 1].
pub fn integrate(value: impl Fn(f64) -> V3) -> V3 {
    let half = 0.5 / f64::from(PANELS);
    let mut sum = V3::zeros();
    for panel in 0..PANELS {
        let middle = (f64::from(panel) + 0.5) / f64::from(PANELS);
        for [node, weight] in NODES {
            sum += (value(middle - half * node) + value(middle + half * node)) * (weight * half);
        }
    }
    sum
}

/// Integrates the stress `stress(run, p, r)` over the runs and compares it with `action`.
///
/// `centroid` and `size` serve the scales only.
pub fn close(
    runs: &[Run],
    action: &Action,
    centroid: V3,
    size: f64,
    stress: impl Fn(&Run, f64, V3) -> V3,
) -> Closure {
    let mut force = V3::zeros();
    let mut moment = V3::zeros();
    for run in runs {
        let load = |p: f64| {
            let r = run.path.point(p);
            (
                r,
                stress(run, p, r) * (run.throat * run.path.rate(p).norm()),
            )
        };
        force += integrate(|p| load(p).1);
        moment += integrate(|p| {
            let (r, q) = load(p);
            (r - action.at).cross(&q)
        });
    }
    let (applied, about_centroid) = action.about(centroid);
    let (lever, pull) = ((action.at - centroid).norm(), applied.norm());
    let mut force_scale = pull;
    if size > 0.0 {
        force_scale = force_scale.max(about_centroid.norm() / size);
    }
    Closure {
        force,
        moment,
        force_miss: (force - action.force).norm(),
        moment_miss: (moment - action.moment).norm(),
        force_scale,
        moment_scale: action
            .moment
            .norm()
            .max(about_centroid.norm())
            .max(pull * size.max(lever)),
    }
}
