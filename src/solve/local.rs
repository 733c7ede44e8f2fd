//! A stress at a run, split along, across and through: local components and the throat plane.
//!
//! t̂ is the unit tangent, ẑ the faying normal, n̂ = ẑ × t̂. Tension is positive.

use crate::quantity::real;
use crate::weld::{Run, ThroatRule, V3};
use std::f64::consts::FRAC_1_SQRT_2;

/// Components of a stress in the axes of a run, and its angle to the run.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Local {
    /// |f| (stress).
    pub resultant: f64,
    /// f·t̂, along the run (stress).
    pub f_par: f64,
    /// f·n̂, across the run in the faying plane (stress).
    pub f_n: f64,
    /// f·ẑ, out of the faying plane (stress).
    pub f_z: f64,
    /// sin φ = √(f_n² + f_z²)/|f|; 0 where f = 0.
    pub sin_phi: f64,
}

/// Components on a throat plane.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct OnThroat {
    /// f·m, square to the throat plane, tension positive (stress).
    pub sigma_perp: f64,
    /// f·e, in the throat plane square to the run (stress).
    pub tau_perp: f64,
    /// f·t̂, in the throat plane along the run (stress).
    pub tau_par: f64,
}

/// A throat plane: `e` runs in it from the root outward, `m` is square to it.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct ThroatPlane {
    /// Side of the toe along n̂ that the plane belongs to: +1 or −1.
    pub side: f64,
    /// In the plane, square to the run, unit.
    pub e: V3,
    /// Square to the plane, unit.
    pub m: V3,
}

/// A plane in the axes of its run: the components of e and m along s n̂ and ẑ.
///
/// With these two numbers a scalar formula reads
/// `sigma_perp = m_z f_z − m_n (s f_n)`, `tau_perp = e_n (s f_n) + e_z f_z`.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Slope {
    /// e along s n̂; also m along ẑ.
    pub cosine: f64,
    /// e along ẑ; also m along −s n̂.
    pub sine: f64,
}

/// The slope of the throat plane that a rule makes at dihedral angle `angle` (rad).
///
/// Equal legs (also a stated throat and partial penetration, whose legs are taken as equal): the
/// plane halves the angle. Unequal legs at 90°: the plane is square to the hypotenuse of the legs
/// that work. Complete penetration: the faying plane itself.
///
/// # Source
///
/// Geometry. EN 1993-1-8 4.7.2 takes partial penetration by the method for fillets with
/// deep penetration (from memory, to be verified).
#[must_use]
pub fn slope(rule: &ThroatRule, angle: f64) -> Slope {
    match *rule {
        ThroatRule::EqualLegs { angle, .. } | ThroatRule::SquareLegs { angle, .. } => {
            halving(angle)
        }
        ThroatRule::Stated { .. } | ThroatRule::Partial { .. } => halving(angle),
        ThroatRule::UnequalLegs {
            on_base,
            on_attached,
            gap,
            ..
        } => {
            let (h1, h2) = (on_base - gap, on_attached - gap);
            let hypotenuse = real::sqrt(h1 * h1 + h2 * h2);
            Slope {
                cosine: h2 / hypotenuse,
                sine: h1 / hypotenuse,
            }
        }
        ThroatRule::Complete { .. } => Slope {
            cosine: 1.0,
            sine: 0.0,
        },
    }
}

/// cos(ψ/2) and sin(ψ/2), exactly √½ at a right angle.
fn halving(angle: f64) -> Slope {
    if (angle - std::f64::consts::FRAC_PI_2).abs() < 1e-9 {
        return Slope {
            cosine: FRAC_1_SQRT_2,
            sine: FRAC_1_SQRT_2,
        };
    }
    Slope {
        cosine: real::cos(angle / 2.0),
        sine: real::sin(angle / 2.0),
    }
}

/// n̂ = ẑ × t̂ of a run at parameter `p`.
#[must_use]
pub fn across(run: &Run, p: f64) -> V3 {
    run.normal.cross(&run.path.tangent(p))
}

/// The throat planes of a run at parameter `p`: one where the toe's side is told, or where the
/// plane is the faying plane; else both, +1 first, of which the worse is to be taken.
#[must_use]
pub fn throat_planes(run: &Run, p: f64) -> Vec<ThroatPlane> {
    let sides: &[f64] = match (run.toe, &run.rule) {
        (_, ThroatRule::Complete { .. }) => &[1.0],
        (Some(side), _) if side < 0.0 => &[-1.0],
        (Some(_), _) => &[1.0],
        (None, _) => &[1.0, -1.0],
    };
    let n = across(run, p);
    let Slope { cosine, sine } = slope(&run.rule, run.angle);
    let plane = |side: &f64| ThroatPlane {
        side: *side,
        e: n * (side * cosine) + run.normal * sine,
        m: n * (-side * sine) + run.normal * cosine,
    };
    sides.iter().map(plane).collect()
}

/// Components of a stress `f` at parameter `p` of a run.
#[must_use]
pub fn local(run: &Run, p: f64, f: V3) -> Local {
    let f_par = f.dot(&run.path.tangent(p));
    let f_n = f.dot(&across(run, p));
    let f_z = f.dot(&run.normal);
    let resultant = f.norm();
    // Components over the resultant first, so that tiny stresses do not underflow when squared.
    let sin_phi = if resultant > 0.0 {
        real::hypot(f_n / resultant, f_z / resultant).min(1.0)
    } else {
        0.0
    };
    Local {
        resultant,
        f_par,
        f_n,
        f_z,
        sin_phi,
    }
}

/// Components of a stress `f` on each throat plane of a run at parameter `p`.
#[must_use]
pub fn on_throat(run: &Run, p: f64, f: V3) -> Vec<OnThroat> {
    let tau_par = f.dot(&run.path.tangent(p));
    let split = |plane: ThroatPlane| OnThroat {
        sigma_perp: f.dot(&plane.m),
        tau_perp: f.dot(&plane.e),
        tau_par,
    };
    throat_planes(run, p).into_iter().map(split).collect()
}
